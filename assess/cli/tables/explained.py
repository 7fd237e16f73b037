"""What stands beside the stiffnesses of a calibration: seats, other unknowns, rivals, causes, errors of the model."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_table, print_wrapped
from assess.cli.tables.words import interval, listed, number

if TYPE_CHECKING:
    from assess.results import CompensatingError, GirderCalibration, RivalResult


def show_unknowns(girder: GirderCalibration) -> None:
    """Print settlements and what else was asked of the readings, and who asked."""
    if girder.settlements_mm:
        click.echo()
        print_table(
            [
                "seat",
                "settlement, mm\n(95 % interval)",
                "told by the\nreadings, %",
                "out of the line of the\nend seats, mm",
            ],
            [
                [
                    one.support,
                    interval(one.value, one.low95, one.high95),
                    number(100 * one.data_share),
                    interval(one.moment_relevant, one.moment_relevant_low95, one.moment_relevant_high95),
                ]
                for one in girder.settlements_mm
            ],
        )
    if girder.others:
        click.echo()
        print_table(
            ["unknown", "value\n(95 % interval)", "unit", "told by the\nreadings, %"],
            [
                [
                    one.name,
                    interval(one.value, one.low95, one.high95),
                    one.unit or "-",
                    number(100 * one.data_share),
                ]
                for one in girder.others
            ],
        )
    if girder.unknowns:
        print_wrapped(f"Asked for by {girder.unknowns_from}: {listed(girder.unknowns)}.")


def show_explanations(girder: GirderCalibration) -> None:
    """Print the rivals and what moved at each support."""
    if girder.settlements_mm and girder.causes:
        click.echo()
        click.echo("What moved at each pad")
        print_table(
            ["pad", "moved", "off by, sd, had\nthe seat not moved", "off by, sd, were\nthe pad nominal"],
            [
                [
                    one.support,
                    one.cause,
                    number(one.off_if_seat_still_sd, none="not read"),
                    number(one.off_if_pad_nominal_sd),
                ]
                for one in girder.causes
            ],
            words=2,
        )
    if girder.rivals:
        click.echo()
        click.echo("Explanations of these readings")
        ranked = sorted(girder.rivals, key=lambda one: float("inf") if one.aicc is None else one.aicc)
        print_table(
            ["explanation", "AICc", "chi-square", "unknowns told", ""],
            [
                [
                    one.name,
                    number(one.aicc),
                    number(one.chi_square),
                    number(one.effective_unknowns),
                    _standing(girder, one),
                ]
                for one in ranked
            ],
        )
    for one in girder.proposed_removals:
        p_value = number(one.p_value)
        others = f" (or {listed(one.alike)}: they cannot be told apart)" if one.alike else ""
        print_wrapped(
            f"Look again at {one.reading}{others}: {number(one.standardised_residual)} standard deviations off; "
            f'without it p would be {p_value}. To leave it out: --without "{one.reading}" --reason "..."',
        )


def _standing(girder: GirderCalibration, one: RivalResult) -> str:
    words = []
    if one.name == girder.calibrated_as:
        words.append("calibrated")
    if not one.told:
        words.append("not told by the readings")
    elif one.within_2:
        words.append("within 2 of the best")
    elif one.carried:
        words.append("within 2 by AIC")
    if one.simpler and one.carried:
        words.append("simpler")
    return ", ".join(words)


def show_compensating(errors: Sequence[CompensatingError]) -> None:
    """Print how far each pad moves under errors of the model."""
    if not errors:
        return
    supports = [pad.support for pad in errors[0].pads]
    click.echo()
    click.echo(
        "Change of each pad, %, if the model were wrong in one thing (in brackets: in its standard deviations)"
    )
    print_table(
        ["if", *supports],
        [
            [one.error, *(f"{number(pad.change_percent)} ({number(pad.change_sd)})" for pad in one.pads)]
            for one in errors
        ],
    )
