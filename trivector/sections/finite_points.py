"""The points of a finite section from its tables alone, over a field with cheap matrices."""

from collections.abc import Iterator
from dataclasses import dataclass
from random import Random
from typing import Any

from trivector.errors import UsageError
from trivector.fields.linear import echelon
from trivector.fields.protocol import Field
from trivector.sections.commuting import joint_eigenvalues
from trivector.sections.graded import QuadricAlgebra

__all__ = ["SchemePoint", "ratio_matrices", "scheme_points"]


@dataclass(frozen=True)
class SchemePoint:
    """A closed point of a finite scheme in P^(m−1).

    Attributes
    ----------
    modulus : tuple
        Monic irreducible polynomial with root θ; the residue field is k(θ).
    coordinates : tuple of tuples
        Homogeneous coordinates, each the coefficients of a polynomial in θ.
    multiplicity : int
    """

    modulus: tuple[Any, ...]
    coordinates: tuple[tuple[Any, ...], ...]
    multiplicity: int

    @property
    def degree(self) -> int:
        """The degree of the residue field over k."""
        return len(self.modulus) - 1


def scheme_points(algebra: QuadricAlgebra, degree: int, rng: Random) -> list[SchemePoint]:
    """All closed points of a finite scheme, with residue fields and multiplicities.

    Parameters
    ----------
    algebra : QuadricAlgebra
        Of a finite scheme, its ideal regular in ``degree``: then every R_d,
        d ≥ degree, is O_Z(d).

    Returns
    -------
    list of SchemePoint
        Exhaustive: Σ degree·multiplicity is the length.

    Notes
    -----
    Where a linear form ℓ does not vanish, x_i/ℓ acts on O_Z: on the image of
    ℓ^N in R_d by the commuting matrices ℓ^{-1}·x_i, whose joint eigenvalues
    are the coordinates of the points. A general ℓ reaches all points at once;
    over small fields several do, in the end the coordinates themselves, of
    which one is nonzero at each point.
    """
    length = algebra.hilbert[degree]
    if algebra.hilbert[degree + 1] != length:
        raise UsageError("the section is infinite; list its planes by the sweep")
    found: list[SchemePoint] = []
    charts: list[list[Any]] = []
    for form in _forms(algebra, rng):
        matrices, size = ratio_matrices(algebra, degree, form)
        for value in joint_eigenvalues(algebra.field, matrices, size, rng):
            point = SchemePoint(value.modulus, value.values, value.multiplicity)
            if not any(_is_nonzero_at(algebra.field, chart, point) for chart in charts):
                found.append(point)
        charts.append(form)
        if sum(point.degree * point.multiplicity for point in found) == length:
            return found
    raise AssertionError("the coordinates of P^(m−1) have no common zero")


def _forms(algebra: QuadricAlgebra, rng: Random) -> Iterator[list[Any]]:
    field, size = algebra.field, algebra.size
    for _ in range(4):
        yield [field.random_element(rng) for _ in range(size)]
    for i in range(size):
        yield [field.one if i == j else field.zero for j in range(size)]


def _is_nonzero_at(field: Field, form: list[Any], point: SchemePoint) -> bool:
    """Whether a linear form is nonzero at a point: polynomials of degree below the modulus."""
    for power in range(point.degree):
        total = field.zero
        for coefficient, value in zip(form, point.coordinates, strict=True):
            if power < len(value):
                total = total + coefficient * value[power]
        if total:
            return True
    return False


def ratio_matrices(algebra: QuadricAlgebra, degree: int, form: list[Any]) -> tuple[list[Any], int]:
    """The matrices of x_1/ℓ, …, x_m/ℓ on the part of O_Z where ℓ is a unit, and its dimension."""
    field = algebra.field
    rows = [
        [field.one if i == j else field.zero for j in range(algebra.hilbert[degree])]
        for i in range(algebra.hilbert[degree])
    ]
    while True:
        image = (field.matrix(rows, len(rows[0])) * _form_matrix(algebra, degree, form)).tolist()
        reduced, pivots = echelon(field.matrix(image, algebra.hilbert[degree + 1]))
        if len(pivots) == len(rows):
            break
        rows = reduced.tolist()[: len(pivots)]
        degree += 1
        if not rows:
            return [], 0
    size = len(rows)
    square = [[row[j] for j in pivots] for row in image]
    basis = field.matrix(rows, len(rows[0]))
    # Y·D = B·X_i, D = B·ℓ: at the pivot columns D is square and invertible.
    columns = []
    for i in range(algebra.size):
        product = (basis * _variable_matrix(algebra, degree, i)).tolist()
        columns.append([[row[j] for j in pivots] for row in product])
    transposed = [[square[r][c] for r in range(size)] for c in range(size)]
    augmented = [
        transposed[c] + [column[r][c] for column in columns for r in range(size)]
        for c in range(size)
    ]
    solved = field.matrix(augmented, size * (1 + algebra.size)).rref()[0].tolist()
    matrices = []
    for i in range(algebra.size):
        start = size * (1 + i)
        matrices.append(
            field.matrix([[solved[c][start + r] for c in range(size)] for r in range(size)], size)
        )
    return matrices, size


def _variable_matrix(algebra: QuadricAlgebra, degree: int, i: int) -> Any:
    while algebra.top < degree + 1:
        algebra.extend()
    matrix = algebra.field.zero_matrix(algebra.hilbert[degree], algebra.hilbert[degree + 1])
    for s, product in enumerate(algebra.products[degree][i]):
        for t, value in product:
            matrix[s, t] = value
    return matrix


def _form_matrix(algebra: QuadricAlgebra, degree: int, form: list[Any]) -> Any:
    while algebra.top < degree + 1:
        algebra.extend()
    matrix = algebra.field.zero_matrix(algebra.hilbert[degree], algebra.hilbert[degree + 1])
    for coefficient, products in zip(form, algebra.products[degree], strict=True):
        if coefficient:
            for s, product in enumerate(products):
                for t, value in product:
                    matrix[s, t] = matrix[s, t] + coefficient * value
    return matrix
