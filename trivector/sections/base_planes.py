"""Planes of an infinite section over the field of the data: all, some, or unknown."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import combinations

from trivector.errors import UsageError
from trivector.exterior.products import minors
from trivector.fields.linear import kernel
from trivector.sections.study import Limits, Progress
from trivector.sections.sweep import iter_rational_planes
from trivector.subspaces import Plane, Subspace

__all__ = ["BasePlanes", "find_base_planes"]


@dataclass(frozen=True)
class BasePlanes:
    """Planes of a section over its own field.

    Attributes
    ----------
    planes : tuple of Plane or None
        All of them, sorted; None if not known to be all.
    others : tuple of Plane
        Those that are not among the known ones, sorted; all of them exactly
        when ``planes`` is given.
    """

    planes: tuple[Plane, ...] | None
    others: tuple[Plane, ...]


def find_base_planes(
    subspace: Subspace, known: Sequence[Plane], limits: Limits, on_progress: Progress
) -> BasePlanes:
    """By the sweep over a finite field; over others by two constructions that may miss.

    The sweep is exhaustive and is run up to ``limits.max_points`` points; it
    stops, without being exhaustive, after ``limits.max_listed`` other planes.
    """
    try:
        sweep = iter_rational_planes(
            subspace,
            max_points=limits.max_points,
            on_progress=lambda done, total: on_progress(f"sweep: {done} of {total} points"),
        )
    except UsageError:  # an infinite field, or too many points
        pass
    else:
        return _by_sweep(sweep, set(known), limits)
    found = set(_pencil_planes(subspace, known)) | set(_planes_through_lines(subspace))
    return BasePlanes(None, tuple(sorted(found - set(known), key=Plane.sort_key)))


def _by_sweep(sweep: Iterator[Plane], known: set[Plane], limits: Limits) -> BasePlanes:
    everything: list[Plane] = []
    others = 0
    for plane in sweep:
        everything.append(plane)
        others += plane not in known
        if others > limits.max_listed:
            break
    everything.sort(key=Plane.sort_key)
    rest = tuple(plane for plane in everything if plane not in known)
    return BasePlanes(None if others > limits.max_listed else tuple(everything), rest)


def _pencil_planes(subspace: Subspace, known: Sequence[Plane]) -> list[Plane]:
    """Where two known planes share a line, ω + ω′ is a plane of their pencil, and in L."""
    field = subspace.field
    for first, second in combinations(known, 2):
        if first.meet_dimension(second) == 1:
            vector = [a + b for a, b in zip(first.plucker, second.plucker, strict=True)]
            return [Plane.from_plucker(field, vector)]
    return []


def _planes_through_lines(subspace: Subspace) -> list[Plane]:
    """Planes of L through coordinate lines: a linear condition on their third point."""
    field, n = subspace.field, subspace.n
    equations = kernel(field, subspace.rows, subspace.ambient_dimension)
    unit = [[field.one if i == j else field.zero for j in range(n)] for i in range(n)]
    planes = []
    for i, j in combinations(range(n), 2):
        others = [k for k in range(n) if k not in (i, j)]
        vectors = [minors([unit[i], unit[j], unit[k]]) for k in others]
        conditions = [
            [
                sum((a * b for a, b in zip(equation, vector, strict=True) if a and b), field.zero)
                for vector in vectors
            ]
            for equation in equations
        ]
        for solution in kernel(field, conditions, len(others)):
            third = [field.zero] * n
            for k, value in zip(others, solution, strict=True):
                third[k] = value
            planes.append(Plane.from_rows(field, [unit[i], unit[j], third]))
    return planes
