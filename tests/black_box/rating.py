"""Permanent effects, live envelopes and utilisations by the assembled elements and a rolled train."""

from __future__ import annotations

import itertools
from dataclasses import dataclass

import numpy as np

from tests.black_box.describe import Bridge, Girder, Section
from tests.black_box.elements import Array, Held, Line, Row, coupled, rolled

ALONG = {"sagging": "m", "hogging": "m", "shear": "v"}


@dataclass
class Check:
    """One place of one row: effects with signs, kN m or kN."""

    x: float
    capacity: float | None
    permanent: float
    live: float
    factored: float
    utilisation: float | None
    rating: float | None


def check(
    bridge: Bridge,
    effect: str,
    x: float,
    capacity: float | None,
    standing: tuple[float, float],
    low: float,
    high: float,
) -> Check:
    """Factor the effects; the live load acts in the sense of the effect, shear in the worse of both senses.

    `standing` is what permanent loads and what seat drops do. A relief by seat drops does not count.
    """
    senses = {"sagging": (1.0,), "hogging": (-1.0,), "shear": (1.0, -1.0)}[effect]
    return max(
        (_one(bridge, s, x, capacity, standing, high if s > 0 else low) for s in senses),
        key=lambda c: abs(c.factored) if np.sign(c.factored) in senses else -abs(c.factored),
    )


def _one(
    bridge: Bridge,
    sense: float,
    x: float,
    capacity: float | None,
    standing: tuple[float, float],
    live: float,
) -> Check:
    on_permanent, on_live, resistance, relieving = bridge.factors
    relieving = min(1.0, on_permanent) if relieving is None else relieving
    dead, settled = standing
    permanent = dead + settled
    stands = (on_permanent if dead * sense >= 0 else relieving) * dead
    stands += on_permanent * settled if settled * sense >= 0 else 0.0
    factored = stands + on_live * live
    if capacity is None:
        return Check(x, None, permanent, live, factored, None, None)
    c = capacity * resistance
    acting = factored * sense
    load = on_live * live * sense
    rating = None if load <= 0 else (c - stands * sense) / load
    return Check(x, c, permanent, live, factored, acting / c, rating)


class Rating:
    """One girder on one set of supports."""

    def __init__(self, bridge: Bridge, girder: Girder, stiffness: Array, drop: Array | None = None):
        self.bridge, self.girder, self.stiffness = bridge, girder, np.asarray(stiffness, float)
        self.drop = np.zeros(len(self.stiffness)) if drop is None else drop
        self.trains = [
            (o, p * girder.share * (1 + dynamic))
            for vehicle, count, pitch, dynamic in bridge.live
            for o, p in [coupled(bridge.vehicles[vehicle], count, pitch)]
        ]

    def capacity(self, effect: str, x: float, side: int) -> float | None:
        name = self.section_at(x, side)
        return getattr(self.bridge.sections[name], effect)

    def section_at(self, x: float, side: int) -> str:
        pieces = self.girder.pieces()
        for a, b, name in pieces:
            if a - 1e-6 <= x + side * 1e-5 <= b + 1e-6:
                return name
        return pieces[0][2] if side < 0 else pieces[-1][2]

    def at(self, effect: str, x: float, step: float = 0.05) -> list[Check]:
        """What acts at x, for both faces there."""
        line = Line(self.girder, self.bridge.sections, (x,), h=0.5)
        held = line.held_up(self.stiffness)
        f, own = line.permanent()
        x = float(line.x[line.node(x)])
        out = []
        for side in (-1, 1):
            if (side < 0 and x < 1e-6) or (side > 0 and x > line.x[-1] - 1e-6):
                continue
            row = line.row(ALONG[effect], x, side)
            dead = held.value(row, f, own, 0.0 * self.drop)
            standing = dead, held.value(row, f, own, self.drop) - dead
            low, high = self._live(held, row, x, step)
            out.append(check(self.bridge, effect, x, self.capacity(effect, x, side), standing, low, high))
        return out

    def _live(self, held: Held, row: Row, x: float | None, step: float) -> tuple[float, float]:
        both = [rolled(held, row, x, o, p, step) for o, p in self.trains] or [(0.0, 0.0)]
        return min(b[0] for b in both), max(b[1] for b in both)

    def reactions(self) -> list[tuple[float, float, float]]:
        """(permanent, live least, live greatest) of every support."""
        line = Line(self.girder, self.bridge.sections, h=0.5)
        held = line.held_up(self.stiffness)
        f, _ = line.permanent()
        permanent = held.reactions(f, self.drop)
        return [
            (float(r), *self._live(held, held.reaction_row(i), None, 0.05)) for i, r in enumerate(permanent)
        ]

    # --- the search of the governing place: every tenth of a metre a node, trains stepped by it ---

    def search(
        self, step: float = 0.1, every: float = 0.3
    ) -> dict[tuple[str, int | None, int | None], Check]:
        """The worst utilisation of every row: sagging by span, hogging by support, shear by (span, support)."""
        line = Line(
            self.girder, self.bridge.sections, 0.5 * (self.girder.at[1:] + self.girder.at[:-1]), h=step
        )
        held = line.held_up(self.stiffness)
        f, own = line.permanent()
        u0 = held.displacements(f, 0.0 * self.drop)
        u1 = held.displacements(f, self.drop) - u0
        edges = [x for a, b, _ in self.girder.pieces() for x in (a, b)]
        grid = np.concatenate(
            [
                np.linspace(a, b, int(np.ceil((b - a) / every)) + 1)
                for a, b in itertools.pairwise(edges)
                if b - a > 1e-6
            ]
        )
        middles = 0.5 * (self.girder.at[1:] + self.girder.at[:-1])
        near = np.unique([line.x[np.argmin(abs(line.x - x))] for x in [*grid, *edges, *middles]])
        places = [
            (x, side)
            for x in near
            for side in (-1, 1)
            if not (side < 0 and x < 1e-6) and not (side > 0 and x > line.x[-1] - 1e-6)
        ]
        out: dict[tuple[str, int | None, int | None], Check] = {}
        for kind in "mv":
            rows = [line.row(kind, x, side) for x, side in places]
            dead = np.array([r.row @ u0 + r.sign * own[r.element, r.local] for r in rows])
            settled = np.array([r.row @ u1 for r in rows])
            low, high = self._envelope(held, rows)
            for (x, side), *standing, lo, hi in zip(places, dead, settled, low, high, strict=True):
                for effect in ("sagging", "hogging") if kind == "m" else ("shear",):
                    c = check(self.bridge, effect, x, self.capacity(effect, x, side), tuple(standing), lo, hi)
                    for key in self._rows(effect, x, side):
                        if key not in out or _more(c, out[key]):
                            out[key] = c
        return out

    def _rows(self, effect: str, x: float, side: int) -> list[tuple[str, int | None, int | None]]:
        at = self.girder.at
        span = int(np.clip(np.searchsorted(at, x + side * 1e-5) - 1, 0, len(at) - 2))
        if effect == "sagging":
            return [(effect, span, None)]
        half = 0.5 * (at[span] + at[span + 1])
        ends = [i for i, near in ((span, x <= half + 1e-6), (span + 1, x >= half - 1e-6)) if near]
        if effect == "shear":
            return [(effect, span, i) for i in ends]
        return [
            (effect, None, i) for i in ends if 0 < i < len(at) - 1 or self.girder.supports[i].rotation > 0
        ]

    def _envelope(self, held: Held, rows: list[Row]) -> tuple[Array, Array]:
        line = held.line
        z = held.adjoint(rows)
        il = z[::2].T  # a unit load at every node; one inside the element of the row adds its own part
        index = np.arange(len(rows))
        jump = il.copy()
        for j, r in enumerate(rows):
            if r.kind == "v":  # the load just on the other side of the place
                jump[j, r.element + (r.local == 2)] += r.sign
        total = line.x[-1]
        step = 0.1
        low, high = np.zeros(len(rows)), np.zeros(len(rows))
        grid = np.arange(0, round(total / step) + 1) * step
        for table in (il, jump):
            y = np.stack([np.interp(grid, line.x, table[j]) for j in index])
            for o, p in self.trains:
                for off in (o, o.max() - o):
                    n = round(o.max() / step) + 1
                    total_y = np.zeros((len(rows), len(grid) + n + 1))
                    for d, load in zip(off, p, strict=True):
                        s = round(d / step)
                        total_y[:, s : s + len(grid)] += load * y
                    low, high = np.minimum(low, total_y.min(1)), np.maximum(high, total_y.max(1))
        return low, high


def _more(a: Check, b: Check) -> bool:
    if a.utilisation is None or b.utilisation is None:
        return abs(a.factored) > abs(b.factored)
    return a.utilisation > b.utilisation


def nominal(girder: Girder) -> Array:
    """Nominal stiffnesses, inf for pins."""
    return np.array([np.inf if s.k is None else s.k for s in girder.supports])


def sections_of(bridge: Bridge) -> dict[str, Section]:
    return bridge.sections
