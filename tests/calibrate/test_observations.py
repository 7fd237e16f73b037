"""Observation equations: predictions against another method, derivatives against differences."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.typing import NDArray

from assess.calibrate import Observation, ObservationModel
from assess.girder import Condensed, Girder, Piece
from assess.loads import LoadCase
from tests.calibrate.exact import exact_values, stepped_girder
from tests.factories import HEIGHT, NOMINAL, along, compressions, viaduct, wagon_at

Floats = NDArray[np.float64]


def with_a_moving_seat() -> ObservationModel:
    """Every kind of reading, on a girder with a pin and a clamped end, one seat read to move under one state."""
    girder = stepped_girder()
    states = wagon_at(girder, 9.0, 24.0)
    read = compressions(2, (0, 1, 3))
    for quantity in ("deflection", "rotation", "strain"):
        read += along(quantity, 2, (3.3, 11.0, 25.5), girder)
    read.append(Observation(quantity="settlement", state=1, value=0.0, sd=1e-4, support=1))
    read.append(Observation(quantity="settlement", state=0, value=0.0, sd=1e-4, support=3))
    return ObservationModel(Condensed(girder), np.array([0, 1, 3]), states, read)


def differences(model: ObservationModel, theta: Floats) -> Floats:
    """Derivatives (m, size) of `predict` by central differences, extrapolated to a step of zero."""
    columns = []
    for i in range(theta.size):
        unit = np.zeros(theta.size)
        unit[i] = 1e-3
        coarse, fine = (
            (model.predict(theta + h * unit) - model.predict(theta - h * unit)) / (2e-3 * h)
            for h in (2.0, 1.0)
        )
        columns.append((4.0 * fine - coarse) / 3.0)
    return np.stack(columns, axis=1)


@pytest.mark.parametrize("seed", range(5))
def test_the_jacobian_is_the_derivative_of_the_prediction(seed: int) -> None:
    model = with_a_moving_seat()
    rng = np.random.default_rng(seed)
    pads = NOMINAL[[0, 1, 3]] + rng.normal(0.0, 1.0, 3)
    theta = np.concatenate([pads, rng.normal(0.0, 2e-3, len(model.seats))])
    exact, other = model.jacobian(theta), differences(model, theta)
    scale = np.abs(exact).max(axis=0)
    assert np.all(np.abs(exact - other) < 1e-8 * scale + 1e-16)


def test_seats_read_in_test_states_are_unknowns_of_their_own_state() -> None:
    model = with_a_moving_seat()
    assert model.seats == [(0, 3), (1, 1)]
    theta = np.concatenate([NOMINAL[[0, 1, 3]], [0.0, 0.0]])
    jacobian = model.jacobian(theta)
    column = model.pads.size + model.seats.index((1, 1))
    assert np.all(jacobian[model.state == 0, column] == 0.0)
    assert np.any(jacobian[model.state == 1, column] != 0.0)


def test_every_kind_of_reading_is_what_a_frame_of_elements_shows() -> None:
    model = with_a_moving_seat()
    girder = stepped_girder()
    k = np.exp(NOMINAL[[0, 1, 3]])
    compliance = np.array([1.0 / k[0], 1.0 / k[1], 0.0, 1.0 / k[2]])
    drops = np.zeros((2, 4))
    drops[1, 1], drops[0, 3] = 0.7e-3, -0.2e-3
    states = wagon_at(girder, 9.0, 24.0)
    read = compressions(2, (0, 1, 3))
    for quantity in ("deflection", "rotation", "strain"):
        read += along(quantity, 2, (3.3, 11.0, 25.5), girder)
    read.append(Observation(quantity="settlement", state=1, value=0.0, sd=1e-4, support=1))
    read.append(Observation(quantity="settlement", state=0, value=0.0, sd=1e-4, support=3))
    expected = exact_values(girder, compliance, states, read, drops)
    theta = np.concatenate([np.log(k), [drops[0, 3], drops[1, 1]]])
    assert model.predict(theta) == pytest.approx(expected, rel=1e-9, abs=1e-15)


def test_a_strain_below_the_neutral_axis_is_tension_where_the_girder_sags() -> None:
    # simple span of 10 m, 100 kN at midspan: M = 250 kN m, 0.6 m below the axis, EI 1e6 kN m2
    girder = Girder(((Piece(length=10.0, flexural=1e6),),))
    read = along("strain", 1, (5.0,), girder)
    model = ObservationModel(Condensed(girder), np.array([0, 1]), [LoadCase(points=((5.0, 100.0),))], read)
    assert model.predict(np.log([1e5, 1e5])) == pytest.approx([250.0 * -HEIGHT / 1e6])


def test_a_compression_is_the_reaction_over_the_stiffness() -> None:
    # 100 kN at 3 m of 10 m: R = 70 and 30 kN
    girder = Girder(((Piece(length=10.0, flexural=1e6),),))
    case = LoadCase(points=((3.0, 100.0),))
    model = ObservationModel(Condensed(girder), np.array([0, 1]), [case], compressions(1, (0, 1)))
    assert model.predict(np.log([1e5, 2e5])) == pytest.approx([70.0 / 1e5, 30.0 / 2e5])


def test_an_unknown_quantity_is_refused() -> None:
    read = [Observation(quantity="colour", state=0, value=0.0, sd=1.0)]
    with pytest.raises(ValueError, match="unknown quantity 'colour'"):
        ObservationModel(Condensed(viaduct()), np.arange(4), wagon_at(viaduct(), 12.5), read)
