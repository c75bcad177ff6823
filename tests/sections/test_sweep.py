"""The sweep: every plane over F_q in a linear space of trivectors, each once."""

import json
import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable, Sequence
from functools import cache
from itertools import combinations, islice, product
from math import comb
from pathlib import Path
from random import Random
from typing import Any

import examples
import numpy as np
import oracle
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

from trivector.errors import UsageError
from trivector.exterior import Trivector
from trivector.exterior.products import wedge
from trivector.fields import QQ, Field, field_from_spec, prime_field
from trivector.sections import sweep
from trivector.sections.sweep import (
    count_rational_planes,
    iter_rational_planes,
    sweep_points,
)
from trivector.subspaces import Plane, Subspace

F2, F3, F4, F5, F7, F8, F9 = (field_from_spec(f"F_{q}") for q in (2, 3, 4, 5, 7, 8, 9))


@pytest.fixture(params=["interpreted", "compiled"])
def path(request: pytest.FixtureRequest, monkeypatch: pytest.MonkeyPatch) -> None:
    """Both halves of the sweep, whatever the number of points."""
    points = {"interpreted": 10**9, "compiled": 0}[request.param]
    monkeypatch.setattr(sweep, "PYTHON_POINTS", points)


# Brute force: all planes of PG(n−1, q), by tables written here


@cache
def tables(q: int) -> tuple[Any, Any]:
    """Sums and products of codes; F_4 with a² = a + 1, the only choice."""
    codes = np.arange(q)
    if q == 4:
        products = [[0, 0, 0, 0], [0, 1, 2, 3], [0, 2, 3, 1], [0, 3, 1, 2]]
        return codes[:, None] ^ codes[None, :], np.array(products)
    return (codes[:, None] + codes[None, :]) % q, codes[:, None] * codes[None, :] % q


@cache
def all_planes(n: int, q: int) -> tuple[Any, Any]:
    """The codes of the reduced rows (N×3×n) and of the 3×3 minors of every plane."""
    add, mul = tables(q)
    neg = np.argmax(add == 0, axis=1)
    parts = []
    for pivots in combinations(range(n), 3):
        free = [(i, j) for i in range(3) for j in range(pivots[i] + 1, n) if j not in pivots]
        rows = np.zeros((q ** len(free), 3, n), dtype=np.int64)
        number = np.arange(len(rows))
        for i, pivot in enumerate(pivots):
            rows[:, i, pivot] = 1
        for i, j in free:
            number, rows[:, i, j] = np.divmod(number, q)
        parts.append(rows)
    rows = np.concatenate(parts)
    minors = np.zeros((len(rows), comb(n, 3)), dtype=np.int64)
    for position, triple in enumerate(combinations(range(n), 3)):
        for order in ((0, 1, 2), (1, 2, 0), (2, 0, 1), (0, 2, 1), (2, 1, 0), (1, 0, 2)):
            a, b, c = (rows[:, i, triple[order[i]]] for i in range(3))
            term = mul[mul[a, b], c]
            term = term if oracle.permutation_sign(order) == 1 else neg[term]
            minors[:, position] = add[minors[:, position], term]
    return rows, minors


def brute_force(space: Subspace) -> list[Plane]:
    """All planes whose minors are the combination of the rows of L that agrees at the pivots."""
    field = space.field
    q = field.order or 0
    add, mul = tables(q)
    rows, minors = all_planes(space.n, q)
    pivots = [next(j for j, x in enumerate(row) if x) for row in space.rows]
    kept = np.arange(len(rows))
    for j in range(space.ambient_dimension):
        value = np.zeros(len(kept), dtype=np.int64)
        for row, pivot in zip(space.rows, pivots, strict=True):
            value = add[value, mul[minors[kept, pivot], field.sort_key(row[j])]]
        kept = kept[minors[kept, j] == value]
    return planes_from_codes(field, rows[kept])


def planes_from_codes(field: Any, rows: Any) -> list[Plane]:
    elements = [field.from_code(code) for code in range(field.order)]
    return [
        Plane.from_rows(field, [[elements[code] for code in row] for row in plane])
        for plane in rows.tolist()
    ]


def assert_is_everything(space: Subspace) -> None:
    """The sweep finds what brute force finds, nothing twice, and counts right."""
    found = list(iter_rational_planes(space))
    assert len(found) == len(set(found))
    assert set(found) == set(brute_force(space))
    assert count_rational_planes(space) == len(found)


def planted(field: Field, n: int, dimension: int, rng: Random) -> Subspace:
    """A space of the dimension that contains a random number of random planes.

    Some of them share a point, so that v∧b ∈ L has many solutions there.
    """
    while True:
        common = examples.random_rows(field, 1, n, rng)
        rows: list[Sequence[Any]] = []
        for _ in range(rng.randint(0, dimension)):
            shared = common if rng.random() < 0.5 else examples.random_rows(field, 1, n, rng)
            spanning = [*shared, *examples.random_rows(field, 2, n, rng)]
            if field.matrix(spanning, n).rank() == 3:
                rows.append(Plane.from_rows(field, spanning).plucker)
        rows += examples.random_rows(field, dimension - len(rows), comb(n, 3), rng)
        space = Subspace.span(field, n, rows)
        if space.dimension == dimension:
            return space


def test_the_brute_force_of_this_file_knows_the_planes_of_the_oracle() -> None:
    for n, q in ((6, 2), (7, 2), (6, 3)):
        rows, minors = all_planes(n, q)
        expected = list(oracle.all_planes(q, n))
        found = {
            tuple(map(tuple, plane)): tuple(vector)
            for plane, vector in zip(rows.tolist(), minors.tolist(), strict=True)
        }
        assert set(found) == set(expected)
        assert len(rows) == len(expected)
        for plane in expected[:: 1 + len(expected) // 500]:
            assert found[plane] == oracle.plucker(plane, q)


@pytest.mark.parametrize("seed", range(2))
@pytest.mark.usefixtures("path")
def test_over_f2_it_is_brute_force_in_every_dimension(seed: int) -> None:
    rng = Random(seed)
    for dimension in range(20):
        assert_is_everything(planted(F2, 6, dimension, rng))


@pytest.mark.parametrize("dimension", [1, 7, 10, 11, 12, 13, 14, 15, 18])
@pytest.mark.usefixtures("path")
def test_over_f3_it_is_brute_force(dimension: int) -> None:
    assert_is_everything(planted(F3, 6, dimension, Random(dimension)))


@pytest.mark.parametrize("dimension", [1, 14, 20, 22, 24, 25, 26, 34])
@pytest.mark.usefixtures("path")
def test_in_seven_dimensions_over_f2_it_is_brute_force(dimension: int) -> None:
    assert_is_everything(planted(F2, 7, dimension, Random(dimension)))


@pytest.mark.long
@pytest.mark.parametrize("dimension", range(1, 20))
@pytest.mark.usefixtures("path")
def test_over_f2_and_f3_it_is_brute_force_many_times(dimension: int) -> None:
    rng = Random(100 + dimension)
    for _ in range(20):
        assert_is_everything(planted(F2, 6, dimension, rng))
    for _ in range(4):
        assert_is_everything(planted(F3, 6, dimension, rng))


@pytest.mark.long
@pytest.mark.parametrize("dimension", range(1, 16))
@pytest.mark.usefixtures("path")
def test_over_f4_it_is_brute_force(dimension: int) -> None:
    assert_is_everything(planted(F4, 6, dimension, Random(dimension)))


# One point v, and bivectors b with v∧b in L: every dimension of {b}


def bivector_space(field: Any, n: int, size: int, rng: Random) -> Subspace:
    """v∧B for v = (0, 0, …, 1), a point of P(U), and B of dimension ``size``.

    B ⊂ ∧²V', V' without the last basis vector, so that v∧b ≠ 0. Every second
    of the b that span it has rank 2.
    """
    v = [field.zero, field.zero, *examples.random_rows(field, 1, n - 3, rng)[0], field.one]
    while True:
        rows = []
        for k in range(size):
            b = [field.zero] * comb(n, 2)
            for _ in range(1 if k % 2 else 2):
                x, y = ([*row, field.zero] for row in examples.random_rows(field, 2, n - 1, rng))
                b = [s + t for s, t in zip(b, wedge(x, 1, y, 1, n, field.zero), strict=True)]
            rows.append(wedge(v, 1, b, 2, n, field.zero))
        space = Subspace.span(field, n, rows)
        if space.dimension == size:
            return space


def decomposables_of(space: Subspace) -> set[Plane]:
    """The planes of the decomposables among all elements of P(L), tried one by one."""
    field: Any = space.field
    elements = [field.from_code(code) for code in range(field.order)]
    found = set()
    for k in range(space.dimension):
        for tail in product(elements, repeat=space.dimension - k - 1):
            coefficients = [field.zero] * k + [field.one, *tail]
            vector = draws.combine(field, coefficients, space.rows, space.ambient_dimension)
            rows = Trivector(field, vector).decompose()
            if isinstance(rows, list):
                found.add(Plane.from_rows(field, rows))
    return found


@pytest.mark.parametrize(
    ("field", "n", "size"),
    [
        *((F2, n, size) for n in (6, 7) for size in range(1, 11)),
        *((F3, n, size) for n in (6, 7) for size in range(1, 7)),
        *((F4, n, size) for n in (6, 7) for size in range(1, 4)),
        *((F5, n, size) for n in (6, 7) for size in range(1, 5)),
        *((field, 6, 3) for field in (F7, F8, F9, prime_field(11))),
        (prime_field(13), 6, 2),
    ],
    ids=lambda value: value.name if hasattr(value, "name") else str(value),
)
@pytest.mark.usefixtures("path")
def test_over_one_point_every_bivector_is_judged(field: Any, n: int, size: int) -> None:
    space = bivector_space(field, n, size, Random(size))
    found = list(iter_rational_planes(space))
    assert len(found) == len(set(found)) == count_rational_planes(space)
    assert set(found) == decomposables_of(space)


def test_common_zeros_of_quadrics_in_two_and_three_variables() -> None:
    # x·y and x·z: the line x = 0 and the point y = z = 0, so B = ⟨…⟩ with those Pfaffians:
    # e0e1, e2e3 and e2e4 give Pfaffians x·y (0123) and x·z (0124).
    for field in (F2, F3, F4, F5, F7):
        q = field.order or 0
        space = Subspace.from_terms(field, 6, [{(0, 1, 5): 1}, {(2, 3, 5): 1}, {(2, 4, 5): 1}])
        assert count_rational_planes(space) == q + 2
        # e0e1 + e2e3 and e0e2 + c·e1e3 give s² + c·t² up to sign in one Pfaffian.
        pair = [{(0, 1, 5): 1, (2, 3, 5): 1}, {(0, 2, 5): 1, (1, 3, 5): 1}]
        space = Subspace.from_terms(field, 6, pair)
        assert count_rational_planes(space) == (1 if q % 2 == 0 else 2)  # s² = t²


# Both halves, all jobs


CASES: list[tuple[str, int, int]] = [
    ("F_2", 6, 11),
    ("F_3", 6, 10),
    ("F_3", 6, 16),
    ("F_4", 6, 12),
    ("F_5", 6, 13),
    ("F_7", 6, 11),
    ("F_8", 6, 10),
    ("F_13", 6, 10),
    ("F_3", 7, 21),
    ("F_5", 7, 22),
]


@pytest.mark.parametrize(("name", "n", "dimension"), CASES)
def test_both_halves_give_the_same_sequence(
    name: str, n: int, dimension: int, monkeypatch: pytest.MonkeyPatch
) -> None:
    space = planted(field_from_spec(name), n, dimension, Random(7))
    answers = []
    for points in (10**9, 0):
        monkeypatch.setattr(sweep, "PYTHON_POINTS", points)
        answers.append(list(iter_rational_planes(space)))
    assert answers[0] == answers[1]


@pytest.mark.parametrize(("p", "dimension"), [(13, 10), (11, 12), (7, 14)])
def test_jobs_and_chunks_do_not_change_the_sequence(
    p: int, dimension: int, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(sweep, "PYTHON_POINTS", 0)
    space = planted(prime_field(p), 6, dimension, Random(dimension))
    expected = list(iter_rational_planes(space))
    assert expected
    monkeypatch.setattr(sweep, "_CHUNK", 100)
    for jobs in (1, 2, 3):
        assert list(iter_rational_planes(space, jobs=jobs)) == expected
        assert count_rational_planes(space, jobs=jobs) == len(expected)


@pytest.mark.parametrize("jobs", [1, 2])
def test_planes_come_while_the_sweep_runs(jobs: int) -> None:
    # 10^10 planes through a point over F_101; of a million points v a few have been seen.
    through_a_point = examples.families()[0].lagrangian(prime_field(101))
    seen: list[int] = []
    planes = iter_rational_planes(
        through_a_point, jobs=jobs, on_progress=lambda done, total: seen.append(done)
    )
    first = list(islice(planes, 1000))
    planes.close()  # type: ignore[attr-defined]  # it is a generator
    assert len(set(first)) == 1000
    assert all(through_a_point.contains(plane.plucker) for plane in first[::100])
    assert max(seen, default=0) < 1000


@pytest.mark.parametrize("jobs", [1, 2])
def test_only_a_few_chunks_are_looked_at_ahead(jobs: int, monkeypatch: pytest.MonkeyPatch) -> None:
    from trivector.sections import sweep_kernel

    calls: list[int] = []
    prepare = sweep_kernel.prepare

    def counted(*arguments: Any) -> Callable[[int, int], list[int]]:
        run = prepare(*arguments)

        def recorded(first: int, last: int) -> list[int]:
            calls.append(first)
            return run(first, last)

        return recorded

    monkeypatch.setattr(sweep_kernel, "prepare", counted)
    monkeypatch.setattr(sweep, "_CHUNK", 500)
    through_a_point = examples.families()[0].lagrangian(prime_field(31))
    planes = iter_rational_planes(through_a_point, jobs=jobs)
    next(planes)
    time.sleep(0.3)  # more than 60 chunks could be done by now
    assert 1 <= len(calls) <= 2 * jobs + 1


# Values from outside


@pytest.mark.parametrize("family", examples.families(), ids=lambda family: family.name)
@pytest.mark.parametrize("q", [3, 5, 7])
@pytest.mark.usefixtures("path")
def test_the_infinite_families_have_their_number_of_planes(family: examples.Family, q: int) -> None:
    # Classical: [5,2]_q, 1 + q(q²+q+1)², (q+1)(q²+1), q²+q+1.
    assert count_rational_planes(family.lagrangian(prime_field(q))) == family.count(q)


def number_of_a_family(position: int, q: int) -> int:
    """The same in characteristic 2, for the last two families different.

    Conic planes: the nucleus plane as well (classical). Tangent planes: all
    of them meet the nucleus plane in a line, and the coefficients of the
    family span the Lagrangian of all planes that do (computed).
    """
    families = examples.families()
    if q % 2 == 0 and position == 4:
        return q * q + q + 2
    return families[2 if q % 2 == 0 and position == 5 else position].count(q)


@pytest.mark.parametrize("position", range(6))
@pytest.mark.parametrize("field", [F2, F4], ids=lambda field: field.name)
@pytest.mark.usefixtures("path")
def test_the_infinite_families_in_characteristic_2(position: int, field: Field) -> None:
    space = examples.families()[position].lagrangian(field)
    assert count_rational_planes(space) == number_of_a_family(position, field.order or 0)


@pytest.mark.long
@pytest.mark.parametrize("position", range(6))
@pytest.mark.parametrize("field", [F8, F9], ids=lambda field: field.name)
@pytest.mark.usefixtures("path")
def test_the_infinite_families_over_f8_and_f9(position: int, field: Field) -> None:
    space = examples.families()[position].lagrangian(field)
    assert count_rational_planes(space) == number_of_a_family(position, field.order or 0)


def test_in_characteristic_2_the_tangent_planes_meet_the_nucleus_plane_in_lines() -> None:
    # u·w for w with u·w off the diagonal: e1, e2, e4 are the mixed products.
    nucleus = {1, 2, 4}
    triples = [t for t in examples.TRIPLES if len(nucleus & set(t)) >= 2]
    expected = Subspace.from_terms(F2, 6, [{triple: 1} for triple in triples])
    assert examples.families()[5].lagrangian(F2) == expected


@pytest.mark.parametrize("family", examples.families(), ids=lambda family: family.name)
def test_the_planes_of_a_family_are_listed(family: examples.Family) -> None:
    space = family.lagrangian(F3)
    found = list(iter_rational_planes(space))
    assert len(found) == len(set(found)) == family.count(3)
    assert all(space.contains(plane.plucker) for plane in found)


@pytest.mark.parametrize("name", ["F_3", "F_5", "F_7", "F_9", "F_101"])
def test_the_twenty_planes_are_all_planes_of_their_span(name: str) -> None:
    # Computed; twenty is the maximum in characteristic 0: "A very special EPW sextic and
    # two IHS fourfolds", 2017, arXiv 1509.06214.
    field = field_from_spec(name)
    planes = examples.over(field, examples.twenty_planes())
    space = Subspace.span(field, 6, [plane.plucker for plane in planes])
    found = list(iter_rational_planes(space))
    assert len(found) == 20
    assert set(found) == set(planes)


@pytest.mark.parametrize(
    ("name", "count"),
    [
        *((f"F_{p}", 0) for p in (2, 3, 5, 7, 8, 13, 43, 47)),
        ("F_4", 2),
        ("F_11", 1),
    ],
)
def test_the_cyclic_lagrangian(name: str, count: int) -> None:
    # Computed: no plane over the closure except modulo 2 (degrees 2, 10, 10) and modulo 11
    # (one rational plane); the basis after "Gushel–Mukai varieties with many symmetries and
    # an explicit irrational Gushel–Mukai threefold", 2021, arXiv 2101.01959.
    assert count_rational_planes(examples.cyclic_lagrangian(field_from_spec(name))) == count


def test_the_one_plane_of_the_cyclic_lagrangian_modulo_11() -> None:
    field = prime_field(11)
    expected = examples.plane_of_the_cyclic_lagrangian(field)
    assert list(iter_rational_planes(examples.cyclic_lagrangian(field))) == [expected]


@pytest.mark.parametrize("name", ["F_2", "F_3", "F_4", "F_5", "F_7", "F_23"])
def test_the_seven_planes_of_seven_dimensions(name: str) -> None:
    # "Pairwise incident planes and hyperkähler four-folds", 2012, arXiv 1204.6257.
    field = field_from_spec(name)
    planes = examples.over(field, examples.seven_planes())
    space = Subspace.span(field, 7, [plane.plucker for plane in planes]).orthogonal()
    found = list(iter_rational_planes(space))
    assert len(found) == 7
    assert set(found) == set(planes)


def isotropic_planes_over_f4() -> list[Plane]:
    """The planes of PG(5,4) that are totally isotropic for Σ x_i·y_i²: triples of reduced rows."""
    add, mul = tables(4)

    def products(x: Any, y: Any) -> Any:
        total = np.zeros(np.broadcast_shapes(x.shape, y.shape)[:-1], dtype=np.int64)
        for i in range(6):
            total = add[total, mul[x[..., i], mul[y[..., i], y[..., i]]]]
        return total

    points = np.array([v for v in product(range(4), repeat=6) if next(filter(None, v), 0) == 1])
    points = points[products(points, points) == 0]
    pivots = np.argmax(points != 0, axis=1)
    follows = products(points[:, None], points[None, :]) == 0
    follows &= (pivots[:, None] < pivots[None, :]) & (points[:, pivots] == 0)
    triples = [
        (a, b, c)
        for a, b in np.argwhere(follows).tolist()
        for c in np.flatnonzero(follows[a] & follows[b]).tolist()
    ]
    return planes_from_codes(F4, points[np.array(triples)])


def points_as_bits(planes: Sequence[Plane]) -> list[int]:
    """The 21 points of each plane over F_4, as the bits of an integer."""
    field: Any = F4
    scalars = [field.from_code(code) for code in range(4)]
    normalised = [
        (*[field.zero] * k, field.one, *tail)
        for k in range(3)
        for tail in product(scalars, repeat=2 - k)
    ]
    numbers: dict[Any, int] = {}
    return [
        sum(
            1 << numbers.setdefault(draws.combine(F4, x, plane.rows, 6), len(numbers))
            for x in normalised
        )
        for plane in planes
    ]


def dual_hyperoval(points: Sequence[int]) -> list[int]:
    """Sets of points that meet pairwise in one point, each point on 0 or 2 of them.

    By backtracking from the first: through a point that is on one of the
    chosen sets goes exactly one more.
    """

    def extend(once: int, twice: int, candidates: list[int]) -> list[int] | None:
        if not once:
            return []
        point = once & -once
        for k in candidates:
            if points[k] & point:
                covered = twice | once & points[k]
                rest = [
                    j
                    for j in candidates
                    if (points[j] & points[k]).bit_count() == 1 and not points[j] & covered
                ]
                more = extend(once ^ points[k], covered, rest)
                if more is not None:
                    return [k, *more]
        return None

    meeting = [k for k, mask in enumerate(points) if (mask & points[0]).bit_count() == 1]
    found = extend(points[0], 0, meeting)
    assert found is not None
    return [0, *found]


def test_twenty_two_planes_over_f4() -> None:
    # Existence and uniqueness: "On 2-dimensional dual hyperovals of polar type" (published);
    # that their span is Lagrangian with exactly these planes: computed.
    isotropic = isotropic_planes_over_f4()
    assert len(isotropic) == 3 * 9 * 33  # classical: ∏ (2^(2i−1) + 1), i = 1, 2, 3
    chosen = [isotropic[k] for k in dual_hyperoval(points_as_bits(isotropic))]
    assert len(chosen) == 22
    space = Subspace.span(F4, 6, [plane.plucker for plane in chosen])
    assert space.is_lagrangian()
    found = list(iter_rational_planes(space))
    assert len(found) == 22
    assert set(found) == set(chosen)


@pytest.mark.parametrize(
    ("n", "q", "number"),
    [
        *((6, q, k) for q, k in ((2, 1395), (3, 33880), (4, 376805), (5, 2558556), (7, 48177200))),
        (7, 2, 11811),
    ],
)
def test_the_whole_space_is_counted_and_not_listed(n: int, q: int, number: int) -> None:
    # Classical: [n,3]_q.
    field = field_from_spec(f"F_{q}")
    everything = Subspace.span(field, n, draws.identity(field, comb(n, 3)))
    assert count_rational_planes(everything) == number
    with pytest.raises(UsageError, match=rf"all {number:,} planes of P\^{n - 1} over F_{q}"):
        iter_rational_planes(everything)


def test_a_hyperplane_section_by_a_point_of_the_dual_grassmannian() -> None:
    # Planes that meet a fixed one: [6,3]_q − q^9 (classical), dim L = 19.
    for field in (F2, F3):
        q = field.order or 0
        triples = [t for t in examples.TRIPLES if t != (3, 4, 5)]
        space = Subspace.from_terms(field, 6, [{t: 1} for t in triples])
        assert count_rational_planes(space) == {2: 1395, 3: 33880}[q] - q**9


# Properties


@given(st.data())
@draws.few
def test_the_planes_move_with_the_space(data: st.DataObject) -> None:
    field = data.draw(st.sampled_from([F2, F3, F4, F5]))
    n = data.draw(st.sampled_from([6, 6, 7]))
    g = data.draw(draws.invertible_matrices(field, n))
    rng = Random(data.draw(st.integers(0, 2**32)))
    space = planted(field, n, data.draw(st.integers(0, 14 if n == 6 else 22)), rng)
    moved = list(iter_rational_planes(examples.image_of_space(field, g, space)))
    assert len(moved) == len(set(moved))
    expected = {examples.image(field, g, plane) for plane in iter_rational_planes(space)}
    assert set(moved) == expected


@given(st.data())
@draws.few
def test_planted_planes_are_found(data: st.DataObject) -> None:
    field = data.draw(st.sampled_from([F7, prime_field(13), prime_field(31)]))
    rng = Random(data.draw(st.integers(0, 2**32)))
    planes = examples.random_incident_planes(field, data.draw(st.integers(2, 4)), rng)
    space = examples.lagrangian_through(field, planes, rng)
    found = list(iter_rational_planes(space))
    assert len(found) == len(set(found)) == count_rational_planes(space)
    assert set(planes) <= set(found)
    assert all(space.contains(plane.plucker) for plane in found)


# Refusals, progress, interruption


@pytest.mark.parametrize("function", [iter_rational_planes, count_rational_planes])
def test_an_infinite_field_is_refused(function: Callable[[Subspace], Any]) -> None:
    space = Subspace.from_terms(QQ, 6, [{(0, 1, 2): 1}])
    with pytest.raises(UsageError, match="needs a finite field, not Q; reduce"):
        function(space)
    everything = Subspace.span(QQ, 6, draws.identity(QQ, 20))
    with pytest.raises(UsageError, match="needs a finite field, not Q; reduce"):
        function(everything)


@pytest.mark.parametrize("function", [iter_rational_planes, count_rational_planes])
def test_a_field_without_tables_is_refused(function: Callable[..., Any]) -> None:
    for field in (prime_field(1031), prime_field(examples.LARGE_PRIME)):
        space = Subspace.from_terms(field, 6, [{(0, 1, 2): 1}])
        with pytest.raises(UsageError, match=f"at most 1024 elements, not {field.name};"):
            function(space, max_points=10**100)


@pytest.mark.parametrize("function", [iter_rational_planes, count_rational_planes])
def test_too_many_points_are_refused_with_an_estimate(function: Callable[..., Any]) -> None:
    space = Subspace.from_terms(prime_field(601), 6, [{(0, 1, 2): 1}])
    with pytest.raises(UsageError, match=r"217,443,604 points.*200,000,000.*\d+ seconds"):
        function(space)
    small = Subspace.from_terms(F5, 6, [{(0, 1, 2): 1}])
    with pytest.raises(UsageError, match=r"156 points.*max_points = 155.*1 seconds"):
        function(small, max_points=155)
    function(small, max_points=156)


def test_the_points_of_the_second_step_count_when_it_is_needed_everywhere() -> None:
    rng = Random(0)
    for n, largest in ((6, 14), (7, 25)):
        for dimension, more in ((largest, False), (largest + 1, True)):
            space = examples.random_subspace(F5, n, dimension, rng)
            iter_rational_planes(space, max_points=10**9)
            if more:
                with pytest.raises(UsageError, match="would examine"):
                    iter_rational_planes(space, max_points=sweep_points(n, 5))
            else:
                iter_rational_planes(space, max_points=sweep_points(n, 5))


@pytest.mark.parametrize(
    ("points", "dimension", "words"),
    [
        (10**6, 10, "1 seconds"),
        (3 * 10**8, 10, "90 seconds"),
        (3 * 10**9, 10, "15 minutes"),
        (10**10, 11, "6 hours"),
        (10**11, 11, "2 days"),
    ],
)
def test_estimates_in_words(points: int, dimension: int, words: str) -> None:
    assert sweep._duration(6, points, dimension) == words


def test_fewer_than_one_job_is_refused() -> None:
    with pytest.raises(UsageError, match="at least 1, not 0"):
        iter_rational_planes(Subspace.from_terms(F2, 6, [{(0, 1, 2): 1}]), jobs=0)


def test_the_zero_space_has_no_plane() -> None:
    for field in (F2, F9, prime_field(101), prime_field(examples.LARGE_PRIME)):
        for n in (6, 7):
            nothing = Subspace.span(field, n, [])
            assert list(iter_rational_planes(nothing)) == []
            assert count_rational_planes(nothing) == 0


@pytest.mark.parametrize(("n", "q", "number"), [(6, 2, 15), (6, 3, 40), (7, 2, 31), (7, 3, 121)])
def test_sweep_points(n: int, q: int, number: int) -> None:
    assert sweep_points(n, q) == number


@pytest.mark.parametrize("jobs", [1, 2])
@pytest.mark.usefixtures("path")
def test_progress_goes_up_to_the_number_of_points(
    jobs: int, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(sweep, "_CHUNK", 500)
    seen: list[tuple[int, int]] = []
    space = examples.cyclic_lagrangian(prime_field(11))
    count_rational_planes(space, jobs=jobs, on_progress=lambda *args: seen.append(args))
    total = sweep_points(6, 11)
    assert [done for done, _ in seen] == sorted(done for done, _ in seen)
    assert {of for _, of in seen} == {total}
    assert seen[-1] == (total, total)
    assert len(seen) >= 5


@pytest.mark.parametrize("position", [0, 1])
def test_progress_is_reported_while_one_point_takes_long(
    position: int, monkeypatch: pytest.MonkeyPatch
) -> None:
    # Thousands of planes over the first point, by the Pfaffians or by a second step.
    monkeypatch.setattr(sweep, "_SECONDS_BETWEEN_REPORTS", 0.0)
    seen: list[tuple[int, int]] = []
    space = examples.families()[position].lagrangian(prime_field(31))
    planes = iter_rational_planes(space, on_progress=lambda *args: seen.append(args))
    assert len(list(islice(planes, 1000))) == 1000
    assert len(seen) >= 1000
    assert max(seen)[0] <= 1


INTERRUPTED = """
import signal
import sys
from pathlib import Path
signal.signal(signal.SIGINT, signal.default_int_handler)  # shells ignore it for background jobs
sys.path.insert(0, sys.argv[1])
import examples
from trivector.fields import prime_field
from trivector.sections.sweep import iter_rational_planes

def progress(done, total):
    Path(sys.argv[3]).write_text(str(done))

space = examples.families()[0].lagrangian(prime_field(401))
with open(sys.argv[2], "w") as out:
    try:
        for plane in iter_rational_planes(space, jobs=int(sys.argv[4]), on_progress=progress):
            print(plane.to_entries(), file=out, flush=True)
    except KeyboardInterrupt:
        print("interrupted")
"""


@pytest.mark.skipif(os.name == "nt", reason="sends SIGINT to a process")
@pytest.mark.parametrize("jobs", ["1", "2"])
def test_an_interrupt_leaves_what_was_found(tmp_path: Path, jobs: str) -> None:
    # The whole would take hours and 10^12 planes.
    out, progress = tmp_path / "planes", tmp_path / "progress"
    process = subprocess.Popen(
        [sys.executable, "-c", INTERRUPTED, str(Path(__file__).parents[1]), out, progress, jobs],
        stdout=subprocess.PIPE,
        text=True,
    )
    try:
        while not (progress.exists() and out.stat().st_size > 1000):
            assert process.poll() is None
            time.sleep(0.05)
    except BaseException:
        process.kill()
        raise
    process.send_signal(signal.SIGINT)
    try:
        answer, _ = process.communicate(timeout=60)
    finally:
        process.kill()
    assert answer == "interrupted\n"
    lines = out.read_text().splitlines()
    assert len(lines) >= 10
    assert len(set(lines)) == len(lines)
    assert all(Plane.from_rows(prime_field(401), json.loads(line)) for line in lines[:10])


LIGHT = """
import sys
from random import Random
sys.path.insert(0, sys.argv[1])
import trivector.sections.sweep as sweep
assert not {"numba", "numpy", "galois"} & set(sys.modules)
from trivector.fields import field_from_spec
from trivector.subspaces import Subspace
for name, dimensions in (("F_3", (10, 16)), ("F_4", (10,))):
    field = field_from_spec(name)
    rng = Random(1)
    for dimension in dimensions:
        rows = [[field.random_element(rng) for _ in range(20)] for _ in range(dimension)]
        sweep.count_rational_planes(Subspace.span(field, 6, rows))
    assert "numba" not in sys.modules, name
"""


def test_small_fields_do_not_load_compiled_code() -> None:
    subprocess.run([sys.executable, "-c", LIGHT, str(Path(__file__).parents[1])], check=True)
    # Even when every point v needs a sweep of its own.
    assert sweep._points_to_examine(6, 4, 19) <= sweep.PYTHON_POINTS


# The kernel by itself


@pytest.mark.parametrize("name", ["F_2", "F_3", "F_4", "F_5"])
@pytest.mark.parametrize(("n", "dimension"), [(6, 3), (6, 6), (6, 9), (6, 10), (6, 11), (7, 20)])
def test_without_pfaffians_the_kernel_finds_the_points_with_dependent_columns(
    name: str, n: int, dimension: int
) -> None:
    field = field_from_spec(name)
    space = planted(field, n, dimension, Random(dimension))
    run = sweep._Sweep(space, 1, 10**9, None)
    for pivot in range(2, n - 1):
        cell = sweep._Cell(run, (), pivot, space.rows)
        lines = min(cell.size // run.q, 10)
        expected = cell.dependent_points(0, lines * run.q)
        assert cell.compiled(run._tables, ())(0, lines) == expected
        assert cell.compiled(run._tables, ())(lines // 2, lines) == [
            index for index in expected if index >= lines // 2 * run.q
        ]


@pytest.mark.parametrize(("dimension", "most"), [(10, 0.01), (11, 0.2), (12, 0.02), (13, 0.2)])
def test_with_pfaffians_it_leaves_out_most_points(dimension: int, most: float) -> None:
    # One bivector is of rank 2 with probability about q^−3; in a space of them of
    # projective dimension d there is one with about q^(d−3), and d = dim L − 11.
    field = prime_field(13)
    space = examples.random_subspace(field, 6, dimension, Random(dimension))
    run = sweep._Sweep(space, 1, 10**9, None)
    cell = sweep._Cell(run, (), 2, space.rows)
    flagged = cell.compiled(run._tables, sweep._pfaffian_terms(6, 2))(0, 169)
    assert len(flagged) <= most * cell.size


@pytest.mark.parametrize("size", [1, 2, 3])
def test_the_kernel_recognises_values_of_monomials_at_a_point(size: int) -> None:
    from trivector.sections.sweep_kernel import _is_point

    mul = np.ascontiguousarray(tables(3)[1].astype(np.uint16))
    monomials = [(a, c) for a in range(size) for c in range(a, size)]
    expected = {
        tuple(factor * x[a] * x[c] % 3 for a, c in monomials)
        for x in product(range(3), repeat=size)
        for factor in (1, 2)
        if any(x)
    }
    for form in product(range(3), repeat=len(monomials)):
        if any(form):
            answer = _is_point(np.array([form], dtype=np.uint16), size, mul)
            assert answer == (form in expected)


@pytest.mark.parametrize("name", ["F_2", "F_7", "F_8", "F_9", "F_101"])
def test_tables_of_negatives_and_inverses(name: str) -> None:
    from trivector.sections.sweep_kernel import make_tables

    field: Any = field_from_spec(name)
    made = make_tables(*field.operation_tables())
    for code in range(field.order):
        x = field.from_code(code)
        assert field.sort_key(x) == code
        assert not x + field.from_code(int(made.neg[code]))
        if code:
            assert x * field.from_code(int(made.inv[code])) == field.one
    assert made.inv[0] == 0
