"""`bedstone init`."""

from __future__ import annotations

import re

import click


@click.command("init", short_help="Make an empty record, or upgrade an older one.")
@click.pass_obj
def command(record: str) -> None:
    """Make an empty record, or bring an older one up to date.

    \b
    Example:
      bedstone init
      bedstone --record north-line.sqlite init
    """
    from assess import workflow

    made = workflow.init_record(record)
    click.echo(f"Record {without_password(record)}: {'made' if made else 'is there already and up to date'}.")


def without_password(record: str) -> str:
    """Return the path or URL as it may be shown: a password in it is replaced by ***."""
    return re.sub(r"(://[^/@:]*):.*@", r"\1:***@", record)
