"""The real command line, run in this process, with its JSON."""

from __future__ import annotations

import contextlib
import io
import json
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from assess.cli.main import run
from tests.black_box.describe import Bridge, Visit, bridge_text, write_visit


@dataclass
class Said:
    """What a command line left behind."""

    code: int
    out: str
    err: str


class Record:
    """A record in a folder, and the commands on it."""

    def __init__(self, folder: Path):
        folder.mkdir(parents=True, exist_ok=True)
        self.folder = folder

    def say(self, *words: str) -> Said:
        out, err = io.StringIO(), io.StringIO()
        with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
            code = run(["--record", str(self.folder / "record.sqlite"), *words])
        return Said(code, out.getvalue(), err.getvalue())

    def done(self, *words: str) -> Said:
        said = self.say(*words)
        assert said.code == 0, (words, said.code, said.err)
        return said

    def json(self, *words: str) -> Any:
        return json.loads(self.done(*words, "--json").out)

    def add(self, bridge: Bridge, rng: np.random.Generator | None = None) -> None:
        path = self.folder / "bridge.toml"
        path.write_text(bridge_text(bridge, rng))
        self.done("bridge", "add", str(path))

    def log(
        self, bridge: Bridge, visit: Visit, rng: np.random.Generator | None = None, *, table: bool = True
    ) -> None:
        self.done("visit", "log", str(write_visit(self.folder, bridge, visit, rng, table=table)))
