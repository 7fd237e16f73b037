"""What a visit tells, looked at in parts, against plain algebra on covariances."""

from __future__ import annotations

import numpy as np
import pytest

from assess.trend.visits import alone, cut, with_common_error
from tests.trend.histories import MEAN, TAU, covariance, visit

NO_PRIOR = np.full(3, np.inf)
TOLD = MEAN + np.array([0.1, -0.2, 0.3])


def test_one_pad_with_the_others_left_free_has_its_own_variance() -> None:
    one = visit(0.0, TOLD, np.linalg.inv(covariance(0.05)))
    for i in range(3):
        value, variance = alone(one, i, MEAN, NO_PRIOR)
        assert value == pytest.approx(TOLD[i], abs=1e-6)
        assert variance == pytest.approx(0.05**2, rel=1e-6)


def test_a_pad_without_readings_is_told_nothing() -> None:
    information = np.zeros((3, 3))
    information[0, 0] = 400.0
    assert alone(visit(0.0, TOLD, information), 1, MEAN, TAU)[1] == np.inf


def test_a_common_error_adds_its_square_to_every_covariance() -> None:
    sd = np.array([0.04, 0.04, 0.0])
    one = with_common_error(visit(0.0, TOLD, np.linalg.inv(covariance(0.05))), sd)
    assert np.linalg.inv(one.information) == pytest.approx(covariance(0.05) + np.outer(sd, sd))
    assert np.linalg.solve(one.information, one.information_vector) == pytest.approx(TOLD)


def test_a_cut_pad_leaves_the_others_as_they_are() -> None:
    one = cut(visit(0.0, TOLD, np.linalg.inv(covariance(0.05))), [1], MEAN, NO_PRIOR)
    kept = np.ix_([0, 2], [0, 2])
    assert np.linalg.inv(one.information[kept]) == pytest.approx(covariance(0.05)[kept], rel=1e-5)
    assert not one.information[1].any()
    assert one.data_share[1] == 0.0
    assert not one.tells[1]
