"""The line through the levels of one seat, against ordinary ways of fitting it."""

from __future__ import annotations

import numpy as np
import pytest

from assess.trend import fit_seat

TIMES = np.array([0.0, 2.1, 3.3, 4.7, 6.1, 8.0])
SD = np.array([3e-4, 3e-4, 5e-4, 3e-4, 4e-4, 3e-4])


def test_a_line_is_the_weighted_least_squares_of_numpy() -> None:
    levels = np.array([-0.4, 1.1, 2.8, 4.2, 4.8, 7.4]) * 1e-3
    law = fit_seat(TIMES, levels, SD)
    (slope, _), covariance = np.polyfit(TIMES, levels, 1, w=1.0 / SD, cov="unscaled")
    chi = (((levels - np.polyval(np.polyfit(TIMES, levels, 1, w=1.0 / SD), TIMES)) / SD) ** 2).sum()
    widened = max(1.0, np.sqrt(chi / 4.0)) if chi > 9.4877 else 1.0  # 95 % of chi-square on 4
    assert law.rate == pytest.approx(slope, rel=1e-10)
    assert law.rate_sd == pytest.approx(widened * np.sqrt(covariance[0, 0]), rel=1e-10)
    assert law.moving


@pytest.mark.parametrize("visits", range(2, 7))
def test_a_seat_that_reads_the_same_at_every_visit_has_no_rate_at_all(visits: int) -> None:
    law = fit_seat(TIMES[:visits], np.full(visits, -0.4e-3), SD[:visits])
    assert law.rate == 0.0
    assert not law.moving


def test_exact_levels_give_their_rate() -> None:
    law = fit_seat(TIMES, 2e-3 + 1e-3 * TIMES, SD)
    assert law.rate == pytest.approx(1e-3, rel=1e-12)
    assert law.last == pytest.approx(10e-3)


def test_a_standing_seat_is_said_to_move_no_more_often_than_five_in_a_hundred_or_so() -> None:
    rng = np.random.default_rng(11)
    moving = [fit_seat(TIMES, SD * rng.standard_normal(6), SD).moving for _ in range(600)]
    assert 0.02 < np.mean(moving) < 0.08


def test_one_visit_gives_no_rate_and_stands() -> None:
    law = fit_seat(np.array([0.0]), np.array([4e-3]), np.array([3e-4]))
    draws = law.draws(np.linspace(0.0, 10.0, 5), 4000, np.random.default_rng(1))
    assert np.isnan(law.rate)
    assert not law.moving
    assert draws[:, 0].mean() == pytest.approx(4e-3, abs=3e-5)
    assert np.array_equal(draws[:, 0], draws[:, -1])


def test_draws_of_a_moving_seat_have_the_variance_of_last_level_and_rate_together() -> None:
    rng = np.random.default_rng(3)
    law = fit_seat(TIMES, 1e-3 * TIMES, SD)
    years = np.array([0.0, 3.0])
    draws = law.draws(years, 200_000, rng)
    expected = law.last_sd**2 + 2.0 * 3.0 * law.covariance + 9.0 * law.rate_sd**2
    assert law.weight > 0.999
    assert draws[:, 1].mean() == pytest.approx(8e-3 + 3e-3, abs=1e-5)
    assert draws[:, 1].var() == pytest.approx(expected, rel=0.02)


def test_forecast_intervals_hold_the_later_level_19_times_in_20() -> None:
    rng = np.random.default_rng(7)
    inside = 0
    for _ in range(400):
        law = fit_seat(TIMES, 1e-3 * TIMES + SD * rng.standard_normal(6), SD)
        draws = law.draws(np.array([4.0]), 400, rng)[:, 0]
        inside += bool(np.quantile(draws, 0.025) <= 12e-3 <= np.quantile(draws, 0.975))
    assert 0.90 < inside / 400 < 0.98


def test_a_seat_without_levels_is_refused() -> None:
    with pytest.raises(ValueError, match="at least one measured settlement"):
        fit_seat(np.zeros(0), np.zeros(0), np.zeros(0))
