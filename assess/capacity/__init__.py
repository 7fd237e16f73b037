"""Limit states: factored effects against resistances, under unyielding, nominal and calibrated supports."""

from assess.capacity.checks import CheckPlan, Factors, Resistance, plan_checks
from assess.capacity.effects import Effects, GirderLoads
from assess.capacity.rows import Case, Row, RowDraws, demands_at, evaluate, evaluate_draws, moment_draws

__all__ = [
    "Case",
    "CheckPlan",
    "Effects",
    "Factors",
    "GirderLoads",
    "Resistance",
    "Row",
    "RowDraws",
    "demands_at",
    "evaluate",
    "evaluate_draws",
    "moment_draws",
    "plan_checks",
]
