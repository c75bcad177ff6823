"""The answer to every question about one configuration, as data."""

from dataclasses import dataclass
from typing import Any

from trivector.fields.protocol import Field
from trivector.sections import SectionReport
from trivector.subspaces import OffendingPair, Plane, Subspace

__all__ = ["Examination", "PairCounts"]


@dataclass(frozen=True)
class PairCounts:
    """How many pairs of planes are equal, share a line, exactly a point, or nothing."""

    equal: int
    line: int
    point: int
    disjoint: int

    def to_json(self) -> dict[str, int]:
        """As in the document formats."""
        return {
            "equal": self.equal,
            "line": self.line,
            "point": self.point,
            "disjoint": self.disjoint,
        }


@dataclass(frozen=True)
class Examination:
    """Everything that was asked of a configuration and what has been proved.

    Attributes
    ----------
    field, n : the field of the data and dim V
    planes : tuple of Plane
        As given, repetitions included.
    distinct : int
        Number of different planes.
    pairs : PairCounts
        Over all pairs of the given planes.
    disjoint_pairs : tuple of (int, int)
        Indices from 0 of the planes that do not meet, in order.
    span : Subspace
        The span of the Plücker vectors in ∧³V.
    offending_pair : OffendingPair or None
        Two basis vectors of the span with ⟨·,·⟩ ≠ 0; n = 6 only.
    section : SectionReport
        Of the planes that meet all given ones: G(3,V) ∩ P((span)^⊥). Its
        ``known`` planes are the given ones that lie in it.
    missing : tuple of Plane
        Planes over the field of the data that meet all given ones and are
        not among them: all such planes exactly when ``section.planes`` is
        given, else as far as they were found.
    seed : int
        The seed of the random linear forms in the proofs.

    Notes
    -----
    Statements about pairs, span and ranks hold over the field of the data and
    over every extension. Completeness is stated for both scopes separately.
    """

    field: Field
    n: int
    planes: tuple[Plane, ...]
    labels: tuple[str, ...]
    title: str
    source: str
    distinct: int
    pairs: PairCounts
    disjoint_pairs: tuple[tuple[int, int], ...]
    span: Subspace
    offending_pair: OffendingPair | None
    section: SectionReport
    missing: tuple[Plane, ...]
    seed: int

    @property
    def pairwise_incident(self) -> bool:
        """Whether every two planes share a point."""
        return not self.disjoint_pairs

    @property
    def isotropic(self) -> bool | None:
        """Whether the span is isotropic; None for n = 7, where there is no pairing."""
        return self.offending_pair is None if self.n == 6 else None

    @property
    def lagrangian(self) -> bool | None:
        """Whether the span is Lagrangian; None for n = 7."""
        return self.isotropic and self.span.dimension == 10 if self.n == 6 else None

    @property
    def totally_singular(self) -> bool | None:
        """Whether q vanishes on the span; None unless the characteristic is 2 and n = 6."""
        asked = self.field.characteristic == 2 and self.n == 6
        return self.span.is_totally_singular() if asked else None

    @property
    def complete_over_closure(self) -> bool | None:
        """Whether no plane over the closure can be added; None: undecided or not incident."""
        return self.section.complete_over_closure if self.pairwise_incident else None

    @property
    def complete_over_base(self) -> bool | None:
        """Whether no plane over the field of the data can be added; None as above."""
        if not self.pairwise_incident:
            return None
        return self.section.complete_over_base

    @property
    def exit_code(self) -> int:
        """0 complete over the closure, 1 not (or not incident), 3 undecided."""
        if not self.pairwise_incident or self.complete_over_closure is False:
            return 1
        return 0 if self.complete_over_closure else 3

    def to_json(self) -> dict[str, Any]:
        """The keys of an ``examination`` answer."""
        return {
            "kind": "examination",
            "title": self.title,
            "source": self.source,
            "field": self.field.to_spec(),
            "dimension": self.n,
            "planes": len(self.planes),
            "distinct": self.distinct,
            "pairs": self.pairs.to_json(),
            "disjoint_pairs": [list(pair) for pair in self.disjoint_pairs],
            "pairwise_incident": self.pairwise_incident,
            "span": {
                "dimension": self.span.dimension,
                "isotropic": self.isotropic,
                "lagrangian": self.lagrangian,
                "totally_singular": self.totally_singular,
            },
            "section": self.section.to_json(),
            "complete": {
                "over_base": self.complete_over_base,
                "over_closure": self.complete_over_closure,
            },
            "missing": [plane.to_entries() for plane in self.missing],
            "missing_exhaustive": self.section.planes is not None,
            "seed": self.seed,
        }

    def __str__(self) -> str:
        return "\n".join(self.sentences())

    def sentences(self) -> list[str]:
        """The answers in words, each with its scope."""
        base, closure = self.field.name, self.field.closure_name
        lines = [f"{len(self.planes)} planes of P^{self.n - 1} over {base}."]
        if self.disjoint_pairs:
            i, j = self.disjoint_pairs[0]
            lines.append(
                f"Not pairwise incident: {len(self.disjoint_pairs)} disjoint pairs, "
                f"the first one planes {i} and {j}."
            )
        else:
            lines.append("Pairwise incident.")
        lines.append(f"The span in ∧³V has dimension {self.span.dimension}{self._span_words()}.")
        verdict = self.complete_over_closure
        if self.pairwise_incident:
            words = {True: "Complete", False: "Not complete", None: "Undecided whether complete"}
            lines.append(f"{words[verdict]} over {closure}: {self.section.method}.")
            if self.section.limit:
                lines.append(f"Limit hit: {self.section.limit}.")
        return lines

    def _span_words(self) -> str:
        if self.isotropic is None:
            return ""
        return ", Lagrangian" if self.lagrangian else ", isotropic" if self.isotropic else ""
