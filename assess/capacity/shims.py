"""Packing heights that give the least worst utilisation.

Packing of height h under support i lifts its seat by h. Where the girder stays on its supports, all it adds is linear
in the heights: a section's factored effect is what does not depend on them, plus g (e0 + G h) with the factor g on what
seats add, another one where that loads than where it relieves (relief counts only where the owner says so). The live
envelope hangs on compliances alone. So the worst utilisation is the greatest of many linear functions of h, and the
heights that make it least are a linear programme; in steps of the packing in stock, a mixed-integer one:

    minimise t   subject to   a_c + g (e0_c + G_c h) <= t for every section c and both factors g,
                              R0 + Q h >= 0 at every support that is not pulled at today,   0 <= h <= the most allowed.

Of all heights that come as low, the least packing in all is taken: a common lift, or a straight tilt, of all supports
changes nothing, and heights are counted from the lowest support up. Both programmes are solved by HiGHS (scipy).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import Bounds, LinearConstraint, milp

from assess.capacity.effects import Effects
from assess.capacity.factors import Factors
from assess.capacity.rows import factored_steady, response_of, senses
from assess.girder import REACTION

Floats = NDArray[np.float64]

_SLACK = 1e-9  # of the utilisation, of a reaction: rounding of the solver


class NoPacking(ValueError):
    """No heights within the limits keep the girder on its supports under permanent load."""


@dataclass(frozen=True, kw_only=True)
class Seats:
    """How packing moves the seats that the girder acts on.

    Attributes
    ----------
    drops : (n,) seat drops without packing, m
    by_height : (n, n) change of the drops (row) per unit height at a support (column): -1 on the diagonal, and more
        where lasting load presses pads down further
    """

    drops: Floats
    by_height: Floats


@dataclass(frozen=True, kw_only=True)
class Programme:
    """The worst utilisation as the greatest of linear functions of the heights h (n,), m.

    Attributes
    ----------
    constant, slope : (c,), (c, n) utilisation = constant + slope h
    reaction, reaction_slope : (n,), (n, n) under permanent load and seats, kN
    least_reaction : (n,) that the packing has to leave
    """

    constant: Floats
    slope: Floats
    reaction: Floats
    reaction_slope: Floats
    least_reaction: Floats

    def worst(self, heights: Floats) -> Floats:
        """The worst utilisation (...) of heights (..., n)."""
        used = self.constant + heights @ self.slope.T
        return np.asarray(np.maximum(used.max(axis=-1, initial=0.0), 0.0))

    def holds(self, heights: Floats) -> NDArray[np.bool_]:
        """Whether no support is left under permanent load (...) with heights (..., n)."""
        slack = _SLACK * np.abs(self.reaction).max(initial=1.0)
        left = self.reaction + heights @ self.reaction_slope.T - self.least_reaction
        return np.asarray((left >= -slack).all(axis=-1))


@dataclass(frozen=True, kw_only=True)
class Packing:
    """Heights found.

    Attributes
    ----------
    heights : (n,) m; whole steps
    worst : utilisation with them, as the programme has it
    unrounded, bound : heights (n,) and utilisation of the linear programme: no steps come lower
    """

    heights: Floats
    worst: float
    unrounded: Floats
    bound: float


def programme(
    effects: Effects,
    factors: Factors,
    compliance: Floats,
    seats: Seats,
    live_at: Floats,
) -> Programme:
    """Set up the programme of a girder line.

    Parameters
    ----------
    effects, factors
    compliance : (n,) m/kN
    seats : Seats
    live_at : (n,) heights with which the live envelope is taken: they matter only where live load lifts the girder

    Raises
    ------
    ValueError
        where no section has a resistance.
    """
    none = np.zeros_like(compliance)
    passing = effects.passing(factors, compliance[None], (seats.drops + seats.by_height @ live_at)[None])
    loading, relieving = factors.of_settlement
    gains = (loading, relieving if factors.relief_counts else 0.0)
    constants, slopes = [], []
    for name in ("moment", "shear"):
        steady = effects.steady(name, compliance, none)
        by_drop = effects.by_drop(name, compliance)  # (n, p)
        settled, by_height = seats.drops @ by_drop, seats.by_height.T @ by_drop
        live = passing.envelope(name)
        for sign, extreme in ((1.0, live.maximum), (-1.0, live.minimum)):
            held = factored_steady(factors, steady, sign)[0] + factors.live * extreme
            for check in effects.plan.checks:
                if response_of(check.effect) != name or sign not in senses(check.effect):
                    continue
                resistance = effects.plan.resistance(check.effect)[check.stations]
                given = np.isfinite(resistance)
                at, by = check.stations[given], sign / resistance[given]
                for gain in gains:
                    constants.append(by * (held[at] + gain * settled[at]))
                    slopes.append((by * gain * by_height[:, at]).T)
    constant, slope = np.concatenate(constants), np.concatenate(slopes)
    if not constant.size:
        raise ValueError("no section has a resistance")
    of_reaction = effects.by_drop(REACTION, compliance)
    dead = effects.steady_reactions(compliance, none).dead
    reaction = dead.sum(axis=0) + seats.drops @ of_reaction
    return Programme(
        constant=constant,
        slope=slope,
        reaction=reaction,
        reaction_slope=(seats.by_height.T @ of_reaction).T,
        least_reaction=_to_be_left(reaction, effects.held_down, told=bool(dead.any())),
    )


def _to_be_left(reaction: Floats, held_down: NDArray[np.bool_], *, told: bool) -> Floats:
    """No tension; where a support is held down, no more than today; without permanent loads nothing tells."""
    if not told:
        return np.full(reaction.shape, -np.inf)
    return np.where(held_down, np.minimum(reaction, 0.0), 0.0)


def least_worst(problem: Programme, *, step: float, most: float, worth: float = _SLACK) -> Packing:
    """Find the heights in whole steps that give the least worst utilisation, and of those the least packing.

    Parameters
    ----------
    problem : Programme
    step, most : thickness of the packing in stock, and the greatest height at any support, m
    worth : gain in utilisation that less packing may cost

    Raises
    ------
    NoPacking
    """
    count = int(np.floor(most / step * (1.0 + 1e-9)))
    bound, unrounded = _least(problem, scale=1.0, most=most, whole=False)
    near = _binding(problem, bound, most)
    best, _ = _least(near, scale=step, most=count, whole=True)
    slack = max(worth, _SLACK * max(best, 1.0))
    steps = _fewest(near, scale=step, most=count, level=best + slack)
    heights = step * np.round(steps)
    return Packing(
        heights=heights, worst=float(problem.worst(heights)), unrounded=unrounded, bound=float(bound)
    )


def _binding(problem: Programme, least: float, most: float) -> Programme:
    """The same programme without the sections that no heights bring up to the least level there can be."""
    highest = problem.constant + most * np.clip(problem.slope, 0.0, None).sum(axis=1)
    kept = highest >= least - 1e-6
    return Programme(
        constant=problem.constant[kept],
        slope=problem.slope[kept],
        reaction=problem.reaction,
        reaction_slope=problem.reaction_slope,
        least_reaction=problem.least_reaction,
    )


def _least(problem: Programme, *, scale: float, most: float, whole: bool) -> tuple[float, Floats]:
    """Least level t and heights in units of `scale`, up to `most` units."""
    n = problem.slope.shape[1]
    rows = np.hstack([scale * problem.slope, -np.ones((problem.constant.size, 1))])
    found = milp(
        np.r_[np.zeros(n), 1.0],
        constraints=[
            LinearConstraint(rows, -np.inf, -problem.constant),
            _stays(problem, scale, extra=1),
        ],
        bounds=Bounds(np.zeros(n + 1), np.r_[np.full(n, float(most)), np.inf]),
        integrality=np.r_[np.full(n, int(whole)), 0],
        options={"mip_rel_gap": 0.0},
    )
    if found.x is None:
        raise NoPacking("no packing within the limits keeps the girder on its supports under permanent load")
    return float(found.x[-1]), np.asarray(found.x[:n])


def _fewest(problem: Programme, *, scale: float, most: float, level: float) -> Floats:
    """Fewest whole steps in all with the worst utilisation at most `level`."""
    n = problem.slope.shape[1]
    found = milp(
        np.ones(n),
        constraints=[
            LinearConstraint(scale * problem.slope, -np.inf, level - problem.constant),
            _stays(problem, scale, extra=0),
        ],
        bounds=Bounds(np.zeros(n), np.full(n, float(most))),
        integrality=np.ones(n, dtype=np.intp),
        options={"mip_rel_gap": 0.0},
    )
    if found.x is None:
        raise NoPacking("rounding leaves no packing that comes as low")
    return np.asarray(found.x)


def _stays(problem: Programme, scale: float, *, extra: int) -> LinearConstraint:
    """No support is left under permanent load; reactions in units of the largest one."""
    size = np.abs(problem.reaction).max(initial=1e-9)
    rows = np.hstack([scale * problem.reaction_slope, np.zeros((problem.reaction.size, extra))])
    return LinearConstraint(rows / size, (problem.least_reaction - problem.reaction) / size, np.inf)
