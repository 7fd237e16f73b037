"""Influence lines as what they are: cubics between the ends of pieces, at one of which every hinge stands.

The support forces and the segment-end state under a unit load at a, supports held level, are cubic in a inside every
prismatic piece. Four places in a piece tell the cubic; its running integral is a quartic. An influence line of a place
that the condensed girder does not carry locally is a combination of these, with or without yielding supports.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from assess.girder.condensed import Condensed

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

_AT = (1.0 - np.cos(np.pi * (np.arange(4) + 0.5) / 4.0)) / 2.0  # Chebyshev's places in a piece
_TO_POWERS = np.linalg.inv(np.vander(_AT, increasing=True))
_INTEGRAL = 1.0 / np.arange(1.0, 5.0)


class Cubics:
    """Unit-load cubics of a girder, in powers of the share t of a piece (0 to 1).

    Attributes
    ----------
    breaks : (pieces + 1,) m
    lengths : (pieces,) m
    forces : (pieces, 4, n) support forces
    ends : (pieces, 4, segments, c) segment-end state
    """

    def __init__(self, condensed: Condensed) -> None:
        self.breaks = condensed.girder.breakpoints
        self.lengths = np.diff(self.breaks)
        at = self.breaks[:-1, None] + self.lengths[:, None] * _AT
        self.forces: Floats = np.einsum("kt,jtn->jkn", _TO_POWERS, condensed.unit_forces(at))
        self.ends: Floats = np.einsum("kt,jtsi->jksi", _TO_POWERS, condensed.unit_ends(at))
        self._running = self.running(np.moveaxis(self.forces, 2, 0))  # (n, pieces)
        self._tolerance = condensed.tolerance

    def locate(self, a: Floats) -> tuple[Ints, Floats, NDArray[np.bool_]]:
        """Piece, share of the piece (clipped to it) and whether it is on the girder, for loads at a (...)."""
        piece = np.clip(np.searchsorted(self.breaks, a, side="right") - 1, 0, self.lengths.size - 1)
        share = np.clip((a - self.breaks[piece]) / self.lengths[piece], 0.0, 1.0)
        on = (a >= self.breaks[0] - self._tolerance) & (a <= self.breaks[-1] + self._tolerance)
        return piece, share, on

    def running(self, cubics: Floats) -> Floats:
        """Integral of cubics (..., pieces, 4) from the left end to the start of each piece, (..., pieces)."""
        whole = np.cumsum(self.lengths * (cubics @ _INTEGRAL), axis=-1)
        return np.concatenate([np.zeros((*whole.shape[:-1], 1)), whole[..., :-1]], axis=-1)

    def forces_at(self, a: Floats) -> Floats:
        """Support forces (..., n) under a unit load at a (...); 0 off the girder."""
        piece, share, on = self.locate(a)
        powers = share[..., None] ** np.arange(4) * on[..., None]
        return np.asarray(np.einsum("...k,...kn->...n", powers, self.forces[piece]))

    def forces_over(self, a: Floats) -> Floats:
        """Support forces (..., n) under a uniform load of 1 from the left end to a (...), m."""
        piece, share, _ = self.locate(a)
        powers = share[..., None] ** np.arange(1, 5) * _INTEGRAL * self.lengths[piece][..., None]
        inside = np.einsum("...k,...kn->...n", powers, self.forces[piece])
        return np.asarray(self._running.T[piece] + inside)
