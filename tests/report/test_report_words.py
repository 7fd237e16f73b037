"""Numbers, intervals, dates and statuses in words."""

from __future__ import annotations

import datetime as dt
import math

import pytest

from assess.report import words


@pytest.mark.parametrize(
    ("value", "told"),
    [
        (0.0, "0"),
        (3421.7, "3420"),
        (-0.04567, "−0.0457"),
        (9.996, "10.0"),
        (0.9996, "1.00"),
        (12345.0, "12\u202f300"),
        (99960.0, "100\u202f000"),
        (2.5e-7, "2.50e-7"),
    ],
)
def test_numbers_have_three_significant_figures(value, told):
    assert words.number(value) == told


@pytest.mark.parametrize("value", [math.nan, math.inf])
def test_a_number_that_is_none_is_refused(value):
    with pytest.raises(ValueError, match="finite"):
        words.number(value)


def test_a_number_that_a_person_wrote_keeps_its_figures():
    assert words.entered(0.05, "mm") == "0.05 mm"
    assert words.entered(-3.0, "°C") == "−3 °C"


def test_an_interval_reads_value_low_to_high():
    assert words.interval(0.87, 0.84, 0.91, "kN") == "0.870 (0.840 to 0.910) kN"
    assert words.interval(None, None, None, reason="no reading near pier 2") == (
        "not determined: no reading near pier 2"
    )
    assert words.interval(1.0, None, 2.0) == "1.00 (interval not determined)"


@pytest.mark.parametrize(
    ("utilisation", "status"),
    [
        (0.0, "within"),
        (0.8999, "within"),
        (0.9, "watch"),
        (0.9999, "watch"),
        (1.0, "over"),
        (None, "unknown"),
        (math.nan, "unknown"),
    ],
)
def test_statuses_change_at_nine_tenths_and_at_one(utilisation, status):
    assert words.status(utilisation) == status


def test_draws_tell_no_probability_of_nought_or_one():
    assert words.probability(0.0) == "under 0.1 %"
    assert words.probability(1.0) == "over 99.9 %"
    assert words.probability(0.0234) == "2.3 %"


def test_a_date_cannot_be_read_month_first():
    assert words.date(dt.date(2024, 5, 14)) == "14 May 2024"


def test_a_pad_told_by_its_prior_is_called_so():
    assert words.told_by(0.49).startswith("told by the assumption")
    assert words.told_by(0.5).startswith("told by the readings")
