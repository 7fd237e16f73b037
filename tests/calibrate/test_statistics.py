"""What a fit says of its own doubt, held against simulations with known pads. All seeded."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import stats

from assess.calibrate import Z95, Fit, Observation, ObservationModel, PadPrior, fit
from assess.girder import Condensed
from tests.factories import (
    NOMINAL,
    along,
    compressions,
    noisy,
    poorly_read,
    prior,
    viaduct,
    wagon_at,
    well_read,
    with_values,
)

Floats = NDArray[np.float64]
MODELS = {"well": well_read, "poorly": poorly_read}


@dataclass(frozen=True, kw_only=True)
class Runs:
    """Fits of simulated visits: (runs, q) truth and estimate with sd, and the fits."""

    truth: Floats
    fits: list[Fit]

    def stack(self, name: str) -> Floats:
        return np.array([getattr(one, name) for one in self.fits])


def simulate(
    model: ObservationModel, count: int, seed: int, believed: PadPrior | None, spread: PadPrior
) -> Runs:
    """Draw pads from `spread`, read them with noise, fit them with `believed`."""
    rng = np.random.default_rng(seed)
    truth = spread.mean + spread.sd * rng.standard_normal((count, spread.mean.size))
    fits = [fit(noisy(model, one, rng), start=spread.mean, prior=believed) for one in truth]
    return Runs(truth=truth, fits=fits)


@pytest.fixture(scope="module", params=["well", "poorly"])
def with_prior(request: pytest.FixtureRequest) -> Runs:
    return simulate(MODELS[request.param](), 300, 11, prior(), prior())


@pytest.fixture(scope="module")
def without_prior() -> Runs:
    return simulate(well_read(), 300, 12, None, prior())


def held(runs: Runs) -> Floats:
    """Share of the runs whose 95 % interval holds the truth, for each pad."""
    inside = np.abs(runs.truth - runs.stack("log_stiffness")) <= Z95 * runs.stack("sd")
    return np.asarray(inside.mean(axis=0))


# coverage ----------------------------------------------------------------------------------------


def test_intervals_with_a_prior_hold_the_truth_90_to_99_times_in_100(with_prior: Runs) -> None:
    assert np.all((held(with_prior) >= 0.90) & (held(with_prior) <= 0.99)), held(with_prior)


def test_intervals_without_a_prior_hold_the_truth_90_to_99_times_in_100(without_prior: Runs) -> None:
    assert np.all((held(without_prior) >= 0.90) & (held(without_prior) <= 0.99)), held(without_prior)


@pytest.mark.campaign
@pytest.mark.parametrize("name", ["well", "poorly"])
@pytest.mark.parametrize("cv", [0.15, 0.3, 0.6])
def test_intervals_hold_the_truth_at_length(name: str, cv: float) -> None:
    runs = simulate(MODELS[name](), 2500, 21, prior(cv), prior(cv))
    assert np.all((held(runs) >= 0.92) & (held(runs) <= 0.98)), held(runs)


# exact statements --------------------------------------------------------------------------------


@pytest.mark.parametrize("believed", [None, prior()])
def test_the_covariance_is_the_inverse_of_the_normal_matrix(believed: PadPrior | None) -> None:
    model = noisy(well_read(), NOMINAL, np.random.default_rng(3))
    found = fit(model, start=NOMINAL, prior=believed)
    whitened = model.jacobian(found.log_stiffness) / model.sd[:, None]
    normal = whitened.T @ whitened
    assert found.information == pytest.approx(normal, rel=1e-10)
    if believed is not None:
        normal = normal + np.diag(believed.sd**-2.0)
    assert found.covariance @ normal == pytest.approx(np.eye(4), abs=1e-9)


def test_redundancy_numbers_sum_to_the_readings_less_the_unknowns() -> None:
    found = fit(noisy(well_read(), NOMINAL, np.random.default_rng(3)), start=NOMINAL, prior=None)
    assert found.redundancy.sum() == pytest.approx(28 - 4)
    assert found.degrees_of_freedom == 24


@pytest.mark.parametrize("name", ["well", "poorly"])
def test_with_a_prior_an_unknown_counts_as_far_as_the_readings_tell_it(name: str) -> None:
    # trace of the hat matrix = trace(C J'J) = sum of the data shares seen along the prior's own scale
    model = noisy(MODELS[name](), NOMINAL, np.random.default_rng(4))
    found = fit(model, start=NOMINAL, prior=prior())
    told = float(np.trace(found.covariance @ found.information))
    assert found.redundancy.sum() == pytest.approx(model.value.size - told)
    assert told == pytest.approx(found.data_share.sum(), abs=1e-9)  # C J'J = 1 - C P^-1, and P is diagonal
    assert found.degrees_of_freedom == round(model.value.size - told)


def test_information_of_the_readings_and_the_prior_make_the_estimate() -> None:
    model, believed = noisy(poorly_read(), NOMINAL - 0.2, np.random.default_rng(5)), prior()
    found = fit(model, start=NOMINAL, prior=believed)
    held_by_prior = np.diag(believed.sd**-2.0)
    both = np.linalg.solve(
        found.information + held_by_prior, found.information_vector + held_by_prior @ believed.mean
    )
    assert both == pytest.approx(found.log_stiffness, abs=1e-6)


def test_information_leaves_a_moving_seat_out() -> None:
    """A pad whose seat may move by anything is told by nothing."""
    girder = viaduct()
    read = compressions(1, range(4))
    states = wagon_at(girder, 28.5)
    told = ObservationModel(Condensed(girder), np.arange(4), states, read)
    seat = Observation(quantity="settlement", state=0, value=0.0, sd=10.0, support=2)
    level = along("deflection", 1, (32.0,), girder)
    doubtful = ObservationModel(Condensed(girder), np.arange(4), states, [*level, seat])
    firm = fit(with_values(told, told.predict(NOMINAL)), start=NOMINAL, prior=prior())
    theta = np.append(NOMINAL, 0.0)
    loose = fit(with_values(doubtful, doubtful.predict(theta)), start=NOMINAL, prior=prior())
    assert firm.data_share[2] > 0.95
    assert loose.data_share[2] < 0.02
    assert np.abs(loose.information).max() < 1e-2 * firm.information[2, 2]


# data share --------------------------------------------------------------------------------------


def test_a_pad_far_from_the_load_is_told_by_the_assumption_and_one_below_it_by_the_readings() -> None:
    found = fit(noisy(poorly_read(), NOMINAL, np.random.default_rng(6)), start=NOMINAL, prior=prior())
    assert np.all(found.data_share[:2] > 0.95)
    assert np.all(found.data_share[2:] < 0.05)
    assert found.log_stiffness[3] == pytest.approx(NOMINAL[3], abs=0.02 * prior().sd[3])
    assert found.sd[3] == pytest.approx(prior().sd[3], rel=1e-3)


def test_a_pad_that_no_reading_tells_keeps_its_prior_and_a_share_of_nothing() -> None:
    girder = viaduct()
    at_the_end = wagon_at(
        girder, 0.0
    )  # the leading axle stands on the first support, the others off the girder
    model = ObservationModel(Condensed(girder), np.arange(4), at_the_end, compressions(1, (0,)))
    found = fit(with_values(model, model.predict(NOMINAL)), start=NOMINAL, prior=prior())
    assert found.data_share[0] > 0.9
    assert found.data_share[1:] == pytest.approx(np.zeros(3), abs=1e-6)
    assert found.sd[1:] == pytest.approx(prior().sd[1:])


def test_without_a_prior_the_readings_tell_all() -> None:
    found = fit(noisy(well_read(), NOMINAL, np.random.default_rng(7)), start=NOMINAL, prior=None)
    assert found.data_share.tolist() == [1.0] * 4


def test_tighter_readings_leave_less_to_the_assumption() -> None:
    model, shares = poorly_read(), []
    for factor in (4.0, 1.0, 0.25):
        one = with_values(model, model.predict(NOMINAL))
        one.sd = model.sd * factor
        shares.append(fit(one, start=NOMINAL, prior=prior()).data_share)
    assert np.all(np.diff(np.array(shares), axis=0) > 0.0)


# residuals ---------------------------------------------------------------------------------------


def test_standardised_residuals_of_clean_readings_are_standard_normal(with_prior: Runs) -> None:
    w = with_prior.stack("standardised")
    assert w.mean() == pytest.approx(0.0, abs=0.06)
    assert np.all(np.abs(w.std(axis=0) - 1.0) < 0.16)  # each reading, 300 runs: sd of an sd is 0.04
    one = w[np.arange(w.shape[0]), np.arange(w.shape[0]) % w.shape[1]]  # one of each run: independent
    assert stats.kstest(one, "norm").pvalue > 0.01


def test_clean_readings_are_suspect_once_in_a_thousand(without_prior: Runs) -> None:
    share = without_prior.stack("suspect").mean()  # 8400 residuals, 8.4 expected
    assert 3e-4 < share < 2e-3


def minimal_detectable(found: Fit, sd: Floats) -> Floats:
    """Baarda (1968): noncentrality 4.13 = 3.29 + 0.84, alpha 0.001 and power 80 %."""
    return np.asarray(4.13 * sd / np.sqrt(found.redundancy))


def blunders(count: int, seed: int, times: float) -> tuple[list[bool], list[bool]]:
    """Spoil one checked reading of a visit by some times its minimal detectable size: (suspect, largest |w|)."""
    model, rng, suspect, largest = well_read(), np.random.default_rng(seed), [], []
    for _ in range(count):
        truth = NOMINAL + prior().sd * rng.standard_normal(4)
        clean = noisy(model, truth, rng)
        r = fit(with_values(model, model.predict(truth)), start=NOMINAL, prior=prior())
        j = int(rng.choice(np.flatnonzero(r.redundancy > 0.5)))
        values = clean.value.copy()
        values[j] += times * rng.choice([-1.0, 1.0]) * minimal_detectable(r, model.sd)[j]
        found = fit(with_values(model, values), start=NOMINAL, prior=prior())
        suspect.append(bool(found.suspect[j]))
        largest.append(int(np.nanargmax(np.abs(found.standardised))) == j)
    return suspect, largest


def test_a_blunder_of_twice_its_minimal_detectable_size_stands_out_95_times_in_100() -> None:
    suspect, largest = blunders(150, 31, 2.0)
    assert np.mean(suspect) >= 0.98
    assert np.mean(largest) >= 0.95


def test_a_blunder_of_its_minimal_detectable_size_is_found_about_80_times_in_100() -> None:
    suspect, _ = blunders(150, 32, 1.0)
    assert 0.70 <= np.mean(suspect) <= 0.90  # binomial sd 0.033


def test_a_reading_that_nothing_checks_has_no_standardised_residual() -> None:
    girder = viaduct()
    states = wagon_at(girder, 12.5, 28.5)
    read = [*compressions(1, (0, 1)), *compressions(2, (2, 3))[2:]]
    model = ObservationModel(Condensed(girder), np.arange(4), states, read)
    found = fit(with_values(model, model.predict(NOMINAL)), start=NOMINAL, prior=None)
    assert found.degrees_of_freedom == 0
    assert np.isnan(found.p_value)
    assert np.all(np.isnan(found.standardised))
    assert not found.suspect.any()


# global test -------------------------------------------------------------------------------------


def test_p_values_of_clean_readings_are_uniform_with_a_prior(with_prior: Runs) -> None:
    assert stats.kstest(with_prior.stack("p_value"), "uniform").pvalue > 0.01


def test_p_values_of_clean_readings_are_uniform_without_a_prior(without_prior: Runs) -> None:
    assert stats.kstest(without_prior.stack("p_value"), "uniform").pvalue > 0.01


def half_told(factor: float) -> ObservationModel:
    """Few readings, each so coarse that the pads are told in part."""
    girder = viaduct()
    read = compressions(1, (0, 1)) + along("deflection", 1, (7.0,), girder)
    model = ObservationModel(Condensed(girder), np.arange(4), wagon_at(girder, 12.5), read)
    model.sd = model.sd * factor
    return model


@pytest.mark.parametrize("factor", [0.5, 3.0, 10.0])
def test_rounded_degrees_of_freedom_cry_misfit_about_5_times_in_100(factor: float) -> None:
    false = np.mean(simulate(half_told(factor), 300, 41, prior(), prior()).stack("p_value") < 0.05)
    assert 0.015 <= false <= 0.09  # 300 runs: sd 0.013


@pytest.mark.campaign
@pytest.mark.parametrize("factor", [0.3, 0.5, 1.0, 2.0, 3.0, 4.0, 6.0, 8.0, 10.0, 14.0])
def test_rounded_degrees_of_freedom_are_honest_at_length(factor: float) -> None:
    false = np.mean(simulate(half_told(factor), 3000, 42, prior(), prior()).stack("p_value") < 0.05)
    assert 0.02 <= false <= 0.08


def test_a_girder_softer_than_assumed_shows_as_misfit() -> None:
    girder = viaduct()
    model = well_read()
    rng = np.random.default_rng(8)
    from assess.girder import Girder, Piece

    soft = Girder(
        tuple(tuple(Piece(length=p.length, flexural=0.6 * p.flexural) for p in s) for s in girder.spans)
    )
    states = wagon_at(girder, 12.5, 20.0, 28.5, 44.0)
    read = compressions(4, range(4)) + along("deflection", 4, (6.5, 23.0, 39.5), girder)
    true = ObservationModel(Condensed(soft), np.arange(4), states, read)
    found = fit(with_values(model, noisy(true, NOMINAL, rng).value), start=NOMINAL, prior=prior())
    assert found.p_value < 1e-4


# weights and repeats -----------------------------------------------------------------------------


@pytest.mark.parametrize("believed", [None, prior()])
def test_a_reading_of_weight_m_is_the_reading_repeated_m_times(believed: PadPrior | None) -> None:
    girder = viaduct()
    states = wagon_at(girder, 12.5, 28.5)
    read = compressions(2, range(4)) + along("deflection", 2, (7.0, 23.0, 39.0), girder)
    rng = np.random.default_rng(9)
    plain = noisy(ObservationModel(Condensed(girder), np.arange(4), states, read), NOMINAL, rng)
    times = np.array([1, 3, 1, 2, 1, 1, 4, 1, 1, 2, 1, 1, 5, 1])
    weighted = with_values(plain, plain.value)
    weighted.sd = plain.sd / np.sqrt(times)
    index = np.repeat(np.arange(times.size), times)
    repeated = ObservationModel(Condensed(girder), np.arange(4), states, [read[j] for j in index])
    repeated = with_values(repeated, plain.value[index])
    one, other = fit(weighted, start=NOMINAL, prior=believed), fit(repeated, start=NOMINAL, prior=believed)
    assert one.log_stiffness == pytest.approx(other.log_stiffness, abs=1e-9)
    assert one.covariance == pytest.approx(other.covariance, rel=1e-6)


def test_the_order_of_the_readings_does_not_matter() -> None:
    girder = viaduct()
    states = wagon_at(girder, 12.5, 20.0, 28.5, 44.0)
    read = compressions(4, range(4)) + along("deflection", 4, (6.5, 23.0, 39.5), girder)
    model = noisy(well_read(), NOMINAL, np.random.default_rng(10))
    turned = ObservationModel(Condensed(girder), np.arange(4), states, read[::-1])
    one = fit(model, start=NOMINAL, prior=prior())
    other = fit(with_values(turned, model.value[::-1]), start=NOMINAL, prior=prior())
    assert one.log_stiffness == pytest.approx(other.log_stiffness, abs=1e-9)
    assert one.standardised == pytest.approx(other.standardised[::-1], abs=1e-6)


def test_the_start_does_not_matter() -> None:
    model = noisy(well_read(), NOMINAL + np.array([0.3, -0.9, 0.2, 0.5]), np.random.default_rng(13))
    ends = [
        fit(model, start=NOMINAL + shift, prior=None).log_stiffness for shift in (-1.5, -0.4, 0.0, 0.8, 1.5)
    ]
    assert np.ptp(np.array(ends), axis=0) == pytest.approx(np.zeros(4), abs=1e-7)


# draws -------------------------------------------------------------------------------------------


def test_draws_have_the_mean_and_covariance_of_the_fit_and_come_again_with_their_seed() -> None:
    found = fit(noisy(poorly_read(), NOMINAL, np.random.default_rng(14)), start=NOMINAL, prior=prior())
    drawn = found.draws(20000, 1)
    assert drawn.shape == (20000, 4)
    assert drawn.mean(axis=0) == pytest.approx(found.log_stiffness, abs=5e-3)
    scale = np.outer(found.sd, found.sd)
    assert np.cov(drawn.T) / scale == pytest.approx(found.covariance / scale, abs=0.04)
    assert np.array_equal(drawn, found.draws(20000, 1))
    assert not np.array_equal(drawn, found.draws(20000, 2))
