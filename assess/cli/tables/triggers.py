"""Trigger readings, a row for each way a pad or a seat can go."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_cautions, print_heading, print_table, print_wrapped
from assess.cli.tables.words import number

if TYPE_CHECKING:
    from assess.results import TriggerReading, TriggersResult


def show_triggers(result: TriggersResult) -> None:
    """Print the trigger readings of every girder."""
    from assess.results import grouped

    told = "nominal pads" if result.calibration_visit is None else f"the visit {result.calibration_visit}"
    click.echo(f"Bridge {result.bridge}: trigger readings, all else as of {told}")
    for girder in dict.fromkeys(one.girder for one in result.triggers):
        print_heading(f"Girder {girder}")
        past = [one for one in result.past if one.girder == girder]
        if past:
            each = "; ".join(f"{one.section} {number(one.utilisation)} ({one.status})" for one in past)
            print_wrapped(f"Reached today already: {each}.")
            click.echo()
        print_table(
            [
                "support",
                "reading",
                "state",
                "pad or seat",
                "now,\nmm",
                f"watch ({result.watch:g}),\nmm",
                "section",
                f"limit ({result.limit:g}),\nmm",
                "section",
            ],
            [_row(one) for one in result.triggers if one.girder == girder],
            words=4,
        )
    print_cautions(grouped(result.cautions, list(dict.fromkeys(one.girder for one in result.triggers))))


def _row(one: TriggerReading) -> list[str]:
    place = "" if one.at_m is None else f" at {one.at_m:g} m"
    return [
        one.support,
        f"{one.quantity}{place}",
        one.state,
        f"{'seat' if one.quantity == 'settlement' else 'pad'} {one.way}",
        number(one.now_mm),
        _value(one.watch_mm, one.watch_reason, one.range_mm),
        one.watch_governs or "none",
        _value(one.limit_mm, one.limit_reason, one.range_mm),
        one.limit_governs or "none",
    ]


def _value(value: float | None, reason: str | None, end: float | None) -> str:
    if value is not None:
        return number(value)
    if reason is not None and reason.startswith("none in range"):
        return f"none to {number(end)}"
    return "not told"
