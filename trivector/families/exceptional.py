"""Single configurations and Lagrangians that the subject keeps coming back to."""

from collections.abc import Iterator, Sequence
from functools import cache
from itertools import product
from typing import Any

from trivector.errors import FieldError
from trivector.families.classical import Terms
from trivector.fields.protocol import Field
from trivector.subspaces import Lagrangian, Plane, Subspace

__all__ = [
    "TWENTY_LABELS",
    "cyclic_lagrangian",
    "seven_planes",
    "twenty_planes",
    "twenty_two_planes",
]

_MATCHINGS = ("01|23|45", "02|14|35", "03|15|24", "04|13|25", "05|12|34")
_SIGNS = ("+++", "+--", "-+-", "--+")

TWENTY_LABELS = tuple(f"{matching} {signs}" for matching in _MATCHINGS for signs in _SIGNS)
"""Matching and signs of each of the `twenty_planes`."""

FANO_LINES = ((0, 1, 2), (0, 3, 4), (0, 5, 6), (1, 3, 5), (1, 4, 6), (2, 3, 6), (2, 4, 5))


def _unit(i: int, n: int) -> list[int]:
    return [int(i == j) for j in range(n)]


def twenty_planes(field: Field) -> tuple[Plane, ...]:
    """⟨e_i + s·e_j, e_k + t·e_l, e_m + u·e_n⟩, stu = 1, for five disjoint matchings ij|kl|mn.

    The most that a finite complete family spanning P^5 can have in
    characteristic 0, and the only such family up to projectivity ("A very
    special EPW sextic and two IHS fourfolds", 2017, arXiv 1509.06214; "On
    Morin configurations of higher length", 2019, arXiv 1903.07480). These
    coordinates are our own.

    Returns
    -------
    tuple of 20 Plane
        In the order of `TWENTY_LABELS`.

    Raises
    ------
    FieldError
        In characteristic 2, where the signs do not differ.

    Examples
    --------
    >>> from trivector import QQ
    >>> twenty_planes(QQ)[1].to_entries()
    [[1, 1, 0, 0, 0, 0], [0, 0, 1, -1, 0, 0], [0, 0, 0, 0, 1, -1]]
    """
    if field.characteristic == 2:
        raise FieldError(
            f"the twenty planes coincide in fours over {field.name}, where 1 = −1; "
            "take a field of another characteristic"
        )
    planes = []
    for label in TWENTY_LABELS:
        matching, signs = label.split()
        rows = []
        for pair, sign in zip(matching.split("|"), signs, strict=True):
            row = _unit(int(pair[0]), 6)
            row[int(pair[1])] = int(f"{sign}1")
            rows.append(row)
        planes.append(Plane.from_rows(field, rows))
    return tuple(planes)


def seven_planes(field: Field) -> tuple[Plane, ...]:
    """⟨e_i, e_j, e_k⟩ in P^6 for the seven lines ijk of the Fano plane.

    The only finite complete family that spans P^6 ("Pairwise incident planes
    and hyperkähler four-folds", 2012, arXiv 1204.6257).

    Examples
    --------
    >>> from trivector import QQ
    >>> planes = seven_planes(QQ)
    >>> len(planes), {p.meet_dimension(q) for p in planes for q in planes if p != q}
    (7, {0})
    """
    return tuple(Plane.from_rows(field, [_unit(i, 7) for i in line]) for line in FANO_LINES)


def cyclic_lagrangian(field: Field) -> Lagrangian:
    """⟨e0∧e_i∧e_{i+1} + e_i∧e_{i+2}∧e_{i+4}, e0∧e_i∧e_{i+2} − e_{i+1}∧e_{i+2}∧e_{i+3}⟩.

    Indices 1 … 5 cyclic. Lagrangian over every field. It contains no plane over
    the closure of ℚ; modulo 2 and modulo 11 it contains some (computed). The
    group PSL(2,11) acts on its EPW sextic: "Gushel–Mukai varieties with many
    symmetries and an explicit irrational Gushel–Mukai threefold", 2021,
    arXiv 2101.01959.

    Examples
    --------
    >>> from trivector import QQ, LinearSection
    >>> LinearSection(cyclic_lagrangian(QQ)).examine().hilbert_function
    (1, 10, 20, 10, 1, 0)
    """
    basis: list[Terms] = []
    for i in range(5):
        e = [(i + shift) % 5 + 1 for shift in range(5)]
        basis.append({(0, e[0], e[1]): 1, (e[0], e[2], e[4]): 1})
        basis.append({(0, e[0], e[2]): 1, (e[1], e[2], e[3]): -1})
    return Lagrangian.span(field, 6, Subspace.from_terms(field, 6, basis).rows)


# Twenty-two planes in characteristic 2. The codes of F_4 are 0, 1, 2 = ω, 3 = ω + 1.

_PRODUCTS = ((0, 0, 0, 0), (0, 1, 2, 3), (0, 2, 3, 1), (0, 3, 1, 2))

_Vector = tuple[int, ...]


def twenty_two_planes(field: Field) -> tuple[Plane, ...]:
    """Twenty-two planes that meet pairwise in one point, each point on none or two of them.

    They are totally isotropic for Σ x_i³, span a Lagrangian and are all planes
    in it: the bound twenty of characteristic 0 fails in characteristic 2. That
    there is such a set over F_4, and only one up to the unitary group, is in
    "On 2-dimensional dual hyperovals of polar type".

    Returns
    -------
    tuple of 22 Plane
        The row spaces of (1 | A), A in a set of unitary 3×3 matrices, sorted
        over F_4. The first A is the identity.

    Raises
    ------
    FieldError
        If the field does not contain F_4.

    Notes
    -----
    (1 | A) is totally isotropic exactly if A is unitary over F_4: A·Āᵗ = 1.
    Two such planes share the points (x, x·A) with x·A = x·A′. So the
    conditions are: for A ≠ A′ there is one point x of P² with x·A = x·A′, and
    for each of the 21 points x each value x·A is taken by two of the A. The 22
    are found among the 648 unitary matrices by a search that takes the first
    pair (x, x·A) which only one A has so far, and tries all A that have it.
    It takes a few hundredths of a second, and always finds the same set.

    Examples
    --------
    >>> from trivector.fields import finite_field
    >>> planes = twenty_two_planes(finite_field(4))
    >>> len(planes), {p.meet_dimension(q) for p in planes for q in planes if p != q}
    (22, {0})
    """
    omega = _cube_root_of_unity(field)
    values = (field.zero, field.one, omega, omega + field.one)
    planes = []
    for matrix in _unitary_hyperoval():
        rows = [
            [*(values[int(i == j)] for j in range(3)), *(values[c] for c in row)]
            for i, row in enumerate(matrix)
        ]
        planes.append(Plane.from_rows(field, rows))
    return tuple(planes)


def _cube_root_of_unity(field: Field) -> Any:
    if field.characteristic == 2:
        for factor, _ in field.factor([field.one, field.one, field.one]):
            if len(factor) == 2:
                return -factor[0]
    raise FieldError(
        f"the 22 planes need a field that contains F_4, which {field.name} does not; "
        "take F_4, F_16, …"
    )


def _times(vector: _Vector, matrix: Sequence[_Vector]) -> _Vector:
    total = [0] * 3
    for c, row in zip(vector, matrix, strict=True):
        total = [t ^ _PRODUCTS[c][x] for t, x in zip(total, row, strict=True)]
    return tuple(total)


def _hermitian(first: _Vector, second: _Vector) -> int:
    """Σ x_i·y_i²."""
    total = 0
    for x, y in zip(first, second, strict=True):
        total ^= _PRODUCTS[x][_PRODUCTS[y][y]]
    return total


def _unitary_matrices() -> Iterator[tuple[_Vector, ...]]:
    """The 648 matrices over F_4 with orthonormal rows, in lexicographic order."""
    unit_vectors = [v for v in product(range(4), repeat=3) if _hermitian(v, v) == 1]
    for a in unit_vectors:
        for b in unit_vectors:
            if _hermitian(a, b) == 0:
                for c in unit_vectors:
                    if _hermitian(a, c) == _hermitian(b, c) == 0:
                        yield a, b, c


@cache
def _unitary_hyperoval() -> tuple[tuple[_Vector, ...], ...]:
    """Twenty-two unitary matrices as in the notes of `twenty_two_planes`."""
    identity = ((1, 0, 0), (0, 1, 0), (0, 0, 1))
    points = [v for v in product(range(4), repeat=3) if next(filter(None, v), 0) == 1]
    # One bit for each pair (x, x·A).
    bits: dict[tuple[_Vector, _Vector], int] = {}
    masks: dict[tuple[_Vector, ...], int] = {}
    for matrix in _unitary_matrices():
        masks[matrix] = sum(1 << bits.setdefault((x, _times(x, matrix)), len(bits)) for x in points)

    def extend(
        chosen: list[tuple[_Vector, ...]], candidates: list[tuple[_Vector, ...]]
    ) -> list[tuple[_Vector, ...]] | None:
        once = twice = 0
        for matrix in chosen:
            twice |= once & masks[matrix]
            once |= masks[matrix]
        wanted = (once & ~twice) & -(once & ~twice)
        if not wanted:
            return chosen
        for matrix in candidates:
            if masks[matrix] & wanted:
                full = twice | (once & masks[matrix])
                rest = [
                    other
                    for other in candidates
                    if not masks[other] & full and (masks[other] & masks[matrix]).bit_count() == 1
                ]
                found = extend([*chosen, matrix], rest)
                if found is not None:
                    return found
        return None

    start = [m for m in masks if (masks[m] & masks[identity]).bit_count() == 1]
    found = extend([identity], start)
    assert found is not None  # existence: "On 2-dimensional dual hyperovals of polar type"
    return tuple(sorted(found, key=lambda matrix: (matrix != identity, matrix)))
