"""Continuous beams of equal spans and constant EI against printed coefficients.

Sources: standard continuous-beam coefficients as in the AISC Manual of Steel Construction (continuous
spans); Hicks, Civil Engineering Formulas, Table 2.1, p. 50. Status of each row: `seen` in a stored copy,
`mem` from memory, `mem_late` written down after a recomputation was on screen, therefore derived.
Units: wL, wL^2, wL^4/EI for uniform loads; P, PL, PL^3/EI for a load at midspan.
"""

from __future__ import annotations

import csv

import numpy as np
import pytest

from assess.loads import LoadCase
from tests.published.beams import DATA, Solved, half_unit

with (DATA / "continuous_equal_spans.csv").open(encoding="utf-8") as file:
    ROWS = list(csv.DictReader(file))
NAMES = [f"{row['spans']} spans, {row['load']} on {row['loaded_spans']}, {row['source']}" for row in ROWS]
EACH = pytest.mark.parametrize("row", ROWS, ids=NAMES)


def loaded(row: dict[str, str]) -> list[int]:
    return [int(span) - 1 for span in row["loaded_spans"].split("+")]


def solved(row: dict[str, str]) -> Solved:
    n = int(row["spans"])
    if row["load"] == "udl":
        loads = LoadCase(uniforms=tuple((float(s), s + 1.0, 1.0) for s in loaded(row)))
    else:
        loads = LoadCase(points=tuple((s + 0.5, 1.0) for s in loaded(row)))
    return Solved([1.0] * n, [1.0] * n, loads)


def printed_tolerance(row: dict[str, str], printed: str) -> float:
    """Rounding of the last place, 0.0006 for three-figure rows of four spans (0.928 is cut, not rounded).

    Rows whose values are exact decimals or fractions are held to 1e-9.
    """
    if row["spans"] == "4":
        return 6e-4 if len(printed.partition(".")[2]) <= 3 else half_unit(printed)
    return 1e-9


@EACH
def test_reactions(row: dict[str, str]) -> None:
    for printed, value in zip(row["pub_R"].split(), solved(row).reactions, strict=True):
        assert value == pytest.approx(float(printed), abs=printed_tolerance(row, printed))


@EACH
def test_support_moments(row: dict[str, str]) -> None:
    supports = np.arange(1.0, int(row["spans"]))
    values = solved(row).at("moment", supports)
    for printed, value in zip(row["pub_Msupport"].split(), values, strict=True):
        assert value == pytest.approx(float(printed), abs=printed_tolerance(row, printed))


@EACH
def test_greatest_span_moments(row: dict[str, str]) -> None:
    # printed rounded: half a unit of the last place
    beam = solved(row)
    which = loaded(row) if row["loaded_spans"] == "1+3" else range(int(row["spans"]))
    # a row that prints fewer values than spans prints the first ones
    for span, printed in zip(which, row["pub_Mspan"].split(), strict=False):
        x = span + np.linspace(0.0, 1.0, 2001)
        assert beam.at("moment", x).max() == pytest.approx(float(printed), abs=half_unit(printed) + 1e-6)


@EACH
def test_greatest_deflection(row: dict[str, str]) -> None:
    # the printed figure where there is one (rounded), and a recomputed one with six places (derived)
    beam = solved(row)
    x = np.linspace(0.0, float(row["spans"]), 2001 * int(row["spans"]))
    value = beam.at("deflection", x).max()
    if row["pub_max_defl"]:
        assert value == pytest.approx(float(row["pub_max_defl"]), abs=half_unit(row["pub_max_defl"]))
    assert value == pytest.approx(float(row["calc_max_defl"]), abs=6e-7)


@EACH
def test_recomputed_reactions_and_moments(row: dict[str, str]) -> None:
    # derived by an independent method, printed to five places
    beam = solved(row)
    supports = np.arange(1.0, int(row["spans"]))
    reactions = [float(value) for value in row["calc_R"].split()]
    moments = [float(value) for value in row["calc_Msupport"].split()]
    assert beam.reactions == pytest.approx(reactions, abs=5.1e-6)
    assert beam.at("moment", supports) == pytest.approx(moments, abs=5.1e-6)


def test_where_two_equal_spans_sag_most() -> None:
    # recomputed place of the greatest deflection, .422 of the span (derived, three places)
    beam = solved(ROWS[0])
    x = np.linspace(0.0, 1.0, 10001)
    assert x[beam.at("deflection", x).argmax()] == pytest.approx(0.422, abs=6e-4)


# Hicks, Table 2.1, p. 50 (seen): shear on each side of every support, as fractions of wL, left half.
# Exact fractions, hence 1e-12.
SHEARS = {
    3: ([4, 6, 5], 10),
    4: ([11, 17, 15, 13, 13], 28),
    5: ([15, 23, 20, 18, 19], 38),
    7: ([56, 86, 75, 67, 70, 72, 71], 142),
}


@pytest.mark.parametrize("spans", SHEARS)
def test_shear_fractions_on_both_sides_of_supports(spans: int) -> None:
    numbers, denominator = SHEARS[spans]
    beam = Solved([1.0] * spans, [1.0] * spans, LoadCase(uniforms=((0.0, float(spans), 1.0),)))
    for order, number in enumerate(numbers):
        support, side = (order + 1) // 2, 1 if order % 2 == 0 else -1
        shear = beam.at("shear", float(support), side)[0]
        assert abs(shear) == pytest.approx(number / denominator, abs=1e-12)
        assert np.sign(shear) == side
