"""Rolled wide-flange shapes as three plates against their printed properties.

Sources: d, bf, tf, tw, A, Ix, Sx from Beer and Johnston, appendix "Properties of rolled-steel shapes"; all Zx and
the row W33x130 from memory of the same tables. in, in2, in3, in4.
Tolerance: a rolled shape has fillets that three plates leave out, so plates give up to 2.5 % less and never more than
the rounding of the last printed place, 0.2 %.
"""

from __future__ import annotations

import csv

import pytest

from assess.section import BuiltSection, Plate
from tests.published.beams import DATA

INCH = 0.0254

with (DATA / "w_shapes.csv").open(encoding="utf-8") as file:
    ROWS = list(csv.DictReader(file))


@pytest.mark.parametrize("row", ROWS, ids=[row["shape"] for row in ROWS])
def test_three_plates_come_within_the_fillets_of_a_rolled_shape(row: dict[str, str]):
    d, bf, tf, tw = (INCH * float(row[key]) for key in ("d_in", "bf_in", "tf_in", "tw_in"))
    section = BuiltSection(
        plates=(
            Plate(name="top", width=bf, height=tf, bottom=d - tf),
            Plate(name="web", width=tw, height=d - 2.0 * tf, bottom=tf),
            Plate(name="bottom", width=bf, height=tf, bottom=0.0),
        )
    )
    found = {
        "A_in2": section.stiffness.area / INCH**2,
        "Ix_in4": section.stiffness.second_moment / INCH**4,
        "Sx_in3": section.elastic_modulus("top") / INCH**3,
        "Zx_in3": section.equal_area.moment / INCH**3,
    }
    for key, value in found.items():
        assert -0.025 <= value / float(row[key]) - 1.0 <= 0.002, key
    assert section.elastic_modulus("bottom") == pytest.approx(section.elastic_modulus("top"))
