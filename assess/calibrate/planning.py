"""Which readings are worth most at the next visit.

Readings bring information that adds up, so that a set S of them leaves the unknowns the covariance

    C_S = (P + sum over S of h h' / sd^2)^-1

with P the prior precision and h the derivatives of a reading. Wanted is a set that leaves an aim (one number that is
linear in the unknowns, with gradient g) the least variance g' C_S g: c-optimality; what is left open by that is
decided by the determinant of C_S, D-optimality (both: Pukelsheim, Optimal Design of Experiments, 1993). Sets are found
by greedy exchange (Fedorov 1972; from memory): the places of the vehicle are added and exchanged one at a time, each
time with the readings that a greedy choice takes there, and then readings are exchanged, until nothing gains. That is
no proof of the best set; tests compare it with all sets of small problems.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]
Bools = NDArray[np.bool_]

BY_DETERMINANT = 1e-3
"""Of the log determinant beside the log variance of the aim: it decides among sets that are alike to the aim."""

_GAIN = 1e-10  # of the log variance: below it nothing is gained
_PAIRS = 14  # readings up to which two at a time are exchanged
_FEW = 6  # sets of positions, the best by a greedy choice, whose readings are exchanged too
_AT_ONCE = 4_000_000  # numbers in one batch


@dataclass(frozen=True, kw_only=True)
class Candidates:
    """Readings that could be taken, c of them.

    Parameters
    ----------
    rows : (c, p) derivatives of the readings by the unknowns
    sd : (c,) in the readings' units
    cost : (c,) positive
    position : (c,) index of the place the vehicle stands at; -1 where the reading needs no vehicle

    Raises
    ------
    ValueError
        where a shape is wrong, or an sd or a cost is not positive.
    """

    rows: Floats
    sd: Floats
    cost: Floats
    position: Ints

    def __post_init__(self) -> None:
        count = (self.rows.shape[0],)
        if self.rows.ndim != 2 or {self.sd.shape, self.cost.shape, self.position.shape} != {count}:
            raise ValueError("candidates need rows (c, p) and sd, cost, position (c,)")
        if not (np.all(self.sd > 0.0) and np.all(self.cost > 0.0)):
            raise ValueError("sd and cost of a candidate are positive")


@dataclass(frozen=True, kw_only=True)
class Limits:
    """How much can be read: readings, places of the vehicle, and cost in all."""

    readings: int
    positions: int
    cost: float = np.inf


@dataclass(frozen=True, kw_only=True)
class Plan:
    """Readings chosen.

    Attributes
    ----------
    chosen : (r,) places among the candidates, in order of worth: each is the best next one of the set
    variance : (r + 1,) of the aim after none, one, ... of them
    covariance : (p, p) of the unknowns after all of them
    cost : of all of them
    """

    chosen: Ints
    variance: Floats
    covariance: Floats
    cost: float


def plan(candidates: Candidates, *, precision: Floats, aim: Floats, limits: Limits) -> Plan:
    """Choose the readings that leave the aim the least variance.

    Parameters
    ----------
    candidates : c readings
    precision : (p, p) inverse of the prior covariance, positive definite
    aim : (p,) gradient of the number that matters by the unknowns
    limits : how much can be read

    Notes
    -----
    A candidate is taken once at most, and never one that tells nothing; there can be fewer readings than the limit.

    Raises
    ------
    numpy.linalg.LinAlgError
        where the precision is not positive definite.
    """
    problem = _Problem(candidates, precision, aim, limits)
    best = _position_search(problem)
    return _in_order(problem, best, aim)


@dataclass(frozen=True, kw_only=True)
class _Found:
    """A set: positions of the vehicle it may use, the readings (r,) and how good it is (less is better)."""

    positions: tuple[int, ...]
    chosen: Ints
    objective: float


class _Problem:
    """Candidates in prior standard deviations: there the prior precision is the unit matrix, whatever the units.

    One more candidate, the last, tells nothing and stands where a list of candidates is shorter than its neighbours.
    """

    def __init__(self, candidates: Candidates, precision: Floats, aim: Floats, limits: Limits) -> None:
        self.limits = limits
        scale = 1.0 / np.sqrt(np.diag(precision))
        root = np.linalg.inv(np.linalg.cholesky(precision * np.outer(scale, scale)))
        self.root = scale[:, None] * root.T  # (p, p), root root' = prior covariance
        rows = candidates.rows / candidates.sd[:, None] @ self.root
        self.rows = np.vstack([rows, np.zeros((1, rows.shape[1]))])
        self.cost = np.append(candidates.cost, np.inf)
        self.nothing = rows.shape[0]
        aimed = aim @ self.root
        self.aim = aimed / (np.linalg.norm(aimed) or 1.0)
        self.size = aim.size
        self.fixed = np.flatnonzero(candidates.position < 0)
        self.positions, self.table = self._by_position(candidates.position)

    def _by_position(self, position: Ints) -> tuple[Ints, Ints]:
        """Positions in use (P,), and the candidates at each (P, most), filled up with the one that tells nothing."""
        used = np.unique(position[position >= 0])
        members = [np.flatnonzero(position == one) for one in used]
        most = max((one.size for one in members), default=0)
        table = np.full((used.size, most), self.nothing, dtype=np.intp)
        for row, one in zip(table, members, strict=True):
            row[: one.size] = one
        return used, table

    def lists(self, sets: Ints) -> Ints:
        """Candidates (b, m) of sets of positions (b, k), by row of the table."""
        there = self.table[sets].reshape(sets.shape[0], -1)
        return np.concatenate([np.tile(self.fixed, (sets.shape[0], 1)), there], axis=1)

    def objective(self, covariance: Floats) -> Floats:
        """Log variance of the aim, with the log determinant beside it, of covariances (b, p, p)."""
        variance = np.einsum("i,bij,j->b", self.aim, covariance, self.aim)
        logdet = np.linalg.slogdet(covariance)[1]
        return np.asarray(np.log(np.maximum(variance, 1e-300)) + BY_DETERMINANT * logdet)

    def covariance(self, chosen: Ints) -> Floats:
        """Covariance (p, p) after a set of readings."""
        rows = self.rows[chosen]
        return np.asarray(np.linalg.inv(np.eye(self.size) + rows.T @ rows))


def _fill(
    problem: _Problem, lists: Ints, taken: Bools, covariance: Floats, *, by_cost: bool = False
) -> tuple[Bools, Floats, Ints]:
    """Take the best next reading of each list until a limit is reached, for a batch of lists.

    Parameters
    ----------
    lists : (b, m) candidates
    taken : (b, m) those taken already
    covariance : (b, p, p) after those
    by_cost : weigh what a reading gains against its cost

    Returns
    -------
    taken : (b, m)
    covariance : (b, p, p)
    order : (b, steps) places in the list in the order taken; -1 once nothing more is
    """
    rows, cost = problem.rows[lists], problem.cost[lists]
    taken, covariance, order = taken.copy(), covariance.copy(), []
    every = np.arange(lists.shape[0])
    limit = problem.limits.cost * (1.0 + 1e-12)
    while lists.shape[1]:
        spent = np.where(taken, cost, 0.0).sum(axis=1)
        within = ~taken & (spent[:, None] + cost <= limit)
        within &= (taken.sum(axis=1) < problem.limits.readings)[:, None]
        moved = rows @ covariance  # (b, m, p)
        gain = _gains(problem, rows, moved, covariance)
        worth = np.where(within & (gain > _GAIN), gain / cost if by_cost else gain, -np.inf)
        best = worth.argmax(axis=1)
        found = np.isfinite(worth[every, best])
        if not found.any():
            break
        step = moved[every, best]
        weight = found / (1.0 + (rows[every, best] * step).sum(axis=1))
        covariance -= weight[:, None, None] * step[:, :, None] * step[:, None, :]
        taken[every[found], best[found]] = True
        order.append(np.where(found, best, -1))
    made = np.array(order, dtype=np.intp).reshape(len(order), lists.shape[0]).T
    return taken, covariance, made


def _gains(problem: _Problem, rows: Floats, moved: Floats, covariance: Floats) -> Floats:
    """What each candidate (b, m) takes off the objective, by Sherman and Morrison's formula."""
    more = 1.0 + (rows * moved).sum(axis=2)
    before = np.einsum("i,bij,j->b", problem.aim, covariance, problem.aim)[:, None]
    after = before - (moved @ problem.aim) ** 2 / more
    floor = 1e-300
    gain = np.log(np.maximum(before, floor)) - np.log(np.maximum(after, floor))
    return np.asarray(gain + BY_DETERMINANT * np.log(more))


def _filled(problem: _Problem, lists: Ints, taken: Bools, covariance: Floats) -> tuple[Floats, list[Ints]]:
    """Objectives (b,) and readings of a batch of lists filled up; where costs bind, the better by gain or by cost."""
    share = max(1, _AT_ONCE // max(1, lists.shape[1] * problem.size))
    objective, chosen = np.full(lists.shape[0], np.inf), [np.zeros(0, dtype=np.intp)] * lists.shape[0]
    for by_cost in (False, True) if np.isfinite(problem.limits.cost) else (False,):
        for first in range(0, lists.shape[0], share):
            part = slice(first, first + share)
            done, left, _ = _fill(problem, lists[part], taken[part], covariance[part], by_cost=by_cost)
            for i, value in enumerate(problem.objective(left), start=first):
                if value < objective[i]:
                    objective[i], chosen[i] = value, lists[i][done[i - first]]
    return objective, chosen


def _position_search(problem: _Problem) -> _Found:
    """Add places of the vehicle one at a time, then exchange one at a time until nothing gains."""
    best = _of_sets(problem, np.zeros((1, 0), dtype=np.intp))
    for _ in range(min(problem.limits.positions, problem.positions.size)):
        found = _of_sets(problem, _one_more(problem, best.positions))
        if found.objective >= best.objective - _GAIN:
            break
        best = found
    while (found := _exchange_positions(problem, best)).objective < best.objective - _GAIN:
        best = found
    return best


def _one_more(problem: _Problem, positions: tuple[int, ...]) -> Ints:
    """Sets of positions (b, k + 1): these and one more."""
    more = np.setdiff1d(np.arange(problem.positions.size), positions)
    return np.column_stack([np.tile(np.array(positions, dtype=np.intp), (more.size, 1)), more])


def _of_sets(problem: _Problem, sets: Ints) -> _Found:
    """The best of sets of positions (b, k): all by what a greedy choice reads there, a few of them by exchange."""
    lists = problem.lists(sets)
    none = np.zeros(lists.shape, dtype=bool)
    unread = np.tile(np.eye(problem.size), (lists.shape[0], 1, 1))
    objective, chosen = _filled(problem, lists, none, unread)
    found = [
        _exchange_readings(
            problem,
            _Found(positions=tuple(int(k) for k in sets[i]), chosen=chosen[i], objective=float(objective[i])),
        )
        for i in np.argsort(objective, kind="stable")[:_FEW]
    ]
    return min(found, key=lambda one: one.objective)


def _exchange_positions(problem: _Problem, found: _Found) -> _Found:
    """The best set in which one place of the vehicle is another, or the same set if none is better."""
    best = found
    for leaving in found.positions:
        stay = tuple(one for one in found.positions if one != leaving)
        other = _one_more(problem, stay)
        other = other[other[:, -1] != leaving]
        if other.shape[0]:
            tried = _of_sets(problem, other)
            best = min(best, tried, key=lambda one: one.objective)
    return best


def _exchange_readings(problem: _Problem, found: _Found) -> _Found:
    """Take out each reading, and each pair of few, fill up again, and keep the best until nothing gains."""
    offered = problem.lists(np.array([found.positions], dtype=np.intp).reshape(1, -1))[0]
    while found.chosen.size:
        out: list[tuple[int, ...]] = [(i,) for i in range(found.chosen.size)]
        if found.chosen.size <= _PAIRS:
            out += list(combinations(range(found.chosen.size), 2))
        keep = [np.delete(found.chosen, one) for one in out]
        taken = np.array([np.isin(offered, one) for one in keep])
        left = np.array([problem.covariance(one) for one in keep])
        lists = np.tile(offered, (len(out), 1))
        objective, chosen = _filled(problem, lists, taken, left)
        best = int(objective.argmin())
        if objective[best] >= found.objective - _GAIN:
            break
        found = _Found(positions=found.positions, chosen=chosen[best], objective=float(objective[best]))
    return found


def _in_order(problem: _Problem, found: _Found, aim: Floats) -> Plan:
    """The chosen readings, the best next one first, with the variance after each."""
    lists, unread = found.chosen[None], np.eye(problem.size)[None]
    order = _fill(problem, lists, np.zeros(lists.shape, dtype=bool), unread)[2].ravel()
    chosen = found.chosen[order]
    rows = problem.rows[chosen]
    information = np.cumsum(rows[:, :, None] * rows[:, None, :], axis=0)
    after = np.linalg.inv(np.eye(problem.size) + np.concatenate([np.zeros_like(unread), information]))
    aimed = aim @ problem.root
    return Plan(
        chosen=chosen,
        variance=np.einsum("i,bij,j->b", aimed, after, aimed),
        covariance=problem.root @ after[-1] @ problem.root.T,
        cost=float(problem.cost[chosen].sum()),
    )
