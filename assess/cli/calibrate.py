"""`bedstone calibrate`."""

from __future__ import annotations

import datetime as dt

import click

from assess.cli.json_out import print_json
from assess.cli.params import bridge_argument, json_option, visit_option
from assess.cli.progress import progress_on_stderr


@click.command("calibrate", short_help="Find the bearing stiffnesses that explain the readings.")
@bridge_argument
@visit_option
@click.option("--all", "every", is_flag=True, help="Every visit of the bridge, one after the other.")
@click.option(
    "--no-prior", is_flag=True, help="Let the readings alone decide; nominal stiffness is not used."
)
@click.option(
    "--readings",
    "all_readings",
    is_flag=True,
    help="Show every reading beside its fit, not the suspects only.",
)
@json_option
@click.pass_obj
def command(
    record: str,
    bridge: str,
    visit: dt.date | None,
    every: bool,
    no_prior: bool,
    all_readings: bool,
    as_json: bool,
) -> None:
    """Find the bearing stiffnesses that explain a visit's readings, and keep them.

    Takes the latest visit unless told otherwise.

    \b
    Example:
      bedstone calibrate quillmere
      bedstone calibrate quillmere --visit 2024-05-14 --no-prior
      bedstone calibrate quillmere --all --json
    """
    if every and visit is not None:
        raise click.UsageError("--visit and --all exclude each other: name one visit, or take them all")
    from assess import workflow
    from assess.cli.tables.calibration import show_calibration, show_calibrations

    with progress_on_stderr() as progress:
        results = workflow.calibrate(
            record, bridge, visit=visit, every=every, prior=not no_prior, progress=progress
        )
    if as_json:
        print_json({"bridge": bridge, "visits": results} if every else results[0])
    elif every:
        show_calibrations(results, all_readings=all_readings)
    else:
        show_calibration(results[0], all_readings=all_readings)
