"""Candidate laws of one value over the visits: what each is linear in, and what it costs.

Steady, steady drift, creep on log time, a step between two visits, and a random walk with drift once there are
six visits. The variances of the visits are known from their readings, so a parameter costs 2 (Akaike 1973; what AICc
adds belongs to a variance estimated from the same data: Hurvich and Tsai 1989). The one law whose variance is
estimated from the visits, the walk, pays the correction of AICc. A step counts its place as a parameter.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

LAWS = ("steady", "drift", "creep", "step", "wander")
STEP_VISITS = 4  # fewer cannot tell a step from a drift
CREEP_VISITS = 4  # fewer cannot tell creep from a drift
WANDER_VISITS = 6
_YOUNGEST = 1.0 / 365.25  # years: the age that log time starts from
_WALKS = np.array([0.3, 0.6, 1.2, 2.5, 5.0, 10.0, 30.0, 100.0])
"""Standard deviations of the walk over the whole history that are tried, in those of a usual visit."""


@dataclass(frozen=True, kw_only=True)
class Candidate:
    """One law with all that is fixed before the values are seen.

    Attributes
    ----------
    law : one of LAWS
    design : (visits, parameters), the first column the level
    walk : variance of the walk per year; 0 for the other laws
    cost : what -2 ln likelihood is raised by
    gap : the visit before the step; -1 for the other laws
    """

    law: str
    design: Floats
    walk: float
    cost: float
    gap: int = -1


def log_age(times: Floats, age: float) -> Floats:
    """Log time, ln(age + t), of times (...) in years from when the thing was `age` years old."""
    return np.asarray(np.log(np.maximum(age + times, _YOUNGEST)))


def candidates(times: Floats, variance: Floats, age: float | None) -> Iterator[Candidate]:
    """All laws that so many visits can carry.

    Parameters
    ----------
    times : (visits,) years, ascending
    variance : (visits,) of the value at each visit
    age : years of the thing followed at time 0; None leaves creep out
    """
    count = times.size
    level = np.ones((count, 1))
    yield Candidate(law="steady", design=level, walk=0.0, cost=2.0)
    if count < 2 or times[-1] <= times[0]:
        return
    middle = times.mean()
    line = np.column_stack([level, times - middle])
    yield Candidate(law="drift", design=line, walk=0.0, cost=4.0)
    if age is not None and count >= CREEP_VISITS:
        curve = log_age(times, age)
        yield Candidate(
            law="creep", design=np.column_stack([level, curve - curve.mean()]), walk=0.0, cost=4.0
        )
    if count >= STEP_VISITS:
        for gap in range(count - 1):
            after = (np.arange(count) > gap).astype(float)
            yield Candidate(law="step", design=np.column_stack([level, after]), walk=0.0, cost=6.0, gap=gap)
    if count >= WANDER_VISITS:
        usual = 1.0 / np.mean(1.0 / variance)
        cost = 6.0 + 2.0 * 3.0 * 4.0 / (count - 3 - 1)
        for walk in _WALKS**2 * usual / (times[-1] - times[0]):
            yield Candidate(law="wander", design=line, walk=float(walk), cost=cost)


def covariance(candidate: Candidate, times: Floats, variance: Floats) -> Floats:
    """Covariance (visits, visits) of the values under a law: the visits' own, and what the walk adds."""
    ages = times - times[0]
    return np.asarray(np.diag(variance) + candidate.walk * np.minimum.outer(ages, ages))
