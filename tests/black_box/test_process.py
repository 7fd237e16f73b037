"""What must not matter (order, units, repeats) does not; what must (revisions, other files) is told."""

from __future__ import annotations

import copy
from pathlib import Path

import numpy as np
import pytest

from tests.black_box.command import Record
from tests.black_box.describe import (
    Bridge,
    Girder,
    Reading,
    Section,
    Support,
    Visit,
    bridge_text,
    write_visit,
)
from tests.black_box.invent import Reader, plan, test_places
from tests.black_box.rating import Rating

PADS = np.log([3.5e5, 3e5, 2.5e5])


def two_girders() -> Bridge:
    def one(name: str) -> Girder:
        spans = [(12.0, "a", []), (15.0, "a", [])]
        return Girder(spans, [Support(3e5), Support(4e5), Support(3e5)], [(20.0, 0.0, 27.0)], 0.5, name)

    return Bridge(
        {"a": Section(205e6, 0.012)},
        [one("north"), one("south")],
        {"w": [(0.0, 200.0), (1.8, 200.0)]},
        [("w", 2, 5.0, 0.2)],
    )


def visit(
    bridge: Bridge, date: str, girders: list[str], drops: list[tuple[int, float, float]] | None = None
) -> Visit:
    """An exact visit to some of the girders, with settlements of north's supports (support, value, sd)."""
    readings: list[Reading] = []
    states = {}
    for girder in bridge.girders:
        if girder.id in girders:
            states = test_places(bridge, girder, np.random.default_rng(1))
            own = plan(girder, states, np.random.default_rng(2))
            for r, y in zip(own, Reader(bridge, girder, states, own)(PADS), strict=True):
                r.value = float(y)
            readings += own
    readings += [Reading("north", "permanent", "settlement", i, None, v, sd) for i, v, sd in drops or []]
    return Visit(date, states, readings, 20.0)


def four_visits(bridge: Bridge) -> list[Visit]:
    return [
        visit(bridge, "2012-05-01", ["north", "south"], [(1, 0.004, 0.0005)]),
        visit(bridge, "2014-05-01", ["north"], [(1, 0.006, 0.0005), (1, 0.008, 0.001), (2, 0.001, 0.001)]),
        visit(bridge, "2016-05-01", ["south"]),
        visit(bridge, "2018-05-01", ["north", "south"]),
    ]


def filled(folder: Path, bridge: Bridge, order: list[int], seed: int | None = None) -> Record:
    rng = None if seed is None else np.random.default_rng(seed)
    record = Record(folder)
    record.done("init")
    record.add(bridge, rng)
    visits = four_visits(bridge)
    for i in order:
        record.log(bridge, visits[i], rng)
    record.done("calibrate", bridge.id, "--all")
    return record


def numbers(thing: object) -> list[float]:
    """Every number of a JSON document, in order."""
    if isinstance(thing, dict):
        return [x for value in thing.values() for x in numbers(value)]
    if isinstance(thing, list):
        return [x for value in thing for x in numbers(value)]
    return [float(thing)] if isinstance(thing, int | float) and not isinstance(thing, bool) else []


def test_order_and_units_of_the_files_do_not_matter(tmp_path: Path) -> None:
    bridge = two_girders()
    one = filled(tmp_path / "one", bridge, [0, 1, 2, 3])
    other = filled(tmp_path / "other", bridge, [3, 1, 0, 2], seed=4)
    a, b = (r.json("assess", bridge.id) for r in (one, other))
    assert numbers(a["girders"]) == pytest.approx(numbers(b["girders"]), rel=1e-5, abs=1e-4)
    a, b = (r.json("calibrate", bridge.id, "--visit", "2014-05-01")["girders"][0] for r in (one, other))
    assert numbers(a["pads"]) == pytest.approx(numbers(b["pads"]), rel=1e-5)
    relative = [[(x["observed"] - x["predicted"]) / x["sd"] for x in y["readings"]] for y in (a, b)]
    assert relative[0] == pytest.approx(relative[1], abs=1e-3)


@pytest.mark.parametrize(
    ("date", "drop"),
    [
        ("2012-05-01", [0.0, 0.004, 0.0]),
        ("2014-05-01", [0.0, 0.0064, 0.001]),
        ("2018-05-01", [0.0, 0.0064, 0.001]),
    ],
)
def test_the_latest_settlement_counts_and_repeats_are_weighed(
    date: str, drop: list[float], tmp_path: Path
) -> None:
    """6 mm (sd 0.5) and 8 mm (sd 1) of one visit make 6.4 mm; a later visit without levels keeps the last."""
    bridge = two_girders()
    said = filled(tmp_path, bridge, [0, 1, 2, 3]).json("assess", bridge.id, "--visit", date)
    for girder, own_drop in zip(said["girders"], (drop, [0.0, 0.0, 0.0]), strict=True):
        own = Rating(bridge, bridge.girders[0], np.exp(PADS), np.array(own_drop)).reactions()
        for row, (permanent, _, _) in zip(girder["reactions"], own, strict=True):
            assert row["calibrated_permanent_kN"] == pytest.approx(permanent, rel=1e-4)


def test_the_same_file_again_doubles_nothing_and_another_is_refused(tmp_path: Path) -> None:
    bridge = two_girders()
    record = Record(tmp_path)
    record.done("init")
    record.add(bridge)
    first = visit(bridge, "2012-05-01", ["north"])
    for _ in range(2):
        record.log(bridge, first)
    assert [v["readings"] for v in record.json("visit", "list", bridge.id)["visits"]] == [len(first.readings)]
    other = copy.deepcopy(first)
    other.readings[0].value += 1e-5
    path = write_visit(tmp_path, bridge, other)
    said = record.say("visit", "log", str(path))
    assert said.code == 2
    assert path.name in said.err
    assert "date" in said.err


def test_a_new_revision_counts_at_once_and_a_renamed_support_is_refused(tmp_path: Path) -> None:
    bridge = two_girders()
    record = filled(tmp_path, bridge, [0])
    bridge.girders[0].permanent = [(40.0, 0.0, 27.0)]
    record.add(bridge)
    said = record.json("assess", bridge.id)["girders"][0]["reactions"]
    own = Rating(bridge, bridge.girders[0], np.exp(PADS), np.array([0.0, 0.004, 0.0])).reactions()
    assert [r["calibrated_permanent_kN"] for r in said] == pytest.approx([r[0] for r in own], rel=1e-4)
    path = tmp_path / "renamed.toml"
    path.write_text(bridge_text(bridge).replace('id = "s1"', 'id = "pier"', 1))
    refused = record.say("bridge", "add", str(path))
    assert (refused.code, refused.err.count("\n")) == (2, 1)
    assert path.name in refused.err
    assert "s1" in refused.err
