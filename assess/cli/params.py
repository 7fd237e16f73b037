"""The options and arguments that several commands share."""

from __future__ import annotations

import datetime as dt
import re
from pathlib import Path

import click

DATE = re.compile(r"\d{4}-\d{2}-\d{2}")


class VisitDate(click.ParamType[dt.date]):
    """A date written YYYY-MM-DD, and in no other way."""

    name = "date"

    def convert(self, value: object, param: click.Parameter | None, ctx: click.Context | None) -> dt.date:
        """Return the date; a usage error if the text is none."""
        if isinstance(value, dt.date):
            return value
        text = str(value)
        if not DATE.fullmatch(text):
            self.fail(f"'{text}' is not a date; write it as YYYY-MM-DD, for example 2024-05-14", param, ctx)
        try:
            return dt.date.fromisoformat(text)
        except ValueError:
            self.fail(f"'{text}' is no day of the calendar; write it as YYYY-MM-DD", param, ctx)


bridge_argument = click.argument("bridge", metavar="BRIDGE")
json_option = click.option("--json", "as_json", is_flag=True, help="Print one JSON document on stdout.")
visit_option = click.option(
    "--visit", "visit", metavar="DATE", type=VisitDate(), help="The visit, as YYYY-MM-DD; the latest if left out."
)
file_argument = click.argument("file", metavar="FILE", type=click.Path(path_type=Path))
