"""What the record held of a bridge at one moment, as one digest: a result made from it is current while it stands."""

from __future__ import annotations

import hashlib

from sqlalchemy import Select, func, select
from sqlalchemy.orm import Session

from db.schema import BridgeRow, CalibrationRow, InterventionRow, ReadingRow, RevisionRow, VisitRow


def evidence(session: Session, bridge: str | None = None) -> dict[str, str]:
    """Return the digest of what is kept of every bridge (or of one), by its id, in a fixed number of queries.

    Rows are only ever added, so the newest row of each kind says whether anything came.
    """
    sources: tuple[Select[int, int], ...] = (
        select(RevisionRow.bridge_id, func.max(RevisionRow.id)).group_by(RevisionRow.bridge_id),
        select(VisitRow.bridge_id, func.max(VisitRow.id)).group_by(VisitRow.bridge_id),
        select(VisitRow.bridge_id, func.max(ReadingRow.id))
        .join(ReadingRow, ReadingRow.visit_id == VisitRow.id)
        .group_by(VisitRow.bridge_id),
        select(CalibrationRow.bridge_id, func.max(CalibrationRow.id)).group_by(CalibrationRow.bridge_id),
        select(InterventionRow.bridge_id, func.max(InterventionRow.id)).group_by(InterventionRow.bridge_id),
    )
    bridges = select(BridgeRow.id, BridgeRow.key)
    if bridge is not None:
        bridges = bridges.where(BridgeRow.key == bridge)
        number = select(BridgeRow.id).where(BridgeRow.key == bridge).scalar_subquery()
        sources = tuple(query.where(query.selected_columns[0] == number) for query in sources)
    newest = [{int(one): int(row) for one, row in session.execute(query)} for query in sources]
    return {
        key: hashlib.sha256(" ".join(str(kind.get(row, 0)) for kind in newest).encode()).hexdigest()
        for row, key in session.execute(bridges)
    }
