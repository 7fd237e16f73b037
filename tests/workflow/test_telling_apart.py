"""Settlement and softened pads told apart from files: the calibration names the right one at the right pier."""

from __future__ import annotations

from pathlib import Path

import pytest

from assess import workflow
from assess.results import GirderCalibration
from assess.workflow import beside
from tests.workflow.conftest import new_record
from tests.workflow.surveyed import GAPS, LEVELS, SEATS, Truth, write_survey

PIER = "pier 1"
HAPPENED = {"seat": Truth(settled={PIER: 5.0}), "pad": Truth(ratios=(1.0, 0.4, 1.0))}


@pytest.fixture(autouse=True)
def few_draws(monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing here hangs on the draws."""
    monkeypatch.setattr(beside, "DRAWS", 200)


def north(folder: Path, path: Path, unknowns: tuple[str, ...] | None = None) -> GirderCalibration:
    url = new_record(folder)
    workflow.log_visit(url, path)
    (result,) = workflow.calibrate(url, "quillmere", options=workflow.Options(unknowns=unknowns))
    return result.girders[0]


def causes(shown: GirderCalibration) -> dict[str, str]:
    return {one.support: one.cause for one in shown.causes}


@pytest.mark.parametrize("what", HAPPENED)
@pytest.mark.parametrize("seed", [1, 2])
@pytest.mark.parametrize(
    ("lasting", "tests"),
    [
        pytest.param((*LEVELS, *SEATS), (), id="seat levels"),
        pytest.param((*LEVELS, *GAPS), (), id="gaps"),
        pytest.param(SEATS, ("T1", "T2", "T3"), id="seat levels and tests"),
        pytest.param((*LEVELS, *GAPS), ("T1",), id="gaps and a test"),
    ],
)
def test_the_calibration_names_what_moved(
    tmp_path: Path, what: str, seed: int, lasting: tuple[tuple[str, str, float], ...], tests: tuple[str, ...]
) -> None:
    shown = north(
        tmp_path, write_survey(tmp_path, "2024-05-14", HAPPENED[what], lasting, tests=tests, seed=seed)
    )
    told = causes(shown)
    assert told[PIER] == what, shown.causes
    assert {cause for support, cause in told.items() if support != PIER} <= {"neither", "cannot be told"}


@pytest.mark.parametrize("what", HAPPENED)
@pytest.mark.parametrize("seed", [1, 2])
def test_by_girder_levels_alone_the_calibration_says_that_it_cannot_be_told(
    tmp_path: Path, what: str, seed: int
) -> None:
    shown = north(tmp_path, write_survey(tmp_path, "2024-05-14", HAPPENED[what], LEVELS, seed=seed))
    assert causes(shown)[PIER] == "cannot be told", shown.causes


def test_what_cannot_be_told_is_a_caution_that_names_the_pier(tmp_path: Path) -> None:
    url = new_record(tmp_path)
    workflow.log_visit(url, write_survey(tmp_path, "2024-05-14", HAPPENED["seat"], LEVELS))
    (result,) = workflow.calibrate(url, "quillmere")
    assert any("cannot be told" in one and PIER in one for one in result.cautions), result.cautions
