"""The Lagrangian of a quadric section of the quintic del Pezzo surface, in one formula.

In coordinates (t : s_0 : … : s_4) of P^5 the surface S is

    q_k = t² − s_{k+1}·s_{k+2} − s_{k+4}·t = 0        (k modulo 5),

over ℤ and smooth in every characteristic: with u_i = s_i/t the equations say
u_i = 1 − u_{i+2}·u_{i+3}. Let C = S ∩ {Q = 0} ∈ |−2K| and let V, of basis
e0 … e5 = q_0, …, q_4, Q, be the space of quadrics through C. Write p_ij for the
coordinates of ∧²k^5. S is the section of G(2,5) by p_{i,i+1} = t,
p_{i,i+2} = s_i, and its embedding sends x to the line of the q's that are
singular at x. So the plane of the quadrics of V that are singular at a node x
is λ, the vector of x in ∧²k^5, wedged with e5 + u for some u in k^5 with
B(λ, μ) + λ∧μ∧u = 0 for all μ in the P^5 of S, B the polar form of Q. All these
planes, and those of the five pencils of conics, lie in

    A_Q = U + {λ∧e5 + β(λ)},   μ∧β(λ) = −B(λ, μ) for all μ,

where U ⊂ ∧³k^5 is the annihilator of the P^5 of S, of dimension 4, spanned by
the five pencils. A_Q is Lagrangian for every symmetric B, whether C has nodes
or not, and depends on Q modulo the q_k only, up to a collineation. The planes
of A_Q are the pencils and the critical points of Q on S: the nodes of C; in
characteristic 2 those of all Q + (linear form)², c_2(Ω_S(−2K)) = 17 of them
with multiplicity, so that the length is 22 whatever Q is, when it is finite.
(Derived here; that nodal curves of |−2K| give complete families: "On Morin
configurations of higher length", 2019, arXiv 1903.07480.)
"""

from collections.abc import Sequence
from typing import Any

from trivector.errors import DimensionError, UsageError
from trivector.exterior.trivector import Trivector
from trivector.fields.protocol import Field
from trivector.subspaces import Lagrangian, Plane

__all__ = ["pencil_planes", "quadric_lagrangian", "random_quadric_polar", "ten_lines_polar"]


def quadric_lagrangian(field: Field, polar: Sequence[Sequence[Any]]) -> Lagrangian:
    """A_Q, from the matrix of the polar form B(x, y) = Q(x + y) − Q(x) − Q(y).

    Parameters
    ----------
    polar : 6×6 matrix
        Symmetric, in the coordinates t, s_0, …, s_4; in characteristic 2 with
        zeros on the diagonal.

    Returns
    -------
    Lagrangian
        In the basis q_0, …, q_4, Q of V. Cost: one row reduction.

    Raises
    ------
    DimensionError, UsageError
        If the matrix is not 6×6, or is not the polar form of a quadric.

    Examples
    --------
    >>> from trivector import LinearSection, prime_field
    >>> F7 = prime_field(7)
    >>> A = quadric_lagrangian(F7, ten_lines_polar(F7))
    >>> LinearSection(A).examine().planes_over_closure
    20
    """
    matrix = [[field.element(x) for x in row] for row in polar]
    if len(matrix) != 6 or any(len(row) != 6 for row in matrix):
        raise DimensionError("the polar form of a quadric of P^5 is a 6×6 matrix")
    for i in range(6):
        for j in range(i):
            if matrix[i][j] != matrix[j][i]:
                raise UsageError(
                    f"entries ({i}, {j}) and ({j}, {i}) of a polar form must be equal, not "
                    f"{field.format(matrix[i][j])} and {field.format(matrix[j][i])}; correct one"
                )
        if field.characteristic == 2 and matrix[i][i]:
            raise UsageError(
                f"in characteristic 2 a polar form has zeros on the diagonal, but entry "
                f"({i}, {i}) is {field.format(matrix[i][i])}; correct it"
            )
    rows = [plane.plucker for plane in pencil_planes(field)[:4]]
    for a in range(6):
        terms: dict[tuple[int, ...], Any] = dict.fromkeys(_coordinate_vector(a), field.one)
        for b in range(6):
            triple, sign = _dual_trivector(b)
            terms[triple] = -matrix[a][b] if sign == 1 else matrix[a][b]
        rows.append(Trivector.from_terms(field, 6, terms).coordinates)
    return Lagrangian.span(field, 6, rows)


def _coordinate_vector(a: int) -> list[tuple[int, ...]]:
    """λ_a∧e5 for the basis λ_a of the P^5 of S in ∧²k^5 dual to t, s_0, …, s_4."""
    if a == 0:
        return [(i, (i + 1) % 5, 5) for i in range(5)]
    return [(a - 1, (a + 1) % 5, 5)]


def _dual_trivector(b: int) -> tuple[tuple[int, ...], int]:
    """β_b ∈ ∧³k^5 with λ∧β_b = the b-th of t, s_0, …, s_4, for λ in the P^5 of S."""
    return ((2, 3, 4), 1) if b == 0 else ((b % 5, (b + 2) % 5, (b + 3) % 5), -1)


def pencil_planes(field: Field) -> tuple[Plane, ...]:
    """The planes of the five pencils of conics s_j = c·t, j = 0 … 4, in coordinates of V.

    The planes of the conics are the solutions of (s_j, t − s_{j+3}, t − s_{j+2})
    = c·(t, s_{j+1}, s_{j+4}). The minors of the two rows, −q_{j+4}, −q_{j+3} and
    q_{j+2} − q_j, are the quadrics through all of them.
    """
    planes = []
    for j in range(5):
        rows = [[0] * 6 for _ in range(3)]
        rows[0][(j + 3) % 5] = rows[1][(j + 4) % 5] = rows[2][(j + 2) % 5] = 1
        rows[2][j] = -1
        planes.append(Plane.from_rows(field, rows))
    return tuple(planes)


def ten_lines_polar(field: Field) -> list[list[Any]]:
    """The polar form of Q = t·(3t − s_0 − … − s_4), whose curve is the ten lines of S.

    t = 0 is a pentagon of five of the lines, the other factor the pentagon of the other
    five. A_Q has twenty planes; in characteristic 2 two more, at the points
    s_i = w·t with w² + w + 1 = 0.
    """
    matrix = [[field.zero] * 6 for _ in range(6)]
    matrix[0][0] = field.element(6)
    for i in range(1, 6):
        matrix[0][i] = matrix[i][0] = -field.one
    return matrix


def random_quadric_polar(field: Field, rng: Any, *, height: int = 3) -> list[list[Any]]:
    """The polar form of a random quadric of P^5."""
    matrix = [[field.zero] * 6 for _ in range(6)]
    for i in range(6):
        for j in range(i + 1):
            value = field.random_element(rng, height=height)
            matrix[i][j] = matrix[i][j] + value
            matrix[j][i] = matrix[j][i] + value
    return matrix
