"""Data snooping (Baarda 1968): which reading does not fit with the others, and how large an error would be found.

For readings with independent errors, whitened Jacobian J (m, p) and covariance C (p, p) of the unknowns, prior
included: redundancy r = 1 - diag(J C J'), standardised residual w = v / (sigma sqrt r), which is standard normal where
all is well. A reading is suspect past 3.29 (alpha 0.001, two-sided); an error of 4.13 sigma / sqrt r is found 80 times
in 100. Several errors hide each other, so readings are proposed one at a time and the rest fitted anew.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import NDArray
from scipy.stats import norm

Floats = NDArray[np.float64]

ALPHA = 0.001
POWER = 0.80
CRITICAL = float(norm.ppf(1.0 - ALPHA / 2.0))  # 3.29
NONCENTRALITY = CRITICAL + float(norm.ppf(POWER))  # 4.13
_CHECKED = 1e-6  # redundancy above which the others check a reading at all
_ALIKE = 1e-6  # of |w|: readings closer than this cannot be told apart as the one in error


def redundancy(whitened: Floats, covariance: Floats) -> Floats:
    """Share (m,) of each reading that the others and the prior check, 0 to 1.

    Parameters
    ----------
    whitened : (m, p) derivatives of the readings over their standard deviations
    covariance : (p, p) of the unknowns, prior included
    """
    return np.asarray(np.clip(1.0 - ((whitened @ covariance) * whitened).sum(axis=1), 0.0, 1.0))


def standardised(residual: Floats, redundancy: Floats) -> Floats:
    """Standardised residuals w (m,) of whitened residuals (m,); NaN where nothing checks the reading."""
    checked = redundancy > _CHECKED
    w = np.full(residual.shape, np.nan)
    w[checked] = residual[checked] / np.sqrt(redundancy[checked])
    return w


def suspect(standardised: Floats) -> NDArray[np.bool_]:
    """Whether each reading (m,) is suspect; one that nothing checks is not."""
    return np.asarray(np.abs(np.nan_to_num(standardised)) > CRITICAL)


def minimal_detectable(sd: Floats, redundancy: Floats) -> Floats:
    """Smallest error (m,) of a reading found with power 80 %, in the unit of sd (m,); inf where nothing checks it."""
    checked = redundancy > _CHECKED
    return np.where(checked, NONCENTRALITY * sd / np.sqrt(np.where(checked, redundancy, 1.0)), np.inf)


class Snooped(Protocol):
    """What a fit must say of its k readings; `Fit` does."""

    @property
    def standardised(self) -> Floats:
        """w (k,), NaN where nothing checks the reading."""

    @property
    def degrees_of_freedom(self) -> int:
        """Readings less what they determine."""

    @property
    def p_value(self) -> float:
        """Of the global test; NaN without a degree of freedom."""


@dataclass(frozen=True, kw_only=True)
class Proposal:
    """A reading that is proposed to be left out.

    Attributes
    ----------
    reading : its index among all readings
    standardised : w of the fit in which it was the worst
    alike : other readings whose |w| was the same: the readings cannot tell which of them is wrong
    p_value : of the global test without it and those proposed before; NaN without a degree of freedom
    """

    reading: int
    standardised: float
    alike: tuple[int, ...]
    p_value: float


@dataclass(frozen=True, kw_only=True)
class Proposals:
    """Readings proposed one after another, and why there are no more.

    Attributes
    ----------
    proposals : in order
    ended : "nothing suspect", or "too few readings" where the worst is suspect and too few are left to say which it is
    """

    proposals: tuple[Proposal, ...]
    ended: str


def propose(fit_without: Callable[[tuple[int, ...]], Snooped], readings: int) -> Proposals:
    """Propose readings to leave out, the worst first, until none is suspect. Nothing is removed.

    Parameters
    ----------
    fit_without : fits all readings but those with these indices, and says of the others in their order; it may raise
        ValueError (`NotDetermined`) where they no longer fix the unknowns
    readings : m, how many there are

    With one degree of freedom all |w| are the same, whichever reading is wrong, so two must be left to propose any.
    """
    kept, proposals = np.arange(readings), list[Proposal]()
    found = fit_without(())
    while True:
        size = np.abs(np.nan_to_num(found.standardised))
        if not suspect(found.standardised).any():
            return Proposals(proposals=tuple(proposals), ended="nothing suspect")
        worst = int(np.argmax(size))
        left = (*(p.reading for p in proposals), int(kept[worst]))
        after = None if found.degrees_of_freedom < 2 else _determined(fit_without, left)
        if after is None:
            return Proposals(proposals=tuple(proposals), ended="too few readings")
        alike = np.flatnonzero(size >= size[worst] * (1.0 - _ALIKE))
        proposals.append(
            Proposal(
                reading=int(kept[worst]),
                standardised=float(found.standardised[worst]),
                alike=tuple(int(kept[j]) for j in alike if j != worst),
                p_value=after.p_value,
            )
        )
        kept, found = np.delete(kept, worst), after


def _determined(fit_without: Callable[[tuple[int, ...]], Snooped], left: tuple[int, ...]) -> Snooped | None:
    try:
        return fit_without(left)
    except ValueError:
        return None
