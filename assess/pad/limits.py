"""Compressive pressure and strain of a pad against limits that are data."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from assess.pad.compression import Pad
from assess.pad.tables import KPA_PER_KSI, KPA_PER_MPA, PadError, table

METRES_PER_INCH = 0.0254
OWNER = "the bridge file"
_OWN = {  # limits that a bridge file may give: load and kind
    "permanent pressure": ("permanent", "pressure"),
    "total pressure": ("total", "pressure"),
    "permanent strain": ("permanent", "strain"),
    "total strain": ("total", "strain"),
    "live compression": ("live", "compression"),
}


@dataclass(frozen=True, kw_only=True)
class PadLoads:
    """Forces on a pad, kN, compression positive: unfactored unless named; `live` is the live part of `total`."""

    permanent: float
    total: float
    minimum: float
    factored: float

    def of(self, load: str) -> float:
        """The force under a load by name: permanent, total, factored or live."""
        return {
            "permanent": self.permanent,
            "total": self.total,
            "factored": self.factored,
            "live": self.total - self.permanent,
        }[load]


@dataclass(frozen=True, kw_only=True)
class LimitCheck:
    """A value beside its limit; kN/m2 for pressures, m for compressions, else a plain number."""

    name: str
    kind: str
    load: str
    value: float
    limit: float
    source: str

    @property
    def utilisation(self) -> float:
        """Value over limit."""
        return self.value / self.limit


def limit_sets() -> tuple[str, ...]:
    """Return the names of the published sets of limits."""
    return tuple(name for name, row in table("limits").items() if isinstance(row, dict))


def default_set(formula: str) -> str:
    """Return the set that goes with a formula: its own, or en1337-3 where its text gives no limits."""
    return formula if formula in limit_sets() else "en1337-3"


def least_permanent_pressure() -> float:
    """Return the permanent pressure below which an unfixed pad may walk, kN/m2; common practice, no source."""
    return float(table("limits")["least_permanent_pressure_MPa"]) * KPA_PER_MPA


def check_limits(
    pad: Pad,
    loads: PadLoads,
    *,
    rules: str | None = None,
    own: Mapping[str, float] | None = None,
    softness: float = 1.0,
) -> list[LimitCheck]:
    """Hold a pad against a set of limits.

    Parameters
    ----------
    pad : Pad
    loads : PadLoads
    rules : a name of `limit_sets`; that of the formula if left out
    own : the owner's limits by name (kN/m2, a strain, or m); each stands in the place of a published one of its name
    softness : stiffness by geometry over the stiffness the pad shows; strains and compressions grow by it

    Raises
    ------
    PadError
        for an unknown set, one without a limit for such a pad, or an unknown limit of the owner's.
    """
    rules = default_set(pad.formula) if rules is None else rules
    if rules not in limit_sets():
        raise PadError(
            "limits", f'there is no set of limits "{rules}"', f"write one of {', '.join(limit_sets())}"
        )
    own = dict(own or {})
    for name, value in own.items():
        if name not in _OWN or not value > 0.0:
            raise PadError("limit", f'"{name}" is no limit that can be given', f"known: {', '.join(_OWN)}")
    published = table("limits")[rules]
    pads = "plain" if pad.geometry.plain else "laminated"
    checks = [
        _check(pad, loads, row, published["source"], softness)
        for row in published["limit"]
        if row["pads"] in ("all", pads) and row["name"] not in own
    ]
    if not checks and not own:
        raise PadError(
            "limits",
            f'the set "{rules}" has no limit for a {pads} pad',
            f"write one of {', '.join(limit_sets())} that has, or limits of your own",
        )
    for name, value in own.items():
        load, kind = _OWN[name]
        row = {"name": name, "load": load, "kind": kind, "given": value}
        checks.append(_check(pad, loads, row, OWNER, softness))
    return checks


def _check(pad: Pad, loads: PadLoads, row: dict[str, Any], source: str, softness: float) -> LimitCheck:
    force = loads.of(row["load"])
    g, s = pad.rubber.shear, pad.shape_factor
    pressure = force / pad.plan.area
    kind = row["kind"]
    if kind in ("pressure", "stability"):
        value, limit = pressure, row.get("given") or _allowed(pad, row)
    elif kind == "shear strain":
        value, limit = row["coefficient"] * pressure / (g * s), row["limit"]
    elif kind == "strain":
        value, limit = softness * pad.layer_strain(force), row.get("given") or row["limit"]
    else:
        value = softness * force / pad.stiffness
        limit = row.get("given") or row["limit_in"] * METRES_PER_INCH
    return LimitCheck(
        name=row["name"], kind=kind, load=row["load"], value=value, limit=float(limit), source=source
    )


def _allowed(pad: Pad, row: dict[str, Any]) -> float:
    """Allowed pressure by the shape of the pad, kN/m2."""
    g, s = pad.rubber.shear, pad.shape_factor
    if row["kind"] == "stability":
        slender = pad.plan.short / pad.geometry.rubber_thickness
        return float(row["coefficient"] * g * s * slender)
    cap = row["cap_ksi"] * KPA_PER_KSI if "cap_ksi" in row else row.get("cap_in_shear_moduli", math.inf) * g
    return float(min(row["coefficient"] * g * s, cap))
