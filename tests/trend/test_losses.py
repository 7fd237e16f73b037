"""Thickness lost over the years, and what a forecast's spread comes from."""

from __future__ import annotations

import numpy as np
import pytest

from assess.trend import fit_loss, variance_shares


def test_the_rate_is_the_line_through_nothing_when_new() -> None:
    ages, losses = np.array([20.0, 30.0, 40.0]), np.array([1.1e-3, 1.4e-3, 2.1e-3])
    law = fit_loss(ages, losses)
    assert law.rate == pytest.approx(np.linalg.lstsq(ages[:, None], losses, rcond=None)[0][0])
    assert law.rate_sd == pytest.approx(0.25e-3 / np.sqrt((ages**2).sum()))
    assert law.ahead(np.array([0.0, 10.0])) == pytest.approx([2.1e-3, 2.1e-3 + 10.0 * law.rate])


def test_losses_that_leave_the_line_widen_its_rate() -> None:
    ages, losses = np.array([20.0, 30.0, 40.0]), np.array([0.2e-3, 3.0e-3, 1.5e-3])
    law = fit_loss(ages, losses)
    chi_square = (((losses - law.rate * ages) / 0.25e-3) ** 2).sum()
    assert law.rate_sd == pytest.approx(0.25e-3 / np.sqrt((ages**2).sum()) * np.sqrt(chi_square / 2.0))


def test_a_loss_measured_before_the_plate_was_built_is_refused() -> None:
    with pytest.raises(ValueError, match="after the plate was built"):
        fit_loss(np.array([-1.0]), np.array([1e-3]))


def test_shares_of_a_sum_are_the_variances_of_its_parts() -> None:
    rng = np.random.default_rng(1)
    inputs = rng.standard_normal((20000, 4)) * np.array([1.0, 2.0, 0.0, 1e-4])
    inputs[:, 2] = 7.0
    shares = variance_shares(inputs, 3.0 + inputs @ np.array([2.0, 0.5, 1.0, 1.0]))
    assert shares == pytest.approx([0.8, 0.2, 0.0, 0.0], abs=0.01)
    assert shares.sum() == pytest.approx(1.0)


def test_what_is_no_straight_line_is_left_out_of_the_shares() -> None:
    rng = np.random.default_rng(2)
    x = rng.standard_normal((20000, 2))
    assert variance_shares(x, x[:, 0] ** 2 - 1.0).sum() < 0.02


def test_an_outcome_that_does_not_vary_has_no_shares() -> None:
    x = np.random.default_rng(3).standard_normal((100, 2))
    assert not variance_shares(x, np.full(100, 0.7)).any()
