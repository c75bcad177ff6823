"""What a number is here, and what a matrix of them does."""

import json
from collections.abc import Sequence
from fractions import Fraction
from itertools import islice, pairwise, product
from random import Random
from typing import Any

import numpy as np
import oracle
import pytest
import strategies as draws
import sympy
from flint import fmpq, fmpz, nmod
from hypothesis import given
from hypothesis import strategies as st
from sympy.polys.matrices import DomainMatrix

from trivector.errors import BadReductionError, EntryError, FieldError, TrivectorError
from trivector.fields import QQ, Field, field_from_spec, prime_field
from trivector.fields.linear import (
    RankCounter,
    dependencies,
    echelon,
    kernel,
    meet_rows,
    pivot_columns,
    rank,
    reduce_vector,
    row_space,
    solve,
)

F2, F3, F7 = prime_field(2), prime_field(3), prime_field(7)
MERSENNE = 2305843009213693951


def reference_reduced(
    field: Field, rows: Sequence[Sequence[Any]], ncols: int
) -> tuple[list[list[Any]], list[int]]:
    """Reduced echelon form and pivots by sympy's sparse elimination, where sympy has the field."""
    if field == QQ:
        domain, there, back = sympy.QQ, lambda x: sympy.QQ(int(x.p), int(x.q)), plain
    elif field in draws.PRIME_FIELDS:
        domain, there, back = sympy.GF(field.order, symmetric=False), int, int
    else:
        return draws.literal_reduced(field, rows, ncols)
    entries = [[domain.convert(there(x)) for x in row] for row in rows]
    matrix = DomainMatrix(entries, (len(rows), ncols), domain).to_sparse()
    reduced, pivots = matrix.rref()
    return [[field.element(back(x)) for x in row] for row in reduced.to_list()], list(pivots)


def reference_rank(field: Field, rows: Sequence[Sequence[Any]], ncols: int) -> int:
    return len(reference_reduced(field, rows, ncols)[1]) if rows else 0


def plain(value: Any) -> Fraction | int:
    """A scalar of any library as a number of the standard library."""
    if hasattr(value, "numerator") and hasattr(value, "denominator"):
        return Fraction(int(value.numerator), int(value.denominator))
    return int(value)


# Reading and writing entries


@draws.over_fields
@draws.some
@given(data=st.data())
def test_what_is_written_is_read_back_unchanged(field: Field, data: st.DataObject) -> None:
    value = data.draw(draws.elements(field))
    written = field.format(value)
    assert type(written) in (int, str)
    assert field.element(json.loads(json.dumps(written))) == value
    assert field.element(value) == value


READINGS = [
    # field, entry, what it is as a fraction or as a residue (classical arithmetic)
    (QQ, 0, Fraction(0)),
    (QQ, -12, Fraction(-12)),
    (QQ, "3/4", Fraction(3, 4)),
    (QQ, "-3/4", Fraction(-3, 4)),
    (QQ, " 6 / 8 ", Fraction(3, 4)),
    (QQ, "-0", Fraction(0)),
    (QQ, "007", Fraction(7)),
    (QQ, Fraction(-5, 3), Fraction(-5, 3)),
    (QQ, fmpz(5), Fraction(5)),
    (QQ, fmpq(5, 10), Fraction(1, 2)),
    (QQ, np.int64(-4), Fraction(-4)),
    (QQ, np.uint8(200), Fraction(200)),
    (QQ, "1" + "0" * 4000 + "1/3", Fraction(10**4001 + 1, 3)),
    (QQ, 10**4000, Fraction(10**4000)),
    (F2, -1, 1),
    (F2, "1/3", 1),
    (F7, "3/4", 6),  # 4·6 = 24 = 3
    (F7, "-3/4", 1),
    (F7, -1, 6),
    (F7, 7, 0),
    (F7, "14/5", 0),
    (F7, Fraction(1, 2), 4),
    (F7, np.int64(-1), 6),
    (F7, 10**4000, pow(10, 4000, 7)),
    (F7, nmod(5, 7), 5),
    (prime_field(MERSENNE), -1, MERSENNE - 1),
    (prime_field(MERSENNE), "1/2", 2**60),  # 2·2^60 = 2^61 = 1
]


@pytest.mark.parametrize(("field", "entry", "expected"), READINGS)
def test_an_entry_is_read_exactly(field: Field, entry: Any, expected: Fraction | int) -> None:
    value = field.element(entry)
    assert plain(value) == expected
    if field == QQ:
        assert type(value) is fmpq
    else:
        assert type(value) is nmod
        assert value.modulus() == field.order


@pytest.mark.parametrize(
    ("field", "entry", "expected"),
    [
        (QQ, "6/8", "3/4"),
        (QQ, "-6/8", "-3/4"),
        (QQ, "8/4", 2),
        (QQ, -3, -3),
        (F7, -1, 6),
        (F7, "3/4", 6),
    ],
)
def test_an_entry_is_written_in_lowest_terms(field: Field, entry: Any, expected: Any) -> None:
    written = field.format(field.element(entry))
    assert (type(written), written) == (type(expected), expected)


GARBAGE = [
    1.0,
    0.5,
    float("nan"),
    float("inf"),
    np.float64(1),
    np.float32(1),
    True,
    False,
    np.True_,
    None,
    1j,
    [1],
    {},
    b"1",
    "",
    " ",
    "x",
    "nan",
    "1.0",
    "1e3",
    "0x10",
    "3//4",
    "1/2/3",
    "3/-4",
    "/4",
    "3/",
    "- 3",
    "--3",
    "1 2",
    "1,2",
    "1_000",
    "٣",
    "a",
    "2*a+1",
    "1/0",
    "0/0",
]


@pytest.mark.parametrize("field", [QQ, F7, F2], ids=str)
@pytest.mark.parametrize("entry", GARBAGE, ids=repr)
def test_an_entry_that_is_no_element_is_refused(field: Field, entry: Any) -> None:
    with pytest.raises(EntryError, match=r"^entry .+(; (write|correct)|is not a number)"):
        field.element(entry)


@pytest.mark.parametrize(
    ("entry", "sentence"),
    [
        (2.5, "entry 2.5 is a float; write an integer or a fraction 'a/b'"),
        (float("nan"), "entry nan is a float; write an integer or a fraction 'a/b'"),
        (True, "entry true is a boolean; write 1 or 0"),
        ("1/0", "entry '1/0' has denominator 0; correct the fraction"),
    ],
)
def test_the_sentence_names_the_entry_and_the_remedy(entry: Any, sentence: str) -> None:
    for field in [QQ, *draws.PRIME_FIELDS]:
        with pytest.raises(EntryError) as caught:
            field.element(entry)
        assert str(caught.value) == sentence


@pytest.mark.parametrize("entry", ["3/7", "1/14", "-2/49", Fraction(3, 7), fmpq(1, 7)])
def test_a_denominator_divisible_by_p_is_refused(entry: Any) -> None:
    with pytest.raises(EntryError, match="denominator that is 0 modulo 7"):
        F7.element(entry)


def test_a_fraction_is_reduced_before_its_denominator_is_judged() -> None:
    assert F7.element("14/7") == F7.element(2)


def test_a_residue_of_another_prime_is_refused_and_not_converted() -> None:
    with pytest.raises(EntryError, match="modulo 5, not 7"):
        F7.element(nmod(3, 5))
    with pytest.raises(EntryError):
        QQ.element(nmod(3, 5))


def test_a_long_entry_is_shortened_in_the_message() -> None:
    with pytest.raises(EntryError) as caught:
        QQ.element("x" * 10_000)
    assert len(str(caught.value)) < 150


@pytest.mark.parametrize("field", [QQ, F7], ids=str)
def test_a_plus_sign_is_read_or_refused_in_a_sentence(field: Field) -> None:
    try:
        value = field.element("+3")
    except EntryError:
        return
    assert value == field.element(3)


def test_every_error_is_a_built_in_exception_with_exit_code_2() -> None:
    for kind, base in [
        (EntryError, ValueError),
        (FieldError, ValueError),
        (BadReductionError, ZeroDivisionError),
    ]:
        assert issubclass(kind, TrivectorError)
        assert issubclass(kind, base)
        assert kind.exit_code == 2


# Names of fields


@draws.over_fields
def test_a_field_is_recovered_from_what_a_document_says(field: Field) -> None:
    spec = json.loads(json.dumps(field.to_spec()))
    assert field_from_spec(spec) == field


@pytest.mark.parametrize(
    ("spec", "characteristic", "order"),
    [
        ("Q", 0, None),
        ("F_2", 2, 2),
        ("F_101", 101, 101),
        ({"characteristic": 7}, 7, 7),
        ("F_2305843009213693951", MERSENNE, MERSENNE),  # 2^61 − 1 is prime: classical
        ("F_9223372036854775783", 2**63 - 25, 2**63 - 25),  # the largest below 2^63: computed
    ],
)
def test_a_field_is_known_by_its_name(spec: Any, characteristic: int, order: int | None) -> None:
    field = field_from_spec(spec)
    assert (field.characteristic, field.order) == (characteristic, order)
    assert field.element(1) == field.one
    assert not field.zero


@pytest.mark.parametrize(
    ("spec", "part"),
    [
        ("F_6", "6 = 2·3"),
        ("F_12", "12 = 2^2·3"),
        ("F_1", "1 is not a prime"),
        ("F_0", "0 is not a prime"),
        ("F_1763", "1763 = 41·43"),
        ({"characteristic": 4}, "4 is not a prime"),
        ({"characteristic": 1}, "1 is not a prime"),
        ({"characteristic": -7}, "prime"),
        ("F_9223372036854775837", "less than 2^63"),  # the next prime above 2^63
        ({"characteristic": 2**63 + 29}, "less than 2^63"),
        ("F_" + "7" * 40, "less than 2^63"),
    ],
)
def test_an_order_that_is_no_prime_below_two_to_the_63_is_refused(spec: Any, part: str) -> None:
    with pytest.raises(FieldError) as caught:
        field_from_spec(spec)
    assert part in str(caught.value)


@pytest.mark.parametrize(
    "spec",
    [
        "R",
        "C",
        "q",
        "QQ",
        "F7",
        "f_7",
        "F_",
        "F_-7",
        "F_7.0",
        "F_7 ",
        "F_٧",
        "GF(7)",
        "F_" + "9" * 41,
        "",
        7,
        7.0,
        None,
        ["F_7"],
        {},
        {"characteristic": "7"},
        {"characteristic": 7.0},
        {"characteristic": True},
        {"characteristic": 7, "colour": "red"},
    ],
    ids=repr,
)
def test_an_unknown_field_is_refused_with_what_to_write_instead(spec: Any) -> None:
    with pytest.raises(FieldError, match=r"^(field|characteristic)\b.*(; write| must) "):
        field_from_spec(spec)


@pytest.mark.parametrize(("q", "p"), [(4, 2), (8, 2), (9, 3), (27, 3)])
def test_the_integers_modulo_a_prime_power_never_pass_for_a_field(q: int, p: int) -> None:
    try:
        field = field_from_spec(f"F_{q}")
    except FieldError as error:
        assert "not a prime" in str(error)  # noqa: PT017
        return
    assert (field.characteristic, field.order) == (p, q)
    assert field.element(p) == field.zero
    assert field.one / field.element(p + 1) == field.one


@pytest.mark.parametrize("p", [4, 6, 9, 15, 1, 0, -3, 2**63, 2**63 + 29, 561, 2**61 - 3])
def test_prime_field_takes_primes_only(p: int) -> None:  # 561 is a Carmichael number
    with pytest.raises(FieldError, match=r"use a (prime|smaller one)$|write \"Q\" for"):
        prime_field(p)


def test_an_enormous_order_is_refused_in_a_sentence() -> None:
    try:
        prime_field(10**5000)
    except FieldError:
        return
    pytest.fail("10^5000 passed for a prime")


def test_fields_are_equal_when_they_are_the_same_field() -> None:
    for i, first in enumerate(draws.FIELDS):
        for j, second in enumerate(draws.FIELDS):
            assert (first == second) == (i == j)
    assert hash(field_from_spec("F_7")) == hash(prime_field(7))


# Elements


@draws.over_fields
@draws.some
@given(data=st.data())
def test_the_laws_of_a_field_hold(field: Field, data: st.DataObject) -> None:
    a, b, c = (data.draw(draws.elements(field)) for _ in range(3))
    d = data.draw(draws.nonzero_elements(field))
    assert a * (b + c) == a * b + a * c
    assert (a * b) * c == a * (b * c)
    assert a - b == a + (-b)
    assert (a / d) * d == a
    assert not a - a
    assert hash(a + b) == hash(b + a)


@draws.over_fields
def test_the_characteristic_is_the_order_of_one(field: Field) -> None:
    p = field.characteristic
    assert field.element(p) == field.zero
    assert all(field.element(m) != field.zero for m in range(1, min(p, 50) or 50))


@draws.over_fields
@draws.some
@given(data=st.data())
def test_the_sort_key_orders_the_elements(field: Field, data: st.DataObject) -> None:
    values = data.draw(draws.vectors(field, 6))
    for x in values:
        for y in values:
            assert (field.sort_key(x) == field.sort_key(y)) == (x == y)
    ordered = sorted(values, key=field.sort_key)
    backwards = values[::-1]
    assert sorted(backwards, key=field.sort_key) == ordered
    if field == QQ:
        assert [plain(x) for x in ordered] == sorted(plain(x) for x in values)


def test_rationals_are_sorted_by_size_and_residues_from_zero_up() -> None:
    mixed = [QQ.element(x) for x in ("1/2", -2, 7, "1/3", 0, "-1/2")]
    ordered = [QQ.element(x) for x in (-2, "-1/2", 0, "1/3", "1/2", 7)]
    assert sorted(mixed, key=QQ.sort_key) == ordered
    assert sorted(map(F7.element, [-1, 3, 0]), key=F7.sort_key) == [0, 3, 6]


@draws.over_fields
def test_a_random_element_depends_on_the_generator_alone(field: Field) -> None:
    drawn = [[field.random_element(rng) for _ in range(20)] for rng in (Random(5), Random(5))]
    assert drawn[0] == drawn[1]
    assert all(field.element(x) == x for x in drawn[0])


@pytest.mark.parametrize("p", [2, 3, 5, 7])
def test_every_residue_is_drawn_at_random(p: int) -> None:
    rng, field = Random(1), prime_field(p)
    assert {int(field.random_element(rng)) for _ in range(40 * p)} == set(range(p))


def test_a_random_rational_has_the_height_asked_for() -> None:
    rng = Random(1)
    drawn = {QQ.random_element(rng, height=3) for _ in range(300)}
    assert drawn == {QQ.element(x) for x in range(-3, 4)}


# Linear algebra


@draws.over_fields
def test_a_zero_matrix_has_its_shape_and_rank_zero(field: Field) -> None:
    matrix = field.zero_matrix(3, 5)
    assert (matrix.nrows(), matrix.ncols(), matrix.rank()) == (3, 5, 0)
    assert not any(x for row in matrix.tolist() for x in row)


@draws.over_fields
@draws.some
@given(data=st.data())
def test_reduced_echelon_form_and_rank_agree_with_sympy(field: Field, data: st.DataObject) -> None:
    nrows, ncols = data.draw(st.integers(1, 6)), data.draw(st.integers(1, 6))
    rows = data.draw(draws.matrices_of_any_rank(field, nrows, ncols))
    expected, expected_pivots = reference_reduced(field, rows, ncols)
    reduced, pivots = echelon(field.matrix(rows, ncols))
    assert reduced.tolist() == expected
    assert pivots == expected_pivots
    assert pivot_columns(reduced, len(pivots)) == pivots
    assert rank(field, rows, ncols) == len(expected_pivots)
    assert list(map(list, row_space(field, rows, ncols))) == expected[: len(pivots)]


@draws.over_prime_fields
@draws.some
@given(data=st.data())
def test_rank_and_determinant_agree_with_naive_elimination(
    field: Field, data: st.DataObject
) -> None:
    q = field.characteristic
    rows = data.draw(draws.matrices_of_any_rank(field, 6, 6))
    literal = [draws.ints(row) for row in rows]
    assert rank(field, rows, 6) == oracle.rank(literal, q)
    assert int(field.matrix(rows, 6).det()) == oracle.determinant(literal, q)


@draws.over_fields
@draws.some
@given(data=st.data())
def test_the_rank_of_a_growing_list_of_sparse_rows_agrees_with_sympy(
    field: Field, data: st.DataObject
) -> None:
    nrows, ncols = data.draw(st.integers(0, 7)), data.draw(st.integers(1, 8))
    rows = data.draw(draws.matrices_of_any_rank(field, nrows, ncols))
    counter, end = RankCounter(field, ncols), 0
    while end < nrows:
        start, end = end, data.draw(st.integers(end + 1, nrows))
        # a zero may be written or left out
        sparse = [{j: x for j, x in enumerate(row) if x or j % 3 == 0} for row in rows[start:end]]
        assert counter.add(sparse) == reference_rank(field, rows[:end], ncols)
    assert counter.add([]) == reference_rank(field, rows, ncols)


@draws.over_fields
@draws.some
@given(data=st.data())
def test_the_kernel_is_everything_orthogonal_to_the_rows(field: Field, data: st.DataObject) -> None:
    nrows, ncols = data.draw(st.integers(0, 5)), data.draw(st.integers(1, 6))
    rows = data.draw(draws.matrices_of_any_rank(field, nrows, ncols))
    found = kernel(field, rows, ncols)
    assert len(found) == ncols - reference_rank(field, rows, ncols)
    assert all(not draws.dot(field, x, row) for x in found for row in rows)
    assert row_space(field, found, ncols) == found  # canonical and independent


@pytest.mark.parametrize("q", [2, 3])
@draws.some
@given(data=st.data())
def test_the_kernel_holds_every_solution(q: int, data: st.DataObject) -> None:
    field = prime_field(q)
    rows = data.draw(draws.matrices_of_any_rank(field, 3, 5))
    everything = product(range(q), repeat=5)
    solutions = {v for v in everything if not any(oracle.apply(list(map(draws.ints, rows)), v, q))}
    found = [draws.ints(row) for row in kernel(field, rows, 5)]
    assert set(oracle.combinations_of(found, q, 5)) == solutions


@draws.over_fields
@draws.some
@given(data=st.data())
def test_solve_finds_coefficients_exactly_when_there_are_some(
    field: Field, data: st.DataObject
) -> None:
    nrows, ncols = data.draw(st.integers(0, 5)), data.draw(st.integers(1, 5))
    rows = data.draw(draws.matrices_of_any_rank(field, nrows, ncols))
    coefficients = data.draw(draws.vectors(field, nrows))
    inside = draws.combine(field, coefficients, rows, ncols)
    for target in (inside, data.draw(draws.vectors(field, ncols))):
        answer = solve(field, rows, target, ncols)
        solvable = reference_rank(field, [*rows, target], ncols) == reference_rank(
            field, rows, ncols
        )
        assert (answer is not None) == solvable
        if answer is not None:
            assert len(answer) == nrows
            assert draws.combine(field, answer, rows, ncols) == tuple(target)
            for i, value in enumerate(answer):  # zero at rows that depend on rows before them
                if reference_rank(field, rows[: i + 1], ncols) == reference_rank(
                    field, rows[:i], ncols
                ):
                    assert not value


@draws.over_fields
@draws.some
@given(data=st.data())
def test_dependencies_name_the_rows_that_add_nothing(field: Field, data: st.DataObject) -> None:
    nrows, ncols = data.draw(st.integers(0, 6)), data.draw(st.integers(1, 5))
    rows = data.draw(draws.matrices_of_any_rank(field, nrows, ncols))
    ranks = [reference_rank(field, rows[:i], ncols) for i in range(nrows + 1)]
    found = dependencies(field, rows, ncols)
    assert sorted(found) == [i for i in range(nrows) if ranks[i] == ranks[i + 1]]
    for i, coefficients in found.items():
        assert len(coefficients) == i
        assert draws.combine(field, coefficients, rows[:i], ncols) == tuple(rows[i])


@draws.over_fields
@draws.some
@given(data=st.data())
def test_the_meet_of_row_spaces_lies_in_both_and_has_the_right_dimension(
    field: Field, data: st.DataObject
) -> None:
    common = data.draw(draws.matrices(field, data.draw(st.integers(0, 2)), 6))
    first = row_space(field, common + data.draw(draws.matrices(field, 2, 6)), 6)
    second = row_space(field, common + data.draw(draws.matrices(field, 2, 6)), 6)
    meet = meet_rows(field, first, second, 6)
    for rows in (first, second):
        assert reference_rank(field, rows + meet, 6) == len(rows)
    assert len(meet) == len(first) + len(second) - reference_rank(field, first + second, 6)
    assert row_space(field, meet, 6) == meet


@pytest.mark.parametrize("q", [2, 3])
@draws.some
@given(data=st.data())
def test_the_meet_holds_every_common_vector(q: int, data: st.DataObject) -> None:
    field = prime_field(q)
    first, second = (
        row_space(field, data.draw(draws.matrices_of_any_rank(field, 3, 5)), 5) for _ in range(2)
    )
    everything = [
        set(oracle.combinations_of([draws.ints(row) for row in rows], q, 5))
        for rows in (first, second, meet_rows(field, first, second, 5))
    ]
    assert everything[0] & everything[1] == everything[2]


@draws.over_fields
@draws.some
@given(data=st.data())
def test_reducing_a_vector_changes_it_by_the_span_and_clears_the_pivots(
    field: Field, data: st.DataObject
) -> None:
    rows = row_space(field, data.draw(draws.matrices_of_any_rank(field, 3, 6)), 6)
    vector = data.draw(draws.vectors(field, 6))
    reduced = reduce_vector(vector, rows)
    difference = [x - y for x, y in zip(vector, reduced, strict=True)]
    assert reference_rank(field, [*rows, difference], 6) == len(rows)
    for row in rows:
        assert not reduced[next(j for j, x in enumerate(row) if x)]


@draws.over_fields
def test_no_rows_at_all_are_the_zero_space(field: Field) -> None:
    whole = row_space(field, draws.identity(field, 4), 4)
    assert row_space(field, [], 4) == ()
    assert rank(field, [], 4) == 0
    assert kernel(field, [], 4) == whole
    assert kernel(field, whole, 4) == ()
    assert dependencies(field, [], 4) == {}
    assert meet_rows(field, (), whole, 4) == ()
    assert meet_rows(field, whole, whole, 4) == whole
    assert solve(field, [], [field.zero] * 4, 4) == ()
    assert solve(field, [], [field.one] * 4, 4) is None


# Integral bases


@draws.some
@given(data=st.data())
def test_an_integral_basis_is_a_saturated_basis_of_the_same_space(data: st.DataObject) -> None:
    nrows, ncols = data.draw(st.integers(0, 4)), data.draw(st.integers(1, 6))
    rows = data.draw(draws.matrices_of_any_rank(QQ, nrows, ncols))
    basis = QQ.integral_basis(rows)
    assert all(x.q == 1 for row in basis for x in row)
    assert row_space(QQ, basis, ncols) == row_space(QQ, rows, ncols)
    assert len(basis) == reference_rank(QQ, rows, ncols)
    for p in (2, 3, 5):
        assert oracle.rank([draws.ints(row) for row in basis], p) == len(basis)


def test_an_integral_basis_takes_in_the_points_between_the_rows() -> None:
    rows = [[QQ.element(x) for x in row] for row in ([1, 1, 0], [1, -1, 0])]
    assert oracle.rank([draws.ints(row) for row in rows], 2) == 1
    basis = {draws.ints(row) for row in QQ.integral_basis(rows)}
    assert {tuple(map(abs, row)) for row in basis} == {(1, 0, 0), (0, 1, 0)}


def test_an_integral_basis_is_made_of_short_vectors() -> None:
    rows = [[QQ.element(x) for x in row] for row in ([1, 0, 1000], [0, 1, 1000])]
    # ±(1, −1, 0) are the only two nonzero points of this lattice of length less than 999
    assert any(draws.ints(row) in {(1, -1, 0), (-1, 1, 0)} for row in QQ.integral_basis(rows))


@draws.over_prime_fields
@draws.few
@given(data=st.data())
def test_over_a_finite_field_an_integral_basis_is_the_rows(
    field: Field, data: st.DataObject
) -> None:
    rows = data.draw(draws.matrices(field, 3, 5))
    assert field.integral_basis(rows) == rows


# Blocks for generic scalars


@draws.over_fields
@pytest.mark.parametrize("attempt", [0, 2, 6])
def test_generic_blocks_commute_and_are_invertible_unless_zero(field: Field, attempt: int) -> None:
    degree, draw = field.generic_blocks(Random(11), attempt)
    blocks = [draw() for _ in range(60)]
    for block in blocks:
        assert (block.nrows(), block.ncols()) == (degree, degree)
        assert block.rank() == (degree if any(map(any, block.tolist())) else 0)
    for first, second in pairwise(blocks):
        assert (first * second).tolist() == (second * first).tolist()
        pairs = [
            zip(*rows, strict=True) for rows in zip(first.tolist(), second.tolist(), strict=True)
        ]
        difference = field.matrix([[x - y for x, y in pair] for pair in pairs], degree)
        assert difference.rank() in (0, degree)  # the blocks form a field
        assert (first * second).rank() == (degree if first.rank() and second.rank() else 0)


@draws.over_fields
def test_later_attempts_take_many_values_even_over_a_small_field(field: Field) -> None:
    degrees = [field.generic_blocks(Random(12), attempt)[0] for attempt in range(7)]
    assert degrees == sorted(degrees)
    _, draw = field.generic_blocks(Random(12), 6)
    assert len({str(draw().tolist()) for _ in range(400)}) > 32


@draws.over_fields
def test_generic_blocks_come_from_the_generator_alone(field: Field) -> None:
    (_, first), (_, second) = (field.generic_blocks(Random(13)) for _ in range(2))
    assert [first().tolist() for _ in range(9)] == [second().tolist() for _ in range(9)]


# Reductions


def test_the_rationals_are_reduced_modulo_primes_descending_from_two_to_the_31() -> None:
    primes = [reduction.field.characteristic for reduction in islice(QQ.reductions(), 12)]
    expected, bound = [], 2**31
    for _ in range(12):
        bound = sympy.prevprime(bound)
        expected.append(bound)
    assert primes == expected
    assert primes[0] == 2147483647  # 2^31 − 1 is prime: classical


def test_a_reduction_of_the_rationals_is_inexact_and_says_modulo_what() -> None:
    reduction = next(iter(QQ.reductions()))
    assert not reduction.exact
    assert reduction.name == "modulo 2147483647"


@draws.some
@given(data=st.data())
def test_reduction_maps_sums_and_products_to_sums_and_products(data: st.DataObject) -> None:
    reduction = next(iter(QQ.reductions()))
    p = reduction.field.characteristic
    row = data.draw(draws.vectors(QQ, 4))
    [image] = reduction.rows([row])
    assert all(x.modulus() == p for x in image)
    for value, residue in zip(row, image, strict=True):
        assert int(residue) * int(value.q) % p == int(value.p) % p
    [[total, times]] = reduction.rows([[row[0] + row[1], row[0] * row[1]]])
    assert (total, times) == (image[0] + image[1], image[0] * image[1])


def test_a_denominator_divisible_by_the_prime_is_bad_reduction() -> None:
    reduction = next(iter(QQ.reductions()))
    with pytest.raises(BadReductionError, match="divisible by 2147483647; use another prime"):
        reduction.rows([[QQ.one, QQ.element("5/2147483647")]])
    assert not reduction.rows([[QQ.element(2147483647)]])[0][0]


@draws.over_prime_fields
@draws.few
@given(data=st.data())
def test_the_only_reduction_of_a_finite_field_is_the_identity(
    field: Field, data: st.DataObject
) -> None:
    [reduction] = field.reductions()
    rows = data.draw(draws.matrices(field, 2, 3))
    assert reduction.exact
    assert reduction.field == field
    assert reduction.rows(rows) == rows
    assert field.name in reduction.name
