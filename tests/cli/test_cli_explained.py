"""What `calibrate` prints beside the stiffnesses: seats, unknowns, what moved, explanations, errors of the model."""

from __future__ import annotations

import re
from dataclasses import replace

import pytest

from assess.results import CompensatingError, GirderCalibration, PadShift
from tests.report.example_view import example


@pytest.fixture
def fit() -> GirderCalibration:
    calibration = example().calibration
    assert calibration is not None
    return calibration.girders[0]


@pytest.fixture
def printed(bedstone, workflow, fit):
    def show(**changes) -> str:
        result = replace(example().calibration, girders=[replace(fit, **changes)])
        workflow(calibrate=lambda *a, **k: [result])
        return bedstone("calibrate", "quillmere").out

    return show


def cells(out: str, start: str) -> list[str]:
    row = next(line for line in out.splitlines() if line.startswith(start))
    return re.split(r"\s{2,}", row.strip())


def part(out: str, start: str) -> str:
    return out[out.index(start) :]


def test_a_seat_shows_its_settlement_beside_what_of_it_bends_the_girder(printed):
    row = cells(part(printed(), "seat  "), "pier 1")
    assert row == ["pier 1", "0.500 (-0.100 to 1.10)", "97.0", "0.800 (-0.100 to 1.70)"]


def test_other_unknowns_show_their_unit_and_who_asked_for_them(printed):
    out = printed()
    assert cells(out, "datum shift") == ["datum shift", "1.20 (0.300 to 2.10)", "mm", "80.0"]
    assert "Asked for by the visit file: pads, sustained and settlements." in out


def test_what_moved_says_where_nothing_was_read_of_a_seat(printed):
    told = part(printed(), "What moved at each pad")
    assert cells(told, "west abutment") == ["west abutment", "pad and seat", "5.10", "4.40"]
    assert cells(told, "pier 1") == ["pier 1", "cannot be told", "not read", "4.40"]


def test_explanations_stand_by_aicc_with_how_they_stand(printed):
    told = part(printed(), "Explanations of these readings").splitlines()[3:8]
    rows = [re.split(r"\s{2,}", line.strip()) for line in told]
    assert [row[1] for row in rows] == ["41.0", "41.9", "42.2", "940", "not determined"]
    assert rows[0][-1] == "within 2 of the best, simpler"
    assert rows[1][-1] == "calibrated, within 2 of the best"
    assert rows[3][-1] == "not told by the readings"


def test_a_reading_to_look_at_again_comes_with_the_call_that_leaves_it_out(printed):
    told = " ".join(printed().split())
    assert 'To leave it out: --without "north/T1/deflection/33 m" --reason "..."' in told
    assert "(or north/T1/deflection/30 m: they cannot be told apart)" in told


def test_errors_of_the_model_show_what_each_does_to_each_pad(printed):
    error = CompensatingError(
        error="girder +10 % stiff",
        pads=[
            PadShift(support="pier 1", change_percent=-4.05, change_sd=-1.02),
            PadShift(support="pier 2", change_percent=1.83, change_sd=1.7),
        ],
    )
    row = cells(printed(compensating_errors=[error]), "girder +10 % stiff")
    assert row == ["girder +10 % stiff", "-4.05 (-1.02)", "1.83 (1.70)"]
    assert "if the model were wrong" not in printed()
