"""Every sentence of caution on laws of change and forecasts."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping, Sequence
from typing import Protocol

import numpy as np

from assess.calibrate import SUSPECT
from assess.results import SpanTrend
from assess.trend import PadLaw, SeatLaw, Trend, VisitEstimate
from assess.workflow import cautions
from assess.workflow.building import GirderModel
from assess.workflow.supports import Settlement


class Part(Protocol):
    """What is asked of a girder's trend."""

    @property
    def spans(self) -> list[SpanTrend]:
        """Its rows."""


def too_wide(name: str) -> str:
    """Caution: an estimate that tells nothing apart already."""
    return (
        f"{name}: the 95 % interval reaches from below 0.9 to above 1 at the last visit already: within and over cannot be told "
        "apart; more or better readings are wanted, not only another visit."
    )


def far(parts: Sequence[Part], limit: dt.date) -> list[str]:
    """Caution: dates further ahead than twice the span of the visits."""
    dates = [d for p in parts for s in p.spans for d in (s.median_crossing, s.earliest_5_percent)]
    return [cautions.far_extrapolation(limit)] if any(d is not None and d > limit for d in dates) else []


def of_laws(
    model: GirderModel, found: Trend, estimates: Sequence[VisitEstimate], dates: Sequence[dt.date]
) -> list[str]:
    """Cautions on the pads of a girder."""
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
        if law.alarm == "stiffer":
            said.append(_stiffer(name, support))
        said += _of_ranks(name, support, law)
        if law.law == "step" and law.step_between is not None:
            before, after = (dates[v] for v in law.step_between)
            said.append(cautions.jump(name, support, float(np.expm1(law.step)), before, after))
        else:
            worst = _jump(estimates, i, law)
            if worst is not None:
                change, at = worst
                said.append(cautions.jump(name, support, change, dates[at - 1], dates[at]))
    return said


def _stiffer(girder: str, support: str) -> str:
    return (
        f'{girder}: the pad at "{support}" became stiffer: a stiffer pad draws reaction and blocks movement and rotation; it is a '
        "change to look into, not an improvement."
    )


def _of_ranks(girder: str, support: str, law: PadLaw) -> list[str]:
    """Caution: the ranks of the visits point the other way than the law."""
    ranks = law.companion
    if law.law not in ("drift", "creep") or ranks is None or ranks.slope * law.rate >= 0.0:
        return []
    said = (
        f'{girder}: the pad at "{support}": the Theil-Sen slope ({np.expm1(ranks.slope):+.2%} a year) points the other way than the '
        "law: one visit may carry it; look at the readings."
    )
    return [said]


def _jump(estimates: Sequence[VisitEstimate], pad: int, law: PadLaw) -> tuple[float, int] | None:
    """The largest change between neighbouring visits beyond the law's own, if past 3.29 of its sd.

    Visits that say nothing of the pad are passed over. Returned as (relative change, later visit).
    """
    told = [v for v, one in enumerate(estimates) if one.data_share[pad] > 0.0]
    if len(told) < 2 or not law.told.size:
        return None
    rate = law.rate if law.law != "steady" else 0.0
    value = np.array([estimates[v].log_stiffness[pad] for v in told])
    sd = np.array([estimates[v].sd[pad] for v in told])
    beyond = np.diff(value) - rate * np.diff([estimates[v].time for v in told])
    z = beyond / np.hypot(sd[1:], sd[:-1])
    at = int(np.argmax(np.abs(z)))
    if abs(z[at]) <= SUSPECT:
        return None
    return float(np.expm1(value[at + 1] - value[at])), told[at + 1]


def of_seats(
    model: GirderModel, seats: Mapping[str, SeatLaw], histories: Mapping[str, list[Settlement]], last: dt.date
) -> list[str]:
    """Cautions on the seats of a girder."""
    name = model.doc.id
    said = []
    for support, law in seats.items():
        if law.law == "step" and law.step_between is not None:
            before, after = (histories[support][v].date for v in law.step_between)
            said.append(_seat_stepped(name, support, 1e3 * law.step, before, after))
        elif law.moving:
            said.append(cautions.seat_moves(name, support, *(1e3 * v for v in (law.rate, *law.interval))))
    single = [support for support, history in histories.items() if len(history) < 2]
    return (
        said
        + cautions.seats_without_rate(name, single)
        + cautions.seats_not_read(name, [s.id for s in model.doc.supports if s.id not in histories], last)
    )


def _seat_stepped(girder: str, support: str, step: float, before: dt.date, after: dt.date) -> str:
    way = "down" if step > 0.0 else "up"
    return (
        f'{girder}: the seat at "{support}" went {abs(step):.2g} mm {way} between {before} and {after} and is held where it is now; '
        "find out what happened."
    )
