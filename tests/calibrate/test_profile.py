"""Profile-likelihood intervals, against the normal ones, plain roots, independent minimisation and simulations."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import brentq, minimize
from scipy.stats import chi2, norm

from assess.calibrate import ObservationModel, PadPrior, fit
from assess.calibrate.profile import intervals, profile_interval
from tests.factories import NOMINAL, noisy, poorly_read, prior, well_read

Floats = NDArray[np.float64]
Linearised = Callable[[Floats], tuple[Floats, Floats]]
RISE = float(chi2.ppf(0.95, 1))
Z = float(norm.ppf(0.975))


def straight(m: int = 9, p: int = 4) -> tuple[Linearised, Floats, Floats]:
    rng = np.random.default_rng(2)
    design, y = rng.standard_normal((m, p)), rng.standard_normal(m)
    theta = np.linalg.lstsq(design, y, rcond=None)[0]
    return lambda t: (design @ t - y, design), theta, np.linalg.inv(design.T @ design)


def of_girder(model: ObservationModel, believed: PadPrior) -> tuple[Linearised, Floats, Floats]:
    rows = believed.rows(model.size)

    def linearise(theta: Floats) -> tuple[Floats, Floats]:
        predicted, jacobian = model.linearise(theta)
        residual = np.concatenate([(predicted - model.value) / model.sd, believed.residual(theta)])
        return residual, np.concatenate([jacobian / model.sd[:, None], rows])

    found = fit(model, start=NOMINAL, prior=believed)
    return linearise, found.log_stiffness, found.covariance


def coarse(coarser: float, cv: float = 2.0, seed: int = 3) -> tuple[Linearised, Floats, Floats]:
    """The viaduct read coarsely, so that stiffnesses are told one-sidedly."""
    model = poorly_read()
    model.sd = model.sd * coarser
    return of_girder(
        noisy(model, NOMINAL + np.array([0.2, 0.5, 0.0, 0.0]), np.random.default_rng(seed)), prior(cv)
    )


@pytest.mark.parametrize("level", [0.5, 0.95, 0.999])
@pytest.mark.parametrize("p", [1, 4])
def test_a_linear_model_has_its_normal_interval(p: int, level: float) -> None:
    linearise, theta, covariance = straight(p=p)
    half = norm.ppf((1.0 + level) / 2.0) * np.sqrt(np.diag(covariance))
    for index in range(p):
        ends = profile_interval(linearise, theta, covariance, index, level=level)
        assert ends == pytest.approx(
            (theta[index] - half[index], theta[index] + half[index]), abs=1e-6 * half[index]
        )


def test_one_unknown_has_the_ends_that_a_plain_root_finder_finds() -> None:
    """Three compressions of a pad under 100 kN, ln k in kN/m, read to a third of their size."""
    y = np.array([0.3, 0.5, 0.25]) * 1e-3

    def linearise(theta: Floats) -> tuple[Floats, Floats]:
        shown = 100.0 * np.exp(-theta[0])
        return (shown - y) / 1.2e-4, np.full((3, 1), -shown / 1.2e-4)

    theta = np.array([np.log(100.0 / y.mean())])
    _, jacobian = linearise(theta)
    covariance = np.linalg.inv(jacobian.T @ jacobian)

    def above(x: float) -> float:
        return float((linearise(np.array([x]))[0] ** 2).sum() - (linearise(theta)[0] ** 2).sum()) - RISE

    expected = brentq(above, theta[0] - 3.0, theta[0]), brentq(above, theta[0], theta[0] + 3.0)
    found = profile_interval(linearise, theta, covariance, 0)
    assert found == pytest.approx(expected, abs=1e-6)
    half = Z * covariance[0, 0] ** 0.5
    assert found[1] - theta[0] > 1.1 * half > 1.1 * (theta[0] - found[0])  # skewed, or the test tells nothing


@pytest.mark.parametrize("index", range(4))
def test_at_the_ends_of_a_girder_the_cost_over_all_other_unknowns_is_higher_by_the_quantile(
    index: int,
) -> None:
    """The others minimised anew by scipy's Nelder and Mead, which knows no derivative of ours."""
    linearise, theta, covariance = coarse(4.0)
    least = float((linearise(theta)[0] ** 2).sum())

    def cost(others: Floats, end: float) -> float:
        return float((linearise(np.insert(others, index, end))[0] ** 2).sum())

    for end in profile_interval(linearise, theta, covariance, index):
        assert np.isfinite(end)
        found = minimize(
            cost,
            np.delete(theta, index),
            args=(end,),
            method="Nelder-Mead",
            options={"xatol": 1e-7, "fatol": 1e-9, "maxiter": 4000, "maxfev": 4000},
        )
        assert found.fun - least == pytest.approx(RISE, abs=1e-4)


def test_an_end_that_the_readings_do_not_bound_is_open() -> None:
    """A compression no larger than its own doubt: the pad may be rigid, but not very soft."""

    def linearise(theta: Floats) -> tuple[Floats, Floats]:
        shown = np.exp(-theta[0])
        return np.array([shown - 1.0, theta[1] - theta[0] / 3.0]), np.array(
            [[-shown, 0.0], [-1.0 / 3.0, 1.0]]
        )

    theta = np.zeros(2)
    _, jacobian = linearise(theta)
    covariance = np.linalg.inv(jacobian.T @ jacobian)
    low, high = profile_interval(linearise, theta, covariance, 0)
    assert low == pytest.approx(-np.log(1.0 + Z), abs=1e-6)
    assert high == np.inf
    lows, highs, profiled = intervals(linearise, theta, covariance, which=np.array([0]))
    assert (lows[0], highs[0], profiled.tolist()) == (pytest.approx(low), np.inf, [True])


def test_where_no_cost_can_be_computed_the_interval_ends_before() -> None:
    def linearise(theta: Floats) -> tuple[Floats, Floats]:
        if theta[0] > 1.0:
            raise np.linalg.LinAlgError("Singular matrix")
        return theta.copy(), np.eye(2)

    assert profile_interval(linearise, np.zeros(2), np.eye(2), 0) == pytest.approx((-Z, 1.0), abs=1e-5)


def test_an_unknown_without_variance_is_its_own_interval() -> None:
    linearise, theta, covariance = straight()
    covariance[1, :] = covariance[:, 1] = 0.0
    assert profile_interval(linearise, theta, covariance, 1) == (theta[1], theta[1])
    lows, highs, profiled = intervals(linearise, theta, covariance, which=np.array([1]))
    assert (lows[0], highs[0], profiled[0]) == (theta[1], theta[1], False)


# where it is worth its time ----------------------------------------------------------------------


def test_a_linear_model_is_not_profiled() -> None:
    linearise, theta, covariance = straight()
    lows, highs, profiled = intervals(linearise, theta, covariance, which=np.arange(4))
    half = Z * np.sqrt(np.diag(covariance))
    assert not profiled.any()
    assert np.array_equal(lows, theta - half)
    assert np.array_equal(highs, theta + half)


def test_a_well_read_girder_is_not_profiled() -> None:
    linearise, theta, covariance = of_girder(noisy(well_read(), NOMINAL, np.random.default_rng(1)), prior())
    assert not intervals(linearise, theta, covariance, which=np.arange(4))[2].any()


@pytest.mark.parametrize("coarser", [1.0, 2.0, 4.0, 8.0])
def test_the_cheap_test_finds_the_ends_that_are_off_by_more_than_ten_per_cent(coarser: float) -> None:
    """Either it is profiled, or the normal interval is off by no more than 12 % of its half-width."""
    linearise, theta, covariance = coarse(coarser)
    half = Z * np.sqrt(np.diag(covariance))
    lows, highs, profiled = intervals(linearise, theta, covariance, which=np.arange(4))
    full = np.array([profile_interval(linearise, theta, covariance, i) for i in range(4)])
    off = np.maximum(np.abs(full[:, 0] - theta + half), np.abs(full[:, 1] - theta - half)) / half
    assert np.all(profiled[off > 0.12])
    assert not np.any(profiled[off < 0.08])
    assert np.column_stack([lows, highs])[profiled] == pytest.approx(full[profiled])
    if coarser >= 4.0:
        assert profiled.any()


def test_only_the_unknowns_asked_for_come_back() -> None:
    linearise, theta, covariance = coarse(4.0)
    some, every = (intervals(linearise, theta, covariance, which=np.array(w)) for w in ([2, 0], [0, 1, 2, 3]))
    for one, all_of in zip(some, every, strict=True):
        assert one.tolist() == all_of[[2, 0]].tolist()


# coverage ----------------------------------------------------------------------------------------


def covered(count: int, seed: int) -> tuple[float, float, float]:
    """Shares of intervals that hold the truth: profiled, normal, and by `intervals`.

    The ratio of two means, each read with a doubt: the profile is Fieller's (1954) interval, which is exact, and open
    where the lower mean may be nothing.
    """
    rng, ratio, sd = np.random.default_rng(seed), 2.0, 0.25
    hits = np.zeros(3)
    for y in np.array([ratio, 1.0]) + sd * rng.standard_normal((count, 2)):

        def linearise(theta: Floats, y: Floats = y) -> tuple[Floats, Floats]:
            shown = np.array([theta[0] * theta[1], theta[1]])
            return (shown - y) / sd, np.array([[theta[1], theta[0]], [0.0, 1.0]]) / sd

        theta = np.array([y[0] / y[1], y[1]])
        _, jacobian = linearise(theta)
        covariance = np.linalg.inv(jacobian.T @ jacobian)
        half = Z * np.sqrt(covariance[0, 0])
        low, high = profile_interval(linearise, theta, covariance, 0)
        lows, highs, _ = intervals(linearise, theta, covariance, which=np.array([0]))
        hits += [low <= ratio <= high, abs(theta[0] - ratio) <= half, lows[0] <= ratio <= highs[0]]
    return tuple(hits / count)


def test_profiled_intervals_hold_the_truth_where_normal_ones_do_not() -> None:
    profiled, normal, mixed = covered(400, 5)
    assert 0.92 <= profiled <= 0.98  # binomial sd 0.011
    assert abs(profiled - 0.95) < abs(normal - 0.95)
    assert 0.92 <= mixed <= 0.98


@pytest.mark.campaign
def test_profiled_intervals_hold_the_truth_at_length() -> None:
    profiled, normal, mixed = covered(4000, 6)
    assert 0.94 <= profiled <= 0.96  # binomial sd 0.0035
    assert abs(profiled - 0.95) < abs(normal - 0.95)
    assert 0.935 <= mixed <= 0.965
