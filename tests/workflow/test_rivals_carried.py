"""Close rivals go with the calibration into the assessment, which shows the worst of them."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from assess import workflow
from assess.capacity import evaluate
from assess.results import AssessmentResult, CalibrationResult
from assess.workflow import assessing, beside
from assess.workflow.kept_fits import GirderFit, from_kept
from db.store import open_record
from tests.workflow.conftest import new_record
from tests.workflow.invented import model
from tests.workflow.surveyed import GAPS, LEVELS, SEATS, Truth, write_survey

ALL = ("T1", "T2", "T3")


@pytest.fixture(autouse=True)
def few_draws(monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing here hangs on the draws."""
    monkeypatch.setattr(beside, "DRAWS", 200)
    monkeypatch.setattr(assessing, "DRAWS", 200)


def carried_out(folder: Path, path: Path) -> tuple[CalibrationResult, GirderFit, AssessmentResult]:
    url = new_record(folder)
    workflow.log_visit(url, path)
    (shown,) = workflow.calibrate(url, "quillmere")
    assessed = workflow.assess(url, "quillmere")
    with open_record(url) as record:
        (kept,) = record.results("quillmere", "calibration")
    return shown, from_kept(kept).fits["north"], assessed


CASES = {
    "levels": (Truth(ratios=(0.9, 0.8, 1.1), settled={"pier 1": 1.0}), LEVELS, ALL),
    "a stiffer girder": (Truth(ratios=(0.9, 0.8, 1.1), factor=1.15), (*LEVELS, *GAPS), ("T1",)),
    "a shifted datum": (Truth(ratios=(0.9, 0.8, 1.1), shift=1.0), SEATS, ALL),
    "gaps": (Truth(ratios=(0.9, 0.8, 1.1), settled={"pier 2": 4.0}), GAPS, ALL),
}


@pytest.mark.parametrize("case", CASES)
def test_every_close_rival_that_is_told_is_carried(tmp_path: Path, case: str) -> None:
    truth, lasting, tests = CASES[case]
    shown, fit, assessed = carried_out(
        tmp_path, write_survey(tmp_path, "2024-05-14", truth, lasting, tests=tests)
    )
    girder = shown.girders[0]
    best = min(one.aicc for one in girder.rivals if one.aicc is not None)
    close = {
        one.name
        for one in girder.rivals
        if one.aicc is not None and one.aicc - best <= 2.0 and one.told and one.name != girder.calibrated_as
    }
    assert close
    assert close <= {one.name for one in fit.rivals}
    assert {one.name for one in fit.rivals} == {one.name for one in assessed.girders[0].rivals}


@pytest.mark.parametrize("case", CASES)
def test_the_worst_rival_is_the_girder_solved_as_that_rival_has_it(tmp_path: Path, case: str) -> None:
    """Solved on its own terms: a girder of another stiffness, seats as they dropped, pads pressed for good."""
    truth, lasting, tests = CASES[case]
    _, fit, assessed = carried_out(
        tmp_path, write_survey(tmp_path, "2024-05-14", truth, lasting, tests=tests)
    )
    girder = model()
    used: dict[str, list[float]] = {}
    for rival in fit.rivals:
        phi = np.exp(rival.log_factor)
        compliance = np.zeros(girder.n)
        compliance[girder.pads] = np.exp(-rival.log_stiffness)
        drops = np.array([rival.settlements.get(support.id, 0.0) for support in girder.doc.supports])
        crept = girder.creeping(rival.log_sustained)
        rows = evaluate(crept.effects, girder.factors, phi * compliance, phi * drops)
        used[rival.name] = [row.case.utilisation for row in rows]
    for i, section in enumerate(assessed.girders[0].sections):
        worst = section.calibrated.worst_rival_utilisation
        assert worst is not None
        assert worst == pytest.approx(max(rows[i] for rows in used.values()), abs=1e-9)
        assert used[str(section.calibrated.worst_rival)][i] == pytest.approx(worst, abs=1e-9)


def test_what_no_one_asks_for_makes_no_rival_of_the_calibration_itself(tmp_path: Path) -> None:
    """The pads as they were at a loaded datum are in every rival, so that pads alone are still pads alone."""
    path = write_survey(tmp_path, "2024-05-14", Truth(ratios=(0.9, 0.8, 1.1)), GAPS, tests=ALL)
    path.write_text(path.read_text().replace("[visit]\n", '[visit]\ndatum_load = "permanent"\n', 1))
    url = new_record(tmp_path)
    workflow.log_visit(url, path)
    (shown,) = workflow.calibrate(url, "quillmere")
    assert shown.girders[0].calibrated_as == "pads only"
    assert not any("north: pads only would explain" in caution for caution in shown.cautions)
