"""What a forecast's spread comes from."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]


def variance_shares(inputs: Floats, outcome: Floats) -> Floats:
    """Share of the variance of an outcome that each input drives, to first order.

    A linear regression of the outcome on the inputs; the share of an input is its coefficient times its covariance with
    the outcome, over the outcome's variance (Pratt 1987). The shares add up to R squared: what is missing to 1 is no
    straight line of the inputs. Inputs that do not vary have no share; an outcome that does not vary gives noughts.

    Parameters
    ----------
    inputs : (draws, inputs)
    outcome : (draws,)

    Returns
    -------
    (inputs,)
    """
    x, y = inputs - inputs.mean(axis=0), outcome - outcome.mean()
    sd = x.std(axis=0)
    own = sd > 1e-12 * np.maximum(np.abs(inputs).max(axis=0), 1e-300)
    shares = np.zeros(inputs.shape[1])
    variance = float(y @ y)
    if not own.any() or not variance > (1e-9 * float(np.abs(outcome).max())) ** 2 * y.size:
        return shares
    z = x[:, own] / sd[own]
    coefficient = np.linalg.lstsq(z, y, rcond=None)[0]
    shares[own] = coefficient * (z.T @ y) / variance
    return shares
