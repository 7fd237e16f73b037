"""What `bedstone shim` says."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field


@dataclass(frozen=True, kw_only=True)
class ShimHeight:
    """Packing under one support, counted from the lowest support up."""

    support: str
    value: float  # mm


@dataclass(frozen=True, kw_only=True)
class Jack:
    """One support raised in a stage.

    Attributes
    ----------
    lift_mm, packing_mm : packing added in the stage, and in all after it
    rise_mm : how far the girder rises over the support, its pad unloading with it
    load_kN : calculated reaction on the jacks
    capacity_kN : that times the allowance: what the jacks have to be good for
    """

    support: str
    lift_mm: float
    packing_mm: float
    rise_mm: float
    load_kN: float
    capacity_kN: float


@dataclass(frozen=True, kw_only=True)
class JackingStage:
    """One stage: all its supports rise together, live load off the bridge.

    Attributes
    ----------
    differential_mm : greatest difference of packing added between neighbours
    girder_differential_mm : greatest difference of the girder's own rise between neighbours
    worst_utilisation : under factored permanent load, on the jacks
    lifts : supports without jacks that the girder is off meanwhile
    """

    stage: int
    jacks: list[Jack]
    differential_mm: float
    girder_differential_mm: float
    worst_utilisation: float
    lifts: list[str]


@dataclass(frozen=True, kw_only=True)
class ShimSection:
    """One section side by side: doing nothing, shimming, replacing the pads; utilisations."""

    effect: str
    span: int | None
    support: str | None
    nothing: float | None
    shimmed: float | None
    replaced: float | None


@dataclass(frozen=True, kw_only=True)
class ShimReaction:
    """Permanent support reactions side by side, kN."""

    support: str
    nothing_kN: float
    shimmed_kN: float
    replaced_kN: float


@dataclass(frozen=True, kw_only=True)
class GirderShims:
    """Packing of one girder line.

    Attributes
    ----------
    shims_mm : of every support; empty where none could be determined, with the reason in `not_determined`
    worst_utilisation_replaced : with all pads at their nominal stiffness, seats as they are
    worst_utilisation_unrounded : the least that packing of any thickness could give; None where live load lifts the
        girder, which is then no linear matter
    """

    girder: str
    shims_mm: list[ShimHeight]
    worst_utilisation_before: float | None
    worst_utilisation_after: float | None
    worst_utilisation_replaced: float | None
    worst_utilisation_unrounded: float | None
    stages: list[JackingStage]
    sections: list[ShimSection]
    reactions: list[ShimReaction]
    not_determined: str | None = None


@dataclass(frozen=True, kw_only=True)
class ShimResult:
    """`shim --json`."""

    bridge: str
    calibration_visit: dt.date | None
    version: str
    input_digest: str
    step_mm: float
    lift_max_mm: float
    differential_mm: float
    jack_allowance: float
    girders: list[GirderShims]
    cautions: list[str] = field(default_factory=list)
