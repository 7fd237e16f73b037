"""Where the next visit can read, and where its vehicle can stand."""

from __future__ import annotations

import pytest

from db.documents import GirderDoc
from db.exchange import parse_bridge
from db.prior_doc import GaugeDoc
from tests.db.conftest import changed, line_of

BEFORE = "[[vehicle]]"
GAUGES = """
[[girder.gauge]]
quantity = "compression"
support = "pier 1"
sd = "0.05 mm"
cost = 2

[[girder.gauge]]
quantity = "settlement"
support = "pier 1"
sd = "1 mm"

[[girder.gauge]]
quantity = "strain"
at = "6 m"
height = "-0.62 m"
sd = "2 microstrain"
state = "permanent"

"""

BAD = {
    "unknown field": ("cost", "price", 'unknown field "price"'),
    "unknown quantity": (
        '"compression"',
        '"compresion"',
        'gauge 1, quantity: "compresion" is not known here',
    ),
    "no sd": ('sd = "0.05 mm"', "", "gauge 1, sd: it is missing"),
    "bare sd": ('"0.05 mm"', "0.05", "gauge 1, sd: 0.05 is a number without a unit"),
    "sd as angle": ('"0.05 mm"', '"0.05 mrad"', "gauge 1, sd"),
    "no doubt": ('"0.05 mm"', '"0 mm"', "gauge 1, sd"),
    "sd by a slip": ('"0.05 mm"', '"5 m"', 'gauge 1, sd: "5 m" is no standard deviation of a compression'),
    "nothing to pay": ("cost = 2", "cost = 0", "gauge 1, cost"),
    "a price": ("cost = 2", 'cost = "2 hours"', "gauge 1, cost"),
    "endless cost": ("cost = 2", "cost = 1e9", "gauge 1, cost"),
    "unknown state": ("cost = 2", 'state = "T1"', 'gauge 1, state: "T1" is not known here'),
    "settlement under test": (
        'sd = "1 mm"',
        'sd = "1 mm"\nstate = "test"',
        "gauge 2, state: a settlement is read",
    ),
    "unknown support": ('"pier 1"', '"pier 9"', 'gauge 1, support: there is no support "pier 9"'),
    "a pin": ('"pier 1"', '"east abutment"', "is a pin, which has nothing to compress"),
    "a pad at a place": ('support = "pier 1"', 'at = "12 m"', "gauge 1, support: a compression is read at"),
    "strain without height": ('height = "-0.62 m"', "", "gauge 3, height"),
    "compression with height": ("cost = 2", 'height = "1 m"', "gauge 1, height"),
    "past the end": ('"6 m"', '"39.1 m"', 'gauge 3, at: "39.1 m" lies outside the girder (0 to 39 m)'),
}

PLANS = {
    "no list": ('"10 m"', "it is not a list of places"),
    "no place": ("[]", "it is not a list of places"),
    "bare": ("[10]", "plan_positions, 1: 10 is a number without a unit"),
    "off the bridge": ('["10 m", "1 km"]', 'plan_positions, 2: "1 km" puts no axle on a girder (0 to 39 m)'),
    "before the bridge": ('["-1 m"]', "puts no axle on a girder"),
    "twice": ('["10 m", "1000 cm"]', 'plan_positions, 2: "1000 cm" stands in it twice'),
    "endless": ("[" + '"1 m", ' * 1001 + "]", "1001 places are too many"),
}


def with_gauges(bridge_text: str, gauges: str = GAUGES) -> GirderDoc:
    return parse_bridge(changed(bridge_text, BEFORE, gauges + BEFORE), file="b.toml").girders[0]


def test_gauges_are_read_in_si(bridge_text: str) -> None:
    compression, settlement, strain = with_gauges(bridge_text).gauges
    assert compression == GaugeDoc(
        quantity="compression", support="pier 1", sd=5e-5, sd_entered="0.05 mm", unit="mm", cost=2.0
    )
    assert (settlement.state, settlement.cost) == ("permanent", 1.0)
    assert (strain.at, strain.height, strain.state) == (6.0, -0.62, "permanent")
    assert (strain.sd, strain.unit) == (pytest.approx(2e-6), "microstrain")


@pytest.mark.parametrize("case", BAD)
def test_a_gauge_that_reads_nothing_is_refused(case: str, bridge_text: str) -> None:
    old, new, says = BAD[case]
    line = line_of(lambda: with_gauges(bridge_text, changed(GAUGES, old, new)))
    assert line.startswith('b.toml, girder "north", gauge')
    assert says in line


@pytest.mark.parametrize(("quantity", "refused"), [("rotation", True), ("deflection", False)])
def test_a_slope_is_not_read_on_a_hinge(quantity: str, refused: bool, bridge_text: str) -> None:
    hinged = changed(bridge_text, 'length = "15 m"', 'length = "15 m"\nhinges = ["3 m"]')
    unit = "mrad" if refused else "mm"
    gauge = f'[[girder.gauge]]\nquantity = "{quantity}"\nat = "15 m"\nsd = "0.1 {unit}"\n'
    if refused:
        assert "beside a hinge, not on it (15 m)" in line_of(lambda: with_gauges(hinged, gauge))
    else:
        assert with_gauges(hinged, gauge).gauges[0].at == 15.0


def test_places_for_the_vehicle_are_read_in_m(bridge_text: str) -> None:
    assert parse_bridge(bridge_text, file="b.toml").vehicles[0].plan_positions == ()
    text = changed(bridge_text, BEFORE, f'{BEFORE}\nplan_positions = ["10 m", "2400 cm", "40 m"]')
    assert parse_bridge(text, file="b.toml").vehicles[0].plan_positions == (10.0, 24.0, 40.0)


@pytest.mark.parametrize("case", PLANS)
def test_places_where_no_vehicle_can_stand_are_refused(case: str, bridge_text: str) -> None:
    places, says = PLANS[case]
    text = changed(bridge_text, BEFORE, f"{BEFORE}\nplan_positions = {places}")
    line = line_of(lambda: parse_bridge(text, file="b.toml"))
    assert 'vehicle "ballast wagon", plan_positions' in line
    assert says in line
