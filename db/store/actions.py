"""Actions: opened once, found again, noted, closed by one event; nothing in them is ever changed or removed."""

from __future__ import annotations

import datetime as dt
from collections import defaultdict
from collections.abc import Iterable
from typing import Any

from sqlalchemy import select
from sqlalchemy.orm import Session

from db.errors import BedstoneError
from db.records import ActionEvent, Finding, KeptAction
from db.schema import ActionEventRow, ActionRow, BridgeRow, VisitRow
from db.store.rows import writer
from db.store.visits import find_visit


def record_findings(session: Session, bridge: BridgeRow, findings: Iterable[Finding]) -> None:
    """Open an action for every finding without one; a further finding of an open action is an event of it.

    The caller holds the bridge for writing, so that two programs take turns; the unique key of `actions` holds even
    where they do not. The same finding from the same evidence is not noted twice. After an action was closed, only
    evidence that had not come then opens a new one, which names the old.
    """
    newest = {action.subject: action for action in kept_actions(session, bridge)}
    for finding in findings:
        before = newest.get(finding.subject)
        if before is not None and before.closed is None:
            if not before.knows(finding):
                _add(session, bridge, before.number, len(before.events) + 1, "found", finding)
        elif before is None or finding.evidence not in before.evidence:
            _open(session, bridge, finding, before)


def _open(session: Session, bridge: BridgeRow, finding: Finding, before: KeptAction | None) -> None:
    row = ActionRow(
        bridge_id=bridge.id,
        subject=finding.subject,
        turn=1 if before is None else before.turn + 1,
        reopens_id=None if before is None else before.number,
        details=finding.details,
        written_by=writer(),
    )
    session.add(row)
    session.flush()
    _add(session, bridge, row.id, 1, "opened", finding)


def _add(session: Session, bridge: BridgeRow, action: int, number: int, kind: str, finding: Finding) -> None:
    visit = None if finding.visit is None else find_visit(session, bridge, finding.visit).id
    session.add(
        ActionEventRow(
            action_id=action,
            number=number,
            kind=kind,
            date=finding.date,
            visit_id=visit,
            evidence=finding.evidence,
            severity=finding.severity,
            due=finding.due,
            text=finding.text,
            figures=finding.figures,
            written_by=writer(),
        )
    )
    session.flush()


def find_action(session: Session, number: int) -> KeptAction:
    """Return an action by its number.

    Raises
    ------
    BedstoneError
        If there is none.
    """
    found = _kept(session, ActionRow.id == number)
    if not found:
        raise BedstoneError(
            f"there is no action {number}", remedy="see their numbers: bedstone action list --all"
        )
    return found[0]


def add_note(session: Session, number: int, text: str, *, evidence: str, date: dt.date) -> None:
    """Add a note to an action, open or closed."""
    action = find_action(session, number)
    _say(session, action, "noted", text, evidence=evidence, date=date)


def close_action(
    session: Session,
    bridge: BridgeRow,
    number: int,
    text: str,
    *,
    evidence: str,
    date: dt.date,
    visit: dt.date | None,
    figures: dict[str, Any],
) -> None:
    """Close an open action with its evidence in words.

    Raises
    ------
    BedstoneError
        If it is closed already, or the visit is unknown.
    """
    action = find_action(session, number)
    if action.closed is not None:
        raise BedstoneError(
            f"action {number} was closed on {action.closed.date}",
            remedy=f"see it: bedstone action show {number}",
        )
    row = None if visit is None else find_visit(session, bridge, visit).id
    _say(session, action, "closed", text, evidence=evidence, date=date, visit_id=row, figures=figures)


def _say(
    session: Session,
    action: KeptAction,
    kind: str,
    text: str,
    *,
    evidence: str,
    date: dt.date,
    visit_id: int | None = None,
    figures: dict[str, Any] | None = None,
) -> None:
    session.add(
        ActionEventRow(
            action_id=action.number,
            number=len(action.events) + 1,
            kind=kind,
            date=date,
            closes=1 if kind == "closed" else None,
            visit_id=visit_id,
            evidence=evidence,
            text=text,
            figures=figures or {},
            written_by=writer(),
        )
    )
    session.flush()


def kept_actions(session: Session, bridge: BridgeRow | None = None) -> list[KeptAction]:
    """Return all actions, of a bridge or of the record, in the order of their opening, in two queries."""
    return _kept(session, *([] if bridge is None else [ActionRow.bridge_id == bridge.id]))


def _kept(session: Session, *chosen: Any) -> list[KeptAction]:
    events: dict[int, list[ActionEvent]] = defaultdict(list)
    query = (
        select(ActionEventRow, VisitRow.date)
        .join(ActionRow, ActionRow.id == ActionEventRow.action_id)
        .outerjoin(VisitRow, VisitRow.id == ActionEventRow.visit_id)
        .where(*chosen)
        .order_by(ActionEventRow.action_id, ActionEventRow.number)
    )
    for row, visit in session.execute(query):
        events[row.action_id].append(_event(row, visit))
    rows = session.execute(
        select(ActionRow, BridgeRow.key)
        .join(BridgeRow, BridgeRow.id == ActionRow.bridge_id)
        .where(*chosen)
        .order_by(ActionRow.id)
    )
    return [
        KeptAction(
            number=row.id,
            bridge=key,
            subject=row.subject,
            turn=row.turn,
            reopens=row.reopens_id,
            details=row.details,
            events=tuple(events[row.id]),
        )
        for row, key in rows
    ]


def _event(row: ActionEventRow, visit: dt.date | None) -> ActionEvent:
    return ActionEvent(
        kind=row.kind,
        date=row.date,
        visit=visit,
        evidence=row.evidence,
        severity=row.severity,
        due=row.due,
        text=row.text,
        figures=row.figures,
        written_by=row.written_by,
    )
