"""Compensating errors: how far each pad moves if the model is a little wrong elsewhere.

The girder 10 per cent stiffer or softer, the vehicles 5 per cent heavier or lighter or standing 0.1 m further or less
far, a temperature difference through the girder that no one wrote down (sizes: common practice, no source). Each is
held at its wrong value and the readings are fitted again.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import Restricted, fit, restricted_prior
from assess.results import CompensatingError, PadShift
from assess.workflow.explaining import entry_of
from assess.workflow.fitting import Fitting
from assess.workflow.unknowns import GRADIENTS, Setup
from db.errors import BedstoneError

Floats = NDArray[np.float64]

_GIRDER, _WEIGHT, _PLACE = 0.10, 0.05, 0.1  # of EI, of the vehicle, m


def compensating_errors(fitting: Fitting) -> list[CompensatingError]:
    """How far each pad moves by each error; an error whose unknown is fitted already is left out."""
    setup, found = fitting.setup, fitting.found
    if setup is None or found is None:
        return []
    rows = []
    for error, shifted in _errors(setup):
        moved = shifted - found.log_stiffness
        pads = [
            PadShift(
                support=support,
                change_percent=100.0 * float(np.expm1(moved[i])),
                change_sd=float(moved[i] / found.sd[i]),
            )
            for i, support in enumerate(setup.model.pad_ids)
        ]
        rows.append(CompensatingError(error=error, pads=pads))
    return rows


def _errors(setup: Setup) -> Iterator[tuple[str, Floats]]:
    if "girder" not in setup.names:
        for way in (1.0, -1.0):
            yield (
                f"girder {100 * way * _GIRDER:+.0f} % stiff",
                _held(setup, "girder", np.log1p(way * _GIRDER)),
            )
    if "share" not in setup.names and setup.tested:
        for way in (1.0, -1.0):
            yield (
                f"vehicle {100 * way * _WEIGHT:+.0f} % heavy",
                _held(setup, "share", np.log1p(way * _WEIGHT)),
            )
    if setup.tested:
        for way in (1.0, -1.0):
            there = Setup(setup.model, setup.visit, setup.readings, setup.names, shift=way * _PLACE)
            found = fit(there.equations, start=there.start, prior=there.prior())
            yield f"vehicle {way * _PLACE:+g} m further", found.log_stiffness
    if "gradient" not in setup.names:
        yield from _by_temperature(setup)


def _by_temperature(setup: Setup) -> Iterator[tuple[str, Floats]]:
    doc = setup.model.bridge.prior
    try:
        whole = Setup(setup.model, setup.visit, setup.readings, [*setup.names, "gradient"])
        layout = whole.layout
    except BedstoneError:
        return  # without the depth of the sections no curvature is known; the cautions say so
    for which, size in ((0, doc.test_gradient_sd), (1, doc.gradient_sd)):
        if entry_of(layout, "gradient", which) is not None:
            yield f"{GRADIENTS[which]} {size:+g} K", _held(setup, "gradient", size, which)


def _held(setup: Setup, block: str, value: float, which: int | None = None) -> Floats:
    """ln k (q,) with the unknowns of a block held at a value, or one of them and the others at 0."""
    whole = Setup(setup.model, setup.visit, setup.readings, [*setup.names, block])
    layout, q = whole.layout, setup.model.pads.size
    held = whole.start.copy()
    own = [j for j in layout.places(block) if which is None or layout.entries[j].index == which]
    held[own] = value
    free = np.array([j for j in range(layout.size) if j not in set(layout.places(block))], dtype=np.intp)
    part = Restricted(whole.equations, free, held)
    found = fit(part, start=held[free], prior=restricted_prior(whole.prior(), free, q))
    return found.log_stiffness
