"""The sample data tell their story, and are what their script writes."""

from __future__ import annotations

import datetime as dt
import math
import shutil
from types import ModuleType

import numpy as np
import pytest

from assess import workflow
from assess.girder import places
from assess.workflow.assessing import kept_fits, supports_of
from assess.workflow.drivers import drivers
from assess.workflow.pads import cold_shift
from assess.workflow.study import Study
from db.exchange import parse_bridge
from db.store import open_record
from tests.workflow.conftest import ROOT, Demo

SAMPLE = ROOT / "sample_data"
SOFTENING = ("north", "pier 2")


def true_ratio(story: ModuleType, pad: tuple[str, str], date: dt.date, temperature: float) -> float:
    ratio, growth = story.TRUTH[pad]
    years = (date - story.VISITS[0][0]).days / 365.25
    bridge = parse_bridge((SAMPLE / "hollin-water.toml").read_text(), file="hollin-water.toml")
    girder = bridge.girder(pad[0])
    cold = cold_shift(girder, [girder.support_index(pad[1])], temperature).shift[0]
    return float(ratio * math.exp(growth * years + cold))


def test_the_files_are_what_the_script_writes(story: ModuleType, tmp_path, monkeypatch) -> None:  # type: ignore[no-untyped-def]
    shutil.copy(SAMPLE / "hollin-water.toml", tmp_path)
    monkeypatch.setattr(story, "FOLDER", tmp_path)
    story.main()
    made = {path.name: path.read_bytes() for path in tmp_path.iterdir()}
    kept = {path.name: path.read_bytes() for path in SAMPLE.iterdir() if path.suffix in {".toml", ".csv"}}
    assert sorted(made) == sorted(kept)
    assert [name for name in made if made[name] != kept[name]] == []


def test_the_softening_pad_is_found_within_10_percent_at_every_visit(demo: Demo, story: ModuleType) -> None:
    for result, (date, _, temperature, _) in zip(demo.visits, story.VISITS, strict=True):
        assert result.visit == date
        girder = next(g for g in result.girders if g.girder == SOFTENING[0])
        pad = next(p for p in girder.pads if p.support == SOFTENING[1])
        assert pad.ratio_to_nominal == pytest.approx(
            true_ratio(story, SOFTENING, date, temperature), rel=0.10
        )
        assert pad.data_share > 0.9


def test_the_softening_pad_drifts_and_its_interval_holds_the_truth(demo: Demo, story: ModuleType) -> None:
    pad = next(p for p in demo.trend.pads if (p.girder, p.support) == SOFTENING)
    true = 100.0 * math.expm1(story.TRUTH[SOFTENING][1])
    assert pad.law == "drift"
    assert pad.visits == len(story.VISITS)
    assert pad.low95 <= true <= pad.high95 < 0.0


def test_all_other_pads_stay_steady(demo: Demo) -> None:
    moving = [(p.girder, p.support) for p in demo.trend.pads if p.law != "steady"]
    assert moving == [SOFTENING]
    assert len(demo.trend.pads) == 8


def test_most_intervals_hold_the_true_stiffness(demo: Demo, story: ModuleType) -> None:
    inside = [
        pad.low95_kN_per_m / pad.nominal_kN_per_m
        <= true_ratio(story, (girder.girder, pad.support), date, temperature)
        <= pad.high95_kN_per_m / pad.nominal_kN_per_m
        for result, (date, _, temperature, _) in zip(demo.visits, story.VISITS, strict=True)
        for girder in result.girders
        for pad in girder.pads
    ]
    assert len(inside) == 48
    assert sum(inside) >= 42


def test_the_one_bad_reading_is_flagged_and_no_other(demo: Demo, story: ModuleType) -> None:
    date, girder, state, place, _ = story.KNOCKED
    suspects = [
        (result.visit, one.girder, r.state, r.quantity, r.at_m)
        for result in demo.visits
        for one in result.girders
        for r in one.readings
        if r.suspect
    ]
    assert suspects == [(date, girder, state, "deflection", place)]
    said = next(r for r in demo.visits if r.visit == date).cautions
    assert any("suspect reading" in one and state in one and f"{place:g} m" in one for one in said)


def test_the_winter_visit_is_cautioned_and_no_other(demo: Demo, story: ModuleType) -> None:
    cold = [
        result.visit
        for result in demo.visits
        if any("Cold pads read stiffer" in one for one in result.cautions)
    ]
    assert cold == [date for date, _, temperature, _ in story.VISITS if temperature < 5.0]
    assert len(cold) == 1


def test_the_settling_pier_is_in_the_permanent_effects(demo: Demo, story: ModuleType) -> None:
    said = " ".join(demo.assessment.cautions)
    assert '"pier 2"' in said
    settled = story.VISITS[-1][3]
    assert settled > 3.0
    for girder in demo.assessment.girders:
        row = next(s for s in girder.sections if s.support == "pier 2" and s.effect == "hogging")
        assert row.calibrated.permanent > row.nominal.permanent + 50.0  # a lowered support is relieved
        other = next(s for s in girder.sections if s.support == "pier 1" and s.effect == "hogging")
        assert other.calibrated.permanent < other.nominal.permanent


def test_the_assessment_rests_on_the_last_visit(demo: Demo, story: ModuleType) -> None:
    assert demo.assessment.calibration_visit == story.VISITS[-1][0]
    assert demo.trend.as_of == story.VISITS[-1][0]
    assert demo.trend.next_visit_by is not None


def test_the_settling_pier_is_carried_forward_and_the_other_seats_stand(
    demo: Demo, story: ModuleType
) -> None:
    moving = {(s.girder, s.support): s for s in demo.trend.seats if s.moving}
    assert set(moving) == {("north", "pier 2"), ("south", "pier 2")}
    first, last = story.VISITS[0], story.VISITS[-1]
    true = (last[3] - first[3]) / ((last[0] - first[0]).days / 365.25)
    for seat in moving.values():
        assert seat.low95 is not None
        assert seat.high95 is not None
        assert seat.low95 - 0.1 <= true <= seat.high95 + 0.1
    # south's pads stand still: what brings its hogging at pier 1 to the limit is the seat alone
    south = next(
        s for s in demo.trend.spans if (s.girder, s.effect, s.support) == ("south", "hogging", "pier 1")
    )
    assert south.median_crossing is not None


def test_the_first_sentence_names_the_seat_before_the_pad(demo: Demo) -> None:
    sentences = workflow.report_view(demo.url, "hollin-water").verdicts
    north = sentences["north"]
    assert 0 < north.index('the seat at "pier 2"') < north.index('the pad at "pier 2"')
    assert "the pad at" not in sentences["south"]


def test_the_drivers_of_a_section_are_what_putting_a_support_back_takes_away(demo: Demo) -> None:
    with open_record(demo.url) as record:
        study = Study.fetch(record, "hollin-water")
    model = study.model("north")
    supports, _ = supports_of(study, model, kept_fits(study, None), None)
    row = next(
        s for s in demo.trend.spans if (s.girder, s.effect, s.support) == ("north", "hogging", "pier 1")
    )
    found = drivers(model, supports, row)
    seat = next(d for d in found if (d.what, d.support) == ("seat", "pier 2"))
    assert found[0] == seat
    # by hand: the permanent moment per metre of drop, factored, over the resistance
    place = places(model.condensed, "moment", np.array([15.0]))
    unit = np.eye(model.n)[2]
    level = model.condensed.solve(
        model.compliance(supports.log_stiffness), np.zeros(model.n), unit
    ).displacement
    moment = float(place.rows[0] @ level) * supports.settlements["pier 2"].value
    capacity = float(model.plan.hogging[np.argmin(np.abs(model.plan.x - 15.0))])
    assert seat.adds == pytest.approx(-1.2 * moment / capacity, rel=1e-6)
