"""Beams with given settlements, and plain unequal spans, against worked examples.

Each test names its source and whether it was seen, is from memory, or was derived by another method. A
free end is a support of infinite compliance.
"""

from __future__ import annotations

import numpy as np
import pytest

from assess.loads import LoadCase
from tests.published.beams import Solved

FREE = np.inf


def test_2a_a_clamp_turns_and_a_support_settles() -> None:
    # Karnovsky & Lebed, Advanced Methods of Structural Analysis, Ex. 11.4, pp. 396-399; seen. Three
    # figures are printed (.0098, -.0096, .0174 of EI0), hence half a unit. The clamp's turn of 0.01 rad is
    # taken off every level: a straight tilt of the whole beam changes no moment.
    ei = 1.0e4
    levels = [0.0, -0.01 * 6.0, 0.04 - 0.01 * 10.0, -0.01 * 14.0]
    beam = Solved([6.0, 4.0, 4.0], [ei, 2 * ei, 2 * ei], LoadCase(), settlement=levels, clamped_left=True)
    moments = beam.at("moment", np.array([0.0, 6.0, 10.0]))
    assert moments == pytest.approx([98.0, -96.0, 174.0], abs=0.5)


def test_2c_three_supports_settle_under_a_uniform_load() -> None:
    # data as recalled from Kassimali, Structural Analysis, ch. 13 (from memory, weak); answer derived by
    # another method: R to 0.1 kN, M to 1 kN m, hence half a unit
    ei = 200e6 * 700e-6
    loads = LoadCase(uniforms=((0.0, 20.0, 30.0),))
    beam = Solved([10.0, 10.0], [ei, ei], loads, settlement=[0.010, 0.050, 0.020])
    assert beam.reactions == pytest.approx([127.2, 345.6, 127.2], abs=0.06)
    assert beam.at("moment", 10.0)[0] == pytest.approx(-228.0, abs=0.6)


def test_2d_a_settlement_alone_beside_a_clamp() -> None:
    # NPTEL Structural Analysis, lesson 15, Ex. 15.1; from memory. The end moments are quoted as 82.285
    # and 68.570 kN m (the last place cut), reactions recomputed to three places: half a unit and the cut
    ei = 200e6 * 4e-4
    beam = Solved([5.0, 5.0], [ei, ei], LoadCase(), settlement=[0.0, 0.005, 0.0], clamped_left=True)
    assert beam.at("moment", np.array([0.0, 5.0])) == pytest.approx([-82.285, 68.570], abs=2e-3)
    assert beam.reactions == pytest.approx([30.171, -43.886, 13.714], abs=6e-4)


def test_2f_an_overhang_and_a_settled_roller() -> None:
    # Hibbeler, Structural Analysis, Ex. 11.3; from memory: M_A 3.00, M_B 24 kN m, slope at B .054
    ei = 200e6 * 5e-6
    loads = LoadCase(points=((7.0, 8.0),))
    beam = Solved(
        [4.0, 3.0],
        [ei, ei],
        loads,
        compliance=[0.0, 0.0, FREE],
        settlement=[0.0, 0.080, 0.0],
        clamped_left=True,
    )
    assert beam.at("moment", np.array([0.0, 4.0])) == pytest.approx([-3.0, -24.0], abs=5e-3)
    assert beam.at("slope", 4.0)[0] == pytest.approx(0.054, abs=5e-5)
    # recomputed (derived): exact decimals
    assert beam.reactions == pytest.approx([-5.25, 13.25, 0.0], abs=1e-9)


def test_2g_two_spans_and_a_loaded_overhang() -> None:
    # Kassimali, Structural Analysis, Ex. D.3; seen. kip and ft; exact decimals, hence 1e-9. The overhang
    # that gives M_C = -90 k ft is taken as 10 ft under 1.8 k/ft, for which R_C is 43.25 k (derived).
    loads = LoadCase(points=((10.0, 45.0),), uniforms=((20.0, 60.0, 1.8),))
    beam = Solved([20.0, 30.0, 10.0], [1e6] * 3, loads, compliance=[0.0, 0.0, 0.0, FREE], clamped_left=True)
    moments = beam.at("moment", np.array([0.0, 20.0, 50.0]))
    assert moments == pytest.approx([-97.5, -142.5, -90.0], abs=1e-9)
    assert beam.reactions == pytest.approx([20.25, 53.5, 43.25, 0.0], abs=1e-9)


def test_2i_unequal_spans_with_a_load_at_each_midspan() -> None:
    # a textbook-style exercise without a seen author: derived; exact decimals, hence 1e-9
    beam = Solved([6.0, 12.0], [1e5, 1e5], LoadCase(points=((3.0, 20.0), (12.0, 20.0))))
    assert beam.at("moment", 6.0)[0] == pytest.approx(-37.5, abs=1e-9)
    assert beam.reactions == pytest.approx([3.75, 29.375, 6.875], abs=1e-9)
