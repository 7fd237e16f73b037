"""Steady or drift: generalised least squares on ln k of all pads of a girder over the visits.

Each visit enters with what its readings alone tell (information matrix and vector, prior taken out), so the shared
prior is not counted once a visit. The level's prior enters once. ln k_v = a + b (t_v - t_last) for every pad
together, with the full covariance of each visit (generalised least squares, Aitken 1936). A pad drifts where its rate
differs from 0 at 95 %; the Akaike weight of drift against steady (known variances, one more parameter) is kept for
forecasts. Where a pad's visits scatter more than their own intervals allow (chi-square at 5 %) its rate's standard
deviation is widened by the Birge ratio.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import special, stats

Floats = NDArray[np.float64]

Z95 = float(stats.norm.ppf(0.975))
RATE_PRIOR_SD = 0.5
"""Per year on ln k: only keeps a pad that no two visits tell from being singular; wide against any real rate."""

_HELD_RATE_SD = 1e-7  # a rate held at 0

UNTOLD_RATE_SD = 0.35
"""A rate less certain than this (per year, on ln k) is not determined."""


@dataclass(frozen=True, kw_only=True)
class VisitEstimate:
    """What one visit tells of the pads of a girder, at one reference temperature.

    Attributes
    ----------
    time : years from the first visit
    log_stiffness, sd : (q,) estimate of ln k with its standard deviation, prior included
    covariance : (q, q)
    information, information_vector : (q, q), (q,) from the readings alone
    data_share : (q,)
    """

    time: float
    log_stiffness: Floats
    covariance: Floats
    information: Floats
    information_vector: Floats
    data_share: Floats

    @property
    def sd(self) -> Floats:
        """Standard deviations of ln k, (q,)."""
        return np.sqrt(np.diag(self.covariance))


@dataclass(frozen=True, kw_only=True)
class PadLaw:
    """How one pad changes.

    Attributes
    ----------
    law : "steady" | "drift"
    rate, rate_sd : per year on ln k; NaN where there is no rate
    drift_weight : Akaike weight of drift against steady, 0 to 1
    determined : False where fewer than two visits tell the pad
    scatter : Birge ratio the rate's sd was widened by, 1 if not
    """

    law: str
    rate: float
    rate_sd: float
    drift_weight: float
    determined: bool
    scatter: float

    @property
    def interval(self) -> tuple[float, float]:
        """95 % interval of the rate, per year on ln k."""
        return self.rate - Z95 * self.rate_sd, self.rate + Z95 * self.rate_sd


@dataclass(frozen=True, kw_only=True)
class Trend:
    """All pads of a girder over the visits.

    Attributes
    ----------
    laws : one PadLaw a pad
    level : (q,) fitted ln k at the last visit; rate : (q,) per year, with all pads left to drift
    covariance : (2 q, 2 q) of level and rate, scatter included
    law_level, law_rate, law_covariance : the same with the rate of every steady pad held at 0: the line of its law
    now, now_covariance : (q,), (q, q) ln k at the last visit for what is assessed today
    """

    laws: tuple[PadLaw, ...]
    level: Floats
    rate: Floats
    covariance: Floats
    law_level: Floats
    law_rate: Floats
    law_covariance: Floats
    now: Floats
    now_covariance: Floats


def fit_trend(
    visits: Sequence[VisitEstimate],
    prior_mean: Floats,
    prior_sd: Floats,
    prior_correlation: Floats | None = None,
) -> Trend:
    """Fit the laws.

    Parameters
    ----------
    visits : by time, at least one
    prior_mean, prior_sd : (q,) of ln k; an infinite sd means no prior
    prior_correlation : (q, q) between the pads, all sd finite; None where they are believed independent

    Raises
    ------
    ValueError
        without visits.
    """
    if not visits:
        raise ValueError("a trend needs at least one calibrated visit")
    q = prior_mean.size
    times = np.array([visit.time for visit in visits]) - visits[-1].time
    held = _held(prior_sd, prior_correlation)
    now, now_covariance = _now(visits, prior_mean, held)
    if len(visits) < 2 or times[0] == 0.0:
        law = PadLaw(
            law="steady", rate=np.nan, rate_sd=np.nan, drift_weight=0.0, determined=False, scatter=1.0
        )
        covariance = np.zeros((2 * q, 2 * q))
        covariance[:q, :q] = now_covariance
        return Trend(
            laws=(law,) * q,
            level=now,
            rate=np.zeros(q),
            covariance=covariance,
            law_level=now,
            law_rate=np.zeros(q),
            law_covariance=covariance,
            now=now,
            now_covariance=now_covariance,
        )
    free = np.full(q, RATE_PRIOR_SD)
    level, rate, covariance = _drift(visits, times, prior_mean, held, free)
    scatter = _scatter(visits, times, level, rate)
    widen = np.concatenate([np.ones(q), scatter])
    covariance = covariance * widen[:, None] * widen
    rate_sd = np.sqrt(np.diag(covariance)[q:])
    laws = tuple(_law(rate[i], rate_sd[i], scatter[i], visits, i) for i in range(q))
    rate_sd = np.where([law.law == "steady" for law in laws], _HELD_RATE_SD, free)
    law_level, law_rate, law_covariance = _drift(visits, times, prior_mean, held, rate_sd)
    return Trend(
        laws=laws,
        level=level,
        rate=rate,
        covariance=covariance,
        law_level=law_level,
        law_rate=law_rate,
        law_covariance=law_covariance,
        now=now,
        now_covariance=now_covariance,
    )


def _held(prior_sd: Floats, correlation: Floats | None) -> Floats:
    """Inverse covariance of the prior of the level, (q, q)."""
    if correlation is None:
        return np.diag(np.where(np.isfinite(prior_sd), 1.0 / prior_sd**2, 1e-8))
    return np.asarray(np.linalg.inv(correlation) / np.outer(prior_sd, prior_sd))


def _drift(
    visits: Sequence[VisitEstimate], times: Floats, prior_mean: Floats, held: Floats, rate_sd: Floats
) -> tuple[Floats, Floats, Floats]:
    """Level at the last visit, rate, and their covariance (2 q, 2 q); rates are kept to N(0, rate_sd) (q,)."""
    q = prior_mean.size
    normal, right = np.zeros((2 * q, 2 * q)), np.zeros(2 * q)
    for visit, t in zip(visits, times, strict=True):
        normal += np.kron(np.array([[1.0, t], [t, t * t]]), visit.information)
        right += np.concatenate([visit.information_vector, t * visit.information_vector])
    # the prior speaks of the level in the middle of the visits, so that it does not lean on the rate
    middle = float(times.mean())
    normal += np.kron(np.array([[1.0, middle], [middle, middle * middle]]), held)
    pull = held @ prior_mean
    right += np.concatenate([pull, middle * pull])
    normal[q:, q:] += np.diag(rate_sd**-2.0)
    scale = 1.0 / np.sqrt(np.diag(normal))
    covariance = scale[:, None] * np.linalg.inv(scale[:, None] * normal * scale) * scale
    both = covariance @ right
    return both[:q], both[q:], covariance


def _scatter(visits: Sequence[VisitEstimate], times: Floats, level: Floats, rate: Floats) -> Floats:
    """Birge ratio of every pad, (q,); 1 where the visits agree with the line within their own intervals."""
    freedom = len(visits) - 2
    if freedom < 1:
        return np.ones(level.size)
    line = level + times[:, None] * rate
    estimate = np.array([visit.log_stiffness for visit in visits])
    sd = np.array([visit.sd for visit in visits])
    chi_square = (((estimate - line) / sd) ** 2).sum(axis=0)
    wide = stats.chi2.sf(chi_square, freedom) < 0.05
    return np.where(wide, np.sqrt(chi_square / freedom), 1.0)


def _law(rate: float, rate_sd: float, scatter: float, visits: Sequence[VisitEstimate], pad: int) -> PadLaw:
    telling = sum(visit.data_share[pad] >= 0.5 for visit in visits)
    determined = bool(telling >= 2 and rate_sd < UNTOLD_RATE_SD)
    drifts = determined and abs(rate) > Z95 * rate_sd
    return PadLaw(
        law="drift" if drifts else "steady",
        rate=float(rate),
        rate_sd=float(rate_sd),
        drift_weight=akaike_weight(rate, rate_sd) if determined else 0.0,
        determined=determined,
        scatter=float(scatter),
    )


def akaike_weight(rate: float, rate_sd: float) -> float:
    """Akaike weight of a line against no change, variances known: the line has one parameter more."""
    return float(special.expit(((rate / rate_sd) ** 2 - 2.0) / 2.0))


def _now(visits: Sequence[VisitEstimate], prior_mean: Floats, held: Floats) -> tuple[Floats, Floats]:
    """ln k today: the last visit's, or for pads it does not tell, carried from the visits before.

    Carrying uses a random walk (Kalman filter in information form) with a standard deviation of 10 % in a year:
    common practice, no source.
    """
    last = visits[-1]
    if len(visits) == 1 or np.all(last.data_share >= 0.5):
        return last.log_stiffness, last.covariance
    precision: Floats = held
    vector: Floats = held @ prior_mean
    time = visits[0].time
    for visit in visits:
        walked = np.linalg.inv(precision) + np.eye(prior_mean.size) * 0.1**2 * (visit.time - time)
        mean = np.linalg.solve(precision, vector)
        precision = np.asarray(np.linalg.inv(walked), dtype=np.float64)
        vector = precision @ mean + visit.information_vector
        precision = precision + visit.information
        time = visit.time
    covariance: Floats = np.asarray(np.linalg.inv(precision), dtype=np.float64)
    return covariance @ vector, covariance
