"""Sections from plates in a bridge file: what is read, and what is refused."""

from __future__ import annotations

import datetime as dt

import pytest

from db.documents import BridgeDoc, DeckDoc, LossDoc, SectionDoc
from db.errors import BedstoneError
from db.exchange import check_losses, parse_bridge
from db.exchange.plausibility import bridge_queries
from tests.db.conftest import changed

PLATES = """[[section]]
id = "mid"
E = "205 GPa"
yield_strength = "235 MPa"
  [[section.plate]]
  name = "top flange"
  width = "300 mm"
  height = "25 mm"
  [[section.plate]]
  name = "web"
  width = "12 mm"
  height = "1150 mm"
  [[section.plate]]
  name = "bottom flange"
  width = "400 mm"
  height = "30 mm"
  yield_strength = "355 MPa"
  [[section.hole]]
  plate = "bottom flange"
  diameter = "24 mm"
  count = 2
  [[section.hole]]
  plate = "web"
  diameter = "24 mm"
  level = "200 mm"
  [section.deck]
  width = "2.0 m"
  thickness = "200 mm"
  modular_ratio = 6.5
  modular_ratio_long = 15
  gap = "30 mm"
  [[section.loss]]
  plate = "web"
  faces = 2
  depth = "1.5 mm"
  visit = 2019-05-14
"""
MORE_LOSS = '  [[section.loss]]\n  plate = "web"\n  faces = 1\n  depth = "2 mm"\n  visit = {}\n'


def plated(text: str, plates: str = PLATES) -> str:
    """The contract's bridge with its first section from plates."""
    start = text.index("[[section]]")
    end = text.index("[[section]]", start + 1)
    return f"{text[:start]}{plates}\n{text[end:]}"


def read(text: str, *changes: tuple[str, str]) -> BridgeDoc:
    plates = PLATES
    for old, new in changes:
        plates = changed(plates, old, new)
    return parse_bridge(plated(text, plates), file="bridge.toml")


def section(text: str, *changes: tuple[str, str]) -> SectionDoc:
    return read(text, *changes).section("mid")


def test_plates_stack_from_top_to_bottom(bridge_text: str):
    plates = {plate.name: plate for plate in section(bridge_text).plates}
    assert list(plates) == ["top flange", "web", "bottom flange"]
    assert [p.bottom for p in plates.values()] == pytest.approx([1.180, 0.030, 0.0])
    assert (plates["web"].width, plates["web"].height) == pytest.approx((0.012, 1.150))


def test_a_plate_with_a_bottom_stands_beside_the_stack(bridge_text: str):
    found = section(bridge_text, ('name = "web"', 'name = "web"\n  bottom = "40 mm"'))
    assert [p.bottom for p in found.plates] == pytest.approx([0.030, 0.040, 0.0])


def test_a_plate_has_its_own_strength_or_that_of_the_section(bridge_text: str):
    assert [p.yield_strength for p in section(bridge_text).plates] == pytest.approx([235e3, 235e3, 355e3])


def test_what_belongs_to_plates_is_read(bridge_text: str):
    found = section(bridge_text)
    assert found.second_moment is None
    assert (found.holes[0].count, found.holes[1].level) == (2, pytest.approx(0.2))
    assert found.losses == (LossDoc(plate="web", faces=2, depth=0.0015, visit=dt.date(2019, 5, 14)),)
    assert found.deck == DeckDoc(
        width=2.0, thickness=0.2, modular_ratio=6.5, modular_ratio_long=15.0, gap=pytest.approx(0.03)
    )
    assert found.moment_resistance == "elastic"


def test_a_visit_may_be_named_as_text(bridge_text: str):
    found = section(bridge_text, ("visit = 2019-05-14", 'visit = "2019-05-14"'))
    assert found.losses[0].visit == dt.date(2019, 5, 14)


def test_a_deck_without_a_lasting_ratio_has_one_ratio(bridge_text: str):
    assert section(bridge_text, ("  modular_ratio_long = 15\n", "")).deck.modular_ratio_long == 6.5


def test_capacities_and_a_second_moment_may_stand_beside_plates(bridge_text: str):
    found = section(
        bridge_text, ('E = "205 GPa"', 'E = "205 GPa"\nI = "0.0118 m^4"\nshear_capacity = "1900 kN"')
    )
    assert (found.second_moment, found.shear_capacity) == pytest.approx((0.0118, 1900.0))


def test_plates_without_strength_are_read_where_a_capacity_is_given(bridge_text: str):
    found = section(
        bridge_text,
        ('yield_strength = "235 MPa"', 'shear_capacity = "1900 kN"'),
        ('  yield_strength = "355 MPa"\n', ""),
    )
    assert [p.yield_strength for p in found.plates] == [None, None, None]


BAD = {
    "unknown plate of a loss": (
        'plate = "web"\n  faces',
        'plate = "wob"\n  faces',
        'section "mid", loss 1, plate: there is no plate "wob" (did you mean "web"',
    ),
    "unknown plate of a hole": (
        'plate = "bottom flange"',
        'plate = "flange"',
        'section "mid", hole 1, plate: there is no plate "flange"',
    ),
    "loss thicker than the plate": (
        'depth = "1.5 mm"',
        'depth = "7 mm"',
        'section "mid", loss 1, depth: plate "web", visit 2019-05-14: a loss of 14 mm takes the whole plate',
    ),
    "loss of the whole plate": ('depth = "1.5 mm"', 'depth = "6 mm"', "takes the whole plate, 12 mm thick"),
    "negative loss": ('depth = "1.5 mm"', 'depth = "-1.5 mm"', 'section "mid", loss 1, depth'),
    "loss as a number": ('depth = "1.5 mm"', "depth = 1.5", "loss 1, depth: 1.5 is a number without a unit"),
    "loss as a force": ('depth = "1.5 mm"', 'depth = "1.5 kN"', "no unit of length"),
    "three faces": ("faces = 2", "faces = 3", 'section "mid", loss 1, faces: 3 is not a count'),
    "no faces": ("  faces = 2\n", "", 'section "mid", loss 1, faces: it is missing'),
    "no visit": ("  visit = 2019-05-14\n", "", 'section "mid", loss 1, visit: it is missing'),
    "no day": ("visit = 2019-05-14", 'visit = "spring"', "spring"),
    "negative width": ('width = "12 mm"', 'width = "-12 mm"', 'plate "web", width'),
    "zero height": ('height = "1150 mm"', 'height = "0 mm"', 'plate "web", height'),
    "absurd height": ('height = "1150 mm"', 'height = "1150 m"', "check the unit"),
    "no height": ('  height = "1150 mm"\n', "", 'plate "web", height: it is missing'),
    "plate without a name": ('  name = "web"\n', "", 'section "mid", plate 2, name: it is missing'),
    "two plates of a name": ('name = "web"', 'name = "bottom flange"', "two plates of the section"),
    "strength in GPa": ('yield_strength = "355 MPa"', 'yield_strength = "355 GPa"', "check the unit"),
    "no strength": (
        'yield_strength = "235 MPa"\n',
        "",
        'plate "top flange", yield_strength: it is missing, and other plates',
    ),
    "unknown field": ('name = "web"', 'nam = "web"', 'unknown field "nam" (did you mean "name"'),
    "web as text": ('name = "web"', 'name = "web"\n  web = "yes"', "neither true nor false"),
    "holes as wide as the plate": ("count = 2", "count = 17", "together are as wide as the plate"),
    "hole past its plate": ('level = "200 mm"', 'level = "35 mm"', "30 to 1180 mm"),
    "hole without a level": ('  level = "200 mm"\n', "", "hole 2, level: it is missing"),
    "level in a flat plate": ("count = 2", 'level = "10 mm"', "the plate lies flat"),
    "two holes in a web at once": ('level = "200 mm"', 'level = "200 mm"\n  count = 2', "its own level"),
    "ratio turned round": ("modular_ratio_long = 15", "modular_ratio_long = 3", "is less than modular_ratio"),
    "no ratio": ("  modular_ratio = 6.5\n", "", 'section "mid", deck, modular_ratio: it is missing'),
    "ratio as text": ("modular_ratio = 6.5", 'modular_ratio = "6.5"', "is not a number"),
    "negative gap": ('gap = "30 mm"', 'gap = "-30 mm"', "deck, gap: it is negative"),
    "plastic without concrete": (
        'yield_strength = "235 MPa"',
        'yield_strength = "235 MPa"\nmoment_resistance = "plastic"',
        "needs the deck's strength",
    ),
    "unknown method": (
        'yield_strength = "235 MPa"',
        'yield_strength = "235 MPa"\nmoment_resistance = "best"',
        '"best" is not known here',
    ),
}


@pytest.mark.parametrize(("old", "new", "told"), BAD.values(), ids=BAD)
def test_a_bad_section_is_refused_in_one_line(bridge_text: str, old: str, new: str, told: str):
    with pytest.raises(BedstoneError) as caught:
        section(bridge_text, (old, new))
    line = str(caught.value)
    assert line.startswith("bridge.toml, section ")
    assert told in line
    assert "\n" not in line
    assert caught.value.remedy


def test_no_strength_and_no_capacity_is_refused(bridge_text: str):
    with pytest.raises(BedstoneError, match="yield_strength: it is missing, and no capacity is given"):
        section(bridge_text, ('yield_strength = "235 MPa"\n', ""), ('  yield_strength = "355 MPa"\n', ""))


@pytest.mark.parametrize("name", ["yield_strength", "loss", "deck", "hole", "moment_resistance"])
def test_what_belongs_to_plates_is_refused_without_them(bridge_text: str, name: str):
    values = {
        "yield_strength": 'yield_strength = "235 MPa"',
        "moment_resistance": 'moment_resistance = "elastic"',
        "loss": 'loss = [{plate = "web"}]',
        "hole": 'hole = [{plate = "web"}]',
        "deck": 'deck = {width = "2 m"}',
    }
    text = changed(bridge_text, 'I = "0.0118 m^4"', f'I = "0.0118 m^4"\n{values[name]}')
    with pytest.raises(BedstoneError, match="it belongs to plates, and the section has none"):
        parse_bridge(text, file="bridge.toml")


def test_losses_of_one_visit_add_up(bridge_text: str):
    one_face = ("faces = 2", "faces = 1")
    last = ("  visit = 2019-05-14\n", "  visit = 2019-05-14\n" + MORE_LOSS.format("2019-05-14"))
    assert len(section(bridge_text, one_face, last).losses) == 2
    with pytest.raises(BedstoneError, match="a plate has two faces, and more are written"):
        section(bridge_text, last)
    with pytest.raises(BedstoneError, match=r"a loss of 12 mm takes the whole plate"):
        section(bridge_text, one_face, ('depth = "1.5 mm"', 'depth = "10 mm"'), last)


def test_losses_of_different_visits_do_not_add_up(bridge_text: str):
    last = ("  visit = 2019-05-14\n", "  visit = 2019-05-14\n" + MORE_LOSS.format("2024-05-14"))
    assert len(section(bridge_text, ('depth = "1.5 mm"', 'depth = "5.9 mm"'), last).losses) == 2


@pytest.mark.parametrize(
    ("day", "told"), [("1980-01-01", "before the bridge was built"), ("2031-01-01", "in the future")]
)
def test_a_loss_lies_between_building_and_today(bridge_text: str, day: str, told: str):
    document = read(bridge_text, ("2019-05-14", day))
    with pytest.raises(BedstoneError, match=told):
        check_losses(document, today=dt.date(2030, 1, 1), file="bridge.toml")
    check_losses(read(bridge_text), today=dt.date(2030, 1, 1), file="bridge.toml")


def test_plates_that_stand_as_drawn_are_not_queried(bridge_text: str):
    assert not [q for q in bridge_queries(read(bridge_text)) if q.startswith("section")]


def test_a_web_that_ends_within_a_flange_is_looked_at_again(bridge_text: str):
    """The slip of a box girder: the second web stands on the underside of the wrong flange."""
    (query,) = bridge_queries(read(bridge_text, ('name = "web"', 'name = "web"\n  bottom = "20 mm"')))
    assert query.startswith('section "mid": plate "web" ends within the thickness of "bottom flange"')


def test_a_plate_clear_of_the_others_is_looked_at_again(bridge_text: str):
    (query,) = bridge_queries(
        read(bridge_text, ('height = "25 mm"', 'height = "25 mm"\n  bottom = "1190 mm"'))
    )
    assert query.startswith('section "mid": plate "top flange" stands 10 mm clear of the plates below it')
