"""Laws, interventions, forecasts and the next visit of the contract's bridge."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

import numpy as np
import pytest

from assess import workflow
from assess.capacity import rows
from assess.results import TrendResult
from assess.workflow import assessing, trending
from assess.workflow.losses_ahead import between
from tests.workflow.invented import bridge_text, write_visit

YEARS = range(2010, 2026, 2)
TODAY = dt.date(2024, 9, 1)


@pytest.fixture(autouse=True)
def few_draws(monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing here hangs on how many draws make a band."""
    monkeypatch.setattr(assessing, "DRAWS", 200)
    monkeypatch.setattr(trending, "FORECAST_DRAWS", 200)
    monkeypatch.setattr(rows, "_SAMPLE", 4)


def add(record: str, folder: Path, more: str) -> None:
    path = folder / "more.toml"
    path.write_text(bridge_text() + "\n" + more)
    workflow.add_bridge(record, path)


def log_years(record: str, folder: Path, ratio_before: float, change: int) -> None:
    """A visit every second spring; the pad at pier 1 is at `ratio_before` until a year and at nominal from it on."""
    for i, year in enumerate(YEARS):
        ratio = ratio_before if year < change else 1.0
        workflow.log_visit(record, write_visit(folder, f"{year}-05-14", [0.9, ratio, 1.1], seed=40 + i))


def pad(result: TrendResult, support: str = "pier 1"):  # type: ignore[no-untyped-def]
    return next(one for one in result.pads if one.support == support)


def intervention(kind: str, date: str, support: str = "pier 1") -> str:
    return f'[[intervention]]\ndate = {date}\nkind = "{kind}"\ngirder = "north"\nsupport = "{support}"\n'


def test_a_step_is_said_with_the_visits_between_which_it_lies(record: str, tmp_path: Path) -> None:
    log_years(record, tmp_path, 0.6, 2018)
    result = workflow.trend(record, "quillmere", today=TODAY)
    one = pad(result)
    assert (one.law, one.alarm) == ("step", "stiffer")
    assert one.step_between == (dt.date(2016, 5, 14), dt.date(2018, 5, 14))
    assert one.step_low95 <= 100.0 * (1.0 / 0.6 - 1.0) <= one.step_high95
    assert sum(one.weights.values()) == pytest.approx(1.0)
    assert one.creep_since == dt.date(1989, 6, 1)
    assert any("became stiffer: a stiffer pad draws reaction" in said for said in result.cautions)


def test_a_pad_replaced_starts_anew(record: str, tmp_path: Path) -> None:
    add(record, tmp_path, intervention("replaced", "2017-03-01"))
    log_years(record, tmp_path, 0.6, 2018)
    one = pad(workflow.trend(record, "quillmere", today=TODAY))
    assert (one.law, one.alarm, one.visits, one.since) == ("steady", None, 4, dt.date(2017, 3, 1))
    assert pad(workflow.trend(record, "quillmere", today=TODAY), "pier 2").visits == 8


def test_a_pad_replaced_after_the_last_visit_is_nominal_until_it_is_read(record: str, tmp_path: Path) -> None:
    workflow.log_visit(record, write_visit(tmp_path, "2024-05-14", [0.9, 0.5, 1.1]))
    add(record, tmp_path, intervention("replaced", "2024-07-01"))
    workflow.calibrate(record, "quillmere")
    said = workflow.assess(record, "quillmere").cautions
    assert any("was replaced on 2024-07-01, after the calibration of 2024-05-14" in one for one in said)
    view = workflow.report_view(record, "quillmere", today=TODAY)
    drawn = next(one for one in view.girders[0].supports if one.support == "pier 1")
    assert drawn.ratio == pytest.approx(1.0)
    assert drawn.data_share == 0.0


def test_a_seat_shimmed_keeps_only_the_levels_since(record: str, tmp_path: Path) -> None:
    for i, year in enumerate((2018, 2020, 2022, 2024)):
        drop = 2.0 * i if year < 2022 else 0.5
        path = write_visit(tmp_path, f"{year}-05-14", [0.9, 1.0, 1.1], seed=i, settled={"pier 1": drop})
        workflow.log_visit(record, path)
    whole = workflow.trend(record, "quillmere", today=TODAY).seats
    assert [one.visits for one in whole] == [4]
    add(record, tmp_path, intervention("shimmed", "2021-10-01"))
    (seat,) = workflow.trend(record, "quillmere", today=TODAY).seats
    assert (seat.visits, seat.since, seat.moving) == (2, dt.date(2021, 10, 1), False)


def test_past_the_day_of_the_next_visit_nothing_is_within(record: str, tmp_path: Path) -> None:
    log_years(record, tmp_path, 1.0, 2010)
    fresh = workflow.trend(record, "quillmere", today=TODAY)
    late = workflow.trend(record, "quillmere", today=dt.date(2031, 1, 1))
    assert not fresh.overdue
    assert "within" in {row.status for row in fresh.spans}
    assert late.overdue
    assert "within" not in {row.status for row in late.spans}
    assert [row.utilisation_now for row in late.spans] == [row.utilisation_now for row in fresh.spans]
    assert any("was due by" in said for said in late.cautions)
    verdict = workflow.report_view(record, "quillmere", today=dt.date(2031, 1, 1)).verdicts["north"]
    assert "within" not in verdict


def test_the_fan_widens_and_its_shares_name_what_drifts(record: str, tmp_path: Path) -> None:
    for i, year in enumerate(YEARS):
        ratio = float(np.exp(-0.08 * (year - 2010)))
        workflow.log_visit(record, write_visit(tmp_path, f"{year}-05-14", [0.9, ratio, 1.1], seed=60 + i))
    result = workflow.trend(record, "quillmere", today=TODAY)
    row = next(one for one in result.spans if (one.effect, one.span) == ("sagging", 1))
    fan = row.fan
    assert fan is not None
    width = np.array(fan.high95) - np.array(fan.low95)
    assert width[-1] > width[0] > 0.0
    assert fan.dates[0] == dt.date(2024, 5, 14)
    assert np.all(np.diff(fan.probability_over_watch) >= 0.0)
    assert all(a >= b for a, b in zip(fan.probability_over_watch, fan.probability_over_limit, strict=True))
    assert (row.shares[0].what, row.shares[0].support) == ("pad", "pier 1")
    assert 0.5 < sum(one.share for one in row.shares) <= 1.0 + 1e-9


def test_utilisations_between_two_days_follow_a_capacity_that_shrinks_in_a_straight_line() -> None:
    demand, share = 0.8, np.array([[0.0, 0.25, 1.0, 1.5]])
    first, later = np.full((1, 4), demand / 1.0), np.full((1, 4), demand / 0.8)
    assert between(first, later, share)[0] == pytest.approx(demand / (1.0 - 0.2 * share[0]))
    assert between(0.0 * first, later, share)[0] == pytest.approx(share[0])
