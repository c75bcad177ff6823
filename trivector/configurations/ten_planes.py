"""Ten pairwise incident planes in general position over a large finite field.

Each incidence with a given plane is one hyperplane section of G(3,6), of
dimension 9: so the planes can be chosen one after the other, the tenth in a
finite section.
"""

from random import Random

from trivector.errors import FieldError
from trivector.fields.protocol import FiniteField
from trivector.sections import LinearSection
from trivector.subspaces import Plane, Subspace

__all__ = ["random_ten_planes"]

_FEWEST_ELEMENTS = 101


def random_ten_planes(field: FiniteField, rng: Random) -> tuple[Plane, ...]:
    """Ten pairwise incident planes, each random in the section by those before it.

    Parameters
    ----------
    field : FiniteField
        With at least 101 elements; over smaller ones the section that is
        finite in general often is not.
    rng : random.Random

    Returns
    -------
    tuple of Plane
        The first two are ⟨e0, e1, e2⟩ and ⟨e0, e3, e4⟩, as any two planes that
        share a point are after a change of coordinates. Whether the ten are
        complete is for `Configuration.examine` to say.

    Raises
    ------
    FieldError
        If the field is smaller, or a section had no further rational plane:
        draw again.

    Notes
    -----
    A section of dimension d is met by a random subspace of codimension d, in
    finitely many planes; one of the rational ones is drawn. Cost: eight
    examinations of sections, a few seconds in all.
    """
    if (field.order or 0) < _FEWEST_ELEMENTS:
        raise FieldError(
            f"ten planes in general position need a field with at least {_FEWEST_ELEMENTS} "
            f"elements, not {field.name}; try F_1009"
        )
    units = [[int(i == j) for j in range(6)] for i in range(6)]
    planes = [
        Plane.from_rows(field, [units[i] for i in indices]) for indices in ((0, 1, 2), (0, 3, 4))
    ]
    while len(planes) < 10:
        planes.append(_further(field, planes, rng))
    return tuple(planes)


def _further(field: FiniteField, planes: list[Plane], rng: Random) -> Plane:
    meeting_all = Subspace.span(field, 6, [plane.plucker for plane in planes]).orthogonal()
    dimension = 9 - len(planes)
    for _ in range(20 if dimension else 1):
        space = _random_subspace(meeting_all, meeting_all.dimension - dimension, rng)
        known = [plane for plane in planes if space.contains(plane.plucker)]
        found = LinearSection(space).examine(known).planes
        fresh = [plane for plane in found or () if plane not in planes]
        if fresh:
            return fresh[rng.randrange(len(fresh))]
    raise FieldError(
        f"no plane number {len(planes) + 1} over {field.name} meets those before it in general "
        "position; draw again or use a larger field"
    )


def _random_subspace(space: Subspace, dimension: int, rng: Random) -> Subspace:
    if dimension == space.dimension:
        return space
    field = space.field
    weights = [[field.random_element(rng) for _ in space.rows] for _ in range(dimension)]
    mixed = field.matrix(weights, space.dimension) * field.matrix(space.rows, 20)
    return Subspace.span(field, 6, mixed.tolist())
