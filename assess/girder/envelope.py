"""What a train does as it passes: influence lines on yielding supports and live envelopes.

An influence line on yielding supports is IL(a) = IL0(a) + Y d(a), and d(a) follows from the support
forces of the held girder, so no position of a train needs a solve of its own. A train is evaluated on
a grid no coarser than a two-hundredth of the shortest span, and at every place with every axle on it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from assess.girder.condensed import Condensed
from assess.girder.response import REACTION, Places
from assess.loads import Train

Floats = NDArray[np.float64]

GRID_PER_SPAN = 200
_BLOCK = 4_000_000  # responses held at once, 32 MB
_AT_ONCE = 200_000  # axles placed at once, to bound the memory a long train takes
_FACE = 1e-7  # m; how far past a place an axle stands to be on its other face


@dataclass(frozen=True, kw_only=True)
class Envelope:
    """Extremes of a response at p places; 0 is among the positions (no train), so maximum >= 0 >= minimum.

    Attributes
    ----------
    maximum, minimum : (..., p)
    leading_at_maximum, leading_at_minimum : (..., p) leading axle, m; NaN where the empty girder governs.
        For the reversed running direction the position is that of the axle with the largest x as well. For a
        published load model it is the head of the load as it runs, either way.
    """

    maximum: Floats
    minimum: Floats
    leading_at_maximum: Floats
    leading_at_minimum: Floats


@dataclass(frozen=True, kw_only=True)
class Peaks:
    """The greatest and the least response a part of the live load gives, and where it then stands; all (..., p)."""

    top: Floats
    bottom: Floats
    at_top: Floats
    at_bottom: Floats


@dataclass(frozen=True, kw_only=True)
class Placement:
    """Where a live load stands for an extreme, in plain numbers.

    Attributes
    ----------
    name : the alternative of a load model, or nothing
    value : the response
    axles : (x in m, kN) of the axles on the girder, with what share and allowance there are in them
    stretches : (start in m, end in m, kN/m) of the uniform parts on the girder, likewise
    towards : "larger x" or "smaller x", the way it runs; nothing where that makes no difference
    """

    name: str
    value: float
    axles: tuple[tuple[float, float], ...]
    stretches: tuple[tuple[float, float, float], ...] = ()
    towards: str = ""


class Part(Protocol):
    """A live load passing p places, before the supports are known: a train of axles, or a published load model."""

    @property
    def place(self) -> Places:
        """The places it passes."""

    def peaks(self, compliance: Floats) -> Peaks:
        """Peaks (..., p) on supports of compliance (..., n)."""

    def at(self, index: NDArray[np.intp]) -> Part:
        """Return the same of some of its places."""

    def governing(self, compliances: Floats) -> Passage:
        """Keep, at each place, the positions that govern for a compliance of (s, n)."""

    def placement(self, compliance: Floats, index: int, sense: float) -> Placement:
        """Where it stands for the greatest (sense 1) or least (-1) response of one place on supports (n,)."""


def influence_line(place: Places, a: Floats, compliance: Floats) -> Floats:
    """Influence lines (..., p, m) for unit loads at a (m,) on supports of compliance (..., n)."""
    operator = place.condensed.displacement_operator(compliance)
    forces = place.condensed.unit_forces(a)
    return np.asarray(place.unit(a) + place.rows @ operator @ forces.T)


def train_forces(condensed: Condensed, train: Train, leading: Floats) -> Floats:
    """Support forces (..., n) with all supports held level for leading axles at `leading` (...)."""
    return condensed.forces_from(*_train_state(condensed, train, np.asarray(leading, dtype=np.float64)))


def _train_state(condensed: Condensed, train: Train, leading: Floats) -> tuple[Floats, Floats]:
    """Segment-end state (..., segments, c) and lever-rule forces (..., nodes) of the whole train."""
    rows = leading.reshape(-1)
    step = max(1, _AT_ONCE // train.loads.size)
    blocks = [
        condensed.row_state(train.axle_positions(rows[start : start + step]), train.loads)
        for start in range(0, rows.size, step)
    ]
    ends = np.concatenate([block[0] for block in blocks])
    simple = np.concatenate([block[1] for block in blocks])
    return ends.reshape(*leading.shape, *ends.shape[1:]), simple.reshape(*leading.shape, -1)


@dataclass(frozen=True, kw_only=True)
class Passage:
    """A train passing p places, before the supports are known.

    Attributes
    ----------
    place : Places
    leading : (p, m) leading-axle positions examined at each place
    held : (p, m) response with all supports held level
    forces : (p, m, n) support forces with all supports held level; (1, m, n) where all places share them
    train : the train as it stands on the girder, seen from its right-most axle; None where the loads are no one train
    """

    place: Places
    leading: Floats
    held: Floats
    forces: Floats
    train: Train | None = None

    def responses(self, compliance: Floats) -> Floats:
        """Response (..., p, m) on supports of compliance (..., n)."""
        operator = self.place.condensed.displacement_operator(compliance)
        weights = self.place.rows @ operator  # (..., p, n)
        if self.forces.shape[0] == 1:
            return np.asarray(self.held + weights @ self.forces[0].T)
        flat = weights.reshape(-1, *weights.shape[-2:])
        moved = np.moveaxis(self.forces @ flat.transpose(1, 2, 0), 2, 0)  # one product for all sets
        return np.asarray(self.held + moved.reshape(*weights.shape[:-2], *self.held.shape))

    def peaks(self, compliance: Floats) -> Peaks:
        """Peaks (..., p) on supports of compliance (..., n)."""
        y = self.responses(compliance)
        high, low = y.argmax(axis=-1), y.argmin(axis=-1)
        index = np.arange(self.place.x.size)
        return Peaks(
            top=np.take_along_axis(y, high[..., None], axis=-1)[..., 0],
            bottom=np.take_along_axis(y, low[..., None], axis=-1)[..., 0],
            at_top=self.leading[index, high],
            at_bottom=self.leading[index, low],
        )

    def placement(self, compliance: Floats, index: int, sense: float) -> Placement:
        """Where the train stands for the greatest (sense 1) or least (-1) response of one place."""
        one = self.at(np.array([index])).peaks(compliance)
        value, leading = (one.top, one.at_top) if sense > 0.0 else (one.bottom, one.at_bottom)
        if self.train is None:
            raise ValueError("these positions belong to no one train")
        x = self.train.axle_positions(leading)[0]
        on = self.place.condensed.carries(x)
        axles = tuple((float(a), float(p)) for a, p in zip(x[on], self.train.loads[on], strict=True))
        return Placement(name="", value=float(value[0]), axles=axles)

    def at(self, index: NDArray[np.intp]) -> Passage:
        """Return the passage of some of its places."""
        shared = self.forces.shape[0] == 1
        return Passage(
            place=self.place.at(index),
            leading=self.leading[index],
            held=self.held[index],
            forces=self.forces if shared else self.forces[index],
            train=self.train,
        )

    def governing(self, compliances: Floats) -> Passage:
        """Keep, at each place, the positions that govern for a compliance of (s, n), and their neighbours."""
        m = self.held.shape[1]
        count = self.place.x.size
        chosen = np.zeros((count, m), dtype=bool)
        index = np.arange(count)
        for compliance in compliances:
            y = self.responses(compliance)
            for best in (y.argmax(axis=1), y.argmin(axis=1)):
                for beside in (-1, 0, 1):
                    chosen[index, np.clip(best + beside, 0, m - 1)] = True
        return self.keep(chosen)

    def keep(self, chosen: NDArray[np.bool_]) -> Passage:
        """Keep some positions, (p, m); places with fewer than others keep some more."""
        width = int(chosen.sum(axis=1).max())
        keep = np.argsort(~chosen, axis=1, kind="stable")[:, :width]
        forces = np.broadcast_to(self.forces, (self.place.x.size, *self.forces.shape[1:]))
        return Passage(
            place=self.place,
            leading=np.take_along_axis(self.leading, keep, axis=1),
            held=np.take_along_axis(self.held, keep, axis=1),
            forces=np.take_along_axis(forces, keep[:, :, None], axis=1),
            train=self.train,
        )


def grid_step(condensed: Condensed) -> float:
    """Spacing of the leading-axle grid, m."""
    return float(np.diff(condensed.positions).min() / GRID_PER_SPAN)


def leading_grid(condensed: Condensed, train: Train) -> Floats:
    """Leading-axle positions (m,), ascending: an even grid, each axle just on and off either end and on a hinge.

    An end that yields makes a step in every influence line where an axle comes on or goes off; a hinge makes a corner.
    """
    length = condensed.positions[-1]
    end = length + train.length
    even = np.linspace(0.0, end, max(2, int(np.ceil(end / grid_step(condensed))) + 1))
    on, off = train.offsets, train.offsets + length
    corners = (condensed.nodes[condensed.hinges, None] + train.offsets).ravel()
    return np.unique(np.concatenate([even, on - _FACE, on, off, off + _FACE, corners]))


def passages(place: Places, train: Train, *, both_ways: bool = True) -> list[Passage]:
    """Let a train pass: one `Passage` on the common grid and one with its axles on each place, each way."""
    ways = [train]
    if both_ways and not train.is_symmetric():
        ways.append(train.reversed())
    result = []
    for way in ways:
        result.append(passage_at(place, way, leading_grid(place.condensed, way)))
        result.append(_on_places(place, way))
    return result


def passage_at(place: Places, train: Train, leading: Floats) -> Passage:
    """Let a train stand with its leading axle at some positions (m,), ascending."""
    condensed = place.condensed
    ends, simple = _train_state(condensed, train, leading)
    forces = condensed.forces_from(ends, simple)
    shared = np.broadcast_to(leading, (place.x.size, leading.size))
    if place.quantity == REACTION:
        return Passage(
            place=place, leading=shared, held=forces.T[place.supports], forces=forces[None], train=train
        )
    held = np.empty(shared.shape)
    for j, one in enumerate(condensed.segments):
        here = np.flatnonzero(place.segment == j)
        if not here.size:
            continue
        block = place.carry[here] @ ends[:, j, :].T
        start = condensed.nodes[j]
        x, side = place.local[here, None], place.side[here, None]
        for offset, load in zip(train.offsets, train.loads, strict=True):
            # the leading grid ascends, so an axle is inside a segment over one run of positions
            first, last = np.searchsorted(leading, [start + offset, start + one.length + offset])
            if first < last:
                a = np.clip(leading[None, first:last] - offset - start, 0.0, one.length)
                block[:, first:last] += load * one.load_response(place.quantity, x, a, side)
        held[here] = block
    return Passage(place=place, leading=shared, held=held, forces=forces[None], train=train)


def _on_places(place: Places, train: Train) -> Passage:
    condensed = place.condensed
    leading = place.x[:, None] + train.offsets
    if place.quantity == "shear":
        leading = np.concatenate([leading - _FACE, leading + _FACE], axis=1)
    ends, simple = _train_state(condensed, train, leading)
    forces = condensed.forces_from(ends, simple)
    if place.quantity == REACTION:
        held = forces[np.arange(place.x.size), :, place.supports]
        return Passage(place=place, leading=leading, held=held, forces=forces, train=train)
    own = ends[np.arange(place.x.size), :, place.segment, :]
    held = (own * place.carry[:, None, :]).sum(axis=-1)
    for offset, load in zip(train.offsets, train.loads, strict=True):
        held += load * place.local_unit(leading - offset)
    return Passage(place=place, leading=leading, held=held, forces=forces, train=train)


def extremes(parts: list[Passage], compliances: Floats) -> tuple[Floats, Floats]:
    """Live maxima and minima (sets, p) for many sets of compliances (sets, n), worked in blocks."""
    sets, count = compliances.shape[0], parts[0].place.x.size
    maximum, minimum = np.zeros((sets, count)), np.zeros((sets, count))
    block = max(1, _BLOCK // sum(part.held.size for part in parts))
    for first in range(0, sets, block):
        some = slice(first, first + block)
        for part in parts:
            y = part.responses(compliances[some])
            np.maximum(maximum[some], y.max(axis=-1), out=maximum[some])
            np.minimum(minimum[some], y.min(axis=-1), out=minimum[some])
    return maximum, minimum


def envelope(parts: Sequence[Part], compliance: Floats) -> Envelope:
    """Live envelope over passages at the same places on supports of compliance (..., n)."""
    if not parts:
        raise ValueError("an envelope needs at least one passage")
    first = parts[0].peaks(compliance)
    maximum = minimum = np.zeros(first.top.shape)
    at_maximum = at_minimum = np.full(first.top.shape, np.nan)
    for i, part in enumerate(parts):
        peaks = part.peaks(compliance) if i else first
        at_maximum = np.where(peaks.top > maximum, peaks.at_top, at_maximum)
        at_minimum = np.where(peaks.bottom < minimum, peaks.at_bottom, at_minimum)
        maximum, minimum = np.maximum(maximum, peaks.top), np.minimum(minimum, peaks.bottom)
    return Envelope(
        maximum=maximum, minimum=minimum, leading_at_maximum=at_maximum, leading_at_minimum=at_minimum
    )


def governing_placement(
    parts: Sequence[Part], compliance: Floats, index: int, sense: float
) -> Placement | None:
    """Where the live load stands for the greatest (sense 1) or least (-1) response of one place; None: nowhere.

    Parameters
    ----------
    parts : passages at the same places
    compliance : (n,)
    index : which place
    """
    some = np.array([index])
    best, most = None, 0.0
    for part in parts:
        peaks = part.at(some).peaks(compliance)
        value = float(sense * (peaks.top if sense > 0.0 else peaks.bottom)[0])
        if value > most:
            best, most = part, value
    return None if best is None else best.placement(compliance, index, sense)
