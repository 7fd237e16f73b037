"""Packing heights against hand work and against every combination of steps."""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest
from numpy.typing import NDArray

from assess.capacity import Dead, Effects, Factors, GirderLoads, Resistance, evaluate, plan_checks
from assess.capacity.shims import NoPacking, Seats, least_worst, programme
from assess.girder import Condensed, Girder, Piece
from assess.loads import LoadCase, Train

Floats = NDArray[np.float64]

FACTORS = Factors(permanent=1.2, permanent_relieving=1.0, live=1.5, resistance=1.0)
MM = 1e-3


def built(
    lengths: tuple[float, ...],
    *,
    flexural: float = 1e6,
    load: float = 20.0,
    resistance: Resistance,
    train: Train | None = None,
    factors: Factors = FACTORS,
    held_down: bool = False,
    per_span: int = 24,
) -> Effects:
    girder = Girder(tuple((Piece(length=length, flexural=flexural),) for length in lengths))
    given = [[resistance] for _ in lengths]
    dead = Dead(loads=LoadCase(uniforms=((0.0, girder.length, load),)))
    loads = GirderLoads(dead=(dead,), trains=() if train is None else (train,))
    plan = plan_checks(girder, given, factors, per_span=per_span)
    return Effects(Condensed(girder), plan, loads, np.full(len(lengths) + 1, held_down))


def plain(drops: Floats) -> Seats:
    return Seats(drops=drops, by_height=-np.eye(drops.size))


def worst(effects: Effects, factors: Factors, compliance: Floats, drops: Floats) -> float:
    return max(row.case.utilisation for row in evaluate(effects, factors, compliance, drops))


def test_packing_puts_a_settled_pier_back() -> None:
    # relief does not count, so that no seats are better than those as built: 10 mm down wants 10 mm of packing
    effects = built((10.0, 10.0), resistance=Resistance(sagging=260.0, hogging=700.0, shear=1e4))
    found = least_worst(
        programme(effects, FACTORS, np.zeros(3), plain(np.array([0.0, 10 * MM, 0.0])), np.zeros(3)),
        step=1 * MM,
        most=25 * MM,
    )
    assert found.heights == pytest.approx([0.0, 10 * MM, 0.0], abs=1e-12)
    assert found.bound == pytest.approx(found.worst, rel=1e-6)


def test_where_relief_counts_packing_evens_sagging_and_hogging_out_as_worked_by_hand() -> None:
    # M at the pier w L^2 / 8 = 250, factored 300, and 3e4 h a metre of packing more, factored 1.2 where it loads; the
    # span sags (w L / 2 - M / L)^2 / 2 w = 140.6: with 150 and 600 given, 1.2 x 140.6 / 150 = 1.125 wants more hogging
    factors = Factors(
        permanent=1.2, permanent_relieving=1.2, live=1.5, resistance=1.0, relief_counts=True, settlement=1.2
    )
    factors = Factors(**(factors.__dict__ | {"settlement_relieving": 1.2}))
    effects = built(
        (10.0, 10.0),
        resistance=Resistance(sagging=150.0, hogging=600.0, shear=1e4),
        factors=factors,
        per_span=240,
    )
    problem = programme(effects, factors, np.zeros(3), plain(np.zeros(3)), np.zeros(3))
    found = least_worst(problem, step=0.01 * MM, most=25 * MM)

    def sag(pier: float) -> float:
        return 1.2 * (100.0 - pier / 10.0) ** 2 / 40.0 / 150.0

    def hog(pier: float) -> float:
        return 1.2 * pier / 600.0

    low, high = 250.0, 500.0
    for _ in range(60):  # where the two are alike
        pier = (low + high) / 2.0
        low, high = (pier, high) if sag(pier) > hog(pier) else (low, pier)
    assert found.heights[1] == pytest.approx((pier - 250.0) / 3e4, abs=0.02 * MM)
    assert found.worst == pytest.approx(hog(pier), rel=1e-3)


def test_heights_agree_with_every_combination_of_steps_on_fifty_cases() -> None:
    """The worst utilisation by `evaluate` of all heights that leave no support under permanent load."""
    rng = np.random.default_rng(7)
    moved = 0
    for case in range(50):
        spans = tuple(rng.uniform(8.0, 16.0, 2 if case % 2 else 3))
        n = len(spans) + 1
        step, steps = (2 * MM, 3) if n == 3 else (3 * MM, 2)
        factors = Factors(**(FACTORS.__dict__ | {"relief_counts": bool(case % 3 == 0)}))
        effects = built(
            spans,
            flexural=rng.uniform(3e5, 1.5e6),
            load=rng.uniform(15.0, 30.0),
            resistance=Resistance(
                sagging=rng.uniform(400.0, 900.0), hogging=rng.uniform(400.0, 900.0), shear=600.0
            ),
            train=Train(np.array([0.0, 2.0]), rng.uniform(20.0, 60.0, 2)),
            factors=factors,
            held_down=True,
            per_span=6,
        )
        compliance = rng.uniform(2e-6, 2e-5, n)
        seats = plain(rng.uniform(0.0, 6.0, n) * MM)
        problem = programme(effects, factors, compliance, seats, np.zeros(n))
        found = least_worst(problem, step=step, most=steps * step)
        every = step * np.array(list(product(range(steps + 1), repeat=n)), dtype=np.float64)
        allowed = every[problem.holds(every)]
        assert found.worst == pytest.approx(problem.worst(allowed).min(), rel=1e-7)
        some = allowed if case < 10 else allowed[np.argsort(problem.worst(allowed))[:2]]
        real = [worst(effects, factors, compliance, seats.drops - h) for h in some]
        mine = worst(effects, factors, compliance, seats.drops - found.heights)
        assert mine == pytest.approx(min(real), rel=1e-7)
        assert mine == pytest.approx(found.worst, rel=1e-7)
        assert found.bound <= found.worst * (1.0 + 1e-7)
        alike = allowed[problem.worst(allowed) <= found.worst + 1e-9]
        assert found.heights.sum() <= alike.sum(axis=1).min() + 1e-9
        moved += bool(found.heights.any())
    assert moved >= 25


def test_a_common_lift_is_no_packing() -> None:
    effects = built((10.0, 12.0), resistance=Resistance(sagging=300.0, hogging=500.0, shear=1e4))
    level = np.full(3, 8 * MM)
    problem = programme(effects, FACTORS, np.full(3, 1e-5), plain(level), np.zeros(3))
    found = least_worst(problem, step=1 * MM, most=25 * MM)
    assert not found.heights.any()
    assert problem.worst(level) == pytest.approx(float(problem.worst(np.zeros(3))), rel=1e-9)


def test_no_support_is_left_under_permanent_load() -> None:
    # an end that bears 3/8 w L = 75 kN loses 3 EI / L^3 = 3e3 kN a metre of packing at the pier: 25 mm leaves none
    factors = Factors(**(FACTORS.__dict__ | {"relief_counts": True}))
    effects = built(
        (10.0, 10.0), resistance=Resistance(sagging=20.0, hogging=1e5, shear=1e5), factors=factors
    )
    problem = programme(effects, factors, np.zeros(3), plain(np.zeros(3)), np.zeros(3))
    found = least_worst(problem, step=1 * MM, most=60 * MM)
    assert problem.holds(found.heights)
    assert found.heights[1] <= 25 * MM + 1e-9
    assert not problem.holds(np.array([0.0, 26 * MM, 0.0]))
    assert problem.holds(np.array([0.0, 24.9 * MM, 0.0]))


def test_where_no_packing_holds_the_girder_down_there_is_none() -> None:
    effects = built((10.0, 10.0), resistance=Resistance(sagging=300.0, hogging=500.0, shear=1e4))
    sunk = np.array([100 * MM, 0.0, 0.0])  # the end hangs, and 5 mm do not reach it
    problem = programme(effects, FACTORS, np.zeros(3), plain(sunk), np.zeros(3))
    with pytest.raises(NoPacking):
        least_worst(problem, step=1 * MM, most=5 * MM)


def test_packing_that_is_not_worth_it_is_left_out() -> None:
    effects = built((10.0, 10.0), resistance=Resistance(sagging=260.0, hogging=700.0, shear=1e4))
    seats = plain(np.array([0.0, 1 * MM, 0.0]))
    problem = programme(effects, FACTORS, np.zeros(3), seats, np.zeros(3))
    assert least_worst(problem, step=1 * MM, most=5 * MM).heights.any()
    assert not least_worst(problem, step=1 * MM, most=5 * MM, worth=0.2).heights.any()


def test_a_girder_without_resistances_cannot_be_packed() -> None:
    effects = built((10.0, 10.0), resistance=Resistance(sagging=np.nan, hogging=np.nan, shear=np.nan))
    with pytest.raises(ValueError, match="no section has a resistance"):
        programme(effects, FACTORS, np.zeros(3), plain(np.zeros(3)), np.zeros(3))
