"""Brute force over F_2, F_3 and F_4, vectorised: every plane of PG(5, q), by tables written here.

Numbers are codes 0 … q−1: residues for a prime q; for q = 4 the code 2 is a
root a of x² + x + 1, the only irreducible quadratic over F_2, and 3 is a + 1.
Nothing here comes from the package.
"""

from collections.abc import Sequence
from functools import cache
from itertools import combinations, product
from typing import Any

import numpy as np

TRIPLES = tuple(combinations(range(6), 3))

_F4_PRODUCTS = ((0, 0, 0, 0), (0, 1, 2, 3), (0, 2, 3, 1), (0, 3, 1, 2))


@cache
def tables(q: int) -> tuple[Any, Any]:
    """All sums and all products of codes."""
    codes = np.arange(q, dtype=np.uint8)
    if q == 4:
        return codes[:, None] ^ codes[None, :], np.array(_F4_PRODUCTS, dtype=np.uint8)
    assert q in (2, 3)
    return (codes[:, None] + codes[None, :]) % q, codes[:, None] * codes[None, :] % q


@cache
def negatives(q: int) -> Any:
    """The code of −x for every code x."""
    return np.argmax(tables(q)[0] == 0, axis=1).astype(np.uint8)


@cache
def all_planes(q: int) -> tuple[Any, Any]:
    """(rows, minors): reduced rows, N×3×6, and Plücker vectors, N×20, of every plane."""
    add, multiply = tables(q)
    parts = []
    for pivots in combinations(range(6), 3):
        free = [(i, j) for i in range(3) for j in range(pivots[i] + 1, 6) if j not in pivots]
        rows = np.zeros((q ** len(free), 3, 6), dtype=np.uint8)
        number = np.arange(len(rows))
        for i, pivot in enumerate(pivots):
            rows[:, i, pivot] = 1
        for i, j in free:
            number, rows[:, i, j] = np.divmod(number, q)
        parts.append(rows)
    rows = np.concatenate(parts)
    minors = np.zeros((len(rows), 20), dtype=np.uint8)
    for position, (i, j, k) in enumerate(TRIPLES):
        for (a, b, c), positive in (
            ((i, j, k), True),
            ((j, k, i), True),
            ((k, i, j), True),
            ((i, k, j), False),
            ((k, j, i), False),
            ((j, i, k), False),
        ):
            term = multiply[multiply[rows[:, 0, a], rows[:, 1, b]], rows[:, 2, c]]
            minors[:, position] = add[minors[:, position], term if positive else negatives(q)[term]]
    return rows, minors


def echelon(q: int, rows: Sequence[Sequence[int]]) -> tuple[list[list[int]], list[int]]:
    """Reduced rows and pivot columns, one entry at a time."""
    add, multiply = (table.tolist() for table in tables(q))
    negative = negatives(q).tolist()
    inverse = [0, *(next(y for y in range(q) if multiply[x][y] == 1) for x in range(1, q))]
    remaining, kept, pivots = [list(row) for row in rows], [], []
    for column in range(len(rows[0]) if rows else 0):
        found = next((row for row in remaining if row[column]), None)
        if found is None:
            continue
        remaining.remove(found)
        scaled = [multiply[inverse[found[column]]][x] for x in found]
        for row in [*remaining, *kept]:
            factor = negative[row[column]]
            if factor:
                row[:] = [add[x][multiply[factor][y]] for x, y in zip(row, scaled, strict=True)]
        kept.append(scaled)
        pivots.append(column)
    return kept, pivots


def planes_in_span(q: int, rows: Sequence[Sequence[int]]) -> set[tuple[tuple[int, ...], ...]]:
    """Every plane of PG(5, q) whose Plücker vector is a combination of the rows.

    Where it is one, its entries at the pivots of the reduced rows are the
    coefficients; so each plane is compared with that combination.
    """
    add, multiply = tables(q)
    reduced, pivots = echelon(q, rows)
    everything, minors = all_planes(q)
    kept = np.arange(len(everything))
    for j in range(20):
        if j in pivots:
            continue
        value = np.zeros(len(kept), dtype=np.uint8)
        for row, pivot in zip(reduced, pivots, strict=True):
            if row[j]:
                value = add[value, multiply[minors[kept, pivot], row[j]]]
        kept = kept[minors[kept, j] == value]
    return {tuple(map(tuple, plane)) for plane in everything[kept].tolist()}


# Twenty-two planes of PG(5, 4)


def _hermitian_products(first: Any, second: Any) -> Any:
    """Σ x_i·y_i² over F_4."""
    add, multiply = tables(4)
    total = np.zeros(np.broadcast_shapes(first.shape, second.shape)[:-1], dtype=np.uint8)
    for i in range(6):
        y = second[..., i]
        total = add[total, multiply[first[..., i], multiply[y, y]]]
    return total


@cache
def isotropic_planes() -> Any:
    """The totally isotropic planes of Σ x_i³ over F_4 as reduced rows, N×3×6."""
    rows, _ = all_planes(4)
    kept = np.ones(len(rows), dtype=bool)
    for i, j in ((0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2)):
        kept &= _hermitian_products(rows[:, i], rows[:, j]) == 0
    return rows[kept]


@cache
def twenty_two_planes() -> tuple[tuple[tuple[int, ...], ...], ...]:
    """Totally isotropic planes that meet pairwise in one point, each point on 0 or 2 of them.

    Existence and uniqueness: "On 2-dimensional dual hyperovals of polar
    type". Found by search: each point of a chosen plane needs a second plane.
    """
    add, multiply = tables(4)
    planes = isotropic_planes()
    scalars = [v for v in product(range(4), repeat=3) if next(filter(None, v), 0) == 1]
    numbers: dict[tuple[int, ...], int] = {}
    masks = [0] * len(planes)
    for x, y, z in scalars:  # reduced rows give normalised points
        points = add[
            add[multiply[x, planes[:, 0]], multiply[y, planes[:, 1]]], multiply[z, planes[:, 2]]
        ]
        for k, point in enumerate(points.tolist()):
            masks[k] |= 1 << numbers.setdefault(tuple(point), len(numbers))

    def extend(chosen: list[int], candidates: list[int]) -> list[int] | None:
        once = twice = 0
        for k in chosen:
            twice |= once & masks[k]
            once |= masks[k]
        open_points = once & ~twice
        if not open_points:
            return chosen
        wanted = open_points & -open_points
        for k in candidates:
            if masks[k] & wanted:
                closed = twice | once & masks[k]
                rest = [
                    j
                    for j in candidates
                    if (masks[j] & masks[k]).bit_count() == 1 and not masks[j] & closed
                ]
                found = extend([*chosen, k], rest)
                if found is not None:
                    return found
        return None

    start = [k for k, mask in enumerate(masks) if (mask & masks[0]).bit_count() == 1]
    found = extend([0], start)
    assert found is not None
    return tuple(tuple(map(tuple, planes[k].tolist())) for k in found)
