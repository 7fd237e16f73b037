"""A robust companion to least squares: Student's t in place of the normal, for the readings.

Iteratively reweighted least squares, the EM algorithm of Lange, Little and Taylor (1989) with the scale known: the
weight of a reading whose whitened residual is r becomes (nu + 1) / (nu + r^2), and the weighted least squares are
solved anew until nothing moves. The prior is believed as it stands. The t likelihood may have several minima; the one
found is that which least squares lead to.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.calibrate.minimise import Linearised, minimise

Floats = NDArray[np.float64]

FREEDOM = 4.0
_PASSES = 300
_STILL = 1e-9  # of a standard deviation that any unknown still moves in one pass


@dataclass(frozen=True, kw_only=True)
class Robust:
    """A robust fit beside the least squares.

    Attributes
    ----------
    theta : (p,) unknowns
    weights : (count,) of the readings, from (nu + 1) / nu where a reading fits to near nothing where it does not
    moved : (p,) distance of theta from the start, in standard deviations of the least squares there
    converged : False where it still moved after the last pass
    passes : reweightings used
    """

    theta: Floats
    weights: Floats
    moved: Floats
    converged: bool
    passes: int


def robust(linearise: Linearised, start: Floats, count: int, *, freedom: float = FREEDOM) -> Robust:
    """Fit with Student-t weights.

    Parameters
    ----------
    linearise : returns whitened residuals (m,) and their Jacobian (m, p) at theta (p,)
    start : (p,) the least-squares solution
    count : how many of the first residuals are readings; the rest are rows of the prior
    freedom : nu of the t distribution, above 0; the larger, the nearer to least squares

    Raises
    ------
    ValueError
        if nu is not above 0.
    RuntimeError
        if a weighted fit does not converge.
    numpy.linalg.LinAlgError
        if the least squares do not fix the unknowns.
    """
    if not freedom > 0.0:
        raise ValueError(f"the degrees of freedom of the t distribution must be above 0, not {freedom}")
    residual, jacobian = linearise(start)
    sd = _deviations(jacobian)
    theta, converged, passes = start, False, 0
    while not converged and passes < _PASSES:
        passes += 1
        before, theta = (
            theta,
            minimise(_weighted(linearise, _weights(residual[:count], freedom)), theta).theta,
        )
        residual, _ = linearise(theta)
        converged = bool(np.all(np.abs(theta - before) <= _STILL * sd))
    return Robust(
        theta=theta,
        weights=_weights(residual[:count], freedom),
        moved=(theta - start) / sd,
        converged=converged,
        passes=passes,
    )


def _weights(residual: Floats, freedom: float) -> Floats:
    return np.asarray((freedom + 1.0) / (freedom + residual**2))


def _weighted(linearise: Linearised, weights: Floats) -> Linearised:
    root = np.sqrt(weights)

    def weighted(theta: Floats) -> tuple[Floats, Floats]:
        residual, jacobian = linearise(theta)
        scale = np.ones(residual.size)
        scale[: root.size] = root
        return residual * scale, jacobian * scale[:, None]

    return weighted


def _deviations(jacobian: Floats) -> Floats:
    """Standard deviations (p,) of least squares with this whitened Jacobian (m, p)."""
    scale = np.sqrt((jacobian * jacobian).sum(axis=0))
    unit = jacobian / scale
    return np.asarray(np.sqrt(np.diag(np.linalg.inv(unit.T @ unit))) / scale)
