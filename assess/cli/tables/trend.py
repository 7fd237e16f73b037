"""The trend: pads over the visits, utilisations carried forward, the next visit."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from typing import TYPE_CHECKING

import click

from assess.cli.tables.actions import show_first
from assess.cli.tables.screen import print_cautions, print_heading, print_table, print_wrapped
from assess.cli.tables.words import NOT_DETERMINED, chance, day, interval, number, section_name

if TYPE_CHECKING:
    from assess.results import LossTrend, PadTrend, SeatTrend, SpanTrend, TrendResult

NONE_FORESEEN = "none foreseen"
_NAMED = 4  # of what a spread comes from, at most
STEP_VISITS = 4  # fewer cannot tell a step from a drift


def show_trend(result: TrendResult) -> None:
    """Print the pads' laws, the sections carried forward, and when to visit next; open actions first."""
    show_first(result.actions)
    click.echo(f"Bridge {result.bridge}, as of {result.as_of}")
    for name in dict.fromkeys([*(p.girder for p in result.pads), *(s.girder for s in result.spans)]):
        print_heading(f"Girder {name}")
        _show_pads([pad for pad in result.pads if pad.girder == name])
        seats = [seat for seat in result.seats if seat.girder == name]
        if seats:
            click.echo()
            _show_seats(seats)
        click.echo()
        rows = [span for span in result.spans if span.girder == name]
        _show_spans(rows)
        _show_shares(rows)
    if result.losses:
        print_heading("Plates")
        _show_losses(result.losses)
    click.echo()
    print_wrapped(_next_visit(result))
    print_cautions(result.cautions)


def _show_pads(pads: Sequence[PadTrend]) -> None:
    print_table(
        ["pad", "law", "visits", "stiffness change a year, %\n(95 % interval)", "step between"],
        [
            [
                pad.support,
                pad.law if pad.visits > 1 else "none: one visit",
                str(pad.visits),
                interval(pad.change_per_year_percent, pad.low95, pad.high95),
                _step(pad),
            ]
            for pad in pads
        ],
        words=2,
    )


def _step(pad: PadTrend) -> str:
    if pad.step_between is not None:
        told = " and ".join(map(day, pad.step_between))
        return told if pad.step_percent is None else f"{told}: {number(pad.step_percent)} %"
    return "no step" if pad.visits >= STEP_VISITS else "cannot be told"


def _show_seats(seats: Sequence[SeatTrend]) -> None:
    print_table(
        [
            "seat",
            "visits",
            "down since the datum, mm\n(standard deviation)",
            "downward a year, mm\n(95 % interval)",
        ],
        [
            [
                seat.support,
                str(seat.visits),
                f"{number(seat.settlement_mm)} ({number(seat.sd_mm)})",
                interval(seat.rate_mm_per_year, seat.low95, seat.high95) + _moves(seat),
            ]
            for seat in seats
        ],
    )


def _show_spans(spans: Sequence[SpanTrend]) -> None:
    print_table(
        [
            "section",
            "status",
            "utilisation at\nthe last visit",
            "probability\nover 1, %",
            "median\ncrossing of 1",
            "probability over\n1 reaches 5 %",
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


def _moves(seat: SeatTrend) -> str:
    if seat.step_between is not None:
        return f", a step between {' and '.join(map(day, seat.step_between))}"
    return ", moving" if seat.moving else ""


def _show_losses(losses: Sequence[LossTrend]) -> None:
    print_table(
        ["section", "plate", "visits", "thickness lost, mm\n(all faces)", "lost a year, mm\n(95 % interval)"],
        [
            [
                one.section,
                one.plate,
                str(one.visits),
                number(one.loss_mm),
                interval(one.rate_mm_per_year, one.low95, one.high95),
            ]
            for one in losses
        ],
        words=2,
    )


def _show_shares(spans: Sequence[SpanTrend]) -> None:
    """Say what the forecast of the most used section is uncertain by."""
    told = [span for span in spans if span.shares and span.shares_on is not None]
    if not told:
        return
    most = max(told, key=lambda span: span.utilisation_now or 0.0)
    each = ", ".join(
        f"{'section losses' if one.what == 'loss' else f'{one.what} {one.support}'} {one.share:.0%}"
        for one in most.shares[:_NAMED]
    )
    name = section_name(most.effect, most.span, most.support)
    click.echo()
    print_wrapped(f"The spread of {name} on {day(most.shares_on)} comes from: {each}")


def _next_visit(result: TrendResult) -> str:
    told = f": {result.next_visit_reason}" if result.next_visit_reason else ""
    if result.next_visit_by is None:
        return f"Next visit: date {NOT_DETERMINED}{told}"
    late = " (OVERDUE)" if result.overdue else ""
    return f"Next visit by {result.next_visit_by}{late}{told}"
