"""Calibrations: one visit in full, or all visits with one row each."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING

import click

from assess.cli.tables.explained import show_compensating, show_explanations, show_unknowns
from assess.cli.tables.screen import print_cautions, print_heading, print_table, print_wrapped
from assess.cli.tables.words import NOT_DETERMINED, counted, interval, number

if TYPE_CHECKING:
    from assess.results import CalibrationResult, GirderCalibration, PadResult, ReadingResult

TOLD_BY_READINGS = 0.5
"""Below this data share a stiffness is told by the assumption and not by the readings."""


def show_calibration(result: CalibrationResult, *, all_readings: bool = False) -> None:
    """Print the calibration of one visit."""
    from assess.results import grouped

    click.echo(f"Bridge {result.bridge}, visit {result.visit}")
    for girder in result.girders:
        print_heading(f"Girder {girder.girder}")
        print_table(
            [
                "pad",
                "stiffness, kN/mm\n(95 % interval)",
                "nominal,\nkN/mm",
                "of\nnominal",
                "told by the\nreadings, %",
            ],
            [_pad_row(pad) for pad in girder.pads],
        )
        show_unknowns(girder)
        print_wrapped(_fit_sentence(girder))
        show_explanations(girder)
        show_compensating(girder.compensating_errors)
        shown = girder.readings if all_readings else [r for r in girder.readings if r.suspect]
        if shown:
            click.echo()
            click.echo("Readings beside the fit" if all_readings else "Suspect readings")
            print_table(_READING_HEADERS, [_reading_row(reading) for reading in shown], words=3)
    print_cautions(grouped(result.cautions, [girder.girder for girder in result.girders]))


def show_calibrations(results: Sequence[CalibrationResult], *, all_readings: bool = False) -> None:
    """Print the calibrations of several visits: a row a visit, a column a pad."""
    if not results:
        click.echo("No visit to calibrate.")
        return
    click.echo(f"Bridge {results[0].bridge}, {counted(len(results), 'visit')}")
    for name in dict.fromkeys(girder.girder for result in results for girder in result.girders):
        print_heading(f"Girder {name}: stiffness in kN/mm (95 % interval)")
        fits = [(r.visit.isoformat(), g) for r in results for g in r.girders if g.girder == name]
        _show_history(fits)
        rows = [
            [visit, *_reading_row(reading)]
            for visit, girder in fits
            for reading in girder.readings
            if reading.suspect or all_readings
        ]
        if rows:
            click.echo()
            click.echo("Readings beside the fit" if all_readings else "Suspect readings")
            print_table(["visit", *_READING_HEADERS], rows, words=4)
    print_cautions(gathered_cautions((r.visit.isoformat(), r.cautions) for r in results))


def gathered_cautions(by_visit: Iterable[tuple[str, Sequence[str]]]) -> list[str]:
    """Return each caution once, behind the visits it belongs to; those of every visit stand alone, last."""
    visits: list[str] = []
    places: dict[str, list[str]] = {}
    for visit, cautions in by_visit:
        visits.append(visit)
        for caution in dict.fromkeys(cautions):
            places.setdefault(caution, []).append(visit)
    own = [f"{', '.join(where)}: {caution}" for caution, where in places.items() if where != visits]
    return own + [caution for caution, where in places.items() if where == visits]


def _show_history(fits: Sequence[tuple[str, GirderCalibration]]) -> None:
    supports = list(dict.fromkeys(pad.support for _, girder in fits for pad in girder.pads))
    rows, assumed = [], False
    for visit, girder in fits:
        pads = {pad.support: pad for pad in girder.pads}
        cells = [_pad_cell(pads[support]) if support in pads else "no pad" for support in supports]
        assumed = assumed or any(cell.startswith("~") for cell in cells)
        rows.append([visit, *cells, number(girder.p_value), str(_suspects(girder))])
    print_table(["visit", *supports, "fit p", "suspect\nreadings"], rows)
    if assumed:
        click.echo("~ told by the assumption, not by the readings")


def _pad_row(pad: PadResult) -> list[str]:
    return [
        pad.support,
        _stiffness(pad),
        number(pad.nominal_kN_per_m / 1000),
        number(pad.ratio_to_nominal),
        number(100 * pad.data_share),
    ]


def _pad_cell(pad: PadResult) -> str:
    return _stiffness(pad) if pad.data_share >= TOLD_BY_READINGS else f"~{_stiffness(pad)}"


def _stiffness(pad: PadResult) -> str:
    return interval(pad.stiffness_kN_per_m / 1000, pad.low95_kN_per_m / 1000, pad.highest_kN_per_m / 1000)


_READING_HEADERS = [
    "state",
    "quantity",
    "place",
    "read",
    "fitted",
    "sd",
    "unit",
    "standardised\nresidual",
    "shows errors\nfrom",
    "",
]


def _reading_row(reading: ReadingResult) -> list[str]:
    at = "" if reading.at_m is None else f"x = {reading.at_m:g} m"
    return [
        reading.state,
        reading.quantity,
        reading.support or at,
        number(reading.observed),
        number(reading.predicted),
        number(reading.sd),
        reading.unit,
        number(reading.standardised_residual),
        "not checked" if reading.minimal_detectable is None else number(reading.minimal_detectable),
        "suspect" if reading.suspect else "not fitted" if reading.predicted is None else "",
    ]


def _fit_sentence(girder: GirderCalibration) -> str:
    fitted = sum(reading.predicted is not None for reading in girder.readings)
    left_out = len(girder.readings) - fitted
    count = counted(fitted, "reading") + (f", {left_out} left out" if left_out else "")
    suspects = counted(_suspects(girder), "suspect reading")
    p_value = NOT_DETERMINED if girder.p_value is None else number(girder.p_value)
    return (
        f"Fit: {count}, {suspects}; chi-square {number(girder.chi_square)} on "
        f"{counted(girder.degrees_of_freedom, 'degree')} of freedom, p value {p_value}."
    )


def _suspects(girder: GirderCalibration) -> int:
    return sum(reading.suspect for reading in girder.readings)
