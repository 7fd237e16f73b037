"""All bridges at once: what a table of the network needs, in a fixed number of queries."""

from __future__ import annotations

import datetime as dt

from sqlalchemy import func, select
from sqlalchemy.orm import Session

from db.records import BridgeState, KeptResult
from db.schema import (
    AssessmentRow,
    BridgeRow,
    CalibrationRow,
    KeptRow,
    LoadStateRow,
    ReadingRow,
    RevisionRow,
    TrendRow,
    VisitRow,
)
from db.store.bridges import summaries
from db.store.evidence import evidence

_BATCH = 500


def bridge_states(session: Session) -> list[BridgeState]:
    """Return one value a bridge, by id."""
    stamps = evidence(session)
    visited = _visited(session)
    tested = _tested(session)
    calibrated = _calibrated(session)
    digests = _digests(session)
    return [
        BridgeState(
            bridge=one.bridge,
            name=one.name,
            revision=one.revision,
            digest=digests[one.bridge],
            evidence=stamps[one.bridge],
            last_visit=visited.get(one.bridge),
            last_tested=tested.get(one.bridge),
            last_calibrated=calibrated.get(one.bridge, (None, None))[0],
            calibrated_revision=calibrated.get(one.bridge, (None, None))[1],
        )
        for one in summaries(session)
    ]


def _visited(session: Session) -> dict[str, dt.date]:
    query = select(BridgeRow.key, func.max(VisitRow.date)).join(VisitRow, VisitRow.bridge_id == BridgeRow.id)
    return {row[0]: row[1] for row in session.execute(query.group_by(BridgeRow.key))}


def _tested(session: Session) -> dict[str, dt.date]:
    """The newest visit that tells a stiffness: any reading but a seat in the state without a vehicle."""
    query = (
        select(BridgeRow.key, func.max(VisitRow.date))
        .join(VisitRow, VisitRow.bridge_id == BridgeRow.id)
        .join(ReadingRow, ReadingRow.visit_id == VisitRow.id)
        .join(LoadStateRow, LoadStateRow.id == ReadingRow.state_id)
        .where(
            ~ReadingRow.withdrawn, (LoadStateRow.vehicle.is_not(None)) | (ReadingRow.quantity != "settlement")
        )
        .group_by(BridgeRow.key)
    )
    return {row[0]: row[1] for row in session.execute(query)}


def _calibrated(session: Session) -> dict[str, tuple[dt.date, int]]:
    """The newest visit that was calibrated, and the revision that its newest calibration rests on."""
    query = (
        select(BridgeRow.key, VisitRow.date, RevisionRow.number)
        .join(CalibrationRow, CalibrationRow.bridge_id == BridgeRow.id)
        .join(VisitRow, VisitRow.id == CalibrationRow.visit_id)
        .join(RevisionRow, RevisionRow.id == CalibrationRow.revision_id)
        .order_by(VisitRow.date, CalibrationRow.id)
    )
    return {
        key: (date, number) for key, date, number in session.execute(query)
    }  # the last one of a key stands


def _digests(session: Session) -> dict[str, str]:
    newest = select(func.max(RevisionRow.id)).group_by(RevisionRow.bridge_id)
    query = (
        select(BridgeRow.key, RevisionRow.digest)
        .join(RevisionRow, RevisionRow.bridge_id == BridgeRow.id)
        .where(RevisionRow.id.in_(newest))
    )
    return {row[0]: row[1] for row in session.execute(query)}


def newest_results(session: Session, kind: str, bridge: str | None = None) -> dict[str, KeptResult]:
    """Return the newest assessment or trend of the present of every bridge (or of one), by its id.

    A look into the past (`assess --visit`) has no evidence beside it and is left out.
    """
    table: type[KeptRow] = AssessmentRow if kind == "assessment" else TrendRow
    newest = select(func.max(table.id)).where(table.evidence.is_not(None)).group_by(table.bridge_id)
    query = (
        select(table, BridgeRow.key, RevisionRow.number, VisitRow.date)
        .join(BridgeRow, BridgeRow.id == table.bridge_id)
        .join(RevisionRow, RevisionRow.id == table.revision_id)
        .outerjoin(VisitRow, VisitRow.id == table.visit_id)
        .where(table.id.in_(newest))
        .execution_options(yield_per=_BATCH)
    )
    if bridge is not None:
        query = query.where(BridgeRow.key == bridge)
    return {
        key: KeptResult(
            kind=kind,
            bridge=key,
            visit=visit,
            revision=number,
            input_digest=row.input_digest,
            options=row.options,
            seed=row.seed,
            version=row.version,
            result=row.result,
            made_at=row.made_at,
            evidence=row.evidence,
        )
        for row, key, number, visit in session.execute(query)
    }
