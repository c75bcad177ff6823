"""Subspaces with infinitely many planes, or none: Lie algebras, flags, and collineations found."""

from itertools import combinations
from random import Random
from typing import Any

import examples
import pytest

from trivector.exterior.products import exterior_cube
from trivector.fields import QQ, Field, field_from_spec, prime_field
from trivector.sections import Limits
from trivector.subspaces import Subspace
from trivector.symmetry import compare_subspaces, split_quadrics
from trivector.symmetry.infinite_sections import canonical_flag, stabiliser_algebra
from trivector.symmetry.ternary import find_ternary_map

NAMES = ["point", "hyperplane", "lines", "ruling", "conics", "tangents"]
FAMILIES = dict(zip(NAMES, examples.families(), strict=True))
GAUSS: dict[str, Any] = {"modulus": "x^2+1"}


def keeps(field: Field, matrix: Any, space: Subspace) -> bool:
    """Whether X·L ⊂ L, by the difference quotient: (1 + εX) on ∧³ with ε² = 0, literally."""
    n = space.n
    moved = []
    for row in space.rows:
        total = [field.zero] * len(row)
        for position, x in enumerate(row):
            if x:
                i, j, k = list(examples.TRIPLES)[position]
                for slot in range(3):
                    for a in range(n):
                        word = [i, j, k]
                        coefficient = matrix[a][word[slot]]
                        word[slot] = a
                        if coefficient and len(set(word)) == 3:
                            odd = sum(p > q for p, q in combinations(word, 2)) % 2
                            place = examples.TRIPLES.index(tuple(sorted(word)))
                            value = x * coefficient
                            total[place] = total[place] - value if odd else total[place] + value
        moved.append(total)
    return all(space.contains(row) for row in moved)


@pytest.mark.parametrize("spec", ["Q", "F_2", "F_3", "F_4", GAUSS], ids=str)
def test_the_lie_algebra_keeps_the_space_and_is_all_that_does(spec: Any) -> None:
    field, rng = field_from_spec(spec), Random(3)
    for dimension in (1, 4, 10):
        space = examples.random_subspace(field, 6, dimension, rng)
        algebra = stabiliser_algebra(space)
        assert all(keeps(field, x, space) for x in algebra)
        # All that does: the 36 matrices with one entry 1 keep L exactly if they are in it.
        for i in range(6):
            for j in range(6):
                unit = [[field.one if (a, b) == (i, j) else field.zero for b in range(6)]
                        for a in range(6)]  # fmt: skip
                flat = [[x for row in m for x in row] for m in (*algebra, unit)]
                inside = field.matrix(flat, 36).rank() == len(algebra)
                assert keeps(field, unit, space) is inside


@pytest.mark.parametrize(
    ("name", "dimension"),
    # Stabilisers in gl(6): parabolic ones of a point, a hyperplane and a plane (36 − 5, 36 − 5,
    # 36 − 9), so(6) and gl(3) with the scalars (15 + 1, 8 + 1); classical.
    [("point", 31), ("hyperplane", 31), ("lines", 27), ("ruling", 16), ("conics", 9)],
)
def test_the_lie_algebras_of_the_families_are_the_classical_ones(name: str, dimension: int) -> None:
    for field in (QQ, prime_field(7)):
        assert len(stabiliser_algebra(FAMILIES[name].lagrangian(field))) == dimension


@pytest.mark.parametrize("spec", ["Q", "F_2", "F_3", "F_9"], ids=str)
def test_the_flag_is_the_point_the_hyperplane_and_the_plane(spec: Any) -> None:
    field = field_from_spec(spec)
    rng = Random(1)
    for name, size in (("point", 1), ("hyperplane", 5), ("lines", 3)):
        space = FAMILIES[name].lagrangian(field)
        image, common = canonical_flag(space)
        assert image == common
        assert len(image) == size
        g = examples.random_invertible(field, 6, rng)
        moved, _ = canonical_flag(examples.image_of_space(field, g, space))
        turned = [
            [sum((x * y for x, y in zip(r, v, strict=True)), field.zero) for r in g] for v in image
        ]
        assert field.matrix([*moved, *turned], 6).rank() == size


def recognised(space: Subspace, rng: Random, limits: Limits | None = None) -> bool | None:
    """What is said of a random image; a matrix in the answer is checked here."""
    field = space.field
    g = examples.random_invertible(field, 6, rng)
    image = examples.image_of_space(field, g, space)
    answer = compare_subspaces(space, image, limits=limits)
    assert answer.equivalent is not False
    assert answer.over_closure is not False
    if answer.equivalent:
        assert answer.collineation is not None
        matrix = answer.collineation.matrix
        assert field.matrix(matrix, 6).det()
        rows = field.matrix(space.rows, 20) * field.matrix(exterior_cube(matrix), 20)
        assert Subspace.span(field, 6, rows.tolist()) == image
    return answer.equivalent


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("spec", ["F_2", "F_3"])
def test_over_a_small_field_images_of_every_family_are_recognised(spec: str, name: str) -> None:
    assert recognised(FAMILIES[name].lagrangian(field_from_spec(spec)), Random(name)) is True


@pytest.mark.long
@pytest.mark.parametrize("name", NAMES[2:])
@pytest.mark.parametrize("spec", ["F_4", "F_5", "F_7"])
def test_over_larger_fields_too(spec: str, name: str) -> None:
    space = FAMILIES[name].lagrangian(field_from_spec(spec))
    assert all(recognised(space, Random(f"{name}{i}")) for i in range(3))


NO_SWEEP = Limits(max_points=0)


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("spec", ["Q", "F_7", "F_2305843009213693951"])
def test_without_knowing_planes_images_of_every_family_are_recognised(spec: str, name: str) -> None:
    # By flags; as ternary cubics; by hyperbolic pairs.
    space = FAMILIES[name].lagrangian(field_from_spec(spec))
    assert recognised(space, Random(name), NO_SWEEP) is True


@pytest.mark.parametrize(
    ("name", "spec"),
    [
        ("lines", "F_9"),
        ("lines", "F_4"),
        ("point", GAUSS),
        pytest.param("conics", GAUSS, marks=pytest.mark.long),
        pytest.param("tangents", "F_49", marks=pytest.mark.long),
    ],
    ids=str,
)
def test_over_a_field_with_a_root_too(name: str, spec: Any) -> None:
    space = FAMILIES[name].lagrangian(field_from_spec(spec))
    assert recognised(space, Random(name), NO_SWEEP) is True


@pytest.mark.long
@pytest.mark.parametrize("name", ["ruling", "conics", "tangents"])
def test_more_images_over_q_are_recognised(name: str) -> None:
    space, rng = FAMILIES[name].lagrangian(QQ), Random(name)
    assert all(recognised(space, rng, NO_SWEEP) for _ in range(8))


def test_in_characteristic_2_without_a_sweep_nothing_is_found_and_nothing_is_denied() -> None:
    space = FAMILIES["ruling"].lagrangian(prime_field(2))
    assert recognised(space, Random(1), NO_SWEEP) is None


def test_the_invariant_form_of_the_ruling_is_the_quadric_up_to_scale() -> None:
    # The planes of L are isotropic for it: B vanishes on W × W.
    field = QQ
    family, rng = FAMILIES["ruling"], Random(2)
    algebra = stabiliser_algebra(family.lagrangian(field))
    form = split_quadrics._invariant_form(field, 6, algebra)
    assert form is not None
    for _ in range(5):
        rows = field.matrix(family.random_plane(field, rng).rows, 6)
        assert not any(x for row in (rows * form * rows.transpose()).tolist() for x in row)


def test_a_subspace_with_another_algebra_is_none_of_these() -> None:
    space = FAMILIES["point"].lagrangian(QQ)
    algebras = [stabiliser_algebra(space)] * 2
    assert find_ternary_map(space, space, algebras) == []
    assert list(split_quadrics.find_quadric_map(space, space, algebras)) == []


def test_the_lie_algebra_tells_families_apart_over_the_closure() -> None:
    conics, tangents = (FAMILIES[name].lagrangian(QQ) for name in ("conics", "tangents"))
    answer = compare_subspaces(conics, tangents)
    # Both are GL(3)-spaces with the same Hilbert function: not told apart.
    assert answer.equivalent is not True
    ruling = FAMILIES["ruling"].lagrangian(QQ)
    answer = compare_subspaces(ruling, conics)
    assert (answer.equivalent, answer.over_closure) == (False, False)
