"""Rows of axles."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given

from assess.loads import Train
from tests.girder.strategies import FEW, trains


def test_axles_are_put_in_order_and_counted_from_the_first() -> None:
    train = Train(np.array([7.0, 3.0, 4.5]), np.array([30.0, 10.0, 20.0]))
    assert train.offsets.tolist() == [0.0, 1.5, 4.0]
    assert train.loads.tolist() == [10.0, 20.0, 30.0]
    assert train.length == 4.0


@pytest.mark.parametrize(("offsets", "loads"), [([0.0, 1.0], [1.0]), ([], []), ([[0.0]], [[1.0]])])
def test_a_train_needs_a_load_for_every_axle(offsets: list[float], loads: list[float]) -> None:
    with pytest.raises(ValueError, match="one load for every axle"):
        Train(np.array(offsets), np.array(loads))


@FEW
@given(trains())
def test_turned_twice_it_is_the_same_train(train: Train) -> None:
    twice = train.reversed().reversed()
    assert twice.offsets == pytest.approx(train.offsets, abs=1e-12)
    assert np.array_equal(twice.loads, train.loads)


@FEW
@given(trains())
def test_a_train_and_its_mirror_are_a_symmetric_train(train: Train) -> None:
    back = train.reversed()
    both = Train(
        np.concatenate([train.offsets, train.length + 2.0 + back.offsets]),
        np.concatenate([train.loads, back.loads]),
    )
    assert both.is_symmetric()


def test_an_uneven_train_is_not_symmetric() -> None:
    assert not Train(np.array([0.0, 2.0]), np.array([10.0, 20.0])).is_symmetric()
    assert not Train(np.array([0.0, 2.0, 5.0]), np.array([10.0, 10.0, 10.0])).is_symmetric()


def test_coupled_vehicles_stand_a_pitch_apart() -> None:
    three = Train(np.array([0.0, 2.0]), np.array([10.0, 20.0])).coupled(3, 9.0)
    assert three.offsets.tolist() == [0.0, 2.0, 9.0, 11.0, 18.0, 20.0]
    assert three.loads.tolist() == [10.0, 20.0] * 3


def test_vehicles_that_overlap_keep_their_axles_in_order() -> None:
    two = Train(np.array([0.0, 5.0]), np.array([10.0, 20.0])).coupled(2, 3.0)
    assert two.offsets.tolist() == [0.0, 3.0, 5.0, 8.0]
    assert two.loads.tolist() == [10.0, 10.0, 20.0, 20.0]


def test_scaling_touches_the_loads_alone() -> None:
    train = Train(np.array([0.0, 2.0]), np.array([10.0, 20.0])).scaled(1.5)
    assert train.offsets.tolist() == [0.0, 2.0]
    assert train.loads.tolist() == [15.0, 30.0]


def test_axles_stand_behind_the_leading_one() -> None:
    train = Train(np.array([0.0, 2.0]), np.array([10.0, 20.0]))
    assert train.axle_positions(np.array([5.0, 6.0])).tolist() == [[5.0, 3.0], [6.0, 4.0]]


def test_its_arrays_cannot_be_written() -> None:
    train = Train(np.array([0.0, 2.0]), np.array([10.0, 20.0]))
    with pytest.raises(ValueError, match="read-only"):
        train.loads[0] = 1.0
