"""Coordinates of V in which the planes of a configuration have short entries.

The points in which the planes meet are natural vertices: six of them as
e0, …, e5 and a seventh as the unit point. The search is a descent from random
frames; it finds short coordinates, not the shortest.
"""

from collections.abc import Sequence
from itertools import combinations
from random import Random
from typing import Any

from trivector.errors import UsageError
from trivector.fields.linear import Rows, row_space, solve
from trivector.fields.protocol import Field
from trivector.subspaces import Plane

__all__ = ["find_small_frame", "in_frame"]


def in_frame(frame: Rows, planes: Sequence[Plane]) -> tuple[Plane, ...]:
    """The planes in the coordinates whose basis vectors are the rows of ``frame``."""
    field = planes[0].field
    inverse = _inverse(field, frame)
    return tuple(
        Plane.from_rows(field, (field.matrix(plane.rows, 6) * inverse).tolist()) for plane in planes
    )


def _inverse(field: Field, frame: Rows) -> Any:
    identity = [[field.one if i == j else field.zero for j in range(6)] for i in range(6)]
    rows = [[*row, *unit] for row, unit in zip(frame, identity, strict=True)]
    reduced, _ = field.matrix(rows, 12).rref()
    return field.matrix([row[6:] for row in reduced.tolist()], 6)


def find_small_frame(
    planes: Sequence[Plane], rng: Random, *, starts: int = 8, steps: int = 150
) -> Rows:
    """A frame of meeting points in which the planes have short entries.

    Parameters
    ----------
    planes : sequence of Plane
        n = 6, at least seven of their points of meeting in general position.
    rng : random.Random
    starts, steps : int
        Descents, and exchanges of one of the seven points tried in each.

    Returns
    -------
    tuple of six rows
        The new basis vectors in the old coordinates, for `in_frame`.

    Raises
    ------
    UsageError
        If no frame was found.
    """
    field = planes[0].field
    points = _meeting_points(planes)
    best: tuple[int, Rows] | None = None
    for _ in range(starts):
        chosen, current = _start(field, points, planes, rng)
        for _ in range(steps):
            if current is None:
                break
            trial = list(chosen)
            trial[rng.randrange(7)] = rng.randrange(len(points))
            frame = _frame(field, [points[i] for i in trial])
            if frame is not None:
                size = _size(in_frame(frame, planes))
                if size <= current[0]:
                    chosen, current = trial, (size, frame)
        if current is not None and (best is None or current[0] < best[0]):
            best = current
    if best is None:
        raise UsageError("the planes have no seven meeting points in general position")
    return best[1]


def _meeting_points(planes: Sequence[Plane]) -> list[tuple[Any, ...]]:
    found: dict[tuple[Any, ...], None] = {}
    for first, second in combinations(planes, 2):
        meet = first.meet(second)
        if len(meet.rows) == 1:
            found[meet.rows[0]] = None
    return list(found)


def _start(
    field: Field, points: list[tuple[Any, ...]], planes: Sequence[Plane], rng: Random
) -> tuple[list[int], tuple[int, Rows] | None]:
    chosen: list[int] = []
    for _ in range(200):
        chosen = [rng.randrange(len(points)) for _ in range(7)] if points else []
        frame = _frame(field, [points[i] for i in chosen])
        if frame is not None:
            return chosen, (_size(in_frame(frame, planes)), frame)
    return chosen, None


def _frame(field: Field, points: list[tuple[Any, ...]]) -> Rows | None:
    """Six points scaled so that the seventh is their sum; None unless in general position."""
    if len(row_space(field, points[:6], 6)) < 6:
        return None
    weights = solve(field, points[:6], points[6], 6)
    if weights is None or not all(weights):
        return None
    return tuple(
        tuple(weight * x for x in point) for weight, point in zip(weights, points, strict=False)
    )


def _size(planes: Sequence[Plane]) -> int:
    """The number of characters of the nonzero entries that are not 1, in a document."""
    total = 0
    for plane in planes:
        for row in plane.rows:
            for x in row:
                entry = str(plane.field.format(x))
                total += 0 if entry == "0" else 1 if entry == "1" else 4 * len(entry)
    return total
