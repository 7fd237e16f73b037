"""Back-analysis: weighted least squares on ln k and what else is unknown, with what the readings can and cannot tell.

Minimises sum ((y - h(theta)) / sigma)^2 + sum ((theta - prior) / tau)^2 with the exact Jacobian (`minimise.py`); a
prior that correlates pads is whitened with its Cholesky factor (`prior.py`). The covariance is (J'J)^-1 at the
solution, prior rows included. Redundancy numbers and standardised residuals follow Baarda (1968):
r = 1 - diag(J C J'), w = v / (sigma sqrt r); a reading is suspect past 3.29 (alpha 0.001).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import special, stats

from assess.calibrate import snooping
from assess.calibrate.minimise import minimise
from assess.calibrate.prior import PadPrior, Prior
from assess.calibrate.restricted import Model

Floats = NDArray[np.float64]

SUSPECT = 3.29  # as it is written; `snooping.CRITICAL` in full
Z95 = float(stats.norm.ppf(0.975))
_RANK = 1e-9  # smallest over largest singular value below which a direction is not told at all
_UNBOUNDED = 8.0  # ln k this far from its start, or this uncertain, is not bounded by the readings


class NotDetermined(ValueError):
    """The readings alone do not fix the unknowns.

    Attributes
    ----------
    pads : positions (in the model's list of pads) that are not told
    others : places in theta of other unknowns that are not told
    readings, unknowns : counts
    unbounded : the pads are read, but no finite stiffness fits best (a pad read to lengthen under load)
    """

    def __init__(
        self, reason: str, *, places: list[int], q: int, readings: int, unknowns: int, unbounded: bool = False
    ) -> None:
        super().__init__(reason)
        self.pads = [place for place in places if place < q]
        self.others = [place for place in places if place >= q]
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
    theta, joint : (size,) all unknowns in the model's order, and their covariance (size, size)
    information : (q, q) inverse variance of ln k from the readings alone; singular where they tell nothing. The other
        unknowns are eliminated, with what is believed of them.
    information_vector : (q,) so that the readings' own likelihood is -x' information x / 2 + information_vector' x
    predicted : (m,) in the readings' SI units
    redundancy : (m,) share of each reading that the others check, 0 to 1; 1 - redundancy is its leverage
    standardised : (m,) v / (sigma sqrt r); NaN where nothing checks the reading
    suspect : (m,) |standardised| > 3.29
    chi_square, degrees_of_freedom, p_value : global test of the readings; p NaN without a degree of freedom.
        With a prior the unknowns count as far as the readings tell them: readings less the trace of the hat
        matrix, rounded.
    effective_unknowns : the trace of the hat matrix
    data_share : (q,) 1 - posterior variance / prior variance; 1 without a prior. Where the prior correlates pads, what
        the readings would tell without that correlation: a pad told by its sisters is told by an assumption.
    shares : (size,) the same of every unknown
    slopes : (m, size) derivatives of the readings by the unknowns, in standard deviations of the readings
    believed : (size,) prior variances, infinite where nothing is believed
    evaluations : function evaluations used
    """

    log_stiffness: Floats
    covariance: Floats
    theta: Floats
    joint: Floats
    information: Floats
    information_vector: Floats
    predicted: Floats
    redundancy: Floats
    standardised: Floats
    suspect: NDArray[np.bool_]
    chi_square: float
    degrees_of_freedom: int
    p_value: float
    effective_unknowns: float
    data_share: Floats
    shares: Floats
    slopes: Floats
    believed: Floats
    evaluations: int

    @property
    def sd(self) -> Floats:
        """Standard deviations of ln k, (q,)."""
        return np.sqrt(np.diag(self.covariance))

    @property
    def singular_values(self) -> Floats:
        """Singular values (min(m, size),) of `slopes`, in prior standard deviations of the unknowns.

        In their own length where nothing is believed of them. Below 1 a direction is told by the assumption.
        """
        length = np.linalg.norm(self.slopes, axis=0)
        own = 1.0 / np.where(length > 0.0, length, 1.0)
        scale = np.where(np.isfinite(self.believed), np.sqrt(self.believed), own)
        return np.asarray(np.linalg.svd(self.slopes * scale, compute_uv=False))

    @property
    def seat_drops(self) -> Floats:
        """All unknowns after the pads, (size - q,)."""
        return self.theta[self.log_stiffness.size :]

    def draws(self, count: int, seed: int) -> Floats:
        """Seeded draws of ln k, (count, q), from the normal approximation."""
        return draw_normal(self.log_stiffness, self.covariance, count, seed)


def draw_normal(mean: Floats, covariance: Floats, count: int, seed: int) -> Floats:
    """Draws (count, q) of a normal vector; a semidefinite covariance is allowed."""
    values, vectors = np.linalg.eigh((covariance + covariance.T) / 2.0)
    root = vectors * np.sqrt(np.clip(values, 0.0, None))
    noise = np.random.default_rng(seed).standard_normal((count, mean.size))
    return np.asarray(mean + noise @ root.T)


class Problem:
    """The least-squares problem of a model and what is believed of its unknowns.

    Parameters
    ----------
    model : Model (an ObservationModel) with m readings and q pads
    prior : of all unknowns, of the pads alone, or None
    """

    def __init__(self, model: Model, prior: Prior | PadPrior | None) -> None:
        self.model = model
        self.prior = whole(prior, model)
        self.rows = self.prior.rows(model.size)

    def linearise(self, theta: Floats) -> tuple[Floats, Floats]:
        """Whitened residuals (m + k,) and their Jacobian, readings first."""
        predicted, jacobian = self.model.linearise(theta)
        weight = 1.0 / self.model.sd
        residual = np.concatenate([(predicted - self.model.value) * weight, self.prior.residual(theta)])
        return residual, np.concatenate([jacobian * weight[:, None], self.rows])

    def cost(self, theta: Floats) -> Floats:
        """Sum of squared whitened residuals (...), prior included, for theta (..., size): -2 ln posterior."""
        residual = (self.model.predict(theta) - self.model.value) / self.model.sd
        return np.asarray((residual**2).sum(axis=-1) + (self.prior.residual(theta) ** 2).sum(axis=-1))

    def begin(self, start: Floats) -> Floats:
        """Where to start (size,): ln k (q,) given, the others where they are believed to be."""
        return start if start.size == self.model.size else np.concatenate([start, self.prior.mean])


def whole(prior: Prior | PadPrior | None, model: Model) -> Prior:
    """The prior of all unknowns, from one of the pads alone."""
    if isinstance(prior, Prior):
        return prior
    others = model.size - model.pads.size
    return Prior(pads=prior, mean=np.zeros(others), sd=np.full(others, np.inf))


def fit(model: Model, *, start: Floats, prior: Prior | PadPrior | None) -> Fit:
    """Fit the unknowns of one girder.

    Parameters
    ----------
    model : Model (an ObservationModel) with m readings and q pads
    start : (q,) ln k to start from, the nominal stiffnesses; or (size,)
    prior : of all unknowns, of the pads alone, or None to let the readings speak alone

    Raises
    ------
    NotDetermined
        where neither readings nor prior fix every unknown.
    RuntimeError
        if the minimisation does not converge.
    """
    problem = Problem(model, prior)
    begin = problem.begin(start)
    if not problem.prior.holds_all:
        _require_rank(problem.linearise(begin)[1], model)
    found = minimise(problem.linearise, begin)
    return _summarise(problem, found.theta, begin, found.evaluations)


def _summarise(problem: Problem, theta: Floats, start: Floats, evaluations: int) -> Fit:
    model, prior, prior_rows = problem.model, problem.prior, problem.rows
    q = model.pads.size
    predicted, data = model.linearise(theta)
    data = data / model.sd[:, None]
    if prior.pads is None:
        _require_bounds(
            np.abs(theta[:q] - start[:q]), model
        )  # a pad that ran away changes no reading any more
    if not prior.holds_all:
        _require_rank(np.concatenate([data, prior_rows]), model)
    full = data.T @ data + prior_rows.T @ prior_rows
    scale = 1.0 / np.sqrt(np.diag(full))
    joint = scale[:, None] * np.linalg.inv(scale[:, None] * full * scale) * scale
    if prior.pads is None:
        _require_bounds(np.sqrt(np.diag(joint)[:q]), model)
    residual = (model.value - predicted) / model.sd
    checked = snooping.redundancy(data, joint)
    off = snooping.standardised(residual, checked)
    chi_square = float(residual @ residual)
    told = float(((data @ joint) * data).sum()) if prior_rows.size else float(model.size)
    freedom = max(0, model.value.size - round(told))
    pads = joint[:q, :q]
    information = _information(data, prior_rows, q)
    vector = information @ theta[:q]
    if prior.pads is not None:  # at the optimum the readings pull as hard as the prior holds
        vector = vector + prior.pads.pull(theta[:q])
    variances = prior.variances(model.size)
    shares = 1.0 - np.diag(joint) / variances
    if prior.pads is not None:
        shares[:q] = prior.pads.share(pads, information)
    shares = np.clip(shares, 0.0, 1.0)
    return Fit(
        log_stiffness=theta[:q],
        covariance=pads,
        theta=theta,
        joint=joint,
        information=information,
        information_vector=vector,
        predicted=predicted,
        redundancy=checked,
        standardised=off,
        suspect=snooping.suspect(off),
        chi_square=chi_square,
        degrees_of_freedom=freedom,
        p_value=float(special.chdtrc(freedom, chi_square)) if freedom else np.nan,
        effective_unknowns=told,
        data_share=shares[:q],
        shares=shares,
        slopes=data,
        believed=variances,
        evaluations=evaluations,
    )


def _information(data: Floats, prior_rows: Floats, q: int) -> Floats:
    """Inverse variance of the pads by the readings alone, the others eliminated with what is believed of them."""
    pads, others = data[:, :q], data[:, q:]
    if others.shape[1]:
        held = prior_rows[~prior_rows[:, :q].any(axis=1)][:, q:]
        others = np.concatenate([others, held])
        pads = np.concatenate([pads, np.zeros((held.shape[0], q))])
        pads = pads - others @ (np.linalg.pinv(others) @ pads)
    return np.asarray(pads.T @ pads)


def _require_rank(whitened: Floats, model: Model) -> None:
    rows, unknowns = whitened.shape
    length = np.linalg.norm(whitened, axis=0)
    silent = [int(i) for i in np.flatnonzero(length <= 1e-12 * max(length.max(initial=0.0), 1e-300))]
    if rows >= unknowns and not silent:
        _, values, vectors = np.linalg.svd(whitened / length)
        if values[-1] > _RANK * values[0]:
            return
        silent = [int(i) for i in np.flatnonzero(np.abs(vectors[-1]) > 0.3)]
    reason = "too few readings" if rows < unknowns else "the readings do not tell the pads apart"
    believed = rows - model.value.size
    raise NotDetermined(
        reason, places=silent, q=model.pads.size, readings=model.value.size, unknowns=unknowns - believed
    )


def _require_bounds(reach: Floats, model: Model) -> None:
    """Refuse pads whose ln k went, or may lie, further than any believable stiffness; reach (q,)."""
    loose = np.flatnonzero(reach > _UNBOUNDED)
    if loose.size:
        raise NotDetermined(
            "the readings do not bound the stiffness",
            places=[int(i) for i in loose],
            q=model.pads.size,
            readings=model.value.size,
            unknowns=model.size,
            unbounded=True,
        )
