"""The six infinite families of pairwise incident planes whose span is Lagrangian.

The list: "Pairwise incident planes and hyperkähler four-folds", 2012,
arXiv 1204.6257, introduction. Every Lagrangian here is spanned by trivectors
with integer coefficients that stay independent modulo every prime: they are
the coefficients, by the parameters of the family, of the Plücker vector of a
general member, so that they span the family over every field, also where the
members over a small field span less.
"""

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from itertools import product
from random import Random
from typing import Any

from trivector.errors import FieldError, UsageError
from trivector.exterior.basis import sort_sign, subsets
from trivector.families.coordinate_changes import Change, image
from trivector.fields.linear import row_space
from trivector.fields.protocol import Field
from trivector.subspaces import Lagrangian, Plane, Subspace

__all__ = ["CLASSICAL_FAMILIES", "ClassicalFamily", "Terms"]

Terms = dict[tuple[int, ...], int]
"""A trivector with integer coefficients: {(i, j, k): coefficient}, indices in any order."""

_Draw = Callable[[int], list[Any]]
_Vectors = list[list[Any]]


@dataclass(frozen=True)
class ClassicalFamily:
    """One of the six families.

    Attributes
    ----------
    name : str
        A short name, as the command line has it.
    title : str
        ``"planes …"``.
    basis : tuple of ten trivectors
        With integer coefficients; they span the Lagrangian over every field.
    members : callable
        From a source of random vectors and a one of the field to vectors that
        span a member (or less, in special position).
    count : callable
        q ↦ the number of members over F_q.

    Examples
    --------
    >>> from random import Random
    >>> from trivector.fields import prime_field
    >>> ruling = CLASSICAL_FAMILIES["ruling"]
    >>> A = ruling.lagrangian(prime_field(3))
    >>> planes = ruling.random_planes(prime_field(3), 40, Random(1))  # there are (q+1)(q²+1)
    >>> len(set(planes)), all(A.contains(plane.plucker) for plane in planes)
    (40, True)
    """

    name: str
    title: str
    basis: tuple[Terms, ...]
    members: Callable[[_Draw, Any], _Vectors]
    count: Callable[[int], int]

    def lagrangian(self, field: Field, *, change: Change | None = None) -> Lagrangian:
        """The Lagrangian spanned by the family, moved by ``change`` if given."""
        rows = Subspace.from_terms(field, 6, self.basis).rows
        space = Lagrangian.span(field, 6, rows)
        return space if change is None else image(change, space)

    def random_plane(
        self, field: Field, rng: Random, *, height: int = 3, change: Change | None = None
    ) -> Plane:
        """A member with random parameters, moved by ``change`` if given.

        Over a finite field the parameters are uniform, and so is the member,
        but for the fixed plane of the third family, which is q² + q + 1 times
        as likely as any other. Over ℚ they are integers of size ≤ ``height``.
        """

        def draw(size: int) -> list[Any]:
            return [field.random_element(rng, height=height) for _ in range(size)]

        while True:
            rows = row_space(field, self.members(draw, field.one), 6)
            if len(rows) == 3:
                plane = Plane(field, 6, rows)
                return plane if change is None else image(change, plane)

    def random_planes(
        self,
        field: Field,
        count: int,
        rng: Random,
        *,
        height: int = 3,
        change: Change | None = None,
    ) -> tuple[Plane, ...]:
        """Distinct random members, in the order in which they were drawn.

        Raises
        ------
        UsageError
            If ``count`` is not positive.
        FieldError
            If there are not that many members over the field.
        """
        if count < 1:
            raise UsageError(f"members: at least 1, not {count}")
        if field.order is not None and count > self.count(field.order):
            raise FieldError(
                f"{count} {self.title}: over {field.name} there are only "
                f"{self.count(field.order)}; ask for fewer or take a larger field"
            )
        # By insertion, so that the order is that of the draws.
        found: dict[Plane, None] = {}
        tries = 0
        while len(found) < count:
            # Over ℚ a small height leaves few members; it grows when they are used up.
            found[self.random_plane(field, rng, height=height + tries // (8 * count))] = None
            tries += 1
        return tuple(plane if change is None else image(change, plane) for plane in found)


def _triples(accept: Callable[[tuple[int, ...]], bool]) -> tuple[Terms, ...]:
    return tuple({triple: 1} for triple in subsets(6, 3) if accept(triple))


def _of_ruling() -> tuple[Terms, ...]:
    """⟨e012, e_k∧ω, e_i∧*f_j + e_j∧*f_i, e_i∧*f_i⟩ with f_i = e_{3+i}, ω = Σ e_i∧f_i.

    The planes are those of the vectors (t·x | v×x), x in k³, on the quadric
    Σ x_i·x_{3+i} = 0. Their Plücker vector, divided by t, is
    t²·e012 − t·Σ v_k·e_k∧ω + (Σ v_i·e_i)∧*v, where *f_0 = f_1∧f_2 and so on.
    """
    star = {i: (3 + (i + 1) % 3, 3 + (i + 2) % 3) for i in range(3)}
    basis: list[Terms] = [{(0, 1, 2): 1}]
    for i in range(3):
        basis.append({(i, j, 3 + j): 1 for j in range(3) if j != i})
        basis += [{(i, *star[j]): 1, (j, *star[i]): 1} for j in range(i, 3)]
    return tuple(basis)


# P^5 as the space of quadratic monomials in three variables, so that the
# Veronese surface is the set of the points u² = (u_i·u_j), i ≤ j.
_MONOMIALS = ((0, 0), (0, 1), (0, 2), (1, 1), (1, 2), (2, 2))


def _cubics(diagonal: int) -> Iterable[Terms]:
    """By monomials of degree 3 in u: R_0∧R_1∧R_2, R_k = Σ_j u_j·E_kj + (diagonal − 1)·u_k·E_kk."""
    found: dict[tuple[int, ...], Terms] = {}
    for columns in product(range(3), repeat=3):
        factor, word = 1, []
        for k, j in enumerate(columns):
            word.append(_MONOMIALS.index((min(j, k), max(j, k))))
            factor *= diagonal if j == k else 1
        terms = found.setdefault(tuple(sorted(columns)), {})
        if sign := sort_sign(word):
            key = tuple(sorted(word))
            terms[key] = terms.get(key, 0) + sign * factor
    return found.values()


def _of_conics() -> tuple[Terms, ...]:
    """The plane of the conic over the line ξ: the multiples ξ·x_k of ξ are its equations.

    So its Plücker vector is complementary to ξx_0∧ξx_1∧ξx_2.
    """

    def complement(triple: tuple[int, ...]) -> tuple[tuple[int, ...], int]:
        rest = tuple(i for i in range(6) if i not in triple)
        return rest, sort_sign(triple + rest)

    return tuple(
        {complement(t)[0]: complement(t)[1] * value for t, value in terms.items()}
        for terms in _cubics(1)
    )


def _of_tangents() -> tuple[Terms, ...]:
    """The tangent plane at u² is spanned by the derivatives of u².

    Because Σ u_k·∂_k = 2·u², the coefficients of ∂_0∧∂_1∧∂_2 are all even.
    """
    return tuple({t: value // 2 for t, value in terms.items()} for terms in _cubics(2))


def _square(u: list[Any]) -> list[Any]:
    return [u[i] * u[j] for i, j in _MONOMIALS]


def _polar(u: list[Any], w: list[Any]) -> list[Any]:
    return [u[i] * w[j] + u[j] * w[i] for i, j in _MONOMIALS]


def _through_a_point(draw: _Draw, one: Any) -> _Vectors:
    return [[one, *[one - one] * 5], draw(6), draw(6)]


def _in_a_hyperplane(draw: _Draw, one: Any) -> _Vectors:
    return [[*draw(5), one - one] for _ in range(3)]


def _in_lines(draw: _Draw, one: Any) -> _Vectors:
    return [*([*draw(3), *[one - one] * 3] for _ in range(2)), draw(6)]


def _ruling(draw: _Draw, one: Any) -> _Vectors:
    zero = one - one
    t, a, b, c = draw(4)
    return [
        [t, zero, zero, zero, c, -b],
        [zero, t, zero, -c, zero, a],
        [zero, zero, t, b, -a, zero],
        [a, b, c, zero, zero, zero],
    ]


def _conics(draw: _Draw, one: Any) -> _Vectors:
    u, w = draw(3), draw(3)
    return [_square(u), _polar(u, w), _square(w)]


def _tangents(draw: _Draw, one: Any) -> _Vectors:
    u = draw(3)
    zero = one - one
    units = [[one if i == k else zero for i in range(3)] for k in range(3)]
    return [_square(u), *(_polar(u, w) for w in units)]


def _lines_of_p4(q: int) -> int:
    return (q**2 + 1) * (q**4 + q**3 + q**2 + q + 1)


CLASSICAL_FAMILIES: dict[str, ClassicalFamily] = {
    family.name: family
    for family in (
        ClassicalFamily(
            "point",
            "planes through a point",
            _triples(lambda triple: 0 in triple),
            _through_a_point,
            _lines_of_p4,
        ),
        ClassicalFamily(
            "hyperplane",
            "planes in a hyperplane",
            _triples(lambda triple: 5 not in triple),
            _in_a_hyperplane,
            _lines_of_p4,
        ),
        ClassicalFamily(
            "lines",
            "planes meeting a fixed plane in a line",
            _triples(lambda triple: triple[1] <= 2),
            _in_lines,
            lambda q: 1 + q * (q**2 + q + 1) ** 2,
        ),
        ClassicalFamily(
            "ruling",
            "planes of one ruling of a smooth quadric",
            _of_ruling(),
            _ruling,
            lambda q: (q + 1) * (q**2 + 1),
        ),
        ClassicalFamily(
            "conics",
            "planes of the conics of a Veronese surface",
            _of_conics(),
            _conics,
            lambda q: q**2 + q + 1,
        ),
        ClassicalFamily(
            "tangents",
            "tangent planes of a Veronese surface",
            _of_tangents(),
            _tangents,
            lambda q: q**2 + q + 1,
        ),
    )
}
"""The six, by name.

In characteristic 2 the Lagrangian of the conics contains one plane more than
the members, the nucleus plane {u_0u_1, u_0u_2, u_1u_2}; it meets every tangent
plane in a line, so that the Lagrangian of the tangent planes is the third
family of that plane.
"""
