"""Reducing data over ℚ or a number field to a finite field, so that dimensions stay."""

from collections.abc import Iterable, Sequence
from typing import Any

from flint import fmpq, fmpz, fmpz_mod_ctx, fmpz_mod_poly_ctx, nmod_poly

from trivector.errors import BadReductionError
from trivector.fields.number import NumberElement, NumberField
from trivector.fields.protocol import Field
from trivector.fields.rationals import QQ

__all__ = ["Conversion", "Place", "conversion"]


class Conversion:
    """From ℚ to any field, by the ring homomorphism from ℤ."""

    def __init__(self, source: Field, target: Field) -> None:
        self.source, self.target = source, target

    def element(self, value: Any) -> Any:
        """The image of a number; refused if it has none."""
        return self.target.element(value)

    def rows(self, rows: Sequence[Sequence[Any]]) -> list[list[Any]]:
        """Independent rows that span the reduction of a row space.

        That is the image of the points of the row space that are integral at
        the prime: of the same dimension as the row space.
        """
        basis = self.source.integral_basis(rows)
        return [[self.target.element(x) for x in row] for row in basis]


class Place(Conversion):
    """From a number field ℚ(a) to a finite field, at an unramified prime ideal.

    Parameters
    ----------
    source : NumberField
    target : a finite field of characteristic p
    root : element of ``target``
        A root of the modulus, the image of a.

    Raises
    ------
    BadReductionError
        If p divides a denominator of the modulus, or the modulus has a
        multiple root modulo p.

    Notes
    -----
    Let M be the modulus and g its irreducible factor modulo p that vanishes at
    the root. As M is separable modulo p, ℤ_(p)[a] is the integral closure of
    ℤ_(p), p is a uniformizer at each prime above p, and an element lies in
    p^k·ℤ_(p)[a] exactly if its valuation at each of them is at least k. Let e ≡ 1
    modulo g^N and e ≡ 0 modulo p^N at the other primes. Then e·α has the
    valuation of α at (p, g), and a large one elsewhere; so that valuation is
    the least one of the coefficients of e·α, if it is less than N, and the
    residue can be read off them.
    """

    def __init__(self, source: NumberField, target: Field, root: Any) -> None:
        super().__init__(source, target)
        self._root = root
        self._p = p = target.characteristic
        if source.polynomial.denom() % p == 0:
            raise BadReductionError(
                f"{source.name} cannot be reduced modulo {p}, which divides a denominator of "
                "the modulus; use another prime"
            )
        modulus = nmod_poly([int(c.p) * pow(int(c.q), -1, p) for c in source.modulus], p)
        if modulus.gcd(modulus.derivative()).degree() > 0:
            raise BadReductionError(
                f"{source.name} cannot be reduced modulo {p}, where its modulus has a multiple "
                "root; use another prime"
            )
        factor = next(f for f, _ in modulus.factor()[1] if not self._value(f.coeffs()))
        others = modulus // factor
        _, inverse, _ = others.xgcd(factor)
        self._precision = 1
        self._idempotent = [int(c) for c in (others * inverse).coeffs()]

    def _value(self, coefficients: Iterable[Any]) -> Any:
        total = self.target.zero
        for c in reversed(list(coefficients)):
            total = total * self._root + self.target.element(int(c))
        return total

    def _raise_precision(self) -> None:
        """From N to 2N: e ↦ 3e² − 2e³."""
        self._precision *= 2
        size = self._p**self._precision
        ring = fmpz_mod_poly_ctx(fmpz_mod_ctx(size))
        source: Any = self.source
        modulus = ring([int(c.p) * pow(int(c.q), -1, size) for c in source.modulus])
        coefficients: list[Any] = list(self._idempotent)
        e = ring(coefficients)
        square = e * e % modulus
        self._idempotent = [int(c) for c in (square * 3 - square * e * 2) % modulus]

    def _localised(self, value: NumberElement) -> tuple[int, list[fmpq]]:
        """The valuation v of a number α ≠ 0, and the coefficients of e·α/p^v."""
        content = min(_valuation(c, self._p) for c in value.value.coeffs() if c)
        integral = value * _power(self._p, -content)
        while True:
            source: Any = self.source
            product = integral * source.from_coefficients([fmpq(c) for c in self._idempotent])
            found = min((_valuation(c, self._p) for c in product.value.coeffs() if c), default=None)
            if found is not None and found < self._precision:
                scaled = product * _power(self._p, -found)
                return content + found, list(scaled.value.coeffs())
            self._raise_precision()

    def valuation(self, value: NumberElement) -> int:
        """The valuation of a number α ≠ 0 at the prime."""
        return self._localised(value)[0]

    def element(self, value: NumberElement) -> Any:
        if not value:
            return self.target.zero
        valuation, coefficients = self._localised(value)
        if valuation < 0:
            raise BadReductionError(
                f"{self.source.format(value)} is not integral at the prime above {self._p}; "
                "use another prime"
            )
        if valuation > 0:
            return self.target.zero
        return self._value(int(c.p) * pow(int(c.q), -1, self._p) for c in coefficients)

    def rows(self, rows: Sequence[Sequence[Any]]) -> list[list[Any]]:
        """By elimination with pivots that are units at the prime."""
        remaining = [list(row) for row in rows]
        images = []
        while remaining:
            row = remaining.pop(0)
            valuations = [self.valuation(x) if x else None for x in row]
            least = min(v for v in valuations if v is not None)
            row = [x * _power(self._p, -least) for x in row]
            pivot = valuations.index(least)
            images.append([self.element(x) for x in row])
            for i, other in enumerate(remaining):
                if other[pivot]:
                    factor = other[pivot] / row[pivot]
                    remaining[i] = [x - factor * y for x, y in zip(other, row, strict=True)]
        return images


def _power(p: int, exponent: int) -> fmpq:
    return fmpq(p**exponent) if exponent >= 0 else fmpq(1, p**-exponent)


def _valuation(value: fmpq, p: int) -> int:
    """The exponent of p in a rational number ≠ 0."""
    numerator, denominator, exponent = fmpz(value.p), fmpz(value.q), 0
    while numerator % p == 0:
        numerator //= p
        exponent += 1
    while denominator % p == 0:
        denominator //= p
        exponent -= 1
    return exponent


def conversion(source: Field, target: Field) -> Conversion | None:
    """The way from one field to another, or None if there is none.

    From ℚ to every field; from a number field ℚ(a) to a finite field that
    contains a root of its modulus, of which the first is taken.

    Raises
    ------
    BadReductionError
        If the prime is ramified, or divides a denominator of the modulus.

    Examples
    --------
    >>> from trivector.fields import number_field, prime_field
    >>> K, F5 = number_field("x^2+1"), prime_field(5)
    >>> place = conversion(K, F5)
    >>> place.element(K.element("a")), place.rows([[K.element("a+2"), K.element(5)]])
    (2, [[4, 0]])
    >>> conversion(K, prime_field(7)) is None
    True
    """
    if source == QQ:
        return Conversion(source, target)
    if not isinstance(source, NumberField) or target.order is None:
        return None
    p = target.characteristic
    if source.polynomial.denom() % p == 0:
        return Place(source, target, target.zero)  # says why not
    factors = target.factor([target.element(c) for c in source.modulus])
    roots = sorted((-f[0] for f, _ in factors if len(f) == 2), key=target.sort_key)
    return Place(source, target, roots[0]) if roots else None
