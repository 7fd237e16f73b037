"""Influence lines of many places on a grid on which every axle of a load model falls.

The grid of a place has a node on the place itself, so an axle can stand exactly on it (where a moment's influence line
has its corner and a shear's its step), and its step divides all distances of the load model, so all axles stand on
nodes at once. Node values and the running integral at nodes are exact for prismatic pieces.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from assess.girder.cubics import Cubics
from assess.girder.response import REACTION, Places

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

FACE = 1e-7  # m; how far past a place a load stands to be on its other face
_GAUSS = np.polynomial.legendre.leggauss(2)  # exact for cubics


@dataclass(frozen=True, kw_only=True)
class Lines:
    """Influence lines (p, m) at the nodes of a lattice.

    Attributes
    ----------
    before, beyond : response to a unit load that stands just before or just beyond the node; they differ at the place
        itself, and for shear only
    running : integral from the left end of the girder to the node, m times the response
    step : m between nodes
    """

    before: Floats
    beyond: Floats
    running: Floats
    step: float

    def positive(self, sign: float) -> Floats:
        """Running integral (p, m) of the positive part of sign times the influence line.

        A cell without change of sign counts with its exact integral; one with a change counts with the triangle on its
        positive side, which is exact to the third power of the step.
        """
        left, right = sign * self.beyond[:, :-1], sign * self.before[:, 1:]
        whole = sign * np.diff(self.running, axis=1)
        mixed = left * right < 0.0
        top = np.maximum(left, right)
        height = np.where(mixed, np.abs(left - right), 1.0)
        cells = np.where(mixed, 0.5 * self.step * top**2 / height, np.where(top > 0.0, whole, 0.0))
        return np.concatenate([np.zeros((cells.shape[0], 1)), np.cumsum(cells, axis=1)], axis=1)

    def loaded(self, sign: float) -> NDArray[np.bool_]:
        """Tell which cells (p, m - 1) are on the positive side of sign times the influence line."""
        return np.asarray(sign * (self.beyond[:, :-1] + self.before[:, 1:]) > 0.0)


class Lattice:
    """The grids of p places and what is needed for their influence lines on any supports.

    Attributes
    ----------
    place : Places
    step : m between nodes
    home : (p,) the node that is the place
    nodes : (p, m) x of the nodes; the first is at or before the left end, the last at or beyond the right one
    """

    def __init__(self, place: Places, cubics: Cubics, step: float) -> None:
        self.place, self.cubics, self.step = place, cubics, step
        length = float(place.condensed.positions[-1])
        self.home: Ints = np.ceil(place.x / step).astype(np.intp)
        count = int((self.home + np.ceil((length - place.x) / step)).max()) + 1
        self.nodes: Floats = place.x[:, None] + step * (np.arange(count) - self.home[:, None])
        self._piece, self._share, self._on = cubics.locate(self.nodes)
        self._local = (
            place.local_unit(self.nodes) if place.quantity != REACTION else np.zeros(self.nodes.shape)
        )
        self._local_running = self._run_locally()

    def at(self, index: Ints) -> Lattice:
        """Return the lattice of some of its places."""
        return Lattice(self.place.at(index), self.cubics, self.step)

    @cached_property
    def level(self) -> Lines:
        """Influence lines with all supports held level."""
        return self.lines(np.zeros((self.place.x.size, self.place.condensed.n_supports)))

    def lines(self, weights: Floats) -> Lines:
        """Influence lines where the response gains weights (p, n) times the support forces: Y d = weights P."""
        table, rows = self._table(weights)
        found = np.take(table, rows, axis=0)  # (p, m, 5)
        t = self._share
        value = ((found[..., 3] * t + found[..., 2]) * t + found[..., 1]) * t + found[..., 0]
        integral = ((found[..., 3] / 4.0 * t + found[..., 2] / 3.0) * t + found[..., 1] / 2.0) * t + found[
            ..., 0
        ]
        running = found[..., 4] + self.cubics.lengths[self._piece] * t * integral + self._local_running
        value = np.where(self._on, value, 0.0) + self._local
        if self.place.quantity != "shear":
            return Lines(before=value, beyond=value, running=running, step=self.step)
        before, beyond = self._faces(table, value)
        return Lines(before=before, beyond=beyond, running=running, step=self.step)

    def _table(self, weights: Floats) -> tuple[Floats, Ints]:
        """Cubics of all places and pieces with the integral before them (p pieces, 5); the row of each node (p, m)."""
        cubics, place = self.cubics, self.place
        coefficients = np.einsum("pn,jkn->pjk", weights, cubics.forces)
        if place.quantity == REACTION:
            coefficients += np.moveaxis(cubics.forces[:, :, place.supports], 2, 0)
        else:
            coefficients += np.einsum("pi,jkpi->pjk", place.carry, cubics.ends[:, :, place.span, :])
        before = cubics.running(coefficients)
        table = np.concatenate([coefficients, before[..., None]], axis=-1).reshape(-1, 5)
        first = cubics.lengths.size * np.arange(place.x.size)
        return table, first[:, None] + self._piece

    def _faces(self, table: Floats, value: Floats) -> tuple[Floats, Floats]:
        """Shear: the values with a load just before and just beyond the place put in at its own node."""
        result = []
        rows, pieces = np.arange(self.home.size), self.cubics.lengths.size
        for way in (-FACE, FACE):
            a = (self.place.x + way)[:, None]
            piece, share, on = self.cubics.locate(a)
            powers = share ** np.arange(4) * on
            own = (powers * table[pieces * rows + piece[:, 0], :4]).sum(axis=1)
            faced = value.copy()
            faced[rows, self.home] = own + self.place.local_unit(a)[:, 0]
            result.append(faced)
        return result[0], result[1]

    def _run_locally(self) -> Floats:
        """Running integral (p, m) of the part that a place's own span carries as a simple span."""
        if self.place.quantity == REACTION:
            return np.zeros(self.nodes.shape)
        condensed, span = self.place.condensed, self.place.span
        start, end = condensed.positions[span][:, None], condensed.positions[span + 1][:, None]
        low, high = np.clip(self.nodes[:, :-1], start, end), np.clip(self.nodes[:, 1:], start, end)
        half, middle = (high - low) / 2.0, (high + low) / 2.0
        cells = sum(
            weight * half * self.place.local_unit(middle + at * half)
            for at, weight in zip(*_GAUSS, strict=True)
        )
        return np.concatenate([np.zeros((span.size, 1)), np.cumsum(cells, axis=1)], axis=1)
