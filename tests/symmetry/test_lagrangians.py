"""Symmetries and equivalence of subspaces of ∧³V, through their planes."""

from pathlib import Path
from random import Random
from typing import Any

import examples
import pytest

import trivector
from trivector.configurations import Configuration
from trivector.errors import MixedFieldsError, UndecidedError, UsageError
from trivector.families.del_pezzo import del_pezzo_configuration
from trivector.fields import QQ, field_from_spec, prime_field
from trivector.subspaces import Subspace
from trivector.symmetry import collineations, compare_subspaces, subspace_collineations

DATA = Path(__file__).parents[2] / "data"


def twenty(spec: Any) -> Configuration:
    return Configuration(tuple(examples.over(field_from_spec(spec), examples.twenty_planes())))


def moved(subspace: Subspace, rng: Random) -> Subspace:
    g = examples.random_invertible(subspace.field, subspace.n, rng)
    return examples.image_of_space(subspace.field, g, subspace)


@pytest.mark.parametrize("field", ["Q", "F_7"])
def test_the_lagrangian_of_the_twenty_planes_has_their_group(field: str) -> None:
    planes = twenty(field)
    group = subspace_collineations(moved(planes.span(), Random(2)))
    assert group.order == 1920
    assert group.base_field is None
    for g in group.generators:
        g.verify(group.configuration, group.configuration)


def test_the_matrices_keep_the_lagrangian() -> None:
    space = moved(twenty("F_5").span(), Random(3))
    group = subspace_collineations(space)
    assert len(group.generators) > 2
    for g in group.generators:
        assert examples.image_of_space(space.field, g.matrix, space) == space


@pytest.mark.long
def test_a_space_larger_than_the_span_of_its_planes_is_asked_for_itself() -> None:
    # L = the span of 16 planes over F_7 and one more trivector: still the
    # same planes, but fewer collineations keep L.
    configuration = trivector.read(DATA / "f7-sixteen.json")
    span = configuration.span()
    k, rng = span.field, Random(0)
    while True:
        extra = examples.random_rows(k, 1, 20, rng)
        space = Subspace.span(k, 6, [*span.rows, *extra])
        planes = trivector.LinearSection(space).examine().planes
        if planes is not None and set(planes) == set(configuration.planes):
            break
    group = subspace_collineations(space)
    every = collineations(Configuration(planes))
    assert every.order == 6
    expected = [g for g in every.generators if examples.image_of_space(k, g.matrix, space) == space]
    assert group.order == 1
    assert expected == []
    other = moved(space, rng)
    answer = compare_subspaces(space, other)
    assert answer.equivalent is True
    assert answer.collineation is not None
    assert examples.image_of_space(k, answer.collineation.matrix, space) == other
    different = Subspace.span(k, 6, [*span.rows, *examples.random_rows(k, 1, 20, rng)])
    no = compare_subspaces(space, different)
    assert no.equivalent is False


@pytest.mark.parametrize("field", ["Q", "F_7"])
def test_images_of_a_lagrangian_are_recognised(field: str) -> None:
    space, rng = twenty(field).span(), Random(field)
    first, second = moved(space, rng), moved(space, rng)
    answer = compare_subspaces(first, second)
    assert (answer.equivalent, answer.over_closure) == (True, True)
    assert answer.collineation is not None
    matrix = answer.collineation.matrix
    assert examples.image_of_space(space.field, matrix, first) == second


def test_subspaces_are_told_apart_over_the_closure_by_their_sections() -> None:
    space = twenty("Q").span()
    seventeen = trivector.read(DATA / "del-pezzo-seventeen.json").span()
    answer = compare_subspaces(space, seventeen)
    assert (answer.equivalent, answer.over_closure) == (False, False)
    assert answer.difference == "degree of the section: 20 and 17"
    assert "dimension" in str(
        compare_subspaces(space, Subspace.span(QQ, 6, space.rows[:9])).difference
    )


def conjugate_pair(square: int) -> Subspace:
    """L over Q spanned by the two conjugate planes ⟨e_i + √d·e_{i+3}⟩, i = 0, 1, 2."""
    rational, irrational = [0] * 20, [0] * 20
    for bits in range(8):
        chosen = [i + 3 * (bits >> i & 1) for i in range(3)]
        power = bits.bit_count()
        target = irrational if power % 2 else rational
        for triple, sign in examples.signed_triple(chosen).items():
            target[examples.TRIPLES.index(triple)] += sign * square ** (power // 2)
    return Subspace.span(QQ, 6, [rational, irrational])


def test_equivalence_over_q_and_over_the_closure_are_told_apart() -> None:
    # Over Q(√d) each is a pair of disjoint planes; all such pairs are
    # equivalent over the closure, over Q only if the fields are the same.
    one, same, other = conjugate_pair(2), conjugate_pair(8), conjugate_pair(3)
    yes = compare_subspaces(one, one)
    assert (yes.equivalent, yes.over_closure) == (True, True)
    split = Subspace.span(QQ, 6, [[1] + [0] * 19, [0] * 19 + [1]])
    answer = compare_subspaces(one, split)
    assert answer.equivalent is False
    assert answer.over_closure is True
    assert "degrees and multiplicities" in str(answer.difference)
    no = compare_subspaces(one, other)
    assert (no.equivalent, no.over_closure) == (False, None)
    assert "residue field" in str(no.difference)
    assert "compositum" in str(no.limit)
    # The planes do not determine a map here, so what is not known is not denied.
    assert compare_subspaces(one, same).equivalent is not False


@pytest.mark.long
def test_planes_over_an_extension_give_the_group_over_the_small_field() -> None:
    # The cyclic Lagrangian modulo 2: closed points of degrees 2, 10, 10
    # (computed), 22 planes over F_1024 with the group M22 of order 443520. Over
    # F_2 those remain that commute with Frobenius, an element of order 10 of
    # M22:2 outside M22 that is its own centraliser there (classical): order 5,
    # the cyclic shift of the indices.
    space = examples.cyclic_lagrangian(prime_field(2))
    group = subspace_collineations(space)
    assert group.base_field == prime_field(2)
    assert group.scope == "F_2"
    assert (group.order, sorted(map(len, group.plane_orbits))) == (5, [1, 1, 5, 5, 5, 5])
    k = group.configuration.field
    for g in group.generators:
        assert all(k.format(x) in (0, 1) for row in g.matrix for x in row)
        matrix = [[space.field.element(k.format(x)) for x in row] for row in g.matrix]
        assert examples.image_of_space(space.field, matrix, space) == space


def test_two_conjugate_planes_leave_the_group_undecided_and_say_so() -> None:
    # Two disjoint planes conjugate over F_4: the maps that keep both are not
    # determined by them, and those over F_2 among them are not counted.
    field = prime_field(2)
    residue = field.extension(2)
    rows = [[residue.field.zero] * 6 for _ in range(3)]
    for i in range(3):
        rows[i][i], rows[i][i + 3] = residue.field.one, residue.root
    vector = trivector.Trivector.from_vectors(residue.field, rows).coordinates
    parts = [[residue.field.coefficients(x)[j] for x in vector] for j in range(2)]
    space = Subspace.span(field, 6, parts)
    points = trivector.LinearSection(space).examine().points
    assert points is not None
    assert [point.degree for point in points] == [2]
    group = subspace_collineations(space)
    assert (group.order, group.order_on_planes, group.exhaustive) == (None, None, False)
    assert "do not determine" in str(group.limit) or "one of several maps" in str(group.limit)


@pytest.mark.long
def test_the_group_over_the_large_field_is_m22_and_the_centraliser_has_order_5() -> None:
    from sympy.combinatorics import Permutation, PermutationGroup

    space = examples.cyclic_lagrangian(prime_field(2))
    residue = prime_field(2).extension(10)
    rows = [[residue.embed(x) for x in row] for row in space.rows]
    planes = trivector.LinearSection(Subspace.span(residue.field, 6, rows)).examine().planes
    assert planes is not None
    group = collineations(Configuration(planes))
    assert group.order == 443520
    index = {plane.rows: i for i, plane in enumerate(planes)}
    frobenius = Permutation(
        [index[tuple(tuple(x**2 for x in row) for row in plane.rows)] for plane in planes]
    )
    m22 = PermutationGroup([Permutation(list(g.permutation)) for g in group.generators])
    assert m22.order() == 443520
    assert m22.centralizer(PermutationGroup([frobenius])).order() == 5


@pytest.mark.long
def test_an_image_over_the_small_field_is_recognised_over_it() -> None:
    space = examples.cyclic_lagrangian(prime_field(2))
    other = moved(space, Random(4))
    answer = compare_subspaces(space, other)
    assert (answer.equivalent, answer.over_closure) == (True, True)
    assert answer.collineation is not None
    assert examples.image_of_space(space.field, answer.collineation.matrix, space) == other


def test_without_finitely_many_planes_the_question_is_undecided() -> None:
    field = prime_field(5)
    infinite = examples.families()[3].lagrangian(field)
    with pytest.raises(UndecidedError, match="infinitely many planes"):
        subspace_collineations(infinite)
    none = examples.cyclic_lagrangian(prime_field(7))
    with pytest.raises(UndecidedError, match="no plane"):
        subspace_collineations(none)
    # By now all invariants over F_3 agree, and it stays undecided.
    three = examples.cyclic_lagrangian(prime_field(3))
    alike = compare_subspaces(three, moved(three, Random(1)))
    assert (alike.equivalent, alike.over_closure, alike.difference) == (None, None, None)
    answer = compare_subspaces(none, moved(none, Random(1)))
    assert (answer.equivalent, answer.over_closure, answer.exit_code) == (None, None, 3)
    assert "no plane" in str(answer.limit)
    with pytest.raises(MixedFieldsError):
        compare_subspaces(none, infinite)


def test_a_conjugate_lagrangian_is_equivalent_by_a_semilinear_map_only() -> None:
    # One coefficient of the curve in F_9 outside F_3: conjugate curves are not projectively equal.
    k, rng = field_from_spec("F_9"), Random(3)
    curve = "E1; E3; E4; L34; L23; y-(a+1)*z; L14; x*y+a*x*z-(a+1)*y*z"
    space = del_pezzo_configuration(k, curve).span
    conjugate = Subspace.span(k, 6, [[x**3 for x in row] for row in space.rows])
    g = examples.random_invertible(k, 6, rng)
    image = examples.image_of_space(k, g, conjugate)
    answer = compare_subspaces(space, image, semilinear=True)
    assert (answer.equivalent, answer.over_closure) == (True, True)
    found = answer.collineation
    assert found is not None
    # 0 is tried first: there is no linear map from L to its image.
    assert found.frobenius == 1
    assert examples.image_of_space(k, found.matrix, conjugate) == image
    other = examples.random_subspace(k, 6, space.dimension, rng)
    assert compare_subspaces(space, other, semilinear=True).equivalent is False


def test_semilinear_symmetries_of_a_lagrangian_are_those_of_its_planes() -> None:
    k = field_from_spec("F_9")
    twenty = Configuration(tuple(examples.over(k, examples.twenty_planes())))
    group = subspace_collineations(twenty.span(), semilinear=True)
    assert group.order == 2 * 1920
    assert group.order == collineations(twenty, semilinear=True).order
    small = Subspace.from_terms(k, 6, [{(0, 1, 2): 1}, {(0, 3, 4): 1, (1, 3, 5): 1}])
    with pytest.raises(UndecidedError, match="leave them out"):
        subspace_collineations(small, semilinear=True)
    with pytest.raises(UsageError, match="finite field"):
        compare_subspaces(
            Subspace.from_terms(QQ, 6, [{(0, 1, 2): 1}]),
            Subspace.from_terms(QQ, 6, [{(0, 1, 3): 1}]),
            semilinear=True,
        )
