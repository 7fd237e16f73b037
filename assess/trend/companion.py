"""Checks beside the laws, without normal errors: Theil-Sen slope, Mann-Kendall test, Pettitt's change point."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import stats

Floats = NDArray[np.float64]

_EXACT = 10  # values up to which the null distribution is taken exactly where no two are tied


@dataclass(frozen=True, kw_only=True)
class Companion:
    """What ranks alone say of a history.

    Attributes
    ----------
    slope, intercept : Theil-Sen, per unit of time; the line goes through the medians
    score, variance : Mann-Kendall S and its variance without a trend, ties counted
    p_value : two-sided
    """

    slope: float
    intercept: float
    score: int
    variance: float
    p_value: float


def companion(times: Floats, values: Floats) -> Companion:
    """Slope and test of values at ascending times, (visits,) each, at least two.

    Source: Theil 1950, Sen 1968 (slope); Mann 1945, Kendall 1975 (test). Up to ten values without ties the p value is
    exact, beyond that the normal approximation with the correction for continuity and for ties (EPA QA/G-9S, 2006).
    """
    slope, intercept, _, _ = stats.theilslopes(values, times)
    signs = np.sign(values[None, :] - values[:, None]) * (times[None, :] > times[:, None])
    score = round(float(signs.sum()))
    n = values.size
    _, ties = np.unique(values, return_counts=True)
    variance = float(n * (n - 1) * (2 * n + 5) - (ties * (ties - 1) * (2 * ties + 5)).sum()) / 18.0
    if n <= _EXACT and ties.max() == 1 and np.unique(times).size == n:
        p_value = float(stats.kendalltau(times, values, method="exact").pvalue)
    elif variance == 0.0:
        p_value = 1.0
    else:
        p_value = float(2.0 * stats.norm.sf(max(0, abs(score) - 1) / np.sqrt(variance)))
    return Companion(
        slope=float(slope),
        intercept=float(intercept),
        score=score,
        variance=variance,
        p_value=min(1.0, p_value),
    )


def pettitt(values: Floats) -> tuple[int, int, float]:
    """Pettitt's statistic K of values (n,), how many stand before the likeliest change, and the p value.

    Source: Pettitt, Applied Statistics 28 (1979); p = 2 exp(-6 K^2 / (n^3 + n^2)), good below 0.5.
    """
    n = values.size
    signs = np.sign(values[:, None] - values[None, :])
    before = np.abs(np.cumsum(signs.sum(axis=1)))[:-1]
    at = int(np.argmax(before))
    peak = float(before[at])
    return round(peak), at + 1, float(min(1.0, 2.0 * np.exp(-6.0 * peak**2 / (n**3 + n**2))))
