"""Planes of a section that contain a given line: a linear condition on the third point."""

from collections.abc import Iterator, Sequence
from itertools import combinations
from typing import Any

from trivector.exterior.products import minors
from trivector.fields.linear import kernel, unit_rows
from trivector.subspaces import Flat, Plane, Subspace

__all__ = ["find_pencil", "find_planes_through_lines"]

_MOST_POINTS = 12  # 66 lines, some hundredths of a second over F_p


def find_pencil(subspace: Subspace, known: Sequence[Plane]) -> tuple[Plane, Plane] | None:
    """Two different planes of the section Z = G(3,V) ∩ P(L) that share a line.

    Parameters
    ----------
    subspace : Subspace
        L.
    known : sequence of Plane
        Planes of one V, not necessarily in L.

    Returns
    -------
    (Plane, Plane) or None
        With trivectors ω, ω′ every ω + t·ω′ is decomposable and in L: a pencil
        of planes, so Z is infinite over the closure. None: not found; Z may be
        infinite all the same.

    Notes
    -----
    Tried are the lines in which two known planes meet, those through two of
    the points in which two of them meet, and the coordinate lines.

    Examples
    --------
    >>> from trivector import Configuration, read
    >>> seven = read("data/seven-planes-p6.json").planes
    >>> section = Configuration(seven[:6]).section().subspace
    >>> first, second = find_pencil(section, seven[:6])
    >>> first.meet_dimension(second)
    1
    """
    found = (planes for planes in _spaces(subspace, known) if len(planes) > 1)
    first = next(found, None)
    return None if first is None else (first[0], first[1])


def find_planes_through_lines(subspace: Subspace, known: Sequence[Plane]) -> tuple[Plane, ...]:
    """Planes of the section through the lines that `find_pencil` tries; sorted, not exhaustive.

    Of each linear space of planes through a line, those of a basis and one more.
    """
    found = {plane for planes in _spaces(subspace, known) for plane in planes}
    return tuple(sorted(found, key=Plane.sort_key))


def _spaces(subspace: Subspace, known: Sequence[Plane]) -> Iterator[list[Plane]]:
    """For each line U the planes ⟨U, v⟩ in L, v in a basis of all such v; or v the sum of two."""
    field, n = subspace.field, subspace.n
    equations = kernel(field, subspace.rows, subspace.ambient_dimension)
    for line in _lines(subspace, known):
        pivots = {next(j for j, x in enumerate(row) if x) for row in line}
        units = [unit for j, unit in enumerate(unit_rows(field, n)) if j not in pivots]
        vectors = [minors([*line, unit]) for unit in units]
        conditions = [
            [
                sum((a * b for a, b in zip(equation, vector, strict=True) if a and b), field.zero)
                for vector in vectors
            ]
            for equation in equations
        ]
        planes = []
        solutions = list(kernel(field, conditions, len(units)))
        if len(solutions) > 1:
            solutions.append(tuple(x + y for x, y in zip(*solutions[:2], strict=True)))
        for solution in solutions:
            third = [field.zero] * n
            for value, unit in zip(solution, units, strict=True):
                third = [x + value * u for x, u in zip(third, unit, strict=True)]
            planes.append(Plane.from_rows(field, [*line, third]))
        yield planes


def _lines(subspace: Subspace, known: Sequence[Plane]) -> Iterator[Sequence[Sequence[Any]]]:
    """Bases of the lines to try, each line once."""
    field, n = subspace.field, subspace.n
    meets = [first.meet(second) for first, second in combinations(known, 2)]
    lines = [meet for meet in meets if meet.projective_dimension == 1]
    points = list(dict.fromkeys(meet for meet in meets if meet.projective_dimension == 0))
    pairs = combinations(points[:_MOST_POINTS], 2)
    unit = unit_rows(field, n)
    joins = (first.join(second) for first, second in pairs)
    coordinate = (Flat(field, n, (unit[i], unit[j])) for i, j in combinations(range(n), 2))
    seen = set()
    for line in (flat for flats in (lines, coordinate, joins) for flat in flats):
        if line not in seen:
            seen.add(line)
            yield line.rows
