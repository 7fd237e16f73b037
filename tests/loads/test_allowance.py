"""Dynamic allowances: the values of CHECKS and what the formulas say at their limits."""

from __future__ import annotations

import csv

import numpy as np
import pytest

from assess.loads import Allowance
from assess.loads.allowance import (
    determinant_length,
    en_rail,
    impact,
    loaded_lengths,
    phi_2,
    phi_3,
    real_train,
    running_part,
    track_part,
)
from tests.published.beams import DATA

FOOT = 0.3048

with (DATA / "lm71_simple_span.csv").open(encoding="utf-8") as _file:
    ROWS = list(csv.DictReader(_file))


@pytest.mark.parametrize("row", ROWS, ids=[row["span_m"] for row in ROWS])
def test_dynamic_factors_of_a_simple_span(row: dict[str, str]) -> None:
    """EN 1991-2, 6.4.5.2 (from memory, to be confirmed), recomputed to four places."""
    length = determinant_length(np.array([float(row["span_m"])]))
    assert phi_2(length) == pytest.approx(float(row["Phi2"]), abs=5.1e-5)
    assert phi_3(length) == pytest.approx(float(row["Phi3"]), abs=5.1e-5)


def test_dynamic_factors_stay_between_their_limits() -> None:
    assert (phi_2(0.01), phi_2(1.0), phi_2(500.0)) == (1.67, 1.67, 1.0)
    assert (phi_3(0.01), phi_3(1.0), phi_3(500.0)) == (2.0, 2.0, 1.0)


@pytest.mark.parametrize(
    ("spans", "length"),
    [
        ([20.0], 20.0),
        ([20.0, 20.0], 24.0),
        ([24.0, 30.0, 24.0], 1.3 * 26.0),
        ([20.0] * 4, 28.0),
        ([20.0] * 5, 30.0),
        ([20.0] * 9, 30.0),
        ([6.0, 30.0, 6.0], 30.0),  # never less than the longest span
    ],
)
def test_determinant_length_of_continuous_girders(spans: list[float], length: float) -> None:
    """EN 1991-2, table 6.2, case 5.2 (from memory, to be confirmed)."""
    assert determinant_length(np.array(spans)) == pytest.approx(length)


def test_track_maintenance_picks_the_factor() -> None:
    spans = np.array([24.0, 30.0, 24.0])
    assert en_rail(spans, "careful") == pytest.approx(phi_2(33.8) - 1.0)
    assert en_rail(spans, "standard") == pytest.approx(phi_3(33.8) - 1.0)
    with pytest.raises(ValueError, match="track maintenance"):
        en_rail(spans, "good")


def test_real_train_of_annex_c() -> None:
    """200 km/h (55.556 m/s), L 20 m, n0 6 Hz: K 0.23148, phi' 0.30008, phi'' 0.10223 (recomputed, from memory)."""
    v, length, n0 = 200.0 / 3.6, 20.0, 6.0
    assert v / (2.0 * length * n0) == pytest.approx(0.23148, abs=5e-6)
    assert running_part(v, length, n0) == pytest.approx(0.30008, abs=6e-6)
    assert track_part(v, length, n0) == pytest.approx(0.10223, abs=6e-6)
    assert real_train(v, length, n0) == pytest.approx(0.30008 + 0.10223, abs=1.2e-5)
    assert real_train(v, length, n0, careful=True) == pytest.approx(0.30008 + 0.5 * 0.10223, abs=1.2e-5)


def test_real_train_at_its_limits() -> None:
    assert running_part(76.0, 10.0, 5.0) == 1.325  # K = 0.76
    assert track_part(50.0, 200.0, 1.0) == pytest.approx(0.0, abs=1e-12)
    assert track_part(50.0, 25.0, 1.0) == 0.0  # rough part below zero
    assert track_part(11.0, 20.0, 6.0) == pytest.approx(0.5 * track_part(22.0, 20.0, 6.0))
    with pytest.raises(ValueError, match="frequency"):
        running_part(50.0, 20.0, 0.0)


@pytest.mark.parametrize(("feet", "fraction"), [(20.0, 0.30), (41.666, 0.30), (75.0, 0.25), (125.0, 0.20)])
def test_impact_fraction(feet: float, fraction: float) -> None:
    """50 / (L + 125) <= 0.30 (AASHTO Standard Specifications 3.8.2.1, from memory)."""
    assert float(impact(np.array(feet * FOOT))) == pytest.approx(fraction, abs=1e-5)


def test_loaded_lengths_follow_the_effect() -> None:
    spans = np.array([20.0, 30.0, 24.0])
    span, local = np.array([0, 0, 1, 1, 2]), np.array([5.0, 15.0, 10.0, 20.0, 23.0])
    sagging, hogging = loaded_lengths(spans, "moment", span, local)
    assert sagging.tolist() == [20.0, 20.0, 30.0, 30.0, 24.0]
    assert hogging.tolist() == [20.0, 25.0, 25.0, 27.0, 24.0]
    right, left = loaded_lengths(spans, "shear", span, local)
    assert right.tolist() == [15.0, 5.0, 20.0, 10.0, 1.0]
    assert left.tolist() == local.tolist()


def test_a_given_allowance_is_the_same_everywhere() -> None:
    high, low = Allowance(value=0.2).at(
        np.array([20.0, 30.0]), "moment", np.array([0, 1]), np.array([3.0, 4.0])
    )
    assert high.tolist() == low.tolist() == [0.2, 0.2]
