"""Rates and crossing dates of simulated visits against a straight line by generalised least squares."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import brentq, least_squares
from scipy.stats import norm

from tests.black_box.cases import Case, make
from tests.black_box.command import Record
from tests.black_box.describe import Bridge, Girder, Section, Support, Visit
from tests.black_box.elements import Array
from tests.black_box.invent import plan, test_places
from tests.black_box.rating import Rating

YEAR = 365.25


def two_spans(rng: np.random.Generator) -> Case:
    spans = [(float(rng.integers(12, 18)), "a", []), (float(rng.integers(12, 18)), "a", [])]
    total = spans[0][0] + spans[1][0]
    girder = Girder(spans, [Support(3e5), Support(4e5), Support(3e5)], [(25.0, 0.0, total)])
    bridge = Bridge(
        {"a": Section(205e6, 0.009)}, [girder], {"w": [(0.0, 150.0), (2.0, 150.0)]}, [("w", 2, 6.0, 0.2)]
    )
    states = test_places(bridge, girder, rng)
    return make(bridge, states, plan(girder, states, rng))


def visited(
    folder: Path, case: Case, rate: Array, visits: int, rng: np.random.Generator
) -> tuple[Record, Array, list[Array], list[Array], dt.date]:
    """Log yearly visits; returns times, each visit's own estimate and covariance (readings alone), the last date."""
    record = Record(folder)
    record.done("init")
    record.add(case.bridge)
    dates = [
        dt.date(2010, 5, 1) + dt.timedelta(days=370 * i + int(rng.integers(0, 60))) for i in range(visits)
    ]
    times = np.array([(d - dates[0]).days / YEAR for d in dates])
    found, spread = [], []
    for date, t in zip(dates, times, strict=True):
        case.read(case.mean + 0.1 + rate * t, case.sd * rng.normal(size=len(case.readings)))
        value = np.array([r.value for r in case.readings])
        fit = least_squares(
            lambda theta, value=value: (value - case.reader(theta)) / case.sd, case.mean, jac="3-point"
        )
        found.append(fit.x)
        spread.append(np.linalg.inv(fit.jac.T @ fit.jac))
        record.log(case.bridge, Visit(str(date), case.states, case.readings, 20.0))
    return record, times, found, spread, dates[-1]


def line(times: Array, found: list[Array], spread: list[Array], pad: int) -> tuple[Array, Array, float]:
    """Level at the last visit and rate of a pad, their covariance, and the misfit of the line."""
    A = np.c_[np.ones(times.size), times - times[-1]]
    y = np.array([x[pad] for x in found])
    w = 1 / np.array([c[pad, pad] for c in spread])
    covariance = np.linalg.inv(A.T @ (A * w[:, None]))
    best = covariance @ (A.T @ (w * y))
    return best, covariance, float((w * (y - A @ best) ** 2).sum())


@pytest.mark.parametrize(("seed", "visits"), [(0, 2), (1, 4), (2, 6)])
def test_rates_are_those_of_a_straight_line_through_the_readings_alone(
    seed: int, visits: int, tmp_path: Path
) -> None:
    rng = np.random.default_rng(seed)
    case = two_spans(rng)
    record, times, found, spread, _ = visited(tmp_path, case, np.array([0.0, -0.05, 0.0]), visits, rng)
    record.done("calibrate", case.bridge.id, "--all")
    pads = record.json("trend", case.bridge.id)["pads"]
    for i, pad in enumerate(pads):
        (_, rate), covariance, misfit = line(times, found, spread, i)
        se = float(np.sqrt(covariance[1, 1]))
        said = np.log1p(np.array([pad[k] for k in ("change_per_year_percent", "low95", "high95")]) / 100)
        wider = 1.0 if visits == 2 else max(1.0, np.sqrt(misfit / (visits - 2)))
        assert said[0] == pytest.approx(rate, abs=0.1 * se)
        half = 0.5 * (said[2] - said[1]) / (1.96 * se)
        assert 0.97 < half < 1.03 * wider, (pad, half, wider)
        assert pad["visits"] == visits


def test_crossing_dates_are_those_of_the_line(tmp_path: Path) -> None:
    rng = np.random.default_rng(7)
    case = two_spans(rng)
    rate = np.array([0.0, -0.25, 0.0])
    last = 4 * 380 / YEAR
    goal = Rating(case.bridge, case.girder, case.supports(case.mean + 0.1 + rate * (last + 3.0))).search()
    span = max((key for key in goal if key[0] == "sagging"), key=lambda key: goal[key].utilisation)
    case.bridge.sections["a"].sagging *= goal[span].utilisation
    record, times, found, spread, date = visited(tmp_path, case, rate, 5, rng)
    record.done("calibrate", case.bridge.id, "--all")
    rows = record.json("trend", case.bridge.id)["spans"]
    row = next(r for r in rows if r["effect"] == "sagging" and r["span"] == span[1] + 1)

    lines = [line(times, found, spread, i) for i in range(3)]
    others = np.array([b[0] for b, _, _ in lines])

    def used(ln_k1: float) -> float:
        k = others.copy()
        k[1] = ln_k1
        return Rating(case.bridge, case.girder, case.supports(k)).search(every=0.25)[span].utilisation

    limit = brentq(lambda x: used(x) - 1.0, others[1] - 3.0, others[1], xtol=1e-3)
    (level, slope), covariance, _ = lines[1]

    def passed(t: float) -> float:
        v = np.array([1.0, t])
        return float(norm.cdf((limit - level - slope * t) / np.sqrt(v @ covariance @ v)))

    median = (limit - level) / slope
    early = brentq(lambda t: passed(t) - 0.05, 0.0, median) if passed(0.0) < 0.05 else 0.0
    for name, own in (("median_crossing", median), ("earliest_5_percent", early)):
        said = (dt.date.fromisoformat(row[name]) - date).days / YEAR
        assert said == pytest.approx(own, abs=0.1 * median), (name, said, own, row)
    assert row["status"] in ("within", "watch")
    assert row["probability_over_1_now"] == pytest.approx(passed(0.0), abs=0.02)


def test_one_visit_gives_no_rate(tmp_path: Path) -> None:
    case = two_spans(np.random.default_rng(3))
    record, *_ = visited(tmp_path, case, np.zeros(3), 1, np.random.default_rng(3))
    said = record.json("trend", case.bridge.id)
    assert all(pad["change_per_year_percent"] is None for pad in said["pads"])
    assert any("one" in caution and "no rate" in caution for caution in said["cautions"])
