"""Readings to stiffnesses: observation equations, least squares, diagnostics."""

from assess.calibrate.fit import SUSPECT, Z95, Fit, NotDetermined, Problem, draw_normal, fit
from assess.calibrate.observations import LEVELLED, Observation, ObservationModel, PermanentState
from assess.calibrate.prior import PadPrior, Prior
from assess.calibrate.unknowns import Entry, Layout, Unknowns

__all__ = [
    "LEVELLED",
    "SUSPECT",
    "Z95",
    "Entry",
    "Fit",
    "Layout",
    "NotDetermined",
    "Observation",
    "ObservationModel",
    "PadPrior",
    "PermanentState",
    "Prior",
    "Problem",
    "Unknowns",
    "draw_normal",
    "fit",
]
