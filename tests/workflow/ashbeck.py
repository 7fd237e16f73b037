"""A bridge from its drawings, with known pads: sections from plates with losses, pads from their geometry."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from pathlib import Path
from typing import Any

from assess import workflow
from assess.workflow.building import GirderModel
from assess.workflow.pads import cold_shift
from db.exchange import parse_bridge
from tests.workflow.invented import BRIDGE, write_visit

DRAWN = BRIDGE.with_name("bridge-plates-and-pads.toml")
PADS = ("west abutment", "pier 1", "pier 2", "east abutment")


def text_with(*changes: tuple[str, str]) -> str:
    """The file with changes, each of a text that stands there."""
    text = DRAWN.read_text(encoding="utf-8")
    for old, new in changes:
        assert old in text, old
        text = text.replace(old, new)
    return text


def model(*changes: tuple[str, str], as_of: dt.date | None = None) -> GirderModel:
    bridge = parse_bridge(text_with(*changes), file="bridge.toml")
    return GirderModel(bridge, bridge.girders[0], as_of)


def added(folder: Path, *changes: tuple[str, str]) -> str:
    """A record with the bridge in it."""
    path, url = folder / "bridge.toml", str(folder / "record.sqlite")
    path.write_text(text_with(*changes), encoding="utf-8")
    if not Path(url).exists():
        workflow.init_record(url)
    workflow.add_bridge(url, path)
    return url


def log(
    url: str, folder: Path, date: str, ratios: Sequence[float], *, degc: float = 20.0, **options: Any
) -> None:
    """A visit on which the pads have `ratios` of nominal at 20 degC; the cold of the day is in the readings."""
    girder = model(as_of=dt.date.fromisoformat(date))
    shift = cold_shift(girder.doc, list(girder.pads), degc).shift
    path = write_visit(
        folder,
        date,
        ratios,
        temperature=f"{degc:g} degC",
        colder=shift,
        girder=girder,
        **{"pads": PADS, **options},
    )
    workflow.log_visit(url, path)
