"""What the quadrics say over one field with cheap ranks: the modular half of every answer."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from math import comb
from random import Random
from typing import Any

from trivector.fields.linear import rank
from trivector.fields.protocol import Field
from trivector.sections.graded import QuadricAlgebra
from trivector.sections.hilbert import (
    HilbertPolynomial,
    grassmannian_dimension,
    grassmannian_h_vector,
    proper_section_polynomial,
)
from trivector.sections.quadrics import restricted_quadrics
from trivector.sections.regularity import hilbert_polynomial_from

__all__ = ["Limits", "Progress", "Study", "expected_dimension", "study"]

Progress = Callable[[str], None]


@dataclass(frozen=True)
class Limits:
    """How far a computation may go before the answer is "undecided".

    Parameters
    ----------
    max_degree : int
        The highest degree of the Hilbert function.
    max_columns : int
        The widest matrix that is row-reduced over ℚ or F_p; over F_q half
        as wide, over number fields a quarter, over very large F_q an eighth.
    max_primes : int
        How many primes are tried for data over an infinite field.
    max_lift_primes : int
        How many primes of 62 bits are combined to find points over ℚ.
    max_points : int
        The largest sweep, in points, that an examination starts by itself.
    max_listed : int
        After how many planes that are not known such a sweep stops.
    """

    max_degree: int = 12
    max_columns: int = 1200
    max_primes: int = 5
    max_lift_primes: int = 150
    max_points: int = 1_200_000
    max_listed: int = 20_000

    def columns(self, field: Field) -> int:
        """The widest matrix over this field."""
        return self.max_columns // field.work_factor


@dataclass(frozen=True)
class Study:
    """The section over the field of one reduction.

    Attributes
    ----------
    hilbert : tuple of int
        H(0), H(1), … as far as computed.
    polynomial : HilbertPolynomial or None
        Proved; None when a limit was hit first, or when ``complete_degree``
        made it unnecessary.
    proper : bool
        The section has the expected dimension m − 1 − codim ≥ −1. Then its
        Hilbert function is known, and known over the field of the data too.
    complete_degree : int or None
        A degree d with H(d) = k in which the k given points impose k
        conditions on forms of degree d − 1: the two ranks of the theorem.
    conditions : tuple of int
        The number of conditions that the points impose in degrees 0 … d − 1.
    limit : str or None
        The limit that was hit, in words.
    algebra : QuadricAlgebra or None
        The tables behind ``hilbert``, in coordinates of the given basis.
    """

    hilbert: tuple[int, ...]
    polynomial: HilbertPolynomial | None = None
    proper: bool = False
    complete_degree: int | None = None
    conditions: tuple[int, ...] = ()
    limit: str | None = None
    algebra: QuadricAlgebra | None = None


def expected_dimension(n: int, size: int) -> int:
    """size − 1 − codim G(3,n): every component has at least this dimension.

    (Projective dimension theorem; over the algebraic closure.)
    """
    return size - 1 - (comb(n, 3) - 1 - grassmannian_dimension(n))


def study(
    field: Field,
    n: int,
    rows: Sequence[Sequence[Any]],
    points: Sequence[Sequence[Any]],
    limits: Limits,
    rng: Random,
    on_progress: Progress,
) -> Study:
    """Hilbert function, polynomial and completeness over a field with cheap ranks.

    Parameters
    ----------
    rows : a basis of L, m ≥ 1 rows of C(n,3) scalars of ``field``
    points : coordinates in that basis of k planes of the section

    Notes
    -----
    Where the expected dimension e is ≥ 0, the section is first cut with a
    random linear space of codimension e + 1. If that is empty, the section
    has dimension e exactly, and since the coordinate ring of G(3,n) is
    Cohen–Macaulay over every field (classical: straightening law, 1980s), the
    linear equations form a regular sequence and the Hilbert series is that of
    G(3,n) divided by as many factors 1 − z.
    """
    size = len(rows)
    expected = expected_dimension(n, size)
    if expected >= 0 and _is_proper(field, n, rows, expected, limits, rng, on_progress):
        polynomial = proper_section_polynomial(n, expected)
        h = grassmannian_h_vector(n)
        hilbert = tuple(
            sum(entry * comb(t - i + expected, expected) for i, entry in enumerate(h) if i <= t)
            for t in range(len(h) + 1)
        )
        return Study(hilbert, polynomial, proper=True)
    algebra = QuadricAlgebra(field, size, restricted_quadrics(rows, n, field.zero))
    return _study_directly(algebra, n, points, limits, rng, on_progress)


def _study_directly(
    algebra: QuadricAlgebra,
    n: int,
    points: Sequence[Sequence[Any]],
    limits: Limits,
    rng: Random,
    on_progress: Progress,
) -> Study:
    hilbert = algebra.hilbert
    conditions: list[int] = []

    def impose(degree: int) -> int:
        while len(conditions) <= degree:
            values = algebra.evaluate(len(conditions), points)
            width = hilbert[len(conditions)]
            conditions.append(rank(algebra.field, values, width))
        return conditions[degree]

    def result(**found: Any) -> Study:
        return Study(tuple(hilbert), conditions=tuple(conditions), algebra=algebra, **found)

    while True:
        top, here = algebra.top, hilbert[-1]
        if here == 0:
            proper = expected_dimension(n, algebra.size) == -1
            return result(polynomial=HilbertPolynomial(top, ()), proper=proper)
        if points and here == len(points) == impose(top - 1):
            return result(complete_degree=top)
        if top >= 3:
            polynomial = hilbert_polynomial_from(algebra, top - 1, rng)
            if polynomial is not None:
                return result(polynomial=polynomial)
        if top >= limits.max_degree:
            return result(limit=f"degree {limits.max_degree}")
        nrows, ncols = algebra.next_shape()
        most = limits.columns(algebra.field)
        if ncols > most:
            return result(
                limit=f"degree {top + 1} needs a matrix with {ncols} columns, more than {most}"
            )
        on_progress(f"degree {top + 1}: {nrows} × {ncols} matrix over {algebra.field.name}")
        algebra.extend()


def _is_proper(
    field: Field,
    n: int,
    rows: Sequence[Sequence[Any]],
    expected: int,
    limits: Limits,
    rng: Random,
    on_progress: Progress,
) -> bool:
    """Whether some random linear space of codimension expected + 1 misses the section."""
    size = len(rows) - expected - 1
    top = len(grassmannian_h_vector(n))
    attempts = 2 if (field.order or 1000) >= 1000 else 8
    for attempt in range(attempts):
        on_progress(f"cutting to dimension {size}, attempt {attempt + 1}")
        coefficients = [[field.random_element(rng) for _ in rows] for _ in range(size)]
        cut = (field.matrix(coefficients, len(rows)) * field.matrix(rows, len(rows[0]))).tolist()
        algebra = QuadricAlgebra(field, size, restricted_quadrics(cut, n, field.zero))
        while algebra.top < top and algebra.hilbert[-1]:
            if algebra.next_shape()[1] > limits.columns(field):
                return False
            algebra.extend()
        if algebra.hilbert[-1] == 0:
            return True
    return False
