"""Trivectors as objects: what they accept, what they refuse, and their laws."""

from itertools import combinations, permutations
from typing import Any

import oracle
import pytest
import strategies as draws
from flint import fmpq
from hypothesis import given
from hypothesis import strategies as st

from trivector.errors import (
    DimensionError,
    EntryError,
    MixedFieldsError,
    TrivectorError,
    UsageError,
)
from trivector.exterior import Trivector, Violation
from trivector.fields import QQ, Field, prime_field

F2, F5, F7 = prime_field(2), prime_field(5), prime_field(7)
UNIT = [[int(i == j) for j in range(6)] for i in range(6)]


def e(*triple: int, field: Field = QQ, n: int = 6) -> Trivector:
    return Trivector.from_terms(field, n, {triple: 1})


# Making one


@draws.over_fields
def test_the_number_of_coordinates_decides_the_dimension_of_v(field: Field) -> None:
    assert Trivector(field, range(20)).n == 6
    assert Trivector(field, range(35)).n == 7
    for size in (0, 1, 10, 19, 21, 34, 36, 56):
        with pytest.raises(DimensionError, match=rf"20 coordinates .* or 35 .*, not {size}$"):
            Trivector(field, [0] * size)


def test_coordinates_are_read_by_the_field() -> None:
    alpha = Trivector(F7, ["3/4", -1] + [0] * 18)
    assert [int(x) for x in alpha.coordinates[:2]] == [6, 6]
    with pytest.raises(EntryError, match="float"):
        Trivector(QQ, [0.5] + [0] * 19)
    with pytest.raises(EntryError, match="modulo 5, not 7"):
        Trivector(F7, [F5.one] * 20)


@pytest.mark.parametrize("triple", list(combinations(range(6), 3)))
def test_terms_may_stand_in_any_order_with_their_sign(triple: tuple[int, int, int]) -> None:
    position = list(combinations(range(6), 3)).index(triple)
    for word in permutations(triple):
        coordinates = e(*word).coordinates
        assert coordinates[position] == oracle.permutation_sign(word)
        assert sum(map(bool, coordinates)) == 1


def test_terms_on_one_triple_are_added_up() -> None:
    terms = {(0, 1, 2): 5, (1, 0, 2): 2, (2, 0, 1): "1/2"}
    assert Trivector.from_terms(QQ, 6, terms) == e(0, 1, 2) * "7/2"


@pytest.mark.parametrize("triple", [(0, 0, 1), (0, 1), (0, 1, 2, 3), (0, 1, 6), (-1, 0, 1), ()])
def test_terms_that_are_no_triple_are_refused(triple: tuple[int, ...]) -> None:
    with pytest.raises(DimensionError, match="is not a triple of distinct indices below 6"):
        Trivector.from_terms(QQ, 6, {triple: 1})


@pytest.mark.parametrize("n", [0, 3, 5, 8])
def test_v_must_have_dimension_six_or_seven(n: int) -> None:
    with pytest.raises(DimensionError, match=f"n must be 6 or 7, not {n}"):
        Trivector.from_terms(QQ, n, {})


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_the_product_of_three_vectors_is_zero_exactly_if_they_are_dependent(
    field: Field, n: int, data: st.DataObject
) -> None:
    rows = data.draw(draws.matrices_of_any_rank(field, 3, n))
    dependent = len(draws.literal_reduced(field, rows, n)[1]) < 3
    assert bool(Trivector.from_vectors(field, rows)) == (not dependent)


def test_three_unit_vectors_make_a_basis_element() -> None:
    for triple in combinations(range(6), 3):
        assert Trivector.from_vectors(QQ, [UNIT[i] for i in triple]) == e(*triple)


@pytest.mark.parametrize(
    "vectors", [[], UNIT[:2], UNIT[:4], [[1], [1, 0], [1, 0, 0]], [[1] * 5] * 3, [[1] * 8] * 3]
)
def test_anything_but_three_vectors_of_v_is_refused(vectors: list[list[int]]) -> None:
    with pytest.raises(DimensionError, match=r"three vectors|coordinates"):
        Trivector.from_vectors(QQ, vectors)


# The vector space


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_trivectors_form_a_vector_space(field: Field, n: int, data: st.DataObject) -> None:
    a, b = data.draw(draws.trivectors(field, n)), data.draw(draws.trivectors(field, n))
    s, t = data.draw(draws.elements(field)), data.draw(draws.elements(field))
    assert a + b == b + a
    assert a - b == a + (-b)
    assert not a - a
    assert s * (a + b) == s * a + b * s
    assert (s + t) * a == s * a + t * a
    assert (s * a).coordinates == tuple(s * x for x in a.coordinates)
    assert bool(a) == any(a.coordinates)
    assert hash(a + b) == hash(b + a)


def test_scalars_may_be_written_like_entries_but_not_as_floats() -> None:
    assert e(0, 1, 2) * "1/2" + fmpq(1, 2) * e(0, 1, 2) == e(0, 1, 2)
    with pytest.raises(EntryError, match="float"):
        e(0, 1, 2) * 0.5


MIXED = [
    (e(0, 1, 2), e(0, 1, 2, field=F7)),
    (e(0, 1, 2, field=F5), e(0, 1, 2, field=F7)),
    (e(0, 1, 2), e(0, 1, 2, n=7)),
]


@pytest.mark.parametrize(("first", "second"), MIXED)
@pytest.mark.parametrize(
    "operation",
    [Trivector.__add__, Trivector.__sub__, Trivector.pairing, Trivector.wedge],
    ids=lambda operation: operation.__name__,
)
def test_trivectors_of_two_spaces_do_not_go_together(
    first: Trivector, second: Trivector, operation: Any
) -> None:
    for a, b in ((first, second), (second, first)):
        with pytest.raises(MixedFieldsError, match=f"over {a.field.name}, n = {a.n}, and over "):
            operation(a, b)
    assert first != second
    assert issubclass(MixedFieldsError, TypeError)


# Products


@draws.over_prime_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_products_agree_with_the_literal_expansion(
    field: Field, n: int, data: st.DataObject
) -> None:
    q = field.characteristic
    a, b = data.draw(draws.trivectors(field, n)), data.draw(draws.trivectors(field, n))
    v = data.draw(draws.vectors(field, n))
    alpha, beta = (oracle.multivector(draws.ints(x.coordinates), n, 3, q) for x in (a, b))
    vector = oracle.multivector(draws.ints(v), n, 1, q)
    six = oracle.coordinates(oracle.wedge(alpha, beta, q), n, 6, q)
    assert draws.ints(a.wedge(b)) == six
    four = oracle.coordinates(oracle.wedge(vector, alpha, q), n, 4, q)
    assert draws.ints(a.wedge_vector(v)) == four
    if n == 6:
        assert (int(a.pairing(b)),) == six


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_contraction_of_a_product_of_vectors_is_the_formula(
    field: Field, n: int, data: st.DataObject
) -> None:
    u, v, w = vectors = data.draw(draws.matrices(field, 3, n))
    f = data.draw(draws.vectors(field, n))
    fu, fv, fw = (draws.dot(field, f, x) for x in vectors)

    def bivector(x: list[Any], y: list[Any]) -> list[Any]:
        return [x[i] * y[j] - x[j] * y[i] for i, j in combinations(range(n), 2)]

    expected = tuple(
        fu * a - fv * b + fw * c
        for a, b, c in zip(bivector(v, w), bivector(u, w), bivector(u, v), strict=True)
    )
    assert Trivector.from_vectors(field, vectors).contract(f) == expected


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_a_vector_kills_a_decomposable_exactly_if_it_lies_in_the_plane(
    field: Field, n: int, data: st.DataObject
) -> None:
    rows = data.draw(draws.planes(field, n)).rows
    alpha = Trivector.from_vectors(field, rows)
    coefficients = data.draw(draws.vectors(field, 3))
    assert not any(alpha.wedge_vector(draws.combine(field, coefficients, rows, n)))
    vector = data.draw(draws.vectors(field, n))
    outside = len(draws.literal_reduced(field, [*rows, vector], n)[1]) == 4
    assert any(alpha.wedge_vector(vector)) == outside


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_a_linear_map_acts_factor_by_factor(field: Field, n: int, data: st.DataObject) -> None:
    g, vectors = data.draw(draws.matrices(field, n, n)), data.draw(draws.matrices(field, 3, n))
    images = [draws.apply(field, g, v) for v in vectors]
    image = Trivector.from_vectors(field, vectors).act(g)
    assert image == Trivector.from_vectors(field, images)


def test_vectors_and_matrices_of_the_wrong_size_are_refused() -> None:
    alpha = e(0, 1, 2)
    with pytest.raises(DimensionError, match="a vector of V has 6 entries, not 7"):
        alpha.wedge_vector([0] * 7)
    with pytest.raises(DimensionError, match="a vector of V has 6 entries, not 5"):
        alpha.contract([0] * 5)
    with pytest.raises(DimensionError, match="g must be 6×6, not of 5 rows"):
        alpha.act(UNIT[:5])
    with pytest.raises(DimensionError, match="a vector of V has 6 entries, not 5"):
        alpha.act([row[:5] for row in UNIT])


def test_the_pairing_and_the_quadratic_form_belong_to_six_dimensions() -> None:
    alpha = e(0, 1, 2, n=7)
    with pytest.raises(UsageError, match="the pairing needs n = 6, not n = 7; use wedge"):
        alpha.pairing(alpha)
    with pytest.raises(UsageError, match="the quadratic form needs n = 6"):
        alpha.quadratic_form()
    assert issubclass(UsageError, ValueError)


# The quadratic form in characteristic 2


@draws.some
@given(data=st.data())
def test_in_characteristic_two_the_pairing_is_the_polar_form(data: st.DataObject) -> None:
    a, b = data.draw(draws.trivectors(F2, 6)), data.draw(draws.trivectors(F2, 6))
    polar = (a + b).quadratic_form() - a.quadratic_form() - b.quadratic_form()
    assert polar == a.pairing(b)


@draws.some
@given(data=st.data())
def test_in_characteristic_two_the_quadratic_form_is_invariant(data: st.DataObject) -> None:
    a = data.draw(draws.trivectors(F2, 6))
    g = data.draw(draws.unimodular_matrices(F2, 6))
    assert F2.matrix(g, 6).det() == 1
    assert a.act(g).quadratic_form() == a.quadratic_form()


def test_in_characteristic_two_the_quadratic_form_vanishes_on_all_planes() -> None:
    for rows in oracle.all_planes(2):
        assert not Trivector.from_vectors(F2, rows).quadratic_form()


def test_in_odd_characteristic_the_quadratic_form_is_not_invariant() -> None:
    exchange = [UNIT[1], [-x for x in UNIT[0]], *UNIT[2:]]  # of determinant 1
    alpha = Trivector.from_terms(F5, 6, {(0, 2, 3): 1, (1, 4, 5): 1})
    assert alpha.act(exchange).quadratic_form() == -alpha.quadratic_form() != 0


# Decomposing


@draws.over_fields
@draws.in_six_and_seven
def test_zero_is_decomposable_but_belongs_to_no_plane(field: Field, n: int) -> None:
    zero = Trivector.from_terms(field, n, {})
    assert zero.is_decomposable()
    with pytest.raises(UsageError, match="the zero trivector belongs to no plane; give a nonzero"):
        zero.decompose()


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_a_decomposable_is_recovered_from_its_vectors(
    field: Field, n: int, data: st.DataObject
) -> None:
    plane = data.draw(draws.planes(field, n))
    alpha = Trivector.from_vectors(field, plane.rows) * data.draw(draws.nonzero_elements(field))
    assert alpha.is_decomposable()
    vectors = alpha.decompose()
    assert not isinstance(vectors, Violation)
    assert draws.same_span(field, vectors, plane.rows, n)
    product = Trivector.from_vectors(field, vectors)
    pivot = next(i for i, x in enumerate(alpha.coordinates) if x)
    assert product * alpha.coordinates[pivot] == alpha * product.coordinates[pivot]


# Writing


@pytest.mark.parametrize(
    ("field", "terms", "text"),
    [
        (QQ, {}, "0"),
        (QQ, {(0, 1, 2): 1}, "e012"),
        (QQ, {(0, 1, 2): -1}, "−e012"),
        (QQ, {(3, 4, 5): -1, (0, 1, 2): 1}, "e012 − e345"),
        (QQ, {(0, 1, 2): "-3/4", (1, 2, 3): "5/2"}, "−3/4·e012 + 5/2·e123"),
        (QQ, {(0, 1, 3): 12, (0, 1, 4): -7}, "12·e013 − 7·e014"),
        (F7, {(0, 1, 2): -1, (2, 3, 4): 1}, "6·e012 + e234"),
        (F2, {(0, 1, 2): 3, (2, 3, 4): 2}, "e012"),
    ],
)
def test_a_trivector_is_written_as_a_sum(field: Field, terms: Any, text: str) -> None:
    assert str(Trivector.from_terms(field, 6, terms)) == text


def test_errors_of_this_room_are_caught_by_their_common_name() -> None:
    for kind in (DimensionError, MixedFieldsError, UsageError):
        assert issubclass(kind, TrivectorError)
        assert kind.exit_code == 2
