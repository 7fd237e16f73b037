"""The rows of the observation equations: what does not depend on the unknowns."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from assess.calibrate.states import Rows
from assess.girder import Condensed, forces_of, imposed, imposed_forces, places, simple_forces_of
from assess.loads import LoadCase

if TYPE_CHECKING:
    from assess.calibrate.observations import Observation

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

_RESPONSE = {"deflection": "deflection", "rotation": "slope", "strain": "moment"}


def equations(
    condensed: Condensed,
    loads: Sequence[LoadCase],
    staged: Sequence[LoadCase],
    observations: Sequence[Observation],
    curvatures: Sequence[tuple[float, float, float]],
) -> Rows:
    """Rows of m observations in c load states.

    Parameters
    ----------
    loads, staged : (c,) what the continuous girder carries, and what came on span by span
    observations : their states count from 0 among these
    curvatures : of a temperature difference of 1 K; empty: none

    Raises
    ------
    ValueError
        for an unknown quantity.
    """
    count, n = len(observations), condensed.n_supports
    held, thermal = np.zeros(count), np.zeros(count)
    by_level, by_seat, by_stage = (np.zeros((count, n)) for _ in range(3))
    for j, o in enumerate(observations):
        if o.quantity == "compression":
            by_level[j, o.support], by_seat[j, o.support], by_stage[j, o.support] = 1.0, -1.0, 1.0
        elif o.quantity == "settlement":
            by_seat[j, o.support] = 1.0
        elif o.quantity not in _RESPONSE:
            raise ValueError(f"unknown quantity {o.quantity!r}")
    stands = any(one.points or one.uniforms for one in staged)
    for quantity, response in _RESPONSE.items():
        index = [j for j, o in enumerate(observations) if o.quantity == quantity]
        if not index:
            continue
        own = [observations[j] for j in index]
        row = places(condensed, response, np.array([o.x for o in own]))
        factor = np.array([-o.height / o.flexural if quantity == "strain" else 1.0 for o in own])
        y0 = np.array([row.held(case) for case in loads])  # (states, p)
        if stands:
            y0 = y0 + np.array([row.simple(case) for case in staged])
            by_stage[index] = _as_simple(condensed, quantity, row.x)
        which = np.array([o.state for o in own])
        held[index] = factor * y0[which, np.arange(which.size)]
        by_level[index] = factor[:, None] * row.rows
        if curvatures:
            thermal[index] = factor * imposed(row, curvatures)
    none = np.zeros(n)
    return Rows(
        state=np.array([o.state for o in observations], dtype=np.intp),
        held=held,
        thermal=thermal,
        by_level=by_level,
        by_seat=by_seat,
        by_stage=by_stage,
        forces=np.array([forces_of(condensed, case) for case in loads]).reshape(len(loads), n),
        thermal_forces=imposed_forces(condensed, curvatures) if curvatures else none,
        stage_forces=np.array(
            [simple_forces_of(condensed, c) if c.points or c.uniforms else none for c in staged]
        ).reshape(len(staged), n),
    )


def _as_simple(condensed: Condensed, quantity: str, x: Floats) -> Floats:
    """How simple spans follow their seats (p, n): straight between two of them."""
    if quantity == "deflection":
        return condensed.simple_forces(x)
    slopes = np.zeros((x.size, condensed.n_supports))
    if quantity == "rotation":
        span = condensed.span_of(x)
        length = np.diff(condensed.positions)[span]
        at = np.arange(x.size)
        slopes[at, span], slopes[at, span + 1] = -1.0 / length, 1.0 / length
    return slopes
