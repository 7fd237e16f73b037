"""Data snooping: its numbers, and how often errors of a known size are found. All seeded."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.stats import chi2, ncx2

from assess.calibrate import Fit, NotDetermined, ObservationModel, PadPrior, fit
from assess.calibrate.snooping import (
    CRITICAL,
    NONCENTRALITY,
    Proposals,
    minimal_detectable,
    propose,
    redundancy,
    standardised,
    suspect,
)
from assess.girder import Condensed
from tests.factories import (
    NOMINAL,
    along,
    compressions,
    noisy,
    prior,
    viaduct,
    wagon_at,
    well_read,
    with_values,
)

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class Linear:
    """A fit of y = A x + e by plain normal equations, for some of the readings."""

    standardised: Floats
    degrees_of_freedom: int
    p_value: float


def fit_linear(design: Floats, y: Floats, left_out: tuple[int, ...]) -> Linear:
    a, y = np.delete(design, left_out, axis=0), np.delete(y, left_out)
    normal = a.T @ a
    if np.linalg.matrix_rank(normal) < a.shape[1]:
        raise NotDetermined("too few readings", places=[], q=2, readings=y.size, unknowns=a.shape[1])
    residual = y - a @ np.linalg.solve(normal, a.T @ y)
    freedom = y.size - a.shape[1]
    return Linear(
        standardised=standardised(residual, redundancy(a, np.linalg.inv(normal))),
        degrees_of_freedom=freedom,
        p_value=float(chi2.sf(residual @ residual, freedom)) if freedom else np.nan,
    )


def snoop_linear(design: Floats, y: Floats) -> Proposals:
    return propose(lambda left_out: fit_linear(design, y, left_out), y.size)


def random_design(m: int, p: int) -> Floats:
    return np.random.default_rng(1).standard_normal((m, p))


# the numbers -------------------------------------------------------------------------------------


def test_the_critical_value_and_the_noncentrality_are_those_of_baarda() -> None:
    """Baarda (1968): alpha 0.001 two-sided and power 0.80 give 3.29 and 4.13; power by the noncentral chi-square."""
    assert pytest.approx(3.2905, abs=5e-5) == CRITICAL
    assert pytest.approx(4.1321, abs=5e-5) == NONCENTRALITY
    assert ncx2.sf(CRITICAL**2, 1, NONCENTRALITY**2) == pytest.approx(0.80, abs=1e-6)


def test_redundancies_of_repeats_are_one_less_their_share() -> None:
    """Five readings of one thing: each is one fifth of the mean, so four fifths are checked."""
    assert redundancy(np.ones((5, 1)), np.array([[0.2]])) == pytest.approx(np.full(5, 0.8))
    assert minimal_detectable(np.full(5, 0.1), np.full(5, 0.8)) == pytest.approx(
        np.full(5, 0.1 * 4.1321 / 0.8**0.5), rel=1e-4
    )


def test_a_reading_that_nothing_checks_is_never_suspect_and_no_error_in_it_is_found() -> None:
    whitened = np.array([[1.0, 0.0], [1.0, 0.0], [0.0, 1.0]])
    r = redundancy(whitened, np.diag([0.5, 1.0]))
    w = standardised(np.array([9.0, -9.0, 5.0]), r)
    assert r == pytest.approx([0.5, 0.5, 0.0])
    assert np.isnan(w[2])
    assert suspect(w).tolist() == [True, True, False]
    assert minimal_detectable(np.ones(3), r)[2] == np.inf


@pytest.mark.parametrize("believed", [None, prior()])
def test_they_are_the_numbers_of_the_fit(believed: PadPrior | None) -> None:
    model = noisy(well_read(), NOMINAL, np.random.default_rng(3))
    found = fit(model, start=NOMINAL, prior=believed)
    r = redundancy(model.jacobian(found.log_stiffness) / model.sd[:, None], found.covariance)
    w = standardised((model.value - found.predicted) / model.sd, r)
    assert r == pytest.approx(found.redundancy)
    assert w == pytest.approx(found.standardised)
    assert suspect(w).tolist() == found.suspect.tolist()


# proposals ---------------------------------------------------------------------------------------


def test_two_errors_are_proposed_one_after_the_other_and_the_rest_is_clean() -> None:
    design, rng = random_design(30, 3), np.random.default_rng(2)
    y = design @ np.array([1.0, -2.0, 0.5]) + rng.standard_normal(30)
    y[7] += 15.0
    y[21] -= 9.0
    found = snoop_linear(design, y)
    assert [p.reading for p in found.proposals] == [7, 21]
    assert found.ended == "nothing suspect"
    first, second = found.proposals
    assert first.standardised > 3.29
    assert second.standardised < -3.29
    assert first.p_value < 1e-3 < 0.05 < second.p_value
    assert second.p_value == fit_linear(design, y, (7, 21)).p_value
    assert second.standardised == fit_linear(design, y, (7,)).standardised[20]
    assert first.alike == ()


def test_clean_readings_bring_no_proposal() -> None:
    design = random_design(30, 3)
    found = snoop_linear(design, design @ np.ones(3) + 0.5 * np.random.default_rng(3).standard_normal(30))
    assert found.proposals == ()
    assert found.ended == "nothing suspect"


def test_with_one_degree_of_freedom_none_is_proposed() -> None:
    """Two readings of one thing that disagree: one is wrong, and nothing tells which."""
    found = snoop_linear(np.ones((2, 1)), np.array([0.0, 20.0]))
    assert found.proposals == ()
    assert found.ended == "too few readings"


def test_proposals_stop_when_too_few_are_left() -> None:
    found = snoop_linear(np.ones((3, 1)), np.array([0.0, 20.0, 70.0]))
    assert [p.reading for p in found.proposals] == [2]
    assert found.ended == "too few readings"


def test_proposals_stop_when_the_rest_would_not_fix_the_unknowns() -> None:
    design, y = random_design(8, 2), np.zeros(8)
    y[3] = 30.0

    def unfixed(left_out: tuple[int, ...]) -> Linear:
        if left_out:
            raise NotDetermined(
                "the readings do not tell the pads apart", places=[0], q=2, readings=7, unknowns=2
            )
        return fit_linear(design, y, left_out)

    found = propose(unfixed, 8)
    assert found.proposals == ()
    assert found.ended == "too few readings"


def test_readings_that_are_equally_suspect_are_named_together() -> None:
    """Two readings alone tell a second unknown: if they disagree, either may be wrong."""
    design = np.array([[1.0, 0.0]] * 6 + [[0.0, 1.0]] * 2)
    y = np.array([0.1, -0.2, 0.3, 0.0, -0.1, 0.2, 0.0, 30.0])
    (found,) = snoop_linear(design, y).proposals
    assert {found.reading, *found.alike} == {6, 7}


def test_nothing_is_removed() -> None:
    design, y = random_design(12, 2), np.zeros(12)
    y[4] = 40.0
    before = y.copy()
    assert [p.reading for p in snoop_linear(design, y).proposals] == [4]
    assert np.array_equal(y, before)


# how often errors are found ----------------------------------------------------------------------


def rates(count: int, seed: int, times: float) -> tuple[float, float]:
    """Linear model, an error of some times its detectable size in a well checked reading: (suspect, worst)."""
    design, rng = random_design(24, 4), np.random.default_rng(seed)
    covariance = np.linalg.inv(design.T @ design)
    r = redundancy(design, covariance)
    which = rng.choice(np.flatnonzero(r > 0.5), count)
    y = rng.standard_normal((count, 24))
    y[np.arange(count), which] += (
        times * rng.choice([-1.0, 1.0], count) * minimal_detectable(np.ones(24), r)[which]
    )
    w = (y - y @ design @ covariance @ design.T) / np.sqrt(r)
    found = suspect(w)[np.arange(count), which]
    return float(found.mean()), float((found & (np.abs(w).argmax(axis=1) == which)).mean())


def girder_rates(count: int, seed: int, times: float) -> tuple[float, float]:
    """The viaduct with pads drawn from the prior, through the fit that calibrates: (suspect, worst)."""
    model, rng, found = well_read(), np.random.default_rng(seed), np.zeros((count, 2), dtype=bool)
    for i in range(count):
        truth = NOMINAL + prior().sd * rng.standard_normal(4)
        clean = noisy(model, truth, rng)
        exact = fit(with_values(model, model.predict(truth)), start=NOMINAL, prior=prior())
        j = int(rng.choice(np.flatnonzero(exact.redundancy > 0.5)))
        values = clean.value.copy()
        values[j] += times * rng.choice([-1.0, 1.0]) * minimal_detectable(model.sd, exact.redundancy)[j]
        one = fit(with_values(model, values), start=NOMINAL, prior=prior())
        w = one.standardised
        found[i] = suspect(w)[j], suspect(w)[j] and int(np.nanargmax(np.abs(w))) == j
    return float(found[:, 0].mean()), float(found[:, 1].mean())


def test_an_error_of_its_detectable_size_is_found_75_to_85_times_in_100() -> None:
    assert 0.78 <= rates(4000, 11, 1.0)[0] <= 0.82  # binomial sd 0.006


def test_an_error_of_twice_its_detectable_size_is_the_first_suspect_95_times_in_100() -> None:
    assert rates(4000, 12, 2.0)[1] >= 0.97


def test_in_a_girder_an_error_of_its_detectable_size_is_found_75_to_85_times_in_100() -> None:
    assert 0.75 <= girder_rates(600, 13, 1.0)[0] <= 0.85  # binomial sd 0.016


def test_in_a_girder_an_error_of_twice_its_detectable_size_is_the_first_suspect_95_times_in_100() -> None:
    assert girder_rates(300, 14, 2.0)[1] >= 0.95


@pytest.mark.campaign
def test_errors_in_a_girder_are_found_as_often_as_said_at_length() -> None:
    assert 0.78 <= girder_rates(5000, 15, 1.0)[0] <= 0.82  # binomial sd 0.006
    assert girder_rates(3000, 16, 2.0)[1] >= 0.95


def girder_proposals(count: int, seed: int) -> list[bool]:
    """Two errors of three times their detectable size in far readings: are just these proposed?"""
    girder, pads, rng = viaduct(), np.arange(4), np.random.default_rng(seed)
    states = wagon_at(girder, 12.5, 20.0, 28.5, 44.0)
    read = compressions(4, range(4)) + along("deflection", 4, (6.5, 23.0, 39.5), girder)
    condensed = Condensed(girder)
    model, right = ObservationModel(condensed, pads, states, read), []
    for _ in range(count):
        values = noisy(model, NOMINAL + prior().sd * rng.standard_normal(4), rng).value
        r = fit(with_values(model, values), start=NOMINAL, prior=prior()).redundancy
        wrong = rng.choice(np.flatnonzero(r > 0.5), 2, replace=False)
        values[wrong] += 3.0 * minimal_detectable(model.sd, r)[wrong] * rng.choice([-1.0, 1.0], 2)

        def fit_without(left_out: tuple[int, ...], values: Floats = values) -> Fit:
            kept = np.delete(np.arange(len(read)), left_out)
            part = ObservationModel(condensed, pads, states, [read[j] for j in kept])
            return fit(with_values(part, values[kept]), start=NOMINAL, prior=prior())

        found = propose(fit_without, len(read))
        right.append({p.reading for p in found.proposals} == set(wrong.tolist()))
    return right


def test_in_a_girder_two_large_errors_are_proposed_and_hardly_ever_another() -> None:
    """The rest of 26 clean readings brings a further proposal two or three times in 100."""
    assert np.mean(girder_proposals(60, 17)) >= 0.9
