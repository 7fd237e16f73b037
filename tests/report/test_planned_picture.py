"""The picture of a planned visit."""

from __future__ import annotations

import itertools
import re
from pathlib import Path
from xml.etree import ElementTree

import pytest

from assess.report import svg, write_plan
from assess.report.figures import planned
from tests.plans import girder_plan, plan_result, planned_reading

SVG = "{http://www.w3.org/2000/svg}"


def drawn(tmp_path: Path, *girders) -> ElementTree.Element:
    path = tmp_path / "plan.svg"
    write_plan(plan_result(*girders), path)
    return ElementTree.fromstring(path.read_text(encoding="utf-8"))


def texts(root: ElementTree.Element) -> list[str]:
    return [" ".join(node.itertext()).strip() for node in root.iter(f"{SVG}text")]


def test_states_places_and_numbers_by_worth_are_written(tmp_path):
    said = texts(drawn(tmp_path))
    for word in ("Girder north", "T1", "T2", "permanent", "pier 1", "12 m", "1", "2", "3", "4", "5"):
        assert word in said
    assert "leading axle at 13.1 m" in said
    assert "for hogging, pier 1: utilisation 0.930, unsure by 0.210 before and 0.0110 after" in said


def test_a_leading_axle_past_the_end_is_said_to_be_off_the_girder(tmp_path):
    assert "leading axle at 43.5 m, off the girder" in texts(drawn(tmp_path))


def test_every_quantity_has_a_shape_of_its_own_told_in_the_key(tmp_path):
    key = " ".join(texts(drawn(tmp_path)))
    for told in planned._SHAPES.values():
        assert told in key
    alone = girder_plan(readings=[planned_reading("T1", "compression", "pier 1")])
    assert "strain" not in " ".join(texts(drawn(tmp_path, alone)))


def test_no_mark_of_a_row_lies_over_another():
    near = [planned_reading("T1", "strain", at_m=x) for x in (6.0, 6.1, 6.2, 7.5, 6.0, 20.0)]
    panel = planned._panel(girder_plan(readings=near), [0.0, 1.8])
    marks = panel.rows[0].marks
    assert sorted(mark.number for mark in marks) == [1, 2, 3, 4, 5, 6]
    for one, other in itertools.combinations(marks, 2):
        assert one.lane != other.lane or abs(one.x - other.x) >= 2.0 * planned._MARK


@pytest.mark.parametrize("count", [1, 3])
def test_texts_stay_within_the_paper_and_at_least_nine_points(tmp_path, count):
    names = [f"girder of a long name, number {i}" for i in range(count)]
    root = drawn(tmp_path, *(girder_plan(girder=name) for name in names))
    box = [float(v) for v in root.attrib["viewBox"].split()]
    assert box[2] == pytest.approx(svg.FULL_WIDTH)
    for node in root.iter(f"{SVG}text"):
        style = node.attrib.get("style", "")
        size = re.search(r"font(?:-size)?:[^;]*?([\d.]+)px", style)
        assert size is not None
        assert float(size.group(1)) >= 9.0
    assert [f"Girder {name}" in texts(root) for name in names] == [True] * count


def test_the_file_stands_alone_and_is_told_in_words(tmp_path):
    root = drawn(tmp_path)
    assert root.attrib["width"].endswith("pt")
    assert root.attrib["height"].endswith("pt")
    assert "font-family" in root.attrib["style"]
    told = root.findtext(f"{SVG}desc") or ""
    assert "T1 at 13.1 m; T2 at 43.5 m" in told
    assert "2 compression pier 1 in T1" in told


def test_without_a_capacity_the_picture_says_so(tmp_path):
    bare = girder_plan(governs=None, utilisation=None, sd_utilisation_before=None)
    assert any("no section gives a capacity" in said for said in texts(drawn(tmp_path, bare)))


def test_the_same_plan_gives_the_same_bytes_and_a_png_is_one(tmp_path):
    for name in ("a.svg", "b.svg", "a.png", "b.png"):
        write_plan(plan_result(), tmp_path / name)
    assert (tmp_path / "a.svg").read_bytes() == (tmp_path / "b.svg").read_bytes()
    assert (tmp_path / "a.png").read_bytes() == (tmp_path / "b.png").read_bytes()
    assert (tmp_path / "a.png").read_bytes()[:8] == b"\x89PNG\r\n\x1a\n"
