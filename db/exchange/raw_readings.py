"""Raw readings of a visit, whichever format they came in: what may stand together, and what they are reduced to."""

from __future__ import annotations

import dataclasses
import math
from collections import defaultdict
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field

from db.documents import PERMANENT, ReadingDoc
from db.errors import BedstoneError
from db.exchange.reduction import Reduced, of_gaps, of_repeats, pooled_sd
from db.quantities import Quantity, to_unit
from db.raw_doc import CORNERS, RawDoc
from db.wording import listed

REPEATED = ("repeats", "zero_before", "zero_after")
GAPS = ("gaps", "gaps_before", "gaps_after")
LISTS = (*REPEATED, *GAPS)
"""Fields that hold several values; a zero may be one."""

SPACING = "corner_spacing"
MOST_REPEATS = 1000
SHORTEST_SPACING_M, LONGEST_SPACING_M = 0.02, 10.0
ROTATION_UNIT = "mrad"


@dataclass(frozen=True, kw_only=True)
class Measured:
    """What a reading gives as written: one value, or lists to reduce, and the standard deviation of one of them."""

    value: Quantity | None
    sd: Quantity
    lists: Mapping[str, tuple[Quantity, ...]] = field(default_factory=dict)
    corner_spacing: float | None = None  # m


@dataclass(frozen=True, kw_only=True)
class Values:
    """The fields of a `ReadingDoc` that come of it, before the visit's repeatability is known."""

    value: float
    sd: float
    value_entered: str
    sd_entered: str
    unit: str
    raw: RawDoc | None


def refuse_mixed(names: Iterable[str], *, quantity: str, state: str, file: str, place: str) -> None:
    """Raise BedstoneError if the fields of values do not go together, or not with quantity and state."""
    given = set(names)

    def wrong(name: str, problem: str, remedy: str) -> BedstoneError:
        return BedstoneError(problem, file=file, field=f"{place}, {name}", remedy=remedy)

    of_corners = [name for name in (*GAPS, SPACING) if name in given]
    if of_corners:
        if quantity != "compression":
            raise wrong(of_corners[0], f"a {quantity} has no gaps", 'write quantity = "compression"')
        for name in ("value", *REPEATED):
            if name in given:
                raise wrong(name, "it cannot stand beside gaps", f"give {name}, or the gaps of the corners")
        for name in GAPS[:2]:
            if name not in given:
                raise wrong(name, "it is missing", f"write the four gaps, in the order {listed(CORNERS)}")
    elif {"value", "repeats"} <= given:
        raise wrong("repeats", "it cannot stand beside value", "keep one of the two")
    if state == PERMANENT:
        for name in (*REPEATED[1:], GAPS[2]):
            if name in given:
                problem = "the permanent state is not loaded and unloaded"
                raise wrong(name, problem, "leave it out, or name a test state")


def refuse_odd(measured: Measured, *, file: str, place: str) -> None:
    """Raise BedstoneError if a list has the wrong length, or the corners are set apart as no pad's are."""
    for name, values in measured.lists.items():
        where = f"{place}, {name}"
        if name in GAPS and len(values) != len(CORNERS):
            problem = f"it holds {len(values)} gap{'s' * (len(values) != 1)}, a pad has four corners"
            remedy = f"write all four, in the order {listed(CORNERS)}; without one, read the compression in another way"
            raise BedstoneError(problem, file=file, field=where, remedy=remedy)
        if len(values) > MOST_REPEATS:
            problem = f"{len(values)} repeats are too many"
            raise BedstoneError(problem, file=file, field=where, remedy=f"give up to {MOST_REPEATS}")
    spacing = measured.corner_spacing
    if spacing is not None and not SHORTEST_SPACING_M <= spacing <= LONGEST_SPACING_M:
        problem = f"{spacing:g} m is no distance between the corners of a pad"
        remedy = (
            "write the distance from the near to the far corners, for example 320 mm (in a table in m: 0.32)"
        )
        raise BedstoneError(problem, file=file, field=f"{place}, {SPACING}", remedy=remedy)


def values_of(measured: Measured) -> Values:
    """Return the values of a reading; `reduced` makes them final once all of the visit are there."""
    first = measured.value
    if first is not None and not measured.lists:
        return Values(
            value=first.si,
            sd=measured.sd.si,
            value_entered=first.text,
            sd_entered=measured.sd.text,
            unit=first.unit,
            raw=None,
        )
    lists = {name: tuple(q.si for q in values) for name, values in measured.lists.items()}
    if first is not None:
        lists["repeats"] = (first.si,)
    else:
        first = measured.lists["gaps" if "gaps" in lists else "repeats"][0]
    raw = RawDoc(
        sd=measured.sd.si,
        sd_entered=measured.sd.text,
        repeats=lists.get("repeats", ()),
        zero_before=lists.get("zero_before", ()),
        zero_after=lists.get("zero_after", ()),
        gaps=lists.get("gaps", ()),
        gaps_before=lists.get("gaps_before", ()),
        gaps_after=lists.get("gaps_after", ()),
        corner_spacing=measured.corner_spacing,
    )
    return _values(raw, first.unit)


def reduced(readings: Iterable[ReadingDoc]) -> list[ReadingDoc]:
    """Return the readings of a visit with the repeatability it shows, and the rotations that gaps tell behind them.

    Readings that were not reduced from anything stay as they are.
    """
    every = list(readings)
    lists: dict[tuple[str, str], list[tuple[float, ...]]] = defaultdict(list)
    for reading in every:
        if reading.raw is not None and not reading.raw.gaps:
            raw = reading.raw
            lists[reading.quantity, reading.unit] += [raw.repeats, raw.zero_before, raw.zero_after]
    known = {key: pooled_sd(some) for key, some in lists.items()}
    return [made for r in every for made in _final(r, known.get((r.quantity, r.unit)))]


def _final(reading: ReadingDoc, repeatability: float | None) -> list[ReadingDoc]:
    if reading.raw is None:
        return [reading]
    if not reading.raw.gaps:
        raw = dataclasses.replace(reading.raw, repeatability=repeatability)
        return [_with(reading, _values(raw, reading.unit))]
    whole = _with(reading, _values(reading.raw, reading.unit))
    rotation = of_gaps(reading.raw).rotation
    return [whole] if rotation is None else [whole, _rotation(whole, rotation)]


def _rotation(reading: ReadingDoc, made: Reduced) -> ReadingDoc:
    """The rotation of the girder against the seat, beside the compression of the same gaps."""
    raw = None if reading.raw is None else dataclasses.replace(reading.raw, drift=made.drift)
    return dataclasses.replace(
        reading,
        quantity="rotation",
        value=made.value,
        sd=made.sd,
        value_entered=f"{_text(made.value, made.sd, ROTATION_UNIT)} (from four gaps)",
        sd_entered=_text(made.sd, made.sd, ROTATION_UNIT, digits=3),
        unit=ROTATION_UNIT,
        source=f"{reading.source}, rotation",
        raw=raw,
        derived=True,
    )


def _with(reading: ReadingDoc, values: Values) -> ReadingDoc:
    return dataclasses.replace(reading, **vars(values))


def _values(raw: RawDoc, unit: str) -> Values:
    if raw.gaps:
        gaps = of_gaps(raw)
        made, how = gaps.compression, "from four gaps"
        raw = dataclasses.replace(raw, drift=made.drift, twist=gaps.twist, twist_sd=gaps.twist_sd)
    else:
        made = of_repeats(raw)
        raw = dataclasses.replace(raw, drift=made.drift)
        how = f"mean of {len(raw.repeats)}" if len(raw.repeats) > 1 else "one reading"
        how += " less zeros" if raw.zero_before or raw.zero_after else ""
    return Values(
        value=made.value,
        sd=made.sd,
        value_entered=f"{_text(made.value, made.sd, unit)} ({how})",
        sd_entered=f"{_text(made.sd, made.sd, unit, digits=3)} (of one {raw.sd_entered})",
        unit=unit,
        raw=raw,
    )


def _text(value: float, sd: float, unit: str, *, digits: int = 2) -> str:
    """A value in a unit, to so many digits of its standard deviation."""
    decimals = max(0, digits - 1 - math.floor(math.log10(to_unit(sd, unit))))
    shown = round(to_unit(value, unit), decimals) + 0.0  # no minus before nothing
    return f"{shown:.{decimals}f} {unit}"
