"""What the next visit could read: the gauges of the bridge file and the places of a vehicle, or what is usual."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from assess.workflow.building import GirderModel
from assess.workflow.deciding import SD
from assess.workflow.lifting import lifting_states
from db.documents import PERMANENT, LoadStateDoc, ReadingDoc, VehicleDoc, VisitDoc
from db.prior_doc import GaugeDoc

Floats = NDArray[np.float64]

STEPS = 8  # of the vehicle in a span
MOST_POSITIONS = 60
GROUP_M = 3.0  # axles nearer than this to one another are a group (common practice, no source)
_ROUND = 10.0  # positions are given to 0.1 m: no driver stands better
_SLACK_M = 1e-6


@dataclass(frozen=True, kw_only=True)
class Offer:
    """Readings that could be taken on a girder, as a visit that has them all.

    Attributes
    ----------
    visit : one load state a position of the vehicle, and the permanent one where something is read in it
    readings : of that visit; a settlement has the value it is known by, others none
    cost : (c,) of the readings
    position : (c,) index of the position of the vehicle; -1 in the permanent state
    leading : leading axle, m, by position
    lifting : supports that the girder leaves, by the leading axle in m of the positions left out for it
    permanent_lifts : supports that it leaves under the permanent load alone
    defaults : what was taken because the bridge file does not say it, in words
    """

    visit: VisitDoc
    readings: list[ReadingDoc]
    cost: Floats
    position: NDArray[np.intp]
    leading: list[float]
    lifting: dict[float, list[str]]
    permanent_lifts: list[str]
    defaults: list[str]


def offer_of(
    model: GirderModel, vehicle: VehicleDoc, log_stiffness: Sequence[Floats], seats: Floats, datum_load: str
) -> Offer:
    """All that could be read on a girder at the next visit.

    Parameters
    ----------
    log_stiffness : each (q,): a position at which the girder leaves a pad of any of them is left out
    seats : (n,) how far the seats have dropped, m
    datum_load : what stood on the girder at the as-built datum
    """
    leading, said = _positions(model, vehicle)
    gauges, of_gauges = _gauges(model)
    whole = _visit(model, vehicle.id, gauges, leading, seats, datum_load)
    off: dict[str, list[str]] = {}
    for one in log_stiffness:
        off = lifting_states(model, whole, one) | off
    stays = [x for i, x in enumerate(leading) if _name(i) not in off]
    if PERMANENT in off or not model.permanent.given:
        gauges = tuple(g for g in gauges if g.state != PERMANENT or g.quantity == "settlement")
    visit = _visit(model, vehicle.id, gauges, stays, seats, datum_load)
    places = {_name(i): i for i in range(len(stays))} | {PERMANENT: -1}
    costs = [gauge.cost for gauge in gauges for _ in _states(gauge, stays)]
    return Offer(
        visit=visit,
        readings=list(visit.readings),
        cost=np.array(costs, dtype=np.float64),
        position=np.array([places[r.state] for r in visit.readings], dtype=np.intp),
        leading=stays,
        lifting={x: off[_name(i)] for i, x in enumerate(leading) if _name(i) in off},
        permanent_lifts=off.get(PERMANENT, []),
        defaults=[*of_gauges, *said],
    )


def _name(index: int) -> str:
    return f"at {index}"


def _states(gauge: GaugeDoc, leading: Sequence[float]) -> list[str]:
    return [PERMANENT] if gauge.state == PERMANENT else [_name(i) for i in range(len(leading))]


def _visit(
    model: GirderModel,
    vehicle: str,
    gauges: Sequence[GaugeDoc],
    leading: Sequence[float],
    seats: Floats,
    datum_load: str,
) -> VisitDoc:
    """A visit that reads every gauge in every state it is meant for."""
    states = [LoadStateDoc(id=_name(i), vehicle=vehicle, leading_axle_at=x) for i, x in enumerate(leading)]
    if any(gauge.state == PERMANENT for gauge in gauges):
        states.append(LoadStateDoc(id=PERMANENT))
    readings = [_reading(model, gauge, state, seats) for gauge in gauges for state in _states(gauge, leading)]
    return VisitDoc(
        bridge=model.bridge.id,
        date=dt.date.max,
        states=tuple(states),
        readings=tuple(readings),
        text="",
        digest="",
        datum_load=datum_load,
    )


def _reading(model: GirderModel, gauge: GaugeDoc, state: str, seats: Floats) -> ReadingDoc:
    value = 0.0
    if gauge.quantity == "settlement" and gauge.support is not None:
        value = float(seats[model.doc.support_index(gauge.support)])
    return ReadingDoc(
        girder=model.doc.id,
        state=state,
        quantity=gauge.quantity,
        support=gauge.support,
        at=gauge.at,
        height=gauge.height,
        value=value,
        sd=gauge.sd,
        value_entered="",
        sd_entered=gauge.sd_entered,
        unit=gauge.unit,
    )


def _gauges(model: GirderModel) -> tuple[tuple[GaugeDoc, ...], list[str]]:
    """The gauges of the file, else the usual ones with a sentence that says so."""
    doc = model.doc
    if doc.gauges:
        return doc.gauges, []
    places: list[tuple[str, str | None, float | None]] = [
        ("compression", doc.supports[i].id, None) for i in model.pads
    ]
    places += [("deflection", None, (a + b) / 2.0) for a, b in pairwise(doc.support_positions)]
    places += [("settlement", support.id, None) for support in doc.supports]
    made = tuple(
        GaugeDoc(
            quantity=quantity,
            support=support,
            at=at,
            sd=SD[quantity],
            sd_entered=f"{1e3 * SD[quantity]:g} mm",
            unit="mm",
            state=PERMANENT if quantity == "settlement" else "test",
        )
        for quantity, support, at in places
    )
    each = (
        f"compression of every pad (sd {1e3 * SD['compression']:g} mm), deflection at the middle of every span "
        f"({1e3 * SD['deflection']:g} mm), settlement of every seat ({1e3 * SD['settlement']:g} mm)"
    )
    said = (
        f"the bridge file has no [[girder.gauge]]; offered instead: {each}, each at the same cost "
        "(common practice, no source)."
    )
    return made, [said]


def _positions(model: GirderModel, vehicle: VehicleDoc) -> tuple[list[float], list[str]]:
    """Places of the leading axle that put an axle on the girder, and a sentence on where they come from."""
    given = np.array(vehicle.plan_positions, dtype=np.float64)
    made = given if given.size else _grid(model, vehicle)
    offsets = np.array([offset for offset, _ in vehicle.axles])
    axles = made[:, None] - offsets
    on = np.any((axles >= -_SLACK_M) & (axles <= model.doc.length + _SLACK_M), axis=1)
    made = np.unique(made[on])
    said = []
    if not given.size:
        said.append(
            f'the bridge file has no plan_positions for "{vehicle.id}"; offered instead: the leading '
            f"axle at every eighth of a span, and every group of axles over every support ({made.size} positions)."
        )
    if made.size > MOST_POSITIONS:
        said.append(f"of {made.size} positions {MOST_POSITIONS}, evenly spread, were tried.")
        made = made[np.linspace(0, made.size - 1, MOST_POSITIONS).round().astype(np.intp)]
    return [float(x) for x in made], said


def _grid(model: GirderModel, vehicle: VehicleDoc) -> Floats:
    """The leading axle at each step of each span, and the middle of the load of each group of axles over supports."""
    edges = np.array(model.doc.support_positions)
    steps = np.arange(1, STEPS + 1) / STEPS
    along = (edges[:-1, None] + np.diff(edges)[:, None] * steps).ravel()
    over = (edges[:, None] + _group_middles(vehicle)).ravel()
    return np.asarray(np.round(np.concatenate([along, over]) * _ROUND) / _ROUND)


def _group_middles(vehicle: VehicleDoc) -> Floats:
    """Distance of the middle of the load of each axle group behind the leading axle, m."""
    offsets, loads = np.array(sorted(vehicle.axles), dtype=np.float64).T
    starts = np.flatnonzero(np.append(True, np.diff(offsets) >= GROUP_M))
    return np.asarray(np.add.reduceat(offsets * loads, starts) / np.add.reduceat(loads, starts))
