"""Pads from geometry in a bridge file: what is read, and what is refused."""

from __future__ import annotations

import pytest

from db.documents import BridgeDoc, SupportDoc
from db.errors import BedstoneError
from db.exchange import parse_bridge
from tests.db.conftest import changed

PAD = """  [girder.support.pad]
    shape = "rectangular"
    length = "300 mm"
    width = "400 mm"
    side_cover = "6 mm"
    layers = 5
    layer_thickness = "8 mm"
    top_bottom_cover = "2.5 mm"
    plate_thickness = "3 mm"
    height = "63 mm"
    shear_modulus = "0.9 MPa"
    bulk_modulus = "2000 MPa"
    compound = "natural rubber"
    formula = "en1337-3"
    batch = "piers"
    batch_correlation = 0.5
    shear_modulus_tolerance = 0.15
    height_tolerance = "2 mm"
    fixed = true
    limits = "aashto-lrfd"
      [girder.support.pad.limit]
      total_pressure = "10 MPa"
      live_compression = "3 mm"
      least_permanent_pressure = "2 MPa"
"""


def with_pad(text: str, *pairs: str, pad: str = PAD) -> str:
    """The contract's bridge, its first support by geometry."""
    return changed(text, '  stiffness = "150 kN/mm"', "", "  stiffness_cv = 0.3\n", changed(pad, *pairs))


def support(text: str, *pairs: str) -> SupportDoc:
    document: BridgeDoc = parse_bridge(with_pad(text, *pairs), file="bridge.toml")
    return document.girders[0].supports[0]


def test_a_pad_is_read_in_si(bridge_text: str):
    found = support(bridge_text)
    assert found.stiffness is None
    assert found.stiffness_cv is None
    pad = found.pad
    assert pad is not None
    assert (pad.length, pad.width, pad.diameter) == (0.3, 0.4, None)
    assert (pad.side_cover, pad.layers, pad.layer_thickness, pad.top_bottom_cover) == (
        0.006,
        5,
        0.008,
        0.0025,
    )
    assert (pad.shear_modulus, pad.bulk_modulus, pad.hardness) == (
        pytest.approx(900.0),
        pytest.approx(2e6),
        None,
    )
    assert (pad.batch, pad.batch_correlation, pad.fixed, pad.limits) == ("piers", 0.5, True, "aashto-lrfd")
    assert dict(pad.own_limits) == {
        "total pressure": pytest.approx(1e4),
        "live compression": pytest.approx(0.003),
    }
    assert pad.least_permanent_pressure == pytest.approx(2000.0)


def test_the_default_formula_is_named(bridge_text: str):
    pad = support(bridge_text, '    formula = "en1337-3"\n', "").pad
    assert pad is not None
    assert pad.formula == "en1337-3"


@pytest.mark.parametrize(
    ("written", "compound"),
    [("NR", "natural rubber"), ("CR", "chloroprene"), ("polychloroprene", "chloroprene")],
)
def test_compounds_have_their_short_names(bridge_text: str, written: str, compound: str):
    pad = support(bridge_text, '"natural rubber"', f'"{written}"').pad
    assert pad is not None
    assert pad.compound == compound


def test_inches_and_ksi_are_read(bridge_text: str):
    pad = support(bridge_text, '"300 mm"', '"12 in"', '"0.9 MPa"', '"0.130 ksi"').pad
    assert pad is not None
    assert pad.length == pytest.approx(0.3048)
    assert pad.shear_modulus == pytest.approx(0.130 * 6894.757)


def test_a_stiffness_may_stand_beside_the_geometry(bridge_text: str):
    text = changed(bridge_text, "  stiffness_cv = 0.3\n", PAD)
    found = parse_bridge(text, file="bridge.toml").girders[0].supports[0]
    assert found.stiffness == pytest.approx(150e3)
    assert found.pad is not None


BAD = {
    "length as a force": ('"300 mm"', '"300 kN"', "pad, length", "no unit of length"),
    "length as a number": ('"300 mm"', "300", "pad, length", "a number without a unit"),
    "length in metres": ('"300 mm"', '"300 m"', "pad, length", "is no side of a pad"),
    "negative cover": ('"6 mm"', '"-6 mm"', "pad, side_cover", "is negative"),
    "negative rubber": ('"2.5 mm"', '"-2.5 mm"', "pad, top_bottom_cover", "is negative"),
    "cover eats the plan": ('"6 mm"', '"150 mm"', "pad, side_cover", "leave nothing of a side of 300 mm"),
    "layer thicker than the plan": ('"8 mm"', '"200 mm"', "pad, layer_thickness", "too thick for a plan"),
    "steel thicker than the pad": (
        '"3 mm"',
        '"12 mm"',
        "pad, height",
        "72 mm of plates are thicker than the pad (63 mm)",
    ),
    "layers that do not fill the pad": ("layers = 5", "layers = 4", "pad, height", "do not fill the pad"),
    "rubber thicker than the pad": ('"63 mm"', '"40 mm"', "pad, height", "are thicker than the pad (40 mm)"),
    "no layers": ("layers = 5", "layers = 0", "pad, layers", "is not a count"),
    "half a layer": ("layers = 5", "layers = 2.5", "pad, layers", "is not a count"),
    "no thickness": ('    layer_thickness = "8 mm"\n', "", "pad, layer_thickness", "it is missing"),
    "shear modulus in GPa": ('"0.9 MPa"', '"0.9 GPa"', "pad, shear_modulus", "check the unit"),
    "both": (
        '    shear_modulus = "0.9 MPa"',
        '    shear_modulus = "0.9 MPa"\n    hardness = 60',
        "pad, hardness",
        "too",
    ),
    "neither": ('    shear_modulus = "0.9 MPa"\n', "", "pad, shear_modulus", "neither it nor the hardness"),
    "diameter of a rectangle": ('"rectangular"', '"circular"', "pad, length", "a circular pad has none"),
    "unknown shape": ('"rectangular"', '"oval"', "pad, shape", '"oval" is not known here'),
    "unknown formula": ('"en1337-3"', '"en1337"', "pad, formula", 'did you mean "en1337-3"'),
    "unknown compound": ('"natural rubber"', '"leather"', "pad, compound", '"leather" is not known here'),
    "unknown field": ("layers = 5", "layer = 5", "pad", 'unknown field "layer" (did you mean "layers"'),
    "correlation without a batch": (
        '    batch = "piers"\n',
        "",
        "pad, batch_correlation",
        "belongs to no batch",
    ),
    "correlation of one": (
        "batch_correlation = 0.5",
        "batch_correlation = 1.0",
        "batch_correlation",
        "no correlation",
    ),
    "tolerance as large as the thing": ("0.15", "0.6", "pad, shear_modulus_tolerance", "no tolerance"),
    "fixed as text": ("fixed = true", 'fixed = "yes"', "pad, fixed", "neither true nor false"),
    "unknown limit": ("total_pressure", "mean_pressure", "pad, limit", 'unknown field "mean_pressure"'),
}


@pytest.mark.parametrize(("old", "new", "where", "told"), BAD.values(), ids=BAD)
def test_a_pad_that_cannot_be_is_refused_in_one_line(
    bridge_text: str, old: str, new: str, where: str, told: str
):
    with pytest.raises(BedstoneError) as caught:
        support(bridge_text, old, new)
    line = str(caught.value)
    assert line.startswith('bridge.toml, girder "north", support 1')
    assert where in line
    assert told in line
    assert "\n" not in line
    assert caught.value.remedy


def test_a_pin_has_no_pad(bridge_text: str):
    text = changed(bridge_text, '  kind = "pin"', f'  kind = "pin"\n{PAD}')
    with pytest.raises(BedstoneError, match="a pin holds its level and has none"):
        parse_bridge(text, file="bridge.toml")
