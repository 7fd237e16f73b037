"""Influence lines of many places on a grid on which every axle of a load model falls.

A grid has a node on the place itself, so an axle can stand exactly on it (where a moment's influence line has its
corner and a shear's its step), on an end of the girder (where all lines have a step if the end yields) or on a hinge
(where all lines have a corner). Its step divides all distances of the load model, so all axles stand on nodes at once.
Node values and the running integral at nodes are exact for prismatic pieces.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from assess.girder.cubics import Cubics
from assess.girder.response import REACTION, Places

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

_ON_NODE = 1e-6  # of a cell
FACE = 1e-7  # m; how far past a place a load stands to be on its other face
_GAUSS = np.polynomial.legendre.leggauss(2)  # exact for cubics


@dataclass(frozen=True, kw_only=True)
class Corner:
    """Where each of p influence lines has a corner or a step inside a cell of its grid.

    Attributes
    ----------
    cell, share : (p,) the cell, and how far into it
    before, beyond : (p,) response to a unit load just before and just beyond the corner
    running : (p,) integral from the left end of the girder to the corner
    """

    cell: Ints
    share: Floats
    before: Floats
    beyond: Floats
    running: Floats


@dataclass(frozen=True, kw_only=True)
class Lines:
    """Influence lines (p, m) at the nodes of a lattice.

    Attributes
    ----------
    before, beyond : response to a unit load that stands just before or just beyond the node; they differ at the place
        itself for shear, and at an end of the girder where an axle is then on it or off
    running : integral from the left end of the girder to the node, m times the response
    step : m between nodes
    broken : whether the lines may have a step between nodes
    corners : where hinges, or the step of a broken line, part cells in two
    """

    before: Floats
    beyond: Floats
    running: Floats
    step: float
    broken: bool = False
    corners: tuple[Corner, ...] = ()
    _kept: dict[float, Floats] = field(default_factory=dict, repr=False)

    def positive(self, sign: float) -> Floats:
        """Running integral (p, m) of the positive part of sign times the influence line.

        A cell without change of sign counts with its exact integral; one with a change counts with the triangle on its
        positive side, which is exact to the third power of the step; in a broken line it counts whole or not at all.
        A cell parted by a corner counts as two.
        """
        if sign not in self._kept:
            self._kept[sign] = self._positive(sign)
        return self._kept[sign]

    def _positive(self, sign: float) -> Floats:
        broken = self.broken and not self.corners  # else the step is one of the corners
        left, right = sign * self.beyond[:, :-1], sign * self.before[:, 1:]
        whole = sign * np.diff(self.running, axis=1)
        cells = _positive_part(left, right, whole, None if broken else self.step)
        rows = np.arange(cells.shape[0])
        for corner in self.corners:
            first, last = (sign * self.running[rows, corner.cell + i] for i in (0, 1))
            middle, share = sign * corner.running, corner.share
            near = left[rows, corner.cell], sign * corner.before, middle - first, share * self.step
            far = sign * corner.beyond, right[rows, corner.cell], last - middle, (1.0 - share) * self.step
            cells[rows, corner.cell] = _positive_part(*near) + _positive_part(*far)
        return np.concatenate([np.zeros((cells.shape[0], 1)), np.cumsum(cells, axis=1)], axis=1)

    def loaded(self, sign: float) -> NDArray[np.bool_]:
        """Tell which cells (p, m - 1) are on the positive side of sign times the influence line."""
        return np.asarray(sign * (self.beyond[:, :-1] + self.before[:, 1:]) > 0.0)


def _positive_part(left: Floats, right: Floats, whole: Floats, width: Floats | float | None) -> Floats:
    """Integral of the positive part over cells with these end values and integrals; width None: a step in them."""
    mixed = left * right < 0.0
    top = np.maximum(left, right)
    height = np.where(mixed, np.abs(left - right), 1.0)
    part = np.maximum(whole, 0.0) if width is None else 0.5 * width * top**2 / height
    return np.where(mixed, part, np.where(top > 0.0, whole, 0.0))


def _stepped(before: Floats, beyond: Floats, step: Corner, ends: Ints | None) -> tuple[Floats, Floats]:
    """Put both faces of a step into values (p, m) before and beyond nodes, if on a node that is no end."""
    node = step.cell + np.round(step.share).astype(np.intp)
    falls = np.abs(step.share - np.round(step.share)) < _ON_NODE
    rows = np.flatnonzero(falls if ends is None else falls & (node != ends))
    nodes = node[rows]
    before, beyond = before.copy(), beyond.copy()
    before[rows, nodes], beyond[rows, nodes] = step.before[rows], step.beyond[rows]
    return before, beyond


class Lattice:
    """The grids of p places and what is needed for their influence lines on any supports.

    Parameters
    ----------
    place : Places
    cubics : those of the girder
    step : m between nodes
    at : x of an end or a hinge for grids with a node there, m; None for grids with a node on each place

    Attributes
    ----------
    place, step : as given
    end : -1 or 1 for grids with a node on the left or the right end, else 0
    anchor : (p,) x of the node that is `home`, m
    home : (p,) the node on the place, the end or the hinge
    nodes : (p, m) x of the nodes; the first is at or before the left end, the last at or beyond the right one
    """

    def __init__(self, place: Places, cubics: Cubics, step: float, *, at: float | None = None) -> None:
        self.place, self.cubics, self.step, self._on_place = place, cubics, step, at is None
        length = float(place.condensed.positions[-1])
        self.end = {0.0: -1, length: 1}.get(at, 0) if at is not None else 0
        self.anchor: Floats = place.x if at is None else np.full(place.x.size, at)
        self.home: Ints = np.ceil(self.anchor / step).astype(np.intp)
        count = int((self.home + np.ceil((length - self.anchor) / step)).max()) + 1
        self.nodes: Floats = self.anchor[:, None] + step * (np.arange(count) - self.home[:, None])
        self._piece, self._share, self._on = cubics.locate(self.nodes)
        self._local = (
            place.local_unit(self.nodes) if place.quantity != REACTION else np.zeros(self.nodes.shape)
        )
        self._local_running = self._run_locally()

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
        before = beyond = value
        if self.end:
            off = value.copy()
            off[np.arange(self.home.size), self.home] = 0.0
            before, beyond = (off, value) if self.end < 0 else (value, off)
        elif self.place.quantity == "shear" and self._on_place:
            before, beyond = self._faces(table, value)
        broken = self.place.quantity == "shear" and not self._on_place
        corners = tuple(self._corners(table)) if self.place.condensed.hinges.size else ()
        if corners and broken:
            before, beyond = _stepped(before, beyond, corners[-1], self.home if self.end else None)
        return Lines(
            before=before, beyond=beyond, running=running, step=self.step, broken=broken, corners=corners
        )

    @property
    def has_faces(self) -> bool:
        """Whether it matters if a load stands just before or just beyond the home node."""
        return self.end != 0 or (self._on_place and self.place.quantity == "shear")

    def x_of(self, rows: Ints, nodes: Ints) -> Floats:
        """Return x (...) of nodes, which may lie off the grid, of the places `rows`."""
        return np.asarray(self.anchor[rows] + self.step * (nodes - self.home[rows]))

    def _table(self, weights: Floats) -> tuple[Floats, Ints]:
        """Cubics of all places and pieces with the integral before them (p pieces, 5); the row of each node (p, m)."""
        cubics, place = self.cubics, self.place
        coefficients = np.einsum("pn,jkn->pjk", weights, cubics.forces)
        if place.quantity == REACTION:
            coefficients += np.moveaxis(cubics.forces[:, :, place.supports], 2, 0)
        else:
            coefficients += np.einsum("pi,jkpi->pjk", place.carry, cubics.ends[:, :, place.segment, :])
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

    def _corners(self, table: Floats) -> Iterator[Corner]:
        """Corners at the hinges, and at the places where their own shear has its step off the nodes."""
        place, whole = self.place, self._local_running[:, -1]
        for x in place.condensed.girder.hinges:
            value, running = self._at(table, np.full(place.x.size, x))
            # a hinge is an end of a segment, where the part that a segment carries as a simple span is nothing
            local = np.where(x > place.x, whole, 0.0)
            yield self._corner(np.full(place.x.size, x), value, value, running + local)
        if place.quantity == "shear" and not self._on_place:
            value, running = self._at(table, place.x)
            length = np.diff(place.condensed.nodes)[place.segment]
            before, beyond = value - place.local / length, value + 1.0 - place.local / length
            yield self._corner(place.x, before, beyond, running - place.local**2 / (2.0 * length))

    def _at(self, table: Floats, x: Floats) -> tuple[Floats, Floats]:
        """Value and running integral of the cubics of each place at its own x (p,)."""
        piece, t, _ = self.cubics.locate(x)
        found = table[self.cubics.lengths.size * np.arange(x.size) + piece]
        powers = t[:, None] ** np.arange(5)
        value = (found[:, :4] * powers[:, :4]).sum(axis=1)
        inside = (found[:, :4] * powers[:, 1:] / np.arange(1.0, 5.0)).sum(axis=1)
        return value, found[:, 4] + self.cubics.lengths[piece] * inside

    def _corner(self, x: Floats, before: Floats, beyond: Floats, running: Floats) -> Corner:
        along = (x - self.nodes[:, 0]) / self.step
        cell = np.clip(along.astype(np.intp), 0, self.nodes.shape[1] - 2)
        share = np.clip(along - cell, 0.0, 1.0)
        return Corner(cell=cell, share=share, before=before, beyond=beyond, running=running)

    def _run_locally(self) -> Floats:
        """Running integral (p, m) of the part that a place's own segment carries as a simple span."""
        if self.place.quantity == REACTION:
            return np.zeros(self.nodes.shape)
        nodes, segment = self.place.condensed.nodes, self.place.segment
        x, start, end = (a[:, None] for a in (self.place.x, nodes[segment], nodes[segment + 1]))
        cells = self._cells(start, end) if self._on_place else self._cells(start, x) + self._cells(x, end)
        return np.concatenate([np.zeros((segment.size, 1)), np.cumsum(cells, axis=1)], axis=1)

    def _cells(self, start: Floats, end: Floats) -> Floats:
        """Integral (p, m - 1) of the local part over what of each cell lies between start and end (p, 1)."""
        low, high = np.clip(self.nodes[:, :-1], start, end), np.clip(self.nodes[:, 1:], start, end)
        half, middle = (high - low) / 2.0, (high + low) / 2.0
        total = np.zeros(low.shape)
        for at, weight in zip(*_GAUSS, strict=True):
            total += weight * half * self.place.local_unit(middle + at * half)
        return total
