"""The classical families and the single configurations, against formulas written elsewhere."""

from random import Random
from typing import Any

import examples
import oracle_f4
import pytest
import strategies

from trivector import Configuration, LinearSection, Plane, Subspace
from trivector.errors import DependentRowsError, DimensionError, FieldError, UsageError
from trivector.families import (
    CLASSICAL_FAMILIES,
    TWENTY_LABELS,
    ClassicalFamily,
    cyclic_lagrangian,
    image,
    random_change,
    seven_planes,
    twenty_planes,
    twenty_two_planes,
)
from trivector.fields import QQ, Field, field_from_spec, prime_field
from trivector.sections import count_rational_planes

FAMILIES = list(CLASSICAL_FAMILIES.values())
over_families = pytest.mark.parametrize("family", FAMILIES, ids=lambda family: family.name)


def literal(family: ClassicalFamily) -> examples.Family:
    """The same family as the tests have it."""
    return examples.families()[FAMILIES.index(family)]


# Numbers of planes. q odd: "classical" in the table of values (lines of P^4; 1 + q(q²+q+1)²;
# (q+1)(q²+1); q²+q+1). q even: computed by the brute force of `oracle_f4` over F_2 and F_4.


def expected_count(name: str, q: int) -> int:
    lines_of_p4 = (q**2 + 1) * (q**4 + q**3 + q**2 + q + 1)  # [5,2]_q
    in_lines = 1 + q * (q**2 + q + 1) ** 2
    return {
        "point": lines_of_p4,
        "hyperplane": lines_of_p4,
        "lines": in_lines,
        "ruling": (q + 1) * (q**2 + 1),
        "conics": q**2 + q + 1 + (q % 2 == 0),  # in characteristic 2 also the nucleus plane
        "tangents": q**2 + q + 1 if q % 2 else in_lines,  # all meet the nucleus plane in a line
    }[name]


ORDERS = [2, 3, 4, pytest.param(5, marks=pytest.mark.long)] + [
    pytest.param(q, marks=pytest.mark.long) for q in (7, 8, 9)
]


@over_families
@pytest.mark.parametrize("q", ORDERS)
def test_the_number_of_planes_of_the_lagrangian(family: ClassicalFamily, q: int) -> None:
    space = family.lagrangian(field_from_spec(f"F_{q}"))
    assert count_rational_planes(space) == expected_count(family.name, q)


@pytest.mark.parametrize("q", [5, 7])
@pytest.mark.parametrize("name", ["ruling", "conics"])
def test_the_smaller_families_over_larger_fields(name: str, q: int) -> None:
    space = CLASSICAL_FAMILIES[name].lagrangian(field_from_spec(f"F_{q}"))
    assert count_rational_planes(space) == expected_count(name, q)


@pytest.mark.parametrize("q", [2, 4])
@pytest.mark.parametrize("name", ["conics", "tangents"])
def test_in_characteristic_two_brute_force_finds_the_same_number(name: str, q: int) -> None:
    integers = literal(CLASSICAL_FAMILIES[name]).basis
    rows = [[x % 2 for x in row] for row in integers]
    assert len(oracle_f4.planes_in_span(q, rows)) == expected_count(name, q)


def test_in_characteristic_two_the_tangent_planes_meet_the_nucleus_plane_in_lines() -> None:
    for field in (prime_field(2), field_from_spec("F_8")):
        # The permutation that takes e0, e1, e2 to u_0u_1, u_0u_2, u_1u_2.
        g = [[int((i, j) in ((1, 0), (2, 1), (4, 2), (0, 3), (3, 4), (5, 5))) for j in range(6)]
             for i in range(6)]  # fmt: skip
        third = CLASSICAL_FAMILIES["lines"].lagrangian(field, change=g)
        assert CLASSICAL_FAMILIES["tangents"].lagrangian(field) == third


@over_families
@strategies.over_fields
def test_the_lagrangian_is_the_one_of_the_formula(family: ClassicalFamily, field: Field) -> None:
    space = family.lagrangian(field)
    assert space.is_lagrangian()
    assert space == literal(family).lagrangian(field)


@over_families
def test_the_hilbert_function_over_q(family: ClassicalFamily) -> None:
    report = LinearSection(family.lagrangian(QQ)).examine()
    expected = literal(family)
    assert report.hilbert_function is not None
    assert len(report.hilbert_function) >= 5
    for d, value in enumerate(report.hilbert_function):
        assert value == expected.hilbert(d)  # classical: G(2,5), cone over P²×P², P³, P²
    assert (report.projective_dimension, report.degree) == (expected.dimension, expected.degree)


@over_families
@strategies.over_fields
def test_members_lie_in_the_lagrangian_and_meet(family: ClassicalFamily, field: Field) -> None:
    planes = family.random_planes(field, 7, Random(1))
    space = family.lagrangian(field)
    assert len(set(planes)) == 7
    assert all(space.contains(plane.plucker) for plane in planes)
    assert all(p.is_incident(q) for p in planes for q in planes)


@over_families
@pytest.mark.parametrize("q", [2, 3])
def test_all_members_are_drawn_and_no_more_are_promised(family: ClassicalFamily, q: int) -> None:
    field = prime_field(q)
    count = family.count(q)
    planes = set(family.random_planes(field, count, Random(1)))
    if q % 2 or family.name not in ("conics", "tangents"):
        assert count == expected_count(family.name, q)
    members = {literal(family).random_plane(field, Random(seed)) for seed in range(300)}
    assert members <= planes
    with pytest.raises(FieldError, match=f"there are only {count}"):
        family.random_planes(field, count + 1, Random(1))


@over_families
def test_over_q_members_do_not_run_out(family: ClassicalFamily) -> None:
    assert len(set(family.random_planes(QQ, 60, Random(2), height=1))) == 60


def test_no_members_are_refused() -> None:
    with pytest.raises(UsageError, match="at least 1, not 0"):
        FAMILIES[0].random_planes(QQ, 0, Random(1))


def test_the_same_seed_gives_the_same_members() -> None:
    made = [FAMILIES[3].random_planes(prime_field(101), 3, Random(4)) for _ in range(2)]
    assert made[0] == made[1]
    assert [plane.to_entries()[0][3:] for plane in made[0]] == PINNED_ROWS


PINNED_ROWS = [[0, 30, 77], [0, 79, 38], [0, 34, 82]]


# Changes of coordinates


@strategies.over_fields
def test_a_change_moves_planes_and_spaces_as_the_literal_one(field: Field) -> None:
    g = random_change(field, Random(7))
    family = CLASSICAL_FAMILIES["ruling"]
    space, plane = family.lagrangian(field), family.random_plane(field, Random(1))
    moved = family.lagrangian(field, change=g)
    assert moved == image(g, space) == examples.image_of_space(field, g, space)
    assert type(moved) is type(space)
    assert image(g, plane) == examples.image(field, g, plane)
    assert family.random_plane(field, Random(1), change=g) == image(g, plane)
    assert family.random_planes(field, 2, Random(1), change=g)[0] == image(g, plane)
    assert moved.contains(image(g, plane).plucker)


def test_a_change_that_is_none_is_refused() -> None:
    plane = twenty_planes(QQ)[0]
    with pytest.raises(DependentRowsError, match="invertible"):
        image([[1] * 6] * 6, plane)
    with pytest.raises(DimensionError, match="6×6"):
        image([[1] * 7] * 7, plane)
    zero = Subspace.span(QQ, 6, [])
    assert image([[int(i == j) for j in range(6)] for i in range(6)], zero) == zero


def test_random_changes_reach_all_of_gl2_over_f2_and_f3_equally() -> None:
    # |GL_2(F_2)| = 6, |GL_2(F_3)| = 48 (classical); chi-squared, five standard deviations.
    for q, order in ((2, 6), (3, 48)):
        counts: dict[Any, int] = {}
        rng = Random(1)
        draws = 60 * order
        for _ in range(draws):
            g = random_change(prime_field(q), rng, n=2)
            counts[g] = counts.get(g, 0) + 1
        assert len(counts) == order
        chi = sum((n - 60) ** 2 / 60 for n in counts.values())
        assert chi < order - 1 + 5 * (2 * (order - 1)) ** 0.5


# Single configurations


def test_the_twenty_planes_are_those_of_the_formula() -> None:
    for field in strategies.ODD_FIELDS:
        assert list(twenty_planes(field)) == examples.over(field, examples.twenty_planes())
    assert len(set(TWENTY_LABELS)) == 20


@pytest.mark.parametrize("p", [3, 5, 7])
def test_the_twenty_planes_are_all_in_their_lagrangian(p: int) -> None:
    # Computed: exactly 20 planes over F_3, F_5, F_7.
    space = Configuration(twenty_planes(prime_field(p))).span()
    assert space.is_lagrangian()
    assert count_rational_planes(space) == 20


def test_the_twenty_planes_are_refused_in_characteristic_two() -> None:
    with pytest.raises(FieldError, match="over F_4, where 1 = −1"):
        twenty_planes(field_from_spec("F_4"))


@strategies.over_fields
def test_the_seven_planes_are_the_lines_of_the_fano_plane(field: Field) -> None:
    assert list(seven_planes(field)) == examples.over(field, examples.seven_planes())


@strategies.over_fields
def test_the_cyclic_lagrangian_is_the_one_of_the_formula(field: Field) -> None:
    assert cyclic_lagrangian(field) == examples.cyclic_lagrangian(field)
    assert cyclic_lagrangian(field).is_lagrangian()


# Twenty-two planes


def codes(plane: Plane) -> list[list[int]]:
    """The entries of a plane over F_4 as codes of the oracle: a is 2."""
    values = {"0": 0, "1": 1, "a": 2, "a+1": 3}
    return [[values[str(x)] for x in row] for row in plane.to_entries()]


def test_the_twenty_two_planes_are_a_dual_hyperoval_of_isotropic_planes() -> None:
    """ "On 2-dimensional dual hyperovals of polar type"."""
    add, multiply = (table.tolist() for table in oracle_f4.tables(4))
    isotropic = {tuple(map(tuple, rows)) for rows in oracle_f4.isotropic_planes().tolist()}
    planes = [codes(plane) for plane in twenty_two_planes(field_from_spec("F_4"))]
    assert len({tuple(map(tuple, rows)) for rows in planes}) == 22
    points: dict[tuple[int, ...], int] = {}
    for rows in planes:
        assert tuple(map(tuple, rows)) in isotropic
        for x, y, z in (v for v in oracle_f4.product(range(4), repeat=3) if any(v)):
            vector = tuple(
                add[add[multiply[x][a]][multiply[y][b]]][multiply[z][c]]
                for a, b, c in zip(*rows, strict=True)
            )
            points[vector] = points.get(vector, 0) + 1
    assert set(points.values()) == {2}
    assert len(points) == 3 * 22 * 21 // 2  # vectors; every two planes share one point


def test_the_span_of_the_twenty_two_is_lagrangian_with_exactly_these_planes() -> None:
    # Computed.
    planes = twenty_two_planes(field_from_spec("F_4"))
    space = Configuration(planes).span()
    assert space.is_lagrangian()
    assert space.is_totally_singular()
    found = oracle_f4.planes_in_span(
        4, [[{"0": 0, "1": 1, "a": 2, "a+1": 3}[str(x)] for x in row] for row in space.to_entries()]
    )
    assert found == {tuple(map(tuple, codes(plane))) for plane in planes}


def test_the_twenty_two_exist_over_every_field_that_contains_f4() -> None:
    for name in ("F_16", "F_64"):
        planes = twenty_two_planes(field_from_spec(name))
        assert len(set(planes)) == 22
        assert all(p.is_incident(q) for p in planes for q in planes)
    for field in (QQ, prime_field(2), field_from_spec("F_8"), prime_field(7)):
        with pytest.raises(FieldError, match="contains F_4"):
            twenty_two_planes(field)
