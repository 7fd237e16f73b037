"""All bridges on the screen, the most urgent first."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_cautions, print_table, print_wrapped
from assess.cli.tables.words import chance, counted, day, interval

if TYPE_CHECKING:
    from assess.results import NetworkResult, NetworkRow


def show_network(result: NetworkResult) -> None:
    """Print one row a bridge, what is overdue or unknown below the table, and the cautions."""
    if not result.bridges:
        click.echo("No bridge in the record yet; add one: bedstone bridge add FILE")
        return
    first = sum(bool(row.first) for row in result.bridges)
    click.echo(
        f"{counted(len(result.bridges), 'bridge')} on {result.as_of}, {first} with something overdue or unknown"
    )
    print_table(
        [
            "",
            "bridge",
            "status",
            "governing section",
            "utilisation\n(95 % band)",
            "probability\nover 1, %",
            "probability\nreaches 5 %",
            "next visit\nby",
            "open\nactions",
        ],
        [_row(row) for row in result.bridges],
        words=4,
    )
    if first:
        click.echo()
        click.echo("Overdue or unknown")
    for row in result.bridges:
        if row.first:
            print_wrapped(f"{row.bridge}: {'; '.join(row.first)}", first="- ", then="  ")
    print_cautions(result.cautions)


def _row(row: NetworkRow) -> list[str]:
    actions = str(row.open_actions)
    if row.overdue_actions:
        actions += f" ({row.overdue_actions} OVERDUE)"
    return [
        str(row.rank),
        row.bridge,
        row.status,
        "not determined" if row.section is None else f"{row.girder}: {row.section}",
        interval(row.utilisation, row.utilisation_low95, row.utilisation_high95),
        chance(row.probability_over_1),
        day(
            row.earliest_5_percent,
            none="not determined" if row.calibration_visit is None else "none foreseen",
        ),
        day(row.next_visit_by) + (" (OVERDUE)" if row.visit_days_overdue else ""),
        actions,
    ]
