"""The shape that settled seats give a girder: the line through them on which it lies before a test."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.interpolate import CubicSpline

from assess.report import words
from assess.results import ElevationState, GirderView, SupportView
from assess.results.view import Floats


@dataclass(frozen=True, kw_only=True)
class Lie:
    """How far the girder lies below its level at the datum, in mm, all along.

    A natural cubic spline through the seats: how a uniform girder bends when its supports are moved, so it
    touches every pad; a girder with hinges lies as the mechanics say. A seat that has not moved beyond twice its sd, or
    that nobody levelled, holds its level.
    """

    x_m: Floats  # (supports,), rising
    drop_mm: Floats  # (supports,)
    hinged: tuple[Floats, Floats] | None = (
        None  # with hinges: places (p,) in m, sinking by unit drop (p, supports)
    )

    def at(self, x_m: Floats | float) -> Floats:
        """Return the drop at the places given; beyond the end supports the girder goes on straight."""
        x = np.asarray(x_m, dtype=float)
        if not self.drop_mm.any():
            return np.zeros_like(x)
        if self.hinged is not None:
            places, by_drop = self.hinged
            return np.asarray(np.interp(x, places, by_drop @ self.drop_mm))
        if self.x_m.size < 3:
            first, last = self.x_m[0], self.x_m[-1]
            return np.asarray(
                self.drop_mm[0] + (self.drop_mm[-1] - self.drop_mm[0]) * (x - first) / (last - first)
            )
        line = CubicSpline(self.x_m, self.drop_mm, bc_type="natural")
        inside = np.clip(x, self.x_m[0], self.x_m[-1])
        return np.asarray(line(inside) + line(inside, 1) * (x - inside))

    @property
    def moved(self) -> bool:
        """Say whether any seat moved."""
        return bool(self.drop_mm.any())


def drop_mm(support: SupportView) -> float:
    """Return how far a seat is drawn below its level at the datum: 0 within twice its sd."""
    if support.seat_drop_mm is None or not words.seat_moved(support.seat_drop_mm, support.seat_drop_sd_mm):
        return 0.0
    return support.seat_drop_mm


def lie(girder: GirderView) -> Lie:
    """Return how the girder lies on its seats."""
    supports = sorted(girder.supports, key=lambda s: s.x_m)
    if len(supports) < 2:
        return Lie(x_m=np.zeros(1), drop_mm=np.zeros(1))
    drops = np.array([drop_mm(s) for s in supports], dtype=float)
    return Lie(x_m=np.array([s.x_m for s in supports]), drop_mm=drops, hinged=girder.lie)


def flat() -> Lie:
    """Return the lie of a girder whose seats are left out of a drawing."""
    return Lie(x_m=np.zeros(1), drop_mm=np.zeros(1))


def extent_mm(girder: GirderView, states: list[ElevationState], of: Lie) -> tuple[float, float]:
    """Return the highest (negative) and the lowest level that a drawing of these states reaches, in mm."""
    along = of.at(np.linspace(0.0, float(sum(girder.span_lengths_m)), 101))
    levels = [0.0, *along.tolist(), *of.drop_mm.tolist()]
    for state in states:
        levels += (of.at(state.x_m) + state.fitted_mm).tolist()
        levels += [float(of.at(p.x_m)) + v for p in state.points for v in (p.value_mm, p.fitted_mm)]
    finite = [v for v in levels if np.isfinite(v)]
    return min(finite), max(finite)
