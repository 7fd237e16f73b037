"""Valid bridges at the edge of what stands: every command answers, and the numbers still agree."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from tests.black_box.cases import compare, compare_reactions, log_stiffness, make, recorded, three
from tests.black_box.describe import Bridge, Girder, Reading, Section, Support
from tests.black_box.invent import plan, test_places

TWO = [(12.0, "a", []), (15.0, "a", [])]
PADS = [3e5, 4e5, 3e5]
VEHICLES = {
    "wagon": [(0.0, 120.0), (1.8, 120.0), (9.2, 120.0)],
    "one": [(0.0, 250.0)],
    "long": [(0.0, 100.0), (70.0, 100.0), (140.0, 50.0)],
}
TRAIN = [("wagon", 3, 11.0, 0.2)]
OVER_TWO = {"T1": ("wagon", 10.0, True), "T2": ("wagon", 12.0, True), "T3": ("wagon", 27.0, False)}
ON_SUPPORTS = {"T1": ("one", 0.0, True), "T2": ("one", 12.0, True), "T3": ("one", 27.0, False)}


def steel(**changes: float | None) -> Section:
    return Section(**({"E": 205e6, "I": 0.012} | changes))  # type: ignore[arg-type]


def girder(spans=TWO, supports=PADS, permanent=None, share=1.0) -> Girder:
    total = sum(s[0] for s in spans)
    made = [s if isinstance(s, Support) else Support(s) for s in supports]
    return Girder(list(spans), made, [(20.0, 0.0, total)] if permanent is None else permanent, share)


def pieces(*own: tuple[float, float, str]) -> list[tuple[float, float, str]]:
    return list(own)


HELD = [Support(3e5, rotation=np.inf), Support(None, rotation=np.inf), Support(2e5, rotation=np.inf)]
THIN = [
    (12.0, "a", pieces((0.0, 0.005, "b"), (6.0, 6.002, "b"), (11.99, 12.0, "b"))),
    (60.0, "a", pieces((0.0, 0.003, "b"))),
]
DROPS = [
    Reading("north", "permanent", "settlement", i, None, v, 1e-6)
    for i, v in ((0, -0.002), (1, 0.02), (2, 0.001))
]
LOADS_ON_SUPPORTS = [(20.0, 0.0, 27.0), (50.0, 12.0, None), (40.0, 27.0, None), (30.0, 0.0, None)]

CASES = {
    "a vehicle longer than the bridge": {"live": [("long", 1, 0.0, 0.0)], "states": OVER_TWO},
    "one axle, at the supports": {"live": [("one", 1, 0.0, 0.0)], "states": ON_SUPPORTS},
    "a single span on two pads": {"g": girder([(12.0, "a", [])], [3e5, 2e5])},
    "nothing but pins": {"g": girder(supports=[None, None, None])},
    "rotations fixed": {"g": girder(supports=HELD)},
    "no live load": {"live": [], "states": OVER_TWO},
    "no permanent load": {"g": girder(permanent=[])},
    "no capacities": {"s": {"a": steel(sagging=None, hogging=None, shear=None)}},
    "permanent load upward": {"g": girder(permanent=[(-20.0, 3.0, 27.0), (-100.0, 5.0, None)])},
    "seats dropped and loads over supports": {"g": girder(permanent=LOADS_ON_SUPPORTS), "also": DROPS},
    "pieces of millimetres": {
        "g": girder(THIN),
        "s": {"a": steel(I=0.1), "b": steel(I=0.3, area=0.02, sagging=9000.0)},
    },
}
SLOW = {
    "a span of 2 m beside one of 80 m": {
        "g": girder([(2.0, "a", []), (80.0, "a", [])]),
        "s": {"a": steel(I=0.2)},
    },
    "thirty vehicles, a share of ten": {"g": girder(share=10.0), "live": [("wagon", 30, 2.0, 2.0)]},
    "pads of 1e3 beside pads of 1e8 kN/m": {"g": girder([*TWO, (12.0, "a", [])], [1e3, 1e8, 1e3, 1e8])},
    "eight spans": {"g": girder([(12.0, "a", []), (15.0, "a", [])] * 4, [3e5] * 9)},
    "a millionth of the usual sd": {"sd": 1e-6},
}
EVERY = [*CASES, *(pytest.param(name, marks=pytest.mark.campaign) for name in SLOW)]


@pytest.mark.parametrize("name", EVERY)
def test_the_edges_agree(name: str, tmp_path: Path) -> None:
    given = (CASES | SLOW)[name]
    rng = np.random.default_rng(1)
    made = given.get("g") or girder()
    bridge = Bridge(given.get("s") or {"a": steel()}, [made], VEHICLES, given.get("live", TRAIN))
    states = given.get("states") or test_places(bridge, made, rng)
    case = make(bridge, states, plan(made, states, rng))
    for r in case.readings:
        r.sd *= given.get("sd", 1.0)
    true = case.mean + 0.2
    case.read(true)
    also = given.get("also", [])
    record = recorded(tmp_path, case, also=also)
    ln_k = log_stiffness(record.json("calibrate", bridge.id, "--no-prior"))
    assert abs(ln_k - true).max(initial=0.0) < 1e-3
    drop = np.zeros(len(made.supports))
    for r in also:
        drop[r.support] = r.value
    said = record.json("assess", bridge.id)
    own = three(case, ln_k, drop)
    compare(said, own)
    compare_reactions(said, own)


@pytest.mark.campaign
@pytest.mark.parametrize("name", CASES | SLOW)
def test_the_edges_are_told_in_words_too(name: str, tmp_path: Path) -> None:
    given = (CASES | SLOW)[name]
    rng = np.random.default_rng(1)
    made = given.get("g") or girder()
    bridge = Bridge(given.get("s") or {"a": steel()}, [made], VEHICLES, given.get("live", TRAIN))
    states = given.get("states") or test_places(bridge, made, rng)
    case = make(bridge, states, plan(made, states, rng))
    case.read(case.mean)
    record = recorded(tmp_path, case, also=given.get("also"))
    report = str(tmp_path / "report.html")
    for words in (("calibrate",), ("assess",), ("trend",), ("trend", "--json"), ("report", "-o", report)):
        said = record.say(words[0], bridge.id, *words[1:])
        assert said.code == 0, (words, said.err)


@pytest.mark.parametrize("metres", [27.0, 91.6, 111.9])
def test_an_axle_on_the_last_support_stays_on_in_any_unit(metres: float, tmp_path: Path) -> None:
    """Lengths in feet add up to a hair less than the place of the axle in metres."""
    first = round(metres * 0.37, 1)
    made = girder([(first, "a", []), (round(metres - first, 1), "a", [])])
    bridge = Bridge({"a": steel(I=0.1)}, [made], VEHICLES, TRAIN)
    states = {"T1": ("one", metres, True), "T2": ("one", first, True), "T3": ("one", 1.0, True)}
    rng = np.random.default_rng(0)
    case = make(bridge, states, plan(made, states, rng))
    case.read(case.mean)
    for seed in range(4):
        record = recorded(tmp_path / str(seed), case, np.random.default_rng(seed))
        said = record.json("calibrate", bridge.id, "--no-prior")
        assert abs(log_stiffness(said) - case.mean).max() < 1e-5


@pytest.mark.parametrize("seed", range(6))
def test_pads_far_from_nominal_are_found_or_refused_in_one_line(seed: int, tmp_path: Path) -> None:
    rng = np.random.default_rng(3000 + seed)
    bridge = Bridge({"a": steel()}, [girder()], VEHICLES, TRAIN)
    case = make(bridge, OVER_TWO, plan(bridge.girders[0], OVER_TWO, rng))
    true = case.mean + rng.uniform(-3.5, 3.5, 3)
    case.read(true)
    wrong_sign = seed % 2 == 1
    for r in case.readings:
        if wrong_sign and r.quantity == "compression":
            r.value = -r.value
    record = recorded(tmp_path, case)
    assert record.say("calibrate", bridge.id, "--json").code == 0
    said = record.say("calibrate", bridge.id, "--no-prior", "--json")
    assert said.code in ((0, 2) if wrong_sign else (0,)), said.err
    assert said.code == 0 or said.err.count("\n") == 1
