"""Results back from plain dictionaries, as JSON gives them."""

from __future__ import annotations

import dataclasses
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


def _value(hint: Any, value: Any) -> Any:
    if dataclasses.is_dataclass(hint) and isinstance(hint, type):
        return from_plain(hint, value)
    if typing.get_origin(hint) is list:
        return [_value(typing.get_args(hint)[0], one) for one in value]
    return value
