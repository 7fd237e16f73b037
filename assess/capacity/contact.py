"""Pads without tension under permanent loads: which supports the girder stands on.

Loads carried span by span press on a pad without bending the continuous girder. To contact they are support forces
like any others, and the pad's seat counts as raised by what they had pressed it together before the spans were joined:
R + S = P + S - K d,  d = (s - F S) + F (R + S).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from assess.capacity.standing import PermanentLoads
from assess.girder import Condensed, ContactState, contact

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]


def standing_on(
    condensed: Condensed,
    permanent: PermanentLoads,
    compliance: Floats,
    settlement: Floats,
    held_down: Bools,
    *,
    factors: Floats | None = None,
    more: Floats | None = None,
) -> ContactState:
    """Solve for the supports under factored permanent loads, seat drops as they are, and more loads.

    Parameters
    ----------
    condensed : Condensed
    permanent : PermanentLoads
    compliance, settlement : (..., n)
    held_down : (n,)
    factors : (kinds,) on the kinds of permanent load; None: 1
    more : (..., n) support forces of other loads with all supports held level, kN

    Returns
    -------
    ContactState (..., n), with what came on span by span in the reactions

    Raises
    ------
    Tips
    """
    forces, seats = loads_on(permanent, compliance, settlement, factors)
    return contact(condensed, compliance, forces if more is None else forces + more, seats, held_down)


def loads_on(
    permanent: PermanentLoads, compliance: Floats, settlement: Floats, factors: Floats | None
) -> tuple[Floats, Floats]:
    """Support forces (n,) of factored permanent loads, and seat drops (..., n) that belong to them."""
    by_kind = np.ones(len(permanent.kinds)) if factors is None else factors
    before = by_kind @ permanent.simple_forces
    pressed = np.where(np.isinf(compliance), 0.0, compliance) * before if before.any() else 0.0
    return by_kind @ permanent.forces + before, np.asarray(settlement - pressed)
