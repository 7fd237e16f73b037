"""The robust companion, against least squares and against the t likelihood minimised by scipy."""

from __future__ import annotations

import sys
from collections.abc import Callable

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import minimize

from assess.calibrate import fit
from assess.calibrate.minimise import minimise
from assess.calibrate.robust import robust
from tests.factories import NOMINAL, noisy, prior, well_read, with_values

Floats = NDArray[np.float64]
Linearised = Callable[[Floats], tuple[Floats, Floats]]


def line(y: Floats, held: bool) -> Linearised:
    """A straight line read at some places, its slope held by a prior or not."""
    x = np.linspace(-1.0, 1.0, y.size)
    design = np.column_stack([np.ones_like(x), x])
    rows = np.array([[0.0, 2.0]]) if held else np.zeros((0, 2))
    return lambda t: (np.concatenate([design @ t - y, rows @ t]), np.concatenate([design, rows]))


def curve(y: Floats) -> Linearised:
    x = np.linspace(0.2, 2.0, y.size)

    def linearise(theta: Floats) -> tuple[Floats, Floats]:
        fall = np.exp(-np.exp(theta[1]) * x)
        shown = np.exp(theta[0]) * fall
        return shown - y, np.column_stack([shown, -shown * x * np.exp(theta[1])])

    return linearise


def readings(m: int, seed: int, error: float = 6.0) -> Floats:
    """Noise about 8 exp(-x), one reading in error."""
    y = 8.0 * np.exp(-np.linspace(0.2, 2.0, m)) + np.random.default_rng(seed).standard_normal(m)
    y[m // 3] += error
    return np.asarray(y)


CASES = {
    "line": (line(readings(9, 1), False), 9),
    "line with a prior": (line(readings(9, 2), True), 9),
    "curve": (curve(readings(14, 3)), 14),
}


def squares(linearise: Linearised) -> Floats:
    return minimise(linearise, np.array([1.0, 0.1])).theta


@pytest.mark.parametrize("freedom", [2.0, 4.0, 15.0])
@pytest.mark.parametrize("name", list(CASES))
def test_it_is_the_minimum_of_the_t_likelihood(name: str, freedom: float) -> None:
    """-2 ln of the t density is (nu + 1) ln(1 + r^2 / nu); the rows of the prior stay squares."""
    linearise, count = CASES[name]

    def likelihood(theta: Floats) -> float:
        r = linearise(theta)[0]
        return float((freedom + 1.0) * np.log1p(r[:count] ** 2 / freedom).sum() + (r[count:] ** 2).sum())

    found = robust(linearise, squares(linearise), count, freedom=freedom)
    assert found.converged
    theirs = minimize(
        likelihood,
        found.theta + 0.05,
        method="Nelder-Mead",
        options={"xatol": 1e-10, "fatol": 1e-14, "maxiter": 2000},
    )
    assert found.theta == pytest.approx(theirs.x, abs=1e-6)


@pytest.mark.parametrize("name", list(CASES))
def test_with_many_degrees_of_freedom_it_is_least_squares(name: str) -> None:
    linearise, count = CASES[name]
    best = squares(linearise)
    found = robust(linearise, best, count, freedom=1e10)
    assert found.theta == pytest.approx(best, abs=1e-7)
    assert found.weights == pytest.approx(np.ones(count), abs=1e-7)
    assert found.moved == pytest.approx(np.zeros(2), abs=1e-6)


def test_weights_follow_the_residuals_of_the_readings_only() -> None:
    linearise, count = CASES["line with a prior"]
    found = robust(linearise, squares(linearise), count)
    residual = linearise(found.theta)[0]
    assert found.weights == pytest.approx(5.0 / (4.0 + residual[:count] ** 2))
    assert int(np.argmin(found.weights)) == 3
    assert found.weights[3] < 0.5


def test_a_gross_error_moves_it_far_less_than_least_squares() -> None:
    clean, spoiled = (line(readings(15, 4, error), False) for error in (0.0, 50.0))
    plain = np.abs(squares(spoiled) - squares(clean))
    found = robust(spoiled, squares(spoiled), 15)
    firm = np.abs(found.theta - robust(clean, squares(clean), 15).theta)
    assert np.all(firm < 0.1 * plain)


def test_a_gross_error_in_a_girder_shows_as_a_pad_that_moved_by_more_than_a_deviation() -> None:
    model, believed = noisy(well_read(), NOMINAL, np.random.default_rng(5)), prior()
    values = model.value.copy()
    values[1] += 20.0 * model.sd[1]
    rows = believed.rows(4)
    outcome = []
    for read in (model, with_values(model, values)):

        def linearise(theta: Floats, y: Floats = read.value) -> tuple[Floats, Floats]:
            predicted, jacobian = model.linearise(theta)
            residual = np.concatenate([(predicted - y) / model.sd, believed.residual(theta)])
            return residual, np.concatenate([jacobian / model.sd[:, None], rows])

        squared = fit(read, start=NOMINAL, prior=believed)
        found = robust(linearise, squared.log_stiffness, 28)
        assert found.converged
        assert found.moved == pytest.approx(
            (found.theta - squared.log_stiffness) / squared.sd, rel=1e-6, abs=1e-9
        )
        outcome.append((squared, found))
    (clean, firm), (spoiled, kept) = outcome
    assert np.abs(firm.moved).max() < 1.0
    assert np.abs(kept.moved).max() > 3.0
    assert int(np.argmin(kept.weights)) == 1
    drift = np.abs(spoiled.log_stiffness - clean.log_stiffness).max()
    assert np.abs(kept.theta - firm.theta).max() < 0.2 * drift


def test_it_says_so_where_it_still_moves(monkeypatch: pytest.MonkeyPatch) -> None:
    linearise, count = CASES["line"]
    monkeypatch.setattr(sys.modules["assess.calibrate.robust"], "_PASSES", 2)
    found = robust(linearise, squares(linearise), count)
    assert not found.converged
    assert found.passes == 2


@pytest.mark.parametrize("freedom", [0.0, -1.0, float("nan")])
def test_no_degrees_of_freedom_are_refused(freedom: float) -> None:
    linearise, count = CASES["line"]
    with pytest.raises(ValueError, match="above 0"):
        robust(linearise, squares(linearise), count, freedom=freedom)
