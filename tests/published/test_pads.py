"""Pads from geometry against published numbers (CHECKS: laminated bearings, rubber creep).

EN 1337-3:2005, AASHTO LRFD 14.7, the Gent and Lindley constants and the pressure solution are from memory where they
are marked so, to be confirmed against the texts; "derived" values were recomputed by an independent method.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import integrate, special
from scipy.sparse import diags, eye, kron
from scipy.sparse.linalg import spsolve

from assess.pad import (
    Pad,
    PadGeometry,
    PadLoads,
    check_limits,
    creep_per_decade,
    creep_share,
    decades,
    disc_modulus,
    elastomer,
    rectangle_modulus,
    strip_modulus,
)

KSI = 6894.757293168361  # kN/m2
INCH = 0.0254
KIP = 4.4482216152605
MPA = 1000.0


def laminated(
    formula: str, a_mm: float, b_mm: float, t_mm: float, n: int, *, cover_mm: float = 4.0, shear: float = 0.9
) -> Pad:
    """Steel plates some way inside every edge, all layers taken as inner ones."""
    geometry = PadGeometry(
        length=a_mm / 1e3,
        width=b_mm / 1e3,
        side_cover=cover_mm / 1e3,
        layers=n,
        layer_thickness=t_mm / 1e3,
    )
    return Pad(geometry=geometry, rubber=elastomer(formula, shear_modulus=shear * MPA), formula=formula)


def layer(formula: str, s: float, **rubber: float) -> float:
    """Modulus of a square layer of a shape factor, MPa."""
    side = 0.4
    geometry = PadGeometry(
        length=side, width=side, side_cover=0.0, layers=1, layer_thickness=side / (4.0 * s)
    )
    given = {name: value * MPA if name.endswith("modulus") else value for name, value in rubber.items()}
    return Pad(geometry=geometry, rubber=elastomer(formula, **given), formula=formula).layer_modulus / MPA


# EN 1337-3 ----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("a", "b", "t", "n", "force", "shape", "shortening", "stiffness"),
    [
        (300.0, 400.0, 8.0, 5, 1000.0, 10.4591, 0.8846, 1130.43),
        (400.0, 500.0, 11.0, 4, 2000.0, 9.9169, 1.2592, 1588.36),
    ],
)
def test_en_1337_3_compresses_two_bearings_as_derived(
    a: float, b: float, t: float, n: int, force: float, shape: float, shortening: float, stiffness: float
) -> None:
    """EN 1337-3:2005, v = sum F t / A1 (1 / (5 G S^2) + 1 / Eb), Eb 2000 MPa: formula from memory, values derived."""
    pad = laminated("en1337-3", a, b, t, n)
    assert pad.shape_factor == pytest.approx(shape, abs=5e-5)
    assert 1e3 * force / pad.stiffness == pytest.approx(shortening, abs=5e-5)
    assert pad.stiffness / 1e3 == pytest.approx(stiffness, abs=5e-3)


def test_en_1337_3_compression_strain_of_the_first_bearing() -> None:
    """EN 1337-3:2005, eps_c = 1.5 F / (G A S), no shear: 1.39215; from memory, derived."""
    pad = laminated("en1337-3", 300.0, 400.0, 8.0, 5)
    loads = PadLoads(permanent=0.0, total=0.0, minimum=0.0, factored=1000.0)
    strain = next(c for c in check_limits(pad, loads) if c.kind == "shear strain")
    assert strain.value == pytest.approx(1.39215, abs=5e-6)
    assert strain.limit == 7.0


def test_en_1337_3_thin_outer_layers_are_left_out_and_thick_ones_count_more() -> None:
    """EN 1337-3:2005: te is 1.4 times the thickness of an outer layer of 3 mm and more; from memory."""
    bare = laminated("en1337-3", 300.0, 400.0, 8.0, 5)

    def covered(cover: float) -> Pad:
        geometry = PadGeometry(
            length=0.3, width=0.4, side_cover=0.004, layers=5, layer_thickness=0.008, top_bottom_cover=cover
        )
        return Pad(geometry=geometry, rubber=bare.rubber, formula="en1337-3")

    assert covered(0.0025).stiffness == bare.stiffness
    plan = bare.plan
    shape = plan.shape_factor(1.4 * 0.004)
    outer = 2.0 * 0.004 * (1.0 / (5.0 * 900.0 * shape**2) + 1.0 / 2e6)
    assert plan.area / covered(0.004).stiffness == pytest.approx(plan.area / bare.stiffness + outer)


# AASHTO -------------------------------------------------------------------------------------------


def test_aashto_reckons_4_8_g_s_squared_without_a_bulk_term() -> None:
    """AASHTO LRFD 14.7.6 commentary, eps = sigma / (4.8 G S^2), from memory: 432 MPa at S 10, G 0.9 MPa (derived)."""
    assert layer("aashto-lrfd", 10.0, shear_modulus=0.9) == pytest.approx(432.0)


@pytest.mark.parametrize(
    ("hardness", "low", "high"), [(50, 0.095, 0.130), (60, 0.130, 0.200), (70, 0.200, 0.300)]
)
def test_aashto_shear_moduli_by_hardness(hardness: float, low: float, high: float) -> None:
    """AASHTO LRFD 14.7.6 table, G at 73 degF, from memory; the middle of the range, half of it as tolerance."""
    rubber = elastomer("aashto-lrfd", hardness=hardness)
    assert rubber.shear == pytest.approx((low + high) / 2.0 * KSI)
    assert rubber.shear_tolerance == pytest.approx((high - low) / 2.0 * KSI)


def girder_example(shear_ksi: float) -> Pad:
    """FHWA LRFD steel girder example, step 6 (from memory): 14 x 15 in, 8 layers of 0.375 in, covers 0.25 in."""
    geometry = PadGeometry(
        length=14.0 * INCH,
        width=15.0 * INCH,
        side_cover=0.0,
        layers=8,
        layer_thickness=0.375 * INCH,
        top_bottom_cover=0.25 * INCH,
    )
    return Pad(
        geometry=geometry,
        rubber=elastomer("aashto-lrfd", shear_modulus=shear_ksi * KSI),
        formula="aashto-lrfd",
    )


def test_the_girder_examples_shape_factors_and_pressures_recompute() -> None:
    pad = girder_example(0.095)
    assert pad.plan.shape_factor(0.25 * INCH) == pytest.approx(14.48, abs=5e-3)
    assert pad.shape_factor == pytest.approx(9.66, abs=6e-3)
    assert 188.8 * KIP / pad.plan.area / KSI == pytest.approx(0.899, abs=5e-4)
    assert 110.4 * KIP / pad.plan.area / KSI == pytest.approx(0.526, abs=5e-4)
    assert 1.66 * 0.095 * pad.shape_factor == pytest.approx(1.523, abs=1e-3)
    assert 0.66 * 0.095 * pad.shape_factor == pytest.approx(0.605, abs=1e-3)


@pytest.mark.parametrize(("shear_ksi", "inches"), [(0.130, 0.050), (0.095, 0.068)])
def test_the_formula_gives_less_than_the_chart_of_the_girder_example(shear_ksi: float, inches: float) -> None:
    """The chart's strain of 0.04 gives 0.140 in; 4.8 G S^2 gives 0.050 to 0.068 in (derived)."""
    shortening = 188.8 * KIP / girder_example(shear_ksi).stiffness / INCH
    assert shortening == pytest.approx(inches, abs=6e-4)
    assert 2.0 < 0.04 * 3.5 / shortening < 3.0


def test_method_a_limits_the_total_pressure_and_the_strain() -> None:
    """AASHTO LRFD 14.7.6: sigma <= 1.25 G S and 1.25 ksi, strain <= 0.09, live part <= 1/8 in; from memory."""
    pad = girder_example(0.095)
    loads = PadLoads(permanent=78.4 * KIP, total=188.8 * KIP, minimum=78.4 * KIP, factored=0.0)
    found = {c.name: c for c in check_limits(pad, loads)}
    assert found["total pressure"].limit / KSI == pytest.approx(min(1.25 * 0.095 * pad.shape_factor, 1.25))
    assert found["total strain"].limit == 0.09
    assert found["live compression"].limit == pytest.approx(0.125 * INCH)
    assert found["total pressure"].value / KSI == pytest.approx(0.899, abs=5e-4)


def test_texas_limits_permanent_and_total_pressure() -> None:
    """TxDOT bridge design manual, seen: permanent <= min(1.20 ksi, 1.2 G S), total <= min(1.50 ksi, 1.5 G S)."""
    pad = girder_example(0.095)
    loads = PadLoads(permanent=78.4 * KIP, total=188.8 * KIP, minimum=78.4 * KIP, factored=0.0)
    found = {c.load: c.limit / KSI for c in check_limits(pad, loads, rules="texas") if c.kind == "pressure"}
    gs = 0.095 * pad.shape_factor
    assert found == pytest.approx({"permanent": min(1.20, 1.2 * gs), "total": min(1.50, 1.5 * gs)})


# Gent and Lindley ---------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("hardness", "shape", "without", "with_bulk"),
    [(50, 6.0, 117.83, 105.74), (60, 6.0, 187.08, 160.90), (60, 10.0, 511.75, 354.15)],
)
def test_gent_and_lindley_moduli_by_hardness(
    hardness: float, shape: float, without: float, with_bulk: float
) -> None:
    """Ea = E0 (1 + 2 k S^2), 1/E = 1/Ea + 1/B: seen in Strojniski vestnik 60 (2014) p. 506; constants from memory."""
    rubber = elastomer("gent-lindley", hardness=hardness)
    apparent = rubber.youngs * (1.0 + 2.0 * rubber.k * shape**2) / MPA
    assert apparent == pytest.approx(without, abs=6e-3)
    assert layer("gent-lindley", shape, hardness=hardness) == pytest.approx(with_bulk, abs=6e-3)


# the pressure solution ----------------------------------------------------------------------------


@pytest.mark.parametrize(("shape", "strip", "disc"), [(10.0, 296.18, 398.17), (20.0, 775.91, 903.99)])
def test_the_pressure_solution_of_strip_and_disc(shape: float, strip: float, disc: float) -> None:
    """Chalhoub and Kelly 1990/1991, closed forms from memory, G 0.9 and K 2000 MPa; values derived."""
    t = 0.01
    assert strip_modulus(0.9, 2.0 * shape * t, t, 2000.0) == pytest.approx(strip, abs=5e-3)
    assert disc_modulus(0.9, 4.0 * shape * t, t, 2000.0) == pytest.approx(disc, abs=5e-3)


def test_a_long_rectangle_tends_to_the_strip_and_a_square_is_stiffer_than_the_disc_of_its_shape_factor() -> (
    None
):
    long = rectangle_modulus(0.9, 40.0, 0.2, 0.01, 2000.0)
    assert long == pytest.approx(strip_modulus(0.9, 0.2, 0.01, 2000.0), rel=0.01)
    assert rectangle_modulus(0.9, 0.4, 0.4, 0.01, 2000.0) > disc_modulus(0.9, 0.4, 0.01, 2000.0)
    # without change of volume a square has about 6.75 G S^2, a disc 6 G S^2 (derived)
    assert rectangle_modulus(0.9, 0.4, 0.4, 0.01) == pytest.approx(6.748 * 0.9 * 100.0, rel=1e-3)
    assert disc_modulus(0.9, 0.4, 0.01) == pytest.approx(6.0 * 0.9 * 100.0)


def test_the_rectangle_series_solves_the_pressure_equation() -> None:
    """Against finite differences of the same equation, an independent method."""
    a, b, t, g, k, cells = 0.4, 0.3, 0.01, 0.9, 2000.0, 160
    dx, dy = a / cells, b / cells
    n = cells - 1
    second = diags([1.0, -2.0, 1.0], [-1, 0, 1], shape=(n, n))
    operator = (
        kron(second / dx**2, eye(n)) + kron(eye(n), second / dy**2) - 12.0 * g / (k * t**2) * eye(n * n)
    )
    pressure = spsolve(operator.tocsc(), np.full(n * n, -12.0 * g / t**2))
    mean = pressure.sum() * dx * dy / (a * b)
    assert rectangle_modulus(g, a, b, t, k) == pytest.approx(mean, rel=5e-4)


def test_the_disc_is_the_mean_of_its_pressure() -> None:
    """p(r) = K (1 - I0(lr) / I0(lR)), integrated numerically."""
    g, k, d, t = 0.9, 2000.0, 0.4, 0.01
    rate = math.sqrt(12.0 * g / k) / t

    def ring(r: float) -> float:
        return k * (1.0 - float(special.i0(rate * r) / special.i0(rate * d / 2.0))) * 2.0 * r / (d / 2.0) ** 2

    total, _ = integrate.quad(ring, 0.0, d / 2.0)
    assert disc_modulus(g, d, t, k) == pytest.approx(total, rel=1e-9)


def test_the_choice_of_formula_spans_47_per_cent() -> None:
    """G 0.9, K 2000 MPa, S 10: EN 367.35, AASHTO 432, 6 G S^2 540 MPa (derived)."""
    assert layer("en1337-3", 10.0, shear_modulus=0.9) == pytest.approx(367.35, abs=5e-3)
    assert layer("aashto-lrfd", 10.0, shear_modulus=0.9) == pytest.approx(432.0)
    assert disc_modulus(0.9, 4.0 * 10.0 * 0.01, 0.01) == pytest.approx(6.0 * 0.9 * 100.0)
    assert pytest.approx(1.47, abs=5e-3) == 540.0 / 367.35


# creep --------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("hardness", "share", "per_decade"), [(50, 0.25, 0.0351), (60, 0.35, 0.0492), (70, 0.45, 0.0632)]
)
def test_creep_after_25_years_by_hardness(hardness: float, share: float, per_decade: float) -> None:
    """AASHTO LRFD 14.7.5/14.7.6 shares from memory; per decade from a reference of one minute (derived)."""
    assert creep_share(hardness) == share
    assert creep_per_decade(hardness) == pytest.approx(per_decade, abs=5e-5)


def test_creep_runs_on_log_time_from_its_reference() -> None:
    """Derham and Lindley's law, from memory: 2 % a decade from 1 min to 10 years is 13.44 % (derived)."""
    assert decades(25.0) == pytest.approx(7.1189, abs=5e-5)
    assert decades(10.0) == pytest.approx(6.7210, abs=5e-5)
    assert 2.0 * decades(10.0) == pytest.approx(13.44, abs=5e-3)
    assert creep_share(50.0, 10.0) == pytest.approx(0.25 * 6.7210 / 7.1189, rel=1e-4)
