"""`bedstone calibrate`."""

from __future__ import annotations

import datetime as dt

import click

from assess.cli.json_out import print_json
from assess.cli.params import bridge_argument, json_option, visit_option
from assess.cli.progress import progress_on_stderr

UNKNOWNS = ("pads", "sustained", "settlements", "girder", "datum", "share", "gradient")


def read_unknowns(ctx: click.Context, param: click.Parameter, value: str | None) -> tuple[str, ...] | None:
    """Read names parted by commas; a usage error for one that is not known."""
    if value is None:
        return None
    names = tuple(dict.fromkeys(name.strip() for name in value.split(",") if name.strip()))
    if not names:
        message = f"it names nothing; write some of {','.join(UNKNOWNS)}, parted by commas"
        raise click.BadParameter(message, ctx=ctx, param=param)
    wrong = [name for name in names if name not in UNKNOWNS]
    if wrong:
        message = f"'{wrong[0]}' is no unknown; write some of {','.join(UNKNOWNS)}, parted by commas"
        raise click.BadParameter(message, ctx=ctx, param=param)
    return names if "pads" in names else ("pads", *names)


@click.command("calibrate", short_help="Find the bearing stiffnesses that explain the readings.")
@bridge_argument
@visit_option
@click.option("--all", "every", is_flag=True, help="Every visit of the bridge, one after the other.")
@click.option(
    "--no-prior", is_flag=True, help="Let the readings alone decide; nominal stiffness is not used."
)
@click.option(
    "--unknowns",
    metavar="NAMES",
    callback=read_unknowns,
    help=f"What to ask of the readings, parted by commas: {', '.join(UNKNOWNS)}. Left out: as the files "
    "say, else what the readings directly tell.",
)
@click.option(
    "--without",
    multiple=True,
    metavar="READING",
    help="Leave a reading out, named girder/state/quantity/place; with its --reason. May be repeated.",
)
@click.option(
    "--reason", multiple=True, metavar="TEXT", help="Why, one for each --without; kept with the result."
)
@click.option(
    "--compensating",
    is_flag=True,
    help="Show how far each pad moves if the model is a little wrong elsewhere.",
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
    unknowns: tuple[str, ...] | None,
    without: tuple[str, ...],
    reason: tuple[str, ...],
    compensating: bool,
    all_readings: bool,
    as_json: bool,
) -> None:
    """Find the bearing stiffnesses that explain a visit's readings, and keep them.

    Takes the latest visit unless told otherwise.

    \b
    Example:
      bedstone calibrate quillmere
      bedstone calibrate quillmere --visit 2024-05-14 --no-prior
      bedstone calibrate quillmere --unknowns pads,settlements,girder
      bedstone calibrate quillmere --without "north/T1/deflection/6 m" --reason "gauge knocked"
      bedstone calibrate quillmere --all --json
    """
    if every and visit is not None:
        raise click.UsageError("--visit and --all exclude each other: name one visit, or take them all")
    if every and without:
        raise click.UsageError("--without belongs to one visit: name it with --visit, and leave out --all")
    if len(without) != len(reason):
        raise click.UsageError(
            "each reading that is left out needs its reason: --without READING --reason TEXT, as many of both"
        )
    if len(set(without)) < len(without):
        raise click.UsageError("a reading is named twice by --without: once is enough, with one reason")
    if any(not text.strip() for text in reason):
        raise click.UsageError("a --reason is empty: say why the reading is left out")
    from assess import workflow
    from assess.cli.tables.calibration import show_calibration, show_calibrations

    options = workflow.Options(
        prior=not no_prior, unknowns=unknowns, without=tuple(zip(without, reason, strict=True))
    )
    with progress_on_stderr() as progress:
        results = workflow.calibrate(
            record,
            bridge,
            visit=visit,
            every=every,
            options=options,
            compensating=compensating,
            progress=progress,
        )
    if as_json:
        print_json({"bridge": bridge, "visits": results} if every else results[0])
    elif every:
        show_calibrations(results, all_readings=all_readings)
    else:
        show_calibration(results[0], all_readings=all_readings)
