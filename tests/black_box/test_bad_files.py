"""Bad input, written by someone who read only the contract: exit 2, one line with the file's name, nothing kept."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest

from tests.black_box.command import Record

DATA = Path(__file__).parents[1] / "data"
BRIDGE = (DATA / "bridge-example.toml").read_text()
VISIT = (DATA / "visit-example.toml").read_text()
PIER_2 = BRIDGE[
    BRIDGE.index('  [[girder.support]]\n  id = "pier 2"') : BRIDGE.index('  [[girder.support]]\n  id = "east')
]
HEAD = "girder,state,quantity,support,at,value,sd,unit,instrument,remark\n"
ROW = "north,T1,compression,pier 1,,1.42,0.05,mm,,\n"
TABLED = (
    'format = 1\n[visit]\nbridge = "quillmere"\ndate = 2024-05-14\nreadings = "table.csv"\n[[load_state]]\nid = "T1"\n'
    'vehicle = "ballast wagon"\nleading_axle_at = "13.1 m"\n'
)
ROTATION = '# rotation = "free"'

Text = tuple[str, str]
BRIDGES: dict[str, Text] = {
    "a force for a length": ('"12 m"', '"12 kN"'),
    "no unit": ('"12 m"', '"12"'),
    "a bare number": ('"12 m"', "12"),
    "an expression": ('"12 m"', '"2*6 m"'),
    "two numbers": ('"12 m"', '"12 13 m"'),
    "two quantities": ('"12 m"', '"12 m 5 cm"'),
    "a negative length": ('"12 m"', '"-12 m"'),
    "nan": ('"12 m"', '"nan m"'),
    "inf": ('"12 m"', '"inf m"'),
    "too large a number": ('"12 m"', '"1e400 m"'),
    "too small a number": ('"12 m"', '"1e-400 m"'),
    "nan as a number": ("live_share = 0.5", "live_share = nan"),
    "a truth as a number": ("live_share = 0.5", "live_share = true"),
    "an infinite cv": ("stiffness_cv = 0.3", "stiffness_cv = inf"),
    "zero stiffness": ('"150 kN/mm"', '"0 kN/mm"'),
    "negative stiffness": ('"150 kN/mm"', '"-150 kN/mm"'),
    "no modulus": ('"205 GPa"', '"0 GPa"'),
    "an unknown section": ('section = "mid"', 'section = "middle"'),
    "two sections of one name": ('id = "pier"', 'id = "mid"'),
    "two supports of one name": ('"pier 2"', '"pier 1"'),
    "a support too few": (PIER_2, ""),
    "pieces that overlap": ('start = "12.5 m"', 'start = "1 m"'),
    "a piece past its span": ('end = "12 m"', 'end = "13 m"'),
    "a load past the girder": ('end = "39 m"', 'end = "40 m"'),
    "an unknown vehicle": ('vehicle = "ballast wagon"\ncount', 'vehicle = "wagon"\ncount'),
    "an axle that lifts": ('["0 m", "200 kN"]', '["0 m", "-200 kN"]'),
    "a mass for a load": ('["0 m", "200 kN"]', '["0 m", "20 t"]'),
    "no vehicles": ("count = 3", "count = 0"),
    "half a vehicle": ("count = 3", "count = 3.5"),
    "a count of thousands of digits": ("count = 3", "count = " + "9" * 5000),
    "a negative allowance": ("dynamic = 0.21", "dynamic = -0.5"),
    "another format": ("format = 1", "format = 2"),
    "no factors": (BRIDGE[BRIDGE.index("[factors]") :], ""),
    "a zero factor": ("permanent = 1.2", "permanent = 0"),
    "an unknown kind": ('kind = "pin"', 'kind = "roller"'),
    "a misspelt field": ("stiffness_cv = 0.3", "stifness_cv = 0.3"),
    "an unknown rotation": (ROTATION, 'rotation = "sideways"'),
    "a moment for a rotational stiffness": (ROTATION, 'rotation = "2e5 kN m"'),
    "a key twice": ('name = "Quill', 'name = "x"\nname = "Quill'),
    "a date as text": ("built = 1989-06-01", 'built = "1989"'),
}
VISITS: dict[str, Text] = {
    "a future date": ("2024-05-14", "2099-05-14"),
    "a date before the bridge": ("2024-05-14", "1950-05-14"),
    "a date as text": ("2024-05-14", '"2024-05-14"'),
    "a time": ("2024-05-14", "2024-05-14T10:00:00"),
    "zero sd": ('"0.05 mm"', '"0 mm"'),
    "negative sd": ('"0.05 mm"', '"-0.05 mm"'),
    "nan sd": ('"0.05 mm"', '"nan mm"'),
    "no sd": ('sd = "0.05 mm"\n', ""),
    "a force for a reading": ('"1.42 mm"', '"1.42 kN"'),
    "no unit": ('"1.42 mm"', '"1.42"'),
    "an expression": ('"1.42 mm"', '"1+0.42 mm"'),
    "a compression of a kilometre": ('"1.42 mm"', '"1.42 km"'),
    "an unknown support": ('"pier 1"', '"pier 9"'),
    "a pin to compress": ('"pier 1"', '"east abutment"'),
    "a place past the girder": ('at = "6 m"', 'at = "60 m"'),
    "a place before the girder": ('at = "6 m"', 'at = "-1 m"'),
    "no place": ('at = "6 m"\n', ""),
    "two places": ('at = "6 m"', 'at = "6 m"\nsupport = "pier 1"'),
    "an unknown state": ('state = "T1"', 'state = "T9"'),
    "an unknown girder": ('"north"', '"south"'),
    "an unknown vehicle": ('vehicle = "ballast wagon"', 'vehicle = "x"'),
    "an unknown bridge": ('bridge = "quillmere"', 'bridge = "x"'),
    "an unknown quantity": ('"compression"', '"compresion"'),
    "a vehicle far off": ('"13.1 m"', '"1300 m"'),
    "a table elsewhere": ("party =", 'readings = "../table.csv"\nparty ='),
    "a state twice": ('id = "T1"', 'id = "permanent"'),
    "a bare temperature": ('"13 degC"', '"13"'),
    "an oven": ('"13 degC"', '"1300 degC"'),
}
TABLES: dict[str, bytes] = {
    "empty": b"",
    "names only": HEAD.encode(),
    "a decimal comma": (HEAD + ROW.replace("1.42", "1,42")).encode(),
    "nan": (HEAD + ROW.replace("1.42", "nan")).encode(),
    "inf": (HEAD + ROW.replace("1.42", "inf")).encode(),
    "no value": (HEAD + ROW.replace("1.42", "")).encode(),
    "an expression": (HEAD + ROW.replace("1.42", "1.4+0.02")).encode(),
    "zero sd": (HEAD + ROW.replace("0.05", "0")).encode(),
    "a mass": (HEAD + ROW.replace("mm", "kg")).encode(),
    "no unit": (HEAD + ROW.replace("mm", "")).encode(),
    "an unknown support": (HEAD + ROW.replace("pier 1", "pier 8")).encode(),
    "a misspelt column": (HEAD.replace(",sd,", ",sdd,") + ROW).encode(),
    "an open quote": (HEAD + '"north,T1').encode(),
    "semicolons": (HEAD + ROW).replace(",", ";").encode(),
    "a unit in at": (HEAD + "north,T1,deflection,,6 m,1,0.1,mm,,\n").encode(),
    "nul": HEAD.encode() + b"\0\0",
    "junk": np.random.default_rng(1).bytes(400),
}


@pytest.fixture
def record(tmp_path: Path) -> Record:
    made = Record(tmp_path)
    made.done("init")
    return made


@pytest.fixture
def with_bridge(record: Record) -> Record:
    record.done("bridge", "add", str(DATA / "bridge-example.toml"))
    return record


def changed(text: str, change: Text) -> bytes:
    assert change[0] in text
    return text.replace(*change, 1).encode()


def refused(record: Record, words: tuple[str, str], name: str, content: bytes) -> str:
    (record.folder / name).write_bytes(content)
    said = record.say(*words, str(record.folder / name))
    assert said.code == 2, said
    assert said.err.count("\n") == 1
    assert said.out == ""
    return said.err


@pytest.mark.parametrize("slip", BRIDGES)
def test_a_bridge_file_with_a_slip_is_refused(slip: str, record: Record) -> None:
    assert "mine.toml" in refused(record, ("bridge", "add"), "mine.toml", changed(BRIDGE, BRIDGES[slip]))
    assert record.json("bridge", "list") == {"bridges": []}


@pytest.mark.parametrize("slip", VISITS)
def test_a_visit_file_with_a_slip_is_refused(slip: str, with_bridge: Record) -> None:
    assert "mine.toml" in refused(with_bridge, ("visit", "log"), "mine.toml", changed(VISIT, VISITS[slip]))
    assert with_bridge.json("visit", "list", "quillmere")["visits"] == []


@pytest.mark.parametrize("slip", TABLES)
def test_a_table_with_a_slip_is_refused(slip: str, with_bridge: Record) -> None:
    (with_bridge.folder / "table.csv").write_bytes(TABLES[slip])
    assert "table.csv" in refused(with_bridge, ("visit", "log"), "mine.toml", TABLED.encode())
    assert with_bridge.json("visit", "list", "quillmere")["visits"] == []


DAMAGE: dict[str, Callable[[str], bytes]] = {
    "junk": lambda _: np.random.default_rng(2).bytes(600),
    "nothing": lambda _: b"",
    "nul": lambda _: b"\0" * 50,
    "two bytes a letter": lambda text: text.encode("utf-16"),
    "deep nesting": lambda _: b"a = " + b"[" * 5000,
    "cut at a third": lambda text: text[: len(text) // 3].encode(),
    "cut at a half": lambda text: text[: len(text) // 2].encode(),
}


@pytest.mark.parametrize("damage", DAMAGE)
def test_a_damaged_file_is_refused(damage: str, with_bridge: Record) -> None:
    assert "mine.toml" in refused(with_bridge, ("bridge", "add"), "mine.toml", DAMAGE[damage](BRIDGE))
    assert "mine.toml" in refused(with_bridge, ("visit", "log"), "mine.toml", DAMAGE[damage](VISIT))
    assert with_bridge.json("bridge", "list")["bridges"][0]["revision"] == 1


@pytest.mark.parametrize(
    "words",
    [
        ("calibrate", "nowhere"),
        ("calibrate", "quillmere"),
        ("calibrate", "quillmere", "--visit", "2020-01-01"),
        ("calibrate", "quillmere", "--visit", "may"),
        ("trend", "nowhere"),
        ("report", "nowhere", "-o", "x.html"),
        ("visit", "log", "/nowhere.toml"),
        ("visit", "list", "nowhere"),
        ("bridge", "add", "/"),
        ("bridge", "draft", "--spans", "12", "-o", "/nowhere/x.toml"),
        ("calibrate",),
        ("frobnicate",),
    ],
)
def test_a_wrong_call_is_refused_in_one_line(words: tuple[str, ...], with_bridge: Record) -> None:
    said = with_bridge.say(*words)
    assert (said.code, said.err.count("\n"), said.out) == (2, 1, "")
