"""Curves on the del Pezzo surface as people write them: ``E1; L23; x*y - 2*z^2``."""

import re
from collections.abc import Sequence
from typing import Any

from trivector.errors import UsageError
from trivector.families.nodal_curves import (
    Component,
    exceptional_curve,
    line_between,
    plane_curve,
)
from trivector.families.ternary_forms import Exponents, Form, degree_of, monomials
from trivector.fields.entries import shorten
from trivector.fields.protocol import Field

__all__ = ["components_from_text", "components_to_text", "form_from_text", "form_to_text"]

_LARGEST_EXPONENT = 6
_TERM = re.compile(r"[-+]?(?:\([^()]*\)|[^-+()])+")
_FACTOR = re.compile(r"([0-9]+(?:/[0-9]+)?|a(?:\^[0-9]{1,3})?|\([^()xyz]+\))|([xyz])(?:\^([0-9]))?")


def form_from_text(field: Field, text: str) -> dict[Exponents, Any]:
    """A polynomial in x, y, z: a sum of products; parentheses for numbers only.

    In a field with a modulus the letter a is a root of it: ``(a+1)*x*y - a*z^2``.

    Raises
    ------
    UsageError
        For anything else, with the term.

    Examples
    --------
    >>> from trivector.fields import QQ
    >>> form_from_text(QQ, "x*y - 1/2 z^2")
    {(1, 1, 0): 1, (0, 0, 2): -1/2}
    """
    compact = "".join(text.split()).replace("**", "^").replace("−", "-")
    terms = _TERM.findall(compact)
    if not terms or "".join(terms) != compact:
        raise UsageError(f"{shorten(text)} is no polynomial in x, y, z; write it like x*y-2*z^2")
    form: dict[Exponents, Any] = {}
    for term in terms:
        sign, body = (term[0], term[1:]) if term[0] in "+-" else ("+", term)
        powers, value = [0, 0, 0], field.one
        position = 0
        while position < len(body):
            match = _FACTOR.match(body, position)
            if match is None:
                raise UsageError(
                    f"{shorten(text)}: the term {shorten(term)} is not a product of a number and "
                    "powers of x, y, z; write it like 2*x*y^2"
                )
            number, letter, power = match.groups()
            if letter:
                powers["xyz".index(letter)] += int(power or 1)
            else:
                value = value * field.element(number.strip("()"))
            position = match.end()
            if body[position : position + 1] == "*" and position + 1 < len(body):
                position += 1
        if sum(powers) > _LARGEST_EXPONENT:
            raise UsageError(f"{shorten(text)}: the degree must be at most {_LARGEST_EXPONENT}")
        exponents = (powers[0], powers[1], powers[2])
        value = -value if sign == "-" else value
        form[exponents] = form[exponents] + value if exponents in form else value
    return {exponents: value for exponents, value in form.items() if value}


def form_to_text(field: Field, form: Form) -> str:
    """The polynomial in the order of `monomials`, as `form_from_text` reads it."""
    text = ""
    for exponents in monomials(degree_of(form)):
        if exponents not in form:
            continue
        entry = str(field.format(form[exponents]))
        if re.search("[-+]", entry[1:]):
            entry = f"({entry})"
        negative = entry.startswith("-")
        size = entry[1:] if negative else entry
        powers = [
            letter if power == 1 else f"{letter}^{power}"
            for letter, power in zip("xyz", exponents, strict=True)
            if power
        ]
        factors = ([] if size == "1" and powers else [size]) + powers
        text += ("-" if negative else "+" if text else "") + "*".join(factors)
    return text


def components_from_text(field: Field, text: str) -> tuple[Component, ...]:
    """Components separated by ``;``: E1 … E4, L12 … L34, and equations.

    An equation may have a name before it, ``a: x-2*y``; those without one
    are called C1, C2, … by their position among the equations.

    Examples
    --------
    >>> from trivector.fields import QQ
    >>> [c.name for c in components_from_text(QQ, "E1; L23; a: x-z; x*y+y*z-2*x*z")]
    ['E1', 'L23', 'a', 'C2']
    """
    found: list[Component] = []
    equations = 0
    for part in (piece.strip() for piece in text.split(";")):
        exceptional = re.fullmatch(r"E([0-9]+)", part)
        line = re.fullmatch(r"L([1-4])([1-4])", part)
        if not part:
            continue
        if exceptional:
            found.append(exceptional_curve(int(exceptional[1])))
        elif line and line[1] != line[2]:
            i, j = sorted((int(line[1]), int(line[2])))
            found.append(line_between(field, i, j))
        else:
            equations += 1
            name, colon, equation = part.rpartition(":")
            form = form_from_text(field, equation)
            found.append(plane_curve(field, form, name.strip() if colon else f"C{equations}"))
    if not found:
        raise UsageError("no components were given; write them like E1; L23; x*y-2*z^2")
    return tuple(found)


def components_to_text(field: Field, components: Sequence[Component]) -> str:
    """As `components_from_text` reads it, without names: equations, and E1, L23."""
    parts = []
    for component in components:
        if component.form is None or re.fullmatch(r"L[1-4]{2}", component.name):
            parts.append(component.name)
        else:
            parts.append(form_to_text(field, component.form))
    return "; ".join(parts)
