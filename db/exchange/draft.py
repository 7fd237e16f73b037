"""A commented starter bridge file, to be filled in by hand."""

from __future__ import annotations

import functools
from pathlib import Path

from db.errors import BedstoneError
from db.quantities import read_quantity
from db.wording import shown

MOST_SPANS = 60
_OPTION = "--spans"


def draft_bridge(span_lengths: str) -> str:
    """Return the text of a starter bridge file with these spans.

    Values a person has still to give start with "…" and are refused by name until they are given.

    Parameters
    ----------
    span_lengths : str
        The span lengths, left to right, with units: ``"12 m, 15 m, 12 m"``.

    Raises
    ------
    BedstoneError
        If a length is not one number and one unit.
    """
    lengths = [part.strip() for part in span_lengths.split(",")]
    if len(lengths) > MOST_SPANS:
        raise BedstoneError(f"{len(lengths)} spans are too many", field=_OPTION, remedy="give up to 60")
    for i, length in enumerate(lengths, start=1):
        right = "12 m, 15 m, 12 m"
        metres = read_quantity(length, "length", field=f"{_OPTION}, span {i}", example=right).si
        if not metres > 0.0:
            problem = f'"{shown(length)}" is not greater than zero'
            raise BedstoneError(problem, field=f"{_OPTION}, span {i}", remedy=f'write "{right}"')
    spans = "".join(_SPAN.format(number=i, length=x) for i, x in enumerate(lengths, start=1))
    names = _support_names(len(lengths) + 1)
    supports = "".join(_SUPPORT.format(name=name) for name in names)
    return _template().replace("{spans}", spans.strip("\n")).replace("{supports}", supports.strip("\n"))


_SPAN = """
  [[girder.span]]                 # span {number}, counted from the left end
  length = "{length}"
  section = "main"
"""

_SUPPORT = """
  [[girder.support]]
  id = "{name}"
  kind = "pad"                    # "pad" (yields) or "pin" (holds its level: then without stiffness)
  stiffness = "… kN/mm"           # REPLACE: nominal vertical stiffness of the whole bearing, e.g. "150 kN/mm"
  stiffness_cv = 0.3              # how uncertain that is: standard deviation over value
"""


@functools.cache
def _template() -> str:
    return (Path(__file__).parent / "draft.toml").read_text(encoding="utf-8")


def _support_names(count: int) -> list[str]:
    piers = [f"pier {i}" for i in range(1, count - 1)]
    return ["abutment 1", *piers, "abutment 2"]
