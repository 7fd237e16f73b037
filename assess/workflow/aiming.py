"""Which utilisation a visit is planned for, and how it answers to the unknowns."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from assess.capacity import evaluate_draws
from assess.capacity.checks import Check
from assess.workflow.building import GirderModel
from assess.workflow.study import SEED
from assess.workflow.supports import Supports, acting
from assess.workflow.unknowns import Setup

Floats = NDArray[np.float64]

_PAIRS = 200  # of draws, for the corners of the envelope
_LARGEST_STEP = {"pads": 0.3, "settlements": 1e-3, "girder": 0.1, "sustained": 0.1}  # m and ln


@dataclass(frozen=True, kw_only=True)
class Aim:
    """The section whose utilisation is the worst by today's knowledge: with two standard deviations added.

    Attributes
    ----------
    check, utilisation : None where no section has a resistance
    gradient : (size,) of its utilisation by the unknowns; zeros where there is none
    beside : variance that no reading on offer takes away: of seats levelled before that have no gauge
    corners : what the standard deviations by `gradient` are to be multiplied by, for the corners of the envelope
    checks, utilisations, gradients : (s,), (s,), (s, size) of all sections with a resistance
    """

    check: Check | None
    utilisation: float | None
    gradient: Floats
    beside: float
    checks: list[Check]
    utilisations: Floats
    gradients: Floats
    corners: float = 1.0

    def sd(self, variance: float) -> float | None:
        """Standard deviation of the utilisation, with what no reading takes away."""
        return None if self.check is None else float(np.sqrt(self.corners**2 * variance + self.beside))

    def overtaken(self, covariance: Floats) -> tuple[Check, float, float] | None:
        """Another section that would be the worst after the readings, with its utilisation and its sd."""
        if self.check is None:
            return None
        sd = self.corners * np.sqrt(np.einsum("si,ij,sj->s", self.gradients, covariance, self.gradients))
        worst = int(np.argmax(self.utilisations + 2.0 * sd))
        if self.checks[worst] is self.check:
            return None
        return self.checks[worst], float(self.utilisations[worst]), float(sd[worst])


def aim_of(setup: Setup, supports: Supports, theta: Floats, steps: Floats) -> Aim:
    """The governing utilisation and its slopes at theta (size,), by central differences over `steps` (size,).

    The steps are as wide as what is open of each unknown: envelopes have corners, and a slope over less than what
    is open would tell of one side of a corner only. All steps go through one batched evaluation.
    """
    model, layout = setup.model, setup.layout
    size, largest = theta.size, np.array([_LARGEST_STEP.get(entry.block, 0.0) for entry in layout.entries])
    width = np.minimum(steps, largest)
    seat_sd = _levelled(setup, supports)
    moved = np.concatenate([np.diag(width), np.zeros((model.n, size))])
    dropped = np.concatenate([np.zeros((size, model.n)), np.diag(seat_sd)])
    thetas = theta + np.concatenate([np.zeros((1, size)), moved, -moved])
    seats = supports.seats(model) + np.concatenate([np.zeros((1, model.n)), dropped, -dropped])
    rows = evaluate_draws(_crept(setup, theta).effects, model.factors, *_acting(setup, thetas, seats))
    known = [i for i, row in enumerate(rows) if np.all(np.isfinite(row.utilisation))]
    used = np.array([rows[i].utilisation for i in known]).reshape(len(known), len(thetas))
    up, down = np.split(used[:, 1:], 2, axis=1)
    change = (up - down) / 2.0  # by one step of each unknown, then by one sd of each seat that is none
    gradients = np.divide(change[:, :size], width, out=np.zeros((len(known), size)), where=width > 0.0)
    beside = (change[:, size:] ** 2).sum(axis=1)
    if not known:
        return Aim(
            check=None,
            utilisation=None,
            gradient=np.zeros(theta.size),
            beside=0.0,
            checks=[],
            utilisations=np.zeros(0),
            gradients=gradients,
        )
    worst = int(np.argmax(used[:, 0] + 2.0 * np.sqrt(_today(setup, supports, gradients) + beside)))
    return Aim(
        check=rows[known[worst]].check,
        utilisation=float(used[worst, 0]),
        gradient=gradients[worst],
        beside=float(beside[worst]),
        checks=[rows[i].check for i in known],
        utilisations=used[:, 0],
        gradients=gradients,
    )


def with_corners(aim: Aim, setup: Setup, supports: Supports, theta: Floats, covariance: Floats) -> Aim:
    """The aim with what corners of the envelope make of its standard deviations once a covariance (size, size) is left.

    The next calibration will stand somewhere about theta (size,), and its draws about that: the variance found is, on
    average, half the mean square of the difference of two draws about one such place. It is set against that of the
    linear picture on the same draws, so that a utilisation that is linear gives 1 to the last digit.
    """
    if aim.check is None:
        return aim
    noise = np.random.default_rng(SEED).standard_normal((3, _PAIRS, theta.size))
    values, vectors = np.linalg.eigh(covariance)
    stands, first, second = noise @ (vectors * np.sqrt(np.clip(values, 0.0, None))).T
    thetas = theta + np.concatenate([stands + first, stands + second])
    seats = np.tile(supports.seats(setup.model), (len(thetas), 1))
    crept = _crept(setup, theta)
    rows = evaluate_draws(crept.effects, crept.factors, *_acting(setup, thetas, seats))
    used = next(row.utilisation for row in rows if row.check is aim.check)
    found = ((used[:_PAIRS] - used[_PAIRS:]) ** 2).sum()
    linear = (((first - second) @ aim.gradient) ** 2).sum()
    return aim if linear == 0.0 else replace(aim, corners=float(np.sqrt(found / linear)))


def _levelled(setup: Setup, supports: Supports) -> Floats:
    """Standard deviation (n,) of the seats that were levelled before and are no unknowns; 0 of the others."""
    unknown = {setup.layout.entries[j].index for j in setup.layout.places("settlements")}
    sd = np.zeros(setup.model.n)
    for support, one in supports.settlements.items():
        if (i := setup.model.doc.support_index(support)) not in unknown:
            sd[i] = one.sd
    return sd


def _today(setup: Setup, supports: Supports, gradients: Floats) -> Floats:
    """Variance (s,) of the utilisations by what is known today of the pads and of seats levelled before."""
    layout, doc = setup.layout, setup.model.doc
    by_pads = gradients[:, layout.of("pads")]
    variance = np.einsum("si,ij,sj->s", by_pads, supports.covariance, by_pads)
    for j in layout.places("settlements"):
        levelled = supports.settlements.get(doc.supports[layout.entries[j].index].id)
        if levelled is not None:
            variance = variance + (gradients[:, j] * levelled.sd) ** 2
    return np.asarray(variance)


def _crept(setup: Setup, theta: Floats) -> GirderModel:
    """The girder with the creep that theta (size,) gives its pads; the assessment's draws take it as it is."""
    places = setup.layout.places("sustained")
    return setup.model.creeping(float(theta[places[0]])) if places else setup.model


def _acting(setup: Setup, thetas: Floats, seats: Floats) -> tuple[Floats, Floats]:
    """Compliances and seat drops (d, n) of unknowns (d, size), with seats (d, n) where they are none of them."""
    layout, seats = setup.layout, seats.copy()
    for j in layout.places("settlements"):
        seats[:, layout.entries[j].index] = thetas[:, j]
    factor = layout.places("girder")
    log_factor = thetas[:, factor[0]] if factor else 0.0
    return acting(setup.model, thetas[:, layout.of("pads")], seats, log_factor)
