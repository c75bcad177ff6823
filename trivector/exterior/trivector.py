"""The mathematical object: an element of ∧³V over a field."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import Any

from trivector.errors import DimensionError, MixedFieldsError, UsageError
from trivector.exterior import products
from trivector.exterior.basis import (
    DIMENSIONS,
    dimension_from_size,
    index_of,
    sort_sign,
    subset_name,
    subsets,
)
from trivector.exterior.plucker import Violation, decompose
from trivector.fields.protocol import Field

__all__ = ["Trivector"]


@dataclass(frozen=True)
class Trivector:
    """An element of ∧³k^n, n = 6 or 7.

    Parameters
    ----------
    field : Field
    coordinates : sequence of C(n,3) entries
        In the order of the basis 012, 013, …; anything the field can read.

    Raises
    ------
    DimensionError
        If the number of coordinates is neither 20 nor 35.

    Examples
    --------
    >>> from trivector import QQ, Trivector
    >>> alpha = Trivector.from_terms(QQ, 6, {(0, 1, 2): 1, (3, 4, 5): 1})
    >>> print(alpha)
    e012 + e345
    >>> print(alpha.decompose())
    x012·x345 − x013·x245 + x014·x235 − x015·x234 = 1, not 0
    """

    field: Field
    coordinates: tuple[Any, ...]

    def __init__(self, field: Field, coordinates: Iterable[Any]) -> None:
        values = tuple(field.element(value) for value in coordinates)
        if dimension_from_size(len(values)) is None:
            raise DimensionError(
                f"a trivector has 20 coordinates (n = 6) or 35 (n = 7), not {len(values)}"
            )
        object.__setattr__(self, "field", field)
        object.__setattr__(self, "coordinates", values)

    @classmethod
    def from_terms(cls, field: Field, n: int, terms: dict[tuple[int, ...], Any]) -> "Trivector":
        """From coefficients of e_i∧e_j∧e_k; indices in any order, signs as they fall."""
        if n not in DIMENSIONS:
            raise DimensionError(f"n must be 6 or 7, not {n}")
        coordinates = [field.zero] * len(subsets(n, 3))
        index = index_of(n, 3)
        for triple, coefficient in terms.items():
            sign = sort_sign(triple)
            position = index.get(tuple(sorted(triple)))
            if position is None:
                raise DimensionError(f"{triple} is not a triple of distinct indices below {n}")
            value = field.element(coefficient)
            coordinates[position] = coordinates[position] + (value if sign == 1 else -value)
        return cls(field, coordinates)

    @classmethod
    def from_vectors(cls, field: Field, vectors: Sequence[Sequence[Any]]) -> "Trivector":
        """v0∧v1∧v2; zero if the three depend on each other."""
        rows = [[field.element(x) for x in vector] for vector in vectors]
        if len(rows) != 3 or len({len(row) for row in rows}) != 1:
            raise DimensionError("v0∧v1∧v2 needs three vectors of one length")
        return cls(field, products.minors(rows))

    @property
    def n(self) -> int:
        """The dimension of V."""
        n = dimension_from_size(len(self.coordinates))
        assert n is not None  # the constructor has checked it
        return n

    def _like(self, coordinates: Iterable[Any]) -> "Trivector":
        return Trivector(self.field, coordinates)

    def _check(self, other: "Trivector") -> None:
        if not isinstance(other, Trivector):
            raise MixedFieldsError(f"a trivector and {other!r} do not go together")
        if self.field != other.field or self.n != other.n:
            raise MixedFieldsError(
                f"trivectors over {self.field.name}, n = {self.n}, and over {other.field.name}, "
                f"n = {other.n}, do not go together; convert one of them"
            )

    def __add__(self, other: "Trivector") -> "Trivector":
        self._check(other)
        return self._like(a + b for a, b in zip(self.coordinates, other.coordinates, strict=True))

    def __sub__(self, other: "Trivector") -> "Trivector":
        self._check(other)
        return self._like(a - b for a, b in zip(self.coordinates, other.coordinates, strict=True))

    def __neg__(self) -> "Trivector":
        return self._like(-a for a in self.coordinates)

    def __mul__(self, scalar: Any) -> "Trivector":
        factor = self.field.element(scalar)
        return self._like(factor * a for a in self.coordinates)

    __rmul__ = __mul__

    def __bool__(self) -> bool:
        return any(self.coordinates)

    def pairing(self, other: "Trivector") -> Any:
        """⟨α, β⟩, the coefficient of α∧β at the volume; n = 6 only."""
        self._check(other)
        self._require_six("the pairing")
        return products.pairing(self.coordinates, other.coordinates, self.field.zero)

    def wedge(self, other: "Trivector") -> tuple[Any, ...]:
        """α∧β ∈ ∧⁶V in the order of its basis: 1 coefficient for n = 6, 7 for n = 7."""
        self._check(other)
        zero = self.field.zero
        return tuple(products.wedge(self.coordinates, 3, other.coordinates, 3, self.n, zero))

    def wedge_vector(self, vector: Sequence[Any]) -> tuple[Any, ...]:
        """v∧α ∈ ∧⁴V in the order of its basis."""
        v = self._vector(vector)
        return tuple(products.wedge(v, 1, self.coordinates, 3, self.n, self.field.zero))

    def contract(self, form: Sequence[Any]) -> tuple[Any, ...]:
        """ι_f α ∈ ∧²V for a linear form f, in the order of its basis.

        ι_f(u∧v∧w) = f(u)·v∧w − f(v)·u∧w + f(w)·u∧v.
        """
        f = self._vector(form)
        return tuple(products.contract(f, self.coordinates, 3, self.n, self.field.zero))

    def act(self, matrix: Sequence[Sequence[Any]]) -> "Trivector":
        """g·α for an n×n matrix g acting on column vectors: g·(u∧v∧w) = gu∧gv∧gw."""
        rows = [self._vector(row) for row in matrix]
        if len(rows) != self.n:
            raise DimensionError(f"g must be {self.n}×{self.n}, not of {len(rows)} rows")
        return self._like(products.act(rows, self.coordinates, self.field.zero))

    def quadratic_form(self) -> Any:
        """q(α) = Σ α_I·α_{I^c}; n = 6. An invariant of SL(V) in characteristic 2."""
        self._require_six("the quadratic form")
        return products.quadratic_form(self.coordinates, self.field.zero)

    def decompose(self) -> list[list[Any]] | Violation:
        """Three vectors with product proportional to α, or a Plücker relation that fails.

        Raises
        ------
        UsageError
            For α = 0, which is decomposable but belongs to no plane.
        """
        if not self:
            raise UsageError("the zero trivector belongs to no plane; give a nonzero one")
        return decompose(self.coordinates, self.n, self.field.zero)

    def is_decomposable(self) -> bool:
        """Whether α = u∧v∧w, over the field or equivalently over its closure; true for 0."""
        return not self or not isinstance(self.decompose(), Violation)

    def _vector(self, values: Sequence[Any]) -> list[Any]:
        vector = [self.field.element(value) for value in values]
        if len(vector) != self.n:
            raise DimensionError(f"a vector of V has {self.n} entries, not {len(vector)}")
        return vector

    def _require_six(self, what: str) -> None:
        if self.n != 6:
            raise UsageError(f"{what} needs n = 6, not n = {self.n}; use wedge")

    def __str__(self) -> str:
        text = ""
        for value, triple in zip(self.coordinates, subsets(self.n, 3), strict=True):
            if not value:
                continue
            entry = str(self.field.format(value))
            sign, size = ("−", entry[1:]) if entry.startswith("-") else ("+", entry)
            text += f" {sign} " if text else ("−" if sign == "−" else "")
            text += ("" if size == "1" else f"{size}·") + f"e{subset_name(triple)}"
        return text or "0"
