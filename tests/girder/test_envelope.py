"""What live envelopes must satisfy."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray

from assess.girder import (
    Condensed,
    Girder,
    Passage,
    Piece,
    envelope,
    influence_line,
    passages,
    places,
    support_places,
    train_forces,
)
from assess.loads import Train
from tests.girder.strategies import FEW, apart, compliances, girders, trains

Floats = NDArray[np.float64]
SMALL = st.tuples(girders(most=3), trains())
THREE = Girder(tuple((Piece(length=a, flexural=4e5),) for a in (9.0, 12.0, 10.0)))
WAGON = Train(np.array([0.0, 1.8, 9.3, 11.1]), np.array([180.0, 200.0, 150.0, 170.0]))
PADS = np.array([4e-6, 3e-6, 6e-6, 5e-6])


def where(girder: Girder) -> Floats:
    return girder.length * np.array([0.11, 0.32, 0.5, 0.77, 0.93])


@FEW
@given(SMALL, st.data(), st.sampled_from(["moment", "shear", "deflection", "slope"]))
def test_the_empty_girder_lies_between_the_extremes(made, data: st.DataObject, quantity: str) -> None:  # type: ignore[no-untyped-def]
    girder, train = made
    f = data.draw(compliances(girder.n_supports))
    found = envelope(passages(places(Condensed(girder), quantity, where(girder)), train), f)
    assert (found.maximum >= 0.0).all()
    assert (found.minimum <= 0.0).all()
    assert np.array_equal(np.isnan(found.leading_at_maximum), found.maximum == 0.0)


@FEW
@given(SMALL, st.data())
def test_batched_pads_are_the_same_as_one_by_one(made, data: st.DataObject) -> None:  # type: ignore[no-untyped-def]
    girder, train = made
    sets = np.array([data.draw(compliances(girder.n_supports)) for _ in range(3)])
    parts = passages(places(Condensed(girder), "moment", where(girder)), train)
    batch = envelope(parts, sets)
    for i, f in enumerate(sets):
        one = envelope(parts, f)
        peak = one.maximum.max() - one.minimum.min()
        assert np.abs(one.maximum - batch.maximum[i]).max() < 1e-10 * peak
        assert np.abs(one.minimum - batch.minimum[i]).max() < 1e-10 * peak


@pytest.mark.parametrize("quantity", ["moment", "shear", "deflection"])
def test_the_leading_axle_named_is_the_one_that_governs(quantity: str) -> None:
    condensed = Condensed(THREE)
    x = where(THREE)
    place = places(condensed, quantity, x)
    found = envelope(passages(place, WAGON, both_ways=False), PADS)
    for at, extreme in ((found.leading_at_maximum, found.maximum), (found.leading_at_minimum, found.minimum)):
        for p in range(x.size):
            line = influence_line(place, WAGON.axle_positions(at[p]), PADS)[p]
            assert line @ WAGON.loads == pytest.approx(extreme[p], rel=1e-9)


@FEW
@given(SMALL)
def test_kept_positions_are_enough_for_the_pads_they_were_kept_for(made) -> None:  # type: ignore[no-untyped-def]
    girder, train = made
    parts = passages(places(Condensed(girder), "moment", where(girder)), train)
    sets = np.array([np.zeros(girder.n_supports), np.full(girder.n_supports, 2e-6)])
    kept = [part.governing(sets) for part in parts]
    assert all(k.held.shape[1] <= p.held.shape[1] for k, p in zip(kept, parts, strict=True))
    for f in sets:
        full, few = envelope(parts, f), envelope(kept, f)
        assert apart(few.maximum, full.maximum) < 1e-12
        assert apart(few.minimum, full.minimum) < 1e-12
        same = np.isclose(full.leading_at_maximum, few.leading_at_maximum, equal_nan=True)
        assert same.all()


def test_kept_positions_are_nearly_enough_for_pads_between() -> None:
    parts = passages(places(Condensed(THREE), "moment", where(THREE)), WAGON)
    kept = [part.governing(np.array([0.3 * PADS, 3.0 * PADS])) for part in parts]
    full, few = envelope(parts, PADS), envelope(kept, PADS)
    assert apart(few.maximum, full.maximum) < 1e-3


@FEW
@given(SMALL, st.data())
def test_running_both_ways_is_the_worse_of_the_two_ways(made, data: st.DataObject) -> None:  # type: ignore[no-untyped-def]
    girder, train = made
    f = data.draw(compliances(girder.n_supports))
    place = places(Condensed(girder), "moment", where(girder))
    both = envelope(passages(place, train), f)
    one = envelope(passages(place, train, both_ways=False), f)
    other = envelope(passages(place, train.reversed(), both_ways=False), f)
    assert apart(both.maximum, np.maximum(one.maximum, other.maximum)) < 1e-12
    assert apart(both.minimum, np.minimum(one.minimum, other.minimum)) < 1e-12


def test_a_train_seen_from_the_other_side_gives_the_mirrored_envelope() -> None:
    flipped = Girder(tuple(span[::-1] for span in THREE.spans[::-1]))
    x = where(THREE)
    one = envelope(passages(places(Condensed(THREE), "moment", x), WAGON), PADS)
    two = envelope(passages(places(Condensed(flipped), "moment", THREE.length - x), WAGON), PADS[::-1])
    # the even grids of the two ways do not fall on each other, hence not exact
    assert apart(two.maximum, one.maximum) < 1e-4
    assert apart(two.minimum, one.minimum) < 1e-3


def test_an_axle_over_the_end_support_gives_it_its_whole_load() -> None:
    condensed = Condensed(THREE)
    single = Train(np.array([0.0]), np.array([100.0]))
    found = envelope(passages(support_places(condensed), single), np.zeros(4))
    assert found.maximum[[0, -1]] == pytest.approx([100.0, 100.0], rel=1e-12)
    # beside an interior support of unequal spans the reaction may be a little more than the load
    assert (found.maximum[1:-1] >= 100.0 - 1e-9).all()
    assert (found.minimum[[0, -1]] < -1.0).all()


def test_forces_of_a_train_are_those_of_its_axles() -> None:
    condensed = Condensed(THREE)
    leading = np.array([-1.0, 5.0, 17.5, 40.0])
    expected = sum(
        load * condensed.unit_forces(leading - offset)
        for offset, load in zip(WAGON.offsets, WAGON.loads, strict=True)
    )
    assert train_forces(condensed, WAGON, leading) == pytest.approx(np.asarray(expected), abs=1e-9)


def test_an_envelope_of_nothing_is_refused() -> None:
    nothing: list[Passage] = []
    with pytest.raises(ValueError, match="at least one passage"):
        envelope(nothing, PADS)
