"""A canonical representative of a configuration up to collineations."""

from collections.abc import Iterator, Sequence
from contextlib import suppress
from dataclasses import dataclass
from functools import cached_property
from random import Random
from typing import Any

from trivector.configurations import Configuration
from trivector.errors import UndecidedError, UsageError
from trivector.fields.linear import Rows, rank, row_space
from trivector.fields.protocol import Field
from trivector.subspaces import Plane
from trivector.symmetry.collineations import Collineation, check_same_space, orbits
from trivector.symmetry.comparison import compare_configurations
from trivector.symmetry.frames import Frame, Image, independent, normalised
from trivector.symmetry.linear_maps import (
    MapSystem,
    canonical_matrix,
    carrying,
    find_several_invertible,
    iter_projective,
)
from trivector.symmetry.refinement import Colouring
from trivector.symmetry.search import DistinctPlanes

__all__ = ["CanonicalForm", "canonical_form", "equivalence_classes"]

MAX_LEAVES = 1_000
_MAPS = 6  # random maps; they generate most groups of linear maps


@dataclass(frozen=True)
class CanonicalForm:
    """The canonical representative, and the collineation onto it.

    Attributes
    ----------
    configuration : Configuration
        Equal (as a tuple of planes) for two configurations exactly when they
        are equivalent over their field.
    collineation : Collineation
        From the given configuration to it.
    automorphisms : tuple of tuples of int
        Permutations of the given planes that were found on the way; each
        comes from a collineation.
    leaves : int
        How many frames were compared.
    """

    configuration: Configuration
    collineation: Collineation
    automorphisms: tuple[tuple[int, ...], ...]
    leaves: int

    @cached_property
    def label(self) -> str:
        """A digest (SHA-256) of field, n and planes: equal for equivalent configurations.

        Unequal representatives with equal digests are not known to exist; to
        exclude them compare `configuration`.
        """
        import hashlib
        import json

        data = [
            self.configuration.field.to_spec(),
            self.configuration.n,
            [plane.to_entries() for plane in self.configuration.planes],
        ]
        text = json.dumps(data, sort_keys=True, separators=(",", ":"))
        return hashlib.sha256(text.encode("utf-8")).hexdigest()


def canonical_form(configuration: Configuration, *, limit: int = MAX_LEAVES) -> CanonicalForm:
    """The least image of a configuration under canonical frames of its own.

    Parameters
    ----------
    configuration : Configuration
        Over any field; its planes in any order.
    limit : int
        The largest number of frames that are compared.

    Returns
    -------
    CanonicalForm

    Raises
    ------
    UsageError
        If the shared points of the planes do not span what the planes span and
        the field is infinite: a frame would need further points, which could
        be infinitely many alike. Or if more frames than the limit are needed.
        `compare_configurations` and `equivalence_classes` work without frames.

    Notes
    -----
    A search tree over sequences of planes, each marked in the incidence graph
    and followed by colour refinement (individualisation and refinement:
    "Practical graph isomorphism", 1981, and "Practical graph isomorphism, II",
    2014, arXiv 1301.1493). Points with a colour of their own come in a
    definite order; as soon as they contain a basis of V and fix the scale of
    each of its vectors, they are a frame, and the planes get coordinates. The
    representative is the least of these images among the nodes with the least
    colour traces. Equal images give automorphisms, which prune the tree. Where
    the points do not suffice, over F_q all points of the planes are tried, up
    to linear maps that keep every plane.

    Examples
    --------
    >>> from trivector import Configuration, read
    >>> planes = read("data/twenty-planes.json", field="F_7").planes
    >>> first, second = Configuration(planes[1:]), Configuration(planes[:-1])
    >>> canonical_form(first).label == canonical_form(second).label
    True
    """
    return _Labelling(configuration, limit).result()


def equivalence_classes(
    configurations: Sequence[Configuration], *, limit: int = MAX_LEAVES
) -> tuple[tuple[int, ...], ...]:
    """Sort configurations into classes up to collineations over their field.

    By their canonical forms; those that have none within the limit are
    compared two by two.

    Parameters
    ----------
    configurations : sequence of Configuration
        Over one field and of one V.
    limit : int
        The largest number of frames for one canonical form.

    Returns
    -------
    tuple of tuples of int
        Increasing indices, the classes by their first elements. Exhaustive.

    Raises
    ------
    UndecidedError
        If a comparison is undecided.

    Examples
    --------
    >>> from trivector import Configuration, read
    >>> planes = read("data/twenty-planes.json", field="F_7").planes
    >>> pairs = [Configuration(planes[i : i + 2]) for i in (0, 3, 4)]
    >>> triples = [Configuration(planes[:3]), Configuration(planes[5:8])]
    >>> equivalence_classes([*pairs, *triples], limit=100)
    ((0, 1, 2), (3, 4))
    """
    classes: list[list[int]] = []
    forms: list[tuple[Plane, ...] | None] = []
    by_form: dict[tuple[Plane, ...], int] = {}
    for i, configuration in enumerate(configurations):
        check_same_space(configurations[0], configuration)
        form = None
        with suppress(UsageError):
            form = canonical_form(configuration, limit=limit).configuration.planes
        place = None if form is None else by_form.get(form)
        if place is None:
            # Whether the limit is hit depends on the order of the planes, so
            # a class may have members with and without a form.
            for candidate, members in enumerate(classes):
                if (form is None or forms[candidate] is None) and _are_equivalent(
                    configurations, members[0], i
                ):
                    place = candidate
                    break
        if place is None:
            place = len(classes)
            classes.append([])
            forms.append(form)
        if form is not None:
            by_form[form] = place
            forms[place] = form
        classes[place].append(i)
    return tuple(tuple(members) for members in classes)


def _are_equivalent(configurations: Sequence[Configuration], i: int, j: int) -> bool:
    answer = compare_configurations(configurations[i], configurations[j])
    if answer.equivalent is None:
        raise UndecidedError(f"configurations {i} and {j}: undecided, {answer.limit}")
    return answer.equivalent


@dataclass
class _Leaf:
    """A frame that has been tried: its path, the image, and which plane went where."""

    path: tuple[int, ...]
    invariants: tuple[Any, ...]
    image: tuple[Any, ...]
    order: tuple[int, ...]
    matrix: Any


class _Labelling:
    """The search tree of one configuration."""

    def __init__(self, configuration: Configuration, limit: int) -> None:
        self._configuration = configuration
        self._planes = DistinctPlanes(configuration)
        self._field: Field = configuration.field
        self._n = configuration.n
        rows = [row for plane in self._planes.planes for row in plane.rows]
        self._span = row_space(self._field, rows, self._n)
        self._limit = limit
        self._rng = Random(0)
        self._leaves = 0
        self._best: _Leaf | None = None
        self._seen: dict[tuple[Any, ...], _Leaf] = {}
        self._automorphisms: list[tuple[int, ...]] = []

    def result(self) -> CanonicalForm:
        """Run the search."""
        planes = self._planes
        self._explore(planes.colours.start, (), (), better=False)
        best = self._best
        assert best is not None
        k, n = self._field, self._n
        listed: list[Plane] = []
        permutation = [0] * len(self._configuration.planes)
        for i, (_, rows) in zip(best.order, best.image, strict=True):
            plane = Plane(k, n, rows)
            for copy in planes.copies[i]:
                permutation[copy] = len(listed)
                listed.append(plane)
        matrix = canonical_matrix(k, best.matrix.tolist())
        return CanonicalForm(
            Configuration(tuple(listed)),
            Collineation(tuple(permutation), matrix),
            tuple(planes.permutation(images, planes) for images in self._automorphisms),
            self._leaves,
        )

    def _explore(
        self,
        colouring: Colouring,
        path: tuple[int, ...],
        invariants: tuple[Any, ...],
        *,
        better: bool,
    ) -> int:
        """Search below a node; the depth to which to return (the node's own: go on)."""
        depth = len(path)
        single, cells = self._cells(colouring)
        frame = self._frame(colouring, single)
        is_leaf = frame is not None or not cells
        invariant = (not is_leaf, colouring.trace)
        if self._best is not None and not better:
            known = self._best.invariants[depth] if depth < len(self._best.invariants) else None
            if known is None or invariant > known:
                return depth
            better = invariant < known
        invariants = (*invariants, invariant)
        if is_leaf:
            back = depth
            for matrix, image, order in self._images(frame, colouring, single):
                back = self._record(
                    _Leaf(path, invariants, image, order, matrix), better=better, back=back
                )
                better = False
            return back
        cell = min(cells, key=lambda cell: (len(cell), colouring.colours[cell[0]]))
        explored: set[int] = set()
        for candidate in cell:
            if explored:
                fixing = [g for g in self._automorphisms if all(g[i] == i for i in path)]
                if any(
                    candidate in orbit and not explored.isdisjoint(orbit)
                    for orbit in orbits(fixing, len(self._planes))
                ):
                    continue
            explored.add(candidate)
            marked = self._planes.colours.individualise(colouring, candidate)
            had = self._best
            back = self._explore(marked, (*path, candidate), invariants, better=better)
            if self._best is not had:
                better = False
            if back < depth:
                return back
        return depth

    def _record(self, leaf: _Leaf, *, better: bool, back: int) -> int:
        """Compare a leaf with those before; where to return to."""
        self._leaves += 1
        if self._leaves > self._limit:
            raise UsageError(
                f"more than {self._limit} frames would have to be compared; "
                "give a larger limit, or compare the configurations two by two"
            )
        best = self._best
        if best is None or better or leaf.image < best.image:
            self._best = leaf
        twin = self._seen.setdefault(leaf.image, leaf)
        if twin is leaf:
            return back
        images = [0] * len(leaf.order)
        for here, there in zip(leaf.order, twin.order, strict=True):
            images[there] = here
        if any(i != image for i, image in enumerate(images)):
            self._automorphisms.append(tuple(images))
        common = 0
        while common < min(len(leaf.path), len(twin.path)) and (
            leaf.path[common] == twin.path[common]
        ):
            common += 1
        if [images[i] for i in twin.path] != list(leaf.path):
            return back
        # The branch of this leaf is the image of that of its twin, which has been searched.
        return min(back, common)

    def _cells(self, colouring: Colouring) -> tuple[list[int], list[list[int]]]:
        """Planes with a colour of their own, by colour; the other cells."""
        by_colour: dict[int, list[int]] = {}
        for i in range(len(self._planes)):
            by_colour.setdefault(colouring.colours[i], []).append(i)
        single = [by_colour[c][0] for c in sorted(by_colour) if len(by_colour[c]) == 1]
        return single, [cell for cell in by_colour.values() if len(cell) > 1]

    def _points(self, colouring: Colouring) -> list[tuple[Any, ...]]:
        """Shared points with a colour of their own, by colour."""
        start = len(self._planes)
        by_colour: dict[int, list[int]] = {}
        for j, flat in enumerate(self._planes.colours.flats):
            if flat.flat.projective_dimension == 0:
                by_colour.setdefault(colouring.colours[start + j], []).append(j)
        flats = self._planes.colours.flats
        return [
            flats[by_colour[c][0]].flat.rows[0] for c in sorted(by_colour) if len(by_colour[c]) == 1
        ]

    def _frame(self, colouring: Colouring, single: Sequence[int]) -> "Frame | None":
        """A frame of the points and planes that are marked so far, if they make one."""
        points = self._points(colouring)
        basis = independent(self._field, points, self._n)
        if len(basis) < len(self._span):
            return None
        frame = Frame(self._field, self._n, basis)
        for point in points:
            frame.scale_by_point(point)
        for i in single:
            frame.scale_by_rows(frame.move(self._planes.planes[i].rows))
        # With all planes marked, what is left of the torus moves none of them.
        everything = len(single) == len(self._planes)
        return frame if everything or frame.is_rigid() else None

    def _images(
        self, frame: "Frame | None", colouring: Colouring, single: Sequence[int]
    ) -> Iterator[tuple[Any, tuple[Any, ...], tuple[int, ...]]]:
        """For a leaf: matrix, sorted images, and the planes in that order."""
        frames = [frame] if frame is not None else self._all_frames(colouring, single)
        k = self._field
        for each in frames:
            images = []
            for i, plane in enumerate(self._planes.planes):
                rows = each.rescale(each.move(plane.rows))
                key = tuple(k.sort_key(x) for row in rows for x in row)
                images.append(((len(self._planes.copies[i]), key), rows, i))
            images.sort(key=lambda item: item[0])
            image = tuple((key, rows) for key, rows, _ in images)
            yield each.matrix(), Image(image), tuple(i for _, _, i in images)

    def _all_frames(self, colouring: Colouring, single: Sequence[int]) -> Iterator["Frame"]:
        """Frames of points of the planes, which are in a definite order, over F_q.

        All of them, up to linear maps that keep every plane: these do not
        change the images.
        """
        k: Any = self._field
        if k.order is None:
            raise UsageError(
                "the points that the planes share do not span what the planes span, so over "
                f"{k.name} they give no frame; compare the configurations two by two"
            )
        if k.order**2 > self._limit:
            raise UsageError(
                "the points that the planes share do not span what the planes span, and "
                f"{k.name} has more elements than the limit allows; compare two by two"
            )
        rows = [plane.rows for plane in self._planes.planes]
        system = MapSystem(k, self._n, rows, rows)
        fixing = system.everything
        for i in range(len(rows)):
            fixing = system.restrict(fixing, i, i)
        # The points that there are come first; all planes are marked, so these are in order.
        basis = independent(k, self._points(colouring), self._n)
        yield from self._extend_frame(k, single, basis, fixing)

    def _extend_frame(
        self, k: Any, single: Sequence[int], basis: list[Any], fixing: Any
    ) -> Iterator["Frame"]:
        """Frames that begin with these vectors; ``fixing``: the maps that keep planes and them."""
        if len(basis) == len(self._span):
            frame = Frame(k, self._n, basis)
            for i in single:
                frame.scale_by_rows(frame.move(self._planes.planes[i].rows))
            yield frame
            return
        rows = next(
            self._planes.planes[i].rows
            for i in single
            if rank(k, [*basis, *self._planes.planes[i].rows], self._n) > len(basis)
        )
        for vector in self._representatives(k, rows, fixing):
            if rank(k, [*basis, vector], self._n) > len(basis):
                smaller = carrying(k, fixing, vector, vector, self._n)
                yield from self._extend_frame(k, single, [*basis, vector], smaller)

    def _representatives(self, k: Any, rows: Rows, fixing: Any) -> list[tuple[Any, ...]]:
        """The points of a plane, one for each orbit of some invertible maps that keep it.

        Random ones, so that most often they generate all; with fewer there are
        more representatives than needed, which costs time only.
        """
        elements = [k.from_code(code) for code in range(k.order)]
        points = [self._combination(factors, rows) for factors in iter_projective(elements, 3)]
        if fixing.nrows() == 1:
            return points
        index = {point: i for i, point in enumerate(points)}
        maps = find_several_invertible(k, fixing, self._n, self._rng, _MAPS)
        matrix = k.matrix(points, self._n)
        permutations = []
        for g in maps:
            images = (matrix * g.transpose()).tolist()
            permutations.append([index[normalised(image)] for image in images])
        return [points[orbit[0]] for orbit in orbits(permutations, len(points))]

    def _combination(self, factors: Sequence[Any], rows: Rows) -> tuple[Any, ...]:
        zero = self._field.zero
        return tuple(
            sum((f * x for f, x in zip(factors, column, strict=True)), zero)
            for column in zip(*rows, strict=True)
        )
