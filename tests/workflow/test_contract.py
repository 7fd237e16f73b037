"""The contract's example files through the command line: keys, types and meanings of the JSON."""

from __future__ import annotations

import datetime as dt
from typing import Any

import pytest

from tests.workflow.conftest import call, new_record
from tests.workflow.invented import VISIT, write_visit

TEXT, NUMBER, COUNT, FLAG, DAY = "text", "number", "count", "flag", "day"


class Maybe:
    """A value that may be null."""

    def __init__(self, shape: Any) -> None:
        self.shape = shape


class Several:
    """A list that may be empty."""

    def __init__(self, shape: Any) -> None:
        self.shape = shape


class Word:
    """One of some words."""

    def __init__(self, *words: str) -> None:
        self.words = words


CALIBRATION = {
    "bridge": TEXT,
    "visit": DAY,
    "version": TEXT,
    "input_digest": TEXT,
    "girders": [
        {
            "girder": TEXT,
            "pads": [
                {
                    "support": TEXT,
                    "stiffness_kN_per_m": NUMBER,
                    "low95_kN_per_m": NUMBER,
                    "high95_kN_per_m": NUMBER,
                    "nominal_kN_per_m": NUMBER,
                    "ratio_to_nominal": NUMBER,
                    "data_share": NUMBER,
                }
            ],
            "settlements_mm": Several(
                {"support": TEXT, "value": NUMBER, "low95": NUMBER, "high95": NUMBER, "data_share": NUMBER}
            ),
            "stiffness_factor": Maybe(NUMBER),
            "sustained_ratio": Maybe(NUMBER),
            "chi_square": NUMBER,
            "degrees_of_freedom": COUNT,
            "p_value": Maybe(NUMBER),
            "correlations": [{"a": TEXT, "b": TEXT, "r": NUMBER}],
            "rivals": [{"name": TEXT, "aicc": Maybe(NUMBER), "chi_square": NUMBER, "within_2": FLAG}],
            "effective_sample_size": NUMBER,
            "readings": [
                {
                    "state": TEXT,
                    "quantity": Word("compression", "deflection", "settlement", "rotation", "strain"),
                    "support": Maybe(TEXT),
                    "at_m": Maybe(NUMBER),
                    "observed": NUMBER,
                    "predicted": NUMBER,
                    "unit": TEXT,
                    "sd": NUMBER,
                    "standardised_residual": Maybe(NUMBER),
                    "suspect": FLAG,
                    "redundancy": NUMBER,
                    "minimal_detectable": Maybe(NUMBER),
                }
            ],
        }
    ],
    "cautions": [TEXT],
}
CASE = {
    "x_m": NUMBER,
    "capacity": NUMBER,
    "permanent": NUMBER,
    "live": NUMBER,
    "factored": NUMBER,
    "utilisation": NUMBER,
    "rating_factor": NUMBER,
}
BAND = {"utilisation_low95": NUMBER, "utilisation_high95": NUMBER, "probability_over_1": NUMBER}
ASSESSMENT = {
    "bridge": TEXT,
    "calibration_visit": Maybe(DAY),
    "girders": [
        {
            "girder": TEXT,
            "sections": [
                {
                    "effect": Word("sagging", "hogging", "shear"),
                    "span": Maybe(COUNT),
                    "support": Maybe(TEXT),
                    "unyielding": CASE,
                    "nominal": CASE,
                    "calibrated": CASE | BAND,
                }
            ],
            "reactions": [
                {
                    "support": TEXT,
                    "unyielding_permanent_kN": NUMBER,
                    "calibrated_permanent_kN": NUMBER,
                    "calibrated_live_max_kN": NUMBER,
                    "calibrated_live_min_kN": NUMBER,
                }
            ],
        }
    ],
    "cautions": [TEXT],
}
TREND = {
    "bridge": TEXT,
    "as_of": DAY,
    "pads": [
        {
            "girder": TEXT,
            "support": TEXT,
            "visits": COUNT,
            "law": Word("steady", "drift", "creep", "step", "wander"),
            "change_per_year_percent": Maybe(NUMBER),
            "low95": Maybe(NUMBER),
            "high95": Maybe(NUMBER),
            "step_between": Maybe([DAY]),
        }
    ],
    "spans": [
        {
            "girder": TEXT,
            "effect": Word("sagging", "hogging", "shear"),
            "span": Maybe(COUNT),
            "support": Maybe(TEXT),
            "utilisation_now": NUMBER,
            "status": Word("within", "watch", "over"),
            "probability_over_1_now": NUMBER,
            "median_crossing": Maybe(DAY),
            "earliest_5_percent": Maybe(DAY),
        }
    ],
    "next_visit_by": Maybe(DAY),
    "cautions": [TEXT],
}
# said beside the contract's own keys
BESIDE_INSIDE = {
    "pads",
    "rating_levels",
    "least_rating_factor",
    "least_rating_x_m",
    "temperature",
    "settlement",
    "utilisation_with_relief",
    "utilisation_without_relief",
    "calibrated_factored_max_kN",
    "calibrated_factored_min_kN",
    "calibrated_lifts_under",
    "rivals",
    "worst_rival",
    "supposed",
    "supposed_permanent_kN",
    "supposed_live_max_kN",
    "supposed_live_min_kN",
    "supposed_lifts_under",
    "worst_rival_utilisation",
}
BESIDE_CALIBRATION = {
    "unknowns",
    "unknowns_from",
    "calibrated_as",
    "others",
    "singular_values",
    "causes",
    "robust",
    "proposed_removals",
    "draws_from",
    "left_out",
    "compensating_errors",
    "interval_from",
    "stiffness_20degC_kN_per_m",
    "moment_relevant",
    "moment_relevant_low95",
    "moment_relevant_high95",
    "moment_relevant_data_share",
    "log_likelihood",
    "effective_unknowns",
    "told",
    "simpler",
    "carried",
    "told_apart_by",
}
BESIDE_TREND = {
    "step_percent",
    "step_low95",
    "step_high95",
    "weights",
    "alarm",
    "p_value",
    "creep_since",
    "sen_percent_per_year",
    "mann_kendall_p",
    "since",
    "too_wide_from",
    "fan",
    "shares_on",
    "shares",
}
BESIDE = {
    "assess": {"version", "input_digest", "seed", "draws", "actions", "supposed"},
    "trend": {"next_visit_reason", "seats", "losses", "today", "overdue", "actions"},
}


def check(value: Any, shape: Any, where: str = "") -> None:
    """Compare a document with a shape; every key is there and no other."""
    if isinstance(shape, Maybe):
        if value is not None:
            check(value, shape.shape, where)
    elif isinstance(shape, Several):
        assert isinstance(value, list), where
        for i, one in enumerate(value):
            check(one, shape.shape, f"{where}[{i}]")
    elif isinstance(shape, Word):
        assert value in shape.words, f"{where}: {value}"
    elif isinstance(shape, dict):
        assert isinstance(value, dict), where
        assert list(value) == list(shape), f"{where}: {list(value)}"
        for key, inner in shape.items():
            check(value[key], inner, f"{where}.{key}")
    elif isinstance(shape, list):
        assert isinstance(value, list), where
        assert value, f"{where} is empty"
        for i, one in enumerate(value):
            check(one, shape[0], f"{where}[{i}]")
    elif shape == DAY:
        assert isinstance(value, str), where
        assert dt.date.fromisoformat(value).isoformat() == value, f"{where}: {value}"
    else:
        kinds = {TEXT: (str,), NUMBER: (float, int), COUNT: (int,), FLAG: (bool,)}[shape]
        assert isinstance(value, kinds), f"{where}: {value!r} is no {shape}"
        assert shape == FLAG or not isinstance(value, bool), where


def trimmed(document: dict[str, Any], command: str) -> dict[str, Any]:
    assert set(document) >= BESIDE[command]
    plain = {key: value for key, value in document.items() if key not in BESIDE[command]}
    return without(plain, BESIDE_INSIDE if command == "assess" else BESIDE_TREND)


def without(value: Any, keys: set[str]) -> Any:
    """A document without some keys of its tables, at any depth."""
    if isinstance(value, dict):
        return {key: without(inner, keys) for key, inner in value.items() if key not in keys}
    return [without(one, keys) for one in value] if isinstance(value, list) else value


@pytest.fixture
def example(bedstone):  # type: ignore[no-untyped-def]
    """The example bridge with its example visit."""
    assert bedstone("visit", "log", str(VISIT)).code == 0
    return bedstone


@pytest.fixture(scope="module")
def documents(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Any]:
    """What assess and trend print of the example, and of four visits before it."""
    folder = tmp_path_factory.mktemp("contract")
    record = new_record(folder)
    call(record, "visit", "log", str(VISIT))
    made = {"nominal": call(record, "assess", "quillmere", "--json").document}
    call(record, "calibrate", "quillmere")
    made["assess"] = call(record, "assess", "quillmere", "--json").document
    made["one visit"] = call(record, "trend", "quillmere", "--today", "2024-06-01", "--json").document
    for date, ratio in (("2016-05-10", 1.0), ("2018-06-01", 0.85), ("2020-05-20", 0.7), ("2022-05-10", 0.55)):
        call(record, "visit", "log", str(write_visit(folder, date, [0.9, ratio, 1.1])))
    made["trend"] = call(record, "trend", "quillmere", "--today", "2024-06-01", "--json").document
    return made


def test_calibrate_prints_the_contracts_document(example) -> None:  # type: ignore[no-untyped-def]
    document = example("calibrate", "quillmere", "--json").document
    check(without(document, BESIDE_CALIBRATION), CALIBRATION)
    assert (document["bridge"], document["visit"]) == ("quillmere", "2024-05-14")
    girder = document["girders"][0]
    assert [pad["support"] for pad in girder["pads"]] == ["west abutment", "pier 1", "pier 2"]
    for pad in girder["pads"]:
        assert pad["low95_kN_per_m"] < pad["stiffness_kN_per_m"] < pad["high95_kN_per_m"]
        assert pad["ratio_to_nominal"] == pytest.approx(pad["stiffness_kN_per_m"] / pad["nominal_kN_per_m"])
        assert 0.0 <= pad["data_share"] <= 1.0


def test_readings_stand_in_the_order_and_unit_of_the_file(example) -> None:  # type: ignore[no-untyped-def]
    gap, dial = example("calibrate", "quillmere", "--json").document["girders"][0]["readings"]
    assert (gap["quantity"], gap["support"], gap["at_m"]) == ("compression", "pier 1", None)
    assert (gap["observed"], gap["unit"], gap["sd"]) == (pytest.approx(1.42), "mm", pytest.approx(0.05))
    assert (dial["quantity"], dial["support"], dial["at_m"]) == ("deflection", None, 6.0)
    assert (dial["observed"], dial["sd"]) == (pytest.approx(2.31), pytest.approx(0.1))


def test_calibrate_all_prints_every_visit_under_the_bridge(example, tmp_path) -> None:  # type: ignore[no-untyped-def]
    example("visit", "log", str(write_visit(tmp_path, "2022-05-10", [0.9, 1.0, 1.1])))
    document = example("calibrate", "quillmere", "--all", "--json").document
    assert list(document) == ["bridge", "visits"]
    assert [one["visit"] for one in document["visits"]] == ["2022-05-10", "2024-05-14"]
    for one in document["visits"]:
        check(without(one, BESIDE_CALIBRATION), CALIBRATION)


def test_assess_prints_the_contracts_document(documents: dict[str, Any]) -> None:
    document = documents["assess"]
    check(trimmed(document, "assess"), ASSESSMENT)
    check(trimmed(documents["nominal"], "assess"), ASSESSMENT)
    assert documents["nominal"]["calibration_visit"] is None
    assert document["calibration_visit"] == "2024-05-14"
    assert document["draws"] >= 2000


def test_rows_name_what_the_contract_says_they_name(documents: dict[str, Any]) -> None:
    girder = documents["assess"]["girders"][0]
    rows = [(row["effect"], row["span"], row["support"]) for row in girder["sections"]]
    assert rows == [
        *[("sagging", span, None) for span in (1, 2, 3)],
        ("hogging", None, "pier 1"),
        ("hogging", None, "pier 2"),
        *[
            ("shear", span, support)
            for span, pair in enumerate(
                [("west abutment", "pier 1"), ("pier 1", "pier 2"), ("pier 2", "east abutment")], start=1
            )
            for support in pair
        ],
    ]
    assert [one["support"] for one in girder["reactions"]] == [
        "west abutment",
        "pier 1",
        "pier 2",
        "east abutment",
    ]
    for row in girder["sections"]:
        case = row["unyielding"]
        assert case["capacity"] > 0.0
        assert case["utilisation"] == pytest.approx(abs(case["factored"]) / case["capacity"])
        if row["effect"] == "hogging":
            assert case["permanent"] < 0.0
            assert case["live"] < 0.0


def test_factored_effects_and_rating_follow_the_files_own_factors(documents: dict[str, Any]) -> None:
    # permanent 1.2, live 1.5, resistance 1.0; RF = (C - 1.2 D) / (1.5 L)
    for row in documents["assess"]["girders"][0]["sections"]:
        for name in ("unyielding", "nominal", "calibrated"):
            case = row[name]
            permanent, live = abs(case["permanent"]), abs(case["live"])
            assert abs(case["factored"]) == pytest.approx(1.2 * permanent + 1.5 * live)
            assert case["rating_factor"] == pytest.approx((case["capacity"] - 1.2 * permanent) / (1.5 * live))


def test_trend_prints_the_contracts_document(documents: dict[str, Any]) -> None:
    document = documents["trend"]
    check(trimmed(document, "trend"), TREND)
    assert document["as_of"] == "2024-05-14"
    assert [(pad["support"], pad["visits"]) for pad in document["pads"]] == [
        ("west abutment", 5),
        ("pier 1", 5),
        ("pier 2", 5),
    ]
    assert len(document["spans"]) == 11


def test_one_visit_trends_without_a_rate_and_says_so(documents: dict[str, Any]) -> None:
    document = documents["one visit"]
    check(trimmed(document, "trend"), TREND)
    for pad in document["pads"]:
        assert (pad["law"], pad["change_per_year_percent"], pad["low95"], pad["high95"]) == (
            "steady",
            None,
            None,
            None,
        )
    assert any("one calibrated visit gives no rate" in one for one in document["cautions"])


def test_the_lists_print_the_contracts_documents(example) -> None:  # type: ignore[no-untyped-def]
    bridges = example("bridge", "list", "--json").document
    assert bridges == {
        "bridges": [{"bridge": "quillmere", "name": "Quillmere viaduct", "revision": 1, "visits": 1}]
    }
    visits = example("visit", "list", "quillmere", "--json").document
    assert visits.pop("actions") == []
    assert visits == {"bridge": "quillmere", "visits": [{"visit": "2024-05-14", "readings": 2, "states": 2}]}
