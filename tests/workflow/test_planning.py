"""The next visit as planned, and as it turns out when it is carried out."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray

from assess import workflow
from assess.capacity import evaluate
from assess.results import GirderPlan, PlanResult
from assess.workflow.aiming import aim_of
from assess.workflow.offering import offer_of
from assess.workflow.study import Study
from assess.workflow.supports import acting, kept_fits, supports_of
from assess.workflow.unknowns import Setup
from db.errors import BedstoneError
from db.exchange import read_visit
from db.store import open_record
from tests.workflow import ashbeck
from tests.workflow.invented import bridge_text, write_visit
from tests.workflow.planned import carried_out, filled
from tests.workflow.test_lifting import light_bridge

Floats = NDArray[np.float64]

VEHICLE = "ballast wagon"
SEEDS = (1, 2, 3)
GAUGES = """
  [[girder.gauge]]
  quantity = "compression"
  support = "pier 1"
  sd = "0.03 mm"
  [[girder.gauge]]
  quantity = "compression"
  support = "pier 2"
  sd = "0.03 mm"
  [[girder.gauge]]
  quantity = "compression"
  support = "west abutment"
  sd = "0.03 mm"
  cost = 3
  [[girder.gauge]]
  quantity = "rotation"
  support = "west abutment"
  sd = "0.02 mrad"
  [[girder.gauge]]
  quantity = "deflection"
  at = "19.5 m"
  sd = "0.1 mm"
  [[girder.gauge]]
  quantity = "strain"
  at = "6 m"
  height = "-0.6 m"
  sd = "2 microstrain"

[[vehicle]]"""
STANDS = 'id = "ballast wagon"\nplan_positions = ["13 m", "19 m", "26 m", "33 m", "38 m"]'


def added(folder: Path, text: str) -> str:
    """A record with a bridge in it."""
    url, path = str(folder / "record.sqlite"), folder / "bridge.toml"
    path.write_text(text, encoding="utf-8")
    workflow.init_record(url)
    workflow.add_bridge(url, path)
    return url


def gauged(folder: Path) -> str:
    """The contract's bridge with gauges and places of its wagon, calibrated with a soft pad at pier 1."""
    text = bridge_text().replace("\n[[vehicle]]", GAUGES, 1)
    url = added(folder, text.replace('id = "ballast wagon"', STANDS, 1))
    workflow.log_visit(url, write_visit(folder, "2024-05-14", (0.9, 0.5, 0.8)))
    workflow.calibrate(url, "quillmere")
    return url


def new(folder: Path) -> str:
    """The contract's bridge, never read."""
    return added(folder, bridge_text())


def settled(folder: Path) -> str:
    """A bridge from its drawings, calibrated, with a pier that went down by 6 mm."""
    url = ashbeck.added(folder)
    drops = {"west abutment": 0.2, "pier 1": 6.0, "pier 2": 0.5, "east abutment": 0.1}
    ashbeck.log(url, folder, "2024-05-14", (1.0, 0.6, 0.9, 1.1), settled=drops)
    workflow.calibrate(url, ashbeck.model().bridge.id)
    return url


@dataclass(frozen=True)
class Case:
    """A record, its bridge, and a plan of its next visit."""

    url: str
    folder: Path
    bridge: str
    result: PlanResult

    @property
    def girder(self) -> GirderPlan:
        return self.result.girders[0]


def _case(folder: Path, make: Callable[[Path], str], **options: int) -> Case:
    url = make(folder)
    (bridge,) = [one.bridge for one in workflow.list_bridges(url)]
    return Case(url, folder, bridge, workflow.plan(url, bridge, vehicle=VEHICLE, **options))


@pytest.fixture(scope="module")
def gauges(tmp_path_factory: pytest.TempPathFactory) -> Case:
    return _case(tmp_path_factory.mktemp("gauges"), gauged)


@pytest.fixture(scope="module")
def unread(tmp_path_factory: pytest.TempPathFactory) -> Case:
    return _case(tmp_path_factory.mktemp("unread"), new)


@pytest.fixture(scope="module")
def sunk(tmp_path_factory: pytest.TempPathFactory) -> Case:
    return _case(tmp_path_factory.mktemp("sunk"), settled, readings=12)


@pytest.fixture(params=["gauges", "unread", "sunk"])
def case(request: pytest.FixtureRequest) -> Case:
    found: Case = request.getfixturevalue(request.param)
    return found


def found_over_promised(case: Case, seeds: Sequence[int]) -> tuple[Floats, Floats]:
    """Standard deviations of the pads (seeds, q) and of the utilisation (seeds,) as found over those promised.

    All visits are read on what was known before the first; each is calibrated by itself.
    """
    days = [dt.date(2025, 6, seed) for seed in seeds]
    paths = [
        carried_out(case.url, case.result, case.folder, day, seed)
        for day, seed in zip(days, seeds, strict=True)
    ]
    pads, used, plan = [], [], case.girder
    for day, path in zip(days, paths, strict=True):
        workflow.log_visit(case.url, path)
        workflow.calibrate(case.url, case.bridge, visit=day)
        assessed = workflow.assess(case.url, case.bridge, visit=day).girders[0]
        with open_record(case.url) as record:
            fit = kept_fits(Study.fetch(record, case.bridge), None)[day][0].fits[plan.girder]
        pads.append(fit.sd / [pad.sd_ln_after for pad in plan.pads])
        assert plan.governs is not None
        where = plan.governs.effect, plan.governs.span, plan.governs.support
        row = next(one for one in assessed.sections if (one.effect, one.span, one.support) == where)
        low, high = row.calibrated.utilisation_low95, row.calibrated.utilisation_high95
        promised = plan.readings[-1].sd_utilisation_after
        assert low is not None
        assert high is not None
        assert promised is not None
        used.append((high - low) / (2.0 * 1.96) / promised)
    return np.array(pads), np.array(used)


def test_what_is_promised_is_found_when_the_visit_is_carried_out(case: Case) -> None:
    pads, used = found_over_promised(case, SEEDS)
    assert np.all(np.abs(pads - 1.0) < 0.15)
    assert abs(np.sqrt(np.mean(used**2)) - 1.0) < 0.15
    # of seats at their datum one visit finds more or less: only a settlement that does not relieve counts
    at_datum = case.girder.seats and case.bridge == "quillmere"
    assert np.all(np.abs(used - 1.0) < (0.5 if at_datum else 0.15))


@pytest.mark.campaign
@pytest.mark.parametrize("make", [gauged, new, settled])
def test_promises_are_kept_on_average_over_many_visits(tmp_path: Path, make: Callable[[Path], str]) -> None:
    pads, used = found_over_promised(_case(tmp_path, make), range(1, 25))
    assert np.all(np.abs(pads - 1.0) < 0.15)
    assert np.sqrt(np.mean(used**2)) == pytest.approx(1.0, abs=0.1)


def test_every_reading_leaves_less_open_and_none_is_planned_twice(case: Case) -> None:
    plan = case.girder
    left = [plan.sd_utilisation_before, *(one.sd_utilisation_after for one in plan.readings)]
    assert np.all(np.diff(np.array(left, dtype=np.float64)) <= 0.0)
    places = [(one.state, one.quantity, one.support, one.at_m) for one in plan.readings]
    assert len(set(places)) == len(places)
    assert all(pad.sd_ln_after <= pad.sd_ln_before for pad in plan.pads)
    states = {one.state for one in plan.readings} - {"permanent"}
    assert states == {one.state for one in plan.positions}
    assert len(states) <= 3


def test_half_the_cost_leaves_more_open(case: Case) -> None:
    plan, half = case.girder, case.girder.half_cost
    assert half.cost <= plan.cost / 2.0
    assert half.cost == pytest.approx(sum(one.cost for one in half.readings))
    assert half.sd_utilisation_after is not None
    assert plan.readings[-1].sd_utilisation_after is not None
    assert half.sd_utilisation_after > plan.readings[-1].sd_utilisation_after


def test_the_worst_section_by_two_standard_deviations_of_today_is_planned_for(gauges: Case) -> None:
    assessed = workflow.assess(gauges.url, gauges.bridge, visit=dt.date(2024, 5, 14)).girders[0]
    rows = [(one, one.calibrated) for one in assessed.sections]
    worst = max(
        rows,
        key=lambda pair: pair[1].utilisation + (pair[1].utilisation_high95 - pair[1].utilisation_low95) / 2,
    )[0]
    plan = gauges.girder
    assert plan.governs is not None
    assert (plan.governs.effect, plan.governs.span, plan.governs.support) == (
        worst.effect,
        worst.span,
        worst.support,
    )
    assert plan.utilisation == pytest.approx(worst.calibrated.utilisation, rel=1e-6)


def test_gauges_and_places_of_the_bridge_file_are_the_only_ones_used(gauges: Case) -> None:
    assert gauges.result.defaults == []
    assert {one.leading_axle_at_m for one in gauges.girder.positions} <= {13.0, 19.0, 26.0, 33.0, 38.0}
    quantities = {one.quantity for one in gauges.girder.readings}
    assert quantities <= {"compression", "rotation", "deflection", "strain"}
    assert gauges.girder.cost == sum(one.cost for one in gauges.girder.readings)


def test_an_angle_has_its_own_unit_and_no_millimetres(gauges: Case) -> None:
    turned = [one for one in gauges.girder.readings if one.quantity == "rotation"]
    assert [(one.sd_mm, one.unit) for one in turned] == [(None, "mrad")] * len(turned)
    assert turned
    assert turned[0].sd == pytest.approx(0.02)
    short = [one for one in gauges.girder.readings if one.quantity == "compression"]
    assert [one.sd_mm for one in short] == pytest.approx([0.03] * len(short))


def test_what_is_usual_is_offered_where_the_file_says_nothing_and_said(unread: Case) -> None:
    gauges, places = unread.result.defaults
    assert "the bridge file has no [[girder.gauge]]" in gauges
    assert "common practice, no source" in gauges
    assert 'no plan_positions for "ballast wagon"' in places
    assert {one.sd_mm for one in unread.girder.readings} <= {0.05, 0.1, 0.3}
    assert any("No calibration is kept" in said for said in unread.result.cautions)


def test_seats_are_as_open_as_the_bridge_file_says_and_then_as_levelled(unread: Case) -> None:
    read = {one.support for one in unread.girder.readings if one.quantity == "settlement"}
    for seat in unread.girder.seats:
        assert seat.sd_mm_before == pytest.approx(20.0)
        assert seat.sd_mm_after == pytest.approx(
            (20.0**-2 + 0.3**-2) ** -0.5 if seat.support in read else 20.0
        )
    assert read


def test_seats_that_nothing_reads_are_named(gauges: Case) -> None:
    assert gauges.girder.seats == []
    assert any("nothing on offer tells whether the seat at" in said for said in gauges.result.cautions)


def test_a_seat_that_could_be_levelled_and_is_not_is_named(unread: Case) -> None:
    result = workflow.plan(unread.url, unread.bridge, vehicle=VEHICLE, readings=2)
    levelled = {one.support for one in result.girders[0].readings if one.quantity == "settlement"}
    (said,) = [one for one in result.cautions if "is not told by these readings" in one]
    for seat in result.girders[0].seats:
        assert (f'"{seat.support}"' in said) == (seat.support not in levelled)


def test_more_readings_and_more_places_leave_less_open(gauges: Case) -> None:
    def left(**options: int) -> float:
        plan = workflow.plan(gauges.url, gauges.bridge, vehicle=VEHICLE, **options).girders[0]
        assert len(plan.readings) <= options["readings"]
        assert len(plan.positions) <= options["positions"]
        sd = plan.readings[-1].sd_utilisation_after
        assert sd is not None
        return sd

    few, more = left(readings=3, positions=3), left(readings=6, positions=3)
    assert more < few
    assert more <= left(readings=6, positions=1)


def test_slopes_of_the_utilisation_are_those_of_a_full_evaluation(sunk: Case) -> None:
    with open_record(sunk.url) as record:
        study = Study.fetch(record, sunk.bridge)
    model = study.model(study.bridge.girders[0].id)
    supports, _ = supports_of(study, model, kept_fits(study, dt.date(2024, 5, 14)), dt.date(2024, 5, 14))
    seats = supports.seats(model)
    offer = offer_of(model, study.bridge.vehicle(VEHICLE), [supports.log_stiffness], seats, "none")
    setup = Setup(model, offer.visit, offer.readings, ("pads", "settlements"))
    theta = np.concatenate([supports.log_stiffness, seats])
    aim = aim_of(setup, supports, theta, np.full(theta.size, 1e-4))
    rng = np.random.default_rng(5)
    step = 1e-4 * rng.normal(size=theta.size)  # ln k, and m: a tenth of a millimetre

    def used(at: Floats) -> float:
        q = model.pads.size
        rows = evaluate(model.effects, model.factors, *acting(model, at[:q], at[q:]))
        return next(row.case.utilisation for row in rows if row.check is aim.check)

    change = (used(theta + step) - used(theta - step)) / 2.0
    assert aim.utilisation == pytest.approx(used(theta), rel=1e-9)
    assert aim.gradient @ step == pytest.approx(change, rel=1e-3)


def test_the_wagon_is_offered_everywhere_with_an_axle_group_over_every_support() -> None:
    model = ashbeck.model()
    wagon = model.bridge.vehicle(VEHICLE)
    offer = offer_of(model, wagon, [model.nominal], np.zeros(model.n), "none")
    leading = np.array(offer.leading)
    axles = leading[:, None] - [offset for offset, _ in wagon.axles]
    assert np.all(((axles >= -1e-6) & (axles <= model.doc.length + 1e-6)).any(axis=1))
    middles = leading[:, None] - [0.9, 10.1]  # of axles at 0, 1.8 and at 9.2, 11 m
    for x in model.doc.support_positions:
        assert np.abs(middles - x).min(axis=0) == pytest.approx([0.0, 0.0], abs=0.051)
    within = leading[leading <= model.doc.length]
    assert np.diff(within).max() <= max(span.length for span in model.doc.spans) / 8.0 + 0.1


def test_places_at_which_the_girder_leaves_a_pad_are_left_out_and_named(tmp_path: Path) -> None:
    url = str(tmp_path / "record.sqlite")
    workflow.init_record(url)
    stands = ('id = "ballast wagon"', 'id = "ballast wagon"\nplan_positions = ["13.1 m", "21 m", "31 m"]')
    workflow.add_bridge(url, light_bridge(tmp_path, stands))
    result = workflow.plan(url, "quillmere", vehicle=VEHICLE)
    assert 31.0 not in {one.leading_axle_at_m for one in result.girders[0].positions}
    (said,) = [one for one in result.cautions if "would leave" in one]
    assert 'with the leading axle at 31 m the girder would leave "west abutment"' in said


def test_a_girder_without_capacities_is_planned_for_all_its_pads(tmp_path: Path) -> None:
    text = "\n".join(line for line in bridge_text().splitlines() if "_capacity" not in line)
    plan = workflow.plan(added(tmp_path, text), "quillmere", vehicle=VEHICLE, readings=10).girders[0]
    assert (plan.governs, plan.utilisation, plan.sd_utilisation_before) == (None, None, None)
    assert {one.sd_utilisation_after for one in plan.readings} == {None}
    assert all(pad.sd_ln_after < 0.6 * pad.sd_ln_before for pad in plan.pads)


def test_fewer_readings_than_asked_for_are_said(gauges: Case) -> None:
    result = workflow.plan(gauges.url, gauges.bridge, vehicle=VEHICLE, readings=40, positions=2)
    assert len(result.girders[0].readings) == 12
    assert any("12 readings are planned where 40 were asked for" in said for said in result.cautions)


def test_a_draft_is_a_visit_file_once_it_is_filled_in(gauges: Case, tmp_path: Path) -> None:
    path = tmp_path / "next.toml"
    path.write_text(workflow.draft_visit(gauges.result), encoding="utf-8")
    with pytest.raises(BedstoneError):
        read_visit(path)
    path.write_text(filled(gauges.result, dt.date(2025, 3, 1)), encoding="utf-8")
    visit = read_visit(path)
    planned = gauges.girder.readings
    assert [(r.state, r.quantity, r.support, r.at) for r in visit.readings] == [
        (r.state, r.quantity, r.support, r.at_m) for r in planned
    ]
    places = {one.state: one.leading_axle_at_m for one in gauges.girder.positions}
    assert {one.id: one.leading_axle_at for one in visit.states} == places
    assert [r.sd for r in visit.readings if r.quantity == "strain"] == pytest.approx(
        [2e-6 for r in planned if r.quantity == "strain"]
    )


@pytest.mark.parametrize(
    ("words", "told"),
    [
        ({"vehicle": "lorry"}, ('no vehicle "lorry"', '"ballast wagon"')),
        ({"girder": "middle"}, ('no girder "middle"', '"north"')),
    ],
)
def test_what_the_bridge_does_not_have_is_said_with_what_it_has(
    gauges: Case, words: dict[str, str], told: tuple[str, str]
) -> None:
    with pytest.raises(BedstoneError) as wrong:
        workflow.plan(gauges.url, "quillmere", **({"vehicle": VEHICLE} | words))
    assert told[0] in wrong.value.problem
    assert told[1] in (wrong.value.remedy or "")


def test_a_bridge_without_pads_has_nothing_to_plan(tmp_path: Path) -> None:
    lines = [line for line in bridge_text().splitlines() if "stiffness" not in line]
    text = "\n".join(lines).replace('kind = "pad"', 'kind = "pin"')
    with pytest.raises(BedstoneError, match="no pad to read"):
        workflow.plan(added(tmp_path, text), "quillmere", vehicle=VEHICLE)
