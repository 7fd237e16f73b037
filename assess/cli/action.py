"""`bedstone action list | show | note | close`."""

from __future__ import annotations

import datetime as dt

import click

from assess.cli.json_out import print_json
from assess.cli.params import json_option, read_date


@click.group("action", short_help="What wants a decision: list, show, note, close.", no_args_is_help=False)
def command() -> None:
    """Actions: what was found over a limit, who decides by when, and what became of it.

    assess and trend open them. An action stands first in every output until it is closed with evidence.

    \b
    Example:
      bedstone action list quillmere
      bedstone action close 3 --evidence "pad replaced, visit of 2026-06-02" --by "bridge engineer"
    """


@command.command("list")
@click.argument("bridge", metavar="[BRIDGE]", required=False)
@click.option("--all", "every", is_flag=True, help="The closed ones too.")
@json_option
@click.pass_obj
def list_(record: str, bridge: str | None, every: bool, as_json: bool) -> None:
    """List the open actions of a bridge, or of the whole record, the most pressing first.

    \b
    Example:
      bedstone action list
      bedstone action list quillmere --all
    """
    from assess import workflow
    from assess.cli.tables.actions import show_actions

    actions = workflow.list_actions(record, bridge, closed=every)
    if as_json:
        print_json({"actions": actions})
    else:
        show_actions(actions, every=every)


@command.command("show")
@click.argument("number", metavar="N", type=int)
@json_option
@click.pass_obj
def show(record: str, number: int, as_json: bool) -> None:
    """Show an action: its findings with their figures, options, the check reading, its events.

    \b
    Example:
      bedstone action show 3
    """
    from assess import workflow
    from assess.cli.tables.actions import show_action

    action = workflow.show_action(record, number)
    if as_json:
        print_json(action)
    else:
        show_action(action)


@command.command("note")
@click.argument("number", metavar="N", type=int)
@click.argument("text", metavar="TEXT")
@click.pass_obj
def note(record: str, number: int, text: str) -> None:
    """Add a note to an action; it is kept with its day and writer.

    \b
    Example:
      bedstone action note 3 "jacks ordered for May"
    """
    from assess import workflow

    action = workflow.note_action(record, number, text)
    click.echo(f"Action {number} of {action.bridge}: noted; {action.escalation}.")


@command.command("close")
@click.argument("number", metavar="N", type=int)
@click.option("--evidence", metavar="TEXT", required=True, help="What shows that it is settled; kept.")
@click.option("--by", metavar="ROLE", required=True, help="Who decided it; kept.")
@click.option("--visit", metavar="DATE", callback=read_date, help="The visit that shows it, as YYYY-MM-DD.")
@click.option(
    "--although",
    metavar="TEXT",
    help="Why it is closed while the latest results still find it; kept and shown.",
)
@click.pass_obj
def close(
    record: str, number: int, evidence: str, by: str, visit: dt.date | None, although: str | None
) -> None:
    """Close an action with evidence. A later finding from new evidence opens a new one that names it.

    \b
    Example:
      bedstone action close 3 --evidence "pad replaced and read again" --by "bridge engineer" --visit 2026-06-02
    """
    from assess import workflow

    action = workflow.close_action(record, number, evidence=evidence, by=by, visit=visit, although=although)
    click.echo(f"Action {number} of {action.bridge}, {action.where}: {action.escalation}.")
