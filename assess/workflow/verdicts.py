"""What to do first: one sentence a girder, in words a manager can repeat, with the number behind it."""

from __future__ import annotations

from collections.abc import Sequence

from assess.results import (
    AssessmentResult,
    CalibrationResult,
    GirderAssessment,
    PadTrend,
    SeatTrend,
    SectionResult,
    SettlementResult,
    SpanTrend,
    TrendResult,
)
from assess.workflow import pad_cautions
from assess.workflow.cautions import section_name
from assess.workflow.drivers import Driver

_TELLS = 0.005  # of a utilisation: what a support must add to be named
_ORDER = {"over": 0, "watch": 1, "within": 2, "unknown": 3}


def head_row(trend: TrendResult | None, girder: str) -> SpanTrend | None:
    """The section that a girder's first sentence speaks of: over, soonest to be over, or most used."""
    rows = [row for row in trend.spans if row.girder == girder] if trend is not None else []
    judged = [row for row in rows if row.utilisation_now is not None]
    if not judged:
        return None
    worst = min(judged, key=lambda row: (_ORDER[row.status], -(row.utilisation_now or 0.0)))
    soon = _soonest(judged)
    return worst if worst.status == "over" or soon is None else soon


def verdict(
    girder: str,
    assessment: AssessmentResult,
    trend: TrendResult | None,
    calibration: CalibrationResult | None,
    found: Sequence[Driver] = (),
) -> str:
    """What to do first on a girder, and by when; `found` are the drivers of its `head_row`."""
    own = next(g for g in assessment.girders if g.girder == girder)
    if trend is None or not any(row.girder == girder for row in trend.spans):
        return _without_trend(girder, own)
    row = head_row(trend, girder)
    if row is None:
        return f"Girder {girder}: not determined: no capacities are given; complete the bridge file before anything else."
    sentence = f"Girder {girder}: {_first(own, row, trend)}"
    causes = _causes(girder, trend, calibration, found)
    if causes:
        sentence += f"; look first at {causes}"
    unknown = sum(one.girder == girder and one.utilisation_now is None for one in trend.spans)
    if unknown:
        sentence += f"; {unknown} sections are not determined for want of a capacity"
    return sentence + "."


def _first(own: GirderAssessment, row: SpanTrend, trend: TrendResult) -> str:
    by = trend.next_visit_by.isoformat() if trend.next_visit_by else "the owner's own interval"
    name, number = section_name(row.effect, row.span, row.support), _number(own, row)
    if row.status == "over":
        return (
            f"have a licensed engineer decide now on restricting or propping: {name} is over its factored capacity "
            f"(utilisation {number})"
        )
    if row.earliest_5_percent is not None:
        chance = row.probability_over_1_now or 0.0
        when = (
            f"already has a {chance:.0%} chance of being over its factored capacity"
            if chance >= 0.05
            else f"reaches a 5 % chance of being over its factored capacity by {row.earliest_5_percent.isoformat()}"
        )
        return f"visit by {by} and prepare a remedy: {name} {when} (utilisation {number})"
    if row.status == "watch":
        return f"watch {name} (utilisation {number}) and visit by {by}"
    if row.status == "unknown":
        return (
            f"visit now: what is known is out of date and its state today unknown; the most used section at the last visit was {name} "
            f"(utilisation {number})"
        )
    return f"visit by {by}; the most used section is {name} (utilisation {number})"


def _causes(
    girder: str, trend: TrendResult, calibration: CalibrationResult | None, found: Sequence[Driver]
) -> str:
    """Name the supports that drive the section, and a pad that changes even if it drives nothing yet."""
    still = {s.support for s in trend.seats if s.girder == girder and _stands(s)}
    fitted = _fitted_seats(calibration, girder)
    still |= {seat.support for seat in fitted.values() if seat.low95 <= 0.0 <= seat.high95} - _levelled(
        trend, girder
    )
    told = [one for one in found if one.adds >= _TELLS and not (one.what == "seat" and one.support in still)][
        :2
    ]
    parts = [_cause(girder, trend, fitted, one) for one in told]
    changed = _changed(trend, girder)
    if changed is not None and ("pad", changed.support) not in {(one.what, one.support) for one in told}:
        parts.append(f'the pad at "{changed.support}", whose {_rate(changed)}')
    odd = _softest(calibration, girder)
    if not parts and odd:
        parts.append(odd)
    return ", then at ".join(parts)


def _stands(seat: SeatTrend) -> bool:
    """Tell whether a seat has not moved beyond twice the standard deviation of its level."""
    return not seat.moving and abs(seat.settlement_mm) < 2.0 * seat.sd_mm


def _levelled(trend: TrendResult, girder: str) -> set[str]:
    """Supports whose seat was levelled; of others only the fit speaks."""
    return {seat.support for seat in trend.seats if seat.girder == girder}


def _fitted_seats(calibration: CalibrationResult | None, girder: str) -> dict[str, SettlementResult]:
    """Seats as the calibration finds them, from girder levels and gaps too."""
    girders = calibration.girders if calibration is not None else []
    return {seat.support: seat for one in girders if one.girder == girder for seat in one.settlements_mm}


def _cause(girder: str, trend: TrendResult, fitted: dict[str, SettlementResult], one: Driver) -> str:
    if one.what == "seat":
        seat = next((s for s in trend.seats if (s.girder, s.support) == (girder, one.support)), None)
        if seat is None:
            return _fitted_cause(fitted.get(one.support), one)
        way = "down" if seat.settlement_mm >= 0.0 else "up"
        moving = f", moving by {seat.rate_mm_per_year:+.2g} mm a year" if seat.moving else ""
        return f'the seat at "{one.support}", {abs(seat.settlement_mm):.3g} mm {way}{moving}: it adds {one.adds:.2g} to the utilisation'
    pad = next((p for p in trend.pads if (p.girder, p.support) == (girder, one.support)), None)
    moving = f", whose {_rate(pad)}" if pad is not None and pad.law != "steady" else ""
    return f'the pad at "{one.support}"{moving}: it adds {one.adds:.2g} to the utilisation'


def _fitted_cause(seat: SettlementResult | None, one: Driver) -> str:
    """A seat that was not levelled: where the fit puts it."""
    where = ""
    if seat is not None:
        where = f", {abs(seat.value):.3g} mm {'down' if seat.value >= 0.0 else 'up'} as fitted, not levelled"
    return f'the seat at "{one.support}"{where}: it adds {one.adds:.2g} to the utilisation'


def _rate(pad: PadTrend) -> str:
    rate = pad.change_per_year_percent or 0.0
    return f"stiffness changes by {rate:+.3g} % a year ({pad.low95:+.3g} to {pad.high95:+.3g})"


def cautions_beside(girder: str, said: list[str]) -> list[str]:
    """Cautions that change a girder's first sentence: its own that speak of doubt in the numbers.

    What is believed of pads before anything is read stays with the other cautions: where it still tells a pad, the
    fit says so.
    """
    words = (
        "suspect",
        "misfit",
        "uplift",
        "assumption",
        "not determined",
        "nominal",
        "straight line",
        "was due",
        "the seat at",
        "seat level",
        "over its limit",
        "would tip",
        "likely wrong",
        "which the readings bear as well",
        "cannot be told",
        "left out of the fit by hand",
    )
    own = [one for one in said if one.startswith(f"{girder}:") and any(word in one for word in words)]
    kept = [one for one in own if "likely wrong" in one or not pad_cautions.is_assumption(one)]
    return kept + [
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
            if pad.highest_kN_per_m < 0.7 * pad.nominal_kN_per_m
            or pad.low95_kN_per_m > 1.5 * pad.nominal_kN_per_m
        ]
        if odd:
            pad = min(odd, key=lambda p: p.ratio_to_nominal)
            return f'the pad at "{pad.support}", found at {pad.ratio_to_nominal:.2g} times nominal'
    return None
