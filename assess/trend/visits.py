"""What one visit tells of the pads of a girder, and ways of looking at it.

A visit enters a trend with what its readings alone tell (information matrix and vector, prior taken out), so the
shared prior is not counted once a visit. Here an error that all pads of a visit share is put in, pads that have been
replaced since are taken out, and one pad is looked at with the others left free.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

_WIDE = 3.0  # how much wider than its prior a pad is left while others are looked at


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

    @property
    def tells(self) -> NDArray[np.bool_]:
        """Pads (q,) that the readings tell rather than the prior."""
        return np.asarray(self.data_share >= 0.5)


@dataclass(frozen=True, kw_only=True)
class Cut:
    """A pad replaced: what was known of it before says nothing of the new one.

    Attributes
    ----------
    pad : its place among the q pads
    time : years from the first visit; a visit on that very day counts as after
    """

    pad: int
    time: float


def with_common_error(visit: VisitEstimate, sd: Floats) -> VisitEstimate:
    """Add an error of sd (q,) in ln k that the pads share in full, such as that of an uncorrected temperature.

    The covariance of what the readings tell grows by sd sd' (Sherman and Morrison 1950 for its inverse).
    """
    if not np.any(sd):
        return visit
    seen = visit.information @ sd
    shrink = 1.0 / (1.0 + sd @ seen)
    return replace(
        visit,
        covariance=visit.covariance + np.outer(sd, sd),
        information=visit.information - np.outer(seen, seen) * shrink,
        information_vector=visit.information_vector - seen * (sd @ visit.information_vector) * shrink,
    )


def cut(visit: VisitEstimate, pads: Sequence[int], prior_mean: Floats, prior_sd: Floats) -> VisitEstimate:
    """Leave a visit that says nothing of some pads: they were others then, and what they were is left free."""
    if not pads:
        return visit
    q = prior_mean.size
    gone = np.isin(np.arange(q), pads)
    information, vector = _marginal(visit, ~gone, prior_mean, prior_sd)
    full, right = np.zeros((q, q)), np.zeros(q)
    full[np.ix_(~gone, ~gone)], right[~gone] = information, vector
    sd = np.where(np.isfinite(prior_sd), prior_sd, 1e4)
    spread = np.where(
        np.outer(gone, gone), np.diag(sd**2), np.where(np.outer(~gone, ~gone), visit.covariance, 0.0)
    )
    return replace(
        visit,
        log_stiffness=np.where(gone, prior_mean, visit.log_stiffness),
        covariance=spread,
        information=full,
        information_vector=right,
        data_share=np.where(gone, 0.0, visit.data_share),
    )


def alone(visit: VisitEstimate, pad: int, prior_mean: Floats, prior_sd: Floats) -> tuple[float, float]:
    """What the readings tell of one pad with the others left free: ln k and its variance, infinite for nothing."""
    keep = np.arange(prior_mean.size) == pad
    information, vector = _marginal(visit, keep, prior_mean, prior_sd)
    if not information[0, 0] > 0.0:
        return 0.0, np.inf
    return float(vector[0] / information[0, 0]), float(1.0 / information[0, 0])


def _marginal(
    visit: VisitEstimate, keep: NDArray[np.bool_], prior_mean: Floats, prior_sd: Floats
) -> tuple[Floats, Floats]:
    """Information on some pads with the others integrated out under a prior three times as wide as their own."""
    rest = ~keep
    own, cross = visit.information[np.ix_(keep, keep)], visit.information[np.ix_(keep, rest)]
    held = np.where(np.isfinite(prior_sd), (_WIDE * prior_sd) ** -2.0, 1e-8)[rest]
    inner = visit.information[np.ix_(rest, rest)] + np.diag(held)
    right = visit.information_vector[rest] + held * prior_mean[rest]
    both = np.linalg.solve(inner, np.column_stack([cross.T, right]))
    return own - cross @ both[:, :-1], visit.information_vector[keep] - cross @ both[:, -1]
