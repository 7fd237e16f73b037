"""Pads carried forward by draws, and when a threshold is crossed.

A draw takes a level from the last visit and, for each pad, one of its laws by their Akaike weights (model-averaged
forecast, Burnham and Anderson 2002): steady and step stay where they are, drift and creep go on, a walk wanders on.
Level and rate are drawn together: an estimate that is too high at the last visit makes the rate too high as well.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.trend.candidates import log_age
from assess.trend.laws import PadLaw, Trend

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class PadFuture:
    """Draws of the pads through time: log_stiffness (draws, times, q); years (times,) from the last visit."""

    years: Floats
    log_stiffness: Floats


@dataclass(frozen=True, kw_only=True)
class Crossing:
    """When a threshold is passed, in years from the last visit.

    Attributes
    ----------
    probability : (times,) of having passed it by then
    median : year by which half of the draws have passed it; None if they have not within the years looked at
    earliest : year by which 5 % of them have; None likewise
    """

    probability: Floats
    median: float | None
    earliest: float | None


def pad_future(trend: Trend, years: Floats, *, draws: int, seed: int) -> PadFuture:
    """Draw the pads through time.

    Parameters
    ----------
    trend : Trend of q pads
    years : (times,) from the last visit
    draws, seed : number of draws, and the seed that makes them again
    """
    q = trend.now.size
    covariance = trend.covariance.copy()
    covariance[:q, :q] = trend.now_covariance
    values, vectors = np.linalg.eigh(covariance)
    root = vectors * np.sqrt(np.clip(values, 0.0, None))
    rng = np.random.default_rng(seed)
    both = rng.standard_normal((draws, 2 * q)) @ root.T
    change = np.empty((draws, years.size, q))
    for i, law in enumerate(trend.laws):
        change[:, :, i] = _change(trend, i, law, both[:, q + i], years, rng)
    now = trend.now + both[:, :q]
    return PadFuture(years=years, log_stiffness=now[:, None, :] + change)


def _change(
    trend: Trend, pad: int, law: PadLaw, off: Floats, years: Floats, rng: np.random.Generator
) -> Floats:
    """Change of ln k (draws, times) since the last visit; `off` (draws,) is what the rate is off its estimate.

    The same deviate serves every law: rate and creep are told by the same visits.
    """
    names = list(law.weights)
    chosen = rng.choice(len(names), size=off.size, p=np.array(list(law.weights.values())))
    result = np.zeros((off.size, years.size))
    for number, name in enumerate(names):
        own = np.flatnonzero(chosen == number)
        rate = (trend.rate[pad] + off[own])[:, None]
        if name == "drift":
            result[own] = rate * years
        elif name == "creep" and law.age is not None:
            pace = trend.creep[pad] + off[own] * trend.creep_sd[pad] / law.rate_sd
            age = law.age - trend.times[0]
            result[own] = pace[:, None] * (log_age(years, age) - log_age(np.zeros(1), age))
        elif name == "wander":
            span = float(-trend.times[0])
            steps = np.sqrt(law.walk * np.diff(years, prepend=0.0)) * rng.standard_normal(
                (own.size, years.size)
            )
            drift = rate + np.sqrt(law.walk / span) * rng.standard_normal((own.size, 1))
            result[own] = drift * years + steps.cumsum(axis=1)
    return result


def crossing(utilisation: Floats, years: Floats, threshold: float) -> Crossing:
    """Find when utilisation (draws, times) passes a threshold; a draw that has passed it has passed it for good."""
    passed = np.maximum.accumulate(utilisation, axis=1) > threshold
    probability = passed.mean(axis=0)
    return Crossing(
        probability=probability,
        median=_reach(probability, years, 0.5),
        earliest=_reach(probability, years, 0.05),
    )


def _reach(probability: Floats, years: Floats, level: float) -> float | None:
    above = np.flatnonzero(probability >= level)
    if not above.size:
        return None
    i = int(above[0])
    if i == 0:
        return float(years[0])
    low, high = probability[i - 1], probability[i]
    return float(years[i - 1] + (level - low) / (high - low) * (years[i] - years[i - 1]))
