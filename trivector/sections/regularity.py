"""From which degree on does the Hilbert function follow its polynomial? With proof."""

from random import Random
from typing import Any

from trivector.fields.linear import RankCounter
from trivector.sections.graded import QuadricAlgebra
from trivector.sections.hilbert import HilbertPolynomial

__all__ = ["hilbert_polynomial_from"]

# Over fewer scalars than this, special forms are common enough to try again,
# each time over more scalars.
_LARGE = 1000
_ATTEMPTS = 3


def hilbert_polynomial_from(
    algebra: QuadricAlgebra, degree: int, rng: Random
) -> HilbertPolynomial | None:
    """The Hilbert polynomial, if the ideal is ``degree``-regular and a random test shows it.

    Parameters
    ----------
    algebra : QuadricAlgebra
        Known at least up to ``degree + 1``.
    degree : int
        At least 2, so that the ideal is generated in degrees up to it.

    Returns
    -------
    HilbertPolynomial or None
        A polynomial that equals H in every degree ≥ ``degree``: a proof, not
        a guess. None if the ideal is not regular in this degree, or (with
        probability about 1/q over q scalars) if the random forms were special.

    Notes
    -----
    Theorem ("A criterion for detecting m-regularity", 1987, Inventiones
    mathematicae 87): an ideal I generated in degrees ≤ d is d-regular if
    there are linear forms h_1, …, h_r with h_i injective from degree d to
    degree d + 1 on R/(h_1, …, h_{i−1}) and R/(h_1, …, h_r) zero in degree d.
    Both conditions are ranks of h_1, …, h_i on R_{d−1} → R_d → R_{d+1}. Then
    each h_i stays injective in all degrees ≥ d, which gives H by summation.
    The forms may have coefficients in an extension field: dimensions do not
    change. Cost: at most dimension + 2 ranks of matrices with H(d+1) columns.
    """
    attempts = 1 if (algebra.field.order or _LARGE) >= _LARGE else _ATTEMPTS
    for attempt in range(attempts):
        steps = _cut_until_empty(algebra, degree, rng, attempt)
        if steps is not None:
            return HilbertPolynomial(degree, steps)
    return None


def _cut_until_empty(
    algebra: QuadricAlgebra, degree: int, rng: Random, attempt: int
) -> tuple[int, ...] | None:
    extension, draw = algebra.field.generic_blocks(rng, attempt)
    low = _StackedForms(algebra, degree - 1, extension)
    high = _StackedForms(algebra, degree, extension)
    here, above = algebra.hilbert[degree], algebra.hilbert[degree + 1]
    steps: list[int] = []
    while here:
        steps.append(here)
        form = [draw() for _ in range(algebra.size)]
        next_above = high.cokernel_dimension(form)
        if next_above != above - here:
            return None
        here, above = low.cokernel_dimension(form), next_above
    return tuple(steps)


class _StackedForms:
    """Linear forms h_1, …, h_i as one map (R_d)^i → R_{d+1}, over an extension."""

    def __init__(self, algebra: QuadricAlgebra, degree: int, extension: int) -> None:
        self._products = algebra.products[degree]
        self._zero = algebra.field.zero
        self._source = algebra.hilbert[degree]
        self._target = algebra.hilbert[degree + 1]
        self._extension = extension
        self._counter = RankCounter(algebra.field, self._target * extension)

    def cokernel_dimension(self, form: list[Any]) -> int:
        """dim of R_{d+1}/(h_1, …, h_i)·R_d after one more form has been added."""
        r, zero = self._extension, self._zero
        rows: list[dict[int, Any]] = []
        for s in range(self._source):
            combined: list[dict[int, Any]] = [{} for _ in range(r)]
            for products, block in zip(self._products, form, strict=True):
                for t, value in products[s]:
                    for a in range(r):
                        row = combined[a]
                        for b in range(r):
                            scalar = block[a, b]
                            if scalar:
                                key = t * r + b
                                row[key] = row.get(key, zero) + value * scalar
            rows.extend(combined)
        return self._target - self._counter.add(rows) // r
