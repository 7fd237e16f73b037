"""The record as the rest of the program sees it."""

from __future__ import annotations

import contextlib
import datetime as dt
from collections.abc import Iterable, Iterator
from typing import Any

from sqlalchemy import Engine
from sqlalchemy.orm import Session

from db.documents import BridgeDoc, VisitDoc
from db.exchange import check_visit, parse_bridge
from db.exchange.files import digest_of
from db.records import (
    BridgeState,
    BridgeSummary,
    Finding,
    KeptAction,
    KeptBridge,
    KeptIntervention,
    KeptResult,
    NewIntervention,
    Taken,
    VisitSummary,
)
from db.schema import RevisionRow
from db.store import actions, bridges, interventions, network, results, visits
from db.store.evidence import evidence
from db.store.faults import damaged, told_plainly

WRITES = "bedstone_writes"
"""Execution option of a connection that is going to write."""


class Record:
    """An open record; `open_record` makes one.

    Attributes
    ----------
    name : str
        The file or URL, for errors; without a password.
    created : bool
        Whether it was made when it was opened.

    Every method raises BedstoneError if the database fails or the question has no answer.
    """

    def __init__(self, engine: Engine, *, name: str, created: bool) -> None:
        self.name = name
        self.created = created
        self._readers = engine
        self._writers = engine.execution_options(**{WRITES: True})
        self._parsed: dict[str, BridgeDoc] = {}

    @contextlib.contextmanager
    def transaction(self) -> Iterator[Session]:
        """Hand out a session that writes; the only place that commits, and only if nothing was raised."""
        with told_plainly(self.name), Session(self._writers) as session, session.begin():
            yield session

    @contextlib.contextmanager
    def reading(self) -> Iterator[Session]:
        """Hand out a session that sees one state of the record and writes nothing."""
        try:
            with told_plainly(self.name), Session(self._readers, autoflush=False) as session:
                yield session
        except (ValueError, TypeError) as error:  # a cell that is not what its column holds
            raise damaged(self.name, "a row in it cannot be read") from error

    def add_bridge(self, doc: BridgeDoc) -> Taken:
        """Keep a bridge file; the newest one again is not kept twice."""
        with self.transaction() as session:
            return bridges.add_revision(session, doc)

    def bridges(self) -> list[BridgeSummary]:
        """Return one line a bridge."""
        with self.reading() as session:
            return bridges.summaries(session)

    def bridge(self, bridge: str, revision: int | None = None) -> KeptBridge:
        """Return a bridge file as kept, the newest revision if none is named."""
        with self.reading() as session:
            row = bridges.find_revision(session, bridges.find_bridge(session, bridge), revision)
            return KeptBridge(document=self._document(row), revision=row.number)

    def log_visit(self, doc: VisitDoc) -> Taken:
        """Keep a visit whole; the same file again is not kept twice, another one for that day is refused."""
        self.bridge(doc.bridge)  # parsed before the record is held for writing
        with self.transaction() as session:
            bridge = bridges.find_bridge(session, doc.bridge, lock=True)
            revision = bridges.find_revision(session, bridge)
            if visits.kept_already(session, bridge, doc):
                return Taken(added=False, revision=revision.number)
            check_visit(doc, self._document(revision), today=dt.date.today(), file="visit file")
            return visits.add_visit(session, bridge, revision, doc)

    def visits(self, bridge: str) -> list[VisitSummary]:
        """Return one line a visit, by date."""
        with self.reading() as session:
            return visits.summaries(session, bridges.find_bridge(session, bridge))

    def visit(self, bridge: str, date: dt.date) -> VisitDoc:
        """Return a visit; superseded and withdrawn readings are left out."""
        with self.reading() as session:
            row = bridges.find_bridge(session, bridge)
            visits.find_visit(session, row, date)
            return self._whole(visits.visit_docs(session, row, date))[0]

    def visit_docs(self, bridge: str) -> list[VisitDoc]:
        """Return all visits of a bridge, by date."""
        with self.reading() as session:
            return self._whole(visits.visit_docs(session, bridges.find_bridge(session, bridge)))

    def keep(self, result: KeptResult) -> bool:
        """Keep a result; False if the newest one of its visit was made from the same inputs the same way."""
        with self.transaction() as session:
            return results.add_result(session, result)

    def results(self, bridge: str, kind: str) -> list[KeptResult]:
        """Return the kept results of one kind of a bridge, newest last."""
        results.check_kind(kind)
        with self.reading() as session:
            return results.kept_results(session, bridges.find_bridge(session, bridge), kind)

    def evidence(self, bridge: str) -> str:
        """Return the digest of what is kept of a bridge now; it changes when anything is added that results rest on."""
        with self.reading() as session:
            return evidence(session, bridges.find_bridge(session, bridge).key)[bridge]

    def add_intervention(self, bridge: str, new: NewIntervention) -> KeptIntervention | None:
        """Keep what was done to a pad; None if the very same is in the record already."""
        document = self.bridge(bridge).document
        with self.transaction() as session:
            row = bridges.find_bridge(session, bridge, lock=True)
            return interventions.add_intervention(session, row, document, new)

    def withdraw_intervention(self, number: int, reason: str) -> KeptIntervention:
        """Withdraw an intervention with a reason; it stays in the record, and counts no more."""
        with self.transaction() as session:
            return interventions.withdraw_intervention(session, number, reason)

    def interventions(self, bridge: str) -> list[KeptIntervention]:
        """Return what was done to the pads of a bridge, by date."""
        with self.reading() as session:
            return interventions.kept_interventions(session, bridges.find_bridge(session, bridge))

    def found(self, bridge: str, findings: Iterable[Finding]) -> None:
        """Open actions for what was found, or add to those that are open."""
        with self.transaction() as session:
            row = bridges.find_bridge(session, bridge, lock=True)
            actions.record_findings(session, row, findings)

    def actions(self, bridge: str | None = None) -> list[KeptAction]:
        """Return all actions of a bridge, or of the record, open and closed."""
        with self.reading() as session:
            row = None if bridge is None else bridges.find_bridge(session, bridge)
            return actions.kept_actions(session, row)

    def action(self, number: int) -> KeptAction:
        """Return an action by its number."""
        with self.reading() as session:
            return actions.find_action(session, number)

    def note_action(self, number: int, text: str, *, date: dt.date) -> None:
        """Add a note to an action."""
        with self.transaction() as session:
            bridge = actions.find_action(session, number).bridge
            row = bridges.find_bridge(session, bridge, lock=True)
            actions.add_note(session, number, text, evidence=evidence(session, row.key)[row.key], date=date)

    def close_action(
        self, number: int, text: str, *, date: dt.date, visit: dt.date | None, figures: dict[str, Any]
    ) -> None:
        """Close an action with its evidence in words."""
        with self.transaction() as session:
            bridge = actions.find_action(session, number).bridge
            row = bridges.find_bridge(session, bridge, lock=True)
            held = evidence(session, row.key)[row.key]
            actions.close_action(
                session, row, number, text, evidence=held, date=date, visit=visit, figures=figures
            )

    def bridge_states(self) -> list[BridgeState]:
        """Return what is kept of every bridge, by id, in a fixed number of queries."""
        with self.reading() as session:
            return network.bridge_states(session)

    def newest_results(self, kind: str, bridge: str | None = None) -> dict[str, KeptResult]:
        """Return the newest assessment or trend of the present of every bridge, or of one, by id."""
        with self.reading() as session:
            return network.newest_results(session, kind, bridge)

    def _document(self, row: RevisionRow) -> BridgeDoc:
        """The bridge file of a revision, parsed once."""
        if digest_of(row.text) != row.digest:
            raise damaged(self.name, f"revision {row.number} of a bridge is not the file that was kept")
        if row.digest not in self._parsed:
            self._parsed[row.digest] = parse_bridge(row.text, file=f"kept bridge file, revision {row.number}")
        return self._parsed[row.digest]

    def _whole(self, docs: list[VisitDoc]) -> list[VisitDoc]:
        for doc in docs:
            texts = (doc.text, doc.table_text) if doc.table_text else (doc.text,)
            if digest_of(*texts) != doc.digest:
                raise damaged(self.name, f"the visit of {doc.date} is not the file that was kept")
        return docs
