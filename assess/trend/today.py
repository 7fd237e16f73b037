"""What the pads are at the last visit."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.trend.visits import VisitEstimate

Floats = NDArray[np.float64]

WALK_SD = 0.1
"""Per root year on ln k, of a pad that is not read: common practice, no source."""


def held_by(prior_sd: Floats, correlation: Floats | None) -> Floats:
    """Inverse covariance of the prior of the level, (q, q)."""
    if correlation is None:
        return np.diag(np.where(np.isfinite(prior_sd), 1.0 / prior_sd**2, 1e-8))
    return np.asarray(np.linalg.inv(correlation) / np.outer(prior_sd, prior_sd))


def today(visits: Sequence[VisitEstimate], prior_mean: Floats, held: Floats) -> tuple[Floats, Floats]:
    """ln k today (q,), (q, q): the last visit's, or for pads it does not tell, carried from the visits before.

    Carrying uses a random walk (Kalman filter in information form) with a standard deviation of 10 % in a year.
    """
    last = visits[-1]
    if len(visits) == 1 or np.all(last.tells):
        return last.log_stiffness, last.covariance
    precision: Floats = held
    vector: Floats = held @ prior_mean
    time = visits[0].time
    for visit in visits:
        walked = np.linalg.inv(precision) + np.eye(prior_mean.size) * WALK_SD**2 * (visit.time - time)
        mean = np.linalg.solve(precision, vector)
        precision = np.asarray(np.linalg.inv(walked), dtype=np.float64)
        vector = precision @ mean + visit.information_vector
        precision = precision + visit.information
        time = visit.time
    covariance: Floats = np.asarray(np.linalg.inv(precision), dtype=np.float64)
    return covariance @ vector, covariance
