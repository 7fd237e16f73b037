"""The rows of an assessment: which station governs, how far it is used, and how surely.

Utilisation is the factored effect over the factored resistance. The rating factor has the form of the AASHTO
Manual for Bridge Evaluation (6A.4.2), RF = (C - g_D D) / (g_L L), with the dynamic allowance and the live share in L.
The least of a row is not always where the row is used most, and is told beside. A permanent effect of the other
sign than the checked one relieves and takes its own factor; each kind of permanent load does so by itself, and so
does what settlements add. A relief by settlement can reverse, so that a section is also taken without it, and the
worse of the two governs unless the owner lets relief count.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.capacity.actions import Steady
from assess.capacity.checks import Check, CheckPlan
from assess.capacity.effects import Effects
from assess.capacity.factors import Factors
from assess.capacity.passing import Passing

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

RESPONSES_CHECKED = ("moment", "shear")
_SAMPLE = 32  # draws that choose the stations and train positions kept for all draws
_NO_LIVE = 1e-9  # of the resistance: a live effect below it is rounding, and no load to rate


@dataclass(frozen=True, kw_only=True)
class Case:
    """One row under one set of supports: kN m, or kN for shear; effects signed, resistance positive."""

    x: float
    resistance: float
    permanent: float
    live: float
    factored: float
    utilisation: float  # NaN where the resistance is not given
    rating_factor: float  # at x; NaN where there is no adverse live effect or no resistance
    least_rating: float = np.nan  # of the row, wherever in it that is
    least_rating_x: float = np.nan  # m, where that is
    settled: float = 0.0  # the part of `permanent` that seat drops add
    temperature: float = 0.0  # of the worst temperature case, unfactored; in `factored`
    with_relief: float = np.nan  # utilisation with relief by settlement
    without_relief: float = np.nan  # utilisation without it
    ratings: tuple[tuple[str, float], ...] = ()  # rating factor at each level by name


@dataclass(frozen=True, kw_only=True)
class Row:
    """A check with its governing case."""

    check: Check
    case: Case


@dataclass(frozen=True, kw_only=True)
class RowDraws:
    """A check over draws of the supports: utilisation (draws,); NaN where the resistance is not given."""

    check: Check
    utilisation: Floats


@dataclass(frozen=True, kw_only=True)
class Demand:
    """Signed effects at all stations in one sense: `sign` +1 for maxima, -1 for minima; arrays (..., p).

    `factored` governs; `relief` is what it would fall by if relief by settlement counted, factored, at most 0 in
    the sense of `sign`; `live` and `temperature` are unfactored.
    """

    sign: float
    steady: Steady
    live: Floats
    temperature: Floats
    factored: Floats
    relief: Floats

    @property
    def permanent(self) -> Floats:
        """Unfactored permanent effect with settlements."""
        return self.steady.permanent


def demand(factors: Factors, steady: Steady, live: Floats, sign: float) -> Demand:
    """Factor what stands and what moves (..., p) in the adverse sense `sign`."""
    held, relief, temperature = factored_steady(factors, steady, sign)
    counted = relief if factors.relief_counts else 0.0
    return Demand(
        sign=sign,
        steady=steady,
        live=live,
        temperature=temperature,
        factored=held + counted + factors.live * live,
        relief=relief,
    )


def factored_steady(factors: Factors, steady: Steady, sign: float) -> tuple[Floats, Floats, Floats]:
    """Factored effect (..., p) of what does not move in the sense `sign`.

    Returns
    -------
    held : without relief by settlement, temperature in it
    relief : what settlements relieve, factored
    temperature : of the worst case, unfactored
    """
    temperature = steady.hot if sign > 0.0 else steady.cold
    held = factors.temperature * temperature
    for kind, effect in zip(steady.kinds, steady.dead, strict=True):
        loading, relieving = factors.of_kind(kind)
        held = held + np.where(sign * effect >= 0.0, loading, relieving) * effect
    loading, relieving = factors.of_settlement
    adverse = sign * steady.settled >= 0.0
    held = held + np.where(adverse, loading * steady.settled, 0.0)
    return held, np.where(adverse, 0.0, relieving * steady.settled), temperature


def senses(effect: str) -> tuple[float, ...]:
    """Signs in which an effect is checked."""
    return {"sagging": (1.0,), "hogging": (-1.0,), "shear": (1.0, -1.0)}[effect]


def response_of(effect: str) -> str:
    """Name of the girder response a check looks at."""
    return "shear" if effect == "shear" else "moment"


def demands_at(
    effects: Effects,
    factors: Factors,
    compliance: Floats,
    settlement: Floats,
    live: Mapping[str, tuple[Floats, Floats]] | None = None,
    names: Sequence[str] = RESPONSES_CHECKED,
) -> dict[tuple[str, float], Demand]:
    """Factored moments and shears (p,) in both senses, by (response, sign), on one set of supports.

    `live` gives live maxima and minima (p,) that are known already, by response; `names` are the responses wanted.
    """
    demands: dict[tuple[str, float], Demand] = {}
    passing = effects.passing(factors, compliance[None], settlement[None])
    for name in names:
        steady = effects.steady(name, compliance, settlement)
        if live is None:
            found = passing.envelope(name)
            maximum, minimum = found.maximum, found.minimum
        else:
            maximum, minimum = live[name]
        for sign, extreme in ((1.0, maximum), (-1.0, minimum)):
            demands[name, sign] = demand(factors, steady, extreme, sign)
    return demands


def evaluate(effects: Effects, factors: Factors, compliance: Floats, settlement: Floats) -> list[Row]:
    """Evaluate all rows of a plan on supports of compliance (n,) with seat drops (n,)."""
    demands = demands_at(effects, factors, compliance, settlement)
    rows = []
    for check in effects.plan.checks:
        own = [demands[response_of(check.effect), sign] for sign in senses(check.effect)]
        rows.append(Row(check=check, case=_govern(effects.plan, check, own, factors)))
    return rows


def evaluate_row(effects: Effects, factors: Factors, compliance: Floats, settlement: Floats, row: int) -> Row:
    """Evaluate one row of a plan, by its index, on supports of compliance (n,) with seat drops (n,)."""
    check = effects.plan.checks[row]
    name = response_of(check.effect)
    demands = demands_at(effects, factors, compliance, settlement, names=(name,))
    own = [demands[name, sign] for sign in senses(check.effect)]
    return Row(check=check, case=_govern(effects.plan, check, own, factors))


def _uses(plan: CheckPlan, check: Check, demands: list[Demand]) -> Floats:
    """Use (senses, ..., c) of a check's stations: factored effect over resistance, not clipped.

    A station without a given resistance is measured by the largest one given in the row (1 if there is none),
    so that it still shows up where it governs.
    """
    resistance = plan.resistance(check.effect)[check.stations]
    given = resistance[np.isfinite(resistance)]
    ruler = np.where(np.isfinite(resistance), resistance, given.max() if given.size else 1.0)
    return np.array([d.sign * d.factored[..., check.stations] / ruler for d in demands])


def _govern(plan: CheckPlan, check: Check, demands: list[Demand], factors: Factors) -> Case:
    uses = _uses(plan, check, demands)
    sense, place = np.unravel_index(int(uses.argmax()), uses.shape)
    chosen, station = demands[int(sense)], int(check.stations[int(place)])
    permanent, live = float(chosen.permanent[station]), float(chosen.live[station])
    factored, sign = float(chosen.factored[station]), chosen.sign
    relief = float(chosen.relief[station])
    bare = factored - relief if factors.relief_counts else factored
    capacity = float(plan.resistance(check.effect)[station])
    governing = int(sense), int(place)
    adverse = sign * factors.live * live
    steady = sign * factored - adverse
    least, least_x = _least_rating(plan, check, demands, factors, factors.live, governing)

    return Case(
        x=float(plan.x[station]),
        resistance=capacity,
        permanent=permanent,
        live=live,
        factored=factored,
        utilisation=max(0.0, sign * factored) / capacity,
        rating_factor=(capacity - steady) / adverse if adverse > _NO_LIVE * capacity else np.nan,
        least_rating=least,
        least_rating_x=least_x,
        settled=float(chosen.steady.settled[station]),
        temperature=float(chosen.temperature[station]),
        with_relief=max(0.0, sign * (bare + relief)) / capacity,
        without_relief=max(0.0, sign * bare) / capacity,
        ratings=tuple(
            (name, _least_rating(plan, check, demands, factors, level, governing)[0])
            for name, level in factors.levels
        ),
    )


def _least_rating(
    plan: CheckPlan,
    check: Check,
    demands: list[Demand],
    factors: Factors,
    level: float,
    governing: tuple[int, int],
) -> tuple[float, float]:
    """Least rating factor of a row at a live factor, and its x in m; both NaN where nothing rates.

    A station with less permanent and more live effect can rate lower than `governing` (sense, station), which is used
    most. Where permanent effects alone exceed the resistance there, that station keeps its own: how far below zero
    another one is says nothing. Without a resistance there the row is not rated.
    """
    stations = check.stations
    capacity = plan.resistance(check.effect)[stations]
    live = np.array([d.sign * d.live[stations] for d in demands])  # (senses, c)
    steady = np.array([d.sign * d.factored[stations] for d in demands]) - factors.live * live
    rates = level * live > _NO_LIVE * capacity
    rating = np.where(rates, (capacity - steady) / np.where(rates, level * live, 1.0), np.nan)
    if not rates.any() or np.isnan(capacity[governing[1]]):
        return np.nan, np.nan
    sense, place = np.unravel_index(int(np.nanargmin(rating)), rating.shape)
    at = governing if rating[governing] < 0.0 else (int(sense), int(place))
    return float(rating[at]), float(plan.x[stations[at[1]]])


def evaluate_draws(
    effects: Effects, factors: Factors, compliances: Floats, settlements: Floats
) -> list[RowDraws]:
    """Utilisation of every row over draws of the supports.

    Parameters
    ----------
    effects : Effects
    factors : Factors
    compliances, settlements : (draws, n)

    Notes
    -----
    A spread sample of the draws chooses the stations and train positions that can govern; all draws are then
    evaluated on those in one batch.
    """
    sample = _spread(compliances, settlements)
    passing = effects.passing(factors, compliances, settlements, sample)
    kept = _governing_stations(effects, factors, compliances[sample], settlements[sample], passing)
    used: dict[int, Floats] = {}
    for name in ("moment", "shear"):
        rows = [i for i, check in enumerate(effects.plan.checks) if response_of(check.effect) == name]
        stations = np.unique(np.concatenate([kept[i] for i in rows]))
        steady = effects.steady(name, compliances, settlements, stations)
        maximum, minimum = passing.draws(name, stations)
        for sign, live in ((1.0, maximum), (-1.0, minimum)):
            factored = demand(factors, steady, live, sign).factored
            for i in rows:
                check = effects.plan.checks[i]
                if sign not in senses(check.effect):
                    continue
                column = np.searchsorted(stations, kept[i])
                resistance = effects.plan.resistance(check.effect)[kept[i]]
                value = np.clip(sign * factored[:, column] / resistance, 0.0, None).max(axis=1)
                used[i] = np.maximum(used[i], value) if i in used else value
    return [RowDraws(check=check, utilisation=used[i]) for i, check in enumerate(effects.plan.checks)]


def moment_draws(
    effects: Effects, factors: Factors, compliances: Floats, settlements: Floats
) -> tuple[Floats, Floats]:
    """Factored sagging and hogging moments (draws, p) at all stations over draws of the supports (draws, n)."""
    stations = np.arange(effects.plan.x.size)
    sample = _spread(compliances, settlements)
    steady = effects.steady("moment", compliances, settlements)
    maximum, minimum = effects.passing(factors, compliances, settlements, sample).draws("moment", stations)
    sagging = demand(factors, steady, maximum, 1.0).factored
    return sagging, demand(factors, steady, minimum, -1.0).factored


def _governing_stations(
    effects: Effects, factors: Factors, compliances: Floats, settlements: Floats, passing: Passing
) -> list[Ints]:
    """Stations that govern each row, in each sense, for at least one of some sets of supports (sets, n).

    They are the sample of `passing`.
    """
    found: list[set[int]] = [set() for _ in effects.plan.checks]
    sample = {name: passing.sampled(name) for name in ("moment", "shear")}
    for s, (compliance, settlement) in enumerate(zip(compliances, settlements, strict=True)):
        live = {name: (high[s], low[s]) for name, (high, low) in sample.items()}
        demands = demands_at(effects, factors, compliance, settlement, live)
        for i, check in enumerate(effects.plan.checks):
            own = [demands[response_of(check.effect), sign] for sign in senses(check.effect)]
            # each sense on its own: the one that seldom governs has a station of its own
            best = _uses(effects.plan, check, own).argmax(axis=-1)
            found[i].update(int(station) for station in check.stations[best])
    return [np.array(sorted(stations), dtype=np.intp) for stations in found]


def _spread(compliances: Floats, settlements: Floats) -> Ints:
    """Indices of a sample that holds the extremes of every support and some of the rest."""
    both = np.concatenate([compliances, settlements], axis=1)
    ends = np.concatenate([both.argmin(axis=0), both.argmax(axis=0)])
    rest = np.linspace(0, compliances.shape[0] - 1, min(_SAMPLE, compliances.shape[0])).astype(np.intp)
    return np.unique(np.concatenate([ends, rest]))
