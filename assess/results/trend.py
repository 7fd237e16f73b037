"""What `bedstone trend` says."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

from assess.results.actions import ActionResult


@dataclass(frozen=True, kw_only=True)
class PadTrend:
    """A pad over the visits; change per year of its stiffness in per cent with its 95 % interval.

    Attributes
    ----------
    change_per_year_percent, low95, high95 : mean over all visits, whatever the law
    step_between : visits that the step lies between; None for any other law
    step_percent, step_low95, step_high95 : its height
    weights : Akaike weight of each law tried
    alarm : "softer" | "stiffer"; None where no change is told
    p_value : of the test for any change
    creep_since : the day that log time counts from; None where creep was not tried
    sen_percent_per_year, mann_kendall_p : what ranks alone say
    since : the day the pad was put in, where it has been replaced
    """

    girder: str
    support: str
    visits: int
    law: str
    change_per_year_percent: float | None
    low95: float | None
    high95: float | None
    step_between: tuple[dt.date, dt.date] | None
    step_percent: float | None = None
    step_low95: float | None = None
    step_high95: float | None = None
    weights: dict[str, float] = field(default_factory=dict)
    alarm: str | None = None
    p_value: float | None = None
    creep_since: dt.date | None = None
    sen_percent_per_year: float | None = None
    mann_kendall_p: float | None = None
    since: dt.date | None = None


@dataclass(frozen=True, kw_only=True)
class SeatTrend:
    """A seat over the visits: mm since the datum, downward, and its rate with the 95 % interval; step as for pads."""

    girder: str
    support: str
    visits: int
    settlement_mm: float
    sd_mm: float
    moving: bool
    rate_mm_per_year: float | None
    low95: float | None
    high95: float | None
    law: str = "steady"
    step_mm: float | None = None
    step_between: tuple[dt.date, dt.date] | None = None
    since: dt.date | None = None


@dataclass(frozen=True, kw_only=True)
class LossTrend:
    """A plate's loss of thickness, all its measured faces together: mm, and mm a year with the 95 % interval."""

    section: str
    plate: str
    visits: int
    loss_mm: float
    rate_mm_per_year: float | None
    low95: float | None
    high95: float | None


@dataclass(frozen=True, kw_only=True)
class Fan:
    """A utilisation carried forward: quantiles, and probabilities of being past watch and limit by then."""

    dates: list[dt.date]
    low95: list[float]
    low50: list[float]
    median: list[float]
    high50: list[float]
    high95: list[float]
    probability_over_watch: list[float]
    probability_over_limit: list[float]


@dataclass(frozen=True, kw_only=True)
class Share:
    """What drives a forecast: "pad" or "seat" at a support, or "loss", with its share of the variance."""

    what: str
    support: str | None
    share: float


@dataclass(frozen=True, kw_only=True)
class SpanTrend:
    """A governing section carried forward.

    Attributes
    ----------
    status : of the estimate at the last visit; "unknown" where there is none, and for "within" once the next visit is
        overdue
    too_wide_from : when the 95 % interval first reaches from below watch to above the limit
    shares_on, shares : day of the shares, and what the spread comes from; nothing where nothing moves
    """

    girder: str
    effect: str
    span: int | None
    support: str | None
    utilisation_now: float | None
    status: str  # "within" | "watch" | "over" | "unknown"
    probability_over_1_now: float | None
    median_crossing: dt.date | None
    earliest_5_percent: dt.date | None
    too_wide_from: dt.date | None = None
    fan: Fan | None = None
    shares_on: dt.date | None = None
    shares: list[Share] = field(default_factory=list)


@dataclass(frozen=True, kw_only=True)
class TrendResult:
    """`trend --json`."""

    bridge: str
    as_of: dt.date
    actions: list[ActionResult] = field(default_factory=list)  # the open ones of the bridge
    pads: list[PadTrend]
    spans: list[SpanTrend]
    seats: list[SeatTrend] = field(default_factory=list)
    losses: list[LossTrend] = field(default_factory=list)
    next_visit_by: dt.date | None
    next_visit_reason: str
    today: dt.date | None = None
    overdue: bool = False
    cautions: list[str]
