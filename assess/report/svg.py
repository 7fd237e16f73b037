"""Matplotlib figures as inline SVG: text stays text, ids never collide, equal input gives equal bytes."""

from __future__ import annotations

import io
import re
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any
from xml.etree import ElementTree

import matplotlib as mpl
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.font_manager import FontProperties
from matplotlib.textpath import text_to_path

from assess.report.words import plain

INK = "#1b2a33"
ACCENT = "#0b6e6e"
SECOND = "#b4532a"
NEUTRAL = "#8795a1"
ACCENT_TINT = "#cfe4e2"
SECOND_TINT = "#f1ddd2"
NEUTRAL_TINT = "#e6eaed"

FULL_WIDTH = 510.0  # pt: the text width of A4 within 15 mm margins
SMALL_WIDTH = 245.0  # pt: two stand side by side
TEXT_PT = 9.0

_SVG = "http://www.w3.org/2000/svg"
_HREF = "{http://www.w3.org/1999/xlink}href"
_DRAWN_WITH: dict[Any, Any] = {
    "axes.edgecolor": INK,
    "axes.labelcolor": INK,
    "axes.linewidth": 0.8,
    "font.family": ["DejaVu Sans"],
    "font.size": TEXT_PT,
    "axes.labelsize": TEXT_PT,
    "axes.unicode_minus": True,
    "figure.dpi": 72.0,
    "legend.fontsize": TEXT_PT,
    "lines.linewidth": 1.2,
    "path.simplify": False,
    "savefig.transparent": True,
    "svg.fonttype": "none",
    "text.color": INK,
    "text.parse_math": False,
    "xtick.color": INK,
    "xtick.labelsize": TEXT_PT,
    "ytick.color": INK,
    "ytick.labelsize": TEXT_PT,
}


@contextmanager
def drawing(width: float, height: float) -> Iterator[Figure]:
    """Give an empty figure of the given size in pt, with the report's own settings while it is drawn."""
    with mpl.rc_context():
        mpl.rcdefaults()
        mpl.rcParams.update(_DRAWN_WITH)
        yield Figure(figsize=(width / 72.0, height / 72.0), dpi=72.0)


def paper(figure: Figure) -> Axes:
    """Lay clear axes over the whole figure, in pt from its upper left corner, y downward."""
    width, height = figure.get_size_inches() * 72.0
    axes = figure.add_axes((0.0, 0.0, 1.0, 1.0))
    axes.set_xlim(0.0, width)
    axes.set_ylim(height, 0.0)
    axes.patch.set_visible(False)
    axes.set_axis_off()
    return axes


def text_width(text: str, size: float = TEXT_PT) -> float:
    """Return the width of a line of text in pt, in the widest of the fonts that the page may use."""
    prop = FontProperties(family="DejaVu Sans", size=size)
    width, _, _ = text_to_path.get_text_width_height_descent(text, prop, False)
    return float(width)


def to_svg(figure: Figure, *, key: str, title: str, desc: str) -> str:
    """Return the figure as an inline SVG element.

    Parameters
    ----------
    figure
        Made within `drawing`, and handed over within it.
    key
        Unique on the page, a letter first; every id of the drawing begins with it.
    title, desc
        The name of the drawing and its contents in words, with the numbers: what is read out instead of it.
    """
    raw = io.StringIO()
    mpl.rcParams["svg.hashsalt"] = key
    figure.savefig(raw, format="svg", metadata={"Date": None}, transparent=True)
    root = ElementTree.fromstring(raw.getvalue())
    _strip(root)
    _own_ids(root, key)
    _head(root, key, title, desc)
    ElementTree.register_namespace("", _SVG)
    return ElementTree.tostring(root, encoding="unicode")


def _strip(root: ElementTree.Element) -> None:
    """Leave out metadata and page-wide styles; the font is the page's."""
    for parent in list(root.iter()):
        for child in list(parent):
            if child.tag in (f"{{{_SVG}}}metadata", f"{{{_SVG}}}style"):
                parent.remove(child)
    for node in root.iter():
        style = node.get("style")
        if style and node.tag == f"{{{_SVG}}}text":
            node.set("style", re.sub(r"font-family:[^;]*;?\s*", "", style))
        path = node.get("d")
        if path:
            node.set("d", re.sub(r"-?\d+\.\d+", _two_decimals, " ".join(path.split())))


def _two_decimals(match: re.Match[str]) -> str:
    return f"{float(match.group()):.2f}".rstrip("0").rstrip(".")


def _own_ids(root: ElementTree.Element, key: str) -> None:
    """Prefix the ids that something refers to and drop the others."""
    used: set[str] = set()
    for node in root.iter():
        for name, value in list(node.attrib.items()):
            if name == _HREF:
                used.add(value[1:])
                node.set("href", f"#{key}-{value[1:]}")
                del node.attrib[_HREF]
            elif "url(#" in value:
                used.update(re.findall(r"url\(#([^)]+)\)", value))
                node.set(name, value.replace("url(#", f"url(#{key}-"))
    for node in root.iter():
        own = node.attrib.pop("id", None)
        if own in used:
            node.set("id", f"{key}-{own}")


def _head(root: ElementTree.Element, key: str, title: str, desc: str) -> None:
    """Set size, role and the words read out instead of the drawing."""
    width = float(root.attrib.pop("width").removesuffix("pt"))
    root.attrib.pop("height")
    root.attrib.pop("version", None)
    pixels = width * 96.0 / 72.0  # at this width the text has its full size; it may grow, never shrink
    root.set("class", "drawing")
    root.set("style", f"min-width:{pixels:.0f}px;max-width:{1.3 * pixels:.0f}px")
    root.set("role", "img")
    root.set("aria-labelledby", f"{key}-title {key}-desc")
    for place, (tag, words) in enumerate((("title", title), ("desc", desc))):
        node = ElementTree.Element(f"{{{_SVG}}}{tag}", {"id": f"{key}-{tag}"})
        node.text = plain(words)
        root.insert(place, node)
