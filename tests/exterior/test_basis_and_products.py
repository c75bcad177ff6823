"""The signs of the exterior algebra, against literal permutations and by their laws."""

from itertools import combinations, permutations, product
from math import comb
from typing import Any

import numpy as np
import oracle
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

from trivector.exterior.basis import (
    DIMENSIONS,
    complement_terms,
    dimension_from_size,
    index_of,
    sort_sign,
    subset_name,
    subsets,
    wedge_terms,
)
from trivector.exterior.products import (
    act,
    contract,
    exterior_cube,
    gram_row,
    minors,
    pairing,
    quadratic_form,
    wedge,
)
from trivector.fields import QQ, Field, prime_field

LARGE = 2305843009213693951  # 2^61 − 1: integers below 2^60 are known by their residues

DEGREES = [(0, 3), (1, 1), (1, 2), (1, 3), (2, 2), (2, 3), (3, 2), (3, 3), (2, 4), (1, 5)]
in_degrees = pytest.mark.parametrize(("p", "q"), DEGREES)


def multivectors(field: Field, n: int, p: int) -> st.SearchStrategy[list[Any]]:
    return draws.vectors(field, comb(n, p))


def negated_if(odd: int, values: list[Any]) -> list[Any]:
    return [-x for x in values] if odd % 2 else values


def plus(left: list[Any], right: list[Any]) -> list[Any]:
    return [x + y for x, y in zip(left, right, strict=True)]


# The basis


def test_the_basis_is_in_lexicographic_order() -> None:
    names = " ".join(map(subset_name, subsets(6, 3)))
    assert names == (
        "012 013 014 015 023 024 025 034 035 045 123 124 125 134 135 145 234 235 245 345"
    )  # classical: the order of a dictionary
    assert list(subsets(7, 3)) == sorted(
        t for t in product(range(7), repeat=3) if t[0] < t[1] < t[2]
    )


@draws.in_six_and_seven
def test_every_subset_stands_at_its_position(n: int) -> None:
    for p in range(n + 1):
        assert len(subsets(n, p)) == comb(n, p)
        assert [index_of(n, p)[subset] for subset in subsets(n, p)] == list(range(comb(n, p)))


def test_the_number_of_coordinates_tells_the_dimension() -> None:
    assert DIMENSIONS == (6, 7)
    assert {size: dimension_from_size(size) for size in range(60) if dimension_from_size(size)} == {
        20: 6,  # C(6, 3)
        35: 7,  # C(7, 3)
    }


def test_the_sign_of_a_word_is_that_of_its_permutation() -> None:
    for letters in ((0, 1, 2, 3), (1, 3, 4), (5, 6), (2,), ()):
        for word in permutations(letters):
            assert sort_sign(word) == oracle.permutation_sign(word)


def test_a_word_with_a_repeated_letter_has_sign_zero() -> None:
    for word in product(range(4), repeat=3):
        assert (sort_sign(word) == 0) == (len(set(word)) < 3)


@draws.in_six_and_seven
def test_the_multiplication_table_agrees_with_permutation_signs(n: int) -> None:
    for p, q in product(range(n + 1), repeat=2):
        if p + q > n:
            continue
        expected = []
        for i, first in enumerate(combinations(range(n), p)):
            for j, second in enumerate(combinations(range(n), q)):
                [*terms] = oracle.wedge({first: 1}, {second: 1}, LARGE).items()
                expected += [(i, j, key, 1 if sign == 1 else -1) for key, sign in terms]
        names = subsets(n, p + q)
        assert [(i, j, names[k], sign) for i, j, k, sign in wedge_terms(n, p, q)] == expected


def test_the_volume_is_positive_and_complements_pair_to_one_or_minus_one() -> None:
    basis = subsets(6, 3)
    for i, (j, sign) in enumerate(complement_terms()):
        assert sorted(basis[i] + basis[j]) == [0, 1, 2, 3, 4, 5]
        assert sign == oracle.permutation_sign(basis[i] + basis[j])
    assert complement_terms()[0] == (19, 1)  # e012∧e345 = 1


# The product


@draws.over_prime_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_the_product_agrees_with_the_literal_expansion(
    field: Field, n: int, data: st.DataObject
) -> None:
    p, q = data.draw(st.sampled_from([d for d in DEGREES if sum(d) <= n]))
    modulus = field.characteristic
    first, second = data.draw(multivectors(field, n, p)), data.draw(multivectors(field, n, q))
    literal = oracle.wedge(
        oracle.multivector(draws.ints(first), n, p, modulus),
        oracle.multivector(draws.ints(second), n, q, modulus),
        modulus,
    )
    found = wedge(first, p, second, q, n, field.zero)
    assert draws.ints(found) == oracle.coordinates(literal, n, p + q, modulus)


@draws.in_six_and_seven
@draws.some
@given(data=st.data())
def test_over_the_integers_the_product_agrees_modulo_a_large_prime(
    n: int, data: st.DataObject
) -> None:
    small = st.lists(st.integers(-9, 9), min_size=comb(n, 3), max_size=comb(n, 3))
    first, second = data.draw(small), data.draw(small)
    literal = oracle.wedge(
        oracle.multivector(first, n, 3, LARGE), oracle.multivector(second, n, 3, LARGE), LARGE
    )
    found = wedge(list(map(QQ.element, first)), 3, list(map(QQ.element, second)), 3, n, QQ.zero)
    assert tuple(x % LARGE for x in draws.ints(found)) == oracle.coordinates(literal, n, 6, LARGE)


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_the_product_commutes_up_to_the_sign_of_the_degrees(
    field: Field, n: int, data: st.DataObject
) -> None:
    p, q = data.draw(st.sampled_from([d for d in DEGREES if sum(d) <= n]))
    first, second = data.draw(multivectors(field, n, p)), data.draw(multivectors(field, n, q))
    one_way = wedge(first, p, second, q, n, field.zero)
    other_way = wedge(second, q, first, p, n, field.zero)
    assert one_way == negated_if(p * q, other_way)


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_the_product_is_associative_and_distributive(
    field: Field, n: int, data: st.DataObject
) -> None:
    p, q, r = data.draw(st.sampled_from([(1, 1, 1), (1, 2, 3), (2, 1, 2), (3, 1, 2), (2, 2, 2)]))
    a, b, c = (data.draw(multivectors(field, n, degree)) for degree in (p, q, r))
    zero = field.zero
    left = wedge(wedge(a, p, b, q, n, zero), p + q, c, r, n, zero)
    right = wedge(a, p, wedge(b, q, c, r, n, zero), q + r, n, zero)
    assert left == right
    d = data.draw(multivectors(field, n, q))
    sums = plus(wedge(a, p, b, q, n, zero), wedge(a, p, d, q, n, zero))
    assert wedge(a, p, plus(b, d), q, n, zero) == sums


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_the_square_of_an_element_of_odd_degree_is_zero(
    field: Field, n: int, data: st.DataObject
) -> None:
    for p in (1, 3):
        element = data.draw(multivectors(field, n, p))
        assert not any(wedge(element, p, element, p, n, field.zero))


# The pairing


@draws.over_prime_fields
@draws.few
@given(data=st.data())
def test_the_pairing_is_the_coefficient_of_the_product(field: Field, data: st.DataObject) -> None:
    first, second = data.draw(multivectors(field, 6, 3)), data.draw(multivectors(field, 6, 3))
    expected = oracle.pairing(draws.ints(first), draws.ints(second), field.characteristic)
    assert int(pairing(first, second, field.zero)) == expected


@draws.over_fields
@draws.few
@given(data=st.data())
def test_the_pairing_is_alternating_and_bilinear(field: Field, data: st.DataObject) -> None:
    a, b, c = (data.draw(multivectors(field, 6, 3)) for _ in range(3))
    scalar, zero = data.draw(draws.elements(field)), field.zero
    assert pairing(a, a, zero) == zero  # in characteristic 2 as well
    assert pairing(a, b, zero) == -pairing(b, a, zero)
    mixed = plus(a, [scalar * x for x in b])
    assert pairing(mixed, c, zero) == pairing(a, c, zero) + scalar * pairing(b, c, zero)
    assert [pairing(a, b, zero)] == wedge(a, 3, b, 3, 6, zero)


@draws.over_fields
def test_the_pairing_of_basis_elements_is_the_sign_of_the_word(field: Field) -> None:
    basis = draws.identity(field, 20)
    for first, e in zip(combinations(range(6), 3), basis, strict=True):
        for second, f in zip(combinations(range(6), 3), basis, strict=True):
            word = first + second
            sign = oracle.permutation_sign(word) if len(set(word)) == 6 else 0
            assert pairing(e, f, field.zero) == field.element(sign)


@draws.over_fields
@draws.few
@given(data=st.data())
def test_a_gram_row_is_the_linear_form_of_the_pairing(field: Field, data: st.DataObject) -> None:
    a, b = data.draw(multivectors(field, 6, 3)), data.draw(multivectors(field, 6, 3))
    assert draws.dot(field, gram_row(a), b) == pairing(a, b, field.zero)


# Contraction


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_contraction_is_an_antiderivation_that_extends_the_form(
    field: Field, n: int, data: st.DataObject
) -> None:
    zero = field.zero
    form, vector = data.draw(draws.vectors(field, n)), data.draw(draws.vectors(field, n))
    assert contract(form, vector, 1, n, zero) == [draws.dot(field, form, vector)]
    p, q = data.draw(st.sampled_from([d for d in DEGREES if sum(d) <= n and 0 not in d]))
    a, b = data.draw(multivectors(field, n, p)), data.draw(multivectors(field, n, q))
    left = wedge(contract(form, a, p, n, zero), p - 1, b, q, n, zero)
    right = wedge(a, p, contract(form, b, q, n, zero), q - 1, n, zero)
    whole = contract(form, wedge(a, p, b, q, n, zero), p + q, n, zero)
    assert whole == plus(left, negated_if(p, right))


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_contractions_by_two_forms_anticommute(field: Field, n: int, data: st.DataObject) -> None:
    zero = field.zero
    f, g = data.draw(draws.vectors(field, n)), data.draw(draws.vectors(field, n))
    p = data.draw(st.sampled_from([2, 3, 4]))
    element = data.draw(multivectors(field, n, p))

    def twice(first: list[Any], second: list[Any]) -> list[Any]:
        return contract(first, contract(second, element, p, n, zero), p - 1, n, zero)

    assert twice(f, g) == negated_if(1, twice(g, f))
    assert not any(twice(f, f))  # in characteristic 2 as well


# Minors and the action


@draws.over_prime_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_minors_agree_with_sums_over_permutations(
    field: Field, n: int, data: st.DataObject
) -> None:
    rows = data.draw(draws.matrices(field, 3, n))
    literal = oracle.plucker([draws.ints(row) for row in rows], field.characteristic)
    assert draws.ints(minors(rows)) == literal


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_minors_are_the_product_of_the_rows(field: Field, n: int, data: st.DataObject) -> None:
    u, v, w = data.draw(draws.matrices(field, 3, n))
    zero = field.zero
    assert minors([u, v, w]) == wedge(wedge(u, 1, v, 1, n, zero), 2, w, 1, n, zero)


@draws.over_prime_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_the_action_agrees_with_the_expansion_of_every_product(
    field: Field, n: int, data: st.DataObject
) -> None:
    g, alpha = data.draw(draws.matrices(field, n, n)), data.draw(multivectors(field, n, 3))
    literal = oracle.act([draws.ints(row) for row in g], draws.ints(alpha), n, field.characteristic)
    assert draws.ints(act(g, alpha, field.zero)) == literal


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_a_product_of_vectors_goes_to_the_product_of_their_images(
    field: Field, n: int, data: st.DataObject
) -> None:
    g, vectors = data.draw(draws.matrices(field, n, n)), data.draw(draws.matrices(field, 3, n))
    images = [draws.apply(field, g, vector) for vector in vectors]
    assert act(g, minors(vectors), field.zero) == minors(images)


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_the_action_of_a_product_is_one_action_after_the_other(
    field: Field, n: int, data: st.DataObject
) -> None:
    g, h = data.draw(draws.matrices(field, n, n)), data.draw(draws.matrices(field, n, n))
    alpha, zero = data.draw(multivectors(field, n, 3)), field.zero
    assert act(draws.product(field, g, h), alpha, zero) == act(g, act(h, alpha, zero), zero)
    assert act(draws.identity(field, n), alpha, zero) == alpha


@draws.over_fields
@draws.few
@given(data=st.data())
def test_the_action_multiplies_the_pairing_by_the_determinant(
    field: Field, data: st.DataObject
) -> None:
    g = data.draw(draws.invertible_matrices(field, 6))
    a, b = data.draw(multivectors(field, 6, 3)), data.draw(multivectors(field, 6, 3))
    zero, det = field.zero, field.matrix(g, 6).det()
    assert det
    assert pairing(act(g, a, zero), act(g, b, zero), zero) == det * pairing(a, b, zero)


@draws.over_fields
@draws.few
@given(data=st.data())
def test_a_row_of_the_exterior_cube_is_the_image_of_a_basis_element(
    field: Field, data: st.DataObject
) -> None:
    g = data.draw(draws.matrices(field, 6, 6))
    for row, basis_element in zip(exterior_cube(g), draws.identity(field, 20), strict=True):
        assert row == act(g, basis_element, field.zero)
    columns = list(zip(*g, strict=True))
    assert exterior_cube(g)[-1] == minors(columns[3:])


# The quadratic form in characteristic 2


def test_the_singular_vectors_over_two_elements_are_those_of_a_hyperbolic_quadric() -> None:
    bits = np.arange(2**20, dtype=np.uint32)
    coordinates = [((bits >> (19 - i)) & 1).astype(np.uint8) for i in range(20)]
    values = quadratic_form(coordinates, np.zeros(2**20, np.uint8)) % 2
    # classical: (q^m − 1)(q^(m−1) + 1) singular vectors ≠ 0 in dimension 2m, here m = 10
    assert np.count_nonzero(values[1:] == 0) == (2**10 - 1) * (2**9 + 1)


@pytest.mark.parametrize("q", [2, 3])
def test_the_quadratic_form_is_the_sum_over_complementary_pairs(q: int) -> None:
    field = prime_field(q)
    basis = list(combinations(range(6), 3))
    for i, j in combinations(range(20), 2):
        vector = [field.one if k in (i, j) else field.zero for k in range(20)]
        complementary = not set(basis[i]) & set(basis[j])
        assert bool(quadratic_form(vector, field.zero)) == complementary
