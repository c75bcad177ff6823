"""The field ℚ, on python-flint."""

from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property
from random import Random
from typing import Any

from flint import fmpq, fmpq_mat, fmpq_poly, fmpz, fmpz_mat

from trivector.errors import BadReductionError
from trivector.fields.entries import parse_rational
from trivector.fields.prime import PrimeField, prime_field
from trivector.fields.protocol import ResidueField

__all__ = ["QQ", "ModularReduction", "Rationals"]

# Reduction starts below 2^31: there python-flint's row reduction is fastest,
# and a prime of that size is bad for given data with probability about 2^-31.
_FIRST_PRIME_BOUND = 2**31


@dataclass(frozen=True)
class ModularReduction:
    """Reduction modulo p of rationals with denominators prime to p."""

    prime: int
    exact: bool = False

    @cached_property
    def field(self) -> PrimeField:
        return prime_field(self.prime)

    @property
    def name(self) -> str:
        return f"modulo {self.prime}"

    def rows(self, rows: Iterable[Sequence[Any]]) -> list[list[Any]]:
        try:
            return [[self.field.from_rational(value) for value in row] for row in rows]
        except ZeroDivisionError as error:
            raise BadReductionError(
                f"a denominator is divisible by {self.prime}; use another prime"
            ) from error

    @property
    def place(self) -> dict[str, int]:
        return {"prime": self.prime}


@dataclass(frozen=True)
class Rationals:
    """The field of rational numbers. Use the one instance, `QQ`.

    Examples
    --------
    >>> from trivector.fields import QQ
    >>> QQ.element("-3/4") + 1
    1/4
    """

    name: str = "Q"
    closure_name: str = "the algebraic closure of Q"
    characteristic: int = 0
    order: None = None

    @property
    def zero(self) -> fmpq:
        return fmpq(0)

    @property
    def one(self) -> fmpq:
        return fmpq(1)

    def element(self, value: Any) -> fmpq:
        return parse_rational(value)

    def format(self, value: fmpq) -> int | str:
        return int(value.p) if value.q == 1 else str(value)

    def sort_key(self, value: fmpq) -> fmpq:
        return value

    def random_element(self, rng: Random, *, height: int = 9) -> fmpq:
        return fmpq(rng.randint(-height, height))

    def zero_matrix(self, nrows: int, ncols: int) -> fmpq_mat:
        return fmpq_mat(nrows, ncols)

    def matrix(self, rows: Sequence[Sequence[Any]], ncols: int) -> fmpq_mat:
        return fmpq_mat(len(rows), ncols, [x for row in rows for x in row])

    @property
    def work_factor(self) -> int:
        return 1

    def integral_basis(self, rows: Sequence[Sequence[fmpq]]) -> list[list[fmpq]]:
        """A reduced basis of the integer points of the row space.

        The lattice is saturated (its quotient in ℤ^N has no torsion), so it
        stays a basis of a space of the same dimension modulo every prime.
        """
        if not rows:
            return []
        size = len(rows[0])
        cleared = [_primitive(row) for row in rows]
        # Twice the orthogonal lattice: ℤ^N ∩ (row space), saturated.
        conditions = _integer_kernel(fmpz_mat(cleared))
        lattice = _integer_kernel(conditions) if conditions.nrows() else _identity(size)
        return [[fmpq(x) for x in row] for row in lattice.lll().tolist()]

    def reductions(self) -> Iterator[ModularReduction]:
        candidate = _FIRST_PRIME_BOUND - 1
        while candidate > 2:
            if fmpz(candidate).is_prime():
                yield ModularReduction(candidate)
            candidate -= 2

    def generic_blocks(self, rng: Random, attempt: int = 0) -> tuple[int, Callable[[], fmpq_mat]]:
        return 1, lambda: fmpq_mat(1, 1, [self.random_element(rng, height=10**6)])

    def factor(self, coefficients: Sequence[Any]) -> list[tuple[list[Any], int]]:
        polynomial = fmpq_poly([fmpq(c) for c in coefficients])
        _, factors = polynomial.factor()
        found = [(_monic(list(f.coeffs())), int(e)) for f, e in factors]
        return sorted(found, key=lambda item: (len(item[0]), item[0]))

    def residue_field(self, modulus: Sequence[Any]) -> ResidueField:
        if len(modulus) == 2:
            return ResidueField(self, self.element, -modulus[0])
        # Number fields stand on ℚ, so they are imported when asked for.
        from trivector.fields.number import NumberField

        if len(modulus) == 3:
            return _quadratic_field(modulus)
        field = NumberField(tuple(modulus))
        return ResidueField(field, field.element, field.generator)

    @property
    def reconstructs(self) -> bool:
        return True

    def to_spec(self) -> str:
        return self.name

    def definition(self) -> dict[str, Any]:
        return {}

    def numbers(self, value: Any) -> int | str:
        return self.format(value)

    def __repr__(self) -> str:
        return self.name


def _quadratic_field(modulus: Sequence[fmpq]) -> ResidueField:
    """ℚ(√D) with D free of small squares, and a root of the quadratic in it."""
    from trivector.fields.number import NumberField

    constant, linear = modulus[0], modulus[1]
    discriminant = linear * linear - 4 * constant
    # √(p/q) = √(pq)/q, and squares of small primes come out of the root.
    radicand, outside = discriminant.p * discriminant.q, fmpq(1, discriminant.q)
    for prime in range(2, 1000):
        while radicand % (prime * prime) == 0:
            radicand //= prime * prime
            outside *= prime
    field = NumberField((fmpq(-radicand), fmpq(0), fmpq(1)))
    root = field.from_coefficients([-linear / 2, outside / 2])
    return ResidueField(field, field.element, root)


def _monic(coefficients: list[Any]) -> list[fmpq]:
    leading = fmpq(coefficients[-1])
    return [fmpq(c) / leading for c in coefficients]


def _primitive(row: Sequence[fmpq]) -> list[fmpz]:
    """The primitive integer vector on the line of a rational vector."""
    denominator = fmpz(1)
    for value in row:
        denominator = denominator.lcm(value.q)
    integers = [value.p * (denominator // value.q) for value in row]
    content = fmpz(0)
    for integer in integers:
        content = content.gcd(integer)
    return [integer // content for integer in integers] if content else integers


def _identity(size: int) -> fmpz_mat:
    return fmpz_mat([[int(i == j) for j in range(size)] for i in range(size)])


def _integer_kernel(matrix: fmpz_mat) -> fmpz_mat:
    """A basis, as rows, of the saturated lattice {x ∈ ℤ^N : matrix·x = 0}.

    From the Hermite form of (matrixᵗ | 1): the rows whose left part vanishes
    carry a basis of the kernel on the right, because the transformation is
    unimodular.
    """
    nrows, ncols = matrix.nrows(), matrix.ncols()
    augmented = fmpz_mat(ncols, nrows + ncols)
    for i in range(ncols):
        for j in range(nrows):
            augmented[i, j] = matrix[j, i]
        augmented[i, nrows + i] = 1
    reduced = augmented.hnf().tolist()
    kernel = [row[nrows:] for row in reduced if not any(row[:nrows])]
    return fmpz_mat(kernel) if kernel else fmpz_mat(0, ncols)


QQ = Rationals()
