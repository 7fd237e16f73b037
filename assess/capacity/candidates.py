"""The positions of live loads that can govern where pads may be left.

A train has its positions already. Where the parts of a published load model stand at worst depends on what the girder
stands on, so they are searched for every set of lifted supports that occurs, with those supports taken away; each stand
found is then one more position to solve with contact.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.capacity.uplift import Uplift
from assess.girder import Part, Passage, Placement, Rolling, Sweep, holds, kinds, passage_at

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

_FINER = 16  # steps that a step of the grid is divided into where a support is left or met
_FEW = 4  # sets of supports that tell which of them can lift
_MOST_SETS = 12  # of lifted supports that are searched; a few are usual


@dataclass(frozen=True, kw_only=True)
class Candidate:
    """Positions of a live load, and where they come from.

    Attributes
    ----------
    passage : the positions
    source : the live load
    lifted : (n,) supports that were taken away to find them
    """

    passage: Passage
    source: Part
    lifted: Bools


def candidates(
    parts: Sequence[Part], uplift: Uplift, compliances: Floats, settlements: Floats, *, seeds: Bools
) -> list[Candidate]:
    """Positions that can govern on some sets of supports.

    Parameters
    ----------
    parts : live loads passing the same places
    uplift : Uplift
    compliances, settlements : (s, n)
    seeds : (sets, n) sets of lifted supports to begin with (`occurring`)
    """
    none = np.zeros(compliances.shape[1], dtype=bool)
    found = [Candidate(passage=part, source=part, lifted=none) for part in parts if isinstance(part, Passage)]
    sweeps = [part for part in parts if isinstance(part, Sweep)]
    if not sweeps:
        return found
    done: set[bytes] = set()
    waiting = [none, *seeds]
    while waiting and len(done) < _MOST_SETS:
        one = waiting.pop(0)
        if one.tobytes() in done or not holds(sweeps[0].place.condensed, one):
            continue
        done.add(one.tobytes())
        on = np.where(one, np.inf, compliances)
        new = [Candidate(passage=sweep.governing(on), source=sweep, lifted=one) for sweep in sweeps]
        found += new
        waiting += list(occurring([c.passage for c in new], uplift, compliances, settlements))
    return found


def refined(
    found: Sequence[Candidate], uplift: Uplift, compliance: Floats, settlement: Floats
) -> list[Candidate]:
    """More positions of trains about where a support is left or met: an effect can be worst just there.

    Parameters
    ----------
    found : Candidates, of which those on one grid for all places are refined
    compliance, settlement : (n,)
    """
    more = []
    for sweep in dict.fromkeys(one.source for one in found if isinstance(one.source, Sweep)):
        sets = [one.lifted for one in found if one.source is sweep]
        on = np.where(np.array(sets), np.inf, compliance)
        more += [Candidate(passage=p, source=p, lifted=sets[0]) for p in Rolling(sweep).passages(on)]
    for one in found:
        part = one.passage
        if part.train is None or part.forces.shape[0] != 1:
            continue
        leading = part.leading[0]
        lifted = uplift.moved(compliance[None], settlement[None], part.forces[0])[1][:, 0]  # (c, m, n)
        change = np.flatnonzero((lifted[:, 1:] != lifted[:, :-1]).any(axis=(0, 2)))
        if change.size:
            share = np.arange(1, _FINER) / _FINER
            between = leading[change, None] + np.diff(leading)[change, None] * share
            passage = passage_at(part.place, part.train, np.unique(between))
            more.append(Candidate(passage=passage, source=passage, lifted=one.lifted))
    return more


def occurring(passages: Sequence[Passage], uplift: Uplift, compliances: Floats, settlements: Floats) -> Bools:
    """Sets of lifted supports (sets, n) that some positions bring on some sets of supports (s, n), a few looked at."""
    some = np.unique(np.linspace(0, len(compliances) - 1, _FEW).astype(np.intp))
    sets = [uplift.lifted_sets(passages, compliances[i], settlements[i]) for i in some]
    return kinds(np.concatenate(sets))[0]


def placement_of(one: Candidate, compliance: Floats, index: int, sense: float, position: int) -> Placement:
    """Where the live load of a candidate stands in one of its positions, for one place; the value is left open."""
    if isinstance(one.source, Sweep):
        return one.source.placement(np.where(one.lifted, np.inf, compliance), index, sense)
    train = one.passage.train
    if train is None:
        raise ValueError("these positions belong to no one train")
    x = train.axle_positions(one.passage.leading[index, position : position + 1])[0]
    on = one.passage.place.condensed.carries(x)
    axles = zip(x[on], train.loads[on], strict=True)
    return Placement(name="", value=np.nan, axles=tuple((float(a), float(p)) for a, p in axles))
