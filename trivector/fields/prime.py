"""The fields F_p for every prime p < 2^63, on python-flint."""

from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass
from functools import lru_cache
from random import Random
from typing import Any

from flint import fmpq, fmpz, fq_default_ctx, nmod, nmod_mat, nmod_poly

from trivector.errors import EntryError, FieldError
from trivector.fields.entries import parse_rational, shorten
from trivector.fields.protocol import ResidueField

__all__ = ["ENOUGH_ELEMENTS", "Identity", "PrimeField", "companion_blocks", "prime_field"]

# A random linear form over a field with q elements is general with
# probability about 1 − c/q; a field with fewer elements is extended, but no
# further than needed, since an extension of degree r costs r^3 times as much.
ENOUGH_ELEMENTS = 64
_LARGEST = 2**63


@dataclass(frozen=True)
class Identity:
    """The reduction of a finite field: the identity, so every rank is exact."""

    field: Any
    exact: bool = True

    @property
    def name(self) -> str:
        return f"over {self.field.name}"

    def rows(self, rows: Iterable[Sequence[Any]]) -> list[list[Any]]:
        return [list(row) for row in rows]

    @property
    def place(self) -> None:
        return None


@dataclass(frozen=True)
class PrimeField:
    """The field with p elements. Make it with `prime_field`.

    Examples
    --------
    >>> from trivector.fields import prime_field
    >>> prime_field(7).element("3/4")
    6
    """

    order: int

    @property
    def name(self) -> str:
        return f"F_{self.order}"

    @property
    def closure_name(self) -> str:
        return f"the algebraic closure of F_{self.order}"

    @property
    def characteristic(self) -> int:
        return self.order

    @property
    def zero(self) -> nmod:
        return nmod(0, self.order)

    @property
    def one(self) -> nmod:
        return nmod(1, self.order)

    def element(self, value: Any) -> nmod:
        if isinstance(value, nmod):
            if value.modulus() != self.order:
                raise EntryError(
                    f"entry {value} is modulo {value.modulus()}, not {self.order}; convert it first"
                )
            return value
        rational = parse_rational(value)
        try:
            return self.from_rational(rational)
        except ZeroDivisionError:
            raise EntryError(
                f"entry {shorten(value)} has a denominator that is 0 modulo {self.order}; "
                "correct the fraction or choose another field"
            ) from None

    def from_rational(self, value: fmpq) -> nmod:
        """The residue of a rational; ZeroDivisionError if p divides its denominator."""
        p = self.order
        numerator = nmod(int(value.p % p), p)
        return numerator if value.q == 1 else numerator / nmod(int(value.q % p), p)

    def format(self, value: nmod) -> int:
        return int(value)

    def sort_key(self, value: nmod) -> int:
        return int(value)

    def random_element(self, rng: Random, *, height: int = 9) -> nmod:
        return nmod(rng.randrange(self.order), self.order)

    def zero_matrix(self, nrows: int, ncols: int) -> nmod_mat:
        return nmod_mat(nrows, ncols, self.order)

    def matrix(self, rows: Sequence[Sequence[Any]], ncols: int) -> nmod_mat:
        return nmod_mat(len(rows), ncols, [x for row in rows for x in row], self.order)

    @property
    def work_factor(self) -> int:
        return 1

    def integral_basis(self, rows: Sequence[Sequence[nmod]]) -> list[list[nmod]]:
        return [list(row) for row in rows]

    def reductions(self) -> Iterator[Identity]:
        yield Identity(self)

    def generic_blocks(self, rng: Random, attempt: int = 0) -> tuple[int, Callable[[], Any]]:
        degree = 1
        while self.order**degree < min(ENOUGH_ELEMENTS, 4 << 2 * attempt):
            degree += 1
        modulus = fq_default_ctx(self.order, degree).modulus().coeffs() if degree > 1 else [0, 1]
        return companion_blocks(self, [self.element(int(c)) for c in modulus], rng)

    def factor(self, coefficients: Sequence[Any]) -> list[tuple[list[Any], int]]:
        _, factors = nmod_poly([int(c) for c in coefficients], self.order).factor()
        found = [(list(f.coeffs()), int(e)) for f, e in factors]
        return sorted(found, key=lambda item: (len(item[0]), [int(c) for c in item[0]]))

    def from_code(self, code: int) -> nmod:
        """The element with a given `sort_key`."""
        return nmod(code, self.order)

    def operation_tables(self) -> tuple[Any, Any]:
        """(add, multiply), the p×p tables of codes, as numpy arrays of uint16."""
        import numpy as np

        codes = np.arange(self.order, dtype=np.int64)
        add = (codes[:, None] + codes[None, :]) % self.order
        multiply = codes[:, None] * codes[None, :] % self.order
        return add.astype(np.uint16), multiply.astype(np.uint16)

    def residue_field(self, modulus: Sequence[Any]) -> ResidueField:
        if len(modulus) == 2:
            return ResidueField(self, self.element, -modulus[0])
        # Extension fields stand on prime fields, so they are imported when asked for.
        from trivector.fields.finite import ExtensionField

        field = ExtensionField(self.order, tuple(int(c) for c in modulus))
        return ResidueField(field, lambda c: field.element(int(c)), field.generator)

    def extension(self, degree: int) -> ResidueField:
        """The extension of this degree, by the polynomial of python-flint's table."""
        if degree == 1:
            return ResidueField(self, self.element, self.zero)
        modulus = fq_default_ctx(self.order, degree).modulus().coeffs()
        return self.residue_field([self.element(int(c)) for c in modulus])

    @property
    def reconstructs(self) -> bool:
        return False

    def to_spec(self) -> str:
        return self.name

    def definition(self) -> dict[str, Any]:
        return {"characteristic": self.order}

    def numbers(self, value: nmod) -> int:
        return int(value)

    def __repr__(self) -> str:
        return self.name


def companion_blocks(
    field: Any, modulus: Sequence[Any], rng: Random
) -> tuple[int, Callable[[], Any]]:
    """Random elements of k[x]/(modulus), as the matrices by which they multiply.

    ``modulus`` is monic and irreducible over ``field``, constant term first.
    """
    degree = len(modulus) - 1
    companion = [
        [field.one if j == i + 1 else field.zero for j in range(degree)] for i in range(degree)
    ]
    companion[degree - 1] = [-c for c in modulus[:degree]]
    step = field.matrix(companion, degree)

    def draw() -> Any:
        # Row i is (random element)·x^i, so each row is the one before times x.
        rows = field.matrix([[field.random_element(rng) for _ in range(degree)]], degree)
        powers = [rows]
        while len(powers) < degree:
            powers.append(powers[-1] * step)
        return field.matrix([row for power in powers for row in power.tolist()], degree)

    return degree, draw


@lru_cache(maxsize=256)
def prime_field(p: int) -> PrimeField:
    """The field with p elements.

    Parameters
    ----------
    p : int
        A prime, 2 and 3 included, less than 2^63.

    Raises
    ------
    FieldError
        If p is not a prime (its factors are named) or too large.
    """
    if p >= _LARGEST:
        raise FieldError(
            f"field F_{shorten(p)}: the prime must be less than 2^63; use a smaller one"
        )
    if p < 2 or not fmpz(p).is_prime():
        advice = 'write "Q" for characteristic 0' if p == 0 else "use a prime"
        raise FieldError(f"field F_{p}: {p} is not a prime{_factors(p)}; {advice}")
    return PrimeField(p)


def _factors(n: int) -> str:
    if n < 4:
        return ""
    powers = (f"{q}^{e}" if e > 1 else str(q) for q, e in fmpz(n).factor())
    return f" ({n} = {'·'.join(powers)})"
