"""Where the next visit can read: the `[[girder.gauge]]` tables and `plan_positions` of a vehicle."""

from __future__ import annotations

from collections.abc import Sequence

from db.documents import PERMANENT, QUANTITIES, SupportDoc
from db.errors import BedstoneError
from db.exchange.fields import Fields
from db.exchange.reading_rules import DIMENSION_OF, EXAMPLE_OF, refuse_misplaced
from db.prior_doc import GaugeDoc
from db.quantities import read_quantity
from db.wording import shown

GAUGE = "quantity support at height sd cost state"
STATES = ("test", PERMANENT)
LARGEST_COST = 1e6
LARGEST_SD = {"length": 0.5, "angle": 0.1, "strain": 0.01}  # m, rad, 1: past these it is a slip of unit
MOST_POSITIONS = 1000
_SLACK_M = 1e-9
_BESIDE_A_HINGE = ("rotation", "strain")


def gauges(
    girder: Fields, supports: Sequence[SupportDoc], *, length: float, hinges: Sequence[float]
) -> tuple[GaugeDoc, ...]:
    """Return the gauges of a girder.

    Parameters
    ----------
    girder : Fields
        Its table.
    supports : sequence of SupportDoc
        Its supports.
    length, hinges : float and sequence of float
        Its length and where its internal hinges lie, m from the left end.

    Raises
    ------
    BedstoneError
        If a gauge reads nothing that can be read there.
    """
    made = []
    for fields in girder.tables("gauge", "gauge", GAUGE):
        gauge = _gauge(fields, [support.id for support in supports])
        _refuse_pin(fields, gauge, supports)
        _refuse_outside(fields, gauge, length, hinges)
        made.append(gauge)
    return tuple(made)


def _gauge(fields: Fields, supports: list[str]) -> GaugeDoc:
    quantity = fields.one_of("quantity", QUANTITIES)
    settles = quantity == "settlement"
    state = fields.one_of("state", STATES, PERMANENT if settles else STATES[0])
    if settles and state != PERMANENT:
        problem = "a settlement is read in the permanent state"
        raise fields.error("state", problem, f'write state = "{PERMANENT}", or leave it out')
    dimension, example = DIMENSION_OF[quantity], "0.05 " + EXAMPLE_OF[quantity].split()[1]
    sd = fields.positive("sd", dimension, example=example)
    entered = fields.quantity("sd", dimension, example=example)
    if sd > LARGEST_SD[dimension]:
        problem = f'"{shown(entered.text)}" is no standard deviation of a {quantity}'
        raise fields.error("sd", problem, f'check the unit, for example "{example}"')
    cost = fields.number("cost", 1.0, over=0.0)
    if cost > LARGEST_COST:
        raise fields.error("cost", f"{cost:g} is too large", "write it beside the others, for example 1.0")
    gauge = GaugeDoc(
        quantity=quantity,
        support=fields.reference("support", supports, "support") if fields.has("support") else None,
        at=fields.si("at", "length", example="6 m") if fields.has("at") else None,
        height=fields.si("height", "length", example="-0.62 m") if fields.has("height") else None,
        sd=sd,
        sd_entered=entered.text,
        unit=entered.unit,
        cost=cost,
        state=state,
    )
    refuse_misplaced(gauge, file=fields.file, place=fields.path)
    return gauge


def _refuse_pin(fields: Fields, gauge: GaugeDoc, supports: Sequence[SupportDoc]) -> None:
    kinds = {support.id: support.kind for support in supports}
    if gauge.quantity == "compression" and kinds[gauge.support or ""] == "pin":
        problem = f'"{shown(gauge.support)}" is a pin, which has nothing to compress'
        raise fields.error("support", problem, "name a pad")


def _refuse_outside(fields: Fields, gauge: GaugeDoc, length: float, hinges: Sequence[float]) -> None:
    if gauge.at is None:
        return
    if not -_SLACK_M <= gauge.at <= length + _SLACK_M:
        problem = f'"{shown(fields.table["at"])}" lies outside the girder (0 to {length:g} m)'
        raise fields.error("at", problem, f"write a place between 0 and {length:g} m from its left end")
    on_hinge = any(abs(gauge.at - hinge) <= _SLACK_M for hinge in hinges)
    if on_hinge and gauge.quantity in _BESIDE_A_HINGE:
        problem = f"a {gauge.quantity} is read beside a hinge, not on it ({gauge.at:g} m)"
        raise fields.error("at", problem, "write a place on one side of the hinge")


def plan_positions(
    vehicle: Fields, axles: Sequence[tuple[float, float]], *, reach: float
) -> tuple[float, ...]:
    """Return where the leading axle of a vehicle can stand at a visit, m.

    Parameters
    ----------
    vehicle : Fields
        Its table.
    axles : sequence of (float, float)
        Distance behind the leading axle, m, and load.
    reach : float
        Length of the longest girder, m.

    Raises
    ------
    BedstoneError
        If it is no list of places, or no axle would stand on the bridge.
    """
    name = "plan_positions"
    if not vehicle.has(name):
        return ()
    given = vehicle.table[name]
    right = f'write for example {name} = ["10 m", "24 m"]'
    if not isinstance(given, list) or not given:
        raise vehicle.error(name, "it is not a list of places", right)
    if len(given) > MOST_POSITIONS:
        raise vehicle.error(name, f"{len(given)} places are too many", f"give up to {MOST_POSITIONS}")
    made: list[float] = []
    for i, text in enumerate(given, start=1):
        field = f"{vehicle.where(name)}, {i}"
        x = read_quantity(text, "length", file=vehicle.file, field=field, example="10 m").si
        problem = ""
        if x in made:
            problem = f'"{shown(text)}" stands in it twice'
        if not any(-_SLACK_M <= x - d <= reach + _SLACK_M for d, _ in axles):
            problem = f'"{shown(text)}" puts no axle on a girder (0 to {reach:g} m)'
        if problem:
            remedy = "write places of the leading axle, the others behind it towards x = 0"
            raise BedstoneError(problem, file=vehicle.file, field=field, remedy=remedy)
        made.append(x)
    return tuple(made)
