"""A record of the version before, with a calibration of pads alone, is opened, assessed and followed."""

from __future__ import annotations

import shutil
from pathlib import Path

import pytest

from assess import workflow
from tests.workflow.conftest import call
from tests.workflow.invented import BRIDGE

# what the version before assessed with that calibration: the three sagging, two hogging and six shear sections
UTILISATION = [
    0.27848732136059356, 0.25061131705593936, 0.2860641552768255,
    0.40089200239459705, 0.3658125605501588,
    0.35743955827859836, 0.4608958700765377, 0.46757737110970365,
    0.45875202996539743, 0.4538899902439108, 0.363362381239858,
]  # fmt: skip
STIFFNESS = {"west abutment": 104385.53838654999, "pier 1": 345291.71938503516, "pier 2": 219111.8045122689}


@pytest.fixture
def old(tmp_path: Path) -> str:
    location = tmp_path / "old.sqlite"
    shutil.copy(BRIDGE.with_name("record-0001-calibrated.sqlite"), location)
    return str(location)


def test_a_calibration_kept_before_is_assessed_to_the_same_utilisations(old: str) -> None:
    girder = workflow.assess(old, "quillmere").girders[0]
    assert [one.calibrated.utilisation for one in girder.sections] == pytest.approx(UTILISATION, rel=1e-9)
    assert girder.rivals == []
    assert all(one.calibrated.worst_rival is None for one in girder.sections)


def test_the_band_of_a_calibration_kept_before_is_drawn_from_its_pads(old: str) -> None:
    girder = workflow.assess(old, "quillmere").girders[0]
    hogging = next(one for one in girder.sections if one.support == "pier 1" and one.effect == "hogging")
    assert hogging.calibrated.utilisation_low95 == pytest.approx(0.3993181063822634, rel=1e-9)
    assert hogging.calibrated.utilisation_high95 == pytest.approx(0.4024449702654212, rel=1e-9)


def test_the_old_visit_calibrated_anew_gives_the_same_pads(old: str) -> None:
    (shown,) = workflow.calibrate(old, "quillmere")
    found = {pad.support: pad.stiffness_kN_per_m for pad in shown.girders[0].pads}
    assert found == pytest.approx(STIFFNESS, rel=1e-6)
    assert shown.girders[0].unknowns == ["pads", "settlements"]


@pytest.mark.parametrize("words", [("assess",), ("trend",), ("visit", "list")])
def test_every_command_reads_a_record_of_the_version_before(old: str, words: tuple[str, ...]) -> None:
    said = call(old, *words, "quillmere")
    assert (said.code, said.err) == (0, "")
