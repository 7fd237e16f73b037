from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import pytest

from assess.cli.main import run


@dataclass(frozen=True)
class Said:
    """What a command line left behind."""

    code: int
    out: str
    err: str


@pytest.fixture
def bedstone(capsys: pytest.CaptureFixture[str]) -> Callable[..., Said]:
    def call(*words: str) -> Said:
        capsys.readouterr()
        code = run(words)
        out, err = capsys.readouterr()
        return Said(code, out, err)

    return call


@pytest.fixture(autouse=True)
def quiet_surroundings(monkeypatch: pytest.MonkeyPatch, tmp_path) -> None:
    """A command runs in an empty folder, with nothing in the environment that is meant for it."""
    monkeypatch.delenv("BEDSTONE_RECORD", raising=False)
    monkeypatch.delenv("BEDSTONE_TRACEBACK", raising=False)
    monkeypatch.chdir(tmp_path)


@pytest.fixture
def workflow(monkeypatch: pytest.MonkeyPatch):
    """Replace a function of the workflow: `workflow(assess=lambda *a, **k: ...)`."""
    from assess import workflow as room

    def replace(**functions: Callable[..., object]) -> None:
        for name, function in functions.items():
            monkeypatch.setattr(room, name, function, raising=False)

    return replace
