"""95 % intervals hold the truth as often as they say, for every kind of unknown by itself. All seeded.

The truth is drawn from the prior and read with noise on bridges drawn at random; everything is unknown at once. A run
gives one truth of each kind (one of its places, drawn), so that runs are independent and counts are binomial.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import stats

from assess.calibrate import (
    Z95,
    Fit,
    Observation,
    ObservationModel,
    PermanentState,
    Prior,
    Problem,
    Unknowns,
    fit,
)
from assess.calibrate import intervals as profiled
from assess.loads import LoadCase
from tests.calibrate.bridges import (
    MM,
    Bridge,
    at_supports,
    believed,
    drawn_bridge,
    drawn_truth,
    read_under,
    start_of,
    vehicles,
    visited,
)
from tests.factories import noisy

Floats = NDArray[np.float64]
WARM = 1.2e-5 / 1.2  # 1/m of curvature a K: expansion over a depth of 1.2 m
PLAIN, LONG = 120, 1000


def everything(bridge: Bridge, *, since_loaded: bool) -> ObservationModel:
    """Gaps, seats, girder levels and slopes in the permanent state; gaps, levels, slopes and a seat in tests."""
    since = PermanentState(
        loads=bridge.dead, span_by_span=LoadCase(uniforms=((0.0, bridge.condensed.positions[-1], 8.0),)),
        since_loaded=since_loaded,
    )  # fmt: skip
    states: list[LoadCase | PermanentState] = [since, *vehicles(bridge)]
    read = [
        *at_supports(bridge, "compression", 0.08 * MM, 0),
        *(replace(o, shared=0) for o in at_supports(bridge, "settlement", 0.3 * MM, 0)),
        *(replace(o, shared=1) for o in at_supports(bridge, "deflection", 0.3 * MM, 0)),
        *sloping(bridge, 0),
        *read_under(bridge, 1),
        *sloping(bridge, 1),
        Observation(quantity="settlement", state=1, value=0.0, sd=0.1 * MM, support=1),
    ]
    unknowns = Unknowns(
        sustained=True,
        settlements=tuple(range(bridge.n)),
        girder=True,
        datum=True,
        share=(-1, *(0 for _ in bridge.piers)),
        gradient=((0.0, float(bridge.condensed.positions[-1]), WARM),),
    )
    return ObservationModel(bridge.condensed, np.arange(bridge.n), states, read, unknowns)


def sloping(bridge: Bridge, state: int) -> list[Observation]:
    return [
        Observation(quantity="rotation", state=state, value=0.0, sd=3e-5, x=float(x))
        for x in bridge.condensed.positions
    ]


@dataclass(frozen=True, kw_only=True)
class Run:
    """A truth and what was found of it."""

    model: ObservationModel
    prior: Prior
    truth: Floats
    found: Fit


def runs(count: int, seed: int, *, since_loaded: bool) -> list[Run]:
    rng, made = np.random.default_rng(seed), []
    for _ in range(count):
        bridge = drawn_bridge(rng)
        model = everything(bridge, since_loaded=since_loaded)
        prior = believed(bridge, model)
        truth = drawn_truth(prior, rng)
        read = noisy(model, truth, rng)
        made.append(
            Run(model=read, prior=prior, truth=truth, found=fit(read, start=start_of(prior), prior=prior))
        )
    return made


def poorly_told(count: int, seed: int) -> list[Run]:
    """Girder levels and two coarse gaps, pads believed to within 60 per cent: most is told by assumption."""
    rng, made = np.random.default_rng(seed), []
    for _ in range(count):
        drawn = drawn_bridge(rng)
        bridge = replace(drawn, prior=replace(drawn.prior, sd=np.full(drawn.n, 0.6)))
        read = (
            at_supports(bridge, "deflection", 0.3 * MM, 0)
            + at_supports(bridge, "compression", 0.2 * MM, 0)[:2]
        )
        unknowns = Unknowns(sustained=True, settlements=tuple(range(bridge.n)), girder=True)
        model = visited(bridge, read, test=False, unknowns=unknowns)
        prior = believed(bridge, model)
        truth = drawn_truth(prior, rng)
        read_model = noisy(model, truth, rng)
        found = fit(read_model, start=start_of(prior), prior=prior)
        made.append(Run(model=read_model, prior=prior, truth=truth, found=found))
    return made


def kinds(model: ObservationModel) -> dict[str, list[int]]:
    """Places of every kind of unknown; shift and tilt, and the two temperature differences, are kinds of their own."""
    found: dict[str, list[int]] = {}
    for j, entry in enumerate(model.layout.entries):
        name = entry.block
        if name in ("datum", "gradient"):
            name += {"datum": (" shift", " tilt"), "gradient": (" test", " permanent")}[name][entry.index]
        found.setdefault(name, []).append(j)
    return found


def normal_ends(run: Run, which: NDArray[np.intp]) -> tuple[Floats, Floats]:
    half = Z95 * np.sqrt(np.diag(run.found.joint)[which])
    return run.found.theta[which] - half, run.found.theta[which] + half


def profiled_ends(run: Run, which: NDArray[np.intp]) -> tuple[Floats, Floats]:
    problem = Problem(run.model, run.prior)
    low, high, _ = profiled(problem.linearise, run.found.theta, run.found.joint, which=which)
    return low, high


def held(
    made: list[Run], ends: Callable[[Run, NDArray[np.intp]], tuple[Floats, Floats]], seed: int
) -> dict[str, int]:
    """In how many runs the interval of one place of each kind holds the truth."""
    rng = np.random.default_rng(seed)
    counted: dict[str, int] = {}
    for run in made:
        names, places = zip(*((name, rng.choice(at)) for name, at in kinds(run.model).items()), strict=True)
        which = np.array(places, dtype=np.intp)
        low, high = ends(run, which)
        inside = (low <= run.truth[which]) & (run.truth[which] <= high)
        for name, one in zip(names, inside, strict=True):
            counted[name] = counted.get(name, 0) + int(one)
    return counted


def moment_relevant_held(made: list[Run]) -> int:
    """The same for a pier's distance from the line through the end seats, the datum unknown."""
    count = 0
    for run in made:
        x, block = run.model.condensed.positions, run.model.layout.of("settlements")
        row = np.zeros(x.size)
        row[[0, 1, -1]] = x[1] / x[-1] - 1.0, 1.0, -x[1] / x[-1]
        off = row @ (run.found.theta[block] - run.truth[block])
        count += int(abs(off) <= Z95 * np.sqrt(row @ run.found.joint[block, block] @ row))
    return count


def within_chance(count: int, of: int) -> bool:
    """Whether a count is one of 95 in 100, but for one chance in a thousand on either side."""
    low, high = stats.binom.ppf([1e-3, 1.0 - 1e-3], of, 0.95)
    return bool(low <= count <= high)


EVERY = {
    "unloaded": {"pads", "sustained", "settlements", "girder", "datum shift", "datum tilt", "share", "gradient test",
                 "gradient permanent", "seats", "shared"},
}  # fmt: skip
EVERY["loaded"] = EVERY["unloaded"] | {"as built"}
DATUM = {"unloaded": False, "loaded": True}


@pytest.fixture(scope="module", params=DATUM)
def some(request: pytest.FixtureRequest) -> tuple[str, list[Run]]:
    return request.param, runs(PLAIN, 31, since_loaded=DATUM[request.param])


def test_intervals_of_every_kind_hold_the_truth_95_times_in_100(some: tuple[str, list[Run]]) -> None:
    datum, made = some
    counted = held(made, normal_ends, 32)
    assert counted.keys() == EVERY[datum]
    assert all(within_chance(count, PLAIN) for count in counted.values()), counted


def test_moment_relevant_settlement_is_held_with_an_unknown_datum(some: tuple[str, list[Run]]) -> None:
    assert within_chance(moment_relevant_held(some[1]), PLAIN)


def test_intervals_of_the_profile_hold_the_truth_95_times_in_100(some: tuple[str, list[Run]]) -> None:
    counted = held(some[1][:15], profiled_ends, 33)
    assert all(within_chance(count, 15) for count in counted.values()), counted


def test_settlements_under_an_unknown_datum_are_known_worse_than_what_bends_the_girder(
    some: tuple[str, list[Run]],
) -> None:
    for run in some[1][:20]:
        block, x = run.model.layout.of("settlements"), run.model.condensed.positions
        row = np.zeros(x.size)
        row[[0, 1, -1]] = x[1] / x[-1] - 1.0, 1.0, -x[1] / x[-1]
        joint = run.found.joint[block, block]
        assert np.sqrt(row @ joint @ row) < np.sqrt(joint[1, 1])


def test_where_little_is_told_the_profile_holds_the_truth_as_often_as_it_says() -> None:
    counted = held(poorly_told(15, 34), profiled_ends, 35)
    assert all(within_chance(count, 15) for count in counted.values()), counted


@pytest.mark.campaign
def test_where_little_is_told_the_profile_holds_the_truth_at_length() -> None:
    made = poorly_told(LONG, 43)
    counted = held(made, profiled_ends, 44)
    print(f"\npoorly told, normal: {held(made, normal_ends, 44)}; profile where it is off: {counted}")
    for name, count in counted.items():
        assert 0.93 * LONG <= count <= 0.97 * LONG, name


@pytest.mark.campaign
@pytest.mark.parametrize("datum", DATUM)
def test_intervals_of_every_kind_hold_the_truth_at_length(datum: str) -> None:
    made = runs(LONG, 41, since_loaded=DATUM[datum])
    counted = {**held(made, normal_ends, 42), "moment-relevant": moment_relevant_held(made)}
    print(f"\ndatum {datum}, normal: {counted}")
    by_profile = held(made, profiled_ends, 42)
    print(f"\ndatum {datum}, profile where the normal is off: {by_profile}")
    for name, count in {**counted, **{f"{k} by profile": v for k, v in by_profile.items()}}.items():
        assert 0.93 * LONG <= count <= 0.97 * LONG, name
