"""The command ``trivector examine``: answers, exit codes, one line for each fault."""

import contextlib
import gzip
import io
import json
import os
import re
import signal
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest
from commands import Run
from faulty import FAULTY, PLANES, Faulty, as_text, document
from hypothesis import given, settings
from hypothesis import strategies as st

import trivector
from trivector import Configuration
from trivector.cli import main

ROOT = Path(__file__).parents[2]
DATA = ROOT / "data"
TWENTY = str(DATA / "twenty-planes.json")
MINUS_THREE = str(DATA / "twenty-minus-three.json")
MOVED = str(DATA / "twenty-one-moved.json")
F7_SIXTEEN = str(DATA / "f7-sixteen.json")
SEVEN = str(DATA / "seven-planes-p6.json")


def process(*argv: str, **options: Any) -> subprocess.CompletedProcess[str]:
    """The same through a real process."""
    command = [sys.executable, "-m", "trivector", *argv]
    return subprocess.run(
        command, capture_output=True, text=True, encoding="utf-8", cwd=ROOT, timeout=60, **options
    )


# Answers and exit codes


@pytest.mark.parametrize(
    ("path", "options", "code"),
    [
        (TWENTY, [], 0),
        (TWENTY, ["--field", "F_7"], 0),
        (F7_SIXTEEN, [], 0),
        (SEVEN, [], 0),
        (MINUS_THREE, [], 1),
        (MOVED, [], 1),
        (TWENTY, ["--max-degree", "2"], 3),
        (TWENTY, ["--max-columns", "54"], 3),
        (TWENTY, ["--field", "F_7", "--max-degree", "2"], 3),
    ],
)
def test_the_exit_code_is_the_answer(run: Run, path: str, options: list[str], code: int) -> None:
    for more in ([], ["--json"]):
        assert run("examine", path, *options, *more)[0] == code
        assert run("examine", path, *options, *more)[2] == []


def test_a_complete_configuration_is_reported_with_the_field_of_each_statement(run: Run) -> None:
    code, out, _ = run("examine", TWENTY)
    words = " ".join(out.split())
    assert code == 0
    for part in (
        "20 planes of P^5 over Q",
        "pairwise incident yes",
        "190 share exactly a point",
        "dimension 10",
        "Lagrangian yes",
        "Hilbert function 1, 10, 20, 20",
        "over Q yes",
        "over the algebraic closure of Q yes",
    ):
        assert part in words
    assert "undecided" not in words
    assert re.search(r"because .*modulo [0-9]+", words)


def test_an_incomplete_configuration_says_how_many_planes_are_missing(run: Run) -> None:
    code, out, _ = run("examine", MINUS_THREE, "--json")
    answer = json.loads(out)
    assert code == 1
    assert answer["complete"]["over_closure"] is False
    assert answer["section"]["degree"] == 20
    assert answer["section"]["further_planes"] == 3
    words = " ".join(run("examine", MINUS_THREE)[1].split())
    assert "over the algebraic closure of Q no" in words


def test_planes_that_miss_each_other_are_named_with_their_labels(run: Run) -> None:
    code, out, _ = run("examine", MOVED)
    words = " ".join(out.split())
    assert code == 1
    assert "pairwise incident no" in words
    assert "0 (01|23|45 +++ moved) and 3 (01|23|45 --+)" in words
    answer = json.loads(run("examine", MOVED, "--json")[1])
    assert [0, 3] in answer["disjoint_pairs"]
    assert len(answer["disjoint_pairs"]) == answer["pairs"]["disjoint"] == 17
    assert answer["complete"] == {"over_base": None, "over_closure": None}


@pytest.mark.parametrize("limit", ["--max-degree", "--max-columns"])
def test_undecided_is_said_with_the_limit_that_was_hit(run: Run, limit: str) -> None:
    code, out, _ = run("examine", TWENTY, limit, "2", "--json")
    answer = json.loads(out)
    assert code == 3
    assert answer["complete"] == {"over_base": None, "over_closure": None}
    assert answer["section"]["projective_dimension"] is None
    assert answer["section"]["exhaustive"] is False
    assert "degree 2" in answer["section"]["limit"]
    words = " ".join(run("examine", TWENTY, limit, "2")[1].split())
    assert "over the algebraic closure of Q undecided" in words
    assert f"limit hit {answer['section']['limit']}" in words


def test_labels_and_titles_are_shown_as_they_are(run: Run, tmp_path: Path) -> None:
    path = tmp_path / "planes.json"
    apart = [PLANES[0], [[0, 0, 0, *row[:3]] for row in PLANES[0]]]
    text = document(planes=apart, labels=["[bold]a[/bold]", "β"], title="[red]three[/] :smile:")
    path.write_text(json.dumps(text), "utf-8")
    out = run("examine", str(path))[1]
    assert "[red]three[/] :smile:" in out
    assert "0 ([bold]a[/bold]) and 1 (β)" in out


# JSON

Kind = type | tuple[type, ...]
NOTHING = type(None)

EXAMINATION: dict[str, Kind] = {
    "kind": str,
    "field": (str, dict),
    "dimension": int,
    "planes": int,
    "distinct": int,
    "pairs": dict,
    "disjoint_pairs": list,
    "pairwise_incident": bool,
    "span": dict,
    "section": dict,
    "complete": dict,
    "missing": list,
    "seed": int,
}

PARTS: dict[str, dict[str, Kind]] = {
    "pairs": dict.fromkeys(("equal", "line", "point", "disjoint"), int),
    "span": {
        "dimension": int,
        "isotropic": (bool, NOTHING),
        "lagrangian": (bool, NOTHING),
    },
    "section": {
        "subspace": dict,
        "projective_dimension": (int, NOTHING),
        "degree": (int, NOTHING),
        "hilbert_function": (list, NOTHING),
        "reduced": (bool, NOTHING),
        "closed_points": (list, NOTHING),
        "planes_over_base": (int, NOTHING),
        "planes_over_closure": (int, NOTHING),
        "planes": (list, NOTHING),
        "scope": str,
        "method": str,
        "exhaustive": bool,
        "limit": (str, NOTHING),
    },
    "complete": dict.fromkeys(("over_base", "over_closure"), (bool, NOTHING)),
}


def check_keys(found: dict[str, Any], expected: dict[str, Kind]) -> None:
    assert sorted(set(expected) - set(found)) == []
    for key, kind in expected.items():
        assert isinstance(found[key], kind), key
        assert isinstance(found[key], bool) <= (
            bool in (kind if isinstance(kind, tuple) else (kind,))
        )


@pytest.mark.parametrize("path", sorted(DATA.glob("*.json")), ids=lambda path: path.stem)
def test_the_json_answer_has_the_agreed_keys(run: Run, path: Path) -> None:
    code, out, err = run("examine", str(path), "--json", "--seed", "5")
    assert (code in (0, 1), err) == (True, [])
    assert len(out.splitlines()) == 1
    answer = json.loads(out)
    check_keys(answer, EXAMINATION)
    for part, keys in PARTS.items():
        check_keys(answer[part], keys)
    check_keys(answer["section"]["subspace"], PARTS["span"])
    stated = json.loads(path.read_text("utf-8"))
    assert answer["kind"] == "examination"
    assert answer["seed"] == 5
    assert (answer["field"], answer["dimension"]) == (stated["field"], stated["dimension"])
    count = len(stated["planes"])
    assert answer["planes"] == count
    assert sum(answer["pairs"].values()) == count * (count - 1) // 2
    assert answer["pairwise_incident"] == (answer["disjoint_pairs"] == [])


def test_the_planes_of_the_section_are_canonical_and_sorted(run: Run) -> None:
    section = json.loads(run("examine", TWENTY, "--json")[1])["section"]
    assert len(section["planes"]) == section["planes_over_closure"] == 20
    again = trivector.read(TWENTY)
    assert isinstance(again, Configuration)
    expected = sorted(again.planes, key=lambda plane: plane.sort_key())
    assert section["planes"] == [plane.to_entries() for plane in expected]
    points = section["closed_points"]
    assert [point["plane"] for point in points] == section["planes"]
    assert {(point["degree"], point["multiplicity"]) for point in points} == {(1, 1)}


def test_the_same_question_has_the_same_answer_to_the_byte(run: Run) -> None:
    first = run("examine", MINUS_THREE, "--json")
    assert run("examine", MINUS_THREE, "--json") == first
    answers = {process("examine", MINUS_THREE, "--json").stdout for _ in range(2)}
    assert answers == {first[1]}


def test_the_answer_of_the_command_is_that_of_python(run: Run) -> None:
    configuration = trivector.read(MINUS_THREE)
    assert isinstance(configuration, Configuration)
    expected = configuration.examine(seed=3).to_json()
    assert json.loads(run("examine", MINUS_THREE, "--json", "--seed", "3")[1]) == expected


def test_huge_integers_leave_the_command_as_exact_as_they_came(run: Run, tmp_path: Path) -> None:
    huge = "9" + "123456789" * 1111
    path = tmp_path / "planes.json"
    text = json.dumps(document(planes=[PLANES[0], [["A", *PLANES[0][0][1:5], 1], *PLANES[0][1:]]]))
    path.write_text(text.replace('"A"', huge), "utf-8")
    code, out, err = run("examine", str(path), "--json")
    assert (code, err) == (1, [])
    assert json.loads(out)["pairs"] == {"equal": 0, "line": 1, "point": 0, "disjoint": 0}
    path.write_text(text.replace('"A"', f'"{huge}/{huge}"'), "utf-8")
    assert json.loads(run("examine", str(path), "--json")[1])["planes"] == 2


# Where the document comes from, where the answer goes


@pytest.mark.parametrize(
    ("content", "options"),
    [
        (json.dumps(document()), []),
        (json.dumps(document()), ["--field", "Q"]),
        (as_text(PLANES), ["--field", "Q"]),
        (as_text(PLANES, between=", "), ["--field", "Q"]),
    ],
)
def test_standard_input_files_and_compressed_files_give_the_same_answer(
    run: Run, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, content: str, options: list[str]
) -> None:
    path, compressed = tmp_path / "planes", tmp_path / "planes.gz"
    path.write_text(content, "utf-8")
    compressed.write_bytes(gzip.compress(content.encode()))
    expected = run("examine", str(path), *options, "--json")
    assert expected[0] == 1
    assert json.loads(expected[1])["planes"] == 3
    assert run("examine", str(compressed), *options, "--json") == expected
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(content.encode())))
    assert run("examine", "-", *options, "--json") == expected
    assert process("examine", "-", *options, "--json", input=content).stdout == expected[1]


@pytest.mark.parametrize("form", [[], ["--json"]])
def test_the_answer_can_be_written_to_a_file(run: Run, tmp_path: Path, form: list[str]) -> None:
    path = tmp_path / "answer"
    path.write_text("something longer that was there before" * 1000, "utf-8")
    expected = run("examine", MINUS_THREE, *form)
    code, out, err = run("examine", MINUS_THREE, *form, "-o", str(path))
    assert (code, out, err) == (1, "", [])
    assert path.read_text("utf-8") == expected[1]


@pytest.mark.parametrize("name", ["absent/answer", ""])
def test_a_file_that_cannot_be_written_is_a_fault(run: Run, tmp_path: Path, name: str) -> None:
    code, out, err = run("examine", TWENTY, "-o", f"{tmp_path}/{name}")
    assert (code, out, len(err)) == (2, "", 1)
    assert "cannot be written" in err[0]
    assert str(tmp_path) in err[0]


def test_a_reduced_document_names_the_field_it_was_reduced_to(run: Run) -> None:
    assert json.loads(run("examine", TWENTY, "--field", "F_7", "--json")[1])["field"] == "F_7"
    out = run("examine", TWENTY, "--field", "F_7")[1]
    assert "the algebraic closure of F_7" in out
    assert "Q" not in out.replace(json.loads(Path(TWENTY).read_text("utf-8"))["title"], "")


# Faults


@pytest.mark.parametrize("case", FAULTY, ids=lambda case: case.name)
def test_each_fault_is_one_line_with_file_place_and_words(
    run: Run, tmp_path: Path, case: Faulty
) -> None:
    path = tmp_path / "planes.json"
    path.write_text(case.content, "utf-8")
    options = [] if case.field is None else ["--field", case.field]
    code, out, err = run("examine", str(path), *options)
    assert (code, out, len(err)) == (2, "", len(case.faults))
    for line, (place, *words) in zip(err, case.faults, strict=True):
        start = f"trivector: {path}: "
        assert line.startswith(f"{start}{place}: " if place else start)
        assert [word for word in words if word not in line] == []


@pytest.mark.parametrize(
    ("argv", "words"),
    [
        ([], ["VERB", "trivector --help"]),
        (["nonsense"], ["'nonsense'", "examine", "--help"]),
        (["examine"], ["FILE", "trivector examine --help"]),
        (["examine", TWENTY, TWENTY], ["twenty-planes.json", "--help"]),
        (["examine", TWENTY, "--nonsense"], ["--nonsense", "--help"]),
        (["examine", TWENTY, "--fie", "F_7"], ["--fie"]),
        (["examine", TWENTY, "--field"], ["--field", "expected one argument"]),
        (["examine", TWENTY, "--field", "F_6"], ["6 is not a prime"]),
        (["examine", TWENTY, "--field", "R"], ["'R'"]),
        (["examine", F7_SIXTEEN, "--field", "F_5"], ["field", "F_7", "F_5", F7_SIXTEEN]),
        (["examine", F7_SIXTEEN, "--field", "Q"], ["field", "F_7", "over Q", F7_SIXTEEN]),
        (["examine", TWENTY, "--seed", "one"], ["--seed", "'one'"]),
        (["examine", TWENTY, "--jobs", "0"], ["--jobs", "positive", "'0'"]),
        (["examine", TWENTY, "--max-degree", "-1"], ["--max-degree", "positive", "'-1'"]),
        (["examine", TWENTY, "--max-columns", "1.5"], ["--max-columns", "'1.5'"]),
        (["examine", TWENTY, "--max-primes", "x"], ["--max-primes", "'x'"]),
        (["examine", str(DATA)], ["data", "directory"]),
        (["examine", "no/such/file.json"], ["no/such/file.json", "no such file"]),
        (["examine", "no\nsuch\nfile"], ["no such file"]),
    ],
)
def test_a_wrong_command_line_is_one_line(run: Run, argv: list[str], words: list[str]) -> None:
    code, out, err = run(*argv)
    assert (code, out, len(err)) == (2, "", 1)
    assert err[0].startswith("trivector: ")
    assert [word for word in words if word not in err[0]] == []


def test_a_subspace_is_no_configuration(run: Run, tmp_path: Path) -> None:
    path = tmp_path / "subspace.json"
    path.write_text(json.dumps({"kind": "subspace", "field": "Q", "basis": [[1] + [0] * 19]}))
    code, out, err = run("examine", str(path))
    assert (code, out) == (2, "")
    assert err == [f'trivector: {path}: examine needs a document of kind "planes"']


def test_fifty_faults_are_fifty_lines_and_one_more(run: Run, tmp_path: Path) -> None:
    path = tmp_path / "planes.json"
    path.write_text(json.dumps(document(planes=[[[0.5] * 6] * 3] * 20)), "utf-8")
    code, out, err = run("examine", str(path))
    assert (code, out, len(err)) == (2, "", 51)
    assert all(line.startswith(f"trivector: {path}: ") for line in err)


@pytest.mark.parametrize("argv", [["--help"], ["examine", "--help"], ["--version"]])
def test_help_and_version_go_to_standard_output(
    capsys: pytest.CaptureFixture[str], argv: list[str]
) -> None:
    with pytest.raises(SystemExit) as caught:
        main(argv)
    captured = capsys.readouterr()
    assert (caught.value.code, captured.err) == (0, "")
    assert (
        trivector.__version__ in captured.out
        or "Exit codes" in captured.out
        or "FILE" in captured.out
    )


# Through a real process


def test_a_process_answers_with_exit_code_and_streams() -> None:
    for path, code in ((TWENTY, 0), (MINUS_THREE, 1)):
        done = process("examine", path)
        assert (done.returncode, done.stderr) == (code, "")
        assert "over the algebraic closure of Q" in done.stdout
    done = process("examine", TWENTY, "--max-degree", "2")
    assert (done.returncode, done.stderr) == (3, "")
    done = process("examine", "-", input='{"kind": "planes", "field": "R", "dimension": 5}')
    assert (done.returncode, done.stdout) == (2, "")
    lines = done.stderr.splitlines()
    assert len(lines) == 3
    assert all(line.startswith("trivector: standard input: ") for line in lines)


def test_an_answer_is_readable_where_only_ascii_can_be_written() -> None:
    environment = {**os.environ, "PYTHONIOENCODING": "ascii"}
    done = process("examine", TWENTY, env=environment)
    assert (done.returncode, done.stderr) == (0, "")
    assert r"Span in \u2227\xb3V" in done.stdout


def waiting(program: str = "from trivector.cli import main") -> subprocess.Popen[bytes]:
    """A process that has begun to read its standard input."""
    child = subprocess.Popen(
        [sys.executable, "-c", f"import sys\n{program}\nsys.exit(main(['examine', '-']))"],
        stdin=subprocess.PIPE,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        cwd=ROOT,
    )
    assert child.stdin is not None
    child.stdin.write(b" " * 2**20)  # more than any pipe holds: returns once the child reads
    child.stdin.flush()
    return child


def test_a_reader_that_goes_away_is_no_fault() -> None:
    child = waiting()
    assert child.stdout is not None
    child.stdout.close()
    child.stdout = None
    _, err = child.communicate(json.dumps(document()).encode(), timeout=60)
    assert (child.returncode, err) == (0, b"")


def test_an_interrupted_command_says_so_in_one_line() -> None:
    child = waiting(
        "import signal\nsignal.signal(signal.SIGINT, signal.default_int_handler)\n"
        "from trivector.cli import main"
    )
    child.send_signal(signal.SIGINT)
    out, err = child.communicate(timeout=60)
    assert (child.returncode, out) == (130, b"")
    assert err == b"trivector: interrupted; nothing was written\n"


def test_an_interrupted_computation_says_so_in_one_line(
    run: Run, monkeypatch: pytest.MonkeyPatch
) -> None:
    def interrupt(*_: Any, **__: Any) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(Configuration, "examine", interrupt)
    assert run("examine", TWENTY) == (130, "", ["trivector: interrupted; nothing was written"])


@pytest.mark.parametrize("closed", ["stdin", "stdout"])
def test_a_closed_stream_is_one_line(
    capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch, closed: str
) -> None:
    monkeypatch.setattr(sys, closed, None)
    code = main(["examine", "-" if closed == "stdin" else TWENTY])
    err = capsys.readouterr().err.splitlines()
    assert (code, len(err)) == (2, 1)
    assert "closed" in err[0]


@pytest.mark.parametrize("form", [[], ["--json"]])
def test_a_full_disk_is_one_line_and_no_answer(form: list[str]) -> None:
    program = (
        "import io, os, sys\n"
        "from trivector.cli import main\n"
        "class Full(io.TextIOWrapper):\n"
        "    def write(self, text): raise OSError(28, os.strerror(28))\n"
        "sys.stdout = Full(sys.stdout.buffer)\n"
        f"sys.exit(main(['examine', {TWENTY!r}, *{form!r}]))\n"
    )
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, cwd=ROOT)
    assert (done.returncode, done.stdout) == (2, "")
    assert len(done.stderr.splitlines()) == 1
    assert "cannot be written" in done.stderr


def test_progress_is_written_only_to_a_terminal_and_not_when_quiet(
    capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    main(["examine", TWENTY])
    assert capsys.readouterr().err == ""
    monkeypatch.setattr(sys.stderr, "isatty", lambda: True)
    main(["examine", TWENTY])
    captured = capsys.readouterr()
    assert "degree 3" in captured.err
    assert "matrix" not in captured.out
    main(["examine", TWENTY, "--quiet"])
    assert capsys.readouterr().err == ""


# Damage


def run_quietly(*argv: str) -> tuple[int, str, str]:
    """As `run`, for property tests, which run many times within one test."""
    out, err = io.StringIO(), io.StringIO()
    with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        code = main(argv)
    return code, out.getvalue(), err.getvalue()


SIXTEEN = json.loads(Path(F7_SIXTEEN).read_text("utf-8"))["planes"]


@settings(max_examples=60, deadline=None)
@given(
    edits=st.lists(st.tuples(st.integers(0, 10**6), st.integers(-1, 127)), max_size=3),
    source=st.sampled_from([json.dumps(document(planes=SIXTEEN, field="F_7")), as_text(SIXTEEN)]),
    field=st.sampled_from([[], ["--field", "F_7"]]),
)
def test_a_damaged_document_gives_an_answer_or_lines_about_its_faults(
    tmp_path_factory: pytest.TempPathFactory,
    edits: list[tuple[int, int]],
    source: str,
    field: list[str],
) -> None:
    data = bytearray(source.encode())
    for place, byte in edits:
        index = place % len(data)
        data[index : index + 1] = b"" if byte < 0 else bytes([byte])
    path = tmp_path_factory.getbasetemp() / "damaged"
    path.write_bytes(bytes(data))
    limits = ["--max-degree", "3", "--max-columns", "300"]
    code, out, err = run_quietly("examine", str(path), "--json", *limits, *field)
    assert code in (0, 1, 2, 3)
    if code == 2:
        assert out == ""
        assert err.splitlines()
        assert all(line.startswith(f"trivector: {path}: ") for line in err.splitlines())
    else:
        assert err == ""
        assert json.loads(out)["kind"] == "examination"
