"""The basis of ∧^p V and all its signs. No other module decides a sign.

V = k^n has the basis e0, …, e(n−1). ∧^p V has the basis e_I, I a p-subset,
in lexicographic order: for n = 6, p = 3 that is 012, 013, 014, 015, 023, …,
345. The volume e0∧…∧e(n−1) is 1, and the pairing of ∧³V for n = 6 is
⟨α,β⟩ = the coefficient of α∧β, so ⟨e_I, e_J⟩ = sign(I, J) when J is the
complement of I and 0 otherwise.
"""

from collections.abc import Sequence
from functools import cache
from itertools import combinations
from math import comb

__all__ = [
    "DIMENSIONS",
    "Subset",
    "complement_terms",
    "dimension_from_size",
    "index_of",
    "sort_sign",
    "subset_name",
    "subsets",
    "wedge_terms",
]

Subset = tuple[int, ...]

DIMENSIONS = (6, 7)
"""The dimensions n of V for which planes, sections and configurations work."""


@cache
def subsets(n: int, p: int) -> tuple[Subset, ...]:
    """The index sets of the basis of ∧^p k^n, in lexicographic order."""
    return tuple(combinations(range(n), p))


@cache
def index_of(n: int, p: int) -> dict[Subset, int]:
    """The position of each index set in `subsets`."""
    return {subset: i for i, subset in enumerate(subsets(n, p))}


def sort_sign(indices: Sequence[int]) -> int:
    """The sign of e_{i1}∧…∧e_{ip} against the sorted product; 0 if an index repeats.

    Examples
    --------
    >>> sort_sign([1, 0, 2]), sort_sign([2, 0, 1]), sort_sign([0, 3, 3])
    (-1, 1, 0)
    """
    if len(set(indices)) < len(indices):
        return 0
    inversions = sum(a > b for a, b in combinations(indices, 2))
    return -1 if inversions % 2 else 1


@cache
def wedge_terms(n: int, p: int, q: int) -> tuple[tuple[int, int, int, int], ...]:
    """The multiplication table of ∧^p × ∧^q → ∧^(p+q).

    Returns
    -------
    tuple of (i, j, k, sign)
        e_I∧e_J = sign·e_K for the I, J, K at positions i, j, k; the zero
        products are left out.
    """
    target = index_of(n, p + q)
    table = []
    for i, first in enumerate(subsets(n, p)):
        for j, second in enumerate(subsets(n, q)):
            sign = sort_sign(first + second)
            if sign:
                table.append((i, j, target[tuple(sorted(first + second))], sign))
    return tuple(table)


@cache
def complement_terms() -> tuple[tuple[int, int], ...]:
    """For each triple I of 0…5 in order: the position of its complement, ⟨e_I, e_{I^c}⟩."""
    return tuple((j, sign) for _, j, _, sign in wedge_terms(6, 3, 3))


def dimension_from_size(size: int) -> int | None:
    """The n among `DIMENSIONS` with dim ∧³k^n = size, or None."""
    return next((n for n in DIMENSIONS if comb(n, 3) == size), None)


def subset_name(subset: Subset) -> str:
    """``"012"`` for (0, 1, 2)."""
    return "".join(map(str, subset))
