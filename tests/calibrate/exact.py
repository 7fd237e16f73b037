"""Readings without error, made by a frame of elements in 50 digits and not by the condensed girder."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import Observation
from assess.girder import Girder, Piece
from assess.loads import LoadCase
from tests.independent import frame

Floats = NDArray[np.float64]


def stepped_girder() -> Girder:
    """Three unequal spans with shear flexibility, clamped at the right end."""
    return Girder(
        (
            (Piece(length=6.0, flexural=9e5, shear=1.1e6), Piece(length=3.0, flexural=1.6e6, shear=1.4e6)),
            (Piece(length=2.0, flexural=1.6e6, shear=1.4e6), Piece(length=9.0, flexural=1.1e6)),
            (Piece(length=8.0, flexural=1.1e6, shear=1.0e6),),
        ),
        np.array([0.0, 0.0, 3e4, np.inf]),
    )


def exact_values(
    girder: Girder,
    compliance: Floats,
    states: Sequence[LoadCase],
    observations: Sequence[Observation],
    drops: Floats | None = None,
) -> Floats:
    """True values (m,) of readings; seats drop by `drops` (states, n)."""
    drops = np.zeros((len(states), girder.n_supports)) if drops is None else drops
    x = np.unique([o.x for o in observations])
    solved = [
        frame.solve(girder, compliance, drop, case, x) for case, drop in zip(states, drops, strict=True)
    ]
    values = []
    for o in observations:
        one, at = solved[o.state], int(np.searchsorted(x, o.x))
        values.append({
            "compression": one.displacement[o.support] - drops[o.state, o.support],
            "settlement": drops[o.state, o.support],
            "deflection": one.deflection[at],
            "rotation": one.slope[at],
            "strain": -one.moment[at] * o.height / o.flexural,
        }[o.quantity])  # fmt: skip
    return np.array(values)
