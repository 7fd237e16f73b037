"""The visit file: TOML, with or without a table of readings beside it, to a `VisitDoc`."""

from __future__ import annotations

from pathlib import Path

from db.documents import PERMANENT, QUANTITIES, LoadStateDoc, ReadingDoc, VisitDoc
from db.errors import BedstoneError
from db.exchange.fields import Fields, refuse_duplicates
from db.exchange.files import digest_of, parse_toml, read_text, refuse_controls
from db.exchange.reading_rules import (
    DIMENSION_OF,
    EXAMPLE_OF,
    each,
    refuse_absurd,
    refuse_misplaced,
    undefined_state,
)
from db.exchange.readings_csv import parse_readings
from db.wording import printable, shown

WHAT = "visit file"
TABLE = "table of readings"
COLDEST_DEGC = -60.0
WARMEST_DEGC = 70.0
DIRECTIONS = ("larger x", "smaller x")

_TOP = "format visit load_state reading"
_VISIT = "bridge date party pad_temperature datum readings remark"
_STATE = "id vehicle leading_axle_at towards"
_READING = "girder state quantity support at height value sd instrument remark"


def read_visit(path: Path) -> VisitDoc:
    """Read a visit file and, if it names one, the table of readings beside it.

    Raises
    ------
    BedstoneError
        If a file cannot be read or anything in it is wrong; names file, field and remedy.
    """
    path = Path(path)
    file = printable(str(path))
    text = read_text(path, what=WHAT)
    name = _table_name(_top(text, file))
    table = read_text(path.parent / name, what=TABLE) if name else ""
    return parse_visit(text, file=file, table_text=table)


def parse_visit(text: str, *, file: str, table_text: str = "") -> VisitDoc:
    """Turn the text of a visit file, and of its table if it names one, into a document in SI.

    Parameters
    ----------
    text : str
        The TOML text.
    file : str
        Its name, for errors.
    table_text : str
        The text of the table of readings.

    Raises
    ------
    BedstoneError
        If anything in it is wrong that can be told without the bridge.
    """
    top = _top(text, file)
    visit = _visit_fields(top)
    date = visit.date("date")
    if date is None:
        raise visit.error("date", "it is missing", "write for example date = 2024-05-14")
    states = _states(top)
    table = _table_name(top)
    tables = top.tables("reading", "reading", _READING)
    readings = each(tables, lambda fields: _reading(fields, Path(file).name))
    if table:
        readings += parse_readings(table_text, file=table)
    if not readings:
        raise top.error("reading", "there is no reading", "add a [[reading]], or readings = under [visit]")
    _refuse_undefined(readings, [state.id for state in states])
    return VisitDoc(
        bridge=visit.id("bridge"),
        date=date,
        party=visit.text("party", ""),
        pad_temperature=_temperature(visit),
        datum=visit.text("datum", ""),
        remark=visit.text("remark", ""),
        states=states,
        readings=tuple(readings),
        text=text,
        table_text=table_text,
        digest=digest_of(text, table_text) if table else digest_of(text),
    )


def _top(text: str, file: str) -> Fields:
    refuse_controls(text, file=file, what=WHAT)
    tables = parse_toml(text, file=file, what=WHAT)
    if "bridge" in tables and "visit" not in tables:
        raise BedstoneError("it is a bridge file", file=file, remedy="add it: bedstone bridge add FILE")
    top = Fields(tables, file=file, path="", known=_TOP)
    top.format_1(WHAT)
    return top


def _visit_fields(top: Fields) -> Fields:
    return top.subtable("visit", _VISIT, "bridge and date")


def _table_name(top: Fields) -> str:
    """The name of the table of readings; it must stand beside the visit file."""
    visit = _visit_fields(top)
    if not visit.has("readings"):
        return ""
    name = visit.text("readings")
    if not name.isprintable() or name != Path(name).name or "\\" in name or name in (".", ".."):
        problem = f'"{shown(name)}" is not the name of a file beside the visit file'
        raise visit.error("readings", problem, 'write for example readings = "visit-2024.csv"')
    if not name.lower().endswith(".csv"):
        raise visit.error("readings", f'"{shown(name)}" is not a .csv file', "save the table as CSV")
    return name


def _temperature(visit: Fields) -> float | None:
    if not visit.has("pad_temperature"):
        return None
    value = visit.si("pad_temperature", "temperature")
    if not COLDEST_DEGC <= value <= WARMEST_DEGC:
        problem = f"{value:g} degC is no temperature of a pad"
        raise visit.error("pad_temperature", problem, "write one between -60 and 70 degC")
    return value


def _states(top: Fields) -> tuple[LoadStateDoc, ...]:
    tables = top.tables("load_state", "load state", _STATE)
    if not tables:
        raise top.error("load_state", "there is no load state", 'add a [[load_state]] with id = "permanent"')
    states = tuple(_state(fields) for fields in tables)
    refuse_duplicates(((f, s.id) for f, s in zip(tables, states, strict=True)), "load state")
    return states


def _state(fields: Fields) -> LoadStateDoc:
    name = fields.id("id")
    if not fields.has("vehicle"):
        for field in ("leading_axle_at", "towards"):
            if fields.has(field):
                raise fields.error("vehicle", f"it is missing, but {field} is there", "name the test vehicle")
        if name != PERMANENT:
            remedy = f'add vehicle and leading_axle_at, or call the state "{PERMANENT}"'
            raise fields.error("vehicle", "a test state needs a vehicle", remedy)
        return LoadStateDoc(id=name)
    if name == PERMANENT:
        raise fields.error("vehicle", "the permanent state has none", "give the test state its own id")
    return LoadStateDoc(
        id=name,
        vehicle=fields.id("vehicle"),
        leading_axle_at=fields.si("leading_axle_at", "length", example="13.1 m"),
        towards=fields.one_of("towards", DIRECTIONS, DIRECTIONS[0]),
    )


def _reading(fields: Fields, file: str) -> ReadingDoc:
    number = fields.path.rsplit(" ", 1)[-1]
    quantity = fields.one_of("quantity", QUANTITIES)
    dimension, example = DIMENSION_OF[quantity], EXAMPLE_OF[quantity]
    value = fields.quantity("value", dimension, example=example)
    sd = fields.quantity("sd", dimension, example=example)
    reading = ReadingDoc(
        girder=fields.id("girder"),
        state=fields.id("state"),
        quantity=quantity,
        support=fields.id("support") if fields.has("support") else None,
        at=fields.si("at", "length", example="6 m") if fields.has("at") else None,
        height=fields.si("height", "length", example="-0.62 m") if fields.has("height") else None,
        value=value.si,
        sd=fields.positive("sd", dimension, example=example),
        value_entered=value.text,
        sd_entered=sd.text,
        unit=value.unit,
        instrument=fields.text("instrument", ""),
        remark=fields.text("remark", ""),
        source=f"{shown(file)}, reading {number}",
    )
    refuse_misplaced(reading, file=fields.file, place=fields.path)
    refuse_absurd(reading, file=fields.file, place=fields.path)
    return reading


def _refuse_undefined(readings: list[ReadingDoc], states: list[str]) -> None:
    def check(reading: ReadingDoc) -> None:
        if reading.state not in states:
            raise undefined_state(reading, states)

    each(readings, check)
