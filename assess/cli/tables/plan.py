"""The plan of the next visit: positions, readings in order of worth, what they will tell."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_cautions, print_heading, print_table, print_wrapped
from assess.cli.tables.words import counted, listed, number, section_name

if TYPE_CHECKING:
    from assess.results import GirderPlan, HalfPlan, PlannedReading, PlanResult


def show_plan(result: PlanResult) -> None:
    """Print the plan of every girder."""
    click.echo(f"Bridge {result.bridge}, next visit with the vehicle {result.vehicle}")
    for girder in result.girders:
        print_heading(f"Girder {girder.girder}")
        print_wrapped(_aim(girder))
        click.echo()
        _show_positions(girder)
        _show_readings(girder.readings, girder.sd_utilisation_before)
        click.echo()
        _show_known(girder)
        click.echo()
        _show_half(girder, girder.half_cost)
    if result.defaults:
        print_heading("Taken because the bridge file does not say it")
        for sentence in result.defaults:
            print_wrapped(sentence, first="- ", then="  ")
    print_cautions(result.cautions)


def _aim(girder: GirderPlan) -> str:
    if girder.governs is None:
        return "No section gives a capacity: the readings are chosen for all pads and seats together."
    name = section_name(girder.governs.effect, girder.governs.span, girder.governs.support)
    return f"Chosen for {name}, the worst section: utilisation {number(girder.utilisation)}."


def _show_positions(girder: GirderPlan) -> None:
    if not girder.positions:
        print_wrapped("No position of the vehicle: all readings are of the permanent state.")
        click.echo()
        return
    rows = [[one.state, number(one.leading_axle_at_m)] for one in girder.positions]
    print_table(["state", "leading axle\nat, m"], rows)
    click.echo()


def _show_readings(readings: Sequence[PlannedReading], before: float | None) -> None:
    first = ["", "before any of them", "", "", "", "", _unsure(before)]
    rows = [
        [
            str(i),
            one.quantity,
            one.support if one.support is not None else f"x = {one.at_m:.4g} m",
            one.state,
            number(one.sd),
            one.unit,
            _unsure(one.sd_utilisation_after),
        ]
        for i, one in enumerate(readings, start=1)
    ]
    print_table(
        ["", "reading", "place", "state", "sd", "unit", "utilisation then\nunsure by (sd)"],
        [first, *rows],
        words=4,
    )


def _unsure(sd: float | None) -> str:
    return number(sd, none="no capacity")


def _show_known(girder: GirderPlan) -> None:
    pads = [
        [one.support, "stiffness, %", number(100.0 * one.sd_ln_before), number(100.0 * one.sd_ln_after)]
        for one in girder.pads
    ]
    seats = [
        [one.support, "seat level, mm", number(one.sd_mm_before), number(one.sd_mm_after)]
        for one in girder.seats
    ]
    print_table(["support", "", "sd before", "sd after"], [*pads, *seats], words=2)


def _show_half(girder: GirderPlan, half: HalfPlan) -> None:
    costs = f"At half the cost ({number(half.cost)} of {number(girder.cost)})"
    if not half.readings:
        print_wrapped(f"{costs} there is no reading.")
        return
    told = (
        ""
        if half.sd_utilisation_after is None
        else f", utilisation unsure by {number(half.sd_utilisation_after)}"
    )
    print_wrapped(f"{costs}, the best {counted(len(half.readings), 'reading')}{told}:")
    for state in dict.fromkeys(one.state for one in half.readings):
        at = [number(one.leading_axle_at_m) for one in half.positions if one.state == state]
        named = [
            f"{one.quantity} {one.support}"
            if one.support is not None
            else f"{one.quantity} at {one.at_m:.4g} m"
            for one in half.readings
            if one.state == state
        ]
        where = f" (leading axle at {at[0]} m)" if at else ""
        print_wrapped(f"{state}{where}: {listed(named)}", first="  ", then="    ")
