"""Assess a bridge: unyielding, nominal and calibrated supports side by side."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import replace
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from assess.capacity import AS_THEY_ARE, Case, Row, RowDraws, evaluate, evaluate_draws, factored_steady
from assess.girder import REACTION
from assess.results import (
    AssessmentResult,
    CalibratedCase,
    CarriedRival,
    CaseResult,
    GirderAssessment,
    ReactionResult,
    SectionResult,
    to_plain,
)
from assess.workflow import (
    actions,
    cautions,
    combination_cautions,
    contact_cautions,
    findings,
    hinge_cautions,
    pad_cautions,
    section_cautions,
    supposing_cautions,
)
from assess.workflow.building import GirderModel
from assess.workflow.combination import factors_of
from assess.workflow.kept_fits import VisitFit
from assess.workflow.lifting import tipping_named
from assess.workflow.pad_checks import check_pads
from assess.workflow.sections import last_loss
from assess.workflow.status import known
from assess.workflow.study import DRAWS, SEED, VERSION, Progress, Study, quiet, telling_readings
from assess.workflow.supports import Supports, kept_fits, supports_of
from assess.workflow.suppose import Supposition, read_suppositions, supposed_model, supposed_supports
from db.records import KeptResult
from db.store import Record, open_record

Floats = NDArray[np.float64]


def assess(
    url: str,
    bridge: str,
    *,
    visit: dt.date | None = None,
    suppose: Sequence[str] = (),
    progress: Progress | None = None,
) -> AssessmentResult:
    """Assess a bridge with its latest kept calibration (up to a visit, if one is named), and keep the result.

    `suppose` are suppositions (`suppose.py`) shown beside it; with any, nothing is kept.
    """
    with open_record(url) as record:
        return assess_in(record, bridge, visit=visit, suppose=suppose, progress=progress)


def assess_in(
    record: Record,
    bridge: str,
    *,
    visit: dt.date | None = None,
    suppose: Sequence[str] = (),
    progress: Progress | None = None,
) -> AssessmentResult:
    """Assess a bridge of an open record, keep the result, and open actions for what exceeds.

    A look into the past (`visit`) opens none, and suppositions are neither kept nor acted on.
    """
    study = Study.fetch(record, bridge)
    if visit is not None:
        study.visit(visit)
    supposed = read_suppositions(study.bridge, suppose)
    result = assess_study(study, visit=visit, supposed=supposed, progress=progress or quiet)
    if supposed:
        return replace(result, actions=actions.open_actions(record, bridge))
    record.keep(
        KeptResult(
            kind="assessment",
            bridge=bridge,
            visit=result.calibration_visit,
            revision=study.kept.revision,
            input_digest=result.input_digest,
            options={"draws": result.draws, "visit": visit.isoformat() if visit else None},
            seed=result.seed,
            version=VERSION,
            result=to_plain(result),
            evidence=study.evidence if visit is None else None,
        )
    )
    found = findings.of_assessment(study, result, dt.date.today()) if visit is None else []
    return replace(result, actions=actions.opened(record, bridge, found))


def assess_study(
    study: Study,
    *,
    visit: dt.date | None,
    progress: Progress,
    supposed: Sequence[Supposition] = (),
) -> AssessmentResult:
    """Assess a fetched bridge."""
    fits = kept_fits(study, visit)
    latest = max(fits) if fits else None
    girders, said = [], _of_sources(study, fits, visit)
    if not study.bridge.live:
        said.append(cautions.no_live(study.bridge.id))
    factors = factors_of(study.bridge)
    if factors.resistance > 1.0:
        said.append(cautions.resistance_above_one(factors.resistance))
    said += _of_datum(study, visit)
    said += combination_cautions.of_bridge(study.bridge)
    digests = []
    creeps: list[bool] = []
    for i, girder in enumerate(study.bridge.girders):
        progress(f"assessing {girder.id}", i, len(study.bridge.girders))
        model = study.model(girder.id, visit)
        supports, about = supports_of(study, model, fits, visit)
        with tipping_named(model):
            shown = _assess_girder(model, supports)
            if supposed:
                shown = _beside_supposed(shown, model, supports, supposed)
        pads, about_pads = check_pads(model, supports.log_stiffness, shown.reactions)
        girders.append(replace(shown, pads=pads))
        said += contact_cautions.tipping(girder.id, model.tips_off)
        said += about
        creeps.append(supports.log_sustained != 0.0)
        said += pad_cautions.of_prior(model) + about_pads
        if model.permanent.given:
            said += contact_cautions.of_reactions(girder.id, shown.reactions)
        else:
            said += [contact_cautions.unknown(girder.id), *cautions.uplift(girder.id, shown.reactions)]
        said += cautions.of_sections(girder.id, shown.sections)
        said += cautions.of_rivals(girder.id, shown)
        said += supposing_cautions.of_reactions(girder.id, shown.reactions)
        digests += [
            f"{s} {one.value!r} {one.sd!r} {one.date}" for s, one in sorted(supports.settlements.items())
        ]
    said += [pad_cautions.FROM_MEMORY] if any(girder.pads for girder in girders) else []
    said += hinge_cautions.of_bridge(study.bridge)
    said += section_cautions.of_bridge(study.bridge, visit)
    said += supposing_cautions.of_suppositions(supposed)
    worn = last_loss(study.bridge, visit)
    digests += [] if worn is None else [f"losses up to {worn}"]
    progress("assessed", len(study.bridge.girders), len(study.bridge.girders))
    sources = [f"{kept.input_digest} {sorted(kept.options.items())}" for _, kept in fits.values()]
    return AssessmentResult(
        bridge=study.bridge.id,
        calibration_visit=latest,
        version=VERSION,
        input_digest=study.digest(*sources, *digests, *(one.text for one in supposed)),
        seed=SEED,
        draws=DRAWS,
        girders=girders,
        cautions=list(
            dict.fromkeys(
                [
                    *sorted(said, key=pad_cautions.is_assumption),
                    *cautions.permanent_stiffness(creeps),
                    *cautions.STANDING,
                ]
            )
        ),
        supposed=[one.text for one in supposed],
    )


def _of_sources(
    study: Study, fits: dict[dt.date, tuple[VisitFit, KeptResult]], until: dt.date | None
) -> list[str]:
    if not fits:
        return [cautions.no_calibration(study.bridge.id)]
    latest = max(fits)
    said = []
    kept = fits[latest][1]
    if kept.revision != study.kept.revision:
        said.append(cautions.stale(latest, kept.revision, study.kept.revision))
    newer = [v.date for v in study.until(until) if v.date > latest and telling_readings(v)]
    if newer:
        said.append(cautions.superseded_visit(latest, newer[-1]))
    return said


def _of_datum(study: Study, until: dt.date | None) -> list[str]:
    """Cautions where the levels' datum got another name."""
    levelled = [v for v in study.until(until) if any(r.quantity == "settlement" for r in v.readings)]
    return [
        cautions.datum_changed(first.datum, second.datum, second.date)
        for first, second in pairwise(levelled)
        if first.datum.strip() != second.datum.strip()
    ]


def _assess_girder(model: GirderModel, supports: Supports) -> GirderAssessment:
    none = np.zeros(model.n)
    calibrated, drops = supports.acting(model)
    firm = evaluate(model.effects, model.factors, model.unyielding, none)
    nominal = evaluate(model.effects, model.factors, model.compliance(model.nominal), none)
    crept = supports.on(model)
    found = evaluate(crept.effects, model.factors, calibrated, drops)
    draws = evaluate_draws(crept.effects, model.factors, *supports.draws(model, DRAWS, SEED))
    carried = [] if supports.fit is None else supports.fit.rivals
    others = [
        evaluate(one.on(model).effects, model.factors, *one.acting(model))
        for one in map(supports.as_rival, carried)
    ]
    names = [rival.name for rival in carried]
    sections = [
        _section(model, *four, _worst(names, [rows[i] for rows in others]))
        for i, four in enumerate(zip(firm, nominal, found, draws, strict=True))
    ]
    reactions = _reactions(crept, calibrated, drops)
    shown = [CarriedRival(name=one.name, told_apart_by=one.told_apart_by) for one in carried]
    return GirderAssessment(girder=model.doc.id, sections=sections, reactions=reactions, rivals=shown)


def _beside_supposed(
    shown: GirderAssessment, model: GirderModel, supports: Supports, supposed: Sequence[Supposition]
) -> GirderAssessment:
    """The same assessment with the supposed case beside the calibrated one."""
    other = supposed_model(model, supposed)
    with tipping_named(other, "as supposed"):
        stands = supposed_supports(other, supports, supposed)
        other, acting = stands.on(other), stands.acting(other)
        rows = evaluate(other.effects, other.factors, *acting)
        reactions = _reactions(other, *acting)
    sections = [
        replace(section, supposed=CaseResult(**_case(row.case)))
        for section, row in zip(shown.sections, rows, strict=True)
    ]
    beside = [
        replace(
            today,
            supposed_permanent_kN=then.calibrated_permanent_kN,
            supposed_live_max_kN=then.calibrated_live_max_kN,
            supposed_live_min_kN=then.calibrated_live_min_kN,
            supposed_lifts_under=then.calibrated_lifts_under,
        )
        for today, then in zip(shown.reactions, reactions, strict=True)
    ]
    return replace(shown, sections=sections, reactions=beside)


def _worst(names: Sequence[str], rows: Sequence[Row]) -> tuple[str, float] | None:
    """The rival that uses a section most, where that can be told."""
    used = [(row.case.utilisation, name) for name, row in zip(names, rows, strict=True)]
    finite = [pair for pair in used if np.isfinite(pair[0])]
    return (max(finite)[1], max(finite)[0]) if finite else None


def _section(
    model: GirderModel,
    unyielding: Row,
    nominal: Row,
    calibrated: Row,
    drawn: RowDraws,
    worst: tuple[str, float] | None,
) -> SectionResult:
    check = calibrated.check
    low = high = over = None
    if np.all(np.isfinite(drawn.utilisation)):
        low, high = (float(v) for v in np.quantile(drawn.utilisation, [0.025, 0.975]))
        over = float((drawn.utilisation > 1.0).mean())
    return SectionResult(
        effect=check.effect,
        span=check.span + 1 if check.span >= 0 else None,
        support=model.doc.supports[check.support].id if check.support >= 0 else None,
        unyielding=CaseResult(**_case(unyielding.case)),
        nominal=CaseResult(**_case(nominal.case)),
        calibrated=CalibratedCase(
            **_case(calibrated.case),
            settlement=calibrated.case.settled,
            utilisation_with_relief=known(calibrated.case.with_relief),
            utilisation_without_relief=known(calibrated.case.without_relief),
            utilisation_low95=low,
            utilisation_high95=high,
            probability_over_1=over,
            worst_rival=None if worst is None else worst[0],
            worst_rival_utilisation=None if worst is None else worst[1],
        ),
    )


def _case(case: Case) -> dict[str, Any]:
    return {
        "x_m": case.x,
        "capacity": known(case.resistance),
        "permanent": case.permanent,
        "live": case.live,
        "factored": case.factored,
        "utilisation": known(case.utilisation),
        "rating_factor": known(case.rating_factor),
        "least_rating_factor": known(case.least_rating),
        "least_rating_x_m": known(case.least_rating_x),
        "rating_levels": {name: known(value) for name, value in case.ratings},
        "temperature": case.temperature,
    }


def _reactions(model: GirderModel, calibrated: Floats, drops: Floats) -> list[ReactionResult]:
    effects, factors = model.effects, model.factors
    firm = effects.steady_reactions(model.unyielding, np.zeros(model.n)).permanent
    steady = effects.steady_reactions(calibrated, drops)
    soft = steady.permanent
    plain = effects.passing(AS_THEY_ARE, calibrated[None], drops[None])
    factored = effects.passing(factors, calibrated[None], drops[None])
    live, worst = plain.envelope(REACTION), factored.envelope(REACTION)
    lowest = live.minimum
    most = factored_steady(factors, steady, 1.0)[0] + factors.live * worst.maximum
    least = factored_steady(factors, steady, -1.0)[0] + factors.live * worst.minimum
    lifts: list[str | None] = [None] * model.n
    if model.permanent.given:
        free = ~model.effects.held_down
        by_cause = {
            "factored": free & (factored.lifted() | (least < 0.0)),
            "live": free & plain.lifted(),
            "permanent": effects.lifted(calibrated, drops),
        }
        for cause, lifted in by_cause.items():
            lifts = [cause if lifted[i] else before for i, before in enumerate(lifts)]
        # a pad that is left carries nothing, to the last digit
        lowest = np.where(free, np.maximum(lowest, -soft), lowest)
        least = np.where(free, np.maximum(least, 0.0), least)
    return [
        ReactionResult(
            support=support.id,
            unyielding_permanent_kN=float(firm[i]),
            calibrated_permanent_kN=float(soft[i]),
            calibrated_live_max_kN=float(live.maximum[i]),
            calibrated_live_min_kN=float(lowest[i]),
            calibrated_factored_max_kN=float(most[i]),
            calibrated_factored_min_kN=float(least[i]),
            calibrated_lifts_under=lifts[i],
        )
        for i, support in enumerate(model.doc.supports)
    ]
