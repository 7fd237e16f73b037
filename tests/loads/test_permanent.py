"""Loads that stand still."""

from __future__ import annotations

import pytest

from assess.loads import LoadCase


def test_its_total_is_points_and_uniform_lengths_together() -> None:
    loads = LoadCase(points=((1.0, 30.0), (4.0, 12.0)), uniforms=((0.0, 10.0, 5.0), (2.0, 4.0, 1.5)))
    assert loads.total == pytest.approx(95.0)


def test_nothing_weighs_nothing() -> None:
    assert LoadCase().total == 0
