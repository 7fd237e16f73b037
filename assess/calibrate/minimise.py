"""Least squares with an exact Jacobian: plain Gauss-Newton, and a trust region where that does not do.

The residuals of a calibration are smooth and nearly linear in ln k, so Gauss-Newton with halved steps is done in a
handful of steps, each one small QR. Where it stalls, scipy's trust-region reflective algorithm takes over
(Branch, Coleman and Li 1999). An explanation that hardly fits has large residuals, and both creep towards its minimum:
there it is enough that nothing more is to be gained that a statistic would see.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.linalg.lapack import dgels
from scipy.optimize import least_squares

Floats = NDArray[np.float64]
Linearised = Callable[[Floats], tuple[Floats, Floats]]

_STEPS = 30
_HALVINGS = 12
_FARTHEST = 4.0  # of one step in any unknown: e^4 in stiffness; past it the linear picture says nothing
_SMALL = 1e-10  # of a step against the unknowns, and of what a step could still gain against the cost
_STILL = 1e-4  # of a chi-square, that a step could still gain: a hundredth of a standard deviation


@dataclass(frozen=True, kw_only=True)
class Minimum:
    """A minimum: unknowns (size,), evaluations used, and whether the trust region was needed."""

    theta: Floats
    evaluations: int
    trust_region: bool


def minimise(linearise: Linearised, start: Floats) -> Minimum:
    """Minimise the sum of squared residuals.

    Parameters
    ----------
    linearise : returns residuals (m,) and their Jacobian (m, size) at theta (size,)
    start : (size,)

    Raises
    ------
    RuntimeError
        if neither method converges.
    """
    found = _gauss_newton(linearise, start)
    return found if found is not None else _trust_region(linearise, start)


def _gauss_newton(linearise: Linearised, start: Floats) -> Minimum | None:
    theta, used = start, 1
    residual, jacobian = linearise(theta)
    cost = float(residual @ residual)
    for _ in range(_STEPS):
        scale = np.sqrt((jacobian * jacobian).sum(axis=0))
        if not np.all(scale > 0.0) or not np.isfinite(cost):
            return None
        factors, solution, info = dgels(jacobian / scale, residual)  # one small QR
        if info or np.abs(factors.diagonal()).min() < 1e-12:
            return None
        solution = solution[: theta.size].ravel()
        gain = np.triu(factors[: theta.size]) @ solution
        step = -solution / scale
        done = bool(gain @ gain <= _SMALL**2 * max(cost, 1e-12))
        if done or float(np.abs(step).max()) <= _SMALL * max(1.0, float(np.abs(theta).max())):
            return Minimum(theta=theta + step, evaluations=used, trust_region=False)
        step = step * min(1.0, _FARTHEST / float(np.abs(step).max()))
        for _ in range(_HALVINGS):
            used += 1
            next_residual, next_jacobian = linearise(theta + step)
            next_cost = float(next_residual @ next_residual)
            if next_cost <= cost:
                break
            step = step / 2.0
        else:
            return None
        theta, residual, jacobian, cost = theta + step, next_residual, next_jacobian, next_cost
    return None


def _could_gain(residual: Floats, jacobian: Floats) -> float:
    """What a Gauss-Newton step would take off the cost."""
    scale = np.linalg.norm(jacobian, axis=0)
    if not np.all(scale > 0.0):
        return np.inf
    step = np.linalg.lstsq(jacobian / scale, residual, rcond=None)[0]
    return float(((jacobian / scale @ step) ** 2).sum())


def _trust_region(linearise: Linearised, start: Floats) -> Minimum:
    def residual(theta: Floats) -> Floats:
        return linearise(theta)[0]

    def jacobian(theta: Floats) -> Floats:
        return linearise(theta)[1]

    found = least_squares(
        residual,
        start,
        jac=jacobian,
        method="trf",
        x_scale="jac",
        xtol=1e-12,
        ftol=1e-12,
        gtol=1e-12,
        max_nfev=400,
    )
    if not (found.success or _could_gain(found.fun, jacobian(found.x)) <= _STILL):
        raise RuntimeError(f"the fit did not converge in {found.nfev} evaluations")
    return Minimum(theta=found.x, evaluations=int(found.nfev), trust_region=True)
