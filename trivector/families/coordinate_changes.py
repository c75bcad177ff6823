"""Invertible matrices, and what becomes of planes and spaces of trivectors under them."""

from collections.abc import Sequence
from random import Random
from typing import Any, TypeVar

from trivector.errors import DependentRowsError, DimensionError
from trivector.exterior.products import exterior_cube
from trivector.fields.linear import Rows, row_space
from trivector.fields.protocol import Field
from trivector.subspaces import Flat, Subspace

__all__ = ["Change", "image", "random_change"]

Change = Sequence[Sequence[Any]]
"""An invertible n×n matrix g over the field; it acts on columns, w ↦ g·w."""

_T = TypeVar("_T", bound=Flat | Subspace)


def random_change(field: Field, rng: Random, *, n: int = 6, height: int = 2) -> Rows:
    """A random invertible n×n matrix: uniform in GL_n(F_q) over a finite field.

    Over an infinite field the entries have size ≤ ``height``, and nothing is
    claimed of the distribution.

    Examples
    --------
    >>> from random import Random
    >>> from trivector.fields import prime_field
    >>> g = random_change(prime_field(2), Random(1))
    >>> len(g), len(g[0])
    (6, 6)
    """
    while True:  # over F_2, the worst case, 29 in 100 matrices are invertible
        rows = tuple(
            tuple(field.random_element(rng, height=height) for _ in range(n)) for _ in range(n)
        )
        if field.matrix(rows, n).det():
            return rows


def image(g: Change, space: _T) -> _T:
    """g·W for a flat, ∧³g·L for a space of trivectors; an object of the same class.

    Raises
    ------
    DimensionError
        Unless g is an n×n matrix.
    DependentRowsError
        If g is not invertible.

    Examples
    --------
    >>> from trivector import QQ, Plane
    >>> plane = Plane.from_rows(QQ, [[1, 0, 0, 0, 0, 0], [0, 1, 0, 0, 0, 0], [0, 0, 1, 0, 0, 0]])
    >>> g = [[int(i + j == 5) for j in range(6)] for i in range(6)]
    >>> image(g, plane).to_entries()
    [[0, 0, 0, 1, 0, 0], [0, 0, 0, 0, 1, 0], [0, 0, 0, 0, 0, 1]]
    """
    field, n = space.field, space.n
    rows = [[field.element(x) for x in row] for row in g]
    if len(rows) != n or any(len(row) != n for row in rows):
        raise DimensionError(f"a change of coordinates must be a {n}×{n} matrix; give all of it")
    if not field.matrix(rows, n).det():
        raise DependentRowsError("a change of coordinates must be invertible; its determinant is 0")
    if isinstance(space, Flat):
        images: Sequence[Sequence[Any]] = list(zip(*rows, strict=True))
    else:
        images = exterior_cube(rows)
    if not space.rows:
        return space
    size = len(images)
    moved = field.matrix(space.rows, size) * field.matrix(images, size)
    return type(space)(field, n, row_space(field, moved.tolist(), size))
