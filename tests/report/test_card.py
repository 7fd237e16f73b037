"""The field card shows what the trigger readings say, on one sheet, as HTML and as PDF."""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path

import pytest

from assess.report import render_card, write_card
from assess.report.card import ROWS, card_of
from assess.report.card_pdf import draw_card, width_of, wrapped
from assess.results import PastSection, TriggerReading, TriggersResult


def reading(**changes: object) -> TriggerReading:
    values: dict[str, object] = {
        "girder": "north",
        "support": "pier 1",
        "quantity": "compression",
        "state": "T1",
        "now_mm": 0.8056,
        "watch_mm": 1.8431,
        "limit_mm": None,
        "governs": "sagging in span 1",
        "way": "softer",
        "at_m": None,
        "range_mm": 10.07,
        "watch_governs": "sagging in span 1",
        "limit_governs": None,
        "watch_reason": None,
        "limit_reason": "none in range: looked as far as 10.1 mm, the pad 20 times softer",
        "watch_kN_per_m": 2e5,
        "limit_kN_per_m": None,
    }
    return TriggerReading(**(values | changes))  # type: ignore[arg-type]


def result(triggers: list[TriggerReading]) -> TriggersResult:
    return TriggersResult(
        bridge="quillmere",
        name="Quillmere <viaduct>",
        calibration_visit=None,
        version="0.1.0",
        input_digest="ab" * 32,
        watch=0.9,
        limit=1.0,
        triggers=triggers,
        past=[PastSection(girder="north", section='hogging at "pier 1"', utilisation=0.9512, status="watch")],
        cautions=["A trigger reading moves one pad or one seat.", "Another caution."],
    )


BOTH = [
    reading(),
    reading(
        way="stiffer",
        watch_mm=None,
        limit_mm=-0.0312,
        limit_governs='hogging at "pier 1"',
        watch_governs='hogging at "pier 1"',
        limit_reason=None,
        watch_reason='in T1 the girder leaves "pier 2" there, and no reading tells it',
    ),
]


def test_both_ways_of_a_reading_stand_in_one_row() -> None:
    (row,) = card_of(result(BOTH)).girders[0].rows
    assert (row.support, row.reading, row.now) == ("pier 1", "compression, T1", "0.81")
    assert row.cells == (
        ("1.84", "sag span 1"),
        ("none to 10.1", ""),
        ("not told", "lifts off a pad"),
        ("\N{MINUS SIGN}0.03", "hog pier 1"),
    )


def test_what_is_reached_already_is_named() -> None:
    assert "0.951 (watch)" in card_of(result(BOTH)).girders[0].past


def test_the_page_is_whole_and_needs_no_network() -> None:
    page = render_card(result(BOTH))
    assert "Quillmere &lt;viaduct&gt;" in page
    assert not re.search(r"(src|href)=|url\(|@import|<script", page)
    assert page.count("<section") == 1
    for word in ("1.84", "none to 10.1", "nothing calibrated", "A trigger reading moves"):
        assert word in page


def test_many_readings_go_on_on_further_sheets() -> None:
    many = [reading(support=f"pier {i}") for i in range(ROWS + 3)]
    sheets = card_of(result(many)).sheets
    assert [sum(len(girder.rows) for girder in sheet) for sheet in sheets] == [ROWS, 3]
    assert draw_card(card_of(result(many))).count(b"/Type /Page ") == 2


def test_the_pdf_is_one_page_and_the_same_each_time(tmp_path: Path) -> None:
    path = tmp_path / "card.pdf"
    write_card(result(BOTH), path)
    content = path.read_bytes()
    assert content.startswith(b"%PDF")
    assert content.count(b"/Type /Page ") == 1
    assert draw_card(card_of(result(BOTH))) == content


def test_no_line_is_wider_than_its_column() -> None:
    text = "in T1 the girder leaves a pad there, and so no reading tells it at all"
    lines = list(wrapped(text, 120.0))
    assert " ".join(lines) == text
    assert len(lines) > 1
    assert max(width_of(line) for line in lines) <= 120.0


def test_an_old_card_stays_until_the_new_one_is_whole(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    path = tmp_path / "card.html"
    path.write_text("old")

    def broken(*_: object) -> None:
        raise OSError("full")

    monkeypatch.setattr("assess.report.files.os.fsync", broken)
    with pytest.raises(OSError, match="full"):
        write_card(result(BOTH), path)
    assert [one.name for one in tmp_path.iterdir()] == ["card.html"]
    assert path.read_text() == "old"


def test_a_seat_is_read_in_no_test_state() -> None:
    seat = replace(reading(), quantity="settlement", state="permanent", way="down")
    (row,) = card_of(result([seat])).girders[0].rows
    assert row.reading == "settlement"
    assert row.cells[2] == ("not looked at", "")
