"""Random planes, free or meeting given ones."""

from collections.abc import Sequence
from random import Random
from typing import Any

from trivector.errors import DimensionError, MixedFieldsError, UsageError
from trivector.fields.linear import kernel, row_space, unit_rows
from trivector.fields.protocol import Field
from trivector.subspaces import Plane

__all__ = ["FREE_PLANES", "random_incident_few", "random_plane", "random_plane_meeting"]

FREE_PLANES = 7
"""So many pairwise incident planes of P^5 can be chosen one after another by linear algebra."""

_TRIES = 50
_RESTARTS = 200


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


def random_plane_meeting(planes: Sequence[Plane], rng: Random, *, height: int = 2) -> Plane:
    """A random plane of P^5 that meets each of up to six planes, by linear algebra alone.

    Over an infinite field the coefficients that are drawn have size ≤ ``height``.

    Raises
    ------
    DimensionError
        If there is no plane, or they are of P^6.
    UsageError
        For more than six planes, where rational planes need not exist; for
        six planes if the second in the random order does not meet two others;
        or if fifty tries have not led to three independent points.

    Notes
    -----
    The planes are taken in random order. The new plane is spanned by a random
    point p_1 of the first, p_2 of the second and p_3 of the third (or of P^5,
    where there are fewer). It meets a further plane P exactly if p_3 lies in
    the join of p_1, p_2 and P, a hyperplane: one linear condition on p_3 in a
    plane for each P, so that two more planes can be met, P_4 and P_5.

    A sixth one makes it three conditions on p_3, with a solution exactly if
    p_2 lies on a cubic curve in its plane P_2. That curve passes through the
    points P_2 ∩ P_i, i ≥ 3; the third point on the line through two of them is
    rational, and p_2 is taken there.

    Nothing is claimed of the distribution.

    Examples
    --------
    >>> from random import Random
    >>> from trivector.families import twenty_planes
    >>> from trivector.fields import prime_field
    >>> given = twenty_planes(prime_field(7))[3:9]
    >>> plane = random_plane_meeting(given, Random(1))
    >>> [plane.meet_dimension(other) >= 0 for other in given]
    [True, True, True, True, True, True]
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
    found = _try_plane_meeting(planes, rng, height)
    if found is None:
        raise UsageError(
            f"no plane that meets the {len(planes)} planes was found in {_TRIES} tries; "
            "they are in special position, take others or a larger field"
        )
    return found


def _try_plane_meeting(planes: Sequence[Plane], rng: Random, height: int) -> Plane | None:
    field = planes[0].field
    for _ in range(_TRIES):
        rows = row_space(field, _spanning_points(field, planes, rng, height), 6)
        if len(rows) == 3:
            return Plane(field, 6, rows)
    return None


def _spanning_points(
    field: Field, planes: Sequence[Plane], rng: Random, height: int
) -> list[list[Any]]:
    order = rng.sample(planes, len(planes))
    spaces: list[Sequence[Sequence[Any]]] = [plane.rows for plane in order]
    spaces += [unit_rows(field, 6)] * (3 - len(spaces))
    first, second, third, *others = spaces
    points = [_combination(field, first, rng, height)]
    if len(others) < 3:
        points.append(_combination(field, second, rng, height))
    else:
        points.append(_point_of_the_cubic(field, points[0], order, rng, height))
    conditions = [_conditions(field, points[0], points[1], rows, third) for rows in others]
    if conditions:
        solutions = field.integral_basis(kernel(field, conditions, 3))
        if not solutions:
            return points
        third = (field.matrix(solutions, 3) * field.matrix(third, 6)).tolist()
    return [*points, _combination(field, third, rng, height)]


def _conditions(field: Field, p: Any, q: Any, rows: Any, basis: Any) -> list[Any]:
    """The determinants of p, q, rows and each vector of the basis; bilinear in p and q."""
    return [field.matrix([p, q, *rows, vector], 6).det() for vector in basis]


def _point_of_the_cubic(
    field: Field, p: Sequence[Any], planes: Sequence[Plane], rng: Random, height: int
) -> list[Any]:
    """A p_2 for which three conditions on p_3 have a solution."""
    _, second, third, *others = planes
    meets = [second.meet(plane).rows for plane in (third, *others)]
    chosen = rng.sample([rows for rows in meets if rows], min(2, sum(map(bool, meets))))
    if len(chosen) < 2:
        raise UsageError(
            "a plane that meets six planes: each of these must meet two others; "
            "give pairwise incident planes"
        )
    ends = [_combination(field, rows, rng, height) for rows in chosen]
    # Conditions at s·a + t·b are s·A + t·B, and det A = det B = 0.
    A, B = ([_conditions(field, p, end, x.rows, third.rows) for x in others] for end in ends)
    s, t = field.zero, field.zero
    for j in range(3):
        t = t - field.matrix([*A[:j], B[j], *A[j + 1 :]], 3).det()
        s = s + field.matrix([*B[:j], A[j], *B[j + 1 :]], 3).det()
    vector = [s * x + t * y for x, y in zip(*ends, strict=True)]
    return field.integral_basis([vector])[0] if any(vector) else vector


def _combination(
    field: Field, rows: Sequence[Sequence[Any]], rng: Random, height: int
) -> list[Any]:
    vector = [field.zero] * len(rows[0])
    for row in field.integral_basis(rows):
        factor = field.random_element(rng, height=height)
        vector = [x + factor * y for x, y in zip(vector, row, strict=True)]
    return vector


def random_incident_few(
    field: Field, count: int, rng: Random, *, height: int = 2
) -> tuple[Plane, ...]:
    """Distinct planes of P^5 that meet two by two, seven at most, over any field.

    Each is a `random_plane_meeting` of those before it. Whether they are in
    general position is not looked at.

    Raises
    ------
    UsageError
        For a count outside 1 … 7, or if no further plane is found.

    Examples
    --------
    >>> from random import Random
    >>> from trivector import QQ
    >>> planes = random_incident_few(QQ, 7, Random(1))
    >>> {p.meet_dimension(q) >= 0 for p in planes for q in planes}, len(set(planes))
    ({True}, 7)
    """
    if not 1 <= count <= FREE_PLANES:
        raise UsageError(
            f"pairwise incident planes can be chosen freely up to {FREE_PLANES}, not {count}; "
            "random_incident_planes of trivector.configurations searches for more"
        )
    for _ in range(_RESTARTS):
        planes = [random_plane(field, rng, height=height)]
        while len(planes) < count:
            plane = _try_plane_meeting(planes, rng, height)
            if plane is None or plane in planes:
                break
            planes.append(plane)
        else:
            return tuple(planes)
    raise UsageError(
        f"{count} distinct planes that meet two by two were not found over {field.name} in "
        f"{_RESTARTS} attempts; take fewer or a larger field"
    )
