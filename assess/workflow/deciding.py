"""The reading that would tell two explanations apart."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import Observation, ObservationModel
from assess.workflow.unknowns import Setup

Floats = NDArray[np.float64]

SD = {"compression": 0.05e-3, "deflection": 0.1e-3, "settlement": 0.3e-3}
"""Of usual readings, m: caliper at marked corners, dial gauge, level (common practice, no source)."""
WORTH = 2.0  # standard deviations of the reading that the explanations must differ by


def deciding_reading(setup: Setup, first: Floats, second: Floats) -> str | None:
    """The reading not yet taken on which two sets of unknowns (size,) differ most; None if on none enough."""
    candidates = list(_candidates(setup))
    if not candidates:
        return None
    states = setup.states
    equations = ObservationModel(
        setup.model.condensed, setup.model.pads, states, candidates, setup.unknowns_of(candidates)
    )
    whole = {(entry.block, entry.index): j for j, entry in enumerate(setup.layout.entries)}
    places = [whole[entry.block, entry.index] for entry in equations.layout.entries]
    one, other = equations.predict(first[places]), equations.predict(second[places])
    apart = np.abs(one - other) / equations.sd
    best = int(apart.argmax())
    if apart[best] < WORTH:
        return None
    name = _named(setup, candidates[best])
    return f"{name}: {1e3 * one[best]:.3g} mm against {1e3 * other[best]:.3g} mm"


def _candidates(setup: Setup) -> Iterator[Observation]:
    doc = setup.model.doc
    edges = doc.support_positions
    read = {(o.state, o.quantity, o.support if o.support >= 0 else o.x) for o in setup.equations.observations}
    for state, one in enumerate(setup.visit.states):
        lasting = one.vehicle is None
        if lasting and (not setup.lasting or not setup.model.permanent.given):
            continue
        places = [("compression", int(i), edges[i]) for i in setup.model.pads]
        places += [("deflection", -1, (a + b) / 2.0) for a, b in pairwise(edges)]
        if lasting:
            places += [("settlement", i, x) for i, x in enumerate(edges)]
        for quantity, support, x in places:
            if (state, quantity, support if support >= 0 else x) not in read:
                yield Observation(
                    quantity=quantity, state=state, value=0.0, sd=SD[quantity], support=support, x=x
                )


def _named(setup: Setup, o: Observation) -> str:
    state = setup.visit.states[o.state].id
    where = f'at "{setup.model.doc.supports[o.support].id}"' if o.support >= 0 else f"at {o.x:.4g} m"
    return f"{o.quantity} {where} in {state}"
