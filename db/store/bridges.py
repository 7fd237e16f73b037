"""Bridges in a record: revisions, and the lasting identity of girders and supports."""

from __future__ import annotations

from sqlalchemy import func, select
from sqlalchemy.orm import Session

from db.documents import BridgeDoc, VisitDoc
from db.errors import BedstoneError
from db.exchange import check_visit
from db.records import BridgeSummary, Taken
from db.schema import BridgeRow, GirderRow, LoadStateRow, ReadingRow, RevisionRow, SupportRow, VisitRow
from db.store.rows import places, writer
from db.store.visits import visit_docs
from db.wording import listed, shown, suggestion

_FILE = "bridge file"


def find_bridge(session: Session, bridge: str, *, lock: bool = False) -> BridgeRow:
    """Return the row of a bridge; `lock` lets no other program change it until the transaction ends.

    Raises
    ------
    BedstoneError
        If there is none of that id; names those there are.
    """
    query = select(BridgeRow).where(BridgeRow.key == bridge)
    row = session.scalar(query.with_for_update() if lock else query)
    if row is None:
        known = session.scalars(select(BridgeRow.key).order_by(BridgeRow.key)).all()
        problem = f'there is no bridge "{shown(bridge)}" in the record{suggestion(bridge, known)}'
        remedy = f"known bridges: {listed(known)}" if known else "add one first: bedstone bridge add FILE"
        raise BedstoneError(problem, remedy=remedy)
    return row


def find_revision(session: Session, bridge: BridgeRow, number: int | None = None) -> RevisionRow:
    """Return a revision of a bridge, the newest if no number is given.

    Raises
    ------
    BedstoneError
        If there is none of that number.
    """
    query = select(RevisionRow).where(RevisionRow.bridge_id == bridge.id).order_by(RevisionRow.number.desc())
    if number is not None:
        query = query.where(RevisionRow.number == number)
    row = session.scalars(query.limit(1)).first()
    if row is None:
        problem = f'bridge "{shown(bridge.key)}" has no revision {number}'
        raise BedstoneError(problem, remedy="revisions count from 1")
    return row


def summaries(session: Session) -> list[BridgeSummary]:
    """Return one line a bridge, by id."""
    newest = select(RevisionRow.bridge_id, func.max(RevisionRow.number).label("number")).group_by(
        RevisionRow.bridge_id
    )
    last = newest.subquery()
    visits = select(VisitRow.bridge_id, func.count().label("visits")).group_by(VisitRow.bridge_id).subquery()
    query = (
        select(BridgeRow.key, RevisionRow.name, RevisionRow.number, func.coalesce(visits.c.visits, 0))
        .join(last, last.c.bridge_id == BridgeRow.id)
        .join(
            RevisionRow,
            (RevisionRow.bridge_id == BridgeRow.id) & (RevisionRow.number == last.c.number),
        )
        .outerjoin(visits, visits.c.bridge_id == BridgeRow.id)
        .order_by(BridgeRow.key)
    )
    return [
        BridgeSummary(bridge=key, name=name, revision=number, visits=count)
        for key, name, number, count in session.execute(query)
    ]


def add_revision(session: Session, doc: BridgeDoc) -> Taken:
    """Keep a bridge file: a new bridge, a new revision, or nothing if it is the newest one already.

    Raises
    ------
    BedstoneError
        If kept readings would lose their place.
    """
    bridge = session.scalar(select(BridgeRow).where(BridgeRow.key == doc.id).with_for_update())
    number = 1
    if bridge is None:
        bridge = BridgeRow(key=doc.id)
        session.add(bridge)
        session.flush()
    else:
        newest = find_revision(session, bridge)
        if newest.digest == doc.digest:
            return Taken(added=False, revision=newest.number)
        _refuse_lost_places(session, bridge, doc)
        _refuse_misfits(visit_docs(session, bridge), doc)
        number = newest.number + 1
    row = RevisionRow(
        bridge_id=bridge.id,
        number=number,
        name=doc.name,
        text=doc.text,
        digest=doc.digest,
        written_by=writer(),
    )
    session.add(row)
    _add_places(session, bridge, doc)
    return Taken(added=True, revision=number)


def _add_places(session: Session, bridge: BridgeRow, doc: BridgeDoc) -> None:
    """Give every girder and support a row of its own, once."""
    girders = {row.key: row for row in session.scalars(select(GirderRow).filter_by(bridge_id=bridge.id))}
    for girder, supports in places(doc).items():
        row = girders.get(girder)
        if row is None:
            row = GirderRow(bridge_id=bridge.id, key=girder)
            session.add(row)
            session.flush()
        known = set(session.scalars(select(SupportRow.key).filter_by(girder_id=row.id)))
        session.add_all(SupportRow(girder_id=row.id, key=key) for key in supports if key not in known)
    session.flush()


def _refuse_lost_places(session: Session, bridge: BridgeRow, doc: BridgeDoc) -> None:
    """Refuse a file that drops a girder, support or vehicle that kept readings refer to."""
    kept = places(doc)
    query = (
        select(GirderRow.key, SupportRow.key, func.count())
        .select_from(ReadingRow)
        .join(GirderRow, GirderRow.id == ReadingRow.girder_id)
        .outerjoin(SupportRow, SupportRow.id == ReadingRow.support_id)
        .where(GirderRow.bridge_id == bridge.id)
        .group_by(GirderRow.key, SupportRow.key)
        .order_by(GirderRow.key, SupportRow.key)
    )
    for girder, support, count in session.execute(query):
        if girder not in kept:
            raise _lost(f'girder "{shown(girder)}"', count, "girder")
        if support is not None and support not in kept[girder]:
            raise _lost(f'girder "{shown(girder)}", support "{shown(support)}"', count, "support")
    vehicles = {vehicle.id for vehicle in doc.vehicles}
    used = (
        select(LoadStateRow.vehicle, func.count())
        .join(VisitRow, VisitRow.id == LoadStateRow.visit_id)
        .where(VisitRow.bridge_id == bridge.id, LoadStateRow.vehicle.is_not(None))
        .group_by(LoadStateRow.vehicle)
        .order_by(LoadStateRow.vehicle)
    )
    for vehicle, count in session.execute(used):
        if vehicle not in vehicles:
            problem = f"it is gone, but {count} load state{'s' * (count != 1)} of the record used it"
            field = f'vehicle "{shown(vehicle)}"'
            raise BedstoneError(problem, file=_FILE, field=field, remedy="keep it, under this id")


def _lost(field: str, count: int, kind: str) -> BedstoneError:
    problem = f"it is gone, but {count} reading{'s' * (count != 1)} of the record refer to it"
    return BedstoneError(problem, file=_FILE, field=field, remedy=f"keep the {kind}, under this id")


def _refuse_misfits(visits: list[VisitDoc], doc: BridgeDoc) -> None:
    """Refuse a file on which a kept visit has no place any more (a shorter girder, a pad made a pin)."""
    for visit in visits:
        try:
            check_visit(visit, doc, today=visit.date, file=f"visit {visit.date}")
        except BedstoneError as error:
            where = ", ".join(part for part in (error.file, error.field) if part)
            problem = f"the kept visit of {visit.date} does not fit it ({where}: {error.problem})"
            raise BedstoneError(
                problem, file=_FILE, remedy="keep what the readings of the record refer to"
            ) from error
