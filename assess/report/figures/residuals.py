"""Readings against the fit: standardised residuals as dots between the lines past which one is suspect."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise

from matplotlib.axes import Axes

from assess.report import svg, words
from assess.report.figures.layout import fitted
from assess.results import ReadingResult

CRITICAL = 3.29  # two-sided, alpha 0.001 (Baarda 1968)
ROWS_MOST = 34  # of one drawing: more would not stand on one page
_ROW = 13.0
_LEFT, _RIGHT, _HEAD, _FOOT = 186.0, 64.0, 20.0, 34.0


def reading_name(reading: ReadingResult) -> str:
    """Name a reading by its state, quantity and place."""
    where = f" at {reading.support}" if reading.support is not None else ""
    if reading.at_m is not None:
        where += f" at {words.place(reading.at_m)}"
    return f"{reading.state}: {reading.quantity}{where}"


def parts(readings: Sequence[ReadingResult]) -> list[Sequence[ReadingResult]]:
    """Return the readings of each drawing: as few drawings as hold them all, of about equal length."""
    count = math.ceil(len(readings) / ROWS_MOST)
    bounds = [round(i * len(readings) / count) for i in range(count + 1)] if count else []
    return [readings[a:b] for a, b in pairwise(bounds)]


def plot(readings: Sequence[ReadingResult], *, key: str, title: str) -> str:
    """Draw the standardised residuals of up to `ROWS_MOST` readings, one row each.

    Parameters
    ----------
    readings
        In the order in which they stand in the table.
    key
        Unique on the page.
    title
        The name of the drawing.
    """
    height = _HEAD + _ROW * len(readings) + _FOOT
    reach = _reach(readings)
    with svg.drawing(svg.FULL_WIDTH, height) as figure:
        axes = svg.paper(figure)
        _lines(axes, reach, height)
        for i, reading in enumerate(readings):
            _row(axes, reading, _HEAD + _ROW * (i + 0.5), reach)
        return svg.to_svg(figure, key=key, title=title, desc=_in_words(readings))


def _reach(readings: Sequence[ReadingResult]) -> float:
    found = [abs(r.standardised_residual) for r in readings if r.standardised_residual is not None]
    return max([4.0, *(1.08 * v for v in found if math.isfinite(v))])


def _x(value: float, reach: float) -> float:
    middle = (_LEFT + svg.FULL_WIDTH - _RIGHT) / 2.0
    return middle + value / reach * (svg.FULL_WIDTH - _RIGHT - _LEFT) / 2.0


def _lines(axes: Axes, reach: float, height: float) -> None:
    low, high = _HEAD - 4.0, height - _FOOT + 3.0
    axes.plot([_x(0.0, reach)] * 2, [low, high], color=svg.INK, lw=0.8)
    for limit in (-CRITICAL, CRITICAL):
        axes.plot([_x(limit, reach)] * 2, [low, high], color=svg.SECOND, lw=1.1, ls=(0, (5, 2)))
        label = f"{limit:+.2f}".replace("-", words.MINUS)
        axes.text(_x(limit, reach), low - 4.0, label, ha="center", va="baseline", color=svg.SECOND)
    axes.text(2.0, low - 4.0, "state: reading", ha="left", va="baseline")
    axes.plot([_x(-reach, reach), _x(reach, reach)], [high, high], color=svg.INK, lw=0.8)
    step = next(s for s in (1, 2, 5, 10, 20, 50, 100, 1000, 10000, 10**9) if reach / s <= 6.0)
    for tick in range(-int(reach / step) * step, int(reach / step) * step + 1, step):
        axes.plot([_x(tick, reach)] * 2, [high, high + 3], color=svg.INK, lw=0.8)
        axes.text(_x(tick, reach), high + 13, words.entered(tick), ha="center", va="baseline")
    axes.text(_x(0.0, reach), high + 26, "standardised residual (no unit)", ha="center", va="baseline")


def _row(axes: Axes, reading: ReadingResult, y: float, reach: float) -> None:
    axes.text(2.0, y + 3.2, fitted(reading_name(reading), _LEFT - 8.0), ha="left", va="baseline")
    axes.plot([_LEFT, svg.FULL_WIDTH - _RIGHT], [y, y], color=svg.NEUTRAL_TINT, lw=0.6, zorder=0)
    value = reading.standardised_residual
    if value is None or not math.isfinite(value):
        axes.text(
            _x(0.0, reach) + 6.0,
            y + 3.2,
            "not determined: " + ("unchecked" if reading.predicted is not None else "not fitted"),
            va="baseline",
            bbox={"fc": "white", "ec": "none", "pad": 1.0},
        )
        return
    x = _x(value, reach)
    axes.plot([_x(0.0, reach), x], [y, y], color=svg.NEUTRAL, lw=0.8, zorder=1)
    marker, colour = ("D", svg.SECOND) if reading.suspect else ("o", svg.ACCENT)
    axes.plot([x], [y], marker=marker, ms=5.0, mfc=colour, mec=colour, zorder=3)
    if reading.suspect:
        axes.text(
            svg.FULL_WIDTH - _RIGHT + 8.0, y + 3.2, "suspect", ha="left", va="baseline", color=svg.SECOND
        )


def _in_words(readings: Sequence[ReadingResult]) -> str:
    found = [r for r in readings if r.standardised_residual is not None]
    inside = sum(1 for r in found if abs(r.standardised_residual or 0.0) <= CRITICAL)
    parts = [f"{inside} of {len(readings)} readings lie within plus or minus {CRITICAL}."]
    for reading in readings:
        value = reading.standardised_residual
        told = words.not_determined("no other reading checks it") if value is None else words.number(value)
        parts.append(f"{reading_name(reading)}: {told}{', suspect' if reading.suspect else ''}.")
    return " ".join(parts)
