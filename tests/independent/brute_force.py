"""Reference by another method: a train rolled over a finite element girder in steps of one millimetre.

Hermite elements with a node at every support, end of a piece and station, with two slopes at a hinge; a load inside
an element enters by its exact fixed-end forces. One inverse of the assembled girder, no condensation, and every
millimetre of the girder is a load position.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.girder import Girder
from assess.loads import Train

Floats = NDArray[np.float64]
MILLIMETRE = 1e-3


@dataclass(frozen=True, kw_only=True)
class Lines:
    """Influence lines on a grid of whole millimetres.

    `shear` is (p, 2, 2, m): the left and the right face of the station, and with a load that stands at the
    station taken beyond it and before it.
    """

    moment: Floats
    shear: Floats
    deflection: Floats
    reaction: Floats


def influence_lines(girder: Girder, compliance: Floats, stations: Floats) -> Lines:
    """Influence lines of every station (p,) and support (n,) for loads at 0, 1, 2 ... mm; all pads yield."""
    breaks = np.round(girder.breakpoints, 6)
    nodes = np.unique(np.concatenate([breaks, np.round(stations, 6)]))
    pieces = [piece for span in girder.spans for piece in span]
    h = np.diff(nodes)
    ei = np.array([pieces[i].flexural for i in np.searchsorted(breaks, nodes[:-1] + h / 2.0) - 1])
    elements = np.array([_element(e, length) for e, length in zip(ei, h, strict=True)])
    level = 2 * np.arange(nodes.size) + np.searchsorted(
        np.round(girder.hinges, 6), nodes
    )  # one more past a hinge
    parted = np.isin(nodes, np.round(girder.hinges, 6))
    own = np.stack(
        [level[:-1], level[:-1] + 1 + parted[:-1], level[1:], level[1:] + 1], axis=1
    )  # (elements, 4)
    size = int(level[-1]) + 2
    matrix = np.zeros((size, size))
    for e, k in enumerate(elements):
        matrix[np.ix_(own[e], own[e])] += k
    at = level[np.searchsorted(nodes, np.round(girder.support_positions, 6))]
    matrix[at, at] += 1.0 / compliance
    count = round(girder.length / MILLIMETRE) + 1
    a = np.minimum(np.arange(count) * MILLIMETRE, nodes[-1])
    inside = np.clip(np.searchsorted(nodes, a, side="right") - 1, 0, h.size - 1)
    shape = _shapes(a - nodes[inside], h[inside])  # (4, m)
    load = np.zeros((size, count))
    for i in range(4):
        load[own[inside, i], np.arange(count)] += shape[i]
    u = np.linalg.solve(matrix, load)
    ends = np.stack([elements[e] @ u[own[e]] for e in range(h.size)])  # (elements, 4, m)
    ends[inside, :, np.arange(count)] -= shape.T
    where = np.searchsorted(nodes, np.round(stations, 6))
    right = np.minimum(where, h.size - 1)
    left = np.maximum(where - 1, 0)
    moment = np.where((where < h.size)[:, None], ends[right, 1], -ends[left, 3])
    shear = np.stack([ends[left, 2], -ends[right, 0]], axis=1)
    before = np.where(np.isclose(a[None, :], stations[:, None], rtol=0.0, atol=1e-9), 1.0, 0.0)
    # a load on a node is taken into the element beyond it, but there is none beyond the last
    last = before * (where == h.size)[:, None]
    shear = np.stack([shear + last[:, None, :], shear + (last - before)[:, None, :]], axis=2)
    shear[where == 0, 0] = 0.0
    shear[where == h.size, 1] = 0.0
    return Lines(moment=moment, shear=shear, deflection=u[level[where]], reaction=u[at] / compliance[:, None])


def roll(line: Floats, train: Train) -> tuple[Floats, Floats]:
    """Greatest and least sum of axles over an influence line (..., m), both running directions, 0 included."""
    high = np.zeros(line.shape[:-1])
    low = np.zeros(line.shape[:-1])
    for offsets, loads in ((train.offsets, train.loads), (train.length - train.offsets, train.loads)):
        steps = np.round(offsets / MILLIMETRE).astype(int)
        m = line.shape[-1]
        total = np.zeros((*line.shape[:-1], m + steps.max()))
        for step, load in zip(steps, loads, strict=True):
            total[..., step : step + m] += load * line
        high = np.maximum(high, total.max(axis=-1))
        low = np.minimum(low, total.min(axis=-1))
    return high, low


def _element(ei: float, h: float) -> Floats:
    return np.array([
        [12.0, 6.0 * h, -12.0, 6.0 * h],
        [6.0 * h, 4.0 * h * h, -6.0 * h, 2.0 * h * h],
        [-12.0, -6.0 * h, 12.0, -6.0 * h],
        [6.0 * h, 2.0 * h * h, -6.0 * h, 4.0 * h * h],
    ]) * (ei / h**3)  # fmt: skip


def _shapes(t: Floats, h: Floats) -> Floats:
    s = t / h
    return np.stack([
        1.0 - 3.0 * s**2 + 2.0 * s**3,
        h * (s - 2.0 * s**2 + s**3),
        3.0 * s**2 - 2.0 * s**3,
        h * (s**3 - s**2),
    ])  # fmt: skip
