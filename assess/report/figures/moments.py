"""Moments along a girder: sagging below the axis, capacity as a hatched edge."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.collections import LineCollection
from matplotlib.figure import Figure

from assess.report import svg, words
from assess.report.figures import silhouette
from assess.report.figures.layout import Block, fitted, pack, row_heights, write
from assess.results import GirderView, MomentLines
from assess.results.view import Floats

_LEFT, _RIGHT, _FOOT = 52.0, 8.0, 40.0
_DOTTED = (0, (1.0, 2.2))
_DASHED = (0, (6.0, 2.5))


@dataclass(frozen=True, kw_only=True)
class Peak:
    """A peak worth writing on the drawing; kN m, hogging negative."""

    x_m: float
    moment: float


def peaks(girder: GirderView) -> tuple[list[Peak], list[Peak]]:
    """Return the calibrated sagging peak of each span and the hogging peak about each interior support."""
    lines = girder.moments
    ends = np.concatenate([[0.0], np.cumsum(girder.span_lengths_m)])
    middles = (ends[:-1] + ends[1:]) / 2.0
    sagging = [_peak(lines.x_m, lines.calibrated_sagging, a, b) for a, b in pairwise(ends)]
    hogging = [_peak(lines.x_m, -lines.calibrated_hogging, a, b) for a, b in pairwise(middles)]
    return (
        [p for p in sagging if p is not None],
        [Peak(x_m=p.x_m, moment=-p.moment) for p in hogging if p is not None],
    )


def _peak(x_m: Floats, values: Floats, start: float, end: float) -> Peak | None:
    inside = np.flatnonzero(
        (x_m >= start - 1e-9) & (x_m <= end + 1e-9) & np.isfinite(values) & (values > 0.0)
    )
    if inside.size == 0:
        return None
    best = int(inside[np.argmax(values[inside])])
    return Peak(x_m=float(x_m[best]), moment=float(values[best]))


def envelopes(girder: GirderView, *, key: str, zero: str, basis: str = words.CALIBRATED) -> str:
    """Draw the factored envelopes on unyielding, nominal and calibrated supports with the capacity.

    Parameters
    ----------
    girder
        The girder line.
    key
        Unique on the page.
    zero
        What stands at x = 0, in words.
    basis
        The supports of the third case, in words.
    """
    sagging, hogging = peaks(girder)
    x_end = float(sum(girder.span_lengths_m))
    above = pack(*_labels(hogging, x_end), low=_LEFT + 2.0, high=svg.FULL_WIDTH - 1.0)
    below = pack(*_labels(sagging, x_end), low=_LEFT + 2.0, high=svg.FULL_WIDTH - 1.0)
    over, under = sum(row_heights(above)), sum(row_heights(below))
    head, body = 60.0, 190.0
    foot = _FOOT + _strips(girder)
    height = head + over + body + under + foot
    lines = girder.moments
    with svg.drawing(svg.FULL_WIDTH, height) as figure:
        axes = _axes(figure, girder, head=head, foot=foot, height=height, zero=zero)
        _limits(axes, _extent(lines), over=over, under=under, body=body)
        _curves(axes, lines)
        for capacity, outward in ((lines.capacity_sagging, 1.0), (lines.capacity_hogging, -1.0)):
            _hatched_edge(axes, lines.x_m, capacity, outward)
        sheet = svg.paper(figure)
        _write(sheet, axes, above, hogging, start=head + over, upward=True)
        _write(sheet, axes, below, sagging, start=head + over + body, upward=False)
        _stands(sheet, girder, top=height - foot + _FOOT)
        given = bool(np.isfinite(np.concatenate([lines.capacity_sagging, lines.capacity_hogging])).any())
        told = f"capacity; dots mark the peaks on {basis}" if given else "capacity not given"
        _legend(sheet, basis, capacity=told)
        return svg.to_svg(
            figure,
            key=key,
            title=f"Factored bending moments of girder {girder.girder}",
            desc=_in_words(girder, sagging, hogging, basis),
        )


def permanent(girder: GirderView, *, key: str, zero: str, basis: str = words.CALIBRATED) -> str:
    """Draw the moments of the permanent loads alone, smaller."""
    lines = girder.moments
    series = (lines.unyielding_permanent, lines.nominal_permanent, lines.calibrated_permanent)
    head, body = 36.0, 104.0
    height = head + body + _FOOT
    with svg.drawing(svg.FULL_WIDTH, height) as figure:
        axes = _axes(figure, girder, head=head, foot=_FOOT, height=height, zero=zero)
        _limits(axes, _range(series), over=3.0, under=3.0, body=body - 6.0)
        for values, style in zip(series, _styles(), strict=True):
            axes.plot(lines.x_m, values, **style)
        _legend(svg.paper(figure), basis, capacity=None)
        low, high = _range(series[2:])
        return svg.to_svg(
            figure,
            key=key,
            title=f"Moments of the permanent loads alone, girder {girder.girder}",
            desc=(
                f"On {basis} from {words.number(low)} kN m (hogging) to "
                f"{words.number(high)} kN m (sagging); on unyielding supports from "
                f"{words.number(_range(series[:1])[0])} to {words.number(_range(series[:1])[1])} kN m."
            ),
        )


def _styles() -> tuple[dict[str, Any], ...]:
    return (
        {"color": svg.INK, "lw": 1.1, "ls": _DOTTED, "zorder": 3},
        {"color": svg.SECOND, "lw": 1.2, "ls": _DASHED, "zorder": 4},
        {"color": svg.ACCENT, "lw": 2.0, "ls": "-", "zorder": 5},
    )


def _range(series: tuple[Floats, ...]) -> tuple[float, float]:
    values = np.concatenate([np.ravel(s) for s in series])
    values = values[np.isfinite(values)]
    if values.size == 0:
        return (0.0, 0.0)
    return (min(0.0, float(values.min())), max(0.0, float(values.max())))


def _extent(lines: MomentLines) -> tuple[float, float]:
    return _range(
        (
            lines.capacity_sagging,
            lines.capacity_hogging,
            lines.unyielding_sagging,
            lines.unyielding_hogging,
            lines.nominal_sagging,
            lines.nominal_hogging,
            lines.sagging_low,
            lines.sagging_high,
            lines.hogging_low,
            lines.hogging_high,
            lines.calibrated_sagging,
            lines.calibrated_hogging,
        )
    )


def _axes(figure: Figure, girder: GirderView, *, head: float, foot: float, height: float, zero: str) -> Axes:
    width = svg.FULL_WIDTH
    axes = figure.add_axes(
        (_LEFT / width, foot / height, (width - _LEFT - _RIGHT) / width, (height - foot - head) / height)
    )
    axes.patch.set_visible(False)
    for side in ("top", "right"):
        axes.spines[side].set_visible(False)
    length = float(sum(girder.span_lengths_m))
    axes.set_xlim(0.0, length)
    axes.axhline(0.0, color=svg.INK, lw=0.9, zorder=2)
    axes.yaxis.set_major_formatter(lambda v, _: words.entered(v) if abs(v) > 1e-9 else "0")
    axes.xaxis.set_major_formatter(lambda v, _: words.entered(v) if abs(v) > 1e-9 else "0")
    marks = "triangles mark supports" + (", circles hinges" if girder.hinges_m else "")
    axes.set_xlabel(fitted(f"m from {zero}; {marks}", width - _LEFT - _RIGHT))
    for x in np.concatenate([[0.0], np.cumsum(girder.span_lengths_m)]):
        axes.plot([x], [0.0], marker="^", ms=5.5, mfc="white", mec=svg.INK, mew=0.9, clip_on=False, zorder=6)
    for x in girder.hinges_m:
        axes.plot([x], [0.0], marker="o", ms=4.6, mfc="white", mec=svg.INK, mew=0.9, zorder=6)
    return axes


def _limits(axes: Axes, extent: tuple[float, float], *, over: float, under: float, body: float) -> None:
    """Leave `over` and `under` pt free for labels; sagging (positive) points down."""
    low, high = extent
    if high - low <= 0.0:
        low, high = -1.0, 1.0
    per_pt = (high - low) * 1.08 / body
    axes.set_ylim(high + per_pt * (under + 0.04 * body), low - per_pt * (over + 0.04 * body))


def _curves(axes: Axes, lines: MomentLines) -> None:
    for low, high in ((lines.sagging_low, lines.sagging_high), (lines.hogging_low, lines.hogging_high)):
        axes.fill_between(lines.x_m, low, high, fc=svg.ACCENT_TINT, ec=svg.ACCENT, lw=0.35, zorder=1)
    cases = (
        (lines.unyielding_sagging, lines.unyielding_hogging),
        (lines.nominal_sagging, lines.nominal_hogging),
        (lines.calibrated_sagging, lines.calibrated_hogging),
    )
    for pair, style in zip(cases, _styles(), strict=True):
        for values in pair:
            axes.plot(lines.x_m, values, **style)


def _hatched_edge(axes: Axes, x_m: Floats, capacity: Floats, outward: float) -> None:
    """Draw the capacity as a line with short ticks on its outer side, never as a filled zone."""
    if not np.isfinite(capacity).any():
        return
    axes.plot(x_m, capacity, color=svg.INK, lw=1.3, zorder=4.5)
    start, end = axes.get_xlim()
    per_pt = (end - start) / (svg.FULL_WIDTH - _LEFT - _RIGHT)
    low, high = axes.get_ylim()
    tall = abs(low - high) / (axes.get_position().height * axes.figure.bbox.height)
    at = np.arange(start + 2.0 * per_pt, end - 4.0 * per_pt, 7.0 * per_pt)
    level = np.interp(at, x_m, capacity)
    kept = np.isfinite(level)
    ticks = [
        [(x, y), (x + 4.0 * per_pt, y + outward * 5.5 * tall)]
        for x, y in zip(at[kept], level[kept], strict=True)
    ]
    axes.add_collection(LineCollection(ticks, colors=svg.INK, linewidths=0.7, zorder=4.4))


def _labels(found: list[Peak], x_end: float) -> tuple[list[float], list[tuple[str, ...]]]:
    per_m = (svg.FULL_WIDTH - _LEFT - _RIGHT) / x_end
    texts: list[tuple[str, ...]] = [
        (f"{words.number(p.moment)} kN m", f"at {words.place(p.x_m)}") for p in found
    ]
    return [_LEFT + per_m * p.x_m for p in found], texts


def _write(
    sheet: Axes, axes: Axes, blocks: list[Block], found: list[Peak], *, start: float, upward: bool
) -> None:
    """Write the peaks in rows away from the axis, each with a leader to its place on the curve."""
    total = axes.figure.bbox.height
    for peak in found:
        x, y = axes.transData.transform((peak.x_m, peak.moment))
        sheet.plot([x, x], [total - y, start], color=svg.NEUTRAL, lw=0.6, zorder=1)
        sheet.plot([x], [total - y], marker="o", ms=4.0, color=svg.ACCENT, zorder=7)
    write(sheet, blocks, start=start, upward=upward)


def _strips(girder: GirderView) -> float:
    """Height of all strips, pt."""
    return sum(silhouette.strip_height(one, svg.FULL_WIDTH - _RIGHT - 4.0) for one in girder.stands)


def _stands(sheet: Axes, girder: GirderView, *, top: float) -> None:
    """Stand the live load under the axis where it governs, lengthwise to the scale of the moments."""
    supports = np.concatenate([[0.0], np.cumsum(girder.span_lengths_m)])
    width = svg.FULL_WIDTH - _LEFT - _RIGHT
    at = top
    for stand in girder.stands:
        silhouette.strip(sheet, stand, supports, top=at, left=_LEFT, width=width)
        at += silhouette.strip_height(stand, _LEFT + width - 4.0)


def _legend(sheet: Axes, basis: str, *, capacity: str | None) -> None:
    third = basis if basis != words.NOMINAL else "nominal pads, median"
    names = ("unyielding supports", "nominal pads", third)
    x = _LEFT
    for name, style in zip(names, _styles(), strict=True):
        sheet.plot([x, x + 24], [8, 8], **style)
        sheet.text(x + 29, 11, name, ha="left", va="baseline")
        x += 29 + svg.text_width(name) + 16
    if capacity:
        band: dict[str, Any] = {"fc": svg.ACCENT_TINT, "ec": svg.ACCENT, "lw": 0.35}
        sheet.fill_between([_LEFT, _LEFT + 24], [29, 29], [38, 38], **band)
        sheet.plot([_LEFT, _LEFT + 24], [33.5, 33.5], **_styles()[2])
        told = "95 % band (narrower than the line where it does not show)"
        sheet.text(_LEFT + 29, 36.5, told, ha="left", va="baseline")
        sheet.plot([_LEFT, _LEFT + 24], [20, 20], color=svg.INK, lw=1.3)
        for i in range(4):
            sheet.plot([_LEFT + 6 * i, _LEFT + 6 * i + 4], [20, 25.5], color=svg.INK, lw=0.7)
        sheet.text(_LEFT + 29, 24, capacity, ha="left", va="baseline")
    sheet.text(2.0, 26.0 if capacity is None else 52.0, "kN m, sagging downward", ha="left", va="baseline")


def _in_words(girder: GirderView, sagging: list[Peak], hogging: list[Peak], basis: str) -> str:
    lines = girder.moments
    parts = [f"Peaks on {basis}:"]
    for name, found, capacity in (
        ("sagging", sagging, lines.capacity_sagging),
        ("hogging", hogging, lines.capacity_hogging),
    ):
        for peak in found:
            at = float(np.interp(peak.x_m, lines.x_m, capacity))
            told = words.quantity(at, "kN m", "not given")
            parts.append(
                f"{name} {words.number(peak.moment)} kN m at {words.place(peak.x_m)}, capacity there {told};"
            )
    parts += [f"Live load for {silhouette.in_words(stand)}." for stand in girder.stands]
    return " ".join(parts)
