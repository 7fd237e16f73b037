"""A visit against the bridge it was made to: every reading has a place that exists."""

from __future__ import annotations

import datetime as dt

from db.documents import BridgeDoc, GirderDoc, LoadStateDoc, ReadingDoc, VisitDoc
from db.errors import BedstoneError
from db.exchange.girder_toml import SLACK_M
from db.exchange.reading_rules import each, undefined_state
from db.wording import listed, shown, suggestion

_BESIDE_A_HINGE = ("rotation", "strain")


def check_visit(visit: VisitDoc, bridge: BridgeDoc, *, today: dt.date, file: str) -> None:
    """Check what a visit says against the bridge file.

    Parameters
    ----------
    visit : VisitDoc
        The visit.
    bridge : BridgeDoc
        The newest revision of its bridge.
    today : datetime.date
        No visit is later.
    file : str
        Name of the visit file, for errors that belong to no reading.

    Raises
    ------
    BedstoneError
        The first thing that does not fit, and how many readings more do not.
    """
    _check_head(visit, bridge, today, file)
    _check_unknowns(visit, bridge, file)
    each(visit.states, lambda state: _check_state(state, visit, bridge, file))
    each(visit.readings, lambda reading: _check_reading(reading, visit, bridge))


def axle_positions(state: LoadStateDoc, bridge: BridgeDoc) -> tuple[float, ...]:
    """Where the axles of a test state stand, in m from the girder's left end."""
    if state.vehicle is None or state.leading_axle_at is None:
        return ()
    away = -1.0 if state.towards == "larger x" else 1.0
    return tuple(state.leading_axle_at + away * d for d, _ in bridge.vehicle(state.vehicle).axles)


def _check_head(visit: VisitDoc, bridge: BridgeDoc, today: dt.date, file: str) -> None:
    if visit.bridge != bridge.id:
        problem = f'"{shown(visit.bridge)}" is not "{shown(bridge.id)}"'
        raise BedstoneError(problem, file=file, field="visit, bridge", remedy="name the bridge of the visit")
    if visit.date > today:
        problem = f"{visit.date} lies in the future (today is {today})"
        raise BedstoneError(problem, file=file, field="visit, date", remedy="write the day of the visit")
    if bridge.built is not None and visit.date < bridge.built:
        problem = f"{visit.date} lies before the bridge was built ({bridge.built})"
        remedy = "mend the date of the visit, or built in the bridge file"
        raise BedstoneError(problem, file=file, field="visit, date", remedy=remedy)


def _check_unknowns(visit: VisitDoc, bridge: BridgeDoc, file: str) -> None:
    girders = [girder.id for girder in bridge.girders]
    for girder, _ in visit.unknowns:
        if girder and girder not in girders:
            problem = f'there is no girder "{shown(girder)}"{suggestion(girder, girders)}'
            remedy = f"known to the bridge: {listed(girders)}"
            raise BedstoneError(problem, file=file, field="visit, unknowns", remedy=remedy)


def _check_state(state: LoadStateDoc, visit: VisitDoc, bridge: BridgeDoc, file: str) -> None:
    if state.vehicle is None:
        return
    place = f'load state "{shown(state.id)}"'
    vehicles = [vehicle.id for vehicle in bridge.vehicles]
    if state.vehicle not in vehicles:
        problem = f'there is no vehicle "{shown(state.vehicle)}"{suggestion(state.vehicle, vehicles)}'
        remedy = f"known to the bridge: {listed(vehicles)}"
        raise BedstoneError(problem, file=file, field=f"{place}, vehicle", remedy=remedy)
    positions = axle_positions(state, bridge)
    read = {reading.girder for reading in visit.readings if reading.state == state.id}
    girders = [g for g in bridge.girders if g.id in read] or list(bridge.girders)
    for girder in girders:
        if not any(-SLACK_M <= x <= girder.length + SLACK_M for x in positions):
            problem = f'no axle stands on girder "{shown(girder.id)}" (0 to {girder.length:g} m)'
            remedy = f"the axles stand from {min(positions):g} to {max(positions):g} m; mend the place"
            raise BedstoneError(problem, file=file, field=f"{place}, leading_axle_at", remedy=remedy)


def _check_reading(reading: ReadingDoc, visit: VisitDoc, bridge: BridgeDoc) -> None:
    states = [state.id for state in visit.states]
    if reading.state not in states:
        raise undefined_state(reading, states)
    girders = [girder.id for girder in bridge.girders]
    if reading.girder not in girders:
        problem = f'there is no girder "{shown(reading.girder)}"{suggestion(reading.girder, girders)}'
        remedy = f"known to the bridge: {listed(girders)}"
        raise BedstoneError(problem, file=reading.source, field="girder", remedy=remedy)
    girder = bridge.girder(reading.girder)
    if reading.support is not None:
        _check_support(reading, girder)
    if reading.at is not None and not -SLACK_M <= reading.at <= girder.length + SLACK_M:
        problem = f'{reading.at:g} m lies outside girder "{shown(girder.id)}" (0 to {girder.length:g} m)'
        remedy = f"write a place between 0 and {girder.length:g} m from its left end"
        raise BedstoneError(problem, file=reading.source, field="at", remedy=remedy)
    if reading.at is not None and reading.quantity in _BESIDE_A_HINGE:
        _refuse_on_hinge(reading.quantity, reading.at, girder, reading.source)


def _refuse_on_hinge(quantity: str, at: float, girder: GirderDoc, source: str) -> None:
    """Raise BedstoneError where a slope has two values, and a moment is always nothing."""
    if any(abs(at - hinge) <= SLACK_M for hinge in girder.hinges):
        problem = f"a {quantity} is read beside a hinge, not on it ({at:g} m)"
        remedy = "write the place of the instrument, on the side of the hinge where it sits"
        raise BedstoneError(problem, file=source, field="at", remedy=remedy)


def _check_support(reading: ReadingDoc, girder: GirderDoc) -> None:
    name = reading.support or ""
    supports = [support.id for support in girder.supports]
    if name not in supports:
        problem = f'girder "{shown(girder.id)}" has no support "{shown(name)}"{suggestion(name, supports)}'
        remedy = f"its supports: {listed(supports)}"
        raise BedstoneError(problem, file=reading.source, field="support", remedy=remedy)
    if reading.quantity == "compression" and girder.supports[supports.index(name)].kind != "pad":
        problem = f'"{shown(name)}" is a pin, which has nothing to compress'
        remedy = "name a pad, or read its settlement"
        raise BedstoneError(problem, file=reading.source, field="support", remedy=remedy)
