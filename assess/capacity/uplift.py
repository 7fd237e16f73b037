"""Live effects of a girder that leaves pads without tension, permanent load present.

What a live load does then depends on the permanent load under it, so contact is solved under the factored combination
that a row checks. With permanent loads G_c at one choice of their factors (loading or relieving, kind by kind), seats
where they are and the factored live load g L in some position,

    live effect = (response(G_c + g L) - response(G_c)) / g,

which is the linear one where nothing lifts. A section takes the worst over positions and over the choices c; for a
choice other than the one its own permanent effect calls for, what the permanent effect thereby loses is taken off.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import product

import numpy as np
from numpy.typing import NDArray

from assess.capacity.contact import loads_on, standing_on
from assess.capacity.factors import Factors
from assess.capacity.standing import PermanentLoads
from assess.girder import Condensed, Passage, contact_many, kinds

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
Ints = NDArray[np.intp]

_BLOCK = 2_000_000  # responses held at once, 16 MB


@dataclass(frozen=True, kw_only=True)
class Extremes:
    """Greatest and least live effect (s, p), the index of the part each comes from (-1: no load) and the position."""

    maximum: Floats
    minimum: Floats
    part_at_maximum: Ints
    part_at_minimum: Ints
    position_at_maximum: Ints
    position_at_minimum: Ints


class Uplift:
    """Live effects beside permanent loads on supports that may be left.

    Parameters
    ----------
    condensed : Condensed
    permanent : PermanentLoads
    factors : Factors; only those on permanent and live loads are used
    held_down : (n,) supports that take tension

    Attributes
    ----------
    choices : (c, kinds) factors on the kinds of permanent load
    """

    def __init__(
        self, condensed: Condensed, permanent: PermanentLoads, factors: Factors, held_down: Bools
    ) -> None:
        self._condensed, self._permanent, self._held_down = condensed, permanent, held_down
        self._pairs = np.array([factors.of_kind(kind) for kind in permanent.kinds])  # (kinds, 2)
        self.choices: Floats = np.unique(np.array(list(product(*self._pairs))), axis=0)
        self._live = factors.live

    @property
    def is_possible(self) -> bool:
        """Whether anything can lift at all: a pad without hold-down, and loads that tell."""
        return self._permanent.given and self._live > 0.0 and not bool(self._held_down.all())

    def opens(self, compliance: Floats, settlement: Floats, live_low: Floats) -> Bools:
        """Tell for which supports (s, n) contact opens somewhere (s,).

        Parameters
        ----------
        compliance, settlement : (s, n)
        live_low : (s, n) least live reactions of the girder that sticks to its pads, at most 0, kN
        """
        found = np.zeros(compliance.shape[0], dtype=bool)
        for factors in self.choices:
            forces, seats = loads_on(self._permanent, compliance, settlement, factors)
            stuck = self._condensed.solve(
                compliance, forces, np.broadcast_to(seats, compliance.shape)
            ).reaction
            low = stuck + self._live * live_low
            slack = 1e-9 * np.abs(forces).max()
            found |= (low[:, ~self._held_down] < -slack).any(axis=1)
        return found

    def moved(self, compliance: Floats, settlement: Floats, forces: Floats) -> tuple[Floats, Bools]:
        """What live loads move the girder by over its supports, and what it is then off; both (c, s, m, n).

        Parameters
        ----------
        compliance, settlement : (s, n)
        forces : (m, n) support forces of the unfactored live load in its positions, supports held level, kN
        """
        levels, lifted = [], []
        for factors in self.choices:
            steady, seats = loads_on(self._permanent, compliance, settlement, factors)
            seats = np.broadcast_to(seats, compliance.shape)
            base = standing_on(
                self._condensed, self._permanent, compliance, settlement, self._held_down, factors=factors
            )
            state = contact_many(
                self._condensed, compliance, steady + self._live * forces, seats, self._held_down
            )
            levels.append((state.displacement - base.displacement[:, None, :]) / self._live)
            lifted.append(state.lifted)
        return np.array(levels), np.array(lifted)

    def lifted_sets(self, parts: Sequence[Passage], compliance: Floats, settlement: Floats) -> Bools:
        """All sets of lifted supports (sets, n) that the positions of some passages bring on supports (n,)."""
        found = [np.zeros((1, self._held_down.size), dtype=bool)]
        for part in parts:
            forces = part.forces.reshape(-1, self._held_down.size)
            lifted = self.moved(compliance[None], settlement[None], forces)[1]
            found.append(kinds(lifted.reshape(-1, self._held_down.size))[0])
        return kinds(np.concatenate(found))[0]

    def responses(self, part: Passage, compliance: Floats, settlement: Floats) -> Floats:
        """Live effects (c, s, p, m) of a passage at its places on supports (s, n)."""
        n = self._held_down.size
        moved = self.moved(compliance, settlement, part.forces.reshape(-1, n))[0]
        if part.forces.shape[0] == 1:
            return np.asarray(part.held + part.place.rows @ moved.swapaxes(-1, -2))
        moved = moved.reshape(*moved.shape[:2], *part.held.shape, n)
        return np.asarray(part.held + (moved @ part.place.rows[:, :, None])[..., 0])

    def lost(self, dead: Floats, sign: float) -> Floats:
        """What each choice of factors loses in the sense `sign` against the worst one, unfactored live, (c, ..., p).

        Parameters
        ----------
        dead : (kinds, ..., p) permanent effects
        """
        loading, relieving = (self._pairs[:, i].reshape(-1, *[1] * (dead.ndim - 1)) for i in range(2))
        worst = (np.where(sign * dead >= 0.0, loading, relieving) * dead).sum(axis=0)
        own = np.tensordot(self.choices, dead, axes=1)
        return np.asarray(np.maximum(sign * (worst - own), 0.0) / self._live)

    def extremes(
        self, parts: Sequence[Passage], dead: Floats, compliance: Floats, settlement: Floats
    ) -> Extremes:
        """Greatest and least live effects (s, p) over passages at the same places on many supports.

        Parameters
        ----------
        parts : passages at p places
        dead : (kinds, s, p) permanent effects there
        compliance, settlement : (s, n)
        """
        sets, count = compliance.shape[0], dead.shape[-1]
        best = np.zeros((2, sets, count))
        part_at, position_at = np.full((2, 2, sets, count), -1, dtype=np.intp)
        size = len(self.choices) * sum(part.held.size for part in parts)
        block = max(1, _BLOCK // max(size, 1))
        for first in range(0, sets, block):
            some = slice(first, first + block)
            lost = [self.lost(dead[:, some], sign) for sign in (1.0, -1.0)]
            for which, part in enumerate(parts):
                y = self.responses(part, compliance[some], settlement[some])
                for i, sign in enumerate((1.0, -1.0)):
                    worst = (sign * y - lost[i][..., None]).max(axis=0)  # (s, p, m)
                    at = worst.argmax(axis=-1)
                    value = np.take_along_axis(worst, at[..., None], axis=-1)[..., 0]
                    better = value > best[i, some]
                    best[i, some] = np.where(better, value, best[i, some])
                    part_at[i, some] = np.where(better, which, part_at[i, some])
                    position_at[i, some] = np.where(better, at, position_at[i, some])
        return Extremes(
            maximum=best[0],
            minimum=-best[1],
            part_at_maximum=part_at[0],
            part_at_minimum=part_at[1],
            position_at_maximum=position_at[0],
            position_at_minimum=position_at[1],
        )

    def governing(self, part: Passage, dead: Floats, compliances: Floats, settlements: Floats) -> Passage:
        """Keep, at each place, the positions that govern for some of the supports (s, n), and their neighbours.

        `dead` (kinds, s, p) are the permanent effects there.
        """
        count, m = part.held.shape
        chosen = np.zeros((count, m), dtype=bool)
        index = np.arange(count)
        for s in range(compliances.shape[0]):
            y = self.responses(part, compliances[s : s + 1], settlements[s : s + 1])[:, 0]
            for sign in (1.0, -1.0):
                worst = (sign * y - self.lost(dead[:, s], sign)[..., None]).max(axis=0)
                best = worst.argmax(axis=-1)
                for beside in (-1, 0, 1):
                    chosen[index, np.clip(best + beside, 0, m - 1)] = True
        return part.keep(chosen)
