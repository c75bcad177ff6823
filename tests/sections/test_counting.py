"""How many planes, over the extensions of a finite field and modulo primes."""

from math import sqrt
from random import Random
from typing import Any

import examples
import oracle_f4
import pytest
import sympy

from trivector.errors import FieldError, UsageError
from trivector.fields import QQ, field_from_spec, finite_field, prime_field
from trivector.sections import LinearSection
from trivector.sections.counting import (
    count_modulo_primes,
    count_over_extensions,
    reduce_subspace,
)
from trivector.sections.sweep import count_rational_planes
from trivector.subspaces import Subspace

POINTS = 10**8
ORDERS = (2, 3, 4, 5, 7, 8, 9)
FAMILIES = examples.families()
CONICS, TANGENTS = 4, 5


# Infinite sections


def family_cases() -> list[Any]:
    """Odd q for the tangent planes; F_2 and F_4 for those are compared with brute force."""
    return [
        pytest.param(
            position,
            q,
            id=f"{family.name} over F_{q}",
            marks=[pytest.mark.long] if position < 3 and q > 3 else [],
        )
        for position, family in enumerate(FAMILIES)
        for q in ORDERS
        if q % 2 or position != TANGENTS
    ]


@pytest.mark.parametrize(("position", "q"), family_cases())
def test_the_six_families_have_their_number_of_planes(position: int, q: int) -> None:
    # Classical, see `examples.families`; in characteristic 2 the nucleus plane joins the conic
    # planes (computed).
    family = FAMILIES[position]
    expected = family.count(q) + (q % 2 == 0 and position == CONICS)
    space = family.lagrangian(finite_field(q))
    assert count_over_extensions(space, 1, max_points=POINTS) == {1: expected}


@pytest.mark.parametrize(
    "position",
    [pytest.param(i, marks=[pytest.mark.long] if i in (0, 1, 2) else []) for i in range(6)],
)
def test_the_families_over_f2_and_its_extensions(position: int) -> None:
    family = FAMILIES[position]
    counts = count_over_extensions(family.lagrangian(prime_field(2)), 3, max_points=POINTS)
    assert list(counts) == [1, 2, 3]
    if position != TANGENTS:
        nucleus = position == CONICS
        assert counts == {j: family.count(2**j) + nucleus for j in (1, 2, 3)}
    for j, q in ((1, 2), (2, 4)):
        assert counts[j] == len(
            oracle_f4.planes_in_span(q, [[c % 2 for c in r] for r in family.basis])
        )


@pytest.mark.parametrize("position", [3, 4, 5])
def test_the_families_over_f3_and_f9(position: int) -> None:
    family = FAMILIES[position]
    counts = count_over_extensions(family.lagrangian(prime_field(3)), 2, max_points=POINTS)
    assert counts == {1: family.count(3), 2: family.count(9)}


@pytest.mark.long
def test_a_ruling_over_f4_and_f16() -> None:
    family = FAMILIES[3]
    counts = count_over_extensions(family.lagrangian(finite_field(4)), 2, max_points=POINTS)
    assert counts == {1: family.count(4), 2: family.count(16)}


def test_a_refused_extension_is_named_before_any_sweep_begins() -> None:
    space = FAMILIES[3].lagrangian(prime_field(2))
    seen: list[str] = []
    with pytest.raises(UsageError, match="extension degree 11"):
        count_over_extensions(space, 11, max_points=10**12, on_progress=seen.append)
    assert not any("sweep" in line for line in seen)
    with pytest.raises(UsageError, match=r"extension degree 3.*max_points = 100"):
        count_over_extensions(space, 3, max_points=100)


# Finite sections: the counts follow from the closed points


@pytest.mark.parametrize(
    ("q", "top"), [(2, 3), (3, 2), (5, 2), pytest.param(4, 2, marks=pytest.mark.long)]
)
@pytest.mark.parametrize("seed", range(3))
def test_counts_over_extensions_are_those_of_direct_examinations(
    q: int, top: int, seed: int
) -> None:
    field = finite_field(q)
    rng = Random(10 * q + seed)
    planes = examples.random_incident_planes(field, 2 + seed % 2, rng)
    space = examples.lagrangian_through(field, planes, rng)
    counts = count_over_extensions(space, top, max_points=POINTS)
    for j in range(1, top + 1):
        residue = field.extension(j)
        rows = [[residue.embed(x) for x in row] for row in space.rows]
        above = Subspace.span(residue.field, 6, rows)
        assert counts[j] == count_rational_planes(above)
        report = LinearSection(above).examine()
        if report.planes is not None:
            assert counts[j] == len(report.planes)


def test_the_cyclic_lagrangian_over_all_extensions() -> None:
    # Computed: closed points of degrees 2, 10, 10 modulo 2; one plane modulo 11; none modulo 3.
    expected = {j: 2 * (j % 2 == 0) + 20 * (j % 10 == 0) for j in range(1, 21)}
    for p, numbers in (
        (2, expected),
        (11, dict.fromkeys(range(1, 21), 1)),
        (3, dict.fromkeys(range(1, 21), 0)),
    ):
        space = examples.cyclic_lagrangian(prime_field(p))
        assert count_over_extensions(space, 20, max_points=1) == numbers


def test_the_zero_space_has_no_plane_over_any_extension() -> None:
    assert count_over_extensions(Subspace(prime_field(2), 6, ()), 3, max_points=1) == {
        1: 0,
        2: 0,
        3: 0,
    }


@pytest.mark.parametrize("spec", ["Q", {"modulus": "x^2+1"}])
def test_extensions_of_an_infinite_field_are_refused(spec: Any) -> None:
    space = FAMILIES[0].lagrangian(field_from_spec(spec))
    with pytest.raises(UsageError, match="infinite"):
        count_over_extensions(space, 1, max_points=POINTS)


# Modulo primes


def saturated(rows: list[list[int]], p: int) -> list[list[int]]:
    """A basis of a lattice that stays independent modulo p: divide by p while one can."""
    basis = [list(row) for row in rows]
    while True:
        relation = sympy.Matrix(basis).T.rank()  # over ℚ
        assert relation == len(basis)
        found = dependency(basis, p)
        if found is None:
            return basis
        index = next(i for i, c in enumerate(found) if c)
        total = [sum(c * row[j] for c, row in zip(found, basis, strict=True)) for j in range(20)]
        assert all(x % p == 0 for x in total)
        basis[index] = [x // p for x in total]


def dependency(rows: list[list[int]], p: int) -> list[int] | None:
    """Coefficients, not all 0 modulo p, of a combination that is 0 modulo p."""
    work = [
        ([x % p for x in row], [int(i == j) for j in range(len(rows))])
        for i, row in enumerate(rows)
    ]
    while work:
        vector, coefficients = work.pop()
        pivot = next((j for j, x in enumerate(vector) if x), None)
        if pivot is None:
            return coefficients
        scale = pow(vector[pivot], -1, p)
        work = [
            (
                [(x - other[pivot] * scale * y) % p for x, y in zip(other, vector, strict=True)],
                [
                    (a - other[pivot] * scale * b) % p
                    for a, b in zip(combination, coefficients, strict=True)
                ],
            )
            for other, combination in work
        ]
    return None


def integer_rows(space: Subspace) -> list[list[int]]:
    rows = []
    for row in space.rows:
        denominator = 1
        for x in row:
            denominator = denominator * int(x.q) // int(sympy.gcd(denominator, int(x.q)))
        rows.append([int(x * denominator) for x in row])
    return rows


def test_the_cyclic_lagrangian_modulo_primes() -> None:
    # Computed: no plane modulo 3, 5, 7, 13, 43, 47; bad primes below 43 are 2 and 11.
    space = examples.cyclic_lagrangian(QQ)
    primes = [2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43, 47]
    counts = count_modulo_primes(space, primes, max_points=POINTS)
    assert [c.prime for c in counts] == primes
    assert [c.prime for c in counts if c.why_bad and c.prime < 43] == [2, 11]
    assert {c.prime: c.count for c in counts if c.prime in (2, 3, 5, 7, 11, 13, 43, 47)} == {
        2: 0,
        3: 0,
        5: 0,
        7: 0,
        11: 1,
        13: 0,
        43: 0,
        47: 0,
    }
    # Empty, of dimension −1, over ℚ; finite modulo 2 and 11.
    for count in (counts[0], counts[4]):
        assert count.why_bad == "dimension 0 in place of -1"


def test_the_twenty_planes_modulo_primes() -> None:
    # Computed: exactly twenty planes modulo 3, 5, 7; modulo 2 they coincide in fours.
    planes = examples.over(QQ, examples.twenty_planes())
    space = Subspace.span(QQ, 6, [plane.plucker for plane in planes])
    counts = {c.prime: c for c in count_modulo_primes(space, [3, 2, 7, 5], max_points=POINTS)}
    assert list(counts) == [3, 2, 7, 5]
    assert [counts[p].count for p in (3, 5, 7)] == [20, 20, 20]
    assert [p for p in counts if counts[p].why_bad] == [2]
    reduced = saturated(integer_rows(space), 2)
    assert counts[2].count == len(
        oracle_f4.planes_in_span(2, [[x % 2 for x in row] for row in reduced])
    )


@pytest.mark.parametrize("seed", range(3))
def test_counts_modulo_2_and_3_are_those_of_brute_force(seed: int) -> None:
    rng = Random(seed)
    rows = [[rng.randint(-3, 3) for _ in range(20)] for _ in range(7)]
    # Rows congruent modulo 6, so that the lattice must be saturated first.
    rows.append([x + 6 * rng.randint(-1, 1) for x in rows[0]])
    space = Subspace.span(QQ, 6, rows)
    assert space.dimension == 8
    for count in count_modulo_primes(space, [2, 3], max_points=POINTS):
        p = count.prime
        reduced = [[x % p for x in row] for row in saturated(integer_rows(space), p)]
        assert count.count == len(oracle_f4.planes_in_span(p, reduced))
        below = reduce_subspace(space, p)
        assert below.dimension == 8
        assert below == Subspace.span(prime_field(p), 6, reduced)


def test_a_prime_where_reducedness_jumps_is_named() -> None:
    # e0∧e1∧e2 and its image under e_i → e_i + 5·e_(i+3): two planes that come together at 5,
    # on a line with e012 + 5·(…) + …; modulo 5 the osculating line is left (computed by hand).
    rows = [
        examples.trivector_row({(0, 1, 2): 1}),
        [
            sum(5**i * c for i, c in enumerate(column))
            for column in zip(*examples.osculating_rows(3), strict=True)
        ],
    ]
    space = Subspace.span(QQ, 6, rows)
    (five, seven) = count_modulo_primes(space, [5, 7], max_points=POINTS)
    assert (five.count, seven.count) == (1, 2)
    assert "reduced" in five.why_bad
    assert seven.why_bad == ""


def test_an_infinite_section_is_counted_modulo_primes_by_sweeps() -> None:
    family = FAMILIES[3]
    counts = count_modulo_primes(family.lagrangian(QQ), [2, 3, 5, 11], max_points=POINTS)
    assert {c.prime: c.count for c in counts} == {p: family.count(p) for p in (2, 3, 5, 11)}
    assert not any(c.why_bad for c in counts)


@pytest.mark.parametrize("prime", [0, 1, 4, 9, 561])
def test_a_number_that_is_no_prime_is_refused(prime: int) -> None:
    with pytest.raises(FieldError):
        count_modulo_primes(examples.cyclic_lagrangian(QQ), [3, prime], max_points=POINTS)


@pytest.mark.parametrize("spec", ["F_7", "F_9", {"modulus": "x^2+1"}])
def test_primes_are_for_data_over_the_rationals(spec: Any) -> None:
    space = examples.cyclic_lagrangian(field_from_spec(spec))
    with pytest.raises(UsageError, match="over Q"):
        count_modulo_primes(space, [3], max_points=POINTS)


# The mean over all Lagrangians


def omega(first: list[int], second: list[int], p: int) -> int:
    return sum(s * first[i] * second[j] for i, j, s in SYMPLECTIC) % p


SYMPLECTIC = [
    (
        i,
        examples.TRIPLES.index(rest),
        examples.oracle.permutation_sign(triple + rest),
    )
    for i, triple in enumerate(examples.TRIPLES)
    for rest in [tuple(j for j in range(6) if j not in triple)]
]


def random_lagrangian(p: int, rng: Random) -> list[list[int]]:
    """A uniformly random Lagrangian of F_p^20, one vector after another.

    A nonzero vector v is drawn uniformly from E = A^⊥ modulo A, and A grows by
    it. Uniform by induction on dim E = 2g: a Lagrangian of E is reached through
    each of its p^g − 1 nonzero vectors, of the p^(2g) − 1 of E, and then
    through a uniform Lagrangian of v^⊥/v; the product does not depend on it.
    """
    basis: list[list[int]] = []  # of A
    space = [[int(i == j) for j in range(20)] for i in range(20)]  # of a complement of A in A^⊥
    while len(basis) < 10:
        weights = [0] * len(space)
        while not any(weights):
            weights = [rng.randrange(p) for _ in space]
        v = [sum(c * row[j] for c, row in zip(weights, space, strict=True)) % p for j in range(20)]
        basis.append(v)
        # v^⊥ in the complement, without v: v replaces a basis vector that it uses.
        leading = next(i for i, c in enumerate(weights) if c)
        rest = [row for i, row in enumerate(space) if i != leading]
        values = [omega(v, row, p) for row in rest]
        if not rest:
            break
        pivot = next(i for i, x in enumerate(values) if x)
        scale = pow(values[pivot], -1, p)
        space = [
            [(x - value * scale * y) % p for x, y in zip(row, rest[pivot], strict=True)]
            for i, (row, value) in enumerate(zip(rest, values, strict=True))
            if i != pivot
        ]
    return basis


def check_mean(q: int, samples: int, seed: int) -> None:
    # Each decomposable lies in ∏_{i<10}(q^i+1) of the ∏_{i≤10}(q^i+1) Lagrangians, two that
    # meet in ∏_{i<9}, two that do not in none; [6,3]_q and the numbers of planes that meet
    # a given one: classical (checks.md). That gives the mean and the variance.
    planes = {2: 1395, 3: 33880}[q]
    meeting = q * (q * q + q + 1) ** 2 + q**4 * (q * q + q + 1) ** 2
    mean = planes / (q**10 + 1)
    variance = mean + planes * meeting / ((q**10 + 1) * (q**9 + 1)) - mean**2
    rng, field = Random(seed), prime_field(q)
    total = 0
    for _ in range(samples):
        space = Subspace.span(field, 6, random_lagrangian(q, rng))
        assert space.dimension == 10
        total += count_rational_planes(space)
    assert abs(total / samples - mean) < 3.5 * sqrt(variance / samples)


def test_the_random_lagrangians_are_lagrangian() -> None:
    for p in (2, 3):
        for seed in range(5):
            rows = random_lagrangian(p, Random(seed))
            assert Subspace.span(prime_field(p), 6, rows).is_lagrangian()


@pytest.mark.parametrize(("q", "samples"), [(2, 300), (3, 60)])
def test_the_mean_number_of_planes_in_some_random_lagrangians(q: int, samples: int) -> None:
    check_mean(q, samples, seed=1)


@pytest.mark.long
@pytest.mark.parametrize(("q", "samples"), [(2, 4000), (3, 1500)])
def test_the_mean_number_of_planes_in_many_random_lagrangians(q: int, samples: int) -> None:
    check_mean(q, samples, seed=2)
