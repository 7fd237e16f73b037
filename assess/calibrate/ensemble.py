"""An ensemble of walkers (Goodman and Weare 2010, as in emcee), for a posterior that no proposal fits.

How long it walks is judged by the integrated autocorrelation time, as emcee's own documentation advises: the chain
must be fifty times as long, and the estimate must have settled.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

_TIMES = 50.0  # autocorrelation times that a chain must hold
_SETTLED = 0.05  # change of the estimated time between two looks
_LOOK = 500  # steps between two looks
_LONGEST = 20_000  # steps
_BURN = 5.0  # autocorrelation times left out at the start
_REACH = 1000.0  # of any unknown: a density that does not fall off would take the walkers to infinity
_STRAYED = 1e-3  # share of the draws past half the reach from which the density is called unbounded


@dataclass(frozen=True, kw_only=True)
class Walked:
    """Draws (count, p), how many independent ones they are worth, and why they are not to be relied on, or None."""

    draws: Floats
    effective: float
    reason: str | None


def walk(
    log_density: Callable[[Floats], Floats], start: Floats, *, count: int, seed: int, longest: int = _LONGEST
) -> Walked:
    """Sample a density known up to a constant.

    Parameters
    ----------
    log_density : (d,) of unknowns (d, p) of a size near one; -inf where impossible
    start : (s, p) distinct possible unknowns, best first, about where the density lies; as many as needed are used
    count : draws wanted
    seed : the same seed gives the same draws
    longest : steps after which it gives up
    """
    from emcee import EnsembleSampler, State

    def bounded(theta: Floats) -> Floats:
        inside = np.abs(theta).max(axis=1) <= _REACH
        found = np.full(len(theta), -np.inf)
        found[inside] = log_density(theta[inside])
        return found

    p = start.shape[1]
    walkers = 2 * max(32, 2 * p)
    rng = np.random.default_rng(seed)
    if start.shape[0] < walkers:
        start = 0.01 * rng.standard_normal((walkers, p))
    # the stretch move alone: moves along differences of walkers were quicker and left thin tails unvisited
    sampler = EnsembleSampler(walkers, p, bounded, vectorize=True)
    # emcee draws from an old-style state of its own; the global one is never touched
    state = State(start[:walkers], random_state=np.random.RandomState(seed).get_state())
    time, settled = np.inf, False
    while not settled and sampler.iteration < longest:
        with np.errstate(invalid="ignore"):  # from one impossible place to another
            state = sampler.run_mcmc(state, min(_LOOK, longest - sampler.iteration))
        before, time = time, float(np.max(sampler.get_autocorr_time(tol=0)))
        settled = sampler.iteration >= _TIMES * time and abs(time - before) <= _SETTLED * time
    return _thinned(sampler.get_chain(), time, settled, count)


def _thinned(chain: Floats, time: float, settled: bool, count: int) -> Walked:
    """Draws spaced evenly over what is left of a chain (steps, walkers, p) after its burn-in."""
    steps, walkers, p = chain.shape
    burn = min(int(_BURN * time), steps // 2) if np.isfinite(time) else steps // 2
    kept = chain[burn:].reshape(-1, p)
    index = np.linspace(0, len(kept) - 1, count).astype(np.intp)
    effective = len(kept) / max(time, 1.0) if np.isfinite(time) else float(walkers)
    reason = None
    if (np.abs(kept).max(axis=1) > _REACH / 2.0).mean() > _STRAYED:
        reason = "nothing bounds the unknowns: the ensemble walks off without end"
    elif not settled:
        reason = f"the ensemble did not settle in {steps} steps (autocorrelation time {time:.0f} or more)"
    return Walked(draws=kept[index], effective=min(float(count), effective), reason=reason)
