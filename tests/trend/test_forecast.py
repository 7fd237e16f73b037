"""Pads carried forward, and thresholds crossed."""

from __future__ import annotations

import numpy as np
import pytest

from assess.trend import crossing, fit_trend, pad_future
from tests.trend.histories import MEAN, TAU, history

YEARS = np.array([0.0, 1.0, 2.0, 4.0])


def test_half_of_the_draws_past_the_threshold_is_the_median() -> None:
    # four draws that pass 1 from year 1, 2, 4 and never: 0, 1/4, 2/4, 3/4; half is reached at year 2
    utilisation = np.array(
        [[0.9, 1.1, 1.1, 1.1], [0.9, 0.9, 1.1, 1.1], [0.9, 0.9, 0.9, 1.1], [0.9, 0.9, 0.9, 0.9]]
    )
    found = crossing(utilisation, YEARS, 1.0)
    assert found.probability.tolist() == [0.0, 0.25, 0.5, 0.75]
    assert found.median == pytest.approx(2.0)
    assert found.earliest == pytest.approx(0.2)  # a fifth of the way from none to a quarter


def test_between_two_times_the_date_is_in_proportion() -> None:
    # 2 of 10 by year 2, 8 of 10 by year 4: half lies half-way, year 3
    utilisation = np.full((10, 4), 0.9)
    utilisation[:2, 2:] = 1.2
    utilisation[:8, 3] = 1.2
    assert crossing(utilisation, YEARS, 1.0).median == pytest.approx(3.0)


def test_what_is_never_reached_has_no_date() -> None:
    found = crossing(np.full((100, 4), 0.95), YEARS, 1.0)
    assert (found.median, found.earliest) == (None, None)
    few = np.full((100, 4), 0.95)
    few[:4, 3] = 1.01
    assert crossing(few, YEARS, 1.0).earliest is None
    few[4, 3] = 1.01
    assert crossing(few, YEARS, 1.0).earliest == pytest.approx(4.0)
    assert crossing(few, YEARS, 1.0).median is None


def test_what_is_passed_already_is_dated_today() -> None:
    found = crossing(np.full((10, 4), 1.3), YEARS, 1.0)
    assert (found.median, found.earliest) == (0.0, 0.0)


def test_a_utilisation_of_exactly_the_threshold_has_not_passed_it() -> None:
    assert crossing(np.full((10, 4), 1.0), YEARS, 1.0).earliest is None


def test_a_draw_that_has_passed_has_passed_for_good() -> None:
    found = crossing(np.array([[0.9, 1.1, 0.8, 0.7]]), YEARS, 1.0)
    assert found.probability.tolist() == [0.0, 1.0, 1.0, 1.0]


def test_the_akaike_weight_is_even_at_one_parameters_cost() -> None:
    # AIC differs by z^2 - 2: even at z^2 = 2, 1 / (1 + e) without any change
    still = fit_trend(history(MEAN, np.zeros(3), None), MEAN, TAU)
    assert [law.drift_weight for law in still.laws] == pytest.approx([1.0 / (1.0 + np.e)] * 3)
    rate_sd = np.array([law.rate_sd for law in still.laws])
    even = fit_trend(history(MEAN, np.sqrt(2.0) * rate_sd, None), MEAN, TAU)
    assert [law.drift_weight for law in even.laws] == pytest.approx([0.5] * 3, abs=0.02)
    clear = fit_trend(history(MEAN, 6.0 * rate_sd, None), MEAN, TAU)
    assert all(law.drift_weight > 0.999 for law in clear.laws)


def test_the_share_of_draws_that_drift_is_the_weight() -> None:
    rate_sd = np.array([law.rate_sd for law in fit_trend(history(MEAN, np.zeros(3), None), MEAN, TAU).laws])
    found = fit_trend(history(MEAN, np.array([0.0, 1.5, 8.0]) * rate_sd, None), MEAN, TAU)
    future = pad_future(found, np.array([0.0, 5.0]), draws=8000, seed=1)
    moves = (future.log_stiffness[:, 1] != future.log_stiffness[:, 0]).mean(axis=0)
    assert moves == pytest.approx([law.drift_weight for law in found.laws], abs=0.02)


def test_draws_start_from_today_with_its_covariance() -> None:
    found = fit_trend(history(MEAN, np.array([-0.08, 0.0, 0.0]), np.random.default_rng(2)), MEAN, TAU)
    start = pad_future(found, np.array([0.0]), draws=20000, seed=1).log_stiffness[:, 0]
    scale = np.sqrt(np.diag(found.now_covariance))
    assert (start.mean(axis=0) - found.now) / scale == pytest.approx(np.zeros(3), abs=0.04)
    assert np.cov(start.T) / np.outer(scale, scale) == pytest.approx(
        found.now_covariance / np.outer(scale, scale), abs=0.04
    )


def test_a_clear_drift_is_carried_on_at_its_rate() -> None:
    rate = np.array([-0.10, 0.0, 0.0])
    found = fit_trend(history(MEAN, rate, None, sd=0.01), MEAN, TAU)
    future = pad_future(found, np.array([0.0, 5.0, 10.0]), draws=4000, seed=1).log_stiffness
    middle = np.median(future, axis=0)
    assert middle[:, 0] == pytest.approx(MEAN[0] + rate[0] * np.array([0.0, 5.0, 10.0]), abs=0.02)
    assert middle[:, 1] == pytest.approx(np.full(3, MEAN[1]), abs=0.02)
    assert np.all(np.diff(future.std(axis=0), axis=0) > 0.0)  # further ahead, less sure


def test_forecasts_hold_what_comes_90_to_99_times_in_100() -> None:
    """Pads that drift clearly, looked at four years after the last visit."""
    rng, rate, inside = np.random.default_rng(61), np.array([-0.10, 0.10, -0.12]), []
    for _ in range(200):
        level = MEAN + TAU * rng.standard_normal(3)
        found = fit_trend(history(level, rate, rng), MEAN, TAU)
        ahead = pad_future(found, np.array([4.0]), draws=1000, seed=1).log_stiffness[:, 0]
        low, high = np.quantile(ahead, [0.025, 0.975], axis=0)
        inside.append((low <= level + 4.0 * rate) & (level + 4.0 * rate <= high))
    share = np.mean(inside, axis=0)
    assert np.all((share >= 0.90) & (share <= 0.99)), share


def test_one_visit_is_carried_forward_as_it_stands() -> None:
    found = fit_trend(history(MEAN, np.zeros(3), None, times=[0.0]), MEAN, TAU)
    future = pad_future(found, YEARS, draws=200, seed=1).log_stiffness
    assert future.shape == (200, 4, 3)
    assert np.ptp(future, axis=1).max() == 0.0


def test_the_same_seed_draws_the_same_future() -> None:
    found = fit_trend(history(MEAN, np.array([-0.08, 0.0, 0.0]), np.random.default_rng(2)), MEAN, TAU)
    one, other = (pad_future(found, YEARS, draws=50, seed=9).log_stiffness for _ in range(2))
    assert np.array_equal(one, other)
    assert not np.array_equal(one, pad_future(found, YEARS, draws=50, seed=10).log_stiffness)
