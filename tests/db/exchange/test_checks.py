from __future__ import annotations

import datetime as dt

import pytest

from db.documents import BridgeDoc, VisitDoc
from db.exchange import check_visit, parse_bridge, parse_visit
from db.exchange.checks import axle_positions
from tests.db.conftest import changed, line_of

TODAY = dt.date(2024, 6, 1)

BAD = {
    "another bridge": ('"quillmere"', '"quillmore"', "visit, bridge"),
    "future date": ("2024-05-14", "2024-06-02", "visit, date: 2024-06-02 lies in the future"),
    "before the bridge": ("2024-05-14", "1989-05-31", "visit, date: 1989-05-31 lies before"),
    "unknown vehicle": ('"ballast wagon"', '"balast wagon"', 'no vehicle "balast wagon" (did you mean'),
    "vehicle far away": ('"13.1 m"', '"131 m"', 'load state "T1", leading_axle_at: no axle stands on girder'),
    "vehicle not there yet": ('"13.1 m"', '"-0.1 m"', "leading_axle_at"),
    "unknown girder": ('girder = "north"', 'girder = "nort"', 'no girder "nort" (did you mean "north"'),
    "unknown support": ('"pier 1"', '"pier 9"', 'girder "north" has no support "pier 9"'),
    "a pin compressed": ('"pier 1"', '"east abutment"', "is a pin, which has nothing to compress"),
    "unknowns of an unknown girder": (
        "[visit]",
        '[visit]\nunknowns = { nort = ["pads"] }',
        'visit, unknowns: there is no girder "nort" (did you mean "north"',
    ),
    "past the end": ('at = "6 m"', 'at = "39.1 m"', "visit.toml, reading 2, at: 39.1 m lies outside girder"),
    "before the start": ('at = "6 m"', 'at = "-1 mm"', "reading 2, at"),
}


def test_the_example_fits_its_bridge(visit: VisitDoc, bridge: BridgeDoc) -> None:
    check_visit(visit, bridge, today=TODAY, file="visit.toml")


@pytest.mark.parametrize("case", BAD)
def test_what_does_not_fit_the_bridge_is_refused(case: str, visit_text: str, bridge: BridgeDoc) -> None:
    old, new, says = BAD[case]
    visit = parse_visit(changed(visit_text, old, new), file="visit.toml")
    line = line_of(lambda: check_visit(visit, bridge, today=TODAY, file="visit.toml"))
    assert line.startswith("visit.toml")
    assert says in line


def test_a_reading_in_a_state_that_is_gone_is_refused(visit: VisitDoc, bridge: BridgeDoc) -> None:
    less = VisitDoc(**(vars(visit) | {"states": visit.states[:1]}))
    assert 'no load state "T1"' in line_of(lambda: check_visit(less, bridge, today=TODAY, file="v.toml"))


def test_no_axle_stands_in_the_permanent_state(visit: VisitDoc, bridge: BridgeDoc) -> None:
    assert axle_positions(visit.states[0], bridge) == ()


def test_every_reading_without_a_place_is_counted(visit_text: str, bridge: BridgeDoc) -> None:
    text = changed(visit_text, '"pier 1"', '"pier 9"', 'at = "6 m"', 'at = "60 m"')
    visit = parse_visit(text, file="visit.toml")
    assert "(and 1 more)" in line_of(lambda: check_visit(visit, bridge, today=TODAY, file="visit.toml"))


def test_a_settlement_of_a_pin_and_the_very_ends_are_taken(visit_text: str, bridge: BridgeDoc) -> None:
    text = changed(
        visit_text, '"compression"', '"settlement"', '"pier 1"', '"east abutment"', '"6 m"', '"39 m"'
    )
    check_visit(parse_visit(text, file="v.toml"), bridge, today=TODAY, file="v.toml")


def test_a_vehicle_that_faces_the_other_way_trails_to_larger_x(visit_text: str, bridge: BridgeDoc) -> None:
    text = changed(visit_text, '"13.1 m"', '"-5 m"\ntowards = "smaller x"')
    visit = parse_visit(text, file="v.toml")
    assert axle_positions(visit.states[1], bridge) == pytest.approx((-5.0, -3.2, 4.2, 6.0))
    check_visit(visit, bridge, today=TODAY, file="v.toml")


def test_a_vehicle_must_stand_on_every_girder_it_was_read_on(visit_text: str, bridge_text: str) -> None:
    start, end = bridge_text.index("[[girder]]"), bridge_text.index("[[vehicle]]")
    short = changed(bridge_text[start:end], '"north"', '"south"', 'end = "39 m"', 'end = "4 m"')
    spans = short.index("  [[girder.span]]"), short.index("  [[girder.support]]")
    supports = short[spans[1] :].split("  [[girder.support]]")
    short = (
        short[: spans[0]]
        + '  [[girder.span]]\n  length = "4 m"\n  section = "mid"\n'
        + "  [[girder.support]]".join(["", supports[1], supports[4]])
    )
    bridge = parse_bridge(bridge_text[:end] + short + bridge_text[end:], file="b.toml")
    visit = parse_visit(changed(visit_text, '"13.1 m"', '"25 m"'), file="v.toml")
    check_visit(visit, bridge, today=TODAY, file="v.toml")
    text = changed(visit_text, '"13.1 m"', '"25 m"', 'at = "6 m"', 'at = "2 m"')
    south = text[: text.rindex('"north"')] + '"south"' + text[text.rindex('"north"') + 7 :]
    visit = parse_visit(south, file="v.toml")
    assert '"south"' in line_of(lambda: check_visit(visit, bridge, today=TODAY, file="v.toml"))
