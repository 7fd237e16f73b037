"""What time and cold do to a pad."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from assess.pad import PadError, cold_curve, compounds, creep_share


@pytest.mark.parametrize("compound", compounds())
def test_cold_stiffens_and_20_degrees_is_the_reference(compound: str) -> None:
    curve = cold_curve(compound)
    assert curve.factor(20.0) == pytest.approx(1.0)
    factors = [curve.factor(t) for t in range(-20, 41, 2)]
    assert factors == sorted(factors, reverse=True)
    assert "from memory" in curve.source


@pytest.mark.parametrize("compound", compounds())
def test_a_temperature_off_the_curve_is_refused_and_not_guessed(compound: str) -> None:
    with pytest.raises(PadError, match="lies outside the curve"):
        cold_curve(compound).factor(-60.0)


def test_a_compound_without_a_curve_is_refused() -> None:
    with pytest.raises(PadError, match="has no curve"):
        cold_curve("bitumen")


@given(st.floats(50.0, 70.0), st.floats(0.01, 100.0), st.floats(1.01, 10.0))
def test_creep_grows_with_time_and_with_hardness(hardness: float, years: float, later: float) -> None:
    assert creep_share(hardness, years * later) > creep_share(hardness, years)
    assert creep_share(70.0, years) >= creep_share(hardness, years) >= creep_share(50.0, years)


@pytest.mark.parametrize("hardness", [40.0, 75.0])
def test_creep_off_the_table_is_refused_and_not_guessed(hardness: float) -> None:
    with pytest.raises(PadError, match="lies outside the table of creep"):
        creep_share(hardness)
