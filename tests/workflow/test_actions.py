"""Exceedances become actions; the network is ranked; both from files to words."""

from __future__ import annotations

import datetime as dt
import json
import re
from pathlib import Path

import pytest
from sqlalchemy import Engine
from sqlalchemy.event import listen, remove

from assess import workflow
from assess.results import ActionResult
from assess.workflow import action_rules, actions, ranking
from db.action_doc import ActionsDoc
from db.errors import BedstoneError
from db.records import ActionEvent, KeptAction
from db.store import open_record
from tests.workflow.conftest import call
from tests.workflow.invented import BRIDGE, bridge_text, write_visit

TODAY = dt.date.today()
RECENT = (TODAY - dt.timedelta(days=60)).isoformat()


def add(url: str, folder: Path, key: str, capacity: str, *, visit: str | None, extra: str = "") -> None:
    """Put a bridge with a sagging capacity into the record, calibrated where it has a visit."""
    text = bridge_text().replace("quillmere", key).replace('"5100 kN m"', f'"{capacity}"') + extra
    file = folder / f"{key}.toml"
    file.write_text(text)
    workflow.add_bridge(url, file)
    if visit is not None:
        log(url, folder, key, visit)


def log(url: str, folder: Path, key: str, day: str) -> None:
    path = write_visit(folder, day, (1.0, 1.0, 1.0))
    path.write_text(path.read_text().replace("quillmere", key))
    workflow.log_visit(url, path)
    workflow.calibrate(url, key)


@pytest.fixture(scope="module")
def weak(tmp_path_factory: pytest.TempPathFactory) -> tuple[str, Path]:
    """A record with a bridge over its capacity, assessed."""
    folder = tmp_path_factory.mktemp("weak")
    url = str(folder / "record.sqlite")
    workflow.init_record(url)
    add(url, folder, "corrie", "1300 kN m", visit=RECENT, extra='\n[actions]\nover = "14 days"\n')
    return url, folder


def test_an_exceedance_lives_from_its_opening_to_its_closing(weak: tuple[str, Path]) -> None:
    url, folder = weak
    found = workflow.assess(url, "corrie").actions
    assert found
    assert {one.severity for one in found} == {"over"}
    assert {one.due for one in found} == {TODAY + dt.timedelta(days=14)}
    assert {str(one.visit) for one in found} == {RECENT}
    assert workflow.assess(url, "corrie").actions == found  # the same evidence again adds nothing

    said = call(url, "action", "close", "1", "--evidence", "looked at", "--by", "bridge engineer")
    assert said.code == 2
    assert "is still over its factored capacity" in said.err
    assert said.err.count("\n") == 1
    assert call(url, "action", "close", "1", "--by", "bridge engineer").code == 2
    said = call(
        url,
        "action",
        "close",
        "1",
        "--evidence",
        "posted at 10 t",
        "--by",
        "bridge engineer",
        "--although",
        "posted",
    )
    assert said.code == 0
    assert "although still over its factored capacity" in said.out

    kept = {one.action: one for one in workflow.list_actions(url, "corrie", closed=True)}
    assert (kept[1].status, kept[1].closed_by, kept[1].closing_evidence, kept[1].closed_although) == (
        "closed",
        "bridge engineer",
        "posted at 10 t",
        "posted",
    )
    assert 1 not in {one.action for one in workflow.assess(url, "corrie").actions}

    log(url, folder, "corrie", (TODAY - dt.timedelta(days=1)).isoformat())
    again = [one for one in workflow.assess(url, "corrie").actions if one.reopens == 1]
    assert [one.where for one in again] == [kept[1].where]

    number = str(again[0].action)
    assert call(url, "action", "note", number, "jacks ordered").code == 0
    shown = call(url, "action", "show", number)
    assert "Opened again after action 1." in shown.out
    assert "jacks ordered" in shown.out
    events = call(url, "action", "show", number, "--json").document["events"]
    assert [event["kind"] for event in events] == ["opened", "noted"]
    for words in (("assess", "corrie"), ("visit", "list", "corrie")):
        assert call(url, *words).out.startswith("Open: ")
    listed = call(url, "visit", "list", "corrie", "--json").document
    assert number in {str(one["action"]) for one in listed["actions"]}


def test_a_look_into_the_past_opens_nothing(tmp_path: Path) -> None:
    url = str(tmp_path / "r.sqlite")
    workflow.init_record(url)
    add(url, tmp_path, "corrie", "1300 kN m", visit=RECENT)
    workflow.assess(url, "corrie", visit=dt.date.fromisoformat(RECENT))
    assert workflow.list_actions(url) == []


def event(kind: str, severity: str | None, due: dt.date | None, **figures: object) -> ActionEvent:
    return ActionEvent(
        kind=kind,
        date=dt.date(2026, 1, 1),
        visit=None,
        evidence="",
        severity=severity,
        due=due,
        text="words",
        figures={"found_by": "assess", "input_digest": "", **figures},
        written_by="someone",
    )


def acted(today: dt.date, *more: ActionEvent) -> ActionResult:
    details = {
        "what": "capacity",
        "girder": "north",
        "where": "sagging",
        "owner_role": "R",
        "check_reading": "",
    }
    events = (event("opened", "foreseen", dt.date(2026, 2, 1)), *more)
    kept = KeptAction(number=1, bridge="b", subject="s", turn=1, reopens=None, details=details, events=events)
    return actions.shown(kept, today)


def test_the_longer_overdue_the_higher_it_is_addressed() -> None:
    days = [dt.date(2026, 2, 1) + dt.timedelta(days=late) for late in (0, 1, 30, 31, 90, 91)]
    shown = [acted(day) for day in days]
    assert [one.status for one in shown] == ["open", *["overdue"] * 5]
    assert [one.days_overdue for one in shown] == [0, 1, 30, 31, 90, 91]
    words = [one.escalation.partition(": ")[2] for one in shown]
    assert words[1] == words[2] != words[3] == words[4] != words[5]


def test_the_gravest_finding_names_the_action() -> None:
    assert acted(dt.date(2026, 1, 2), event("found", "over", dt.date(2026, 3, 1))).severity == "over"


def test_the_owners_days_come_before_the_rule_and_a_foreseen_day_before_both() -> None:
    found = dt.date(2026, 1, 1)
    assert action_rules.due("over", found, ActionsDoc()) == dt.date(2026, 1, 31)
    assert action_rules.due("over", found, ActionsDoc(over=5)) == dt.date(2026, 1, 6)
    assert action_rules.due("foreseen", found, ActionsDoc(), before=dt.date(2026, 3, 1)) == dt.date(
        2026, 3, 1
    )
    assert action_rules.due("foreseen", found, ActionsDoc(), before=dt.date(2025, 3, 1)) == found


def test_every_severity_has_its_days_and_a_field_for_the_owners() -> None:
    for severity in action_rules.SEVERITIES:
        assert action_rules.due(severity, TODAY, ActionsDoc()) > TODAY
        assert action_rules.due(severity, TODAY, ActionsDoc(**{severity: 1})) == TODAY + dt.timedelta(days=1)


@pytest.fixture(scope="module")
def three(tmp_path_factory: pytest.TempPathFactory) -> str:
    """A bridge that is within, one likely over, and one that was never visited."""
    folder = tmp_path_factory.mktemp("three")
    url = str(folder / "record.sqlite")
    workflow.init_record(url)
    add(url, folder, "ashlow", "5100 kN m", visit=RECENT)
    add(url, folder, "corrie", "1300 kN m", visit=RECENT)
    add(url, folder, "dunmere", "5100 kN m", visit=None)
    return url


def test_the_network_is_ranked_with_the_unknown_first_and_kept(three: str) -> None:
    first = workflow.network(three)
    rows = {row.bridge: row for row in first.bridges}
    assert [row.rank for row in first.bridges] == [1, 2, 3]
    assert first.bridges[-1].bridge == "ashlow"
    assert (rows["ashlow"].status, rows["ashlow"].first, rows["ashlow"].open_actions) == ("within", [], 0)
    assert rows["corrie"].status == "over"
    assert rows["corrie"].open_actions > 0
    assert rows["dunmere"].status == "unknown"
    assert any("never calibrated" in reason for reason in rows["dunmere"].first)
    again = workflow.network(three)
    assert (again.computed, again.bridges) == (0, first.bridges)
    assert workflow.network(three, refresh=True).computed == 3
    said = call(three, "network", "--json").document
    assert [row["bridge"] for row in said["bridges"]] == [row.bridge for row in first.bridges]
    assert "never calibrated" in call(three, "network").out


def test_the_page_says_every_status_in_words_and_needs_nothing_else(three: str, tmp_path: Path) -> None:
    page = tmp_path / "network.html"
    assert call(three, "network", "-o", str(page)).code == 0
    text = page.read_text()
    for word in ("<b>over</b>", "<b>within</b>", "<b>unknown</b>", "never calibrated"):
        assert word in text
    assert not re.search(r'(?:src|href)="|url\(|<script', text)
    assert not re.search(r"\b(?:safe|OK)\b", text)
    assert call(three, "network", "-o", str(tmp_path / "no" / "n.html")).code == 2


def test_the_queries_are_as_many_however_many_the_bridges(tmp_path: Path) -> None:
    counts = []
    for bridges in (1, 4):
        folder = tmp_path / str(bridges)
        folder.mkdir()
        url = many(folder, bridges)
        workflow.network(url)
        seen: list[object] = []

        def count(*said: object, seen: list[object] = seen) -> None:
            seen.append(said[2])

        listen(Engine, "before_cursor_execute", count)
        workflow.network(url)
        remove(Engine, "before_cursor_execute", count)
        counts.append(len(seen))
    assert counts[0] == counts[1] > 0


def many(tmp_path: Path, count: int) -> str:
    url = str(tmp_path / "r.sqlite")
    workflow.init_record(url)
    for i in range(count):
        add(url, tmp_path, f"bridge-{i}", "5100 kN m", visit=None)
    return url


def test_a_call_that_is_stopped_keeps_what_is_done(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    url = many(tmp_path, 3)
    done: list[str] = []
    real = ranking.assess_in

    def stopped(record: object, bridge: str) -> object:
        if len(done) == 2:
            raise KeyboardInterrupt
        done.append(bridge)
        return real(record, bridge)  # type: ignore[arg-type]

    monkeypatch.setattr(ranking, "assess_in", stopped)
    assert call(url, "network").code == 130
    monkeypatch.undo()
    assert workflow.network(url).computed == 1


def test_a_bridge_that_cannot_be_computed_is_unknown_and_hides_no_other(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    url = many(tmp_path, 2)
    real = ranking.assess_in

    def fails(record: object, bridge: str) -> object:
        if bridge == "bridge-0":
            raise ArithmeticError("it does not converge")
        return real(record, bridge)  # type: ignore[arg-type]

    monkeypatch.setattr(ranking, "assess_in", fails)
    rows = {row.bridge: row for row in workflow.network(url).bridges}
    assert rows["bridge-0"].status == "unknown"
    assert any("it does not converge" in reason for reason in rows["bridge-0"].first)
    assert rows["bridge-1"].utilisation is not None


def test_a_new_revision_makes_a_calibration_stale(tmp_path: Path) -> None:
    url = str(tmp_path / "r.sqlite")
    workflow.init_record(url)
    add(url, tmp_path, "ashlow", "5100 kN m", visit=RECENT)
    assert workflow.network(url).bridges[0].status == "within"
    file = tmp_path / "ashlow.toml"
    file.write_text(file.read_text() + "\n# surveyed again\n")
    workflow.add_bridge(url, file)
    (row,) = workflow.network(url).bridges
    assert row.status == "unknown"
    assert any(reason.startswith("stale: calibrated with revision 1") for reason in row.first)


def test_an_intervention_comes_back_from_the_record(tmp_path: Path) -> None:
    url = str(tmp_path / "r.sqlite")
    workflow.init_record(url)
    workflow.add_bridge(url, BRIDGE)
    words = ("--girder", "north", "--support", "pier 1", "--kind", "replaced", "--date", "2025-08-20")
    assert (
        "kept as number 1"
        in call(url, "intervention", "add", "quillmere", *words, "--remark", "new batch").out
    )
    assert "in the record already" in call(url, "intervention", "add", "quillmere", *words).out
    (one,) = call(url, "intervention", "list", "quillmere", "--json").document["interventions"]
    assert one == {
        "date": "2025-08-20",
        "kind": "replaced",
        "girder": "north",
        "support": "pier 1",
        "remark": "new batch",
        "number": 1,
    }
    with open_record(url) as record:
        from assess.workflow.study import Study

        assert [one.support for one in Study.fetch(record, "quillmere").interventions] == ["pier 1"]
    assert call(url, "intervention", "withdraw", "1", "--reason", "pier 2").code == 0
    assert "No intervention" in call(url, "intervention", "list", "quillmere").out


def test_nothing_open_and_nothing_there_are_said(record: str) -> None:
    assert call(record, "action", "list").out == "No action is open.\n"
    assert json.loads(call(record, "action", "list", "--json").out) == {"actions": []}
    for words in (("show", "9"), ("note", "9", "x"), ("close", "9", "--evidence", "x", "--by", "y")):
        said = call(record, "action", *words)
        assert (said.code, said.err.count("\n")) == (2, 1)
        assert "there is no action 9" in said.err


def test_an_intervention_of_the_record_counts_like_one_of_the_bridge_file(tmp_path: Path) -> None:
    url = str(tmp_path / "r.sqlite")
    workflow.init_record(url)
    add(url, tmp_path, "ashlow", "5100 kN m", visit=RECENT)
    before = workflow.assess(url, "ashlow")
    words = ("--girder", "north", "--support", "pier 1", "--kind", "replaced", "--date", TODAY.isoformat())
    assert call(url, "intervention", "add", "ashlow", *words).code == 0
    after = workflow.assess(url, "ashlow")
    assert any('the pad at "pier 1" was replaced' in one for one in after.cautions)
    assert after.input_digest != before.input_digest


def test_a_pad_that_is_new_and_unread_leaves_nothing_within(tmp_path: Path) -> None:
    url = str(tmp_path / "record.sqlite")
    workflow.init_record(url)
    add(url, tmp_path, "corrie", "9000 kN m", visit=RECENT)
    assert "within" in {row.status for row in workflow.trend(url, "corrie").spans}
    day = TODAY - dt.timedelta(days=10)
    words = ("--girder", "north", "--support", "pier 1", "--kind", "replaced", "--date", day.isoformat())
    assert call(url, "intervention", "add", "corrie", *words).code == 0
    assert "within" not in {row.status for row in workflow.trend(url, "corrie").spans}
    (row,) = workflow.network(url).bridges
    assert row.status == "unknown"
    assert "a pad replaced since the last calibration has not been read" in row.first


def test_a_day_before_the_last_visit_is_refused(weak: tuple[str, Path]) -> None:
    with pytest.raises(BedstoneError, match="lies before the visit of") as refused:
        workflow.trend(weak[0], "corrie", today=TODAY - dt.timedelta(days=61))
    assert refused.value.field == "--today"


def test_evidence_is_not_older_than_what_it_closes(tmp_path: Path) -> None:
    url = str(tmp_path / "record.sqlite")
    workflow.init_record(url)
    add(url, tmp_path, "corrie", "1300 kN m", visit=RECENT)
    log(url, tmp_path, "corrie", (TODAY - dt.timedelta(days=400)).isoformat())
    number = workflow.assess(url, "corrie").actions[0].action
    with pytest.raises(BedstoneError, match="which found it"):
        workflow.close_action(
            url,
            number,
            evidence="gaps read",
            by="bridge engineer",
            visit=TODAY - dt.timedelta(days=400),
            although="x",
        )


def test_a_page_of_the_network_is_no_pdf(weak: tuple[str, Path], tmp_path: Path) -> None:
    done = call(weak[0], "network", "-o", str(tmp_path / "page.pdf"))
    assert done.code == 2
    assert "a page is written as .html" in done.err
