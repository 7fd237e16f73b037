from __future__ import annotations

import dataclasses

import pytest

from db.documents import BridgeDoc, VisitDoc
from db.exchange import parse_bridge, parse_visit
from db.exchange.files import digest_of
from db.records import Taken
from db.store import Record
from tests.db.conftest import changed, line_of


@pytest.fixture
def visited(record: Record, bridge: BridgeDoc, visit: VisitDoc) -> Record:
    record.add_bridge(bridge)
    record.log_visit(visit)
    return record


def revised(bridge: BridgeDoc, *pairs: str) -> BridgeDoc:
    return parse_bridge(changed(bridge.text, *pairs), file="bridge.toml")


def test_the_newest_file_again_is_no_revision(record: Record, bridge: BridgeDoc) -> None:
    assert record.add_bridge(bridge) == Taken(added=True, revision=1)
    assert record.add_bridge(bridge) == Taken(added=False, revision=1)


def test_a_changed_file_is_a_new_revision_and_the_old_one_stays(record: Record, bridge: BridgeDoc) -> None:
    record.add_bridge(bridge)
    stiffer = revised(bridge, '"150 kN/mm"', '"160 kN/mm"', "Quillmere viaduct", "Quillmere bridge")
    assert record.add_bridge(stiffer) == Taken(added=True, revision=2)
    assert record.bridge("quillmere").document == stiffer
    assert record.bridge("quillmere", 1).document == bridge
    assert record.bridges()[0].name == "Quillmere bridge"
    assert record.add_bridge(bridge) == Taken(added=True, revision=3)


@pytest.mark.parametrize(
    ("old", "new", "says"),
    [
        ('id = "north"', 'id = "norther"', 'girder "north": it is gone, but'),
        ('id = "pier 1"', 'id = "pier one"', 'girder "north", support "pier 1": it is gone, but 1 reading '),
    ],
)
def test_what_readings_refer_to_cannot_be_renamed(
    old: str, new: str, says: str, visited: Record, bridge: BridgeDoc
) -> None:
    line = line_of(lambda: visited.add_bridge(revised(bridge, old, new)))
    assert says in line
    assert "under this id" in line
    assert visited.bridges()[0].revision == 1


def test_a_support_without_readings_may_be_renamed(visited: Record, bridge: BridgeDoc) -> None:
    assert visited.add_bridge(revised(bridge, 'id = "pier 2"', 'id = "river pier"')).revision == 2


def test_a_vehicle_of_a_kept_state_cannot_go(visited: Record, bridge: BridgeDoc) -> None:
    doc = parse_bridge(bridge.text.replace('"ballast wagon"', '"hopper"'), file="bridge.toml")
    assert 'vehicle "ballast wagon": it is gone' in line_of(lambda: visited.add_bridge(doc))


def test_a_pad_with_a_compression_cannot_become_a_pin(visited: Record, bridge: BridgeDoc) -> None:
    start = bridge.text.index('id = "pier 1"')
    pad = 'kind = "pad"\n  stiffness = "220 kN/mm"\n  stiffness_cv = 0.3'
    text = bridge.text[:start] + changed(bridge.text[start:], pad, 'kind = "pin"')
    line = line_of(lambda: visited.add_bridge(parse_bridge(text, file="bridge.toml")))
    assert "the kept visit of 2024-05-14 does not fit" in line
    assert "pin" in line


def test_a_girder_cannot_shrink_from_under_its_readings(record: Record, bridge: BridgeDoc) -> None:
    record.add_bridge(bridge)
    visit = VISIT_AT_END
    record.log_visit(parse_visit(visit, file="v.toml"))
    pairs = ('start = "0 m"                   #', "#", 'end = "39 m"', "")
    start = bridge.text.rindex('length = "12 m"')
    shorter = bridge.text[:start] + changed(bridge.text[start:], 'length = "12 m"', 'length = "10 m"', *pairs)
    line = line_of(lambda: record.add_bridge(parse_bridge(shorter, file="bridge.toml")))
    assert "38 m lies outside girder" in line
    longer = bridge.text[:start] + changed(bridge.text[start:], 'length = "12 m"', 'length = "14 m"', *pairs)
    assert record.add_bridge(parse_bridge(longer, file="bridge.toml")).added


VISIT_AT_END = """format = 1
[visit]
bridge = "quillmere"
date = 2020-01-01
[[load_state]]
id = "permanent"
[[reading]]
girder = "north"
state = "permanent"
quantity = "deflection"
at = "38 m"
value = "1 mm"
sd = "1 mm"
"""


def test_a_bridge_cannot_be_built_after_a_kept_visit(visited: Record, bridge: BridgeDoc) -> None:
    doc = revised(bridge, "1989-06-01", "2024-06-01")
    assert "does not fit" in line_of(lambda: visited.add_bridge(doc))


def test_identity_outlives_a_revision_that_leaves_a_support_out(record: Record, bridge: BridgeDoc) -> None:
    record.add_bridge(bridge)
    record.add_bridge(revised(bridge, 'id = "pier 2"', 'id = "river pier"'))
    assert record.add_bridge(bridge).revision == 3
    again = dataclasses.replace(bridge, text=bridge.text + "\n", digest=digest_of(bridge.text + "\n"))
    assert record.add_bridge(again).revision == 4
