"""Slow and literal: what the package must agree with, all over F_q with q a prime.

Nothing here comes from the package, and nothing here is clever. Numbers are
plain ints modulo q. Vectors of V = F_q^n are tuples of n ints, planes are
3×n matrices in reduced row echelon form, and an element of ∧^p V is a dict
from strictly increasing p-tuples of indices to nonzero ints.
"""

from collections import deque
from collections.abc import Iterable, Iterator, Sequence
from functools import cache
from itertools import combinations, permutations, product

Vector = tuple[int, ...]
Matrix = tuple[Vector, ...]
Multivector = dict[tuple[int, ...], int]


def inverse(a: int, q: int) -> int:
    """The inverse of a modulo the prime q, as a power of a."""
    assert a % q != 0
    return pow(a, q - 2, q)


def permutation_sign(word: Sequence[int]) -> int:
    """The sign of a word in distinct numbers: swap neighbours until it is sorted."""
    letters, sign = list(word), 1
    for end in range(len(letters) - 1, 0, -1):
        for i in range(end):
            if letters[i] > letters[i + 1]:
                letters[i], letters[i + 1] = letters[i + 1], letters[i]
                sign = -sign
    return sign


_SIGNED_PERMUTATIONS = {n: [(s, permutation_sign(s)) for s in permutations(range(n))] for n in (3,)}


# Matrices


def rank(rows: Iterable[Sequence[int]], q: int) -> int:
    """Naive Gaussian elimination: how many rows survive."""
    remaining = deque([x % q for x in row] for row in rows)
    found = 0
    while remaining:
        row = remaining.popleft()
        pivot = next((j for j, x in enumerate(row) if x), None)
        if pivot is None:
            continue
        found += 1
        scale = inverse(row[pivot], q)
        for other in remaining:
            if other[pivot]:
                factor = other[pivot] * scale
                other[:] = [(x - factor * y) % q for x, y in zip(other, row, strict=True)]
    return found


def determinant(matrix: Sequence[Sequence[int]], q: int) -> int:
    """The sum over all permutations: 720 products for a 6×6 matrix."""
    size = len(matrix)
    total = 0
    for word in permutations(range(size)):
        term = permutation_sign(word)
        for i, j in enumerate(word):
            term *= matrix[i][j]
        total += term
    return total % q


def apply(matrix: Sequence[Sequence[int]], vector: Sequence[int], q: int) -> Vector:
    """The matrix times a column vector."""
    return tuple(sum(a * x for a, x in zip(row, vector, strict=True)) % q for row in matrix)


def combinations_of(rows: Sequence[Sequence[int]], q: int, size: int) -> Iterator[Vector]:
    """All q^r linear combinations of r vectors with ``size`` entries, zero first."""
    for coefficients in product(range(q), repeat=len(rows)):
        yield tuple(
            sum(c * row[j] for c, row in zip(coefficients, rows, strict=True)) % q
            for j in range(size)
        )


# Planes and points


def all_planes(q: int, n: int = 6) -> Iterator[Matrix]:
    """Every plane of PG(n−1, q), as the reduced row echelon form of its rows."""
    for pivots in combinations(range(n), 3):
        free = [
            (i, j) for i in range(3) for j in range(pivots[i] + 1, n) if j not in pivots
        ]  # a pivot column is zero but for its one; what lies right of a pivot is free
        for values in product(range(q), repeat=len(free)):
            rows = [[0] * n for _ in range(3)]
            for i, pivot in enumerate(pivots):
                rows[i][pivot] = 1
            for (i, j), value in zip(free, values, strict=True):
                rows[i][j] = value
            yield tuple(tuple(row) for row in rows)


def normalised(vector: Sequence[int], q: int) -> Vector:
    """The multiple whose first nonzero entry is 1."""
    scale = inverse(next(x for x in vector if x % q), q)
    return tuple(scale * x % q for x in vector)


def all_points(q: int, n: int = 6) -> Iterator[Vector]:
    """Every point of PG(n−1, q), normalised."""
    for vector in product(range(q), repeat=n):
        if any(vector) and normalised(vector, q) == vector:
            yield vector


def points_of(rows: Sequence[Sequence[int]], q: int, n: int = 6) -> frozenset[Vector]:
    """The points of the span of the rows, normalised."""
    everything = combinations_of(rows, q, n)
    return frozenset(normalised(v, q) for v in everything if any(v))


@cache
def point_bits(q: int, n: int = 6) -> dict[Vector, int]:
    """One bit for each point of PG(n−1, q)."""
    return {point: 1 << i for i, point in enumerate(all_points(q, n))}


def point_mask(rows: Sequence[Sequence[int]], q: int, n: int = 6) -> int:
    """The points of the span of the rows, as a set of bits."""
    return sum(point_bits(q, n)[point] for point in points_of(rows, q, n))


def dimension_from_points(count: int, q: int) -> int:
    """The projective dimension of a space with that many points; −1 for none."""
    dimension, total = -1, 0
    while total < count:
        dimension += 1
        total += q**dimension
    assert total == count
    return dimension


def meet_dimension(first: Matrix, second: Matrix, q: int) -> int:
    """How two planes meet, by counting the points they share."""
    n = len(first[0])
    return dimension_from_points(len(points_of(first, q, n) & points_of(second, q, n)), q)


# Multivectors


def plucker(rows: Sequence[Sequence[int]], q: int) -> Vector:
    """v0∧v1∧v2: all 3×3 determinants as sums over permutations, triples in order."""
    a, b, c = rows
    return tuple(
        sum(
            sign * a[triple[i]] * b[triple[j]] * c[triple[k]]
            for (i, j, k), sign in _SIGNED_PERMUTATIONS[3]
        )
        % q
        for triple in combinations(range(len(a)), 3)
    )


def multivector(coordinates: Sequence[int], n: int, p: int, q: int) -> Multivector:
    """From coordinates in the lexicographic basis of ∧^p V."""
    subsets = list(combinations(range(n), p))
    return {s: x % q for s, x in zip(subsets, coordinates, strict=True) if x % q}


def coordinates(element: Multivector, n: int, p: int, q: int) -> Vector:
    """The coordinates of an element of ∧^p V in the lexicographic basis."""
    return tuple(element.get(subset, 0) % q for subset in combinations(range(n), p))


def wedge(first: Multivector, second: Multivector, q: int) -> Multivector:
    """The product: e_I∧e_J is 0 if they share an index, else ± the sorted product."""
    result: Multivector = {}
    for left, a in first.items():
        for right, b in second.items():
            word = left + right
            if len(set(word)) == len(word):
                key = tuple(sorted(word))
                result[key] = (result.get(key, 0) + permutation_sign(word) * a * b) % q
    return {key: value for key, value in result.items() if value}


def pairing(first: Sequence[int], second: Sequence[int], q: int) -> int:
    """⟨α, β⟩ of two trivectors of six-space: the coefficient of α∧β at 012345."""
    top = wedge(multivector(first, 6, 3, q), multivector(second, 6, 3, q), q)
    return top.get((0, 1, 2, 3, 4, 5), 0)


def act(matrix: Sequence[Sequence[int]], alpha: Sequence[int], n: int, q: int) -> Vector:
    """g·α: every e_i∧e_j∧e_k is replaced by ge_i∧ge_j∧ge_k and expanded."""
    images = [
        {(i,): matrix[i][j] % q for i in range(n) if matrix[i][j] % q} for j in range(n)
    ]  # column j of g is g·e_j
    total: Multivector = {}
    for (i, j, k), coefficient in multivector(alpha, n, 3, q).items():
        image = wedge(wedge(images[i], images[j], q), images[k], q)
        for key, value in image.items():
            total[key] = (total.get(key, 0) + coefficient * value) % q
    return coordinates(total, n, 3, q)


@cache
def decomposables(q: int, n: int = 6) -> frozenset[Vector]:
    """The normalised Plücker vectors of all planes of PG(n−1, q)."""
    return frozenset(normalised(plucker(rows, q), q) for rows in all_planes(q, n))


def is_decomposable(alpha: Sequence[int], q: int, n: int = 6) -> bool:
    """Zero, or a multiple of the Plücker vector of some plane."""
    return not any(x % q for x in alpha) or normalised(alpha, q) in decomposables(q, n)
