"""What is believed of the pads before anything is read."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.linalg import solve_triangular

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class PadPrior:
    """Prior of the pads: ln k ~ N(mean, C) with C_ij = correlation_ij sd_i sd_j.

    Parameters
    ----------
    mean, sd : (q,)
    correlation : (q, q) with a unit diagonal; None where the pads are believed independent

    Raises
    ------
    ValueError
        if the correlation is not that of a covariance that can be inverted.
    """

    mean: Floats
    sd: Floats
    correlation: Floats | None = None

    def __post_init__(self) -> None:
        given = self.correlation
        if given is None:
            return
        q = self.mean.size
        shaped = given.shape == (q, q) and np.all(np.diag(given) == 1.0) and np.array_equal(given, given.T)
        if not shaped or (q and np.linalg.eigvalsh(given)[0] < 1e-9):
            raise ValueError("the correlation of the pads is not that of a covariance")

    @property
    def covariance(self) -> Floats:
        """C, (q, q)."""
        if self.correlation is None:
            return np.diag(self.sd**2)
        return np.asarray(self.correlation * np.outer(self.sd, self.sd))

    @property
    def precision(self) -> Floats:
        """Inverse of C, (q, q); an infinite sd of independent pads holds nothing."""
        if self.correlation is None:
            return np.diag(1.0 / self.sd**2)
        return np.asarray(self._root.T @ self._root)

    @cached_property
    def _root(self) -> Floats:
        """W (q, q), the inverse of the Cholesky factor of C: W (ln k - mean) is of unit variance."""
        assert self.correlation is not None
        factor = np.linalg.cholesky(self.correlation)
        return np.asarray(solve_triangular(factor, np.eye(self.sd.size), lower=True) / self.sd)

    def rows(self, size: int) -> Floats:
        """Whitened rows (q, size) of the prior in a least squares of `size` unknowns, the pads first."""
        q = self.sd.size
        if self.correlation is None:
            return np.asarray(np.eye(q, size) / self.sd[:, None])
        return np.concatenate([self._root, np.zeros((q, size - q))], axis=1)

    def residual(self, log_stiffness: Floats) -> Floats:
        """Whitened distance (..., q) of ln k (..., q) from the mean."""
        if self.correlation is None:
            return np.asarray((log_stiffness - self.mean) / self.sd)
        return np.asarray((log_stiffness - self.mean) @ self._root.T)

    def pull(self, log_stiffness: Floats) -> Floats:
        """How hard the prior holds (q,): precision times the distance from the mean."""
        if self.correlation is None:
            return np.asarray((log_stiffness - self.mean) / self.sd**2)
        return np.asarray(self._root.T @ (self._root @ (log_stiffness - self.mean)))

    def share(self, covariance: Floats, information: Floats) -> Floats:
        """Share (q,) of each pad's prior variance that the readings take away.

        Parameters
        ----------
        covariance : (q, q) of ln k after the fit
        information : (q, q) inverse variance from the readings alone

        With correlated pads the readings are taken together with independent pads of the same sd, so that what one pad
        learns from its sisters by assumption does not count as read.
        """
        if self.correlation is None:
            return np.asarray(1.0 - np.diag(covariance) / self.sd**2)
        scaled = np.eye(self.sd.size) + information * np.outer(self.sd, self.sd)
        return np.asarray(1.0 - np.diag(np.linalg.inv(scaled)))


@dataclass(frozen=True, kw_only=True)
class Prior:
    """What is believed of all unknowns: the pads as they are, the others each for itself.

    Parameters
    ----------
    pads : None where nothing is believed of them
    mean, sd : (r,) of the unknowns after the pads; sd infinite where nothing is believed
    """

    pads: PadPrior | None
    mean: Floats
    sd: Floats

    @property
    def _held(self) -> NDArray[np.bool_]:
        return np.isfinite(self.sd)

    @property
    def holds_all(self) -> bool:
        """Whether something is believed of every unknown."""
        return self.pads is not None and bool(self._held.all())

    def rows(self, size: int) -> Floats:
        """Whitened rows (k, size) in a least squares of `size` unknowns."""
        q = size - self.sd.size
        others = np.eye(self.sd.size, size, q)[self._held] / self.sd[self._held, None]
        return others if self.pads is None else np.concatenate([self.pads.rows(size), others])

    def residual(self, theta: Floats) -> Floats:
        """Whitened distance (..., k) of theta (..., size) from the mean."""
        q = theta.shape[-1] - self.sd.size
        others = ((theta[..., q:] - self.mean) / self.sd)[..., self._held]
        if self.pads is None:
            return np.asarray(others)
        return np.concatenate([self.pads.residual(theta[..., :q]), others], axis=-1)

    def variances(self, size: int) -> Floats:
        """Prior variances (size,), infinite where nothing is believed."""
        q = size - self.sd.size
        pads = np.full(q, np.inf) if self.pads is None else self.pads.sd**2
        return np.concatenate([pads, self.sd**2])
