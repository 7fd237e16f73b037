"""What of an assessment or a trend wants a decision: the exceedances, each with its place and figures."""

from __future__ import annotations

import datetime as dt
from typing import Any

from assess.results import (
    AssessmentResult,
    GirderAssessment,
    PadCheck,
    SectionResult,
    SpanTrend,
    TrendResult,
)
from assess.workflow import action_rules
from assess.workflow.cautions import section_name
from assess.workflow.status import LIMIT
from assess.workflow.study import Study
from db.records import Finding

CHANCE = 0.05
"""Probability over 1 from which a section may be over."""


def of_assessment(study: Study, result: AssessmentResult, today: dt.date) -> list[Finding]:
    """Return the exceedances of an assessment of the present."""
    base = {"found_by": "assess", "input_digest": result.input_digest}
    found = []
    for girder in result.girders:
        for row in girder.sections:
            made = _section(row)
            if made is not None:
                severity, text, figures = made
                name = section_name(row.effect, row.span, row.support)
                subject = _section_subject(girder.girder, row)
                closing = _closing_section(girder, row, severity)
                details = _details(study, "capacity", girder.girder, name, closing)
                found.append((subject, severity, text, {**base, **figures}, details))
        found += [_pad(study, girder.girder, pad, base) for pad in girder.pads if pad.status == "over"]
        found += [
            _uplift(study, girder.girder, one.support, base)
            for one in girder.reactions
            if one.calibrated_lifts_under == "permanent"
        ]
    pads = "as calibrated" if result.calibration_visit else "on nominal pads: nothing is calibrated"
    return [
        Finding(
            subject=subject,
            date=today,
            visit=result.calibration_visit,
            evidence=study.evidence,
            severity=severity,
            due=action_rules.due(severity, today, study.bridge.actions),
            text=f"{text}, {pads}",
            figures=figures,
            details=details,
        )
        for subject, severity, text, figures, details in found
    ]


def of_trend(study: Study, result: TrendResult, today: dt.date, *, until: dt.date) -> list[Finding]:
    """Return the exceedances of a trend: now, or reached by `until`, the owner's own day of the next visit."""
    findings = []
    for row in result.spans:
        made = _span(row, until)
        if made is None:
            continue
        severity, text, figures = made
        name = section_name(row.effect, row.span, row.support)
        before = row.earliest_5_percent if severity == "foreseen" else None
        findings.append(
            Finding(
                subject=_section_subject(row.girder, row),
                date=today,
                visit=result.as_of,
                evidence=study.evidence,
                severity=severity,
                due=action_rules.due(severity, today, study.bridge.actions, before=before),
                text=text,
                figures={"found_by": "trend", "input_digest": study.evidence, **figures},
                details=_details(study, "capacity", row.girder, name, _closing(row.girder, name)),
            )
        )
    return findings


def _subject(what: str, girder: str, *where: object) -> str:
    """What and where, the same in every version: by this an exceedance is known again."""
    return " | ".join([what, girder, *(str(part) for part in where if part is not None)])


def _section_subject(girder: str, row: SectionResult | SpanTrend) -> str:
    return _subject("capacity", girder, row.effect, row.span, row.support)


def _details(study: Study, what: str, girder: str, where: str, closing: str) -> dict[str, Any]:
    return {
        "what": what,
        "girder": girder,
        "where": where,
        "owner_role": study.bridge.owner_role,
        "check_reading": closing,
    }


def _section(row: SectionResult) -> tuple[str, str, dict[str, Any]] | None:
    case = row.calibrated
    chance, rival = case.probability_over_1, case.worst_rival_utilisation
    figures = {
        "utilisation": case.utilisation,
        "utilisation_low95": case.utilisation_low95,
        "utilisation_high95": case.utilisation_high95,
        "probability_over_1": chance,
        "x_m": case.x_m,
    }
    if case.utilisation is None:
        return None
    band = ""
    if case.utilisation_low95 is not None and case.utilisation_high95 is not None:
        band = f" ({case.utilisation_low95:.3g} to {case.utilisation_high95:.3g})"
    if case.utilisation >= LIMIT:
        return "over", f"over its factored capacity, utilisation {case.utilisation:.3g}{band}", figures
    if rival is not None and rival >= LIMIT:
        text = f"over its factored capacity if explained by {case.worst_rival}: utilisation {rival:.3g}"
        text += f" in place of {case.utilisation:.3g}"
        return "rival", text, {**figures, "rival": case.worst_rival, "rival_utilisation": rival}
    if chance is not None and chance >= CHANCE:
        text = f"over its factored capacity with a chance of {chance:.0%}, utilisation {case.utilisation:.3g}{band}"
        return "may_be_over", text, figures
    return None


def _span(row: SpanTrend, until: dt.date) -> tuple[str, str, dict[str, Any]] | None:
    chance, early = row.probability_over_1_now or 0.0, row.earliest_5_percent
    used = row.utilisation_now
    if used is None:
        return None
    figures = {
        "utilisation": used,
        "probability_over_1": row.probability_over_1_now,
        "median_crossing": None if row.median_crossing is None else row.median_crossing.isoformat(),
        "earliest_5_percent": None if early is None else early.isoformat(),
    }
    if used >= LIMIT:
        return "over", f"over its factored capacity, utilisation {used:.3g} by the trend", figures
    if chance >= CHANCE:
        text = (
            f"over its factored capacity with a chance of {chance:.0%} by the trend, utilisation {used:.3g}"
        )
        return "may_be_over", text, figures
    if early is not None and early <= until:
        text = (
            f"reaches a 5 % chance of being over its factored capacity by {early}, before the next visit of "
            f"the owner's interval ({until}); utilisation now {used:.3g}"
        )
        return "foreseen", text, figures
    return None


def _pad(
    study: Study, girder: str, pad: PadCheck, base: dict[str, Any]
) -> tuple[str, str, str, dict[str, Any], dict[str, Any]]:
    worst = max(pad.limits, key=lambda limit: limit.utilisation)
    unit = f" {worst.unit}" if worst.unit else ""
    where = f"pad at {pad.support}"
    text = f"over its limit of {worst.name}: {worst.value:.3g}{unit} against {worst.limit:.3g}{unit}"
    closing = (
        f'compressions of the pad at "{pad.support}" under the test vehicle, and permanent levels there, after '
        f"which bedstone assess finds it within its limits"
    )
    figures = {**base, "limit": worst.name, "value": worst.value, "allowed": worst.limit, "unit": worst.unit}
    subject, details = _subject("pad", girder, pad.support), _details(study, "pad", girder, where, closing)
    return subject, "pad_over", text, figures, details


def _uplift(
    study: Study, girder: str, support: str, base: dict[str, Any]
) -> tuple[str, str, str, dict[str, Any], dict[str, Any]]:
    where = f"pad at {support}"
    closing = (
        f'the gap at "{support}" under permanent load, read closed at all four corners, and a level of every '
        f"seat of girder {girder}, after which bedstone assess finds the pad pressed"
    )
    details = _details(study, "uplift", girder, where, closing)
    text = "the girder is off this pad under permanent load"
    return _subject("uplift", girder, support), "uplift", text, {**base, "lifts_under": "permanent"}, details


def _closing_section(girder: GirderAssessment, row: SectionResult, severity: str) -> str:
    name = section_name(row.effect, row.span, row.support)
    told = next((one.told_apart_by for one in girder.rivals if one.name == row.calibrated.worst_rival), None)
    if severity == "rival" and told:
        return f"the reading that tells the explanations apart: {told}; then bedstone calibrate and assess"
    return _closing(girder.girder, name)


def _closing(girder: str, name: str) -> str:
    return (
        f"a visit with compressions of every pad of girder {girder} under the test vehicle and a level of every "
        f"seat, after which bedstone assess and trend find {name} under 1 with less than a 5 % chance of being over"
    )
