"""The quintic del Pezzo surface in P^5, its quadrics, and the planes of a curve in |−2K|.

S is P² blown up in p1 = (1:0:0), p2 = (0:1:0), p3 = (0:0:1), p4 = (1:1:1), in
P^5 by the six cubics through them. A curve C in |−2K| is a plane sextic with
double points there. The quadrics of P^5 through C form V, of dimension 6:
five contain S, one more cuts out C. Source: "On Morin configurations of
higher length", 2019, arXiv 1903.07480.
"""

from collections.abc import Callable, Sequence
from itertools import combinations, combinations_with_replacement
from typing import Any

from trivector.families.ternary_forms import (
    Form,
    evaluate,
    forms_with_multiplicities,
    from_coefficients,
    monomials,
    multiply,
    taylor_part,
    to_coefficients,
)
from trivector.fields.linear import Rows, echelon, rank, row_space, solve
from trivector.fields.matrices import ScalarMatrix
from trivector.fields.protocol import Field

__all__ = ["PENCILS", "DelPezzoSurface", "QuadricSpace"]

PENCILS = ("pencil p1", "pencil p2", "pencil p3", "pencil p4", "pencil p1p2p3p4")
"""The five pencils of conics on S: lines through p_i, conics through all four."""

_PAIRS = tuple(combinations_with_replacement(range(6), 2))
_PAIR_INDEX = {pair: i for i, pair in enumerate(_PAIRS)}


class DelPezzoSurface:
    """S ⊂ P^5 over a field, with the coordinates of P^5 given by a basis of its cubics.

    Examples
    --------
    >>> from trivector.fields import prime_field
    >>> surface = DelPezzoSurface(prime_field(2))
    >>> len(surface.cubics), [len(rows) for rows in surface.pencil_quadrics()]
    (6, [3, 3, 3, 3, 3])
    """

    def __init__(self, field: Field) -> None:
        self.field = field
        rows = forms_with_multiplicities(field, 3, (1, 1, 1, 1))
        self.cubics = tuple(from_coefficients(row, 3) for row in rows)
        self._cubic_rows = rows
        self._products = [
            to_coefficients(multiply(self.cubics[i], self.cubics[j]), 6, field.zero)
            for i, j in _PAIRS
        ]

    def pencil_quadrics(self) -> tuple[Rows, ...]:
        """For each pencil the quadrics that contain the planes of its conics.

        If ℓ0, ℓ1 span the pencil and c0, c1, c2 the curves residual to its
        members in the hyperplane sections, these are the 2×2 minors of the
        matrix of linear forms ℓ_i·c_j: the ideal of a cubic scroll, three
        quadrics over every field.
        """
        found = []
        for index in range(5):
            if index < 4:
                through = tuple(int(i == index) for i in range(4))
                pencil = forms_with_multiplicities(self.field, 1, through)
                residual = forms_with_multiplicities(self.field, 2, [1 - m for m in through])
                degrees = (1, 2)
            else:
                pencil = forms_with_multiplicities(self.field, 2, (1, 1, 1, 1))
                residual = forms_with_multiplicities(self.field, 1, (0, 0, 0, 0))
                degrees = (2, 1)
            matrix = [
                [
                    self._linear_form(
                        multiply(from_coefficients(a, degrees[0]), from_coefficients(b, degrees[1]))
                    )
                    for b in residual
                ]
                for a in pencil
            ]
            minors = [
                self._difference(
                    self._product(matrix[0][i], matrix[1][j]),
                    self._product(matrix[0][j], matrix[1][i]),
                )
                for i, j in combinations(range(3), 2)
            ]
            found.append(row_space(self.field, minors, len(_PAIRS)))
        return tuple(found)

    def _linear_form(self, cubic: Form) -> tuple[Any, ...]:
        values = to_coefficients(cubic, 3, self.field.zero)
        solution = solve(self.field, self._cubic_rows, values, len(monomials(3)))
        assert solution is not None
        return solution

    def _product(self, first: Sequence[Any], second: Sequence[Any]) -> list[Any]:
        result = [self.field.zero] * len(_PAIRS)
        for i, a in enumerate(first):
            for j, b in enumerate(second):
                position = _PAIR_INDEX[min(i, j), max(i, j)]
                result[position] = result[position] + a * b
        return result

    @staticmethod
    def _difference(first: Sequence[Any], second: Sequence[Any]) -> list[Any]:
        return [a - b for a, b in zip(first, second, strict=True)]

    def quadric_cutting(self, sextic: Form) -> tuple[Any, ...] | None:
        """A quadric whose section with S is the sextic; None unless it has the double points."""
        values = to_coefficients(sextic, 6, self.field.zero)
        return solve(self.field, self._products, values, len(monomials(6)))

    def image(self, point: Sequence[Any], lift: Callable[[Any], Any], zero: Any) -> list[Any]:
        """The point of P^5 of a point of P² other than p1, …, p4."""
        return [evaluate(cubic, point, lift, zero) for cubic in self.cubics]

    def image_of_direction(
        self, index: int, direction: Sequence[Any], lift: Callable[[Any], Any]
    ) -> list[Any]:
        """The point of P^5 of a direction (u, v) at a base point, on its exceptional curve."""
        u, v = direction
        found = []
        for cubic in self.cubics:
            of_v, of_u = taylor_part(cubic, index, 1, self.field)
            found.append(lift(of_u) * u + lift(of_v) * v)
        return found


class QuadricSpace:
    """V, the six-dimensional space of quadrics of P^5 through a curve C in |−2K|.

    Parameters
    ----------
    surface : DelPezzoSurface
    quadric : sequence of 21 scalars
        A quadric that cuts out C on S; the last basis vector of V. The first
        five are canonical rows of the quadrics through S.

    Notes
    -----
    Planes are subspaces of V: a row of six scalars is a quadric.
    """

    def __init__(self, surface: DelPezzoSurface, quadric: Sequence[Any]) -> None:
        self.field = surface.field
        self._pencils = surface.pencil_quadrics()
        together = [row for rows in self._pencils for row in rows]
        self.basis: Rows = (*row_space(self.field, together, len(_PAIRS)), tuple(quadric))
        assert len(self.basis) == 6
        assert rank(self.field, self.basis, len(_PAIRS)) == 6

    def pencil_planes(self) -> tuple[Rows, ...]:
        """The five planes of the pencils of conics, in the order of `PENCILS`."""
        found = []
        for rows in self._pencils:
            solutions = [solve(self.field, self.basis, row, len(_PAIRS)) for row in rows]
            found.append(tuple(solution for solution in solutions if solution is not None))
        return tuple(found)

    def singular_at(
        self, point: Sequence[Any], lift: Callable[[Any], Any], zero: Any, one: Any
    ) -> list[list[Any]]:
        """A basis of the quadrics of V that are singular at a point of C.

        ``lift`` maps scalars of the field to those of the point.
        """
        gradients = []
        for quadric in self.basis:
            gradient = [zero] * 6
            for (i, j), value in zip(_PAIRS, quadric, strict=True):
                if value:
                    lifted = lift(value)
                    gradient[i] = gradient[i] + lifted * point[j]
                    gradient[j] = gradient[j] + lifted * point[i]
            gradients.append(gradient)
        conditions = ScalarMatrix(6, 6, zero, one)
        for i, gradient in enumerate(gradients):
            for j, value in enumerate(gradient):
                conditions[j, i] = value
        reduced, pivots = echelon(conditions)
        vectors = []
        for free in (i for i in range(6) if i not in pivots):
            vector = [zero] * 6
            vector[free] = one
            for row, pivot in enumerate(pivots):
                vector[pivot] = -reduced[row, free]
            vectors.append(vector)
        return vectors
