"""What drives a governing section: how much each seat and each pad adds to its utilisation.

One support at a time is put back (a seat to its datum, a pad to nominal) and the section is assessed again:
the difference is what that support adds. The parts need not add up to the whole, because a girder's supports share.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from assess.capacity import evaluate
from assess.results import SpanTrend
from assess.workflow.assessing import Supports
from assess.workflow.building import GirderModel


@dataclass(frozen=True, kw_only=True)
class Driver:
    """One support's part in a utilisation: `what` is "seat" or "pad", `adds` its part of the utilisation."""

    what: str
    support: str
    adds: float


def drivers(model: GirderModel, supports: Supports, row: SpanTrend) -> list[Driver]:
    """Seats and pads by what they add to a section's utilisation, the largest first."""
    drops = supports.drops(model)
    whole = _utilisation(model, supports.log_stiffness, drops, row)
    found = []
    for support in supports.settlements:
        back = drops.copy()
        back[model.doc.support_index(support)] = 0.0
        adds = whole - _utilisation(model, supports.log_stiffness, back, row)
        found.append(Driver(what="seat", support=support, adds=adds))
    for i, support in enumerate(model.pad_ids):
        log_stiffness = supports.log_stiffness.copy()
        log_stiffness[i] = model.nominal[i]
        adds = whole - _utilisation(model, log_stiffness, drops, row)
        found.append(Driver(what="pad", support=support, adds=adds))
    return sorted((one for one in found if np.isfinite(one.adds)), key=lambda one: -one.adds)


def _utilisation(model: GirderModel, log_stiffness: np.ndarray, drops: np.ndarray, row: SpanTrend) -> float:
    for found in evaluate(model.effects, model.factors, model.compliance(log_stiffness), drops):
        check = found.check
        span = check.span + 1 if check.span >= 0 else None
        support = model.doc.supports[check.support].id if check.support >= 0 else None
        if (check.effect, span, support) == (row.effect, row.span, row.support):
            return found.case.utilisation
    raise ValueError(f"no row for {row.effect}, span {row.span}, support {row.support}")
