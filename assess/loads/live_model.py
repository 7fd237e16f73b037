"""What a published live load model says: axles, moving and adverse uniform parts, alternatives."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from assess.loads.allowance import Allowance

Floats = NDArray[np.float64]

USES = (
    "sagging",
    "hogging",
    "hogging near supports",
    "shear",
    "reaction",
    "interior reaction",
    "deflection",
    "slope",
)
"""What an alternative may be kept for; one without uses counts for everything."""


@dataclass(frozen=True, kw_only=True)
class Block:
    """A uniform part that moves with the axles: from `start` to `end` behind the leading point.

    start, end in m, end inf for an unlimited part; intensity kN/m.
    """

    start: float
    end: float
    intensity: float


@dataclass(frozen=True, kw_only=True)
class Second:
    """A second group of axles behind the first.

    Attributes
    ----------
    axles : (distance behind its own leading axle in m, kN), ascending
    least, most : distance from the last axle of the first group to the leading axle of this one, m; most may be inf
    other_span : it stands in another span than the first group, at any distance (single axles only)
    """

    axles: tuple[tuple[float, float], ...]
    least: float = 0.0
    most: float = np.inf
    other_span: bool = False


@dataclass(frozen=True, kw_only=True)
class Alternative:
    """One of the arrangements of a model, of which the worst counts.

    Attributes
    ----------
    name : words for a report
    axles : (distance behind the leading axle in m, kN), ascending from 0; may be empty
    blocks : uniform parts that move with the axles
    second : a second group of axles, or None
    uniform : kN/m wherever it is adverse
    clear : m outside the end axles that stay free of the adverse uniform part; None: it may stand anywhere
    leave_out : whether an axle that relieves is left out
    uses : some of USES; empty for all
    uniform_allowance : whether the uniform parts take the dynamic allowance
    """

    name: str
    axles: tuple[tuple[float, float], ...] = ()
    blocks: tuple[Block, ...] = ()
    second: Second | None = None
    uniform: float = 0.0
    clear: float | None = None
    leave_out: bool = False
    uses: frozenset[str] = frozenset()
    uniform_allowance: bool = True

    def __post_init__(self) -> None:
        if not (self.axles or self.blocks or self.uniform):
            raise ValueError(f"{self.name}: no load in it")
        if self.second is not None and not self.axles:
            raise ValueError(f"{self.name}: a second group needs a first one")
        unknown = self.uses - set(USES)
        if unknown:
            raise ValueError(f"{self.name}: unknown use {sorted(unknown)[0]!r}")

    @property
    def second_other(self) -> bool:
        """Whether the second group stands in another span than the first."""
        return self.second is not None and self.second.other_span

    @property
    def length(self) -> float:
        """Distance from the first to the last axle of the first group, m."""
        return self.axles[-1][0] if self.axles else 0.0

    def scaled(self, factor: float) -> Alternative:
        """Return the same arrangement with every load multiplied."""
        second = self.second
        if second is not None:
            second = replace(second, axles=_times(second.axles, factor))
        return replace(
            self,
            axles=_times(self.axles, factor),
            blocks=tuple(replace(b, intensity=factor * b.intensity) for b in self.blocks),
            second=second,
            uniform=factor * self.uniform,
        )


@dataclass(frozen=True, kw_only=True)
class LiveModel:
    """A published live load on one track or lane, in m and kN.

    Attributes
    ----------
    name : how a bridge file names it
    title, source, basis, note : words for a report; basis is "track" or "lane"
    rule : how its dynamic allowance follows: one of `allowance.RULES`
    rule_value : the allowance itself, for the rule "constant"
    rule_source : document, edition and clause of the rule
    alternatives : arrangements, of which the worst counts
    module : m, the largest length of which all distances are whole multiples (inf: there are none)
    """

    name: str
    title: str
    source: str
    basis: str
    note: str
    rule: str
    rule_value: float
    rule_source: str
    alternatives: tuple[Alternative, ...]
    module: float

    def scaled(self, factor: float) -> LiveModel:
        """Return the same model with every load multiplied."""
        return replace(self, alternatives=tuple(a.scaled(factor) for a in self.alternatives))


@dataclass(frozen=True, kw_only=True)
class ModelLoad:
    """A live load model as a girder line carries it: the girder's share in its loads, and its allowance."""

    model: LiveModel
    allowance: Allowance


def _times(axles: Sequence[tuple[float, float]], factor: float) -> tuple[tuple[float, float], ...]:
    return tuple((offset, factor * load) for offset, load in axles)
