"""A pad as drawn: shape factors, all of its rubber, and what cannot be."""

from __future__ import annotations

import math
from typing import Any

import pytest

from assess.pad import PadError, PadGeometry
from tests.pad.made import USUAL


def test_the_shape_factor_is_loaded_area_over_edge():
    plan = PadGeometry(**USUAL).plan()
    assert plan.area == pytest.approx(0.292 * 0.392)
    assert plan.shape_factor(0.008) == pytest.approx(0.292 * 0.392 / (2 * (0.292 + 0.392) * 0.008))
    assert (plan.short, plan.long) == pytest.approx((0.292, 0.392))


def test_the_shape_factor_of_a_circle_is_a_quarter_of_diameter_over_thickness():
    plan = PadGeometry(diameter=0.36, side_cover=0.005, layer_thickness=0.01).plan()
    assert plan.shape_factor(0.01) == pytest.approx(0.35 / 0.04)
    assert plan.area == pytest.approx(math.pi * 0.35**2 / 4)


def test_all_rubber_counts_in_the_thickness():
    assert PadGeometry(**USUAL, top_bottom_cover=0.0025).rubber_thickness == pytest.approx(0.045)
    assert PadGeometry(length=0.4, width=0.3, layer_thickness=0.02, plain=True).rubber_thickness == 0.02


def test_a_thicker_pad_has_the_same_plan():
    pad = PadGeometry(**USUAL, top_bottom_cover=0.0025)
    assert pad.thicker(1.1).rubber_thickness == pytest.approx(1.1 * pad.rubber_thickness)
    assert pad.thicker(1.1).plan() == pad.plan()


@pytest.mark.parametrize(
    ("changes", "field", "told"),
    [
        ({"width": None}, "diameter", "a plan of length cannot be drawn"),
        ({"width": None, "length": None}, "diameter", "a plan of nothing cannot be drawn"),
        ({"diameter": 0.3}, "diameter", "cannot be drawn"),
        ({"width": 0.0}, "width", "not greater than zero"),
        ({"width": math.nan}, "width", "not greater than zero"),
        ({"side_cover": -0.001}, "side_cover", "negative"),
        ({"top_bottom_cover": -0.001}, "top_bottom_cover", "negative"),
        ({"side_cover": 0.15}, "side_cover", "covers of 150 mm leave nothing of a side of 300 mm"),
        ({"layers": 0}, "layers", "0 is no number of layers"),
        ({"layer_thickness": 0.0}, "layer_thickness", "not greater than zero"),
        ({"layer_thickness": 0.16}, "layer_thickness", "160 mm is too thick for a plan of 292 mm"),
        ({"top_bottom_cover": 0.16}, "top_bottom_cover", "160 mm is too thick"),
        ({"plain": True}, "layers", "a plain pad is one layer"),
        ({"plain": True, "layers": 1}, "side_cover", "a plain pad is one layer"),
    ],
)
def test_a_pad_that_cannot_be_is_refused(changes: dict[str, Any], field: str, told: str):
    with pytest.raises(PadError) as caught:
        PadGeometry(**{**USUAL, **changes})
    assert told in str(caught.value)
    assert caught.value.field == field
    assert caught.value.remedy
