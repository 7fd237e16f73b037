"""Put files into the record and list what is there."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import replace
from pathlib import Path

from assess.workflow.combination import check_combination
from assess.workflow.live_loads import check_live
from assess.workflow.pads import refuse_pads
from db.documents import BridgeDoc, VisitDoc
from db.errors import BedstoneError
from db.exchange import (
    bridge_queries,
    check_interventions,
    check_losses,
    check_visit,
    draft_bridge,
    read_bridge,
    read_visit,
    visit_queries,
)
from db.records import BridgeSummary, Taken, VisitSummary
from db.store import Record, open_record
from db.wording import printable

__all__ = ["add_bridge", "draft_bridge", "init_record", "list_bridges", "list_visits", "log_visit"]


def init_record(url: str) -> bool:
    """Make a record where there is none; True if it was made now."""
    with open_record(url, create=True) as record:
        return record.created


def add_bridge(url: str, path: Path) -> tuple[BridgeDoc, Taken]:
    """Take in a bridge file: a new bridge, or a new revision of one."""
    document = read_bridge(path)
    check_losses(document, today=dt.date.today(), file=printable(str(path)))
    check_interventions(document, today=dt.date.today(), file=printable(str(path)))
    check_live(document, file=printable(str(path)))
    check_combination(document, file=printable(str(path)))
    refuse_pads(document, printable(str(path)))
    with open_record(url) as record, _naming(path):
        return document, replace(record.add_bridge(document), queries=tuple(bridge_queries(document)))


def list_bridges(url: str) -> list[BridgeSummary]:
    """All bridges of the record."""
    with open_record(url) as record:
        return record.bridges()


def log_visit(url: str, path: Path, *, keep: bool = True) -> tuple[VisitDoc, Taken]:
    """Take in a visit file, whole or not at all; with `keep` off it is checked and not kept."""
    document = read_visit(path)
    with open_record(url) as record, _naming(path):
        bridge = _bridge_of(record, document.bridge)
        check_visit(document, bridge, today=dt.date.today(), file=printable(str(path)))
        before = [one for one in record.visit_docs(bridge.id) if one.date < document.date]
        queries = tuple(visit_queries(document, before[-1] if before else None))
        taken = record.log_visit(document) if keep else Taken(added=False, tried=True)
        return document, replace(taken, queries=queries)


def _bridge_of(record: Record, bridge: str) -> BridgeDoc:
    """The bridge a visit file names; if there is none, the error says where that stands."""
    try:
        return record.bridge(bridge).document
    except BedstoneError as error:
        raise error.at(file="visit file", field="visit, bridge") from error


@contextmanager
def _naming(path: Path) -> Iterator[None]:
    """The record knows what a file says and not its name: put the name into its refusals."""
    try:
        yield
    except BedstoneError as error:
        if error.file not in ("bridge file", "visit file"):
            raise
        file = printable(str(path))
        raise BedstoneError(error.problem, file=file, field=error.field, remedy=error.remedy) from error


def list_visits(url: str, bridge: str) -> list[VisitSummary]:
    """All visits of a bridge, by date."""
    with open_record(url) as record:
        return record.visits(bridge)
