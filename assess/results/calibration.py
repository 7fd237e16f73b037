"""What `bedstone calibrate` says."""

from __future__ import annotations

import datetime as dt
import math
from dataclasses import dataclass, field


@dataclass(frozen=True, kw_only=True)
class PadResult:
    """A pad's effective stiffness from one visit; `ratio_to_nominal` is the estimate over nominal.

    `stiffness_20degC_kN_per_m` is the estimate brought to 20 degC; None where nothing tells how.
    """

    support: str
    stiffness_kN_per_m: float
    low95_kN_per_m: float
    high95_kN_per_m: float | None  # None: not bounded above by the readings
    nominal_kN_per_m: float
    ratio_to_nominal: float
    data_share: float
    interval_from: str = "normal"  # "normal" | "profile": of the likelihood, where the normal one is off
    stiffness_20degC_kN_per_m: float | None = None

    @property
    def highest_kN_per_m(self) -> float:
        """The upper end of the interval, infinite where the readings do not bound it."""
        return math.inf if self.high95_kN_per_m is None else self.high95_kN_per_m


@dataclass(frozen=True, kw_only=True)
class SettlementResult:
    """How far a seat has dropped since the datum, mm.

    `moment_relevant` is its distance from the straight line through the two end seats: what bends the girder, and what
    no shift or tilt of the datum changes.
    """

    support: str
    value: float
    low95: float
    high95: float
    data_share: float
    moment_relevant: float
    moment_relevant_low95: float
    moment_relevant_high95: float
    moment_relevant_data_share: float


@dataclass(frozen=True, kw_only=True)
class UnknownResult:
    """Another unknown of the fit, with its unit ("" for a factor)."""

    name: str
    value: float
    low95: float
    high95: float
    data_share: float
    unit: str


@dataclass(frozen=True, kw_only=True)
class CorrelationResult:
    """Correlation of two unknowns after the fit."""

    a: str
    b: str
    r: float


@dataclass(frozen=True, kw_only=True)
class RivalResult:
    """Another explanation of the same readings.

    `carried` says whether the assessment carries it along: its AICc or its AIC is within 2 of the best and its unknown
    is told. `told` says whether the readings tell its extra unknown at all; `simpler` that it asks for less than the
    calibration and for nothing else; `told_apart_by` names the reading that would decide between it and the
    calibration, None where none of the usual kinds would.
    """

    name: str
    aicc: float | None
    chi_square: float
    within_2: bool
    log_likelihood: float
    effective_unknowns: float
    told: bool
    simpler: bool = False
    carried: bool = False
    told_apart_by: str | None


@dataclass(frozen=True, kw_only=True)
class CauseResult:
    """What moved at a support: "pad" | "seat" | "pad and seat" | "pad; seat cannot be told" | "neither" |
    "cannot be told".

    `off_if_seat_still_sd` and `off_if_pad_nominal_sd` say how far off the readings would be, in standard deviations,
    with the seat at rest and with the pad within its nominal scatter; None where nothing was read of the seat.
    """

    support: str
    cause: str
    off_if_seat_still_sd: float | None
    off_if_pad_nominal_sd: float


@dataclass(frozen=True, kw_only=True)
class RobustPad:
    """A pad by the robust fit, and how many standard deviations of the calibration that is from it."""

    support: str
    stiffness_kN_per_m: float
    off_by_sd: float


@dataclass(frozen=True, kw_only=True)
class ProposedRemoval:
    """A reading that snooping proposes to look at; nothing is removed.

    `p_value` is that of the fit without it and those before; `alike` are readings that could as well be the wrong one.
    """

    reading: str
    standardised_residual: float
    p_value: float | None
    alike: list[str] = field(default_factory=list)


@dataclass(frozen=True, kw_only=True)
class LeftOut:
    """Readings left out of the fit by hand, with the reason given."""

    reading: str
    reason: str


@dataclass(frozen=True, kw_only=True)
class PadShift:
    """How far a pad's stiffness moves, per cent and in its standard deviations."""

    support: str
    change_percent: float
    change_sd: float


@dataclass(frozen=True, kw_only=True)
class CompensatingError:
    """What an error in the model would do to the pads."""

    error: str
    pads: list[PadShift]


@dataclass(frozen=True, kw_only=True)
class ReadingResult:
    """A reading beside what the fitted girder predicts, in the unit it was entered in.

    `predicted` is None for a reading that was left out of the fit; `left_out` says why. `minimal_detectable` is the
    error in it that snooping finds 80 times in 100; None where nothing checks it.
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
    redundancy: float | None = None
    minimal_detectable: float | None = None
    left_out: str | None = None


@dataclass(frozen=True, kw_only=True)
class GirderCalibration:
    """The fit of one girder line."""

    girder: str
    pads: list[PadResult]
    settlements_mm: list[SettlementResult] = field(default_factory=list)
    stiffness_factor: float | None = None  # None where it was not asked for
    sustained_ratio: float | None = None
    unknowns: list[str] = field(default_factory=list)
    unknowns_from: str = "the readings"
    calibrated_as: str | None = None  # the name of this calibration among the rivals
    others: list[UnknownResult] = field(default_factory=list)  # all unknowns but pads and settlements
    chi_square: float
    degrees_of_freedom: int
    p_value: float | None
    correlations: list[CorrelationResult] = field(default_factory=list)
    singular_values: list[float] = field(default_factory=list)
    rivals: list[RivalResult] = field(default_factory=list)
    causes: list[CauseResult] = field(default_factory=list)
    robust: list[RobustPad] = field(default_factory=list)
    proposed_removals: list[ProposedRemoval] = field(default_factory=list)
    effective_sample_size: float | None = None  # of the draws
    draws_from: str = "normal"  # "normal" | "weighted" | "ensemble"
    left_out: list[LeftOut] = field(default_factory=list)
    compensating_errors: list[CompensatingError] = field(default_factory=list)  # on request
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
