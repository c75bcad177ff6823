"""Hilbert functions and polynomials: those of G(3,n), and those of a section."""

from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from itertools import count
from math import comb

__all__ = [
    "HilbertPolynomial",
    "grassmannian_degree",
    "grassmannian_dimension",
    "grassmannian_h_vector",
    "grassmannian_hilbert",
    "proper_section_polynomial",
]


@dataclass(frozen=True)
class HilbertPolynomial:
    """P(t) = Σ_i q_i·C(t − start + i − 1, i), which is H(t) for all t ≥ start.

    Parameters
    ----------
    start : int
        A degree from which on H = P.
    steps : tuple of int
        (q_0, …, q_{r−1}); empty for the empty section. q_i is the value at
        ``start`` of the Hilbert function after i general hyperplane cuts, so
        the dimension is r − 1 and the degree is the last of them.
    """

    start: int
    steps: tuple[int, ...]

    @property
    def dimension(self) -> int:
        """The projective dimension; −1 for the empty section."""
        return len(self.steps) - 1

    @property
    def degree(self) -> int:
        """The degree as a scheme; the length of a finite section; 0 if empty."""
        return self.steps[-1] if self.steps else 0

    def __call__(self, t: int) -> int:
        """P(t), for t ≥ start."""
        shift = t - self.start
        return sum(q * comb(shift + i - 1, i) if i else q for i, q in enumerate(self.steps))

    def coefficients(self) -> tuple[Fraction, ...]:
        """The coefficients of 1, t, t², …."""
        total = [Fraction(0)] * max(1, len(self.steps))
        for i, q in enumerate(self.steps):
            # C(t − start + i − 1, i) = Π_{k<i} (t − start + k)/(k + 1)
            product = [Fraction(q)]
            for k in range(i):
                constant = Fraction(k - self.start, k + 1)
                shifted = [Fraction(0), *(c / (k + 1) for c in product)]
                product = [
                    s + constant * c for s, c in zip(shifted, [*product, Fraction(0)], strict=True)
                ]
            for k, coefficient in enumerate(product):
                total[k] += coefficient
        return tuple(total)

    def __str__(self) -> str:
        text = ""
        for power, value in reversed(list(enumerate(self.coefficients()))):
            if not value:
                continue
            letter = "" if power == 0 else "t" if power == 1 else f"t^{power}"
            size = "" if letter and abs(value) == 1 else str(abs(value))
            sign = "−" if value < 0 else "+"
            text += f" {sign} " if text else ("−" if sign == "−" else "")
            text += f"{size}·{letter}" if size and letter else size or letter
        return text or "0"


def grassmannian_dimension(n: int) -> int:
    """dim G(3,n) = 3(n − 3)."""
    return 3 * (n - 3)


def grassmannian_hilbert(n: int, t: int) -> int:
    """dim of the degree-t part of the homogeneous coordinate ring of G(3,n).

    The dimension of the Schur module of shape (t, t, t): Π (t + j − i)/(j − i)
    over i = 1…3, j = 4…n (Weyl's formula; over every field by the standard
    monomial theory). For n = 6: 1, 20, 175, 980, ….
    """
    numerator = denominator = 1
    for i in range(1, 4):
        for j in range(4, n + 1):
            numerator *= t + j - i
            denominator *= j - i
    return numerator // denominator


@cache
def grassmannian_h_vector(n: int) -> tuple[int, ...]:
    """The numerator of the Hilbert series of G(3,n): (1, 10, 20, 10, 1) for n = 6."""
    power = grassmannian_dimension(n) + 1
    entries: list[int] = []
    for t in count():
        entry = sum(
            (-1) ** k * comb(power, k) * grassmannian_hilbert(n, t - k) for k in range(t + 1)
        )
        if entry == 0:
            return tuple(entries)
        entries.append(entry)
    raise AssertionError("unreachable")


def grassmannian_degree(n: int) -> int:
    """The degree of G(3,n) in its Plücker embedding: 42 for n = 6, 462 for n = 7."""
    return sum(grassmannian_h_vector(n))


def proper_section_polynomial(n: int, dimension: int) -> HilbertPolynomial:
    """The Hilbert polynomial of a section of G(3,n) of the expected dimension ≥ 0.

    The series is h(z)/(1 − z)^(dimension+1), because the coordinate ring of
    G(3,n) is Cohen–Macaulay over every field; after i cuts it has one factor
    less, and its value at the length of h is q_i.
    """
    h = grassmannian_h_vector(n)
    start = len(h) - 1
    steps = tuple(
        sum(entry * comb(start - i + power, power) for i, entry in enumerate(h))
        for power in range(dimension, -1, -1)
    )
    return HilbertPolynomial(start, steps)
