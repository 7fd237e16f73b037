"""The live load standing where it governs: a strip of rail or road under the moments, wheels and strokes on it."""

from __future__ import annotations

import re

import numpy as np
from matplotlib.axes import Axes
from matplotlib.collections import LineCollection
from matplotlib.patches import Circle

from assess.report import svg, words
from assess.report.figures.layout import fitted
from assess.results import LoadStand
from assess.results.view import Floats

STRIP_PT = 44.0
"""Height of a strip with one line of words."""

LINE_PT = 13.0
_TALLEST = 13.0  # pt: the strokes of the heaviest stretch
_EVERY = 5.0  # pt between strokes


def strip(
    sheet: Axes, stand: LoadStand, supports_m: Floats, *, top: float, left: float, width: float
) -> None:
    """Draw one strip from `top` (pt) down: what stands there in words, then the girder line with the load on it.

    Parameters
    ----------
    sheet : in pt, y downward
    stand : LoadStand
    supports_m : (n,) x of the supports, which mark the line; the last is its end
    top, left, width : pt
    """
    per_m = width / float(supports_m[-1])
    told = lines(stand, left + width - 4.0)
    base = top + strip_height(stand, left + width - 4.0) - 8.0
    for i, line in enumerate(told):
        sheet.text(2.0, top + 10.0 + i * LINE_PT, line, ha="left", va="baseline")
    sheet.plot([left, left + width], [base, base], color=svg.INK, lw=0.9, zorder=2)
    for x in supports_m:
        sheet.plot(
            [left + per_m * x], [base + 3.5], marker="^", ms=5.0, mfc="white", mec=svg.INK, mew=0.9, zorder=3
        )
    most = max((w for _, _, w in stand.stretches), default=1.0)
    for start, end, intensity in stand.stretches:
        _strokes(sheet, left + per_m * start, left + per_m * end, base, _TALLEST * intensity / most)
    for x, _ in stand.axles:
        sheet.add_patch(Circle((left + per_m * x, base - 3.2), 2.8, fc="white", ec=svg.INK, lw=1.1, zorder=5))
    at = left + per_m * stand.x_m
    sheet.plot([at, at], [base - 19.0, base + 6.0], color=svg.ACCENT, lw=1.0, ls=(0, (3.0, 2.0)), zorder=4)


def strip_height(stand: LoadStand, width: float) -> float:
    """Height of a strip, pt, with its words in `width` pt."""
    return STRIP_PT + LINE_PT * (len(lines(stand, width)) - 1)


def lines(stand: LoadStand, width: float) -> list[str]:
    """What stands where, broken between its parts into as few lines of `width` pt as hold it."""
    told: list[str] = []
    for part in re.split(r"(?<=[;,]) ", in_words(stand)):
        longer = f"{told[-1]} {part}" if told else part
        if told and svg.text_width(longer) <= width:
            told[-1] = longer
        else:
            told.append(part)
    return [fitted(line, width) for line in told]


def in_words(stand: LoadStand) -> str:
    """Say what stands where, for whom the drawing is read out as well."""
    parts = []
    if stand.axles:
        loads = [load for _, load in stand.axles]
        x = [at for at, _ in stand.axles]
        count = f"{len(loads)} axle{'s' if len(loads) > 1 else ''}, {words.number(sum(loads))} kN"
        parts.append(f"{count}, {_between(min(x), max(x))}" if len(loads) > 1 else f"{count}, {x[0]:.2f} m")
    for intensity in dict.fromkeys(w for _, _, w in stand.stretches):
        where = ", ".join(_between(a, b) for a, b, w in stand.stretches if w == intensity)
        parts.append(f"{words.number(intensity)} kN/m on {where}")
    way = f", running to {stand.towards}" if stand.towards else ""
    return f"{stand.effect} at {words.place(stand.x_m)}: {'; '.join(parts)}{way}"


def _between(start: float, end: float) -> str:
    return f"{start:.1f} to {end:.1f} m"


def _strokes(sheet: Axes, start: float, end: float, base: float, tall: float) -> None:
    """Draw a stretch as a row of short strokes under a line."""
    count = max(2, round((end - start) / _EVERY) + 1)
    lines = [[(x, base), (x, base - tall)] for x in np.linspace(start, end, count)]
    sheet.add_collection(LineCollection(lines, colors=svg.NEUTRAL, linewidths=0.8, zorder=1))
    sheet.plot([start, end], [base - tall] * 2, color=svg.INK, lw=1.1, zorder=2)
