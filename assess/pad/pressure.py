"""Compression modulus of a bonded layer by the pressure solution, closed forms and series.

A thin layer of nearly incompressible rubber between rigid plates: the pressure p obeys
div grad p - 12 G p / (K t^2) = -12 G e / t^2 with p = 0 on the edges, and the modulus is the mean pressure over the
strain e (Chalhoub and Kelly, Effect of bulk compressibility on the stiffness of cylindrical base isolation bearings,
Int. J. Solids Structures 26, 1990; and Analysis of infinite-strip-shaped base isolator, J. Eng. Mech. 117, 1991; from
memory). The strip and the disc have closed forms; the rectangle is the Fourier series of the same equation, summed
in one direction and exact in the other.

Valid for layers with a shape factor of several: the deviatoric stress of the rubber is left out.
"""

from __future__ import annotations

import math

import numpy as np
from scipy import special

_TERMS = 4000  # odd harmonics; the rest falls with the fourth power


def strip_modulus(shear: float, width: float, thickness: float, bulk: float = math.inf) -> float:
    """Compression modulus of an infinitely long strip, in the unit of `shear`.

    Parameters
    ----------
    shear, bulk : moduli G and K in one unit; K may be infinite
    width, thickness : of the strip and the layer, m; the shape factor is width / (2 thickness)
    """
    x = math.sqrt(12.0 * shear / bulk) * width / (2.0 * thickness)
    gain = 1.0 / 3.0 - 2.0 * x * x / 15.0 if x < 1e-3 else (1.0 - math.tanh(x) / x) / (x * x)
    return 3.0 * shear * (width / thickness) ** 2 * gain


def disc_modulus(shear: float, diameter: float, thickness: float, bulk: float = math.inf) -> float:
    """Compression modulus of a disc; parameters as for the strip, the shape factor is diameter / (4 thickness)."""
    y = math.sqrt(12.0 * shear / bulk) * diameter / (2.0 * thickness)
    if y < 1e-3:
        gain = 1.0 / 8.0 - y * y / 48.0
    else:
        gain = (1.0 - 2.0 * float(special.ive(1, y)) / (y * float(special.ive(0, y)))) / (y * y)
    return 3.0 * shear * (diameter / thickness) ** 2 * gain


def rectangle_modulus(
    shear: float, length: float, width: float, thickness: float, bulk: float = math.inf
) -> float:
    """Compression modulus of a rectangle; parameters as for the strip, either side may be the longer."""
    a, b = max(length, width), min(length, width)
    decay = 12.0 * shear / (bulk * thickness**2)  # 1/m2
    m = 2.0 * np.arange(_TERMS) + 1.0
    mu = np.sqrt(decay + (m * math.pi / a) ** 2)
    half = mu * b / 2.0
    terms = 8.0 / (math.pi * m) ** 2 * (1.0 - np.tanh(half) / half) / mu**2
    return float(12.0 * shear / thickness**2 * terms.sum())
