"""Units at the border: ``"18 m"`` becomes a float in SI (m, kN, kN/m, kN m, kN/m2, rad, degC, 1/K, years).

A written quantity is exactly one finite number and then one unit. Nothing is evaluated: the number
must match one pattern, the unit is split into names that must all stand in a table, and only then
does pint convert it. Force and angle are base dimensions here, so a mass cannot pass for a force
nor a moment for a rotational stiffness.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from functools import cache, lru_cache
from typing import TYPE_CHECKING, Any

from db.errors import BedstoneError
from db.wording import shown, suggestion

if TYPE_CHECKING:
    import pint

LONGEST = 60
"""No written quantity needs more characters than this."""

PLACEHOLDERS = ("…", "...")
"""What a draft file starts a value with that the user has still to fill in."""


@dataclass(frozen=True, kw_only=True)
class Dimension:
    """What a field measures: its name in a sentence, its SI unit here, and a right example."""

    name: str
    si: str
    example: str


DIMENSIONS = {
    d.name: d
    for d in (
        Dimension(name="length", si="m", example="18 m"),
        Dimension(name="area", si="m^2", example="0.021 m^2"),
        Dimension(name="second moment", si="m^4", example="0.0118 m^4"),
        Dimension(name="force", si="kN", example="200 kN"),
        Dimension(name="moment", si="kN m", example="5100 kN m"),
        Dimension(name="line load", si="kN/m", example="9.5 kN/m"),
        Dimension(name="stiffness", si="kN/m", example="150 kN/mm"),
        Dimension(name="stress", si="kN/m^2", example="205 GPa"),
        Dimension(name="rotational stiffness", si="kN m/rad", example="2e5 kN m / rad"),
        Dimension(name="angle", si="rad", example="0.4 mrad"),
        Dimension(name="strain", si="strain", example="120 microstrain"),
        Dimension(name="temperature", si="degC", example="13 degC"),
        Dimension(name="temperature difference", si="K", example="10 K"),
        Dimension(name="temperature coefficient", si="1/K", example="0.5 percent / K"),
        Dimension(name="thermal expansion", si="1/K", example="12e-6 / K"),
        Dimension(name="duration", si="year", example="24 months"),
    )
}
"""Every dimension a field may have, by name."""

# The inch, the pound and standard gravity are exact by definition: 0.0254 m, 0.45359237 kg, 9.80665 m/s2.
_DEFINITIONS = (
    "m = [length]",
    "kN = [force]",
    "rad = [angle]",
    "kg = [mass]",
    "year = [time]",
    "K = [temperature]; offset: 0",
    "strain = []",
    "mm = m / 1000",
    "cm = m / 100",
    "km = 1000 * m",
    "um = m / 1000000",
    "inch = 0.0254 * m",
    "ft = 0.3048 * m",
    "N = kN / 1000",
    "MN = 1000 * kN",
    "lbf = 0.0044482216152605 * kN",
    "kip = 4.4482216152605 * kN",
    "Pa = N / m ** 2",
    "kPa = kN / m ** 2",
    "MPa = 1000 * kN / m ** 2",
    "GPa = 1000000 * kN / m ** 2",
    "psi = lbf / inch ** 2",
    "ksi = kip / inch ** 2",
    "mrad = rad / 1000",
    "urad = rad / 1000000",
    f"deg = {math.pi / 180!r} * rad",
    "microstrain = strain / 1000000",
    "percent = strain / 100",
    "degC = K; offset: 273.15",
    f"degF = {5 / 9!r} * K; offset: {459.67 * 5 / 9!r}",
    f"F_step = {5 / 9!r} * K",
    "month = year / 12",
    "day = year / 365.25",
)

_SPELLINGS = {
    **{name: name for name in ("m", "mm", "cm", "km", "um", "ft", "N", "kN", "MN", "lbf", "kip")},
    **{name: name for name in ("Pa", "kPa", "MPa", "GPa", "psi", "ksi", "rad", "mrad", "urad", "deg")},
    **{
        name: name
        for name in ("strain", "microstrain", "percent", "K", "degC", "degF", "year", "month", "day")
    },
    **dict.fromkeys(("metre", "metres", "meter", "meters"), "m"),
    **dict.fromkeys(("µm", "μm"), "um"),
    **dict.fromkeys(("in", "inch", "inches"), "inch"),
    **dict.fromkeys(("foot", "feet"), "ft"),
    "kips": "kip",
    **dict.fromkeys(("µrad", "μrad", "microrad"), "urad"),
    **dict.fromkeys(("degree", "degrees", "°"), "deg"),
    **dict.fromkeys(("µε", "με", "ustrain", "µstrain", "μstrain"), "microstrain"),
    "%": "percent",
    "°C": "degC",
    "°F": "degF",
    "years": "year",
    "months": "month",
    "days": "day",
    # a few spellings written together
    "kNm": "kN m",
    "Nm": "N m",
    "MNm": "MN m",
    "kNmm": "kN mm",
    "Nmm": "N mm",
    # masses: known so that the error can say what is wrong with them
    **dict.fromkeys(("kg", "g", "t", "tonne", "tonnes", "ton", "tons", "Mg", "lb", "lbs", "lbm"), "kg"),
}

_RATIOS = {"strain", "microstrain", "percent"}
_LENGTHS = {"m", "mm", "cm", "km", "um", "inch", "ft"}
_SUPERSCRIPTS = str.maketrans({"²": "^2", "³": "^3", "⁴": "^4", "¹": "^1", "⁶": "^6"})
_SPACES = str.maketrans({"\u00a0": " ", "\u202f": " ", "\u2009": " "})
_NUMBER = re.compile(r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]+)?")
_FACTOR = re.compile(r"(?P<name>[A-Za-zµμε°%]+)(?:\^?(?P<power>[1-46])|\^(?P<negative>-[1-46]))?")
_PER = re.compile("1? */")  # "1.2e-5 / K", "0.005 1/K"
_COMMA = re.compile(r",\s*[0-9]")
_JOIN = re.compile(r" *([*·⋅/ ]|(?<=[A-Za-z])-(?=[A-Za-z])) *")


@dataclass(frozen=True, kw_only=True)
class Quantity:
    """A quantity as read: the SI value beside what was written."""

    si: float
    text: str
    unit: str


@dataclass(frozen=True, kw_only=True)
class _Unit:
    """A unit made ready: ``si = offset + factor * value``."""

    dimensionality: tuple[tuple[str, float], ...]
    names: frozenset[str]
    factor: float
    offset: float


def read_quantity(
    value: object,
    dimension: str,
    *,
    file: str | None = None,
    field: str | None = None,
    example: str | None = None,
) -> Quantity:
    """Read a written quantity.

    Parameters
    ----------
    value : object
        What stands in the file; anything but text is an error.
    dimension : str
        A key of `DIMENSIONS`.
    file, field : str, optional
        Where it stands, for the error.
    example : str, optional
        A right example for this field; the dimension's own if left out.

    Raises
    ------
    BedstoneError
        If it is not one finite number and then one unit of that dimension.
    """
    right = f'write one number and one unit, for example "{example or DIMENSIONS[dimension].example}"'
    try:
        return _read(value, dimension, right)
    except BedstoneError as error:
        raise error.at(file=file, field=field) from None


def read_number(text: str, *, file: str | None = None, field: str | None = None) -> float:
    """Read one finite number written as text (a cell of a table); no unit, no expression.

    Raises
    ------
    BedstoneError
        If it is anything else.
    """
    text = text.strip()
    if len(text) > LONGEST or not _NUMBER.fullmatch(text):
        remedy = "write one number such as 1.42, with a point and without a unit"
        raise BedstoneError(f'"{shown(text)}" is not one number', file=file, field=field, remedy=remedy)
    try:
        return _finite(text, "write a number that a measurement can have")
    except BedstoneError as error:
        raise error.at(file=file, field=field) from None


def to_si(value: float, unit: str, dimension: str) -> float:
    """Convert a number in a unit to SI.

    Raises
    ------
    BedstoneError
        If the unit is unknown, is of another dimension, or the result is not finite.
    """
    made = _unit_of(unit, dimension, f'write for example "{DIMENSIONS[dimension].example}"')
    offset = 0.0 if dimension == "temperature difference" else made.offset  # degrees count there as steps
    si = offset + made.factor * value
    if not math.isfinite(si) or (si == 0.0 and value != 0.0 and offset == 0.0):
        raise BedstoneError(f'"{value!r} {shown(unit)}" is out of range', remedy="check number and unit")
    return si


def to_unit(value_si: float, unit: str) -> float:
    """Convert an SI value (m, kN, rad, degC, years) to the unit it was entered in.

    Raises
    ------
    BedstoneError
        If the unit is unknown.
    """
    made = _compile(unit.strip())
    return (value_si - made.offset) / made.factor


def _read(value: object, dimension: str, right: str) -> Quantity:
    if not isinstance(value, str):
        kind = "a number without a unit" if isinstance(value, int | float) else "not text"
        raise BedstoneError(f"{shown(value)} is {kind}", remedy=right)
    text = value.translate(_SPACES).strip()
    if not text:
        raise BedstoneError("it is empty", remedy=right)
    if text.startswith(PLACEHOLDERS):
        raise BedstoneError(f'"{shown(text)}" is still a placeholder', remedy=right)
    if len(text) > LONGEST:
        raise BedstoneError(f"{len(text)} characters are too many for a quantity", remedy=right)
    number = _NUMBER.match(text)
    if number is None:
        raise BedstoneError(f'"{shown(text)}" does not start with a finite number', remedy=right)
    amount = _finite(number.group(), right)
    unit = text[number.end() :].strip()
    if not unit:
        raise BedstoneError(f'"{shown(text)}" has no unit', remedy=right)
    if _COMMA.match(unit):
        raise BedstoneError(
            f'"{shown(text)}" has a comma in its number', remedy=f"put a point there; {right}"
        )
    try:
        si = to_si(amount, unit, dimension)
    except BedstoneError as error:
        problem = error.problem if shown(text) in error.problem else f'"{shown(text)}": {error.problem}'
        remedy = right if "mass" not in error.problem else error.remedy
        raise BedstoneError(problem, remedy=remedy) from None
    return Quantity(si=si, text=value.strip(), unit=unit)


def _finite(text: str, remedy: str) -> float:
    amount = float(text)
    lost = amount == 0.0 and re.search("[1-9]", re.split("[eE]", text)[0]) is not None
    if math.isinf(amount) or lost:
        raise BedstoneError(f"{shown(text)} is out of range", remedy=remedy)
    return amount


def _unit_of(unit: str, dimension: str, right: str) -> _Unit:
    """The unit made ready, if it measures what the field wants."""
    made = _compile(unit.strip())
    wanted = _compile(DIMENSIONS[dimension].si)
    ratios = made.names & _RATIOS
    fits = (
        not ratios
        or dimension in ("strain", "thermal expansion")
        or ratios == {"percent"} == made.names - {"K", "F_step"}
    )
    if made.dimensionality == wanted.dimensionality and fits:
        return made
    slope = dimension == "angle" and not made.dimensionality and made.names <= _LENGTHS
    if slope:  # mm/m for a small rotation: common practice, no source
        return made
    if "kg" in made.names:
        problem = f'"{shown(unit)}" is a mass, not a {dimension}'
        remedy = f'write the weight in kN (1 t weighs 9.81 kN), for example "{DIMENSIONS[dimension].example}"'
        raise BedstoneError(problem, remedy=remedy if _has_force(wanted) else right)
    raise BedstoneError(f'"{shown(unit)}" is no unit of {dimension}', remedy=right)


def _has_force(unit: _Unit) -> bool:
    return any(name == "[force]" for name, _ in unit.dimensionality)


@lru_cache(maxsize=1024)
def _compile(unit: str) -> _Unit:
    from pint.util import UnitsContainer

    powers = _powers(unit)
    if any(power != 1 for name, power in powers.items() if name in _RATIOS):
        raise BedstoneError(f'"{shown(unit)}" is not one unit', remedy='write for example "microstrain"')
    registry = _registry()
    alone = len(powers) == 1 and sum(powers.values()) == 1
    if not alone:  # a difference of temperature, not a temperature
        powers = {{"degC": "K", "degF": "F_step"}.get(name, name): power for name, power in powers.items()}
    made = registry.Quantity(1.0, registry.Unit(UnitsContainer(powers)))
    dimensionality = tuple(sorted((str(k), _plain(v)) for k, v in made.dimensionality.items()))
    offset = 0.0
    factor = _magnitude(made.to_base_units())
    if alone and dimensionality == (("[temperature]", 1.0),):
        name = next(iter(powers))
        offset = _magnitude(registry.Quantity(0.0, name).to("degC"))
        factor = 5 / 9 if name == "degF" else 1.0
    return _Unit(dimensionality=dimensionality, names=frozenset(powers), factor=factor, offset=offset)


def _magnitude(quantity: Any) -> float:
    return float(quantity.magnitude)


def _plain(power: Any) -> float:
    return float(power)


def _powers(unit: str) -> dict[str, int]:
    """Split a unit into known names with powers; `kN m / rad` is {kN: 1, m: 1, rad: -1}."""
    plain = unit.translate(_SPACES).translate(_SUPERSCRIPTS)
    if len(plain) > LONGEST:
        raise BedstoneError(f"{len(plain)} characters are too many for a unit")
    powers: dict[str, int] = {}
    sign = 1
    for i, part in enumerate(_JOIN.split(plain)):
        if i % 2:
            if sign < 0 and part != "/":
                raise BedstoneError(
                    f'"{shown(unit)}" can be read in two ways', remedy="put one unit after each /"
                )
            sign = -1 if part == "/" else 1
        elif i > 0 or not _PER.match(plain):
            for name, power in _factor(part, unit):
                powers[name] = powers.get(name, 0) + sign * power
    return powers


def _factor(part: str, unit: str) -> list[tuple[str, int]]:
    match = _FACTOR.fullmatch(part)
    if match is None:
        raise BedstoneError(f'"{shown(unit)}" is not one unit', remedy='write for example "mm" or "kN/mm"')
    name = match["name"]
    if name not in _SPELLINGS:
        hint = suggestion(name, [s for s in _SPELLINGS if _SPELLINGS[s] != "kg"])
        raise BedstoneError(
            f'unit "{shown(name)}" is unknown{hint}', remedy="write for example mm, kN, kN/mm"
        )
    known = _SPELLINGS[name].split()
    power = int(match["power"] or match["negative"] or 1)
    if len(known) > 1 and power != 1:
        raise BedstoneError(f'"{shown(part)}" can be read in two ways', remedy="write kN m with a space")
    return [(name, power) for name in known]


@cache
def _registry() -> pint.UnitRegistry[Any]:
    """A registry that knows the units above and nothing else."""
    import pint

    registry: pint.UnitRegistry[Any] = pint.UnitRegistry(None)
    for line in _DEFINITIONS:
        registry.define(line)
    return registry
