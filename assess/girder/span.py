"""One span on two hinged ends: exact flexibilities, by integrals that need no subdivision.

Everything here is the unit-load method (principle of virtual work) on a simple span of prismatic
pieces, written with the running integrals

    A_k(x) = int_0^x t^k / EI dt,   B(x) = int_x^L (L - t)^2 / EI dt,   S(x) = int_0^x 1 / GA dt.

They are sums of positive terms, so a piece of a millimetre beside a span of 60 m costs no digits.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.girder.model import REACH, Piece

Floats = NDArray[np.float64]


class SimpleSpan:
    """Flexibilities of a simple span.

    End moments are sagging positive; deflection is downward; slope is the rotation of the
    cross-section (without shear flexibility, the slope of the deflected line).

    Attributes
    ----------
    length : float, m
    breaks : (pieces + 1,) ends of the pieces from the span's left end, m
    flexibility : (2, 2) end rotations per unit end moment, rad/(kN m), at (left, right)
    stiffness : (2, 2) its inverse
    """

    def __init__(self, pieces: Sequence[Piece]) -> None:
        self.breaks: Floats = np.concatenate([[0.0], np.cumsum([p.length for p in pieces])])
        self.length = float(self.breaks[-1])
        self._c: Floats = np.array([1.0 / p.flexural for p in pieces])
        self._g: Floats = np.array([1.0 / p.shear for p in pieces])
        left, right = self.breaks[:-1], self.breaks[1:]
        self._a1 = _running(self._c * _power_step(left, right, 2))
        self._a2 = _running(self._c * _power_step(left, right, 3))
        steps = self._c * _power_step(self.length - right, self.length - left, 3)
        self._b: Floats = np.append(np.cumsum(steps[::-1])[::-1], 0.0)
        self._s = _running(self._g * (right - left))
        length2 = self.length**2
        shear = self._s[-1] / length2
        near = self._b[0] / length2
        cross = float(self._hat(np.array(self.length))) / length2
        far = self._a2[-1] / length2
        # f is symmetric positive definite; its inverse is written out to keep the symmetry, and the
        # square of the shear term, which cancels, is left out of the determinant
        det = near * far - cross * cross + shear * (near + far + 2.0 * cross)
        near, cross, far = near + shear, cross - shear, far + shear
        self.flexibility: Floats = np.array([[near, cross], [cross, far]])
        self.stiffness: Floats = np.array([[far, -cross], [-cross, near]]) / det

    # running integrals ------------------------------------------------------------------

    def _piece(self, x: Floats) -> NDArray[np.intp]:
        return np.clip(np.searchsorted(self.breaks, x, side="right") - 1, 0, self._c.size - 1)

    def _hat(self, x: Floats) -> Floats:
        """int_0^x t (L - t) / EI dt."""
        i = self._piece(x)
        b, c = self.breaks[i], self._c[i]
        first = self._a1[i] + c * _power_step(b, x, 2)
        second = self._a2[i] + c * _power_step(b, x, 3)
        return np.asarray(self.length * first - second)

    def _square(self, x: Floats) -> Floats:
        """int_0^x t^2 / EI dt."""
        i = self._piece(x)
        return np.asarray(self._a2[i] + self._c[i] * _power_step(self.breaks[i], x, 3))

    def _far_square(self, x: Floats) -> Floats:
        """int_x^L (L - t)^2 / EI dt."""
        i = self._piece(x)
        u, v = self.length - self.breaks[i + 1], self.length - x
        return np.asarray(self._b[i + 1] + self._c[i] * _power_step(u, v, 3))

    def _shear(self, x: Floats) -> Floats:
        """int_0^x 1 / GA dt."""
        i = self._piece(x)
        return np.asarray(self._s[i] + self._g[i] * (x - self.breaks[i]))

    # by name ------------------------------------------------------------------------------

    def end_response(self, quantity: str, x: Floats) -> Floats:
        """Response at x per unit moment at the left and at the right end, (..., 2)."""
        if quantity == "deflection":
            return self.end_deflection(x)
        if quantity == "slope":
            return self.end_slope(x)
        if quantity == "moment":
            return np.stack([1.0 - x / self.length, x / self.length], axis=-1)
        one = np.full(np.shape(x), 1.0 / self.length)
        return np.stack([-one, one], axis=-1)

    def load_response(self, quantity: str, x: Floats, a: Floats, side: NDArray[np.intp] | int) -> Floats:
        """Response at x under a unit load at a (broadcast); `side` matters to shear alone."""
        if quantity == "deflection":
            return self.load_deflection(x, a)
        if quantity == "slope":
            return self.load_slope(x, a)
        if quantity == "moment":
            return self.load_moment(x, a)
        return self.load_shear(x, a, side)

    # responses to unit end moments --------------------------------------------------------

    def end_deflection(self, x: Floats) -> Floats:
        """Deflection at x per unit moment at the left and at the right end, (..., 2), m/(kN m).

        By Maxwell's theorem also the end rotations per unit load at x.
        """
        length = self.length
        hat, total = self._hat(x), self._hat(np.array(length))
        shear = (self._shear(x) - x * self._s[-1] / length) / length
        left = ((length - x) * hat + x * self._far_square(x)) / length**2 - shear
        right = ((length - x) * self._square(x) + x * (total - hat)) / length**2 + shear
        return np.stack([left, right], axis=-1)

    @property
    def end_cubics(self) -> Floats:
        """`end_deflection` as cubics: (pieces, 2, 4), ascending powers of the distance into each piece."""
        at, length = self.breaks[:-1], self.length
        value = self.end_deflection(at)
        rate = self.end_slope(at) + self._g[:, None] * np.array([-1.0, 1.0]) / length
        moment = np.stack([1.0 - at / length, at / length], axis=-1)
        curvature = -self._c[:, None] * moment
        change = self._c[:, None] * np.array([1.0, -1.0]) / length
        return np.stack([value, rate, curvature / 2.0, change / 6.0], axis=-1)

    def end_slope(self, x: Floats) -> Floats:
        """Slope at x per unit moment at the left and at the right end, (..., 2), rad/(kN m)."""
        hat, total = self._hat(x), self._hat(np.array(self.length))
        left = self._far_square(x) - hat + self._s[-1]
        right = total - hat - self._square(x) - self._s[-1]
        return np.stack([left, right], axis=-1) / self.length**2

    # responses to a unit load ---------------------------------------------------------------

    def load_deflection(self, x: Floats, a: Floats) -> Floats:
        """Deflection at x under a unit load at a (broadcast), m/kN."""
        low, high, length = np.minimum(x, a), np.maximum(x, a), self.length
        bending = (
            (length - low) * (length - high) * self._square(low)
            + low * (length - high) * (self._hat(high) - self._hat(low))
            + low * high * self._far_square(high)
        )
        total = self._s[-1]
        s_low, s_high = self._shear(low), self._shear(high)
        shear = (
            (length - low) * (length - high) * s_low
            - low * (length - high) * (s_high - s_low)
            + low * high * (total - s_high)
        )
        return np.asarray((bending + shear) / length**2)

    def load_slope(self, x: Floats, a: Floats) -> Floats:
        """Slope at x under a unit load at a (broadcast), rad/kN."""
        length = self.length
        hat_x, hat_a = self._hat(x), self._hat(a)
        before = (length - a) * (hat_a - hat_x - self._square(x)) + a * self._far_square(a)
        after = -(length - a) * self._square(a) + a * (hat_a - hat_x + self._far_square(x))
        shear = a * self._s[-1] - length * self._shear(a)
        return np.asarray((np.where(x <= a, before, after) + shear) / length**2)

    def load_moment(self, x: Floats, a: Floats) -> Floats:
        """Moment at x under a unit load at a (broadcast), m."""
        return np.asarray(np.minimum((1.0 - x / self.length) * a, x * (1.0 - a / self.length)))

    def load_shear(self, x: Floats, a: Floats, side: NDArray[np.intp] | int) -> Floats:
        """Shear at x under a unit load at a (broadcast); `side` says which face of a load standing at x."""
        near = REACH * self.length
        beyond = np.where(np.asarray(side) > 0, a <= x + near, a < x - near)
        return np.asarray((self.length - a) / self.length - beyond)


def _power_step(low: Floats, high: Floats, power: int) -> Floats:
    """int_low^high t^(power - 1) dt for power 2 or 3, factored so that short steps keep their digits."""
    terms = low + high if power == 2 else low * low + low * high + high * high
    return (high - low) * terms / power


def _running(steps: Floats) -> Floats:
    return np.concatenate([[0.0], np.cumsum(steps)])
