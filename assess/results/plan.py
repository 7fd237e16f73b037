"""The result of `plan`; its fields are the keys of the JSON."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, kw_only=True)
class PlannedPosition:
    """A load state of the next visit: where the leading axle of the vehicle stands, the others behind it."""

    state: str
    leading_axle_at_m: float


@dataclass(frozen=True, kw_only=True)
class PlannedReading:
    """A reading of the next visit.

    `sd_mm` is None for an angle or a strain; `sd` is in `unit`. `sd_utilisation_after` is what the governing
    utilisation is still unsure by after this reading and those above it; None where no utilisation is known.
    """

    state: str
    quantity: str
    support: str | None
    at_m: float | None
    sd_mm: float | None
    sd_utilisation_after: float | None
    sd: float
    unit: str
    height_m: float | None
    cost: float


@dataclass(frozen=True, kw_only=True)
class PlannedPad:
    """Standard deviation of ln k of a pad as assumed before the readings, and after them."""

    support: str
    sd_ln_before: float
    sd_ln_after: float


@dataclass(frozen=True, kw_only=True)
class PlannedSeat:
    """Standard deviation of how far a seat has dropped since the datum, before the readings and after them."""

    support: str
    sd_mm_before: float
    sd_mm_after: float


@dataclass(frozen=True, kw_only=True)
class GoverningSection:
    """The section that the readings are chosen for."""

    effect: str
    span: int | None
    support: str | None


@dataclass(frozen=True, kw_only=True)
class HalfPlan:
    """The best set of readings at half the cost."""

    positions: list[PlannedPosition]
    readings: list[PlannedReading]
    sd_utilisation_after: float | None
    cost: float


@dataclass(frozen=True, kw_only=True)
class PlanSupport:
    """Where a support is, m from the girder's left end."""

    support: str
    at_m: float


@dataclass(frozen=True, kw_only=True)
class GirderPlan:
    """What to read on one girder line; readings in order of worth."""

    girder: str
    positions: list[PlannedPosition]
    readings: list[PlannedReading]
    pads: list[PlannedPad]
    seats: list[PlannedSeat]
    governs: GoverningSection | None  # None where no section gives a resistance
    utilisation: float | None
    sd_utilisation_before: float | None
    cost: float
    half_cost: HalfPlan
    supports: list[PlanSupport]


@dataclass(frozen=True, kw_only=True)
class PlanResult:
    """`plan --json`; `defaults` says what was taken because the bridge file does not say it."""

    bridge: str
    girders: list[GirderPlan]
    vehicle: str
    axles_behind_m: list[float]
    defaults: list[str]
    cautions: list[str]
