"""Costs whose posterior is far from normal, for many unknowns at once."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import ObservationModel, PadPrior, fit
from assess.girder import Condensed
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


def cost_of(model: ObservationModel, believed: PadPrior) -> Cost:
    """Cost of ln k (d, q) of a girder without moving seats, its load states in one batch."""

    def cost(theta: Floats) -> Floats:
        compliance = np.zeros((len(theta), 1, model.condensed.n_supports))
        compliance[:, 0, model.pads] = np.exp(-theta)
        level = model.condensed.solve(compliance, model._forces).displacement
        predicted = model._held + (model._by_level * level[:, model.state]).sum(axis=2)
        told = ((predicted - model.value) / model.sd) ** 2
        return told.sum(axis=1) + (((theta - believed.mean) / believed.sd) ** 2).sum(axis=1)

    return cost


def hardly_told(coarser: float = 8.0, cv: float = 5.0) -> Case:
    """The viaduct with a wagon between two piers, read so coarsely that their pads are hardly told apart.

    The right one is five times stiffer than believed: its shortening drowns in the doubt, so that nothing but the
    prior keeps it from being rigid.
    """
    girder = viaduct()
    read = compressions(1, (1, 2)) + along("deflection", 1, (20.0, 23.0, 26.0), girder)
    model = ObservationModel(Condensed(girder), np.arange(4), wagon_at(girder, 28.5), read)
    model.sd = model.sd * coarser
    believed = prior(cv)
    model = noisy(model, NOMINAL + np.array([0.0, 0.2, 1.6, 0.0]), np.random.default_rng(3))
    found = fit(model, start=NOMINAL, prior=believed)
    return Case(cost=cost_of(model, believed), mean=found.log_stiffness, covariance=found.covariance)
