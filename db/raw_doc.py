"""What a reading was reduced from, and the benchmarks that levels share, in SI."""

from __future__ import annotations

from dataclasses import dataclass

CORNERS = ("near left", "near right", "far left", "far right")
"""The order of four gaps: near is towards x = 0, left is left when looking towards larger x."""


@dataclass(frozen=True, kw_only=True)
class RawDoc:
    """Readings as taken, in the SI unit of the quantity; gaps in m, whatever was made of them.

    Either `repeats` (one or more, with or without zeros) or `gaps` and `gaps_before` are there.
    """

    sd: float  # of one reading or of one gap, as given
    sd_entered: str = ""  # the same as written, e.g. "0.05 mm"
    repeats: tuple[float, ...] = ()
    zero_before: tuple[float, ...] = ()  # unloaded, before
    zero_after: tuple[float, ...] = ()  # unloaded, after
    gaps: tuple[float, ...] = ()  # m, in the order of CORNERS
    gaps_before: tuple[float, ...] = ()  # m, unloaded; in the permanent state as built
    gaps_after: tuple[float, ...] = ()  # m, unloaded again
    corner_spacing: float | None = None  # m, near to far
    repeatability: float | None = None  # sd of one reading pooled over the visit; None: not told
    drift: float | None = None  # zero after minus zero before, in the unit of the reduced value
    twist: float | None = None  # m, what the closures of four corners leave of a plane
    twist_sd: float | None = None  # m


@dataclass(frozen=True, kw_only=True)
class BenchmarkDoc:
    """A benchmark of a visit: readings of one state that are levelled from it share its error."""

    id: str
    sd: float  # m
