"""All of GL(3,2) by hand, and networkx on incidence graphs."""

from itertools import combinations, product
from random import Random

import examples
import networkx
import oracle

from trivector.configurations import Configuration, Incidence
from trivector.fields import prime_field
from trivector.symmetry import collineations, compare_configurations

FANO = [v for v in product((0, 1), repeat=3) if any(v)]
GL32 = [
    rows for rows in product(FANO, repeat=3) if oracle.determinant(rows, 2)
]  # every invertible 3×3 matrix over F_2


def planes_through_a_line(points: tuple[tuple[int, ...], ...]) -> Configuration:
    """⟨e0, e1, u⟩ for points u of the plane ⟨e2, e3, e4⟩."""
    unit = examples.unit
    rows = [[unit(0), unit(1), [0, 0, *u, 0]] for u in points]
    return Configuration.from_rows(prime_field(2), rows)


def test_planes_through_a_line_are_equivalent_as_points_are_under_all_168_matrices() -> None:
    # Two or more of the planes meet in that line, so a collineation of one such
    # configuration to another is one of the quotients by it; and back (classical).
    assert len(GL32) == 168
    subsets = [s for size in (2, 3, 4, 5) for s in combinations(FANO, size)]
    images = {s: {frozenset(oracle.apply(g, u, 2) for u in s) for g in GL32} for s in subsets}
    rng = Random(0)
    answers = set()
    for _ in range(30):
        first = rng.choice(subsets)
        second = rng.choice([s for s in subsets if len(s) == len(first)])
        expected = frozenset(second) in images[first]
        one, two = planes_through_a_line(first), planes_through_a_line(second)
        assert compare_configurations(one, two).equivalent is expected
        answers.add(expected)
    assert answers == {True, False}


def test_the_group_on_them_is_that_of_all_168_matrices() -> None:
    for points in [
        tuple(FANO[:2]),
        tuple(FANO[:3]),
        tuple(FANO[:4]),
        tuple(FANO[1:6]),
        tuple(FANO),
    ]:
        index = {u: i for i, u in enumerate(points)}
        expected = set()
        for g in GL32:
            moved = [oracle.apply(g, u, 2) for u in points]
            if set(moved) == set(points):
                expected.add(tuple(index[u] for u in moved))
        group = collineations(planes_through_a_line(points))
        assert group.order_on_planes == len(expected)
        assert set(group.iter_permutations()) == expected


def test_equivalent_planes_have_isomorphic_incidence_graphs_in_the_sense_of_networkx() -> None:
    k, rng = prime_field(2), Random(4)
    found = [examples.random_clique(k, 5, rng)[0] for _ in range(8)]
    configurations = [Configuration(tuple(planes)) for planes in found]
    g = examples.random_invertible(k, 6, rng)
    configurations += [
        Configuration(tuple(examples.image(k, g, plane) for plane in reversed(planes)))
        for planes in found[:4]
    ]
    same_kind = networkx.isomorphism.categorical_node_match("kind", "")
    seen = set()
    for first, second in combinations(configurations, 2):
        answer = compare_configurations(first, second)
        isomorphic = networkx.is_isomorphic(
            Incidence(first).graph(), Incidence(second).graph(), node_match=same_kind
        )
        assert isomorphic or answer.equivalent is False
        if str(answer.difference).startswith(("points by", "lines by", "colour refinement of the")):
            assert not isomorphic
        seen.add((answer.equivalent, isomorphic))
    assert {(True, True), (False, False)} <= seen
