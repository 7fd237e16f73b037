"""The contact solution against a quadratic programme, for 200 random girders."""

from __future__ import annotations

import numpy as np
import pytest

from assess.girder import Condensed, Girder, Piece, contact, forces_of
from assess.loads import LoadCase
from tests.independent.one_sided import OneSided


def random_case(seed: int) -> tuple[Girder, np.ndarray, np.ndarray, LoadCase, np.ndarray]:
    rng = np.random.default_rng([2026, seed])
    n = int(rng.integers(2, 10))
    girder = Girder(
        tuple(
            tuple(
                Piece(length=rng.uniform(3.0, 20.0), flexural=10.0 ** rng.uniform(5.5, 7.5))
                for _ in range(rng.integers(1, 3))
            )
            for _ in range(n - 1)
        )
    )
    compliance = np.where(rng.random(n) < 0.3, 0.0, 10.0 ** rng.uniform(-7.0, -4.0, n))
    settlement = np.where(rng.random(n) < 0.5, rng.normal(0.0, 0.015, n), 0.0)
    points = [(float(x), float(p)) for x, p in rng.uniform((0.0, 20.0), (girder.length, 800.0), (3, 2))]
    own = ((0.0, girder.length, float(rng.uniform(0.5, 40.0))),)
    held = rng.random(n) < 0.2
    return girder, compliance, settlement, LoadCase(points=tuple(points), uniforms=own), held


@pytest.mark.parametrize("seed", range(200))
def test_the_reactions_are_those_of_the_quadratic_programme(seed: int) -> None:
    girder, compliance, settlement, loads, held = random_case(seed)
    condensed = Condensed(girder)
    found = contact(condensed, compliance, forces_of(condensed, loads), settlement, held)
    marks = np.array([x for x, _ in loads.points] + [x for u in loads.uniforms for x in u[:2]])
    expected = OneSided(girder, compliance, held, marks).reactions(loads, settlement)
    # both are direct solutions; what they lose are the digits of forces that settlements set against each other
    size = loads.total + float((np.abs(condensed.K) @ np.abs(settlement)).max())
    assert np.abs(found.reaction - expected).max() < 1e-8 * size


def test_many_of_these_cases_lift_and_many_do_not() -> None:
    lifts = []
    for seed in range(200):
        girder, compliance, settlement, loads, held = random_case(seed)
        condensed = Condensed(girder)
        state = contact(condensed, compliance, forces_of(condensed, loads), settlement, held)
        lifts.append(int(state.lifted.sum()))
    assert 40 <= sum(n > 0 for n in lifts) <= 160
    assert sum(n > 1 for n in lifts) >= 10
