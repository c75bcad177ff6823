"""Linear algebra that is the same over every field.

Subspaces of k^N are kept as *rows*: the tuple of rows of their reduced row
echelon form without zero rows, so that equal subspaces have equal rows.
"""

from collections.abc import Sequence
from typing import Any

from trivector.fields.protocol import Field, Matrix

__all__ = [
    "RankCounter",
    "Rows",
    "dependencies",
    "echelon",
    "kernel",
    "meet_rows",
    "pivot_columns",
    "rank",
    "reduce_vector",
    "row_space",
    "solve",
    "unit_rows",
]

Rows = tuple[tuple[Any, ...], ...]


def pivot_columns(reduced: Matrix, rank: int) -> list[int]:
    """Pivot columns of a matrix in reduced row echelon form."""
    pivots: list[int] = []
    column = 0
    for row in range(rank):
        while not reduced[row, column]:
            column += 1
        pivots.append(column)
        column += 1
    return pivots


def echelon(matrix: Matrix) -> tuple[Any, list[int]]:
    """Reduced row echelon form and its pivot columns.

    The number of pivots is the rank; rows below it are zero.
    """
    reduced, rank = matrix.rref()
    return reduced, pivot_columns(reduced, rank)


def row_space(field: Field, rows: Sequence[Sequence[Any]], ncols: int) -> Rows:
    """Canonical rows of the span of ``rows`` in k^ncols."""
    if not rows:
        return ()
    reduced, rank = field.matrix(rows, ncols).rref()
    return tuple(tuple(row) for row in reduced.tolist()[:rank])


def rank(field: Field, rows: Sequence[Sequence[Any]], ncols: int) -> int:
    """Dimension of the span of ``rows``."""
    return int(field.matrix(rows, ncols).rank()) if rows else 0


class RankCounter:
    """The rank of a growing list of sparse rows.

    Over F_2 rows are kept as the bits of integers and reduced once: for the
    matrices with thousands of columns that extensions of F_2 lead to, far
    faster than a matrix. Over other fields the matrix is reduced each time.
    """

    def __init__(self, field: Field, ncols: int) -> None:
        self._field = field
        self._ncols = ncols
        self._rows: list[dict[int, Any]] = []
        self._by_leading_bit: dict[int, int] = {}

    def add(self, rows: Sequence[dict[int, Any]]) -> int:
        """The rank after these rows, given by their nonzero entries, have been added."""
        if self._field.order == 2:
            for row in rows:
                self._add_bits(row)
            return len(self._by_leading_bit)
        self._rows.extend(rows)
        matrix = self._field.zero_matrix(len(self._rows), self._ncols)
        for i, row in enumerate(self._rows):
            for j, value in row.items():
                matrix[i, j] = value
        return int(matrix.rank())

    def _add_bits(self, row: dict[int, Any]) -> None:
        digits = bytearray(b"0") * self._ncols
        for j, value in row.items():
            if value:
                digits[j] = 49
        bits = int(digits or b"0", 2)
        while bits:
            pivot = self._by_leading_bit.get(bits.bit_length())
            if pivot is None:
                self._by_leading_bit[bits.bit_length()] = bits
                return
            bits ^= pivot


def kernel(field: Field, rows: Sequence[Sequence[Any]], ncols: int) -> Rows:
    """Canonical rows of {x ∈ k^ncols : every row is orthogonal to x}.

    Cost: one row reduction of the rows and one of the answer.
    """
    if not rows:
        return unit_rows(field, ncols)
    reduced, pivots = echelon(field.matrix(rows, ncols))
    pivot_set = set(pivots)
    vectors = []
    for free in range(ncols):
        if free in pivot_set:
            continue
        vector = [field.zero] * ncols
        vector[free] = field.one
        for row, pivot in enumerate(pivots):
            if pivot > free:
                break
            vector[pivot] = -reduced[row, free]
        vectors.append(vector)
    return row_space(field, vectors, ncols)


def unit_rows(field: Field, size: int) -> Rows:
    """The rows of the identity matrix."""
    return tuple(
        tuple(field.one if i == j else field.zero for j in range(size)) for i in range(size)
    )


def meet_rows(field: Field, first: Rows, second: Rows, ncols: int) -> Rows:
    """Canonical rows of the intersection of two row spaces."""
    if not first or not second:
        return ()
    conditions = kernel(field, first, ncols) + kernel(field, second, ncols)
    return kernel(field, conditions, ncols)


def solve(
    field: Field, rows: Sequence[Sequence[Any]], target: Sequence[Any], ncols: int
) -> tuple[Any, ...] | None:
    """Coefficients c with Σ c_i·rows[i] = target, or None if there are none.

    Where several solutions exist, the one with zeros at the later rows.
    """
    size = len(rows)
    columns = [[row[j] for row in rows] + [target[j]] for j in range(ncols)]
    reduced, pivots = echelon(field.matrix(columns, size + 1))
    if size in pivots:
        return None
    answer = [field.zero] * size
    for row, pivot in enumerate(pivots):
        answer[pivot] = reduced[row, size]
    return tuple(answer)


def dependencies(
    field: Field, rows: Sequence[Sequence[Any]], ncols: int
) -> dict[int, tuple[Any, ...]]:
    """The rows that depend on rows before them, each with its coefficients.

    Returns
    -------
    dict
        ``{i: c}`` with rows[i] = Σ_{j<i} c_j·rows[j]. Empty exactly when the
        rows are independent.
    """
    if not rows:
        return {}
    columns = [[row[j] for row in rows] for j in range(ncols)]
    reduced, pivots = echelon(field.matrix(columns, len(rows)))
    found: dict[int, tuple[Any, ...]] = {}
    for index in range(len(rows)):
        if index in pivots:
            continue
        coefficients = [field.zero] * index
        for row, pivot in enumerate(pivots):
            if pivot < index:
                coefficients[pivot] = reduced[row, index]
        found[index] = tuple(coefficients)
    return found


def reduce_vector(vector: Sequence[Any], rows: Rows) -> tuple[Any, ...]:
    """``vector`` modulo the span of canonical ``rows``: zero at their pivots."""
    result = list(vector)
    for row in rows:
        pivot = next(j for j, entry in enumerate(row) if entry)
        factor = result[pivot]
        if factor:
            result = [a - factor * b for a, b in zip(result, row, strict=True)]
    return tuple(result)
