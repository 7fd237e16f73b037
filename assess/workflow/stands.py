"""Where the live load stands for the moments that use a girder most, for the drawing of its moments."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from assess.girder import Placement
from assess.results import LoadStand, MomentLines
from assess.workflow.building import GirderModel

Floats = NDArray[np.float64]


def governing_stands(
    model: GirderModel, compliance: Floats, drops: Floats, lines: MomentLines
) -> list[LoadStand]:
    """Stand the live load for the most used sagging and hogging section on calibrated supports (n,).

    Without a given capacity the greatest factored moment counts as the most used.
    """
    cases = (
        ("sagging", 1.0, lines.calibrated_sagging, lines.capacity_sagging),
        ("hogging", -1.0, -lines.calibrated_hogging, -lines.capacity_hogging),
    )
    passing = model.effects.passing(model.factors, compliance[None], drops[None])
    stands = []
    for effect, sense, moment, capacity in cases:
        station = _most_used(moment, capacity)
        if station is None:
            continue
        found = passing.placement("moment", station, sense)
        if found is not None:
            stands.append(_stand(effect, float(lines.x_m[station]), found))
    return stands


def _most_used(moment: Floats, capacity: Floats) -> int | None:
    given = np.isfinite(capacity)
    use = np.where(given, moment / np.where(given, capacity, 1.0), -np.inf) if given.any() else moment
    station = int(use.argmax())
    return station if use[station] > 0.0 else None


def _stand(effect: str, x_m: float, found: Placement) -> LoadStand:
    return LoadStand(
        effect=effect,
        x_m=x_m,
        live_kNm=found.value,
        name=found.name,
        axles=list(found.axles),
        stretches=list(found.stretches),
        towards=found.towards,
    )
