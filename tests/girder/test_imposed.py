"""Imposed curvatures: a temperature difference through the girder."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest

from assess.girder import Condensed, Girder, Piece, imposed, imposed_forces, places
from tests.calibrate.exact import stepped_girder

EI = 1.5e6


def uniform(*spans: float) -> Girder:
    return Girder(tuple((Piece(length=span, flexural=EI),) for span in spans))


def hinged_girder() -> Girder:
    first, last = uniform(12.0, 12.0).spans
    middle = (Piece(length=4.0, flexural=EI), Piece(length=11.0, flexural=EI))
    return Girder((first, middle, last), np.zeros(4), (16.0,))


def test_a_simple_span_bends_into_an_arc() -> None:
    condensed = Condensed(uniform(20.0))
    place = places(condensed, "deflection", np.array([5.0, 10.0]))
    found = imposed(place, [(0.0, 20.0, 1e-4)])
    assert found == pytest.approx([1e-4 * 5.0 * 15.0 / 2.0, 1e-4 * 20.0**2 / 8.0], rel=1e-12)
    assert np.abs(imposed_forces(condensed, [(0.0, 20.0, 1e-4)])).max() < 1e-9


def test_two_equal_spans_take_one_and_a_half_times_the_stiffness_times_the_curvature() -> None:
    # force method: each span turns by kappa L / 2, and by M L / 3 EI of the moment that closes the joint
    condensed = Condensed(uniform(12.0, 12.0))
    curvatures = [(0.0, 24.0, 1e-4)]
    moment = imposed(places(condensed, "moment", np.array([12.0])), curvatures)
    assert moment[0] == pytest.approx(-1.5 * EI * 1e-4, rel=1e-12)
    force = 1.5 * EI * 1e-4 / 12.0  # by equilibrium of each span
    assert imposed_forces(condensed, curvatures) == pytest.approx([-force, 2.0 * force, -force], rel=1e-12)


@pytest.mark.parametrize(
    "girder",
    [stepped_girder(), hinged_girder()],
    ids=["stepped and clamped", "with a hinge"],
)
def test_the_girder_bends_by_its_moment_and_the_curvature_together(girder: Girder) -> None:
    condensed = Condensed(girder)
    curvatures = [(0.0, 4.0, 2e-4), (4.0, 13.0, -1e-4), (13.0, girder.length, 3e-4)]
    edges = np.unique([*girder.breakpoints, *(edge for one in curvatures for edge in one[:2])])
    h = 1e-2
    for start, end in pairwise(edges):
        x = np.linspace(start, end, 7)[1:-1]
        at = [imposed(places(condensed, "deflection", x + k * h), curvatures) for k in (-1, 0, 1)]
        bent = -(at[0] - 2.0 * at[1] + at[2]) / h**2
        piece = [one for span in girder.spans for one in span][
            int(np.searchsorted(girder.breakpoints, x[0], side="right")) - 1
        ]
        kappa = next(c for a, b, c in curvatures if a < x[0] < b)
        moment = imposed(places(condensed, "moment", x), curvatures)
        assert bent == pytest.approx(
            moment / piece.flexural + kappa, abs=1e-8
        )  # constant shear bends nothing
        turned = (at[2] - at[0]) / (2.0 * h)
        sheared = imposed(places(condensed, "shear", x), curvatures) / (piece.shear or np.inf)
        slope = imposed(places(condensed, "slope", x), curvatures)  # of the cross-section
        assert slope + sheared == pytest.approx(turned, abs=1e-9)


def test_the_supports_stay_level() -> None:
    condensed = Condensed(stepped_girder())
    place = places(condensed, "deflection", condensed.positions)
    assert np.abs(imposed(place, [(0.0, 28.0, 3e-4)])).max() < 1e-15


def test_a_reaction_is_no_response_along_the_girder() -> None:
    from assess.girder import support_places

    with pytest.raises(ValueError, match="not a response along the girder"):
        imposed(support_places(Condensed(uniform(12.0))), [(0.0, 12.0, 1e-4)])
