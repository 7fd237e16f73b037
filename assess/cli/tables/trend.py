"""The trend: pads over the visits, utilisations carried forward, the next visit."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_cautions, print_heading, print_table, print_wrapped
from assess.cli.tables.words import NOT_DETERMINED, chance, day, interval, number, section_name

if TYPE_CHECKING:
    import datetime as dt

    from assess.results import PadTrend, SpanTrend, TrendResult

NONE_FORESEEN = "none foreseen"


def show_trend(result: TrendResult) -> None:
    """Print the pads' laws, the sections carried forward, and when to visit next."""
    click.echo(f"Bridge {result.bridge}, as of {result.as_of}")
    for name in dict.fromkeys([*(p.girder for p in result.pads), *(s.girder for s in result.spans)]):
        print_heading(f"Girder {name}")
        _show_pads([pad for pad in result.pads if pad.girder == name])
        click.echo()
        _show_spans([span for span in result.spans if span.girder == name])
    click.echo()
    print_wrapped(_next_visit(result.next_visit_by, result.next_visit_reason))
    print_cautions(result.cautions)


def _show_pads(pads: Sequence[PadTrend]) -> None:
    print_table(
        ["pad", "law", "visits", "stiffness change a year, %\n(95 % interval)", "step between"],
        [
            [
                pad.support,
                pad.law,
                str(pad.visits),
                interval(pad.change_per_year_percent, pad.low95, pad.high95),
                "no step" if pad.step_between is None else " and ".join(map(day, pad.step_between)),
            ]
            for pad in pads
        ],
        words=2,
    )


def _show_spans(spans: Sequence[SpanTrend]) -> None:
    print_table(
        [
            "section",
            "status",
            "utilisation\nnow",
            "chance over 1\nnow, %",
            "median\ncrossing of 1",
            "chance over 1\nreaches 5 %",
        ],
        [
            [
                section_name(span.effect, span.span, span.support),
                span.status,
                number(span.utilisation_now),
                chance(span.probability_over_1_now),
                _crossing(span, span.median_crossing),
                _crossing(span, span.earliest_5_percent),
            ]
            for span in spans
        ],
        words=2,
    )


def _crossing(span: SpanTrend, date: dt.date | None) -> str:
    return day(date, none=NOT_DETERMINED if span.utilisation_now is None else NONE_FORESEEN)


def _next_visit(date: dt.date | None, reason: str) -> str:
    told = f": {reason}" if reason else ""
    if date is None:
        return f"Next visit: date {NOT_DETERMINED}{told}"
    return f"Next visit by {date}{told}"
