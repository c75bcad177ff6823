"""The command ``trivector count``: over extensions, or modulo primes."""

import json
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import examples
import pytest
from commands import Run

from trivector.fields import prime_field

ROOT = Path(__file__).parents[2]
TWENTY = str(ROOT / "data" / "twenty-planes.json")


def write(path: Path, field: Any, basis: Sequence[Sequence[Any]]) -> str:
    path.write_text(json.dumps({"kind": "subspace", "field": field, "basis": basis}))
    return str(path)


def family(path: Path, position: int, field: Any) -> str:
    return write(path, field, examples.families()[position].basis)


def cyclic(path: Path, field: str) -> str:
    p = int(field[2:]) if field != "Q" else 101
    rows = examples.cyclic_lagrangian(prime_field(p)).to_entries()
    small = [[x if x <= p // 2 else x - p for x in row] for row in rows]
    return write(path, field, small)


def test_counts_over_extensions_have_the_agreed_keys(run: Run, tmp_path: Path) -> None:
    # The cyclic Lagrangian modulo 2: closed points of degrees 2, 10, 10 (computed).
    path = cyclic(tmp_path / "l.json", "F_2")
    code, out, err = run("count", path, "--extensions", "10", "--json")
    answer = json.loads(out)
    assert (code, err) == (0, [])
    assert answer["kind"] == "count"
    assert answer["field"] == "F_2"
    assert answer["counts"] == {
        str(j): {2: 2, 4: 2, 6: 2, 8: 2, 10: 22}.get(j, 0) for j in range(1, 11)
    }


def test_without_options_the_field_itself_is_meant(run: Run, tmp_path: Path) -> None:
    code, out, _ = run("count", family(tmp_path / "l.json", 3, "F_5"), "--json")
    assert (code, json.loads(out)["counts"]) == (0, {"1": (5 + 1) * (5**2 + 1)})  # classical


def test_an_infinite_family_over_extensions(run: Run, tmp_path: Path) -> None:
    path = family(tmp_path / "l.json", 4, "F_3")
    code, out, _ = run("count", path, "--extensions", "2", "--json")
    assert code == 0
    assert json.loads(out)["counts"] == {"1": 13, "2": 91}  # q²+q+1, classical
    words = run("count", path, "--extensions", "2")[1].splitlines()
    assert any("F_3" in line and line.endswith("13") for line in words)
    assert any("extension of degree 2" in line and line.endswith("91") for line in words)


def test_counts_modulo_primes_have_the_agreed_keys(run: Run, tmp_path: Path) -> None:
    # Bad primes below 43: 2 and 11; one plane modulo 11 (computed).
    path = cyclic(tmp_path / "l.json", "Q")
    code, out, err = run("count", path, "--primes", "3, 2,11,13", "--json")
    answer = json.loads(out)
    assert (code, err) == (0, [])
    assert (answer["kind"], answer["field"]) == ("count", "Q")
    assert answer["primes"] == {"3": 0, "2": 0, "11": 1, "13": 0}
    assert sorted(answer["bad_primes"]) == [2, 11]
    assert set(answer["why_bad"]) == {"2", "11"}
    text = run("count", path, "--primes", "3,2,11,13")[1]
    assert text.count("bad prime") == 2
    assert "modulo 11: 1" in text


def test_the_planes_of_a_configuration_are_counted(run: Run) -> None:
    # Exactly twenty planes meet all twenty, over F_3, F_5 and F_7 (computed).
    code, out, _ = run("count", TWENTY, "--primes", "3,5,7", "--json")
    answer = json.loads(out)
    assert (code, answer["primes"], answer["bad_primes"]) == (0, {"3": 20, "5": 20, "7": 20}, [])
    code, out, _ = run("count", TWENTY, "--field", "F_7", "--extensions", "3", "--json")
    assert json.loads(out)["counts"] == {"1": 20, "2": 20, "3": 20}


@pytest.mark.parametrize(
    ("options", "words"),
    [
        (["--primes", "3,x"], ["--primes", "x"]),
        (["--primes", ""], ["--primes"]),
        (["--primes", "3,,5"], ["--primes"]),
        (["--primes", "3;5"], ["--primes", "3;5"]),
        (["--primes", "-3"], ["--primes"]),
        (["--primes", "2.0"], ["--primes", "2.0"]),
        (["--primes", "³"], ["--primes"]),
        (["--primes", "4"], ["4 is not a prime", "2^2"]),
        (["--primes", "3,91"], ["91 is not a prime", "7·13"]),
        (["--primes", "0"], []),
        (["--primes", "1"], ["1 is not a prime"]),
        (["--primes", "9" * 50], ["2^63"]),
        (["--primes", "3", "--extensions", "2"], ["--primes", "--extensions"]),
        (["--extensions", "2"], ["Q"]),
        (["--extensions", "0"], ["positive"]),
        (["--extensions", "-1"], []),
        (["--extensions", "many"], ["positive"]),
        ([], ["--primes", "Q"]),
    ],
    ids=str,
)
def test_a_wrong_command_line_is_one_line(
    run: Run, tmp_path: Path, options: list[str], words: list[str]
) -> None:
    path = cyclic(tmp_path / "l.json", "Q")
    code, out, err = run("count", path, *options)
    assert (code, out, len(err)) == (2, "", 1)
    for word in words:
        assert word in err[0]


def test_primes_are_refused_for_data_over_a_finite_field(run: Run, tmp_path: Path) -> None:
    code, _, err = run("count", cyclic(tmp_path / "l.json", "F_7"), "--primes", "3")
    assert (code, len(err)) == (2, 1)
    assert "F_7" in err[0]


def test_an_extension_that_cannot_be_swept_is_named(run: Run, tmp_path: Path) -> None:
    path = family(tmp_path / "l.json", 3, "F_2")
    code, out, err = run("count", path, "--extensions", "11", "--max-points", str(10**12))
    assert (code, out, len(err)) == (2, "", 1)
    assert "extension degree 11" in err[0]
    assert "1024" in err[0]
    code, _, err = run("count", path, "--extensions", "4", "--max-points", "1000")
    assert (code, len(err)) == (2, 1)
    assert "extension degree 4" in err[0]


def test_a_field_too_large_to_sweep_is_refused(run: Run, tmp_path: Path) -> None:
    code, _, err = run("count", family(tmp_path / "l.json", 3, "F_1031"))
    assert (code, len(err)) == (2, 1)
    assert "1024" in err[0]


def test_two_jobs_count_the_same(run: Run, tmp_path: Path) -> None:
    path = family(tmp_path / "l.json", 3, "F_19")
    one, two = (run("count", path, "--json", "--jobs", jobs) for jobs in ("1", "2"))
    assert one == two
    assert json.loads(one[1])["counts"] == {"1": 20 * 362}  # (q+1)(q²+1), classical


def test_the_zero_space_is_counted(run: Run, tmp_path: Path) -> None:
    path = write(tmp_path / "l.json", "F_2", [[0] * 20])
    code, out, _ = run("count", path, "--extensions", "3", "--json")
    assert (code, json.loads(out)["counts"]) == (0, {"1": 0, "2": 0, "3": 0})


def test_the_answer_can_be_written_to_a_file(run: Run, tmp_path: Path) -> None:
    path, out = cyclic(tmp_path / "l.json", "F_2"), tmp_path / "out"
    _, text, _ = run("count", path, "--json")
    assert run("count", path, "--json", "-o", str(out)) == (0, "", [])
    assert out.read_text("utf-8") == text
