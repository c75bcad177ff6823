"""All points of a finite section, over every field, without knowing any plane."""

from collections import Counter
from collections.abc import Sequence
from functools import cache
from itertools import combinations
from math import gcd
from random import Random
from typing import Any

import examples
import oracle
import oracle_f4
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

from trivector.fields import QQ, Field, field_from_spec, finite_field, prime_field
from trivector.sections import ClosedPoint, LinearSection, SectionReport
from trivector.sections.commuting import joint_eigenvalues, restrict
from trivector.sections.sweep import count_rational_planes, iter_rational_planes
from trivector.subspaces import Plane, Subspace

F2, F3, F7, F11 = (prime_field(p) for p in (2, 3, 7, 11))
F4 = finite_field(4)
GAUSSIAN = field_from_spec({"modulus": "x^2+1"})


# What every answer must satisfy


def embedding(field: Any, extension: Any) -> Any:
    """The map of the field into a residue field: a goes to the first root of its modulus.

    By trying all elements of the extension that lie in a copy of the field.
    """
    if field in (extension, QQ) or field.order == field.characteristic:
        return lambda x: extension.element(int(x) if field.order else x)
    modulus = [extension.element(c) for c in field.modulus]
    factors = extension.factor(modulus)
    assert len(factors) == field.degree
    root = min((-f[0] for f, _ in factors), key=extension.sort_key)

    def embed(x: Any) -> Any:
        total = extension.zero
        for coefficient in reversed(field.coefficients(x)):
            total = total * root + coefficient
        return total

    return embed


def literal_plucker(rows: Sequence[Sequence[Any]]) -> list[Any]:
    a, b, c = rows
    return [
        a[i] * (b[j] * c[k] - b[k] * c[j])
        - a[j] * (b[i] * c[k] - b[k] * c[i])
        + a[k] * (b[i] * c[j] - b[j] * c[i])
        for i, j, k in combinations(range(len(a)), 3)
    ]


def assert_lies_in(space: Subspace, point: ClosedPoint) -> None:
    """A plane of rank 3 whose minors are the combination of the rows of L that they must be."""
    field, rows = point.residue_field, point.rows
    assert field is not None
    assert rows is not None
    vector = literal_plucker(rows)
    assert any(vector)
    embed = field.element if field == space.field else embedding(space.field, field)
    for row in space.rows:
        pivot = next(j for j, x in enumerate(row) if x)
        factor = vector[pivot]
        if factor:
            vector = [x - factor * embed(y) if y else x for x, y in zip(vector, row, strict=True)]
    assert not any(vector)


def is_generated(field: Any, extension: Any, degree: int, rows: Sequence[Sequence[Any]]) -> bool:
    """Whether no smaller field than the residue field holds the reduced rows of the plane."""
    q = field.order
    return all(
        any(x ** (q**smaller) != x for row in rows for x in row)
        for smaller in range(1, degree)
        if degree % smaller == 0
    )


def assert_accounts_for_everything(space: Subspace, report: SectionReport) -> None:
    points = report.points
    assert report.infinite is False
    assert points is not None
    assert sum(point.degree * point.multiplicity for point in points) == report.degree
    assert report.planes_over_closure == sum(point.degree for point in points)
    assert report.exhaustive
    assert report.reduced == all(point.multiplicity == 1 for point in points)
    assert [p.degree for p in points] == sorted(p.degree for p in points)
    planes = [point.plane for point in points if point.degree == 1]
    assert report.planes == tuple(planes)
    assert planes == sorted(planes, key=Plane.sort_key)
    for point in points:
        assert_lies_in(space, point)
        extension, order = point.residue_field, space.field.order
        if order is not None and extension is not None and point.rows is not None:
            assert extension.order == order**point.degree
            assert is_generated(space.field, extension, point.degree, point.rows)


def degrees(report: SectionReport) -> Counter[tuple[int, int]]:
    assert report.points is not None
    return Counter((point.degree, point.multiplicity) for point in report.points)


# Brute force over F_2, F_3 and F_4


def planted(field: Any, dimension: int, rng: Random) -> Subspace:
    """A space of the dimension with 0 … 4 planes planted, some of them incident."""
    while True:
        common = examples.random_rows(field, 1, 6, rng)
        rows: list[Sequence[Any]] = []
        for _ in range(rng.randint(0, 4)):
            first = common if rng.random() < 0.4 else examples.random_rows(field, 1, 6, rng)
            plane = [*first, *examples.random_rows(field, 2, 6, rng)]
            if field.matrix(plane, 6).rank() == 3:
                rows.append(literal_plucker(plane))
        rows += examples.random_rows(field, dimension - len(rows), 20, rng)
        space = Subspace.span(field, 6, rows)
        if space.dimension == dimension:
            return space


def brute_force(space: Subspace) -> set[Plane]:
    field: Any = space.field
    rows = [[field.sort_key(x) for x in row] for row in space.rows]
    elements = [field.from_code(code) for code in range(field.order)]
    return {
        Plane.from_rows(field, [[elements[code] for code in row] for row in plane])
        for plane in oracle_f4.planes_in_span(field.order, rows)
    }


def check_against_brute_force(q: int, dimension: int, seed: int) -> None:
    field = field_from_spec(f"F_{q}")
    space = planted(field, dimension, Random(1000 * q + 10 * dimension + seed))
    report = LinearSection(space).examine()
    assert report.planes is not None
    assert set(report.planes) == brute_force(space)
    assert list(report.planes) == sorted(set(report.planes), key=Plane.sort_key)
    if report.infinite:
        assert report.points is None
        assert (report.degree is None) == (report.limit is not None)
    else:
        assert_accounts_for_everything(space, report)
        assert set(iter_rational_planes(space)) == set(report.planes)


def test_the_tables_of_the_brute_force_are_those_of_the_oracle() -> None:
    for q in (2, 3):
        rows, minors = oracle_f4.all_planes(q)
        everything = list(oracle.all_planes(q))
        found = dict(
            zip(
                (tuple(map(tuple, plane)) for plane in rows.tolist()),
                map(tuple, minors.tolist()),
                strict=True,
            )
        )
        assert set(found) == set(everything)
        for plane in everything[:: len(everything) // 200]:
            assert found[plane] == oracle.plucker(plane, q)
    assert len(oracle_f4.all_planes(4)[0]) == 376805  # [6,3]_4, classical


SOME_SUBSPACES = [
    *((2, dimension, seed) for dimension in (6, 7, 8, 9, 10, 13) for seed in range(3)),
    *((3, dimension, seed) for dimension in range(6, 15) for seed in range(2)),
    *((4, dimension, 0) for dimension in (6, 8, 9, 10, 12, 14)),
]
ALL_SUBSPACES = [
    (q, dimension, seed) for q in (2, 3, 4) for dimension in range(6, 15) for seed in range(9)
]
assert len(ALL_SUBSPACES) >= 200


@pytest.mark.parametrize(("q", "dimension", "seed"), SOME_SUBSPACES)
def test_the_planes_are_those_of_brute_force(q: int, dimension: int, seed: int) -> None:
    check_against_brute_force(q, dimension, seed)


@pytest.mark.long
@pytest.mark.parametrize(
    ("q", "dimension", "seed"), [case for case in ALL_SUBSPACES if case not in SOME_SUBSPACES]
)
def test_the_planes_are_those_of_brute_force_many_times(q: int, dimension: int, seed: int) -> None:
    check_against_brute_force(q, dimension, seed)


def check_against_the_sweep(p: int, dimension: int, seed: int) -> bool:
    space = planted(prime_field(p), dimension, Random(1000 * p + 10 * dimension + seed))
    report = LinearSection(space).examine()
    if report.infinite:
        return False
    assert_accounts_for_everything(space, report)
    assert list(report.planes or ()) == sorted(iter_rational_planes(space), key=Plane.sort_key)
    assert count_rational_planes(space) == len(report.planes or ())
    return True


@pytest.mark.parametrize("p", [5, 7, 13])
@pytest.mark.parametrize("dimension", [9, 10, 11])
def test_where_the_section_is_finite_the_sweep_finds_the_same(p: int, dimension: int) -> None:
    assert check_against_the_sweep(p, dimension, 0)


@pytest.mark.long
@pytest.mark.parametrize("p", [2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31])
@pytest.mark.parametrize("dimension", [7, 9, 10, 11])
def test_where_the_section_is_finite_the_sweep_finds_the_same_many_times(
    p: int, dimension: int
) -> None:
    assert sum(check_against_the_sweep(p, dimension, seed) for seed in range(1, 5)) >= 1


# Commuting matrices whose joint eigenvalues are known


def irreducible_polynomials(field: Any) -> dict[int, list[list[Any]]]:
    """Some monic irreducible polynomials by degree, constant term first (classical)."""
    if field == QQ:
        texts = {1: [[0, 1], [-2, 1], ["1/3", 1]], 2: [[1, 0, 1], [-2, 0, 1]], 3: [[-2, 0, 0, 1]]}
        return {
            degree: [[QQ.element(c) for c in polynomial] for polynomial in found]
            for degree, found in texts.items()
        }
    rng = Random(7)
    elements = [field.from_code(code) for code in range(field.order)]
    found = {1: [[-x, field.one] for x in elements[:3]], 2: [], 3: []}
    for degree in (2, 3):
        while not found[degree]:
            candidate = [*(field.random_element(rng) for _ in range(degree)), field.one]
            if all(value_at(field, candidate, x) for x in elements):
                found[degree].append(candidate)
    return found


def value_at(field: Any, coefficients: Sequence[Any], x: Any) -> Any:
    total = field.zero
    for coefficient in reversed(coefficients):
        total = total * x + coefficient
    return total


def companion(field: Any, polynomial: Sequence[Any]) -> list[list[Any]]:
    degree = len(polynomial) - 1
    rows = [[field.one if j == i + 1 else field.zero for j in range(degree)] for i in range(degree)]
    rows[-1] = [-c for c in polynomial[:-1]]
    return rows


def scaled(field: Any, size: int, x: Any) -> list[list[Any]]:
    return [[x if i == j else field.zero for j in range(size)] for i in range(size)]


def added(first: Any, second: Any) -> list[list[Any]]:
    return [[x + y for x, y in zip(a, b, strict=True)] for a, b in zip(first, second, strict=True)]


def kronecker(first: Any, second: Any) -> list[list[Any]]:
    return [[x * y for x in a for y in b] for a in first for b in second]


def nilpotent_pairs(field: Any, shape: str) -> tuple[Any, Any]:
    """The actions of x and y on k[x,y] modulo an ideal: local, of length 1, 2, 3 or 4."""
    bases = {
        "point": [(0, 0)],
        "x²": [(0, 0), (1, 0)],
        "x³": [(0, 0), (1, 0), (2, 0)],
        "(x,y)²": [(0, 0), (1, 0), (0, 1)],
        "x²,y²": [(0, 0), (1, 0), (0, 1), (1, 1)],
    }
    basis = bases[shape]

    def action(step: tuple[int, int]) -> list[list[Any]]:
        return [
            [field.one if (a + step[0], b + step[1]) == other else field.zero for other in basis]
            for a, b in basis
        ]

    return action((1, 0)), action((0, 1))


SHAPES = {"point": 1, "x²": 2, "x³": 3, "(x,y)²": 3, "x²,y²": 4}


def planted_point(
    field: Any, polynomial: Sequence[Any], second: Sequence[Any], shape: str
) -> tuple[list[Any], list[Any]]:
    """θ + x and p(θ) + y on k(θ)[x,y]/ideal, as matrices."""
    theta = companion(field, polynomial)
    size = len(theta)
    value = scaled(field, size, field.zero)
    for coefficient in reversed(second):
        value = added(draws.product(field, value, theta), scaled(field, size, coefficient))
    x, y = nilpotent_pairs(field, shape)
    one = scaled(field, len(x), field.one)
    unit = scaled(field, size, field.one)
    return (
        added(kronecker(theta, one), kronecker(unit, x)),
        added(kronecker(value, one), kronecker(unit, y)),
    )


def direct_sum(field: Any, blocks: Sequence[Any]) -> list[list[Any]]:
    total = sum(len(block) for block in blocks)
    rows, offset = [], 0
    for block in blocks:
        after = total - offset - len(block)
        rows += [[*[field.zero] * offset, *row, *[field.zero] * after] for row in block]
        offset += len(block)
    return rows


def inverse_of(field: Any, rows: Sequence[Sequence[Any]]) -> list[list[Any]]:
    size = len(rows)
    unit = scaled(field, size, field.one)
    reduced, _ = draws.literal_reduced(
        field, [[*a, *b] for a, b in zip(rows, unit, strict=True)], 2 * size
    )
    return [row[size:] for row in reduced]


def remainder(field: Any, coefficients: Sequence[Any], modulus: Sequence[Any]) -> list[Any]:
    rest, degree = list(coefficients), len(modulus) - 1
    while len(rest) > degree:
        leading = rest.pop()
        for i in range(degree):
            rest[len(rest) - degree + i] = rest[len(rest) - degree + i] - leading * modulus[i]
    return rest


def composed(field: Any, outer: Sequence[Any], inner: Sequence[Any], modulus: Any) -> list[Any]:
    """outer(inner(t)) modulo the modulus, padded."""
    total: list[Any] = [field.zero]
    for coefficient in reversed(outer):
        product = [field.zero] * (len(total) + len(inner) - 1)
        for i, a in enumerate(total):
            for j, b in enumerate(inner):
                product[i + j] = product[i + j] + a * b
        product[0] = product[0] + coefficient
        total = remainder(field, product, modulus)
    return [*total, *[field.zero] * (len(modulus) - 1 - len(total))]


PLANTED = [
    # (degree, which polynomial, second value, shape of the point)
    [(1, 0, 0, "point")],
    [(1, 0, 0, "x³")],
    [(1, 0, 0, "(x,y)²"), (1, 0, 1, "point")],
    [(2, 0, 0, "point")],
    [(2, 0, 0, "x²"), (2, 0, 1, "point")],
    [(1, 0, 0, "point"), (1, 0, 1, "point"), (1, 1, 0, "point"), (1, 1, 1, "point")],
    [(1, 0, 0, "x²,y²"), (2, 0, 1, "(x,y)²"), (3, 0, 0, "point")],
    [(1, 1, 0, "x²"), (1, 0, 0, "x²"), (2, 0, 0, "point"), (2, 0, 2, "point")],
    [(3, 0, 0, "x²"), (3, 0, 1, "x²"), (3, 0, 2, "point")],
]
EIGEN_FIELDS = [QQ, F2, F3, F4, F7, finite_field(9), prime_field(examples.FIRST_PRIME)]


def irreducibles(field: Any) -> dict[int, list[list[Any]]]:
    if field.order == examples.FIRST_PRIME:
        # −1 is no square and 2 no cube modulo 2^31 − 1 (classical: 2^31 − 1 = 3 modulo 4;
        # 2^((p−1)/3) ≠ 1, checked here).
        p = examples.FIRST_PRIME
        cube = next(c for c in range(2, 20) if pow(c, (p - 1) // 3, p) != 1)
        made = {1: [[0, 1], [5, 1]], 2: [[1, 0, 1]], 3: [[-cube, 0, 0, 1]]}
        return {d: [[field.element(c) for c in f] for f in fs] for d, fs in made.items()}
    return irreducible_polynomials(field)


@pytest.mark.parametrize("field", EIGEN_FIELDS, ids=lambda field: field.name)
@pytest.mark.parametrize("points", PLANTED, ids=str)
def test_joint_eigenvalues_are_the_planted_ones(field: Any, points: list[Any]) -> None:
    rng = Random(len(points))
    known = irreducibles(field)
    seconds = [[field.zero, field.one], [field.one, field.one], [field.one]]
    made = []
    for degree, which, second, shape in points:
        polynomial = known[degree][which % len(known[degree])]
        value = remainder(field, seconds[second], polynomial)
        made.append((polynomial, value, SHAPES[shape], shape))
    blocks = [planted_point(field, f, value, shape) for f, value, _, shape in made]
    first = direct_sum(field, [block[0] for block in blocks])
    second_matrix = direct_sum(field, [block[1] for block in blocks])
    size = len(first)
    change = examples.random_invertible(field, size, rng)
    back = inverse_of(field, change)
    matrices = [
        field.matrix(draws.product(field, draws.product(field, back, y), change), size)
        for y in (first, second_matrix)
    ]
    found = joint_eigenvalues(field, matrices, size, Random(1))
    assert len(found) == len(made)
    for polynomial, value, multiplicity, _ in made:
        # Exactly one of them has θ with polynomial(p_1(θ)) = 0 and p_2(θ) = value(p_1(θ)).
        matching = [
            e
            for e in found
            if not any(composed(field, polynomial, e.values[0], e.modulus))
            and composed(field, value, e.values[0], e.modulus)
            == [*e.values[1], *[field.zero] * (e.degree - len(e.values[1]))]
        ]
        assert len(matching) == 1
        assert matching[0].degree == len(polynomial) - 1
        assert matching[0].multiplicity == multiplicity


@pytest.mark.parametrize("field", [F2, F3, F4, QQ], ids=lambda field: field.name)
def test_no_matrices_of_size_zero_have_no_eigenvalues(field: Any) -> None:
    assert joint_eigenvalues(field, [], 0, Random(0)) == []


def test_matrices_restricted_to_a_stable_subspace() -> None:
    # (x, y, z)·Y of an upper triangular Y: the span of the last two unit vectors is stable.
    matrix = QQ.matrix(
        [[QQ.element(c) for c in row] for row in ([1, 2, 3], [0, 4, 5], [0, 0, 6])], 3
    )
    rows = [[QQ.element(c) for c in row] for row in ([0, 1, 1], [0, 1, -1])]
    (small,) = restrict(QQ, rows, [matrix])
    # (0,1,1)·Y = (0,4,11) = 15/2·(0,1,1) − 7/2·(0,1,−1); (0,1,−1)·Y = (0,4,−1) (by hand)
    expected = [["15/2", "-7/2"], ["3/2", "5/2"]]
    assert small.tolist() == [[QQ.element(c) for c in row] for row in expected]


# Sections that are known


def test_the_cyclic_lagrangian_modulo_2_has_points_of_degrees_2_10_and_10() -> None:
    # Computed: length 22, reduced, degrees 2, 10, 10 (checks.md).
    space = examples.cyclic_lagrangian(F2)
    report = LinearSection(space).examine()
    assert report.degree == 22
    assert degrees(report) == {(2, 1): 1, (10, 1): 2}
    assert report.planes == ()
    assert_accounts_for_everything(space, report)


def test_the_cyclic_lagrangian_over_f4_has_two_planes_and_four_points_of_degree_5() -> None:
    # A point of degree d over F_2 is gcd(d, 2) points of degree d/gcd(d, 2) over F_4 (classical).
    space = examples.cyclic_lagrangian(F4)
    report = LinearSection(space).examine()
    assert degrees(report) == {(1, 1): 2, (5, 1): 4}
    assert set(report.planes or ()) == brute_force(space)
    assert_accounts_for_everything(space, report)


def test_the_cyclic_lagrangian_modulo_11_has_one_plane_of_multiplicity_22() -> None:
    # Computed (checks.md).
    space = examples.cyclic_lagrangian(F11)
    report = LinearSection(space).examine()
    assert report.degree == 22
    assert degrees(report) == {(1, 22): 1}
    assert report.planes == (examples.plane_of_the_cyclic_lagrangian(F11),)
    assert report.reduced is False
    assert_accounts_for_everything(space, report)


def test_points_of_higher_degree_over_f4_lie_in_a_space_that_is_not_over_f2() -> None:
    # A general section of dimension 11 has length 42 = deg G(3,6) (classical). The plane
    # over F_{4^d} lies in L by the embedding that sends a to the first root of x² + x + 1.
    space = planted(F4, 11, Random(2))
    assert any(x * x != x for row in space.rows for x in row)
    report = LinearSection(space).examine()
    assert report.degree == 42
    assert max(degree for degree, _ in degrees(report)) > 1
    assert_accounts_for_everything(space, report)


def test_twenty_two_planes_over_f4_are_all_over_the_closure_too() -> None:
    # Existence, uniqueness: "On 2-dimensional dual hyperovals of polar type" (published);
    # that their span is Lagrangian and contains exactly these: computed.
    assert len(oracle_f4.isotropic_planes()) == 891  # (2+1)(8+1)(32+1), classical
    planes = [
        Plane.from_rows(F4, [[F4.from_code(code) for code in row] for row in plane])
        for plane in oracle_f4.twenty_two_planes()
    ]
    assert len(planes) == 22
    space = Subspace.span(F4, 6, [plane.plucker for plane in planes])
    assert space.is_lagrangian()
    report = LinearSection(space).examine()
    assert degrees(report) == {(1, 1): 22}
    assert report.degree == 22
    assert set(report.planes or ()) == set(planes)
    assert_accounts_for_everything(space, report)


@pytest.mark.parametrize("name", ["Q", "F_3", "F_7", "F_9", "F_4"])
def test_the_seven_planes_are_found_in_the_space_that_they_determine(name: str) -> None:
    # Published: "Pairwise incident planes and hyperkähler four-folds", 2012, arXiv 1204.6257.
    field = field_from_spec(name)
    planes = examples.over(field, examples.seven_planes())
    space = Subspace.span(field, 7, [plane.plucker for plane in planes]).orthogonal()
    report = LinearSection(space).examine()
    assert degrees(report) == {(1, 1): 7}
    assert set(report.planes or ()) == set(planes)
    assert_accounts_for_everything(space, report)


@pytest.mark.parametrize("name", ["Q", "F_3", "F_5", "F_7", "F_9", "F_2147483647"])
def test_the_twenty_planes_are_found_in_their_span(name: str) -> None:
    # Computed (checks.md); twenty is the maximum in characteristic 0:
    # "A very special EPW sextic and two IHS fourfolds", 2017, arXiv 1509.06214.
    field = field_from_spec(name)
    planes = examples.over(field, examples.twenty_planes())
    space = Subspace.span(field, 6, [plane.plucker for plane in planes])
    report = LinearSection(space).examine()
    assert degrees(report) == {(1, 1): 20}
    assert set(report.planes or ()) == set(planes)
    assert_accounts_for_everything(space, report)


# Over ℚ


def trace_rows(element_rows: Sequence[Sequence[Any]]) -> list[list[Any]]:
    """For Plücker vectors α + β·√d over ℚ(√d): the rational rows α and β."""
    rows = []
    for row in element_rows:
        pairs = [(x.value[0], x.value[1]) for x in row]
        rows += [[QQ.element(a) for a, _ in pairs], [QQ.element(b) for _, b in pairs]]
    return rows


def conjugate(field: Any, plane: Plane) -> Plane:
    a = field.element("a")
    return Plane.from_rows(
        field, [[field.element(x.value[0]) - a * x.value[1] for x in row] for row in plane.rows]
    )


def plane_meeting_its_conjugate(field: Any) -> Plane:
    """Through a rational point: (1,0,0,0,0,0), and rows with entries in ℚ(√d)."""
    return Plane.from_rows(
        field,
        [
            [1, 0, 0, 0, 0, 0],
            [0, 1, 1, "a", 0, "a+1"],
            [0, 0, "a", 1, "a-1", 2],
        ],
    )


def small_lagrangian_through(rows: Sequence[Sequence[Any]], rng: Random) -> Subspace:
    space = Subspace.span(QQ, 6, rows)
    assert space.is_isotropic()
    while space.dimension < 10:
        basis = QQ.integral_basis(space.orthogonal().rows)
        row = [QQ.zero] * 20
        for vector in basis:
            sign = rng.choice((1, 0, -1))
            row = [x + sign * QQ.element(y) for x, y in zip(row, vector, strict=True)]
        space = Subspace.span(QQ, 6, [*space.rows, row])
    assert space.is_lagrangian()
    return space


@pytest.mark.parametrize("d", [2, -1, 5])
def test_a_lagrangian_through_two_conjugate_planes_has_a_point_of_degree_2(d: int) -> None:
    field = field_from_spec({"modulus": f"x^2-{d}".replace("--", "+")})
    plane = plane_meeting_its_conjugate(field)
    assert plane.meet_dimension(conjugate(field, plane)) == 0
    space = small_lagrangian_through(trace_rows([plane.plucker]), Random(4))
    report = LinearSection(space).examine()
    assert report.infinite is False
    assert_accounts_for_everything(space, report)
    assert (2, 1) in degrees(report)
    (point,) = (p for p in report.points or () if p.degree == 2)
    # The residue field is ℚ(√d), and the plane the given one or its conjugate there.
    found: Any = point.residue_field
    assert found.degree == 2
    roots = [-f[0] for f, _ in found.factor([found.element(-d), found.zero, found.one])]
    assert len(roots) == 2
    images = {
        Plane.from_rows(
            found,
            [[found.element(x.value[0]) + root * x.value[1] for x in row] for row in plane.rows],
        )
        for root in roots
    }
    assert len(images) == 2
    assert point.plane in images


def test_one_plane_and_two_conjugate_ones() -> None:
    # By hand: the span of three Plücker vectors in general position meets G(3,6) in these
    # three points only.
    field = field_from_spec({"modulus": "x^2-2"})
    plane = plane_meeting_its_conjugate(field)
    rational = [[1, 1, 0, 2, 0, 1], [0, 1, 3, 0, 1, 0], [2, 0, 0, 1, 1, 1]]
    rows = [
        *trace_rows([plane.plucker]),
        literal_plucker([[QQ.element(x) for x in r] for r in rational]),
    ]
    space = Subspace.span(QQ, 6, rows)
    report = LinearSection(space).examine()
    assert_accounts_for_everything(space, report)
    assert degrees(report) == {(1, 1): 1, (2, 1): 1}
    assert report.planes == (Plane.from_rows(QQ, rational),)


@pytest.mark.parametrize("orders", [(1,), (2,), (1, 0), (2, 1), (1, 1, 1), (2, 0, 0)])
def test_a_point_with_multiplicity_over_the_rationals(orders: tuple[int, ...]) -> None:
    # The osculating spaces of a twisted cubic meet G(3,6) in one point of multiplicity
    # order + 1 (classical), and several in general position in these points only.
    space, planes = examples.fat_space(QQ, orders, Random(sum(orders)))
    report = LinearSection(space).examine()
    assert report.reduced is (max(orders) == 0)
    assert_accounts_for_everything(space, report)
    found = {point.plane: point.multiplicity for point in report.points or ()}
    assert found == {plane: order + 1 for plane, order in zip(planes, orders, strict=True)}


@pytest.mark.parametrize("name", ["F_2", "F_3", "F_4", "F_9", "F_2147483647"])
def test_points_with_multiplicity_over_finite_fields(name: str) -> None:
    field = field_from_spec(name)
    for orders in ((1,), (2,), (1, 0)):
        for seed in range(3):
            space, planes = examples.fat_space(field, orders, Random(seed))
            report = LinearSection(space).examine()
            if report.infinite:  # planes in special position
                continue
            assert_accounts_for_everything(space, report)
            found = {point.plane: point.multiplicity for point in report.points or ()}
            for plane, order in zip(planes, orders, strict=True):
                assert found[plane] >= order + 1


def test_conjugate_points_with_multiplicity_two() -> None:
    # Over ℚ(√2) the osculating line at a plane and its conjugate: two points of
    # multiplicity 2 (classical, as above), one closed point of degree 2 over ℚ.
    field = field_from_spec({"modulus": "x^2-2"})
    rng = Random(2)
    g = [
        [field.from_coefficients([rng.randint(-2, 2) for _ in range(2)]) for _ in range(6)]
        for _ in range(6)
    ]
    assert field.matrix(g, 6).det()
    line = examples.image_of_space(field, g, Subspace.span(field, 6, examples.osculating_rows(1)))
    space = Subspace.span(QQ, 6, trace_rows(line.rows))
    assert space.dimension == 4
    report = LinearSection(space).examine()
    assert degrees(report) == {(2, 2): 1}
    assert_accounts_for_everything(space, report)


@pytest.mark.long
def test_a_random_space_of_dimension_11_over_the_rationals_has_one_point_of_degree_42() -> None:
    # 42 = deg G(3,6) (classical). For this L the point is one by the factorisation modulo
    # primes: it could only split into points that are visible there.
    rng = Random(1)
    space = Subspace.span(QQ, 6, [[rng.choice((1, -1)) for _ in range(20)] for _ in range(11)])
    report = LinearSection(space).examine()
    assert report.degree == 42
    assert_accounts_for_everything(space, report)
    assert degrees(report) == {(42, 1): 1}
    (point,) = report.points or ()
    assert point.residue_field is not None
    spec = point.residue_field.to_spec()
    assert field_from_spec(spec).degree == 42


def test_a_space_of_dimension_11_over_the_rationals_splits_as_its_reductions_do() -> None:
    # Twenty planes and one more vector: length 42, of which 20 planes are known.
    planes = examples.over(QQ, examples.twenty_planes())
    rows = [plane.plucker for plane in planes]
    extra = [[1 if j == 0 else 0 for j in range(20)]]
    space = Subspace.span(QQ, 6, [*rows, *extra])
    assert space.dimension == 11
    report = LinearSection(space).examine()
    if report.infinite:
        assert report.degree is not None
    else:
        assert report.degree == 42
        assert_accounts_for_everything(space, report)
        assert set(planes) <= set(report.planes or ())


# Over number fields


def test_over_the_gaussian_numbers_planes_are_found_and_the_others_have_degrees() -> None:
    rows = [
        [[1, "a", 0, 0, 2, 0], [0, 1, 1, "a", 0, 0], [0, 0, "a+1", 0, 1, 1]],
        [["a", 0, 1, 0, 0, 0], [0, 2, 0, 1, "a", 0], [0, 0, 0, 1, 1, "-a"]],
    ]
    planes = examples.over(GAUSSIAN, rows)
    root = field_from_spec({"modulus": "x^2-2"})
    pair = plane_meeting_its_conjugate(root)
    traces = [[GAUSSIAN.element(x) for x in row] for row in trace_rows([pair.plucker])]
    space = Subspace.span(GAUSSIAN, 6, [*(p.plucker for p in planes), *traces])
    assert space.dimension == 4
    report = LinearSection(space).examine()
    # √2 is not in ℚ(i): two planes over ℚ(i), and a pair over ℚ(i, √2).
    assert report.degree == 4
    assert degrees(report) == {(1, 1): 2, (2, 1): 1}
    assert set(report.planes or ()) == set(planes)
    assert report.planes_over_closure == 4
    for point in report.points or ():
        if point.degree == 1:
            assert_lies_in(space, point)


def test_a_conjugate_pair_over_the_rationals_is_two_planes_over_the_gaussian_numbers() -> None:
    plane = plane_meeting_its_conjugate(GAUSSIAN)
    rows = trace_rows([plane.plucker])
    below = LinearSection(Subspace.span(QQ, 6, rows)).examine()
    assert degrees(below) == {(2, 1): 1}
    lifted = [[GAUSSIAN.element(x) for x in row] for row in rows]
    above = LinearSection(Subspace.span(GAUSSIAN, 6, lifted)).examine()
    assert set(above.planes or ()) == {plane, conjugate(GAUSSIAN, plane)}
    assert degrees(above) == {(1, 1): 2}


def test_the_twenty_planes_moved_over_the_gaussian_numbers_are_found() -> None:
    g = [[GAUSSIAN.element(int(i == j)) for j in range(6)] for i in range(6)]
    g[0][3], g[1][4], g[5][2] = (GAUSSIAN.element(x) for x in ("a", "a+1", "-a"))
    planes = [
        examples.image(GAUSSIAN, g, p) for p in examples.over(GAUSSIAN, examples.twenty_planes())
    ]
    space = Subspace.span(GAUSSIAN, 6, [plane.plucker for plane in planes])
    report = LinearSection(space).examine()
    assert report.degree == 20
    assert report.planes is None or set(report.planes) == set(planes)


# Laws


def small_space(field: Any, data: st.DataObject) -> Subspace:
    dimension = data.draw(st.integers(2, 10))
    return planted(field, dimension, Random(data.draw(st.integers(0, 10**6))))


def shape_of(report: SectionReport) -> Any:
    points = report.points
    return (
        report.projective_dimension,
        report.degree,
        report.hilbert_function,
        report.reduced,
        None if points is None else sorted((p.degree, p.multiplicity) for p in points),
    )


@pytest.mark.parametrize("field", [F2, F3, F7, F4], ids=lambda field: field.name)
@draws.few
@given(data=st.data())
def test_the_planes_move_with_the_space(field: Any, data: st.DataObject) -> None:
    space = small_space(field, data)
    g = data.draw(draws.invertible_matrices(field, 6))
    before = LinearSection(space).examine()
    after = LinearSection(examples.image_of_space(field, g, space)).examine()
    assert shape_of(before) == shape_of(after)
    assert before.planes is not None
    assert after.planes is not None
    assert {examples.image(field, g, plane) for plane in before.planes} == set(after.planes)


def test_the_planes_over_the_rationals_move_with_the_space() -> None:
    rng = Random(3)
    plane = plane_meeting_its_conjugate(field_from_spec({"modulus": "x^2-2"}))
    rational = Plane.from_rows(QQ, [[1, 1, 0, 2, 0, 1], [0, 1, 3, 0, 1, 0], [2, 0, 0, 1, 1, 1]])
    space = Subspace.span(QQ, 6, [*trace_rows([plane.plucker]), rational.plucker])
    g = [[QQ.element(rng.randint(-3, 3)) for _ in range(6)] for _ in range(6)]
    assert QQ.matrix(g, 6).det()
    before = LinearSection(space).examine()
    moved = examples.image_of_space(QQ, g, space)
    after = LinearSection(moved).examine()
    assert shape_of(before) == shape_of(after)
    assert after.planes == (examples.image(QQ, g, rational),)
    assert_accounts_for_everything(moved, after)


@pytest.mark.parametrize(
    ("field", "r"),
    [(F2, 2), (F2, 3), (F3, 2), (F7, 2), (F4, 2)],
    ids=lambda value: getattr(value, "name", str(value)),
)
@draws.few
@given(data=st.data())
def test_the_answers_over_a_field_lie_in_those_over_its_extensions(
    field: Any, r: int, data: st.DataObject
) -> None:
    # A point of degree d becomes gcd(d, r) points of degree d/gcd(d, r), with the same
    # multiplicity (classical: residue fields are perfect).
    dimension = data.draw(st.integers(2, 10))
    space = planted(field, dimension, Random(data.draw(st.integers(0, 10**6))))
    residue = field.extension(r)
    above = Subspace.span(residue.field, 6, [[residue.embed(x) for x in row] for row in space.rows])
    first, second = LinearSection(space).examine(), LinearSection(above).examine()
    assert first.projective_dimension == second.projective_dimension
    assert first.hilbert_function == second.hilbert_function
    assert first.degree == second.degree
    if first.points is not None:
        expected: Counter[tuple[int, int]] = Counter()
        for point in first.points:
            common = gcd(point.degree, r)
            expected[point.degree // common, point.multiplicity] += common
        assert degrees(second) == expected
    assert first.planes is not None
    embedded = {
        Plane.from_rows(residue.field, [[residue.embed(x) for x in row] for row in plane.rows])
        for plane in first.planes
    }
    if second.planes is not None:
        assert embedded <= set(second.planes)
        fixed = {
            plane
            for plane in second.planes
            if all(x**field.order == x for row in plane.rows for x in row)
        }
        assert fixed == embedded


@pytest.mark.parametrize("field", [F2, F3, F4, F7], ids=lambda field: field.name)
def test_another_seed_gives_the_same_points(field: Field) -> None:
    space = planted(field, 10, Random(12))
    reports = [LinearSection(space).examine(seed=seed) for seed in (0, 1, 2)]
    assert reports[0].infinite is False
    assert len({tuple((p.degree, p.multiplicity) for p in r.points or ()) for r in reports}) == 1
    assert len({r.planes for r in reports}) == 1


@cache
def section_over_the_closure(p: int) -> SectionReport:
    return LinearSection(examples.cyclic_lagrangian(prime_field(p))).examine()


@pytest.mark.parametrize("p", [2, 11])
def test_a_closed_point_is_written_with_the_field_that_it_needs(p: int) -> None:
    report = section_over_the_closure(p)
    for point, written in zip(report.points or (), report.to_json()["closed_points"], strict=True):
        field: Any = field_from_spec(written["residue_field"])
        assert field == point.residue_field
        plane = [[field.element(x) for x in row] for row in written["plane"]]
        assert tuple(map(tuple, plane)) == point.rows
        assert (written["degree"], written["multiplicity"]) == (point.degree, point.multiplicity)


def test_conjugate_planes_are_one_point() -> None:
    # The conjugates of the plane of a point of degree d are d planes, and none is shared.
    report = section_over_the_closure(2)
    seen = set()
    for point in report.points or ():
        field: Any = point.residue_field
        rows = [list(row) for row in point.rows or ()]
        orbit = set()
        for _ in range(point.degree):
            orbit.add(tuple(field.format(x) for row in rows for x in row))
            rows = [[x**2 for x in row] for row in rows]
        assert len(orbit) == point.degree
        assert not seen & {(field.name, o) for o in orbit}
        seen |= {(field.name, o) for o in orbit}


def test_points_in_the_plane_of_all_scalars() -> None:
    # Over F_2 no linear form misses all seven points of a Fano plane, and all are found: L of
    # dimension 3 inside v∧(∧²V) with only decomposables is infinite, so take the coordinates.
    rows = [
        [1 if triple == t else 0 for triple in examples.TRIPLES]
        for t in ((0, 1, 2), (0, 3, 4), (1, 3, 5), (2, 4, 5))
    ]
    for field in (F2, F3, F4, F7, QQ):
        space = Subspace.span(field, 6, rows)
        report = LinearSection(space).examine()
        assert_accounts_for_everything(space, report)
        # These four planes meet pairwise in a point, so no line joins two of them inside.
        assert degrees(report) == {(1, 1): 4}
