"""What a girder line is, to the mechanics: prismatic pieces in spans, over supports."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]


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
    """A continuous girder line.

    Parameters
    ----------
    spans : tuple of tuples of Piece, from left to right; n - 1 spans stand on n supports
    rotation : (n,) rotational restraint of the supports, kN m/rad; 0 free (the default), inf fixed
    """

    spans: tuple[tuple[Piece, ...], ...]
    rotation: Floats = field(default_factory=lambda: np.zeros(0))

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
        last = np.cumsum([len(pieces) for pieces in self.spans])
        return np.asarray(self.breakpoints[np.concatenate([[0], last])])

    @property
    def length(self) -> float:
        """Length from first to last support, m."""
        return float(self.breakpoints[-1])

    @property
    def breakpoints(self) -> Floats:
        """x of every end of a piece, ascending, supports included, m."""
        ends = np.cumsum([piece.length for pieces in self.spans for piece in pieces])
        return np.concatenate([[0.0], ends])
