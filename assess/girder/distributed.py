"""Published load models as they pass: axles with uniform parts, at their worst for any supports.

Where a uniform part is adverse depends on the influence line and so on the supports. But for loads that stand still the
response is R(d) like any other, and the extreme is the greatest over all stands. So the search runs on the influence
lines of one set of supports, which the condensed girder gives at once, and what it finds is kept as one more position
of a `Passage`: held response and support forces. A batch of supports among those searched then needs no search; a stand
that is a little off costs the second power of that little.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from assess.girder.condensed import Condensed
from assess.girder.cubics import Cubics
from assess.girder.envelope import GRID_PER_SPAN, Passage, Peaks, Placement
from assess.girder.lattice import FACE, Lattice, Lines
from assess.girder.pattern import NOWHERE, Pattern, pattern, search, view
from assess.girder.response import REACTION, Places, places
from assess.loads import Alternative, LoadCase, ModelLoad

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]
Bools = NDArray[np.bool_]

SENSES = (1.0, -1.0)
MOST_SEARCHED = 8  # sets of supports searched for a batch
AT_ENDS = 4.0  # times the step, for grids whose axles stand on an end of the girder
AT_HINGES = 2.0  # and on a hinge
PER_SEGMENT = 100
MOST_FINER = 4.0  # times, however short a segment
ROUGH = 2.5  # times the step, an eightieth of the shortest span


@dataclass(frozen=True, kw_only=True)
class Worst:
    """The worst places found for one sense.

    Attributes
    ----------
    sign : 1 or -1
    value, which, grid : (p,) sum (sign put in), pattern (-1: none), lattice
    mirrored, beyond : (p,) running direction and face
    lead, second : (p,) nodes of the two leading axles as the search saw them
    lines : the influence lines on each lattice that was searched, by its index
    """

    sign: float
    value: Floats
    which: Ints
    grid: Ints
    mirrored: Bools
    beyond: Bools
    lead: Ints
    second: Ints
    lines: dict[int, Lines]


@dataclass(frozen=True, kw_only=True)
class Standing:
    """Loads standing for q of the places.

    Attributes
    ----------
    lattice : that of the nodes
    rows : (q,) the places
    nodes, loads : (q, axles) node of each axle and its load, 0 for one off the girder
    edges : (q, m) kN/m that end at a node less those that start there
    beyond : whether an axle at the home node stands just beyond it
    """

    lattice: Lattice
    rows: Ints
    nodes: Ints
    loads: Floats
    edges: Floats
    beyond: bool

    @property
    def x(self) -> Floats:
        """Where the axles stand, (q, axles) m; one at the home node just off it, on its face."""
        x = self.lattice.nodes[self.rows[:, None], self.nodes]
        if not self.lattice.has_faces:
            return x
        face = FACE if self.beyond else -FACE
        return np.asarray(x + np.where(self.nodes == self.lattice.home[self.rows, None], face, 0.0))


class Sweep:
    """A load model passing p places, before the supports are known.

    Parameters
    ----------
    place : Places
    load : ModelLoad, with the girder's share in its loads
    step : m between the nodes of its lattice at most; None: a two-hundredth of the shortest span
    cubics : those of the girder, if they are there already
    """

    def __init__(
        self, place: Places, load: ModelLoad, *, step: float | None = None, cubics: Cubics | None = None
    ) -> None:
        condensed = place.condensed
        self._place, self.load = place, load
        self._most = _finest(condensed) if step is None else step
        self._cubics = Cubics(condensed) if cubics is None else cubics
        module = load.model.module
        corners = [(0.0, AT_ENDS), (float(condensed.positions[-1]), AT_ENDS)]
        corners += [(x, AT_HINGES) for x in condensed.girder.hinges]
        self.lattices = [Lattice(place, self._cubics, _step(module, self._most))]
        for x, times in corners:
            self.lattices.append(Lattice(place, self._cubics, _step(module, self._most * times), at=x))
        self._spans = [condensed.span_of(lattice.nodes) for lattice in self.lattices]
        self._patterns: list[list[Pattern]] = [
            [pattern(a, lattice.step) for a in load.model.alternatives] for lattice in self.lattices
        ]
        allowances = load.allowance.at(np.diff(condensed.positions), place.quantity, place.span, place.along)
        self._factors = [1.0 + allowance for allowance in allowances]
        hogging = _hogging_near_supports(place)
        self._counts = [_counts(place, a, hogging) for a in load.model.alternatives]

    @property
    def place(self) -> Places:
        """The places it passes."""
        return self._place

    @property
    def cubics(self) -> Cubics:
        """Those of the girder."""
        return self._cubics

    def allowances(self, one: Pattern, sense: int) -> tuple[Floats, Floats]:
        """Factors (p,) on axles and on uniform parts, for the greatest (0) and the least (1) response."""
        return self._on(one, sense, np.arange(self._place.x.size))

    def at(self, index: Ints) -> Sweep:
        """Return the sweep of some of its places."""
        return Sweep(self._place.at(index), self.load, step=self._most, cubics=self._cubics)

    def peaks(self, compliance: Floats) -> Peaks:
        """Peaks (..., p) on supports of compliance (..., n)."""
        compliance = np.asarray(compliance, dtype=np.float64)
        shape = (*compliance.shape[:-1], self._place.x.size)
        rows = [self._one_peak(one) for one in compliance.reshape(-1, compliance.shape[-1])]
        top, bottom, at_top, at_bottom = (
            np.array(column).reshape(shape) for column in zip(*rows, strict=True)
        )
        return Peaks(top=top, bottom=bottom, at_top=at_top, at_bottom=at_bottom)

    def rough(self) -> Sweep:
        """Return the same on a coarser lattice, for choosing among places and for drawing."""
        return Sweep(self._place, self.load, step=ROUGH * self._most, cubics=self._cubics)

    def _one_peak(self, compliance: Floats) -> tuple[Floats, Floats, Floats, Floats]:
        high, low = self._worst(compliance)
        return high.value, -low.value, self._heads(high), self._heads(low)

    def governing(self, compliances: Floats) -> Passage:
        """Keep, at each place, what governs for some of the compliances (s, n), as positions of a passage.

        Supports that differ most from each other are searched; those between stand close to one of them.
        """
        searched = compliances[_apart(compliances, MOST_SEARCHED)]
        parts = [self._position(worst) for one in searched for worst in self._worst(one)]
        leading, held, forces = (np.stack(column, axis=1) for column in zip(*parts, strict=True))
        return Passage(place=self._place, leading=leading, held=held, forces=forces)

    def placement(self, compliance: Floats, index: int, sense: float) -> Placement:
        """Where the loads stand for the greatest (sense 1) or least (-1) response of one place."""
        one = self.at(np.array([index]))
        worst = one._worst(compliance)[SENSES.index(sense)]
        found = next(one._standing(worst), None)
        if found is None:
            raise ValueError("no alternative of the model counts here")
        chosen = one._patterns[0][int(worst.which[0])]
        on = self._place.condensed.carries(found.x[0]) & (found.loads[0] > 0.0)
        axles = zip(found.x[0][on], found.loads[0][on], strict=True)
        way = "" if chosen.is_symmetric else "smaller x" if worst.mirrored[0] else "larger x"
        return Placement(
            name=chosen.source.name,
            value=float(sense * worst.value[0]),
            axles=tuple((float(a), float(p)) for a, p in axles),
            stretches=_stretches(
                found.lattice.nodes[0], found.edges[0], float(one._place.condensed.positions[-1])
            ),
            towards=way,
        )

    # the search --------------------------------------------------------------------------------------

    def _worst(self, compliance: Floats) -> tuple[Worst, Worst]:
        """Worst places for the greatest and for the least response on one set of supports (n,)."""
        weights = self._place.rows @ self._place.condensed.displacement_operator(compliance)
        grids = [0] + [i for i, end in ((1, 0), (2, -1)) if compliance[end] > 0.0]
        grids += range(3, len(self.lattices))
        lines = {i: self.lattices[i].lines(weights) for i in grids}
        high, low = (self._search(lines, i) for i in range(2))
        return high, low

    def _search(self, lines: dict[int, Lines], sense: int) -> Worst:
        count = self._place.x.size
        whole = {"which": np.full(count, -1), "grid": np.zeros(count, dtype=np.intp)}
        nodes = {"lead": np.full(count, NOWHERE), "second": np.full(count, NOWHERE)}
        ways = {"mirrored": np.zeros(count, dtype=bool), "beyond": np.zeros(count, dtype=bool)}
        worst = Worst(sign=SENSES[sense], value=np.zeros(count), lines=lines, **whole, **nodes, **ways)
        for grid in lines:
            for beyond in (False, True) if self.lattices[grid].has_faces else (False,):
                for mirrored in (False, True):
                    self._look(worst, grid, beyond=beyond, mirrored=mirrored)
        return worst

    def _look(self, worst: Worst, grid: int, *, beyond: bool, mirrored: bool) -> None:
        """Search one lattice from one side for all patterns and put what is worse into `worst`."""
        count, sense = self._place.x.size, SENSES.index(worst.sign)
        lines = worst.lines[grid]
        seen = view(lines, self._spans[grid], worst.sign, beyond=beyond, mirrored=mirrored)
        for i, one in enumerate(self._patterns[grid]):
            rows = np.flatnonzero(self._counts[i][sense])
            if not rows.size or (mirrored and one.is_symmetric):
                continue
            found = search(one, seen if rows.size == count else seen.at(rows), *self._on(one, sense, rows))
            better = found.value > worst.value[rows]
            rows = rows[better]
            worst.value[rows], worst.which[rows], worst.grid[rows] = found.value[better], i, grid
            worst.mirrored[rows], worst.beyond[rows] = mirrored, beyond
            worst.lead[rows], worst.second[rows] = found.lead[better], found.second[better]

    def _on(self, one: Pattern, sense: int, rows: Ints) -> tuple[Floats, Floats]:
        """Factors (q,) on axles and on uniform parts."""
        on_axles = self._factors[sense][rows]
        return on_axles, on_axles if one.source.uniform_allowance else np.ones(rows.size)

    # what was found ------------------------------------------------------------------------------------

    def _standing(self, worst: Worst) -> Iterator[Standing]:
        """Group the places by what stands there, and say where."""
        kinds = np.stack([worst.which, worst.grid, worst.mirrored, worst.beyond], axis=1)
        for kind in np.unique(kinds[worst.which >= 0], axis=0):
            yield self._stand(worst, np.flatnonzero((kinds == kind).all(axis=1)))

    def _stand(self, worst: Worst, rows: Ints) -> Standing:
        """Say where the loads stand for some places that have pattern, lattice, direction and face in common."""
        which, grid, mirrored, beyond = (
            a[rows[0]] for a in (worst.which, worst.grid, worst.mirrored, worst.beyond)
        )
        one, lattice, lines = self._patterns[grid][which], self.lattices[grid], worst.lines[grid]
        sense, last = SENSES.index(worst.sign), lattice.nodes.shape[1] - 1
        lead, second = worst.lead[rows], worst.second[rows]
        on_axles, on_uniform = self._on(one, sense, rows)

        def node(k: Ints) -> Ints:
            return last - k if mirrored else k

        nodes = node(np.concatenate([lead[:, None] - one.axles, second[:, None] - one.second], axis=1))
        on = (nodes >= 0) & (nodes <= last)
        nodes = np.clip(nodes, 0, last)
        if one.source.leave_out:
            y = lines.beyond if beyond else lines.before
            on &= worst.sign * y[rows[:, None], nodes] > 0.0
        edges = np.zeros((rows.size, last + 1))
        for start, end, intensity in one.blocks:
            tail = np.full(rows.size, 0) if end is None else np.clip(lead - end, 0, last)
            low, high = np.sort([node(tail), node(np.clip(lead - start, 0, last))], axis=0)
            edges += _between(low, high, last + 1) * (intensity * on_uniform)[:, None]
        if one.source.uniform:
            mask = lines.loaded(worst.sign)[rows]
            if one.clear is not None:
                ends = np.sort([node(lead + one.clear), node(lead - one.length - one.clear)], axis=0)
                cells = np.arange(last)
                mask = mask & ((cells < ends[0][:, None]) | (cells >= ends[1][:, None]))
            steps = np.diff(mask.astype(np.float64), axis=1, prepend=0.0, append=0.0)
            edges -= (one.source.uniform * on_uniform)[:, None] * steps
        loads = np.concatenate([one.loads, one.second_loads]) * on_axles[:, None]
        return Standing(
            lattice=lattice,
            rows=rows,
            nodes=nodes,
            loads=np.where(on, loads, 0.0),
            edges=edges,
            beyond=bool(beyond),
        )

    def _heads(self, worst: Worst) -> Floats:
        """Where the head of the load stands, (p,) m; NaN where there is none."""
        x = np.full(worst.value.size, np.nan)
        for grid, lattice in enumerate(self.lattices):
            rows = np.flatnonzero((worst.which >= 0) & (worst.grid == grid))
            last = lattice.nodes.shape[1] - 1
            x[rows] = lattice.x_of(
                rows, np.where(worst.mirrored[rows], last - worst.lead[rows], worst.lead[rows])
            )
        return x

    def _position(self, worst: Worst) -> tuple[Floats, Floats, Floats]:
        """Head (p,), held response (p,) and support forces (p, n) of what was found; zero where nothing was."""
        held = np.zeros(self._place.x.size)
        forces = np.zeros((held.size, self._place.condensed.n_supports))
        for one in self._standing(worst):
            rows, lattice = one.rows, one.lattice
            line = lattice.level.beyond if one.beyond else lattice.level.before
            held[rows] = (one.loads * line[rows[:, None], one.nodes]).sum(axis=1)
            held[rows] += (one.edges * lattice.level.running[rows]).sum(axis=1)
            forces[rows] = np.einsum("qa,qan->qn", one.loads, self._cubics.forces_at(one.x))
            at, node = np.nonzero(one.edges)
            uniform = one.edges[at, node][:, None] * self._cubics.forces_over(lattice.nodes[rows[at], node])
            np.add.at(forces, rows[at], uniform)
        return self._heads(worst), held, forces


def _finest(condensed: Condensed) -> float:
    """Step in m of the finest lattice: two hundred in the shortest span, and beside a hinge a hundred in a segment.

    Lines fall off steeply over a short suspended span, and an axle at a free distance seldom meets its corner.
    """
    step = float(np.diff(condensed.positions).min()) / GRID_PER_SPAN
    if not condensed.hinges.size:
        return step
    return float(np.clip(np.diff(condensed.nodes).min() / PER_SEGMENT, step / MOST_FINER, step))


def _step(module: float, most: float) -> float:
    """Return the largest step of at most `most` that divides the module."""
    return most if np.isinf(module) else float(module / np.ceil(module / most))


def _between(low: Ints, high: Ints, count: int) -> Floats:
    """Edges (q, count) of a stretch of intensity 1 from node low to node high (q,)."""
    nodes = np.arange(count)
    return np.asarray((nodes == high[:, None]).astype(np.float64) - (nodes == low[:, None]))


def _apart(compliances: Floats, most: int) -> Ints:
    """Indices of up to `most` sets (s, n) that lie far apart: the middle one, then always the one farthest off."""
    finite = np.isfinite(compliances)
    size = np.where(finite, compliances, 0.0).max(axis=0)
    unit = np.where(finite, compliances / np.where(size > 0.0, size, 1.0), 2.0)
    chosen = [int(np.abs(unit - np.median(unit, axis=0)).sum(axis=1).argmin())]
    off = np.abs(unit - unit[chosen[0]]).max(axis=1)
    while len(chosen) < most and off.max() > 0.0:
        chosen.append(int(off.argmax()))
        off = np.minimum(off, np.abs(unit - unit[chosen[-1]]).max(axis=1))
    return np.array(chosen, dtype=np.intp)


def _counts(place: Places, alternative: Alternative, hogging: Bools) -> tuple[Bools, Bools]:
    """Whether an alternative counts for the greatest and for the least response, both (p,)."""
    every, none = np.ones(place.x.size, dtype=bool), np.zeros(place.x.size, dtype=bool)
    uses = alternative.uses
    if not uses:
        return every, every
    if place.quantity == "moment":
        low = every if "hogging" in uses else hogging if "hogging near supports" in uses else none
        return every if "sagging" in uses else none, low
    if place.quantity == REACTION:
        inner = (place.supports > 0) & (place.supports < place.condensed.n_supports - 1)
        both = every if "reaction" in uses else none
        return both | inner if "interior reaction" in uses else both, both
    return (every, every) if place.quantity in uses else (none, none)


def _hogging_near_supports(place: Places) -> Bools:
    """Tell which places (p,) hog under a uniform load on all spans, supports held level."""
    if place.quantity == REACTION:
        return np.zeros(place.x.size, dtype=bool)
    condensed = place.condensed
    everywhere = LoadCase(uniforms=((0.0, float(condensed.positions[-1]), 1.0),))
    moment = places(condensed, "moment", place.x, place.side).held(everywhere)
    return np.asarray(moment < -1e-9 * float(np.max(np.diff(condensed.positions))) ** 2)


def _stretches(x: Floats, edges: Floats, length: float) -> tuple[tuple[float, float, float], ...]:
    """Loaded stretches (start, end, kN/m) of a girder from the intensities that end and start at nodes x (m,)."""
    level = -np.cumsum(edges)
    changes = np.flatnonzero(np.abs(np.diff(level, prepend=0.0)) > 1e-9)
    found = []
    for first, after in pairwise([*changes, x.size - 1]):
        start, end = max(float(x[first]), 0.0), min(float(x[after]), length)
        if abs(level[first]) > 1e-9 and end > start:
            found.append((start, end, float(level[first])))
    return tuple(found)
