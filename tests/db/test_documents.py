from __future__ import annotations

from dataclasses import replace

import pytest

from db.documents import BridgeDoc, VisitDoc


def test_supports_stand_where_the_spans_end(bridge: BridgeDoc) -> None:
    girder = bridge.girder("north")
    assert girder.length == 39.0
    assert girder.support_positions == (0.0, 12.0, 27.0, 39.0)
    assert girder.support_index("pier 2") == 2


def test_what_is_not_there_is_a_key_error(bridge: BridgeDoc, visit: VisitDoc) -> None:
    for look in (
        bridge.girder,
        bridge.section,
        bridge.vehicle,
        bridge.girders[0].support_index,
        visit.state,
    ):
        with pytest.raises(KeyError):
            look("nowhere")
    assert visit.state("T1").vehicle == "ballast wagon"


def test_a_girder_has_its_own_unknowns_or_those_of_all(visit: VisitDoc) -> None:
    asked = replace(visit, unknowns=(("", ("pads",)), ("north", ("pads", "datum"))))
    assert asked.unknowns_of("north") == ("pads", "datum")
    assert asked.unknowns_of("south") == ("pads",)
