"""What to do first: one sentence a girder, in words a manager can repeat, with the number behind it."""

from __future__ import annotations

from assess.results import (
    AssessmentResult,
    CalibrationResult,
    GirderAssessment,
    PadTrend,
    SectionResult,
    SpanTrend,
    TrendResult,
)
from assess.workflow.cautions import section_name

_ORDER = {"over": 0, "watch": 1, "within": 2, "unknown": 3}


def verdict(
    girder: str,
    assessment: AssessmentResult,
    trend: TrendResult | None,
    calibration: CalibrationResult | None,
) -> str:
    """What to do first on a girder, and by when."""
    own = next(g for g in assessment.girders if g.girder == girder)
    rows = [row for row in trend.spans if row.girder == girder] if trend is not None else []
    if trend is None or not rows:
        return _without_trend(girder, own)
    by = trend.next_visit_by.isoformat() if trend.next_visit_by else "the owner's own interval"
    unknown = [row for row in rows if row.status == "unknown"]
    judged = [row for row in rows if row.status != "unknown"]
    if not judged:
        return f"Girder {girder}: not determined: no capacities are given; complete the bridge file before anything else."
    worst = min(judged, key=lambda row: (_ORDER[row.status], -(row.utilisation_now or 0.0)))
    name = section_name(worst.effect, worst.span, worst.support)
    number = _number(own, worst)
    if worst.status == "over":
        sentence = (
            f"Girder {girder}: have a licensed engineer decide now on restricting or propping: {name} is over its factored "
            f"capacity (utilisation {number})"
        )
    elif (soon := _soonest(judged)) is not None and soon.earliest_5_percent is not None:
        chance = soon.probability_over_1_now or 0.0
        what = section_name(soon.effect, soon.span, soon.support)
        when = (
            f"already has a {chance:.0%} chance of being over"
            if chance >= 0.05
            else f"reaches a 5 % chance of being over its factored capacity by {soon.earliest_5_percent.isoformat()}"
        )
        sentence = f"Girder {girder}: visit by {by} and prepare a remedy: {what} {when} (utilisation {_number(own, soon)})"
    elif worst.status == "watch":
        sentence = f"Girder {girder}: watch {name} (utilisation {number}) and visit by {by}"
    else:
        sentence = f"Girder {girder}: visit by {by}; the most used section is {name} (utilisation {number})"
    changed = _changed(trend, girder)
    if changed is not None:
        rate = changed.change_per_year_percent or 0.0
        sentence += (
            f'; look first at the pad at "{changed.support}", whose stiffness changes by {rate:+.3g} % a year '
            f"({changed.low95:+.3g} to {changed.high95:+.3g})"
        )
    found = _softest(calibration, girder)
    if found and changed is None:
        sentence += f"; {found}"
    if unknown:
        sentence += f"; {len(unknown)} sections are not determined for want of a capacity"
    return sentence + "."


def cautions_beside(girder: str, said: list[str]) -> list[str]:
    """Cautions that change a girder's first sentence: its own that speak of doubt in the numbers."""
    words = (
        "suspect",
        "misfit",
        "uplift",
        "assumption",
        "not determined",
        "nominal",
        "straight line",
        "was due",
    )
    return [one for one in said if one.startswith(f"{girder}:") and any(word in one for word in words)] + [
        one
        for one in said
        if "was due by" in one or ("two visits only" in one and one.startswith(f"{girder}:"))
    ]


def _without_trend(girder: str, own: GirderAssessment) -> str:
    judged = [row for row in own.sections if row.calibrated.utilisation is not None]
    if not judged:
        return f"Girder {girder}: not determined: no capacities are given; complete the bridge file before anything else."
    worst = max(judged, key=lambda row: row.calibrated.utilisation or 0.0)
    return (
        f"Girder {girder}: measure the pads under a test load; nothing is calibrated yet, and on nominal pads the most used "
        f"section is {section_name(worst.effect, worst.span, worst.support)} (utilisation {_band(worst)})."
    )


def _number(own: GirderAssessment, row: SpanTrend) -> str:
    for section in own.sections:
        if (section.effect, section.span, section.support) == (row.effect, row.span, row.support):
            return _band(section)
    return f"{row.utilisation_now:.3g}"


def _band(section: SectionResult) -> str:
    case = section.calibrated
    if case.utilisation is None or case.utilisation_low95 is None or case.utilisation_high95 is None:
        return "not determined"
    return f"{case.utilisation:.3g}, {case.utilisation_low95:.3g} to {case.utilisation_high95:.3g}"


def _soonest(rows: list[SpanTrend]) -> SpanTrend | None:
    dated = [row for row in rows if row.earliest_5_percent is not None]
    return min(dated, key=lambda row: (row.earliest_5_percent, -(row.utilisation_now or 0.0)), default=None)


def _changed(trend: TrendResult, girder: str) -> PadTrend | None:
    """The pad that changes fastest, of those whose change is told."""
    moving = [pad for pad in trend.pads if pad.girder == girder and pad.law != "steady"]
    return max(moving, key=lambda pad: abs(pad.change_per_year_percent or 0.0), default=None)


def _softest(calibration: CalibrationResult | None, girder: str) -> str | None:
    """Name a pad whose whole interval lies below 0.7 or above 1.5 times nominal."""
    if calibration is None:
        return None
    for one in calibration.girders:
        if one.girder != girder:
            continue
        odd = [
            pad
            for pad in one.pads
            if pad.high95_kN_per_m < 0.7 * pad.nominal_kN_per_m
            or pad.low95_kN_per_m > 1.5 * pad.nominal_kN_per_m
        ]
        if odd:
            pad = min(odd, key=lambda p: p.ratio_to_nominal)
            return f'look at the pad at "{pad.support}", found at {pad.ratio_to_nominal:.2g} times nominal'
    return None
