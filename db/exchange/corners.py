"""Gaps at the four corners of a pad that no plane girder leaves: a corner or a row may be swapped."""

from __future__ import annotations

from db.documents import ReadingDoc, VisitDoc
from db.exchange.reduction import BEYOND, exchanges_that_flatten, rows_exchanged
from db.raw_doc import RawDoc


def corner_queries(visit: VisitDoc) -> list[str]:
    """What to look at again in the four-corner gaps of a visit."""
    said = []
    for reading in visit.readings:
        raw = reading.raw
        if raw is None or not raw.gaps or reading.derived:
            continue
        where = f'gaps at "{reading.support}" ({reading.girder}), {reading.state}'
        said += [f"{where}: {what} ({reading.source})" for what in (*_twisted(raw), *_turned(reading, raw))]
    return said


def _twisted(raw: RawDoc) -> list[str]:
    if raw.twist is None or raw.twist_sd is None or abs(raw.twist) <= BEYOND * raw.twist_sd:
        return []
    mends = exchanges_that_flatten(raw)
    would = f": {', or '.join(mends)}, exchanged in one of its lists, would leave a plane" if mends else ""
    one = (
        f"one diagonal closes by {1e3 * abs(raw.twist) / 2.0:.2f} mm more than the other (standard deviation "
        f"{1e3 * raw.twist_sd / 2.0:.2f} mm), which no plane girder does; a swapped corner?{would}"
    )
    return [one]


def _turned(reading: ReadingDoc, raw: RawDoc) -> list[str]:
    if reading.value <= 0.0 or not rows_exchanged(raw):
        return []
    one = (
        "one side opens while the pad as a whole closes, and would not if near and far were exchanged in one list; "
        "near is towards x = 0"
    )
    return [one]
