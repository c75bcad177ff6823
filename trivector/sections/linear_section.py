"""G(3,V) ∩ P(L): dimension, degree, and whether given planes are all of it."""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import islice
from random import Random
from typing import Any

from trivector.errors import BadReductionError, MixedFieldsError, UsageError
from trivector.fields.protocol import Reduction
from trivector.sections.graded import QuadricAlgebra
from trivector.sections.hilbert import HilbertPolynomial, grassmannian_degree
from trivector.sections.multiplicity import local_length
from trivector.sections.quadrics import restricted_quadrics
from trivector.sections.study import Limits, Progress, Study, expected_dimension, study
from trivector.subspaces import Plane, Subspace

__all__ = ["ClosedPoint", "LinearSection", "SectionReport"]


@dataclass(frozen=True)
class ClosedPoint:
    """A point of a finite section: a plane over its residue field, with multiplicity."""

    degree: int
    multiplicity: int
    residue_field: str
    plane: Plane

    def to_json(self) -> dict[str, Any]:
        """As in the document formats."""
        return {
            "degree": self.degree,
            "multiplicity": self.multiplicity,
            "residue_field": self.residue_field,
            "plane": self.plane.to_entries(),
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
    multiplicities : tuple of (int or None) or None
        Of the known planes; an entry None: not an isolated plane of Z.
    reduced : bool or None
    further : int or None
        For finite Z: the planes over the closure that are not among the
        known ones, counted with multiplicity.
    complete_over_closure : bool or None
        Whether the known planes are all planes of Z over the closure.
    complete_over_base : bool or None
        The same over the field of the data.
    scope : str
        The closure that "closure" refers to.
    method : str
        The computation that decided, and the theorem behind it.
    exhaustive : bool
        Whether ``known`` has been proved to be all of Z over the closure.
    limit : str or None
    """

    subspace: Subspace
    known: tuple[Plane, ...]
    projective_dimension: int | None = None
    infinite: bool | None = None
    degree: int | None = None
    hilbert_function: tuple[int, ...] | None = None
    hilbert_polynomial: HilbertPolynomial | None = None
    multiplicities: tuple[int | None, ...] | None = None
    reduced: bool | None = None
    further: int | None = None
    complete_over_closure: bool | None = None
    complete_over_base: bool | None = None
    method: str = ""
    limit: str | None = None

    @property
    def scope(self) -> str:
        return self.subspace.field.closure_name

    @property
    def exhaustive(self) -> bool:
        return self.complete_over_closure is True

    def closed_points(self) -> tuple[ClosedPoint, ...] | None:
        """All of Z as closed points, when the known planes are all; else None."""
        if not self.exhaustive or self.multiplicities is None:
            return None
        name = self.subspace.field.name
        return tuple(
            ClosedPoint(1, multiplicity or 1, name, plane)
            for plane, multiplicity in zip(self.known, self.multiplicities, strict=True)
        )

    def to_json(self) -> dict[str, Any]:
        """The keys of a ``section`` answer."""
        space = self.subspace
        six = space.n == 6
        points = self.closed_points()
        count = len(self.known) if self.exhaustive else None
        polynomial = self.hilbert_polynomial
        return {
            "subspace": {
                "dimension": space.dimension,
                "isotropic": space.is_isotropic() if six else None,
                "lagrangian": space.is_lagrangian() if six else None,
            },
            "projective_dimension": self.projective_dimension,
            "infinite": self.infinite,
            "degree": self.degree,
            "hilbert_function": None
            if self.hilbert_function is None
            else list(self.hilbert_function),
            "hilbert_polynomial": None if polynomial is None else str(polynomial),
            "reduced": self.reduced,
            "closed_points": None if points is None else [point.to_json() for point in points],
            "planes_over_base": count,
            "planes_over_closure": count,
            "planes": [plane.to_entries() for plane in self.known] if self.exhaustive else None,
            "further_planes": self.further,
            "scope": self.scope,
            "method": self.method,
            "exhaustive": self.exhaustive,
            "limit": self.limit,
        }


@dataclass(frozen=True)
class LinearSection:
    """The scheme G(3,V) ∩ P(L).

    Examples
    --------
    >>> from trivector import QQ, LinearSection, Subspace
    >>> through_e0 = [{(0, i, j): 1} for i in range(1, 6) for j in range(i + 1, 6)]
    >>> report = LinearSection(Subspace.from_terms(QQ, 6, through_e0)).examine()
    >>> report.projective_dimension, report.degree, report.hilbert_function
    (6, 5, (1, 10, 50, 175, 490, 1176))
    """

    subspace: Subspace

    def examine(
        self,
        known: Sequence[Plane] = (),
        *,
        limits: Limits | None = None,
        seed: int = 0,
        on_progress: Progress | None = None,
    ) -> SectionReport:
        """Dimension, degree, Hilbert function, and whether ``known`` is everything.

        Parameters
        ----------
        known : sequence of Plane
            Planes of the section, over the field of L.
        limits : Limits, optional
        seed : int
            For the random linear forms that the proofs use; another seed
            gives the same answers or, very rarely, a later "undecided".
        on_progress : callable, optional
            Called with a line before each large matrix.

        Returns
        -------
        SectionReport

        Raises
        ------
        UsageError
            If a known plane does not lie in the section.

        Notes
        -----
        *Complete, from one prime.* Let k distinct planes of Z, over a number
        field K, impose k conditions on forms of degree d − 1, and let
        dim R_d = k after reduction at one prime where L and the planes are
        integral. Ranks only drop under reduction, so dim R_d ≤ k over K, and
        the forms of degree d that vanish at the planes have codimension k;
        so these are I_d. By the first rank the ideal of the planes is
        d-regular, hence generated in degrees ≤ d and equal to I from d on:
        over the closure of K, Z is these planes, each reduced.

        *Complete, with multiplicities.* If Z is finite of length δ modulo a
        prime, R_d has a surjective multiplication by a linear form there,
        hence over K: Z is finite of length ≤ δ. If the local lengths at the
        known planes, computed over K, add up to δ, nothing else is left.

        *Not complete.* Over K, from exact ranks over K: if the ideal is
        d-regular modulo p and H takes the same values over K and modulo p in
        degrees d and d + 1, then R_d and R_{d+1} have no p-torsion over the
        local ring of p, the ranks in the proof of regularity are the same
        over K, and H is the same in all degrees ≥ d. Or from the dimension
        theorem: dim L ≥ 12 (n = 6) makes Z infinite, dim L = 11 makes it
        nonempty, and of length 42 if finite.
        """
        planes = self._distinct(known)
        if self.subspace.dimension == 0:
            return SectionReport(
                self.subspace,
                (),
                -1,
                False,
                0,
                (1, 0),
                HilbertPolynomial(1, ()),
                (),
                True,
                0,
                True,
                True,
                "the zero space contains no plane",
            )
        return _Examination(
            self.subspace, planes, limits or Limits(), seed, on_progress or (lambda _: None)
        ).run()

    def _distinct(self, known: Sequence[Plane]) -> tuple[Plane, ...]:
        space = self.subspace
        for i, plane in enumerate(known):
            if plane.field != space.field or plane.n != space.n:
                raise MixedFieldsError(
                    f"plane {i} is over {plane.field.name}, n = {plane.n}, the section over "
                    f"{space.field.name}, n = {space.n}; convert one of them"
                )
            if not space.contains(plane.plucker):
                raise UsageError(f"plane {i} does not lie in the section; leave it out")
        return tuple(sorted(set(known), key=Plane.sort_key))


@dataclass(frozen=True)
class _Examination:
    """One run of `LinearSection.examine`."""

    subspace: Subspace
    planes: tuple[Plane, ...]
    limits: Limits
    seed: int
    on_progress: Progress

    def run(self) -> SectionReport:
        undecided: SectionReport | None = None
        for reduction in islice(self.subspace.field.reductions(), self.limits.max_primes):
            try:
                found = self._study(reduction)
            except BadReductionError:
                continue
            report = self._conclude(found, reduction)
            if report.complete_over_closure is not None and report.limit is None:
                return report
            if undecided is None or undecided.complete_over_closure is None:
                undecided = report
        return undecided or self._report(limit=f"{self.limits.max_primes} primes, all of them bad")

    def _report(self, **found: Any) -> SectionReport:
        if found.get("complete_over_closure"):
            found["complete_over_base"] = True
        return SectionReport(self.subspace, self.planes, **found)

    def _study(self, reduction: Reduction) -> Study:
        rows = self.subspace.rows
        pivots = [next(j for j, x in enumerate(row) if x) for row in rows]
        # The coordinates of a vector of L in echelon rows are its entries at the pivots.
        points = [[plane.plucker[j] for j in pivots] for plane in self.planes]
        return study(
            reduction.field,
            self.subspace.n,
            reduction.rows(rows),
            reduction.rows(points),
            self.limits,
            Random(self.seed),
            self.on_progress,
        )

    def _conclude(self, found: Study, reduction: Reduction) -> SectionReport:
        if found.complete_degree is not None:
            return self._complete(found, found.complete_degree, reduction)
        polynomial = found.polynomial
        if polynomial is None:
            return self._undecided(found, reduction)
        if polynomial.dimension == -1:
            return self._report(
                projective_dimension=-1,
                infinite=False,
                degree=0,
                hilbert_function=self._hilbert(found, reduction, polynomial),
                hilbert_polynomial=polynomial,
                multiplicities=(),
                reduced=True,
                further=0,
                complete_over_closure=True,
                method=f"R = 0 in degree {polynomial.start} {reduction.name}: "
                "no plane lies in the section",
            )
        if polynomial.dimension == 0:
            return self._finite(found, polynomial, reduction)
        return self._infinite(found, polynomial, reduction)

    def _complete(self, found: Study, degree: int, reduction: Reduction) -> SectionReport:
        count = len(self.planes)
        polynomial = HilbertPolynomial(degree, (count,))
        return self._report(
            projective_dimension=0,
            infinite=False,
            degree=count,
            hilbert_function=self._hilbert(found, reduction, polynomial),
            hilbert_polynomial=polynomial,
            multiplicities=(1,) * count,
            reduced=True,
            further=0,
            complete_over_closure=True,
            method=f"H({degree}) = {count} {reduction.name}, and the {_planes(count)} impose "
            f"{count} conditions on forms of degree {degree - 1}",
        )

    def _finite(
        self, found: Study, polynomial: HilbertPolynomial, reduction: Reduction
    ) -> SectionReport:
        length = polynomial.degree
        lengths = tuple(local_length(self.subspace, plane) for plane in self.planes)
        known = sum(value or 0 for value in lengths)
        common: dict[str, Any] = {
            "projective_dimension": 0,
            "infinite": False,
            "multiplicities": lengths,
        }
        bound = f"finite of length {length} {reduction.name}"
        if known == length:
            return self._report(
                **common,
                degree=length,
                hilbert_function=self._hilbert(found, reduction, polynomial),
                hilbert_polynomial=polynomial if reduction.exact or found.proper else None,
                reduced=all(value == 1 for value in lengths),
                further=0,
                complete_over_closure=True,
                method=f"{bound}, and the multiplicities of the {_planes(len(lengths))}, "
                f"computed over {self.subspace.field.name}, add up to {length}",
            )
        exact, limit = self._exact_hilbert(found, polynomial, reduction)
        if exact is None:
            return self._report(**common, limit=limit, method=bound)
        if not exact:  # a bad prime: the Hilbert function is larger there
            return self._report(limit=f"{reduction.name} is a bad reduction", method=bound)
        return self._report(
            **common,
            degree=length,
            hilbert_function=exact,
            hilbert_polynomial=polynomial,
            reduced=False if any((value or 0) > 1 for value in lengths) else None,
            further=length - known,
            complete_over_closure=False,
            method=self._exactly(found, polynomial, reduction, f"finite of length {length}")
            + f"; the known {_planes(len(lengths))} account for {known} of it",
        )

    def _infinite(
        self, found: Study, polynomial: HilbertPolynomial, reduction: Reduction
    ) -> SectionReport:
        exact, limit = self._exact_hilbert(found, polynomial, reduction)
        dimension, degree = polynomial.dimension, polynomial.degree
        if exact:
            return self._report(
                projective_dimension=dimension,
                infinite=True,
                degree=degree,
                hilbert_function=exact,
                hilbert_polynomial=polynomial,
                complete_over_closure=False,
                method=self._exactly(
                    found, polynomial, reduction, f"of dimension {dimension} and degree {degree}"
                ),
            )
        if exact is not None:
            return self._report(limit=f"{reduction.name} is a bad reduction")
        return replace(self._undecided(found, reduction), limit=limit)

    def _undecided(self, found: Study, reduction: Reduction) -> SectionReport:
        """What can still be said when a limit was hit: infinite for another reason, perhaps."""
        space = self.subspace
        if expected_dimension(space.n, space.dimension) >= 1:
            return self._report(
                infinite=True,
                complete_over_closure=False,
                limit=found.limit,
                method=f"a linear space of dimension {space.dimension} meets G(3,{space.n}) in "
                f"dimension ≥ {expected_dimension(space.n, space.dimension)} "
                "(projective dimension theorem)",
            )
        for i, plane in enumerate(self.planes):
            if local_length(space, plane) is None:
                return self._report(
                    infinite=True,
                    complete_over_closure=False,
                    limit=found.limit,
                    method=f"at known plane {i} the local length exceeds "
                    f"{grassmannian_degree(space.n)}, more than any finite section has",
                )
        return self._report(limit=found.limit)

    def _exactly(
        self, found: Study, polynomial: HilbertPolynomial, reduction: Reduction, what: str
    ) -> str:
        start = polynomial.start
        if found.proper:
            return (
                f"{what}: a linear space of complementary dimension misses the section "
                f"{reduction.name}, so it has the expected dimension, and G(3,{self.subspace.n}) "
                "is Cohen–Macaulay"
            )
        source = (
            ""
            if reduction.exact
            else f", where H is the same as over {self.subspace.field.name} (exact ranks) in "
            f"degrees {start} and {start + 1}"
        )
        return f"{what}: the ideal is {start}-regular {reduction.name}{source}"

    def _hilbert(
        self, found: Study, reduction: Reduction, polynomial: HilbertPolynomial
    ) -> tuple[int, ...] | None:
        """H over the field of the data, when the polynomial is already known to hold there."""
        if reduction.exact or found.proper:
            return _listed(found.hilbert, polynomial)
        start = polynomial.start
        below = found.hilbert[:start]
        if found.complete_degree is not None and found.conditions[:start] == below:
            return _listed(below, polynomial)
        top = start - 1 if found.complete_degree is not None else start + 1
        algebra, _ = self._exact_algebra(top)
        if algebra is None or len(algebra.hilbert) <= min(top, 2):
            return None
        return _listed(tuple(algebra.hilbert[: top + 1]), polynomial)

    def _exact_hilbert(
        self, found: Study, polynomial: HilbertPolynomial, reduction: Reduction
    ) -> tuple[tuple[int, ...] | None, str | None]:
        """H over the field of the data; () if it differs; None with the limit if unknown."""
        if reduction.exact or found.proper:
            return _listed(found.hilbert, polynomial), None
        start = polynomial.start
        algebra, limit = self._exact_algebra(start + 1)
        if algebra is None:
            return None, limit
        exact = tuple(algebra.hilbert)
        if exact[start : start + 2] != found.hilbert[start : start + 2]:
            return (), None
        return _listed(exact, polynomial), None

    def _exact_algebra(self, top: int) -> tuple[QuadricAlgebra | None, str | None]:
        """R over the field of the data up to a degree, on a basis with small entries."""
        field, n = self.subspace.field, self.subspace.n
        rows = field.integral_basis(self.subspace.rows)
        algebra = QuadricAlgebra(field, len(rows), restricted_quadrics(rows, n, field.zero))
        while algebra.top < top and algebra.hilbert[-1]:
            nrows, ncols = algebra.next_shape()
            if ncols > self.limits.columns(field):
                return None, (
                    f"degree {algebra.top + 1} over {field.name} needs a matrix with {ncols} "
                    f"columns, more than {self.limits.columns(field)}"
                )
            self.on_progress(
                f"degree {algebra.top + 1}: {nrows} × {ncols} matrix over {field.name}"
            )
            algebra.extend()
        return algebra, None


def _listed(hilbert: Sequence[int], polynomial: HilbertPolynomial) -> tuple[int, ...]:
    """H as it is listed: up to 0, or to two degrees of the polynomial, or to degree 5."""
    start = polynomial.start
    values = list(hilbert[: start + 1])
    values += [polynomial(t) for t in range(len(values), max(start + 2, 7))]
    if polynomial.dimension == -1:
        return tuple(values[: values.index(0) + 1])
    if polynomial.dimension > 0:
        return tuple(values[: max(6, start + 2)])
    last = len(values) - 1
    while last > 1 and values[last - 1] == values[last] == polynomial.degree:
        last -= 1
    return tuple(values[: max(last + 2, 4)])


def _planes(count: int) -> str:
    return f"{count} plane" if count == 1 else f"{count} planes"
