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
    """A calibration or an assessment with all that is needed to make it again.

    `result` is JSON: plain dicts, lists, floats, strings. `visit` is None for an assessment of nominal pads.
    """

    kind: str  # "calibration" | "assessment"
    bridge: str
    visit: dt.date | None
    revision: int
    input_digest: str
    options: dict[str, Any] = field(default_factory=dict)
    seed: int | None = None
    version: str
    result: dict[str, Any] = field(default_factory=dict)
    made_at: dt.datetime | None = None  # UTC, set by the record
