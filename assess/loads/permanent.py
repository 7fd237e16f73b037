"""A set of loads that stands still: point loads and uniform loads over part of a girder."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, kw_only=True)
class LoadCase:
    """Loads on a girder line, downward positive, x from the girder's left end.

    Parameters
    ----------
    points : tuple of (x in m, load in kN)
    uniforms : tuple of (start in m, end in m, load in kN/m)
    """

    points: tuple[tuple[float, float], ...] = ()
    uniforms: tuple[tuple[float, float, float], ...] = ()

    @property
    def total(self) -> float:
        """Sum of all loads, kN."""
        return sum(load for _, load in self.points) + sum(
            w * (end - start) for start, end, w in self.uniforms
        )
