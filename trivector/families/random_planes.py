"""Random planes, free or meeting given ones."""

from collections.abc import Sequence
from random import Random
from typing import Any

from trivector.errors import DimensionError, MixedFieldsError, UsageError
from trivector.fields.linear import kernel, row_space
from trivector.fields.protocol import Field
from trivector.subspaces import Plane

__all__ = ["FREE_PLANES", "random_incident_few", "random_plane", "random_plane_meeting"]

FREE_PLANES = 6
"""So many pairwise incident planes of P^5 can be chosen one after another by linear algebra."""

_TRIES = 1000


def random_plane(field: Field, rng: Random, *, n: int = 6, height: int = 3) -> Plane:
    """A random plane of P^(n−1): uniform over a finite field.

    It is spanned by three random vectors; every plane has the same number of bases.

    Examples
    --------
    >>> from random import Random
    >>> from trivector.fields import prime_field
    >>> random_plane(prime_field(2), Random(3)).word
    'plane'
    """
    while True:
        rows = row_space(field, [_vector(field, n, rng, height) for _ in range(3)], n)
        if len(rows) == 3:
            return Plane(field, n, rows)


def _vector(field: Field, size: int, rng: Random, height: int) -> list[Any]:
    return [field.random_element(rng, height=height) for _ in range(size)]


def random_plane_meeting(planes: Sequence[Plane], rng: Random, *, height: int = 1) -> Plane:
    """A random plane of P^5 that meets each of up to five planes, by linear algebra alone.

    Over an infinite field the coefficients that are drawn have size ≤ ``height``.

    Raises
    ------
    DimensionError
        If there is no plane, or they are of P^6.
    UsageError
        For more than five planes, where rational planes need not exist; or if
        a thousand tries have only led to fewer than three independent points.

    Notes
    -----
    The planes are taken in random order. The new plane is spanned by a random
    point p_1 of the first, p_2 of the second and p_3 of the third (or of P^5,
    where there are fewer). It meets a further plane P exactly if p_3 lies in
    the join of p_1, p_2 and P, a hyperplane: one linear condition on p_3 in a
    plane for each P, so that two more planes can be met. Every plane that
    meets those three in different, independent points can come out; nothing
    is claimed of the distribution.

    Examples
    --------
    >>> from random import Random
    >>> from trivector.families import twenty_planes
    >>> from trivector.fields import prime_field
    >>> given = twenty_planes(prime_field(7))[3:8]
    >>> plane = random_plane_meeting(given, Random(1))
    >>> [plane.meet_dimension(other) >= 0 for other in given]
    [True, True, True, True, True]
    """
    if not planes:
        raise DimensionError("a plane that meets planes: at least one plane is needed")
    field = planes[0].field
    for i, plane in enumerate(planes):
        if plane.n != 6:
            raise DimensionError(f"planes[{i}] must be a plane of P^5, not of P^{plane.n - 1}")
        if plane.field != field:
            raise MixedFieldsError(
                f"planes 0 and {i} are over {field.name} and over {plane.field.name}; "
                "convert one of them"
            )
    if len(planes) >= FREE_PLANES:
        raise UsageError(
            f"a plane that meets {len(planes)} planes: beyond {FREE_PLANES - 1} linear algebra "
            "finds none; use random_incident_planes or the section by the orthogonal"
        )
    for _ in range(_TRIES):
        rows = row_space(field, _spanning_points(field, planes, rng, height), 6)
        if len(rows) == 3:
            return Plane(field, 6, rows)
    raise UsageError(
        f"no plane that meets the {len(planes)} planes was found in {_TRIES} tries; "
        "they are in special position, take others or a larger field"
    )


def _spanning_points(
    field: Field, planes: Sequence[Plane], rng: Random, height: int
) -> list[list[Any]]:
    order = rng.sample(range(len(planes)), len(planes))
    spaces: list[Sequence[Sequence[Any]]] = [planes[i].rows for i in order]
    units = field.matrix([[int(i == j) for j in range(6)] for i in range(6)], 6).tolist()
    spaces += [units] * (3 - len(spaces))
    points = [_combination(field, rows, rng, height) for rows in spaces[:2]]
    last = spaces[2]
    conditions: list[list[Any]] = []
    for rows in spaces[3:]:
        # The join with p_1 and p_2 is a hyperplane, or less in special position.
        conditions += [
            [sum((a * x for a, x in zip(form, row, strict=True)), field.zero) for row in last]
            for form in kernel(field, [*points, *rows], 6)
        ]
    if conditions:
        solutions = field.integral_basis(kernel(field, conditions, len(last)))
        if not solutions:
            return points
        last = (field.matrix(solutions, len(last)) * field.matrix(last, 6)).tolist()
    return [*points, _combination(field, last, rng, height)]


def _combination(
    field: Field, rows: Sequence[Sequence[Any]], rng: Random, height: int
) -> list[Any]:
    vector = [field.zero] * len(rows[0])
    for row in field.integral_basis(rows):
        factor = field.random_element(rng, height=height)
        vector = [x + factor * y for x, y in zip(vector, row, strict=True)]
    return vector


def random_incident_few(
    field: Field, count: int, rng: Random, *, height: int = 1
) -> tuple[Plane, ...]:
    """Distinct planes of P^5 that meet two by two, six at most, over any field.

    Each is a `random_plane_meeting` of those before it. Whether they are in
    general position is not looked at.

    Raises
    ------
    UsageError
        For a count outside 1 … 6, or if no further plane is found.

    Examples
    --------
    >>> from random import Random
    >>> from trivector import QQ
    >>> planes = random_incident_few(QQ, 6, Random(1))
    >>> {p.meet_dimension(q) >= 0 for p in planes for q in planes}, len(set(planes))
    ({True}, 6)
    """
    if not 1 <= count <= FREE_PLANES:
        raise UsageError(
            f"pairwise incident planes can be chosen freely up to {FREE_PLANES}, not {count}; "
            "random_incident_planes of trivector.configurations searches for more"
        )
    planes = [random_plane(field, rng, height=height)]
    for _ in range(_TRIES):
        if len(planes) == count:
            return tuple(planes)
        plane = random_plane_meeting(planes, rng, height=height)
        if plane not in planes:
            planes.append(plane)
    raise UsageError(
        f"only {len(planes)} of {count} distinct planes were found; take a larger field"
    )
