"""Readings as taken to one value and its standard deviation: repeats, zeros, the gaps at four corners.

Arithmetic only. In what follows s is the standard deviation of one reading (or one gap): the one given, or the
repeatability of the visit where that is larger and known.

- Repeats: the mean of n, with u = s / sqrt(n) (GUM, JCGM 100:2008, 4.2.3, from memory).
- Repeatability: the pooled standard deviation of all lists of repeats, sqrt(sum of squares / degrees of freedom), each
  list about its own mean (GUM, 4.2.4, from memory), where at least `FEWEST_DOF` degrees of freedom tell it.
- Zeros: value = loaded - zero. With zeros before and after, zero is the mean of the two means: a drift that is linear
  in time cancels for a loaded reading taken midway. u^2 = u_loaded^2 + (u_before^2 + u_after^2) / 4 + drift^2 / 12;
  the last part is the variance that the drift gives a loaded reading taken at any moment between the two, all alike
  (GUM, 4.3.7, from memory).
- Floor: no reduced standard deviation of repeats is below s_given / sqrt(3): what is wrong with an instrument all the
  time does not go away by repeating (common practice, no source).
- Four gaps: a corner closes by c = unloaded - loaded; unloaded is before, or the mean of before and after, so that
  var c = v = s^2 (1 + 1/m) with m = 1 or 2. Compression is the mean of the four: v / 4. Rotation is the mean of the far
  two less that of the near two, over their spacing: v / spacing^2, the spacing taken as exact. Each gains its
  drift^2 / 12. Plane geometry; the errors of the gaps make the two uncorrelated, the drifts are taken as such too.
- Twist: near left + far right - near right - far left of the closures. A plane girder on a plane seat leaves none;
  its variance is 4 v.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from statistics import fmean

from db.raw_doc import CORNERS, RawDoc

FEWEST_DOF = 5
"""Fewer degrees of freedom tell no repeatability: common practice, no source."""

FLOOR = 1.0 / math.sqrt(3.0)
BEYOND = 3.29
"""Standard deviations past which a twist is looked at again: 1 in 1000 of a normal one."""

NL, NR, FL, FR = range(4)
_EXCHANGES = ((NL, NR), (FL, FR), (NL, FL), (NR, FR))


@dataclass(frozen=True, kw_only=True)
class Reduced:
    """A value, its standard deviation and its drift (None: there is nothing after to tell it)."""

    value: float
    sd: float
    drift: float | None = None


@dataclass(frozen=True, kw_only=True)
class FourGaps:
    """What four gaps come to: compression and twist in m, rotation in rad where the spacing is known."""

    compression: Reduced
    rotation: Reduced | None
    twist: float
    twist_sd: float


def pooled_sd(lists: Iterable[Sequence[float]]) -> float | None:
    """Return the standard deviation of one reading from lists of repeats, each about its own mean.

    None if they have fewer than `FEWEST_DOF` degrees of freedom.
    """
    squares, freedom = 0.0, 0
    for readings in lists:
        if len(readings) > 1:
            mean = fmean(readings)
            squares += sum((x - mean) ** 2 for x in readings)
            freedom += len(readings) - 1
    return math.sqrt(squares / freedom) if freedom >= FEWEST_DOF else None


def of_repeats(raw: RawDoc) -> Reduced:
    """Reduce repeats, with or without zeros; all in one unit, which the result has too."""
    s = max(raw.sd, raw.repeatability or 0.0)
    value, variance, drift = fmean(raw.repeats), s**2 / len(raw.repeats), None
    zeros = [zero for zero in (raw.zero_before, raw.zero_after) if zero]
    if zeros:
        value -= fmean(fmean(zero) for zero in zeros)
        variance += sum(s**2 / len(zero) for zero in zeros) / len(zeros) ** 2
    if len(zeros) > 1:
        drift = fmean(raw.zero_after) - fmean(raw.zero_before)
        variance += drift**2 / 12.0
    return Reduced(value=value, sd=max(math.sqrt(variance), FLOOR * raw.sd), drift=drift)


def of_gaps(raw: RawDoc) -> FourGaps:
    """Reduce the gaps at four corners, in m."""
    closed = closures(raw)
    unloaded = 2 if raw.gaps_after else 1
    v = raw.sd**2 * (1.0 + 1.0 / unloaded)
    # what has not opened again after unloading counts as drift: apparent closure, as any reading that grows
    drifts = (
        tuple(b - a for b, a in zip(raw.gaps_before, raw.gaps_after, strict=True)) if raw.gaps_after else ()
    )
    rotation = None
    if raw.corner_spacing is not None:
        turned = _slope(drifts, raw.corner_spacing) if drifts else None
        rotation = _reduced(_slope(closed, raw.corner_spacing), v / raw.corner_spacing**2, turned)
    return FourGaps(
        compression=_reduced(fmean(closed), v / 4.0, fmean(drifts) if drifts else None),
        rotation=rotation,
        twist=twist(closed),
        twist_sd=2.0 * math.sqrt(v),
    )


def closures(raw: RawDoc) -> tuple[float, ...]:
    """Return by how much each corner closed, in the order of `CORNERS`, in m."""
    after = raw.gaps_after or raw.gaps_before
    return tuple(
        (b + a) / 2.0 - loaded for b, a, loaded in zip(raw.gaps_before, after, raw.gaps, strict=True)
    )


def twist(corners: Sequence[float]) -> float:
    """Return by how much one diagonal exceeds the other, in the unit of the corners."""
    return corners[NL] + corners[FR] - corners[NR] - corners[FL]


def exchanges_that_flatten(raw: RawDoc) -> tuple[str, ...]:
    """Return which two neighbouring corners, exchanged in the loaded row, would leave a plane; none if it is one."""
    made = of_gaps(raw)
    limit = BEYOND * made.twist_sd
    if abs(made.twist) <= limit:
        return ()
    return tuple(
        f"{CORNERS[i]} and {CORNERS[j]}"
        for i, j in _EXCHANGES
        if abs(twist(_exchanged(raw, (i, j)))) <= limit
    )


def rows_exchanged(raw: RawDoc) -> bool:
    """Whether a corner opens that would close, as the others, if near and far were exchanged in the loaded row."""
    limit = BEYOND * of_gaps(raw).twist_sd / 2.0
    closed = closures(raw)
    turned = _exchanged(raw, (NL, FL), (NR, FR))
    return fmean(closed) > 0.0 and min(closed) < -limit and min(turned) >= -limit


def _exchanged(raw: RawDoc, *pairs: tuple[int, int]) -> tuple[float, ...]:
    """The closures if corners were exchanged in the loaded row."""
    unloaded = [c + loaded for c, loaded in zip(closures(raw), raw.gaps, strict=True)]
    loaded = list(raw.gaps)
    for i, j in pairs:
        loaded[i], loaded[j] = loaded[j], loaded[i]
    return tuple(u - x for u, x in zip(unloaded, loaded, strict=True))


def _slope(corners: Sequence[float], spacing: float) -> float:
    """Far over near, per spacing: positive where the girder goes down towards larger x."""
    return (corners[FL] + corners[FR] - corners[NL] - corners[NR]) / (2.0 * spacing)


def _reduced(value: float, variance: float, drift: float | None) -> Reduced:
    return Reduced(value=value, sd=math.sqrt(variance + (drift or 0.0) ** 2 / 12.0), drift=drift)
