"""From a document to the object it describes, or to all of its faults at once."""

from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import replace
from functools import partial
from itertools import chain
from math import comb
from pathlib import Path
from typing import Any, TypeVar

from trivector.configurations import Configuration
from trivector.documents.sources import read_text
from trivector.documents.syntax import (
    ENTRIES_KEPT,
    TextBlock,
    is_json,
    parse_json,
    parse_text,
)
from trivector.errors import DocumentError, TrivectorError
from trivector.exterior import Trivector
from trivector.exterior.basis import DIMENSIONS, dimension_from_size
from trivector.fields import Field, field_from_spec
from trivector.fields.entries import shorten
from trivector.fields.places import conversion
from trivector.subspaces import Plane, Subspace

__all__ = ["Document", "read", "wanted_field"]

Document = Configuration | Subspace | tuple[Trivector, ...]

_T = TypeVar("_T")

_MOST_FAULTS = 50
_KINDS = {"planes": "planes", "subspace": "basis", "trivectors": "trivectors"}


def read(path: str | Path, *, field: Field | str | None = None) -> Document:
    """Read a document: JSON of one of the kinds, or planes as plain text.

    Parameters
    ----------
    path : str or Path
        ``-`` for standard input; ``.gz`` is read transparently.
    field : Field or str, optional
        An object, a name such as ``"F_7"``, or the JSON of a field with a
        modulus. Required for plain text. A JSON document over ℚ is reduced
        modulo p, each plane and subspace by its lattice of integer points,
        so that dimensions stay; or extended to a number field. One over a
        number field Q(a) is reduced to a finite field of characteristic p in
        the same way, at a prime ideal above p: the one at which a becomes the
        first root of the modulus in the finite field. Any other field than
        the document's own is refused.

    Returns
    -------
    Configuration, Subspace or tuple of Trivector
        By the kind of the document.

    Raises
    ------
    DocumentError
        With a sentence for each fault of the file, up to 50.

    Examples
    --------
    >>> import trivector
    >>> configuration = trivector.read("data/twenty-planes.json")
    >>> len(configuration.planes), configuration.field.name
    (20, 'Q')
    """
    name = "standard input" if str(path) == "-" else str(path)
    wanted = None if field is None else wanted_field(field)
    text = read_text(path)
    if not text.strip():
        raise DocumentError([f"{name}: empty; give a JSON document or rows of numbers"])
    faults = _Faults(name)
    if is_json(text):
        document = _from_json(parse_json(text, name), wanted, faults)
    else:
        document = _from_text(parse_text(text), wanted, faults)
    if document is not None and wanted is not None:
        document = _in_field(document, wanted, faults)
    if document is None or faults.found:
        raise DocumentError(faults.sentences())
    return document


def wanted_field(field: Field | str) -> Field:
    """A field from an object, a name such as ``"F_7"``, or the JSON of a field with a modulus."""
    if not isinstance(field, str):
        return field
    return field_from_spec(parse_json(field, "field") if field.startswith("{") else field)


def _in_field(document: Document, field: Field, faults: "_Faults") -> Document | None:
    """The document itself, or what it becomes over another field."""
    source = document[0].field if isinstance(document, tuple) else document.field
    if source == field:
        return document
    way = conversion(source, field)
    assert way is not None  # `_field` has seen to that
    if isinstance(document, Configuration):
        planes = tuple(Plane.from_rows(field, way.rows(plane.rows)) for plane in document.planes)
        return replace(document, planes=planes)
    if isinstance(document, Subspace):
        return Subspace.span(field, document.n, way.rows(document.rows))
    vectors = [
        [
            faults.attempt(f"trivectors[{i}] entry {j}", partial(way.element, x))
            for j, x in enumerate(trivector.coordinates)
        ]
        for i, trivector in enumerate(document)
    ]
    return None if faults.found else tuple(Trivector(field, vector) for vector in vectors)


class _Faults:
    """Collects the faults of one document, each with its place."""

    def __init__(self, name: str) -> None:
        self.name = name
        self.found: list[str] = []

    def add(self, place: str, sentence: object) -> None:
        self.found.append(
            f"{self.name}: {place}: {sentence}" if place else f"{self.name}: {sentence}"
        )

    def attempt(self, place: str, make: Callable[[], Any]) -> Any:
        """The value, or None after noting why it cannot be had."""
        try:
            return make()
        except TrivectorError as error:
            self.add(place, error)
            return None

    def sentences(self) -> list[str]:
        shown = self.found[:_MOST_FAULTS]
        if not self.full:
            return shown
        return [*shown, f"{self.name}: … and more faults; correct these first"]

    @property
    def full(self) -> bool:
        """Whether there are more faults than are shown."""
        return len(self.found) > _MOST_FAULTS

    def each(self, items: Iterable[_T]) -> Iterator[_T]:
        """The items, until there are too many faults to go on."""
        for item in items:
            if self.full:
                return
            yield item


def _from_json(data: Any, wanted: Field | None, faults: _Faults) -> Document | None:
    if not isinstance(data, dict):
        faults.add("", 'must be an object with a "kind", not a list or a single value')
        return None
    kind = data.get("kind")
    if not isinstance(kind, str) or kind not in _KINDS:
        known = ", ".join(f'"{k}"' for k in _KINDS)
        found = f"kind {shorten(kind)} is unknown" if "kind" in data else 'no "kind"'
        faults.add("", f"{found}; write one of {known}")
    field = _field(data, wanted, faults)
    n = data.get("dimension", 6)
    if type(n) is not int or n not in DIMENSIONS:
        faults.add("dimension", f"must be 6 or 7, the dimension of V, not {shorten(n)}")
        n = None
    if not isinstance(kind, str) or kind not in _KINDS:
        return None
    key = _KINDS[kind]
    items = data.get(key)
    if not isinstance(items, list) or not items:
        found = f"not {shorten(items)}" if key in data else "and is absent"
        faults.add(key, f"must be a list with at least one entry, {found}; add it")
        return None
    texts = {part: _text(data, part, faults) for part in ("title", "source")}
    labels = _labels(data, len(items) if kind == "planes" else None, faults)
    if field is None or n is None:
        return None
    if kind == "planes":
        planes = [
            _plane(item, f"planes[{i}]", field, n, faults)
            for i, item in faults.each(enumerate(items))
        ]
        return None if faults.found else Configuration(_all(planes), labels, **texts)
    rows = [
        _vector(item, f"{key}[{i}]", field, comb(n, 3), faults)
        for i, item in faults.each(enumerate(items))
    ]
    if faults.found:
        return None
    if kind == "subspace":
        return Subspace.span(field, n, _all(rows))
    return tuple(Trivector(field, row) for row in _all(rows))


def _all(made: Sequence[_T | None]) -> tuple[_T, ...]:
    """The objects, none of which is missing once there are no faults."""
    return tuple(item for item in made if item is not None)


def _field(data: dict[str, Any], wanted: Field | None, faults: _Faults) -> Field | None:
    if "field" not in data:
        if wanted is None:
            faults.add("", 'no "field"; write for example "field": "Q", or give --field')
        return wanted
    stated: Field | None = faults.attempt("field", lambda: field_from_spec(data["field"]))
    if stated is None or wanted is None or stated == wanted:
        return stated
    before = len(faults.found)
    way = faults.attempt("field", lambda: conversion(stated, wanted))
    if way is None and len(faults.found) == before:
        found = f"the document is over {stated.name}"
        faults.add("field", f"{found}; it cannot be read over {wanted.name}")
    return None if way is None else stated


def _text(data: dict[str, Any], key: str, faults: _Faults) -> str:
    value = data.get(key, "")
    if not isinstance(value, str):
        faults.add(key, f"must be a text, not {shorten(value)}; put it in quotes")
        return ""
    return value


def _labels(data: dict[str, Any], count: int | None, faults: _Faults) -> tuple[str, ...]:
    labels = data.get("labels", [])
    if not isinstance(labels, list) or not all(isinstance(label, str) for label in labels):
        faults.add("labels", "must be a list of texts; put each label in quotes")
        return ()
    if labels and count is not None and len(labels) != count:
        faults.add("labels", f"{len(labels)} labels for {count} planes; give one for each")
    return tuple(labels)


def _plane(item: Any, place: str, field: Field, n: int, faults: _Faults) -> Plane | None:
    """A plane from three rows, or from one Plücker vector."""
    if not isinstance(item, list) or not item:
        faults.add(place, f"must be 3 rows of {n} entries, not {shorten(item)}; give a basis of W")
        return None
    if not any(isinstance(row, list) for row in item):
        vector = _vector(item, place, field, comb(n, 3), faults, plucker=n)
        if vector is None:
            return None
        plane: Plane | None = faults.attempt(place, lambda: Plane.from_plucker(field, vector))
        return plane
    if len(item) != 3:
        faults.add(place, f"must have 3 rows, not {len(item)}; give a basis of W")
    before = len(faults.found)
    rows = [_vector(row, f"{place} row {i}", field, n, faults) for i, row in enumerate(item)]
    if len(item) != 3 or len(faults.found) > before:
        return None
    made: Plane | None = faults.attempt(place, lambda: Plane.from_rows(field, _all(rows)))
    return made


def _vector(
    item: Any, place: str, field: Field, size: int, faults: _Faults, *, plucker: int = 0
) -> list[Any] | None:
    if not isinstance(item, list):
        faults.add(place, f"must be a list of {size} entries, not {shorten(item)}")
        return None
    if len(item) != size:
        if plucker:
            expected = f"3 rows of {plucker} entries, or one Plücker vector of {size} entries"
            faults.add(place, f"must be {expected}, not {len(item)} entries; give one of the two")
        else:
            larger = {6: 7, 20: 35}.get(size)
            hint = ' (planes of P^6 need "dimension": 7)' if len(item) == larger else ""
            faults.add(place, f"must have {size} entries, not {len(item)}; complete it{hint}")
        return None
    return _entries(item, place, field, faults)


def _entries(items: Sequence[Any], place: str, field: Field, faults: _Faults) -> list[Any] | None:
    before = len(faults.found)
    values = [
        faults.attempt(f"{place} entry {j}", partial(field.element, item))
        for j, item in enumerate(items)
    ]
    return values if len(faults.found) == before else None


def _from_text(
    blocks: Iterator[TextBlock], wanted: Field | None, faults: _Faults
) -> Configuration | None:
    if wanted is None:
        faults.add(
            "",
            "not JSON (it does not start with a brace); rows of numbers need --field, "
            "for example --field Q",
        )
        return None
    first = next(blocks, None)
    if first is None:
        faults.add("", "no numbers; give rows of numbers, three for each plane")
        return None
    number, entries = first.lines[0]
    n = len(entries) if len(entries) in DIMENSIONS else dimension_from_size(len(entries))
    if n is None:
        many = f"{ENTRIES_KEPT} or more" if len(entries) == ENTRIES_KEPT else str(len(entries))
        faults.add(
            f"line {number}",
            f"has {many} entries; a row has 6 or 7, a Plücker vector 20 or 35",
        )
        return None
    planes = [
        _text_plane(block, wanted, n, faults) for block in faults.each(chain([first], blocks))
    ]
    return None if faults.found else Configuration(_all(planes))


def _text_plane(block: TextBlock, field: Field, n: int, faults: _Faults) -> Plane | None:
    first, entries = block.lines[0]
    if block.count == 1 and len(entries) == comb(n, 3):
        return _plane(list(entries), f"line {first}", field, n, faults)
    before = len(faults.found)
    if block.count != 3:
        faults.add(
            f"line {first}" if block.count == 1 else f"lines {first}–{block.last}",
            f"a plane is 3 rows, not {block.count}; separate planes by blank lines",
        )
    rows = [_vector(list(e), f"line {k}", field, n, faults) for k, e in block.lines]
    if len(faults.found) > before:
        return None
    return _plane(rows, f"plane at line {first}", field, n, faults)
