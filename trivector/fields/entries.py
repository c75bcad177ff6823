"""Reading one entry of a file: integers and fractions, exact at any size."""

import re
from fractions import Fraction
from itertools import islice
from typing import Any

from flint import fmpq, fmpz

from trivector.errors import EntryError

__all__ = ["parse_rational", "shorten"]

_RATIONAL = re.compile(r"\s*([-+]?[0-9]+)\s*(?:/\s*([0-9]+)\s*)?")


def shorten(value: object, width: int = 40) -> str:
    """A value as it stands in an error message: at most ``width`` characters."""
    text = _text(value, width)
    return text if len(text) <= width else f"{text[: width - 1]}…"


def _text(value: object, width: int) -> str:
    if value is None or isinstance(value, bool):
        return {None: "null", True: "true", False: "false"}[value]  # as JSON writes them
    if isinstance(value, int | Fraction):
        value = fmpq(value.numerator, value.denominator)  # str() refuses many digits, flint not
    if isinstance(value, list):
        return f"[{', '.join(_text(x, width) for x in value[:width])}]"
    if isinstance(value, dict):
        items = islice(value.items(), width)
        return f"{{{', '.join(f'{_text(k, width)}: {_text(v, width)}' for k, v in items)}}}"
    return repr(value) if isinstance(value, str) else str(value)


def parse_rational(value: Any) -> fmpq:
    """An integer, a fraction or a string such as ``"-3/4"`` as a rational number.

    Raises
    ------
    EntryError
        For anything else: floats, booleans, NaN, other strings, a zero denominator.
    """
    if isinstance(value, bool):
        raise EntryError(f"entry {shorten(value)} is a boolean; write 1 or 0")
    if isinstance(value, float):
        raise EntryError(f"entry {value!r} is a float; write an integer or a fraction 'a/b'")
    if isinstance(value, int | fmpz):
        return fmpq(value)
    if isinstance(value, fmpq):
        return value
    if isinstance(value, Fraction):
        return fmpq(value.numerator, value.denominator)
    if isinstance(value, str):
        match = _RATIONAL.fullmatch(value)
        if match is None:
            raise EntryError(
                f"entry {shorten(value)} is not a number of this field; "
                "write an integer or a fraction 'a/b'"
            )
        numerator, denominator = fmpz(match[1].removeprefix("+")), fmpz(match[2] or 1)
        if denominator == 0:
            raise EntryError(f"entry {shorten(value)} has denominator 0; correct the fraction")
        return fmpq(numerator, denominator)
    if hasattr(value, "__index__"):  # numpy integers and the like
        return fmpq(value.__index__())
    raise EntryError(
        f"entry {shorten(value)} is not a number; write an integer or a fraction 'a/b'"
    )
