"""Seats told by girder levels and gaps, never levelled themselves, in what comes after the calibration."""

from __future__ import annotations

import pytest

from assess import workflow
from assess.workflow import beside
from tests.workflow.conftest import new_record
from tests.workflow.surveyed import GAPS, LEVELS, Truth, write_survey

PIER = "pier 1"


@pytest.fixture(scope="module")
def record(tmp_path_factory: pytest.TempPathFactory) -> str:
    """A visit of gaps and girder levels, the seat at pier 1 lower by 8 mm, and a test two years on."""
    folder = tmp_path_factory.mktemp("seats")
    url = new_record(folder)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(beside, "DRAWS", 400)
        truth = Truth(settled={PIER: 8.0})
        first = write_survey(folder, "2022-05-10", truth, (*LEVELS, *GAPS), tests=("T1", "T2"))
        workflow.log_visit(url, first)
        workflow.log_visit(url, write_survey(folder, "2024-05-14", truth, (), tests=("T1", "T2"), seed=2))
        workflow.calibrate(url, "quillmere", every=True)
    return url


def test_a_seat_that_was_fitted_once_still_stands_there_at_a_later_visit(record: str) -> None:
    said = " ".join(workflow.assess(record, "quillmere").cautions)
    assert f'"{PIER}" 8' in said.replace(f'"{PIER}" 7.9', f'"{PIER}" 8')
    assert "no seat level is in the record" not in said


def test_the_trend_starts_from_the_utilisations_of_the_assessment(record: str) -> None:
    assessed = workflow.assess(record, "quillmere").girders[0].sections
    rows = {
        (row.effect, row.span, row.support): row.utilisation_now
        for row in workflow.trend(record, "quillmere").spans
    }
    for row in assessed:
        now = rows[row.effect, row.span, row.support]
        assert now == pytest.approx(row.calibrated.utilisation, rel=0.05)
    seat = next(one for one in workflow.trend(record, "quillmere").seats if one.support == PIER)
    assert seat.settlement_mm == pytest.approx(8.0, abs=1.5)


def test_creep_of_the_pads_is_said_to_be_left_out_only_where_it_is(record: str) -> None:
    short = "creep of the pads under permanent load is not in them"
    assert short in " ".join(workflow.assess(record, "quillmere").cautions)
    import datetime as dt

    before = workflow.assess(record, "quillmere", visit=dt.date(2022, 5, 10))
    assert short not in " ".join(before.cautions)
