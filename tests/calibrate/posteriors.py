"""Costs whose posterior is far from normal, for many unknowns at once."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import Fit, Observation, ObservationModel, PadPrior, fit
from assess.girder import Condensed, forces_of, places
from assess.loads import LoadCase
from tests.factories import NOMINAL, along, compressions, noisy, prior, viaduct, wagon_at

Floats = NDArray[np.float64]
Cost = Callable[[Floats], Floats]


@dataclass(frozen=True, kw_only=True)
class Case:
    """A cost (d,) of unknowns (d, p), its minimum (p,) and (J'J)^-1 there (p, p)."""

    cost: Cost
    mean: Floats
    covariance: Floats


def banana(bend: float, sd: float) -> Case:
    """Two unknowns along a parabola."""

    def cost(theta: Floats) -> Floats:
        return theta[:, 0] ** 2 + ((theta[:, 1] - bend * theta[:, 0] ** 2) / sd) ** 2

    return Case(cost=cost, mean=np.zeros(2), covariance=np.diag([1.0, sd**2]))


def skewed(p: int, correlation: float, skew: float) -> Case:
    """Unknowns so skewed that one side is held by a wide prior only, all strongly correlated."""
    believed = np.full((p, p), correlation)
    np.fill_diagonal(believed, 1.0)
    whiten = np.linalg.inv(np.linalg.cholesky(believed))

    def cost(theta: Floats) -> Floats:
        told = np.expm1(skew * theta) / skew @ whiten.T
        return (told**2).sum(axis=1) + ((theta / 2.0) ** 2).sum(axis=1)

    return Case(cost=cost, mean=np.zeros(p), covariance=np.linalg.inv(whiten.T @ whiten + np.eye(p) / 4.0))


def straight(p: int) -> Case:
    """A linear model, so that the posterior is normal."""
    design = np.random.default_rng(5).standard_normal((3 * p, p))
    mean = np.arange(p) + 1.0

    def cost(theta: Floats) -> Floats:
        return (((theta - mean) @ design.T) ** 2).sum(axis=1) + 7.0

    return Case(cost=cost, mean=mean, covariance=np.linalg.inv(design.T @ design))


def cost_of(
    condensed: Condensed,
    states: Sequence[LoadCase],
    read: Sequence[Observation],
    y: Floats,
    believed: PadPrior,
) -> Cost:
    """Cost of ln k (d, q) of a girder on pads throughout, its load states in one batch.

    Readings are compressions, deflections and rotations, on seats that stand still.
    """
    forces = np.array([forces_of(condensed, case) for case in states])
    state, sd = np.array([o.state for o in read]), np.array([o.sd for o in read])
    held, rows = np.zeros(len(read)), np.zeros((len(read), condensed.n_supports))
    for j, o in enumerate(read):
        if o.quantity == "compression":
            rows[j, o.support] = 1.0
        else:
            place = places(condensed, {"rotation": "slope"}.get(o.quantity, o.quantity), np.array([o.x]))
            held[j], rows[j] = place.held(states[o.state])[0], place.rows[0]

    def cost(theta: Floats) -> Floats:
        level = condensed.solve(np.exp(-theta)[:, None, :], forces).displacement
        told = (held + (rows * level[:, state]).sum(axis=2) - y) / sd
        return (told**2).sum(axis=1) + (((theta - believed.mean) / believed.sd) ** 2).sum(axis=1)

    return cost


def of_girder(
    states: Sequence[LoadCase], read: Sequence[Observation], believed: PadPrior, truth: Floats, seed: int
) -> tuple[Case, Fit]:
    """The viaduct with some pads read with noise, and its fit."""
    condensed = Condensed(viaduct())
    model = ObservationModel(condensed, np.arange(4), states, read)
    model = noisy(model, truth, np.random.default_rng(seed))
    found = fit(model, start=NOMINAL, prior=believed)
    cost = cost_of(condensed, states, read, model.value, believed)
    return Case(cost=cost, mean=found.log_stiffness, covariance=found.covariance), found


def hardly_told(coarser: float = 8.0, cv: float = 5.0) -> Case:
    """The viaduct with a wagon between two piers, read so coarsely that their pads are hardly told apart.

    The right one is five times stiffer than believed: its shortening drowns in the doubt, so that nothing but the
    prior keeps it from being rigid.
    """
    girder = viaduct()
    read = compressions(1, (1, 2)) + along("deflection", 1, (20.0, 23.0, 26.0), girder)
    read = [replace(o, sd=coarser * o.sd) for o in read]
    truth = NOMINAL + np.array([0.0, 0.2, 1.6, 0.0])
    return of_girder(wagon_at(girder, 28.5), read, prior(cv), truth, 3)[0]
