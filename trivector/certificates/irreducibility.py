"""Evidence that a polynomial is irreducible, short enough to be checked by hand."""

from collections.abc import Sequence
from itertools import islice
from math import lcm
from typing import Any

from flint import fmpq, fmpz

from trivector.fields.protocol import Field

__all__ = ["irreducibility"]

_MOST_PLACES = 400
_MOST_VALUES = 4000
# Below this bound a few strong pseudoprime tests prove a prime.
_LARGEST_PRIME = 3317044064679887385961981


def irreducibility(field: Field, modulus: Sequence[Any]) -> dict[str, Any] | None:
    """Evidence that a monic polynomial over a field is irreducible.

    Parameters
    ----------
    modulus : sequence of scalars, constant first

    Returns
    -------
    dict or None
        ``{}`` over a finite field, where irreducibility is checked directly;
        ``{"place": …}``, a place at which the polynomial stays irreducible;
        over ℚ also ``{"value": n}``, where it takes a prime value, up to a
        small factor, so large that it has no factors. None if neither was
        found: that proves nothing.

    Notes
    -----
    A place exists exactly when the Galois group contains a cycle of full
    length (density theorem of Chebotarev), so not for ℚ(√2, √3); values of
    polynomials without such a cycle are small in the cases that occur.

    Examples
    --------
    >>> from trivector.fields import QQ
    >>> irreducibility(QQ, [QQ.element(c) for c in (-2, 0, 1)])
    {'place': {'prime': 2147483629}}
    >>> irreducibility(QQ, [QQ.element(c) for c in (1, 0, -10, 0, 1)])
    {'value': 14}
    """
    if field.order is not None:
        return {}
    degree = len(modulus) - 1
    for reduction in islice(field.reductions(), _MOST_PLACES):
        try:
            (reduced,) = reduction.rows([modulus])
        except ZeroDivisionError:
            continue
        factors = reduction.field.factor(reduced)
        if len(factors) == 1 and factors[0][1] == 1 and len(factors[0][0]) == degree + 1:
            return {"place": reduction.place}
    return _prime_value(modulus) if field.reconstructs else None


def _prime_value(modulus: Sequence[fmpq]) -> dict[str, int] | None:
    scale = lcm(*(int(c.q) for c in modulus))
    integers = [int((c * scale).p) for c in modulus]
    radius = 1 + max(abs(c) for c in modulus[:-1])
    first = int(radius.p // radius.q) + 2
    for n in range(first, first + _MOST_VALUES):
        value = abs(sum(c * n**i for i, c in enumerate(integers)))
        for small in range(1, 1000):
            if small >= n - radius:
                break
            quotient, rest = divmod(value, small)
            if not rest and quotient < _LARGEST_PRIME and fmpz(quotient).is_prime():
                return {"value": n}
    return None
