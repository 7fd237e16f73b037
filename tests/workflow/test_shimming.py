"""Packing of a bridge in a record: judged by the assessment, put in stage by stage."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import product
from pathlib import Path

import numpy as np
import pytest

from assess import workflow
from assess.capacity import NoPacking, evaluate
from assess.results import GirderShims, ShimResult
from assess.workflow import shimming
from assess.workflow.building import GirderModel
from assess.workflow.shimming import Stock
from db.exchange import parse_bridge
from tests.workflow.conftest import call, new_record
from tests.workflow.invented import bridge_text, write_visit

RATIOS = [0.9, 0.6, 1.1]
SETTLED = {"west abutment": 1.0, "pier 1": 8.0, "pier 2": 2.0, "east abutment": 0.0}
STOCK = Stock(step=2e-3, lift_max=25e-3)
ONLY_PADS = workflow.Options(prior=False, unknowns=("pads",))


def settled(folder: Path, name: str = "one.sqlite", extra: str = "", **moved: float) -> str:
    url = new_record(folder, name)
    if extra:
        path = folder / "revised.toml"
        path.write_text(bridge_text() + extra)
        workflow.add_bridge(url, path)
    place = folder / name.replace(".", "-")
    place.mkdir()
    seats = SETTLED | {key.replace("_", " "): value for key, value in moved.items()}
    workflow.log_visit(url, write_visit(place, "2024-05-14", RATIOS, seed=None, settled=seats))
    workflow.calibrate(url, "quillmere", options=ONLY_PADS)
    return url


@pytest.fixture(scope="module")
def url(tmp_path_factory: pytest.TempPathFactory) -> str:
    return settled(tmp_path_factory.mktemp("shims"))


@pytest.fixture(scope="module")
def found(url: str) -> ShimResult:
    return workflow.shim(url, "quillmere", STOCK)


def model(extra: str = "") -> GirderModel:
    bridge = parse_bridge(bridge_text() + extra, file="bridge.toml")
    return GirderModel(bridge, bridge.girders[0])


def used(heights_mm: list[float], ratios: list[float] = RATIOS, extra: str = "") -> float:
    """The worst utilisation with the true pads and seats, packed."""
    girder = model(extra)
    compliance = girder.compliance(girder.nominal + np.log(np.array(ratios)))
    drops = 1e-3 * (np.array(list(SETTLED.values())) - np.array(heights_mm))
    return max(row.case.utilisation for row in evaluate(girder.effects, girder.factors, compliance, drops))


def heights(one: GirderShims) -> list[float]:
    return [shim.value for shim in one.shims_mm]


def test_what_is_shown_is_the_assessment_of_the_girder_packed(found: ShimResult) -> None:
    one = found.girders[0]
    assert one.worst_utilisation_before == pytest.approx(used([0.0] * 4), rel=1e-5)
    assert one.worst_utilisation_after == pytest.approx(used(heights(one)), rel=1e-5)
    assert one.worst_utilisation_replaced == pytest.approx(used([0.0] * 4, [1.0] * 3), rel=1e-5)
    assert one.worst_utilisation_after < one.worst_utilisation_before  # type: ignore[operator]
    assert one.worst_utilisation_unrounded <= one.worst_utilisation_after + 1e-9  # type: ignore[operator]


def test_the_heights_are_whole_steps_within_the_lift(found: ShimResult) -> None:
    values = np.array(heights(found.girders[0]))
    assert values / 2.0 == pytest.approx(np.round(values / 2.0))
    assert (values >= 0.0).all()
    assert values.max() <= 25.0
    assert [one.support for one in found.girders[0].shims_mm] == list(SETTLED)


def test_no_other_heights_come_lower(url: str) -> None:
    one = workflow.shim(url, "quillmere", Stock(step=6e-3, lift_max=6e-3)).girders[0]
    every = [used(list(h)) for h in product((0.0, 6.0), repeat=4)]
    assert one.worst_utilisation_after == pytest.approx(min(every), rel=1e-5)


def test_stages_end_at_the_heights_and_keep_to_the_differential(found: ShimResult) -> None:
    one = found.girders[0]
    last: dict[str, float] = {}
    for number, stage in enumerate(one.stages, start=1):
        assert stage.stage == number
        assert stage.differential_mm <= 3.0
        assert 0.0 < stage.worst_utilisation < one.worst_utilisation_before  # type: ignore[operator]
        for jack in stage.jacks:
            assert jack.packing_mm == pytest.approx(last.get(jack.support, 0.0) + jack.lift_mm)
            assert jack.capacity_kN == pytest.approx(1.5 * jack.load_kN)
            assert jack.rise_mm > jack.lift_mm  # the pad unloads with it
            last[jack.support] = jack.packing_mm
    packed = {shim.support: shim.value for shim in one.shims_mm if shim.value}
    assert last == pytest.approx(packed)


def test_jack_loads_are_near_the_permanent_reactions(found: ShimResult) -> None:
    one = found.girders[0]
    after = {reaction.support: reaction.shimmed_kN for reaction in one.reactions}
    for jack in one.stages[-1].jacks:
        assert jack.load_kN == pytest.approx(after[jack.support], rel=0.25)
        assert jack.load_kN >= after[jack.support]  # raised to where its pad bears nothing
    total = [
        sum(getattr(r, name) for r in one.reactions) for name in ("nothing_kN", "shimmed_kN", "replaced_kN")
    ]
    assert total == pytest.approx([36.5 * 39.0] * 3)


def test_a_girder_that_nothing_helps_gets_no_packing(tmp_path: Path) -> None:
    record = new_record(tmp_path)  # nominal pads, no settlement, relief does not count
    one = workflow.shim(record, "quillmere", STOCK)
    assert heights(one.girders[0]) == [0.0] * 4
    assert one.girders[0].stages == []
    assert one.girders[0].worst_utilisation_after == one.girders[0].worst_utilisation_before
    assert any("none is proposed" in caution for caution in one.cautions)


def test_a_bridge_without_capacities_is_not_determined(tmp_path: Path) -> None:
    lines = [line for line in bridge_text().splitlines() if "_capacity" not in line]
    path = tmp_path / "bare.toml"
    path.write_text("\n".join(lines) + "\n")
    record = new_record(tmp_path)
    workflow.add_bridge(record, path)
    one = workflow.shim(record, "quillmere", STOCK).girders[0]
    assert one.shims_mm == []
    assert one.worst_utilisation_after is None
    assert "no section" in (one.not_determined or "")


def test_where_the_lift_does_not_reach_it_says_so(url: str, monkeypatch: pytest.MonkeyPatch) -> None:
    def none(*_: object, **__: object) -> None:
        raise NoPacking("no packing within the limits keeps the girder on its supports")

    monkeypatch.setattr(shimming, "least_worst", none)
    found = workflow.shim(url, "quillmere", STOCK)
    one = found.girders[0]
    assert "keeps the girder on its supports" in (one.not_determined or "")
    assert one.shims_mm == []
    assert one.worst_utilisation_before is not None
    assert any("packing is not determined" in caution for caution in found.cautions)


def test_live_load_that_lifts_the_girder_is_in_the_figures(tmp_path: Path) -> None:
    """A light girder that is held down nowhere: the assessment judges, and no neighbour of the heights is lower."""
    text = bridge_text() + "relief_counts = true\n"
    for old, new in (
        ('"27 kN/m"', '"2 kN/m"'),
        ('"9.5 kN/m"', '"3 kN/m"'),
        ('kind = "pin" ', 'hold_down = false\nkind = "pin" '),
    ):
        assert old in text
        text = text.replace(old, new)
    path = tmp_path / "light.toml"
    path.write_text(text)
    record = new_record(tmp_path)
    workflow.add_bridge(record, path)
    one = workflow.shim(record, "quillmere", Stock(step=5e-3, lift_max=10e-3)).girders[0]
    bridge = parse_bridge(text, file="light.toml")
    girder = GirderModel(bridge, bridge.girders[0])
    compliance = girder.compliance(girder.nominal)
    passing = girder.effects.passing(girder.factors, compliance[None], np.zeros((1, 4)))
    assert passing.opens[0]

    def real(packed: Sequence[float]) -> float:
        drops = -1e-3 * np.array(packed)
        rows = evaluate(girder.effects, girder.factors, compliance, drops)
        return max(row.case.utilisation for row in rows)

    best = heights(one)
    assert one.worst_utilisation_after == pytest.approx(real(best), rel=1e-9)
    assert one.worst_utilisation_after <= one.worst_utilisation_before  # type: ignore[operator]
    for i in range(4):
        for step in (-5.0, 5.0):
            near = [value + step * (i == j) for j, value in enumerate(best)]
            standing = not girder.effects.lifted(compliance, -1e-3 * np.array(near)).any()
            if min(near) >= 0.0 and max(near) <= 10.0 and standing:
                assert real(near) >= real(best) - 1e-6


def test_json_has_the_keys_of_the_contract(url: str) -> None:
    document = call(url, "shim", "quillmere", "--step", "2 mm", "--lift-max", "25 mm", "--json").document
    girder = document["girders"][0]
    keys = {"girder", "shims_mm", "worst_utilisation_before", "worst_utilisation_after", "stages"}
    assert keys <= set(girder)
    assert set(girder["shims_mm"][0]) == {"support", "value"}
    assert any("licensed engineer" in caution for caution in document["cautions"])


def test_the_table_shows_packing_effects_and_stages(url: str) -> None:
    out = call(url, "shim", "quillmere").out
    for word in (
        "packing",
        "nothing done",
        "shimmed",
        "new pads",
        "jacks good for",
        "1.5 x load",
        "Cautions",
    ):
        assert word in out


def test_a_step_thicker_than_the_differential_is_told(url: str) -> None:
    said = call(url, "shim", "quillmere", "--step", "5 mm", "--differential", "3 mm")
    assert said.code == 0
    assert "thicker than the 3 mm" in " ".join(said.out.split())


@pytest.mark.parametrize(
    ("words", "told"),
    [
        (("--step", "2"), ("--step", "has no unit")),
        (("--step", "0 mm"), ("--step", "not above 0")),
        (("--lift-max", "1 mm"), ("--lift-max", "less than one step")),
        (("--step", "0.001 mm"), ("--step", "too many")),
        (("--differential", "-1 mm"), ("--differential", "not above 0")),
        (("--worth", "-1"), ("--worth", "below 0")),
    ],
)
def test_wrong_stock_is_refused_in_one_line(url: str, words: tuple[str, str], told: tuple[str, str]) -> None:
    said = call(url, "shim", "quillmere", *words)
    assert (said.code, said.out, len(said.err.splitlines())) == (2, "", 1)
    for word in told:
        assert word in said.err
