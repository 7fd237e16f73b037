"""`bedstone demo`: the whole job on an invented bridge, by the same commands that a user types."""

from __future__ import annotations

import shlex
from importlib import resources
from pathlib import Path

import click

from assess.cli.failures import cannot_write, wrong

BRIDGE = "hollin-water"
RECORD = "demo.sqlite"
SUFFIXES = (".toml", ".csv")


@click.command("demo", short_help="Run everything on an invented bridge.")
@click.argument("folder", metavar="[FOLDER]", default="bedstone-demo", type=click.Path(path_type=Path))
@click.pass_context
def command(ctx: click.Context, folder: Path) -> None:
    """Run everything on an invented bridge, in a folder of its own (bedstone-demo if none is named).

    \b
    Example:
      bedstone demo
      bedstone demo /tmp/first-look
    """
    files = _sample_files()
    record, page = folder / RECORD, folder / f"{BRIDGE}.html"
    _check_free(folder, [*files, RECORD, "bedstone.sqlite", page.name])
    _copy(files, folder)
    click.echo(f"Copied {len(files)} example files into {folder}.")
    for words in _command_lines(files, folder=folder, page=page):
        _run_as_typed(ctx, ["--record", str(record), *words])
    click.echo()
    click.echo(f"The report is {page}; open it in a browser.")
    click.echo("All data of this demo is invented: no such bridge, and no such readings, exist.")


def _sample_files() -> dict[str, bytes]:
    folder = resources.files("sample_data")
    names = sorted(entry.name for entry in folder.iterdir() if entry.name.endswith(SUFFIXES))
    return {name: folder.joinpath(name).read_bytes() for name in names}


def _check_free(folder: Path, names: list[str]) -> None:
    there = [name for name in names if (folder / name).exists()]
    if there:
        problem = f"the folder already has {there[0]}, and the demo overwrites nothing"
        remedy = "name another folder, for example: bedstone demo another-folder"
        raise wrong(problem, file=folder, remedy=remedy)


def _copy(files: dict[str, bytes], folder: Path) -> None:
    try:
        folder.mkdir(parents=True, exist_ok=True)
        for name, content in files.items():
            (folder / name).write_bytes(content)
    except OSError as error:
        raise cannot_write(folder, error) from error


def _command_lines(files: dict[str, bytes], *, folder: Path, page: Path) -> list[list[str]]:
    visits = [name for name in files if name.startswith("visit-") and name.endswith(".toml")]  # dates sort
    return [
        ["init"],
        ["bridge", "add", str(folder / f"{BRIDGE}.toml")],
        *(["visit", "log", str(folder / name)] for name in visits),
        ["calibrate", BRIDGE, "--all"],
        ["assess", BRIDGE],
        ["trend", BRIDGE],
        ["report", BRIDGE, "-o", str(page)],
    ]


def _run_as_typed(ctx: click.Context, words: list[str]) -> None:
    click.echo()
    click.echo(f"$ bedstone {shlex.join(words)}")
    program = ctx.find_root().command
    with program.make_context("bedstone", list(words)) as inner:
        program.invoke(inner)
