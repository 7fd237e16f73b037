"""`bedstone network`."""

from __future__ import annotations

from pathlib import Path

import click

from assess.cli.failures import cannot_write, wrong
from assess.cli.json_out import print_json
from assess.cli.params import json_option
from assess.cli.progress import progress_on_stderr


@click.command("network", short_help="Rank all bridges of the record by urgency.")
@click.option(
    "-o", "--output", metavar="FILE.html", type=click.Path(path_type=Path), help="A page of it to write."
)
@click.option("--refresh", is_flag=True, help="Compute every bridge again, kept results or not.")
@json_option
@click.pass_obj
def command(record: str, output: Path | None, refresh: bool, as_json: bool) -> None:
    """Rank all bridges: first what is overdue or unknown, then the likelier and the sooner over.

    Kept results are used where nothing was added since; the others are computed and kept one by one.
    Stopped halfway (Ctrl-C), the next call goes on from there.

    \b
    Example:
      bedstone network
      bedstone network -o network.html
    """
    if output is not None and not output.parent.is_dir():
        raise wrong("this folder does not exist", file=output.parent, remedy="make it, or name another place")
    if output is not None and output.suffix.lower() not in (".html", ".htm"):
        raise wrong("a page is written as .html", file=output, remedy="name it for example network.html")
    from assess import workflow
    from assess.cli.tables.network import show_network

    with progress_on_stderr() as progress:
        result = workflow.network(record, refresh=refresh, progress=progress)
    if output is not None:
        from assess.report import write_network

        try:
            write_network(result, output)
        except OSError as error:
            raise cannot_write(output, error) from error
        click.echo(f"Wrote the page {output}.", err=True)
    if as_json:
        print_json(result)
    else:
        show_network(result)
