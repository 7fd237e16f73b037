"""What `bedstone assess` says."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

from assess.results.actions import ActionResult

RIVAL_MATTERS = 0.005  # of a utilisation


@dataclass(frozen=True, kw_only=True)
class CaseResult:
    """One section under one set of supports; kN m, or kN for shear. Hogging moments are negative."""

    x_m: float
    capacity: float | None
    permanent: float
    live: float
    factored: float
    utilisation: float | None
    rating_factor: float | None
    least_rating_factor: float | None = None  # of the row, wherever in it that is
    least_rating_x_m: float | None = None  # where that is
    rating_levels: dict[str, float | None] = field(
        default_factory=dict
    )  # least of the row, by levels of the set
    temperature: float = 0.0  # of the worst temperature case, unfactored; in `factored`


@dataclass(frozen=True, kw_only=True)
class CalibratedCase(CaseResult):
    """The calibrated case with its 95 % band; `settlement` is the part of `permanent` that seat drops add."""

    settlement: float = 0.0
    utilisation_with_relief: float | None = None
    utilisation_without_relief: float | None = None

    utilisation_low95: float | None
    utilisation_high95: float | None
    probability_over_1: float | None
    worst_rival: str | None = None  # of the close rival explanations, that with the greatest utilisation here
    worst_rival_utilisation: float | None = None

    @property
    def used_more_by_rival(self) -> bool:
        """Whether a close rival explanation uses the section more, by enough to be worth a word."""
        own, other = self.utilisation, self.worst_rival_utilisation
        return own is not None and other is not None and other > own + RIVAL_MATTERS


@dataclass(frozen=True, kw_only=True)
class SectionResult:
    """One row of the assessment: sagging fills `span`, hogging `support`, shear both. Spans count from 1."""

    effect: str
    span: int | None
    support: str | None
    unyielding: CaseResult
    nominal: CaseResult
    calibrated: CalibratedCase
    supposed: CaseResult | None = None  # as calibrated but for what is supposed; None where nothing is


@dataclass(frozen=True, kw_only=True)
class ReactionResult:
    """Unfactored support reactions, upward on the girder."""

    support: str
    unyielding_permanent_kN: float
    calibrated_permanent_kN: float
    calibrated_live_max_kN: float
    calibrated_live_min_kN: float
    calibrated_factored_max_kN: float
    calibrated_factored_min_kN: float
    calibrated_lifts_under: str | None = (
        None  # "permanent" | "live" | "factored"; None: it stays down or is held down
    )
    supposed_permanent_kN: float | None = None
    supposed_live_max_kN: float | None = None
    supposed_live_min_kN: float | None = None
    supposed_lifts_under: str | None = None


@dataclass(frozen=True, kw_only=True)
class PadLimit:
    """A value of a pad beside its limit, both in `unit` (empty for a plain number)."""

    name: str
    load: str  # what it is taken under: "permanent" | "total" | "live" | "factored"
    value: float
    limit: float
    unit: str
    utilisation: float
    status: str  # "within" | "watch" | "over"
    source: str


@dataclass(frozen=True, kw_only=True)
class PadCheck:
    """A pad that gives its geometry, under the calibrated reactions (unfactored, live with its allowance).

    Strains are those of an inner layer by the formula, times the stiffness by geometry over the calibrated one.
    """

    support: str
    formula: str
    limits_from: str
    shape_factor: float
    geometry_kN_per_m: float
    nominal_kN_per_m: float
    nominal_from: str  # "geometry" | "stiffness"
    cv: float
    batch: str | None
    permanent_kN: float
    total_kN: float
    minimum_kN: float
    permanent_pressure_MPa: float
    total_pressure_MPa: float
    minimum_pressure_MPa: float
    permanent_strain: float
    total_strain: float
    permanent_compression_mm: float
    creep_share_25_years: float | None
    creep_compression_25_years_mm: float | None
    limits: list[PadLimit]
    status: str  # of the worst limit; "unknown" without one


@dataclass(frozen=True, kw_only=True)
class CarriedRival:
    """A close rival of the calibration, and the reading that would decide between them, if one would."""

    name: str
    told_apart_by: str | None


@dataclass(frozen=True, kw_only=True)
class GirderAssessment:
    """The assessment of one girder line."""

    girder: str
    sections: list[SectionResult]
    reactions: list[ReactionResult]
    pads: list[PadCheck] = field(default_factory=list)  # of the pads that give their geometry
    rivals: list[CarriedRival] = field(default_factory=list)


@dataclass(frozen=True, kw_only=True)
class AssessmentResult:
    """`assess --json`."""

    bridge: str
    calibration_visit: dt.date | None
    version: str
    input_digest: str
    seed: int
    draws: int
    actions: list[ActionResult] = field(default_factory=list)  # the open ones of the bridge
    girders: list[GirderAssessment]
    cautions: list[str]
    supposed: list[str] = field(default_factory=list)  # what is supposed, as written
