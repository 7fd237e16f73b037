"""What the commands say. The fields of these dataclasses are the JSON keys of the contract.

Figures need more than the contract shows; that stands in the `*Lines` and `*View` classes at the end.
"""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from assess.shown import SectionView

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class PadResult:
    """A pad's effective stiffness from one visit; `ratio_to_nominal` is the estimate over nominal."""

    support: str
    stiffness_kN_per_m: float
    low95_kN_per_m: float
    high95_kN_per_m: float
    nominal_kN_per_m: float
    ratio_to_nominal: float
    data_share: float


@dataclass(frozen=True, kw_only=True)
class ReadingResult:
    """A reading beside what the fitted girder predicts, in the unit it was entered in.

    `predicted` is None for a reading that was left out of the fit because the girder leaves a pad in its state.
    """

    state: str
    quantity: str
    support: str | None
    at_m: float | None
    observed: float
    predicted: float | None
    unit: str
    sd: float
    standardised_residual: float | None
    suspect: bool


@dataclass(frozen=True, kw_only=True)
class GirderCalibration:
    """The fit of one girder line."""

    girder: str
    pads: list[PadResult]
    chi_square: float
    degrees_of_freedom: int
    p_value: float | None
    readings: list[ReadingResult]


@dataclass(frozen=True, kw_only=True)
class CalibrationResult:
    """`calibrate --json`."""

    bridge: str
    visit: dt.date
    version: str
    input_digest: str
    girders: list[GirderCalibration]
    cautions: list[str]


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


@dataclass(frozen=True, kw_only=True)
class SectionResult:
    """One row of the assessment: sagging fills `span`, hogging `support`, shear both. Spans count from 1."""

    effect: str
    span: int | None
    support: str | None
    unyielding: CaseResult
    nominal: CaseResult
    calibrated: CalibratedCase


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
class GirderAssessment:
    """The assessment of one girder line."""

    girder: str
    sections: list[SectionResult]
    reactions: list[ReactionResult]
    pads: list[PadCheck] = field(default_factory=list)  # of the pads that give their geometry


@dataclass(frozen=True, kw_only=True)
class AssessmentResult:
    """`assess --json`."""

    bridge: str
    calibration_visit: dt.date | None
    version: str
    input_digest: str
    seed: int
    draws: int
    girders: list[GirderAssessment]
    cautions: list[str]


@dataclass(frozen=True, kw_only=True)
class PadTrend:
    """A pad over the visits; change per year of its stiffness in per cent with its 95 % interval."""

    girder: str
    support: str
    visits: int
    law: str
    change_per_year_percent: float | None
    low95: float | None
    high95: float | None
    step_between: tuple[dt.date, dt.date] | None


@dataclass(frozen=True, kw_only=True)
class SeatTrend:
    """A seat over the visits: mm since the datum, downward, and its rate with the 95 % interval."""

    girder: str
    support: str
    visits: int
    settlement_mm: float
    sd_mm: float
    moving: bool
    rate_mm_per_year: float | None
    low95: float | None
    high95: float | None


@dataclass(frozen=True, kw_only=True)
class SpanTrend:
    """A governing section carried forward."""

    girder: str
    effect: str
    span: int | None
    support: str | None
    utilisation_now: float | None
    status: str  # "within" | "watch" | "over" | "unknown"
    probability_over_1_now: float | None
    median_crossing: dt.date | None
    earliest_5_percent: dt.date | None


@dataclass(frozen=True, kw_only=True)
class TrendResult:
    """`trend --json`."""

    bridge: str
    as_of: dt.date
    pads: list[PadTrend]
    spans: list[SpanTrend]
    seats: list[SeatTrend] = field(default_factory=list)
    next_visit_by: dt.date | None
    next_visit_reason: str
    cautions: list[str]


# --- what figures draw -------------------------------------------------------------------------


@dataclass(frozen=True, kw_only=True)
class MomentLines:
    """Factored moment envelopes along a girder; every array is (stations,). Capacity NaN where not given.

    `*_low` / `*_high` are the 95 % band of the calibrated envelope. Hogging arrays are negative;
    `capacity_hogging` too. `peaks` are (x, value, label) worth writing on the drawing.
    """

    x_m: Floats
    capacity_sagging: Floats
    capacity_hogging: Floats
    unyielding_sagging: Floats
    unyielding_hogging: Floats
    nominal_sagging: Floats
    nominal_hogging: Floats
    calibrated_sagging: Floats
    calibrated_hogging: Floats
    sagging_low: Floats
    sagging_high: Floats
    hogging_low: Floats
    hogging_high: Floats
    unyielding_permanent: Floats
    nominal_permanent: Floats
    calibrated_permanent: Floats


@dataclass(frozen=True, kw_only=True)
class MeasuredPoint:
    """A measured movement for the elevation: mm, downward or shortening positive."""

    x_m: float
    value_mm: float
    sd_mm: float
    fitted_mm: float
    kind: str  # "deflection" | "compression" | "settlement"
    suspect: bool


@dataclass(frozen=True, kw_only=True)
class ElevationState:
    """One test state on the elevation: the fitted line and the readings on it."""

    state: str
    x_m: Floats  # (stations,)
    fitted_mm: Floats  # (stations,)
    axles: list[tuple[float, float]]  # (x in m, kN) of the axles on the girder
    points: list[MeasuredPoint]


@dataclass(frozen=True, kw_only=True)
class SupportView:
    """A support as drawn: a pad with its ratio to nominal and interval, or a pin; seat drop in mm."""

    support: str
    kind: str
    x_m: float
    ratio: float | None
    ratio_low: float | None
    ratio_high: float | None
    data_share: float | None
    seat_drop_mm: float | None
    seat_drop_sd_mm: float | None


@dataclass(frozen=True, kw_only=True)
class PadHistory:
    """A pad's stiffness ratio over the visits, with the law and the forecast fan."""

    support: str
    dates: list[dt.date]
    ratio: Floats  # (visits,), as calibrated
    low95: Floats
    high95: Floats
    data_share: Floats
    temperature_degC: list[float | None]
    line_dates: list[dt.date]
    line: Floats  # (times,), law and forecast, median
    fan_low: Floats
    fan_high: Floats
    last_visit: dt.date
    law: str


@dataclass(frozen=True, kw_only=True)
class LoadStand:
    """Where the live load stands for the section that it uses most; loads with share and dynamic allowance."""

    effect: str  # "sagging" | "hogging"
    x_m: float  # of the section
    live_kNm: float
    name: str  # of the arrangement, where a load model has several
    axles: list[tuple[float, float]]  # (x in m, kN)
    stretches: list[tuple[float, float, float]]  # (start in m, end in m, kN/m)
    towards: str  # "larger x" | "smaller x" | ""


@dataclass(frozen=True, kw_only=True)
class GirderView:
    """All that the report draws of one girder line."""

    girder: str
    span_lengths_m: list[float]
    supports: list[SupportView]
    states: list[ElevationState]
    moments: MomentLines
    histories: list[PadHistory]
    stands: list[LoadStand] = field(default_factory=list)
    hinges_m: list[float] = field(default_factory=list)  # internal hinges
    lie: tuple[Floats, Floats] | None = (
        None  # places (p,) in m, sinking there by unit drop of each seat (p, n)
    )


@dataclass(frozen=True, kw_only=True)
class ReportView:
    """All that the report shows."""

    bridge: str
    name: str
    carries: str
    zero: str
    built: dt.date | None
    revision: int
    bridge_digest: str
    visits: list[tuple[dt.date, str, float | None, int]]  # date, party, pad temperature, readings
    factors: str  # the factor set in words
    live: list[str]  # the live loads in words
    verdicts: dict[str, str]  # girder -> what to do first, one sentence
    verdict_cautions: dict[str, list[str]]  # girder -> cautions that change that sentence
    calibration: CalibrationResult | None
    assessment: AssessmentResult
    trend: TrendResult | None
    girders: list[GirderView]
    options: dict[str, str]  # provenance: option -> value in words
    cautions: list[str] = field(default_factory=list)
    sections: list[SectionView] = field(default_factory=list)  # those built from plates are drawn
