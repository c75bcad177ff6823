"""All closed points of a finite section, as planes over their residue fields."""

from collections.abc import Sequence
from dataclasses import replace
from random import Random
from typing import Any

from trivector.exterior.plucker import Violation, decompose
from trivector.fields.linear import Rows, row_space
from trivector.fields.protocol import Field
from trivector.sections.finite_points import SchemePoint, scheme_points
from trivector.sections.graded import QuadricAlgebra
from trivector.sections.multiplicity import local_length
from trivector.sections.rational_points import rational_scheme_points
from trivector.sections.section_report import ClosedPoint
from trivector.sections.study import Limits, Progress
from trivector.subspaces import Plane, Subspace

__all__ = ["points_from_tables", "points_over_rationals", "rational_planes"]

# Echelon rows over a number field of large degree are very much longer than a
# basis read off the Plücker vector without a division.
_LARGEST_ECHELON_DEGREE = 4


def points_from_tables(
    subspace: Subspace, algebra: QuadricAlgebra, degree: int, rng: Random
) -> tuple[ClosedPoint, ...]:
    """All closed points, from the algebra of the section over the field of L itself.

    Parameters
    ----------
    algebra : QuadricAlgebra
        In coordinates of ``subspace.rows``, finite and regular in ``degree``.

    Returns
    -------
    tuple of ClosedPoint
        Exhaustive over the closure: Σ degree·multiplicity is the length.
        Sorted by degree, then by plane.
    """
    points = []
    for point in scheme_points(algebra, degree, rng):
        plucker = _combine(subspace, point)
        points.append(
            _closed_point(subspace.field, subspace.n, point.modulus, plucker, point.multiplicity)
        )
    return _sorted(points)


def points_over_rationals(
    subspace: Subspace,
    degree: int,
    hilbert: Sequence[int],
    limits: Limits,
    rng: Random,
    on_progress: Progress,
) -> tuple[ClosedPoint, ...] | None:
    """All closed points of a section that is finite modulo a prime, over ℚ.

    Parameters
    ----------
    degree, hilbert
        Modulo some prime the ideal is ``degree``-regular, with this H.

    Returns
    -------
    tuple of ClosedPoint or None
        Exhaustive, by proof: over ℚ the section is finite of length at most
        H(degree), and the local lengths of the points found, each checked over
        ℚ, add up to that. None if the primes allowed did not lead there.
    """
    rows = subspace.field.integral_basis(subspace.rows)
    found = rational_scheme_points(
        rows,
        subspace.n,
        degree,
        hilbert,
        max_primes=limits.max_lift_primes,
        rng=rng,
        on_progress=on_progress,
    )
    if found is None:
        return None
    points = []
    for point in found:
        coefficients = [list(p.coeffs()) for p in point.plucker]
        modulus = list(point.modulus.coeffs())
        closed = _closed_point(subspace.field, subspace.n, modulus, coefficients, 1)
        if point.exponent > 1:
            multiplicity = _local_length_at(subspace, closed)
            if multiplicity is None:
                return None
            closed = replace(closed, multiplicity=multiplicity)
        points.append(closed)
    length = sum(point.degree * point.multiplicity for point in points)
    return _sorted(points) if length == hilbert[degree] else None


def rational_planes(points: Sequence[ClosedPoint]) -> tuple[Plane, ...]:
    """The planes over the field of the data among closed points, in their order."""
    planes = [point.plane for point in points if point.degree == 1]
    return tuple(plane for plane in planes if plane is not None)


def _combine(subspace: Subspace, point: SchemePoint) -> list[list[Any]]:
    """The Plücker vector Σ x_i·b_i, each entry as coefficients of a polynomial in θ."""
    zero = subspace.field.zero
    vector = []
    for j in range(subspace.ambient_dimension):
        entry = [zero] * point.degree
        for value, row in zip(point.coordinates, subspace.rows, strict=True):
            if row[j]:
                for power, coefficient in enumerate(value):
                    entry[power] = entry[power] + coefficient * row[j]
        vector.append(entry)
    return vector


def _closed_point(
    field: Field,
    n: int,
    modulus: Sequence[Any],
    plucker: Sequence[Sequence[Any]],
    multiplicity: int,
) -> ClosedPoint:
    """The plane over k(θ); its decomposability is checked there."""
    degree = len(modulus) - 1
    residue = field.residue_field(modulus)
    relative = {"modulus": tuple(modulus), "plucker": tuple(map(tuple, plucker))}
    if residue is None:
        return ClosedPoint(degree, multiplicity, None, None, **relative)
    extension = residue.field
    vector = [residue.value(entry) for entry in plucker]
    rows = decompose(vector, n, extension.zero)
    if isinstance(rows, Violation):
        raise AssertionError(f"a point of the section violates {rows}")
    basis: Rows = tuple(map(tuple, rows))
    if extension.order is not None or degree <= _LARGEST_ECHELON_DEGREE:
        basis = row_space(extension, rows, n)
    return ClosedPoint(degree, multiplicity, extension, basis, **relative)


def _local_length_at(subspace: Subspace, point: ClosedPoint) -> int | None:
    plane, field = point.plane, point.residue_field
    if plane is None or field is None:
        return None
    rows = tuple(tuple(field.element(x) for x in row) for row in subspace.rows)
    return local_length(Subspace(field, subspace.n, rows), plane)


def _sorted(points: Sequence[ClosedPoint]) -> tuple[ClosedPoint, ...]:
    def key(point: ClosedPoint) -> tuple[Any, ...]:
        if point.residue_field is None or point.rows is None:
            return (point.degree, point.multiplicity)
        pivots = [next(j for j, x in enumerate(row) if x) for row in point.rows]
        sort_key = point.residue_field.sort_key
        return (point.degree, pivots, [sort_key(x) for row in point.rows for x in row])

    return tuple(sorted(points, key=key))
