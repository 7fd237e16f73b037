"""The law of one value: how often it is named rightly, and how often a steady one is called changed."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from numpy.typing import NDArray

from assess.trend import Detection, detect
from assess.trend.candidates import LAWS, log_age

Floats = NDArray[np.float64]
Rng = np.random.Generator

TIMES = np.linspace(0.0, 14.0, 8)
SD = 0.05
AGE = 1.0
LENGTHS = [
    pytest.param(300, 0.05, id="sample"),
    pytest.param(6000, 0.0, id="long", marks=pytest.mark.campaign),
]
"""Histories, and what chance may take from a share of that many."""


def scaled(shape: Floats, own: float) -> Floats:
    """A change whose own standard deviation, as eight visits tell it, it exceeds `own` times."""
    centred = shape - shape.mean()
    return np.asarray(centred * own * SD / np.sqrt((centred**2).sum()))


def drift(_: Rng) -> Floats:
    return scaled(TIMES, 3.0)


def creep(_: Rng) -> Floats:
    return scaled(log_age(TIMES, AGE), 3.0)


def step(rng: Rng, height: float = 3.0) -> Floats:
    """A step at any gap, in standard deviations of a visit."""
    return np.asarray(np.where(np.arange(8) > rng.integers(0, 7), height * SD, 0.0))


def steady(_: Rng) -> Floats:
    return np.zeros(8)


def wander(rng: Rng) -> Floats:
    """A walk that has gone three standard deviations of a visit by the last."""
    steps = 3.0 * SD / np.sqrt(7.0) * rng.standard_normal(7)
    return np.concatenate([[0.0], steps.cumsum()])


def found(kind: Callable[[Rng], Floats], count: int, seed: int) -> list[Detection]:
    rng = np.random.default_rng(seed)
    sd = np.full(8, SD)
    return [detect(TIMES, kind(rng) + SD * rng.standard_normal(8), sd, age=AGE) for _ in range(count)]


@pytest.mark.parametrize(("count", "chance"), LENGTHS)
def test_no_more_than_5_of_100_steady_histories_raise_an_alarm(count: int, chance: float) -> None:
    called = np.mean([one.changed for one in found(steady, 2 * count, 71)])
    print("steady", called)
    assert 0.02 < called <= 0.05 + 0.5 * chance


@pytest.mark.parametrize(("count", "chance"), LENGTHS)
@pytest.mark.parametrize("kind", [drift, creep, step])
def test_a_change_of_three_deviations_is_called_a_change_in_80_of_100(
    kind: Callable[[Rng], Floats], count: int, chance: float
) -> None:
    called = np.mean([one.changed for one in found(kind, count, 72)])
    print(kind.__name__, called)
    assert called >= 0.80 - chance, called


@pytest.mark.parametrize(("count", "chance"), LENGTHS)
def test_a_step_of_four_deviations_is_placed_in_its_gap_in_90_of_100(count: int, chance: float) -> None:
    rng, sd, right = np.random.default_rng(73), np.full(8, SD), []
    for i in range(count):
        gap = i % 7
        told = np.where(np.arange(8) > gap, 4.0 * SD, 0.0) + SD * rng.standard_normal(8)
        right.append(detect(TIMES, told, sd, age=AGE).gap == gap)
    print("in its gap", np.mean(right))
    assert np.mean(right) >= 0.90 - chance, np.mean(right)


@pytest.mark.campaign
def test_the_confusion_matrix_of_the_laws() -> None:
    """Printed for DEVELOPERS.md; each law but the walk is the most frequent change named where it is true."""
    for kind in (steady, drift, creep, step, wander):
        called = [one.law for one in found(kind, 4000, 74)]
        shares = {law: called.count(law) / len(called) for law in LAWS}
        print(kind.__name__, {law: f"{100 * share:.0f}" for law, share in shares.items()})
        if kind is not wander:
            assert max(shares, key=lambda law: shares[law]) == kind.__name__


def test_weights_are_those_of_akaike() -> None:
    """Three visits, steady or drift: the weights by hand from two sums of squares."""
    times, value, sd = np.array([0.0, 1.0, 3.0]), np.array([0.1, 0.0, -0.3]), np.array([0.1, 0.1, 0.2])
    w = sd**-2.0
    flat = (w * (value - (w @ value) / w.sum()) ** 2).sum()
    rest = (w * (value - np.polyval(np.polyfit(times, value, 1, w=1.0 / sd), times)) ** 2).sum()
    odds = np.exp(-0.5 * (rest + 4.0 - flat - 2.0))
    assert detect(times, value, sd, age=None).weights["drift"] == pytest.approx(odds / (1.0 + odds))


def test_two_visits_are_judged_by_their_difference() -> None:
    one = detect(np.array([0.0, 2.0]), np.array([0.0, 0.15]), np.array([0.05, 0.05]), age=None)
    assert one.p_value == pytest.approx(0.03389485352468927)  # two-sided, z = 0.15 / (0.05 sqrt 2)
    assert (one.law, one.gap) == ("drift", -1)


def test_one_visit_tells_no_change() -> None:
    one = detect(np.zeros(1), np.zeros(1), np.ones(1), age=None)
    assert (one.law, one.changed, one.p_value, one.weights) == ("steady", False, 1.0, {"steady": 1.0})


def test_a_common_scale_changes_no_judgement() -> None:
    value = drift(np.random.default_rng(0)) + SD * np.random.default_rng(1).standard_normal(8)
    one, other = (detect(TIMES, f * value, np.full(8, f * SD), age=AGE) for f in (1.0, 1e-3))
    assert one.p_value == other.p_value
    assert one.weights == pytest.approx(other.weights)


def test_a_walk_far_beyond_the_visits_own_errors_is_called_one() -> None:
    rng = np.random.default_rng(5)
    times = np.arange(14.0)
    value = np.cumsum(0.5 * rng.standard_normal(14))
    one = detect(times, value, np.full(14, 0.02), age=None)
    assert one.law == "wander"
    assert 0.1 < one.walk < 1.0
    assert one.scatter == 1.0
