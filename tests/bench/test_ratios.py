"""Ratios of times measured in one run on one machine: `pytest -m bench -s`.

Each compares the same result from the condensed girder and from the whole girder solved by numpy, asserts
that they agree, prints the ratio, and asks for the target.
"""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import least_squares

from assess.calibrate.fit import PadPrior, fit
from assess.calibrate.observations import Observation, ObservationModel, PermanentState
from assess.calibrate.prior import Prior
from assess.calibrate.unknowns import Unknowns
from assess.girder import Condensed, Girder, Piece, contact, envelope, forces_of, passages, places
from assess.loads import LoadCase, Train
from tests.bench.dense import DenseGirder, seconds

pytestmark = pytest.mark.bench

GIRDER = Girder((
    (Piece(length=18.0, flexural=5.0e6), Piece(length=6.0, flexural=8.0e6)),
    (Piece(length=6.0, flexural=8.0e6), Piece(length=18.0, flexural=5.0e6), Piece(length=6.0, flexural=8.0e6)),
    (Piece(length=6.0, flexural=8.0e6), Piece(length=18.0, flexural=5.0e6)),
))  # fmt: skip
K = np.array([3.5e5, 5e5, 5e5, 3.5e5])
WAGON = Train(np.array([0.0, 1.8, 9.0, 10.8]), np.array([225.0, 225.0, 225.0, 225.0]))


def test_ten_thousand_stiffness_sets() -> None:
    condensed, dense = Condensed(GIRDER), DenseGirder(GIRDER, 1.5)
    rng = np.random.default_rng(11)
    sets = np.exp(-np.log(K) + rng.normal(0.0, 0.4, (10_000, 4)))
    x, weight = np.array([10.0, 36.0, 60.0]), np.array([300.0, 500.0, 200.0])
    loads = LoadCase(points=tuple(zip(x, weight, strict=True)))
    forces, vector = forces_of(condensed, loads), dense.point_loads(x, weight)

    batch = condensed.solve(sets, forces)
    some = sets[:200]
    plain = np.array([dense.solve(f, vector)[dense.at] for f in some])
    assert np.abs(batch.displacement[:200] - plain).max() < 1e-8 * np.abs(plain).max()

    ours = seconds(lambda: condensed.solve(sets, forces), 15)
    whole = seconds(lambda: [dense.solve(f, vector) for f in sets], 2)
    built = seconds(lambda: [dense.solve(f, vector, assemble=True) for f in some], 3) * len(sets) / len(some)
    system = np.eye(4) + condensed.K * sets[:, None, :]
    right = np.broadcast_to(forces[:, None], (10_000, 4, 1)).copy()
    bare = seconds(lambda: np.linalg.solve(system, right), 15)
    print(
        f"\n10,000 stiffness sets: {ours * 1e3:.1f} ms;"
        f" whole girder of {dense.h.size} elements {whole / ours:.0f} times"
        f" as long, {built / ours:.0f} times with its assembly; {ours / bare:.2f} of the bare batched solve"
    )
    assert built / ours >= 500.0
    assert ours / bare <= 1.3


def calibration(girder: Girder, k: np.ndarray) -> tuple[float, float, float]:
    """Time of one calibration, and of the same by differences: stiffness at hand, and assembled each time."""
    condensed, dense = Condensed(girder), DenseGirder(girder, 1.5)
    middles = (girder.support_positions[1:] + girder.support_positions[:-1]) / 2.0
    states, vectors, readings = [], [], []
    for state, leading in enumerate(middles + WAGON.length / 2.0):
        x = WAGON.axle_positions(np.array(leading))
        states.append(LoadCase(points=tuple(zip(x, WAGON.loads, strict=True))))
        vectors.append(dense.point_loads(x, WAGON.loads))
        readings += [("compression", state, i, 0.0, 2e-5) for i in range(k.size)]
        readings += [("deflection", state, -1, float(x), 2e-4) for x in middles]
    load = np.array(vectors).T
    rows = [int(np.argmin(np.abs(dense.nodes - x))) * 2 for x in middles]

    def plain(theta: np.ndarray, assemble: bool) -> np.ndarray:
        u = dense.solve(np.exp(-theta), load, assemble=assemble)
        return np.concatenate([u[dense.at], u[rows]]).T.ravel()

    rng = np.random.default_rng(5)
    sd = np.array([reading[4] for reading in readings])
    value = plain(np.log(k) + rng.normal(0.0, 0.3, k.size), False) + rng.normal(0.0, sd)
    observations = [
        Observation(quantity=q, state=s, support=i, x=x, value=v, sd=e)
        for (q, s, i, x, e), v in zip(readings, value, strict=True)
    ]
    start, tau = np.log(k), np.full(k.size, 0.5)
    prior = PadPrior(mean=start, sd=tau)
    model = ObservationModel(condensed, np.arange(k.size), states, observations)

    def differences(assemble: bool) -> np.ndarray:
        return least_squares(
            lambda t: np.concatenate([(plain(t, assemble) - value) / sd, (t - start) / tau]),
            start, xtol=1e-12, ftol=1e-12, gtol=1e-12, x_scale="jac",
        ).x  # fmt: skip

    found = fit(model, start=start, prior=prior)
    assert np.abs(found.log_stiffness - differences(False)).max() < 1e-4
    ours = seconds(lambda: fit(model, start=start, prior=prior), 15)
    return ours, seconds(lambda: differences(False), 3), seconds(lambda: differences(True), 3)


def test_one_calibration() -> None:
    # the fit reports redundancies, suspects and a p value as well; the plain way stops at the minimum
    long = Girder(GIRDER.spans[:2] + (GIRDER.spans[1],) * 5 + GIRDER.spans[2:])
    stiffness = np.concatenate([K[:2], np.full(5, 5e5), K[2:]])
    for girder, k in ((GIRDER, K), (long, stiffness)):
        ours, hand, built = calibration(girder, k)
        print(
            f"\none calibration of {k.size} pads: {ours * 1e3:.2f} ms, {1.0 / ours:.0f} a second;"
            f" finite differences on the whole girder {hand / ours:.1f} times as long,"
            f" {built / ours:.1f} times with its assembly"
        )
        assert built / ours >= 16.0


DEAD = 45.0  # kN/m for good
DROP = 5e-3


def test_a_full_calibration() -> None:
    """Pads, their sustained ratio, settlements and the girder's stiffness, from tests and the permanent state."""
    condensed, dense, n = Condensed(GIRDER), DenseGirder(GIRDER, 1.5), K.size
    edges = GIRDER.support_positions
    middles = (edges[1:] + edges[:-1]) / 2.0
    states: list[LoadCase | PermanentState] = []
    vectors = []
    for leading in middles + WAGON.length / 2.0:
        x = WAGON.axle_positions(np.array(leading))
        states.append(LoadCase(points=tuple(zip(x, WAGON.loads, strict=True))))
        vectors.append(dense.point_loads(x, WAGON.loads))
    states.append(PermanentState(loads=LoadCase(uniforms=((0.0, GIRDER.length, DEAD),))))
    load, lasting = np.array(vectors).T, dense.uniform_load(DEAD)
    observations = []
    for state in range(len(states)):
        observations += [
            Observation(quantity="compression", state=state, support=i, value=0.0, sd=5e-5) for i in range(n)
        ]
        observations += [
            Observation(quantity="deflection", state=state, x=float(x), value=0.0, sd=2e-4) for x in middles
        ]
    permanent = len(states) - 1
    observations += [
        Observation(quantity="settlement", state=permanent, support=i, value=0.0, sd=3e-4) for i in range(n)
    ]
    rows = [int(np.argmin(np.abs(dense.nodes - x))) * 2 for x in middles]
    unknowns = Unknowns(sustained=True, settlements=tuple(range(n)), girder=True)
    mean = np.concatenate([[np.log(0.74)], np.zeros(n), [0.0]])
    tau = np.concatenate([np.full(n, 0.5), [0.1], np.full(n, 0.02), [0.1]])
    start = np.concatenate([np.log(K), mean])

    def plain(theta: np.ndarray, assemble: bool) -> np.ndarray:
        f, ratio, s, phi = np.exp(-theta[:n]), np.exp(theta[n]), theta[n + 1 : -1], np.exp(theta[-1])
        u = dense.solve(f, load, assemble=assemble, factor=phi)
        told = np.concatenate([u[dense.at], u[rows]]).T.ravel()
        soft, pushed = f / ratio, lasting.copy()
        pushed[dense.at] += s / soft
        u = dense.solve(soft, pushed, assemble=assemble, factor=phi)
        return np.concatenate([told, u[dense.at] - s, u[rows], s])

    rng = np.random.default_rng(6)
    truth = start + np.concatenate([rng.normal(0.0, 0.3, n), [0.05], [0.0, DROP, 0.0, 0.0], [0.1]])
    sd = np.array([o.sd for o in observations])
    value = plain(truth, False) + rng.normal(0.0, sd)
    model = ObservationModel(condensed, np.arange(n), states, observations, unknowns)
    assert np.abs(model.predict(truth) - plain(truth, False)).max() < 1e-8
    model.value = value
    prior = Prior(pads=PadPrior(mean=start[:n], sd=tau[:n]), mean=mean, sd=tau[n:])

    def differences(assemble: bool) -> np.ndarray:
        return least_squares(
            lambda t: np.concatenate([(plain(t, assemble) - value) / sd, (t - start) / tau]),
            start, xtol=1e-12, ftol=1e-12, gtol=1e-12, x_scale="jac",
        ).x  # fmt: skip

    found = fit(model, start=start, prior=prior)
    assert np.all(np.abs(found.theta - differences(False)) < 0.02 * np.sqrt(np.diag(found.joint)))
    ours = seconds(lambda: fit(model, start=start, prior=prior), 15)
    hand, built = seconds(lambda: differences(False), 3), seconds(lambda: differences(True), 3)
    print(
        f"\na full calibration, {start.size} unknowns from {sd.size} readings: {ours * 1e3:.2f} ms,"
        f" {1.0 / ours:.0f} a second; finite differences on the whole girder {hand / ours:.1f} times as long,"
        f" {built / ours:.1f} times with its assembly"
    )
    assert built / ours >= 16.0


def test_a_train_envelope() -> None:
    condensed, x, f = Condensed(GIRDER), np.linspace(0.2, 77.8, 200), 1.0 / K
    place = places(condensed, "moment", x)
    # the plain way reads moments at nodes, so the stations are nodes
    dense = DenseGirder(GIRDER, 1.5, x)
    where = np.searchsorted(dense.nodes, x - 1e-9)
    coarse = DenseGirder(GIRDER, 1.5)
    for train in (WAGON, WAGON.coupled(5, 13.0)):
        end = GIRDER.length + train.length
        leading = np.linspace(0.0, end, 1200)

        def one(position: float) -> np.ndarray:
            fixed = dense.element_loads(position - train.offsets, train.loads)  # noqa: B023
            return dense.moments(dense.solve(f, dense.vector(fixed)), fixed)[where]

        def every() -> np.ndarray:
            return np.array([one(position) for position in leading]).max(axis=0)  # noqa: B023

        def condensed_way() -> np.ndarray:
            return envelope(passages(place, train, both_ways=False), f).maximum  # noqa: B023

        ours, theirs = seconds(condensed_way, 7), seconds(lambda: [one(p) for p in leading[::20]], 2) * 20.0  # noqa: B023
        vectors = [coarse.point_loads(p - train.offsets, train.loads) for p in leading]
        bare = seconds(lambda: [coarse.solve(f, vector) for vector in vectors], 2)  # noqa: B023
        found, plain = condensed_way(), every()
        # a plain grid of positions misses peaks, and exceeds ours by no more than an envelope may miss
        assert (plain <= found * (1.0 + 1e-3)).all()
        assert np.abs(found - plain).max() < 0.02 * found.max()
        print(
            f"\nenvelope at {x.size} stations, 1,200 positions, {train.offsets.size} axles: {ours * 1e3:.1f} ms;"
            f"\n a solve per position with the stations as nodes {theirs / ours:.0f} times as long;"
            f" bare solves of {coarse.h.size} elements, no moments read, {bare / ours:.0f} times"
        )
        assert theirs / ours >= 270.0


def test_contact_that_does_not_bite_costs_a_linear_solve() -> None:
    condensed = Condensed(GIRDER)
    rng = np.random.default_rng(12)
    sets = np.exp(-np.log(K) + rng.normal(0.0, 0.4, (10_000, 4)))
    loads = LoadCase(points=((10.0, 300.0), (36.0, 500.0)), uniforms=((0.0, GIRDER.length, 30.0),))
    forces, drops, none = (
        forces_of(condensed, loads),
        np.array([0.0, 0.002, 0.0, 0.0]),
        np.zeros(4, dtype=bool),
    )
    state = contact(condensed, sets, forces, drops, none)
    linear = condensed.solve(sets, forces, drops)
    assert not state.lifted.any() and np.array_equal(state.reaction, linear.reaction)
    plain = seconds(lambda: condensed.solve(sets, forces, drops), 25)
    ours = seconds(lambda: contact(condensed, sets, forces, drops, none), 25)
    far = np.array([0.0, 0.55, 0.0, 0.0])
    lifting = contact(condensed, sets, forces, far, none).lifted.any(axis=1).mean()
    biting = seconds(lambda: contact(condensed, sets, forces, far, none), 9)
    print(
        f"\n10,000 sets of pads without tension: {ours / plain:.2f} of the linear solve where nothing lifts;"
        f" {biting / plain:.1f} where {lifting:.0%} of the sets lift"
    )
    assert ours / plain <= 1.2
