"""Visits in a record: taken whole or not at all, and handed back as documents."""

from __future__ import annotations

import datetime as dt
from collections import defaultdict

from sqlalchemy import func, select
from sqlalchemy.orm import Session, aliased

from db.documents import LoadStateDoc, ReadingDoc, VisitDoc
from db.errors import BedstoneError
from db.records import Taken, VisitSummary
from db.schema import BridgeRow, GirderRow, LoadStateRow, ReadingRow, RevisionRow, SupportRow, VisitRow
from db.store.rows import reading_doc, reading_row, state_doc, state_row, visit_doc, visit_row
from db.wording import shown

_NEWER = aliased(ReadingRow)
_CURRENT = ~select(_NEWER.id).where(_NEWER.supersedes_id == ReadingRow.id).exists()
"""A reading that nothing supersedes."""


def kept_already(session: Session, bridge: BridgeRow, doc: VisitDoc) -> bool:
    """Whether this very visit is in the record.

    Raises
    ------
    BedstoneError
        If another file was logged for that day.
    """
    digest = session.scalar(
        select(VisitRow.digest).where(VisitRow.bridge_id == bridge.id, VisitRow.date == doc.date)
    )
    if digest is None:
        return False
    if digest != doc.digest:
        problem = f'another file was logged for the visit of {doc.date} to "{shown(bridge.key)}"'
        remedy = "a bridge has one visit a day, and what is kept is never overwritten: check the date"
        raise BedstoneError(problem, file="visit file", field="visit, date", remedy=remedy)
    return True


def add_visit(session: Session, bridge: BridgeRow, revision: RevisionRow, doc: VisitDoc) -> Taken:
    """Add a visit with its load states and readings; the caller's transaction makes it whole."""
    visit = visit_row(doc, bridge_id=bridge.id, revision_id=revision.id)
    session.add(visit)
    session.flush()
    states = {state.id: state_row(state, visit_id=visit.id) for state in doc.states}
    session.add_all(states.values())
    session.flush()
    girders, supports = _place_ids(session, bridge)
    state_ids = {key: row.id for key, row in states.items()}
    session.add_all(
        reading_row(reading, visit_id=visit.id, states=state_ids, girders=girders, supports=supports)
        for reading in doc.readings
    )
    session.flush()
    return Taken(added=True, revision=revision.number)


def summaries(session: Session, bridge: BridgeRow) -> list[VisitSummary]:
    """Return one line a visit, by date."""
    readings = (
        select(func.count())
        .where(ReadingRow.visit_id == VisitRow.id, ~ReadingRow.withdrawn, _CURRENT)
        .correlate(VisitRow)
        .scalar_subquery()
    )
    states = (
        select(func.count()).where(LoadStateRow.visit_id == VisitRow.id).correlate(VisitRow).scalar_subquery()
    )
    query = (
        select(VisitRow.date, readings, states).where(VisitRow.bridge_id == bridge.id).order_by(VisitRow.date)
    )
    return [VisitSummary(visit=date, readings=r, states=s) for date, r, s in session.execute(query)]


def visit_docs(session: Session, bridge: BridgeRow, date: dt.date | None = None) -> list[VisitDoc]:
    """Return the visits of a bridge by date, in three queries however many there are.

    Superseded and withdrawn readings are left out.
    """
    chosen = [VisitRow.bridge_id == bridge.id]
    if date is not None:
        chosen.append(VisitRow.date == date)
    visits = session.scalars(select(VisitRow).where(*chosen).order_by(VisitRow.date)).all()
    states: dict[int, list[LoadStateDoc]] = defaultdict(list)
    for state in session.scalars(
        select(LoadStateRow)
        .join(VisitRow, VisitRow.id == LoadStateRow.visit_id)
        .where(*chosen)
        .order_by(LoadStateRow.id)
    ):
        states[state.visit_id].append(state_doc(state))
    readings: dict[int, list[ReadingDoc]] = defaultdict(list)
    for row, state_key, girder, support in session.execute(
        select(ReadingRow, LoadStateRow.key, GirderRow.key, SupportRow.key)
        .join(VisitRow, VisitRow.id == ReadingRow.visit_id)
        .join(LoadStateRow, LoadStateRow.id == ReadingRow.state_id)
        .join(GirderRow, GirderRow.id == ReadingRow.girder_id)
        .outerjoin(SupportRow, SupportRow.id == ReadingRow.support_id)
        .where(*chosen, ~ReadingRow.withdrawn, _CURRENT)
        .order_by(ReadingRow.id)
    ):
        readings[row.visit_id].append(reading_doc(row, state=state_key, girder=girder, support=support))
    return [visit_doc(v, bridge.key, states[v.id], readings[v.id]) for v in visits]


def find_visit(session: Session, bridge: BridgeRow, date: dt.date) -> VisitRow:
    """Return the row of a visit.

    Raises
    ------
    BedstoneError
        If there was none that day; names the days there are.
    """
    query = select(VisitRow).where(VisitRow.bridge_id == bridge.id)
    row = session.scalar(query.where(VisitRow.date == date))
    if row is None:
        dates = session.scalars(
            select(VisitRow.date).where(VisitRow.bridge_id == bridge.id).order_by(VisitRow.date)
        ).all()
        problem = f'bridge "{shown(bridge.key)}" has no visit of {date}'
        known = ", ".join(str(day) for day in dates[-12:])
        remedy = f"its latest visits: {known}" if known else "log one first: bedstone visit log FILE"
        raise BedstoneError(problem, remedy=remedy)
    return row


def _place_ids(session: Session, bridge: BridgeRow) -> tuple[dict[str, int], dict[tuple[str, str], int]]:
    """Row numbers of the girders, and of the supports by girder and id."""
    girders = {
        row.key: row.id for row in session.scalars(select(GirderRow).where(GirderRow.bridge_id == bridge.id))
    }
    supports = {
        (girder, support): number
        for girder, support, number in session.execute(
            select(GirderRow.key, SupportRow.key, SupportRow.id)
            .join(GirderRow, GirderRow.id == SupportRow.girder_id)
            .where(GirderRow.bridge_id == bridge.id)
        )
    }
    return girders, supports
