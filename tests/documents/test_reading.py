"""What a document says, and whether it is well formed."""

import copy
import gzip
import io
import json
import random
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
import strategies as draws
from faulty import FAULTY, PLANES, Faulty, as_text, document
from flint import fmpq, fmpz
from hypothesis import given, settings
from hypothesis import strategies as st

import trivector
from trivector import QQ, Configuration, Subspace, Trivector, prime_field
from trivector.errors import DocumentError, FieldError
from trivector.fields import Field

DATA = Path(__file__).parents[2] / "data"

F7 = prime_field(7)

# A file that lives as long as the module: property tests write it again for each example.
Writer = Callable[[Any], Path]


@pytest.fixture(scope="module")
def write(tmp_path_factory: pytest.TempPathFactory) -> Writer:
    """Writes bytes, text, or data as JSON, and names the file."""
    path = tmp_path_factory.mktemp("documents") / "planes.json"

    def write_file(content: Any) -> Path:
        if not isinstance(content, bytes | str):
            content = json.dumps(content)
        path.write_bytes(content if isinstance(content, bytes) else content.encode())
        return path

    return write_file


def faults(path: Path | str, field: Field | str | None = None) -> tuple[str, ...]:
    """The faults of a document, each without the name of the file."""
    with pytest.raises(DocumentError) as caught:
        trivector.read(path, field=field)
    assert caught.value.exit_code == 2
    assert str(caught.value) == "\n".join(caught.value.faults)
    assert all(fault.startswith(f"{path}: ") for fault in caught.value.faults)
    return tuple(fault.removeprefix(f"{path}: ") for fault in caught.value.faults)


def the_three(field: Field = QQ) -> Configuration:
    return Configuration.from_rows(field, PLANES)


# What is well formed


@pytest.mark.parametrize("path", sorted(DATA.glob("*.json")), ids=lambda path: path.stem)
def test_every_file_of_the_collection_is_read_with_title_source_and_labels(path: Path) -> None:
    stated = json.loads(path.read_text("utf-8"))
    read = trivector.read(path)
    assert isinstance(read, Configuration)
    assert len(read.planes) == len(read.labels) == len(stated["planes"])
    assert (read.title, read.source) == (stated["title"], stated["source"])
    assert read.title
    assert read.source
    assert read.field == trivector.field_from_spec(stated["field"])
    assert read.n == stated["dimension"]


def test_planes_keep_their_order_their_labels_and_their_repetitions(write: Writer) -> None:
    labels = ["b", "a", "b", ""]
    read = trivector.read(write(document(planes=[*PLANES, PLANES[0]], labels=labels)))
    assert read.planes == (*the_three().planes, the_three().planes[0])
    assert read.labels == ("b", "a", "b", "")


def test_any_basis_of_a_plane_gives_the_same_plane(write: Writer) -> None:
    other = [[2, 3, "1/2", 0, 0, 0], [0, 1, 5, 0, 0, 0], ["-7/3", 0, 0, 0, 0, 0]]
    assert trivector.read(write(document("planes", 0, value=other))) == the_three()


def test_a_plane_may_be_given_by_its_plucker_vector(write: Writer) -> None:
    vector = [0] * 20
    vector[7] = 5  # 034 is the eighth triple: 012 013 014 015 023 024 025 034
    assert trivector.read(write(document("planes", 1, value=vector))) == the_three()


def test_the_dimension_is_6_unless_it_is_given(write: Writer) -> None:
    assert trivector.read(write(document(dimension=6))) == the_three()
    seven = [[[*row, 0] for row in plane] for plane in PLANES]
    assert trivector.read(write(document(dimension=7, planes=seven))).n == 7


@pytest.mark.parametrize(
    ("entry", "value"),
    [
        (3, fmpq(3)),
        (-3, fmpq(-3)),
        ("3", fmpq(3)),
        ("+3", fmpq(3)),
        ("-3/4", fmpq(-3, 4)),
        ("6/8", fmpq(3, 4)),
        (" 3 / 4 ", fmpq(3, 4)),
        ("007", fmpq(7)),
        ("0/5", fmpq(0)),
    ],
)
def test_integers_and_fractions_are_read_exactly(write: Writer, entry: Any, value: fmpq) -> None:
    read = trivector.read(write(document("planes", 0, 0, 5, value=entry)))
    assert read.planes[0].rows[0] == (1, 0, 0, 0, 0, value)


@pytest.mark.parametrize("digits", [40, 4000, 4300, 4301, 10_000])
@pytest.mark.parametrize("form", ["{}", '"{}"', '"{}/3"', '"-{}"'])
def test_integers_of_any_size_are_exact(write: Writer, digits: int, form: str) -> None:
    huge = "123456789" * (digits // 9) + "1" * (digits % 9)
    text = json.dumps(document("planes", 0, 0, 5, value="HERE"))
    read = trivector.read(write(text.replace('"HERE"', form.format(huge))))
    value = read.planes[0].rows[0][5]
    assert value * (3 if "/" in form else 1) == (-1 if "-" in form else 1) * fmpq(fmpz(huge))


def test_faults_around_huge_integers_stay_short(write: Writer) -> None:
    huge, other = "7" * 10_000, "9" * 10_000
    for place, plane in [
        ("planes[0]", [["A", 0, 0, 0, 0, 0], ["B", 0, 0, 0, 0, 0], [0, 0, 0, 0, 0, 1]]),
        ("planes[0]", ["A"] * 20),
        ("planes[0]", "A"),
        ("planes[0] row 1", [[1, 0, 0, 0, 0, 0], "A", [0, 1, 0, 0, 0, 0]]),
        ("planes[0] row 1 entry 0", [[1, 0, 0, 0, 0, 0], [["A"], 0, 0, 0, 0, 0], [0] * 6]),
    ]:
        text = json.dumps(document("planes", 0, value=plane))
        (fault,) = faults(write(text.replace('"A"', huge).replace('"B"', other)))
        assert fault.startswith(f"{place}: ")
        assert len(fault) < 300
    for key in ("kind", "field", "dimension", "title", "source"):
        (fault,) = faults(write(json.dumps(document(key, value="A")).replace('"A"', huge)))
        assert len(fault) < 300


def test_a_subspace_is_read_and_its_dependent_rows_are_reported(write: Writer) -> None:
    first, second = [1] + [0] * 19, [0] * 19 + [2]
    total = [1] + [0] * 18 + [2]
    read = trivector.read(
        write({"kind": "subspace", "field": "Q", "basis": [first, second, total]})
    )
    assert isinstance(read, Subspace)
    assert (read.dimension, read.n) == (2, 6)
    assert read.dependent == {2: (1, 1)}


def test_trivectors_are_read_in_order(write: Writer) -> None:
    rows = [[*range(20)], [0] * 20]
    read = trivector.read(write({"kind": "trivectors", "field": "F_7", "trivectors": rows}))
    assert read == tuple(Trivector(F7, row) for row in rows)


@pytest.mark.parametrize(
    ("kind", "key"), [("subspace", "basis"), ("trivectors", "trivectors"), ("planes", "planes")]
)
def test_each_kind_needs_its_own_key(write: Writer, kind: str, key: str) -> None:
    other = {"kind": kind, "field": "Q", "rows": [[1] * 20]}
    assert faults(write(other)) == (
        f"{key}: must be a list with at least one entry, and is absent; add it",
    )
    (fault,) = faults(write({"kind": kind, "field": "Q", key: [[1] * 21]}))
    assert fault.startswith(f"{key}[0]: ")
    assert "20 entries" in fault
    assert "21" in fault


# Which field


def test_a_document_over_q_is_reduced_to_the_field_that_is_asked_for(write: Writer) -> None:
    plane = [[1, 0, 0, 0, 0, "1/2"], [0, 1, 0, 0, 7, 0], [0, 0, 1, 0, 0, -1]]
    path = write(document("planes", 0, value=plane))
    for field in (F7, "F_7"):
        read = trivector.read(path, field=field)
        assert read.field == F7
        assert read.planes[0].to_entries() == [
            [1, 0, 0, 0, 0, 4],
            [0, 1, 0, 0, 0, 0],
            [0, 0, 1, 0, 0, 6],
        ]
    assert trivector.read(path, field="Q") == trivector.read(path)


def test_planes_that_fall_together_modulo_p_are_read_as_equal(write: Writer) -> None:
    moved = [[1, 0, 0, 7, 0, 0], *PLANES[0][1:]]
    path = write(document(planes=[PLANES[0], moved]))
    assert len(set(trivector.read(path).planes)) == 2
    assert len(set(trivector.read(path, field="F_7").planes)) == 1


@pytest.mark.parametrize(
    ("row", "reduced"),
    [
        ([1, 1, 7, 0, 0, 0], [0, 0, 1, 0, 0, 0]),
        ([0, 0, "1/7", 0, 0, 1], [0, 0, 1, 0, 0, 0]),
        ([0, 0, 7, 0, 0, 1], [0, 0, 0, 0, 0, 1]),
        ([0, 0, "3/49", 0, 2, "1/7"], [0, 0, 1, 0, 0, 0]),
    ],
)
def test_a_plane_over_q_stays_a_plane_modulo_every_p(
    write: Writer, row: list[Any], reduced: list[int]
) -> None:
    expected = trivector.read(write(document("planes", 0, 2, value=reduced, field="F_7")))
    path = write(document("planes", 0, 2, value=row))
    assert trivector.read(path, field="F_7") == expected


def test_a_document_over_q_may_be_read_over_a_number_field(write: Writer) -> None:
    field = trivector.field_from_spec({"modulus": "x^2+1"})
    path = write(document("planes", 0, 2, value=[0, 0, "1/2", 0, 0, "2/3"]))
    entries = trivector.read(path).planes[0].to_entries()
    for asked in (field, '{"modulus": "x^2+1"}'):
        read = trivector.read(path, field=asked)
        assert read.field == field
        assert read.planes[0].to_entries() == entries


def test_a_document_over_a_number_field_is_reduced_at_a_prime_above_p(write: Writer) -> None:
    gauss = {"modulus": "x^2+1"}
    # Modulo 5 a becomes 2, the first root; the row times 5 becomes (0, 0, 1, 0, 2, 0).
    same = write(document("planes", 0, 2, value=[0, 0, 1, 0, 2, 0], field="F_5"))
    expected = trivector.read(same)
    path = write(document("planes", 0, 2, value=["a", 0, "1/5", 0, "a/5", 5], field=gauss))
    assert trivector.read(path, field="F_5") == expected
    assert trivector.read(path, field="F_9").field.order == 9
    for field, words in (("F_7", "over Q(a), a^2+1 = 0; it cannot be read over F_7"),
                         ("F_2", "multiple root"), ("Q", "cannot be read over Q")):  # fmt: skip
        with pytest.raises(DocumentError) as refused:
            trivector.read(path, field=field)
        (fault,) = refused.value.faults
        assert words in fault


def test_a_document_without_a_field_takes_the_one_that_is_asked_for(write: Writer) -> None:
    path = write(document("field"))
    assert trivector.read(path, field="F_7") == the_three(F7)


def test_the_field_of_the_document_may_be_asked_for(write: Writer) -> None:
    path = write(document(field="F_7"))
    assert trivector.read(path, field="F_7") == trivector.read(path) == the_three(F7)


@pytest.mark.parametrize("name", ["F_6", "F_0", "R", "q", "", "F_", "F_7.0"])
def test_a_field_that_does_not_exist_is_refused_before_the_file_is_read(name: str) -> None:
    with pytest.raises(FieldError) as caught:
        trivector.read("no such file", field=name)
    assert "no such file" not in str(caught.value)


# Plain text


@pytest.mark.parametrize(
    "text",
    [
        as_text(PLANES),
        as_text(PLANES, between=","),
        as_text(PLANES, between=", "),
        as_text(PLANES, between="\t"),
        as_text(PLANES, between="  ,  "),
        as_text(PLANES, after_row=" \n"),
        as_text(PLANES, after="\n\n \t\n"),
        as_text(PLANES, after_row="\r\n", after="\r\n"),
        "\n\n" + as_text(PLANES) + "\n\n\n",
        as_text(PLANES).rstrip(),
        "\ufeff" + as_text(PLANES),
        "# a title\n" + as_text(PLANES, after_row="  # a row\n"),
        as_text(PLANES, after="# a comment is no blank line\n\n"),
        as_text(PLANES).replace("0\n0", "0\n# a comment inside a plane\n0"),
        as_text(PLANES).replace("1 ", "4/4 ").replace("0 ", "-0 "),
        as_text(PLANES).replace("1 ", "+1 "),
    ],
)
def test_planes_as_plain_text(write: Writer, text: str) -> None:
    assert trivector.read(write(text), field="Q") == the_three()
    assert trivector.read(write(text), field=F7) == the_three(F7)


def test_plucker_vectors_as_plain_text_one_or_several_in_a_block(write: Writer) -> None:
    lines = [" ".join(str(int(x)) for x in plane.plucker) for plane in the_three().planes]
    for text in ("\n".join(lines), "\n\n".join(lines), f"{lines[0]}\n\n{lines[1]}\n{lines[2]}"):
        assert trivector.read(write(text), field="Q") == the_three()


def test_rows_and_plucker_vectors_mix_in_plain_text(write: Writer) -> None:
    vector = " ".join(str(int(x)) for x in the_three().planes[1].plucker)
    text = f"{as_text([PLANES[0]])}\n{vector}\n\n{as_text([PLANES[2]])}"
    assert trivector.read(write(text), field="Q") == the_three()


def test_planes_of_p6_as_plain_text(write: Writer) -> None:
    seven = [[[0, *row] for row in plane] for plane in PLANES]
    read = trivector.read(write(as_text(seven)), field="F_2")
    assert read == Configuration.from_rows(prime_field(2), seven)
    assert read.n == 7


# Where a document comes from


def test_a_compressed_document_is_read_like_any_other(tmp_path: Path) -> None:
    path = tmp_path / "planes.json.gz"
    path.write_bytes(gzip.compress(json.dumps(document()).encode()))
    assert trivector.read(path) == the_three()
    text = tmp_path / "planes.txt.gz"
    text.write_bytes(gzip.compress(as_text(PLANES).encode()))
    assert trivector.read(text, field="Q") == the_three()


@pytest.mark.parametrize(
    "spoil",
    [
        lambda data: data[:-9],
        lambda data: data[: len(data) // 2],
        lambda data: data[:20] + b"\0\0\0\0" + data[24:],
        lambda data: b"{}" + data,
        lambda data: json.dumps(document()).encode(),
    ],
)
def test_a_damaged_compressed_document_is_a_fault(tmp_path: Path, spoil: Any) -> None:
    path = tmp_path / "planes.json.gz"
    path.write_bytes(spoil(gzip.compress(json.dumps(document()).encode())))
    (fault,) = faults(path)
    assert "gzip" in fault


def test_a_compressed_document_does_not_fill_the_memory(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("trivector.documents.sources.LARGEST", 2**20)
    path = tmp_path / "zeros.gz"
    path.write_bytes(gzip.compress(bytes(2**24)))
    assert faults(path) == ("larger than 1 MiB; split the document",)
    path.write_bytes(gzip.compress(json.dumps(document()).encode().ljust(2**20)))
    assert trivector.read(path) == the_three()


@pytest.mark.parametrize("content", [json.dumps(document()), as_text(PLANES)])
def test_standard_input_is_read(monkeypatch: pytest.MonkeyPatch, content: str) -> None:
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(content.encode())))
    assert trivector.read("-", field="Q") == the_three()


def test_faults_of_standard_input_name_it(monkeypatch: pytest.MonkeyPatch) -> None:
    for content in (b"", b"[]", b"{", b"\xff", b'{"kind": 1, "kind": 2}'):
        monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(content)))
        with pytest.raises(DocumentError, match=r"^standard input: "):
            trivector.read("-")
    monkeypatch.setattr(sys, "stdin", None)
    with pytest.raises(DocumentError, match=r"^standard input: closed"):
        trivector.read("-")


@pytest.mark.parametrize(
    ("make", "words"),
    [
        (lambda path: None, "no such file"),
        (lambda path: path.mkdir(), "directory"),
        (lambda path: path.write_bytes(b"\x80planes"), "byte 0 is not UTF-8"),
        (lambda path: path.write_bytes(b"1 0 \xe9 0"), "byte 4 is not UTF-8"),
        (lambda path: path.write_bytes("1 0 0 0 0 0".encode("utf-16")), "UTF-8"),
    ],
)
def test_a_file_that_cannot_be_read_is_a_fault(tmp_path: Path, make: Any, words: str) -> None:
    path = tmp_path / "planes.json"
    make(path)
    (fault,) = faults(path, "Q")
    assert words in fault


def test_a_name_that_no_file_can_have_is_a_fault(tmp_path: Path) -> None:
    file = tmp_path / "file"
    file.write_text("")
    for name in ("a\0b", "", str(file / "inside"), str(tmp_path / ("long" * 1000))):
        assert len(faults(name)) == 1


# What is at fault


@pytest.mark.parametrize("case", FAULTY, ids=lambda case: case.name)
def test_each_fault_is_named_with_its_place_what_was_found_and_what_is_required(
    write: Writer, case: Faulty
) -> None:
    found = faults(write(case.content), case.field)
    assert len(found) == len(case.faults), found
    for fault, (place, *words) in zip(found, case.faults, strict=True):
        assert fault.startswith(f"{place}: " if place else ""), fault
        assert [word for word in words if word not in fault] == [], fault
        assert len(fault.splitlines()) == 1
        assert len(fault) < 300


def test_the_document_that_the_faulty_ones_start_from_has_no_fault(write: Writer) -> None:
    assert trivector.read(write(document())) == the_three()
    assert len({case.name for case in FAULTY}) == len(FAULTY)


def test_many_faults_are_reported_together_but_not_without_end(write: Writer) -> None:
    planes = [[[0.5] * 6] * 3] * 20
    found = faults(write(document(planes=planes)))
    assert len(found) == 51
    assert found[0].startswith("planes[0] row 0 entry 0: ")
    assert found[49].startswith("planes[2] row 2 entry 1: ")
    assert "more faults" in found[50]
    assert len(faults(write(as_text(planes)), "Q")) == 51
    assert len(faults(write(document(planes=[[[0.5] * 6] * 2 + [[0, "x", 0, 0, 0, 0]]] * 3)))) == 39


GARBAGE: dict[str, Callable[[int], bytes]] = {
    "bytes": lambda size: random.Random(1).randbytes(size),
    "zeros": bytes,
    "brackets": lambda size: b"[" * size,
    "words": lambda size: b"all work and no play " * (size // 21),
    "lines": lambda size: b"all work and no play\n" * (size // 21),
    "lines of six words": lambda size: b"a b c d e f\n" * (size // 12),
    "planes of words": lambda size: (b"a b c d e f\n" * 3 + b"\n") * (size // 37),
    "floats": lambda size: b'{"kind": "planes", "planes": [' + b"1.5, " * (size // 5),
}


@pytest.mark.parametrize(
    ("kind", "field"),
    [*((kind, "Q") for kind in GARBAGE), ("bytes", None), ("zeros", None), ("lines", None)],
)
def test_garbage_of_fifty_megabytes_is_refused_soon(
    write: Writer, kind: str, field: str | None
) -> None:
    path = write(GARBAGE[kind](50 * 2**20))
    start = time.process_time()
    found = faults(path, field)
    assert time.process_time() - start < 5
    assert 1 <= len(found) <= 51
    assert max(map(len, found)) < 300


def test_many_keys_are_compared_in_linear_time(write: Writer) -> None:
    text = "{" + ", ".join(f'"{i}": 1' for i in range(100_000)) + ', "99999": 2}'
    start = time.process_time()
    (fault,) = faults(write(text))
    assert time.process_time() - start < 5
    assert "'99999'" in fault
    assert "twice" in fault


# Laws


@draws.in_six_and_seven
@draws.over_fields
@draws.some
@given(data=st.data())
def test_planes_that_are_written_are_read_back_unchanged(
    write: Writer, field: Field, n: int, data: st.DataObject
) -> None:
    planes = data.draw(st.lists(draws.planes(field, n), min_size=1, max_size=4))
    written = [
        [field.format(x) for x in plane.plucker] if data.draw(st.booleans()) else plane.to_entries()
        for plane in planes
    ]
    made = {"kind": "planes", "field": field.to_spec(), "dimension": n, "planes": written}
    read = trivector.read(write(made))
    assert read == Configuration(tuple(planes))
    assert read.field == field


@draws.in_six_and_seven
@draws.over_fields
@draws.few
@given(data=st.data())
def test_planes_as_plain_text_in_any_basis_are_read_back_unchanged(
    write: Writer, field: Field, n: int, data: st.DataObject
) -> None:
    planes = data.draw(st.lists(draws.planes(field, n), min_size=1, max_size=3))
    mixing = data.draw(draws.invertible_matrices(field, 3))
    bases = [draws.other_basis(field, mixing, plane.rows) for plane in planes]
    written = [[[field.format(x) for x in row] for row in basis] for basis in bases]
    assert trivector.read(write(as_text(written)), field=field) == Configuration(tuple(planes))


@draws.over_fields
@draws.few
@given(data=st.data())
def test_a_subspace_that_is_written_is_read_back_unchanged(
    write: Writer, field: Field, data: st.DataObject
) -> None:
    space = data.draw(draws.subspaces(field, 6).filter(lambda space: space.dimension > 0))
    made = {"kind": "subspace", "field": field.to_spec(), "basis": space.to_entries()}
    assert trivector.read(write(made)) == space


# Damage

many = settings(max_examples=400, deadline=None)

HUGE = "an integer with 5000 digits"  # written as one, not as a text

STRANGE: list[Any] = [
    *(None, True, False, 0, 1, -1, 2, 6, 7, 20, 0.5, float("nan"), 10**50, HUGE),
    *(
        "",
        "x",
        "a",
        "1/0",
        "1/7",
        "+3",
        "-",
        "a^2/3",
        "Q",
        "F_4",
        "F_7",
        "F_9",
        "planes",
        "subspace",
    ),
    *([], {}, [[]], [None], [[1, 0, 0, 0, 0, 0]], {"kind": "planes"}, {"modulus": "x"}, "\ud800"),
    *([1] * 20, [0] * 20, [0] * 19 + [1], PLANES, PLANES[0], {"characteristic": 4}, "\n", "\0"),
]


@st.composite
def damaged_bytes(draw: Any) -> bytes:
    """A valid document after a few accidents to its bytes."""
    field = draw(st.sampled_from(["Q", "F_7", "F_9"]))
    source = [
        json.dumps(document(field=field, dimension=6, labels=["a", "b", "c"])),
        as_text(PLANES),
    ]
    data = bytearray(draw(st.sampled_from(source)).encode())
    for _ in range(draw(st.integers(1, 4))):
        place = draw(st.integers(0, len(data) - 1))
        match draw(st.integers(0, 4)):
            case 0:
                data[place] ^= 1 << draw(st.integers(0, 7))
            case 1:
                del data[place : place + draw(st.integers(1, 40))]
            case 2:
                data[place:place] = draw(st.binary(min_size=1, max_size=4))
            case 3:
                data[place:place] = data[place : place + draw(st.integers(1, 40))]
            case 4:
                data[place] = draw(st.sampled_from(b'0123456789-+/.eE{}[],:"\\ \n'))
        if not data:
            break
    return bytes(data)


def places_in(value: Any) -> list[tuple[Any, Any]]:
    """(container, key) of every value inside a JSON value."""
    found = []
    if isinstance(value, dict | list):
        for key in list(value) if isinstance(value, dict) else range(len(value)):
            found += [(value, key), *places_in(value[key])]
    return found


@st.composite
def damaged_documents(draw: Any) -> Any:
    """A valid document in which values have been exchanged for others of any type."""
    made = document(dimension=6, labels=["a", "b", "c"], title="three planes", source="here")
    for _ in range(draw(st.integers(1, 3))):
        places = places_in(made)
        if not places:
            break
        container, key = draw(st.sampled_from(places))
        match draw(st.integers(0, 2)):
            case 0:
                container[key] = copy.deepcopy(draw(st.sampled_from(STRANGE)))
            case 1:
                del container[key]
            case 2:
                other, other_key = draw(st.sampled_from(places))
                container[key] = copy.deepcopy(other[other_key])
    return made


def check_that_it_is_read_or_refused(path: Path, field: str | None) -> None:
    """An answer or a `DocumentError` whose faults are lines; anything else fails."""
    found: tuple[str, ...] = ()
    try:
        read = trivector.read(path, field=field)
    except DocumentError as error:
        found = error.faults
    else:
        assert isinstance(read, Configuration | Subspace | tuple)
        return
    assert found
    for fault in found:
        assert fault.startswith(f"{path}: ")
        assert len(fault.splitlines()) == 1
        assert len(fault) < 400


FIELDS_TO_ASK_FOR = st.sampled_from([None, "Q", "F_7", "F_9"])


@many
@given(content=damaged_bytes(), field=FIELDS_TO_ASK_FOR)
def test_a_document_with_damaged_bytes_is_read_or_refused(
    write: Writer, content: bytes, field: str | None
) -> None:
    check_that_it_is_read_or_refused(write(content), field)


@many
@given(content=damaged_documents(), field=FIELDS_TO_ASK_FOR)
def test_a_document_with_values_of_any_type_is_read_or_refused(
    write: Writer, content: Any, field: str | None
) -> None:
    text = json.dumps(content).replace(f'"{HUGE}"', "-" + "9" * 5000)
    check_that_it_is_read_or_refused(write(text), field)
