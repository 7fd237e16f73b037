"""Lifting a girder in stages to slide packing in: what the jacks carry, and what the girder bears meanwhile.

In a stage every support that is raised is held by jacks just where its pad, with the new packing, would touch without
load; the others stay on their pads. Live load is off the bridge. This is a calculation: reactions found by jacking were
a fifth to a third above calculated ones (US jacking records, from memory), so jacks are sized with an allowance.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.capacity.contact import standing_on
from assess.capacity.effects import Effects
from assess.capacity.factors import Factors
from assess.capacity.rows import factored_steady, response_of, senses
from assess.capacity.shims import Seats
from assess.capacity.standing import PermanentLoads

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

ALLOWANCE = 1.5
"""Jack capacity over the calculated reaction: practice, from memory (TRR 1319)."""

DIFFERENTIAL = 3e-3
"""m, greatest difference of lift between neighbours in a stage: common practice, no source."""


@dataclass(frozen=True, kw_only=True)
class Jacked:
    """A girder on jacks in one stage.

    Attributes
    ----------
    load : (n,) kN on the jacks; 0 where there is none
    level : (n,) of the girder over each support, m downward
    lifted : (n,) supports without jacks that the girder is off meanwhile
    worst : utilisation under factored permanent load alone
    """

    load: Floats
    level: Floats
    lifted: Bools
    worst: float


def staged(heights: Floats, *, step: float, differential: float) -> Floats:
    """Divide heights (n,) into stages of whole steps: packing at each support after each stage, (stages, n), m.

    In no stage do neighbours rise by amounts further apart than `differential`; each support rises as far as that
    allows. A step thicker than `differential` leaves no such stages: then supports go up one step at a time, and the
    caller has to say so.
    """
    whole = max(1, int(np.floor(differential / step * (1.0 + 1e-9))))
    left = np.round(heights / step).astype(np.intp)
    place = np.arange(left.size)
    apart = whole * np.abs(place[:, None] - place[None, :])
    done = np.zeros_like(left)
    stages = []
    while left.any():
        rise = (left[None, :] + apart).min(axis=1)  # the most that is nowhere steeper than allowed
        rise = np.minimum(rise, left)
        done, left = done + rise, left - rise
        stages.append(step * done)
    return np.array(stages, dtype=np.float64).reshape(-1, heights.size)


def jacked(
    effects: Effects,
    permanent: PermanentLoads,
    factors: Factors,
    compliance: Floats,
    seats: Seats,
    stage: tuple[Floats, Floats],
) -> Jacked:
    """Say what one stage does, from packing (n,) before to packing (n,) after it.

    Raises
    ------
    Tips
        where the girder would tip on the jacks.
    """
    before, after = stage
    on_jacks = after > before
    drops = seats.drops + seats.by_height @ np.where(on_jacks, after, before)
    pressed = compliance * permanent.simple_forces.sum(axis=0)  # before the spans were joined
    drops = np.where(on_jacks, drops - pressed, drops)
    held = np.where(on_jacks, 0.0, compliance)
    stands = standing_on(effects.condensed, permanent, held, drops, effects.held_down)
    return Jacked(
        load=np.where(on_jacks, stands.reaction, 0.0),
        level=stands.displacement,
        lifted=stands.lifted & ~on_jacks,
        worst=worst_without_live(effects, factors, held, drops),
    )


def worst_without_live(effects: Effects, factors: Factors, compliance: Floats, drops: Floats) -> float:
    """The worst utilisation under factored permanent load and seat drops; without resistance: left out."""
    worst = 0.0
    for name in ("moment", "shear"):
        steady = effects.steady(name, compliance, drops)
        for sign in (1.0, -1.0):
            held, relief, _ = factored_steady(factors, steady, sign)
            use = sign * (held + (relief if factors.relief_counts else 0.0))
            for check in effects.plan.checks:
                if response_of(check.effect) == name and sign in senses(check.effect):
                    own = use[check.stations] / effects.plan.resistance(check.effect)[check.stations]
                    worst = max(worst, float(np.nanmax(own, initial=0.0)))
    return worst
