"""Section losses over the years: thickness that one plate has lost, through nothing on the day it was built."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.trend.laws import Z95

Floats = NDArray[np.float64]

READING_SD = 0.25e-3
"""m, of a thickness measured on site: common practice, no source. The bridge file gives none."""


@dataclass(frozen=True, kw_only=True)
class LossLaw:
    """How fast a plate loses thickness.

    Attributes
    ----------
    rate, rate_sd : m per year
    last : m, the last measured loss
    """

    rate: float
    rate_sd: float
    last: float

    @property
    def interval(self) -> tuple[float, float]:
        """95 % interval of the rate, m per year."""
        return self.rate - Z95 * self.rate_sd, self.rate + Z95 * self.rate_sd

    def ahead(self, years: Floats) -> Floats:
        """Loss (times,), m, at years (times,) from the last measurement."""
        return np.asarray(self.last + self.rate * years)


def fit_loss(ages: Floats, losses: Floats, sd: Floats | float = READING_SD) -> LossLaw:
    """Rate by weighted least squares of losses (visits,) on the age of the plate (visits,), through 0 when it was new.

    From two visits on, scatter about the line beyond the standard deviations widens the rate (Birge ratio).

    Parameters
    ----------
    ages : (visits,) years since it was built, ascending, all greater than 0
    losses, sd : (visits,) m

    Raises
    ------
    ValueError
        without a measurement, or for one made before it was built.
    """
    if ages.size == 0 or not np.all(ages > 0.0):
        raise ValueError("a rate of loss needs a measurement made after the plate was built")
    weight = np.broadcast_to(np.asarray(sd, dtype=np.float64), ages.shape) ** -2.0
    power = float(weight @ ages**2)
    rate = float(weight @ (ages * losses)) / power
    chi_square = float(weight @ (losses - rate * ages) ** 2)
    scatter = max(1.0, np.sqrt(chi_square / (ages.size - 1))) if ages.size > 1 else 1.0
    return LossLaw(rate=max(rate, 0.0), rate_sd=float(scatter / np.sqrt(power)), last=float(losses[-1]))
