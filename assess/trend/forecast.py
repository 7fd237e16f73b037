"""Pads carried forward by draws, and when a threshold is crossed.

A draw takes a level from the last visit and, for each pad, either the drift or none of it, with the Akaike
weight of drift (model-averaged forecast, Burnham and Anderson 2002). Level and rate are drawn together: an
estimate that is too high at the last visit makes the rate too high as well.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.trend.laws import Trend

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
    covariance = np.zeros((2 * q, 2 * q))
    covariance[:q, :q] = trend.now_covariance
    covariance[q:, q:] = trend.covariance[q:, q:]
    covariance[:q, q:] = trend.covariance[:q, q:]
    covariance[q:, :q] = trend.covariance[q:, :q]
    values, vectors = np.linalg.eigh(covariance)
    root = vectors * np.sqrt(np.clip(values, 0.0, None))
    rng = np.random.default_rng(seed)
    both = rng.standard_normal((draws, 2 * q)) @ root.T + np.concatenate([trend.now, trend.rate])
    weight = np.array([law.drift_weight for law in trend.laws])
    rate = np.where(rng.random((draws, q)) < weight, both[:, q:], 0.0)
    return PadFuture(years=years, log_stiffness=both[:, None, :q] + years[None, :, None] * rate[:, None, :])


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
