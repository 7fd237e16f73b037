"""Whole cases: a bridge in a record, a visit read off the reference, and rows set beside each other."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from tests.black_box.command import Record
from tests.black_box.describe import Bridge, Girder, Reading, Visit
from tests.black_box.elements import Array
from tests.black_box.invent import Reader
from tests.black_box.rating import Check, Rating, nominal

States = dict[str, tuple[str, float, bool]]


@dataclass
class Case:
    """A bridge of one girder with what is read on it."""

    bridge: Bridge
    girder: Girder
    states: States
    readings: list[Reading]
    reader: Reader

    @property
    def mean(self) -> Array:
        """Nominal ln k of the pads."""
        return np.log([self.girder.supports[i].k for i in self.reader.pads])

    @property
    def tau(self) -> Array:
        """Spread of ln k of a lognormal of the given coefficient of variation."""
        return np.sqrt(np.log1p(np.array([self.girder.supports[i].cv for i in self.reader.pads]) ** 2))

    @property
    def sd(self) -> Array:
        return np.array([r.sd for r in self.readings])

    def read(self, ln_k: Array, noise: Array | float = 0.0) -> None:
        """Take the readings of pads ln k."""
        for r, y in zip(self.readings, self.reader(ln_k) + noise, strict=True):
            r.value = float(y)

    def supports(self, ln_k: Array) -> Array:
        k = nominal(self.girder)
        k[self.reader.pads] = np.exp(ln_k)
        return k


def make(bridge: Bridge, states: States, readings: list[Reading]) -> Case:
    girder = bridge.girders[0]
    return Case(bridge, girder, states, readings, Reader(bridge, girder, states, readings))


def thinned(case: Case, keep: int, rng: np.random.Generator) -> Case:
    """The case with only some of its readings."""
    chosen = sorted(rng.permutation(len(case.readings))[:keep])
    readings = [case.readings[i] for i in chosen]
    used = {r.state for r in readings}
    return make(case.bridge, {k: v for k, v in case.states.items() if k in used}, readings)


def recorded(
    folder: Path,
    case: Case,
    rng: np.random.Generator | None = None,
    *,
    also: list[Reading] | None = None,
    table: bool = True,
) -> Record:
    """A record with the bridge and one visit, at the reference temperature."""
    record = Record(folder)
    record.done("init")
    record.add(case.bridge, rng)
    record.log(
        case.bridge, Visit("2015-05-05", case.states, case.readings + (also or []), 20.0), rng, table=table
    )
    return record


def log_stiffness(calibration: dict[str, Any]) -> Array:
    girders = calibration["girders"]
    return np.log([p["stiffness_kN_per_m"] for p in girders[0]["pads"]]) if girders else np.array([])


def key_of(section: dict[str, Any]) -> tuple[str, int | None, int | None]:
    span = None if section["effect"] == "hogging" else section["span"] - 1
    return section["effect"], span, None if section["support"] is None else int(section["support"][1:])


def _gap(said: float | None, own: float | None, scale: float) -> float:
    if said is None or own is None:
        return 0.0 if said is own else np.inf
    return abs(said - own) / scale


def _gaps(said: dict[str, Any], own: Check) -> list[float]:
    scale = max(abs(said["permanent"]), abs(said["live"]), abs(said["factored"]), 1e-6)
    out = [_gap(said[name], getattr(own, name), scale) for name in ("permanent", "live", "factored")]
    out.append(_gap(said["capacity"], own.capacity, own.capacity or 1.0))
    use = (
        None if own.utilisation is None else max(own.utilisation, 0.0)
    )  # acting the other way is no use of it
    out.append(_gap(said["utilisation"], use, max(use or 0.0, 1e-6)))
    rating = own.rating if own.rating is not None and own.rating < 1e6 else None
    out.append(_gap(said["rating_factor"], rating, abs(rating or 1.0)))
    return out


def compare(assessment: dict[str, Any], cases: dict[str, Rating], *, within: float = 1e-3) -> int:
    """Every row of the assessment against the reference; returns the number of rows looked at."""
    rows = 0
    for name, rating in cases.items():
        worst = rating.search()
        for section in assessment["girders"][0]["sections"]:
            said = section[name]
            gaps = min((_gaps(said, own) for own in rating.at(section["effect"], said["x_m"])), key=sum)
            governing = worst[key_of(section)].utilisation
            rows += 1
            if (governing or 0.0) > 1e-6 or (said["utilisation"] or 0.0) > 1e-6:
                assert max(gaps) < within, (name, key_of(section), gaps, said)
            if governing is not None:
                missed = governing - said["utilisation"]
                assert missed < 1e-3 * governing or governing < 1e-6, (name, key_of(section), governing, said)
    return rows


def compare_reactions(assessment: dict[str, Any], cases: dict[str, Rating], *, within: float = 1e-3) -> None:
    for name in ("unyielding", "calibrated"):
        own = cases[name].reactions()
        for said, (permanent, low, high) in zip(assessment["girders"][0]["reactions"], own, strict=True):
            scale = max(abs(permanent), high, 1.0)
            assert abs(said[f"{name}_permanent_kN"] - permanent) < within * scale, (name, said, permanent)
            if name == "calibrated":
                assert abs(said["calibrated_live_max_kN"] - high) < within * scale, (said, high)
                assert abs(said["calibrated_live_min_kN"] - low) < within * scale, (said, low)


def three(case: Case, ln_k: Array, drop: Array | None = None) -> dict[str, Rating]:
    """The reference on unyielding, nominal and calibrated supports."""
    level = np.full(len(case.girder.supports), np.inf)
    return {
        "unyielding": Rating(case.bridge, case.girder, level),
        "nominal": Rating(case.bridge, case.girder, nominal(case.girder)),
        "calibrated": Rating(case.bridge, case.girder, case.supports(ln_k), drop),
    }
