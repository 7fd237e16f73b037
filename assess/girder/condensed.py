"""The condensed girder: everything but the support levels eliminated, once.

    support forces   R(d) = P - K d              any response   y(d) = y0 + Y d

The segments' flexibilities are exact (`span.py`); rotations and moments (`elimination.py`) and the levels
of internal hinges (`hinged.py`) are eliminated, and what is left are the n support levels d. Pads then
cost one n x n solve per stiffness set, batched over any leading dimensions:

    d = s + F R,   (I + K F) R = P - K s,   F = diag(f).

Source of the method: stiffness method with static condensation (any text on matrix structural
analysis); Maxwell-Betti for the load terms.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.linalg.lapack import dgesv

from assess.girder.batch import WORTHWHILE, solve_many
from assess.girder.elimination import chord_rotations, continuous
from assess.girder.hinged import hinged
from assess.girder.model import REACH, Girder
from assess.girder.span import SimpleSpan

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class SupportState:
    """What the supports do: reaction (..., n) kN upward on the girder, displacement (..., n) m downward."""

    reaction: Floats
    displacement: Floats


@dataclass(frozen=True)
class SupportDerivatives:
    """Exact derivatives of a support state.

    Attributes
    ----------
    reaction_by_log_stiffness, displacement_by_log_stiffness : (..., n, n)
        row: support whose reaction / level changes; column: ln k of which pad. Zero for f = 0.
    reaction_by_settlement, displacement_by_settlement : (..., n, n)
        column: seat that drops.
    """

    reaction_by_log_stiffness: Floats
    displacement_by_log_stiffness: Floats
    reaction_by_settlement: Floats
    displacement_by_settlement: Floats


class Condensed:
    """A girder in its condensed form: only the levels of the real supports are left.

    Internal hinges are nodes of the girder beside the supports; their levels are eliminated with the moments
    (`elimination.py`, `hinged.py`). What lies between two nodes is a segment, a whole span where there is no hinge.

    Attributes
    ----------
    girder : Girder
    positions : (n,) x of the supports, m
    nodes : (segments + 1,) x of supports and hinges, m
    hinges : (hinges,) index of each hinge among the nodes
    segments : list of SimpleSpan
    K : (n, n) condensed stiffness, kN/m, symmetric positive semidefinite
    state_by_load : (segments, c, segments, 2) segment-end state per end rotation a load gives the simple segment: the
        two end moments, and where there are hinges (c = 4) the levels of the two ends
    state_by_drop : (segments, c, n) segment-end state per unit support drop

    Raises
    ------
    ValueError
        where hinges make a mechanism of the girder.
    """

    def __init__(self, girder: Girder) -> None:
        self.girder = girder
        self.segments = [SimpleSpan(pieces) for pieces in girder.segments]
        self.positions, self.nodes = girder.support_positions, girder.nodes
        self.tolerance = REACH * girder.length
        self.hinges: NDArray[np.intp] = np.searchsorted(self.nodes, girder.hinges)
        self._supports = np.searchsorted(self.nodes, self.positions)
        self._lengths = np.diff(self.nodes)
        hinged_one = self.hinges.size > 0
        ends = hinged(girder, self.segments, self.hinges) if hinged_one else continuous(girder, self.segments)
        self.state_by_load, self.state_by_drop, self.K = ends.by_load, ends.by_drop, ends.stiffness
        self._by_hinge = ends.by_hinge
        lengths = np.array([one.length for one in self.segments])
        self._by_drop = np.ascontiguousarray(chord_rotations(lengths)[:, :, self._supports])
        self._pieces = sum(len(one.breaks) - 1 for one in self.segments)
        cubics = np.concatenate([one.end_cubics for one in self.segments])
        self._cubics = np.ascontiguousarray(np.moveaxis(cubics, 0, -1))  # (2, 4, pieces)
        # a stiffness of the girder's own size; K itself is nothing where the girder is statically determinate
        sizes = np.array([np.trace(one.stiffness) for one in self.segments]) / lengths**2
        self._scale = float(np.median(sizes) if hinged_one else np.mean(sizes))

    @property
    def n_supports(self) -> int:
        """Number of supports."""
        return self.girder.n_supports

    # places ---------------------------------------------------------------------------------

    def locate(self, x: Floats, side: NDArray[np.intp] | int = 1) -> tuple[NDArray[np.intp], Floats]:
        """Segment index and distance from its left end; `side` -1 / +1 picks the face at a support or hinge."""
        segment = self._between(self.nodes, x, side)
        start, end = self.nodes[segment], self.nodes[segment + 1]
        return segment, np.clip(x, start, end) - start

    def span_of(self, x: Floats, side: NDArray[np.intp] | int = 1) -> NDArray[np.intp]:
        """Span index (...) at x; `side` -1 / +1 picks the face at a support."""
        return self._between(self.positions, x, side)

    def _between(self, edges: Floats, x: Floats, side: NDArray[np.intp] | int) -> NDArray[np.intp]:
        faces = np.broadcast_to(np.asarray(side), np.shape(x))
        right = np.searchsorted(edges - self.tolerance, x, side="right") - 1
        left = np.searchsorted(edges + self.tolerance, x, side="left") - 1
        return np.clip(np.where(faces > 0, right, left), 0, edges.size - 2)

    def carries(self, a: Floats) -> NDArray[np.bool_]:
        """Tell which x (...) are on the girder."""
        return np.asarray((a >= -self.tolerance) & (a <= self.positions[-1] + self.tolerance))

    # loads, supports held level ---------------------------------------------------------------

    def ends_under(self, rotations: Floats, lever: Floats | None = None) -> Floats:
        """Segment-end state (..., segments, c) of what turns the ends of simple segments and loads the hinges.

        Parameters
        ----------
        rotations : (..., segments, 2) rotations that the ends of each segment would take as a simple span, rad, in the
            sense of sagging end moments: of a load, or of a curvature imposed by a difference of temperature
        lever : (..., nodes) lever-rule loads on the nodes, kN; those on hinges are carried on
        """
        flat = rotations.reshape(*rotations.shape[:-2], -1)
        ends = flat @ self.state_by_load.reshape(-1, flat.shape[-1]).T
        if lever is not None and self.hinges.size:
            ends = ends + lever[..., self.hinges] @ self._by_hinge.reshape(-1, self.hinges.size).T
        return np.asarray(ends.reshape(*flat.shape[:-1], len(self.segments), -1))

    def unit_ends(self, a: Floats) -> Floats:
        """Segment-end state (..., segments, c) of a unit load at a (...), supports level; 0 off the girder."""
        a = np.asarray(a, dtype=np.float64)
        segment, local = self.locate(a)
        on = self.carries(a)
        ends = np.zeros((*a.shape, *self.state_by_load.shape[:2]))
        for j, one in enumerate(self.segments):
            here = on & (segment == j)
            if here.any():
                rotation = one.end_deflection(local[here])
                ends[here] = np.einsum("sib,pb->psi", self.state_by_load[:, :, j, :], rotation)
        if self.hinges.size:
            ends += np.einsum("sih,...h->...si", self._by_hinge, self._unit_lever(a)[..., self.hinges])
        return ends

    def unit_forces(self, a: Floats) -> Floats:
        """Support forces (..., n) under a unit load at a (...), supports held level; 0 off the girder.

        By Mueller-Breslau the influence lines of the reactions of the girder on unyielding supports.
        """
        a = np.asarray(a, dtype=np.float64)
        return self.forces_from(self.unit_ends(a), self._unit_lever(a))

    def simple_forces(self, a: Floats) -> Floats:
        """Lever-rule support forces (..., n) of a unit load at a (...), as if every span were simple.

        Raises
        ------
        ValueError
            for a girder with internal hinges, whose spans do not stand by themselves.
        """
        if self.hinges.size:
            raise ValueError("the spans of a girder with internal hinges do not stand by themselves")
        return self._unit_lever(np.asarray(a, dtype=np.float64))

    def _unit_lever(self, a: Floats) -> Floats:
        """Lever-rule forces (..., nodes) of a unit load at a (...), as if every segment were a simple span."""
        segment, local = self.locate(a)
        on = self.carries(a)
        lengths = self._lengths[segment]
        share = np.where(on, local / lengths, 0.0)
        forces = np.zeros((*a.shape, self.nodes.size))
        np.put_along_axis(forces, segment[..., None], (on - share)[..., None], axis=-1)
        np.put_along_axis(forces, segment[..., None] + 1, share[..., None], axis=-1)
        return forces

    def row_state(self, axles: Floats, loads: Floats) -> tuple[Floats, Floats]:
        """Segment-end state (rows, segments, c) and lever-rule forces (rows, nodes) under rows of axles.

        Parameters
        ----------
        axles : (rows, axles) x of every axle; those off the girder do nothing
        loads : (axles,) kN
        """
        rows, count = axles.shape[0], len(self.segments)
        segment, local = self.locate(axles)
        weight = np.where(self.carries(axles), loads, 0.0)
        breaks = self.girder.breakpoints
        piece = np.clip(np.searchsorted(breaks, axles, side="right") - 1, 0, self._pieces - 1)
        t = self.nodes[segment] + local - breaks[piece]
        where = (np.arange(rows)[:, None] * count + segment).ravel()
        turned = []
        for c in self._cubics:
            rotation = ((c[3][piece] * t + c[2][piece]) * t + c[1][piece]) * t + c[0][piece]
            turned.append(np.bincount(where, (weight * rotation).ravel(), rows * count))
        rotations = np.stack(turned, axis=-1, dtype=np.float64).reshape(rows, count, 2)
        about = np.bincount(where, (weight * local).ravel(), rows * count).reshape(rows, count)
        right = about / self._lengths
        left = np.bincount(where, weight.ravel(), rows * count).reshape(rows, count) - right
        lever = np.zeros((rows, self.nodes.size))
        lever[:, :-1] += left
        lever[:, 1:] += right
        return self.ends_under(rotations, lever), lever

    def forces_from(self, ends: Floats, lever: Floats) -> Floats:
        """Support forces (..., n) from segment-end state (..., segments, c) and lever-rule forces (..., nodes)."""
        moments = ends[..., :2].reshape(*ends.shape[:-2], -1)
        by_drop: Floats = self._by_drop.reshape(-1, self.n_supports)
        at_supports = lever[..., self._supports] if self.hinges.size else lever
        return np.asarray(at_supports - moments @ by_drop)

    def imposed_ends(self, curvatures: Sequence[tuple[float, float, float]]) -> Floats:
        """Segment-end state (segments, c) of imposed curvatures, supports held level.

        Parameters
        ----------
        curvatures : (start m, end m, 1/m) stretches that would bend, sagging positive; a difference of temperature
            over the depth h bends a free girder by expansion * (bottom - top) / h
        """
        rotations = np.zeros((len(self.segments), 2))
        for start, end, curvature in curvatures:
            edges = np.clip([start, end], self.nodes[:-1, None], self.nodes[1:, None])
            local = edges - self.nodes[:-1, None]
            length = local[:, 1] - local[:, 0]
            share = local.mean(axis=1) / self._lengths
            rotations += curvature * length[:, None] * np.stack([1.0 - share, share], axis=-1)
        return self.ends_under(rotations)

    # yielding supports -----------------------------------------------------------------------

    def _weights(self, compliance: Floats) -> tuple[Floats, Floats]:
        """Return the factors (..., n) that turn the scaled unknown z into R and F R.

        R = w z and F R = (f w) z with w = 1 / (1 + c f), so neither f = 0 (unyielding) nor f = inf
        (no support) is a special case; c is a stiffness of the size of K.
        """
        w = 1.0 / (1.0 + self._scale * compliance)
        absent = np.isinf(compliance)
        if not absent.any():
            return w, np.asarray(compliance * w)
        return w, np.where(absent, 1.0 / self._scale, np.where(absent, 0.0, compliance) * w)

    def _system(self, w: Floats, fw: Floats) -> Floats:
        """Return the scaled system (..., n, n) of z: diag(w) + K diag(fw)."""
        system = self.K * fw[..., None, :]
        diagonal = np.arange(self.n_supports)
        system[..., diagonal, diagonal] += w
        return np.asarray(system)

    def solve(self, compliance: Floats, forces: Floats, settlement: Floats | None = None) -> SupportState:
        """Solve for the supports.

        Parameters
        ----------
        compliance : (..., n) m/kN; 0 unyielding, inf no support
        forces : (..., n) support forces with all supports held level, kN (`forces_of`, `unit_forces`)
        settlement : (..., n) seat drops, m, optional

        Returns
        -------
        SupportState with (..., n) arrays, the leading dimensions broadcast
        """
        w, fw = self._weights(np.asarray(compliance, dtype=np.float64))
        right = np.asarray(forces, dtype=np.float64)
        drop: float | Floats = 0.0
        if settlement is not None:
            drop = np.where(np.isinf(compliance), 0.0, settlement)  # no support: its seat means nothing
            right = right - drop @ self.K
        if w.ndim == 2 and len(w) >= WORTHWHILE and right.shape in {w.shape, w.shape[1:]}:
            z: Floats = solve_many(self.K, w, fw, right)
        else:
            z = np.asarray(np.linalg.solve(self._system(w, fw), right[..., None])[..., 0])
        return SupportState(reaction=w * z, displacement=drop + fw * z)

    def sensitivity(
        self, compliance: Floats, forces: Floats, settlement: Floats
    ) -> tuple[Floats, Floats, Floats]:
        """Levels and reactions under load cases, and the levels' derivatives by the seats, in one solve.

        Parameters
        ----------
        compliance : (n,) m/kN
        forces, settlement : (cases, n)

        Returns
        -------
        level (cases, n) m, reaction (cases, n) kN, level by seat (n, n)
        """
        w, fw = self._weights(compliance)
        right = np.concatenate([(forces - settlement @ self.K).T, self.K], axis=1)
        z = np.ascontiguousarray(dgesv(self._system(w, fw), right)[2])
        cases = forces.shape[0]
        by_seat = -fw[:, None] * z[:, cases:]
        by_seat.ravel()[:: self.n_supports + 1] += 1.0
        solved = z[:, :cases].T
        return settlement + fw * solved, w * solved, by_seat

    def displacement_operator(self, compliance: Floats) -> Floats:
        """Matrix (..., n, n) that turns held support forces into support displacements, m/kN."""
        w, fw = self._weights(np.asarray(compliance, dtype=np.float64))
        return np.asarray(fw[..., :, None] * np.linalg.inv(self._system(w, fw)))

    def reaction_by_rise(self, compliance: Floats) -> Floats:
        """Reactions (..., n, n) per unit rise of each seat, kN/m: (I + K F)^-1 K, symmetric."""
        w, fw = self._weights(np.asarray(compliance, dtype=np.float64))
        return np.asarray(w[..., :, None] * np.linalg.solve(self._system(w, fw), self.K))

    def derivatives(self, compliance: Floats, state: SupportState) -> SupportDerivatives:
        """Exact derivatives of a support state (METHODS: dR/df_i = -(I + K F)^-1 K e_i R_i)."""
        f = np.asarray(compliance, dtype=np.float64)
        w, fw = self._weights(f)
        solved = np.linalg.solve(self._system(w, fw), self.K)
        by_settlement = -w[..., :, None] * solved
        f_by_settlement = -fw[..., :, None] * solved
        n = np.arange(self.n_supports)
        compression = np.where(np.isfinite(f), f, 0.0) * state.reaction
        moved = f_by_settlement.copy()
        moved[..., n, n] += 1.0
        # ln k up by one takes f R off the pad's shortening, as a seat rising by f R would
        return SupportDerivatives(
            reaction_by_log_stiffness=-by_settlement * compression[..., None, :],
            displacement_by_log_stiffness=-moved * compression[..., None, :],
            reaction_by_settlement=by_settlement,
            displacement_by_settlement=moved,
        )
