"""An alternative of a load model in whole steps of a lattice, and the search for its worst place.

Everything here runs over p places and all nodes at once and knows no supports: it gets influence lines and gives back
where the loads stand. A search looks for the greatest sum; the least is the greatest of the lines with the other sign.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.girder.lattice import Lines
from assess.loads import Alternative

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

NOWHERE = -(10**9)  # a node that is off every girder


@dataclass(frozen=True, kw_only=True)
class Pattern:
    """An alternative with its distances in whole steps.

    Attributes
    ----------
    source : the Alternative
    axles, loads : (q,) steps behind the leading axle, kN
    blocks : (start, end, kN/m) in steps; end None for an unlimited part
    second, second_loads : (r,) the second group, empty if there is none
    least, most : steps from the last axle of the first group to the leading axle of the second; most None: unlimited
    clear : steps outside the end axles without the adverse uniform part; None: it may stand anywhere
    """

    source: Alternative
    axles: Ints
    loads: Floats
    blocks: tuple[tuple[int, int | None, float], ...]
    second: Ints
    second_loads: Floats
    least: int
    most: int | None
    clear: int | None

    @property
    def length(self) -> int:
        """Steps from the first to the last axle of the first group."""
        return int(self.axles[-1]) if self.axles.size else 0

    @property
    def reach(self) -> int:
        """Steps the leading axle runs past the girder until nothing changes any more."""
        ends = [self.length, *(start for start, _, _ in self.blocks)]
        ends += [end for _, end, _ in self.blocks if end is not None]
        if self.second.size and not self.source.second_other:
            ends.append(self.length + (self.least if self.most is None else self.most) + int(self.second[-1]))
        return max(ends) + (self.clear or 0)

    @property
    def is_symmetric(self) -> bool:
        """Whether it is the same seen from the other side."""
        if self.second.size:
            return self.source.second_other
        turned = self.length - self.axles[::-1]
        if not (np.array_equal(turned, self.axles) and np.array_equal(self.loads[::-1], self.loads)):
            return False
        if not self.blocks:
            return True
        if self.axles.size or any(end is None for _, end, _ in self.blocks):
            return False
        last = max(end for _, end, _ in self.blocks if end is not None)
        mirrored = sorted((last - (end or 0), last - start, w) for start, end, w in self.blocks)
        return mirrored == sorted((start, end or 0, w) for start, end, w in self.blocks)


def pattern(alternative: Alternative, step: float) -> Pattern:
    """Put an alternative on a lattice whose step divides all its distances."""

    def steps(length: float) -> int:
        return round(length / step)

    second = alternative.second
    return Pattern(
        source=alternative,
        axles=np.array([steps(d) for d, _ in alternative.axles], dtype=np.intp),
        loads=np.array([load for _, load in alternative.axles], dtype=np.float64),
        blocks=tuple(
            (steps(b.start), None if np.isinf(b.end) else steps(b.end), b.intensity)
            for b in alternative.blocks
        ),
        second=np.array([steps(d) for d, _ in second.axles] if second else [], dtype=np.intp),
        second_loads=np.array([load for _, load in second.axles] if second else [], dtype=np.float64),
        least=steps(second.least) if second else 0,
        most=None if second is None or np.isinf(second.most) else steps(second.most),
        clear=None if alternative.clear is None else steps(alternative.clear),
    )


@dataclass(frozen=True, kw_only=True)
class View:
    """Influence lines as a search sees them: the sign put in, and mirrored where the load runs the other way.

    y, running, positive : (p, m); span : (p, m) the span each node is in
    """

    y: Floats
    running: Floats
    positive: Floats
    span: Ints

    def at(self, rows: Ints) -> View:
        """Return the view of some of the places."""
        return View(
            y=self.y[rows], running=self.running[rows], positive=self.positive[rows], span=self.span[rows]
        )


def view(lines: Lines, spans: Ints, sign: float, *, beyond: bool, mirrored: bool) -> View:
    """Look at lines from one side, with a load at the home node just before or just beyond it.

    Parameters
    ----------
    lines : Lines
    spans : (p, m) the span each node is in
    sign : 1 for the greatest response, -1 for the least
    """
    y, running = sign * (lines.beyond if beyond else lines.before), sign * lines.running
    positive = lines.positive(sign)
    if not mirrored:
        return View(y=y, running=running, positive=positive, span=spans)
    return View(
        y=y[:, ::-1],
        running=running[:, -1:] - running[:, ::-1],
        positive=positive[:, -1:] - positive[:, ::-1],
        span=spans[:, ::-1],
    )


@dataclass(frozen=True, kw_only=True)
class Found:
    """The worst places: its sum, and where the leading axle of each group stands, nodes in the view, all (p,)."""

    value: Floats
    lead: Ints
    second: Ints


def search(one: Pattern, seen: View, on_axles: Floats, on_uniform: Floats) -> Found:
    """Find the greatest sum at each place.

    Parameters
    ----------
    one : Pattern
    seen : View
    on_axles, on_uniform : (p,) factors on axles and on uniform parts, the allowance in them
    """
    count, m = seen.y.shape
    total = np.zeros((count, m + one.reach))
    axle = np.maximum(seen.y, 0.0) if one.source.leave_out else seen.y
    for offset, load in zip(one.axles, one.loads, strict=True):
        total[:, offset : offset + m] += load * axle
    behind = _group(one, seen)
    if one.second.size:
        total += _follow(one, seen, behind, total.shape[1])
    total *= on_axles[:, None]
    k = np.arange(total.shape[1])
    for start, end, intensity in one.blocks:
        inside = _upto(seen.running, k - start)
        if end is not None:
            inside = inside - _upto(seen.running, k - end)
        total += (intensity * on_uniform)[:, None] * inside
    if one.source.uniform:
        adverse = seen.positive[:, -1:]
        if one.clear is not None:
            back, front = k - one.length - one.clear, k + one.clear
            adverse = adverse - _upto(seen.positive, front) + _upto(seen.positive, back)
        total += (one.source.uniform * on_uniform)[:, None] * adverse
    lead = total.argmax(axis=1)
    value = np.take_along_axis(total, lead[:, None], axis=1)[:, 0]
    return Found(value=value, lead=lead, second=_second_at(one, seen, behind, lead))


def _upto(running: Floats, k: Ints) -> Floats:
    """Running values at nodes k, which may lie off either end."""
    return running[:, np.clip(k, 0, running.shape[1] - 1)]


def _group(one: Pattern, seen: View) -> Floats:
    """Sum of the second group for each of its leading nodes, (p, m + its length)."""
    count, m = seen.y.shape
    if not one.second.size:
        return np.zeros((count, 0))
    total = np.zeros((count, m + int(one.second[-1])))
    for offset, load in zip(one.second, one.second_loads, strict=True):
        total[:, offset : offset + m] += load * seen.y
    return total


def _follow(one: Pattern, seen: View, behind: Floats, width: int) -> Floats:
    """Best of the second group for every leading node of the first, (p, width)."""
    if one.source.second_other:
        best = _elsewhere(seen, behind)
        return np.pad(best, ((0, 0), (0, width - best.shape[1])))
    padded = np.pad(behind, ((0, 0), (0, max(0, width - behind.shape[1]))))
    if one.most is None:
        best = np.maximum.accumulate(np.maximum(padded, 0.0), axis=1)
    else:
        best = _window(padded, one.most - one.least + 1)
    shift = one.length + one.least
    result = np.zeros((behind.shape[0], width))
    result[:, shift:] = best[:, : width - shift]
    return result


def _window(values: Floats, width: int) -> Floats:
    """Greatest of the last `width` values at each column; 0 stands before the first."""
    best, reach = values.copy(), 1
    while reach < width:
        shift = min(reach, width - reach)
        earlier = np.zeros_like(best)
        earlier[:, shift:] = best[:, :-shift]
        best = np.maximum(best, earlier)
        reach += shift
    return best


def _elsewhere(seen: View, behind: Floats) -> Floats:
    """Best single axle in another span than each node's, (p, m), at least 0."""
    spans = int(seen.span.max()) + 1
    tops = np.zeros((seen.span.shape[0], spans))
    for j in range(spans):
        tops[:, j] = np.where(seen.span == j, behind, 0.0).max(axis=1)
    first = tops.argmax(axis=1)
    highest = tops.max(axis=1)
    tops[np.arange(first.size), first] = 0.0
    next_best = tops.max(axis=1)
    best: Floats = np.where(seen.span == first[:, None], next_best[:, None], highest[:, None])
    return best


def _second_at(one: Pattern, seen: View, behind: Floats, lead: Ints) -> Ints:
    """Leading node (p,) of the second group where the first stands at `lead`; NOWHERE where it is better off."""
    if not one.second.size:
        return np.full(lead.size, NOWHERE)
    width = behind.shape[1]
    index = np.arange(lead.size)
    if one.source.second_other:
        own = seen.span[index, np.minimum(lead, seen.span.shape[1] - 1)]
        values = np.where(seen.span == own[:, None], 0.0, behind)
        best = values.argmax(axis=1)
        return np.where(values[index, best] > 0.0, best, NOWHERE)
    most = one.least + width + one.reach if one.most is None else one.most
    nodes = (lead - one.length)[:, None] - np.arange(one.least, most + 1)
    inside = (nodes >= 0) & (nodes < width)
    values = np.where(inside, np.take_along_axis(behind, np.clip(nodes, 0, width - 1), axis=1), 0.0)
    best = values.argmax(axis=1)
    return np.where(inside[index, best], nodes[index, best], NOWHERE)
