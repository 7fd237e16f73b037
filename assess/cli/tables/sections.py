"""A bridge file in numbers: sections with what governs and what is lost, supports as designed."""

from __future__ import annotations

from typing import TYPE_CHECKING

import click

from assess.cli.tables.records import show_actions
from assess.cli.tables.screen import print_cautions, print_heading, print_table, print_wrapped
from assess.cli.tables.words import NOT_DETERMINED, number

if TYPE_CHECKING:
    from assess.shown import BridgeView, CapacityShown, GirderShown, PadShown, PlateShown, SectionView

_GOVERNS = {"given": "as given", "plates": "from plates", "": ""}


def show_bridge(view: BridgeView) -> None:
    """Print the sections and the supports of a bridge."""
    click.echo(f"Bridge {view.shown.bridge}{_losses(view)}")
    for section in view.sections:
        print_heading(f"Section {section.section}")
        _show_section(section)
    for girder in view.shown.girders:
        print_heading(f"Girder {girder.girder}")
        _show_supports(girder)
        _show_pads([pad for pad in view.pads if pad.girder == girder.girder])
    show_actions(view)
    print_cautions(view.cautions)


def _losses(view: BridgeView) -> str:
    if not any(section.plates for section in view.sections):
        return ""
    if view.as_of is not None:
        return f", with the losses measured up to {view.as_of}"
    return ", with all measured losses" if any(section.losses for section in view.sections) else ", as built"


def _show_section(section: SectionView) -> None:
    if section.plates:
        plates = [*([] if section.deck is None else [section.deck]), *section.plates]
        print_table(
            ["plate", "width,\nmm", "height,\nmm", "bottom edge,\nmm", "lost,\nmm", "measured"],
            [_plate_row(plate) for plate in plates],
        )
        click.echo()
    _show_properties(section)
    click.echo()
    print_table(
        ["capacity", "unit", "value", "as given", "from plates", "governs"],
        [_capacity_row(one, bool(section.plates)) for one in section.capacities],
        words=2,
    )
    if section.plates:
        how = (
            "plastic, as the file says"
            if section.method == "plastic"
            else "elastic: first yield of any fibre"
        )
        print_wrapped(f"Losses in it: {section.losses or 'none measured'}. Moments from plates: {how}.")


def _show_properties(section: SectionView) -> None:
    shown = section.shown
    steel = "" if section.deck is None else ", steel alone"
    rows = [
        ("area", "cm2", shown.area_m2, 1e4),
        ("second moment (stiffness)", "cm4", shown.second_moment_m4, 1e8),
        ("shear area (stiffness)", "cm2", section.shear_area_m2, 1e4),
        ("elastic modulus, top", "cm3", shown.elastic_modulus_top_m3, 1e6),
        ("elastic modulus, bottom", "cm3", shown.elastic_modulus_bottom_m3, 1e6),
        ("plastic modulus" + steel, "cm3", shown.plastic_modulus_m3, 1e6),
        ("elastic axis above the underside", "mm", section.elastic_axis_mm, 1.0),
        ("plastic axis above the underside" + steel, "mm", section.plastic_axis_mm, 1.0),
    ]
    print_table(
        ["property", "unit", "value"],
        [[name, unit, _four(scale * value)] for name, unit, value, scale in rows if value is not None],
        words=2,
    )


def _plate_row(plate: PlateShown) -> list[str]:
    return [
        plate.name,
        f"{plate.width_mm:.6g}",
        f"{plate.height_mm:.6g}",
        f"{plate.bottom_mm:.6g}",
        f"{plate.loss_mm:.3g}",
        plate.lost or "no loss",
    ]


def _capacity_row(one: CapacityShown, plated: bool) -> list[str]:
    missing = NOT_DETERMINED if plated else "no plates"
    return [
        one.effect,
        "kN" if one.effect == "shear" else "kN m",
        NOT_DETERMINED if one.value is None else _four(one.value),
        "not given" if one.given is None else _four(one.given),
        missing if one.built is None else _four(one.built),
        _GOVERNS[one.source],
    ]


def _four(value: float) -> str:
    """Four significant figures: sections are compared with tables and drawings."""
    return f"{float(f'{value:.4g}'):.10g}"


def _show_supports(girder: GirderShown) -> None:
    print_table(
        ["support", "kind", "x, m", "nominal stiffness, kN/mm", "cv"],
        [
            [
                support.support,
                support.kind,
                f"{support.x_m:g}",
                "holds its level"
                if support.nominal_kN_per_m is None
                else number(support.nominal_kN_per_m / 1e3),
                "none" if support.cv is None else number(support.cv),
            ]
            for support in girder.supports
        ],
        words=2,
    )


def _show_pads(pads: list[PadShown]) -> None:
    if not pads:
        return
    click.echo()
    print_table(
        [
            "pad from its geometry",
            "formula",
            "shape\nfactor",
            "rubber in\nall, mm",
            "layer\nmodulus, MPa",
            "by geometry,\nkN/mm",
            "batch",
            "nominal",
        ],
        [
            [
                pad.support,
                pad.formula,
                number(pad.shape_factor),
                f"{pad.rubber_mm:.4g}",
                number(pad.layer_modulus_MPa),
                number(pad.geometry_kN_per_m / 1e3),
                pad.batch or "none",
                "from geometry" if pad.nominal_from == "geometry" else "as given",
            ]
            for pad in pads
        ],
        words=2,
    )
