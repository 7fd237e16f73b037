"""What is computed beside a fit: intervals, draws, the robust fit, readings to look at again."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import (
    Fit,
    Posterior,
    Problem,
    draw_posterior,
    fit,
    intervals,
    propose,
    robust,
)
from assess.results import ProposedRemoval, RobustPad
from assess.workflow.fitting import Fitting, Options, key_of
from assess.workflow.status import known
from assess.workflow.study import DRAWS, SEED
from assess.workflow.unknowns import Setup

Floats = NDArray[np.float64]
Intervals = tuple[Floats, Floats, NDArray[np.bool_]]


def _problem(setup: Setup, options: Options) -> Problem:
    return Problem(setup.equations, setup.prior(believed=options.prior))


def intervals_of(fitting: Fitting, options: Options) -> Intervals | None:
    """Low and high 95 % ends (size,) of every unknown, and which are of the profile likelihood."""
    if fitting.setup is None or fitting.found is None:
        return None
    problem, found = _problem(fitting.setup, options), fitting.found
    every = np.arange(found.theta.size)
    return intervals(problem.linearise, found.theta, found.joint, which=every)


def draws_of(fitting: Fitting, options: Options) -> Posterior | None:
    """Seeded draws of all unknowns; None where nothing bounds them: without a prior any great stiffness fits alike."""
    if fitting.setup is None or fitting.found is None or not options.prior:
        return None
    problem, found = _problem(fitting.setup, options), fitting.found
    return draw_posterior(problem.cost, found.theta, found.joint, count=DRAWS, seed=SEED)


def robust_of(fitting: Fitting, options: Options) -> list[RobustPad]:
    """The pads by a fit that gross errors pull less; none where it does not converge."""
    setup, found = fitting.setup, fitting.found
    if setup is None or found is None:
        return []
    problem = _problem(setup, options)
    other = robust(problem.linearise, found.theta, len(setup.readings))
    if not other.converged:
        return []
    q = found.log_stiffness.size
    off = (other.theta[:q] - found.log_stiffness) / found.sd
    return [
        RobustPad(support=support, stiffness_kN_per_m=float(np.exp(other.theta[i])), off_by_sd=float(off[i]))
        for i, support in enumerate(setup.model.pad_ids)
    ]


def proposals_of(fitting: Fitting, options: Options) -> list[ProposedRemoval]:
    """Readings to look at again, worst first, each found with those before it left out. None is removed."""
    setup, found = fitting.setup, fitting.found
    if setup is None or found is None or not found.suspect.any():
        return []

    def without(left: tuple[int, ...]) -> Fit:
        if not left:
            return found
        kept = [reading for j, reading in enumerate(setup.readings) if j not in left]
        own = Setup(setup.model, setup.visit, kept, setup.names)
        try:
            return fit(own.equations, start=own.start, prior=own.prior(believed=options.prior))
        except RuntimeError as failure:
            raise ValueError(str(failure)) from failure

    return [
        ProposedRemoval(
            reading=key_of(setup.readings[one.reading]),
            standardised_residual=one.standardised,
            p_value=known(one.p_value),
            alike=[key_of(setup.readings[j]) for j in one.alike],
        )
        for one in propose(without, len(setup.readings)).proposals
    ]
