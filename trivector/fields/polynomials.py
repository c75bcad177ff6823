"""Polynomials with rational coefficients as files write them: ``2*a^2 - 1/3*a + 5``."""

import re
from collections.abc import Sequence

from flint import fmpq, fmpq_poly, fmpz

from trivector.errors import EntryError, FieldError
from trivector.fields.entries import shorten

__all__ = ["format_polynomial", "parse_modulus", "parse_polynomial"]

_LARGEST_EXPONENT = 10_000
_TERM = re.compile(
    r"(?P<sign>[-+]?)"
    r"(?:(?P<number>[0-9]+)(?:/(?P<below>[0-9]+))?)?"
    r"(?P<times>\*)?"
    r"(?:(?P<letter>[a-z])(?:(?:\^|\*\*)(?P<power>[0-9]+))?(?:/(?P<divisor>[0-9]+))?)?"
)


def parse_polynomial(text: str, letter: str) -> fmpq_poly:
    """A sum of terms such as ``-3/4*a^2``, ``2a``, ``a/3``, ``5``.

    Raises
    ------
    EntryError
        With the text, for anything else.
    """
    compact = "".join(text.split())
    coefficients: dict[int, fmpq] = {}
    position = 0
    while position < len(compact):
        match = _TERM.match(compact, position)
        if match is None or not _is_term(match, letter, first=position == 0):
            raise EntryError(_complaint(text, letter))
        numerator = fmpz(match["number"] or 1)
        denominator = fmpz(match["below"] or 1) * fmpz(match["divisor"] or 1)
        if denominator == 0:
            raise EntryError(f"entry {shorten(text)} has denominator 0; correct the fraction")
        power = int(match["power"] or 1) if match["letter"] else 0
        if power > _LARGEST_EXPONENT:
            raise EntryError(f"entry {shorten(text)} has an exponent above {_LARGEST_EXPONENT}")
        value = fmpq(-numerator if match["sign"] == "-" else numerator, denominator)
        coefficients[power] = coefficients.get(power, fmpq(0)) + value
        position = match.end()
    if not coefficients:
        raise EntryError(_complaint(text, letter))
    return fmpq_poly([coefficients.get(i, fmpq(0)) for i in range(max(coefficients) + 1)])


def _is_term(match: re.Match[str], letter: str, *, first: bool) -> bool:
    if match.end() == match.start() or not (match["number"] or match["letter"]):
        return False
    if match["letter"] not in (None, letter) or (match["times"] and not match["letter"]):
        return False
    if match["times"] and not match["number"]:
        return False
    return first or bool(match["sign"])


def _complaint(text: str, letter: str) -> str:
    return (
        f"entry {shorten(text)} is not an element of this field; write it like "
        f"3/4 or 2*{letter}^2-{letter}/3+1"
    )


def parse_modulus(text: object) -> fmpq_poly:
    """A defining polynomial in x of degree at least 1.

    Raises
    ------
    FieldError
        If it is not a polynomial in x, or constant.
    """
    if not isinstance(text, str):
        raise FieldError(f'modulus {shorten(text)} must be a text such as "x^2+x+2"')
    try:
        polynomial = parse_polynomial(text, "x")
    except EntryError as error:
        sentence = str(error).replace("entry", "modulus", 1)
        raise FieldError(
            sentence.replace("an element of this field", "a polynomial in x")
        ) from None
    if polynomial.degree() < 1:
        raise FieldError(f"modulus {shorten(text)} is constant; give a polynomial of degree ≥ 2")
    return polynomial


def format_polynomial(coefficients: Sequence[object], letter: str) -> str:
    """The text of Σ c_i·letter^i, highest power first, without spaces; ``"0"`` if empty."""
    text = ""
    for power in range(len(coefficients) - 1, -1, -1):
        value = str(coefficients[power])
        if value == "0":
            continue
        negative = value.startswith("-")
        size = value[1:] if negative else value
        symbol = "" if power == 0 else letter if power == 1 else f"{letter}^{power}"
        text += "-" if negative else "+" if text else ""
        text += symbol if symbol and size == "1" else f"{size}*{symbol}" if symbol else size
    return text or "0"
