"""The parts of a `[[section]]` that is built from plates: plates, holes, losses, a deck."""

from __future__ import annotations

import datetime as dt
import itertools
from collections.abc import Sequence
from dataclasses import replace

from db.documents import BridgeDoc, DeckDoc, HoleDoc, LossDoc, PlateDoc, SectionDoc
from db.errors import BedstoneError
from db.exchange.fields import Fields
from db.wording import shown

PLATES = "plate hole loss deck yield_strength moment_resistance"
LARGEST_PLATE_M = 20.0
WEAKEST_KN_PER_M2, STRONGEST_KN_PER_M2 = 1e4, 2e6  # 10 to 2000 MPa
LARGEST_RATIO = 100.0
MOST_HOLES = 100
SLACK = 1.0 - 1e-9  # a loss or a hole of the whole plate, but for rounding, is one of the whole plate

_PLATE = "name width height bottom yield_strength web"
_HOLE = "plate diameter count level"
_LOSS = "plate faces depth visit"
_DECK = "width thickness modular_ratio modular_ratio_long gap strength"


def with_plates(section: SectionDoc, fields: Fields) -> SectionDoc:
    """Return the section with the plates of its table.

    Raises
    ------
    BedstoneError
        If anything in them is wrong; a loss that takes a whole plate names section, plate and visit.
    """
    if not fields.has("plate"):
        for name in PLATES.split():
            if fields.has(name):
                remedy = "add its plates with [[section.plate]], or leave this out"
                raise fields.error(name, "it belongs to plates, and the section has none", remedy)
        return section
    strength = _strength(fields, "yield_strength") if fields.has("yield_strength") else None
    plates = _plates(fields, strength)
    _check_strengths(section, plates, fields)
    by_name = {plate.name: plate for plate in plates}
    deck = _deck(fields.subtable("deck", _DECK, "width")) if fields.has("deck") else None
    method = fields.one_of("moment_resistance", ("elastic", "plastic"), "elastic")
    if method == "plastic" and deck is not None and deck.strength is None:
        remedy = 'add to [section.deck] the stress its concrete may carry, for example strength = "17 MPa"'
        raise fields.error(
            "moment_resistance", "a plastic moment with a deck needs the deck's strength", remedy
        )
    return replace(
        section,
        plates=plates,
        holes=_holes(fields, by_name),
        losses=_losses(fields, by_name),
        deck=deck,
        moment_resistance=method,
    )


def check_losses(bridge: BridgeDoc, *, today: dt.date, file: str) -> None:
    """Check that every loss was measured between the building of the bridge and today.

    Raises
    ------
    BedstoneError
        For the first that was not.
    """
    for section in bridge.sections:
        for loss in section.losses:
            where = f'section "{shown(section.id)}", loss of plate "{shown(loss.plate)}", visit'
            remedy = "write the day on which it was measured"
            if loss.visit > today:
                problem = f"{loss.visit} lies in the future (today is {today})"
                raise BedstoneError(problem, file=file, field=where, remedy=remedy)
            if bridge.built is not None and loss.visit < bridge.built:
                problem = f"{loss.visit} lies before the bridge was built ({bridge.built})"
                raise BedstoneError(problem, file=file, field=where, remedy=remedy)


# plates ------------------------------------------------------------------------------------------


def _plates(section: Fields, strength: float | None) -> tuple[PlateDoc, ...]:
    """The plates; those without `bottom` stand on each other in the order written, from top to bottom."""
    tables = section.tables("plate", "plate", _PLATE)
    if not tables:
        raise section.error(
            "plate", "there is no plate", "add a [[section.plate]] with name, width and height"
        )
    seen: dict[str, PlateDoc] = {}
    level = 0.0
    for fields in reversed(tables):
        plate = _plate(fields, section, strength, level)
        if plate.name in seen:
            raise fields.error(
                "name", "two plates of the section have this name", "give each plate its own name"
            )
        seen[plate.name] = plate
        if not fields.has("bottom"):
            level += plate.height
    return tuple(reversed(seen.values()))


def _plate(fields: Fields, section: Fields, strength: float | None, level: float) -> PlateDoc:
    name = fields.id("name")
    fields.path = section.where(f'plate "{shown(name)}"')
    web = fields.table.get("web")
    if web is not None and not isinstance(web, bool):
        raise fields.error(
            "web", f"{shown(web)} is neither true nor false", "write web = true or web = false"
        )
    own = _strength(fields, "yield_strength") if fields.has("yield_strength") else strength
    return PlateDoc(
        name=name,
        width=_size(fields, "width", "300 mm"),
        height=_size(fields, "height", "20 mm"),
        bottom=fields.si("bottom", "length", level, example="0 mm"),
        yield_strength=own,
        web=web,
    )


def _size(fields: Fields, name: str, example: str) -> float:
    value = fields.positive(name, "length", example=example)
    if value > LARGEST_PLATE_M:
        problem = f'"{shown(fields.table[name])}" is no size of a plate'
        raise fields.error(
            name, problem, f'check the unit (up to {LARGEST_PLATE_M:g} m), for example "{example}"'
        )
    return value


def _strength(fields: Fields, name: str) -> float:
    value = fields.positive(name, "stress", example="235 MPa")
    if not WEAKEST_KN_PER_M2 <= value <= STRONGEST_KN_PER_M2:
        problem = f'"{shown(fields.table[name])}" is no yield strength'
        raise fields.error(name, problem, 'check the unit (10 to 2000 MPa), for example "235 MPa"')
    return value


def _check_strengths(section: SectionDoc, plates: Sequence[PlateDoc], fields: Fields) -> None:
    without = [plate.name for plate in plates if plate.yield_strength is None]
    given = (section.sagging_capacity, section.hogging_capacity, section.shear_capacity)
    if without and len(without) < len(plates):
        where = f'plate "{shown(without[0])}", yield_strength'
        remedy = 'write yield_strength = "235 MPa" there or on the section'
        raise fields.error(where, "it is missing, and other plates of the section have one", remedy)
    if without and all(value is None for value in given):
        remedy = (
            'write yield_strength = "235 MPa", or give the capacities (sagging_capacity = "5100 kN m", ...)'
        )
        raise fields.error("yield_strength", "it is missing, and no capacity is given", remedy)


def _of_plate(fields: Fields, plates: dict[str, PlateDoc]) -> PlateDoc:
    return plates[fields.reference("plate", plates, "plate")]


# holes -------------------------------------------------------------------------------------------


def _holes(section: Fields, plates: dict[str, PlateDoc]) -> tuple[HoleDoc, ...]:
    tables = section.tables("hole", "hole", _HOLE)
    holes = tuple(_hole(fields, _of_plate(fields, plates)) for fields in tables)
    for plate in plates.values():
        own = [(hole, f) for hole, f in zip(holes, tables, strict=True) if hole.plate == plate.name]
        if _upright(plate):
            _refuse_overlap(own)
        elif own and sum(hole.count * hole.diameter for hole, _ in own) >= SLACK * plate.width:
            problem = f'the holes in plate "{shown(plate.name)}" together are as wide as the plate'
            raise own[-1][1].error("diameter", problem, "count the holes that lie in one cross-section")
    return holes


def _hole(fields: Fields, plate: PlateDoc) -> HoleDoc:
    diameter = fields.positive("diameter", "length", example="22 mm")
    count = fields.whole("count", 1, least=1, most=MOST_HOLES)
    if not _upright(plate):
        if fields.has("level"):
            raise fields.error(
                "level", "the plate lies flat, its holes go down through it", "leave level out"
            )
        return HoleDoc(plate=plate.name, diameter=diameter, count=count)
    if count != 1:
        remedy = "write one [[section.hole]] for each, with its own level"
        raise fields.error("count", "the plate stands, its holes lie at different levels", remedy)
    level = fields.si("level", "length", example="150 mm")
    if level - diameter / 2.0 < plate.bottom or level + diameter / 2.0 > plate.bottom + plate.height:
        problem = f'the hole reaches past plate "{shown(plate.name)}"'
        reach = f"{1e3 * plate.bottom:.6g} to {1e3 * (plate.bottom + plate.height):.6g} mm"
        remedy = f"write the level of its middle above the underside of the stack (plate: {reach})"
        raise fields.error("level", problem, remedy)
    return HoleDoc(plate=plate.name, diameter=diameter, level=level)


def _refuse_overlap(holes: list[tuple[HoleDoc, Fields]]) -> None:
    rising = sorted(holes, key=lambda pair: pair[0].level or 0.0)
    for (low, _), (high, fields) in itertools.pairwise(rising):
        if (high.level or 0.0) - (low.level or 0.0) < (high.diameter + low.diameter) / 2.0:
            raise fields.error("level", "it overlaps another hole of the plate", "write each hole once")


def _upright(plate: PlateDoc) -> bool:
    return plate.height > plate.width


# losses ------------------------------------------------------------------------------------------


def _losses(section: Fields, plates: dict[str, PlateDoc]) -> tuple[LossDoc, ...]:
    tables = section.tables("loss", "loss", _LOSS)
    losses = []
    for fields in tables:
        plate = _of_plate(fields, plates)
        fields.need("faces", "2")
        faces = fields.whole("faces", 0, least=1, most=2)
        depth = fields.positive("depth", "length", example="1.5 mm")
        losses.append(LossDoc(plate=plate.name, faces=faces, depth=depth, visit=_day(fields)))
        same = [one for one in losses if (one.plate, one.visit) == (plate.name, losses[-1].visit)]
        where = f'plate "{shown(plate.name)}", visit {losses[-1].visit}'
        if sum(one.faces for one in same) > 2:
            remedy = "write both faces in one entry (faces = 2) or one entry a face (faces = 1)"
            raise fields.error("faces", f"{where}: a plate has two faces, and more are written", remedy)
        lost, thick = sum(one.faces * one.depth for one in same), min(plate.width, plate.height)
        if lost >= SLACK * thick:
            problem = (
                f"{where}: a loss of {1e3 * lost:.4g} mm takes the whole plate, {1e3 * thick:.4g} mm thick"
            )
            remedy = "write the depth lost on each face since it was built; leave out a plate that is gone"
            raise fields.error("depth", problem, remedy)
    return tuple(losses)


def _day(fields: Fields) -> dt.date:
    """The day of the visit, as a date or, as visits are named elsewhere, as text."""
    value = fields.need("visit", "2024-05-14")
    if isinstance(value, str):
        try:
            return dt.datetime.strptime(value, "%Y-%m-%d").date()
        except ValueError as error:
            problem = f'"{shown(value)}" is not a date'
            raise fields.error("visit", problem, "write for example visit = 2024-05-14") from error
    day = fields.date("visit")
    assert day is not None
    return day


# deck --------------------------------------------------------------------------------------------


def _deck(fields: Fields) -> DeckDoc:
    short = _ratio(fields, "modular_ratio")
    lasting = _ratio(fields, "modular_ratio_long") if fields.has("modular_ratio_long") else short
    if lasting < short:
        remedy = "write the larger ratio for lasting load: concrete creeps"
        raise fields.error("modular_ratio_long", f"{lasting:g} is less than modular_ratio, {short:g}", remedy)
    gap = fields.si("gap", "length", 0.0, example="50 mm")
    if gap < 0.0:
        raise fields.error("gap", "it is negative", "write the height from the highest plate to the deck")
    strength = None
    if fields.has("strength"):
        strength = fields.positive("strength", "stress", example="17 MPa")
        if not 1e3 <= strength <= 2e5:
            problem = f'"{shown(fields.table["strength"])}" is no strength of concrete'
            raise fields.error("strength", problem, 'check the unit (1 to 200 MPa), for example "17 MPa"')
    return DeckDoc(
        width=fields.positive("width", "length", example="2.4 m"),
        thickness=fields.positive("thickness", "length", example="220 mm"),
        modular_ratio=short,
        modular_ratio_long=lasting,
        gap=gap,
        strength=strength,
    )


def _ratio(fields: Fields, name: str) -> float:
    value = fields.number(name, over=0.0)
    if value > LARGEST_RATIO:
        remedy = "write E of the girder over E of the concrete, for example 6.5"
        raise fields.error(name, f"{value:g} is no modular ratio", remedy)
    return value
