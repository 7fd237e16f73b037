"""Seats over the years: the law of the measured settlements of one support.

Weighted least squares of settlement on time with the readings' own standard deviations. As for pads (`laws.py`) the
law is steady, drift, a step between two visits or a walk, told by the same test at 5 % and the same Akaike weights,
and a seat whose levels scatter more than their standard deviations allow has its rate widened.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from assess.trend.detect import detect
from assess.trend.laws import Z95

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class SeatLaw:
    """How one seat moves.

    Attributes
    ----------
    law : "steady" | "drift" | "step" | "wander"
    rate, rate_sd : m per year, downward positive, over all visits; NaN from one visit
    weights : Akaike weight of each law
    last, last_sd : m, the last measured settlement
    covariance : of the last settlement and the rate, m2 per year
    step, step_sd : m, of the likeliest step; NaN where none was tried
    step_between : places among the visits between which it lies
    span : years from the first to the last visit
    walk : variance a year of the likeliest walk, m2
    """

    law: str
    rate: float
    rate_sd: float
    last: float
    last_sd: float
    covariance: float
    weights: dict[str, float] = field(default_factory=lambda: {"steady": 1.0})
    step: float = np.nan
    step_sd: float = np.nan
    step_between: tuple[int, int] | None = None
    span: float = 0.0
    walk: float = 0.0

    @property
    def moving(self) -> bool:
        """Whether the levels tell of any change."""
        return self.law != "steady"

    @property
    def weight(self) -> float:
        """Akaike weight of the laws that go on moving after the last visit."""
        return sum(w for law, w in self.weights.items() if law not in ("steady", "step"))

    @property
    def interval(self) -> tuple[float, float]:
        """95 % interval of the rate, m per year."""
        return self.rate - Z95 * self.rate_sd, self.rate + Z95 * self.rate_sd

    def draws(self, years: Floats, count: int, rng: np.random.Generator) -> Floats:
        """Draws of the settlement (count, times), m, at years (times,) from the last visit, by the laws' weights."""
        last = self.last + self.last_sd * rng.standard_normal(count)
        if not np.isfinite(self.rate):
            return np.repeat(last[:, None], years.size, axis=1)
        slope = self.covariance / self.last_sd**2
        spare = np.sqrt(max(0.0, self.rate_sd**2 - self.covariance**2 / self.last_sd**2))
        rate = self.rate + slope * (last - self.last) + spare * rng.standard_normal(count)
        drawn = rng.random(count)
        drifts, wanders = self.weights.get("drift", 0.0), self.weights.get("wander", 0.0)
        change = np.where(drawn < drifts + wanders, rate, 0.0)[:, None] * years
        own = np.flatnonzero((drawn >= drifts) & (drawn < drifts + wanders))
        if own.size:
            noise = rng.standard_normal((own.size, years.size + 1))
            change[own] += np.sqrt(self.walk / self.span) * noise[:, :1] * years
            change[own] += np.cumsum(np.sqrt(self.walk * np.diff(years, prepend=0.0)) * noise[:, 1:], axis=1)
        return np.asarray(last[:, None] + change)


def fit_seat(times: Floats, settlements: Floats, sd: Floats) -> SeatLaw:
    """Fit the law of the settlements of one seat.

    Parameters
    ----------
    times : (visits,) years, ascending
    settlements, sd : (visits,) m

    Raises
    ------
    ValueError
        without visits.
    """
    if times.size == 0:
        raise ValueError("a seat's law needs at least one measured settlement")
    last, last_sd = float(settlements[-1]), float(sd[-1])
    if times.size < 2 or times[-1] == times[0]:
        return SeatLaw(law="steady", rate=np.nan, rate_sd=np.nan, last=last, last_sd=last_sd, covariance=0.0)
    weight = sd**-2.0
    middle = float(weight @ times / weight.sum())
    lever = weight * (times - middle)
    lever = lever / (lever @ times)
    rate = float(lever @ (settlements - last))  # the lever sums to nought: an unmoved seat has no rate at all
    found = detect(times - times[0], settlements - last, sd, age=None)
    return SeatLaw(
        law=found.law,
        rate=rate,
        rate_sd=found.scatter * float(np.sqrt((lever**2) @ sd**2)),
        last=last,
        last_sd=last_sd,
        covariance=float(lever[-1] * sd[-1] ** 2),
        weights=found.weights,
        step=found.step,
        step_sd=found.step_sd,
        step_between=(found.gap, found.gap + 1) if found.gap >= 0 else None,
        span=float(times[-1] - times[0]),
        walk=found.walk,
    )
