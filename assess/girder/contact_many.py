"""Many load cases on pads without tension: every set of lifted supports is factorised once for all that share it.

The same block pivoting as in `contact.py`, for live loads in many positions on few or many sets of pads. What it does
not settle in a few rounds goes to `contact`, which always ends.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.girder.condensed import Condensed
from assess.girder.contact import TOLERANCE, contact, holds, kinds

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
Ints = NDArray[np.intp]

_ROUNDS = 8


@dataclass(frozen=True)
class ManyStates:
    """Levels (s, m, n) of the girder over its supports, m downward, and which supports it has left (s, m, n)."""

    displacement: Floats
    lifted: Bools


@dataclass(frozen=True)
class _Entries:
    """Load cases that lift: set of pads (e,), case (e,), forces (e, n) and the tension that counts as none (e,)."""

    pads: Ints
    case: Ints
    forces: Floats
    slack: Floats

    def at(self, some: NDArray[np.bool_] | Ints) -> _Entries:
        return _Entries(self.pads[some], self.case[some], self.forces[some], self.slack[some])


def contact_many(
    condensed: Condensed, compliance: Floats, forces: Floats, settlement: Floats, held_down: Bools
) -> ManyStates:
    """Solve all load cases on all sets of supports.

    Parameters
    ----------
    condensed : Condensed
    compliance, settlement : (s, n) m/kN and m
    forces : (m, n), or (s, m, n) where every set of supports has its own, kN with all supports held level
    held_down : (n,)

    Raises
    ------
    Tips
        where the supports that stay do not hold the girder.
    """
    drop = np.where(np.isinf(compliance), 0.0, settlement)
    pulled_down = drop @ condensed.K
    operator = condensed.displacement_operator(compliance)
    right = forces - pulled_down[:, None, :]
    level = drop[:, None, :] + right @ operator.swapaxes(-1, -2)
    shape = level.shape
    reaction = forces - level @ condensed.K
    lifted = np.zeros(shape, dtype=bool)
    if reaction[..., ~held_down].min(initial=0.0) >= 0.0:
        return ManyStates(level, lifted)
    forces = np.broadcast_to(forces, shape)
    slack = TOLERANCE * (np.abs(forces).max(axis=-1) + np.abs(pulled_down).max(axis=-1)[:, None])
    off = (reaction < -slack[..., None]) & ~held_down
    pads, case = np.nonzero(off.any(axis=-1))
    entries = _Entries(pads, case, forces[pads, case], slack[pads, case])
    _settle(condensed, compliance, settlement, held_down, entries, off[pads, case], level, lifted)
    return ManyStates(level, lifted)


def _settle(
    condensed: Condensed,
    compliance: Floats,
    settlement: Floats,
    held_down: Bools,
    entries: _Entries,
    off: Bools,
    level: Floats,
    lifted: Bools,
) -> None:
    """Put levels and lifted supports of the entries into `level` and `lifted`, starting from the sets `off` (e, n)."""
    for _ in range(_ROUNDS):
        left, following = [], []
        sets, which = kinds(off)
        for i, one in enumerate(sets):
            index = np.flatnonzero(which == i)
            some = entries.at(index)
            if not holds(condensed, one | np.isinf(compliance[some.pads]).all(axis=0)):
                left.append(index)
                following.append(off[index])
                continue
            found, wrong = _try(condensed, compliance, settlement, held_down, some, one)
            level[some.pads, some.case], lifted[some.pads, some.case] = found, one
            bad = wrong.any(axis=1)
            left.append(index[bad])
            following.append(one ^ wrong[bad])
        chosen = np.concatenate(left)
        if not chosen.size:
            return
        entries, off = entries.at(chosen), np.concatenate(following)
    last = contact(condensed, compliance[entries.pads], entries.forces, settlement[entries.pads], held_down)
    level[entries.pads, entries.case] = last.displacement
    lifted[entries.pads, entries.case] = last.lifted


def _try(
    condensed: Condensed,
    compliance: Floats,
    settlement: Floats,
    held_down: Bools,
    some: _Entries,
    off: Bools,
) -> tuple[Floats, Bools]:
    """Levels (e, n) without the supports `off` (n,), and where that is of the wrong sign (e, n)."""
    pads, which = np.unique(some.pads, return_inverse=True)
    without = np.where(off, np.inf, compliance[pads])
    drop = np.where(np.isinf(without), 0.0, settlement[pads])
    right = some.forces - (drop @ condensed.K)[which]
    operator = condensed.displacement_operator(without)
    if pads.size == 1:
        level = drop + right @ operator[0].T
    else:
        level = drop[which] + (operator[which] @ right[..., None])[..., 0]
    reaction = some.forces - level @ condensed.K
    slack = some.slack[:, None]
    rise = (settlement[pads][which] - level) * np.maximum(np.diagonal(condensed.K), np.finfo(np.float64).tiny)
    return level, np.where(off, rise < -slack, (reaction < -slack) & ~held_down)
