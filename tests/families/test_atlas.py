"""Every document of the atlas: made from its recipe, complete, with a certificate that holds."""

import json
from pathlib import Path
from random import Random

import pytest

import trivector
from trivector.certificates import certify_examination, checker
from trivector.configurations import Configuration
from trivector.errors import UsageError
from trivector.families.atlas import RECIPES, Recipe, atlas_example
from trivector.families.del_pezzo import del_pezzo_configuration
from trivector.fields import QQ
from trivector.reports.atlas import (
    TEN_PLANES,
    atlas_index,
    document_of,
    index_row,
    main,
    ten_planes,
)

ATLAS = Path(__file__).parents[2] / "data" / "atlas"

# The shortest over ℚ, the longest, and one over a finite field in the ordinary tests.
SLICE = ("length-11-over-q.json", "length-20-over-q.json", "length-16-over-f7.json")


def recipes(*, all_of_them: bool) -> list[Recipe]:
    return [r for r in RECIPES if all_of_them or r.file_name in SLICE]


def check(recipe: Recipe) -> None:
    path = ATLAS / recipe.file_name
    assert path.read_text(encoding="utf-8") == document_of(atlas_example(recipe))
    configuration = trivector.read(path)
    assert isinstance(configuration, Configuration)
    assert len(configuration.planes) == recipe.length
    examination = configuration.examine()
    assert examination.pairwise_incident
    assert examination.pairs.point == recipe.length * (recipe.length - 1) // 2
    assert examination.lagrangian is True
    assert examination.complete_over_closure is True
    # Computed for 16 … 20 over ℚ: H = 1, 10, 20, k, k.
    hilbert = examination.section.hilbert_function
    assert hilbert is not None
    assert hilbert[:4] == (1, 10, 20, recipe.length)
    certificate = checker.load(json.dumps(certify_examination(examination)))
    verdicts = list(checker.Check(certificate).run())
    assert all(verdict for _, verdict, _ in verdicts)
    assert "complete" in [name for name, _, _ in verdicts]


@pytest.mark.parametrize("recipe", recipes(all_of_them=False), ids=lambda r: r.file_name)
def test_an_entry_is_complete_and_its_certificate_holds(recipe: Recipe) -> None:
    check(recipe)


@pytest.mark.long
@pytest.mark.parametrize("recipe", recipes(all_of_them=True), ids=lambda r: r.file_name)
def test_every_entry_is_complete_and_its_certificate_holds(recipe: Recipe) -> None:
    check(recipe)


def test_every_length_from_11_to_20_stands_over_q_with_all_planes_rational() -> None:
    # The construction: "On Morin configurations of higher length", 2019, arXiv 1903.07480; the
    # curves whose nodes are all rational were found here, by search.
    assert {r.length for r in RECIPES if r.field_name == "Q"} == set(range(11, 21))
    assert {r.length for r in RECIPES if r.field_name != "Q"} == set(range(11, 21))
    names = [*(r.file_name for r in RECIPES), TEN_PLANES]
    assert sorted(names) == sorted(p.name for p in ATLAS.glob("*.json"))


@pytest.mark.long
def test_the_ten_planes_are_made_again_from_their_seed() -> None:
    assert (ATLAS / TEN_PLANES).read_text(encoding="utf-8") == document_of(ten_planes())


def test_the_ten_planes_are_complete_and_their_certificate_holds() -> None:
    # Every length from 10 on occurs (memory: arXiv 1903.07480); this one is in general position.
    examination = trivector.read(ATLAS / TEN_PLANES).examine()
    assert len(examination.planes) == 10
    assert examination.pairs.point == 45
    assert examination.lagrangian is True
    assert examination.complete_over_closure is True
    assert examination.section.hilbert_function[:5] == (1, 10, 20, 10, 10)
    certificate = checker.load(json.dumps(certify_examination(examination)))
    assert all(verdict for _, verdict, _ in checker.Check(certificate).run())


@pytest.mark.parametrize("recipe", recipes(all_of_them=True), ids=lambda r: r.file_name)
def test_entries_over_q_are_short(recipe: Recipe) -> None:
    document = json.loads((ATLAS / recipe.file_name).read_text(encoding="utf-8"))
    entries = [x for plane in document["planes"] for row in plane for x in row]
    assert all(len(str(entry)) <= 5 for entry in entries)
    assert document["source"].startswith("constructed here: ")
    assert recipe.curve in document["source"]


def test_the_index_is_current() -> None:
    text = (ATLAS / "README.md").read_text(encoding="utf-8")
    assert text == atlas_index(ATLAS)
    assert text.count("\n| [`length-") == len(RECIPES) + 1


def test_the_index_refuses_what_is_not_complete(tmp_path: Path) -> None:
    document = json.loads((ATLAS / "length-16-over-f7.json").read_text(encoding="utf-8"))
    document["planes"] = document["planes"][:-1]
    document["labels"] = document["labels"][:-1]
    path = tmp_path / "fifteen.json"
    path.write_text(json.dumps(document), encoding="utf-8")
    with pytest.raises(UsageError, match="not proved complete"):
        index_row(path)


def test_an_entry_with_conjugate_planes_is_a_lagrangian(tmp_path: Path) -> None:
    curve = "2*x^2-3*x*y+2*x*z-y*z; 3*x*y+2*x*z-2*y^2-3*y*z; 2*x*y+3*x*z+3*y*z+2*z^2"
    recipe = Recipe("Q", 13, curve)
    assert del_pezzo_configuration(QQ, curve, rng=Random(1)).closed
    path = tmp_path / recipe.file_name
    path.write_text(document_of(atlas_example(recipe)), encoding="utf-8")
    key, row = index_row(path)
    assert key[1] == -13
    assert "| 13 |" in row


def test_the_command_explains_itself(capsys: pytest.CaptureFixture[str]) -> None:
    assert main([]) == 2
    assert "usage: " in capsys.readouterr().err
