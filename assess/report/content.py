"""What stands on the page, in the order in which it stands there."""

from __future__ import annotations

from dataclasses import dataclass, field

from markupsafe import Markup

from assess.report import cautions, forecasts, pads, sections, tables, words
from assess.report.actions import action_lines
from assess.report.explained import Explained, explained
from assess.report.figures import elevation, fan, history, moments, plane, residuals, utilisation
from assess.results import GirderAssessment, GirderCalibration, GirderView, ReportView


@dataclass(frozen=True, kw_only=True)
class Figure:
    """A drawing with its caption; `small` ones stand two side by side."""

    svg: Markup
    caption: str


@dataclass(frozen=True, kw_only=True)
class GirderPage:
    """One girder line on the page; empty lists where there is nothing to show."""

    name: str
    key: str
    verdict: str
    number: str
    cautions: list[str]
    status: str
    told: str
    mark: Markup
    elevation: Figure | None = None
    states: list[Figure] = field(default_factory=list)
    pads: list[list[str]] = field(default_factory=list)
    moments: list[Figure] = field(default_factory=list)
    case_heads: list[str] = field(default_factory=list)
    sections: list[tables.SectionRow] = field(default_factory=list)
    reaction_heads: list[str] = field(default_factory=list)
    reactions: list[list[str]] = field(default_factory=list)
    pad_checks: list[list[str]] = field(default_factory=list)
    pad_limits: list[list[str]] = field(default_factory=list)
    histories: list[Figure] = field(default_factory=list)
    histories_caption: str = ""
    pad_trends: list[list[str]] = field(default_factory=list)
    seat_trends: list[list[str]] = field(default_factory=list)
    span_trends: list[list[str]] = field(default_factory=list)
    span_trends_caption: str = ""
    fans: list[Figure] = field(default_factory=list)
    shares: str = ""
    fit: str = ""
    explained: Explained = field(default_factory=Explained)
    planes: list[Figure] = field(default_factory=list)
    residuals: list[Figure] = field(default_factory=list)
    readings: list[list[str]] = field(default_factory=list)


def build(view: ReportView) -> dict[str, object]:
    """Return all that the template prints."""
    return {
        "name": words.plain(view.name) or view.bridge,
        "facts": _facts(view),
        "next_visit": _next_visit(view),
        "actions": action_lines(view.actions, cautions.support_names(view)),
        "girders": [_girder(view, name, f"g{i + 1}") for i, name in enumerate(_names(view))],
        "sections": sections.pages(view.sections),
        "factors": view.factors,
        "section_heads": list(sections.HEADS),
        "pad_heads": list(pads.HEADS),
        "pad_limit_heads": list(pads.LIMIT_HEADS),
        "visits": [
            [
                words.date(day),
                party or words.not_determined("no party given"),
                words.not_determined("no pad temperature taken")
                if warmth is None
                else words.entered(warmth, "°C"),
                str(count),
            ]
            for day, party, warmth, count in view.visits
        ],
        "has_trend": view.trend is not None,
        "losses": [] if view.trend is None else forecasts.loss_trend_rows(view.trend),
        "cautions": cautions.of_page(view),
        "fixed_cautions": list(words.FIXED_CAUTIONS),
        "provenance": _provenance(view),
    }


def _names(view: ReportView) -> list[str]:
    return list(dict.fromkeys([g.girder for g in view.girders] + [g.girder for g in view.assessment.girders]))


def _facts(view: ReportView) -> list[tuple[str, str]]:
    latest = max((v[0] for v in view.visits), default=None)
    return [
        ("Carries", view.carries or words.not_determined("the bridge file does not say")),
        ("Built", words.date(view.built, "the bridge file does not say")),
        ("x = 0 at", view.zero or words.not_determined("the bridge file does not say")),
        ("Latest visit", words.date(latest, "no visit is kept")),
        (
            "Pads from the visit of",
            words.date(
                view.assessment.calibration_visit, "no calibration is kept, the pads are taken as designed"
            ),
        ),
    ]


def _next_visit(view: ReportView) -> str:
    trend = view.trend
    if trend is None:
        return "Next visit " + words.not_determined("no trend was drawn up") + "."
    reason = words.prose(trend.next_visit_reason, cautions.support_names(view)).strip().rstrip(".")
    if trend.next_visit_by is None:
        return "Next visit " + words.not_determined(reason) + "."
    return f"Next visit by {words.date(trend.next_visit_by)}" + (f": {reason}." if reason else ".")


def _girder(view: ReportView, name: str, key: str) -> GirderPage:
    drawn = next((g for g in view.girders if g.girder == name), None)
    assessed = next((g for g in view.assessment.girders if g.girder == name), None)
    fits = view.calibration.girders if view.calibration is not None else []
    fit = next((c for c in fits if c.girder == name), None)
    stands_on = _basis(view, drawn, fit)
    status, mark = _status(assessed, key)
    names = cautions.support_names(view)
    big, small = (None, []) if drawn is None else _elevations(view, drawn, key)
    return GirderPage(
        name=name,
        key=key,
        verdict=words.prose(view.verdicts.get(name, ""), names)
        or "What to do " + words.not_determined("no verdict for this girder") + ".",
        number=tables.number_behind(assessed, stands_on),
        cautions=[words.prose(c, names) for c in dict.fromkeys(view.verdict_cautions.get(name, []))],
        status=status,
        told=words.status_on(status, stands_on),
        mark=mark,
        elevation=big,
        states=small,
        pads=[] if drawn is None else tables.pad_rows(drawn.supports, fit),
        moments=[] if drawn is None else _moments(view, drawn, key, stands_on),
        case_heads=tables.case_heads(stands_on),
        sections=[] if assessed is None else tables.section_rows(assessed, key, stands_on),
        reaction_heads=tables.reaction_heads(stands_on),
        reactions=[] if assessed is None else tables.reaction_rows(assessed.reactions),
        pad_checks=[] if assessed is None else pads.rows(assessed.pads),
        pad_limits=[] if assessed is None else pads.limit_rows(assessed.pads),
        histories=[] if drawn is None else _histories(view, drawn, key),
        histories_caption="" if drawn is None else _histories_caption(drawn),
        pad_trends=[] if view.trend is None else tables.pad_trend_rows(view.trend, name),
        seat_trends=[] if view.trend is None else tables.seat_trend_rows(view.trend, name),
        span_trends=[] if view.trend is None else tables.span_trend_rows(view.trend, name, stands_on),
        span_trends_caption=_span_trends_caption(name, drawn),
        fans=_fans(view, name, key),
        shares="" if view.trend is None else forecasts.shares_sentence(view.trend, name),
        fit="" if fit is None else tables.fit_sentence(fit),
        explained=Explained() if fit is None else explained(fit, names),
        planes=[] if fit is None else _planes(fit, key),
        residuals=[] if fit is None else _residuals(fit, key),
        readings=[] if fit is None else tables.reading_rows(fit.readings),
    )


def _basis(view: ReportView, drawn: GirderView | None, fit: GirderCalibration | None) -> str:
    """Name the supports of the third case; without a drawing the kept calibration tells."""
    if drawn is not None:
        return tables.basis(drawn.supports)
    kept = fit is not None and view.assessment.calibration_visit is not None
    return words.CALIBRATED if kept else words.NOMINAL


def _status(assessed: GirderAssessment | None, key: str) -> tuple[str, Markup]:
    section = None if assessed is None else tables.governing(assessed)
    if section is None:
        return "unknown", Markup(
            utilisation.mark(None, None, None, key=f"{key}-verdict", name="governing section")
        )
    case = section.calibrated
    name = words.section(section.effect, section.span, section.support)
    mark = utilisation.mark(
        case.utilisation, case.utilisation_low95, case.utilisation_high95, key=f"{key}-verdict", name=name
    )
    return words.status(case.utilisation), Markup(mark)


def _elevations(view: ReportView, girder: GirderView, key: str) -> tuple[Figure, list[Figure]]:
    """Return the state with the largest movement drawn large, and the others small."""
    states = girder.states
    first = max(states, key=elevation.largest_movement_mm, default=None)
    told = (
        f"test state {first.state}" if first is not None else "no test state is kept, so no movement is shown"
    )
    big = Figure(
        svg=Markup(elevation.full(girder, first, key=f"{key}-elevation", zero=view.zero or "the left end")),
        caption=f"Girder {girder.girder}: {told}.",
    )
    small = [
        Figure(svg=Markup(elevation.small(girder, s, key=f"{key}-state{i}")), caption=f"State {s.state}")
        for i, s in enumerate(states)
        if s is not first
    ]
    return big, small


def _moments(view: ReportView, girder: GirderView, key: str, stands_on: str) -> list[Figure]:
    zero = view.zero or "the left end"
    return [
        Figure(
            svg=Markup(moments.envelopes(girder, key=f"{key}-moments", zero=zero, basis=stands_on)),
            caption=f"Girder {girder.girder}: factored moments, permanent and live together.",
        ),
        Figure(
            svg=Markup(moments.permanent(girder, key=f"{key}-permanent", zero=zero, basis=stands_on)),
            caption=f"Girder {girder.girder}: moments of the permanent loads alone.",
        ),
    ]


def _histories(view: ReportView, girder: GirderView, key: str) -> list[Figure]:
    if not girder.histories:
        return []
    limits = history.common_axes(girder.histories)
    steps = {}
    if view.trend is not None:
        steps = {p.support: p.step_between for p in view.trend.pads if p.girder == girder.girder}
    return [
        Figure(
            svg=Markup(history.plot(h, limits, key=f"{key}-pad{i}", step=steps.get(h.support))),
            caption=f"Pad at {h.support}",
        )
        for i, h in enumerate(girder.histories)
    ]


def _fans(view: ReportView, name: str, key: str) -> list[Figure]:
    rows = [] if view.trend is None else [row for row in view.trend.spans if row.girder == name]
    return [
        Figure(
            svg=Markup(fan.plot(row, key=f"{key}-fan{i}")),
            caption=words.section(row.effect, row.span, row.support),
        )
        for i, row in enumerate(fan.governing(rows))
    ]


def _histories_caption(girder: GirderView) -> str:
    told = f"Girder {girder.girder}: stiffness of its pads over the years"
    if any(history.has_forecast(h) for h in girder.histories):
        told += (
            "; line: the law of all visits; fan: the forecast, which starts from the last visit's own value"
        )
    return told + "."


def _span_trends_caption(name: str, girder: GirderView | None) -> str:
    """Say how far the sections are carried forward: the last date of the histories' lines."""
    told = f"Sections of girder {name}, carried forward"
    histories = [] if girder is None else girder.histories
    ends = [h.line_dates[-1] for h in histories if h.line_dates and h.line_dates[-1] > h.last_visit]
    return f"{told} to {words.date(max(ends))}" if ends else told


def _planes(fit: GirderCalibration, key: str) -> list[Figure]:
    shown = plane.pairs(fit)
    if not shown:
        return []
    limits = plane.common_axes(shown)
    return [
        Figure(
            svg=Markup(plane.plot(pair, limits, key=f"{key}-plane{i}")),
            caption=f"Pad and seat at {pair.support}",
        )
        for i, pair in enumerate(shown)
    ]


def _residuals(fit: GirderCalibration, key: str) -> list[Figure]:
    parts = residuals.parts(fit.readings)
    return [
        Figure(
            svg=Markup(
                residuals.plot(
                    part, key=f"{key}-residuals{i}", title=f"Readings against the fit, girder {fit.girder}"
                )
            ),
            caption=f"Girder {fit.girder}: standardised residuals"
            + (f", part {i + 1} of {len(parts)}." if len(parts) > 1 else "."),
        )
        for i, part in enumerate(parts)
    ]


def _provenance(view: ReportView) -> list[tuple[str, str]]:
    rows = [
        ("Bridge file", f"{view.bridge}, revision {view.revision}, digest {view.bridge_digest}"),
        ("Assessment", f"Bedstone {view.assessment.version}, input digest {view.assessment.input_digest}"),
        ("Draws", f"{view.assessment.draws} draws of the pads, seed {view.assessment.seed}"),
    ]
    if view.calibration is None:
        rows.append(("Calibration", words.not_determined("no calibration is kept")))
    else:
        kept = view.calibration
        told = f"visit of {words.date(kept.visit)}, Bedstone {kept.version}, input digest {kept.input_digest}"
        rows.append(("Calibration", told))
    if view.trend is not None:
        rows.append(("Trend as of", words.date(view.trend.as_of)))
    rows.append(("Factors", view.factors or words.not_determined("no factor set given")))
    rows.append(("Live loads", "; ".join(view.live) or words.not_determined("no live load given")))
    rows += list(view.options.items())
    return rows
