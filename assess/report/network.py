"""The network as one self-contained HTML page: a row a bridge, the most urgent first."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from markupsafe import Markup

from assess.report import words
from assess.report.figures import utilisation
from assess.report.files import write_whole
from assess.report.page import pages
from assess.results import NetworkResult, NetworkRow

_STATUSES = ("over", "watch", "within", "unknown")


@dataclass(frozen=True, kw_only=True)
class BridgeLine:
    """A bridge as it is printed."""

    rank: int
    name: str
    key: str
    status: str
    mark: Markup
    number: str
    section: str
    probability: str
    soonest: str
    median: str
    visit: str
    last: str
    actions: str
    late: bool  # something of it is overdue
    first: list[str]


def render_network(result: NetworkResult) -> str:
    """Return the page; the same result gives the same text."""
    lines = [_line(row) for row in result.bridges]
    counts = [(word, sum(row.status == word for row in result.bridges)) for word in _STATUSES]
    return (
        pages()
        .get_template("network.html.j2")
        .render(
            as_of=words.date(result.as_of),
            version=result.version,
            urgent=[line for line in lines if line.first],
            others=[line for line in lines if not line.first],
            counts=counts,
            total=len(lines),
            open_actions=sum(row.open_actions for row in result.bridges),
            overdue_actions=sum(row.overdue_actions for row in result.bridges),
            cautions=[words.prose(c) for c in result.cautions if not c.startswith(words.SAID_BY_FIXED)],
            fixed_cautions=list(words.FIXED_CAUTIONS),
        )
    )


def write_network(result: NetworkResult, path: Path) -> None:
    """Write the page, whole or not at all.

    Raises
    ------
    OSError
        If the folder is missing or cannot be written; nothing is left behind.
    """
    write_whole(path, render_network(result).encode("utf-8"))


def _line(row: NetworkRow) -> BridgeLine:
    section = (
        words.not_determined()
        if row.section is None
        else f"girder {row.girder}: {row.section}".replace('"', "")
    )
    mark = utilisation.mark(
        row.utilisation,
        row.utilisation_low95,
        row.utilisation_high95,
        key=f"bridge{row.rank}",
        name=f"{row.bridge}, {section}",
        status=row.status,
    )
    none = "no calibration is kept" if row.calibration_visit is None else ""
    foreseen = words.not_determined(none) if none else "none foreseen"
    actions = "none open" if not row.open_actions else f"{row.open_actions} open"
    if row.overdue_actions:
        actions += f", {row.overdue_actions} overdue by up to {row.action_days_overdue} days"
    visit = words.date(row.next_visit_by, none)
    if row.visit_days_overdue:
        visit += f", overdue by {row.visit_days_overdue} days"
    return BridgeLine(
        rank=row.rank,
        name=words.plain(row.name) or row.bridge,
        key=row.bridge,
        status=row.status,
        mark=Markup(mark),  # our own drawing, its texts escaped
        number=words.interval(row.utilisation, row.utilisation_low95, row.utilisation_high95),
        section=section,
        probability=words.probability(row.probability_over_1),
        soonest=words.date(row.earliest_5_percent) if row.earliest_5_percent else foreseen,
        median=words.date(row.median_crossing) if row.median_crossing else foreseen,
        visit=visit,
        last=words.date(row.last_visit, "no visit is kept"),
        actions=actions,
        late=bool(row.visit_days_overdue or row.overdue_actions),
        first=[words.prose(one) for one in row.first],
    )
