"""`bedstone shim`."""

from __future__ import annotations

import click

from assess.cli.json_out import print_json
from assess.cli.params import bridge_argument, json_option
from assess.cli.progress import progress_on_stderr


@click.command("shim", short_help="Find the packing that brings the worst utilisation down.")
@bridge_argument
@click.option("--step", metavar="LENGTH", default="2 mm", show_default=True, help="Packing in stock.")
@click.option(
    "--lift-max", metavar="LENGTH", default="25 mm", show_default=True, help="Most packing at a support."
)
@click.option(
    "--differential",
    metavar="LENGTH",
    default="3 mm",
    show_default=True,
    help="Most that neighbouring supports rise apart in a stage (common practice, no source).",
)
@click.option(
    "--worth",
    metavar="NUMBER",
    type=float,
    default=0.0,
    show_default=True,
    help="Least gain in utilisation for which more packing goes in.",
)
@json_option
@click.pass_obj
def command(
    record: str, bridge: str, step: str, lift_max: str, differential: str, worth: float, as_json: bool
) -> None:
    """Find the packing heights that give the least worst utilisation, and the stages of jacking.

    Doing nothing, shimming, and replacing the pads stand side by side.

    \b
    Example:
      bedstone shim quillmere
      bedstone shim quillmere --step "2 mm" --lift-max "25 mm" --json
    """
    from assess import workflow
    from assess.cli.tables.shim import show_shims
    from db.quantities import read_quantity

    lengths = {
        name: read_quantity(text, "length", field=f"--{name.replace('_', '-')}", example="2 mm").si
        for name, text in (("step", step), ("lift_max", lift_max), ("differential", differential))
    }
    stock = workflow.Stock(worth=worth, **lengths)
    with progress_on_stderr() as progress:
        result = workflow.shim(record, bridge, stock, progress=progress)
    if as_json:
        print_json(result)
    else:
        show_shims(result)
