"""What the page says beside the stiffnesses: seats, what moved, explanations, readings in doubt."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from assess.report import cautions, render, tables
from assess.report.explained import asked, cause_rows, deciding, explained, in_doubt, rival_rows, seat_rows
from assess.report.figures import plane
from assess.results import GirderCalibration


@pytest.fixture
def fit(view_of) -> GirderCalibration:
    return view_of("example").calibration.girders[0]


def test_a_seat_shows_its_settlement_and_what_of_it_bends_the_girder(fit):
    first, second = seat_rows(fit)[:2]
    assert first[1] == "−1.00 (−1.60 to −0.400) mm"
    assert first[2].startswith("told by the assumption, not by the readings")
    assert first[3] == "end seat: the line runs through it"
    assert second[3] == "0.800 (−0.100 to 1.70) mm"


def test_what_bends_the_girder_says_so_where_the_readings_do_not_tell_it(fit):
    untold = [replace(seat, moment_relevant_data_share=0.2) for seat in fit.settlements_mm]
    assert "told by the assumption" in seat_rows(replace(fit, settlements_mm=untold))[1][3]


def test_causes_stand_in_the_order_of_the_pads_and_unread_seats_are_named(fit):
    rows = cause_rows(replace(fit, causes=fit.causes[::-1]))
    assert [row[0] for row in rows] == [pad.support for pad in fit.pads]
    assert rows[0][1:] == ["pad and seat", "5.10 sd", "4.40 sd"]
    assert rows[1][1:3] == ["cannot be told", "not determined: nothing was read of this seat"]


def test_nothing_is_said_of_causes_where_no_seat_was_asked_for(fit):
    assert cause_rows(replace(fit, settlements_mm=[])) == []


def test_explanations_stand_in_order_with_how_they_stand(fit):
    standing = {row[0]: row[4] for row in rival_rows(replace(fit, rivals=fit.rivals[::-1]))}
    assert list(standing.values()) == [
        "within 2 of the best, simpler",
        "calibrated, within 2 of the best",
        "within 2 of the best",
        "not told by the readings",
        "not determined: too few readings to rank it",
    ]


def test_only_a_close_explanation_names_the_reading_that_decides(fit):
    assert len(deciding(fit)) == 1
    assert "pads and girder stiffness: compression" in deciding(fit)[0]
    far = [replace(one, carried=False) for one in fit.rivals]
    assert deciding(replace(fit, rivals=far)) == []


def test_readings_in_doubt_and_left_out_are_named_and_small_moves_of_a_robust_fit_are_not(fit):
    again, out, robust = in_doubt(fit)
    assert again.startswith(
        "Look again at north/T1/deflection/33 m (or north/T1/deflection/30 m: they cannot"
    )
    assert out == "Left out by hand: north/T2/deflection/6 m: gauge knocked."
    assert f"puts the pad at {fit.pads[0].support} at 198 kN/mm, −2.10 standard deviations" in robust


@pytest.mark.parametrize(
    ("kind", "size", "told"),
    [
        ("weighted", 2310.0, "weighed draws of the posterior, worth 2310"),
        ("ensemble", 900.0, "an ensemble sampler, worth 900"),
        ("normal", None, "come from the normal picture of this fit"),
    ],
)
def test_the_page_says_whence_the_draws_come_and_what_they_are_worth(fit, kind, size, told):
    said = asked(replace(fit, draws_from=kind, effective_sample_size=size))
    assert said.startswith("Asked for by the visit file: pads, sustained and settlements.")
    assert told in said


def test_a_fit_without_any_of_it_has_no_empty_tables(fit):
    bare = GirderCalibration(
        girder="north", pads=fit.pads, chi_square=1.0, degrees_of_freedom=1, p_value=0.3, readings=[]
    )
    found = explained(bare, [])
    assert found.tables == found.in_doubt == found.deciding == []
    assert found.explanations is None
    assert plane.pairs(bare) == []


def test_the_outline_of_pad_and_seat_reaches_as_far_as_95_of_100_pairs(fit):
    pair = plane.pairs(fit)[0]
    rng = np.random.default_rng(11)
    covariance = [
        [pair.log_sd**2, pair.r * pair.log_sd * pair.drop_sd_mm],
        [pair.r * pair.log_sd * pair.drop_sd_mm, pair.drop_sd_mm**2],
    ]
    centre = np.array([pair.log_ratio, pair.drop_mm])
    drawn = rng.multivariate_normal(centre, covariance, 20000)
    x, y = pair.outline()
    edge = np.stack([x * math.log(10.0), y], axis=-1) - centre
    weight = np.linalg.inv(covariance)
    reach = np.einsum("ni,ij,nj->n", edge, weight, edge)
    inside = np.einsum("ni,ij,nj->n", drawn - centre, weight, drawn - centre) <= reach.mean()
    assert np.ptp(reach) < 1e-6 * reach.mean()
    assert inside.mean() == pytest.approx(0.95, abs=0.005)


def test_the_outline_slants_as_the_correlation_says(fit):
    for pair in plane.pairs(fit)[:2]:
        x, y = pair.outline()
        assert np.corrcoef(x, y)[0, 1] * pair.r > 0.5


def test_a_pad_without_an_upper_end_has_no_outline(fit):
    open_pads = [replace(pad, high95_kN_per_m=None) for pad in fit.pads]
    assert plane.pairs(replace(fit, pads=open_pads)) == []


def test_a_pad_says_its_stiffness_at_20_degrees_and_an_interval_by_profile(view_of):
    view = view_of("example")
    rows = tables.pad_rows(view.girders[0].supports, view.calibration.girders[0])
    assert rows[0][2].endswith("kN/mm")
    assert "; at 20\N{NO-BREAK SPACE}°C " in rows[0][2]
    assert [("profile" in row[2]) for row in rows[:3]] == [False, True, False]


def test_a_pad_that_nothing_bounds_above_says_so(view_of):
    view = view_of("example")
    fit = view.calibration.girders[0]
    fit = replace(fit, pads=[replace(pad, high95_kN_per_m=None) for pad in fit.pads])
    assert "to no upper limit) kN/mm" in tables.pad_rows(view.girders[0].supports, fit)[0][2]


def test_a_section_that_a_close_explanation_uses_more_says_by_which_and_how_much(view_of):
    rows = tables.section_rows(view_of("example").assessment.girders[0], "g", "calibrated pads")
    told = {row.name: [line for line in row.cases[2].lines if "explained by" in line] for row in rows}
    assert len(told["hogging at pier 1"]) == 1
    assert told["hogging at pier 1"][0].startswith("explained by pads and settlement at pier 1, which the")
    assert told["sagging in span 1"] == []
    assert all("explained by" not in line for row in rows for line in row.cases[0].lines)


def test_a_reading_that_was_not_fitted_says_why(view_of):
    readings = view_of("example").calibration.girders[0].readings
    left = replace(readings[0], predicted=None, standardised_residual=None, left_out="gauge knocked")
    assert tables.reading_rows([left])[0][-1] == "not fitted: gauge knocked"


def test_a_reading_shows_from_which_error_on_it_would_be_found(view_of):
    reading = replace(view_of("example").calibration.girders[0].readings[1], minimal_detectable=0.42)
    assert tables.reading_rows([reading])[0][7] == "0.420 mm"
    assert (
        tables.reading_rows([replace(reading, minimal_detectable=None)])[0][7]
        == "not determined: nothing checks it"
    )


def test_cautions_stand_under_the_part_of_the_work_that_raised_them_first(view_of):
    view = view_of("example")
    again = replace(view.assessment, cautions=[*view.calibration.cautions, *view.assessment.cautions])
    groups = cautions.of_page(replace(view, assessment=again))
    assert [group.name for group in groups] == [
        "On the readings and their fit",
        "On the assessment",
        "On the years",
        "Besides",
    ]
    said = [caution for group in groups for caution in group.said]
    assert len(said) == len(set(said))
    assert groups[0].said == view.calibration.cautions


def test_the_page_holds_the_tables_and_a_drawing_for_each_pad(view_of, page_of):
    html, view = page_of("example"), view_of("example")
    for caption in (
        "Seats of girder north",
        "What moved at each pad of girder north",
        "Explanations of the readings",
    ):
        assert caption in html
    drawn = sum(len(plane.pairs(fit)) for fit in view.calibration.girders)
    assert html.count("Pad and seat at ") >= drawn > 0
    assert render(view) == html
