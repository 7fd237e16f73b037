"""Readings to stiffnesses: observation equations, least squares, diagnostics."""

from assess.calibrate.fit import SUSPECT, Z95, Fit, NotDetermined, draw_normal, fit
from assess.calibrate.observations import Observation, ObservationModel
from assess.calibrate.prior import PadPrior

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
