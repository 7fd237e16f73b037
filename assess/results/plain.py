"""Results back from plain dictionaries, as JSON gives them."""

from __future__ import annotations

import dataclasses
import datetime as dt
import types
import typing
from collections.abc import Hashable
from functools import cache
from typing import Any, TypeVar, cast

T = TypeVar("T")


def from_plain(kind: type[T], values: dict[str, Any]) -> T:
    """Make a result dataclass of a dictionary, nested ones too; fields that it does not know keep their defaults.

    Raises
    ------
    TypeError
        where a field without default is missing.
    """
    made: dict[str, Any] = {}
    for name, hint in _fields(cast(Hashable, kind)).items():
        if name in values:
            made[name] = _value(hint, values[name])
    return kind(**made)


@cache
def _fields(kind: Any) -> dict[str, Any]:
    hints = typing.get_type_hints(kind)
    return {one.name: hints[one.name] for one in dataclasses.fields(kind)}


def to_plain(result: Any) -> dict[str, Any]:
    """Make a dictionary of a result dataclass, ready for JSON: dates as text."""
    plain: dict[str, Any] = _plain(dataclasses.asdict(result))
    return plain


def _plain(value: Any) -> Any:
    if isinstance(value, dict):
        return {key: _plain(one) for key, one in value.items()}
    if isinstance(value, (list, tuple)):
        return [_plain(one) for one in value]
    return value.isoformat() if isinstance(value, dt.date) else value


def _value(hint: Any, value: Any) -> Any:
    if typing.get_origin(hint) in (typing.Union, types.UnionType) and value is not None:
        some = [one for one in typing.get_args(hint) if one is not type(None)]
        return _value(some[0], value) if len(some) == 1 else value
    if hint is dt.date and isinstance(value, str):
        return dt.date.fromisoformat(value)
    if typing.get_origin(hint) is tuple and isinstance(value, list):
        return tuple(_value(one, part) for one, part in zip(typing.get_args(hint), value, strict=True))
    if dataclasses.is_dataclass(hint) and isinstance(hint, type):
        return from_plain(hint, value)
    if typing.get_origin(hint) is list:
        return [_value(typing.get_args(hint)[0], one) for one in value]
    return value
