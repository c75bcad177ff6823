"""Random Lagrangians: uniform over a finite field, of bounded height over ℚ."""

from collections.abc import Callable, Sequence
from random import Random
from typing import Any

from trivector.errors import DimensionError, UsageError
from trivector.exterior.basis import complement_terms
from trivector.exterior.products import gram_row
from trivector.families.random_planes import random_incident_few
from trivector.fields.linear import row_space
from trivector.fields.protocol import Field
from trivector.subspaces import Lagrangian, Plane, Subspace

__all__ = [
    "random_lagrangian",
    "random_lagrangian_through",
    "random_lagrangian_with_planes",
    "random_maximal_isotropic",
]

_Vector = Sequence[Any]
_Form = Callable[[_Vector], list[Any]]


def random_lagrangian(field: Field, rng: Random, *, height: int = 3) -> Lagrangian:
    """A random Lagrangian of ∧³V, n = 6.

    Uniform over a finite field: `random_maximal_isotropic` has the proof.
    Over an infinite field it is the graph of a random symmetric 10×10 matrix
    with entries of size ≤ ``height``, from ⟨e_I : 0 ∈ I⟩ to ⟨e_I : 0 ∉ I⟩;
    nothing is claimed of the distribution.

    Cost: about a millisecond over F_101.

    Examples
    --------
    >>> from random import Random
    >>> from trivector.fields import QQ, prime_field
    >>> random_lagrangian(prime_field(101), Random(1)).is_lagrangian()
    True
    >>> A = random_lagrangian(QQ, Random(1), height=1)
    >>> max(abs(x) for row in A.rows for x in row)
    1
    """
    if field.order is not None:
        rows = random_maximal_isotropic(field, gram_row, 20, rng)
        return Lagrangian(field, 6, row_space(field, rows, 20))
    complement = complement_terms()
    rows = [[field.zero] * 20 for _ in range(10)]
    for i in range(10):  # the first ten triples contain 0
        rows[i][i] = field.one
        for j in range(i, 10):
            value = field.random_element(rng, height=height)
            for a, b in ((i, j), (j, i)):
                position, sign = complement[b]
                rows[a][position] = value if sign == 1 else -value
    return Lagrangian(field, 6, row_space(field, rows, 20))


def random_maximal_isotropic(
    field: Field, form: _Form, size: int, rng: Random, *, through: Sequence[_Vector] = ()
) -> list[list[Any]]:
    """A uniform random maximal isotropic subspace of a symplectic space over F_q.

    Parameters
    ----------
    field : a finite field
    form : callable
        v ↦ the coefficients of the linear form ⟨v, ·⟩ on F_q^size, for a
        nondegenerate alternating pairing.
    size : int
        2m, the dimension of the space.
    through : sequence of vectors, optional
        Independent, pairing to zero with each other: they will be in it.

    Returns
    -------
    list of m independent rows
        They begin with ``through``.

    Notes
    -----
    *Why uniform.* Let s vectors be given. For i = s, …, m − 1 the next vector
    v_i is uniform in the orthogonal of those before it, without their span:
    its free coordinates are uniform, the others solve the equations, and what
    depends on the vectors before is drawn again. So each sequence
    (v_s, …, v_{m−1}) of independent, pairwise orthogonal vectors comes with
    the same probability ∏ 1/(q^(2m−i) − q^i). Every maximal isotropic subspace
    that contains the given vectors has the same number of such sequences in
    it, ∏ (q^m − q^i); so all these subspaces are equally likely.

    Examples
    --------
    >>> from random import Random
    >>> from trivector.fields import prime_field
    >>> F2 = prime_field(2)
    >>> random_maximal_isotropic(F2, lambda v: [v[1], v[0]], 2, Random(1))
    [[1, 0]]
    """
    if field.order is None:
        raise UsageError(f"there is no uniform choice over the infinite field {field.name}")
    vectors = [list(vector) for vector in through]
    equations = _Equations(field, size)
    for vector in vectors:
        equations.add(form(vector))
    while len(vectors) < size // 2:
        vector = equations.random_solution(rng)
        # The form of a vector depends on those of others as the vector does.
        if equations.add(form(vector)):
            vectors.append(vector)
    return vectors


class _Equations:
    """Independent linear forms in reduced echelon form, by their pivots."""

    def __init__(self, field: Field, size: int) -> None:
        self._field = field
        self._size = size
        self._rows: dict[int, list[Any]] = {}

    def add(self, form: list[Any]) -> bool:
        """Whether the form does not depend on those before it; then it is kept."""
        for pivot, row in self._rows.items():
            factor = form[pivot]
            if factor:
                form = [x - factor * y if y else x for x, y in zip(form, row, strict=True)]
        new = next((j for j, x in enumerate(form) if x), None)
        if new is None:
            return False
        scale = self._field.one / form[new]
        form = [scale * x for x in form]
        for pivot, row in self._rows.items():
            factor = row[new]
            if factor:
                self._rows[pivot] = [
                    x - factor * y if y else x for x, y in zip(row, form, strict=True)
                ]
        self._rows[new] = form
        return True

    def random_solution(self, rng: Random) -> list[Any]:
        """Uniform among the common zeros: free coordinates are drawn, the others follow."""
        zero = self._field.zero
        vector = [
            zero if j in self._rows else self._field.random_element(rng) for j in range(self._size)
        ]
        free = [(j, x) for j, x in enumerate(vector) if x]
        for pivot, row in self._rows.items():
            vector[pivot] = -sum((row[j] * x for j, x in free), zero)
        return vector


def random_lagrangian_through(
    planes: Sequence[Plane], rng: Random, *, height: int = 2
) -> Lagrangian:
    """A random Lagrangian that contains the given planes.

    Uniform among all of them over a finite field. Over an infinite one, each
    further vector is a combination of a reduced basis of the orthogonal, with
    coefficients of size ≤ ``height``.

    Raises
    ------
    DimensionError
        If there is no plane, or they are of P^6.
    UsageError
        If two of the planes do not meet: no Lagrangian contains both.

    Examples
    --------
    >>> from random import Random
    >>> from trivector import QQ
    >>> from trivector.families import seven_planes, twenty_planes
    >>> planes = twenty_planes(QQ)[:3]
    >>> A = random_lagrangian_through(planes, Random(1))
    >>> A.is_lagrangian(), all(A.contains(plane.plucker) for plane in planes)
    (True, True)
    """
    if not planes:
        raise DimensionError("a Lagrangian through planes: at least one plane is needed")
    if planes[0].n != 6:
        raise DimensionError("a Lagrangian through planes: they must be planes of P^5, not of P^6")
    for i, plane in enumerate(planes):
        for j in range(i):
            if not plane.is_incident(planes[j]):
                raise UsageError(
                    f"planes {j} and {i} do not meet, so that no Lagrangian contains both; "
                    "leave one of them out"
                )
    field = planes[0].field
    space = Subspace.span(field, 6, [plane.plucker for plane in planes])
    if field.order is not None:
        rows = random_maximal_isotropic(field, gram_row, 20, rng, through=space.rows)
        return Lagrangian(field, 6, row_space(field, rows, 20))
    while space.dimension < 10:
        basis = field.integral_basis(space.orthogonal().rows)
        vector = [field.zero] * 20
        for row in basis:
            factor = field.random_element(rng, height=height)
            vector = [x + factor * y for x, y in zip(vector, row, strict=True)]
        space = Subspace(field, 6, row_space(field, [*space.rows, vector], 20))
    return Lagrangian(field, 6, space.rows)


def random_lagrangian_with_planes(
    field: Field, count: int, rng: Random, *, height: int = 2
) -> tuple[Lagrangian, tuple[Plane, ...]]:
    """A random Lagrangian with planted planes: ``count`` ≤ 7 planes that meet two by two.

    Returns
    -------
    Lagrangian, tuple of Plane
        The planes are chosen first, by `random_incident_few`.

    Raises
    ------
    UsageError
        For more than seven planes: beyond, planes cannot be chosen freely, and
        ``trivector.configurations.random_incident_planes`` searches for them.

    Examples
    --------
    >>> from random import Random
    >>> from trivector.fields import prime_field
    >>> A, planes = random_lagrangian_with_planes(prime_field(5), 4, Random(1))
    >>> len(set(planes)), all(A.contains(plane.plucker) for plane in planes)
    (4, True)
    """
    planes = random_incident_few(field, count, rng, height=height)
    return random_lagrangian_through(planes, rng, height=height), planes
