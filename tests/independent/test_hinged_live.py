"""Envelopes of trains and published load models on girders with internal hinges against every millimetre."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from assess.girder import Condensed, Girder, Piece, influence_line, places, support_places
from assess.loads import Train
from tests.girder.strategies import CAMPAIGN, PLAIN, moves_freely, trains, with_hinges
from tests.independent import brute_force, test_live, test_live_models
from tests.independent.rolled_models import MODELS
from tests.independent.test_live import short_girders

Floats = NDArray[np.float64]


def plain(*lengths: float) -> Girder:
    return Girder(tuple((Piece(length=length, flexural=1.6e6),) for length in lengths))


SUSPENDED = with_hinges(plain(9.0, 12.0, 7.5), [11.3, 18.1])  # a suspended span in the middle one
SHORT = with_hinges(plain(9.0, 12.0, 7.5), [14.0, 15.7])  # and a very short one
HALF_JOINTS = with_hinges(plain(9.0, 12.0, 7.5), [7.1, 22.9])  # one in each end span
INDETERMINATE = with_hinges(plain(9.0, 12.0, 7.5), [17.013])
SOFT = np.array([5e-6, 1.2e-5, 4e-6, 8e-6])
GIRDERS = {
    "suspended span": SUSPENDED,
    "short suspended span": SHORT,
    "half-joints": HALF_JOINTS,
    "one hinge": INDETERMINATE,
}


@st.composite
def short_hinged_girders(draw: st.DrawFn) -> tuple[Girder, Floats]:
    """Two or three spans of whole decimetres on pads, with one or two hinges at whole centimetres."""
    girder, f = draw(short_girders())
    assume(len(girder.spans) > 1)
    edges, at = girder.support_positions, []
    for _ in range(draw(st.integers(1, 2))):
        j = draw(st.integers(0, len(girder.spans) - 1))
        x = round(edges[j] + draw(st.integers(5, 95)) / 100.0 * (edges[j + 1] - edges[j]), 2)
        if np.abs(np.array([*girder.breakpoints, *at]) - x).min() > 0.05:
            at.append(x)
    assume(at)
    hinged = with_hinges(girder, at)
    assume(not moves_freely(hinged))
    return hinged, f


@settings(PLAIN, max_examples=25)
@given(short_hinged_girders(), trains())
def test_train_envelopes_on_hinged_girders_agree_with_every_millimetre(made, train: Train) -> None:  # type: ignore[no-untyped-def]
    test_live.compare(*made, train)


@pytest.mark.parametrize("kind", sorted(GIRDERS))
def test_a_coupled_train_agrees_with_every_millimetre(kind: str) -> None:
    wagon = Train(np.array([0.0, 1.83, 6.27]), np.array([90.0, 200.0, 140.0]))
    test_live.compare(GIRDERS[kind], SOFT, wagon.coupled(2, 8.51))


@pytest.mark.parametrize("name", sorted(MODELS))
@pytest.mark.parametrize("kind", sorted(GIRDERS))
def test_load_models_on_hinged_girders_agree_with_every_millimetre(kind: str, name: str) -> None:
    test_live_models.compare(GIRDERS[kind], SOFT, name)


@settings(PLAIN, max_examples=8)
@given(short_hinged_girders(), test_live_models.WHOLE_MILLIMETRES)
def test_load_models_on_short_hinged_girders_agree_with_every_millimetre(made, name: str) -> None:  # type: ignore[no-untyped-def]
    test_live_models.compare(*made, name)


@pytest.mark.campaign
@settings(CAMPAIGN, max_examples=150)
@given(short_hinged_girders(), test_live_models.WHOLE_MILLIMETRES, trains())
def test_hinged_envelopes_agree_at_length(made, name: str, train: Train) -> None:  # type: ignore[no-untyped-def]
    test_live_models.compare(*made, name)
    test_live.compare(*made, train)


@pytest.mark.parametrize("kind", sorted(GIRDERS))
def test_influence_lines_of_hinged_girders_agree_to_nine_digits(kind: str) -> None:
    girder, x = GIRDERS[kind], np.array([4.3, 8.8, 15.0, 20.4, 26.0])
    condensed, lines = Condensed(girder), brute_force.influence_lines(girder, SOFT, x)
    a = np.arange(28501) * 1e-3
    for quantity in ("moment", "deflection"):
        value = influence_line(places(condensed, quantity, x), a, SOFT)
        reference = getattr(lines, quantity)
        assert np.abs(value - reference).max() < 1e-9 * np.abs(reference).max()
    assert np.abs(influence_line(support_places(condensed), a, SOFT) - lines.reaction).max() < 1e-9
