"""What a girder line is, to the mechanics: prismatic pieces in spans, over supports."""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

REACH = 1e-11  # of a length: within this of a support or a place x stands on it, so rounding picks no face


@dataclass(frozen=True, kw_only=True)
class Piece:
    """A prismatic piece: length m, EI kN m2, GA kN (inf: no shear flexibility)."""

    length: float
    flexural: float
    shear: float = np.inf

    def __post_init__(self) -> None:
        if not (np.isfinite(self.length) and self.length > 0.0):
            raise ValueError(f"a piece needs a positive length, not {self.length} m")
        if not (np.isfinite(self.flexural) and self.flexural > 0.0):
            raise ValueError(f"a piece needs a positive EI, not {self.flexural} kN m2")
        if not self.shear > 0.0:
            raise ValueError(f"a piece needs a positive GA, not {self.shear} kN")


@dataclass(frozen=True)
class Girder:
    """A girder line: continuous, but for the internal hinges in it.

    Parameters
    ----------
    spans : tuple of tuples of Piece, from left to right; n - 1 spans stand on n supports
    rotation : (n,) rotational restraint of the supports, kN m/rad; 0 free (the default), inf fixed
    hinges : x of the internal hinges (half-joints, ends of suspended spans), m; each at an end of a piece inside a span

    Notes
    -----
    Supports and hinges are the nodes of the girder, and what lies between two of them is a segment: a whole span
    where there is no hinge.
    """

    spans: tuple[tuple[Piece, ...], ...]
    rotation: Floats = field(default_factory=lambda: np.zeros(0))
    hinges: tuple[float, ...] = ()

    def __post_init__(self) -> None:
        if not self.spans or any(not pieces for pieces in self.spans):
            raise ValueError("a girder needs at least one span and every span at least one piece")
        rotation = np.asarray(self.rotation, dtype=np.float64)
        if rotation.size == 0:
            rotation = np.zeros(self.n_supports)
        if rotation.shape != (self.n_supports,) or not np.all(rotation >= 0.0):
            raise ValueError(f"rotation needs one value of at least 0 for each of {self.n_supports} supports")
        rotation.setflags(write=False)
        object.__setattr__(self, "rotation", rotation)
        if self.hinges:
            object.__setattr__(self, "hinges", self._on_piece_ends())

    def _on_piece_ends(self) -> tuple[float, ...]:
        """Hinges, each exactly on its end of a piece."""
        ends = self.breakpoints
        at = [int(np.abs(ends - x).argmin()) for x in sorted(self.hinges)]
        for i, x in zip(at, sorted(self.hinges), strict=True):
            if not abs(ends[i] - x) <= REACH * ends[-1]:
                raise ValueError(f"no piece ends at the hinge at {x:g} m")
            if i in self._support_breaks:
                raise ValueError(f"the hinge at {x:g} m stands on a support")
        if len(set(at)) < len(at):
            raise ValueError("two hinges stand on one place")
        return tuple(float(ends[i]) for i in at)

    @property
    def _support_breaks(self) -> list[int]:
        """Index of each support among the breakpoints."""
        return [0, *(int(i) for i in np.cumsum([len(pieces) for pieces in self.spans]))]

    @property
    def n_supports(self) -> int:
        """Number of supports."""
        return len(self.spans) + 1

    @property
    def span_lengths(self) -> Floats:
        """Span lengths, (spans,), m."""
        return np.array([sum(piece.length for piece in pieces) for pieces in self.spans])

    @property
    def support_positions(self) -> Floats:
        """x of the supports, (n_supports,), m."""
        return np.asarray(self.breakpoints[self._support_breaks])

    @property
    def nodes(self) -> Floats:
        """x of the supports and hinges, ascending, (segments + 1,), m."""
        return np.sort(np.concatenate([self.support_positions, self.hinges]))

    @property
    def segments(self) -> tuple[tuple[Piece, ...], ...]:
        """The pieces from node to node."""
        if not self.hinges:
            return self.spans
        pieces = [piece for span in self.spans for piece in span]
        ends = np.searchsorted(self.breakpoints, self.nodes)
        return tuple(tuple(pieces[a:b]) for a, b in pairwise(ends))

    @property
    def length(self) -> float:
        """Length from first to last support, m."""
        return float(self.breakpoints[-1])

    @property
    def breakpoints(self) -> Floats:
        """x of every end of a piece, ascending, supports included, m."""
        ends = np.cumsum([piece.length for pieces in self.spans for piece in pieces])
        return np.concatenate([[0.0], ends])
