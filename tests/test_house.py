"""The rules of the house: who knows whom, how long, how light, how documented."""

import ast
import os
import re
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

import trivector

ROOT = Path(__file__).parents[1]
PACKAGE = ROOT / "trivector"

# A room imports from itself and from rooms with a smaller number, from nothing else.
ROOMS = {
    "errors": 0,
    "fields": 1,
    "exterior": 2,
    "subspaces": 3,
    "sections": 4,
    "families": 4,
    "configurations": 5,
    "sextics": 5,
    "symmetry": 6,
    "certificates": 6,
    "documents": 6,
    "campaigns": 7,
    "reports": 7,
    "cli": 8,
    "__main__": 9,
}

LONGEST_MODULE = 600

HEAVY = ("sympy", "galois", "numba", "networkx", "matplotlib", "numpy", "flint")

TOP_LEVEL = {"README.md", "DEVELOPERS.md", "pyproject.toml", "trivector", "tests", "data", ".ci"}


# Who knows whom


def imported_modules(tree: ast.AST, package: str) -> Iterator[str]:
    """The full names that a module of ``package`` imports, inside functions too."""
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            for alias in node.names:
                yield alias.name
        elif isinstance(node, ast.ImportFrom):
            parents = package.split(".")
            above = parents[: len(parents) - node.level + 1] if node.level else []
            origin = ".".join([*above, *([node.module] if node.module else [])])
            if origin == "trivector":
                for alias in node.names:
                    yield f"{origin}.{alias.name}"
            else:
                yield origin


def layer_faults(package: Path) -> list[str]:
    """A sentence for every import that the table does not allow."""
    faults = []
    for path in sorted(package.rglob("*.py")):
        inside = path.relative_to(package)
        if inside == Path("__init__.py"):
            continue  # the front door names all rooms
        room = inside.parts[0].removesuffix(".py")
        if room not in ROOMS:
            faults.append(f"{inside}: the room {room} has no number")
            continue
        parent = ".".join(("trivector", *inside.parts[:-1]))
        for name in imported_modules(ast.parse(path.read_text("utf-8")), parent):
            if name.split(".")[0] != "trivector" or name == "trivector.__version__":
                continue
            target = name.split(".")[1] if "." in name else name
            if target not in ROOMS:
                faults.append(f"{inside}: {name} is no room; import from the room itself")
            elif target != room and ROOMS[target] >= ROOMS[room]:
                faults.append(f"{inside}: {room} ({ROOMS[room]}) imports {target}")
    return faults


def test_every_room_imports_only_from_rooms_with_a_smaller_number() -> None:
    assert layer_faults(PACKAGE) == []


def existing_rooms() -> list[str]:
    """The rooms that the package has so far, without the way in."""
    names = (path.name.removesuffix(".py") for path in PACKAGE.iterdir())
    return sorted(name for name in names if name in ROOMS and name != "__main__")


def test_every_room_says_which_question_it_answers() -> None:
    assert len(existing_rooms()) >= 9
    for room in existing_rooms():
        folder = PACKAGE / room
        source = folder / "__init__.py" if folder.is_dir() else PACKAGE / f"{room}.py"
        docstring = ast.get_docstring(ast.parse(source.read_text("utf-8"))) or ""
        assert "? " in f"{docstring.splitlines()[0]} ", room


def plant(folder: Path, where: str, text: str) -> Path:
    """A package of two lawful rooms and one planted module."""
    package = folder / "trivector"
    files = {
        "__init__.py": "from trivector.cli import main\n",
        "errors.py": "import os\n",
        "fields/__init__.py": "from trivector.errors import FieldError\nimport flint.types\n",
        "fields/prime.py": "from trivector.fields import Field\nfrom .names import parse\n",
    }
    for name, content in {**files, where: text}.items():
        path = package / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(content, "utf-8")
    return package


@pytest.mark.parametrize(
    ("where", "text"),
    [
        ("subspaces/flats.py", "from trivector.fields.linear import rank\n"),
        ("subspaces/flats.py", "from ..exterior.basis import subsets\n"),
        ("cli/main.py", "from trivector import __version__\n"),
        ("cli/main.py", "import trivector.reports, json\n"),
        ("reports/tables.py", "from trivector_extra import other\n"),
    ],
)
def test_a_downward_import_is_allowed(tmp_path: Path, where: str, text: str) -> None:
    assert layer_faults(plant(tmp_path, where, text)) == []


@pytest.mark.parametrize(
    ("where", "text", "fault"),
    [
        ("fields/a.py", "from trivector.sections import x", "fields (1) imports sections"),
        ("fields/a.py", "import trivector.exterior.basis as b", "fields (1) imports exterior"),
        ("fields/a.py", "from ..exterior import basis", "fields (1) imports exterior"),
        ("fields/a.py", "from .. import exterior", "fields (1) imports exterior"),
        ("fields/deep/a.py", "from ...cli.main import m", "fields (1) imports cli"),
        ("fields/a.py", "def f():\n    from trivector import cli", "fields (1) imports cli"),
        ("sections/a.py", "import trivector.families", "sections (4) imports families"),
        ("errors.py", "from trivector.fields import QQ", "errors (0) imports fields"),
        ("fields/a.py", "from trivector import Plane", "trivector.Plane is no room"),
        ("fields/a.py", "import trivector", "trivector is no room"),
        ("helpers/a.py", "import os", "the room helpers has no number"),
    ],
)
def test_an_upward_or_sideways_import_is_found(
    tmp_path: Path, where: str, text: str, fault: str
) -> None:
    (found,) = layer_faults(plant(tmp_path, where, text + "\n"))
    assert found.startswith(f"{where}: ")
    assert fault in found


# How long, how light, how documented


def test_no_module_has_more_than_600_lines() -> None:
    lengths = {
        str(path.relative_to(ROOT)): len(path.read_text("utf-8").splitlines())
        for path in PACKAGE.rglob("*.py")
    }
    assert len(lengths) > 20
    assert {name: n for name, n in lengths.items() if n > LONGEST_MODULE} == {}


@pytest.mark.parametrize(
    "program",
    [
        "import trivector",
        "import trivector.cli",
        "from trivector.cli import main; main(['--help'])",
        "from trivector.cli import main; main(['--version'])",
        "from trivector.cli import main; main(['examine', '--help'])",
        "from trivector.cli import main; main(['examine'])",
    ],
)
def test_a_light_start_loads_no_heavy_library(program: str) -> None:
    watched = (
        "import sys\ntry:\n    "
        + program
        + f"\nexcept SystemExit:\n    pass\nprint([m for m in {HEAVY!r} if m in sys.modules])"
    )
    answer = subprocess.run(
        [sys.executable, "-c", watched], capture_output=True, text=True, check=True, cwd=ROOT
    )
    assert answer.stdout.splitlines()[-1] == "[]"


def test_the_watch_on_heavy_libraries_sees_them_when_they_are_loaded() -> None:
    watched = f"import sys, trivector.fields; print([m for m in {HEAVY!r} if m in sys.modules])"
    answer = subprocess.run(
        [sys.executable, "-c", watched], capture_output=True, text=True, check=True, cwd=ROOT
    )
    assert "flint" in answer.stdout


def test_the_top_level_of_the_repository_holds_the_agreed_entries_and_dotfiles() -> None:
    if (ROOT / ".git").exists():
        command = ["git", "ls-files", "--cached", "--others", "--exclude-standard"]
        listing = subprocess.run(command, capture_output=True, text=True, check=True, cwd=ROOT)
        names = {line.split("/")[0] for line in listing.stdout.splitlines()}
    else:  # an unpacked archive: what an installation leaves behind is ignored
        names = {name for name in os.listdir(ROOT) if not name.endswith(".egg-info")} - {"build"}
    assert names >= TOP_LEVEL
    assert {name for name in names - TOP_LEVEL if not name.startswith(".")} == set()


PUBLIC = [name for name in trivector.__all__ if not name.startswith("_")]


@pytest.mark.parametrize("name", PUBLIC)
def test_every_public_name_has_a_docstring_of_its_own(name: str) -> None:
    value = getattr(trivector, name)
    owner = value if isinstance(value, type) or callable(value) else type(value)
    docstring = owner.__doc__ or ""
    assert len(docstring.split()) >= 4
    assert not docstring.startswith(f"{owner.__name__}(")  # what a dataclass writes by itself
    bases = owner.__mro__[1:] if isinstance(owner, type) else ()
    assert all(docstring != base.__doc__ for base in bases)


def test_the_directory_of_the_package_is_its_public_names() -> None:
    assert dir(trivector) == sorted(trivector.__all__)
    with pytest.raises(AttributeError, match="no attribute 'nonsense'"):
        _ = trivector.nonsense


def test_the_guide_for_developers_shows_the_same_numbers_and_questions() -> None:
    guide = (ROOT / "DEVELOPERS.md").read_text("utf-8")
    table = re.findall(r"^\| ([0-9]) \| `([a-z]+)` \| (.*\?.*) \|$", guide, re.MULTILINE)
    assert {room: int(number) for number, room, _ in table} == {
        room: number for room, number in ROOMS.items() if room in existing_rooms()
    }
    later = dict(re.findall(r"`([a-z]+)`\s([0-9])", guide))
    expected = set(ROOMS) - set(existing_rooms()) - {"__main__"}
    assert {room: int(number) for room, number in later.items()} == {
        room: ROOMS[room] for room in expected
    }
