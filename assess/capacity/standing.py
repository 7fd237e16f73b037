"""Permanent loads by kind and stage, and temperature, prepared for any supports.

Loads carried span by span before the spans were joined bend each span as a simple one and reach the supports by the
lever rule, whatever the supports do. Everything later acts on the continuous girder.
"""

from __future__ import annotations

import copy
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.capacity.actions import GirderLoads, Thermal
from assess.capacity.factors import KINDS
from assess.girder import Condensed, Places, SupportState, forces_of, simple_forces_of
from assess.loads import LoadCase

Floats = NDArray[np.float64]


class PermanentLoads:
    """The permanent loads of a girder line.

    Attributes
    ----------
    kinds : one entry for each row below
    forces : (kinds, n) support forces of what the continuous girder carries, supports held level
    simple_forces : (kinds, n) support forces of what came on span by span
    lasting : compliance of the pads under lasting load over that under short load; 1 without creep
    """

    def __init__(self, condensed: Condensed, loads: GirderLoads, kinds: Sequence[str]) -> None:
        self.kinds = tuple(kinds)
        self.lasting = 1.0
        self._condensed = condensed
        self._later = [_joined(loads, kind, continuous=True) for kind in kinds]
        self._before = [_joined(loads, kind, continuous=False) for kind in kinds]
        self.forces: Floats = np.array([forces_of(condensed, one) for one in self._later])
        none = np.zeros(condensed.n_supports)
        self.simple_forces: Floats = np.array(
            [simple_forces_of(condensed, one) if one.points or one.uniforms else none for one in self._before]
        )

    @property
    def given(self) -> bool:
        """Whether there is any permanent load."""
        return any(one.points or one.uniforms for one in (*self._later, *self._before))

    def held(self, place: Places) -> Floats:
        """Responses (kinds, p) with all supports held level."""
        pairs = zip(self._later, self._before, strict=True)
        return np.array([place.held(later) + place.simple(before) for later, before in pairs])

    def creeping(self, lasting: float) -> PermanentLoads:
        """The same loads on pads that lasting load presses down `lasting` times as far as a short one."""
        other = copy.copy(self)
        other.lasting = lasting
        return other

    def states(self, compliance: Floats) -> list[SupportState]:
        """What the supports do under each kind, without what came on span by span."""
        if self.lasting == 1.0:
            return [self._condensed.solve(compliance, forces) for forces in self.forces]
        pairs = zip(self.forces, self.simple_forces, strict=True)
        crept = [(forces, (self.lasting - 1.0) * compliance * simple) for forces, simple in pairs]
        return [self._condensed.solve(self.lasting * compliance, forces, drop) for forces, drop in crept]

    def crept(self, compliance: Floats, factors: Floats) -> Floats:
        """How far factored (kinds,) loads press pads (..., n) down beyond a short load, m: a drop to the girder."""
        if self.lasting == 1.0:
            return np.zeros(compliance.shape)
        finite = np.where(np.isinf(compliance), 0.0, compliance)
        stuck = [
            state.reaction + simple
            for state, simple in zip(self.states(finite), self.simple_forces, strict=True)
        ]
        pressed = np.sum([factor * one for factor, one in zip(factors, stuck, strict=True)], axis=0)
        return np.asarray((self.lasting - 1.0) * finite * pressed)

    def settled(self, compliance: Floats, settlement: Floats) -> SupportState:
        """What the supports do under seat drops (..., n) alone."""
        if not np.any(settlement):
            shape = np.broadcast_shapes(compliance.shape, settlement.shape)
            return SupportState(reaction=np.zeros(shape), displacement=np.zeros(shape))
        return self._condensed.solve(compliance, np.zeros(self._condensed.n_supports), settlement)


class ThermalCases:
    """The temperature cases of a girder line."""

    def __init__(self, condensed: Condensed, cases: Sequence[Thermal]) -> None:
        self._condensed = condensed
        self._drops = [case.drop for case in cases]
        self._ends = [condensed.imposed_ends(case.curvatures) for case in cases]
        nothing = np.zeros(condensed.nodes.size)
        self._forces = [condensed.forces_from(ends, nothing) for ends in self._ends]

    def held(self, place: Places) -> list[Floats]:
        """Moments or shears (p,) of each case with all supports held level."""
        return [(ends[place.segment] * place.carry).sum(axis=-1) for ends in self._ends]

    def states(self, compliance: Floats) -> list[SupportState]:
        """What the supports do in each case."""
        return [
            self._condensed.solve(compliance, forces, drop)
            for forces, drop in zip(self._forces, self._drops, strict=True)
        ]


def permanent_loads(condensed: Condensed, loads: GirderLoads) -> PermanentLoads:
    """Prepare the permanent loads of a girder line, with a row for every kind that it has."""
    kinds = tuple(dict.fromkeys(one.kind for one in loads.dead)) or (KINDS[0],)
    return PermanentLoads(condensed, loads, kinds)


def _joined(loads: GirderLoads, kind: str, *, continuous: bool) -> LoadCase:
    own = [one.loads for one in loads.dead if one.kind == kind and one.continuous is continuous]
    return LoadCase(
        points=tuple(p for one in own for p in one.points),
        uniforms=tuple(u for one in own for u in one.uniforms),
    )
