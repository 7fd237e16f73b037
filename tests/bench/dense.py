"""The plain way, to measure against: the whole girder assembled and solved by numpy each time."""

from __future__ import annotations

import itertools
import time
from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from assess.girder import Girder

Floats = NDArray[np.float64]


class DenseGirder:
    """Hermite elements with nodes at supports, `also`, and at least every `step` m; two unknowns a node."""

    def __init__(self, girder: Girder, step: float, also: Floats | None = None) -> None:
        breaks = girder.breakpoints
        parts = [np.linspace(a, b, int(np.ceil((b - a) / step)) + 1) for a, b in itertools.pairwise(breaks)]
        extra = [] if also is None else [also]
        self.nodes = np.unique(np.round(np.concatenate(parts + extra), 9))
        self.h = np.diff(self.nodes)
        pieces = [piece for span in girder.spans for piece in span]
        middle = (self.nodes[:-1] + self.nodes[1:]) / 2.0
        self.ei = np.array([pieces[i].flexural for i in np.searchsorted(breaks, middle) - 1])
        self.at = 2 * np.array([int(np.argmin(np.abs(self.nodes - x))) for x in girder.support_positions])
        self.size = 2 * self.nodes.size
        h, one = self.h, np.ones_like(self.h)
        self.elements = (self.ei / h**3)[:, None, None] * np.moveaxis(
            np.array([
                [12 * one, 6 * h, -12 * one, 6 * h],
                [6 * h, 4 * h * h, -6 * h, 2 * h * h],
                [-12 * one, -6 * h, 12 * one, -6 * h],
                [6 * h, 2 * h * h, -6 * h, 4 * h * h],
            ]),
            2,
            0,
        )  # fmt: skip
        dofs = 2 * np.arange(h.size)[:, None] + np.arange(4)
        self._rows = np.repeat(dofs, 4, axis=1).ravel()
        self._columns = np.tile(dofs, (1, 4)).ravel()
        self.bare = self.assembled()

    def assembled(self) -> Floats:
        """The stiffness matrix without pads, by one scatter-add."""
        matrix = np.zeros((self.size, self.size))
        np.add.at(matrix, (self._rows, self._columns), self.elements.ravel())
        return matrix

    def solve(
        self, compliance: Floats, load: Floats, *, assemble: bool = False, factor: float = 1.0
    ) -> Floats:
        """Nodal displacements for loads (size,) or (size, m), of a girder `factor` times as stiff."""
        matrix = factor * (self.assembled() if assemble else self.bare)
        matrix[self.at, self.at] += 1.0 / compliance
        return np.linalg.solve(matrix, load)

    def element_loads(self, x: Floats, weight: Floats) -> Floats:
        """Fixed-end forces (elements, 4) of loads at x; those off the girder are left out."""
        on = (x >= 0.0) & (x <= self.nodes[-1])
        x, weight = x[on], weight[on]
        e = np.clip(np.searchsorted(self.nodes, x, side="right") - 1, 0, self.h.size - 1)
        fixed = np.zeros((self.h.size, 4))
        np.add.at(fixed, e, weight[:, None] * self.shapes(e, x))
        return fixed

    def vector(self, fixed: Floats) -> Floats:
        """Load vector (size,) of fixed-end forces."""
        load = np.zeros((self.nodes.size, 2))
        load[:-1] += fixed[:, :2]
        load[1:] += fixed[:, 2:]
        return load.ravel()

    def point_loads(self, x: Floats, weight: Floats) -> Floats:
        """Consistent load vector (size,) of loads at x."""
        return self.vector(self.element_loads(x, weight))

    def uniform_load(self, weight: float) -> Floats:
        """Load vector (size,) of a load per length all over."""
        h = self.h
        return self.vector(weight * np.stack([h / 2.0, h * h / 12.0, h / 2.0, -h * h / 12.0], axis=-1))

    def shapes(self, e: NDArray[np.intp], x: Floats) -> Floats:
        """Shape functions (m, 4) of element e at x."""
        h = self.h[e]
        s = (x - self.nodes[e]) / h
        return np.stack(
            [1 - 3 * s**2 + 2 * s**3, h * s * (1 - s) ** 2, 3 * s**2 - 2 * s**3, h * (s**3 - s**2)], axis=-1
        )

    def moments(self, u: Floats, fixed: Floats) -> Floats:
        """Moments at the left ends of all elements."""
        own = u[2 * np.arange(self.h.size)[:, None] + np.arange(4)]
        return np.einsum("ej,ej->e", self.elements[:, 1], own) - fixed[:, 1]


def seconds(run: Callable[[], object], repeat: int = 5) -> float:
    """Best time of several runs."""
    best = np.inf
    for _ in range(repeat):
        start = time.perf_counter()
        run()
        best = min(best, time.perf_counter() - start)
    return float(best)
