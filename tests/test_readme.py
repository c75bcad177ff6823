"""What the README shows is what happens."""

import doctest
import json
import os
import re
import subprocess
import sys
import sysconfig
import tomllib
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text("utf-8")

_EXIT_CODE = re.compile(r"\s+# exit code ([0-9]+)$")


def blocks(text: str, language: str) -> list[str]:
    """The fenced blocks in that language, in order."""
    return re.findall(rf"^```{language}\n(.*?)^```$", text, re.DOTALL | re.MULTILINE)


@dataclass(frozen=True)
class Shown:
    """A command of the tour, the exit code it is to have, and lines of what it prints."""

    command: str
    exit_code: int
    lines: tuple[str, ...]


def shown_commands(text: str) -> Iterator[Shown]:
    """The commands after ``$``, each with the lines below it."""
    for block in blocks(text, "sh"):
        for part in re.split(r"^\$ ", block, flags=re.MULTILINE)[1:]:
            command, *lines = part.splitlines()
            code = _EXIT_CODE.search(command)
            yield Shown(
                _EXIT_CODE.sub("", command),
                int(code[1]) if code else 0,
                tuple(" ".join(line.split()) for line in lines if line.strip()),
            )


def missing_lines(shown: Shown, output: str) -> list[str]:
    """The lines that the output does not contain in this order; spacing does not count."""
    printed = iter([" ".join(line.split()) for line in output.splitlines()])
    return [line for line in shown.lines if line not in printed]


def run(command: str) -> subprocess.CompletedProcess[str]:
    """A command line in the repository, with the programs of this environment."""
    programs = os.pathsep.join([sysconfig.get_path("scripts"), str(Path(sys.executable).parent)])
    environment = {**os.environ, "PATH": programs + os.pathsep + os.environ["PATH"]}
    return subprocess.run(
        ["sh", "-c", command],
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        encoding="utf-8",
        cwd=ROOT,
        env={**environment, "PYTHONIOENCODING": "utf-8"},
        timeout=120,
    )


TOUR = list(shown_commands(README))
INSTALLING = [block for block in blocks(README, "sh") if not block.startswith("$ ")]


@pytest.mark.parametrize("shown", TOUR, ids=lambda shown: shown.command[:60])
def test_every_command_of_the_tour_does_what_is_shown(shown: Shown) -> None:
    done = run(shown.command)
    assert done.returncode == shown.exit_code, done.stdout
    assert shown.lines
    assert missing_lines(shown, done.stdout) == [], done.stdout


def test_the_tour_shows_every_verb_and_every_exit_code() -> None:
    usage = run("trivector --help").stdout
    verbs = set(re.findall(r"^    ([a-z]+)(?:  |$)", usage, re.MULTILINE))
    assert "examine" in verbs
    commands = "\n".join(shown.command for shown in TOUR)
    assert verbs == set(re.findall(r"\btrivector ([a-z]+)", commands))
    assert {shown.exit_code for shown in TOUR} == {0, 1, 2, 3}


def test_a_wrong_line_a_wrong_order_and_a_wrong_exit_code_would_be_seen() -> None:
    text = "```sh\n$ echo a; echo b  # exit code 3\n  a\nb\n$ true\nc\n```\n"
    first, second = shown_commands(text)
    assert (first.command, first.exit_code, first.lines) == ("echo a; echo b", 3, ("a", "b"))
    assert (second.command, second.exit_code) == ("true", 0)
    assert missing_lines(first, "x\n a\ny\nb\n") == []
    assert missing_lines(first, "b\na\n") == ["b"]
    assert missing_lines(first, "a\nbb\n") == ["b"]
    assert missing_lines(second, "") == ["c"]


def test_the_python_of_the_readme_prints_what_is_shown(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)
    (block,) = blocks(README, "python")
    lines = doctest.DocTestParser().get_doctest(block, {}, "README", "README.md", None)
    results = doctest.DocTestRunner().run(lines)
    assert (results.failed, results.attempted) == (0, 3)


def test_the_document_of_the_readme_is_read() -> None:
    (block,) = blocks(README, "json")
    assert json.loads(block)["kind"] == "planes"
    done = subprocess.run(
        [sys.executable, "-m", "trivector", "examine", "-", "--json"],
        input=block,
        capture_output=True,
        encoding="utf-8",
        cwd=ROOT,
    )
    assert json.loads(done.stdout)["planes"] == 1


def test_there_are_two_installing_commands_each_one_line_that_needs_only_python() -> None:
    assert len(INSTALLING) == 2
    for block in INSTALLING:
        assert len(block.splitlines()) == 1
        environment, install, last = block.strip().split(" && ")
        assert environment == "python3 -m venv .venv"
        assert install.startswith(".venv/bin/pip install ")
        assert last.startswith(".venv/bin/")


def test_the_main_job_of_the_readme_answers_yes() -> None:
    last = INSTALLING[0].strip().split(" && ")[2]
    done = run(last.removeprefix(".venv/bin/"))
    assert done.returncode == 0
    assert "over the algebraic closure of Q yes" in " ".join(done.stdout.split())


def test_the_command_for_the_tests_installs_what_they_need_and_runs_all_of_them() -> None:
    _, install, last = INSTALLING[1].strip().split(" && ")
    assert install.endswith("-e '.[test]'")
    assert last == ".venv/bin/python -m pytest -n auto"
    project = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))
    needed = project["project"]["optional-dependencies"]["test"]
    assert {re.match("[a-z-]+", name)[0] for name in needed} >= {"pytest", "hypothesis"}
    done = run(f"{last.removeprefix('.venv/bin/')} --collect-only -q tests/test_readme.py")
    assert done.returncode == 0
    assert "test_readme.py" in done.stdout


def test_the_table_of_the_data_is_that_of_the_files() -> None:
    rows = re.findall(r"^\| `([a-z0-9-]+\.json)` \| ([0-9]+) \| (\S+) \|", README, re.MULTILINE)
    found = set()
    for path in (ROOT / "data").glob("*.json"):
        stated = json.loads(path.read_text("utf-8"))
        found.add((path.name, str(len(stated["planes"])), stated["field"]))
        assert stated["source"]
    assert set(rows) == found
