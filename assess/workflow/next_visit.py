"""When to visit next, why, and whether that day has passed."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Protocol

from assess.results import SpanTrend
from assess.workflow import cautions, trend_cautions
from assess.workflow.dates import reach
from assess.workflow.study import Study

DEFAULT_INTERVAL_YEARS = 2.0


class Part(Protocol):
    """What is asked of a girder's trend."""

    @property
    def girder(self) -> str:
        """Its id."""

    @property
    def spans(self) -> list[SpanTrend]:
        """Its rows."""


@dataclass(frozen=True, kw_only=True)
class NextVisit:
    """Date and reason of the next visit, whether it has passed, and what is to be said of it."""

    date: dt.date
    reason: str
    overdue: bool
    cautions: list[str] = field(default_factory=list)


def interval_of(study: Study) -> float:
    """The owner's interval between visits, years; the usual one where the file gives none."""
    given = study.bridge.visit_interval_years
    return DEFAULT_INTERVAL_YEARS if given is None else given


def is_stale(study: Study, last: dt.date, today: dt.date) -> bool:
    """Whether a girder's last calibrated visit lies further back than the interval between visits."""
    return reach(last, interval_of(study)) < today


def next_visit(study: Study, parts: Sequence[Part], today: dt.date) -> NextVisit:
    """The soonest of three days, with its reason.

    The owner's interval from the last visit; the day a section reaches a 5 % chance of being over; the day the 95 %
    interval of a section first reaches from below watch to above the limit, so that the forecast no longer tells
    within from over. Where it does so at the last visit already another visit alone does not mend it, and a caution
    says so instead.
    """
    last, interval = study.visits[-1].date, interval_of(study)
    due, reason = reach(last, interval), f"the interval of {interval:g} years between visits"
    said = [] if study.bridge.visit_interval_years is not None else [cautions.assumed_interval(interval)]
    rows = [(part.girder, row) for part in parts for row in part.spans]
    wide = [pair for pair in rows if pair[1].too_wide_from is not None and pair[1].too_wide_from > last]
    first = min(wide, key=lambda pair: (pair[1].too_wide_from, _less_used(pair[1])), default=None)
    if first is not None and first[1].too_wide_from is not None and first[1].too_wide_from < due:
        due = first[1].too_wide_from
        reason = f"the forecast of {_name(*first)} no longer tells within from over"
    dated = [pair for pair in rows if pair[1].earliest_5_percent is not None]
    soon = min(dated, key=lambda pair: (pair[1].earliest_5_percent, _less_used(pair[1])), default=None)
    if soon is not None and soon[1].earliest_5_percent is not None and soon[1].earliest_5_percent < due:
        due, reason = soon[1].earliest_5_percent, _of_chance(*soon)
    said += _blind_now(parts, last)
    overdue = due < today
    return NextVisit(
        date=due, reason=reason, overdue=overdue, cautions=said + ([cautions.overdue(due)] if overdue else [])
    )


def _of_chance(girder: str, row: SpanTrend) -> str:
    name, chance = _name(girder, row), row.probability_over_1_now or 0.0
    if row.status == "over":
        return f"{name} is over its factored capacity"
    if chance >= 0.05:
        return f"{name} has a {chance:.0%} chance of being over its factored capacity already"
    return f"{name} reaches a 5 % chance of being over its factored capacity"


def _blind_now(parts: Sequence[Part], last: dt.date) -> list[str]:
    """Cautions on girders whose estimate is too wide at the last visit already: the most used of such rows."""
    said = []
    for part in parts:
        own = [row for row in part.spans if row.too_wide_from is not None and row.too_wide_from <= last]
        if own:
            said.append(trend_cautions.too_wide(_name(part.girder, min(own, key=_less_used))))
    return said


def _less_used(row: SpanTrend) -> float:
    return -(row.utilisation_now or 0.0)


def _name(girder: str, row: SpanTrend) -> str:
    return f"{girder}: {cautions.section_name(row.effect, row.span, row.support)}"
