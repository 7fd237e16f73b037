"""Trigger values against girders worked by hand, and against the assessment itself."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.typing import NDArray

from assess.capacity import (
    Dead,
    Effects,
    Factors,
    GirderLoads,
    Resistance,
    evaluate,
    plan_checks,
)
from assess.capacity.triggers import Driver, Scan, scan
from assess.girder import Condensed, Girder, Piece
from assess.loads import LoadCase, Train

Floats = NDArray[np.float64]

EI, LENGTH, LOAD = 1e6, 10.0, 20.0
FACTORS = Factors(permanent=1.2, permanent_relieving=1.0, live=1.5, resistance=1.0)
PAD = 1e-5  # m/kN


def two_spans(*, sagging: float = 400.0, hogging: float = 600.0, trains: tuple[Train, ...] = ()) -> Effects:
    girder = Girder(((Piece(length=LENGTH, flexural=EI),), (Piece(length=LENGTH, flexural=EI),)))
    given = Resistance(sagging=sagging, hogging=hogging, shear=1e4)
    dead = Dead(loads=LoadCase(uniforms=((0.0, 2 * LENGTH, LOAD),)))
    loads = GirderLoads(dead=(dead,), trains=trains)
    return Effects(Condensed(girder), plan_checks(girder, [[given], [given]], FACTORS), loads)


def seat(index: int, reach: float = 0.2, now: float = 0.0) -> Driver:
    def supports(values: Floats) -> tuple[Floats, Floats]:
        drops = np.zeros((values.size, 3))
        drops[:, index] = values
        return np.zeros_like(drops), drops

    return Driver(now=now, low=now - reach, high=now + reach, supports=supports)


def pad(index: int) -> Driver:
    """The ln k of a pad among others of PAD."""

    def supports(values: Floats) -> tuple[Floats, Floats]:
        compliance = np.full((values.size, 3), PAD)
        compliance[:, index] = np.exp(-values)
        return compliance, np.zeros_like(compliance)

    now = -np.log(PAD)
    return Driver(now=now, low=now - 3.0, high=now + 3.0, supports=supports)


def scanned(effects: Effects, *drivers: Driver) -> Scan:
    compliance, drops = drivers[0].supports(np.array([drivers[0].now]))
    return scan(effects, FACTORS, drivers, (compliance[0], drops[0]))


def test_a_rising_pier_reaches_a_hogging_level_where_worked_by_hand() -> None:
    # M at the pier of two equal spans: w L^2 / 8 = 250 permanent, 3 EI h / L^2 = 3e4 h where it rises by h, both
    # with 1.2: 300 + 3.6e4 h = 0.9 x 600 = 540 gives h = 6.667 mm, and 600 gives 8.333 mm
    found = scanned(two_spans(sagging=4e3), seat(1))
    for level, rise in ((0.9, 20.0 / 3.0e3), (1.0, 25.0 / 3.0e3)):
        crossing = found.crossing(0, -1, level)
        assert crossing is not None
        assert crossing.value == pytest.approx(-rise, rel=1e-5)
        assert crossing.utilisation == pytest.approx(level, rel=1e-5)
        assert found.effects.plan.checks[crossing.check].effect == "hogging"


def test_a_falling_pier_reaches_the_sagging_level_of_a_simple_span_no_sooner_than_by_hand() -> None:
    # a pier that falls by s carries 1.2 x (250 - 3e4 s) of hogging moment; with M at the pier the span sags at most by
    # (w L / 2 - M / L)^2 / (2 w); the relief counts as an adverse sagging moment, so it takes 1.2 as well
    found = scanned(two_spans(sagging=300.0), seat(1))
    crossing = found.crossing(0, 1, 0.9)
    assert crossing is not None
    pier = 250.0 - 3e4 * crossing.value
    assert 1.2 * (LOAD * LENGTH / 2 - pier / LENGTH) ** 2 / (2 * LOAD) == pytest.approx(270.0, rel=2e-4)
    assert found.effects.plan.checks[crossing.check].effect == "sagging"


def test_the_level_is_reached_by_the_assessment_itself() -> None:
    effects = two_spans(trains=(Train(np.array([0.0, 3.0]), np.array([60.0, 60.0])),), sagging=470.0)
    drivers = [pad(0), pad(1), seat(0), seat(2)]
    found = scanned(effects, *drivers)
    seen = 0
    for i, driver in enumerate(drivers):
        for way in (-1, 1):
            for level in (0.95, 1.0):
                crossing = found.crossing(i, way, level)
                if crossing is None:
                    continue
                seen += 1
                compliance, drops = driver.supports(np.array([crossing.value]))
                rows = evaluate(effects, FACTORS, compliance[0], drops[0])
                used = np.array([row.case.utilisation for row in rows])
                assert used[crossing.check] == pytest.approx(level, rel=1e-4)
                open_still = found.today < level
                assert used[open_still].max() <= level * (1.0 + 2e-3)  # no other section got there before
    assert seen >= 4


def test_no_section_below_the_level_can_be_reached_twice() -> None:
    found = scanned(two_spans(hogging=300.0 / 0.95), seat(1))
    past = found.past(0.9)
    assert [found.effects.plan.checks[i].effect for i in past] == ["hogging"]
    crossing = found.crossing(0, -1, 0.9)
    assert crossing is None or crossing.check not in past


def test_none_in_range_is_none() -> None:
    found = scanned(two_spans(sagging=1e5, hogging=1e5), seat(1, reach=0.01))
    assert found.crossing(0, -1, 0.9) is None
    assert found.crossing(0, 1, 1.0) is None


def test_a_section_without_resistance_is_no_trigger() -> None:
    found = scanned(two_spans(sagging=np.nan, hogging=np.nan), seat(1))
    assert found.past(0.9).size == 0
    assert found.crossing(0, -1, 1.0) is None


def test_a_trigger_lies_beyond_a_seat_that_moved_already() -> None:
    still, moved = (
        scanned(two_spans(sagging=4e3), seat(1)),
        scanned(two_spans(sagging=4e3), seat(1, now=-2e-3)),
    )
    first, second = still.crossing(0, -1, 1.0), moved.crossing(0, -1, 1.0)
    assert first is not None
    assert second is not None
    assert second.value == pytest.approx(first.value, rel=1e-5)
