"""What the record took in, and what it holds."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from typing import TYPE_CHECKING

import click

from assess.cli.tables.screen import print_table
from assess.cli.tables.words import counted, listed

if TYPE_CHECKING:
    from db.documents import BridgeDoc, ReadingDoc, VisitDoc
    from db.records import BridgeSummary, Taken, VisitSummary


def show_bridge_taken(bridge: BridgeDoc, taken: Taken, models: Sequence[str] = ()) -> None:
    """Say what became of a bridge file, and which published live loads it names, in words."""
    revision = "" if taken.revision is None else f" as revision {taken.revision}"
    if not taken.added:
        click.echo(f"Bridge {bridge.id} ({bridge.name}): this file is in the record already{revision}.")
        return
    click.echo(f"Bridge {bridge.id} ({bridge.name}): added{revision}.")
    print_table(
        ["girder", "supports", "spans, m", "length, m", "live share"],
        [
            [
                girder.id,
                listed(f"{support.id} ({support.kind})" for support in girder.supports),
                " + ".join(f"{span.length:g}" for span in girder.spans),
                f"{girder.length:g}",
                f"{girder.live_share:g}",
            ]
            for girder in bridge.girders
        ],
        words=2,
    )
    for model in models:
        click.echo()
        click.echo(f"Live load {model}")


def show_bridges(bridges: Sequence[BridgeSummary]) -> None:
    """List the bridges."""
    if not bridges:
        click.echo("No bridge in the record yet; add one: bedstone bridge add FILE")
        return
    print_table(
        ["bridge", "name", "revision", "visits"],
        [[b.bridge, b.name, str(b.revision), str(b.visits)] for b in bridges],
        words=2,
    )


def show_visit_taken(visit: VisitDoc, taken: Taken) -> None:
    """Say what became of a visit file: readings by state and quantity, and the settlements kept."""
    if not taken.added:
        click.echo(
            f"Bridge {visit.bridge}, visit {visit.date}: this file is in the record already; nothing changed."
        )
        return
    count = counted(len(visit.readings), "reading")
    click.echo(f"Bridge {visit.bridge}, visit {visit.date}: {count} taken in.")
    if visit.readings:
        print_table(["state", "quantity", "readings"], _by_state(visit.readings), words=2)
    settlements = [reading for reading in visit.readings if reading.quantity == "settlement"]
    if settlements:
        click.echo()
        click.echo("Seat settlements kept for the assessment")
        print_table(
            ["girder", "support", "settlement", "sd"],
            [[r.girder, r.support or f"x = {r.at} m", r.value_entered, r.sd_entered] for r in settlements],
            words=2,
        )


def show_visits(bridge: str, visits: Sequence[VisitSummary]) -> None:
    """List the visits of a bridge."""
    if not visits:
        click.echo(f"No visit of {bridge} in the record yet; log one: bedstone visit log FILE")
        return
    print_table(
        ["visit", "readings", "load states"],
        [[v.visit.isoformat(), str(v.readings), str(v.states)] for v in visits],
    )


def _by_state(readings: Sequence[ReadingDoc]) -> list[list[str]]:
    counts = Counter((reading.state, reading.quantity) for reading in readings)
    return [[state, quantity, str(count)] for (state, quantity), count in counts.items()]
