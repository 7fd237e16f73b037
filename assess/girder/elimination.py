"""What is eliminated once, before any support is known: the girder between its nodes.

A segment's ends have moments and, where there are hinges, levels. Both are linear in what acts: the end rotations a
load gives the simple segment, the lever-rule load on each hinge, and the drops of the supports.

A girder without hinges is solved here by slope-deflection on whole spans: the spans' flexibilities are exact
(`span.py`) and the unknowns are the n support rotations. One with hinges is solved in `hinged.py`.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.girder.model import Girder
from assess.girder.span import SimpleSpan

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class Ends:
    """State of the ends of m segments, supports held level: end moments, then (only with hinges, c = 4) end levels.

    Attributes
    ----------
    by_load : (m, c, m, 2) per end rotation that a load gives a simple segment
    by_hinge : (m, c, hinges) per lever-rule load on a hinge, kN
    by_drop : (m, c, n) per unit support drop
    stiffness : (n, n) support forces upward per unit support drop, with the sign changed: K, kN/m
    """

    by_load: Floats
    by_hinge: Floats
    by_drop: Floats
    stiffness: Floats


def chord_rotations(lengths: Floats) -> Floats:
    """End rotations (m, 2, m + 1) of segments of lengths (m,) per unit drop of each node: left, and minus right."""
    m = lengths.size
    s = np.arange(m)
    turned = np.zeros((m, 2, m + 1))
    turned[s, 0, s], turned[s, 0, s + 1] = 1.0 / lengths, -1.0 / lengths
    turned[s, 1, s], turned[s, 1, s + 1] = -1.0 / lengths, 1.0 / lengths
    return turned


def node_rotations(m: int) -> Floats:
    """End rotations (m, 2, m + 1) of segments per unit rotation of each node: left, and minus right."""
    s = np.arange(m)
    turned = np.zeros((m, 2, m + 1))
    turned[s, 0, s] = 1.0
    turned[s, 1, s + 1] = -1.0
    return turned


def continuous(girder: Girder, spans: Sequence[SimpleSpan]) -> Ends:
    """Eliminate a girder without hinges.

    Source: slope-deflection, any text on matrix structural analysis; unit-load theorem for the flexibilities.
    """
    n, m = girder.n_supports, len(spans)
    k = np.array([span.stiffness for span in spans])  # (m, 2, 2)
    s = np.arange(m)
    by_rotation = node_rotations(m)
    by_drop = chord_rotations(np.array([span.length for span in spans]))
    free = np.isfinite(girder.rotation)
    joint = np.einsum("sia,sij,sjb->ab", by_rotation, k, by_rotation)
    joint[np.diag_indices(n)] += np.where(free, girder.rotation, 0.0)
    drop = np.einsum("sia,sij,sjb->ab", by_rotation, k, by_drop)
    load = np.einsum("sia,sij->asj", by_rotation, k).reshape(n, 2 * m)
    solved = np.zeros((n, n + 2 * m))
    if free.any():
        right = np.concatenate([-drop, load], axis=1)[free]
        solved[free] = np.linalg.solve(joint[np.ix_(free, free)], right)
    rotations_by_load = solved[:, n:].reshape(n, m, 2)
    moments_by_drop = np.einsum("sij,sjb->sib", k, by_rotation @ solved[:, :n] + by_drop)
    moments = np.einsum("sij,sja,atb->sitb", k, by_rotation, rotations_by_load)
    moments[s, :, s, :] -= k
    stiffness = np.einsum("sia,sib->ab", by_drop, moments_by_drop)
    return Ends(
        by_load=moments,
        by_hinge=np.zeros((m, 2, 0)),
        by_drop=moments_by_drop,
        stiffness=(stiffness + stiffness.T) / 2.0,
    )
