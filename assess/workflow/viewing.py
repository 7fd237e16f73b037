"""All that a report shows of a bridge, gathered in one go."""

from __future__ import annotations

import datetime as dt
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import Z95
from assess.capacity import demands_at, moment_draws
from assess.results import (
    AssessmentResult,
    CalibrationResult,
    ElevationState,
    GirderView,
    MomentLines,
    PadHistory,
    ReportView,
    SupportView,
    TrendResult,
)
from assess.workflow import cautions
from assess.workflow.actions import open_actions
from assess.workflow.assessing import assess_study
from assess.workflow.building import GirderModel
from assess.workflow.calibrating import calibrate_visit
from assess.workflow.combination import factors_in_words
from assess.workflow.dates import DAYS_PER_YEAR
from assess.workflow.drivers import Driver, drivers
from assess.workflow.kept_fits import VisitFit
from assess.workflow.live_loads import live_in_words
from assess.workflow.movements import lie_of, line_of, points_of
from assess.workflow.showing import section_views
from assess.workflow.stands import governing_stands
from assess.workflow.study import DRAWS, SEED, VERSION, Progress, Study, quiet, telling_readings
from assess.workflow.supports import Supports, kept_fits, supports_of
from assess.workflow.trending import GirderTrend, trend_study, with_future
from assess.workflow.verdicts import cautions_beside, head_row, verdict
from db.documents import VisitDoc
from db.store import open_record

Floats = NDArray[np.float64]

_BAND_DRAWS = 400  # draws for the bands of the moment lines


def report_view(
    url: str, bridge: str, *, progress: Progress | None = None, today: dt.date | None = None
) -> ReportView:
    """Gather calibration, assessment, trend and drawings of a bridge for its report, as seen on a day."""
    tell = progress or quiet
    with open_record(url) as record:
        study = Study.fetch(record, bridge)
        standing = open_actions(record, bridge)
    assessment = assess_study(study, visit=None, progress=tell)
    tested = any(telling_readings(visit) for visit in study.visits)
    trend, parts = trend_study(study, progress=tell, today=today) if tested else (None, [])
    calibration = _calibration(study, assessment)
    girders = []
    for i, girder in enumerate(study.bridge.girders):
        tell(f"drawing {girder.id}", i, len(study.bridge.girders))
        part = next((p for p in parts if p.girder == girder.id), None)
        girders.append(_girder(study, girder.id, calibration, part))
    tell("drawn", len(study.bridge.girders), len(study.bridge.girders))
    shown = calibration.result if calibration is not None else None
    return replace(_view(study, shown, assessment, trend, girders), actions=standing)


def _view(
    study: Study,
    calibration: CalibrationResult | None,
    assessment: AssessmentResult,
    trend: TrendResult | None,
    girders: list[GirderView],
) -> ReportView:
    bridge = study.bridge
    said = list(dict.fromkeys([
        *(calibration.cautions if calibration else []), *assessment.cautions, *(trend.cautions if trend else []),
    ]))  # fmt: skip
    return ReportView(
        bridge=bridge.id,
        name=bridge.name,
        carries=bridge.carries,
        zero=bridge.zero,
        built=bridge.built,
        revision=study.kept.revision,
        bridge_digest=bridge.digest,
        visits=[(v.date, v.party, v.pad_temperature, len(v.readings)) for v in study.visits],
        factors=factors_in_words(bridge),
        live=live_in_words(bridge),
        verdicts={g.id: _verdict(study, g.id, assessment, trend, calibration) for g in bridge.girders},
        verdict_cautions={g.id: cautions_beside(g.id, said) for g in bridge.girders},
        calibration=calibration,
        assessment=assessment,
        trend=trend,
        girders=girders,
        options={
            "version": VERSION,
            "calibration input digest": calibration.input_digest if calibration else "no calibration",
            "assessment input digest": assessment.input_digest,
            "draws of the pads": f"{DRAWS}, seed {SEED}",
            "data share that counts as told": f"{cautions.TOLD:.0%}",
        },
        cautions=said,
        sections=section_views(bridge, None),
    )


def _verdict(
    study: Study,
    girder: str,
    assessment: AssessmentResult,
    trend: TrendResult | None,
    calibration: CalibrationResult | None,
) -> str:
    row = head_row(trend, girder)
    found: list[Driver] = []
    if row is not None:
        model = study.model(girder)
        supports, _ = supports_of(study, model, kept_fits(study, None), None)
        found = drivers(model, supports, row)
    return verdict(girder, assessment, trend, calibration, found)


def _calibration(study: Study, assessment: AssessmentResult) -> VisitFit | None:
    """The kept calibration that the assessment rests on; without one, the last visit's, made for the drawing only."""
    kept = kept_fits(study, None)
    if assessment.calibration_visit is not None:
        return kept[assessment.calibration_visit][0]
    tested = [visit for visit in study.visits if telling_readings(visit)]
    return calibrate_visit(study, tested[-1]) if tested else None


def _girder(study: Study, girder: str, calibration: VisitFit | None, part: GirderTrend | None) -> GirderView:
    model = study.model(girder)
    supports, _ = supports_of(study, model, kept_fits(study, None), None)
    lines = _moments(model, supports)
    return GirderView(
        girder=girder,
        span_lengths_m=[span.length for span in model.doc.spans],
        supports=_supports(model, supports),
        states=_states(study, model, calibration),
        moments=lines,
        histories=_histories(model, part) if part is not None else [],
        stands=governing_stands(supports.on(model), *supports.acting(model), lines),
        hinges_m=list(model.doc.hinges),
        lie=lie_of(model),
    )


def _supports(model: GirderModel, supports: Supports) -> list[SupportView]:
    views = []
    order = {int(index): i for i, index in enumerate(model.pads)}
    for j, (support, x) in enumerate(zip(model.doc.supports, model.doc.support_positions, strict=True)):
        ratio = low = high = share = None
        i = order.get(j)
        if i is not None and supports.fit is not None:
            centre = supports.log_stiffness[i] - model.nominal[i]
            sd = float(np.sqrt(supports.covariance[i, i]))
            ratio, low, high = (float(np.exp(centre + z * sd)) for z in (0.0, -Z95, Z95))
            share = float(supports.fit.data_share[i])
        drop = supports.settlements.get(support.id)
        views.append(
            SupportView(
                support=support.id,
                kind=support.kind,
                x_m=x,
                ratio=ratio,
                ratio_low=low,
                ratio_high=high,
                data_share=share,
                seat_drop_mm=None if drop is None else 1e3 * drop.value,
                seat_drop_sd_mm=None if drop is None else 1e3 * drop.sd,
            )
        )
    return views


def _states(study: Study, model: GirderModel, calibration: VisitFit | None) -> list[ElevationState]:
    name = model.doc.id
    fit = calibration.of(model) if calibration is not None else None
    if calibration is None or fit is None:
        return []
    model = study.model(name, calibration.visit)
    shown = next(g for g in calibration.result.girders if g.girder == name)
    visit: VisitDoc = study.visit(calibration.visit)
    states = []
    for state in visit.states:
        read = any(r.state == state.id and r.predicted is not None for r in shown.readings)
        if state.vehicle is None or not read:
            continue
        load = model.placed(state)
        x, fitted = line_of(model, fit.log_stiffness, load)
        states.append(
            ElevationState(
                state=state.id,
                x_m=x,
                fitted_mm=fitted,
                axles=list(load.points),
                points=points_of(model, visit, state.id, shown.readings),
            )
        )
    return states


def _moments(model: GirderModel, supports: Supports) -> MomentLines:
    plan, effects, factors = model.plan, model.effects, model.factors
    none, crept = np.zeros(model.n), supports.on(model).effects
    cases = [
        (effects, model.unyielding, none),
        (effects, model.compliance(model.nominal), none),
        (crept, *supports.acting(model)),
    ]
    lines = [demands_at(case[0], factors, *case[1:]) for case in cases]
    drawn = moment_draws(crept, factors, *supports.draws(model, _BAND_DRAWS, SEED))
    bands = [np.quantile(one, [0.025, 0.975], axis=0) for one in drawn]
    sagging, hogging = ([one["moment", sign].factored for one in lines] for sign in (1.0, -1.0))
    permanent = [one["moment", 1.0].permanent for one in lines]
    return MomentLines(
        x_m=plan.x,
        capacity_sagging=plan.sagging,
        capacity_hogging=-plan.hogging,
        unyielding_sagging=sagging[0],
        unyielding_hogging=hogging[0],
        nominal_sagging=sagging[1],
        nominal_hogging=hogging[1],
        calibrated_sagging=sagging[2],
        calibrated_hogging=hogging[2],
        sagging_low=bands[0][0],
        sagging_high=bands[0][1],
        hogging_low=bands[1][0],
        hogging_high=bands[1][1],
        unyielding_permanent=permanent[0],
        nominal_permanent=permanent[1],
        calibrated_permanent=permanent[2],
    )


def _histories(model: GirderModel, part: GirderTrend) -> list[PadHistory]:
    dates = [visit.date for visit in part.visits]
    span = (dates[-1] - dates[0]).days / DAYS_PER_YEAR
    ahead, quantiles = with_future(part, span)
    times = np.array([e.time for e in part.estimates])
    back = np.linspace(times[0], times[-1], 13)[:-1] - times[-1] if span > 0.0 else np.zeros(0)
    line_dates = [_day(dates[-1], t) for t in [*back, *ahead]]
    histories = []
    for i, support in enumerate(model.pad_ids):
        centre = np.array([f.log_stiffness[i] for f in part.fits]) - model.nominal[i]
        sd = np.array([f.sd[i] for f in part.fits])
        low, line, high = (quantiles[q][:, i] - model.nominal[i] for q in range(3))
        past, spread = part.trend.line(i, back)
        past = past - model.nominal[i]
        histories.append(
            PadHistory(
                support=support,
                dates=dates,
                ratio=np.exp(centre),
                low95=np.exp(centre - Z95 * sd),
                high95=np.exp(centre + Z95 * sd),
                data_share=np.array([f.data_share[i] for f in part.fits]),
                temperature_degC=[visit.pad_temperature for visit in part.visits],
                line_dates=line_dates,
                line=np.exp(np.concatenate([past, line])),
                fan_low=np.exp(np.concatenate([past - Z95 * spread, low])),
                fan_high=np.exp(np.concatenate([past + Z95 * spread, high])),
                last_visit=dates[-1],
                law=part.pads[i].law,
            )
        )
    return histories


def _day(last: dt.date, years: float) -> dt.date:
    return last + dt.timedelta(days=round(float(years) * DAYS_PER_YEAR))
