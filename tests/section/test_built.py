"""Sections by hand, and what must hold for any section."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from assess.section import HOGGING, SAGGING, BuiltSection, Deck, Hole, Plate, resistance
from tests.section.shapes import MM, PLAIN, any_sections, i_section, i_sections, mirrored, plate

HAND = pytest.approx  # to rounding: the hand values below are exact or carry seven figures


def test_unequal_flanges_by_hand():
    section = i_section()
    elastic = section.stiffness
    assert elastic.area == HAND(14000e-6)
    assert elastic.centroid == HAND(0.190)
    assert elastic.second_moment == HAND(482.0666667e-6, rel=1e-9)
    assert section.elastic_modulus("top") == HAND(482.0666667e-6 / 0.250, rel=1e-9)
    assert section.elastic_modulus("bottom") == HAND(482.0666667e-6 / 0.190, rel=1e-9)
    assert section.equal_area.axis == HAND(0.120)
    assert section.equal_area.moment == HAND(2.4e-3)
    assert section.yield_moment(SAGGING) == HAND(482.0666667, rel=1e-9)
    assert section.yield_moment(HOGGING) == section.yield_moment(SAGGING)
    assert section.plastic(SAGGING).moment == HAND(600.0)
    assert section.shear_area == HAND(4000e-6)
    assert section.shear_resistance == HAND(1000.0 / 3**0.5)


def test_hybrid_strengths_by_hand():
    """The bottom flange of 400 MPa holds the equal-force axis; the top flange of 250 MPa yields first."""
    section = i_section(fy=(250.0, 250.0, 400.0))
    found = section.plastic(SAGGING)
    assert found.axis == HAND(0.0183333333, rel=1e-8)
    assert found.moment == HAND(633.6666667, rel=1e-9)
    assert section.yield_moment(SAGGING) == HAND(482.0666667, rel=1e-9)
    assert section.equal_area.axis == HAND(0.120)


def test_a_weak_web_yields_before_strong_flanges():
    section = i_section(fy=(460.0, 235.0, 460.0))
    assert section.yield_moment(SAGGING) == HAND(235e3 * 482.0666667e-6 / 0.230, rel=1e-9)


def test_box_by_hand():
    section = BuiltSection(
        plates=(
            plate("top", 400, 10, 490),
            plate("left", 10, 480, 10),
            plate("right", 10, 480, 10),
            plate("bottom", 400, 10, 0),
        )
    )
    assert section.stiffness.area == HAND(17600e-6)
    assert section.stiffness.second_moment == HAND(664.5866667e-6, rel=1e-9)
    assert section.equal_area.moment == HAND(3.112e-3)
    assert section.equal_area.axis == HAND(0.250)
    assert section.shear_area == HAND(9600e-6)


def test_two_flanges_without_a_web_have_their_axis_in_the_middle():
    section = BuiltSection(plates=(plate("top", 100, 20, 480), plate("bottom", 100, 20, 0)))
    assert section.equal_area.axis == HAND(0.250)
    assert section.equal_area.moment == HAND(2.0 * 2000e-6 * 0.240)
    assert section.shear_resistance is None
    assert section.shear_area == 0.0


def deck(**changed: float) -> Deck:
    values = {"width": 1.4, "thickness": 0.140, "bottom": 0.450, "modular_ratio": 10.0} | changed
    return Deck(modular_ratio_long=values.pop("long", values["modular_ratio"]), **values)


def test_a_deck_by_hand():
    section = i_section(deck=deck())
    assert section.stiffness.area == HAND(33600e-6)
    assert section.stiffness.centroid == HAND(0.3825)
    assert section.stiffness.second_moment == HAND(1403.43e-6, rel=1e-8)
    assert section.yield_moment(SAGGING) == HAND(250e3 * 1403.43e-6 / 0.3825, rel=1e-8)
    assert section.yield_moment(HOGGING) == HAND(482.0666667, rel=1e-9)
    assert section.plastic(SAGGING) is None  # no strength of the concrete is known
    assert not section.axis_in_deck


def test_a_plastic_deck_is_compressed_down_to_the_axis_and_pulls_nothing():
    found = i_section(deck=deck(strength=20e3)).plastic(SAGGING)
    assert found.axis == HAND(0.465)
    assert found.moment == HAND(1181.25)
    assert i_section(deck=deck(strength=20e3)).plastic(HOGGING).moment == HAND(600.0)


def test_a_lasting_load_counts_where_it_gives_less():
    short, lasting = i_section(deck=deck()), i_section(deck=deck(long=25.0))
    assert lasting.yield_moment(SAGGING) < short.yield_moment(SAGGING)
    assert lasting.stiffness == short.stiffness
    assert lasting.yield_moment(SAGGING) == i_section(deck=deck(modular_ratio=25.0)).yield_moment(SAGGING)


def test_weak_concrete_governs_sagging():
    section = i_section(deck=deck(strength=5e3))
    assert section.yield_moment(SAGGING) == HAND(5e3 * 10.0 * 1403.43e-6 / (0.590 - 0.3825), rel=1e-8)


def test_a_thick_deck_holds_the_elastic_axis_and_says_so():
    assert i_section(deck=deck(thickness=0.6, width=4.0)).axis_in_deck


def test_holes_weaken_and_leave_the_stiffness_alone():
    holes = (Hole(plate="bottom", diameter=0.025, count=2), Hole(plate="web", diameter=0.020, level=0.220))
    whole, holed = i_section(), i_section(holes=holes[:1])
    area = 13000e-6
    centroid = (2660000 - 10000) / 13000 * MM
    second = (482.0666667e6 + 14000 * 190.0**2 - 133333.3333) * 1e-12 - area * centroid**2
    found = holed.strength(SAGGING)
    assert (found.area, found.centroid) == (HAND(area), HAND(centroid))
    assert found.second_moment == HAND(second, rel=1e-9)
    assert holed.stiffness == whole.stiffness
    assert i_section(holes=holes).shear_resistance == HAND(3800e-6 * 250e3 / 3**0.5)
    assert i_section(holes=holes).shear_area == whole.shear_area


def test_a_loss_is_taken_off_the_thickness_and_the_plate_keeps_its_middle():
    flat, upright = plate("flat", 200, 20, 100, loss=4.0).worn, plate("web", 10, 400, 20, loss=3.0).worn
    assert (flat.width, flat.height, flat.bottom) == (HAND(0.2), HAND(0.016), HAND(0.102))
    assert (upright.width, upright.height, upright.bottom) == (HAND(0.007), HAND(0.4), HAND(0.02))


def test_losses_equal_the_thinner_section():
    worn = i_section(loss=(4.0, 2.0, 0.0))
    thin = BuiltSection(
        plates=(plate("top", 200, 16, 422), plate("web", 8, 400, 20), plate("bottom", 300, 20, 0))
    )
    assert worn.stiffness.second_moment == HAND(thin.stiffness.second_moment)
    assert worn.yield_moment(SAGGING) == HAND(thin.yield_moment(SAGGING))
    assert worn.as_built == i_section()


def test_a_narrow_outer_plate_that_wears_away_does_not_raise_the_capacity():
    """First yield of the whole alone would rise: its outer fibre moves inward faster than it weakens."""

    as_built, worn = (
        BuiltSection(plates=(*i_section().plates, plate("bar", 12, 11, -11, 100.0, loss=loss)))
        for loss in (0.0, 10.0)
    )
    assert worn.yield_moment(SAGGING) > as_built.yield_moment(SAGGING)
    assert resistance(worn).sagging == as_built.yield_moment(SAGGING)


def test_wear_near_the_axis_does_not_raise_the_capacity():
    """Under a deck the axis lies near the top flange, whose wear draws it down to the fibre that yields first."""
    deck = Deck(width=0.5, thickness=0.2, bottom=0.44, modular_ratio=15.0, modular_ratio_long=15.0)
    bottom, both = (i_section(loss=(top, 0.0, 5.0), deck=deck) for top in (0.0, 12.0))
    assert both.yield_moment(SAGGING) > bottom.yield_moment(SAGGING)
    assert resistance(both).sagging == HAND(bottom.yield_moment(SAGGING))


@pytest.mark.parametrize(
    "wrong",
    [
        {"width": 0.0},
        {"width": -0.1},
        {"height": float("nan")},
        {"yield_strength": 0.0},
        {"modular_ratio": -1.0},
        {"bottom": float("inf")},
        {"loss": 0.01},
        {"loss": 0.02},
        {"loss": -0.001},
    ],
)
def test_an_impossible_plate_is_refused(wrong: dict[str, float]):
    with pytest.raises(ValueError, match="plate web"):
        Plate(**{"name": "web", "width": 0.01, "height": 0.4, "bottom": 0.0, **wrong})


@pytest.mark.parametrize(
    "hole",
    [
        Hole(plate="flange", diameter=0.02),
        Hole(plate="bottom", diameter=0.1, count=3),
        Hole(plate="web", diameter=0.02),
        Hole(plate="web", diameter=0.02, level=0.025),
        Hole(plate="web", diameter=0.02, level=0.2, count=2),
    ],
)
def test_an_impossible_hole_is_refused(hole: Hole):
    with pytest.raises(ValueError, match="plate"):
        i_section(holes=(hole,))


def test_a_name_comes_once():
    with pytest.raises(ValueError, match="its own name"):
        BuiltSection(plates=(plate("web", 10, 400, 0), plate("web", 10, 400, 0)))


def test_a_missing_strength_leaves_the_resistance_undetermined():
    section = i_section(fy=(None, None, None))
    found = resistance(section)
    assert (found.sagging, found.hogging, found.shear) == (None, None, None)
    assert section.plastic(SAGGING) is None


# any section -------------------------------------------------------------------------------------


def by_strips(section: BuiltSection) -> tuple[float, float]:
    """Equal-force axis and plastic moment by summing strips of a quarter of a millimetre."""
    step = 0.25 * MM
    low, high = round(section.lower / step), round(section.upper / step)
    level = (np.arange(low, high) + 0.5) * step
    force = np.zeros(level.size)
    for p in section.steel:
        force[(level > p.bottom) & (level < p.top)] += p.width * p.yield_strength * step
    below = np.concatenate([[0.0], np.cumsum(force)])
    axis = float(np.interp(below[-1] / 2.0, below, np.arange(low, high + 1) * step))
    return axis, float(force @ np.abs(level - axis))


@PLAIN
@given(any_sections())
def test_the_plastic_moment_is_that_of_strips(section: BuiltSection):
    _, moment = by_strips(section)
    assert section.plastic(SAGGING).moment == pytest.approx(moment, rel=1e-3)
    thick = replace(section, plates=tuple(replace(p, yield_strength=1.0) for p in section.plates))
    assert section.equal_area.moment == pytest.approx(by_strips(thick)[1], rel=1e-3)


@PLAIN
@given(any_sections())
def test_forces_balance_at_the_plastic_axis(section: BuiltSection):
    axis = section.plastic(SAGGING).axis
    below = sum(p.width * p.yield_strength * min(max(axis - p.bottom, 0.0), p.height) for p in section.steel)
    whole = sum(p.width * p.yield_strength * p.height for p in section.steel)
    assert below == pytest.approx(whole / 2.0, rel=1e-9)


@PLAIN
@given(any_sections(), st.data())
def test_area_stiffness_and_plastic_moment_fall_with_every_loss(section: BuiltSection, data: st.DataObject):
    share = [data.draw(st.floats(0.0, 0.9)) for _ in section.plates]
    more = [data.draw(st.floats(s, 0.95)) for s in share]
    states = [
        replace(
            section,
            plates=tuple(replace(p, loss=s * p.thickness) for p, s in zip(section.plates, ss, strict=True)),
        )
        for ss in (share, more)
    ]
    slack = 1.0 + 1e-12
    first, second = states
    assert second.stiffness.area <= first.stiffness.area * slack
    assert second.stiffness.second_moment <= first.stiffness.second_moment * slack
    assert second.shear_area <= first.shear_area * slack
    assert second.plastic(SAGGING).moment <= first.plastic(SAGGING).moment * slack
    for method in ("elastic", "plastic"):
        new, old = resistance(second, method=method), resistance(section, method=method)
        assert new.sagging <= old.sagging * slack


@PLAIN
@given(i_sections(), st.data())
def test_the_elastic_capacity_of_a_girder_falls_with_every_loss(section: BuiltSection, data: st.DataObject):
    share = [data.draw(st.floats(0.0, 0.6)) for _ in section.plates]
    more = [data.draw(st.floats(s, 0.65)) for s in share]
    found = [
        resistance(
            replace(
                section,
                plates=tuple(
                    replace(p, loss=s * p.thickness) for p, s in zip(section.plates, ss, strict=True)
                ),
            )
        )
        for ss in (share, more)
    ]
    for effect in ("sagging", "hogging", "shear"):
        assert getattr(found[1], effect) <= getattr(found[0], effect) * (1.0 + 1e-12)


@PLAIN
@given(i_sections(), st.floats(0.3, 3.0), st.floats(6.0, 20.0), st.data())
def test_a_loss_never_raises_the_capacity_under_a_deck(
    section: BuiltSection, width: float, ratio: float, data: st.DataObject
):
    """Up to a thousandth: a worn flange's own edge moves inward while its middle stays."""
    deck = Deck(
        width=width, thickness=0.2, bottom=section.upper, modular_ratio=ratio, modular_ratio_long=ratio
    )
    share = [data.draw(st.floats(0.0, 0.6)) for _ in section.plates]
    more = [data.draw(st.floats(s, 0.65)) for s in share]
    first, second = (
        replace(
            section,
            deck=deck,
            plates=tuple(replace(p, loss=s * p.thickness) for p, s in zip(section.plates, ss, strict=True)),
        )
        for ss in (share, more)
    )
    assert resistance(second).sagging <= resistance(first).sagging * 1.001
    assert resistance(second).hogging <= resistance(first).hogging * (1.0 + 1e-12)


@PLAIN
@given(any_sections(), st.floats(0.1, 0.9))
def test_splitting_a_plate_changes_nothing(section: BuiltSection, share: float):
    first, *rest = section.plates
    low = replace(first, name="low", height=share * first.height)
    high = replace(
        first, name="high", height=(1.0 - share) * first.height, bottom=first.bottom + share * first.height
    )
    beside = [
        replace(first, name=n, width=s * first.width) for n, s in (("left", share), ("right", 1.0 - share))
    ]
    for parts in ([low, high], beside):
        split = BuiltSection(plates=(*parts, *rest))
        assert split.stiffness.second_moment == pytest.approx(section.stiffness.second_moment, rel=1e-9)
        assert split.yield_moment(SAGGING) == pytest.approx(section.yield_moment(SAGGING), rel=1e-9)
        assert split.plastic(SAGGING).moment == pytest.approx(section.plastic(SAGGING).moment, rel=1e-9)


@PLAIN
@given(any_sections())
def test_the_mirror_image_swaps_top_and_bottom(section: BuiltSection):
    other = mirrored(section)
    assert other.elastic_modulus("top") == pytest.approx(section.elastic_modulus("bottom"), rel=1e-9)
    assert other.elastic_modulus("bottom") == pytest.approx(section.elastic_modulus("top"), rel=1e-9)
    assert other.equal_area.axis == pytest.approx(-section.equal_area.axis, rel=1e-9, abs=1e-9)
    assert other.plastic(HOGGING).moment == pytest.approx(section.plastic(SAGGING).moment, rel=1e-9)


@PLAIN
@given(any_sections(), st.floats(0.01, 100.0))
def test_units_do_not_matter(section: BuiltSection, scale: float):
    other = BuiltSection(
        plates=tuple(
            replace(p, width=scale * p.width, height=scale * p.height, bottom=scale * p.bottom)
            for p in section.plates
        )
    )
    assert other.stiffness.area == pytest.approx(scale**2 * section.stiffness.area)
    assert other.stiffness.second_moment == pytest.approx(scale**4 * section.stiffness.second_moment)
    assert other.elastic_modulus("top") == pytest.approx(scale**3 * section.elastic_modulus("top"))
    assert other.equal_area.moment == pytest.approx(scale**3 * section.equal_area.moment)


@PLAIN
@given(any_sections())
def test_plastic_is_no_less_than_elastic(section: BuiltSection):
    assert section.plastic(SAGGING).moment >= section.yield_moment(SAGGING) * (1.0 - 1e-12)
