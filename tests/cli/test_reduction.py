"""``--field``: what is over ℚ or a number field is read over a finite field, by every verb."""

import json
from collections.abc import Callable
from pathlib import Path
from random import Random
from typing import Any

import pytest

from trivector import Configuration
from trivector.cli import main
from trivector.documents import document_text, to_document
from trivector.families import image, random_change, twenty_planes
from trivector.fields import QQ, field_from_spec
from trivector.fields.places import conversion

GAUSS = field_from_spec({"modulus": "x^2+1"})


@pytest.fixture
def answer(capsys: pytest.CaptureFixture[str]) -> Callable[..., tuple[int, Any]]:
    """Runs the command in this process: exit code, JSON on standard output."""

    def run_command(*argv: str) -> tuple[int, Any]:
        code = main([*argv, "--json"])
        captured = capsys.readouterr()
        assert captured.err == ""
        return code, json.loads(captured.out)

    return run_command


@pytest.fixture(params=[QQ, GAUSS], ids=["Q", "Gauss"])
def twenty(request: pytest.FixtureRequest, tmp_path: Path) -> str:
    """The twenty planes, moved by a matrix whose determinant is a unit at 3, 5 and 13."""
    field, rng = request.param, Random(1)
    while True:
        g = random_change(field, rng)
        det = field.matrix(g, 6).det()
        ways = [conversion(field, field_from_spec(name)) for name in ("F_9", "F_5", "F_13")]
        if all(way is not None and way.element(det) for way in ways):
            break
    planes = tuple(image(g, plane) for plane in twenty_planes(field))
    path = tmp_path / "twenty.json"
    path.write_text(document_text(to_document(Configuration(planes))), "utf-8")
    return str(path)


@pytest.mark.parametrize("field", ["F_5", "F_13", pytest.param("F_9", marks=pytest.mark.long)])
def test_every_verb_reduces(
    answer: Callable[..., tuple[int, Any]], twenty: str, field: str
) -> None:
    # The twenty planes are 20 in their section over F_3, F_5, F_7 (computed); the reductions at
    # these primes of the moved ones are moved ones, wherever det g is a unit.
    code, examined = answer("examine", twenty, "--field", field)
    spec = field_from_spec(field).to_spec()
    assert (code, examined["field"]) == (0, spec)
    assert (examined["distinct"], examined["span"]["lagrangian"]) == (20, True)
    assert examined["complete"] == {"over_base": True, "over_closure": True}
    code, section = answer("planes", twenty, "--field", field)
    assert (code, section["planes_over_base"]) == (0, 20)
    code, counted = answer("count", twenty, "--field", field, "--extensions", "2")
    assert (code, counted["counts"]) == (0, {"1": 20, "2": 20})
    code, made = answer("make", "lagrangian", "--through", twenty, "--field", field)
    assert (code, made["field"]) == (0, spec)
