"""Random bridges that could stand somewhere, seeded, and visits to them read off the reference."""

from __future__ import annotations

import itertools

import numpy as np

from tests.black_box.describe import Bridge, Girder, Reading, Section, Support
from tests.black_box.elements import Line

SD = {"compression": 1e-5, "deflection": 5e-5, "rotation": 5e-6, "strain": 1e-6}


def tenth(x: float) -> float:
    return round(float(x), 1)


def random_sections(rng: np.random.Generator, longest: float) -> dict[str, Section]:
    out = {}
    for name in ("a", "b", "c"):
        E = float(rng.choice([205e6, 34e6]))
        EI = 3e6 * (longest / 20) ** 2.2 * rng.uniform(0.6, 1.8)
        area = float(rng.uniform(0.01, 0.04) * 205e6 / E) if rng.random() < 0.5 else None
        out[name] = Section(
            E=E,
            I=float(EI / E),
            area=area,
            G=float(E / 2.3) if area and rng.random() < 0.3 else None,
            sagging=float(rng.uniform(2000, 6000) * (longest / 20) ** 2),
            hogging=float(rng.uniform(2000, 6000) * (longest / 20) ** 2),
            shear=float(rng.uniform(800, 2500) * (longest / 20)),
        )
    return out


def random_girder(rng: np.random.Generator, lengths: list[float], *, restrained: bool) -> Girder:
    spans = []
    for length in lengths:
        own = []
        if rng.random() < 0.7 and length > 4:
            cut = tenth(length * rng.uniform(0.1, 0.3))
            own.append((0.0, cut, "b"))
            if rng.random() < 0.7:
                own.append((tenth(length * rng.uniform(0.65, 0.9)), length, str(rng.choice(["b", "c"]))))
        spans.append((length, "a", own))
    n = len(lengths) + 1
    supports = [
        Support(k=float(rng.uniform(0.8e5, 9e5)), cv=float(rng.uniform(0.15, 0.5)))
        if rng.random() < 0.8
        else Support(k=None)
        for _ in range(n)
    ]
    if all(s.k is None for s in supports):
        supports[int(rng.integers(n))] = Support(k=2.5e5)
    if restrained:
        for s in supports:
            u = rng.random()
            s.rotation = float(rng.uniform(2e4, 5e5)) if u < 0.3 else (np.inf if u < 0.4 else 0.0)
    total = float(np.sum(lengths))
    permanent: list[tuple[float, float, float | None]] = [(float(rng.uniform(8, 30)), 0.0, total)]
    a = tenth(rng.uniform(0, total * 0.6))
    permanent.append((float(rng.uniform(2, 12)), a, tenth(rng.uniform(a + 1, total))))
    permanent.append((float(rng.uniform(10, 80)), tenth(rng.uniform(0, total)), None))
    return Girder(spans, supports, permanent, share=float(rng.uniform(0.3, 1.0)))


def random_bridge(rng: np.random.Generator, spans: int | None = None) -> Bridge:
    n = int(rng.integers(1, 7)) if spans is None else spans
    lengths = [tenth(rng.uniform(8, 32)) for _ in range(n)]
    sections = random_sections(rng, max(lengths))
    girder = random_girder(rng, lengths, restrained=rng.random() < 0.4)
    gaps = rng.uniform(1.2, 6.5, size=int(rng.integers(1, 5)))
    offsets = np.concatenate(([0.0], np.cumsum([tenth(g) for g in gaps])))
    vehicle = [(tenth(d), float(rng.uniform(60, 240))) for d in offsets]
    test = [(0.0, 150.0), (1.7, 230.0), (6.3, 90.0)]
    live = [
        ("train", int(rng.integers(1, 5)), tenth(offsets[-1] + rng.uniform(1, 4)), float(rng.uniform(0, 0.4)))
    ]
    if rng.random() < 0.5:
        live.append(("lorry", 1, 0.0, 0.3))
    relieving = float(rng.uniform(0.8, 1.0)) if rng.random() < 0.3 else None
    factors = (
        float(rng.uniform(1.0, 1.4)),
        float(rng.uniform(1.2, 1.8)),
        float(rng.uniform(0.85, 1.0)),
        relieving,
    )
    return Bridge(sections, [girder], {"train": vehicle, "lorry": test}, live, factors)


def test_places(
    bridge: Bridge, girder: Girder, rng: np.random.Generator
) -> dict[str, tuple[str, float, bool]]:
    """A test state over every span, and one over every support."""
    at = girder.at
    places = [*(0.5 * (at[1:] + at[:-1])), *at]
    return {
        f"T{i}": (
            str(rng.choice(list(bridge.vehicles))),
            float(np.clip(tenth(x + rng.uniform(0, 3)), 0.1, at[-1])),
            bool(rng.random() < 0.6),
        )
        for i, x in enumerate(places)
    }


test_places.__test__ = False  # type: ignore[attr-defined]


def axles_on(bridge: Bridge, girder: Girder, state: tuple[str, float, bool]) -> list[tuple[float, float]]:
    """The axles of a test state on the girder, this girder's share of them."""
    vehicle, lead, larger = state
    way = -1.0 if larger else 1.0
    placed = [(lead + way * d, p * girder.share) for d, p in bridge.vehicles[vehicle]]
    return [(x, p) for x, p in placed if -1e-9 <= x <= girder.at[-1] + 1e-9]


def plan(
    girder: Girder, states: dict[str, tuple[str, float, bool]], rng: np.random.Generator
) -> list[Reading]:
    """Every kind of reading in every state, unread so far."""
    at = girder.at
    edges = {round(x, 6) for a, b, _ in girder.pieces() for x in (a, b)}
    out = []
    for s in states:
        for i, support in enumerate(girder.supports):
            if support.k is not None:
                out.append(Reading(girder.id, s, "compression", i, None, 0.0, SD["compression"]))
        for x0, x1 in itertools.pairwise(at):
            for quantity in ("deflection", "rotation", "strain"):
                x = round(float(rng.uniform(x0 + 0.3, x1 - 0.3)), 2)
                while x in edges:
                    x = round(x + 0.01, 2)
                height = float(rng.uniform(-0.9, 0.4)) if quantity == "strain" else None
                out.append(Reading(girder.id, s, quantity, None, x, 0.0, SD[quantity], height))
        out.append(Reading(girder.id, s, "rotation", 0, None, 0.0, SD["rotation"]))
        out.append(Reading(girder.id, s, "deflection", len(at) - 1, None, 0.0, SD["deflection"]))
    return out


class Reader:
    """Predicts readings of one girder for any pads, by the assembled elements."""

    def __init__(
        self,
        bridge: Bridge,
        girder: Girder,
        states: dict[str, tuple[str, float, bool]],
        readings: list[Reading],
    ):
        self.bridge, self.girder, self.readings = bridge, girder, list(readings)
        places = [r.x for r in readings if r.x is not None]
        loads = {s: axles_on(bridge, girder, state) for s, state in states.items()}
        self.line = Line(
            girder, bridge.sections, np.array(places + [x for p in loads.values() for x, _ in p])
        )
        self.force = {s: self.line.force(p) for s, p in loads.items()}
        self.pads = [i for i, s in enumerate(girder.supports) if s.k is not None]

    def stiffness(self, ln_k: np.ndarray) -> np.ndarray:
        k = np.full(len(self.girder.supports), np.inf)
        k[self.pads] = np.exp(ln_k)
        return k

    def __call__(self, ln_k: np.ndarray) -> np.ndarray:
        held = self.line.held_up(self.stiffness(ln_k))
        u = {s: held.displacements(f) for s, (f, _) in self.force.items()}
        return np.array([self._one(r, u[r.state], self.force[r.state][1]) for r in self.readings])

    def _one(self, r: Reading, u: np.ndarray, held: np.ndarray) -> float:
        x = r.x if r.support is None else float(self.girder.at[r.support])
        node = self.line.node(x)
        if r.quantity in ("compression", "deflection"):
            return float(u[2 * node])
        if r.quantity == "rotation":
            return float(u[2 * node + 1])
        row = self.line.row("m", x)
        moment = row.row @ u + row.sign * held[row.element, row.local]
        # a strain reading is positive in tension; below the axis (height < 0) sagging stretches
        return float(-moment * r.height / self.line.ei[row.element])
