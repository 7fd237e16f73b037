"""Pads from geometry through files, record, calibration, assessment, trend and report."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest

from assess import workflow
from assess.pad import cold_curve
from assess.workflow.building import GirderModel
from db.errors import BedstoneError
from db.exchange import parse_bridge
from tests.workflow.conftest import call
from tests.workflow.invented import bridge_text, write_visit


def pad(
    batch: str = "", *, rows: str = "", rubber: str = 'shear_modulus = "0.9 MPa"', layers: int = 13
) -> str:
    """A table of geometry; 13 layers of 11 mm under 250 x 300 mm give about 150 kN/mm."""
    named = f'batch = "{batch}"\n' if batch else ""
    return (
        f'[girder.support.pad]\nshape = "rectangular"\nlength = "250 mm"\nwidth = "300 mm"\nside_cover = "4 mm"\n'
        f'layers = {layers}\nlayer_thickness = "11 mm"\ntop_bottom_cover = "2.5 mm"\n{rubber}\n{named}{rows}\n'
    )


def text_with(*pads: str) -> str:
    """The contract's bridge with its first pads from geometry."""
    text = bridge_text()
    for stiffness, table in zip(("150", "220", "220"), pads, strict=False):
        old = f'  stiffness = "{stiffness} kN/mm"'
        at = text.index(old)
        end = text.index("stiffness_cv = 0.3", at) + len("stiffness_cv = 0.3")
        text = text[:at] + table + text[end:]
    return text


def added(folder: Path, text: str) -> str:
    path, url = folder / "own.toml", str(folder / "own.sqlite")
    path.write_text(text)
    workflow.init_record(url)
    workflow.add_bridge(url, path)
    return url


def model(text: str) -> GirderModel:
    bridge = parse_bridge(text, file="own.toml")
    return GirderModel(bridge, bridge.girders[0])


def test_bridge_show_gives_the_nominal_stiffness_and_its_scatter(tmp_path: Path) -> None:
    document = call(added(tmp_path, text_with(pad())), "bridge", "show", "quillmere", "--json").document
    first, second, _, last = document["girders"][0]["supports"]
    assert list(first) == ["support", "kind", "x_m", "nominal_kN_per_m", "cv"]
    made = model(text_with(pad())).pad_models[0]
    assert made is not None
    assert first["nominal_kN_per_m"] == pytest.approx(made.stiffness)
    assert 0.2 < first["cv"] < 0.3  # formula and bedding 0.20 (common practice), G and height on top
    assert (second["nominal_kN_per_m"], second["cv"]) == (pytest.approx(220e3), 0.3)
    assert (last["kind"], last["nominal_kN_per_m"], last["cv"], last["x_m"]) == ("pin", None, None, 39.0)


def test_a_given_stiffness_comes_before_the_geometry_and_a_caution_compares_them(tmp_path: Path) -> None:
    text = bridge_text().replace('  stiffness = "150 kN/mm"\n', '  stiffness = "150 kN/mm"\n', 1)
    at = text.index("stiffness_cv = 0.3") + len("stiffness_cv = 0.3")
    text = f"{text[:at]}\n{pad(layers=4)}{text[at:]}"
    url = added(tmp_path, text)
    shown = call(url, "bridge", "show", "quillmere", "--json").document["girders"][0]["supports"][0]
    assert (shown["nominal_kN_per_m"], shown["cv"]) == (150e3, 0.3)
    said = call(url, "assess", "quillmere", "--json").document["cautions"]
    assert any("one of the two is likely wrong" in one for one in said)


# batches ------------------------------------------------------------------------------------------


def calibrated(folder: Path, text: str) -> dict[str, Any]:
    folder.mkdir(exist_ok=True)
    url = added(folder, text)
    assert call(url, "visit", "log", str(write_visit(folder, "2024-05-14", [0.7, 0.7, 0.7]))).code == 0
    document: dict[str, Any] = call(url, "calibrate", "quillmere", "--json").document
    return {p["support"]: p for p in document["girders"][0]["pads"]} | {"cautions": document["cautions"]}


def test_pads_of_one_batch_share_a_prior() -> None:
    alone, together = model(text_with(pad(), pad())).prior, model(text_with(pad("a"), pad("a"))).prior
    assert alone.correlation is None
    assert together.correlation is not None
    assert together.correlation[0, 1] == 0.6  # default of the data file
    assert together.correlation[0, 2] == 0.0
    own = model(text_with(pad("a", rows="batch_correlation = 0.3"), pad("a"))).prior
    assert own.correlation is not None
    assert own.correlation[0, 1] == 0.3


def test_two_correlations_of_one_batch_are_refused(tmp_path: Path) -> None:
    text = text_with(pad("a", rows="batch_correlation = 0.3"), pad("a", rows="batch_correlation = 0.4"))
    path, url = tmp_path / "own.toml", str(tmp_path / "own.sqlite")
    path.write_text(text)
    workflow.init_record(url)
    with pytest.raises(BedstoneError, match=r'batch "a" give the correlations 0.3 and 0.4'):
        workflow.add_bridge(url, path)
    assert workflow.list_bridges(url) == []


def test_a_batch_says_that_it_narrows_by_assumption(tmp_path: Path) -> None:
    found = calibrated(tmp_path / "together", text_with(pad("a"), pad("a")))
    assert any(
        'pads of one batch share a prior (batch, pads and correlation: "a"' in one
        for one in found["cautions"]
    )
    bare = calibrated(tmp_path / "alone", text_with(pad(), pad()))
    assert not any("of one batch" in one for one in bare["cautions"])
    # what a sister tells by assumption does not count as read
    assert found["west abutment"]["data_share"] <= bare["west abutment"]["data_share"] + 0.05


# limits -------------------------------------------------------------------------------------------


def checks(folder: Path, text: str) -> tuple[dict[str, Any], list[str]]:
    folder.mkdir(exist_ok=True)
    document = call(added(folder, text), "assess", "quillmere", "--json").document
    return document["girders"][0], document["cautions"]


def test_pressures_are_reactions_over_the_plan_of_the_formula(tmp_path: Path) -> None:
    girder, _ = checks(tmp_path, text_with(pad(), pad()))
    assert [p["support"] for p in girder["pads"]] == ["west abutment", "pier 1"]
    for one in girder["pads"]:
        reaction = next(r for r in girder["reactions"] if r["support"] == one["support"])
        area = 1e3 * 0.242 * 0.292
        assert one["permanent_pressure_MPa"] == pytest.approx(reaction["calibrated_permanent_kN"] / area)
        total = reaction["calibrated_permanent_kN"] + reaction["calibrated_live_max_kN"]
        assert one["total_pressure_MPa"] == pytest.approx(total / area)
        assert one["status"] in {"within", "watch", "over"}
        assert all(limit["source"] for limit in one["limits"])


def test_a_pad_over_the_owners_limit_is_cautioned(tmp_path: Path) -> None:
    own = '[girder.support.pad.limit]\ntotal_pressure = "4 MPa"'
    girder, said = checks(tmp_path, text_with(pad(), pad(rows=own)))
    over = girder["pads"][1]
    assert over["status"] == "over"
    assert any("pier 1" in one and "over its limit of total pressure" in one for one in said)


def test_a_loose_pad_under_little_pressure_is_cautioned_and_a_fixed_one_is_not(tmp_path: Path) -> None:
    _, loose = checks(tmp_path / "loose", text_with(pad()))
    _, fixed = checks(tmp_path / "fixed", text_with(pad(rows="fixed = true")))
    assert any("may slide or walk out" in one for one in loose)
    assert not any("may slide or walk out" in one for one in fixed)


def test_a_pad_by_hardness_has_its_creep(tmp_path: Path) -> None:
    girder, _ = checks(tmp_path, text_with(pad(rubber="hardness = 60")))
    one = girder["pads"][0]
    assert one["creep_share_25_years"] == pytest.approx(0.35)
    assert one["creep_compression_25_years_mm"] == pytest.approx(0.35 * one["permanent_compression_mm"])


def test_a_hardness_off_the_table_is_refused_with_a_remedy(tmp_path: Path) -> None:
    path, url = tmp_path / "own.toml", str(tmp_path / "own.sqlite")
    path.write_text(text_with(pad(rubber="hardness = 85")))
    workflow.init_record(url)
    with pytest.raises(
        BedstoneError, match=r'support "west abutment", pad, hardness.*give shear_modulus instead'
    ):
        workflow.add_bridge(url, path)


# cold ---------------------------------------------------------------------------------------------


def test_a_compounds_curve_brings_a_cold_visit_to_20_degrees(tmp_path: Path) -> None:
    text = text_with(*[pad(rows='compound = "natural rubber"')] * 3)
    url = added(tmp_path, text)
    one = model(text)
    made = one.pad_models[0]
    assert made is not None
    cold = made.stiffened(cold_curve("natural rubber").factor(-10.0)).stiffness / made.stiffness
    assert 1.05 < cold < 1.16  # the bulk term does not stiffen
    ratios = {"2018-05-14": 1.0, "2020-01-14": cold, "2022-05-14": 1.0, "2024-01-14": cold}
    nominal = np.exp(one.nominal) / np.array([150e3, 220e3, 220e3])
    for i, (date, ratio) in enumerate(ratios.items()):
        visit = write_visit(
            tmp_path, date, list(nominal * ratio), temperature="20 degC" if i % 2 == 0 else "-10 degC"
        )
        assert call(url, "visit", "log", str(visit)).code == 0
    document = call(url, "trend", "quillmere", "--json").document
    assert [p["law"] for p in document["pads"]] == ["steady"] * 3
    assert all(abs(p["change_per_year_percent"]) < 1.0 for p in document["pads"])
    assert not any("compared as they are" in one for one in document["cautions"])


def test_the_report_draws_the_pads_checks(tmp_path: Path) -> None:
    url = added(tmp_path, text_with(pad(), pad()))
    page = tmp_path / "page.html"
    assert call(url, "report", "quillmere", "-o", str(page)).code == 0
    html = page.read_text()
    assert "Pads of girder north: pressures, strains and limits" in html
    assert "stability pressure" in html
