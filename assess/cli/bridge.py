"""`bedstone bridge add | list | show | draft`."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

import click

from assess.cli.failures import cannot_write, wrong
from assess.cli.json_out import print_json
from assess.cli.params import bridge_argument, file_argument, json_option, read_date


@click.group("bridge", short_help="Draft, add, list and show bridge files.", no_args_is_help=False)
def command() -> None:
    """Bridge files: draft one, add one to the record, list them, show what one comes to.

    \b
    Example:
      bedstone bridge draft --spans "12 m, 15 m, 12 m" -o my-bridge.toml
      bedstone bridge add my-bridge.toml
      bedstone bridge list
      bedstone bridge show quillmere
    """


@command.command("add")
@file_argument
@click.pass_obj
def add(record: str, file: Path) -> None:
    """Take a bridge file into the record; a changed file becomes a new revision.

    \b
    Example:
      bedstone bridge add quillmere.toml
    """
    from assess import workflow
    from assess.cli.tables.records import show_bridge_taken

    document, taken = workflow.add_bridge(record, file)
    show_bridge_taken(document, taken, workflow.bridge_view(document))


@command.command("list")
@json_option
@click.pass_obj
def list_(record: str, as_json: bool) -> None:
    """List the bridges of the record.

    \b
    Example:
      bedstone bridge list
      bedstone bridge list --json
    """
    from assess import workflow
    from assess.cli.tables.records import show_bridges

    bridges = workflow.list_bridges(record)
    if as_json:
        print_json({"bridges": bridges})
    else:
        show_bridges(bridges)


@command.command("show")
@bridge_argument
@click.option(
    "--visit",
    metavar="DATE",
    callback=read_date,
    help="Losses measured up to this day, as YYYY-MM-DD; all of them if left out.",
)
@json_option
@click.pass_obj
def show(record: str, bridge: str, visit: dt.date | None, as_json: bool) -> None:
    """Show what a bridge file comes to: sections, capacities, what is lost, and pads as designed.

    Capacities are before the factor on resistance; where the file gives one and the plates give
    one, the lower governs.

    \b
    Example:
      bedstone bridge show quillmere
      bedstone bridge show quillmere --visit 2024-05-14 --json
    """
    from assess import workflow
    from assess.cli.tables.sections import show_bridge

    view = workflow.show_bridge(record, bridge, visit=visit)
    if as_json:
        print_json(view.shown)
    else:
        show_bridge(view)


@command.command("draft")
@click.option(
    "--spans", metavar="LENGTHS", required=True, help='Span lengths with units, such as "12 m, 15 m, 12 m".'
)
@click.option(
    "-o", "--output", metavar="FILE", default="-", show_default=True, help="Where to write; - prints it."
)
def draft(spans: str, output: str) -> None:
    """Write a commented starter bridge file, to be filled in and added.

    An existing file is never overwritten.

    \b
    Example:
      bedstone bridge draft --spans "12 m, 15 m, 12 m" -o my-bridge.toml
    """
    from db.exchange import draft_bridge

    text = draft_bridge(spans)
    if output == "-":
        click.echo(text, nl=not text.endswith("\n"))
        return
    _write_new(Path(output), text)
    click.echo(f"Wrote {output}. Fill it in, then: bedstone bridge add {output}")


def _write_new(path: Path, text: str) -> None:
    try:
        with path.open("x", encoding="utf-8") as file:
            file.write(text)
    except FileExistsError as error:
        problem = "this file exists already and is not overwritten"
        raise wrong(problem, file=path, remedy="give -o another name") from error
    except OSError as error:
        raise cannot_write(path, error) from error
