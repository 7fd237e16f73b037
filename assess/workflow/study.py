"""What is asked about one bridge: its file, its visits and its kept calibrations, fetched once."""

from __future__ import annotations

import datetime as dt
import hashlib
from collections.abc import Callable
from dataclasses import dataclass, field, replace

from assess import __version__
from assess.workflow.building import GirderModel
from assess.workflow.sections import last_loss
from db.documents import BridgeDoc, VisitDoc
from db.errors import BedstoneError
from db.intervention_doc import InterventionDoc
from db.records import KeptBridge, KeptIntervention, KeptResult
from db.store import Record

Progress = Callable[[str, int, int], None]
"""Called with what is being done, how much is done, and how much there is in all."""

VERSION = __version__
SEED = 1
DRAWS = 4000


def quiet(what: str, done: int, total: int) -> None:
    """Show no progress."""


@dataclass(kw_only=True)
class Study:
    """One bridge of a record, with its girders built as they are needed."""

    kept: KeptBridge
    visits: list[VisitDoc]
    calibrations: list[KeptResult]
    interventions: list[KeptIntervention] = field(default_factory=list)
    evidence: str = ""  # digest of what the record held when this was fetched
    _models: dict[tuple[str, dt.date], GirderModel] = field(default_factory=dict)

    @classmethod
    def fetch(cls, record: Record, bridge: str) -> Study:
        """Fetch a bridge with all that is kept of it."""
        held = record.evidence(bridge)  # first: what comes in between makes a result stale, never current
        done = record.interventions(bridge)
        return cls(
            evidence=held,
            interventions=done,
            kept=_with_interventions(record.bridge(bridge), done),
            visits=record.visit_docs(bridge),
            calibrations=record.results(bridge, "calibration"),
        )

    @property
    def bridge(self) -> BridgeDoc:
        """The newest revision of the bridge file."""
        return self.kept.document

    def model(self, girder: str, as_of: dt.date | None = None) -> GirderModel:
        """A girder line with the losses measured up to a day (all for None), built once for each state of them."""
        key = girder, last_loss(self.bridge, as_of) or dt.date.min
        if key not in self._models:
            self._models[key] = GirderModel(self.bridge, self.bridge.girder(girder), key[1])
        return self._models[key]

    def visit(self, date: dt.date) -> VisitDoc:
        """The visit of a day; BedstoneError that lists the days if there is none."""
        for visit in self.visits:
            if visit.date == date:
                return visit
        known = ", ".join(v.date.isoformat() for v in self.visits) or "none yet"
        raise BedstoneError(
            f"{self.bridge.id} has no visit on {date.isoformat()}", field="--visit", remedy=f"visits: {known}"
        )

    def until(self, date: dt.date | None) -> list[VisitDoc]:
        """All visits up to a day, all of them for None."""
        return [visit for visit in self.visits if date is None or visit.date <= date]

    def digest(self, *parts: str) -> str:
        """Digest of the bridge file and of whatever else a result rests on."""
        told = [f"{one.date} {one.kind} {one.girder!r} {one.support!r}" for one in self.interventions]
        return digest_of(self.bridge.digest, *told, *parts)


def _with_interventions(kept: KeptBridge, told: list[KeptIntervention]) -> KeptBridge:
    """The bridge file with what the record was told of its pads, by date; the very same in both counts once."""
    document = kept.document
    known = {(one.girder, one.support, one.kind, one.date) for one in document.interventions}
    more = [
        InterventionDoc(
            date=one.date, kind=one.kind, girder=one.girder, support=one.support, remark=one.remark
        )
        for one in told
        if (one.girder, one.support, one.kind, one.date) not in known
    ]
    if not more:
        return kept
    every = tuple(sorted([*document.interventions, *more], key=lambda one: one.date))
    return replace(kept, document=replace(document, interventions=every))


def digest_of(*parts: str) -> str:
    """sha256 over parts, each ended by a newline."""
    return hashlib.sha256("".join(f"{part}\n" for part in parts).encode()).hexdigest()


def is_test(visit: VisitDoc, state: str) -> bool:
    """Tell whether a load state is a test state: one with a vehicle."""
    return visit.state(state).vehicle is not None


def telling_readings(visit: VisitDoc, girder: str | None = None) -> int:
    """Number of readings that tell a stiffness, of one girder or of all: all but seats in the permanent state."""
    return sum(
        (is_test(visit, reading.state) or reading.quantity != "settlement")
        and girder in (None, reading.girder)
        for reading in visit.readings
    )
