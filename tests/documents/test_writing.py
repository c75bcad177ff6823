"""What `to_document` writes is what `read` reads."""

import json
import re
from pathlib import Path
from typing import Any

import pytest
import strategies
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

import trivector
from trivector import Configuration, Plane, Subspace, Trivector
from trivector.documents import document_text, to_document
from trivector.errors import DimensionError, MixedFieldsError
from trivector.fields import QQ, Field, field_from_spec, prime_field

over_a_path = settings(
    strategies.few,
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.function_scoped_fixture],
)


def written_and_read(path: Path, thing: Any, **texts: Any) -> Any:
    file = path / "document.json"
    file.write_text(document_text(to_document(thing, **texts)), "utf-8")
    return trivector.read(file)


texts = st.text(st.characters(codec="utf-8"), max_size=8)


@strategies.over_fields
@strategies.in_six_and_seven
@over_a_path
@given(data=st.data())
def test_a_configuration_comes_back_with_its_texts(
    field: Field, n: int, tmp_path: Path, data: st.DataObject
) -> None:
    planes = data.draw(st.lists(strategies.planes(field, n), min_size=1, max_size=3))
    labels = data.draw(st.one_of(st.just([]), st.lists(texts, min_size=3, max_size=3)))
    thing = Configuration(
        tuple(planes), tuple(labels[: len(planes)]), data.draw(texts), data.draw(texts)
    )
    found = written_and_read(tmp_path, thing)
    assert found == thing
    assert found.field == field


@strategies.over_fields
@strategies.in_six_and_seven
@over_a_path
@given(data=st.data())
def test_a_subspace_comes_back(field: Field, n: int, tmp_path: Path, data: st.DataObject) -> None:
    space = data.draw(strategies.subspaces(field, n))
    found = written_and_read(tmp_path, space, title="L")
    assert (found, found.field) == (space, field)


@strategies.over_fields
@strategies.in_six_and_seven
@over_a_path
@given(data=st.data())
def test_trivectors_come_back(field: Field, n: int, tmp_path: Path, data: st.DataObject) -> None:
    vectors = data.draw(st.lists(strategies.trivectors(field, n), min_size=1, max_size=3))
    labels = ["x"] * len(vectors)
    assert written_and_read(tmp_path, vectors, labels=labels) == tuple(vectors)


def unit_plane(field: Field = QQ) -> Plane:
    return Plane.from_rows(field, [[int(i == j) for j in range(6)] for i in range(3)])


def test_the_document_has_the_keys_of_the_formats() -> None:
    thing = Configuration((unit_plane(),), ("a",), "title", "source")
    assert to_document(thing) == {
        "kind": "planes",
        "title": "title",
        "source": "source",
        "labels": ["a"],
        "field": "Q",
        "dimension": 6,
        "planes": [[[1, 0, 0, 0, 0, 0], [0, 1, 0, 0, 0, 0], [0, 0, 1, 0, 0, 0]]],
    }
    assert set(to_document(Configuration(thing.planes))) == {
        "kind", "field", "dimension", "planes"
    }  # fmt: skip
    given = to_document(thing, title="other", labels=["b"])
    assert (given["title"], given["source"], given["labels"]) == ("other", "source", ["b"])


def test_a_field_that_is_not_prime_is_written_with_its_polynomial() -> None:
    F9 = field_from_spec("F_9")
    document = to_document(Trivector.from_terms(F9, 6, {(0, 1, 2): "a+1"}))
    assert document["field"] == {"characteristic": 3, "modulus": "x^2+2*x+2"}
    assert document["trivectors"][0][0] == "a+1"


def test_one_plane_and_one_trivector_are_lists_of_one(tmp_path: Path) -> None:
    plane, alpha = unit_plane(), Trivector.from_terms(QQ, 7, {(4, 5, 6): "1/2"})
    assert written_and_read(tmp_path, plane).planes == (plane,)
    assert written_and_read(tmp_path, alpha) == (alpha,)


def test_the_zero_subspace_comes_back(tmp_path: Path) -> None:
    zero = Subspace.span(QQ, 6, [])
    assert written_and_read(tmp_path, zero) == zero


def test_every_plane_has_a_line_of_its_own() -> None:
    planes = tuple(unit_plane() for _ in range(4))
    text = document_text(to_document(Configuration(planes)))
    assert json.loads(text)["kind"] == "planes"
    assert len(re.findall(r"^  \[\[1, 0, 0, 0, 0, 0\], ", text, re.MULTILINE)) == 4


def test_wrong_labels_and_mixed_trivectors_are_refused() -> None:
    with pytest.raises(DimensionError, match="2 labels for 1 entries"):
        to_document(unit_plane(), labels=["a", "b"])
    with pytest.raises(DimensionError, match="at least one"):
        to_document([])
    over_q = Trivector.from_terms(QQ, 6, {})
    for other in (Trivector.from_terms(prime_field(5), 6, {}), Trivector.from_terms(QQ, 7, {})):
        with pytest.raises(MixedFieldsError, match="trivectors 0 and 1"):
            to_document([over_q, other])
