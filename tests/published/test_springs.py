"""Beams on spring supports against worked examples and closed forms; sources beside each."""

from __future__ import annotations

import numpy as np
import pytest

from assess.loads import LoadCase
from tests.published.beams import Solved

FREE = np.inf


def test_3a_a_clamped_beam_on_a_roller_and_a_spring() -> None:
    # Y. Liu, lecture notes on the finite element method, Ex. 2.7; seen. Four figures: -.01744 m,
    # .002492, .007475 rad; 69.78 and 116.2 kN carry the rounding of the notes' own factors (0.07 %).
    ei = 210e6 * 2e-4
    beam = Solved(
        [3.0, 3.0],
        [ei, ei],
        LoadCase(points=((6.0, 50.0),)),
        compliance=[0.0, 0.0, 1.0 / 200.0],
        clamped_left=True,
    )
    assert beam.at("deflection", 6.0)[0] == pytest.approx(0.01744, abs=5.1e-6)
    assert beam.at("slope", np.array([3.0, 6.0])) == pytest.approx([0.002492, 0.007475], abs=5.1e-7)
    assert beam.reactions == pytest.approx([-69.78, 116.2, 3.488], rel=7e-4)
    # the notes count the clamp's moment anticlockwise; here the beam sags at the clamp
    assert beam.at("moment", 0.0)[0] == pytest.approx(69.78, rel=7e-4)
    # recomputed (derived), six figures
    assert beam.reactions == pytest.approx([-69.767, 116.279, 3.488], abs=6e-4)


def test_3b_a_clamped_beam_with_a_spring_at_half_length() -> None:
    # Gere & Goodno, Mechanics of Materials, Prob. 10.4-5; seen. Closed form, hence 1e-12.
    q, length, ei = 12.0, 5.0, 3.0e4
    beam = Solved(
        [length, length],
        [ei, ei],
        LoadCase(uniforms=((0.0, 2 * length, q),)),
        compliance=[0.0, length**3 / (6.0 * ei), FREE],
        clamped_left=True,
    )
    expected = np.array([7.0 / 12.0, 17.0 / 12.0, 0.0]) * q * length
    assert beam.reactions == pytest.approx(expected, abs=1e-9)
    moments = beam.at("moment", np.array([0.0, length])) / (q * length**2)
    assert moments == pytest.approx([-7.0 / 12.0, -0.5], rel=1e-12)


@pytest.mark.parametrize("alpha", [0.1, 0.5, 2.0])
def test_3c_a_propped_cantilever_on_an_end_spring(alpha: float) -> None:
    # Karnovsky & Lebed, Advanced Methods of Structural Analysis, Probs. 7.10 and 7.8; seen. Closed form.
    length, ei, q, p, u = 7.0, 8.0e4, 20.0, 90.0, 0.6
    k = 3.0 * ei / (alpha * length**3)
    uniform = LoadCase(uniforms=((0.0, length, q),))
    point = LoadCase(points=((u * length, p),))
    expected = {0: 3.0 * q * length / 8.0 / (1.0 + alpha), 1: p * u**2 * (3.0 - u) / 2.0 / (1.0 + alpha)}
    for order, loads in enumerate((uniform, point)):
        beam = Solved([length], [ei], loads, compliance=[0.0, 1.0 / k], clamped_left=True)
        assert beam.reactions[1] == pytest.approx(expected[order], rel=1e-12)


@pytest.mark.parametrize(("factor", "share"), [(6.0, 0.625), (60.0, 1.13636)])
def test_3e_two_spans_over_a_middle_spring(factor: float, share: float) -> None:
    # derived: R_B = 1.25 wL / (1 + 6 EI / k L^3); the second share is printed to five places
    length, ei, w = 9.0, 5.0e4, 16.0
    k = factor * ei / length**3
    beam = Solved(
        [length] * 2, [ei] * 2, LoadCase(uniforms=((0.0, 2 * length, w),)), compliance=[0.0, 1.0 / k, 0.0]
    )
    assert beam.reactions[1] / (w * length) == pytest.approx(share, abs=5e-6)
    assert beam.reactions[1] == pytest.approx(1.25 * w * length / (1.0 + 6.0 / factor), rel=1e-12)


def test_3g_three_spans_on_equal_springs() -> None:
    # derived: springs of 20 EI / l^3 under a uniform load, both support moments -0.0625 w l^2
    length, ei, w = 6.0, 4.0e4, 10.0
    f = length**3 / (20.0 * ei)
    beam = Solved([length] * 3, [ei] * 3, LoadCase(uniforms=((0.0, 3 * length, w),)), compliance=[f] * 4)
    moments = beam.at("moment", np.array([length, 2 * length])) / (w * length**2)
    assert moments == pytest.approx([-0.0625, -0.0625], abs=1e-12)
