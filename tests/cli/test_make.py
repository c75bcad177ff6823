"""The command ``trivector make``: documents that the other verbs read."""

import json
import re
from pathlib import Path
from shlex import split

import pytest
from commands import Run

import trivector
from trivector import Configuration, Subspace
from trivector.cli import main
from trivector.cli.kinds import KINDS
from trivector.cli.make import _OPTIONS
from trivector.families import CLASSICAL_FAMILIES, ORBITS
from trivector.fields import field_from_spec

ROOT = Path(__file__).parents[2]
TWENTY = str(ROOT / "data" / "twenty-planes.json")
MOVED = str(ROOT / "data" / "twenty-one-moved.json")
SEVEN = str(ROOT / "data" / "seven-planes-p6.json")
SIXTEEN = str(ROOT / "data" / "f7-sixteen.json")

NEEDED = {"planes": ["--planes", "3"], "subspace": ["--dimension", "7"]}
NEEDED["trivectors"] = ["--orbit", "tangent"]
NEEDED["del-pezzo"] = ["--curve", "E1; E2; E3; E4; L12; L13; L14; L23; L24; L34"]
NEEDED["symmetric"] = ["--length", "10"]

REFUSED = {
    "twenty": ("F_2", "F_4"),  # planes coincide
    "twenty-two": ("Q", "F_2", "F_7", '{"modulus": "x^2+1"}'),  # it needs F_4
    "ten": ("Q", "F_2", "F_4", "F_7", '{"modulus": "x^2+1"}'),
}


def refusal(run: Run, *argv: str) -> str:
    """The one line on standard error of a command that is refused."""
    code, out, err = run("make", *argv)
    assert (code, out, len(err)) == (2, "", 1)
    return err[0]


@pytest.mark.parametrize("field", ["Q", "F_2", "F_4", "F_7", '{"modulus": "x^2+1"}'])
@pytest.mark.parametrize("kind", list(KINDS))
def test_every_kind_over_every_field_is_read_back_or_refused(
    run: Run, tmp_path: Path, kind: str, field: str
) -> None:
    path = tmp_path / "made.json"
    code, out, err = run("make", kind, *NEEDED.get(kind, []), "--field", field, "-o", str(path))
    if field in REFUSED.get(kind, ()):
        assert (code, len(err)) == (2, 1)
        assert not path.exists()
        return
    assert (code, out, err) == (0, "", [])
    made = trivector.read(path)
    owner = made[0] if isinstance(made, tuple) else made
    expected = field_from_spec(json.loads(field) if field.startswith("{") else field)
    assert owner.field == expected
    stated = json.loads(path.read_text("utf-8"))
    assert stated["title"]
    assert stated["source"].startswith(f"trivector make {kind} ")


@pytest.mark.parametrize("name", list(CLASSICAL_FAMILIES))
def test_a_family_and_its_members_of_one_seed_belong_together(
    run: Run, tmp_path: Path, name: str
) -> None:
    paths = [str(tmp_path / "space.json"), str(tmp_path / "planes.json")]
    options = ("make", name, "--field", "F_5", "--change", "random", "--seed", "4")
    assert run(*options, "-o", paths[0])[0] == 0
    assert run(*options, "--members", "6", "-o", paths[1])[0] == 0
    space, planes = (trivector.read(path) for path in paths)
    assert isinstance(space, Subspace)
    assert isinstance(planes, Configuration)
    assert space.is_lagrangian()
    assert space != CLASSICAL_FAMILIES[name].lagrangian(space.field)
    assert len(set(planes.planes)) == 6
    assert all(space.contains(plane.plucker) for plane in planes.planes)


@pytest.mark.parametrize(
    "command",
    [
        "conics --members 4 --field F_9 --change random",
        "twenty --change random",
        "lagrangian --field F_101",
        "lagrangian --planes 3 --height 1",
        f"lagrangian --through {TWENTY}",
        "planes --planes 5 --field F_31",
        "plane --field F_5",
        "subspace --dimension 11 --field F_8",
        "trivectors --orbit nonsplit --members 3",
        "del-pezzo --length 17 --field F_101",
        "del-pezzo --length 18 --field F_101 --rational",
        "del-pezzo --curve 'E1;L12;L13;L23;y+z;x+y-2*z;x-2*y+z' --field F_11 --change random",
        pytest.param("ten", marks=pytest.mark.long),
    ],
)
def test_the_same_seed_gives_the_same_bytes_and_the_source_repeats_it(
    run: Run, command: str
) -> None:
    words = split(command)
    code, out, _ = run("make", *words, "--seed", "6")
    assert code == 0
    assert run("make", *words, "--seed", "6")[1] == out
    assert run("make", *words, "--seed", "7")[1] != out
    source = json.loads(out)["source"]
    again = re.fullmatch(r"trivector (.*) \(version .*\)", source)
    assert again
    assert run(*split(again[1]))[1] == out


def test_without_random_choices_the_seed_does_not_matter(run: Run) -> None:
    for kind in ("ruling", "twenty", "seven", "cyclic", "twenty-two"):
        assert run("make", kind, "--seed", "1")[1] == run("make", kind, "--seed", "2")[1]


def test_the_document_can_be_examined(run: Run, tmp_path: Path) -> None:
    path = str(tmp_path / "planes.json")
    for kind, code, count in (("twenty", 0, 20), ("seven", 0, 7), ("twenty-two", 0, 22)):
        assert run("make", kind, "--change", "random", "-o", path)[0] == 0
        found, out, _ = run("examine", path, "--json")
        answer = json.loads(out)
        assert (found, answer["planes"]) == (code, count)
        assert answer["complete"]["over_closure"] is True


def test_a_lagrangian_through_planes_contains_them(run: Run, tmp_path: Path) -> None:
    path = str(tmp_path / "space.json")
    assert run("make", "lagrangian", "--through", SIXTEEN, "-o", path)[0] == 0
    space = trivector.read(path)
    planes = trivector.read(SIXTEEN).planes
    assert space.is_lagrangian()
    assert all(space.contains(plane.plucker) for plane in planes)
    assert run("make", "lagrangian", "--through", TWENTY, "--field", "F_5", "-o", path)[0] == 0
    assert trivector.read(path).field.name == "F_5"


def test_a_plane_that_meets_given_ones(run: Run, tmp_path: Path) -> None:
    given, made = str(tmp_path / "given.json"), str(tmp_path / "made.json")
    assert run("make", "planes", "--planes", "6", "-o", given)[0] == 0
    assert run("make", "plane", "--meeting", given, "--seed", "3", "-o", made)[0] == 0
    (plane,) = trivector.read(made).planes
    assert all(plane.is_incident(other) for other in trivector.read(given).planes)


@pytest.mark.parametrize(
    ("command", "words"),
    [
        ("ruled", r"kind 'ruled' is unknown; it is one of point, hyperplane, "),
        ("twenty --members 3", r"make twenty has no option --members; it takes --change"),
        ("point --planes 3", r"make point has no option --planes; it takes --members"),
        ("twenty --field F_2", r"coincide in fours over F_2"),
        ("twenty-two --field F_8", r"contains F_4, which F_8 does not"),
        ("conics --field F_2 --members 8", r"over F_2 there are only 7"),
        ("conics --members 0", r"--members: must be a positive integer, not '0'"),
        ("conics --height 2", r"--height is for the parameters of --members"),
        ("conics --members 3 --height 2 --field F_7", r"--height is for infinite fields"),
        ("conics --change 5", r"--change: invalid choice"),
        ("conics --field F_6", r"F_6.*not a prime"),
        ('conics --field {"modulus"', r"field: line 1 column"),
        ("planes", r"make planes needs --planes"),
        ("subspace", r"make subspace needs --dimension"),
        ("subspace --dimension 21", r"dimension of 0 … 20, not 21"),
        ("trivectors", r"make trivectors needs --orbit"),
        ("trivectors --orbit pure", r"orbit must be one of zero, .*, not 'pure'"),
        ("planes --planes 9", r"over Q only 7 can be chosen freely"),
        (f"lagrangian --through {MOVED}", r"planes 0 and 3 do not meet"),
        (f"lagrangian --through {MOVED} --planes 3", r"--through and --planes do not go together"),
        (f"lagrangian --through {SEVEN}", r"planes of P\^5, not of P\^6"),
        (f"lagrangian --through {SIXTEEN} --field F_5", r"over F_7; it cannot be read over F_5"),
        ("lagrangian --through nowhere.json", r"nowhere.json: no such file"),
        (f"plane --meeting {TWENTY}", r"a plane that meets 20 planes"),
    ],
)
def test_bad_input_is_refused_in_one_line(run: Run, command: str, words: str) -> None:
    kind, *rest = command.split(" ", 1)
    arguments = rest[0].split(" ") if rest else []
    assert re.search(words, refusal(run, kind, *arguments))


def test_a_subspace_has_no_planes_to_meet(run: Run, tmp_path: Path) -> None:
    path = str(tmp_path / "space.json")
    assert run("make", "cyclic", "-o", path)[0] == 0
    assert 'needs a document of kind "planes"' in refusal(run, "lagrangian", "--through", path)


def test_the_help_lists_every_kind_with_its_options(capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit):
        main(["make", "--help"])
    out = capsys.readouterr().out
    for kind in KINDS.values():
        (line,) = re.findall(rf"^  {kind.name} .*$", out, re.MULTILINE)
        assert kind.text in line
        assert re.findall(r"--([a-z]+)", line) == list(kind.options)
        assert set(kind.options) <= set(_OPTIONS)
    for orbit in ORBITS:
        assert orbit in out
    assert {option for kind in KINDS.values() for option in kind.options} == set(_OPTIONS)


# Del Pezzo configurations


def test_a_curve_with_rational_nodes_gives_labelled_planes_over_q(run: Run, tmp_path: Path) -> None:
    path = str(tmp_path / "planes.json")
    curve = "E1; L12; L13; L23; a: y+z; b: x+y-2*z; c: x-2*y+z"
    assert run("make", "del-pezzo", "--curve", curve, "-o", path)[0] == 0
    made = trivector.read(path)
    assert isinstance(made, Configuration)
    assert len(made.planes) == 17
    assert made.labels[0] == "pencil p1"
    assert made.labels[5].startswith("node ")
    assert run("examine", path)[0] == 0


def test_a_curve_with_conjugate_nodes_gives_the_lagrangian_and_over_the_extension_the_planes(
    run: Run, tmp_path: Path
) -> None:
    path = str(tmp_path / "made.json")
    assert run("make", "del-pezzo", "--length", "17", "--field", "F_5", "-o", path)[0] == 0
    document = json.loads(Path(path).read_text("utf-8"))
    assert document["kind"] == "subspace"
    degrees = ", ".join(["1"] * 15 + ["2"])
    assert f"closed points of degrees {degrees}; curve " in document["title"]
    curve = document["title"].partition("curve ")[2]
    code, out, _ = run("planes", path, "--json")
    answer = json.loads(out)
    assert (code, answer["degree"], answer["planes_over_base"]) == (0, 17, 15)
    command = ("make", "del-pezzo", "--curve", curve, "--field", "F_25", "-o", path)
    assert run(*command)[0] == 0
    planes = trivector.read(path)
    assert isinstance(planes, Configuration)
    assert len(set(planes.planes)) == 17
    assert run("examine", path)[0] == 0


def test_over_a_number_field_nodes_that_were_conjugate_are_rational(
    run: Run, tmp_path: Path
) -> None:
    path = str(tmp_path / "made.json")
    assert run("make", "del-pezzo", "--length", "17", "--seed", "1", "-o", path)[0] == 0
    curve = json.loads(Path(path).read_text("utf-8"))["title"].partition("curve ")[2]
    _, out, _ = run("planes", path, "--json")
    (residue,) = [p["residue_field"] for p in json.loads(out)["closed_points"] if p["degree"] > 1]
    field = json.dumps(residue)
    code, _, _ = run("make", "del-pezzo", "--curve", curve, "--field", field, "-o", path)
    planes = trivector.read(path)
    assert code == 0
    assert isinstance(planes, Configuration)
    assert len(set(planes.planes)) == 17
    assert planes.field == field_from_spec(residue)
    assert run("examine", path)[0] == 0


def test_in_characteristic_2_the_title_does_not_promise_that_the_planes_are_all(
    run: Run, tmp_path: Path
) -> None:
    path = str(tmp_path / "made.json")
    lines = NEEDED["del-pezzo"]
    assert run("make", "del-pezzo", *lines, "--field", "F_4", "-o", path)[0] == 0
    title = json.loads(Path(path).read_text("utf-8"))["title"]
    assert "in characteristic 2 a finite section has length 22, not 20" in title
    code, out, _ = run("examine", path, "--json")
    answer = json.loads(out)
    # computed: 22 planes, the 20 and 2 more, over F_4 already
    assert (code, answer["section"]["degree"], len(answer["missing"])) == (1, 22, 2)


@pytest.mark.parametrize(
    ("options", "message"),
    [
        ("", "needs one of --curve and --length"),
        ("--curve E1 --length 17", "needs one of --curve and --length"),
        ("--curve E1 --rational", "--rational goes with --length"),
        ("--length 21", "length 21: curves in |−2K|"),
        ("--length 17 --field F_2", "use a field with more elements"),
        ("--curve E1;E2", "must add up to −2K = (6; 2, 2, 2, 2), not (0; -1, -1, 0, 0)"),
        ("--curve E1;E5", "E5"),
        ("--curve w^2", "is not a product of a number and powers of x, y, z"),
        ("--curve x^7", "at most 6"),
        ("--members 3 --length 17", "make del-pezzo has no option --members"),
    ],
)
def test_a_curve_that_gives_nothing_is_refused_in_one_line(
    run: Run, options: str, message: str
) -> None:
    assert message in refusal(run, "del-pezzo", *options.split())


def test_a_curve_with_worse_than_nodes_is_refused_with_the_place(run: Run) -> None:
    # Three lines through (1 : 2 : 3).
    curve = "3*y-2*z; z-3*x; y-2*x; x*y+x*z-2*y*z; x-2*y+z"
    assert "worse than a node, at" in refusal(run, "del-pezzo", "--curve", curve)


def test_impossible_lengths_of_symmetric_planes_and_fields_of_ten_are_refused(run: Run) -> None:
    assert "use 10, 11, 12, 13, 14, 15" in refusal(run, "symmetric", "--length", "16")
    assert "needs --length" in refusal(run, "symmetric")
    assert "needs a finite field, not Q" in refusal(run, "ten", "--field", "Q")
    assert "at least 101 elements, not F_2; try F_1009" in refusal(run, "ten", "--field", "F_2")
