"""Trigger readings: put back as readings, they give the threshold."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from assess import workflow
from assess.capacity import rows
from assess.results import SectionResult, TriggerReading, TriggersResult
from assess.workflow import assessing
from assess.workflow.cautions import section_name
from tests.workflow.conftest import call, new_record
from tests.workflow.invented import BRIDGE, PADS, bridge_text, model, write_visit

RATIOS = [0.9, 0.6, 1.1]
SETTLED = {"pier 1": 2.0, "pier 2": 3.0}
EXACT = workflow.Options(prior=False, unknowns=("pads",))


@pytest.fixture(autouse=True)
def few_draws(monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing here hangs on how many draws make a band."""
    monkeypatch.setattr(assessing, "DRAWS", 50)
    monkeypatch.setattr(rows, "_SAMPLE", 4)


def weaker(folder: Path) -> Path:
    """The contract's bridge with capacities that are nearly used up, so that there is something to reach."""
    text = bridge_text()
    for old, new in (
        ('"5100 kN m"', '"2200 kN m"'),
        ('"4700 kN m"', '"2200 kN m"'),
        ('"6000 kN m"', '"2350 kN m"'),
        ('"6200 kN m"', '"2500 kN m"'),
        ('"1900 kN"', '"1250 kN"'),
        ('"2100 kN"', '"1250 kN"'),
    ):
        assert old in text
        text = text.replace(old, new)
    path = folder / "weaker.toml"
    path.write_text(text)
    return path


def visited(folder: Path, ratios: list[float], settled: dict[str, float], name: str = "one.sqlite") -> str:
    url = new_record(folder, name)
    workflow.add_bridge(url, weaker(folder))
    place = folder / name.replace(".", "-")
    place.mkdir()
    workflow.log_visit(url, write_visit(place, "2024-05-14", ratios, seed=None, settled=settled))
    workflow.calibrate(url, "quillmere", options=EXACT)
    return url


@pytest.fixture(scope="module")
def url(tmp_path_factory: pytest.TempPathFactory) -> str:
    """A record with the weaker bridge visited and calibrated; only read from."""
    return visited(tmp_path_factory.mktemp("triggers"), RATIOS, SETTLED)


@pytest.fixture(scope="module")
def found(url: str) -> TriggersResult:
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(rows, "_SAMPLE", 4)
        return workflow.triggers(url, "quillmere")


def section_of(url: str, name: str) -> SectionResult:
    sections = workflow.assess(url, "quillmere").girders[0].sections
    return next(one for one in sections if section_name(one.effect, one.span, one.support) == name)


def used(url: str, name: str) -> float:
    value = section_of(url, name).calibrated.utilisation
    assert value is not None
    return value


def levels(one: TriggerReading) -> list[tuple[float, float, str, float]]:
    """(level, reading, section, pad) of the triggers that are there."""
    found = [
        (0.9, one.watch_mm, one.watch_governs, one.watch_kN_per_m),
        (1.0, one.limit_mm, one.limit_governs, one.limit_kN_per_m),
    ]
    return [(a, b, c, d or np.nan) for a, b, c, d in found if b is not None and c is not None]


def test_a_compression_put_back_as_a_reading_gives_the_threshold(
    found: TriggersResult, tmp_path: Path
) -> None:
    """A visit on which that pad has changed and every reading is exact, calibrated and assessed."""
    girder = model()
    tried = 0
    for one in found.triggers:
        if one.quantity != "compression":
            continue
        for level, value, section, stiffness in levels(one)[:1]:
            tried += 1
            pad = PADS.index(one.support)
            ratios = list(RATIOS)
            ratios[pad] = stiffness / girder.nominal_stiffness[pad]
            url = visited(tmp_path, ratios, SETTLED, name=f"back-{tried}.sqlite")
            read = workflow.calibrate(url, "quillmere", options=EXACT)[0]
            shown = next(
                r
                for r in read.girders[0].readings
                if (r.state, r.quantity, r.support) == (one.state, "compression", one.support)
            )
            assert shown.observed == pytest.approx(value, rel=1e-6)
            assert used(url, section) == pytest.approx(level, rel=1e-3)
    assert tried >= 2


def test_a_seat_level_put_back_as_a_reading_gives_the_threshold(
    found: TriggersResult, tmp_path: Path
) -> None:
    tried = 0
    for one in found.triggers:
        if one.quantity != "settlement":
            continue
        for level, value, section, _ in levels(one)[-1:] if tried < 4 else []:
            tried += 1
            url = visited(tmp_path, RATIOS, SETTLED | {one.support: value}, name=f"seat-{tried}.sqlite")
            assert used(url, section) == pytest.approx(level, rel=1e-3)
    assert tried >= 3


def test_a_trigger_is_the_supposition_that_gives_it(found: TriggersResult, url: str) -> None:
    for one in found.triggers[1::5]:
        for level, value, section, stiffness in levels(one):
            line = (
                f"north/{one.support} settlement = {value:.9g} mm"
                if one.quantity == "settlement"
                else f"north/{one.support} stiffness = {stiffness:.9g} kN/m"
            )
            sections = workflow.assess(url, "quillmere", suppose=[line]).girders[0].sections
            then = {section_name(s.effect, s.span, s.support): s.supposed for s in sections}
            assert then[section] is not None
            assert then[section].utilisation == pytest.approx(level, rel=1e-4)  # type: ignore[union-attr]


def test_now_is_what_is_read_today(found: TriggersResult, tmp_path: Path) -> None:
    again = visited(tmp_path, RATIOS, SETTLED)
    read = workflow.calibrate(again, "quillmere", options=EXACT)[0].girders[0].readings
    for one in found.triggers:
        if one.quantity == "compression":
            shown = next(
                r.observed
                for r in read
                if (r.state, r.quantity, r.support) == (one.state, one.quantity, one.support)
            )
            assert one.now_mm == pytest.approx(shown, rel=1e-6)
        if one.quantity == "settlement":
            assert one.now_mm == pytest.approx(SETTLED.get(one.support, 0.0))


def test_every_support_is_looked_at_both_ways_and_nothing_is_blank(found: TriggersResult) -> None:
    seats = [(one.support, one.way) for one in found.triggers if one.quantity == "settlement"]
    assert seats == [(s.id, way) for s in model().doc.supports for way in ("down", "up")]
    pads = [(one.support, one.way) for one in found.triggers if one.quantity == "compression"]
    assert pads == [(pad, way) for pad in PADS for way in ("softer", "stiffer")]
    for one in found.triggers:
        assert (one.watch_mm is None) == (one.watch_reason is not None)
        assert (one.limit_mm is None) == (one.limit_reason is not None)
        assert one.governs == (one.limit_governs or one.watch_governs)


def test_none_in_range_is_said_with_the_range(tmp_path: Path) -> None:
    url = new_record(tmp_path, "strong.sqlite")
    workflow.log_visit(url, write_visit(tmp_path, "2024-05-14", RATIOS, settled=SETTLED))
    workflow.calibrate(url, "quillmere")
    strong = [one for one in workflow.triggers(url, "quillmere").triggers if one.quantity == "compression"]
    assert {one.limit_mm for one in strong} == {None}
    assert all("none in range: looked as far as" in (one.limit_reason or "") for one in strong)


def test_a_section_past_the_watch_is_named_apart(found: TriggersResult, url: str) -> None:
    over = {one.section for one in found.past}
    assert over == {
        section_name(s.effect, s.span, s.support)
        for s in workflow.assess(url, "quillmere").girders[0].sections
        if (s.calibrated.utilisation or 0.0) >= 0.9
    }


def test_a_named_state_is_the_one_read(url: str) -> None:
    document = call(url, "triggers", "quillmere", "--state", "T2", "--json").document
    states = {one["state"] for one in document["triggers"] if one["quantity"] != "settlement"}
    assert states == {"T2"}
    keys = {"girder", "support", "quantity", "state", "now_mm", "watch_mm", "limit_mm", "governs"}
    assert keys <= set(document["triggers"][0])
    said = call(url, "triggers", "quillmere", "--state", "T9")
    assert (said.code, len(said.err.splitlines())) == (2, 1)
    assert '"T1", "T2", "T3"' in said.err


def test_without_a_visit_only_seats_are_told(tmp_path: Path) -> None:
    url = new_record(tmp_path)
    assert BRIDGE.exists()
    found = workflow.triggers(url, "quillmere")
    assert {one.quantity for one in found.triggers} == {"settlement"}
    assert any("There is no visit" in caution for caution in found.cautions)


def test_a_card_is_written_and_its_name_checked(
    found: TriggersResult, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(workflow, "triggers", lambda *_, **__: found)
    for name in ("card.html", "card.pdf"):
        said = call("no record", "triggers", "quillmere", "-o", str(tmp_path / name))
        assert (said.code, said.out.split()[:2]) == (0, ["Wrote", "the"])
        assert (tmp_path / name).stat().st_size > 3000
    said = call("no record", "triggers", "quillmere", "-o", str(tmp_path / "card.doc"))
    assert said.code == 2
    assert "card.html or card.pdf" in said.err


def test_the_table_shows_both_ways(found: TriggersResult, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(workflow, "triggers", lambda *_, **__: found)
    out = call("no record", "triggers", "quillmere").out
    assert out.count("pad softer") == 2 * len(PADS)
    for word in (
        "pad softer",
        "seat up",
        "watch (0.9)",
        "limit (1)",
        "pier 1",
        "A trigger reading moves one pad",
    ):
        assert word in out
