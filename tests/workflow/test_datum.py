"""A datum that shifted and tilted turns into no settlement that bends the girder, from files to moments."""

from __future__ import annotations

from pathlib import Path

import pytest

from assess import workflow
from assess.results import AssessmentResult, GirderCalibration
from assess.workflow import assessing, beside
from tests.workflow.invented import bridge_text
from tests.workflow.surveyed import GAPS, LEVELS, SEATS, Truth, write_survey

WIDE = '\n[prior]\ndatum_shift_sd = "1 m"\ndatum_tilt_sd = "1 m"\n'
SETTLED = {"pier 1": 4.0, "pier 2": 1.0}
STOOD = Truth(ratios=(0.9, 0.7, 1.1), settled=SETTLED)
MOVED = Truth(ratios=(0.9, 0.7, 1.1), settled=SETTLED, shift=3.0, tilt=2.0)
READ = {
    "seats": (SEATS, ("pads", "settlements", "datum")),
    "seats and girder levels": ((*SEATS, *LEVELS), ("pads", "settlements", "datum")),
    "seats, gaps and girder levels": (
        (*SEATS, *GAPS, *LEVELS),
        ("pads", "sustained", "settlements", "datum"),
    ),
    "gaps and girder levels": ((*GAPS, *LEVELS), ("pads", "sustained", "settlements", "datum")),
}


@pytest.fixture(autouse=True)
def few_draws(monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing here hangs on the draws."""
    monkeypatch.setattr(beside, "DRAWS", 200)
    monkeypatch.setattr(assessing, "DRAWS", 200)


def found(folder: Path, truth: Truth, read: str, prior: str) -> tuple[GirderCalibration, AssessmentResult]:
    folder.mkdir()
    lasting, unknowns = READ[read]
    bridge, url = folder / "bridge.toml", str(folder / "record.sqlite")
    bridge.write_text(bridge_text() + prior)
    workflow.init_record(url)
    workflow.add_bridge(url, bridge)
    workflow.log_visit(url, write_survey(folder, "2024-05-14", truth, lasting, tests=("T1", "T2", "T3")))
    (shown,) = workflow.calibrate(url, "quillmere", options=workflow.Options(unknowns=unknowns))
    return shown.girders[0], workflow.assess(url, "quillmere")


@pytest.mark.parametrize("read", READ)
def test_with_nothing_believed_of_the_datum_its_shift_and_tilt_bend_nothing(
    tmp_path: Path, read: str
) -> None:
    stood, before = found(tmp_path / "stood", STOOD, read, WIDE)
    moved, after = found(tmp_path / "moved", MOVED, read, WIDE)
    first = [one.moment_relevant for one in stood.settlements_mm]
    assert max(abs(one) for one in first) > 1.0
    assert [one.moment_relevant for one in moved.settlements_mm] == pytest.approx(first, abs=1e-6)
    for one, other in zip(before.girders[0].sections, after.girders[0].sections, strict=True):
        assert other.calibrated.permanent == pytest.approx(one.calibrated.permanent, rel=1e-7, abs=1e-5)
        assert other.calibrated.factored == pytest.approx(one.calibrated.factored, rel=1e-7, abs=1e-5)


@pytest.mark.parametrize("read", READ)
def test_with_the_usual_beliefs_the_change_is_within_its_interval(tmp_path: Path, read: str) -> None:
    stood, _ = found(tmp_path / "stood", STOOD, read, "")
    moved, _ = found(tmp_path / "moved", MOVED, read, "")
    for one, other in zip(stood.settlements_mm, moved.settlements_mm, strict=True):
        assert one.moment_relevant_low95 <= other.moment_relevant <= one.moment_relevant_high95


def test_without_a_datum_among_the_unknowns_a_tilt_still_bends_nothing_but_a_shift_is_settlement(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setitem(READ, "as read", ((*SEATS, *GAPS, *LEVELS), ("pads", "sustained", "settlements")))
    stood, _ = found(tmp_path / "stood", STOOD, "as read", "")
    moved, _ = found(tmp_path / "moved", MOVED, "as read", "")
    for one, other in zip(stood.settlements_mm, moved.settlements_mm, strict=True):
        assert other.moment_relevant == pytest.approx(one.moment_relevant, abs=0.01)
        assert 1.9 < other.value - one.value < 4.1
