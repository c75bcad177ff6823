"""Bare kernels of the exterior algebra, on sequences of scalars of any field.

Nothing is checked here: lengths must be right and all scalars of one field,
with ``zero`` its zero. `trivector.exterior.trivector` checks and calls these.
"""

from collections.abc import Sequence
from typing import Any

from trivector.exterior.basis import (
    complement_terms,
    index_of,
    sort_sign,
    subsets,
    wedge_terms,
)

__all__ = [
    "act",
    "contract",
    "exterior_cube",
    "gram_row",
    "minors",
    "pairing",
    "quadratic_form",
    "wedge",
]

Vector = Sequence[Any]


def wedge(first: Vector, p: int, second: Vector, q: int, n: int, zero: Any) -> list[Any]:
    """The product of an element of ∧^p k^n and one of ∧^q k^n."""
    result = [zero] * len(subsets(n, p + q))
    for i, j, k, sign in wedge_terms(n, p, q):
        a = first[i]
        if a:
            b = second[j]
            if b:
                result[k] = result[k] + a * b if sign == 1 else result[k] - a * b
    return result


def pairing(first: Vector, second: Vector, zero: Any) -> Any:
    """⟨α, β⟩ for two elements of ∧³k^6."""
    total = zero
    for a, (j, sign) in zip(first, complement_terms(), strict=True):
        if a:
            total = total + a * second[j] if sign == 1 else total - a * second[j]
    return total


def gram_row(vector: Vector) -> list[Any]:
    """The coefficients of the linear form ⟨α, ·⟩ on ∧³k^6.

    >>> gram_row([0] * 19 + [1])[0]
    -1
    """
    result: list[Any] = [None] * 20
    for a, (j, sign) in zip(vector, complement_terms(), strict=True):
        result[j] = a if sign == 1 else -a
    return result


def quadratic_form(vector: Vector, zero: Any) -> Any:
    """q(α) = Σ α_I·α_{I^c} over the ten complementary pairs of triples of 0…5.

    In characteristic 2 its polar form is the pairing, it is invariant under
    SL(V) and it vanishes on decomposables.
    """
    terms = complement_terms()
    return sum((vector[i] * vector[terms[i][0]] for i in range(10)), zero)


def contract(form: Vector, vector: Vector, p: int, n: int, zero: Any) -> list[Any]:
    """ι_f α for a linear form f on k^n and α ∈ ∧^p k^n.

    ι_f(v1∧…∧vp) = Σ_i (−1)^i f(v_i)·v1∧…(without v_i)…∧vp, i from 0.
    """
    target = index_of(n, p - 1)
    result = [zero] * len(target)
    for coefficient, subset in zip(vector, subsets(n, p), strict=True):
        if not coefficient:
            continue
        for i, index in enumerate(subset):
            value = form[index]
            if value:
                k = target[subset[:i] + subset[i + 1 :]]
                term = value * coefficient
                result[k] = result[k] - term if i % 2 else result[k] + term
    return result


def minors(rows: Sequence[Vector]) -> list[Any]:
    """The 3×3 minors of three rows, in the order of the basis: v0∧v1∧v2."""
    a, b, c = rows
    n = len(a)
    pair_minors = {(j, k): b[j] * c[k] - b[k] * c[j] for j, k in subsets(n, 2)}
    return [
        a[i] * pair_minors[j, k] - a[j] * pair_minors[i, k] + a[k] * pair_minors[i, j]
        for i, j, k in subsets(n, 3)
    ]


def exterior_cube(matrix: Sequence[Vector]) -> list[list[Any]]:
    """∧³g as a matrix: row I holds the minors of the *columns* I of g.

    So ``act`` below sends e_I to g(e_i)∧g(e_j)∧g(e_k), with g acting on
    column vectors.
    """
    columns = list(zip(*matrix, strict=True))
    return [minors([columns[i] for i in triple]) for triple in subsets(len(columns), 3)]


def act(matrix: Sequence[Vector], vector: Vector, zero: Any) -> list[Any]:
    """g·α for an n×n matrix g and α ∈ ∧³k^n."""
    result = [zero] * len(vector)
    for coefficient, image in zip(vector, exterior_cube(matrix), strict=True):
        if coefficient:
            result = [r + coefficient * x for r, x in zip(result, image, strict=True)]
    return result


def plane_candidate(vector: Vector, n: int, zero: Any) -> list[list[Any]]:
    """Three rows that span the plane of a decomposable α ≠ 0.

    They are the contractions of α by pairs of coordinate forms taken from a
    triple with α_I ≠ 0; if α is not decomposable they span something else.
    """
    index = index_of(n, 3)
    triple = next(t for t, value in zip(subsets(n, 3), vector, strict=True) if value)
    rows = []
    for position in range(3):
        rest = triple[:position] + triple[position + 1 :]
        row = []
        for j in range(n):
            sign = sort_sign((j, *rest))
            value = vector[index[tuple(sorted((j, *rest)))]] if sign else zero
            row.append(-value if sign == -1 else value)
        rows.append(row)
    return rows
