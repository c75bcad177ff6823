"""Hilbert functions and polynomials of G(3,n) and of its proper sections."""

import re
from fractions import Fraction
from itertools import combinations, combinations_with_replacement, pairwise
from math import comb, factorial, prod

import examples
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

from trivector.fields import QQ, Field, prime_field
from trivector.fields.linear import unit_rows
from trivector.sections.graded import QuadricAlgebra
from trivector.sections.hilbert import (
    HilbertPolynomial,
    grassmannian_degree,
    grassmannian_dimension,
    grassmannian_h_vector,
    grassmannian_hilbert,
    proper_section_polynomial,
)
from trivector.sections.quadrics import restricted_quadrics

FIELDS = [QQ, prime_field(2), prime_field(3), prime_field(examples.LARGE_PRIME)]
over_fields = pytest.mark.parametrize("field", FIELDS, ids=lambda field: field.name)

Coefficients = list[Fraction]


def value(coefficients: Coefficients, t: int) -> Fraction:
    return sum((c * t**i for i, c in enumerate(coefficients)), Fraction(0))


def backward_differences(values: list[int], count: int) -> list[int]:
    """f(s), f(s) − f(s−1), … at the last place s of the list."""
    result = []
    for _ in range(count):
        result.append(values[-1])
        values = [b - a for a, b in pairwise(values)]
    return result


@st.composite
def polynomials(draw: st.DrawFn) -> tuple[list[int], int]:
    """Σ c_i·C(t, i) with a leading coefficient ≠ 0, and a place to start from."""
    degree = draw(st.integers(0, 6))
    coefficients = draw(st.lists(st.integers(-9, 9), min_size=degree, max_size=degree))
    return [*coefficients, draw(st.integers(1, 9))], draw(st.integers(0, 9))


def binomial_sum(coefficients: list[int], t: int) -> int:
    # C(t, i) as a polynomial, also for negative t.
    return sum(
        c * prod(range(t - i + 1, t + 1)) // factorial(i) for i, c in enumerate(coefficients)
    )


def evaluate_text(text: str, t: int) -> Fraction:
    """The value of a printed polynomial, read term by term."""
    assert re.fullmatch(r"[0-9t^/·−+ ]+", text)
    terms = re.findall(r"([−+])([^−+]+)", "+" + text if not text.startswith("−") else text)
    total = Fraction(0)
    for sign, term in terms:
        match = re.fullmatch(r"([0-9]+(?:/[0-9]+)?)?·?(t(?:\^([0-9]+))?)?", term.strip())
        assert match is not None
        coefficient = Fraction(match[1] or 1)
        power = int(match[3] or 1) if match[2] else 0
        total += (coefficient if sign == "+" else -coefficient) * t**power
    return total


# Polynomials


@draws.some
@given(polynomials())
def test_a_polynomial_made_from_its_differences_has_the_same_values(
    drawn: tuple[list[int], int],
) -> None:
    coefficients, start = drawn
    size = len(coefficients)
    before = [binomial_sum(coefficients, t) for t in range(start - size, start + 1)]
    polynomial = HilbertPolynomial(start, tuple(backward_differences(before, size)))
    assert polynomial.dimension == size - 1
    # The leading coefficient is degree/dimension!, so it is that of C(t, i).
    assert polynomial.degree == coefficients[-1]
    for t in range(start, start + 12):
        assert polynomial(t) == binomial_sum(coefficients, t)
        assert value(list(polynomial.coefficients()), t) == binomial_sum(coefficients, t)


@draws.some
@given(polynomials())
def test_a_printed_polynomial_reads_back_with_the_same_values(
    drawn: tuple[list[int], int],
) -> None:
    coefficients, start = drawn
    size = len(coefficients)
    before = [binomial_sum(coefficients, t) for t in range(start - size, start + 1)]
    text = str(HilbertPolynomial(start, tuple(backward_differences(before, size))))
    for t in range(-3, 9):
        assert evaluate_text(text, t) == binomial_sum(coefficients, t)


@pytest.mark.parametrize(
    ("start", "steps", "text"),
    [
        (1, (), "0"),
        (3, (20,), "20"),
        # Classical: a line, a twisted cubic, a plane, P³ by quadrics (C(2t+3, 3)), a plane
        # cubic; then two with negative coefficients, by hand: 1 + 2(t − 2) and
        # −1 + (t − 1) + 2·C(t, 2).
        (0, (1, 1), "t + 1"),
        (0, (1, 3), "3·t + 1"),
        (0, (1, 1, 1), "1/2·t^2 + 3/2·t + 1"),
        (1, (10, 9, 8, 8), "4/3·t^3 + 4·t^2 + 11/3·t + 1"),
        (1, (3, 3), "3·t"),
        (2, (1, 2), "2·t − 3"),
        (1, (-1, 1, 2), "t^2 − 2"),
    ],
)
def test_polynomials_are_printed_with_the_highest_power_first(
    start: int, steps: tuple[int, ...], text: str
) -> None:
    assert str(HilbertPolynomial(start, steps)) == text


def test_the_empty_section_has_dimension_minus_one_and_degree_zero() -> None:
    empty = HilbertPolynomial(4, ())
    assert (empty.dimension, empty.degree, empty(4), empty(9)) == (-1, 0, 0, 0)


# G(3,n)


def multichains(n: int, length: int) -> int:
    """Multichains I_1 ≤ … ≤ I_length of triples, compared entry by entry.

    They count the standard monomials, a basis of the degree-``length`` part of
    the coordinate ring of G(3,n) over every field (classical: straightening law).
    """
    triples = list(combinations(range(n), 3))
    counts = dict.fromkeys(triples, 1)
    if length == 0:
        return 1
    for _ in range(length - 1):
        counts = {
            upper: sum(
                count
                for lower, count in counts.items()
                if all(a <= b for a, b in zip(lower, upper, strict=True))
            )
            for upper in triples
        }
    return sum(counts.values())


@pytest.mark.parametrize("n", [6, 7])
def test_the_hilbert_function_of_the_grassmannian_counts_standard_monomials(n: int) -> None:
    for t in range(8):
        assert grassmannian_hilbert(n, t) == multichains(n, t)


def test_the_hilbert_function_of_g36_begins_1_20_175_980() -> None:
    # classical, computed (checks of this package: values from outside)
    assert [grassmannian_hilbert(6, t) for t in range(4)] == [1, 20, 175, 980]


@over_fields
def test_the_plucker_relations_alone_give_1_20_175_980(field: Field) -> None:
    # classical, computed: by rank counting, in every characteristic
    algebra = QuadricAlgebra(field, 20, restricted_quadrics(unit_rows(field, 20), 6, field.zero))
    algebra.extend()
    algebra.extend()
    assert algebra.hilbert == [1, 20, 175, 980]


@over_fields
def test_the_plucker_relations_of_seven_space_give_1_35_490(field: Field) -> None:
    # classical: C(36, 2) − 140
    algebra = QuadricAlgebra(field, 35, restricted_quadrics(unit_rows(field, 35), 7, field.zero))
    algebra.extend()
    assert algebra.hilbert == [1, 35, 490]


@pytest.mark.parametrize(("n", "dimension", "degree"), [(6, 9, 42), (7, 12, 462)])
def test_dimension_and_degree_are_those_of_the_hook_formula(
    n: int, dimension: int, degree: int
) -> None:
    # classical: the degree is the number of standard tableaux of a 3 × (n − 3)
    # rectangle, by the hook length formula; 42 and 462 are in every table.
    hooks = prod(i + j + 1 for i in range(3) for j in range(n - 3))
    assert factorial(3 * (n - 3)) // hooks == degree
    assert grassmannian_dimension(n) == dimension
    assert grassmannian_degree(n) == degree


def test_the_h_vector_of_g36_is_1_10_20_10_1() -> None:
    # classical, computed
    assert grassmannian_h_vector(6) == (1, 10, 20, 10, 1)


@pytest.mark.parametrize("n", [6, 7])
def test_the_h_vector_is_symmetric_and_gives_the_hilbert_function_back(n: int) -> None:
    # The coordinate ring is Gorenstein (classical), so h is a palindrome.
    h = grassmannian_h_vector(n)
    assert h == h[::-1]
    assert sum(h) == grassmannian_degree(n)
    for t in range(12):
        # h(z)/(1 − z)^(dim + 1)
        power = grassmannian_dimension(n)
        series = sum(e * comb(t - i + power, power) for i, e in enumerate(h) if i <= t)
        assert series == multichains(n, t)


# Proper sections


@pytest.mark.parametrize("n", [6, 7])
def test_the_polynomial_of_a_proper_section_is_a_difference_of_that_of_the_grassmannian(
    n: int,
) -> None:
    full = grassmannian_dimension(n)
    values = [0] * 20 + [grassmannian_hilbert(n, t) for t in range(25)]  # degrees −20 … 24
    for dimension in range(full, -1, -1):
        polynomial = proper_section_polynomial(n, dimension)
        assert polynomial.dimension == dimension
        assert polynomial.degree == {6: 42, 7: 462}[n]  # classical, see above
        for t in range(polynomial.start, 25):
            assert polynomial(t) == values[t + 20]
        # one hyperplane cut more
        values = [0] + [b - a for a, b in pairwise(values)]


def test_the_proper_curve_section_is_of_genus_43() -> None:
    # classical: K = −6H on G(3,6), so K = 2H on a curve section: 2g − 2 = 2·42; P(t) = 42t − 42.
    assert str(proper_section_polynomial(6, 1)) == "42·t − 42"


def test_a_monomial_count_is_the_polynomial_of_projective_space() -> None:
    for m in range(1, 7):
        polynomial = HilbertPolynomial(0, (1,) * m)
        for t in range(6):
            monomials = sum(1 for _ in combinations_with_replacement(range(m), t))
            assert polynomial(t) == monomials
