"""Raw readings as they stand in a visit file and in a table."""

from __future__ import annotations

import datetime as dt
import math
import re
from collections.abc import Callable
from pathlib import Path

import pytest

from db.documents import ReadingDoc, VisitDoc
from db.exchange import check_visit, parse_visit, read_bridge, visit_queries
from db.exchange.readings_csv import parse_readings
from tests.db.conftest import changed, line_of

VALUE = 'value = "1.42 mm"'
REPEATS = 'repeats = ["1.41 mm", "1.43 mm", "1.45 mm"]'
ZEROS = 'zero_before = "0.01 mm"\nzero_after = ["0.02 mm", "0.04 mm"]'
GAPS = 'gaps = ["30.0 mm", "30.2 mm", "29.5 mm", "29.7 mm"]'
BEFORE = 'gaps_before = ["31.0 mm", "31.2 mm", "31.0 mm", "31.2 mm"]'
AFTER = 'gaps_after = ["31.0 mm", "31.2 mm", "30.96 mm", "31.16 mm"]'
SPACING = 'corner_spacing = "320 mm"'
CORNERS = f"{GAPS}\n{BEFORE}\n{SPACING}"
MARK = '[[benchmark]]\nid = "BM 2"\nsd = "1 mm"\n'
MANY = '"1 mm", ' * 1001
LEVEL = '[[reading]]\ngirder = "north"\nstate = "permanent"\nquantity = "settlement"\nsupport = "pier 1"\n'

BAD = {
    "value and repeats": (VALUE, f"{VALUE}\n{REPEATS}", "reading 1, repeats: it cannot stand beside value"),
    "repeats that are one text": (VALUE, 'repeats = "1.4 mm"', "reading 1, repeats: it is not a list"),
    "no repeats": (VALUE, "repeats = []", "reading 1, repeats: it is empty"),
    "repeats without units": (VALUE, "repeats = [1.41, 1.43]", "reading 1, repeats, 1: 1.41 is a number"),
    "a repeat in kN": (VALUE, 'repeats = ["1.41 mm", "1 kN"]', "reading 1, repeats, 2"),
    "zeros without a value": (VALUE, ZEROS, "reading 1, value: it is missing"),
    "a zero that is a number": (
        VALUE,
        f"{VALUE}\nzero_before = 0",
        "reading 1, zero_before: it is not a list",
    ),
    "endless repeats": (VALUE, f"repeats = [{MANY}]", "1001 repeats are too many"),
    "repeats by a slip": (VALUE, 'repeats = ["142 m", "143 m"]', 'reading 1, repeats: "142.50'),
    "gaps of a deflection": (
        'at = "6 m"\nvalue = "2.31 mm"',
        f'at = "6 m"\n{CORNERS}',
        "reading 2, gaps: a deflection has no gaps",
    ),
    "spacing of a deflection": ('at = "6 m"', f'at = "6 m"\n{SPACING}', "reading 2, corner_spacing"),
    "gaps beside a value": (VALUE, f"{VALUE}\n{CORNERS}", "reading 1, value: it cannot stand beside gaps"),
    "gaps beside repeats": (VALUE, f"{REPEATS}\n{CORNERS}", "reading 1, repeats: it cannot stand beside"),
    "gaps beside zeros": (VALUE, f"{ZEROS}\n{CORNERS}", "reading 1, zero_before: it cannot stand beside"),
    "gaps without those before": (VALUE, GAPS, "reading 1, gaps_before: it is missing"),
    "gaps before alone": (VALUE, BEFORE, "reading 1, gaps: it is missing"),
    "three gaps": (
        VALUE,
        changed(CORNERS, '"30.0 mm", ', ""),
        "gaps: it holds 3 gaps, a pad has four corners",
    ),
    "five gaps before": (
        VALUE,
        changed(CORNERS, '["31.0 mm"', '["31.0 mm", "31 mm"'),
        "gaps_before: it holds 5",
    ),
    "corners far apart": (VALUE, changed(CORNERS, "320 mm", "320 m"), "reading 1, corner_spacing: 320 m"),
    "corners at one place": (VALUE, changed(CORNERS, "320 mm", "0 mm"), "reading 1, corner_spacing"),
    "gaps of no pad": (VALUE, changed(CORNERS, '"30.0 mm"', '"-30 m"'), "reading 1, gaps"),
    "zeros of the permanent state": (
        "[[reading]]",
        f'{LEVEL}value = "4 mm"\nsd = "1 mm"\nzero_after = "0 mm"\n[[reading]]',
        "reading 1, zero_after: the permanent state is not loaded and unloaded",
    ),
    "gaps after in the permanent state": (
        "[[reading]]",
        f'{LEVEL.replace("settlement", "compression")}{CORNERS}\n{AFTER}\nsd = "1 mm"\n[[reading]]',
        "reading 1, gaps_after: the permanent state is not loaded and unloaded",
    ),
    "benchmark undefined": (
        "[[reading]]",
        f'{MARK}{LEVEL}value = "4 mm"\nsd = "1 mm"\nbenchmark = "BM 3"\n[[reading]]',
        'visit.toml, reading 1, benchmark: there is no benchmark "BM 3" (did you mean "BM 2"',
    ),
    "benchmark of a pad": (VALUE, f'{VALUE}\nbenchmark = "BM 2"', "benchmark: a compression is not levelled"),
}


@pytest.fixture
def with_values(visit_text: str) -> Callable[[str], VisitDoc]:
    """The example with other values of its compression."""
    return lambda values: parse_visit(changed(visit_text, VALUE, values), file="visit.toml")


@pytest.mark.parametrize("case", BAD)
def test_what_does_not_go_together_is_refused_by_name(case: str, visit_text: str) -> None:
    old, new, says = BAD[case]
    line = line_of(lambda: parse_visit(changed(visit_text, old, new), file="visit.toml"))
    assert line.startswith("visit.toml")
    assert says in line


def test_repeats_become_their_mean(with_values: Callable[[str], VisitDoc]) -> None:
    reading = with_values(REPEATS).readings[0]
    assert reading.value == pytest.approx(1.43e-3)
    assert reading.sd == pytest.approx(5e-5 / math.sqrt(3))
    assert (reading.value_entered, reading.sd_entered, reading.unit) == (
        "1.430 mm (mean of 3)",
        "0.0289 mm (of one 0.05 mm)",
        "mm",
    )
    assert reading.raw is not None
    assert reading.raw.repeats == pytest.approx((1.41e-3, 1.43e-3, 1.45e-3))
    assert (reading.raw.sd, reading.raw.sd_entered) == (5e-5, "0.05 mm")
    assert (reading.raw.repeatability, reading.raw.drift, reading.derived) == (None, None, False)


def test_zeros_are_taken_off_and_their_drift_is_kept(with_values: Callable[[str], VisitDoc]) -> None:
    reading = with_values(f"{VALUE}\n{ZEROS}").readings[0]
    assert reading.value == pytest.approx(1.40e-3)
    assert reading.raw is not None
    assert reading.raw.drift == pytest.approx(2e-5)
    variance = 5e-5**2 * (1.0 + (1.0 + 0.5) / 4.0) + 2e-5**2 / 12.0
    assert reading.sd == pytest.approx(math.sqrt(variance))
    assert reading.value_entered == "1.400 mm (one reading less zeros)"


def test_repeatability_is_pooled_over_the_visit_where_it_is_worse_than_claimed(visit_text: str) -> None:
    """Two lists of a quantity and unit, 2 + 3 degrees of freedom; a plain value keeps its own sd."""
    text = changed(visit_text, VALUE, 'repeats = ["1.2 mm", "1.4 mm", "1.6 mm"]')
    text += LEVEL.replace("settlement", "compression").replace("permanent", "T1")
    text += 'repeats = ["1.0 mm", "1.4 mm", "1.2 mm", "1.2 mm"]\nsd = "0.5 mm"\n'
    text += LEVEL.replace("settlement", "compression").replace("permanent", "T1")
    text += 'value = "1.3 mm"\nsd = "0.03 mm"\n'
    first, _, second, third = parse_visit(text, file="visit.toml").readings
    pooled = math.sqrt((0.08 + 0.08) / 5.0) * 1e-3
    assert first.raw is not None
    assert first.raw.repeatability == pytest.approx(pooled)
    assert first.sd == pytest.approx(pooled / math.sqrt(3.0))
    assert second.sd == pytest.approx(0.5e-3 / math.sqrt(3.0))  # the floor
    assert (third.sd, third.raw) == (3e-5, None)


def test_four_gaps_become_compression_and_rotation(with_values: Callable[[str], VisitDoc]) -> None:
    compression, rotation, deflection = with_values(CORNERS).readings
    assert (compression.value, compression.sd) == pytest.approx((1.25e-3, 5e-5 / math.sqrt(2.0)))
    assert compression.value_entered == "1.250 mm (from four gaps)"
    assert (rotation.quantity, rotation.support, rotation.state, rotation.derived) == (
        "rotation",
        "pier 1",
        "T1",
        True,
    )
    assert (rotation.value, rotation.sd) == pytest.approx((0.5 / 320, 0.05 * math.sqrt(2.0) / 320))
    assert (rotation.unit, rotation.value_entered) == ("mrad", "1.56 mrad (from four gaps)")
    assert rotation.source == "visit.toml, reading 1, rotation"
    assert deflection.quantity == "deflection"
    assert compression.raw is not None
    assert compression.raw.twist == pytest.approx(0.0, abs=1e-15)
    assert rotation.raw is not None
    assert rotation.raw.gaps == compression.raw.gaps


def test_gaps_after_unloading_halve_the_doubt_of_those_before(with_values: Callable[[str], VisitDoc]) -> None:
    compression, rotation, _ = with_values(f"{CORNERS}\n{AFTER}").readings
    assert compression.raw is not None
    assert compression.raw.drift == pytest.approx(2e-5)
    assert compression.value == pytest.approx(1.24e-3)
    assert compression.sd == pytest.approx(math.sqrt(5e-5**2 * 1.5 / 4.0 + 2e-5**2 / 12.0))
    assert rotation.raw is not None
    assert rotation.raw.drift == pytest.approx(4e-5 / 0.32)


def test_gaps_without_a_spacing_tell_no_rotation(with_values: Callable[[str], VisitDoc]) -> None:
    readings = with_values(f"{GAPS}\n{BEFORE}").readings
    assert [r.quantity for r in readings] == ["compression", "deflection"]


def test_gaps_as_built_and_now_tell_the_permanent_state(visit_text: str) -> None:
    text = visit_text + LEVEL.replace("settlement", "compression") + f'{CORNERS}\nsd = "0.1 mm"\n'
    *_, compression, rotation = parse_visit(text, file="visit.toml").readings
    assert (compression.state, rotation.state) == ("permanent", "permanent")


def test_the_unit_of_the_file_changes_nothing(with_values: Callable[[str], VisitDoc]) -> None:
    inches = {
        text: f'"{float(text) / 25.4!r} in"' for text in ("30.0", "30.2", "29.5", "29.7", "31.0", "31.2")
    }
    text = CORNERS
    for mm, inch in inches.items():
        text = text.replace(f'"{mm} mm"', inch)
    metric, imperial = with_values(CORNERS).readings, with_values(text).readings
    assert imperial[0].unit == "in"
    for one, other in zip(metric, imperial, strict=True):
        assert (other.value, other.sd) == pytest.approx((one.value, one.sd), rel=1e-9)


NAMES = (
    "girder,state,quantity,support,at,value,repeats,zero_before,zero_after,sd,unit,"
    "gaps,gaps_before,gaps_after,corner_spacing,benchmark"
)
TABLE = f"""{NAMES}
north,T1,compression,pier 1,,,1.41;1.43; 1.45,,,0.05,mm,,,,,
north,T1,compression,pier 1,,1.42,,0.01,0.02;0.04,0.05,mm,,,,,
north,T1,compression,pier 1,,,,,,0.05,mm,30.0;30.2;29.5;29.7,31.0;31.2;31.0;31.2,31.0;31.2;30.96;31.16,0.32,
north,T1,deflection,,6,2.31,,,,0.1,mm,,,,,BM 2
"""

BAD_CELLS = {
    "value and repeats": (",,1.41;", ",1.4,1.41;", "row 2, repeats: it cannot stand beside value"),
    "a repeat left out": ("1.41;1.43;", "1.41;;", "row 2, repeats: it is empty"),
    "a repeat with its unit": ("1.41;1.43;", "1.41 mm;1.43;", 'row 2, repeats: "1.41 mm" is not one number'),
    "no value at all": (",1.42,,0.01", ",,,0.01", "row 3, value: it is empty"),
    "three gaps": ("30.0;30.2;29.5;29.7", "30.0;30.2;29.5", "row 4, gaps: it holds 3 gaps"),
    "gaps without those before": ("31.0;31.2;31.0;31.2,", ",", "row 4, gaps_before: it is missing"),
    "spacing with its unit": ("0.32", "320 mm", "row 4, corner_spacing (in m)"),
    "spacing in mm": ("0.32", "320", "row 4, corner_spacing: 320 m is no distance"),
    "benchmark of a pad": ("0.32,", "0.32,BM 2", "row 4, benchmark: a compression is not levelled"),
}


def bare(reading: ReadingDoc) -> dict[str, object]:
    skipped = ("source", "unit", "sd_entered")
    return {name: value for name, value in vars(reading).items() if name not in skipped}


def test_the_table_gives_what_the_file_gives(with_values: Callable[[str], VisitDoc]) -> None:
    rows = parse_readings(TABLE, file="v.csv")
    for row, values in zip(rows[:3], (REPEATS, f"{VALUE}\n{ZEROS}", f"{CORNERS}\n{AFTER}"), strict=True):
        assert bare(row) == bare(with_values(values).readings[0])
    assert rows[3].benchmark == "BM 2"


@pytest.mark.parametrize("case", BAD_CELLS)
def test_a_wrong_cell_is_refused_by_row_and_column(case: str) -> None:
    old, new, says = BAD_CELLS[case]
    line = line_of(lambda: parse_readings(changed(TABLE, old, new), file="v.csv"))
    assert line.startswith("v.csv")
    assert says in line


def test_the_column_of_values_may_be_left_out_where_there_are_repeats() -> None:
    text = "girder,state,quantity,support,repeats,sd,unit\nnorth,T1,compression,pier 1,1.4;1.5,0.1,mm\n"
    assert parse_readings(text, file="v.csv")[0].value == pytest.approx(1.45e-3)


def test_readings_of_a_file_and_of_its_table_are_reduced_together(visit_text: str) -> None:
    text = changed(visit_text, "[visit]", '[visit]\nreadings = "v.csv"', VALUE, REPEATS)
    table = (
        "girder,state,quantity,support,repeats,sd,unit\nnorth,T1,compression,pier 1,1.4;1.5;1.4;1.5,0.01,mm\n"
    )
    readings = parse_visit(text, file="v.toml", table_text=table).readings
    raws = [r.raw for r in (readings[0], readings[2])]
    pooled = math.sqrt((0.0008 + 0.01) / 5.0) * 1e-3
    assert [raw.repeatability for raw in raws if raw is not None] == pytest.approx([pooled, pooled])


def test_sound_gaps_raise_no_query(with_values: Callable[[str], VisitDoc]) -> None:
    assert visit_queries(with_values(CORNERS)) == []


def test_a_swapped_corner_is_to_be_looked_at_again(with_values: Callable[[str], VisitDoc]) -> None:
    twisted = changed(BEFORE, '"31.0 mm", "31.2 mm", "31.0 mm"', '"31.0 mm", "32.2 mm", "31.0 mm"')
    (said,) = visit_queries(with_values(f"{GAPS}\n{twisted}"))
    assert said.startswith('gaps at "pier 1" (north), T1: one diagonal closes by 0.50 mm more')
    assert "a swapped corner?" in said
    assert said.endswith("(visit.toml, reading 1)")


def test_near_and_far_exchanged_are_to_be_looked_at_again(with_values: Callable[[str], VisitDoc]) -> None:
    gaps = 'gaps = ["33 mm", "33 mm", "29 mm", "29 mm"]\ngaps_before = ["30 mm", "30 mm", "34 mm", "34 mm"]'
    (said,) = visit_queries(with_values(gaps))
    assert "if near and far were exchanged" in said


def test_the_raw_readings_of_the_readme_are_taken() -> None:
    root = Path(__file__).parents[3]
    readme = (root / "README.md").read_text(encoding="utf-8")
    head, raw = (
        next(block for block in re.findall(r"```toml\n(.*?)```", readme, re.DOTALL) if word in block)
        for word in ("[[load_state]]", "gaps_before")
    )
    text = re.sub(r"^readings = .*$", "", head, flags=re.MULTILINE) + raw
    visit = parse_visit(text, file="visit.toml")
    assert [r.quantity for r in visit.readings[1:]] == ["deflection", "compression", "rotation", "settlement"]
    assert visit.readings[1].value == pytest.approx(2.4075e-3)
    assert visit.benchmark(visit.readings[-1].benchmark).sd == pytest.approx(3e-4)
    bridge = read_bridge(root / "sample_data" / "hollin-water.toml")
    check_visit(visit, bridge, today=dt.date(2030, 1, 1), file="visit.toml")
    assert visit_queries(visit) == []
