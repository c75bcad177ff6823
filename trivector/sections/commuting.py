"""Commuting matrices over a field, decomposed: the points of a finite scheme.

Row vectors throughout: a matrix Y acts by v ↦ v·Y.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from random import Random
from typing import Any

from trivector.fields.linear import echelon, kernel, row_space, solve
from trivector.fields.protocol import Field

__all__ = ["JointEigenvalue", "joint_eigenvalues", "restrict"]

_ATTEMPTS = 200


@dataclass(frozen=True)
class JointEigenvalue:
    """A conjugacy class of joint eigenvalues of commuting matrices Y_1, …, Y_m.

    Attributes
    ----------
    modulus : tuple
        Monic irreducible polynomial over the field, constant term first; its
        root θ generates the field of the eigenvalues.
    values : tuple of tuples
        For each Y_i the coefficients of a polynomial p_i of degree below that
        of ``modulus``: the eigenvalue is p_i(θ).
    multiplicity : int
        The dimension of the joint generalised eigenspace over that field.
    """

    modulus: tuple[Any, ...]
    values: tuple[tuple[Any, ...], ...]
    multiplicity: int

    @property
    def degree(self) -> int:
        """The degree of the field of the eigenvalues."""
        return len(self.modulus) - 1


def joint_eigenvalues(
    field: Field, matrices: Sequence[Any], size: int, rng: Random
) -> list[JointEigenvalue]:
    """All joint eigenvalues of commuting size×size matrices, with multiplicities.

    Exhaustive: Σ degree·multiplicity = size. Nothing depends on chance but
    the time: every split is along exact kernels, and a block is accepted only
    when each Y_i − p_i(M) is nilpotent on it, M having an irreducible
    polynomial up to nilpotents; so the block is local with that residue field.
    """
    return _decompose(field, list(matrices), size, rng)


def _decompose(field: Field, ys: list[Any], size: int, rng: Random) -> list[JointEigenvalue]:
    if size == 0:
        return []
    for attempt in range(_ATTEMPTS):
        m = _random_element(field, ys, size, rng, products=attempt >= 3)
        factors = [f for f, _ in field.factor(_annihilator(field, m, size))]
        if len(factors) > 1:
            found: list[JointEigenvalue] = []
            for factor in factors:
                part = _null_space(field, _stable_power(_evaluate(field, factor, m, size)), size)
                if part:
                    found += _decompose(field, restrict(field, part, ys), len(part), rng)
            return found
        outcome = _local_point(field, factors[0], m, ys, size, rng)
        if outcome is not None:
            return outcome
    raise AssertionError("commuting matrices were not separated by random elements")


def _random_element(field: Field, ys: list[Any], size: int, rng: Random, *, products: bool) -> Any:
    """A random linear combination; over small fields products are needed as well."""

    def combination() -> Any:
        total = _scalar(field, field.zero, size)
        for y in ys:
            total = total + y * field.random_element(rng)
        return total

    m = combination()
    for _ in range(rng.randrange(3) if products else 0):
        m = m * combination() + combination()
    return m


def _local_point(
    field: Field, modulus: list[Any], m: Any, ys: list[Any], size: int, rng: Random
) -> list[JointEigenvalue] | None:
    """The one point of a block on which m is primary; a further split; or None for another m."""
    degree = len(modulus) - 1
    vectors = _null_space(field, _evaluate(field, modulus, m, size), size)
    vector = vectors[0]
    for y in ys:
        # Go down to a vector on which this matrix is semisimple with one eigenvalue class.
        inside = restrict(field, vectors, [y])[0]
        factors = [f for f, _ in field.factor(_annihilator(field, inside, len(vectors)))]
        kept = _null_space(field, _evaluate(field, factors[0], inside, len(vectors)), len(vectors))
        vectors = [_combine(field, row, vectors) for row in kept]
        vector = vectors[0]
    orbit = [vector]
    while len(orbit) < degree:
        orbit.append(_times(field, orbit[-1], m, size))
    values = []
    for y in ys:
        coefficients = solve(field, orbit, _times(field, vector, y, size), size)
        if coefficients is None:
            return None
        values.append(coefficients)
    for y, value in zip(ys, values, strict=True):
        power = _stable_power(y + _evaluate(field, [-c for c in value], m, size))
        same, other = _null_space(field, power, size), _image(field, power)
        if other:
            return [
                eigenvalue
                for part in (same, other)
                for eigenvalue in _decompose(field, restrict(field, part, ys), len(part), rng)
            ]
    return [JointEigenvalue(tuple(modulus), tuple(values), size // degree)]


def _annihilator(field: Field, matrix: Any, size: int) -> list[Any]:
    """A monic polynomial that annihilates the matrix, with the factors of the minimal one.

    The minimal polynomial of a vector, times that of a vector in the image
    of what it leaves over, until nothing is left over.
    """
    result = [field.one]
    rest = _scalar(field, field.one, size)
    while True:
        rows = rest.tolist()
        vector = next((row for row in rows if any(row)), None)
        if vector is None:
            return result
        orbit = [vector]
        coefficients = None
        while coefficients is None:
            following = _times(field, orbit[-1], matrix, size)
            coefficients = solve(field, orbit, following, size)
            orbit.append(following)
        factor = [*(-c for c in coefficients), field.one]
        result = _multiply(field, result, factor)
        rest = rest * _evaluate(field, factor, matrix, size)


def _multiply(field: Field, first: list[Any], second: list[Any]) -> list[Any]:
    product = [field.zero] * (len(first) + len(second) - 1)
    for i, a in enumerate(first):
        for j, b in enumerate(second):
            product[i + j] = product[i + j] + a * b
    return product


def _evaluate(field: Field, coefficients: Sequence[Any], matrix: Any, size: int) -> Any:
    """p(M) by Horner's rule."""
    total = _scalar(field, field.zero, size)
    for coefficient in reversed(coefficients):
        total = total * matrix + _scalar(field, coefficient, size)
    return total


def _stable_power(matrix: Any) -> Any:
    """A power of the matrix from which on the rank no longer drops."""
    here = int(matrix.rank())
    while True:
        matrix = matrix * matrix
        following = int(matrix.rank())
        if following == here:
            return matrix
        here = following


def _null_space(field: Field, matrix: Any, size: int) -> list[Any]:
    """Rows v with v·M = 0."""
    return [list(row) for row in kernel(field, matrix.transpose().tolist(), size)]


def _image(field: Field, matrix: Any) -> list[Any]:
    return [list(row) for row in row_space(field, matrix.tolist(), matrix.ncols())]


def restrict(field: Field, rows: Sequence[Sequence[Any]], matrices: Sequence[Any]) -> list[Any]:
    """The matrices of the action on a stable subspace, in the basis ``rows``."""
    size, ncols = len(rows), len(rows[0])
    basis = field.matrix(rows, ncols)
    _, pivots = echelon(basis)
    square = field.matrix([[row[j] for j in pivots] for row in rows], size)
    inverse = _inverse(field, square, size)
    restricted = []
    for matrix in matrices:
        image = (basis * matrix).tolist()
        restricted.append(field.matrix([[row[j] for j in pivots] for row in image], size) * inverse)
    return restricted


def _inverse(field: Field, matrix: Any, size: int) -> Any:
    augmented = [
        [*row, *unit] for row, unit in zip(matrix.tolist(), _unit(field, size), strict=True)
    ]
    reduced = field.matrix(augmented, 2 * size).rref()[0].tolist()
    return field.matrix([row[size:] for row in reduced], size)


def _unit(field: Field, size: int) -> list[list[Any]]:
    return [[field.one if i == j else field.zero for j in range(size)] for i in range(size)]


def _scalar(field: Field, value: Any, size: int) -> Any:
    matrix = field.zero_matrix(size, size)
    if value:
        for i in range(size):
            matrix[i, i] = value
    return matrix


def _times(field: Field, vector: Sequence[Any], matrix: Any, size: int) -> list[Any]:
    product: list[Any] = (field.matrix([vector], size) * matrix).tolist()[0]
    return product


def _combine(field: Field, coefficients: Sequence[Any], rows: Sequence[Sequence[Any]]) -> list[Any]:
    total = [field.zero] * len(rows[0])
    for coefficient, row in zip(coefficients, rows, strict=True):
        if coefficient:
            total = [t + coefficient * x for t, x in zip(total, row, strict=True)]
    return total
