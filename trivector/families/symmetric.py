"""Small complete configurations over ℚ that a symmetry of order 2, 3, 4 or 5 keeps.

Found by a search over the planes with entries −1, 0, 1: for a signed
permutation g, the orbits of planes that meet their images, put together until
they span a Lagrangian, and kept when its section has no other planes. All
planes are rational, for each length 10 … 15. Length 10 does not come from a
nodal curve on the quintic del Pezzo surface, as the longer ones do: a curve
with five nodes moves in a pencil, and the section is a curve.
"""

from collections.abc import Sequence
from dataclasses import dataclass

from trivector.errors import UsageError
from trivector.fields.protocol import Field
from trivector.subspaces import Plane

__all__ = ["SYMMETRIC", "SymmetricConfiguration", "plane_orbit", "symmetric_planes"]


@dataclass(frozen=True)
class SymmetricConfiguration:
    """Planes that represent the orbits of a signed permutation.

    Attributes
    ----------
    images : tuple of six int
        e_i ↦ e_j is written j + 1, and e_i ↦ −e_j is −(j + 1).
    seeds : tuple of str
        The rows of each plane: ``"+000+0 …"``, one character for each entry.
    """

    images: tuple[int, ...]
    seeds: tuple[str, ...]


SYMMETRIC: dict[int, SymmetricConfiguration] = {
    10: SymmetricConfiguration(
        (1, 3, 4, 5, 6, 2),
        ("+000++ 0+0-00 00+000", "+0000+ 0+0000 0000+0"),
    ),
    11: SymmetricConfiguration(
        (1, 2, 3, 4, -5, -6),
        (
            "+0000- 0+0++0 00++0-",
            "+000-+ 0+000- 000+++",
            "+0--00 0+0000 00000+",
            "+00-00 00+000 0000+0",
            "+00+00 00++00 00000+",
            "+0-000 000+00 0000++",
            "0+000- 00+0+0 000+--",
            "0+0+00 0000+0 00000+",
        ),
    ),
    12: SymmetricConfiguration(
        (1, 2, 3, 4, -5, -6),
        (
            "+00--+ 0+0-+0 00+++0",
            "+000-0 0+00++ 00+++0",
            "+00--+ 0+00-- 00+-0+",
            "+00--+ 0+0--0 00+0++",
            "+000-0 0+00-- 00+0-+",
            "++0-00 00++00 0000+0",
            "+-0000 00++00 00000+",
        ),
    ),
    13: SymmetricConfiguration(
        (2, 3, 1, 5, 6, 4),
        (
            "+000+0 0++000 000+0+",
            "+-0000 00++00 0000+-",
            "+000-+ 0++0+0 000+0-",
            "+0-000 0++000 000++-",
            "000+00 0000+0 00000+",
        ),
    ),
    14: SymmetricConfiguration(
        (2, 3, 4, 1, 6, 5),
        (
            "+00000 0+0000 00+++0",
            "+0-00+ 0+-0-0 000+00",
            "+00--0 0+0-0+ 00+000",
            "+00000 0+0+-- 00+000",
        ),
    ),
    15: SymmetricConfiguration(
        (1, 3, 4, 5, 6, 2),
        (
            "+-0-00 0000+0 00000+",
            "+0--00 0++++0 00000+",
            "+000++ 0+0000 000+00",
        ),
    ),
}
"""By the number of planes."""


def plane_orbit(plane: Plane, images: Sequence[int]) -> list[Plane]:
    """The images of a plane under the powers of a signed permutation, itself first."""
    orbit = [plane]
    while True:
        rows = []
        for row in orbit[-1].rows:
            moved = list(row)
            for value, image in zip(row, images, strict=True):
                moved[abs(image) - 1] = value if image > 0 else -value
            rows.append(moved)
        following = Plane.from_rows(plane.field, rows)
        if following == plane:
            return orbit
        orbit.append(following)


def symmetric_planes(field: Field, length: int) -> tuple[Plane, ...]:
    """The planes of the configuration of that length, orbit by orbit.

    Over ℚ they are complete over the closure, pairwise in one point, and span a
    Lagrangian (computed, proved by `Configuration.examine`); modulo most
    primes too, that of length 10 modulo 3, 5, 7, 11, 13.

    Raises
    ------
    UsageError
        For a length that is not in `SYMMETRIC`, or if planes coincide, as
        they can in characteristic 2.

    Examples
    --------
    >>> from trivector.fields import QQ
    >>> planes = symmetric_planes(QQ, 10)
    >>> len(planes), {p.meet_dimension(q) for p in planes for q in planes if p != q}
    (10, {0})
    """
    if length not in SYMMETRIC:
        known = ", ".join(map(str, SYMMETRIC))
        raise UsageError(f"there is no symmetric configuration of length {length}; use {known}")
    values = {"0": field.zero, "+": field.one, "-": -field.one}
    found: list[Plane] = []
    for seed in SYMMETRIC[length].seeds:
        rows = [[values[entry] for entry in row] for row in seed.split()]
        found += plane_orbit(Plane.from_rows(field, rows), SYMMETRIC[length].images)
    if len(set(found)) < length:
        raise UsageError(
            f"planes of the symmetric configuration of length {length} coincide over "
            f"{field.name}; use another field"
        )
    return tuple(found)
