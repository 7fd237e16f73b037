"""Permanent loads against other methods, to 1e-8 of the largest value.

The references carry 40 to 50 decimal digits (see `frame.py`, `three_moment.py`): double precision
finite elements lose too many where a sliver stands beside a long span, so they are used on plain
girders alone (`test_hermite.py`).
"""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given

from assess.girder import RESPONSES, Condensed, Girder, Piece, forces_of, places
from assess.loads import LoadCase
from tests.girder.strategies import CAMPAIGN, FEW, PLAIN, Case, apart, cases, stations
from tests.independent import frame, three_moment

AGREE = 1e-8


def differences(case: Case) -> dict[str, float]:
    """Compare every response and every support value of a case with the frame reference."""
    condensed = Condensed(case.girder)
    state = condensed.solve(case.compliance, forces_of(condensed, case.loads), case.settlement)
    x = stations(case.girder, 3)
    expected = frame.solve(case.girder, case.compliance, case.settlement, case.loads, x)
    result = {
        "reaction": apart(state.reaction, expected.reaction),
        "displacement": apart(state.displacement, expected.displacement),
    }
    loaded = np.array([at for at, _ in case.loads.points])
    clear = np.abs(x[:, None] - loaded).min(axis=1) > 1e-6  # both faces alike
    for quantity in RESPONSES:
        place = places(condensed, quantity, x)
        value = place.held(case.loads) + place.rows @ state.displacement
        use = clear & (x < x[-1]) if quantity == "shear" else np.ones(x.size, dtype=bool)
        reference = getattr(expected, quantity)
        # loads on supports and drops of a determinate girder bend nothing: measured against what they would do
        # elsewhere, or with the other supports held
        elsewhere = case.loads.total * float(np.abs(place.unit(x)).max())
        held = float((np.abs(place.rows) @ np.abs(case.settlement)).max())
        scale = max(float(np.abs(reference).max()), 1e-3 * elsewhere, 1e-3 * held)
        result[quantity] = apart(value[use], reference[use], scale)
    return result


def agrees(case: Case) -> None:
    found = differences(case)
    assert max(found.values()) < AGREE, found


@PLAIN
@given(cases(settled=False))
def test_pads_redistribute_as_in_a_frame_of_elements(case: Case) -> None:
    agrees(case)


@FEW
@given(cases(absent=True))
def test_settlements_and_absent_supports_agree(case: Case) -> None:
    agrees(case)


@PLAIN
@given(cases(slivers=True))
def test_pieces_of_millimetres_beside_long_spans_agree(case: Case) -> None:
    agrees(case)


@FEW
@given(cases(shear=True, slivers=True))
def test_shear_flexibility_agrees_with_timoshenko_elements(case: Case) -> None:
    agrees(case)


@FEW
@given(cases(shear=True, restrained=True))
def test_rotational_restraints_agree(case: Case) -> None:
    agrees(case)


@PLAIN
@given(cases(hinged=True))
def test_internal_hinges_agree_with_a_frame_that_has_them(case: Case) -> None:
    agrees(case)


@FEW
@given(cases(hinged=True, shear=True, slivers=True, restrained=True))
def test_hinges_beside_slivers_shear_and_restraints_agree(case: Case) -> None:
    agrees(case)


@pytest.mark.campaign
@CAMPAIGN
@given(cases(hinged=True, shear=True, slivers=True, restrained=True))
def test_every_kind_of_hinged_case_agrees(case: Case) -> None:
    agrees(case)


@pytest.mark.campaign
@CAMPAIGN
@given(cases(shear=True, slivers=True, restrained=True, absent=True))
def test_every_kind_of_case_agrees(case: Case) -> None:
    agrees(case)


def against_three_moments(case: Case) -> None:
    condensed = Condensed(case.girder)
    state = condensed.solve(case.compliance, forces_of(condensed, case.loads), case.settlement)
    place = places(condensed, "moment", condensed.positions)
    moment = place.held(case.loads) + place.rows @ state.displacement
    expected = three_moment.solve(case.girder, case.compliance, case.settlement, case.loads)
    assert apart(state.reaction, expected.reaction) < AGREE
    assert apart(state.displacement, expected.level) < AGREE
    # a girder of one span has no support moment: measured against its load, not against zero
    scale = max(float(np.abs(expected.moment).max()), case.loads.total * case.girder.length * 1e-3)
    assert apart(moment, expected.moment, scale) < AGREE


@PLAIN
@given(cases(slivers=True, absent=True))
def test_support_moments_follow_the_three_moment_equation(case: Case) -> None:
    against_three_moments(case)


@pytest.mark.campaign
@CAMPAIGN
@given(cases(slivers=True, absent=True))
def test_support_moments_follow_the_three_moment_equation_at_length(case: Case) -> None:
    against_three_moments(case)


def test_two_millimetres_beside_sixty_metres_agree() -> None:
    sliver, span = Piece(length=0.002, flexural=3e5), Piece(length=59.998, flexural=4e7)
    short = Piece(length=3.0, flexural=2e5)
    girder = Girder(((sliver, span), (span, sliver), (sliver, short, sliver), (sliver, span, sliver)))
    loads = LoadCase(points=((60.001, 700.0), (121.0, 300.0)), uniforms=((0.0, girder.length, 28.0),))
    case = Case(
        girder=girder,
        compliance=np.array([1e-6, 0.0, 2e-6, 5e-6, 3e-6]),
        settlement=np.array([0.0, 0.01, 0.0, -0.004, 0.0]),
        loads=loads,
    )
    agrees(case)
    against_three_moments(case)
