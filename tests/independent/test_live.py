"""Influence lines and live envelopes against a train rolled in steps of one millimetre."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from assess.girder import Condensed, Girder, Piece, envelope, influence_line, passages, places, support_places
from assess.loads import Train
from tests.girder.strategies import CAMPAIGN, PLAIN, trains
from tests.independent import brute_force

Floats = NDArray[np.float64]
OF_THE_PEAK = 1e-3


@st.composite
def short_girders(draw: st.DrawFn) -> tuple[Girder, Floats]:
    """One to three spans of whole decimetres, stepped, on pads that yield."""
    row = []
    for _ in range(draw(st.integers(1, 3))):
        length = draw(st.integers(20, 60)) / 10.0
        cut = draw(st.sampled_from([0.3, 0.5, 0.7]))
        ei = [float(10.0 ** draw(st.floats(4.0, 5.5))) for _ in range(2)]
        ends = (round(cut * length, 2), length - round(cut * length, 2))
        row.append(tuple(Piece(length=a, flexural=b) for a, b in zip(ends, ei, strict=True)))
    girder = Girder(tuple(row))
    f = [float(10.0 ** draw(st.floats(-6.5, -4.0))) for _ in range(girder.n_supports)]
    return girder, np.array(f)


def where(girder: Girder) -> Floats:
    edges = girder.support_positions
    inside = edges[:-1, None] + np.diff(edges)[:, None] * np.array([0.2, 0.4, 0.55, 0.8])
    return np.unique(np.round(np.concatenate([inside.ravel(), edges]), 3))


def within(value: Floats, reference: Floats, peak: float) -> None:
    """0.1 % of the peak: the issue's own bound, and the reference itself steps by a millimetre."""
    assert np.abs(value - reference).max() <= OF_THE_PEAK * peak


def compare(girder: Girder, f: Floats, train: Train) -> None:
    condensed = Condensed(girder)
    x = where(girder)
    lines = brute_force.influence_lines(girder, f, x)
    for quantity in ("moment", "deflection"):
        high, low = brute_force.roll(getattr(lines, quantity), train)
        found = envelope(passages(places(condensed, quantity, x), train), f)
        peak = max(high.max(), -low.min())
        within(found.maximum, high, peak)
        within(found.minimum, low, peak)
    high, low = brute_force.roll(lines.shear, train)
    high, low = high.max(axis=-1), low.min(axis=-1)
    peak = max(high.max(), -low.min())
    for face, side in enumerate((-1, 1)):
        use = (x > 0.0) if side < 0 else (x < x[-1])
        found = envelope(passages(places(condensed, "shear", x[use], side), train), f)
        within(found.maximum, high[use, face], peak)
        within(found.minimum, low[use, face], peak)
    high, low = brute_force.roll(lines.reaction, train)
    found = envelope(passages(support_places(condensed), train), f)
    within(found.maximum, high, high.max())
    within(found.minimum, low, high.max())


@settings(PLAIN, max_examples=25)
@given(short_girders(), trains())
def test_envelopes_on_yielding_supports_agree_with_every_millimetre(made, train) -> None:  # type: ignore[no-untyped-def]
    compare(*made, train)


@pytest.mark.campaign
@settings(CAMPAIGN, max_examples=300)
@given(short_girders(), trains())
def test_envelopes_agree_with_every_millimetre_at_length(made, train) -> None:  # type: ignore[no-untyped-def]
    compare(*made, train)


def test_coupled_vehicles_run_both_ways() -> None:
    girder = Girder((
        (Piece(length=5.0, flexural=1.2e5),),
        (Piece(length=2.5, flexural=1.2e5), Piece(length=3.5, flexural=2.0e5)),
    ))  # fmt: skip
    wagon = Train(np.array([0.0, 1.83, 6.27]), np.array([90.0, 200.0, 140.0]))
    compare(girder, np.array([3e-6, 8e-6, 2e-5]), wagon.coupled(3, 8.51))


def test_influence_lines_on_pads_agree_to_ten_digits() -> None:
    girder = Girder((
        (Piece(length=2.0, flexural=9e4), Piece(length=2.0, flexural=5e4)),
        (Piece(length=5.0, flexural=7e4),),
    ))  # fmt: skip
    f, x = np.array([4e-6, 2e-5, 1e-5]), np.array([1.2, 2.0, 5.5])
    condensed = Condensed(girder)
    lines = brute_force.influence_lines(girder, f, x)
    a = np.arange(9001) * 1e-3
    for quantity in ("moment", "deflection"):
        value = influence_line(places(condensed, quantity, x), a, f)
        reference = getattr(lines, quantity)
        assert np.abs(value - reference).max() < 1e-9 * np.abs(reference).max()
    value = influence_line(support_places(condensed), a, f)
    assert np.abs(value - lines.reaction).max() < 1e-9
