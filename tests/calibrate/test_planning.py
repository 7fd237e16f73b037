"""Sets of readings chosen for the next visit, against all sets there are."""

from __future__ import annotations

from dataclasses import replace
from itertools import combinations

import numpy as np
import pytest
from numpy.typing import NDArray

from assess.calibrate.planning import BY_DETERMINANT, Candidates, Limits, plan

Floats = NDArray[np.float64]


def invented(seed: int, *, count: int = 12, size: int = 4, positions: int = 4) -> Candidates:
    rng = np.random.default_rng(seed)
    return Candidates(
        rows=rng.normal(size=(count, size)) * 10.0 ** rng.uniform(-1.0, 0.5, (count, 1)),
        sd=rng.uniform(0.5, 2.0, count),
        cost=rng.uniform(0.5, 2.0, count),
        position=rng.integers(-1, positions, count),
    )


def beliefs(seed: int, size: int = 4) -> tuple[Floats, Floats]:
    rng = np.random.default_rng([seed, 7])
    root = rng.normal(size=(size, size))
    return root @ root.T + np.eye(size), rng.normal(size=size)


def left(candidates: Candidates, precision: Floats, chosen: object) -> Floats:
    rows = candidates.rows[np.asarray(chosen, dtype=np.intp)]
    rows = rows / candidates.sd[np.asarray(chosen, dtype=np.intp), None]
    return np.linalg.inv(precision + rows.T @ rows)


def objective(candidates: Candidates, precision: Floats, aim: Floats, chosen: object) -> float:
    covariance = left(candidates, precision, chosen)
    return float(np.log(aim @ covariance @ aim) + BY_DETERMINANT * np.linalg.slogdet(covariance)[1])


def best_of_all(candidates: Candidates, precision: Floats, aim: Floats, limits: Limits) -> float:
    """The best objective of every set within the limits."""
    found = []
    for r in range(limits.readings + 1):
        for chosen in combinations(range(candidates.sd.size), r):
            at = set(candidates.position[list(chosen)]) - {-1}
            if len(at) <= limits.positions and candidates.cost[list(chosen)].sum() <= limits.cost:
                found.append(objective(candidates, precision, aim, chosen))
    return min(found)


def missed(seed: int, limits: Limits) -> float:
    """How much more variance the plan leaves than the best set of all, as a ratio less 1."""
    candidates, (precision, aim) = invented(seed), beliefs(seed)
    made = plan(candidates, precision=precision, aim=aim, limits=limits)
    ours = objective(candidates, precision, aim, made.chosen)
    return float(np.expm1(ours - best_of_all(candidates, precision, aim, limits)))


@pytest.mark.parametrize(
    "limits",
    [
        Limits(readings=4, positions=4),
        Limits(readings=5, positions=2),
        Limits(readings=3, positions=1),
        Limits(readings=12, positions=3, cost=5.0),
        Limits(readings=5, positions=2, cost=4.0),
    ],
    ids=["count", "two places", "one place", "cost", "all three"],
)
def test_the_plan_is_the_best_of_all_sets_nineteen_times_in_twenty_and_near_it_else(limits: Limits) -> None:
    off = np.array([missed(seed, limits) for seed in range(40)])
    assert off.min() > -1e-9
    assert (off < 1e-9).mean() >= 0.95
    assert off.max() < 0.01


def test_the_variance_after_each_reading_is_that_of_a_direct_inversion() -> None:
    candidates, (precision, aim) = invented(3), beliefs(3)
    made = plan(candidates, precision=precision, aim=aim, limits=Limits(readings=7, positions=4))
    direct = [aim @ left(candidates, precision, made.chosen[:r]) @ aim for r in range(8)]
    assert made.chosen.size == 7
    np.testing.assert_allclose(made.variance, direct, rtol=1e-10)
    np.testing.assert_allclose(made.covariance, left(candidates, precision, made.chosen), rtol=1e-10)
    assert made.cost == pytest.approx(candidates.cost[made.chosen].sum(), rel=1e-12)


def test_each_reading_is_the_best_next_one_of_the_set() -> None:
    candidates, (precision, aim) = invented(5), beliefs(5)
    made = plan(candidates, precision=precision, aim=aim, limits=Limits(readings=6, positions=4))
    for r in range(6):
        rest = [objective(candidates, precision, aim, [*made.chosen[:r], j]) for j in made.chosen[r:]]
        assert rest[0] <= min(rest) + 1e-12


@pytest.mark.parametrize("seed", range(5))
def test_units_of_the_unknowns_and_of_the_readings_change_nothing(seed: int) -> None:
    candidates, (precision, aim) = invented(seed), beliefs(seed)
    limits = Limits(readings=5, positions=2)
    unknown = np.array([1e3, 1e-3, 7.0, 1e6])  # new units of each unknown
    reading = np.geomspace(1e-3, 1e4, candidates.sd.size)
    other = replace(candidates, rows=candidates.rows * reading[:, None] / unknown, sd=candidates.sd * reading)
    first = plan(candidates, precision=precision, aim=aim, limits=limits)
    second = plan(other, precision=precision / np.outer(unknown, unknown), aim=aim / unknown, limits=limits)
    assert list(first.chosen) == list(second.chosen)
    np.testing.assert_allclose(second.variance, first.variance, rtol=1e-9)


@pytest.mark.parametrize("seed", range(5))
def test_more_readings_and_more_places_never_leave_more_variance(seed: int) -> None:
    candidates, (precision, aim) = invented(seed), beliefs(seed)
    by_count = [
        plan(candidates, precision=precision, aim=aim, limits=Limits(readings=r, positions=2)).variance[-1]
        for r in range(8)
    ]
    by_place = [
        plan(candidates, precision=precision, aim=aim, limits=Limits(readings=5, positions=k)).variance[-1]
        for k in range(5)
    ]
    assert np.all(np.diff(by_count) <= 1e-3 * np.array(by_count[1:]))  # the determinant may cost a thousandth
    assert np.all(np.diff(by_place) <= 1e-3 * np.array(by_place[1:]))
    one = plan(candidates, precision=precision, aim=aim, limits=Limits(readings=8, positions=4))
    assert np.all(np.diff(one.variance) <= 0.0)


def test_a_useless_reading_is_not_taken_even_if_there_is_room() -> None:
    candidates, (precision, aim) = invented(2), beliefs(2)
    rows = candidates.rows.copy()
    rows[[1, 4]] = 0.0
    made = plan(
        replace(candidates, rows=rows),
        precision=precision,
        aim=aim,
        limits=Limits(readings=12, positions=4),
    )
    assert sorted(made.chosen) == [j for j in range(12) if j not in (1, 4)]


def test_a_reading_that_says_nothing_of_the_aim_comes_after_those_that_do() -> None:
    rows = np.array([[0.0, 50.0], [0.1, 0.0], [0.2, 0.0]])  # much of the other unknown, a little of the aim's
    candidates = Candidates(rows=rows, sd=np.ones(3), cost=np.ones(3), position=np.full(3, -1))
    for count, expected in ((1, [2]), (2, [2, 1]), (3, [2, 1, 0])):
        made = plan(
            candidates,
            precision=np.eye(2),
            aim=np.array([1.0, 0.0]),
            limits=Limits(readings=count, positions=0),
        )
        assert list(made.chosen) == expected


def test_among_readings_alike_to_the_aim_the_one_that_tells_more_of_the_rest_is_taken() -> None:
    rows = np.array([[1.0, 0.0, 0.1], [1.0, 0.0, 0.1], [0.0, 0.0, 0.2], [0.0, 0.0, 0.9]])
    candidates = Candidates(rows=rows, sd=np.ones(4), cost=np.ones(4), position=np.full(4, -1))
    aim = np.array([0.0, 1.0, 0.0])  # of which nothing tells
    made = plan(candidates, precision=np.eye(3), aim=aim, limits=Limits(readings=2, positions=0))
    assert set(made.chosen) == {0, 3} or set(made.chosen) == {1, 3}
    assert made.variance == pytest.approx([1.0, 1.0, 1.0])


def test_two_places_that_are_good_together_are_found_though_a_third_is_better_alone() -> None:
    one, two, three = np.eye(3)
    rows = np.array([3.0 * one + 9.0 * two, 3.0 * one - 9.0 * two, 1.2 * one])
    candidates = Candidates(rows=rows, sd=np.ones(3), cost=np.ones(3), position=np.array([0, 1, 2]))
    aim = one + 0.01 * three
    alone = plan(candidates, precision=np.eye(3), aim=aim, limits=Limits(readings=1, positions=1))
    both = plan(candidates, precision=np.eye(3), aim=aim, limits=Limits(readings=2, positions=2))
    assert list(alone.chosen) == [2]
    assert set(both.chosen) == {0, 1}


def test_half_the_cost_is_kept_to() -> None:
    candidates, (precision, aim) = invented(8), beliefs(8)
    full = plan(candidates, precision=precision, aim=aim, limits=Limits(readings=6, positions=3))
    half = plan(
        candidates,
        precision=precision,
        aim=aim,
        limits=Limits(readings=6, positions=3, cost=full.cost / 2.0),
    )
    assert 0.0 < half.cost <= full.cost / 2.0
    assert full.variance[-1] < half.variance[-1] < full.variance[0]


def test_without_an_aim_the_determinant_alone_decides() -> None:
    candidates, (precision, _) = invented(9), beliefs(9)
    limits = Limits(readings=4, positions=4)
    made = plan(candidates, precision=precision, aim=np.zeros(4), limits=limits)
    dets = [
        np.linalg.slogdet(left(candidates, precision, chosen))[1] for chosen in combinations(range(12), 4)
    ]
    assert np.linalg.slogdet(made.covariance)[1] == pytest.approx(min(dets), rel=1e-9)
    assert np.all(made.variance == 0.0)


def test_with_nothing_to_read_the_prior_stays() -> None:
    candidates = Candidates(
        rows=np.zeros((0, 2)), sd=np.zeros(0), cost=np.zeros(0), position=np.zeros(0, dtype=np.intp)
    )
    precision = np.array([[2.0, 0.5], [0.5, 1.0]])
    made = plan(
        candidates, precision=precision, aim=np.array([1.0, 0.0]), limits=Limits(readings=3, positions=1)
    )
    assert made.chosen.size == 0
    np.testing.assert_allclose(made.covariance, np.linalg.inv(precision), rtol=1e-12)


def test_candidates_without_a_positive_sd_or_cost_are_refused() -> None:
    candidates = invented(0)
    with pytest.raises(ValueError, match="positive"):
        replace(candidates, sd=-candidates.sd)
    with pytest.raises(ValueError, match="rows"):
        replace(candidates, cost=np.ones(3))
