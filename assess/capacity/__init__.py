"""Limit states: factored effects against resistances, under unyielding, nominal and calibrated supports."""

from assess.capacity.actions import Dead, GirderLoads, Steady, Thermal
from assess.capacity.checks import CheckPlan, Resistance, plan_checks
from assess.capacity.contact import standing_on
from assess.capacity.effects import Effects
from assess.capacity.factors import AS_THEY_ARE, KINDS, Factors
from assess.capacity.jacking import ALLOWANCE, DIFFERENTIAL, Jacked, jacked, staged
from assess.capacity.rows import (
    Case,
    Row,
    RowDraws,
    demands_at,
    evaluate,
    evaluate_draws,
    evaluate_row,
    factored_steady,
    moment_draws,
)
from assess.capacity.sets import FactorSet, UnknownSetError, factor_set, set_names
from assess.capacity.shims import NoPacking, Packing, Programme, Seats, least_worst, programme
from assess.capacity.standing import PermanentLoads, permanent_loads
from assess.capacity.triggers import Crossing, Driver, Scan, scan

__all__ = [
    "ALLOWANCE",
    "AS_THEY_ARE",
    "DIFFERENTIAL",
    "KINDS",
    "Case",
    "CheckPlan",
    "Crossing",
    "Dead",
    "Driver",
    "Effects",
    "FactorSet",
    "Factors",
    "GirderLoads",
    "Jacked",
    "NoPacking",
    "Packing",
    "PermanentLoads",
    "Programme",
    "Resistance",
    "Row",
    "RowDraws",
    "Scan",
    "Seats",
    "Steady",
    "Thermal",
    "UnknownSetError",
    "demands_at",
    "evaluate",
    "evaluate_draws",
    "evaluate_row",
    "factor_set",
    "factored_steady",
    "jacked",
    "least_worst",
    "moment_draws",
    "permanent_loads",
    "plan_checks",
    "programme",
    "scan",
    "set_names",
    "staged",
    "standing_on",
]
