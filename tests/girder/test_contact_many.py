"""Many load cases on many pads at once are what each is by itself."""

from __future__ import annotations

import sys

import numpy as np
import pytest
from numpy.typing import NDArray

from assess.girder import Condensed, Girder, Piece, Tips, contact, contact_many, forces_of
from assess.loads import LoadCase

Floats = NDArray[np.float64]

GIRDER = Girder(tuple((Piece(length=x, flexural=6e6),) for x in (14.0, 22.0, 11.0, 18.0)))
CONDENSED = Condensed(GIRDER)
HELD = np.array([False, False, True, False, False])


def many(sets: int = 30, cases: int = 80) -> tuple[Floats, Floats, Floats]:
    """Pads (sets, 5), loads (cases, 5) and seats (sets, 5); about half of all lift somewhere."""
    rng = np.random.default_rng(17)
    f = np.where(rng.random((sets, 5)) < 0.3, 0.0, 10.0 ** rng.uniform(-7.0, -5.0, (sets, 5)))
    where, weight = rng.uniform(0.0, GIRDER.length, (cases, 3)), rng.uniform(0.0, 700.0, (cases, 3))
    forces = np.einsum("map,ma->mp", CONDENSED.unit_forces(where), weight)
    forces += forces_of(CONDENSED, LoadCase(uniforms=((0.0, GIRDER.length, 12.0),)))
    return f, forces, rng.normal(0.0, 0.004, (sets, 5))


def one_by_one(f: Floats, forces: Floats, drops: Floats) -> tuple[Floats, NDArray[np.bool_]]:
    rows = [contact(CONDENSED, one, forces, drop, HELD) for one, drop in zip(f, drops, strict=True)]
    return np.array([r.displacement for r in rows]), np.array([r.lifted for r in rows])


def test_every_case_on_every_set_of_pads_is_what_it_is_by_itself() -> None:
    f, forces, drops = many()
    together = contact_many(CONDENSED, f, forces, drops, HELD)
    level, lifted = one_by_one(f, forces, drops)
    assert 0.2 < lifted.any(axis=-1).mean() < 0.95
    assert np.array_equal(together.lifted, lifted)
    assert np.abs(together.displacement - level).max() < 1e-9 * np.abs(level).max()


def test_every_set_of_pads_may_have_cases_of_its_own() -> None:
    f, forces, drops = many()
    own = forces * np.linspace(0.5, 1.5, len(f))[:, None, None]
    together = contact_many(CONDENSED, f, own, drops, HELD)
    for s in (0, 7, 29):
        alone = contact(CONDENSED, f[s], own[s], drops[s], HELD)
        assert np.array_equal(together.lifted[s], alone.lifted)


def test_what_block_pivoting_leaves_open_is_settled_by_itself(monkeypatch: pytest.MonkeyPatch) -> None:
    f, forces, drops = many()
    usual = contact_many(CONDENSED, f, forces, drops, HELD)
    monkeypatch.setattr(sys.modules["assess.girder.contact_many"], "_ROUNDS", 0)
    left = contact_many(CONDENSED, f, forces, drops, HELD)
    assert np.array_equal(usual.lifted, left.lifted)
    assert np.abs(usual.displacement - left.displacement).max() < 1e-9 * np.abs(usual.displacement).max()


def test_a_case_that_tips_is_told() -> None:
    f, forces, drops = many(2, 3)
    forces[1] = -CONDENSED.unit_forces(np.array(0.0)) * 900.0
    with pytest.raises(Tips):
        contact_many(CONDENSED, f, forces, drops, np.zeros(5, dtype=bool))


def test_a_suspended_span_needs_its_anchor_arm() -> None:
    # 10 m anchored, hinge 4 m out, 16 m to the last support: 16 kN on the hinge pull 16 x 4 / 10 off the first support
    girder = Girder(
        (
            (Piece(length=10.0, flexural=1e6),),
            (Piece(length=4.0, flexural=1e6), Piece(length=16.0, flexural=1e6)),
        ),
        hinges=(14.0,),
    )
    condensed = Condensed(girder)
    on_hinge = condensed.unit_forces(np.array(14.0)) * 16.0
    linear = condensed.solve(np.zeros(3), on_hinge)
    assert linear.reaction[0] == pytest.approx(-6.4, rel=1e-9)
    with pytest.raises(Tips) as caught:
        contact(condensed, np.zeros(3), on_hinge, None, np.zeros(3, dtype=bool))
    assert caught.value.lifted == [0]
