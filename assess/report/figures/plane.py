"""Pad against seat: the pairs of stiffness and settlement at one support that the readings bear together.

Long and slanting: the readings tell a mixture of both, and neither alone. The outline is that of the normal picture,
from the intervals and the correlation of the two.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.ticker import MaxNLocator
from numpy.typing import NDArray

from assess.report import svg, words
from assess.results import GirderCalibration

_HEIGHT = 176.0
_LEFT, _RIGHT, _FOOT, _HEAD = 40.0, 12.0, 46.0, 18.0
_Z95 = 1.959964
_BOTH95 = 2.447747  # square root of the 95 % point of chi-square with 2 degrees of freedom
_TICKS = (1.0, 0.5, 2.0, 0.2, 5.0, 0.1, 10.0, 0.3, 0.7, 1.5, 3.0, 0.05, 20.0, 0.8, 0.9, 1.2)
_TICK_ROOM = 26.0  # pt between the labels of two ratios
_ROUND = np.linspace(0.0, 2.0 * math.pi, 91)


@dataclass(frozen=True, kw_only=True)
class Pair:
    """Pad and seat of one support: ln of stiffness over nominal and drop in mm, with sd and correlation."""

    support: str
    log_ratio: float
    log_sd: float
    drop_mm: float
    drop_sd_mm: float
    r: float
    moved: str

    def outline(self) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
        """Return the outline that holds both 95 times in 100: log10 of the ratio, and the drop in mm."""
        across, along = np.cos(_ROUND), np.sin(_ROUND)
        x = self.log_ratio + _BOTH95 * self.log_sd * across
        y = self.drop_mm + _BOTH95 * self.drop_sd_mm * (
            self.r * across + math.sqrt(max(1.0 - self.r**2, 0.0)) * along
        )
        return x / math.log(10.0), y


def pairs(fit: GirderCalibration) -> list[Pair]:
    """Return the supports of which both pad and seat were asked for and have an interval."""
    seats = {one.support: one for one in fit.settlements_mm}
    moved = {one.support: one.cause for one in fit.causes}
    tied = {frozenset((one.a, one.b)): one.r for one in fit.correlations}
    found = []
    for pad in fit.pads:
        seat = seats.get(pad.support)
        r = tied.get(frozenset((f"{pad.support} stiffness", f"{pad.support} settlement")))
        if seat is None or r is None or pad.high95_kN_per_m is None:
            continue
        values = (pad.low95_kN_per_m, pad.high95_kN_per_m, seat.low95, seat.high95)
        if not all(math.isfinite(value) for value in values) or pad.low95_kN_per_m <= 0.0:
            continue
        found.append(
            Pair(
                support=pad.support,
                log_ratio=math.log(pad.ratio_to_nominal),
                log_sd=math.log(pad.high95_kN_per_m / pad.low95_kN_per_m) / (2.0 * _Z95),
                drop_mm=seat.value,
                drop_sd_mm=(seat.high95 - seat.low95) / (2.0 * _Z95),
                r=r,
                moved=moved.get(pad.support, "not compared"),
            )
        )
    return found


def common_axes(shown: Sequence[Pair]) -> tuple[tuple[float, float], tuple[float, float]]:
    """Return the limits shared by all supports of a girder: log10 of the ratio, and mm."""
    lines = [pair.outline() for pair in shown]
    x = np.concatenate([np.log10([0.8, 1.25]), *(line[0] for line in lines)])
    y = np.concatenate([[-1.0, 1.0], *(line[1] for line in lines)])
    limits = [(float(v.min()), float(v.max())) for v in (x, y)]
    (left, right), (high, low) = [(a - 0.06 * (b - a), b + 0.06 * (b - a)) for a, b in limits]
    return (left, right), (high, low)


def plot(pair: Pair, limits: tuple[tuple[float, float], tuple[float, float]], *, key: str) -> str:
    """Draw one support.

    Parameters
    ----------
    pair
        Its pad and seat.
    limits
        Of `common_axes`, the same for all supports of the girder.
    key
        Unique on the page.
    """
    with svg.drawing(svg.SMALL_WIDTH, _HEIGHT) as figure:
        axes = _axes(figure, limits)
        axes.axvline(0.0, color=svg.NEUTRAL, lw=0.9, zorder=1)
        axes.axhline(0.0, color=svg.NEUTRAL, lw=0.9, zorder=1)
        x, y = pair.outline()
        axes.fill(x, y, fc=svg.ACCENT_TINT, ec=svg.ACCENT, lw=1.2, zorder=2)
        axes.plot(
            [pair.log_ratio / math.log(10.0)], [pair.drop_mm], marker="o", ms=4, mfc=svg.INK, mec=svg.INK
        )
        sheet = svg.paper(figure)
        sheet.text(2.0, _HEIGHT - 6.0, f"moved: {pair.moved}", ha="left", va="baseline")
        return svg.to_svg(
            figure, key=key, title=f"Pad and seat at {pair.support} together", desc=_in_words(pair)
        )


def _axes(figure: Figure, limits: tuple[tuple[float, float], tuple[float, float]]) -> Axes:
    (left, right), (high, low) = limits
    width = svg.SMALL_WIDTH
    room = (width - _LEFT - _RIGHT, _HEIGHT - _FOOT - _HEAD)
    axes = figure.add_axes((_LEFT / width, _FOOT / _HEIGHT, room[0] / width, room[1] / _HEIGHT))
    axes.patch.set_visible(False)
    for side in ("top", "right"):
        axes.spines[side].set_visible(False)
    axes.set_xlim(left, right)
    axes.set_ylim(low, high)  # down is down
    axes.yaxis.set_major_locator(MaxNLocator(5))
    ticks = _ratio_ticks(left, right, room[0])
    axes.set_xticks([math.log10(t) for t in ticks], [f"{t:g}" for t in ticks])
    axes.tick_params(length=3.0)
    axes.set_xlabel("stiffness over nominal (log scale)", labelpad=2.0)
    axes.annotate(
        "seat down, mm",
        (0, 1),
        (2 - _LEFT, 6),
        xycoords="axes fraction",
        textcoords="offset points",
        ha="left",
        va="bottom",
    )
    return axes


def _ratio_ticks(left: float, right: float, width: float) -> list[float]:
    per_pt = (right - left) / width
    chosen: list[float] = []
    for tick in _TICKS:
        at = math.log10(tick)
        if left <= at <= right and all(abs(at - math.log10(c)) > _TICK_ROOM * per_pt for c in chosen):
            chosen.append(tick)
    return sorted(chosen)


def _in_words(pair: Pair) -> str:
    ratio, low, high = (math.exp(pair.log_ratio + z * pair.log_sd) for z in (0.0, -_Z95, _Z95))
    drop, least, most = (pair.drop_mm + z * pair.drop_sd_mm for z in (0.0, -_Z95, _Z95))
    return (
        f"Stiffness over nominal {words.interval(ratio, low, high)}, "
        f"seat down {words.interval(drop, least, most, 'mm')}, "
        f"correlation {words.number(pair.r, 2)}. Moved: {pair.moved}."
    )
