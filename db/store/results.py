"""Kept calibrations, assessments and trends."""

from __future__ import annotations

import json
from typing import Any

from sqlalchemy import select
from sqlalchemy.orm import Session

from db.records import KeptResult
from db.schema import AssessmentRow, BridgeRow, CalibrationRow, KeptRow, RevisionRow, TrendRow, VisitRow
from db.store.bridges import find_bridge, find_revision
from db.store.visits import find_visit

_TABLES: dict[str, type[KeptRow]] = {
    "calibration": CalibrationRow,
    "assessment": AssessmentRow,
    "trend": TrendRow,
}


def check_kind(kind: str) -> None:
    """Raise ValueError if there is no such kind of result."""
    if kind not in _TABLES:
        raise ValueError(f"kind is {kind!r}, not one of {sorted(_TABLES)}")


def add_result(session: Session, kept: KeptResult) -> bool:
    """Keep a result, unless the newest one of its kind, bridge and visit was made the same way.

    Raises
    ------
    BedstoneError
        If its bridge, revision or visit is unknown.
    ValueError
        If the kind is unknown, a calibration has no visit, or a number in it is not finite.
    """
    check_kind(kept.kind)
    if kept.kind == "calibration" and kept.visit is None:
        raise ValueError("a calibration is of a visit")
    table = _TABLES[kept.kind]
    bridge = find_bridge(session, kept.bridge)
    visit_id = None if kept.visit is None else find_visit(session, bridge, kept.visit).id
    options = _plain(kept.options)
    query = select(table).where(table.bridge_id == bridge.id, table.visit_id.is_not_distinct_from(visit_id))
    newest = session.scalars(query.order_by(table.id.desc()).limit(1)).first()
    made = (kept.input_digest, options, kept.version, kept.evidence)
    if newest is not None and made == (
        newest.input_digest,
        newest.options,
        newest.version,
        newest.evidence,
    ):
        return False
    row = table(
        bridge_id=bridge.id,
        revision_id=find_revision(session, bridge, kept.revision).id,
        visit_id=visit_id,
        input_digest=kept.input_digest,
        options=options,
        seed=kept.seed,
        version=kept.version,
        result=_plain(kept.result),
        evidence=kept.evidence,
    )
    session.add(row)
    return True


def kept_results(session: Session, bridge: BridgeRow, kind: str) -> list[KeptResult]:
    """Return the kept results of a kind, newest last."""
    table = _TABLES[kind]
    query = (
        select(table, RevisionRow.number, VisitRow.date)
        .join(RevisionRow, RevisionRow.id == table.revision_id)
        .outerjoin(VisitRow, VisitRow.id == table.visit_id)
        .where(table.bridge_id == bridge.id)
        .order_by(table.id)
    )
    return [
        KeptResult(
            kind=kind,
            bridge=bridge.key,
            visit=date,
            revision=number,
            input_digest=row.input_digest,
            options=row.options,
            seed=row.seed,
            version=row.version,
            result=row.result,
            made_at=row.made_at,
            evidence=row.evidence,
        )
        for row, number, date in session.execute(query)
    ]


def _plain(value: dict[str, Any]) -> dict[str, Any]:
    """Return a value as JSON gives it back; a number that is not finite is a defect of the caller."""
    plain: dict[str, Any] = json.loads(json.dumps(value, allow_nan=False))
    return plain
