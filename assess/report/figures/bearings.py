"""A pad as a stack of layers whose width is its stiffness, and a pin as a rocker."""

from __future__ import annotations

from matplotlib.axes import Axes
from matplotlib.patches import Circle, Polygon, Rectangle

from assess.report import svg

PAD = 13.0  # pt, pad: its height never changes
DRAWN_MOST = 2.0  # a pad stiffer than this many times nominal is drawn no wider


def draw_pin(axes: Axes, x: float, top: float) -> None:
    """Draw a rocker, its top at `top`."""
    foot = top + PAD
    rocker = Polygon([(x - 7, foot), (x + 7, foot), (x + 2.5, top + 4), (x - 2.5, top + 4)], closed=True)
    rocker.set(fc="white", ec=svg.INK, lw=0.9, zorder=3)
    axes.add_patch(rocker)
    axes.add_patch(Circle((x, top + 3.2), 3.2, fc=svg.INK, ec=svg.INK, lw=0.5, zorder=3.1))


def draw_pad(axes: Axes, x: float, top: float, ratio: float | None, nominal: float) -> None:
    """Draw the stack: as wide as the pad is stiff; the dashed outline is the pad as designed."""
    outline = Rectangle((x - nominal / 2, top), nominal, PAD, fc="none", ec=svg.INK, lw=0.7, zorder=3.2)
    outline.set_linestyle((0, (2, 1.5)))
    if ratio is None:
        axes.add_patch(outline)
        return
    width = nominal * min(max(ratio, 0.0), DRAWN_MOST)
    layer = PAD / 7.0
    for i in range(4):  # four rubber layers, three plates between them
        y = top + 2 * i * layer
        axes.add_patch(Rectangle((x - width / 2, y), width, layer, fc=svg.ACCENT, ec="none", zorder=3))
        if i < 3:
            plate = Rectangle((x - width / 2, y + layer), width, layer, fc="white", ec=svg.ACCENT, lw=0.3)
            plate.set_zorder(2.9)
            axes.add_patch(plate)
    axes.add_patch(outline)
    if ratio > DRAWN_MOST:
        for side in (-1.0, 1.0):
            tip = x + side * (width / 2 + 5.0)
            mid = top + PAD / 2
            arrow = Polygon([(tip, mid), (tip - side * 4, mid - 4), (tip - side * 4, mid + 4)], closed=True)
            arrow.set(fc=svg.ACCENT, ec="none", zorder=3)
            axes.add_patch(arrow)
