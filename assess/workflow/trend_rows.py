"""Laws of pads and seats as the trend shows them."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.results import PadTrend, SeatTrend
from assess.trend import (
    Cut,
    PadLaw,
    SeatLaw,
    Trend,
    VisitEstimate,
    fit_seat,
    fit_trend,
    with_common_error,
)
from assess.trend.laws import Z95
from assess.workflow.building import GirderModel
from assess.workflow.dates import years_between
from assess.workflow.interventions import replaced, since_of
from assess.workflow.kept_fits import GirderFit
from assess.workflow.pads import cold_shift, corrected
from assess.workflow.supports import Settlement
from db.documents import VisitDoc

Floats = NDArray[np.float64]

WARMTH_SD = 0.005
"""Per K on ln k: what a pad without a coefficient may stiffen; common rubber between 0 and 30 degC (from memory)."""


def estimates_of(model: GirderModel, own: Sequence[tuple[VisitDoc, GirderFit]]) -> list[VisitEstimate]:
    """Fits brought to the reference temperature; pads without a coefficient share the visit's error instead."""
    known = [visit.pad_temperature for visit, _ in own if visit.pad_temperature is not None]
    usual = float(np.mean(known)) if known else 0.0
    blind = np.array([not corrected(model.doc.supports[i]) for i in model.pads], dtype=float)
    made = []
    for visit, fit in own:
        warmth = visit.pad_temperature
        off = 0.0 if warmth is None else abs(warmth - usual)
        made.append(with_common_error(_estimate(model, visit, fit, own[0][0].date), WARMTH_SD * off * blind))
    return made


def _estimate(model: GirderModel, visit: VisitDoc, fit: GirderFit, first: dt.date) -> VisitEstimate:
    shift = cold_shift(model.doc, list(model.pads), visit.pad_temperature).shift
    return VisitEstimate(
        time=years_between(first, visit.date),
        log_stiffness=fit.log_stiffness - shift,
        covariance=fit.covariance,
        information=fit.information,
        information_vector=fit.information_vector - fit.information @ shift,
        data_share=fit.data_share,
    )


def laws_of(model: GirderModel, estimates: list[VisitEstimate], dates: list[dt.date]) -> Trend:
    """Laws of the pads; log time counts from the day a pad was put in, replaced pads start anew."""
    cuts = [
        Cut(pad=model.pad_ids.index(one.support), time=years_between(dates[0], one.date))
        for one in replaced(model.bridge, model.doc.id)
    ]
    ages = [_age(model, support, dates[0]) for support in model.pad_ids]
    return fit_trend(
        estimates, model.prior.mean, model.prior.sd, model.prior.correlation, ages=np.array(ages), cuts=cuts
    )


def _age(model: GirderModel, support: str, first: dt.date) -> float:
    born = since_of(model.bridge, model.doc.id, support, ("replaced",)) or model.bridge.built
    return np.nan if born is None else years_between(born, first)


def pad_row(model: GirderModel, i: int, law: PadLaw, dates: list[dt.date]) -> PadTrend:
    """One pad as shown."""
    support = model.pad_ids[i]
    since = since_of(model.bridge, model.doc.id, support, ("replaced",))
    ranks = law.companion if law.determined else None
    change, low, high = _percent(law.rate, law.rate_sd) if law.determined else (None, None, None)
    step: tuple[float | None, ...] = (None, None, None)
    between = None
    if law.law == "step" and law.step_between is not None:
        step = _percent(law.step, law.step_sd)
        between = (dates[law.step_between[0]], dates[law.step_between[1]])
    born = since or model.bridge.built
    return PadTrend(
        girder=model.doc.id,
        support=support,
        visits=sum(since is None or date >= since for date in dates),
        law=law.law,
        change_per_year_percent=change,
        low95=low,
        high95=high,
        step_between=between,
        step_percent=step[0],
        step_low95=step[1],
        step_high95=step[2],
        weights=law.weights,
        alarm=law.alarm,
        p_value=law.p_value if law.determined else None,
        creep_since=born if "creep" in law.weights else None,
        sen_percent_per_year=None if ranks is None else float(100.0 * np.expm1(ranks.slope)),
        mann_kendall_p=None if ranks is None else ranks.p_value,
        since=since,
    )


def _percent(value: float, sd: float) -> tuple[float, float, float]:
    """A change of ln k with its 95 % interval, in per cent."""
    middle, low, high = (float(100.0 * np.expm1(value + z * sd)) for z in (0.0, -Z95, Z95))
    return middle, low, high


def seat_law(history: list[Settlement]) -> SeatLaw:
    """Law of one seat."""
    times = np.array([years_between(history[0].date, one.date) for one in history])
    return fit_seat(times, np.array([one.value for one in history]), np.array([one.sd for one in history]))


def seat_row(model: GirderModel, support: str, law: SeatLaw, history: list[Settlement]) -> SeatTrend:
    """One seat as shown."""
    told = len(history) > 1 and np.isfinite(law.rate)
    low, high = law.interval
    stepped = law.law == "step" and law.step_between is not None
    between = law.step_between if stepped else None
    return SeatTrend(
        girder=model.doc.id,
        support=support,
        visits=len(history),
        settlement_mm=1e3 * law.last,
        sd_mm=1e3 * law.last_sd,
        moving=law.moving,
        rate_mm_per_year=1e3 * law.rate if told else None,
        low95=1e3 * low if told else None,
        high95=1e3 * high if told else None,
        law=law.law,
        step_mm=1e3 * law.step if stepped else None,
        step_between=None if between is None else (history[between[0]].date, history[between[1]].date),
        since=since_of(model.bridge, model.doc.id, support, ("jacked", "shimmed")),
    )
