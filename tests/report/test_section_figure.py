"""The drawing of a section from plates: what stands where, and what is written beside it."""

from __future__ import annotations

from dataclasses import replace

import pytest

from assess.report.figures import section
from assess.shown import PlateShown, SectionShown, SectionView


def plate(
    name: str, width: float, height: float, bottom: float, loss: float = 0.0, lost: str = ""
) -> PlateShown:
    upright = height > width
    return PlateShown(
        name=name, width_mm=width, height_mm=height, bottom_mm=bottom, loss_mm=loss, lost=lost, web=upright
    )


def view(*plates: PlateShown, **changes: object) -> SectionView:
    shown = SectionShown(
        id="mid",
        area_m2=0.04,
        second_moment_m4=0.011,
        elastic_modulus_top_m3=0.02,
        elastic_modulus_bottom_m3=0.02,
        plastic_modulus_m3=0.022,
        sagging_capacity_kNm=4000.0,
        hogging_capacity_kNm=4000.0,
        shear_capacity_kN=1800.0,
    )
    made = SectionView(
        section="mid",
        shown=shown,
        capacities=[],
        plates=list(plates),
        holes=[],
        deck=None,
        elastic_axis_mm=600.0,
        plastic_axis_mm=600.0,
        shear_area_m2=0.0157,
        losses="",
        method="elastic",
    )
    return replace(made, **changes)  # type: ignore[arg-type]


GIRDER = (plate("top flange", 400, 40, 1160), plate("web", 14, 1120, 40), plate("bottom flange", 400, 40, 0))
BOX = (
    plate("top flange", 900, 30, 1540),
    plate("left web", 14, 1500, 40, 3.0, "1 x 3 mm"),
    plate("right web", 14, 1500, 40),
    plate("bottom flange", 800, 40, 0),
)


def spans(*plates: PlateShown) -> dict[str, list[tuple[float, float]]]:
    found: dict[str, list[tuple[float, float]]] = {}
    for box in section.arranged(view(*plates)):
        found.setdefault(box.plate.name, []).append((box.left, box.left + box.width))
    return found


def test_a_girder_is_drawn_symmetrically() -> None:
    assert spans(*GIRDER) == {
        "web": [(-7.0, 7.0)],
        "top flange": [(-200.0, 200.0)],
        "bottom flange": [(-200.0, 200.0)],
    }


def test_the_webs_of_a_box_stand_apart_under_its_flanges() -> None:
    found = spans(*BOX)
    (left,), (right,) = found["left web"], found["right web"]
    assert left[1] < 0.0 < right[0]
    assert left[0] == pytest.approx(-right[1])
    assert found["bottom flange"] == [(-400.0, 400.0)]
    assert right[1] <= 400.0


def test_flat_legs_beside_a_web_lie_half_on_either_side() -> None:
    angles = plate("angles", 212, 12, 1148)
    through = (plate("web", 12, 1160, 0), angles)
    assert spans(*through)["angles"] == [(-112.0, -6.0), (6.0, 112.0)]


@pytest.mark.parametrize("plates", [GIRDER, BOX], ids=["girder", "box"])
def test_no_two_plates_are_drawn_over_each_other(plates: tuple[PlateShown, ...]) -> None:
    boxes = section.arranged(view(*plates))
    for i, one in enumerate(boxes):
        for other in boxes[i + 1 :]:
            apart = one.left + one.width <= other.left or other.left + other.width <= one.left
            above = one.plate.bottom_mm >= other.plate.top_mm or other.plate.bottom_mm >= one.plate.top_mm
            assert apart or above, (one.plate.name, other.plate.name)


def test_every_plate_is_named_with_size_and_loss_and_its_leader_ends_on_it() -> None:
    svg = section.draw(view(*BOX), key="s")
    for plate_ in BOX:
        assert plate_.name in svg
    assert "14 × 1500 mm, lost 1 × 3 mm" in svg
    assert "hatched edge: plate that has lost metal" in svg
    assert "axes: heights above the underside of the plates" in svg


def test_a_section_without_loss_has_no_word_on_hatching() -> None:
    assert "hatched" not in section.draw(view(*GIRDER), key="s")


def test_holes_are_told() -> None:
    told = section.draw(view(*GIRDER, holes=[("top flange", None, 44.0), ("web", 300.0, 22.0)]), key="s")
    assert "holes, width in all: 44 mm in top flange, 22 mm in web" in told
    assert "holes of 22 mm in all in web at 300 mm" in section.in_words(
        view(*GIRDER, holes=[("web", 300.0, 22.0)])
    )


def test_plates_side_by_side_have_leaders_at_different_heights() -> None:
    """Both webs of a box have their middles at one level."""
    sheet = section._sheet(view(*BOX), section.arranged(view(*BOX)))
    anchors = section._anchors(sheet, list(BOX))
    assert anchors[2] - anchors[1] > 20.0
