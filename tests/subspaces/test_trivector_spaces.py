"""Subspaces of ∧³V: orthogonal, isotropic, Lagrangian, totally singular."""

import json
from collections import Counter
from collections.abc import Callable, Iterable, Sequence
from functools import cache
from itertools import combinations, product
from random import Random
from typing import Any

import oracle
import pytest
import strategies as draws
import sympy
from hypothesis import given
from hypothesis import strategies as st

from trivector.errors import (
    DimensionError,
    EntryError,
    MixedFieldsError,
    NotLagrangianError,
    TrivectorError,
    UsageError,
)
from trivector.exterior import Trivector
from trivector.exterior.products import act, minors, pairing, wedge
from trivector.fields import QQ, Field, prime_field
from trivector.subspaces import Flat, Lagrangian, OffendingPair, Plane, Subspace
from trivector.subspaces.trivector_spaces import wedge_conditions

F2, F3, F5, F7 = map(prime_field, (2, 3, 5, 7))
TRIPLES = list(combinations(range(6), 3))
SIZE = {6: 20, 7: 35}


def basis_vectors(wanted: Callable[[tuple[int, ...]], bool]) -> list[list[int]]:
    """The unit vectors e_I of ∧³k^6 for the triples I that are wanted."""
    return [[int(t == triple) for t in TRIPLES] for triple in TRIPLES if wanted(triple)]


def literal_rank(field: Field, rows: Any, ncols: int) -> int:
    return len(draws.literal_reduced(field, rows, ncols)[1])


# The classical Lagrangians, over ℤ


@cache
def coefficients_of_planes(*rows: tuple[str, ...]) -> list[list[int]]:
    """The vectors of ∧³ℤ^6 that are the coefficients of the minors of a matrix of polynomials."""
    s, t, u = variables = sympy.symbols("s t u")
    entries = [[sympy.sympify(x, {"s": s, "t": t, "u": u}) for x in row] for row in rows]
    found: dict[Any, list[int]] = {}
    for place, triple in enumerate(TRIPLES):
        matrix = sympy.Matrix([[row[i] for i in triple] for row in entries])
        for monomial, coefficient in sympy.Poly(matrix.det(), *variables).terms():
            found.setdefault(monomial, [0] * 20)[place] = int(coefficient)
    return list(found.values())


def through_a_point() -> list[list[int]]:
    return basis_vectors(lambda triple: 0 in triple)


def in_a_hyperplane() -> list[list[int]]:
    return basis_vectors(lambda triple: 5 not in triple)


def meeting_a_plane_in_a_line() -> list[list[int]]:
    return basis_vectors(lambda triple: len({0, 1, 2} & set(triple)) >= 2)


def ruling_of_a_quadric() -> list[list[int]]:
    """The planes {v∧x} on the Klein quadric of lines of P³, v = (1, s, t, u)."""
    # v∧e1, v∧e2, v∧e3 in the basis 01, 02, 03, 12, 13, 23
    return coefficients_of_planes(
        ("1", "0", "0", "-t", "-u", "0"),
        ("0", "1", "0", "s", "0", "-u"),
        ("0", "0", "1", "0", "s", "t"),
    )


def conics_of_a_veronese_surface() -> list[list[int]]:
    """The planes of the conics of {x⊗x}, over the line through (−s, 1, 0) and (−t, 0, 1)."""
    # a⊗a, a⊗b + b⊗a, b⊗b in the symmetric tensors, basis 00, 01, 02, 11, 12, 22
    return coefficients_of_planes(
        ("s**2", "-s", "0", "1", "0", "0"),
        ("2*s*t", "-t", "-s", "0", "1", "0"),
        ("t**2", "0", "-t", "0", "0", "1"),
    )


def tangent_to_a_veronese_surface() -> list[list[int]]:
    """The planes tangent to {x⊗x} at (1, s, t)."""
    # a⊗a, a⊗e1 + e1⊗a, a⊗e2 + e2⊗a
    return coefficients_of_planes(
        ("1", "s", "t", "s**2", "s*t", "t**2"),
        ("0", "1", "0", "2*s", "t", "0"),
        ("0", "0", "1", "0", "s", "2*t"),
    )


# Planes in each over F_2 and F_3. "Pairwise incident planes and hyperkähler four-folds", 2012,
# arXiv 1204.6257, introduction, for the list; the numbers: classical, and computed.
FAMILIES = [
    (through_a_point, {2: 155, 3: 1210}),  # [5,2]
    (in_a_hyperplane, {2: 155, 3: 1210}),  # [5,2]
    (meeting_a_plane_in_a_line, {2: 99, 3: 508}),  # 1 + q(q²+q+1)²
    (ruling_of_a_quadric, {2: 15, 3: 40}),  # (q+1)(q²+1)
    (conics_of_a_veronese_surface, {2: 8, 3: 13}),  # q²+q+1, and the nucleus plane if q is even
    (tangent_to_a_veronese_surface, {3: 13}),  # q²+q+1, q odd
]

over_fields_and_families = pytest.mark.parametrize(
    ("field", "family"),
    [
        pytest.param(field, family, id=f"{field.name}-{family.__name__}")
        for field in draws.FIELDS
        for family, counts in FAMILIES
        if field.characteristic != 2 or 2 in counts  # there the tangent planes are special
    ],
)


# Twenty planes that meet two by two in a point. "A very special EPW sextic and two IHS fourfolds",
# 2017, arXiv 1509.06214, for their existence; these coordinates: computed.
MATCHINGS = [
    ((0, 1), (2, 3), (4, 5)),
    ((0, 2), (1, 4), (3, 5)),
    ((0, 3), (1, 5), (2, 4)),
    ((0, 4), (1, 3), (2, 5)),
    ((0, 5), (1, 2), (3, 4)),
]


def signed_pair(pair: tuple[int, int], sign: int) -> list[int]:
    return [{pair[0]: 1, pair[1]: sign}.get(i, 0) for i in range(6)]


def twenty_planes(field: Field) -> list[Plane]:
    return [
        Plane.from_rows(field, [signed_pair(*x) for x in zip(pairs, signs, strict=True)])
        for pairs in MATCHINGS
        for signs in product((1, -1), repeat=3)
        if signs[0] * signs[1] * signs[2] == 1
    ]


def special_points() -> dict[tuple[int, ...], tuple[int, int]]:
    """Point → number of the twenty planes through it, dim(A ∩ F_v) there; computed."""
    cube = [v for v in product((1, -1), repeat=6) if v[0] == 1 and sum(x < 0 for x in v) % 2 == 0]
    pairs = [tuple(signed_pair(ij, s)) for ij in combinations(range(6), 2) for s in (1, -1)]
    return dict.fromkeys(cube, (5, 4)) | dict.fromkeys(pairs, (2, 2))


# The sextic of this one: "Gushel–Mukai varieties with many symmetries and an explicit irrational
# Gushel–Mukai threefold", 2021, arXiv 2101.01959; the basis and all values below: computed.
def cyclic_lagrangian(field: Field) -> list[tuple[Any, ...]]:
    """e0∧e_i∧e_{i+1} + e_i∧e_{i+2}∧e_{i+4}, e0∧e_i∧e_{i+2} − e_{i+1}∧e_{i+2}∧e_{i+3}, i mod 5."""
    found = []
    for i in range(1, 6):
        a, b, c, d = ((i + k - 1) % 5 + 1 for k in (1, 2, 3, 4))
        found.append(Trivector.from_terms(field, 6, {(0, i, a): 1, (i, b, d): 1}))
        found.append(Trivector.from_terms(field, 6, {(0, i, b): 1, (a, b, c): -1}))
    return [alpha.coordinates for alpha in found]


def star(field: Field, vector: Sequence[Any]) -> Subspace:
    """F_v = v∧(∧²V)."""
    v = [field.element(x) for x in vector]
    bivectors = draws.identity(field, 15)
    return Subspace.span(field, 6, [wedge(v, 1, b, 2, 6, field.zero) for b in bivectors])


def strata(field: Field, space: Subspace, points: Iterable[Sequence[int]]) -> Counter[int]:
    """How many of the points v have dim(A ∩ F_v) = 0, 1, 2, …"""
    return Counter(space.meet(star(field, v)).dimension for v in points)


# Canonical rows


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_a_subspace_does_not_depend_on_the_basis_it_is_given_by(
    field: Field, n: int, data: st.DataObject
) -> None:
    rows = data.draw(draws.matrices(field, 4, SIZE[n]))
    mixing = data.draw(draws.invertible_matrices(field, 4))
    space = Subspace.span(field, n, rows)
    again = Subspace.span(field, n, draws.other_basis(field, mixing, rows))
    reduced, pivots = draws.literal_reduced(field, rows, SIZE[n])
    assert space.rows == again.rows == tuple(map(tuple, reduced[: len(pivots)]))
    assert space == again
    assert hash(space) == hash(again)
    assert space.dimension == len(pivots)
    assert space.ambient_dimension == SIZE[n]
    assert Subspace.span(field, n, json.loads(json.dumps(space.to_entries()))) == space


@draws.over_fields
@draws.few
@given(data=st.data())
def test_dependent_rows_are_named_with_their_coefficients(
    field: Field, data: st.DataObject
) -> None:
    rows = data.draw(draws.matrices_of_any_rank(field, 5, 20))
    space = Subspace.span(field, 6, rows)
    ranks = [literal_rank(field, rows[:i], 20) for i in range(6)]
    assert sorted(space.dependent) == [i for i in range(5) if ranks[i] == ranks[i + 1]]
    for i, coefficients in space.dependent.items():
        assert draws.combine(field, coefficients, rows[:i], 20) == tuple(rows[i])
    assert Subspace.span(field, 6, space.rows) == space  # the report is no part of equality


def test_a_subspace_is_given_by_terms_too() -> None:
    space = Subspace.from_terms(QQ, 6, [{(0, 1, 2): 2, (0, 1, 3): 1}, {(3, 4, 5): "1/2"}])
    vectors = [[2, 1] + [0] * 18, [0] * 19 + [1]]
    assert space == Subspace.span(QQ, 6, vectors)


@pytest.mark.parametrize("triple", [(1, 0, 2), (0, 1, 9), (0, 0, 1)])
def test_terms_on_other_triples_are_read_or_refused(triple: tuple[int, ...]) -> None:
    try:
        space = Subspace.from_terms(QQ, 6, [{triple: 1}])
    except DimensionError:
        return
    assert space == Subspace.from_terms(QQ, 6, [{(0, 1, 2): 1}])


def test_a_lagrangian_is_equal_to_the_same_subspace_found_otherwise() -> None:
    space = Lagrangian.span(QQ, 6, through_a_point())
    assert space == Subspace.span(QQ, 6, through_a_point())
    assert space.orthogonal() == space


# Membership


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_a_vector_lies_in_a_subspace_exactly_if_it_has_coordinates(
    field: Field, n: int, data: st.DataObject
) -> None:
    space = data.draw(draws.subspaces(field, n))
    coefficients = data.draw(draws.vectors(field, space.dimension))
    inside = draws.combine(field, coefficients, space.rows, SIZE[n])
    assert space.contains(inside)
    assert space.coordinates(inside) == tuple(coefficients)
    vector = data.draw(draws.vectors(field, SIZE[n]))
    lies = literal_rank(field, [*space.rows, vector], SIZE[n]) == space.dimension
    assert space.contains(vector) == lies
    assert (space.coordinates(vector) is not None) == lies


@pytest.mark.parametrize("size", [3, 30])
@pytest.mark.parametrize("question", [Subspace.contains, Subspace.coordinates])
def test_a_vector_of_the_wrong_length_is_refused(size: int, question: Any) -> None:
    for rows in ([], [[1] * 20]):
        with pytest.raises(DimensionError):
            question(Subspace.span(QQ, 6, rows), [1] * size)


# Sum, meet, orthogonal


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_dimensions_of_sum_and_meet_add_up(field: Field, n: int, data: st.DataObject) -> None:
    first, second = data.draw(draws.pairs_of_subspaces(field, n))
    total, meet = first.sum(second), first.meet(second)
    assert total.dimension == literal_rank(field, first.rows + second.rows, SIZE[n])
    assert total.dimension + meet.dimension == first.dimension + second.dimension
    for space in (first, second):
        assert all(space.contains(row) for row in meet.rows)
        assert all(total.contains(row) for row in space.rows)
    assert second.sum(first) == total
    assert second.meet(first) == meet
    assert first.sum(meet) == first.meet(total) == first


@draws.over_fields
@draws.few
@given(data=st.data())
def test_the_orthogonal_has_the_complementary_dimension_and_is_an_involution(
    field: Field, data: st.DataObject
) -> None:
    space = data.draw(draws.subspaces(field, 6))
    orthogonal = space.orthogonal()
    assert orthogonal.dimension == 20 - space.dimension
    assert orthogonal.orthogonal() == space
    for first, second in product(space.rows, orthogonal.rows):
        assert not pairing(first, second, field.zero)


@draws.over_prime_fields
@draws.few
@given(data=st.data())
def test_the_orthogonal_is_orthogonal_by_the_literal_product(
    field: Field, data: st.DataObject
) -> None:
    space, q = data.draw(draws.subspaces(field, 6, most=2)), field.characteristic
    for first, second in product(space.rows, space.orthogonal().rows):
        assert oracle.pairing(draws.ints(first), draws.ints(second), q) == 0


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_the_orthogonal_reverses_inclusions(field: Field, n: int, data: st.DataObject) -> None:
    first, second = data.draw(draws.pairs_of_subspaces(field, n))
    larger = first.sum(second)
    assert all(first.orthogonal().contains(row) for row in larger.orthogonal().rows)
    assert first.orthogonal().meet(second.orthogonal()) == larger.orthogonal()
    assert all(first.orthogonal().orthogonal().contains(row) for row in first.rows)
    if n == 6:
        assert first.orthogonal().sum(second.orthogonal()) == first.meet(second).orthogonal()


def test_the_extremes_are_orthogonal_to_each_other() -> None:
    for field in draws.FIELDS:
        for n in (6, 7):
            nothing = Subspace.span(field, n, [])
            everything = Subspace.span(field, n, draws.identity(field, SIZE[n]))
            assert nothing.orthogonal() == everything
            assert everything.orthogonal() == nothing


@draws.over_prime_fields
@draws.few
@given(data=st.data())
def test_for_n_equal_to_seven_the_orthogonal_is_cut_out_by_products(
    field: Field, data: st.DataObject
) -> None:
    q = field.characteristic
    space = data.draw(draws.subspaces(field, 7, most=2))
    alphas = [oracle.multivector(draws.ints(row), 7, 3, q) for row in space.rows]
    conditions = []
    for alpha in alphas:
        images = [
            oracle.coordinates(oracle.wedge(alpha, {triple: 1}, q), 7, 6, q)
            for triple in combinations(range(7), 3)
        ]
        conditions += zip(*images, strict=True)
    orthogonal = space.orthogonal()
    assert orthogonal.dimension == 35 - oracle.rank(conditions, q)
    for row in orthogonal.rows:
        beta = oracle.multivector(draws.ints(row), 7, 3, q)
        assert not any(oracle.wedge(alpha, beta, q) for alpha in alphas)


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_the_conditions_are_the_coefficients_of_the_product(
    field: Field, n: int, data: st.DataObject
) -> None:
    alpha, beta = (data.draw(draws.vectors(field, SIZE[n])) for _ in range(2))
    forms = wedge_conditions([alpha], n, field.zero)
    values = [draws.dot(field, form, beta) for form in forms]
    assert values == wedge(alpha, 3, beta, 3, n, field.zero)


@draws.over_fields
def test_the_seven_planes_of_the_fano_plane_span_their_own_orthogonal(field: Field) -> None:
    # "Pairwise incident planes and hyperkähler four-folds", 2012, arXiv 1204.6257: seven planes
    # in P^6, two by two in a point; that the section has dimension 7 is computed
    lines = [sorted((i % 7, (i + 1) % 7, (i + 3) % 7)) for i in range(7)]
    units = draws.identity(field, 7)
    planes = [Plane.from_rows(field, [units[i] for i in line]) for line in lines]
    assert [a.meet_dimension(b) for a, b in combinations(planes, 2)] == [0] * 21
    space = Subspace.span(field, 7, [plane.plucker for plane in planes])
    assert space.dimension == 7
    assert space.orthogonal() == space


# Isotropic


@draws.over_prime_fields
@draws.few
@given(data=st.data())
def test_the_first_offending_pair_really_offends(field: Field, data: st.DataObject) -> None:
    q = field.characteristic
    rows = data.draw(draws.matrices(field, data.draw(st.integers(0, 3)), 20))
    plus = basis_vectors(lambda triple: 0 in triple)[: data.draw(st.integers(0, 3))]
    space = Subspace.span(field, 6, [*plus, *rows])
    values = {
        (i, j): oracle.pairing(draws.ints(space.rows[i]), draws.ints(space.rows[j]), q)
        for i, j in combinations(range(space.dimension), 2)
    }
    first = next((ij for ij, value in values.items() if value), None)
    pair = space.offending_pair()
    assert space.is_isotropic() == (first is None)
    if first is None:
        assert pair is None
    else:
        assert isinstance(pair, OffendingPair)
        assert ((pair.first, pair.second), int(pair.value)) == (first, values[first])


@draws.over_fields
@draws.few
@given(data=st.data())
def test_a_subspace_is_isotropic_exactly_if_it_lies_in_its_orthogonal(
    field: Field, data: st.DataObject
) -> None:
    space = data.draw(draws.subspaces(field, 6))
    orthogonal = space.orthogonal()
    radical = space.meet(orthogonal)
    assert radical.is_isotropic()
    assert space.is_isotropic() == (radical == space)
    assert (space.dimension - radical.dimension) % 2 == 0  # alternating forms have even rank


@draws.over_fields
@draws.few
@given(data=st.data())
def test_any_basis_shows_the_offence(field: Field, data: st.DataObject) -> None:
    # two planes without a common point, hidden among others through one point
    g = data.draw(draws.invertible_matrices(field, 6))
    rows = [*through_a_point()[:4], *basis_vectors(lambda triple: triple == (3, 4, 5))]
    images = [act(g, [field.element(x) for x in row], field.zero) for row in rows]
    space = Subspace.span(field, 6, images)
    pair = space.offending_pair()
    assert pair is not None
    value = pairing(space.rows[pair.first], space.rows[pair.second], field.zero)
    assert pair.value == value != field.zero
    assert not space.is_isotropic()
    assert not space.is_lagrangian()


# Lagrangian


@over_fields_and_families
def test_the_classical_families_span_lagrangians(
    field: Field, family: Callable[[], list[list[int]]]
) -> None:
    space = Lagrangian.span(field, 6, family())
    assert space.dimension == 10
    assert space.is_isotropic()
    assert space.is_lagrangian()
    assert space.orthogonal().rows == space.rows
    assert isinstance(space, Subspace)
    if field.characteristic == 2:
        assert space.is_totally_singular()


@pytest.mark.parametrize(
    ("family", "q", "count"),
    [
        pytest.param(
            family,
            q,
            count,
            marks=[pytest.mark.long] if q > 2 else [],
            id=f"{family.__name__}-{q}",
        )
        for family, counts in FAMILIES
        for q, count in counts.items()
    ],
)
def test_the_classical_families_have_their_numbers_of_planes(
    family: Callable[[], list[list[int]]], q: int, count: int
) -> None:
    space = Lagrangian.span(prime_field(q), 6, family())
    found = sum(space.contains(oracle.plucker(rows, q)) for rows in oracle.all_planes(q))
    assert found == count


def test_seven_conic_planes_of_pg_5_2_span_too_little() -> None:
    planes = [
        [[a * a % 2, a * b, a * c, b * b % 2, b * c, c * c % 2] for a, b, c in line]
        for line in (
            [p for p in product((0, 1), repeat=3) if any(p) and not sum(map(int.__mul__, p, u)) % 2]
            for u in product((0, 1), repeat=3)
            if any(u)
        )
    ]
    space = Subspace.span(F2, 6, [oracle.plucker(rows, 2) for rows in planes])
    assert space.dimension == 7  # computed
    conics = Lagrangian.span(F2, 6, conics_of_a_veronese_surface())
    assert all(conics.contains(row) for row in space.rows)


@draws.over_fields
@draws.few
@given(data=st.data())
def test_a_collineation_takes_lagrangians_to_lagrangians(field: Field, data: st.DataObject) -> None:
    g = data.draw(draws.invertible_matrices(field, 6))
    family, _ = data.draw(st.sampled_from(FAMILIES[:5]))
    rows = [[field.element(x) for x in row] for row in family()]
    space = Lagrangian.span(field, 6, [act(g, row, field.zero) for row in rows])
    assert space.orthogonal().rows == space.rows


@draws.over_fields
def test_the_cyclic_lagrangian_is_one_over_every_field(field: Field) -> None:
    space = Lagrangian.span(field, 6, cyclic_lagrangian(field))
    assert space.orthogonal().rows == space.rows


@pytest.mark.parametrize("q", [2, pytest.param(3, marks=pytest.mark.long)])
def test_the_cyclic_lagrangian_contains_no_plane(q: int) -> None:
    space = Lagrangian.span(prime_field(q), 6, cyclic_lagrangian(prime_field(q)))
    assert not any(space.contains(oracle.plucker(rows, q)) for rows in oracle.all_planes(q))


@pytest.mark.parametrize(("q", "expected"), [(2, {0: 32, 2: 31}), (3, {0: 234, 1: 120, 2: 10})])
def test_the_cyclic_lagrangian_meets_the_stars_of_points_in_computed_numbers(
    q: int, expected: dict[int, int]
) -> None:
    field = prime_field(q)
    space = Lagrangian.span(field, 6, cyclic_lagrangian(field))
    assert strata(field, space, oracle.all_points(q)) == expected  # computed


@draws.over_odd_fields
def test_twenty_planes_meet_two_by_two_and_span_a_lagrangian(field: Field) -> None:
    planes = twenty_planes(field)
    assert len(set(planes)) == 20
    assert {a.meet_dimension(b) for a, b in combinations(planes, 2)} == {0}
    space = Lagrangian.span(field, 6, [plane.plucker for plane in planes])
    assert len(space.dependent) == 10
    assert space.orthogonal().rows == space.rows


@pytest.mark.parametrize("field", [QQ, F3, F5], ids=str)
def test_twenty_planes_share_forty_six_points(field: Field) -> None:
    planes = twenty_planes(field)
    space = Lagrangian.span(field, 6, [plane.plucker for plane in planes])
    on_plane: Counter[tuple[Plane, int]] = Counter()
    assert len(special_points()) == 46  # 16 and 30
    for vector, (through, dimension) in special_points().items():
        point = Flat.span(field, 6, [vector])
        incident = [plane for plane in planes if plane.contains(point)]
        assert len(incident) == through
        assert space.meet(star(field, vector)).dimension == dimension
        on_plane.update((plane, through) for plane in incident)
    assert set(on_plane.values()) == {4, 3}
    assert all(on_plane[plane, 5] == 4 and on_plane[plane, 2] == 3 for plane in planes)


@pytest.mark.parametrize(
    ("q", "expected"),
    [
        (3, {0: 198, 2: 150, 4: 16}),
        pytest.param(5, {0: 3014, 1: 246, 2: 630, 4: 16}, marks=pytest.mark.long),
    ],
)
def test_the_lagrangian_of_twenty_planes_meets_the_stars_of_points_in_computed_numbers(
    q: int, expected: dict[int, int]
) -> None:
    field = prime_field(q)
    space = Lagrangian.span(field, 6, [plane.plucker for plane in twenty_planes(field)])
    assert strata(field, space, oracle.all_points(q)) == expected  # computed


@pytest.mark.long
def test_the_lagrangian_of_twenty_planes_contains_no_other_plane_of_pg_5_3() -> None:
    planes = {tuple(map(draws.ints, plane.rows)) for plane in twenty_planes(F3)}
    vectors = [oracle.plucker(rows, 3) for rows in planes]
    space = Lagrangian.span(F3, 6, vectors)
    found = {rows for rows in oracle.all_planes(3) if space.contains(oracle.plucker(rows, 3))}
    assert found == planes  # computed


def test_a_space_of_another_dimension_is_not_lagrangian() -> None:
    for count in (0, 1, 9):
        rows = through_a_point()[:count]
        assert not Subspace.span(QQ, 6, rows).is_lagrangian()
        with pytest.raises(NotLagrangianError) as caught:
            Lagrangian.span(QQ, 6, rows)
        assert str(caught.value) == (
            f"a Lagrangian has dimension 10, not {count}; give ten independent rows"
        )
    doubled = [*through_a_point()[:9], through_a_point()[0]]
    with pytest.raises(NotLagrangianError, match="has dimension 10, not 9"):
        Lagrangian.span(QQ, 6, doubled)
    with pytest.raises(NotLagrangianError, match="has dimension 10, not 11"):
        Lagrangian.span(QQ, 6, [*in_a_hyperplane(), [1] * 20])


@draws.over_fields
def test_a_space_that_is_not_isotropic_is_refused_with_two_rows_and_their_value(
    field: Field,
) -> None:
    # e012, …, e035 pair to 0 among themselves; e345 pairs with e012 to 1, with the others to 0
    rows = [*through_a_point()[:9], [0] * 19 + [1]]
    space = Subspace.span(field, 6, rows)
    assert space.dimension == 10
    assert not space.is_lagrangian()
    with pytest.raises(NotLagrangianError) as caught:
        Lagrangian.span(field, 6, rows)
    assert str(caught.value) == ("not isotropic: rows 0 and 9 of the echelon form pair to 1, not 0")


def test_a_lagrangian_needs_six_dimensions() -> None:
    units = draws.identity(QQ, 35)
    with pytest.raises(TrivectorError):
        Lagrangian.span(QQ, 7, units[:10])
    space = Subspace.span(QQ, 7, units[:10])
    for question in (Subspace.offending_pair, Subspace.is_isotropic, Subspace.is_lagrangian):
        with pytest.raises(UsageError, match="isotropy needs n = 6, where ∧³V carries a pairing"):
            question(space)
    with pytest.raises(UsageError, match="total singularity needs n = 6"):
        Subspace.span(F2, 7, []).is_totally_singular()


# Characteristic 2


def test_pairwise_incident_planes_span_a_totally_singular_space() -> None:
    planes = [
        (oracle.plucker(rows, 2), oracle.point_mask(rows, 2)) for rows in oracle.all_planes(2)
    ]
    rng = Random(6)
    dimensions = set()
    for _ in range(25):
        rng.shuffle(planes)
        clique: list[int] = []
        vectors = []
        for vector, mask in planes:
            if all(mask & other for other in clique):
                clique.append(mask)
                vectors.append(vector)
        space = Subspace.span(F2, 6, vectors)
        assert space.is_totally_singular()
        assert space.is_isotropic()
        dimensions.add(space.dimension)
    assert max(dimensions) == 10


def test_an_isotropic_space_need_not_be_totally_singular() -> None:
    # q(e012 + e345) = 1, and every line is isotropic
    line = Subspace.from_terms(F2, 6, [{(0, 1, 2): 1, (3, 4, 5): 1}])
    assert line.is_isotropic()
    assert not line.is_totally_singular()
    # e_I + e_J for the ten complementary pairs: a Lagrangian on whose basis q is 1
    pairs = [{t: 1, tuple(sorted(set(range(6)) - set(t))): 1} for t in TRIPLES[:10]]
    space = Subspace.from_terms(F2, 6, pairs)
    assert space.is_lagrangian()
    assert not space.is_totally_singular()


def test_a_space_that_is_not_isotropic_is_not_totally_singular() -> None:
    # q(e012) = q(e345) = 0, but the two pair to 1
    space = Subspace.from_terms(F2, 6, [{(0, 1, 2): 1}, {(3, 4, 5): 1}])
    assert not space.is_isotropic()
    assert not space.is_totally_singular()


@draws.some
@given(data=st.data())
def test_total_singularity_is_asked_of_every_vector(data: st.DataObject) -> None:
    rows = data.draw(draws.matrices(F2, data.draw(st.integers(0, 3)), 20))
    few = [row[:3] + [F2.zero] * 14 + row[17:] for row in rows]  # often isotropic
    space = Subspace.span(F2, 6, data.draw(st.sampled_from([rows, few])))

    def form(vector: Sequence[int]) -> int:
        return sum(vector[i] * vector[19 - i] for i in range(10)) % 2  # I^c stands at 19 − I

    everything = oracle.combinations_of(list(map(draws.ints, space.rows)), 2, 20)
    assert space.is_totally_singular() == (not any(map(form, everything)))


@draws.over_odd_fields
def test_total_singularity_is_no_question_in_other_characteristics(field: Field) -> None:
    space = Subspace.span(field, 6, through_a_point())
    with pytest.raises(UsageError, match=r"in characteristic 2 only; over .* ask whether"):
        space.is_totally_singular()


# Refusals


def test_rows_of_the_wrong_length_span_nothing() -> None:
    with pytest.raises(DimensionError, match="row 0 must have 20 entries, not 19"):
        Subspace.span(QQ, 6, [[1] * 19])
    with pytest.raises(DimensionError, match="row 1 must have 35 entries, not 20"):
        Subspace.span(QQ, 7, [[1] * 35, [1] * 20])
    for n in (0, 3, 5, 8):
        with pytest.raises(DimensionError, match=f"n must be 6 or 7, not {n}"):
            Subspace.span(QQ, n, [])
        with pytest.raises(DimensionError, match=f"n must be 6 or 7, not {n}"):
            Subspace.from_terms(QQ, n, [])


def test_entries_of_subspaces_are_read_by_the_field() -> None:
    with pytest.raises(EntryError, match="float"):
        Subspace.span(QQ, 6, [[1.0] * 20])
    with pytest.raises(EntryError, match="denominator that is 0 modulo 7"):
        Subspace.span(F7, 6, [["1/7"] * 20])
    with pytest.raises(EntryError, match="boolean"):
        Subspace.span(QQ, 6, []).contains([True] * 20)


@pytest.mark.parametrize(
    ("first", "second"),
    [
        (Subspace.span(QQ, 6, []), Subspace.span(F7, 6, [])),
        (Subspace.span(F5, 6, [[1] * 20]), Subspace.span(F7, 6, [[1] * 20])),
        (Subspace.span(QQ, 6, []), Subspace.span(QQ, 7, [])),
    ],
)
@pytest.mark.parametrize(
    "operation", [Subspace.sum, Subspace.meet], ids=lambda operation: operation.__name__
)
def test_subspaces_of_two_spaces_do_not_go_together(
    first: Subspace, second: Subspace, operation: Any
) -> None:
    assert first != second
    for a, b in ((first, second), (second, first)):
        with pytest.raises(MixedFieldsError) as caught:
            operation(a, b)
        sentence = str(caught.value)
        assert f"over {a.field.name}, n = {a.n}, and over {b.field.name}, n = {b.n}" in sentence
        assert "convert one of them" in sentence


def test_errors_of_this_room_are_caught_by_their_common_name() -> None:
    for kind, base in [
        (NotLagrangianError, ValueError),
        (MixedFieldsError, TypeError),
        (UsageError, ValueError),
    ]:
        assert issubclass(kind, TrivectorError)
        assert issubclass(kind, base)
        assert kind.exit_code == 2


def test_planes_give_the_rows_of_a_subspace() -> None:
    rows = [[1, 0, 0, 0, 2, 0], [0, 1, 0, 3, 0, 0], [0, 0, 1, 0, 0, 5]]
    plane = Plane.from_rows(QQ, rows)
    space = Subspace.span(QQ, 6, [plane.plucker])
    assert space.rows == (plane.plucker,)
    assert space.contains([7 * x for x in minors(plane.rows)])
