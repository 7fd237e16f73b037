"""The rows of the report's tables, every cell in words."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, replace

from markupsafe import Markup

from assess.report import words
from assess.report.figures import utilisation
from assess.results import (
    CalibratedCase,
    CaseResult,
    GirderAssessment,
    GirderCalibration,
    PadResult,
    ReactionResult,
    ReadingResult,
    SectionResult,
    SpanTrend,
    SupportView,
    TrendResult,
)

NO_CAPACITY = "no capacity given here"
STEP_FROM = 4  # visits; with fewer a step and a drift cannot be told apart


@dataclass(frozen=True, kw_only=True)
class CaseCell:
    """One section under one set of supports."""

    utilisation: str
    lines: list[str]


@dataclass(frozen=True, kw_only=True)
class SectionRow:
    """One section, the three cases side by side."""

    name: str
    cases: list[CaseCell]
    probability: str
    status: str
    mark: Markup


def basis(supports: list[SupportView]) -> str:
    """Name the supports that the third case stands on: calibrated pads, nominal ones, or no pads at all."""
    pads = [s for s in supports if s.kind != "pin"]
    if not pads:
        return words.HELD
    return words.NOMINAL if all(s.ratio is None for s in pads) else words.CALIBRATED


def case_heads(stands_on: str) -> list[str]:
    """Return the heads of the utilisation table."""
    third = {
        words.CALIBRATED: "Calibrated pads (95 % band)",
        words.NOMINAL: "Nominal pads with the spread assumed for them (95 % band)",
        words.HELD: "Supports that hold their level (95 % band)",
    }[stands_on]
    return ["Section", "Unyielding supports", "Nominal pads", third, f"Status on {stands_on}"]


def reaction_heads(stands_on: str) -> list[str]:
    """Return the heads of the table of reactions."""
    return [
        "Support",
        "Permanent, unyielding, kN",
        f"Permanent, {stands_on}, kN",
        "Live, most, kN",
        "Live, least, kN",
        "Contact",
    ]


def section_rows(girder: GirderAssessment, key: str, stands_on: str) -> list[SectionRow]:
    """Return the utilisation table of a girder; `key` makes the ids of its marks."""
    names = [reaction.support for reaction in girder.reactions]
    return [
        _section_row(section, f"{key}-u{i}", stands_on, names) for i, section in enumerate(girder.sections)
    ]


def _section_row(section: SectionResult, key: str, stands_on: str, names: list[str]) -> SectionRow:
    name = words.section(section.effect, section.span, section.support)
    case = section.calibrated
    unit = "kN" if section.effect == "shear" else "kN\N{NO-BREAK SPACE}m"
    return SectionRow(
        name=name,
        cases=[
            _cell(section.unyielding, unit, words.quantity(section.unyielding.utilisation, "", NO_CAPACITY)),
            _cell(section.nominal, unit, words.quantity(section.nominal.utilisation, "", NO_CAPACITY)),
            _with_rival(_cell(case, unit, calibrated_utilisation(case)), case, names),
        ],
        probability=words.probability(case.probability_over_1, NO_CAPACITY),
        status=words.judged(case.utilisation, stands_on),
        mark=Markup(
            utilisation.mark(
                case.utilisation, case.utilisation_low95, case.utilisation_high95, key=key, name=name
            )
        ),
    )


def calibrated_utilisation(case: CalibratedCase) -> str:
    """Word the calibrated utilisation with its 95 % band."""
    return words.interval(
        case.utilisation, case.utilisation_low95, case.utilisation_high95, reason=NO_CAPACITY
    )


def _cell(case: CaseResult, unit: str, told: str) -> CaseCell:
    no_factor = "no capacity" if case.capacity is None else "no live load effect to divide by"
    of = "" if case.capacity is None else f" of {words.number(case.capacity)}"
    lines = [
        f"at {words.place(case.x_m)}",
        f"rating factor {_rating(case, no_factor)}{_elsewhere(case)}",
        f"factored {words.number(case.factored)}{of}\N{NO-BREAK SPACE}{unit}",
        f"permanent {words.number(case.permanent)}, live {words.number(case.live)}\N{NO-BREAK SPACE}{unit}",
    ]
    if case.temperature:
        lines.append(f"temperature {words.number(case.temperature)}\N{NO-BREAK SPACE}{unit}")
    if isinstance(case, CalibratedCase) and case.settlement:
        lines += _relief(case, unit)
    return CaseCell(utilisation=told, lines=lines)


def _with_rival(cell: CaseCell, case: CalibratedCase, names: list[str]) -> CaseCell:
    """The cell with the explanation that the readings bear as well and that uses the section more, if one does."""
    if not case.used_more_by_rival:
        return cell
    used = words.quantity(case.worst_rival_utilisation, "")
    told = (
        f"explained by {words.prose(case.worst_rival or '', names)}, which the readings bear as well: {used}"
    )
    return replace(cell, lines=[*cell.lines, told])


def _elsewhere(case: CaseResult) -> str:
    """The least rating factor of the row, where it is another one."""
    if case.rating_levels:  # these are the least of the row already
        return ""
    here, least, at = case.rating_factor, case.least_rating_factor, case.least_rating_x_m
    if least is None or at is None or (here is not None and least > here - 0.005 * abs(here)):
        return ""
    return f", least {words.number(least)} at {words.place(at)}"


def _rating(case: CaseResult, reason: str) -> str:
    """Word the rating factor, or those of all levels, of which it is one."""
    if not case.rating_levels:
        return words.quantity(case.rating_factor, "", reason)
    return ", ".join(
        f"{level} {words.quantity(value, '', reason)}" for level, value in case.rating_levels.items()
    )


def _relief(case: CalibratedCase, unit: str) -> list[str]:
    """What settlement adds, and how a section fares with and without a relief by it."""
    lines = [f"settlement {words.number(case.settlement)}\N{NO-BREAK SPACE}{unit} of the permanent"]
    with_relief, without = case.utilisation_with_relief, case.utilisation_without_relief
    if with_relief is not None and without is not None:
        told = words.number(with_relief), words.number(without)
        lines += [f"utilisation with relief {told[0]}, without {told[1]}"] if told[0] != told[1] else []
    return lines


def governing(girder: GirderAssessment) -> SectionResult | None:
    """Return the section with the largest calibrated utilisation; None if none could be determined."""
    found = [(s.calibrated.utilisation, s) for s in girder.sections]
    rated = [(u, s) for u, s in found if u is not None and words.known(u)]
    return max(rated, key=lambda pair: pair[0])[1] if rated else None


def number_behind(girder: GirderAssessment | None, stands_on: str) -> str:
    """Word the number that a verdict rests on, and the supports that it holds for."""
    section = None if girder is None else governing(girder)
    if girder is None or section is None:
        return (
            "Governing utilisation " + words.not_determined("no section has a capacity to compare with") + "."
        )
    name = words.section(section.effect, section.span, section.support)
    case = section.calibrated
    unrated = sum(1 for s in girder.sections if s.calibrated.utilisation is None)
    rest = f" Not determined for {unrated} other section(s): no capacity given." if unrated else ""
    return (
        f"Governing: {name} at {words.place(case.x_m)}, utilisation {calibrated_utilisation(case)} on "
        f"{stands_on}, {words.quantity(section.unyielding.utilisation, '', NO_CAPACITY)} on unyielding "
        f"supports; probability of being over 1: "
        f"{words.probability(case.probability_over_1, NO_CAPACITY)}.{rest}"
    )


def reaction_rows(reactions: list[ReactionResult]) -> list[list[str]]:
    """Return the reactions of a girder with uplift in words."""
    return [
        [
            r.support,
            words.number(r.unyielding_permanent_kN),
            words.number(r.calibrated_permanent_kN),
            words.number(r.calibrated_live_max_kN),
            words.number(r.calibrated_live_min_kN),
            _contact(r),
        ]
        for r in reactions
    ]


def _contact(reaction: ReactionResult) -> str:
    least = reaction.calibrated_permanent_kN + min(reaction.calibrated_live_min_kN, 0.0)
    if reaction.calibrated_permanent_kN < 0.0:
        return f"uplift under permanent loads alone; least {words.number(least)} kN"
    if least < 0.0:
        return f"uplift when live load lifts: least {words.number(least)} kN"
    return f"stays in contact: least {words.number(least)} kN"


def pad_rows(supports: list[SupportView], calibration: GirderCalibration | None) -> list[list[str]]:
    """Return the supports of a girder with stiffness in kN/mm, ratio, what told it, and the seat."""
    pads = {p.support: p for p in calibration.pads} if calibration is not None else {}
    rows = []
    for s in supports:
        pad = pads.get(s.support)
        if s.kind == "pin":
            stiffness, nominal, ratio, told = "pin: holds its level", "pin", "pin", "pin"
        else:
            why = "no calibration"
            ratio = words.interval(s.ratio, s.ratio_low, s.ratio_high, reason=why)
            told = words.told_by(s.data_share)
            stiffness = nominal = words.not_determined(why)
            if pad is not None:
                stiffness = _stiffness(pad)
                nominal = words.quantity(pad.nominal_kN_per_m / 1000.0, "kN/mm")
        rows.append([s.support, words.place(s.x_m), stiffness, nominal, ratio, told, _seat(s)])
    return rows


def _stiffness(pad: PadResult) -> str:
    """A pad's stiffness with its interval, whence that is, and the stiffness at 20 degC where it is known."""
    told = words.interval(
        pad.stiffness_kN_per_m / 1000.0, pad.low95_kN_per_m / 1000.0, pad.highest_kN_per_m / 1000.0, "kN/mm"
    )
    if pad.interval_from == "profile":
        told += ", interval by profile likelihood"
    if pad.stiffness_20degC_kN_per_m is not None:
        told += (
            f"; at 20\N{NO-BREAK SPACE}°C {words.quantity(pad.stiffness_20degC_kN_per_m / 1000.0, 'kN/mm')}"
        )
    return told


def _seat(support: SupportView) -> str:
    if support.seat_drop_mm is None:
        return words.not_determined("no level of this seat")
    sd = words.not_determined("no sd given")
    if support.seat_drop_sd_mm is not None:
        sd = words.spread(support.seat_drop_sd_mm, "mm")
    told = f"{words.seat(support.seat_drop_mm)} (sd {sd})"
    if not words.seat_moved(support.seat_drop_mm, support.seat_drop_sd_mm):
        return f"no movement beyond 2 sd: {told}"
    return told


def pad_trend_rows(trend: TrendResult, girder: str) -> list[list[str]]:
    """Return law and change per year of the pads of a girder."""
    rows = []
    for p in trend.pads:
        if p.girder != girder:
            continue
        why = "fewer than two visits tell this pad"
        if p.visits < 2:
            why = f"{'one visit' if p.visits == 1 else 'no visit'} gives no rate"
        step = "no step told" if p.visits >= STEP_FROM else "cannot be told: fewer than four visits"
        if p.step_between is not None:
            step = f"between {words.date(p.step_between[0])} and {words.date(p.step_between[1])}"
            if p.step_percent is not None:
                step += ": " + words.interval(p.step_percent, p.step_low95, p.step_high95, "%")
        rate = p.change_per_year_percent if p.visits >= 2 else None
        change = words.interval(rate, p.low95, p.high95, "% a year", why)
        rows.append([p.support, str(p.visits), words.law(p.law, p.visits), change, step])
    return rows


def seat_trend_rows(trend: TrendResult, girder: str) -> list[list[str]]:
    """Return level and rate of the seats of a girder that were levelled."""
    rows = []
    for s in trend.seats:
        if s.girder != girder:
            continue
        why = "one visit gives no rate"
        rate = words.interval(s.rate_mm_per_year, s.low95, s.high95, "mm a year", why)
        told = "moving" if s.moving else "no movement told by the levels"
        level = f"{words.seat(s.settlement_mm)} (sd {words.spread(s.sd_mm, 'mm')})"
        rows.append([s.support, str(s.visits), level, rate, told if s.visits > 1 else "one visit"])
    return rows


def span_trend_rows(trend: TrendResult, girder: str, stands_on: str) -> list[list[str]]:
    """Return the governing sections of a girder carried forward."""
    return [
        [
            words.section(s.effect, s.span, s.support),
            words.status_on(s.status, stands_on),
            words.quantity(s.utilisation_now, "", NO_CAPACITY),
            words.probability(s.probability_over_1_now, NO_CAPACITY),
            _crossing(s, s.median_crossing),
            _crossing(s, s.earliest_5_percent),
        ]
        for s in trend.spans
        if s.girder == girder
    ]


def _crossing(span: SpanTrend, date: dt.date | None) -> str:
    if date is None and span.utilisation_now is not None:
        return "none foreseen within the forecast"
    return words.date(date, NO_CAPACITY)


def reading_rows(readings: list[ReadingResult]) -> list[list[str]]:
    """Return the readings beside the fit, suspects named in words."""
    rows = []
    for r in readings:
        where = [r.support] if r.support is not None else []
        where += [words.place(r.at_m)] if r.at_m is not None else []
        residual = words.quantity(r.standardised_residual, "", "no other reading checks it")
        remark = "suspect: past 3.29" if r.suspect else "within 3.29"
        if r.standardised_residual is None and not r.suspect:
            remark = "unchecked"
        if r.predicted is None:
            remark = f"not fitted: {words.plain(r.left_out or 'no reason is kept')}"
        rows.append(
            [
                r.state,
                r.quantity,
                ", ".join(where) or words.not_determined("no place given"),
                words.entered(r.observed, r.unit),
                words.quantity(r.predicted, r.unit, "not fitted"),
                words.entered(r.sd, r.unit),
                residual,
                words.quantity(r.minimal_detectable, r.unit, "nothing checks it"),
                remark,
            ]
        )
    return rows


def fit_sentence(calibration: GirderCalibration) -> str:
    """Word the global test of a fit."""
    freedom = calibration.degrees_of_freedom
    fitted = sum(r.predicted is not None for r in calibration.readings)
    out = len(calibration.readings) - fitted
    left_out = f" and {out} left out" if out else ""
    told = (
        f"{fitted} readings{left_out}, chi-square {words.number(calibration.chi_square)} on "
        f"{freedom} degree{'' if freedom == 1 else 's'} of freedom, p value "
        + words.quantity(calibration.p_value, "", "no degrees of freedom are left")
        + ". "
    )
    if calibration.p_value is None:
        return told + "Whether the girder as modelled explains the readings could not be tested."
    if calibration.p_value < 0.05:
        return told + "The girder as modelled does not explain the readings well."
    return told + "Nothing in the readings speaks against the girder as modelled."
