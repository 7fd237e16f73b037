"""The geometry of a pad in a bridge file: what is read, and what is refused in one line."""

from __future__ import annotations

import pytest

from assess.pad import FORMULAS, compounds, limit_sets
from db.documents import SupportDoc
from db.errors import BedstoneError
from db.exchange import parse_bridge
from db.exchange.plausibility import bridge_queries
from db.pad_doc import PAD_COMPOUNDS, PAD_FORMULAS, PAD_LIMITS, PadDoc
from tests.db.conftest import changed

GIVEN = '  stiffness = "150 kN/mm"         # nominal; or a [girder.support.pad] table with the geometry\n'
PAD = """    [girder.support.pad]
    shape = "rectangular"
    length = "400 mm"
    width = "300 mm"
    side_cover = "4 mm"
    layers = 5
    layer_thickness = "8 mm"
    top_bottom_cover = "2.5 mm"
    plate_thickness = "3 mm"
    height = "63 mm"
    shear_modulus = "0.9 MPa"
    compound = "natural rubber"
    formula = "en1337-3"
    batch = "1989"
"""
WHERE = 'bridge.toml, girder "north", support 1 (west abutment), pad'


def read(
    text: str, *changes: tuple[str, str], support: tuple[str, str] = ("", ""), pad: str = PAD
) -> SupportDoc:
    """The west abutment of the contract's bridge, on a pad from its geometry, with changes to that table."""
    for old, new in changes:
        pad = changed(pad, old, new)
    text = changed(text, GIVEN + "  stiffness_cv = 0.3\n", support[1] + pad)
    return parse_bridge(text, file="bridge.toml").girders[0].supports[0]


def refused(text: str, *changes: tuple[str, str], **options: object) -> str:
    with pytest.raises(BedstoneError) as caught:
        read(text, *changes, **options)  # type: ignore[arg-type]
    line = str(caught.value)
    assert line.startswith("bridge.toml, ")
    assert "\n" not in line
    assert caught.value.remedy
    return line


def test_the_words_of_the_file_are_those_of_the_mechanics():
    assert PAD_FORMULAS == FORMULAS
    assert set(PAD_COMPOUNDS) == set(compounds())
    assert set(PAD_LIMITS) == set(limit_sets())


def test_a_pad_is_read_in_si(bridge_text: str):
    found = read(bridge_text)
    assert (found.stiffness, found.stiffness_cv) == (None, None)
    assert found.pad == PadDoc(
        shape="rectangular",
        length=0.4,
        width=pytest.approx(0.3),
        side_cover=0.004,
        layers=5,
        layer_thickness=0.008,
        top_bottom_cover=0.0025,
        plate_thickness=0.003,
        height=0.063,
        shear_modulus=pytest.approx(900.0),
        compound="natural rubber",
        formula="en1337-3",
        batch="1989",
    )


def test_units_of_another_system_give_the_same_pad(bridge_text: str):
    changes = (('"400 mm"', '"15.748031496 in"'), ('"0.9 MPa"', '"130.5339 psi"'))
    found = read(bridge_text, *changes).pad
    assert found.length == pytest.approx(0.4)
    assert found.shear_modulus == pytest.approx(900.0, rel=1e-5)


def test_a_circular_pad_has_a_diameter(bridge_text: str):
    changes = (
        ('"rectangular"', '"circular"'),
        ('length = "400 mm"\n    width = "300 mm"', 'diameter = "350 mm"'),
    )
    found = read(bridge_text, *changes).pad
    assert (found.length, found.width, found.diameter) == (None, None, pytest.approx(0.35))


@pytest.mark.parametrize("plan", ['length = "300 mm"\n    width = "250 mm"', 'diameter = "300 mm"'])
def test_a_plain_pad_is_one_layer(bridge_text: str, plan: str):
    rubber = 'layer_thickness = "20 mm"\n    hardness = 60\n'
    pad = f'    [girder.support.pad]\n    shape = "plain"\n    {plan}\n    {rubber}'
    found = read(bridge_text, pad=pad).pad
    assert (found.layers, found.layer_thickness, found.hardness) == (1, 0.02, 60.0)
    assert found.top_bottom_cover == 0.0


def test_a_given_stiffness_stays_the_nominal_one(bridge_text: str):
    found = read(bridge_text, support=("", '  stiffness = "150 kN/mm"\n'))
    assert (found.stiffness, found.stiffness_cv) == (pytest.approx(150e3), 0.3)
    assert found.pad is not None


def test_a_coefficient_of_variation_may_be_given_with_a_geometry(bridge_text: str):
    assert read(bridge_text, support=("", "  stiffness_cv = 0.2\n")).stiffness_cv == 0.2


def test_limits_of_the_owner_are_read(bridge_text: str):
    limits = """      [girder.support.pad.limit]
      permanent_pressure = "8 MPa"
      total_strain = "7 percent"
      live_compression = "3 mm"
      least_permanent_pressure = "2 MPa"
"""
    found = read(bridge_text, pad=PAD + '    limits = "texas"\n' + limits).pad
    assert found.limits == "texas"
    expected = {"permanent pressure": 8e3, "total strain": 0.07, "live compression": 0.003}
    assert dict(found.own_limits) == pytest.approx(expected)
    assert found.least_permanent_pressure == pytest.approx(2e3)


BAD = {
    "length as a number": ('"400 mm"', "400", "length: 400 is a number without a unit"),
    "length as a stress": ('"400 mm"', '"400 MPa"', "length:"),
    "length in metres": ('"400 mm"', '"400 m"', 'length: "400 m" is no side of a pad'),
    "length in micrometres": ('"400 mm"', '"400 um"', 'length: "400 um" is no side of a pad'),
    "no width": ('    width = "300 mm"\n', "", "width: it is missing"),
    "a diameter beside the sides": (
        "layers = 5",
        'layers = 5\n    diameter = "3 m"',
        "a rectangular pad has none",
    ),
    "a circle with sides": ('"rectangular"', '"circular"', "length: a circular pad has none"),
    "unknown shape": ('"rectangular"', '"square"', 'shape: "square" is not known here'),
    "no shape": ('    shape = "rectangular"\n', "", "shape: it is missing"),
    "a plain pad with layers": (
        '"rectangular"',
        '"plain"',
        "layers: a plain pad is one layer without plates",
    ),
    "negative side cover": ('side_cover = "4 mm"', 'side_cover = "-4 mm"', 'side_cover: "-4 mm" is negative'),
    "negative cover": ('"2.5 mm"', '"-2.5 mm"', 'top_bottom_cover: "-2.5 mm" is negative'),
    "plan eaten by the cover": (
        'side_cover = "4 mm"',
        'side_cover = "150 mm"',
        "side_cover: covers of 150 mm leave nothing of a side of 300 mm",
    ),
    "no layers": ("    layers = 5\n", "", "layers: it is missing"),
    "half a layer": ("layers = 5", "layers = 2.5", "layers: 2.5 is not a count"),
    "too many layers": ("layers = 5", "layers = 500", "layers: 500 is not a count"),
    "zero thickness": ('"8 mm"', '"0 mm"', 'layer_thickness: "0 mm" is not greater than zero'),
    "thickness in centimetres": (
        '"8 mm"',
        '"80 cm"',
        "layer_thickness: 800 mm of rubber is too thick for a plan",
    ),
    "layers thicker than the pad": (
        "layers = 5",
        "layers = 8",
        "height: 69 mm of rubber and 27 mm of plates are thicker than the pad (63 mm)",
    ),
    "layers that do not fill the pad": (
        "layers = 5",
        "layers = 4",
        "height: 37 mm of rubber and 15 mm of plates do not fill the pad (63 mm)",
    ),
    "plates thicker than the pad": ('"3 mm"', '"12 mm"', "72 mm of plates are thicker than the pad"),
    "rubber as thick as the pad": (
        '    plate_thickness = "3 mm"\n    height = "63 mm"',
        '    height = "45 mm"',
        "height: 45 mm of rubber and 0 mm of plates are thicker than the pad (45 mm)",
    ),
    "plates without a height": (
        '    height = "63 mm"\n',
        "",
        "plate_thickness: it checks the layers against",
    ),
    "G and hardness": ("batch =", "hardness = 60\n    batch =", "hardness: the shear modulus is given too"),
    "neither": ('    shear_modulus = "0.9 MPa"\n', "", "shear_modulus: neither it nor the hardness is given"),
    "G in kPa": ('"0.9 MPa"', '"0.9 kPa"', 'shear_modulus: "0.9 kPa" is no shear modulus of rubber'),
    "G as text alone": ('"0.9 MPa"', '"soft"', "shear_modulus:"),
    "hardness as a modulus": ('shear_modulus = "0.9 MPa"', 'hardness = "60"', "hardness:"),
    "hardness of wood": (
        'shear_modulus = "0.9 MPa"',
        "hardness = 600",
        "hardness: 600 is no hardness of a bearing",
    ),
    "bulk in kPa": ("batch =", 'bulk_modulus = "2000 kPa"\n    batch =', "bulk_modulus:"),
    "unknown compound": ('"natural rubber"', '"rubber"', 'compound: "rubber" is not known here'),
    "bad formula": ('"en1337-3"', '"en1337"', 'formula: "en1337" is not known here (did you mean "en1337-3"'),
    "correlation of one": (
        "batch =",
        "batch_correlation = 1.0\n    batch =",
        "1 is no correlation",
    ),
    "negative correlation": (
        "batch =",
        "batch_correlation = -0.1\n    batch =",
        "batch_correlation: -0.1 is no",
    ),
    "correlation without a batch": (
        'batch = "1989"',
        "batch_correlation = 0.5",
        "the pad belongs to no batch",
    ),
    "tolerance of the whole": (
        "batch =",
        "shear_modulus_tolerance = 1.0\n    batch =",
        "shear_modulus_tolerance: 1 is no tolerance",
    ),
    "height tolerance of all rubber": (
        "batch =",
        'height_tolerance = "40 mm"\n    batch =',
        'height_tolerance: "40 mm" is no tolerance of 45 mm of rubber',
    ),
    "negative height tolerance": ("batch =", 'height_tolerance = "-1 mm"\n    batch =', "height_tolerance:"),
    "fixed as text": ("batch =", 'fixed = "yes"\n    batch =', 'fixed: "yes" is neither true nor false'),
    "unknown limits": ("batch =", 'limits = "mine"\n    batch =', 'limits: "mine" is not known here'),
    "limit as a number": (
        "batch =",
        "limit = {total_pressure = 10}\n    batch =",
        "total_pressure: 10 is a number",
    ),
    "unknown limit": (
        "batch =",
        'limit = {pressure = "10 MPa"}\n    batch =',
        'limit: unknown field "pressure"',
    ),
    "least pressure of a fixed pad": (
        "batch =",
        'fixed = true\n    limit = {least_permanent_pressure = "2 MPa"}\n    batch =',
        "limit, least_permanent_pressure: a pad that is fixed needs none",
    ),
    "unknown field": ("batch =", 'colour = "black"\n    batch =', 'unknown field "colour"'),
    "placeholder": ('"0.9 MPa"', '"… MPa"', "shear_modulus:"),
}


@pytest.mark.parametrize(("old", "new", "told"), BAD.values(), ids=BAD)
def test_a_bad_pad_is_refused_in_one_line(bridge_text: str, old: str, new: str, told: str):
    line = refused(bridge_text, (old, new))
    assert line.startswith(WHERE)
    assert told in line


def test_a_pin_has_no_pad(bridge_text: str):
    text = changed(
        bridge_text,
        'kind = "pin"',
        'kind = "pin"\n' + PAD,
    )
    with pytest.raises(BedstoneError, match="pad: a pin holds its level and has none"):
        parse_bridge(text, file="bridge.toml")


@pytest.mark.parametrize("name", ["shear_modulus_tolerance = 0.1", 'height_tolerance = "1 mm"'])
@pytest.mark.parametrize("own", ['stiffness = "150 kN/mm"', "stiffness_cv = 0.2"])
def test_a_tolerance_that_would_do_nothing_is_refused(bridge_text: str, name: str, own: str):
    line = refused(bridge_text, ("batch =", f"{name}\n    batch ="), support=("", f"  {own}\n"))
    assert f"{name.split()[0]}: the doubt of this pad is that of its {own.split()[0]}" in line


def test_a_compound_beside_a_coefficient_of_its_own_is_refused(bridge_text: str):
    line = refused(bridge_text, support=("", '  temperature_coefficient = "0.5 percent / K"\n'))
    assert "compound: the support has its own temperature_coefficient" in line


def test_a_batch_of_one_pad_is_looked_at_again(bridge_text: str):
    text = changed(bridge_text, GIVEN + "  stiffness_cv = 0.3\n", PAD)
    assert [q for q in bridge_queries(parse_bridge(text, file="b")) if 'batch "1989" has this one pad' in q]
    given = '  stiffness = "220 kN/mm"\n  stiffness_cv = 0.3\n'
    two = text.replace(given, PAD, 1)
    assert two != text
    assert not [q for q in bridge_queries(parse_bridge(two, file="b")) if "batch" in q]
