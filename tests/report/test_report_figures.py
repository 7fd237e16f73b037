"""The drawings: to scale, with their numbers, labels apart."""

from __future__ import annotations

import datetime as dt
import math
import re
from dataclasses import replace
from itertools import combinations

import numpy as np
import pytest

from assess.report import svg
from assess.report.figures import elevation, fan, history, moments, residuals, seats, utilisation
from assess.report.figures.layout import pack, spread
from assess.results import Fan, Share, SpanTrend


@pytest.mark.parametrize("view", ["example", "single_span", "long_names"])
def test_the_exaggeration_is_round_and_fills_the_room(view_of, view):
    girder = view_of(view).girders[0]
    per_m, room = 10.0, 60.0
    lie = seats.lie(girder)
    factor = elevation.exaggeration(girder, lie, room, per_m)
    drawn = factor * per_m / 1000.0 * max(abs(v) for v in seats.extent_mm(girder, girder.states, lie))
    assert 0.6 * room < drawn <= room
    assert f"{factor:.1e}"[:3] in {"1.0", "1.5", "2.0", "2.5", "3.0", "4.0", "5.0", "6.0", "8.0"}


def test_a_girder_that_does_not_move_has_no_exaggeration(view_of):
    girder = view_of("bare").girders[0]
    assert elevation.exaggeration(girder, seats.lie(girder), 60.0, 10.0) is None
    assert "no movement to draw" in elevation.full(girder, None, key="k", zero="west")


def test_the_girder_is_drawn_on_its_seats_and_a_seat_within_twice_its_sd_holds_its_level(view_of):
    girder = view_of("example").girders[0]
    first, second, *rest = girder.supports
    supports = [replace(first, seat_drop_mm=0.4, seat_drop_sd_mm=0.3), second, *rest]
    supports[1] = replace(second, seat_drop_mm=7.2, seat_drop_sd_mm=0.3)
    lie = seats.lie(replace(girder, supports=supports))
    places = [support.x_m for support in supports]
    assert lie.at(places[0]) == pytest.approx(0.0, abs=1e-12)
    assert lie.at(places[1]) == pytest.approx(7.2)
    assert lie.moved
    assert not seats.flat().moved


def test_the_elevation_says_its_factor_spans_ratios_and_drops(view_of):
    girder = view_of("example").girders[0]
    drawn = elevation.full(girder, girder.states[1], key="k", zero="west abutment")
    for words in (
        "movements × 1000",
        "12 m",
        "0.410 × nominal",
        "(0.353 to 0.480)",
        "seat down 3.2 mm",
        "pin",
    ):
        assert words in drawn


def test_hinges_are_drawn_in_elevation_and_moments_and_named(view_of):
    girder = view_of("example").girders[0]
    hinged = replace(girder, hinges_m=[15.0, 24.25])
    for draw in (
        lambda one: elevation.full(one, one.states[1], key="k", zero="west"),
        lambda one: moments.envelopes(one, key="k", zero="west", basis="calibrated pads"),
    ):
        plain, drawn = draw(girder), draw(hinged)
        assert "hinge" in drawn
        assert "hinge" not in plain
    assert "Internal hinges at 15.00 m, 24.25 m." in elevation.full(hinged, None, key="k", zero="west")


def test_a_hinged_girder_lies_on_its_seats_as_the_mechanics_say(view_of):
    girder = view_of("example").girders[0]
    supports = [
        replace(s, seat_drop_mm=5.0 if i == 1 else 0.0, seat_drop_sd_mm=0.1)
        for i, s in enumerate(girder.supports)
    ]
    x = np.array([0.0, 12.0, 15.0, 24.0, 27.0, 39.0])
    by_drop = np.zeros((x.size, 4))
    by_drop[:, 1] = [0.0, 1.0, 1.25, 0.0, 0.0, 0.0]
    lie = seats.lie(replace(girder, supports=supports, hinges_m=[15.0, 24.0], lie=(x, by_drop)))
    assert lie.at(np.array([6.0, 15.0, 19.5, 30.0])) == pytest.approx([2.5, 6.25, 3.125, 0.0])


def test_a_pad_is_drawn_as_wide_as_it_is_stiff_and_no_wider_than_twice(view_of):
    girder = view_of("example").girders[0]

    def widest(ratio: float) -> float:
        pads = [replace(s, ratio=ratio) if s.kind == "pad" else s for s in girder.supports]
        drawn = elevation.full(replace(girder, supports=pads), None, key="k", zero="w")
        spans = []
        for path in re.findall(r'd="([^"]+)"[^>]* style="fill: #0b6e6e', drawn):
            xs = [float(x) for x in re.findall(r"[ML] (-?[\d.]+) ", path)]
            spans.append(max(xs) - min(xs))
        return max(spans)

    assert widest(0.5) == pytest.approx(0.5 * widest(1.0), abs=0.03)
    assert widest(1.5) == pytest.approx(1.5 * widest(1.0), abs=0.03)
    assert widest(2.0) == pytest.approx(widest(7.0), abs=0.03)


def test_peaks_are_found_in_every_span_and_at_every_pier(view_of):
    girder = view_of("example").girders[0]
    sagging, hogging = moments.peaks(girder)
    assert [round(p.x_m, 2) for p in hogging] == [12.0, 27.0]
    assert len(sagging) == 3
    assert all(p.moment < 0 for p in hogging)
    drawn = moments.envelopes(girder, key="k", zero="west")
    for peak in (*sagging, *hogging):
        assert f"at {peak.x_m:.2f} m" in drawn


def test_capacity_is_an_edge_and_never_a_filled_zone(view_of):
    girder = view_of("example").girders[0]
    unknown = np.full(girder.moments.x_m.shape, np.nan)
    without = replace(
        girder, moments=replace(girder.moments, capacity_sagging=unknown, capacity_hogging=unknown)
    )
    fills = [
        len(re.findall(r"fill: #(?!ffffff)", moments.envelopes(g, key="k", zero="west")))
        for g in (girder, without)
    ]
    assert fills[0] == fills[1]
    assert "capacity not given" in moments.envelopes(without, key="k", zero="west")


@pytest.mark.parametrize("count", [1, 2, 4, 9, 14, 25])
def test_no_block_lies_over_another_nor_over_a_leader(count):
    anchors = sorted(math.fmod(97.0 * i, 450.0) + 20.0 for i in range(count))
    texts = [(f"support {i}", "0.912 × nominal", "(0.853 to 0.980)") for i in range(count)]
    blocks = pack(anchors, texts, low=0.0, high=510.0)
    for a, b in combinations(blocks, 2):
        if a.row == b.row:
            assert abs(a.centre - b.centre) >= a.half + b.half - 1e-9
    for block in blocks:
        assert block.centre - block.half >= -1e-9
        assert block.centre + block.half <= 510.0 + 1e-9
        for row, x in enumerate(block.passes):
            for other in blocks:
                if other.row == row:
                    assert abs(other.centre - x) >= other.half - 4.0 - 1e-9


def test_blocks_with_room_stand_at_their_places():
    assert spread([50.0, 200.0, 400.0], [20.0, 20.0, 20.0], low=0.0, high=500.0) == [50.0, 200.0, 400.0]
    assert spread([50.0, 50.0], [20.0, 20.0], low=0.0, high=500.0) == [30.0, 70.0]


def test_all_pads_of_a_girder_share_axes_that_hold_every_point(view_of):
    histories = view_of("example").girders[0].histories
    (start, end), (low, high) = history.common_axes(histories)
    for pad in histories:
        assert start < min(d.toordinal() for d in pad.dates)
        assert end > max(d.toordinal() for d in pad.line_dates)
        assert np.all(np.log10(pad.low95) > low)
        assert np.all(np.log10(pad.high95) < high)


def test_a_pad_told_by_the_assumption_is_open_and_has_a_word(view_of):
    pad = view_of("example").girders[0].histories[0]
    limits = history.common_axes([pad])
    assert "told by the assumption" in history.plot(pad, limits, key="k")
    sure = replace(pad, data_share=np.full(len(pad.dates), 0.9))
    assert "assumption" not in history.plot(sure, limits, key="k")


def test_a_winter_visit_has_its_temperature_written(view_of):
    pad = view_of("example").girders[0].histories[0]
    drawn = history.plot(pad, history.common_axes([pad]), key="k")
    assert ">−3 °C<" in drawn
    assert ">14 °C<" not in drawn


def test_a_fan_ends_where_it_is_wider_than_tenfold(view_of):
    pad = view_of("example").girders[0].histories[0]
    wide = pad.fan_high.copy()
    wide[12:] = 20.0 * pad.fan_low[12:]
    limits = history.common_axes([pad])
    assert "forecast ends 2032" in history.plot(pad, limits, key="k")
    assert "forecast ends 2027" in history.plot(replace(pad, fan_high=wide), limits, key="k")


def test_one_visit_without_a_law_is_drawn(view_of):
    pad = view_of("example").girders[0].histories[0]
    none = np.array([])
    one = replace(
        pad,
        dates=[dt.date(2024, 5, 14)],
        ratio=np.array([0.9]),
        low95=np.array([0.8]),
        high95=np.array([1.0]),
        data_share=np.array([0.9]),
        temperature_degC=[None],
        line_dates=[],
        line=none,
        fan_low=none,
        fan_high=none,
        last_visit=dt.date(2024, 5, 14),
    )
    assert "no law: too few visits" in history.plot(one, history.common_axes([one]), key="k")


def test_residuals_name_both_limits_the_suspect_and_the_unchecked(view_of):
    readings = view_of("example").calibration.girders[0].readings
    drawn = residuals.plot(readings, key="k", title="t")
    for words in ("+3.29", "−3.29", ">suspect<", "not determined: unchecked", "T1: deflection at 33.00 m"):
        assert words in drawn
    assert drawn.count(">suspect<") == sum(r.suspect for r in readings)


def test_the_bar_is_filled_in_proportion_and_framed_dashed_when_unknown():
    def filled(utilisation: float) -> float:
        drawn = utilisation_mark(utilisation)
        match = re.search(r'width="([\d.]+)" height="11" fill="#', drawn)
        assert match is not None
        return float(match.group(1))

    def utilisation_mark(value: float | None) -> str:
        return utilisation.mark(value, None, None, key="k", name="sagging, span 1")

    assert filled(1.0) == pytest.approx(2.0 * filled(0.5))
    assert "stroke-dasharray" in utilisation_mark(None)
    assert "stroke-dasharray" not in utilisation_mark(0.5)
    assert '<path d="M' in utilisation_mark(4.0)
    assert filled(4.0) == filled(1.3)


@pytest.mark.parametrize("day", [dt.date(2032, 1, 1), dt.date(2032, 1, 9), dt.date(2032, 12, 31)])
def test_the_years_under_a_pad_are_not_cut_at_the_edge_of_the_paper(day: dt.date) -> None:
    limits = ((float(dt.date(2022, 1, 1).toordinal()), float(day.toordinal())), (-0.7, 0.2))
    with svg.drawing(svg.SMALL_WIDTH, 160.0) as figure:
        axes = history._axes(figure, limits)
        figure.canvas.draw()
        years = [label for label in axes.get_xticklabels() if label.get_text()]
        assert years[-1].get_text() == "2032"
        assert max(label.get_window_extent().x1 for label in years) <= figure.bbox.x1


def carried(effect="sagging", span=1, support=None, top=1.1):
    """A row whose median climbs from 0.85."""
    climb = np.linspace(0.0, 1.0, 5)
    median = 0.85 + 0.1 * climb
    lines = {
        name: (median + k * (top - 0.95) * climb).tolist()
        for name, k in (("low95", -1.0), ("low50", -0.4), ("median", 0.0), ("high50", 0.4), ("high95", 1.0))
    }
    return SpanTrend(
        girder="north",
        effect=effect,
        span=span,
        support=support,
        utilisation_now=0.85,
        status="within",
        probability_over_1_now=0.0,
        median_crossing=None,
        earliest_5_percent=dt.date(2032, 3, 1),
        fan=Fan(
            dates=[dt.date(2026 + 3 * i, 5, 1) for i in range(5)],
            probability_over_watch=[0.0, 0.2, 0.5, 0.7, 0.8],
            probability_over_limit=[0.0, 0.01, 0.06, 0.15, 0.25],
            **lines,
        ),
        shares_on=dt.date(2035, 5, 1),
        shares=[Share(what="pad", support="pier 1", share=0.62), Share(what="loss", support=None, share=0.3)],
    )


def test_a_fan_says_its_numbers_and_what_they_come_from():
    drawn = fan.plot(carried(), key="k")
    for words in (
        "Utilisation forecast, sagging in span 1",
        "over 0.9 by then 80%, over 1 25%",
        "5 % over 1 by 2032-03-01",
        "the pad at pier 1 62%, section losses 30%",
        "watch",
        "limit",
    ):
        assert words in drawn


def test_the_section_of_each_kind_that_comes_highest_is_drawn():
    low, high = carried(span=1, top=1.0), carried(span=2, top=1.2)
    shear = carried(effect="shear", span=1, support="pier 1")
    still = replace(carried(effect="hogging", span=None, support="pier 1"), fan=None)
    assert fan.governing([low, still, shear, high]) == [high, shear]
    with pytest.raises(ValueError, match="no fan"):
        fan.plot(still, key="k")
