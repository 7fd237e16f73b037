"""The first sentence of a girder: what to look at first."""

from __future__ import annotations

from dataclasses import replace

import pytest

from assess.results import CalibrationResult
from assess.workflow.drivers import Driver
from assess.workflow.verdicts import cautions_beside, verdict
from tests.report.example_view import example

SEAT = Driver(what="seat", support="pier 2", adds=0.021)


@pytest.fixture(scope="module")
def view():
    return example()


def said(view, calibration: CalibrationResult | None) -> str:
    return verdict("north", view.assessment, view.trend, calibration, [SEAT])


def test_a_seat_that_was_fitted_and_not_levelled_is_named_as_fitted(view):
    assert (
        'look first at the seat at "pier 2", 2 mm down as fitted, not levelled: it adds 0.021 to the utilisation'
        in said(view, view.calibration)
    )


def test_a_fitted_seat_that_may_be_at_rest_is_not_looked_at_first(view):
    fit = view.calibration.girders[0]
    still = [replace(seat, low95=-0.1, high95=4.1) for seat in fit.settlements_mm]
    calm = replace(view.calibration, girders=[replace(fit, settlements_mm=still)])
    assert "the seat at" not in said(view, calm)


def test_a_levelled_seat_is_named_by_its_level(view):
    trend = replace(view.trend, seats=[replace(view.trend.seats[0], support="pier 2")])
    told = said(replace(view, trend=trend), view.calibration)
    assert 'the seat at "pier 2", 3.2 mm down, moving by +0.41 mm a year' in told


@pytest.mark.parametrize(
    "caution",
    [
        "north: explained by pads only, which the readings bear as well, hogging would be used 0.9 and not 0.8.",
        'north: it cannot be told from these readings whether pad or seat has moved at "pier 1".',
        "north: left out of the fit by hand: north/T1/deflection/6 m (gauge knocked).",
    ],
)
def test_doubts_of_the_fit_that_change_the_number_stand_beside_the_sentence(caution):
    assert cautions_beside("north", [caution]) == [caution]
    assert cautions_beside("south", [caution]) == []
