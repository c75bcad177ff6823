"""Plane curves: homogeneous polynomials in x, y, z over any field.

A form is a dict from exponents (i, j, k) to nonzero scalars. Multiplicities
are read from Taylor coefficients, which need no division, so that
characteristic 2 and 3 are as good as any.
"""

from collections.abc import Callable, Mapping, Sequence
from functools import cache
from math import comb
from typing import Any

from trivector.fields.linear import Rows, kernel
from trivector.fields.protocol import Field

__all__ = [
    "Exponents",
    "Form",
    "add",
    "degree_of",
    "evaluate",
    "forms_with_multiplicities",
    "from_coefficients",
    "monomials",
    "multiplicity",
    "multiply",
    "partial",
    "taylor_part",
    "to_coefficients",
]

Exponents = tuple[int, int, int]
Form = Mapping[Exponents, Any]

# p1, …, p4 = (1:0:0), (0:1:0), (0:0:1), (1:1:1). At p_i: the coordinate set to 1, the two
# local coordinates (u, v), and whether these are measured from 1 (at p4) or from 0.
_CHARTS = ((0, (1, 2), False), (1, (0, 2), False), (2, (0, 1), False), (2, (0, 1), True))


@cache
def monomials(degree: int) -> tuple[Exponents, ...]:
    """The exponents of one degree, powers of x first."""
    return tuple(
        (i, j, degree - i - j) for i in range(degree, -1, -1) for j in range(degree - i, -1, -1)
    )


@cache
def _positions(degree: int) -> dict[Exponents, int]:
    return {exponents: i for i, exponents in enumerate(monomials(degree))}


def to_coefficients(form: Form, degree: int, zero: Any) -> list[Any]:
    """The coefficients in the order of `monomials`."""
    result = [zero] * len(monomials(degree))
    for exponents, value in form.items():
        result[_positions(degree)[exponents]] = value
    return result


def from_coefficients(values: Sequence[Any], degree: int) -> dict[Exponents, Any]:
    """The form with these coefficients in the order of `monomials`."""
    return {e: value for e, value in zip(monomials(degree), values, strict=True) if value}


def degree_of(form: Form) -> int:
    """The degree of a nonzero form."""
    return sum(next(iter(form)))


def add(first: Form, second: Form) -> dict[Exponents, Any]:
    """The sum of two forms of one degree."""
    total = dict(first)
    for exponents, value in second.items():
        total[exponents] = total[exponents] + value if exponents in total else value
    return {exponents: value for exponents, value in total.items() if value}


def multiply(first: Form, second: Form) -> dict[Exponents, Any]:
    """The product."""
    total: dict[Exponents, Any] = {}
    for (a, b, c), x in first.items():
        for (i, j, k), y in second.items():
            exponents = (a + i, b + j, c + k)
            term = x * y
            total[exponents] = total[exponents] + term if exponents in total else term
    return {exponents: value for exponents, value in total.items() if value}


def partial(form: Form, variable: int, field: Field) -> dict[Exponents, Any]:
    """The derivative by x, y or z (0, 1, 2)."""
    result: dict[Exponents, Any] = {}
    for exponents, value in form.items():
        factor = field.element(exponents[variable]) if exponents[variable] else field.zero
        if factor:
            lowered = list(exponents)
            lowered[variable] -= 1
            result[lowered[0], lowered[1], lowered[2]] = factor * value
    return result


def evaluate(form: Form, point: Sequence[Any], lift: Callable[[Any], Any], zero: Any) -> Any:
    """The value at a point of any field; ``lift`` maps the coefficients there."""
    total = zero
    for exponents, value in form.items():
        term = lift(value)
        for coordinate, power in zip(point, exponents, strict=True):
            for _ in range(power):
                term = term * coordinate
        total = total + term
    return total


def _taylor_terms(exponents: Exponents, index: int, order: int) -> list[tuple[int, int]]:
    """(a, c) for the terms c·u^a·v^(order−a) of a monomial at the point p_index."""
    _, (first, second), moved = _CHARTS[index]
    i, j = exponents[first], exponents[second]
    if not moved:
        return [(i, 1)] if i + j == order else []
    return [
        (a, comb(i, a) * comb(j, order - a)) for a in range(order + 1) if a <= i and order - a <= j
    ]


def taylor_part(form: Form, index: int, order: int, field: Field) -> list[Any]:
    """The part of one order at a base point, a binary form in local coordinates.

    Parameters
    ----------
    index : int
        0, 1, 2, 3 for p1, …, p4.

    Returns
    -------
    list of scalars
        The coefficients of u^a·v^(order−a), a = 0, …, order.
    """
    result = [field.zero] * (order + 1)
    for exponents, value in form.items():
        for a, factor in _taylor_terms(exponents, index, order):
            result[a] = result[a] + field.element(factor) * value
    return result


def multiplicity(form: Form, index: int, field: Field) -> int:
    """The multiplicity of a nonzero form at a base point."""
    order = 0
    while not any(taylor_part(form, index, order, field)):
        order += 1
    return order


def forms_with_multiplicities(field: Field, degree: int, multiplicities: Sequence[int]) -> Rows:
    """Canonical rows of the forms with at least these multiplicities at p1, …, p4.

    Returns
    -------
    tuple of rows
        Coefficients in the order of `monomials`.
    """
    conditions = []
    for index, bound in enumerate(multiplicities):
        for order in range(bound):
            block = [[field.zero] * len(monomials(degree)) for _ in range(order + 1)]
            for column, exponents in enumerate(monomials(degree)):
                for a, factor in _taylor_terms(exponents, index, order):
                    block[a][column] = field.element(factor)
            conditions.extend(block)
    return kernel(field, conditions, len(monomials(degree)))
