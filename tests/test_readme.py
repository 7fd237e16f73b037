"""The README's blocks run, in order, and print what they show.

A ```console block holds commands (lines that start with "$ ") and below each what it prints. A line
"..." stands for any number of lines; a command with nothing below it may print anything.
"""

from __future__ import annotations

import os
import re
import subprocess
import sys
from dataclasses import dataclass
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
README = ROOT / "README.md"
BLOCK = re.compile(r"^```console\n(.*?)^```$", re.MULTILINE | re.DOTALL)
ELISION = "..."


@dataclass(frozen=True)
class Step:
    """A command of the README and the lines shown below it."""

    command: str
    shown: tuple[str, ...]


def read_steps(text: str) -> list[Step]:
    steps: list[Step] = []
    for block in BLOCK.findall(text):
        command, shown = None, []
        for line in [*block.splitlines(), "$ "]:
            if not line.startswith("$ "):
                shown.append(line)
                continue
            if command is not None:
                steps.append(Step(command, tuple(shown)))
            command, shown = line[2:], []
    return steps


def normalise(line: str) -> str:
    """Leave out what differs from one run or version to the next."""
    line = re.sub(r"\b[0-9a-f]{64}\b|\b[0-9a-f]{12}\b", "DIGEST", line)
    return re.sub(r"\b\d+\.\d+\.\d+\b", "VERSION", line).rstrip()


def agrees(shown: tuple[str, ...], printed: str) -> bool:
    """Whether the printed text is the shown one, with "..." for any number of lines."""
    if not shown:
        return True
    parts = [r"(?:.*\n)*" if line.strip() == ELISION else re.escape(normalise(line)) + "\n" for line in shown]
    text = "".join(f"{normalise(line)}\n" for line in printed.splitlines())
    return re.fullmatch("".join(parts), text) is not None


def test_the_readme_prints_what_it_shows(tmp_path):
    env = {key: value for key, value in os.environ.items() if not key.startswith("BEDSTONE_")}
    env["PATH"] = f"{Path(sys.executable).parent}{os.pathsep}{env['PATH']}"
    steps = read_steps(README.read_text(encoding="utf-8"))
    assert len(steps) > 8
    for step in steps:
        done = subprocess.run(
            ["/bin/sh", "-c", step.command],
            cwd=tmp_path,
            env=env,
            stdin=subprocess.DEVNULL,
            capture_output=True,
            text=True,
            check=False,
        )
        assert done.returncode == 0, f"$ {step.command}\n{done.stderr}"
        assert agrees(step.shown, done.stdout), f"$ {step.command}\nprinted:\n{done.stdout}"


def test_the_readme_uses_every_command():
    from assess.cli.main import COMMANDS

    commands = " ".join(step.command for step in read_steps(README.read_text(encoding="utf-8")))
    assert [name for name in COMMANDS if f"bedstone {name}" not in commands] == []


@pytest.mark.parametrize("name", ["README.md", "DEVELOPERS.md"])
def test_every_file_that_a_guide_names_is_there(name):
    text = (ROOT / name).read_text(encoding="utf-8")
    links = re.findall(r"\]\(([^)#:]+)\)", text)
    assert links
    assert [link for link in links if not (ROOT / link).exists()] == []


def test_a_block_is_read_as_commands_and_what_is_shown_below():
    text = "```sh\n$ not me\n```\n```console\n$ one\na\n\nb\n$ two\n```\n"
    assert read_steps(text) == [Step("one", ("a", "", "b")), Step("two", ())]


@pytest.mark.parametrize(
    ("shown", "printed", "same"),
    [
        (("a", "b"), "a\nb\n", True),
        (("a",), "a\nb\n", False),
        (("a", "..."), "a\nb\nc\n", True),
        (("...", "c"), "a\nb\nc\n", True),
        (("...", "c"), "a\nb\n", False),
        (("a", "...", "c"), "a\nc\n", True),
        ((), "anything\n", True),
        (("version 0.1.0",), "version 0.2.0\n", True),
        (("0.647",), "0.648\n", False),
        (("digest " + "a" * 64,), "digest " + "b" * 64 + "\n", True),
    ],
)
def test_what_is_printed_is_held_against_what_is_shown(shown, printed, same):
    assert agrees(shown, printed) is same
