"""Where labels stand so that none lies over another."""

from __future__ import annotations

import itertools
import textwrap
from dataclasses import dataclass

from matplotlib.axes import Axes

from assess.report.svg import NEUTRAL, TEXT_PT, text_width
from assess.report.words import plain

LINE_PT = 11.5
_GAP_PT = 4.0  # half of the least room between two blocks of a row: leaders of deeper rows pass there
_LEADER_PT = 9.0  # height in which a leader slants to its block


@dataclass(frozen=True, kw_only=True)
class Block:
    """Lines of text that belong to the place `anchor` (pt) and stand centred at `centre` in `row`.

    `passes` are the places at which its leader passes the rows above, one a row.
    """

    anchor: float
    centre: float
    half: float
    row: int
    lines: tuple[str, ...]
    passes: tuple[float, ...] = ()


def wrapped(text: str, *, width: int = 16, most: int = 3) -> tuple[str, ...]:
    """Break a name into at most `most` lines of `width` letters; an ellipsis marks what is left out."""
    lines = textwrap.wrap(plain(text), width=width) or [""]
    if len(lines) > most:
        lines = [*lines[: most - 1], lines[most - 1][: width - 1].rstrip() + "\N{HORIZONTAL ELLIPSIS}"]
    return tuple(lines)


def fitted(text: str, width: float, size: float = TEXT_PT) -> str:
    """Shorten a line of text to `width` pt; an ellipsis marks what is left out."""
    line = plain(text)
    if text_width(line, size) <= width:
        return line
    while line and text_width(line + "\N{HORIZONTAL ELLIPSIS}", size) > width:
        line = line[:-1]
    return line.rstrip() + "\N{HORIZONTAL ELLIPSIS}"


def pack(anchors: list[float], texts: list[tuple[str, ...]], *, low: float, high: float) -> list[Block]:
    """Stand blocks of text as near to their anchors as may be, in as few rows as hold them.

    Neighbours take turns in the rows, so that the leader of a block in a deeper row finds its gap between
    two blocks of each row above.

    Parameters
    ----------
    anchors
        Places in pt, rising.
    texts
        The lines of each block.
    low, high
        Limits in pt that no block may pass.
    """
    halves = [max(text_width(line) for line in lines) / 2.0 + _GAP_PT for lines in texts]
    count = len(anchors)
    rows = 1
    while rows < count and any(2.0 * sum(halves[r::rows]) > high - low for r in range(rows)):
        rows += 1
    centres = [0.0] * count
    for row in range(rows):
        centres[row::rows] = spread(anchors[row::rows], halves[row::rows], low=low, high=high)
    return [
        Block(
            anchor=anchors[i],
            centre=centres[i],
            half=halves[i],
            row=i % rows,
            lines=texts[i],
            passes=tuple(
                _pass(centres, halves, anchors, i, i % rows - above, rows) for above in range(i % rows)
            ),
        )
        for i in range(count)
    ]


def spread(anchors: list[float], halves: list[float], *, low: float, high: float) -> list[float]:
    """Return the centres nearest to the anchors (least squares) at which no two blocks overlap.

    Keeping order and distance is an isotonic regression: pool adjacent violators (Ayer et al. 1955).
    """
    offsets = [0.0]
    for a, b in itertools.pairwise(halves):
        offsets.append(offsets[-1] + a + b)
    pools: list[tuple[float, int]] = []
    for anchor, offset in zip(anchors, offsets, strict=False):
        mean, size = anchor - offset, 1
        while pools and pools[-1][0] > mean:
            before, many = pools.pop()
            mean, size = (before * many + mean * size) / (many + size), many + size
        pools.append((mean, size))
    levels = [mean for mean, size in pools for _ in range(size)]
    if not levels:
        return []
    least, most = low + halves[0], high - halves[-1] - offsets[-1]
    return [offset + max(least, min(level, most)) for level, offset in zip(levels, offsets, strict=False)]


def _pass(
    centres: list[float], halves: list[float], anchors: list[float], i: int, back: int, rows: int
) -> float:
    """Return where the leader of block `i` passes the row of its neighbour `back` places before it."""
    left, right = i - back, i - back + rows
    start = centres[left] + halves[left] - _GAP_PT
    end = centres[right] - halves[right] + _GAP_PT if right < len(centres) else start + 4.0 * _GAP_PT
    share = back / rows
    return min(max(anchors[i], start + share * 2.0 * _GAP_PT), end - (1.0 - share) * 2.0 * _GAP_PT)


def row_heights(blocks: list[Block]) -> list[float]:
    """Return the height in pt of every row of blocks, room for slanting leaders in it."""
    rows = 1 + max((block.row for block in blocks), default=-1)
    most = [max((len(b.lines) for b in blocks if b.row == r), default=0) for r in range(rows)]
    return [LINE_PT * lines + _LEADER_PT + 3.0 for lines in most]


def write(axes: Axes, blocks: list[Block], *, start: float, upward: bool = False) -> None:
    """Write blocks in rows from `start` (pt, of axes whose y points down), with leaders where they moved."""
    heights = row_heights(blocks)
    sense = -1.0 if upward else 1.0
    for block in blocks:
        xs, ys = [block.anchor], [start]
        for row, x in enumerate(block.passes):
            top = start + sense * (sum(heights[:row]) + _LEADER_PT)
            xs += [x, x]
            ys += [top, start + sense * sum(heights[: row + 1])]
        near = start + sense * (sum(heights[: block.row]) + _LEADER_PT)
        axes.plot([*xs, block.centre], [*ys, near], color=NEUTRAL, lw=0.6, zorder=1)
        first = near - LINE_PT * len(block.lines) - 1.0 if upward else near
        for i, line in enumerate(block.lines):
            axes.text(block.centre, first + LINE_PT * (i + 0.8), line, ha="center", va="baseline")
