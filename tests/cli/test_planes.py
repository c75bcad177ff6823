"""The command ``trivector planes``: every plane in a subspace, as a table, JSON or a stream."""

import json
import os
import signal
import subprocess
import sys
import time
from collections.abc import Sequence
from math import comb
from pathlib import Path
from random import Random
from typing import Any

import examples
import oracle
import pytest
from commands import Run

from trivector.fields import QQ, field_from_spec, prime_field
from trivector.subspaces import Plane, Subspace

ROOT = Path(__file__).parents[2]
DATA = ROOT / "data"
TWENTY = str(DATA / "twenty-planes.json")
MINUS_THREE = str(DATA / "twenty-minus-three.json")


def write(path: Path, field: Any, basis: Sequence[Sequence[Any]], **keys: Any) -> str:
    path.write_text(json.dumps({"kind": "subspace", "field": field, "basis": basis, **keys}))
    return str(path)


def family(path: Path, position: int, field: Any) -> str:
    """One of the six infinite families, by the basis of its Lagrangian."""
    return write(path, field, examples.families()[position].basis)


def span_of_twenty(path: Path, field: Any = "Q", *, rows: int = 20) -> str:
    planes = examples.over(QQ, examples.twenty_planes())
    basis = [[int(x) for x in plane.plucker] for plane in planes][:rows]
    return write(path, field, basis)


KEYS = {
    # formats.md
    "kind",
    "field",
    "dimension",
    "subspace",
    "projective_dimension",
    "degree",
    "hilbert_function",
    "reduced",
    "closed_points",
    "planes_over_base",
    "planes_over_closure",
    "planes",
}


def sorted_as_agreed(planes: list[list[list[int]]]) -> list[list[list[int]]]:
    """By pivot columns, then entries."""
    return sorted(
        planes, key=lambda rows: ([next(j for j, x in enumerate(r) if x) for r in rows], rows)
    )


def test_the_planes_of_a_finite_section_over_the_rationals(run: Run, tmp_path: Path) -> None:
    # Twenty planes: computed (checks.md).
    code, out, err = run("planes", span_of_twenty(tmp_path / "l.json"), "--json")
    answer = json.loads(out)
    assert (code, err) == (0, [])
    assert set(answer) >= KEYS
    assert (answer["kind"], answer["field"], answer["dimension"]) == ("section", "Q", 6)
    assert answer["subspace"] == {"dimension": 10, "isotropic": True, "lagrangian": True}
    assert answer["projective_dimension"] == 0
    assert answer["degree"] == 20
    assert answer["hilbert_function"] == [1, 10, 20, 20]
    assert answer["reduced"] is True
    assert answer["planes_over_base"] == answer["planes_over_closure"] == 20
    assert len(answer["closed_points"]) == 20
    for point in answer["closed_points"]:
        assert set(point) >= {"degree", "multiplicity", "residue_field", "plane"}
        assert (point["degree"], point["multiplicity"], point["residue_field"]) == (1, 1, "Q")
    found = {Plane.from_rows(QQ, rows) for rows in answer["planes"]}
    assert found == set(examples.over(QQ, examples.twenty_planes()))
    assert answer["planes"] == sorted_as_agreed(answer["planes"])
    for rows in answer["planes"]:  # reduced row echelon form
        assert Plane.from_rows(QQ, rows).to_entries() == rows


def test_the_table_names_the_fields_and_lists_the_planes(run: Run, tmp_path: Path) -> None:
    code, out, _ = run("planes", span_of_twenty(tmp_path / "l.json"))
    words = " ".join(out.split())
    assert code == 0
    for part in ("degree 20", "Lagrangian yes", "1, 10, 20, 20"):
        assert part in words
    assert out.count("\n") > 20
    assert "[1, 1, 0, 0, 0, 0]" in out or "1 1 0 0 0 0" in words


def test_the_planes_that_meet_all_planes_of_a_configuration(run: Run) -> None:
    # Seventeen of the twenty: the three others are found with them (computed).
    code, out, _ = run("planes", MINUS_THREE, "--json")
    answer = json.loads(out)
    assert code == 0
    assert answer["planes_over_closure"] == 20
    assert {Plane.from_rows(QQ, rows) for rows in answer["planes"]} == set(
        examples.over(QQ, examples.twenty_planes())
    )
    assert "meet all planes" in answer["title"]


def test_a_reduced_document_is_over_the_field_that_was_asked_for(run: Run) -> None:
    code, out, _ = run("planes", TWENTY, "--field", "F_7", "--json")
    answer = json.loads(out)
    assert (code, answer["field"], answer["planes_over_base"]) == (0, "F_7", 20)
    code, out, _ = run("planes", TWENTY, "--field", "F_9", "--json")
    answer = json.loads(out)
    assert (code, answer["planes_over_base"]) == (0, 20)
    assert answer["field"] == {"characteristic": 3, "modulus": "x^2+2*x+2"}  # Conway


def test_points_of_higher_degree_are_written_with_their_residue_fields(
    run: Run, tmp_path: Path
) -> None:
    # The cyclic Lagrangian modulo 2: degrees 2, 10, 10 (computed).
    basis = examples.cyclic_lagrangian(prime_field(2)).to_entries()
    code, out, _ = run("planes", write(tmp_path / "l.json", "F_2", basis), "--json")
    answer = json.loads(out)
    assert code == 0
    assert [point["degree"] for point in answer["closed_points"]] == [2, 10, 10]
    assert (answer["planes"], answer["planes_over_base"]) == ([], 0)
    assert answer["planes_over_closure"] == 22
    for point in answer["closed_points"]:
        field: Any = field_from_spec(point["residue_field"])
        assert field.order == 2 ** point["degree"]
        plane = Plane.from_rows(field, point["plane"])
        space = Subspace.span(field, 6, basis)
        assert space.contains(plane.plucker)


def test_a_multiplicity_is_written(run: Run, tmp_path: Path) -> None:
    basis = examples.cyclic_lagrangian(prime_field(11)).to_entries()
    code, out, _ = run("planes", write(tmp_path / "l.json", "F_11", basis), "--json")
    answer = json.loads(out)
    assert code == 0
    assert [(p["degree"], p["multiplicity"]) for p in answer["closed_points"]] == [(1, 22)]
    assert answer["reduced"] is False
    assert answer["degree"] == 22
    assert answer["planes_over_closure"] == 1


@pytest.mark.parametrize("to_file", [False, True])
def test_an_infinite_section_over_a_finite_field_is_listed(
    run: Run, tmp_path: Path, to_file: bool
) -> None:
    # Planes of one ruling of a quadric, (q+1)(q²+1) of them; all planes of L by brute force.
    path, out = family(tmp_path / "l.json", 3, "F_3"), tmp_path / "out.json"
    code, text, err = run("planes", path, "--json", *(["-o", str(out)] if to_file else []))
    assert (code, err) == (0, [])
    if to_file:
        assert text == ""
        text = out.read_text("utf-8")
    answer = json.loads(text)
    assert answer["planes_over_base"] == len(answer["planes"]) == 40
    assert answer["planes"] == sorted_as_agreed(answer["planes"])
    orthogonal = examples.families()[3].lagrangian(prime_field(3))
    expected = examples.planes_pairing_to_zero(3, orthogonal.rows)  # L is its own orthogonal
    assert {tuple(map(tuple, rows)) for rows in answer["planes"]} == set(expected)
    assert answer["closed_points"] is None
    assert answer["planes_over_closure"] is None
    assert (answer["projective_dimension"], answer["degree"]) == (3, 8)
    assert answer["interrupted"] is False


def test_a_table_of_an_infinite_section_to_a_file_is_that_on_standard_output(
    run: Run, tmp_path: Path
) -> None:
    path, out = family(tmp_path / "l.json", 4, "F_5"), tmp_path / "out.txt"
    _, text, _ = run("planes", path)
    assert run("planes", path, "-o", str(out)) == (0, "", [])
    assert out.read_text("utf-8") == text


def test_an_infinite_section_over_the_rationals_is_answered_without_a_list(
    run: Run, tmp_path: Path
) -> None:
    code, out, err = run("planes", family(tmp_path / "l.json", 3, "Q"), "--json")
    answer = json.loads(out)
    assert (code, err) == (0, [])
    assert (answer["projective_dimension"], answer["degree"]) == (3, 8)
    assert answer["hilbert_function"] == [comb(2 * d + 3, 3) for d in range(6)]
    assert answer["planes"] is None
    assert answer["planes_over_base"] is None
    assert answer["planes_over_closure"] is None
    assert answer["closed_points"] is None


@pytest.mark.parametrize("field", ["Q", "F_2", "F_7", "F_9"])
def test_the_zero_space_has_no_planes(run: Run, tmp_path: Path, field: str) -> None:
    path = write(tmp_path / "l.json", field, [[0] * 20])
    code, out, _ = run("planes", path, "--json")
    answer = json.loads(out)
    assert code == 0
    assert answer["subspace"]["dimension"] == 0
    assert (answer["planes"], answer["planes_over_base"]) == ([], 0)
    assert (answer["projective_dimension"], answer["degree"]) == (-1, 0)
    assert answer["dependent_rows"] == [0]


@pytest.mark.parametrize("field", ["Q", "F_2", "F_7"])
def test_the_whole_grassmannian_is_described_and_not_listed(
    run: Run, tmp_path: Path, field: str
) -> None:
    # G(3,6): dimension 9, degree 42, H = 1, 20, 175, 980 (classical).
    unit = [[int(i == j) for j in range(20)] for i in range(20)]
    path = write(tmp_path / "l.json", field, unit)
    code, out, err = run("planes", path, "--json")
    answer = json.loads(out)
    assert (code, err) == (0, [])
    assert (answer["projective_dimension"], answer["degree"]) == (9, 42)
    assert answer["hilbert_function"][:4] == [1, 20, 175, 980]
    assert answer["planes"] is None
    assert answer["planes_over_base"] is None
    code, out, _ = run("planes", path)
    assert code == 0
    assert len(out.splitlines()) < 40


def test_dependent_rows_are_reported_and_dropped(run: Run, tmp_path: Path) -> None:
    rows = [examples.trivector_row({triple: 1}) for triple in ((0, 1, 2), (3, 4, 5))]
    both = [x + y for x, y in zip(*rows, strict=True)]
    path = write(tmp_path / "l.json", "F_7", [rows[0], [0] * 20, rows[1], both])
    code, out, _ = run("planes", path, "--json")
    answer = json.loads(out)
    assert code == 0
    assert answer["dependent_rows"] == [1, 3]
    assert answer["subspace"]["dimension"] == 2
    assert answer["planes_over_base"] == 2
    words = " ".join(run("planes", path)[1].split())
    assert "dependent" in words or "depend" in words


def test_a_field_too_large_to_sweep_is_refused_in_one_line(run: Run, tmp_path: Path) -> None:
    for name, limit in (("F_1031", "1024"), ("F_2147483647", "1024")):
        code, out, err = run("planes", family(tmp_path / "l.json", 3, name))
        assert (code, len(err), out) == (2, 1, "")
        assert limit in err[0]


def test_too_many_points_are_refused_with_an_estimate(run: Run, tmp_path: Path) -> None:
    path = family(tmp_path / "l.json", 3, "F_101")
    code, out, err = run("planes", path, "--max-points", "1000")
    assert (code, len(err), out) == (2, 1, "")
    assert "1040604" in err[0].replace(",", "")
    assert "1000" in err[0].replace(",", "")


def test_a_limit_leaves_the_answer_undecided(run: Run, tmp_path: Path) -> None:
    path = span_of_twenty(tmp_path / "l.json")
    code, out, _ = run("planes", path, "--max-degree", "2", "--json")
    answer = json.loads(out)
    assert code == 3
    assert answer["planes"] is None
    assert answer["degree"] is None
    assert "degree 2" in answer["limit"]


@pytest.mark.parametrize(
    ("content", "words"),
    [
        ('{"kind": "subspace", "field": "F_6", "basis": [[1]]}', ["F_6", "2·3"]),
        ('{"kind": "subspace", "field": "Q", "basis": [[1, 2]]}', ["basis[0]", "20"]),
        (
            '{"kind": "subspace", "field": {"modulus": "x^2-1"}, "basis": [[1]]}',
            ["reducible over Q", "(x-1)"],
        ),
        ('{"kind": "subspace", "field": {"modulus": ["x^2+1"]}, "basis": [[1]]}', ["modulus"]),
        ('{"kind": "subspace", "field": "F_131072", "basis": [[1]]}', ["65536"]),
        ('{"kind": "trivectors", "field": "Q", "trivectors": [[1]]}', []),
        ("nonsense", []),
    ],
)
def test_bad_input_is_one_line_and_exit_code_2(
    run: Run, tmp_path: Path, content: str, words: list[str]
) -> None:
    path = tmp_path / "bad.json"
    path.write_text(content, "utf-8")
    code, out, err = run("planes", str(path))
    assert (code, out) == (2, "")
    assert err
    for word in words:
        assert word in err[0]


def test_an_output_that_cannot_be_written_is_a_fault(run: Run, tmp_path: Path) -> None:
    path = span_of_twenty(tmp_path / "l.json", "F_7")
    code, _, err = run("planes", path, "-o", str(tmp_path / "no" / "where.json"))
    assert (code, len(err)) == (2, 1)


@pytest.mark.parametrize("jobs", ["0", "-1", "two"])
def test_jobs_must_be_a_positive_number(run: Run, jobs: str) -> None:
    code, _, err = run("planes", TWENTY, "--jobs", jobs)
    assert (code, len(err)) == (2, 1)


@pytest.mark.parametrize("form", [[], ["--json"]])
def test_two_jobs_write_the_same_bytes_as_one(run: Run, tmp_path: Path, form: list[str]) -> None:
    path = family(tmp_path / "l.json", 3, "F_19")
    first, second = tmp_path / "one", tmp_path / "two"
    assert run("planes", path, *form, "-o", str(first))[0] == 0
    assert run("planes", path, *form, "-o", str(second), "--jobs", "2")[0] == 0
    assert first.read_bytes() == second.read_bytes()
    assert len(first.read_text("utf-8").splitlines()) > 7240  # (q+1)(q²+1) planes, a line each


def test_random_spaces_over_f2_and_f3_are_listed_as_brute_force_does(
    run: Run, tmp_path: Path
) -> None:
    rng = Random(6)
    for q in (2, 3):
        field = prime_field(q)
        for dimension in (7, 10):
            space = examples.random_subspace(field, 6, dimension, rng)
            path = write(tmp_path / "l.json", f"F_{q}", space.to_entries())
            _, out, _ = run("planes", path, "--json")
            answer = json.loads(out)
            expected = examples.planes_pairing_to_zero(q, space.orthogonal().rows)
            assert answer["planes"] == sorted_as_agreed([[list(r) for r in p] for p in expected])


def test_the_seed_is_echoed(run: Run) -> None:
    assert json.loads(run("planes", TWENTY, "--json", "--seed", "5")[1])["seed"] == 5


# A process started in the background of a shell ignores SIGINT unless it is told not to.
LISTENING = """
import signal, sys
signal.signal(signal.SIGINT, signal.default_int_handler)
from trivector.cli import main
sys.exit(main(sys.argv[1:]))
"""


@pytest.mark.skipif(os.name == "nt", reason="sends SIGINT to a process")
@pytest.mark.parametrize("form", [["--json"], []])
def test_an_interrupt_leaves_what_was_found_on_disk(tmp_path: Path, form: list[str]) -> None:
    # Planes through a point over F_401: 10^15 of them, days of work.
    path, out = family(tmp_path / "l.json", 0, "F_401"), tmp_path / "out"
    child = subprocess.Popen(
        [sys.executable, "-c", LISTENING, "planes", path, *form, "-o", str(out)],
        stderr=subprocess.PIPE,
        stdout=subprocess.PIPE,
        text=True,
        encoding="utf-8",
        cwd=ROOT,
    )
    try:
        deadline = time.monotonic() + 120
        while not (out.exists() and out.stat().st_size > 20_000):
            assert child.poll() is None
            assert time.monotonic() < deadline
            time.sleep(0.05)
        child.send_signal(signal.SIGINT)
        text, err = child.communicate(timeout=60)
    finally:
        child.kill()
    assert (child.returncode, text) == (130, "")
    assert len(err.splitlines()) == 1
    assert "interrupted after" in err
    assert str(out) in err
    content = out.read_text("utf-8")
    if not form:
        assert "interrupted" in content.splitlines()[-1]
        return
    answer = json.loads(content)
    assert answer["interrupted"] is True
    assert answer["planes_over_base"] is None
    assert len(answer["planes"]) > 10
    assert f"{len(answer['planes'])} planes" in err
    assert 0 <= answer["swept"]["done"] < answer["swept"]["total"]
    q = 401
    for rows in answer["planes"][:20]:  # they are planes through e0: rows of rank 3 with e0
        assert oracle.rank([*rows, [1, 0, 0, 0, 0, 0]], q) == 3
    assert len({json.dumps(rows) for rows in answer["planes"]}) == len(answer["planes"])
