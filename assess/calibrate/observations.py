"""Observation equations: what a girder with given pads shows at the places where it was read.

Every reading is linear in the support levels d and the seat drops s of its load state,

    h = h0 + H d + G s,

with h0 and H from the condensed girder: compression of a pad d_i - s_i, settlement s_i, deflection and
rotation rows of the girder, strain -M z / EI (tension positive, z above the neutral axis). In a test state
(loaded minus unloaded) the seats stand still unless a seat was read there: then its drop is an unknown of
that state, told by its own reading.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.girder import Condensed, forces_of, places
from assess.loads import LoadCase

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]


@dataclass(frozen=True, kw_only=True)
class Observation:
    """One reading, to the mechanics.

    Parameters
    ----------
    quantity : "compression" | "settlement" | "deflection" | "rotation" | "strain"
    state : index of the load state
    support : index of the support; compression and settlement only
    x : place, m; deflection, rotation and strain only
    height, flexural : m above the neutral axis and EI in kN m2 there; strain only
    value, sd : m, rad, or strain
    """

    quantity: str
    state: int
    value: float
    sd: float
    support: int = -1
    x: float = 0.0
    height: float = 0.0
    flexural: float = 1.0


class ObservationModel:
    """Predictions and exact derivatives for a set of observations on one girder.

    Parameters
    ----------
    condensed : Condensed
    pads : (q,) indices of the supports that are pads; the others hold their level
    states : load cases of the test states, with the girder's share of the axles
    observations : the readings

    Attributes
    ----------
    value, sd : (m,)
    seats : list of (state, support) whose seat drop is an unknown, because it was read
    size : number of unknowns, q + len(seats): ln k of the pads, then seat drops in m
    """

    def __init__(
        self,
        condensed: Condensed,
        pads: Ints,
        states: Sequence[LoadCase],
        observations: Sequence[Observation],
    ) -> None:
        self.condensed = condensed
        self.pads = np.asarray(pads, dtype=np.intp)
        self.value: Floats = np.array([o.value for o in observations], dtype=np.float64)
        self.sd: Floats = np.array([o.sd for o in observations], dtype=np.float64)
        self.state: Ints = np.array([o.state for o in observations], dtype=np.intp)
        self.seats = sorted({(o.state, o.support) for o in observations if o.quantity == "settlement"})
        self.size = self.pads.size + len(self.seats)
        self._forces = np.array([forces_of(condensed, case) for case in states]).reshape(
            len(states), condensed.n_supports
        )
        self._held, self._by_level, self._by_seat = _equations(condensed, states, observations)

    def _unpack(self, theta: Floats) -> tuple[Floats, Floats]:
        compliance = np.zeros(self.condensed.n_supports)
        compliance[self.pads] = np.exp(-theta[: self.pads.size])
        drops = np.zeros_like(self._forces)
        for (state, support), drop in zip(self.seats, theta[self.pads.size :], strict=True):
            drops[state, support] = drop
        return compliance, drops

    def predict(self, theta: Floats) -> Floats:
        """Predicted readings (m,) for unknowns theta (size,)."""
        compliance, drops = self._unpack(theta)
        level = self.condensed.solve(compliance, self._forces, drops).displacement
        return self._combine(level, drops)

    def jacobian(self, theta: Floats) -> Floats:
        """Exact derivatives (m, size) of `predict`."""
        return self.linearise(theta)[1]

    def linearise(self, theta: Floats) -> tuple[Floats, Floats]:
        """Predicted readings (m,) and their exact derivatives (m, size), by one solve.

        ln k up by one takes f R off a pad's shortening, as a seat rising by f R would: so all derivatives are those of
        the levels by the seats (n, n), which no load state changes.
        """
        compliance, drops = self._unpack(theta)
        level, reaction, by_seat = self.condensed.sensitivity(compliance, self._forces, drops)
        moved = self._by_level @ by_seat  # (m, n): readings by seats, what the girder hands on
        shortening = (compliance * reaction)[self.state]
        jacobian = np.empty((self.value.size, self.size))
        q = self.pads.size
        jacobian[:, :q] = -(moved * shortening)[:, self.pads]
        for j, (which, support) in enumerate(self.seats):
            column = moved[:, support] + self._by_seat[:, support]
            jacobian[:, q + j] = np.where(self.state == which, column, 0.0)
        return self._combine(level, drops), jacobian

    def _combine(self, level: Floats, drops: Floats) -> Floats:
        held = self._held + (self._by_level * level[self.state]).sum(axis=1)
        return np.asarray(held + (self._by_seat * drops[self.state]).sum(axis=1))


def _equations(
    condensed: Condensed, states: Sequence[LoadCase], observations: Sequence[Observation]
) -> tuple[Floats, Floats, Floats]:
    """h0 (m,), H (m, n) and G (m, n) of all observations."""
    count, n = len(observations), condensed.n_supports
    held, by_level, by_seat = np.zeros(count), np.zeros((count, n)), np.zeros((count, n))
    names = {"deflection": "deflection", "rotation": "slope", "strain": "moment"}
    for j, o in enumerate(observations):
        if o.quantity == "compression":
            by_level[j, o.support], by_seat[j, o.support] = 1.0, -1.0
        elif o.quantity == "settlement":
            by_seat[j, o.support] = 1.0
        elif o.quantity not in names:
            raise ValueError(f"unknown quantity {o.quantity!r}")
    for quantity, response in names.items():
        index = [j for j, o in enumerate(observations) if o.quantity == quantity]
        if not index:
            continue
        x = np.array([observations[j].x for j in index])
        row = places(condensed, response, x)
        factor = np.ones(x.size)
        if quantity == "strain":
            factor = np.array([-observations[j].height / observations[j].flexural for j in index])
        y0 = np.array([row.held(case) for case in states])  # (states, p)
        which = np.array([observations[j].state for j in index])
        held[index] = factor * y0[which, np.arange(x.size)]
        by_level[index] = factor[:, None] * row.rows
    return held, by_level, by_seat
