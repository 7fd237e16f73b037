"""Help: every command has an example, and asking for it costs nothing."""

from __future__ import annotations

import shlex
import subprocess
import sys

import click
import pytest

from assess import __version__
from assess.cli.main import COMMANDS, cli

HEAVY = ("numpy", "scipy", "pandas", "matplotlib", "sqlalchemy", "pint", "jinja2", "rich", "alembic", "emcee")


def command_paths() -> list[tuple[str, ...]]:
    paths: list[tuple[str, ...]] = [()]
    for name in COMMANDS:
        command = cli.get_command(click.Context(cli), name)
        paths.append((name,))
        if isinstance(command, click.Group):
            paths.extend((name, inner) for inner in command.commands)
    return paths


@pytest.mark.parametrize("path", command_paths(), ids=" ".join)
def test_every_command_shows_an_example_of_itself(bedstone, path):
    said = bedstone(*path, "--help")
    assert said.code == 0
    assert said.err == ""
    example = said.out.split("Example:\n")[1].split("\n\n")[0]
    assert f"bedstone {' '.join(path)}".strip() in example


def example_lines() -> list[str]:
    lines: list[str] = []
    for path in command_paths():
        command: click.Command = cli
        ctx = click.Context(cli, info_name="bedstone")
        for name in path:
            assert isinstance(command, click.Group)
            command = command.get_command(ctx, name)
        text = command.get_help(click.Context(command))
        lines.extend(text.split("Example:\n")[1].split("\n\n")[0].splitlines())
    return sorted({line.strip() for line in lines})


@pytest.mark.parametrize("line", example_lines())
def test_every_example_is_a_call_that_click_accepts(line):
    program, *words = shlex.split(line)
    assert program == "bedstone"
    if words[0] == "--record":
        words = words[2:]
    command: click.Command | None = cli
    ctx = click.Context(cli, info_name="bedstone")
    while isinstance(command, click.Group):
        command = command.get_command(ctx, words.pop(0))
    assert command is not None
    command.make_context("example", words, parent=ctx).close()


def test_the_commands_stand_in_the_order_of_a_first_hour(bedstone):
    listed = bedstone("--help").out.split("Commands:\n")[1]
    places = [listed.index(f"\n  {name} " if name != "init" else "  init ") for name in COMMANDS]
    assert places == sorted(places)
    assert "..." not in listed


@pytest.mark.parametrize(
    "words", [["--help"], ["--version"], ["calibrate", "--help"], ["bridge", "draft", "--help"]]
)
def test_help_imports_nothing_heavy(words):
    code = (
        "import sys\n"
        "from assess.cli.main import run\n"
        f"code = run({words!r})\n"
        f"heavy = [name for name in {HEAVY!r} if name in sys.modules]\n"
        "assert not heavy, heavy\n"
        "sys.exit(code)\n"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
    assert done.stdout


def test_the_version_is_the_packages_own(bedstone):
    assert bedstone("--version").out == f"bedstone {__version__}\n"
