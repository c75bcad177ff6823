"""From the name of a field, as files and options write it, to the field."""

import re
from typing import Any

from flint import fmpz

from trivector.errors import FieldError
from trivector.fields.entries import shorten
from trivector.fields.prime import prime_field
from trivector.fields.protocol import Field
from trivector.fields.rationals import QQ

__all__ = ["field_from_spec"]

_FINITE = re.compile(r"F_([0-9]{1,40})")


def field_from_spec(spec: Any) -> Field:
    """The field written as ``"Q"``, ``"F_7"`` or ``{"characteristic": 7}``.

    Raises
    ------
    FieldError
        For a name that is none of these, and for F_n with n not a prime.

    Examples
    --------
    >>> from trivector.fields import field_from_spec
    >>> field_from_spec("F_101").order
    101
    """
    if isinstance(spec, str):
        if spec == "Q":
            return QQ
        match = _FINITE.fullmatch(spec)
        if match:
            return _finite(int(match[1]))
    elif isinstance(spec, dict):
        characteristic = spec.get("characteristic")
        if set(spec) == {"characteristic"} and type(characteristic) is int:
            return prime_field(characteristic)
    raise FieldError(f'field {shorten(spec)} is unknown; write "Q", or "F_p" with a prime p < 2^63')


def _finite(order: int) -> Field:
    if order > 1 and not fmpz(order).is_prime():
        factors = fmpz(order).factor() if order < 2**64 else []
        if len(factors) == 1:
            p, r = factors[0]
            raise FieldError(
                f"field F_{order}: {order} = {p}^{r} is not a prime; "
                f"the integers modulo {order} are not a field. Use F_{p} or another prime field"
            )
    return prime_field(order)
