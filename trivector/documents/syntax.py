"""The syntax of the two notations: JSON with exact numbers, and plain text."""

import json
import re
from dataclasses import dataclass
from typing import Any, NoReturn

from flint import fmpz

from trivector.errors import DocumentError

__all__ = ["FloatLiteral", "TextBlock", "is_json", "parse_json", "parse_text"]

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
    """Lines of numbers between blank lines: (line number from 1, entries)."""

    lines: tuple[tuple[int, tuple[str, ...]], ...]


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
    try:
        return json.loads(
            text,
            parse_int=_exact_int,
            parse_float=FloatLiteral,
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
        keys = [key for key, _ in pairs]
        twice = next(key for key in keys if keys.count(key) > 1)
        _refuse(f"{name}: key {twice!r} occurs twice in one object; remove one of them")
    return result


def _refuse(fault: str) -> NoReturn:
    raise DocumentError([fault])


def parse_text(text: str) -> list[TextBlock]:
    """Blocks of rows: entries separated by spaces or commas, blocks by blank lines.

    ``#`` starts a comment; a line that holds only a comment separates nothing.
    """
    blocks: list[TextBlock] = []
    lines: list[tuple[int, tuple[str, ...]]] = []
    for number, line in enumerate(text.splitlines(), start=1):
        content, _, _ = line.partition("#")
        entries = tuple(entry for entry in _SEPARATORS.split(content) if entry)
        if entries:
            lines.append((number, entries))
        elif not line.strip() and lines:
            blocks.append(TextBlock(tuple(lines)))
            lines = []
    if lines:
        blocks.append(TextBlock(tuple(lines)))
    return blocks
