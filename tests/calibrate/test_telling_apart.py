"""A pier that settled 5 mm is told from a pad that lost 60 per cent, on bridges drawn at random. All seeded.

Everything was read in the permanent state, since a datum without load: girder levels at the supports throughout, with
seat levels or with pad gaps; with a test vehicle or without. Sound pads scatter by 10 per cent, as they are made; the
prior believes 15 to 30.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field

import numpy as np
import pytest

from assess.calibrate import Cause, Observation, causes
from tests.calibrate.bridges import (
    MM,
    SUSTAINED_SD,
    Bridge,
    at_supports,
    believed,
    drawn_bridge,
    start_of,
    visited,
)
from tests.factories import noisy

DROP, LEFT = 5.0 * MM, 0.4
MADE = 0.10  # scatter of sound pads
TOLD = {"pad", "seat", "pad and seat"}


@dataclass
class Said:
    """What was said of the pier where something happened, and of the supports where nothing did."""

    there: Counter[str] = field(default_factory=Counter)
    elsewhere: Counter[str] = field(default_factory=Counter)
    bridges: int = 0
    false: int = 0  # bridges with a cause named elsewhere

    def add(self, found: list[Cause], pier: int) -> None:
        others = [one.cause for one in found if one.support != pier]
        self.there.update(one.cause for one in found if one.support == pier)
        self.elsewhere.update(others)
        self.bridges += 1
        self.false += any(one in TOLD for one in others)


def lasting(bridge: Bridge, read: str) -> list[Observation]:
    levels = at_supports(bridge, "deflection", 0.3 * MM, 0)
    return (
        levels
        + {
            "seat levels": at_supports(bridge, "settlement", 0.3 * MM, 0),
            "gaps to 0.05 mm": at_supports(bridge, "compression", 0.05 * MM, 0),
            "gaps to 0.1 mm": at_supports(bridge, "compression", 0.10 * MM, 0),
            "girder levels alone": [],
        }[read]
    )


def simulate(
    read: str, what: str, *, count: int, test: bool, seed: int = 7, scatter: float | None = MADE
) -> Said:
    """Say what moved on some bridges; sound pads scatter as believed where `scatter` is None."""
    rng, said = np.random.default_rng(seed), Said()
    for _ in range(count):
        bridge = drawn_bridge(rng)
        model = visited(bridge, lasting(bridge, read), test=test)
        prior = believed(bridge, model)
        theta = start_of(prior)
        sound = bridge.prior.sd if scatter is None else scatter
        theta[: bridge.n] += sound * rng.standard_normal(bridge.n)
        theta[model.layout.of("sustained")] += SUSTAINED_SD * rng.standard_normal()
        pier = int(rng.choice(bridge.piers))
        if what == "seat":
            theta[model.layout.of("settlements")][pier] = DROP
        elif what == "pad":
            theta[pier] += np.log(LEFT)
        said.add(causes(noisy(model, theta, rng), prior, start_of(prior)), pier)
    return said


def require(said: Said, right: str) -> None:
    """At least 95 in 100 right, and no cause named elsewhere on more than 5 bridges of 100."""
    assert said.there[right] >= 0.95 * said.bridges, said
    assert said.false <= 0.05 * said.bridges, said


@pytest.mark.parametrize("what", ["seat", "pad"])
@pytest.mark.parametrize("read", ["seat levels", "gaps to 0.1 mm"])
def test_a_settled_pier_is_told_from_a_softened_pad_by_seat_levels_or_gaps(read: str, what: str) -> None:
    require(simulate(read, what, count=24, test=False), what)


@pytest.mark.parametrize("what", ["seat", "pad"])
def test_a_test_vehicle_beside_the_levels_changes_nothing_of_that(what: str) -> None:
    require(simulate("seat levels", what, count=8, test=True), what)


@pytest.mark.parametrize("what", ["seat", "pad"])
def test_by_girder_levels_alone_it_cannot_be_told(what: str) -> None:
    require(simulate("girder levels alone", what, count=24, test=False), "cannot be told")


def test_where_nothing_happened_no_cause_is_named() -> None:
    said = simulate("gaps to 0.1 mm", "nothing", count=24, test=False)
    require(said, "neither")


@pytest.mark.campaign
@pytest.mark.parametrize("what", ["seat", "pad"])
@pytest.mark.parametrize("test", [False, True], ids=["no vehicle", "vehicle"])
@pytest.mark.parametrize("read", ["seat levels", "gaps to 0.05 mm", "gaps to 0.1 mm"])
def test_settlement_and_softening_are_told_apart_at_length(read: str, test: bool, what: str) -> None:
    said = simulate(read, what, count=400, test=test, seed=8)
    print(f"\n{read}, {'vehicle' if test else 'no vehicle'}, {what}: {said}")
    require(said, what)


@pytest.mark.campaign
@pytest.mark.parametrize("what", ["seat", "pad"])
def test_by_girder_levels_alone_it_cannot_be_told_at_length(what: str) -> None:
    said = simulate("girder levels alone", what, count=400, test=False, seed=8)
    print(f"\ngirder levels alone, no vehicle, {what}: {said}")
    require(said, "cannot be told")


@pytest.mark.campaign
@pytest.mark.parametrize("read", ["seat levels", "gaps to 0.1 mm"])
def test_a_loss_within_the_scatter_of_sound_pads_is_missed_but_never_called_a_settlement(read: str) -> None:
    """A pad half as stiff again as nominal that lost 60 per cent stands at 0.6 of nominal: many sound ones do."""
    said = simulate(read, "pad", count=400, test=False, seed=9, scatter=None)
    print(f"\n{read}, sound pads scatter as believed, pad: {said}")
    assert said.there["pad"] >= 0.85 * said.bridges, said
    assert said.there["seat"] + said.there["pad and seat"] <= 0.01 * said.bridges, said
    assert said.false <= 0.05 * said.bridges, said
