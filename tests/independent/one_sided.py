"""Reference by another method: pads without tension as a quadratic programme in the reactions.

The girder is a simple beam from its first to its last support that the reactions push up. Of all reactions in
balance with the loads that pull on no pad, the right ones have the least complementary energy

    1/2 int M^2 / EI dx + 1/2 sum f R^2 + sum s R.

M is integrated by Gauss between all loads and supports; the programme becomes a least distance problem, solved by
scipy's non-negative least squares (Lawson and Hanson 1974, Solving Least Squares Problems, ch. 23).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import nnls

from assess.girder import Girder
from assess.loads import LoadCase

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
_GAUSS = np.polynomial.legendre.leggauss(3)  # exact for the fourth power


class OneSided:
    """A girder whose supports turn freely, GA infinite, with some supports that take no tension.

    Parameters
    ----------
    girder : Girder
    compliance : (n,) m/kN, finite
    held_down : (n,)
    marks : x of all places where a load begins, stands or ends, m
    """

    def __init__(self, girder: Girder, compliance: Floats, held_down: Bools, marks: Floats) -> None:
        self.held_down, self.at, self.length = held_down, girder.support_positions, girder.length
        nodes = np.unique(np.clip(np.concatenate([girder.breakpoints, marks]), 0.0, self.length))
        half, middle = np.diff(nodes) / 2.0, (nodes[1:] + nodes[:-1]) / 2.0
        self.x = (middle[:, None] + half[:, None] * _GAUSS[0]).ravel()
        pieces = [piece for span in girder.spans for piece in span]
        of = np.clip(np.searchsorted(girder.breakpoints, self.x) - 1, 0, len(pieces) - 1)
        self.weight = (half[:, None] * _GAUSS[1]).ravel() / np.array([pieces[i].flexural for i in of])
        # reactions = own + carry @ inner, inner being those between the ends
        share = self.at[1:-1] / self.length
        n = self.at.size
        self.carry = np.zeros((n, n - 2))
        self.carry[0], self.carry[-1], self.carry[1:-1] = share - 1.0, -share, np.eye(n - 2)
        self.by_inner = -self.simple(self.at[1:-1]).T  # (nodes, n - 2)
        energy = self.by_inner.T @ (self.weight[:, None] * self.by_inner)
        self.compliance = compliance
        self.root = np.linalg.cholesky(energy + self.carry.T @ (compliance[:, None] * self.carry))

    def simple(self, a: Floats) -> Floats:
        """Moment (loads, nodes) of unit loads at a (loads,) on the simple beam."""
        low, high = np.minimum(a[:, None], self.x), np.maximum(a[:, None], self.x)
        return np.asarray(low * (self.length - high) / self.length)

    def reactions(self, loads: LoadCase, settlement: Floats) -> Floats:
        """Reactions (n,), kN."""
        own, moment = np.zeros(self.at.size), np.zeros(self.x.size)
        for x, p in loads.points:
            own[[0, -1]] += p * (1.0 - x / self.length), p * x / self.length
            moment += p * self.simple(np.array([x]))[0]
        for start, end, w in loads.uniforms:
            p, middle = w * (end - start), (end + start) / 2.0
            own[[0, -1]] += p * (1.0 - middle / self.length), p * middle / self.length
            on = np.clip(self.x - start, 0.0, end - start)
            moment += p * (1.0 - middle / self.length) * self.x - w * on * (self.x - start - on / 2.0)
        return self.solved(own, moment, settlement)

    def solved(self, own: Floats, moment: Floats, settlement: Floats) -> Floats:
        """Reactions (n,) from those of the simple beam (n,) and its moment (nodes,)."""
        if not self.carry.size:
            return own
        slope = self.by_inner.T @ (self.weight * moment)
        slope += self.carry.T @ (self.compliance * own + settlement)
        centre = np.linalg.solve(self.root, slope)
        free = ~self.held_down
        sides = np.linalg.solve(self.root, self.carry[free].T).T  # of what is >= 0, in terms of the distance
        inner = np.linalg.solve(self.root.T, least_distance(sides, sides @ centre - own[free]) - centre)
        return np.asarray(own + self.carry @ inner)


def least_distance(sides: Floats, least: Floats) -> Floats:
    """The shortest z (m,) with sides (c, m) z >= least (c,)."""
    length = np.linalg.norm(sides, axis=1)
    size = max(float(np.abs(least / length).max(initial=0.0)), 1e-300)
    e = np.concatenate([(sides / length[:, None]).T, (least / length / size)[None]])
    wanted = np.zeros(e.shape[0])
    wanted[-1] = 1.0
    dual, left = nnls(e, wanted) if e.shape[1] else (np.zeros(0), 1.0)
    residual = e @ dual - wanted
    assert left > 1e-9, "the girder tips"
    return np.asarray(-residual[:-1] / residual[-1] * size)
