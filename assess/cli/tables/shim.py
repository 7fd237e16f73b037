"""Packing: heights, what they do beside doing nothing and new pads, and the stages of jacking."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_cautions, print_heading, print_table, print_wrapped
from assess.cli.tables.words import listed, number, section_name

if TYPE_CHECKING:
    from assess.results import GirderShims, Jack, JackingStage, ShimResult


def show_shims(result: ShimResult) -> None:
    """Print the packing of every girder."""
    from assess.results import grouped

    told = "nominal pads" if result.calibration_visit is None else f"the visit {result.calibration_visit}"
    click.echo(
        f"Bridge {result.bridge}: packing in steps of {number(result.step_mm)} mm up to "
        f"{number(result.lift_max_mm)} mm, pads and seats as of {told}"
    )
    for girder in result.girders:
        print_heading(f"Girder {girder.girder}")
        if girder.not_determined is not None:
            print_wrapped(f"Packing is not determined: {girder.not_determined}.")
            continue
        _show_packing(girder)
        click.echo()
        _show_sections(girder)
        _show_stages(girder, result.jack_allowance)
    print_cautions(grouped(result.cautions, [girder.girder for girder in result.girders]))


def _show_packing(girder: GirderShims) -> None:
    reactions = {one.support: one for one in girder.reactions}
    print_table(
        [
            "support",
            "packing,\nmm",
            "permanent reaction,\nkN, nothing done",
            "\nshimmed",
            "\nnew pads",
        ],
        [
            [
                one.support,
                number(one.value),
                number(reactions[one.support].nothing_kN),
                number(reactions[one.support].shimmed_kN),
                number(reactions[one.support].replaced_kN),
            ]
            for one in girder.shims_mm
        ],
    )


def _show_sections(girder: GirderShims) -> None:
    worst = [
        "worst of the girder",
        number(girder.worst_utilisation_before),
        number(girder.worst_utilisation_after),
        number(girder.worst_utilisation_replaced),
    ]
    rows = [
        [
            section_name(one.effect, one.span, one.support),
            number(one.nothing),
            number(one.shimmed),
            number(one.replaced),
        ]
        for one in girder.sections
    ]
    print_table(["utilisation", "nothing done", "shimmed", "new pads"], [*rows, worst])


def _show_stages(girder: GirderShims, allowance: float) -> None:
    if not girder.stages:
        return
    click.echo()
    print_table(
        [
            "stage",
            "jacks at",
            "packing\nadded, mm",
            "packing\nin all, mm",
            "girder\nrises, mm",
            "calculated\nload, kN",
            f"jacks good for\n{allowance:g} x load, kN",
            "utilisation meanwhile,\npermanent load",
        ],
        [_jack_row(stage, jack) for stage in girder.stages for jack in stage.jacks],
        words=2,
    )
    off = [stage for stage in girder.stages if stage.lifts]
    for stage in off:
        print_wrapped(f"Stage {stage.stage}: the girder comes off {listed(stage.lifts)}.")


def _jack_row(stage: JackingStage, jack: Jack) -> list[str]:
    return [
        str(stage.stage),
        jack.support,
        number(jack.lift_mm),
        number(jack.packing_mm),
        number(jack.rise_mm),
        number(jack.load_kN),
        number(jack.capacity_kN),
        number(stage.worst_utilisation),
    ]
