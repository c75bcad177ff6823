"""Planes handed over by a person, and the one question: what can be said of them?"""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from itertools import combinations
from typing import Any

from trivector.configurations.examination import Examination, PairCounts
from trivector.errors import DimensionError, MixedFieldsError
from trivector.fields.protocol import Field
from trivector.sections import Limits, LinearSection
from trivector.sections.study import Progress
from trivector.subspaces import Plane, Subspace

__all__ = ["Configuration"]


@dataclass(frozen=True)
class Configuration:
    """A sequence of planes of one P(V), repetitions allowed.

    Parameters
    ----------
    planes : sequence of Plane
        At least one, all over one field and of one V.
    labels : sequence of str
        One for each plane, or none.
    title, source : str
        Carried along into every answer.

    Examples
    --------
    >>> from trivector import Configuration, prime_field
    >>> unit = lambda i: [int(i == j) for j in range(6)]
    >>> planes = [[unit(0), unit(1), unit(2)], [unit(0), unit(3), unit(4)]]
    >>> examination = Configuration.from_rows(prime_field(5), planes).examine()
    >>> examination.pairwise_incident, examination.complete_over_closure
    (True, False)
    """

    planes: tuple[Plane, ...]
    labels: tuple[str, ...] = ()
    title: str = ""
    source: str = ""

    def __post_init__(self) -> None:
        if not self.planes:
            raise DimensionError("a configuration has at least one plane; none was given")
        first = self.planes[0]
        for i, plane in enumerate(self.planes):
            if plane.field != first.field or plane.n != first.n:
                raise MixedFieldsError(
                    f"planes 0 and {i} are over {first.field.name}, n = {first.n}, and over "
                    f"{plane.field.name}, n = {plane.n}; convert one of them"
                )
        if self.labels and len(self.labels) != len(self.planes):
            raise DimensionError(
                f"{len(self.labels)} labels for {len(self.planes)} planes; give one for each"
            )

    @classmethod
    def from_rows(
        cls,
        field: Field,
        planes: Iterable[Iterable[Sequence[Any]]],
        *,
        labels: Sequence[str] = (),
        title: str = "",
        source: str = "",
    ) -> "Configuration":
        """From 3×n matrices of entries that the field can read."""
        made = tuple(Plane.from_rows(field, rows) for rows in planes)
        return cls(made, tuple(labels), title, source)

    @property
    def field(self) -> Field:
        """The field of the planes."""
        return self.planes[0].field

    @property
    def n(self) -> int:
        """dim V."""
        return self.planes[0].n

    def span(self) -> Subspace:
        """The span of the Plücker vectors in ∧³V."""
        vectors = [plane.plucker for plane in self.planes]
        return Subspace.span(self.field, self.n, vectors)

    def meet_dimensions(self) -> dict[tuple[int, int], int]:
        """For i < j the projective dimension of the meet of planes i and j.

        2 equal, 1 a line, 0 a point, −1 disjoint; in lexicographic order.
        """
        return {
            (i, j): 2 if first == second else first.meet_dimension(second)
            for (i, first), (j, second) in combinations(enumerate(self.planes), 2)
        }

    def section(self) -> LinearSection:
        """The planes that meet all planes of the configuration, as a section."""
        return LinearSection(self.span().orthogonal())

    def examine(
        self,
        *,
        limits: Limits | None = None,
        seed: int = 0,
        on_progress: Progress | None = None,
    ) -> Examination:
        """Every question about the configuration, answered exactly.

        Parameters
        ----------
        limits : Limits, optional
            How far to go before the answer is "undecided".
        seed : int
            For the random linear forms in the proofs.
        on_progress : callable, optional
            Called with a line before each large computation.

        Returns
        -------
        Examination
            Incidence and span over the field of the data; completeness over
            it and over its closure (`LinearSection.examine` has the theorems).
        """
        meets = self.meet_dimensions()
        counts = dict.fromkeys((2, 1, 0, -1), 0)
        for value in meets.values():
            counts[value] += 1
        span = self.span()
        orthogonal = span.orthogonal()
        known = [plane for plane in set(self.planes) if orthogonal.contains(plane.plucker)]
        report = LinearSection(orthogonal).examine(
            known, limits=limits, seed=seed, on_progress=on_progress
        )
        return Examination(
            field=self.field,
            n=self.n,
            planes=self.planes,
            labels=self.labels,
            title=self.title,
            source=self.source,
            distinct=len(set(self.planes)),
            pairs=PairCounts(counts[2], counts[1], counts[0], counts[-1]),
            disjoint_pairs=tuple(pair for pair, value in meets.items() if value < 0),
            span=span,
            offending_pair=span.offending_pair() if self.n == 6 else None,
            section=report,
            missing=report.others,
            seed=seed,
        )
