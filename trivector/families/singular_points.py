"""The singular points of a plane sextic away from p1, …, p4, over any field.

In degrees from 13 on the Jacobian ideal J of a reduced sextic agrees with its
saturation, and forms of multiplicity 3 at the base points vanish on the part
of the singular scheme that sits there. So (I₃ + J)/J in degree T is the ring
of functions on the rest, as a module: multiplication by coordinates gives
commuting matrices, and each closed point is a block of them. A singular point
is a node exactly when it is a reduced point of that scheme, in every
characteristic.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from random import Random
from typing import Any

from trivector.errors import FieldError, UsageError
from trivector.families.residues import Residue, ResidueRing
from trivector.families.ternary_forms import (
    Exponents,
    Form,
    forms_with_multiplicities,
    monomials,
    multiply,
    partial,
    to_coefficients,
)
from trivector.fields.linear import echelon, kernel, solve
from trivector.fields.protocol import Field

__all__ = ["PlanePoint", "singular_points"]

_DEGREE = 13
_ATTEMPTS = 12

Vector = Sequence[Any]


@dataclass(frozen=True)
class PlanePoint:
    """A closed point of P²: coordinates in k[t]/(m), the first nonzero one being 1."""

    ring: ResidueRing
    coordinates: tuple[Residue, ...]

    def __str__(self) -> str:
        if self.ring.degree > 1:
            return f"a closed point of degree {self.ring.degree}"
        entries = (self.ring.field.format(x.coefficients[0]) for x in self.coordinates)
        return f"({' : '.join(str(entry) for entry in entries)})"


def singular_points(field: Field, sextic: Form, rng: Random) -> list[PlanePoint]:
    """All singular points other than p1, …, p4, each of them a node.

    Parameters
    ----------
    sextic : form of degree 6
        Of multiplicity at most 3 at the base points, where its strict
        transform and its exceptional part meet in nodes only.

    Raises
    ------
    UsageError
        If a component is repeated, or for the first point that is worse than
        a node.
    FieldError
        If the field has too few elements to tell the points apart.

    Notes
    -----
    Cost: four row reductions with at most 153 columns.
    """
    for extra in (1, 2, 3):
        algebra = _functions(field, sextic, extra, rng)
        if algebra is not None:
            return algebra.points(rng)
    raise _too_small(field)


def _too_small(field: Field) -> FieldError:
    return FieldError(
        f"the field {field.name} is too small to tell the nodes apart; use one with more elements"
    )


def _functionals(field: Field, sextic: Form, degree: int) -> Any:
    """A matrix of the linear forms on degree-``degree`` forms that vanish on the ideal J."""
    generators = [partial(sextic, i, field) for i in range(3)]
    # By Euler's relation the sextic is in the ideal of its derivatives, unless 6 = 0.
    if not field.element(6):
        generators.append(dict(sextic))
    size = len(monomials(degree))
    rows: list[list[Any]] = []
    for generator in generators:
        if generator:
            shift = degree - sum(next(iter(generator)))
            rows.extend(
                to_coefficients(multiply({e: field.one}, generator), degree, field.zero)
                for e in monomials(shift)
            )
    return field.matrix(kernel(field, rows, size), size)


def _functions(field: Field, sextic: Form, extra: int, rng: Random) -> "_Algebra | None":
    """Multiplication by the monomials of degree ``extra``; None if all denominators failed."""
    low, high = _functionals(field, sextic, _DEGREE), _functionals(field, sextic, _DEGREE + extra)
    # The first coordinates of I₃/J in degree T, and its dimension in degree T + extra.
    forms = forms_with_multiplicities(field, _DEGREE, (3, 3, 3, 3))
    values = low * field.matrix(forms, len(monomials(_DEGREE))).transpose()
    _, chosen = echelon(values)
    more = forms_with_multiplicities(field, _DEGREE + extra, (3, 3, 3, 3))
    above = high * field.matrix(more, len(monomials(_DEGREE + extra))).transpose()
    if above.rank() != len(chosen):
        raise UsageError(
            "the curve has infinitely many singular points; a component is repeated: "
            "choose other components"
        )
    size = len(chosen)
    if not size:
        return _Algebra(field, {}, 0, extra)
    basis = [{e: c for e, c in zip(monomials(_DEGREE), forms[j], strict=True) if c} for j in chosen]
    blocks = {}
    for exponents in monomials(extra):
        shifted = [
            to_coefficients(multiply({exponents: field.one}, f), _DEGREE + extra, field.zero)
            for f in basis
        ]
        blocks[exponents] = high * field.matrix(shifted, len(shifted[0])).transpose()
    for _ in range(_ATTEMPTS):
        weights = [field.random_element(rng) for _ in blocks]
        divisor = _combination(weights, list(blocks.values()))
        if divisor.rank() == size:
            return _Algebra(field, _quotients(field, divisor, blocks, size), size, extra)
    return None


def _combination(weights: Sequence[Any], matrices: Sequence[Any]) -> Any:
    total = matrices[0] * weights[0]
    for weight, matrix in zip(weights[1:], matrices[1:], strict=True):
        total = total + matrix * weight
    return total


def _quotients(
    field: Field, divisor: Any, blocks: dict[Exponents, Any], size: int
) -> dict[Exponents, Any]:
    """divisor⁻¹·block for each block; their columns lie in the span of the divisor's."""
    rows = divisor.tolist()
    for block in blocks.values():
        rows = [a + b for a, b in zip(rows, block.tolist(), strict=True)]
    reduced, pivots = echelon(field.matrix(rows, len(rows[0])))
    assert pivots == list(range(size))
    top = reduced.tolist()[:size]
    return {
        exponents: field.matrix([row[size * (i + 1) : size * (i + 2)] for row in top], size)
        for i, exponents in enumerate(blocks)
    }


class _Algebra:
    """Commuting matrices, one for each monomial of degree r divided by a fixed form."""

    def __init__(self, field: Field, matrices: dict[Exponents, Any], size: int, extra: int) -> None:
        self.field = field
        self.matrices = matrices
        self.size = size
        self.extra = extra

    def points(self, rng: Random) -> list[PlanePoint]:
        if not self.size:
            return []
        field = self.field
        blocks: list[list[Vector]] = [
            [
                tuple(field.one if i == j else field.zero for j in range(self.size))
                for i in range(self.size)
            ]
        ]
        done: list[PlanePoint] = []
        candidates = list(self.matrices.values())
        for attempt in range(len(candidates) + _ATTEMPTS):
            if attempt < len(self.matrices):
                matrix = candidates[attempt]
            else:
                weights = [field.random_element(rng) for _ in candidates]
                matrix = _combination(weights, candidates)
            remaining = []
            for block in blocks:
                for modulus, part in self._split(matrix, block, rng):
                    if len(part) == len(modulus) - 1:
                        done.append(self._point(matrix, modulus, part[0]))
                    else:
                        remaining.append(part)
            blocks = remaining
            if not blocks:
                return done
        raise _too_small(field)

    def _split(
        self, matrix: Any, block: list[Vector], rng: Random
    ) -> list[tuple[list[Any], list[Vector]]]:
        """The kernels of the irreducible factors of a matrix on an invariant block."""
        field, size = self.field, len(block)
        restricted = self._restricted(matrix, block)
        found: list[tuple[list[Any], list[Vector]]] = []
        seen: list[list[Any]] = []
        while sum(len(part) for _, part in found) < size:
            vector = [field.random_element(rng) for _ in range(size)]
            for modulus, exponent in field.factor(self._annihilator(restricted, vector)):
                if exponent > 1:
                    raise UsageError(
                        f"the curve has a singular point worse than a node{self._place(block)}; "
                        "choose other components"
                    )
                if modulus in seen:
                    continue
                seen.append(modulus)
                conditions = self._value(restricted, modulus)
                rows = kernel(field, conditions.tolist(), size)
                part = (field.matrix(rows, size) * field.matrix(block, self.size)).tolist()
                found.append((modulus, part))
        return sorted(found, key=lambda item: (len(item[0]), [field.sort_key(c) for c in item[0]]))

    def _restricted(self, matrix: Any, block: list[Vector]) -> Any:
        """The matrix by which ``matrix`` acts on the columns of coordinates of a block."""
        field = self.field
        if len(block) == self.size and all(block[i][i] for i in range(self.size)):
            return matrix
        images = (matrix * field.matrix(block, self.size).transpose()).transpose().tolist()
        columns = [solve(field, block, image, self.size) for image in images]
        return field.matrix([list(c) for c in columns if c is not None], len(block)).transpose()

    def _annihilator(self, matrix: Any, vector: Vector) -> list[Any]:
        """The monic polynomial of least degree that kills a vector."""
        field = self.field
        if not any(vector):
            return [field.one]
        powers = [list(vector)]
        while True:
            image = self._image(matrix, powers[-1])
            relation = solve(field, powers, image, len(vector))
            if relation is not None:
                return [-c for c in relation] + [field.one]
            powers.append(image)

    def _image(self, matrix: Any, vector: Vector) -> list[Any]:
        column = matrix * self.field.matrix([[x] for x in vector], 1)
        return [row[0] for row in column.tolist()]

    def _value(self, matrix: Any, polynomial: Sequence[Any]) -> Any:
        field, size = self.field, matrix.nrows()
        total = field.zero_matrix(size, size)
        for coefficient in reversed(polynomial):
            total = total * matrix
            for i in range(size):
                total[i, i] = total[i, i] + coefficient
        return total

    def _point(self, matrix: Any, modulus: list[Any], vector: Vector) -> PlanePoint:
        """Coordinates as polynomials in the eigenvalue: x·v = Σ c_j·M^j·v."""
        field = self.field
        ring = ResidueRing(field, modulus)
        powers = [list(vector)]
        for _ in range(len(modulus) - 2):
            powers.append(self._image(matrix, powers[-1]))
        for lower in monomials(self.extra - 1):
            coordinates = []
            for i in range(3):
                exponents = (lower[0] + (i == 0), lower[1] + (i == 1), lower[2] + (i == 2))
                image = self._image(self.matrices[exponents], vector)
                values = solve(field, powers, image, self.size)
                assert values is not None
                coordinates.append(ring.residue(values))
            first = next((x for x in coordinates if x), None)
            if first is not None:
                return PlanePoint(ring, tuple(x / first for x in coordinates))
        raise AssertionError("some form of the degree does not vanish at the point")

    def _place(self, block: list[Vector]) -> str:
        """Where it is, if the point is rational: common eigenvectors of all matrices."""
        field = self.field
        vectors: list[Vector] = block
        for matrix in self.matrices.values():
            restricted = self._restricted(matrix, vectors)
            start = [field.one] + [field.zero] * (len(vectors) - 1)
            factors = field.factor(self._annihilator(restricted, start))
            modulus = next((m for m, e in factors if e > 1), factors[0][0])
            if len(modulus) > 2:
                return ""
            rows = kernel(field, self._value(restricted, modulus).tolist(), len(vectors))
            vectors = (field.matrix(rows, len(vectors)) * field.matrix(vectors, self.size)).tolist()
        matrix = next(iter(self.matrices.values()))
        point = self._point(matrix, [field.zero, field.one], vectors[0])
        return f", at {point}"
