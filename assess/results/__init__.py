"""What the commands say. The fields of these dataclasses are the JSON keys of the contract."""

from assess.results.assessment import (
    AssessmentResult,
    CalibratedCase,
    CaseResult,
    GirderAssessment,
    PadCheck,
    PadLimit,
    ReactionResult,
    SectionResult,
)
from assess.results.calibration import CalibrationResult, GirderCalibration, PadResult, ReadingResult
from assess.results.trend import PadTrend, SeatTrend, SpanTrend, TrendResult
from assess.results.view import (
    ElevationState,
    GirderView,
    LoadStand,
    MeasuredPoint,
    MomentLines,
    PadHistory,
    ReportView,
    SupportView,
)

__all__ = [
    "AssessmentResult",
    "CalibratedCase",
    "CalibrationResult",
    "CaseResult",
    "ElevationState",
    "GirderAssessment",
    "GirderCalibration",
    "GirderView",
    "LoadStand",
    "MeasuredPoint",
    "MomentLines",
    "PadCheck",
    "PadHistory",
    "PadLimit",
    "PadResult",
    "PadTrend",
    "ReactionResult",
    "ReadingResult",
    "ReportView",
    "SeatTrend",
    "SectionResult",
    "SpanTrend",
    "SupportView",
    "TrendResult",
]
