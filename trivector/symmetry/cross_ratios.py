"""Cross ratios of shared points in a plane: what incidences alone do not see.

Ten planes in general position meet two by two in 45 points, and their
incidence graph is as symmetric as it can be, while no collineation but the
identity keeps them. The shared points in each plane then tell the planes
apart: five of them, one marked, have a cross ratio.
"""

from collections import Counter
from itertools import combinations
from math import comb
from typing import Any

from trivector.configurations import Incidence
from trivector.fields.protocol import Field

__all__ = ["cross_ratio_signatures"]

_MOST_CROSS_RATIOS = 60_000


def cross_ratio_signatures(incidence: Incidence) -> list[tuple[Any, ...]] | None:
    """For each plane of a configuration the cross ratios of the shared points in it.

    For a point x and four others in a plane, the lines from x to the four have
    the invariant −e2³/e3² of the three products d12·d34, d13·d42, d14·d23,
    d_ab = det(x, a, b), which do not depend on the order up to sign; it is the
    j-invariant of the four lines divided by 256. If e3 = 0 (some of the five
    are on a line), it is replaced by how many of the three products vanish.

    Returns
    -------
    list of tuples, or None
        A collineation carries each plane to one with the same tuple. None if
        there would be more than 60,000 cross ratios: a decision that depends
        on incidences only, so that equivalent configurations agree in it.
    """
    on_plane: list[list[tuple[Any, ...]]] = [[] for _ in incidence.configuration.planes]
    planes = incidence.configuration.planes
    pivots = [[next(j for j, x in enumerate(row) if x) for row in p.rows] for p in planes]
    for point in incidence.points:
        (vector,) = point.flat.rows
        for i in point.planes:
            # Rows are reduced, so these are coordinates in the basis of the plane.
            on_plane[i].append(tuple(vector[j] for j in pivots[i]))
    total = sum(len(points) * comb(len(points) - 1, 4) for points in on_plane)
    if total > _MOST_CROSS_RATIOS:
        return None
    field = incidence.configuration.field
    return [_signature(field, points) for points in on_plane]


def _signature(field: Field, points: list[tuple[Any, ...]]) -> tuple[Any, ...]:
    degenerate: Counter[int] = Counter()
    invariants = []
    for i, x in enumerate(points):
        lines = [_projected(x, y) for j, y in enumerate(points) if j != i]
        d = {
            (a, b): lines[a][0] * lines[b][1] - lines[a][1] * lines[b][0]
            for a, b in combinations(range(len(lines)), 2)
        }
        for p, q, r, s in combinations(range(len(lines)), 4):
            u, v, w = d[p, q] * d[r, s], -d[p, r] * d[q, s], d[p, s] * d[q, r]
            e3 = u * v * w
            if not e3:
                degenerate[sum(not product for product in (u, v, w))] += 1
                continue
            # The sum of the three is zero, so −e2 = w² − uv.
            e2 = w * w - u * v
            invariants.append(e2 * e2 * e2 / (e3 * e3))
    keys = sorted(field.sort_key(value) for value in invariants)
    return (tuple(sorted(degenerate.items())), tuple(keys))


def _projected(x: tuple[Any, ...], y: tuple[Any, ...]) -> tuple[Any, Any]:
    """y from x: two coordinates on the pencil of lines through x."""
    k = next(j for j, value in enumerate(x) if value)
    first, second = (y[j] * x[k] - x[j] * y[k] for j in range(3) if j != k)
    return first, second
