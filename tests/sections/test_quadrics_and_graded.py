"""The quadrics of a section, and the graded algebra built from them degree by degree."""

from itertools import combinations, combinations_with_replacement, product
from random import Random
from typing import Any

import examples
import macaulay
import oracle
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

from trivector.fields import QQ, Field, prime_field
from trivector.fields.linear import rank, unit_rows
from trivector.sections.graded import QuadricAlgebra, SparseVector
from trivector.sections.quadrics import Quadric, restricted_quadrics
from trivector.subspaces import Subspace

F2, F3, F7, LARGE = (prime_field(p) for p in (2, 3, 7, examples.LARGE_PRIME))
FIELDS = [F2, F3, F7, LARGE, QQ]
over_fields = pytest.mark.parametrize("field", FIELDS, ids=lambda field: field.name)
seeds = st.integers(0, 2**32)


def quadric_row(quadric: Quadric, size: int, zero: Any) -> list[Any]:
    pairs = combinations_with_replacement(range(size), 2)
    return [quadric.get(pair, zero) for pair in pairs]


def random_quadrics(field: Field, size: int, count: int, rng: Random) -> list[Quadric]:
    """Sparse and dense ones, squares and products of linear forms among them."""
    pairs = list(combinations_with_replacement(range(size), 2))
    quadrics = []
    for _ in range(count):
        chosen = rng.sample(pairs, rng.randint(1, min(len(pairs), rng.choice([1, 2, 3, 99]))))
        quadric = {pair: field.random_element(rng) for pair in chosen}
        quadrics.append({pair: value for pair, value in quadric.items() if value})
    return quadrics


def space_with_planes(
    field: Field, n: int, planes: int, others: int, rng: Random, *, chain: bool = True
) -> Subspace:
    """The span of some planes, each meeting the next in a line, and of random trivectors."""
    vectors = []
    plane = examples.random_plane(field, n, rng)
    for _ in range(planes):
        vectors.append(plane.plucker)
        following = examples.random_plane(field, n, rng)
        if chain:
            rows = examples.independent(field, [*plane.rows[:2], *following.rows])[:3]
            following = type(plane).from_rows(field, rows)
        plane = following
    size = len(vectors[0]) if vectors else {6: 20, 7: 35}[n]
    return Subspace.span(field, n, [*vectors, *examples.random_rows(field, others, size, rng)])


def algebra_of(space: Subspace, top: int) -> QuadricAlgebra:
    field = space.field
    quadrics = restricted_quadrics(space.rows, space.n, field.zero)
    algebra = QuadricAlgebra(field, space.dimension, quadrics)
    while algebra.top < top:
        algebra.extend()
    return algebra


# The restricted quadrics


@over_fields
@pytest.mark.parametrize(("n", "count"), [(6, 35), (7, 140)])
def test_the_quadrics_of_everything_span_all_classical_exchange_relations(
    field: Field, n: int, count: int
) -> None:
    # 35 and 140: classical, C(C(n,3)+1, 2) − dim of the Schur module of (2,2,2).
    size = {6: 20, 7: 35}[n]
    rows = unit_rows(field, size)
    ours = restricted_quadrics(rows, n, field.zero)
    classical = macaulay.section_quadrics(field, rows, n)
    ncols = size * (size + 1) // 2
    assert len(ours) == count
    for together in (ours, classical, ours + classical):
        vectors = [quadric_row(q, size, field.zero) for q in together]
        assert rank(field, vectors, ncols) == count


@pytest.mark.parametrize(
    ("q", "n", "planes", "others"),
    [(2, 6, 3, 3), (2, 6, 6, 1), (3, 6, 3, 1), (3, 6, 2, 2), (2, 7, 4, 2)],
)
@draws.few
@given(seed=seeds)
def test_the_quadrics_vanish_exactly_at_the_decomposables(
    q: int, n: int, planes: int, others: int, seed: int
) -> None:
    field = prime_field(q)
    space = space_with_planes(field, n, planes, others, Random(seed))
    quadrics = restricted_quadrics(space.rows, n, field.zero)
    rows = [draws.ints(row) for row in space.rows]
    for x in product(range(q), repeat=space.dimension):
        vector = [
            sum(c * row[i] for c, row in zip(x, rows, strict=True)) % q for i in range(len(rows[0]))
        ]
        vanish = not any(
            sum(int(value) * x[a] * x[b] for (a, b), value in quadric.items()) % q
            for quadric in quadrics
        )
        assert vanish == oracle.is_decomposable(vector, q, n)


@over_fields
@draws.few
@given(seed=seeds)
def test_the_quadrics_are_those_of_the_classical_relations_on_any_subspace(
    field: Field, seed: int
) -> None:
    rng = Random(seed)
    space = space_with_planes(field, 6, rng.randint(0, 4), rng.randint(1, 4), rng)
    size = space.dimension
    ours = restricted_quadrics(space.rows, 6, field.zero)
    classical = macaulay.section_quadrics(field, space.rows, 6)
    ncols = size * (size + 1) // 2
    ranks = [
        rank(field, [quadric_row(q, size, field.zero) for q in some], ncols)
        for some in (ours, classical, ours + classical)
    ]
    assert ranks[0] == ranks[1] == ranks[2]


@over_fields
def test_zero_coefficients_are_left_out_and_pairs_are_sorted(field: Field) -> None:
    space = space_with_planes(field, 6, 3, 3, Random(1))
    for quadric in restricted_quadrics(space.rows, 6, field.zero):
        assert all(quadric.values())
        assert all(0 <= a <= b < space.dimension for a, b in quadric)


# The Hilbert function


@over_fields
@draws.some
@given(seed=seeds, size=st.integers(1, 5), count=st.integers(0, 7))
def test_the_hilbert_function_of_random_quadrics_is_that_of_all_monomial_multiples(
    field: Field, seed: int, size: int, count: int
) -> None:
    quadrics = random_quadrics(field, size, count, Random(seed))
    algebra = QuadricAlgebra(field, size, quadrics)
    top = 7 if size < 4 else 5
    while algebra.top < top:
        assert algebra.extend() == algebra.hilbert[-1]
    assert tuple(algebra.hilbert) == macaulay.hilbert_function(field, size, quadrics, top)


@over_fields
@pytest.mark.parametrize(("dimension", "top"), [(4, 6), (6, 4), (8, 3), (10, 3), (12, 2)])
def test_the_hilbert_function_of_random_sections_is_that_of_all_monomial_multiples(
    field: Field, dimension: int, top: int
) -> None:
    for planes in (0, dimension // 2, dimension - 1):
        space = space_with_planes(field, 6, planes, dimension - planes, Random(dimension + planes))
        expected = macaulay.section_hilbert(field, space.rows, 6, top)
        assert tuple(algebra_of(space, top).hilbert) == expected


@pytest.mark.long
@pytest.mark.parametrize("field", [F2, F3, F7, LARGE], ids=str)
def test_the_hilbert_function_of_sections_is_literal_up_to_degree_five(field: Field) -> None:
    for planes in (0, 4, 9):
        space = space_with_planes(field, 6, planes, 10 - planes, Random(planes), chain=False)
        expected = macaulay.section_hilbert(field, space.rows, 6, 5)
        assert tuple(algebra_of(space, 5).hilbert) == expected


@over_fields
def test_the_hilbert_function_does_not_depend_on_the_coordinates(field: Field) -> None:
    rng = Random(3)
    space = space_with_planes(field, 6, 5, 2, rng)
    expected = algebra_of(space, 5).hilbert
    for _ in range(3):
        mixing = examples.random_invertible(field, space.dimension, rng)
        rows = draws.product(field, mixing, space.rows)
        quadrics = restricted_quadrics(rows, 6, field.zero)
        algebra = QuadricAlgebra(field, space.dimension, quadrics)
        while algebra.top < 5:
            algebra.extend()
        assert algebra.hilbert == expected


@over_fields
def test_no_quadrics_give_the_polynomial_ring(field: Field) -> None:
    algebra = QuadricAlgebra(field, 3, [{}, {}])
    for degree in range(2, 9):
        # C(d+2, 2) monomials of degree d in three variables: classical.
        assert algebra.extend() == (degree + 1) * (degree + 2) // 2


def test_exponents_up_to_255_stay_apart_and_more_are_refused() -> None:
    algebra = QuadricAlgebra(F7, 2, [{(0, 1): F7.one}])
    while algebra.top < 255:
        assert algebra.extend() == 2  # the powers of x_0 and of x_1
    with pytest.raises(OverflowError, match="255"):
        algebra.extend()


@over_fields
def test_the_shape_that_is_announced_has_a_column_for_each_surviving_product(
    field: Field,
) -> None:
    space = space_with_planes(field, 6, 5, 2, Random(5))
    algebra = algebra_of(space, 2)
    for _ in range(3):
        products = {unit + code for code in algebra.bases[-1] for unit in algebra.bases[1]}
        nrows, ncols = algebra.next_shape()
        assert ncols == len(products)
        assert ncols - algebra.extend() <= nrows


# The products


def multiply(algebra: QuadricAlgebra, i: int, element: SparseVector, d: int) -> dict[int, Any]:
    """x_i times an element of R_d, from the tables."""
    total: dict[int, Any] = {}
    for s, value in element:
        for t, entry in algebra.products[d][i][s]:
            total[t] = total.get(t, algebra.field.zero) + value * entry
    return {t: value for t, value in total.items() if value}


def random_algebras(field: Field, seed: int) -> list[QuadricAlgebra]:
    rng = Random(seed)
    size = rng.randint(2, 5)
    algebra = QuadricAlgebra(field, size, random_quadrics(field, size, rng.randint(0, 5), rng))
    while algebra.top < 5:
        algebra.extend()
    planes = rng.randint(1, 4)
    return [algebra, algebra_of(space_with_planes(field, 6, planes, rng.randint(1, 3), rng), 4)]


@over_fields
@draws.few
@given(seed=seeds)
def test_the_variables_commute_and_satisfy_the_quadrics(field: Field, seed: int) -> None:
    for algebra in random_algebras(field, seed):
        for d in range(algebra.top - 1):
            for s in range(algebra.hilbert[d]):
                start: SparseVector = [(s, field.one)]
                twice = {}
                for j in range(algebra.size):
                    once = list(multiply(algebra, j, start, d).items())
                    for i in range(algebra.size):
                        twice[i, j] = multiply(algebra, i, once, d + 1)
                for i, j in combinations(range(algebra.size), 2):
                    assert twice[i, j] == twice[j, i]
                for quadric in algebra._quadrics:
                    total: dict[int, Any] = {}
                    for pair, value in quadric.items():
                        for t, entry in twice[pair].items():
                            total[t] = total.get(t, field.zero) + value * entry
                    assert not any(total.values())


@over_fields
@draws.few
@given(seed=seeds)
def test_every_degree_is_generated_by_the_degree_below(field: Field, seed: int) -> None:
    for algebra in random_algebras(field, seed):
        for d in range(algebra.top):
            target = algebra.hilbert[d + 1]
            rows = []
            for by_variable in algebra.products[d]:
                for element in by_variable:
                    row = [field.zero] * target
                    for t, value in element:
                        row[t] = value
                    rows.append(row)
            assert rank(field, rows, target) == target


@over_fields
def test_the_tables_multiply_values_at_points_of_the_section(field: Field) -> None:
    rng = Random(8)
    planes = [examples.random_plane(field, 6, rng) for _ in range(4)]
    space = Subspace.span(field, 6, [p.plucker for p in planes])
    algebra = algebra_of(space, 4)
    points = [space.coordinates(plane.plucker) for plane in planes]
    for d in range(4):
        below, above = (algebra.evaluate(degree, points) for degree in (d, d + 1))
        for x, values, products in zip(points, below, above, strict=True):
            assert x is not None
            for i, by_variable in enumerate(algebra.products[d]):
                for s, element in enumerate(by_variable):
                    total = sum((c * products[t] for t, c in element), field.zero)
                    assert total == x[i] * values[s]


@over_fields
@pytest.mark.parametrize("degree", [0, 1, 2, 3])
def test_points_impose_as_many_conditions_as_on_all_monomials(field: Field, degree: int) -> None:
    # Points on one plane pencil, so that the conditions depend on each other.
    line = [examples.unit(0), examples.unit(1)]
    planes = examples.over(
        field, [[*line, [0, 0, 1, t, t * t, 0]] for t in (0, 1)] + [[*line, [0, 0, 0, 0, 1, 1]]]
    )
    planes += [examples.random_plane(field, 6, Random(4)) for _ in range(2)]
    space = Subspace.span(field, 6, [p.plucker for p in planes])
    algebra = algebra_of(space, 3)
    points = [space.coordinates(plane.plucker) for plane in planes]
    values = algebra.evaluate(degree, points)
    literal = []
    for x in points:
        assert x is not None
        row = []
        for monomial in combinations_with_replacement(range(space.dimension), degree):
            value = field.one
            for i in monomial:
                value = value * x[i]
            row.append(value)
        literal.append(row)
    expected = rank(field, literal, len(literal[0]))
    assert rank(field, values, algebra.hilbert[degree]) == expected
