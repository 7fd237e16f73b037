"""`bedstone assess`."""

from __future__ import annotations

import datetime as dt

import click

from assess.cli.json_out import print_json
from assess.cli.params import bridge_argument, json_option, visit_option
from assess.cli.progress import progress_on_stderr


@click.command("assess", short_help="Recompute the moments and set them against capacity.")
@bridge_argument
@visit_option
@click.option(
    "--suppose",
    multiple=True,
    metavar='"NAME = VALUE"',
    help="Show a supposed case beside today's; as often as wanted. Nothing of it is kept.",
)
@json_option
@click.pass_obj
def command(record: str, bridge: str, visit: dt.date | None, suppose: tuple[str, ...], as_json: bool) -> None:
    """Recompute moments, shears and reactions and set them against the capacities.

    Unyielding supports, nominal pads and calibrated pads stand side by side. Uses the latest kept
    calibration (or that of --visit); without one, the calibrated case is the nominal one.

    \b
    What can be supposed, with the names of the bridge file:
      "north/pier 2 stiffness = 220 kN/mm"             a pad
      "north/pier 1 settlement = 5 mm"                 a seat, downward since the datum
      "north stiffness factor = 0.9"                   the whole girder
      "section pier/bottom flange loss = 3 mm"         thickness gone from a plate
      "live line traffic factor = 1.2"                 a live load
      "permanent north/deck and track factor = 1.1"    a permanent load

    \b
    Example:
      bedstone assess quillmere
      bedstone assess quillmere --visit 2024-05-14 --json
      bedstone assess quillmere --suppose "north/pier 1 settlement = 5 mm"
    """
    from assess import workflow
    from assess.cli.tables.assessment import show_assessment

    with progress_on_stderr() as progress:
        result = workflow.assess(record, bridge, visit=visit, suppose=suppose, progress=progress)
    if as_json:
        print_json(result)
    else:
        show_assessment(result)
