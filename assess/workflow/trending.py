"""Follow pads, seats and section losses over the visits and carry the utilisations forward."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from assess.results import PadTrend, SeatTrend, SpanTrend, TrendResult, to_plain
from assess.trend import Trend, VisitEstimate, pad_future
from assess.workflow import (
    actions,
    cautions,
    contact_cautions,
    findings,
    pad_cautions,
    section_cautions,
    trend_cautions,
)
from assess.workflow.building import GirderModel
from assess.workflow.calibrating import calibrate_visit
from assess.workflow.dates import reach, years_between
from assess.workflow.forecasting import Ahead, spans_ahead
from assess.workflow.interventions import replaced
from assess.workflow.kept_fits import GirderFit, VisitFit, options_of
from assess.workflow.losses_ahead import PlateLoss, plate_losses
from assess.workflow.next_visit import is_stale, next_visit
from assess.workflow.pads import corrected
from assess.workflow.status import LIMIT
from assess.workflow.study import SEED, VERSION, Progress, Study, quiet, telling_readings
from assess.workflow.supports import kept_fits, seats_known
from assess.workflow.trend_rows import estimates_of, laws_of, pad_row, seat_law, seat_row
from db.documents import VisitDoc
from db.errors import BedstoneError
from db.records import KeptResult
from db.store import Record, open_record

Floats = NDArray[np.float64]

FORECAST_DRAWS = 2000


@dataclass(frozen=True, kw_only=True)
class GirderTrend:
    """The trend of one girder with what it was made from.

    Attributes
    ----------
    visits, fits : the visits that calibrate this girder, by date
    estimates : what each tells, at the reference temperature where a pad's coefficient allows it
    trend : laws of the pads
    pads, spans, seats : rows of the result
    """

    girder: str
    visits: list[VisitDoc]
    fits: list[GirderFit]
    estimates: list[VisitEstimate]
    trend: Trend
    pads: list[PadTrend]
    spans: list[SpanTrend]
    seats: list[SeatTrend]


def trend(
    url: str, bridge: str, *, progress: Progress | None = None, today: dt.date | None = None
) -> TrendResult:
    """Follow a bridge over its calibrated visits and carry its governing sections forward, as seen on a day."""
    with open_record(url) as record:
        return trend_in(record, bridge, progress=progress, today=today)


def trend_in(
    record: Record, bridge: str, *, progress: Progress | None = None, today: dt.date | None = None
) -> TrendResult:
    """Follow a bridge of an open record, keep the result, and open actions for what exceeds or is about to.

    As seen on another day (`today`) it is neither kept nor acted on.
    """
    study = Study.fetch(record, bridge)
    result = trend_study(study, progress=progress or quiet, today=today)[0]
    if today is not None:  # seen from another day: neither kept nor acted on
        return replace(result, actions=actions.open_actions(record, bridge))
    record.keep(
        KeptResult(
            kind="trend",
            bridge=bridge,
            visit=result.as_of,
            revision=study.kept.revision,
            input_digest=study.evidence,
            options={"draws": FORECAST_DRAWS},
            seed=SEED,
            version=VERSION,
            result=to_plain(result),
            evidence=study.evidence,
        )
    )
    until = actions.interval_day(study)
    found = findings.of_trend(study, result, dt.date.today(), until=until)
    return replace(result, actions=actions.opened(record, bridge, found))


def trend_study(
    study: Study, *, progress: Progress, today: dt.date | None = None
) -> tuple[TrendResult, list[GirderTrend]]:
    """Trend of a fetched bridge as seen on a day (today for None), and the girders' parts of it."""
    today = today or dt.date.today()
    newest = max((visit.date for visit in study.visits), default=today)
    if today < newest:
        raise BedstoneError(
            f"{today} lies before the visit of {newest}",
            field="--today",
            remedy="name a day from then on: the trend is drawn through all visits of the record",
        )
    fits = _all_fits(study, progress)
    if not fits:
        raise BedstoneError(
            f"{study.bridge.id} has no visit with readings in a test state, so there is no stiffness to follow",
            remedy="log such a visit: bedstone visit log VISIT.toml",
        )
    as_of = max(fits)
    losses = plate_losses(study.bridge)
    said: list[str] = []
    parts = []
    for i, girder in enumerate(study.bridge.girders):
        progress(f"carrying {girder.id} forward", i, len(study.bridge.girders))
        model = study.model(girder.id)
        own = [(study.visit(d), found) for d, one in fits.items() if (found := one.of(model)) is not None]
        if not own:
            said.append(cautions.girder_not_calibrated(girder.id))
            continue
        part, about = _girder(study, model, own, losses, fits)
        parts.append(part)
        said += contact_cautions.tipping(girder.id, model.tips_off) + about
    progress("carried forward", len(study.bridge.girders), len(study.bridge.girders))
    said += _of_visits(study, fits) + section_cautions.of_trend(study.bridge, losses)
    creeps = ["sustained" in dict(part.fits[-1].unknowns) for part in parts]
    due = next_visit(study, parts, today)
    parts = [_aged(study, part, today, overdue=due.overdue) for part in parts]
    said += due.cautions + trend_cautions.far(parts, reach(as_of, 2.0 * years_between(min(fits), as_of)))
    result = TrendResult(
        bridge=study.bridge.id,
        as_of=as_of,
        pads=[row for part in parts for row in part.pads],
        spans=[row for part in parts for row in part.spans],
        seats=[row for part in parts for row in part.seats],
        losses=[one.row for one in losses],
        next_visit_by=due.date,
        next_visit_reason=due.reason,
        today=today,
        overdue=due.overdue,
        cautions=[*said, *cautions.permanent_stiffness(creeps), *cautions.STANDING],
    )
    return result, parts


def _all_fits(study: Study, progress: Progress) -> dict[dt.date, VisitFit]:
    """Kept calibrations of all visits that rest on today's bridge file, the missing ones made as asked for."""
    newest = kept_fits(study, None)
    kept = {d: fit for d, (fit, row) in newest.items() if row.revision == study.kept.revision}
    asked = {d: options_of(row) for d, (_, row) in newest.items()}
    chosen = [visit for visit in study.visits if telling_readings(visit)]
    fits = {}
    for i, visit in enumerate(chosen):
        progress(f"reading {visit.date.isoformat()}", i, len(chosen))
        fits[visit.date] = kept.get(visit.date) or calibrate_visit(study, visit, asked.get(visit.date))
    return fits


def _girder(
    study: Study,
    model: GirderModel,
    own: list[tuple[VisitDoc, GirderFit]],
    losses: list[PlateLoss],
    visit_fits: dict[dt.date, VisitFit],
) -> tuple[GirderTrend, list[str]]:
    visits, fits = [visit for visit, _ in own], [fit for _, fit in own]
    dates = [visit.date for visit in visits]
    estimates = estimates_of(model, own)
    found = laws_of(model, estimates, dates)
    histories = seats_known(study, model.doc.id, None, visit_fits)
    seats = {support: seat_law(history) for support, history in histories.items()}
    used = {section.id for span in model.sections for _, section in span}
    ahead = Ahead(
        trend=found,
        seats=seats,
        losses=[one for one in losses if one.section in used],
        log_factor=fits[-1].one("girder"),
        log_sustained=fits[-1].one("sustained"),
        span=years_between(dates[0], dates[-1]),
        last=dates[-1],
    )
    part = GirderTrend(
        girder=model.doc.id,
        visits=visits,
        fits=fits,
        estimates=estimates,
        trend=found,
        pads=[pad_row(model, i, law, dates) for i, law in enumerate(found.laws)],
        spans=spans_ahead(model, ahead, draws=FORECAST_DRAWS),
        seats=[seat_row(model, s, law, histories[s]) for s, law in seats.items()],
    )
    said = trend_cautions.of_laws(model, found, estimates, dates)
    said += trend_cautions.of_seats(model, seats, histories, dates[-1])
    return part, said + _of_spans(part)


def _of_spans(part: GirderTrend) -> list[str]:
    said = []
    for row in part.spans:
        name = f"{part.girder}: {cautions.section_name(row.effect, row.span, row.support)}"
        chance = row.probability_over_1_now
        if row.utilisation_now is None or chance is None:
            continue
        if row.utilisation_now <= LIMIT and chance >= 0.05:
            said.append(cautions.high_chance(name, chance))
        if row.status == "over":
            said.append(cautions.over_now(name, row.utilisation_now))
    return said


def _aged(study: Study, part: GirderTrend, today: dt.date, *, overdue: bool) -> GirderTrend:
    """The part as a day sees it: once a visit is overdue, or a pad new and unread, nothing is known to be within."""
    last = part.visits[-1].date
    unread = any(last < one.date <= today for one in replaced(study.bridge, part.girder))
    if not (overdue or unread or is_stale(study, last, today)):
        return part
    spans = [replace(row, status="unknown") if row.status == "within" else row for row in part.spans]
    return replace(part, spans=spans)


# cautions on the visits ---------------------------------------------------------------------------


def _of_visits(study: Study, fits: dict[dt.date, VisitFit]) -> list[str]:
    cold = pad_cautions.of_cold(study.bridge, {d: study.visit(d).pad_temperature for d in fits})
    return _doubts(fits) + _temperatures(study, fits) + cold


def _doubts(fits: dict[dt.date, VisitFit]) -> list[str]:
    """Word on visits whose own fit is in doubt."""
    said = []
    for date, one in fits.items():
        for girder in one.result.girders:
            suspects = sum(reading.suspect for reading in girder.readings)
            misfit = girder.p_value is not None and girder.p_value < cautions.MISFIT
            if suspects or misfit:
                said.append(cautions.doubtful(girder.girder, date, suspects, misfit))
    return said


def _temperatures(study: Study, fits: dict[dt.date, VisitFit]) -> list[str]:
    """Word on visits at temperatures that cannot be compared, for pads without a coefficient."""
    far = [d for d in fits if cautions.is_far_from_reference(study.visit(d).pad_temperature)]
    if not far or len(fits) < 2:
        return []
    pads = sorted(
        {
            s.id
            for girder in study.bridge.girders
            for s in girder.supports
            if s.kind == "pad" and not corrected(s)
        }
    )
    unknown = [d for d in fits if study.visit(d).pad_temperature is None]
    said = [cautions.mixed_temperatures(far, pads)] if pads else []
    if not pads and unknown:
        said.append(cautions.mixed_temperatures(unknown, ["all"]))
    return said


def with_future(part: GirderTrend, span_of_visits: float) -> tuple[Floats, Floats]:
    """Years ahead (times,) and quantiles 2.5, 50 and 97.5 % of ln k (3, times, q), no further than is meaningful."""
    years = np.linspace(0.0, max(2.0 * span_of_visits, 1.0), 13) if span_of_visits > 0.0 else np.zeros(1)
    future = pad_future(part.trend, years, draws=FORECAST_DRAWS, seed=SEED)
    return years, np.asarray(np.quantile(future.log_stiffness, [0.025, 0.5, 0.975], axis=0))
