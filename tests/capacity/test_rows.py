"""Rows of an assessment against hand work."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

import numpy as np
import pytest
from numpy.typing import NDArray

from assess.capacity import (
    Case,
    Dead,
    Effects,
    Factors,
    GirderLoads,
    Resistance,
    Row,
    evaluate,
    evaluate_draws,
    evaluate_row,
    plan_checks,
)
from assess.girder import REACTION, Condensed, Girder, Piece
from assess.loads import LoadCase, Train

Floats = NDArray[np.float64]

FACTORS = Factors(permanent=1.2, permanent_relieving=1.0, live=1.5, resistance=1.0)
STRONG = Resistance(sagging=900.0, hogging=500.0, shear=300.0)
UNGIVEN = Resistance(sagging=np.nan, hogging=np.nan, shear=np.nan)
AXLE = Train(np.array([0.0]), np.array([100.0]))
GRID = 2e-4  # stations at 1/120 of a span, axles on every one: peaks of smooth lines are missed by less


def girder_of(*lengths: float, flexural: float = 1e6) -> Girder:
    return Girder(tuple((Piece(length=length, flexural=flexural),) for length in lengths))


def effects_of(
    girder: Girder,
    permanent: LoadCase,
    trains: Sequence[Train] = (),
    resistances: Sequence[Sequence[Resistance]] | None = None,
    factors: Factors = FACTORS,
) -> Effects:
    given = resistances or [[STRONG] * len(span) for span in girder.spans]
    loads = GirderLoads(dead=(Dead(loads=permanent),), trains=tuple(trains))
    return Effects(Condensed(girder), plan_checks(girder, given, factors), loads)


def rows_of(
    effects: Effects,
    compliance: Floats | None = None,
    drops: Floats | None = None,
    factors: Factors = FACTORS,
) -> list[Row]:
    none = np.zeros(effects.condensed.n_supports)
    return evaluate(
        effects, factors, none if compliance is None else compliance, none if drops is None else drops
    )


def find(rows: Sequence[Row], effect: str, span: int = -1, support: int = -1) -> Case:
    return next(
        r.case for r in rows if (r.check.effect, r.check.span, r.check.support) == (effect, span, support)
    )


def uniform(girder: Girder, w: float = 20.0) -> LoadCase:
    return LoadCase(uniforms=((0.0, girder.length, w),))


# one span -----------------------------------------------------------------------------------------


def test_a_simple_span_is_used_as_worked_by_hand() -> None:
    # 10 m, 20 kN/m: M = 20 x 10^2 / 8 = 250; axle 100 kN at midspan: M = 100 x 10 / 4 = 250
    # factored 1.2 x 250 + 1.5 x 250 = 675; of 900: 0.75; RF = (900 - 300) / 375 = 1.6
    girder = girder_of(10.0)
    case = find(rows_of(effects_of(girder, uniform(girder), [AXLE])), "sagging", span=0)
    assert case.x == pytest.approx(5.0)
    assert (case.permanent, case.live, case.factored) == pytest.approx((250.0, 250.0, 675.0))
    assert (case.resistance, case.utilisation, case.rating_factor) == pytest.approx((900.0, 0.75, 1.6))


def test_shear_of_a_simple_span_is_used_as_worked_by_hand() -> None:
    # at the left support: V = 20 x 10 / 2 = 100, the axle beside it 100: 120 + 150 = 270 of 300 = 0.9; RF = 180 / 150
    girder = girder_of(10.0)
    rows = rows_of(effects_of(girder, uniform(girder), [AXLE]))
    left, right = find(rows, "shear", span=0, support=0), find(rows, "shear", span=0, support=1)
    assert (left.x, right.x) == pytest.approx((0.0, 10.0))
    assert (left.permanent, left.live, left.factored) == pytest.approx((100.0, 100.0, 270.0), rel=1e-6)
    assert (right.permanent, right.live, right.factored) == pytest.approx((-100.0, -100.0, -270.0), rel=1e-6)
    for case in (left, right):
        assert (case.utilisation, case.rating_factor) == pytest.approx((0.9, 1.2), rel=1e-6)


def test_a_simple_span_has_no_hogging_row() -> None:
    girder = girder_of(10.0)
    rows = rows_of(effects_of(girder, uniform(girder), [AXLE]))
    assert [row.check.effect for row in rows] == ["sagging", "shear", "shear"]


def test_a_clamped_end_has_a_hogging_row() -> None:
    # both ends clamped, 20 kN/m on 10 m: -20 x 100 / 12 = -166.7
    girder = Girder(((Piece(length=10.0, flexural=1e6),),), np.array([np.inf, np.inf]))
    rows = rows_of(effects_of(girder, uniform(girder)))
    for support, x in ((0, 0.0), (1, 10.0)):
        case = find(rows, "hogging", support=support)
        assert (case.x, case.permanent) == pytest.approx((x, -2000.0 / 12.0))
        assert case.utilisation == pytest.approx(1.2 * 2000.0 / 12.0 / 500.0)


def test_the_resistance_factor_takes_from_the_capacity() -> None:
    # 0.9 x 900 = 810: 675 / 810 = 0.8333; RF = (810 - 300) / 375 = 1.36
    girder = girder_of(10.0)
    factors = Factors(permanent=1.2, permanent_relieving=1.0, live=1.5, resistance=0.9)
    case = find(
        rows_of(effects_of(girder, uniform(girder), [AXLE], factors=factors), factors=factors),
        "sagging",
        span=0,
    )
    assert (case.resistance, case.utilisation, case.rating_factor) == pytest.approx(
        (810.0, 675.0 / 810.0, 1.36)
    )


def test_a_factor_of_rating_scales_the_live_load_to_full_use() -> None:
    girder = girder_of(10.0)
    first = find(rows_of(effects_of(girder, uniform(girder), [AXLE])), "sagging", span=0)
    train = AXLE.scaled(first.rating_factor)
    assert find(
        rows_of(effects_of(girder, uniform(girder), [train])), "sagging", span=0
    ).utilisation == pytest.approx(1.0)


# two spans ----------------------------------------------------------------------------------------


def test_hogging_over_the_middle_support_is_used_as_worked_by_hand() -> None:
    # two spans of 10 m, 20 kN/m: -20 x 100 / 8 = -250; axle at L / sqrt 3: -P L / (6 sqrt 3) = -96.225
    # factored -300 - 144.34 = -444.34 of 500 = 0.8887; RF = 200 / 144.34 = 1.3856
    girder = girder_of(10.0, 10.0)
    case = find(rows_of(effects_of(girder, uniform(girder), [AXLE])), "hogging", support=1)
    live = 100.0 * 10.0 / (6.0 * np.sqrt(3.0))
    assert case.x == pytest.approx(10.0)
    assert case.permanent == pytest.approx(-250.0)
    assert case.live == pytest.approx(-live, rel=GRID)
    assert case.utilisation == pytest.approx((300.0 + 1.5 * live) / 500.0, rel=GRID)
    assert case.rating_factor == pytest.approx(200.0 / (1.5 * live), rel=GRID)


def test_a_relieving_permanent_moment_takes_its_own_factor() -> None:
    # only span 1 carries 20 kN/m: M_B = -w L^2 / 16 = -125, and span 2 sags under the axle alone, relieved by
    # -125 u / L with u from the far end; axle at u: M = P u (L - u) / L - M_B' u / L, M_B' = P u (L^2 - u^2) / (4 L^2)
    girder = girder_of(10.0, 10.0)
    factors = Factors(permanent=1.2, permanent_relieving=0.8, live=1.5, resistance=1.0)
    loads = LoadCase(uniforms=((0.0, 10.0, 20.0),))
    case = find(
        rows_of(effects_of(girder, loads, [AXLE], factors=factors), factors=factors), "sagging", span=1
    )
    u = np.linspace(0.0, 10.0, 100001)
    live = 100.0 * u * (10.0 - u) / 10.0 - u / 10.0 * 100.0 * u * (100.0 - u**2) / 400.0
    factored = -0.8 * 125.0 * u / 10.0 + 1.5 * live
    best = int(factored.argmax())
    assert case.permanent == pytest.approx(-125.0 * (20.0 - case.x) / 10.0)
    assert case.x == pytest.approx(20.0 - u[best], abs=10.0 / 120.0)
    assert case.factored == pytest.approx(factored[best], rel=GRID)
    relief = 0.8 * 125.0 * (20.0 - case.x) / 10.0
    assert case.rating_factor == pytest.approx((900.0 + relief) / (case.factored + relief), rel=1e-9)


def test_the_least_rating_factor_of_a_row_is_told_where_a_weaker_piece_is_used_more() -> None:
    # two spans of 10 m under 40 kN/m: -500 over the pier, -270 at 9 m. An axle brings at most
    # M_B = P L / (6 sqrt 3) = 96.2 over the pier and nine tenths of it at 9 m. With 560 over the pier and 335 beyond:
    # used 744.3 / 560 = 1.329 there and 453.9 / 335 = 1.355 at 9 m, which governs; but rated
    # (335 - 324) / 129.9 = 0.085 at 9 m and (560 - 600) / 144.3 = -0.277 over the pier.
    strong, weak = (Resistance(sagging=900.0, hogging=h, shear=900.0) for h in (560.0, 335.0))
    girder = Girder((
        (Piece(length=9.0, flexural=1e6), Piece(length=1.0, flexural=1e6)),
        (Piece(length=1.0, flexural=1e6), Piece(length=9.0, flexural=1e6)),
    ))  # fmt: skip
    effects = effects_of(girder, uniform(girder, 40.0), [AXLE], [[weak, strong], [strong, weak]])
    case = find(rows_of(effects), "hogging", support=1)
    assert min(case.x, 20.0 - case.x) == pytest.approx(9.0)
    assert case.utilisation == pytest.approx(1.355, rel=1e-3)
    assert case.rating_factor == pytest.approx(11.0 / 129.9, rel=2e-2)
    assert case.least_rating == pytest.approx(-40.0 / 144.34, rel=2e-3)
    assert case.least_rating_x == pytest.approx(10.0)


def test_a_weaker_piece_short_of_the_pier_governs_the_hogging_row() -> None:
    # strong within 1 m of the pier (900), weak beyond (260): at 9 m the moment is
    # M = 75 x 9 - 20 x 81 / 2 = -135 of the 250 over the pier: 1.2 x 135 / 260 = 0.623 against 300 / 900 = 0.333
    strong, weak = (Resistance(sagging=900.0, hogging=h, shear=900.0) for h in (900.0, 260.0))
    girder = Girder((
        (Piece(length=9.0, flexural=1e6), Piece(length=1.0, flexural=1e6)),
        (Piece(length=1.0, flexural=1e6), Piece(length=9.0, flexural=1e6)),
    ))  # fmt: skip
    case = find(
        rows_of(effects_of(girder, uniform(girder), [], [[weak, strong], [strong, weak]])),
        "hogging",
        support=1,
    )
    assert case.x in (pytest.approx(9.0), pytest.approx(11.0))
    assert (case.resistance, case.permanent) == pytest.approx((260.0, -135.0))
    assert case.utilisation == pytest.approx(162.0 / 260.0)


def test_a_weaker_web_away_from_the_support_governs_the_shear_row() -> None:
    # simple span 10 m, 20 kN/m: 120 of 600 at the support, 1.2 x 80 = 96 of 120 at 1 m
    strong, weak = (Resistance(sagging=900.0, hogging=900.0, shear=v) for v in (600.0, 120.0))
    girder = Girder(((Piece(length=1.0, flexural=1e6), Piece(length=9.0, flexural=1e6)),))
    case = find(
        rows_of(effects_of(girder, uniform(girder), [], [[strong, weak]])), "shear", span=0, support=0
    )
    assert (case.x, case.resistance, case.utilisation) == pytest.approx((1.0, 120.0, 0.8))


# supports -----------------------------------------------------------------------------------------


def test_a_settled_middle_seat_changes_the_permanent_moment_by_three_e_i_over_l_squared() -> None:
    # two equal spans, middle seat down by s: M_B = -250 + 3 E I s / L^2 = -250 + 3e4 s
    girder = girder_of(10.0, 10.0)
    rows = rows_of(effects_of(girder, uniform(girder), [AXLE]), drops=np.array([0.0, 0.004, 0.0]))
    assert find(rows, "hogging", support=1).permanent == pytest.approx(-250.0 + 120.0)


def test_a_middle_pad_relieves_hogging_as_worked_by_hand() -> None:
    # R_B = 1.25 w L / (1 + 6 E I / k L^3): with k = 6 E I / L^3 it is 0.625 w L = 125 and M_B = -250 + 625 = +375
    girder = girder_of(10.0, 10.0)
    f = np.array([0.0, 1000.0 / 6e6, 0.0])
    rows = rows_of(effects_of(girder, uniform(girder)), compliance=f)
    case = find(rows, "sagging", span=0)
    left = 0.5 * (400.0 - 125.0)
    assert case.permanent == pytest.approx(left**2 / (2.0 * 20.0), rel=GRID)
    over = find(rows, "hogging", support=1)
    assert over.utilisation == 0.0  # nothing hogs any more


def softer(factor: float) -> dict[str, float]:
    """Utilisations of three spans as the pad under support 1 takes some share of its stiffness."""
    girder = girder_of(12.0, 15.0, 12.0, flexural=2.4e6)
    train = Train(np.array([0.0, 1.8, 9.2, 11.0]), np.full(4, 120.0))
    f = 1.0 / np.array([1.5e5, 2.2e5 * factor, 2.2e5, 1.5e5])
    rows = rows_of(effects_of(girder, uniform(girder, 36.0), [train]), compliance=f)
    return {
        "hogging": find(rows, "hogging", support=1).utilisation,
        "sagging left": find(rows, "sagging", span=0).utilisation,
        "sagging right": find(rows, "sagging", span=1).utilisation,
        "other hogging": find(rows, "hogging", support=2).utilisation,
    }


def test_a_softer_interior_pad_lowers_hogging_there_and_raises_sagging_on_both_sides() -> None:
    """Common practice, no source."""
    rows = [softer(factor) for factor in (1.0, 0.7, 0.4, 0.2)]
    for before, after in pairwise(rows):
        assert after["hogging"] < before["hogging"]
        assert after["sagging left"] > before["sagging left"]
        assert after["sagging right"] > before["sagging right"]
        assert after["other hogging"] > before["other hogging"]


# what is not given --------------------------------------------------------------------------------


def test_a_capacity_that_is_not_given_leaves_the_effects_and_no_utilisation() -> None:
    girder = girder_of(10.0, 10.0)
    effects = effects_of(girder, uniform(girder), [AXLE], [[UNGIVEN], [UNGIVEN]])
    case = find(rows_of(effects), "hogging", support=1)
    assert case.x == pytest.approx(10.0)
    assert case.permanent == pytest.approx(-250.0)
    assert np.isnan(case.utilisation)
    assert np.isnan(case.rating_factor)
    none = np.zeros((5, 3))
    assert all(np.all(np.isnan(row.utilisation)) for row in evaluate_draws(effects, FACTORS, none, none))


def test_a_capacity_missing_where_it_governs_is_not_passed_over() -> None:
    # span 1 has no sagging capacity in its middle, where it is used most: the row must not fall back on the ends
    bare = Resistance(sagging=np.nan, hogging=500.0, shear=300.0)
    girder = Girder(
        ((Piece(length=3.0, flexural=1e6), Piece(length=4.0, flexural=1e6), Piece(length=3.0, flexural=1e6)),)
    )
    effects = effects_of(girder, uniform(girder), [AXLE], [[STRONG, bare, STRONG]])
    case = find(rows_of(effects), "sagging", span=0)
    assert case.x == pytest.approx(5.0)
    assert np.isnan(case.utilisation)
    drawn = evaluate_draws(effects, FACTORS, np.zeros((3, 2)), np.zeros((3, 2)))
    assert np.all(np.isnan(drawn[0].utilisation))


def test_without_a_live_load_only_permanent_effects_are_used_and_nothing_is_rated() -> None:
    girder = girder_of(10.0)
    effects = effects_of(girder, uniform(girder))
    case = find(rows_of(effects), "sagging", span=0)
    assert (case.live, case.factored, case.utilisation) == pytest.approx((0.0, 300.0, 300.0 / 900.0))
    assert np.isnan(case.rating_factor)
    high, low = live_reactions(effects, 2)
    assert high.tolist() == low.tolist() == [0.0, 0.0]
    drawn = evaluate_draws(effects, FACTORS, np.zeros((4, 2)), np.zeros((4, 2)))
    assert drawn[0].utilisation == pytest.approx(np.full(4, 300.0 / 900.0))


def live_reactions(effects: Effects, n: int) -> tuple[Floats, Floats]:
    """Greatest and least live reactions on unyielding supports, (n,)."""
    live = effects.passing(FACTORS, np.zeros((1, n)), np.zeros((1, n))).envelope(REACTION)
    return live.maximum, live.minimum


# live loads ---------------------------------------------------------------------------------------


def test_a_lopsided_vehicle_runs_both_ways() -> None:
    # 100 kN with 50 kN four metres behind it: the left support takes most, 100 + 50 x 0.6 = 130, when it runs towards
    # smaller x; the other way round only 50 + 100 x 0.6 = 110 stands on it
    girder = girder_of(10.0)
    lopsided = Train(np.array([0.0, 4.0]), np.array([100.0, 50.0]))
    for train in (lopsided, lopsided.reversed()):
        effects = effects_of(girder, LoadCase(), [train])
        rows = rows_of(effects)
        assert find(rows, "shear", span=0, support=0).live == pytest.approx(130.0, rel=1e-6)
        assert find(rows, "shear", span=0, support=1).live == pytest.approx(-130.0, rel=1e-6)
        assert live_reactions(effects, 2)[0] == pytest.approx([130.0, 130.0], rel=1e-6)


def test_a_mirrored_girder_has_mirrored_rows() -> None:
    girder = Girder((
        (Piece(length=8.0, flexural=1e6), Piece(length=2.0, flexural=2e6)),
        (Piece(length=3.0, flexural=2e6), Piece(length=10.0, flexural=1.3e6)),
    ))  # fmt: skip
    weak, strong = STRONG, Resistance(sagging=1100.0, hogging=700.0, shear=420.0)
    mirror = Girder(tuple(tuple(span[::-1]) for span in girder.spans[::-1]))
    lopsided = Train(np.array([0.0, 2.2, 7.1]), np.array([100.0, 140.0, 40.0]))
    f = np.array([4e-6, 9e-6, 2e-6])
    one = rows_of(effects_of(girder, uniform(girder), [lopsided], [[weak, strong], [strong, weak]]), f)
    other = rows_of(
        effects_of(mirror, uniform(mirror), [lopsided], [[weak, strong], [strong, weak]]), f[::-1]
    )
    for effect, span, support in (("sagging", 0, -1), ("sagging", 1, -1), ("hogging", -1, 1)):
        back = find(other, effect, 1 - span if span >= 0 else -1, 2 - support if support >= 0 else -1)
        assert find(one, effect, span, support).utilisation == pytest.approx(back.utilisation, rel=1e-3)
    for span, support in ((0, 0), (0, 1), (1, 1), (1, 2)):
        back = find(other, "shear", 1 - span, 2 - support)
        assert find(one, "shear", span, support).utilisation == pytest.approx(back.utilisation, rel=1e-3)
        assert find(one, "shear", span, support).factored == pytest.approx(-back.factored, rel=1e-3)


def test_of_several_live_loads_the_worst_one_governs_each_row() -> None:
    # a heavy single axle governs sagging of a short span, a long light row hogging over the pier of two long ones
    girder = girder_of(10.0, 10.0)
    single = Train(np.array([0.0]), np.array([150.0]))
    row = Train(np.arange(8) * 2.0, np.full(8, 30.0))
    alone = [rows_of(effects_of(girder, LoadCase(), [train])) for train in (single, row)]
    both = rows_of(effects_of(girder, LoadCase(), [single, row]))
    used = np.array([[one.case.utilisation for one in rows] for rows in alone])
    assert set(used.argmax(axis=0)) == {0, 1}
    assert [one.case.utilisation for one in both] == pytest.approx(used.max(axis=0))


def test_reactions_and_uplift_of_two_spans_are_those_of_the_influence_lines() -> None:
    # axle in the far span lifts the near end: R = -P / (6 sqrt 3) = -9.6225 at least; over a support it is P
    girder = girder_of(10.0, 10.0)
    high, low = live_reactions(effects_of(girder, uniform(girder), [AXLE]), 3)
    lift = 100.0 / (6.0 * np.sqrt(3.0))
    assert high == pytest.approx([100.0, 100.0, 100.0], rel=1e-6)
    assert low == pytest.approx([-lift, 0.0, -lift], rel=1e-3, abs=1e-9)


def test_reactions_on_pads_sum_to_the_load_when_the_train_is_on_the_girder() -> None:
    girder = girder_of(10.0, 14.0)
    f = np.array([4e-6, 9e-6, 2e-6])
    effects = effects_of(girder, uniform(girder, 22.0), [AXLE])
    reaction = effects.steady_reactions(f, np.zeros(f.size)).permanent
    assert reaction.sum() == pytest.approx(22.0 * 24.0)


def test_one_row_by_itself_is_that_row_of_all() -> None:
    girder = girder_of(10.0, 12.0)
    effects = effects_of(girder, uniform(girder), [AXLE])
    compliance, drops = np.full(3, 1e-5), np.array([0.0, 2e-3, 0.0])
    rows = evaluate(effects, FACTORS, compliance, drops)
    alone = [evaluate_row(effects, FACTORS, compliance, drops, i) for i in range(len(rows))]
    assert [one.case.utilisation for one in alone] == [one.case.utilisation for one in rows]
    assert [one.case.x for one in alone] == [one.case.x for one in rows]
