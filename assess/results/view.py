"""What the report draws, and shows beside the other results."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from assess.results.actions import ActionResult
from assess.results.assessment import AssessmentResult
from assess.results.calibration import CalibrationResult
from assess.results.trend import TrendResult
from assess.shown import SectionView

Floats = NDArray[np.float64]


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
    actions: list[ActionResult] = field(default_factory=list)  # the open ones
    sections: list[SectionView] = field(default_factory=list)  # those built from plates are drawn
