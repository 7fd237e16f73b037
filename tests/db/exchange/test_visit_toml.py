from __future__ import annotations

import datetime as dt
import hashlib
from pathlib import Path

import pytest

from db.documents import LoadStateDoc, VisitDoc
from db.exchange import parse_visit, read_visit
from tests.db.conftest import DATA, changed, line_of

SUPPORT = 'support = "pier 1"'
STRAIN = 'quantity = "strain"\nheight = "-0.62 m"'

BAD = {
    "format 2": ("format = 1", "format = 2", "format"),
    "unknown field": ("pad_temperature", "pad_temprature", 'did you mean "pad_temperature"'),
    "unknown reading field": ("sd = ", "sigma = ", 'unknown field "sigma"'),
    "no bridge": ('bridge = "quillmere"', "", "visit, bridge: it is missing"),
    "no date": ("date = 2024-05-14", "", "visit, date: it is missing"),
    "date as text": ("date = 2024-05-14", 'date = "2024-05-14"', "visit, date"),
    "date with a time": ("date = 2024-05-14", "date = 2024-05-14T10:00:00Z", "visit, date"),
    "bare temperature": ('"13 degC"', "13", "visit, pad_temperature: 13 is a number without a unit"),
    "hot pads": ('"13 degC"', '"71 degC"', "visit, pad_temperature"),
    "frozen pads": ('"13 degC"', '"-61 degC"', "visit, pad_temperature"),
    "Fahrenheit for Celsius": ('"13 degC"', '"90 degC"', "visit, pad_temperature"),
    "party as number": ('"bearing party B"', "7", "visit, party"),
    "state twice": ('id = "T1"', 'id = "permanent"', "permanent"),
    "two states of one name": ("[[reading]]", '[[load_state]]\nid = "permanent"\n[[reading]]', "two load"),
    "test state without vehicle": ('vehicle = "ballast wagon"\nleading_axle_at = "13.1 m"', "", "vehicle"),
    "place without vehicle": ('vehicle = "ballast wagon"', "", "leading_axle_at is there"),
    "vehicle without place": ('leading_axle_at = "13.1 m"', "", "leading_axle_at: it is missing"),
    "towards nowhere": ('"13.1 m"', '"13.1 m"\ntowards = "west"', 'load state "T1", towards'),
    "state undefined": ('state = "T1"', 'state = "T2"', 'no load state "T2"'),
    "unknown quantity": ('"compression"', '"compresion"', 'did you mean "compression"'),
    "no value": ('value = "1.42 mm"', "", "reading 1, value: it is missing"),
    "bare value": ('"1.42 mm"', "1.42", "reading 1, value"),
    "value as force": ('"1.42 mm"', '"1.42 kN"', "reading 1, value"),
    "value in metres by a slip": ('"1.42 mm"', '"142 m"', "check the unit"),
    "NaN value": ('"1.42 mm"', '"nan mm"', "reading 1, value"),
    "zero sd": ('sd = "0.05 mm"', 'sd = "0 mm"', "reading 1, sd"),
    "negative sd": ('sd = "0.1 mm"', 'sd = "-0.1 mm"', "reading 2, sd"),
    "no sd": ('sd = "0.05 mm"', "", "reading 1, sd: it is missing"),
    "sd as angle": ('sd = "0.05 mm"', 'sd = "0.05 mrad"', "reading 1, sd"),
    "compression without support": (SUPPORT, "", "reading 1, support"),
    "compression at a place": (SUPPORT, SUPPORT + '\nat = "12 m"', "reading 1, at"),
    "compression at a place only": (SUPPORT, 'at = "12 m"', "reading 1, support"),
    "deflection nowhere": ('at = "6 m"', "", "reading 2, at"),
    "deflection twice": ('at = "6 m"', 'at = "6 m"\nsupport = "pier 1"', "reading 2, at"),
    "deflection with height": ('at = "6 m"', 'at = "6 m"\nheight = "1 m"', "reading 2, height"),
    "strain without height": ('quantity = "deflection"', 'quantity = "strain"', "reading 2"),
    "strain in mm": ('quantity = "deflection"', STRAIN, "reading 2, value"),
    "bare place": ('at = "6 m"', "at = 6", "reading 2, at"),
    "table elsewhere": ("[visit]", '[visit]\nreadings = "../v.csv"', "visit, readings"),
    "table with a path": ("[visit]", '[visit]\nreadings = "/etc/v.csv"', "visit, readings"),
    "table with a backslash": ("[visit]", "[visit]\nreadings = 'x\\v.csv'", "visit, readings"),
    "table that is none": ("[visit]", '[visit]\nreadings = "v.doc"', "visit, readings"),
    "datum under an unknown load": ("[visit]", '[visit]\ndatum_load = "live"', "visit, datum_load"),
    "unknowns without the pads": ("[visit]", '[visit]\nunknowns = ["datum"]', "visit, unknowns"),
    "unknowns of no girder": ("[visit]", "[visit]\nunknowns = {}", "visit, unknowns: it names no girder"),
    "unknowns of a nameless girder": ("[visit]", '[visit.unknowns]\n"" = ["pads"]\n[visit]', "unknowns"),
    "unknowns of a girder that are none": (
        "[visit]",
        '[visit]\nunknowns = { north = ["pds"] }',
        'visit, unknowns, north: "pds" is no unknown (did you mean "pads"',
    ),
    "benchmark without doubt": (
        "[[reading]]",
        '[[benchmark]]\nid = "BM 2"\nsd = "0 mm"\n[[reading]]',
        'benchmark "BM 2", sd',
    ),
    "benchmark by a slip": (
        "[[reading]]",
        '[[benchmark]]\nid = "BM 2"\nsd = "2 m"\n[[reading]]',
        'benchmark "BM 2", sd: "2 m" is no standard deviation of a benchmark',
    ),
    "two benchmarks of one name": (
        "[[reading]]",
        2 * '[[benchmark]]\nid = "BM 2"\nsd = "1 mm"\n' + "[[reading]]",
        'two benchmarks are called "BM 2"',
    ),
    "cut off": ('quantity = "deflection"', 'quantity = "defl', "not TOML"),
}


def test_the_example_is_read_in_si(visit: VisitDoc) -> None:
    assert (visit.bridge, visit.date, visit.pad_temperature) == ("quillmere", dt.date(2024, 5, 14), 13.0)
    assert visit.states[0] == LoadStateDoc(id="permanent")
    assert visit.states[1] == LoadStateDoc(id="T1", vehicle="ballast wagon", leading_axle_at=13.1)
    first, second = visit.readings
    assert (first.support, first.at, first.value, first.sd) == ("pier 1", None, 1.42e-3, 5e-5)
    assert (first.value_entered, first.sd_entered, first.unit) == ("1.42 mm", "0.05 mm", "mm")
    assert (second.support, second.at, second.remark) == (None, 6.0, "dial gauge 3")
    assert second.source == "visit.toml, reading 2"


def test_the_digest_is_of_the_text_and_the_table(visit: VisitDoc, visit_text: str) -> None:
    assert visit.digest == hashlib.sha256(visit_text.encode()).hexdigest()
    text = changed(visit_text, "[visit]", '[visit]\nreadings = "v.csv"')
    table = "girder,state,quantity,support,value,sd,unit\nnorth,T1,compression,pier 1,{},0.05,mm\n"
    docs = [parse_visit(text, file="v.toml", table_text=table.format(value)) for value in ("1.4", "1.5")]
    assert docs[0].digest != docs[1].digest
    assert [r.source for r in docs[0].readings[1:]] == ["v.toml, reading 2", "v.csv, row 2"]


@pytest.mark.parametrize("case", BAD)
def test_a_wrong_field_is_refused_by_name(case: str, visit_text: str) -> None:
    old, new, says = BAD[case]
    line = line_of(lambda: parse_visit(changed(visit_text, old, new), file="visit.toml"))
    assert line.startswith("visit.toml")
    assert says in line


def test_all_readings_are_looked_at_and_counted(visit_text: str) -> None:
    text = changed(visit_text, 'sd = "0.05 mm"', 'sd = "0 mm"', 'sd = "0.1 mm"', 'sd = "0 mm"')
    line = line_of(lambda: parse_visit(text, file="visit.toml"))
    assert "reading 1, sd" in line
    assert "(and 1 more)" in line


def test_a_visit_without_a_reading_is_refused(visit_text: str) -> None:
    text = visit_text[: visit_text.index("[[reading]]")]
    assert "there is no reading" in line_of(lambda: parse_visit(text, file="visit.toml"))


def test_a_visit_without_a_state_is_refused(visit_text: str) -> None:
    start, end = visit_text.index("[[load_state]]"), visit_text.index("[[reading]]")
    text = visit_text[:start] + visit_text[end:]
    assert "there is no load state" in line_of(lambda: parse_visit(text, file="visit.toml"))


def test_the_other_quantities_are_read(visit_text: str) -> None:
    text = changed(
        visit_text,
        'quantity = "deflection"',
        STRAIN + '\ninstrument = "gauge 7"',
        'value = "2.31 mm"\nsd = "0.1 mm"',
        'value = "120 microstrain"\nsd = "0.000002 strain"',
        '"13.1 m"',
        '"13.1 m"\ntowards = "smaller x"',
        "[visit]",
        '[visit]\nremark = "calm"',
    )
    visit = parse_visit(text, file="visit.toml")
    strain = visit.readings[1]
    assert (strain.value, strain.sd, strain.height) == pytest.approx((120e-6, 2e-6, -0.62))
    assert (strain.unit, strain.instrument) == ("microstrain", "gauge 7")
    assert visit.states[1].towards == "smaller x"
    assert visit.remark == "calm"


def test_the_table_beside_the_file_is_read(visit_text: str, tmp_path: Path) -> None:
    text = changed(visit_text, "[visit]", '[visit]\nreadings = "v.csv"')
    (tmp_path / "visit.toml").write_text(text, encoding="utf-8")
    assert "v.csv" in line_of(lambda: read_visit(tmp_path / "visit.toml"))
    table = "girder,state,quantity,at,value,sd,unit\r\nnorth,T1,rotation,6,0.4,0.01,mrad\r\n"
    (tmp_path / "v.csv").write_bytes(table.encode("utf-8-sig"))
    visit = read_visit(tmp_path / "visit.toml")
    assert len(visit.readings) == 3
    assert visit.readings[2].value == pytest.approx(4e-4)
    assert visit.table_text == table


def test_a_file_without_a_table_is_read_as_its_text_is(visit: VisitDoc) -> None:
    assert read_visit(DATA / "visit-example.toml").digest == visit.digest


def test_unknowns_are_those_of_the_girder_before_those_of_all(visit: VisitDoc, visit_text: str) -> None:
    assert visit.unknowns_of("north") is None
    for_all = changed(visit_text, "[visit]", '[visit]\nunknowns = ["girder", "pads"]')
    assert parse_visit(for_all, file="v.toml").unknowns_of("north") == ("pads", "girder")
    by_girder = changed(visit_text, "[visit]", '[visit]\nunknowns = { north = ["pads", "datum"] }')
    made = parse_visit(by_girder, file="v.toml")
    assert (made.unknowns_of("north"), made.unknowns_of("south")) == (("pads", "datum"), None)


def test_levels_share_the_benchmark_they_name(visit: VisitDoc, visit_text: str) -> None:
    assert (visit.benchmarks, visit.datum_load) == ((), "none")
    text = changed(
        visit_text,
        "[visit]",
        '[visit]\ndatum_load = "permanent"',
        "[[reading]]",
        '[[benchmark]]\nid = "BM 2"\nsd = "0.4 mm"\n\n[[reading]]',
        'at = "6 m"',
        'at = "6 m"\nbenchmark = "BM 2"',
    )
    made = parse_visit(text, file="visit.toml")
    assert made.datum_load == "permanent"
    assert made.benchmark(made.readings[1].benchmark).sd == pytest.approx(4e-4)
    with pytest.raises(KeyError):
        made.benchmark("BM 3")
