"""The visit file: TOML, with or without a table of readings beside it, to a `VisitDoc`."""

from __future__ import annotations

from pathlib import Path

from db.documents import DATUM_LOADS, PERMANENT, QUANTITIES, LoadStateDoc, ReadingDoc, VisitDoc
from db.errors import BedstoneError
from db.exchange.fields import Fields, refuse_duplicates
from db.exchange.files import digest_of, parse_toml, read_text, refuse_controls
from db.exchange.prior_toml import unknowns
from db.exchange.raw_readings import (
    GAPS,
    LISTS,
    SPACING,
    Measured,
    reduced,
    refuse_mixed,
    refuse_odd,
    values_of,
)
from db.exchange.reading_rules import (
    DIMENSION_OF,
    EXAMPLE_OF,
    each,
    refuse_absurd,
    refuse_misplaced,
    undefined_benchmark,
    undefined_state,
)
from db.exchange.readings_csv import parse_readings
from db.quantities import Quantity, read_quantity
from db.raw_doc import BenchmarkDoc
from db.wording import printable, shown

WHAT = "visit file"
TABLE = "table of readings"
COLDEST_DEGC = -60.0
WARMEST_DEGC = 70.0
DIRECTIONS = ("larger x", "smaller x")

LARGEST_BENCHMARK_SD_M = 1.0

_TOP = "format visit load_state benchmark reading"
_VISIT = "bridge date party pad_temperature datum datum_load readings remark unknowns"
_BENCHMARK = "id sd"
_STATE = "id vehicle leading_axle_at towards"
_READING = f"girder state quantity support at height value sd instrument remark benchmark {' '.join(LISTS)} {SPACING}"


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
    benchmarks = _benchmarks(top)
    _refuse_undefined(readings, [state.id for state in states], [mark.id for mark in benchmarks])
    return VisitDoc(
        bridge=visit.id("bridge"),
        date=date,
        party=visit.text("party", ""),
        pad_temperature=_temperature(visit),
        datum=visit.text("datum", ""),
        remark=visit.text("remark", ""),
        states=states,
        readings=tuple(reduced(readings)),
        unknowns=_unknowns(visit),
        datum_load=visit.one_of("datum_load", DATUM_LOADS, DATUM_LOADS[0]),
        benchmarks=benchmarks,
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


def _unknowns(visit: Fields) -> tuple[tuple[str, tuple[str, ...]], ...]:
    """What is asked of the readings, by girder; one list is for all girders."""
    given = visit.table.get("unknowns")
    if given is None:
        return ()
    if not isinstance(given, dict):
        return (("", unknowns(visit, "unknowns")),)
    by_girder = Fields(given, file=visit.file, path=visit.where("unknowns"), known=None)
    if not given or "" in given:
        raise visit.error(
            "unknowns", "it names no girder", 'write for example north = ["pads", "settlements"]'
        )
    return tuple((girder, unknowns(by_girder, girder)) for girder in given)


def _benchmarks(top: Fields) -> tuple[BenchmarkDoc, ...]:
    tables = top.tables("benchmark", "benchmark", _BENCHMARK)
    marks = tuple(_benchmark(fields) for fields in tables)
    refuse_duplicates(((f, m.id) for f, m in zip(tables, marks, strict=True)), "benchmark")
    return marks


def _benchmark(fields: Fields) -> BenchmarkDoc:
    sd = fields.positive("sd", "length", example="0.5 mm")
    if sd > LARGEST_BENCHMARK_SD_M:
        problem = f'"{shown(fields.table["sd"])}" is no standard deviation of a benchmark'
        raise fields.error("sd", problem, 'check the unit, for example "0.5 mm"')
    return BenchmarkDoc(id=fields.id("id"), sd=sd)


def _reading(fields: Fields, file: str) -> ReadingDoc:
    number = fields.path.rsplit(" ", 1)[-1]
    quantity = fields.one_of("quantity", QUANTITIES)
    state = fields.id("state")
    refuse_mixed(fields.table, quantity=quantity, state=state, file=fields.file, place=fields.path)
    measured = _measured(fields, quantity)
    refuse_odd(measured, file=fields.file, place=fields.path)
    values = values_of(measured)
    reading = ReadingDoc(
        girder=fields.id("girder"),
        state=state,
        quantity=quantity,
        support=fields.id("support") if fields.has("support") else None,
        at=fields.si("at", "length", example="6 m") if fields.has("at") else None,
        height=fields.si("height", "length", example="-0.62 m") if fields.has("height") else None,
        instrument=fields.text("instrument", ""),
        remark=fields.text("remark", ""),
        source=f"{shown(file)}, reading {number}",
        benchmark=fields.id("benchmark") if fields.has("benchmark") else "",
        **vars(values),
    )
    refuse_misplaced(reading, file=fields.file, place=fields.path)
    refuse_absurd(reading, file=fields.file, place=fields.path)
    return reading


def _measured(fields: Fields, quantity: str) -> Measured:
    dimension, example = DIMENSION_OF[quantity], EXAMPLE_OF[quantity]
    several = fields.has("repeats") or fields.has(GAPS[0])
    value = None if several else fields.quantity("value", dimension, example=example)
    fields.positive("sd", dimension, example=example)
    return Measured(
        value=value,
        sd=fields.quantity("sd", dimension, example=example),
        lists={name: _several(fields, name, dimension, example) for name in LISTS if fields.has(name)},
        corner_spacing=fields.si(SPACING, "length", example="320 mm") if fields.has(SPACING) else None,
    )


def _several(fields: Fields, name: str, dimension: str, example: str) -> tuple[Quantity, ...]:
    """A list of written quantities; a zero may be a single one."""
    given = fields.table[name]
    if isinstance(given, str) and name.startswith("zero"):
        return (fields.quantity(name, dimension, example=example),)
    if not isinstance(given, list) or not given:
        problem = "it is empty" if given == [] else "it is not a list"
        raise fields.error(name, problem, f'write for example {name} = ["{example}", "{example}"]')
    return tuple(
        read_quantity(one, dimension, file=fields.file, field=f"{fields.where(name)}, {i}", example=example)
        for i, one in enumerate(given, start=1)
    )


def _refuse_undefined(readings: list[ReadingDoc], states: list[str], benchmarks: list[str]) -> None:
    def check(reading: ReadingDoc) -> None:
        if reading.state not in states:
            raise undefined_state(reading, states)
        if reading.benchmark and reading.benchmark not in benchmarks:
            raise undefined_benchmark(reading, benchmarks)

    each(readings, check)
