"""What `bedstone trend` says."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

from assess.results.actions import ActionResult


@dataclass(frozen=True, kw_only=True)
class PadTrend:
    """A pad over the visits; change per year of its stiffness in per cent with its 95 % interval."""

    girder: str
    support: str
    visits: int
    law: str
    change_per_year_percent: float | None
    low95: float | None
    high95: float | None
    step_between: tuple[dt.date, dt.date] | None


@dataclass(frozen=True, kw_only=True)
class SeatTrend:
    """A seat over the visits: mm since the datum, downward, and its rate with the 95 % interval."""

    girder: str
    support: str
    visits: int
    settlement_mm: float
    sd_mm: float
    moving: bool
    rate_mm_per_year: float | None
    low95: float | None
    high95: float | None


@dataclass(frozen=True, kw_only=True)
class SpanTrend:
    """A governing section carried forward."""

    girder: str
    effect: str
    span: int | None
    support: str | None
    utilisation_now: float | None
    status: str  # "within" | "watch" | "over" | "unknown"
    probability_over_1_now: float | None
    median_crossing: dt.date | None
    earliest_5_percent: dt.date | None


@dataclass(frozen=True, kw_only=True)
class TrendResult:
    """`trend --json`."""

    bridge: str
    as_of: dt.date
    actions: list[ActionResult] = field(default_factory=list)  # the open ones of the bridge
    pads: list[PadTrend]
    spans: list[SpanTrend]
    seats: list[SeatTrend] = field(default_factory=list)
    next_visit_by: dt.date | None
    next_visit_reason: str
    cautions: list[str]
