"""Draws of the unknowns from the whole posterior, not only from its normal picture.

The density is exp(-cost / 2), cost the sum of squared whitened residuals with the rows of the prior. Draws of the
normal (Laplace) approximation are weighed against it; the effective number of draws is (sum w)^2 / sum w^2 (Kong, Liu
and Wong 1994). Where they are nearly even the normal draws stand as they are. Where they are not, a t distribution of 7
degrees of freedom proposes instead, because weights of a normal hide what lies in a tail heavier than its own, and the
draws are resampled systematically (Kitagawa 1996). Weights are not smoothed, as Pareto smoothing (Vehtari et al. 2024)
would: resampling already bounds what one draw can do, and the shape of their tail is used to tell whether they can be
trusted at all. Where they cannot, an ensemble of walkers samples (`ensemble.py`).
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import stats

from assess.calibrate.ensemble import walk
from assess.calibrate.fit import draw_normal

Floats = NDArray[np.float64]
Cost = Callable[[Floats], Floats]

EVEN = 0.90  # of the draws effective: the normal stands
FEW = 0.10  # of the draws effective, or less: the ensemble samples
_FREEDOM = (
    7.0  # of the t proposal: costs 10 % of the draws in 4 unknowns, 24 % in 12, where a normal was right
)
_WIDE, _WIDER = 0.2, 3.0  # of the proposals, a share so many times wider: finds what lies apart
_POOL = 10  # times the draws wanted are proposed before they are resampled
_FLAT = 1e-13  # of the largest eigenvalue of the correlations: a direction with less does not vary
_HEAVY = 0.7  # shape of the weights' tail past which their mean converges too slowly to be used (Vehtari et al. 2024)


@dataclass(frozen=True, kw_only=True)
class Posterior:
    """Draws of the unknowns.

    Attributes
    ----------
    draws : (count, p), equally weighted
    effective : independent draws that they are worth; where resampled, 1 / (1 / count + 1 / effective of the pool)
    kind : "normal" (the approximation stands), "weighted" (resampled by importance) or "ensemble"
    mean, covariance : (p,), (p, p) of the draws
    converged : False where the ensemble did not settle; the draws are then not to be relied on
    reason : why the kind is what it is, or why it did not converge
    """

    draws: Floats
    effective: float
    kind: str
    mean: Floats
    covariance: Floats
    converged: bool
    reason: str


def draw_posterior(
    cost: Cost, mean: Floats, covariance: Floats, *, count: int = 4000, seed: int
) -> Posterior:
    """Draw from the posterior.

    Parameters
    ----------
    cost : sums of squared whitened residuals (d,) for unknowns (d, p); inf or NaN where the unknowns are impossible
    mean : (p,) the least-squares solution
    covariance : (p, p) its covariance (J'J)^-1; a direction without variance is held
    count : draws wanted
    seed : the same seed gives the same draws, digit for digit

    Raises
    ------
    ValueError
        if the cost at the mean is not finite.
    """
    near = _Near.of(mean, covariance)
    at_best = float(cost(mean[None])[0])
    if not math.isfinite(at_best):
        raise ValueError("the cost of the unknowns drawn around is not finite")

    def rise(theta: Floats) -> Floats:
        with np.errstate(
            over="ignore", invalid="ignore", divide="ignore"
        ):  # far out a stiffness may be no number
            found = _possible(cost, theta) - at_best
        return np.where(np.isnan(found), np.inf, found)

    draws = draw_normal(mean, covariance, count, seed)
    share = _share(-rise(draws) / 2.0 + near.square(draws) / 2.0)
    if share >= EVEN:
        return _told(draws, share * count, "normal", f"{share:.0%} of the normal draws are effective")
    rng = np.random.default_rng([seed, 1])
    draws, log_weight = _weigh(rise, near, count, rng)
    share, shape = _share(log_weight), tail_shape(log_weight)
    if share > FEW and shape <= _HEAVY:
        chosen = draws[_systematic(log_weight, count, rng)]
        effective = 1.0 / (1.0 / count + 1.0 / (share * log_weight.size))
        return _told(chosen, effective, "weighted", f"{share:.0%} of the weighted draws are effective")
    why = f"only {share:.1%} of the weighted draws are effective"
    if share > FEW:
        why = f"few draws carry most of the weight (shape of its tail {shape:.2f})"
    return _by_ensemble(rise, near, draws[_heaviest(log_weight, count, rng)], count, rng, why)


@dataclass(frozen=True, kw_only=True)
class _Near:
    """The normal approximation in r directions that vary, of unit variance: theta = mean + root z.

    Made of the correlations, because a seat in metres and a ln k differ by many powers of ten.
    """

    mean: Floats
    root: Floats  # (p, r)
    back: Floats  # (r, p), so that z = back (theta - mean)

    @classmethod
    def of(cls, mean: Floats, covariance: Floats) -> _Near:
        sd = np.sqrt(np.diag(covariance))
        unit = np.where(sd > 0.0, sd, 1.0)
        values, vectors = np.linalg.eigh((covariance + covariance.T) / 2.0 / np.outer(unit, unit))
        varies = values > _FLAT * max(values.max(initial=0.0), 1.0)
        size, vectors = np.sqrt(values[varies]), vectors[:, varies]
        return cls(mean=mean, root=unit[:, None] * vectors * size, back=(vectors / size).T / unit)

    def theta(self, z: Floats) -> Floats:
        """Unknowns (d, p) of z (d, r)."""
        return np.asarray(self.mean + z @ self.root.T)

    def z(self, theta: Floats) -> Floats:
        """z (d, r) of unknowns (d, p)."""
        return np.asarray((theta - self.mean) @ self.back.T)

    def square(self, theta: Floats) -> Floats:
        """Squared distance (d,) of unknowns (d, p) from the mean, in standard deviations."""
        return np.asarray((self.z(theta) ** 2).sum(axis=1))


def _possible(cost: Cost, theta: Floats) -> Floats:
    """Costs (d,), inf where the equations cannot be solved: one such row would spoil the batch, so it is halved."""
    try:
        return np.asarray(cost(theta), dtype=np.float64)
    except np.linalg.LinAlgError:
        if len(theta) == 1:
            return np.array([np.inf])
    halves = np.array_split(theta, 2)
    return np.concatenate([_possible(cost, half) for half in halves])


def _told(draws: Floats, effective: float, kind: str, reason: str, converged: bool = True) -> Posterior:
    spread = np.atleast_2d(np.cov(draws.T))
    return Posterior(
        draws=draws,
        effective=effective,
        kind=kind,
        mean=draws.mean(axis=0),
        covariance=spread,
        converged=converged,
        reason=reason,
    )


def _weigh(rise: Cost, near: _Near, count: int, rng: np.random.Generator) -> tuple[Floats, Floats]:
    """Ten times `count` draws of the proposal and the logarithms of their weights, up to a constant.

    Ten times, because the weights are largest in the tails, where moments of few draws would err by twice what their
    effective number says. In blocks, which bounds the memory.
    """
    directions, pool = near.root.shape[1], _POOL * count
    z = rng.standard_normal((pool, directions))
    z *= np.sqrt(_FREEDOM / rng.chisquare(_FREEDOM, pool))[:, None]
    z[rng.random(pool) < _WIDE] *= _WIDER
    draws, square, power = near.theta(z), (z * z).sum(axis=1), -(_FREEDOM + directions) / 2.0
    core = math.log1p(-_WIDE) + power * np.log1p(square / _FREEDOM)
    wide = math.log(_WIDE) - directions * math.log(_WIDER) + power * np.log1p(square / _WIDER**2 / _FREEDOM)
    told = np.concatenate([rise(block) for block in np.split(draws, _POOL)])
    return draws, -told / 2.0 - np.logaddexp(core, wide)


def _share(log_weight: Floats) -> float:
    """Effective share of the draws, 0 to 1; 0 where none is possible."""
    top = log_weight.max()
    if not np.isfinite(top):
        return 0.0
    weight = np.exp(log_weight - top)
    return float(weight.sum() ** 2 / (weight @ weight) / weight.size)


def tail_shape(log_weight: Floats) -> float:
    """Shape k of the generalised Pareto tail of some weights: they have moments up to order 1 / k.

    The tail is the largest 3 sqrt(d) or fifth of the d weights, whichever is less (Vehtari et al. 2024); scipy's
    maximum likelihood where they use Zhang and Stephens (2009).
    """
    count = min(log_weight.size // 5, int(3.0 * math.sqrt(log_weight.size)))
    ordered = np.exp(np.sort(log_weight) - log_weight.max())
    excess = ordered[-count:] - ordered[-count - 1]
    excess = excess[excess > 0.0]
    if excess.size < 5:
        return math.inf
    shape, _, _ = stats.genpareto.fit(excess / excess.mean(), floc=0.0)
    return float(shape)


def _systematic(log_weight: Floats, count: int, rng: np.random.Generator) -> NDArray[np.intp]:
    """Indices (count,) of draws, each as often as its weight says, to within one."""
    weight = np.exp(log_weight - log_weight.max())
    upto = np.cumsum(weight / weight.sum())
    upto[-1] = 1.0
    return np.searchsorted(upto, (np.arange(count) + rng.random()) / count, side="right")


def _heaviest(log_weight: Floats, count: int, rng: np.random.Generator) -> NDArray[np.intp]:
    """Indices of up to `count` distinct possible draws, taken by weight without replacement (Gumbel's way)."""
    order = np.argsort(-(log_weight + rng.gumbel(size=log_weight.size)))
    return order[: min(count, int(np.isfinite(log_weight).sum()))]


def _by_ensemble(
    rise: Cost, near: _Near, start: Floats, count: int, rng: np.random.Generator, why: str
) -> Posterior:
    """Walk in the scaled directions from some draws (s, p)."""
    seed = int(rng.integers(2**31))
    walked = walk(lambda z: -rise(near.theta(z)) / 2.0, near.z(start), count=count, seed=seed)
    return _told(
        near.theta(walked.draws),
        walked.effective,
        "ensemble",
        why if walked.reason is None else f"{why}, and {walked.reason}",
        converged=walked.reason is None,
    )
