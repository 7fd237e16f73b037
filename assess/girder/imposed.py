"""Responses to an imposed curvature, supports held level: what a temperature difference through the girder does.

A stretch that would bend by the curvature kappa is answered by the end moments of its segment, and moves within the
segment as a simple beam would: by virtual work y(x) = integral of m_x kappa, m_x the moment of the simple segment
under a unit load at x (unit load theorem; any text on structural analysis).
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.girder.condensed import Condensed
from assess.girder.response import Places

Floats = NDArray[np.float64]
Curvatures = Sequence[tuple[float, float, float]]


def imposed_forces(condensed: Condensed, curvatures: Curvatures) -> Floats:
    """Support forces (n,) of imposed curvatures (start m, end m, 1/m), supports held level, kN."""
    return condensed.forces_from(condensed.imposed_ends(curvatures), np.zeros(condensed.nodes.size))


def imposed(place: Places, curvatures: Curvatures) -> Floats:
    """Response (p,) to imposed curvatures (start m, end m, 1/m), sagging positive, supports held level.

    Raises
    ------
    ValueError
        for reactions, which are support forces.
    """
    ends = place.condensed.imposed_ends(curvatures)
    carried = (ends[place.segment] * place.carry).sum(axis=-1)
    if place.quantity in ("moment", "shear"):
        return np.asarray(carried)
    if place.quantity not in ("deflection", "slope"):
        raise ValueError(f"{place.quantity} is not a response along the girder")
    return np.asarray(carried + _simple(place, curvatures))


def _simple(place: Places, curvatures: Curvatures) -> Floats:
    """Deflection or slope (p,) of simple segments that bend by the curvatures."""
    nodes = place.condensed.nodes
    length = np.diff(nodes)[place.segment]
    start, x = nodes[place.segment], place.local
    total = np.zeros(x.size)
    for first, last, curvature in curvatures:
        a, b = (np.clip(edge - start, 0.0, length) for edge in (first, last))
        left, right = np.minimum(b, x), np.maximum(a, x)  # the stretch before x ends, that past x begins
        before = np.where(left > a, (left**2 - a**2) / 2.0, 0.0)  # integral of xi
        past = np.where(b > right, ((length - right) ** 2 - (length - b) ** 2) / 2.0, 0.0)  # of length - xi
        if place.quantity == "deflection":
            total += curvature * ((1.0 - x / length) * before + x / length * past)
        else:
            total += curvature * (past - before) / length
    return total
