"""Help: every command has an example, and asking for it costs nothing."""

from __future__ import annotations

import subprocess
import sys

import click
import pytest

from assess import __version__
from assess.cli.main import COMMANDS, cli

HEAVY = ("numpy", "scipy", "pandas", "matplotlib", "sqlalchemy", "pint", "jinja2", "rich", "alembic")


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


@pytest.mark.parametrize("path", command_paths(), ids=" ".join)
def test_every_example_is_a_call_that_click_accepts(path):
    command, ctx = cli, click.Context(cli, info_name="bedstone")
    text = cli.get_help(ctx)
    for name in path:
        command = command.get_command(ctx, name)
        ctx = click.Context(command, info_name=name, parent=ctx)
        text = command.get_help(ctx)
    lines = [line.strip() for line in text.split("Example:\n")[1].split("\n\n")[0].splitlines()]
    import shlex

    for line in lines:
        words = shlex.split(line)[1:]
        outer = cli.make_context("bedstone", words)
        with outer:
            name, inner, rest = cli.resolve_command(outer, [*outer._protected_args, *outer.args])
            inner.make_context(name, rest, parent=outer).close()


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
