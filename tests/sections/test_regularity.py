"""From where on a Hilbert function is known: the classical families, and no false claims."""

from itertools import combinations_with_replacement
from random import Random
from typing import Any

import examples
import macaulay
import numpy as np
import oracle
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

from trivector.fields import QQ, Field, prime_field
from trivector.sections import Limits, LinearSection, SectionReport
from trivector.sections.graded import QuadricAlgebra
from trivector.sections.quadrics import Quadric
from trivector.sections.regularity import hilbert_polynomial_from
from trivector.subspaces import Subspace

F2, F3, F5, F101 = (prime_field(p) for p in (2, 3, 5, 101))
FAMILIES = examples.families()
RULING, CONICS, TANGENTS = FAMILIES[3:]
over_families = pytest.mark.parametrize("family", FAMILIES, ids=str)


def is_literally_lagrangian(space: Subspace) -> bool:
    pairings = [
        examples.wedge_to_volume(space.field, first, second)
        for first in space.rows
        for second in space.rows
    ]
    return space.dimension == 10 and not any(pairings)


def planes_in(space: Subspace) -> int:
    """How many planes of PG(5, q) lie in L, by trying every one of them."""
    q = int(space.field.characteristic)
    equations = np.array([draws.ints(row) for row in literal_equations(space)])
    return int((~((examples.plucker_table(q) @ equations.T) % q).any(axis=1)).sum())


def literal_equations(space: Subspace) -> list[list[Any]]:
    """Linear forms that vanish exactly on L: for each free column a unit and the pivots."""
    field, size = space.field, space.ambient_dimension
    pivots = [next(j for j, x in enumerate(row) if x) for row in space.rows]
    forms = []
    for free in range(size):
        if free not in pivots:
            form = [field.zero] * size
            form[free] = -field.one
            for row, pivot in zip(space.rows, pivots, strict=True):
                form[pivot] = row[free]
            forms.append(form)
    return forms


def examine(space: Subspace) -> SectionReport:
    """With a short sweep only: this is not about planes over F_q."""
    return LinearSection(space).examine(limits=Limits(max_points=500))


def check_against_the_table(family: examples.Family, field: Field) -> None:
    report = examine(family.lagrangian(field))
    assert report.hilbert_function == tuple(family.hilbert(d) for d in range(6))
    assert (report.projective_dimension, report.degree) == (family.dimension, family.degree)
    assert report.infinite is True
    assert report.complete_over_closure is False
    assert report.multiplicities is None
    polynomial = report.hilbert_polynomial
    assert polynomial is not None
    for d in range(polynomial.start, 30):
        assert polynomial(d) == family.hilbert(d)


# The six families. Sources of the numbers: examples.families.


@over_families
@pytest.mark.parametrize("field", [QQ, F101], ids=str)
def test_the_families_have_the_classical_hilbert_function_dimension_and_degree(
    family: examples.Family, field: Field
) -> None:
    check_against_the_table(family, field)


@pytest.mark.parametrize("family", [RULING, CONICS, TANGENTS], ids=str)
@pytest.mark.parametrize("field", [F3, F5], ids=str)
def test_the_small_families_are_the_same_over_small_fields(
    family: examples.Family, field: Field
) -> None:
    check_against_the_table(family, field)


@pytest.mark.long
@pytest.mark.parametrize("family", FAMILIES[:3], ids=str)
@pytest.mark.parametrize("field", [F2, F3, F5], ids=str)
def test_the_large_families_are_the_same_over_small_fields(
    family: examples.Family, field: Field
) -> None:
    check_against_the_table(family, field)


def test_one_ruling_of_a_quadric_is_the_same_in_characteristic_two() -> None:
    check_against_the_table(RULING, F2)


def test_in_characteristic_two_the_nucleus_plane_is_one_more_conic_plane() -> None:
    # computed: in characteristic 2 the tangent lines of the conics pass through nuclei,
    # which form one more plane; it is isolated, so H = C(3d+2, 2) + 1 for d ≥ 2.
    report = examine(CONICS.lagrangian(F2))
    assert report.hilbert_function == (1, 10, *(CONICS.hilbert(d) + 1 for d in range(2, 6)))
    assert (report.projective_dimension, report.degree) == (2, 9)
    nuclei = [examples.unit(i) for i in (1, 2, 4)]  # the coordinates u_i·u_j, i ≠ j
    (nucleus_plane,) = examples.over(F2, [nuclei])
    assert CONICS.lagrangian(F2).contains(nucleus_plane.plucker)


def test_in_characteristic_two_the_tangent_planes_all_meet_one_plane_in_a_line() -> None:
    # computed: there the tangent planes of the Veronese surface meet the plane of the
    # nuclei in lines, and span the Lagrangian of all planes that do.
    by_nuclei = Subspace.span(
        F2,
        6,
        [
            examples.trivector_row({triple: 1})
            for triple in examples.TRIPLES
            if len({1, 2, 4} & set(triple)) >= 2
        ],
    )
    assert TANGENTS.lagrangian(F2) == by_nuclei


@over_families
@pytest.mark.parametrize("field", draws.FIELDS, ids=str)
def test_the_families_span_lagrangians_that_contain_their_planes(
    family: examples.Family, field: Field
) -> None:
    # published: "Pairwise incident planes and hyperkähler four-folds", 2012, arXiv 1204.6257
    space = family.lagrangian(field)
    assert is_literally_lagrangian(space)
    assert space.is_lagrangian()
    rng = Random(5)
    for _ in range(6):
        assert space.contains(family.random_plane(field, rng).plucker)


@over_families
def test_the_families_have_the_right_number_of_planes_over_f3(family: examples.Family) -> None:
    # computed: brute force over all 33880 planes of PG(5,3)
    assert planes_in(family.lagrangian(F3)) == family.count(3)


@pytest.mark.parametrize(
    ("family", "extra"), [(f, 0) for f in FAMILIES[:4]] + [(CONICS, 1)], ids=str
)
def test_the_families_have_the_right_number_of_planes_over_f2(
    family: examples.Family, extra: int
) -> None:
    # computed: brute force over all 1395 planes of PG(5,2); one nucleus plane more
    assert planes_in(family.lagrangian(F2)) == family.count(2) + extra


@over_families
@pytest.mark.parametrize("field", [F3, F101, QQ], ids=str)
def test_the_hilbert_function_of_the_families_is_literal(
    family: examples.Family, field: Field
) -> None:
    space = family.lagrangian(field)
    literal = macaulay.section_hilbert(field, space.rows, 6, 3)
    assert literal == tuple(family.hilbert(d) for d in range(4))


@over_families
def test_collineations_do_not_change_what_is_said_of_a_family(family: examples.Family) -> None:
    space = family.lagrangian(F101)
    moved = examples.image_of_space(F101, examples.random_invertible(F101, 6, Random(6)), space)
    assert moved != space
    first, second = (examine(L) for L in (space, moved))
    assert first.hilbert_function == second.hilbert_function
    assert (first.projective_dimension, first.degree) == (
        second.projective_dimension,
        second.degree,
    )


# Never a polynomial that is wrong


def random_ideal(field: Field, size: int, rng: Random) -> list[Quadric]:
    """Monomials, binomials, products of linear forms: these have late surprises."""
    quadrics: list[Quadric] = []
    pairs = list(combinations_with_replacement(range(size), 2))
    for _ in range(rng.randint(0, 6)):
        kind = rng.randrange(4)
        if kind == 0:
            quadrics.append({rng.choice(pairs): field.one})
        elif kind == 1:
            first, second = rng.sample(pairs, 2) if len(pairs) > 1 else (pairs[0], pairs[0])
            quadrics.append({first: field.one, second: -field.one})
        elif kind == 2:
            left, right = examples.random_rows(field, 2, size, rng)
            product: Quadric = {}
            for a in range(size):
                for b in range(size):
                    key = (min(a, b), max(a, b))
                    product[key] = product.get(key, field.zero) + left[a] * right[b]
            quadrics.append({key: value for key, value in product.items() if value})
        else:
            quadric = {pair: field.random_element(rng) for pair in pairs}
            quadrics.append({pair: value for pair, value in quadric.items() if value})
    return quadrics


def check_all_claims(field: Field, size: int, quadrics: list[Quadric], seed: int) -> int:
    """Compare every polynomial that is claimed in degrees 2 … 4; how many were."""
    top = 9 if size < 4 else 7
    literal = macaulay.hilbert_function(field, size, quadrics, top)
    algebra = QuadricAlgebra(field, size, quadrics)
    claims = 0
    while algebra.top < 5:
        algebra.extend()
        degree = algebra.top - 1
        if degree < 2:
            continue
        polynomial = hilbert_polynomial_from(algebra, degree, Random(seed))
        if polynomial is not None:
            claims += 1
            assert polynomial.start == degree
            assert [polynomial(t) for t in range(degree, top + 1)] == list(literal[degree:])
    return claims


@pytest.mark.parametrize("field", [F2, F3, prime_field(7), F101, QQ], ids=str)
@draws.some
@given(seed=st.integers(0, 2**32), size=st.integers(1, 4))
def test_no_claimed_polynomial_is_contradicted_in_higher_degrees(
    field: Field, seed: int, size: int
) -> None:
    check_all_claims(field, size, random_ideal(field, size, Random(seed)), seed)


@pytest.mark.parametrize("field", [F2, F3, F101, QQ], ids=str)
def test_most_random_ideals_do_get_a_polynomial(field: Field) -> None:
    got = sum(
        check_all_claims(field, size, random_ideal(field, size, Random(seed)), seed) > 0
        for seed in range(6)
        for size in (2, 3, 4)
    )
    assert got >= 15


@pytest.mark.parametrize("field", [F2, F3, F101, QQ], ids=str)
def test_two_equal_values_are_not_enough_for_a_claim(field: Field) -> None:
    # x², y² in three variables: H = 1, 3, 4, 4, … a complete intersection of length 4 and
    # 3-regular. Regularity of x², y², z²: H = 1, 3, 3, 1, 0, so nothing in degree 2 or 3.
    squares = [{(i, i): field.one} for i in range(3)]
    for quadrics, first in ((squares[:2], 3), (squares, 4)):
        algebra = QuadricAlgebra(field, 3, quadrics)
        while algebra.top < 6:
            algebra.extend()
        claimed = [hilbert_polynomial_from(algebra, d, Random(1)) is not None for d in range(2, 6)]
        assert claimed == [d >= first for d in range(2, 6)]


@pytest.mark.parametrize("field", [F2, F3, F101, QQ], ids=str)
def test_a_chain_of_three_lines_has_the_polynomial_of_a_twisted_cubic(field: Field) -> None:
    # (x_0x_2, x_0x_3, x_1x_2) is the ideal of the lines x_0 = x_1 = 0, x_0 = x_2 = 0 and
    # x_2 = x_3 = 0, each meeting the next; classical: H(d) = 3d + 1.
    quadrics: list[Quadric] = [{(0, 2): field.one}, {(0, 3): field.one}, {(1, 2): field.one}]
    algebra = QuadricAlgebra(field, 4, quadrics)
    algebra.extend()
    algebra.extend()
    polynomial = hilbert_polynomial_from(algebra, 2, Random(0))
    assert polynomial is not None
    assert (polynomial.dimension, polynomial.degree, str(polynomial)) == (1, 3, "3·t + 1")


def test_brute_force_knows_all_planes() -> None:
    # classical: [6,3]_q
    assert [len(examples.plucker_table(q)) for q in (2, 3)] == [1395, 33880]
    rows = examples.plucker_table(2)[:50]
    assert all(oracle.is_decomposable([int(x) for x in row], 2) for row in rows)
