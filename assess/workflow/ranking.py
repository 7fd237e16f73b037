"""All bridges of the record, ranked: what is overdue or unknown first, then by chance and date of being over."""

from __future__ import annotations

import datetime as dt
from collections import defaultdict
from collections.abc import Sequence
from dataclasses import replace

from assess.results import (
    ActionResult,
    AssessmentResult,
    NetworkResult,
    NetworkRow,
    SectionResult,
    SpanTrend,
    TrendResult,
    from_plain,
)
from assess.workflow import cautions
from assess.workflow.actions import open_actions
from assess.workflow.assessing import assess_in
from assess.workflow.cautions import section_name
from assess.workflow.interventions import UNREAD
from assess.workflow.status import status_of
from assess.workflow.study import VERSION, Progress, quiet
from assess.workflow.trending import trend_in
from db.errors import BedstoneError
from db.records import BridgeState, KeptResult
from db.store import Record, open_record

_NO_DATE = dt.date.max


def network(url: str, *, refresh: bool = False, progress: Progress | None = None) -> NetworkResult:
    """Rank all bridges of a record.

    Kept results are used where they are current; what is missing or stale is computed and kept bridge by bridge, so
    that a call that was stopped goes on where it was.

    Parameters
    ----------
    refresh : bool
        Compute every bridge again.
    """
    with open_record(url) as record:
        states = record.bridge_states()
        assessments, trends = record.newest_results("assessment"), record.newest_results("trend")
        failed, computed = _complete(record, states, (assessments, trends), refresh, progress or quiet)
        if computed or failed:
            assessments, trends = record.newest_results("assessment"), record.newest_results("trend")
        actions: dict[str, list[ActionResult]] = defaultdict(list)
        for action in open_actions(record):
            actions[action.bridge].append(action)
    today = dt.date.today()
    rows = [
        _row(
            state,
            _current(assessments, state),
            _current(trends, state),
            actions[state.bridge],
            failed.get(state.bridge),
            today,
        )
        for state in states
    ]
    rows.sort(key=_urgency)
    return NetworkResult(
        as_of=today,
        version=VERSION,
        computed=computed,
        bridges=[replace(row, rank=i) for i, row in enumerate(rows, 1)],
        cautions=list(cautions.STANDING) if rows else [],
    )


def _complete(
    record: Record,
    states: Sequence[BridgeState],
    results: tuple[dict[str, KeptResult], dict[str, KeptResult]],
    refresh: bool,
    progress: Progress,
) -> tuple[dict[str, str], int]:
    """Compute and keep what is missing; by bridge why it could not be, and how many were computed."""
    kept = dict(zip(("assessment", "trend"), results, strict=True))
    failed: dict[str, str] = {}
    wanted = []
    for state in states:
        missing = [k for k, some in kept.items() if refresh or _current(some, state) is None]
        if state.last_calibrated is None and "trend" in missing:
            missing.remove("trend")  # nothing of it was calibrated by anyone: its pads are unknown
        if missing:
            wanted.append((state, missing))
    for i, (state, missing) in enumerate(wanted):
        progress(f"bridge {state.bridge}", i, len(wanted))
        try:
            if "assessment" in missing:
                assess_in(record, state.bridge)
            if "trend" in missing:
                trend_in(record, state.bridge)
        except BedstoneError as error:
            failed[state.bridge] = error.line()
        except Exception as error:  # one bridge must not hide the others; it is shown, and not as within
            failed[state.bridge] = f"a defect of the program: {type(error).__name__}: {error}"
    if wanted:
        progress("done", len(wanted), len(wanted))
    return failed, len(wanted) - len(failed)


def _current(kept: dict[str, KeptResult], state: BridgeState) -> KeptResult | None:
    """The kept result of a bridge, if it rests on what the record holds today and on this version."""
    found = kept.get(state.bridge)
    return found if found and (found.evidence, found.version) == (state.evidence, VERSION) else None


def _row(
    state: BridgeState,
    assessed: KeptResult | None,
    followed: KeptResult | None,
    actions: Sequence[ActionResult],
    failed: str | None,
    today: dt.date,
) -> NetworkRow:
    assessment = None if assessed is None else from_plain(AssessmentResult, assessed.result)
    trend = None if followed is None else from_plain(TrendResult, followed.result)
    girder, section = _governing(assessment)
    soonest = _soonest(trend)
    due = None if trend is None else trend.next_visit_by
    late = 0 if due is None else max((today - due).days, 0)
    overdue = [action for action in actions if action.status == "overdue"]
    case = None if section is None else section.calibrated
    used = None if case is None else case.utilisation
    doubts = _doubts(state, late, due, failed)
    if assessment is not None and any(UNREAD in caution for caution in assessment.cautions):
        doubts.append("a pad replaced since the last calibration has not been read")
    if used is None and failed is None:
        doubts.append("no utilisation could be determined")
    worst = max((action.days_overdue for action in overdue), default=0)
    first = [_overdue_actions(len(overdue), worst)] if overdue else []
    status = status_of(used)
    return NetworkRow(
        rank=0,
        bridge=state.bridge,
        name=state.name,
        status="unknown" if doubts and status != "over" else status,
        first=first + doubts,
        girder=girder,
        section=None if section is None else section_name(section.effect, section.span, section.support),
        utilisation=used,
        utilisation_low95=None if case is None else case.utilisation_low95,
        utilisation_high95=None if case is None else case.utilisation_high95,
        probability_over_1=None if case is None else case.probability_over_1,
        soonest_section=None if soonest is None else _named(soonest),
        median_crossing=None if soonest is None else soonest.median_crossing,
        earliest_5_percent=None if soonest is None else soonest.earliest_5_percent,
        calibration_visit=None if assessment is None else assessment.calibration_visit,
        last_visit=state.last_visit,
        next_visit_by=due,
        visit_days_overdue=late,
        open_actions=len(actions),
        overdue_actions=len(overdue),
        action_days_overdue=worst,
    )


def _overdue_actions(count: int, days: int) -> str:
    what = "1 action overdue" if count == 1 else f"{count} actions overdue, the longest"
    return f"{what} by {days} day{'s' * (days != 1)}"


def _doubts(state: BridgeState, late: int, due: dt.date | None, failed: str | None) -> list[str]:
    """What of a bridge is overdue or unknown."""
    said = []
    if failed is not None:
        said.append(f"not determined: {failed}")
    if late:
        said.append(f"visit overdue by {late} day{'s' * (late != 1)}: it was due by {due}")
    if state.last_visit is None:
        said.append("no visit is in the record")
    if state.last_calibrated is None:
        said.append("never calibrated: the figures are those of nominal pads")
    elif state.last_tested is not None and state.last_tested > state.last_calibrated:
        said.append(f"stale: the visit of {state.last_tested} is not calibrated")
    elif state.calibrated_revision != state.revision:
        said.append(
            f"stale: calibrated with revision {state.calibrated_revision} of the bridge file, "
            f"and {state.revision} is the newest"
        )
    return said


def _governing(assessment: AssessmentResult | None) -> tuple[str | None, SectionResult | None]:
    """The section most likely over 1; of those alike, the most used."""
    if assessment is None:
        return None, None
    known = [
        (one.calibrated.probability_over_1 or 0.0, one.calibrated.utilisation, girder.girder, one)
        for girder in assessment.girders
        for one in girder.sections
        if one.calibrated.utilisation is not None
    ]
    if not known:
        return None, None
    _, _, girder_id, section = max(known, key=lambda one: one[:2])
    return girder_id, section


def _soonest(trend: TrendResult | None) -> SpanTrend | None:
    """The section that reaches a 5 % chance of being over first."""
    rows = [] if trend is None else [row for row in trend.spans if row.earliest_5_percent is not None]
    return min(
        rows,
        key=lambda row: (row.earliest_5_percent or _NO_DATE, -(row.utilisation_now or 0.0)),
        default=None,
    )


def _named(row: SpanTrend) -> str:
    return f"{row.girder}: {section_name(row.effect, row.span, row.support)}"


def _urgency(row: NetworkRow) -> tuple[object, ...]:
    """Overdue or unknown first; then the likelier over, the sooner, the more used."""
    return (
        not row.first,
        -(row.probability_over_1 or 0.0),
        row.earliest_5_percent or _NO_DATE,
        -(row.utilisation or 0.0),
        row.bridge,
    )
