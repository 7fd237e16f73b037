"""Mann-Kendall, Theil-Sen and Pettitt against published worked examples, and against scipy."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from assess.trend import companion, pettitt
from tests.published.pages import PAGE


def test_epa_worked_example_with_ties() -> None:
    # EPA QA/G-9S (2006) p. 109, numbers met second-hand: S 22, ties of 4 and 2, variance 155.33, Z 1.685
    values = np.array([10.0, 10, 10, 5, 10, 20, 18, 17, 15, 24, 15])
    found = companion(np.arange(11.0), values)
    assert found.score == 22
    assert found.variance == pytest.approx(155.33, abs=0.005)
    assert stats.norm.isf(found.p_value / 2.0) == pytest.approx(1.685, abs=5e-4)
    assert found.p_value == pytest.approx(0.0920, abs=5e-5)
    assert found.slope == pytest.approx(1.0)


def test_gilberts_four_values() -> None:
    # Gilbert 1987, 16.4 (from memory): S 4, exact one-sided p 0.167
    found = companion(np.arange(4.0), np.array([10.0, 15, 14, 20]))
    assert found.score == 4
    assert found.p_value == pytest.approx(2.0 * 4.0 / 24.0)
    assert found.slope == pytest.approx(2.91667, abs=1e-5)


def test_helsel_and_hirschs_line_with_one_outlier() -> None:
    # Helsel and Hirsch (from memory): Theil slope 1.0, intercept 0
    found = companion(np.arange(1.0, 8.0), np.array([1.0, 2, 3, 4, 5, 16, 7]))
    assert (found.slope, found.intercept) == (pytest.approx(1.0), pytest.approx(0.0))


def test_pettitt_on_pages_data() -> None:
    # Pettitt, Applied Statistics 28 (1979): K 232 after the 17th value, p 0.0146
    assert PAGE.size == 40
    peak, before, p_value = pettitt(PAGE)
    assert (peak, before) == (232, 17)
    assert p_value == pytest.approx(0.014556, abs=5e-7)


@pytest.mark.parametrize("count", [5, 8, 10])
def test_scipy_gives_the_same_test(count: int) -> None:
    rng = np.random.default_rng(count)
    values = rng.standard_normal(count)
    times = np.arange(float(count))
    found = companion(times, values)
    assert found.p_value == pytest.approx(stats.kendalltau(times, values, method="exact").pvalue)
    assert found.score == pytest.approx(stats.kendalltau(times, values).statistic * count * (count - 1) / 2)


def test_values_all_alike_show_no_trend() -> None:
    assert companion(np.arange(5.0), np.full(5, 2.0)).p_value == 1.0
