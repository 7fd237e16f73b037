"""Load states in which the girder leaves a pad: no linear girder explains what is read there."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager

import numpy as np
from numpy.typing import NDArray

from assess.capacity import standing_on
from assess.girder import Tips, forces_of
from assess.workflow.building import GirderModel
from db.documents import VisitDoc
from db.errors import BedstoneError

Floats = NDArray[np.float64]

_LOOKED_AT = 40  # draws that tell how often a pad is left
_LIFTING_DRAWS = 300  # that lift, at each time: a probability of 5 % to some 1.3 %

Lifting = dict[str, list[str]]
"""Load states by id, with the supports that the girder leaves in them, or has left before the vehicle came."""


def lifting_states(model: GirderModel, visit: VisitDoc, log_stiffness: Floats) -> Lifting:
    """Load states of a visit in which contact opens on pads of ln k (q,): permanent loads, and the vehicle, unfactored.

    Seats are where the visit's own levels put them. Without permanent loads in the file nothing can be told.

    Raises
    ------
    BedstoneError
        where the girder tips.
    """
    states = [state for state in visit.states if state.vehicle is not None]
    if not model.permanent.given or model.held_down.all():
        return {}
    condensed = model.condensed
    forces = np.array([np.zeros(model.n), *(forces_of(condensed, model.placed(state)) for state in states)])
    compliance, drops = model.compliance(log_stiffness), _levels(model, visit)
    with tipping_named(model, f"visit {visit.date.isoformat()}"):
        stands = standing_on(condensed, model.permanent, compliance, drops, model.held_down, more=forces)
    off = stands.lifted[1:] | stands.lifted[0]
    found = {}
    for state, lifted in zip(states, off, strict=True):
        if lifted.any():
            found[state.id] = [model.doc.supports[i].id for i in np.flatnonzero(lifted)]
    if stands.lifted[0].any():
        supports = [model.doc.supports[i].id for i in np.flatnonzero(stands.lifted[0])]
        found |= {state.id: supports for state in visit.states if state.vehicle is None}
    return found


def _levels(model: GirderModel, visit: VisitDoc) -> Floats:
    """Seat drops (n,) that the visit itself measured in the permanent state, m; repeats pooled by weight."""
    weighted, weight = np.zeros(model.n), np.zeros(model.n)
    for one in visit.readings:
        permanent = visit.state(one.state).vehicle is None
        if one.girder == model.doc.id and one.quantity == "settlement" and permanent and one.support:
            i = model.doc.support_index(one.support)
            weighted[i] += one.value / one.sd**2
            weight[i] += one.sd**-2.0
    return np.divide(weighted, weight, out=np.zeros(model.n), where=weight > 0.0)


def draws_worth(model: GirderModel, compliances: Floats, drops: Floats) -> int:
    """How many of many draws (draws, times, n) are worth their time: those that lift off a pad are slow.

    As many as bring some 300 that lift at each time, all of them where none does.
    """
    some = slice(None, None, max(1, len(compliances) // _LOOKED_AT))
    flat = (-1, model.n)
    passing = model.effects.passing(model.factors, compliances[some].reshape(flat), drops[some].reshape(flat))
    share = float(passing.opens.mean())
    if share == 0.0:
        return len(compliances)
    return int(np.clip(_LIFTING_DRAWS / share, min(_LIFTING_DRAWS, len(compliances)), len(compliances)))


@contextmanager
def tipping_named(model: GirderModel, where: str = "") -> Iterator[None]:
    """Turn a girder that tips into one line that names it and says what to do."""
    try:
        yield
    except Tips as error:
        names = ", ".join(f'"{model.doc.supports[i].id}"' for i in sorted(error.lifted))
        raise BedstoneError(
            f"the girder would tip: it lifts off {names}, and what is left does not hold it",
            field=f'girder "{model.doc.id}"' + (f", {where}" if where else ""),
            remedy="check permanent loads and seat levels; write hold_down = true at a support that is tied down",
        ) from error
