"""`bedstone visit log | list`."""

from __future__ import annotations

from pathlib import Path

import click

from assess.cli.json_out import print_json
from assess.cli.params import bridge_argument, file_argument, json_option


@click.group("visit", short_help="Log what a visit measured; list visits.", no_args_is_help=False)
def command() -> None:
    """Visits: log what a visit measured, list the visits of a bridge.

    \b
    Example:
      bedstone visit log visit-2024.toml
      bedstone visit list quillmere
    """


@command.command("log")
@file_argument
@click.option("--dry-run", is_flag=True, help="Check and show the file; keep nothing.")
@click.pass_obj
def log(record: str, file: Path, dry_run: bool) -> None:
    """Take a visit file into the record: the whole of it, or nothing.

    The same file again changes nothing; another file for the same day is refused. A visit that is in the
    record cannot be changed, so try it with --dry-run first.

    \b
    Example:
      bedstone visit log --dry-run visit-2024.toml
      bedstone visit log visit-2024.toml
    """
    from assess import workflow
    from assess.cli.tables.records import show_visit_taken

    document, taken = workflow.log_visit(record, file, keep=not dry_run)
    show_visit_taken(document, taken)


@command.command("list")
@bridge_argument
@json_option
@click.pass_obj
def list_(record: str, bridge: str, as_json: bool) -> None:
    """List the visits of a bridge by date.

    \b
    Example:
      bedstone visit list quillmere
      bedstone visit list quillmere --json
    """
    from assess import workflow
    from assess.cli.tables.actions import show_first
    from assess.cli.tables.records import show_visits

    visits = workflow.list_visits(record, bridge)
    actions = workflow.list_actions(record, bridge)
    if as_json:
        print_json({"bridge": bridge, "actions": actions, "visits": visits})
    else:
        show_first(actions)
        show_visits(bridge, visits)
