"""What effects are combined with: the `[factors]` and the `[[temperature]]` tables of a bridge file."""

from __future__ import annotations

from collections.abc import Sequence

from db.documents import FactorsDoc, GirderDoc, SeatRiseDoc, TemperatureDoc
from db.exchange.fields import Fields, refuse_duplicates
from db.wording import shown

_RELIEVING = ("permanent_relieving", "surfacing_relieving", "settlement_relieving")
_LOADING = ("surfacing", "settlement", "temperature")
_FACTORS = (
    "name permanent live resistance set level condition system relief_counts "
    f"{' '.join(_LOADING)} {' '.join(_RELIEVING)}"
)
_TEMPERATURE = "id difference expansion seat"
_SEAT = "girder support rise"
GREATEST_DIFFERENCE_K = 60.0
GREATEST_EXPANSION = 1e-4  # 1/K
GREATEST_RISE_M = 0.1


def factors(top: Fields) -> FactorsDoc:
    """Return the owner's partial factors.

    Raises
    ------
    BedstoneError
        If anything in them is wrong, or neither the factors nor a set is given.
    """
    fields = top.subtable("factors", _FACTORS, "name, permanent and live")
    by_set = fields.id("set") if fields.has("set") else None
    for name in ("level", "condition", "system"):
        if by_set is None and fields.has(name):
            raise fields.error(name, "it belongs to a built-in set", 'leave it out, or write set = "lrfr"')
    for name in ("permanent", "live"):
        if by_set is None:
            fields.number(name, over=0.0)
    if fields.has("live") and fields.has("level"):
        raise fields.error("level", "it cannot stand beside live", "give one of the two")
    for relieving in _RELIEVING[1:]:
        loading = relieving.removesuffix("_relieving")
        if fields.has(relieving) and not fields.has(loading) and by_set is None:
            raise fields.error(relieving, f"it stands without {loading}", f"write {loading} too")
    return FactorsDoc(
        name=fields.text("name", ""),
        permanent=_factor(fields, "permanent"),
        live=_factor(fields, "live"),
        resistance=1.0 if by_set is None and not fields.has("resistance") else _factor(fields, "resistance"),
        permanent_relieving=_factor(fields, "permanent_relieving"),
        surfacing=_factor(fields, "surfacing"),
        surfacing_relieving=_factor(fields, "surfacing_relieving"),
        settlement=_factor(fields, "settlement"),
        settlement_relieving=_factor(fields, "settlement_relieving", least=0.0),
        temperature=_factor(fields, "temperature", least=0.0),
        relief_counts=fields.flag("relief_counts"),
        set=by_set,
        level=fields.id("level") if fields.has("level") else None,
        condition=fields.id("condition") if fields.has("condition") else None,
        system=_factor(fields, "system"),
    )


def _factor(fields: Fields, name: str, *, least: float | None = None) -> float | None:
    """A factor greater than zero, or at least `least`; None if it is absent."""
    if not fields.has(name):
        return None
    if least is None:
        return fields.number(name, over=0.0)
    value = fields.number(name)
    if value < least:
        raise fields.error(name, f"{value:g} is less than {least:g}", f"write {least:g} or more")
    return value


def temperatures(top: Fields, girders: Sequence[GirderDoc]) -> tuple[TemperatureDoc, ...]:
    """Return the temperature cases.

    Raises
    ------
    BedstoneError
        If anything in them is wrong.
    """
    tables = top.tables("temperature", "temperature", _TEMPERATURE)
    cases = tuple(_case(fields, girders) for fields in tables)
    refuse_duplicates(((f, c.id) for f, c in zip(tables, cases, strict=True)), "temperature case")
    return cases


def _case(fields: Fields, girders: Sequence[GirderDoc]) -> TemperatureDoc:
    difference = fields.si("difference", "temperature difference", 0.0, example="10 K")
    if abs(difference) > GREATEST_DIFFERENCE_K:
        problem = (
            f'"{shown(fields.table["difference"])}" is no difference between top and underside of a girder'
        )
        raise fields.error(
            "difference", problem, 'write for example "10 K", or "-5 K" where the top is colder'
        )
    expansion = fields.optional_positive("expansion", "temperature coefficient", example="1.2e-5 1/K")
    if expansion is not None and expansion > GREATEST_EXPANSION:
        problem = f'"{shown(fields.table["expansion"])}" is no thermal expansion of a girder'
        raise fields.error("expansion", problem, 'write for example "1.2e-5 1/K"')
    seats = tuple(_seat(f, girders) for f in fields.tables("seat", "seat", _SEAT, by_number=True))
    if difference == 0.0 and not seats:
        raise fields.error(
            "difference", "neither a difference nor a seat is given", 'write for example "10 K"'
        )
    case = TemperatureDoc(id=fields.id("id"), difference=difference, seats=seats)
    return case if expansion is None else TemperatureDoc(**{**vars(case), "expansion": expansion})


def _seat(fields: Fields, girders: Sequence[GirderDoc]) -> SeatRiseDoc:
    name = fields.reference("girder", [girder.id for girder in girders], "girder")
    girder = next(one for one in girders if one.id == name)
    support = fields.reference("support", [one.id for one in girder.supports], "support")
    rise = fields.si("rise", "length", example="2 mm")
    if abs(rise) > GREATEST_RISE_M:
        problem = f'"{shown(fields.table["rise"])}" is no rise of a seat by warmth'
        raise fields.error("rise", problem, 'check the unit, for example "2 mm"')
    return SeatRiseDoc(girder=name, support=support, rise=rise)
