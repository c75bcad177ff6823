"""Subspaces of ∧³V kept by the group of a split quadric: a collineation by hyperbolic pairs.

Where the Lie algebra that keeps L is that of a quadratic form on V with the
scalars, as for the planes of one ruling of a smooth quadric of P^5, an
equivalence is a similitude of the forms. Three hyperbolic pairs of each give
one; what has to be found for them are isotropic vectors.
"""

from collections.abc import Iterator, Sequence
from itertools import islice, product
from typing import Any

from trivector.fields.linear import kernel, unit_rows
from trivector.subspaces import Subspace
from trivector.symmetry.linear_maps import inverse

__all__ = ["find_quadric_map"]

_DIMENSION = 16  # of so(6) and the scalars
_MOST_TRIED = {5: 400_000, 3: 4_000, 1: 100}  # by the number of coordinates that are chosen
_MOST_VECTORS = 60


def find_quadric_map(
    first: Subspace, second: Subspace, algebras: Sequence[Sequence[Any]]
) -> Iterator[Any]:
    """Matrices that may carry L to L′, where both are kept by the group of a split quadric.

    Parameters
    ----------
    first, second : Subspace
        L and L′ over one field, characteristic ≠ 2, n = 6.
    algebras : two sequences of n×n matrices
        Bases of the Lie algebras that keep them, see `stabiliser_algebra`.

    Yields
    ------
    invertible matrix
        One that carries one ruling to the other and one that does not, if
        isotropic vectors were found among those with small coordinates.
        Whether ∧³g·L = L′ is for the caller to check.
    """
    field, n = first.field, first.n
    if n != 6 or field.characteristic == 2 or any(len(a) != _DIMENSION for a in algebras):
        return
    bases = []
    for algebra in algebras:
        form = _invariant_form(field, n, algebra)
        basis = None if form is None else _hyperbolic_basis(field, form, unit_rows(field, n))
        if basis is None:
            return
        bases.append(basis)
    here, there = bases
    source = inverse(field, field.matrix(here, n).transpose())
    for order in ((0, 1, 2, 3, 4, 5), (0, 1, 2, 3, 5, 4)):
        yield field.matrix([there[i] for i in order], n).transpose() * source


def _invariant_form(field: Any, n: int, algebra: Sequence[Any]) -> Any | None:
    """The symmetric B with B(Xu, v) + B(u, Xv) = 0 for the X of trace 0, if it is unique."""
    unknowns = {(i, j): k for k, (i, j) in enumerate((i, j) for i in range(n) for j in range(i, n))}
    traces = [[sum((x[i][i] for i in range(n)), field.zero) for x in algebra]]
    conditions = []
    for combination in kernel(field, traces, len(algebra)):
        x = [
            [sum((c * y[i][j] for c, y in zip(combination, algebra, strict=True)), field.zero)
             for j in range(n)] for i in range(n)
        ]  # fmt: skip
        for i in range(n):
            for j in range(i, n):
                row = [field.zero] * len(unknowns)
                for k in range(n):
                    for a, b, value in ((k, j, x[k][i]), (i, k, x[k][j])):
                        place = unknowns[min(a, b), max(a, b)]
                        row[place] = row[place] + value
                conditions.append(row)
    solutions = kernel(field, conditions, len(unknowns))
    if len(solutions) != 1:
        return None
    values = solutions[0]
    rows = [[values[unknowns[min(i, j), max(i, j)]] for j in range(n)] for i in range(n)]
    form = field.matrix(rows, n)
    return form if form.det() else None


def _hyperbolic_basis(field: Any, form: Any, space: Sequence[Any]) -> list[Any] | None:
    """v1, w1, v2, w2, … with B(v_i, w_i) = 1 and all other products 0; None: not found."""
    if not space:
        return []
    for v in islice(_isotropic_vectors(field, form, space), _MOST_VECTORS):
        y = next(u for u in space if _product(field, form, v, u))
        scale = field.one / _product(field, form, v, y)
        half = _product(field, form, y, y) * scale / field.element(2)
        w = [(a - half * b) * scale for a, b in zip(y, v, strict=True)]
        rest = _hyperbolic_basis(field, form, _orthogonal_in(field, form, space, [v, w]))
        if rest is not None:
            return [v, w, *rest]
    return None


def _orthogonal_in(
    field: Any, form: Any, space: Sequence[Any], vectors: Sequence[Any]
) -> Sequence[Any]:
    """A short basis of what is orthogonal, in a space, to some vectors."""
    n = form.nrows()
    basis = field.matrix(space, n)
    products = (field.matrix(vectors, n) * form * basis.transpose()).tolist()
    inner = kernel(field, products, len(space))
    if not inner:
        return []
    found: Sequence[Any] = field.integral_basis((field.matrix(inner, len(space)) * basis).tolist())
    return found


def _isotropic_vectors(field: Any, form: Any, space: Sequence[Any]) -> Iterator[list[Any]]:
    """With small integers as all coordinates in the space but the last one."""
    size = len(space)
    gram = [[_product(field, form, u, v) for v in space] for u in space]
    for coordinates in _small(size - 1):
        x = [field.element(c) for c in coordinates]
        constant = linear = field.zero
        for i, a in enumerate(x):
            for j, b in enumerate(x) if a else ():
                constant = constant + a * b * gram[i][j]
            linear = linear + a * gram[i][-1] * field.element(2)
        root = _root(field, constant, linear, gram[-1][-1])
        if root is not None and (any(x) or root):
            total = [field.zero] * len(space[0])
            for c, row in zip([*x, root], space, strict=True):
                total = [t + c * y for t, y in zip(total, row, strict=True)]
            yield total


def _small(size: int) -> Iterator[tuple[int, ...]]:
    """Integer vectors by their largest entry, a bounded number of them."""
    bound = 0
    while (2 * bound + 1) ** size < _MOST_TRIED[size]:
        for vector in product(range(-bound, bound + 1), repeat=size):
            if max(map(abs, vector)) == bound:
                yield vector
        bound += 1


def _root(field: Any, constant: Any, linear: Any, leading: Any) -> Any | None:
    """A root of the polynomial in the field; 1 if it is zero."""
    if not leading:
        if linear:
            return -constant / linear
        return None if constant else field.one
    for factor, _ in field.factor([constant, linear, leading]):
        if len(factor) == 2:
            return -factor[0] / factor[1]
    return None


def _product(field: Any, form: Any, u: Sequence[Any], v: Sequence[Any]) -> Any:
    row = (field.matrix([u], len(u)) * form).tolist()[0]
    return sum((a * b for a, b in zip(row, v, strict=True)), field.zero)
