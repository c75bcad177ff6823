"""The meeting graph, maximal families of incident planes, the exchange graph."""

from itertools import combinations
from random import Random
from typing import Any

import examples
import networkx
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

import trivector
from trivector.configurations import (
    Configuration,
    enumerate_complete_families,
    enumerate_maximal_families,
    exchange_graph,
    meeting_graph,
)
from trivector.errors import MixedFieldsError, UndecidedError, UsageError
from trivector.fields import QQ, prime_field
from trivector.sections import Limits
from trivector.subspaces import Plane


def families_by_all_subsets(planes: list[Plane]) -> set[tuple[int, ...]]:
    """Every subset, kept if its planes meet two by two, then the maximal ones."""
    meets = {
        (i, j) for i, j in combinations(range(len(planes)), 2) if planes[i].is_incident(planes[j])
    }
    incident = [
        set(subset)
        for size in range(1, len(planes) + 1)
        for subset in combinations(range(len(planes)), size)
        if all(pair in meets for pair in combinations(subset, 2))
    ]
    return {tuple(sorted(s)) for s in incident if not any(s < other for other in incident)}


@pytest.mark.parametrize("n", [6, 7])
@given(data=st.data())
@draws.some
def test_maximal_families_are_those_among_all_subsets(n: int, data: Any) -> None:
    field = data.draw(st.sampled_from([prime_field(2), prime_field(3), QQ]))
    planes = data.draw(st.lists(draws.planes(field, n), min_size=1, max_size=8, unique=True))
    found = enumerate_maximal_families(planes)
    assert list(found) == sorted(families_by_all_subsets(planes))


def test_maximal_families_are_the_cliques_of_networkx() -> None:
    rng = Random(3)
    for q, count in ((2, 40), (3, 60)):
        field = prime_field(q)
        planes = list(dict.fromkeys(examples.random_plane(field, 6, rng) for _ in range(count)))
        graph = meeting_graph(Configuration(tuple(planes)))
        cliques = {
            tuple(sorted(int(v[1:]) for v in clique)) for clique in networkx.find_cliques(graph)
        }
        assert set(enumerate_maximal_families(planes)) == cliques


@pytest.mark.parametrize(("size", "seed"), [(6, 0), (6, 3), (7, 2), (7, 3)])
def test_complete_families_are_the_cliques_that_no_plane_of_pg_5_2_can_join(
    size: int, seed: int
) -> None:
    start, others = examples.random_clique(prime_field(2), size, Random(seed))
    # Without one of the planes that meet the first ones: some families lack it.
    candidates = [*start, *others[:-1]]
    graph = meeting_graph(Configuration(tuple(candidates)))
    cliques = [tuple(sorted(int(v[1:]) for v in c)) for c in networkx.find_cliques(graph)]
    expected = sorted(
        family
        for family in cliques
        if len(examples.planes_meeting_all(2, [candidates[i] for i in family])) == len(family)
    )
    assert 0 < len(expected) < len(cliques)
    assert list(enumerate_complete_families(candidates)) == expected


def test_an_undecided_family_is_not_left_out_in_silence() -> None:
    planes = examples.over(QQ, examples.twenty_planes())
    with pytest.raises(UndecidedError, match=r"planes 0, 1, .* over Q is not decided: degree 2"):
        enumerate_complete_families(planes, limits=Limits(max_degree=2))


def test_the_planes_through_a_point_of_pg_5_2_are_one_family_of_the_155() -> None:
    # [5,2]_2 = 155 (classical); 20 more planes that miss the point join none of them
    through = examples.families()[0]
    field = prime_field(2)
    section = trivector.LinearSection(through.lagrangian(field)).examine()
    assert section.planes is not None
    assert len(section.planes) == 155
    assert enumerate_maximal_families(section.planes) == (tuple(range(155)),)


def test_the_meeting_graph_names_the_dimension_of_each_meet() -> None:
    unit = examples.unit
    planes = [
        [unit(0), unit(1), unit(2)],
        [unit(0), unit(1), unit(3)],
        [unit(2), unit(4), unit(5)],
        [unit(3), unit(4), unit(5)],
        [unit(0), unit(1), unit(2)],
    ]
    graph = meeting_graph(Configuration.from_rows(QQ, planes, labels=list("abcde")))
    assert {(a, b): d["meet"] for a, b, d in graph.edges(data=True)} == {
        ("p0", "p1"): 1,
        ("p0", "p2"): 0,
        ("p0", "p4"): 2,
        ("p1", "p3"): 0,
        ("p1", "p4"): 1,
        ("p2", "p3"): 1,
        ("p2", "p4"): 0,
    }
    assert graph.nodes["p3"]["label"] == "d"


def test_the_exchange_graph_joins_families_with_enough_common_planes() -> None:
    planes = examples.over(QQ, examples.twenty_planes())
    families = [planes[:6], planes[2:8], planes[4:10], planes[15:]]
    graph = exchange_graph(families, shared=2)
    assert {(a, b): d["shared"] for a, b, d in graph.edges(data=True)} == {
        (0, 1): 4,
        (0, 2): 2,
        (1, 2): 4,
    }
    assert [graph.nodes[i]["planes"] for i in graph] == [6, 6, 6, 5]
    assert exchange_graph(families, shared=3).number_of_edges() == 2


def test_what_makes_no_sense_is_refused() -> None:
    one = examples.over(QQ, examples.twenty_planes())
    other = examples.over(prime_field(3), examples.twenty_planes())
    with pytest.raises(UsageError, match="candidates 1 and 3 are equal"):
        enumerate_maximal_families([one[0], one[1], one[2], one[1]])
    with pytest.raises(MixedFieldsError):
        enumerate_maximal_families([one[0], other[0]])
    with pytest.raises(UsageError, match="more than 1 maximal"):
        enumerate_maximal_families(examples.over(QQ, examples.moved_twenty()), limit=1)
    with pytest.raises(UsageError, match="at least 1"):
        exchange_graph([one], shared=0)
    assert enumerate_maximal_families([]) == ()
