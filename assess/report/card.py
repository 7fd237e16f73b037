"""The field card: trigger readings on one sheet to take under the bridge, as HTML or as PDF."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path

from assess.report.files import write_whole
from assess.report.page import pages
from assess.report.words import MINUS, number, plain
from assess.results import TriggerReading, TriggersResult

WORSE, OTHER = ("softer", "down"), ("stiffer", "up")
ROWS = 24  # of readings on a sheet


@dataclass(frozen=True, kw_only=True)
class CardRow:
    """One reading: now, then watch and limit each way, as (value, section that governs)."""

    support: str
    reading: str
    now: str
    cells: tuple[tuple[str, str], ...]  # softer or down: watch, limit; stiffer or up: watch, limit


@dataclass(frozen=True, kw_only=True)
class CardGirder:
    """The readings of a girder, and what is reached already."""

    name: str
    past: str
    rows: tuple[CardRow, ...]


@dataclass(frozen=True, kw_only=True)
class Card:
    """All that a field card shows."""

    title: str
    basis: str
    watch: str
    limit: str
    girders: tuple[CardGirder, ...]
    notes: tuple[str, ...]
    origin: str

    @property
    def sheets(self) -> tuple[tuple[CardGirder, ...], ...]:
        """The girders, sheet by sheet; one with more readings than a sheet holds goes on on the next."""
        parts = [
            replace(girder, rows=girder.rows[i : i + ROWS])
            for girder in self.girders
            for i in range(0, max(len(girder.rows), 1), ROWS)
        ]
        sheets: list[list[CardGirder]] = [[]]
        for part in parts:
            if sheets[-1] and sum(len(one.rows) for one in (*sheets[-1], part)) > ROWS:
                sheets.append([])
            sheets[-1].append(part)
        return tuple(tuple(sheet) for sheet in sheets)


def card_of(result: TriggersResult) -> Card:
    """Put trigger readings in the order of a field card."""
    names = list(dict.fromkeys(one.girder for one in result.triggers))
    visit = result.calibration_visit
    basis = "nominal pads, nothing calibrated" if visit is None else f"as calibrated from the visit {visit}"
    return Card(
        title=plain(f"{result.name}: trigger readings"),
        basis=f"One pad or one seat moves, all else {basis}. mm; compression and settlement positive downward.",
        watch=f"{result.watch:g}",
        limit=f"{result.limit:g}",
        girders=tuple(_girder(result, name) for name in names),
        notes=tuple(plain(one) for one in _notes(result)),
        origin=f"Bedstone {result.version}, inputs {result.input_digest[:12]}",
    )


def _notes(result: TriggersResult) -> list[str]:
    """The cautions that speak of the readings themselves; all of them stand in the output of the command."""
    begins = (
        "Compressions and deflections",
        "A trigger reading",
        "Trigger values",
        "There is no visit",
        "No calibration",
        "These figures",
    )
    return [one for one in result.cautions if one.startswith(begins)]


def _girder(result: TriggersResult, name: str) -> CardGirder:
    past = "; ".join(
        f"{one.section} {number(one.utilisation)} ({one.status})" for one in result.past if one.girder == name
    )
    places: dict[tuple[str, str, str, float | None], dict[str, TriggerReading]] = {}
    for one in result.triggers:
        if one.girder == name:
            places.setdefault((one.support, one.quantity, one.state, one.at_m), {})[one.way] = one
    return CardGirder(name=plain(name), past=plain(past), rows=tuple(_row(ways) for ways in places.values()))


def _row(ways: dict[str, TriggerReading]) -> CardRow:
    first = next(iter(ways.values()))
    place = "" if first.at_m is None else f" at {first.at_m:g} m"
    state = "" if first.quantity == "settlement" else f", {first.state}"
    return CardRow(
        support=plain(first.support),
        reading=plain(f"{first.quantity}{place}{state}"),
        now=_mm(first.now_mm),
        cells=tuple(cell for names in (WORSE, OTHER) for cell in _cells(ways, names)),
    )


def _cells(ways: dict[str, TriggerReading], names: Sequence[str]) -> list[tuple[str, str]]:
    one = next((ways[name] for name in names if name in ways), None)
    if one is None:
        return [("not looked at", "")] * 2
    return [
        _cell(one, one.watch_mm, one.watch_governs, one.watch_reason),
        _cell(one, one.limit_mm, one.limit_governs, one.limit_reason),
    ]


def _cell(
    one: TriggerReading, value: float | None, governs: str | None, reason: str | None
) -> tuple[str, str]:
    if value is not None:
        return _mm(value), _short(governs or "")
    if reason is not None and reason.startswith("none in range"):
        return f"none to {_mm(one.range_mm)}", ""
    return "not told", "lifts off a pad"


def _mm(value: float | None) -> str:
    """Three figures, and no finer than a gauge reads."""
    if value is None:
        return "not told"
    return number(value) if abs(value) >= 1.0 else f"{round(value, 2) + 0.0:.2f}".replace("-", MINUS)


def _short(section: str) -> str:
    """Name a section in few letters: "sag span 1", "hog pier 1", "shear span 1 at pier 1"."""
    for word, short in (("sagging in ", "sag "), ("hogging at ", "hog "), ("shear in ", "shear ")):
        section = section.replace(word, short)
    return plain(section).replace('"', "")


def render_card(result: TriggersResult) -> str:
    """Return the field card as a self-contained HTML document."""
    return pages().get_template("card.html.j2").render(card=card_of(result))


def write_card(result: TriggersResult, path: Path) -> None:
    """Write the field card, PDF where the name ends so and HTML otherwise; whole or not at all.

    Raises
    ------
    OSError
        If the folder is missing or cannot be written; nothing is left behind.
    """
    if path.suffix.lower() == ".pdf":
        from assess.report.card_pdf import draw_card  # matplotlib: loaded only when it draws

        write_whole(path, draw_card(card_of(result)))
    else:
        write_whole(path, render_card(result).encode("utf-8"))
