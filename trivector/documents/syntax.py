"""The syntax of the two notations: JSON with exact numbers, and plain text."""

import json
import re
from collections.abc import Iterator
from dataclasses import dataclass
from io import StringIO
from typing import Any, NoReturn

from flint import fmpz

from trivector.errors import DocumentError
from trivector.exterior.basis import dimension_from_size

__all__ = [
    "ENTRIES_KEPT",
    "FloatLiteral",
    "TextBlock",
    "is_json",
    "parse_json",
    "parse_text",
]

LINES_KEPT = 4
"""A plane has three rows; a fourth line shows that there are too many."""

ENTRIES_KEPT = 40
"""The longest row is a Plücker vector of 35 entries."""

_MOST_FLOATS = 10_000
# int() refuses more digits than this by default; flint does not.
_SAFE_DIGITS = 4000
_SEPARATORS = re.compile(r"[\s,;]+")


class FloatLiteral(float):
    """A float in a document, kept with its text so that the error can quote it."""

    text: str

    def __new__(cls, text: str) -> "FloatLiteral":
        value = super().__new__(cls, text)
        value.text = text
        return value

    def __repr__(self) -> str:
        return self.text


@dataclass(frozen=True)
class TextBlock:
    """Lines of numbers that belong together.

    Attributes
    ----------
    lines : tuple of (line number from 1, entries)
        The first `LINES_KEPT` of them; no more than `ENTRIES_KEPT` entries each.
    count : int
        How many lines there are.
    last : int
        The number of the last line.
    """

    lines: tuple[tuple[int, tuple[str, ...]], ...]
    count: int
    last: int


def is_json(text: str) -> bool:
    """Whether a document is meant to be JSON: it starts with a brace, bracket or quote."""
    return text.lstrip()[:1] in ("{", "[", '"')


def parse_json(text: str, name: str) -> Any:
    """A JSON document with exact integers.

    Raises
    ------
    DocumentError
        With line and column where the syntax breaks; for a key that occurs
        twice in one object; for nesting that is too deep.
    """
    floats = 0

    def parse_float(digits: str) -> FloatLiteral:
        nonlocal floats
        floats += 1
        if floats > _MOST_FLOATS:
            raise DocumentError(
                [f"{name}: floats such as {digits}; entries are integers or fractions 'a/b'"]
            )
        return FloatLiteral(digits)

    try:
        return json.loads(
            text,
            parse_int=_exact_int,
            parse_float=parse_float,
            parse_constant=FloatLiteral,
            object_pairs_hook=lambda pairs: _object(pairs, name),
        )
    except json.JSONDecodeError as error:
        raise DocumentError(
            [
                f"{name}: line {error.lineno} column {error.colno}: not JSON "
                f"({error.msg.lower()}); correct it there"
            ]
        ) from None
    except RecursionError:
        raise DocumentError(
            [f"{name}: brackets are nested too deeply; planes are lists of lists"]
        ) from None


def _exact_int(digits: str) -> int:
    return int(digits) if len(digits) < _SAFE_DIGITS else int(fmpz(digits))


def _object(pairs: list[tuple[str, Any]], name: str) -> dict[str, Any]:
    result = dict(pairs)
    if len(result) < len(pairs):
        seen: set[str] = set()
        for key, _ in pairs:
            if key in seen:
                _refuse(f"{name}: key {key!r} occurs twice in one object; remove one of them")
            seen.add(key)
    return result


def _refuse(fault: str) -> NoReturn:
    raise DocumentError([fault])


def parse_text(text: str) -> Iterator[TextBlock]:
    """Blocks of rows: entries separated by spaces or commas, blocks by blank lines.

    ``#`` starts a comment; a line that holds only a comment separates
    nothing. A row as long as a Plücker vector is a block of its own. Lazy,
    so that a long file of garbage is not read beyond its first faults.
    """
    lines: list[tuple[int, tuple[str, ...]]] = []
    count = last = 0
    for number, line in enumerate(StringIO(text), start=1):
        content = line.partition("#")[0].strip(" \t\r\n\f\v,;")
        if content:
            count, last = count + 1, number
            if len(lines) < LINES_KEPT:
                entries = tuple(_SEPARATORS.split(content, maxsplit=ENTRIES_KEPT - 1))
                if count == 1 and dimension_from_size(len(entries)):
                    yield TextBlock(((number, entries),), 1, number)
                    count = 0
                else:
                    lines.append((number, entries))
        elif not line.strip() and lines:
            yield TextBlock(tuple(lines), count, last)
            lines, count = [], 0
    if lines:
        yield TextBlock(tuple(lines), count, last)
