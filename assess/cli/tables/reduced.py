"""What raw readings of a visit were reduced to: from how many, how they repeat, how far they drift."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_table, print_wrapped
from assess.cli.tables.words import number

if TYPE_CHECKING:
    from db.documents import ReadingDoc
    from db.raw_doc import RawDoc

_UNKNOWN = "not known"


def entered(text: str) -> str:
    """Return an entered value without the words on how it came about."""
    return text.partition(" (")[0]


def show_reduced(readings: Sequence[ReadingDoc]) -> None:
    """Show repeatability and drift of the readings that were reduced, a line a quantity, unit and kind."""
    groups: dict[tuple[str, str, str], list[tuple[ReadingDoc, RawDoc]]] = {}
    for reading in readings:
        if reading.raw is not None:
            groups.setdefault((reading.quantity, reading.unit, _kind(reading.raw)), []).append(
                (reading, reading.raw)
            )
    if not groups:
        return
    click.echo()
    click.echo("Reduced from raw readings")
    print_table(
        [
            "quantity",
            "from",
            "readings",
            "of each",
            "sd of one\nas given",
            "as it\nrepeats",
            "greatest\ndrift",
        ],
        [[quantity, kind, *_line(some, unit)] for (quantity, unit, kind), some in groups.items()],
        words=2,
    )
    if any(raw.repeats and raw.repeatability is None for some in groups.values() for _, raw in some):
        print_wrapped(
            "How readings repeat is told by 5 degrees of freedom at least; where it is not, the sd as given counts."
        )
    if any(reading.derived for reading in readings):
        print_wrapped("A rotation from four gaps is that of the girder against the seat.")


def _kind(raw: RawDoc) -> str:
    if raw.gaps:
        return "four gaps"
    return "repeats less zeros" if raw.zero_before or raw.zero_after else "repeats"


def _line(some: Sequence[tuple[ReadingDoc, RawDoc]], unit: str) -> list[str]:
    raws = [raw for _, raw in some]
    counts = [len(raw.gaps or raw.repeats) for raw in raws]
    given = sorted({(raw.sd, raw.sd_entered) for raw in raws})
    told = [raw.repeatability for raw in raws if raw.repeatability is not None]
    drifts = [raw.drift for raw in raws if raw.drift is not None]
    return [
        str(len(some)),
        _reach(str(n) for n in (min(counts), max(counts))),
        _reach(text for _, text in (given[0], given[-1])),
        _in(told[0], unit) if told else _UNKNOWN,
        _in(max(drifts, key=abs), unit) if drifts else _UNKNOWN,
    ]


def _in(value: float, unit: str) -> str:
    from db.quantities import to_unit

    return f"{number(to_unit(value, unit))} {unit}"


def _reach(texts: Iterable[str]) -> str:
    least, most = texts
    return least if least == most else f"{least} to {most}"
