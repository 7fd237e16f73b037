"""What `bedstone calibrate` says."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass


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
