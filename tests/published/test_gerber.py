"""Gerber beams of the textbooks, whose answers follow from equilibrium alone.

No printed numbers were at hand: every case is DERIVED by hand statics, written beside it, so the tolerance is rounding.
Moments and reactions must be these whatever the stiffness of the girder and the pads, and whatever settles.
"""

from __future__ import annotations

import numpy as np
import pytest
from numpy.typing import NDArray

from assess.girder import Condensed, Girder, Piece, envelope, forces_of, passages, places, support_places
from assess.loads import LoadCase, Train
from tests.girder.strategies import with_hinges

Floats = NDArray[np.float64]

SUPPORTS = {
    "unyielding": (np.zeros(4), np.zeros(4)),
    "pads": (np.array([1e-5, 4e-5, 2e-6, 3e-5]), np.zeros(4)),
    "settled": (np.array([1e-5, 0.0, 2e-6, 0.0]), np.array([0.01, 0.08, -0.03, 0.0])),
}


def beam(lengths: list[float], stiffness: list[float], hinges: list[float]) -> Condensed:
    spans = tuple((Piece(length=a, flexural=b),) for a, b in zip(lengths, stiffness, strict=True))
    return Condensed(with_hinges(Girder(spans), hinges))


def answers(
    condensed: Condensed, loads: LoadCase, x: list[float], f: Floats, drop: Floats
) -> tuple[Floats, Floats]:
    n = condensed.n_supports
    state = condensed.solve(f[:n], forces_of(condensed, loads), drop[:n])
    place = places(condensed, "moment", np.array(x))
    return place.held(loads) + place.rows @ state.displacement, state.reaction


@pytest.mark.parametrize("kind", sorted(SUPPORTS))
def test_gerber_beam_that_levels_its_moments(kind: str) -> None:
    # DERIVED: three equal spans L, uniform w, hinges in the middle span at a = L (1 - 1/sqrt 2) / 2 from its piers, so
    # that the pier moment -w a (L - a) / 2 and the sagging moment of the suspended span w (L - 2 a)^2 / 8 are both
    # w L^2 / 16
    length, w = 16.0, 25.0
    a = length * (1.0 - 1.0 / np.sqrt(2.0)) / 2.0
    condensed = beam([length] * 3, [3e6, 2e6, 4e6], [length + a, 2.0 * length - a])
    loads = LoadCase(uniforms=((0.0, 3.0 * length, w),))
    moment, reaction = answers(condensed, loads, [length, 1.5 * length, 2.0 * length], *SUPPORTS[kind])
    level = w * length**2 / 16.0
    assert moment == pytest.approx([-level, level, -level], rel=1e-10)
    end = w * length / 2.0 - level / length
    pier = 1.5 * w * length - end
    assert reaction == pytest.approx([end, pier, pier, end], rel=1e-10)


@pytest.mark.parametrize("kind", sorted(SUPPORTS))
def test_gerber_beam_with_a_hinge_in_each_end_span(kind: str) -> None:
    # DERIVED: spans 8, 10, 8 m; hinges 2 m outside the piers, at 6 and 20 m; 12 kN/m on the left end span alone.
    # Left suspended part 6 m: its end 12 * 6 / 2 = 36 kN on the hinge and on the abutment. Pier 1:
    # -(36 * 2 + 12 * 2^2 / 2) = -96; pier 2: 0. Middle span 96 / 10 = 9.6 kN: pier 1 36 + 24 + 9.6 = 69.6, pier 2 -9.6,
    # right abutment 0.
    condensed = beam([8.0, 10.0, 8.0], [1e6, 3e6, 2e6], [6.0, 20.0])
    loads = LoadCase(uniforms=((0.0, 8.0, 12.0),))
    moment, reaction = answers(condensed, loads, [3.0, 8.0, 13.0, 18.0], *SUPPORTS[kind])
    assert moment == pytest.approx([54.0, -96.0, -48.0, 0.0], abs=1e-9)
    assert reaction == pytest.approx([36.0, 69.6, -9.6, 0.0], abs=1e-9)


@pytest.mark.parametrize("kind", sorted(SUPPORTS))
def test_gerber_beam_of_two_spans_with_one_hinge(kind: str) -> None:
    # DERIVED: spans 10 and 6 m, hinge at 8 m; 40 kN at 4 m: 20 kN on the hinge, pier -20 * 2 = -40, so the right end
    # lifts with 40 / 6 and the pier carries 20 + 40 / 6
    condensed = beam([10.0, 6.0], [1e6, 2e6], [8.0])
    moment, reaction = answers(condensed, LoadCase(points=((4.0, 40.0),)), [4.0, 8.0, 10.0], *SUPPORTS[kind])
    assert moment == pytest.approx([80.0, 0.0, -40.0], abs=1e-9)
    assert reaction == pytest.approx([20.0, 20.0 + 40.0 / 6.0, -40.0 / 6.0], abs=1e-9)


def test_influence_lines_of_a_gerber_beam_are_straight() -> None:
    # DERIVED, as every textbook draws them: the pier moment grows to -3 m at the hinge and falls to 0 at the other one
    condensed = beam([10.0, 12.0, 10.0], [2e6] * 3, [13.0, 19.0])
    line = places(condensed, "moment", np.array([10.0])).unit(
        np.array([0.0, 5.0, 10.0, 11.5, 13.0, 16.0, 19.0, 25.0])
    )
    assert line[0] == pytest.approx([0.0, 0.0, 0.0, -1.5, -3.0, -1.5, 0.0, 0.0], abs=1e-12)
    line = support_places(condensed).unit(np.array([13.0, 16.0, 19.0]))[:2]
    assert line == pytest.approx(np.array([[-0.3, -0.15, 0.0], [1.3, 0.65, 0.0]]), abs=1e-12)


def test_two_axles_stand_worst_for_the_pier_with_one_on_the_hinge() -> None:
    # DERIVED: of two axles of 100 kN 2 m apart one stands on the hinge, 3 m past the pier, its fellow 2 m further on
    # the suspended span of 6 m: 100 * 3 * (1 + 4 / 6) = 500, more than 100 * (3 + 1) = 400 on the other side of it
    condensed = beam([10.0, 12.0, 10.0], [2e6] * 3, [13.0, 19.0])
    train = Train(np.array([0.0, 2.0]), np.array([100.0, 100.0]))
    found = envelope(passages(places(condensed, "moment", np.array([10.0])), train), np.zeros(4))
    assert found.minimum == pytest.approx([-500.0], rel=1e-12)
    assert found.leading_at_minimum == pytest.approx([15.0], rel=1e-12)
