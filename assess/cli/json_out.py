"""One generic way from a result to JSON: the dataclass fields are the keys."""

from __future__ import annotations

import dataclasses
import datetime as dt
import json
import math
from collections.abc import Mapping
from typing import Any

import click


def to_json(value: object) -> Any:
    """Return plain dicts, lists, strings, numbers, booleans and None.

    Dates become ISO strings. A number that is not finite becomes None, because JSON has no word
    for it. Arrays and numpy scalars become lists and plain numbers.

    Raises
    ------
    TypeError
        If there is no JSON for the value; nothing is turned into text on the quiet.
    """
    if value is None or isinstance(value, (bool, str)):
        return value
    if isinstance(value, float):
        return float(value) if math.isfinite(value) else None
    if isinstance(value, int):
        return int(value)
    if isinstance(value, (dt.date, dt.datetime)):
        return value.isoformat()
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        return {f.name: to_json(getattr(value, f.name)) for f in dataclasses.fields(value)}
    if isinstance(value, Mapping):
        return {str(key): to_json(entry) for key, entry in value.items()}
    if isinstance(value, (list, tuple)):
        return [to_json(entry) for entry in value]
    plain = getattr(value, "tolist", None)  # numpy arrays and scalars, without importing numpy
    if plain is not None:
        return to_json(plain())
    raise TypeError(f"no JSON for a {type(value).__name__}")


def print_json(document: object) -> None:
    """Print one document on stdout."""
    click.echo(json.dumps(to_json(document), indent=2, allow_nan=False))
