"""The commands ``trivector symmetries`` and ``trivector compare``."""

import json
from pathlib import Path
from random import Random
from typing import Any

import examples
from commands import Run

import trivector
from trivector.families.random_del_pezzo import random_del_pezzo
from trivector.fields import QQ, field_from_spec, prime_field
from trivector.subspaces import Plane

ROOT = Path(__file__).parents[2]
TWENTY = str(ROOT / "data" / "twenty-planes.json")
SEVEN = str(ROOT / "data" / "seven-planes-p6.json")
MOVED = str(ROOT / "data" / "twenty-one-moved.json")
SEVENTEEN = str(ROOT / "data" / "del-pezzo-seventeen.json")


def written(path: Path, kind: str, field: Any, payload: Any) -> str:
    key = {"planes": "planes", "subspace": "basis"}[kind]
    path.write_text(json.dumps({"kind": kind, "field": field, key: payload}), "utf-8")
    return str(path)


def check_map(data: dict[str, Any], first: str, second: str, field: Any = None) -> None:
    """The matrix and the permutation of an answer, followed from the JSON alone."""
    one, two = trivector.read(first, field=field), trivector.read(second, field=field)
    k = one.field
    matrix = [[k.element(x) for x in row] for row in data["matrix"]]
    for plane, image in zip(one.planes, data["permutation"], strict=True):
        assert examples.image(k, matrix, plane) == two.planes[image]


def test_the_answer_has_the_agreed_keys(run: Run) -> None:
    code, out, err = run("symmetries", TWENTY, "--json")
    data = json.loads(out)
    assert (code, err) == (0, [])
    assert data["order"] == 1920
    assert data["orbits"] == [list(range(20))]
    assert data["kernel"] == {"dimension": 0, "order": 1}
    assert data["stabilisers"] == [{"plane": 0, "order_on_planes": 96}]
    assert sorted(map(len, data["point_orbits"])) == [16, 30]
    assert data["exhaustive"] is True
    assert (data["scope"], data["limit"], data["seed"]) == ("Q", None, 0)
    assert len(data["generators"]) >= 2
    for generator in data["generators"]:
        assert set(generator) == {"permutation", "matrix"}
        check_map(generator, TWENTY, TWENTY)


def test_the_report_gives_order_orbits_and_generators(run: Run) -> None:
    code, out, _ = run("symmetries", TWENTY)
    lines = [" ".join(line.split()) for line in out.splitlines()]
    assert code == 0
    assert "order 1920" in lines
    assert "transitive yes, on the planes" in lines
    assert any(line.startswith("16 points on 5 planes each") for line in lines)
    assert any("| 0 0 0 0 -1 0 |" in line for line in lines)
    code, out, _ = run("symmetries", SEVEN)
    words = " ".join(out.split())
    assert "order infinite" in words
    assert "on the planes order 168" in words
    assert "a group of dimension 6" in words


def test_the_group_is_asked_over_another_field_and_with_planes_fixed(run: Run) -> None:
    _, out, _ = run("symmetries", SEVEN, "--field", "F_3", "--json", "--fixing", "0,1")
    data = json.loads(out)
    assert data["field"] == "F_3"
    assert data["order_on_planes"] == 4  # the stabiliser of two lines of the Fano plane
    assert data["order"] == 4 * 2**6


def test_semilinear_generators_name_their_power_of_frobenius(run: Run, tmp_path: Path) -> None:
    field = field_from_spec("F_9")
    planes = [plane.to_entries() for plane in examples.over(field, examples.twenty_planes()[:5])]
    path = written(tmp_path / "p.json", "planes", "F_9", planes)
    linear = json.loads(run("symmetries", path, "--json")[1])
    code, out, _ = run("symmetries", path, "--semilinear", "--json")
    data = json.loads(out)
    assert (code, data["semilinear"]) == (0, True)
    # Frobenius keeps each plane, so the group on the planes is the same.
    assert data["order_on_planes"] == linear["order_on_planes"]
    assert [g.get("frobenius") for g in data["generators"]].count(1) == 1
    assert "after x ↦ x^(3^1)" in run("symmetries", path, "--semilinear")[1]


def test_a_limit_is_exit_code_3(run: Run) -> None:
    code, out, _ = run("symmetries", TWENTY, "--max-steps", "10", "--json")
    data = json.loads(out)
    assert (code, data["order"], data["exhaustive"]) == (3, None, False)
    assert "10 partial images" in data["limit"]
    assert "undecided" in run("symmetries", TWENTY, "--max-steps", "10")[1]
    code, out, _ = run("compare", TWENTY, TWENTY, "--max-steps", "2", "--json")
    data = json.loads(out)
    assert (code, data["equivalent"], data["over_closure"]) == (3, None, None)


def test_a_subspace_has_the_symmetries_of_its_planes(run: Run, tmp_path: Path) -> None:
    span = trivector.read(TWENTY).span()
    path = written(tmp_path / "a.json", "subspace", "Q", span.to_entries())
    code, out, _ = run("symmetries", path, "--json")
    assert (code, json.loads(out)["order"]) == (0, 1920)
    family = examples.families()[3].basis
    path = written(tmp_path / "b.json", "subspace", "Q", family)
    code, out, err = run("symmetries", path)
    assert (code, out, len(err)) == (3, "", 1)
    assert "infinitely many planes" in err[0]


def test_equivalent_planes_are_compared_with_a_proof(run: Run, tmp_path: Path) -> None:
    rng = Random(1)
    g = examples.random_invertible(QQ, 6, rng)
    planes = [examples.image(QQ, g, plane) for plane in trivector.read(SEVENTEEN).planes]
    rng.shuffle(planes)
    path = written(tmp_path / "p.json", "planes", "Q", [p.to_entries() for p in planes])
    code, out, err = run("compare", SEVENTEEN, path, "--json")
    data = json.loads(out)
    assert (code, err) == (0, [])
    assert (data["equivalent"], data["over_closure"]) == (True, True)
    assert data["difference"] is None
    check_map(data, SEVENTEEN, path)
    lines = [" ".join(line.split()) for line in run("compare", SEVENTEEN, path)[1].splitlines()]
    assert "over Q yes" in lines
    assert "over the algebraic closure of Q yes" in lines


def test_planes_that_differ_are_told_apart_with_exit_code_1(run: Run) -> None:
    code, out, _ = run("compare", TWENTY, MOVED, "--json")
    data = json.loads(out)
    assert (code, data["equivalent"], data["over_closure"]) == (1, False, False)
    assert (data["matrix"], data["permutation"]) == (None, None)
    assert data["difference"] == (
        "pairs by dimension of the meet: {point: 190} and {point: 173, disjoint: 17}"
    )
    assert data["difference"] in run("compare", TWENTY, MOVED)[1]


def test_subspaces_are_compared(run: Run, tmp_path: Path) -> None:
    field, rng = prime_field(7), Random(2)
    span = trivector.read(TWENTY, field="F_7").span()
    other = examples.image_of_space(field, examples.random_invertible(field, 6, rng), span)
    one = written(tmp_path / "a.json", "subspace", "F_7", span.to_entries())
    two = written(tmp_path / "b.json", "subspace", "F_7", other.to_entries())
    code, out, _ = run("compare", one, two, "--json")
    data = json.loads(out)
    assert (code, data["equivalent"]) == (0, True)
    matrix = [[field.element(x) for x in row] for row in data["matrix"]]
    assert examples.image_of_space(field, matrix, span) == other
    assert all(isinstance(p, Plane) for p in trivector.read(TWENTY).planes)


def test_what_makes_no_sense_is_one_line_and_exit_code_2(run: Run, tmp_path: Path) -> None:
    space = written(tmp_path / "l.json", "subspace", "Q", [[1] * 20])
    other = written(tmp_path / "m.json", "subspace", "Q", [[1] * 19 + [2]])
    for argv, word in (
        (["symmetries", TWENTY, "--semilinear"], "finite field"),
        (["symmetries", TWENTY, "--fixing", "20"], "plane 20"),
        (["symmetries", TWENTY, "--fixing", "a"], "'a'"),
        (["symmetries", space, "--fixing", "0"], "--fixing"),
        (["symmetries", TWENTY, "--max-steps", "0"], "positive"),
        (["compare", TWENTY, SEVEN], "n = 7"),
        (["compare", TWENTY, space], "two documents"),
        (["compare", "-", "-"], "standard input"),
        (["compare", space, other, "--semilinear"], "finite field"),
        (["compare", TWENTY], "FILE"),
    ):
        code, out, err = run(*argv)
        assert (code, out, len(err)) == (2, "", 1), argv
        assert word in err[0]


def test_symmetries_are_certified_and_rechecked(tmp_path: Path, run: Run) -> None:
    file = str(tmp_path / "symmetries.json")
    for document, options in ((TWENTY, ()), (TWENTY, ("--field", "F_9", "--semilinear"))):
        code, out, _ = run("symmetries", document, *options, "--json", "--certificate", file)
        generators = json.loads(out)["generators"]
        assert code == 0
        code, out, _ = run("recheck", file, "--json")
        answer = json.loads(out)
        assert (code, answer["holds"]) == (0, True)
        names = [claim["claim"] for claim in answer["claims"]]
        assert names == ["span"] + ["collineation"] * len(generators)
        assert "generate all collineations" in answer["uncertified"][0]


def test_the_planes_over_an_extension_are_certified_for_a_subspace(
    tmp_path: Path, run: Run
) -> None:
    # A curve with one pair of conjugate nodes: seventeen planes, two of them over F_25 only.
    found = random_del_pezzo(prime_field(5), 17, Random(0))
    assert [plane.degree for plane in found.closed] == [2]
    basis = [[found.field.format(x) for x in row] for row in found.span.rows]
    space, file = written(tmp_path / "space.json", "subspace", "F_5", basis), tmp_path / "c.json"
    code, out, _ = run("symmetries", space, "--json", "--certificate", str(file))
    data = json.loads(out)
    assert (code, data["planes"]) == (0, 17)
    code, out, _ = run("recheck", str(file), "--json")
    answer = json.loads(out)
    assert (code, answer["holds"]) == (0, True)
    assert answer["field"]["characteristic"] == 5
    assert len(answer["field"]["modulus"]) == 3
    assert len(answer["claims"]) == 1 + len(data["generators"]) > 1
    assert any("the space over F_5" in text for text in answer["uncertified"])


def test_a_group_that_is_not_proved_to_be_all_is_not_called_all(tmp_path: Path, run: Run) -> None:
    file = str(tmp_path / "certificate.json")
    code, _, _ = run("symmetries", TWENTY, "--max-steps", "5", "--certificate", file)
    assert code == 3
    code, out, _ = run("recheck", file, "--json")
    assert code == 0
    (reason,) = json.loads(out)["uncertified"]
    assert reason == "there may be more collineations: 5 partial images were tried"


def test_an_equivalence_is_certified_and_a_difference_is_not(tmp_path: Path, run: Run) -> None:
    file, field = str(tmp_path / "certificate.json"), prime_field(7)
    twenty = trivector.read(TWENTY, field=field)
    g = examples.random_invertible(field, 6, Random(3))
    planes = [examples.image(field, g, p).to_entries() for p in twenty.planes]
    image = written(tmp_path / "image.json", "planes", "F_7", planes)
    code, _, _ = run("compare", TWENTY, image, "--field", "F_7", "--certificate", file)
    assert code == 0
    code, out, _ = run("recheck", file)
    assert code == 0
    assert "collineation  holds" in out
    code, _, _ = run("compare", TWENTY, SEVENTEEN, "--certificate", file)
    assert code == 1
    code, out, _ = run("recheck", file, "--json")
    answer = json.loads(out)
    assert [claim["claim"] for claim in answer["claims"]] == ["span"]
    assert answer["uncertified"] == ["not equivalent: number of planes: 20 and 17"]
