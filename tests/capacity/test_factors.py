"""Factors on each kind of effect, and relief that is not banked."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from assess.capacity import Factors, Steady, UnknownSetError, factor_set, factored_steady, set_names
from assess.capacity.rows import demand

OWN = Factors(
    permanent=1.2,
    permanent_relieving=0.9,
    surfacing=1.5,
    surfacing_relieving=0.6,
    settlement=1.1,
    settlement_relieving=0.8,
    temperature=0.5,
    live=1.5,
    resistance=1.0,
)


def steady(structure: float, surfacing: float, settled: float, hot: float = 0.0, cold: float = 0.0) -> Steady:
    def one(value: float) -> np.ndarray:
        return np.array([value])

    return Steady(
        dead=np.array([one(structure), one(surfacing)]),
        kinds=("structure", "surfacing"),
        settled=one(settled),
        hot=one(hot),
        cold=one(cold),
    )


@pytest.mark.parametrize(
    ("effects", "sign", "held", "relief"),
    [
        ((100.0, 20.0, 10.0), 1.0, 120.0 + 30.0 + 11.0, 0.0),
        ((100.0, 20.0, -10.0), 1.0, 120.0 + 30.0, -8.0),
        ((100.0, -20.0, 10.0), 1.0, 120.0 - 12.0 + 11.0, 0.0),
        ((100.0, 20.0, 10.0), -1.0, 90.0 + 12.0, 8.0),
        ((-100.0, -20.0, -10.0), -1.0, -120.0 - 30.0 - 11.0, 0.0),
    ],
)
def test_each_kind_takes_its_own_factor_where_it_loads_and_where_it_relieves(
    effects: tuple[float, float, float], sign: float, held: float, relief: float
) -> None:
    found = factored_steady(OWN, steady(*effects), sign)
    assert [float(v[0]) for v in found[:2]] == pytest.approx([held, relief])


def test_temperature_acts_only_where_it_is_worse_than_none() -> None:
    one = steady(100.0, 0.0, 0.0, hot=30.0, cold=-40.0)
    assert factored_steady(OWN, one, 1.0)[0][0] == pytest.approx(120.0 + 15.0)
    assert factored_steady(OWN, one, -1.0)[0][0] == pytest.approx(90.0 - 20.0)


def test_without_factors_of_their_own_surfacing_and_settlements_take_the_permanent_ones() -> None:
    plain = Factors(permanent=1.2, permanent_relieving=1.0, live=1.5, resistance=1.0)
    one = steady(100.0, 20.0, 10.0)
    assert factored_steady(plain, one, 1.0)[0][0] == pytest.approx(1.2 * 130.0)


@given(
    structure=st.floats(-500.0, 500.0),
    settled=st.floats(-300.0, 300.0),
    live=st.floats(0.0, 400.0),
    sign=st.sampled_from([1.0, -1.0]),
)
def test_counting_relief_never_makes_a_section_worse(
    structure: float, settled: float, live: float, sign: float
) -> None:
    one, moving = steady(structure, 0.0, settled), np.array([sign * live])
    without = demand(OWN, one, moving, sign)
    counted = demand(replace(OWN, relief_counts=True), one, moving, sign)
    assert sign * counted.factored[0] <= sign * without.factored[0] + 1e-9
    assert counted.factored[0] == pytest.approx(without.factored[0] + without.relief[0])


def test_an_unknown_kind_of_load_is_refused() -> None:
    with pytest.raises(ValueError, match="unknown kind"):
        OWN.of_kind("snow")


# built-in sets ------------------------------------------------------------------------------------


def test_every_set_names_the_text_it_follows_and_how_surely() -> None:
    assert set_names() == ("en1990-rail", "en1990-road", "lfr", "lrfr")
    for name in set_names():
        one = factor_set(name)
        assert one.text
        assert "to be confirmed" in one.status
        loading, relieving = one.permanent
        assert loading >= relieving > 0.0


def test_a_set_that_is_not_there_is_refused() -> None:
    with pytest.raises(UnknownSetError):
        factor_set("house rules")


def test_condition_and_system_multiply_down_to_the_least_product() -> None:
    """AASHTO, The Manual for Bridge Evaluation, 6A.4.2.1: their product is at least 0.85; from memory."""
    one = factor_set("lrfr")
    assert one.on_resistance("fair", 1.0) == pytest.approx(0.95)
    assert one.on_resistance("fair", 0.95) == pytest.approx(0.9025)
    assert one.on_resistance("poor", 0.85) == pytest.approx(0.85)
    assert one.on_resistance(None, None) == 1.0
