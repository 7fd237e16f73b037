"""Readings to stiffnesses: observation equations, least squares, diagnostics."""

from assess.calibrate.fit import SUSPECT, Z95, Fit, NotDetermined, PadPrior, draw_normal, fit
from assess.calibrate.observations import Observation, ObservationModel

__all__ = [
    "SUSPECT",
    "Z95",
    "Fit",
    "NotDetermined",
    "Observation",
    "ObservationModel",
    "PadPrior",
    "draw_normal",
    "fit",
]
