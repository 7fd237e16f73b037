"""A section built from plates, true to scale: sizes, levels, axes, and where plates have lost metal."""

from __future__ import annotations

import math
from dataclasses import dataclass

from matplotlib.axes import Axes
from matplotlib.patches import Rectangle

from assess.report import svg, words
from assess.report.figures.layout import LINE_PT, fitted, spread
from assess.shown import PlateShown, SectionView

_ROOM = (165.0, 230.0)  # pt, width and height that the section may fill
_LEFT, _TOP = 165.0, 14.0
_RIGHT = _LEFT + _ROOM[0] + 18.0  # labels of the plates
_RULE = _LEFT - 14.0  # dimension line of the depth
_LOST = 3.0  # pt: a hatched edge has this width, whatever the loss
_BOX_SHARE = (
    0.8  # webs of a box stand within this share of its narrowest flat plate: the file does not say where
)


@dataclass(frozen=True, kw_only=True)
class Box:
    """Where a plate, or a half of one, is drawn: mm, x from the middle of the section."""

    plate: PlateShown
    left: float
    width: float


@dataclass(frozen=True, kw_only=True)
class _Sheet:
    """Scale and origin, in pt."""

    scale: float
    middle: float
    top_mm: float

    def x(self, mm: float) -> float:
        return self.middle + self.scale * mm

    def y(self, mm: float) -> float:
        return _TOP + self.scale * (self.top_mm - mm)


def draw(view: SectionView, *, key: str) -> str:
    """Draw one section.

    Parameters
    ----------
    view
        A section with plates.
    key
        Unique on the page.
    """
    boxes = arranged(view)
    sheet = _sheet(view, boxes)
    labels = _labels(view)
    low = min(plate.bottom_mm for plate in view.plates)
    foot = max(sheet.y(low), _TOP + 2.0 * LINE_PT * len(labels)) + 10.0
    remarks = _remarks(view)
    with svg.drawing(svg.FULL_WIDTH, foot + LINE_PT * (len(remarks) + 0.6)) as figure:
        axes = svg.paper(figure)
        for box in boxes:
            _plate(axes, sheet, box)
        _holes(axes, sheet, view, boxes)
        _depth(axes, sheet, view)
        _axes(axes, sheet, view, foot)
        _write(axes, sheet, labels, boxes, foot)
        for i, remark in enumerate(remarks):
            axes.text(2.0, foot + LINE_PT * (i + 1.0), remark, va="baseline")
        return svg.to_svg(figure, key=key, title=f"Section {view.section}", desc=in_words(view))


def in_words(view: SectionView) -> str:
    """Tell the drawing: every plate with its size, level and loss, and the axes."""
    told = [_in_words(plate) for plate in ([view.deck] if view.deck else []) + view.plates]
    for plate, level, width in view.holes:
        where = "" if level is None else f" at {words.entered(round(level, 3), 'mm')}"
        told.append(f"holes of {words.entered(round(width, 3), 'mm')} in all in {plate}{where}")
    for name, axis in (("elastic axis", view.elastic_axis_mm), ("equal-area axis", view.plastic_axis_mm)):
        told.append(f"{name} {words.quantity(axis, 'mm')} above the underside of the stack")
    return "; ".join(told) + "."


def _in_words(plate: PlateShown) -> str:
    lost = f", {_lost(plate)}" if plate.lost else ""
    return (
        f"{plate.name} {_size(plate)}, lower edge at {words.entered(round(plate.bottom_mm, 3), 'mm')}{lost}"
    )


def _size(plate: PlateShown) -> str:
    return f"{words.entered(round(plate.width_mm, 3))} × {words.entered(round(plate.height_mm, 3), 'mm')}"


def _lost(plate: PlateShown) -> str:
    return "lost " + plate.lost.replace(" x ", " × ")


# where the plates stand ------------------------------------------------------------------------


def arranged(view: SectionView) -> list[Box]:
    """Stand the plates beside each other: the file gives levels alone, so they are drawn symmetrically.

    The tallest upright plates at a level share the width as webs; shorter ones lean on the outer webs in turn; flat
    plates beside an upright one lie half on its left and half on its right.
    """
    flat = [plate for plate in view.plates if not plate.upright]
    stand = sorted((plate for plate in view.plates if plate.upright), key=lambda p: -p.height_mm)
    boxes: list[Box] = []
    free = list(stand)
    while free:
        tallest = free[0]
        webs = [p for p in free if _beside(p, tallest) and p.height_mm > 0.98 * tallest.height_mm]
        others = [p for p in free if _beside(p, tallest) and p not in webs]
        boxes += _webs(webs, flat)
        for plate in others:
            left, right = _reach(boxes, plate)
            at = right if right <= -left else left - plate.width_mm
            boxes.append(Box(plate=plate, left=at, width=plate.width_mm))
        free = [p for p in free if p not in webs and p not in others]
    for plate in flat:
        left, right = _reach(boxes, plate)
        if right > left:
            half = plate.width_mm / 2.0
            boxes += [
                Box(plate=plate, left=left - half, width=half),
                Box(plate=plate, left=right, width=half),
            ]
        else:
            boxes.append(Box(plate=plate, left=-plate.width_mm / 2.0, width=plate.width_mm))
    if view.deck is not None:
        boxes.append(Box(plate=view.deck, left=-view.deck.width_mm / 2.0, width=view.deck.width_mm))
    return boxes


def _webs(webs: list[PlateShown], flat: list[PlateShown]) -> list[Box]:
    widths = sum(p.width_mm for p in webs)
    room = max(_BOX_SHARE * min((p.width_mm for p in flat), default=6.0 * widths), widths)
    gap = (room - widths) / (len(webs) - 1) if len(webs) > 1 else 0.0
    at = -room / 2.0 if len(webs) > 1 else -widths / 2.0
    boxes = []
    for plate in webs:
        boxes.append(Box(plate=plate, left=at, width=plate.width_mm))
        at += plate.width_mm + gap
    return boxes


def _beside(one: PlateShown, other: PlateShown) -> bool:
    slack = 1e-6 * max(one.height_mm, other.height_mm)
    return min(one.top_mm, other.top_mm) - max(one.bottom_mm, other.bottom_mm) > slack


def _reach(boxes: list[Box], plate: PlateShown) -> tuple[float, float]:
    """How far to left and right the space beside a plate is taken; 0, 0 where it is free."""
    taken = [box for box in boxes if box.plate.upright and _beside(box.plate, plate)]
    return min((b.left for b in taken), default=0.0), max((b.left + b.width for b in taken), default=0.0)


def _sheet(view: SectionView, boxes: list[Box]) -> _Sheet:
    width = 2.0 * max(max(-box.left, box.left + box.width) for box in boxes)
    top = max(box.plate.top_mm for box in boxes)
    low = min(box.plate.bottom_mm for box in boxes)
    scale = min(_ROOM[0] / width, _ROOM[1] / (top - low))
    return _Sheet(scale=scale, middle=_LEFT + _ROOM[0] / 2.0, top_mm=top)


# drawing -----------------------------------------------------------------------------------------


def _plate(axes: Axes, sheet: _Sheet, box: Box) -> None:
    plate = box.plate
    x, y = sheet.x(box.left), sheet.y(plate.top_mm)
    width, height = sheet.scale * box.width, sheet.scale * plate.height_mm
    fill = svg.NEUTRAL_TINT if plate.name == "deck" else svg.ACCENT_TINT
    axes.add_patch(Rectangle((x, y), width, height, facecolor=fill, edgecolor=svg.INK, lw=0.7))
    if plate.loss_mm > 0.0:
        for edge in _edges(plate, x, y, width, height):
            axes.add_patch(Rectangle(*edge, facecolor="none", edgecolor=svg.SECOND, hatch="////////", lw=0.6))


def _edges(
    plate: PlateShown, x: float, y: float, width: float, height: float
) -> list[tuple[tuple[float, float], float, float]]:
    """The strips along the faces of a plate that are hatched; both, because the file does not say which was read."""
    if plate.upright:
        return [((x - _LOST, y), _LOST, height), ((x + width, y), _LOST, height)]
    return [((x, y - _LOST), width, _LOST), ((x, y + height), width, _LOST)]


def _holes(axes: Axes, sheet: _Sheet, view: SectionView, boxes: list[Box]) -> None:
    for name, level, width in view.holes:
        own = [box for box in boxes if box.plate.name == name]
        for box in own:
            if level is None:
                half = sheet.scale * width / 2.0
                y, height = sheet.y(box.plate.top_mm), sheet.scale * box.plate.height_mm
                places = [-0.25, 0.25] if len(own) == 1 else [0.0]
                for share in places:
                    x = sheet.x(box.left + box.width * (0.5 + share)) - half / 2.0
                    _gap(axes, x, y, half, height)
            else:
                y = sheet.y(level + width / 2.0)
                _gap(axes, sheet.x(box.left), y, sheet.scale * box.width, sheet.scale * width)


def _gap(axes: Axes, x: float, y: float, width: float, height: float) -> None:
    axes.add_patch(Rectangle((x, y), width, height, facecolor="white", edgecolor=svg.INK, lw=0.7))


def _depth(axes: Axes, sheet: _Sheet, view: SectionView) -> None:
    """The depth of the steel on a dimension line."""
    top, low = max(p.top_mm for p in view.plates), min(p.bottom_mm for p in view.plates)
    a, b = sheet.y(top), sheet.y(low)
    axes.plot([_RULE, _RULE], [a, b], color=svg.INK, lw=0.6)
    for end in (a, b):
        axes.plot([_RULE - 2.5, _RULE + 2.5], [end + 2.5, end - 2.5], color=svg.INK, lw=0.9)
    crossing = [sheet.y(mm) for mm in (view.elastic_axis_mm, view.plastic_axis_mm) if mm is not None]
    free = [a + share * (b - a) for share in (0.5, 0.4, 0.6, 0.3, 0.7)]
    at = max(free, key=lambda y: min((abs(y - c) for c in crossing), default=0.0))
    text = words.entered(round(top - low, 3), "mm")
    axes.text(_RULE - 3.0, at, text, rotation=90, ha="right", va="center")


def _axes(axes: Axes, sheet: _Sheet, view: SectionView, foot: float) -> None:
    """The neutral axes as lines through the section, their levels at the left."""
    found = [
        (level, name, style)
        for level, name, style in (
            (view.elastic_axis_mm, "elastic axis", (0, (9, 2, 2, 2))),
            (view.plastic_axis_mm, "equal-area axis", (0, (1.5, 2))),
        )
        if level is not None and math.isfinite(level)
    ]
    found.sort(key=lambda one: -one[0])
    ys = spread([sheet.y(one[0]) for one in found], [LINE_PT] * len(found), low=2.0, high=foot)
    for (level, name, style), y in zip(found, ys, strict=True):
        at = sheet.y(level)
        end = _LEFT + _ROOM[0] + 4.0
        axes.plot([_RULE + 5.0, end], [at, at], color=svg.ACCENT, lw=1.0, linestyle=style, zorder=3)
        axes.plot([116.0, _RULE - 15.0, _RULE + 5.0], [y, at, at], color=svg.NEUTRAL, lw=0.6)
        axes.text(113.0, y, name, ha="right", va="bottom", color=svg.ACCENT)
        axes.text(113.0, y + 1.0, f"{words.number(level, 4)} mm", ha="right", va="top", color=svg.ACCENT)


def _labels(view: SectionView) -> list[tuple[PlateShown, tuple[str, ...]]]:
    """Every plate in words, from the top down."""
    plates = ([view.deck] if view.deck else []) + view.plates
    width = svg.FULL_WIDTH - _RIGHT - 14.0
    rows = []
    for plate in sorted(plates, key=lambda p: -(p.top_mm + p.bottom_mm)):
        lines = (plate.name, f"{_size(plate)}" + (f", {_lost(plate)}" if plate.lost else ""))
        rows.append((plate, tuple(fitted(line, width) for line in lines)))
    return rows


def _write(
    axes: Axes,
    sheet: _Sheet,
    labels: list[tuple[PlateShown, tuple[str, ...]]],
    boxes: list[Box],
    foot: float,
) -> None:
    """The names at the right, each with a leader to its plate."""
    anchors = _anchors(sheet, [plate for plate, _ in labels])
    ys = spread(anchors, [LINE_PT + 1.0] * len(labels), low=1.0, high=max(foot, 26.0 * len(labels)))
    for (plate, lines), anchor, y in zip(labels, anchors, ys, strict=True):
        edge = sheet.x(max(box.left + box.width for box in boxes if box.plate == plate))
        x = _LEFT + _ROOM[0] + 6.0
        axes.plot([edge, x, x + 9.0, _RIGHT + 2.0], [anchor, anchor, y, y], color=svg.NEUTRAL, lw=0.6)
        axes.plot([edge], [anchor], color=svg.NEUTRAL, marker="o", markersize=2.0)
        axes.text(_RIGHT + 5.0, y - 1.0, lines[0], va="bottom")
        colour = svg.SECOND if plate.lost else svg.INK
        axes.text(_RIGHT + 5.0, y + 0.5, lines[1], va="top", color=colour)


def _anchors(sheet: _Sheet, plates: list[PlateShown]) -> list[float]:
    """Where the leaders leave the plates: at mid-height, side by side plates one below the other."""
    level = [plate.top_mm + plate.bottom_mm for plate in plates]
    anchors = []
    for i, plate in enumerate(plates):
        count, before = level.count(level[i]), level[:i].count(level[i])
        share = (before + 1.0) / (count + 1.0)
        anchors.append(sheet.y(plate.top_mm - share * plate.height_mm))
    return anchors


def _remarks(view: SectionView) -> list[str]:
    told = [
        "to scale, width × height as built; places across the section are not in the file",
        "axes: heights above the underside of the plates",
    ]
    if any(plate.loss_mm > 0.0 for plate in view.plates):
        told.append("hatched edge: plate that has lost metal; the width of the hatching is not to scale")
    if view.holes:
        each = ", ".join(
            f"{words.entered(round(width, 3), 'mm')} in {plate}" for plate, _, width in view.holes
        )
        told.append(f"holes, width in all: {each}")
    return told
