"""What was done to the pads of a bridge, and when."""

from __future__ import annotations

import datetime as dt

from sqlalchemy import select
from sqlalchemy.orm import Session, aliased

from db.documents import BridgeDoc
from db.errors import BedstoneError
from db.intervention_doc import INTERVENTION_KINDS
from db.records import KeptIntervention, NewIntervention
from db.schema import BridgeRow, GirderRow, InterventionRow, SupportRow
from db.store.rows import writer
from db.wording import listed, shown, suggestion

_NEWER = aliased(InterventionRow)
_CURRENT = ~select(_NEWER.id).where(_NEWER.supersedes_id == InterventionRow.id).exists()


def add_intervention(
    session: Session, bridge: BridgeRow, document: BridgeDoc, new: NewIntervention
) -> KeptIntervention | None:
    """Keep an intervention; None if the very same is in the record already.

    Raises
    ------
    BedstoneError
        If the girder or the support is unknown, the kind is none, or the day is not one of the bridge's life.
    """
    _check(document, new)
    for one in kept_interventions(session, bridge):
        if (one.girder, one.support, one.kind, one.date) == (new.girder, new.support, new.kind, new.date):
            return None
    support = session.scalars(
        select(SupportRow.id)
        .join(GirderRow, GirderRow.id == SupportRow.girder_id)
        .where(GirderRow.bridge_id == bridge.id, GirderRow.key == new.girder, SupportRow.key == new.support)
    ).one()
    row = InterventionRow(
        bridge_id=bridge.id,
        support_id=support,
        date=new.date,
        kind=new.kind,
        remark=new.remark,
        written_by=writer(),
    )
    session.add(row)
    session.flush()
    return _kept(row, new.girder, new.support)


def _check(document: BridgeDoc, new: NewIntervention) -> None:
    girders = [girder.id for girder in document.girders]
    if new.girder not in girders:
        problem = f'{document.id} has no girder "{shown(new.girder)}"{suggestion(new.girder, girders)}'
        raise BedstoneError(problem, field="--girder", remedy=f"its girders: {listed(girders)}")
    pads = [support.id for support in document.girder(new.girder).supports if support.kind == "pad"]
    if new.support not in pads:
        problem = (
            f'girder "{shown(new.girder)}" has no pad "{shown(new.support)}"{suggestion(new.support, pads)}'
        )
        raise BedstoneError(problem, field="--support", remedy=f"its pads: {listed(pads)}")
    if new.kind not in INTERVENTION_KINDS:
        raise BedstoneError(
            f'"{shown(new.kind)}" is no kind',
            field="--kind",
            remedy=f"write one of {listed(INTERVENTION_KINDS)}",
        )
    if new.date > dt.date.today():
        raise BedstoneError(
            f"{new.date} is in the future", field="--date", remedy="write the day it was done"
        )
    if document.built is not None and new.date < document.built:
        problem = f"{new.date} is before the bridge was built ({document.built})"
        raise BedstoneError(problem, field="--date", remedy="write the day it was done")


def withdraw_intervention(session: Session, number: int, reason: str) -> KeptIntervention:
    """Withdraw an intervention that was not: a row of its own, with the reason.

    Raises
    ------
    BedstoneError
        If there is none of that number, or it is withdrawn already.
    """
    found = session.execute(
        select(InterventionRow, GirderRow.key, SupportRow.key)
        .join(SupportRow, SupportRow.id == InterventionRow.support_id)
        .join(GirderRow, GirderRow.id == SupportRow.girder_id)
        .where(InterventionRow.id == number, ~InterventionRow.withdrawn, _CURRENT)
    ).first()
    if found is None:
        raise BedstoneError(
            f"there is no intervention {number}",
            remedy="see their numbers: bedstone intervention list BRIDGE",
        )
    row, girder, support = found
    session.add(
        InterventionRow(
            bridge_id=row.bridge_id,
            support_id=row.support_id,
            date=row.date,
            kind=row.kind,
            remark=row.remark,
            supersedes_id=row.id,
            withdrawn=True,
            reason=reason,
            written_by=writer(),
        )
    )
    return _kept(row, girder, support)


def kept_interventions(session: Session, bridge: BridgeRow) -> list[KeptIntervention]:
    """Return the interventions of a bridge by date; those withdrawn are left out."""
    query = (
        select(InterventionRow, GirderRow.key, SupportRow.key)
        .join(SupportRow, SupportRow.id == InterventionRow.support_id)
        .join(GirderRow, GirderRow.id == SupportRow.girder_id)
        .where(InterventionRow.bridge_id == bridge.id, ~InterventionRow.withdrawn, _CURRENT)
        .order_by(InterventionRow.date, InterventionRow.id)
    )
    return [_kept(row, girder, support) for row, girder, support in session.execute(query)]


def _kept(row: InterventionRow, girder: str, support: str) -> KeptIntervention:
    return KeptIntervention(
        number=row.id,
        date=row.date,
        kind=row.kind,
        girder=girder,
        support=support,
        remark=row.remark,
    )
