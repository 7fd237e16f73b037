"""Pressures and strains beside their limits."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from assess.pad import FORMULAS, Pad, PadError, PadLoads, check_limits, default_set, limit_sets
from tests.pad.made import PLAIN, made, pads

LOADS = PadLoads(permanent=400.0, total=700.0, minimum=350.0, factored=1000.0)


def values(pad: Pad, loads: PadLoads = LOADS, **options: object) -> dict[str, float]:
    return {check.name: check.value for check in check_limits(pad, loads, **options)}  # type: ignore[arg-type]


@PLAIN
@given(pads(), st.sampled_from(limit_sets()), st.floats(1.1, 3.0))
def test_values_grow_with_the_load_and_limits_do_not(pad: Pad, rules: str, times: float):
    more = PadLoads(permanent=times * 400.0, total=times * 700.0, minimum=0.0, factored=times * 1000.0)
    for one, other in zip(
        check_limits(pad, LOADS, rules=rules), check_limits(pad, more, rules=rules), strict=True
    ):
        assert other.value == pytest.approx(times * one.value)
        assert other.limit == one.limit > 0.0
        assert one.utilisation == pytest.approx(one.value / one.limit)


def test_a_pad_found_softer_strains_more_under_the_same_pressure():
    soft = values(made("aashto-lrfd"), softness=1.5)
    usual = values(made("aashto-lrfd"))
    assert soft["total strain"] == pytest.approx(1.5 * usual["total strain"])
    assert soft["live compression"] == pytest.approx(1.5 * usual["live compression"])
    assert soft["total pressure"] == usual["total pressure"]


def test_the_live_part_is_total_less_permanent():
    pad = made("aashto-lrfd")
    assert values(pad)["live compression"] == pytest.approx(300.0 / pad.stiffness)


@pytest.mark.parametrize(
    ("name", "value", "found"),
    [
        ("permanent pressure", 8e3, 400.0 / (0.292 * 0.392)),
        ("total pressure", 10e3, 700.0 / (0.292 * 0.392)),
        ("permanent strain", 0.05, 400.0),
        ("total strain", 0.07, 700.0),
        ("live compression", 0.003, 300.0),
    ],
)
def test_the_limits_of_the_owner_are_checked_too(name: str, value: float, found: float):
    pad = made()
    check = {c.name: c for c in check_limits(pad, LOADS, own={name: value})}[name]
    expected = {"strain": pad.layer_strain(found), "compression": found / pad.stiffness}.get(
        check.kind, found
    )
    assert check.limit == value
    assert check.value == pytest.approx(expected)
    assert check.source == "the bridge file"


def test_a_limit_of_the_owner_stands_in_the_place_of_the_published_one():
    found = [
        c
        for c in check_limits(made("aashto-lrfd"), LOADS, own={"total pressure": 5e3})
        if c.name == "total pressure"
    ]
    assert [check.limit for check in found] == [5e3]


def test_every_formula_has_limits_that_go_with_it():
    assert [default_set(f) for f in FORMULAS] == ["en1337-3", "aashto-lrfd", "en1337-3", "en1337-3"]


def test_a_plain_pad_has_limits_of_its_own():
    plain = made(side_cover=0.0, layers=1, layer_thickness=0.02, plain=True)
    found = {check.name: check for check in check_limits(plain, LOADS)}
    assert list(found) == ["factored pressure"]
    assert found["factored pressure"].limit == pytest.approx(
        min(1.4 * 900.0 * plain.shape_factor, 7.0 * 900.0)
    )


def test_a_set_without_limits_for_such_a_pad_is_refused():
    plain = made("aashto-lrfd", side_cover=0.0, layers=1, layer_thickness=0.02, plain=True)
    with pytest.raises(PadError, match="has no limit for a plain pad"):
        check_limits(plain, LOADS, rules="aashto-lrfd-b-stress")
    assert len(check_limits(plain, LOADS, rules="aashto-lrfd-b-stress", own={"total pressure": 5e3})) == 1


@pytest.mark.parametrize(
    ("options", "field", "told"),
    [
        ({"rules": "mine"}, "limits", 'there is no set of limits "mine"'),
        ({"rules": "least_permanent_pressure_MPa"}, "limits", "there is no set of limits"),
        ({"own": {"hardness": 3.0}}, "limit", '"hardness" is no limit'),
        ({"own": {"total pressure": 0.0}}, "limit", '"total pressure" is no limit'),
    ],
)
def test_an_unknown_limit_is_refused(options: dict[str, object], field: str, told: str):
    with pytest.raises(PadError) as caught:
        values(made(), **options)
    assert told in str(caught.value)
    assert caught.value.field == field
