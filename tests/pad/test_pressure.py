"""The pressure solution: limits of its closed forms, and the rectangle against both of them."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import sparse
from scipy.sparse import linalg

from assess.pad import disc_modulus, rectangle_modulus, strip_modulus
from tests.pad.made import PLAIN

G, K = 0.9, 2000.0


def by_grid(a: float, b: float, t: float, n: int) -> float:
    """Mean pressure over strain by finite differences on a quarter of the rectangle, n x n cells."""
    decay, source = 12.0 * G / (K * t * t), 12.0 * G / (t * t)
    hx, hy = a / 2.0 / n, b / 2.0 / n

    def second(h: float) -> sparse.csr_matrix:
        main = np.full(n, 2.0)
        main[0], main[-1] = 1.0, 3.0  # mirror at the middle; zero at the edge, half a cell away
        return sparse.diags([np.full(n - 1, -1.0), main, np.full(n - 1, -1.0)], [-1, 0, 1]) / h**2

    eye = sparse.identity(n)
    operator = sparse.kron(second(hx), eye) + sparse.kron(eye, second(hy)) + decay * sparse.identity(n * n)
    return float(linalg.spsolve(operator.tocsc(), np.full(n * n, source)).mean())


@pytest.mark.parametrize(("a", "b"), [(300.0, 300.0), (400.0, 300.0), (900.0, 200.0)])
def test_the_rectangle_is_that_of_finite_differences(a: float, b: float):
    """Second order differences: the rest shrinks by four when the cells halve, so that Richardson's value counts."""
    coarse, fine = by_grid(a, b, 10.0, 40), by_grid(a, b, 10.0, 80)
    assert rectangle_modulus(G, a, b, 10.0, K) == pytest.approx(fine + (fine - coarse) / 3.0, rel=1e-4)


def test_a_long_rectangle_is_a_strip():
    assert rectangle_modulus(G, 1e5, 200.0, 10.0, K) == pytest.approx(
        strip_modulus(G, 200.0, 10.0, K), rel=2e-3
    )


@PLAIN
@given(st.floats(50.0, 900.0), st.floats(50.0, 900.0), st.floats(5.0, 20.0))
def test_a_rectangle_lies_between_a_strip_and_nothing_and_turns_round(a: float, b: float, t: float):
    found = rectangle_modulus(G, a, b, t, K)
    assert 0.0 < found < strip_modulus(G, min(a, b), t, K)
    assert rectangle_modulus(G, b, a, t, K) == pytest.approx(found)


@PLAIN
@given(st.floats(2.0, 30.0))
def test_without_bulk_the_closed_forms_are_the_text_book_ones(s: float):
    """Strip 4 G S2, disc 6 G S2: incompressible rubber, any text on laminated bearings."""
    assert strip_modulus(G, 2.0 * s, 1.0) == pytest.approx(4.0 * G * s * s)
    assert disc_modulus(G, 4.0 * s, 1.0) == pytest.approx(6.0 * G * s * s)


@pytest.mark.parametrize("modulus", [strip_modulus, disc_modulus])
def test_the_closed_forms_join_their_series(modulus):
    """Near zero the closed form loses its digits and the series takes over: no step between them."""
    bulks = np.geomspace(1e5, 1e12, 400)
    found = np.array([modulus(G, 60.0, 1.0, bulk) for bulk in bulks])
    assert np.all(np.diff(found) >= -1e-7 * found[:-1])
    assert found[-1] == pytest.approx(modulus(G, 60.0, 1.0), rel=1e-6)


@pytest.mark.parametrize("modulus", [strip_modulus, disc_modulus])
def test_a_very_flat_layer_is_as_stiff_as_its_bulk(modulus):
    assert modulus(G, 1e4, 1.0, K) == pytest.approx(K, rel=0.01)
    assert math.isfinite(modulus(G, 1e7, 1.0, K))
