"""Backtracking over the images of a few planes that determine a collineation.

A *base* is a sequence of planes b_1, …, b_m such that a linear map known to
carry each b_i to a given plane is known up to the maps that fix all planes.
For a partial choice of images c_1, …, c_l let S be the space of linear maps g
with g·b_i ⊂ c_i. If a collineation h with these images exists, then
S = h·S_0, where S_0 is the space for c_i = b_i; so

* dim S = dim S_0 (tested modulo a prime as dim S ≥ dim S_0, since ranks only
  drop there: no image is lost), and
* the colours of the incidence graph with b_1, …, b_l marked agree with those
  with c_1, …, c_l marked.

At the end S is computed over the field itself. Any invertible g in S equals
h·s with an invertible s in S_0, and s fixes all planes: so one invertible g
decides. Whether S has one does not depend on the field: the planes make V and
V′ modules over a path algebra, S is the space of homomorphisms, and modules
that are isomorphic over an extension are isomorphic (Noether–Deuring theorem,
classical). Hence planes over k that are equivalent over an extension of k, by
some permutation, are equivalent over k by the same permutation.
"""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from random import Random
from typing import Any

from trivector.configurations import Configuration
from trivector.errors import BadReductionError
from trivector.fields.linear import Rows
from trivector.fields.protocol import Field, Reduction
from trivector.subspaces import Plane
from trivector.symmetry.cross_ratios import cross_ratio_signatures
from trivector.symmetry.linear_maps import (
    MapSystem,
    find_invertible,
    image_rows,
    is_never_invertible,
)
from trivector.symmetry.refinement import Colouring, IncidenceColours

__all__ = ["Base", "DistinctPlanes", "Found", "LimitReachedError", "Search"]

Predicate = Callable[[Any], bool]

_LARGE_CLASS = 8
_UNLIKELY = 100  # times _ATTEMPTS draws: an invertible map exists, so one is found


class LimitReachedError(Exception):
    """The search has taken more steps than allowed; never leaves this room."""


@dataclass(frozen=True)
class Found:
    """A bijection of distinct planes and an invertible matrix that induces it."""

    images: tuple[int, ...]
    matrix: Any


class DistinctPlanes:
    """The different planes of a configuration, how often each occurs, and their colours.

    ``conjugation``, for planes that are all different, is a permutation with
    which collineations have to commute: the Galois action on them.
    """

    def __init__(
        self, configuration: Configuration, conjugation: Sequence[int] | None = None
    ) -> None:
        self.field: Field = configuration.field
        self.n = configuration.n
        copies: dict[Plane, list[int]] = {}
        for i, plane in enumerate(configuration.planes):
            copies.setdefault(plane, []).append(i)
        self.planes = tuple(copies)
        self.copies = tuple(tuple(indices) for indices in copies.values())
        self.index = {plane.rows: i for i, plane in enumerate(self.planes)}
        multiplicities = [len(indices) for indices in self.copies]
        distinct = Configuration(self.planes)
        self.colours = IncidenceColours(distinct, multiplicities, conjugation)
        # Incidences that tell nearly nothing: then cross ratios are worth their time.
        self.cross_ratios = False
        if self.colours.largest_class >= max(_LARGE_CLASS, 2 * len(self.planes) / 3):
            signatures = cross_ratio_signatures(self.colours.incidence)
            if signatures is not None and len(set(signatures)) > 1:
                self.cross_ratios = True
                kept = list(zip(multiplicities, signatures, strict=True))
                self.colours = IncidenceColours(distinct, kept, conjugation)

    def __len__(self) -> int:
        return len(self.planes)

    def permutation(self, images: Sequence[int], target: "DistinctPlanes") -> tuple[int, ...]:
        """The same bijection on the indices of the configurations, copies in order."""
        result = [0] * sum(len(indices) for indices in self.copies)
        for i, image in enumerate(images):
            for before, after in zip(self.copies[i], target.copies[image], strict=True):
                result[before] = after
        return tuple(result)


class Base:
    """Planes of one configuration that determine a collineation, and what images must satisfy.

    Parameters
    ----------
    planes : DistinctPlanes
    fixing : sequence of int
        Planes (indices of distinct ones) with which the base is to begin.

    Attributes
    ----------
    sequence : tuple of int
    dimensions : list of int
        Over the field: the dimension of the maps that keep the first l planes
        of the base, l = 0 … m. The last one is that of the maps keeping all.
    colourings : list of Colouring
        With the first l planes of the base marked.
    """

    def __init__(self, planes: DistinctPlanes, fixing: Sequence[int] = ()) -> None:
        self.planes = planes
        field, n = planes.field, planes.n
        rows = [plane.rows for plane in planes.planes]
        self.reduction, reduced = _reduce(field, n, [rows])
        system = MapSystem(self.reduction.field, n, reduced[0], reduced[0])
        sequence = list(fixing)
        space = system.everything
        for i in sequence:
            space = system.restrict(space, i, i)
        while True:
            choices = [
                (system.restrict(space, i, i).nrows(), i)
                for i in range(len(planes))
                if i not in sequence
            ]
            best = min(choices, default=None)
            if best is None or best[0] == space.nrows():
                break
            sequence.append(best[1])
            space = system.restrict(space, best[1], best[1])
        self.exact = system if self.reduction.exact else MapSystem(field, n, rows, rows)
        self.spaces = [self.exact.everything]
        for i in sequence:
            self.spaces.append(self.exact.restrict(self.spaces[-1], i, i))
        for i in range(len(planes)):
            # A bad prime may have hidden a condition.
            smaller = self.exact.restrict(self.spaces[-1], i, i)
            if smaller.nrows() < self.spaces[-1].nrows():
                sequence.append(i)
                self.spaces.append(smaller)
        self.sequence = tuple(sequence)
        self.dimensions = [space.nrows() for space in self.spaces]
        self.colourings = [planes.colours.start]
        for i in sequence:
            self.colourings.append(planes.colours.individualise(self.colourings[-1], i))


class Search:
    """Linear maps that carry the planes of a base's configuration to those of another.

    Parameters
    ----------
    base : Base
    target : DistinctPlanes
    predicate : callable, optional
        A further condition on the invertible matrix.
    limit : int
        The largest number of partial images that are tried.
    """

    def __init__(
        self,
        base: Base,
        target: DistinctPlanes,
        *,
        predicate: Predicate | None = None,
        limit: int,
        rng: Random,
    ) -> None:
        self.base = base
        self.target = target
        self.undecided = ""
        self.steps = 0
        self._limit = limit
        self._predicate = predicate
        self._rng = rng
        source = base.planes
        first = [plane.rows for plane in source.planes]
        second = [plane.rows for plane in target.planes]
        field, n = source.field, source.n
        reduction, (one, two) = _reduce(field, n, [first, second])
        self._fast = MapSystem(reduction.field, n, one, two)
        self._exact = self._fast if reduction.exact else MapSystem(field, n, first, second)

    def first(self, prefix: Sequence[int] = ()) -> Found | None:
        """The first solution in which the base begins with these images; None if there is none."""
        space, colouring = self._fast.everything, self.target.colours.start
        if colouring.trace != self.base.colourings[0].trace:
            return None
        for level, image in enumerate(prefix):
            step = self._step(level, space, colouring, image)
            if step is None:
                return None
            space, colouring = step
        return next(self._solutions(list(prefix), space, colouring), None)

    def _solutions(self, images: list[int], space: Any, colouring: Colouring) -> Iterator[Found]:
        level = len(images)
        if level == len(self.base.sequence):
            found = self._decide(images, space)
            if found is not None:
                yield found
            return
        colour = self.base.colourings[level].colours[self.base.sequence[level]]
        for image in self.target.colours.cell(colouring, colour):
            step = self._step(level, space, colouring, image)
            if step is not None:
                yield from self._solutions([*images, image], *step)

    def _step(
        self, level: int, space: Any, colouring: Colouring, image: int
    ) -> tuple[Any, Colouring] | None:
        """One more image; None if it is impossible."""
        self.steps += 1
        if self.steps > self._limit:
            raise LimitReachedError
        smaller = self._fast.restrict(space, self.base.sequence[level], image)
        wanted = self.base.dimensions[level + 1]
        if smaller is None or smaller.nrows() < wanted:
            return None
        if self._exact is self._fast and smaller.nrows() > wanted:
            return None
        marked = self.target.colours.individualise(colouring, image)
        if marked.trace != self.base.colourings[level + 1].trace:
            return None
        return smaller, marked

    def _decide(self, images: Sequence[int], space: Any) -> Found | None:
        """Whether the images of the whole base belong to a collineation, exactly."""
        field, n = self.base.planes.field, self.base.planes.n
        if self._exact is not self._fast:
            space = self._exact.everything
            for i, image in zip(self.base.sequence, images, strict=True):
                space = self._exact.restrict(space, i, image)
                if space is None:
                    return None
        if space.nrows() != self.base.dimensions[-1]:
            return None
        matrix = find_invertible(field, space, n, self._rng)
        if matrix is None:
            never = True if space.nrows() == 1 else is_never_invertible(field, space, n, self._rng)
            if never is None:
                self.undecided = (
                    "whether a space of linear maps of dimension "
                    f"{space.nrows()} contains an invertible one"
                )
            if never is not False:
                return None
            for _ in range(_UNLIKELY):
                matrix = find_invertible(field, space, n, self._rng)
                if matrix is not None:
                    break
            if matrix is None:  # practically impossible; still no reason to say "no"
                self.undecided = "no invertible map was found although one exists"
                return None
        all_images: list[int] = []
        for plane in self.base.planes.planes:
            position = self.target.index.get(image_rows(field, matrix, plane.rows, n))
            if position is None:
                return None
            all_images.append(position)
        source, target = self.base.planes.copies, self.target.copies
        if any(len(source[i]) != len(target[j]) for i, j in enumerate(all_images)):
            return None
        if self._predicate is not None and not self._predicate(matrix):
            if space.nrows() > 1:
                self.undecided = (
                    "whether one of several maps with the same action on the planes keeps the space"
                )
            return None
        return Found(tuple(all_images), matrix)


def _reduce(
    field: Field, n: int, families: Sequence[Sequence[Rows]]
) -> tuple[Reduction, list[list[Rows]]]:
    """The first reduction at which all canonical rows are integral, and the rows there.

    Canonical rows stay canonical, and so do the annihilators made of them.
    """
    for reduction in field.reductions():
        try:
            reduced = [
                [tuple(map(tuple, reduction.rows(rows))) for rows in family] for family in families
            ]
        except BadReductionError:
            continue
        return reduction, reduced
    raise AssertionError(f"{field.name} has no prime of good reduction")  # pragma: no cover
