from __future__ import annotations

import dataclasses
import datetime as dt
from collections.abc import Callable
from pathlib import Path

import pytest
from sqlalchemy import event, select, text

from db.documents import BridgeDoc, VisitDoc
from db.errors import BedstoneError
from db.exchange import parse_bridge, parse_visit
from db.records import BridgeSummary, KeptResult, Taken, VisitSummary
from db.schema import GirderRow, ReadingRow, RevisionRow, SupportRow, VisitRow
from db.store import Record, open_record, visits
from tests.db.conftest import changed, line_of

DAY = dt.date(2024, 5, 14)


def test_both_examples_come_back_as_they_went_in(record: Record, bridge: BridgeDoc, visit: VisitDoc) -> None:
    assert record.add_bridge(bridge) == Taken(added=True, revision=1)
    assert record.log_visit(visit) == Taken(added=True, revision=1)
    assert record.bridge("quillmere").document == bridge
    back = record.visit("quillmere", DAY)
    assert [reading.row for reading in back.readings] == [1, 2]
    bare = tuple(dataclasses.replace(reading, row=None) for reading in back.readings)
    assert dataclasses.replace(back, readings=bare) == visit


RAW = """
[[benchmark]]
id = "BM 2"
sd = "0.4 mm"

[[reading]]
girder = "north"
state = "permanent"
quantity = "settlement"
support = "pier 1"
repeats = ["4.1 mm", "4.3 mm", "4.4 mm"]
sd = "0.3 mm"
benchmark = "BM 2"

[[reading]]
girder = "north"
state = "T1"
quantity = "compression"
support = "pier 2"
gaps = ["30.0 mm", "30.2 mm", "29.5 mm", "29.7 mm"]
gaps_before = ["31.0 mm", "31.2 mm", "31.0 mm", "31.2 mm"]
gaps_after = ["31.0 mm", "31.2 mm", "30.96 mm", "31.16 mm"]
corner_spacing = "320 mm"
sd = "0.05 mm"

[[reading]]
girder = "north"
state = "T1"
quantity = "deflection"
at = "20 m"
value = "1.3 mm"
zero_before = "0.1 mm"
zero_after = ["0.12 mm", "0.14 mm"]
sd = "0.1 mm"
"""


def test_raw_readings_and_what_the_visit_asks_come_back_as_they_went_in(
    record: Record, bridge: BridgeDoc, visit: VisitDoc
) -> None:
    asked = '[visit]\ndatum_load = "permanent"\nunknowns = { north = ["pads", "datum"] }'
    raw = parse_visit(changed(visit.text, "[visit]", asked) + RAW, file="v.toml")
    record.add_bridge(bridge)
    record.log_visit(raw)
    back = record.visit("quillmere", DAY)
    bare = tuple(dataclasses.replace(reading, row=None) for reading in back.readings)
    assert dataclasses.replace(back, readings=bare) == raw
    assert [reading.derived for reading in bare] == [False, False, False, False, True, False]
    assert bare[2].benchmark == "BM 2"
    assert bare[3].raw is not None
    assert bare[3].raw.drift == pytest.approx(2e-5)


def test_the_lists_count(record: Record, bridge: BridgeDoc, visit: VisitDoc) -> None:
    assert record.bridges() == []
    record.add_bridge(bridge)
    assert record.bridges()[0].visits == 0
    record.log_visit(visit)
    other = parse_bridge(changed(bridge.text, '"quillmere"', '"ashlow"'), file="b.toml")
    record.add_bridge(other)
    name = "Quillmere viaduct"
    assert record.bridges() == [
        BridgeSummary(bridge="ashlow", name=name, revision=1, visits=0),
        BridgeSummary(bridge="quillmere", name=name, revision=1, visits=1),
    ]
    assert record.visits("quillmere") == [VisitSummary(visit=DAY, readings=2, states=2)]
    assert record.visits("ashlow") == []


def test_the_same_visit_is_not_kept_twice(record: Record, bridge: BridgeDoc, visit: VisitDoc) -> None:
    record.add_bridge(bridge)
    record.log_visit(visit)
    assert record.log_visit(visit) == Taken(added=False, revision=1)
    assert record.visits("quillmere")[0].readings == 2


def test_another_file_for_the_day_is_refused(record: Record, bridge: BridgeDoc, visit: VisitDoc) -> None:
    record.add_bridge(bridge)
    record.log_visit(visit)
    other = parse_visit(changed(visit.text, '"1.42 mm"', '"1.43 mm"'), file="v.toml")
    assert "2024-05-14" in line_of(lambda: record.log_visit(other))
    assert record.visit("quillmere", DAY).digest == visit.digest


def test_what_is_unknown_is_named_beside_what_is_known(
    record: Record, bridge: BridgeDoc, visit: VisitDoc
) -> None:
    assert "bedstone bridge add" in line_of(lambda: record.bridge("quillmere"))
    assert "bedstone bridge add" in line_of(lambda: record.log_visit(visit))
    record.add_bridge(bridge)
    assert '"quillmere"' in line_of(lambda: record.visits("quilmere"))
    assert "revision 2" in line_of(lambda: record.bridge("quillmere", 2))
    assert "bedstone visit log" in line_of(lambda: record.visit("quillmere", DAY))
    record.log_visit(visit)
    assert "2024-05-14" in line_of(lambda: record.visit("quillmere", dt.date(2020, 1, 1)))


def test_a_visit_that_does_not_fit_is_refused_by_the_record_too(
    record: Record, bridge: BridgeDoc, visit: VisitDoc
) -> None:
    record.add_bridge(bridge)
    for old, new in [('at = "6 m"', 'at = "60 m"'), ("2024-05-14", "2999-01-01"), ('"north"', '"nort"')]:
        line_of(
            lambda old=old, new=new: record.log_visit(parse_visit(changed(visit.text, old, new), file="v"))  # type: ignore[misc]
        )
    assert record.visits("quillmere") == []


def test_an_injected_failure_leaves_nothing_behind(
    record: Record, bridge: BridgeDoc, visit: VisitDoc, monkeypatch: pytest.MonkeyPatch
) -> None:
    record.add_bridge(bridge)
    made = visits.reading_row
    for failing in (1, 2):
        calls = iter(range(1, 10))

        def fail(*args: object, calls: object = calls, failing: int = failing, **more: object) -> object:
            if next(calls) == failing:  # type: ignore[call-overload]
                raise RuntimeError("pulled the plug")
            return made(*args, **more)  # type: ignore[arg-type]

        monkeypatch.setattr(visits, "reading_row", fail)
        with pytest.raises(RuntimeError):
            record.log_visit(visit)
        assert record.visits("quillmere") == []
    monkeypatch.undo()
    assert record.log_visit(visit).added


def test_superseded_and_withdrawn_readings_are_left_out_but_kept(
    record: Record, bridge: BridgeDoc, visit: VisitDoc
) -> None:
    record.add_bridge(bridge)
    record.log_visit(visit)
    with record.transaction() as session:
        first, second = session.scalars(select(ReadingRow).order_by(ReadingRow.id)).all()
        for old, withdrawn in ((first, False), (second, True)):
            columns = {c.key: getattr(old, c.key) for c in ReadingRow.__table__.columns if c.key != "id"}
            new = columns | {"supersedes_id": old.id, "reason": "dial misread", "withdrawn": withdrawn}
            session.add(ReadingRow(**(new | {"value": 1.4e-3})))
    back = record.visit("quillmere", DAY)
    assert [(r.row, r.value) for r in back.readings] == [(3, 1.4e-3)]
    assert record.visits("quillmere")[0].readings == 1
    with record.transaction() as session:
        assert len(session.scalars(select(ReadingRow)).all()) == 4


@pytest.mark.parametrize(
    "values",
    [
        {"sd": 0.0},
        {"supersedes_id": 1},
        {"reason": "none"},
        {"withdrawn": True},
        {"support_id": None, "at": None},
        {"girder_id": 99},
        {"state_id": 99},
    ],
)
def test_the_tables_refuse_rows_that_cannot_be(
    values: dict[str, object], record: Record, bridge: BridgeDoc, visit: VisitDoc
) -> None:
    record.add_bridge(bridge)
    record.log_visit(visit)
    with pytest.raises(BedstoneError), record.transaction() as session:
        row = session.get(ReadingRow, 1)
        columns = {c.key: getattr(row, c.key) for c in ReadingRow.__table__.columns if c.key != "id"}
        session.add(ReadingRow(**(columns | values)))


def test_all_visits_come_in_a_constant_number_of_queries(
    record: Record, bridge: BridgeDoc, visit_on: Callable[[dt.date], VisitDoc]
) -> None:
    record.add_bridge(bridge)
    counts = []
    for year in range(2010, 2016):
        record.log_visit(visit_on(dt.date(year, 5, 1)))
        statements: list[str] = []

        def note(*args: object, seen: list[str] = statements) -> None:
            seen.append(str(args[2]))

        event.listen(record._readers, "before_cursor_execute", note)
        docs = record.visit_docs("quillmere")
        event.remove(record._readers, "before_cursor_execute", note)
        assert [doc.date.year for doc in docs] == list(range(2010, year + 1))
        assert all(len(doc.readings) == 2 and len(doc.states) == 2 for doc in docs)
        counts.append(len([s for s in statements if s.startswith("SELECT")]))
    assert set(counts) == {4}


def result(**changes: object) -> KeptResult:
    kept = KeptResult(
        kind="calibration",
        bridge="quillmere",
        visit=DAY,
        revision=1,
        input_digest="abc",
        options={"prior": True},
        seed=2**40,
        version="0.1.0",
        result={"girders": [{"covariance": [[1.5, 0.25], [0.25, 2.5]]}], "cautions": []},
    )
    return dataclasses.replace(kept, **changes)  # type: ignore[arg-type]


@pytest.fixture
def visited(record: Record, bridge: BridgeDoc, visit: VisitDoc) -> Record:
    record.add_bridge(bridge)
    record.log_visit(visit)
    return record


def test_a_result_comes_back_with_the_moment_it_was_kept(visited: Record) -> None:
    assert visited.keep(result())
    (back,) = visited.results("quillmere", "calibration")
    assert dataclasses.replace(back, made_at=None) == result()
    assert back.made_at is not None
    assert abs(dt.datetime.now(dt.UTC) - back.made_at) < dt.timedelta(minutes=1)
    assert visited.results("quillmere", "assessment") == []


def test_a_result_is_kept_again_only_if_something_changed(visited: Record) -> None:
    assert visited.keep(result())
    assert not visited.keep(result())
    assert visited.keep(result(options={"prior": False}))
    assert visited.keep(result())
    assert visited.keep(result(input_digest="abd"))
    assert visited.keep(result(version="0.2.0"))
    assert not visited.keep(result(version="0.2.0", input_digest="abc"))
    assert visited.keep(result(kind="assessment"))
    assert visited.keep(result(kind="assessment", visit=None))
    assert not visited.keep(result(kind="assessment", visit=None))
    assert len(visited.results("quillmere", "calibration")) == 5
    assert [k.visit for k in visited.results("quillmere", "assessment")] == [DAY, None]


def test_a_result_that_cannot_be_made_again_is_a_defect(visited: Record) -> None:
    for changes in ({"kind": "guess"}, {"visit": None}, {"result": {"x": float("nan")}}):
        with pytest.raises(ValueError, match=r"kind|calibration|JSON"):
            visited.keep(result(**changes))
    with pytest.raises(ValueError, match="kind"):
        visited.results("quillmere", "guess")
    line_of(lambda: visited.keep(result(revision=7)))
    line_of(lambda: visited.keep(result(visit=dt.date(2020, 1, 1))))


def test_a_kept_text_that_was_tampered_with_is_not_believed(path: str, visit: VisitDoc) -> None:
    with open_record(path) as record:
        record.log_visit(visit)
        with record.transaction() as session:
            session.execute(text("UPDATE revisions SET text = replace(text, '150 kN/mm', '250 kN/mm')"))
            session.execute(text("UPDATE visits SET text = text || ' '"))
        assert "damaged" in line_of(lambda: record.bridge("quillmere"))
        assert "damaged" in line_of(lambda: record.visit_docs("quillmere"))


def test_rows_say_who_wrote_them_and_when(path: str, visit: VisitDoc) -> None:
    with open_record(path) as record:
        record.log_visit(visit)
        with record.transaction() as session:
            for table in (RevisionRow, VisitRow, ReadingRow):
                row = session.scalars(select(table)).first()
                assert row is not None
                assert row.written_by
                assert row.written_at.tzinfo is dt.UTC


def test_every_girder_and_support_has_one_row(path: str) -> None:
    with open_record(path) as record, record.transaction() as session:
        assert session.scalars(select(GirderRow.key)).all() == ["north"]
        assert len(session.scalars(select(SupportRow.key)).all()) == 4


def test_opening_and_reading_write_nothing(path: str) -> None:
    before = Path(path).read_bytes()
    with open_record(path) as record:
        record.bridges()
    assert Path(path).read_bytes() == before
