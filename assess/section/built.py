"""A section built from plates: its elastic and plastic properties, and its resistance by sign of the moment."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from assess.section.plastic import Blocks, Plastic, plastic
from assess.section.plate import Deck, Hole, Plate

SAGGING, HOGGING = "sagging", "hogging"


@dataclass(frozen=True, kw_only=True)
class Elastic:
    """Elastic properties in terms of steel: m2, m (above the datum), m4."""

    area: float
    centroid: float
    second_moment: float


@dataclass(frozen=True, kw_only=True)
class BuiltSection:
    """A section from plates that act together, their losses taken off.

    Nothing is asked about what stands beside what: plates at the same level add up. Local and lateral-torsional
    buckling, shear buckling and the connection of the plates are not looked at.

    Parameters
    ----------
    plates : tuple of Plate
        The steel, in any order; each name once.
    holes : tuple of Hole
        Left out of the strength (a net section for either sign, common practice, no source) and not out of the
        stiffness, which a hole here and there does not change.
    deck : Deck, optional
        Acts in sagging and in the stiffness; in hogging it is taken as cracked through.

    Raises
    ------
    ValueError
        If there is no plate, a name comes twice, or a hole has no plate or lies outside of it.
    """

    plates: tuple[Plate, ...]
    holes: tuple[Hole, ...] = ()
    deck: Deck | None = None

    def __post_init__(self) -> None:
        names = [plate.name for plate in self.plates]
        if not names or len(set(names)) < len(names):
            raise ValueError("a section needs plates, each with its own name")
        unknown = {hole.plate for hole in self.holes} - set(names)
        if unknown:
            raise ValueError(f"holes in plates that are not there: {sorted(unknown)}")
        _ = self._cuts

    @cached_property
    def steel(self) -> tuple[Plate, ...]:
        """The plates, losses taken off."""
        return tuple(plate.worn for plate in self.plates)

    @cached_property
    def _cuts(self) -> tuple[Plate, ...]:
        by_name = {plate.name: plate for plate in self.steel}
        return tuple(hole.cut_from(by_name[hole.plate]) for hole in self.holes)

    @property
    def as_built(self) -> BuiltSection:
        """The same section without its losses."""
        return replace(self, plates=tuple(replace(plate, loss=0.0) for plate in self.plates))

    @property
    def lower(self) -> float:
        """Level of the lowest steel, m."""
        return min(plate.bottom for plate in self.steel)

    @property
    def upper(self) -> float:
        """Level of the highest steel, m."""
        return max(plate.top for plate in self.steel)

    # elastic ---------------------------------------------------------------------------------

    @cached_property
    def stiffness(self) -> Elastic:
        """Without holes, with the deck under short load: what bends the girder."""
        return _elastic([*self.steel, *self._deck()], [])

    def strength(self, sign: str, *, lasting: bool = False) -> Elastic:
        """With holes; with the deck in sagging alone, under short or lasting load: what the stresses follow."""
        deck = self._deck(lasting=lasting) if sign == SAGGING else []
        return _elastic([*self.steel, *deck], self._cuts)

    def elastic_modulus(self, edge: str) -> float:
        """Second moment over distance of the "top" or "bottom" edge of the steel, m3, of `strength` in sagging."""
        section = self.strength(SAGGING)
        far = self.upper if edge == "top" else self.lower
        return section.second_moment / abs(far - section.centroid)

    def yield_moment(self, sign: str) -> float | None:
        """Moment at which the first fibre of any plate reaches its strength, kN m; None where one is not known.

        With a deck in sagging it is the lower of short and lasting load; the deck's own strength counts if given.
        """
        if not self._known:
            return None
        lasting = (False, True) if sign == SAGGING and self.deck is not None else (False,)
        return min(self._first_yield(sign, one) for one in lasting)

    def _first_yield(self, sign: str, lasting: bool) -> float:
        section = self.strength(sign, lasting=lasting)
        moments = [section.second_moment * plate.yield_strength / _reach(plate, section.centroid)
                   for plate in self.steel if plate.yield_strength is not None]  # fmt: skip
        for deck in self._deck(lasting=lasting) if sign == SAGGING else []:
            far = deck.top - section.centroid
            if deck.yield_strength is not None and far > 0.0:
                moments.append(section.second_moment * deck.modular_ratio * deck.yield_strength / far)
        return min(moments)

    @property
    def axis_in_deck(self) -> bool:
        """Whether the elastic axis lies in the deck, so that part of the concrete would be pulled."""
        return self.deck is not None and self.strength(SAGGING).centroid > self.deck.bottom

    # plastic ---------------------------------------------------------------------------------

    @cached_property
    def equal_area(self) -> Plastic:
        """Equal-area axis (m) and plastic modulus (m3) of the steel alone, net of holes."""
        return plastic(_blocks(self.steel, self._cuts, [1.0] * (len(self.steel) + len(self._cuts))))

    def plastic(self, sign: str) -> Plastic | None:
        """Equal-force axis and plastic moment; None where a strength is not known.

        A deck in sagging is compressed to its strength and carries no tension.
        """
        deck = self._deck() if sign == SAGGING else []
        if not self._known or any(plate.yield_strength is None for plate in deck):
            return None
        blocks = _blocks(
            self.steel, self._cuts, [p.yield_strength or 0.0 for p in (*self.steel, *self._cuts)]
        )
        for plate in deck:
            force = plate.width * (plate.yield_strength or 0.0)
            blocks = Blocks(
                bottom=np.append(blocks.bottom, plate.bottom),
                top=np.append(blocks.top, plate.top),
                compression=np.append(blocks.compression, force),
                tension=np.append(blocks.tension, 0.0),
            )
        return plastic(blocks)

    # shear -----------------------------------------------------------------------------------

    @property
    def webs(self) -> tuple[Plate, ...]:
        """The plates that carry the shear: those that stand, unless they say otherwise."""
        return tuple(plate for plate in self.steel if plate.carries_shear)

    @property
    def shear_area(self) -> float:
        """Area of the webs without holes, m2; 0 where nothing stands."""
        return sum(plate.width * plate.height for plate in self.webs)

    @property
    def shear_resistance(self) -> float | None:
        """Strength over sqrt(3) times the net area of each web, kN; None without webs or strengths.

        Source: EN 1993-1-1:2005 6.2.6 (2), with the webs' full depth, eta = 1 and no partial factor; from memory.
        Shear buckling is not looked at.
        """
        if not self.webs or any(plate.yield_strength is None for plate in self.webs):
            return None
        cuts = [cut for cut in self._cuts if cut.carries_shear]
        force = sum(p.width * p.height * (p.yield_strength or 0.0) for p in self.webs)
        force -= sum(c.width * c.height * (c.yield_strength or 0.0) for c in cuts)
        return force / math.sqrt(3.0)

    # -------------------------------------------------------------------------------------------

    @property
    def _known(self) -> bool:
        return all(plate.yield_strength is not None for plate in self.steel)

    def _deck(self, *, lasting: bool = False) -> list[Plate]:
        return [] if self.deck is None else [self.deck.plate(lasting=lasting)]


def _elastic(plates: Sequence[Plate], cuts: Sequence[Plate]) -> Elastic:
    """Sums over rectangles and the parallel-axis theorem."""
    signed = [(1.0, p) for p in plates] + [(-1.0, p) for p in cuts]
    area = np.array([s * p.width * p.height / p.modular_ratio for s, p in signed])
    middle = np.array([p.bottom + p.height / 2.0 for _, p in signed])
    height = np.array([p.height for _, p in signed])
    whole = float(area.sum())
    centroid = float(area @ middle) / whole
    second = float(area @ (height**2 / 12.0 + (middle - centroid) ** 2))
    return Elastic(area=whole, centroid=centroid, second_moment=second)


def _reach(plate: Plate, level: float) -> float:
    return max(abs(plate.top - level), abs(plate.bottom - level))


def _blocks(plates: Sequence[Plate], cuts: Sequence[Plate], strength: Sequence[float]) -> Blocks:
    every = [*plates, *cuts]
    sign = np.array([1.0] * len(plates) + [-1.0] * len(cuts))
    force = sign * np.array([p.width for p in every]) * np.array(strength)
    return Blocks(
        bottom=np.array([p.bottom for p in every]),
        top=np.array([p.top for p in every]),
        compression=force,
        tension=force,
    )
