"""Actions and interventions on the screen; open actions stand first in every output."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_heading, print_table, print_wrapped
from assess.cli.tables.words import counted, day

if TYPE_CHECKING:
    from assess.results import ActionResult
    from db.records import KeptIntervention


def show_first(actions: Sequence[ActionResult]) -> None:
    """Say what is open, overdue ones first, each in one sentence; nothing where nothing is open."""
    if not actions:
        return
    overdue = sum(one.status == "overdue" for one in actions)
    late = f", {overdue} OVERDUE" if overdue else ""
    click.echo(f"Open: {counted(len(actions), 'action')}{late} (bedstone action show N)")
    for one in actions:
        print_wrapped(sentence(one), first="- ", then="  ")
    click.echo()


def sentence(one: ActionResult) -> str:
    """Word an action in a sentence: how pressing, where, what."""
    again = f" (again, after action {one.reopens})" if one.reopens is not None else ""
    return f"action {one.action}{again}, {one.escalation}: girder {one.girder}, {one.where}: {one.finding}"


def show_actions(actions: Sequence[ActionResult], *, every: bool) -> None:
    """List actions."""
    if not actions:
        click.echo("No action in the record." if every else "No action is open.")
        return
    print_table(
        ["action", "bridge", "girder", "where", "found", "opened", "due", "stands"],
        [
            [
                str(one.action),
                one.bridge,
                one.girder,
                one.where,
                one.severity.replace("_", " "),
                day(one.opened_on),
                day(one.due),
                one.escalation,
            ]
            for one in actions
        ],
        words=8,
    )


def show_action(one: ActionResult) -> None:
    """Show an action with all that is kept of it."""
    click.echo(f"Action {one.action}, bridge {one.bridge}, girder {one.girder}: {one.where}")
    visit = f"visit {one.visit}" if one.visit else "no visit"
    for told in (
        f"Stands: {one.escalation}.",
        f"Finding: {one.finding}.",
        f"Opened on {one.opened_on} by bedstone {one.found_by}, {visit}, input digest {one.input_digest}.",
        f"Decides: {one.owner_role}, by {one.due}.",
        f"Closed by this reading: {one.check_reading}.",
    ):
        print_wrapped(told)
    if one.reopens is not None:
        click.echo(f"Opened again after action {one.reopens}.")
    if one.closing_evidence is not None:
        print_wrapped(f"Evidence: {one.closing_evidence}")
    click.echo()
    print_table(
        ["option", "what it is", "its effect is computed by"],
        [[o.option, o.does, o.command] for o in one.options],
        words=3,
    )
    print_heading("Events")
    for event in one.events:
        visit = f", visit {event.visit}" if event.visit else ""
        print_wrapped(
            f"{event.date}{visit}, {event.kind} ({event.written_by}): {event.text}", first="- ", then="  "
        )


def show_interventions(bridge: str, kept: Sequence[KeptIntervention]) -> None:
    """List what was done to the pads."""
    if not kept:
        click.echo(f"No intervention of {bridge} in the record.")
        return
    print_table(
        ["number", "date", "girder", "support", "kind", "remark"],
        [[str(one.number), day(one.date), one.girder, one.support, one.kind, one.remark] for one in kept],
        words=6,
    )
