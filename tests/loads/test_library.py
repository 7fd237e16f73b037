"""The files of the published load models."""

from __future__ import annotations

import numpy as np
import pytest

from assess.loads import Alternative, Block, Second, UnknownModelError, live_model, model_names
from assess.loads.allowance import RULES


@pytest.mark.parametrize("name", [*model_names(), "cooper-e45", "cooper-e100"])
def test_every_model_says_where_it_is_from(name: str) -> None:
    model = live_model(name)
    assert model.name == name
    assert "from memory, to be confirmed" in model.source
    assert model.basis in ("track", "lane")
    assert model.rule in RULES
    assert model.title
    assert model.note


@pytest.mark.parametrize("name", model_names())
def test_all_distances_are_whole_multiples_of_the_module(name: str) -> None:
    model = live_model(name)
    for one in model.alternatives:
        lengths = [d for d, _ in one.axles] + [one.clear or 0.0]
        lengths += [x for block in one.blocks for x in (block.start, block.end) if np.isfinite(x)]
        if one.second is not None:
            lengths += [d for d, _ in one.second.axles] + [one.second.least]
        steps = np.array(lengths) / model.module
        assert np.abs(steps - np.round(steps)).max() < 1e-9


@pytest.mark.parametrize(
    "name", ["lm7", "cooper-e", "cooper-e080", "cooper-e1000", "Cooper-E80", "", "../lm71"]
)
def test_an_unknown_model_is_told(name: str) -> None:
    with pytest.raises(UnknownModelError):
        live_model(name)


def test_units_are_turned_exactly() -> None:
    truck = live_model("hl-93").alternatives[0]
    assert truck.axles[1] == (14 * 0.3048, pytest.approx(32 * 4.4482216152605, rel=1e-15))
    assert truck.uniform == pytest.approx(0.64 * 4.4482216152605 / 0.3048, rel=1e-15)


def test_the_rear_axle_of_the_truck_varies_from_14_to_30_ft() -> None:
    for name in ("hl-93", "hs20-44"):
        second = live_model(name).alternatives[0].second
        assert second is not None
        assert (second.least, second.most) == pytest.approx((14 * 0.3048, 30 * 0.3048))


def test_two_trucks_carry_nine_tenths() -> None:
    one, _, two = live_model("hl-93").alternatives
    assert two.axles[1][1] == pytest.approx(0.9 * one.axles[1][1])
    assert two.uniform == pytest.approx(0.9 * one.uniform)
    assert two.uses == {"hogging near supports", "interior reaction"}
    assert not two.uniform_allowance


def test_scaling_multiplies_every_load() -> None:
    one = Alternative(
        name="all",
        axles=((0.0, 10.0),),
        blocks=(Block(start=1.0, end=2.0, intensity=5.0),),
        second=Second(axles=((0.0, 4.0),)),
        uniform=3.0,
    ).scaled(0.5)
    assert one.second is not None
    assert (one.axles, one.second.axles) == (((0.0, 5.0),), ((0.0, 2.0),))
    assert (one.blocks[0].intensity, one.uniform) == (2.5, 1.5)


def test_an_arrangement_without_load_is_refused() -> None:
    with pytest.raises(ValueError, match="no load"):
        Alternative(name="nothing")
    with pytest.raises(ValueError, match="first one"):
        Alternative(name="half", uniform=1.0, second=Second(axles=((0.0, 1.0),)))
    with pytest.raises(ValueError, match="unknown use"):
        Alternative(name="odd", uniform=1.0, uses=frozenset({"wind"}))
