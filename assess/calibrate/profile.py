"""Intervals from the profile likelihood: one unknown held, all others fitted anew.

The interval holds every value of an unknown for which the cost, least over all others, rises by no more than the
chi-square quantile of one degree of freedom (Venzon and Moolgavkar 1988). They solve for the end with all unknowns at
once; here the root of the profiled cost is bracketed and found, which needs no good start. An end that the cost never
reaches is open.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq
from scipy.stats import norm

from assess.calibrate.minimise import Linearised, minimise

Floats = NDArray[np.float64]

REACH = 32.0  # half-widths of the normal interval within which an end is looked for
OFF = 0.10  # of its half-width by which an end of the normal interval may be off before it is profiled
_CLOSE = 1e-7  # of a half-width: how well an end is found
_HIGH = 100.0  # times too high a root of the cost: infinite to the root finder
_STEPS = 3  # Gauss-Newton steps of the cheap test


def profile_interval(
    linearise: Linearised, theta: Floats, covariance: Floats, index: int, *, level: float = 0.95
) -> tuple[float, float]:
    """Profile-likelihood interval of one unknown.

    Parameters
    ----------
    linearise : returns whitened residuals (m,), rows of the prior included, and their Jacobian (m, p) at theta (p,)
    theta : (p,) the least-squares solution
    covariance : (p, p) (J'J)^-1 there
    index : which unknown
    level : of confidence

    Returns
    -------
    low, high, in the unit of the unknown; -inf or inf where the cost has not risen enough `REACH` half-widths of the
    normal interval out. Where it is not monotone, the first crossing between half-widths 1, 2, 4 and so on is taken.

    Raises
    ------
    RuntimeError
        if a fit of the other unknowns does not converge.
    """
    return _end(linearise, theta, covariance, index, -1.0, level), _end(
        linearise, theta, covariance, index, 1.0, level
    )


def intervals(
    linearise: Linearised,
    theta: Floats,
    covariance: Floats,
    *,
    which: NDArray[np.intp],
    level: float = 0.95,
) -> tuple[Floats, Floats, NDArray[np.bool_]]:
    """Intervals of some unknowns: the normal one where it does, else that of the profile.

    Parameters
    ----------
    which : (u,) indices of the unknowns; the others as for `profile_interval`

    Returns
    -------
    lows, highs (u,), and flags (u,) of those that were profiled because an end of the normal interval is off by more
    than 10 % of its half-width, by a cheap estimate: the cost there after a few Gauss-Newton steps of the others.
    """
    half = float(norm.ppf((1.0 + level) / 2.0)) * np.sqrt(np.diag(covariance)[which])
    lows, highs = theta[which] - half, theta[which] + half
    profiled = np.zeros(which.size, dtype=np.bool_)
    for j, index in enumerate(which):
        if half[j] > 0.0 and _is_off(linearise, theta, covariance, int(index), level):
            lows[j], highs[j] = profile_interval(linearise, theta, covariance, int(index), level=level)
            profiled[j] = True
    return lows, highs, profiled


def _end(
    linearise: Linearised, theta: Floats, covariance: Floats, index: int, side: float, level: float
) -> float:
    """One end; positions are counted in half-widths of the normal interval, outward."""
    z = float(norm.ppf((1.0 + level) / 2.0))
    half = z * math.sqrt(covariance[index, index])
    if half == 0.0:
        return float(theta[index])
    profile = _Profile(linearise, theta, covariance, index)

    def above(position: float) -> float:  # nearly linear in the position, which a root finder likes
        return min(math.sqrt(max(profile.rise(side * half * position), 0.0)) / z, _HIGH) - 1.0

    inner, outer = 0.0, 1.0
    while (out := above(outer)) < -_CLOSE:
        if outer >= REACH:
            return side * math.inf
        inner, outer = outer, 2.0 * outer
    if out <= _CLOSE:
        return float(theta[index] + side * half * outer)
    return float(theta[index] + side * half * brentq(above, inner, outer, xtol=_CLOSE, rtol=1e-12))


class _Profile:
    """The cost above its least as a function of one unknown, the others fitted anew from the last fit."""

    def __init__(self, linearise: Linearised, theta: Floats, covariance: Floats, index: int) -> None:
        self.linearise, self.theta, self.index = linearise, theta, index
        self.others = np.flatnonzero(np.arange(theta.size) != index)
        variance = covariance[index, index]
        self.follow = covariance[self.others, index] / variance  # how the others follow, were all linear
        self.least = _cost(linearise, theta)
        self._fitted: tuple[float, Floats] = (0.0, theta[self.others])

    def rise(self, shift: float) -> float:
        """Rise of the cost with the unknown held `shift` away; inf where no cost can be computed."""
        at, others = self._fitted
        held, start = self._held(shift), others + self.follow * (shift - at)
        cost = _cost(held, start)
        if self.others.size and math.isfinite(cost):
            start = minimise(held, start).theta
            self._fitted, cost = (shift, start), _cost(held, start)
        return cost - self.least

    def rough_rise(self, shift: float) -> float:
        """The same after a few Gauss-Newton steps that lower the cost, or fewer."""
        held, others = self._held(shift), self.theta[self.others] + self.follow * shift
        cost = _cost(held, others)
        for _ in range(_STEPS if others.size and math.isfinite(cost) else 0):
            residual, jacobian = held(others)
            others = others - np.linalg.lstsq(jacobian, residual, rcond=None)[0]
            if not (lower := _cost(held, others)) < cost:
                break
            cost = lower
        return cost - self.least

    def _with(self, shift: float, others: Floats) -> Floats:
        full = self.theta.copy()
        full[self.index] += shift
        full[self.others] = others
        return full

    def _held(self, shift: float) -> Linearised:
        def held(others: Floats) -> tuple[Floats, Floats]:
            residual, jacobian = self.linearise(self._with(shift, others))
            return residual, jacobian[:, self.others]

        return held


def _cost(held: Linearised, others: Floats) -> float:
    with np.errstate(
        over="ignore", invalid="ignore", divide="ignore"
    ):  # far out a stiffness may be no number
        try:
            residual, _ = held(others)
        except np.linalg.LinAlgError:
            return math.inf
        cost = float(residual @ residual)
    return cost if math.isfinite(cost) else math.inf


def _is_off(linearise: Linearised, theta: Floats, covariance: Floats, index: int, level: float) -> bool:
    """Whether either end of the normal interval is off, taking the root of the rise as linear."""
    z = float(norm.ppf((1.0 + level) / 2.0))
    profile = _Profile(linearise, theta, covariance, index)
    for side in (-1.0, 1.0):
        rise = profile.rough_rise(side * z * math.sqrt(covariance[index, index]))
        if not rise > 0.0 or not abs(z / math.sqrt(rise) - 1.0) <= OFF:
            return True
    return False
