"""The data files of this room, read once."""

from __future__ import annotations

import tomllib
from functools import cache
from importlib.resources import files
from typing import Any

KPA_PER_KSI = 6894.757293168361  # exact by definition of inch, pound and standard gravity
KPA_PER_MPA = 1000.0


class PadError(ValueError):
    """A pad that cannot be, or that a formula or table does not cover.

    Attributes
    ----------
    field : the parameter that is wrong
    remedy : what would be right
    """

    def __init__(self, field: str, problem: str, remedy: str) -> None:
        super().__init__(problem)
        self.field = field
        self.remedy = remedy


@cache
def table(name: str) -> dict[str, Any]:
    """Return a data file of `assess/pad/data` by its stem; treat it as read-only."""
    text = (files("assess.pad") / "data" / f"{name}.toml").read_text(encoding="utf-8")
    return tomllib.loads(text)
