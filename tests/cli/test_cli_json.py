"""JSON: the dataclass fields are the keys, and every document is plain JSON."""

from __future__ import annotations

import datetime as dt
import json
import math

import numpy as np
import pytest
from cli_results import assessment, calibration, pad, trend

from assess.cli.json_out import to_json
from db.records import BridgeSummary, VisitSummary


def refuse_constant(name: str) -> float:
    raise AssertionError(f"{name} is no JSON")


def strictly(text: str):
    return json.loads(text, parse_constant=refuse_constant)


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf, np.float64("nan"), np.array([np.inf])[0]])
def test_a_number_that_is_not_finite_becomes_null(value):
    assert to_json({"a": value}) == {"a": None}


def test_dates_become_iso_strings():
    assert to_json([dt.date(2024, 5, 14), dt.datetime(2024, 5, 14, 9, 30)]) == [
        "2024-05-14",
        "2024-05-14T09:30:00",
    ]


def test_arrays_and_numpy_scalars_become_plain():
    plain = to_json({"a": np.array([[1.0, np.nan]]), "n": np.int64(3), "b": np.bool_(True), "t": (1, 2)})
    assert plain == {"a": [[1.0, None]], "n": 3, "b": True, "t": [1, 2]}
    assert type(plain["b"]) is bool
    assert type(plain["n"]) is int


def test_what_has_no_json_is_refused_and_not_turned_into_text():
    with pytest.raises(TypeError, match="no JSON for a object"):
        to_json({"a": object()})


def test_calibrate_prints_the_one_visit(bedstone, workflow):
    result = calibration(pads=[pad(high95_kN_per_m=math.inf)])
    workflow(calibrate=lambda *a, **k: [result])
    said = bedstone("calibrate", "quillmere", "--json")
    document = strictly(said.out)
    assert said.err == ""
    assert list(document) == ["bridge", "visit", "version", "input_digest", "girders", "cautions"]
    assert document["visit"] == "2024-05-14"
    assert list(document["girders"][0]) == [
        "girder",
        "pads",
        "settlements_mm",
        "stiffness_factor",
        "sustained_ratio",
        "unknowns",
        "unknowns_from",
        "calibrated_as",
        "others",
        "chi_square",
        "degrees_of_freedom",
        "p_value",
        "correlations",
        "singular_values",
        "rivals",
        "causes",
        "robust",
        "proposed_removals",
        "effective_sample_size",
        "draws_from",
        "left_out",
        "compensating_errors",
        "readings",
    ]
    assert document["girders"][0]["pads"][0]["high95_kN_per_m"] is None
    assert document["girders"][0]["readings"][0]["suspect"] is False


def test_calibrate_all_prints_every_visit_under_the_bridge(bedstone, workflow):
    results = [calibration(visit=dt.date(2022, 5, 1)), calibration()]
    workflow(calibrate=lambda *a, **k: results)
    document = strictly(bedstone("calibrate", "quillmere", "--all", "--json").out)
    assert list(document) == ["bridge", "visits"]
    assert [visit["visit"] for visit in document["visits"]] == ["2022-05-01", "2024-05-14"]


def test_calibrate_all_with_one_visit_still_prints_a_list(bedstone, workflow):
    workflow(calibrate=lambda *a, **k: [calibration()])
    document = strictly(bedstone("calibrate", "quillmere", "--all", "--json").out)
    assert len(document["visits"]) == 1


def test_assess_prints_the_contracts_keys(bedstone, workflow):
    workflow(assess=lambda *a, **k: assessment(capacity=None, calibration_visit=None))
    document = strictly(bedstone("assess", "quillmere", "--json").out)
    section = document["girders"][0]["sections"][0]
    assert document["calibration_visit"] is None
    assert list(section) == [
        "effect",
        "span",
        "support",
        "unyielding",
        "nominal",
        "calibrated",
        "supposed",
    ]
    assert section["calibrated"]["utilisation"] is None
    assert {"utilisation_low95", "utilisation_high95", "probability_over_1"} <= set(section["calibrated"])


def test_trend_prints_dates_and_nulls(bedstone, workflow):
    workflow(trend=lambda *a, **k: trend(rate=None))
    document = strictly(bedstone("trend", "quillmere", "--json").out)
    assert document["pads"][0]["change_per_year_percent"] is None
    assert document["spans"][0]["earliest_5_percent"] == "2025-02-01"
    assert document["spans"][0]["median_crossing"] is None
    assert document["next_visit_by"] == "2025-02-01"


def test_the_lists_have_the_contracts_keys(bedstone, workflow):
    workflow(
        list_bridges=lambda url: [
            BridgeSummary(bridge="quillmere", name="Quillmere viaduct", revision=1, visits=5)
        ],
        list_visits=lambda url, bridge: [VisitSummary(visit=dt.date(2024, 5, 14), readings=21, states=3)],
        list_actions=lambda url, bridge: [],
    )
    bridges = strictly(bedstone("bridge", "list", "--json").out)
    assert bridges["bridges"][0] | {"name": ""} == {
        "bridge": "quillmere",
        "name": "",
        "revision": 1,
        "visits": 5,
    }
    visits = strictly(bedstone("visit", "list", "quillmere", "--json").out)
    assert visits == {
        "bridge": "quillmere",
        "actions": [],
        "visits": [{"visit": "2024-05-14", "readings": 21, "states": 3}],
    }


def test_a_failure_leaves_stdout_empty(bedstone, workflow):
    from db.errors import BedstoneError

    def refuse(*args, **options):
        raise BedstoneError("no bridge of this name", field="elsewhere", remedy="the record has quillmere")

    workflow(assess=refuse)
    said = bedstone("assess", "elsewhere", "--json")
    assert (said.code, said.out) == (2, "")
