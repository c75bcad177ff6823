"""Planes and Lagrangians that several rooms test with, each from its formula.

Nothing is read from ``data/``. Polynomials in the parameters of a family are
dicts from exponents to integers, so that one table of coefficients serves
every field.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import cache
from itertools import combinations, product
from math import comb
from random import Random
from typing import Any

import numpy as np
import oracle

from trivector.fields import Field
from trivector.subspaces import Plane, Subspace

IntegerRows = list[list[int]]
Polynomial = dict[tuple[int, ...], int]

TRIPLES = tuple(combinations(range(6), 3))

# 2^61 − 1, a prime far above 2^32: products of two residues need 122 bits.
LARGE_PRIME = 2305843009213693951

# The first primes that data over ℚ are reduced modulo: the largest below 2^31.
FIRST_PRIME, SECOND_PRIME = 2147483647, 2147483629


def unit(i: int, n: int = 6) -> list[int]:
    return [int(i == j) for j in range(n)]


def signed_triple(word: Sequence[int], coefficient: int = 1) -> dict[tuple[int, ...], int]:
    """e_i∧e_j∧e_k for indices in any order, as {sorted triple: ± coefficient}."""
    return {tuple(sorted(word)): oracle.permutation_sign(word) * coefficient}


def trivector_row(terms: dict[tuple[int, ...], int]) -> list[int]:
    """Twenty integers from coefficients of sorted triples."""
    return [terms.get(triple, 0) for triple in TRIPLES]


def over(field: Field, rows: Sequence[Sequence[Sequence[Any]]]) -> list[Plane]:
    return [Plane.from_rows(field, plane) for plane in rows]


# The twenty planes and their relatives

MATCHINGS = (
    ((0, 1), (2, 3), (4, 5)),
    ((0, 2), (1, 4), (3, 5)),
    ((0, 3), (1, 5), (2, 4)),
    ((0, 4), (1, 3), (2, 5)),
    ((0, 5), (1, 2), (3, 4)),
)
"""Five perfect matchings of 0…5 that share no edge: a total."""


def twenty_planes() -> list[IntegerRows]:
    """⟨e_i + s·e_j, e_k + t·e_l, e_m + u·e_n⟩ with s·t·u = 1, over the five matchings.

    Computed (no text gives this form): pairwise in a point, Lagrangian span in
    characteristic ≠ 2, no other plane meets all of them. That twenty is the
    maximum in characteristic 0: "A very special EPW sextic and two IHS
    fourfolds", 2017, arXiv 1509.06214.
    """
    planes = []
    for matching in MATCHINGS:
        for signs in product((1, -1), repeat=3):
            if signs[0] * signs[1] * signs[2] == 1:
                plane = []
                for (i, j), sign in zip(matching, signs, strict=True):
                    row = unit(i)
                    row[j] = sign
                    plane.append(row)
                planes.append(plane)
    return planes


def moved_twenty() -> list[IntegerRows]:
    """The twenty with ⟨e0+e1, e2+e3, e4+e5⟩ replaced by ⟨e0+e1, e2+e3, e4+2·e5⟩."""
    first, *others = twenty_planes()
    assert first == [[1, 1, 0, 0, 0, 0], [0, 0, 1, 1, 0, 0], [0, 0, 0, 0, 1, 1]]
    return [[first[0], first[1], [0, 0, 0, 0, 1, 2]], *others]


FANO_LINES = ((0, 1, 2), (0, 3, 4), (0, 5, 6), (1, 3, 5), (1, 4, 6), (2, 3, 6), (2, 4, 5))


def seven_planes() -> list[IntegerRows]:
    """Seven planes of P^6, ⟨e_i, e_j, e_k⟩ for the lines ijk of the Fano plane.

    Complete, and the only such family that spans P^6: "Pairwise incident
    planes and hyperkähler four-folds", 2012, arXiv 1204.6257.
    """
    return [[unit(i, 7) for i in line] for line in FANO_LINES]


def cyclic_lagrangian(field: Field) -> Subspace:
    """⟨e0∧e_i∧e_{i+1} + e_i∧e_{i+2}∧e_{i+4}, e0∧e_i∧e_{i+2} − e_{i+1}∧e_{i+2}∧e_{i+3}⟩.

    Indices 1…5 cyclic. Basis and values computed; the smooth sextic with
    group PSL(2,11) that belongs to it: "Gushel–Mukai varieties with many
    symmetries and an explicit irrational Gushel–Mukai threefold", 2021,
    arXiv 2101.01959.
    """
    rows = []
    for i in range(5):
        e = [(i + shift) % 5 + 1 for shift in range(5)]
        rows.append(
            trivector_row(signed_triple((0, e[0], e[1])) | signed_triple((e[0], e[2], e[4])))
        )
        rows.append(
            trivector_row(signed_triple((0, e[0], e[2])) | signed_triple((e[1], e[2], e[3]), -1))
        )
    return Subspace.span(field, 6, rows)


# Polynomials with integer coefficients: {exponents: coefficient}


def _sum(*terms: Polynomial) -> Polynomial:
    total: Polynomial = {}
    for term in terms:
        for exponents, value in term.items():
            total[exponents] = total.get(exponents, 0) + value
    return {exponents: value for exponents, value in total.items() if value}


def _times(first: Polynomial, second: Polynomial, factor: int = 1) -> Polynomial:
    products = (
        {tuple(x + y for x, y in zip(a, b, strict=True)): factor * c * d}
        for a, c in first.items()
        for b, d in second.items()
    )
    return _sum(*products)


def _over_power(polynomial: Polynomial, variable: int, power: int) -> Polynomial:
    """Division by a power of one variable, which must go exactly."""
    assert all(exponents[variable] >= power for exponents in polynomial)
    return {
        tuple(e - power * (i == variable) for i, e in enumerate(exponents)): value
        for exponents, value in polynomial.items()
    }


def _variables(count: int) -> list[Polynomial]:
    return [{tuple(unit(i, count)): 1} for i in range(count)]


def _minor(rows: Sequence[Sequence[Polynomial]], triple: Sequence[int]) -> Polynomial:
    terms = []
    for order in [(0, 1, 2), (1, 2, 0), (2, 0, 1), (0, 2, 1), (2, 1, 0), (1, 0, 2)]:
        a, b, c = (rows[i][triple[j]] for i, j in enumerate(order))
        terms.append(_times(_times(a, b), c, oracle.permutation_sign(order)))
    return _sum(*terms)


def _coefficient_rows(coordinates: Sequence[Polynomial]) -> IntegerRows:
    """One row of twenty integers for each monomial of the parameters."""
    monomials = sorted({exponents for p in coordinates for exponents in p})
    return [[p.get(exponents, 0) for p in coordinates] for exponents in monomials]


# The six infinite families


def _rows_of_ruling(t: Any, a: Any, b: Any, c: Any, zero: Any) -> list[list[Any]]:
    """Rows (t·x | v × x) for x = e0, e1, e2 and (v | 0), v = (a, b, c): rank 3 on the quadric."""
    return [
        [t, zero, zero, zero, c, -b],
        [zero, t, zero, -c, zero, a],
        [zero, zero, t, b, -a, zero],
        [a, b, c, zero, zero, zero],
    ]


@cache
def _ruling_basis() -> IntegerRows:
    t, a, b, c = _variables(4)
    minus = [{e: -x for e, x in p.items()} for p in (a, b, c)]
    rows = [
        [t, {}, {}, {}, c, minus[1]],
        [{}, t, {}, minus[2], {}, a],
        [{}, {}, t, b, minus[0], {}],
    ]
    return _coefficient_rows([_over_power(_minor(rows, triple), 0, 1) for triple in TRIPLES])


# P^5 as the space of symmetric 3×3 matrices: coordinates u_i·u_j, i ≤ j.
_SYMMETRIC = ((0, 0), (0, 1), (0, 2), (1, 1), (1, 2), (2, 2))


def _square(u: Sequence[Any]) -> list[Any]:
    """The point u² of the Veronese surface."""
    return [u[i] * u[j] for i, j in _SYMMETRIC]


def _polar(u: Sequence[Any], w: Sequence[Any]) -> list[Any]:
    """The derivative of u² along w."""
    return [u[i] * w[j] + u[j] * w[i] for i, j in _SYMMETRIC]


def _cross(u: Sequence[Any], w: Sequence[Any]) -> list[Any]:
    return [u[i - 2] * w[i - 1] - u[i - 1] * w[i - 2] for i in range(3)]


@cache
def _conic_basis() -> IntegerRows:
    """The conic plane of the line ξ: Plücker coordinates of degree 3 in ξ.

    The line is spanned by u = e0 × ξ and w = e1 × ξ, where u × w = ξ_2·ξ, so
    u²∧uw∧w² is ξ_2³ times the vector of cubics.
    """
    x, y, z = _variables(3)
    u: list[Polynomial] = [{}, {e: -c for e, c in z.items()}, y]
    w: list[Polynomial] = [z, {}, {e: -c for e, c in x.items()}]
    rows = [
        [_times(u[i], u[j]) for i, j in _SYMMETRIC],
        [_sum(_times(u[i], w[j]), _times(u[j], w[i])) for i, j in _SYMMETRIC],
        [_times(w[i], w[j]) for i, j in _SYMMETRIC],
    ]
    return _coefficient_rows([_over_power(_minor(rows, triple), 2, 3) for triple in TRIPLES])


@cache
def _tangent_basis() -> IntegerRows:
    """The tangent plane at u²: half of ∂_0∧∂_1∧∂_2, because Σ u_k·∂_k = 2·u²."""
    u = _variables(3)
    rows = [
        [_sum(*([u[j]] if i == k else []), *([u[i]] if j == k else [])) for i, j in _SYMMETRIC]
        for k in range(3)
    ]
    minors = [_minor(rows, triple) for triple in TRIPLES]
    assert all(value % 2 == 0 for p in minors for value in p.values())
    return _coefficient_rows([{e: value // 2 for e, value in p.items()} for p in minors])


def _triple_basis(accept: Callable[[Sequence[int]], bool]) -> IntegerRows:
    return [trivector_row({triple: 1}) for triple in TRIPLES if accept(triple)]


def independent(field: Field, rows: Sequence[Sequence[Any]]) -> list[list[Any]]:
    """Those of the rows that do not depend on rows before them."""
    kept: list[list[Any]] = []
    for row in rows:
        if field.matrix([*kept, row], len(row)).rank() == len(kept) + 1:
            kept.append(list(row))
    return kept


@dataclass(frozen=True)
class Family:
    """One of the six classical infinite families of pairwise incident planes.

    ``basis`` spans its Lagrangian over every field; ``rows`` makes rows that
    span one plane from a source of random scalars; ``hilbert`` is the Hilbert
    function of the variety of planes; ``count`` the number of its planes over
    F_q, q odd.
    """

    name: str
    basis: IntegerRows
    rows: Callable[[Callable[[], Any], Any, Any], list[list[Any]]]
    hilbert: Callable[[int], int]
    dimension: int
    degree: int
    count: Callable[[int], int]

    def __str__(self) -> str:
        return self.name

    def lagrangian(self, field: Field) -> Subspace:
        return Subspace.span(field, 6, self.basis)

    def random_plane(self, field: Field, rng: Random) -> Plane:
        """A member, from rows and not from the basis of the Lagrangian."""
        while True:
            rows = self.rows(lambda: field.random_element(rng), field.zero, field.one)
            space = independent(field, rows)
            if len(space) == 3:
                return Plane.from_rows(field, space)


def _through_a_point(draw: Callable[[], Any], zero: Any, one: Any) -> list[list[Any]]:
    return [[one, *[zero] * 5], *([draw() for _ in range(6)] for _ in range(2))]


def _in_a_hyperplane(draw: Callable[[], Any], zero: Any, one: Any) -> list[list[Any]]:
    return [[*(draw() for _ in range(5)), zero] for _ in range(3)]


def _meeting_a_plane_in_a_line(draw: Callable[[], Any], zero: Any, one: Any) -> list[list[Any]]:
    line = [[*(draw() for _ in range(3)), *[zero] * 3] for _ in range(2)]
    return [*line, [draw() for _ in range(6)]]


def _of_one_ruling(draw: Callable[[], Any], zero: Any, one: Any) -> list[list[Any]]:
    return _rows_of_ruling(draw(), draw(), draw(), draw(), zero)


def _conic_plane(draw: Callable[[], Any], zero: Any, one: Any) -> list[list[Any]]:
    u, w = ([draw() for _ in range(3)] for _ in range(2))
    return [_square(u), _polar(u, w), _square(w)]


def _tangent_plane(draw: Callable[[], Any], zero: Any, one: Any) -> list[list[Any]]:
    u = [draw() for _ in range(3)]
    units = [[one if i == k else zero for i in range(3)] for k in range(3)]
    return [_square(u), *(_polar(u, w) for w in units)]


def _g25(d: int) -> int:
    """dim of the degree-d part for G(2,5): Weyl's formula, classical."""
    return (d + 1) * (d + 2) ** 2 * (d + 3) ** 2 * (d + 4) // 144


def _lines_of_p4(q: int) -> int:
    return (q * q + 1) * (q**4 + q**3 + q * q + q + 1)


@cache
def families() -> tuple[Family, ...]:
    """The six: list published in "Pairwise incident planes and hyperkähler four-folds",
    2012, arXiv 1204.6257, introduction; the numbers are classical: Hilbert functions
    of G(2,5), of a cone over P²×P², of P³ by quadrics and of P² by cubics.
    """
    return (
        Family(
            "planes through a point",
            _triple_basis(lambda triple: 0 in triple),
            _through_a_point,
            _g25,
            6,
            5,
            _lines_of_p4,
        ),
        Family(
            "planes in a hyperplane",
            _triple_basis(lambda triple: 5 not in triple),
            _in_a_hyperplane,
            _g25,
            6,
            5,
            _lines_of_p4,
        ),
        Family(
            "planes meeting a fixed plane in a line",
            _triple_basis(lambda triple: len({0, 1, 2} & set(triple)) >= 2),
            _meeting_a_plane_in_a_line,
            lambda d: sum(comb(t + 2, 2) ** 2 for t in range(d + 1)),
            5,
            6,
            lambda q: 1 + q * (q * q + q + 1) ** 2,
        ),
        Family(
            "planes of one ruling of a quadric",
            _ruling_basis(),
            _of_one_ruling,
            lambda d: comb(2 * d + 3, 3),
            3,
            8,
            lambda q: (q + 1) * (q * q + 1),
        ),
        Family(
            "conic planes of a Veronese surface",
            _conic_basis(),
            _conic_plane,
            lambda d: comb(3 * d + 2, 2),
            2,
            9,
            lambda q: q * q + q + 1,
        ),
        Family(
            "tangent planes of a Veronese surface",
            _tangent_basis(),
            _tangent_plane,
            lambda d: comb(3 * d + 2, 2),
            2,
            9,
            lambda q: q * q + q + 1,
        ),
    )


# Random objects, each from a generator that the test owns


def random_rows(field: Field, nrows: int, ncols: int, rng: Random) -> list[list[Any]]:
    return [[field.random_element(rng) for _ in range(ncols)] for _ in range(nrows)]


def random_invertible(field: Field, n: int, rng: Random) -> list[list[Any]]:
    while True:
        rows = random_rows(field, n, n, rng)
        if field.matrix(rows, n).det():
            return rows


def random_plane(field: Field, n: int, rng: Random) -> Plane:
    while True:
        rows = random_rows(field, 3, n, rng)
        if field.matrix(rows, n).rank() == 3:
            return Plane.from_rows(field, rows)


def random_subspace(field: Field, n: int, dimension: int, rng: Random) -> Subspace:
    while True:
        space = Subspace.span(field, n, random_rows(field, dimension, comb(n, 3), rng))
        if space.dimension == dimension:
            return space


def image(field: Field, g: Sequence[Sequence[Any]], plane: Plane) -> Plane:
    """The plane of the vectors g·w, w in W a column."""
    return Plane.from_rows(
        field,
        [
            [sum((a * x for a, x in zip(row, w, strict=True)), field.zero) for row in g]
            for w in plane.rows
        ],
    )


def image_of_space(field: Field, g: Sequence[Sequence[Any]], space: Subspace) -> Subspace:
    """∧³g·L, every basis vector expanded: g e_i∧g e_j∧g e_k from the columns of g."""
    triples = list(combinations(range(space.n), 3))
    columns = list(zip(*g, strict=True))
    images = [_literal_minors([columns[i] for i in triple], triples) for triple in triples]
    rows = []
    for row in space.rows:
        total = [field.zero] * len(triples)
        for coefficient, vector in zip(row, images, strict=True):
            if coefficient:
                total = [t + coefficient * x for t, x in zip(total, vector, strict=True)]
        rows.append(total)
    return Subspace.span(field, space.n, rows)


def _literal_minors(rows: Sequence[Sequence[Any]], triples: Sequence[Sequence[int]]) -> list[Any]:
    a, b, c = rows
    return [
        a[i] * (b[j] * c[k] - b[k] * c[j])
        - a[j] * (b[i] * c[k] - b[k] * c[i])
        + a[k] * (b[i] * c[j] - b[j] * c[i])
        for i, j, k in triples
    ]


def wedge_to_volume(field: Field, first: Sequence[Any], second: Sequence[Any]) -> Any:
    """⟨α, β⟩: the coefficient of α∧β at e0∧…∧e5, with signs from sorting."""
    total = field.zero
    for triple, a in zip(TRIPLES, first, strict=True):
        rest = tuple(i for i in range(6) if i not in triple)
        value = a * second[TRIPLES.index(rest)]
        total = total + value if oracle.permutation_sign(triple + rest) == 1 else total - value
    return total


def lagrangian_through(field: Field, planes: Sequence[Plane], rng: Random) -> Subspace:
    """A random Lagrangian that contains pairwise incident planes, one vector after another."""
    space = Subspace.span(field, 6, [plane.plucker for plane in planes])
    while space.dimension < 10:
        orthogonal = space.orthogonal()
        coefficients = random_rows(field, 1, orthogonal.dimension, rng)
        product = field.matrix(coefficients, orthogonal.dimension) * field.matrix(
            orthogonal.rows, 20
        )
        space = Subspace.span(field, 6, [*space.rows, *product.tolist()])
    return space


def random_incident_planes(field: Field, count: int, rng: Random) -> list[Plane]:
    """Planes that meet pairwise, plane i and j in a random point of their own.

    At most four: the plane i is spanned by the points that it shares.
    """
    assert 2 <= count <= 4
    while True:
        points = {
            pair: [field.random_element(rng) for _ in range(6)]
            for pair in combinations(range(count), 2)
        }
        planes = []
        for i in range(count):
            rows = [point for pair, point in points.items() if i in pair]
            rows += random_rows(field, 3 - len(rows), 6, rng)
            if field.matrix(rows, 6).rank() == 3:
                planes.append(Plane.from_rows(field, rows))
        if len(set(planes)) == count:
            return planes


# All planes of PG(5, q), for brute force


@cache
def all_planes(q: int) -> list[oracle.Matrix]:
    return list(oracle.all_planes(q))


@cache
def plucker_table(q: int) -> Any:
    """The Plücker vectors of `all_planes`, one row each, as a numpy array of residues."""
    rows = np.array(all_planes(q), dtype=np.int64)
    a, b, c = rows[:, 0], rows[:, 1], rows[:, 2]
    columns = [
        a[:, i] * (b[:, j] * c[:, k] - b[:, k] * c[:, j])
        - a[:, j] * (b[:, i] * c[:, k] - b[:, k] * c[:, i])
        + a[:, k] * (b[:, i] * c[:, j] - b[:, j] * c[:, i])
        for i, j, k in TRIPLES
    ]
    return np.stack(columns, axis=1) % q


def pairs_to_zero(q: int, vector: Sequence[Any]) -> Any:
    """For each of `all_planes`, whether its Plücker vector pairs to zero with this one."""
    form = np.zeros(20, dtype=np.int64)
    for triple, value in zip(TRIPLES, vector, strict=True):
        rest = tuple(i for i in range(6) if i not in triple)
        form[TRIPLES.index(rest)] = oracle.permutation_sign(triple + rest) * int(value)
    return (plucker_table(q) @ form) % q == 0


def planes_pairing_to_zero(q: int, vectors: Sequence[Sequence[Any]]) -> list[oracle.Matrix]:
    """Every plane of PG(5, q) whose Plücker vector pairs to zero with all of these."""
    kept = np.ones(len(plucker_table(q)), dtype=bool)
    for vector in vectors:
        kept &= pairs_to_zero(q, vector)
    everything = all_planes(q)
    return [everything[i] for i in np.flatnonzero(kept)]


def random_clique(field: Field, size: int, rng: Random) -> tuple[list[Plane], list[Plane]]:
    """Pairwise incident planes over F_q, each drawn among all that meet those before.

    Returns them, at most ``size``, and all further planes over F_q that meet all of them.
    """
    q = int(field.characteristic)
    everything = all_planes(q)
    left = np.ones(len(everything), dtype=bool)
    planes: list[Plane] = []
    while len(planes) < size and left.any():
        chosen = rng.choice(np.flatnonzero(left).tolist())
        plane = Plane.from_rows(field, everything[chosen])
        left &= pairs_to_zero(q, plane.plucker)
        left[chosen] = False
        planes.append(plane)
    return planes, [Plane.from_rows(field, everything[i]) for i in np.flatnonzero(left)]


def planes_meeting_all(q: int, planes: Sequence[Plane]) -> list[oracle.Matrix]:
    """Every plane of PG(5, q) that shares a point with each of the given ones (n = 6)."""
    return planes_pairing_to_zero(q, [plane.plucker for plane in planes])


# Planes with multiplicity


def osculating_rows(order: int, n: int = 6) -> IntegerRows:
    """c_0, …, c_order of (e0 + s·e3)∧(e1 + s·e4)∧(e2 + s·e5) = Σ s^i·c_i.

    The curve is a twisted cubic in P(⟨c_0, …, c_3⟩), and all of G(3,n) that
    lies there, so that the section by the osculating space ⟨c_0, …, c_i⟩ at
    e0∧e1∧e2 is that point with multiplicity i + 1, i ≤ 2 (classical).
    """
    s: Polynomial = {(1,): 1}
    one: Polynomial = {(0,): 1}
    rows = [[one if j == i else s if j == i + 3 else {} for j in range(n)] for i in range(3)]
    coordinates = [_minor(rows, triple) for triple in combinations(range(n), 3)]
    return [[p.get((i,), 0) for p in coordinates] for i in range(order + 1)]


def fat_space(
    field: Field, orders: Sequence[int], rng: Random, *, n: int = 6, others: int = 0
) -> tuple[Subspace, list[Plane]]:
    """Osculating spaces at random planes, and random trivectors, added up; the planes."""
    total = Subspace.span(field, n, random_rows(field, others, comb(n, 3), rng))
    planes = []
    for order in orders:
        g = random_invertible(field, n, rng)
        space = Subspace.span(field, n, osculating_rows(order, n))
        total = total.sum(image_of_space(field, g, space))
        planes.append(image(field, g, Plane.from_rows(field, [unit(i, n) for i in range(3)])))
    return total, planes


def plane_of_the_cyclic_lagrangian(field: Field) -> Plane:
    """The plane of the cyclic Lagrangian modulo 11, found among the stable ones.

    The section modulo 11 has one closed point (computed), so the plane is
    stable under e_i → e_{i+1}, i in 1 … 5 cyclic, and is spanned by
    eigenvectors: Σ ζ^−i·e_i with ζ^5 = 1, and e0. All 80 stable planes are
    tried, and exactly one lies in the Lagrangian.
    """
    assert field.characteristic == 11
    space = cyclic_lagrangian(field)
    roots = [z for z in range(1, 11) if pow(z, 5, 11) == 1]
    lines = [[0, *(pow(z, -i, 11) for i in range(5))] for z in roots if z != 1]
    fixed = [[0, 1, 1, 1, 1, 1], *([1, *[x] * 5] for x in range(11))]
    candidates = [
        *combinations(lines, 3),
        *((a, b, c) for a, b in combinations(lines, 2) for c in fixed),
        *((a, unit(0), fixed[0]) for a in lines),
    ]
    assert len(candidates) == 80
    (found,) = (p for p in over(field, candidates) if space.contains(p.plucker))
    return found
