"""Seats over the years: a line through the measured settlements of one support.

Weighted least squares of settlement on time with the readings' own standard deviations. As for pads (`laws.py`)
the seat moves where its rate differs from 0 at 95 %, the Akaike weight of moving against standing still is kept for
forecasts, and a seat whose levels scatter more than their standard deviations allow has its rate widened.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import special

from assess.trend.laws import Z95, akaike_weight

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class SeatLaw:
    """How one seat moves.

    Attributes
    ----------
    rate, rate_sd : m per year, downward positive; NaN from one visit
    weight : Akaike weight of moving against standing still, 0 to 1
    moving : True where the rate differs from 0 at 95 %
    last, last_sd : m, the last measured settlement
    covariance : of the last settlement and the rate, m2 per year
    """

    rate: float
    rate_sd: float
    weight: float
    moving: bool
    last: float
    last_sd: float
    covariance: float

    @property
    def interval(self) -> tuple[float, float]:
        """95 % interval of the rate, m per year."""
        return self.rate - Z95 * self.rate_sd, self.rate + Z95 * self.rate_sd

    def draws(self, years: Floats, count: int, rng: np.random.Generator) -> Floats:
        """Draws of the settlement (count, times), m, at years (times,) from the last visit; it stands or moves on."""
        last = self.last + self.last_sd * rng.standard_normal(count)
        if not np.isfinite(self.rate):
            return np.repeat(last[:, None], years.size, axis=1)
        slope = self.covariance / self.last_sd**2
        spare = np.sqrt(max(0.0, self.rate_sd**2 - self.covariance**2 / self.last_sd**2))
        rate = self.rate + slope * (last - self.last) + spare * rng.standard_normal(count)
        rate = np.where(rng.random(count) < self.weight, rate, 0.0)
        return np.asarray(last[:, None] + rate[:, None] * years)


def fit_seat(times: Floats, settlements: Floats, sd: Floats) -> SeatLaw:
    """Fit a line to the settlements of one seat.

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
        return SeatLaw(
            rate=np.nan, rate_sd=np.nan, weight=0.0, moving=False, last=last, last_sd=last_sd, covariance=0.0
        )
    weight = sd**-2.0
    middle = float(weight @ times / weight.sum())
    lever = weight * (times - middle)
    lever = lever / (lever @ times)
    rate = float(lever @ (settlements - last))  # the lever sums to nought: an unmoved seat has no rate at all
    line = float(weight @ settlements / weight.sum()) + rate * (times - middle)
    chi_square, freedom = float((((settlements - line) / sd) ** 2).sum()), times.size - 2
    scatter = 1.0
    if freedom and special.chdtrc(freedom, chi_square) < 0.05:
        scatter = float(np.sqrt(chi_square / freedom))
    rate_sd = scatter * float(np.sqrt((lever**2) @ sd**2))
    return SeatLaw(
        rate=rate,
        rate_sd=rate_sd,
        weight=akaike_weight(rate, rate_sd),
        moving=abs(rate) > Z95 * rate_sd,
        last=last,
        last_sd=last_sd,
        covariance=float(lever[-1] * sd[-1] ** 2),
    )
