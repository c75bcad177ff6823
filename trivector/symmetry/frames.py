"""Coordinates that a configuration brings with it, and images of planes in them."""

from collections.abc import Sequence
from typing import Any

from trivector.fields.linear import Rows
from trivector.fields.protocol import Field

__all__ = ["Frame", "Image", "independent", "normalised"]


def normalised(vector: Sequence[Any]) -> tuple[Any, ...]:
    """The multiple of a nonzero vector whose first nonzero entry is 1."""
    leading = next(x for x in vector if x)
    return tuple(x / leading for x in vector)


class Image(tuple[Any, ...]):
    """Sorted images of the planes, compared by their keys: rows need no order."""

    __slots__ = ()

    def _keys(self) -> tuple[Any, ...]:
        return tuple(key for key, _ in self)

    def __lt__(self, other: Any) -> bool:
        return bool(self._keys() < other._keys())

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Image) and self._keys() == other._keys()

    def __hash__(self) -> int:
        return hash(self._keys())


class Frame:
    """Coordinates with respect to some independent vectors, with a scale for each of them.

    ``basis`` may span less than V; it is completed in any way, which the
    planes in its span do not notice.
    """

    def __init__(self, field: Field, n: int, basis: Sequence[Sequence[Any]]) -> None:
        self._field = field
        self._n = n
        self._size = len(basis)
        units = [[field.one if i == j else field.zero for j in range(n)] for i in range(n)]
        whole = independent(field, [*basis, *units], n)
        # Rows times this matrix are coordinates in the basis.
        self._inverse = _inverse(field, whole, n)
        self._component = list(range(self._size))
        self._scale = [field.one] * n

    def move(self, rows: Sequence[Sequence[Any]]) -> Rows:
        """Canonical rows in the coordinates of the basis, not yet scaled."""
        reduced, size = (self._field.matrix(rows, self._n) * self._inverse).rref()
        return tuple(tuple(row) for row in reduced.tolist()[:size])

    def scale_by_point(self, point: Sequence[Any]) -> None:
        """Make coordinates of a point equal where no scale connects them yet."""
        self.scale_by_rows(self.move([point]))

    def scale_by_rows(self, rows: Rows) -> None:
        """Make entries of canonical rows 1 where no scale connects their column to the pivot."""
        for row in rows:
            pivot = next(j for j, x in enumerate(row) if x)
            for column in range(pivot + 1, self._size):
                if row[column] and self._component[column] != self._component[pivot]:
                    self._connect(pivot, column, row[column])

    def _connect(self, pivot: int, column: int, entry: Any) -> None:
        # The entry becomes entry·scale[column]/scale[pivot].
        factor = self._scale[pivot] / (entry * self._scale[column])
        old, new = self._component[column], self._component[pivot]
        for j in range(self._size):
            if self._component[j] == old:
                self._component[j] = new
                self._scale[j] = self._scale[j] * factor

    def is_rigid(self) -> bool:
        """Whether the scales are determined up to a common factor."""
        return len(set(self._component)) <= 1

    def rescale(self, rows: Rows) -> Rows:
        """Canonical rows in the scaled coordinates."""
        result = []
        for row in rows:
            pivot = next(j for j, x in enumerate(row) if x)
            inverse = self._field.one / self._scale[pivot]
            result.append(
                tuple(x * s * inverse if x else x for x, s in zip(row, self._scale, strict=True))
            )
        return tuple(result)

    def matrix(self) -> Any:
        """The matrix, acting on columns, of the change to these coordinates."""
        rows = [
            [x * s for x, s in zip(row, self._scale, strict=True)] for row in self._inverse.tolist()
        ]
        return self._field.matrix(rows, self._n).transpose()


def independent(field: Field, vectors: Sequence[Sequence[Any]], n: int) -> list[Sequence[Any]]:
    """The vectors that do not depend on those before them: pivot columns, one reduction."""
    if not vectors:
        return []
    reduced, size = field.matrix(vectors, n).transpose().rref()
    chosen, column = [], 0
    for row in range(size):
        while not reduced[row, column]:
            column += 1
        chosen.append(vectors[column])
        column += 1
    return chosen


def _inverse(field: Field, rows: Sequence[Sequence[Any]], n: int) -> Any:
    augmented = [
        [*row, *(field.one if i == j else field.zero for j in range(n))]
        for i, row in enumerate(rows)
    ]
    reduced, _ = field.matrix(augmented, 2 * n).rref()
    return field.matrix([row[n:] for row in reduced.tolist()], n)
