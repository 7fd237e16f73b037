"""What the forecasts say beside their fans."""

from __future__ import annotations

from dataclasses import replace

from assess.report import forecasts
from assess.results import LossTrend
from tests.report.example_view import trend_of
from tests.report.test_report_figures import carried


def test_the_spread_is_told_by_what_it_comes_from():
    trend = replace(trend_of(["north"]), spans=[carried()])
    told = forecasts.shares_sentence(trend, "north")
    assert told.startswith("What the spread of the forecast comes from: sagging in span 1, by 1 May 2035")
    assert "the pad at pier 1 62%, section losses 30%." in told
    assert forecasts.shares_sentence(trend, "south") == ""


def test_a_plate_without_a_rate_says_why():
    plate = LossTrend(
        section="mid", plate="web", visits=1, loss_mm=2.0, rate_mm_per_year=None, low95=None, high95=None
    )
    (row,) = forecasts.loss_trend_rows(replace(trend_of(["north"]), losses=[plate]))
    assert row[:4] == ["mid", "web", "1", "2 mm"]
    assert "does not say when it was built" in row[4]
