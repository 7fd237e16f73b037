"""`bedstone trend`."""

from __future__ import annotations

import datetime as dt

import click

from assess.cli.json_out import print_json
from assess.cli.params import bridge_argument, json_option, today_option
from assess.cli.progress import progress_on_stderr


@click.command("trend", short_help="Follow the pads over the visits, and look ahead.")
@bridge_argument
@today_option
@json_option
@click.pass_obj
def command(record: str, bridge: str, today: dt.date | None, as_json: bool) -> None:
    """Follow pads, seats and losses over the visits and carry the utilisations forward.

    \b
    Example:
      bedstone trend quillmere
      bedstone trend quillmere --json
    """
    from assess import workflow
    from assess.cli.tables.trend import show_trend

    with progress_on_stderr() as progress:
        result = workflow.trend(record, bridge, progress=progress, today=today)
    if as_json:
        print_json(result)
    else:
        show_trend(result)
