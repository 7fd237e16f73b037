"""A reading left out by hand: kept with its reason, shown, and out of the fit as if it had never been logged."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from assess import workflow
from assess.workflow import assessing, beside
from db.store import open_record
from tests.workflow.conftest import Said, call, new_record
from tests.workflow.invented import write_visit
from tests.workflow.surveyed import GAPS, LEVELS, SEATS, Truth, write_survey

SLIP = "north/T2/compression/pier 1"
REASON = "gauge knocked by the wagon's brake rod"


@pytest.fixture(autouse=True)
def few_draws(monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing here hangs on the draws."""
    monkeypatch.setattr(beside, "DRAWS", 200)
    monkeypatch.setattr(assessing, "DRAWS", 200)


def without_row(path: Path, start: str) -> Path:
    """Strike the row of the table that begins so, the visit file beside it the same."""
    table = path.with_suffix(".csv")
    rows = table.read_text().splitlines()
    kept = [row for row in rows if not row.startswith(start)]
    assert len(kept) == len(rows) - 1
    table.write_text("\n".join(kept) + "\n")
    return path


def survey(folder: Path) -> Path:
    folder.mkdir()
    truth = Truth(ratios=(0.9, 0.7, 1.1), settled={"pier 1": 4.0})
    return write_survey(folder, "2024-05-14", truth, (*GAPS, *SEATS, *LEVELS), tests=("T1", "T2"))


@pytest.mark.parametrize(
    ("key", "row"),
    [
        (SLIP, "north,T2,compression,pier 1,"),
        ("north/permanent/settlement/pier 2", "north,permanent,settlement,pier 2,"),
        ("north/permanent/deflection/12 m", "north,permanent,deflection,,12,"),
        ("north/T1/deflection/6 m", "north,T1,deflection,,6,"),
    ],
)
def test_the_fit_is_as_if_the_reading_had_never_been_logged(tmp_path: Path, key: str, row: str) -> None:
    path, struck = survey(tmp_path / "whole"), without_row(survey(tmp_path / "struck"), row)
    first, second = new_record(tmp_path, "a.sqlite"), new_record(tmp_path, "b.sqlite")
    workflow.log_visit(first, path)
    workflow.log_visit(second, struck)
    (left,) = workflow.calibrate(first, "quillmere", options=workflow.Options(without=((key, REASON),)))
    (never,) = workflow.calibrate(second, "quillmere")
    (whole,) = workflow.calibrate(first, "quillmere")
    one, other = left.girders[0], never.girders[0]
    assert one.pads == other.pads != whole.girders[0].pads
    assert (one.settlements_mm, one.others, one.chi_square) == (
        other.settlements_mm,
        other.others,
        other.chi_square,
    )
    assert (one.rivals, one.causes, one.degrees_of_freedom) == (
        other.rivals,
        other.causes,
        other.degrees_of_freedom,
    )
    shown = [reading for reading in one.readings if reading.left_out is not None]
    assert [(r.left_out, r.predicted) for r in shown] == [(REASON, None)]


def test_a_seat_level_left_out_does_not_enter_the_assessment_either(tmp_path: Path) -> None:
    truth = Truth(ratios=(0.9, 0.7, 1.1), settled={"pier 1": 8.0})
    key, row = "north/permanent/settlement/pier 1", "north,permanent,settlement,pier 1,"
    used = []
    for name in ("whole", "struck"):
        (tmp_path / name).mkdir()
        path = write_survey(tmp_path / name, "2024-05-14", truth, SEATS, tests=("T1", "T2"))
        url = new_record(tmp_path, f"{name}.sqlite")
        workflow.log_visit(url, path if name == "whole" else without_row(path, row))
        without = ((key, REASON),) if name == "whole" else ()
        workflow.calibrate(url, "quillmere", options=workflow.Options(without=without))
        girder = workflow.assess(url, "quillmere").girders[0]
        used.append([section.calibrated.utilisation for section in girder.sections])
    assert used[0] == pytest.approx(used[1], rel=1e-12)


def test_the_reason_is_kept_and_shown(tmp_path: Path, record: str, bedstone: Callable[..., Said]) -> None:
    workflow.log_visit(record, write_visit(tmp_path, "2024-05-14", [0.9, 0.6, 1.1]))
    said = bedstone("calibrate", "quillmere", "--without", SLIP, "--reason", REASON)
    assert (said.code, said.err) == (0, "")
    text = " ".join(said.out.split())
    assert SLIP in text
    assert REASON in text
    document = bedstone("calibrate", "quillmere", "--without", SLIP, "--reason", REASON, "--json").document
    assert document["girders"][0]["left_out"] == [{"reading": SLIP, "reason": REASON}]
    with open_record(record) as opened:
        kept = opened.results("quillmere", "calibration")[-1]
    assert REASON in str(kept.options)
    assert REASON in str(kept.result)


def test_another_reason_is_another_calibration_in_the_record(record: str, tmp_path: Path) -> None:
    workflow.log_visit(record, write_visit(tmp_path, "2024-05-14", [0.9, 0.6, 1.1]))
    for reason in ("gauge knocked", "gauge read twice"):
        workflow.calibrate(record, "quillmere", options=workflow.Options(without=((SLIP, reason),)))
    with open_record(record) as opened:
        kept = opened.results("quillmere", "calibration")
    assert len({str(sorted(one.options.items())) for one in kept}) == 2


@pytest.mark.parametrize(
    ("key", "reason"),
    [
        ("north/T2/compression/pier 9", "typed"),
        ("pier 1", "typed"),
        ("north/T2/compression/pier\n1", "typed"),
    ],
)
def test_a_reading_that_is_not_there_is_refused_in_one_line(
    tmp_path: Path, record: str, key: str, reason: str
) -> None:
    workflow.log_visit(record, write_visit(tmp_path, "2024-05-14", [0.9, 0.6, 1.1]))
    said = call(record, "calibrate", "quillmere", "--without", key, "--reason", reason)
    assert (said.code, said.out) == (2, "")
    assert said.err.count("\n") == 1
    assert "--without" in said.err
    assert "north/T2/compression/pier 1" in said.err or "north/T1/" in said.err
    with open_record(record) as opened:
        assert opened.results("quillmere", "calibration") == []


@pytest.mark.parametrize(
    "words", [("--without", SLIP), ("--without", SLIP, "--reason", " "), ("--reason", "why")]
)
def test_a_reading_is_not_left_out_without_a_reason(
    tmp_path: Path, record: str, words: tuple[str, ...]
) -> None:
    workflow.log_visit(record, write_visit(tmp_path, "2024-05-14", [0.9, 0.6, 1.1]))
    said = call(record, "calibrate", "quillmere", *words)
    assert (said.code, said.out) == (2, "")
    assert "reason" in said.err
