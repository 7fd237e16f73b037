"""Reference by another method: published load models stood at every millimetre of an influence line.

The models are written out again here, in whole millimetres and kN, and nothing is read from the package's files. Every
placement is tried: head of the load at each millimetre, gaps and spacings in small steps, uniform parts as sums over
millimetres of the adverse part of the line.
"""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray
from scipy.ndimage import maximum_filter1d

Floats = NDArray[np.float64]

MM = 1e-3
FT = 304.8  # mm
KIP = 4.4482216152605  # kN
LANE = 0.64 * KIP / (FT * MM)  # kN/m


def axles(line: Floats, rows: list[tuple[float, float]], width: int) -> Floats:
    """Sum of axles (mm behind the head, kN) for heads at 0 ... width - 1, line (p, m)."""
    total = np.zeros((line.shape[0], width))
    for offset, load in rows:
        o = round(offset)
        stop = min(width, o + line.shape[1])
        if stop > o:
            total[:, o:stop] += load * line[:, : stop - o]
    return total


def areas(line: Floats) -> Floats:
    """Running trapezoidal sums, kN m per kN/m or the like, (p, m)."""
    cells = (line[:, 1:] + line[:, :-1]) / 2.0 * MM
    return np.concatenate([np.zeros((line.shape[0], 1)), np.cumsum(cells, axis=1)], axis=1)


def upto(running: Floats, heads: NDArray[np.intp]) -> Floats:
    return running[:, np.clip(heads, 0, running.shape[1] - 1)]


def adverse(line: Floats) -> Floats:
    return areas(np.maximum(line, 0.0))


def lm71(line: Floats, _: object) -> Floats:
    heads = np.arange(line.shape[1] + 5600)
    up = adverse(line)
    total = axles(np.maximum(line, 0.0), [(1600.0 * i, 250.0) for i in range(4)], heads.size)
    return (total + 80.0 * (up[:, -1:] - upto(up, heads + 800) + upto(up, heads - 5600))).max(axis=1)


def sw0(line: Floats, _: object) -> Floats:
    heads = np.arange(line.shape[1] + 35300)
    c = areas(line)
    stretches = [upto(c, heads - a) - upto(c, heads - b) for a, b in ((0, 15000), (20300, 35300))]
    return (133.0 * (stretches[0] + stretches[1])).max(axis=1)


def cooper(line: Floats, _: object) -> Floats:
    gaps = [8, 5, 5, 5, 9, 5, 6, 5, 8, 8, 5, 5, 5, 9, 5, 6, 5]
    offsets = np.concatenate([[0], np.cumsum(gaps)]) * FT
    loads = ([40.0] + [80.0] * 4 + [52.0] * 4) * 2
    heads = np.arange(line.shape[1] + round(109 * FT))
    total = axles(line, [(o, KIP * p) for o, p in zip(offsets, loads, strict=True)], heads.size)
    train = 8.0 * KIP / (FT * MM) * upto(areas(line), heads - round(109 * FT))
    return (total + train).max(axis=1)


def lm1(line: Floats, _: object) -> Floats:
    tandem = axles(line, [(0.0, 300.0), (1200.0, 300.0)], line.shape[1] + 1200)
    return np.maximum(tandem.max(axis=1), 0.0) + 27.0 * adverse(line)[:, -1]


def truck(line: Floats) -> Floats:
    # the last axle at the best of all whole millimetres 14 to 30 ft behind the middle one
    width, gap, free = line.shape[1] + round(44 * FT), round(28 * FT), round(16 * FT)
    last = axles(line, [(0.0, 32.0 * KIP)], width)
    best = maximum_filter1d(last, free + 1, axis=1, origin=free // 2, mode="constant", cval=0.0)
    total = axles(line, [(0.0, 8.0 * KIP), (14.0 * FT, 32.0 * KIP)], width)
    total[:, gap:] += best[:, : width - gap]
    return np.asarray(total.max(axis=1))


def two_trucks(line: Floats) -> Floats:
    best = np.zeros(line.shape[0])
    one = [(0.0, 8.0 * KIP), (14.0 * FT, 32.0 * KIP), (28.0 * FT, 32.0 * KIP)]
    for clear in np.arange(50.0 * FT, line.shape[1] + 50.0 * FT, 100.0):
        both = one + [(28.0 * FT + clear + o, p) for o, p in one]
        best = np.maximum(best, axles(line, both, line.shape[1] + round(28 * FT)).max(axis=1))
    return best


def hl93(line: Floats, kind: tuple[str, float, Floats, Floats]) -> Floats:
    quantity, sign, special, _ = kind
    tandem = axles(line, [(0.0, 25.0 * KIP), (4.0 * FT, 25.0 * KIP)], line.shape[1] + round(4 * FT)).max(
        axis=1
    )
    lane = LANE * adverse(line)[:, -1]
    best = np.maximum(truck(line), tandem) + lane
    if (quantity, sign) in (("moment", -1.0), ("reaction", 1.0)) and special.any():
        best[special] = np.maximum(best, 0.9 * (two_trucks(line) + lane))[special]
    return best


def hs20(line: Floats, kind: tuple[str, float, Floats, Floats]) -> Floats:
    quantity, sign, _, supports = kind
    lane = LANE * adverse(line)[:, -1]
    top = np.maximum(line, 0.0)
    if quantity != "moment":
        loads = 26.0 * KIP * top.max(axis=1)
    elif sign > 0.0:
        loads = 18.0 * KIP * top.max(axis=1)
    else:
        ends = np.round(supports / MM).astype(int)
        if not np.isclose(ends[-1], line.shape[1] - 1):
            raise ValueError("supports and line do not fit")
        each = np.sort([top[:, a : b + 1].max(axis=1) for a, b in pairwise(ends)], axis=0)
        loads = 18.0 * KIP * each[-2:].sum(axis=0)
    return np.maximum(truck(line), loads + lane)


MODELS = {
    "cooper-e80": cooper,
    "hl-93": hl93,
    "hs20-44": hs20,
    "lm1-lane-1": lm1,
    "lm71": lm71,
    "sw0": sw0,
}


def extremes(
    name: str, line: Floats, quantity: str, special: NDArray[np.bool_], supports: Floats
) -> Iterator[Floats]:
    """Yield the greatest and the least response (p,) under a model, running both ways; 0 included.

    `special` (p,) tells the places where two trucks count; `supports` are x in m from the left.
    """
    for sign in (1.0, -1.0):
        best = np.zeros(line.shape[0])
        for turned in (False, True):
            seen, x = (line[:, ::-1], supports[-1] - supports[::-1]) if turned else (line, supports)
            kind = (quantity, sign, special, x)
            best = np.maximum(best, MODELS[name](sign * np.ascontiguousarray(seen), kind))  # type: ignore[arg-type]
        yield sign * best
