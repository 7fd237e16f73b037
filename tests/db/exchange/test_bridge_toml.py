from __future__ import annotations

import datetime as dt
import hashlib
import math
from pathlib import Path

import pytest

from db.documents import BridgeDoc, PermanentDoc
from db.exchange import parse_bridge, read_bridge
from tests.db.conftest import DATA, changed, line_of

FIRST_SECTION = '[[section]]\nid = "mid"\nE = "205 GPa"\nI = "0.0118 m^4"'
PIN = 'kind = "pin"'
FACTORS = "permanent = 1.2"
POINT = '\n  [[girder.permanent]]\n  name = "post"\n  point = "40 kN"\n  at = "12 m"\n\n[[vehicle]]'

BAD = {
    # (old, new, what the line must say)
    "format 2": ("format = 1", "format = 2", "format"),
    "format as text": ("format = 1", 'format = "1"', "format"),
    "format true": ("format = 1", "format = true", "format"),
    "no format": ("format = 1", "", "format: it is missing"),
    "unknown field": ("stiffness_cv = 0.3", "stifness_cv = 0.3", 'did you mean "stiffness_cv"'),
    "unknown top table": ("[factors]", "[factor]", 'did you mean "factors"'),
    "unknown section field": ('E = "205 GPa"', 'e = "205 GPa"', 'did you mean "E"'),
    "no id": ('id = "quillmere"', "", "bridge, id: it is missing"),
    "empty id": ('id = "quillmere"', 'id = " "', "bridge, id: it is empty"),
    "line break in id": ('id = "quillmere"', 'id = "quill\\nmere"', "bridge, id"),
    "control character in id": ('id = "quillmere"', 'id = "quill\\u0007mere"', "bridge, id"),
    "NUL in a name": ('name = "Quillmere viaduct"', 'name = "a\\u0000b"', "bridge, name"),
    "endless id": ('id = "quillmere"', f'id = "{"q" * 101}"', "bridge, id"),
    "id with a space at its end": ('id = "north"', 'id = "north "', "id"),
    "id as number": ('id = "north"', "id = 7", "girder 1, id: 7 is not text"),
    "name as number": ('name = "Quillmere viaduct"', "name = 7", "bridge, name"),
    "built as text": ("built = 1989-06-01", 'built = "1989-06-01"', "bridge, built"),
    "built with a time": ("built = 1989-06-01", "built = 1989-06-01T12:00:00", "bridge, built"),
    "bare number": ('length = "12 m"', "length = 12", 'girder "north", span 1, length: 12 is a number'),
    "no unit": ('length = "12 m"', 'length = "12"', 'girder "north", span 1, length'),
    "wrong unit": ('length = "12 m"', 'length = "12 kN"', 'girder "north", span 1, length'),
    "expression": ('length = "12 m"', 'length = "2 * 6 m"', 'girder "north", span 1, length'),
    "two quantities": ('length = "12 m"', 'length = "39 ft 4 in"', 'girder "north", span 1, length'),
    "negative length": ('length = "12 m"', 'length = "-12 m"', 'girder "north", span 1, length'),
    "zero length": ('length = "12 m"', 'length = "0 m"', 'girder "north", span 1, length'),
    "NaN length": ('length = "12 m"', 'length = "nan m"', 'girder "north", span 1, length'),
    "absurdly long span": ('length = "12 m"', 'length = "12000 m"', "check the unit"),
    "absurdly short span": ('length = "12 m"', 'length = "12 mm"', "check the unit"),
    "zero E": ('E = "205 GPa"', 'E = "0 GPa"', 'section "mid", E'),
    "absurd E": ('E = "205 GPa"', 'E = "205 MPa"', 'section "mid", E'),
    "negative I": ('I = "0.0118 m^4"', 'I = "-0.0118 m^4"', 'section "mid", I'),
    "I in wrong power": ('I = "0.0118 m^4"', 'I = "0.0118 m^3"', 'section "mid", I'),
    "zero shear area": ('shear_area = "0.021 m^2"', 'shear_area = "0 m^2"', 'section "mid", shear_area'),
    "negative capacity": ('"5100 kN m"', '"-5100 kN m"', 'section "mid", sagging_capacity'),
    "zero G": ('I = "0.0118 m^4"', 'I = "0.0118 m^4"\nG = "0 GPa"', 'section "mid", G'),
    "duplicate section": ('id = "pier"', 'id = "mid"', 'two sections are called "mid"'),
    "unknown section": ('section = "mid"', 'section = "mide"', 'no section "mide" (did you mean "mid"'),
    "unknown section of a piece": ('section = "pier"', 'section = "peer"', "span 1, piece 1, section"),
    "piece outside its span": ('end = "12 m"', 'end = "12.1 m"', "span 1, piece 1, end"),
    "piece before its span": ('start = "9.5 m"', 'start = "-1 m"', "span 1, piece 1, start"),
    "piece reversed": ('start = "9.5 m"', 'start = "12 m"', "span 1, piece 1, end"),
    "pieces overlap": ('start = "12.5 m"', 'start = "2 m"', "span 2, piece 2, start"),
    "zero share": ("live_share = 0.5", "live_share = 0", 'girder "north", live_share'),
    "share as text": ("live_share = 0.5", 'live_share = "0.5"', "live_share"),
    "share of fifty": ("live_share = 0.5", "live_share = 50", "live_share"),
    "NaN share": ("live_share = 0.5", "live_share = nan", "live_share"),
    "zero stiffness": ('"150 kN/mm"', '"0 kN/mm"', 'girder "north", support 1 (west abutment), stiffness'),
    "negative stiffness": ('"220 kN/mm"', '"-220 kN/mm"', "support 2 (pier 1), stiffness"),
    "NaN stiffness": ('"220 kN/mm"', '"nan kN/mm"', "support 2 (pier 1), stiffness"),
    "no stiffness": ('stiffness = "220 kN/mm"', "", "support 2 (pier 1), stiffness: it is missing"),
    "zero cv": ("stiffness_cv = 0.3", "stiffness_cv = 0.0", "stiffness_cv"),
    "cv in percent": ("stiffness_cv = 0.3", "stiffness_cv = 30", "stiffness_cv"),
    "cv true": ("stiffness_cv = 0.3", "stiffness_cv = true", "stiffness_cv"),
    "cv huge": ("stiffness_cv = 0.3", f"stiffness_cv = 0x{'f' * 5000}", "stiffness_cv"),
    "unknown kind": ('kind = "pad"', 'kind = "roller"', "support 1 (west abutment), kind"),
    "kind as list": ('kind = "pad"', 'kind = ["pad"]', "support 1 (west abutment), kind"),
    "pin with stiffness": (PIN, PIN + '\n  stiffness = "1 kN/mm"', "support 4 (east abutment), stiffness"),
    "pin with cv": (PIN, PIN + "\n  stiffness_cv = 0.3", "support 4 (east abutment), stiffness_cv"),
    "rotation misspelt": (PIN, PIN + '\n  rotation = "fixd"', "support 4 (east abutment), rotation"),
    "rotation without rad": (PIN, PIN + '\n  rotation = "2e5 kN m"', "rotation"),
    "zero rotation": (PIN, PIN + '\n  rotation = "0 kN m/rad"', "rotation"),
    "pad geometry of a pin": (
        PIN,
        PIN + "\n    [girder.support.pad]\n    layers = 3",
        "a pin holds its level",
    ),
    "duplicate support": ('id = "pier 2"', 'id = "pier 1"', 'two supports are called "pier 1"'),
    "permanent outside": ('end = "39 m"', 'end = "40 m"', "outside the girder"),
    "permanent reversed": ('end = "39 m"', 'end = "0 m"', "does not lie past the start"),
    "permanent as force": ('"9.5 kN/m"', '"9.5 kN"', "permanent 1, uniform"),
    "permanent as mass": ('"9.5 kN/m"', '"950 kg/m"', "mass"),
    "uniform and point": ('"9.5 kN/m"', '"9.5 kN/m"\n  point = "3 kN"', "exactly one"),
    "neither": ('uniform = "9.5 kN/m"', "", "exactly one"),
    "uniform with at": ('"9.5 kN/m"', '"9.5 kN/m"\n  at = "3 m"', "permanent 1, at"),
    "axle load zero": ('["0 m", "200 kN"]', '["0 m", "0 kN"]', 'vehicle "ballast wagon", axles, axle 1'),
    "axle as mass": ('["0 m", "200 kN"]', '["0 m", "20 t"]', "mass"),
    "axle ahead of the leading one": ('["1.8 m"', '["-1.8 m"', "axle 2"),
    "no leading axle": ('["0 m"', '["0.5 m"', "no axle stands at 0 m"),
    "axle of three": ('["0 m", "200 kN"]', '["0 m", "200 kN", "1 m"]', "axle 1"),
    "axle as number": ('["0 m", "200 kN"]', "[0, 200]", "axle 1"),
    "axles as text": ("axles = [[", 'axles = "none" # [[', "axles"),
    "unknown vehicle": ('vehicle = "ballast wagon"', 'vehicle = "balast wagon"', "did you mean"),
    "count zero": ("count = 3", "count = 0", "count"),
    "count half": ("count = 3", "count = 1.5", "count"),
    "count true": ("count = 3", "count = true", "count"),
    "count endless": ("count = 3", "count = 1000000000", "count"),
    "no pitch": ('pitch = "13.4 m"', "", 'live "line traffic", pitch: it is missing'),
    "zero pitch": ('pitch = "13.4 m"', 'pitch = "0 m"', "pitch"),
    "negative dynamic": ("dynamic = 0.21", "dynamic = -0.1", "dynamic"),
    "dynamic in percent": ("dynamic = 0.21", "dynamic = 21", "dynamic"),
    "zero factor": ("live = 1.5", "live = 0", "factors, live"),
    "negative factor": ("permanent = 1.2", "permanent = -1.2", "factors, permanent"),
    "infinite factor": ("permanent = 1.2", "permanent = inf", "factors, permanent"),
    "factor as text": ("permanent = 1.2", 'permanent = "1.2"', "factors, permanent"),
    "no factor": ("live = 1.5", "", "factors, live: it is missing"),
    "zero resistance": ("resistance = 1.0", "resistance = 0.0", "factors, resistance"),
    "negative relieving": (FACTORS, FACTORS + "\npermanent_relieving = -1.0", "permanent_relieving"),
    "placeholder": ('I = "0.0118 m^4"', 'I = "… m^4"', 'section "mid", I: "… m^4" is still a placeholder'),
    "not TOML": ("[bridge]", "[bridge", "not TOML"),
    "endless number": ("count = 3", f"count = {'9' * 5000}", "not TOML"),
    "endless brackets": ("count = 3", f"count = {'[' * 5000}", "not TOML"),
    "no such date": ("built = 1989-06-01", "built = 1989-02-30", "not TOML"),
    "field twice": ("count = 3", "count = 3\ncount = 3", "not TOML"),
    "one table for many": ("[[live]]", "[live]", "start each one with [[live]]"),
    "a field that is no table here": ("format = 1", "format = 1\nlive2 = 1", 'did you mean "live"'),
    "an endless name": ("Quillmere viaduct", "q" * 10_001, "bridge, name"),
    "coefficient without percent": (
        '"150 kN/mm"',
        '"150 kN/mm"\n  temperature_coefficient = "0.5 1/K"',
        "temperature_coefficient",
    ),
    "no factor for live": ("live = 1.5", "", "factors, live"),
    "count as text": ("count = 3", 'count = "3"', "count"),
    "table as value": ("[factors]", "factors2 = 1\n[factors]", "live"),
}


def test_the_example_is_read_in_si(bridge: BridgeDoc) -> None:
    girder = bridge.girder("north")
    assert (bridge.id, bridge.name, bridge.built) == ("quillmere", "Quillmere viaduct", dt.date(1989, 6, 1))
    assert bridge.section("mid").youngs_modulus == 205e6
    assert bridge.section("mid").second_moment == 0.0118
    assert bridge.section("mid").shear_modulus is None
    assert bridge.section("pier").shear_area is None
    assert girder.support_positions == (0.0, 12.0, 27.0, 39.0)
    assert [(p.start, p.end) for p in girder.spans[1].pieces] == [(0.0, 2.5), (12.5, 15.0)]
    assert [s.stiffness for s in girder.supports] == [150e3, 220e3, 220e3, None]
    assert [(p.uniform, p.start, p.end) for p in girder.permanent] == [(9.5, 0, 39), (27, 0, 39)]
    assert bridge.vehicle("ballast wagon").axles[2] == (9.2, 200.0)
    assert (bridge.live[0].count, bridge.live[0].pitch, bridge.live[0].dynamic) == (3, 13.4, 0.21)
    assert (bridge.factors.permanent, bridge.factors.live, bridge.factors.resistance) == (1.2, 1.5, 1.0)
    assert bridge.factors.permanent_relieving is None


def test_the_digest_is_of_the_text(bridge: BridgeDoc, bridge_text: str) -> None:
    assert bridge.text == bridge_text
    assert bridge.digest == hashlib.sha256(bridge_text.encode()).hexdigest()


def test_a_file_is_read_as_its_text_is(bridge: BridgeDoc) -> None:
    assert read_bridge(DATA / "bridge-example.toml") == bridge


def test_a_byte_order_mark_does_no_harm(bridge: BridgeDoc, bridge_text: str, tmp_path: Path) -> None:
    (tmp_path / "b.toml").write_text(bridge_text, encoding="utf-8-sig")
    assert read_bridge(tmp_path / "b.toml") == bridge


@pytest.mark.parametrize("case", BAD)
def test_a_wrong_field_is_refused_by_name(case: str, bridge_text: str) -> None:
    old, new, says = BAD[case]
    line = line_of(lambda: parse_bridge(changed(bridge_text, old, new), file="bridge.toml"))
    assert line.startswith("bridge.toml")
    assert says in line


@pytest.mark.parametrize("table", ["[[girder]]", "[[section]]", "[bridge]", "[factors]"])
def test_a_file_cut_off_before_a_table_is_refused(table: str, bridge_text: str) -> None:
    cut = bridge_text[: bridge_text.index(table)]
    assert line_of(lambda: parse_bridge(cut, file="bridge.toml")).startswith("bridge.toml")


def test_a_girder_needs_one_support_more_than_spans(bridge_text: str) -> None:
    start = bridge_text.index("  [[girder.support]]")
    end = bridge_text.index("  [[girder.support]]", start + 1)
    line = line_of(lambda: parse_bridge(bridge_text[:start] + bridge_text[end:], file="bridge.toml"))
    assert 'girder "north", support: there are 3, but 3 spans stand on 4' in line


def test_a_list_of_numbers_is_no_list_of_tables(bridge_text: str) -> None:
    text = changed(bridge_text[: bridge_text.index("[[live]]")], "format = 1", "format = 1\nlive = [3]")
    text += bridge_text[bridge_text.index("[factors]") :]
    assert "live 1: it is not a table" in line_of(lambda: parse_bridge(text, file="bridge.toml"))


def test_two_girders_of_one_name_are_refused(bridge_text: str) -> None:
    start, end = bridge_text.index("[[girder]]"), bridge_text.index("[[vehicle]]")
    text = bridge_text[:end] + bridge_text[start:end] + bridge_text[end:]
    assert 'two girders are called "north"' in line_of(lambda: parse_bridge(text, file="bridge.toml"))


def test_the_optional_fields_are_read(bridge_text: str) -> None:
    text = changed(
        bridge_text,
        'zero = "west abutment"',
        'zero = "west abutment"\nvisit_interval = "24 months"',
        'E = "205 GPa"',
        'E = "205 GPa"\nG = "79 GPa"',
        'stiffness = "150 kN/mm"',
        'stiffness = "150 kN/mm"\n  temperature_coefficient = "0.5 percent / K"\n  rotation = "fixed"',
        'stiffness = "220 kN/mm"',
        'stiffness = "220 kN/mm"\n  rotation = "2e5 kN m / rad"',
        "\n[[vehicle]]",
        POINT,
        "resistance = 1.0",
        "permanent_relieving = 0.95",
    )
    doc = parse_bridge(text, file="bridge.toml")
    supports = doc.girders[0].supports
    assert doc.visit_interval_years == 2.0
    assert doc.sections[0].shear_modulus == pytest.approx(79e6)
    assert supports[0].temperature_coefficient == pytest.approx(0.005)
    assert [s.rotation for s in supports] == [math.inf, 2e5, 0.0, 0.0]
    assert doc.girders[0].permanent[2] == PermanentDoc(name="post", point=40.0, at=12.0)
    assert doc.factors.permanent_relieving == 0.95


def test_pins_hold_down_and_pads_do_not_unless_the_file_says_otherwise(bridge_text: str) -> None:
    plain = parse_bridge(bridge_text, file="bridge.toml").girders[0].supports
    assert [s.hold_down for s in plain] == [None] * 4
    assert [s.takes_tension for s in plain] == [False, False, False, True]
    text = changed(
        bridge_text,
        'stiffness = "150 kN/mm"',
        'stiffness = "150 kN/mm"\n  hold_down = true',
        'kind = "pin"',
        'kind = "pin"\n  hold_down = false',
        'stiffness = "220 kN/mm"',
        'stiffness = "220 kN/mm"\n  rotation = "2e5 kN m / rad"',
    )
    told = parse_bridge(text, file="bridge.toml").girders[0].supports
    assert [s.takes_tension for s in told] == [True, True, False, False]


@pytest.mark.parametrize(
    ("new", "said"),
    [
        ('hold_down = "yes"', 'hold_down: "yes" is neither true nor false; write hold_down = true'),
        ('hold_down = false\n  rotation = "fixed"', "hold_down: a support that holds rotation cannot let"),
    ],
)
def test_a_wrong_hold_down_is_refused(new: str, said: str, bridge_text: str) -> None:
    text = changed(bridge_text, 'stiffness = "150 kN/mm"', f'stiffness = "150 kN/mm"\n  {new}')
    assert said in line_of(lambda: parse_bridge(text, file="bridge.toml"))


def test_what_is_left_out_takes_its_default(bridge_text: str) -> None:
    text = changed(bridge_text, "stiffness_cv = 0.3", "", "resistance = 1.0", "", "count = 3", "")
    doc = parse_bridge(text, file="bridge.toml")
    assert doc.girders[0].supports[0].stiffness_cv == 0.3
    assert doc.factors.resistance == 1.0
    assert doc.live[0].count == 1


@pytest.mark.parametrize(
    ("old", "new", "field"),
    [
        ('at = "12 m"', 'at = "40 m"', "permanent 3, at"),
        ('at = "12 m"', "", "permanent 3, at: it is missing"),
        ('point = "40 kN"', 'point = "4 t"', "permanent 3, point"),
        ('at = "12 m"', 'at = "12 m"\nend = "13 m"', "permanent 3, end"),
    ],
)
def test_a_wrong_point_load_is_refused(old: str, new: str, field: str, bridge_text: str) -> None:
    text = changed(bridge_text, "\n[[vehicle]]", changed(POINT, old, new))
    assert field in line_of(lambda: parse_bridge(text, file="bridge.toml"))


def test_pieces_may_touch_and_come_in_any_order(bridge_text: str) -> None:
    piece = '    [[girder.span.piece]]\n    start = "9 m"\n    end = "{end}"\n    section = "mid"\n'
    old = '    end = "12 m"\n    section = "pier"\n'
    touching = changed(bridge_text, old, old + piece.format(end="9.5000000005 m"))
    pieces = parse_bridge(touching, file="bridge.toml").girders[0].spans[0].pieces
    assert [p.start for p in pieces] == sorted(p.start for p in pieces)
    assert pieces[0].end == pieces[1].start
    crossing = changed(bridge_text, old, old + piece.format(end="9.50000001 m"))
    assert "overlap" in line_of(lambda: parse_bridge(crossing, file="bridge.toml"))
