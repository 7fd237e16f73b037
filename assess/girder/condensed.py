"""The condensed girder: everything but the support levels eliminated, once.

    support forces   R(d) = P - K d              any response   y(d) = y0 + Y d

Slope-deflection on whole spans: the spans' flexibilities are exact (`span.py`), the unknowns are
the n support rotations, and what is left are the n support levels d. Pads then cost one n x n
solve per stiffness set, batched over any leading dimensions:

    d = s + F R,   (I + K F) R = P - K s,   F = diag(f).

Source of the method: stiffness method with static condensation (any text on matrix structural
analysis); unit-load theorem for the span flexibilities; Maxwell-Betti for the load terms.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.girder.batch import WORTHWHILE, solve_many
from assess.girder.model import Girder
from assess.girder.span import REACH, SimpleSpan

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
    """A girder in its condensed form.

    Attributes
    ----------
    girder : Girder
    spans : list of SimpleSpan
    K : (n, n) condensed stiffness, kN/m, symmetric positive semidefinite
    moments_by_load : (spans, 2, spans, 2) span-end moments per end rotation a load gives the simple span
    moments_by_drop : (spans, 2, n) span-end moments per unit support drop, kN
    rotations_by_drop : (n, n) support rotations per unit support drop
    """

    def __init__(self, girder: Girder) -> None:
        self.girder = girder
        self.spans = [SimpleSpan(pieces) for pieces in girder.spans]
        self.positions = girder.support_positions
        self.tolerance = REACH * girder.length
        n, m = girder.n_supports, len(self.spans)
        lengths = np.array([span.length for span in self.spans])
        k = np.array([span.stiffness for span in self.spans])  # (m, 2, 2)
        s = np.arange(m)
        by_rotation = np.zeros((m, 2, n))  # end rotations from the chord, (left, minus right)
        by_rotation[s, 0, s] = 1.0
        by_rotation[s, 1, s + 1] = -1.0
        by_drop = np.zeros((m, 2, n))
        by_drop[s, 0, s], by_drop[s, 0, s + 1] = 1.0 / lengths, -1.0 / lengths
        by_drop[s, 1, s], by_drop[s, 1, s + 1] = -1.0 / lengths, 1.0 / lengths

        free = np.isfinite(girder.rotation)
        joint = np.einsum("sia,sij,sjb->ab", by_rotation, k, by_rotation)
        joint[np.diag_indices(n)] += np.where(free, girder.rotation, 0.0)
        drop = np.einsum("sia,sij,sjb->ab", by_rotation, k, by_drop)
        load = np.einsum("sia,sij->asj", by_rotation, k).reshape(n, 2 * m)
        solved = np.zeros((n, n + 2 * m))
        if free.any():
            right = np.concatenate([-drop, load], axis=1)[free]
            solved[free] = np.linalg.solve(joint[np.ix_(free, free)], right)
        self.rotations_by_drop: Floats = solved[:, :n]
        rotations_by_load = solved[:, n:].reshape(n, m, 2)

        self.moments_by_drop: Floats = np.einsum(
            "sij,sjb->sib", k, by_rotation @ self.rotations_by_drop + by_drop
        )
        moments = np.einsum("sij,sja,atb->sitb", k, by_rotation, rotations_by_load)
        moments[s, :, s, :] -= k
        self.moments_by_load: Floats = moments
        self._by_drop = by_drop
        self._pieces = np.repeat(s, [len(pieces) for pieces in girder.spans])
        cubics = np.concatenate([span.end_cubics for span in self.spans])
        self._cubics = np.ascontiguousarray(np.moveaxis(cubics, 0, -1))  # (2, 4, pieces)
        stiffness = np.einsum("sia,sib->ab", by_drop, self.moments_by_drop)
        self.K: Floats = (stiffness + stiffness.T) / 2.0
        # a stiffness of the girder's own size; K itself is nothing where the girder is statically determinate
        self._scale = float(np.mean(np.trace(k, axis1=1, axis2=2) / lengths**2))

    @property
    def n_supports(self) -> int:
        """Number of supports."""
        return self.girder.n_supports

    # places ---------------------------------------------------------------------------------

    def locate(self, x: Floats, side: NDArray[np.intp] | int = 1) -> tuple[NDArray[np.intp], Floats]:
        """Span index and distance from the span's left end; `side` -1 / +1 picks the face at a support."""
        faces = np.broadcast_to(np.asarray(side), np.shape(x))
        right = np.searchsorted(self.positions - self.tolerance, x, side="right") - 1
        left = np.searchsorted(self.positions + self.tolerance, x, side="left") - 1
        span = np.clip(np.where(faces > 0, right, left), 0, len(self.spans) - 1)
        start, end = self.positions[span], self.positions[span + 1]
        return span, np.clip(x, start, end) - start

    def carries(self, a: Floats) -> NDArray[np.bool_]:
        """Tell which x (...) are on the girder."""
        return np.asarray((a >= -self.tolerance) & (a <= self.positions[-1] + self.tolerance))

    # unit loads, supports held level ----------------------------------------------------------

    def unit_end_moments(self, a: Floats) -> Floats:
        """Span-end moments (..., spans, 2) of a unit load at a (...), supports level; 0 off the girder."""
        a = np.asarray(a, dtype=np.float64)
        span, local = self.locate(a)
        on = self.carries(a)
        moments = np.zeros((*a.shape, len(self.spans), 2))
        for j, one in enumerate(self.spans):
            here = on & (span == j)
            if here.any():
                rotation = one.end_deflection(local[here])
                moments[here] = np.einsum("sib,pb->psi", self.moments_by_load[:, :, j, :], rotation)
        return moments

    def unit_forces(self, a: Floats) -> Floats:
        """Support forces (..., n) under a unit load at a (...), supports held level; 0 off the girder.

        By Mueller-Breslau the influence lines of the reactions of the girder on unyielding supports.
        """
        a = np.asarray(a, dtype=np.float64)
        return self.forces_from(self.unit_end_moments(a), self.unit_simple_forces(a))

    def unit_simple_forces(self, a: Floats) -> Floats:
        """Lever-rule support forces (..., n) of a unit load at a (...), as if every span were simple."""
        a = np.asarray(a, dtype=np.float64)
        span, local = self.locate(a)
        on = self.carries(a)
        lengths = np.diff(self.positions)[span]
        share = np.where(on, local / lengths, 0.0)
        forces = np.zeros((*a.shape, self.n_supports))
        np.put_along_axis(forces, span[..., None], (on - share)[..., None], axis=-1)
        np.put_along_axis(forces, span[..., None] + 1, share[..., None], axis=-1)
        return forces

    def row_state(self, axles: Floats, loads: Floats) -> tuple[Floats, Floats]:
        """Span-end moments (rows, spans, 2) and lever-rule forces (rows, n) under rows of axles.

        Parameters
        ----------
        axles : (rows, axles) x of every axle; those off the girder do nothing
        loads : (axles,) kN
        """
        rows, spans = axles.shape[0], len(self.spans)
        span, local = self.locate(axles)
        weight = np.where(self.carries(axles), loads, 0.0)
        breaks = self.girder.breakpoints
        piece = np.clip(np.searchsorted(breaks, axles, side="right") - 1, 0, self._pieces.size - 1)
        t = self.positions[span] + local - breaks[piece]
        where = (np.arange(rows)[:, None] * spans + span).ravel()
        turned = []
        for c in self._cubics:
            rotation = ((c[3][piece] * t + c[2][piece]) * t + c[1][piece]) * t + c[0][piece]
            turned.append(np.bincount(where, (weight * rotation).ravel(), rows * spans))
        ends = np.stack(turned, axis=-1).reshape(rows, -1) @ self.moments_by_load.reshape(2 * spans, -1).T
        about = np.bincount(where, (weight * local).ravel(), rows * spans).reshape(rows, spans)
        right = about / np.diff(self.positions)
        left = np.bincount(where, weight.ravel(), rows * spans).reshape(rows, spans) - right
        simple = np.zeros((rows, self.n_supports))
        simple[:, :-1] += left
        simple[:, 1:] += right
        return ends.reshape(rows, spans, 2), simple

    def forces_from(self, end_moments: Floats, simple: Floats) -> Floats:
        """Support forces (..., n) from span-end moments (..., spans, 2) and lever-rule forces (..., n)."""
        flat = end_moments.reshape(*end_moments.shape[:-2], -1)
        by_drop: Floats = self._by_drop.reshape(-1, self.n_supports)
        return np.asarray(simple - flat @ by_drop)

    def imposed_end_moments(self, curvatures: Sequence[tuple[float, float, float]]) -> Floats:
        """Span-end moments (spans, 2) of imposed curvatures, supports held level.

        Parameters
        ----------
        curvatures : (start m, end m, 1/m) stretches that would bend, sagging positive; a difference of temperature
            over the depth h bends a free girder by expansion * (bottom - top) / h
        """
        rotation = np.zeros((len(self.spans), 2))
        for start, end, curvature in curvatures:
            edges = np.clip([start, end], self.positions[:-1, None], self.positions[1:, None])
            local = edges - self.positions[:-1, None]
            length = local[:, 1] - local[:, 0]
            share = local.mean(axis=1) / np.diff(self.positions)
            rotation += curvature * length[:, None] * np.stack([1.0 - share, share], axis=-1)
        return np.asarray(np.einsum("sitb,tb->si", self.moments_by_load, rotation))

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
        z = np.linalg.solve(self._system(w, fw), right)
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
