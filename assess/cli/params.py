"""The options and arguments that several commands share."""

from __future__ import annotations

import datetime as dt
import re
from pathlib import Path

import click

DATE = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}")


def read_date(ctx: click.Context, param: click.Parameter, value: str | None) -> dt.date | None:
    """Read a date written YYYY-MM-DD, and in no other way; a usage error if the text is none."""
    if value is None:
        return None
    if not DATE.fullmatch(value):
        message = f"'{value}' is not a date; write it as YYYY-MM-DD, for example 2024-05-14"
        raise click.BadParameter(message, ctx=ctx, param=param)
    try:
        return dt.date.fromisoformat(value)
    except ValueError as error:
        message = f"'{value}' is no day of the calendar; write it as YYYY-MM-DD, for example 2024-05-14"
        raise click.BadParameter(message, ctx=ctx, param=param) from error


bridge_argument = click.argument("bridge", metavar="BRIDGE")
json_option = click.option("--json", "as_json", is_flag=True, help="Print one JSON document on stdout.")
visit_option = click.option(
    "--visit", metavar="DATE", callback=read_date, help="The visit, as YYYY-MM-DD; the latest if left out."
)
today_option = click.option(
    "--today", metavar="DATE", callback=read_date, help="See the record as on this day, as YYYY-MM-DD."
)
file_argument = click.argument("file", metavar="FILE", type=click.Path(path_type=Path))
