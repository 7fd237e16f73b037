"""Compression of a pad by the published formulas, and how uncertain that is.

Each layer i of thickness t shortens by (F / A) t / E_i, and the pad's stiffness is A / sum(t / E_i). The formulas
differ in the plan they reckon with and in E_i:

en1337-3
    plan of the plates; 1/E = 1/(5 G S^2) + 1/Eb; an outer layer counts 1.4 times its thickness in S from 3 mm on, a
    thinner one is left out (EN 1337-3:2005, from memory, to be confirmed against the standard).
aashto-lrfd
    plan of the whole pad; E = 4.8 G S^2, without a bulk term unless a bulk modulus is given (AASHTO LRFD 14.7.6, from
    memory, to be confirmed against the standard).
gent-lindley
    plan of the plates; Ea = E0 (1 + 2 k S^2), 1/E = 1/Ea + 1/B (Gent and Lindley 1959; form seen in Strojniski
    vestnik 60, 2014, p. 506).
pressure-solution
    plan of the plates; `pressure.py`: circles in closed form, rectangles by series.

A plain pad slips on its faces: in every formula it counts 1.8 times its thickness in S (earlier bearing standards, from
memory, to be confirmed).
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from functools import cached_property

from assess.pad.elastomer import FORMULAS, Elastomer
from assess.pad.geometry import Layer, PadGeometry, Plan
from assess.pad.pressure import disc_modulus, rectangle_modulus
from assess.pad.tables import PadError, table

Z95 = 1.959963984540054
OUTER_FACTOR = 1.4
THINNEST_OUTER = 0.003 - 1e-9  # m
PLAIN_FACTOR = 1.8


@dataclass(frozen=True, kw_only=True)
class Pad:
    """A pad with its rubber and the formula it is reckoned by."""

    geometry: PadGeometry
    rubber: Elastomer
    formula: str

    def __post_init__(self) -> None:
        if self.formula not in FORMULAS:
            raise PadError("formula", f'"{self.formula}" is not known', f"write one of {', '.join(FORMULAS)}")

    @cached_property
    def plan(self) -> Plan:
        """The plan that the formula reckons with; pressures are over its area."""
        return self.geometry.plan(gross=self.formula == "aashto-lrfd")

    @property
    def shape_factor(self) -> float:
        """Shape factor S of an inner layer (or of the plain pad)."""
        return self.plan.shape_factor(_effective(self.formula, self.geometry.rubber[0]))

    @property
    def layer_modulus(self) -> float:
        """Compression modulus E of an inner layer (or of the plain pad), kN/m2."""
        return self._modulus(self.geometry.rubber[0])

    @cached_property
    def stiffness(self) -> float:
        """Vertical stiffness, kN/m."""
        give = sum(layer.count * layer.thickness / self._modulus(layer) for layer in self.geometry.rubber)
        return self.plan.area / give

    def layer_strain(self, force: float) -> float:
        """Compressive strain of an inner layer under a force in kN."""
        return force / self.plan.area / self.layer_modulus

    def stiffened(self, factor: float) -> Pad:
        """The same pad with its rubber stiffer by a factor on G (E0 of Gent and Lindley with it)."""
        return replace(self, rubber=self.rubber.stiffened(factor))

    def _modulus(self, layer: Layer) -> float:
        """Compression modulus of a layer, kN/m2; infinite for a layer that the formula leaves out."""
        if self.formula == "en1337-3" and layer.place == "outer" and layer.thickness < THINNEST_OUTER:
            return math.inf
        thickness = _effective(self.formula, layer)
        g, bulk = self.rubber.shear, self.rubber.bulk
        if self.formula == "pressure-solution":
            if self.plan.circular:
                return disc_modulus(g, self.plan.long, thickness, bulk)
            return rectangle_modulus(g, self.plan.long, self.plan.short, thickness, bulk)
        s = self.plan.shape_factor(thickness)
        if self.formula == "en1337-3":
            apparent = 5.0 * g * s * s
        elif self.formula == "aashto-lrfd":
            apparent = 4.8 * g * s * s
        else:
            apparent = self.rubber.youngs * (1.0 + 2.0 * self.rubber.k * s * s)
        return 1.0 / (1.0 / apparent + 1.0 / bulk)


def _effective(formula: str, layer: Layer) -> float:
    """Thickness that counts in the shape factor, m."""
    if layer.place == "plain":
        return PLAIN_FACTOR * layer.thickness
    if layer.place == "outer" and formula == "en1337-3":
        return OUTER_FACTOR * layer.thickness
    return layer.thickness


@dataclass(frozen=True, kw_only=True)
class Doubt:
    """Coefficient of variation of a pad's stiffness, by its parts."""

    shear: float
    height: float
    formula: float

    @property
    def cv(self) -> float:
        """All together, root of the sum of squares."""
        return math.sqrt(self.shear**2 + self.height**2 + self.formula**2)


def stiffness_doubt(pad: Pad, height_tolerance: float | None = None) -> Doubt:
    """Return how uncertain a pad's stiffness is before anything is read.

    A tolerance counts as 1.96 standard deviations. The part of G and that of the rubber height (all layers in
    proportion) are half the difference of ln k between plus and minus the tolerance, over 1.96; the part of the
    formula and the bedding is a figure of `data/prior.toml`.

    Parameters
    ----------
    pad : Pad
    height_tolerance : of the rubber height, m; that of the data file if left out

    Raises
    ------
    PadError
        where a tolerance is as large as the thing itself.
    """
    data = table("prior")
    height = data["height_tolerance_mm"] / 1000.0 if height_tolerance is None else height_tolerance
    g = pad.rubber.shear_tolerance / pad.rubber.shear
    t = height / pad.geometry.rubber_thickness
    for field, share in (("shear_modulus_tolerance", g), ("height_tolerance", t)):
        if not 0.0 <= share < 0.5:
            raise PadError(
                field, f"a tolerance of {share:.0%} of the value is no tolerance", "write a smaller one"
            )
    shear = _log(pad.stiffened(1.0 + g)) - _log(pad.stiffened(1.0 - g))
    by_height = [_log(replace(pad, geometry=pad.geometry.thicker(1.0 + sign * t))) for sign in (-1.0, 1.0)]
    return Doubt(
        shear=shear / (2.0 * Z95),
        height=(by_height[0] - by_height[1]) / (2.0 * Z95),
        formula=float(data["formula_cv"]),
    )


def _log(pad: Pad) -> float:
    return math.log(pad.stiffness)


def batch_correlation() -> float:
    """Return the correlation of ln k between two pads of one batch, where the bridge file gives none."""
    return float(table("prior")["batch_correlation"])
