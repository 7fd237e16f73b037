"""What drives a governing section: how much each seat and each pad adds to its utilisation.

One support at a time is put back (a seat to its datum, a pad to nominal) and the section is assessed again:
the difference is what that support adds. The parts need not add up to the whole, because a girder's supports share.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.capacity import evaluate
from assess.results import SpanTrend
from assess.workflow.building import GirderModel
from assess.workflow.supports import Supports, acting

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class Driver:
    """One support's part in a utilisation: `what` is "seat" or "pad", `adds` its part of the utilisation."""

    what: str
    support: str
    adds: float


def drivers(model: GirderModel, supports: Supports, row: SpanTrend) -> list[Driver]:
    """Seats and pads by what they add to a section's utilisation, the largest first."""
    model = supports.on(model)
    drops, pads = supports.seats(model), supports.log_stiffness

    def used(log_stiffness: Floats, seats: Floats) -> float:
        acts = acting(model, log_stiffness, seats, supports.log_factor)
        return _utilisation(model, *acts, row)

    whole = used(pads, drops)
    found = []
    for support in supports.settlements:
        back = drops.copy()
        back[model.doc.support_index(support)] = 0.0
        found.append(Driver(what="seat", support=support, adds=whole - used(pads, back)))
    for i, support in enumerate(model.pad_ids):
        log_stiffness = pads.copy()
        log_stiffness[i] = model.nominal[i]
        found.append(Driver(what="pad", support=support, adds=whole - used(log_stiffness, drops)))
    return sorted((one for one in found if np.isfinite(one.adds)), key=lambda one: -one.adds)


def _utilisation(model: GirderModel, compliance: Floats, drops: Floats, row: SpanTrend) -> float:
    for found in evaluate(model.effects, model.factors, compliance, drops):
        check = found.check
        span = check.span + 1 if check.span >= 0 else None
        support = model.doc.supports[check.support].id if check.support >= 0 else None
        if (check.effect, span, support) == (row.effect, row.span, row.support):
            return found.case.utilisation
    raise ValueError(f"no row for {row.effect}, span {row.span}, support {row.support}")
