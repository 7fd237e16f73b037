"""What responses must satisfy anywhere on a girder."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from numpy.typing import NDArray

from assess.girder import Condensed, Girder, Piece, forces_of, places, support_places
from assess.loads import LoadCase
from tests.girder.strategies import FEW, PLAIN, Case, apart, cases

Floats = NDArray[np.float64]
TWO = Girder(((Piece(length=10.0, flexural=2e5),), (Piece(length=14.0, flexural=3e5),)))


def responses(case: Case, x: Floats) -> dict[str, Floats]:
    condensed = Condensed(case.girder)
    state = condensed.solve(case.compliance, forces_of(condensed, case.loads), case.settlement)
    result = {}
    for quantity in ("deflection", "slope", "moment", "shear"):
        place = places(condensed, quantity, x)
        result[quantity] = place.held(case.loads) + place.rows @ state.displacement
    return result


@PLAIN
@given(cases(shear=True, most=4))
def test_deflection_slope_moment_and_shear_belong_together(case: Case) -> None:
    # within a stretch without breaks or loads: M' = V, slope' = -M/EI, deflection' = slope + V/GA, integrated
    # exactly by Gauss (they are polynomials of degree 4 at most there)
    marks = [*case.girder.breakpoints, *(x for x, _ in case.loads.points)]
    marks += [x for start, end, _ in case.loads.uniforms for x in (start, end)]
    edges = np.unique(marks)
    longest = int(np.argmax(np.diff(edges)))
    low, high = edges[longest] + 1e-3, edges[longest + 1] - 1e-3
    nodes, weights = np.polynomial.legendre.leggauss(3)
    x = (low + high) / 2.0 + (high - low) / 2.0 * nodes
    half = (high - low) / 2.0 * weights
    inside, at = responses(case, x), responses(case, np.array([low, high]))
    pieces = [piece for span in case.girder.spans for piece in span]
    piece = pieces[int(np.searchsorted(case.girder.breakpoints, (low + high) / 2.0)) - 1]

    def holds(quantity: str, rate: Floats) -> None:
        parts = np.array([*at[quantity], (rate * half).sum(), np.abs(rate * half).sum()])
        assert abs(parts[1] - parts[0] - parts[2]) < 1e-9 * (np.abs(parts).max() + 1e-12)

    holds("moment", inside["shear"])
    holds("slope", -inside["moment"] / piece.flexural)
    holds("deflection", inside["slope"] + inside["shear"] / piece.shear)


@FEW
@given(cases(shear=True))
def test_the_shear_jumps_at_a_support_by_its_reaction(case: Case) -> None:
    condensed = Condensed(case.girder)
    # clear of loads on the supports themselves
    loads = LoadCase(uniforms=((0.0, case.girder.length, 10.0),))
    state = condensed.solve(case.compliance, forces_of(condensed, loads), case.settlement)
    inner = condensed.positions[1:-1]
    left, right = (places(condensed, "shear", inner, side) for side in (-1, 1))
    jump = right.held(loads) - left.held(loads) + (right.rows - left.rows) @ state.displacement
    size = loads.total + (np.abs(condensed.K) @ np.abs(case.settlement)).max()
    if inner.size:
        assert np.abs(jump - state.reaction[1:-1]).max() < 1e-9 * size


@FEW
@given(cases(shear=True, absent=True))
def test_reactions_as_responses_are_those_of_the_solution(case: Case) -> None:
    condensed = Condensed(case.girder)
    state = condensed.solve(case.compliance, forces_of(condensed, case.loads), case.settlement)
    place = support_places(condensed)
    value = place.held(case.loads) + place.rows @ state.displacement
    size = case.loads.total + (np.abs(condensed.K) @ np.abs(state.displacement)).max()
    assert np.abs(value - state.reaction).max() < 1e-9 * size


@FEW
@given(cases(settled=False))
def test_a_uniform_load_is_the_sum_of_its_slices(case: Case) -> None:
    condensed = Condensed(case.girder)
    length = case.girder.length
    one = LoadCase(uniforms=((0.1 * length, 0.9 * length, 12.0),))
    cuts = np.linspace(0.1, 0.9, 6) * length
    many = LoadCase(uniforms=tuple((a, b, 12.0) for a, b in zip(cuts[:-1], cuts[1:], strict=True)))  # noqa: RUF007
    assert apart(forces_of(condensed, many), forces_of(condensed, one)) < 1e-11
    place = places(condensed, "deflection", np.linspace(0.0, length, 9))
    assert apart(place.held(many), place.held(one)) < 1e-10


@pytest.mark.parametrize("x", [-0.001, 24.001, np.nan])
def test_a_place_beyond_the_girder_is_refused(x: float) -> None:
    with pytest.raises(ValueError, match="outside the girder of 24 m"):
        places(Condensed(TWO), "moment", np.array([5.0, x]))


def test_an_unknown_response_is_refused_with_the_known_ones() -> None:
    with pytest.raises(ValueError, match="deflection, slope, moment, shear"):
        places(Condensed(TWO), "torsion", np.array([5.0]))


def test_a_load_beyond_the_girder_does_nothing() -> None:
    condensed = Condensed(TWO)
    assert not condensed.unit_forces(np.array([-0.5, 24.5])).any()
    for quantity in ("deflection", "slope", "moment", "shear"):
        assert not places(condensed, quantity, np.array([4.0])).unit(np.array([-0.5, 24.5])).any()


def test_a_settlement_alone_bends_two_spans_by_the_text_book_amount() -> None:
    # three-moment equation, two equal spans: M = 3 EI s / L^2
    girder = Girder(((Piece(length=8.0, flexural=1e5),), (Piece(length=8.0, flexural=1e5),)))
    condensed = Condensed(girder)
    state = condensed.solve(np.zeros(3), np.zeros(3), np.array([0.0, 0.012, 0.0]))
    place = places(condensed, "moment", np.array([8.0]))
    assert (place.rows @ state.displacement)[0] == pytest.approx(3.0 * 1e5 * 0.012 / 64.0, rel=1e-12)
