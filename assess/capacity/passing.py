"""Live loads passing the places of a girder line, on supports that may be left.

Where contact opens nowhere, this is the girder that sticks to its pads, digit for digit. Where it does, every position
that can govern is solved with contact (`uplift.py`, `candidates.py`); of a batch of supports only those that open.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from assess.capacity.candidates import Candidate, candidates, occurring, placement_of, refined
from assess.capacity.uplift import Extremes, Uplift
from assess.girder import REACTION, Envelope, Part, Placement, Sweep, envelope, extremes, governing_placement

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
Ints = NDArray[np.intp]
Dead = Callable[[str, Floats, Floats, Ints | None], Floats]
"""Permanent effects (kinds, s, p) by name, supports (s, n), seat drops (s, n) and stations."""

_MARGIN = 1.5  # on the live reaction of models, some alternatives of which count for other effects only
_FEW = 16  # sets of supports that choose positions where none of the sample opens


class Passing:
    """Live effects on some sets of supports.

    Parameters
    ----------
    parts : live loads passing, by name of the response; the reactions among them
    dead : permanent effects
    uplift : Uplift
    compliances, settlements : (s, n)
    sample : (k,) indices of the sets that stand for all
    """

    def __init__(
        self,
        parts: Mapping[str, list[Part]],
        dead: Dead,
        uplift: Uplift,
        compliances: Floats,
        settlements: Floats,
        sample: Ints,
    ) -> None:
        self._parts, self._dead, self._uplift = parts, dead, uplift
        self._compliances, self._settlements, self._sample = compliances, settlements, sample
        self._made: dict[str, list[Candidate]] = {}
        self._surely = np.zeros(compliances.shape[0], dtype=bool)  # without the margin; set by `opens`

    @cached_property
    def opens(self) -> Bools:
        """On which sets of supports (s,) contact opens somewhere as the live load passes, or before."""
        parts = self._parts[REACTION]
        if not self._uplift.is_possible:
            return np.zeros(self._compliances.shape[0], dtype=bool)
        if not parts:
            low = np.zeros(self._compliances.shape)
        elif self._compliances.shape[0] == 1:
            low = envelope(parts, self._compliances[0]).minimum[None]
        else:
            low = extremes([p.governing(self._compliances[self._sample]) for p in parts], self._compliances)[
                1
            ]
        self._surely = self._uplift.opens(self._compliances, self._settlements, low)
        if not any(isinstance(part, Sweep) for part in parts):
            return self._surely
        return self._uplift.opens(self._compliances, self._settlements, _MARGIN * low)

    def envelope(self, name: str) -> Envelope:
        """Live envelope (p,) at all places on the one set of supports there is."""
        parts = self._parts[name]
        if not parts:
            count = self._dead(name, self._compliances, self._settlements, None).shape[-1]
            zero, nowhere = np.zeros(count), np.full(count, np.nan)
            return Envelope(
                maximum=zero, minimum=zero, leading_at_maximum=nowhere, leading_at_minimum=nowhere
            )
        if not self._lifts(name):
            return envelope(parts, self._compliances[0])
        found = self._extremes_of(name)
        return Envelope(
            maximum=found.maximum[0],
            minimum=found.minimum[0],
            leading_at_maximum=self._leading(name, found.part_at_maximum[0], found.position_at_maximum[0]),
            leading_at_minimum=self._leading(name, found.part_at_minimum[0], found.position_at_minimum[0]),
        )

    def lifted(self) -> Bools:
        """Supports (n,) that some position lifts, on the one set of supports there is."""
        if not self.opens[0]:
            return np.zeros(self._compliances.shape[1], dtype=bool)
        passages = [one.passage for one in self._candidates(REACTION)]
        sets = occurring(passages, self._uplift, self._compliances, self._settlements)
        return np.asarray(sets.any(axis=0))

    def placement(self, name: str, station: int, sense: float) -> Placement | None:
        """Where the live load stands for the greatest (sense 1) or least (-1) response at a station; None: nowhere."""
        if not self._lifts(name):
            return governing_placement(self._parts[name], self._compliances[0], station, sense)
        found = self._extremes_of(name)
        value, part, position = (
            (found.maximum, found.part_at_maximum, found.position_at_maximum)
            if sense > 0.0
            else (found.minimum, found.part_at_minimum, found.position_at_minimum)
        )
        which = int(part[0, station])
        if which < 0:
            return None
        chosen = self._candidates(name)[which]
        stand = placement_of(chosen, self._compliances[0], station, sense, int(position[0, station]))
        return replace(stand, value=float(value[0, station]))

    def sampled(self, name: str) -> tuple[Floats, Floats]:
        """Live maxima and minima (k, p) at all places on the sample.

        A load model is taken on a coarser lattice: good enough to tell which station governs.
        """
        compliances, settlements = self._compliances[self._sample], self._settlements[self._sample]
        parts = [part.rough() if isinstance(part, Sweep) else part for part in self._parts[name]]
        if not parts:
            zero = np.zeros((self._sample.size, self._dead(name, compliances, settlements, None).shape[-1]))
            return zero, zero
        fixed = [part.governing(compliances) if isinstance(part, Sweep) else part for part in parts]
        found = [envelope(fixed, one) for one in compliances]
        high, low = np.array([one.maximum for one in found]), np.array([one.minimum for one in found])
        some = np.flatnonzero(self.opens[self._sample])
        if some.size:
            on = compliances[some], settlements[some]
            passages = [one.passage for one in candidates(parts, self._uplift, *on, seeds=self._seeds)]
            best = self._uplift.extremes(passages, self._dead(name, *on, None), *on)
            high[some], low[some] = best.maximum, best.minimum
        return high, low

    def draws(self, name: str, stations: Ints) -> tuple[Floats, Floats]:
        """Live maxima and minima (s, stations).

        Only the positions that govern for one of the sample, and their neighbours, are looked at.
        """
        parts = [part.at(stations) for part in self._parts[name]]
        if not parts:
            zero = np.zeros((self._compliances.shape[0], stations.size))
            return zero, zero
        sample = self._compliances[self._sample]
        high, low = extremes([part.governing(sample) for part in parts], self._compliances)
        some = np.flatnonzero(self.opens)
        if some.size:
            on = self._compliances[self._chosen], self._settlements[self._chosen]
            dead = self._dead(name, *on, stations)
            passages = [
                self._uplift.governing(one.passage, dead, *on)
                for one in candidates(parts, self._uplift, *on, seeds=self._seeds)
            ]
            on = self._compliances[some], self._settlements[some]
            best = self._uplift.extremes(passages, self._dead(name, *on, stations), *on)
            high[some], low[some] = best.maximum, best.minimum
        return high, low

    # with contact ------------------------------------------------------------------------------------

    @cached_property
    def _chosen(self) -> Ints:
        """Indices of sets that open and stand for all that do."""
        sampled = self._sample[self.opens[self._sample]]
        if sampled.size:
            return sampled
        some = np.flatnonzero(self.opens)
        return some[np.unique(np.linspace(0, some.size - 1, _FEW).astype(np.intp))]

    @cached_property
    def _seeds(self) -> Bools:
        """Sets of lifted supports (sets, n) that the worst positions for the reactions of models bring."""
        on = self._compliances[self._chosen], self._settlements[self._chosen]
        passages = [part.governing(on[0]) for part in self._parts[REACTION] if isinstance(part, Sweep)]
        return occurring(passages, self._uplift, *on)

    def _lifts(self, name: str) -> bool:
        """Whether some position of what passes the places lifts anything on the one set of supports there is."""
        if not self.opens[0]:
            return False
        if self._surely[0]:
            return True
        passages = [one.passage for one in self._candidates(name)]
        return bool(occurring(passages, self._uplift, self._compliances, self._settlements).any())

    def _candidates(self, name: str) -> list[Candidate]:
        if name not in self._made:
            on = self._compliances[:1], self._settlements[:1]
            found = candidates(self._parts[name], self._uplift, *on, seeds=self._seeds)
            found += refined(found, self._uplift, on[0][0], on[1][0])
            self._made[name] = found
        return self._made[name]

    def _extremes_of(self, name: str) -> Extremes:
        on = self._compliances[:1], self._settlements[:1]
        passages = [one.passage for one in self._candidates(name)]
        return self._uplift.extremes(passages, self._dead(name, *on, None), *on)

    def _leading(self, name: str, part: Ints, position: Ints) -> Floats:
        leading = np.full(part.size, np.nan)
        for which, one in enumerate(self._candidates(name)):
            here = np.flatnonzero(part == which)
            leading[here] = one.passage.leading[here, position[here]]
        return leading
