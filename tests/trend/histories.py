"""Visits of invented pads, made from what their readings alone would tell."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.trend import VisitEstimate

Floats = NDArray[np.float64]

MEAN = np.log(np.array([2.4e5, 3.6e5, 3.6e5]))
TAU = np.full(3, 0.294)
TIMES = np.array([0.0, 2.1, 3.3, 4.7, 6.1, 8.0])
CORRELATION = np.array([[1.0, 0.5, -0.2], [0.5, 1.0, 0.3], [-0.2, 0.3, 1.0]])


def covariance(sd: float | Floats) -> Floats:
    """What the readings of a visit leave open, (3, 3): correlated pads."""
    each = np.broadcast_to(sd, 3)
    return np.asarray(CORRELATION * np.outer(each, each))


def visit(
    time: float, told: Floats, information: Floats, mean: Floats = MEAN, tau: Floats = TAU
) -> VisitEstimate:
    """A visit whose readings alone say `told` (q,) with an information matrix (q, q); the prior enters the estimate."""
    held = np.diag(tau**-2.0)
    posterior = np.linalg.inv(information + held)
    vector = information @ told
    return VisitEstimate(
        time=time,
        log_stiffness=posterior @ (vector + held @ mean),
        covariance=posterior,
        information=information,
        information_vector=vector,
        data_share=1.0 - np.diag(posterior) / tau**2,
    )


def history(
    level: Floats,
    rate: Floats,
    rng: np.random.Generator | None,
    *,
    sd: float | Floats = 0.05,
    times: Sequence[float] | Floats = TIMES,
) -> list[VisitEstimate]:
    """Visits of pads that stand at `level` on the last day and change by `rate` a year; no generator, no noise."""
    spread = covariance(sd)
    information, root = np.linalg.inv(spread), np.linalg.cholesky(spread)
    visits = []
    for time in times:
        told = level + rate * (time - times[-1])
        if rng is not None:
            told = told + root @ rng.standard_normal(3)
        visits.append(visit(float(time), told, information))
    return visits
