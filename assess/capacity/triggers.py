"""Trigger values: how far one thing about the supports may move before a section reaches a level of utilisation.

All else stays as it is. The path from today's value to the end of the range is scanned in one batch (`evaluate_draws`),
the first section to reach the level is bracketed, the crossing is solved on the scanned curve (Brent 1973, `brentq`)
and then polished against `evaluate` itself, so that uplift, settlement factors and the place of the train are those of
an assessment. Sections past the level today can cross it no more and are named apart.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.interpolate import PchipInterpolator
from scipy.optimize import brentq

from assess.capacity.effects import Effects
from assess.capacity.factors import Factors
from assess.capacity.rows import evaluate, evaluate_draws, evaluate_row

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

POINTS = 25  # on each side of today's value: a step of the scan is small beside the range
CLOSE = 1e-5  # of the level: agreement asked of the polished value
_STEPS = 6  # of polishing; one or two are usual


@dataclass(frozen=True, kw_only=True)
class Driver:
    """One thing about the supports that may move.

    Attributes
    ----------
    now, low, high : its value today, and the range looked at
    supports : values (m,) to compliances and seat drops, both (m, n)
    """

    now: float
    low: float
    high: float
    supports: Callable[[Floats], tuple[Floats, Floats]]

    @property
    def values(self) -> Floats:
        """The values scanned, (2 POINTS - 1,), ascending; today's is in the middle."""
        below = np.linspace(self.low, self.now, POINTS)
        return np.concatenate([below, np.linspace(self.now, self.high, POINTS)[1:]])


@dataclass(frozen=True, kw_only=True)
class Crossing:
    """A value of a driver at which a section first reaches a level.

    Attributes
    ----------
    value : of the driver
    check : index of the row among the checks of the plan
    utilisation : of that row there, by `evaluate`
    """

    value: float
    check: int
    utilisation: float


@dataclass(frozen=True, kw_only=True)
class Scan:
    """Utilisations along drivers.

    Attributes
    ----------
    drivers : what moves
    utilisation : (drivers, points, rows)
    today : (rows,) as things are; NaN where the resistance is not given
    """

    effects: Effects
    factors: Factors
    drivers: Sequence[Driver]
    utilisation: Floats
    today: Floats

    def past(self, level: float) -> Ints:
        """Rows that are at the level or past it today."""
        return np.flatnonzero(np.nan_to_num(self.today, nan=-np.inf) >= level)

    def crossing(self, driver: int, way: int, level: float) -> Crossing | None:
        """First crossing of a level going down (way -1) or up (way +1) from today; None: none in the range.

        Parameters
        ----------
        driver : index
        way : -1 | 1
        level : utilisation
        """
        one = self.drivers[driver]
        part = slice(POINTS - 1, None) if way > 0 else slice(POINTS - 1, None, -1)
        values, used = one.values[part], self.utilisation[driver, part]
        below = np.flatnonzero(self.today < level)
        reached = used[:, below] >= level
        reached[0] = False
        if not reached.any():
            return None
        cell = int(np.flatnonzero(reached.any(axis=1))[0])  # the first step in which any of them gets there
        found = [_on_curve(values, used[:, row], cell, level) for row in below[reached[cell]]]
        which = int(np.argmin(np.abs(np.array(found) - one.now)))
        row = int(below[reached[cell]][which])
        ends = float(values[cell - 1]), float(values[cell])
        return self._polished(one, row, found[which], ends, float(used[cell - 1, row]), level)

    def _polished(
        self,
        driver: Driver,
        row: int,
        start: float,
        cell: tuple[float, float],
        used_before: float,
        level: float,
    ) -> Crossing:
        """Secant steps on the assessment itself, from the crossing of the scanned curve."""
        reach = abs(cell[1] - cell[0])
        value, before = start, cell[0]
        used = self._used(driver, row, value)
        for _ in range(_STEPS):
            if abs(used - level) <= CLOSE * level or used == used_before or value == before:
                break
            step = (level - used) * (value - before) / (used - used_before)
            before, used_before = value, used
            value = float(np.clip(value + np.clip(step, -reach, reach), driver.low, driver.high))
            used = self._used(driver, row, value)
        if abs(used - level) > CLOSE * level:  # a kink in the way: Brent's method on the assessment
            value = _bracketed(lambda x: self._used(driver, row, x) - level, *cell)
            used = self._used(driver, row, value)
        return Crossing(value=value, check=row, utilisation=used)

    def _used(self, driver: Driver, row: int, value: float) -> float:
        compliance, drops = driver.supports(np.array([value]))
        return evaluate_row(self.effects, self.factors, compliance[0], drops[0], row).case.utilisation


def scan(effects: Effects, factors: Factors, drivers: Sequence[Driver], today: tuple[Floats, Floats]) -> Scan:
    """Scan the utilisations of all rows along some drivers.

    Parameters
    ----------
    effects, factors
    drivers : what may move, each by itself
    today : compliances and seat drops (n,) as things are

    Raises
    ------
    Tips
        where the girder would tip on the way.
    """
    now = np.array([row.case.utilisation for row in evaluate(effects, factors, *today)])
    on = [driver.supports(driver.values) for driver in drivers]
    if not on:
        return Scan(
            effects=effects,
            factors=factors,
            drivers=drivers,
            utilisation=np.zeros((0, 2 * POINTS - 1, now.size)),
            today=now,
        )
    compliances = np.concatenate([compliance for compliance, _ in on])
    drops = np.concatenate([seats for _, seats in on])
    drawn = evaluate_draws(effects, factors, compliances, drops)
    used = np.array([row.utilisation for row in drawn]).T.reshape(len(drivers), 2 * POINTS - 1, -1)
    return Scan(effects=effects, factors=factors, drivers=drivers, utilisation=used, today=now)


def _on_curve(values: Floats, used: Floats, cell: int, level: float) -> float:
    """Where the scanned curve reaches the level in a step of the scan."""
    rising = values[0] < values[-1]
    x, y = (values, used) if rising else (values[::-1], used[::-1])
    curve = PchipInterpolator(x, y - level)
    ends = float(values[cell - 1]), float(values[cell])
    if float(curve(ends[0])) >= 0.0:  # the exact value today is below, the scanned one at the level already
        return ends[0]
    return _bracketed(lambda v: float(curve(v)), *ends)


def _bracketed(rest: Callable[[float], float], start: float, end: float) -> float:
    """Root between two ends; the nearer end where rounding leaves no change of sign."""
    low, high = rest(start), rest(end)
    if low * high > 0.0:
        return start if abs(low) < abs(high) else end
    found: float = brentq(rest, start, end, xtol=1e-12, rtol=1e-12)
    return found
