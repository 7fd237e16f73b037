"""What `bedstone network` says."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass


@dataclass(frozen=True, kw_only=True)
class NetworkRow:
    """A bridge among all: its governing section, what is overdue or unknown of it, its dates.

    `status` is "unknown" where the figures are overdue, stale or of nominal pads, unless they say "over".
    The section is the one most likely over 1, of those alike the most used; the dates are those of `soonest_section`.
    """

    rank: int
    bridge: str
    name: str
    status: str
    first: list[str]  # what is overdue or unknown: why it stands at the top
    girder: str | None
    section: str | None
    utilisation: float | None
    utilisation_low95: float | None
    utilisation_high95: float | None
    probability_over_1: float | None
    soonest_section: str | None
    median_crossing: dt.date | None
    earliest_5_percent: dt.date | None
    calibration_visit: dt.date | None
    last_visit: dt.date | None
    next_visit_by: dt.date | None
    visit_days_overdue: int
    open_actions: int
    overdue_actions: int
    action_days_overdue: int  # of the one that is overdue longest


@dataclass(frozen=True, kw_only=True)
class NetworkResult:
    """`network --json`."""

    as_of: dt.date
    version: str
    computed: int  # bridges whose result was made now; the others were kept
    bridges: list[NetworkRow]
    cautions: list[str]
