"""What the record hands out: plain frozen values, no ORM objects leave `db`."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field
from typing import Any

from db.documents import BridgeDoc


@dataclass(frozen=True, kw_only=True)
class BridgeSummary:
    """A line of `bridge list`."""

    bridge: str
    name: str
    revision: int
    visits: int


@dataclass(frozen=True, kw_only=True)
class VisitSummary:
    """A line of `visit list`."""

    visit: dt.date
    readings: int
    states: int


@dataclass(frozen=True, kw_only=True)
class KeptBridge:
    """A bridge file as kept, with its revision number."""

    document: BridgeDoc
    revision: int


@dataclass(frozen=True, kw_only=True)
class Taken:
    """What became of a file handed in: kept now (`added`), in the record already, or only looked at (`tried`).

    `queries` is what to look at again in it: unusual, not refused.
    """

    added: bool
    revision: int | None = None
    tried: bool = False
    queries: tuple[str, ...] = ()


@dataclass(frozen=True, kw_only=True)
class KeptResult:
    """A calibration, an assessment or a trend with all that is needed to make it again.

    `result` is JSON: plain dicts, lists, floats, strings. `visit` is None for an assessment of nominal pads.
    `evidence` is the digest of what the record held then (`Record.evidence`); None for a look into the past.
    """

    kind: str  # "calibration" | "assessment" | "trend"
    bridge: str
    visit: dt.date | None
    revision: int
    input_digest: str
    options: dict[str, Any] = field(default_factory=dict)
    seed: int | None = None
    version: str
    result: dict[str, Any] = field(default_factory=dict)
    made_at: dt.datetime | None = None  # UTC, set by the record
    evidence: str | None = None


@dataclass(frozen=True, kw_only=True)
class NewIntervention:
    """Something done to a pad: "replaced", "jacked" or "shimmed"."""

    date: dt.date
    kind: str
    girder: str
    support: str
    remark: str = ""


@dataclass(frozen=True, kw_only=True)
class KeptIntervention(NewIntervention):
    """An intervention as the record keeps it, under its number."""

    number: int


@dataclass(frozen=True, kw_only=True)
class Finding:
    """An exceedance that was found: what and where (`subject`), by which evidence, and by when it wants a decision.

    `details` are kept with the action that it opens, `figures` with the event.
    """

    subject: str
    date: dt.date
    visit: dt.date | None
    evidence: str
    severity: str
    due: dt.date
    text: str
    figures: dict[str, Any]
    details: dict[str, Any]


@dataclass(frozen=True, kw_only=True)
class ActionEvent:
    """What became of an action: "opened", "found", "noted" or "closed"."""

    kind: str
    date: dt.date
    visit: dt.date | None
    evidence: str
    severity: str | None
    due: dt.date | None
    text: str
    figures: dict[str, Any]
    written_by: str


@dataclass(frozen=True, kw_only=True)
class KeptAction:
    """An action with all its events, the opening first."""

    number: int
    bridge: str
    subject: str
    turn: int
    reopens: int | None
    details: dict[str, Any]
    events: tuple[ActionEvent, ...]

    @property
    def closed(self) -> ActionEvent | None:
        """The event that closed it."""
        return next((event for event in self.events if event.kind == "closed"), None)

    @property
    def findings(self) -> list[ActionEvent]:
        """The opening and the further findings."""
        return [event for event in self.events if event.severity is not None]

    @property
    def due(self) -> dt.date:
        """The soonest day that any finding asked for."""
        return min(event.due for event in self.findings if event.due is not None)

    @property
    def evidence(self) -> set[str]:
        """Digests of all that was looked at in it."""
        return {event.evidence for event in self.events}

    def knows(self, finding: Finding) -> bool:
        """Whether the same was found before from the same evidence."""
        return any(
            (event.evidence, event.severity) == (finding.evidence, finding.severity)
            for event in self.findings
        )


@dataclass(frozen=True, kw_only=True)
class BridgeState:
    """What is kept of a bridge, for a table of all: its newest revision, visits and calibration."""

    bridge: str
    name: str
    revision: int
    digest: str
    evidence: str
    last_visit: dt.date | None
    last_tested: dt.date | None
    last_calibrated: dt.date | None
    calibrated_revision: int | None
