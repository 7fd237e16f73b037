"""Results of an invented bridge, for the commands to show."""

from __future__ import annotations

import datetime as dt

from assess.results import (
    AssessmentResult,
    CalibratedCase,
    CalibrationResult,
    CarriedRival,
    CaseResult,
    GirderAssessment,
    GirderCalibration,
    PadResult,
    PadTrend,
    ReactionResult,
    ReadingResult,
    SectionResult,
    SpanTrend,
    TrendResult,
)

CAUTION = "The readings of the permanent state are kept, and not fitted yet."


def pad(support: str = "pier 1", **changes) -> PadResult:
    values = {
        "stiffness_kN_per_m": 142_345.0,
        "low95_kN_per_m": 120_000.0,
        "high95_kN_per_m": 168_100.0,
        "nominal_kN_per_m": 220_000.0,
        "ratio_to_nominal": 0.647,
        "data_share": 0.93,
    }
    return PadResult(support=support, **(values | changes))


def reading(**changes) -> ReadingResult:
    values = {
        "state": "T1",
        "quantity": "compression",
        "support": "pier 1",
        "at_m": None,
        "observed": 1.42,
        "predicted": 1.4012,
        "unit": "mm",
        "sd": 0.05,
        "standardised_residual": 0.41,
        "suspect": False,
    }
    return ReadingResult(**(values | changes))


def calibration(
    *,
    visit: dt.date = dt.date(2024, 5, 14),
    pads=None,
    readings=None,
    cautions=None,
    p_value: float | None = 0.38,
) -> CalibrationResult:
    girder = GirderCalibration(
        girder="north",
        pads=pads or [pad(), pad("pier 2")],
        chi_square=18.2,
        degrees_of_freedom=17,
        p_value=p_value,
        readings=readings or [reading()],
    )
    return CalibrationResult(
        bridge="quillmere",
        visit=visit,
        version="0.1.0",
        input_digest="ab" * 32,
        girders=[girder],
        cautions=[CAUTION] if cautions is None else cautions,
    )


def assessment(
    *,
    capacity: float | None = 5100.0,
    calibration_visit=dt.date(2024, 5, 14),
    rival_utilisation: float | None = None,
) -> AssessmentResult:
    known = capacity is not None
    rival = None if rival_utilisation is None else 'pads and settlement at "pier 1"'
    apart = 'compression at "pier 2" in T1: 1.2 mm against 1.5 mm'
    case = {
        "x_m": 5.123,
        "capacity": capacity,
        "permanent": 410.4,
        "live": 1873.0,
        "factored": 3302.0,
        "utilisation": 0.6474 if known else None,
        "rating_factor": 1.642 if known else None,
        "least_rating_factor": 1.642 if known else None,
    }
    section = SectionResult(
        effect="sagging",
        span=1,
        support=None,
        unyielding=CaseResult(**case),
        nominal=CaseResult(**case),
        calibrated=CalibratedCase(
            **case,
            utilisation_low95=0.61 if known else None,
            utilisation_high95=0.69 if known else None,
            probability_over_1=0.0 if known else None,
            worst_rival=rival,
            worst_rival_utilisation=rival_utilisation,
        ),
    )
    reaction = ReactionResult(
        support="pier 1",
        unyielding_permanent_kN=512.0,
        calibrated_permanent_kN=498.4,
        calibrated_live_max_kN=701.0,
        calibrated_live_min_kN=-44.0,
        calibrated_factored_max_kN=1649.6,
        calibrated_factored_min_kN=432.4,
    )
    return AssessmentResult(
        bridge="quillmere",
        calibration_visit=calibration_visit,
        version="0.1.0",
        input_digest="cd" * 32,
        seed=1,
        draws=4000,
        girders=[
            GirderAssessment(
                girder="north",
                sections=[section],
                reactions=[reaction],
                rivals=[] if rival is None else [CarriedRival(name=rival, told_apart_by=apart)],
            )
        ],
        cautions=[CAUTION],
    )


def trend(*, rate: float | None = -4.5) -> TrendResult:
    return TrendResult(
        bridge="quillmere",
        as_of=dt.date(2024, 5, 14),
        pads=[
            PadTrend(
                girder="north",
                support="pier 1",
                visits=5 if rate is not None else 1,
                law="drift",
                change_per_year_percent=rate,
                low95=None if rate is None else -6.25,
                high95=None if rate is None else -2.75,
                step_between=None,
            )
        ],
        spans=[
            SpanTrend(
                girder="north",
                effect="hogging",
                span=None,
                support="pier 1",
                utilisation_now=0.93,
                status="watch",
                probability_over_1_now=0.0312,
                median_crossing=None,
                earliest_5_percent=dt.date(2025, 2, 1),
            )
        ],
        next_visit_by=dt.date(2025, 2, 1),
        next_visit_reason="hogging at pier 1 may pass its capacity",
        overdue=True,
        cautions=[CAUTION],
    )
