"""Points, lines, planes: canonical forms, Plücker vectors, meet and join."""

import json
from collections import Counter
from functools import cache
from itertools import combinations, islice
from random import Random
from typing import Any

import numpy as np
import oracle
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

from trivector.errors import (
    DependentRowsError,
    DimensionError,
    EntryError,
    MixedFieldsError,
    NotDecomposableError,
    TrivectorError,
)
from trivector.exterior import Trivector
from trivector.exterior.products import gram_row, pairing
from trivector.fields import QQ, Field, prime_field
from trivector.subspaces import Flat, Plane

F2, F3, F5, F7 = map(prime_field, (2, 3, 5, 7))

# From a fixed plane of PG(5,q): equal, in a line, in exactly a point, disjoint; classical:
# 1, q(q²+q+1)², q⁴(q²+q+1)², q⁹
MEETINGS = {
    2: {2: 1, 1: 98, 0: 784, -1: 512},
    3: {2: 1, 1: 507, 0: 13689, -1: 19683},
}


@cache
def planes_of(q: int) -> list[tuple[oracle.Matrix, Plane]]:
    """All planes of PG(5,q), literal and as objects."""
    field = prime_field(q)
    return [(rows, Plane.from_rows(field, rows)) for rows in oracle.all_planes(q)]


def unit(*indices: int, n: int = 6) -> list[list[int]]:
    return [[int(i == j) for j in range(n)] for i in indices]


def literal_rank(field: Field, rows: Any, ncols: int) -> int:
    return len(draws.literal_reduced(field, rows, ncols)[1])


# Canonical forms


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_a_plane_does_not_depend_on_the_basis_it_is_given_by(
    field: Field, n: int, data: st.DataObject
) -> None:
    plane = data.draw(draws.planes(field, n))
    mixing = data.draw(draws.invertible_matrices(field, 3))
    again = Plane.from_rows(field, draws.other_basis(field, mixing, plane.rows))
    assert again == plane
    assert hash(again) == hash(plane)
    assert again.rows == plane.rows
    assert again.plucker == plane.plucker
    assert again.sort_key() == plane.sort_key()


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_a_flat_is_kept_by_the_reduced_echelon_form_of_its_span(
    field: Field, n: int, data: st.DataObject
) -> None:
    rows = data.draw(draws.matrices_of_any_rank(field, data.draw(st.integers(1, n)), n))
    reduced, pivots = draws.literal_reduced(field, rows, n)
    flat = Flat.span(field, n, rows)
    assert flat.rows == tuple(map(tuple, reduced[: len(pivots)]))
    assert flat.projective_dimension == len(pivots) - 1
    assert Flat.span(field, n, [*rows, *rows[::-1]]) == flat


def test_the_planes_of_a_finite_space_are_all_different() -> None:
    planes = {plane for _, plane in planes_of(2)}
    assert len(planes) == 1395  # Gaussian binomial [6,3] at q = 2; classical
    assert len({plane.sort_key() for plane in planes}) == 1395
    assert len({plane.plucker for plane in planes}) == 1395
    assert all(
        tuple(map(draws.ints, plane.rows)) == rows for rows, plane in planes_of(2)
    )  # the oracle's matrices are canonical already


def test_planes_are_sorted_by_pivots_and_then_by_entries() -> None:
    def key(plane: Plane) -> tuple[list[int], list[tuple[int, ...]]]:
        rows = [draws.ints(row) for row in plane.rows]
        return [row.index(1) for row in rows], rows

    planes = [plane for _, plane in planes_of(2)]
    Random(2).shuffle(planes)
    assert sorted(planes, key=Plane.sort_key) == sorted(planes, key=key)


def test_flats_over_different_fields_or_in_different_spaces_differ() -> None:
    rows = unit(0, 1, 2)
    longer = unit(0, 1, 2, n=7)
    flats = [
        *(Plane.from_rows(field, rows) for field in draws.FIELDS),
        *(Plane.from_rows(field, longer) for field in draws.FIELDS),
    ]
    assert len(set(flats)) == len(flats)


def test_a_plane_is_equal_to_the_same_subspace_found_as_a_flat() -> None:
    plane = Plane.from_rows(QQ, unit(0, 1, 2))
    assert plane.meet(plane) == plane
    assert plane.join(plane) == plane
    assert Flat.span(QQ, 6, unit(0, 1, 2)) == plane


def test_a_flat_cannot_be_edited() -> None:
    plane = Plane.from_rows(QQ, unit(0, 1, 2))
    with pytest.raises(AttributeError):
        plane.rows = ()


@draws.over_fields
@draws.few
@given(data=st.data())
def test_the_entries_of_a_document_give_the_flat_back(field: Field, data: st.DataObject) -> None:
    flat = data.draw(draws.flats(field, 6))
    entries = json.loads(json.dumps(flat.to_entries()))
    assert Flat.span(field, 6, entries) == flat


def test_flats_have_their_names() -> None:
    words = {count: Flat.span(QQ, 6, unit(*range(count))).word for count in range(7)}
    assert [words[count] for count in range(6)] == [
        "empty",
        "point",
        "line",
        "plane",
        "solid",
        "hyperplane",
    ]
    assert Flat.span(QQ, 7, unit(*range(6), n=7)).word == "hyperplane"
    assert Flat.span(QQ, 7, unit(*range(5), n=7)).word == "4-dimensional flat"
    assert words[6] == "5-dimensional flat"


# Plücker vectors


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_a_plane_is_recovered_from_any_multiple_of_its_vector(
    field: Field, n: int, data: st.DataObject
) -> None:
    plane = data.draw(draws.planes(field, n))
    scalar = data.draw(draws.nonzero_elements(field))
    assert Plane.from_plucker(field, [scalar * x for x in plane.plucker]) == plane
    assert next(x for x in plane.plucker if x) == field.one
    assert Trivector(field, plane.plucker) == Trivector.from_vectors(field, plane.rows)


def test_every_plane_of_pg_5_2_has_the_literal_vector_and_comes_back_from_it() -> None:
    for rows, plane in planes_of(2):
        vector = oracle.plucker(rows, 2)
        assert draws.ints(plane.plucker) == vector
        assert Plane.from_plucker(F2, vector) == plane


@pytest.mark.parametrize(("n", "q", "step"), [(6, 3, 70), (7, 2, 40)])
def test_planes_of_other_finite_spaces_have_the_literal_vector(n: int, q: int, step: int) -> None:
    for rows in islice(oracle.all_planes(q, n), 0, None, step):
        vector = oracle.plucker(rows, q)
        plane = Plane.from_plucker(prime_field(q), vector)
        assert tuple(map(draws.ints, plane.rows)) == rows
        assert draws.ints(plane.plucker) == vector


# Meet and join


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_dimensions_of_meet_and_join_add_up(field: Field, n: int, data: st.DataObject) -> None:
    first, second = data.draw(draws.pairs_of_flats(field, n))
    meet, join = first.meet(second), first.join(second)
    assert join.projective_dimension + 1 == literal_rank(field, first.rows + second.rows, n)
    assert (
        meet.projective_dimension + join.projective_dimension
        == first.projective_dimension + second.projective_dimension
    )
    assert first.meet_dimension(second) == meet.projective_dimension
    assert first.is_incident(second) == bool(meet.rows)
    for flat in (first, second):
        assert literal_rank(field, flat.rows + meet.rows, n) == len(flat.rows)  # meet ⊂ flat
        assert literal_rank(field, join.rows + flat.rows, n) == len(join.rows)  # flat ⊂ join


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_flats_form_a_modular_lattice(field: Field, n: int, data: st.DataObject) -> None:
    a, b = data.draw(draws.pairs_of_flats(field, n))
    c = data.draw(draws.flats(field, n))
    assert a.meet(b) == b.meet(a)
    assert a.join(b) == b.join(a)
    assert a.meet(b).meet(c) == a.meet(b.meet(c))
    assert a.join(b).join(c) == a.join(b.join(c))
    assert a.meet(a) == a.join(a) == a
    assert a.meet(a.join(b)) == a.join(a.meet(b)) == a
    upper = a.join(c)
    assert a.join(b.meet(upper)) == a.join(b).meet(upper)


@draws.over_fields
@draws.few
@given(data=st.data())
def test_one_flat_contains_another_exactly_if_the_join_adds_nothing(
    field: Field, data: st.DataObject
) -> None:
    a, b = data.draw(draws.pairs_of_flats(field, 6))
    assert a.contains(b) == (a.join(b) == a) == (a.meet(b) == b)
    assert a.contains(a.meet(b))
    assert a.join(b).contains(a)
    assert a.contains(Flat.span(field, 6, []))
    assert Flat.span(field, 6, draws.identity(field, 6)).contains(a)


@pytest.mark.parametrize("q", [2, 3])
@draws.some
@given(data=st.data())
def test_flats_of_all_dimensions_meet_as_their_points_do(q: int, data: st.DataObject) -> None:
    field = prime_field(q)
    first, second = data.draw(draws.pairs_of_flats(field, 6))
    common = oracle.point_mask(list(map(draws.ints, first.rows)), q)
    common &= oracle.point_mask(list(map(draws.ints, second.rows)), q)
    assert first.meet_dimension(second) == oracle.dimension_from_points(common.bit_count(), q)
    assert oracle.point_mask(list(map(draws.ints, first.meet(second).rows)), q) == common


@pytest.mark.parametrize("position", [0, 1, 500, 1111, 1394])
def test_all_planes_of_pg_5_2_meet_a_fixed_one_as_their_points_do(position: int) -> None:
    fixed_rows, fixed = planes_of(2)[position]
    counts: Counter[int] = Counter()
    for rows, plane in planes_of(2):
        dimension = fixed.meet_dimension(plane)
        assert dimension == oracle.meet_dimension(fixed_rows, rows, 2)
        assert fixed.is_incident(plane) == (dimension >= 0)
        assert plane.meet_dimension(fixed) == dimension
        counts[dimension] += 1
    assert counts == MEETINGS[2]


def test_two_planes_of_pg_5_2_pair_to_zero_exactly_if_they_share_a_point() -> None:
    planes = planes_of(2)
    vectors = np.array([draws.ints(plane.plucker) for _, plane in planes])
    forms = np.array([draws.ints(gram_row(plane.plucker)) for _, plane in planes])
    bits = oracle.point_bits(2)
    points = np.zeros((1395, 63), dtype=np.int64)
    for i, (rows, _) in enumerate(planes):
        for point in oracle.points_of(rows, 2):
            points[i, bits[point].bit_length() - 1] = 1
    assert np.array_equal((forms @ vectors.T) % 2 == 0, points @ points.T > 0)


@pytest.mark.long
def test_every_two_planes_of_pg_5_2_meet_as_their_points_do() -> None:
    planes = [(oracle.point_mask(rows, 2), plane) for rows, plane in planes_of(2)]
    counts: Counter[int] = Counter()
    for (mask, plane), (other_mask, other) in combinations(planes, 2):
        dimension = plane.meet_dimension(other)
        common = (mask & other_mask).bit_count()
        assert dimension == oracle.dimension_from_points(common, 2)
        counts[dimension] += 1
    assert {d: 2 * count // 1395 for d, count in counts.items()} == {1: 98, 0: 784, -1: 512}


def test_all_planes_of_pg_5_3_meet_and_pair_with_a_fixed_one_in_the_classical_numbers() -> None:
    _, fixed = planes_of(3)[20011]
    counts: Counter[int] = Counter()
    for _, plane in planes_of(3):
        dimension = fixed.meet_dimension(plane)
        assert (not pairing(fixed.plucker, plane.plucker, F3.zero)) == (dimension >= 0)
        counts[dimension] += 1
    assert counts == MEETINGS[3]


@pytest.mark.parametrize(
    "step", [pytest.param(37), pytest.param(1, marks=pytest.mark.long)], ids=["some", "all"]
)
def test_planes_of_pg_5_3_meet_a_fixed_one_as_their_points_do(step: int) -> None:
    fixed_rows, fixed = planes_of(3)[20011]
    for rows, plane in planes_of(3)[::step]:
        assert fixed.meet_dimension(plane) == oracle.meet_dimension(fixed_rows, rows, 3)
        vectors = [oracle.plucker(r, 3) for r in (fixed_rows, rows)]
        assert (oracle.pairing(*vectors, 3) == 0) == fixed.is_incident(plane)


@draws.over_fields
@draws.few
@given(data=st.data())
def test_over_every_field_incidence_is_pairing_to_zero(field: Field, data: st.DataObject) -> None:
    basis = data.draw(draws.invertible_matrices(field, 6))
    common = data.draw(st.integers(0, 3))
    first = Plane.from_rows(field, basis[:3])
    second = Plane.from_rows(field, basis[:common] + basis[3 : 6 - common])
    assert first.meet_dimension(second) == common - 1
    assert (not pairing(first.plucker, second.plucker, field.zero)) == (common > 0)


@pytest.mark.parametrize("position", [0, 6000])
def test_planes_of_pg_6_2_meet_a_fixed_one_as_their_points_do(position: int) -> None:
    planes = list(oracle.all_planes(2, 7))
    fixed = planes[position]
    seen = set()
    for rows in planes[::29]:
        dimension = Plane.from_rows(F2, fixed).meet_dimension(Plane.from_rows(F2, rows))
        assert dimension == oracle.meet_dimension(fixed, rows, 2)
        seen.add(dimension)
    assert seen >= {-1, 0, 1}


# Refusals


@pytest.mark.parametrize(
    ("rows", "sentence"),
    [
        ([[1, 0, 0, 0, 0, 0], [2, 0, 0, 0, 0, 0], [0, 0, 1, 0, 0, 0]], "row 1 = 2·row 0"),
        ([[1, 0, 0, 0, 0, 0], [0, 1, 0, 0, 0, 0], [1, -2, 0, 0, 0, 0]], "row 2 = row 0 − 2·row 1"),
        ([*unit(0), [0, 3, 0, 0, 0, 0], [-1, 2, 0, 0, 0, 0]], "row 2 = −row 0 + 2/3·row 1"),
        ([[0, 0, 0, 0, 0, 0], [0, 1, 0, 0, 0, 0], [0, 0, 1, 0, 0, 0]], "row 0 = 0"),
        ([[1, 1, 1, 1, 1, 1], [0, 0, 0, 0, 0, 0], [0, 0, 1, 0, 0, 0]], "row 1 = 0"),
    ],
)
def test_dependent_rows_are_refused_with_their_dependency(rows: Any, sentence: str) -> None:
    with pytest.raises(DependentRowsError) as caught:
        Plane.from_rows(QQ, rows)
    assert str(caught.value) == f"rows must be independent; {sentence}. Give a basis of W."


def test_rows_may_be_independent_over_one_field_and_dependent_over_another() -> None:
    rows = [[1, 1, 0, 0, 0, 0], [1, -1, 0, 0, 0, 0], [0, 0, 1, 0, 0, 0]]
    assert Plane.from_rows(F3, rows).word == "plane"
    with pytest.raises(DependentRowsError, match="row 1 = row 0"):
        Plane.from_rows(F2, rows)


@pytest.mark.parametrize(
    ("rows", "sentence"),
    [
        ([], "a plane has 3 rows, not 0"),
        (unit(0, 1), "a plane has 3 rows, not 2"),
        (unit(0, 1, 2, 3), "a plane has 3 rows, not 4"),
        ([[1, 0, 0]] * 3, "the rows of a plane have 6 or 7 entries each, not 3, 3, 3"),
        ([*unit(0, 1), [0, 0, 1]], "the rows of a plane have 6 or 7 entries each, not 6, 6, 3"),
        ([*unit(0, 1), *unit(2, n=7)], "the rows of a plane have 6 or 7 entries each, not 6, 6, 7"),
        (unit(0, 1, 2, n=8), "the rows of a plane have 6 or 7 entries each, not 8, 8, 8"),
    ],
)
def test_a_matrix_of_the_wrong_shape_is_no_plane(rows: Any, sentence: str) -> None:
    with pytest.raises(DimensionError) as caught:
        Plane.from_rows(F5, rows)
    assert str(caught.value) == sentence


def test_entries_of_planes_and_flats_are_read_by_the_field() -> None:
    for make in (
        lambda rows: Plane.from_rows(QQ, rows),
        lambda rows: Flat.span(QQ, 6, rows),
        lambda rows: Plane.from_plucker(QQ, rows[0] * 3 + [0, 0]),
    ):
        with pytest.raises(EntryError, match="float"):
            make([[1.0, 0, 0, 0, 0, 0], *unit(1, 2)])


def test_a_vector_of_the_wrong_length_spans_no_flat() -> None:
    with pytest.raises(DimensionError, match="row 1 must have 6 entries, not 7"):
        Flat.span(QQ, 6, [*unit(0), *unit(1, n=7)])


def test_a_vector_that_violates_a_relation_is_no_plane() -> None:
    for field in draws.FIELDS:
        with pytest.raises(NotDecomposableError, match=r"^not decomposable: x.* = .*, not 0\. "):
            Plane.from_plucker(field, [1] + [0] * 18 + [1])
    with pytest.raises(NotDecomposableError, match="is zero, which is no plane"):
        Plane.from_plucker(QQ, [0] * 20)
    for size in (0, 19, 21, 34):
        with pytest.raises(DimensionError, match=rf"20 entries .* or 35 .*, not {size}$"):
            Plane.from_plucker(QQ, [1] * size)


@pytest.mark.parametrize(
    ("first", "second"),
    [
        (Plane.from_rows(QQ, unit(0, 1, 2)), Plane.from_rows(F7, unit(0, 1, 2))),
        (Plane.from_rows(F5, unit(0, 1, 2)), Plane.from_rows(F7, unit(0, 1, 2))),
        (Plane.from_rows(QQ, unit(0, 1, 2)), Plane.from_rows(QQ, unit(0, 1, 2, n=7))),
        (Flat.span(QQ, 6, []), Flat.span(F2, 6, [])),
    ],
)
@pytest.mark.parametrize(
    "operation",
    [Flat.meet, Flat.join, Flat.meet_dimension, Flat.is_incident, Flat.contains],
    ids=lambda operation: operation.__name__,
)
def test_flats_of_two_spaces_do_not_meet(first: Flat, second: Flat, operation: Any) -> None:
    for a, b in ((first, second), (second, first)):
        with pytest.raises(MixedFieldsError) as caught:
            operation(a, b)
        sentence = str(caught.value)
        assert f"P^{a.n - 1} over {a.field.name}" in sentence
        assert f"P^{b.n - 1} over {b.field.name}" in sentence
        assert "convert one of them" in sentence


def test_errors_of_this_room_are_caught_by_their_common_name() -> None:
    for kind in (DependentRowsError, DimensionError, NotDecomposableError):
        assert issubclass(kind, TrivectorError)
        assert issubclass(kind, ValueError)
        assert kind.exit_code == 2
