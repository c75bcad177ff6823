"""Random trivectors of a given orbit, and random subspaces of ∧³V."""

from math import comb
from random import Random
from typing import Any

from trivector.errors import DimensionError, UsageError
from trivector.exterior.trivector import Trivector
from trivector.families.classical import Terms
from trivector.families.coordinate_changes import random_change
from trivector.fields.linear import row_space
from trivector.fields.protocol import Field
from trivector.subspaces import Subspace

__all__ = ["ORBITS", "random_subspace", "random_trivector"]

_NORMAL_FORMS: dict[str, Terms] = {
    "zero": {},
    "decomposable": {(0, 1, 2): 1},
    "divisible": {(0, 1, 2): 1, (0, 3, 4): 1},
    "tangent": {(0, 4, 5): 1, (1, 5, 3): 1, (2, 3, 4): 1},
    "split": {(0, 1, 2): 1, (3, 4, 5): 1},
}

ORBITS = (*_NORMAL_FORMS, "nonsplit")
"""The orbits of GL_6 on ∧³V over a finite field; the last has one for each quadratic extension."""


def random_trivector(field: Field, orbit: str, rng: Random, *, height: int = 1) -> Trivector:
    """A random trivector of six-space in a given orbit.

    Parameters
    ----------
    orbit : str
        One of `ORBITS`: zero; decomposable; divisible, v∧ω with ω of rank 4;
        tangent, at a plane; split, a sum of two decomposables of disjoint
        planes; nonsplit, such a sum over a quadratic extension K only.
    height : int
        Over an infinite field, of the entries of the coordinate change.

    Returns
    -------
    Trivector
        g·(a normal form) with g random in GL_6. Over a finite field g is
        uniform and GL_6 is transitive on the orbit, so the trivector is
        uniform in it.

    Notes
    -----
    The nonsplit form is the trace from K to k of κ_0∧κ_1∧κ_2, where
    κ_i = e_i + θ·e_{3+i} and θ generates K: the sum of this decomposable and its
    conjugate. Its coefficient of a product with j factors e_{3+i} is Tr θ^j.
    Over an infinite field θ is random.

    Raises
    ------
    UsageError
        For another orbit.

    Examples
    --------
    >>> from random import Random
    >>> from trivector.fields import prime_field
    >>> random_trivector(prime_field(7), "decomposable", Random(1)).is_decomposable()
    True
    >>> random_trivector(prime_field(7), "nonsplit", Random(1)).is_decomposable()
    False
    """
    if orbit not in ORBITS:
        raise UsageError(f"orbit must be one of {', '.join(ORBITS)}, not {orbit!r}")
    if orbit == "nonsplit":
        form = Trivector.from_terms(field, 6, _nonsplit(field, rng, height))
    else:
        form = Trivector.from_terms(field, 6, dict(_NORMAL_FORMS[orbit]))
    return form.act(random_change(field, rng, height=height)) if form else form


def _nonsplit(field: Field, rng: Random, height: int) -> dict[tuple[int, ...], Any]:
    trace, norm = _quadratic(field, rng, height)
    traces = [field.one + field.one, trace]
    for _ in range(2):
        traces.append(trace * traces[-1] - norm * traces[-2])
    return {
        tuple(i + 3 * b for i, b in enumerate(bits)): traces[sum(bits)]
        for bits in ((a, b, c) for a in (0, 1) for b in (0, 1) for c in (0, 1))
    }


def _quadratic(field: Field, rng: Random, height: int) -> tuple[Any, Any]:
    """Trace and norm of a random θ of degree 2 over k, separable."""
    while True:
        trace, norm = (field.random_element(rng, height=height) for _ in range(2))
        factors = field.factor([norm, -trace, field.one])
        # In characteristic 2 trace ≠ 0 says that it is separable.
        if len(factors[0][0]) == 3 and (trace or field.characteristic != 2):
            return trace, norm


def random_subspace(
    field: Field, dimension: int, rng: Random, *, n: int = 6, height: int = 3
) -> Subspace:
    """A random subspace of ∧³k^n of a given dimension: uniform over a finite field.

    It is spanned by random vectors; every subspace has the same number of bases.

    Raises
    ------
    DimensionError
        If there is no subspace of that dimension.

    Examples
    --------
    >>> from random import Random
    >>> from trivector.fields import prime_field
    >>> random_subspace(prime_field(3), 12, Random(1)).dimension
    12
    """
    size = comb(n, 3)
    if not 0 <= dimension <= size:
        raise DimensionError(f"a subspace of ∧³V has a dimension of 0 … {size}, not {dimension}")
    while True:
        rows = row_space(
            field,
            [
                [field.random_element(rng, height=height) for _ in range(size)]
                for _ in range(dimension)
            ],
            size,
        )
        if len(rows) == dimension:
            return Subspace(field, n, rows)
