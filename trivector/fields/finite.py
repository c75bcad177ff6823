"""The fields F_q, q = p^r with r > 1, each with its defining polynomial.

The only module that builds a non-prime finite field. Scalars wrap those of
python-flint; up to `LARGEST_TABLE` elements, matrices go by tables of codes.
The code of Σ c_i·a^i is Σ c_i·p^i, so 0 and 1 have the codes 0 and 1.
"""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property, lru_cache
from random import Random
from typing import TYPE_CHECKING, Any

from flint import (
    fmpq,
    fmpz,
    fmpz_mod_ctx,
    fmpz_mod_poly_ctx,
    fq_default,
    fq_default_ctx,
    fq_default_poly_ctx,
)

from trivector.errors import EntryError, FieldError
from trivector.fields.entries import parse_rational, shorten
from trivector.fields.matrices import ScalarMatrix, TableMatrix
from trivector.fields.polynomials import format_polynomial, parse_modulus, parse_polynomial
from trivector.fields.prime import ENOUGH_ELEMENTS, Identity, companion_blocks, prime_field
from trivector.fields.protocol import ResidueField

if TYPE_CHECKING:
    import numpy as np

__all__ = [
    "LARGEST_TABLE",
    "ExtensionField",
    "FieldTables",
    "FiniteElement",
    "finite_field",
    "finite_field_modulo",
]

LARGEST_TABLE = 1024
"""The largest order for which tables of all sums and products are kept."""


_LARGEST_CONWAY = 2**16
"""Below it python-flint's table of Conway polynomials has no gaps."""


class FiniteElement:
    """An element of F_q: python-flint's, with the truth value of a number."""

    __slots__ = ("value",)

    def __init__(self, value: fq_default) -> None:
        self.value = value

    def __add__(self, other: Any) -> "FiniteElement":
        if not isinstance(other, _OPERANDS):
            return NotImplemented
        return FiniteElement(self.value + _plain(other))

    def __sub__(self, other: Any) -> "FiniteElement":
        if not isinstance(other, _OPERANDS):
            return NotImplemented
        return FiniteElement(self.value - _plain(other))

    def __mul__(self, other: Any) -> "FiniteElement":
        if not isinstance(other, _OPERANDS):
            return NotImplemented
        return FiniteElement(self.value * _plain(other))

    def __truediv__(self, other: Any) -> "FiniteElement":
        if not isinstance(other, _OPERANDS):
            return NotImplemented
        divisor = _plain(other)
        if divisor == 0:
            raise ZeroDivisionError("division by zero in a finite field")
        return FiniteElement(self.value / divisor)

    def __rsub__(self, other: Any) -> "FiniteElement":
        if not isinstance(other, _OPERANDS):
            return NotImplemented
        return FiniteElement(_plain(other) - self.value)

    __radd__ = __add__
    __rmul__ = __mul__

    def __pow__(self, exponent: int) -> "FiniteElement":
        return FiniteElement(self.value**exponent)

    def __neg__(self) -> "FiniteElement":
        return FiniteElement(-self.value)

    def __bool__(self) -> bool:
        return not self.value.is_zero()

    def __eq__(self, other: object) -> bool:
        if isinstance(other, _OPERANDS):
            return bool(self.value == _plain(other))
        return NotImplemented

    def __hash__(self) -> int:
        return hash(self.value)

    def __repr__(self) -> str:
        return str(self.value)


_OPERANDS = (FiniteElement, int)


def _plain(value: Any) -> Any:
    return value.value if isinstance(value, FiniteElement) else value


@dataclass(frozen=True)
class FieldTables:
    """All sums, products, negatives and inverses, by codes 0 … q−1.

    ``add`` and ``multiply`` are q×q arrays of uint16, ``negative`` and
    ``inverse`` are vectors; the inverse of 0 is given as 0.
    """

    elements: tuple[Any, ...]
    code: Callable[[Any], int]
    add: "np.ndarray[Any, Any]"
    multiply: "np.ndarray[Any, Any]"
    negative: "np.ndarray[Any, Any]"
    inverse: "np.ndarray[Any, Any]"


@dataclass(frozen=True)
class ExtensionField:
    """F_q as F_p[a]/(modulus). Make it with `finite_field` or `finite_field_modulo`.

    Parameters
    ----------
    characteristic : int
    modulus : tuple of int
        Coefficients 0 … p−1 of the monic irreducible polynomial, constant first.

    Examples
    --------
    >>> from trivector.fields import finite_field
    >>> F9 = finite_field(9)
    >>> F9.modulus_text, F9.format(F9.element("a") * F9.element("a+1"))
    ('x^2+2*x+2', '2*a+1')
    """

    characteristic: int
    modulus: tuple[int, ...]

    @property
    def degree(self) -> int:
        """r, the degree over the prime field."""
        return len(self.modulus) - 1

    @cached_property
    def order(self) -> int:
        return int(self.characteristic**self.degree)

    @property
    def name(self) -> str:
        p, r = self.characteristic, self.degree
        return f"F_{self.order}" if self.order < 10**12 else f"F_{p}^{r}"

    @property
    def closure_name(self) -> str:
        return f"the algebraic closure of F_{self.characteristic}"

    @property
    def modulus_text(self) -> str:
        """The defining polynomial, as files write it."""
        return format_polynomial(self.modulus, "x")

    @cached_property
    def context(self) -> fq_default_ctx:
        """The field of python-flint with the same polynomial."""
        ring = fmpz_mod_poly_ctx(fmpz_mod_ctx(self.characteristic))
        return fq_default_ctx(modulus=ring(list(self.modulus)), var="a")

    @cached_property
    def zero(self) -> FiniteElement:
        return FiniteElement(self.context.zero())

    @cached_property
    def one(self) -> FiniteElement:
        return FiniteElement(self.context.one())

    @cached_property
    def generator(self) -> FiniteElement:
        """The root a of the modulus."""
        return self.from_coefficients([0, 1])

    def element(self, value: Any) -> FiniteElement:
        if isinstance(value, FiniteElement):
            return value
        if isinstance(value, str) and any(c.isalpha() for c in value):
            result = self.zero
            for coefficient in reversed(parse_polynomial(value, "a").coeffs()):
                result = result * self.generator + self._from_rational(coefficient, value)
            return result
        return self._from_rational(parse_rational(value), value)

    def _from_rational(self, rational: fmpq, original: object) -> FiniteElement:
        p = self.characteristic
        if rational.q % p == 0:
            raise EntryError(
                f"entry {shorten(original)} has a denominator that is 0 modulo {p}; "
                "correct the fraction or choose another field"
            )
        numerator = self.from_coefficients([int(rational.p % p)])
        return numerator / self.from_coefficients([int(rational.q % p)])

    def from_coefficients(self, coefficients: Sequence[int]) -> FiniteElement:
        """Σ c_i·a^i."""
        ints = [int(c) for c in coefficients]
        # The stubs of python-flint leave out lists, which its documentation names.
        return FiniteElement(self.context(ints))  # type: ignore[arg-type]

    def coefficients(self, value: FiniteElement) -> list[int]:
        """The c_i of Σ c_i·a^i, r of them."""
        found = [int(c) for c in value.value.to_list()]
        return found + [0] * (self.degree - len(found))

    def format(self, value: FiniteElement) -> int | str:
        coefficients = self.coefficients(value)
        if not any(coefficients[1:]):
            return coefficients[0]
        return format_polynomial(coefficients, "a")

    def sort_key(self, value: FiniteElement) -> int:
        code = 0
        for coefficient in reversed(value.value.to_list()):
            code = code * self.characteristic + int(coefficient)
        return code

    def from_code(self, code: int) -> FiniteElement:
        """The element with a given `sort_key`."""
        digits = []
        for _ in range(self.degree):
            code, digit = divmod(code, self.characteristic)
            digits.append(digit)
        return self.from_coefficients(digits)

    def random_element(self, rng: Random, *, height: int = 9) -> FiniteElement:
        return self.from_code(rng.randrange(self.order))

    def zero_matrix(self, nrows: int, ncols: int) -> Any:
        if self.order <= LARGEST_TABLE:
            return TableMatrix.zeros(self.tables, nrows, ncols)
        return ScalarMatrix(nrows, ncols, self.zero, self.one)

    def matrix(self, rows: Sequence[Sequence[Any]], ncols: int) -> Any:
        elements = [[self.element(x) for x in row] for row in rows]
        if self.order <= LARGEST_TABLE:
            return TableMatrix.from_rows(self.tables, elements, ncols)
        matrix = ScalarMatrix(len(rows), ncols, self.zero, self.one)
        for i, row in enumerate(elements):
            for j, value in enumerate(row):
                matrix[i, j] = value
        return matrix

    @property
    def work_factor(self) -> int:
        return 2 if self.order <= LARGEST_TABLE else 8

    def integral_basis(self, rows: Sequence[Sequence[Any]]) -> list[list[Any]]:
        return [list(row) for row in rows]

    def reductions(self) -> Iterator[Identity]:
        yield Identity(self)

    def generic_blocks(self, rng: Random, attempt: int = 0) -> tuple[int, Callable[[], Any]]:
        degree = 1
        while self.order**degree < min(ENOUGH_ELEMENTS, 4 << 2 * attempt):
            degree += 1
        return companion_blocks(self, self._irreducible(degree, rng), rng)

    def _irreducible(self, degree: int, rng: Random) -> list[FiniteElement]:
        """A random monic irreducible polynomial over this field."""
        while True:
            candidate = [*(self.random_element(rng) for _ in range(degree)), self.one]
            factors = self.factor(candidate)
            if len(factors) == 1 and factors[0][1] == 1:
                return candidate

    def factor(self, coefficients: Sequence[Any]) -> list[tuple[list[Any], int]]:
        ring = fq_default_poly_ctx(self.context)
        # The stubs of python-flint leave out lists, which its documentation names.
        values: Any = [c.value for c in coefficients]
        _, factors = ring(values).factor()
        found = [([FiniteElement(c) for c in f.coeffs()], int(e)) for f, e in factors]
        return sorted(found, key=lambda item: (len(item[0]), [self.sort_key(c) for c in item[0]]))

    @cached_property
    def tables(self) -> FieldTables:
        """The tables of a field with at most `LARGEST_TABLE` elements."""
        import numpy as np

        if self.order > LARGEST_TABLE:
            raise FieldError(
                f"field {self.name} has more than {LARGEST_TABLE} elements, the limit for tables"
            )
        p, q = self.characteristic, self.order
        elements = tuple(self.from_code(code) for code in range(q))
        codes = {element.value: code for code, element in enumerate(elements)}
        digits = np.array([[code // p**i % p for i in range(self.degree)] for code in range(q)])
        weights = np.array([p**i for i in range(self.degree)])
        add = ((digits[:, None, :] + digits[None, :, :]) % p) @ weights
        negative = ((-digits) % p) @ weights
        powers, logarithm = self._powers(elements, codes)
        multiply = np.zeros((q, q), dtype=np.uint16)
        exponents = (logarithm[1:, None] + logarithm[None, 1:]) % (q - 1)
        multiply[1:, 1:] = powers[exponents]
        inverse = np.zeros(q, dtype=np.uint16)
        inverse[1:] = powers[-logarithm[1:] % (q - 1)]
        return FieldTables(
            elements,
            lambda element: codes[element.value],
            add.astype(np.uint16),
            multiply,
            negative.astype(np.uint16),
            inverse,
        )

    def _powers(self, elements: Sequence[Any], codes: dict[fq_default, int]) -> tuple[Any, Any]:
        """Codes of the powers of a primitive element, and the logarithms of all codes."""
        import numpy as np

        q = self.order
        primes = [prime for prime, _ in fmpz(q - 1).factor()]
        primitive = next(
            x for x in elements[2:] if all(x ** ((q - 1) // int(r)) != self.one for r in primes)
        )
        powers = np.zeros(q - 1, dtype=np.int64)
        logarithm = np.zeros(q, dtype=np.int64)
        value = self.one
        for exponent in range(q - 1):
            code = codes[value.value]
            powers[exponent] = code
            logarithm[code] = exponent
            value = value * primitive
        return powers, logarithm

    def operation_tables(self) -> tuple[Any, Any]:
        """(add, multiply), the q×q tables of codes."""
        return self.tables.add, self.tables.multiply

    def galois_class(self) -> Any:
        """The same field as a class of arrays of the library galois, for vectorised work.

        Codes are its integer representation, so ``galois_class()(codes)`` converts.
        """
        import galois

        polynomial = galois.Poly(list(reversed(self.modulus)), field=galois.GF(self.characteristic))
        return galois.GF(self.characteristic, self.degree, irreducible_poly=polynomial)

    def residue_field(self, modulus: Sequence[Any]) -> ResidueField:
        if len(modulus) == 2:
            return ResidueField(self, self.element, -modulus[0])
        absolute = fq_default_ctx(self.characteristic, self.degree * (len(modulus) - 1)).modulus()
        field = ExtensionField(self.characteristic, tuple(int(c) for c in absolute.coeffs()))
        image = field.root([field.element(c) for c in self.modulus])

        def embed(value: FiniteElement) -> FiniteElement:
            total = field.zero
            for coefficient in reversed(self.coefficients(value)):
                total = total * image + coefficient
            return total

        return ResidueField(field, embed, field.root([embed(c) for c in modulus]))

    def extension(self, degree: int) -> ResidueField:
        """The extension of this degree, by an irreducible polynomial that is always the same."""
        return self.residue_field(self._irreducible(degree, Random(0)))

    def root(self, coefficients: Sequence[Any]) -> FiniteElement:
        """The first root, by `sort_key`, of a polynomial that has one in this field."""
        roots = [-f[0] for f, _ in self.factor(coefficients) if len(f) == 2]
        first: FiniteElement = min(roots, key=self.sort_key)
        return first

    @property
    def reconstructs(self) -> bool:
        return False

    def to_spec(self) -> dict[str, Any]:
        return {"characteristic": self.characteristic, "modulus": self.modulus_text}

    def definition(self) -> dict[str, Any]:
        return {"characteristic": self.characteristic, "modulus": list(self.modulus)}

    def numbers(self, value: FiniteElement) -> list[int]:
        return self.coefficients(value)

    def __hash__(self) -> int:
        return hash((self.characteristic, self.modulus))

    def __repr__(self) -> str:
        return f"{self.name} with a root a of {self.modulus_text}"


@lru_cache(maxsize=256)
def finite_field(order: int) -> Any:
    """The field with q elements; for r > 1 with the Conway polynomial.

    Parameters
    ----------
    order : int
        A prime below 2^63, or a prime power up to 2^16.

    Raises
    ------
    FieldError
        If q is neither; for a larger prime power the message says how to
        give a polynomial.
    """
    factors = fmpz(order).factor() if 1 < order < 2**100 else []
    if len(factors) != 1 or factors[0][1] == 1:
        return prime_field(order)
    p, r = int(factors[0][0]), int(factors[0][1])
    if order > _LARGEST_CONWAY:
        raise FieldError(
            f"field F_{order}: by its order alone a field has at most {_LARGEST_CONWAY} elements; "
            f'write {{"characteristic": {p}, "modulus": "x^{r}+…"}}'
        )
    context = fq_default_ctx(p, r)
    return ExtensionField(p, tuple(int(c) for c in context.modulus().coeffs()))


def finite_field_modulo(p: int, modulus: str) -> Any:
    """The field F_p[a]/(modulus).

    Raises
    ------
    FieldError
        If p is not a prime, or the polynomial is reducible over F_p (its
        factors are named), or not over F_p.
    """
    prime = prime_field(p)
    try:
        polynomial = [prime.element(c) for c in parse_modulus(modulus).coeffs()]
    except EntryError:
        raise FieldError(
            f"modulus {shorten(modulus)} is not over F_{p}: a denominator is 0; multiply it out"
        ) from None
    while polynomial and not polynomial[-1]:
        polynomial.pop()
    if len(polynomial) < 2:
        raise FieldError(f"modulus {shorten(modulus)} is constant over F_{p}; give degree ≥ 2")
    monic = [c / polynomial[-1] for c in polynomial]
    factors = prime.factor(monic)
    if len(factors) > 1 or factors[0][1] > 1:
        text = "·".join(
            f"({format_polynomial(f, 'x')})" + (f"^{e}" if e > 1 else "") for f, e in factors
        )
        raise FieldError(
            f"modulus {shorten(modulus)} is reducible over F_{p}: {text}; use an irreducible one"
        )
    if len(monic) == 2:
        return prime
    return ExtensionField(p, tuple(int(c) for c in monic))
