"""Invariants of subspaces that have no planes, or infinitely many."""

from itertools import combinations
from random import Random

import examples
import oracle
import pytest

from trivector.fields import QQ, prime_field
from trivector.sections import Limits
from trivector.subspaces import Subspace
from trivector.symmetry import compare_subspaces
from trivector.symmetry.subspace_invariants import hyperplane_dimensions, point_dimensions


def twenty(q: int) -> Subspace:
    return Subspace.span(
        prime_field(q),
        6,
        [p.plucker for p in examples.over(prime_field(q), examples.twenty_planes())],
    )


# checks.md, "points of P^5 by dim(A ∩ F_v)": computed
@pytest.mark.parametrize(
    ("name", "q", "counts"),
    [
        ("twenty", 3, {0: 198, 2: 150, 4: 16}),
        ("twenty", 5, {0: 3014, 1: 246, 2: 630, 4: 16}),
        ("cyclic", 2, {0: 32, 2: 31}),
        ("cyclic", 3, {0: 234, 1: 120, 2: 10}),
        ("cyclic", 5, {0: 3114, 1: 766, 2: 26}),
    ],
)
def test_points_by_the_dimension_there(name: str, q: int, counts: dict[int, int]) -> None:
    space = twenty(q) if name == "twenty" else examples.cyclic_lagrangian(prime_field(q))
    assert point_dimensions(space) == counts


def literal_counts(space: Subspace, q: int, n: int) -> tuple[dict[int, int], dict[int, int]]:
    """Every vector of L, and for each point v (hyperplane H) those killed by v∧ (by ι_f)."""
    rows = [[int(x) for x in row] for row in space.rows]
    points: dict[int, int] = {}
    hyperplanes: dict[int, int] = {}
    vectors = list(oracle.combinations_of(rows, q, len(rows[0])))
    triples = list(combinations(range(n), 3))
    for v in oracle.all_points(q, n):
        one = {(i,): x for i, x in enumerate(v) if x}
        killed = inside = 0
        for a in vectors:
            alpha = oracle.multivector(a, n, 3, q)
            killed += not oracle.wedge(one, alpha, q)
            contracted: dict[tuple[int, ...], int] = {}
            for triple, x in zip(triples, a, strict=True):
                for position in range(3):
                    rest = triple[:position] + triple[position + 1 :]
                    sign = (-1) ** position * v[triple[position]]
                    contracted[rest] = (contracted.get(rest, 0) + sign * x) % q
            inside += not any(contracted.values())
        for table, number in ((points, killed), (hyperplanes, inside)):
            dimension = next(d for d in range(len(rows) + 1) if q**d == number)
            table[dimension] = table.get(dimension, 0) + 1
    return dict(sorted(points.items())), dict(sorted(hyperplanes.items()))


@pytest.mark.parametrize(("n", "q", "dimension"), [(6, 2, 4), (6, 2, 6), (7, 2, 3), (6, 3, 2)])
def test_counts_are_those_of_all_vectors(n: int, q: int, dimension: int) -> None:
    # With a plane among the generators, so that more than one dimension occurs.
    k, rng = prime_field(q), Random(n * q + dimension)
    plane = examples.random_plane(k, n, rng).plucker
    rows = examples.random_rows(k, dimension - 1, len(plane), rng)
    space = Subspace.span(k, n, [plane, *rows])
    points, hyperplanes = literal_counts(space, q, n)
    assert len(points) > 1
    assert len(hyperplanes) > 1
    assert point_dimensions(space) == points
    assert hyperplane_dimensions(space) == hyperplanes


def test_they_are_not_counted_where_there_are_too_many() -> None:
    assert point_dimensions(twenty(7)) is None
    assert hyperplane_dimensions(Subspace.span(QQ, 6, [[1] + [0] * 19])) is None
    assert point_dimensions(Subspace.span(prime_field(2), 6, [])) == {0: 63}


NO_SWEEP = Limits(max_points=0)


@pytest.mark.long
def test_the_infinite_families_are_told_apart() -> None:
    k = prime_field(3)
    spaces = [family.lagrangian(k) for family in examples.families()]
    for first, second in combinations(spaces, 2):
        answer = compare_subspaces(first, second, limits=NO_SWEEP)
        assert answer.equivalent is False
        assert answer.difference
        assert answer.exit_code == 1


def test_planes_through_a_point_and_in_a_hyperplane_are_told_apart_over_the_closure() -> None:
    k = prime_field(3)
    point, hyperplane = (family.lagrangian(k) for family in examples.families()[:2])
    assert point_dimensions(point) != point_dimensions(hyperplane)
    answer = compare_subspaces(point, hyperplane, limits=NO_SWEEP)
    assert (answer.equivalent, answer.over_closure) == (False, False)
    # r = Hom(V/v, v) and Hom(V/H, H): image and kernel are v and v, H and H.
    assert str(answer.difference).endswith(": (1, 1) and (5, 5)")


def test_hilbert_functions_tell_infinite_sections_apart_over_the_closure() -> None:
    point, _, line, ruling, *_ = (family.lagrangian(QQ) for family in examples.families())
    for first, second in combinations((point, line, ruling), 2):
        answer = compare_subspaces(first, second)
        assert (answer.equivalent, answer.over_closure) == (False, False)
        assert answer.difference


def test_lagrangians_without_planes_are_told_apart_by_their_points() -> None:
    k, rng = prime_field(3), Random(5)
    cyclic = examples.cyclic_lagrangian(k)
    while True:
        other = examples.lagrangian_through(k, [], rng)
        answer = compare_subspaces(cyclic, other)
        if answer.difference and answer.difference.startswith("points over F_3"):
            break
    assert (answer.equivalent, answer.over_closure, answer.exit_code) == (False, None, 1)
    assert "{0: 234, 1: 120, 2: 10} and " in answer.difference
