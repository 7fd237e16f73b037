"""The `[[girder]]` tables of a bridge file: spans with pieces and hinges, supports, permanent loads."""

from __future__ import annotations

import math
from dataclasses import replace

from db.documents import (
    PERMANENT_KINDS,
    STAGES,
    GirderDoc,
    PermanentDoc,
    PieceDoc,
    SpanDoc,
    SupportDoc,
)
from db.errors import BedstoneError
from db.exchange.fields import Fields, refuse_duplicates
from db.exchange.gauges_toml import gauges
from db.exchange.hinges_toml import hinges, refuse_mechanism
from db.exchange.pad_toml import PAD, pad, refuse_idle
from db.exchange.prior_toml import unknowns
from db.pad_doc import PadDoc
from db.wording import shown

GIRDER = "id live_share span support permanent unknowns gauge"
SLACK_M = 1e-9
"""How far a piece may reach past its span or its neighbour: rounding, not meaning."""

LONGEST_SPAN_M = 1000.0
SHORTEST_SPAN_M = 0.1
LARGEST_SHARE = 10.0
LARGEST_CV = 3.0
DEFAULT_CV = 0.3
LARGEST_COEFFICIENT = 0.2  # 1/K

_SPAN = "length section piece hinges"
_PIECE = "start end section"
_SUPPORT = "id kind stiffness stiffness_cv rotation temperature_coefficient hold_down pad"
_PERMANENT = "name uniform start end point at kind stage"


def girder(fields: Fields, sections: list[str]) -> GirderDoc:
    """Return one girder line from its table.

    Raises
    ------
    BedstoneError
        If anything in it is wrong.
    """
    name = fields.id("id")
    share = fields.number("live_share", over=0.0)
    if share > LARGEST_SHARE:
        remedy = "write the share of one track or lane that this girder carries, for example 0.5"
        raise fields.error("live_share", f"{share:g} is no share", remedy)
    tables = fields.tables("span", "span", _SPAN)
    spans = tuple(_span(f, sections) for f in tables)
    if not spans:
        raise fields.error("span", "there is no span", "add a [[girder.span]] with length and section")
    supports = _supports(fields, len(spans))
    refuse_mechanism(tables, spans, supports)
    length = sum(span.length for span in spans)
    permanent = tuple(_permanent(f, length) for f in fields.tables("permanent", "permanent", _PERMANENT))
    made = GirderDoc(
        id=name,
        live_share=share,
        spans=spans,
        supports=supports,
        permanent=permanent,
        unknowns=unknowns(fields, "unknowns") if fields.has("unknowns") else None,
    )
    return replace(made, gauges=gauges(fields, supports, length=length, hinges=made.hinges))


def _span(fields: Fields, sections: list[str]) -> SpanDoc:
    length = fields.positive("length", "length")
    if not SHORTEST_SPAN_M <= length <= LONGEST_SPAN_M:
        problem = f'"{shown(fields.table["length"])}" is no length of a span'
        remedy = f'check the unit ({SHORTEST_SPAN_M:g} to {LONGEST_SPAN_M:g} m), for example "18 m"'
        raise fields.error("length", problem, remedy)
    section = fields.reference("section", sections, "section")
    tables = fields.tables("piece", "piece", _PIECE)
    pieces = sorted(((_piece(f, length, sections), f) for f in tables), key=lambda pair: pair[0].start)
    kept: list[PieceDoc] = []
    for piece, where in pieces:
        end = kept[-1].end if kept else 0.0
        if piece.start < end - SLACK_M:
            problem = f"it starts at {piece.start:g} m, where another piece reaches to {end:g} m"
            raise where.error("start", problem, "let the pieces of a span not overlap")
        kept.append(PieceDoc(start=max(piece.start, end), end=piece.end, section=piece.section))
    return SpanDoc(length=length, section=section, pieces=tuple(kept), hinges=hinges(fields, length))


def _piece(fields: Fields, length: float, sections: list[str]) -> PieceDoc:
    start, end = _stretch(fields, length, "span", "9.5 m", "12 m")
    return PieceDoc(start=start, end=end, section=fields.reference("section", sections, "section"))


def _stretch(fields: Fields, length: float, of: str, start: str, end: str) -> tuple[float, float]:
    """Return start and end of a part of a span or girder, both inside it."""
    for name, example in (("start", start), ("end", end)):
        x = fields.si(name, "length", example=example)
        if not -SLACK_M <= x <= length + SLACK_M:
            problem = f'"{shown(fields.table[name])}" lies outside the {of} (0 to {length:g} m)'
            raise fields.error(name, problem, f"write a place between 0 and {length:g} m")
    first = max(0.0, fields.si("start", "length"))
    last = min(length, fields.si("end", "length"))
    if not last - first > SLACK_M:
        raise fields.error("end", f"it does not lie past the start ({first:g} m)", "let start be before end")
    return first, last


def _supports(fields: Fields, spans: int) -> tuple[SupportDoc, ...]:
    tables = fields.tables("support", "support", _SUPPORT, by_number=True)
    supports = tuple(_support(f) for f in tables)
    if len(supports) != spans + 1:
        plural = "span stands" if spans == 1 else "spans stand"
        problem = f"there are {len(supports)}, but {spans} {plural} on {spans + 1}"
        raise fields.error("support", problem, f"write {spans + 1} tables [[girder.support]], left to right")
    refuse_duplicates(((f, s.id) for f, s in zip(tables, supports, strict=True)), "support")
    return supports


def _support(fields: Fields) -> SupportDoc:
    name = fields.id("id")
    kind = fields.one_of("kind", ("pad", "pin"))
    rotation = _rotation(fields)
    hold_down = _hold_down(fields, rotation)
    if kind == "pin":
        for field in ("stiffness", "stiffness_cv", "temperature_coefficient", "pad"):
            if fields.has(field):
                remedy = 'leave it out, or write kind = "pad"'
                raise fields.error(field, "a pin holds its level and has none", remedy)
        return SupportDoc(id=name, kind=kind, rotation=rotation, hold_down=hold_down)
    geometry = _geometry(fields)
    by_geometry = geometry is not None and not fields.has("stiffness")
    return SupportDoc(
        id=name,
        kind=kind,
        stiffness=None if by_geometry else fields.positive("stiffness", "stiffness"),
        stiffness_cv=None if by_geometry and not fields.has("stiffness_cv") else _variation(fields),
        pad=geometry,
        rotation=rotation,
        temperature_coefficient=_coefficient(fields),
        hold_down=hold_down,
    )


def _geometry(support: Fields) -> PadDoc | None:
    if not support.has("pad"):
        return None
    fields = support.subtable("pad", PAD, "its geometry")
    made = pad(fields)
    refuse_idle(fields, support)
    return made


def _variation(fields: Fields) -> float:
    cv = fields.number("stiffness_cv", DEFAULT_CV, over=0.0)
    if cv > LARGEST_CV:
        raise fields.error("stiffness_cv", f"{cv:g} is no coefficient of variation", "write for example 0.3")
    return cv


def _rotation(fields: Fields) -> float:
    value = fields.table.get("rotation", "free")
    if value == "free":
        return 0.0
    if value == "fixed":
        return math.inf
    try:
        return fields.positive("rotation", "rotational stiffness")
    except BedstoneError as error:
        remedy = 'write "free", "fixed" or a stiffness such as "2e5 kN m / rad"'
        raise fields.error("rotation", error.problem, remedy) from error


def _hold_down(fields: Fields, rotation: float) -> bool | None:
    given = fields.flag("hold_down") if fields.has("hold_down") else None
    if given is False and rotation > 0.0:
        problem = "a support that holds rotation cannot let the girder lift off"
        raise fields.error("hold_down", problem, 'leave it out, or write rotation = "free"')
    return given


def _coefficient(fields: Fields) -> float | None:
    name = "temperature_coefficient"
    if not fields.has(name):
        return None
    value = fields.si(name, "temperature coefficient")
    if not 0.0 <= value <= LARGEST_COEFFICIENT:
        problem = f'"{shown(fields.table[name])}" is no growth of a pad\'s stiffness per kelvin colder'
        raise fields.error(name, problem, 'write for example "0.5 percent / K"')
    return value


def _permanent(fields: Fields, length: float) -> PermanentDoc:
    name = fields.text("name", "permanent load")
    kind = fields.one_of("kind", PERMANENT_KINDS, PERMANENT_KINDS[0])
    stage = fields.one_of("stage", STAGES, STAGES[0])
    if fields.has("point") == fields.has("uniform"):
        remedy = 'write uniform = "9.5 kN/m", or point = "40 kN" with at = "12 m"'
        raise fields.error("uniform", "exactly one of uniform and point is needed", remedy)
    if fields.has("point"):
        for field in ("start", "end"):
            if fields.has(field):
                raise fields.error(field, "a point load has none", 'write at = "12 m"')
        at = fields.si("at", "length", example="12 m")
        if not -SLACK_M <= at <= length + SLACK_M:
            problem = f'"{shown(fields.table["at"])}" lies outside the girder (0 to {length:g} m)'
            raise fields.error("at", problem, f"write a place between 0 and {length:g} m")
        point = fields.si("point", "force", example="40 kN")
        return PermanentDoc(name=name, point=point, at=min(max(at, 0.0), length), kind=kind, stage=stage)
    if fields.has("at"):
        raise fields.error("at", "a uniform load has none", "write start and end, or neither")
    start, end = _reach(fields, length)
    uniform = fields.si("uniform", "line load")
    return PermanentDoc(name=name, uniform=uniform, start=start, end=end, kind=kind, stage=stage)


def _reach(fields: Fields, length: float) -> tuple[float, float]:
    """Start and end of a uniform load; either may be left out and is then the girder's own end."""
    table = {"start": "0 m", "end": f"{length!r} m"} | fields.table
    whole = Fields(table, file=fields.file, path=fields.path, known=_PERMANENT)
    return _stretch(whole, length, "girder", "0 m", "39 m")
