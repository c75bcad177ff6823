"""What has been proved of a section, as data."""

import dataclasses
from dataclasses import dataclass
from typing import Any

from trivector.fields.linear import Rows
from trivector.fields.protocol import Field
from trivector.sections.hilbert import HilbertPolynomial
from trivector.subspaces import Plane, Subspace

__all__ = ["ClosedPoint", "SectionReport"]


@dataclass(frozen=True)
class ClosedPoint:
    """A point of a finite section: a plane over its residue field, with multiplicity.

    Attributes
    ----------
    degree : int
        The degree of the residue field over the field of the data: the
        number of conjugate planes over the closure.
    multiplicity : int
    residue_field : Field or None
        None over a number field, where relative extensions have no notation.
    rows : tuple of rows or None
        A basis of W over the residue field; in reduced echelon form unless
        that would be very much longer (degree above 4 over ℚ).
    modulus : tuple or None
        The monic irreducible polynomial over the field k of the data whose
        root θ generates the residue field, constant first; None for degree 1
        when the plane was known.
    plucker : tuple of tuples or None
        The Plücker vector over k(θ), each entry as coefficients of powers of θ.
    """

    degree: int
    multiplicity: int
    residue_field: Field | None
    rows: Rows | None
    modulus: tuple[Any, ...] | None = dataclasses.field(default=None, compare=False, repr=False)
    plucker: Rows | None = dataclasses.field(default=None, compare=False, repr=False)

    @property
    def plane(self) -> Plane | None:
        """The plane over its residue field."""
        if self.residue_field is None or self.rows is None:
            return None
        return Plane.from_rows(self.residue_field, self.rows)

    def to_json(self) -> dict[str, Any]:
        """As in the document formats."""
        field = self.residue_field
        rows = None
        if field is not None and self.rows is not None:
            rows = [[field.format(x) for x in row] for row in self.rows]
        return {
            "degree": self.degree,
            "multiplicity": self.multiplicity,
            "residue_field": None if field is None else field.to_spec(),
            "plane": rows,
        }


@dataclass(frozen=True)
class SectionReport:
    """What has been proved of a section Z = G(3,V) ∩ P(L).

    Dimension, degree, Hilbert function, reducedness and multiplicities are
    those of Z over the field of the data, hence over its closure too. None
    always means "not decided"; ``limit`` then says what was hit.

    Attributes
    ----------
    subspace : Subspace
        L, over the field of the data.
    known : tuple of Plane
        The given planes that lie in Z, distinct and sorted.
    projective_dimension : int or None
        −1 if empty, 0 if finite.
    infinite : bool or None
        Whether Z has infinitely many planes over the closure; may be known
        while the dimension is not.
    degree : int or None
        The degree of Z as a scheme, multiplicities counted.
    hilbert_function : tuple of int or None
        H(0), H(1), … over the field of the data: up to 0 when empty, at least
        to degree 3 and to two values of the polynomial when finite, at least
        to degree 5 when infinite.
    hilbert_polynomial : HilbertPolynomial or None
    reduced : bool or None
    multiplicities : tuple of (int or None) or None
        Of the known planes; an entry None: not an isolated plane of Z.
    further : int or None
        For finite Z: the planes over the closure that are not among the
        known ones, counted with multiplicity.
    points : tuple of ClosedPoint or None
        All of a finite Z, sorted by degree, rational ones by plane.
    planes : tuple of Plane or None
        All planes of Z over the field of the data, sorted; None if not known
        to be all.
    others : tuple of Plane
        Planes of Z over the field of the data that are not among the known
        ones, sorted: all of them if ``planes`` is given, else some.
    complete_over_closure, complete_over_base : bool or None
        Whether the known planes are all planes of Z, over the closure and
        over the field of the data.
    method : str
        The computation that decided, and the theorem behind it.
    limit : str or None
    """

    subspace: Subspace
    known: tuple[Plane, ...]
    projective_dimension: int | None = None
    infinite: bool | None = None
    degree: int | None = None
    hilbert_function: tuple[int, ...] | None = None
    hilbert_polynomial: HilbertPolynomial | None = None
    reduced: bool | None = None
    multiplicities: tuple[int | None, ...] | None = None
    further: int | None = None
    points: tuple[ClosedPoint, ...] | None = None
    planes: tuple[Plane, ...] | None = None
    others: tuple[Plane, ...] = ()
    complete_over_closure: bool | None = None
    complete_over_base: bool | None = None
    method: str = ""
    limit: str | None = None

    @property
    def scope(self) -> str:
        """The closure that statements "over the closure" refer to."""
        return self.subspace.field.closure_name

    @property
    def exhaustive(self) -> bool:
        """Whether all of Z over the closure is described by ``points``."""
        return self.points is not None

    @property
    def planes_over_closure(self) -> int | None:
        """The number of planes of a finite Z over the closure."""
        return None if self.points is None else sum(point.degree for point in self.points)

    def to_json(self) -> dict[str, Any]:
        """The keys of a ``section`` answer."""
        space = self.subspace
        six = space.n == 6
        polynomial, hilbert = self.hilbert_polynomial, self.hilbert_function
        points, planes = self.points, self.planes
        return {
            "subspace": {
                "dimension": space.dimension,
                "isotropic": space.is_isotropic() if six else None,
                "lagrangian": space.is_lagrangian() if six else None,
            },
            "projective_dimension": self.projective_dimension,
            "infinite": self.infinite,
            "degree": self.degree,
            "hilbert_function": None if hilbert is None else list(hilbert),
            "hilbert_polynomial": None if polynomial is None else str(polynomial),
            "reduced": self.reduced,
            "closed_points": None if points is None else [point.to_json() for point in points],
            "planes_over_base": None if planes is None else len(planes),
            "planes_over_closure": self.planes_over_closure,
            "planes": None if planes is None else [plane.to_entries() for plane in planes],
            "further_planes": self.further,
            "scope": self.scope,
            "method": self.method,
            "exhaustive": self.exhaustive,
            "limit": self.limit,
        }
