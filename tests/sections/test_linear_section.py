"""G(3,V) ∩ P(L): what is said of it, when it is undecided, and that nothing false is said."""

import json
from itertools import pairwise
from random import Random
from typing import Any

import examples
import macaulay
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

from trivector.errors import MixedFieldsError, UsageError
from trivector.fields import QQ, Field, prime_field
from trivector.fields.linear import unit_rows
from trivector.sections import Limits, LinearSection, SectionReport
from trivector.subspaces import Plane, Subspace

F2, F3, F5, F7, F11, F101 = (prime_field(p) for p in (2, 3, 5, 7, 11, 101))
LARGE = prime_field(examples.LARGE_PRIME)
OTHER = prime_field(1000003)
P, NEXT = examples.FIRST_PRIME, examples.SECOND_PRIME

# classical: the h-vector of G(3,6), a complete intersection-like Artinian quotient of it
EMPTY = (1, 10, 20, 10, 1, 0)
SECTION_KEYS = {
    "subspace",
    "projective_dimension",
    "degree",
    "hilbert_function",
    "reduced",
    "closed_points",
    "planes_over_base",
    "planes_over_closure",
    "planes",
}


# Points over ℚ from a few primes only and short sweeps: what follows is about completeness,
# dimension and degree, which do not need more.
QUICK: dict[str, int] = {"max_lift_primes": 2, "max_points": 5000}


def examine(
    space: Subspace, known: Any = (), *, limits: Limits | None = None, **options: Any
) -> SectionReport:
    return LinearSection(space).examine(known, limits=limits or Limits(**QUICK), **options)


def span_of(field: Field, planes: list[Plane]) -> Subspace:
    return Subspace.span(field, planes[0].n, [plane.plucker for plane in planes])


def twenty(field: Field) -> list[Plane]:
    return examples.over(field, examples.twenty_planes())


def scaled(field: Field, planes: list[Plane], factors: list[Any]) -> list[Plane]:
    """The images under a diagonal matrix."""
    zero = field.zero
    diagonal = [
        [field.element(c) if i == j else zero for j in range(6)] for i, c in enumerate(factors)
    ]
    return [examples.image(field, diagonal, plane) for plane in planes]


def congruent_space(space: Subspace, prime: int, seed: int, kept: int = 0) -> Subspace:
    """A random subspace over ℚ that is the same modulo one prime; some rows stay.

    Only entries right of the pivots and not in pivot columns are moved, so that the rows stay
    in reduced echelon form and no denominator spoils the prime.
    """
    rng = Random(seed)
    pivots = [next(j for j, x in enumerate(row) if x) for row in space.rows]
    rows = [
        [
            x + prime * rng.randint(-3, 3) if i >= kept and j > pivot and j not in pivots else x
            for j, x in enumerate(row)
        ]
        for i, (row, pivot) in enumerate(zip(space.rows, pivots, strict=True))
    ]
    moved = Subspace.span(QQ, 6, rows)
    assert [list(row) for row in moved.rows] == rows
    return moved


# The values from outside


@pytest.mark.parametrize("p", [3, 5, 7, 13, 43, 47])
def test_the_cyclic_lagrangian_contains_no_plane_modulo_good_primes(p: int) -> None:
    # computed: no decomposable, H = 1, 10, 20, 10, 1, 0; good primes below 48 but 2 and 11
    space = examples.cyclic_lagrangian(prime_field(p))
    assert space.is_lagrangian()
    report = examine(space)
    assert report.hilbert_function == EMPTY
    assert (report.projective_dimension, report.degree, report.infinite) == (-1, 0, False)
    assert report.complete_over_closure is True
    assert report.further == 0


def test_the_cyclic_lagrangian_contains_no_plane_over_the_closure_of_q() -> None:
    # computed
    report = examine(examples.cyclic_lagrangian(QQ))
    assert report.hilbert_function == EMPTY
    assert (report.projective_dimension, report.degree) == (-1, 0)
    assert report.complete_over_closure is True


def test_the_cyclic_lagrangian_has_length_22_modulo_2_and_no_plane_over_f2() -> None:
    # computed: reduced, closed points of degrees 2, 10, 10
    space = examples.cyclic_lagrangian(F2)
    report = examine(space)
    assert (report.projective_dimension, report.degree, report.infinite) == (0, 22, False)
    assert report.further == 22
    assert report.complete_over_closure is False
    assert report.reduced is not False
    assert macaulay.section_hilbert(F2, space.rows, 6, 4) == (1, 10, 21, 22, 22)
    assert examples.planes_pairing_to_zero(2, space.rows) == []
    points = json.loads(json.dumps(report.to_json()))["closed_points"]
    if points is not None:
        assert [(point["degree"], point["multiplicity"]) for point in points] == [
            (2, 1),
            (10, 1),
            (10, 1),
        ]


def test_the_cyclic_lagrangian_has_one_plane_of_multiplicity_22_modulo_11() -> None:
    # computed
    space = examples.cyclic_lagrangian(F11)
    plane = examples.plane_of_the_cyclic_lagrangian(F11)
    report = examine(space, [plane])
    assert (report.projective_dimension, report.degree) == (0, 22)
    assert report.multiplicities == (22,)
    assert report.reduced is False
    assert report.further == 0
    assert report.complete_over_closure is True
    assert report.complete_over_base is True
    without = examine(space)
    assert (without.degree, without.further) == (22, 22)
    assert without.complete_over_closure is False
    assert without.complete_over_base is not True


@pytest.mark.parametrize("field", [QQ, F3, F5, F7, LARGE], ids=str)
def test_the_twenty_planes_are_their_section(field: Field) -> None:
    # computed: H = 1, 10, 20, 20, … and complete
    planes = twenty(field)
    space = span_of(field, planes)
    report = examine(space, planes)
    assert report.hilbert_function == (1, 10, 20, 20)
    assert (report.projective_dimension, report.degree, report.further) == (0, 20, 0)
    assert report.multiplicities == (1,) * 20
    assert report.reduced is True
    assert report.complete_over_closure is True
    assert report.complete_over_base is True
    assert report.exhaustive
    assert list(report.known) == sorted(planes, key=Plane.sort_key)
    if field is not QQ:
        assert macaulay.section_hilbert(field, space.rows, 6, 3) == (1, 10, 20, 20)


@pytest.mark.parametrize("field", [QQ, F2, F3, F7, LARGE], ids=str)
def test_the_seven_planes_of_p6_are_their_section(field: Field) -> None:
    # published: arXiv 1204.6257 (complete); dimension 7 and H = 1, 7, 7, 7 computed
    planes = examples.over(field, examples.seven_planes())
    space = span_of(field, planes)
    assert space.orthogonal() == space
    report = examine(space, planes)
    assert report.subspace.dimension == 7
    assert report.hilbert_function == (1, 7, 7, 7)
    assert report.multiplicities == (1,) * 7
    assert report.complete_over_closure is True


# General sections, by dimension


@pytest.mark.parametrize("field", [QQ, F101, LARGE], ids=str)
@pytest.mark.parametrize(
    ("dimension", "expected"),
    [
        # h(z)/(1 − z)^i with h = 1, 10, 20, 10, 1: sums of sums, by hand
        (10, (-1, 0, EMPTY)),
        (11, (0, 42, (1, 11, 31, 41, 42, 42))),
        (12, (1, 42, (1, 12, 43, 84, 126, 168))),
        (13, (2, 42, (1, 13, 56, 140, 266, 434))),
    ],
)
def test_a_general_section_has_the_classical_numbers(
    field: Field, dimension: int, expected: tuple[int, int, tuple[int, ...]]
) -> None:
    report = examine(examples.random_subspace(field, 6, dimension, Random(dimension)))
    got = (report.projective_dimension, report.degree, report.hilbert_function)
    assert got == expected
    assert report.infinite == (dimension > 11)
    assert report.complete_over_closure is (dimension == 10)


@pytest.mark.parametrize("field", [QQ, F2, F3, F101], ids=str)
@pytest.mark.parametrize("n", [6, 7])
@pytest.mark.parametrize("dimension", [1, 2, 3, 6])
def test_a_small_random_space_contains_no_plane(field: Field, n: int, dimension: int) -> None:
    space = examples.random_subspace(field, n, dimension, Random(dimension))
    report = examine(space)
    literal = macaulay.section_hilbert(field, space.rows, n, 3)
    assert literal[3] == 0
    assert report.hilbert_function == literal[: literal.index(0) + 1]
    assert (report.projective_dimension, report.degree) == (-1, 0)
    assert report.complete_over_closure is True


@pytest.mark.parametrize("field", [QQ, F2, F7], ids=str)
@pytest.mark.parametrize("n", [6, 7])
def test_the_zero_space_contains_no_plane(field: Field, n: int) -> None:
    report = examine(Subspace.span(field, n, []))
    assert (report.projective_dimension, report.degree) == (-1, 0)
    assert report.hilbert_function == (1, 0)
    assert report.complete_over_closure is True


@pytest.mark.parametrize("field", [QQ, F2, F3, LARGE], ids=str)
@pytest.mark.parametrize("n", [6, 7])
def test_one_plane_spans_a_section_that_is_this_plane(field: Field, n: int) -> None:
    plane = examples.random_plane(field, n, Random(n))
    report = examine(span_of(field, [plane]), [plane])
    assert (report.projective_dimension, report.degree) == (0, 1)
    assert report.complete_over_closure is True
    assert set(report.hilbert_function or ()) == {1}
    without = examine(span_of(field, [plane]))
    assert (without.degree, without.further) == (1, 1)
    assert without.complete_over_closure is False


@pytest.mark.parametrize("field", [QQ, F2, F3, LARGE], ids=str)
def test_two_planes_span_two_points_or_a_pencil(field: Field) -> None:
    disjoint = examples.over(field, [[examples.unit(i + k) for i in range(3)] for k in (0, 3)])
    report = examine(span_of(field, disjoint), disjoint)
    assert (report.projective_dimension, report.degree) == (0, 2)
    assert report.complete_over_closure is True
    line = [examples.unit(0), examples.unit(1)]
    pencil = examples.over(field, [[*line, examples.unit(2)], [*line, examples.unit(3)]])
    report = examine(span_of(field, pencil), pencil)
    # a line of planes: H(d) = d + 1, classical
    assert (report.projective_dimension, report.degree) == (1, 1)
    assert report.hilbert_function == (1, 2, 3, 4, 5, 6)
    assert report.complete_over_closure is False


@pytest.mark.parametrize("field", [QQ, F2, F101], ids=str)
def test_everything_is_the_grassmannian_itself(field: Field) -> None:
    report = examine(Subspace.span(field, 6, unit_rows(field, 20)))
    # classical: dimension 9, degree 42; 1, 20, 175, 980
    assert (report.projective_dimension, report.degree) == (9, 42)
    assert (report.hilbert_function or ())[:4] == (1, 20, 175, 980)
    assert report.complete_over_closure is False


@pytest.mark.parametrize("field", [QQ, F101], ids=str)
@pytest.mark.parametrize("count", [2, 4])
def test_a_random_lagrangian_through_a_few_planes(field: Field, count: int) -> None:
    rng = Random(count)
    planes = examples.random_incident_planes(field, count, rng)
    space = examples.lagrangian_through(field, planes, rng)
    assert space.is_lagrangian()
    report = examine(space, planes)
    assert report.projective_dimension == 0
    literal_field = F101 if field is F101 else OTHER
    rows = [[literal_field.element(x) for x in row] for row in space.rows]
    literal = macaulay.section_hilbert(literal_field, rows, 6, 4)
    # Over ℚ the prime 1000003 is as good as any: H there is H over ℚ, or larger.
    assert report.hilbert_function is not None
    assert report.hilbert_function[:5] == literal
    assert report.degree is not None
    assert report.multiplicities is not None
    known = sum(m or 0 for m in report.multiplicities)
    assert report.further == report.degree - known
    assert report.complete_over_closure is (report.further == 0)


# Over small fields, against every plane and every monomial


@pytest.mark.parametrize("field", [F2, F3], ids=str)
@draws.few
@given(seed=st.integers(0, 2**32), dimension=st.integers(2, 7), planes=st.integers(1, 4))
def test_reports_over_small_fields_agree_with_brute_force(
    field: Field, seed: int, dimension: int, planes: int
) -> None:
    q = int(field.characteristic)
    rng = Random(seed)
    members = [examples.random_plane(field, 6, rng).plucker for _ in range(planes)]
    others = examples.random_rows(field, max(0, dimension - planes), 20, rng)
    space = Subspace.span(field, 6, [*members, *others])
    rational = [
        Plane.from_rows(field, rows)
        for rows in examples.planes_pairing_to_zero(q, space.orthogonal().rows)
    ]
    assert len(rational) >= 1
    literal = macaulay.section_hilbert(field, space.rows, 6, 5)
    report = examine(space, rational)
    if report.hilbert_function is not None:
        shared = min(6, len(report.hilbert_function))
        assert report.hilbert_function[:shared] == literal[:shared]
    assert report.complete_over_base is not False
    if report.complete_over_closure:
        assert report.degree == literal[5] == sum(m or 0 for m in report.multiplicities or ())
    if len(rational) > 42:  # classical: more than the degree of G(3,6)
        assert report.infinite is not False
    for left_out in range(min(2, len(rational))):
        fewer = examine(space, rational[:left_out] + rational[left_out + 1 :])
        assert fewer.complete_over_closure is not True
        assert fewer.complete_over_base is not True
        assert fewer.degree == report.degree
        assert fewer.hilbert_function == report.hilbert_function


# Bad primes


def check_twenty(planes: list[Plane], **options: Any) -> SectionReport:
    report = examine(span_of(QQ, planes), planes, **options)
    assert report.complete_over_closure is True
    assert report.hilbert_function == (1, 10, 20, 20)
    assert report.multiplicities == (1,) * 20
    fewer = examine(span_of(QQ, planes), planes[1:], **options)
    assert fewer.complete_over_closure is False
    assert (fewer.degree, fewer.further) == (20, 1)
    return report


def test_planes_that_coincide_modulo_the_first_prime() -> None:
    planes = scaled(QQ, twenty(QQ), [1, 1, 1, 1, P, P])
    residues = {tuple(int(x.p) % P for x in plane.plucker) for plane in planes}
    assert all(x.q == 1 for plane in planes for x in plane.plucker)
    assert len(residues) < 20
    check_twenty(planes)


def test_entries_with_the_first_prime_in_the_denominator() -> None:
    planes = scaled(QQ, twenty(QQ), [P, 1, 1, 1, 1, 1])
    assert any(x.q == P for plane in planes for x in plane.plucker)
    assert str(P) not in check_twenty(planes).method


def test_entries_with_the_first_two_primes_in_the_denominator() -> None:
    planes = scaled(QQ, twenty(QQ), [P * NEXT, 1, 1, 1, 1, 1])
    check_twenty(planes)
    report = examine(span_of(QQ, planes), planes, limits=Limits(max_primes=2, **QUICK))
    assert report.complete_over_closure is None
    assert report.complete_over_base is None
    assert report.limit is not None
    assert check_twenty(planes, limits=Limits(max_primes=3, **QUICK)).limit is None


def test_a_section_that_is_larger_modulo_the_first_prime() -> None:
    planes = twenty(QQ)
    space = congruent_space(span_of(QQ, planes), P, 1)
    report = examine(space)
    # Modulo the first prime it is that of the twenty planes; a random one is empty.
    assert report.hilbert_function == EMPTY
    assert report.projective_dimension == -1
    assert report.complete_over_closure is True
    at_one = examine(space, limits=Limits(max_primes=1, **QUICK))
    assert at_one.complete_over_closure in (True, None)
    assert at_one.projective_dimension in (-1, None)


def test_a_section_that_is_infinite_modulo_the_first_prime() -> None:
    for family in examples.families()[3:]:
        space = congruent_space(family.lagrangian(QQ), P, 2)
        modulo = [[prime_field(P).element(x) for x in row] for row in space.rows]
        infinite = macaulay.section_hilbert(prime_field(P), modulo, 6, 3)
        assert infinite == tuple(family.hilbert(d) for d in range(4))
        # A prime that has nothing to do with the construction tells what is true over ℚ.
        elsewhere = [[OTHER.element(x) for x in row] for row in space.rows]
        literal = macaulay.section_hilbert(OTHER, elsewhere, 6, 4)
        report = examine(space)
        assert report.hilbert_function is not None
        assert report.hilbert_function[:5] == literal
        assert report.projective_dimension is not None
        assert report.projective_dimension < family.dimension
        assert report.complete_over_closure is (report.degree == 0)


def test_a_plane_that_is_all_over_q_but_not_modulo_the_first_prime() -> None:
    # Four planes of the twenty and six random vectors, the same as the twenty modulo P.
    planes = twenty(QQ)
    kept = [planes[i] for i in (0, 5, 10, 15)]
    rows = [plane.plucker for plane in kept]
    rng = Random(3)
    space = span_of(QQ, planes)
    for row in space.rows:
        moved = [x + P * rng.randint(-3, 3) for x in row]
        if dimension_modulo_the_first_prime([*rows, row]) == len(rows) + 1:
            rows = [*rows, moved]
    moved_space = Subspace.span(QQ, 6, rows)
    assert moved_space.dimension == 10
    assert all(x.q % P for row in moved_space.rows for x in row)
    report = examine(moved_space, kept)
    assert report.degree == 4
    assert report.complete_over_closure is True
    assert report.multiplicities == (1, 1, 1, 1)
    literal_rows = [[OTHER.element(x) for x in row] for row in moved_space.rows]
    assert macaulay.section_hilbert(OTHER, literal_rows, 6, 4)[4] == 4


def dimension_modulo_the_first_prime(rows: list[Any]) -> int:
    field = prime_field(P)
    return Subspace.span(field, 6, [[field.element(x) for x in row] for row in rows]).dimension


def test_the_hilbert_function_over_q_is_not_the_one_modulo_the_first_prime() -> None:
    # e012 alone both times, which one prime proves; but H(2) is larger modulo that prime.
    terms = [
        {(0, 1, 2): 1},
        {(0, 1, 3): 1, (0, 3, 5): -1, (3, 4, 5): -1},
        {(0, 1, 5): -1, (0, 4, 5): -1, (1, 3, 4): -1},
        {(0, 3, 4): 1, (0, 4, 5): -1, (1, 3, 5): 1, (1, 4, 5): -1},
    ]
    rows = [examples.trivector_row(row) for row in terms]
    start = Subspace.span(QQ, 6, rows)
    space = congruent_space(start, P, 4, kept=1)
    assert space.rows[0] == start.rows[0]
    modulo = prime_field(P)
    reduced = Subspace.span(modulo, 6, rows)
    assert macaulay.section_hilbert(modulo, reduced.rows, 6, 4) == (1, 4, 2, 1, 1)
    literal = macaulay.section_hilbert(QQ, space.rows, 6, 4)
    assert literal == (1, 4, 1, 1, 1)
    (plane,) = examples.over(QQ, [[examples.unit(i) for i in range(3)]])
    report = examine(space, [plane])
    assert report.complete_over_closure is True
    assert report.hilbert_function is not None
    assert report.hilbert_function == literal[: len(report.hilbert_function)]


def test_a_single_plane_that_is_there_modulo_the_first_prime_only() -> None:
    # H = 1, 10, 20, 10, 1, 1, … modulo the first prime and 1, 10, 20, 10, 1, 0 over ℚ: the
    # same in degree 4, where the former begins to be constant.
    rng = Random(9)
    (plane,) = examples.over(QQ, [[examples.unit(i) for i in range(3)]])
    others = [[QQ.element(rng.randint(-1, 1)) for _ in range(20)] for _ in range(9)]
    reduced = [[prime_field(P).element(x) for x in row] for row in [plane.plucker, *others]]
    assert examine(Subspace.span(prime_field(P), 6, reduced)).hilbert_function == (
        *(1, 10, 20, 10),
        *(1, 1),
    )
    moved = [x + P * QQ.element(rng.randint(-1, 1)) for x in plane.plucker]
    report = examine(Subspace.span(QQ, 6, [moved, *others]))
    assert report.hilbert_function == EMPTY
    assert report.projective_dimension == -1
    assert report.complete_over_closure is True


def test_nothing_is_said_to_be_finite_and_nonempty_on_the_word_of_one_prime() -> None:
    # Modulo the first prime twenty planes; over ℚ none. The coordinates are such that the
    # matrix over ℚ is wider than the limit and the one modulo the prime is not.
    rng = Random(1)
    g = [[QQ.element(rng.randrange(-4, 5)) for _ in range(6)] for _ in range(6)]
    moved = [examples.image(QQ, g, plane) for plane in twenty(QQ)]
    basis = QQ.integral_basis(span_of(QQ, moved).rows)
    last = basis[9]
    weights = [1, -1, 2, 1, 3, -2, 1, 2, -1]
    rows = [
        [a + weight * b for a, b in zip(row, last, strict=True)]
        for row, weight in zip(basis[:9], weights, strict=True)
    ]
    rows.append([x + P * rng.randrange(-3, 4) for x in last])
    space = Subspace.span(QQ, 6, rows)
    assert examine(space).projective_dimension == -1
    for columns in range(100, 140, 4):
        report = examine(space, limits=Limits(max_columns=columns, max_primes=1, **QUICK))
        assert report.projective_dimension in (-1, None)
        assert report.complete_over_closure in (True, None)
        assert report.infinite in (False, None)


# Limits


ALL_LIMITS = [
    *(Limits(max_degree=d, **QUICK) for d in range(1, 6)),
    *(Limits(max_columns=c, **QUICK) for c in (1, 54, 55, 107, 108, 137, 138, 400)),
    Limits(max_degree=3, max_columns=55, **QUICK),
    Limits(max_primes=1, **QUICK),
    Limits(),
]


@pytest.mark.parametrize("field", [QQ, F7], ids=str)
@pytest.mark.parametrize("left_out", [0, 2])
def test_a_limit_makes_the_answer_undecided_and_never_wrong(field: Field, left_out: int) -> None:
    planes = twenty(field)
    space = span_of(field, planes)
    truth = left_out == 0
    answers = []
    for limits in ALL_LIMITS:
        report = examine(space, planes[left_out:], limits=limits)
        answers.append(report.complete_over_closure)
        assert report.complete_over_closure in (truth, None)
        assert report.complete_over_base in (truth, None)
        assert report.projective_dimension in (0, None)
        assert report.degree in (20, None)
        assert report.infinite in (False, None)
        assert report.further in (left_out, None)
        if report.complete_over_closure is None:
            assert report.limit
            assert not report.exhaustive
    assert answers[0] is None  # degree 1 says nothing
    assert answers[5] is None  # nor does one column
    assert answers[-1] is truth


@pytest.mark.parametrize("field", [QQ, F7], ids=str)
def test_an_infinite_section_is_never_called_finite_whatever_the_limits(field: Field) -> None:
    family = examples.families()[3]
    space = family.lagrangian(field)
    plane = family.random_plane(field, Random(1))
    for limits in (ALL_LIMITS[1], ALL_LIMITS[2], ALL_LIMITS[6]):
        report = examine(space, [plane], limits=limits)
        assert report.infinite in (True, None)
        assert report.complete_over_closure in (False, None)
        assert report.projective_dimension in (3, None)
        assert report.degree in (8, None)


def test_the_limit_that_was_hit_is_named() -> None:
    space = span_of(F7, twenty(F7))
    assert "degree 2" in str(examine(space, limits=Limits(max_degree=2)).limit)
    assert "more than 30" in str(examine(space, limits=Limits(max_columns=30)).limit)


def test_a_linear_space_of_dimension_twelve_is_infinite_before_any_matrix() -> None:
    # classical: projective dimension theorem
    space = examples.random_subspace(QQ, 6, 12, Random(12))
    report = examine(space, limits=Limits(max_columns=1, **QUICK))
    assert report.infinite is True
    assert report.complete_over_closure is False


@pytest.mark.long
def test_a_general_section_of_length_42_over_q_with_the_usual_limits() -> None:
    # classical: 42 planes over the closure
    space = examples.random_subspace(QQ, 6, 11, Random(11))
    report = examine(space, limits=Limits())
    assert (report.projective_dimension, report.degree, report.further) == (0, 42, 42)
    assert report.complete_over_closure is False


@pytest.mark.parametrize("field", [QQ, F101], ids=str)
def test_a_linear_space_of_dimension_eleven_is_not_infinite_for_that_reason(field: Field) -> None:
    # classical: the expected dimension is 0, and a general section has 42 planes
    space = examples.random_subspace(field, 6, 11, Random(11))
    report = examine(space, limits=Limits(max_columns=1, **QUICK))
    assert report.infinite in (False, None)
    assert report.complete_over_closure in (False, None)


@pytest.mark.parametrize("field", [F101, LARGE], ids=str)
@pytest.mark.parametrize("dimension", [11, 12])
def test_a_section_that_is_larger_than_expected_by_one_dimension_is_not_called_proper(
    field: Field, dimension: int
) -> None:
    # Planes through a line form a P^i, H = C(d+i, i) (classical). Random trivectors are added
    # up to the dimension in which a general section is a P^(i−1)'s worth of planes, or points.
    count = dimension - 9
    line = [examples.unit(0), examples.unit(1)]
    planes = examples.over(field, [[*line, examples.unit(2 + i)] for i in range(count)])
    others = examples.random_rows(field, dimension - count, 20, Random(5))
    space = Subspace.span(field, 6, [*(plane.plucker for plane in planes), *others])
    assert space.dimension == dimension
    report = examine(space, planes, limits=Limits(max_points=500))
    assert report.infinite is True
    assert report.projective_dimension in (count - 1, None)
    assert report.degree in (1, None)
    assert report.complete_over_closure is False
    literal = macaulay.section_hilbert(field, space.rows, 6, 3)
    assert report.hilbert_function is None or report.hilbert_function[:4] == literal


# As many planes as H says, and yet not all


@pytest.mark.parametrize("field", [QQ, F7, F101, LARGE], ids=str)
@pytest.mark.parametrize("degree", [2, 3, 4])
def test_planes_of_a_pencil_or_a_twisted_cubic_that_fill_h_are_not_complete(
    field: Field, degree: int
) -> None:
    # H(d) = d + 1 and 3d + 1 (classical). So many planes impose that many conditions on forms
    # of degree d, but not on forms of degree d − 1; the theorem needs the latter.
    pencil = [[examples.unit(0), examples.unit(1), [0, 0, 1, t, 0, 0]] for t in range(degree + 1)]
    count = 3 * degree + 1
    if field.order is None or field.order > count:
        cubic = [[[1, 0, 0, t, 0, 0], [0, 1, 0, 0, t, 0], [0, 0, 1, 0, 0, t]] for t in range(count)]
    else:
        cubic = []
    for rows, dimension in ((pencil, 2), (cubic, 4)):
        if rows:
            planes = examples.over(field, rows)
            space = span_of(field, planes)
            assert space.dimension == dimension
            assert macaulay.section_hilbert(field, space.rows, 6, degree)[degree] == len(rows)
            report = examine(space, planes)
            assert report.infinite is True
            assert report.complete_over_closure is False


@pytest.mark.parametrize("family", examples.families()[3:], ids=str)
def test_planes_of_a_family_that_fill_h_are_not_complete(family: examples.Family) -> None:
    # 35 and 28 general members impose that many conditions on quadrics, ten on linear forms.
    rng = Random(6)
    space = family.lagrangian(F101)
    planes: list[Plane] = []
    while len(planes) < family.hilbert(2):
        plane = family.random_plane(F101, rng)
        if plane not in planes:
            planes.append(plane)
    report = examine(space, planes)
    assert report.infinite is True
    assert report.complete_over_closure is False


# Seeds, coordinates, what is handed over


@pytest.mark.parametrize("field", [QQ, F3], ids=str)
def test_the_same_seed_gives_the_same_report(field: Field) -> None:
    planes = twenty(field)
    space = span_of(field, planes)
    for known in (planes, planes[2:], ()):
        first, second = (examine(space, known, seed=7) for _ in range(2))
        assert first.to_json() == second.to_json()


@pytest.mark.parametrize("field", [QQ, F3], ids=str)
def test_other_seeds_give_the_same_answers(field: Field) -> None:
    planes = twenty(field)
    space = span_of(field, planes)
    answers = {
        (r.complete_over_closure, r.degree, r.hilbert_function, r.further)
        for r in (examine(space, planes[2:], seed=seed) for seed in range(4))
    }
    assert answers == {(False, 20, (1, 10, 20, 20), 2)}


@draws.few
@given(data=st.data(), seed=st.integers(0, 2**32))
@pytest.mark.parametrize("field", [QQ, F3, F7, LARGE], ids=str)
def test_collineations_do_not_change_the_report(
    field: Field, data: st.DataObject, seed: int
) -> None:
    space, planes = examples.fat_space(field, [0, 1, 2], Random(seed))
    g = data.draw(draws.invertible_matrices(field, 6))
    moved = examples.image_of_space(field, g, space)
    images = [examples.image(field, g, plane) for plane in planes]
    first, second = examine(space, planes[:2]), examine(moved, images[:2])
    assert first.multiplicities is None or sorted(map(str, first.multiplicities)) == sorted(
        map(str, second.multiplicities or ())
    )
    for name in ("projective_dimension", "degree", "hilbert_function", "further", "infinite"):
        assert getattr(first, name) == getattr(second, name)
    assert first.complete_over_closure == second.complete_over_closure


def test_repeated_known_planes_count_once() -> None:
    planes = twenty(F7)
    report = examine(span_of(F7, planes), planes + planes[:3])
    assert len(report.known) == 20
    assert report.complete_over_closure is True


def test_known_planes_must_lie_in_the_section() -> None:
    planes = twenty(QQ)
    space = span_of(QQ, planes)
    with pytest.raises(UsageError, match="plane 1 does not lie in the section"):
        examine(space, [planes[0], examples.over(QQ, examples.moved_twenty())[0]])
    with pytest.raises(MixedFieldsError, match="F_7"):
        examine(space, twenty(F7))


def test_progress_is_reported_before_large_matrices() -> None:
    lines: list[str] = []
    planes = twenty(QQ)
    examine(span_of(QQ, planes), planes[1:], on_progress=lines.append)
    assert any("degree 3" in line and "matrix" in line for line in lines)


# The report as data


@pytest.mark.parametrize("field", [QQ, F3], ids=str)
def test_a_section_report_has_the_keys_of_the_format(field: Field) -> None:
    planes = twenty(field)
    space = span_of(field, planes)
    lines = examples.over(
        field,
        [
            [examples.unit(0), examples.unit(1), examples.unit(2)],
            [examples.unit(0), examples.unit(1), examples.unit(3)],
        ],
    )
    for report in (
        examine(space, planes),
        examine(space, planes[1:]),
        examine(span_of(field, lines), lines),
        examine(examples.cyclic_lagrangian(field)),
        examine(space, planes, limits=Limits(max_degree=1)),
    ):
        data = json.loads(json.dumps(report.to_json()))
        assert set(data) >= SECTION_KEYS
        assert set(data["subspace"]) >= {"dimension", "isotropic", "lagrangian"}


def test_the_closed_points_of_the_twenty_planes_are_all_of_degree_one() -> None:
    planes = twenty(F5)
    data = examine(span_of(F5, planes), planes).to_json()
    assert data["planes_over_base"] == data["planes_over_closure"] == 20
    assert data["subspace"] == {"dimension": 10, "isotropic": True, "lagrangian": True}
    points = data["closed_points"]
    assert [(p["degree"], p["multiplicity"], p["residue_field"]) for p in points] == [
        (1, 1, "F_5")
    ] * 20
    assert [p["plane"] for p in points] == data["planes"]
    keys = [Plane.from_rows(F5, rows).sort_key() for rows in data["planes"]]
    assert all(a < b for a, b in pairwise(keys))
