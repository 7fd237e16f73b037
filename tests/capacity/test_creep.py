"""Pads that creep under permanent load: their sustained compliance for what lasts, the short-term one for the rest."""

from __future__ import annotations

import numpy as np
import pytest

from assess.capacity import (
    Dead,
    Effects,
    Factors,
    GirderLoads,
    Resistance,
    permanent_loads,
    plan_checks,
    standing_on,
)
from assess.girder import Condensed, forces_of, places
from assess.loads import LoadCase, Train
from tests.factories import NOMINAL, viaduct

LASTING = 1.35
DEAD = (
    Dead(loads=LoadCase(uniforms=((0.0, 46.0, 9.0),)), continuous=False),
    Dead(loads=LoadCase(uniforms=((0.0, 46.0, 27.0),), points=((20.0, 40.0),))),
)
COMPLIANCE = np.exp(-NOMINAL)
DROPS = np.array([0.0, 4e-3, 0.0, 1e-3])


@pytest.fixture(scope="module")
def effects() -> Effects:
    girder = viaduct()
    train = Train(np.array([0.0, 1.8]), np.array([100.0, 100.0]))
    loads = GirderLoads(dead=DEAD, trains=(train,))
    strength = Resistance(sagging=5e3, hogging=5e3, shear=2e3)
    given = [[strength for _ in span] for span in girder.spans]
    plan = plan_checks(
        girder, given, Factors(permanent=1.2, permanent_relieving=1.0, live=1.5, resistance=1.0)
    )
    return Effects(Condensed(girder), plan, loads, np.zeros(4, dtype=bool))


def test_permanent_effects_are_those_of_the_girder_on_sustained_pads(effects: Effects) -> None:
    found = effects.creeping(LASTING).steady("moment", COMPLIANCE, DROPS)
    condensed, place = (
        effects.condensed,
        places(effects.condensed, "moment", effects.plan.x, effects.plan.side),
    )
    held = place.held(DEAD[1].loads) + place.simple(DEAD[0].loads)
    simple = 9.0 * np.array(
        [7.0, 16.0, 16.0, 7.0]
    )  # by the lever rule: pressed the pads before the spans were joined
    later = (LASTING - 1.0) * COMPLIANCE * simple
    level = condensed.solve(LASTING * COMPLIANCE, forces_of(condensed, DEAD[1].loads), later).displacement
    assert found.dead.sum(axis=0) == pytest.approx(held + place.rows @ level, rel=1e-9, abs=1e-9)


def test_seats_and_live_loads_act_on_short_term_pads(effects: Effects) -> None:
    crept = effects.creeping(LASTING)
    plain = effects.steady("moment", COMPLIANCE, DROPS)
    assert np.array_equal(crept.steady("moment", COMPLIANCE, DROPS).settled, plain.settled)
    assert not np.array_equal(crept.steady("moment", COMPLIANCE, DROPS).dead, plain.dead)


def test_contact_finds_the_same_girder_where_nothing_lifts() -> None:
    condensed = Condensed(viaduct())
    permanent = permanent_loads(condensed, GirderLoads(dead=DEAD)).creeping(LASTING)
    found = standing_on(condensed, permanent, COMPLIANCE, DROPS, np.zeros(4, dtype=bool))
    states = permanent.states(COMPLIANCE)
    stuck = sum(state.reaction for state in states) + permanent.simple_forces.sum(axis=0)
    settled = permanent.settled(COMPLIANCE, DROPS).reaction
    assert not found.lifted.any()
    assert found.reaction == pytest.approx(stuck + settled, rel=1e-9)


def test_without_creep_not_a_digit_changes(effects: Effects) -> None:
    same = effects.creeping(1.0).steady("shear", COMPLIANCE, DROPS)
    assert np.array_equal(same.dead, effects.steady("shear", COMPLIANCE, DROPS).dead)
