"""Collineations between subspaces whose planes are infinitely many, or none: searched, not proved.

What is found is checked; what is not found may exist all the same.
"""

from collections.abc import Sequence
from random import Random
from typing import Any

from trivector.configurations import Configuration
from trivector.exterior.products import contract, wedge
from trivector.fields.linear import Rows, kernel, meet_rows, rank, row_space, unit_rows
from trivector.fields.protocol import Field
from trivector.subspaces import Plane, Subspace
from trivector.symmetry.comparison import compare_configurations
from trivector.symmetry.linear_maps import canonical_matrix, inverse
from trivector.symmetry.search import Predicate
from trivector.symmetry.split_quadrics import find_quadric_map
from trivector.symmetry.ternary import find_ternary_map

__all__ = ["algebra_difference", "canonical_flag", "find_carrying_map", "stabiliser_algebra"]

_SIZES = (4, 5)  # of frames of P² and P³, which parametrise the planes in the classical families
_ATTEMPTS = 400
_STEPS = 500


def stabiliser_algebra(subspace: Subspace) -> tuple[Rows, ...]:
    """A basis of the Lie algebra of the X in gl(V) with X·L ⊂ L.

    Parameters
    ----------
    subspace : Subspace
        L, not 0.

    Returns
    -------
    tuple of n×n matrices over the field of L
        They act on column vectors, X·(u∧v∧w) = Xu∧v∧w + u∧Xv∧w + u∧v∧Xw. The dimension is
        the same over every extension; at least 1, by the scalars.

    Examples
    --------
    >>> from trivector import Subspace, prime_field
    >>> len(stabiliser_algebra(Subspace.from_terms(prime_field(5), 6, [{(0, 1, 2): 1}])))
    27
    """
    field, n, size = subspace.field, subspace.n, subspace.ambient_dimension
    equations = field.matrix(kernel(field, subspace.rows, size), size)
    units = unit_rows(field, n)
    contracted = [[contract(f, row, 3, n, field.zero) for row in subspace.rows] for f in units]
    columns = []
    for i in range(n):
        for j in range(n):  # X = e_i ⊗ f_j, so X·ω = e_i ∧ ι(f_j)ω
            moved = [wedge(units[i], 1, row, 2, n, field.zero) for row in contracted[j]]
            values = equations * field.matrix(moved, size).transpose()
            columns.append([x for row in values.tolist() for x in row])
    solutions = kernel(field, list(zip(*columns, strict=True)), n * n)
    return tuple(
        tuple(tuple(solution[i * n : (i + 1) * n]) for i in range(n)) for solution in solutions
    )


def canonical_flag(subspace: Subspace) -> tuple[Rows, Rows]:
    """Two subspaces of V that every collineation keeping L keeps.

    Returns
    -------
    (rows, rows)
        r·V and the common kernel of r, where r are the X of `stabiliser_algebra`
        with tr(XY) = 0 for all Y in it.

    Examples
    --------
    >>> from trivector import prime_field
    >>> from trivector.families import CLASSICAL_FAMILIES
    >>> image, _ = canonical_flag(CLASSICAL_FAMILIES["point"].lagrangian(prime_field(7)))
    >>> image  # the point
    ((1, 0, 0, 0, 0, 0),)
    """
    field, n = subspace.field, subspace.n
    algebra = stabiliser_algebra(subspace)
    flat = [[x for row in X for x in row] for X in algebra]
    turned = [[X[i][j] for j in range(n) for i in range(n)] for X in algebra]
    form = field.matrix(flat, n * n) * field.matrix(turned, n * n).transpose()
    radical = kernel(field, form.tolist(), len(algebra))
    if not radical:
        return (), unit_rows(field, n)
    members = (field.matrix(radical, len(algebra)) * field.matrix(flat, n * n)).tolist()
    rows = [row[i * n : (i + 1) * n] for row in members for i in range(n)]
    columns = [row[i::n] for row in members for i in range(n)]
    return row_space(field, columns, n), kernel(field, rows, n)


def algebra_difference(first: Subspace, second: Subspace) -> str | None:
    """What tells the Lie algebras of two subspaces apart, over the closure too; None: nothing does.

    Their dimensions, and those of the two subspaces of V in `canonical_flag`,
    which are kernels and images of linear maps over the field.
    """
    here, there = (len(stabiliser_algebra(space)) for space in (first, second))
    if here != there:
        return f"dimension of the Lie algebra that keeps it: {here} and {there}"
    flags = [tuple(len(rows) for rows in canonical_flag(space)) for space in (first, second)]
    if flags[0] != flags[1]:
        what = "dimensions of r·V and ker r, r the radical of its Lie algebra"
        return f"{what}: {flags[0]} and {flags[1]}"
    return None


def find_carrying_map(
    first: Subspace,
    second: Subspace,
    carries: Predicate,
    planes: Sequence[Sequence[Plane]],
    rng: Random,
) -> Rows | None:
    """A matrix g with ∧³g·L = L′, by canonical flags, Lie algebras, or frames of planes.

    Parameters
    ----------
    first, second : Subspace
        L and L′.
    carries : callable
        Whether ∧³g·L = L′, for an invertible matrix g.
    planes : two sequences of Plane, or none
        Planes in L, and in L′, over the field; of both all, or a good part.

    Returns
    -------
    n×n rows, or None
        Checked. None: not found, which proves nothing.

    Notes
    -----
    If a flag determines L, as the point, the hyperplane and the plane of three
    of the classical families do, every map between the flags is one. For the
    others see `find_ternary_map` and `find_quadric_map`. If the
    group of L is transitive on general quadruples or quintuples of its planes, as
    for the families with parameters in P² and P³, two random ones are often
    carried to each other by a map that carries L to L′.
    """
    g = _between_flags(first.field, first.n, canonical_flag(first), canonical_flag(second))
    if g is not None and carries(g):
        return canonical_matrix(first.field, g.tolist())
    algebras = [stabiliser_algebra(space) for space in (first, second)]
    candidates = (find_ternary_map, find_quadric_map)
    for g in (g for find in candidates for g in find(first, second, algebras)):
        if carries(g):
            return canonical_matrix(first.field, g.tolist())
    if any(len(listed) < max(_SIZES) for listed in planes) or not planes:
        return None
    here, there = planes
    for attempt in range(_ATTEMPTS):
        size = _SIZES[attempt % len(_SIZES)]
        found = compare_configurations(
            Configuration(tuple(rng.sample(here, size))),
            Configuration(tuple(rng.sample(there, size))),
            predicate=carries,
            limit=_STEPS,
            seed=attempt,
        )
        if found.collineation is not None:
            return found.collineation.matrix
    return None


def _between_flags(
    field: Field, n: int, first: tuple[Rows, Rows], second: tuple[Rows, Rows]
) -> Any | None:
    """A matrix that carries the flag r·V, ker r to another one; None if there is none."""
    bases = [_adapted_basis(field, n, flag) for flag in (first, second)]
    if [len(rows) for rows in first] != [len(rows) for rows in second]:
        return None
    if rank(field, bases[0], n) < n or rank(field, bases[1], n) < n:
        return None
    source, target = (field.matrix(list(zip(*rows, strict=True)), n) for rows in bases)
    return target * inverse(field, source)


def _adapted_basis(field: Field, n: int, flag: tuple[Rows, Rows]) -> list[Sequence[Any]]:
    """A basis of V that begins with one of the meet, then of the first, then of the second."""
    image, common = flag
    basis: list[Sequence[Any]] = []
    for rows in (meet_rows(field, image, common, n), image, common, unit_rows(field, n)):
        for row in rows:
            if rank(field, [*basis, row], n) > len(basis):
                basis.append(row)
    return basis
