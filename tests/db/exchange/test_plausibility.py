"""What is unusual is said, and nothing of it is refused."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest

from db.exchange import bridge_queries, parse_bridge, parse_visit, visit_queries

DATA = Path(__file__).parents[2] / "data"
BRIDGE = (DATA / "bridge-example.toml").read_text()
VISIT = (DATA / "visit-example.toml").read_text()


def queries(old: str, new: str) -> list[str]:
    assert old in BRIDGE
    return bridge_queries(parse_bridge(BRIDGE.replace(old, new), file="b.toml"))


def test_the_examples_raise_no_query() -> None:
    assert bridge_queries(parse_bridge(BRIDGE, file="b.toml")) == []
    assert visit_queries(parse_visit(VISIT, file="v.toml")) == []


@pytest.mark.parametrize(
    ("old", "new", "says"),
    [
        ('"150 kN/mm"', '"450 kN/m"', 'support "west abutment": 0.45 kN/mm is an unusual stiffness'),
        ('["1.8 m", "200 kN"]', '["1.8 m", "115 N"]', "an axle of 0.115 kN is unusual"),
        ("dynamic = 0.21", "dynamic = 1.25", "is added to 1"),
        ('pitch = "13.4 m"', 'pitch = "3.4 m"', "shorter than the vehicle"),
        ("live = 1.5", "live = 15", "factors, live: 15"),
        ("permanent = 1.2", "permanent = 0.1", "factors, permanent: 0.1"),
        ("resistance = 1.0", "resistance = 1.05", "is written 0.952"),
    ],
)
def test_a_slip_in_a_bridge_file_is_to_be_looked_at_again(old: str, new: str, says: str) -> None:
    said = queries(old, new)
    assert len(said) == 1
    assert says in said[0]


def test_swapped_values_and_standard_deviations_are_to_be_looked_at_again() -> None:
    visit = parse_visit(VISIT, file="v.toml")
    tested = [
        replace(r, value=r.sd, sd=r.value, quantity="compression", support="pier 1") for r in visit.readings
    ]
    said = visit_queries(replace(visit, readings=tuple(tested) * 2))
    assert any("are value and sd swapped?" in one for one in said)


def test_a_seat_above_its_datum_and_a_new_datum_are_to_be_looked_at_again() -> None:
    visit = parse_visit(VISIT, file="v.toml")
    seat = replace(
        visit.readings[0],
        state="permanent",
        quantity="settlement",
        value=-7.4e-3,
        sd=3e-4,
        value_entered="-7.4 mm",
    )
    later = replace(visit, readings=(seat,), datum="new marks")
    earlier = replace(visit, readings=(replace(seat, value=4e-3),))
    said = visit_queries(later, earlier)
    assert any("stands above the datum" in one for one in said)
    assert any('"new marks"' in one for one in said)
    assert not any("datum: " in one for one in visit_queries(later, replace(earlier, datum="new marks")))
