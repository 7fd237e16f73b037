"""The rating factor of a published example, through the function that rates every section.

AASHTO, The Manual for Bridge Evaluation, equation 6A.4.2.1-1 and illustrative example A1 (interior stringer), both from
memory and to be confirmed against the manual. The printed factors are recalled only roughly, so the digits here are
recomputed from the example's data: (2873 - 1.25 x 584.2) / (g_L x 957.6) = 1.2787 (inventory) and 1.6575 (operating).
"""

from __future__ import annotations

import numpy as np
import pytest

from assess.capacity import Dead, Effects, Factors, GirderLoads, Resistance, evaluate, plan_checks
from assess.girder import Condensed, Girder, Piece
from assess.loads import LoadCase, Train

KIP_FOOT = 4.4482216152605 * 0.3048  # kN m
SPAN = 65.0 * 0.3048  # m
CAPACITY = 2873.0 * KIP_FOOT
DEAD = (439.0 + 145.2) * KIP_FOOT  # DC1 and DC2; no wearing surface
LIVE = 957.6 * KIP_FOOT  # (truck 896 x 1.33 + lane 338) x 0.626


def rate(live_factor: float) -> float:
    """A simple span with those moments at midspan, by a uniform load and one axle."""
    girder = Girder(((Piece(length=SPAN, flexural=1e6),),))
    factors = Factors(permanent=1.25, permanent_relieving=0.9, live=live_factor, resistance=1.0)
    plan = plan_checks(girder, [[Resistance(sagging=CAPACITY, hogging=np.nan, shear=np.nan)]], factors)
    loads = GirderLoads(
        dead=(Dead(loads=LoadCase(uniforms=((0.0, SPAN, 8.0 * DEAD / SPAN**2),))),),
        trains=(Train(np.array([0.0]), np.array([4.0 * LIVE / SPAN])),),
    )
    rows = evaluate(Effects(Condensed(girder), plan, loads), factors, np.zeros(2), np.zeros(2))
    case = next(row.case for row in rows if row.check.effect == "sagging")
    assert case.permanent == pytest.approx(DEAD)
    assert case.live == pytest.approx(LIVE)
    return case.rating_factor


@pytest.mark.parametrize(("live_factor", "expected"), [(1.75, 1.2787), (1.35, 1.6575)])
def test_the_interior_stringer_rates_as_recomputed(live_factor: float, expected: float) -> None:
    """Half a unit of the last digit: the data are given in four figures."""
    assert rate(live_factor) == pytest.approx(expected, abs=6e-5)


def test_the_live_moment_of_the_example_is_its_truck_lane_and_share() -> None:
    """Truck 896 k ft with 33 %, lane 338 k ft, distribution 0.626: 957.6 k ft to the figures given."""
    moment = 0.626 * (1.33 * 896.0 + 338.0)
    assert moment == pytest.approx(LIVE / KIP_FOOT, abs=0.1)
