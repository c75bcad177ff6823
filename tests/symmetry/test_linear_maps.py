"""Spaces of matrices: which of them contain an invertible one."""

from itertools import product
from random import Random
from typing import Any

import pytest
import strategies as draws
import sympy
from hypothesis import given
from hypothesis import strategies as st

from trivector.fields import QQ, field_from_spec, prime_field
from trivector.symmetry.linear_maps import (
    MapSystem,
    count_invertible,
    find_invertible,
    is_never_invertible,
)
from trivector.symmetry.linear_maps import _shrinks as shrinks


def flat(matrices: Any, field: Any, n: int) -> Any:
    rows = [[field.element(x) for row in m for x in row] for m in matrices]
    return field.matrix(rows, n * n)


def determinant_vanishes(matrices: Any, p: int) -> bool:
    """The determinant of the generic member, as a polynomial modulo p (0: over Q)."""
    x = sympy.symbols(f"x0:{len(matrices)}")
    generic = sum((s * sympy.Matrix(m) for s, m in zip(x, matrices, strict=True)), sympy.zeros(3))
    polynomial = sympy.Poly(sympy.expand(generic.det()), *x)
    return all(int(c) % p == 0 if p else c == 0 for c in polynomial.coeffs())


matrix = st.lists(st.lists(st.integers(-1, 1), min_size=3, max_size=3), min_size=3, max_size=3)


@pytest.mark.parametrize("p", [0, 2, 3, 5])
@given(matrices=st.lists(matrix, min_size=1, max_size=3))
@draws.some
def test_the_generic_determinant_decides(p: int, matrices: Any) -> None:
    field = prime_field(p) if p else QQ
    space = flat(matrices, field, 3)
    assert is_never_invertible(field, space, 3, Random(1)) is determinant_vanishes(matrices, p)
    found = find_invertible(field, space, 3, Random(2))
    if found is not None:
        assert found.det()
        assert not determinant_vanishes(matrices, p)


def test_alternating_matrices_of_odd_size_are_singular_without_a_small_image() -> None:
    # classical: the determinant vanishes, though no subspace is shrunk; the grid decides
    skew = [
        [[0, 1, 0], [-1, 0, 0], [0, 0, 0]],
        [[0, 0, 1], [0, 0, 0], [-1, 0, 0]],
        [[0, 0, 0], [0, 0, 1], [0, -1, 0]],
    ]
    for spec in ("Q", "F_2", "F_4", "F_7"):
        field = field_from_spec(spec)
        assert is_never_invertible(field, flat(skew, field, 3), 3, Random(0)) is True


def test_a_singular_matrix_proves_nothing_where_its_wong_sequence_leaves_its_image() -> None:
    one, other = QQ.matrix([[1, 0], [0, 0]], 2), QQ.matrix([[0, 0], [0, 1]], 2)
    assert not shrinks(QQ, [one, other], one, 2)
    assert shrinks(QQ, [one], one, 2)


@pytest.mark.parametrize("q", [2, 3, 4])
def test_invertible_matrices_are_counted(q: int) -> None:
    # |GL_2(q)| = (q² − 1)(q² − q), classical
    field = field_from_spec(f"F_{q}")
    units = [[[int(k == 2 * i + j) for j in range(2)] for i in range(2)] for k in range(4)]
    space = flat(units, field, 2)
    assert count_invertible(field, space, 2, 1000) == (q * q - 1) * (q * q - q)
    assert count_invertible(field, space, 2, 10) is None
    assert count_invertible(QQ, flat(units, QQ, 2), 2, 1000) is None


def test_the_maps_between_planes_are_those_of_all_matrices_over_f2() -> None:
    # All 2^16 matrices of a four-dimensional V; the planes are hyperplanes there.
    field = prime_field(2)
    planes = [
        ((1, 0, 0, 0), (0, 1, 0, 0), (0, 0, 1, 1)),
        ((1, 0, 0, 1), (0, 1, 0, 0), (0, 0, 1, 0)),
    ]
    rows = [tuple(tuple(field.element(x) for x in row) for row in plane) for plane in planes]
    system = MapSystem(field, 4, rows, rows)
    space = system.restrict(system.everything, 0, 1)
    found = 0
    for entries in product(range(2), repeat=16):
        g = [entries[4 * i : 4 * i + 4] for i in range(4)]
        images = [[sum(a * x for a, x in zip(r, w, strict=True)) % 2 for r in g] for w in planes[0]]
        # planes[1] is the hyperplane x0 + x3 = 0 of this V
        found += all((v[0] + v[3]) % 2 == 0 for v in images)
    assert found == 2 ** space.nrows()
