"""Read the built-in factor sets."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache
from importlib import resources

FORMS = ("rating", "partial")


class UnknownSetError(LookupError):
    """There is no factor set of that name."""


@dataclass(frozen=True, kw_only=True)
class FactorSet:
    """A published set of partial factors.

    Attributes
    ----------
    title, text, status : what it is, the text it follows, and how surely
    form : "rating" (levels of the rating factor) | "partial" (utilisation)
    permanent, surfacing, settlement : (where it loads, where it relieves); None: as the permanent loads
    temperature : on a temperature case beside the live load; None: the text gives none
    resistance : multiplies the resistance
    levels : live factors by name, the first one the set's own
    condition : factors on the resistance by condition of the member; empty where the text has none
    product_at_least : least product of the factors of condition and system
    """

    name: str
    title: str
    text: str
    status: str
    form: str
    permanent: tuple[float, float]
    surfacing: tuple[float, float] | None
    settlement: tuple[float, float] | None
    temperature: float | None
    resistance: float
    levels: dict[str, float]
    condition: dict[str, float]
    product_at_least: float

    def on_resistance(self, condition: str | None, system: float | None) -> float:
        """Factor on the resistance for a condition and a system factor (None: none).

        Source: AASHTO, The Manual for Bridge Evaluation, 6A.4.2.1 (their product is at least 0.85), from memory.
        """
        product = (self.condition[condition] if condition is not None else 1.0) * (system or 1.0)
        return self.resistance * max(product, self.product_at_least)


@cache
def set_names() -> tuple[str, ...]:
    """Names of the built-in sets, sorted."""
    names = (file.name for file in resources.files("assess.capacity.sets").iterdir())
    return tuple(sorted(name.removesuffix(".toml") for name in names if name.endswith(".toml")))


@cache
def factor_set(name: str) -> FactorSet:
    """Read a set by name.

    Raises
    ------
    UnknownSetError
        for a name that is none of `set_names`.
    """
    if name not in set_names():
        raise UnknownSetError(name)
    file = resources.files("assess.capacity.sets").joinpath(f"{name}.toml")
    table = tomllib.loads(file.read_text(encoding="utf-8"))
    if table["name"] != name or table["form"] not in FORMS or not table["levels"]:
        raise ValueError(f"{name}.toml: its name, form or levels are wrong")

    def pair(key: str) -> tuple[float, float] | None:
        if key not in table:
            return None
        loading, relieving = table[key]
        return float(loading), float(relieving)

    permanent = pair("permanent")
    assert permanent is not None
    return FactorSet(
        name=name,
        title=table["title"],
        text=table["text"],
        status=table["status"],
        form=table["form"],
        permanent=permanent,
        surfacing=pair("surfacing"),
        settlement=pair("settlement"),
        temperature=float(table["temperature"]) if "temperature" in table else None,
        resistance=float(table["resistance"]),
        levels={level: float(value) for level, value in table["levels"].items()},
        condition={level: float(value) for level, value in table.get("condition", {}).items()},
        product_at_least=float(table.get("product_at_least", 0.0)),
    )
