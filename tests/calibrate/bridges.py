"""Simulated bridges: girders, pads and loads drawn at random, read in the permanent state and under a vehicle."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import Observation, ObservationModel, PadPrior, PermanentState, Prior, Unknowns
from assess.girder import Condensed, Girder, Piece
from assess.loads import LoadCase

Floats = NDArray[np.float64]

MM = 1e-3
SUSTAINED, SUSTAINED_SD = float(np.log(1.0 / 1.35)), 0.10
SETTLEMENT_SD = 0.020
AXLES = ((0.0, 180.0), (1.8, 180.0), (9.2, 180.0), (11.0, 180.0))


@dataclass(frozen=True, kw_only=True)
class Bridge:
    """A girder on pads with what is believed of them, its permanent load, and how well levels are read."""

    condensed: Condensed
    prior: PadPrior
    dead: LoadCase

    @property
    def n(self) -> int:
        return self.condensed.n_supports

    @property
    def piers(self) -> range:
        return range(1, self.n - 1)


def drawn_bridge(rng: np.random.Generator) -> Bridge:
    """Two to four spans of 10 to 25 m; pads that shorten by 1.5 to 4 mm; their scatter 15 to 30 per cent."""
    spans = rng.uniform(10.0, 25.0, rng.integers(2, 5))
    flexural = 2.4e6 * (spans.mean() / 15.0) ** 2.5 * rng.uniform(0.7, 1.4)
    girder = Girder(tuple(_span(length, flexural, rng) for length in spans))
    weight = rng.uniform(25.0, 45.0)
    dead = LoadCase(uniforms=((0.0, girder.length, weight),))
    half = np.concatenate([[0.0], spans, [0.0]])
    force = weight * (half[:-1] + half[1:]) / 2.0
    mean = np.log(force / rng.uniform(1.5 * MM, 4.0 * MM, force.size))
    sd = float(np.sqrt(np.log1p(rng.uniform(0.15, 0.30) ** 2)))
    return Bridge(
        condensed=Condensed(girder), prior=PadPrior(mean=mean, sd=np.full(force.size, sd)), dead=dead
    )


def _span(length: float, flexural: float, rng: np.random.Generator) -> tuple[Piece, ...]:
    end = rng.uniform(0.1, 0.25) * length
    over_pier = 1.3 * flexural
    return (
        Piece(length=end, flexural=over_pier),
        Piece(length=length - 2.0 * end, flexural=flexural),
        Piece(length=end, flexural=over_pier),
    )


# readings ----------------------------------------------------------------------------------------


def at_supports(bridge: Bridge, quantity: str, sd: float, state: int) -> list[Observation]:
    """A gap, a seat level or a girder level at every support."""
    places = bridge.condensed.positions
    return [
        Observation(
            quantity=quantity,
            state=state,
            value=0.0,
            sd=sd,
            support=-1 if quantity == "deflection" else i,
            x=float(x) if quantity == "deflection" else 0.0,
        )
        for i, x in enumerate(places)
    ]


def vehicles(bridge: Bridge) -> list[LoadCase]:
    """The test vehicle over every pier in turn."""
    states = []
    for i in bridge.piers:
        lead = bridge.condensed.positions[i] + 5.5
        points = tuple((lead - a, p) for a, p in AXLES if 0.0 <= lead - a <= bridge.condensed.girder.length)
        states.append(LoadCase(points=points))
    return states


def read_under(bridge: Bridge, first: int) -> list[Observation]:
    """Deflections in midspan and compressions at every pad, under the vehicle in every place."""
    edges = bridge.condensed.positions
    middles = (edges[1:] + edges[:-1]) / 2.0
    read = []
    for state in range(first, first + len(bridge.piers)):
        read += at_supports(bridge, "compression", 0.05 * MM, state)
        read += [
            Observation(quantity="deflection", state=state, value=0.0, sd=0.15 * MM, x=float(x))
            for x in middles
        ]
    return read


def visited(
    bridge: Bridge, lasting: Sequence[Observation], *, test: bool, unknowns: Unknowns | None = None
) -> ObservationModel:
    """Readings of the permanent state (state 0), and under the vehicle where it came."""
    states: list[LoadCase | PermanentState] = [PermanentState(loads=bridge.dead)]
    read = list(lasting)
    if test:
        states += vehicles(bridge)
        read += read_under(bridge, 1)
    asked = unknowns or Unknowns(sustained=True, settlements=tuple(range(bridge.n)))
    return ObservationModel(bridge.condensed, np.arange(bridge.n), states, read, asked)


# truth -------------------------------------------------------------------------------------------

SDS = {
    "sustained": SUSTAINED_SD,
    "settlements": SETTLEMENT_SD,
    "girder": 0.10,
    "share": 0.10,
    "seats": np.inf,
}
"""Of what is believed beside the pads, as in a bridge file that says nothing of it."""


def believed(bridge: Bridge, model: ObservationModel, *, shared_sd: float = 0.5 * MM) -> Prior:
    """The prior of a bridge file that says nothing of it."""
    entries = model.layout.entries[bridge.n :]
    mean, sd = np.zeros(len(entries)), np.zeros(len(entries))
    for j, entry in enumerate(entries):
        if entry.block == "datum":
            sd[j] = 2.0 * MM
        elif entry.block == "gradient":
            sd[j] = (1.0, 5.0)[entry.index]
        elif entry.block == "as built":
            mean[j], sd[j] = bridge.prior.mean[entry.index], bridge.prior.sd[entry.index]
        elif entry.block == "shared":
            sd[j] = shared_sd
        else:
            sd[j] = SDS[entry.block]
        if entry.block == "sustained":
            mean[j] = SUSTAINED
    return Prior(pads=bridge.prior, mean=mean, sd=sd)


def drawn_truth(prior: Prior, rng: np.random.Generator) -> Floats:
    """Unknowns (size,) drawn from what is believed of them; by 0.5 mm where nothing is."""
    assert prior.pads is not None
    mean = np.concatenate([prior.pads.mean, prior.mean])
    sd = np.concatenate([prior.pads.sd, np.where(np.isfinite(prior.sd), prior.sd, 0.5 * MM)])
    return np.asarray(mean + sd * rng.standard_normal(mean.size))


def start_of(prior: Prior) -> Floats:
    """Where fits start (size,)."""
    assert prior.pads is not None
    return np.concatenate([prior.pads.mean, prior.mean])
