"""The points of a finite section in the form in which a certificate lists them."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import permutations
from typing import Any

from trivector.exterior.basis import sort_sign, subsets
from trivector.fields.linear import rank, solve
from trivector.fields.prime import prime_field
from trivector.fields.protocol import Field, Reduction, ResidueField
from trivector.fields.rationals import QQ
from trivector.sections.graded import QuadricAlgebra
from trivector.sections.multiplicity import local_algebra
from trivector.sections.quadrics import restricted_quadrics
from trivector.sections.section_report import ClosedPoint
from trivector.sections.study import Limits
from trivector.subspaces import Plane, Subspace

__all__ = ["SchemePart", "decisive_degree", "scheme_part"]

Entries = list[list[Any]]


@dataclass(frozen=True)
class SchemePart:
    """A closed point with its multiplicity, over k[θ]/(modulus), k the field of the data.

    Attributes
    ----------
    modulus : list of scalars or None
        Monic, constant first; None for a rational point.
    rows : 3 rows of n entries
        Each entry a list of coefficients of powers of θ.
    nilpotents : list of (row, column, matrix of entries)
        What is added to the entries; strictly lower triangular matrices.
    """

    multiplicity: int
    modulus: list[Any] | None
    rows: list[Entries]
    nilpotents: list[tuple[int, int, list[Entries]]]

    @property
    def degree(self) -> int:
        """The degree of the residue field."""
        return len(self.modulus) - 1 if self.modulus else 1

    def to_json(self, field: Field, given: Sequence[Plane] = ()) -> dict[str, Any]:
        """As the checker reads it; one of the given planes by its index."""

        def number(entry: Sequence[Any]) -> Any:
            return [field.numbers(c) for c in entry] if self.modulus else field.numbers(entry[0])

        def matrix(rows: Sequence[Entries]) -> Any:
            return [[number(entry) for entry in row] for row in rows]

        found: dict[str, Any] = {}
        index = None if self.modulus else self._index(given)
        if index is None:
            found["rows"] = matrix(self.rows)
        else:
            found["plane"] = index
        if self.modulus:
            found["modulus"] = [field.numbers(c) for c in self.modulus]
        if self.multiplicity > 1:
            found["multiplicity"] = self.multiplicity
            found["nilpotents"] = [[i, c, matrix(m)] for i, c, m in self.nilpotents]
        return found

    def _index(self, given: Sequence[Plane]) -> int | None:
        rows = tuple(tuple(entry[0] for entry in row) for row in self.rows)
        return next((i for i, plane in enumerate(given) if plane.rows == rows), None)

    def operators(self, reduction: Reduction, coordinates: Sequence[tuple[int, ...]]) -> list[Any]:
        """Plücker coordinates as matrices over the field of a reduction."""
        field = reduction.field
        degree, size = self.degree, self.degree * self.multiplicity
        powers = [_identity(field, degree)]
        if self.modulus:
            (modulus,) = reduction.rows([self.modulus])
            companion = field.zero_matrix(degree, degree)
            for i in range(degree):
                if i:
                    companion[i, i - 1] = field.one
                companion[i, degree - 1] = -modulus[i]
            while len(powers) < degree:
                powers.append(powers[-1] * companion)

        def place(target: Any, entry: Sequence[Any], top: int, left: int) -> None:
            (values,) = reduction.rows([entry])
            for value, power in zip(values, powers, strict=False):
                for i in range(degree) if value else ():
                    for j in range(degree):
                        at = top + i, left + j
                        target[at] = target[at] + power[i, j] * value

        matrices = [[field.zero_matrix(size, size) for _ in row] for row in self.rows]
        for i, row in enumerate(self.rows):
            for c, entry in enumerate(row):
                for k in range(self.multiplicity):
                    place(matrices[i][c], entry, k * degree, k * degree)
        for i, c, matrix in self.nilpotents:
            for s, entries in enumerate(matrix):
                for t, entry in enumerate(entries):
                    place(matrices[i][c], entry, s * degree, t * degree)
        found = []
        for columns in coordinates:
            total = field.zero_matrix(size, size)
            for a, b, c in permutations(columns):
                product = matrices[0][a] * matrices[1][b] * matrices[2][c]
                total = total + product * (field.one * sort_sign((a, b, c)))
            found.append(total)
        return found


def scheme_part(section: Subspace, point: ClosedPoint) -> SchemePart | None:
    """A closed point over the field of the data, its local ring included; None if not possible.

    Not possible: a multiple point whose residue field is a proper extension
    of a number field.
    """
    field, modulus, plane = section.field, point.modulus, point.plane
    if point.degree == 1 and plane is not None:
        return _part(section, plane, point.multiplicity, None, lambda x: [x])
    if modulus is None or point.plucker is None:
        return None
    if point.multiplicity == 1:
        return SchemePart(1, list(modulus), _rows_from(point.plucker, section.n, point.degree), [])
    residue = field.residue_field(modulus)
    if residue is None or plane is None:
        return None
    rows = tuple(tuple(residue.embed(x) for x in row) for row in section.rows)
    extended = Subspace(residue.field, section.n, rows)
    coordinates = _coordinates(field, residue, point.degree)
    return _part(extended, plane, point.multiplicity, list(modulus), coordinates)


def _coordinates(field: Field, residue: ResidueField, degree: int) -> Callable[[Any], list[Any]]:
    """The map k(θ) → k^e inverse to `ResidueField.value`, by linear algebra."""
    prime = prime_field(field.characteristic) if field.characteristic else QQ
    inner = field.numbers(field.one)
    generators = [field.one]
    while isinstance(inner, list) and len(generators) < len(inner):
        generators.append(generators[-1] * field.element("a"))
    power, rows = residue.field.one, []
    for _ in range(degree):
        rows += [residue.field.numbers(residue.embed(a) * power) for a in generators]
        power = power * residue.root
    matrix = [[prime.element(x) for x in row] for row in rows]

    def coordinates(value: Any) -> list[Any]:
        numbers = [prime.element(x) for x in residue.field.numbers(value)]
        solution = solve(prime, matrix, numbers, len(numbers))
        if solution is None:
            raise AssertionError("the powers of θ are a basis of its field")
        flat, size = [prime.format(x) for x in solution], len(generators)
        groups = [flat[i : i + size] for i in range(0, len(flat), size)]
        return [
            sum((a * field.element(c) for a, c in zip(generators, group, strict=True)), field.zero)
            for group in groups
        ]

    return coordinates


def _part(
    section: Subspace, plane: Plane, multiplicity: int, modulus: Any, coordinates: Any
) -> SchemePart:
    rows = [[coordinates(x) for x in row] for row in plane.rows]
    algebra = local_algebra(section, plane) if multiplicity > 1 else []
    nilpotents = [
        (i, c, [[coordinates(x) for x in row] for row in matrix]) for i, c, matrix in algebra or ()
    ]
    return SchemePart(multiplicity, modulus, rows, nilpotents)


def _rows_from(plucker: Sequence[Sequence[Any]], n: int, degree: int) -> list[Entries]:
    """Rows of a plane from its Plücker vector, without a division: contractions with two of e_I.

    Entries of fewer than ``degree`` coefficients are filled up with zeros.
    """
    names = subsets(n, 3)
    place = {name: i for i, name in enumerate(names)}
    pivot = next(i for i, entry in enumerate(plucker) if any(entry))
    zero = [plucker[pivot][0] * 0] * degree
    rows: list[Entries] = []
    for position in range(3):
        row = []
        for j in range(n):
            name = list(names[pivot])
            name[position] = j
            if len(set(name)) < 3:
                row.append(zero)
                continue
            entry = [*plucker[place[tuple(sorted(name))]], *zero][:degree]
            row.append(entry if sort_sign(name) == 1 else [-c for c in entry])
        rows.append(row)
    return rows


def decisive_degree(
    section: Subspace, parts: Sequence[SchemePart], reduction: Reduction, limits: Limits
) -> tuple[int, ...] | None:
    """(H(0), …, H(d)) at a reduction, d the first degree in which the theorem proves all planes.

    H(d) is the length of the parts, and they impose as many conditions on
    forms of degree d − 1. None where there is no such degree within the
    limits; `BadReductionError` at a bad reduction.
    """
    field = reduction.field
    length = sum(part.degree * part.multiplicity for part in parts)
    if not section.dimension:
        return (1, 0)
    names = subsets(section.n, 3)
    pivots = [next(j for j, x in enumerate(row) if x) for row in section.rows]
    rows = reduction.rows(section.rows)
    quadrics = restricted_quadrics(rows, section.n, field.zero)
    algebra = QuadricAlgebra(field, len(rows), quadrics)
    conditions = _Conditions(
        algebra, [p.operators(reduction, [names[j] for j in pivots]) for p in parts]
    )
    while True:
        top, here = algebra.top, algebra.hilbert[-1]
        if here == length == conditions.rank(top - 1):
            return tuple(algebra.hilbert)
        if here == 0 or top >= limits.max_degree:
            return None
        if algebra.next_shape()[1] > limits.columns(field):
            return None
        algebra.extend()


class _Conditions:
    """Monomials at points that are matrices: M ↦ M(X_1, …, X_m)·e_0."""

    def __init__(self, algebra: QuadricAlgebra, points: Sequence[Sequence[Any]]) -> None:
        self.algebra = algebra
        self.points = points
        self._values: list[dict[int, Any]] = []
        for operators in points:
            start = algebra.field.zero_matrix(operators[0].nrows(), 1)
            start[0, 0] = algebra.field.one
            self._values.append({0: start})

    def rank(self, degree: int) -> int:
        """How many conditions the points impose on forms of a degree."""
        field, rows = self.algebra.field, []
        for code in self.algebra.bases[degree]:
            vectors = [self._value(k, code) for k in range(len(self.points))]
            rows.append([v[i, 0] for v in vectors for i in range(v.nrows())])
        return rank(field, rows, len(rows[0])) if rows and rows[0] else 0

    def _value(self, k: int, code: int) -> Any:
        known = self._values[k].get(code)
        if known is None:
            index, rest = self.algebra.first_factor(code)
            known = self.points[k][index] * self._value(k, rest)
            self._values[k][code] = known
        return known


def _identity(field: Field, size: int) -> Any:
    matrix = field.zero_matrix(size, size)
    for i in range(size):
        matrix[i, i] = field.one
    return matrix
