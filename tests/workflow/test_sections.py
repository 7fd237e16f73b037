"""Sections from plates through files, record, assessment, trend and report; losses as they are measured."""

from __future__ import annotations

import datetime as dt
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from assess import workflow
from assess.workflow.building import GirderModel
from db.errors import BedstoneError
from db.exchange import parse_bridge
from tests.workflow.conftest import call
from tests.workflow.invented import bridge_text, write_visit

PLATES = """
yield_strength = "250 MPa"
  [[section.plate]]
  name = "top flange"
  width = "400 mm"
  height = "30 mm"
  [[section.plate]]
  name = "web"
  width = "12 mm"
  height = "1150 mm"
  [[section.plate]]
  name = "bottom flange"
  width = "400 mm"
  height = "30 mm"
"""
LOSS = '  [[section.loss]]\n  plate = "{}"\n  faces = {}\n  depth = "{} mm"\n  visit = {}\n'


def text_with(*losses: str, given_: str = "", method: str = "elastic") -> str:
    """The contract's bridge with its section "mid" from plates; `given_` are lines of resistances beside them."""
    text = bridge_text()
    start, end = text.index('I = "0.0118 m^4"'), text.index("[[section]]", text.index('id = "mid"'))
    how = f'moment_resistance = "{method}"\n'
    return f"{text[:start]}{given_}{how}{PLATES}{''.join(losses)}\n{text[end:]}"


def added(folder: Path, text: str) -> str:
    folder.mkdir(exist_ok=True)
    path, url = folder / "own.toml", str(folder / "own.sqlite")
    path.write_text(text)
    workflow.init_record(url)
    workflow.add_bridge(url, path)
    return url


def shown(url: str, *words: str) -> dict[str, Any]:
    document = call(url, "bridge", "show", "quillmere", *words, "--json").document
    assert list(document) == ["bridge", "sections", "girders"]
    section: dict[str, Any] = document["sections"][0]
    return section


SECTION_KEYS = [
    "id",
    "area_m2",
    "second_moment_m4",
    "elastic_modulus_top_m3",
    "elastic_modulus_bottom_m3",
    "plastic_modulus_m3",
    "sagging_capacity_kNm",
    "hogging_capacity_kNm",
    "shear_capacity_kN",
]


def test_bridge_show_gives_the_numbers_of_the_plates(tmp_path: Path) -> None:
    """By hand: two flanges 400 x 30 and a web 12 x 1150, yield 250 MPa; shear by the web at yield / sqrt(3)."""
    section = shown(added(tmp_path, text_with()))
    assert list(section) == SECTION_KEYS
    second = 0.012 * 1.15**3 / 12.0 + 2.0 * (0.4 * 0.03**3 / 12.0 + 0.4 * 0.03 * 0.59**2)
    plastic = 2.0 * 0.4 * 0.03 * 0.59 + 0.012 * 1.15**2 / 4.0
    assert section["area_m2"] == pytest.approx(2.0 * 0.012 + 0.0138)
    assert section["second_moment_m4"] == pytest.approx(second)
    assert section["elastic_modulus_top_m3"] == pytest.approx(second / 0.605)
    assert section["plastic_modulus_m3"] == pytest.approx(plastic)
    assert section["sagging_capacity_kNm"] == pytest.approx(250e3 * second / 0.605)
    assert section["shear_capacity_kN"] == pytest.approx(250e3 / 3**0.5 * 0.0138)


def test_a_section_without_plates_has_no_area_and_keeps_its_resistances(tmp_path: Path) -> None:
    document = call(added(tmp_path, bridge_text()), "bridge", "show", "quillmere", "--json").document
    section = document["sections"][0]
    assert section["area_m2"] is None
    assert section["plastic_modulus_m3"] is None
    assert section["second_moment_m4"] == pytest.approx(0.0118)
    assert section["sagging_capacity_kNm"] == pytest.approx(5100.0)


def test_the_lower_of_given_and_plates_governs_and_is_said(tmp_path: Path) -> None:
    plates = shown(added(tmp_path / "plates", text_with()))["sagging_capacity_kNm"]
    low = added(tmp_path / "low", text_with(given_='sagging_capacity = "3000 kN m"\n'))
    assert shown(low)["sagging_capacity_kNm"] == pytest.approx(3000.0)
    assert "as given" in call(low, "bridge", "show", "quillmere").out
    high = added(tmp_path / "high", text_with(given_='sagging_capacity = "9000 kN m"\n'))
    assert shown(high)["sagging_capacity_kNm"] == pytest.approx(plates)


def test_a_plastic_moment_is_yield_times_the_plastic_modulus(tmp_path: Path) -> None:
    section = shown(added(tmp_path, text_with(method="plastic")))
    assert section["sagging_capacity_kNm"] == pytest.approx(250e3 * section["plastic_modulus_m3"])


# losses -------------------------------------------------------------------------------------------


def test_capacity_and_stiffness_change_on_the_day_a_loss_was_measured(tmp_path: Path) -> None:
    url = added(tmp_path, text_with(LOSS.format("bottom flange", 1, 4, "2022-06-01")))
    visits = ("2020-06-01", "2022-06-01")
    for date in visits:
        assert call(url, "visit", "log", str(write_visit(tmp_path, date, [1.0, 1.0, 1.0]))).code == 0
        assert call(url, "calibrate", "quillmere", "--visit", date).code == 0
    before, after = (
        call(url, "assess", "quillmere", "--visit", date, "--json").document["girders"][0]["sections"][0]
        for date in visits
    )
    assert after["calibrated"]["capacity"] < 0.95 * before["calibrated"]["capacity"]
    assert after["calibrated"]["utilisation"] > before["calibrated"]["utilisation"]
    assert shown(url, "--visit", "2020-06-01")["second_moment_m4"] > shown(url)["second_moment_m4"]
    now = call(url, "assess", "quillmere", "--json").document
    assert now["girders"][0]["sections"][0]["calibrated"]["capacity"] == after["calibrated"]["capacity"]
    assert any("wear since then is not in them" in one for one in now["cautions"])


def test_each_visit_is_calibrated_with_the_section_of_its_day(tmp_path: Path) -> None:
    bridge = parse_bridge(text_with(LOSS.format("web", 2, 3, "2022-06-01")), file="own.toml")
    early = GirderModel(bridge, bridge.girders[0], dt.date(2020, 1, 1))
    late = GirderModel(bridge, bridge.girders[0], dt.date(2023, 1, 1))
    assert late.flexural_at(1.0) < early.flexural_at(1.0)


@settings(max_examples=60)
@given(
    plate=st.sampled_from(["top flange", "web", "bottom flange"]),
    faces=st.sampled_from([1, 2]),
    depth=st.integers(1, 45),
    more=st.integers(1, 10),
    method=st.sampled_from(["elastic", "plastic"]),
)
def test_capacity_falls_with_every_tenth_of_a_millimetre_lost(
    plate: str, faces: int, depth: int, more: int, method: str
) -> None:
    def capacities(tenths: int) -> list[float]:
        text = text_with(LOSS.format(plate, faces, tenths / 10.0, "2022-06-01"), method=method)
        model = GirderModel(bridge := parse_bridge(text, file="own.toml"), bridge.girders[0])
        state = model.section_states["mid"]
        return [c.value for c in state.capacities.values() if c.value is not None] + [state.second_moment]

    worn, worse = capacities(depth), capacities(depth + more)
    assert all(b <= a for a, b in zip(worn, worse, strict=True))
    assert any(b < a for a, b in zip(worn, worse, strict=True))


def test_a_loss_thicker_than_its_plate_is_refused_and_nothing_is_kept(tmp_path: Path) -> None:
    path, url = tmp_path / "own.toml", str(tmp_path / "own.sqlite")
    path.write_text(text_with(LOSS.format("web", 2, 7, "2022-06-01")))
    workflow.init_record(url)
    with pytest.raises(BedstoneError) as caught:
        workflow.add_bridge(url, path)
    assert "takes the whole plate, 12 mm thick" in str(caught.value)
    assert workflow.list_bridges(url) == []


def test_the_report_draws_the_section_and_the_forecast_says_that_losses_stand_still(tmp_path: Path) -> None:
    url = added(tmp_path, text_with(LOSS.format("bottom flange", 1, 4, "2022-06-01")))
    for date in ("2020-06-01", "2023-06-01"):
        assert call(url, "visit", "log", str(write_visit(tmp_path, date, [1.0, 1.0, 1.0]))).code == 0
    assert call(url, "calibrate", "quillmere", "--all").code == 0
    said = call(url, "trend", "quillmere", "--json").document["cautions"]
    assert any("held at their last measured values" in one for one in said)
    page = tmp_path / "page.html"
    assert call(url, "report", "quillmere", "-o", str(page)).code == 0
    html = page.read_text()
    assert "Section mid" in html
    assert "losses measured" in html
    assert "equal-area axis" in html
