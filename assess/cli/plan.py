"""`bedstone plan`."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from assess.cli.failures import cannot_write, wrong
from assess.cli.json_out import print_json
from assess.cli.params import bridge_argument, json_option
from assess.cli.progress import progress_on_stderr

if TYPE_CHECKING:
    from db.errors import BedstoneError

PICTURES = (".svg", ".png")


@click.command("plan", short_help="Plan what to read at the next visit.")
@bridge_argument
@click.option("--vehicle", metavar="ID", required=True, help="The vehicle of the bridge file that will come.")
@click.option(
    "--readings",
    type=click.IntRange(1, 100),
    default=8,
    show_default=True,
    metavar="N",
    help="Readings on each girder.",
)
@click.option(
    "--positions",
    type=click.IntRange(1, 20),
    default=3,
    show_default=True,
    metavar="N",
    help="Positions of the vehicle for each girder, at most.",
)
@click.option("--girder", metavar="ID", help="This girder only.")
@click.option(
    "-o",
    "--output",
    metavar="FILE.svg|png",
    type=click.Path(path_type=Path),
    help="A picture of positions and places to write.",
)
@click.option(
    "--draft",
    metavar="FILE.toml",
    type=click.Path(path_type=Path),
    help="A visit file to write, its values to be filled in.",
)
@json_option
@click.pass_obj
def command(
    record: str,
    bridge: str,
    vehicle: str,
    readings: int,
    positions: int,
    girder: str | None,
    output: Path | None,
    draft: Path | None,
    as_json: bool,
) -> None:
    """Plan the next visit: where the vehicle stands, and the readings that tell most.

    Readings are chosen on each girder for the section that is the worst by today's knowledge, and
    stand in order of worth, each with what that section's utilisation is still unsure by after it.

    \b
    Example:
      bedstone plan quillmere --vehicle "ballast wagon"
      bedstone plan quillmere --vehicle "ballast wagon" --readings 12 -o plan.svg
      bedstone plan quillmere --vehicle "ballast wagon" --draft next-visit.toml
    """
    if output is not None:
        _check_picture(output)
    if draft is not None and draft.exists():
        raise _old(draft)
    from assess import workflow
    from assess.cli.tables.plan import show_plan

    with progress_on_stderr() as progress:
        result = workflow.plan(
            record,
            bridge,
            vehicle=vehicle,
            readings=readings,
            positions=positions,
            girder=girder,
            progress=progress,
        )
    if draft is not None:
        _write_new(draft, workflow.draft_visit(result))
        click.echo(f"Wrote {draft}. Fill it in, then: bedstone visit log {draft}", err=True)
    if output is not None:
        from assess.report import write_plan

        try:
            write_plan(result, output)
        except OSError as error:
            raise cannot_write(output, error) from error
        click.echo(f"Wrote the picture {output}.", err=True)
    if as_json:
        print_json(result)
    else:
        show_plan(result)


def _check_picture(output: Path) -> None:
    if output.suffix.lower() not in PICTURES:
        raise wrong(
            "a picture is written as .svg or .png", file=output, remedy="name it so, for example plan.svg"
        )
    if not output.parent.is_dir():
        raise wrong("this folder does not exist", file=output.parent, remedy="make it, or name another place")


def _old(draft: Path) -> BedstoneError:
    return wrong(
        "this file exists already and is not overwritten", file=draft, remedy="give --draft another name"
    )


def _write_new(path: Path, text: str) -> None:
    try:
        with path.open("x", encoding="utf-8") as file:
            file.write(text)
    except FileExistsError as error:
        raise _old(path) from error
    except OSError as error:
        raise cannot_write(path, error) from error
