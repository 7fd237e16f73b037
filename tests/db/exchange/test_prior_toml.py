"""What a calibration is asked for, and what is believed before it."""

from __future__ import annotations

import pytest

from db.exchange import parse_bridge
from db.prior_doc import PriorDoc
from tests.db.conftest import changed, line_of

SHARE = "live_share = 0.5"
PRIOR = """
[prior]
settlement_sd = "1 cm"
girder_sd = 0.05
share_sd = 0.2
datum_shift_sd = "3 mm"
datum_tilt_sd = "0.001 m"
gradient_sd = "9 degF"
test_gradient_sd = "0.5 K"
sustained_ratio = 0.7
sustained_sd = 0.15
"""

BAD = {
    "no list": ('unknowns = "pads"', '"pads" is not a list'),
    "unknown unknown": (
        'unknowns = ["pads", "setlements"]',
        '"setlements" is no unknown (did you mean "settlements"',
    ),
    "a number": ('unknowns = ["pads", 7]', "7 is no unknown"),
    "a list in it": ('unknowns = ["pads", ["girder"]]', "is no unknown"),
    "one twice": ('unknowns = ["pads", "girder", "girder"]', '"girder" stands in it twice'),
    "without the pads": ('unknowns = ["settlements"]', '"pads" is not among them'),
    "nothing": ("unknowns = []", '"pads" is not among them'),
}

BAD_PRIOR = {
    "unknown field": ("girder_sd", "girdr_sd", 'did you mean "girder_sd"'),
    "bare length": ('"1 cm"', "0.01", "prior, settlement_sd: 0.01 is a number without a unit"),
    "length as force": ('"3 mm"', '"3 kN"', "prior, datum_shift_sd"),
    "no doubt": ('"3 mm"', '"0 mm"', "prior, datum_shift_sd"),
    "metres by a slip": ('"1 cm"', '"20 m"', 'prior, settlement_sd: "20 m" is no such standard deviation'),
    "gradient by a slip": ('"9 degF"', '"500 K"', "prior, gradient_sd"),
    "negative": ("0.05", "-0.05", "prior, girder_sd: -0.05 is not greater than 0"),
    "per cent": ("0.05", "5", "prior, girder_sd: 5 is no standard deviation of a logarithm"),
    "text": ("0.05", '"5 %"', "prior, girder_sd"),
    "ratio over one": ("0.7", "1.1", "prior, sustained_ratio: 1.1 is greater than 1"),
    "no ratio": ("0.7", "0", "prior, sustained_ratio"),
    "a list of tables": ("[prior]", "[[prior]]", "prior: it is not a table"),
}


def test_a_girder_names_its_unknowns_in_one_order(bridge_text: str) -> None:
    text = changed(bridge_text, SHARE, f'{SHARE}\nunknowns = ["datum", "pads", "settlements"]')
    assert parse_bridge(text, file="b.toml").girders[0].unknowns == ("pads", "settlements", "datum")
    assert parse_bridge(bridge_text, file="b.toml").girders[0].unknowns is None


@pytest.mark.parametrize("case", BAD)
def test_unknowns_that_are_none_are_refused(case: str, bridge_text: str) -> None:
    line, says = BAD[case]
    said = line_of(lambda: parse_bridge(changed(bridge_text, SHARE, f"{SHARE}\n{line}"), file="b.toml"))
    assert 'girder "north", unknowns' in said
    assert says in said


def test_the_prior_is_read_in_si(bridge_text: str) -> None:
    prior = parse_bridge(bridge_text + PRIOR, file="b.toml").prior
    assert prior == PriorDoc(
        settlement_sd=0.01,
        girder_sd=0.05,
        share_sd=0.2,
        datum_shift_sd=0.003,
        datum_tilt_sd=0.001,
        gradient_sd=pytest.approx(5.0),  # type: ignore[arg-type]
        test_gradient_sd=0.5,
        sustained_ratio=0.7,
        sustained_sd=0.15,
    )


def test_what_the_prior_leaves_out_is_the_default(bridge_text: str) -> None:
    assert parse_bridge(bridge_text, file="b.toml").prior == PriorDoc()
    text = bridge_text + "\n[prior]\nshare_sd = 0.3\n"
    assert parse_bridge(text, file="b.toml").prior == PriorDoc(share_sd=0.3)


@pytest.mark.parametrize("case", BAD_PRIOR)
def test_a_prior_that_cannot_be_is_refused(case: str, bridge_text: str) -> None:
    old, new, says = BAD_PRIOR[case]
    line = line_of(lambda: parse_bridge(bridge_text + changed(PRIOR, old, new), file="b.toml"))
    assert line.startswith("b.toml")
    assert says in line
