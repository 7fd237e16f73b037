"""How numbers, intervals and gaps are written for a person."""

from __future__ import annotations

import datetime as dt
import math
from collections.abc import Iterable

NOT_DETERMINED = "not determined"
FEWEST_DRAWS = 2000
"""The assessment uses at least so many draws: a share of them below 1 in 1000 is not told apart from none."""


def number(value: float | None, *, none: str = NOT_DETERMINED) -> str:
    """Write a number with three significant figures, without an exponent where it can be read so.

    Parameters
    ----------
    value : float or None
        The number; None or not a number gives `none`.
    none : str
        The words for a number that is not there.
    """
    if value is None or math.isnan(value):
        return none
    if math.isinf(value):
        return "no upper limit" if value > 0 else "no lower limit"
    if value == 0:
        return "0"
    size = math.floor(math.log10(abs(value)))
    if not -4 <= size <= 8:
        return f"{value:.2e}"
    rounded = round(value, 2 - size)
    size = math.floor(math.log10(abs(rounded)))  # 9.996 becomes 10.0
    return f"{rounded:.{max(0, 2 - size)}f}"


def interval(value: float | None, low: float | None, high: float | None) -> str:
    """Write "value (low to high)"; a missing limit is said in words."""
    if value is None or math.isnan(value):
        return NOT_DETERMINED
    if low is None and high is None:
        return f"{number(value)} (interval {NOT_DETERMINED})"
    return f"{number(value)} ({number(low)} to {number(high)})"


def chance(probability: float | None) -> str:
    """Write a probability in per cent; a handful of draws is not told apart from none, nor from all."""
    if probability is None or math.isnan(probability):
        return NOT_DETERMINED
    if probability < 2 / FEWEST_DRAWS:
        return "under 0.1"
    if probability > 1 - 2 / FEWEST_DRAWS:
        return "over 99.9"
    return number(100 * probability)


def day(date: dt.date | None, *, none: str = NOT_DETERMINED) -> str:
    """Write a date as YYYY-MM-DD."""
    return none if date is None else date.isoformat()


def section_name(effect: str, span: int | None, support: str | None) -> str:
    """Name a section: "sagging, span 1", "hogging, pier 1", "shear, span 1 at pier 1"."""
    where = " at ".join(
        part for part in (None if span is None else f"span {span}", support) if part is not None
    )
    return f"{effect}, {where}" if where else effect


def counted(count: int, noun: str) -> str:
    """Write a count with its noun: "1 visit", "3 visits"."""
    return f"{count} {noun}" if count == 1 else f"{count} {noun}s"


def listed(words: Iterable[str]) -> str:
    """Join words with commas and a last "and"."""
    *first, last = list(words)
    return f"{', '.join(first)} and {last}" if first else last
