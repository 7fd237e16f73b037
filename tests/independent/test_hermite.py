"""Permanent loads against scikit-fem's Hermite beam elements and sympy's and scipy's own solvers.

Double precision: the girders here have no slivers, and a few elements a piece, so the elements keep
about ten digits.
"""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy.integrate import solve_bvp
from scipy.sparse import csr_matrix
from scipy.sparse.linalg import spsolve
from skfem import Basis, BilinearForm, ElementLineHermite, LinearForm, MeshLine1
from skfem.helpers import dd
from sympy import Rational, Symbol
from sympy.physics.continuum_mechanics.beam import Beam

from assess.girder import Condensed, Girder, Piece, forces_of, places
from assess.loads import LoadCase
from tests.girder.strategies import FEW, Case, apart, cases

Floats = NDArray[np.float64]


@BilinearForm
def bending(u, v, w):  # type: ignore[no-untyped-def]
    return w.ei * dd(u)[0, 0] * dd(v)[0, 0]


@LinearForm
def loading(v, w):  # type: ignore[no-untyped-def]
    return w.q * v


def hermite(case: Case) -> tuple[Floats, Floats, Floats]:
    """Levels and reactions (n,) of the supports and levels at the ends of all pieces, for pads of k > 0."""
    breaks = case.girder.breakpoints
    marks = [*breaks, *(x for x, _ in case.loads.points)]
    marks += [x for start, end, _ in case.loads.uniforms for x in (start, end)]
    nodes = np.unique(marks)
    mesh = MeshLine1.init_tensor(nodes)
    basis = Basis(mesh, ElementLineHermite())
    middle = (nodes[:-1] + nodes[1:]) / 2.0
    pieces = [piece for span in case.girder.spans for piece in span]
    ei = np.array([pieces[i].flexural for i in np.searchsorted(breaks, middle) - 1])
    q = np.array([sum(w for a, b, w in case.loads.uniforms if a < x < b) for x in middle])
    points = basis.X.shape[1]
    stiffness = bending.assemble(basis, ei=np.repeat(ei[:, None], points, axis=1)).tolil()
    load = loading.assemble(basis, q=np.repeat(q[:, None], points, axis=1))
    level = basis.nodal_dofs[0]
    for x, weight in case.loads.points:
        load[level[np.argmin(np.abs(mesh.p[0] - x))]] += weight
    at = level[[np.argmin(np.abs(mesh.p[0] - x)) for x in case.girder.support_positions]]
    for dof, f, drop in zip(at, case.compliance, case.settlement, strict=True):
        stiffness[dof, dof] += 1.0 / f
        load[dof] += drop / f
    u = spsolve(csr_matrix(stiffness), load)
    ends = level[[np.argmin(np.abs(mesh.p[0] - x)) for x in breaks]]
    return u[at], (u[at] - case.settlement) / case.compliance, u[ends]


@FEW
@given(cases(most=5), st.data())
def test_hermite_elements_of_another_library_agree(case: Case, data: st.DataObject) -> None:
    # loads on whole pieces and at their ends, so that no sliver of an element costs digits
    breaks = case.girder.breakpoints
    i, j = sorted(data.draw(st.lists(st.integers(0, breaks.size - 1), min_size=2, max_size=2, unique=True)))
    loads = LoadCase(
        points=((float(breaks[i]), 250.0), (float(breaks[:2].mean()), 400.0)),
        uniforms=((float(breaks[i]), float(breaks[j]), 31.0),),
    )
    compliance = np.where(case.compliance == 0.0, 3e-6, case.compliance)
    case = Case(girder=case.girder, compliance=compliance, settlement=case.settlement, loads=loads)
    condensed = Condensed(case.girder)
    state = condensed.solve(compliance, forces_of(condensed, loads), case.settlement)
    level, reaction, ends = hermite(case)
    place = places(condensed, "deflection", breaks)
    value = place.held(loads) + place.rows @ state.displacement
    assert apart(state.displacement, level) < 1e-8
    assert apart(state.reaction, reaction) < 1e-8
    assert apart(value, ends) < 1e-8


def test_sympys_beam_agrees_exactly() -> None:
    ei, first, second = Rational(40000), Symbol("R0"), Symbol("R1")
    third = Symbol("R2")
    beam = Beam(15, ei, 1)
    beam.apply_load(first, 0, -1)
    beam.apply_load(second, 6, -1)
    beam.apply_load(third, 15, -1)
    beam.apply_load(-30, 0, 0, end=15)
    beam.apply_load(-120, 9, -1)
    beam.bc_deflection = [(0, 0), (6, 0), (15, 0)]
    beam.solve_for_reaction_loads(first, second, third)
    expected = np.array([float(beam.reaction_loads[symbol]) for symbol in (first, second, third)])
    hogging = -float(beam.bending_moment().subs(Symbol("x"), 6))

    girder = Girder(((Piece(length=6.0, flexural=40000.0),), (Piece(length=9.0, flexural=40000.0),)))
    loads = LoadCase(points=((9.0, 120.0),), uniforms=((0.0, 15.0, 30.0),))
    condensed = Condensed(girder)
    state = condensed.solve(np.zeros(3), forces_of(condensed, loads))
    place = places(condensed, "moment", np.array([6.0]))
    assert state.reaction == pytest.approx(expected, rel=1e-12)
    assert place.held(loads)[0] == pytest.approx(hogging, rel=1e-12)


def test_scipys_boundary_value_solver_agrees() -> None:
    # a girder of 10 + 14 m on three pads under 25 kN/m; v, slope, M, V in each span, spans side by side
    ei, w, lengths = (6.0e5, 9.0e5), 25.0, (10.0, 14.0)
    f, drop = np.array([2e-5, 4e-5, 3e-5]), np.array([0.0, 0.012, -0.003])

    def field(t: Floats, y: Floats) -> Floats:
        rows = []
        for s in range(2):
            _, slope, m, v = y[4 * s : 4 * s + 4]
            rows += [slope, -m / ei[s], v, np.full(t.shape, -w)]
            rows[-4:] = [lengths[s] * row for row in rows[-4:]]
        return np.array(rows)

    def ends(a: Floats, b: Floats) -> Floats:
        return np.array([
            a[2], b[6],
            a[0] - drop[0] - f[0] * a[3],
            b[4] - drop[2] + f[2] * b[7],
            b[0] - a[4], b[1] - a[5], b[2] - a[6],
            a[4] - drop[1] - f[1] * (a[7] - b[3]),
        ])  # fmt: skip

    solution = solve_bvp(field, ends, np.linspace(0.0, 1.0, 41), np.zeros((8, 41)), tol=1e-10)
    assert solution.success
    girder = Girder(tuple((Piece(length=a, flexural=b),) for a, b in zip(lengths, ei, strict=True)))
    loads = LoadCase(uniforms=((0.0, 24.0, w),))
    condensed = Condensed(girder)
    state = condensed.solve(f, forces_of(condensed, loads), drop)
    t = np.linspace(0.05, 0.95, 19)
    x = np.concatenate([10.0 * t, 10.0 + 14.0 * t])
    for row, quantity in enumerate(("deflection", "slope", "moment", "shear")):
        place = places(condensed, quantity, x)
        value = place.held(loads) + place.rows @ state.displacement
        expected = np.concatenate([solution.sol(t)[row], solution.sol(t)[4 + row]])
        assert apart(value, expected) < 1e-8, quantity
