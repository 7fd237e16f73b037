"""Stiffness of pads from geometry: what must hold for every formula."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from assess.pad import FORMULAS, Pad, PadError, PadGeometry, elastomer, stiffness_doubt

formulas = st.sampled_from(FORMULAS)
millimetres = st.integers(150, 600)


@st.composite
def pads(draw: st.DrawFn) -> Pad:
    """Laminated pads of shape factor 4 to 20, rectangular or round."""
    formula = draw(formulas)
    short = draw(millimetres) / 1e3
    layers = draw(st.integers(1, 10))
    if draw(st.booleans()):
        plan = {"diameter": short}
        radius_over = short / 4.0
    else:
        plan = {"length": short, "width": short * draw(st.floats(1.0, 2.0))}
        radius_over = short / 4.0
    geometry = PadGeometry(
        **plan,
        side_cover=0.004,
        layers=layers,
        layer_thickness=radius_over / draw(st.floats(4.0, 15.0)),
        top_bottom_cover=0.0025,
    )
    return Pad(
        geometry=geometry,
        rubber=elastomer(formula, shear_modulus=draw(st.floats(600.0, 1300.0))),
        formula=formula,
    )


@given(pads(), st.floats(1.01, 1.5))
def test_stiffer_rubber_makes_a_stiffer_pad_but_never_in_more_than_proportion(
    pad: Pad, factor: float
) -> None:
    gain = pad.stiffened(factor).stiffness / pad.stiffness
    assert 1.0 < gain <= factor * (1.0 + 1e-12)


@given(pads(), st.floats(1.01, 1.4))
def test_thicker_layers_make_a_softer_pad(pad: Pad, factor: float) -> None:
    thicker = replace(pad, geometry=pad.geometry.thicker(factor))
    assert thicker.stiffness < pad.stiffness / factor


@given(pads())
def test_one_more_layer_makes_a_softer_pad(pad: Pad) -> None:
    more = replace(pad, geometry=replace(pad.geometry, layers=pad.geometry.layers + 1))
    assert more.stiffness < pad.stiffness


@given(pads())
def test_turning_a_pad_changes_nothing(pad: Pad) -> None:
    if pad.geometry.diameter is not None:
        return
    turned = replace(
        pad, geometry=replace(pad.geometry, length=pad.geometry.width, width=pad.geometry.length)
    )
    assert turned.stiffness == pytest.approx(pad.stiffness, rel=1e-12)


@given(pads())
def test_layers_in_series_share_the_force(pad: Pad) -> None:
    """Strain of a layer times its thickness, summed over the inner layers, is no more than the whole shortening."""
    force = 500.0
    inner = pad.geometry.layers * pad.geometry.layer_thickness * pad.layer_strain(force)
    assert inner <= force / pad.stiffness * (1.0 + 1e-12)


@given(pads(), st.floats(0.01, 0.3))
def test_a_wider_tolerance_is_a_wider_doubt(pad: Pad, share: float) -> None:
    narrow = stiffness_doubt(
        replace(pad, rubber=replace(pad.rubber, shear_tolerance=share * pad.rubber.shear))
    )
    wide = stiffness_doubt(
        replace(pad, rubber=replace(pad.rubber, shear_tolerance=1.5 * share * pad.rubber.shear))
    )
    assert wide.shear > narrow.shear
    assert wide.cv > narrow.cv >= narrow.formula
    assert narrow.cv == pytest.approx(np.sqrt(narrow.shear**2 + narrow.height**2 + narrow.formula**2))


def test_a_plain_pad_counts_1_8_times_its_thickness() -> None:
    """Earlier bearing standards, from memory, to be confirmed."""
    geometry = PadGeometry(
        length=0.3,
        width=0.3,
        side_cover=0.0,
        layers=1,
        layer_thickness=0.02,
        top_bottom_cover=0.0,
        plain=True,
    )
    pad = Pad(geometry=geometry, rubber=elastomer("aashto-lrfd", shear_modulus=900.0), formula="aashto-lrfd")
    assert pad.shape_factor == pytest.approx(0.3 / (4.0 * 1.8 * 0.02))


@pytest.mark.parametrize(
    ("geometry", "field"),
    [
        ({"length": 0.3, "width": 0.4, "side_cover": -0.001}, "side_cover"),
        ({"length": 0.3, "width": 0.4, "side_cover": 0.15}, "side_cover"),
        ({"length": 0.3, "width": 0.4, "diameter": 0.3}, "diameter"),
        ({"length": 0.3, "width": 0.4, "layer_thickness": 0.0}, "layer_thickness"),
        ({"length": 0.3, "width": 0.4, "layers": 0}, "layers"),
    ],
)
def test_a_pad_that_cannot_be_is_refused(geometry: dict[str, float], field: str) -> None:
    given_ = {"side_cover": 0.004, "layers": 5, "layer_thickness": 0.008, "top_bottom_cover": 0.0} | geometry
    with pytest.raises(PadError) as caught:
        PadGeometry(**given_)  # type: ignore[arg-type]
    assert caught.value.field == field
    assert caught.value.remedy
