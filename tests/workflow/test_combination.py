"""Factors, stages and temperature of a bridge file: round trips, and one clear line for what is wrong."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest

from assess import workflow
from assess.workflow.building import GirderModel
from assess.workflow.combination import factors_in_words, factors_of
from db.documents import BridgeDoc
from db.errors import BedstoneError
from db.exchange import parse_bridge
from tests.workflow.conftest import call, new_record
from tests.workflow.invented import bridge_text, write_visit

OWN = 'name = "owner\'s assessment standard"\npermanent = 1.2\nlive = 1.5\nresistance = 1.0\n'
WARM = '[[temperature]]\nid = "summer noon"\ndifference = "10 K"\n'


def text(factors: str = OWN, *, temperature: str = "", section: str = "", load: str = "") -> str:
    base = bridge_text()
    base = base[: base.index("[factors]")]
    base = base.replace('I = "0.0118 m^4"', f'I = "0.0118 m^4"\n{section}').replace(
        'I = "0.0151 m^4"', f'I = "0.0151 m^4"\n{section}'
    )
    base = base.replace('name = "steelwork"', f'name = "steelwork"\n{load}')
    return f"{base}{temperature}\n[factors]\n{factors}"


def parsed(*args: str, **options: str) -> BridgeDoc:
    return parse_bridge(text(*args, **options), file="bridge.toml")


def refusal(tmp_path: Path, *args: str, **options: str) -> str:
    path, url = tmp_path / "bridge.toml", str(tmp_path / "record.sqlite")
    path.write_text(text(*args, **options))
    workflow.init_record(url)
    with pytest.raises(BedstoneError) as caught:
        workflow.add_bridge(url, path)
    assert workflow.list_bridges(url) == []
    return str(caught.value)


# factors ------------------------------------------------------------------------------------------


def test_the_owners_own_values_come_before_those_of_the_set() -> None:
    used = factors_of(parsed('name = "ours"\nset = "en1990-rail"\npermanent = 1.25\nsettlement = 1.0\n'))
    assert (used.permanent, used.permanent_relieving) == (1.25, 1.0)
    assert used.of_settlement == (1.0, 1.0)
    assert used.live == 1.45


def test_a_set_says_which_text_it_follows_and_what_the_owner_changed() -> None:
    said = factors_in_words(parsed('name = "ours"\nset = "en1990-rail"\nlive = 1.3\n'))
    assert said.startswith("ours, set en1990-rail, partial factors, railway bridges")
    assert "from memory, to be confirmed" in said
    assert """but "live" as the bridge file gives""" in said
    assert said.endswith("every section with and without relief by settlement, the worse governs")


@pytest.mark.parametrize(
    ("factors", "problem"),
    [
        ('set = "lrf"\n', 'factors, set: there is no factor set "lrf" (did you mean "lrfr"?)'),
        ('set = "lrfr"\nlevel = "inventry"\n', 'no level "inventry" (did you mean "inventory"?)'),
        ('set = "lfr"\ncondition = "fair"\n', 'factors, condition: the set lfr has no condition "fair"'),
        (
            'permanent = 1.2\nlive = 1.5\nlevel = "operating"\n',
            "factors, level: it belongs to a built-in set",
        ),
        ('set = "lrfr"\nlive = 1.5\nlevel = "operating"\n', "factors, level: it cannot stand beside live"),
        ("live = 1.5\n", "factors, permanent: it is missing"),
        (OWN + "relief_counts = 1\n", "factors, relief_counts: 1 is neither true nor false"),
        (OWN + "settlement_relieving = 0.5\n", "settlement_relieving: it stands without settlement"),
        (OWN + "temperature = -1\n", "factors, temperature: -1 is less than 0"),
    ],
)
def test_wrong_factors_are_refused_in_one_line(tmp_path: Path, factors: str, problem: str) -> None:
    said = refusal(tmp_path, factors)
    assert problem in said
    assert "\n" not in said


# relief -------------------------------------------------------------------------------------------


def assessed(tmp_path: Path, factors: str = OWN, **options: str) -> dict[str, Any]:
    url = new_record(tmp_path)
    path = tmp_path / "own.toml"
    path.write_text(text(factors, **options))
    workflow.add_bridge(url, path)
    visit = write_visit(tmp_path, "2024-05-14", [1.0, 1.0, 1.0], settled={"pier 1": 8.0})
    assert call(url, "visit", "log", str(visit)).code == 0
    assert call(url, "calibrate", "quillmere").code == 0
    document: dict[str, Any] = call(url, "assess", "quillmere", "--json").document
    return document


def row_of(document: dict[str, Any], effect: str, support: str | None, span: int | None = None) -> Any:
    return next(
        row
        for row in document["girders"][0]["sections"]
        if (row["effect"], row["support"], row["span"]) == (effect, support, span)
    )


def test_a_settled_pier_is_not_banked_as_relief_of_its_own_hogging(tmp_path: Path) -> None:
    case = row_of(assessed(tmp_path), "hogging", "pier 1")["calibrated"]
    assert case["settlement"] > 50.0  # relieves: hogging is negative
    assert case["utilisation"] == case["utilisation_without_relief"] > case["utilisation_with_relief"]
    own = case["permanent"] - case["settlement"]
    assert case["factored"] == pytest.approx(1.2 * own + 1.5 * case["live"], rel=1e-9)


def test_an_owner_may_let_relief_count_and_the_report_says_so(tmp_path: Path) -> None:
    document = assessed(tmp_path, OWN + "relief_counts = true\n")
    case = row_of(document, "hogging", "pier 1")["calibrated"]
    assert case["utilisation"] == case["utilisation_with_relief"] < case["utilisation_without_relief"]
    assert any(one.startswith("Relief by settlement counts") for one in document["cautions"])
    page = tmp_path / "page.html"
    assert call(str(tmp_path / "record.sqlite"), "report", "quillmere", "-o", str(page)).code == 0
    assert "relief by settlement counts, as the bridge file says" in page.read_text()


def test_a_settlement_that_loads_takes_its_own_factor(tmp_path: Path) -> None:
    case = row_of(assessed(tmp_path, OWN + "settlement = 1.7\n"), "hogging", "pier 2")["calibrated"]
    assert case["settlement"] < -10.0
    own = case["permanent"] - case["settlement"]
    expected = 1.2 * own + 1.7 * case["settlement"] + 1.5 * case["live"]
    assert case["factored"] == pytest.approx(expected, rel=1e-9)
    assert case["utilisation_with_relief"] == case["utilisation_without_relief"]


# stages -------------------------------------------------------------------------------------------


def test_steel_carried_span_by_span_leaves_no_moment_over_the_piers(tmp_path: Path) -> None:
    plain = row_of(assessed(tmp_path), "hogging", "pier 1")["unyielding"]
    folder = tmp_path / "staged"
    folder.mkdir()
    staged = row_of(assessed(folder, load='stage = "span by span"'), "hogging", "pier 1")["unyielding"]
    assert staged["permanent"] == pytest.approx(plain["permanent"] * 27.0 / 36.5, rel=1e-9)


def test_a_support_that_holds_rotation_has_no_spans_to_stand_by_themselves(tmp_path: Path) -> None:
    base = text(load='stage = "span by span"').replace('# rotation = "free"', 'rotation = "fixed" #')
    path, url = tmp_path / "bridge.toml", str(tmp_path / "record.sqlite")
    path.write_text(base)
    workflow.init_record(url)
    with pytest.raises(BedstoneError, match=r"support 4, rotation: loads that came on span by span"):
        workflow.add_bridge(url, path)


def test_a_span_with_a_hinge_does_not_stand_by_itself(tmp_path: Path) -> None:
    base = text(load='stage = "span by span"').replace(
        'length = "15 m"', 'length = "15 m"\n  hinges = ["3 m"]'
    )
    path, url = tmp_path / "bridge.toml", str(tmp_path / "record.sqlite")
    path.write_text(base)
    workflow.init_record(url)
    with pytest.raises(BedstoneError, match=r"span 2, hinges: loads that came on span by span"):
        workflow.add_bridge(url, path)


def test_an_unknown_stage_or_kind_is_refused(tmp_path: Path) -> None:
    assert "stage" in refusal(tmp_path, load='stage = "propped"')
    other = tmp_path / "other"
    other.mkdir()
    assert "kind" in refusal(other, load='kind = "snow"')


# temperature --------------------------------------------------------------------------------------


def test_a_temperature_case_acts_where_it_is_adverse(tmp_path: Path) -> None:
    document = assessed(tmp_path, OWN + "temperature = 0.9\n", temperature=WARM, section='depth = "1 m"')
    sagging = row_of(document, "sagging", None, 2)["unyielding"]
    hogging = row_of(document, "hogging", "pier 1")["unyielding"]
    assert sagging["temperature"] > 100.0  # a warm top puts the middle of a continuous girder into sagging
    assert hogging["temperature"] == 0.0
    expected = 1.2 * sagging["permanent"] + 0.9 * sagging["temperature"] + 1.5 * sagging["live"]
    assert sagging["factored"] == pytest.approx(expected, rel=1e-9)


def test_degrees_of_a_difference_are_steps_in_any_scale() -> None:
    def moment(difference: str) -> float:
        warm = WARM.replace("10 K", difference)
        bridge = parsed(OWN + "temperature = 0.9\n", temperature=warm, section='depth = "1 m"')
        model = GirderModel(bridge, bridge.girders[0])
        return float(model.effects.steady("moment", np.zeros(4), np.zeros(4)).hot.max())

    assert moment("10 degC") == pytest.approx(moment("10 K"))
    assert moment("18 degF") == pytest.approx(moment("10 K"))


@pytest.mark.parametrize("written", ["12e-6 / K", "12e-6 1/K", "12 microstrain / K", "0.0012 percent / K"])
def test_expansion_may_be_written_in_any_of_its_ways(written: str) -> None:
    warm = f'{WARM}expansion = "{written}"\n'
    bridge = parsed(OWN + "temperature = 0.9\n", temperature=warm, section='depth = "1 m"')
    assert bridge.temperature[0].expansion == pytest.approx(12e-6)


def test_a_warm_pier_is_a_seat_that_rises(tmp_path: Path) -> None:
    warm = (
        '[[temperature]]\nid = "sun on pier 1"\n'
        '[[temperature.seat]]\ngirder = "north"\nsupport = "pier 1"\nrise = "3 mm"\n'
    )
    bridge = parsed(OWN + "temperature = 0.9\n", temperature=warm)
    model = GirderModel(bridge, bridge.girders[0])
    steady = model.effects.steady("moment", np.zeros(4), np.array([0.0, -0.003, 0.0, 0.0]))
    assert steady.cold == pytest.approx(np.minimum(steady.settled, 0.0))
    assert steady.cold.min() < -50.0


@pytest.mark.parametrize(
    ("factors", "temperature", "problem"),
    [
        (OWN, WARM, "factors, temperature: there is a temperature case, but no factor on it"),
        (
            OWN + "temperature = 0.9\n",
            WARM,
            'section "mid", depth: temperature case "summer noon" needs the depth',
        ),
        (OWN, '[[temperature]]\nid = "none"\n', "neither a difference nor a seat is given"),
        (OWN, WARM.replace("10 K", "500 K"), "is no difference between top and underside"),
        (OWN, WARM.replace("10 K", "10 mm"), "is no unit of temperature difference"),
        (OWN, WARM + WARM, "summer noon"),
        (
            OWN,
            '[[temperature]]\nid = "a"\n[[temperature.seat]]\ngirder = "north"\nsupport = "pier 9"\nrise = "3 mm"\n',
            "pier 9",
        ),
    ],
)
def test_a_wrong_temperature_case_is_refused_in_one_line(
    tmp_path: Path, factors: str, temperature: str, problem: str
) -> None:
    said = refusal(tmp_path, factors, temperature=temperature)
    assert problem in said
    assert "\n" not in said
