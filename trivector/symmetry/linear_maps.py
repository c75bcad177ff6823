"""The linear maps that carry some planes to some others: a linear system in n² unknowns."""

from collections.abc import Iterator, Sequence
from itertools import product
from random import Random
from typing import Any

from trivector.fields.linear import Rows, kernel, row_space, unit_rows
from trivector.fields.protocol import Field

__all__ = ["MapSystem", "canonical_matrix", "find_invertible", "image_rows", "is_never_invertible"]

# Grids of at most so many points decide whether a determinant vanishes identically.
_LARGEST_GRID = 20_000
_ATTEMPTS = 400


class MapSystem:
    """The conditions gW_i ⊂ W'_j on an n×n matrix g, over one field.

    A space of matrices is kept as a matrix with a basis in its rows, each
    basis element written row after row (n² columns).

    Parameters
    ----------
    field : Field
    n : int
    source, target : sequence of rows
        Bases of the W_i and of the W'_j, all of dimension 3.
    """

    def __init__(self, field: Field, n: int, source: Sequence[Rows], target: Sequence[Rows]):
        self.field = field
        self.n = n
        self._source = source
        self._annihilators = [kernel(field, rows, n) for rows in target]
        self._conditions: dict[tuple[int, int], Any] = {}
        self.everything = field.matrix(unit_rows(field, n * n), n * n)

    def restrict(self, space: Any, i: int, j: int) -> Any:
        """The maps of the space that carry W_i into W'_j; None if there is only 0."""
        values = self._condition(i, j) * space.transpose()
        dimension = space.nrows()
        combinations = _null_rows(self.field, values, dimension)
        if not combinations:
            return None
        if len(combinations) == dimension:
            return space
        return self.field.matrix(combinations, dimension) * space

    def _condition(self, i: int, j: int) -> Any:
        """One row for each pair (linear form N vanishing on W'_j, w in W_i): N·g·w = 0."""
        known = self._conditions.get((i, j))
        if known is not None:
            return known
        n = self.n
        matrix = self.field.zero_matrix(3 * (n - 3), n * n)
        pairs = product(self._annihilators[j], self._source[i])
        for row, (form, vector) in enumerate(pairs):
            for a, x in enumerate(form):
                if x:
                    for b, y in enumerate(vector):
                        if y:
                            matrix[row, a * n + b] = x * y
        self._conditions[i, j] = matrix
        return matrix


def _null_rows(field: Field, matrix: Any, ncols: int) -> list[list[Any]]:
    """A basis of the kernel, not reduced: what is needed here is only a basis."""
    reduced, rank = matrix.rref()
    rows = reduced.tolist()[:rank]
    pivots = [next(j for j, x in enumerate(row) if x) for row in rows]
    zero, one = field.zero, field.one
    basis = []
    pivot_set = set(pivots)
    for free in range(ncols):
        if free not in pivot_set:
            vector = [zero] * ncols
            vector[free] = one
            for row, pivot in zip(rows, pivots, strict=True):
                if row[free]:
                    vector[pivot] = -row[free]
            basis.append(vector)
    return basis


def find_invertible(field: Field, space: Any, n: int, rng: Random) -> Any | None:
    """An invertible n×n matrix of the space, or None if none was found.

    For a space of dimension 1 None proves that there is none; otherwise ask
    `is_never_invertible`.
    """
    basis = space.tolist()
    for row in basis:
        candidate = _square(field, row, n)
        if candidate.det():
            return candidate
    if len(basis) == 1:
        return None
    for _ in range(_ATTEMPTS):
        factors = field.matrix([[field.random_element(rng) for _ in basis]], len(basis))
        candidate = _square(field, (factors * space).tolist()[0], n)
        if candidate.det():
            return candidate
    return None


def is_never_invertible(field: Field, space: Any, n: int) -> bool | None:
    """Whether the determinant vanishes at every matrix of the space, over any extension too.

    Returns
    -------
    bool or None
        None if the space is too large to decide.

    Notes
    -----
    A polynomial of degree ≤ n in each of d variables that vanishes on a grid
    of (n+1)^d points is zero; over fields with fewer elements the grid lies in
    an extension.
    """
    basis, dimension = space.tolist(), space.nrows()
    if _common_rank(field, basis, n) < n or _joint_image(field, basis, n) < n:
        return True
    if (n + 1) ** dimension > _LARGEST_GRID:
        return None
    over, lifted, values = _grid_field(field, basis, n + 1)
    matrix = over.matrix(lifted, n * n)
    for factors in product(values, repeat=dimension):
        row = (over.matrix([list(factors)], dimension) * matrix).tolist()[0]
        if _square(over, row, n).det():
            return False
    return True


def _common_rank(field: Field, basis: Sequence[Sequence[Any]], n: int) -> int:
    """n minus the dimension of the common kernel of all matrices."""
    rows = [row[i * n : (i + 1) * n] for row in basis for i in range(n)]
    return len(row_space(field, rows, n))


def _joint_image(field: Field, basis: Sequence[Sequence[Any]], n: int) -> int:
    """The dimension of the sum of all images."""
    columns = [row[j::n] for row in basis for j in range(n)]
    return len(row_space(field, columns, n))


def _grid_field(
    field: Any, basis: Sequence[Sequence[Any]], size: int
) -> tuple[Any, list[list[Any]], list[Any]]:
    """A field with at least ``size`` elements, the basis in it, and that many elements."""
    if field.order is None:
        return field, [list(row) for row in basis], [field.element(i) for i in range(size)]
    degree = 1
    while field.order**degree < size:
        degree += 1
    residue = field.extension(degree)
    lifted = [[residue.embed(x) for x in row] for row in basis]
    return residue.field, lifted, [residue.field.from_code(i) for i in range(size)]


def count_invertible(field: Any, space: Any, n: int, limit: int) -> int | None:
    """How many matrices of a space over F_q are invertible; None beyond the limit."""
    dimension = space.nrows()
    if field.order is None or field.order**dimension > limit:
        return None
    elements = [field.from_code(code) for code in range(field.order)]
    basis, total = field.matrix(space.tolist(), n * n), 0
    for factors in iter_projective(elements, dimension):
        row = (field.matrix([list(factors)], dimension) * basis).tolist()[0]
        total += bool(_square(field, row, n).det())
    return total * int(field.order - 1)


def iter_projective(elements: Sequence[Any], dimension: int) -> Iterator[tuple[Any, ...]]:
    """The points of projective space: vectors whose first nonzero entry is elements[1] = 1."""
    for leading in range(dimension):
        head = (*([elements[0]] * leading), elements[1])
        for tail in product(elements, repeat=dimension - leading - 1):
            yield (*head, *tail)


def canonical_matrix(field: Field, rows: Sequence[Sequence[Any]]) -> Rows:
    """The multiple of a nonzero matrix whose first nonzero entry is 1."""
    leading = next(x for row in rows for x in row if x)
    return tuple(tuple(x / leading for x in row) for row in rows)


def image_rows(field: Field, matrix: Any, rows: Rows, n: int) -> Rows:
    """Canonical rows of {g·w}, g acting on columns."""
    reduced, rank = (field.matrix(rows, n) * matrix.transpose()).rref()
    return tuple(tuple(row) for row in reduced.tolist()[:rank])


def _square(field: Field, row: Sequence[Any], n: int) -> Any:
    return field.matrix([row[i * n : (i + 1) * n] for i in range(n)], n)
