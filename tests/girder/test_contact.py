"""Pads that take no tension: properties that any girder must have, and cases that can be done by hand."""

from __future__ import annotations

import sys

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from assess.girder import Condensed, ContactState, Girder, Piece, Tips, contact, forces_of
from assess.loads import LoadCase
from tests.girder.strategies import PLAIN, Case, cases

Floats = NDArray[np.float64]
NONE_HELD = np.zeros(3, dtype=bool)
SPAN = 20.0
TWO_SPANS = Girder(((Piece(length=SPAN, flexural=4e6),), (Piece(length=SPAN, flexural=4e6),)))


def two_spans(heavy: float, own: float) -> Floats:
    """Support forces of a point load in the middle of the first span and a uniform load all along."""
    loads = LoadCase(points=((SPAN / 2.0, heavy),), uniforms=((0.0, 2.0 * SPAN, own),))
    return forces_of(Condensed(TWO_SPANS), loads)


def size_of(condensed: Condensed, case: Case) -> float:
    """The forces that the loads and the settlements set in motion before they cancel, kN."""
    return case.loads.total + float((np.abs(condensed.K) @ np.abs(case.settlement)).max())


def state_of(case: Case, held: Floats, times: float = 1.0) -> tuple[Condensed, ContactState]:
    condensed = Condensed(case.girder)
    forces = times * forces_of(condensed, case.loads)
    return condensed, contact(condensed, case.compliance, forces, times * case.settlement, held)


@st.composite
def held_cases(draw: st.DrawFn) -> tuple[Case, NDArray[np.bool_]]:
    """A case, and which of its supports hold the girder down."""
    case = draw(cases(shear=True, slivers=True, absent=True))
    n = case.girder.n_supports
    return case, np.array(draw(st.lists(st.booleans(), min_size=n, max_size=n)))


@PLAIN
@given(held_cases())
def test_a_pad_presses_or_the_girder_is_off_it(one: tuple[Case, NDArray[np.bool_]]) -> None:
    case, held = one
    condensed, state = state_of(case, held)
    slack = 1e-9 * size_of(condensed, case)
    pad = np.where(np.isinf(case.compliance), 0.0, case.compliance)
    gap = case.settlement + pad * state.reaction - state.displacement
    off = state.lifted
    assert not (off & held).any()
    assert (state.reaction[~held] >= -slack).all()
    assert (state.reaction[off] == 0.0).all()
    stiffness = np.maximum(np.diag(condensed.K), 1e-9)
    assert (gap[off] * stiffness[off] >= -slack).all()
    shut = ~off & ~np.isinf(case.compliance)
    assert (np.abs(gap[shut] * stiffness[shut]) <= slack).all()


@PLAIN
@given(held_cases())
def test_the_reactions_still_carry_the_load(one: tuple[Case, NDArray[np.bool_]]) -> None:
    case, held = one
    condensed, state = state_of(case, held)
    size = size_of(condensed, case)
    loads = forces_of(condensed, case.loads)
    assert np.abs(loads - condensed.K @ state.displacement - state.reaction).max() < 1e-9 * size
    assert abs(state.reaction.sum() - case.loads.total) < 1e-9 * size


@PLAIN
@given(held_cases(), st.floats(0.01, 100.0))
def test_twice_the_loads_and_twice_the_settlements_give_twice_everything(
    one: tuple[Case, NDArray[np.bool_]], times: float
) -> None:
    case, held = one
    condensed, state = state_of(case, held)
    _, scaled = state_of(case, held, times)
    size = size_of(condensed, case)
    assert np.abs(scaled.reaction / times - state.reaction).max() < 1e-9 * size


@PLAIN
@given(cases(shear=True, absent=True))
def test_a_girder_that_is_held_down_everywhere_is_linear(case: Case) -> None:
    condensed, state = state_of(case, np.ones(case.girder.n_supports, dtype=bool))
    linear = condensed.solve(case.compliance, forces_of(condensed, case.loads), case.settlement)
    assert np.array_equal(state.reaction, linear.reaction)
    assert np.array_equal(state.displacement, linear.displacement)
    assert not state.lifted.any()


@PLAIN
@given(cases(shear=True))
def test_where_nothing_pulls_every_digit_is_linear(case: Case) -> None:
    condensed = Condensed(case.girder)
    forces = forces_of(condensed, case.loads)
    linear = condensed.solve(case.compliance, forces, case.settlement)
    held = linear.reaction < 0.0
    state = contact(condensed, case.compliance, forces, case.settlement, held)
    assert np.array_equal(state.reaction, linear.reaction)
    assert np.array_equal(state.displacement, linear.displacement)


@PLAIN
@given(held_cases())
def test_a_support_that_is_left_might_as_well_not_be_there(one: tuple[Case, NDArray[np.bool_]]) -> None:
    case, held = one
    condensed, state = state_of(case, held)
    without = np.where(state.lifted, np.inf, case.compliance)
    linear = condensed.solve(without, forces_of(condensed, case.loads), case.settlement)
    assert np.abs(state.reaction - linear.reaction).max() <= 1e-9 * size_of(condensed, case)


def random_batch(seed: int, rows: int) -> tuple[Condensed, Floats, Floats, Floats]:
    """Six spans, and rows of pads, loads and seats of which about half lift."""
    rng = np.random.default_rng(seed)
    girder = Girder(tuple((Piece(length=x, flexural=8e6),) for x in rng.uniform(10.0, 25.0, 6)))
    condensed = Condensed(girder)
    compliance = np.where(rng.random((rows, 7)) < 0.3, 0.0, 10.0 ** rng.uniform(-7.0, -5.0, (rows, 7)))
    forces = np.einsum(
        "rpn,rp->rn",
        condensed.unit_forces(rng.uniform(0.0, girder.length, (rows, 4))),
        rng.uniform(0.0, 600.0, (rows, 4)),
    )
    forces += forces_of(condensed, LoadCase(uniforms=((0.0, girder.length, 15.0),)))
    return condensed, compliance, forces, rng.normal(0.0, 0.008, (rows, 7))


def test_a_batch_is_what_its_rows_are_one_by_one() -> None:
    condensed, compliance, forces, drops = random_batch(3, 500)
    held = np.array([True, False, False, False, False, False, False])
    whole = contact(condensed, compliance, forces, drops, held)
    rows = [contact(condensed, *row, held) for row in zip(compliance, forces, drops, strict=True)]
    assert 100 < whole.lifted.any(axis=1).sum() < 490
    assert np.array_equal(whole.lifted, [row.lifted for row in rows])
    assert np.abs(whole.reaction - [row.reaction for row in rows]).max() < 1e-8
    cube = contact(condensed, *(values.reshape(5, 100, 7) for values in (compliance, forces, drops)), held)
    assert np.abs(cube.reaction.reshape(500, 7) - whole.reaction).max() < 1e-8


def test_one_set_of_pads_serves_many_load_positions() -> None:
    condensed, compliance, forces, _ = random_batch(4, 300)
    held = np.zeros(7, dtype=bool)
    drops = np.array([0.0, 0.0, 0.006, 0.0, 0.0, 0.0, 0.0])
    shared = contact(condensed, compliance[0], forces, drops, held)
    spread = contact(condensed, np.tile(compliance[0], (300, 1)), forces, drops, held)
    assert 0 < shared.lifted.any(axis=1).sum() < 300
    assert np.array_equal(shared.lifted, spread.lifted)
    assert np.abs(shared.reaction - spread.reaction).max() < 1e-8


def test_lifting_one_support_after_the_other_finds_the_same(monkeypatch: pytest.MonkeyPatch) -> None:
    condensed, compliance, forces, drops = random_batch(5, 400)
    held = np.zeros(7, dtype=bool)
    together = contact(condensed, compliance, forces, drops, held)
    assert (together.lifted.sum(axis=1) > 1).sum() > 20
    monkeypatch.setattr(sys.modules["assess.girder.contact"], "_ROUNDS", 0)
    one_by_one = contact(condensed, compliance, forces, drops, held)
    assert np.array_equal(together.lifted, one_by_one.lifted)


def test_the_far_end_lifts_once_the_load_on_one_span_is_past_four_times_the_weight_of_a_span() -> None:
    # far end 3/8 w L - 3/32 P = 0: two equal spans, AISC beam tables (from memory, to be confirmed)
    condensed, own = Condensed(TWO_SPANS), 10.0
    limit = 4.0 * own * SPAN
    below = contact(condensed, np.zeros(3), two_spans(0.999 * limit, own), None, NONE_HELD)
    above = contact(condensed, np.zeros(3), two_spans(1.001 * limit, own), None, NONE_HELD)
    assert below.lifted.tolist() == [False, False, False]
    assert above.lifted.tolist() == [False, False, True]


def test_a_girder_without_weight_is_a_simple_beam_with_the_far_end_in_the_air() -> None:
    condensed = Condensed(TWO_SPANS)
    state = contact(condensed, np.zeros(3), two_spans(400.0, 0.0), None, NONE_HELD)
    assert np.allclose(state.reaction, [200.0, 200.0, 0.0], rtol=1e-12)
    # end slope of a simple beam, P L^2 / 16 EI, carried on over the second span
    rise = 400.0 * SPAN**2 / (16.0 * 4e6) * SPAN
    assert state.displacement[2] == pytest.approx(-rise, rel=1e-10)


def test_a_seat_that_drops_further_than_its_pad_can_follow_is_left() -> None:
    condensed, own = Condensed(TWO_SPANS), 10.0
    free = 5.0 * own * (2.0 * SPAN) ** 4 / (384.0 * 4e6)  # sag of a simple beam over both spans
    forces = two_spans(0.0, own)
    drops = np.array([[0.0, 0.99 * free, 0.0], [0.0, 1.01 * free, 0.0], [0.0, 2.0 * free, 0.0]])
    state = contact(condensed, np.zeros(3), forces, drops, NONE_HELD)
    assert state.lifted[:, 1].tolist() == [False, True, True]
    assert state.displacement[1:, 1] == pytest.approx([free, free], rel=1e-10)


def test_a_pin_pulls_where_a_pad_lifts() -> None:
    condensed = Condensed(TWO_SPANS)
    state = contact(condensed, np.zeros(3), two_spans(400.0, 0.0), None, np.array([False, False, True]))
    assert state.reaction[2] == pytest.approx(-3.0 / 32.0 * 400.0, rel=1e-12)


def test_a_girder_that_would_tip_is_an_error_that_names_what_it_leaves() -> None:
    condensed = Condensed(TWO_SPANS)
    pulled_up = condensed.unit_forces(np.array(0.0)) * -100.0
    with pytest.raises(Tips) as caught:
        contact(condensed, np.zeros(3), np.stack([two_spans(1.0, 1.0), pulled_up]), None, NONE_HELD)
    assert 0 in caught.value.lifted and len(caught.value.lifted) == 2


def test_a_single_span_with_an_end_pulled_up_tips() -> None:
    condensed = Condensed(Girder(((Piece(length=10.0, flexural=1e6),),)))
    with pytest.raises(Tips):
        contact(condensed, np.zeros(2), np.array([-1.0, 3.0]), None, np.zeros(2, dtype=bool))
