"""Published live loads through files, record, workflow and command line."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest

from assess import workflow
from assess.girder import Sweep, envelope, places
from assess.loads import Allowance, ModelLoad, live_model
from assess.workflow.building import GirderModel
from assess.workflow.live_loads import live_in_words
from db.errors import BedstoneError
from db.exchange import parse_bridge
from tests.workflow.conftest import call
from tests.workflow.invented import bridge_text

MEAN_SPAN = 13.0  # of 12, 15 and 12 m
EN = 1.44 / (np.sqrt(1.3 * MEAN_SPAN) - 0.2) + 0.82, 2.16 / (np.sqrt(1.3 * MEAN_SPAN) - 0.2) + 0.73


def text_with(rows: str) -> str:
    text = bridge_text()
    return (
        f'{text[: text.index("[[live]]")]}[[live]]\nid = "traffic"\n{rows}\n{text[text.index("[factors]") :]}'
    )


def model(rows: str) -> GirderModel:
    bridge = parse_bridge(text_with(rows), file="bridge.toml")
    return GirderModel(bridge, bridge.girders[0])


def added(tmp_path: Path, rows: str) -> str:
    path, url = tmp_path / "bridge.toml", str(tmp_path / "record.sqlite")
    path.write_text(text_with(rows))
    workflow.init_record(url)
    workflow.add_bridge(url, path)
    return url


@pytest.mark.parametrize("rows", ['model = "lm71"', 'model = "hl-93"', 'model = "hs20-44"'])
def test_a_bridge_with_a_published_load_is_added_and_assessed(tmp_path: Path, rows: str) -> None:
    url = added(tmp_path, rows)
    document: Any = call(url, "assess", "quillmere", "--json").document
    sections = document["girders"][0]["sections"]
    girder = model(rows)
    place = places(girder.condensed, "moment", np.array([s["unyielding"]["x_m"] for s in sections]))
    found = envelope([Sweep(place, one) for one in girder.models], girder.unyielding)
    for i, section in enumerate(sections):
        live = section["unyielding"]["live"]
        if section["effect"] == "sagging":
            assert live == pytest.approx(found.maximum[i], rel=1e-6)
        if section["effect"] == "hogging":
            assert live == pytest.approx(found.minimum[i], rel=1e-6)
        case = section["calibrated"]
        assert case["utilisation_low95"] < case["utilisation"] < case["utilisation_high95"]
    for reaction in document["girders"][0]["reactions"]:
        assert reaction["calibrated_live_max_kN"] > 0.0


def test_half_a_track_carries_half_the_model_and_its_allowance() -> None:
    girder = model('model = "lm71"')
    (load,) = girder.models
    assert load.model.alternatives[0].axles[0][1] == 125.0
    assert load.allowance.value == pytest.approx(EN[1] - 1.0)
    assert girder.trains == ()


@pytest.mark.parametrize(
    ("rows", "value"),
    [
        ('model = "sw0"\ntrack = "careful"', EN[0] - 1.0),
        ('model = "sw0"\ntrack = "standard"', EN[1] - 1.0),
        ('model = "lm71"\ndynamic = 0', 0.0),
        ('model = "lm71"\ndynamic = 0.3', 0.3),
        ('model = "hl-93"', 0.33),
        ('model = "hl-93"\ndynamic = 0.1', 0.1),
        ('model = "lm1-lane-1"', 0.0),
        ('model = "hs20-44"', None),
        ('model = "hs20-44"\ndynamic = 0', 0.0),
        ('model = "cooper-e60"\ndynamic = 0.4', 0.4),
    ],
)
def test_the_allowance_is_the_file_s_or_else_the_model_s(rows: str, value: float | None) -> None:
    (load,) = model(rows).models
    assert load.allowance.value == (value if value is None else pytest.approx(value))


def test_vehicles_and_models_stand_side_by_side() -> None:
    text = bridge_text().replace("[factors]", '[[live]]\nid = "lm"\nmodel = "lm71"\n\n[factors]')
    bridge = parse_bridge(text, file="bridge.toml")
    girder = GirderModel(bridge, bridge.girders[0])
    assert (len(girder.trains), len(girder.models)) == (1, 1)
    on = girder.unyielding[None], np.zeros((1, girder.n))
    both = girder.effects.passing(girder.factors, *on).envelope("moment")
    place = places(girder.condensed, "moment", girder.plan.x, girder.plan.side)
    alone = envelope([Sweep(place, girder.models[0])], girder.unyielding)
    assert (both.maximum >= alone.maximum).all()


REFUSED = {
    'model = "lm7"': 'model: there is no live load model "lm7" (did you mean "lm71"?); known: "cooper-e80"',
    'model = "hl93"': 'did you mean "hl-93"?',
    'model = "cooper-e80"': "dynamic: cooper-e80 brings no dynamic allowance; write it",
    'model = "hl-93"\ntrack = "careful"': "track: the allowance of hl-93 does not ask for the track; leave it out",
}


@pytest.mark.parametrize(("rows", "said"), REFUSED.items(), ids=list(REFUSED))
def test_a_model_that_cannot_be_used_is_refused_when_the_bridge_is_added(
    tmp_path: Path, rows: str, said: str
) -> None:
    path, url = tmp_path / "bridge.toml", str(tmp_path / "record.sqlite")
    path.write_text(text_with(rows))
    workflow.init_record(url)
    answer = call(url, "bridge", "add", str(path))
    assert (answer.code, answer.out) == (2, "")
    assert answer.err.count("\n") == 1
    assert f'{path}, live "traffic", ' in answer.err
    assert said in answer.err
    assert workflow.list_bridges(url) == []


def test_a_model_is_checked_again_when_it_is_used() -> None:
    with pytest.raises(
        BedstoneError, match='bridge file, live "traffic", model: there is no live load model'
    ):
        _ = model('model = "lm99"').models


def test_live_loads_are_said_with_source_and_allowance() -> None:
    def words(rows: str) -> str:
        return live_in_words(parse_bridge(text_with(rows), file="bridge.toml"))[0]

    rail = words('model = "lm71"\ntrack = "careful"')
    assert rail.startswith("traffic: EN 1991-2 Load Model 71, one track times the girder's live share")
    assert "from memory, to be confirmed" in rail
    assert f"dynamic allowance {EN[0] - 1.0:.3g} on girder north for carefully maintained track" in rail
    assert "dynamic allowance 0.33 on axles, none on the uniform part" in words('model = "hl-93"')
    assert "50 / (L + 125 ft)" in words('model = "hs20-44"')
    assert "as the bridge file says" in words('model = "cooper-e80"\ndynamic = 0.4')
    assert words('vehicle = "ballast wagon"') == (
        "traffic: 1 x ballast wagon, dynamic allowance 0, both running directions"
    )


def test_adding_a_bridge_names_its_published_loads(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    url = added(tmp_path, 'model = "hl-93"')
    path = tmp_path / "bridge.toml"
    path.write_text(path.read_text() + "# changed\n")
    answer = call(url, "bridge", "add", str(path))
    assert answer.code == 0
    assert "Live load traffic: AASHTO HL-93, one lane times the girder's live share" in answer.out


def test_the_report_names_the_published_load(tmp_path: Path) -> None:
    view = workflow.report_view(added(tmp_path, 'model = "lm71"'), "quillmere")
    assert view.live[0].startswith("traffic: EN 1991-2 Load Model 71")
    assert np.isfinite(view.girders[0].moments.sagging_high).all()


def test_a_share_of_a_lane_scales_the_effect() -> None:
    girder = model('model = "lm1-lane-1"')
    place = places(girder.condensed, "moment", np.array([6.0]))
    whole = Sweep(place, ModelLoad(model=live_model("lm1-lane-1"), allowance=Allowance(value=0.0)))
    half = Sweep(place, girder.models[0])
    f = girder.unyielding
    assert 2.0 * envelope([half], f).maximum == pytest.approx(envelope([whole], f).maximum)
