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
@json_option
@click.pass_obj
def command(record: str, bridge: str, visit: dt.date | None, as_json: bool) -> None:
    """Recompute moments, shears and reactions and set them against the capacities.

    Unyielding supports, nominal pads and calibrated pads stand side by side. Uses the latest kept
    calibration (or that of --visit); without one, the calibrated case is the nominal one.

    \b
    Example:
      bedstone assess quillmere
      bedstone assess quillmere --visit 2024-05-14 --json
    """
    from assess import workflow
    from assess.cli.tables.assessment import show_assessment

    with progress_on_stderr() as progress:
        result = workflow.assess(record, bridge, visit=visit, progress=progress)
    if as_json:
        print_json(result)
    else:
        show_assessment(result)
