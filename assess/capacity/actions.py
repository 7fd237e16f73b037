"""What acts on a girder line, and the effects of what does not move."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.loads import LoadCase, ModelLoad, Train

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class Dead:
    """Permanent loads of one kind that came on in one stage.

    Attributes
    ----------
    loads : LoadCase
    kind : one of `factors.KINDS`
    continuous : carried by the continuous girder; False: span by span, before the spans were joined
    """

    loads: LoadCase
    kind: str = "structure"
    continuous: bool = True


@dataclass(frozen=True, kw_only=True)
class Thermal:
    """A temperature case: a curvature the girder would take if it could, and seats that rise with warm piers.

    Attributes
    ----------
    curvatures : (start m, end m, 1/m) of every stretch that would bend, sagging positive
    drop : (n,) seat drops, m; a rise is negative
    """

    curvatures: tuple[tuple[float, float, float], ...]
    drop: Floats


@dataclass(frozen=True, kw_only=True)
class GirderLoads:
    """What a girder line carries: permanent loads, temperature; live loads with the live share in them.

    Attributes
    ----------
    dead : permanent loads by kind and stage
    trains : with the dynamic allowance in them
    models : published load models, each beside its allowance
    thermal : temperature cases, of which at most one acts at a time
    """

    dead: tuple[Dead, ...]
    trains: tuple[Train, ...] = ()
    models: tuple[ModelLoad, ...] = ()
    thermal: tuple[Thermal, ...] = ()


@dataclass(frozen=True, kw_only=True)
class Steady:
    """Unfactored effects that do not move.

    Attributes
    ----------
    dead : (kinds, ..., p) of the permanent loads, in the order of `kinds`
    kinds : their kinds
    settled : (..., p) what seat drops add
    hot, cold : (..., p) the largest and the smallest effect of any temperature case, no temperature being one
    """

    dead: Floats
    kinds: tuple[str, ...]
    settled: Floats
    hot: Floats
    cold: Floats

    @property
    def permanent(self) -> Floats:
        """Permanent effect (..., p): loads and settlements."""
        return np.asarray(self.dead.sum(axis=0) + self.settled)
