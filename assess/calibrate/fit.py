"""Back-analysis: weighted least squares on ln k, with what the readings can and cannot tell.

Minimises sum ((y - h(theta)) / sigma)^2 + sum ((ln k - ln k_nominal) / tau)^2 with the exact Jacobian
(`minimise.py`); a prior that correlates pads is whitened with its Cholesky factor (`prior.py`). The covariance is
(J'J)^-1 at the solution, prior rows included. Redundancy numbers and standardised residuals follow Baarda (1968):
r = 1 - diag(J C J'), w = v / (sigma sqrt r); a reading is suspect past 3.29 (alpha 0.001).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import special, stats

from assess.calibrate.minimise import minimise
from assess.calibrate.observations import ObservationModel
from assess.calibrate.prior import PadPrior

Floats = NDArray[np.float64]

SUSPECT = 3.29
Z95 = float(stats.norm.ppf(0.975))
_RANK = 1e-9  # smallest over largest singular value below which a direction is not told at all
_UNBOUNDED = 8.0  # ln k this far from its start, or this uncertain, is not bounded by the readings


class NotDetermined(ValueError):
    """The readings alone do not fix the unknowns.

    Attributes
    ----------
    pads : positions (in the model's list of pads) that are not told
    readings, unknowns : counts
    unbounded : the pads are read, but no finite stiffness fits best (a pad read to lengthen under load)
    """

    def __init__(
        self, reason: str, *, pads: list[int], readings: int, unknowns: int, unbounded: bool = False
    ) -> None:
        super().__init__(reason)
        self.pads = pads
        self.readings = readings
        self.unknowns = unknowns
        self.unbounded = unbounded


@dataclass(frozen=True, kw_only=True)
class Fit:
    """A calibrated girder line.

    Attributes
    ----------
    log_stiffness : (q,) estimate of ln k, k in kN/m
    covariance : (q, q) of ln k
    information : (q, q) inverse variance of ln k from the readings alone; singular where they tell nothing
    information_vector : (q,) so that the readings' own likelihood is -x' information x / 2 + information_vector' x
    seat_drops : (r,) drops in m of the seats read in test states
    predicted : (m,) in the readings' SI units
    redundancy : (m,) share of each reading that the others check, 0 to 1
    standardised : (m,) v / (sigma sqrt r); NaN where nothing checks the reading
    suspect : (m,) |standardised| > 3.29
    chi_square, degrees_of_freedom, p_value : global test of the readings; p NaN without a degree of freedom.
        With a prior the unknowns count as far as the readings tell them: readings less the trace of the hat
        matrix, rounded.
    data_share : (q,) 1 - posterior variance / prior variance; 1 without a prior. Where the prior correlates pads, what
        the readings would tell without that correlation: a pad told by its sisters is told by an assumption.
    evaluations : function evaluations used
    """

    log_stiffness: Floats
    covariance: Floats
    information: Floats
    information_vector: Floats
    seat_drops: Floats
    predicted: Floats
    redundancy: Floats
    standardised: Floats
    suspect: NDArray[np.bool_]
    chi_square: float
    degrees_of_freedom: int
    p_value: float
    data_share: Floats
    evaluations: int

    @property
    def sd(self) -> Floats:
        """Standard deviations of ln k, (q,)."""
        return np.sqrt(np.diag(self.covariance))

    def draws(self, count: int, seed: int) -> Floats:
        """Seeded draws of ln k, (count, q), from the normal approximation."""
        return draw_normal(self.log_stiffness, self.covariance, count, seed)


def draw_normal(mean: Floats, covariance: Floats, count: int, seed: int) -> Floats:
    """Draws (count, q) of a normal vector; a semidefinite covariance is allowed."""
    values, vectors = np.linalg.eigh((covariance + covariance.T) / 2.0)
    root = vectors * np.sqrt(np.clip(values, 0.0, None))
    noise = np.random.default_rng(seed).standard_normal((count, mean.size))
    return np.asarray(mean + noise @ root.T)


def fit(model: ObservationModel, *, start: Floats, prior: PadPrior | None) -> Fit:
    """Fit the pads of one girder.

    Parameters
    ----------
    model : ObservationModel with m readings and q pads
    start : (q,) ln k to start from, the nominal stiffnesses
    prior : PadPrior, or None to let the readings speak alone

    Raises
    ------
    NotDetermined
        without a prior, where the readings do not fix every pad.
    RuntimeError
        if the minimisation does not converge.
    """
    q = start.size
    weight = 1.0 / model.sd
    begin = np.concatenate([start, np.zeros(len(model.seats))])
    if prior is None:
        _require_rank(model.jacobian(begin) * weight[:, None], q)
    prior_rows = np.zeros((0, model.size))
    if prior is not None:
        prior_rows = prior.rows(model.size)

    def linearise(theta: Floats) -> tuple[Floats, Floats]:
        predicted, jacobian = model.linearise(theta)
        residual = (predicted - model.value) * weight
        if prior is not None:
            residual = np.concatenate([residual, prior.residual(theta[:q])])
        return residual, np.concatenate([jacobian * weight[:, None], prior_rows])

    found = minimise(linearise, begin)
    return _summarise(model, found.theta, start, prior, prior_rows, found.evaluations)


def _summarise(
    model: ObservationModel,
    theta: Floats,
    start: Floats,
    prior: PadPrior | None,
    prior_rows: Floats,
    evaluations: int,
) -> Fit:
    q = start.size
    predicted, data = model.linearise(theta)
    data = data / model.sd[:, None]
    if prior is None:
        _require_bounds(np.abs(theta[:q] - start), model)  # a pad that ran away no longer changes any reading
        _require_rank(data, q)
    full = data.T @ data + prior_rows.T @ prior_rows
    scale = 1.0 / np.sqrt(np.diag(full))
    covariance = scale[:, None] * np.linalg.inv(scale[:, None] * full * scale) * scale
    if prior is None:
        _require_bounds(np.sqrt(np.diag(covariance)[:q]), model)
    residual = (model.value - predicted) / model.sd
    hat = ((data @ covariance) * data).sum(axis=1)
    redundancy = np.clip(1.0 - hat, 0.0, 1.0)
    checked = redundancy > 1e-6
    standardised = np.full(residual.shape, np.nan)
    standardised[checked] = residual[checked] / np.sqrt(redundancy[checked])
    chi_square = float(residual @ residual)
    told = model.size if prior is None else round(float(hat.sum()))
    freedom = max(0, model.value.size - told)
    pads = covariance[:q, :q]
    information = _information(data, q)
    vector = information @ theta[:q]
    if prior is not None:  # at the optimum the readings pull as hard as the prior holds
        vector = vector + prior.pull(theta[:q])
    share = np.ones(q) if prior is None else prior.share(pads, information)
    return Fit(
        log_stiffness=theta[:q],
        covariance=pads,
        information=information,
        information_vector=vector,
        seat_drops=theta[q:],
        predicted=predicted,
        redundancy=redundancy,
        standardised=standardised,
        suspect=np.abs(np.nan_to_num(standardised)) > SUSPECT,
        chi_square=chi_square,
        degrees_of_freedom=freedom,
        p_value=float(special.chdtrc(freedom, chi_square)) if freedom else np.nan,
        data_share=np.clip(share, 0.0, 1.0),
        evaluations=evaluations,
    )


def _information(data: Floats, q: int) -> Floats:
    """Inverse variance of the pads from the readings alone, the seat drops eliminated."""
    pads, seats = data[:, :q], data[:, q:]
    if seats.shape[1]:
        pads = pads - seats @ (np.linalg.pinv(seats) @ pads)
    return np.asarray(pads.T @ pads)


def _require_rank(whitened: Floats, q: int) -> None:
    readings, unknowns = whitened.shape
    length = np.linalg.norm(whitened, axis=0)
    silent = [int(i) for i in np.flatnonzero(length[:q] <= 1e-12 * max(length.max(initial=0.0), 1e-300))]
    if readings >= unknowns and not silent:
        _, values, vectors = np.linalg.svd(whitened / length)
        if values[-1] > _RANK * values[0]:
            return
        silent = [int(i) for i in np.flatnonzero(np.abs(vectors[-1][:q]) > 0.3)]
    reason = "too few readings" if readings < unknowns else "the readings do not tell the pads apart"
    raise NotDetermined(reason, pads=silent, readings=readings, unknowns=unknowns)


def _require_bounds(reach: Floats, model: ObservationModel) -> None:
    """Refuse pads whose ln k went, or may lie, further than any believable stiffness; reach (q,)."""
    loose = np.flatnonzero(reach > _UNBOUNDED)
    if loose.size:
        raise NotDetermined(
            "the readings do not bound the stiffness",
            pads=[int(i) for i in loose],
            readings=model.value.size,
            unknowns=model.size,
            unbounded=True,
        )
