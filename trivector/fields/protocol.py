"""The one protocol behind which every field stands.

Scalars are objects with the usual operators; matrices are objects with
row reduction. python-flint supplies both for ℚ and F_p. Nothing outside this
room asks which field it is working over: what differs from field to field is
a method here.
"""

from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass
from random import Random
from typing import Any, Protocol

__all__ = ["Field", "FiniteField", "Matrix", "Reduction", "ResidueField", "Scalar"]


class Scalar(Protocol):
    """An element of a field. Immutable, hashable, exact.

    The results are ``Any`` because the libraries' scalar types share their
    operators but no common base.
    """

    def __add__(self, other: Any, /) -> Any: ...
    def __sub__(self, other: Any, /) -> Any: ...
    def __mul__(self, other: Any, /) -> Any: ...
    def __truediv__(self, other: Any, /) -> Any: ...
    def __neg__(self) -> Any: ...
    def __bool__(self) -> bool: ...


class Matrix(Protocol):
    """A dense matrix over a field, with the interface of python-flint's.

    It multiplies with matrices and, from the right, with scalars.
    """

    def nrows(self) -> int: ...
    def ncols(self) -> int: ...
    def __getitem__(self, index: tuple[int, int], /) -> Any: ...
    def __setitem__(self, index: tuple[int, int], value: Any, /) -> None: ...
    def __add__(self, other: Any, /) -> Any: ...
    def __mul__(self, other: Any, /) -> Any: ...
    def transpose(self) -> Any: ...
    def tolist(self) -> list[list[Any]]: ...
    def rank(self) -> int: ...
    def rref(self) -> tuple[Any, int]: ...
    def det(self) -> Any: ...


class Reduction(Protocol):
    """A ring homomorphism onto a field in which ranks are cheap.

    For a finite field it is the identity and ``exact`` is true. For ℚ it is
    reduction modulo a prime: ranks can only drop under it.
    """

    @property
    def field(self) -> "Field": ...
    @property
    def exact(self) -> bool: ...
    @property
    def name(self) -> str: ...
    def rows(self, rows: Iterable[Sequence[Any]]) -> list[list[Any]]:
        """Map rows of scalars; `BadReductionError` if one is not integral."""
        ...

    @property
    def place(self) -> dict[str, int] | None:
        """As a certificate names it: prime, and root of the modulus; None for the identity."""
        ...


@dataclass(frozen=True)
class ResidueField:
    """An extension K of k: the field, the map k → K, and θ ∈ K."""

    field: "Field"
    embed: Callable[[Any], Any]
    root: Any

    def value(self, coefficients: Sequence[Any]) -> Any:
        """Σ c_i·θ^i for c_i in k."""
        total = self.field.zero
        for coefficient in reversed(coefficients):
            total = total * self.root + self.embed(coefficient)
        return total


class Field(Protocol):
    """A field with exact arithmetic."""

    @property
    def name(self) -> str:
        """The short name used in files and reports: ``"Q"``, ``"F_7"``."""
        ...

    @property
    def closure_name(self) -> str:
        """The name of the algebraic closure, for statements about it."""
        ...

    @property
    def characteristic(self) -> int: ...
    @property
    def order(self) -> int | None:
        """The number of elements; None for an infinite field."""
        ...

    @property
    def zero(self) -> Any: ...
    @property
    def one(self) -> Any: ...

    def element(self, value: Any) -> Any:
        """An int, an entry of a file, or an element, as an element."""
        ...

    def format(self, value: Any) -> int | str:
        """The entry that stands for an element in a JSON document."""
        ...

    def sort_key(self, value: Any) -> Any:
        """A key that orders the elements, the same on every machine."""
        ...

    def random_element(self, rng: Random, *, height: int = 9) -> Any:
        """Uniform over a finite field; an integer of size ≤ height over ℚ."""
        ...

    def zero_matrix(self, nrows: int, ncols: int) -> Any: ...

    def matrix(self, rows: Sequence[Sequence[Any]], ncols: int) -> Any:
        """The matrix with these rows of scalars (or ints)."""
        ...

    @property
    def work_factor(self) -> int:
        """How many times narrower matrices must be than python-flint's to cost the same."""
        ...

    def integral_basis(self, rows: Sequence[Sequence[Any]]) -> list[list[Any]]:
        """Another basis of the row space whose entries are as small as may be.

        Over ℚ: a reduced basis of the lattice of integer points of the row
        space. Over a finite field: the rows as they are.
        """
        ...

    def reductions(self) -> Iterator[Reduction]:
        """Reductions in the order in which they should be tried."""
        ...

    def generic_blocks(self, rng: Random, attempt: int = 0) -> tuple[int, Callable[[], Any]]:
        """Random scalars of an extension field; later attempts use larger ones.

        Returns
        -------
        degree : int
            The degree r of the extension.
        draw : callable
            Each call gives the r×r matrix over this field by which a random
            element of the extension multiplies.
        """
        ...

    def factor(self, coefficients: Sequence[Any]) -> list[tuple[list[Any], int]]:
        """The monic irreducible factors of Σ c_i·t^i with multiplicities.

        Sorted by degree, then by coefficients; the leading coefficient of the
        polynomial is dropped.
        """
        ...

    def residue_field(self, modulus: Sequence[Any]) -> "ResidueField | None":
        """The extension k(θ), θ a root of a monic irreducible polynomial over k.

        None where the extension cannot be represented (over number fields).
        """
        ...

    @property
    def reconstructs(self) -> bool:
        """Whether elements can be found from their residues modulo many primes."""
        ...

    def to_spec(self) -> str | dict[str, Any]:
        """What stands under ``"field"`` in a document."""
        ...

    def definition(self) -> dict[str, Any]:
        """What stands under ``"field"`` in a certificate: characteristic and modulus as numbers."""
        ...

    def numbers(self, value: Any) -> Any:
        """An element in a certificate: an int, ``"p/q"``, or the list of its coefficients in a."""
        ...


class FiniteField(Field, Protocol):
    """A finite field: its elements have codes 0 … q−1, which are their sort keys."""

    def from_code(self, code: int) -> Any: ...

    def extension(self, degree: int) -> ResidueField:
        """An extension of this degree; of a prime field by a Conway polynomial, up to 2^16."""
        ...

    def operation_tables(self) -> tuple[Any, Any]:
        """(add, multiply): q×q tables of codes, numpy arrays of uint16."""
        ...
