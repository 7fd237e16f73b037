"""Pads held against their limits."""

from __future__ import annotations

import pytest

from assess.pad import (
    Pad,
    PadError,
    PadGeometry,
    PadLoads,
    check_limits,
    default_set,
    elastomer,
    least_permanent_pressure,
    limit_sets,
)

LOADS = PadLoads(permanent=400.0, total=900.0, minimum=300.0, factored=1300.0)


def pad(formula: str = "en1337-3") -> Pad:
    geometry = PadGeometry(
        length=0.3, width=0.4, side_cover=0.004, layers=5, layer_thickness=0.008, top_bottom_cover=0.0025
    )
    return Pad(geometry=geometry, rubber=elastomer(formula, shear_modulus=900.0), formula=formula)


def test_a_formula_brings_its_own_limits_or_those_of_en_1337_3() -> None:
    assert default_set("aashto-lrfd") == "aashto-lrfd"
    assert default_set("gent-lindley") == "en1337-3"
    assert limit_sets() == ("en1337-3", "aashto-lrfd", "texas")


def test_a_softer_pad_strains_more_under_the_same_pressure() -> None:
    firm = {c.name: c for c in check_limits(pad("aashto-lrfd"), LOADS)}
    soft = {c.name: c for c in check_limits(pad("aashto-lrfd"), LOADS, softness=2.0)}
    assert soft["total strain"].value == pytest.approx(2.0 * firm["total strain"].value)
    assert soft["live compression"].value == pytest.approx(2.0 * firm["live compression"].value)
    assert soft["total pressure"].value == firm["total pressure"].value


def test_the_owners_limit_stands_in_the_place_of_the_published_one() -> None:
    found = {c.name: c for c in check_limits(pad("aashto-lrfd"), LOADS, own={"total pressure": 5000.0})}
    assert found["total pressure"].limit == 5000.0
    assert found["total pressure"].source == "the bridge file"
    assert len(found) == len(check_limits(pad("aashto-lrfd"), LOADS))


def test_each_limit_looks_at_its_own_load() -> None:
    for name in limit_sets():
        for one in check_limits(pad(), LOADS, rules=name):
            if one.kind == "pressure":
                assert one.value == pytest.approx(LOADS.of(one.load) / pad().plan.area)
    assert LOADS.of("live") == 500.0


def test_an_unknown_set_or_limit_is_refused() -> None:
    with pytest.raises(PadError, match="no set of limits"):
        check_limits(pad(), LOADS, rules="house")
    with pytest.raises(PadError, match="no limit that can be given"):
        check_limits(pad(), LOADS, own={"sliding": 1.0})


def test_the_least_permanent_pressure_is_common_practice() -> None:
    assert least_permanent_pressure() == 3000.0
