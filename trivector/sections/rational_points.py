"""All points of a finite section over ℚ, from its points modulo many primes.

The trace form of the rational univariate representation ("Solving
zero-dimensional systems through the rational univariate representation",
1999, AAECC 9): with M = h/ℓ for two linear forms, χ the characteristic
polynomial of M on O_Z and χ̄ its squarefree part, the coordinates of the point
with M = θ are g_1(θ) : … : g_m(θ), where g_i is the polynomial part of
χ̄(t)·Σ_k Tr(x_i/ℓ·M^k)/t^(k+1). These are rational polynomials of moderate
height, found by the Chinese remainder theorem. What is returned has been
checked over ℚ; the primes only suggest it.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import islice
from math import isqrt
from random import Random
from typing import Any

from flint import fmpq, fmpq_poly, fmpz, nmod_mat, nmod_poly

from trivector.exterior.plucker import plucker_relations
from trivector.fields.prime import PrimeField, prime_field
from trivector.sections.finite_points import ratio_matrices
from trivector.sections.graded import QuadricAlgebra
from trivector.sections.quadrics import restricted_quadrics
from trivector.sections.study import Progress

__all__ = ["RationalPoint", "rational_scheme_points"]

_PRIME_BOUND = 2**62
_FORMS = 8


@dataclass(frozen=True)
class RationalPoint:
    """A closed point of the section: a decomposable over ℚ[t]/(modulus), checked.

    Attributes
    ----------
    modulus : fmpq_poly
        Monic and irreducible.
    plucker : tuple of fmpq_poly
        C(n,3) polynomials of degree below that of the modulus.
    exponent : int
        The exponent of the modulus in χ: the multiplicity, if M separates points.
    """

    modulus: fmpq_poly
    plucker: tuple[fmpq_poly, ...]
    exponent: int


def rational_scheme_points(
    rows: Sequence[Sequence[fmpq]],
    n: int,
    degree: int,
    hilbert: Sequence[int],
    *,
    max_primes: int,
    rng: Random,
    on_progress: Progress,
) -> list[RationalPoint] | None:
    """Decomposables in the span of ``rows`` over number fields.

    Parameters
    ----------
    rows : m independent rows with small integer entries
    degree : int
        The ideal is regular in this degree modulo a prime with H = ``hilbert``.
    hilbert : H(0), …, H(degree + 1) modulo that prime
    max_primes : int
        How many primes are combined before giving up.

    Returns
    -------
    list of RationalPoint or None
        Each has been checked over ℚ: it lies in L, all Plücker relations
        vanish, and h/ℓ takes the value t there, so that points with different
        moduli, and conjugates of one, are distinct. Exhaustive exactly when
        the local lengths add up to H(degree), which is for the caller to check.
        None if the primes did not suffice.
    """
    chosen = _choose_forms(rows, n, degree, hilbert, rng)
    if chosen is None:
        return None
    form, other = chosen
    residues: list[int] = []
    modulus, used, next_try, best = 1, 0, 1, 0
    for field in islice(_primes(), 2 * max_primes):
        image = _modular_image(field, rows, n, degree, hilbert, form, other)
        if image is None:
            continue
        distinct, values = image
        if distinct > best:  # fewer distinct roots than elsewhere: a bad prime
            residues, modulus, used, next_try, best = [0] * len(values), 1, 0, 1, distinct
        elif distinct < best:
            continue
        inverse = pow(modulus, -1, field.order)
        residues = [
            x + modulus * ((v - x) * inverse % field.order)
            for x, v in zip(residues, values, strict=True)
        ]
        modulus *= field.order
        used += 1
        if used == next_try:
            on_progress(f"{used} primes combined, {max_primes} at most")
            next_try = max(used + 1, used * 5 // 4)
            points = _attempt(residues, modulus, hilbert[degree], best, rows, n, form, other)
            if points is not None:
                return points
        if used >= max_primes:
            break
    return None


def _primes() -> Iterator[PrimeField]:
    candidate = _PRIME_BOUND - 1
    while True:
        if fmpz(candidate).is_prime():
            yield prime_field(candidate)
        candidate -= 2


def _choose_forms(
    rows: Sequence[Sequence[fmpq]], n: int, degree: int, hilbert: Sequence[int], rng: Random
) -> tuple[list[int], list[int]] | None:
    """ℓ that vanishes at no point, and h for which h/ℓ separates them: modulo one prime."""
    field = next(_primes())
    best: tuple[int, list[int], list[int]] | None = None
    for attempt in range(_FORMS):
        height = 2 << attempt
        form = [rng.randint(-height, height) for _ in rows]
        other = [rng.randint(-height, height) for _ in rows]
        image = _modular_image(field, rows, n, degree, hilbert, form, other)
        if image is not None and (best is None or image[0] > best[0]):
            best = (image[0], form, other)
            if image[0] == hilbert[degree]:
                break
    return best and best[1:]


def _modular_image(
    field: PrimeField,
    rows: Sequence[Sequence[fmpq]],
    n: int,
    degree: int,
    hilbert: Sequence[int],
    form: list[int],
    other: list[int],
) -> tuple[int, list[int]] | None:
    """(number of distinct roots, coefficients of χ and of the g_i); None for a bad prime."""
    p = field.order
    reduced = [[field.from_rational(x) for x in row] for row in rows]
    algebra = QuadricAlgebra(field, len(rows), restricted_quadrics(reduced, n, field.zero))
    while algebra.top < degree + 1:
        if algebra.extend() != hilbert[algebra.top]:
            return None
    matrices, size = ratio_matrices(algebra, degree, [field.element(x) for x in form])
    if size < hilbert[degree]:
        return None
    m = nmod_mat(size, size, p)
    for coefficient, matrix in zip(other, matrices, strict=True):
        m += matrix * coefficient
    chi = m.charpoly()
    squarefree = chi
    common = chi.gcd(chi.derivative())
    if common.degree() > 0:
        squarefree = chi // common
    distinct = int(squarefree.degree())
    values = [int(chi[i]) for i in range(size)]
    for powers in _power_sums(matrices, m, size, distinct, p):
        values += _numerator(squarefree, powers, distinct, p)
    return distinct, values


def _power_sums(
    matrices: Sequence[nmod_mat], m: nmod_mat, size: int, count: int, p: int
) -> list[list[Any]]:
    """Tr(Y·M^k) for each Y and k < count, as one matrix product."""
    power = nmod_mat(size, size, p)
    for i in range(size):
        power[i, i] = 1
    flat = []
    for _ in range(count):
        flat.append(power.transpose().entries())
        power = power * m
    left = nmod_mat(len(matrices), size * size, [x for y in matrices for x in y.entries()], p)
    right = nmod_mat(count, size * size, [x for row in flat for x in row], p)
    return (left * right.transpose()).tolist()


def _numerator(chi: nmod_poly, powers: Sequence[Any], count: int, p: int) -> list[int]:
    """The polynomial part of χ̄(t)·Σ_k s_k/t^(k+1), count coefficients."""
    reversed_powers = nmod_poly([int(s) for s in reversed(powers)], p)
    product = chi * reversed_powers
    # s_k sits at t^(count−1−k), so the polynomial part starts at t^count.
    return [int(product[count + j]) for j in range(count)]


def _attempt(
    residues: Sequence[int],
    modulus: int,
    length: int,
    distinct: int,
    rows: Sequence[Sequence[fmpq]],
    n: int,
    form: list[int],
    other: list[int],
) -> list[RationalPoint] | None:
    """Rational reconstruction, factorisation over ℚ and the exact check."""
    chi_values = _reconstruct(residues[:length], modulus)
    if chi_values is None:
        return None
    values = _reconstruct(residues[length:], modulus)
    if values is None:
        return None
    chi = fmpq_poly([*chi_values, fmpq(1)])
    numerators = [fmpq_poly(values[i * distinct : (i + 1) * distinct]) for i in range(len(rows))]
    points = []
    for factor, exponent in chi.factor()[1]:
        monic = factor * (fmpq(1) / fmpq(factor[factor.degree()]))
        coordinates = [g % monic for g in numerators]
        plucker = _checked_plucker(coordinates, monic, rows, n, form, other)
        if plucker is None:
            return None
        points.append(RationalPoint(monic, plucker, int(exponent)))
    return points


def _reconstruct(residues: Sequence[int], modulus: int) -> list[fmpq] | None:
    """Rationals with these residues and small numerators over one denominator."""
    bound = isqrt(modulus // 2)
    denominator = 1
    found: list[tuple[int, int]] = []
    for residue in residues:
        numerator = residue * denominator % modulus
        if numerator > modulus // 2:
            numerator -= modulus
        if abs(numerator) > bound:
            pair = _rational(numerator % modulus, modulus, bound)
            if pair is None:
                return None
            numerator, factor = pair
            denominator *= factor
            if denominator > bound:
                return None
        found.append((numerator, denominator))
    return [fmpq(a, b) for a, b in found]


def _rational(residue: int, modulus: int, bound: int) -> tuple[int, int] | None:
    """(a, b) with a ≡ b·residue, |a| ≤ bound and 0 < b ≤ bound, by Euclid's algorithm."""
    r0, r1, t0, t1 = modulus, residue, 0, 1
    while r1 > bound:
        quotient = r0 // r1
        r0, r1 = r1, r0 - quotient * r1
        t0, t1 = t1, t0 - quotient * t1
    if t1 == 0 or abs(t1) > bound:
        return None
    return (r1, t1) if t1 > 0 else (-r1, -t1)


def _checked_plucker(
    coordinates: Sequence[fmpq_poly],
    modulus: fmpq_poly,
    rows: Sequence[Sequence[fmpq]],
    n: int,
    form: list[int],
    other: list[int],
) -> tuple[fmpq_poly, ...] | None:
    """Σ g_i·b_i, if it is decomposable over ℚ[t]/(modulus) and h/ℓ = t there."""
    zero = fmpq_poly([0])
    bottom = sum((g * c for g, c in zip(coordinates, form, strict=True)), zero)
    top = sum((g * c for g, c in zip(coordinates, other, strict=True)), zero)
    if not bottom or (top - fmpq_poly([0, 1]) * bottom) % modulus:
        return None
    plucker = _primitive(
        [
            sum((g * row[j] for g, row in zip(coordinates, rows, strict=True) if row[j]), zero)
            for j in range(len(rows[0]))
        ]
    )
    for relation in plucker_relations(n):
        if relation.evaluate(plucker, zero) % modulus:
            return None
    return tuple(plucker)


def _primitive(polynomials: Sequence[fmpq_poly]) -> list[fmpq_poly]:
    """The polynomials times one rational number: integral and without a common content."""
    denominator, content = fmpz(1), fmpz(0)
    for polynomial in polynomials:
        denominator = denominator.lcm(polynomial.denom())
    for polynomial in polynomials:
        for coefficient in (polynomial * denominator).numer().coeffs():
            content = content.gcd(coefficient)
    return [polynomial * fmpq(denominator, content) for polynomial in polynomials]
