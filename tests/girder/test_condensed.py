"""Properties of the condensed girder that any girder must have."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from assess.girder import Condensed, Girder, Piece, forces_of, places
from assess.loads import LoadCase
from tests.girder.strategies import FEW, PLAIN, Case, apart, cases, girders, stations

Floats = NDArray[np.float64]


def solved(case: Case):  # type: ignore[no-untyped-def]
    condensed = Condensed(case.girder)
    return condensed, condensed.solve(case.compliance, forces_of(condensed, case.loads), case.settlement)


def size_of(condensed: Condensed, case: Case) -> float:
    """The forces that the loads and the settlements set in motion before they cancel, kN."""
    return case.loads.total + float((np.abs(condensed.K) @ np.abs(case.settlement)).max())


@PLAIN
@given(cases(shear=True, slivers=True, absent=True))
def test_reactions_carry_the_load(case: Case) -> None:
    condensed, state = solved(case)
    size = size_of(condensed, case)
    assert abs(state.reaction.sum() - case.loads.total) < 1e-10 * size


@PLAIN
@given(cases(shear=True, absent=True))
def test_reactions_balance_the_loads_about_the_left_end(case: Case) -> None:
    condensed, state = solved(case)
    about = sum(x * p for x, p in case.loads.points)
    about += sum(w * (end - start) * (end + start) / 2.0 for start, end, w in case.loads.uniforms)
    size = size_of(condensed, case) * case.girder.length
    assert abs(state.reaction @ condensed.positions - about) < 1e-10 * size


@PLAIN
@given(cases(shear=True, slivers=True), st.integers(1, 9), st.integers(1, 9))
def test_a_load_here_sinks_there_what_a_load_there_sinks_here(case: Case, here: int, there: int) -> None:
    condensed = Condensed(case.girder)
    x = case.girder.length * np.array([here, there]) / 10.0
    place = places(condensed, "deflection", x)
    operator = condensed.displacement_operator(case.compliance)
    flexibility = place.unit(x) + place.rows @ operator @ condensed.unit_forces(x).T
    assert apart(flexibility, flexibility.T) < 1e-10


@PLAIN
@given(girders(shear=True, slivers=True))
def test_the_condensed_stiffness_is_symmetric_and_never_negative(girder: Girder) -> None:
    stiffness = Condensed(girder).K
    assert np.array_equal(stiffness, stiffness.T)
    values = np.linalg.eigvalsh(stiffness)
    largest = max(piece.flexural for span in girder.spans for piece in span)
    assert values.min() >= -1e-12 * max(values.max(), largest / girder.span_lengths.min() ** 3)


@PLAIN
@given(girders(shear=True, slivers=True, least=2), st.floats(-0.1, 0.1), st.floats(-0.01, 0.01))
def test_a_common_drop_and_a_straight_tilt_move_no_force(girder: Girder, drop: float, tilt: float) -> None:
    condensed = Condensed(girder)
    levels = drop + tilt * condensed.positions
    scale = np.abs(condensed.K).max() * (abs(drop) + abs(tilt) * girder.length)
    assert np.abs(condensed.K @ levels).max() <= 1e-12 * scale


def test_a_clamped_support_feels_a_tilt() -> None:
    girder = Girder(((Piece(length=10.0, flexural=1e5),),), np.array([np.inf, 0.0]))
    condensed = Condensed(girder)
    assert np.abs(condensed.K @ condensed.positions).max() > 1.0


@PLAIN
@given(cases(settled=False, shear=True))
def test_stiff_pads_become_unyielding_supports(case: Case) -> None:
    condensed = Condensed(case.girder)
    forces = forces_of(condensed, case.loads)
    rigid = condensed.solve(np.zeros(condensed.n_supports), forces)
    assert apart(rigid.reaction, forces, case.loads.total) < 1e-12
    assert not rigid.displacement.any()
    stiffness = np.abs(condensed.K).max() + 1e3
    gaps = []
    for factor in (1e6, 1e7):
        f = np.full(condensed.n_supports, 1.0 / (stiffness * factor))
        gaps.append(np.abs(condensed.solve(f, forces).reaction - forces).max())
    assert gaps[0] <= 2e-5 * case.loads.total * condensed.n_supports
    assert gaps[1] <= 0.11 * gaps[0] + 1e-9 * case.loads.total


def without(girder: Girder, support: int) -> Girder:
    """The same girder with an interior support taken away: two spans become one."""
    spans = list(girder.spans)
    spans[support - 1 : support + 1] = [spans[support - 1] + spans[support]]
    return Girder(tuple(spans))


@PLAIN
@given(cases(least=2, shear=True), st.data())
def test_a_support_of_infinite_compliance_is_not_there(case: Case, data: st.DataObject) -> None:
    support = data.draw(st.integers(1, case.girder.n_supports - 2))
    compliance = case.compliance.copy()
    compliance[support] = np.inf
    condensed = Condensed(case.girder)
    state = condensed.solve(compliance, forces_of(condensed, case.loads), case.settlement)
    other = Condensed(without(case.girder, support))
    keep = np.arange(case.girder.n_supports) != support
    rest = other.solve(case.compliance[keep], forces_of(other, case.loads), case.settlement[keep])
    size = size_of(condensed, case)
    assert state.reaction[support] == 0.0
    assert np.abs(state.reaction[keep] - rest.reaction).max() < 1e-9 * size
    x = stations(case.girder, 2)
    one, two = places(condensed, "deflection", x), places(other, "deflection", x)
    value = one.held(case.loads) + one.rows @ state.displacement
    expected = two.held(case.loads) + two.rows @ rest.displacement
    assert apart(value, expected) < 1e-8
    # and a pad that softens tends to it
    soft = compliance.copy()
    soft[support] = 1e9
    near = condensed.solve(soft, forces_of(condensed, case.loads), case.settlement)
    assert np.abs(near.reaction[keep] - rest.reaction).max() < 1e-6 * size


@FEW
@given(cases(shear=True))
def test_feet_and_kips_give_the_same_girder(case: Case) -> None:
    foot, kip = 0.3048, 4.4482216152605
    girder = Girder(
        tuple(
            tuple(
                Piece(length=p.length / foot, flexural=p.flexural / kip / foot**2, shear=p.shear / kip)
                for p in span
            )
            for span in case.girder.spans
        )
    )
    loads = LoadCase(
        points=tuple((x / foot, load / kip) for x, load in case.loads.points),
        uniforms=tuple((a / foot, b / foot, w / kip * foot) for a, b, w in case.loads.uniforms),
    )
    condensed, state = solved(case)
    other = Condensed(girder)
    compliance, drop = case.compliance * kip / foot, case.settlement / foot
    imperial = other.solve(compliance, forces_of(other, loads), drop)
    size = size_of(condensed, case)
    assert np.abs(imperial.reaction * kip - state.reaction).max() < 1e-9 * size
    assert apart(imperial.displacement * foot, state.displacement) < 1e-9


@PLAIN
@given(cases(shear=True, most=5))
def test_derivatives_are_those_of_central_differences(case: Case) -> None:
    condensed, state = solved(case)
    forces = forces_of(condensed, case.loads)
    exact = condensed.derivatives(case.compliance, state)
    n, step = condensed.n_supports, 1e-4
    moved = np.eye(n)
    # ln k up by `step` divides the compliance by exp(step); a row of the batch for each pad
    up = condensed.solve(case.compliance * np.exp(-step * moved), forces, case.settlement)
    down = condensed.solve(case.compliance * np.exp(step * moved), forces, case.settlement)
    size = size_of(condensed, case)
    slope = (up.reaction - down.reaction).T / (2.0 * step)
    assert np.abs(exact.reaction_by_log_stiffness - slope).max() < 1e-6 * size
    slope = (up.displacement - down.displacement).T / (2.0 * step)
    largest = np.abs(state.displacement).max() + np.abs(case.settlement).max()
    assert np.abs(exact.displacement_by_log_stiffness - slope).max() <= 1e-6 * largest
    # the state is linear in the settlements: the difference is exact
    step = 0.01
    up = condensed.solve(case.compliance, forces, case.settlement + step * moved)
    down = condensed.solve(case.compliance, forces, case.settlement - step * moved)
    slope = (up.reaction - down.reaction).T / (2.0 * step)
    assert np.abs(exact.reaction_by_settlement - slope).max() < 1e-8 * (np.abs(condensed.K).max() + size)
    slope = (up.displacement - down.displacement).T / (2.0 * step)
    assert np.abs(exact.displacement_by_settlement - slope).max() < 1e-8


@FEW
@given(cases(), st.integers(0, 2**31 - 1))
def test_a_batch_is_the_same_as_one_by_one(case: Case, seed: int) -> None:
    condensed = Condensed(case.girder)
    rng = np.random.default_rng(seed)
    sets = case.compliance * np.exp(rng.normal(0.0, 0.5, (2, 3, condensed.n_supports)))
    forces = forces_of(condensed, case.loads)
    batch = condensed.solve(sets, forces, case.settlement)
    derivatives = condensed.derivatives(sets, batch)
    assert batch.reaction.shape == sets.shape
    size = size_of(condensed, case)
    for i in np.ndindex(2, 3):
        one = condensed.solve(sets[i], forces, case.settlement)
        assert np.abs(one.reaction - batch.reaction[i]).max() < 1e-10 * size
        assert apart(batch.displacement[i], one.displacement) < 1e-10
        single = condensed.derivatives(sets[i], one).reaction_by_log_stiffness
        assert np.abs(single - derivatives.reaction_by_log_stiffness[i]).max() < 1e-10 * size


@FEW
@given(cases(absent=True, shear=True), st.integers(0, 2**31 - 1))
def test_a_long_batch_is_the_same_as_one_by_one(case: Case, seed: int) -> None:
    condensed = Condensed(case.girder)
    rng = np.random.default_rng(seed)
    sets = case.compliance * np.exp(rng.normal(0.0, 1.0, (70, condensed.n_supports)))
    forces = forces_of(condensed, case.loads)
    size = size_of(condensed, case)
    for right in (forces, forces * rng.uniform(0.5, 1.0, (70, 1))):
        batch = condensed.solve(sets, right, case.settlement)
        for i in (0, 33, 69):
            one = condensed.solve(sets[i], np.broadcast_to(right, sets.shape)[i], case.settlement)
            assert np.abs(one.reaction - batch.reaction[i]).max() < 1e-10 * size
            assert apart(batch.displacement[i], one.displacement) < 1e-9


def flipped(case: Case) -> Case:
    length = case.girder.length
    return Case(
        girder=Girder(tuple(span[::-1] for span in case.girder.spans[::-1])),
        compliance=case.compliance[::-1].copy(),
        settlement=case.settlement[::-1].copy(),
        loads=LoadCase(
            points=tuple((length - x, load) for x, load in case.loads.points),
            uniforms=tuple((length - end, length - start, w) for start, end, w in case.loads.uniforms),
        ),
    )


@PLAIN
@given(cases(shear=True, slivers=True, absent=True))
def test_a_girder_seen_from_the_other_side_is_its_mirror(case: Case) -> None:
    condensed, state = solved(case)
    mirror, image = solved(flipped(case))
    size = size_of(condensed, case)
    assert np.abs(image.reaction[::-1] - state.reaction).max() < 1e-9 * size
    x = case.girder.length * np.array([0.13, 0.37, 0.61, 0.94])
    for quantity, sign in (("deflection", 1.0), ("slope", -1.0), ("moment", 1.0), ("shear", -1.0)):
        left = places(condensed, quantity, x)
        right = places(mirror, quantity, case.girder.length - x, -1)
        value = left.held(case.loads) + left.rows @ state.displacement
        other = right.held(flipped(case).loads) + right.rows @ image.displacement
        scale = np.abs(value).max() + case.loads.total * np.abs(left.unit(x)).max()
        scale += (np.abs(left.rows) @ np.abs(case.settlement)).max()
        assert np.abs(sign * other - value).max() < 1e-9 * scale, quantity


@FEW
@given(cases(), st.floats(-3.0, 3.0))
def test_loads_and_settlements_add_up(case: Case, factor: float) -> None:
    condensed, whole = solved(case)
    scaled = LoadCase(points=tuple((x, factor * p) for x, p in case.loads.points))
    first = condensed.solve(case.compliance, forces_of(condensed, case.loads))
    second = condensed.solve(case.compliance, forces_of(condensed, scaled), case.settlement)
    both = LoadCase(points=case.loads.points + scaled.points, uniforms=case.loads.uniforms)
    together = condensed.solve(case.compliance, forces_of(condensed, both), case.settlement)
    size = size_of(condensed, case)
    assert np.abs(first.reaction + second.reaction - together.reaction).max() < 1e-10 * 4.0 * size
    alone = condensed.solve(case.compliance, np.zeros(condensed.n_supports), case.settlement)
    assert np.abs(whole.reaction - first.reaction - alone.reaction).max() < 1e-10 * size


def test_an_unsupported_girder_is_refused_by_the_solver() -> None:
    condensed = Condensed(Girder(((Piece(length=10.0, flexural=1e5),),)))
    with pytest.raises(np.linalg.LinAlgError):
        condensed.solve(np.array([np.inf, np.inf]), np.array([1.0, 1.0]))
    with pytest.raises(np.linalg.LinAlgError):
        condensed.solve(np.full((100, 2), np.inf), np.array([1.0, 1.0]))


def test_sums_of_lengths_move_no_load_off_the_girder() -> None:
    # 0.1 + 0.2 is more than 0.3, and 18.3 + 17.9 + 20.1 does not round to 56.3 either
    for lengths in ((0.1, 0.2), (18.3, 17.9, 20.1)):
        condensed = Condensed(Girder(tuple((Piece(length=a, flexural=1e5),) for a in lengths)))
        end = round(sum(lengths), 6)
        for x in (end, np.nextafter(end, 99.0), np.nextafter(end, 0.0)):
            assert condensed.unit_forces(np.array([x])).sum() == pytest.approx(1.0, rel=1e-12)
            places(condensed, "moment", np.array([x]))
        inner = round(lengths[0] + lengths[1], 6)
        for x in (np.nextafter(inner, 99.0), np.nextafter(inner, 0.0)):
            if inner < end:
                shear = places(condensed, "shear", np.array([inner]), 1).unit(np.array([x]))
                assert shear[0, 0] == pytest.approx(0.0, abs=1e-9)
