"""The field card as PDF, drawn by matplotlib on A4 landscape; what the HTML card shows, in the same order.

matplotlib is there for the report's drawings already and writes text as text; a library for PDF alone would be one
more thing to keep for one sheet.
"""

from __future__ import annotations

import io
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from typing import Any

import matplotlib as mpl
from matplotlib.backends.backend_pdf import PdfPages
from matplotlib.figure import Figure
from matplotlib.textpath import TextPath

from assess.report.card import Card, CardGirder
from assess.report.svg import ACCENT, INK, NEUTRAL

WIDTH, HEIGHT = 842.0, 595.0  # pt, A4 landscape
MARGIN = 26.0
TEXT, HEAD, TITLE = 9.0, 11.0, 14.0  # pt; 9 is the least that is read on site
LINE = 11.5
_SHARES = (0.125, 0.19, 0.055, 0.14, 0.14, 0.14, 0.14, 0.07)  # of the width: the columns
_BLANK = 0.45 * TEXT  # that of the font, and the edges of the letters beside it
_FONT: dict[Any, Any] = {"font.family": ["DejaVu Sans"], "pdf.fonttype": 42, "text.parse_math": False}


@dataclass
class _Pen:
    """A place on a sheet, moving down."""

    figure: Figure
    y: float

    def write(self, x: float, text: str, *, size: float = TEXT, bold: bool = False) -> None:
        weight = "bold" if bold else "normal"
        self.figure.text(
            x / WIDTH, self.y / HEIGHT, text, fontsize=size, fontweight=weight, color=INK, va="baseline"
        )

    def rule(self, *, y: float, x0: float = MARGIN, x1: float = WIDTH - MARGIN, thin: bool = True) -> None:
        line = mpl.lines.Line2D(
            [x0 / WIDTH, x1 / WIDTH],
            [y / HEIGHT, y / HEIGHT],
            linewidth=0.4 if thin else 0.9,
            color=NEUTRAL if thin else INK,
        )
        self.figure.add_artist(line)

    def paragraph(self, text: str, *, first: str = "") -> None:
        for line in wrapped(f"{first}{text}", WIDTH - 2 * MARGIN):
            self.write(MARGIN, line)
            self.y -= LINE


def wrapped(text: str, width: float) -> Iterator[str]:
    """Break text at blanks so that each line is no wider than `width` pt."""
    line = ""
    for word in text.split():
        longer = f"{line} {word}" if line else word
        if line and width_of(longer) > width:
            yield line
            line = word
        else:
            line = longer
    if line:
        yield line


def width_of(text: str) -> float:
    """Width of text at its usual size, pt: that of its words, and a blank between two."""
    words = text.split()
    return sum(_word(word) for word in words) + _BLANK * max(len(words) - 1, 0)


@cache
def _word(word: str) -> float:
    return float(TextPath((0, 0), word, size=TEXT, usetex=False).get_extents().x1)


def draw_card(card: Card) -> bytes:
    """Draw the card; the same card gives the same bytes."""
    out = io.BytesIO()
    facts = {"Title": card.title, "Creator": card.origin, "CreationDate": None}
    with mpl.rc_context(_FONT), PdfPages(out, metadata=facts) as pdf:
        for sheet in card.sheets:
            pdf.savefig(_sheet(card, sheet))
    return out.getvalue()


def _sheet(card: Card, girders: tuple[CardGirder, ...]) -> Figure:
    figure = Figure(figsize=(WIDTH / 72.0, HEIGHT / 72.0))
    pen = _Pen(figure, HEIGHT - MARGIN - TITLE)
    pen.write(MARGIN, card.title, size=TITLE, bold=True)
    pen.y -= 15.0
    pen.paragraph(f"{card.basis} Watch: utilisation {card.watch}. Limit: utilisation {card.limit}.")
    for girder in girders:
        _girder(pen, girder)
    _by_hand(pen)
    for note in card.notes:
        pen.paragraph(note, first="- ")
    pen.paragraph(card.origin)
    return figure


def _edges() -> list[float]:
    x, edges = MARGIN, []
    for share in _SHARES:
        edges.append(x)
        x += share * (WIDTH - 2 * MARGIN)
    return edges


def _girder(pen: _Pen, girder: CardGirder) -> None:
    pen.y -= 12.0
    mark = mpl.lines.Line2D(
        [MARGIN / WIDTH, (MARGIN + 24.0) / WIDTH], [(pen.y + 13.0) / HEIGHT] * 2, linewidth=3, color=ACCENT
    )
    pen.figure.add_artist(mark)
    pen.write(MARGIN, f"Girder {girder.name}", size=HEAD, bold=True)
    pen.y -= 13.0
    if girder.past:
        pen.paragraph(girder.past, first="Reached already: ")
    edges = _edges()
    pen.write(edges[3], "pad softer, seat down", bold=True)
    pen.write(edges[5], "pad stiffer, seat up", bold=True)
    pen.y -= LINE
    heads = ("support", "reading", "now", "watch", "limit", "watch", "limit", "read")
    for x, head in zip(edges, heads, strict=True):
        pen.write(x, head, bold=True)
    top = pen.y - 3.0
    pen.rule(y=top, thin=False)
    before = ""
    for row in girder.rows:
        _row(pen, edges, row.support if row.support != before else "", row.reading, row.now, row.cells)
        before = row.support
    for x in (edges[3], edges[5], edges[7]):
        pen.figure.add_artist(
            mpl.lines.Line2D(
                [(x - 4.0) / WIDTH] * 2,
                [top / HEIGHT, (pen.y - 3.0) / HEIGHT],
                linewidth=0.5,
                color=NEUTRAL,
            )
        )
    pen.y -= LINE


def _row(
    pen: _Pen,
    edges: list[float],
    support: str,
    reading: str,
    now: str,
    cells: tuple[tuple[str, str], ...],
) -> None:
    texts = [support, reading, now, *(" ".join(cell).strip() for cell in cells)]
    ends = [*edges[1:], WIDTH - MARGIN]
    columns = [list(wrapped(text, end - x - 8.0)) for text, x, end in zip(texts, edges, ends, strict=False)]
    pen.y -= LINE
    top = pen.y
    for x, lines, is_name in zip(edges, columns, [True] + [False] * 6, strict=False):
        pen.y = top
        for line in lines:
            pen.write(x, line, bold=is_name)
            pen.y -= LINE
    pen.y = top - LINE * (max(len(lines) for lines in columns) - 1)
    pen.rule(y=pen.y - 3.0)


def _by_hand(pen: _Pen) -> None:
    pen.y -= 12.0
    quarter = (WIDTH - 2 * MARGIN) / 4.0
    for i, word in enumerate(("Read by", "Date, time", "Pads, °C", "At a trigger call")):
        x = MARGIN + i * quarter
        pen.write(x, word)
        pen.rule(y=pen.y - 3.0, x0=x, x1=x + quarter - 12.0, thin=False)
    pen.y -= 16.0
