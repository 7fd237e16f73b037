"""A girder with internal hinges: its segments' ends by the force method.

At an internal hinge the moment is zero, the shear passes through and the level is one more unknown. What equilibrium
leaves open is a few redundant moments, or none; they follow from the flexibilities of the segments. With m the moments
at the segment ends (those at hinges left out), G their flexibility with that of the rotational restraints in it, r the
end rotations that loads give the simple segments, B d the chord rotations from support drops, and C' m = p the
equilibrium of the free supports (no moment jumps) and of the hinges (what the lever rule puts there is carried on):

    G m + r - B d = C l,   C' m = p,   so   m = H (B d - r) + (1 - H G) Y p,   l = Y' (G m + r - B d)

with N spanning the null space of C', H = N (N' G N)^-1 N' and Y = C (C' C)^-1; l holds the levels of the hinges.
Moments of a statically determinate girder (no N, H = 0) come from equilibrium alone, whatever settles, and a short
cantilever beside a long span costs no digits, as stiffnesses of its ends would.

The rank of C tells a mechanism: then some loads cannot be carried by any moments.

Source: force method with the null space of the equilibrium equations; any text on matrix structural analysis.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.girder.elimination import Ends, chord_rotations, node_rotations
from assess.girder.model import Girder
from assess.girder.span import SimpleSpan

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

_RANK = 1e-10  # of the largest singular value of the scaled equilibrium equations


def hinged(girder: Girder, segments: Sequence[SimpleSpan], hinges: Ints) -> Ends:
    """Eliminate a girder with internal hinges.

    Parameters
    ----------
    girder : Girder
    segments : its segments between nodes
    hinges : index of each hinge among the nodes

    Raises
    ------
    ValueError
        where the hinges make a mechanism of it.
    """
    m = len(segments)
    supports = np.setdiff1d(np.arange(m + 1), hinges)
    chord = chord_rotations(np.array([one.length for one in segments])).reshape(2 * m, m + 1)
    turn = node_rotations(m).reshape(2 * m, m + 1)
    live = np.abs(turn[:, hinges]).sum(axis=1) == 0.0  # ends that may carry a moment
    turn, chord_live = turn[live][:, supports], chord[live]
    flexible = _flexibility(segments)[np.ix_(live, live)] + _restraints(turn, girder.rotation)
    equations = np.concatenate([turn[:, girder.rotation == 0.0], chord_live[:, hinges]], axis=1)
    null, inverse = _equilibrium(equations)
    redundant = null @ np.linalg.solve(null.T @ flexible @ null, null.T)
    redundant = (redundant + redundant.T) / 2.0
    carried = inverse[
        :, equations.shape[1] - hinges.size :
    ]  # end moments per load on a hinge, any that balance it
    carried = carried - redundant @ (flexible @ carried)
    by_drop = chord_live[:, supports]

    levels = np.concatenate([-carried.T @ by_drop, carried.T, carried.T @ flexible @ carried], axis=1)
    moments = np.concatenate([redundant @ by_drop, -redundant, carried], axis=1)
    of_supports = np.zeros((m + 1, supports.size))
    of_supports[supports, np.arange(supports.size)] = 1.0
    stiffness = by_drop.T @ redundant @ by_drop
    stiffness = (stiffness + stiffness.T) / 2.0
    return _assembled(moments, levels, live=live, hinges=hinges, of_supports=of_supports, stiffness=stiffness)


def _flexibility(segments: Sequence[SimpleSpan]) -> Floats:
    """Flexibility (2 m, 2 m) of all segment ends."""
    m = len(segments)
    whole = np.zeros((m, 2, m, 2))
    whole[np.arange(m), :, np.arange(m), :] = [one.flexibility for one in segments]
    return whole.reshape(2 * m, 2 * m)


def _restraints(turn: Floats, rotation: Floats) -> Floats:
    """What rotational restraints that yield add to the flexibility (ends, ends)."""
    yields = (rotation > 0.0) & np.isfinite(rotation)
    return np.asarray((turn[:, yields] / rotation[yields]) @ turn[:, yields].T)


def _equilibrium(equations: Floats) -> tuple[Floats, Floats]:
    """Null space (ends, redundants) of the equations C (ends, equations) and Y with C' Y = 1."""
    size = np.linalg.norm(equations, axis=0)
    if not size.all():
        raise ValueError("the hinges make a mechanism of the girder")
    u, values, v = np.linalg.svd(equations / size)
    if values.size < size.size or values.min() < _RANK * values.max():
        raise ValueError("the hinges make a mechanism of the girder")
    rank = values.size
    return u[:, rank:], np.asarray((u[:, :rank] / values) @ v / size)


def _assembled(
    moments: Floats,
    levels: Floats,
    *,
    live: NDArray[np.bool_],
    hinges: Ints,
    of_supports: Floats,
    stiffness: Floats,
) -> Ends:
    """Put moments (ends, n + ends + hinges) and levels of hinges (hinges, the same) where the segments' ends are."""
    m, n, h = live.size // 2, of_supports.shape[1], hinges.size
    columns = np.concatenate([np.ones(n, dtype=bool), live, np.ones(h, dtype=bool)])
    ends = np.zeros((2 * m, columns.size))
    ends[np.ix_(live, columns)] = moments
    nodes = np.zeros((m + 1, columns.size))
    nodes[:, :n] = of_supports
    nodes[np.ix_(hinges, columns)] = levels
    state = np.concatenate([ends.reshape(m, 2, -1), np.stack([nodes[:-1], nodes[1:]], axis=1)], axis=1)
    return Ends(
        by_load=np.ascontiguousarray(state[:, :, n : n + 2 * m]).reshape(m, 4, m, 2),
        by_hinge=np.ascontiguousarray(state[:, :, n + 2 * m :]),
        by_drop=np.ascontiguousarray(state[:, :, :n]),
        stiffness=stiffness,
    )
