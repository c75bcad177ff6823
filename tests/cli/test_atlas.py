"""Every document of the atlas: made by its command, complete, with a certificate that holds."""

import json
from pathlib import Path

import jsonschema
import pytest
from commands import Run

import trivector
from trivector import Configuration, LinearSection
from trivector.cli.atlas import ENTRIES, check_atlas, main
from trivector.errors import UsageError
from trivector.reports.atlas import CERTIFICATES, atlas_index, index_row
from trivector.symmetry import compare_configurations

ATLAS = Path(__file__).parents[2] / "data" / "atlas"

# The shortest and the longest over ℚ, one over a finite field, one infinite family, the 22.
SLICE = (
    "length-11-over-q.json",
    "length-20-over-q.json",
    "length-16-over-f7.json",
    "length-22-over-f4.json",
    "infinite-ruling-over-q.json",
)
COMPLETE = sorted(name for name in ENTRIES if name.startswith("length-"))


def length_of(name: str) -> int:
    return int(name.split("-")[1])


def check(name: str) -> None:
    ((found, verdict, words),) = check_atlas(ATLAS, [name])
    assert (found, verdict) == (name, True), words
    expected = "infinite" if name.startswith("infinite") else "all planes"
    assert expected in words


@pytest.mark.parametrize("name", SLICE)
def test_an_entry_is_what_its_command_makes_and_its_certificate_holds(name: str) -> None:
    check(name)


@pytest.mark.long
@pytest.mark.parametrize("name", ENTRIES)
def test_every_entry_is_what_its_command_makes_and_its_certificate_holds(name: str) -> None:
    check(name)


@pytest.mark.parametrize("name", COMPLETE)
def test_an_entry_is_complete_with_its_length(name: str) -> None:
    document, length = trivector.read(ATLAS / name), length_of(name)
    if isinstance(document, Configuration):
        examination = document.examine()
        assert len(set(document.planes)) == length
        assert examination.complete_over_closure is True
        assert examination.lagrangian is True
        section = examination.section
    else:
        assert document.is_lagrangian()
        section = LinearSection(document).examine()
    assert section.planes is not None
    assert (section.degree, section.planes_over_closure) == (length, length)
    assert len(section.planes) == length
    meets = Configuration(section.planes).meet_dimensions().values()
    assert set(meets) == {0}
    hilbert = section.hilbert_function
    assert hilbert is not None
    # Computed for 16 … 20 over ℚ: H = 1, 10, 20, k, k; 21 = H(2) for the 22 planes.
    assert hilbert[:4] == (1, 10, 21 if length == 22 else 20, length)


def test_every_length_from_10_to_20_stands_over_q_with_all_planes_rational() -> None:
    # The construction for 11 … 20: "On Morin configurations of higher length", 2019, arXiv
    # 1903.07480; the curves whose nodes are all rational, and the ten planes, were found here.
    over_q = [name for name in COMPLETE if name.endswith("-over-q.json")]
    assert {length_of(name) for name in over_q} == set(range(10, 21))
    others = {length_of(name) for name in COMPLETE if not name.endswith("-over-q.json")}
    assert others == {*range(10, 21), 22}
    assert sorted(ENTRIES) == sorted(path.name for path in ATLAS.glob("*.json"))
    assert sorted(ENTRIES) == sorted(path.name for path in (ATLAS / CERTIFICATES).glob("*"))


def test_the_infinite_families_have_their_dimension_and_degree() -> None:
    # published: "Pairwise incident planes and hyperkähler four-folds", 2012, arXiv 1204.6257
    # (the list); dimension and degree: classical and computed, as in the table of values.
    expected = {
        "point": (6, 5),
        "hyperplane": (6, 5),
        "lines": (5, 6),
        "ruling": (3, 8),
        "conics": (2, 9),
        "tangents": (2, 9),
    }
    infinite = [name for name in ENTRIES if name.startswith("infinite-")]
    assert len(infinite) == 2 * len(expected)
    for name in infinite:
        section = LinearSection(trivector.read(ATLAS / name)).examine()
        assert (section.projective_dimension, section.degree) == expected[name.split("-")[1]]


def test_the_two_sets_of_22_planes_are_not_equivalent() -> None:
    dual = trivector.read(ATLAS / "length-22-over-f4.json")
    space = trivector.read(ATLAS / "length-22-over-f4-ten-lines.json")
    lines = Configuration(LinearSection(space).examine().planes)
    for semilinear in (False, True):
        found = compare_configurations(dual, lines, semilinear=semilinear)
        assert (found.equivalent, found.over_closure) == (False, False)
        assert found.difference == "points by number of planes: {2: 231} and {2: 71, 5: 16}"


@pytest.mark.parametrize("name", ENTRIES)
def test_entries_are_short_and_their_certificates_are_of_them(name: str) -> None:
    document = json.loads((ATLAS / name).read_text(encoding="utf-8"))
    rows = document.get("basis") or [row for plane in document["planes"] for row in plane]
    assert all(len(str(entry)) <= 5 for row in rows for entry in row)
    certificate = json.loads((ATLAS / CERTIFICATES / name).read_text(encoding="utf-8"))
    schema = json.loads((Path(trivector.__file__).parent / "certificates/schema.json").read_text())
    jsonschema.validate(certificate, schema)
    if "planes" in document and document["field"] in ("Q", "F_5"):
        modulus = 5 if document["field"] == "F_5" else None
        for plane, given in zip(certificate["subject"]["planes"], document["planes"], strict=True):
            wanted = [[x if modulus is None else int(x) % 5 for x in row] for row in given]
            assert [[str(x) for x in row] for row in plane] == [[str(x) for x in r] for r in wanted]


def test_the_index_is_current() -> None:
    text = (ATLAS / "README.md").read_text(encoding="utf-8")
    assert text == atlas_index(ATLAS)
    assert text.count("\n| [`") == len(ENTRIES)


def test_the_index_refuses_what_is_not_complete(tmp_path: Path) -> None:
    document = json.loads((ATLAS / "length-16-over-f7.json").read_text(encoding="utf-8"))
    document["planes"] = document["planes"][:-1]
    document["labels"] = document["labels"][:-1]
    path = tmp_path / "fifteen.json"
    path.write_text(json.dumps(document), encoding="utf-8")
    with pytest.raises(UsageError, match="not proved complete"):
        index_row(path)


def test_a_document_or_certificate_that_was_changed_is_noticed(tmp_path: Path) -> None:
    name = "length-10-over-f3.json"
    (tmp_path / CERTIFICATES).mkdir()
    for path in (name, f"{CERTIFICATES}/{name}"):
        (tmp_path / path).write_text((ATLAS / path).read_text("utf-8"), "utf-8")
    assert [verdict for _, verdict, _ in check_atlas(tmp_path)] == [True]
    document = json.loads((tmp_path / name).read_text("utf-8"))
    document["planes"].reverse()
    (tmp_path / name).write_text(json.dumps(document), "utf-8")
    ((_, verdict, words),) = check_atlas(tmp_path)
    assert verdict is False
    assert "another document" in words
    assert "another certificate" in words


def test_an_entry_with_conjugate_planes_is_a_lagrangian(tmp_path: Path, run: Run) -> None:
    curve = "2*x^2-3*x*y+2*x*z-y*z; 3*x*y+2*x*z-2*y^2-3*y*z; 2*x*y+3*x*z+3*y*z+2*z^2"
    path = tmp_path / "thirteen.json"
    assert run("make", "del-pezzo", "--curve", curve, "-o", str(path))[0] == 0
    key, row = index_row(path)
    assert key[1] == -13
    assert "| 13 |" in row


def test_the_command_explains_itself(capsys: pytest.CaptureFixture[str]) -> None:
    for arguments in ([], ["--check"], ["--help"], ["a", "b"]):
        assert main(arguments) == 2
        assert "usage: " in capsys.readouterr().err
