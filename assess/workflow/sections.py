"""A bridge file's sections as of a day: stiffness and resistance, given or from plates, measured losses taken off."""

from __future__ import annotations

import datetime as dt
import math
from collections.abc import Mapping
from dataclasses import dataclass

from assess.section import BuiltSection, Deck, Hole, Plate, resistance
from db.documents import BridgeDoc, DeckDoc, LossDoc, SectionDoc

STEEL_SHEAR_RATIO = 2.6  # E / G where G is not given: 2 (1 + nu) with nu 0.3
EFFECTS = ("sagging", "hogging", "shear")


@dataclass(frozen=True, kw_only=True)
class Capacity:
    """A resistance as the file means it (before the factor on resistance), and where it comes from.

    Attributes
    ----------
    value : kN m or kN; None where it is neither given nor determined by plates
    given, built : what the file gives, and what plates and yield strength give
    source : "given" | "plates" | "": the lower governs, the given one at a tie
    """

    value: float | None
    given: float | None
    built: float | None
    source: str


@dataclass(frozen=True, kw_only=True)
class SectionState:
    """One section on one day.

    Attributes
    ----------
    built : the section from plates with its losses; None without plates
    losses : the measurement of each plate that counts, by plate: all entries of its newest visit
    second_moment, shear_area : m4 and m2 of the stiffness; no shear area leaves shear flexibility out
    capacities : by effect
    """

    doc: SectionDoc
    built: BuiltSection | None
    losses: dict[str, tuple[LossDoc, ...]]
    second_moment: float
    shear_area: float | None
    capacities: Mapping[str, Capacity]

    @property
    def flexural(self) -> float:
        """EI, kN m2."""
        return self.doc.youngs_modulus * self.second_moment

    @property
    def shear(self) -> float:
        """GA, kN; infinite without a shear area."""
        if self.shear_area is None:
            return math.inf
        return (self.doc.shear_modulus or self.doc.youngs_modulus / STEEL_SHEAR_RATIO) * self.shear_area


def section_on(section: SectionDoc, day: dt.date | None) -> SectionState:
    """Resolve a section with the losses measured up to a day; None: all of them.

    A given second moment or shear area is the one as built: it wins over that of the plates, and losses reduce it in
    the ratio in which they reduce that of the plates. A given capacity stands as it is given.
    """
    losses = counting_losses(section, day)
    built = _built(section, losses)
    second, area = section.second_moment, section.shear_area
    if built is not None:
        new = built.as_built
        found = built.stiffness.second_moment
        second = found if second is None else second * (found / new.stiffness.second_moment)
        if area is None:
            area = built.shear_area or None
        elif new.shear_area > 0.0:
            area *= built.shear_area / new.shear_area
    assert second is not None  # the file's reader sees to it
    return SectionState(
        doc=section,
        built=built,
        losses=losses,
        second_moment=second,
        shear_area=area,
        capacities=_capacities(section, built),
    )


def depth_of(section: SectionDoc) -> float | None:
    """Depth of a section for temperature, m: given, or from its plates and deck as built; None for neither."""
    if section.depth is not None or not section.plates:
        return section.depth
    top = max(plate.bottom + plate.height for plate in section.plates)
    bottom = min(plate.bottom for plate in section.plates)
    deck = 0.0 if section.deck is None else section.deck.gap + section.deck.thickness
    return top + deck - bottom


def counting_losses(section: SectionDoc, day: dt.date | None) -> dict[str, tuple[LossDoc, ...]]:
    """For each plate the entries of the newest visit up to a day that measured it."""
    found: dict[str, tuple[LossDoc, ...]] = {}
    for plate in section.plates:
        own = [x for x in section.losses if x.plate == plate.name and (day is None or x.visit <= day)]
        if own:
            newest = max(x.visit for x in own)
            found[plate.name] = tuple(x for x in own if x.visit == newest)
    return found


def last_loss(bridge: BridgeDoc, day: dt.date | None) -> dt.date | None:
    """The newest day up to `day` on which any loss of a bridge was measured; None if there is none."""
    days = [x.visit for s in bridge.sections for x in s.losses if day is None or x.visit <= day]
    return max(days, default=None)


def used_sections(bridge: BridgeDoc) -> set[str]:
    """Ids of the sections that stand in a girder."""
    return {
        name
        for girder in bridge.girders
        for span in girder.spans
        for name in (span.section, *(piece.section for piece in span.pieces))
    }


def measured_days(state: SectionState) -> list[dt.date]:
    """The days of the losses that count."""
    return sorted({x.visit for entries in state.losses.values() for x in entries})


def _built(section: SectionDoc, losses: dict[str, tuple[LossDoc, ...]]) -> BuiltSection | None:
    if not section.plates:
        return None
    plates = tuple(
        Plate(
            name=plate.name,
            width=plate.width,
            height=plate.height,
            bottom=plate.bottom,
            yield_strength=plate.yield_strength,
            web=plate.web,
            loss=sum(x.faces * x.depth for x in losses.get(plate.name, ())),
        )
        for plate in section.plates
    )
    holes = tuple(
        Hole(plate=hole.plate, diameter=hole.diameter, count=hole.count, level=hole.level)
        for hole in section.holes
    )
    deck = None if section.deck is None else _deck(section.deck, max(plate.top for plate in plates))
    return BuiltSection(plates=plates, holes=holes, deck=deck)


def _deck(deck: DeckDoc, upper: float) -> Deck:
    return Deck(
        width=deck.width,
        thickness=deck.thickness,
        bottom=upper + deck.gap,
        modular_ratio=deck.modular_ratio,
        modular_ratio_long=deck.modular_ratio_long,
        strength=deck.strength,
    )


def _capacities(section: SectionDoc, built: BuiltSection | None) -> dict[str, Capacity]:
    given = (section.sagging_capacity, section.hogging_capacity, section.shear_capacity)
    from_plates: tuple[float | None, float | None, float | None] = (None, None, None)
    if built is not None:
        own = resistance(built, method=section.moment_resistance)
        from_plates = (own.sagging, own.hogging, own.shear)
    return {
        effect: _lower(one, other) for effect, one, other in zip(EFFECTS, given, from_plates, strict=True)
    }


def _lower(given: float | None, built: float | None) -> Capacity:
    if built is None or (given is not None and given <= built):
        return Capacity(value=given, given=given, built=built, source="" if given is None else "given")
    return Capacity(value=built, given=given, built=built, source="plates")
