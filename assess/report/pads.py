"""Pads that give their geometry on the page: pressures, strains, and every limit."""

from __future__ import annotations

from assess.report import words
from assess.results import PadCheck, PadLimit

HEADS = (
    "Pad at",
    "By geometry",
    "Pressure: permanent, total, least",
    "Strain of a layer: permanent, total",
    "Permanent compression",
    "Creep of it in 25 years",
)
LIMIT_HEADS = ("Pad at", "Limit of", "Under load", "Value", "Limit", "Utilisation", "Source")


def rows(pads: list[PadCheck]) -> list[list[str]]:
    """Return pressures and strains, a row a pad."""
    return [
        [
            pad.support,
            _by_geometry(pad),
            _listed([pad.permanent_pressure_MPa, pad.total_pressure_MPa, pad.minimum_pressure_MPa], "MPa"),
            _listed([100.0 * pad.permanent_strain, 100.0 * pad.total_strain], "%"),
            words.quantity(pad.permanent_compression_mm, "mm"),
            words.quantity(pad.creep_compression_25_years_mm, "mm", "hardness not in the table of creep"),
        ]
        for pad in pads
    ]


def _by_geometry(pad: PadCheck) -> str:
    stiffness = words.quantity(pad.geometry_kN_per_m / 1e3, "kN/mm")
    return f"{pad.formula}, shape factor {words.number(pad.shape_factor)}: {stiffness}"


def limit_rows(pads: list[PadCheck]) -> list[list[str]]:
    """Return every limit of every pad."""
    return [_limit_row(pad, limit) for pad in pads for limit in pad.limits]


def _limit_row(pad: PadCheck, limit: PadLimit) -> list[str]:
    return [
        pad.support,
        limit.name,
        limit.load,
        words.quantity(limit.value, limit.unit) if limit.unit else words.number(limit.value),
        words.quantity(limit.limit, limit.unit) if limit.unit else words.number(limit.limit),
        f"{words.number(limit.utilisation)}: {limit.status}",
        limit.source,
    ]


def _listed(values: list[float], unit: str) -> str:
    told = [words.number(value) for value in values[:-1]]
    return ", ".join([*told, words.quantity(values[-1], unit)])
