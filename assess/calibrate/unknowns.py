"""What is unknown of a girder line, and where each unknown stands in theta."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

NUISANCE = ("as built", "seats", "shared")
"""Blocks that no one asks for: the pads at the datum, seats read in test states, errors that readings share."""


@dataclass(frozen=True, kw_only=True)
class Unknowns:
    """What is estimated beside the pads' short-term ln k.

    Parameters
    ----------
    sustained : ln of the sustained over the short-term stiffness, one for the girder
    settlements : supports whose seat drop since the datum is unknown, m
    girder : ln of the factor phi on the girder's stiffness
    datum : shift at the middle of the girder and tilt (right end less left end) of the levels' datum, m
    share : for every load state the vehicle whose ln load share it takes, -1 for none; empty: none is unknown
    gradient : curvatures (start m, end m, 1/m) of a temperature difference of 1 K; empty: it is not unknown. One
        difference for the test states (loaded less unloaded), one for the permanent state, in K
    """

    sustained: bool = False
    settlements: tuple[int, ...] = ()
    girder: bool = False
    datum: bool = False
    share: tuple[int, ...] = ()
    gradient: tuple[tuple[float, float, float], ...] = ()


@dataclass(frozen=True, kw_only=True)
class Entry:
    """One unknown: its block, and the support, vehicle or place in the block it belongs to."""

    block: str
    index: int


class Layout:
    """The unknowns in order.

    Attributes
    ----------
    entries : one for each element of theta
    size : number of unknowns
    """

    def __init__(self, entries: Iterator[Entry]) -> None:
        self.entries = tuple(entries)
        self.size = len(self.entries)
        self._slices: dict[str, slice] = {}
        for j, entry in enumerate(self.entries):
            begun = self._slices.get(entry.block)
            self._slices[entry.block] = slice(j if begun is None else begun.start, j + 1)

    def __contains__(self, block: str) -> bool:
        return block in self._slices

    def of(self, block: str) -> slice:
        """Where a block stands in theta; an empty slice where it is not unknown."""
        return self._slices.get(block, slice(0, 0))

    def places(self, block: str) -> range:
        """Indices in theta of a block."""
        found = self.of(block)
        return range(found.start, found.stop)
