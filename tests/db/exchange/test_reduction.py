"""The arithmetic of repeats, zeros and four gaps."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from db.exchange.reduction import (
    FLOOR,
    closures,
    exchanges_that_flatten,
    of_gaps,
    of_repeats,
    pooled_sd,
    rows_exchanged,
)
from db.raw_doc import RawDoc

PLAIN = settings(max_examples=60, deadline=None, derandomize=True)
S = 5e-5  # m
SPACING = 0.32
BEFORE = (31.0e-3, 31.4e-3, 30.6e-3, 30.7e-3)  # a tapered and twisted gap, as they come

readings = st.floats(-0.05, 0.05)
several = st.lists(readings, min_size=1, max_size=8).map(tuple)
four = st.tuples(readings, readings, readings, readings)


def loaded(compression: float, rotation: float, before: tuple[float, ...] = BEFORE) -> tuple[float, ...]:
    """The gaps of a plane girder that comes down and turns."""
    turn = rotation * SPACING / 2.0
    closing = (compression - turn, compression - turn, compression + turn, compression + turn)
    return tuple(b - c for b, c in zip(before, closing, strict=True))


def test_a_plane_movement_is_found_again() -> None:
    made = of_gaps(RawDoc(sd=S, gaps=loaded(1e-3, 2e-3), gaps_before=BEFORE, corner_spacing=SPACING))
    assert made.compression.value == pytest.approx(1e-3, abs=1e-15)
    assert made.rotation is not None
    assert made.rotation.value == pytest.approx(2e-3, abs=1e-15)
    assert made.twist == pytest.approx(0.0, abs=1e-15)


def test_the_far_gap_closes_more_where_the_girder_goes_down_towards_larger_x() -> None:
    gaps = (31e-3, 31e-3, 30e-3, 30e-3)
    made = of_gaps(RawDoc(sd=S, gaps=gaps, gaps_before=(31e-3,) * 4, corner_spacing=SPACING))
    assert made.rotation is not None
    assert made.rotation.value == pytest.approx(1e-3 / SPACING)


def test_without_a_spacing_there_is_no_rotation() -> None:
    assert of_gaps(RawDoc(sd=S, gaps=BEFORE, gaps_before=BEFORE)).rotation is None


@PLAIN
@given(four, four, readings)
def test_a_constant_on_all_gaps_changes_nothing(
    gaps: tuple[float, ...], before: tuple[float, ...], constant: float
) -> None:
    raw = RawDoc(sd=S, gaps=gaps, gaps_before=before, corner_spacing=SPACING)
    moved = replace(
        raw, gaps=tuple(g + constant for g in gaps), gaps_before=tuple(g + constant for g in before)
    )
    one, other = of_gaps(raw), of_gaps(moved)
    assert other.compression.value == pytest.approx(one.compression.value, abs=1e-15)
    assert one.rotation is not None
    assert other.rotation is not None
    assert other.rotation.value == pytest.approx(one.rotation.value, abs=1e-14)
    assert other.twist == pytest.approx(one.twist, abs=1e-15)
    assert other.compression.sd == one.compression.sd


@PLAIN
@given(several, several, readings, readings)
def test_a_linear_drift_is_removed_exactly(
    repeats: tuple[float, ...], zeros: tuple[float, ...], drift: float, constant: float
) -> None:
    """Zeros at times -1 and 1, the loaded reading at 0."""
    steady = of_repeats(RawDoc(sd=S, repeats=repeats, zero_before=zeros, zero_after=zeros))
    drifting = RawDoc(
        sd=S,
        repeats=tuple(x + constant for x in repeats),
        zero_before=tuple(z + constant - drift for z in zeros),
        zero_after=tuple(z + constant + drift for z in zeros),
    )
    made = of_repeats(drifting)
    assert made.value == pytest.approx(steady.value, abs=1e-15)
    assert made.drift == pytest.approx(2.0 * drift, abs=1e-15)
    assert made.sd >= steady.sd


@PLAIN
@given(four, four, readings)
def test_a_linear_drift_of_the_gaps_is_removed_exactly(
    gaps: tuple[float, ...], before: tuple[float, ...], drift: float
) -> None:
    steady = of_gaps(RawDoc(sd=S, gaps=gaps, gaps_before=before, gaps_after=before))
    raw = RawDoc(
        sd=S,
        gaps=gaps,
        gaps_before=tuple(g + drift for g in before),
        gaps_after=tuple(g - drift for g in before),
    )
    made = of_gaps(raw)
    assert made.compression.value == pytest.approx(steady.compression.value, abs=1e-15)
    assert made.compression.drift == pytest.approx(2.0 * drift, abs=1e-15)


@PLAIN
@given(readings, st.integers(1, 20), st.floats(1.0, 10.0))
def test_n_repeats_reduce_the_sd_by_the_root_of_n(value: float, n: int, worse: float) -> None:
    """As far as the floor; past it only if the readings repeat worse than was claimed."""
    one = of_repeats(RawDoc(sd=S, repeats=(value,)))
    many = of_repeats(RawDoc(sd=S, repeats=(value,) * n))
    assert one.sd == S
    assert many.sd == pytest.approx(max(S / math.sqrt(n), FLOOR * S))
    rough = of_repeats(RawDoc(sd=S, repeats=(value,) * n, repeatability=worse * S))
    assert rough.sd == pytest.approx(max(worse * S / math.sqrt(n), FLOOR * S))


@PLAIN
@given(several, several, several, st.sampled_from([1e3, 1 / 0.0254]))
def test_the_unit_changes_nothing(
    repeats: tuple[float, ...], before: tuple[float, ...], after: tuple[float, ...], scale: float
) -> None:
    def scaled(values: tuple[float, ...]) -> tuple[float, ...]:
        return tuple(scale * x for x in values)

    metres = of_repeats(RawDoc(sd=S, repeats=repeats, zero_before=before, zero_after=after))
    other = of_repeats(
        RawDoc(sd=scale * S, repeats=scaled(repeats), zero_before=scaled(before), zero_after=scaled(after))
    )
    assert other.value == pytest.approx(scale * metres.value, abs=1e-12)
    assert other.sd == pytest.approx(scale * metres.sd, rel=1e-9)


def test_one_zero_is_taken_off_and_tells_no_drift() -> None:
    made = of_repeats(RawDoc(sd=S, repeats=(1.5e-3,), zero_after=(0.1e-3, 0.3e-3)))
    assert made.value == pytest.approx(1.3e-3)
    assert made.sd == pytest.approx(S * math.sqrt(1.0 + 0.5))
    assert made.drift is None


def test_repeats_tell_how_they_repeat_from_five_degrees_of_freedom() -> None:
    """Sums of squares 2, 8 and 0.5, each about its own mean; a list more makes 5 degrees of freedom of 4."""
    lists = [(1.0, 2.0, 3.0), (10.0, 14.0), (7.0,), (0.0, 1.0)]
    assert pooled_sd(lists) is None
    assert pooled_sd([*lists, (5.0, 5.0)]) == pytest.approx(math.sqrt((2.0 + 8.0 + 0.5) / 5.0))


def simulated(count: int, after: bool) -> np.ndarray:
    """Compression and rotation of many sets of gaps of one movement, each gap with an error of its own."""
    rng = np.random.default_rng(20240514)
    made = []
    for _ in range(count):
        errors = S * rng.standard_normal((3, 4))
        unloaded = np.asarray(BEFORE) + errors[:2]
        raw = RawDoc(
            sd=S,
            gaps=tuple(np.asarray(loaded(1e-3, 2e-3)) + errors[2]),
            gaps_before=tuple(unloaded[0]),
            gaps_after=tuple(unloaded[1]) if after else (),
            corner_spacing=SPACING,
        )
        gaps = of_gaps(raw)
        assert gaps.rotation is not None
        made.append((gaps.compression.value, gaps.rotation.value, gaps.twist))
    return np.asarray(made)


@pytest.mark.parametrize("after", [False, True])
def test_the_sd_of_four_gaps_is_that_of_many_simulated_sets(after: bool) -> None:
    found = simulated(4000, after)
    steady = RawDoc(
        sd=S,
        gaps=loaded(1e-3, 2e-3),
        gaps_before=BEFORE,
        gaps_after=BEFORE if after else (),
        corner_spacing=SPACING,
    )
    told = of_gaps(steady)
    assert told.rotation is not None
    promised = (told.compression.sd, told.rotation.sd, told.twist_sd)
    assert found.std(axis=0, ddof=1) == pytest.approx(promised, rel=0.04)  # 1.1 % is one sd of a found sd
    assert abs(np.corrcoef(found.T)[0, 1]) < 0.05


def test_the_sd_of_a_drifting_reading_is_that_of_many_simulated_ones() -> None:
    """The loaded reading is taken at any moment between the zeros, all alike."""
    rng = np.random.default_rng(7)
    drift, sd = 4e-4, 3e-5
    moments = rng.uniform(0.0, 1.0, 4000)
    errors = sd * rng.standard_normal((4000, 3))
    made = [
        of_repeats(
            RawDoc(
                sd=sd,
                repeats=(1e-3 + drift * t + e[0],),
                zero_before=(float(e[1]),),
                zero_after=(drift + float(e[2]),),
            )
        )
        for t, e in zip(moments, errors, strict=True)
    ]
    found = np.std([m.value for m in made], ddof=1)
    told = math.sqrt(sd**2 * 1.5 + drift**2 / 12.0)
    assert found == pytest.approx(told, rel=0.04)
    assert np.sqrt(np.mean([m.sd**2 for m in made])) == pytest.approx(told, rel=0.02)


@pytest.mark.parametrize(
    ("swapped", "says"), [((0, 1), "near left and near right"), ((1, 3), "near right and far right")]
)
def test_two_corners_exchanged_are_among_those_that_would_leave_a_plane(
    swapped: tuple[int, int], says: str
) -> None:
    gaps = list(loaded(1e-3, 2e-3, before=(31e-3, 32e-3, 33.5e-3, 34.9e-3)))
    i, j = swapped
    before = RawDoc(sd=S, gaps=tuple(gaps), gaps_before=(31e-3, 32e-3, 33.5e-3, 34.9e-3))
    assert exchanges_that_flatten(before) == ()
    gaps[i], gaps[j] = gaps[j], gaps[i]
    assert says in exchanges_that_flatten(replace(before, gaps=tuple(gaps)))


def test_near_and_far_exchanged_show_where_a_side_opens() -> None:
    tapered = (30e-3, 30e-3, 34e-3, 34e-3)
    right = RawDoc(sd=S, gaps=loaded(1e-3, 0.0, before=tapered), gaps_before=tapered)
    assert not rows_exchanged(right)
    near_left, near_right, far_left, far_right = right.gaps
    wrong = replace(right, gaps=(far_left, far_right, near_left, near_right))
    assert min(closures(wrong)) < 0.0
    assert exchanges_that_flatten(wrong) == ()  # the twist does not tell
    assert rows_exchanged(wrong)
