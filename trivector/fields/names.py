"""From the name of a field, as files and options write it, to the field."""

import re
from typing import Any

from trivector.errors import FieldError
from trivector.fields.entries import shorten
from trivector.fields.finite import finite_field, finite_field_modulo
from trivector.fields.number import number_field
from trivector.fields.prime import prime_field
from trivector.fields.protocol import Field
from trivector.fields.rationals import QQ

__all__ = ["field_from_spec"]

_FINITE = re.compile(r"F_([0-9]{1,40})")


def field_from_spec(spec: Any) -> Field:
    """The field that a file or an option names.

    Parameters
    ----------
    spec : str or dict
        ``"Q"``; ``"F_7"``; ``"F_9"`` (with the Conway polynomial);
        ``{"characteristic": 3, "modulus": "x^2+x+2"}``;
        ``{"modulus": "x^2+1"}`` for a number field.

    Raises
    ------
    FieldError
        For anything else, a composite order, a reducible polynomial.

    Examples
    --------
    >>> from trivector.fields import field_from_spec
    >>> field_from_spec("F_101").order, field_from_spec({"modulus": "x^2+1"}).degree
    (101, 2)
    """
    if spec == "Q":
        return QQ
    if isinstance(spec, str):
        match = _FINITE.fullmatch(spec)
        if match:
            field: Field = finite_field(int(match[1]))
            return field
    elif isinstance(spec, dict):
        return _from_keys(spec)
    raise FieldError(
        f'field {shorten(spec)} is unknown; write "Q", "F_q", '
        '{"characteristic": p, "modulus": "x^2+…"} or {"modulus": "x^2+…"}'
    )


def _from_keys(spec: dict[str, Any]) -> Field:
    characteristic = spec.get("characteristic", 0)
    if type(characteristic) is not int or characteristic < 0:
        raise FieldError(f"characteristic must be a prime, not {shorten(characteristic)}")
    unknown = set(spec) - {"characteristic", "modulus"}
    if unknown or not spec:
        raise FieldError(
            f'field {shorten(spec)} must have the keys "characteristic" and "modulus", no others'
        )
    if "modulus" not in spec:
        return prime_field(characteristic)
    if not isinstance(spec["modulus"], str):
        raise FieldError(f'modulus {shorten(spec["modulus"])} must be a text such as "x^2+1"')
    if characteristic == 0:
        return number_field(spec["modulus"])
    field: Field = finite_field_modulo(characteristic, spec["modulus"])
    return field
