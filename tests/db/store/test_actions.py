"""Actions and interventions in a record: opened once, never gone without a closing event."""

from __future__ import annotations

import datetime as dt
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from db.documents import BridgeDoc, VisitDoc
from db.records import Finding, NewIntervention
from db.schema import ActionRow
from db.store import Record, open_record
from tests.db.conftest import line_of

TODAY = dt.date(2026, 1, 5)
ROOT = Path(__file__).parents[3]


def finding(subject: str = "capacity | north | sagging | 1", **changes: object) -> Finding:
    values: dict[str, object] = {
        "subject": subject,
        "date": TODAY,
        "visit": None,
        "evidence": "a" * 64,
        "severity": "may_be_over",
        "due": TODAY + dt.timedelta(days=90),
        "text": "over with a chance of 8%",
        "figures": {"found_by": "assess", "input_digest": "d" * 64},
        "details": {"what": "capacity", "girder": "north", "where": "sagging in span 1"},
    }
    return Finding(**(values | changes))  # type: ignore[arg-type]


@pytest.fixture
def kept(record: Record, bridge: BridgeDoc) -> Record:
    record.add_bridge(bridge)
    return record


def close(record: Record, number: int, text: str = "read again") -> None:
    record.close_action(number, text, date=TODAY, visit=None, figures={"by": "bridge engineer"})


def test_a_finding_opens_one_action_with_its_figures(kept: Record) -> None:
    kept.found("quillmere", [finding()])
    (action,) = kept.actions("quillmere")
    assert (action.turn, action.reopens, action.closed) == (1, None, None)
    assert [event.kind for event in action.events] == ["opened"]
    assert action.events[0].figures == {"found_by": "assess", "input_digest": "d" * 64}


def test_the_same_finding_from_the_same_evidence_is_kept_once(kept: Record) -> None:
    for _ in range(3):
        kept.found("quillmere", [finding()])
    assert [len(action.events) for action in kept.actions()] == [1]


def test_a_graver_finding_is_an_event_and_brings_the_day_forward(kept: Record) -> None:
    kept.found("quillmere", [finding()])
    sooner = TODAY + dt.timedelta(days=30)
    kept.found("quillmere", [finding(severity="over", due=sooner)])
    (action,) = kept.actions()
    assert [event.kind for event in action.events] == ["opened", "found"]
    assert action.due == sooner


def test_a_milder_finding_does_not_put_the_day_off(kept: Record) -> None:
    kept.found("quillmere", [finding(severity="over", due=TODAY)])
    kept.found("quillmere", [finding(evidence="b" * 64)])
    assert kept.actions()[0].due == TODAY


def test_a_closed_action_opens_again_only_on_new_evidence_and_names_the_old(kept: Record) -> None:
    kept.found("quillmere", [finding()])
    close(kept, 1)
    kept.found("quillmere", [finding()])
    assert [action.closed is not None for action in kept.actions()] == [True]
    kept.found("quillmere", [finding(evidence="b" * 64)])
    old, new = kept.actions()
    assert (old.closed is not None, new.closed, new.turn, new.reopens) == (True, None, 2, old.number)


def test_an_action_is_closed_once(kept: Record) -> None:
    kept.found("quillmere", [finding()])
    close(kept, 1)
    assert "was closed on 2026-01-05" in line_of(lambda: close(kept, 1))
    assert "there is no action 7" in line_of(lambda: close(kept, 7))


def test_a_visit_that_closes_must_be_one(kept: Record) -> None:
    kept.found("quillmere", [finding()])
    said = line_of(lambda: kept.close_action(1, "x", date=TODAY, visit=TODAY, figures={"by": "b"}))
    assert "no visit of 2026-01-05" in said
    assert kept.actions()[0].closed is None


def test_the_key_refuses_a_second_opening_even_without_the_lock(kept: Record) -> None:
    kept.found("quillmere", [finding()])

    def open_again() -> None:
        with kept.transaction() as session:
            session.add(
                ActionRow(bridge_id=1, subject=finding().subject, turn=1, details={}, written_by="someone")
            )

    assert "another program added the same" in line_of(open_again)
    assert len(kept.actions()) == 1


OPENER = """
import sys
from tests.db.store.test_actions import finding
from db.store import open_record
print("ready", flush=True)
sys.stdin.readline()
for turn in range(8):
    with open_record(sys.argv[1]) as record:
        record.found("quillmere", [finding(f"capacity | north | sagging | {turn}")])
"""


def test_four_programs_that_find_the_same_open_it_once(path: str) -> None:
    workers = [
        subprocess.Popen(
            [sys.executable, "-c", OPENER, path],
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
            text=True,
            cwd=ROOT,
        )
        for _ in range(4)
    ]
    for worker in workers:
        assert worker.stdout is not None
        assert worker.stdout.readline() == "ready\n"
    ended = [worker.communicate("\n", timeout=200) for worker in workers]
    assert [(worker.returncode, errors) for worker, (_, errors) in zip(workers, ended, strict=True)] == [
        (0, "")
    ] * 4
    with open_record(path) as record:
        assert [len(action.events) for action in record.actions()] == [1] * 8


STEPS = st.lists(
    st.one_of(
        st.tuples(st.just("find"), st.integers(0, 2), st.sampled_from("abc")),
        st.tuples(st.just("note"), st.integers(1, 6), st.just("")),
        st.tuples(st.just("close"), st.integers(1, 6), st.just("")),
    ),
    max_size=14,
)


@settings(max_examples=25, deadline=None)
@given(steps=STEPS)
def test_an_action_never_goes_without_a_closing_event(
    bridge: BridgeDoc, steps: list[tuple[str, int, str]]
) -> None:
    with open_record("sqlite://", create=True) as record:
        record.add_bridge(bridge)
        for step, number, mark in steps:
            before = {action.number: action for action in record.actions()}
            if step == "find":
                record.found(
                    "quillmere", [finding(f"capacity | north | sagging | {number}", evidence=mark * 64)]
                )
            elif step == "note" and number in before:
                record.note_action(number, "looked at", date=TODAY)
            elif step == "close" and number in before and before[number].closed is None:
                close(record, number)
            after = {action.number: action for action in record.actions()}
            for one, action in before.items():
                assert after[one].events[: len(action.events)] == action.events
                if action.closed is None and after[one].closed is not None:
                    assert (step, number) == ("close", one)
            open_subjects = [action.subject for action in after.values() if action.closed is None]
            assert len(open_subjects) == len(set(open_subjects))


def test_what_is_held_changes_with_all_that_results_rest_on(
    kept: Record, visit_on: Callable[[dt.date], VisitDoc], bridge: BridgeDoc
) -> None:
    seen = [kept.evidence("quillmere")]
    kept.log_visit(visit_on(dt.date(2024, 5, 14)))
    seen.append(kept.evidence("quillmere"))
    new = NewIntervention(date=TODAY, kind="replaced", girder="north", support="pier 1")
    kept.add_intervention("quillmere", new)
    seen.append(kept.evidence("quillmere"))
    kept.found("quillmere", [finding()])
    kept.note_action(1, "seen", date=TODAY)
    assert kept.evidence("quillmere") == seen[-1]  # an action tells nothing of the bridge
    assert len(set(seen)) == 3


def test_an_intervention_is_kept_once_and_withdrawn_with_a_reason(kept: Record) -> None:
    new = NewIntervention(date=TODAY, kind="jacked", girder="north", support="pier 1", remark="by night")
    first = kept.add_intervention("quillmere", new)
    assert first is not None
    assert kept.add_intervention("quillmere", new) is None
    assert kept.interventions("quillmere") == [first]
    kept.withdraw_intervention(first.number, "it was pier 2")
    assert kept.interventions("quillmere") == []
    assert "no intervention 1" in line_of(lambda: kept.withdraw_intervention(first.number, "again"))
    assert kept.add_intervention("quillmere", new) is not None


@pytest.mark.parametrize(
    ("changes", "said"),
    [
        ({"girder": "nort"}, 'did you mean "north"?'),
        ({"support": "pier 9"}, 'has no pad "pier 9"'),
        ({"date": dt.date(2999, 1, 1)}, "in the future"),
        ({"date": dt.date(1900, 1, 1)}, "before the bridge was built"),
        ({"kind": "painted"}, '"painted" is no kind'),
    ],
)
def test_an_intervention_that_cannot_be_is_refused(
    kept: Record, changes: dict[str, object], said: str
) -> None:
    values: dict[str, object] = {"date": TODAY, "kind": "replaced", "girder": "north", "support": "pier 1"}
    assert said in line_of(lambda: kept.add_intervention("quillmere", NewIntervention(**(values | changes))))  # type: ignore[arg-type]
    assert kept.interventions("quillmere") == []
