"""Projective equivalence: images are recognised, others told apart with a reason."""

from fractions import Fraction
from itertools import combinations, permutations, product
from pathlib import Path
from random import Random
from typing import Any

import examples
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

import trivector
from trivector.configurations import Configuration
from trivector.errors import MixedFieldsError
from trivector.fields import QQ, Field, field_from_spec, prime_field
from trivector.subspaces import Plane
from trivector.symmetry import Comparison, compare_configurations, distinguishing_invariant

DATA = Path(__file__).parents[2] / "data"
DOCUMENTS = sorted(path.stem for path in DATA.glob("*.json"))


def read(name: str, field: str | None = None) -> Configuration:
    configuration = trivector.read(DATA / f"{name}.json", field=field)
    assert isinstance(configuration, Configuration)
    return configuration


def moved(configuration: Configuration, rng: Random) -> Configuration:
    """The image under a random matrix, its planes in another order."""
    g = examples.random_invertible(configuration.field, configuration.n, rng)
    planes = [examples.image(configuration.field, g, plane) for plane in configuration.planes]
    rng.shuffle(planes)
    return Configuration(tuple(planes))


def check_literally(answer: Comparison, first: Configuration, second: Configuration) -> None:
    """The matrix of a yes carries each plane where the permutation says."""
    assert answer.equivalent is True
    assert answer.over_closure is True
    assert answer.collineation is not None
    matrix, k = answer.collineation.matrix, first.field
    assert k.matrix(matrix, first.n).det()
    assert sorted(answer.collineation.permutation) == list(range(len(first.planes)))
    for plane, image in zip(first.planes, answer.collineation.permutation, strict=True):
        assert examples.image(k, matrix, plane) == second.planes[image]


@pytest.mark.parametrize("name", DOCUMENTS)
def test_random_images_are_recognised(name: str) -> None:
    configuration, rng = read(name), Random(name)
    for _ in range(2):
        first, second = moved(configuration, rng), moved(configuration, rng)
        check_literally(compare_configurations(first, second), first, second)


@pytest.mark.long
@pytest.mark.parametrize("name", DOCUMENTS)
def test_a_hundred_random_images_are_recognised(name: str) -> None:
    configuration, rng = read(name), Random(name)
    for _ in range(100):
        other = moved(configuration, rng)
        check_literally(compare_configurations(configuration, other), configuration, other)


def test_documents_are_told_apart_with_a_reason() -> None:
    over_q = [name for name in DOCUMENTS if read(name).field == QQ and read(name).n == 6]
    assert len(over_q) >= 5
    for one, two in combinations(over_q, 2):
        answer = compare_configurations(read(one), read(two))
        assert (answer.equivalent, answer.over_closure) == (False, False)
        assert answer.difference == distinguishing_invariant(read(one), read(two))
        assert ": " in str(answer.difference)
    seventeen = compare_configurations(read("twenty-minus-three"), read("del-pezzo-seventeen"))
    assert seventeen.difference == (
        "points by number of planes: {2: 21, 3: 3, 4: 6, 5: 7} and {2: 76, 5: 6}"
    )


# The twenty planes in two coordinate forms


def ten_lines() -> dict[str, list[list[Fraction]]]:
    """The ten lines of the quintic del Pezzo surface in P^5, each by two points.

    P² blown up in the four points below, by the six cubics through them; the
    line over a point by the derivatives of the cubics there, the line through
    two points by its intersections with the others.
    """
    points = [(1, 0, 0), (0, 1, 0), (0, 0, 1), (1, 1, 1)]
    exponents = [e for e in product(range(4), repeat=3) if sum(e) == 3]

    def value(e: tuple[int, ...], p: Any) -> Fraction:
        return Fraction(p[0] ** e[0] * p[1] ** e[1] * p[2] ** e[2])

    def derivative(e: tuple[int, ...], p: Any, j: int) -> Fraction:
        lower = tuple(x - (i == j) for i, x in enumerate(e))
        return e[j] * value(lower, p) if e[j] else Fraction(0)

    cubics = kernel([[value(e, p) for e in exponents] for p in points])
    assert len(cubics) == 6

    def combine(values: list[Fraction]) -> list[Fraction]:
        return [
            sum((c * x for c, x in zip(cubic, values, strict=True)), Fraction(0))
            for cubic in cubics
        ]

    lines = {}
    for i, p in enumerate(points):
        slopes = [combine([derivative(e, p, j) for e in exponents]) for j in range(3)]
        lines[f"E{i}"] = independent(slopes)
    for i, j in combinations(range(4), 2):
        images = []
        for s, t in ((1, 2), (2, 1), (1, -3), (1, 3)):
            p = [s * x + t * y for x, y in zip(points[i], points[j], strict=True)]
            images.append(combine([value(e, p) for e in exponents]))
        lines[f"L{i}{j}"] = independent(images)
    assert all(len(line) == 2 for line in lines.values())
    return lines


def kernel(rows: list[list[Fraction]]) -> list[list[Fraction]]:
    size = len(rows[0])
    reduced, pivots = draws.literal_reduced(QQ, rows, size)
    result = []
    for free in (j for j in range(size) if j not in pivots):
        vector = [Fraction(int(j == free)) for j in range(size)]
        for row, pivot in zip(reduced, pivots, strict=False):
            vector[pivot] = -row[free]
        result.append(vector)
    return result


def independent(rows: list[list[Fraction]]) -> list[list[Fraction]]:
    kept: list[list[Fraction]] = []
    for row in rows:
        if len(draws.literal_reduced(QQ, [*kept, row], len(row))[1]) > len(kept):
            kept.append(row)
    return kept


def twenty_from_ten_lines() -> Configuration:
    """V: the quadrics through the ten lines. For each of the 15 points where two of
    them meet, the quadrics of V singular there; and for each of the five pencils
    of conics, those that contain the planes of its conics (del Pezzo
    construction, computed; "On Morin configurations of higher length", 2019,
    arXiv 1903.07480).
    """
    lines = ten_lines()
    pairs = [(i, j) for i in range(6) for j in range(i, 6)]

    def polar(x: Any, y: Any) -> list[Fraction]:
        """Coefficients of the quadric q ↦ b(x, y), b its polar form."""
        return [x[i] * y[j] + x[j] * y[i] for i, j in pairs]

    conditions = [polar(x, y) for a, b in lines.values() for x, y in ((a, a), (a, b), (b, b))]
    basis = kernel(conditions)
    assert len(basis) == 6

    def inside(forms: list[list[Fraction]]) -> list[list[Fraction]]:
        """The quadrics of V on which the forms vanish, in coordinates of V."""
        return kernel([[dot(form, q) for q in basis] for form in forms])

    def dot(form: Any, q: Any) -> Fraction:
        return sum((x * y for x, y in zip(form, q, strict=True)), Fraction(0))

    unit = [[Fraction(int(i == j)) for i in range(6)] for j in range(6)]
    planes = []
    for one, two in combinations(lines, 2):
        (a, b), (c, d) = lines[one], lines[two]
        relation = kernel([list(column) for column in zip(a, b, c, d, strict=True)])
        if relation:  # the lines meet
            s, t = relation[0][:2]
            node = [s * x + t * y for x, y in zip(a, b, strict=True)]
            planes.append(inside([polar(node, e) for e in unit]))
    assert len(planes) == 15
    # Conics of a pencil that are two lines: E_j + L_ij, or L_ij + L_kl.
    pencils = [
        [(f"E{j}", f"L{min(i, j)}{max(i, j)}") for j in range(4) if j != i] for i in range(4)
    ]
    pencils.append([("L01", "L23"), ("L02", "L13"), ("L03", "L12")])
    for pencil in pencils:
        forms = []
        for one, two in pencil:
            span = independent([*lines[one], *lines[two]])
            assert len(span) == 3
            forms += [polar(x, y) for x in span for y in span]
        planes.append(inside(forms))
    assert {len(plane) for plane in planes} == {3}
    return Configuration.from_rows(
        QQ, [[[str(x) for x in row] for row in plane] for plane in planes]
    )


def test_both_forms_of_the_twenty_planes_are_equivalent_over_q() -> None:
    # published: "unique up to projectivity" (arXiv 1903.07480, abstract), over C
    first, second = read("twenty-planes"), twenty_from_ten_lines()
    answer = compare_configurations(first, second)
    check_literally(answer, first, second)


# Small cases by brute force


def profile_of_three(a: Plane, b: Plane, c: Plane) -> tuple[int, ...]:
    """What three subspaces are up to GL(V) (Dynkin type D4, classical)."""
    return (
        a.meet_dimension(b),
        a.meet_dimension(c),
        b.meet_dimension(c),
        a.meet(b).meet_dimension(c),
        a.join(b).meet_dimension(c),
        a.join(c).meet_dimension(b),
        b.join(c).meet_dimension(a),
    )


@pytest.mark.parametrize("field", [prime_field(2), prime_field(3), QQ], ids=lambda f: f.name)
@given(data=st.data())
@draws.some
def test_three_planes_are_equivalent_if_their_lattices_are(field: Field, data: Any) -> None:
    triples = []
    for _ in range(2):
        vectors = data.draw(draws.matrices(field, 5, 6))
        rows = [
            [vectors[i] for i in triple]
            for triple in data.draw(
                st.lists(st.sampled_from(list(combinations(range(5), 3))), min_size=3, max_size=3)
            )
        ]
        if any(len(draws.literal_reduced(field, plane, 6)[1]) < 3 for plane in rows):
            return
        triples.append([Plane.from_rows(field, plane) for plane in rows])
    first, second = triples
    answer = compare_configurations(Configuration(tuple(first)), Configuration(tuple(second)))
    expected = any(
        profile_of_three(*first) == profile_of_three(*(second[i] for i in p))
        and [first[0] == first[1], first[0] == first[2], first[1] == first[2]]
        == [
            second[p[0]] == second[p[1]],
            second[p[0]] == second[p[2]],
            second[p[1]] == second[p[2]],
        ]
        for p in permutations(range(3))
    )
    assert answer.equivalent is expected
    assert answer.over_closure is expected
    if expected:
        check_literally(answer, Configuration(tuple(first)), Configuration(tuple(second)))
    else:
        assert answer.difference


def pencil(field: Field, cross_ratio: Any) -> Configuration:
    directions = [[1, 0], [0, 1], [1, 1], [1, cross_ratio]]
    unit = examples.unit
    return Configuration.from_rows(
        field, [[unit(0), unit(1), [0, 0, *d, 0, 0]] for d in directions]
    )


def orbit_of_cross_ratio(x: Any, one: Any) -> set[Any]:
    return {x, one / x, one - x, one / (one - x), (x - one) / x, x / (x - one)}


@pytest.mark.parametrize("field", ["Q", "F_7", "F_9", "F_11", {"modulus": "x^2+x+1"}], ids=str)
def test_pencils_are_equivalent_exactly_if_their_cross_ratios_are(field: Any) -> None:
    # classical: six values for each unordered quadruple. All invariants of the
    # fixed list agree, so a no is proved by the exhaustive search.
    k = field_from_spec(field)
    values = [k.element(x) for x in (2, -1, 3, 4, -2, 5)]
    if field == "F_9" or field == {"modulus": "x^2+x+1"}:
        values = [k.element(x) for x in (2, "a", "-a", "a+1")]
    values = [x for x in dict.fromkeys(values) if x and x != k.one]
    for x, y in combinations(values, 2):
        first, second = pencil(k, x), pencil(k, y)
        answer = compare_configurations(first, second)
        assert answer.equivalent is (y in orbit_of_cross_ratio(x, k.one))
        assert answer.over_closure is answer.equivalent
        assert distinguishing_invariant(first, second) is None
        if answer.equivalent:
            check_literally(answer, first, second)
        else:
            assert "none of the" in str(answer.difference)


def test_conjugate_pencils_are_equivalent_by_a_semilinear_map_only() -> None:
    # over F_25 choose x with x^5 outside the six values of x
    k = field_from_spec("F_25")
    x = next(
        x
        for x in (k.from_code(code) for code in range(5, 25))
        if x**5 not in orbit_of_cross_ratio(x, k.one)
    )
    first, second = pencil(k, x), pencil(k, x**5)
    assert compare_configurations(first, second).equivalent is False
    answer = compare_configurations(first, second, semilinear=True)
    assert answer.equivalent is True
    assert answer.collineation is not None
    assert answer.collineation.frobenius == 1
    answer.collineation.verify(first, second)
    third = pencil(k, next(z for z in map(k.from_code, range(5, 25)) if {z, z**5}.isdisjoint(
        orbit_of_cross_ratio(x, k.one) | orbit_of_cross_ratio(x**5, k.one))))  # fmt: skip
    no = compare_configurations(first, third, semilinear=True)
    assert (no.equivalent, no.over_closure) == (False, False)


def test_repeated_planes_count() -> None:
    planes = read("twenty-planes").planes
    once, twice = Configuration(planes[:5]), Configuration((*planes[:5], planes[0]))
    other = Configuration((planes[4], *planes[:5]))
    assert "number of planes" in str(compare_configurations(once, twice).difference)
    check_literally(compare_configurations(twice, other), twice, other)
    three = Configuration((planes[0], planes[0], planes[0], planes[1], planes[2]))
    two = Configuration((planes[0], planes[0], planes[1], planes[1], planes[2]))
    assert "multiplicities" in str(compare_configurations(three, two).difference)


def test_a_limit_leaves_the_answer_undecided() -> None:
    first = read("f7-sixteen")
    answer = compare_configurations(first, moved(first, Random(1)), limit=3)
    assert (answer.equivalent, answer.over_closure, answer.exit_code) == (None, None, 3)
    assert "3 partial images" in str(answer.limit)
    assert not answer.exhaustive


def test_different_fields_and_dimensions_are_refused() -> None:
    with pytest.raises(MixedFieldsError):
        compare_configurations(read("twenty-planes"), read("f7-sixteen"))
    with pytest.raises(MixedFieldsError):
        compare_configurations(read("twenty-planes"), read("seven-planes-p6"))
