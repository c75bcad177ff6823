"""Random objects: what they are, uniform where that is said, and the same for the same seed."""

from collections import Counter
from collections.abc import Callable, Sequence
from contextlib import suppress
from itertools import combinations, product
from math import comb, sqrt
from random import Random
from typing import Any

import examples
import oracle
import pytest
import strategies

from trivector import QQ, Plane, Trivector
from trivector.errors import DimensionError, MixedFieldsError, UsageError
from trivector.families import (
    ORBITS,
    random_incident_few,
    random_lagrangian,
    random_lagrangian_through,
    random_lagrangian_with_planes,
    random_maximal_isotropic,
    random_plane,
    random_plane_meeting,
    random_subspace,
    random_trivector,
    twenty_planes,
)
from trivector.fields import Field, field_from_spec, prime_field
from trivector.sections import count_rational_planes

# Over a finite field with q elements all of these draw uniformly, so a statistic of a sample
# of fixed seed lies within five standard deviations of its mean, unless the code is wrong.
DEVIATIONS = 5


def chi_squared_fits(counts: Sequence[int], classes: int) -> bool:
    """Whether counts of equally likely classes are within five deviations of chi-squared."""
    expected = sum(counts) / classes
    missing = classes - len(counts)
    value = sum((n - expected) ** 2 / expected for n in counts) + missing * expected
    return value < classes - 1 + DEVIATIONS * sqrt(2 * (classes - 1))


def test_chi_squared_sees_a_bias() -> None:
    assert chi_squared_fits([100] * 15, 15)
    assert not chi_squared_fits([100] * 14, 15)
    assert not chi_squared_fits([150] * 5 + [75] * 10, 15)


# Maximal isotropic subspaces of small symplectic spaces

STANDARD = [[0, 0, 0, 1], [0, 0, 1, 0], [0, -1, 0, 0], [-1, 0, 0, 0]]
SKEWED = [[0, 1, 1, 0], [-1, 0, 1, 1], [-1, -1, 0, 0], [0, -1, 0, 0]]


def form_of(gram: Sequence[Sequence[int]], field: Field) -> Callable[[Any], list[Any]]:
    columns = list(zip(*gram, strict=True))
    return lambda v: [sum((x * c for x, c in zip(v, col, strict=True)), field.zero)
                      for col in columns]  # fmt: skip


def all_isotropic_planes(gram: Sequence[Sequence[int]], q: int) -> set[frozenset[Any]]:
    """Every two-dimensional isotropic subspace of F_q^4, as its set of vectors: brute force."""
    vectors = [v for v in product(range(q), repeat=4) if any(v)]
    found = set()
    for v, w in combinations(vectors, 2):
        value = sum(v[i] * gram[i][j] * w[j] for i in range(4) for j in range(4))
        if value % q == 0 and oracle.rank([v, w], q) == 2:
            found.add(frozenset(oracle.combinations_of([v, w], q, 4)))
    return found


@pytest.mark.parametrize("gram", [STANDARD, SKEWED], ids=["standard", "skewed"])
@pytest.mark.parametrize(("q", "number"), [(2, 15), (3, 40)])
def test_all_lagrangians_of_four_space_come_equally_often(
    gram: list[list[int]], q: int, number: int
) -> None:
    # (q+1)(q²+1), classical.
    everything = all_isotropic_planes(gram, q)
    assert len(everything) == number
    field, rng = prime_field(q), Random(5)
    form = form_of(gram, field)
    counts: Counter[Any] = Counter()
    for _ in range(100 * number):
        rows = random_maximal_isotropic(field, form, 4, rng)
        counts[frozenset(oracle.combinations_of([[int(x) for x in r] for r in rows], q, 4))] += 1
    assert set(counts) == everything
    assert chi_squared_fits(list(counts.values()), number)


def test_all_lagrangians_through_a_vector_come_equally_often() -> None:
    q, field, rng = 3, prime_field(3), Random(6)
    through = [1, 2, 0, 1]
    everything = {s for s in all_isotropic_planes(STANDARD, q) if tuple(through) in s}
    assert len(everything) == q + 1  # classical
    form = form_of(STANDARD, field)
    counts: Counter[Any] = Counter()
    for _ in range(1000):
        given = [[field.element(x) for x in through]]
        rows = random_maximal_isotropic(field, form, 4, rng, through=given)
        assert rows[0] == given[0]
        counts[frozenset(oracle.combinations_of([[int(x) for x in r] for r in rows], q, 4))] += 1
    assert set(counts) == everything
    assert chi_squared_fits(list(counts.values()), q + 1)


def test_a_uniform_choice_over_an_infinite_field_is_refused() -> None:
    with pytest.raises(UsageError, match="no uniform choice"):
        random_maximal_isotropic(QQ, list, 4, Random(1))


# Lagrangians of trivectors


@strategies.over_fields
def test_a_random_lagrangian_is_one(field: Field) -> None:
    for seed in range(3):
        space = random_lagrangian(field, Random(seed))
        assert space.is_lagrangian()
        assert space == random_lagrangian(field, Random(seed))
    assert random_lagrangian(field, Random(1)) != random_lagrangian(field, Random(2))


def planes_of_pg5(q: int) -> int:
    """[6,3]_q: 1395, 33880, 376805 for q = 2, 3, 4; classical."""
    return (q**6 - 1) * (q**5 - 1) * (q**4 - 1) // ((q**3 - 1) * (q**2 - 1) * (q - 1))


@pytest.mark.parametrize(
    ("q", "size"),
    [
        (2, 400),
        (3, 150),
        pytest.param(2, 4000, marks=pytest.mark.long),
        pytest.param(3, 1500, marks=pytest.mark.long),
        pytest.param(4, 300, marks=pytest.mark.long),
    ],
)
def test_the_mean_number_of_planes_is_that_of_all_lagrangians(q: int, size: int) -> None:
    """Each plane lies in ∏_{i≤9}(q^i+1) of the ∏_{i≤10}(q^i+1) Lagrangians (classical)."""
    mean = planes_of_pg5(q) / (q**10 + 1)
    rng, field = Random(11), field_from_spec(f"F_{q}")
    counts = [count_rational_planes(random_lagrangian(field, rng)) for _ in range(size)]
    found = sum(counts) / size
    deviation = sqrt(sum((n - found) ** 2 for n in counts) / (size - 1) / size)
    assert abs(found - mean) < DEVIATIONS * deviation
    assert deviation < mean / 4  # a sample that says something


def test_the_large_cell_has_its_share_of_the_lagrangians() -> None:
    q, size = 2, 1500
    field, rng = prime_field(q), Random(3)
    large = 0
    for _ in range(size):
        rows = random_lagrangian(field, rng).rows
        large += all(row[i] for i, row in enumerate(rows))
    # Graphs of symmetric 10×10 matrices, q^55 of ∏(q^i+1) Lagrangians (OEIS A028362, n = 11).
    share = 2**55 / 85817142703524375
    assert abs(large / size - share) < DEVIATIONS * sqrt(share * (1 - share) / size)


def test_over_q_the_height_is_bounded() -> None:
    for seed in range(5):
        space = random_lagrangian(QQ, Random(seed), height=2)
        assert max(abs(x) for row in space.rows for x in row) <= 2


@strategies.over_fields
@pytest.mark.parametrize("count", [1, 2, 5])
def test_a_lagrangian_has_its_planted_planes(field: Field, count: int) -> None:
    space, planes = random_lagrangian_with_planes(field, count, Random(count))
    assert len(set(planes)) == count
    assert space.is_lagrangian()
    assert all(space.contains(plane.plucker) for plane in planes)
    assert all(p.is_incident(q) for p in planes for q in planes)
    assert random_lagrangian_with_planes(field, count, Random(count)) == (space, planes)


def test_lagrangians_through_a_plane_are_uniform() -> None:
    # The mean number of further planes: each of the q(q²+q+1)² + q⁴(q²+q+1)² planes that meet
    # the given one pairs to zero with it, so lies in A with probability 1/(q⁹+1).
    q, size = 2, 400
    field, rng = prime_field(q), Random(8)
    plane = random_plane(field, rng)
    mean = 1 + (98 + 784) / (q**9 + 1)  # 98 and 784: classical, computed
    counts = [count_rational_planes(random_lagrangian_through([plane], rng)) for _ in range(size)]
    found = sum(counts) / size
    deviation = sqrt(sum((n - found) ** 2 for n in counts) / (size - 1) / size)
    assert abs(found - mean) < DEVIATIONS * deviation


def test_planes_that_no_lagrangian_contains_are_refused() -> None:
    first, *_, last = examples.over(QQ, examples.moved_twenty())
    apart = [p for p in examples.over(QQ, examples.moved_twenty()) if not p.is_incident(last)]
    with pytest.raises(UsageError, match="planes 0 and 1 do not meet"):
        random_lagrangian_through([apart[0], last], Random(1))
    assert first.is_incident(first)
    with pytest.raises(DimensionError, match="at least one plane"):
        random_lagrangian_through([], Random(1))
    with pytest.raises(DimensionError, match="not of P\\^6"):
        random_lagrangian_through(examples.over(QQ, examples.seven_planes()), Random(1))


def test_a_lagrangian_through_the_twenty_is_their_span() -> None:
    planes = twenty_planes(prime_field(7))
    space = random_lagrangian_through(planes, Random(1))
    assert all(space.contains(plane.plucker) for plane in planes)


# Planes


def test_random_planes_are_uniform() -> None:
    rng = Random(5)
    counts = Counter(random_plane(prime_field(2), rng) for _ in range(16000))
    assert len(counts) == 1395  # [6,3]_2
    assert chi_squared_fits(list(counts.values()), 1395)


@strategies.over_fields
@pytest.mark.parametrize("count", [1, 2, 3, 4, 5, 6])
def test_a_plane_meets_all_that_it_should(field: Field, count: int) -> None:
    plane: Plane | None = None
    # Six planes over a small field are often in special position: then other ones.
    for seed in range(count, count + (30 if count == 6 else 1)):
        given = random_incident_few(field, count, Random(seed))
        with suppress(UsageError):
            plane = random_plane_meeting(given, Random(9))
            break
    assert plane is not None
    assert all(plane.is_incident(other) for other in given)
    assert plane == random_plane_meeting(given, Random(9))


def test_planes_that_do_not_meet_each_other_are_met_as_well() -> None:
    field, rng = prime_field(101), Random(2)
    given = [random_plane(field, rng) for _ in range(5)]
    assert not any(p.is_incident(q) for p, q in combinations(given, 2))
    plane = random_plane_meeting(given, rng)
    assert all(plane.is_incident(other) for other in given)
    with pytest.raises(UsageError, match="each of these must meet two others"):
        random_plane_meeting([*given, random_plane(field, rng)], rng)


def test_every_plane_that_meets_two_points_of_it_comes() -> None:
    # Over F_2 all 882 planes other than the given one that meet it, and nearly always itself.
    field, rng = prime_field(2), Random(3)
    given = random_plane(field, rng)
    found = {random_plane_meeting([given], rng) for _ in range(20000)} - {given}
    assert len(found) == 98 + 784  # in a line, in a point: classical, computed


@strategies.over_fields
def test_a_few_planes_meet_two_by_two(field: Field) -> None:
    for count in (1, 4, 7 if field.order is None or field.order > 5 else 5):
        planes = random_incident_few(field, count, Random(1))
        assert len(set(planes)) == count
        for p, q in combinations(planes, 2):
            assert p.meet_dimension(q) >= 0


def test_impossible_wishes_for_planes_are_refused() -> None:
    with pytest.raises(UsageError, match="up to 7, not 8"):
        random_incident_few(QQ, 8, Random(1))
    with pytest.raises(UsageError, match="not 0"):
        random_incident_few(QQ, 0, Random(1))
    seven = twenty_planes(QQ)[:7]
    with pytest.raises(UsageError, match="meets 7 planes"):
        random_plane_meeting(seven, Random(1))
    with pytest.raises(DimensionError, match="at least one"):
        random_plane_meeting([], Random(1))
    with pytest.raises(DimensionError, match=r"planes\[0\] must be a plane of P\^5"):
        random_plane_meeting(examples.over(QQ, examples.seven_planes())[:1], Random(1))
    with pytest.raises(MixedFieldsError, match="planes 0 and 1"):
        random_plane_meeting([seven[0], random_plane(prime_field(5), Random(1))], Random(1))


# Subspaces and trivectors


@strategies.over_fields
@strategies.in_six_and_seven
def test_a_random_subspace_has_its_dimension(field: Field, n: int) -> None:
    for dimension in (0, 1, 9, comb(n, 3)):
        space = random_subspace(field, dimension, Random(1), n=n)
        assert (space.dimension, space.n) == (dimension, n)
    with pytest.raises(DimensionError, match=f"0 … {comb(n, 3)}, not {comb(n, 3) + 1}"):
        random_subspace(field, comb(n, 3) + 1, Random(1), n=n)


def quartic(alpha: Trivector) -> Any:
    """The quartic invariant by its formula in blocks; published / computed, signs from e012+e345.

    (ab − tr XY)² − 4 tr(adj X adj Y) + 4a det Y + 4b det X.
    """
    field = alpha.field
    value = dict(zip(examples.TRIPLES, alpha.coordinates, strict=True))

    def at(*word: int) -> Any:
        x = value[tuple(sorted(word))]
        return x if oracle.permutation_sign(word) == 1 else -x

    a, b = at(0, 1, 2), at(3, 4, 5)
    others = [(1, 2), (2, 0), (0, 1)]
    X = [[at(3 + j, *others[i]) for j in range(3)] for i in range(3)]
    Y = [[at(i, *(3 + k for k in others[j])) for i in range(3)] for j in range(3)]

    def dot(M: Any, N: Any) -> Any:
        return sum((M[i][j] * N[j][i] for i in range(3) for j in range(3)), field.zero)

    def adjugate(M: Any) -> Any:
        def minor(i: int, j: int) -> Any:
            r, s = [k for k in range(3) if k != j], [k for k in range(3) if k != i]
            x = M[r[0]][s[0]] * M[r[1]][s[1]] - M[r[0]][s[1]] * M[r[1]][s[0]]
            return x if (i + j) % 2 == 0 else -x

        return [[minor(i, j) for j in range(3)] for i in range(3)]

    def det(M: Any) -> Any:
        return sum((M[0][j] * adjugate(M)[j][0] for j in range(3)), field.zero)

    middle = a * b - dot(X, Y)
    four = field.element(4)
    return (
        middle * middle
        - four * dot(adjugate(X), adjugate(Y))
        + four * a * det(Y)
        + four * b * det(X)
    )


@strategies.over_odd_fields
@pytest.mark.parametrize("orbit", ORBITS)
def test_the_quartic_invariant_tells_the_generic_orbits(field: Field, orbit: str) -> None:
    alpha = random_trivector(field, orbit, Random(5))
    value = quartic(alpha)
    if orbit in ("split", "nonsplit"):
        root = field.factor([-value, field.zero, field.one])
        assert value
        assert (len(root) == 2) is (orbit == "split")
    else:
        assert not value
    assert alpha == random_trivector(field, orbit, Random(5))


@strategies.over_fields
def test_small_orbits_are_told_by_decomposability_and_divisors(field: Field) -> None:
    for seed in range(3):
        made = {orbit: random_trivector(field, orbit, Random(seed)) for orbit in ORBITS}
        assert not made["zero"]
        kinds = {orbit: (alpha.is_decomposable(), divisors(alpha)) for orbit, alpha in made.items()}
        # {v : v∧α = 0} has dimension 3 for a decomposable, 1 for v∧ω, 0 for the others.
        assert kinds == {
            "zero": (True, 6),
            "decomposable": (True, 3),
            "divisible": (False, 1),
            "tangent": (False, 0),
            "split": (False, 0),
            "nonsplit": (False, 0),
        }


def divisors(alpha: Trivector) -> int:
    """dim {v : v∧α = 0}."""
    units = [[int(i == j) for j in range(6)] for i in range(6)]
    return 6 - alpha.field.matrix([alpha.wedge_vector(v) for v in units], 15).rank()


def test_over_f2_the_generic_orbits_have_their_sizes() -> None:
    """Brute force: sums of two decomposables of disjoint planes are the split ones.

    357120 in all (design); of them a sample is drawn, and the nonsplit ones must not be sums.
    """
    q, field = 2, prime_field(2)
    plane_vectors = dict.fromkeys(oracle.decomposables(q), 1)
    for orbit in ("split", "nonsplit"):
        for seed in range(4):
            alpha = [int(x) for x in random_trivector(field, orbit, Random(seed)).coordinates]
            sums = [
                p
                for p in plane_vectors
                if tuple((x + y) % q for x, y in zip(alpha, p, strict=True)) in plane_vectors
            ]
            # α = p + p′ in exactly one way, p and p′ both found; or in none.
            assert len(sums) == (2 if orbit == "split" else 0)


@pytest.mark.long
def test_a_decomposable_is_uniform_in_its_orbit() -> None:
    rng, size = Random(2), 1395  # [6,3]_2
    counts = Counter(
        random_trivector(prime_field(2), "decomposable", rng).coordinates for _ in range(4 * size)
    )
    assert chi_squared_fits(list(counts.values()), size)


@pytest.mark.parametrize(
    ("orbit", "size"), [("divisible", 54684), ("tangent", 468720), ("split", 357120)]
)
def test_the_orbits_over_f2_have_coincidences_as_their_sizes_say(orbit: str, size: int) -> None:
    """Sizes: computed, they add up to 2²⁰. n draws have about n(n−1)/2/size equal pairs."""
    rng, draws = Random(2), 1500
    counts = Counter(random_trivector(prime_field(2), orbit, rng).coordinates for _ in range(draws))
    pairs = sum(n * (n - 1) // 2 for n in counts.values())
    mean = draws * (draws - 1) / 2 / size
    assert abs(pairs - mean) < DEVIATIONS * sqrt(mean)


def test_an_unknown_orbit_is_refused() -> None:
    with pytest.raises(UsageError, match="nonsplit, not 'simple'"):
        random_trivector(QQ, "simple", Random(1))


# The same bytes everywhere


def test_seeds_are_pinned() -> None:
    F101 = prime_field(101)
    space = random_lagrangian(F101, Random(1))
    assert [int(x) for x in space.rows[0][10:]] == PINNED["lagrangian"]
    plane = random_plane_meeting([random_plane(F101, Random(1))], Random(2))
    assert plane.to_entries()[0] == PINNED["plane"]
    few = random_incident_few(QQ, 3, Random(1))
    assert few[2].to_entries()[1] == PINNED["rational"]
    alpha = random_trivector(field_from_spec("F_9"), "nonsplit", Random(1))
    assert [alpha.field.format(x) for x in alpha.coordinates[:4]] == PINNED["nonsplit"]
    assert isinstance(plane, Plane)


PINNED: dict[str, list[Any]] = {
    "lagrangian": [49, 37, 10, 51, 83, 39, 52, 92, 19, 38],
    "plane": [1, 0, 0, 88, 14, 52],
    "rational": [0, 1, "-1/2", 0, "-4/5", "7/10"],
    "nonsplit": ["2*a+2", "2*a+2", "a+1", "2*a+1"],
}
