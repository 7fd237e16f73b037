"""Draws of the posterior, held against a normal, against quadrature and against emcee run by itself."""

from __future__ import annotations

import functools
from collections.abc import Callable

import emcee
import numpy as np
import pytest
from numpy.typing import NDArray

from assess.calibrate import draw_normal
from assess.calibrate.ensemble import walk
from assess.calibrate.posterior import Posterior, draw_posterior, tail_shape
from tests.calibrate.posteriors import Case, banana, hardly_told, of_girder, skewed, straight
from tests.factories import NOMINAL, along, compressions, prior, viaduct, wagon_at

Floats = NDArray[np.float64]
HARD: dict[str, tuple[Callable[[], Case], str]] = {
    "banana": (lambda: banana(0.3, 0.7), "weighted"),
    "bent banana": (lambda: banana(1.0, 0.5), "ensemble"),
    "correlated and skewed": (lambda: skewed(5, 0.95, 0.4), "weighted"),
    "two pads hardly told apart": (lambda: hardly_told(), "weighted"),
    "two pads told by next to nothing": (lambda: hardly_told(15.0, 20.0), "ensemble"),
}


def drawn(case: Case, seed: int = 1, count: int = 4000) -> Posterior:
    return draw_posterior(case.cost, case.mean, case.covariance, count=count, seed=seed)


@pytest.mark.parametrize("p", [1, 2, 6])
def test_a_linear_model_keeps_the_normal_draws_digit_for_digit(p: int) -> None:
    case = straight(p)
    found = drawn(case)
    assert found.kind == "normal"
    assert np.array_equal(found.draws, draw_normal(case.mean, case.covariance, 4000, 1))
    assert found.effective == pytest.approx(4000.0, rel=1e-9)


def test_a_well_read_girder_keeps_the_normal_draws() -> None:
    girder = viaduct()
    read = compressions(1, range(4)) + along("rotation", 1, (0.0, 14.0), girder)
    case, found = of_girder(wagon_at(girder, 20.0), read, prior(0.3), NOMINAL, 2)
    made = drawn(case)
    assert made.kind == "normal"
    assert np.array_equal(made.draws, found.draws(4000, 1))
    assert 3600.0 <= made.effective < 3999.9


def test_the_cost_of_a_girder_is_least_at_its_fit() -> None:
    """The cases' own equations against those of the fit: no step raises the slope above rounding."""
    case = hardly_told()
    step = 1e-3 * np.sqrt(np.diag(case.covariance))
    up, down = (case.cost(case.mean + side * np.diag(step)) for side in (1.0, -1.0))
    assert (up - down) / 2e-3 == pytest.approx(np.zeros(4), abs=1e-4)
    assert (up + down - 2.0 * case.cost(case.mean[None])).min() > 0.0


@pytest.mark.parametrize("name", ["two pads told by next to nothing", "two pads hardly told apart"])
def test_the_same_seed_gives_the_same_draws_and_another_gives_others(name: str) -> None:
    make, _ = HARD[name]
    one, again, other = (drawn(make(), seed, 500) for seed in (4, 4, 5))
    assert np.array_equal(one.draws, again.draws)
    assert (one.effective, one.kind, one.reason) == (again.effective, again.kind, again.reason)
    assert not np.array_equal(one.draws, other.draws)


def test_the_draws_leave_the_global_random_state_alone() -> None:
    np.random.seed(3)
    before = np.random.get_state()[1].tolist()
    drawn(hardly_told(15.0, 20.0), count=200)
    assert np.random.get_state()[1].tolist() == before


# moments -----------------------------------------------------------------------------------------


@functools.cache
def chain(name: str, steps: int = 6000) -> tuple[Floats, float]:
    """emcee as its documentation starts it, 64 walkers with the stretch move: draws and their effective number."""
    case = HARD[name][0]()
    p = case.mean.size
    sampler = emcee.EnsembleSampler(64, p, lambda theta: -case.cost(theta) / 2.0, vectorize=True)
    start = case.mean + 0.3 * draw_normal(np.zeros(p), case.covariance, 64, 77)
    sampler.run_mcmc(emcee.State(start, random_state=np.random.RandomState(78).get_state()), steps)
    time = float(sampler.get_autocorr_time(tol=0).max())
    assert steps > 50.0 * time, time  # otherwise the chain is no witness
    kept = sampler.get_chain(discard=steps // 5, flat=True)
    return kept, len(kept) / time


def moments(draws: Floats, around: Floats) -> Floats:
    """First and second moments, draw by draw: (count, p + p (p + 1) / 2)."""
    off = draws - around
    i, j = np.triu_indices(around.size)
    return np.concatenate([off, off[:, i] * off[:, j]], axis=1)


@pytest.mark.parametrize("name", list(HARD))
def test_moments_agree_with_a_long_chain_of_emcee_within_four_of_their_standard_errors(name: str) -> None:
    """Standard error: sd of a moment over the root of the effective number, ours and the chain's taken together."""
    make, kind = HARD[name]
    case = make()
    found = drawn(case)
    assert found.kind == kind
    assert found.converged
    theirs, effective = chain(name)
    around = theirs.mean(axis=0)
    one, other = moments(found.draws, around), moments(theirs, around)
    error = np.sqrt(other.var(axis=0) * (1.0 / found.effective + 1.0 / effective))
    assert np.abs(one.mean(axis=0) - other.mean(axis=0)) / error == pytest.approx(0.0, abs=4.0)


@pytest.mark.parametrize("name", list(HARD))
def test_the_normal_draws_would_not_agree(name: str) -> None:
    """The check bites: the normal picture misses some moment by more than ten of the same errors."""
    case = HARD[name][0]()
    theirs, effective = chain(name)
    around = theirs.mean(axis=0)
    normal = draw_normal(case.mean, case.covariance, 4000, 1)
    one, other = moments(normal, around), moments(theirs, around)
    error = np.sqrt(other.var(axis=0) * (1.0 / 4000.0 + 1.0 / effective))
    assert (np.abs(one.mean(axis=0) - other.mean(axis=0)) / error).max() > 10.0


@pytest.mark.parametrize(
    ("case", "kind"), [(banana(1.0, 0.5), "ensemble"), (skewed(2, 0.9, 0.4), "weighted")]
)
def test_two_unknowns_agree_with_quadrature(case: Case, kind: str) -> None:
    """Moments and the chance of a corner by the trapezoidal rule on a fine grid: exact beside the draws."""
    found = drawn(case, seed=8)
    assert found.kind == kind
    x, y = np.meshgrid(np.linspace(-9.0, 9.0, 1801), np.linspace(-9.0, 30.0, 3901), indexing="ij")
    grid = np.stack([x.ravel(), y.ravel()], axis=1)
    density = np.exp(-case.cost(grid) / 2.0)
    density /= density.sum()
    mean = density @ grid
    off = grid - mean
    exact = np.array(
        [*mean, *(density @ (off**2)), density @ off.prod(axis=1), density[(grid > 0.5).all(axis=1)].sum()]
    )
    apart = found.draws - mean
    each = np.column_stack([found.draws, apart**2, apart.prod(axis=1), (found.draws > 0.5).all(axis=1)])
    error = each.std(axis=0) / np.sqrt(found.effective)
    assert (each.mean(axis=0) - exact) / error == pytest.approx(np.zeros(6), abs=4.0)


@pytest.mark.parametrize("coarser", [8.0, 15.0])
def test_two_pads_agree_with_a_great_many_draws_of_the_prior_weighed_by_the_readings(coarser: float) -> None:
    """Needs no chain and no approximation; the pads are spread so widely that a mode apart would be met."""
    believed = prior(20.0)
    case = hardly_told(coarser, 20.0)
    noise = np.random.default_rng(6).standard_normal((400_000, 4))
    theta = believed.mean + believed.sd * noise
    told = np.concatenate([case.cost(block) for block in np.split(theta, 100)]) - (noise**2).sum(axis=1)
    weight = np.exp((case.cost(case.mean[None]) - told) / 2.0)
    worth = weight.sum() ** 2 / (weight @ weight)
    assert worth > 10_000.0
    mean = weight @ theta / weight.sum()
    sd = np.sqrt(weight @ (theta - mean) ** 2 / weight.sum())
    found = drawn(case, seed=5)
    error = sd * np.sqrt(1.0 / worth + 1.0 / found.effective)
    assert (found.mean - mean) / error == pytest.approx(np.zeros(4), abs=4.0)


# what is reported --------------------------------------------------------------------------------


def test_the_reported_moments_are_those_of_the_draws() -> None:
    found = drawn(banana(0.3, 0.7))
    assert found.mean == pytest.approx(found.draws.mean(axis=0))
    assert found.covariance == pytest.approx(np.cov(found.draws.T))


@pytest.mark.parametrize("name", ["two pads told by next to nothing", "two pads hardly told apart"])
def test_the_effective_number_is_never_more_than_the_draws(name: str) -> None:
    found = drawn(HARD[name][0](), count=1000)
    assert found.draws.shape[0] == 1000
    assert 0.0 < found.effective <= 1000.0


def test_a_posterior_that_nothing_bounds_is_said_not_to_converge() -> None:
    """A stiffness told by its compliance alone, and not well: from some stiffness on nothing changes any more."""

    def cost(theta: Floats) -> Floats:
        return ((np.exp(-theta[:, 0]) - 1.0) / 0.5) ** 2 + (theta[:, 1] - theta[:, 0] / 2.0) ** 2

    jacobian = np.array([[-2.0, 0.0], [-0.5, 1.0]])
    found = draw_posterior(cost, np.zeros(2), np.linalg.inv(jacobian.T @ jacobian), count=400, seed=1)
    assert not found.converged
    assert "nothing bounds the unknowns" in found.reason


def test_impossible_unknowns_are_never_drawn() -> None:
    def cost(theta: Floats) -> Floats:
        return np.where(theta[:, 0] > 0.3, np.nan, (theta**2).sum(axis=1))

    found = draw_posterior(cost, np.zeros(2), np.eye(2), seed=2)
    assert found.kind == "weighted"
    assert found.draws[:, 0].max() <= 0.3


def test_unknowns_whose_equations_cannot_be_solved_are_never_drawn_and_spoil_no_others() -> None:
    def cost(theta: Floats) -> Floats:
        if np.any(theta[:, 0] > 0.3):
            raise np.linalg.LinAlgError("Singular matrix")
        return np.asarray((theta**2).sum(axis=1))

    def plain(theta: Floats) -> Floats:
        return np.where(theta[:, 0] > 0.3, np.inf, (theta**2).sum(axis=1))

    found = draw_posterior(cost, np.zeros(2), np.eye(2), count=500, seed=2)
    assert np.array_equal(found.draws, draw_posterior(plain, np.zeros(2), np.eye(2), count=500, seed=2).draws)


@pytest.mark.parametrize("name", ["banana", "bent banana"])
def test_a_direction_without_variance_is_held(name: str) -> None:
    make, kind = HARD[name]
    case, covariance = make(), np.zeros((3, 3))
    covariance[:2, :2] = case.covariance
    found = draw_posterior(
        lambda theta: case.cost(theta[:, :2]), np.array([0.0, 0.0, 5.0]), covariance, count=500, seed=2
    )
    assert found.kind == kind
    assert np.all(found.draws[:, 2] == 5.0)


def test_units_far_apart_change_nothing() -> None:
    """Seat drops in metres beside ln k: the same banana with one axis 1e7 times smaller."""
    case, scale = skewed(3, 0.9, 0.3), np.array([1.0, 1e-7, 1.0])
    small = draw_posterior(
        lambda theta: case.cost(theta / scale), case.mean, case.covariance * np.outer(scale, scale), seed=3
    )
    assert small.kind == drawn(case, seed=3).kind == "weighted"
    error = np.sqrt(np.diag(small.covariance) / small.effective) / scale
    assert small.mean / scale == pytest.approx(drawn(case, seed=6).mean, abs=6.0 * error.max())


def test_no_finite_cost_at_the_mean_is_refused() -> None:
    with pytest.raises(ValueError, match="not finite"):
        draw_posterior(lambda theta: np.full(len(theta), np.nan), np.zeros(2), np.eye(2), seed=1)


def test_the_shape_of_a_tail_is_found() -> None:
    """Weights u^-k of a uniform u have the tail of shape k; its error at 190 of 4000 weights is near 0.1."""
    u = np.random.default_rng(4).random(4000)
    for k in (0.2, 0.5, 1.0):
        assert tail_shape(-k * np.log(u)) == pytest.approx(k, abs=0.25)


def test_an_ensemble_that_has_no_time_says_that_it_did_not_settle(monkeypatch: pytest.MonkeyPatch) -> None:
    case = banana(1.0, 0.5)
    monkeypatch.setattr("assess.calibrate.posterior.walk", functools.partial(walk, longest=300))
    found = drawn(case, count=200)
    assert not found.converged
    assert "did not settle in 300 steps" in found.reason
    assert found.draws.shape == (200, 2)


def test_where_hardly_a_proposal_is_possible_the_ensemble_starts_about_the_mean() -> None:
    """A box far narrower than the normal picture: uniform, of variance width^2 / 12."""

    def cost(theta: Floats) -> Floats:
        return np.where(np.abs(theta).max(axis=1) < 0.02, 0.0, np.inf)

    found = draw_posterior(cost, np.zeros(2), np.eye(2), seed=3)
    assert (found.kind, found.converged) == ("ensemble", True)
    assert np.abs(found.draws).max() < 0.02
    assert np.diag(found.covariance) == pytest.approx([0.04**2 / 12.0] * 2, rel=0.1)
