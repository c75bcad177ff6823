"""Points, lines and hyperplanes that planes share, against every point of P(V)."""

from collections import Counter
from collections.abc import Sequence
from itertools import product
from pathlib import Path
from typing import Any

import examples
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

import trivector
from trivector.configurations import Configuration, Incidence
from trivector.fields import QQ, field_from_spec, prime_field

DATA = Path(__file__).parents[2] / "data"


def read(name: str, field: str | None = None) -> Configuration:
    configuration = trivector.read(DATA / f"{name}.json", field=field)
    assert isinstance(configuration, Configuration)
    return configuration


# The oracle: every point, and every hyperplane, of P(V) over F_p


def all_points(p: int, n: int) -> list[tuple[int, ...]]:
    return [v for v in product(range(p), repeat=n) if next(filter(None, v), 0) == 1]


def span_of(rows: Sequence[Sequence[int]], p: int) -> set[tuple[int, ...]]:
    return {
        tuple(
            sum(c * x for c, x in zip(factors, column, strict=True)) % p
            for column in zip(*rows, strict=True)
        )
        for factors in product(range(p), repeat=len(rows))
    }


def incidence_by_points(
    planes: Sequence[Sequence[Sequence[int]]], p: int, n: int
) -> dict[tuple[int, ...], tuple[int, ...]]:
    """The planes on each point that is on two or more."""
    spans = [span_of(rows, p) for rows in planes]
    on = {v: tuple(i for i, span in enumerate(spans) if v in span) for v in all_points(p, n)}
    return {v: members for v, members in on.items() if len(members) > 1}


def incidence_by_forms(
    planes: Sequence[Sequence[Sequence[int]]], p: int, n: int
) -> dict[tuple[int, ...], tuple[int, ...]]:
    """The planes in each hyperplane, given by its form, that is spanned by planes in it."""
    found = {}
    for form in all_points(p, n):
        members = tuple(
            i
            for i, rows in enumerate(planes)
            if not any(sum(f * x for f, x in zip(form, row, strict=True)) % p for row in rows)
        )
        rows = [row for i in members for row in planes[i]]
        if len({tuple(map(tuple, planes[i])) for i in members}) > 1:
            rank = len(draws.literal_reduced(prime_field(p), over(p, rows), n)[1])
            if rank == n - 1:
                found[form] = members
    return found


def over(p: int, rows: Sequence[Sequence[int]]) -> list[list[Any]]:
    return [[prime_field(p).element(x) for x in row] for row in rows]


@st.composite
def incident_planes(draw: Any, p: int, n: int) -> list[list[list[int]]]:
    """A few planes spanned by points of a small set, so that they share much."""
    vectors = st.lists(st.integers(0, p - 1), min_size=n, max_size=n)
    pool = draw(st.lists(vectors, min_size=5, max_size=8))
    triples = draw(st.lists(st.permutations(range(len(pool))), min_size=2, max_size=6))
    planes = []
    for triple in triples:
        reduced, pivots = draws.literal_reduced(
            prime_field(p), over(p, [pool[i] for i in triple[:3]]), n
        )
        if len(pivots) == 3:
            planes.append([[int(x) for x in row] for row in reduced])
    return planes


@pytest.mark.parametrize("n", [6, 7])
@pytest.mark.parametrize("p", [2, 3])
@given(data=st.data())
@draws.some
def test_shared_flats_are_those_that_every_point_and_every_form_shows(
    p: int, n: int, data: Any
) -> None:
    if (p, n) == (3, 7):
        return  # the oracle takes too long there
    planes = data.draw(incident_planes(p, n))
    if len({str(plane) for plane in planes}) < 2:
        return
    incidence = Incidence(Configuration.from_rows(prime_field(p), planes))
    expected = incidence_by_points(planes, p, n)
    found: dict[tuple[int, ...], tuple[int, ...]] = {}
    for shared in (*incidence.points, *incidence.lines):
        rows = [[int(x) for x in row] for row in shared.flat.rows]
        for v in span_of(rows, p):
            if next(filter(None, v), 0) == 1:
                # A point of a line may be on more planes: then it is listed itself.
                found[v] = max(found.get(v, ()), shared.planes, key=len)
    equal_planes = {  # points of repeated planes that are on no other flat are not listed
        v for v, on in expected.items() if len({str(planes[i]) for i in on}) == 1
    }
    assert {v: on for v, on in expected.items() if v not in equal_planes} == {
        v: on for v, on in found.items() if v not in equal_planes
    }
    hyperplanes = {}
    for shared in incidence.hyperplanes:
        assert len(shared.flat.rows) == n - 1
        (form,) = trivector.fields.linear.kernel(prime_field(p), shared.flat.rows, n)
        hyperplanes[tuple(int(x) for x in form)] = shared.planes
    assert hyperplanes == incidence_by_forms(planes, p, n)


# The twenty planes and others


@pytest.mark.parametrize("field", ["Q", "F_3", "F_7", "F_9"])
def test_the_twenty_planes_have_sixteen_and_thirty_points(field: str) -> None:
    # computed (no text): 16 points on five planes each, 30 on two; 4 + 3 on
    # every plane; dim(A ∩ F_v) = 4 and 2 there
    k = field_from_spec(field)
    incidence = Incidence(Configuration(tuple(examples.over(k, examples.twenty_planes()))))
    assert incidence.profile("points") == {2: 30, 5: 16}
    assert incidence.lines == ()
    assert set(map(str, incidence.per_plane("points"))) == {"{2: 3, 5: 4}"}
    assert incidence.point_dimensions is not None
    pairs = zip(incidence.points, incidence.point_dimensions, strict=True)
    assert Counter((len(p.planes), d) for p, d in pairs) == {(5, 4): 16, (2, 2): 30}
    expected = {
        tuple(signs)
        for signs in product((1, -1), repeat=6)
        if signs[0] == 1 and signs.count(-1) % 2 == 0
    }
    big = [p.flat.rows[0] for p in incidence.points if len(p.planes) == 5]
    assert {tuple(map(str, row)) for row in big} == {
        tuple(str(k.element(x)) for x in signs) for signs in expected
    }


def test_dimensions_with_f_v_agree_with_the_definition() -> None:
    # dim{a in A : v∧a = 0}, by the kernel of the map a ↦ v∧a
    incidence = Incidence(read("f7-sixteen"))
    k, span = incidence.configuration.field, incidence.configuration.span()
    assert incidence.point_dimensions is not None
    for point, dimension in list(zip(incidence.points, incidence.point_dimensions, strict=True))[
        :25
    ]:
        v = point.flat.rows[0]
        images = [trivector.Trivector(k, row).wedge_vector(v) for row in span.rows]
        assert dimension == 10 - len(draws.literal_reduced(k, images, 15)[1])


def test_without_a_lagrangian_span_there_is_no_dimension_with_f_v() -> None:
    assert Incidence(read("seven-planes-p6")).point_dimensions is None
    assert Incidence(Configuration(read("twenty-planes").planes[:3])).point_dimensions is None


def test_the_seven_planes_of_p6_are_the_fano_plane() -> None:
    # classical: seven points on three lines each; the complement of a line of
    # the Fano plane shows the four lines not through a point
    incidence = Incidence(read("seven-planes-p6"))
    assert incidence.profile("points") == {3: 7}
    assert incidence.profile("hyperplanes") == {4: 7}
    assert [len(p.planes) for p in incidence.points] == [3] * 7


def test_planes_through_a_line_in_a_solid_are_a_pencil() -> None:
    unit = examples.unit
    thirds = [unit(2), unit(3), [0, 0, 1, 1, 0, 0], unit(4), unit(5)]
    planes = [[unit(0), unit(1), third] for third in thirds]
    incidence = Incidence(Configuration.from_rows(QQ, [*planes, planes[0]]))
    assert incidence.pencils() == ((0, 1, 2, 5),)
    assert incidence.points == ()
    assert [line.planes for line in incidence.lines] == [(0, 1, 2, 3, 4, 5)]


def test_two_copies_of_a_plane_are_no_pencil_and_share_no_point() -> None:
    plane = examples.twenty_planes()[0]
    incidence = Incidence(Configuration.from_rows(QQ, [plane, plane]))
    assert incidence.points == incidence.lines == incidence.hyperplanes == ()
    assert incidence.pencils() == ()


# Graphs


def test_the_graph_holds_everything_that_the_lists_hold() -> None:
    incidence = Incidence(read("twenty-planes"))
    graph = incidence.graph(hyperplanes=True)
    kinds = Counter(data["kind"] for _, data in graph.nodes(data=True))
    assert kinds == {"plane": 20, "point": 46, "hyperplane": 46}
    assert graph.number_of_edges() == 2 * (16 * 5 + 30 * 2)
    for j, point in enumerate(incidence.points):
        data = graph.nodes[f"point{j}"]
        assert data["planes"] == len(point.planes) == graph.degree(f"point{j}")
        assert data["a_dimension"] == {2: 2, 5: 4}[data["planes"]]
        assert sorted(graph.neighbors(f"point{j}")) == sorted(f"p{i}" for i in point.planes)
        assert data["coordinates"] == " ".join(map(str, point.flat.to_entries()[0]))
    assert graph.nodes["p0"]["label"] == "01|23|45 +++"
    assert set(incidence.graph()) == {v for v in graph if not v.startswith("hyperplane")}


def test_the_matrix_is_that_of_the_graph() -> None:
    incidence = Incidence(read("del-pezzo-seventeen"))
    graph = incidence.graph()
    matrix = incidence.matrix("points")
    assert [len(matrix), len(matrix[0])] == [17, 82]
    for i, row in enumerate(matrix):
        for j, value in enumerate(row):
            assert value == graph.has_edge(f"p{i}", f"point{j}")
