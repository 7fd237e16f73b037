"""Elastomeric pads from their geometry: stiffness, doubt, limits, creep, cold. Knows no records and no girder."""

from assess.pad.age import ColdCurve, cold_curve, compounds, creep_per_decade, creep_share, decades
from assess.pad.compression import Doubt, Pad, batch_correlation, stiffness_doubt
from assess.pad.elastomer import DEFAULT_FORMULA, FORMULAS, Elastomer, elastomer
from assess.pad.geometry import Layer, PadGeometry, Plan
from assess.pad.limits import (
    LimitCheck,
    PadLoads,
    check_limits,
    default_set,
    least_permanent_pressure,
    limit_sets,
)
from assess.pad.pressure import disc_modulus, rectangle_modulus, strip_modulus
from assess.pad.tables import PadError

__all__ = [
    "DEFAULT_FORMULA",
    "FORMULAS",
    "ColdCurve",
    "Doubt",
    "Elastomer",
    "Layer",
    "LimitCheck",
    "Pad",
    "PadError",
    "PadGeometry",
    "PadLoads",
    "Plan",
    "batch_correlation",
    "check_limits",
    "cold_curve",
    "compounds",
    "creep_per_decade",
    "creep_share",
    "decades",
    "default_set",
    "disc_modulus",
    "elastomer",
    "least_permanent_pressure",
    "limit_sets",
    "rectangle_modulus",
    "stiffness_doubt",
    "strip_modulus",
]
