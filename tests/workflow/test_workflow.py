"""From files to answers through a record on disk."""

from __future__ import annotations

import datetime as dt
import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from assess import workflow
from assess.capacity import rows
from assess.workflow import assessing, trending
from assess.workflow.cautions import STANDING
from db.errors import BedstoneError
from db.store import open_record
from tests.independent import frame
from tests.workflow.conftest import call, new_record
from tests.workflow.invented import VISIT, bridge_text, model, write_visit

RATIOS = [0.9, 0.6, 1.1]


@pytest.fixture(autouse=True)
def few_draws(monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing here hangs on how many draws make a band."""
    monkeypatch.setattr(assessing, "DRAWS", 200)
    monkeypatch.setattr(trending, "FORECAST_DRAWS", 100)
    monkeypatch.setattr(rows, "_SAMPLE", 4)


def log(record: str, *paths: Path) -> None:
    for path in paths:
        workflow.log_visit(record, path)


def pads(result: Any) -> dict[str, Any]:
    return {pad.support: pad for girder in result.girders for pad in girder.pads}


def kept(record: str, kind: str) -> list[Any]:
    with open_record(record) as opened:
        return opened.results("quillmere", kind)


def revised(tmp_path: Path, old: str, new: str) -> Path:
    text = bridge_text()
    assert old in text
    path = tmp_path / "revised.toml"
    path.write_text(text.replace(old, new))
    return path


# calibrate ----------------------------------------------------------------------------------------


def test_known_pads_come_back_from_files(record: str, tmp_path: Path) -> None:
    log(record, write_visit(tmp_path, "2024-05-14", RATIOS, seed=None))
    found = pads(workflow.calibrate(record, "quillmere", options=workflow.Options(prior=False))[0])
    assert [found[p].ratio_to_nominal for p in found] == pytest.approx(RATIOS, rel=1e-3)


def test_inches_and_millimetres_give_the_same_pads(record: str, tmp_path: Path) -> None:
    other = new_record(tmp_path, "other.sqlite")
    log(record, write_visit(tmp_path, "2024-05-14", RATIOS, unit="mm"))
    log(other, write_visit(tmp_path, "2024-05-14", RATIOS, unit="in"))
    metric = workflow.calibrate(record, "quillmere")[0]
    inches = workflow.calibrate(other, "quillmere")[0]
    for support, pad in pads(metric).items():
        assert pads(inches)[support].stiffness_kN_per_m == pytest.approx(pad.stiffness_kN_per_m, rel=1e-9)
        assert pads(inches)[support].high95_kN_per_m == pytest.approx(pad.high95_kN_per_m, rel=1e-9)
    assert inches.girders[0].chi_square == pytest.approx(metric.girders[0].chi_square, rel=1e-7)
    for one, two in zip(metric.girders[0].readings, inches.girders[0].readings, strict=True):
        assert (one.unit, two.unit) == ("mm", "in")
        assert one.predicted == pytest.approx(25.4 * two.predicted, rel=1e-9)


def test_without_a_visit_named_the_latest_is_calibrated(record: str, tmp_path: Path) -> None:
    log(record, *(write_visit(tmp_path, date, RATIOS) for date in ("2022-05-10", "2020-05-20")))
    assert workflow.calibrate(record, "quillmere")[0].visit == dt.date(2022, 5, 10)
    assert workflow.calibrate(record, "quillmere", visit=dt.date(2020, 5, 20))[0].visit == dt.date(
        2020, 5, 20
    )


def test_too_few_readings_without_a_prior_are_refused_and_nothing_is_kept(bedstone, record: str) -> None:  # type: ignore[no-untyped-def]
    log(record, VISIT)
    said = bedstone("calibrate", "quillmere", "--no-prior", "--json")
    assert (said.code, said.out) == (2, "")
    assert len(said.err.splitlines()) == 1
    for word in ('girder "north"', "2024-05-14", "2 readings", "3 unknowns", "at least 1 more", "--no-prior"):
        assert word in said.err
    assert kept(record, "calibration") == []


def test_pads_out_of_reach_of_the_load_are_named_when_the_prior_is_off(record: str, tmp_path: Path) -> None:
    path = write_visit(tmp_path, "2024-05-14", RATIOS, states=["T1"], pads=["west abutment"], places=[])
    text = path.with_suffix(".csv").read_text()
    row = text.splitlines()[1]
    path.with_suffix(".csv").write_text(text + f"{row}\n{row}\n{row}\n")
    log(record, path)
    with pytest.raises(BedstoneError, match="do not tell the pad"):
        workflow.calibrate(record, "quillmere", options=workflow.Options(prior=False))


def test_a_pad_read_to_lengthen_is_refused_without_a_prior(bedstone, record: str, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    path = write_visit(tmp_path, "2024-05-14", RATIOS, states=["T1"], places=[])
    table = path.with_suffix(".csv")
    table.write_text("".join(
        line.replace("pier 2,,", "pier 2,,-0.9e0#").split("#")[0] + ",0.02,mm,,\n" if "pier 2" in line else line + "\n"
        for line in table.read_text().splitlines()
    ))  # fmt: skip
    log(record, path)
    said = bedstone("calibrate", "quillmere", "--no-prior")
    assert said.code == 2
    assert 'do not bound the stiffness of the pad at "pier 2"' in said.err
    assert "sign" in said.err


def test_a_visit_without_readings_under_a_test_load_is_refused(bedstone, record: str, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    log(record, write_visit(tmp_path, "2022-05-10", RATIOS))
    log(record, write_visit(tmp_path, "2024-05-14", RATIOS, pads=[], places=[], settled={"pier 1": 4.0}))
    said = bedstone("calibrate", "quillmere")
    assert (said.code, len(said.err.splitlines())) == (2, 1)
    assert "2024-05-14" in said.err
    assert "test state" in said.err
    every = workflow.calibrate(record, "quillmere", every=True)
    assert [one.visit.isoformat() for one in every] == ["2022-05-10"]
    assert any("2024-05-14: nothing was read under a test load" in one for one in every[-1].cautions)


def test_a_bridge_without_visits_is_refused(bedstone) -> None:  # type: ignore[no-untyped-def]
    for command in ("calibrate", "trend"):
        said = bedstone(command, "quillmere")
        assert (said.code, len(said.err.splitlines())) == (2, 1)
        assert "visit log" in said.err


@pytest.mark.parametrize("command", ["calibrate", "assess", "trend"])
def test_an_unknown_bridge_is_named_with_the_known_ones(bedstone, command: str) -> None:  # type: ignore[no-untyped-def]
    said = bedstone(command, "nowhere", "--json")
    assert (said.code, said.out, len(said.err.splitlines())) == (2, "", 1)
    assert "nowhere" in said.err
    assert "quillmere" in said.err


@pytest.mark.parametrize("command", ["calibrate", "assess"])
def test_an_unknown_visit_is_named_with_the_known_ones(bedstone, record: str, command: str) -> None:  # type: ignore[no-untyped-def]
    log(record, VISIT)
    said = bedstone(command, "quillmere", "--visit", "2020-01-01", "--json")
    assert (said.code, said.out, len(said.err.splitlines())) == (2, "", 1)
    assert "2020-01-01" in said.err
    assert "2024-05-14" in said.err


# keeping ------------------------------------------------------------------------------------------


def test_a_calibration_is_kept_once_with_its_digest_options_and_version(record: str) -> None:
    log(record, VISIT)
    shown = workflow.calibrate(record, "quillmere")[0]
    workflow.calibrate(record, "quillmere")
    (one,) = kept(record, "calibration")
    assert one.input_digest == shown.input_digest
    assert one.options == {"prior": True}
    assert one.version == shown.version
    assert one.revision == 1
    assert one.visit == shown.visit
    fit = one.result["fits"]["north"]
    assert np.exp(fit["log_stiffness"]) == pytest.approx(
        [p.stiffness_kN_per_m for p in shown.girders[0].pads]
    )
    assert np.array(fit["covariance"]).shape == (3, 3)


def test_an_assessment_is_kept_once_with_its_seed_and_draws(record: str) -> None:
    log(record, VISIT)
    workflow.calibrate(record, "quillmere")
    shown = workflow.assess(record, "quillmere")
    workflow.assess(record, "quillmere")
    (one,) = kept(record, "assessment")
    assert (one.seed, one.options["draws"]) == (shown.seed, shown.draws)
    assert one.input_digest == shown.input_digest
    assert one.result["calibration_visit"] == "2024-05-14"


def test_other_inputs_or_options_have_another_digest_or_are_kept_apart(record: str, tmp_path: Path) -> None:
    log(record, write_visit(tmp_path, "2024-05-14", RATIOS))
    first = workflow.calibrate(record, "quillmere")[0]
    before = workflow.assess(record, "quillmere")
    workflow.calibrate(record, "quillmere", options=workflow.Options(prior=False))
    after = workflow.assess(record, "quillmere")
    assert len(kept(record, "calibration")) == 2
    assert before.input_digest != after.input_digest
    workflow.add_bridge(record, revised(tmp_path, '"220 kN/mm"', '"250 kN/mm"'))
    assert workflow.calibrate(record, "quillmere")[0].input_digest != first.input_digest


def test_the_same_inputs_give_the_same_bytes(bedstone, record: str, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    other = new_record(tmp_path, "other.sqlite")
    paths = [
        write_visit(tmp_path, date, RATIOS, settled={"pier 1": 3.0}) for date in ("2020-05-20", "2022-05-10")
    ]
    log(record, *paths)
    log(other, *reversed(paths))  # logged in another order
    for words in (("calibrate", "quillmere", "--all"), ("assess", "quillmere"), ("trend", "quillmere")):
        first = bedstone(*words, "--json").out
        assert bedstone(*words, "--json").out == first
        assert call(other, *words, "--json").out == first
        assert json.loads(first)["bridge"] == "quillmere"


# assess -------------------------------------------------------------------------------------------


def test_without_a_kept_calibration_the_calibrated_case_is_the_nominal_one(
    record: str, tmp_path: Path
) -> None:
    log(
        record, write_visit(tmp_path, "2024-05-14", RATIOS, settled={"pier 1": 12.0})
    )  # logged, not calibrated
    result = workflow.assess(record, "quillmere")
    assert result.calibration_visit is None
    for row in result.girders[0].sections:
        for key in ("x_m", "capacity", "permanent", "live", "factored", "utilisation", "rating_factor"):
            assert getattr(row.calibrated, key) == getattr(row.nominal, key)
        assert (
            row.calibrated.utilisation_low95 < row.calibrated.utilisation < row.calibrated.utilisation_high95
        )
    said = " ".join(result.cautions)
    assert "No calibration is kept for quillmere" in said
    assert 'seat settlements are in the record but do not enter nominal pads: "pier 1" 12 mm' in said


def test_permanent_effects_of_the_calibrated_case_include_measured_settlements(
    record: str, tmp_path: Path
) -> None:
    """Held against a frame of elements on the calibrated pads with the seat lowered."""
    log(record, write_visit(tmp_path, "2024-05-14", RATIOS, settled={"pier 1": 8.0, "west abutment": -1.0}))
    found = pads(workflow.calibrate(record, "quillmere")[0])
    girder = workflow.assess(record, "quillmere").girders[0]
    one = model()
    stiffness = [found[p].stiffness_kN_per_m for p in one.pad_ids]
    compliance = np.array([*(1.0 / np.array(stiffness)), 0.0])
    drops = np.array([-0.001, 0.008, 0.0, 0.0])
    for row in girder.sections:
        if row.effect == "shear":
            continue
        for case, f, s in (
            (row.calibrated, compliance, drops),
            (row.nominal, np.array([*np.exp(-one.nominal), 0.0]), 0.0 * drops),
            (row.unyielding, np.zeros(4), 0.0 * drops),
        ):
            expected = frame.solve(one.girder, f, s, one.effects.loads.dead[0].loads, np.array([case.x_m]))
            assert case.permanent == pytest.approx(expected.moment[0], rel=1e-8, abs=1e-6)
    expected = frame.solve(one.girder, compliance, drops, one.effects.loads.dead[0].loads, np.array([1.0]))
    assert [r.calibrated_permanent_kN for r in girder.reactions] == pytest.approx(expected.reaction, rel=1e-8)
    firm = frame.solve(one.girder, np.zeros(4), 0.0 * drops, one.effects.loads.dead[0].loads, np.array([1.0]))
    assert [r.unyielding_permanent_kN for r in girder.reactions] == pytest.approx(firm.reaction, rel=1e-8)


def test_repeated_settlement_readings_of_one_visit_are_pooled(record: str, tmp_path: Path) -> None:
    path = write_visit(tmp_path, "2024-05-14", RATIOS, settled={"pier 1": 8.0})
    table = path.with_suffix(".csv")
    table.write_text(table.read_text() + "north,permanent,settlement,pier 1,,6.8,0.6,mm,,\n")
    log(record, path)
    workflow.calibrate(record, "quillmere")
    said = " ".join(workflow.assess(record, "quillmere").cautions)
    # weights 1 / 0.09 and 1 / 0.36: (4 x 8.0 + 6.8) / 5 = 7.76, sd 0.6 / sqrt 5 = 0.268
    assert '"pier 1" 7.76 mm (sd 0.27 mm, 2024-05-14)' in said


def test_an_earlier_visit_can_be_assessed_as_it_stood(record: str, tmp_path: Path) -> None:
    log(record, write_visit(tmp_path, "2020-05-20", [0.9, 1.0, 1.1], settled={"pier 1": 2.0}))
    log(record, write_visit(tmp_path, "2024-05-14", [0.9, 0.4, 1.1], settled={"pier 1": 9.0}))
    workflow.calibrate(record, "quillmere", every=True)
    early = workflow.assess(record, "quillmere", visit=dt.date(2020, 5, 20))
    late = workflow.assess(record, "quillmere")
    assert early.calibration_visit == dt.date(2020, 5, 20)
    assert late.calibration_visit == dt.date(2024, 5, 14)
    assert '"pier 1" 2 mm' in " ".join(early.cautions)
    assert '"pier 1" 9 mm' in " ".join(late.cautions)
    hogging = [next(s for s in r.girders[0].sections if s.support == "pier 1") for r in (early, late)]
    assert hogging[1].calibrated.utilisation < hogging[0].calibrated.utilisation
    assert hogging[1].nominal == hogging[0].nominal


def test_a_newer_visit_that_is_not_calibrated_is_cautioned(record: str, tmp_path: Path) -> None:
    log(record, write_visit(tmp_path, "2020-05-20", RATIOS))
    workflow.calibrate(record, "quillmere")
    log(record, write_visit(tmp_path, "2022-05-10", RATIOS))
    said = " ".join(workflow.assess(record, "quillmere").cautions)
    assert "The visit of 2022-05-10 has readings under test loads that are not calibrated yet" in said


def test_a_calibration_of_an_older_bridge_file_is_said_to_be_stale_until_made_again(
    record: str, tmp_path: Path
) -> None:
    log(record, write_visit(tmp_path, "2024-05-14", RATIOS))
    workflow.calibrate(record, "quillmere")
    workflow.add_bridge(record, revised(tmp_path, 'I = "0.0118 m^4"', 'I = "0.0125 m^4"'))
    stale = "was made on revision 1 of the bridge file, the assessment is on revision 2"
    assert stale in " ".join(workflow.assess(record, "quillmere").cautions)
    workflow.calibrate(record, "quillmere")
    assert stale not in " ".join(workflow.assess(record, "quillmere").cautions)


def test_a_pad_that_the_last_visit_does_not_tell_is_not_forgotten(record: str, tmp_path: Path) -> None:
    log(record, write_visit(tmp_path, "2020-05-20", [0.9, 1.0, 0.4]))
    log(
        record,
        write_visit(tmp_path, "2024-05-14", [0.9, 1.0, 0.4], states=["T1"], pads=["pier 1"], places=[6.0]),
    )
    workflow.calibrate(record, "quillmere", every=True)
    said = [one for one in workflow.assess(record, "quillmere").cautions if "not told by the visit" in one]
    assert len(said) == 1
    assert '"pier 2"' in said[0]
    assert "2020-05-20" in said[0]
    assert "times nominal: read it again" in said[0]
    ratio = float(said[0].split("found at ")[1].split(" times")[0])
    assert ratio == pytest.approx(0.4, rel=0.1)


def test_a_pad_left_under_permanent_load_carries_nothing_and_is_cautioned(
    record: str, tmp_path: Path
) -> None:
    log(record, write_visit(tmp_path, "2024-05-14", RATIOS))
    workflow.calibrate(record, "quillmere")
    log(record, write_visit(tmp_path, "2025-05-14", RATIOS, settled={"west abutment": 120.0}))
    result = workflow.assess(record, "quillmere")
    west = result.girders[0].reactions[0]
    assert (west.calibrated_permanent_kN, west.calibrated_factored_min_kN) == (0.0, 0.0)
    assert west.calibrated_lifts_under == "permanent"
    assert 'north: "west abutment" lifts under permanent load alone' in " ".join(result.cautions)
    # what is left of the two spans is a cantilever over pier 1 with the whole weight of the first span
    hogging = next(
        row for row in result.girders[0].sections if row.support == "pier 1" and row.effect == "hogging"
    )
    assert hogging.calibrated.permanent == pytest.approx(-36.5 * 12.0**2 / 2.0, rel=1e-9)


def test_overload_is_cautioned(record: str, tmp_path: Path) -> None:
    log(record, write_visit(tmp_path, "2024-05-14", RATIOS))
    workflow.calibrate(record, "quillmere")
    workflow.add_bridge(record, revised(tmp_path, "4700 kN m", "300 kN m"))
    assert "is over its factored capacity" in " ".join(workflow.assess(record, "quillmere").cautions)


def test_missing_capacities_are_not_determined_and_not_zero(record: str, tmp_path: Path, bedstone) -> None:  # type: ignore[no-untyped-def]
    text = "\n".join(line for line in bridge_text().splitlines() if "sagging_capacity" not in line)
    path = tmp_path / "bare.toml"
    path.write_text(text)
    workflow.add_bridge(record, path)
    document = bedstone("assess", "quillmere", "--json").document
    for row in document["girders"][0]["sections"]:
        bare = row["effect"] == "sagging"
        assert (row["calibrated"]["utilisation"] is None) == bare
        assert (row["calibrated"]["utilisation_high95"] is None) == bare
        assert (row["calibrated"]["rating_factor"] is None) == bare
        assert row["calibrated"]["permanent"] is not None
    assert any("sagging not determined where it governs" in one for one in document["cautions"])


# every output -------------------------------------------------------------------------------------


def test_standing_cautions_end_every_output(record: str, tmp_path: Path) -> None:
    log(record, write_visit(tmp_path, "2024-05-14", RATIOS))
    results = [
        workflow.assess(record, "quillmere"),
        *workflow.calibrate(record, "quillmere"),
        workflow.assess(record, "quillmere"),
        workflow.trend(record, "quillmere"),
    ]
    for result in results:
        assert tuple(result.cautions[-2:]) == STANDING
        assert "safe" not in " ".join(result.cautions).lower().split()


def test_pads_told_by_the_assumption_are_cautioned(record: str) -> None:
    log(record, VISIT)
    said = " ".join(workflow.calibrate(record, "quillmere")[0].cautions)
    assert '"pier 2" is told by the assumption, not by the readings' in said
    assert '"pier 1" is told by the assumption' not in said


def test_a_stiffness_at_odds_with_nominal_is_cautioned(record: str, tmp_path: Path) -> None:
    log(record, write_visit(tmp_path, "2024-05-14", [0.9, 0.2, 1.1]))
    said = [one for one in workflow.calibrate(record, "quillmere")[0].cautions if "threefold" in one]
    assert len(said) == 1
    assert '"pier 1"' in said[0]
    assert "softer" in said[0]


# trend --------------------------------------------------------------------------------------------

DATES = ("2016-05-10", "2018-06-01", "2020-05-20", "2022-05-10", "2024-05-14")


def test_a_softening_pad_is_followed_and_the_others_are_steady(record: str, tmp_path: Path) -> None:
    for i, date in enumerate(DATES):
        ratio = float(np.exp(-0.10 * (dt.date.fromisoformat(date) - dt.date(2016, 5, 10)).days / 365.25))
        log(record, write_visit(tmp_path, date, [0.9, ratio, 1.1], seed=10 + i))
    result = workflow.trend(record, "quillmere")
    laws = {pad.support: pad.law for pad in result.pads}
    assert laws == {"west abutment": "steady", "pier 1": "drift", "pier 2": "steady"}
    pad = next(p for p in result.pads if p.support == "pier 1")
    assert pad.low95 is not None
    assert pad.high95 is not None
    assert pad.low95 <= 100.0 * np.expm1(-0.10) <= pad.high95


def cold_and_warm(tmp_path: Path) -> list[Path]:
    """Pads that never change, stiffer by 0.5 % a kelvin on two winter days."""
    days = [
        ("2018-06-01", 20.0),
        ("2019-05-20", 20.0),
        ("2021-05-10", 20.0),
        ("2023-01-20", -8.0),
        ("2024-01-22", -8.0),
    ]
    return [
        write_visit(
            tmp_path, date, [0.9, 1.0, 1.1], seed=30 + i, temperature=f"{t:g} degC", colder=0.005 * (20.0 - t)
        )
        for i, (date, t) in enumerate(days)
    ]


def test_winter_visits_are_brought_to_the_reference_where_the_pad_has_a_coefficient(
    record: str, tmp_path: Path
) -> None:
    coefficient = 'stiffness_cv = 0.3\n  temperature_coefficient = "0.5 percent / K"'
    workflow.add_bridge(record, revised(tmp_path, "stiffness_cv = 0.3", coefficient))
    log(record, *cold_and_warm(tmp_path))
    result = workflow.trend(record, "quillmere")
    assert {pad.law for pad in result.pads} == {"steady"}
    assert not any("without correction" in one for one in result.cautions)


def test_winter_visits_without_one_are_uncertain_and_cautioned(record: str, tmp_path: Path) -> None:
    log(record, *cold_and_warm(tmp_path))
    result = workflow.trend(record, "quillmere")
    pad = next(p for p in result.pads if p.support == "pier 1")
    assert pad.low95 is not None
    assert pad.high95 is not None
    assert pad.low95 < 0.0 < pad.high95  # the cold of a visit is an error that its pads share
    assert pad.alarm is None
    (said,) = [one for one in result.cautions if "without correction" in one]
    assert "2023-01-20, 2024-01-22" in said


def test_two_visits_trend_with_a_wide_rate_and_a_caution(bedstone, tmp_path) -> None:  # type: ignore[no-untyped-def]
    for date, seed in (("2020-05-20", 1), ("2022-05-10", 2)):
        bedstone("visit", "log", str(write_visit(tmp_path, date, [0.9, 1.0, 1.1], seed=seed)))
    document = bedstone("trend", "quillmere", "--json").document
    for pad in document["pads"]:
        assert pad["low95"] < pad["change_per_year_percent"] < pad["high95"]
    assert any("rest on two visits only" in one for one in document["cautions"])


def test_the_next_visit_is_no_later_than_the_owners_own_interval(record: str, tmp_path: Path) -> None:
    workflow.add_bridge(
        record, revised(tmp_path, "built = 1989-06-01", 'built = 1989-06-01\nvisit_interval = "18 months"')
    )
    log(record, write_visit(tmp_path, "2024-05-14", RATIOS))
    result = workflow.trend(record, "quillmere")
    assert result.next_visit_by is not None
    assert abs((result.next_visit_by - dt.date(2025, 11, 14)).days) <= 1
    assert not any("no visit_interval" in one for one in result.cautions)
