"""The Plücker relations, over ℤ, and what they say of one trivector."""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from itertools import combinations
from typing import Any

from trivector.exterior.basis import index_of, sort_sign, subset_name, subsets
from trivector.exterior.products import minors, plane_candidate
from trivector.fields.entries import shorten

__all__ = ["PluckerRelation", "Violation", "decompose", "plucker_relations"]


@dataclass(frozen=True)
class PluckerRelation:
    """A quadric Σ sign·x_I·x_J that vanishes on all decomposables of ∧³k^n.

    Parameters
    ----------
    n : int
        The dimension of V.
    terms : tuple of (sign, i, j)
        Positions i, j of I, J in the basis of ∧³V.
    """

    n: int
    terms: tuple[tuple[int, int, int], ...]

    def evaluate(self, vector: Sequence[Any], zero: Any) -> Any:
        """Its value at a vector of C(n,3) scalars."""
        total = zero
        for sign, i, j in self.terms:
            product = vector[i] * vector[j]
            total = total + product if sign == 1 else total - product
        return total

    def __str__(self) -> str:
        names = subsets(self.n, 3)
        text = ""
        for sign, i, j in self.terms:
            text += (" + " if sign == 1 else " − ") if text else ("" if sign == 1 else "−")
            text += f"x{subset_name(names[i])}·x{subset_name(names[j])}"
        return text


@dataclass(frozen=True)
class Violation:
    """The proof that a trivector is not decomposable: a relation with value ≠ 0."""

    relation: PluckerRelation
    value: Any

    def __str__(self) -> str:
        return f"{self.relation} = {shorten(self.value)}, not 0"


@cache
def plucker_relations(n: int) -> tuple[PluckerRelation, ...]:
    """A ℤ-basis of the quadrics that vanish on G(3,n).

    For n = 6 there are 35, for n = 7 there are 140. Those with one index
    twice and four once are the three-term relations of a G(2,4) ⊂ G(3,n).
    Those with six distinct indices are, for each six of the n, five of the
    fifteen four-term relations r_ab = Σ ± x_{abi}·x_{complement}. The five
    below are a ℤ-basis of the lattice they span and that lattice is
    saturated (the others, such as the five r_0b, span one of index 2), so
    the basis stays one modulo 2 and 3.

    Notes
    -----
    G(3,n) is cut out by these quadrics over every field, because its
    homogeneous coordinate ring over ℤ is free with the standard monomials as
    a basis (straightening law), of rank C(C(n,3)+1, 2) − 35 (or − 140) in
    degree 2.
    """
    relations = []
    for repeated in range(n):
        others = [i for i in range(n) if i != repeated]
        for a, b, c, d in combinations(others, 4):
            pairs = (((a, b), (c, d)), ((a, c), (b, d)), ((a, d), (b, c)))
            terms = [
                _term(n, sign, (repeated, *first), (repeated, *second))
                for sign, (first, second) in zip((1, -1, 1), pairs, strict=True)
            ]
            relations.append(PluckerRelation(n, tuple(terms)))
    for six in combinations(range(n), 6):
        for a, b in ((0, 1), (0, 2), (0, 3), (0, 4), (1, 2)):
            relations.append(_exchange_relation(n, six, six[a], six[b]))
    return tuple(relations)


def _term(n: int, sign: int, first: Sequence[int], second: Sequence[int]) -> tuple[int, int, int]:
    index = index_of(n, 3)
    total = sign * sort_sign(first) * sort_sign(second)
    i, j = index[tuple(sorted(first))], index[tuple(sorted(second))]
    return (total, min(i, j), max(i, j))


def _exchange_relation(n: int, six: Sequence[int], a: int, b: int) -> PluckerRelation:
    """x_{abc}·x_{def} = x_{abd}·x_{cef} + x_{abe}·x_{dcf} + x_{abf}·x_{dec}."""
    c, *rest = (i for i in six if i not in (a, b))
    terms = [_term(n, 1, (a, b, c), rest)]
    for position, j in enumerate(rest):
        exchanged = [*rest[:position], c, *rest[position + 1 :]]
        terms.append(_term(n, -1, (a, b, j), exchanged))
    return PluckerRelation(n, tuple(terms))


def decompose(vector: Sequence[Any], n: int, zero: Any) -> list[list[Any]] | Violation:
    """The plane of a trivector, or the reason why it has none.

    Parameters
    ----------
    vector : sequence of C(n,3) scalars, not all zero

    Returns
    -------
    list of three rows, or Violation
        Rows with minors proportional to ``vector``; or the first relation of
        `plucker_relations` that fails, with its value. Exactly one of the
        two holds, over the field of the scalars and over every extension.
    """
    rows = plane_candidate(vector, n, zero)
    wedge = minors(rows)
    pivot = next(i for i, value in enumerate(vector) if value)
    if wedge[pivot] and all(
        w * vector[pivot] == v * wedge[pivot] for w, v in zip(wedge, vector, strict=True)
    ):
        return rows
    for relation in plucker_relations(n):
        value = relation.evaluate(vector, zero)
        if value:
            return Violation(relation, value)
    raise AssertionError("a vector on which all Plücker relations vanish is decomposable")
