"""Readings to stiffnesses: observation equations, least squares, diagnostics."""

from assess.calibrate.causes import PAD_AND_SEAT, PAD_AT_LEAST, SEAT, UNTOLD, Cause, causes
from assess.calibrate.fit import SUSPECT, Z95, Fit, NotDetermined, Problem, draw_normal, fit
from assess.calibrate.observations import LEVELLED, Observation, ObservationModel, PermanentState
from assess.calibrate.posterior import Posterior, draw_posterior
from assess.calibrate.prior import PadPrior, Prior
from assess.calibrate.profile import intervals, profile_interval
from assess.calibrate.restricted import Restricted, restricted_prior
from assess.calibrate.rivals import CLOSE, Rival, rivals
from assess.calibrate.robust import Robust, robust
from assess.calibrate.snooping import minimal_detectable, propose
from assess.calibrate.unknowns import Entry, Layout, Unknowns

__all__ = [
    "CLOSE",
    "LEVELLED",
    "PAD_AND_SEAT",
    "PAD_AT_LEAST",
    "SEAT",
    "SUSPECT",
    "UNTOLD",
    "Z95",
    "Cause",
    "Entry",
    "Fit",
    "Layout",
    "NotDetermined",
    "Observation",
    "ObservationModel",
    "PadPrior",
    "PermanentState",
    "Posterior",
    "Prior",
    "Problem",
    "Restricted",
    "Rival",
    "Robust",
    "Unknowns",
    "causes",
    "draw_normal",
    "draw_posterior",
    "fit",
    "intervals",
    "minimal_detectable",
    "profile_interval",
    "propose",
    "restricted_prior",
    "rivals",
    "robust",
]
