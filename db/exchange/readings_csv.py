"""The table of readings beside a visit file: CSV to readings."""

from __future__ import annotations

import csv
import io
import re

from db.documents import QUANTITIES, ReadingDoc
from db.errors import BedstoneError
from db.exchange.fields import LONGEST_ID, LONGEST_TEXT
from db.exchange.files import refuse_controls, shown_reason
from db.exchange.raw_readings import (
    GAPS,
    LISTS,
    SPACING,
    Measured,
    refuse_mixed,
    refuse_odd,
    values_of,
)
from db.exchange.reading_rules import DIMENSION_OF, EXAMPLE_OF, each, refuse_absurd, refuse_misplaced
from db.quantities import Quantity, read_number, read_quantity
from db.wording import listed, shown, suggestion

REQUIRED = ("girder", "state", "quantity", "value", "sd", "unit")
OPTIONAL = ("support", "at", "height", "instrument", "remark", "benchmark", *LISTS, SPACING)
COLUMNS = "girder,state,quantity,support,at,value,sd,unit,instrument,remark"
WHAT = "table of readings"
_SD_NAMES = ("stdev", "std", "stddev", "sigma", "s.d.", "standard deviation", "uncertainty")
_UNEVEN = re.compile(r"Expected (\d+) fields in line (\d+), saw (\d+)")

Row = tuple[int, dict[str, str]]


def parse_readings(text: str, *, file: str) -> list[ReadingDoc]:
    """Turn the text of a table of readings into readings in SI.

    Parameters
    ----------
    text : str
        CSV: a line of column names, then a row a reading. `at`, `height` and `corner_spacing` are in m;
        `unit` holds for all values and for `sd`; several values stand in one cell with semicolons between them.
    file : str
        Its name, for errors and for where each reading stands.

    Raises
    ------
    BedstoneError
        If anything in it is wrong; names file, row, column and remedy.
    """
    refuse_controls(text, file=file, what=WHAT)
    rows = _rows(text, file)
    if not rows:
        raise BedstoneError("it holds no reading", file=file, remedy="write a row a reading below the names")
    return each(rows, lambda row: _reading(row, file))


def _rows(text: str, file: str) -> list[Row]:
    """The rows by column name, with their number in the file (the names stand in row 1)."""
    cells = _cells(text, file)
    if not cells:
        raise BedstoneError("it is empty", file=file, remedy=f"start with the column names {COLUMNS}")
    names = [name.strip() for name in cells[0]]
    while names and not names[-1]:
        names.pop()
    _check_names(names, file)
    rows = []
    for number, row in enumerate(cells[1:], start=2):
        if any(cell.strip() for cell in row[len(names) :]):
            raise BedstoneError(
                f"row {number} has more cells than there are columns", file=file, remedy=COLUMNS
            )
        values = {name: cell.strip() for name, cell in zip(names, row, strict=False)}
        if any(values.values()):
            rows.append((number, values))
    return rows


def _cells(text: str, file: str) -> list[list[str]]:
    import pandas as pd

    head = re.split("[\r\n]", text, maxsplit=1)[0]
    if "," not in head and head.count(";") + head.count("\t") > 1:
        raise BedstoneError("its columns are not parted by commas", file=file, remedy="save it with commas")
    try:
        frame = pd.read_csv(
            io.StringIO(text),
            header=None,
            dtype=str,
            keep_default_na=False,
            na_filter=False,
            skip_blank_lines=False,
            index_col=False,
        )
    except pd.errors.EmptyDataError:
        return []
    except (pd.errors.ParserError, ValueError, OverflowError) as error:
        _refuse_uneven(str(error), head, file)
        remedy = f"save it as CSV with the columns {COLUMNS}"
        raise BedstoneError(f"it is not CSV: {shown_reason(error)}", file=file, remedy=remedy) from error
    return [[cell if isinstance(cell, str) else "" for cell in row] for row in frame.to_numpy().tolist()]


def _refuse_uneven(reason: str, head: str, file: str) -> None:
    """Say which row has too many cells; a missing column is named first, because it is the likelier slip."""
    found = _UNEVEN.search(reason)
    if found is None:
        return
    wanted, row, seen = found.groups()
    _check_names([name.strip() for name in next(csv.reader([head]), [])], file)
    problem = f"row {row} has {seen} cells, the names in row 1 are {wanted}"
    remedy = "write decimals with a point, and put a remark that holds a comma in quotes"
    raise BedstoneError(problem, file=file, field=f"row {row}", remedy=remedy)


def _check_names(names: list[str], file: str) -> None:
    known = (*REQUIRED, *OPTIONAL)
    for name in names:
        if name not in known:
            meant = ' - did you mean "sd"?' if name.lower() in _SD_NAMES else suggestion(name, known)
            problem = f'unknown column "{shown(name)}"{meant}'
            raise BedstoneError(problem, file=file, field="row 1", remedy=f"known: {', '.join(known)}")
        if names.count(name) > 1:
            problem = f'two columns are called "{name}"'
            raise BedstoneError(problem, file=file, field="row 1", remedy="keep one of them")
    several = any(name in names for name in ("repeats", GAPS[0]))
    missing = [name for name in REQUIRED if name not in names and not (name == "value" and several)]
    if missing:
        problem = f"there is no column {listed(missing)}"
        raise BedstoneError(problem, file=file, field="row 1", remedy=f"write the names {COLUMNS}")


def _reading(row: Row, file: str) -> ReadingDoc:
    number, cells = row
    place = f"row {number}"

    def name(column: str) -> str:
        value = cells.get(column, "")
        if not value or len(value) > LONGEST_ID or not value.isprintable():
            problem = f'"{shown(value)}" is no name' if value else "it is empty"
            raise BedstoneError(problem, file=file, field=f"{place}, {column}", remedy="write a short name")
        return value

    def metres(column: str) -> float | None:
        value = cells.get(column, "")
        return read_number(value, file=file, field=f"{place}, {column} (in m)") if value else None

    quantity = name("quantity")
    if quantity not in QUANTITIES:
        problem = f'"{shown(quantity)}" is not known here{suggestion(quantity, QUANTITIES)}'
        remedy = f"write one of {listed(QUANTITIES)}"
        raise BedstoneError(problem, file=file, field=f"{place}, quantity", remedy=remedy)
    state = name("state")
    given = [column for column in ("value", *LISTS, SPACING) if cells.get(column)]
    refuse_mixed(given, quantity=quantity, state=state, file=file, place=place)
    several = "repeats" in given or GAPS[0] in given
    measured = Measured(
        value=None if several else _measured(cells, "value", quantity, file, place),
        sd=_measured(cells, "sd", quantity, file, place),
        lists={c: _several(cells, c, quantity, file, place) for c in LISTS if c in given},
        corner_spacing=metres(SPACING),
    )
    refuse_odd(measured, file=file, place=place)
    reading = ReadingDoc(
        girder=name("girder"),
        state=state,
        quantity=quantity,
        support=name("support") if cells.get("support") else None,
        at=metres("at"),
        height=metres("height"),
        instrument=_free(cells, "instrument", file, place),
        remark=_free(cells, "remark", file, place),
        source=f"{shown(file)}, {place}",
        benchmark=name("benchmark") if cells.get("benchmark") else "",
        **vars(values_of(measured)),
    )
    refuse_misplaced(reading, file=file, place=place)
    refuse_absurd(reading, file=file, place=place)
    return reading


def _measured(cells: dict[str, str], column: str, quantity: str, file: str, place: str) -> Quantity:
    """The value of a cell with the unit of its row."""
    return _one(cells.get(column, ""), cells, column, quantity, file, place)


def _several(
    cells: dict[str, str], column: str, quantity: str, file: str, place: str
) -> tuple[Quantity, ...]:
    """The values of a cell, semicolons between them."""
    numbers = [number.strip() for number in cells[column].split(";")]
    return tuple(_one(number, cells, column, quantity, file, place) for number in numbers)


def _one(number: str, cells: dict[str, str], column: str, quantity: str, file: str, place: str) -> Quantity:
    field = f"{place}, {column}"
    unit = cells.get("unit", "")
    if not number:
        remedy = f"write a number such as {EXAMPLE_OF[quantity].split()[0]}"
        raise BedstoneError("it is empty", file=file, field=field, remedy=remedy)
    plain = read_number(number, file=file, field=field)
    if column == "sd" and not plain > 0.0:
        raise BedstoneError(
            f"{shown(number)} is not greater than zero",
            file=file,
            field=field,
            remedy="write the standard deviation of the reading",
        )
    if not unit:
        example = EXAMPLE_OF[quantity].split()[1]
        remedy = f"write for example {example}"
        raise BedstoneError("it is empty", file=file, field=f"{place}, unit", remedy=remedy)
    entered = f"{number} {unit}"
    return read_quantity(
        entered, DIMENSION_OF[quantity], file=file, field=field, example=EXAMPLE_OF[quantity]
    )


def _free(cells: dict[str, str], column: str, file: str, place: str) -> str:
    value = cells.get(column, "")
    if len(value) > LONGEST_TEXT:
        problem = f"it has more than {LONGEST_TEXT} characters"
        raise BedstoneError(problem, file=file, field=f"{place}, {column}", remedy="write it shorter")
    return value
