"""What does not move: stages, settlements and temperature, each an effect of its own."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from assess.capacity import Dead, Effects, Factors, GirderLoads, Resistance, Thermal, plan_checks
from assess.girder import Condensed, Girder, Piece
from assess.loads import LoadCase

FACTORS = Factors(permanent=1.2, permanent_relieving=1.0, live=1.5, resistance=1.0)
EI, W = 1e6, 20.0


def effects_of(lengths: tuple[float, ...], loads: GirderLoads) -> Effects:
    girder = Girder(tuple((Piece(length=length, flexural=EI),) for length in lengths))
    given_ = [[Resistance(sagging=900.0, hogging=500.0, shear=300.0)]] * len(lengths)
    return Effects(Condensed(girder), plan_checks(girder, given_, FACTORS), loads)


def moment_at(effects: Effects, values: np.ndarray, x: float) -> float:
    return float(values[np.argmin(np.abs(effects.plan.x - x))])


def whole(length: float, w: float = W) -> LoadCase:
    return LoadCase(uniforms=((0.0, length, w),))


def test_what_came_on_span_by_span_bends_every_span_as_a_simple_one() -> None:
    lengths = (12.0, 15.0)
    effects = effects_of(lengths, GirderLoads(dead=(Dead(loads=whole(27.0), continuous=False),)))
    soft = np.array([1e-5, 3e-5, 1e-5])
    steady = effects.steady("moment", soft, np.zeros(3))
    assert moment_at(effects, steady.permanent, 6.0) == pytest.approx(W * 144.0 / 8.0)
    assert moment_at(effects, steady.permanent, 19.5) == pytest.approx(W * 225.0 / 8.0)
    assert moment_at(effects, steady.permanent, 12.0) == pytest.approx(0.0, abs=1e-9)
    reactions = effects.steady_reactions(soft, np.zeros(3)).permanent
    assert reactions == pytest.approx([W * 6.0, W * 13.5, W * 7.5])


@given(k=st.floats(3.0, 7.0))
def test_pads_shift_no_moment_of_what_came_on_span_by_span(k: float) -> None:
    effects = effects_of((12.0, 15.0), GirderLoads(dead=(Dead(loads=whole(27.0), continuous=False),)))
    firm = effects.steady("moment", np.zeros(3), np.zeros(3)).permanent
    soft = effects.steady("moment", np.array([0.0, 10.0**-k, 0.0]), np.zeros(3)).permanent
    assert np.array_equal(firm, soft)


def test_two_stages_add_up_to_the_loads_of_both() -> None:
    early, late = Dead(loads=whole(27.0, 8.0), continuous=False), Dead(loads=whole(27.0, 12.0))
    both = effects_of((12.0, 15.0), GirderLoads(dead=(early, late)))
    soft = np.array([1e-5, 3e-5, 1e-5])
    parts = [effects_of((12.0, 15.0), GirderLoads(dead=(one,))) for one in (early, late)]
    for name in ("moment", "shear"):
        together = both.steady(name, soft, np.zeros(3)).permanent
        assert together == pytest.approx(sum(p.steady(name, soft, np.zeros(3)).permanent for p in parts))
    assert both.steady_reactions(soft, np.zeros(3)).permanent.sum() == pytest.approx(20.0 * 27.0)


def test_a_lowered_middle_support_bends_by_the_textbook_amount() -> None:
    """Two equal spans L, middle support down by s: M = 3 EI s / L^2, by the three-moment equation."""
    effects = effects_of((10.0, 10.0), GirderLoads(dead=(Dead(loads=whole(20.0)),)))
    drop = np.array([0.0, 0.01, 0.0])
    steady = effects.steady("moment", np.zeros(3), drop)
    assert moment_at(effects, steady.settled, 10.0) == pytest.approx(3.0 * EI * 0.01 / 100.0)
    assert moment_at(effects, steady.dead[0], 10.0) == pytest.approx(-W * 100.0 / 8.0)
    assert steady.permanent == pytest.approx(steady.dead[0] + steady.settled)
    reactions = effects.steady_reactions(np.zeros(3), drop)
    assert reactions.settled.sum() == pytest.approx(0.0, abs=1e-6)
    assert reactions.dead[0] == pytest.approx(W * 10.0 * np.array([0.375, 1.25, 0.375]))


@pytest.mark.parametrize(("spans", "share"), [(2, 1.5), (3, 1.2)])
def test_a_warm_top_puts_the_supports_of_equal_spans_into_sagging(spans: int, share: float) -> None:
    """M = 3/2 (two spans) and 6/5 (three) of EI times curvature, by the three-moment equation. DERIVED."""
    curvature = -12e-6 * 10.0 / 1.0  # expansion x difference / depth; a warmer top arches the girder
    length = 10.0 * spans
    thermal = Thermal(curvatures=((0.0, length, curvature),), drop=np.zeros(spans + 1))
    effects = effects_of((10.0,) * spans, GirderLoads(dead=(), thermal=(thermal,)))
    steady = effects.steady("moment", np.zeros(spans + 1), np.zeros(spans + 1))
    assert moment_at(effects, steady.hot, 10.0) == pytest.approx(share * EI * -curvature)
    assert steady.cold == pytest.approx(0.0, abs=1e-9)
    reactions = effects.steady_reactions(np.zeros(spans + 1), np.zeros(spans + 1))
    assert (reactions.hot + reactions.cold).sum() == pytest.approx(0.0, abs=1e-9)


def test_a_curvature_given_in_parts_is_the_whole() -> None:
    def of(curvatures: tuple[tuple[float, float, float], ...]) -> np.ndarray:
        thermal = Thermal(curvatures=curvatures, drop=np.zeros(3))
        effects = effects_of((10.0, 14.0), GirderLoads(dead=(), thermal=(thermal,)))
        return effects.steady("moment", np.array([1e-5, 0.0, 2e-5]), np.zeros(3)).hot

    whole_ = of(((0.0, 24.0, -1e-4),))
    assert of(((0.0, 4.0, -1e-4), (4.0, 17.0, -1e-4), (17.0, 24.0, -1e-4))) == pytest.approx(whole_)
    assert np.abs(whole_).max() > 10.0


def test_a_simple_span_is_free_to_arch() -> None:
    thermal = Thermal(curvatures=((0.0, 10.0, -1e-4),), drop=np.zeros(2))
    effects = effects_of((10.0,), GirderLoads(dead=(), thermal=(thermal,)))
    steady = effects.steady("moment", np.zeros(2), np.zeros(2))
    assert np.abs(steady.hot - steady.cold).max() < 1e-9


def test_hinges_that_make_a_girder_determinate_leave_no_moment_to_temperature() -> None:
    pieces = tuple(
        tuple(Piece(length=length, flexural=EI) for length in span)
        for span in ((10.0,), (3.0, 6.0, 3.0), (10.0,))
    )
    thermal = Thermal(curvatures=((0.0, 32.0, -1e-4),), drop=np.array([0.0, -0.003, 0.0, 0.0]))
    for hinges, most in (((13.0, 19.0), 1e-9), ((13.0,), None)):
        girder = Girder(pieces, hinges=hinges)
        resistances = [[Resistance(sagging=900.0, hogging=500.0, shear=300.0)] * len(s) for s in girder.spans]
        effects = Effects(
            Condensed(girder),
            plan_checks(girder, resistances, FACTORS),
            GirderLoads(dead=(), thermal=(thermal,)),
        )
        steady = effects.steady("moment", np.array([1e-5, 2e-5, 1e-5, 0.0]), np.zeros(4))
        reach = float(np.abs(steady.hot - steady.cold).max())
        assert reach < most if most else reach > 10.0
        assert np.abs(steady.hot[effects.plan.x == 13.0]).max(initial=0.0) < 1e-9  # nothing on a hinge


def test_a_warm_pier_acts_like_a_seat_that_rises() -> None:
    thermal = Thermal(curvatures=(), drop=np.array([0.0, -0.003, 0.0]))
    effects = effects_of((10.0, 10.0), GirderLoads(dead=(), thermal=(thermal,)))
    steady = effects.steady("moment", np.zeros(3), np.zeros(3))
    settled = effects.steady("moment", np.zeros(3), np.array([0.0, -0.003, 0.0])).settled
    assert steady.cold == pytest.approx(np.minimum(settled, 0.0))
    assert moment_at(effects, steady.cold, 10.0) == pytest.approx(-3.0 * EI * 0.003 / 100.0)


def test_only_the_worst_of_several_temperature_cases_acts() -> None:
    hot = Thermal(curvatures=((0.0, 20.0, -1e-4),), drop=np.zeros(3))
    hotter = Thermal(curvatures=((0.0, 20.0, -2e-4),), drop=np.zeros(3))
    cold = Thermal(curvatures=((0.0, 20.0, 1e-4),), drop=np.zeros(3))
    effects = effects_of((10.0, 10.0), GirderLoads(dead=(), thermal=(hot, hotter, cold)))
    steady = effects.steady("moment", np.zeros(3), np.zeros(3))
    assert moment_at(effects, steady.hot, 10.0) == pytest.approx(1.5 * EI * 2e-4)
    assert moment_at(effects, steady.cold, 10.0) == pytest.approx(-1.5 * EI * 1e-4)


def test_many_supports_at_once_give_what_each_gives_alone() -> None:
    rng = np.random.default_rng(5)
    loads = GirderLoads(
        dead=(Dead(loads=whole(24.0)), Dead(loads=whole(24.0, 5.0), kind="surfacing", continuous=False)),
        thermal=(Thermal(curvatures=((0.0, 24.0, -1e-4),), drop=np.array([0.0, -0.002, 0.0])),),
    )
    effects = effects_of((10.0, 14.0), loads)
    f, s = 10.0 ** rng.uniform(-6.0, -4.0, (80, 3)), 0.01 * rng.standard_normal((80, 3))
    together = effects.steady("moment", f, s)
    for i in (0, 41, 79):
        one = effects.steady("moment", f[i], s[i])
        assert together.permanent[i] == pytest.approx(one.permanent, rel=1e-9, abs=1e-6)
        assert together.hot[i] == pytest.approx(one.hot, rel=1e-9, abs=1e-6)
    assert together.dead.shape == (2, 80, effects.plan.x.size)
