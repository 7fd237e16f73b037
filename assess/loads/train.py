"""A row of axles that moves over the girder."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Train:
    """Axles behind a leading axle.

    Parameters
    ----------
    offsets : (axles,) distance behind the leading axle, m; ascending, the first is 0
    loads : (axles,) axle load, kN
    """

    offsets: Floats
    loads: Floats

    def __post_init__(self) -> None:
        offsets = np.asarray(self.offsets, dtype=np.float64)
        loads = np.asarray(self.loads, dtype=np.float64)
        if offsets.ndim != 1 or offsets.shape != loads.shape or offsets.size == 0:
            raise ValueError("a train needs one load for every axle and at least one axle")
        order = np.argsort(offsets, kind="stable")
        offsets, loads = offsets[order] - offsets[order[0]], loads[order]
        offsets.setflags(write=False)
        loads.setflags(write=False)
        object.__setattr__(self, "offsets", offsets)
        object.__setattr__(self, "loads", loads)

    @property
    def length(self) -> float:
        """Distance from the first to the last axle, m."""
        return float(self.offsets[-1])

    def coupled(self, count: int, pitch: float) -> Train:
        """Return `count` of these one behind the other, leading axles `pitch` metres apart."""
        starts = pitch * np.arange(count)
        return Train((starts[:, None] + self.offsets).ravel(), np.tile(self.loads, count))

    def scaled(self, factor: float) -> Train:
        """Return the same axles with their loads multiplied."""
        return Train(self.offsets, self.loads * factor)

    def reversed(self) -> Train:
        """Return the train as it stands when it runs the other way, seen from its left-most axle."""
        return Train(self.length - self.offsets[::-1], self.loads[::-1])

    def axle_positions(self, leading: Floats) -> Floats:
        """Return x of every axle, (..., axles), for leading axles at `leading` (...)."""
        return np.asarray(leading)[..., None] - self.offsets

    def is_symmetric(self) -> bool:
        """Tell whether it is the same train either way round."""
        other = self.reversed()
        return bool(np.allclose(other.offsets, self.offsets) and np.allclose(other.loads, self.loads))
