"""The live load drawn where it governs."""

from __future__ import annotations

import re
from dataclasses import replace
from itertools import pairwise

import pytest

from assess.report import svg
from assess.report.figures import moments, silhouette
from assess.results import LoadStand
from tests.report.example_view import example

STAND = LoadStand(
    effect="hogging",
    x_m=12.0,
    live_kNm=-900.0,
    name="four axles and uniform load",
    axles=[(15.0, 125.0), (16.6, 125.0), (18.2, 125.0), (19.8, 125.0)],
    stretches=[(0.0, 11.5, 40.0), (20.6, 27.0, 40.0)],
    towards="larger x",
)


def drawn(*stands: LoadStand) -> str:
    girder = replace(example().girders[0], stands=list(stands))
    return moments.envelopes(girder, key="k", zero="west")


def wheels(page: str) -> int:
    return len(re.findall(r"stroke-width: 1.1", page))


def test_words_say_what_stands_where() -> None:
    assert silhouette.in_words(STAND) == (
        "hogging at 12.00 m: 4 axles, 500 kN, 15.0 to 19.8 m; 40.0 kN/m on 0.0 to 11.5 m, 20.6 to 27.0 m, "
        "running to larger x"
    )
    alone = replace(STAND, axles=[(15.0, 80.0)], stretches=[], towards="")
    assert silhouette.in_words(alone) == "hogging at 12.00 m: 1 axle, 80.0 kN, 15.00 m"


def test_every_stand_adds_a_strip_and_its_words() -> None:
    bare, one, two = drawn(), drawn(STAND), drawn(STAND, replace(STAND, effect="sagging"))
    heights = [float(re.search(r'viewBox="0 0 [\d.]+ ([\d.]+)"', page).group(1)) for page in (bare, one, two)]  # type: ignore[union-attr]
    each = silhouette.strip_height(STAND, svg.FULL_WIDTH - 40.0)
    assert [b - a for a, b in pairwise(heights)] == pytest.approx([each, each], abs=0.1)
    assert "Live load for hogging at 12.00 m: 4 axles" in one
    assert "Live load for" not in bare


def test_long_words_break_between_their_parts_and_none_is_cut() -> None:
    told = silhouette.lines(STAND, 200.0)
    assert len(told) > 1
    assert " ".join(told) == silhouette.in_words(STAND)
    assert max(svg.text_width(line) for line in told) <= 200.0
    assert silhouette.strip_height(STAND, 200.0) > silhouette.strip_height(STAND, 2000.0)


def test_a_wheel_stands_for_every_axle() -> None:
    fewer = replace(STAND, axles=STAND.axles[:2])
    assert wheels(drawn(STAND)) - wheels(drawn(fewer)) == 2
