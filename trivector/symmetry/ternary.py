"""Subspaces of ∧³V that are spaces of ternary cubics: a collineation by linear algebra.

Where the Lie algebra that keeps L is gl(U), dim U = 3, V is S²U and L is S³U
or S³U*, as for the planes of the conics of a Veronese surface, or tangent to
it. U itself is then inside V⊗L or V*⊗L, as a kernel of the Casimir operator:
O(1) = O(3) − O(2) on P², so there is nothing arithmetical to be solved.
"""

from collections.abc import Sequence
from typing import Any

from trivector.exterior.products import contract, wedge
from trivector.fields.linear import kernel, row_space, solve, unit_rows
from trivector.subspaces import Subspace
from trivector.symmetry.linear_maps import canonical_matrix, inverse

__all__ = ["find_ternary_map"]

_DIMENSION = 9  # of gl(3)


def find_ternary_map(
    first: Subspace, second: Subspace, algebras: Sequence[Sequence[Any]]
) -> list[Any]:
    """Matrices that may carry L to L′, where both are spaces of ternary cubics.

    Parameters
    ----------
    first, second : Subspace
        L and L′ over one field, characteristic 0 or > 5.
    algebras : two sequences of n×n matrices
        Bases of the Lie algebras that keep them, see `stabiliser_algebra`.

    Returns
    -------
    list of invertible matrices
        Empty if this does not apply. Candidates: whether ∧³g·L = L′ is for the
        caller to check.

    Notes
    -----
    The Casimir operator, for the trace form of V, is 2/5 on U of what it is on
    S²U (weights (1,0) and (2,0) of sl(3): 4/3 and 10/3; classical). An
    isomorphism U → U′, which may be any, gives one of the Lie algebras, and an
    equivariant map V → V′ for it.
    """
    field, n = first.field, first.n
    if field.characteristic in (2, 3, 5) or any(len(a) != _DIMENSION for a in algebras):
        return []
    found = []
    for dual in (False, True):
        sides = [
            _standard(space, _traceless(field, n, algebra), dual)
            for space, algebra in zip((first, second), algebras, strict=True)
        ]
        if any(side is None for side in sides):
            continue
        (here, acts), (there, acts_there) = (side for side in sides if side is not None)
        g = _intertwiner(field, n, here, _matched(field, acts, there, acts_there))
        if g is not None:
            found.append(g)
    return found


def _traceless(field: Any, n: int, algebra: Sequence[Any]) -> list[Any]:
    """The elements of trace 0, as matrices of the field."""
    traces = [[sum((x[i][i] for i in range(n)), field.zero) for x in algebra]]
    flat = field.matrix([[c for row in x for c in row] for x in algebra], n * n)
    rows = (field.matrix(kernel(field, traces, len(algebra)), len(algebra)) * flat).tolist()
    return [field.matrix([row[i * n : (i + 1) * n] for i in range(n)], n) for row in rows]


def _standard(
    subspace: Subspace, algebra: Sequence[Any], dual: bool
) -> tuple[Sequence[Any], list[Any]] | None:
    """The algebra and its action on U ⊂ V⊗L or V*⊗L; None if U is not there."""
    field, n, m = subspace.field, subspace.n, subspace.dimension
    on_l = [_on_subspace(subspace, x) for x in algebra]
    # Coordinates of V⊗L: row vectors; on V* by −x instead of the transposed x.
    on_v = [x * -field.one if dual else x.transpose() for x in algebra]
    actions = [_kronecker_sum(field, a, n, b, m) for a, b in zip(on_v, on_l, strict=True)]
    form = [[_trace(field, x * y, n) for y in algebra] for x in algebra]
    gram = field.matrix(form, len(form))
    if not gram.det():
        return None
    weights = inverse(field, gram)
    casimir, on_v_itself = field.zero_matrix(n * m, n * m), field.zero
    for i in range(len(algebra)):
        for j in range(len(algebra)):
            if weights[i, j]:
                casimir = casimir + actions[i] * actions[j] * weights[i, j]
                on_v_itself = on_v_itself + weights[i, j] * form[i][j]
    value = on_v_itself / field.element(n) * field.element(2) / field.element(5)
    for i in range(n * m):
        casimir[i, i] = casimir[i, i] - value
    # Row vectors u with u·casimir = 0.
    space = row_space(field, kernel(field, casimir.transpose().tolist(), n * m), n * m)
    if len(space) != 3:
        return None
    basis = field.matrix(space, n * m)
    pivots = [next(k for k, x in enumerate(row) if x) for row in space]
    acts = []
    for action in actions:
        moved = (basis * action).tolist()
        # In echelon form the coordinates are the entries at the pivots.
        acts.append([[row[p] for p in pivots] for row in moved])
    return algebra, acts


def _on_subspace(subspace: Subspace, x: Any) -> Any:
    """The action on L, on row vectors of coordinates in its echelon basis."""
    field, n = subspace.field, subspace.n
    units, matrix = unit_rows(field, n), x.tolist()
    pivots = [next(j for j, c in enumerate(row) if c) for row in subspace.rows]
    rows = []
    for row in subspace.rows:
        total = [field.zero] * subspace.ambient_dimension
        for j in range(n):
            column = [matrix[i][j] for i in range(n)]
            if any(column):
                moved = wedge(
                    column, 1, contract(units[j], row, 3, n, field.zero), 2, n, field.zero
                )
                total = [a + b for a, b in zip(total, moved, strict=True)]
        rows.append([total[p] for p in pivots])
    return field.matrix(rows, len(pivots))


def _kronecker_sum(field: Any, a: Any, n: int, b: Any, m: int) -> Any:
    total = field.zero_matrix(n * m, n * m)
    for i in range(n):
        for j in range(n):
            for k in range(m) if a[i, j] else ():
                total[i * m + k, j * m + k] = total[i * m + k, j * m + k] + a[i, j]
        for k in range(m):
            for t in range(m):
                if b[k, t]:
                    total[i * m + k, i * m + t] = total[i * m + k, i * m + t] + b[k, t]
    return total


def _trace(field: Any, x: Any, n: int) -> Any:
    return sum((x[i, i] for i in range(n)), field.zero)


def _matched(
    field: Any, acts: Sequence[Any], algebra: Sequence[Any], acts_there: Sequence[Any]
) -> list[Any] | None:
    """For each element here the element there that acts on U′ as it does on U."""
    table = [[c for row in action for c in row] for action in acts_there]
    images = []
    for action in acts:
        solution = solve(field, table, [c for row in action for c in row], 9)
        if solution is None:
            return None
        total = algebra[0] * solution[0]
        for c, y in zip(solution[1:], algebra[1:], strict=True):
            total = total + y * c
        images.append(total)
    return images


def _intertwiner(field: Any, n: int, here: Sequence[Any], there: list[Any] | None) -> Any | None:
    """An invertible g with y·g = g·x for all pairs (x, y)."""
    if there is None:
        return None
    conditions = []
    for x, y in zip(here, there, strict=True):
        for i in range(n):
            for j in range(n):
                row = [field.zero] * (n * n)
                for k in range(n):
                    row[k * n + j] = row[k * n + j] + y[i, k]
                    row[i * n + k] = row[i * n + k] - x[k, j]
                conditions.append(row)
    for solution in kernel(field, conditions, n * n):
        rows = canonical_matrix(field, [solution[i * n : (i + 1) * n] for i in range(n)])
        g = field.matrix(rows, n)
        if g.det():
            return g
    return None
