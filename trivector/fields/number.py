"""Number fields ℚ(a), a a root of an irreducible polynomial."""

from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property, lru_cache
from random import Random
from typing import Any

from flint import fmpq, fmpq_poly, fmpz, nmod, nmod_poly

from trivector.errors import BadReductionError, FieldError
from trivector.fields.entries import parse_rational, shorten
from trivector.fields.matrices import ScalarMatrix
from trivector.fields.polynomials import format_polynomial, parse_modulus, parse_polynomial
from trivector.fields.prime import PrimeField, prime_field
from trivector.fields.protocol import ResidueField
from trivector.fields.rationals import QQ

__all__ = ["NumberElement", "NumberField", "PlaceReduction", "number_field"]

_FIRST_PRIME_BOUND = 2**31


class NumberElement:
    """An element of ℚ(a): a polynomial in a of degree below that of the modulus."""

    __slots__ = ("modulus", "value")

    def __init__(self, value: fmpq_poly, modulus: fmpq_poly) -> None:
        self.value = value
        self.modulus = modulus

    def _like(self, value: fmpq_poly) -> "NumberElement":
        return NumberElement(value, self.modulus)

    def __add__(self, other: Any) -> "NumberElement":
        if not isinstance(other, _OPERANDS):
            return NotImplemented
        return self._like(self.value + _plain(other))

    def __sub__(self, other: Any) -> "NumberElement":
        if not isinstance(other, _OPERANDS):
            return NotImplemented
        return self._like(self.value - _plain(other))

    def __rsub__(self, other: Any) -> "NumberElement":
        if not isinstance(other, _OPERANDS):
            return NotImplemented
        return self._like(_plain(other) - self.value)

    def __mul__(self, other: Any) -> "NumberElement":
        if not isinstance(other, _OPERANDS):
            return NotImplemented
        return self._like(self.value * _plain(other) % self.modulus)

    __radd__ = __add__
    __rmul__ = __mul__

    def __truediv__(self, other: Any) -> "NumberElement":
        if not isinstance(other, _OPERANDS):
            return NotImplemented
        divisor = _plain(other)
        if not divisor:
            raise ZeroDivisionError("division by zero in a number field")
        if not isinstance(divisor, fmpq_poly) or divisor.degree() == 0:
            return self._like(self.value * (fmpq(1) / fmpq_poly(divisor)[0]))
        _, inverse, _ = divisor.xgcd(self.modulus)
        return self._like(self.value * inverse % self.modulus)

    def __neg__(self) -> "NumberElement":
        return self._like(-self.value)

    def __bool__(self) -> bool:
        return bool(self.value)

    def __eq__(self, other: object) -> bool:
        if isinstance(other, _OPERANDS):
            return bool(self.value == _plain(other))
        return NotImplemented

    def __hash__(self) -> int:
        return hash(tuple(self.value.coeffs()))

    def __repr__(self) -> str:
        return format_polynomial(self.value.coeffs(), "a")


_OPERANDS = (NumberElement, int, fmpq)


def _plain(value: Any) -> Any:
    return value.value if isinstance(value, NumberElement) else value


@dataclass(frozen=True)
class PlaceReduction:
    """Reduction at a prime ideal of degree 1: modulo p, with a ↦ ``root``.

    ``root`` is a simple root of the modulus modulo p, so the ideal
    (p, a − root) is unramified with residue field F_p, and ranks only drop.
    """

    prime: int
    root: int
    exact: bool = False

    @cached_property
    def field(self) -> PrimeField:
        return prime_field(self.prime)

    @property
    def name(self) -> str:
        return f"modulo the prime ideal ({self.prime}, a − {self.root})"

    def rows(self, rows: Iterable[Sequence[Any]]) -> list[list[Any]]:
        try:
            return [[self._reduce(value) for value in row] for row in rows]
        except ZeroDivisionError as error:
            raise BadReductionError(
                f"a denominator is divisible by {self.prime}; use another prime"
            ) from error

    @property
    def place(self) -> dict[str, int]:
        return {"prime": self.prime, "root": self.root}

    def _reduce(self, value: NumberElement) -> nmod:
        total = nmod(0, self.prime)
        for coefficient in reversed(value.value.coeffs()):
            total = total * self.root + self.field.from_rational(coefficient)
        return total


@dataclass(frozen=True)
class NumberField:
    """ℚ(a) with a root a of an irreducible polynomial. Make it with `number_field`.

    Parameters
    ----------
    modulus : tuple of fmpq
        Coefficients of the monic polynomial, constant first.

    Examples
    --------
    >>> from trivector.fields import number_field
    >>> K = number_field("x^2+1")
    >>> K.element("2*a+1") * K.element("a/2")
    1/2*a-1
    """

    modulus: tuple[fmpq, ...]
    characteristic: int = 0
    order: None = None

    @property
    def degree(self) -> int:
        """The degree over ℚ."""
        return len(self.modulus) - 1

    @property
    def modulus_text(self) -> str:
        """The defining polynomial, as files write it."""
        return format_polynomial(self.modulus, "x")

    @property
    def name(self) -> str:
        return f"Q(a), {format_polynomial(self.modulus, 'a')} = 0"

    @property
    def closure_name(self) -> str:
        return "the algebraic closure of Q"

    @cached_property
    def polynomial(self) -> fmpq_poly:
        """The modulus as a polynomial of python-flint."""
        return fmpq_poly(list(self.modulus))

    @cached_property
    def zero(self) -> NumberElement:
        return NumberElement(fmpq_poly([0]), self.polynomial)

    @cached_property
    def one(self) -> NumberElement:
        return NumberElement(fmpq_poly([1]), self.polynomial)

    @cached_property
    def generator(self) -> NumberElement:
        """The root a of the modulus."""
        return self.from_coefficients([0, 1])

    def element(self, value: Any) -> NumberElement:
        if isinstance(value, NumberElement):
            return value
        if isinstance(value, str) and any(c.isalpha() for c in value):
            return NumberElement(parse_polynomial(value, "a") % self.polynomial, self.polynomial)
        return NumberElement(fmpq_poly([parse_rational(value)]), self.polynomial)

    def from_coefficients(self, coefficients: Sequence[Any]) -> NumberElement:
        """Σ c_i·a^i, reduced."""
        return NumberElement(fmpq_poly(list(coefficients)) % self.polynomial, self.polynomial)

    def coefficients(self, value: NumberElement) -> list[fmpq]:
        """The c_i of Σ c_i·a^i, as many as the degree of the field."""
        found = list(value.value.coeffs())
        return found + [fmpq(0)] * (self.degree - len(found))

    def format(self, value: NumberElement) -> int | str:
        coefficients = value.value.coeffs()
        if len(coefficients) > 1:
            return format_polynomial(coefficients, "a")
        constant = coefficients[0] if coefficients else fmpq(0)
        return int(constant.p) if constant.q == 1 else str(constant)

    def sort_key(self, value: NumberElement) -> tuple[fmpq, ...]:
        return tuple(reversed(self.coefficients(value)))

    def random_element(self, rng: Random, *, height: int = 9) -> NumberElement:
        return self.from_coefficients([rng.randint(-height, height) for _ in range(self.degree)])

    def zero_matrix(self, nrows: int, ncols: int) -> ScalarMatrix:
        return ScalarMatrix(nrows, ncols, self.zero, self.one)

    def matrix(self, rows: Sequence[Sequence[Any]], ncols: int) -> ScalarMatrix:
        matrix = self.zero_matrix(len(rows), ncols)
        for i, row in enumerate(rows):
            for j, value in enumerate(row):
                matrix[i, j] = self.element(value)
        return matrix

    @property
    def work_factor(self) -> int:
        return 4

    def integral_basis(self, rows: Sequence[Sequence[Any]]) -> list[list[Any]]:
        return [list(row) for row in rows]

    def reductions(self) -> Iterator[PlaceReduction]:
        denominator = self.polynomial.denom()
        candidate = _FIRST_PRIME_BOUND - 1
        while candidate > 2:
            if fmpz(candidate).is_prime() and denominator % candidate:
                numerator = [int(c) for c in self.polynomial.numer().coeffs()]
                for factor, exponent in nmod_poly(numerator, candidate).factor()[1]:
                    if exponent == 1 and factor.degree() == 1:
                        yield PlaceReduction(candidate, int(-factor[0] / factor[1]))
                        break
            candidate -= 2

    def generic_blocks(self, rng: Random, attempt: int = 0) -> tuple[int, Callable[[], Any]]:
        return 1, lambda: self.matrix([[rng.randint(-(10**6), 10**6)]], 1)

    def factor(self, coefficients: Sequence[Any]) -> list[tuple[list[Any], int]]:
        """By sympy, in the algebraic field of the first root of the modulus."""
        from sympy import QQ, CRootOf, Poly, Symbol

        t = Symbol("t")
        modulus = Poly([str(c) for c in reversed(self.modulus)], t)
        domain = QQ.algebraic_field(CRootOf(modulus, 0))

        def to_domain(value: NumberElement) -> Any:
            return domain([QQ(int(c.p), int(c.q)) for c in reversed(self.coefficients(value))])

        polynomial = Poly.from_list(
            [to_domain(self.element(c)) for c in reversed(coefficients)], t, domain=domain
        )
        found = []
        for factor, exponent in polynomial.factor_list()[1]:
            values = [
                self.from_coefficients(
                    [fmpq(int(c.numerator), int(c.denominator)) for c in reversed(value.to_list())]
                )
                for value in reversed(factor.rep.to_list())
            ]
            found.append(([value / values[-1] for value in values], int(exponent)))
        return sorted(found, key=lambda i: (len(i[0]), [self.sort_key(c) for c in i[0]]))

    def residue_field(self, modulus: Sequence[Any]) -> ResidueField | None:
        if len(modulus) == 2:
            return ResidueField(self, self.element, -modulus[0])
        return None

    @property
    def reconstructs(self) -> bool:
        return False

    def to_spec(self) -> dict[str, str]:
        return {"modulus": self.modulus_text}

    def definition(self) -> dict[str, Any]:
        return {"modulus": [QQ.format(c) for c in self.modulus]}

    def numbers(self, value: NumberElement) -> list[int | str]:
        return [QQ.format(c) for c in self.coefficients(value)]

    def __repr__(self) -> str:
        return self.name


@lru_cache(maxsize=256)
def number_field(modulus: str) -> NumberField:
    """The field ℚ(a), a a root of an irreducible polynomial in x.

    Raises
    ------
    FieldError
        If the polynomial is reducible over ℚ (its factors are named) or of degree 1.
    """
    polynomial = parse_modulus(modulus)
    _, factors = polynomial.factor()
    if len(factors) > 1 or factors[0][1] > 1:
        text = "·".join(
            f"({format_polynomial(f.coeffs(), 'x')})" + (f"^{e}" if e > 1 else "")
            for f, e in factors
        )
        raise FieldError(
            f"modulus {shorten(modulus)} is reducible over Q: {text}; use an irreducible one"
        )
    if polynomial.degree() == 1:
        raise FieldError(f'modulus {shorten(modulus)} has degree 1; write "field": "Q"')
    leading = polynomial[polynomial.degree()]
    return NumberField(tuple(fmpq(c) / leading for c in polynomial.coeffs()))
