"""`bedstone plan`: its table, its JSON, what it writes, and what it refuses."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from tests.plans import PLAN_CAUTION, girder_plan, plan_result

CALL = ("plan", "quillmere", "--vehicle", "ballast wagon")


@pytest.fixture
def called(workflow):
    """The options of the calls, which all give the example."""
    calls: list[dict[str, object]] = []

    def plan(*args: object, **options: object):
        calls.append(options)
        return plan_result()

    workflow(plan=plan)
    return calls


def test_the_json_has_the_keys_that_were_agreed_first(bedstone, called):
    said = bedstone(*CALL, "--json")
    document = json.loads(said.out)
    assert said.err == ""
    assert list(document)[:2] == ["bridge", "girders"]
    girder = document["girders"][0]
    assert list(girder)[:4] == ["girder", "positions", "readings", "pads"]
    assert girder["positions"][0] == {"state": "T1", "leading_axle_at_m": 13.1}
    agreed = ["state", "quantity", "support", "at_m", "sd_mm", "sd_utilisation_after"]
    assert list(girder["readings"][0])[:6] == agreed
    assert girder["pads"] == [{"support": "pier 1", "sd_ln_before": 0.294, "sd_ln_after": 0.0456}]
    assert girder["governs"] == {"effect": "hogging", "span": None, "support": "pier 1"}
    assert list(girder["half_cost"]) == ["positions", "readings", "sd_utilisation_after", "cost"]
    assert document["vehicle"] == "ballast wagon"
    assert document["cautions"] == [PLAN_CAUTION]


def test_an_angle_is_null_in_millimetres(bedstone, called):
    readings = json.loads(bedstone(*CALL, "--json").out)["girders"][0]["readings"]
    turned = next(one for one in readings if one["quantity"] == "rotation")
    assert (turned["sd_mm"], turned["sd"], turned["unit"]) == (None, 0.02, "mrad")


def test_the_table_shows_readings_in_order_of_worth_with_what_is_left_open(bedstone, called):
    out = bedstone(*CALL).out
    rows = [line.split() for line in out.splitlines()]
    assert "Chosen for hogging, pier 1, the worst section: utilisation 0.930." in out
    assert ["before", "any", "of", "them", "0.210"] in rows
    assert ["1", "settlement", "pier", "1", "permanent", "0.300", "mm", "0.0500"] in rows
    assert ["3", "deflection", "x", "=", "33", "m", "T2", "0.100", "mm", "0.0123"] in rows
    assert ["T2", "43.5"] in rows
    assert ["pier", "1", "stiffness,", "%", "29.4", "4.56"] in rows
    assert ["pier", "1", "seat", "level,", "mm", "20.0", "0.300"] in rows
    assert "At half the cost (1.00 of 5.00), the best 1 reading, utilisation unsure by 0.180:" in out
    assert "T3 (leading axle at 15.0 m): compression pier 1" in out


def test_what_was_taken_for_granted_and_the_cautions_come_last(bedstone, called):
    out = bedstone(*CALL).out
    first = out.index("Taken because the bridge file does not say it")
    assert out.index("no [[girder.gauge]]") > first
    assert out.rstrip().endswith(PLAN_CAUTION)


def test_without_a_capacity_the_table_says_so(bedstone, workflow):
    bare = girder_plan(governs=None, utilisation=None, sd_utilisation_before=None)
    workflow(plan=lambda *a, **k: plan_result(bare))
    out = bedstone(*CALL).out
    assert "No section gives a capacity" in out
    assert "no capacity" in next(line for line in out.splitlines() if "before any of them" in line)


def test_options_reach_the_workflow(bedstone, called):
    bedstone(*CALL)
    bedstone(*CALL, "--readings", "12", "--positions", "2", "--girder", "north")
    names = ("vehicle", "readings", "positions", "girder")
    assert [[call[name] for name in names] for call in called] == [
        ["ballast wagon", 8, 3, None],
        ["ballast wagon", 12, 2, "north"],
    ]


def test_a_picture_and_a_draft_are_written_and_said_on_stderr(bedstone, called):
    said = bedstone(*CALL, "--json", "-o", "plan.svg", "--draft", "next.toml")
    json.loads(said.out)
    assert Path("plan.svg").read_text(encoding="utf-8").startswith("<svg")
    assert 'bridge = "quillmere"' in Path("next.toml").read_text(encoding="utf-8")
    assert "Wrote the picture plan.svg." in said.err
    assert "bedstone visit log next.toml" in said.err


@pytest.mark.parametrize(
    ("words", "told"),
    [
        (("-o", "plan.jpg"), "plan.jpg: a picture is written as .svg or .png"),
        (("-o", "nowhere/plan.svg"), "nowhere: this folder does not exist"),
        (("--draft", "mine.toml"), "mine.toml: this file exists already and is not overwritten"),
        (("--readings", "0"), "--readings"),
        (("--positions", "none"), "--positions"),
    ],
)
def test_what_cannot_be_meant_is_refused_in_one_line_before_the_work(bedstone, called, words, told):
    Path("mine.toml").write_text("mine", encoding="utf-8")
    said = bedstone(*CALL, *words)
    assert (said.code, said.out, called) == (2, "", [])
    assert said.err.count("\n") == 1
    assert told in said.err
    assert Path("mine.toml").read_text(encoding="utf-8") == "mine"


def test_a_call_without_a_vehicle_is_refused_in_one_line(bedstone):
    said = bedstone("plan", "quillmere")
    assert said.code == 2
    assert said.err.count("\n") == 1
    assert "--vehicle" in said.err


def test_an_unknown_vehicle_is_one_line(bedstone):
    bridge = Path(__file__).parents[1] / "data" / "bridge-example.toml"
    assert bedstone("init").code == 0
    assert bedstone("bridge", "add", str(bridge)).code == 0
    said = bedstone("plan", "quillmere", "--vehicle", "lorry")
    assert said.code == 2
    assert said.err == (
        'bedstone: --vehicle: quillmere has no vehicle "lorry"; vehicles of the bridge file: "ballast wagon"\n'
    )
