"""Elastomeric pads against published formulas, tables and one worked example.

Where a clause is "from memory" it was not read in a copy of the text and is to be confirmed against it. "Derived"
values have no printed number: they are the published formula worked out by hand, apart from this code. Tolerances are
half of the last digit written, unless a test says why not.
"""

from __future__ import annotations

import math

import pytest

from assess.pad import (
    LimitCheck,
    Pad,
    PadGeometry,
    PadLoads,
    check_limits,
    cold_curve,
    compounds,
    creep_per_decade,
    creep_share,
    decades,
    disc_modulus,
    elastomer,
    least_permanent_pressure,
    limit_sets,
    strip_modulus,
)

INCH, KIP, KSI = 0.0254, 4.4482216152605, 6894.757293168361  # m, kN, kN/m2: exact by definition
MPA = 1e3


def square(shape_factor: float, formula: str, **rubber: float) -> Pad:
    """One layer of 10 mm with the shape factor wanted."""
    side = 4.0 * 0.010 * shape_factor
    geometry = PadGeometry(length=side, width=side, layer_thickness=0.010)
    return Pad(geometry=geometry, rubber=elastomer(formula, **rubber), formula=formula)


def by_name(checks: list[LimitCheck]) -> dict[str, LimitCheck]:
    return {check.name: check for check in checks}


# EN 1337-3 -----------------------------------------------------------------------------------

EN_BEARINGS = {  # a, b, ti mm; layers; F kN; S; v mm; k kN/mm
    "300 x 400": (300, 400, 8, 5, 1000.0, 10.4591, 0.8846, 1130.43),
    "400 x 500": (400, 500, 11, 4, 2000.0, 9.9169, 1.2592, 1588.36),
}


def en_bearing(a: float, b: float, ti: float, layers: int) -> Pad:
    geometry = PadGeometry(
        length=b / 1e3, width=a / 1e3, side_cover=0.004, layers=layers, layer_thickness=ti / 1e3
    )
    rubber = elastomer("en1337-3", shear_modulus=0.9 * MPA)
    return Pad(geometry=geometry, rubber=rubber, formula="en1337-3")


@pytest.mark.parametrize("case", EN_BEARINGS.values(), ids=EN_BEARINGS)
def test_two_bearings_of_en_1337_3(case: tuple[float, ...]):
    """EN 1337-3:2005, v = sum of F ti / A1 (1 / (5 Gd S2) + 1 / Eb), from memory; numbers derived.

    Gd 0.9 MPa, Eb 2000 MPa, plates 4 mm inside every edge, all layers inner ones.
    """
    a, b, ti, layers, force, s, v, k = case
    pad = en_bearing(a, b, ti, int(layers))
    assert pad.shape_factor == pytest.approx(s, abs=5e-5)
    assert 1e3 * force / pad.stiffness == pytest.approx(v, abs=5e-5)
    assert pad.stiffness / 1e3 == pytest.approx(k, abs=5e-3)


def test_shear_strain_by_compression_of_en_1337_3():
    """EN 1337-3:2005, 1.5 F / (Gd Ar S), limit 7 for all strains together; from memory; number derived."""
    loads = PadLoads(permanent=0.0, total=0.0, minimum=0.0, factored=1000.0)
    strain = by_name(check_limits(en_bearing(300, 400, 8, 5), loads))["compression shear strain"]
    assert strain.value == pytest.approx(1.39215, abs=5e-6)
    assert strain.limit == 7.0


def test_stability_pressure_of_en_1337_3():
    """EN 1337-3:2005, F / Ar < 2 Gd a' S / (3 Te), from memory; 2 x 0.9 x 292 x 10.4591 / (3 x 40) = 45.811 MPa."""
    loads = PadLoads(permanent=0.0, total=0.0, minimum=0.0, factored=1000.0)
    stability = by_name(check_limits(en_bearing(300, 400, 8, 5), loads))["stability pressure"]
    assert stability.value / MPA == pytest.approx(1000.0 / 114.464, rel=1e-12)
    assert stability.limit / MPA == pytest.approx(45.811, abs=5e-4)


@pytest.mark.parametrize(("cover", "counts"), [(2.5, False), (3.0, True)])
def test_outer_layers_of_en_1337_3_count_from_3_mm_on_with_1_4_times_their_thickness(
    cover: float, counts: bool
):
    """EN 1337-3:2005, effective thickness te = 1.4 ti of outer layers of 3 mm and more; from memory."""
    inner = en_bearing(300, 400, 8, 5)
    geometry = PadGeometry(
        length=0.4,
        width=0.3,
        side_cover=0.004,
        layers=5,
        layer_thickness=0.008,
        top_bottom_cover=cover / 1e3,
    )
    pad = Pad(geometry=geometry, rubber=inner.rubber, formula="en1337-3")
    give = 1e3 / pad.stiffness - 1e3 / inner.stiffness  # mm under 1 MN, in m per MN
    s = 114464.0 / (2.0 * 684.0 * 1.4 * cover)
    by_hand = 2.0 * cover / 114464.0 * (1.0 / (5.0 * 0.9 * s * s) + 1.0 / 2000.0) * 1e3
    assert give == pytest.approx(by_hand if counts else 0.0, rel=1e-9, abs=1e-12)


@pytest.mark.parametrize(("hardness", "g"), [(50, 0.7), (60, 0.9), (70, 1.15)])
def test_nominal_shear_moduli_of_en_1337_3(hardness: float, g: float):
    """EN 1337-3:2005, nominal classes of G; their hardnesses are those of earlier drafts; from memory."""
    rubber = elastomer("en1337-3", hardness=hardness)
    assert rubber.shear == pytest.approx(g * MPA)
    assert rubber.bulk == pytest.approx(2000.0 * MPA)


# AASHTO LRFD and the manual of a state -----------------------------------------------------------


def test_compressive_strain_of_aashto_lrfd():
    """AASHTO LRFD 14.7.5 (commentary) and 14.7.6, strain = stress / (4.8 G S2), from memory: 432 MPa at G 0.9, S 10."""
    pad = square(10.0, "aashto-lrfd", shear_modulus=0.9 * MPA)
    assert pad.layer_modulus / MPA == pytest.approx(432.0)
    assert pad.layer_strain(pad.plan.area * 4.32 * MPA) == pytest.approx(0.01)


@pytest.mark.parametrize(
    ("hardness", "low", "high"), [(50, 0.095, 0.130), (60, 0.130, 0.200), (70, 0.200, 0.300)]
)
def test_shear_moduli_by_hardness_of_aashto_lrfd(hardness: float, low: float, high: float):
    """AASHTO LRFD 14.7.6, table of G at 73 degF by hardness, ksi; from memory. The tolerance spans the range."""
    rubber = elastomer("aashto-lrfd", hardness=hardness)
    assert (rubber.shear - rubber.shear_tolerance) / KSI == pytest.approx(low)
    assert (rubber.shear + rubber.shear_tolerance) / KSI == pytest.approx(high)


def test_the_shear_modulus_of_60_durometer_lies_in_the_range_of_a_published_design_example():
    """FHWA prestressed concrete design example, step 6, seen: 60 +- 5 durometer, G about 80 to 180 psi."""
    shear = elastomer("aashto-lrfd", hardness=60).shear
    assert 0.080 < shear / KSI < 0.180


@pytest.mark.parametrize(("hardness", "share"), [(50, 0.25), (60, 0.35), (70, 0.45)])
def test_creep_of_aashto_lrfd_after_25_years(hardness: float, share: float):
    """AASHTO LRFD 14.7.6, creep deflection over initial deflection at 25 years by hardness; from memory."""
    assert creep_share(hardness) == pytest.approx(share)


def test_limits_of_method_a_of_aashto_lrfd():
    """AASHTO LRFD 14.7.6, steel-reinforced: 1.25 G S and 1.25 ksi, strain 0.09, live 1/8 in; from memory."""
    loads = PadLoads(permanent=100.0, total=180.0, minimum=100.0, factored=250.0)
    weak = square(5.0, "aashto-lrfd", shear_modulus=0.1 * KSI)
    strong = square(12.0, "aashto-lrfd", shear_modulus=0.15 * KSI)
    found = by_name(check_limits(weak, loads))
    assert found["total pressure"].limit / KSI == pytest.approx(1.25 * 0.1 * 5.0)
    assert found["total strain"].limit == 0.09
    assert found["live compression"].limit == pytest.approx(INCH / 8.0)
    assert found["live compression"].value == pytest.approx(80.0 / weak.stiffness)
    assert by_name(check_limits(strong, loads))["total pressure"].limit / KSI == pytest.approx(1.25)


@pytest.mark.parametrize(
    ("name", "load", "factor", "cap"),
    [("permanent pressure", "permanent", 1.2, 1.20), ("total pressure", "total", 1.5, 1.50)],
)
def test_limits_of_a_bridge_design_manual_of_texas(name: str, load: str, factor: float, cap: float):
    """TxDOT Bridge Design Manual (LRFD), seen: dead load 1.20 ksi and 1.2 G S, total 1.50 ksi and 1.5 G S."""
    loads = PadLoads(permanent=100.0, total=180.0, minimum=100.0, factored=250.0)
    weak = square(6.0, "aashto-lrfd", shear_modulus=0.100 * KSI)
    strong = square(12.0, "aashto-lrfd", shear_modulus=0.175 * KSI)  # G at 0 degF of the same manual
    found = by_name(check_limits(weak, loads, rules="texas"))[name]
    assert found.load == load
    assert found.limit / KSI == pytest.approx(factor * 0.1 * 6.0)
    assert by_name(check_limits(strong, loads, rules="texas"))[name].limit / KSI == pytest.approx(cap)


# Gent and Lindley -----------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("hardness", "e0", "k", "bulk"), [(50, 2.20, 0.73, 1030), (60, 4.45, 0.57, 1150), (70, 7.35, 0.53, 1270)]
)
def test_elastic_constants_of_lindley_by_hardness(hardness: float, e0: float, k: float, bulk: float):
    """Lindley, Engineering Design with Natural Rubber, table of elastic constants, MPa; from memory."""
    rubber = elastomer("gent-lindley", hardness=hardness)
    assert (rubber.youngs / MPA, rubber.k, rubber.bulk / MPA) == pytest.approx((e0, k, bulk))


@pytest.mark.parametrize(
    ("hardness", "s", "without", "with_bulk"),
    [(50, 6.0, 117.83, 105.74), (60, 6.0, 187.08, 160.90), (60, 10.0, 511.75, 354.15)],
)
def test_compression_moduli_of_gent_and_lindley(hardness: float, s: float, without: float, with_bulk: float):
    """Ea = E (1 + 2 k S2), 1 / E' = 1 / Ea + 1 / B, MPa; form seen in Strojniski vestnik 60 (2014) p. 506; derived."""
    assert square(s, "gent-lindley", hardness=hardness).layer_modulus / MPA == pytest.approx(
        with_bulk, abs=5e-3
    )
    stiff = square(s, "gent-lindley", hardness=hardness, bulk_modulus=math.inf)
    assert stiff.layer_modulus / MPA == pytest.approx(without, abs=5e-3)


# pressure solution ---------------------------------------------------------------------------------


@pytest.mark.parametrize(("s", "strip", "disc"), [(10.0, 296.18, 398.17), (20.0, 775.91, 903.99)])
def test_strip_and_disc_of_the_pressure_solution(s: float, strip: float, disc: float):
    """Chalhoub and Kelly 1990, 1991, closed forms with K, from memory; MPa, G 0.9, K 2000; derived."""
    assert strip_modulus(0.9, 2.0 * s, 1.0, 2000.0) == pytest.approx(strip, abs=5e-3)
    assert disc_modulus(0.9, 4.0 * s, 1.0, 2000.0) == pytest.approx(disc, abs=5e-3)


def test_the_choice_of_formula_spans_half_of_the_stiffness():
    """G 0.9, K 2000 MPa, S 10: EN 367.35, AASHTO 432; 6 G S2 without bulk 540 (disc), i.e. + 47 %; derived."""
    en = square(10.0, "en1337-3", shear_modulus=0.9 * MPA).layer_modulus / MPA
    assert en == pytest.approx(367.35, abs=5e-3)
    assert square(10.0, "aashto-lrfd", shear_modulus=0.9 * MPA).layer_modulus / MPA == pytest.approx(432.0)
    incompressible = disc_modulus(0.9, 40.0, 1.0)
    assert incompressible == pytest.approx(540.0)
    assert incompressible / en - 1.0 == pytest.approx(0.47, abs=5e-3)


# worked example ------------------------------------------------------------------------------------


def worked(shear_ksi: float) -> Pad:
    """FHWA LRFD steel girder design example, step 6 (numbers from memory).

    14 x 15 in, covers of 0.25 in, eight inner layers of 0.375 in, hardness 50.
    """
    geometry = PadGeometry(
        length=15.0 * INCH,
        width=14.0 * INCH,
        layers=8,
        layer_thickness=0.375 * INCH,
        top_bottom_cover=0.25 * INCH,
    )
    rubber = elastomer("aashto-lrfd", shear_modulus=shear_ksi * KSI)
    return Pad(geometry=geometry, rubber=rubber, formula="aashto-lrfd")


DEAD, LIVE = 78.4 * KIP, 110.4 * KIP
WORKED_LOADS = PadLoads(permanent=DEAD, total=DEAD + LIVE, minimum=DEAD, factored=1.25 * DEAD + 1.75 * LIVE)


def test_shape_factors_of_a_worked_example():
    pad = worked(0.095)
    assert pad.shape_factor == pytest.approx(9.66, abs=5e-3)
    assert pad.plan.shape_factor(pad.geometry.top_bottom_cover) == pytest.approx(14.48, abs=5e-3)
    assert pad.geometry.rubber_thickness / INCH == pytest.approx(3.5)


def test_stresses_and_limits_of_a_worked_example():
    """Total 0.899 ksi against 1.66 G S = 1.523; live 0.526 against 0.66 G S = 0.605; G 0.095 (Method B)."""
    found = by_name(check_limits(worked(0.095), WORKED_LOADS, rules="aashto-lrfd-b-stress"))
    total, live = found["total pressure"], found["live pressure"]
    assert (total.value / KSI, total.limit / KSI) == pytest.approx((0.899, 1.523), abs=5e-4)
    assert (live.value / KSI, live.limit / KSI) == pytest.approx((0.526, 0.605), abs=6e-4)


def test_the_chart_of_a_worked_example_is_softer_than_the_formula():
    """A strain of 0.04 read from a chart: 0.140 in; the formula: 0.050 (G 0.130) to 0.068 in (G 0.095)."""
    chart = 0.04 * worked(0.095).geometry.rubber_thickness / INCH
    assert chart == pytest.approx(0.140)
    assert chart * (1.0 + creep_share(50.0)) == pytest.approx(0.175)
    for g, inches in ((0.130, 0.050), (0.095, 0.068)):
        assert (DEAD + LIVE) / worked(g).stiffness / INCH == pytest.approx(inches, abs=5e-4)


# creep and cold ------------------------------------------------------------------------------------


@pytest.mark.parametrize(("hardness", "percent"), [(50, 3.51), (60, 4.92), (70, 6.32)])
def test_creep_per_decade_that_the_25_year_shares_imply(hardness: float, percent: float):
    """AASHTO's 25-year shares (from memory) over the 7.1189 decades since the first minute; derived."""
    assert 100.0 * creep_per_decade(hardness) == pytest.approx(percent, abs=5e-3)


@pytest.mark.parametrize(("years", "count"), [(25.0, 7.1189), (10.0, 6.7210)])
def test_decades_since_the_first_minute(years: float, count: float):
    """Creep = A log10(t / t1), Derham and Lindley, from memory; decades derived, of 365.25 days a year."""
    assert decades(years) == pytest.approx(count, abs=5e-5)


def test_two_percent_a_decade_make_thirteen_in_ten_years():
    """A about 2 % a decade for lightly filled natural rubber of 50 IRHD, from memory: 13.44 % in 10 years; derived."""
    assert 2.0 * decades(10.0) == pytest.approx(13.44, abs=5e-3)


@pytest.mark.parametrize("pressure", [7.5, 8.37])
def test_creep_of_a_thousand_hours_lies_within_tests_of_bearings(pressure: float):
    """Oh and Kim 2017, seen: 0.3 to 1.92 % of the rubber in 1000 h at 7.5 and 8.37 MPa. A range check only."""
    years = 1000.0 / (24.0 * 365.25)
    for hardness in (50.0, 60.0, 70.0):
        pad = square(8.0, "en1337-3", hardness=hardness)
        strain = pressure * MPA / pad.layer_modulus
        assert 0.3 <= 100.0 * creep_share(hardness, years) * strain <= 1.92


@pytest.mark.parametrize("compound", compounds())
def test_cold_stiffening_stays_within_what_acceptance_tests_allow(compound: str):
    """G at -25 degC up to 3 G (EN 1337-3:2005, 7 days), low-temperature stiffness up to 4 times (AASHTO); from memory.

    The curves are for hours of cold and so must lie below both.
    """
    curve = cold_curve(compound)
    assert 1.0 < curve.factor(max(-25.0, curve.temperature[0])) < 3.0


def test_every_set_of_limits_names_its_text():
    assert set(limit_sets()) == {"en1337-3", "aashto-lrfd", "aashto-lrfd-b-stress", "texas"}
    for rules in limit_sets():
        checks = check_limits(worked(0.095), WORKED_LOADS, rules=rules)
        assert checks
        assert all(check.source.endswith(("the standard", "seen")) for check in checks)


def test_the_least_permanent_pressure_is_3_mpa():
    """Common practice, no source: 3 N/mm2 under permanent load where friction alone holds a pad."""
    assert least_permanent_pressure() == pytest.approx(3.0 * MPA)
