"""What the record took in, and what it holds."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import click

from assess.cli.tables.reduced import entered, show_reduced
from assess.cli.tables.screen import print_heading, print_table, print_wrapped
from assess.cli.tables.words import counted, listed, number

if TYPE_CHECKING:
    from assess.shown import BridgeView
    from db.documents import BridgeDoc, ReadingDoc, VisitDoc
    from db.records import BridgeSummary, Taken, VisitSummary


def show_bridge_taken(bridge: BridgeDoc, taken: Taken, view: BridgeView) -> None:
    """Say what became of a bridge file, and which published live loads it names, in words."""
    revision = "" if taken.revision is None else f" as revision {taken.revision}"
    if not taken.added:
        click.echo(f"Bridge {bridge.id} ({bridge.name}): this file is in the record already{revision}.")
        _look_again(taken)
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
    for girder in bridge.girders:
        if girder.hinges:
            plural = "s" if len(girder.hinges) > 1 else ""
            click.echo(f"Hinge{plural} in {girder.id} at {listed(f'{x:g} m' for x in girder.hinges)}.")
    click.echo()
    _show_pads(view)
    click.echo()
    _show_sections(bridge, view)
    plated = [section for section in view.sections if section.plates]
    if plated:
        worn = "with all measured losses" if any(section.losses for section in plated) else "as built"
        names = listed(f'"{section.section}"' for section in plated)
        print_wrapped(f"From plates, {worn}: {names}; more: bedstone bridge show {bridge.id}")
    if bridge.vehicles:
        click.echo()
        _show_vehicles(bridge)
    show_actions(view)
    _look_again(taken)


def show_actions(view: BridgeView) -> None:
    """Say what acts beside the permanent loads, and with which factors."""
    for model in view.models:
        click.echo()
        print_wrapped(f"Live load {model}.")
    for case in view.temperature:
        click.echo()
        print_wrapped(f"Temperature {case}.")
    click.echo()
    print_wrapped(f"Factors by {view.factors}.")


def _show_pads(view: BridgeView) -> None:
    made = {
        (pad.girder, pad.support): f"geometry, {pad.formula}"
        for pad in view.pads
        if pad.nominal_from == "geometry"
    }
    print_table(
        ["girder", "pad", "nominal from", "nominal,\nkN/mm", "coefficient\nof variation"],
        [
            [
                girder.girder,
                pad.support,
                made.get((girder.girder, pad.support), "as given"),
                f"{pad.nominal_kN_per_m / 1e3:.4g}",
                f"{pad.cv:.3g}",
            ]
            for girder in view.shown.girders
            for pad in girder.supports
            if pad.nominal_kN_per_m is not None and pad.cv is not None
        ],
        words=3,
    )


def _show_sections(bridge: BridgeDoc, view: BridgeView) -> None:
    print_table(
        ["section", "EI, kN m2", "sagging\ncapacity, kN m", "hogging\ncapacity, kN m", "shear\ncapacity, kN"],
        [
            [
                section.id,
                number(section.youngs_modulus * shown.second_moment_m4),
                number(shown.sagging_capacity_kNm, none="not given"),
                number(shown.hogging_capacity_kNm, none="not given"),
                number(shown.shear_capacity_kN, none="not given"),
            ]
            for section, shown in zip(bridge.sections, view.shown.sections, strict=True)
        ],
    )


def _show_vehicles(bridge: BridgeDoc) -> None:
    print_table(
        ["vehicle", "axles", "weight, kN", "first to last\naxle, m"],
        [
            [
                vehicle.id,
                str(len(vehicle.axles)),
                f"{sum(load for _, load in vehicle.axles):g}",
                f"{max(at for at, _ in vehicle.axles):g}",
            ]
            for vehicle in bridge.vehicles
        ],
    )


def _look_again(taken: Taken) -> None:
    if not taken.queries:
        return
    print_heading("Look again at")
    for query in taken.queries:
        print_wrapped(query, first="- ", then="  ")


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
    if not taken.added and not taken.tried:
        click.echo(
            f"Bridge {visit.bridge}, visit {visit.date}: this file is in the record already; nothing changed."
        )
        return
    count = counted(len(visit.readings), "reading")
    became = "would be taken in; nothing was kept (--dry-run)" if taken.tried else "taken in"
    click.echo(f"Bridge {visit.bridge}, visit {visit.date}: {count} {became}.")
    if visit.readings:
        print_table(
            ["state", "quantity", "readings", "values", "standard deviations"],
            _by_state(visit.readings),
            words=2,
        )
    show_reduced(visit.readings)
    settlements = [
        r for r in visit.readings if r.quantity == "settlement" and visit.state(r.state).vehicle is None
    ]
    if settlements:
        click.echo()
        click.echo("Seat settlements kept for the assessment")
        print_table(
            ["girder", "support", "since the datum", "sd"],
            [[r.girder, str(r.support), _settlement(r), entered(r.sd_entered)] for r in settlements],
            words=2,
        )
    _look_again(taken)


def _settlement(reading: ReadingDoc) -> str:
    return f"{'up' if reading.value < 0.0 else 'down'} {entered(reading.value_entered).lstrip('+-−')}"


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
    groups: dict[tuple[str, str], list[ReadingDoc]] = {}
    for reading in readings:
        groups.setdefault((reading.state, reading.quantity), []).append(reading)
    return [
        [state, quantity, str(len(some)), _range(some, "value"), _range(some, "sd")]
        for (state, quantity), some in groups.items()
    ]


def _range(readings: Sequence[ReadingDoc], what: str) -> str:
    """Smallest to largest, as they were written."""
    ordered = sorted(readings, key=lambda reading: float(getattr(reading, what)))
    least, most = (entered(getattr(reading, f"{what}_entered")) for reading in (ordered[0], ordered[-1]))
    return least if least == most else f"{least} to {most}"
