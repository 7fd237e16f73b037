"""Put files into the record and list what is there."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

from db.documents import BridgeDoc, VisitDoc
from db.exchange import check_visit, draft_bridge, read_bridge, read_visit
from db.records import BridgeSummary, Taken, VisitSummary
from db.store import open_record

__all__ = ["add_bridge", "draft_bridge", "init_record", "list_bridges", "list_visits", "log_visit"]


def init_record(url: str) -> bool:
    """Make a record where there is none; True if it was made now."""
    with open_record(url, create=True) as record:
        return record.created


def add_bridge(url: str, path: Path) -> tuple[BridgeDoc, Taken]:
    """Take in a bridge file: a new bridge, or a new revision of one."""
    document = read_bridge(path)
    with open_record(url) as record:
        return document, record.add_bridge(document)


def list_bridges(url: str) -> list[BridgeSummary]:
    """All bridges of the record."""
    with open_record(url) as record:
        return record.bridges()


def log_visit(url: str, path: Path) -> tuple[VisitDoc, Taken]:
    """Take in a visit file, whole or not at all."""
    document = read_visit(path)
    with open_record(url) as record:
        bridge = record.bridge(document.bridge).document
        check_visit(document, bridge, today=dt.date.today(), file=str(path))
        return document, record.log_visit(document)


def list_visits(url: str, bridge: str) -> list[VisitSummary]:
    """All visits of a bridge, by date."""
    with open_record(url) as record:
        return record.visits(bridge)
