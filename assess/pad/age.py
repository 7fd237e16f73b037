"""What time and cold do to a pad: creep on log time, and thermal stiffening by compound."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from assess.pad.tables import PadError, table

REFERENCE_DEGC = 20.0
MINUTES_PER_YEAR = 365.25 * 24.0 * 60.0
CREEP_YEARS = 25.0


def creep_share(hardness: float, years: float = CREEP_YEARS) -> float:
    """Return creep over initial deflection after some years under constant load.

    The published shares at 25 years, interpolated by hardness, on log time from the reference minute:
    share = A log10(t / t1). Source in `data/creep.toml`.

    Raises
    ------
    PadError
        for a hardness outside the table or a time before the reference.
    """
    data = table("creep")
    scale = data["hardness"]
    if not scale[0] <= hardness <= scale[-1]:
        problem = f"hardness {hardness:g} lies outside the table of creep ({scale[0]:g} to {scale[-1]:g})"
        raise PadError("hardness", problem, "take creep from the maker's tests")
    at_25 = float(np.interp(hardness, scale, data["share_25_years"]))
    start = data["reference_minutes"]
    return at_25 / decades(CREEP_YEARS, start) * decades(years, start)


def decades(years: float, reference_minutes: float = 1.0) -> float:
    """Return the decades of log time from the reference to some years.

    Raises
    ------
    PadError
        for a time before the reference.
    """
    ratio = years * MINUTES_PER_YEAR / reference_minutes
    if not ratio >= 1.0:
        raise PadError(
            "years", "the time lies before the reference of the initial deflection", "give a later one"
        )
    return math.log10(ratio)


def creep_per_decade(hardness: float) -> float:
    """Return the part of the initial deflection that each decade of time adds."""
    return creep_share(hardness) / decades(CREEP_YEARS, table("creep")["reference_minutes"])


@dataclass(frozen=True, kw_only=True)
class ColdCurve:
    """Shear modulus over that at 20 degC against temperature, for one compound."""

    compound: str
    temperature: tuple[float, ...]
    stiffening: tuple[float, ...]
    source: str

    def factor(self, temperature: float) -> float:
        """Return the stiffening at a pad temperature in degC; ln of it runs straight between the points.

        Raises
        ------
        PadError
            outside the curve.
        """
        low, high = self.temperature[0], self.temperature[-1]
        if not low <= temperature <= high:
            problem = (
                f"{temperature:g} degC lies outside the curve of {self.compound} ({low:g} to {high:g} degC)"
            )
            raise PadError("compound", problem, "compare visits within that range")
        return float(np.exp(np.interp(temperature, self.temperature, np.log(self.stiffening))))


def compounds() -> tuple[str, ...]:
    """Return the compounds that have a curve."""
    return tuple(table("cold"))


def cold_curve(compound: str) -> ColdCurve:
    """Return the curve of a compound.

    Raises
    ------
    PadError
        if there is none.
    """
    if compound not in table("cold"):
        raise PadError("compound", f'"{compound}" has no curve', f"write one of {', '.join(compounds())}")
    row = table("cold")[compound]
    return ColdCurve(
        compound=compound,
        temperature=tuple(float(v) for v in row["temperature_degC"]),
        stiffening=tuple(float(v) for v in row["stiffening"]),
        source=row["source"],
    )
