"""`bedstone intervention add | list | withdraw`."""

from __future__ import annotations

import datetime as dt

import click

from assess.cli.json_out import print_json
from assess.cli.params import bridge_argument, json_option, read_date

KINDS = ("replaced", "jacked", "shimmed")


@click.group("intervention", short_help="Tell what was done to a pad, and when.", no_args_is_help=False)
def command() -> None:
    """Interventions: pads replaced, jacked or shimmed, each with its day.

    \b
    Example:
      bedstone intervention add quillmere --girder north --support "pier 1" --kind replaced --date 2025-08-20
      bedstone intervention list quillmere
    """


@command.command("add")
@bridge_argument
@click.option("--girder", metavar="ID", required=True, help="The girder line.")
@click.option("--support", metavar="ID", required=True, help="The pad's support.")
@click.option("--kind", type=click.Choice(KINDS), required=True, help="What was done.")
@click.option("--date", metavar="DATE", required=True, callback=read_date, help="The day, as YYYY-MM-DD.")
@click.option("--remark", metavar="TEXT", default="", help="Whatever is worth keeping beside it.")
@click.pass_obj
def add(record: str, bridge: str, girder: str, support: str, kind: str, date: dt.date, remark: str) -> None:
    """Tell the record what was done to a pad.

    \b
    Example:
      bedstone intervention add quillmere --girder north --support "pier 1" --kind replaced --date 2025-08-20
    """
    from assess import workflow
    from db.records import NewIntervention

    new = NewIntervention(date=date, kind=kind, girder=girder, support=support, remark=remark)
    kept = workflow.add_intervention(record, bridge, new)
    what = f"Bridge {bridge}, {date}: pad at {support} of girder {girder} {kind}"
    click.echo(f"{what}; kept as number {kept.number}." if kept else f"{what}; in the record already.")


@command.command("list")
@bridge_argument
@json_option
@click.pass_obj
def list_(record: str, bridge: str, as_json: bool) -> None:
    """List what was done to the pads of a bridge, by date.

    \b
    Example:
      bedstone intervention list quillmere
    """
    from assess import workflow
    from assess.cli.tables.actions import show_interventions

    kept = workflow.list_interventions(record, bridge)
    if as_json:
        print_json({"bridge": bridge, "interventions": kept})
    else:
        show_interventions(bridge, kept)


@command.command("withdraw")
@click.argument("number", metavar="N", type=int)
@click.option("--reason", metavar="TEXT", required=True, help="Why it does not count; kept.")
@click.pass_obj
def withdraw(record: str, number: int, reason: str) -> None:
    """Withdraw an intervention that was told in error; it stays in the record and counts no more.

    \b
    Example:
      bedstone intervention withdraw 2 --reason "it was the pad at pier 2"
    """
    from assess import workflow

    one = workflow.withdraw_intervention(record, number, reason)
    click.echo(f"Withdrawn: {one.date}, pad at {one.support} of girder {one.girder} {one.kind}.")
