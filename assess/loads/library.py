"""The published live load models that come with the package, one TOML file each.

Their numbers are text with a unit, as they are printed; reading turns them into m, kN and kN/m.
"""

from __future__ import annotations

import math
import re
import tomllib
from collections.abc import Iterable
from decimal import Decimal
from fractions import Fraction
from functools import cache
from importlib import resources
from typing import Any

from assess.loads.allowance import RULES
from assess.loads.live_model import Alternative, Block, LiveModel, Second

UNLIMITED = "unlimited"
_FOOT = Fraction(3048, 10000)  # m, exact
_KIP = Fraction(44482216152605, 10**13)  # kN, exact
_UNITS = {
    "m": Fraction(1),
    "ft": _FOOT,
    "kN": Fraction(1),
    "kip": _KIP,
    "kN/m": Fraction(1),
    "kip/ft": _KIP / _FOOT,
}
_COOPER = re.compile(r"cooper-e([1-9][0-9]{0,2})")
_COOPER_BASE = 80


class UnknownModelError(LookupError):
    """There is no live load model of that name."""


@cache
def model_names() -> tuple[str, ...]:
    """Names of the models that have a file, sorted; any `cooper-eNN` is a model beside them."""
    names = (file.name for file in resources.files("assess.loads").joinpath("models").iterdir())
    return tuple(sorted(name.removesuffix(".toml") for name in names if name.endswith(".toml")))


@cache
def live_model(name: str) -> LiveModel:
    """Read a model by name.

    Raises
    ------
    UnknownModelError
        for a name that is none of `model_names` and no `cooper-eNN`.
    """
    if name in model_names():
        return _read(name)
    cooper = _COOPER.fullmatch(name)
    if cooper is None:
        raise UnknownModelError(name)
    number = int(cooper[1])
    base = _read(f"cooper-e{_COOPER_BASE}").scaled(number / _COOPER_BASE)
    return LiveModel(**{**vars(base), "name": name, "title": f"Cooper E{number} train"})


def _read(name: str) -> LiveModel:
    file = resources.files("assess.loads").joinpath("models", f"{name}.toml")
    table = tomllib.loads(file.read_text(encoding="utf-8"))
    allowance = table["allowance"]
    if table["name"] != name or allowance["rule"] not in RULES:
        raise ValueError(f"{name}.toml: its name or its rule of allowance is wrong")
    lengths: list[Fraction] = []
    spread = bool(allowance.get("uniform", True))
    alternatives = tuple(_alternative(one, lengths, spread) for one in table["alternative"])
    return LiveModel(
        name=name,
        title=table["title"],
        source=table["source"],
        basis=table["basis"],
        note=table["note"],
        rule=allowance["rule"],
        rule_value=float(allowance.get("value", 0.0)),
        rule_source=allowance["source"],
        alternatives=alternatives,
        module=_module(lengths),
    )


def _alternative(table: dict[str, Any], lengths: list[Fraction], spread: bool) -> Alternative:
    factor = float(table.get("factor", 1.0))
    second = None
    if "second" in table:
        gap, axles = table["gap"], _axles(table["second"], lengths)
        if gap == "other span":
            second = Second(axles=axles, other_span=True)
        else:
            second = Second(axles=axles, least=_length(gap[0], lengths), most=_length(gap[1], lengths))
    blocks = (
        Block(start=_length(start, lengths), end=_length(end, lengths), intensity=_si(load))
        for start, end, load in table.get("blocks", [])
    )
    return Alternative(
        name=table["name"],
        axles=_axles(table.get("axles", []), lengths),
        blocks=tuple(blocks),
        second=second,
        uniform=_si(table["uniform"]) if "uniform" in table else 0.0,
        clear=_length(table["clear"], lengths) if "clear" in table else None,
        leave_out=bool(table.get("leave_out", False)),
        uses=frozenset(table.get("for", [])),
        uniform_allowance=spread,
    ).scaled(factor)


def _axles(rows: Iterable[list[str]], lengths: list[Fraction]) -> tuple[tuple[float, float], ...]:
    return tuple((_length(distance, lengths), _si(load)) for distance, load in rows)


def _exact(text: str) -> Fraction:
    number, unit = text.split()
    return Fraction(Decimal(number)) * _UNITS[unit]


def _si(text: str) -> float:
    return float(_exact(text))


def _length(text: str, lengths: list[Fraction]) -> float:
    """Read a length and note it among the lengths of the model."""
    if text == UNLIMITED:
        return math.inf
    exact = _exact(text)
    lengths.append(exact)
    return float(exact)


def _module(lengths: Iterable[Fraction]) -> float:
    """Return the largest length of which all are whole multiples, m; inf if all are 0."""
    common = Fraction(0)
    for one in lengths:
        common = Fraction(
            math.gcd(common.numerator * one.denominator, one.numerator * common.denominator),
            common.denominator * one.denominator,
        )
    return float(common) if common else math.inf
