"""Groups of collineations: known orders, small cases by brute force, second methods."""

from itertools import combinations, permutations
from pathlib import Path
from random import Random
from typing import Any

import examples
import oracle_f4
import oracle_symmetry
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

import trivector
from trivector.configurations import Configuration, Incidence
from trivector.errors import UsageError
from trivector.fields import QQ, Field, field_from_spec, prime_field
from trivector.subspaces import Plane
from trivector.symmetry import Collineation, CollineationGroup, canonical_form, collineations

DATA = Path(__file__).parents[2] / "data"
DOCUMENTS = sorted(path.stem for path in DATA.glob("*.json"))


def read(name: str, field: str | None = None) -> Configuration:
    configuration = trivector.read(DATA / f"{name}.json", field=field)
    assert isinstance(configuration, Configuration)
    return configuration


def twenty(field: Field) -> Configuration:
    return Configuration(tuple(examples.over(field, examples.twenty_planes())))


def moved(configuration: Configuration, rng: Random) -> Configuration:
    """The image under a random matrix, its planes in another order."""
    g = examples.random_invertible(configuration.field, configuration.n, rng)
    planes = [examples.image(configuration.field, g, plane) for plane in configuration.planes]
    rng.shuffle(planes)
    return Configuration(tuple(planes))


def check_literally(group: CollineationGroup) -> None:
    """Every generator is invertible and moves the planes as it says."""
    configuration = group.configuration
    k = configuration.field
    for g in group.generators:
        assert k.matrix(g.matrix, configuration.n).det()
        assert next(x for row in g.matrix for x in row if x) == k.one
        for plane, image in zip(configuration.planes, g.permutation, strict=True):
            rows = plane.rows
            for _ in range(g.frobenius):
                rows = [[x**k.characteristic for x in row] for row in rows]
            twisted = Plane.from_rows(k, rows)
            assert examples.image(k, g.matrix, twisted) == configuration.planes[image]


def order_of(permutations_: Any, degree: int) -> int:
    """The order of the group that permutations generate, by sympy."""
    from sympy.combinatorics import Permutation, PermutationGroup

    listed = [Permutation(list(p)) for p in permutations_] or [Permutation(degree - 1)]
    return int(PermutationGroup(listed).order())


def generated(group: CollineationGroup) -> int:
    return order_of([g.permutation for g in group.generators], len(group.configuration.planes))


# Values from outside


@pytest.mark.parametrize("field", ["Q", "F_3", "F_7", "F_9", {"modulus": "x^2+1"}], ids=str)
def test_the_twenty_planes_have_1920_collineations(field: Any) -> None:
    # computed, no text: 1920, transitive on the 20 planes; 16 + 30 points
    group = collineations(twenty(field_from_spec(field)))
    assert (group.order, group.order_on_planes, group.kernel_order) == (1920, 1920, 1)
    assert group.plane_orbits == (tuple(range(20)),)
    assert sorted(map(len, group.point_orbits)) == [16, 30]
    assert group.stabiliser_order(7) == 96
    assert group.exhaustive
    check_literally(group)
    assert generated(group) == 1920


def test_every_seventeen_of_the_twenty_have_the_stabiliser_of_the_other_three() -> None:
    # The twenty are all planes that meet the seventeen (checked by `examine`),
    # so a collineation that keeps the seventeen keeps the twenty.
    planes = twenty(QQ)
    everything = list(collineations(planes).iter_permutations())
    assert len(set(everything)) == 1920
    for left_out in ((0, 1, 2), (0, 4, 8), (0, 5, 19)):
        kept = [i for i in range(20) if i not in left_out]
        group = collineations(Configuration(tuple(planes.planes[i] for i in kept)))
        expected = {
            tuple(kept.index(p[i]) for i in kept)
            for p in everything
            if {p[i] for i in left_out} == set(left_out)
        }
        assert set(group.iter_permutations()) == expected
        assert group.order == len(expected)


def test_the_seven_planes_have_the_group_of_the_fano_plane() -> None:
    # classical: collineations permute the lines of the Fano plane, order 168;
    # here by all 5040 permutations of the seven coordinates
    group = collineations(read("seven-planes-p6"))
    lines = [frozenset(line) for line in examples.FANO_LINES]
    expected = set()
    for p in permutations(range(7)):
        images = [frozenset(p[i] for i in line) for line in lines]
        if set(images) == set(lines):
            expected.add(tuple(lines.index(image) for image in images))
    assert len(expected) == 168
    assert set(group.iter_permutations()) == expected
    assert group.order_on_planes == 168
    # diagonal matrices modulo scalars keep every plane
    assert (group.kernel_dimension, group.order) == (6, None)
    check_literally(group)


@pytest.mark.parametrize("q", [2, 3])
def test_over_a_finite_field_the_diagonal_matrices_are_counted(q: int) -> None:
    group = collineations(read("seven-planes-p6", f"F_{q}"))
    assert group.kernel_order == (q - 1) ** 6
    assert group.order == 168 * (q - 1) ** 6


def test_one_plane_is_kept_by_a_parabolic_group() -> None:
    # classical: matrices with a block of zeros, 9 + 9 + 9 entries free
    group = collineations(Configuration(twenty(prime_field(2)).planes[:1]))
    assert group.order_on_planes == 1
    assert group.kernel_dimension == 26
    assert group.kernel_order is None  # 2^27 matrices are not counted


def twenty_two() -> Configuration:
    field = field_from_spec("F_4")
    planes = oracle_f4.twenty_two_planes()
    rows = [[[field.from_code(x) for x in row] for row in plane] for plane in planes]
    return Configuration.from_rows(field, rows)


def test_the_22_planes_over_f4_have_a_threefold_transitive_group() -> None:
    # published, "On 2-dimensional dual hyperovals of polar type": existence,
    # uniqueness, group. Threefold transitivity and the orders 443520 and (with
    # semilinear maps) 887040 = |M22| and |M22:2| are found here, and confirmed
    # by the search for a canonical form, which shares no search with this one.
    configuration = twenty_two()
    group = collineations(configuration)
    assert group.order == 443520
    assert group.basic_orbits[:3] == (22, 21, 20)
    assert len(group.plane_orbits) == 1
    assert len(collineations(configuration, fixing=[4]).plane_orbits) == 2
    assert len(collineations(configuration, fixing=[4, 9]).plane_orbits) == 3
    assert generated(group) == 443520
    check_literally(group)
    form = canonical_form(configuration)
    assert order_of(form.automorphisms, 22) == 443520


@pytest.mark.long
def test_semilinear_maps_double_the_group_of_the_22_planes() -> None:
    group = collineations(twenty_two(), semilinear=True)
    assert group.order == 887040
    assert [g.frobenius for g in group.generators].count(1) == 1
    check_literally(group)
    assert generated(group) == 887040


def test_frobenius_is_a_symmetry_of_planes_over_the_prime_field() -> None:
    field = field_from_spec("F_9")
    planes = Configuration(twenty(field).planes[1:8])
    linear, semilinear = collineations(planes), collineations(planes, semilinear=True)
    assert semilinear.order == 2 * linear.order
    assert semilinear.order_on_planes == linear.order_on_planes == generated(semilinear)
    check_literally(semilinear)


@pytest.mark.parametrize(
    ("family", "on_planes", "kernel"),
    [
        # classical: GL(5,2) on the lines of P^4, translations along the point
        (0, 31 * 30 * 28 * 24 * 16, 2**5),
        # GL(4,2) on the points of P³
        (3, 15 * 14 * 12 * 8, 1),
        # GL(3,2) on the seven conics and the nucleus plane
        (4, 168, 1),
    ],
)
def test_infinite_families_have_their_classical_groups_over_f2(
    family: int, on_planes: int, kernel: int
) -> None:
    lagrangian = examples.families()[family].lagrangian(prime_field(2))
    planes = trivector.LinearSection(lagrangian).examine().planes
    assert planes is not None
    group = collineations(Configuration(planes))
    assert (group.order_on_planes, group.kernel_order) == (on_planes, kernel)


# Small cases by brute force


def profile_of_three(planes: list[Plane]) -> tuple[int, ...]:
    """The dimensions in the modular lattice that three subspaces generate.

    They determine the triple up to GL(V): the representations of the quiver
    with three arrows into one point are sums of nine indecomposable ones
    (classical, Dynkin type D4), and these dimensions determine how many of
    each there are.
    """
    a, b, c = planes
    return (
        a.meet_dimension(b),
        a.meet_dimension(c),
        b.meet_dimension(c),
        a.meet(b).meet_dimension(c),
        a.join(b).meet_dimension(c),
        a.join(c).meet_dimension(b),
        b.join(c).meet_dimension(a),
    )


@pytest.mark.parametrize("n", [6, 7])
@given(data=st.data())
@draws.some
def test_the_group_of_three_planes_is_that_of_their_lattice(n: int, data: Any) -> None:
    field = data.draw(st.sampled_from([prime_field(2), prime_field(3), field_from_spec("F_4"), QQ]))
    vectors = data.draw(draws.matrices(field, 6, n))
    triples = data.draw(
        st.lists(st.sampled_from(list(combinations(range(6), 3))), min_size=3, max_size=3)
    )
    rows = [[vectors[i] for i in triple] for triple in triples]
    if any(len(draws.literal_reduced(field, plane, n)[1]) < 3 for plane in rows):
        return
    planes = [Plane.from_rows(field, plane) for plane in rows]
    if len(set(planes)) < 3:
        return
    group = collineations(Configuration(tuple(planes)))
    expected = {
        p
        for p in permutations(range(3))
        if profile_of_three([planes[i] for i in p]) == profile_of_three(planes)
    }
    assert set(group.iter_permutations()) == expected
    assert group.order_on_planes == len(expected)
    assert group.exhaustive
    check_literally(group)


def pencil(field: Field, cross_ratio: Any) -> Configuration:
    """Four planes through a line in a solid, with a given cross-ratio."""
    directions = [[1, 0], [0, 1], [1, 1], [1, cross_ratio]]
    unit = examples.unit
    planes = [[unit(0), unit(1), [0, 0, *d, 0, 0]] for d in directions]
    return Configuration.from_rows(field, planes)


@pytest.mark.parametrize(
    ("field", "cross_ratio", "order"),
    [("Q", 3, 4), ("Q", 2, 8), ("Q", -1, 8), ("F_7", 3, 12), ("F_4", "a", 12), ("F_9", 2, 24)],
)
def test_four_planes_of_a_pencil_have_the_group_of_their_cross_ratio(
    field: str, cross_ratio: Any, order: int
) -> None:
    # classical: Klein's four-group; the dihedral group if harmonic (2, −1, 1/2),
    # the alternating one if equianharmonic (x² − x + 1 = 0), and the symmetric
    # one where both coincide (characteristic 3; over F_4 all a are equianharmonic)
    group = collineations(pencil(field_from_spec(field), cross_ratio))
    assert group.order_on_planes == order
    assert group.kernel_dimension == 20
    check_literally(group)


@pytest.mark.parametrize("name", DOCUMENTS)
def test_an_image_has_the_same_group(name: str) -> None:
    configuration = read(name)
    here = collineations(configuration)
    there = collineations(moved(configuration, Random(name)))
    assert here.order_on_planes == there.order_on_planes
    assert here.kernel_dimension == there.kernel_dimension
    assert sorted(map(len, here.plane_orbits)) == sorted(map(len, there.plane_orbits))
    assert sorted(map(len, here.point_orbits)) == sorted(map(len, there.point_orbits))
    check_literally(there)
    # a second search, through frames
    form = canonical_form(configuration)
    assert order_of(form.automorphisms, len(configuration.planes)) == here.order_on_planes
    assert order_of((), 3) == 1


def test_the_points_of_an_orbit_are_permuted_by_the_matrices() -> None:
    group = collineations(read("f7-sixteen"))
    k, points = group.configuration.field, group.incidence.points
    assert points == Incidence(group.configuration).points
    orbit_of = {i: orbit for orbit in group.point_orbits for i in orbit}
    index = {point.flat.rows[0]: i for i, point in enumerate(points)}
    for g in group.generators:
        for i, point in enumerate(points):
            image = draws.apply(k, g.matrix, point.flat.rows[0])
            leading = next(x for x in image if x)
            assert index[tuple(x / leading for x in image)] in orbit_of[i]


def test_repeated_planes_keep_their_multiplicity() -> None:
    planes = twenty(QQ).planes
    twice = collineations(Configuration((planes[0], *planes)))
    assert twice.order == 96
    assert twice.plane_orbits[0] == (0,)
    check_literally(twice)


def test_the_stabiliser_of_planes_is_found_by_starting_with_them() -> None:
    configuration = twenty(prime_field(7))
    everything = list(collineations(configuration).iter_permutations())
    for fixing in ([3], [3, 11], [0, 1, 2]):
        group = collineations(configuration, fixing=fixing)
        expected = {p for p in everything if all(p[i] == i for i in fixing)}
        assert group.order == len(expected)
        assert set(group.iter_permutations()) == expected


# Refusals and limits


def test_a_limit_leaves_the_order_undecided() -> None:
    group = collineations(twenty(QQ), limit=20)
    assert group.order is None
    assert group.order_on_planes is None
    assert not group.exhaustive
    assert "20 partial images" in str(group.limit)
    check_literally(group)


def test_what_makes_no_sense_is_refused() -> None:
    with pytest.raises(UsageError, match="finite field, not Q"):
        collineations(twenty(QQ), semilinear=True)
    with pytest.raises(UsageError, match="plane 20 does not exist"):
        collineations(twenty(QQ), fixing=[20])


def test_a_wrong_claim_is_seen_when_it_is_checked() -> None:
    configuration = twenty(QQ)
    group = collineations(configuration)
    good = group.generators[0]
    good.verify(configuration, configuration)
    zero = tuple(tuple(QQ.zero for _ in range(6)) for _ in range(6))
    identity = tuple(range(20))
    for permutation, matrix, words in (
        (good.permutation, zero, "singular"),
        (identity, good.matrix, "does not go to"),
        ((0,) * 20, good.matrix, "not a permutation"),
    ):
        with pytest.raises(UsageError, match=words):
            Collineation(permutation, matrix).verify(configuration, configuration)
    other = Configuration(tuple(reversed(configuration.planes)))
    with pytest.raises(UsageError, match="does not go to"):
        good.verify(configuration, other)


def test_the_incidence_graph_of_the_twenty_planes_has_5760_automorphisms() -> None:
    # computed (no text gives it): incidence graph 5760, collineations 1920
    configuration = twenty(QQ)
    blocks = [point.planes for point in Incidence(configuration).points]
    automorphisms = set(oracle_symmetry.graph_automorphisms(20, blocks))
    assert len(automorphisms) == 5760
    assert automorphisms > set(collineations(configuration).iter_permutations())


@pytest.mark.long
def test_of_all_5760_automorphisms_of_the_graph_1920_are_projective() -> None:
    # Each one by itself: a linear system in 36 unknowns, and a rank.
    configuration = twenty(prime_field(101))
    blocks = [point.planes for point in Incidence(configuration).points]
    planes = [[draws.ints(row) for row in plane.rows] for plane in configuration.planes]
    projective = {
        images
        for images in oracle_symmetry.graph_automorphisms(20, blocks)
        if oracle_symmetry.projective_map(planes, images, 101) is not None
    }
    assert len(projective) == 1920
    assert projective == set(collineations(configuration).iter_permutations())
