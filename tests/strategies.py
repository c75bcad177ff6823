"""One place for the objects that property tests draw, over every field.

To test one more field everywhere, add it to ``FIELDS``.
"""

from collections.abc import Sequence
from itertools import combinations
from random import Random
from typing import Any

import pytest
from hypothesis import HealthCheck, settings
from hypothesis import strategies as st

from trivector.exterior import Trivector
from trivector.fields import QQ, Field, field_from_spec, prime_field
from trivector.fields.linear import row_space
from trivector.subspaces import Flat, Plane, Subspace

FIELDS: list[Field] = [
    QQ,
    prime_field(2),
    prime_field(3),
    prime_field(5),
    prime_field(7),
    prime_field(101),
    prime_field(2305843009213693951),  # 2^61 − 1
    field_from_spec("F_4"),
    field_from_spec("F_9"),
    field_from_spec({"modulus": "x^2+1"}),
]

PRIME_FIELDS = [field for field in FIELDS if field.order == field.characteristic]
ODD_FIELDS = [field for field in FIELDS if field.characteristic != 2]

over_fields = pytest.mark.parametrize("field", FIELDS, ids=lambda field: field.name)
over_prime_fields = pytest.mark.parametrize("field", PRIME_FIELDS, ids=lambda field: field.name)
over_odd_fields = pytest.mark.parametrize("field", ODD_FIELDS, ids=lambda field: field.name)
in_six_and_seven = pytest.mark.parametrize("n", [6, 7])

# A busy machine is no reason to fail, so nothing here is timed.
few = settings(max_examples=6, deadline=None, suppress_health_check=[HealthCheck.too_slow])
some = settings(few, max_examples=20)

Rows = list[list[Any]]


# Elements, vectors, matrices


def elements(field: Field) -> st.SearchStrategy[Any]:
    """Elements: small integers often, so that coincidences occur, and any others."""
    choices = [
        st.integers(-2, 2).map(field.element),
        st.integers(0, 2**32).map(lambda seed: field.random_element(Random(seed))),
    ]
    if field.characteristic == 0:
        choices.append(st.fractions(-9, 9, max_denominator=7).map(field.element))
    return st.one_of(choices)


def nonzero_elements(field: Field) -> st.SearchStrategy[Any]:
    return elements(field).map(lambda x: x if x else field.one)


def vectors(field: Field, size: int) -> st.SearchStrategy[list[Any]]:
    """Entry by entry, or (quicker to draw) all at once from one seed."""

    def from_seed(seed: int) -> list[Any]:
        rng = Random(seed)
        return [field.random_element(rng) for _ in range(size)]

    entry_by_entry = st.lists(elements(field), min_size=size, max_size=size)
    return st.one_of(entry_by_entry, st.integers(0, 2**32).map(from_seed))


def matrices(field: Field, nrows: int, ncols: int) -> st.SearchStrategy[Rows]:
    """Any matrix; over a large field most often of full rank."""
    return vectors(field, nrows * ncols).map(
        lambda entries: [entries[i * ncols : (i + 1) * ncols] for i in range(nrows)]
    )


@st.composite
def matrices_of_any_rank(draw: Any, field: Field, nrows: int, ncols: int) -> Rows:
    """A product of two matrices, so that every rank is likely."""
    inner = draw(st.integers(0, min(nrows, ncols)))
    if inner == 0:
        return [[field.zero] * ncols for _ in range(nrows)]
    left, right = draw(matrices(field, nrows, inner)), draw(matrices(field, inner, ncols))
    return product(field, left, right)


@st.composite
def invertible_matrices(draw: Any, field: Field, size: int) -> Rows:
    """Lower triangular × permutation × upper triangular: every invertible matrix is one."""
    lower, upper = _unitriangular(draw, field, size)
    for i in range(size):
        upper[i][i] = draw(nonzero_elements(field))
    order = draw(st.permutations(range(size)))
    return product(field, lower, [upper[i] for i in order])


@st.composite
def unimodular_matrices(draw: Any, field: Field, size: int) -> Rows:
    """Of determinant 1: lower × upper unitriangular, two rows exchanged and one negated."""
    rows = product(field, *_unitriangular(draw, field, size))
    i, j = draw(st.sampled_from([(i, j) for i in range(size) for j in range(i)]))
    rows[i], rows[j] = rows[j], [-x for x in rows[i]]
    return rows


def _unitriangular(draw: Any, field: Field, size: int) -> tuple[Rows, Rows]:
    lower, upper = draw(matrices(field, size, size)), draw(matrices(field, size, size))
    for i in range(size):
        lower[i][i] = upper[i][i] = field.one
        for j in range(i):
            lower[j][i] = upper[i][j] = field.zero
    return lower, upper


# Literal linear algebra, to check answers with


def identity(field: Field, size: int) -> Rows:
    return [[field.one if i == j else field.zero for j in range(size)] for i in range(size)]


def product(field: Field, left: Sequence[Sequence[Any]], right: Sequence[Sequence[Any]]) -> Rows:
    columns = list(zip(*right, strict=True))
    return [[dot(field, row, column) for column in columns] for row in left]


def dot(field: Field, left: Sequence[Any], right: Sequence[Any]) -> Any:
    return sum((a * b for a, b in zip(left, right, strict=True)), field.zero)


def apply(field: Field, matrix: Sequence[Sequence[Any]], vector: Sequence[Any]) -> list[Any]:
    """The matrix times a column vector."""
    return [dot(field, row, vector) for row in matrix]


def combine(
    field: Field, coefficients: Sequence[Any], rows: Sequence[Sequence[Any]], size: int
) -> tuple[Any, ...]:
    """Σ coefficients[i]·rows[i] in k^size."""
    total = [field.zero] * size
    for coefficient, row in zip(coefficients, rows, strict=True):
        total = [x + coefficient * y for x, y in zip(total, row, strict=True)]
    return tuple(total)


def literal_reduced(
    field: Field, rows: Sequence[Sequence[Any]], ncols: int
) -> tuple[Rows, list[int]]:
    """Reduced echelon form and pivot columns, column by column."""
    matrix, pivots = [list(row) for row in rows], []
    for column in range(ncols):
        top = len(pivots)
        pivot = next((i for i in range(top, len(matrix)) if matrix[i][column]), None)
        if pivot is None:
            continue
        matrix[top], matrix[pivot] = matrix[pivot], matrix[top]
        scale = matrix[top][column]
        matrix[top] = [x / scale for x in matrix[top]]
        for i, row in enumerate(matrix):
            if i != top and row[column]:
                factor = row[column]
                matrix[i] = [x - factor * y for x, y in zip(row, matrix[top], strict=True)]
        pivots.append(column)
    return matrix, pivots


def ints(values: Sequence[Any]) -> tuple[int, ...]:
    """Elements of a prime field, or integral rationals, as ints for the oracle."""
    return tuple(int(x) for x in values)


# Trivectors, flats, subspaces


def trivectors(field: Field, n: int) -> st.SearchStrategy[Trivector]:
    size = {6: 20, 7: 35}[n]
    return vectors(field, size).map(lambda values: Trivector(field, values))


@st.composite
def planes(draw: Any, field: Field, n: int) -> Plane:
    """Three rows in echelon form, their pivots anywhere: every plane is one."""
    rows = draw(matrices(field, 3, n))
    pivots = draw(st.sampled_from(list(combinations(range(n), 3))))
    for row, pivot in zip(rows, pivots, strict=True):
        row[: pivot + 1] = [field.zero] * pivot + [field.one]
    return Plane.from_rows(field, rows)


@st.composite
def flats(draw: Any, field: Field, n: int) -> Flat:
    """Of every dimension, the empty one and P(V) included."""
    count = draw(st.integers(0, n))
    return Flat.span(field, n, draw(matrices(field, count, n)))


@st.composite
def pairs_of_flats(draw: Any, field: Field, n: int) -> tuple[Flat, Flat]:
    """Two flats that share some of the vectors which span them."""
    common = draw(matrices(field, draw(st.integers(0, 2)), n))
    first, second = (draw(matrices(field, draw(st.integers(0, 3)), n)) for _ in range(2))
    return Flat.span(field, n, common + first), Flat.span(field, n, common + second)


@st.composite
def subspaces(draw: Any, field: Field, n: int, most: int = 6) -> Subspace:
    """Subspaces of ∧³V of small dimension, the zero space included."""
    size = {6: 20, 7: 35}[n]
    count = draw(st.integers(0, most))
    return Subspace.span(field, n, draw(matrices(field, count, size)))


@st.composite
def pairs_of_subspaces(draw: Any, field: Field, n: int) -> tuple[Subspace, Subspace]:
    """Two subspaces that share some of the vectors which span them."""
    size = {6: 20, 7: 35}[n]
    common = draw(matrices(field, draw(st.integers(0, 2)), size))
    first, second = (draw(matrices(field, draw(st.integers(0, 3)), size)) for _ in range(2))
    return Subspace.span(field, n, common + first), Subspace.span(field, n, common + second)


def other_basis(field: Field, mixing: Rows, rows: Sequence[Sequence[Any]]) -> Rows:
    """The rows mixed by an invertible matrix: another basis of their span."""
    return product(field, mixing, rows)


def same_span(
    field: Field, first: Sequence[Sequence[Any]], second: Sequence[Sequence[Any]], size: int
) -> bool:
    return row_space(field, first, size) == row_space(field, second, size)
