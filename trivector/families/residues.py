"""The extension k[t]/(m) of any field k, kept as polynomials in t.

Planes at points that are not rational are computed here, because the
coefficients by powers of t are what spans a Lagrangian over k.
"""

from collections.abc import Sequence
from typing import Any

from trivector.fields.protocol import Field

__all__ = ["Residue", "ResidueRing"]


class ResidueRing:
    """k[t]/(m) for a monic irreducible m over k, its constant term first.

    Examples
    --------
    >>> from trivector.fields import prime_field
    >>> F7 = prime_field(7)
    >>> gaussian = ResidueRing(F7, [F7.one, F7.zero, F7.one])
    >>> t = gaussian.residue([F7.zero, F7.one])
    >>> (t * t).coefficients, (gaussian.one / t + t).coefficients
    ((6, 0), (0, 0))
    """

    def __init__(self, field: Field, modulus: Sequence[Any]) -> None:
        self.field = field
        self.modulus = tuple(modulus)
        self.degree = len(modulus) - 1
        self.zero = self.residue([])
        self.one = self.lift(field.one)

    def residue(self, coefficients: Sequence[Any]) -> "Residue":
        """Σ c_i·t^i, reduced."""
        values = list(coefficients)
        for top in range(len(values) - 1, self.degree - 1, -1):
            leading = values[top]
            if leading:
                for i in range(self.degree):
                    position = top - self.degree + i
                    values[position] = values[position] - leading * self.modulus[i]
        values = values[: self.degree]
        values += [self.field.zero] * (self.degree - len(values))
        return Residue(self, tuple(values))

    def lift(self, value: Any) -> "Residue":
        """An element of k."""
        return self.residue([value])


class Residue:
    """An element of a `ResidueRing`, with the operators of a field."""

    __slots__ = ("coefficients", "ring")

    def __init__(self, ring: ResidueRing, coefficients: tuple[Any, ...]) -> None:
        self.ring = ring
        self.coefficients = coefficients

    def __bool__(self) -> bool:
        return any(self.coefficients)

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Residue) and self.coefficients == other.coefficients

    def __hash__(self) -> int:
        return hash(self.coefficients)

    def __add__(self, other: "Residue") -> "Residue":
        pairs = zip(self.coefficients, other.coefficients, strict=True)
        return Residue(self.ring, tuple(a + b for a, b in pairs))

    def __sub__(self, other: "Residue") -> "Residue":
        pairs = zip(self.coefficients, other.coefficients, strict=True)
        return Residue(self.ring, tuple(a - b for a, b in pairs))

    def __neg__(self) -> "Residue":
        return Residue(self.ring, tuple(-a for a in self.coefficients))

    def __mul__(self, other: "Residue") -> "Residue":
        size = self.ring.degree
        product = [self.ring.field.zero] * (2 * size - 1)
        for i, a in enumerate(self.coefficients):
            if a:
                for j, b in enumerate(other.coefficients):
                    product[i + j] = product[i + j] + a * b
        return self.ring.residue(product)

    def __truediv__(self, other: "Residue") -> "Residue":
        return self * other._inverse()

    def _inverse(self) -> "Residue":
        """By Euclid's algorithm for the modulus and this polynomial."""
        ring = self.ring
        larger, smaller = _stripped(ring.modulus), _stripped(self.coefficients)
        before: list[Any] = []
        factor: list[Any] = [ring.field.one]
        while len(smaller) > 1:
            quotient, remainder = _divide(larger, smaller, ring.field.zero)
            larger, smaller = smaller, remainder
            before, factor = factor, _subtract_product(before, quotient, factor, ring.field.zero)
        return ring.residue([c / smaller[0] for c in factor])


def _stripped(values: Sequence[Any]) -> list[Any]:
    result = list(values)
    while result and not result[-1]:
        result.pop()
    return result


def _divide(first: list[Any], second: list[Any], zero: Any) -> tuple[list[Any], list[Any]]:
    remainder, quotient = list(first), [zero] * (len(first) - len(second) + 1)
    for top in range(len(first) - len(second), -1, -1):
        factor = remainder[top + len(second) - 1] / second[-1]
        quotient[top] = factor
        for i, value in enumerate(second):
            remainder[top + i] = remainder[top + i] - factor * value
    return quotient, _stripped(remainder)


def _subtract_product(
    start: list[Any], first: list[Any], second: list[Any], zero: Any
) -> list[Any]:
    result = start + [zero] * (len(first) + len(second) - 1 - len(start))
    for i, a in enumerate(first):
        for j, b in enumerate(second):
            result[i + j] = result[i + j] - a * b
    return result
