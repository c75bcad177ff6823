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
_WONG_ATTEMPTS = 5
_ENOUGH = 64  # elements, for a random matrix to be general


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


def carrying(
    field: Field, space: Any, first: Sequence[Any], second: Sequence[Any], n: int
) -> Any | None:
    """The maps of a space that carry the vector ``first`` to multiples of ``second``."""
    forms = kernel(field, [second], n)
    vector = field.matrix([first], n)
    basis = [_square(field, row, n) for row in space.tolist()]
    images = [(vector * b.transpose()).tolist()[0] for b in basis]
    values = field.matrix(forms, n) * field.matrix(images, n).transpose()
    combinations = _null_rows(field, values, len(basis))
    return field.matrix(combinations, len(basis)) * space if combinations else None


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


def find_several_invertible(field: Field, space: Any, n: int, rng: Random, count: int) -> list[Any]:
    """Up to ``count`` random invertible matrices of a space; maybe fewer."""
    found: list[Any] = []
    size = space.nrows()
    for _ in range(_ATTEMPTS):
        factors = field.matrix([[field.random_element(rng) for _ in range(size)]], size)
        candidate = _square(field, (factors * space).tolist()[0], n)
        if candidate.det():
            found.append(candidate)
            if len(found) == count:
                break
    return found


def is_never_invertible(field: Field, space: Any, n: int, rng: Random) -> bool | None:
    """Whether the determinant vanishes at every matrix of the space, over any extension too.

    Returns
    -------
    bool or None
        None if neither of the two tests decides.

    Notes
    -----
    A subspace U with dim S·U < dim U proves that no matrix of S is
    invertible. For a matrix A in S let W_0 = 0, W_{i+1} = S·A^{-1}(W_i); if the
    limit W lies in the image of A, then U = A^{-1}(W) is such a subspace
    ("Generalized Wong sequences and their applications to Edmonds' problems",
    2014, arXiv 1307.6429). Otherwise, for small dimension d: a polynomial of
    degree ≤ n in each of d variables that vanishes on a grid of (n+1)^d points
    is zero; over fields with fewer elements the grid lies in an extension.
    """
    dimension = space.nrows()
    over, rows, values = _larger_field(field, space.tolist(), _ENOUGH)
    matrix = over.matrix(rows, n * n)
    basis = [_square(over, row, n) for row in rows]
    for _ in range(_WONG_ATTEMPTS):
        factors = [over.random_element(rng) for _ in basis]
        candidate = _square(over, (over.matrix([factors], dimension) * matrix).tolist()[0], n)
        if candidate.det():
            return False
        if _shrinks(over, basis, candidate, n):
            return True
    if (n + 1) ** dimension > _LARGEST_GRID:
        return None
    return not any(
        _square(over, (over.matrix([list(factors)], dimension) * matrix).tolist()[0], n).det()
        for factors in product(values[: n + 1], repeat=dimension)
    )


def _shrinks(field: Field, basis: Sequence[Any], matrix: Any, n: int) -> bool:
    """Whether the Wong sequence of a singular matrix ends inside its image."""
    image = row_space(field, matrix.transpose().tolist(), n)
    limit: Rows = ()
    while True:
        forms = kernel(field, limit, n)
        pulled = kernel(field, (field.matrix(forms, n) * matrix).tolist(), n) if forms else None
        if pulled is None:  # the limit is everything
            return False
        vectors = field.matrix(pulled, n)
        pushed = [row for b in basis for row in (vectors * b.transpose()).tolist()]
        following = row_space(field, [*limit, *pushed], n)
        if len(row_space(field, [*image, *following], n)) > len(image):
            return False
        if len(following) == len(limit):
            return True
        limit = following


def _larger_field(
    field: Any, basis: Sequence[Sequence[Any]], size: int
) -> tuple[Any, list[list[Any]], list[Any]]:
    """A field with at least ``size`` elements, the basis in it, and that many elements."""
    if field.order is None:
        return field, [list(row) for row in basis], [field.element(i) for i in range(size)]
    if field.order >= size:
        return field, [list(row) for row in basis], [field.from_code(i) for i in range(size)]
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


def inverse(field: Field, matrix: Any) -> Any:
    """Of an invertible matrix, over any field."""
    n = matrix.nrows()
    rows = [[*row, *unit] for row, unit in zip(matrix.tolist(), unit_rows(field, n), strict=True)]
    reduced, _ = field.matrix(rows, 2 * n).rref()
    return field.matrix([row[n:] for row in reduced.tolist()], n)


def image_rows(field: Field, matrix: Any, rows: Rows, n: int) -> Rows:
    """Canonical rows of {g·w}, g acting on columns."""
    reduced, rank = (field.matrix(rows, n) * matrix.transpose()).rref()
    return tuple(tuple(row) for row in reduced.tolist()[:rank])


def _square(field: Field, row: Sequence[Any], n: int) -> Any:
    return field.matrix([row[i * n : (i + 1) * n] for i in range(n)], n)
