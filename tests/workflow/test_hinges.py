"""Internal hinges through a bridge file, record, workflow and command line."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from assess import workflow
from assess.workflow.building import GirderModel
from db.exchange import parse_bridge
from tests.workflow import invented
from tests.workflow.conftest import Said, call

MIDDLE = '  length = "15 m"\n  section = "mid"\n'
SUSPENDED = '["3.5 m", "11.5 m"]'  # x 15.5 and 23.5 m: statically determinate
ONE = '["3.5 m"]'


def text_with(hinges: str, live: str = "") -> str:
    text = invented.bridge_text().replace(MIDDLE, f"{MIDDLE}  hinges = {hinges}\n", 1)
    if live:
        text = f'{text[: text.index("[[live]]")]}[[live]]\nid = "traffic"\n{live}\n{text[text.index("[factors]") :]}'
    return text


def model(hinges: str) -> GirderModel:
    bridge = parse_bridge(text_with(hinges), file="bridge.toml")
    return GirderModel(bridge, bridge.girders[0])


def recorded(
    folder: Path, monkeypatch: pytest.MonkeyPatch, hinges: str, settled: Mapping[str, float] | None = None
) -> str:
    """A record of the contract's bridge with hinges, and of visits that its pads explain."""
    text = text_with(hinges)
    monkeypatch.setattr(invented, "bridge_text", lambda: text)
    path, url = folder / "bridge.toml", str(folder / "record.sqlite")
    path.write_text(invented.bridge_text())
    workflow.init_record(url)
    workflow.add_bridge(url, path)
    for date, ratio in (("2022-05-14", 1.0), ("2024-05-14", 0.7)):
        visit = invented.write_visit(folder, date, (1.0, ratio, 1.0), settled=settled)
        workflow.log_visit(url, visit)
    return url


def calibrated(url: str) -> Said:
    return call(url, "calibrate", "quillmere", "--all", "--json")


def test_hinges_part_the_pieces_and_keep_the_spans() -> None:
    girder = model(SUSPENDED).girder
    assert girder.hinges == pytest.approx((15.5, 23.5))
    assert girder.span_lengths == pytest.approx([12.0, 15.0, 12.0])
    assert [round(p.length, 9) for p in girder.spans[1]] == [2.5, 1.0, 8.0, 1.0, 2.5]
    # at an end of a piece no piece is added
    assert [round(p.length, 9) for p in model('["2.5 m"]').girder.spans[1]] == [2.5, 10.0, 2.5]


def test_a_hinge_is_a_station_on_both_faces_and_its_span_stays_one_row() -> None:
    plan = model(SUSPENDED).plan
    for x in (15.5, 23.5):
        at = np.flatnonzero(np.abs(plan.x - x) < 1e-9)
        assert sorted(plan.side[at]) == [-1, 1]
        assert set(plan.span[at]) == {1}
    assert [c.span for c in plan.checks if c.effect == "sagging"] == [0, 1, 2]
    assert [c.support for c in plan.checks if c.effect == "hogging"] == [1, 2]


def test_pads_are_found_through_hinges(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    url = recorded(tmp_path, monkeypatch, ONE)
    document: Any = calibrated(url).document
    pads = document["visits"][-1]["girders"][0]["pads"]
    assert [p["ratio_to_nominal"] for p in pads] == pytest.approx([1.0, 0.7, 1.0], abs=0.05)


def test_pads_and_settlement_change_no_moment_of_a_determinate_girder(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    url = recorded(tmp_path, monkeypatch, SUSPENDED, {"pier 1": 12.0})
    assert calibrated(url).code == 0
    document: Any = call(url, "assess", "quillmere", "--json").document
    girder = document["girders"][0]
    for row in girder["sections"]:
        for case in ("nominal", "calibrated"):
            for key in ("permanent", "live", "factored", "utilisation"):
                assert row[case][key] == pytest.approx(row["unyielding"][key], rel=1e-9)
        assert row["calibrated"]["utilisation_high95"] - row["calibrated"]["utilisation_low95"] < 1e-9
    # pier moment by hand: 36.5 kN/m; the suspended span hands 36.5 * 8 / 2 = 146 kN on to a cantilever of 3.5 m
    hogging = next(
        row for row in girder["sections"] if row["support"] == "pier 1" and row["effect"] == "hogging"
    )
    assert hogging["unyielding"]["permanent"] == pytest.approx(-(146.0 * 3.5 + 36.5 * 3.5**2 / 2.0), rel=1e-9)


def test_one_hinge_leaves_a_girder_that_its_pads_redistribute(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    url = recorded(tmp_path, monkeypatch, ONE)
    assert calibrated(url).code == 0
    document: Any = call(url, "assess", "quillmere", "--json").document
    rows = document["girders"][0]["sections"]
    assert abs(rows[1]["calibrated"]["permanent"] / rows[1]["unyielding"]["permanent"] - 1.0) > 0.01


def test_trend_and_report_take_hinges(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    url = recorded(tmp_path, monkeypatch, ONE, {"pier 1": 12.0})
    assert calibrated(url).code == 0
    assert call(url, "trend", "quillmere", "--json").document["spans"]
    page = tmp_path / "page.html"
    assert call(url, "report", "quillmere", "-o", str(page)).code == 0
    assert "Internal hinge at 15.50 m" in page.read_text()


def test_adding_a_bridge_names_its_hinges(tmp_path: Path) -> None:
    path, url = tmp_path / "bridge.toml", str(tmp_path / "record.sqlite")
    path.write_text(text_with(SUSPENDED))
    workflow.init_record(url)
    assert "Hinges in north at 15.5 m and 23.5 m." in call(url, "bridge", "add", str(path)).out


def test_a_mechanism_is_refused_and_leaves_nothing(tmp_path: Path) -> None:
    path, url = tmp_path / "bridge.toml", str(tmp_path / "record.sqlite")
    path.write_text(text_with('["3 m", "7 m", "11 m"]'))
    workflow.init_record(url)
    said = call(url, "bridge", "add", str(path))
    assert (said.code, said.out) == (2, "")
    assert len(said.err.strip().splitlines()) == 1
    assert 'girder "north", span 2, hinges' in said.err
    assert call(url, "bridge", "list", "--json").document == {"bridges": []}


def test_hinges_bring_their_cautions(tmp_path: Path) -> None:
    path, url = tmp_path / "bridge.toml", str(tmp_path / "record.sqlite")
    # LM71 on the suspended span takes the anchor arm off its abutment, if nothing holds that down
    tied = 'stiffness = "150 kN/mm"\n  hold_down = true'
    text = text_with(SUSPENDED, 'model = "lm71"')
    path.write_text(text.replace('stiffness = "150 kN/mm"', tied, 1))
    workflow.init_record(url)
    workflow.add_bridge(url, path)
    said = " ".join(call(url, "assess", "quillmere", "--json").document["cautions"])
    assert 'Girder "north" has internal hinges at 15.5 m, 23.5 m' in said
    assert "as if the girder ran on over its hinges" in said


def test_an_anchor_arm_that_nothing_holds_down_is_taken_as_held_and_cautioned(tmp_path: Path) -> None:
    path, url = tmp_path / "bridge.toml", str(tmp_path / "record.sqlite")
    path.write_text(text_with(SUSPENDED, 'model = "lm71"'))
    workflow.init_record(url)
    workflow.add_bridge(url, path)
    document = call(url, "assess", "quillmere", "--json").document
    said = [one for one in document["cautions"] if "would tip" in one]
    assert len(said) == 1
    assert 'north: would tip under factored loads: it lifts off "west abutment"' in said[0]
    assert "write hold_down = true there" in said[0]
    west = document["girders"][0]["reactions"][0]
    assert west["calibrated_factored_min_kN"] < 0.0
    assert all(row["calibrated"]["utilisation"] is not None for row in document["girders"][0]["sections"])
    page = tmp_path / "page.html"
    assert call(url, "report", "quillmere", "-o", str(page)).code == 0
    assert "would tip under factored loads" in page.read_text()
