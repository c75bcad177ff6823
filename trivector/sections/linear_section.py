"""G(3,V) ∩ P(L): the object of which everything is asked."""

from collections.abc import Sequence
from dataclasses import dataclass

from trivector.errors import MixedFieldsError, UsageError
from trivector.sections.deciding import Decision
from trivector.sections.hilbert import (
    HilbertPolynomial,
    grassmannian_dimension,
    grassmannian_hilbert,
    proper_section_polynomial,
)
from trivector.sections.section_report import SectionReport
from trivector.sections.study import Limits, Progress
from trivector.subspaces import Plane, Subspace

__all__ = ["LinearSection"]


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
        nonempty, and of length 42 if finite. Or because H(d) over K exceeds
        1, 11, 31, 41, 42, 42, … (n = 6), the most that a finite section has.
        """
        planes = self._distinct(known)
        if self.subspace.dimension == 0:
            return _empty_space(self.subspace)
        if self.subspace.dimension == self.subspace.ambient_dimension:
            return _whole_grassmannian(self.subspace, planes)
        return Decision(
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


def _empty_space(subspace: Subspace) -> SectionReport:
    return SectionReport(
        subspace,
        (),
        projective_dimension=-1,
        infinite=False,
        degree=0,
        hilbert_function=(1, 0),
        hilbert_polynomial=HilbertPolynomial(1, ()),
        reduced=True,
        multiplicities=(),
        further=0,
        points=(),
        planes=(),
        complete_over_closure=True,
        complete_over_base=True,
        method="the zero space contains no plane",
    )


def _whole_grassmannian(subspace: Subspace, known: tuple[Plane, ...]) -> SectionReport:
    n = subspace.n
    polynomial = proper_section_polynomial(n, grassmannian_dimension(n))
    return SectionReport(
        subspace,
        known,
        projective_dimension=polynomial.dimension,
        infinite=True,
        degree=polynomial.degree,
        hilbert_function=tuple(grassmannian_hilbert(n, t) for t in range(6)),
        hilbert_polynomial=polynomial,
        reduced=True,
        complete_over_closure=False,
        complete_over_base=False,
        method=f"L is everything: the section is G(3,{n}), of which nothing is listed",
    )
