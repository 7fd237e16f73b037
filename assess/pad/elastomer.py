"""The rubber: moduli from a shear modulus or a hardness, by the table that goes with a formula."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from assess.pad.tables import KPA_PER_KSI, KPA_PER_MPA, PadError, table

FORMULAS = ("en1337-3", "aashto-lrfd", "gent-lindley", "pressure-solution")
DEFAULT_FORMULA = "en1337-3"


@dataclass(frozen=True, kw_only=True)
class Elastomer:
    """Moduli of a rubber, kN/m2.

    Attributes
    ----------
    shear : G
    shear_tolerance : what G may be off by at 95 %
    bulk : K or Eb of the formula; infinite where the formula has no bulk term
    youngs, k : E0 and k of the Gent and Lindley form; NaN for the other formulas
    hardness : given, or read back from the table; None outside it
    source : the table, in words
    """

    shear: float
    shear_tolerance: float
    bulk: float
    youngs: float = math.nan
    k: float = math.nan
    hardness: float | None
    source: str

    def stiffened(self, factor: float) -> Elastomer:
        """The same rubber with shear and Young's modulus times a factor; volume change as it was."""
        return replace(self, shear=self.shear * factor, youngs=self.youngs * factor)


def elastomer(
    formula: str = DEFAULT_FORMULA,
    *,
    shear_modulus: float | None = None,
    hardness: float | None = None,
    bulk_modulus: float | None = None,
    tolerance: float | None = None,
) -> Elastomer:
    """Return the rubber that a formula reckons with.

    Parameters
    ----------
    formula : one of `FORMULAS`
    shear_modulus : G, kN/m2; or
    hardness : IRHD (Shore A within its scatter)
    bulk_modulus : kN/m2; the formula's own if left out
    tolerance : of G as a share of it, at 95 %; the table's own if left out

    Raises
    ------
    PadError
        for an unknown formula, both or neither of shear modulus and hardness, or a hardness outside the table.
    """
    if formula not in FORMULAS:
        raise PadError("formula", f'"{formula}" is not known', f"write one of {', '.join(FORMULAS)}")
    if (shear_modulus is None) == (hardness is None):
        problem = "both are given" if hardness is not None else "neither is given"
        raise PadError("shear_modulus", f"of shear_modulus and hardness {problem}", "give one of them")
    named = table("elastomer")[formula]
    rows = table("elastomer")[named["as"]] if "as" in named else named
    scale = np.array(rows["hardness"], dtype=np.float64)
    shears, tolerances = _shears(rows)
    if hardness is not None:
        if not scale[0] <= hardness <= scale[-1]:
            problem = (
                f"hardness {hardness:g} lies outside the table of {formula} ({scale[0]:g} to {scale[-1]:g})"
            )
            raise PadError("hardness", problem, "give shear_modulus instead")
        shear = _between(hardness, scale, shears)
        spread = _between(hardness, scale, tolerances)
    else:
        shear = float(shear_modulus or 0.0)
        if not 0.0 < shear < math.inf:
            raise PadError("shear_modulus", "it is not greater than zero", "write for example 0.9 MPa")
        share = rows.get("given_tolerance")
        spread = shear * (share if share is not None else _between(shear, shears, tolerances / shears))
        inside = shears[0] <= shear <= shears[-1]
        hardness = float(np.interp(shear, shears, scale)) if inside else None
    return Elastomer(
        shear=shear,
        shear_tolerance=spread if tolerance is None else tolerance * shear,
        **_volume(formula, rows, hardness, bulk_modulus),
        hardness=hardness,
        source=str(rows["source"]),
    )


def _shears(rows: dict[str, Any]) -> tuple[np.ndarray[Any, Any], np.ndarray[Any, Any]]:
    """Shear moduli and their tolerances by hardness, kN/m2."""
    if "shear_modulus_low_ksi" in rows:
        low, high = (np.array(rows[f"shear_modulus_{end}_ksi"]) * KPA_PER_KSI for end in ("low", "high"))
        return (low + high) / 2.0, (high - low) / 2.0
    shears = np.array(rows["shear_modulus_MPa"], dtype=np.float64) * KPA_PER_MPA
    if "tolerance_MPa" in rows:
        return shears, np.array(rows["tolerance_MPa"]) * KPA_PER_MPA
    return shears, shears * float(rows["given_tolerance"])


def _between(at: float, scale: np.ndarray[Any, Any], values: np.ndarray[Any, Any]) -> float:
    return float(np.interp(at, scale, values))


def _volume(
    formula: str, rows: dict[str, Any], hardness: float | None, bulk_modulus: float | None
) -> dict[str, float]:
    """Bulk modulus, and E0 and k where the formula has them."""
    if bulk_modulus is not None and not bulk_modulus > 0.0:
        raise PadError("bulk_modulus", "it is not greater than zero", "write for example 2000 MPa")
    if formula == "gent-lindley":
        if hardness is None:
            low, high = rows["shear_modulus_MPa"][0], rows["shear_modulus_MPa"][-1]
            problem = f"the shear modulus lies outside the table of gent-lindley ({low:g} to {high:g} MPa)"
            raise PadError("shear_modulus", problem, "choose another formula")
        scale = np.array(rows["hardness"], dtype=np.float64)
        of = {
            name: _between(hardness, scale, np.array(rows[name], dtype=np.float64))
            for name in ("youngs_modulus_MPa", "factor_k", "bulk_modulus_MPa")
        }
        bulk = of["bulk_modulus_MPa"] * KPA_PER_MPA if bulk_modulus is None else bulk_modulus
        return {"bulk": bulk, "youngs": of["youngs_modulus_MPa"] * KPA_PER_MPA, "k": of["factor_k"]}
    if bulk_modulus is not None:
        return {"bulk": bulk_modulus}
    return {"bulk": float(rows.get("bulk_modulus_MPa", math.inf)) * KPA_PER_MPA}
