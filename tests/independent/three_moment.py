"""Reference by another method: the three-moment equation with settlements and springs.

Clapeyron's equation for the support moments, generalised to stepped EI by quadrature of M0 m / EI,
beside one equilibrium equation and one support law per support. Unknowns: support moments, reactions,
support levels. Solved by mpmath in 40 digits, because the support law mixes m with kN.
"""

from __future__ import annotations

import itertools
from dataclasses import dataclass

import mpmath as mp
import numpy as np
from numpy.typing import NDArray

from assess.girder import Girder
from assess.loads import LoadCase

Floats = NDArray[np.float64]
_NODES = [(mp.mpf(-1), 1), (mp.mpf(0), 4), (mp.mpf(1), 1)]  # Simpson: exact for cubics


@dataclass(frozen=True, kw_only=True)
class Supports:
    """Moment, reaction and level of every support, (n,) each."""

    moment: Floats
    reaction: Floats
    level: Floats


def solve(girder: Girder, compliance: Floats, settlement: Floats, loads: LoadCase) -> Supports:
    """Solve a girder whose supports turn freely and whose GA is infinite."""
    with mp.workdps(40):
        return _solve(girder, compliance, settlement, loads)


def _solve(girder: Girder, compliance: Floats, settlement: Floats, loads: LoadCase) -> Supports:
    n = girder.n_supports
    x = [mp.mpf(float(v)) for v in girder.support_positions]
    lengths = [b - a for a, b in itertools.pairwise(x)]
    spans = [_span(girder, s, x[s], lengths[s], loads) for s in range(n - 1)]
    a, b = mp.zeros(3 * n), mp.zeros(3 * n, 1)  # moments, reactions, levels
    a[0, 0] = a[n - 1, n - 1] = mp.mpf(1)
    for i in range(1, n - 1):
        one, two = spans[i - 1], spans[i]
        a[i, i - 1], a[i, i], a[i, i + 1] = one.cross, one.right + two.left, two.cross
        # what the chords turn: an angle that opens downward bends the girder sagging
        a[i, 2 * n + i - 1] += 1 / lengths[i - 1]
        a[i, 2 * n + i] -= 1 / lengths[i - 1] + 1 / lengths[i]
        a[i, 2 * n + i + 1] += 1 / lengths[i]
        b[i] = -one.load_right - two.load_left
    for i in range(n):
        row = n + i
        a[row, n + i] = mp.mpf(1)
        total = mp.mpf(0)
        if i > 0:
            a[row, i] += 1 / lengths[i - 1]
            a[row, i - 1] -= 1 / lengths[i - 1]
            total += spans[i - 1].force_right
        if i < n - 1:
            a[row, i] += 1 / lengths[i]
            a[row, i + 1] -= 1 / lengths[i]
            total += spans[i].force_left
        b[row] = total
        law = 2 * n + i
        if np.isinf(compliance[i]):
            a[law, n + i] = mp.mpf(1)
        else:
            a[law, 2 * n + i], a[law, n + i] = mp.mpf(1), -mp.mpf(float(compliance[i]))
            b[law] = mp.mpf(float(settlement[i]))
    u = mp.lu_solve(a, b)
    values = np.array([float(v) for v in u]).reshape(3, n)
    return Supports(moment=values[0], reaction=values[1], level=values[2])


@dataclass(kw_only=True)
class _Span:
    """Flexibilities of a simple span, its end rotations and end forces under its own loads."""

    left: mp.mpf
    right: mp.mpf
    cross: mp.mpf
    load_left: mp.mpf
    load_right: mp.mpf
    force_left: mp.mpf
    force_right: mp.mpf


def _span(girder: Girder, index: int, start: mp.mpf, length: mp.mpf, loads: LoadCase) -> _Span:
    # a load on a support belongs to the span on its right, the last one to the last span
    final = index == len(girder.spans) - 1
    points = []
    for at, weight in loads.points:
        local = mp.mpf(float(at)) - start
        if 0 <= local < length or (final and local == length):
            points.append((local, mp.mpf(weight)))
    uniforms = []
    for begin, end, w in loads.uniforms:
        low = min(max(mp.mpf(float(begin)) - start, mp.mpf(0)), length)
        high = min(max(mp.mpf(float(end)) - start, mp.mpf(0)), length)
        if high > low:
            uniforms.append((low, high, mp.mpf(w)))
    right = sum((p * a for a, p in points), mp.mpf(0)) / length
    right += sum((w * (e - s) * (s + e) / 2 for s, e, w in uniforms), mp.mpf(0)) / length
    total = sum((p for _, p in points), mp.mpf(0)) + sum((w * (e - s) for s, e, w in uniforms), mp.mpf(0))
    left = total - right

    def moment(t: mp.mpf) -> mp.mpf:
        value = left * t
        for a, p in points:
            value -= p * max(t - a, mp.mpf(0))
        for s, e, w in uniforms:
            value -= w * (max(t - s, mp.mpf(0)) ** 2 - max(t - e, mp.mpf(0)) ** 2) / 2
        return value

    edges = [mp.mpf(0)]
    stiff = []
    for piece in girder.spans[index]:
        edges.append(edges[-1] + mp.mpf(piece.length))
        stiff.append((edges[-1], mp.mpf(piece.flexural)))
    edges[-1] = length
    marks = sorted({*edges, *(a for a, _ in points), *(v for s, e, _ in uniforms for v in (s, e))})
    out = _Span(
        left=mp.mpf(0), right=mp.mpf(0), cross=mp.mpf(0), load_left=mp.mpf(0), load_right=mp.mpf(0),
        force_left=left, force_right=right,
    )  # fmt: skip
    for low, high in itertools.pairwise(marks):
        middle, half = (low + high) / 2, (high - low) / 2
        ei = next((value for end, value in stiff if middle < end), stiff[-1][1])
        for node, weight in _NODES:
            t = middle + half * node
            share = half * weight / 3 / ei
            near, far, m = 1 - t / length, t / length, moment(t)
            out.left += share * near * near
            out.right += share * far * far
            out.cross += share * near * far
            out.load_left += share * near * m
            out.load_right += share * far * m
    return out
