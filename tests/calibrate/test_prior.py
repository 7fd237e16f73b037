"""What is believed of pads of one batch."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from assess.calibrate import PadPrior

PLAIN = settings(max_examples=60, deadline=None, derandomize=True)
MEAN = np.log([2.4e5, 3.6e5, 3.6e5])
SD = np.array([0.2, 0.3, 0.25])


def batch(value: float, q: int = 3) -> np.ndarray:
    matrix = np.full((q, q), value)
    np.fill_diagonal(matrix, 1.0)
    return matrix


def of(value: float) -> PadPrior:
    return PadPrior(mean=MEAN, sd=SD, correlation=batch(value))


@PLAIN
@given(st.floats(0.0, 0.99))
def test_the_prior_of_a_batch_is_positive_definite_and_its_parts_agree(value: float):
    prior = of(value)
    assert np.linalg.eigvalsh(prior.covariance)[0] > 0.0
    assert np.sqrt(np.diag(prior.covariance)) == pytest.approx(SD)
    assert prior.precision @ prior.covariance == pytest.approx(np.eye(3), abs=1e-8)
    at = MEAN + np.array([0.1, -0.2, 0.3])
    assert prior.rows(5)[:, :3].T @ prior.rows(5)[:, :3] == pytest.approx(prior.precision)
    assert not prior.rows(5)[:, 3:].any()
    assert prior.residual(at) == pytest.approx(prior.rows(3) @ (at - MEAN))
    assert prior.pull(at) == pytest.approx(prior.precision @ (at - MEAN))


def test_no_correlation_is_that_of_zero():
    free, zero = PadPrior(mean=MEAN, sd=SD), of(0.0)
    at = MEAN + 0.1
    for name in ("covariance", "precision"):
        assert getattr(free, name) == pytest.approx(getattr(zero, name))
    assert free.rows(4) == pytest.approx(zero.rows(4))
    assert free.residual(at) == pytest.approx(zero.residual(at))
    assert free.pull(at) == pytest.approx(zero.pull(at))


@PLAIN
@given(st.floats(0.05, 0.99))
def test_a_reading_at_one_pad_narrows_its_sisters(value: float):
    """The narrowing by hand: sd^2 (1 - rho^2) where the first pad is known exactly."""
    information = np.diag([1e8, 0.0, 0.0])
    after = np.linalg.inv(of(value).precision + information)
    assert np.diag(after)[1:] == pytest.approx(SD[1:] ** 2 * (1.0 - value**2), rel=1e-4)


def test_what_a_pad_learns_from_its_sisters_does_not_count_as_read():
    prior, information = of(0.9), np.diag([100.0, 0.0, 0.0])
    share = prior.share(np.linalg.inv(prior.precision + information), information)
    assert share[0] == pytest.approx(1.0 - 1.0 / (1.0 + 100.0 * 0.2**2))
    assert share[1:] == pytest.approx(0.0, abs=1e-12)


@pytest.mark.parametrize(
    "wrong",
    [
        batch(1.0),
        batch(-0.6),
        batch(0.5, 2),
        2.0 * batch(0.5),
        np.triu(batch(0.5)),
    ],
)
def test_what_is_no_correlation_is_refused(wrong: np.ndarray):
    with pytest.raises(ValueError, match="not that of a covariance"):
        PadPrior(mean=MEAN, sd=SD, correlation=wrong)
