"""Points, lines, planes, … of P(V): join, meet, and how two planes meet."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any

from trivector.errors import (
    DependentRowsError,
    DimensionError,
    MixedFieldsError,
    NotDecomposableError,
)
from trivector.exterior.basis import DIMENSIONS, dimension_from_size
from trivector.exterior.plucker import Violation, decompose
from trivector.exterior.products import minors
from trivector.fields.entries import shorten
from trivector.fields.linear import Rows, dependencies, meet_rows, row_space
from trivector.fields.protocol import Field

__all__ = ["Flat", "Plane", "describe_dependency"]

_WORDS = {-1: "empty", 0: "point", 1: "line", 2: "plane", 3: "solid"}


@dataclass(frozen=True, eq=False)
class Flat:
    """A projective subspace P(U) of P(V), kept by the canonical rows of U.

    Two flats are equal exactly when they are the same subspace of the same V
    over the same field.
    """

    field: Field
    n: int
    rows: Rows

    @classmethod
    def span(cls, field: Field, n: int, vectors: Iterable[Sequence[Any]]) -> "Flat":
        """The span of any vectors of k^n; a plane is made by `Plane.from_rows`."""
        if n < 1:
            raise DimensionError(f"n must be positive, not {n}")
        rows = _checked_rows(field, n, vectors)
        return Flat(field, n, row_space(field, rows, n))

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Flat):
            return NotImplemented
        mine, theirs = (self.n, self.rows), (other.n, other.rows)
        return mine == theirs and self.field == other.field

    @cached_property
    def _hash(self) -> int:
        return hash((self.n, self.rows))

    def __hash__(self) -> int:
        # Kept: rational numbers are slow to hash, and planes are often looked up.
        return self._hash

    @property
    def projective_dimension(self) -> int:
        """−1 for the empty flat, 0 for a point, 1 for a line, …"""
        return len(self.rows) - 1

    @property
    def word(self) -> str:
        """``"point"``, ``"line"``, ``"plane"``, ``"solid"``, ``"hyperplane"``, …"""
        dimension = self.projective_dimension
        if dimension == self.n - 2:
            return "hyperplane"
        return _WORDS.get(dimension, f"{dimension}-dimensional flat")

    def _check(self, other: "Flat") -> None:
        if self.field != other.field or self.n != other.n:
            raise MixedFieldsError(
                f"flats of P^{self.n - 1} over {self.field.name} and of P^{other.n - 1} over "
                f"{other.field.name} do not meet anywhere; convert one of them"
            )

    def join(self, other: "Flat") -> "Flat":
        """The smallest flat that contains both."""
        self._check(other)
        return Flat(self.field, self.n, row_space(self.field, self.rows + other.rows, self.n))

    def meet(self, other: "Flat") -> "Flat":
        """The largest flat in both; empty if they are disjoint."""
        self._check(other)
        return Flat(self.field, self.n, meet_rows(self.field, self.rows, other.rows, self.n))

    def meet_dimension(self, other: "Flat") -> int:
        """The projective dimension of the meet, from one rank; −1 if disjoint.

        For two planes: 2 equal, 1 a common line, 0 a common point, −1 disjoint.
        """
        self._check(other)
        both = self.field.matrix(self.rows + other.rows, self.n)
        return len(self.rows) + len(other.rows) - int(both.rank()) - 1

    def is_incident(self, other: "Flat") -> bool:
        """Whether the two share at least a point (over any extension as well)."""
        return self.meet_dimension(other) >= 0

    def contains(self, other: "Flat") -> bool:
        """Whether ``other`` lies in this flat."""
        return self.meet_dimension(other) == other.projective_dimension

    def sort_key(self) -> tuple[Any, ...]:
        """Orders flats by pivot columns, then by entries; the same on every machine."""
        pivots = tuple(next(j for j, x in enumerate(row) if x) for row in self.rows)
        key = self.field.sort_key
        return pivots, tuple(key(x) for row in self.rows for x in row)

    def to_entries(self) -> list[list[int | str]]:
        """The rows as they stand in a JSON document."""
        return [[self.field.format(x) for x in row] for row in self.rows]


class Plane(Flat):
    """A plane P(W) ⊂ P(V), dim W = 3, n = 6 or 7.

    Examples
    --------
    >>> from trivector import Plane, prime_field
    >>> F5 = prime_field(5)
    >>> one = Plane.from_rows(F5, [[1, 0, 0, 0, 0, 0], [0, 1, 0, 0, 0, 0], [0, 0, 1, 0, 0, 0]])
    >>> two = Plane.from_rows(F5, [[0, 0, 1, 0, 0, 0], [0, 0, 0, 1, 0, 0], [0, 0, 0, 0, 1, 0]])
    >>> one.meet_dimension(two), one.meet(two).to_entries()
    (0, [[0, 0, 1, 0, 0, 0]])
    """

    @classmethod
    def from_rows(cls, field: Field, rows: Iterable[Sequence[Any]]) -> "Plane":
        """From any basis of W.

        Raises
        ------
        DimensionError
            Unless there are three rows of 6 or 7 entries.
        DependentRowsError
            If the rows depend on each other; the message says which and how.
        """
        given = list(_checked_rows(field, None, rows))
        if len(given) != 3:
            raise DimensionError(f"a plane has 3 rows, not {len(given)}")
        n = len(given[0])
        if n not in DIMENSIONS or any(len(row) != n for row in given):
            lengths = ", ".join(str(len(row)) for row in given)
            raise DimensionError(f"the rows of a plane have 6 or 7 entries each, not {lengths}")
        canonical = row_space(field, given, n)
        if len(canonical) < 3:
            index, coefficients = next(iter(dependencies(field, given, n).items()))
            relation = describe_dependency(field, index, coefficients)
            raise DependentRowsError(f"rows must be independent; {relation}. Give a basis of W.")
        return cls(field, n, canonical)

    @classmethod
    def from_plucker(cls, field: Field, vector: Sequence[Any]) -> "Plane":
        """From a decomposable vector of ∧³V.

        Raises
        ------
        NotDecomposableError
            If a Plücker relation fails; the message gives it with its value.
        """
        values = [field.element(x) for x in vector]
        n = dimension_from_size(len(values))
        if n is None:
            raise DimensionError(
                f"a Plücker vector has 20 entries (n = 6) or 35 (n = 7), not {len(values)}"
            )
        if not any(values):
            raise NotDecomposableError(
                "the Plücker vector is zero, which is no plane; give a nonzero one"
            )
        rows = decompose(values, n, field.zero)
        if isinstance(rows, Violation):
            raise NotDecomposableError(f"not decomposable: {rows}. Correct the vector.")
        return cls.from_rows(field, rows)

    @cached_property
    def plucker(self) -> tuple[Any, ...]:
        """The 3×3 minors of the canonical rows; the first nonzero one is 1."""
        return tuple(minors(self.rows))


def describe_dependency(field: Field, index: int, coefficients: Sequence[Any]) -> str:
    """``"row 2 = row 0 − 2·row 1"``."""
    text = ""
    for j, value in enumerate(coefficients):
        if not value:
            continue
        entry = shorten(value)
        sign, size = ("−", entry[1:]) if entry.startswith("-") else ("+", entry)
        text += f" {sign} " if text else ("−" if sign == "−" else "")
        text += ("" if size == "1" else f"{size}·") + f"row {j}"
    return f"row {index} = {text or '0'}"


def _checked_rows(field: Field, n: int | None, vectors: Iterable[Sequence[Any]]) -> Rows:
    listed = list(vectors)
    for i, vector in enumerate(listed):
        if isinstance(vector, str) or not isinstance(vector, Iterable):
            raise DimensionError(f"row {i} must be a list of entries, not {vector!r}")
    rows = tuple(tuple(field.element(x) for x in vector) for vector in listed)
    wrong = next((i for i, row in enumerate(rows) if n is not None and len(row) != n), None)
    if wrong is not None:
        raise DimensionError(f"row {wrong} must have {n} entries, not {len(rows[wrong])}")
    return rows
