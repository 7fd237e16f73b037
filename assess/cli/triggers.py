"""`bedstone triggers`."""

from __future__ import annotations

from pathlib import Path

import click

from assess.cli.failures import cannot_write, wrong
from assess.cli.json_out import print_json
from assess.cli.params import bridge_argument, json_option
from assess.cli.progress import progress_on_stderr

SUFFIXES = (".html", ".pdf")


@click.command("triggers", short_help="Say at which reading a section reaches watch or its limit.")
@bridge_argument
@click.option(
    "--state",
    metavar="STATE",
    help="Test state to read compressions and deflections in; left out: for each pad the one that presses it most.",
)
@click.option(
    "-o",
    "--output",
    metavar="CARD",
    type=click.Path(path_type=Path),
    help="Write a field card to take under the bridge: card.html or card.pdf.",
)
@json_option
@click.pass_obj
def command(record: str, bridge: str, state: str | None, output: Path | None, as_json: bool) -> None:
    """Say at which compression, deflection or seat level a first section reaches watch or its limit.

    One pad or one seat moves at a time, both ways, and all else stays as calibrated.

    \b
    Example:
      bedstone triggers quillmere
      bedstone triggers quillmere --state T1 --json
      bedstone triggers quillmere -o card.pdf
    """
    if output is not None:
        _check(output)
    from assess import workflow

    with progress_on_stderr() as progress:
        result = workflow.triggers(record, bridge, state=state, progress=progress)
    if output is not None:
        from assess.report import write_card

        try:
            write_card(result, output)
        except OSError as error:
            raise cannot_write(output, error) from error
        click.echo(f"Wrote the field card {output}.", err=as_json)
    if as_json:
        print_json(result)
    elif output is None:
        from assess.cli.tables.triggers import show_triggers

        show_triggers(result)


def _check(output: Path) -> None:
    if output.suffix.lower() not in SUFFIXES:
        raise wrong("a field card is HTML or PDF", file=output, remedy="name it card.html or card.pdf")
    if not output.parent.is_dir():
        raise wrong("this folder does not exist", file=output.parent, remedy="make it, or name another place")
