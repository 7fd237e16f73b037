"""A load model rolled over a girder step by step, for effects that are worst in between.

`distributed.py` searches the worst stand on given supports. Where pads may be left, a girder can be used most with the
load just where a pad is still in touch, which is the worst stand on no one set of supports. So the head of the load is
put on one node after the other; adverse parts stand where the lines on given supports say. Alternatives with a
second group, or that count for some effects only, are left to the search.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from assess.girder.distributed import SENSES, Sweep
from assess.girder.envelope import GRID_PER_SPAN, Passage
from assess.girder.lattice import Lattice, Lines
from assess.girder.pattern import Pattern, pattern

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]
Bools = NDArray[np.bool_]

_FINE = 4 * GRID_PER_SPAN  # nodes a span, for heads where the stand is the same for all places
_HEADS = 60  # where every place has its own stand


class Rolling:
    """The alternatives of a load model with their heads on the nodes of one grid.

    Parameters
    ----------
    sweep : Sweep
    """

    def __init__(self, sweep: Sweep) -> None:
        self._sweep, condensed = sweep, sweep.place.condensed
        alternatives = [one for one in sweep.load.model.alternatives if not (one.second or one.uses)]
        adverse = all(one.uniform or one.leave_out for one in alternatives)
        most = float(np.diff(condensed.positions).min()) / (GRID_PER_SPAN if adverse else _FINE)
        module = sweep.load.model.module
        step = most if np.isinf(module) else float(module / np.ceil(module / most))
        self._lattice = Lattice(sweep.place, sweep.cubics, step, at=0.0)
        nodes = self._lattice.nodes[0]
        self._at, self._over = sweep.cubics.forces_at(nodes), sweep.cubics.forces_over(nodes)
        self._patterns = [pattern(one, step) for one in alternatives]

    def passages(self, compliances: Floats) -> list[Passage]:
        """All stands, the adverse parts where the lines on some supports (s, n) ask for them."""
        place = self._sweep.place
        own = [one for one in self._patterns if not self._is_shared(one)]
        found = [
            self._shared(one, way) for one in self._patterns if self._is_shared(one) for way in _ways(one)
        ]
        for compliance in compliances if own else ():
            lines = self._lattice.lines(place.rows @ place.condensed.displacement_operator(compliance))
            found += [
                self._own(one, way, lines, sense) for one in own for way in _ways(one) for sense in range(2)
            ]
        return found

    def _is_shared(self, one: Pattern) -> bool:
        """Whether it stands the same for all places."""
        if one.source.uniform or one.source.leave_out:
            return False
        return all(np.ptp(f) == 0.0 for sense in range(2) for f in self._sweep.allowances(one, sense))

    def _nodes(self, one: Pattern, heads: Ints, behind: int, mirrored: bool) -> tuple[Ints, Bools]:
        """Node of what is `behind` the heads, and whether that is on the grid."""
        last = self._at.shape[0] - 1
        node = heads - behind
        on = (node >= 0) & (node <= last)
        node = np.clip(node, 0, last)
        return (last - node if mirrored else node), on

    def _shared(self, one: Pattern, mirrored: bool) -> Passage:
        """Stands that are the same for all places."""
        heads = np.arange(self._at.shape[0] + one.reach)
        level, place = self._lattice.level, self._sweep.place
        on_axles, on_uniform = (float(f[0]) for f in self._sweep.allowances(one, 0))
        held, forces = np.zeros((place.x.size, heads.size)), np.zeros((heads.size, self._at.shape[1]))
        for behind, load in zip(one.axles, one.loads, strict=True):
            node, on = self._nodes(one, heads, int(behind), mirrored)
            held += on_axles * load * on * level.beyond[:, node]
            forces += on_axles * load * on[:, None] * self._at[node]
        for start, end, intensity in one.blocks:
            low, high = self._stretch(one, heads, start, end, mirrored)
            held += on_uniform * intensity * (level.running[:, high] - level.running[:, low])
            forces += on_uniform * intensity * (self._over[high] - self._over[low])
        x = self._leading(heads, mirrored)
        return Passage(place=place, leading=np.broadcast_to(x, held.shape), held=held, forces=forces[None])

    def _own(self, one: Pattern, mirrored: bool, lines: Lines, sense: int) -> Passage:
        """Stands of which every place has its own, because of adverse parts or allowances."""
        most = self._at.shape[0] + one.reach
        heads = np.unique(np.linspace(0, most - 1, _HEADS).astype(np.intp))
        sign, level, place = SENSES[sense], self._lattice.level, self._sweep.place
        on_axles, on_uniform = (f[:, None] for f in self._sweep.allowances(one, sense))
        held = np.zeros((place.x.size, heads.size))
        forces = np.zeros((*held.shape, self._at.shape[1]))
        for behind, load in zip(one.axles, one.loads, strict=True):
            node, on = self._nodes(one, heads, int(behind), mirrored)
            share = load * on * on_axles
            if one.source.leave_out:
                share = share * (sign * lines.beyond[:, node] > 0.0)
            held += share * level.beyond[:, node]
            forces += share[..., None] * self._at[node]
        for start, end, intensity in one.blocks:
            low, high = self._stretch(one, heads, start, end, mirrored)
            held += on_uniform * intensity * (level.running[:, high] - level.running[:, low])
            forces += (on_uniform * intensity)[..., None] * (self._over[high] - self._over[low])
        if one.source.uniform:
            mask = lines.loaded(sign)
            running = _running(mask * np.diff(level.running, axis=1))
            over = _running(mask[..., None] * np.diff(self._over, axis=0))
            more, push = running[:, -1:], over[:, -1:]
            if one.clear is not None:
                low, high = self._stretch(one, heads, -one.clear, one.length + one.clear, mirrored)
                more = more - (running[:, high] - running[:, low])
                push = push - (over[:, high] - over[:, low])
            held = held + one.source.uniform * on_uniform * more
            forces = forces + (one.source.uniform * on_uniform)[..., None] * push
        x = self._leading(heads, mirrored)
        return Passage(place=place, leading=np.broadcast_to(x, held.shape), held=held, forces=forces)

    def _stretch(
        self, one: Pattern, heads: Ints, start: int, end: int | None, mirrored: bool
    ) -> tuple[Ints, Ints]:
        """Nodes of the lower and the upper end of a stretch behind the heads."""
        front = self._nodes(one, heads, start, mirrored)[0]
        last = self._at.shape[0] - 1
        tail = np.full(heads.size, last if mirrored else 0)
        if end is not None:
            tail = self._nodes(one, heads, end, mirrored)[0]
        return np.minimum(front, tail), np.maximum(front, tail)

    def _leading(self, heads: Ints, mirrored: bool) -> Floats:
        node = self._at.shape[0] - 1 - heads if mirrored else heads
        return np.asarray(self._lattice.anchor[0] + self._lattice.step * node)


def _ways(one: Pattern) -> tuple[bool, ...]:
    return (False,) if one.is_symmetric else (False, True)


def _running(cells: Floats) -> Floats:
    """Sum of cells (p, m - 1, ...) up to each node (p, m, ...)."""
    return np.concatenate([np.zeros_like(cells[:, :1]), np.cumsum(cells, axis=1)], axis=1)
