"""Stiffness of a pad: what must hold for any pad and any formula."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from assess.pad import FORMULAS, Doubt, Pad, PadError, PadGeometry, batch_correlation, stiffness_doubt
from tests.pad.made import PLAIN, made, pads, round_pad


def with_plan(pad: Pad, grow: float) -> Pad:
    """The same pad with a larger plan, covers as they were."""
    g = pad.geometry
    sides = {
        name: None if side is None else grow * side
        for name, side in (("length", g.length), ("width", g.width), ("diameter", g.diameter))
    }
    return replace(pad, geometry=replace(g, **sides))


@PLAIN
@given(pads(), st.floats(1.01, 2.0))
def test_a_pad_of_stiffer_rubber_is_stiffer_but_no_more_than_its_rubber(pad: Pad, factor: float):
    ratio = pad.stiffened(factor).stiffness / pad.stiffness
    assert 1.0 < ratio <= factor * (1.0 + 1e-9)


@PLAIN
@given(pads(), st.floats(1.01, 2.0))
def test_a_larger_plan_is_stiffer_by_more_than_its_area(pad: Pad, grow: float):
    larger = with_plan(pad, grow)
    assert larger.stiffness / pad.stiffness > larger.plan.area / pad.plan.area


@PLAIN
@given(pads(), st.floats(1.01, 1.5))
def test_a_pad_of_thicker_layers_is_softer_by_more_than_their_thickness(pad: Pad, factor: float):
    thicker = replace(pad, geometry=pad.geometry.thicker(factor))
    assert pad.stiffness / thicker.stiffness > factor


@PLAIN
@given(pads())
def test_more_plates_in_the_same_rubber_make_it_stiffer(pad: Pad):
    g = pad.geometry
    split = replace(pad, geometry=replace(g, layers=2 * g.layers, layer_thickness=g.layer_thickness / 2.0))
    assert split.stiffness > pad.stiffness


@PLAIN
@given(pads(), st.integers(2, 9))
def test_layers_without_covers_give_way_in_proportion_to_their_number(pad: Pad, layers: int):
    one, many = (
        replace(pad, geometry=replace(pad.geometry, layers=n, top_bottom_cover=0.0)) for n in (1, layers)
    )
    assert many.stiffness == pytest.approx(one.stiffness / layers)
    assert many.layer_modulus == pytest.approx(one.layer_modulus)


@PLAIN
@given(pads())
def test_a_cover_of_rubber_makes_it_no_stiffer(pad: Pad):
    bare = replace(pad, geometry=replace(pad.geometry, top_bottom_cover=0.0))
    assert pad.stiffness <= bare.stiffness * (1.0 + 1e-12)


@PLAIN
@given(pads(), st.floats(0.1, 10.0))
def test_units_do_not_matter(pad: Pad, scale: float):
    """Every length times a number: the stiffness times the same, as a modulus times a length is."""
    if pad.formula == "en1337-3" and pad.geometry.top_bottom_cover:
        return  # its 3 mm are a length of their own
    g = pad.geometry
    grown = {
        name: None if value is None else scale * value
        for name, value in (
            ("length", g.length),
            ("width", g.width),
            ("diameter", g.diameter),
            ("side_cover", g.side_cover),
            ("layer_thickness", g.layer_thickness),
            ("top_bottom_cover", g.top_bottom_cover),
        )
    }
    assert replace(pad, geometry=replace(g, **grown)).stiffness == pytest.approx(scale * pad.stiffness)


@PLAIN
@given(pads(), st.floats(1.0, 5e3))
def test_the_strain_of_a_layer_is_force_over_area_and_modulus(pad: Pad, force: float):
    assert pad.layer_strain(force) == pytest.approx(force / (pad.plan.area * pad.layer_modulus))
    bare = replace(pad, geometry=replace(pad.geometry, top_bottom_cover=0.0))
    compression = bare.geometry.rubber_thickness * bare.layer_strain(force)
    assert compression == pytest.approx(force / bare.stiffness)


@PLAIN
@given(pads())
def test_length_and_width_may_be_exchanged(pad: Pad):
    g = pad.geometry
    turned = replace(pad, geometry=replace(g, length=g.width, width=g.length))
    assert turned.stiffness == pytest.approx(pad.stiffness)


@pytest.mark.parametrize("formula", FORMULAS)
def test_the_bulk_term_bounds_the_stiffness(formula: str):
    pads = [made(formula, rubber={"shear_modulus": 900.0, "bulk_modulus": b}) for b in (1e6, 2e6, math.inf)]
    soft, usual, stiff = (pad.stiffness for pad in pads)
    assert soft < usual < stiff
    assert all(pad.layer_modulus < pad.rubber.bulk for pad in pads)


def test_only_aashto_reckons_with_the_plan_of_the_whole_pad():
    areas = {formula: made(formula).plan.area for formula in FORMULAS}
    assert areas.pop("aashto-lrfd") == pytest.approx(0.3 * 0.4)
    assert list(areas.values()) == pytest.approx([0.292 * 0.392] * 3)


@pytest.mark.parametrize("formula", FORMULAS)
def test_a_circle_is_stiffer_than_the_square_of_its_area(formula: str):
    """Of all plans of an area the circle has the least edge to bulge from."""
    circle = round_pad(formula, 0.35, side_cover=0.0)
    side = math.sqrt(circle.plan.area)
    square = made(formula, length=side, width=side, side_cover=0.0)
    assert square.stiffness < circle.stiffness < 1.4 * square.stiffness


@pytest.mark.parametrize("formula", FORMULAS)
def test_a_plain_pad_is_softer_than_a_bonded_layer_of_its_thickness(formula: str):
    """It slips on its faces: 1.8 times the thickness in S, from memory of earlier bearing standards."""
    layer = made(formula, side_cover=0.0, layers=1, layer_thickness=0.02)
    plain = made(formula, side_cover=0.0, layers=1, layer_thickness=0.02, plain=True)
    assert plain.shape_factor == pytest.approx(layer.shape_factor / 1.8)
    assert layer.stiffness / 1.8**2 < plain.stiffness * (1.0 + 1e-3)
    assert plain.stiffness < layer.stiffness


def test_a_pad_of_one_layer_is_area_times_modulus_over_thickness():
    pad = made(layers=1)
    s = 0.292 * 0.392 / (2.0 * (0.292 + 0.392) * 0.008)
    modulus = 1.0 / (1.0 / (5.0 * 900.0 * s * s) + 1.0 / 2e6)
    assert pad.stiffness == pytest.approx(0.292 * 0.392 * modulus / 0.008)


def test_an_unknown_formula_is_refused_with_the_known_ones():
    with pytest.raises(PadError, match='"best" is not known') as caught:
        Pad(
            geometry=PadGeometry(length=0.4, width=0.3, layer_thickness=0.01),
            rubber=made().rubber,
            formula="best",
        )
    assert (caught.value.field, caught.value.remedy) == ("formula", f"write one of {', '.join(FORMULAS)}")


# doubt ---------------------------------------------------------------------------------------------


def test_doubts_add_up_as_squares():
    assert Doubt(shear=0.03, height=0.04, formula=0.12).cv == pytest.approx(0.13)


@PLAIN
@given(pads(), st.floats(0.02, 0.2), st.floats(1.1, 2.0))
def test_a_wider_tolerance_is_a_wider_doubt(pad: Pad, share: float, wider: float):
    doubts = [
        stiffness_doubt(replace(pad, rubber=replace(pad.rubber, shear_tolerance=t * pad.rubber.shear)), 0.001)
        for t in (share, share * wider)
    ]
    assert doubts[0].shear < doubts[1].shear
    assert doubts[0].height == pytest.approx(doubts[1].height)
    assert stiffness_doubt(pad, 0.002).height > stiffness_doubt(pad, 0.001).height


def test_without_bulk_the_doubt_of_the_shear_modulus_is_its_own():
    """k goes with G there: 1.96 sd of ln G are half of ln(1.1 / 0.9)."""
    pad = made("aashto-lrfd", rubber={"shear_modulus": 900.0, "tolerance": 0.1})
    assert 1.96 * stiffness_doubt(pad).shear == pytest.approx(math.log(1.1 / 0.9) / 2.0, rel=1e-4)


def test_without_bulk_the_height_counts_three_times():
    """k goes with thickness to the power of minus three: once in the layer, twice in its shape factor."""
    pad = made("aashto-lrfd")
    t = 0.001 / pad.geometry.rubber_thickness
    assert 1.96 * stiffness_doubt(pad, 0.001).height == pytest.approx(
        1.5 * math.log((1 + t) / (1 - t)), rel=1e-4
    )


@pytest.mark.parametrize(
    ("height", "share", "field"), [(0.03, 0.1, "height_tolerance"), (0.001, 0.6, "shear_modulus_tolerance")]
)
def test_a_tolerance_as_large_as_the_thing_is_refused(height: float, share: float, field: str):
    pad = made(rubber={"shear_modulus": 900.0, "tolerance": share})
    with pytest.raises(PadError, match="is no tolerance") as caught:
        stiffness_doubt(pad, height)
    assert caught.value.field == field


def test_the_default_correlation_of_a_batch_is_a_correlation():
    assert 0.0 < batch_correlation() < 1.0
