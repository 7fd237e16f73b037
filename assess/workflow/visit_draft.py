"""A planned visit as a visit file to be filled in: its load states and readings, the values left empty."""

from __future__ import annotations

import json
from collections.abc import Iterator

from assess.results import PlannedPosition, PlannedReading, PlanResult
from db.documents import PERMANENT


def draft_visit(result: PlanResult) -> str:
    """Return the text of a visit file; it is refused until date and values are filled in."""
    return "\n".join(_lines(result)) + "\n"


def _lines(result: PlanResult) -> Iterator[str]:
    yield f"# Planned readings of {result.bridge}, on each girder in order of worth."
    yield "# Fill in the date and every value with its unit, then: bedstone visit log THIS-FILE"
    yield "format = 1"
    yield ""
    yield "[visit]"
    yield f"bridge = {_text(result.bridge)}"
    yield "date =                          # the day of the visit, for example 2024-06-11"
    yield 'party = ""'
    yield '# pad_temperature = "14 degC"   # measured on the pads'
    yield '# datum = "levels of 2018"      # what settlements are counted from'
    for position in _positions(result):
        yield ""
        yield "[[load_state]]"
        yield f"id = {_text(position.state)}"
        yield f"vehicle = {_text(result.vehicle)}"
        yield f'leading_axle_at = "{position.leading_axle_at_m:g} m"'
    readings = [(girder.girder, reading) for girder in result.girders for reading in girder.readings]
    if any(reading.state == PERMANENT for _, reading in readings):
        yield from ("", "[[load_state]]", f"id = {_text(PERMANENT)}")
    for girder, reading in readings:
        yield from _reading(girder, reading)


def _positions(result: PlanResult) -> list[PlannedPosition]:
    """Every position once, by state."""
    found = {position.state: position for girder in result.girders for position in girder.positions}
    return sorted(found.values(), key=lambda position: position.leading_axle_at_m)


def _reading(girder: str, reading: PlannedReading) -> Iterator[str]:
    yield from ("", "[[reading]]", f"girder = {_text(girder)}", f"state = {_text(reading.state)}")
    yield f"quantity = {_text(reading.quantity)}"
    if reading.support is not None:
        yield f"support = {_text(reading.support)}"
    if reading.at_m is not None:
        yield f'at = "{reading.at_m:g} m"'
    if reading.height_m is not None:
        yield f'height = "{reading.height_m:g} m"'
    yield 'value = ""'
    yield f'sd = "{reading.sd:.6g} {reading.unit}"'


def _text(value: str) -> str:
    """A TOML string."""
    return json.dumps(value, ensure_ascii=False)
