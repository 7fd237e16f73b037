"""Published least-squares problems, solved by the very fit that calibrates pads.

Every problem enters as a set of readings with its own `predict` and exact `jacobian`, standard deviation 1 and no
prior; what is published are s-scaled standard deviations, so the covariance is multiplied by RSS / (m - q).
"""

from __future__ import annotations

import csv
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any, cast

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import curve_fit

from assess.calibrate import Fit, ObservationModel, fit

Floats = NDArray[np.float64]
DATA = Path(__file__).parent / "data"


def table(name: str) -> tuple[Floats, Floats]:
    with (DATA / name).open() as file:
        rows = list(csv.reader(file))[1:]
    first, second = np.array(rows, dtype=np.float64).T
    return first, second


class Curve:
    """y = f(x, b) as readings, with b = b(theta) so that theta is of the size of a ln k."""

    def __init__(
        self,
        x: Floats,
        y: Floats,
        function: Callable[[Floats, Floats], Floats],
        gradient: Callable[[Floats, Floats], Floats],
        logarithmic: bool,
    ) -> None:
        self.x, self.value, self.sd = x, y, np.ones(y.size)
        self.function, self.gradient, self.logarithmic = function, gradient, logarithmic
        self.pads, self.size = np.arange(2), 2

    def b(self, theta: Floats) -> Floats:
        return np.exp(theta) if self.logarithmic else theta

    def predict(self, theta: Floats) -> Floats:
        return self.function(self.x, self.b(theta))

    def jacobian(self, theta: Floats) -> Floats:
        b = self.b(theta)
        return self.gradient(self.x, b) * (b if self.logarithmic else 1.0)

    def linearise(self, theta: Floats) -> tuple[Floats, Floats]:
        return self.predict(theta), self.jacobian(theta)


@dataclass(frozen=True, kw_only=True)
class Solved:
    b: Floats
    sd: Floats
    correlation: float
    covariance: Floats
    rss: float
    freedom: int


def solve(curve: Curve, start: tuple[float, float]) -> Solved:
    begin = np.array(start)
    found: Fit = fit(cast(Any, curve), start=np.log(begin) if curve.logarithmic else begin, prior=None)
    b = curve.b(found.log_stiffness)
    chain = b if curve.logarithmic else np.ones(2)
    covariance = found.covariance * np.outer(chain, chain) * found.chi_square / found.degrees_of_freedom
    sd = np.sqrt(np.diag(covariance))
    return Solved(
        b=b,
        sd=sd,
        correlation=covariance[0, 1] / sd[0] / sd[1],
        covariance=covariance,
        rss=found.chi_square,
        freedom=found.degrees_of_freedom,
    )


def misra1a(x: Floats, y: Floats) -> Curve:
    def gradient(x: Floats, b: Floats) -> Floats:
        return np.stack([-np.expm1(-b[1] * x), b[0] * x * np.exp(-b[1] * x)], axis=1)

    return Curve(x, y, lambda x, b: -b[0] * np.expm1(-b[1] * x), gradient, True)


def danwood(x: Floats, y: Floats) -> Curve:
    def gradient(x: Floats, b: Floats) -> Floats:
        return np.stack([x ** b[1], b[0] * x ** b[1] * np.log(x)], axis=1)

    return Curve(x, y, lambda x, b: b[0] * x ** b[1], gradient, True)


def misra1b(x: Floats, y: Floats) -> Curve:
    def gradient(x: Floats, b: Floats) -> Floats:
        base = 1.0 + b[1] * x / 2.0
        return np.stack([1.0 - base**-2.0, b[0] * x * base**-3.0], axis=1)

    return Curve(x, y, lambda x, b: b[0] * (1.0 - (1.0 + b[1] * x / 2.0) ** -2.0), gradient, True)


# NIST Statistical Reference Datasets, nonlinear regression: certified values as NIST publishes them; the two
# starts of each problem from memory
NIST = {
    "Misra1a": (
        misra1a,
        ((500.0, 1e-4), (250.0, 5e-4)),
        (238.94212918, 5.5015643181e-4),
        (2.7070075241, 7.2668688436e-6),
        0.12455138894,
        12,
    ),
    "DanWood": (
        danwood,
        ((1.0, 5.0), (0.7, 4.0)),
        (0.76886226176, 3.8604055871),
        (0.018281973860, 0.051726610913),
        4.3173084083e-3,
        4,
    ),
    "Misra1b": (
        misra1b,
        ((500.0, 1e-4), (300.0, 2e-4)),
        (337.99746163, 3.9039091287e-4),
        (3.1643950207, 4.2547321834e-6),
        0.075464681533,
        12,
    ),
}


@pytest.mark.parametrize("start", [0, 1])
@pytest.mark.parametrize("name", list(NIST))
def test_certified_values_of_nist_are_met(name: str, start: int) -> None:
    """Tolerances: 1e-7 on parameters and 1e-6 on deviations, ten times what another solver left from these starts."""
    make, starts, b, sd, rss, freedom = NIST[name]
    found = solve(make(*table(f"nist_{name}.csv")), starts[start])
    assert found.b == pytest.approx(b, rel=1e-7)
    assert found.sd == pytest.approx(sd, rel=1e-6)
    assert found.rss == pytest.approx(rss, rel=1e-9)
    assert found.freedom == freedom


def gum_h3() -> Solved:
    t, b = table("gum_h3.csv")

    def gradient(x: Floats, _: Floats) -> Floats:
        return np.stack([np.ones_like(x), x - 20.0], axis=1)

    return solve(Curve(t, b, lambda x, y: y[0] + y[1] * (x - 20.0), gradient, False), (0.0, 0.0))


def test_the_calibration_line_of_gum_h3_is_met_in_its_published_digits() -> None:
    """JCGM 100:2008, annex H.3: intercept, slope, their correlation sum of squares; half a unit of the last digit."""
    found = gum_h3()
    assert found.b[0] == pytest.approx(-0.1712, abs=5e-5)
    assert found.sd[0] == pytest.approx(0.0029, abs=5e-5)
    assert found.b[1] == pytest.approx(0.00218, abs=5e-6)
    assert found.sd[1] == pytest.approx(0.00067, abs=5e-6)
    assert found.correlation == pytest.approx(-0.930, abs=5e-4)
    assert found.rss == pytest.approx(1.10096583e-4, rel=1e-7)
    assert np.sqrt(found.rss / 9.0) == pytest.approx(0.0035, abs=5e-5)  # from memory


def test_the_correction_at_30_degrees_of_gum_h3_is_met() -> None:
    """JCGM 100:2008, annex H.3: b(30) = -0.1494 with standard uncertainty 0.0041, the correlation used."""
    found, row = gum_h3(), np.array([1.0, 10.0])
    assert row @ found.b == pytest.approx(-0.1494, abs=5e-5)
    assert np.sqrt(row @ found.covariance @ row) == pytest.approx(0.0041, abs=5e-5)


def test_gum_h3_is_met_in_the_recomputed_digits() -> None:
    """Recomputed from the published data by another program; eight digits."""
    found = gum_h3()
    assert found.b == pytest.approx([-0.17120379, 0.0021826977], abs=6e-9)
    assert found.sd == pytest.approx([0.0028776, 0.00066794], rel=2e-5)
    assert found.correlation == pytest.approx(-0.93043, abs=5e-6)
    row = np.array([1.0, 10.0])
    assert row @ found.b == pytest.approx(-0.1493768, abs=5e-8)
    assert np.sqrt(row @ found.covariance @ row) == pytest.approx(0.0041386, abs=5e-8)


def test_a_perturbed_jacobian_would_miss_the_certified_deviations() -> None:
    """The check bites: one per cent on a derivative shows in the standard deviation."""
    make, _, b, sd, _, _ = NIST["Misra1a"]
    curve = make(*table("nist_Misra1a.csv"))
    exact = curve.gradient
    curve.gradient = lambda x, b: exact(x, b) * np.array([1.01, 1.0])
    found = solve(curve, (b[0], b[1]))
    assert np.abs(found.sd / sd - 1.0).max() > 1e-3


def linear(name: str) -> tuple[Floats, Floats, Floats]:
    """Design (m, p), readings (m,) and their standard deviations (m,)."""
    if name == "GUM H.3":
        t, b = table("gum_h3.csv")
        return np.stack([np.ones_like(t), t - 20.0], axis=1), b, np.full(t.size, 0.0035)
    rng = np.random.default_rng(7)
    x = np.linspace(-1.0, 2.0, 25)
    design = {"parabola": np.vander(x, 3), "columns at random": rng.standard_normal((25, 6))}[name]
    sd = np.exp(rng.uniform(-3.0, 0.0, 25))
    return design, design @ rng.uniform(-1.0, 1.0, design.shape[1]) + sd * rng.standard_normal(25), sd


@pytest.mark.parametrize("absolute", [True, False])
@pytest.mark.parametrize("name", ["GUM H.3", "parabola", "columns at random"])
def test_curve_fit_of_scipy_agrees_on_linear_models(name: str, absolute: bool) -> None:
    """scipy.optimize.curve_fit (MINPACK), weights absolute or scaled by s; tolerance 1e-8 of a standard deviation."""
    design, y, sd = linear(name)
    p = design.shape[1]
    curve = Curve(np.arange(y.size), y, lambda _, b: design @ b, lambda _, b: design, False)
    curve.sd, curve.size, curve.pads = sd, p, np.arange(p)
    found: Fit = fit(cast(Any, curve), start=np.zeros(p), prior=None)
    covariance = found.covariance
    if not absolute:
        covariance = covariance * found.chi_square / found.degrees_of_freedom
    theirs, spread = curve_fit(
        lambda _, *b: design @ np.array(b),
        np.arange(y.size),
        y,
        p0=np.zeros(p),
        sigma=sd,
        absolute_sigma=absolute,
        jac=lambda _, *b: design,
        ftol=1e-15,
        xtol=1e-15,
        gtol=1e-15,
    )
    scale = np.sqrt(np.diag(spread))
    assert found.log_stiffness / scale == pytest.approx(theirs / scale, rel=0.0, abs=1e-8)
    assert covariance / np.outer(scale, scale) == pytest.approx(
        spread / np.outer(scale, scale), rel=0.0, abs=1e-8
    )


def test_weights_of_gum_h3_equal_repeats() -> None:
    """Parameters and (A' W A)^-1 alike; the s-scaled deviations differ, as the degrees of freedom do."""
    t, b = table("gum_h3.csv")
    times = np.arange(t.size) % 3 + 1
    index = np.repeat(np.arange(t.size), times)

    def line(x: Floats, y: Floats) -> Floats:
        return y[0] + y[1] * (x - 20.0)

    def gradient(x: Floats, _: Floats) -> Floats:
        return np.stack([np.ones_like(x), x - 20.0], axis=1)

    weighted, repeated = Curve(t, b, line, gradient, False), Curve(t[index], b[index], line, gradient, False)
    weighted.sd = 1.0 / np.sqrt(times)
    one: Fit = fit(cast(ObservationModel, weighted), start=np.zeros(2), prior=None)
    other: Fit = fit(cast(ObservationModel, repeated), start=np.zeros(2), prior=None)
    assert one.log_stiffness == pytest.approx(other.log_stiffness, rel=1e-10)
    assert one.covariance == pytest.approx(other.covariance, rel=1e-10)
    assert one.degrees_of_freedom != other.degrees_of_freedom
