"""Every entry of the atlas: random images are recognised, other entries told apart."""

from itertools import combinations
from pathlib import Path
from random import Random

import examples
import pytest

import trivector
from trivector.configurations import Configuration
from trivector.subspaces import Subspace
from trivector.symmetry import Comparison, compare_configurations, compare_subspaces

ATLAS = Path(__file__).parents[2] / "data" / "atlas"
NAMES = sorted(path.stem for path in ATLAS.glob("*.json"))


def entry(name: str) -> Configuration | Subspace:
    found = trivector.read(ATLAS / f"{name}.json")
    assert isinstance(found, Configuration | Subspace)
    return found


def compare(first: Configuration | Subspace, second: Configuration | Subspace) -> Comparison:
    if isinstance(first, Configuration) and isinstance(second, Configuration):
        return compare_configurations(first, second)
    spaces = [x if isinstance(x, Subspace) else x.span() for x in (first, second)]
    return compare_subspaces(*spaces)


def check_images(name: str, count: int) -> None:
    found, rng = entry(name), Random(name)
    for _ in range(count):
        g = examples.random_invertible(found.field, found.n, rng)
        if isinstance(found, Subspace):
            image = examples.image_of_space(found.field, g, found)
            answer = compare_subspaces(found, image)
            assert (answer.equivalent, answer.over_closure, answer.exit_code) == (True, True, 0)
            assert answer.collineation is not None
            matrix = answer.collineation.matrix
            assert examples.image_of_space(found.field, matrix, found) == image
            continue
        planes = [examples.image(found.field, g, plane) for plane in found.planes]
        rng.shuffle(planes)
        answer = compare_configurations(found, Configuration(tuple(planes)))
        assert (answer.equivalent, answer.over_closure, answer.exit_code) == (True, True, 0)
        assert answer.collineation is not None
        assert found.field.matrix(answer.collineation.matrix, found.n).det()
        for plane, target in zip(found.planes, answer.collineation.permutation, strict=True):
            matrix = answer.collineation.matrix
            assert examples.image(found.field, matrix, plane) == planes[target]
        assert sorted(answer.collineation.permutation) == list(range(len(planes)))


@pytest.mark.parametrize("name", NAMES)
def test_random_images_of_an_entry_are_recognised(name: str) -> None:
    check_images(name, 3 if isinstance(entry(name), Configuration) else 1)


@pytest.mark.long
@pytest.mark.parametrize("name", NAMES)
def test_a_hundred_random_images_of_an_entry_are_recognised(name: str) -> None:
    check_images(name, 100)


def test_entries_over_one_field_are_told_apart_with_the_reason() -> None:
    entries = [(name, entry(name)) for name in NAMES]
    compared = 0
    for (_, first), (_, second) in combinations(entries, 2):
        if first.field != second.field or not isinstance(first, Configuration):
            continue
        if not isinstance(second, Configuration):
            continue
        answer = compare(first, second)
        counts = len(first.planes), len(second.planes)
        assert (answer.equivalent, answer.over_closure, answer.exit_code) == (False, False, 1)
        if counts[0] != counts[1]:
            assert answer.difference == f"number of planes: {counts[0]} and {counts[1]}"
        else:
            assert answer.difference
        compared += 1
    assert compared >= 55


def test_parts_of_entries_with_equally_many_planes_are_told_apart_by_structure() -> None:
    # Ten planes of each entry over Q; the reason is how they meet, not how many they are.
    parts = []
    for name in NAMES:
        found = entry(name)
        if isinstance(found, Configuration) and found.field == trivector.QQ:
            parts.append(Configuration(found.planes[:10]))
    reasons = set()
    for first, second in combinations(parts, 2):
        answer = compare(first, second)
        if answer.equivalent is False:
            assert answer.difference
            reasons.add(answer.difference.split(":")[0])
        else:
            assert answer.equivalent is True
    assert len(reasons) >= 2
