"""Built-in factor sets against the published numbers, from memory where it says so (CHECKS: rating factor)."""

from __future__ import annotations

from pathlib import Path

import pytest

from assess.capacity import factor_set
from tests.workflow.conftest import call

# AASHTO, The Manual for Bridge Evaluation, illustrative example A1 (interior stringer): data from memory, factors
# recomputed from them: (2873 - 1.25 x 584.2) / (g_L x 957.6)
STRINGER = """
format = 1

[bridge]
id = "stringer"

[[section]]
id = "main"
E = "29000 ksi"
I = "8000 in^4"
sagging_capacity = "2873 kip ft"

[[girder]]
id = "interior"
live_share = 1.0

  [[girder.span]]
  length = "65 ft"
  section = "main"

  [[girder.support]]
  id = "west"
  kind = "pin"

  [[girder.support]]
  id = "east"
  kind = "pin"

  [[girder.permanent]]
  name = "DC1 and DC2, 584.2 kip ft at midspan"
  uniform = "1.10617751 kip/ft"     # 8 x 584.2 / 65^2

[[vehicle]]
id = "957.6 kip ft at midspan"
axles = [["0 m", "58.9292308 kip"]]      # 4 x 957.6 / 65

[[live]]
id = "HL-93 as shared out in the example"
vehicle = "957.6 kip ft at midspan"

[factors]
set = "lrfr"
"""


def rated(tmp_path: Path, text: str) -> dict[str, object]:
    path, url = tmp_path / "stringer.toml", str(tmp_path / "record.sqlite")
    path.write_text(text)
    assert call(url, "init").code == 0
    said = call(url, "bridge", "add", str(path))
    assert said.code == 0, said.err
    girder = call(url, "assess", "stringer", "--json").document["girders"][0]
    row = next(one for one in girder["sections"] if one["effect"] == "sagging")
    case: dict[str, object] = row["unyielding"]
    return case


def test_the_interior_stringer_rates_from_its_file_at_both_levels(tmp_path: Path) -> None:
    case = rated(tmp_path, STRINGER)
    assert case["rating_levels"] == pytest.approx({"inventory": 1.2787, "operating": 1.6575}, abs=6e-5)
    assert case["rating_factor"] == pytest.approx(1.2787, abs=6e-5)


def test_the_level_of_the_file_is_the_one_assessed_at(tmp_path: Path) -> None:
    case = rated(tmp_path, STRINGER + 'level = "operating"\n')
    assert case["rating_factor"] == pytest.approx(1.6575, abs=6e-5)


def test_a_member_in_fair_condition_keeps_95_per_cent(tmp_path: Path) -> None:
    case = rated(tmp_path, STRINGER + 'condition = "fair"\n')
    assert case["capacity"] == pytest.approx(0.95 * 2873.0 * 4.4482216152605 * 0.3048)
    assert case["rating_factor"] == pytest.approx((0.95 * 2873.0 - 730.25) / (1.75 * 957.6), abs=6e-5)


def test_load_factor_rating_has_its_own_factors() -> None:
    """RF = (C - 1.3 D) / (A2 L (1 + I)), A2 2.17 and 1.3: seen in seminar slides of a road administration."""
    one = factor_set("lfr")
    assert one.permanent[0] == 1.3
    assert one.levels == {"inventory": 2.17, "operating": 1.3}
    assert one.levels["inventory"] == pytest.approx(1.3 * 5.0 / 3.0, abs=0.005)


@pytest.mark.parametrize(("name", "traffic"), [("en1990-road", 1.35), ("en1990-rail", 1.45)])
def test_en_1990_sets_take_the_recommended_values(name: str, traffic: float) -> None:
    """EN 1990 annex A2, table A2.4(B), recommended values; from memory, to be confirmed."""
    one = factor_set(name)
    assert one.permanent == (1.35, 1.0)
    assert one.settlement == (1.2, 0.0)
    assert one.levels == {"traffic": traffic}
    assert one.temperature == pytest.approx(1.5 * 0.6)
