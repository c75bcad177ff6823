"""Linear subspaces of ∧³V: orthogonal, isotropic, Lagrangian, sum, meet."""

import dataclasses
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from math import comb
from typing import Any

from trivector.errors import DimensionError, MixedFieldsError, NotLagrangianError, UsageError
from trivector.exterior.basis import DIMENSIONS, wedge_terms
from trivector.exterior.products import gram_row, pairing, quadratic_form
from trivector.exterior.trivector import Trivector
from trivector.fields.linear import (
    Rows,
    dependencies,
    kernel,
    meet_rows,
    reduce_vector,
    row_space,
    solve,
)
from trivector.fields.protocol import Field

__all__ = ["Lagrangian", "OffendingPair", "Subspace", "wedge_conditions"]


@dataclass(frozen=True)
class OffendingPair:
    """The proof that a subspace is not isotropic: rows i, j of its basis with ⟨i,j⟩ ≠ 0."""

    first: int
    second: int
    value: Any


@dataclass(frozen=True, eq=False)
class Subspace:
    """A linear subspace L ⊂ ∧³k^n, kept by its canonical rows.

    Attributes
    ----------
    rows : tuple of tuples of C(n,3) scalars
        Reduced row echelon form; equal subspaces have equal rows.
    dependent : dict
        For a subspace made by `span`: the given rows that depended on rows
        before them, with the coefficients. Not part of equality.

    Examples
    --------
    >>> from trivector import QQ, Subspace
    >>> L = Subspace.from_terms(QQ, 6, [{(0, 1, 2): 1}, {(3, 4, 5): 1}])
    >>> L.dimension, L.orthogonal().dimension, L.offending_pair().value
    (2, 18, 1)
    """

    field: Field
    n: int
    rows: Rows
    dependent: dict[int, tuple[Any, ...]] = dataclasses.field(
        default_factory=dict, compare=False, repr=False
    )

    @classmethod
    def span(cls, field: Field, n: int, vectors: Iterable[Sequence[Any]]) -> "Subspace":
        """The span of any vectors with C(n,3) entries."""
        if n not in DIMENSIONS:
            raise DimensionError(f"n must be 6 or 7, not {n}")
        size = comb(n, 3)
        given = [tuple(field.element(x) for x in vector) for vector in vectors]
        for i, vector in enumerate(given):
            if len(vector) != size:
                raise DimensionError(f"row {i} must have {size} entries, not {len(vector)}")
        rows = row_space(field, given, size)
        dependent = dependencies(field, given, size) if len(rows) < len(given) else {}
        return cls(field, n, rows, dependent)

    @classmethod
    def from_terms(
        cls, field: Field, n: int, vectors: Iterable[dict[tuple[int, ...], Any]]
    ) -> "Subspace":
        """The span of trivectors given by their coefficients of e_i∧e_j∧e_k, in any order."""
        made = [Trivector.from_terms(field, n, terms).coordinates for terms in vectors]
        return cls.span(field, n, made)

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Subspace):
            return NotImplemented
        mine, theirs = (self.n, self.rows), (other.n, other.rows)
        return mine == theirs and self.field == other.field

    def __hash__(self) -> int:
        return hash((self.n, self.rows))

    @property
    def dimension(self) -> int:
        """dim L as a vector space."""
        return len(self.rows)

    @property
    def ambient_dimension(self) -> int:
        """dim ∧³V = C(n,3)."""
        return comb(self.n, 3)

    def orthogonal(self) -> "Subspace":
        """{α : α∧β = 0 in ∧⁶V for all β in L}.

        For n = 6 that is the orthogonal for the pairing, of dimension
        20 − dim L; for n = 7 it is still a linear condition.
        """
        conditions = wedge_conditions(self.rows, self.n, self.field.zero)
        rows = kernel(self.field, conditions, self.ambient_dimension)
        return Subspace(self.field, self.n, rows)

    def offending_pair(self) -> OffendingPair | None:
        """The first two rows of `rows` with ⟨·,·⟩ ≠ 0; None for an isotropic L. n = 6."""
        self._require_six("isotropy")
        zero = self.field.zero
        for i, first in enumerate(self.rows):
            for j in range(i + 1, self.dimension):
                value = pairing(first, self.rows[j], zero)
                if value:
                    return OffendingPair(i, j, value)
        return None

    def is_isotropic(self) -> bool:
        """Whether the pairing vanishes on L (then it does over every extension); n = 6."""
        return self.offending_pair() is None

    def is_lagrangian(self) -> bool:
        """Whether L is isotropic of dimension 10; n = 6."""
        return self.dimension == 10 and self.is_isotropic()

    def is_totally_singular(self) -> bool:
        """Whether q(α) = Σ α_I·α_{I^c} vanishes on L; characteristic 2, n = 6.

        Stronger than isotropic there: q of a sum is the sum of the q plus the pairing.
        """
        self._require_six("total singularity")
        if self.field.characteristic != 2:
            raise UsageError(
                "total singularity is a question in characteristic 2 only; "
                f"over {self.field.name} ask whether the subspace is isotropic"
            )
        zero = self.field.zero
        return self.is_isotropic() and not any(quadratic_form(row, zero) for row in self.rows)

    def sum(self, other: "Subspace") -> "Subspace":
        """L + L′."""
        self._check(other)
        rows = row_space(self.field, self.rows + other.rows, self.ambient_dimension)
        return Subspace(self.field, self.n, rows)

    def meet(self, other: "Subspace") -> "Subspace":
        """L ∩ L′."""
        self._check(other)
        rows = meet_rows(self.field, self.rows, other.rows, self.ambient_dimension)
        return Subspace(self.field, self.n, rows)

    def contains(self, vector: Sequence[Any]) -> bool:
        """Whether a vector of C(n,3) entries lies in L."""
        values = self._vector(vector)
        return not any(reduce_vector(values, self.rows))

    def coordinates(self, vector: Sequence[Any]) -> tuple[Any, ...] | None:
        """The coordinates of a vector in the basis `rows`; None if it is not in L."""
        values = self._vector(vector)
        return solve(self.field, self.rows, values, self.ambient_dimension)

    def _vector(self, vector: Sequence[Any]) -> list[Any]:
        if len(vector) != self.ambient_dimension:
            raise DimensionError(
                f"a vector of ∧³V has {self.ambient_dimension} entries, not {len(vector)}"
            )
        return [self.field.element(x) for x in vector]

    def to_entries(self) -> list[list[int | str]]:
        """The rows as they stand in a JSON document."""
        return [[self.field.format(x) for x in row] for row in self.rows]

    def _check(self, other: "Subspace") -> None:
        if self.field != other.field or self.n != other.n:
            raise MixedFieldsError(
                f"subspaces over {self.field.name}, n = {self.n}, and over {other.field.name}, "
                f"n = {other.n}, do not go together; convert one of them"
            )

    def _require_six(self, what: str) -> None:
        if self.n != 6:
            raise UsageError(f"{what} needs n = 6, where ∧³V carries a pairing, not n = {self.n}")


class Lagrangian(Subspace):
    """A subspace that has been checked to be Lagrangian."""

    @classmethod
    def span(cls, field: Field, n: int, vectors: Iterable[Sequence[Any]]) -> "Lagrangian":
        """The span of the vectors, checked.

        Raises
        ------
        NotLagrangianError
            With the dimension, or two basis vectors and their pairing.
        """
        space = Subspace.span(field, n, vectors)
        space._require_six("a Lagrangian")
        if space.dimension != 10:
            raise NotLagrangianError(
                f"a Lagrangian has dimension 10, not {space.dimension}; give ten independent rows"
            )
        pair = space.offending_pair()
        if pair is not None:
            raise NotLagrangianError(
                f"not isotropic: rows {pair.first} and {pair.second} of the echelon form "
                f"pair to {field.format(pair.value)}, not 0"
            )
        return cls(field, n, space.rows, space.dependent)


def wedge_conditions(vectors: Iterable[Sequence[Any]], n: int, zero: Any) -> list[list[Any]]:
    """The linear forms α ↦ coefficients of ω∧α ∈ ∧⁶V, for each ω.

    One form for each ω when n = 6, seven when n = 7.
    """
    if n == 6:
        return [gram_row(vector) for vector in vectors]
    size, targets = comb(n, 3), comb(n, 6)
    forms = []
    for vector in vectors:
        block = [[zero] * size for _ in range(targets)]
        for i, j, k, sign in wedge_terms(n, 3, 3):
            if vector[i]:
                block[k][j] = vector[i] if sign == 1 else -vector[i]
        forms.extend(block)
    return forms
