"""What else is unknown beside the pads: predictions by another method, derivatives by differences."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from numpy.typing import NDArray

from assess.calibrate import Observation, ObservationModel, PermanentState, Unknowns
from assess.girder import Condensed, Girder, Piece
from assess.loads import LoadCase
from tests.calibrate.exact import exact_values, stepped_girder
from tests.calibrate.test_observations import differences
from tests.factories import NOMINAL, along, compressions, viaduct, wagon_at

Floats = NDArray[np.float64]

DEAD = LoadCase(uniforms=((0.0, 46.0, 30.0),), points=((20.0, 55.0),))
STEEL = LoadCase(uniforms=((0.0, 46.0, 9.0),))
WARM = ((0.0, 14.0, -1e-5), (14.0, 46.0, -1.4e-5))
EVERYTHING = Unknowns(
    sustained=True, settlements=(0, 1, 2, 3), girder=True, datum=True, share=(0, 1, -1), gradient=WARM
)


def permanent_readings(girder: Girder, state: int) -> list[Observation]:
    """Gaps, seat levels, girder levels and the rest, in the permanent state."""
    read = [replace(o, state=state) for o in compressions(1, range(4))]
    read += [replace(o, quantity="settlement") for o in read]
    for quantity in ("deflection", "rotation", "strain"):
        read += [replace(o, state=state) for o in along(quantity, 1, (3.0, 14.0, 23.0, 40.0), girder)]
    return [replace(o, shared=0 if o.quantity in ("settlement", "deflection") else -1) for o in read]


def everything(permanent: PermanentState, unknowns: Unknowns = EVERYTHING) -> ObservationModel:
    girder = viaduct()
    states = [*wagon_at(girder, 12.5, 28.5), permanent]
    read = (
        compressions(2, range(4))
        + along("deflection", 2, (6.5, 23.0), girder)
        + permanent_readings(girder, 2)
    )
    return ObservationModel(Condensed(girder), np.arange(4), states, read, unknowns)


STATES = {
    "since unloaded": PermanentState(loads=DEAD),
    "span by span": PermanentState(loads=DEAD, span_by_span=STEEL),
    "since loaded": PermanentState(loads=DEAD, since_loaded=True),
    "both": PermanentState(loads=DEAD, span_by_span=STEEL, since_loaded=True),
}


def somewhere(model: ObservationModel, seed: int) -> Floats:
    rng = np.random.default_rng(seed)
    scale = {"pads": 0.7, "as built": 0.3, "sustained": 0.2, "girder": 0.2, "share": 0.1, "gradient": 5.0}
    theta = np.array([scale.get(entry.block, 2e-3) for entry in model.layout.entries]) * rng.normal(
        size=model.size
    )
    theta[:4] += NOMINAL
    for j in model.layout.places("as built"):
        theta[j] += NOMINAL[model.layout.entries[j].index]
    return theta


@pytest.mark.parametrize("name", STATES)
@pytest.mark.parametrize("seed", range(3))
def test_the_jacobian_of_every_unknown_is_the_derivative_of_the_prediction(name: str, seed: int) -> None:
    model = everything(STATES[name])
    theta = somewhere(model, seed)
    value, exact = model.linearise(theta)
    assert value == pytest.approx(model.predict(theta), rel=1e-10, abs=1e-13)
    other = differences(model, theta)
    scale = np.abs(exact).max(axis=0)
    assert scale.min() > 0.0
    assert np.all(np.abs(exact - other) < 1e-7 * scale + 1e-16)


@pytest.mark.parametrize("name", STATES)
def test_many_unknowns_at_once_are_predicted_as_one_by_one(name: str) -> None:
    model = everything(STATES[name])
    thetas = np.array([somewhere(model, seed) for seed in range(6)]).reshape(2, 3, -1)
    one_by_one = np.array([model.predict(theta) for theta in thetas.reshape(6, -1)])
    assert model.predict(thetas).reshape(6, -1) == pytest.approx(one_by_one, rel=1e-10, abs=1e-14)


def scaled(girder: Girder, phi: float) -> Girder:
    spans = tuple(
        tuple(Piece(length=p.length, flexural=phi * p.flexural, shear=phi * p.shear) for p in span)
        for span in girder.spans
    )
    return Girder(spans)


def test_the_permanent_state_is_the_girder_on_softer_pads_and_lower_seats() -> None:
    girder, lasting = viaduct(), 0.7
    phi, s = 1.15, np.array([1.0, 6.0, -2.0, 0.5]) * 1e-3
    read = [replace(o, shared=-1) for o in permanent_readings(girder, 0)]
    unknowns = Unknowns(sustained=True, settlements=(0, 1, 2, 3), girder=True)
    model = ObservationModel(Condensed(girder), np.arange(4), [PermanentState(loads=DEAD)], read, unknowns)
    theta = np.concatenate([NOMINAL, [np.log(lasting)], s, [np.log(phi)]])
    stiffer = [replace(o, flexural=phi * o.flexural) for o in read]
    truth = exact_values(scaled(girder, phi), np.exp(-NOMINAL) / lasting, [DEAD], stiffer, s[None])
    assert model.predict(theta) == pytest.approx(truth, rel=1e-8, abs=1e-12)


def test_a_stiffer_girder_under_a_share_of_the_vehicle_is_that_girder_under_that_load() -> None:
    girder, phi, share = viaduct(), 0.85, 1.2
    states = wagon_at(girder, 12.5, 28.5)
    read = compressions(2, range(4))
    for quantity in ("deflection", "rotation", "strain"):
        read += along(quantity, 2, (3.0, 14.0, 40.0), girder)
    unknowns = Unknowns(girder=True, share=(0, -1))
    model = ObservationModel(Condensed(girder), np.arange(4), states, read, unknowns)
    theta = np.concatenate([NOMINAL, np.log([phi, share])])
    loads = [LoadCase(points=tuple((x, share * p) for x, p in states[0].points)), states[1]]
    stiffer = [replace(o, flexural=phi * o.flexural) for o in read]
    truth = exact_values(scaled(girder, phi), np.exp(-NOMINAL), loads, stiffer)
    assert model.predict(theta) == pytest.approx(truth, rel=1e-8, abs=1e-13)


def test_a_datum_shift_and_tilt_move_levels_and_nothing_else() -> None:
    model = everything(STATES["since unloaded"])
    theta = somewhere(model, 1)
    datum = model.layout.of("datum")
    theta[datum] = 0.0
    before = model.predict(theta)
    theta[datum] = [3e-3, 2e-3]
    moved = model.predict(theta) - before
    for o, by in zip(model.observations, moved, strict=True):
        x = model.condensed.positions[o.support] if o.quantity == "settlement" else o.x
        level = o.state == 2 and o.quantity in ("deflection", "settlement")
        assert by == pytest.approx(3e-3 + 2e-3 * (x / 46.0 - 0.5) if level else 0.0, abs=1e-15)


def test_nothing_has_changed_since_a_datum_under_load_if_nothing_changed() -> None:
    model = everything(STATES["both"])
    theta = np.zeros(model.size)
    theta[:4] = NOMINAL
    theta[model.layout.of("as built")] = NOMINAL
    assert np.abs(model.predict(theta)[model.state == 2]).max() < 1e-15


def test_steel_set_span_by_span_presses_its_pads_by_the_lever_rule() -> None:
    girder = viaduct()
    read = compressions(1, range(4))
    state = PermanentState(loads=LoadCase(), span_by_span=STEEL)
    model = ObservationModel(Condensed(girder), np.arange(4), [state], read)
    force = 9.0 * np.array([7.0, 16.0, 16.0, 7.0])
    assert model.predict(NOMINAL) == pytest.approx(force * np.exp(-NOMINAL), rel=1e-12)


def test_a_warm_top_lifts_the_middle_of_a_free_span() -> None:
    girder = Girder(((Piece(length=20.0, flexural=1e6),),))
    read = along("deflection", 1, (10.0,), girder)
    model = ObservationModel(
        Condensed(girder),
        np.arange(2),
        [PermanentState(loads=LoadCase())],
        read,
        Unknowns(gradient=((0.0, 20.0, -1.2e-5),)),
    )
    assert model.predict(np.array([*NOMINAL[:2], 8.0])) == pytest.approx([-8.0 * 1.2e-5 * 20.0**2 / 8.0])


def test_a_girder_has_one_permanent_state() -> None:
    both = [PermanentState(loads=DEAD), PermanentState(loads=DEAD)]
    with pytest.raises(ValueError, match="one permanent state"):
        ObservationModel(Condensed(stepped_girder()), np.array([0, 1, 3]), both, compressions(1, (0,)))
