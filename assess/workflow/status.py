"""Values as results say them: what is not determined is None; status words for a utilisation."""

from __future__ import annotations

import math

WATCH, LIMIT = 0.9, 1.0


def status_of(utilisation: float | None) -> str:
    """Status word: within, watch from 0.9, over from 1.0; unknown where there is no utilisation."""
    if utilisation is None:
        return "unknown"
    return "over" if utilisation >= LIMIT else "watch" if utilisation >= WATCH else "within"


def known(value: float) -> float | None:
    """A value as results say it: None for what is not determined."""
    return float(value) if math.isfinite(value) else None
