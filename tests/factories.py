"""Girders, test loads and readings of an invented viaduct, for tests that need a whole case."""

from __future__ import annotations

import copy
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import Observation, ObservationModel, PadPrior
from assess.girder import Condensed, Girder, Piece
from assess.loads import LoadCase

Floats = NDArray[np.float64]

MM = 1e-3
SD = {
    "compression": 0.03 * MM,
    "deflection": 0.1 * MM,
    "rotation": 2e-5,
    "strain": 2e-6,
    "settlement": 0.1 * MM,
}
HEIGHT = -0.6  # m, bottom flange
AXLES = ((0.0, 100.0), (1.8, 100.0), (9.2, 100.0), (11.0, 100.0))


def viaduct() -> Girder:
    """Spans of 14, 18 and 14 m, stiffer over the piers."""
    mid, pier = 2.4e6, 3.1e6
    return Girder((
        (Piece(length=11.0, flexural=mid), Piece(length=3.0, flexural=pier)),
        (Piece(length=3.0, flexural=pier), Piece(length=12.0, flexural=mid), Piece(length=3.0, flexural=pier)),
        (Piece(length=3.0, flexural=pier), Piece(length=11.0, flexural=mid)),
    ))  # fmt: skip


NOMINAL = np.log(np.array([2.4e5, 3.6e5, 3.6e5, 2.4e5]))


def prior(cv: float = 0.3) -> PadPrior:
    """Lognormal prior of the viaduct's four pads."""
    return PadPrior(mean=NOMINAL, sd=np.full(4, np.sqrt(np.log1p(cv**2))))


def wagon_at(girder: Girder, *leading: float) -> list[LoadCase]:
    """A wagon with its leading axle at each of some places; axles off the girder left out."""
    return [
        LoadCase(points=tuple((x - a, p) for a, p in AXLES if 0.0 <= x - a <= girder.length)) for x in leading
    ]


def compressions(states: int, supports: Sequence[int]) -> list[Observation]:
    """The compression of every named support in every state, unread so far."""
    sd = SD["compression"]
    return [
        Observation(quantity="compression", state=s, value=0.0, sd=sd, support=i)
        for s in range(states)
        for i in supports
    ]


def along(quantity: str, states: int, places: Sequence[float], girder: Girder) -> list[Observation]:
    """Deflections, rotations or strains at places in every state, unread so far."""
    pieces = [piece for span in girder.spans for piece in span]
    return [
        Observation(
            quantity=quantity,
            state=s,
            value=0.0,
            sd=SD[quantity],
            x=x,
            height=HEIGHT,
            flexural=pieces[int(np.searchsorted(girder.breakpoints, x, side="right")) - 1].flexural,
        )
        for s in range(states)
        for x in places
    ]


def well_read() -> ObservationModel:
    """Four pads, four states, a compression at each pad and three deflections: 28 readings."""
    girder = viaduct()
    states = wagon_at(girder, 12.5, 20.0, 28.5, 44.0)
    read = compressions(4, range(4)) + along("deflection", 4, (6.5, 23.0, 39.5), girder)
    return ObservationModel(Condensed(girder), np.arange(4), states, read)


def poorly_read() -> ObservationModel:
    """One state in the first span, seven readings: the pads further off are hardly told."""
    girder = viaduct()
    read = compressions(1, (0, 1)) + along("deflection", 1, (4.0, 7.0, 10.0), girder)
    read += along("rotation", 1, (0.0, 14.0), girder)
    return ObservationModel(Condensed(girder), np.arange(4), wagon_at(girder, 12.5), read)


def with_values(model: ObservationModel, values: Floats) -> ObservationModel:
    """The same readings with other values."""
    read = copy.copy(model)
    read.value = np.asarray(values, dtype=np.float64)
    return read


def noisy(model: ObservationModel, theta: Floats, rng: np.random.Generator) -> ObservationModel:
    """Readings of pads theta with normal errors of their own standard deviations."""
    return with_values(model, model.predict(theta) + model.sd * rng.standard_normal(model.sd.size))
