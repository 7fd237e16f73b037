"""Follow the pads over the visits and carry the utilisations forward."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import SUSPECT
from assess.capacity import evaluate, evaluate_draws
from assess.results import PadTrend, SeatTrend, SpanTrend, TrendResult
from assess.trend import (
    PadLaw,
    SeatLaw,
    Trend,
    VisitEstimate,
    crossing,
    fit_seat,
    fit_trend,
    pad_future,
)
from assess.workflow import cautions, contact_cautions, pad_cautions, section_cautions
from assess.workflow.building import GirderModel
from assess.workflow.calibrating import calibrate_visit
from assess.workflow.kept_fits import GirderFit, VisitFit, options_of
from assess.workflow.lifting import draws_worth, tipping_named
from assess.workflow.pads import cold_shift, corrected
from assess.workflow.status import LIMIT, status_of
from assess.workflow.study import SEED, Progress, Study, quiet, telling_readings
from assess.workflow.supports import Settlement, acting, kept_fits, seat_histories
from db.documents import VisitDoc
from db.errors import BedstoneError
from db.store import open_record

Floats = NDArray[np.float64]

DAYS_PER_YEAR = 365.25
DEFAULT_INTERVAL_YEARS = 2.0
FORECAST_DRAWS = 2000
_TIMES = 25
_HORIZON = (10.0, 30.0)  # years looked ahead: at least, at most; in between twice the span of the visits


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


def trend(url: str, bridge: str, *, progress: Progress | None = None) -> TrendResult:
    """Follow all pads of a bridge over its calibrated visits and carry its governing sections forward."""
    with open_record(url) as record:
        study = Study.fetch(record, bridge)
    return trend_study(study, progress=progress or quiet)[0]


def trend_study(study: Study, *, progress: Progress) -> tuple[TrendResult, list[GirderTrend]]:
    """Trend of a fetched bridge, and the girders' parts of it."""
    fits = _all_fits(study, progress)
    if not fits:
        raise BedstoneError(
            f"{study.bridge.id} has no visit with readings in a test state, so there is no stiffness to follow",
            remedy="log such a visit: bedstone visit log VISIT.toml",
        )
    as_of = max(fits)
    said: list[str] = []
    parts = []
    for i, girder in enumerate(study.bridge.girders):
        progress(f"carrying {girder.id} forward", i, len(study.bridge.girders))
        model = study.model(girder.id)
        own = [(study.visit(d), found) for d, one in fits.items() if (found := one.of(model)) is not None]
        if not own:
            said.append(cautions.girder_not_calibrated(girder.id))
            continue
        part, about = _girder(study, model, own)
        parts.append(part)
        said += contact_cautions.tipping(girder.id, model.tips_off) + about
    progress("carried forward", len(study.bridge.girders), len(study.bridge.girders))
    said += _doubts(fits)
    said += _temperatures(study, fits)
    said += pad_cautions.of_cold(study.bridge, {d: study.visit(d).pad_temperature for d in fits})
    said += section_cautions.of_trend(study.bridge)
    due, reason, about = _next_visit(study, as_of, parts)
    said += about
    limit = _reach(as_of, 2.0 * _years(min(fits), as_of))
    far = any(
        d is not None and d > limit
        for p in parts
        for s in p.spans
        for d in (s.median_crossing, s.earliest_5_percent)
    )
    if far:
        said.append(cautions.far_extrapolation(limit))
    result = TrendResult(
        bridge=study.bridge.id,
        as_of=as_of,
        pads=[row for part in parts for row in part.pads],
        spans=[row for part in parts for row in part.spans],
        seats=[row for part in parts for row in part.seats],
        next_visit_by=due,
        next_visit_reason=reason,
        cautions=[*said, cautions.PERMANENT_STIFFNESS, *cautions.STANDING],
    )
    return result, parts


def _all_fits(study: Study, progress: Progress) -> dict[dt.date, VisitFit]:
    """Kept calibrations of all visits that rest on today's bridge file, the missing ones made as they were asked for."""
    newest = kept_fits(study, None)
    kept = {d: fit for d, (fit, row) in newest.items() if row.revision == study.kept.revision}
    asked = {d: options_of(row) for d, (_, row) in newest.items()}
    chosen = [visit for visit in study.visits if telling_readings(visit)]
    fits = {}
    for i, visit in enumerate(chosen):
        progress(f"reading {visit.date.isoformat()}", i, len(chosen))
        fits[visit.date] = kept.get(visit.date) or calibrate_visit(study, visit, asked.get(visit.date))
    return fits


def _years(first: dt.date, second: dt.date) -> float:
    return (second - first).days / DAYS_PER_YEAR


def _reach(date: dt.date, years: float) -> dt.date:
    return date + dt.timedelta(days=round(years * DAYS_PER_YEAR))


# one girder --------------------------------------------------------------------------------------


def _girder(
    study: Study, model: GirderModel, own: list[tuple[VisitDoc, GirderFit]]
) -> tuple[GirderTrend, list[str]]:
    first, last = own[0][0].date, own[-1][0].date
    estimates = [_estimate(model, visit, fit, first) for visit, fit in own]
    found = fit_trend(estimates, model.prior.mean, model.prior.sd, model.prior.correlation)
    histories = seat_histories(study, model.doc.id, None)
    seats = {support: _seat_law(history) for support, history in histories.items()}
    spans = _spans(model, found, seats, own[-1][1], (_years(first, last), last))
    dates = [visit.date for visit, _ in own]
    pads = [_pad(model, i, law, len(own)) for i, law in enumerate(found.laws)]
    part = GirderTrend(
        girder=model.doc.id,
        visits=[visit for visit, _ in own],
        fits=[fit for _, fit in own],
        estimates=estimates,
        trend=found,
        pads=pads,
        spans=spans,
        seats=[_seat(model, s, law, len(histories[s])) for s, law in seats.items()],
    )
    said = _of_laws(model, found, estimates, dates)
    said += _of_seats(model, seats, histories, last)
    for row in spans:
        name = f"{model.doc.id}: {cautions.section_name(row.effect, row.span, row.support)}"
        chance = row.probability_over_1_now
        if (
            row.utilisation_now is not None
            and row.utilisation_now <= LIMIT
            and chance is not None
            and chance >= 0.05
        ):
            said.append(cautions.high_chance(name, chance))
        if row.utilisation_now is not None and row.status == "over":
            said.append(cautions.over_now(name, row.utilisation_now))
    return part, said


def _estimate(model: GirderModel, visit: VisitDoc, fit: GirderFit, first: dt.date) -> VisitEstimate:
    """A visit's fit, brought to the reference temperature for pads that have a coefficient or a compound."""
    shift = cold_shift(model.doc, list(model.pads), visit.pad_temperature).shift
    return VisitEstimate(
        time=_years(first, visit.date),
        log_stiffness=fit.log_stiffness - shift,
        covariance=fit.covariance,
        information=fit.information,
        information_vector=fit.information_vector - fit.information @ shift,
        data_share=fit.data_share,
    )


def _pad(model: GirderModel, i: int, law: PadLaw, visits: int) -> PadTrend:
    change = low = high = None
    if law.determined:
        rates = np.array([law.rate, *law.interval])
        change, low, high = (float(v) for v in 100.0 * np.expm1(rates))
    return PadTrend(
        girder=model.doc.id,
        support=model.pad_ids[i],
        visits=visits,
        law=law.law,
        change_per_year_percent=change,
        low95=low,
        high95=high,
        step_between=None,
    )


def _of_laws(
    model: GirderModel, found: Trend, estimates: list[VisitEstimate], dates: list[dt.date]
) -> list[str]:
    name = model.doc.id
    if len(dates) == 1:
        return [cautions.one_visit(name)]
    said = [cautions.two_visits(name)] if len(dates) == 2 else []
    for i, law in enumerate(found.laws):
        support = model.pad_ids[i]
        if not law.determined:
            said.append(cautions.rate_untold(name, support))
        elif law.scatter > 1.0:
            said.append(cautions.scattered(name, support, law.scatter))
        worst = _jump(estimates, i, law.rate if law.law == "drift" else 0.0)
        if worst is not None:
            change, at = worst
            said.append(cautions.jump(name, support, change, dates[at - 1], dates[at]))
    return said


def _jump(estimates: list[VisitEstimate], pad: int, rate: float) -> tuple[float, int] | None:
    """The largest change between neighbouring visits beyond the law's own, if past 3.29 of its sd.

    Returned as (relative change, later visit).
    """
    value = np.array([e.log_stiffness[pad] for e in estimates])
    sd = np.array([e.sd[pad] for e in estimates])
    beyond = np.diff(value) - rate * np.diff([e.time for e in estimates])
    z = beyond / np.hypot(sd[1:], sd[:-1])
    at = int(np.argmax(np.abs(z)))
    if abs(z[at]) <= SUSPECT:
        return None
    return float(np.expm1(value[at + 1] - value[at])), at + 1


# carried forward ---------------------------------------------------------------------------------


def forecast_years(span_of_visits: float) -> Floats:
    """Years from the last visit at which the utilisations are looked at."""
    return np.linspace(0.0, float(np.clip(2.0 * span_of_visits, *_HORIZON)), _TIMES)


def _seat_law(history: list[Settlement]) -> SeatLaw:
    times = np.array([_years(history[0].date, one.date) for one in history])
    return fit_seat(times, np.array([one.value for one in history]), np.array([one.sd for one in history]))


def _seat(model: GirderModel, support: str, law: SeatLaw, visits: int) -> SeatTrend:
    told = visits > 1 and np.isfinite(law.rate)
    low, high = law.interval
    return SeatTrend(
        girder=model.doc.id,
        support=support,
        visits=visits,
        settlement_mm=1e3 * law.last,
        sd_mm=1e3 * law.last_sd,
        moving=law.moving,
        rate_mm_per_year=1e3 * law.rate if told else None,
        low95=1e3 * low if told else None,
        high95=1e3 * high if told else None,
    )


def _of_seats(
    model: GirderModel, seats: dict[str, SeatLaw], histories: dict[str, list[Settlement]], last: dt.date
) -> list[str]:
    name = model.doc.id
    said = []
    for support, law in seats.items():
        if law.moving:
            said.append(cautions.seat_moves(name, support, *(1e3 * v for v in (law.rate, *law.interval))))
    single = [support for support, history in histories.items() if len(history) < 2]
    return (
        said
        + cautions.seats_without_rate(name, single)
        + cautions.seats_not_read(name, [s.id for s in model.doc.supports if s.id not in histories], last)
    )


def _spans(
    model: GirderModel,
    found: Trend,
    seats: dict[str, SeatLaw],
    latest: GirderFit,
    visits: tuple[float, dt.date],
) -> list[SpanTrend]:
    """Carry sections forward; `latest` has the girder's stiffness and its pads' creep, `visits` their years and end."""
    span_of_visits, last = visits
    girder = (latest.one("girder"), latest.one("sustained"))
    drops_now = np.zeros(model.n)
    for support, law in seats.items():
        drops_now[model.doc.support_index(support)] = law.last
    with tipping_named(model):
        rows = evaluate(model.effects, model.factors, *acting(model, found.now, drops_now, *girder))
    years = forecast_years(span_of_visits)
    if all(law.drift_weight == 0.0 for law in found.laws) and all(
        law.weight == 0.0 for law in seats.values()
    ):
        years = years[:1]
    future = pad_future(found, years, draws=FORECAST_DRAWS, seed=SEED)
    drops = np.zeros((*future.log_stiffness.shape[:2], model.n))  # (draws, times, n)
    rng = np.random.default_rng([SEED, 1])
    for support, law in seats.items():
        drops[:, :, model.doc.support_index(support)] = law.draws(years, FORECAST_DRAWS, rng)
    compliances, drops = acting(model, future.log_stiffness, drops, *girder)
    with tipping_named(model, "carried forward"):
        count = draws_worth(model, compliances, drops)
        some = (x[:count].reshape(-1, model.n) for x in (compliances, drops))
        drawn = evaluate_draws(model.effects, model.factors, *some)
    result = []
    for row, draws in zip(rows, drawn, strict=True):
        check = row.check
        result.append(
            SpanTrend(
                girder=model.doc.id,
                effect=check.effect,
                span=check.span + 1 if check.span >= 0 else None,
                support=model.doc.supports[check.support].id if check.support >= 0 else None,
                **_outlook(row.case.utilisation, draws.utilisation.reshape(count, -1), years, last),
            )
        )
    return result


def _outlook(now: float, utilisation: Floats, years: Floats, last: dt.date) -> dict[str, Any]:
    if not np.isfinite(now) or not np.all(np.isfinite(utilisation)):
        return {
            "utilisation_now": None,
            "status": "unknown",
            "probability_over_1_now": None,
            "median_crossing": None,
            "earliest_5_percent": None,
        }
    passed = crossing(utilisation, years, LIMIT)
    return {
        "utilisation_now": now,
        "status": status_of(now),
        "probability_over_1_now": float(passed.probability[0]),
        "median_crossing": None if passed.median is None else _reach(last, passed.median),
        "earliest_5_percent": None if passed.earliest is None else _reach(last, passed.earliest),
    }


# next visit --------------------------------------------------------------------------------------


def _next_visit(study: Study, as_of: dt.date, parts: list[GirderTrend]) -> tuple[dt.date, str, list[str]]:
    """The sooner of the owner's interval from the last visit and the earliest 5 % date; with its reason."""
    said = []
    last = study.visits[-1].date
    interval = study.bridge.visit_interval_years
    if interval is None:
        interval = DEFAULT_INTERVAL_YEARS
        said.append(cautions.assumed_interval(interval))
    due, reason = _reach(last, interval), f"the interval of {interval:g} years between visits"
    dated = [
        (row.earliest_5_percent, -(row.utilisation_now or 0.0), part.girder, row)
        for part in parts
        for row in part.spans
        if row.earliest_5_percent is not None and row.earliest_5_percent < due
    ]
    if dated:
        due, _, girder, row = min(dated, key=lambda one: one[:2])
        name = f"{girder}: {cautions.section_name(row.effect, row.span, row.support)}"
        chance = row.probability_over_1_now or 0.0
        reason = f"{name} reaches a 5 % chance of being over its factored capacity"
        if row.status == "over":
            reason = f"{name} is over its factored capacity"
        elif chance >= 0.05:
            reason = f"{name} has a {chance:.0%} chance of being over its factored capacity already"
    if due < dt.date.today():
        said.append(cautions.overdue(due))
    return due, reason, said


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
