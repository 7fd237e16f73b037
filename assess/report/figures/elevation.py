"""The bridge from the side: lengths to scale, movements exaggerated by a factor that is written on it."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes
from matplotlib.patches import Circle, Polygon, Rectangle

from assess.report import svg, words
from assess.report.figures import seats
from assess.report.figures.bearings import DRAWN_MOST, PAD, draw_pad, draw_pin
from assess.report.figures.layout import LINE_PT, fitted, pack, row_heights, wrapped, write
from assess.results import ElevationState, GirderView, MeasuredPoint, SupportView

_DEPTH = 15.0  # pt, girder
_STONE = 6.0
_HINGE = 2.6  # pt, radius
_DATUM = (0, (1.0, 1.6))
_STEPS = (1.0, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 6.0, 8.0)


@dataclass(frozen=True, kw_only=True)
class _Sheet:
    """The scales of one drawing, in pt."""

    left: float
    per_m: float
    per_mm: float  # movements
    soffit: float
    ground: float
    pad_width: float
    line_width: float
    bar: float  # level of the test vehicle
    lie: seats.Lie

    def x(self, x_m: float) -> float:
        return self.left + self.per_m * x_m

    def under(self, x_m: float) -> float:
        """Return the level of the girder's soffit as it lies on its seats."""
        return self.soffit + self.per_mm * float(self.lie.at(x_m))

    @property
    def seat(self) -> float:
        return self.soffit + PAD


def largest_movement_mm(state: ElevationState) -> float:
    """Return the largest fitted or measured movement of a state in mm, either way."""
    values = [abs(v) for v in state.fitted_mm.tolist()]
    values += [abs(v) for p in state.points for v in (p.value_mm, p.fitted_mm)]
    return max((v for v in values if math.isfinite(v)), default=0.0)


def exaggeration(girder: GirderView, lie: seats.Lie, room_pt: float, per_m: float) -> float | None:
    """Return the round factor by which movements are drawn larger than lengths; None if nothing moves.

    One factor holds for all states of a girder and for the lie of the girder on its seats, from which they start.
    """
    largest = max(abs(v) for v in seats.extent_mm(girder, girder.states, lie))
    if not largest > 0.0:
        return None
    free = room_pt / (largest * per_m / 1000.0)
    power = 10.0 ** math.floor(math.log10(free))
    return power * max(step for step in _STEPS if step * power <= free * (1.0 + 1e-12))


def full(girder: GirderView, state: ElevationState | None, *, key: str, zero: str) -> str:
    """Draw the girder with its pads, seats and span lengths, and one test state on it where there is one.

    Parameters
    ----------
    girder
        The girder line.
    state
        The test state to show, or None.
    key
        Unique on the page.
    zero
        What stands at x = 0, in words.
    """
    supports = sorted(girder.supports, key=lambda s: s.x_m)
    lie = seats.lie(girder)
    head = 38.0 if state else 8.0
    sheet, factor = _sheet(
        girder, lie, svg.FULL_WIDTH, margin=46.0, head=head, room=72.0 if lie.moved else 62.0
    )
    anchors = [sheet.x(s.x_m) for s in supports]
    blocks = pack(anchors, [_support_lines(s) for s in supports], low=1.0, high=svg.FULL_WIDTH - 1.0)
    top = sheet.ground + 18.0
    foot = top + sum(row_heights(blocks))
    height = foot + (3.0 if lie.moved else 2.0) * LINE_PT + 5.0
    with svg.drawing(svg.FULL_WIDTH, height) as figure:
        axes = svg.paper(figure)
        _piers(axes, sheet, supports, full=True)
        _girder(axes, sheet, girder)
        for support in supports:
            _bearing(axes, sheet, support)
        _dimensions(axes, sheet, girder)
        write(axes, blocks, start=top)
        if state is not None:
            _movement(axes, sheet, state, label=True)
            _key(axes, state)
        _notes(axes, factor, lie, foot=foot, zero=zero)
        if girder.hinges_m:
            _hinge_key(axes, foot=foot)
        return svg.to_svg(
            figure,
            key=key,
            title=f"Elevation of girder {girder.girder}" + (f", state {state.state}" if state else ""),
            desc=" ".join([_supports_in_words(girder), *_state_in_words(state, factor)]),
        )


def small(girder: GirderView, state: ElevationState, *, key: str) -> str:
    """Draw one more test state, small, by the exaggeration that fits all states; the girder is drawn straight."""
    supports = sorted(girder.supports, key=lambda s: s.x_m)
    sheet, factor = _sheet(girder, seats.flat(), svg.SMALL_WIDTH, margin=12.0, head=32.0, room=36.0)
    suspects = sum(1 for p in state.points if p.suspect)
    with svg.drawing(svg.SMALL_WIDTH, sheet.ground + 18.0 + (LINE_PT if suspects else 0.0)) as figure:
        axes = svg.paper(figure)
        _piers(axes, sheet, supports, full=False)
        _girder(axes, sheet, girder)
        _movement(axes, sheet, state, label=False)
        told = "no movement to draw" if factor is None else f"movements × {words.number(factor)}"
        peak = f"largest {words.number(largest_movement_mm(state))} mm"
        axes.text(sheet.left, sheet.ground + 13.0, f"{told}; {peak}", ha="left", va="baseline")
        if suspects:
            remark = f"crossed circle: suspect reading ({suspects})"
            axes.text(sheet.left, sheet.ground + 13.0 + LINE_PT, remark, color=svg.SECOND, va="baseline")
        return svg.to_svg(
            figure,
            key=key,
            title=f"Girder {girder.girder}, state {state.state}",
            desc=" ".join(_state_in_words(state, factor)),
        )


def _sheet(
    girder: GirderView, lie: seats.Lie, width: float, *, margin: float, head: float, room: float
) -> tuple[_Sheet, float | None]:
    length = sum(girder.span_lengths_m)
    per_m = (width - 2.0 * margin) / length
    factor = exaggeration(girder, lie, room, per_m)
    per_mm = 0.0 if factor is None else factor * per_m / 1000.0
    upward = -per_mm * seats.extent_mm(girder, [], lie)[0]  # of the girder before a test
    risen = -per_mm * seats.extent_mm(girder, girder.states, lie)[0]
    soffit = head + max(upward + _DEPTH, risen)
    shortest = per_m * min(girder.span_lengths_m)
    sheet = _Sheet(
        left=margin,
        per_m=per_m,
        per_mm=per_mm,
        soffit=soffit,
        ground=soffit + room + 26.0,
        pad_width=min(26.0, 0.42 * shortest),
        line_width=1.8 if width == svg.FULL_WIDTH else 1.5,
        bar=soffit - upward - _DEPTH - 10.0,
        lie=lie,
    )
    return sheet, factor


def _girder(axes: Axes, sheet: _Sheet, girder: GirderView) -> None:
    """Draw the girder as it lies on its pads; where seats moved, its level at the datum as a dotted line."""
    end = float(sum(girder.span_lengths_m))
    at = (
        np.unique([*np.linspace(0.0, end, 101), *girder.hinges_m])
        if sheet.lie.moved
        else np.array([0.0, end])
    )
    xs = sheet.left + sheet.per_m * at
    soffit = sheet.soffit + sheet.per_mm * sheet.lie.at(at)
    outline = np.concatenate([np.stack([xs, soffit], 1), np.stack([xs, soffit - _DEPTH], 1)[::-1]])
    axes.add_patch(Polygon(outline, closed=True, fc=svg.NEUTRAL_TINT, ec=svg.INK, lw=0.9, zorder=2))
    for inset in (2.5, _DEPTH - 2.5):
        axes.plot(xs, soffit - inset, color=svg.INK, lw=0.5, zorder=2.1)
    if sheet.lie.moved:
        axes.plot(xs[[0, -1]], [sheet.soffit] * 2, color=svg.SECOND, lw=1.0, ls=_DATUM, zorder=3.5)
    for x_m in girder.hinges_m:
        _hinge(axes, sheet.x(x_m), sheet.under(x_m))


def _hinge(axes: Axes, x: float, soffit: float) -> None:
    """Draw an internal hinge: the girder parted, with a small open circle between the parts."""
    axes.plot([x, x], [soffit, soffit - _DEPTH], color=svg.INK, lw=0.9, zorder=2.2)
    axes.add_patch(Circle((x, soffit - _DEPTH / 2.0), _HINGE, fc="white", ec=svg.INK, lw=1.1, zorder=2.3))


def _piers(axes: Axes, sheet: _Sheet, supports: list[SupportView], *, full: bool) -> None:
    half = 0.5 * sheet.pad_width * (1.0 if full else 0.5)
    for support in supports:
        x = sheet.x(support.x_m)
        seat = sheet.under(support.x_m) + PAD
        stone = Rectangle((x - half - 3.0, seat), 2 * half + 6.0, _STONE, fc=svg.NEUTRAL, ec=svg.INK, lw=0.7)
        axes.add_patch(stone)
        for side in (-1.0, 1.0):
            axes.plot([x + side * half] * 2, [seat + _STONE, sheet.ground], color=svg.NEUTRAL, lw=0.9)
        axes.plot([x - half - 5.0, x + half + 5.0], [sheet.ground] * 2, color=svg.NEUTRAL, lw=0.9)
        if not full:
            stub = Rectangle((x - 3.0, sheet.soffit), 6.0, PAD, fc="white", ec=svg.INK, lw=0.7)
            axes.add_patch(stub)


def _bearing(axes: Axes, sheet: _Sheet, support: SupportView) -> None:
    """Draw a pad or a pin between girder and seat; an arrow shows how far a seat moved since the datum."""
    x, top = sheet.x(support.x_m), sheet.under(support.x_m)
    drop = sheet.per_mm * seats.drop_mm(support)
    if abs(drop) > 0.5:
        reach = 0.5 * sheet.pad_width
        axes.plot(
            [x - reach - 4, x + reach + 12], [sheet.seat] * 2, color=svg.SECOND, lw=1.0, ls=_DATUM, zorder=3
        )
        arrow = {"arrowstyle": "-|>", "color": svg.SECOND, "lw": 1.0, "shrinkA": 0, "shrinkB": 0}
        axes.annotate("", (x + reach + 9, sheet.seat + drop), (x + reach + 9, sheet.seat), arrowprops=arrow)
    if support.kind == "pin":
        draw_pin(axes, x, top)
    else:
        draw_pad(axes, x, top, support.ratio, sheet.pad_width)


def _dimensions(axes: Axes, sheet: _Sheet, girder: GirderView) -> None:
    """Write the span lengths on a dimension line below the piers."""
    y, x_m = sheet.ground + 14.0, 0.0
    for length in girder.span_lengths_m:
        a, b = sheet.x(x_m), sheet.x(x_m + length)
        axes.plot([a, b], [y, y], color=svg.INK, lw=0.6)
        for end in (a, b):
            axes.plot([end - 2.5, end + 2.5], [y + 2.5, y - 2.5], color=svg.INK, lw=0.9)
        text = words.span_length(length)
        if svg.text_width(text) < b - a - 6.0:
            axes.text((a + b) / 2, y - 3.0, text, ha="center", va="baseline")
        x_m += length


def _support_lines(support: SupportView) -> tuple[str, ...]:
    name = wrapped(support.support)
    lines: tuple[str, ...]
    if support.kind == "pin":
        lines = ("pin",)
    elif support.ratio is None:
        lines = ("not determined:", "no calibration")
    else:
        lines = (f"{words.number(support.ratio)} × nominal", *_interval_lines(support))
        if support.ratio > DRAWN_MOST:
            lines += (f"drawn at {words.entered(DRAWN_MOST)} ×",)
        if support.data_share is not None and support.data_share < 0.5:
            lines += ("told by the", "assumption")
    if support.seat_drop_mm is not None:
        lines += (f"seat {words.seat(support.seat_drop_mm)}",)
        if not words.seat_moved(support.seat_drop_mm, support.seat_drop_sd_mm):
            lines += ("within 2 sd of 0",)
        if support.seat_drop_sd_mm is not None:
            lines += (f"(sd {words.spread(support.seat_drop_sd_mm)} mm)",)
    return name + lines


def _interval_lines(support: SupportView) -> tuple[str, ...]:
    low, high = support.ratio_low, support.ratio_high
    if low is None or high is None or not (words.known(low) and words.known(high)):
        return ("interval not", "determined")
    return (f"({words.number(low)} to {words.number(high)})",)


def _movement(axes: Axes, sheet: _Sheet, state: ElevationState, *, label: bool) -> None:
    """Draw the fitted line, the measured points and the wheels of one state, from the girder as it lies."""
    xs = [sheet.x(x) for x in state.x_m.tolist()]
    ys = (sheet.soffit + sheet.per_mm * (sheet.lie.at(state.x_m) + state.fitted_mm)).tolist()
    axes.plot(xs, ys, color=svg.ACCENT, lw=sheet.line_width, zorder=5)
    for point in state.points:
        _point(axes, sheet, point, label=label)
    _wheels(axes, sheet, state)


def _level(sheet: _Sheet, point: MeasuredPoint) -> float:
    base = sheet.under(point.x_m) + (PAD if point.kind == "settlement" else 0.0)
    return base + sheet.per_mm * point.value_mm


def _point(axes: Axes, sheet: _Sheet, point: MeasuredPoint, *, label: bool) -> None:
    x, y = sheet.x(point.x_m), _level(sheet, point)
    bar = sheet.per_mm * point.sd_mm
    colour = svg.SECOND if point.suspect else svg.INK
    axes.plot([x, x], [y - bar, y + bar], color=colour, lw=1.0, zorder=6)
    for end in (y - bar, y + bar):
        axes.plot([x - 2.5, x + 2.5], [end, end], color=colour, lw=1.0, zorder=6)
    axes.add_patch(Circle((x, y), 3.0, fc="white", ec=colour, lw=1.2, zorder=6.1))
    if point.suspect:
        for side in (-1.0, 1.0):
            axes.plot([x - 5, x + 5], [y - side * 5, y + side * 5], color=colour, lw=1.0, zorder=6.2)
        if label:
            axes.text(x + 7.0, y - 5.0, "suspect", ha="left", va="baseline", color=colour, zorder=7)


def _wheels(axes: Axes, sheet: _Sheet, state: ElevationState) -> None:
    if not state.axles:
        return
    for x_m, _ in state.axles:
        x, hub = sheet.x(x_m), sheet.under(x_m) - _DEPTH - 4.0
        axes.plot([x, x], [sheet.bar, hub], color=svg.INK, lw=0.8, zorder=3.9)
        axes.add_patch(Circle((x, hub), 3.6, fc="white", ec=svg.INK, lw=1.1, zorder=4))
        axes.add_patch(Circle((x, hub), 0.9, fc=svg.INK, ec="none", zorder=4.1))
    ends = [sheet.x(x) for x, _ in state.axles]
    a, b = min(ends), max(ends)
    axes.plot([a - 4.5, b + 4.5], [sheet.bar] * 2, color=svg.INK, lw=1.6, zorder=4)
    text = _axles_in_words(state)
    width = 2.0 * sheet.left + sheet.per_m * float(max(state.x_m, default=0.0))
    half = svg.text_width(text) / 2.0 + 2.0
    axes.text(min(max((a + b) / 2, half), width - half), sheet.bar - 4.0, text, ha="center", va="baseline")


def _axles_in_words(state: ElevationState) -> str:
    loads = [kn for _, kn in state.axles]
    axle = "axle" if len(loads) == 1 else "axles"
    return f"{len(loads)} {axle}, {words.number(sum(loads))} kN on this girder"


def _key(axes: Axes, state: ElevationState) -> None:
    """Say what circle and line are, at the head of the drawing, and how large the largest movement is."""
    y = 8.0
    axes.add_patch(Circle((6.0, y - 3), 3.0, fc="white", ec=svg.INK, lw=1.2))
    axes.plot([6, 6], [y - 9, y + 3], color=svg.INK, lw=1.0, zorder=0)
    axes.text(14.0, y, "measured, bar 1 sd", ha="left", va="baseline")
    axes.plot([122, 142], [y - 3, y - 3], color=svg.ACCENT, lw=1.8)
    told = "fitted"
    pairs = zip(state.x_m.tolist(), state.fitted_mm.tolist(), strict=True)
    finite = [(abs(v), v, x) for x, v in pairs if math.isfinite(v)]
    if finite:
        _, value, x_m = max(finite)
        told = f"fitted, largest {words.number(value)} mm at {words.place(x_m)}, downward positive"
    axes.text(147.0, y, told, ha="left", va="baseline")


def _notes(axes: Axes, factor: float | None, lie: seats.Lie, *, foot: float, zero: str) -> None:
    told = "no movement to draw" if factor is None else f"movements × {words.number(factor)}"
    first = f"{told}; girder depth and pad height not to scale"
    second = fitted(f"pad width = stiffness, dashed outline = as designed; x from {zero}", svg.FULL_WIDTH - 4)
    axes.text(2.0, foot + LINE_PT, first, ha="left", va="baseline")
    axes.text(2.0, foot + 2 * LINE_PT, second, ha="left", va="baseline")
    if lie.moved:
        third = (
            "dotted: soffit and seats at the datum; arrow: seat since then; the girder is drawn on its seats"
        )
        axes.text(2.0, foot + 3 * LINE_PT, third, ha="left", va="baseline", color=svg.SECOND)


def _hinge_key(axes: Axes, *, foot: float) -> None:
    """Say what the small circle in the girder is, at the right end of the first note."""
    x = svg.FULL_WIDTH - 2.0 - svg.text_width("hinge")
    axes.add_patch(Circle((x - 7.0, foot + LINE_PT - 3.0), _HINGE, fc="white", ec=svg.INK, lw=1.1))
    axes.text(x, foot + LINE_PT, "hinge", ha="left", va="baseline")


def _supports_in_words(girder: GirderView) -> str:
    spans = ", ".join(words.span_length(v) for v in girder.span_lengths_m)
    parts = [f"Spans {spans}."]
    if girder.hinges_m:
        where = ", ".join(words.place(x) for x in girder.hinges_m)
        parts.append(f"Internal hinge{'s' if len(girder.hinges_m) > 1 else ''} at {where}.")
    for support in girder.supports:
        told = "pin"
        if support.kind != "pin":
            ratio = words.interval(
                support.ratio, support.ratio_low, support.ratio_high, reason="no calibration"
            )
            told = f"pad, stiffness over nominal {ratio}"
        if support.seat_drop_mm is not None:
            told += f", seat {words.seat(support.seat_drop_mm)} since the datum"
            if not words.seat_moved(support.seat_drop_mm, support.seat_drop_sd_mm):
                told += ", no movement beyond 2 sd"
        parts.append(f"{support.support}: {told}.")
    return " ".join(parts)


def _state_in_words(state: ElevationState | None, factor: float | None) -> list[str]:
    if state is None:
        return ["No test state is drawn."]
    parts = [f"State {state.state}: {_axles_in_words(state)}." if state.axles else ""]
    if factor is not None:
        parts.append(f"Movements drawn {words.number(factor)} times as large as lengths.")
    for p in state.points:
        parts.append(
            f"{p.kind} at {words.place(p.x_m)}: measured {words.number(p.value_mm)} mm, "
            f"sd {words.number(p.sd_mm)} mm, fitted {words.quantity(p.fitted_mm, 'mm')}"
            + (", suspect." if p.suspect else ".")
        )
    return [p for p in parts if p]
