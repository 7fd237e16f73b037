"""Suppositions against the girder solved with those values."""

from __future__ import annotations

import json
from collections.abc import Sequence
from pathlib import Path

import numpy as np
import pytest

from assess import workflow
from assess.capacity import Row, evaluate, rows
from assess.results import AssessmentResult
from assess.workflow import assessing
from assess.workflow.building import GirderModel
from db.errors import BedstoneError
from db.exchange import parse_bridge
from db.store import open_record
from tests.workflow.conftest import call
from tests.workflow.invented import BRIDGE, bridge_text, write_visit

EXACT = 1e-10
RATIOS = [0.9, 0.6, 1.1]
PLATES = BRIDGE.with_name("bridge-plates-and-pads.toml")


@pytest.fixture(autouse=True)
def few_draws(monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing here hangs on how many draws make a band."""
    monkeypatch.setattr(assessing, "DRAWS", 50)
    monkeypatch.setattr(rows, "_SAMPLE", 2)


@pytest.fixture
def visited(record: str, tmp_path: Path) -> str:
    workflow.log_visit(record, write_visit(tmp_path, "2024-05-14", RATIOS, settled={"pier 2": 3.0}))
    workflow.calibrate(record, "quillmere")
    return record


def supposed(record: str, *lines: str, bridge: str = "quillmere") -> AssessmentResult:
    return workflow.assess(record, bridge, suppose=lines)


def girder_of(text: str) -> GirderModel:
    bridge = parse_bridge(text, file="bridge.toml")
    return GirderModel(bridge, bridge.girders[0])


def changed(text: str, old: str, new: str, count: int = -1) -> str:
    assert old in text
    return text.replace(old, new, count)


def solved(model: GirderModel, stiffness: Sequence[float], drops: Sequence[float]) -> list[Row]:
    """The rows of a girder on pads of given stiffness (kN/m) and a pin at the end, its seats dropped (m)."""
    compliance = np.array([*(1.0 / k for k in stiffness), 0.0])
    return evaluate(model.effects, model.factors, compliance, np.array(drops))


def assert_equal(result: AssessmentResult, expected: list[Row]) -> None:
    sections = result.girders[0].sections
    assert len(sections) == len(expected)
    for section, row in zip(sections, expected, strict=True):
        assert section.supposed is not None
        assert section.supposed.x_m == pytest.approx(row.case.x, rel=EXACT)
        for name in ("permanent", "live", "factored", "utilisation"):
            value = getattr(row.case, name)
            assert getattr(section.supposed, name) == pytest.approx(value, rel=EXACT, abs=1e-9)


# against the girder solved with those values ------------------------------------------------------


def test_supposed_pads_and_seats_are_the_girder_solved_with_them(record: str) -> None:
    found = supposed(
        record,
        "north/west abutment stiffness = 120 kN/mm",
        "north/pier 1 stiffness = 90 kN/mm",
        "north/pier 2 stiffness = 300 kN/mm",
        "north/pier 1 settlement = 5 mm",
        "north/east abutment settlement = -2 mm",
    )
    model = girder_of(bridge_text())
    assert_equal(found, solved(model, [120e3, 90e3, 300e3], [0.0, 5e-3, 0.0, -2e-3]))


def test_a_supposed_girder_stiffness_is_that_of_a_girder_of_softer_steel(record: str) -> None:
    found = supposed(record, "north stiffness factor = 0.8", "north/pier 2 settlement = 4 mm")
    model = girder_of(changed(bridge_text(), '"205 GPa"', '"164 GPa"'))
    assert_equal(found, solved(model, [150e3, 220e3, 220e3], [0.0, 0.0, 4e-3, 0.0]))


def test_a_supposed_load_is_that_load_in_the_bridge_file(record: str) -> None:
    found = supposed(record, "live line traffic factor = 1.25", "permanent north/deck and track factor = 1.1")
    text = changed(changed(bridge_text(), '"200 kN"', '"250 kN"'), '"27 kN/m"', '"29.7 kN/m"')
    assert_equal(found, solved(girder_of(text), [150e3, 220e3, 220e3], np.zeros(4).tolist()))


def test_a_supposed_loss_is_that_loss_in_the_bridge_file(tmp_path: Path) -> None:
    url = str(tmp_path / "plates.sqlite")
    workflow.init_record(url)
    workflow.add_bridge(url, PLATES)
    found = supposed(url, "section mid/bottom flange loss = 9 mm", bridge="ashbeck")
    text = changed(PLATES.read_text(), 'depth = "6 mm"', 'depth = "9 mm"')
    model = girder_of(text)
    expected = evaluate(model.effects, model.factors, model.compliance(model.nominal), np.zeros(model.n))
    assert_equal(found, expected)
    today = [section.calibrated.capacity for section in found.girders[0].sections]
    assert today[0] > found.girders[0].sections[0].supposed.capacity  # type: ignore[operator, union-attr]


def test_a_supposed_pad_leaves_the_others_and_the_seats_as_calibrated(visited: str) -> None:
    found = supposed(visited, "north/pier 1 stiffness = 60 kN/mm")
    plain = workflow.assess(visited, "quillmere")
    for section, other in zip(found.girders[0].sections, plain.girders[0].sections, strict=True):
        assert section.calibrated == other.calibrated
    text = bridge_text()
    known = workflow.calibrate(visited, "quillmere")[0].girders[0].pads
    stiffness = [known[0].stiffness_kN_per_m, 60e3, known[2].stiffness_kN_per_m]
    assert_equal(found, solved(girder_of(text), stiffness, [0.0, 0.0, 3e-3, 0.0]))


def test_supposing_what_is_calibrated_changes_nothing(visited: str) -> None:
    found = supposed(visited, "north/pier 2 settlement = 3 mm")
    for section in found.girders[0].sections:
        assert section.supposed is not None
        assert section.supposed.utilisation == pytest.approx(section.calibrated.utilisation, rel=EXACT)


# kept apart ---------------------------------------------------------------------------------------


def test_nothing_of_a_supposition_is_kept(visited: str) -> None:
    with open_record(visited) as opened:
        before = len(opened.results("quillmere", "assessment"))
    supposed(visited, "north/pier 1 settlement = 5 mm")
    with open_record(visited) as opened:
        assert len(opened.results("quillmere", "assessment")) == before


def test_without_a_supposition_the_supposed_case_is_null(visited: str) -> None:
    document = call(visited, "assess", "quillmere", "--json").document
    assert document["supposed"] == []
    assert {str(section["supposed"]) for section in document["girders"][0]["sections"]} == {"None"}


def test_the_supposed_case_stands_beside_the_calibrated_one(visited: str) -> None:
    line = "north/pier 1 settlement = 5 mm"
    document = call(visited, "assess", "quillmere", "--json", "--suppose", line).document
    assert document["supposed"] == [line]
    section = document["girders"][0]["sections"][0]
    assert section["supposed"]["utilisation"] != section["calibrated"]["utilisation"]
    assert any(line in caution and "no finding" in caution for caution in document["cautions"])
    assert json.dumps(document)
    said = call(visited, "assess", "quillmere", "--suppose", line).out
    assert f"Supposed: {line}" in said
    assert "as supposed" in said


# refused ------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("line", "words"),
    [
        ("north/pier 1 settlement", ("NAME = VALUE", "stiffness = 220 kN/mm")),
        ("north/pier 1 settlement =", ("NAME = VALUE",)),
        ("= 5 mm", ("NAME = VALUE",)),
        ("north/pier 9 settlement = 5 mm", ('did you mean "north/pier', 'write for example "north/')),
        ("north/pier 1 settlement = 5", ("has no unit", "5 mm")),
        ("north/pier 1 settlement = 5 kN", ("no unit of length", "5 mm")),
        ("north/pier 1 stiffness = 0 kN/mm", ("above 0", "220 kN/mm")),
        ("north/east abutment stiffness = 9 kN/mm", ("is a pin", "east abutment settlement = 5 mm")),
        ("north stiffness factor = -1", ("above 0", "0.9")),
        ("north stiffness factor = 90 %", ("not one number",)),
        ("live other factor = 1.2", ("live line traffic factor",)),
        ("section mid/web loss = 2 mm", ("not given by plates",)),
        ("permanent north/ballast factor = 2", ('write for example "permanent north/steelwork factor',)),
    ],
)
def test_a_wrong_supposition_is_refused_in_one_line_that_shows_a_right_one(
    record: str, line: str, words: tuple[str, ...]
) -> None:
    said = call(record, "assess", "quillmere", "--suppose", line)
    assert (said.code, said.out, len(said.err.splitlines())) == (2, "", 1)
    assert "--suppose" in said.err
    for word in words:
        assert word in said.err


def test_a_loss_that_leaves_no_plate_is_refused(tmp_path: Path) -> None:
    url = str(tmp_path / "plates.sqlite")
    workflow.init_record(url)
    workflow.add_bridge(url, PLATES)
    with pytest.raises(BedstoneError, match="14 mm thick"):
        supposed(url, "section mid/web loss = 14 mm", bridge="ashbeck")


def test_the_same_thing_cannot_be_supposed_twice(record: str) -> None:
    with pytest.raises(BedstoneError, match="twice"):
        supposed(record, "north/pier 1 settlement = 5 mm", "north/pier  1  settlement = 6 mm")


def test_a_support_that_lifts_as_supposed_is_named(record: str, tmp_path: Path) -> None:
    text = changed(bridge_text(), 'kind = "pin" ', 'kind = "pin"\nhold_down = false\n')
    path = tmp_path / "loose.toml"
    path.write_text(text)
    workflow.add_bridge(record, path)
    found = supposed(record, "north/pier 1 settlement = 60 mm")
    assert any("as supposed" in caution and "lifts" in caution for caution in found.cautions)
