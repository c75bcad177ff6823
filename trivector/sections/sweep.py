"""Every plane over F_q in a linear space of trivectors: the sweep.

A plane is known by the rows (u, w, v) of its reduced row echelon form, and
they are found from below. The last row v is a point of P(U), U the span of
all basis vectors but e0 and e1. {a ∈ L : v∧a = 0} is linear and mostly zero;
its elements are v∧b with b a bivector of V/v. Those of rank 2 are found from
the Pfaffians of b (b∧b would be zero in characteristic 2); or, when there are
many b, one row further up: for each w the u with v∧w∧u ∈ L are linear again.

Up to `PYTHON_POINTS` points all of it happens here, with scalars of the
field; above, `trivector.sections.sweep_kernel` leaves out most points first.
"""

from collections import deque
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import ThreadPoolExecutor
from functools import cache, cached_property
from itertools import combinations, islice
from math import comb
from time import monotonic
from typing import Any, cast

from trivector.errors import UsageError
from trivector.exterior.basis import index_of, subsets
from trivector.exterior.products import contract, wedge
from trivector.fields.linear import Rows, kernel, rank, row_space
from trivector.subspaces import Plane, Subspace

__all__ = [
    "LARGEST_ORDER",
    "MAX_POINTS",
    "PYTHON_POINTS",
    "SweepProgress",
    "count_rational_planes",
    "is_sweepable",
    "iter_rational_planes",
    "sweep_points",
]

LARGEST_ORDER = 1024
"""The largest q: the compiled sweep has tables of q×q sums and products."""

MAX_POINTS = 2 * 10**8
"""How many points a sweep examines unless it is told to go further."""

PYTHON_POINTS = 6000
"""Up to so many points no compiled code is loaded: enough for every L over F_4, n = 6."""

SweepProgress = Callable[[int, int], None]
"""Called with the number of points of P(U) that are done, and of all."""

Vector = Sequence[Any]

# Between two chunks Ctrl-C is heard: a tenth of a second for either of them.
_CHUNK, _PYTHON_CHUNK = 1 << 16, 1 << 9
_SECONDS_BETWEEN_REPORTS = 0.2


def sweep_points(n: int, q: int) -> int:
    """The number of points of P(U), dim U = n − 2, over F_q.

    >>> sweep_points(6, 101)
    1040604
    """
    return _projective_count(n - 2, q)


def iter_rational_planes(
    subspace: Subspace,
    *,
    jobs: int = 1,
    max_points: int = MAX_POINTS,
    on_progress: SweepProgress | None = None,
) -> Iterator[Plane]:
    """Every plane over F_q whose Plücker vector lies in L, exactly once.

    Exhaustive over the field of L, for every L except ∧³V, n = 6 or 7, and
    for infinite sections too. It says nothing of planes over extensions.

    Parameters
    ----------
    subspace : Subspace
        L, over a field with at most `LARGEST_ORDER` elements.
    jobs : int
        Threads that look through the points; they do not change the answer.
    max_points : int
        Refuse when more points than that would have to be examined.
    on_progress : callable, optional
        ``on_progress(done, total)``, in points of P(U).

    Returns
    -------
    iterator of Plane
        Lazy, in bounded memory. The order is the same on every machine: by
        the last rows of the echelon forms, their pivot columns first.

    Raises
    ------
    UsageError
        At the call: for a field that is infinite or too large, for too many
        points, and for L = ∧³V, where the planes are those of P(V).

    Notes
    -----
    Cost: about q^(n−3) eliminations of six rows (n = 6) or ten (n = 7), some
    tenths of a microsecond each, one or two microseconds if dim L > C(n−1,3);
    and 10 to 100 µs for each plane over a prime field. When dim {b} ≥ n − 1
    at every point, that is dim L ≥ 15 for n = 6 and ≥ 26 for n = 7, each v
    needs a sweep over points w; these count for ``max_points`` as well.

    Source: elementary, from the uniqueness of the reduced row echelon form.

    Examples
    --------
    >>> from trivector import Subspace, prime_field
    >>> from trivector.sections.sweep import iter_rational_planes
    >>> L = Subspace.from_terms(prime_field(5), 6, [{(0, 1, 2): 1}, {(3, 4, 5): 1}])
    >>> [plane.to_entries()[0] for plane in iter_rational_planes(L)]
    [[1, 0, 0, 0, 0, 0], [0, 0, 0, 1, 0, 0]]
    """
    if subspace.dimension == subspace.ambient_dimension:
        number = _planes_of_space(subspace.n, _order(subspace))
        raise UsageError(
            f"L is all of ∧³V: the list would be all {number:,} planes of "
            f"P^{subspace.n - 1} over {subspace.field.name}; give a proper subspace"
        )
    return _Sweep(subspace, jobs, max_points, on_progress).planes()


def count_rational_planes(
    subspace: Subspace,
    *,
    jobs: int = 1,
    max_points: int = MAX_POINTS,
    on_progress: SweepProgress | None = None,
) -> int:
    """The number of planes over F_q whose Plücker vectors lie in L.

    The length of `iter_rational_planes`, with the same parameters, refusals
    and cost, but linear families of planes are counted and not listed. For
    L = ∧³V the answer is the Gaussian binomial [n,3]_q.

    Examples
    --------
    >>> from trivector import Subspace, prime_field
    >>> from trivector.sections.sweep import count_rational_planes
    >>> through_e0 = [{(0, i, j): 1} for i in range(1, 6) for j in range(i + 1, 6)]
    >>> count_rational_planes(Subspace.from_terms(prime_field(2), 6, through_e0))
    155
    """
    if subspace.dimension == subspace.ambient_dimension:
        return _planes_of_space(subspace.n, _order(subspace))
    return _Sweep(subspace, jobs, max_points, on_progress).count()


def is_sweepable(subspace: Subspace, max_points: int = MAX_POINTS) -> bool:
    """Whether `iter_rational_planes` would answer and not refuse.

    >>> from trivector import QQ, Subspace, prime_field
    >>> [is_sweepable(Subspace.span(k, 6, [[1] * 20])) for k in (QQ, prime_field(101))]
    [False, True]
    """
    if subspace.field.order is None or subspace.dimension == subspace.ambient_dimension:
        return False
    return _obstacle(subspace, max_points) is None


def _order(subspace: Subspace) -> int:
    if subspace.field.order is None:
        raise UsageError(
            f"the sweep needs a finite field, not {subspace.field.name}; "
            "reduce the subspace modulo a prime"
        )
    return subspace.field.order


def _obstacle(subspace: Subspace, max_points: int) -> str | None:
    """Why a sweep over a finite field would be too large."""
    n, q, name = subspace.n, _order(subspace), subspace.field.name
    if subspace.dimension == 0:
        return None
    if q > LARGEST_ORDER:
        return (
            f"the sweep goes by tables for fields with at most {LARGEST_ORDER} elements, "
            f"not {name}; a finite section can be solved without a sweep"
        )
    points = _points_to_examine(n, q, subspace.dimension)
    if points <= max_points:
        return None
    return (
        f"the sweep over {name} would examine {points:,} points, more than "
        f"max_points = {max_points:,}; on one processor that takes about "
        f"{_duration(n, points, subspace.dimension)}. Raise max_points, or use a smaller field"
    )


def _projective_count(dimension: int, q: int) -> int:
    return sum(q**i for i in range(dimension))


def _planes_of_space(n: int, q: int) -> int:
    a, b, c = (_projective_count(n - i, q) for i in range(3))
    return a * b * c // ((q + 1) * (q * q + q + 1))


def _points_to_examine(n: int, q: int, dimension: int) -> int:
    """The points v and, if each of them needs a sweep of its own, the points w."""
    points = sweep_points(n, q)
    if dimension - comb(n - 1, 3) > n - 2:
        for i in range(2, n):
            points += q ** (n - 1 - i) * sum(q ** (n - 2 - j) for j in range(1, i))
    return points


def _duration(n: int, points: int, dimension: int) -> str:
    """An estimate in words: {b : v∧b ∈ L} is mostly zero, or never."""
    seconds = points * (0.3e-6 if dimension <= comb(n - 1, 3) else 2e-6)
    for size, unit in ((86400, "days"), (3600, "hours"), (60, "minutes")):
        if seconds >= 2 * size:
            return f"{seconds / size:,.0f} {unit}"
    return f"{max(seconds, 1):.0f} seconds"


class _Cell:
    """The points v of P(k^n) that are 1 at ``pivot``, and 0 before it and at the axes ``used``.

    Beside them elements a of ∧^p k^n, without those axes. The matrix M(v) has
    as columns their products v∧a, reduced to the entries that contain the
    pivot (they determine the rest); it is linear in v. A point is numbered by
    its coordinates behind the pivot, the last one running fastest.
    """

    def __init__(self, sweep: "_Sweep", used: tuple[int, ...], pivot: int, rows: Any) -> None:
        self.field, self.n, self.elements = sweep.field, sweep.n, sweep.elements
        self.pivot, self.ncols = pivot, len(rows)
        n, p, zero = self.n, 3 - len(used), self.field.zero
        axes = [k for k in range(n) if k not in used]
        self.behind = [k for k in axes if k > pivot]
        self.size = len(self.elements) ** len(self.behind)
        index = index_of(n, p + 1)
        # Entries that do not move with the last coordinate come first.
        entries = [J for J in combinations(axes, p + 1) if pivot in J]
        entries.sort(key=lambda J: axes[-1] in J)
        self.fixed = sum(axes[-1] not in J for J in entries)
        self.maps: list[list[list[Any]]] = []
        for k in (pivot, *self.behind):
            products = [wedge(self._unit(k), 1, row, p, n, zero) for row in rows]
            self.maps.append([[product[index[J]] for product in products] for J in entries])
        # If a = v∧b, and b is without the pivot, then this is b.
        self.contracted = [contract(self._unit(pivot), row, p, n, zero) for row in rows]

    def _unit(self, k: int) -> list[Any]:
        return [self.field.one if k == j else self.field.zero for j in range(self.n)]

    def point(self, index: int) -> list[Any]:
        """The point v with a number."""
        v = self._unit(self.pivot)
        for k in reversed(self.behind):
            index, code = divmod(index, len(self.elements))
            v[k] = self.elements[code]
        return v

    def matrix(self, v: Vector) -> list[list[Any]]:
        """M(v)."""
        result = self.maps[0]
        for k, change in zip(self.behind, self.maps[1:], strict=True):
            if x := v[k]:
                result = [
                    [a + x * b if b else a for a, b in zip(row, other, strict=True)]
                    for row, other in zip(result, change, strict=True)
                ]
        return result

    def dependent_points(self, first: int, last: int) -> list[int]:
        """The points first … last − 1 at which the columns of M(v) depend."""
        return [
            index
            for index in range(first, last)
            if rank(self.field, self.matrix(self.point(index)), self.ncols) < self.ncols
        ]

    def solutions(self, v: Vector) -> list[list[Any]]:
        """A basis of the b, without pivot and used axes, with v∧b in the span of the a."""
        null_vectors = kernel(self.field, self.matrix(v), self.ncols)
        return [_combine(x, self.contracted, self.field.zero) for x in null_vectors]

    def compiled(self, tables: Any, pfaffians: Any) -> Callable[[int, int], list[int]]:
        """From a range of lines (q points each) to the points that the kernel flags."""
        from trivector.sections.sweep_kernel import prepare

        code = self.field.sort_key
        maps = [[[code(x) for x in row] for row in matrix] for matrix in self.maps]
        bivectors = [[code(x) for x in row] for row in self.contracted]
        return prepare(maps, self.fixed, bivectors, pfaffians, tables)


class _Sweep:
    """One run over the points of P(U), with the sweeps over points w inside it."""

    def __init__(
        self, subspace: Subspace, jobs: int, max_points: int, on_progress: SweepProgress | None
    ) -> None:
        # Finite fields translate elements to codes and back, beyond the protocol.
        self.field = cast(Any, subspace.field)
        self.n, self.rows, self.jobs = subspace.n, subspace.rows, jobs
        self.report = on_progress or (lambda done, total: None)
        self.done, self.due = 0, 0.0
        self.q = _order(subspace)
        if jobs < 1:
            raise UsageError(f"jobs must be at least 1, not {jobs}")
        obstacle = _obstacle(subspace, max_points)
        if obstacle is not None:
            raise UsageError(obstacle)
        if self.rows:
            self.elements = [self.field.from_code(code) for code in range(self.q)]
        self.left_to_python = PYTHON_POINTS

    def planes(self) -> Iterator[Plane]:
        for i, v, bivectors in self._last_rows():
            if len(bivectors) <= self.n - 2:
                pairs = self._upper_rows(i, bivectors, self._quadrics(i, bivectors))
            else:
                pairs = (
                    (_combine(x, vectors, self.field.zero), w)
                    for w, vectors, count in self._middle_rows(i, bivectors)
                    for x in self._common_zeros((), len(vectors))
                    if any(x[:count])
                )
            for u, w in pairs:
                self._tick()
                yield Plane(self.field, self.n, (tuple(u), tuple(w), tuple(v)))

    def count(self) -> int:
        total = 0
        for i, _, bivectors in self._last_rows():
            size = len(bivectors)
            if size > self.n - 2:
                for _, vectors, count in self._middle_rows(i, bivectors):
                    total += self._difference(len(vectors), len(vectors) - count)
            elif quadrics := self._quadrics(i, bivectors):
                total += sum(1 for _ in self._upper_rows(i, bivectors, quadrics))
            else:  # all of them have rank 2, and those that do not count are a linear space
                first = [[b[k] for k in _pairs_before(self.n, i)] for b in bivectors]
                total += self._difference(size, size - rank(self.field, first, len(first[0])))
        return total

    def _difference(self, larger: int, smaller: int) -> int:
        return _projective_count(larger, self.q) - _projective_count(smaller, self.q)

    # The points

    def _last_rows(self) -> Iterator[tuple[int, Vector, list[list[Any]]]]:
        """Each v with its pivot and a basis of {b : v∧b ∈ L}; uninteresting v left out."""
        if not self.rows:
            return
        before = 0
        for i in range(2, self.n):
            cell = _Cell(self, (), i, self.rows)
            for last, found in self._screen(cell, _pfaffian_terms(self.n, i), self.jobs):
                for index in found:
                    self._tick(before + index)
                    v = cell.point(index)
                    bivectors = cell.solutions(v)
                    if bivectors:
                        yield i, v, bivectors
                self.due = 0.0
                self._tick(before + last)
            before += cell.size

    def _tick(self, done: int | None = None) -> None:
        """Report, but not too often; also called where one point v takes long."""
        self.done = self.done if done is None else done
        if monotonic() >= self.due:
            self.report(self.done, sweep_points(self.n, self.q))
            self.due = monotonic() + _SECONDS_BETWEEN_REPORTS

    def _middle_rows(
        self, i: int, bivectors: list[list[Any]]
    ) -> Iterator[tuple[Vector, Rows, int]]:
        """Each w with the u such that u∧w is a combination of the bivectors.

        The u come as canonical rows; those with pivot before that of w are
        combinations in which one of the first ``count`` rows occurs.
        """
        for j in range(1, i):
            cell = _Cell(self, (i,), j, bivectors)
            for _, found in self._screen(cell, (), 1):
                for index in found:
                    self._tick()
                    w = cell.point(index)
                    vectors = row_space(self.field, cell.solutions(w), self.n)
                    count = sum(any(row[:j]) for row in vectors)
                    if count:
                        yield w, vectors, count

    def _screen(
        self, cell: _Cell, pfaffians: Any, jobs: int
    ) -> Iterator[tuple[int, Sequence[int]]]:
        """Chunk after chunk: where it ends, and the points in it that deserve a closer look."""
        if cell.size == 1:
            yield 1, (0,)
            return
        if cell.size <= self.left_to_python:
            self.left_to_python -= cell.size
            for first in range(0, cell.size, _PYTHON_CHUNK):
                last = min(first + _PYTHON_CHUNK, cell.size)
                yield last, cell.dependent_points(first, last)
            return
        run = cell.compiled(self._tables, pfaffians)
        lines, step = cell.size // self.q, max(1, _CHUNK // self.q)
        chunks = ((first, min(first + step, lines)) for first in range(0, lines, step))
        if jobs == 1:
            for first, last in chunks:
                yield last * self.q, run(first, last)
            return
        pool = ThreadPoolExecutor(jobs)
        try:
            # A few chunks ahead, so that memory is bounded and no thread is idle.
            waiting = deque(
                (last, pool.submit(run, first, last)) for first, last in islice(chunks, 2 * jobs)
            )
            while waiting:
                last, future = waiting.popleft()
                found = future.result()
                waiting.extend((b, pool.submit(run, a, b)) for a, b in islice(chunks, 1))
                yield last * self.q, found
        finally:
            pool.shutdown(cancel_futures=True)

    @cached_property
    def _tables(self) -> Any:
        from trivector.sections.sweep_kernel import make_tables

        return make_tables(*self.field.operation_tables())

    # The planes over one point v

    def _upper_rows(
        self, i: int, bivectors: list[list[Any]], quadrics: Rows
    ) -> Iterator[tuple[Vector, Vector]]:
        """The rows u, w with pivots before i whose product is a combination of the bivectors."""
        field, n = self.field, self.n
        pairs = subsets(n, 2)
        for x in self._common_zeros(quadrics, len(bivectors)):
            self._tick()
            b = _combine(x, bivectors, field.zero)
            # The first nonzero entry of u∧w stands at the two pivots.
            position = next((k for k in _pairs_before(n, i) if b[k]), None)
            if position is not None:
                scale, forms = field.one / b[position], []
                for pivot, factor in zip(pairs[position], (scale, -scale), strict=True):
                    forms.append([factor if k == pivot else field.zero for k in range(n)])
                w, u = (contract(form, b, 2, n, field.zero) for form in forms)
                yield u, w

    def _quadrics(self, i: int, bivectors: list[list[Any]]) -> Rows:
        """The Pfaffians as quadrics in the coordinates of the bivectors, in echelon form."""
        monomials = _monomials(len(bivectors))
        rows = []
        for ij, kl, ik, jl, il, jk in _pfaffian_terms(self.n, i):
            row = []
            for a, c in monomials:
                x, y = bivectors[a], bivectors[c]
                value = x[ij] * y[kl] - x[ik] * y[jl] + x[il] * y[jk]
                if a != c:
                    value = value + y[ij] * x[kl] - y[ik] * x[jl] + y[il] * x[jk]
                row.append(value)
            rows.append(row)
        return row_space(self.field, rows, len(monomials))

    def _common_zeros(self, quadrics: Rows, size: int) -> Iterator[tuple[Any, ...]]:
        """The points of P(k^size), normalised, at which quadrics in echelon form vanish."""
        if size == 0:
            return
        # The monomials with the last variable come first; these quadrics contain it.
        top = [row for row in quadrics if any(row[:size])]
        rest = tuple(row[size:] for row in quadrics[len(top) :])
        for x in self._common_zeros(rest, size - 1):
            for last in self._last_coordinates(top, x):
                yield (*x, last)
        if not any(row[0] for row in top):
            yield (*[self.field.zero] * (size - 1), self.field.one)

    def _last_coordinates(self, quadrics: list[Any], x: tuple[Any, ...]) -> Sequence[Any]:
        """The t at which all quadrics vanish at (x, t).

        At most the first contains t², with coefficient 1, by the echelon form.
        """
        size, zero = len(x), self.field.zero
        square: tuple[Any, Any] | None = None
        forced: Any = None
        values = [x[a] * x[c] for a, c in _monomials(size)] if quadrics else []
        for row in quadrics:
            linear = _dot(row[1 : size + 1], x, zero)
            constant = _dot(row[size + 1 :], values, zero)
            if row[0]:
                square = linear, constant
            elif linear:
                t = -constant / linear
                if forced is not None and forced != t:
                    return ()
                forced = t
            elif constant:
                return ()
        if forced is None:
            return self.elements if square is None else self._roots(*square)
        if square and forced * forced + square[0] * forced + square[1]:
            return ()
        return (forced,)

    def _roots(self, linear: Any, constant: Any) -> Sequence[Any]:
        """The t with t² + linear·t + constant = 0, in any characteristic."""
        squares, shifted = self._quadratic_tables
        if linear:  # t = linear·s with s² + s = −constant/linear²
            return [linear * s for s in shifted[-constant / (linear * linear)]]
        return squares[-constant]

    @cached_property
    def _quadratic_tables(self) -> tuple[dict[Any, list[Any]], dict[Any, list[Any]]]:
        """All s by the value of s², and by the value of s² + s."""
        squares: dict[Any, list[Any]] = {x: [] for x in self.elements}
        shifted: dict[Any, list[Any]] = {x: [] for x in self.elements}
        for s in self.elements:
            squares[s * s].append(s)
            shifted[s * s + s].append(s)
        return squares, shifted


@cache
def _pairs_before(n: int, i: int) -> tuple[int, ...]:
    """The positions of the pairs of 0 … i − 1 in the basis of ∧²k^n."""
    return tuple(k for k, pair in enumerate(subsets(n, 2)) if pair[1] < i)


@cache
def _pfaffian_terms(n: int, i: int) -> tuple[tuple[int, ...], ...]:
    """The positions of ab, cd, ac, bd, ad, bc for each a < b < c < d without i."""
    at = index_of(n, 2)
    axes = [k for k in range(n) if k != i]
    return tuple(
        (at[a, b], at[c, d], at[a, c], at[b, d], at[a, d], at[b, c])
        for a, b, c, d in combinations(axes, 4)
    )


@cache
def _monomials(size: int) -> tuple[tuple[int, int], ...]:
    """The products of two of ``size`` variables: the last one squared, times others, the rest."""
    if size == 0:
        return ()
    last = size - 1
    return ((last, last), *((a, last) for a in range(last)), *_monomials(last))


def _dot(row: Vector, values: Vector, zero: Any) -> Any:
    return sum((a * b for a, b in zip(row, values, strict=True) if a), zero)


def _combine(coefficients: Vector, rows: Sequence[Vector], zero: Any) -> list[Any]:
    total = [zero] * len(rows[0])
    for x, row in zip(coefficients, rows, strict=True):
        if x:
            total = [a + x * b for a, b in zip(total, row, strict=True)]
    return total
