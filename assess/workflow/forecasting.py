"""Governing sections carried forward by draws of pads, seats and losses together."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from assess.capacity import evaluate, evaluate_draws
from assess.results import Fan, Share, SpanTrend
from assess.trend import SeatLaw, Trend, crossing, pad_future, variance_shares
from assess.workflow.building import GirderModel
from assess.workflow.dates import reach
from assess.workflow.lifting import draws_worth, tipping_named
from assess.workflow.losses_ahead import PlateLoss, between, grow, model_on, spread_of
from assess.workflow.status import LIMIT, WATCH, status_of
from assess.workflow.study import SEED
from assess.workflow.supports import acting

Floats = NDArray[np.float64]

_TIMES = 25
_HORIZON = (10.0, 30.0)  # years looked ahead: at least, at most; in between twice the span of the visits
_SHARES_AT = 10.0  # years ahead that the shares are taken at
_TOLD = 0.01  # of the variance: the least share that is named
_QUANTILES = (0.025, 0.25, 0.5, 0.75, 0.975)


@dataclass(frozen=True, kw_only=True)
class Ahead:
    """What is carried forward of one girder.

    Attributes
    ----------
    trend, seats, losses : laws of its pads, of its seats by support, and of the plates
    log_factor, log_sustained : the girder's stiffness and its pads' creep, as the last visit has them
    span, last : years from the first visit to the last, and the day of that
    """

    trend: Trend
    seats: dict[str, SeatLaw]
    losses: list[PlateLoss]
    log_factor: float
    log_sustained: float
    span: float
    last: dt.date

    @property
    def moves(self) -> bool:
        """Whether anything goes on after the last visit."""
        return (
            any(law.moving > 0.0 for law in self.trend.laws)
            or any(law.weight > 0.0 for law in self.seats.values())
            or grow(self.losses)
        )


@dataclass(frozen=True, kw_only=True)
class _Drawn:
    """Draws: ln k (draws, times, q), seat drops (draws, times, n), pace of the losses (draws,), years (times,)."""

    log_stiffness: Floats
    drops: Floats
    pace: Floats
    years: Floats


def forecast_years(span_of_visits: float) -> Floats:
    """Years from the last visit at which the utilisations are looked at."""
    return np.linspace(0.0, float(np.clip(2.0 * span_of_visits, *_HORIZON)), _TIMES)


def spans_ahead(model: GirderModel, ahead: Ahead, *, draws: int) -> list[SpanTrend]:
    """Every row of a girder, now and carried forward."""
    now = np.zeros(model.n)
    for support, law in ahead.seats.items():
        now[model.doc.support_index(support)] = law.last
    crept = model.creeping(ahead.log_sustained)
    with tipping_named(model):
        acts = acting(model, ahead.trend.now, now, ahead.log_factor)
        rows = evaluate(crept.effects, model.factors, *acts)
    drawn = _draw(model, ahead, draws)
    used = _used(model, ahead, drawn)
    names, inputs = _inputs(model, ahead, drawn, len(used[0]))
    result = []
    for row, utilisation in zip(rows, used, strict=True):
        check = row.check
        result.append(
            SpanTrend(
                girder=model.doc.id,
                effect=check.effect,
                span=check.span + 1 if check.span >= 0 else None,
                support=model.doc.supports[check.support].id if check.support >= 0 else None,
                **_outlook(row.case.utilisation, utilisation, drawn.years, ahead.last),
                **_shares(names, inputs, utilisation, drawn.years, ahead.last),
            )
        )
    return result


def _draw(model: GirderModel, ahead: Ahead, draws: int) -> _Drawn:
    years = forecast_years(ahead.span) if ahead.moves else np.zeros(1)
    future = pad_future(ahead.trend, years, draws=draws, seed=SEED)
    drops = np.zeros((draws, years.size, model.n))
    rng = np.random.default_rng([SEED, 1])
    for support, law in ahead.seats.items():
        drops[:, :, model.doc.support_index(support)] = law.draws(years, draws, rng)
    pace = 1.0 + spread_of(ahead.losses) * rng.standard_normal(draws)
    return _Drawn(log_stiffness=future.log_stiffness, drops=drops, pace=np.clip(pace, 0.0, 3.0), years=years)


def _used(model: GirderModel, ahead: Ahead, drawn: _Drawn) -> list[Floats]:
    """Utilisation of every row (draws, times), as many draws as are worth their time."""
    if drawn.years.size == 1 or not grow(ahead.losses):
        return _evaluated(model, ahead, drawn, None)
    end = float(drawn.years[-1])
    days = ahead.last, reach(ahead.last, end)
    first = _evaluated(model_on(model, ahead.losses, days[0]), ahead, drawn, None)
    count = len(first[0])
    later = _evaluated(model_on(model, ahead.losses, days[1]), ahead, drawn, count)
    count = len(later[0])
    share = drawn.pace[:count, None] * drawn.years / end
    return [between(one[:count], other, share) for one, other in zip(first, later, strict=True)]


def _evaluated(model: GirderModel, ahead: Ahead, drawn: _Drawn, most: int | None) -> list[Floats]:
    model = model.creeping(ahead.log_sustained)
    compliances, drops = acting(model, drawn.log_stiffness[:most], drawn.drops[:most], ahead.log_factor)
    with tipping_named(model, "carried forward"):
        count = draws_worth(model, compliances, drops)
        some = (x[:count].reshape(-1, model.n) for x in (compliances, drops))
        found = evaluate_draws(model.effects, model.factors, *some)
    return [one.utilisation.reshape(count, -1) for one in found]


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
    quantiles = np.quantile(utilisation, _QUANTILES, axis=0)
    wide = np.flatnonzero((quantiles[0] < WATCH) & (quantiles[-1] > LIMIT))
    found = {
        "utilisation_now": now,
        "status": status_of(now),
        "probability_over_1_now": float(passed.probability[0]),
        "median_crossing": None if passed.median is None else reach(last, passed.median),
        "earliest_5_percent": None if passed.earliest is None else reach(last, passed.earliest),
        "too_wide_from": reach(last, years[wide[0]]) if wide.size else None,
    }
    if years.size > 1:
        names = ("low95", "low50", "median", "high50", "high95")
        found["fan"] = Fan(
            dates=[reach(last, t) for t in years],
            probability_over_watch=crossing(utilisation, years, WATCH).probability.tolist(),
            probability_over_limit=passed.probability.tolist(),
            **{name: line.tolist() for name, line in zip(names, quantiles, strict=True)},
        )
    return found


def _inputs(
    model: GirderModel, ahead: Ahead, drawn: _Drawn, count: int
) -> tuple[list[tuple[str, str | None]], Floats]:
    """What varies at the day of the shares: names, and draws (count, inputs)."""
    at = _day_of_shares(drawn.years)
    names: list[tuple[str, str | None]] = [("pad", support) for support in model.pad_ids]
    columns = [drawn.log_stiffness[:count, at]]
    for support in ahead.seats:
        names.append(("seat", support))
        columns.append(drawn.drops[:count, at, [model.doc.support_index(support)]])
    if grow(ahead.losses):
        names.append(("loss", None))
        columns.append(drawn.pace[:count, None])
    return names, np.hstack(columns)


def _day_of_shares(years: Floats) -> int:
    return int(np.searchsorted(years, _SHARES_AT + 1e-9, side="right") - 1)


def _shares(
    names: Sequence[tuple[str, str | None]], inputs: Floats, utilisation: Floats, years: Floats, last: dt.date
) -> dict[str, Any]:
    at = _day_of_shares(years)
    if not np.all(np.isfinite(utilisation[:, at])) or inputs.shape[1] == 0:
        return {}
    told = zip(names, variance_shares(inputs, utilisation[:, at]).tolist(), strict=True)
    shares = [Share(what=what, support=support, share=share) for (what, support), share in told]
    kept = sorted((one for one in shares if abs(one.share) >= _TOLD), key=lambda one: -one.share)
    return {"shares_on": reach(last, years[at]), "shares": kept} if kept else {}
