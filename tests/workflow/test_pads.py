"""Pads from their geometry, through file, record, workflow, command line and report."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest

from assess import workflow
from assess.capacity import rows
from assess.pad import cold_curve
from assess.report import page
from assess.results import ReportView
from assess.workflow import assessing, trending
from assess.workflow.pads import cold_shift
from tests.workflow.ashbeck import added, log, model, text_with
from tests.workflow.conftest import call

VISIT = "2024-05-14"
STEADY = [0.95, 0.85, 0.60, 0.90]
BATCH = '    batch = "piers"\n'
COLD = '    compound = "natural rubber"\n'


def nominal(*changes: tuple[str, str]) -> dict[str, float]:
    girder = model(*changes)
    return dict(zip(girder.pad_ids, girder.nominal_stiffness, strict=True))


def test_a_pad_is_nominal_by_its_geometry() -> None:
    """EN 1337-3 by hand: eight layers of 12 mm, outer ones of 2.5 mm left out, plates 392 x 292 mm."""
    s = 392.0 * 292.0 / (2.0 * 684.0 * 12.0)
    give = 8 * 12.0 / (392.0 * 292.0) * (1.0 / (5.0 * 0.9 * s * s) + 1.0 / 2000.0)  # mm/N, that is m/kN
    assert nominal()["pier 1"] == pytest.approx(1.0 / give)
    assert nominal()["east abutment"] == pytest.approx(150e3)


def test_a_given_stiffness_is_nominal_and_the_geometry_serves_the_checks(tmp_path: Path) -> None:
    given = (
        '  id = "pier 1"\n  kind = "pad"\n',
        '  id = "pier 1"\n  kind = "pad"\n  stiffness = "180 kN/mm"\n',
    )
    assert nominal(given)["pier 1"] == pytest.approx(180e3)
    document: Any = call(added(tmp_path, given), "assess", "ashbeck", "--json").document
    pads = {pad["support"]: pad for pad in document["girders"][0]["pads"]}
    assert pads["pier 1"]["nominal_from"] == "stiffness"
    assert pads["pier 1"]["geometry_kN_per_m"] == pytest.approx(nominal()["pier 1"])
    assert [c for c in document["cautions"] if "its geometry serves the checks" in c and "1.31 times" in c]


def test_showing_a_bridge_has_exactly_the_keys_of_the_contract(tmp_path: Path) -> None:
    document: Any = call(added(tmp_path), "bridge", "show", "ashbeck", "--json").document
    assert list(document) == ["bridge", "sections", "girders"]
    assert list(document["sections"][0]) == [
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
    (girder,) = document["girders"]
    assert list(girder) == ["girder", "supports"]
    assert [list(support) for support in girder["supports"]] == [
        ["support", "kind", "x_m", "nominal_kN_per_m", "cv"]
    ] * 4
    found = {s["support"]: s for s in girder["supports"]}
    assert found["pier 1"]["nominal_kN_per_m"] == pytest.approx(nominal()["pier 1"])
    assert found["pier 1"]["cv"] == pytest.approx(model().stiffness_cv[1])
    assert 0.2 < found["pier 1"]["cv"] < 0.25
    assert (found["east abutment"]["nominal_kN_per_m"], found["east abutment"]["cv"]) == (150e3, 0.3)
    assert found["pier 2"]["x_m"] == 27.0


def test_a_pin_is_shown_without_a_stiffness(tmp_path: Path) -> None:
    pin = ('  kind = "pad"\n  stiffness = "150 kN/mm"\n  stiffness_cv = 0.3\n', '  kind = "pin"\n')
    document: Any = call(added(tmp_path, pin), "bridge", "show", "ashbeck", "--json").document
    east = document["girders"][0]["supports"][3]
    assert (east["kind"], east["nominal_kN_per_m"], east["cv"]) == ("pin", None, None)


def test_adding_and_showing_say_where_a_nominal_stiffness_comes_from(tmp_path: Path) -> None:
    url = added(tmp_path)
    (tmp_path / "bridge.toml").write_text((tmp_path / "bridge.toml").read_text() + "# again\n")
    told = call(url, "bridge", "add", str(tmp_path / "bridge.toml")).out
    assert [
        line
        for line in told.splitlines()
        if line.startswith("north") and "pier 1         geometry, en1337-3" in line
    ]
    assert [line for line in told.splitlines() if "east abutment" in line and "as given" in line]
    shown = call(url, "bridge", "show", "ashbeck").out
    row = next(line for line in shown.splitlines() if line.startswith("pier 1") and "en1337-3" in line)
    assert row.split() == ["pier", "1", "en1337-3", "6.97", "101", "197", "235", "piers", "from", "geometry"]


# prior -----------------------------------------------------------------------------------------------


def test_a_prior_from_geometry_is_as_wide_as_its_tolerances() -> None:
    usual = model().stiffness_cv[1]
    wide = model((BATCH, BATCH + "    shear_modulus_tolerance = 0.3\n")).stiffness_cv[1]
    tall = model((BATCH, BATCH + '    height_tolerance = "8 mm"\n')).stiffness_cv[1]
    own = model(
        ('  id = "pier 1"\n  kind = "pad"\n', '  id = "pier 1"\n  kind = "pad"\n  stiffness_cv = 0.15\n')
    )
    assert wide > usual
    assert tall > usual
    assert own.stiffness_cv[1] == 0.15
    assert model().prior.sd[1] == pytest.approx(np.sqrt(np.log1p(usual**2)))


@pytest.fixture(autouse=True)
def few_draws(monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing here hangs on the number of draws."""
    monkeypatch.setattr(trending, "FORECAST_DRAWS", 60)
    monkeypatch.setattr(rows, "_SAMPLE", 3)
    monkeypatch.setattr(assessing, "DRAWS", 200)


def one_pier_read(folder: Path, *changes: tuple[str, str]) -> dict[str, Any]:
    """Calibrated pads where only the pad at pier 1 is read."""
    folder.mkdir()
    url = added(folder, *changes)
    log(url, folder, VISIT, STEADY, pads=["pier 1"], places=[], states=["T1"], seed=None)
    document: Any = call(url, "calibrate", "ashbeck", "--json").document
    return {pad["support"]: pad for pad in document["girders"][0]["pads"]}


def width(pad: dict[str, Any]) -> float:
    return float(np.log(pad["high95_kN_per_m"] / pad["low95_kN_per_m"]))


def test_a_reading_at_one_pad_of_a_batch_narrows_the_other(tmp_path: Path) -> None:
    alone = one_pier_read(tmp_path / "alone", (BATCH, ""))
    batch = one_pier_read(tmp_path / "batch")
    close = one_pier_read(tmp_path / "close", (BATCH, BATCH + "    batch_correlation = 0.95\n"))
    assert width(close["pier 2"]) < width(batch["pier 2"]) < width(alone["pier 2"])
    assert close["pier 2"]["ratio_to_nominal"] < batch["pier 2"]["ratio_to_nominal"]
    assert batch["pier 2"]["ratio_to_nominal"] < alone["pier 2"]["ratio_to_nominal"]
    assert batch["pier 2"]["data_share"] < 0.5, "what its sister tells does not count as read"


def test_a_batch_that_gives_two_correlations_is_refused_when_it_is_added(tmp_path: Path) -> None:
    url = added(tmp_path)
    text = (tmp_path / "bridge.toml").read_text()
    first, rest = text.split(BATCH, 1)
    two = (
        first
        + BATCH
        + "    batch_correlation = 0.5\n"
        + rest.replace(BATCH, BATCH + "    batch_correlation = 0.7\n")
    )
    (tmp_path / "bridge.toml").write_text(two)
    said = call(url, "bridge", "add", str(tmp_path / "bridge.toml"))
    assert said.code == 2
    assert 'pads of batch "piers" give the correlations 0.5 and 0.7' in said.err
    assert "batch_correlation" in said.err


@pytest.mark.parametrize(
    ("changes", "told"),
    [
        (
            (("hardness = 60", "hardness = 80"),),
            'support "west abutment", pad, hardness: hardness 80 lies outside',
        ),
        (
            (('shear_modulus = "0.9 MPa"', "hardness = 40"),),
            'support "pier 1", pad, hardness: hardness 40 lies outside the table of en1337-3',
        ),
        (
            (("hardness = 60", 'shear_modulus = "3 MPa"'),),
            'support "west abutment", pad, shear_modulus: the shear modulus lies outside the table of gent-lindley',
        ),
        (
            (
                ('shape = "circular"', 'shape = "plain"'),
                ('    side_cover = "5 mm"\n    layers = 8\n', ""),
                (
                    '    top_bottom_cover = "2.5 mm"\n    hardness = 60\n',
                    '    hardness = 60\n    limits = "aashto-lrfd-b-stress"\n',
                ),
            ),
            'support "west abutment", pad, limits: the set "aashto-lrfd-b-stress" has no limit for a plain pad',
        ),
    ],
)
def test_a_pad_that_its_formula_does_not_cover_is_refused_and_nothing_is_kept(
    tmp_path: Path, changes: tuple[tuple[str, str], ...], told: str
) -> None:
    url = str(tmp_path / "record.sqlite")
    workflow.init_record(url)
    path = tmp_path / "bridge.toml"
    path.write_text(text_with(*changes))
    said = call(url, "bridge", "add", str(path))
    assert (said.code, said.out) == (2, "")
    assert said.err.count("\n") == 1
    assert f'{path}, girder "north", {told}' in said.err
    assert call(url, "bridge", "list", "--json").document == {"bridges": []}


# cold ------------------------------------------------------------------------------------------------


def test_a_cold_pad_is_brought_to_20_degrees_by_the_curve_of_its_compound() -> None:
    girder = model()
    pad = girder.pad_models[1]
    assert pad is not None
    factor = cold_curve("natural rubber").factor(-5.0)
    shift = cold_shift(girder.doc, list(girder.pads), -5.0).shift
    assert shift[1] == pytest.approx(np.log(pad.stiffened(factor).stiffness / pad.stiffness))
    assert 0.0 < shift[1] < np.log(factor), "the bulk of the rubber does not stiffen"
    assert shift[3] == 0.0, "no compound, no correction"


def trend_of(folder: Path, *changes: tuple[str, str]) -> dict[str, Any]:
    """Steady pads, visited ever colder."""
    folder.mkdir()
    url = added(folder, *changes)
    for year, degc in ((2018, 20.0), (2020, 8.0), (2022, -4.0), (2024, -18.0)):
        log(url, folder, f"{year}-05-14", STEADY, degc=degc, seed=None)
    call(url, "calibrate", "ashbeck", "--all")
    document: Any = call(url, "trend", "ashbeck", "--json").document
    return {
        "pier 1": next(p for p in document["pads"] if p["support"] == "pier 1"),
        "said": document["cautions"],
    }


def test_the_cold_of_a_compound_is_no_trend(tmp_path: Path) -> None:
    corrected, raw = trend_of(tmp_path / "corrected"), trend_of(tmp_path / "raw", (COLD, ""))
    assert corrected["pier 1"]["law"] == "steady"
    assert corrected["pier 1"]["change_per_year_percent"] == pytest.approx(0.0, abs=0.1)
    assert raw["pier 1"]["change_per_year_percent"] > 2.0
    assert raw["pier 1"]["law"] == "steady"  # the cold of a visit is an error that its pads share
    assert (
        raw["pier 1"]["high95"] - raw["pier 1"]["low95"]
        > corrected["pier 1"]["high95"] - corrected["pier 1"]["low95"]
    )
    assert not [c for c in corrected["said"] if '"pier 1"' in c and "temperature_coefficient" in c]
    assert [c for c in raw["said"] if '"pier 1"' in c and "temperature_coefficient" in c]


def test_a_visit_colder_than_the_curve_is_compared_as_it_is_and_said_so(tmp_path: Path) -> None:
    shift = cold_shift(model().doc, [0, 1, 2, 3], -35.0)
    assert not shift.shift.any()
    assert [support for support, _ in shift.outside] == ["west abutment", "pier 1", "pier 2"]
    url = added(tmp_path)
    for year in (2022, 2024):
        log(url, tmp_path, f"{year}-05-14", STEADY, degc=-35.0, seed=None)
    call(url, "calibrate", "ashbeck", "--all")
    document: Any = call(url, "trend", "ashbeck", "--json").document
    told = [c for c in document["cautions"] if "outside the curve of natural rubber" in c]
    assert len(told) == 2
    assert all('"west abutment", "pier 1", "pier 2"' in one for one in told)


# checks ----------------------------------------------------------------------------------------------


@pytest.fixture(scope="module")
def calibrated(tmp_path_factory: pytest.TempPathFactory) -> str:
    folder = tmp_path_factory.mktemp("ashbeck")
    url = added(folder)
    log(url, folder, VISIT, STEADY, seed=3)
    assert call(url, "calibrate", "ashbeck").code == 0
    return url


@pytest.fixture(scope="module")
def view(calibrated: str) -> ReportView:
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(trending, "FORECAST_DRAWS", 60)
        patch.setattr(assessing, "DRAWS", 200)
        return workflow.report_view(calibrated, "ashbeck")


def test_pressures_are_the_calibrated_reactions_over_the_plates(calibrated: str) -> None:
    document: Any = call(calibrated, "assess", "ashbeck", "--json").document
    (girder,) = document["girders"]
    reactions = {r["support"]: r for r in girder["reactions"]}
    assert [pad["support"] for pad in girder["pads"]] == ["west abutment", "pier 1", "pier 2"]
    for pad in girder["pads"]:
        own = reactions[pad["support"]]
        area = np.pi * 0.35**2 / 4.0 if pad["support"] == "west abutment" else 0.392 * 0.292
        permanent = own["calibrated_permanent_kN"]
        total = permanent + own["calibrated_live_max_kN"]
        assert pad["permanent_pressure_MPa"] == pytest.approx(1e-3 * permanent / area)
        assert pad["total_pressure_MPa"] == pytest.approx(1e-3 * total / area)
        factored = 1e-3 * (1.2 * permanent + 1.5 * own["calibrated_live_max_kN"]) / area
        limit = next(x for x in pad["limits"] if x["name"] == "stability pressure")
        assert limit["value"] == pytest.approx(factored)
        assert limit["utilisation"] == pytest.approx(limit["value"] / limit["limit"])


def test_a_pad_found_soft_strains_and_gives_way_as_it_was_found(calibrated: str) -> None:
    document: Any = call(calibrated, "assess", "ashbeck", "--json").document
    fit: Any = call(calibrated, "calibrate", "ashbeck", "--json").document
    found = {pad["support"]: pad["stiffness_kN_per_m"] for pad in fit["girders"][0]["pads"]}
    for pad in document["girders"][0]["pads"]:
        expected = 1e3 * pad["permanent_kN"] / found[pad["support"]]
        assert pad["permanent_compression_mm"] == pytest.approx(expected, rel=1e-3)
        share = pad["creep_share_25_years"]
        assert share == pytest.approx(0.35)
        assert pad["creep_compression_25_years_mm"] == pytest.approx(share * pad["permanent_compression_mm"])


def test_a_pad_over_its_limit_is_said_on_the_screen_and_beside_the_first_sentence(
    calibrated: str, view: ReportView
) -> None:
    told = call(calibrated, "assess", "ashbeck").out
    row = next(line for line in told.splitlines() if line.startswith("pier 1") and "stability" in line)
    assert row.split()[-1] == "over"
    assert 'the pad at "pier 1" is over its limit of stability pressure' in " ".join(told.split())
    assert 'the pad at "west abutment" is not said to be fixed' in " ".join(told.split())
    beside = view.verdict_cautions["north"]
    assert [c for c in beside if 'pad at "pier 1" is over its limit' in c]
    assert not [c for c in beside if "computed from geometry" in c or "share a prior" in c]


def test_a_caution_is_said_once(calibrated: str) -> None:
    for command in ("calibrate", "assess", "trend"):
        document: Any = call(calibrated, command, "ashbeck", "--json").document
        assert len(document["cautions"]) == len(set(document["cautions"]))


WALKS = '    formula = "gent-lindley"\n'
HELD = ("    hardness = 60\n", "    hardness = 60\n    fixed = true\n")
LESS = (WALKS, WALKS + '      [girder.support.pad.limit]\n      least_permanent_pressure = "1 MPa"\n')


@pytest.mark.parametrize(("changes", "told"), [((HELD,), False), ((LESS,), False), ((), True)])
def test_a_lightly_loaded_pad_may_walk_unless_it_is_held(
    tmp_path: Path, changes: tuple[tuple[str, str], ...], told: bool
) -> None:
    document: Any = call(added(tmp_path, *changes), "assess", "ashbeck", "--json").document
    said = [c for c in document["cautions"] if '"west abutment" is not said to be fixed' in c]
    assert bool(said) is told


def test_the_report_holds_pads_and_their_limits(view: ReportView) -> None:
    html = page.render(view)
    assert "Pads of girder north from their geometry" in html
    assert "Limits of the pads of girder north" in html
    assert "en1337-3, shape factor 6.97" in html
    assert html.count("stability pressure") >= 3
    assert "the bridge file" in html, "the source of the owner's own limit"
