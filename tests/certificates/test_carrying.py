"""Certificates of collineations: accepted when true, rejected after false changes."""

import json
from pathlib import Path
from random import Random
from typing import Any

import examples
import pytest
from forging import Certificate, accepted, changed_once, is_true, sealed, why_rejected

import trivector
from trivector import Configuration, Subspace, prime_field
from trivector.certificates import certify_collineations
from trivector.errors import MixedFieldsError, UsageError
from trivector.families import twenty_two_planes
from trivector.fields import QQ, Field, field_from_spec
from trivector.symmetry import Collineation, collineations

DATA = Path(__file__).parents[2] / "data"
FIELDS = ["Q", "F_3", "F_7", "F_9", "F_2305843009213693951", {"modulus": "x^2+1"}]
QQ_IDENTITY = tuple(tuple(QQ.element(int(i == j)) for j in range(6)) for i in range(6))


def moved(field: Field, source: Any, rng: Random) -> tuple[Any, Collineation]:
    """The image under a random g, the planes shuffled, and how they got there."""
    n = source.n
    g = examples.random_invertible(field, n, rng)
    matrix = tuple(map(tuple, g))
    if isinstance(source, Subspace):
        return examples.image_of_space(field, g, source), Collineation((), matrix)
    order = list(range(len(source.planes)))
    rng.shuffle(order)
    planes = [examples.image(field, g, p) for p in source.planes]
    target = [planes[order.index(i)] for i in range(len(planes))]
    return Configuration(tuple(target)), Collineation(tuple(order), matrix)


@pytest.mark.parametrize("spec", FIELDS, ids=str)
def test_an_equivalence_is_accepted_over_every_field(spec: Any) -> None:
    field, rng = field_from_spec(spec), Random(4)
    twenty = Configuration(tuple(examples.over(field, examples.twenty_planes())))
    for source in (twenty, twenty.span(), examples.random_subspace(field, 6, 3, rng)):
        target, found = moved(field, source, rng)
        made = certify_collineations(source, [found], target=target)
        assert accepted(json.loads(json.dumps(made)))
        assert is_true(made)
        others = certify_collineations(source, [found])
        assert not accepted(others)
        assert "elsewhere" in why_rejected(others)


def test_generators_of_known_groups_are_accepted() -> None:
    seven = trivector.read(DATA / "seven-planes-p6.json")
    semilinear = collineations(
        Configuration(twenty_two_planes(field_from_spec("F_4"))), semilinear=True
    )
    assert any(g.frobenius for g in semilinear.generators)
    for group in (collineations(seven), semilinear):
        made = certify_collineations(group.configuration, group.generators)
        assert len(made["claims"]) == 1 + len(group.generators)
        assert accepted(made)
        assert is_true(made)


def test_a_frobenius_left_out_or_added_is_noticed() -> None:
    field, rng = field_from_spec("F_9"), Random(6)
    planes = [examples.random_plane(field, 6, rng) for _ in range(3)]
    source = Configuration(tuple(planes))
    powers = [[[x**3 for x in row] for row in p.rows] for p in planes]
    g = examples.random_invertible(field, 6, rng)
    images = [trivector.Plane.from_rows(field, rows) for rows in powers]
    target = Configuration(tuple(examples.image(field, g, p) for p in images))
    found = Collineation((0, 1, 2), tuple(map(tuple, g)), frobenius=1)
    made = certify_collineations(source, [found], target=target)
    assert accepted(made)
    assert is_true(made)
    claim = {k: v for k, v in made["claims"][1].items() if k != "frobenius"}
    for changed in (claim, {**claim, "frobenius": 2}, {**claim, "frobenius": True}):
        assert not accepted(sealed(made, claims=[changed]))
    rational = Configuration(tuple(examples.over(QQ, examples.twenty_planes())))
    identity = Collineation(tuple(range(20)), QQ_IDENTITY)
    over_q = certify_collineations(rational, [identity])
    assert accepted(over_q)
    wrong = {**over_q["claims"][1], "frobenius": 1}
    assert "frobenius" in why_rejected(sealed(over_q, claims=[wrong]))


def examples_to_change() -> list[Certificate]:
    rng, made = Random(8), []
    for spec, planes in (("Q", 4), ("F_3", 5), ("F_4", 3), (FIELDS[-2], 3), (FIELDS[-1], 2)):
        field = field_from_spec(spec)
        some = tuple(examples.random_plane(field, 6, rng) for _ in range(planes))
        for source in (Configuration(some), examples.random_subspace(field, 6, 2, rng)):
            target, found = moved(field, source, rng)
            made.append(certify_collineations(source, [found], target=target))
    seven = trivector.read(DATA / "seven-planes-p6.json")
    return [*made, certify_collineations(seven, collineations(seven).generators[:1])]


def attack(count: int, seed: int) -> None:
    rng, honest = Random(seed), examples_to_change()
    rejected = 0
    for i in range(count):
        made = honest[i % len(honest)]
        index = rng.randrange(1, len(made["claims"]))
        changed = changed_once(made, rng, [("claims", index), ("claims", index), ("subject",)])
        if accepted(changed):
            assert is_true(changed), (seed, i)
        else:
            rejected += 1
    # Rows of a plane swapped, the sign of a basis vector: few changes leave it true.
    assert rejected >= 0.8 * count, (seed, rejected)


def test_changed_certificates_are_accepted_only_if_they_are_still_true() -> None:
    assert all(accepted(made) and is_true(made) for made in examples_to_change())
    attack(150, 1)


@pytest.mark.long
def test_two_thousand_changed_certificates_are_accepted_only_if_they_are_still_true() -> None:
    attack(2000, 2)


def test_hand_made_lies_are_rejected() -> None:
    field = prime_field(7)
    twenty = Configuration(tuple(examples.over(field, examples.twenty_planes())))
    made = certify_collineations(twenty, collineations(twenty).generators[:1])
    claim = made["claims"][1]
    order, matrix = claim["permutation"], claim["matrix"]
    singular = [matrix[0], *matrix[:5]]
    lies: list[tuple[dict[str, Any], str]] = [
        ({"permutation": [order[1], order[0], *order[2:]]}, "elsewhere"),
        ({"permutation": [order[0], *order[:-1]]}, "not a permutation"),
        ({"permutation": order[:-1]}, "not a permutation"),
        ({"permutation": [[0], *order[1:]]}, ""),
        ({"matrix": singular}, "singular"),
        ({"matrix": matrix[:5]}, "matrix: a list"),
        ({"order": 1920}, "not checked"),
        ({"target": {"basis": [[0] * 19 + [1]]}}, "as many planes"),
        ({"target": {"planes": made["subject"]["planes"][:-1]}}, "as many planes"),
        ({"target": {"planes": made["subject"]["planes"][::-1]}}, "elsewhere"),
    ]
    for change, reason in lies:
        assert reason in why_rejected(sealed(made, claims=[{**claim, **change}])), change


def test_sources_and_targets_must_match() -> None:
    twenty = Configuration(tuple(examples.over(QQ, examples.twenty_planes())))
    other = Configuration(tuple(examples.over(prime_field(5), examples.twenty_planes())))
    with pytest.raises(UsageError, match="both"):
        certify_collineations(twenty, [], target=twenty.span())
    with pytest.raises(MixedFieldsError, match="use one field"):
        certify_collineations(twenty, [], target=other)
