"""Days and years."""

from __future__ import annotations

import datetime as dt

DAYS_PER_YEAR = 365.25


def years_between(first: dt.date, second: dt.date) -> float:
    """Years from one day to another."""
    return (second - first).days / DAYS_PER_YEAR


def reach(date: dt.date, years: float) -> dt.date:
    """The day so many years later."""
    return date + dt.timedelta(days=round(float(years) * DAYS_PER_YEAR))
