"""A utilisation carried forward: median, half and 95 % of the forecast, and when it passes watch and limit."""

from __future__ import annotations

import datetime as dt
import math

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from assess.report import svg, words
from assess.results import Fan, SpanTrend

_HEIGHT = 190.0
_LEFT, _RIGHT, _FOOT, _HEAD = 40.0, 15.0, 58.0, 16.0
_MOST = 2.0  # utilisation past which nothing more is drawn
_EFFECTS = ("sagging", "hogging", "shear")


def governing(spans: list[SpanTrend]) -> list[SpanTrend]:
    """Return the row of each effect that comes highest: by the upper end of its forecast."""
    drawn = []
    for effect in _EFFECTS:
        own = [row for row in spans if row.effect == effect and row.fan is not None]
        if own:
            drawn.append(max(own, key=lambda row: row.fan.high95[-1] if row.fan else 0.0))
    return drawn


def plot(row: SpanTrend, *, key: str) -> str:
    """Draw one section's fan.

    Parameters
    ----------
    row
        A row that is carried forward.
    key
        Unique on the page.

    Raises
    ------
    ValueError
        If the row has no fan.
    """
    if row.fan is None:
        raise ValueError("a row that stands still has no fan")
    name = words.section(row.effect, row.span, row.support)
    with svg.drawing(svg.SMALL_WIDTH, _HEIGHT) as figure:
        axes = _axes(figure, row.fan)
        _bands(axes, row.fan)
        _foot(svg.paper(figure), row)
        return svg.to_svg(
            figure, key=key, title=f"Utilisation forecast, {name}", desc=_in_words(row, row.fan)
        )


def _axes(figure: Figure, fan: Fan) -> Axes:
    width = svg.SMALL_WIDTH
    room = (width - _LEFT - _RIGHT) / width, (_HEIGHT - _FOOT - _HEAD) / _HEIGHT
    axes = figure.add_axes((_LEFT / width, _FOOT / _HEIGHT, *room))
    axes.patch.set_visible(False)
    for side in ("top", "right"):
        axes.spines[side].set_visible(False)
    start, end = fan.dates[0].toordinal(), fan.dates[-1].toordinal()
    low, high = min(*fan.low95, 0.85), min(max(*fan.high95, 1.05), _MOST)
    axes.set_xlim(start, end)
    axes.set_ylim(max(0.0, low - 0.04 * (high - low)), high + 0.04 * (high - low))
    first, last = fan.dates[0].year + 1, fan.dates[-1].year
    every = max(1, math.ceil((last - first + 1) / 5))
    years = range(first + (-first) % every, last + 1, every)
    axes.set_xticks([dt.date(y, 1, 1).toordinal() for y in years], [str(y) for y in years])
    axes.locator_params(axis="y", nbins=5)
    axes.tick_params(length=3.0)
    axes.annotate(
        "utilisation",
        (0, 1),
        (2 - _LEFT, 5),
        xycoords="axes fraction",
        textcoords="offset points",
        ha="left",
        va="bottom",
    )
    for level, told in ((words.WATCH_FROM, "watch"), (1.0, "limit")):
        axes.axhline(level, color=svg.INK, lw=0.7 if level < 1.0 else 1.4, zorder=4)
        axes.text(end, level, told, ha="right", va="bottom", zorder=6)
    return axes


def _bands(axes: Axes, fan: Fan) -> None:
    days = np.array([day.toordinal() for day in fan.dates], dtype=float)
    axes.fill_between(days, fan.low95, fan.high95, fc=svg.ACCENT_TINT, ec="none", zorder=1)
    axes.fill_between(days, fan.low50, fan.high50, fc=svg.ACCENT, ec="none", alpha=0.35, zorder=2)
    for edge in (fan.low95, fan.high95):
        axes.plot(days, edge, color=svg.ACCENT, lw=0.7, zorder=3)
    axes.plot(days, fan.median, color=svg.ACCENT, lw=1.6, zorder=5)


def _foot(sheet: Axes, row: SpanTrend) -> None:
    told = [
        "line: median; dark: half; light: 95 % of the forecast",
        "5 % over 1 by " + (row.earliest_5_percent.isoformat() if row.earliest_5_percent else "no day of it"),
        "median over 1 by " + (row.median_crossing.isoformat() if row.median_crossing else "no day of it"),
    ]
    for i, line in enumerate(told):
        sheet.text(2.0, _HEIGHT - 27.0 + 12.0 * i, line, ha="left", va="baseline")


def _in_words(row: SpanTrend, fan: Fan) -> str:
    def at(i: int) -> str:
        told = words.interval(fan.median[i], fan.low95[i], fan.high95[i])
        return (
            f"{words.date(fan.dates[i])}: {told}, probability of having been over 0.9 by then "
            f"{fan.probability_over_watch[i]:.0%}, over 1 {fan.probability_over_limit[i]:.0%}."
        )

    parts = [at(0), at(len(fan.dates) // 2), at(len(fan.dates) - 1)]
    if row.shares and row.shares_on is not None:
        each = ", ".join(f"{in_words(one.what, one.support)} {one.share:.0%}" for one in row.shares)
        parts.append(f"The spread on {words.date(row.shares_on)} comes from: {each}.")
    return " ".join(parts)


def in_words(what: str, support: str | None) -> str:
    """Name what drives a forecast."""
    return "section losses" if what == "loss" else f"the {what} at {words.plain(support or '')}"
