"""The fields F_q with a polynomial and ℚ(a), and matrices over them."""

from collections.abc import Sequence
from fractions import Fraction
from itertools import islice, pairwise, permutations
from math import gcd
from random import Random
from typing import Any

import numpy as np
import oracle
import pytest
import strategies as draws
import sympy
from hypothesis import given
from hypothesis import strategies as st

from trivector.errors import BadReductionError, EntryError, FieldError
from trivector.fields import QQ, field_from_spec, finite_field, number_field, prime_field
from trivector.fields.finite import LARGEST_TABLE
from trivector.fields.matrices import ScalarMatrix, TableMatrix

BY_ORDER = [finite_field(q) for q in (4, 8, 9, 25, 49, 1024)]
# Not the Conway polynomials; irreducible because without a root (classical).
BY_MODULUS = [
    field_from_spec({"characteristic": p, "modulus": modulus})
    for p, modulus in (
        (2, "x^3+x^2+1"),
        (3, "x^2+1"),
        (3, "2*x^2+2*x+1"),
        (7, "x^3-2"),
        (2, "x^4+x^3+x^2+x+1"),
    )
]
LARGE = [
    field_from_spec({"characteristic": 37, "modulus": "x^2-2"}),
    field_from_spec({"characteristic": 2305843009213693951, "modulus": "x^2+1"}),
]
SMALL = [*BY_ORDER, *BY_MODULUS]
FINITE = [*SMALL, *LARGE]
NUMBER = [
    number_field(text)
    for text in ("x^2+1", "x^2-2", "x^3-2", "x^4-10*x^2+1", "3*x^2+1/2*x+5", "x^5-x-1")
]

over_small = pytest.mark.parametrize("field", SMALL, ids=repr)
over_finite = pytest.mark.parametrize("field", FINITE, ids=repr)
over_number = pytest.mark.parametrize("field", NUMBER, ids=repr)
over_all = pytest.mark.parametrize("field", [*FINITE, *NUMBER], ids=repr)


# F_q against the library galois


def witness(field: Any) -> Any:
    """The field of galois with the same polynomial, built here from its text by sympy."""
    import galois

    x = sympy.Symbol("x")
    coefficients = sympy.Poly(sympy.sympify(field.modulus_text.replace("^", "**")), x).all_coeffs()
    p = field.characteristic
    polynomial = galois.Poly([int(c) % p for c in coefficients], field=galois.GF(p))
    # Compiling takes longer than the tables of a small field, and so do galois's own proof
    # that the polynomial is irreducible (it has one factor by sympy) and its search for a
    # primitive element (x is one for Conway polynomials; without look-ups none is used).
    assert len(sympy.factor_list(sympy.Poly(coefficients, x, modulus=p))[1]) == 1
    mode = "python-calculate" if field.order < 500 else "auto"
    return galois.GF(
        p,
        len(coefficients) - 1,
        irreducible_poly=polynomial,
        primitive_element=p,
        compile=mode,
        verify=False,
    )


@pytest.mark.parametrize("q", [4, 8, 9, 25, 49, 1024])
def test_a_field_known_by_its_order_has_the_polynomial_of_galois(q: int) -> None:
    import galois

    expected = [int(c) for c in galois.GF(q).irreducible_poly.coeffs]
    assert list(reversed(finite_field(q).modulus)) == expected


def check_conway_polynomials(primes: Sequence[int]) -> None:
    import galois

    for p in primes:
        for r in range(2, 17):
            if p**r <= 2**16:
                expected = [int(c) for c in galois.conway_poly(p, r).coeffs]
                field = field_from_spec(f"F_{p**r}")
                assert list(reversed(field.modulus)) == expected
                assert (field.characteristic, field.degree, field.order) == (p, r, p**r)


def test_powers_of_2_3_5_and_7_up_to_two_to_the_16_have_their_conway_polynomials() -> None:
    check_conway_polynomials([2, 3, 5, 7])


@pytest.mark.long  # galois compiles each prime field first
def test_every_prime_power_up_to_two_to_the_16_has_its_conway_polynomial() -> None:
    check_conway_polynomials([int(p) for p in sympy.primerange(2, 257)])


@over_small
def test_sums_products_negatives_and_inverses_are_those_of_galois(field: Any) -> None:
    reference = witness(field)
    codes = np.arange(field.order)
    elements = reference(codes)
    tables = field.tables
    assert np.array_equal(tables.add, np.array(elements[:, None] + elements[None, :]))
    assert np.array_equal(tables.multiply, np.array(elements[:, None] * elements[None, :]))
    assert np.array_equal(tables.negative, np.array(-elements))
    assert np.array_equal(tables.inverse[1:], np.array(elements[1:] ** -1))
    add, multiply = field.operation_tables()
    assert np.array_equal(add, tables.add)
    assert np.array_equal(multiply, tables.multiply)


@over_small
@draws.some
@given(data=st.data())
def test_elements_calculate_as_their_codes_do_in_galois(field: Any, data: st.DataObject) -> None:
    reference = witness(field)
    x, y = (data.draw(st.integers(0, field.order - 1)) for _ in range(2))
    a, b = field.from_code(x), field.from_code(y)
    s, t = reference(x), reference(y)
    assert field.sort_key(a) == x
    assert field.sort_key(a + b) == int(s + t)
    assert field.sort_key(a - b) == int(s - t)
    assert field.sort_key(a * b) == int(s * t)
    assert field.sort_key(-a) == int(-s)
    assert field.sort_key(a**5) == int(s**5)
    if y:
        assert field.sort_key(a / b) == int(s / t)
    assert field.tables.code(a) == x


@pytest.mark.parametrize("field", BY_ORDER[:2], ids=repr)
def test_the_array_class_of_galois_has_the_same_codes(field: Any) -> None:
    arrays = field.galois_class()
    codes = np.arange(field.order)
    product = np.array(arrays(codes)[:, None] * arrays(codes)[None, :])
    assert np.array_equal(product, field.tables.multiply)


@over_finite
def test_the_letter_is_a_root_of_the_polynomial(field: Any) -> None:
    a = field.element("a")
    value = field.zero
    for coefficient in reversed(field.modulus):
        value = value * a + coefficient
    assert not value
    assert field.modulus[-1] == 1
    assert a**field.order == a
    assert a ** (field.characteristic) != a  # degree > 1: not in F_p


def test_elements_of_f8_by_their_two_polynomials_are_different_fields() -> None:
    first, second = finite_field(8), field_from_spec({"characteristic": 2, "modulus": "x^3+x^2+1"})
    assert first != second
    assert first == field_from_spec({"characteristic": 2, "modulus": "x^3+x+1"})
    assert hash(first) == hash(field_from_spec({"characteristic": 2, "modulus": "x^3+x+1"}))


def test_a_modulus_is_made_monic_and_reduced() -> None:
    field = field_from_spec({"characteristic": 5, "modulus": "3*x^2+x/2-4"})
    # 1/2 = 3, −4 = 1; divided by 3, that is times 2: x² + 6x + 2 (classical).
    assert field.modulus == (2, 1, 1)


@over_finite
@draws.some
@given(data=st.data())
def test_the_frobenius_map_is_additive_and_of_order_r(field: Any, data: st.DataObject) -> None:
    p = field.characteristic
    x, y = data.draw(draws.elements(field)), data.draw(draws.elements(field))
    assert (x + y) ** p == x**p + y**p
    power = x
    for _ in range(field.degree):
        power = power**p
    assert power == x


@over_all
@draws.some
@given(data=st.data())
def test_the_laws_of_a_field_hold(field: Any, data: st.DataObject) -> None:
    x, y, z = (data.draw(draws.elements(field)) for _ in range(3))
    assert x + y == y + x
    assert x * y == y * x
    assert (x + y) + z == x + (y + z)
    assert (x * y) * z == x * (y * z)
    assert x * (y + z) == x * y + x * z
    assert x - y == x + -y
    assert not x - x
    assert x + field.zero == x == x * field.one
    assert 3 - x == -(x - 3)
    assert 2 + x == x + 2
    assert 2 * x == x + x
    assert bool(x) == (x != field.zero)
    if y:
        assert x / y * y == x
        assert field.one / y * y == field.one
    assert field.element(field.format(x)) == x
    if x == y:
        assert hash(x) == hash(y)
        assert field.sort_key(x) == field.sort_key(y)
    else:
        assert field.sort_key(x) != field.sort_key(y)


@over_all
def test_division_by_zero_is_an_error(field: Any) -> None:
    for nothing in (field.zero, 0):
        with pytest.raises(ZeroDivisionError):
            field.one / nothing


@over_finite
def test_random_elements_are_spread_over_the_whole_field(field: Any) -> None:
    rng = Random(3)
    count = min(field.order, 2000)
    drawn = {field.sort_key(field.random_element(rng)) for _ in range(6 * count)}
    # The chance that an element of a field with 49 stays out is e^−6.
    assert len(drawn) > 0.9 * count
    assert max(drawn) > field.order // 2


# Matrices: two classes, the literal computation


def literal_determinant(field: Any, rows: Sequence[Sequence[Any]]) -> Any:
    total = field.zero
    for order in permutations(range(len(rows))):
        term = field.one
        for i, j in enumerate(order):
            term = term * rows[i][j]
        total = total + term if oracle.permutation_sign(order) == 1 else total - term
    return total


def scalar_matrix(field: Any, rows: Sequence[Sequence[Any]], ncols: int) -> ScalarMatrix:
    matrix = ScalarMatrix(len(rows), ncols, field.zero, field.one)
    for i, row in enumerate(rows):
        for j, value in enumerate(row):
            matrix[i, j] = value
    return matrix


def check_matrices(field: Any, kinds: Sequence[Any], data: st.DataObject) -> None:
    nrows, inner, ncols = (data.draw(st.integers(1, 5)) for _ in range(3))
    rows = data.draw(draws.matrices_of_any_rank(field, nrows, inner))
    other = data.draw(draws.matrices_of_any_rank(field, inner, ncols))
    more = data.draw(draws.matrices(field, nrows, inner))
    size = data.draw(st.integers(1, 4))
    square = data.draw(draws.matrices_of_any_rank(field, size, size))
    factor = data.draw(draws.elements(field))
    reduced, pivots = draws.literal_reduced(field, rows, inner)
    for make in kinds:
        matrix = make(rows, inner)
        assert (matrix.nrows(), matrix.ncols()) == (nrows, inner)
        found, rank = matrix.rref()
        assert found.tolist() == reduced
        assert rank == matrix.rank() == len(pivots)
        assert matrix.tolist() == rows  # not changed by the elimination
        assert matrix.transpose().tolist() == [list(column) for column in zip(*rows, strict=True)]
        assert (matrix * make(other, ncols)).tolist() == draws.product(field, rows, other)
        assert (matrix * factor).tolist() == [[x * factor for x in row] for row in rows]
        assert (matrix + make(more, inner)).tolist() == [
            [x + y for x, y in zip(a, b, strict=True)] for a, b in zip(rows, more, strict=True)
        ]
        assert make(square, size).det() == literal_determinant(field, square)


@over_small
@draws.some
@given(data=st.data())
def test_both_kinds_of_matrices_calculate_literally(field: Any, data: st.DataObject) -> None:
    assert isinstance(field.zero_matrix(1, 1), TableMatrix)
    check_matrices(field, [field.matrix, lambda r, n: scalar_matrix(field, r, n)], data)


@pytest.mark.parametrize("field", [*LARGE, *NUMBER], ids=repr)
@draws.few
@given(data=st.data())
def test_matrices_of_scalars_calculate_literally(field: Any, data: st.DataObject) -> None:
    assert isinstance(field.zero_matrix(1, 1), ScalarMatrix)
    check_matrices(field, [field.matrix, lambda r, n: scalar_matrix(field, r, n)], data)


@pytest.mark.parametrize("field", [BY_ORDER[0], BY_ORDER[2], LARGE[0], NUMBER[0]], ids=repr)
def test_both_kinds_agree_on_matrices_as_large_as_in_sections(field: Any) -> None:
    rng = Random(5)
    rows = [[field.random_element(rng) for _ in range(24)] for _ in range(12)]
    rows += [[x + y * 2 for x, y in zip(a, b, strict=True)] for a, b in pairwise(rows)]
    reduced, pivots = draws.literal_reduced(field, rows, 24)
    for matrix in (field.matrix(rows, 24), scalar_matrix(field, rows, 24)):
        found, rank = matrix.rref()
        assert rank == len(pivots) == 12
        assert found.tolist() == reduced


@over_all
def test_entries_of_matrices_can_be_set_and_read(field: Any) -> None:
    matrix = field.zero_matrix(2, 3)
    matrix[1, 2] = field.element("a")
    matrix[0, 0] = field.one
    matrix[0, 0] = field.zero
    assert matrix.tolist() == [[field.zero] * 3, [field.zero, field.zero, field.element("a")]]
    assert matrix[1, 2] == field.element("a")
    assert not matrix[0, 0]


@over_small
def test_transposing_makes_a_copy(field: Any) -> None:
    matrix = field.matrix([[field.one, field.zero]], 2)
    matrix.transpose()[0, 0] = field.zero
    assert matrix[0, 0] == field.one


# Polynomials


def polynomial_product(field: Any, left: Sequence[Any], right: Sequence[Any]) -> list[Any]:
    product = [field.zero] * (len(left) + len(right) - 1)
    for i, a in enumerate(left):
        for j, b in enumerate(right):
            product[i + j] = product[i + j] + a * b
    return product


def value_at(field: Any, coefficients: Sequence[Any], x: Any) -> Any:
    total = field.zero
    for coefficient in reversed(coefficients):
        total = total * x + coefficient
    return total


FACTORING = [prime_field(2), prime_field(3), prime_field(7), QQ, *FINITE, NUMBER[0], NUMBER[1]]


@pytest.mark.parametrize("field", FACTORING, ids=repr)
@draws.few
@given(data=st.data())
def test_the_factors_of_a_polynomial_multiply_back(field: Any, data: st.DataObject) -> None:
    parts = [
        [*data.draw(draws.vectors(field, data.draw(st.integers(1, 2)))), field.one]
        for _ in range(data.draw(st.integers(1, 3)))
    ]
    polynomial = [data.draw(draws.nonzero_elements(field))]
    for part in parts:
        polynomial = polynomial_product(field, polynomial, part)
    factors = field.factor(polynomial)
    product = [polynomial[-1]]
    for factor, exponent in factors:
        assert factor[-1] == field.one
        for _ in range(exponent):
            product = polynomial_product(field, product, factor)
    assert product == polynomial
    keys = [(len(f), [field.sort_key(c) for c in f]) for f, _ in factors]
    assert keys == sorted(keys)
    assert len({tuple(f) for f, _ in factors}) == len(factors)
    # Irreducible: of degree 1, or of degree 2 or 3 without a root, or square-free over ℚ(a).
    if field.order is not None and field.order <= 64:
        for factor, _ in factors:
            if 3 <= len(factor) <= 4:
                roots = (field.from_code(code) for code in range(field.order))
                assert all(value_at(field, factor, x) for x in roots)


@pytest.mark.parametrize(
    ("field", "polynomial", "degrees"),
    [
        (prime_field(2), [1, 1, 1], [2]),
        (finite_field(4), [1, 1, 1], [1, 1]),
        (finite_field(8), [1, 1, 1], [2]),
        (prime_field(5), [1, 0, 0, 0, 1], [2, 2]),
        (finite_field(25), [1, 0, 0, 0, 1], [1, 1, 1, 1]),
        (QQ, [-2, 0, 1], [2]),
        (number_field("x^2-2"), [-2, 0, 1], [1, 1]),
        (number_field("x^2+1"), [-2, 0, 1], [2]),
        (number_field("x^2+1"), [1, 0, 0, 0, 1], [2, 2]),
        (number_field("x^2+1"), [-2, 0, 0, 1], [3]),
    ],
    ids=str,
)
def test_the_degrees_of_the_factors_are_classical(
    field: Any, polynomial: list[int], degrees: list[int]
) -> None:
    found = field.factor([field.element(c) for c in polynomial])
    assert [len(f) - 1 for f, _ in found] == degrees
    assert all(exponent == 1 for _, exponent in found)


# Residue fields and extensions


def has_a_root(field: Any, coefficients: Sequence[Any]) -> bool:
    return any(
        not value_at(field, coefficients, field.from_code(code)) for code in range(field.order)
    )


def irreducible(field: Any, degree: int, rng: Random) -> list[Any]:
    """A monic polynomial of degree 2 or 3 without a root, by trying all elements."""
    while True:
        candidate = [*(field.random_element(rng) for _ in range(degree)), field.one]
        if not has_a_root(field, candidate):
            return candidate


EXTENDED = [prime_field(2), prime_field(3), prime_field(7), *BY_ORDER[:4], *BY_MODULUS[:3]]


@pytest.mark.parametrize("field", EXTENDED, ids=repr)
@pytest.mark.parametrize("degree", [1, 2, 3])
def test_a_residue_field_holds_the_field_and_a_root(field: Any, degree: int) -> None:
    rng = Random(degree)
    modulus = (
        [field.random_element(rng), field.one] if degree == 1 else irreducible(field, degree, rng)
    )
    residue = field.residue_field(modulus)
    assert residue.field.order == field.order**degree
    check_extension(field, residue, rng)
    assert not value_at(residue.field, [residue.embed(c) for c in modulus], residue.root)
    coefficients = [field.random_element(rng) for _ in range(degree)]
    literal = residue.field.zero
    for power, coefficient in enumerate(coefficients):
        term = residue.embed(coefficient)
        for _ in range(power):
            term = term * residue.root
        literal = literal + term
    assert residue.value(coefficients) == literal
    # 1, θ, … are independent over the field: only 0 has the value 0.
    assert bool(residue.value(coefficients)) == any(coefficients)


def check_extension(field: Any, residue: Any, rng: Random) -> None:
    """embed is a homomorphism onto the elements with x^q = x."""
    assert residue.embed(field.one) == residue.field.one
    assert not residue.embed(field.zero)
    for _ in range(10):
        x, y = field.random_element(rng), field.random_element(rng)
        assert residue.embed(x + y) == residue.embed(x) + residue.embed(y)
        assert residue.embed(x * y) == residue.embed(x) * residue.embed(y)
        assert residue.embed(x) ** field.order == residue.embed(x)
    if field.order <= 64:
        images = {residue.embed(field.from_code(code)) for code in range(field.order)}
        assert len(images) == field.order


@pytest.mark.parametrize("field", EXTENDED, ids=repr)
@pytest.mark.parametrize("degree", [1, 2, 3, 4])
def test_every_extension_degree_gives_a_field_with_that_power_of_q(field: Any, degree: int) -> None:
    residue = field.extension(degree)
    assert residue.field.order == field.order**degree
    check_extension(field, residue, Random(degree))
    again = field.extension(degree)
    assert (again.field, again.root) == (residue.field, residue.root)


def test_the_root_that_embeds_a_field_is_the_first_one() -> None:
    # Of the two roots of x² + x + 1 in F_16: all sixteen elements are tried.
    small, large = finite_field(4), finite_field(16)
    roots = [x for x in map(large.from_code, range(16)) if not x * x + x + 1]
    assert len(roots) == 2
    residue = small.residue_field(irreducible(small, 2, Random(1)))
    assert residue.field == large
    assert residue.embed(small.element("a")) == min(roots, key=large.sort_key)


@pytest.mark.parametrize("square", [2, -1, Fraction(5, 4), Fraction(-(10**30), 7)])
def test_a_quadratic_residue_field_of_the_rationals(square: Any) -> None:
    modulus = [QQ.element(-square), QQ.zero, QQ.one]
    residue = QQ.residue_field(modulus)
    assert residue is not None
    assert residue.root * residue.root == residue.embed(QQ.element(square))
    assert residue.embed(QQ.element("2/3")) == residue.field.element("2/3")
    assert residue.field.degree == 2
    value = residue.value([QQ.element(1), QQ.element(2)])
    assert value * value == residue.value([QQ.element(1 + 4 * square), QQ.element(4)])


@pytest.mark.parametrize(
    "modulus",
    [
        [1, 1, 1],
        ["1/3", "-5/2", 1],
        ["2/9", "-1/3", 1],
        ["-1/3", "1/2", 0, 1],
        [1, 1, 1, 1, 1],
        [-5, 0, 0, 0, 0, 1],
    ],
)
def test_a_residue_field_of_the_rationals_holds_a_root(modulus: list[Any]) -> None:
    coefficients = [QQ.element(c) for c in modulus]
    residue = QQ.residue_field(coefficients)
    assert residue is not None
    assert residue.field.degree == len(modulus) - 1
    assert not residue.value(coefficients)
    power = residue.field.one
    for _ in range(len(modulus) - 1):
        power = power * residue.root
    assert residue.value(coefficients[:-1]) == -power


def test_a_number_field_says_that_it_has_no_notation_for_extensions() -> None:
    field = number_field("x^2+1")
    two = field.element(2)
    assert field.residue_field([-two, field.zero, field.one]) is None
    residue = field.residue_field([-two, field.one])
    assert residue is not None
    assert residue.root == two


# Number fields against sympy


def to_sympy(field: Any, value: Any, x: sympy.Symbol) -> sympy.Poly:
    coefficients = [sympy.Rational(int(c.p), int(c.q)) for c in reversed(field.coefficients(value))]
    return sympy.Poly(coefficients, x, domain="QQ")


@over_number
@draws.some
@given(data=st.data())
def test_number_fields_calculate_as_sympy_does(field: Any, data: st.DataObject) -> None:
    x = sympy.Symbol("x")
    modulus = sympy.Poly(sympy.sympify(field.modulus_text.replace("^", "**")), x, domain="QQ")
    u, v = (
        field.from_coefficients(
            [
                field.element(data.draw(st.fractions(-9, 9, max_denominator=7))).value[0]
                for _ in range(field.degree)
            ]
        )
        for _ in range(2)
    )
    s, t = to_sympy(field, u, x), to_sympy(field, v, x)
    assert to_sympy(field, u + v, x) == s + t
    assert to_sympy(field, u - v, x) == s - t
    assert to_sympy(field, u * v, x) == (s * t).rem(modulus)
    if v:
        assert to_sympy(field, u / v, x) == (s * sympy.invert(t, modulus)).rem(modulus)


@pytest.mark.parametrize(
    ("modulus", "entry", "coefficients", "written"),
    [
        ("x^2+1", "2*a+1", [1, 2], "2*a+1"),
        ("x^2+1", "a^2", [-1, 0], -1),
        ("x^2+1", "-a^3/3", [0, "1/3"], "1/3*a"),
        ("x^3-2", "-a^2/3", [0, 0, "-1/3"], "-1/3*a^2"),
        ("x^3-2", "3/4*a", [0, "3/4", 0], "3/4*a"),
        ("x^3-2", "a**2 - a + 1/2", ["1/2", -1, 1], "a^2-a+1/2"),
        ("x^3-2", "a^5", [0, 0, 2], "2*a^2"),
        ("x^3-2", "7/2", ["7/2", 0, 0], "7/2"),
        ("x^3-2", "a-a", [0, 0, 0], 0),
        ("x^3-2", "2a", [0, 2, 0], "2*a"),
        ("2*x^2-1", "a^2", ["1/2", 0], "1/2"),
    ],
)
def test_an_entry_of_a_number_field_is_read_and_written(
    modulus: str, entry: str, coefficients: list[Any], written: Any
) -> None:
    # Classical: a is a root of the modulus.
    field = number_field(modulus)
    value = field.element(entry)
    assert [Fraction(str(c)) for c in field.coefficients(value)] == [
        Fraction(str(c)) for c in coefficients
    ]
    assert field.format(value) == written
    assert field.element(written) == value


@pytest.mark.parametrize(
    ("q", "entry", "written"),
    [
        # Conway polynomials x²+2x+2 and x²+x+1, x²+4x+2 (F_9, F_4, F_25)
        (9, "2*a+1", "2*a+1"),
        (9, "a^2", "a+1"),
        (9, "-a", "2*a"),
        (9, "a/2", "2*a"),
        (9, 5, 2),
        (4, "a^2", "a+1"),
        (4, "a^3", 1),
        (4, "2*a", 0),
        (25, "1/2*a", "3*a"),
        (25, "a^2", "a+3"),
    ],
)
def test_an_entry_of_a_finite_field_is_read_and_written(q: int, entry: Any, written: Any) -> None:
    field = finite_field(q)
    assert field.format(field.element(entry)) == written


@pytest.mark.parametrize("field", [finite_field(9), number_field("x^2+1")], ids=repr)
@pytest.mark.parametrize(
    "entry",
    ["b", "a+", "a a", "2**a", "*a", "a^", "a^-1", "1.5", "a/0", "(a+1)", 1.5, True, None, "x", ""],
)
def test_what_is_no_element_is_refused(field: Any, entry: Any) -> None:
    with pytest.raises(EntryError):
        field.element(entry)


def test_a_denominator_divisible_by_p_is_refused_in_a_sentence() -> None:
    for entry in ("1/3", "a/3", "a+1/6"):
        with pytest.raises(EntryError, match="0 modulo 3"):
            finite_field(9).element(entry)


@over_number
@draws.some
@given(data=st.data())
def test_reductions_of_a_number_field_are_homomorphisms(field: Any, data: st.DataObject) -> None:
    for reduction in islice(field.reductions(), 2):
        p = reduction.field.order
        assert not reduction.exact
        assert sympy.isprime(p)
        x, y = data.draw(draws.elements(field)), data.draw(draws.elements(field))
        values = [x, y, x + y, x * y, field.one, field.element("a"), field.element(17)]
        ((u, v, total, product, one, root, seventeen),) = reduction.rows([values])
        assert total == u + v
        assert product == u * v
        assert (int(one), int(seventeen)) == (1, 17)
        # a goes to a simple root of the modulus modulo p.
        numerators = [Fraction(str(c)) for c in field.modulus]
        residues = [c.numerator * pow(c.denominator, -1, p) for c in numerators]
        assert sum(c * int(root) ** i for i, c in enumerate(residues)) % p == 0
        assert sum(i * c * int(root) ** (i - 1) for i, c in enumerate(residues) if i) % p
        assert str(p) in reduction.name


def test_a_denominator_divisible_by_the_prime_is_bad_reduction() -> None:
    field = number_field("x^2+1")
    reduction = next(iter(field.reductions()))
    with pytest.raises(BadReductionError, match=str(reduction.prime)):
        reduction.rows([[field.element(f"a/{reduction.prime}")]])


def test_the_denominator_of_the_modulus_is_no_prime_of_reduction() -> None:
    p = next(iter(number_field("x^2-2").reductions())).prime
    found = next(iter(number_field(f"x^2-2/{p}").reductions()))
    assert gcd(found.prime, p) == 1


def test_a_ramified_prime_is_no_prime_of_reduction() -> None:
    p = 2147483647  # the first candidate; x² − p is x² modulo it
    assert next(iter(QQ.reductions())).field.order == p
    assert all(r.prime != p for r in islice(number_field(f"x^2-{p}").reductions(), 3))


# What is refused


REFUSED = [
    # spec, words of the sentence; factorisations are classical
    ({"modulus": "x^2-1"}, ["reducible over Q", "(x-1)", "(x+1)"]),
    ({"modulus": "x^2-2*x+1"}, ["reducible over Q", "(x-1)^2"]),
    ({"modulus": "x^4+4"}, ["reducible over Q", "(x^2+2*x+2)", "(x^2-2*x+2)"]),
    ({"modulus": "x-3"}, ["degree 1", '"Q"']),
    ({"modulus": "7"}, ["constant"]),
    ({"modulus": ""}, ["modulus"]),
    ({"modulus": "y^2+1"}, ["y^2+1", "polynomial in x"]),
    ({"modulus": "x^2+a"}, ["x^2+a", "polynomial in x"]),
    ({"modulus": "x^2+1.5"}, ["x^2+1.5"]),
    ({"modulus": 5}, ["5", "text"]),
    ({"modulus": ["x"]}, ["text"]),
    ({"characteristic": 5, "modulus": "x^2+1"}, ["reducible over F_5", "(x+2)", "(x+3)"]),
    ({"characteristic": 2, "modulus": "x^2+1"}, ["reducible over F_2", "(x+1)^2"]),
    ({"characteristic": 3, "modulus": "x^2+1/3"}, ["not over F_3", "denominator"]),
    ({"characteristic": 3, "modulus": "3*x^2+1"}, ["constant over F_3"]),
    ({"characteristic": 3, "modulus": "x^2+a"}, ["polynomial in x"]),
    ({"characteristic": 4, "modulus": "x^2+x+1"}, ["4 is not a prime", "2^2"]),
    ({"characteristic": -3, "modulus": "x^2+1"}, ["characteristic", "-3"]),
    ({"characteristic": True, "modulus": "x^2+1"}, ["characteristic"]),
    ({"characteristic": "3", "modulus": "x^2+1"}, ["characteristic", "3"]),
    ({"characteristic": 3, "modulus": "x^2+1", "root": "b"}, ["no others"]),
    ({"modulus": "x^2+1", "name": "Q(i)"}, ["no others"]),
    ({}, ["modulus"]),
    ("F_131072", ["F_131072", "65536", '"characteristic": 2', "x^17"]),
    ("F_66049", ["F_66049", "65536", '"characteristic": 257', "x^2"]),
    ("F_6", ["6 is not a prime", "2·3"]),
    ("F_36", ["36 is not a prime", "2^2·3^2"]),
    ("F_1", ["1 is not a prime"]),
    ("F_0", ["0"]),
    ("F_4^2", ["unknown"]),
    ("GF(4)", ["unknown"]),
]


@pytest.mark.parametrize(("spec", "words"), REFUSED, ids=lambda value: str(value)[:40])
def test_a_field_that_is_none_is_refused_with_the_reason(spec: Any, words: list[str]) -> None:
    with pytest.raises(FieldError) as caught:
        field_from_spec(spec)
    sentence = str(caught.value)
    assert len(sentence.splitlines()) == 1
    for word in words:
        assert word in sentence


def test_a_field_too_large_for_tables_says_the_limit() -> None:
    assert finite_field(LARGEST_TABLE).tables.add.shape == (LARGEST_TABLE, LARGEST_TABLE)
    with pytest.raises(FieldError, match=f"F_2048.*{LARGEST_TABLE}"):
        _ = finite_field(2048).tables


def test_a_larger_field_is_there_when_its_polynomial_is_given() -> None:
    field = field_from_spec({"characteristic": 2, "modulus": "x^17+x^3+1"})
    a = field.element("a")
    assert field.order == 2**17
    assert a**17 == a**3 + 1
    assert a ** (2**17 - 1) == field.one


def test_a_prime_field_can_be_given_by_its_characteristic() -> None:
    assert field_from_spec({"characteristic": 7}) == prime_field(7)
    assert field_from_spec({"characteristic": 7, "modulus": "x+3"}) == prime_field(7)
