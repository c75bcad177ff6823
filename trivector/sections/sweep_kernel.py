"""Which points of a cell deserve a closer look: the compiled half of the sweep.

Numbers are codes 0 … q − 1 of the elements of F_q, 0 and 1 being zero and
one, and arithmetic is a look at a table: one kernel for all q, prime or not.
Importing this module loads numba, so `trivector.sections.sweep` does it late.
The kernel releases the interpreter's lock; threads share its arguments.
"""

from collections.abc import Callable, Sequence
from typing import Any, NamedTuple, TypeVar, cast

import numba
import numpy as np
import numpy.typing as npt

__all__ = ["Tables", "flagged_points", "make_tables", "prepare"]

Codes = npt.NDArray[np.uint16]
Indices = npt.NDArray[np.int64]
_Function = TypeVar("_Function", bound=Callable[..., Any])

# Null spaces of larger dimension are always flagged, their quadrics not looked at.
_LARGEST_NULLITY = 4


def _inlined(function: _Function) -> _Function:
    return cast(_Function, numba.njit(nogil=True)(function))


def _cached(function: _Function) -> _Function:
    try:
        return cast(_Function, numba.njit(nogil=True, cache=True)(function))
    except RuntimeError:  # no directory can be written: compile in every process
        return _inlined(function)


class Tables(NamedTuple):
    """The operations of F_q on codes; the inverse of 0 is recorded as 0."""

    add: Codes
    mul: Codes
    neg: Codes
    inv: Codes


def make_tables(add: Codes, mul: Codes) -> Tables:
    """Negatives and inverses, read off the tables of addition and multiplication."""
    neg = np.argmax(add == 0, axis=1).astype(np.uint16)
    inv = np.argmax(mul == 1, axis=1).astype(np.uint16)
    return Tables(np.ascontiguousarray(add), np.ascontiguousarray(mul), neg, inv)


@_inlined
def _reduce_rows(matrix: Codes, nrows: int, ncols: int, pivots: Indices, tables: Tables) -> int:
    """Reduced row echelon form of the upper left block, in place.

    Returns the rank; the pivot columns stand in ``pivots``.
    """
    add, mul, neg, inv = tables
    rank = 0
    for column in range(ncols):
        if rank == nrows:
            break
        found = rank
        while found < nrows and matrix[found, column] == 0:
            found += 1
        if found == nrows:
            continue
        scale = inv[matrix[found, column]]
        for k in range(column, ncols):
            entry = matrix[found, k]
            matrix[found, k] = matrix[rank, k]
            matrix[rank, k] = mul[scale, entry]
        for row in range(nrows):
            factor = neg[matrix[row, column]]
            if row != rank and factor != 0:
                for k in range(column, ncols):
                    matrix[row, k] = add[matrix[row, k], mul[factor, matrix[rank, k]]]
        pivots[rank] = column
        rank += 1
    return rank


@_inlined
def _has_independent_columns(matrix: Codes, nrows: int, ncols: int, tables: Tables) -> bool:
    """Whether the upper left block has rank ``ncols``; stops at the first dependent column.

    Destroys the block.
    """
    add, mul, neg, inv = tables
    for column in range(ncols):
        found = column
        while found < nrows and matrix[found, column] == 0:
            found += 1
        if found >= nrows:
            return False
        if found != column:
            for k in range(column, ncols):
                matrix[column, k], matrix[found, k] = matrix[found, k], matrix[column, k]
        scale = neg[inv[matrix[column, column]]]
        for row in range(found + 1, nrows):
            entry = matrix[row, column]
            if entry != 0:
                factor = mul[scale, entry]
                for k in range(column + 1, ncols):
                    matrix[row, k] = add[matrix[row, k], mul[factor, matrix[column, k]]]
    return True


@_inlined
def _null_vectors(
    reduced: Codes, ncols: int, pivots: Indices, rank: int, vectors: Codes, tables: Tables
) -> None:
    """A basis of the null space of a block in reduced row echelon form."""
    count = 0
    passed = 0
    for column in range(ncols):
        if passed < rank and pivots[passed] == column:
            passed += 1
            continue
        for k in range(ncols):
            vectors[count, k] = 0
        vectors[count, column] = 1
        for row in range(passed):
            vectors[count, pivots[row]] = tables.neg[reduced[row, column]]
        count += 1


@_inlined
def _polar(bivectors: Codes, a: int, c: int, terms: Indices, f: int, tables: Tables) -> Any:
    """b_ij·c_kl − b_ik·c_jl + b_il·c_jk, the half of b∧c that begins with b."""
    add, mul, neg, _ = tables
    first = mul[bivectors[a, terms[f, 0]], bivectors[c, terms[f, 1]]]
    second = mul[bivectors[a, terms[f, 2]], bivectors[c, terms[f, 3]]]
    third = mul[bivectors[a, terms[f, 4]], bivectors[c, terms[f, 5]]]
    return add[add[first, third], neg[second]]


@_inlined
def _may_contain_decomposable(
    bivectors: Codes,
    size: int,
    pfaffians: Indices,
    quadrics: Codes,
    pivots: Indices,
    vectors: Codes,
    tables: Tables,
) -> bool:
    """False only if no combination of the bivectors, except zero, has rank 2.

    The Pfaffians are quadrics in ``size`` variables. If they span all
    quadrics they have no common zero. If they span a hyperplane, the linear
    form on quadrics that vanishes on it has the values x_a·x_c at a common
    zero x.
    """
    nquadrics = pfaffians.shape[0]
    for f in range(nquadrics):
        column = 0
        for a in range(size):
            for c in range(a, size):
                value = _polar(bivectors, a, c, pfaffians, f, tables)
                if c != a:
                    value = tables.add[value, _polar(bivectors, c, a, pfaffians, f, tables)]
                quadrics[f, column] = value
                column += 1
    monomials = size * (size + 1) // 2
    rank = _reduce_rows(quadrics, nquadrics, monomials, pivots, tables)
    if rank != monomials - 1:
        return rank < monomials
    _null_vectors(quadrics, monomials, pivots, rank, vectors, tables)
    return _is_point(vectors, size, tables.mul)


@_inlined
def _is_point(form: Codes, size: int, mul: Codes) -> bool:
    """Whether the values form[0] at x_a·x_c are products of coordinates, up to a factor."""
    a = 0
    while a < size and form[0, a * size - a * (a - 1) // 2] == 0:
        a += 1
    if a == size:
        return False
    start = a * size - a * (a - 1) // 2  # of x_a·x_a, x_a·x_(a+1), …
    position = 0
    for c in range(size):
        for e in range(c, size):
            # x_c is zero for c < a, because its square is.
            if c < a:
                if form[0, position] != 0:
                    return False
            elif (
                mul[form[0, position], form[0, start]]
                != mul[form[0, start + c - a], form[0, start + e - a]]
            ):
                return False
            position += 1
    return True


@_inlined
def _prepare_line(
    reduced: Codes,
    slope: Codes,
    bivectors: Codes,
    fixed: int,
    moving: int,
    pivots: Indices,
    tables: Tables,
) -> int:
    """Eliminate the fixed rows; returns the number of columns that are left.

    The pivot columns are cleared from the moving rows and their slopes. The
    other columns move to the left, and their bivectors to the top, where the
    bivectors of the pivot columns that come along with them are added.
    """
    add, mul, neg, _ = tables
    ncols = reduced.shape[1]
    rank = _reduce_rows(reduced, fixed, ncols, pivots, tables)
    for r in range(rank):
        for row in range(moving):
            factor = neg[reduced[fixed + row, pivots[r]]]
            slope_factor = neg[slope[row, pivots[r]]]
            for k in range(pivots[r], ncols):
                entry = reduced[r, k]
                reduced[fixed + row, k] = add[reduced[fixed + row, k], mul[factor, entry]]
                slope[row, k] = add[slope[row, k], mul[slope_factor, entry]]
        for k in range(pivots[r] + 1, ncols):
            factor = neg[reduced[r, k]]
            if factor != 0:
                for i in range(bivectors.shape[1]):
                    bivectors[k, i] = add[bivectors[k, i], mul[factor, bivectors[pivots[r], i]]]
    width = 0
    passed = 0
    for column in range(ncols):
        if passed < rank and pivots[passed] == column:
            passed += 1
            continue
        for row in range(moving):
            reduced[fixed + row, width] = reduced[fixed + row, column]
            slope[row, width] = slope[row, column]
        for i in range(bivectors.shape[1]):
            bivectors[width, i] = bivectors[column, i]
        width += 1
    return width


@_inlined
def _fill_block(
    block: Codes, reduced: Codes, slope: Codes, fixed: int, width: int, t: int, tables: Tables
) -> None:
    """The moving rows at the point t of a line."""
    for row in range(slope.shape[0]):
        for k in range(width):
            block[row, k] = tables.add[reduced[fixed + row, k], tables.mul[t, slope[row, k]]]


@_cached
def flagged_points(
    base: Codes,
    slopes: Codes,
    fixed: int,
    bivectors: Codes,
    pfaffians: Indices,
    first: int,
    last: int,
    tables: Tables,
    out: Indices,
) -> int:
    """The points where M = base + Σ_c x_c·slopes[c] has dependent columns, less some.

    Parameters
    ----------
    base : R×m codes
    slopes : C×R×m codes
        Point number i has as coordinates x_0 … x_(C−1) the digits of i in
        base q, the highest first. The rows 0 … fixed − 1 do not depend on
        the last coordinate.
    bivectors : m×P codes
        The bivector of each column of M.
    pfaffians : F×6 positions
        ij, kl, ik, jl, il, jk for each four indices. Points are left out
        when the bivectors of the null vectors of M have been seen to
        contain none of rank 2. With F = 0 no point is left out.
    first, last : int
        The range of lines; line number l consists of the points
        l·q … l·q + q − 1.
    out : at least (last − first)·q integers

    Returns
    -------
    int
        How many points have been written to ``out``, in increasing order.

    Notes
    -----
    On a line the fixed rows are eliminated once; what is left for each point
    is a matrix of six rows (n = 6) whose entries are linear in x_(C−1).
    """
    add, mul, _, _ = tables
    q = add.shape[0]
    ncoords, nrows, ncols = slopes.shape
    moving = nrows - fixed
    nquadrics = pfaffians.shape[0]
    largest_monomials = _LARGEST_NULLITY * (_LARGEST_NULLITY + 1) // 2
    reduced = np.empty((nrows, ncols), np.uint16)
    slope = np.empty((moving, ncols), np.uint16)
    block = np.empty((moving, ncols), np.uint16)
    line_bivectors = np.empty_like(bivectors)
    point_bivectors = np.empty((_LARGEST_NULLITY, bivectors.shape[1]), np.uint16)
    quadrics = np.empty((nquadrics, largest_monomials), np.uint16)
    vectors = np.empty((_LARGEST_NULLITY, max(ncols, largest_monomials)), np.uint16)
    pivots = np.empty(max(nrows, nquadrics), np.int64)
    count = 0
    for line in range(first, last):
        reduced[:] = base
        rest = line
        for c in range(ncoords - 2, -1, -1):
            digit = rest % q
            rest //= q
            for row in range(nrows):
                for k in range(ncols):
                    reduced[row, k] = add[reduced[row, k], mul[digit, slopes[c, row, k]]]
        slope[:] = slopes[ncoords - 1, fixed:]
        line_bivectors[:] = bivectors
        width = _prepare_line(reduced, slope, line_bivectors, fixed, moving, pivots, tables)
        if width == 0:
            continue
        for t in range(q):
            if width <= moving:
                _fill_block(block, reduced, slope, fixed, width, t, tables)
                if _has_independent_columns(block, moving, width, tables):
                    continue
            if nquadrics != 0:
                _fill_block(block, reduced, slope, fixed, width, t, tables)
                rank = _reduce_rows(block, moving, width, pivots, tables)
                nullity = width - rank
                if nullity <= _LARGEST_NULLITY:
                    _null_vectors(block, width, pivots, rank, vectors, tables)
                    for a in range(nullity):
                        for i in range(bivectors.shape[1]):
                            value = vectors[a, 0] * 0
                            for k in range(width):
                                value = add[value, mul[vectors[a, k], line_bivectors[k, i]]]
                            point_bivectors[a, i] = value
                    if not _may_contain_decomposable(
                        point_bivectors, nullity, pfaffians, quadrics, pivots, vectors, tables
                    ):
                        continue
            out[count] = line * q + t
            count += 1
    return count


def prepare(
    maps: Sequence[Sequence[Sequence[int]]],
    fixed: int,
    bivectors: Sequence[Sequence[int]],
    pfaffians: Sequence[Sequence[int]],
    tables: Tables,
) -> Callable[[int, int], list[int]]:
    """`flagged_points` as a function of the range of lines, compiled and ready for threads.

    ``maps`` holds the base and after it the slopes; see there for the rest.
    """
    base, *slopes = (np.array(matrix, np.uint16) for matrix in maps)
    stacked, columns = np.stack(slopes), np.array(bivectors, np.uint16)
    terms = np.array(pfaffians, np.int64).reshape(-1, 6)
    q = len(tables.neg)

    def flagged(first: int, last: int) -> list[int]:
        out = np.empty((last - first) * q, np.int64)
        count = flagged_points(base, stacked, fixed, columns, terms, first, last, tables, out)
        found: list[int] = out[:count].tolist()
        return found

    flagged(0, 0)  # compiles now, before several threads want it at once
    return flagged
