"""From an object to the document that `read` turns back into it."""

import json
from collections.abc import Iterable, Sequence
from typing import Any

from trivector.configurations import Configuration
from trivector.errors import DimensionError, MixedFieldsError
from trivector.exterior import Trivector
from trivector.fields import Field
from trivector.subspaces import Plane, Subspace

__all__ = ["document_text", "to_document"]


def to_document(
    thing: Configuration | Plane | Subspace | Trivector | Sequence[Trivector],
    *,
    title: str = "",
    source: str = "",
    labels: Sequence[str] = (),
) -> dict[str, Any]:
    """The document of kind ``planes``, ``subspace`` or ``trivectors`` for an object.

    Parameters
    ----------
    thing : Configuration, Plane, Subspace, Trivector or sequence of Trivector
        A plane becomes a configuration of one, a trivector a list of one.
    title, source : str
        For a configuration, its own unless given.
    labels : sequence of str
        One for each plane, row or trivector; for a configuration its own
        unless given.

    Returns
    -------
    dict
        ``trivector.read`` of it as JSON gives an equal object, over the same
        field: planes and subspaces by the rows of their echelon form, the
        zero subspace by one row of zeros. Empty texts and labels are left out.

    Raises
    ------
    DimensionError
        If the number of labels is wrong, or there is no trivector.
    MixedFieldsError
        If the trivectors are over different fields or of different V.

    Examples
    --------
    >>> from trivector import Trivector, prime_field
    >>> alpha = Trivector.from_terms(prime_field(7), 6, {(0, 1, 2): -1})
    >>> to_document(alpha, title="one")["field"], to_document(alpha)["trivectors"][0][0]
    ('F_7', 6)
    """
    if isinstance(thing, Plane):
        thing = Configuration((thing,))
    elif isinstance(thing, Trivector):
        thing = (thing,)
    if isinstance(thing, Configuration):
        title, source = title or thing.title, source or thing.source
        labels = labels or thing.labels
        kind, key = "planes", "planes"
        items: list[Any] = [plane.to_entries() for plane in thing.planes]
    elif isinstance(thing, Subspace):
        kind, key = "subspace", "basis"
        items = thing.to_entries() or [[0] * thing.ambient_dimension]
    else:
        kind, key = "trivectors", "trivectors"
        thing = _of_one_space(thing)
        items = [[thing[0].field.format(x) for x in alpha.coordinates] for alpha in thing]
    field, n = _space(thing)
    if labels and len(labels) != len(items):
        raise DimensionError(
            f"{len(labels)} labels for {len(items)} entries of {key!r}; give one for each"
        )
    texts = {"title": title, "source": source, "labels": list(labels)}
    return {
        "kind": kind,
        **{name: text for name, text in texts.items() if text},
        "field": field.to_spec(),
        "dimension": n,
        key: items,
    }


def _space(thing: Configuration | Subspace | Sequence[Trivector]) -> tuple[Field, int]:
    owner = thing if isinstance(thing, Configuration | Subspace) else thing[0]
    return owner.field, owner.n


def _of_one_space(trivectors: Iterable[Trivector]) -> tuple[Trivector, ...]:
    listed = tuple(trivectors)
    if not listed:
        raise DimensionError("a document of trivectors has at least one; none was given")
    for i, alpha in enumerate(listed):
        if _space((alpha,)) != _space(listed):
            raise MixedFieldsError(
                f"trivectors 0 and {i} are over {listed[0].field.name}, n = {listed[0].n}, and "
                f"over {alpha.field.name}, n = {alpha.n}; convert one of them"
            )
    return listed


def document_text(document: dict[str, Any]) -> str:
    """A document as JSON: one line for each key, plane, row or trivector; ends with a newline.

    Examples
    --------
    >>> print(document_text({"kind": "planes", "planes": [[[1], [2]], [[3]]]}), end="")
    {"kind": "planes",
     "planes": [
      [[1], [2]],
      [[3]]]}
    """
    parts = []
    for key, value in document.items():
        if key in ("planes", "basis", "trivectors"):
            lines = (json.dumps(item, ensure_ascii=False) for item in value)
            text = "[\n  " + ",\n  ".join(lines) + "]"
        else:
            text = json.dumps(value, ensure_ascii=False)
        parts.append(f"{json.dumps(key)}: {text}")
    return "{" + ",\n ".join(parts) + "}\n"
