"""What `bedstone action` says, and what every other output says of actions first."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field


@dataclass(frozen=True, kw_only=True)
class ActionOption:
    """Something that could be done; `command` computes its effect."""

    option: str  # "monitor" | "restrict" | "shim" | "jack" | "replace" | "prop"
    does: str
    command: str


@dataclass(frozen=True, kw_only=True)
class ActionEventResult:
    """What became of an action: "opened", "found" again, "noted" or "closed"."""

    kind: str
    date: dt.date
    visit: dt.date | None
    severity: str | None
    text: str
    figures: dict[str, object]
    written_by: str
    evidence: str


@dataclass(frozen=True, kw_only=True)
class ActionResult:
    """An action: what exceeds where, who decides by when, what may be done, and the reading that will close it.

    `severity` is the gravest found so far: "over", "uplift", "rival", "may_be_over", "pad_over" or "foreseen".
    """

    action: int
    bridge: str
    girder: str
    where: str
    severity: str
    finding: str  # the latest one, in words
    opened_on: dt.date
    found_by: str
    visit: dt.date | None
    input_digest: str
    owner_role: str
    due: dt.date
    days_overdue: int  # 0 where it is not, and once it is closed
    escalation: str
    status: str  # "open" | "overdue" | "closed"
    check_reading: str
    options: list[ActionOption]
    reopens: int | None = None
    closed_on: dt.date | None = None
    closed_by: str | None = None
    closing_evidence: str | None = None
    closed_although: str | None = None
    events: list[ActionEventResult] = field(default_factory=list)
