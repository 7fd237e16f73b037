"""Live effects on pads without tension: every position solved by a quadratic programme of its own.

A light girder under a heavy load on its end spans, so that the other end comes off its pad. The factored effect is to
be the worst response to factored permanent and live load together, the permanent load with its loading or with its
relieving factor.
"""

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
    demands_at,
    plan_checks,
)
from assess.girder import REACTION, Condensed, Girder, Piece
from assess.loads import Allowance, LoadCase, ModelLoad, Train, live_model
from tests.independent.one_sided import OneSided

Floats = NDArray[np.float64]

OF_THE_PEAK = 1e-3
FACTORS = Factors(permanent=1.35, permanent_relieving=0.95, live=1.5, resistance=1.0)
TRAIN = Train(np.array([0.0, 1.6, 4.5]), np.array([180.0, 180.0, 90.0]))
TWO = Girder(((Piece(length=12.0, flexural=1.9e6),), (Piece(length=9.0, flexural=1.4e6),)))
THREE = Girder(tuple((Piece(length=length, flexural=1.5e6),) for length in (10.0, 12.0, 8.0)))
RIGID = {2: np.zeros(3), 3: np.zeros(4)}
SOFT = {2: np.array([6e-6, 4e-6, 9e-6]), 3: np.array([5e-6, 1.2e-5, 4e-6, 8e-6])}
SETTLED = {2: np.array([0.0, 0.0, 0.012]), 3: np.array([0.0, 0.004, 0.0, 0.010])}
OWN = 5.0  # kN/m
GRID = 0.025  # m; stations and axles stand on it

Position = tuple[tuple[tuple[float, float], ...], tuple[tuple[float, float, float], ...]]
"""Axles (x, kN) and stretches (start, end, kN/m)."""


def effects_of(girder: Girder, held: NDArray[np.bool_], **live: object) -> Effects:
    strong = Resistance(sagging=1e3, hogging=1e3, shear=1e3)
    plan = plan_checks(girder, [[strong] for _ in girder.spans], FACTORS, per_span=20)
    own = Dead(loads=LoadCase(uniforms=((0.0, girder.length, OWN),)))
    return Effects(Condensed(girder), plan, GirderLoads(dead=(own,), **live), held)  # type: ignore[arg-type]


def rolled(train: Train, length: float, step: float) -> list[Position]:
    """A train on a girder, both ways, its leading axle every step."""
    found = []
    for way in (train, train.reversed()):
        for lead in np.arange(0.0, length + train.length + step / 2.0, step):
            x = lead - way.offsets
            on = (x > -1e-9) & (x < length + 1e-9)
            found.append((tuple(zip(np.clip(x[on], 0.0, length), way.loads[on], strict=True)), ()))
    return found


class Worst:
    """Moments and reactions over all positions and choices of the permanent factor, each by its own programme."""

    def __init__(
        self, girder: Girder, f: Floats, drops: Floats, held: NDArray[np.bool_], x: Floats, factors: Factors
    ) -> None:
        marks = np.arange(0.0, girder.length, GRID)
        self.beam, self.girder, self.x = OneSided(girder, f, held, marks), girder, x
        self.drops, self.factors = drops, factors
        self.choices = {factors.permanent, factors.permanent_relieving}

    def extremes(self, positions: list[Position]) -> tuple[Floats, Floats, Floats, Floats]:
        """Greatest and least moments and greatest and least reactions."""
        moments, reactions = [], []
        for factor in self.choices:
            for axles, stretches in [((), ()), *positions]:
                loads = LoadCase(
                    points=tuple((float(a), self.factors.live * p) for a, p in axles),
                    uniforms=(
                        (0.0, self.girder.length, factor * OWN),
                        *((a, b, self.factors.live * w) for a, b, w in stretches),
                    ),
                )
                reaction = self.beam.reactions(loads, self.drops)
                reactions.append(reaction)
                moments.append(self.moment(loads, reaction))
        m, r = np.array(moments), np.array(reactions)
        return m.max(axis=0), m.min(axis=0), r.max(axis=0), r.min(axis=0)

    def moment(self, loads: LoadCase, reaction: Floats) -> Floats:
        total = np.maximum(self.x[:, None] - self.girder.support_positions, 0.0) @ reaction
        for a, p in loads.points:
            total -= p * np.maximum(self.x - a, 0.0)
        for start, end, w in loads.uniforms:
            on = np.clip(self.x - start, 0.0, end - start)
            total -= w * on * (self.x - start - on / 2.0)
        return total


def compare(
    effects: Effects, f: Floats, drops: Floats, factors: Factors, positions: list[Position]
) -> tuple[Floats, Floats]:
    """Hold factored moments and reactions against the programmes; returns both envelopes of moments."""
    plan, girder = effects.plan, effects.condensed.girder
    one = np.unique(np.round(plan.x, 6), return_index=True)[1]
    high, low, most, least = Worst(girder, f, drops, effects.held_down, plan.x[one], factors).extremes(
        positions
    )
    demands = demands_at(effects, factors, f, drops)
    top, bottom = (demands["moment", sign].factored[one] for sign in (1.0, -1.0))
    peak = max(high.max(), -low.min())
    assert np.abs(top - high).max() <= OF_THE_PEAK * peak
    assert np.abs(bottom - low).max() <= OF_THE_PEAK * peak
    live = effects.passing(factors, f[None], drops[None]).envelope(REACTION)
    steady = effects.steady_reactions(f, drops)
    own = steady.permanent
    up = np.maximum(factors.permanent * own, factors.permanent_relieving * own) + factors.live * live.maximum
    down = (
        np.minimum(factors.permanent * own, factors.permanent_relieving * own) + factors.live * live.minimum
    )
    assert np.abs(up - most).max() <= OF_THE_PEAK * most.max()
    assert np.abs(down - least).max() <= OF_THE_PEAK * most.max()
    return top, bottom


def stuck(effects: Effects, f: Floats, drops: Floats, factors: Factors) -> tuple[Floats, Floats]:
    """The envelopes of the girder that sticks to its pads."""
    linear = Effects(effects.condensed, effects.plan, effects.loads)
    one = np.unique(np.round(effects.plan.x, 6), return_index=True)[1]
    demands = demands_at(linear, factors, f, drops)
    return demands["moment", 1.0].factored[one], demands["moment", -1.0].factored[one]


@pytest.mark.parametrize("pads", [RIGID, SOFT], ids=["rigid", "soft"])
@pytest.mark.parametrize("girder", [TWO, THREE], ids=["two spans", "three spans"])
def test_a_train_on_pads_without_tension_agrees_with_every_position_by_itself(
    girder: Girder, pads: dict[int, Floats]
) -> None:
    free = np.zeros(girder.n_supports, dtype=bool)
    effects, f = effects_of(girder, free, trains=(TRAIN,)), pads[len(girder.spans)]
    nothing = np.zeros(girder.n_supports)
    found = compare(effects, f, nothing, FACTORS, rolled(TRAIN, girder.length, GRID))
    # the case is one: stuck to its pads the girder would show something else
    plain = stuck(effects, f, nothing, FACTORS)
    assert max(np.abs(a - b).max() for a, b in zip(found, plain, strict=True)) > 0.02 * found[0].max()


@pytest.mark.campaign
@pytest.mark.parametrize("girder", [TWO, THREE], ids=["two spans", "three spans"])
def test_a_train_on_pads_without_tension_agrees_with_every_millimetre(girder: Girder) -> None:
    free = np.zeros(girder.n_supports, dtype=bool)
    effects, f = effects_of(girder, free, trains=(TRAIN,)), SOFT[len(girder.spans)]
    compare(effects, f, np.zeros(girder.n_supports), FACTORS, rolled(TRAIN, girder.length, 1e-3))


@pytest.mark.parametrize("girder", [TWO, THREE], ids=["two spans", "three spans"])
def test_a_seat_that_dropped_away_under_the_girder_is_met_again_as_the_train_passes(girder: Girder) -> None:
    free = np.zeros(girder.n_supports, dtype=bool)
    effects, f = effects_of(girder, free, trains=(TRAIN,)), SOFT[len(girder.spans)]
    drops = SETTLED[len(girder.spans)]
    assert effects.lifted(f, drops).any()
    counts = Factors(permanent=1.0, permanent_relieving=1.0, live=1.0, resistance=1.0, relief_counts=True)
    compare(effects, f, drops, counts, rolled(TRAIN, girder.length, GRID))


@pytest.mark.parametrize("girder", [TWO, THREE], ids=["two spans", "three spans"])
def test_an_end_that_is_held_down_stays(girder: Girder) -> None:
    held = np.zeros(girder.n_supports, dtype=bool)
    held[-1] = True
    effects, f = effects_of(girder, held, trains=(TRAIN,)), RIGID[len(girder.spans)]
    compare(effects, f, np.zeros(girder.n_supports), FACTORS, rolled(TRAIN, girder.length, GRID))


def sw0(length: float) -> list[Position]:
    """EN 1991-2 load model SW/0: two stretches of 15 m of 133 kN/m, 5.3 m apart; scaled to a light girder."""
    found: list[Position] = []
    for head in np.arange(0.0, length + 35.3, 0.05):
        ends = [(head - 15.0, head), (head - 35.3, head - 20.3)]
        on = [(max(a, 0.0), min(b, length), SHARE * 133.0) for a, b in ends if b > 0.0 and a < length]
        found.append(((), tuple(one for one in on if one[1] - one[0] > 1e-9)))
    return found


SHARE = 0.2


@pytest.mark.parametrize("girder", [TWO, THREE], ids=["two spans", "three spans"])
def test_a_published_model_on_pads_without_tension_agrees_with_every_position(girder: Girder) -> None:
    model = ModelLoad(model=live_model("sw0").scaled(SHARE), allowance=Allowance(value=0.0))
    free = np.zeros(girder.n_supports, dtype=bool)
    effects, f = effects_of(girder, free, models=(model,)), SOFT[len(girder.spans)]
    nothing = np.zeros(girder.n_supports)
    found = compare(effects, f, nothing, FACTORS, sw0(girder.length))
    plain = stuck(effects, f, nothing, FACTORS)
    assert max(np.abs(a - b).max() for a, b in zip(found, plain, strict=True)) > 0.02 * found[0].max()
