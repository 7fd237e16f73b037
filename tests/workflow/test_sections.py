"""Sections from plates and their losses, through file, record, workflow, command line and report."""

from __future__ import annotations

import datetime as dt
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from assess import workflow
from assess.capacity import rows
from assess.report import page
from assess.workflow import assessing, trending
from assess.workflow.sections import EFFECTS, section_on
from db.exchange import parse_bridge
from tests.workflow.ashbeck import added, log, model, text_with
from tests.workflow.conftest import call
from tests.workflow.invented import BRIDGE

STEADY = [0.95, 0.85, 0.60, 0.90]
MID = 'id = "mid"\nE = "205 GPa"\nyield_strength = "235 MPa"\n'
WEB_LOSS = '  plate = "web"\n  faces = 2\n  depth = "1 mm"\n  visit = 2022-05-16\n'


@pytest.fixture(autouse=True)
def few_draws(monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing here hangs on the number of draws."""
    monkeypatch.setattr(trending, "FORECAST_DRAWS", 60)
    monkeypatch.setattr(rows, "_SAMPLE", 3)
    monkeypatch.setattr(assessing, "DRAWS", 200)


def shown(url: str, *words: str) -> dict[str, dict[str, Any]]:
    document: Any = call(url, "bridge", "show", "ashbeck", *words, "--json").document
    return {section["id"]: section for section in document["sections"]}


def second_moment(top: float, bottom: float, web: float) -> tuple[float, float]:
    """I (m4) and centroid (m) of the middle section by hand: flange thicknesses left and web width, mm.

    Flanges wear on both faces alike, so that their middles stay at 1180 and 20 mm.
    """
    parts = [(400.0 * top, 1180.0, top), (web * 1120.0, 600.0, 1120.0), (400.0 * bottom, 20.0, bottom)]
    area = sum(a for a, _, _ in parts)
    middle = sum(a * y for a, y, _ in parts) / area
    return 1e-12 * sum(a * (h * h / 12.0 + (y - middle) ** 2) for a, y, h in parts), 1e-3 * middle


def test_a_bridge_is_shown_as_built_and_with_its_losses(tmp_path: Path) -> None:
    url = added(tmp_path)
    new, worn = shown(url, "--visit", "2017-01-01")["mid"], shown(url)["mid"]
    assert new["second_moment_m4"] == pytest.approx(second_moment(40.0, 40.0, 14.0)[0])
    second, middle = second_moment(40.0, 34.0, 12.0)
    assert worn["second_moment_m4"] == pytest.approx(second)
    assert worn["elastic_modulus_bottom_m3"] == pytest.approx(second / (middle - 0.003))
    assert worn["sagging_capacity_kNm"] == pytest.approx(235e3 * second / (middle - 0.003))
    assert worn["shear_capacity_kN"] == pytest.approx(235e3 * 0.012 * 1.12 / np.sqrt(3.0))
    assert worn["area_m2"] == pytest.approx(0.4 * 0.074 + 0.012 * 1.12)
    assert shown(url, "--visit", "2017-01-01")["pier"] == shown(url)["pier"]


def test_the_newest_measurement_of_a_plate_stands_in_the_place_of_the_older(tmp_path: Path) -> None:
    url = added(tmp_path)
    assert shown(url, "--visit", "2018-05-14")["mid"]["second_moment_m4"] == pytest.approx(
        second_moment(40, 38, 14)[0]
    )
    assert shown(url, "--visit", "2022-05-15")["mid"]["second_moment_m4"] == pytest.approx(
        second_moment(40, 38, 14)[0]
    )
    newest = shown(url, "--visit", "2022-05-16")["mid"]
    assert newest["second_moment_m4"] == pytest.approx(second_moment(40, 34, 12)[0])
    assert newest == shown(url)["mid"]


def test_the_lower_of_a_given_capacity_and_that_of_the_plates_governs(tmp_path: Path) -> None:
    url = added(tmp_path)
    assert shown(url)["pier"]["shear_capacity_kN"] == 1700.0
    told = call(url, "bridge", "show", "ashbeck").out
    assert next(line for line in told.splitlines() if line.startswith("shear     kN     1700")).endswith(
        "as given"
    )
    high = added(tmp_path, ('shear_capacity = "1700 kN"', 'shear_capacity = "9000 kN"'))
    assert shown(high)["pier"]["shear_capacity_kN"] == pytest.approx(235e3 * 0.014 * 1.12 / np.sqrt(3.0))


def test_a_bridge_without_plates_is_shown_by_its_numbers(tmp_path: Path) -> None:
    url = str(tmp_path / "record.sqlite")
    workflow.init_record(url)
    workflow.add_bridge(url, BRIDGE)
    document: Any = call(url, "bridge", "show", "quillmere", "--json").document
    mid = document["sections"][0]
    assert (mid["area_m2"], mid["plastic_modulus_m3"]) == (None, None)
    assert (mid["second_moment_m4"], mid["sagging_capacity_kNm"]) == (pytest.approx(0.0118), 5100.0)
    told = call(url, "bridge", "show", "quillmere").out
    assert told.splitlines()[0] == "Bridge quillmere"
    row = next(line for line in told.splitlines() if line.startswith("sagging   kN m   5100"))
    assert row.split() == ["sagging", "kN", "m", "5100", "5100", "no", "plates", "as", "given"]
    assert "Losses" not in told


def utilisations(url: str, *words: str) -> dict[tuple[Any, ...], dict[str, Any]]:
    document: Any = call(url, "assess", "ashbeck", *words, "--json").document
    (girder,) = document["girders"]
    return {(s["effect"], s["span"], s["support"]): s["calibrated"] for s in girder["sections"]}


@pytest.fixture(scope="module")
def visited(tmp_path_factory: pytest.TempPathFactory) -> str:
    """Visits before the losses, between them, and after."""
    folder = tmp_path_factory.mktemp("ashbeck")
    url = added(folder)
    for date in ("2014-05-12", "2018-05-14", "2024-05-14"):
        log(url, folder, date, STEADY, seed=None)
    assert call(url, "calibrate", "ashbeck", "--all").code == 0
    return url


def test_a_visit_is_calibrated_with_the_losses_of_its_day(visited: str) -> None:
    """The readings are made with them: with the section as built the pads would come out otherwise."""
    document: Any = call(visited, "calibrate", "ashbeck", "--all", "--json").document
    for visit in document["visits"]:
        found = [pad["ratio_to_nominal"] for pad in visit["girders"][0]["pads"]]
        assert found == pytest.approx(STEADY, rel=0.02), visit["visit"]
        assert visit["girders"][0]["chi_square"] < 0.1


def test_an_assessment_of_a_day_has_the_losses_of_that_day(visited: str) -> None:
    before, between, after = (
        utilisations(visited, "--visit", d) for d in ("2014-05-12", "2018-05-14", "2024-05-14")
    )
    span = ("sagging", 1, None)
    assert before[span]["capacity"] == pytest.approx(235e3 * second_moment(40, 40, 14)[0] / 0.6, rel=1e-6)
    assert before[span]["capacity"] > between[span]["capacity"] > after[span]["capacity"]
    assert before[span]["utilisation"] < between[span]["utilisation"] < after[span]["utilisation"]
    shear = ("shear", 1, "west abutment")
    assert before[shear]["capacity"] == between[shear]["capacity"] > after[shear]["capacity"]
    assert utilisations(visited)[span]["capacity"] == after[span]["capacity"]


def test_losses_are_said_and_carried_forward(visited: str) -> None:
    document: Any = call(visited, "assess", "ashbeck", "--json").document
    told = 'Section "mid": stiffness and capacity hold the losses measured up to 2022-05-16'
    assert [c for c in document["cautions"] if c.startswith(told)]
    early: Any = call(visited, "assess", "ashbeck", "--visit", "2014-05-12", "--json").document
    assert not [c for c in early["cautions"] if "hold the losses" in c]
    assert [c for c in early["cautions"] if c.startswith("Capacities from plates are strength times section")]
    trend: Any = call(visited, "trend", "ashbeck", "--json").document
    assert [c for c in trend["cautions"] if c.startswith('Losses of the plates (section "mid") are carried')]
    losses = {one["plate"]: one for one in trend["losses"]}
    assert losses["web"]["loss_mm"] == pytest.approx(2.0)
    assert losses["web"]["low95"] < losses["web"]["rate_mm_per_year"] < losses["web"]["high95"]
    fans = [s for s in trend["spans"] if s["fan"] is not None and s["span"] == 1 and s["effect"] == "sagging"]
    assert fans[0]["fan"]["median"][-1] > fans[0]["fan"]["median"][0]
    now = {(s["effect"], s["span"]): s["utilisation_now"] for s in trend["spans"]}
    assert now["sagging", 1] == pytest.approx(
        utilisations(visited)["sagging", 1, None]["utilisation"], rel=0.01
    )


def test_the_report_draws_every_section_from_plates(visited: str) -> None:
    html = page.render(workflow.report_view(visited, "ashbeck"))
    for told in (
        "Section mid: losses measured: web 2 × 1 mm (2022-05-16); bottom flange 1 × 6 mm (2022-05-16).",
        "Section pier: no loss measured.",
        "400 × 40 mm, lost 1 × 6 mm",
        "Capacities of section pier",
        "top cover plate 360 × 12 mm, lower edge at 1212 mm",
        "holes, width in all: 44 mm in top flange",
    ):
        assert told in html, told


@pytest.mark.parametrize(
    ("change", "told"),
    [
        (('depth = "6 mm"', 'depth = "40 mm"'), "loss 2, depth: plate"),
        (('depth = "1 mm"', 'depth = "7 mm"'), "a loss of 14 mm takes the whole plate, 14 mm thick"),
        (('depth = "6 mm"', 'depth = "6"'), "loss 2, depth:"),
        (("visit = 2022-05-16", "visit = 2122-05-16"), "lies in the future"),
        (("visit = 2018-05-14", "visit = 1980-05-14"), "before the bridge was built"),
        (('plate = "web"', 'plate = "wep"'), 'there is no plate "wep" (did you mean "web"'),
    ],
)
def test_a_loss_that_cannot_be_is_one_line_and_nothing_is_kept(
    tmp_path: Path, change: tuple[str, str], told: str
) -> None:
    url, path = str(tmp_path / "record.sqlite"), tmp_path / "bridge.toml"
    workflow.init_record(url)
    path.write_text(text_with(change))
    said = call(url, "bridge", "add", str(path))
    assert (said.code, said.out) == (2, "")
    assert said.err.count("\n") == 1
    assert f'{path}, section "mid"' in said.err
    assert told in said.err
    assert call(url, "bridge", "list", "--json").document == {"bridges": []}


def test_a_new_loss_is_a_new_revision_and_the_older_day_stands(visited: str, tmp_path: Path) -> None:
    url = added(tmp_path)
    log(url, tmp_path, "2018-05-14", STEADY, seed=None)
    call(url, "calibrate", "ashbeck")
    before = utilisations(url, "--visit", "2018-05-14")
    more = (
        WEB_LOSS
        + '  [[section.loss]]\n  plate = "top flange"\n  faces = 2\n  depth = "4 mm"\n  visit = 2024-05-14\n'
    )
    added(tmp_path, (WEB_LOSS, more))
    assert utilisations(url, "--visit", "2018-05-14") == before
    assert shown(url)["mid"]["sagging_capacity_kNm"] < 4000.0


# capacity falls with loss ----------------------------------------------------------------------------

LOSS = '  [[section.loss]]\n  plate = "{}"\n  faces = {}\n  depth = "{} mm"\n  visit = {}\n'
DAYS = [dt.date(2000 + i, 5, 14) for i in range(4)]
PLATES = {
    "top cover plate": 12.0,
    "top flange": 40.0,
    "web": 14.0,
    "bottom flange": 40.0,
    "bottom cover plate": 12.0,
}


@st.composite
def wear(draw: st.DrawFn) -> str:
    """Measurements of the pier section's plates, each at least as deep as the one before."""
    text = ""
    for plate, thick in PLATES.items():
        faces = draw(st.integers(1, 2))
        depths = sorted(draw(st.lists(st.floats(0.1, 0.98 * thick / faces), max_size=len(DAYS))))
        for depth, day in zip(depths, DAYS, strict=False):
            text += LOSS.format(plate, faces, f"{depth:.9f}", day)
    return text


@settings(max_examples=60, deadline=None, derandomize=True)
@given(wear(), st.sampled_from(["elastic", "plastic"]))
def test_capacity_and_stiffness_fall_with_every_loss(losses: str, method: str) -> None:
    hole = '  [[section.hole]]\n  plate = "top flange"\n'
    text = text_with(
        (hole, losses + hole),
        ('id = "pier"\nE = "205 GPa"\n', f'id = "pier"\nE = "205 GPa"\nmoment_resistance = "{method}"\n'),
        ('shear_capacity = "1700 kN"\n', ""),
    )
    section = parse_bridge(text, file="bridge.toml").section("pier")
    states = [section_on(section, day) for day in (dt.date(1999, 1, 1), *DAYS)]
    slack = 1.0 + 1e-9
    for old, new in pairwise(states):
        assert new.second_moment <= old.second_moment * slack
        assert new.shear_area is not None
        assert old.shear_area is not None
        assert new.shear_area <= old.shear_area * slack
        for effect in EFFECTS:
            before, after = old.capacities[effect].value, new.capacities[effect].value
            assert before is not None
            assert after is not None
            assert after <= before * slack, effect
    assert (section_on(section, None).second_moment < states[0].second_moment) is bool(losses)


def test_the_girder_softens_with_its_losses() -> None:
    new, worn = model(as_of=dt.date(2017, 1, 1)), model()
    assert worn.flexural_at(5.0) < new.flexural_at(5.0)
    assert worn.flexural_at(12.0) == new.flexural_at(12.0)
