"""Reference by another method: a frame of exact Timoshenko elements, solved in 50 decimal digits.

Direct stiffness with a node at every end of a piece, support, load and station; nodal values of such
elements are exact; a hinge is a node with two slopes. Plain double precision would lose up to ten digits
where a millimetre of girder stands beside sixty metres (12 EI / h^3 against the girder's own stiffness), so
the numbers here are mpmath's: nothing is scaled, condensed or shared with the method under test.
"""

from __future__ import annotations

from dataclasses import dataclass

import mpmath as mp
import numpy as np
from numpy.typing import NDArray

from assess.girder import Girder
from assess.loads import LoadCase

Floats = NDArray[np.float64]
DIGITS = 50
BAND = 4  # a hinge has a level and two slopes: no two numbers of one element are farther apart


@dataclass(frozen=True, kw_only=True)
class Reference:
    """Values at the stations (p,), and at the supports (n,); `shear` and `slope` are those just right of a station."""

    deflection: Floats
    slope: Floats
    moment: Floats
    shear: Floats
    reaction: Floats
    displacement: Floats


def solve(
    girder: Girder, compliance: Floats, settlement: Floats, loads: LoadCase, stations: Floats
) -> Reference:
    """Solve one load case; signs as everywhere (down and sagging positive)."""
    with mp.workdps(DIGITS):
        return _solve(girder, compliance, settlement, loads, stations)


def _solve(
    girder: Girder, compliance: Floats, settlement: Floats, loads: LoadCase, stations: Floats
) -> Reference:
    supports, breaks = girder.support_positions, girder.breakpoints
    marks = [*breaks, *stations, *(x for x, _ in loads.points)]
    marks += [x for start, end, _ in loads.uniforms for x in (start, end)]
    nodes = np.unique(np.clip(np.array(marks, dtype=np.float64), 0.0, breaks[-1]))
    pieces = [piece for span in girder.spans for piece in span]
    middle = (nodes[:-1] + nodes[1:]) / 2.0
    kinds = [pieces[i] for i in np.clip(np.searchsorted(breaks, middle) - 1, 0, len(pieces) - 1)]
    carried = [
        sum((mp.mpf(w) for start, end, w in loads.uniforms if start < x < end), mp.mpf(0)) for x in middle
    ]
    elements, fixed = [], []
    level, before, beyond = _numbers(nodes, girder.hinges)
    size = beyond[-1] + 1
    matrix = [[mp.mpf(0)] * (2 * BAND + 1) for _ in range(size)]  # row i holds columns i - BAND ... i + BAND
    right = [mp.mpf(0)] * size
    for e, piece in enumerate(kinds):
        h = mp.mpf(float(nodes[e + 1])) - mp.mpf(float(nodes[e]))
        stiffness, load = _element(piece, h), _ends(carried[e], h)
        elements.append(stiffness)
        fixed.append(load)
        own = (level[e], beyond[e], level[e + 1], before[e + 1])
        for i, row in enumerate(own):
            right[row] += load[i]
            for j, column in enumerate(own):
                matrix[row][column - row + BAND] += stiffness[i][j]
    for x, weight in loads.points:
        right[level[int(np.argmin(np.abs(nodes - x)))]] += mp.mpf(weight)
    at = [int(np.argmin(np.abs(nodes - x))) for x in supports]
    free = right[:]
    whole = [row[:] for row in matrix]
    for node, f, drop, turn in zip(at, compliance, settlement, girder.rotation, strict=True):
        if f == 0.0:
            _hold(matrix, right, level[node], mp.mpf(float(drop)))
        elif np.isfinite(f):
            matrix[level[node]][BAND] += 1 / mp.mpf(float(f))
            right[level[node]] += mp.mpf(float(drop)) / mp.mpf(float(f))
        if np.isinf(turn):
            _hold(matrix, right, beyond[node], mp.mpf(0))
        else:
            matrix[beyond[node]][BAND] += mp.mpf(float(turn))
    u = _banded(matrix, right)
    reaction = [free[level[node]] - _times(whole, u, level[node]) for node in at]
    forces = []
    for e, (k, f) in enumerate(zip(elements, fixed, strict=True)):
        own = (level[e], beyond[e], level[e + 1], before[e + 1])
        forces.append([sum(k[i][j] * u[column] for j, column in enumerate(own)) - f[i] for i in range(4)])
    where = [int(np.argmin(np.abs(nodes - x))) for x in stations]
    last = len(forces) - 1
    return Reference(
        deflection=_floats([u[level[i]] for i in where]),
        slope=_floats([u[beyond[i]] for i in where]),
        moment=_floats([forces[i][1] if i <= last else -forces[last][3] for i in where]),
        shear=_floats([-forces[i][0] if i <= last else forces[last][2] for i in where]),
        reaction=_floats(reaction),
        displacement=_floats([u[level[i]] for i in at]),
    )


def _numbers(nodes: Floats, hinges: tuple[float, ...]) -> tuple[list[int], list[int], list[int]]:
    """Numbers of the level, the slope on the left and the slope on the right of every node."""
    level, before, beyond = [], [], []
    count = 0
    for x in nodes:
        level.append(count)
        before.append(count + 1)
        count += 3 if any(abs(x - hinge) < 1e-9 for hinge in hinges) else 2
        beyond.append(count - 1)
    return level, before, beyond


def _floats(values: list[mp.mpf]) -> Floats:
    return np.array([float(v) for v in values])


def _element(piece: object, h: mp.mpf) -> list[list[mp.mpf]]:
    """Stiffness of (v1, slope1, v2, slope2): Przemieniecki, Theory of Matrix Structural Analysis, ch. 5."""
    ei, ga = mp.mpf(piece.flexural), piece.shear  # type: ignore[attr-defined]
    phi = mp.mpf(0) if np.isinf(ga) else 12 * ei / (mp.mpf(ga) * h * h)
    c = ei / (h**3 * (1 + phi))
    near, far = (4 + phi) * h * h, (2 - phi) * h * h
    rows = [[12, 6 * h, -12, 6 * h], [6 * h, near, -6 * h, far], [-12, -6 * h, 12, -6 * h]]
    rows.append([6 * h, far, -6 * h, near])
    return [[c * value for value in row] for row in rows]


def _ends(w: mp.mpf, h: mp.mpf) -> list[mp.mpf]:
    return [w * h / 2, w * h * h / 12, w * h / 2, -w * h * h / 12]


def _hold(matrix: list[list[mp.mpf]], right: list[mp.mpf], row: int, value: mp.mpf) -> None:
    matrix[row] = [mp.mpf(0)] * (2 * BAND + 1)
    matrix[row][BAND] = mp.mpf(1)
    right[row] = value


def _times(matrix: list[list[mp.mpf]], u: list[mp.mpf], row: int) -> mp.mpf:
    reach = range(max(0, row - BAND), min(len(u), row + BAND + 1))
    return sum((matrix[row][j - row + BAND] * u[j] for j in reach), mp.mpf(0))


def _banded(matrix: list[list[mp.mpf]], right: list[mp.mpf]) -> list[mp.mpf]:
    """Gauss elimination without pivoting in a band of BAND each side (the free part is positive definite)."""
    a, b = [row[:] for row in matrix], right[:]
    size = len(b)
    for i in range(size):
        for r in range(i + 1, min(size, i + BAND + 1)):
            factor = a[r][i - r + BAND] / a[i][BAND]
            if factor != 0:
                for c in range(i, min(size, i + BAND + 1)):
                    a[r][c - r + BAND] -= factor * a[i][c - i + BAND]
                b[r] -= factor * b[i]
    u = [mp.mpf(0)] * size
    for i in reversed(range(size)):
        rest = sum((a[i][c - i + BAND] * u[c] for c in range(i + 1, min(size, i + BAND + 1))), mp.mpf(0))
        u[i] = (b[i] - rest) / a[i][BAND]
    return u
