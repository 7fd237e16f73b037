"""What `bedstone triggers` says."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass


@dataclass(frozen=True, kw_only=True)
class TriggerReading:
    """The readings at which a first section reaches watch and limit as one pad or one seat changes; mm.

    A reading that is None has its reason beside it.

    Attributes
    ----------
    quantity : "compression" | "deflection" | "settlement", as in a visit file
    state : load state in which it is read
    at_m : place of a deflection, from the girder's left end
    way : "softer" | "stiffer" of the pad, "down" | "up" of the seat
    governs : section that reaches the limit, or watch where none reaches the limit
    range_mm : reading at the end of the range looked at
    watch_kN_per_m, limit_kN_per_m : stiffness of the pad there
    """

    girder: str
    support: str
    quantity: str
    state: str
    now_mm: float | None
    watch_mm: float | None
    limit_mm: float | None
    governs: str | None
    way: str
    at_m: float | None
    range_mm: float | None
    watch_governs: str | None
    limit_governs: str | None
    watch_reason: str | None
    limit_reason: str | None
    watch_kN_per_m: float | None
    limit_kN_per_m: float | None


@dataclass(frozen=True, kw_only=True)
class PastSection:
    """A section that is at watch or past the limit as calibrated: no trigger is needed to say so."""

    girder: str
    section: str
    utilisation: float
    status: str  # "watch" | "over"


@dataclass(frozen=True, kw_only=True)
class TriggersResult:
    """`triggers --json`."""

    bridge: str
    name: str
    calibration_visit: dt.date | None
    version: str
    input_digest: str
    watch: float  # utilisation from which a section is on watch
    limit: float
    triggers: list[TriggerReading]
    past: list[PastSection]
    cautions: list[str]
