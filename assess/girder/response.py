"""Responses at any place on the girder: deflection, slope, moment, shear.

Downward deflection and sagging moment are positive; slope is the rotation of the cross-section, positive
where the girder goes down towards larger x; shear is dM/dx, so it is positive just right of a loaded support.
At an internal hinge the slope jumps, and `side` says which face is meant.
All values are exact for prismatic pieces: nothing is interpolated.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.girder.condensed import Condensed
from assess.loads import LoadCase

Floats = NDArray[np.float64]

RESPONSES = ("deflection", "slope", "moment", "shear")
REACTION = "reaction"
_GAUSS = np.polynomial.legendre.leggauss(2)  # exact for the cubics that influence lines are made of


@dataclass(frozen=True, kw_only=True)
class Places:
    """One kind of response at several places of a condensed girder.

    Attributes
    ----------
    quantity : one of RESPONSES, or "reaction" (`support_places`)
    x : (p,) m from the girder's left end
    side : (p,) -1 or +1, the face meant where x stands on a support or hinge or under a load
    span : (p,) the span it is in
    segment, local : (p,) the segment between supports or hinges, and the distance from its left end
    carry : (p, c) response per unit of the state of the segment's two ends: moments, and levels where there are hinges
    rows : (p, n) response per unit support drop: Y of y = y0 + Y d
    """

    condensed: Condensed
    quantity: str
    x: Floats
    side: NDArray[np.intp]
    span: NDArray[np.intp]
    segment: NDArray[np.intp]
    local: Floats
    carry: Floats
    rows: Floats

    def at(self, index: NDArray[np.intp]) -> Places:
        """Return some of the places."""
        return Places(
            condensed=self.condensed,
            quantity=self.quantity,
            x=self.x[index],
            side=self.side[index],
            span=self.span[index],
            segment=self.segment[index],
            local=self.local[index],
            carry=self.carry[index],
            rows=self.rows[index],
        )

    @property
    def along(self) -> Floats:
        """Distance (p,) from the left end of the span, m."""
        if not self.condensed.hinges.size:
            return self.local
        return np.asarray(
            self.condensed.nodes[self.segment] + self.local - self.condensed.positions[self.span]
        )

    @property
    def supports(self) -> NDArray[np.intp]:
        """The support (p,) each place stands on, for reactions."""
        return np.searchsorted(self.condensed.positions - self.condensed.tolerance, self.x, side="right") - 1

    def unit(self, a: Floats) -> Floats:
        """Response (p, m) to a unit load at each a (m,), supports held level: influence lines at d = 0."""
        a = np.asarray(a, dtype=np.float64)
        if self.quantity == REACTION:
            return np.asarray(self.condensed.unit_forces(a).T[self.supports])
        return self.unit_paired(np.broadcast_to(a, (self.x.size, a.size)))

    def unit_paired(self, a: Floats) -> Floats:
        """Response (p, m) where place p has its own load positions a[p]; 0 for loads off the girder."""
        if self.quantity == REACTION:
            return np.asarray(self.condensed.unit_forces(a)[np.arange(self.x.size), :, self.supports])
        ends = self.condensed.unit_ends(a)
        own = ends[np.arange(self.x.size), :, self.segment, :]
        return np.asarray((own * self.carry[:, None, :]).sum(axis=-1) + self.local_unit(a))

    def local_unit(self, a: Floats) -> Floats:
        """The part of `unit_paired` a simple segment carries, (p, m); 0 for loads in other segments."""
        result = np.zeros(a.shape)
        for j, one in enumerate(self.condensed.segments):
            here = self.segment == j
            places = a[here] - self.condensed.nodes[j]
            reach = self.condensed.tolerance
            within = (places >= -reach) & (places <= one.length + reach)
            if within.any():
                x, side = self.local[here, None], self.side[here, None]
                values = one.load_response(self.quantity, x, np.clip(places, 0.0, one.length), side)
                result[here] = np.where(within, values, 0.0)
        return result

    def held(self, loads: LoadCase) -> Floats:
        """Response (p,) to a load case, supports held level: y0."""
        return self._of(loads, self.unit_paired)

    def simple(self, loads: LoadCase) -> Floats:
        """Response (p,) to a load case carried span by span: every span on two hinged ends of its own."""
        if self.quantity == REACTION:
            return simple_forces_of(self.condensed, loads)[self.supports]
        return self._of(loads, self.local_unit)

    def _of(self, loads: LoadCase, unit: Callable[[Floats], Floats]) -> Floats:
        result = np.zeros(self.x.size)
        if loads.points:
            at, weight = np.array(loads.points, dtype=np.float64).T
            result += unit(np.broadcast_to(at, (self.x.size, at.size))) @ weight
        breaks = self.condensed.girder.breakpoints
        own = np.column_stack([np.broadcast_to(breaks, (self.x.size, breaks.size)), self.x])
        for start, end, intensity in loads.uniforms:
            # influence lines are cubic between the ends of pieces and the place itself
            nodes, weights = _gauss(own, start, end)
            result += intensity * (unit(nodes) * weights).sum(axis=1)
        return result


def _gauss(breaks: Floats, start: float, end: float) -> tuple[Floats, Floats]:
    """Two-point Gauss nodes and weights on [start, end] split at breaks (p, b): both (p, 2 b + 2)."""
    edges = np.sort(np.clip(breaks, start, end), axis=-1)
    ends = np.full((*edges.shape[:-1], 1), end)
    edges = np.concatenate([np.full_like(ends, start), edges, ends], axis=-1)
    half, middle = np.diff(edges) / 2.0, (edges[..., 1:] + edges[..., :-1]) / 2.0
    nodes = middle[..., None] + half[..., None] * _GAUSS[0]
    weights = half[..., None] * _GAUSS[1]
    shape = (*edges.shape[:-1], 2 * half.shape[-1])
    return nodes.reshape(shape), weights.reshape(shape)


def forces_of(condensed: Condensed, loads: LoadCase) -> Floats:
    """Support forces P (n,) of a load case with all supports held level, kN."""
    return _forces(condensed, loads, condensed.unit_forces)


def simple_forces_of(condensed: Condensed, loads: LoadCase) -> Floats:
    """Support forces (n,) of a load case carried span by span: the lever rule, kN."""
    return _forces(condensed, loads, condensed.simple_forces)


def _forces(condensed: Condensed, loads: LoadCase, unit: Callable[[Floats], Floats]) -> Floats:
    forces = np.zeros(condensed.n_supports)
    if loads.points:
        at, weight = np.array(loads.points, dtype=np.float64).T
        forces += weight @ unit(at)
    for start, end, intensity in loads.uniforms:
        nodes, weights = _gauss(condensed.girder.breakpoints[None, :], start, end)
        forces += intensity * (weights[0] @ unit(nodes[0]))
    return forces


def places(condensed: Condensed, quantity: str, x: Floats, side: NDArray[np.intp] | int = 1) -> Places:
    """Prepare one kind of response at places x (p,), m from the girder's left end.

    Raises
    ------
    ValueError
        for an unknown quantity, or a place outside the girder.
    """
    if quantity not in RESPONSES:
        raise ValueError(f"unknown response {quantity!r}; one of {', '.join(RESPONSES)}")
    x = np.atleast_1d(np.asarray(x, dtype=np.float64))
    if not np.all(condensed.carries(x)):
        raise ValueError(f"a place lies outside the girder of {condensed.positions[-1]:g} m")
    x = np.clip(x, 0.0, condensed.positions[-1])
    sides = np.broadcast_to(np.asarray(side, dtype=np.intp), x.shape)
    segment, local = condensed.locate(x, sides)
    carry = np.empty((x.size, 2))
    for j, one in enumerate(condensed.segments):
        here = segment == j
        carry[here] = one.end_response(quantity, local[here])
    carry, rows = _by_ends_and_drops(condensed, quantity, segment, local, carry)
    return Places(
        condensed=condensed,
        quantity=quantity,
        x=x,
        side=sides,
        span=condensed.span_of(x, sides) if condensed.hinges.size else segment,
        segment=segment,
        local=local,
        carry=carry,
        rows=rows,
    )


def _by_ends_and_drops(
    condensed: Condensed, quantity: str, segment: NDArray[np.intp], local: Floats, carry: Floats
) -> tuple[Floats, Floats]:
    """Response per unit of the segment's end state (p, c) and per unit support drop (p, n)."""
    lengths = np.diff(condensed.nodes)[segment]
    shares = np.zeros((local.size, 2))
    if quantity == "deflection":
        shares = np.stack([1.0 - local / lengths, local / lengths], axis=-1)
    elif quantity == "slope":
        shares = np.stack([-1.0 / lengths, 1.0 / lengths], axis=-1)
    if condensed.hinges.size:
        carry = np.concatenate([carry, shares], axis=1)
        return carry, np.einsum("pi,pin->pn", carry, condensed.state_by_drop[segment])
    rigid = np.zeros((local.size, condensed.n_supports))
    np.put_along_axis(rigid, segment[:, None] + np.arange(2), shares, axis=1)
    return carry, np.einsum("pi,pin->pn", carry, condensed.state_by_drop[segment]) + rigid


def support_places(condensed: Condensed) -> Places:
    """Prepare the reactions of all supports (n,) as responses: R = P - K d, so Y is -K."""
    x, n = condensed.positions, condensed.n_supports
    side = np.ones(n, dtype=np.intp)
    segment, local = condensed.locate(x, side)
    return Places(
        condensed=condensed,
        quantity=REACTION,
        x=x,
        side=side,
        span=condensed.span_of(x, side),
        segment=segment,
        local=local,
        carry=np.zeros((n, condensed.state_by_load.shape[1])),
        rows=-condensed.K,
    )
