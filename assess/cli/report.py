"""`bedstone report`."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

import click

from assess.cli.failures import cannot_write, wrong
from assess.cli.params import bridge_argument, today_option
from assess.cli.progress import progress_on_stderr


@click.command("report", short_help="Write the report, one self-contained HTML file.")
@bridge_argument
@today_option
@click.option(
    "-o",
    "--output",
    metavar="FILE.html",
    required=True,
    type=click.Path(path_type=Path),
    help="The page to write.",
)
@click.pass_obj
def command(record: str, bridge: str, today: dt.date | None, output: Path) -> None:
    """Write the report: one HTML file that needs no network and can be printed.

    \b
    Example:
      bedstone report quillmere -o quillmere.html
    """
    if not output.parent.is_dir():
        raise wrong("this folder does not exist", file=output.parent, remedy="make it, or name another place")
    from assess import workflow
    from assess.report import write_report

    with progress_on_stderr() as progress:
        view = workflow.report_view(record, bridge, progress=progress, today=today)
    try:
        write_report(view, output)
    except OSError as error:
        raise cannot_write(output, error) from error
    click.echo(f"Wrote the report {output}.")
