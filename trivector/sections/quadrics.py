"""The Plücker relations restricted to a linear space: the quadrics of a section."""

from collections.abc import Sequence
from typing import Any

from trivector.exterior.plucker import plucker_relations

__all__ = ["Quadric", "restricted_quadrics"]

Quadric = dict[tuple[int, int], Any]
"""Coefficients of x_a·x_b, a ≤ b, in the coordinates of L; zeros left out."""


def restricted_quadrics(rows: Sequence[Sequence[Any]], n: int, zero: Any) -> list[Quadric]:
    """The 35 (n = 6) or 140 (n = 7) Plücker relations in coordinates of L.

    Parameters
    ----------
    rows : m rows of C(n,3) scalars
        A basis b_1, …, b_m of L; the point x stands for Σ x_a·b_a.

    Returns
    -------
    list of Quadric
        In the order of `plucker_relations`; zero quadrics included. Sparse
        rows make this fast: echelon rows have a column for each coordinate.
    """
    columns: list[list[tuple[int, Any]]] = [
        [(a, row[i]) for a, row in enumerate(rows) if row[i]] for i in range(len(rows[0]))
    ]
    quadrics = []
    for relation in plucker_relations(n):
        quadric: Quadric = {}
        for sign, i, j in relation.terms:
            for a, left in columns[i]:
                for b, right in columns[j]:
                    key = (a, b) if a <= b else (b, a)
                    product = left * right if sign == 1 else -(left * right)
                    quadric[key] = quadric.get(key, zero) + product
        quadrics.append({key: value for key, value in quadric.items() if value})
    return quadrics
