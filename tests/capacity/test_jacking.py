"""Stages of jacking against hand work."""

from __future__ import annotations

import numpy as np
import pytest

from assess.capacity import GirderLoads, Resistance, permanent_loads
from assess.capacity.jacking import jacked, staged
from tests.capacity.test_shims import FACTORS, MM, built, plain

STRONG = Resistance(sagging=300.0, hogging=600.0, shear=1e4)


@pytest.mark.parametrize("seed", range(8))
def test_stages_end_at_the_heights_and_are_nowhere_steeper_than_allowed(seed: int) -> None:
    rng = np.random.default_rng(seed)
    heights = 2 * MM * rng.integers(0, 12, int(rng.integers(2, 7)))
    stages = staged(heights, step=2 * MM, differential=5 * MM)
    rises = np.diff(np.vstack([np.zeros(heights.size), stages]), axis=0)
    assert stages[-1] == pytest.approx(heights)
    assert (rises >= -1e-12).all()
    assert rises.max(axis=1).min() > 0.0  # no idle stage
    assert np.abs(np.diff(rises, axis=1)).max() <= 5 * MM + 1e-12
    assert rises / (2 * MM) == pytest.approx(np.round(rises / (2 * MM)))


def test_one_pier_goes_up_in_as_many_stages_as_the_limit_wants() -> None:
    assert len(staged(np.array([0.0, 10 * MM, 0.0]), step=1 * MM, differential=3 * MM)) == 4
    assert len(staged(np.array([4 * MM, 4 * MM, 4 * MM]), step=1 * MM, differential=3 * MM)) == 1
    assert staged(np.zeros(3), step=1 * MM, differential=3 * MM).shape == (0, 3)


def test_a_step_thicker_than_the_limit_goes_in_one_by_one() -> None:
    stages = staged(np.array([0.0, 10 * MM, 0.0]), step=5 * MM, differential=3 * MM)
    assert np.allclose(stages, [[0.0, 5 * MM, 0.0], [0.0, 10 * MM, 0.0]])


def test_a_jack_carries_the_reaction_of_a_support_that_does_not_yield() -> None:
    # two spans of 10 m, 20 kN/m: the pier bears 5/4 w L = 250; raised by 2 mm on jacks while the ends stand on rock it
    # takes 6 EI h / L^3 = 12 more; its pad of 1e-4 m/kN bore less before
    effects = built((10.0, 10.0), resistance=STRONG)
    loads = permanent_loads(effects.condensed, GirderLoads(dead=effects.loads.dead))
    compliance = np.array([0.0, 1e-4, 0.0])
    found = jacked(
        effects, loads, FACTORS, compliance, plain(np.zeros(3)), (np.zeros(3), np.array([0.0, 2 * MM, 0.0]))
    )
    assert found.load == pytest.approx([0.0, 262.0, 0.0])
    assert found.level[1] == pytest.approx(-2 * MM)
    assert not found.lifted.any()
    # hogging 250 + 3 EI h / L^2 = 310, all with 1.2, of 600
    assert found.worst == pytest.approx(1.2 * 310.0 / 600.0)


def test_a_lift_that_takes_an_end_off_its_pad_is_told() -> None:
    effects = built((10.0, 10.0), resistance=STRONG)
    loads = permanent_loads(effects.condensed, GirderLoads(dead=effects.loads.dead))
    found = jacked(
        effects,
        loads,
        FACTORS,
        np.zeros(3),
        plain(np.array([0.0, 0.0, 30 * MM])),
        (np.zeros(3), np.array([0.0, 40 * MM, 0.0])),
    )
    assert found.lifted.tolist() == [False, False, True]
