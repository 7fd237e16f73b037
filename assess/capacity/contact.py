"""Pads without tension under permanent loads: which supports the girder stands on.

Loads carried span by span press on a pad without bending the continuous girder. To contact they are support forces
like any others, and the pad's seat counts as raised by what they had pressed it together before the spans were joined:
R + S = P + S - K d,  d = (s - F S) + F (R + S).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.capacity.standing import PermanentLoads, ThermalCases
from assess.girder import Condensed, ContactState, SupportState, contact

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

_ROUNDING = 1e-9  # of the largest reaction: less tension is none


def standing_on(
    condensed: Condensed,
    permanent: PermanentLoads,
    compliance: Floats,
    settlement: Floats,
    held_down: Bools,
    *,
    factors: Floats | None = None,
    more: Floats | None = None,
) -> ContactState:
    """Solve for the supports under factored permanent loads, seat drops as they are, and more loads.

    Parameters
    ----------
    condensed : Condensed
    permanent : PermanentLoads
    compliance, settlement : (..., n)
    held_down : (n,)
    factors : (kinds,) on the kinds of permanent load; None: 1
    more : (..., n) support forces of other loads with all supports held level, kN

    Returns
    -------
    ContactState (..., n), with what came on span by span in the reactions

    Raises
    ------
    Tips
    """
    forces, seats = loads_on(permanent, compliance, settlement, factors)
    return contact(condensed, compliance, forces if more is None else forces + more, seats, held_down)


def loads_on(
    permanent: PermanentLoads, compliance: Floats, settlement: Floats, factors: Floats | None
) -> tuple[Floats, Floats]:
    """Support forces (n,) of factored permanent loads, and seat drops (..., n) that belong to them."""
    by_kind = np.ones(len(permanent.kinds)) if factors is None else factors
    before = by_kind @ permanent.simple_forces
    pressed = np.where(np.isinf(compliance), 0.0, compliance) * before if before.any() else 0.0
    crept = permanent.crept(compliance, by_kind)
    return by_kind @ permanent.forces + before, np.asarray(settlement - pressed + crept)


@dataclass(frozen=True, kw_only=True)
class Stands:
    """What the supports do under everything that does not move, by what causes it; all on (..., n).

    Attributes
    ----------
    dead_levels, dead_reactions : (kinds, ..., n) of the permanent loads, before any seat dropped
    settled_level, settled_reaction : (..., n) what seat drops add, lifting off and all
    thermal : the temperature cases, on the supports that the girder stands on with its seats dropped
    lifted : (..., n) supports that it is off then
    """

    dead_levels: list[Floats]
    dead_reactions: list[Floats]
    settled_level: Floats
    settled_reaction: Floats
    thermal: list[SupportState]
    lifted: Bools


def stands(
    condensed: Condensed,
    permanent: PermanentLoads,
    thermal: ThermalCases,
    compliance: Floats,
    settlement: Floats,
    held_down: Bools,
) -> Stands:
    """Say what the supports (..., n) do under permanent loads, seat drops (..., n) and temperature, unfactored."""
    states = permanent.states(compliance)
    settled = permanent.settled(compliance, settlement)
    pairs = zip(states, permanent.simple_forces, strict=True)
    stuck = [np.asarray(state.reaction + simple) for state, simple in pairs]
    alone = np.sum(stuck, axis=0)
    low = np.minimum(alone, alone + settled.reaction)[..., ~held_down].min(initial=0.0)
    if not permanent.given or low >= -_ROUNDING * np.abs(alone).max():
        return Stands(
            dead_levels=[state.displacement for state in states],
            dead_reactions=stuck,
            settled_level=settled.displacement,
            settled_reaction=settled.reaction,
            thermal=thermal.states(compliance),
            lifted=np.zeros(settled.reaction.shape, dtype=bool),
        )
    return _in_contact(condensed, permanent, thermal, compliance, settlement, held_down)


def _in_contact(
    condensed: Condensed,
    permanent: PermanentLoads,
    thermal: ThermalCases,
    compliance: Floats,
    settlement: Floats,
    held_down: Bools,
) -> Stands:
    """The same where pads are left: the parts add up to the contact solution."""
    before = standing_on(condensed, permanent, compliance, np.zeros_like(settlement), held_down)
    after = before
    if np.any(settlement):
        after = standing_on(condensed, permanent, compliance, settlement, held_down)
    left_on = np.where(before.lifted, np.inf, compliance)
    levels, reactions = [], []
    for one in np.eye(len(permanent.kinds)):
        forces, seats = loads_on(permanent, compliance, np.zeros_like(settlement), one)
        state = condensed.solve(left_on, forces, np.broadcast_to(seats, left_on.shape))
        levels.append(state.displacement)
        reactions.append(np.where(before.lifted, 0.0, state.reaction))
    return Stands(
        dead_levels=levels,
        dead_reactions=reactions,
        settled_level=after.displacement - before.displacement,
        settled_reaction=after.reaction - before.reaction,
        thermal=thermal.states(np.where(after.lifted, np.inf, compliance)),
        lifted=after.lifted,
    )
