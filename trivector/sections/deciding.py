"""From ranks over one field after another to what is proved of a section."""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import accumulate, islice
from random import Random
from typing import Any

from trivector.errors import BadReductionError, UndecidedError
from trivector.fields.protocol import Reduction
from trivector.sections.base_planes import find_base_planes
from trivector.sections.closed_points import (
    points_from_tables,
    points_over_rationals,
    rational_planes,
)
from trivector.sections.graded import QuadricAlgebra
from trivector.sections.hilbert import (
    HilbertPolynomial,
    grassmannian_degree,
    grassmannian_h_vector,
)
from trivector.sections.lines_of_planes import find_pencil
from trivector.sections.multiplicity import local_length
from trivector.sections.quadrics import restricted_quadrics
from trivector.sections.section_report import ClosedPoint, SectionReport
from trivector.sections.study import Limits, Progress, Study, expected_dimension, study
from trivector.subspaces import Plane, Subspace

__all__ = ["Decision"]


@dataclass(frozen=True)
class Decision:
    """One run of `LinearSection.examine`."""

    subspace: Subspace
    planes: tuple[Plane, ...]
    limits: Limits
    seed: int
    on_progress: Progress

    def run(self) -> SectionReport:
        """Try one reduction after another until one decides."""
        undecided = self._report(limit=f"{self.limits.max_primes} primes, all of them bad")
        for reduction in islice(self.subspace.field.reductions(), self.limits.max_primes):
            try:
                report = self._conclude(self._study(reduction), reduction)
            except BadReductionError:
                continue
            if report.complete_over_closure is not None:
                return report
            undecided = report
        return undecided

    def _report(self, **found: Any) -> SectionReport:
        """A report with the statements over the base field that follow."""
        base = found.get("planes")
        others = found.get("others", ())
        if base is not None and "others" not in found:
            known = set(self.planes)
            others = tuple(plane for plane in base if plane not in known)
        if found.get("complete_over_closure") or base is not None:
            found["complete_over_base"] = not others
        elif others:
            found["complete_over_base"] = False
        return SectionReport(self.subspace, self.planes, **{**found, "others": others})

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
            return self._empty(found, polynomial, reduction)
        if polynomial.dimension == 0:
            return self._finite(found, polynomial, reduction)
        return self._infinite(found, polynomial, reduction)

    def _empty(
        self, found: Study, polynomial: HilbertPolynomial, reduction: Reduction
    ) -> SectionReport:
        return self._report(
            projective_dimension=-1,
            infinite=False,
            degree=0,
            hilbert_function=self._hilbert(found, reduction, polynomial),
            hilbert_polynomial=polynomial,
            multiplicities=(),
            points=(),
            planes=(),
            reduced=True,
            further=0,
            complete_over_closure=True,
            method=f"R = 0 in degree {polynomial.start} {reduction.name}: "
            "no plane lies in the section",
        )

    def _known_points(self, multiplicities: Sequence[int]) -> dict[str, Any]:
        """The known planes as all there is."""
        field = self.subspace.field
        return {
            "projective_dimension": 0,
            "infinite": False,
            "degree": sum(multiplicities),
            "multiplicities": tuple(multiplicities),
            "points": tuple(
                ClosedPoint(1, multiplicity, field, plane.rows)
                for multiplicity, plane in zip(multiplicities, self.planes, strict=True)
            ),
            "planes": self.planes,
            "reduced": all(multiplicity == 1 for multiplicity in multiplicities),
            "further": 0,
            "complete_over_closure": True,
        }

    def _complete(self, found: Study, degree: int, reduction: Reduction) -> SectionReport:
        count = len(self.planes)
        polynomial = HilbertPolynomial(degree, (count,))
        return self._report(
            **self._known_points([1] * count),
            hilbert_function=self._hilbert(found, reduction, polynomial),
            hilbert_polynomial=polynomial,
            method=f"H({degree}) = {count} {reduction.name}, and the {_planes(count)} impose "
            f"{count} conditions on forms of degree {degree - 1}",
        )

    def _finite(
        self, found: Study, polynomial: HilbertPolynomial, reduction: Reduction
    ) -> SectionReport:
        length = polynomial.degree
        lengths = [local_length(self.subspace, plane) or 0 for plane in self.planes]
        field = self.subspace.field
        bound = f"finite of length {length} {reduction.name}"
        if sum(lengths) == length:
            return self._report(
                **self._known_points(lengths),
                hilbert_function=self._hilbert(found, reduction, polynomial),
                hilbert_polynomial=polynomial,
                method=f"{bound}, and the multiplicities of the {_planes(len(lengths))}, "
                f"computed over {field.name}, add up to {length}",
            )
        points = self._points(found, polynomial, reduction)
        if points is not None:
            multiplicity = {p.plane: p.multiplicity for p in points if p.degree == 1}
            return self._report(
                projective_dimension=0,
                infinite=False,
                degree=length,
                hilbert_function=self._hilbert(found, reduction, polynomial),
                hilbert_polynomial=polynomial,
                multiplicities=tuple(multiplicity[plane] for plane in self.planes),
                points=points,
                planes=rational_planes(points),
                reduced=all(point.multiplicity == 1 for point in points),
                further=length - sum(lengths),
                complete_over_closure=False,
                method=f"{bound}; closed points found and checked over {field.name} account for "
                f"all of it{_given(lengths)}",
            )
        return self._finite_by_rank(found, polynomial, reduction, lengths)

    def _points(
        self, found: Study, polynomial: HilbertPolynomial, reduction: Reduction
    ) -> tuple[ClosedPoint, ...] | None:
        """All closed points, where the field allows to find them within the limits."""
        start, rng = polynomial.start, Random(self.seed)
        if self.subspace.field.reconstructs:
            hilbert = found.hilbert
            return points_over_rationals(
                self.subspace, start, hilbert, self.limits, rng, self.on_progress
            )
        algebra = found.algebra
        if algebra is None or not reduction.exact:
            algebra, _ = self._exact_algebra(self.subspace.rows, start + 1)
        if algebra is None or tuple(algebra.hilbert[start : start + 2]) != (polynomial.degree,) * 2:
            return None
        return points_from_tables(self.subspace, algebra, start, rng)

    def _finite_by_rank(
        self,
        found: Study,
        polynomial: HilbertPolynomial,
        reduction: Reduction,
        lengths: Sequence[int],
    ) -> SectionReport:
        length = polynomial.degree
        exact, limit = self._exact_hilbert(found, polynomial, reduction)
        if exact is None:
            # Finite modulo a prime is finite; but it may be empty over the field.
            return self._report(
                projective_dimension=0 if self.planes else None,
                infinite=False,
                multiplicities=tuple(lengths),
                limit=limit,
            )
        return self._report(
            projective_dimension=0,
            infinite=False,
            multiplicities=tuple(lengths),
            degree=length,
            hilbert_function=exact,
            hilbert_polynomial=polynomial,
            reduced=False if any(value > 1 for value in lengths) else None,
            further=length - sum(lengths),
            complete_over_closure=False,
            method=self._exactly(found, polynomial, reduction, f"finite of length {length}")
            + _given(lengths),
        )

    def _infinite(
        self, found: Study, polynomial: HilbertPolynomial, reduction: Reduction
    ) -> SectionReport:
        exact, limit = self._exact_hilbert(found, polynomial, reduction)
        if exact is None:
            return replace(self._undecided(found, reduction), limit=limit)
        dimension, degree = polynomial.dimension, polynomial.degree
        return self._infinite_report(
            projective_dimension=dimension,
            degree=degree,
            hilbert_function=exact,
            hilbert_polynomial=polynomial,
            method=self._exactly(
                found, polynomial, reduction, f"of dimension {dimension} and degree {degree}"
            ),
        )

    def _infinite_report(self, **found: Any) -> SectionReport:
        base = find_base_planes(self.subspace, self.planes, self.limits, self.on_progress)
        return self._report(
            infinite=True,
            complete_over_closure=False,
            planes=base.planes,
            others=base.others,
            **found,
        )

    def _undecided(self, found: Study, reduction: Reduction) -> SectionReport:
        """What can still be said when a limit was hit: infinite for another reason, perhaps."""
        space = self.subspace
        expected = expected_dimension(space.n, space.dimension)
        if expected >= 1:
            return self._infinite_report(
                limit=found.limit,
                method=f"a linear space of dimension {space.dimension} meets G(3,{space.n}) in "
                f"dimension ≥ {expected} (projective dimension theorem)",
            )
        pencil = find_pencil(space, self.planes)
        if pencil is not None:
            return self._infinite_report(
                limit=found.limit, method=f"a pencil of planes over {space.field.name} lies in it"
            )
        degree = self._excessive_degree(found, reduction)
        if degree is not None:
            return self._infinite_report(
                limit=found.limit,
                method=f"H({degree}) over {space.field.name} is larger than for any finite section",
            )
        for i, plane in enumerate(self.planes):
            try:
                length = local_length(space, plane, most=self.limits.columns(space.field))
            except UndecidedError:
                continue
            if length is None:
                return self._infinite_report(
                    limit=found.limit,
                    method=f"at known plane {i} the local length exceeds "
                    f"{grassmannian_degree(space.n)}, more than any finite section has",
                )
        return self._report(limit=found.limit)

    def _excessive_degree(self, found: Study, reduction: Reduction) -> int | None:
        """A degree in which H, over the field of L itself, proves the section infinite.

        Were Z finite, dim G general forms among the equations of L would cut
        G = G(3,n) in a finite scheme (over the closure). They are a regular
        sequence in the Cohen–Macaulay coordinate ring of G, so that scheme
        has H(d) = h_0 + … + h_d, h the h-vector of G; and Z lies in it.
        """
        bounds = list(accumulate(grassmannian_h_vector(self.subspace.n)))
        for degree, value in enumerate(found.hilbert):
            bound = bounds[min(degree, len(bounds) - 1)]
            if value > bound:
                if reduction.exact:
                    return degree
                algebra, _ = self._exact_algebra(self._small_rows(), degree)
                if algebra is not None and algebra.hilbert[-1] > bound:
                    return degree
        return None

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
        algebra, _ = self._exact_algebra(self._small_rows(), top)
        if algebra is None:
            return None
        return _listed(tuple(algebra.hilbert[: top + 1]), polynomial)

    def _exact_hilbert(
        self, found: Study, polynomial: HilbertPolynomial, reduction: Reduction
    ) -> tuple[tuple[int, ...] | None, str | None]:
        """H over the field of the data; or None, with the limit that was hit.

        `BadReductionError` if it differs from the one found, so that another
        prime is tried.
        """
        if reduction.exact or found.proper:
            return _listed(found.hilbert, polynomial), None
        start = polynomial.start
        algebra, limit = self._exact_algebra(self._small_rows(), start + 1)
        if algebra is None:
            return None, limit
        exact = tuple(algebra.hilbert)
        if exact[start : start + 2] != found.hilbert[start : start + 2]:
            raise BadReductionError(f"the Hilbert function is larger {reduction.name}")
        return _listed(exact, polynomial), None

    def _small_rows(self) -> list[list[Any]]:
        return self.subspace.field.integral_basis(self.subspace.rows)

    def _exact_algebra(
        self, rows: Sequence[Sequence[Any]], top: int
    ) -> tuple[QuadricAlgebra | None, str | None]:
        """R over the field of the data up to a degree, in coordinates of these rows."""
        field, n = self.subspace.field, self.subspace.n
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


def _given(lengths: Sequence[int]) -> str:
    if not lengths:
        return ""
    return f", the {_planes(len(lengths))} given for {sum(lengths)} of it"


def _planes(count: int) -> str:
    return f"{count} plane" if count == 1 else f"{count} planes"
