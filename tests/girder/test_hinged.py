"""What internal hinges do to a girder, against hand statics and laws that any hinged girder obeys."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from numpy.typing import NDArray

from assess.girder import RESPONSES, Condensed, Girder, Piece, forces_of, places
from assess.girder.cubics import Cubics
from assess.girder.lattice import Lattice
from assess.loads import LoadCase
from tests.girder.strategies import (
    FEW,
    PLAIN,
    Case,
    apart,
    cases,
    girders,
    hinged_girders,
    moves_freely,
    stations,
    with_hinges,
)

Floats = NDArray[np.float64]


def plain(*lengths: float, ei: float = 2e6) -> Girder:
    return Girder(tuple((Piece(length=length, flexural=ei),) for length in lengths))


# spans of 10, 12 and 10 m with a suspended span of 6 m in the middle one: statically determinate
GERBER = with_hinges(plain(10.0, 12.0, 10.0), [13.0, 19.0])


def value(
    condensed: Condensed, quantity: str, x: object, loads: LoadCase, f: Floats, drop: Floats, side: int = 1
) -> Floats:
    state = condensed.solve(f, forces_of(condensed, loads), drop)
    place = places(condensed, quantity, np.atleast_1d(np.asarray(x, dtype=np.float64)), side)
    return np.asarray(place.held(loads) + place.rows @ state.displacement)


def of_case(case: Case, quantity: str, x: object, side: int = 1) -> Floats:
    return value(Condensed(case.girder), quantity, x, case.loads, case.compliance, case.settlement, side)


# hand statics -------------------------------------------------------------------------------------


@pytest.mark.parametrize("f", [np.zeros(4), np.array([1e-5, 2e-5, 3e-5, 1e-6])], ids=["unyielding", "pads"])
@pytest.mark.parametrize("drop", [np.zeros(4), np.array([0.0, 0.05, -0.02, 0.01])], ids=["level", "settled"])
def test_a_suspended_span_is_carried_as_by_hand(f: Floats, drop: Floats) -> None:
    # 10 kN/m everywhere and 100 kN amid the suspended span, whose ends then hand on 10 * 6 / 2 + 50 = 80 kN.
    # Pier: -(80 * 3 + 10 * 3^2 / 2) = -285. Amid the suspended span: 10 * 6^2 / 8 + 100 * 6 / 4 = 195.
    # End support: (10 * 10^2 / 2 - 285) / 10 = 21.5; pier support: 320 / 2 + 50 - 21.5 = 188.5.
    loads = LoadCase(points=((16.0, 100.0),), uniforms=((0.0, 32.0, 10.0),))
    condensed = Condensed(GERBER)
    moment = value(condensed, "moment", [10.0, 13.0, 16.0, 19.0, 22.0], loads, f, drop)
    assert moment == pytest.approx([-285.0, 0.0, 195.0, 0.0, -285.0], abs=1e-9)
    shear = value(condensed, "shear", [13.0, 19.0], loads, f, drop)
    assert shear == pytest.approx([80.0, -80.0], abs=1e-9)
    reaction = condensed.solve(f, forces_of(condensed, loads), drop).reaction
    assert reaction == pytest.approx([21.5, 188.5, 188.5, 21.5], abs=1e-9)


def test_the_tip_of_a_cantilever_sinks_by_the_textbook_formula() -> None:
    # overhang c = 3 m beyond a simple span L = 10 m, tip load P: P c^2 (L + c) / (3 EI); the tip load is what the
    # suspended span hands on. Common practice, no source.
    loads = LoadCase(points=((16.0, 100.0),))
    tip = value(Condensed(GERBER), "deflection", 13.0, loads, np.zeros(4), np.zeros(4))
    assert tip == pytest.approx([50.0 * 9.0 * 13.0 / (3.0 * 2e6)], rel=1e-12)


def test_a_settled_pier_tilts_the_parts_as_rigid_bodies() -> None:
    # the pier at 10 m drops by 0.1 m: the left part turns about x = 0, its tip at 13 m drops by 0.13 m, and the
    # suspended span hangs between that and nothing
    drop = np.array([0.0, 0.1, 0.0, 0.0])
    deflection = value(
        Condensed(GERBER), "deflection", [5.0, 13.0, 16.0, 19.0], LoadCase(), np.zeros(4), drop
    )
    assert deflection == pytest.approx([0.05, 0.13, 0.065, 0.0], abs=1e-14)
    for side, slopes in ((-1, [0.01, -0.13 / 6.0]), (1, [-0.13 / 6.0, 0.0])):
        slope = value(Condensed(GERBER), "slope", [13.0, 19.0], LoadCase(), np.zeros(4), drop, side)
        assert slope == pytest.approx(slopes, abs=1e-14)


def test_an_imposed_curvature_moves_the_hinges_of_a_determinate_girder_and_bends_nothing() -> None:
    # sagging curvature k all along: a simple span L lifts its overhang c by k c (L + c) / 2
    condensed, curvature = Condensed(GERBER), 1e-4
    lengths = np.diff(condensed.nodes)
    ends = condensed.ends_under(curvature / 2.0 * np.repeat(lengths[:, None], 2, axis=1))
    assert np.abs(ends[:, :2]).max() == 0.0
    hinge = -curvature * 3.0 * 13.0 / 2.0
    assert ends[:, 2:] == pytest.approx(
        np.array([[0.0, 0.0], [0.0, hinge], [hinge, hinge], [hinge, 0.0], [0.0, 0.0]]), abs=1e-16
    )


def test_an_imposed_curvature_bends_a_continuous_girder_over_its_pier() -> None:
    # two equal spans with a sagging curvature k imposed: 1.5 EI k of hogging at the pier. Common practice, no source.
    condensed = Condensed(plain(10.0, 10.0))
    ends = condensed.ends_under(np.full((2, 2), 1e-4 * 10.0 / 2.0))
    assert ends == pytest.approx(np.array([[0.0, -300.0], [-300.0, 0.0]]), abs=1e-9)
    forces = condensed.forces_from(ends, np.zeros(3))
    assert forces == pytest.approx([-30.0, 60.0, -30.0], abs=1e-9)


def test_a_hinge_where_the_moment_is_nothing_changes_nothing_under_that_load() -> None:
    # two equal spans under a uniform load: M = 3 w L x / 8 - w x^2 / 2 is nothing at x = 3 L / 4
    whole, loads = plain(10.0, 10.0), LoadCase(uniforms=((0.0, 20.0, 24.0),))
    cut = with_hinges(whole, [7.5])
    x = np.linspace(0.0, 20.0, 41)
    for quantity in RESPONSES:
        one, other = (
            value(Condensed(girder), quantity, x, loads, np.zeros(3), np.zeros(3)) for girder in (whole, cut)
        )
        assert apart(other, one) < 1e-12
    # and it does change something under another load
    less = LoadCase(uniforms=((0.0, 10.0, 24.0),))
    one, other = (
        value(Condensed(girder), "moment", x, less, np.zeros(3), np.zeros(3)) for girder in (whole, cut)
    )
    assert apart(other, one) > 0.1


# laws ---------------------------------------------------------------------------------------------


@PLAIN
@given(cases(hinged=True, shear=True, slivers=True))
def test_no_moment_at_a_hinge_and_the_level_and_the_shear_go_through(case: Case) -> None:
    hinges = np.array(case.girder.hinges)
    loaded = [at for at, _ in case.loads.points]
    x = hinges[[np.abs(np.array(loaded) - at).min() > 1e-6 for at in hinges]]
    assume(x.size)
    for quantity, still in (("moment", None), ("deflection", False), ("shear", False)):
        left, right = (of_case(case, quantity, x, side) for side in (-1, 1))
        everywhere = np.abs(of_case(case, quantity, stations(case.girder))).max()
        scale = everywhere + case.loads.total * (case.girder.length if quantity == "moment" else 1.0)
        assert np.abs(left - right).max() < 1e-9 * scale
        if still is None:
            assert np.abs(left).max() < 1e-9 * scale


@PLAIN
@given(cases(hinged=True, shear=True, slivers=True, restrained=True))
def test_reactions_carry_the_load_past_hinges(case: Case) -> None:
    condensed = Condensed(case.girder)
    state = condensed.solve(case.compliance, forces_of(condensed, case.loads), case.settlement)
    size = case.loads.total + float((np.abs(condensed.K) @ np.abs(case.settlement)).max())
    assert abs(state.reaction.sum() - case.loads.total) < 1e-10 * size


@PLAIN
@given(hinged_girders(shear=True, slivers=True, restrained=True))
def test_the_stiffness_of_a_hinged_girder_is_symmetric_and_never_negative(girder: Girder) -> None:
    stiffness = Condensed(girder).K
    assert np.array_equal(stiffness, stiffness.T)
    values = np.linalg.eigvalsh(stiffness)
    largest = max(piece.flexural for span in girder.spans for piece in span)
    assert values.min() >= -1e-12 * max(values.max(), largest / girder.span_lengths.min() ** 3)


@PLAIN
@given(cases(hinged=True, shear=True, slivers=True), st.integers(1, 9), st.integers(1, 9))
def test_sinking_is_reciprocal_across_hinges(case: Case, here: int, there: int) -> None:
    condensed = Condensed(case.girder)
    x = np.array([case.girder.length * here / 10.0, case.girder.length * there / 10.0, case.girder.hinges[0]])
    place = places(condensed, "deflection", x)
    operator = condensed.displacement_operator(case.compliance)
    flexibility = place.unit(x) + place.rows @ operator @ condensed.unit_forces(x).T
    assert apart(flexibility, flexibility.T) < 1e-9


@FEW
@given(cases(hinged=True, restrained=True))
def test_derivatives_of_a_hinged_girder_are_those_of_its_solution(case: Case) -> None:
    condensed, forces = Condensed(case.girder), forces_of(Condensed(case.girder), case.loads)
    f = np.where(case.compliance > 0.0, case.compliance, 1e-6)
    exact = condensed.derivatives(f, condensed.solve(f, forces, case.settlement))
    step = 1e-4
    for i in range(f.size):
        high, low = f.copy(), f.copy()
        high[i], low[i] = f[i] * np.exp(-step), f[i] * np.exp(step)
        up, down = (condensed.solve(one, forces, case.settlement) for one in (high, low))
        rate = (up.reaction - down.reaction) / (2.0 * step)
        size = np.abs(exact.reaction_by_log_stiffness).max() + 1e-3 * case.loads.total
        assert np.abs(rate - exact.reaction_by_log_stiffness[:, i]).max() < 1e-5 * size


@FEW
@given(hinged_girders(most=4))
def test_the_cubics_of_a_hinged_girder_are_its_influence_lines(girder: Girder) -> None:
    condensed = Condensed(girder)
    cubics = Cubics(condensed)
    a = np.linspace(0.0, girder.length, 57)
    forces = condensed.unit_forces(a)
    assert np.abs(cubics.forces_at(a) - forces).max() < 1e-10 * max(1.0, np.abs(forces).max())


@PLAIN
@given(girders(restrained=True, most=4), st.data())
def test_hinges_are_refused_exactly_where_the_parts_could_move(girder: Girder, data: st.DataObject) -> None:
    edges, at = girder.support_positions, []
    for _ in range(data.draw(st.integers(1, 5))):
        j = data.draw(st.integers(0, len(girder.spans) - 1))
        x = edges[j] + data.draw(st.integers(1, 19)) / 20.0 * (edges[j + 1] - edges[j])
        if np.abs(np.array([*girder.breakpoints, *at]) - x).min() > 0.01:
            at.append(float(x))
    assume(at)
    hinged = with_hinges(girder, at)
    if moves_freely(hinged):
        with pytest.raises(ValueError, match="mechanism"):
            Condensed(hinged)
    else:
        assert np.isfinite(Condensed(hinged).K).all()


@pytest.mark.parametrize(
    ("lengths", "at"),
    [
        ((10.0,), [4.0]),
        ((10.0, 10.0), [3.0, 7.0]),
        ((10.0, 10.0), [5.0, 15.0]),
        ((10.0, 12.0, 10.0), [12.0, 15.0, 18.0]),
        ((10.0, 12.0, 10.0), [5.0, 15.0, 25.0]),
        ((10.0, 10.0, 10.0, 10.0), [3.0, 7.0]),
    ],
    ids=[
        "one span",
        "two in an end span",
        "one in each of two spans",
        "three in a span",
        "one in each of three",
        "two in an end span of four",
    ],
)
def test_a_mechanism_is_refused(lengths: tuple[float, ...], at: list[float]) -> None:
    with pytest.raises(ValueError, match="mechanism"):
        Condensed(with_hinges(plain(*lengths), at))


def test_a_clamp_lets_a_hinge_into_one_span() -> None:
    girder = with_hinges(Girder(plain(10.0).spans, np.array([np.inf, 0.0])), [4.0])
    # simple span of 6 m on the tip of a cantilever of 4 m: 10 kN/m gives -(30 * 4 + 10 * 16 / 2) at the clamp
    loads = LoadCase(uniforms=((0.0, 10.0, 10.0),))
    assert value(Condensed(girder), "moment", 0.0, loads, np.zeros(2), np.zeros(2)) == pytest.approx([-200.0])


def test_a_place_knows_how_far_it_is_along_its_span() -> None:
    x = np.array([4.0, 11.0, 13.0, 15.0, 20.0, 31.0])
    place = places(Condensed(GERBER), "shear", x)
    assert list(place.span) == [0, 1, 1, 1, 1, 2]
    assert list(place.segment) == [0, 1, 2, 2, 3, 4]
    assert place.along == pytest.approx([4.0, 1.0, 3.0, 5.0, 10.0, 9.0])


@pytest.mark.parametrize("at", [None, 13.0, 19.0], ids=["on the places", "on a hinge", "on the other hinge"])
def test_adverse_areas_are_exact_on_a_coarse_lattice(at: float | None) -> None:
    # shear at 5 m: falls to -1/2, jumps to 1/2, falls over the pier to -3/10 at the hinge and rises to 0 at the other;
    # at 17 m: falls from the hinge at 13 m to -2/3, jumps to 1/3 and falls to 0
    condensed, x = Condensed(GERBER), np.array([5.0, 17.0])
    lattice = Lattice(places(condensed, "shear", x), Cubics(condensed), 0.7, at=at)
    lines = lattice.level
    assert lines.positive(1.0)[:, -1] == pytest.approx([5.0 * 0.5 / 2.0, 2.0 / 3.0 / 2.0], rel=1e-12)
    assert lines.positive(-1.0)[:, -1] == pytest.approx(
        [5.0 * 0.5 / 2.0 + 9.0 * 0.3 / 2.0, 4.0 / 3.0], rel=1e-12
    )


# the girder itself --------------------------------------------------------------------------------


def test_nodes_and_segments_are_parted_by_supports_and_hinges() -> None:
    assert GERBER.nodes == pytest.approx([0.0, 10.0, 13.0, 19.0, 22.0, 32.0])
    assert [sum(p.length for p in one) for one in GERBER.segments] == pytest.approx(
        [10.0, 3.0, 6.0, 3.0, 10.0]
    )
    assert GERBER.span_lengths == pytest.approx([10.0, 12.0, 10.0])


@pytest.mark.parametrize(
    ("at", "told"),
    [((5.0,), "no piece ends"), ((10.0,), "stands on a support"), ((13.0, 13.0), "on one place")],
)
def test_a_hinge_stands_at_an_end_of_a_piece_inside_a_span(at: tuple[float, ...], told: str) -> None:
    with pytest.raises(ValueError, match=told):
        Girder(GERBER.spans, hinges=at)
