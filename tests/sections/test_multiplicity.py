"""The length of a section at one of its planes."""

from itertools import combinations, pairwise
from random import Random

import examples
import macaulay
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

from trivector.fields import QQ, Field, prime_field
from trivector.sections.multiplicity import is_reduced_at, local_length
from trivector.subspaces import Plane, Subspace

F2, F3, F7, F11, F101 = (prime_field(p) for p in (2, 3, 7, 11, 101))
F32003, LARGE = prime_field(32003), prime_field(examples.LARGE_PRIME)
FIELDS = [QQ, F2, F3, F7, LARGE]
over_fields = pytest.mark.parametrize("field", FIELDS, ids=str)
seeds = st.integers(0, 2**32)


def literal_local_length(space: Subspace, plane: Plane, order: int) -> int:
    quadrics = macaulay.section_quadrics(space.field, space.rows, space.n)
    point = space.coordinates(plane.plucker)
    assert point is not None
    return macaulay.local_length(space.field, space.dimension, quadrics, point, order)


def rational_planes(space: Subspace) -> list[Plane]:
    """All planes of L over F_2 or F_3, by trying every one of PG(5, q)."""
    q = int(space.field.characteristic)
    found = examples.planes_pairing_to_zero(q, space.orthogonal().rows)
    return [Plane.from_rows(space.field, rows) for rows in found]


# Known multiplicities


@pytest.mark.parametrize("field", [QQ, F3, F7, LARGE], ids=str)
def test_each_of_the_twenty_planes_counts_once(field: Field) -> None:
    # computed: H = 1, 10, 20, 20, … and twenty planes
    planes = examples.over(field, examples.twenty_planes())
    space = Subspace.span(field, 6, [plane.plucker for plane in planes])
    assert [local_length(space, plane) for plane in planes] == [1] * 20


@over_fields
def test_each_of_the_seven_planes_of_p6_counts_once(field: Field) -> None:
    # published: arXiv 1204.6257; H = 1, 7, 7, … computed
    planes = examples.over(field, examples.seven_planes())
    space = Subspace.span(field, 7, [plane.plucker for plane in planes])
    assert [local_length(space, plane) for plane in planes] == [1] * 7


def test_the_cyclic_lagrangian_modulo_11_has_one_plane_of_multiplicity_22() -> None:
    # computed: length 22, one rational plane
    space = examples.cyclic_lagrangian(F11)
    plane = examples.plane_of_the_cyclic_lagrangian(F11)
    assert not is_reduced_at(space, plane)
    assert local_length(space, plane) == 22
    # The whole section has length 22 by its Hilbert function, which is stable from here on.
    assert macaulay.section_hilbert(F11, space.rows, 6, 4)[3:] == (22, 22)


@over_fields
@pytest.mark.parametrize("n", [6, 7])
def test_an_osculating_space_of_a_twisted_cubic_meets_it_once_more_than_its_dimension(
    field: Field, n: int
) -> None:
    plane = Plane.from_rows(field, [examples.unit(i, n) for i in range(3)])
    for order in range(3):
        space = Subspace.span(field, n, examples.osculating_rows(order, n))
        assert local_length(space, plane) == order + 1
        assert is_reduced_at(space, plane) == (order == 0)
        length = macaulay.section_hilbert(field, space.rows, n, 4)[4]
        assert length == order + 1  # classical, see osculating_rows


def test_a_plane_on_a_curve_of_planes_has_no_multiplicity() -> None:
    plane = Plane.from_rows(F3, [examples.unit(i) for i in range(3)])
    cubic = Subspace.span(F3, 6, examples.osculating_rows(3))
    assert local_length(cubic, plane) is None
    pencil = Subspace.from_terms(F3, 6, [{(0, 1, 2): 1}, {(0, 1, 3): 1}])
    assert local_length(pencil, plane) is None


@pytest.mark.parametrize("family", examples.families(), ids=lambda family: family.name)
@pytest.mark.parametrize("field", [F2, F101, QQ], ids=str)
def test_no_plane_of_an_infinite_family_has_a_multiplicity(
    family: examples.Family, field: Field
) -> None:
    plane = family.random_plane(field, Random(11))
    assert local_length(family.lagrangian(field), plane) is None


def test_in_characteristic_two_the_plane_of_the_nuclei_counts_once_beside_its_family() -> None:
    # computed: H = C(3d+2, 2) + 1
    conics = next(f for f in examples.families() if f.name.startswith("conic"))
    nuclei = Plane.from_rows(F2, [examples.unit(i) for i in (1, 2, 4)])
    assert local_length(conics.lagrangian(F2), nuclei) == 1


# Against the literal local ring


@over_fields
@draws.few
@given(
    seed=seeds,
    orders=st.sampled_from([[1], [2], [0, 1], [1, 1], [0, 2]]),
    others=st.integers(0, 1),
)
def test_the_length_is_that_of_the_truncated_local_ring(
    field: Field, seed: int, orders: list[int], others: int
) -> None:
    space, planes = examples.fat_space(field, orders, Random(seed), others=others)
    for plane in planes:
        ours = local_length(space, plane)
        literal = literal_local_length(space, plane, 5)
        if ours is None or ours >= 5:  # then m^5 cuts something off, or nothing is finite
            assert literal >= 5
        else:
            assert literal == ours
        assert is_reduced_at(space, plane) == (ours == 1)


@pytest.mark.long
@pytest.mark.parametrize("field", [F2, F3, F7, LARGE], ids=str)
def test_lengths_in_larger_spaces_are_those_of_the_truncated_local_ring(field: Field) -> None:
    for seed in range(10):
        space, planes = examples.fat_space(field, [2, 2], Random(seed), others=1)
        for plane in planes:
            ours = local_length(space, plane)
            literal = literal_local_length(space, plane, 5)
            assert literal == ours if ours is not None and ours < 5 else literal >= 5


# Sums of lengths


@pytest.mark.parametrize("field", [LARGE, QQ], ids=str)
@pytest.mark.parametrize("orders", [[1, 2], [2, 2, 0], [1, 1, 1], [0, 1, 2, 0]], ids=str)
def test_the_lengths_at_all_planes_add_up_to_the_length(field: Field, orders: list[int]) -> None:
    # A few osculating spaces in general position: nothing else lies in their span, which the
    # literal Hilbert function confirms; its values agree in three degrees.
    space, planes = examples.fat_space(field, orders, Random(sum(orders)))
    lengths = [local_length(space, plane) for plane in planes]
    assert lengths == [order + 1 for order in orders]
    literal = macaulay.section_hilbert(field, space.rows, 6, 4)
    assert literal[2:] == (sum(orders) + len(orders),) * 3


@over_fields
@draws.few
@given(seed=seeds)
def test_a_finite_section_by_coordinate_trivectors_is_its_coordinate_planes(
    field: Field, seed: int
) -> None:
    # The torus acts on such a section, so that all its isolated planes are coordinate planes,
    # over the closure too; it is finite when no two triples share two indices (classical).
    rng = Random(seed)
    triples: list[tuple[int, ...]] = []
    for triple in rng.sample(examples.TRIPLES, 20):
        if all(len(set(triple) & set(other)) < 2 for other in triples):
            triples.append(triple)
    space = Subspace.from_terms(field, 6, [{triple: 1} for triple in triples])
    total = 0
    for triple in triples:
        length = local_length(space, Plane.from_rows(field, [examples.unit(i) for i in triple]))
        assert length is not None
        total += length
    literal = macaulay.section_hilbert(field, space.rows, 6, 5)
    assert literal[3:] == (total,) * 3


@pytest.mark.parametrize("field", [F2, F3], ids=str)
def test_lengths_at_rational_planes_never_exceed_the_length(field: Field) -> None:
    finite = fat = 0
    for seed in range(8):
        rng = Random(seed)
        space, _ = examples.fat_space(field, [1, rng.randint(1, 2)], rng, others=1)
        literal = macaulay.section_hilbert(field, space.rows, 6, 5)
        if literal[4] != literal[5]:
            continue
        finite += 1
        lengths = [local_length(space, plane) for plane in rational_planes(space)]
        known = [length for length in lengths if length is not None]
        assert len(known) == len(lengths)
        assert sum(known) <= literal[5]
        fat += sum(known) > len(known)
    assert finite >= 4
    assert fat >= 3


# The field and the coordinates do not matter


@pytest.mark.parametrize("orders", [[1], [2], [1, 2], [2, 2], [2, 1, 1]], ids=str)
def test_the_length_is_the_same_over_q_and_modulo_a_good_prime(orders: list[int]) -> None:
    # The same integers over both fields; 32003 is larger than all of their minors' factors
    # here, which the equal dimensions confirm.
    rng = Random(17)
    matrices = [
        [[rng.randint(-3, 3) for _ in range(6)] for _ in range(6)] for _ in range(len(orders))
    ]
    answers = []
    for field in (QQ, F32003):
        total = Subspace.span(field, 6, [])
        planes = []
        for g, order in zip(matrices, orders, strict=True):
            rows = [[field.element(x) for x in row] for row in g]
            assert field.matrix(rows, 6).det()
            space = Subspace.span(field, 6, examples.osculating_rows(order))
            total = total.sum(examples.image_of_space(field, rows, space))
            start = Plane.from_rows(field, [examples.unit(i) for i in range(3)])
            planes.append(examples.image(field, rows, start))
        answers.append((total.dimension, [local_length(total, plane) for plane in planes]))
    assert answers[0] == answers[1]
    assert answers[0][1] == [order + 1 for order in orders]


@over_fields
@draws.few
@given(data=st.data(), seed=seeds)
def test_collineations_do_not_change_the_length(
    field: Field, data: st.DataObject, seed: int
) -> None:
    space, planes = examples.fat_space(field, [1, 2], Random(seed), others=1)
    g = data.draw(draws.invertible_matrices(field, 6))
    moved = examples.image_of_space(field, g, space)
    for plane in planes:
        image = examples.image(field, g, plane)
        assert moved.contains(image.plucker)
        assert local_length(moved, image) == local_length(space, plane)
        assert is_reduced_at(moved, image) == is_reduced_at(space, plane)


def test_collineations_do_not_change_the_plane_of_multiplicity_22() -> None:
    g = examples.random_invertible(F11, 6, Random(22))
    space = examples.image_of_space(F11, g, examples.cyclic_lagrangian(F11))
    plane = examples.image(F11, g, examples.plane_of_the_cyclic_lagrangian(F11))
    assert local_length(space, plane) == 22


@over_fields
def test_a_plane_alone_counts_once_and_more_trivectors_never_lower_the_length(
    field: Field,
) -> None:
    rng = Random(2)
    plane = examples.random_plane(field, 6, rng)
    space = Subspace.span(field, 6, [plane.plucker])
    lengths = []
    for _ in range(9):
        lengths.append(local_length(space, plane))
        extra = examples.random_rows(field, 1, 20, rng)
        space = Subspace.span(field, 6, [*space.rows, *extra])
    assert lengths[0] == 1
    assert all(a is not None and (b is None or a <= b) for a, b in pairwise(lengths))


@over_fields
def test_a_tangent_vector_in_l_is_what_makes_a_plane_fat(field: Field) -> None:
    # The tangent space of G(3,6) at e012 is spanned by the e_I with two indices in 012.
    plane = Plane.from_rows(field, [examples.unit(i) for i in range(3)])
    tangent = [t for t in examples.TRIPLES if len({0, 1, 2} & set(t)) == 2]
    for first, second in combinations(tangent, 2):
        space = Subspace.from_terms(
            field, 6, [{(0, 1, 2): 1}, {first: 1, second: 1}, {(3, 4, 5): 1, first: 1}]
        )
        assert not is_reduced_at(space, plane)
    for triple in examples.TRIPLES:
        if len({0, 1, 2} & set(triple)) < 2:
            space = Subspace.from_terms(field, 6, [{(0, 1, 2): 1}, {triple: 1}])
            assert is_reduced_at(space, plane)
            assert local_length(space, plane) == 1
