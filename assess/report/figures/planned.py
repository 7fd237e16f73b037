"""A planned visit from the side: a row a load state, with the vehicle on it and what is read, numbered by worth."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patches import Circle, Polygon, Rectangle

from assess.report import svg, words
from assess.report.figures.layout import LINE_PT, Block, fitted, pack, row_heights, wrapped, write
from assess.results import GirderPlan, PlannedReading, PlanResult

_LEFT, _RIGHT = 84.0, 30.0  # pt
_HEAD = 34.0
_DEPTH = 13.0
_ABOVE, _BELOW, _LANE = 32.0, 9.0, 21.0  # of a row: over its line, under it, and each lane of marks
_MARK = 8.5  # pt, half of a mark
_FOOT = 22.0
_WHEEL = 3.2
_PERMANENT = "permanent"
_SHAPES = {
    "compression": "square: compression of the pad",
    "deflection": "circle: deflection of the girder",
    "settlement": "triangle: level of the seat",
    "rotation": "diamond: rotation",
    "strain": "hexagon: strain",
}


@dataclass(frozen=True, kw_only=True)
class _Mark:
    """A reading in a row: its number, shape, place (pt) and lane."""

    number: int
    quantity: str
    x: float
    lane: int


@dataclass(frozen=True, kw_only=True)
class _Row:
    """A load state: where its axles stand (m), the leading one first, and what is read."""

    state: str
    axles: tuple[float, ...]
    marks: tuple[_Mark, ...]

    @property
    def height(self) -> float:
        lanes = 1 + max((mark.lane for mark in self.marks), default=0)
        return _ABOVE + _BELOW + _LANE * lanes + 4.0


@dataclass(frozen=True, kw_only=True)
class _Panel:
    """A girder's part of the drawing, pt."""

    girder: GirderPlan
    length: float
    rows: tuple[_Row, ...]

    def x(self, x_m: float) -> float:
        return _LEFT + (svg.FULL_WIDTH - _LEFT - _RIGHT) * x_m / self.length

    @property
    def names_height(self) -> float:
        return sum(row_heights(self.names))

    @property
    def names(self) -> list[Block]:
        supports = self.girder.supports
        lines = [(*wrapped(one.support), words.entered(round(one.at_m, 2), "m")) for one in supports]
        return pack([self.x(one.at_m) for one in supports], lines, low=1.0, high=svg.FULL_WIDTH - 1.0)

    @property
    def height(self) -> float:
        return _HEAD + _DEPTH + 12.0 + self.names_height + sum(row.height for row in self.rows) + 8.0


@contextmanager
def drawn(result: PlanResult) -> Iterator[Figure]:
    """Draw the girders one under the other; the figure is to be saved within the context."""
    panels = [_panel(girder, result.axles_behind_m) for girder in result.girders]
    shapes = [text for quantity, text in _SHAPES.items() if quantity in _quantities(result)]
    key = _key_lines(shapes)
    height = sum(panel.height for panel in panels) + _FOOT + LINE_PT * len(key)
    with svg.drawing(svg.FULL_WIDTH, height) as figure:
        axes = svg.paper(figure)
        top = 0.0
        for panel in panels:
            _draw_panel(axes, panel, top)
            top += panel.height
        for i, line in enumerate(key):
            axes.text(4.0, top + 12.0 + LINE_PT * i, line, ha="left", va="baseline")
        yield figure


def in_words(result: PlanResult) -> str:
    """Say what is drawn, for whom it is read out."""
    parts = []
    for girder in result.girders:
        at = [f"{one.state} at {words.entered(one.leading_axle_at_m)} m" for one in girder.positions]
        parts.append(f"Girder {girder.girder}: leading axle {'; '.join(at) or 'nowhere'}.")
        read = [f"{i} {_named(one)}" for i, one in enumerate(girder.readings, start=1)]
        parts.append(f"Readings in order of worth: {', '.join(read)}.")
    return " ".join(parts)


def _named(reading: PlannedReading) -> str:
    where = reading.support if reading.support is not None else f"x {words.entered(reading.at_m or 0.0)} m"
    return f"{reading.quantity} {where} in {reading.state}"


def _quantities(result: PlanResult) -> set[str]:
    return {reading.quantity for girder in result.girders for reading in girder.readings}


def _key_lines(shapes: Sequence[str]) -> list[str]:
    """What marks mean, in as few lines as hold it."""
    lines: list[str] = []
    for part in ["numbers: order of worth", *shapes, "filled wheel: leading axle"]:
        longer = f"{lines[-1]}; {part}" if lines else part
        if lines and svg.text_width(longer) <= svg.FULL_WIDTH - 8.0:
            lines[-1] = longer
        else:
            lines.append(part)
    return lines


def _panel(girder: GirderPlan, behind_m: Sequence[float]) -> _Panel:
    places = {one.support: one.at_m for one in girder.supports}
    bare = _Panel(girder=girder, length=max(places.values()), rows=())
    numbered = [
        (i, one, bare.x(places[one.support] if one.support is not None else one.at_m or 0.0))
        for i, one in enumerate(girder.readings, start=1)
    ]
    states = [(one.state, tuple(one.leading_axle_at_m - b for b in behind_m)) for one in girder.positions]
    if any(one.state == _PERMANENT for one in girder.readings):
        states.append((_PERMANENT, ()))
    rows = [
        _Row(state=state, axles=axles, marks=_in_lanes([n for n in numbered if n[1].state == state]))
        for state, axles in states
    ]
    return _Panel(girder=girder, length=bare.length, rows=tuple(rows))


def _in_lanes(read: Sequence[tuple[int, PlannedReading, float]]) -> tuple[_Mark, ...]:
    """Stand marks under their places, those too near to one another in lanes of their own."""
    ends: list[float] = []
    marks = []
    for number, reading, x in sorted(read, key=lambda one: (one[2], one[0])):
        lane = next((i for i, end in enumerate(ends) if x - end >= 2.0 * _MARK + 4.0), len(ends))
        ends[lane : lane + 1] = [x]
        marks.append(_Mark(number=number, quantity=reading.quantity, x=x, lane=lane))
    return tuple(marks)


def _draw_panel(axes: Axes, panel: _Panel, top: float) -> None:
    girder = panel.girder
    axes.text(4.0, top + 14.0, f"Girder {words.plain(girder.girder)}", weight="bold", va="baseline")
    axes.text(4.0, top + 14.0 + LINE_PT, fitted(_aim(girder), svg.FULL_WIDTH - 8.0), va="baseline")
    level = top + _HEAD
    a, b = panel.x(0.0), panel.x(panel.length)
    axes.add_patch(Rectangle((a, level), b - a, _DEPTH, fc=svg.NEUTRAL_TINT, ec=svg.INK, lw=0.9))
    for support in girder.supports:
        _support(axes, panel.x(support.at_m), level + _DEPTH)
    write(axes, panel.names, start=level + _DEPTH + 8.0)
    level += _DEPTH + 12.0 + panel.names_height
    for row in panel.rows:
        _draw_row(axes, panel, row, level)
        level += row.height


def _aim(girder: GirderPlan) -> str:
    if girder.governs is None or girder.utilisation is None or not girder.readings:
        return "no section gives a capacity; readings chosen for all pads and seats together"
    span = f"span {girder.governs.span}" if girder.governs.span else None
    where = " at ".join(part for part in (span, girder.governs.support) if part)
    before, after = girder.sd_utilisation_before, girder.readings[-1].sd_utilisation_after
    told = (
        ""
        if before is None or after is None
        else f", unsure by {words.number(before)} before and {words.number(after)} after"
    )
    return f"for {girder.governs.effect}, {where}: utilisation {words.number(girder.utilisation)}{told}"


def _support(axes: Axes, x: float, top: float) -> None:
    axes.add_patch(
        Polygon([(x, top), (x - 5.0, top + 7.0), (x + 5.0, top + 7.0)], fc="white", ec=svg.INK, lw=0.9)
    )


def _draw_row(axes: Axes, panel: _Panel, row: _Row, top: float) -> None:
    line = top + _ABOVE
    axes.text(4.0, line + 3.0, fitted(row.state, _LEFT - 14.0), ha="left", va="baseline", weight="bold")
    axes.plot([panel.x(0.0), panel.x(panel.length)], [line, line], color=svg.INK, lw=1.2, zorder=2)
    for support in panel.girder.supports:
        x = panel.x(support.at_m)
        axes.plot([x, x], [line - 3.0, line + 3.0], color=svg.INK, lw=0.9, zorder=2)
    if row.axles:
        _vehicle(axes, panel, row.axles, line)
    for mark in row.marks:
        y = line + _BELOW + _MARK + _LANE * mark.lane
        axes.plot([mark.x, mark.x], [line, y], color=svg.NEUTRAL, lw=0.7, zorder=1)
        _shape(axes, mark.quantity, mark.x, y)
        axes.text(mark.x, y + 3.3, str(mark.number), ha="center", va="baseline", zorder=5)


def _vehicle(axes: Axes, panel: _Panel, axles_m: Sequence[float], line: float) -> None:
    """Draw the wheels that stand on the girder, the leading one filled, and where it stands."""
    on = [x for x in axles_m if -1e-6 <= x <= panel.length + 1e-6]
    hub = line - _WHEEL - 0.6
    for x_m in on:
        fill = svg.INK if x_m == axles_m[0] else "white"
        axes.add_patch(Circle((panel.x(x_m), hub), _WHEEL, fc=fill, ec=svg.INK, lw=1.0, zorder=4))
    bar = hub - _WHEEL - 3.0
    axes.plot([panel.x(min(on)) - 4.0, panel.x(max(on)) + 4.0], [bar, bar], color=svg.INK, lw=1.5, zorder=3)
    text = f"leading axle at {words.entered(round(axles_m[0], 3), 'm')}"
    if axles_m[0] not in on:
        text += ", off the girder"
    half = svg.text_width(text) / 2.0
    x = min(
        max(panel.x(float(np.clip(axles_m[0], 0.0, panel.length))), half + 2.0), svg.FULL_WIDTH - half - 2.0
    )
    axes.text(x, bar - 4.5, text, ha="center", va="baseline")


def _shape(axes: Axes, quantity: str, x: float, y: float) -> None:
    """Draw the outline that stands for a quantity."""
    look: dict[str, Any] = {"fc": "white", "ec": svg.ACCENT, "lw": 1.3, "zorder": 4}
    if quantity == "compression":
        axes.add_patch(Rectangle((x - _MARK + 0.5, y - _MARK + 0.5), 2 * _MARK - 1, 2 * _MARK - 1, **look))
    elif quantity == "deflection":
        axes.add_patch(Circle((x, y), _MARK, **look))
    elif quantity == "settlement":
        r = _MARK + 3.0
        axes.add_patch(Polygon([(x - r, y - 7.0), (x + r, y - 7.0), (x, y + r)], closed=True, **look))
    else:
        sides = 4 if quantity == "rotation" else 6
        angle = np.linspace(0.0, 2.0 * np.pi, sides, endpoint=False)
        r = _MARK + (2.0 if sides == 4 else 0.5)
        axes.add_patch(
            Polygon(np.stack([x + r * np.cos(angle), y + r * np.sin(angle)], 1), closed=True, **look)
        )
