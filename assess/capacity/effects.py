"""Permanent and live effects at the stations of a check plan, for any supports."""

from __future__ import annotations

import copy
from collections.abc import Sequence
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from assess.capacity.actions import GirderLoads, Steady
from assess.capacity.checks import CheckPlan
from assess.capacity.contact import Stands, stands
from assess.capacity.factors import Factors
from assess.capacity.passing import Passing
from assess.capacity.standing import ThermalCases, permanent_loads
from assess.capacity.uplift import Uplift
from assess.girder import (
    REACTION,
    Condensed,
    Part,
    Places,
    Sweep,
    passages,
    places,
    support_places,
)

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
Ints = NDArray[np.intp]


class Effects:
    """Moments and shears at stations, prepared once and then cheap for any set of supports.

    Parameters
    ----------
    condensed : Condensed
    plan : CheckPlan
    loads : GirderLoads
    held_down : (n,) supports that take tension; None: all of them
    """

    def __init__(
        self, condensed: Condensed, plan: CheckPlan, loads: GirderLoads, held_down: Bools | None = None
    ) -> None:
        self.condensed = condensed
        self.plan = plan
        self.loads = loads
        self.held_down = np.ones(condensed.n_supports, dtype=bool) if held_down is None else held_down
        self._places = {name: places(condensed, name, plan.x, plan.side) for name in ("moment", "shear")}
        self._permanent = permanent_loads(condensed, loads)
        self._held = {name: self._permanent.held(place) for name, place in self._places.items()}
        self._thermal = ThermalCases(condensed, loads.thermal)
        self._bent = {name: self._thermal.held(place) for name, place in self._places.items()}
        self._passages: dict[str, list[Part]] = {
            name: live_parts(place, loads) for name, place in self._places.items()
        }

    def creeping(self, lasting: float) -> Effects:
        """The same effects on pads that lasting load presses down `lasting` times as far as a short one."""
        other = copy.copy(self)
        other._permanent = self._permanent.creeping(lasting)
        return other

    # what does not move ------------------------------------------------------------------------

    def steady(
        self, name: str, compliance: Floats, settlement: Floats, stations: Ints | None = None
    ) -> Steady:
        """Unfactored moments or shears (..., p) that do not move, on supports (..., n) with seat drops (..., n)."""
        index = slice(None) if stations is None else stations
        rows = self._places[name].rows[index].T
        found = self._stands(compliance, settlement)
        dead = [
            held[index] + level @ rows
            for held, level in zip(self._held[name], found.dead_levels, strict=True)
        ]
        thermal = [
            bent[index] + state.displacement @ rows
            for bent, state in zip(self._bent[name], found.thermal, strict=True)
        ]
        return _steady(self._permanent.kinds, dead, found.settled_level @ rows, thermal)

    def steady_reactions(self, compliance: Floats, settlement: Floats) -> Steady:
        """Unfactored support reactions (..., n) that do not move, on supports (..., n) with seat drops (..., n)."""
        found = self._stands(compliance, settlement)
        thermal = [state.reaction for state in found.thermal]
        return _steady(self._permanent.kinds, list(found.dead_reactions), found.settled_reaction, thermal)

    def by_drop(self, name: str, compliance: Floats) -> Floats:
        """Moments or shears (n, p), or reactions (n, n), per unit drop of each seat, on supports (n,) that hold."""
        n = self.condensed.n_supports
        state = self.condensed.solve(np.tile(compliance, (n, 1)), np.zeros(n), np.eye(n))
        return state.reaction if name == REACTION else state.displacement @ self._places[name].rows.T

    def lifted(self, compliance: Floats, settlement: Floats) -> Bools:
        """Supports (..., n) that the girder is off under permanent loads and seat drops alone."""
        return self._stands(compliance, settlement).lifted

    def _stands(self, compliance: Floats, settlement: Floats) -> Stands:
        return stands(self.condensed, self._permanent, self._thermal, compliance, settlement, self.held_down)

    # live loads beside it ------------------------------------------------------------------------

    @cached_property
    def _reaction_passages(self) -> list[Part]:
        return live_parts(support_places(self.condensed), self.loads)

    def passing(
        self, factors: Factors, compliances: Floats, settlements: Floats, sample: Ints | None = None
    ) -> Passing:
        """Live effects under some factors on supports with seat drops (s, n), those of `sample` standing for all."""
        return Passing(
            parts=self._passages | {REACTION: self._reaction_passages},
            dead=self._dead,
            uplift=Uplift(self.condensed, self._permanent, factors, self.held_down),
            compliances=compliances,
            settlements=settlements,
            sample=np.arange(compliances.shape[0]) if sample is None else sample,
        )

    def _dead(self, name: str, compliance: Floats, settlement: Floats, stations: Ints | None) -> Floats:
        if name == REACTION:
            return self.steady_reactions(compliance, settlement).dead
        return self.steady(name, compliance, settlement, stations).dead


def live_parts(place: Places, loads: GirderLoads) -> list[Part]:
    """All live loads of a girder line passing some places."""
    parts: list[Part] = [part for train in loads.trains for part in passages(place, train)]
    parts += [Sweep(place, model) for model in loads.models]
    return parts


def _steady(
    kinds: tuple[str, ...], dead: Sequence[Floats], settled: Floats, thermal: Sequence[Floats]
) -> Steady:
    hot, cold = np.zeros(settled.shape), np.zeros(settled.shape)
    for effect in thermal:
        hot, cold = np.maximum(hot, effect), np.minimum(cold, effect)
    whole = np.array([np.broadcast_to(one, settled.shape) for one in dead])
    return Steady(dead=whole, kinds=kinds, settled=settled, hot=hot, cold=cold)
