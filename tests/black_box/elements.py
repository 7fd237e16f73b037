"""The girder by an assembled stiffness matrix: two-node elements with shear, nodes wherever something happens.

Nothing is condensed and nothing is shared with the program: every set of supports is a new sparse factorisation.
"""

from __future__ import annotations

import itertools
from dataclasses import dataclass

import numpy as np
from scipy import sparse
from scipy.sparse.linalg import splu

from tests.black_box.describe import Girder, Section

Array = np.ndarray
_DELTA = 1e-7  # m, "just before" and "just past" a place


def shapes(xi: Array, length: Array, phi: Array) -> Array:
    """Shape functions of an element with shear, (..., 4)."""
    c = 1.0 / (1.0 + phi)
    bump = 0.5 * phi * (xi - xi**2)
    return np.stack(
        (
            c * (1 - 3 * xi**2 + 2 * xi**3 + phi * (1 - xi)),
            c * length * (xi - 2 * xi**2 + xi**3 + bump),
            c * (3 * xi**2 - 2 * xi**3 + phi * xi),
            c * length * (-(xi**2) + xi**3 - bump),
        ),
        axis=-1,
    )


@dataclass
class Row:
    """A response as a row on the displacements, plus what a load inside element `element` adds by itself."""

    kind: str
    row: Array  # (dofs,)
    element: int = -1
    local: int = 0
    sign: float = 0.0


class Line:
    """A girder line cut into elements; `extra` are places that must be nodes, `h` the longest element."""

    def __init__(
        self, girder: Girder, sections: dict[str, Section], extra: Array | tuple = (), h: float = 1.0
    ):
        pieces = girder.pieces()
        ends = [x for a, b, _ in pieces for x in (a, b)]
        loads = [x for _, a, b in girder.permanent for x in (a, b) if x is not None]
        total = float(girder.at[-1])
        raw = np.concatenate((ends, girder.at, loads, np.asarray(extra, dtype=float)))
        must = np.unique(np.round(np.clip(raw, 0.0, total), 9))
        parts = [
            np.linspace(a, b, max(1, int(np.ceil((b - a) / h - 1e-6))) + 1)[:-1]
            for a, b in itertools.pairwise(must)
        ]
        self.x = np.concatenate((*parts, [must[-1]]))
        self.girder = girder
        self.length = np.diff(self.x)
        middle = 0.5 * (self.x[1:] + self.x[:-1])
        owner = np.searchsorted([b for _, b, _ in pieces], middle)
        self.section = [pieces[i][2] for i in owner]
        self.ei = np.array([sections[name].EI for name in self.section])
        ga = np.array([sections[name].GA for name in self.section])
        self.phi = 12 * self.ei / (ga * self.length**2)
        self.ke = self._element_matrices()
        n = len(self.x)
        self.dofs = 2 * n
        self.map = np.stack([2 * np.arange(n - 1) + j for j in range(4)], axis=-1)
        rows = np.repeat(self.map, 4, axis=1).ravel()
        cols = np.tile(self.map, (1, 4)).ravel()
        self.k0 = sparse.csc_matrix((self.ke.ravel(), (rows, cols)), shape=(2 * n, 2 * n))
        self.seat = np.array([self.node(x) for x in girder.at])

    def _element_matrices(self) -> Array:
        L, p = self.length, self.phi
        one = np.ones_like(L)
        k = np.array([
            [12 * one, 6 * L, -12 * one, 6 * L],
            [6 * L, (4 + p) * L**2, -6 * L, (2 - p) * L**2],
            [-12 * one, -6 * L, 12 * one, -6 * L],
            [6 * L, (2 - p) * L**2, -6 * L, (4 + p) * L**2],
        ])  # fmt: skip
        return np.moveaxis(k * (self.ei / (L**3 * (1 + p))), -1, 0)

    def node(self, x: float) -> int:
        """The node at x; there must be one."""
        i = int(np.argmin(abs(self.x - x)))
        assert abs(self.x[i] - x) < 1e-6, (x, self.x[i])
        return i

    # --- responses ---

    def row(self, kind: str, x: float, side: int = -1) -> Row:
        """Deflection "d", rotation "r", moment "m" or shear "v" at a node; `side` -1 just left of it, +1 just right."""
        n = self.node(x)
        row = np.zeros(self.dofs)
        if kind in "dr":
            row[2 * n + (kind == "r")] = 1.0
            return Row(kind, row)
        if n == 0:
            side = 1
        if n == len(self.x) - 1:
            side = -1
        e = n - 1 if side < 0 else n
        # end forces of the element: f = k u - (what loads inside it do when its ends are held)
        local, sign = {("m", -1): (3, -1.0), ("m", 1): (1, 1.0), ("v", -1): (2, 1.0), ("v", 1): (0, -1.0)}[
            kind, side
        ]
        row[self.map[e]] = sign * self.ke[e, local]
        return Row(kind, row, e, local, -sign)

    def force(
        self, points: list[tuple[float, float]], uniforms: list[tuple[float, float, float]] = ()
    ) -> tuple[Array, Array]:
        """Load vector (dofs,) and the held-end forces of every element (elements, 4); loads downward."""
        held = np.zeros((len(self.length), 4))
        for w, a, b in uniforms:
            inside = (self.x[:-1] > a - 1e-7) & (self.x[1:] < b + 1e-7)
            L = self.length
            held += np.where(inside, w, 0.0)[:, None] * np.stack(
                (L / 2, L**2 / 12, L / 2, -(L**2) / 12), axis=-1
            )
        direct = np.zeros(len(self.x))
        for x, p in points:
            n = int(np.argmin(abs(self.x - x)))
            if abs(self.x[n] - x) < 1e-9:  # straight into the node: a load over a support shears no girder
                direct[n] += p
                continue
            e = int(np.clip(np.searchsorted(self.x, x) - 1, 0, len(self.length) - 1))
            held[e] += p * shapes(np.array((x - self.x[e]) / self.length[e]), self.length[e], self.phi[e])
        f = np.zeros(self.dofs)
        np.add.at(f, self.map, held)
        f[::2] += direct
        return f, held

    def permanent(self) -> tuple[Array, Array]:
        """The permanent load of the girder."""
        points = [(a, w) for w, a, b in self.girder.permanent if b is None]
        uniforms = [(w, a, b) for w, a, b in self.girder.permanent if b is not None]
        f, held = self.force(points, uniforms)
        return f, held

    def held_up(self, stiffness: Array) -> Held:
        """The line on supports of these stiffnesses, kN/m; inf does not yield."""
        return Held(self, np.asarray(stiffness, dtype=float))


class Held:
    """A line on its supports."""

    def __init__(self, line: Line, stiffness: Array):
        self.line, self.stiffness = line, stiffness
        rotation = np.array([s.rotation for s in line.girder.supports])
        rigid = np.isinf(stiffness)
        diagonal = np.zeros(line.dofs)
        diagonal[2 * line.seat] = np.where(rigid, 0.0, stiffness)
        diagonal[2 * line.seat + 1] = np.where(np.isinf(rotation), 0.0, rotation)
        self.k = (line.k0 + sparse.diags(diagonal, format="csc")).tocsc()
        fixed = np.concatenate((2 * line.seat[rigid], 2 * line.seat[np.isinf(rotation)] + 1)).astype(int)
        self.free = np.setdiff1d(np.arange(line.dofs), fixed)
        self.lu = splu(self.k[self.free][:, self.free].tocsc())

    def displacements(self, force: Array, drop: Array | None = None) -> Array:
        """Displacements (dofs,) under a load vector and seats that have dropped."""
        seat = 2 * self.line.seat
        drop = np.zeros(len(seat)) if drop is None else drop
        u = np.zeros(self.line.dofs)
        f = force.copy()
        rigid = np.isinf(self.stiffness)
        f[seat[~rigid]] += self.stiffness[~rigid] * drop[~rigid]
        u[seat[rigid]] = drop[rigid]
        f -= self.k @ u
        u[self.free] = self.lu.solve(f[self.free])
        return u

    def reaction_row(self, i: int) -> Row:
        """The reaction of support i (without its own drop): stiffness times movement, or what the pin holds."""
        row = np.zeros(self.line.dofs)
        seat = 2 * self.line.seat[i]
        if np.isinf(self.stiffness[i]):
            row[:] = -self.line.k0[[seat]].toarray()[0]
            return Row("pin", row, local=seat, sign=1.0)
        row[seat] = self.stiffness[i]
        return Row("d", row)

    def reactions(self, force: Array, drop: Array | None = None) -> Array:
        """Upward reactions (supports,)."""
        u = self.displacements(force, drop)
        return (force - self.line.k0 @ u)[2 * self.line.seat]

    def value(self, row: Row, force: Array, held: Array, drop: Array | None = None) -> float:
        """One response to standing loads."""
        own = row.sign * held[row.element, row.local] if row.element >= 0 else 0.0
        return float(row.row @ self.displacements(force, drop) + own)

    def adjoint(self, rows: list[Row]) -> Array:
        """Influence on every degree of freedom, (dofs, rows)."""
        z = np.zeros((self.line.dofs, len(rows)))
        z[self.free] = self.lu.solve(np.stack([r.row for r in rows], axis=-1)[self.free], trans="T")
        for j, r in enumerate(rows):
            if r.kind == "pin":
                z[r.local, j] += 1.0
        return z

    def influence(self, row: Row, a: Array, z: Array | None = None) -> Array:
        """The response to a unit load at every place a; zero off the girder."""
        line = self.line
        z = self.adjoint([row])[:, 0] if z is None else z
        a = np.asarray(a, dtype=float)
        on = (a >= -1e-9) & (a <= line.x[-1] + 1e-9)
        e = np.clip(np.searchsorted(line.x, a, side="right") - 1, 0, len(line.length) - 1)
        s = shapes((a - line.x[e]) / line.length[e], line.length[e], line.phi[e])
        y = (s * z[line.map[e]]).sum(axis=-1)
        if row.element >= 0:
            y = y + np.where(e == row.element, row.sign * s[..., row.local], 0.0)
        return np.where(on, y, 0.0)


def coupled(axles: list[tuple[float, float]], count: int, pitch: float) -> tuple[Array, Array]:
    """Offsets behind the leading axle and loads of coupled vehicles."""
    d = np.array([a[0] for a in axles])
    p = np.array([a[1] for a in axles])
    return (pitch * np.arange(count)[:, None] + d).ravel(), np.tile(p, count)


def rolled(
    held: Held, row: Row, x: float | None, offsets: Array, loads: Array, step: float = 0.05
) -> tuple[float, float]:
    """Least and greatest response while a train is rolled over the girder both ways in small steps."""
    total = held.line.x[-1]
    z = held.adjoint([row])[:, 0]
    low = high = 0.0
    stops = list(held.line.girder.at)
    stops += [] if x is None else [x]
    for way in (1.0, -1.0):
        off = -way * offsets
        lead = np.arange(0.0, total + offsets.max() + step, step)
        lead = lead if way > 0 else total - lead
        special = [s - o + d for s in stops for o in off for d in (0.0, -_DELTA, _DELTA)]
        lead = np.concatenate((lead, special))
        y = held.influence(row, lead[:, None] + off, z) @ loads
        low, high = min(low, float(y.min())), max(high, float(y.max()))
    return low, high
