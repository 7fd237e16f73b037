"""Progress: nothing at all unless stderr is a terminal and the work takes a while."""

from __future__ import annotations

import io
import sys

import pytest

from assess.cli import progress


class Terminal(io.StringIO):
    def isatty(self) -> bool:
        return True


def test_there_is_no_progress_when_stderr_is_no_terminal(monkeypatch):
    monkeypatch.setattr(sys, "stderr", io.StringIO())
    with progress.progress_on_stderr() as tell:
        assert tell is None


def test_short_work_shows_nothing(monkeypatch):
    terminal = Terminal()
    monkeypatch.setattr(sys, "stderr", terminal)
    with progress.progress_on_stderr() as tell:
        tell("calibrating", 0, 2)
        tell("calibrating", 2, 2)
    assert terminal.getvalue() == ""


def test_long_work_shows_what_is_done_and_leaves_stdout_alone(monkeypatch, capsys):
    terminal = Terminal()
    monkeypatch.setattr(sys, "stderr", terminal)
    monkeypatch.setattr(progress, "PATIENCE_SECONDS", 0.0)
    monkeypatch.setenv("TERM", "xterm")
    with progress.progress_on_stderr() as tell:
        tell("calibrating [north]", 1, 6)
        tell("calibrating [north]", 6, 6)
    assert "calibrating [north]" in terminal.getvalue()
    assert "6/6" in terminal.getvalue()
    assert capsys.readouterr().out == ""


def test_a_failure_in_the_work_comes_through(monkeypatch):
    monkeypatch.setattr(sys, "stderr", Terminal())
    monkeypatch.setattr(progress, "PATIENCE_SECONDS", 0.0)
    with pytest.raises(ZeroDivisionError), progress.progress_on_stderr() as tell:
        tell("calibrating", 1, 6)
        raise ZeroDivisionError
