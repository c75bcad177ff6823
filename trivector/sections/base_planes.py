"""Planes of an infinite section over the field of the data: all, some, or unknown."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from trivector.errors import UsageError
from trivector.sections.lines_of_planes import find_planes_through_lines
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
    """By the sweep over a finite field; over others by a construction that may miss.

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
    given = set(known)
    found = find_planes_through_lines(subspace, known)
    return BasePlanes(None, tuple(plane for plane in found if plane not in given))


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
