"""Fully plastic sections: where the forces balance, and the moment of them; exact for rectangles.

Source: theory of plasticity, any text; the widths are constant between edges, so that the force above a level is
linear there and the axis is found without iteration.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

_LEVEL = 1e-12  # of the whole force: within this the forces balance; the axis is the middle of where they do


@dataclass(frozen=True, kw_only=True)
class Blocks:
    """Stress blocks, each of constant force per height: all arrays (k,).

    Parameters
    ----------
    bottom, top : levels of the edges, m
    compression, tension : force per height where it is compressed and where it is pulled, kN/m; negative in a hole
    """

    bottom: Floats
    top: Floats
    compression: Floats
    tension: Floats


@dataclass(frozen=True, kw_only=True)
class Plastic:
    """The axis at which compression above equals tension below (m), and the moment of both (kN m)."""

    axis: float
    moment: float


def plastic(blocks: Blocks) -> Plastic:
    """Find axis and moment of a section that yields throughout, compressed above the axis.

    Parameters
    ----------
    blocks : Blocks
        For hogging hand over the section upside down, or swap the roles of compression and tension.
    """
    edges = np.unique(np.concatenate([blocks.bottom, blocks.top]))
    middle, step = (edges[1:] + edges[:-1]) / 2.0, np.diff(edges)
    within = (blocks.bottom <= middle[:, None]) & (middle[:, None] <= blocks.top)
    push, pull = within @ blocks.compression, within @ blocks.tension  # (strips,), kN/m
    pulled = np.concatenate([[0.0], np.cumsum(pull * step)])
    pushed = np.concatenate([np.cumsum((push * step)[::-1])[::-1], [0.0]])
    spare = pulled - pushed  # rises with the level of the axis from -all compression to +all tension
    near = _LEVEL * (pushed[0] + pulled[-1])
    axis = float(np.mean([np.interp(level, spare, edges) for level in (-near, near)]))
    upper, lower = np.maximum(edges - axis, 0.0) ** 2, np.maximum(axis - edges, 0.0) ** 2
    moment = (push @ np.diff(upper) - pull @ np.diff(lower)) / 2.0
    return Plastic(axis=axis, moment=float(moment))
