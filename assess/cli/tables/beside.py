"""What stands beside the governing sections: close explanations, settlement, temperature, rating levels."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_table, print_wrapped
from assess.cli.tables.words import number, section_name

if TYPE_CHECKING:
    from assess.results import GirderAssessment, SectionResult


def show_beside(girder: GirderAssessment) -> None:
    """Print the tables that this girder has something for."""
    worse = [s for s in girder.sections if s.calibrated.used_more_by_rival]
    if worse:
        click.echo()
        _show_rivals(girder, worse)
    moved = [s for s in girder.sections if s.calibrated.settlement or s.calibrated.temperature]
    if moved:
        click.echo()
        _show_moved(moved)
    if any(s.calibrated.rating_levels for s in girder.sections):
        click.echo()
        _show_levels(girder.sections)


def _show_rivals(girder: GirderAssessment, sections: list[SectionResult]) -> None:
    """Sections that an explanation which the readings bear as well uses more, and the reading that would decide."""
    print_table(
        [
            "used more, if explained otherwise",
            "explanation that the readings bear as well",
            "utilisation,\ncalibrated",
            "utilisation\nby it",
        ],
        [
            [
                section_name(s.effect, s.span, s.support),
                s.calibrated.worst_rival or "",
                number(s.calibrated.utilisation),
                number(s.calibrated.worst_rival_utilisation),
            ]
            for s in sections
        ],
        words=2,
    )
    named = {s.calibrated.worst_rival for s in sections}
    for rival in girder.rivals:
        if rival.name in named and rival.told_apart_by:
            print_wrapped(
                f"This reading would decide between the calibration and the explanation by {rival.name}: "
                f"{rival.told_apart_by} (the first as calibrated)."
            )


def _show_moved(sections: list[SectionResult]) -> None:
    warm = any(s.calibrated.temperature for s in sections)
    print_table(
        [
            f"{'settlement and temperature' if warm else 'settlement'}\n(calibrated case, unfactored)",
            "unit",
            "settlement\nadds",
            *(["temperature\nadds"] if warm else []),
            "utilisation with\nrelief by settlement",
            "utilisation\nwithout it",
        ],
        [
            [
                section_name(s.effect, s.span, s.support),
                "kN" if s.effect == "shear" else "kN m",
                number(s.calibrated.settlement),
                *([number(s.calibrated.temperature)] if warm else []),
                number(s.calibrated.utilisation_with_relief),
                number(s.calibrated.utilisation_without_relief),
            ]
            for s in sections
        ],
        words=2,
    )


def _show_levels(sections: list[SectionResult]) -> None:
    levels = list(sections[0].calibrated.rating_levels)
    print_table(
        ["least rating factor (calibrated case)", *levels],
        [
            [
                section_name(s.effect, s.span, s.support),
                *(number(s.calibrated.rating_levels[level]) for level in levels),
            ]
            for s in sections
        ],
    )
