"""Short ways to say a girder, for tests against printed values."""

from __future__ import annotations

from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from assess.girder import Condensed, Girder, Piece, forces_of, places
from assess.loads import LoadCase

Floats = NDArray[np.float64]
DATA = Path(__file__).parent / "data"


class Solved:
    """A girder of prismatic spans under one load case."""

    def __init__(
        self,
        lengths: list[float],
        stiffness: list[float],
        loads: LoadCase,
        *,
        compliance: list[float] | None = None,
        settlement: list[float] | None = None,
        clamped_left: bool = False,
    ) -> None:
        spans = zip(lengths, stiffness, strict=True)
        n = len(lengths) + 1
        rotation = np.zeros(n)
        rotation[0] = np.inf if clamped_left else 0.0
        self.girder = Girder(tuple((Piece(length=a, flexural=b),) for a, b in spans), rotation)
        self.condensed = Condensed(self.girder)
        self.loads = loads
        f = np.zeros(n) if compliance is None else np.array(compliance)
        drop = np.zeros(n) if settlement is None else np.array(settlement)
        self.state = self.condensed.solve(f, forces_of(self.condensed, loads), drop)

    @property
    def reactions(self) -> Floats:
        return self.state.reaction

    def at(self, quantity: str, x: float | Floats, side: int = 1) -> Floats:
        place = places(self.condensed, quantity, np.atleast_1d(x), side)
        return place.held(self.loads) + place.rows @ self.state.displacement


def half_unit(printed: str) -> float:
    """Half a unit of the last printed place: what rounding alone can do."""
    decimals = len(printed.partition(".")[2])
    return 0.5 * 10.0**-decimals * (1.0 + 1e-9) + 1e-12
