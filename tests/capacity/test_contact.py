"""Permanent loads and reactions on pads that the girder may leave."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.typing import NDArray

from assess.capacity import (
    Dead,
    Effects,
    Factors,
    GirderLoads,
    Resistance,
    evaluate,
    evaluate_draws,
    plan_checks,
)
from assess.girder import REACTION, Condensed, Girder, Piece
from assess.loads import Allowance, LoadCase, ModelLoad, Train, live_model

Floats = NDArray[np.float64]

SPAN, EI, OWN = 20.0, 4e6, 10.0
GIRDER = Girder(((Piece(length=SPAN, flexural=EI),), (Piece(length=SPAN, flexural=EI),)))
FACTORS = Factors(permanent=1.2, permanent_relieving=1.0, live=1.5, resistance=1.0, relief_counts=True)
AXLE = Train(np.array([0.0]), np.array([100.0]))
NOTHING = np.zeros(3)
FREE = np.zeros(3, dtype=bool)
ALL = LoadCase(uniforms=((0.0, 2.0 * SPAN, OWN),))


def effects_of(
    *dead: Dead,
    trains: tuple[Train, ...] = (AXLE,),
    models: tuple[ModelLoad, ...] = (),
    held: NDArray[np.bool_] | None = FREE,
) -> Effects:
    strong = Resistance(sagging=2000.0, hogging=2000.0, shear=900.0)
    plan = plan_checks(GIRDER, [[strong], [strong]], FACTORS, per_span=20)
    loads = GirderLoads(dead=dead or (Dead(loads=ALL),), trains=trains, models=models)
    return Effects(Condensed(GIRDER), plan, loads, held)


def at(effects: Effects, x: float, side: int = 1) -> int:
    return int(np.flatnonzero(np.isclose(effects.plan.x, x) & (effects.plan.side == side))[0])


def test_a_pier_that_sank_away_leaves_one_span_of_double_length() -> None:
    effects = effects_of()
    steady = effects.steady("moment", NOTHING, np.array([0.0, 5.0, 0.0]))
    assert steady.permanent[at(effects, SPAN)] == pytest.approx(OWN * (2.0 * SPAN) ** 2 / 8.0, rel=1e-9)
    # the loads alone hog there as they always did: what settlement changes is said beside them
    assert steady.dead.sum(axis=0)[at(effects, SPAN)] == pytest.approx(-OWN * SPAN**2 / 8.0, rel=1e-9)
    reactions = effects.steady_reactions(NOTHING, np.array([0.0, 5.0, 0.0])).permanent
    assert reactions == pytest.approx([400.0 / 2.0, 0.0, 400.0 / 2.0], rel=1e-9, abs=1e-9)


def test_a_pier_that_sank_further_than_the_girder_sags_changes_nothing_more() -> None:
    effects = effects_of()
    far, further = (effects.steady("moment", NOTHING, np.array([0.0, s, 0.0])).permanent for s in (5.0, 9.0))
    assert np.abs(far - further).max() < 1e-9 * np.abs(far).max()


def test_weight_that_came_on_span_by_span_presses_the_ends_and_keeps_them_down() -> None:
    later = Dead(loads=LoadCase(uniforms=((0.0, SPAN, 12.0),)))  # lifts the far end: - 1/16 w L = - 15 kN
    before = Dead(loads=LoadCase(uniforms=((0.0, 2.0 * SPAN, 2.0),)), continuous=False)  # 20 kN on it
    assert effects_of(later).lifted(NOTHING, NOTHING).tolist() == [False, False, True]
    both = effects_of(later, before)
    assert not both.lifted(NOTHING, NOTHING).any()
    assert both.steady_reactions(NOTHING, NOTHING).permanent[2] == pytest.approx(20.0 - 15.0, rel=1e-9)


def test_a_pad_that_is_left_gives_back_what_pressed_it_before_the_spans_were_joined() -> None:
    later = Dead(loads=LoadCase(uniforms=((0.0, SPAN, 200.0),)))
    before = Dead(loads=LoadCase(uniforms=((0.0, 2.0 * SPAN, 2.0),)), continuous=False)
    effects, soft = effects_of(later, before), np.array([0.0, 0.0, 1e-5])
    assert effects.lifted(soft, NOTHING).tolist() == [False, False, True]
    # without the far end: 2000 from the first span, its 20 kN more less what the second span takes off again
    reactions = effects.steady_reactions(soft, NOTHING).permanent
    assert reactions == pytest.approx([2000.0, 2080.0, 0.0], rel=1e-12, abs=1e-9)


def test_what_stays_down_is_linear_to_the_last_digit() -> None:
    drops = np.array([0.0, 0.002, 0.0])
    free, held = effects_of(trains=(AXLE,)), effects_of(trains=(AXLE,), held=None)
    assert not free.passing(FACTORS, NOTHING[None], drops[None]).opens.any()
    for one, other in zip(
        evaluate(free, FACTORS, NOTHING, drops), evaluate(held, FACTORS, NOTHING, drops), strict=True
    ):
        assert one.case == other.case


def test_a_reaction_that_is_gone_is_gone_and_a_held_end_is_pulled() -> None:
    heavy = (Train(np.array([0.0]), np.array([1200.0])),)
    for held, least in ((FREE, -0.375 * OWN * SPAN), (np.array([True, False, True]), None)):
        effects = effects_of(trains=heavy, held=held)
        passing = effects.passing(FACTORS, NOTHING[None], NOTHING[None])
        low = passing.envelope(REACTION).minimum[2]
        assert passing.lifted().tolist() == [least is not None] * 1 + [False] + [least is not None]
        if least is None:
            # P a (L^2 - a^2) / 4 L^3 at its greatest: a = L / sqrt 3
            assert low == pytest.approx(-1200.0 / (6.0 * np.sqrt(3.0)), rel=1e-4)
        else:
            assert low == pytest.approx(least / FACTORS.live, rel=1e-9)


def test_without_any_permanent_load_nothing_tells_whether_the_girder_lifts() -> None:
    effects = effects_of(Dead(loads=LoadCase()), trains=(AXLE,))
    assert not effects.passing(FACTORS, NOTHING[None], NOTHING[None]).opens.any()


LM71 = (ModelLoad(model=live_model("lm71"), allowance=Allowance(value=0.0)),)


@pytest.mark.parametrize("models", [(), LM71], ids=["train", "lm71"])
def test_draws_that_lift_are_what_they_are_one_by_one(models: tuple[ModelLoad, ...]) -> None:
    rng = np.random.default_rng(8)
    effects = effects_of(
        trains=() if models else (Train(np.array([0.0, 3.0]), np.array([900.0, 500.0])),), models=models
    )
    f = np.exp(np.log(2e-6) + 0.3 * rng.standard_normal((40, 3)))
    drops = np.zeros((40, 3))
    assert effects.passing(FACTORS, f, drops).opens.any()
    drawn = evaluate_draws(effects, FACTORS, f, drops)
    for i in (3, 17, 31):
        for row, draws in zip(evaluate(effects, FACTORS, f[i], drops[i]), drawn, strict=True):
            assert draws.utilisation[i] == pytest.approx(row.case.utilisation, rel=5e-3, abs=1e-3)


def test_a_load_model_stands_where_the_drawing_says_with_what_the_envelope_says() -> None:
    effects = effects_of(trains=(), models=LM71)
    passing = effects.passing(FACTORS, NOTHING[None], NOTHING[None])
    assert passing.opens.any()
    station = at(effects, 8.0)
    stand = passing.placement("moment", station, 1.0)
    assert stand is not None
    assert stand.value == pytest.approx(passing.envelope("moment").maximum[station], rel=1e-12)
    assert stand.axles and all(0.0 <= x <= SPAN for x, _ in stand.axles)
