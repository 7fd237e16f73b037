"""What stands beside the governing sections: settlement, temperature, rating levels, pads."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_table
from assess.cli.tables.words import number, section_name

if TYPE_CHECKING:
    from assess.results import GirderAssessment, PadCheck, SectionResult


def show_beside(girder: GirderAssessment) -> None:
    """Print the tables that this girder has something for."""
    moved = [s for s in girder.sections if s.calibrated.settlement or s.calibrated.temperature]
    if moved:
        click.echo()
        _show_moved(moved)
    if any(s.calibrated.rating_levels for s in girder.sections):
        click.echo()
        _show_levels(girder.sections)
    if girder.pads:
        click.echo()
        _show_pads(girder.pads)


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
        ["rating factor (calibrated case)", *levels],
        [
            [
                section_name(s.effect, s.span, s.support),
                *(number(s.calibrated.rating_levels[level]) for level in levels),
            ]
            for s in sections
        ],
    )


def _show_pads(pads: list[PadCheck]) -> None:
    print_table(
        [
            "pad",
            "permanent\npressure, MPa",
            "total\npressure, MPa",
            "least\npressure, MPa",
            "total\nstrain, %",
            "share of\nits limits",
            "nearest limit",
        ],
        [_pad_row(pad) for pad in pads],
    )


def _pad_row(pad: PadCheck) -> list[str]:
    nearest = max(pad.limits, key=lambda limit: limit.utilisation, default=None)
    return [
        pad.support,
        number(pad.permanent_pressure_MPa),
        number(pad.total_pressure_MPa),
        number(pad.minimum_pressure_MPa),
        number(100.0 * pad.total_strain),
        number(None if nearest is None else nearest.utilisation),
        "no limit" if nearest is None else f"{nearest.name}, {pad.status}",
    ]
