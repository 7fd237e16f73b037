"""One table of a TOML file: hands out its fields checked, and refuses those it does not know."""

from __future__ import annotations

import datetime as dt
import math
from collections.abc import Iterable
from typing import Any

from db.errors import BedstoneError
from db.quantities import PLACEHOLDERS, Quantity, read_quantity
from db.wording import listed, shown, suggestion, written

LONGEST_ID = 100
LONGEST_TEXT = 10_000


class Fields:
    """A table, where it stands, and the fields it may have.

    Parameters
    ----------
    table : object
        What TOML gave; anything but a table is an error.
    file, path : str
        Where it stands, for errors; `path` is a path a person can follow.
    known : str
        The fields it may have, space-separated; None where the names are the user's own.
    """

    def __init__(self, table: object, *, file: str, path: str, known: str | None) -> None:
        self.file = file
        self.path = path
        names = [] if known is None else known.split()
        if not isinstance(table, dict):
            raise self.error(
                "", "it is not a table", f"write it as a table with the fields {', '.join(names)}"
            )
        self.table: dict[str, Any] = table
        for name in table:
            if known is not None and name not in names:
                hint = suggestion(name, names)
                raise self.error(
                    "", f'unknown field "{shown(name)}"{hint}', f"known here: {', '.join(names)}"
                )

    def where(self, name: str) -> str:
        """Return the path of a field of this table."""
        return ", ".join(part for part in (self.path, name) if part)

    def error(self, name: str, problem: str, remedy: str) -> BedstoneError:
        """Return the error that names a field of this table."""
        return BedstoneError(problem, file=self.file, field=self.where(name) or None, remedy=remedy)

    def has(self, name: str) -> bool:
        """Whether the field is there."""
        return name in self.table

    def need(self, name: str, example: str) -> Any:
        """Return a field that must be there."""
        if name not in self.table:
            raise self.error(name, "it is missing", f"write for example {name} = {example}")
        return self.table[name]

    def format_1(self, what: str) -> None:
        """Check that `format = 1` stands there."""
        value = self.need("format", "1")
        if isinstance(value, bool) or value != 1 or not isinstance(value, int):
            problem = f"{written(value)} is no format of a {what} that this version reads"
            raise self.error("format", problem, "write format = 1")

    def text(self, name: str, default: str | None = None) -> str:
        """Return free text; a field without a default must be there and not be empty."""
        if name not in self.table and default is not None:
            return default
        value = self.need(name, '"text"')
        if not isinstance(value, str):
            raise self.error(name, f"{written(value)} is not text", f'write it in quotes: {name} = "..."')
        if len(value) > LONGEST_TEXT:
            raise self.error(name, f"it has more than {LONGEST_TEXT} characters", "write it shorter")
        if value.strip() in PLACEHOLDERS:
            raise self.error(name, f'"{shown(value)}" is still a placeholder', "write your own text there")
        if any(not c.isprintable() and c not in "\t\n\r" and not c.isspace() for c in value):
            raise self.error(name, "it holds a control character", "write plain text")
        if default is None and not value.strip():
            raise self.error(name, "it is empty", f'write for example {name} = "north"')
        return value

    def id(self, name: str) -> str:
        """Return the id of a thing, or a reference to one: one short line of text."""
        value = self.text(name)
        if len(value) > LONGEST_ID:
            raise self.error(name, f"it has more than {LONGEST_ID} characters", "write a short name")
        if not value.isprintable():
            raise self.error(name, "it holds a line break or a control character", "write one line")
        if value != value.strip():
            raise self.error(name, f'"{shown(value)}" starts or ends with a space', "write it without")
        return value

    def one_of(self, name: str, words: Iterable[str], default: str | None = None) -> str:
        """Return one of a few words."""
        every = list(words)
        if name not in self.table and default is not None:
            return default
        value = self.need(name, f'"{every[0]}"')
        if value not in every:
            hint = suggestion(value, every) if isinstance(value, str) else ""
            raise self.error(
                name, f'"{shown(value)}" is not known here{hint}', f"write one of {listed(every)}"
            )
        return str(value)

    def reference(self, name: str, things: Iterable[str], kind: str) -> str:
        """Return an id that must be one of those of this file."""
        every = list(things)
        value = self.id(name)
        if value not in every:
            problem = f'there is no {kind} "{shown(value)}"{suggestion(value, every)}'
            raise self.error(name, problem, f"known here: {listed(every)}")
        return value

    def number(self, name: str, default: float | None = None, *, over: float = -math.inf) -> float:
        """Return a plain finite number greater than `over`."""
        if name not in self.table and default is not None:
            return default
        value = self.need(name, "1.0")
        if isinstance(value, bool) or not isinstance(value, int | float):
            raise self.error(name, f"{written(value)} is not a number", "write a number without quotes")
        if not abs(value) < 1e300:
            raise self.error(name, f"{shown(value)} is not a finite number", "write a finite number")
        if not value > over:
            raise self.error(
                name, f"{shown(value)} is not greater than {over:g}", f"write more than {over:g}"
            )
        return float(value)

    def flag(self, name: str) -> bool:
        """Return true or false; false if the field is absent."""
        value = self.table.get(name, False)
        if not isinstance(value, bool):
            problem = f"{written(value)} is neither true nor false"
            raise self.error(name, problem, f"write {name} = true or {name} = false, without quotes")
        return value

    def whole(self, name: str, default: int, *, least: int, most: int) -> int:
        """Return a whole number between two bounds."""
        value = self.table.get(name, default)
        if isinstance(value, bool) or not isinstance(value, int) or not least <= value <= most:
            remedy = f"write a whole number from {least} to {most}"
            raise self.error(name, f"{written(value)} is not a count", remedy)
        return value

    def date(self, name: str, default: dt.date | None = None) -> dt.date | None:
        """Return a date (a TOML date, not text); None only if it is absent and has no default."""
        if name not in self.table:
            return default
        value = self.table[name]
        if isinstance(value, dt.datetime) or not isinstance(value, dt.date):
            problem = f"{written(value)} is not a date"
            raise self.error(name, problem, f"write it without quotes and time: {name} = 2024-05-14")
        return value

    def quantity(self, name: str, dimension: str, *, example: str | None = None) -> Quantity:
        """Return a written quantity that must be there."""
        value = self.need(name, f'"{example or _example(dimension)}"')
        return read_quantity(value, dimension, file=self.file, field=self.where(name), example=example)

    def positive(self, name: str, dimension: str, *, example: str | None = None) -> float:
        """Return a written quantity greater than zero, in SI."""
        quantity = self.quantity(name, dimension, example=example)
        if not quantity.si > 0.0:
            problem = f'"{shown(quantity.text)}" is not greater than zero'
            raise self.error(name, problem, f'write for example "{example or _example(dimension)}"')
        return quantity.si

    def optional_positive(self, name: str, dimension: str, *, example: str | None = None) -> float | None:
        """Return a written quantity greater than zero, or None if the field is absent."""
        return self.positive(name, dimension, example=example) if name in self.table else None

    def si(
        self, name: str, dimension: str, default: float | None = None, example: str | None = None
    ) -> float:
        """Return a written quantity of any sign, in SI."""
        if name not in self.table and default is not None:
            return default
        return self.quantity(name, dimension, example=example).si

    def subtable(self, name: str, known: str, example: str) -> Fields:
        """Return a table inside this one that must be there."""
        if name not in self.table:
            raise self.error(name, "it is missing", f"add a table [{name}] with {example}")
        return Fields(self.table[name], file=self.file, path=self.where(name), known=known)

    def tables(self, name: str, kind: str, known: str, *, by_number: bool = False) -> list[Fields]:
        """Return the tables of an array of tables, each with its own path."""
        value = self.table.get(name, [])
        if not isinstance(value, list):
            header = f"[[{name}]]"
            raise self.error(name, "it is not a list of tables", f"start each one with {header}")
        return [
            Fields(table, file=self.file, path=self.where(_label(kind, i, table, by_number)), known=known)
            for i, table in enumerate(value, start=1)
        ]


def refuse_duplicates(things: Iterable[tuple[Fields, str]], kind: str) -> None:
    """Raise BedstoneError if two things of a kind have one id."""
    seen: set[str] = set()
    for fields, name in things:
        if name in seen:
            raise fields.error("id", f'two {kind}s are called "{shown(name)}"', "give each its own id")
        seen.add(name)


def _label(kind: str, number: int, table: object, by_number: bool) -> str:
    name = table.get("id") if isinstance(table, dict) else None
    if not isinstance(name, str) or not name.strip():
        return f"{kind} {number}"
    return f"{kind} {number} ({shown(name)})" if by_number else f'{kind} "{shown(name)}"'


def _example(dimension: str) -> str:
    from db.quantities import DIMENSIONS

    return DIMENSIONS[dimension].example
