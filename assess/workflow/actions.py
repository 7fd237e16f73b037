"""Actions: opened by what was found, listed with how pressing they are, closed with evidence."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

from assess.results import (
    ActionEventResult,
    ActionResult,
    AssessmentResult,
    TrendResult,
    from_plain,
)
from assess.workflow import action_rules, findings
from assess.workflow.dates import reach
from assess.workflow.next_visit import interval_of
from assess.workflow.study import Study
from db.errors import BedstoneError
from db.records import ActionEvent, Finding, KeptAction
from db.store import Record, open_record

_ORDER = {name: i for i, name in enumerate(action_rules.SEVERITIES)}


def interval_day(study: Study) -> dt.date:
    """Return the day of the next visit by the owner's interval alone."""
    return reach(study.visits[-1].date, interval_of(study))


def opened(record: Record, bridge: str, found: Sequence[Finding]) -> list[ActionResult]:
    """Open actions for what was found, and return all open ones of the bridge."""
    if found:
        record.found(bridge, found)
    return open_actions(record, bridge)


def open_actions(record: Record, bridge: str | None = None) -> list[ActionResult]:
    """Return the open actions of a bridge or of the record, the most pressing first."""
    return [one for one in _shown(record.actions(bridge)) if one.status != "closed"]


def list_actions(url: str, bridge: str | None = None, *, closed: bool = False) -> list[ActionResult]:
    """Return the open actions, with `closed` the closed ones after them."""
    with open_record(url) as record:
        every = _shown(record.actions(bridge))
    return [one for one in every if closed or one.status != "closed"]


def show_action(url: str, number: int) -> ActionResult:
    """Return an action with its events."""
    with open_record(url) as record:
        return shown(record.action(number), dt.date.today())


def note_action(url: str, number: int, text: str) -> ActionResult:
    """Add a note to an action."""
    _words("TEXT", text)
    with open_record(url) as record:
        record.note_action(number, text.strip(), date=dt.date.today())
        return shown(record.action(number), dt.date.today())


def close_action(
    url: str,
    number: int,
    *,
    evidence: str,
    by: str,
    visit: dt.date | None = None,
    although: str | None = None,
) -> ActionResult:
    """Close an action with evidence.

    Raises
    ------
    BedstoneError
        If the latest assessment or trend still finds it and `although` does not say why it is closed all the same.
    """
    _words("--evidence", evidence)
    _words("--by", by)
    if although is not None:
        _words("--although", although)
    with open_record(url) as record:
        action = record.action(number)
        found = max((one.visit for one in action.findings if one.visit is not None), default=None)
        if visit is not None and found is not None and visit < found:
            raise BedstoneError(
                f"the visit of {visit} lies before that of {found}, which found it",
                field="--visit",
                remedy="name the visit that took the check reading",
            )
        still = [] if action.closed else _still(record, action)
        if still and although is None:
            problem = f"action {number} cannot be closed: {action.details['where']} is still {still[0]}"
            remedy = (
                "assess and follow the trend with the check reading, or say why all the same: --although TEXT"
            )
            raise BedstoneError(problem, remedy=remedy)
        figures = {"by": by.strip(), "although": although and although.strip(), "still": still}
        record.close_action(number, evidence.strip(), date=dt.date.today(), visit=visit, figures=figures)
        return shown(record.action(number), dt.date.today())


def _words(name: str, text: str) -> None:
    if not text.strip():
        raise BedstoneError("it is empty", field=name, remedy="say it in words; they are kept")


def _still(record: Record, action: KeptAction) -> list[str]:
    """What the newest kept assessment and trend still find at the place of an action."""
    study, today = Study.fetch(record, action.bridge), dt.date.today()
    found: list[Finding] = []
    kept = record.newest_results("assessment", action.bridge).get(action.bridge)
    if kept is not None:
        found += findings.of_assessment(study, from_plain(AssessmentResult, kept.result), today)
    kept = record.newest_results("trend", action.bridge).get(action.bridge)
    if kept is not None:
        until = interval_day(study)
        found += findings.of_trend(study, from_plain(TrendResult, kept.result), today, until=until)
    return [one.text for one in found if one.subject == action.subject]


def _shown(actions: Sequence[KeptAction]) -> list[ActionResult]:
    today = dt.date.today()
    return sorted(
        (shown(one, today) for one in actions),
        key=lambda one: (
            one.status == "closed",
            -one.days_overdue,
            one.due,
            _ORDER[one.severity],
            one.action,
        ),
    )


def shown(action: KeptAction, today: dt.date) -> ActionResult:
    """Return an action as it stands today."""
    first, last, end = action.findings[0], action.findings[-1], action.closed
    details, due = action.details, action.due
    late = 0 if end is not None else max((today - due).days, 0)
    role = str(details["owner_role"])
    although = end.figures.get("although") if end is not None else None
    return ActionResult(
        action=action.number,
        bridge=action.bridge,
        girder=str(details["girder"]),
        where=str(details["where"]),
        severity=min((str(one.severity) for one in action.findings), key=lambda name: _ORDER[name]),
        finding=last.text,
        opened_on=first.date,
        found_by=str(first.figures["found_by"]),
        visit=first.visit,
        input_digest=str(first.figures["input_digest"]),
        owner_role=role,
        due=due,
        days_overdue=late,
        escalation=_closed_words(end) if end else action_rules.escalation(role, late, due, today),
        status="closed" if end else "overdue" if late else "open",
        check_reading=str(details["check_reading"]),
        options=action_rules.options(str(details["what"]), action.bridge, str(details["girder"])),
        reopens=action.reopens,
        closed_on=end.date if end else None,
        closed_by=str(end.figures["by"]) if end else None,
        closing_evidence=end.text if end else None,
        closed_although=None if although is None else str(although),
        events=[_event(one) for one in action.events],
    )


def _closed_words(end: ActionEvent) -> str:
    still = end.figures.get("still")
    told = f"closed on {end.date} by {end.figures['by']}"
    return f"{told} although still {still[0]}: {end.figures['although']}" if still else told


def _event(event: ActionEvent) -> ActionEventResult:
    return ActionEventResult(
        kind=event.kind,
        date=event.date,
        visit=event.visit,
        severity=event.severity,
        text=event.text,
        figures=dict(event.figures),
        written_by=event.written_by,
        evidence=event.evidence,
    )
