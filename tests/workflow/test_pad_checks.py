"""Forces on the pads that the limits are held against."""

from __future__ import annotations

import pytest

from assess.results import ReactionResult
from assess.workflow.pad_checks import loads_of


@pytest.mark.parametrize(
    ("least_live", "expected"),
    [(-36.8, 0.0), (-36.8 + 4e-14, 0.0), (-36.8 - 4e-14, 0.0), (-36.7, 0.1), (5.0, 36.8)],
)
def test_a_pad_that_live_load_just_empties_carries_nothing_and_no_rounding(
    least_live: float, expected: float
) -> None:
    reaction = ReactionResult(
        support="south",
        unyielding_permanent_kN=36.7,
        calibrated_permanent_kN=36.8,
        calibrated_live_max_kN=247.0,
        calibrated_live_min_kN=least_live,
        calibrated_factored_max_kN=480.0,
        calibrated_factored_min_kN=0.0,
    )
    assert loads_of(reaction).minimum == pytest.approx(expected, rel=1e-9, abs=0.0)
