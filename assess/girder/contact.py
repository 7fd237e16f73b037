"""Pads that take no tension: which supports a girder lifts off, and what it then does.

With gaps g >= 0 between girder and pad the levels are d = s + F R - g, and a gap acts like a seat that rises:

    R = R0 + N g,   N = (I + K F)^-1 K symmetric positive semidefinite,   R >= 0,  g >= 0,  R g = 0

for all supports that are not held down: a linear complementarity problem in the reactions R0 of the girder stuck to
all supports. It has one solution or the girder tips. Sets with a tensile R0 are solved together by block principal
pivoting (Judice and Pires 1994: everything of the wrong sign changes sides at once), which nearly always ends after a
few rounds but could go round in a circle. What is left is lifted one support at a time: every step lowers the energy
g' N g / 2 + R0' g, so no set of lifted supports comes back (the dual active set of Goldfarb and Idnani 1983).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.girder.condensed import Condensed

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

TOLERANCE = 1e-10  # of the largest support force: a tension below it is rounding
_HOLDS = 1e-10  # smallest over largest stiffness of what lies free, below which nothing holds it
_ROUNDS = 12  # of block pivoting; two or three are usual


class Tips(ValueError):
    """What the girder still stands on does not hold it.

    Attributes
    ----------
    lifted : indices of the supports it leaves
    """

    def __init__(self, lifted: list[int]) -> None:
        super().__init__("the girder tips: the supports that it still stands on do not hold it")
        self.lifted = lifted


@dataclass(frozen=True)
class ContactState:
    """What the supports do where pads take no tension.

    Attributes
    ----------
    reaction : (..., n) kN, upward on the girder; 0 where lifted
    displacement : (..., n) level of the girder over the support, m downward
    lifted : (..., n) whether the girder has left the support
    """

    reaction: Floats
    displacement: Floats
    lifted: Bools


def contact(
    condensed: Condensed,
    compliance: Floats,
    forces: Floats,
    settlement: Floats | None,
    held_down: Bools,
) -> ContactState:
    """Solve for supports of which some take no tension.

    Parameters
    ----------
    condensed : Condensed
    compliance : (..., n) m/kN; 0 unyielding, inf no support (which does not count as lifted)
    forces : (..., n) support forces with all supports held level, kN
    settlement : (..., n) seat drops, m, or None
    held_down : (n,) supports that take tension

    Returns
    -------
    ContactState with (..., n) arrays, the leading dimensions broadcast; as from `Condensed.solve` where nothing lifts

    Raises
    ------
    Tips
        where the supports that stay do not hold the girder.
    """
    linear = condensed.solve(compliance, forces, settlement)
    reaction, level = linear.reaction, linear.displacement
    lifted = np.zeros(reaction.shape, dtype=bool)
    # in rows of n; nearly always nothing is in tension, so that is asked first
    if held_down.all() or reaction[..., ~held_down].min(initial=0.0) >= 0.0:
        return ContactState(reaction, np.broadcast_to(level, reaction.shape), lifted)
    rows = _Rows.of(condensed, compliance, forces, settlement, reaction)
    pulled = (rows.reaction < -rows.slack[:, None]) & ~held_down
    some = np.flatnonzero(pulled.any(axis=1))
    if not some.size:
        return ContactState(reaction, np.broadcast_to(level, reaction.shape), lifted)
    rows = rows.at(some)
    off = _lifted(condensed, rows, pulled[some], ~held_down)
    again = condensed.solve(np.where(off, np.inf, rows.compliance), rows.forces, rows.settlement)
    n, shape = condensed.n_supports, reaction.shape
    all_reactions = reaction.reshape(-1, n).copy()
    all_levels = np.broadcast_to(level, shape).reshape(-1, n).copy()
    all_lifted = lifted.reshape(-1, n)
    all_reactions[some] = np.where(off, 0.0, again.reaction)
    all_levels[some], all_lifted[some] = again.displacement, off
    return ContactState(all_reactions.reshape(shape), all_levels.reshape(shape), all_lifted.reshape(shape))


@dataclass(frozen=True)
class _Rows:
    """Load cases one below the other, each on its supports; all (rows, n) but `slack` (rows,), kN."""

    compliance: Floats
    forces: Floats
    settlement: Floats
    reaction: Floats
    slack: Floats

    @staticmethod
    def of(
        condensed: Condensed, compliance: Floats, forces: Floats, settlement: Floats | None, reaction: Floats
    ) -> _Rows:
        shape = reaction.shape
        drop = np.zeros(shape[-1]) if settlement is None else np.where(np.isinf(compliance), 0.0, settlement)

        def flat(values: Floats) -> Floats:
            return np.broadcast_to(values, shape).reshape(-1, shape[-1])

        load, seats = flat(np.asarray(forces)), flat(drop)
        slack = TOLERANCE * (np.abs(load).max(axis=1) + np.abs(seats @ condensed.K).max(axis=1))
        return _Rows(flat(np.asarray(compliance)), load, seats, flat(reaction), slack)

    def at(self, index: NDArray[np.intp]) -> _Rows:
        """Return some of the rows."""
        return _Rows(
            self.compliance[index],
            self.forces[index],
            self.settlement[index],
            self.reaction[index],
            self.slack[index],
        )


def _lifted(condensed: Condensed, rows: _Rows, pulled: Bools, free: Bools) -> Bools:
    """Find the supports (rows, n) that are left, starting from those that are pulled."""
    by_gap = condensed.reaction_by_rise(rows.compliance)  # N
    size = np.maximum(np.diagonal(condensed.K), np.finfo(np.float64).tiny)
    answer = pulled.copy()
    open_, off = np.arange(len(pulled)), pulled
    for _ in range(_ROUNDS):
        holds = _held(condensed, off | np.isinf(rows.compliance[open_]))
        hard = open_[~holds]
        for row in hard:
            answer[row] = _one_by_one(by_gap[row], rows.reaction[row], free, rows.slack[row])
        open_, off = open_[holds], off[holds]
        if not open_.size:
            return answer
        gap = _gaps(by_gap[open_], rows.reaction[open_], off)
        reaction = rows.reaction[open_] + (by_gap[open_] @ gap[..., None])[..., 0]
        slack = rows.slack[open_, None]
        wrong = np.where(off, gap * size < -slack, (reaction < -slack) & free)
        answer[open_] = off
        left = wrong.any(axis=1)
        open_, off = open_[left], (off ^ wrong)[left]
        if not open_.size:
            return answer
    for row in open_:
        answer[row] = _one_by_one(by_gap[row], rows.reaction[row], free, rows.slack[row])
    return answer


def _gaps(by_gap: Floats, reaction: Floats, off: Bools) -> Floats:
    """Gaps (rows, n) that take the reactions of the lifted supports away: N_LL g_L = -R0_L."""
    system = by_gap * (off[:, :, None] & off[:, None, :])
    diagonal = np.arange(off.shape[1])
    system[:, diagonal, diagonal] += ~off
    return np.asarray(np.linalg.solve(system, np.where(off, -reaction, 0.0)[..., None])[..., 0])


def kinds(off: Bools) -> tuple[Bools, NDArray[np.intp]]:
    """Sets of supports that occur among rows (rows, n), and which of them each row is (rows,)."""
    n = off.shape[1]
    if n > 62:
        sets, which = np.unique(off, axis=0, return_inverse=True)
        return sets, which.ravel()
    codes = off @ (1 << np.arange(n, dtype=np.int64))  # far cheaper to sort than rows
    _, first, which = np.unique(codes, return_index=True, return_inverse=True)
    return off[first], which.ravel()


def _held(condensed: Condensed, off: Bools) -> Bools:
    """Tell in which rows (rows, n) the supports that are not off hold the girder."""
    sets, which = kinds(off)
    return np.array([holds(condensed, one) for one in sets], dtype=bool)[which]


def holds(condensed: Condensed, off: Bools) -> bool:
    """Tell whether the supports that are not off (n,) hold the girder: K of those that are off has no zero."""
    if not off.any():
        return True
    stiffness = np.linalg.eigvalsh(condensed.K[np.ix_(off, off)])
    return bool(stiffness[0] > _HOLDS * max(stiffness[-1], np.trace(condensed.K) * _HOLDS))


def _one_by_one(by_gap: Floats, stuck: Floats, free: Bools, slack: float) -> Bools:
    """Lift one support after the other, the most pulled one first; a gap that closes on the way closes.

    Parameters
    ----------
    by_gap : N (n, n)
    stuck : R0 (n,)
    free : (n,) supports that may lift
    slack : kN that count as no tension

    Returns
    -------
    (n,) whether lifted

    Raises
    ------
    Tips
    """
    n = stuck.size
    gap, off = np.zeros(n), np.zeros(n, dtype=bool)
    while True:
        reaction = stuck + by_gap @ gap
        new = int(np.where(free & ~off, reaction, np.inf).argmin())
        if not free[new] or off[new] or reaction[new] >= -slack:
            return off
        pull = reaction[new]
        while True:
            way = np.zeros(n)
            way[new] = 1.0
            if off.any():
                way[off] = -np.linalg.solve(by_gap[np.ix_(off, off)], by_gap[off, new])
            gain = float(by_gap[new] @ way)  # of its reaction for each metre that it lifts
            enough = -pull / gain if gain > _HOLDS * by_gap[new, new] else np.inf
            closing = np.flatnonzero(off & (way < 0.0))
            until = gap[closing] / -way[closing]
            first = float(until.min(initial=np.inf))
            if np.isinf(enough) and np.isinf(first):
                raise Tips([int(i) for i in np.flatnonzero(off)] + [new])
            gap = np.maximum(gap + min(enough, first) * way, 0.0)
            if enough <= first:
                off[new] = True
                break
            pull += first * max(gain, 0.0)
            shut = closing[until <= first]
            off[shut], gap[shut] = False, 0.0
