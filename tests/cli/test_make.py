"""The command ``trivector make``: documents that the other verbs read."""

import json
import re
from collections.abc import Callable
from pathlib import Path

import pytest

import trivector
from trivector import Configuration, Subspace
from trivector.cli import main
from trivector.cli.make import _OPTIONS, KINDS
from trivector.families import CLASSICAL_FAMILIES, ORBITS
from trivector.fields import field_from_spec

ROOT = Path(__file__).parents[2]
TWENTY = str(ROOT / "data" / "twenty-planes.json")
MOVED = str(ROOT / "data" / "twenty-one-moved.json")
SEVEN = str(ROOT / "data" / "seven-planes-p6.json")
SIXTEEN = str(ROOT / "data" / "f7-sixteen.json")

Run = Callable[..., tuple[int, str, list[str]]]

NEEDED = {"planes": ["--planes", "3"], "subspace": ["--dimension", "7"]}
NEEDED["trivectors"] = ["--orbit", "tangent"]


@pytest.fixture
def run(capsys: pytest.CaptureFixture[str]) -> Run:
    """Runs the command in this process: exit code, standard output, lines of standard error."""

    def run_command(*argv: str) -> tuple[int, str, list[str]]:
        code = main(argv)
        captured = capsys.readouterr()
        assert "Traceback" not in captured.err
        return code, captured.out, captured.err.splitlines()

    return run_command


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
    if (kind, field) in {("twenty", "F_2"), ("twenty", "F_4")} or (
        kind == "twenty-two" and field != "F_4"
    ):
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
    ],
)
def test_the_same_seed_gives_the_same_bytes_and_the_source_repeats_it(
    run: Run, command: str
) -> None:
    code, out, _ = run("make", *command.split(), "--seed", "6")
    assert code == 0
    assert run("make", *command.split(), "--seed", "6")[1] == out
    assert run("make", *command.split(), "--seed", "7")[1] != out
    source = json.loads(out)["source"]
    again = re.fullmatch(r"trivector (.*) \(version .*\)", source)
    assert again
    assert run(*again[1].split())[1] == out


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
