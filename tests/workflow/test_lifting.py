"""Test states in which the girder leaves a pad: they are left out of the fit, and said to be."""

from __future__ import annotations

from pathlib import Path

import pytest

from assess import workflow
from assess.results import GirderCalibration
from db.errors import BedstoneError
from tests.workflow.conftest import call
from tests.workflow.invented import bridge_text, write_visit

RATIOS = (0.9, 0.6, 1.1)
LIGHT = (('uniform = "9.5 kN/m"', 'uniform = "1 kN/m"'), ('uniform = "27 kN/m"', 'uniform = "1.5 kN/m"'))
STATE = "T3"  # most of the wagon in the middle span, where the west abutment comes up


def light_bridge(tmp_path: Path, *changes: tuple[str, str]) -> Path:
    text = bridge_text()
    for old, new in (*LIGHT, *changes):
        assert old in text
        text = text.replace(old, new, 1)
    path = tmp_path / "light.toml"
    path.write_text(text)
    return path


@pytest.fixture
def light(tmp_path: Path) -> str:
    url = str(tmp_path / "record.sqlite")
    workflow.init_record(url)
    workflow.add_bridge(url, light_bridge(tmp_path))
    return url


def north(url: str, path: Path) -> tuple[GirderCalibration, str]:
    workflow.log_visit(url, path)
    (result,) = workflow.calibrate(url, "quillmere")
    return result.girders[0], " ".join(result.cautions)


def test_a_state_that_lifts_is_shown_without_a_fit_and_named(light: str, tmp_path: Path) -> None:
    shown, said = north(light, write_visit(tmp_path, "2024-05-14", RATIOS, seed=None))
    off = [r for r in shown.readings if r.predicted is None]
    assert {r.state for r in off} == {STATE}
    assert len(off) == 6
    assert all(r.standardised_residual is None and not r.suspect for r in off)
    why = "north: left out of the fit, because the girder is off a pad under permanent load and the vehicle: "
    assert f'{why}{STATE} (lifts at "west abutment")' in said
    # six readings in each of the other two states, three pads
    assert shown.degrees_of_freedom == 9
    assert [pad.ratio_to_nominal for pad in shown.pads] == pytest.approx(RATIOS, rel=0.03)


def test_a_slip_in_a_state_that_is_left_out_moves_nothing(light: str, tmp_path: Path) -> None:
    path = write_visit(tmp_path, "2024-05-14", RATIOS, seed=None)
    before, _ = north(light, path)
    table = tmp_path / "2024-05-14-mm.csv"
    rows = table.read_text().splitlines()
    slipped = [row.replace(row.split(",")[5], "9.99") if f",{STATE}," in row else row for row in rows]
    table.write_text("\n".join(slipped) + "\n")
    other = str(tmp_path / "other.sqlite")
    workflow.init_record(other)
    workflow.add_bridge(other, light_bridge(tmp_path))
    after, _ = north(other, path)
    assert [p.stiffness_kN_per_m for p in after.pads] == [p.stiffness_kN_per_m for p in before.pads]


def test_what_is_held_down_is_fitted(tmp_path: Path) -> None:
    url = str(tmp_path / "record.sqlite")
    workflow.init_record(url)
    tied = ('stiffness = "150 kN/mm"', 'stiffness = "150 kN/mm"\n  hold_down = true')
    workflow.add_bridge(url, light_bridge(tmp_path, tied))
    shown, said = north(url, write_visit(tmp_path, "2024-05-14", RATIOS, seed=None))
    assert all(r.predicted is not None for r in shown.readings)
    assert "left out of the fit" not in said


def test_a_girder_without_permanent_loads_is_fitted_and_cautioned(tmp_path: Path) -> None:
    text = bridge_text()
    start, end = text.index("  [[girder.permanent]]"), text.index("[[vehicle]]")
    path = tmp_path / "bare.toml"
    path.write_text(text[:start] + text[end:])
    url = str(tmp_path / "record.sqlite")
    workflow.init_record(url)
    workflow.add_bridge(url, path)
    shown, said = north(url, write_visit(tmp_path, "2024-05-14", RATIOS, seed=None))
    assert all(r.predicted is not None for r in shown.readings)
    assert "north: the bridge file gives this girder no permanent load" in said


def test_a_visit_of_which_nothing_is_left_is_refused_by_name(light: str, tmp_path: Path) -> None:
    workflow.log_visit(light, write_visit(tmp_path, "2024-05-14", RATIOS, states=(STATE,)))
    with pytest.raises(BedstoneError, match="no reading is left to fit") as caught:
        workflow.calibrate(light, "quillmere")
    assert 'girder "north", visit 2024-05-14' in str(caught.value)
    # among other visits it is only said
    workflow.log_visit(light, write_visit(tmp_path, "2025-05-14", RATIOS))
    first, second = workflow.calibrate(light, "quillmere", every=True)
    assert first.girders[0].pads == [] and len(second.girders[0].pads) == 3
    assert "no reading is left, and its pads are not calibrated" in " ".join(first.cautions)


def test_a_seat_that_dropped_away_is_known_before_the_vehicle_comes(record: str, tmp_path: Path) -> None:
    workflow.log_visit(record, write_visit(tmp_path, "2024-05-14", RATIOS, settled={"west abutment": 120.0}))
    with pytest.raises(BedstoneError, match="off a pad"):
        workflow.calibrate(record, "quillmere")


def test_tables_and_report_say_what_is_not_fitted(light: str, tmp_path: Path) -> None:
    workflow.log_visit(light, write_visit(tmp_path, "2024-05-14", RATIOS))
    out = call(light, "calibrate", "quillmere", "--readings")
    assert "not fitted" in out.out
    assert "12 readings, 6 left out" in out.out
    page = tmp_path / "page.html"
    call(light, "report", "quillmere", "-o", str(page))
    text = page.read_text()
    assert "not fitted: the girder is off a pad" in text
    assert "lifts" in text
