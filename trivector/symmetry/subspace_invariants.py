"""Numbers of points and hyperplanes by how they meet a subspace of ∧³V, over a small field.

For Lagrangians without planes, or with infinitely many, these are what tells
them apart: the points v with dim(A ∩ F_v) ≥ 1 are those of the EPW sextic.
"""

from collections import Counter
from collections.abc import Iterator, Sequence
from typing import Any, cast

from trivector.exterior.products import contract, wedge
from trivector.fields.linear import unit_rows
from trivector.sections import SectionReport
from trivector.subspaces import Subspace

__all__ = ["hyperplane_dimensions", "point_dimensions", "rational_difference"]

_MOST_POINTS = 4000


def point_dimensions(subspace: Subspace) -> dict[int, int] | None:
    """How many points v of P(V) over F_q have which dim(L ∩ F_v), F_v = v∧(∧²V).

    Parameters
    ----------
    subspace : Subspace

    Returns
    -------
    dict of int to int, or None
        Dimension ↦ number of points, dimensions increasing; exhaustive. None over an
        infinite field or if P(V) has more than 4000 points (n = 6: q > 5).

    Notes
    -----
    F_v is the kernel of a ↦ v∧a, so dim(L ∩ F_v) = dim L − rank(v∧ on L).

    Examples
    --------
    >>> from trivector import read
    >>> point_dimensions(read("data/twenty-planes.json", field="F_3").span())
    {0: 198, 2: 150, 4: 16}
    """
    zero, n = subspace.field.zero, subspace.n
    units = unit_rows(subspace.field, n)
    return _kernels(
        subspace, [[wedge(e, 1, row, 3, n, zero) for row in subspace.rows] for e in units]
    )


def hyperplane_dimensions(subspace: Subspace) -> dict[int, int] | None:
    """How many hyperplanes P(H) over F_q have which dim(L ∩ ∧³H).

    As `point_dimensions`, with ∧³H the kernel of the contraction with the
    form that vanishes on H.

    Examples
    --------
    >>> from trivector import read
    >>> hyperplane_dimensions(read("data/twenty-planes.json", field="F_3").span())
    {0: 198, 2: 150, 4: 16}
    """
    zero, n = subspace.field.zero, subspace.n
    units = unit_rows(subspace.field, n)
    return _kernels(
        subspace, [[contract(e, row, 3, n, zero) for row in subspace.rows] for e in units]
    )


def rational_difference(
    first: Subspace, second: Subspace, reports: Sequence[SectionReport]
) -> str | None:
    """An invariant over the field of the data that differs, with both values; None if none does.

    They say nothing about the closure.
    """
    name = first.field.name
    counts = [None if r.planes is None else len(r.planes) for r in reports]
    if None not in counts and counts[0] != counts[1]:
        return f"planes over {name}: {counts[0]} and {counts[1]}"
    for words, count in (
        (f"points over {name} by dim(L ∩ F_v)", point_dimensions),
        (f"hyperplanes over {name} by dim(L ∩ ∧³H)", hyperplane_dimensions),
    ):
        here, there = count(first), count(second)
        if here != there:
            return f"{words}: {here} and {there}"
    return None


def _kernels(subspace: Subspace, maps: Sequence[Sequence[Sequence[Any]]]) -> dict[int, int] | None:
    """For each point (c_0 : … ) the dimension of the kernel of Σ c_i·maps[i], counted."""
    k, n, q = cast(Any, subspace.field), subspace.n, subspace.field.order
    if q is None or (q**n - 1) // (q - 1) > _MOST_POINTS:
        return None
    if not subspace.dimension:
        return {0: (q**n - 1) // (q - 1)}
    width = len(maps[0][0])
    flat = [[x for row in rows for x in row] for rows in maps]
    counts: Counter[int] = Counter()
    for entries in _sums(flat, [k.from_code(code) for code in range(1, q)]):
        rows = [entries[i : i + width] for i in range(0, len(entries), width)]
        counts[subspace.dimension - int(k.matrix(rows, width).rank())] += 1
    return dict(sorted(counts.items()))


def _sums(vectors: Sequence[list[Any]], scalars: Sequence[Any]) -> Iterator[list[Any]]:
    """The combinations of the vectors with coefficients (0, …, 0, 1, *, …, *)."""
    for first, start in enumerate(vectors):
        stack = [(start, first + 1)]
        while stack:
            total, index = stack.pop()
            if index == len(vectors):
                yield total
                continue
            stack.append((total, index + 1))
            for c in scalars:
                step = vectors[index]
                stack.append(([x + c * y for x, y in zip(total, step, strict=True)], index + 1))
