"""Readings without error give the pads back; readings that cannot are refused."""

from __future__ import annotations

import numpy as np
import pytest

from assess.calibrate import NotDetermined, Observation, ObservationModel, fit
from assess.girder import Condensed, Girder, Piece
from assess.loads import LoadCase
from tests.calibrate.exact import exact_values, stepped_girder
from tests.factories import NOMINAL, along, compressions, viaduct, wagon_at, with_values

RATIOS = ([0.9, 1.1, 0.35, 1.0], [0.3, 0.3, 3.0, 2.5], [4.0, 0.2, 1.0, 0.8])
WITHIN = 1e-3  # the issue's own bound: 0.1 %
PLACES = (1.5, 7.0, 12.0, 16.0, 23.0, 30.0, 34.0, 39.0, 44.5)


def refit(girder: Girder, pads: list[int], k: np.ndarray, states: list[LoadCase], read: list[Observation]):  # type: ignore[no-untyped-def]
    compliance = np.zeros(girder.n_supports)
    compliance[pads] = 1.0 / k
    model = ObservationModel(Condensed(girder), np.array(pads), states, read)
    model = with_values(model, exact_values(girder, compliance, states, read))
    return fit(model, start=NOMINAL[pads], prior=None)


@pytest.mark.parametrize("ratio", RATIOS)
@pytest.mark.parametrize("kinds", ["compression", "deflection", "rotation", "strain", "all"])
def test_exact_readings_give_back_the_stiffnesses_without_a_prior(kinds: str, ratio: list[float]) -> None:
    girder = viaduct()
    states = wagon_at(girder, 12.5, 20.0, 28.5, 44.0)
    read: list[Observation] = []
    for quantity in ("deflection", "rotation", "strain"):
        read += along(quantity, 4, PLACES, girder) if kinds in (quantity, "all") else []
    read += compressions(4, range(4)) if kinds in ("compression", "all") else []
    k = np.exp(NOMINAL) * ratio
    found = refit(girder, [0, 1, 2, 3], k, states, read)
    assert np.exp(found.log_stiffness) == pytest.approx(k, rel=WITHIN)
    assert found.chi_square < 1e-6
    assert not found.suspect.any()


def test_exact_readings_give_back_pads_beside_a_pin_a_clamp_and_shear() -> None:
    girder = stepped_girder()
    k = np.exp(NOMINAL[[0, 1, 3]]) * [0.5, 1.4, 0.7]
    states = wagon_at(girder, 9.0, 17.0, 27.0)
    read = compressions(3, (0, 1, 3)) + along("deflection", 3, (4.5, 14.0, 24.0), girder)
    found = refit(girder, [0, 1, 3], k, states, read)
    assert np.exp(found.log_stiffness) == pytest.approx(k, rel=WITHIN)


def test_a_seat_that_moves_under_the_test_is_told_from_its_pad() -> None:
    girder = viaduct()
    states = wagon_at(girder, 12.5, 28.5)
    read = compressions(2, range(4)) + along("deflection", 2, (7.0, 23.0, 39.0), girder)
    read.append(Observation(quantity="settlement", state=1, value=0.0, sd=1e-4, support=2))
    k, drops = np.exp(NOMINAL) * [1.0, 0.8, 0.5, 1.2], np.zeros((2, 4))
    drops[1, 2] = 1.1e-3
    model = ObservationModel(Condensed(girder), np.arange(4), states, read)
    model = with_values(model, exact_values(girder, 1.0 / k, states, read, drops))
    found = fit(model, start=NOMINAL, prior=None)
    assert np.exp(found.log_stiffness) == pytest.approx(k, rel=WITHIN)
    assert found.seat_drops == pytest.approx([1.1e-3], rel=WITHIN)


def test_fewer_readings_than_pads_are_refused_with_the_untold_pads() -> None:
    girder = viaduct()
    states = wagon_at(girder, 12.5)
    model = ObservationModel(Condensed(girder), np.arange(4), states, compressions(1, (0, 1)))
    with pytest.raises(NotDetermined, match="too few readings") as refused:
        fit(model, start=NOMINAL, prior=None)
    assert (refused.value.readings, refused.value.unknowns) == (2, 4)


def simple_span() -> Girder:
    return Girder(((Piece(length=10.0, flexural=1e6),),))


def test_a_pad_that_carries_nothing_is_named_as_silent() -> None:
    girder, over_left = simple_span(), LoadCase(points=((0.0, 100.0),))
    read = [*compressions(1, (0, 0)), *along("deflection", 1, (3.0,), girder)]
    model = ObservationModel(Condensed(girder), np.arange(2), [over_left], read)
    with pytest.raises(NotDetermined) as refused:
        fit(model, start=np.log([1e5, 1e5]), prior=None)
    assert refused.value.pads == [1]


def test_readings_that_cannot_tell_two_pads_apart_are_refused() -> None:
    # midspan under a midspan load sinks by half the sum of both shortenings, whichever pad is soft
    girder, middle = simple_span(), LoadCase(points=((5.0, 100.0),))
    read = along("deflection", 1, (5.0, 5.0, 5.0), girder)
    model = with_values(ObservationModel(Condensed(girder), np.arange(2), [middle], read), np.full(3, 2.6e-3))
    with pytest.raises(NotDetermined, match="do not tell the pads apart") as refused:
        fit(model, start=np.log([1e5, 1e5]), prior=None)
    assert refused.value.pads == [0, 1]


@pytest.mark.parametrize("value", [-0.2e-3, -1e-6, 0.0])
def test_a_pad_read_to_lengthen_under_load_gets_no_stiffness(value: float) -> None:
    girder, middle = simple_span(), LoadCase(points=((5.0, 100.0),))
    model = ObservationModel(Condensed(girder), np.arange(2), [middle], compressions(1, (0, 1)))
    with pytest.raises(NotDetermined, match="do not bound") as refused:
        fit(with_values(model, np.array([value, 0.5e-3])), start=np.log([1e5, 1e5]), prior=None)
    assert 0 in refused.value.pads
    assert 1 not in refused.value.pads


def test_a_pad_read_to_lengthen_among_many_readings_gets_no_stiffness() -> None:
    girder = viaduct()
    states = wagon_at(girder, 12.5, 20.0, 28.5, 44.0)
    read = compressions(4, range(4))
    model = ObservationModel(Condensed(girder), np.arange(4), states, read)
    values = model.predict(NOMINAL)
    values[[o.support == 2 for o in read]] = -0.3e-3
    with pytest.raises(NotDetermined):
        fit(with_values(model, values), start=NOMINAL, prior=None)


def test_a_reading_that_pins_the_prior_away_keeps_a_number() -> None:
    """With the prior the same slip yields a finite stiffness, and the reading is a suspect."""
    girder, middle = simple_span(), LoadCase(points=((5.0, 100.0),))
    model = ObservationModel(Condensed(girder), np.arange(2), [middle], compressions(1, (0, 1)))
    from assess.calibrate import PadPrior

    start = np.log([1e5, 1e5])
    found = fit(
        with_values(model, np.array([-0.2e-3, 0.5e-3])),
        start=start,
        prior=PadPrior(mean=start, sd=np.full(2, 0.3)),
    )
    assert np.all(np.abs(found.log_stiffness - start) < 3.0)
    assert found.suspect.tolist() == [True, False]
