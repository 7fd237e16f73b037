"""Creep on log time, and cold by compound."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from assess.pad import PadError, cold_curve, compounds, creep_per_decade, creep_share, decades
from tests.pad.made import PLAIN


@PLAIN
@given(st.floats(50.0, 70.0), st.floats(0.01, 100.0), st.floats(1.1, 10.0))
def test_creep_grows_with_time_by_decades(hardness: float, years: float, times: float):
    more = creep_share(hardness, years * times) - creep_share(hardness, years)
    assert more == pytest.approx(creep_per_decade(hardness) * (decades(years * times) - decades(years)))
    assert more > 0.0


def test_harder_rubber_creeps_more():
    shares = [creep_share(h) for h in (50.0, 55.0, 60.0, 65.0, 70.0)]
    assert shares == sorted(set(shares))


@pytest.mark.parametrize("hardness", [49.0, 71.0, float("nan")])
def test_creep_outside_the_table_is_not_guessed(hardness: float):
    with pytest.raises(PadError, match="outside the table of creep") as caught:
        creep_share(hardness)
    assert caught.value.field == "hardness"


@pytest.mark.parametrize("years", [0.0, -1.0, 1e-7, float("nan")])
def test_there_is_no_creep_before_the_first_reading(years: float):
    with pytest.raises(PadError, match="before the reference"):
        creep_share(60.0, years)


@PLAIN
@given(st.sampled_from(compounds()), st.floats(-20.0, 40.0), st.floats(-20.0, 40.0))
def test_colder_is_stiffer(compound: str, one: float, other: float):
    curve = cold_curve(compound)
    cold, warm = sorted((one, other))
    assert curve.factor(cold) >= curve.factor(warm)


@pytest.mark.parametrize("compound", compounds())
def test_stiffening_counts_from_20_degrees(compound: str):
    assert cold_curve(compound).factor(20.0) == 1.0
    assert cold_curve(compound).factor(-20.0) > 1.1


def test_between_two_points_a_curve_runs_straight_in_its_logarithm():
    """Natural rubber at 0 and -10 degC: 1.09 and 1.16, so that at -5 it is their geometric mean."""
    assert cold_curve("natural rubber").factor(-5.0) == pytest.approx((1.09 * 1.16) ** 0.5)


def test_chloroprene_stiffens_more_than_natural_rubber():
    curves = [cold_curve(name) for name in ("natural rubber", "chloroprene")]
    assert curves[0].factor(-15.0) < curves[1].factor(-15.0)


@pytest.mark.parametrize("temperature", [-31.0, 41.0, float("nan")])
def test_a_curve_is_not_carried_past_its_ends(temperature: float):
    with pytest.raises(PadError, match="outside the curve of natural rubber"):
        cold_curve("natural rubber").factor(temperature)


def test_an_unknown_compound_is_refused_with_the_known_ones():
    with pytest.raises(PadError, match='"butter" has no curve') as caught:
        cold_curve("butter")
    assert caught.value.remedy == "write one of natural rubber, chloroprene"
