"""Assess a bridge: unyielding, nominal and calibrated supports side by side."""

from __future__ import annotations

import datetime as dt
from dataclasses import asdict, dataclass, replace
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import draw_normal
from assess.capacity import AS_THEY_ARE, Case, Row, RowDraws, evaluate, evaluate_draws, factored_steady
from assess.girder import REACTION
from assess.results import (
    AssessmentResult,
    CalibratedCase,
    CaseResult,
    GirderAssessment,
    ReactionResult,
    SectionResult,
)
from assess.workflow import (
    cautions,
    combination_cautions,
    contact_cautions,
    hinge_cautions,
    pad_cautions,
    section_cautions,
)
from assess.workflow.building import GirderModel
from assess.workflow.calibrating import GirderFit, VisitFit, from_kept
from assess.workflow.combination import factors_of
from assess.workflow.lifting import tipping_named
from assess.workflow.pad_checks import check_pads
from assess.workflow.sections import last_loss
from assess.workflow.study import DRAWS, SEED, VERSION, Progress, Study, quiet, test_readings
from db.records import KeptResult
from db.store import open_record

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class Settlement:
    """A measured seat drop: m, with its standard deviation and the visit it was last measured on."""

    value: float
    sd: float
    date: dt.date


@dataclass(frozen=True, kw_only=True)
class Supports:
    """What is known of one girder's supports for the calibrated case.

    Attributes
    ----------
    log_stiffness, covariance : (q,), (q, q) of ln k
    source : visit of the calibration, None for nominal pads
    settlements : by support id; none with nominal pads
    """

    log_stiffness: Floats
    covariance: Floats
    source: dt.date | None
    fit: GirderFit | None
    settlements: dict[str, Settlement]

    def drops(self, model: GirderModel) -> Floats:
        """Seat drops (n,), m."""
        drops = np.zeros(model.n)
        for support, one in self.settlements.items():
            drops[model.doc.support_index(support)] = one.value
        return drops

    def draws(self, model: GirderModel, count: int, seed: int) -> tuple[Floats, Floats]:
        """Draw compliances and seat drops, both (count, n)."""
        log_stiffness = draw_normal(self.log_stiffness, self.covariance, count, seed)
        return model.compliance(log_stiffness), self.drop_draws(model, count, seed)

    def drop_draws(self, model: GirderModel, count: int, seed: int) -> Floats:
        """Draw seat drops, (count, n)."""
        sd = np.zeros(model.n)
        for support, one in self.settlements.items():
            sd[model.doc.support_index(support)] = one.sd
        noise = np.random.default_rng([seed, 1]).standard_normal((count, model.n))
        return np.asarray(self.drops(model) + sd * noise)


def assess(
    url: str, bridge: str, *, visit: dt.date | None = None, progress: Progress | None = None
) -> AssessmentResult:
    """Assess a bridge with its latest kept calibration (up to a visit, if one is named), and keep the result."""
    with open_record(url) as record:
        study = Study.fetch(record, bridge)
        if visit is not None:
            study.visit(visit)
        result = assess_study(study, visit=visit, progress=progress or quiet)
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
                result=_plain(result),
            )
        )
    return result


def _plain(result: AssessmentResult) -> dict[str, object]:
    plain = asdict(result)
    plain["calibration_visit"] = result.calibration_visit and result.calibration_visit.isoformat()
    return plain


def kept_fits(study: Study, until: dt.date | None) -> dict[dt.date, tuple[VisitFit, KeptResult]]:
    """The newest kept calibration of every visit up to a day, by date."""
    newest: dict[dt.date, tuple[VisitFit, KeptResult]] = {}
    for kept in study.calibrations:
        if kept.visit is not None and (until is None or kept.visit <= until):
            newest[kept.visit] = (from_kept(kept), kept)
    return dict(sorted(newest.items()))


def assess_study(study: Study, *, visit: dt.date | None, progress: Progress) -> AssessmentResult:
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
    for i, girder in enumerate(study.bridge.girders):
        progress(f"assessing {girder.id}", i, len(study.bridge.girders))
        model = study.model(girder.id, visit)
        supports, about = supports_of(study, model, fits, visit)
        with tipping_named(model):
            shown = _assess_girder(model, supports)
        pads, about_pads = check_pads(model, supports.log_stiffness, shown.reactions)
        girders.append(replace(shown, pads=pads))
        said += contact_cautions.tipping(girder.id, model.tips_off)
        said += about
        said += pad_cautions.of_prior(model) + about_pads
        if model.permanent.given:
            said += contact_cautions.of_reactions(girder.id, shown.reactions)
        else:
            said += [contact_cautions.unknown(girder.id), *cautions.uplift(girder.id, shown.reactions)]
        said += cautions.of_sections(girder.id, shown.sections)
        digests += [
            f"{s} {one.value!r} {one.sd!r} {one.date}" for s, one in sorted(supports.settlements.items())
        ]
    said += [pad_cautions.FROM_MEMORY] if any(girder.pads for girder in girders) else []
    said += hinge_cautions.of_bridge(study.bridge)
    said += section_cautions.of_bridge(study.bridge, visit)
    worn = last_loss(study.bridge, visit)
    digests += [] if worn is None else [f"losses up to {worn}"]
    progress("assessed", len(study.bridge.girders), len(study.bridge.girders))
    sources = [f"{kept.input_digest} {sorted(kept.options.items())}" for _, kept in fits.values()]
    return AssessmentResult(
        bridge=study.bridge.id,
        calibration_visit=latest,
        version=VERSION,
        input_digest=study.digest(*sources, *digests),
        seed=SEED,
        draws=DRAWS,
        girders=girders,
        cautions=list(
            dict.fromkeys(
                [
                    *sorted(said, key=pad_cautions.is_assumption),
                    cautions.PERMANENT_STIFFNESS,
                    *cautions.STANDING,
                ]
            )
        ),
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
    newer = [v.date for v in study.until(until) if v.date > latest and test_readings(v)]
    if newer:
        said.append(cautions.superseded_visit(latest, newer[-1]))
    return said


def supports_of(
    study: Study, model: GirderModel, fits: dict[dt.date, tuple[VisitFit, KeptResult]], until: dt.date | None
) -> tuple[Supports, list[str]]:
    """What is known of a girder's supports up to a day, and the cautions on it."""
    name = model.doc.id
    measured = settlements(study, name, until)
    own = {date: found for date, (one, _) in fits.items() if (found := one.of(model)) is not None}
    if not fits:
        left = cautions.settlements_left_out(name, [(s, 1e3 * one.value) for s, one in measured.items()])
        nominal = Supports(
            log_stiffness=model.nominal,
            covariance=model.prior.covariance,
            source=None,
            fit=None,
            settlements={},
        )
        return nominal, left
    said = _of_seats(study, model, fits, until)
    said += cautions.settlements_used(
        name, [(s, 1e3 * one.value, 1e3 * one.sd, one.date) for s, one in measured.items()]
    )
    if not own:
        if model.pads.size:
            said.append(cautions.girder_not_calibrated(name))
        return (
            Supports(
                log_stiffness=model.nominal,
                covariance=model.prior.covariance,
                source=None,
                fit=None,
                settlements=measured,
            ),
            said,
        )
    date = max(own)
    if date != max(fits):
        said.append(cautions.older_girder(name, date, max(fits)))
    said += [one for one in fits[date][0].result.cautions if one.startswith(f"{name}: ")]
    said += _forgotten(model, own, date)
    return (
        Supports(
            log_stiffness=own[date].log_stiffness,
            covariance=own[date].covariance,
            source=date,
            fit=own[date],
            settlements=measured,
        ),
        said,
    )


def _of_seats(
    study: Study, model: GirderModel, fits: dict[dt.date, tuple[VisitFit, KeptResult]], until: dt.date | None
) -> list[str]:
    """Cautions on seats: never read, read long ago, risen since."""
    name = model.doc.id
    histories = seat_histories(study, name, until)
    newest = max([*fits, *(visit.date for visit in study.until(until))])
    said = cautions.seats_not_read(name, [s.id for s in model.doc.supports if s.id not in histories], newest)
    old: dict[dt.date, list[str]] = {}
    for support, history in histories.items():
        if history[-1].date < newest:
            old.setdefault(history[-1].date, []).append(support)
        for first, second in pairwise(history):
            fall = second.value - first.value
            if fall < -cautions.SUSPECT * float(np.hypot(first.sd, second.sd)):
                args = (1e3 * first.value, 1e3 * second.value, first.date, second.date)
                said.append(cautions.seat_turned(name, support, *args))
    for date, supports in sorted(old.items()):
        said += cautions.seats_old(name, supports, date, newest)
    return said


def _of_datum(study: Study, until: dt.date | None) -> list[str]:
    """Cautions where the levels' datum got another name."""
    levelled = [v for v in study.until(until) if any(r.quantity == "settlement" for r in v.readings)]
    return [
        cautions.datum_changed(first.datum, second.datum, second.date)
        for first, second in pairwise(levelled)
        if first.datum.strip() != second.datum.strip()
    ]


def _forgotten(model: GirderModel, own: dict[dt.date, GirderFit], date: dt.date) -> list[str]:
    said = []
    for i, support in enumerate(model.pad_ids):
        if own[date].data_share[i] >= cautions.TOLD:
            continue
        telling = [d for d, fit in own.items() if d < date and fit.data_share[i] >= cautions.TOLD]
        if not telling:
            continue
        ratio = float(np.exp(own[max(telling)].log_stiffness[i] - model.nominal[i]))
        said.append(cautions.forgotten_pad(model.doc.id, support, date, max(telling), ratio))
    return said


def seat_histories(study: Study, girder: str, until: dt.date | None) -> dict[str, list[Settlement]]:
    """Measured settlements of each support of a girder, by date; repeats of one visit are pooled by weight."""
    found: dict[str, list[Settlement]] = {}
    for visit in study.until(until):
        values: dict[str, list[tuple[float, float]]] = {}
        for reading in visit.readings:
            permanent = visit.state(reading.state).vehicle is None
            if (
                reading.girder == girder
                and reading.quantity == "settlement"
                and permanent
                and reading.support
            ):
                values.setdefault(reading.support, []).append((reading.value, reading.sd))
        for support, pairs in values.items():
            value, sd = np.array(pairs).T
            weight = sd**-2.0
            pooled = Settlement(
                value=float((weight @ value) / weight.sum()), sd=float(weight.sum() ** -0.5), date=visit.date
            )
            found.setdefault(support, []).append(pooled)
    return found


def settlements(study: Study, girder: str, until: dt.date | None) -> dict[str, Settlement]:
    """The last measured settlement of each support of a girder."""
    return {support: history[-1] for support, history in seat_histories(study, girder, until).items()}


def _assess_girder(model: GirderModel, supports: Supports) -> GirderAssessment:
    drops, none = supports.drops(model), np.zeros(model.n)
    calibrated = model.compliance(supports.log_stiffness)
    firm = evaluate(model.effects, model.factors, model.unyielding, none)
    nominal = evaluate(model.effects, model.factors, model.compliance(model.nominal), none)
    found = evaluate(model.effects, model.factors, calibrated, drops)
    draws = evaluate_draws(model.effects, model.factors, *supports.draws(model, DRAWS, SEED))
    sections = [_section(model, *four) for four in zip(firm, nominal, found, draws, strict=True)]
    reactions = _reactions(model, calibrated, drops)
    return GirderAssessment(girder=model.doc.id, sections=sections, reactions=reactions)


def _section(
    model: GirderModel, unyielding: Row, nominal: Row, calibrated: Row, drawn: RowDraws
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
            utilisation_with_relief=_known(calibrated.case.with_relief),
            utilisation_without_relief=_known(calibrated.case.without_relief),
            utilisation_low95=low,
            utilisation_high95=high,
            probability_over_1=over,
        ),
    )


def _case(case: Case) -> dict[str, Any]:
    return {
        "x_m": case.x,
        "capacity": _known(case.resistance),
        "permanent": case.permanent,
        "live": case.live,
        "factored": case.factored,
        "utilisation": _known(case.utilisation),
        "rating_factor": _known(case.rating_factor),
        "least_rating_factor": _known(case.least_rating),
        "least_rating_x_m": _known(case.least_rating_x),
        "rating_levels": {name: _known(value) for name, value in case.ratings},
        "temperature": case.temperature,
    }


def _known(value: float) -> float | None:
    """None for what is not determined."""
    return value if np.isfinite(value) else None


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
