"""Permanent and live effects at the stations of a check plan, for any supports."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from assess.capacity.checks import CheckPlan
from assess.girder import (
    Condensed,
    Envelope,
    Passage,
    envelope,
    extremes,
    forces_of,
    passages,
    places,
    support_places,
)
from assess.loads import LoadCase, Train

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]


@dataclass(frozen=True, kw_only=True)
class GirderLoads:
    """What a girder line carries: permanent loads, and trains with live share and dynamic allowance in them."""

    permanent: LoadCase
    trains: tuple[Train, ...] = ()


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
        self.permanent_forces = forces_of(condensed, loads.permanent)
        self._places = {name: places(condensed, name, plan.x, plan.side) for name in ("moment", "shear")}
        self._held = {name: place.held(loads.permanent) for name, place in self._places.items()}
        self._passages: dict[str, list[Passage]] = {
            name: [part for train in loads.trains for part in passages(place, train)]
            for name, place in self._places.items()
        }

    def permanent(
        self, name: str, compliance: Floats, settlement: Floats, stations: Ints | None = None
    ) -> Floats:
        """Unfactored permanent moment or shear (..., p) on supports (..., n) with seat drops (..., n)."""
        index = slice(None) if stations is None else stations
        level = self.condensed.solve(compliance, self.permanent_forces, settlement).displacement
        return np.asarray(self._held[name][index] + level @ self._places[name].rows[index].T)

    def live(self, name: str, compliance: Floats) -> Envelope:
        """Live envelope of moment or shear (p,) on supports (n,)."""
        if not self._passages[name]:
            zero = np.zeros(self.plan.x.size)
            nowhere = np.full(self.plan.x.size, np.nan)
            return Envelope(
                maximum=zero, minimum=zero, leading_at_maximum=nowhere, leading_at_minimum=nowhere
            )
        return envelope(self._passages[name], compliance)

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
    def _reaction_passages(self) -> list[Passage]:
        supports = support_places(self.condensed)
        return [part for train in self.loads.trains for part in passages(supports, train)]

    def reactions(self, compliance: Floats) -> tuple[Floats, Floats]:
        """Largest and smallest live reaction of every support (n,), kN; 0 where no train is better."""
        if not self._reaction_passages:
            return np.zeros(self.condensed.n_supports), np.zeros(self.condensed.n_supports)
        live = envelope(self._reaction_passages, compliance)
        return live.maximum, live.minimum
