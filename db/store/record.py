"""The record as the rest of the program sees it."""

from __future__ import annotations

import contextlib
import datetime as dt
from collections.abc import Iterator

from sqlalchemy import Engine
from sqlalchemy.orm import Session

from db.documents import BridgeDoc, VisitDoc
from db.exchange import check_visit, parse_bridge
from db.exchange.files import digest_of
from db.records import BridgeSummary, KeptBridge, KeptResult, Taken, VisitSummary
from db.schema import RevisionRow
from db.store import bridges, results, visits
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
        """Return the kept calibrations or assessments of a bridge, newest last."""
        results.check_kind(kind)
        with self.reading() as session:
            return results.kept_results(session, bridges.find_bridge(session, bridge), kind)

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
