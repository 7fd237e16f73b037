"""Random girders, supports and loads of believable size, for Hypothesis."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np
from hypothesis import assume, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from assess.girder import Girder, Piece
from assess.loads import LoadCase, Train

Floats = NDArray[np.float64]

# the plain run takes the same examples every time; a campaign looks for new ones
PLAIN = settings(max_examples=60, deadline=None, derandomize=True)
FEW = settings(max_examples=25, deadline=None, derandomize=True)
CAMPAIGN = settings(max_examples=1500, deadline=None, print_blob=True)


@dataclass(frozen=True, kw_only=True)
class Case:
    """A girder on its supports under its loads."""

    girder: Girder
    compliance: Floats
    settlement: Floats
    loads: LoadCase


def logs(low: float, high: float) -> st.SearchStrategy[float]:
    """Values spread evenly over the powers of ten."""
    return st.floats(np.log10(low), np.log10(high)).map(lambda p: float(10.0**p))


@st.composite
def spans(draw: st.DrawFn, *, shear: bool = False, slivers: bool = False) -> tuple[Piece, ...]:
    """A span of 3 to 60 m in one to three pieces, some of them a few millimetres long."""
    length = draw(st.floats(3.0, 60.0))
    shares = np.array(draw(st.lists(st.floats(0.2, 1.0), min_size=1, max_size=3)))
    lengths = list(length * shares / shares.sum())
    if slivers:
        for _ in range(draw(st.integers(0, 2))):
            lengths.insert(draw(st.integers(0, len(lengths))), draw(st.floats(0.002, 0.008)))
    pieces = []
    for one in lengths:
        flexural = draw(logs(2e5, 5e7))
        stiff = flexural * draw(st.floats(0.3, 5.0)) if shear else np.inf
        pieces.append(Piece(length=float(one), flexural=flexural, shear=stiff))
    return tuple(pieces)


@st.composite
def girders(
    draw: st.DrawFn,
    *,
    shear: bool = False,
    slivers: bool = False,
    restrained: bool = False,
    least: int = 1,
    most: int = 8,
) -> Girder:
    """A girder of `least` to `most` spans."""
    row = draw(st.lists(spans(shear=shear, slivers=slivers), min_size=least, max_size=most))
    rotation = np.zeros(len(row) + 1)
    if restrained:
        kinds = st.one_of(st.just(0.0), st.just(0.0), st.just(np.inf), logs(1e4, 1e8))
        rotation = np.array([draw(kinds) for _ in rotation])
    return Girder(tuple(row), rotation)


def with_hinges(girder: Girder, at: Sequence[float]) -> Girder:
    """The same girder with hinges at x (m): the pieces are cut there."""
    marks, start, row = sorted(at), 0.0, []
    for span in girder.spans:
        pieces = []
        for piece in span:
            end = start + piece.length
            edges = [start, *(x for x in marks if start + 1e-6 < x < end - 1e-6), end]
            pieces += [replace(piece, length=b - a) for a, b in pairwise(edges)]
            start = end
        row.append(tuple(pieces))
    return Girder(tuple(row), girder.rotation, tuple(marks))


def moves_freely(girder: Girder) -> bool:
    """Whether the rigid parts between hinges can move with all supports held: a mechanism, told by kinematics."""
    x = girder.support_positions
    edges = np.array([-1.0, *girder.hinges, girder.length + 1.0])
    part = np.searchsorted(edges, x) - 1
    parts = edges.size - 1
    rows = []
    for at, i, turn in zip(x, part, girder.rotation, strict=True):
        rows += [_part(parts, i, 1.0, at)] + [_part(parts, i, 0.0, 1.0)] * bool(turn > 0.0)
    rows += [_part(parts, i, 1.0, at) - _part(parts, i + 1, 1.0, at) for i, at in enumerate(girder.hinges)]
    return int(np.linalg.matrix_rank(np.array(rows), tol=1e-9)) < 2 * parts


def _part(parts: int, i: int, level: float, slope: float) -> Floats:
    row = np.zeros(2 * parts)
    row[2 * i], row[2 * i + 1] = level, slope
    return row


@st.composite
def hinged_girders(
    draw: st.DrawFn,
    *,
    shear: bool = False,
    slivers: bool = False,
    restrained: bool = False,
    least: int = 1,
    most: int = 8,
) -> Girder:
    """A girder with one to six internal hinges that is no mechanism; some of them near a support."""
    girder = draw(
        girders(shear=shear, slivers=slivers, restrained=restrained, least=max(least, 2), most=most)
    )
    edges, kept = girder.support_positions, girder
    for _ in range(draw(st.integers(1, 6))):
        j, share = draw(st.integers(0, len(girder.spans) - 1)), draw(st.integers(4, 996)) / 1000.0
        x = float(edges[j] + share * (edges[j + 1] - edges[j]))
        if np.abs(kept.breakpoints - x).min() < 1e-3:
            continue
        tried = with_hinges(kept, [*kept.hinges, x])
        kept = kept if moves_freely(tried) else tried
    assume(kept.hinges)
    return kept


pads = logs(1e-7, 1e-4)  # m/kN: stiffness 1e4 to 1e7 kN/m


@st.composite
def compliances(draw: st.DrawFn, n: int, *, rigid: bool = True, absent: bool = False) -> Floats:
    """Pads, some of them unyielding, and with `absent` some supports that are not there."""
    kinds = [pads, pads]
    if rigid:
        kinds.append(st.just(0.0))
    values = np.array([draw(st.one_of(kinds)) for _ in range(n)])
    if absent:
        for i in range(n - 2):
            if draw(st.integers(0, 4)) == 0:
                values[n - 1 - i] = np.inf
    return values


@st.composite
def load_cases(draw: st.DrawFn, length: float) -> LoadCase:
    """One to three point loads and up to two uniform loads, somewhere on the girder."""
    share = st.integers(0, 1000).map(lambda thousandths: thousandths / 1000.0)
    points = tuple(
        (draw(share) * length, draw(st.floats(1.0, 900.0))) for _ in range(draw(st.integers(1, 3)))
    )
    uniforms = []
    for _ in range(draw(st.integers(0, 2))):
        start, end = sorted((draw(share) * length, draw(share) * length))
        if end - start > 1e-3:
            uniforms.append((start, end, draw(st.floats(1.0, 60.0))))
    return LoadCase(points=points, uniforms=tuple(uniforms))


@st.composite
def cases(
    draw: st.DrawFn,
    *,
    shear: bool = False,
    slivers: bool = False,
    restrained: bool = False,
    absent: bool = False,
    settled: bool = True,
    hinged: bool = False,
    least: int = 1,
    most: int = 8,
) -> Case:
    """A whole case; seats drop by up to 50 mm either way."""
    make = hinged_girders if hinged else girders
    girder = draw(make(shear=shear, slivers=slivers, restrained=restrained, least=least, most=most))
    n = girder.n_supports
    drop = st.floats(-0.05, 0.05) if settled else st.just(0.0)
    return Case(
        girder=girder,
        compliance=draw(compliances(n, absent=absent)),
        settlement=np.array([draw(drop) for _ in range(n)]),
        loads=draw(load_cases(girder.length)),
    )


@st.composite
def trains(draw: st.DrawFn) -> Train:
    """One to five axles at whole millimetres.

    Gaps end in 7 mm, so that no axle stands exactly on a station while another comes on at an end: what the
    shear is then is a matter of which is named first.
    """
    gaps = draw(st.lists(st.integers(60, 400).map(lambda cm: 10 * cm + 7), min_size=0, max_size=4))
    offsets = np.concatenate([[0.0], np.cumsum(gaps)]) / 1000.0
    return Train(offsets, np.array([draw(st.floats(20.0, 250.0)) for _ in offsets]))


def stations(girder: Girder, per_span: int = 5) -> Floats:
    """Places inside every span, off the supports, and the ends of the pieces inside it."""
    edges = girder.support_positions
    inside = edges[:-1, None] + np.diff(edges)[:, None] * np.linspace(0.0, 1.0, per_span + 2)[1:-1]
    return np.unique(np.concatenate([inside.ravel(), girder.breakpoints]))


def apart(value: Floats, reference: Floats, scale: float | None = None) -> float:
    """Largest difference, relative to the largest reference value."""
    reference = np.asarray(reference, dtype=np.float64)
    size = float(np.abs(reference).max()) if scale is None else scale
    difference = float(np.abs(np.asarray(value) - reference).max())
    return difference / size if size > 0.0 else difference
