"""The local length of a section at one of its planes, exactly, over any field."""

from collections.abc import Sequence
from itertools import product
from typing import Any

from trivector.errors import UndecidedError
from trivector.exterior.products import minors
from trivector.fields.linear import kernel, rank, reduce_vector, row_space
from trivector.fields.protocol import Field
from trivector.sections.hilbert import grassmannian_degree
from trivector.subspaces import Plane, Subspace

__all__ = ["is_reduced_at", "local_algebra", "local_length"]

Polynomial = dict[tuple[int, ...], Any]
"""Coefficients by sorted tuples of variable indices: (0, 0, 4) is x_0²·x_4."""


def is_reduced_at(section: Subspace, plane: Plane) -> bool:
    """Whether the plane is an isolated reduced point of G(3,V) ∩ P(L).

    Holds over the field of the data exactly when it holds over its closure:
    the differentials of the linear equations of L at the plane must have
    rank 3(n − 3). Cost: one rank of that many columns.
    """
    field, n = section.field, section.n
    equations = kernel(field, section.rows, section.ambient_dimension)
    rows = plane.rows
    tangents = [
        minors([*rows[:i], unit, *rows[i + 1 :]]) for i in range(3) for unit in _complement(plane)
    ]
    values = [
        [_apply(equation, tangent, field.zero) for tangent in tangents] for equation in equations
    ]
    return rank(field, values, 3 * (n - 3)) == 3 * (n - 3)


def local_length(section: Subspace, plane: Plane, *, most: int | None = None) -> int | None:
    """The multiplicity of a plane in the section G(3,V) ∩ P(L).

    Parameters
    ----------
    section : Subspace
        L, of which ``plane`` is a decomposable.
    most : int, optional
        The largest number of unknowns of a linear system.

    Returns
    -------
    int or None
        The length of the local ring, the same over every extension of the
        field; None when it exceeds the degree of G(3,V) (42 for n = 6, 462
        for n = 7), which proves the section infinite: a finite section by L
        lies in a finite one by a general linear space of complementary
        dimension through L (over the closure), and that has this length.

    Raises
    ------
    UndecidedError
        If a system would need more than ``most`` unknowns.

    Notes
    -----
    In the chart W + x, x ∈ Hom(W, V/W), the equations are polynomials of
    degree ≤ 3. Their inverse system, the functionals on k[x] that vanish on
    the ideal and on a power of the maximal ideal, is built degree by degree:
    a functional is known by its products with the variables, which must be
    compatible ("inverse systems", Macaulay; the integration form of the
    condition works in every characteristic). The systems are small: at most
    3(n−3)·(length so far) unknowns.
    """
    if is_reduced_at(section, plane):
        return 1
    system = _InverseSystem(section.field, 3 * (section.n - 3), _chart_equations(section, plane))
    bound = grassmannian_degree(section.n)
    while system.grow():
        if system.length > bound:
            return None
        if most is not None and system.unknowns > most:
            raise UndecidedError(f"a local length needs more than {most} unknowns; raise the limit")
    return system.length


def local_algebra(section: Subspace, plane: Plane) -> list[tuple[int, int, list[list[Any]]]] | None:
    """The local ring of the section at a plane, as matrices.

    Returns
    -------
    list of (i, column, matrix), or None
        The coordinate x of the chart in which row i of the plane (in reduced
        echelon form) is w_i + x·e_column, as the matrix by which it multiplies
        in the basis dual to the inverse system: strictly lower triangular
        matrices of the size of `local_length` that commute; 1 is the first
        basis vector. None where `local_length` is None.
    """
    units, width = _complement(plane), section.n - 3
    system = _InverseSystem(section.field, 3 * width, _chart_equations(section, plane))
    while system.grow():
        if system.length > grassmannian_degree(section.n):
            return None
    size, zero = system.length, section.field.zero
    columns = [next(c for c, x in enumerate(unit) if x) for unit in units]
    return [
        (
            i,
            column,
            [
                row + [zero] * (size - len(row))
                for row in (list(shift[i * width + j]) for shift in system.shifts)
            ],
        )
        for i in range(3)
        for j, column in enumerate(columns)
    ]


def _complement(plane: Plane) -> list[list[Any]]:
    """Unit vectors that span V together with the plane."""
    field = plane.field
    pivots = {next(j for j, x in enumerate(row) if x) for row in plane.rows}
    return [
        [field.one if i == j else field.zero for i in range(plane.n)]
        for j in range(plane.n)
        if j not in pivots
    ]


def _apply(form: Sequence[Any], vector: Sequence[Any], zero: Any) -> Any:
    return sum((a * b for a, b in zip(form, vector, strict=True) if a and b), zero)


def _chart_equations(section: Subspace, plane: Plane) -> list[Polynomial]:
    """The equations of L on the planes spanned by w_i + Σ_j x_ij·e_j."""
    field = section.field
    equations = kernel(field, section.rows, section.ambient_dimension)
    units = _complement(plane)
    width = len(units)
    polynomials: list[Polynomial] = [{} for _ in equations]
    for choice in product(range(-1, width), repeat=3):
        rows = [plane.rows[i] if c < 0 else units[c] for i, c in enumerate(choice)]
        monomial = tuple(sorted(i * width + c for i, c in enumerate(choice) if c >= 0))
        trivector = minors(rows)
        for polynomial, equation in zip(polynomials, equations, strict=True):
            value = _apply(equation, trivector, field.zero)
            if value:
                polynomial[monomial] = polynomial.get(monomial, field.zero) + value
    return polynomials


class _InverseSystem:
    """Functionals φ_0 = evaluation at 0, φ_1, … annihilating the ideal at 0.

    ``shifts[k][i]`` are the coordinates of x_i·φ_k in the φ_l that were known
    when φ_k was added: all those of lower degree.
    """

    def __init__(self, field: Field, variables: int, equations: list[Polynomial]) -> None:
        self.field = field
        self.variables = variables
        self.equations = equations
        self.shifts: list[list[list[Any]]] = [[[] for _ in range(variables)]]
        self._values: list[dict[tuple[int, ...], Any]] = [{}]

    @property
    def length(self) -> int:
        return len(self.shifts)

    @property
    def unknowns(self) -> int:
        """Of the linear system that the next `grow` solves."""
        return self.variables * self.length

    def value(self, k: int, monomial: tuple[int, ...]) -> Any:
        """φ_k at a monomial."""
        if not monomial:
            return self.field.one if k == 0 else self.field.zero
        known = self._values[k].get(monomial)
        if known is None:
            first, rest = monomial[0], monomial[1:]
            known = sum(
                (c * self.value(m, rest) for m, c in enumerate(self.shifts[k][first]) if c),
                self.field.zero,
            )
            self._values[k][monomial] = known
        return known

    def grow(self) -> bool:
        """Add the functionals of the next degree; False when there are none."""
        known, n = self.length, self.variables
        zero = self.field.zero
        conditions = []
        # x_j·(x_i·φ) = x_i·(x_j·φ), the unknown x_i·φ = Σ_k A[i·known + k]·φ_k.
        for i in range(n):
            for j in range(i + 1, n):
                for target in range(known):
                    row = [zero] * (n * known)
                    for k in range(target + 1, known):
                        if target < len(self.shifts[k][i]):
                            row[i * known + k] = self.shifts[k][j][target]
                            row[j * known + k] = -self.shifts[k][i][target]
                    if any(row):
                        conditions.append(row)
        for equation in self.equations:
            row = [zero] * (n * known)
            for monomial, coefficient in equation.items():
                if monomial:
                    first, rest = monomial[0], monomial[1:]
                    for k in range(known):
                        value = self.value(k, rest)
                        if value:
                            position = first * known + k
                            row[position] = row[position] + coefficient * value
            conditions.append(row)
        solutions = kernel(self.field, conditions, n * known)
        old = row_space(
            self.field,
            [
                [x for shift in self.shifts[k] for x in shift + [zero] * (known - len(shift))]
                for k in range(1, known)
            ],
            n * known,
        )
        reduced = [reduce_vector(solution, old) for solution in solutions]
        fresh = row_space(self.field, [r for r in reduced if any(r)], n * known)
        for solution in fresh:
            self.shifts.append([list(solution[i * known : (i + 1) * known]) for i in range(n)])
            self._values.append({})
        return bool(fresh)
