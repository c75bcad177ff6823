"""Matrices over fields for which python-flint has none: by scalars, or by tables.

Both classes have the part of python-flint's matrix interface that the
`Matrix` protocol names.
"""

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    import numpy as np

    from trivector.fields.finite import FieldTables

__all__ = ["ScalarMatrix", "TableMatrix"]


class ScalarMatrix:
    """Rows of scalars; sparse elimination with their own operators.

    For number fields and for finite fields too large for tables.
    """

    def __init__(self, nrows: int, ncols: int, zero: Any, one: Any) -> None:
        self._shape = (nrows, ncols)
        self._zero, self._one = zero, one
        self._rows: list[dict[int, Any]] = [{} for _ in range(nrows)]

    def nrows(self) -> int:
        return self._shape[0]

    def ncols(self) -> int:
        return self._shape[1]

    def __getitem__(self, index: tuple[int, int]) -> Any:
        return self._rows[index[0]].get(index[1], self._zero)

    def __setitem__(self, index: tuple[int, int], value: Any) -> None:
        if value:
            self._rows[index[0]][index[1]] = value
        else:
            self._rows[index[0]].pop(index[1], None)

    def tolist(self) -> list[list[Any]]:
        return [[row.get(j, self._zero) for j in range(self._shape[1])] for row in self._rows]

    def _empty(self, nrows: int, ncols: int) -> "ScalarMatrix":
        return ScalarMatrix(nrows, ncols, self._zero, self._one)

    def transpose(self) -> "ScalarMatrix":
        result = self._empty(self._shape[1], self._shape[0])
        for i, row in enumerate(self._rows):
            for j, value in row.items():
                result._rows[j][i] = value
        return result

    def __add__(self, other: "ScalarMatrix") -> "ScalarMatrix":
        result = self._empty(*self._shape)
        for i, (row, added) in enumerate(zip(self._rows, other._rows, strict=True)):
            total = dict(row)
            for j, value in added.items():
                total[j] = total[j] + value if j in total else value
            result._rows[i] = {j: value for j, value in total.items() if value}
        return result

    def __mul__(self, other: Any) -> "ScalarMatrix":
        if not isinstance(other, ScalarMatrix):
            scaled = self._empty(*self._shape)
            if other:
                scaled._rows = [{j: x * other for j, x in row.items()} for row in self._rows]
            return scaled
        result = self._empty(self.nrows(), other.ncols())
        for i, row in enumerate(self._rows):
            total: dict[int, Any] = {}
            for k, value in row.items():
                for j, factor in other._rows[k].items():
                    term = value * factor
                    total[j] = total[j] + term if j in total else term
            result._rows[i] = {j: value for j, value in total.items() if value}
        return result

    def rref(self) -> tuple["ScalarMatrix", int]:
        reduced, rank, _ = self._eliminate()
        return reduced, rank

    def rank(self) -> int:
        return self._eliminate()[1]

    def det(self) -> Any:
        return self._eliminate()[2]

    def _eliminate(self) -> tuple["ScalarMatrix", int, Any]:
        """Gauss–Jordan; the third value is the determinant of a square matrix."""
        rows = [dict(row) for row in self._rows]
        rank, determinant = 0, self._one
        for column in range(self._shape[1]):
            candidates = [i for i in range(rank, len(rows)) if column in rows[i]]
            if not candidates:
                determinant = self._zero
                continue
            pivot = min(candidates, key=lambda i: len(rows[i]))
            if pivot != rank:
                rows[rank], rows[pivot] = rows[pivot], rows[rank]
                determinant = -determinant
            leading = rows[rank][column]
            determinant = determinant * leading
            inverse = self._one / leading
            pivot_row = {j: value * inverse for j, value in rows[rank].items()}
            rows[rank] = pivot_row
            for i, row in enumerate(rows):
                factor = row.get(column) if i != rank else None
                if factor:
                    for j, value in pivot_row.items():
                        present = row.get(j)
                        term = factor * value
                        changed = -term if present is None else present - term
                        if changed:
                            row[j] = changed
                        else:
                            row.pop(j, None)
            rank += 1
            if rank == len(rows):
                break
        if rank < self._shape[0]:
            determinant = self._zero
        result = self._empty(*self._shape)
        result._rows = rows
        return result, rank, determinant


class TableMatrix:
    """Codes of elements of a small F_q in a numpy array; elimination by table look-ups."""

    def __init__(self, tables: "FieldTables", codes: "np.ndarray[Any, Any]") -> None:
        self._tables = tables
        self._codes = codes

    @classmethod
    def zeros(cls, tables: "FieldTables", nrows: int, ncols: int) -> "TableMatrix":
        import numpy as np

        return cls(tables, np.zeros((nrows, ncols), dtype=np.uint16))

    @classmethod
    def from_rows(
        cls, tables: "FieldTables", rows: Sequence[Sequence[Any]], ncols: int
    ) -> "TableMatrix":
        import numpy as np

        code = tables.code
        codes = np.array([[code(x) for x in row] for row in rows], dtype=np.uint16)
        return cls(tables, codes.reshape(len(rows), ncols))

    def nrows(self) -> int:
        return int(self._codes.shape[0])

    def ncols(self) -> int:
        return int(self._codes.shape[1])

    def __getitem__(self, index: tuple[int, int]) -> Any:
        return self._tables.elements[self._codes[index]]

    def __setitem__(self, index: tuple[int, int], value: Any) -> None:
        self._codes[index] = self._tables.code(value)

    def tolist(self) -> list[list[Any]]:
        elements = self._tables.elements
        return [[elements[code] for code in row] for row in self._codes.tolist()]

    def transpose(self) -> "TableMatrix":
        return TableMatrix(self._tables, self._codes.T.copy())

    def __add__(self, other: "TableMatrix") -> "TableMatrix":
        return TableMatrix(self._tables, self._tables.add[self._codes, other._codes])

    def __mul__(self, other: Any) -> "TableMatrix":
        tables = self._tables
        if not isinstance(other, TableMatrix):
            return TableMatrix(tables, tables.multiply[tables.code(other), self._codes])
        result = TableMatrix.zeros(tables, self.nrows(), other.ncols())
        total = result._codes
        for k in range(self.ncols()):
            products = tables.multiply[self._codes[:, k, None], other._codes[None, k, :]]
            total = tables.add[total, products]
        return TableMatrix(tables, total)

    def rref(self) -> tuple["TableMatrix", int]:
        codes, rank, _ = self._eliminate()
        return TableMatrix(self._tables, codes), rank

    def rank(self) -> int:
        return self._eliminate()[1]

    def det(self) -> Any:
        return self._eliminate()[2]

    def _eliminate(self) -> tuple["np.ndarray[Any, Any]", int, Any]:
        """Gauss–Jordan; the third value is the determinant of a square matrix."""
        import numpy as np

        add, multiply = self._tables.add, self._tables.multiply
        negative, inverse = self._tables.negative, self._tables.inverse
        codes = self._codes.copy()
        nrows, ncols = codes.shape
        rank, determinant = 0, 1
        for column in range(ncols):
            if rank == nrows:
                break
            found = np.flatnonzero(codes[rank:, column])
            if not len(found):
                determinant = 0
                continue
            pivot = rank + int(found[0])
            if pivot != rank:
                codes[[rank, pivot]] = codes[[pivot, rank]]
                determinant = int(negative[determinant])
            leading = codes[rank, column]
            determinant = int(multiply[determinant, leading])
            # Entries left of the column are zero in the pivot row.
            row = multiply[inverse[leading], codes[rank, column:]]
            codes[rank, column:] = row
            factors = negative[codes[:, column]]
            factors[rank] = 0
            others = np.flatnonzero(factors)
            if len(others):
                changes = multiply[factors[others, None], row[None, :]]
                codes[others, column:] = add[codes[others, column:], changes]
            rank += 1
        determinant = determinant if rank == nrows else 0
        return codes, rank, self._tables.elements[determinant]
