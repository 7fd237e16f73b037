"""The supposed case beside today's."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_table
from assess.cli.tables.words import number, section_name

if TYPE_CHECKING:
    from assess.results import CaseResult, GirderAssessment, SectionResult


def show_supposed(girder: GirderAssessment) -> None:
    """Print utilisations and reactions as supposed beside today's, where anything is supposed."""
    if not any(section.supposed for section in girder.sections):
        return
    click.echo()
    print_table(
        [
            "as supposed",
            "unit",
            "x,\nm",
            "\ncapacity",
            "factored\neffect",
            "utilisation,\nsupposed",
            "utilisation,\ntoday",
            "\nchange",
            "rating factor,\nleast",
        ],
        [_row(section, section.supposed) for section in girder.sections if section.supposed],
        words=2,
    )
    click.echo()
    print_table(
        [
            "support reactions, kN",
            "supposed,\npermanent",
            "today,\npermanent",
            "supposed,\nlive, largest",
            "supposed,\nlive, smallest",
        ],
        [
            [
                one.support,
                number(one.supposed_permanent_kN),
                number(one.calibrated_permanent_kN),
                number(one.supposed_live_max_kN),
                number(one.supposed_live_min_kN),
            ]
            for one in girder.reactions
        ],
    )


def _row(section: SectionResult, case: CaseResult) -> list[str]:
    today = section.calibrated.utilisation
    change = None if case.utilisation is None or today is None else case.utilisation - today
    return [
        section_name(section.effect, section.span, section.support),
        "kN" if section.effect == "shear" else "kN m",
        number(case.x_m),
        number(case.capacity, none="not given"),
        number(case.factored),
        number(case.utilisation),
        number(today),
        number(None) if change is None else f"{change:+.3f}",
        number(case.least_rating_factor),
    ]
