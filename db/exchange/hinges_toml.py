"""Internal hinges in the spans of a bridge file, and whether a girder with them can stand."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from itertools import pairwise

from db.documents import SpanDoc, SupportDoc
from db.exchange.fields import Fields
from db.quantities import read_quantity
from db.wording import shown

NEAREST_M = 0.01
"""A hinge nearer to a support or to another hinge is a slip: no half-joint is built that close."""

_EXAMPLE = 'hinges = ["4.5 m"]'

Row = dict[int, Fraction]


def hinges(fields: Fields, length: float) -> tuple[float, ...]:
    """Return the hinges of one span, in m from its left end, ascending.

    Raises
    ------
    BedstoneError
        If it is not a list of lengths, or one lies on a support, outside the span or on another one.
    """
    if not fields.has("hinges"):
        return ()
    right = f"write for example {_EXAMPLE}, distances from the span's left end"
    written = fields.table["hinges"]
    if not isinstance(written, list):
        raise fields.error("hinges", "it is not a list of places", right)
    found = []
    for text in written:
        x = read_quantity(text, "length", file=fields.file, field=fields.where("hinges"), example="4.5 m").si
        if not NEAREST_M <= x <= length - NEAREST_M:
            problem = (
                f'"{shown(text)}" does not lie inside the span (0 to {length:g} m, both supports left out)'
            )
            raise fields.error("hinges", problem, right)
        found.append(x)
    found.sort()
    for a, b in pairwise(found):
        if b - a < NEAREST_M:
            problem = f"two hinges stand on one place ({b:g} m)"
            raise fields.error("hinges", problem, "write each hinge once")
    return tuple(found)


def refuse_mechanism(
    fields: Sequence[Fields], spans: Sequence[SpanDoc], supports: Sequence[SupportDoc]
) -> None:
    """Raise BedstoneError, naming the span, if the hinges make a mechanism of a girder, however stiff its supports.

    Parameters
    ----------
    fields, spans : the spans from the left, and where they stand in the file
    supports : one more than there are spans
    """
    starts = [Fraction(0)]
    for span in spans:
        starts.append(starts[-1] + Fraction(span.length))
    at: list[Fraction] = []
    for field, span, start in zip(fields, spans, starts, strict=False):
        at += [start + Fraction(x) for x in span.hinges]
        if span.hinges and _moves(starts, [support.rotation > 0.0 for support in supports], at):
            problem = (
                "the hinges make a mechanism: a part of the girder can move although every support holds"
            )
            remedy = "take out a hinge; or write the rotation of a support where it is held"
            raise field.error("hinges", problem, remedy)


def _moves(supports: Sequence[Fraction], turns: Sequence[bool], at: Sequence[Fraction]) -> bool:
    """Whether the rigid parts between hinges can move: the rank of what holds them is less than their freedoms.

    A part i has a level at x = 0, number 2 i, and a slope, number 2 i + 1.
    """
    rows: list[Row] = []
    for x, turn in zip(supports, turns, strict=True):
        i = 2 * sum(hinge < x for hinge in at)
        rows.append({i: Fraction(1), i + 1: x})
        if turn:
            rows.append({i + 1: Fraction(1)})
    for i, x in enumerate(at):
        own = {2 * i: Fraction(1), 2 * i + 1: x}
        rows.append(own | {2 * i + 2: Fraction(-1), 2 * i + 3: -x})
    return _rank(rows) < 2 * (len(at) + 1)


def _rank(rows: Sequence[Row]) -> int:
    """Rank of sparse rows, by exact elimination."""
    pivots: dict[int, Row] = {}
    for row in rows:
        left = dict(row)
        while left:
            column = min(left)
            if column not in pivots:
                pivots[column] = left
                break
            over = pivots[column]
            factor = left[column] / over[column]
            for j, value in over.items():
                rest = left.get(j, Fraction(0)) - factor * value
                left[j] = rest
                if not rest:
                    del left[j]
    return len(pivots)
