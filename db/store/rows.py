"""Documents to rows and rows to documents."""

from __future__ import annotations

import getpass
from collections.abc import Iterable, Mapping

from db.documents import BridgeDoc, LoadStateDoc, ReadingDoc, VisitDoc
from db.schema import LoadStateRow, ReadingRow, VisitRow
from db.store.setups import raw_doc, raw_json, setup_fields, setup_json


def writer() -> str:
    """Return who runs the program, as the system knows them."""
    try:
        return getpass.getuser()[:100]
    except (OSError, KeyError, ImportError):
        return "unknown"


def visit_row(doc: VisitDoc, *, bridge_id: int, revision_id: int) -> VisitRow:
    """Return the row of a visit."""
    return VisitRow(
        bridge_id=bridge_id,
        revision_id=revision_id,
        date=doc.date,
        party=doc.party,
        pad_temperature=doc.pad_temperature,
        datum=doc.datum,
        remark=doc.remark,
        text=doc.text,
        table_text=doc.table_text,
        digest=doc.digest,
        setup=setup_json(doc),
        written_by=writer(),
    )


def state_row(doc: LoadStateDoc, *, visit_id: int) -> LoadStateRow:
    """Return the row of a load state."""
    return LoadStateRow(
        visit_id=visit_id,
        key=doc.id,
        vehicle=doc.vehicle,
        leading_axle_at=doc.leading_axle_at,
        towards=doc.towards,
    )


def reading_row(
    doc: ReadingDoc,
    *,
    visit_id: int,
    states: Mapping[str, int],
    girders: Mapping[str, int],
    supports: Mapping[tuple[str, str], int],
) -> ReadingRow:
    """Return the row of a reading; the mappings give the row numbers of what it refers to."""
    return ReadingRow(
        visit_id=visit_id,
        state_id=states[doc.state],
        girder_id=girders[doc.girder],
        support_id=None if doc.support is None else supports[doc.girder, doc.support],
        quantity=doc.quantity,
        at=doc.at,
        height=doc.height,
        value=doc.value,
        sd=doc.sd,
        value_entered=doc.value_entered,
        sd_entered=doc.sd_entered,
        unit=doc.unit,
        instrument=doc.instrument,
        remark=doc.remark,
        source=doc.source,
        benchmark=doc.benchmark,
        raw=raw_json(doc.raw),
        derived=doc.derived,
        written_by=writer(),
    )


def state_doc(row: LoadStateRow) -> LoadStateDoc:
    """Return a load state as a document."""
    return LoadStateDoc(
        id=row.key, vehicle=row.vehicle, leading_axle_at=row.leading_axle_at, towards=row.towards
    )


def reading_doc(row: ReadingRow, *, state: str, girder: str, support: str | None) -> ReadingDoc:
    """Return a reading as a document, with its row number."""
    return ReadingDoc(
        girder=girder,
        state=state,
        quantity=row.quantity,
        support=support,
        at=row.at,
        height=row.height,
        value=row.value,
        sd=row.sd,
        value_entered=row.value_entered,
        sd_entered=row.sd_entered,
        unit=row.unit,
        instrument=row.instrument,
        remark=row.remark,
        source=row.source,
        row=row.id,
        benchmark=row.benchmark,
        raw=raw_doc(row.raw),
        derived=row.derived,
    )


def visit_doc(
    row: VisitRow, bridge: str, states: Iterable[LoadStateDoc], readings: Iterable[ReadingDoc]
) -> VisitDoc:
    """Return a visit as a document."""
    return VisitDoc(
        bridge=bridge,
        date=row.date,
        party=row.party,
        pad_temperature=row.pad_temperature,
        datum=row.datum,
        remark=row.remark,
        states=tuple(states),
        readings=tuple(readings),
        text=row.text,
        table_text=row.table_text,
        digest=row.digest,
        **setup_fields(row.setup),
    )


def places(doc: BridgeDoc) -> dict[str, list[str]]:
    """Return the support ids of each girder of a bridge file, by girder id."""
    return {girder.id: [support.id for support in girder.supports] for girder in doc.girders}
