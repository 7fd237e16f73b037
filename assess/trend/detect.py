"""Which law one value follows over the visits, and whether it has changed at all.

Two questions are kept apart. Whether there is a change is a test at 5 %: the evidence for change, that is the sum of
the Akaike weights of all laws but the steady one, against its distribution over steady histories with the same visits
and the same standard deviations (parametric bootstrap, seeded), so that no number of laws tried raises false alarms
past 5 in 100. Which law it is, and how much each counts in a forecast, is told by the Akaike weights (Burnham and
Anderson 2002).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray
from scipy import special, stats

from assess.trend.candidates import LAWS, Candidate, candidates, covariance

Floats = NDArray[np.float64]

ALARM = 0.05
_MARGIN = 0.92  # the quantile is simulated: the test is held a little below 5 %
_MISFIT = 0.01  # chi-square past which the visits disagree with the likeliest law
_HISTORIES = 32_000
_SEED = 5


@dataclass(frozen=True, kw_only=True)
class Detection:
    """The law of one value.

    Attributes
    ----------
    law : one of LAWS; "steady" unless the test finds a change
    changed : whether the test at 5 % finds a change
    p_value : share of steady histories that look as changed as this one
    weights : Akaike weight of each law, by name
    gap : the visit before the likeliest step; -1 where steps were not tried
    step, step_sd : its height and standard deviation; NaN likewise
    walk : variance per year of the likeliest walk; 0 where walks were not tried
    scatter : Birge ratio that the standard deviations were widened by, 1 if not
    """

    law: str
    changed: bool
    p_value: float
    weights: dict[str, float]
    gap: int
    step: float
    step_sd: float
    walk: float
    scatter: float


def detect(times: Floats, values: Floats, sd: Floats, *, age: float | None) -> Detection:
    """Find the law of values (visits,) with standard deviations sd (visits,) at times (visits,) in years.

    Values that scatter about the likeliest law more than their standard deviations allow (chi-square at 1 %) have
    these widened by the Birge ratio before they are judged.

    Parameters
    ----------
    age : years of the thing followed at time 0; None leaves creep out
    """
    kinds, forms, offsets = _prepared(times, sd, age)
    chi_square = _chi_square(forms, values[None])[0]
    scatter = _scatter(kinds, chi_square, chi_square + offsets, times.size)
    chi_square = chi_square / scatter**2  # steady histories widened alike look as changed as before
    score = chi_square + offsets
    weights = _by_law(kinds, np.exp(-0.5 * (score - score.min())))
    p_value = _p_value(chi_square, score, times, sd, age)
    changed = p_value <= (ALARM if len(kinds) <= 2 else ALARM * _MARGIN)
    law = "steady"
    if changed:
        law = max((name for name in weights if name != "steady"), key=lambda name: weights[name])
    step, walk = _best(kinds, score, "step"), _best(kinds, score, "wander")
    height, spread = np.nan, np.nan
    if step is not None:
        height, spread = _height(kinds[step], values, scatter * sd)
    return Detection(
        law=law,
        changed=changed,
        p_value=p_value,
        weights=weights,
        gap=kinds[step].gap if step is not None else -1,
        step=height,
        step_sd=spread,
        walk=kinds[walk].walk if walk is not None else 0.0,
        scatter=scatter,
    )


def _scatter(kinds: tuple[Candidate, ...], chi_square: Floats, score: Floats, count: int) -> float:
    """Birge ratio about the likeliest law; 1 where the values agree with it, or where it wanders."""
    best = int(np.argmin(score))
    freedom = count - kinds[best].design.shape[1] - (kinds[best].law == "step")
    if freedom < 1 or kinds[best].walk > 0.0 or stats.chi2.sf(chi_square[best], freedom) >= _MISFIT:
        return 1.0
    return float(np.sqrt(chi_square[best] / freedom))


def _p_value(chi_square: Floats, score: Floats, times: Floats, sd: Floats, age: float | None) -> float:
    """Share of steady histories with as much evidence for a change."""
    if score.size == 1:
        return 1.0
    if score.size == 2:  # a drift alone: the test is exact
        return float(special.chdtrc(1.0, max(0.0, chi_square[0] - chi_square[1])))
    ratios = sd / sd.min()
    null = _steady_evidence(
        tuple(np.round(times, 4)), tuple(np.round(ratios, 4)), None if age is None else round(age, 4)
    )
    return float((1.0 + (null >= _evidence(score[None])[0]).sum()) / (1.0 + null.size))


def _prepared(times: Floats, sd: Floats, age: float | None) -> tuple[tuple[Candidate, ...], Floats, Floats]:
    """Candidates with their quadratic forms (kinds, visits, visits) and what is added to them (kinds,)."""
    kinds = tuple(candidates(times, sd**2, age))
    spread = np.array([covariance(kind, times, sd**2) for kind in kinds])
    inverse = np.linalg.inv(spread)
    forms = np.concatenate([
        _rest(inverse[:1], kinds[0].design[None]),
        _rest(inverse[1:], np.array([kind.design for kind in kinds[1:]]).reshape(len(kinds) - 1, times.size, 2)),
    ])  # fmt: skip
    cost = np.array([kind.cost for kind in kinds])
    return kinds, forms, cost + np.linalg.slogdet(spread)[1]


def _rest(inverse: Floats, design: Floats) -> Floats:
    """Chi-square's quadratic forms (kinds, visits, visits) once designs (kinds, visits, parameters) are fitted."""
    weighted = inverse @ design
    return inverse - weighted @ np.linalg.solve(design.swapaxes(1, 2) @ weighted, weighted.swapaxes(1, 2))


@lru_cache(maxsize=512)
def _steady_evidence(times: tuple[float, ...], sd: tuple[float, ...], age: float | None) -> Floats:
    """Evidence for a change in simulated steady histories, (histories,); only the ratios of the sd matter."""
    _, forms, offsets = _prepared(np.array(times), np.array(sd), age)
    histories = np.array(sd) * np.random.default_rng(_SEED).standard_normal((_HISTORIES, len(times)))
    return _evidence(_chi_square(forms, histories) + offsets)


def _chi_square(forms: Floats, values: Floats) -> Floats:
    """Chi-square (histories, kinds) of values (histories, visits)."""
    return np.asarray(np.einsum("hv,kvw,hw->hk", values, forms, values, optimize=True))


def _evidence(score: Floats) -> Floats:
    """Log odds of any change against none, (histories,), from scores (histories, kinds), the steady law first."""
    return np.asarray(special.logsumexp(-0.5 * score[:, 1:], axis=1) + 0.5 * score[:, 0])


def _by_law(kinds: tuple[Candidate, ...], weight: Floats) -> dict[str, float]:
    """Weight of each law: of the likeliest of its kinds, all together 1."""
    best = {
        law: max(float(w) for kind, w in zip(kinds, weight, strict=True) if kind.law == law)
        for law in LAWS
        if any(kind.law == law for kind in kinds)
    }
    total = sum(best.values())
    return {law: value / total for law, value in best.items()}


def _best(kinds: tuple[Candidate, ...], score: Floats, law: str) -> int | None:
    own = [i for i, kind in enumerate(kinds) if kind.law == law]
    return min(own, key=lambda i: score[i], default=None)


def _height(kind: Candidate, values: Floats, sd: Floats) -> tuple[float, float]:
    weighted = kind.design / sd[:, None]
    spread = np.linalg.inv(weighted.T @ weighted)
    return float((spread @ weighted.T @ (values / sd))[1]), float(np.sqrt(spread[1, 1]))
