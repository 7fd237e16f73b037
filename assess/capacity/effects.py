"""Permanent and live effects at the stations of a check plan, for any supports."""

from __future__ import annotations

from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from assess.capacity.actions import GirderLoads, Steady
from assess.capacity.checks import CheckPlan
from assess.capacity.standing import ThermalCases, permanent_loads
from assess.girder import (
    Condensed,
    Envelope,
    Part,
    Placement,
    Places,
    Sweep,
    envelope,
    extremes,
    governing_placement,
    passages,
    places,
    support_places,
)

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]


class Effects:
    """Moments and shears at stations, prepared once and then cheap for any set of supports.

    Parameters
    ----------
    condensed : Condensed
    plan : CheckPlan
    loads : GirderLoads
    """

    def __init__(self, condensed: Condensed, plan: CheckPlan, loads: GirderLoads) -> None:
        self.condensed = condensed
        self.plan = plan
        self.loads = loads
        self._places = {name: places(condensed, name, plan.x, plan.side) for name in ("moment", "shear")}
        self._permanent = permanent_loads(condensed, loads)
        self._held = {name: self._permanent.held(place) for name, place in self._places.items()}
        self._thermal = ThermalCases(condensed, loads.thermal)
        self._bent = {name: self._thermal.held(place) for name, place in self._places.items()}
        self._passages: dict[str, list[Part]] = {
            name: live_parts(place, loads) for name, place in self._places.items()
        }

    def steady(
        self, name: str, compliance: Floats, settlement: Floats, stations: Ints | None = None
    ) -> Steady:
        """Unfactored moments or shears (..., p) that do not move, on supports (..., n) with seat drops (..., n)."""
        index = slice(None) if stations is None else stations
        rows = self._places[name].rows[index].T
        settled = self._permanent.settled(compliance, settlement).displacement @ rows
        dead = [
            np.broadcast_to(held[index] + state.displacement @ rows, settled.shape)
            for held, state in zip(self._held[name], self._permanent.states(compliance), strict=True)
        ]
        hot, cold = np.zeros(settled.shape), np.zeros(settled.shape)
        for bent, state in zip(self._bent[name], self._thermal.states(compliance), strict=True):
            effect = bent[index] + state.displacement @ rows
            hot, cold = np.maximum(hot, effect), np.minimum(cold, effect)
        return Steady(dead=np.array(dead), kinds=self._permanent.kinds, settled=settled, hot=hot, cold=cold)

    def steady_reactions(self, compliance: Floats, settlement: Floats) -> Steady:
        """Unfactored support reactions (..., n) that do not move, on supports (..., n) with seat drops (..., n)."""
        settled = self._permanent.settled(compliance, settlement).reaction
        states = self._permanent.states(compliance)
        dead = [
            np.broadcast_to(state.reaction + simple, settled.shape)
            for state, simple in zip(states, self._permanent.simple_forces, strict=True)
        ]
        hot, cold = np.zeros(settled.shape), np.zeros(settled.shape)
        for state in self._thermal.states(compliance):
            hot, cold = np.maximum(hot, state.reaction), np.minimum(cold, state.reaction)
        return Steady(dead=np.array(dead), kinds=self._permanent.kinds, settled=settled, hot=hot, cold=cold)

    def live(self, name: str, compliance: Floats) -> Envelope:
        """Live envelope of moment or shear (p,) on supports (n,)."""
        if not self._passages[name]:
            zero = np.zeros(self.plan.x.size)
            nowhere = np.full(self.plan.x.size, np.nan)
            return Envelope(
                maximum=zero, minimum=zero, leading_at_maximum=nowhere, leading_at_minimum=nowhere
            )
        return envelope(self._passages[name], compliance)

    def live_sample(self, name: str, compliances: Floats) -> tuple[Floats, Floats]:
        """Live maxima and minima (sets, p) at all stations on a few sets of supports (sets, n).

        A load model is taken on a coarser lattice: good enough to tell which station governs.
        """
        parts = [_rough(part, compliances) for part in self._passages[name]]
        if not parts:
            zero = np.zeros((compliances.shape[0], self.plan.x.size))
            return zero, zero
        found = [envelope(parts, one) for one in compliances]
        return np.array([one.maximum for one in found]), np.array([one.minimum for one in found])

    def live_draws(
        self, name: str, stations: Ints, compliances: Floats, sample: Ints
    ) -> tuple[Floats, Floats]:
        """Live maxima and minima (draws, stations) for compliances (draws, n).

        Only the train positions that govern for one of the sampled draws, and their neighbours, are looked at.
        """
        parts = [part.at(stations).governing(compliances[sample]) for part in self._passages[name]]
        if not parts:
            zero = np.zeros((compliances.shape[0], stations.size))
            return zero, zero
        return extremes(parts, compliances)

    @cached_property
    def _reaction_passages(self) -> list[Part]:
        return live_parts(support_places(self.condensed), self.loads)

    def placement(self, name: str, compliance: Floats, station: int, sense: float) -> Placement | None:
        """Where the live load stands for the greatest (sense 1) or least (-1) moment or shear at a station."""
        return governing_placement(self._passages[name], compliance, station, sense)

    def reactions(self, compliance: Floats) -> tuple[Floats, Floats]:
        """Largest and smallest live reaction of every support (n,), kN; 0 where no train is better."""
        if not self._reaction_passages:
            return np.zeros(self.condensed.n_supports), np.zeros(self.condensed.n_supports)
        live = envelope(self._reaction_passages, compliance)
        return live.maximum, live.minimum


def live_parts(place: Places, loads: GirderLoads) -> list[Part]:
    """All live loads of a girder line passing some places."""
    parts: list[Part] = [part for train in loads.trains for part in passages(place, train)]
    parts += [Sweep(place, model) for model in loads.models]
    return parts


def _rough(part: Part, compliances: Floats) -> Part:
    return part.rough().governing(compliances) if isinstance(part, Sweep) else part
