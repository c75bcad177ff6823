"""Hilbert functions by the book: all monomials, all multiples, one rank.

Slow and literal, against which the graded algebras of the package are tested.
The Plücker relations are generated here again, in the redundant classical
form, and nothing is carried from one degree to the next. Ranks are
python-flint's.
"""

from collections.abc import Sequence
from functools import cache
from itertools import combinations, combinations_with_replacement
from math import comb
from typing import Any

import oracle

from trivector.fields import Field

Quadric = dict[tuple[int, int], Any]
"""Coefficients of x_a·x_b, a ≤ b."""


@cache
def exchange_relations(n: int) -> tuple[tuple[tuple[int, int, int], ...], ...]:
    """Σ_k ± p_{I j_k}·p_{J − j_k} = 0 for every pair I and four J: (sign, i, j) each.

    All of them, with repetitions up to sign: they generate the ideal of G(3,n)
    over every field (classical).
    """
    index = {triple: i for i, triple in enumerate(combinations(range(n), 3))}

    def coordinate(word: tuple[int, ...]) -> tuple[int, int] | None:
        if len(set(word)) < 3:
            return None
        return oracle.permutation_sign(word), index[tuple(sorted(word))]

    relations = []
    for pair in combinations(range(n), 2):
        for four in combinations(range(n), 4):
            terms = []
            for k, j in enumerate(four):
                left, right = coordinate((*pair, j)), coordinate(four[:k] + four[k + 1 :])
                if left is not None and right is not None:
                    terms.append(((-1) ** k * left[0] * right[0], left[1], right[1]))
            if terms:
                relations.append(tuple(terms))
    return tuple(relations)


def section_quadrics(field: Field, rows: Sequence[Sequence[Any]], n: int) -> list[Quadric]:
    """Every exchange relation at Σ x_a·b_a, expanded term by term; a basis of their span."""
    quadrics = []
    for relation in exchange_relations(n):
        quadric: Quadric = {}
        for sign, i, j in relation:
            for a, left in enumerate(rows):
                for b, right in enumerate(rows):
                    value = left[i] * right[j]
                    if value:
                        key = (min(a, b), max(a, b))
                        old = quadric.get(key, field.zero)
                        quadric[key] = old + value if sign == 1 else old - value
        quadric = {key: value for key, value in quadric.items() if value}
        if quadric:
            quadrics.append(quadric)
    pairs = list(combinations_with_replacement(range(len(rows)), 2))
    matrix = field.matrix(
        [[q.get(pair, field.zero) for pair in pairs] for q in quadrics], len(pairs)
    )
    reduced, rank = matrix.rref()
    return [
        {pair: value for j, pair in enumerate(pairs) if (value := reduced[i, j])}
        for i in range(rank)
    ]


def hilbert(field: Field, size: int, quadrics: Sequence[Quadric], degree: int) -> int:
    """dim (k[x]/(quadrics))_degree = C(m−1+d, d) − rank of all monomial multiples."""
    total = comb(size - 1 + degree, degree)
    if degree < 2:
        return total
    column = {
        monomial: i for i, monomial in enumerate(combinations_with_replacement(range(size), degree))
    }
    multiples = list(combinations_with_replacement(range(size), degree - 2))
    matrix = field.zero_matrix(max(1, len(quadrics) * len(multiples)), total)
    row = 0
    for quadric in quadrics:
        for monomial in multiples:
            for (a, b), value in quadric.items():
                matrix[row, column[tuple(sorted((*monomial, a, b)))]] = value
            row += 1
    return total - int(matrix.rank())


def hilbert_function(
    field: Field, size: int, quadrics: Sequence[Quadric], top: int
) -> tuple[int, ...]:
    """H(0), …, H(top)."""
    return tuple(hilbert(field, size, quadrics, d) for d in range(top + 1))


def section_hilbert(
    field: Field, rows: Sequence[Sequence[Any]], n: int, top: int
) -> tuple[int, ...]:
    """The Hilbert function of G(3,n) ∩ P(L), rows a basis of L."""
    return hilbert_function(field, len(rows), section_quadrics(field, rows, n), top)


def local_length(
    field: Field, size: int, quadrics: Sequence[Quadric], point: Sequence[Any], order: int
) -> int:
    """dim k[y]/(ideal + m^order) at a point: the local length when it is less than ``order``.

    The point is moved to x = (1, 0, …, 0) by a linear substitution, x_0 is set
    to 1 and everything of degree ≥ order is thrown away.
    """
    pivot = next(i for i, x in enumerate(point) if x)
    others = [i for i in range(size) if i != pivot]
    # x_i = point_i·(1) + y_i with y_pivot = 0.
    local = []
    for quadric in quadrics:
        polynomial: dict[tuple[int, ...], Any] = {}
        for (a, b), value in quadric.items():
            for left, c in ((None, point[a]), (a, field.one)):
                for right, d in ((None, point[b]), (b, field.one)):
                    if pivot in (left, right):
                        continue
                    monomial = tuple(sorted(i for i in (left, right) if i is not None))
                    old = polynomial.get(monomial, field.zero)
                    polynomial[monomial] = old + value * c * d
        local.append({key: value for key, value in polynomial.items() if value})
    monomials = [
        monomial
        for degree in range(order)
        for monomial in combinations_with_replacement(others, degree)
    ]
    column = {monomial: i for i, monomial in enumerate(monomials)}
    entries = []
    for polynomial in local:
        for multiple in monomials:
            row = {
                column[key]: value
                for monomial, value in polynomial.items()
                if (key := tuple(sorted(multiple + monomial))) in column
            }
            if row:
                entries.append(row)
    matrix = field.zero_matrix(max(1, len(entries)), len(monomials))
    for i, row in enumerate(entries):
        for j, value in row.items():
            matrix[i, j] = value
    return len(monomials) - int(matrix.rank())
