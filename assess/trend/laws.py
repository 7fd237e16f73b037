"""Laws of the pads of a girder: each pad's own, then level and change of all pads together.

Which law a pad follows is judged pad by pad, the others left free at every visit (`detect.py`). How much it changes is
fitted for all pads together by generalised least squares with the full covariance of each visit (Aitken 1936):
ln k_v = level + change phi(t_v), phi 0 at the last visit. Where all pads have the same phi and the visits are alike,
the two ways agree (seemingly unrelated regressions with equal regressors, Zellner 1962). The level's prior enters once.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import stats

from assess.trend.candidates import log_age
from assess.trend.companion import Companion, companion
from assess.trend.detect import Detection, detect
from assess.trend.today import held_by, today
from assess.trend.visits import Cut, VisitEstimate, alone, cut

Floats = NDArray[np.float64]

Z95 = float(stats.norm.ppf(0.975))
RATE_PRIOR_SD = 0.5
"""Per year on ln k: only keeps a pad that no two visits tell from being singular; wide against any real rate."""

_CREEP_PRIOR_SD = 5.0  # per unit of log time, likewise
_STEP_PRIOR_SD = 5.0
_HELD_SD = 1e-7  # a change held at 0

UNTOLD_RATE_SD = 0.35
"""A rate less certain than this (per year, on ln k) is not determined."""


@dataclass(frozen=True, kw_only=True)
class PadLaw:
    """How one pad changes.

    Attributes
    ----------
    law : "steady" | "drift" | "creep" | "step" | "wander"
    rate, rate_sd : per year on ln k, over all visits; NaN where there is no rate
    p_value : of the test for any change; NaN where there is no rate
    weights : Akaike weight of each law; "steady" alone where there is no rate
    determined : False where fewer than two visits tell the pad
    scatter : Birge ratio the rate's sd was widened by, 1 if not
    step, step_sd : of the likeliest step, on ln k; NaN where none was tried
    step_between : places among the visits between which it lies
    walk : variance a year of the likeliest walk
    age : years of the pad at the first visit; None where unknown, and creep is not tried
    told_at, told : (telling visits,) years from the first of them, and ln k by the readings alone; empty where there is
        no rate
    """

    law: str
    rate: float
    rate_sd: float
    p_value: float
    weights: dict[str, float]
    determined: bool
    scatter: float
    step: float
    step_sd: float
    step_between: tuple[int, int] | None
    walk: float
    age: float | None
    told_at: Floats
    told: Floats

    @property
    def companion(self) -> Companion | None:
        """What ranks alone say; None where there is no rate."""
        return companion(self.told_at, self.told) if self.told.size else None

    @property
    def interval(self) -> tuple[float, float]:
        """95 % interval of the rate, per year on ln k."""
        return self.rate - Z95 * self.rate_sd, self.rate + Z95 * self.rate_sd

    @property
    def moving(self) -> float:
        """Akaike weight of the laws that go on changing after the last visit."""
        return sum(weight for law, weight in self.weights.items() if law not in ("steady", "step"))

    @property
    def alarm(self) -> str | None:
        """Which way a pad that has changed went: "softer" or "stiffer"; None for a steady one."""
        if self.law == "steady":
            return None
        change = self.step if self.law == "step" else self.rate
        return "stiffer" if change > 0.0 else "softer"


@dataclass(frozen=True, kw_only=True)
class Trend:
    """All pads of a girder over the visits.

    Attributes
    ----------
    times : (visits,) years from the last visit
    laws : one PadLaw a pad
    level, rate, covariance : (q,) fitted ln k at the last visit, (q,) per year with all pads left to drift, (2 q, 2 q)
        of both, scatter included
    creep, creep_sd : (q,) change per unit of log time with all pads left to creep; 0 where the age is unknown
    law_level, law_change, law_covariance : level at the last visit, change and covariance with every pad on its own law
    now, now_covariance : (q,), (q, q) ln k at the last visit for what is assessed today
    """

    times: Floats
    laws: tuple[PadLaw, ...]
    level: Floats
    rate: Floats
    covariance: Floats
    creep: Floats
    creep_sd: Floats
    law_level: Floats
    law_change: Floats
    law_covariance: Floats
    now: Floats
    now_covariance: Floats

    def line(self, pad: int, years: Floats) -> tuple[Floats, Floats]:
        """Line of a pad's law and its standard deviation, both (times,): ln k at years (times,) from the last visit."""
        q = self.now.size
        shape = _shape(self.laws[pad], self.times, years)
        basis = np.stack([np.ones_like(years), shape], axis=-1)
        pick = np.array([pad, q + pad])
        variance = np.einsum("ti,ij,tj->t", basis, self.law_covariance[np.ix_(pick, pick)], basis)
        return self.law_level[pad] + shape * self.law_change[pad], np.sqrt(np.clip(variance, 0.0, None))


def fit_trend(
    visits: Sequence[VisitEstimate],
    prior_mean: Floats,
    prior_sd: Floats,
    prior_correlation: Floats | None = None,
    *,
    ages: Floats | None = None,
    cuts: Sequence[Cut] = (),
) -> Trend:
    """Fit the laws.

    Parameters
    ----------
    visits : by time, at least one
    prior_mean, prior_sd : (q,) of ln k; an infinite sd means no prior
    prior_correlation : (q, q) between the pads, all sd finite; None where they are believed independent
    ages : (q,) years of each pad at time 0 (less than 0 for one put in later); NaN unknown; None for all unknown
    cuts : pads replaced

    Raises
    ------
    ValueError
        without visits.
    """
    if not visits:
        raise ValueError("a trend needs at least one calibrated visit")
    q = prior_mean.size
    visits = [
        cut(visit, [one.pad for one in cuts if one.time > visit.time], prior_mean, prior_sd)
        for visit in visits
    ]
    times = np.array([visit.time for visit in visits]) - visits[-1].time
    held = held_by(prior_sd, prior_correlation)
    now, now_covariance = today(visits, prior_mean, held)
    old = np.full(q, np.nan) if ages is None else ages + visits[-1].time  # at the last visit
    if len(visits) < 2 or times[0] == 0.0:
        return _standing(times, now, now_covariance)
    joint = _Joint(visits=visits, prior_mean=prior_mean, held=held)
    line = np.broadcast_to(times[:, None], (times.size, q))
    level, rate, covariance = joint.fit(line, np.full(q, RATE_PRIOR_SD))
    rate_sd = np.sqrt(np.diag(covariance)[q:])
    laws = tuple(_law(visits, i, prior_mean, prior_sd, old[i], rate[i], rate_sd[i]) for i in range(q))
    scatter = np.array([law.scatter for law in laws])
    widen = np.concatenate([np.ones(q), scatter])
    known = np.isfinite(old)
    curve = np.column_stack([_creep(times, one) if np.isfinite(one) else np.zeros_like(times) for one in old])
    _, creep, creep_covariance = joint.fit(curve, np.where(known, _CREEP_PRIOR_SD, _HELD_SD))
    shape = np.column_stack([_shape(law, times, times) for law in laws])
    spread = {"steady": _HELD_SD, "creep": _CREEP_PRIOR_SD, "step": _STEP_PRIOR_SD}
    free = np.array([spread.get(law.law, RATE_PRIOR_SD) for law in laws])
    law_level, law_change, law_covariance = joint.fit(shape, free)
    return Trend(
        times=times,
        laws=laws,
        level=level,
        rate=rate,
        covariance=covariance * widen[:, None] * widen,
        creep=np.where(known, creep, 0.0),
        creep_sd=np.where(known, scatter * np.sqrt(np.diag(creep_covariance)[q:]), 0.0),
        law_level=law_level,
        law_change=law_change,
        law_covariance=law_covariance * widen[:, None] * widen,
        now=now,
        now_covariance=now_covariance,
    )


@dataclass(frozen=True, kw_only=True)
class _Joint:
    """All visits with the prior of the level, ready for fits of different shapes."""

    visits: Sequence[VisitEstimate]
    prior_mean: Floats
    held: Floats

    def fit(self, shape: Floats, change_sd: Floats) -> tuple[Floats, Floats, Floats]:
        """Level at the last visit (q,), change (q,) and their covariance (2 q, 2 q).

        Parameters
        ----------
        shape : (visits, q) phi, 0 at the last visit
        change_sd : (q,) changes are kept to N(0, change_sd)
        """
        q = self.prior_mean.size
        normal, right = np.zeros((2 * q, 2 * q)), np.zeros(2 * q)
        # the prior speaks of the level in the middle of the visits, so that it does not lean on the change
        parts = [
            (one.information, one.information_vector, phi)
            for one, phi in zip(self.visits, shape, strict=True)
        ]
        for information, vector, phi in [
            *parts,
            (self.held, self.held @ self.prior_mean, shape.mean(axis=0)),
        ]:
            normal[:q, :q] += information
            normal[:q, q:] += information * phi
            normal[q:, q:] += phi[:, None] * information * phi
            right += np.concatenate([vector, phi * vector])
        normal[q:, :q] = normal[:q, q:].T
        normal[q:, q:] += np.diag(change_sd**-2.0)
        scale = 1.0 / np.sqrt(np.diag(normal))
        covariance = scale[:, None] * np.linalg.inv(scale[:, None] * normal * scale) * scale
        both = covariance @ right
        return both[:q], both[q:], covariance


def _law(
    visits: Sequence[VisitEstimate],
    pad: int,
    prior_mean: Floats,
    prior_sd: Floats,
    old: float,
    rate: float,
    rate_sd: float,
) -> PadLaw:
    telling = [v for v, visit in enumerate(visits) if visit.tells[pad]]
    if len(telling) < 2 or not rate_sd < UNTOLD_RATE_SD:
        return _no_law(float(rate), float(rate_sd))
    times = np.array([visits[v].time for v in telling])
    value, variance = np.array([alone(visits[v], pad, prior_mean, prior_sd) for v in telling]).T
    age = float(old - (visits[-1].time - times[0])) if np.isfinite(old) else None
    found: Detection = detect(times - times[0], value, np.sqrt(variance), age=age)
    return PadLaw(
        law=found.law,
        rate=float(rate),
        rate_sd=float(found.scatter * rate_sd),
        p_value=found.p_value,
        weights=found.weights,
        determined=True,
        scatter=found.scatter,
        step=found.step,
        step_sd=found.step_sd,
        step_between=(telling[found.gap], telling[found.gap + 1]) if found.gap >= 0 else None,
        walk=found.walk,
        age=float(old - visits[-1].time) if np.isfinite(old) else None,
        told_at=times - times[0],
        told=value,
    )


def _no_law(rate: float, rate_sd: float) -> PadLaw:
    return PadLaw(
        law="steady",
        rate=rate,
        rate_sd=rate_sd,
        p_value=np.nan,
        weights={"steady": 1.0},
        determined=False,
        scatter=1.0,
        step=np.nan,
        step_sd=np.nan,
        step_between=None,
        walk=0.0,
        age=None,
        told_at=np.zeros(0),
        told=np.zeros(0),
    )


def _standing(times: Floats, now: Floats, now_covariance: Floats) -> Trend:
    """The trend of one visit: everything stands where it is."""
    q = now.size
    covariance = np.zeros((2 * q, 2 * q))
    covariance[:q, :q] = now_covariance
    none = np.zeros(q)
    return Trend(
        times=times,
        laws=(_no_law(np.nan, np.nan),) * q,
        level=now,
        rate=none,
        covariance=covariance,
        creep=none,
        creep_sd=none,
        law_level=now,
        law_change=none,
        law_covariance=covariance,
        now=now,
        now_covariance=now_covariance,
    )


def _creep(years: Floats, old: float) -> Floats:
    """Log time gained at years from the last visit, when the pad was `old`."""
    return np.asarray(log_age(years, old) - log_age(np.zeros(1), old))


def _shape(law: PadLaw, times: Floats, years: Floats) -> Floats:
    """Shape phi of a law at years (n,) from the last visit, visits at `times` (visits,); 0 at the last visit."""
    if law.law == "creep":
        assert law.age is not None
        return _creep(years, law.age - times[0])
    if law.law == "step":
        assert law.step_between is not None
        before, after = law.step_between
        return np.where(years < (times[before] + times[after]) / 2.0, -1.0, 0.0)
    return years if law.law != "steady" else np.zeros_like(years)
