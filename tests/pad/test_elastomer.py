"""The rubber: from a shear modulus or a hardness, by the table of the formula."""

from __future__ import annotations

import math
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from assess.pad import FORMULAS, PadError, elastomer
from tests.pad.made import PLAIN


@pytest.mark.parametrize("formula", FORMULAS)
def test_harder_rubber_has_a_larger_shear_modulus(formula: str):
    shears = [elastomer(formula, hardness=h).shear for h in range(50, 71)]
    assert shears == sorted(set(shears))


@PLAIN
@given(st.sampled_from(FORMULAS), st.floats(50.0, 70.0))
def test_hardness_and_the_shear_modulus_that_it_gives_are_one_rubber(formula: str, hardness: float):
    by_hardness = elastomer(formula, hardness=hardness)
    by_shear = elastomer(formula, shear_modulus=by_hardness.shear)
    assert by_shear.hardness == pytest.approx(hardness)
    assert by_shear.bulk == by_hardness.bulk or by_shear.bulk == pytest.approx(by_hardness.bulk)
    if formula == "gent-lindley":
        assert (by_shear.youngs, by_shear.k) == pytest.approx((by_hardness.youngs, by_hardness.k))


@pytest.mark.parametrize("formula", FORMULAS)
def test_a_tolerance_of_the_owner_stands_in_the_place_of_the_tables(formula: str):
    own = elastomer(formula, hardness=60, tolerance=0.3)
    assert own.shear_tolerance == pytest.approx(0.3 * own.shear)
    assert elastomer(formula, hardness=60).shear_tolerance != pytest.approx(own.shear_tolerance)


@pytest.mark.parametrize("formula", FORMULAS)
def test_a_bulk_modulus_of_the_owner_stands_in_the_place_of_the_formulas(formula: str):
    assert elastomer(formula, hardness=60, bulk_modulus=1.5e6).bulk == 1.5e6


def test_aashto_has_no_bulk_term_of_its_own():
    assert elastomer("aashto-lrfd", hardness=60).bulk == math.inf


def test_a_shear_modulus_outside_the_table_has_no_hardness():
    assert elastomer("en1337-3", shear_modulus=2500.0).hardness is None


def test_stiffening_leaves_volume_change_alone():
    soft = elastomer("gent-lindley", hardness=60)
    hard = soft.stiffened(1.25)
    assert (hard.shear, hard.youngs) == pytest.approx((1.25 * soft.shear, 1.25 * soft.youngs))
    assert (hard.bulk, hard.k) == (soft.bulk, soft.k)


@pytest.mark.parametrize(
    ("formula", "given_", "field", "told"),
    [
        ("best", {"hardness": 60}, "formula", '"best" is not known'),
        ("en1337-3", {}, "shear_modulus", "neither is given"),
        ("en1337-3", {"hardness": 60, "shear_modulus": 900.0}, "shear_modulus", "both are given"),
        ("en1337-3", {"hardness": 45}, "hardness", "outside the table of en1337-3 (50 to 70)"),
        ("gent-lindley", {"hardness": 80}, "hardness", "outside the table of gent-lindley (30 to 75)"),
        ("gent-lindley", {"shear_modulus": 2500.0}, "shear_modulus", "outside the table of gent-lindley"),
        ("en1337-3", {"shear_modulus": 0.0}, "shear_modulus", "not greater than zero"),
        ("en1337-3", {"shear_modulus": math.nan}, "shear_modulus", "not greater than zero"),
        ("en1337-3", {"hardness": 60, "bulk_modulus": -1.0}, "bulk_modulus", "not greater than zero"),
    ],
)
def test_a_rubber_that_cannot_be_is_refused(formula: str, given_: dict[str, Any], field: str, told: str):
    with pytest.raises(PadError) as caught:
        elastomer(formula, **given_)
    assert told in str(caught.value)
    assert caught.value.field == field
    assert caught.value.remedy
