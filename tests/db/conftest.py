"""The contract's example files, and a record that holds them."""

from __future__ import annotations

import datetime as dt
import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from db.documents import BridgeDoc, VisitDoc
from db.errors import BedstoneError
from db.exchange import parse_bridge, parse_visit
from db.store import Record, open_record

DATA = Path(__file__).parents[1] / "data"


@pytest.fixture(scope="session")
def bridge_text() -> str:
    return (DATA / "bridge-example.toml").read_text(encoding="utf-8")


@pytest.fixture(scope="session")
def visit_text() -> str:
    return (DATA / "visit-example.toml").read_text(encoding="utf-8")


@pytest.fixture(scope="session")
def bridge(bridge_text: str) -> BridgeDoc:
    return parse_bridge(bridge_text, file="bridge.toml")


@pytest.fixture(scope="session")
def visit(visit_text: str) -> VisitDoc:
    return parse_visit(visit_text, file="visit.toml")


@pytest.fixture(scope="session")
def visit_on(visit_text: str) -> Callable[[dt.date], VisitDoc]:
    """The example visit, made on another day."""

    def make(day: dt.date) -> VisitDoc:
        return parse_visit(changed(visit_text, "2024-05-14", day.isoformat()), file="visit.toml")

    return make


@pytest.fixture(params=["disk", "memory"])
def record(request: pytest.FixtureRequest, tmp_path: Path) -> Iterator[Record]:
    """An empty record; one test body for every store."""
    location = str(tmp_path / "record.sqlite") if request.param == "disk" else "sqlite://"
    with open_record(location, create=True) as opened:
        yield opened


@pytest.fixture
def path(tmp_path: Path, bridge: BridgeDoc) -> str:
    """Where a record on disk lies that holds the example bridge."""
    location = str(tmp_path / "record.sqlite")
    with open_record(location, create=True) as opened:
        opened.add_bridge(bridge)
    return location


def changed(text: str, *pairs: str) -> str:
    """The text with the first of each pair, which must be there, replaced once by the second."""
    for old, new in zip(pairs[::2], pairs[1::2], strict=True):
        assert old in text, old
        text = text.replace(old, new, 1)
    return text


def line_of(call: Callable[[], object]) -> str:
    """The one line of the error that the call must raise."""
    with pytest.raises(BedstoneError) as caught:
        call()
    line = str(caught.value)
    assert "\n" not in line
    assert line.isprintable()
    assert caught.value.remedy
    return line


@pytest.fixture(scope="session")
def fresh_imports() -> Callable[[str], set[str]]:
    """What modules a fresh interpreter holds after some code."""

    def run(code: str) -> set[str]:
        script = f"{code}\nimport sys\nprint(*sys.modules)"
        done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True)
        return {name.partition(".")[0] for name in done.stdout.split()}

    return run
