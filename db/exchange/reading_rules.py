"""What any reading must satisfy, whichever format it came in."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from typing import TypeVar

from db.documents import ReadingDoc
from db.errors import BedstoneError
from db.prior_doc import GaugeDoc
from db.wording import listed, shown, suggestion

T = TypeVar("T")
R = TypeVar("R")

DIMENSION_OF = {
    "compression": "length",
    "deflection": "length",
    "settlement": "length",
    "rotation": "angle",
    "strain": "strain",
}
"""The dimension of each quantity that can be read."""

EXAMPLE_OF = {
    "compression": "1.42 mm",
    "deflection": "2.31 mm",
    "settlement": "4 mm",
    "rotation": "0.4 mrad",
    "strain": "120 microstrain",
}
"""A right value of each quantity."""

_LARGEST = {"length": 2.0, "angle": 0.5, "strain": 0.05}  # m, rad, 1: past these it is a slip of unit
_TALLEST_M = 50.0
_AT_SUPPORT_ONLY = ("compression", "settlement")
_LEVELLED = ("settlement", "deflection")


def refuse_misplaced(reading: ReadingDoc | GaugeDoc, *, file: str, place: str) -> None:
    """Raise BedstoneError if support, at, height and benchmark do not fit the quantity."""

    def wrong(field: str, problem: str, remedy: str) -> BedstoneError:
        return BedstoneError(problem, file=file, field=f"{place}, {field}", remedy=remedy)

    what = reading.quantity
    if what in _AT_SUPPORT_ONLY:
        if reading.support is None:
            raise wrong("support", f"a {what} is read at a support", 'write for example support = "pier 1"')
        if reading.at is not None:
            raise wrong("at", f"a {what} is read at a support", "leave out at")
    elif (reading.support is None) == (reading.at is None):
        problem = f"a {what} needs exactly one of support and at"
        raise wrong("at", problem, 'write for example at = "6 m", or a support')
    if what == "strain" and reading.height is None:
        remedy = 'write the height above the neutral axis, for example height = "-0.62 m"'
        raise wrong("height", "a strain needs the height of the gauge", remedy)
    if what != "strain" and reading.height is not None:
        raise wrong("height", f"a {what} has none", "leave it out")
    if isinstance(reading, ReadingDoc) and reading.benchmark and what not in _LEVELLED:
        raise wrong("benchmark", f"a {what} is not levelled from one", "leave it out")


def refuse_absurd(reading: ReadingDoc, *, file: str, place: str) -> None:
    """Raise BedstoneError if a value is so large that its unit must be wrong."""
    largest = _LARGEST[DIMENSION_OF[reading.quantity]]
    raw = reading.raw
    given = "value" if raw is None else "gaps" if raw.gaps else "repeats" if len(raw.repeats) > 1 else "value"
    for field, value, entered in (
        (given, reading.value, reading.value_entered),
        ("sd", reading.sd, reading.sd_entered),
    ):
        if abs(value) > largest:
            problem = f'"{shown(entered)}" is no {reading.quantity} of a bridge in service'
            remedy = f'check the unit, for example "{EXAMPLE_OF[reading.quantity]}"'
            raise BedstoneError(problem, file=file, field=f"{place}, {field}", remedy=remedy)
    if reading.height is not None and abs(reading.height) > _TALLEST_M:
        problem = f"{reading.height:g} m is no height in a girder"
        remedy = 'check the unit, for example "-0.62 m"'
        raise BedstoneError(problem, file=file, field=f"{place}, height", remedy=remedy)


def undefined_state(reading: ReadingDoc, states: list[str]) -> BedstoneError:
    """Return the error for a reading in a load state that the visit does not define."""
    hint = suggestion(reading.state, states)
    problem = f'there is no load state "{shown(reading.state)}"{hint}'
    return BedstoneError(
        problem, file=reading.source, field="state", remedy=f"defined here: {listed(states)}"
    )


def undefined_benchmark(reading: ReadingDoc, benchmarks: list[str]) -> BedstoneError:
    """Return the error for a reading that is levelled from a benchmark which the visit does not define."""
    hint = suggestion(reading.benchmark, benchmarks)
    problem = f'there is no benchmark "{shown(reading.benchmark)}"{hint}'
    remedy = f"defined here: {listed(benchmarks)}; each is a [[benchmark]] of the visit file, with id and sd"
    return BedstoneError(problem, file=reading.source, field="benchmark", remedy=remedy)


def each(things: Iterable[T], read: Callable[[T], R]) -> list[R]:
    """Read all of them; raise the first error and say how many more there are.

    Raises
    ------
    BedstoneError
        The first error of `read`.
    """
    done: list[R] = []
    errors: list[BedstoneError] = []
    for thing in things:
        try:
            done.append(read(thing))
        except BedstoneError as error:
            errors.append(error)
    if errors:
        first = errors[0]
        more = f" (and {len(errors) - 1} more)" if len(errors) > 1 else ""
        raise BedstoneError(
            first.problem + more, file=first.file, field=first.field, remedy=first.remedy
        ) from first
    return done
