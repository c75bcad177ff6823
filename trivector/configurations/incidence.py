"""Which points, lines and hyperplanes do several planes share?"""

from collections import Counter
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import TYPE_CHECKING, Any

from trivector.configurations.configuration import Configuration
from trivector.exterior.basis import subsets
from trivector.exterior.products import gram_row
from trivector.fields.linear import Rows, kernel
from trivector.fields.protocol import Field
from trivector.subspaces import Flat

if TYPE_CHECKING:
    import networkx

__all__ = ["Incidence", "SharedFlat", "flat_text"]


@dataclass(frozen=True)
class SharedFlat:
    """A point or line in which planes meet, or a hyperplane that planes span.

    Attributes
    ----------
    flat : Flat
    planes : tuple of int
        The indices of all planes on it (in it, for a hyperplane), increasing.
    """

    flat: Flat
    planes: tuple[int, ...]


@dataclass(frozen=True)
class Incidence:
    """The planes of a configuration against what several of them share.

    A *shared point* or *line* is the common part of two or more of the
    planes; a *shared hyperplane* is the span of two or more of them. Each
    list holds all of them, over the field of the data and over every
    extension of it, sorted by `Flat.sort_key`.

    Parameters
    ----------
    configuration : Configuration
        Incident or not; repeated planes count with their own indices.

    Examples
    --------
    >>> from trivector import read
    >>> from trivector.configurations import Incidence
    >>> incidence = Incidence(read("data/twenty-planes.json"))
    >>> incidence.profile("points")  # {planes on a point: number of such points}
    {2: 30, 5: 16}
    >>> sorted(set(incidence.point_dimensions))
    [2, 4]
    """

    configuration: Configuration

    @cached_property
    def points(self) -> tuple[SharedFlat, ...]:
        """The points in which two or more planes meet, with all planes on them."""
        return self._of_dimension(0)

    @cached_property
    def lines(self) -> tuple[SharedFlat, ...]:
        """The lines in which two or more planes meet, with all planes through them."""
        return self._of_dimension(1)

    @cached_property
    def hyperplanes(self) -> tuple[SharedFlat, ...]:
        """The hyperplanes that two or more planes span, with all planes in them."""
        planes, n = self.configuration.planes, self.configuration.n
        dual = _meets(self._field, self._annihilators, [plane.rows for plane in planes], n)
        found = [
            SharedFlat(Flat(self._field, n, kernel(self._field, rows, n)), members)
            for rows, members in dual
            if len(rows) == 1
        ]
        return tuple(sorted(found, key=lambda shared: shared.flat.sort_key()))

    @property
    def _field(self) -> Field:
        return self.configuration.field

    @cached_property
    def _annihilators(self) -> list[Rows]:
        n = self.configuration.n
        return [kernel(self._field, plane.rows, n) for plane in self.configuration.planes]

    @cached_property
    def _flats(self) -> tuple[SharedFlat, ...]:
        planes, n = self.configuration.planes, self.configuration.n
        meets = _meets(self._field, [plane.rows for plane in planes], self._annihilators, n)
        found = [SharedFlat(Flat(self._field, n, rows), members) for rows, members in meets]
        return tuple(sorted(found, key=lambda shared: shared.flat.sort_key()))

    def _of_dimension(self, dimension: int) -> tuple[SharedFlat, ...]:
        return tuple(s for s in self._flats if s.flat.projective_dimension == dimension)

    @cached_property
    def point_dimensions(self) -> tuple[int, ...] | None:
        """dim(A ∩ F_v) at each shared point v, F_v = v∧(∧²V); None unless A is Lagrangian.

        A is the span of the planes in ∧³V, n = 6. Both are Lagrangian, so the
        dimension is 10 minus the rank of the pairing between bases of the two.
        """
        if self.configuration.n != 6:
            return None
        span = self.configuration.span()
        if not span.is_lagrangian():
            return None
        zero = self._field.zero
        forms = self._field.matrix([gram_row(row) for row in span.rows], 20)
        return tuple(
            10 - int((forms * _through_point(self._field, p.flat.rows[0], zero)).rank())
            for p in self.points
        )

    def shared(self, kind: str) -> tuple[SharedFlat, ...]:
        """`points`, `lines` or `hyperplanes`, by name."""
        chosen: tuple[SharedFlat, ...] = getattr(self, kind)
        return chosen

    def profile(self, kind: str) -> dict[int, int]:
        """How many of the points (lines, hyperplanes) have how many planes, increasing."""
        counts = Counter(len(shared.planes) for shared in self.shared(kind))
        return dict(sorted(counts.items()))

    def per_plane(self, kind: str) -> tuple[dict[int, int], ...]:
        """For each plane: how many of its points (lines, …) carry how many planes."""
        counts: list[Counter[int]] = [Counter() for _ in self.configuration.planes]
        for shared in self.shared(kind):
            for i in shared.planes:
                counts[i][len(shared.planes)] += 1
        return tuple(dict(sorted(count.items())) for count in counts)

    def pencils(self) -> tuple[tuple[int, ...], ...]:
        """Three or more planes through a line and in a solid with it: maximal such sets.

        Each as the increasing tuple of its indices; in lexicographic order.
        """
        found: set[tuple[int, ...]] = set()
        planes = self.configuration.planes
        for line in self.lines:
            solids: dict[Rows, set[int]] = {}
            for position, i in enumerate(line.planes):
                for j in line.planes[position + 1 :]:
                    if planes[i] != planes[j]:
                        solids.setdefault(planes[i].join(planes[j]).rows, set()).update((i, j))
            for members in solids.values():
                if len({planes[i] for i in members}) >= 3:
                    found.add(tuple(sorted(members)))
        return tuple(sorted(found))

    def matrix(self, kind: str = "points") -> list[list[int]]:
        """Planes × points (lines, hyperplanes): 1 where the plane is on it, else 0."""
        shared = self.shared(kind)
        rows = [[0] * len(shared) for _ in self.configuration.planes]
        for column, flat in enumerate(shared):
            for i in flat.planes:
                rows[i][column] = 1
        return rows

    def graph(self, *, hyperplanes: bool = False) -> "networkx.Graph[str]":
        """The incidence graph.

        Nodes ``p0, p1, …`` are the planes (attributes ``kind`` = ``"plane"``,
        ``index``, ``label``, ``coordinates``); ``point0, …``, ``line0, …`` and
        if asked for ``hyperplane0, …`` are what they share (``kind``,
        ``index``, ``coordinates``, ``planes``: the number of planes on it;
        points also ``a_dimension`` = dim(A ∩ F_v) if the span A is
        Lagrangian). Edges are incidences. The order is that of the lists.
        """
        import networkx

        graph: networkx.Graph[str] = networkx.Graph(kind="incidence", field=self._field.name)
        labels = self.configuration.labels
        for i, plane in enumerate(self.configuration.planes):
            label = labels[i] if labels else str(i)
            text = flat_text(plane)
            graph.add_node(f"p{i}", kind="plane", index=i, label=label, coordinates=text)
        for kind in ("point", "line", "hyperplane")[: 3 if hyperplanes else 2]:
            for j, shared in enumerate(self.shared(kind + "s")):
                node = f"{kind}{j}"
                graph.add_node(
                    node,
                    kind=kind,
                    index=j,
                    coordinates=flat_text(shared.flat),
                    planes=len(shared.planes),
                )
                if kind == "point" and self.point_dimensions is not None:
                    graph.nodes[node]["a_dimension"] = self.point_dimensions[j]
                graph.add_edges_from((f"p{i}", node) for i in shared.planes)
        return graph

    def to_json(self) -> dict[str, Any]:
        """All shared flats with their planes, and how many there are of which kind."""
        dimensions = self.point_dimensions
        data: dict[str, Any] = {}
        for kind in ("points", "lines", "hyperplanes"):
            listed: list[dict[str, Any]] = [
                {"rows": shared.flat.to_entries(), "planes": list(shared.planes)}
                for shared in self.shared(kind)
            ]
            if kind == "points" and dimensions is not None:
                for entry, dimension in zip(listed, dimensions, strict=True):
                    entry["a_dimension"] = dimension
            data[kind] = listed
            data[f"{kind}_by_planes"] = {str(k): v for k, v in self.profile(kind).items()}
        data["pencils"] = [list(pencil) for pencil in self.pencils()]
        return data


def flat_text(flat: Flat) -> str:
    """The rows on one line: ``1 0 0 2 0 0 | 0 1 0 0 3 0``."""
    return " | ".join(" ".join(map(str, row)) for row in flat.to_entries())


def _through_point(field: Field, v: Sequence[Any], zero: Any) -> Any:
    """The 20×15 matrix whose columns v∧e_i∧e_j span F_v."""
    columns = field.zero_matrix(20, 15)
    index = {triple: position for position, triple in enumerate(subsets(6, 3))}
    for column, (i, j) in enumerate(subsets(6, 2)):
        for k, value in enumerate(v):
            if value and k != i and k != j:
                row = index[tuple(sorted((i, j, k)))]
                columns[row, column] = -value if i < k < j else value
    return columns


def _meets(
    field: Field, spaces: Sequence[Rows], annihilators: Sequence[Rows], n: int
) -> list[tuple[Rows, tuple[int, ...]]]:
    """All nonzero intersections of two or more *different* spaces, and the spaces around each.

    Works for subspaces of k^n of any dimensions. The intersection of U (rows)
    with the space whose annihilator is N is {c·U : N·(c·U)ᵗ = 0}; canonical
    rows c and U give canonical rows c·U.
    """
    conditions = field.matrix([row for rows in annihilators for row in rows], n)
    starts = [0]
    for rows in annihilators:
        starts.append(starts[-1] + len(rows))
    found: dict[Rows, tuple[int, ...]] = {}
    given = {rows: i for i, rows in enumerate(spaces)}
    frontier = list(given)
    while frontier:
        new: dict[Rows, None] = {}
        members: dict[Rows, tuple[int, ...]] = {}
        for flat, blocks in _evaluate(conditions, starts, frontier, field, n):
            around = []
            # Of two given spaces the meet is found once; a line has no smaller meet but 0.
            skip = given.get(flat, -1 if len(flat) > 1 else len(spaces))
            for k, block in enumerate(blocks):
                if not any(any(row) for row in block):
                    around.append(k)
                    continue
                if k <= skip:
                    continue
                coefficients = kernel(field, block, len(flat))
                if coefficients:
                    new[_combinations(field, coefficients, flat)] = None
            members[flat] = tuple(around)
        found.update((flat, around) for flat, around in members.items() if flat not in given)
        frontier = [flat for flat in new if flat not in found and flat not in given]
    return list(found.items())


def _evaluate(
    conditions: Any, starts: Sequence[int], flats: Sequence[Rows], field: Field, n: int
) -> Iterator[tuple[Rows, list[list[list[Any]]]]]:
    """For each flat and each annihilator N the matrix N·flatᵗ, by one product of matrices."""
    values = field.matrix([row for flat in flats for row in flat], n) * conditions.transpose()
    rows, position = values.tolist(), 0
    for flat in flats:
        columns = rows[position : position + len(flat)]
        position += len(flat)
        yield (
            flat,
            [
                [[column[r] for column in columns] for r in range(start, end)]
                for start, end in pairwise(starts)
            ],
        )


def _combinations(field: Field, coefficients: Rows, flat: Rows) -> Rows:
    zero = field.zero
    result = []
    for row in coefficients:
        total = [zero] * len(flat[0])
        for factor, vector in zip(row, flat, strict=True):
            if factor:
                total = [t + factor * x for t, x in zip(total, vector, strict=True)]
        result.append(tuple(total))
    return tuple(result)
