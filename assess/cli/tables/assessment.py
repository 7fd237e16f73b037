"""The assessment: unyielding, nominal and calibrated side by side."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from assess.cli.tables.actions import show_first
from assess.cli.tables.beside import show_beside
from assess.cli.tables.screen import print_cautions, print_heading, print_table
from assess.cli.tables.supposed import show_supposed
from assess.cli.tables.words import chance, interval, number, section_name

if TYPE_CHECKING:
    from assess.results import AssessmentResult, GirderAssessment, PadCheck, ReactionResult, SectionResult


def show_assessment(result: AssessmentResult) -> None:
    """Print the governing sections and the reactions of every girder, open actions first."""
    show_first(result.actions)
    from assess.results import grouped

    if result.calibration_visit is None:
        click.echo(f"Bridge {result.bridge}: no kept calibration; the calibrated case is the nominal one")
    else:
        click.echo(f"Bridge {result.bridge}: pads as calibrated from the visit {result.calibration_visit}")
    for line in result.supposed:
        click.echo(f"Supposed: {line}")
    for girder in result.girders:
        print_heading(f"Girder {girder.girder}")
        _show_sections(girder)
        show_supposed(girder)
        show_beside(girder)
        click.echo()
        print_table(
            [
                "support reactions, kN",
                "unyielding,\npermanent",
                "calibrated,\npermanent",
                "calibrated,\nlive, largest",
                "calibrated,\nlive, smallest",
            ],
            [_reaction_row(reaction) for reaction in girder.reactions],
        )
        _show_pads(girder)
    print_cautions(grouped(result.cautions, [girder.girder for girder in result.girders]))


def _show_pads(girder: GirderAssessment) -> None:
    """The pads that give their geometry, each with its most used limit."""
    if not girder.pads:
        return
    click.echo()
    print_table(
        [
            "pad from its geometry",
            "pressure, MPa,\npermanent",
            "pressure, MPa,\ntotal",
            "layer strain, %,\ntotal",
            "most used limit",
            "value",
            "limit",
            "utilisation",
            "status",
        ],
        [_pad_row(pad) for pad in girder.pads],
    )


def _pad_row(pad: PadCheck) -> list[str]:
    worst = max(pad.limits, key=lambda limit: limit.utilisation)
    unit = f" {worst.unit}" if worst.unit else ""
    return [
        pad.support,
        number(pad.permanent_pressure_MPa),
        number(pad.total_pressure_MPa),
        number(100.0 * pad.total_strain),
        worst.name if worst.load in worst.name else f"{worst.name}, {worst.load}",
        f"{number(worst.value)}{unit}",
        f"{number(worst.limit)}{unit}",
        number(worst.utilisation),
        worst.status,
    ]


def _show_sections(girder: GirderAssessment) -> None:
    print_table(
        [
            "governing section\n(calibrated case)",
            "unit",
            "x,\nm",
            "\ncapacity",
            "factored\neffect",
            "utilisation,\nunyielding",
            "utilisation,\nnominal",
            "utilisation, calibrated\n(95 % band)",
            "rating factor,\nleast",
            "probability\nover 1, %",
        ],
        [_section_row(section) for section in girder.sections],
        words=2,
    )


def _section_row(section: SectionResult) -> list[str]:
    case = section.calibrated
    return [
        section_name(section.effect, section.span, section.support),
        "kN" if section.effect == "shear" else "kN m",
        number(case.x_m),
        number(case.capacity, none="not given"),
        number(case.factored),
        number(section.unyielding.utilisation),
        number(section.nominal.utilisation),
        interval(case.utilisation, case.utilisation_low95, case.utilisation_high95),
        number(case.least_rating_factor),
        chance(case.probability_over_1),
    ]


def _reaction_row(reaction: ReactionResult) -> list[str]:
    return [
        reaction.support,
        number(reaction.unyielding_permanent_kN),
        number(reaction.calibrated_permanent_kN),
        number(reaction.calibrated_live_max_kN),
        number(reaction.calibrated_live_min_kN),
    ]
