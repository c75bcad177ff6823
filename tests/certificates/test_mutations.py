"""Random single changes of certificates: accepted only if what they say is still true.

Every change is hashed again. What is true is decided by the engine, which does
not read the evidence (`forging.is_true`).
"""

from collections import Counter
from collections.abc import Callable, Iterator
from functools import cache
from random import Random
from typing import Any

import examples
import pytest
from forging import Certificate, accepted, changed_once, is_true, sealed

from trivector import Configuration, LinearSection, Plane, Subspace, prime_field
from trivector.certificates import certify_examination, certify_section, certify_trivectors
from trivector.certificates.certifying import assemble, span_claim, subject
from trivector.exterior import Trivector
from trivector.fields import Field, field_from_spec
from trivector.sections import Limits

SPECS: tuple[Any, ...] = (
    "Q",
    "F_2",
    "F_3",
    "F_4",
    "F_7",
    "F_9",
    "F_2305843009213693951",
    {"modulus": "x^2+1"},
)

WORDS = {"disjoint": -1, "point": 0, "line": 1, "equal": 2}
LIMITS = Limits(max_columns=320, max_points=0)


def only(made: Certificate, *names: str) -> Certificate:
    claims = [claim for claim in made["claims"] if claim["claim"] in names]
    assert len(claims) == len(names), (names, [claim["claim"] for claim in made["claims"]])
    return sealed(made, claims=claims)


def fields() -> Iterator[tuple[Field, Random]]:
    for i, spec in enumerate(SPECS):
        yield field_from_spec(spec), Random(i)


def some_planes(field: Field, rng: Random) -> tuple[Plane, ...]:
    return tuple(examples.random_plane(field, 6, rng) for _ in range(3))


def incidence() -> list[Certificate]:
    found = []
    for field, rng in fields():
        planes = some_planes(field, rng)
        meets = Configuration(planes).meet_dimensions()
        counts = Counter(meets.values())
        claim = {
            "claim": "incidence",
            "pairs": {word: counts[d] for word, d in WORDS.items()},
            "disjoint_pairs": [list(pair) for pair, d in meets.items() if d < 0],
        }
        found.append(assemble(field, 6, subject(planes), [claim], []))
    return found


def span() -> list[Certificate]:
    found = []
    for field, rng in fields():
        planes = some_planes(field, rng)
        claim = span_claim(Configuration(planes).span())
        found.append(assemble(field, 6, subject(planes), [claim], []))
    return found


def decomposable() -> list[Certificate]:
    found = []
    for field, rng in fields():
        plane = examples.random_plane(field, 6, rng)
        first, second = (examples.random_plane(field, 6, rng).plucker for _ in range(2))
        total = [x + y for x, y in zip(first, second, strict=True)]
        trivectors = [Trivector(field, plane.plucker), Trivector(field, total)]
        found.append(certify_trivectors(trivectors))
    return found


def section(space: Subspace) -> Certificate:
    return only(certify_section(LinearSection(space).examine()), "all planes")


def all_planes() -> list[Certificate]:
    """Reduced, fat, with conjugate points, empty."""
    found = []
    for field, rng in fields():
        planes = [examples.random_plane(field, 6, rng) for _ in range(3)]
        found.append(section(Subspace.span(field, 6, [plane.plucker for plane in planes])))
        space, _ = examples.fat_space(field, [1, 2], rng)
        found.append(section(space))
        empty = [[field.one if i in pair else field.zero for i in range(20)] for pair in [(0, 19)]]
        found.append(section(Subspace.span(field, 6, empty)))
    found.append(section(examples.cyclic_lagrangian(prime_field(3))))
    return found + conjugate()


def conjugate() -> list[Certificate]:
    """⟨Tr ω, Tr aω⟩ for a plane over a quadratic extension: two conjugate planes."""
    found = []
    for small, large in (("F_2", "F_4"), ("F_3", "F_9"), ("Q", {"modulus": "x^2-2"})):
        k, extension = field_from_spec(small), field_from_spec(large)
        rows = [[1, 0, 0, 0, "a", 0], [0, 1, 0, "a", 1, 0], [0, 0, 1, 0, "a", "a"]]
        numbers = [extension.numbers(x) for x in Plane.from_rows(
            extension, [[extension.element(x) for x in row] for row in rows]).plucker]  # fmt: skip
        parts = [[k.element(pair[i]) for pair in numbers] for i in (0, 1)]
        found.append(section(Subspace.span(k, 6, parts)))
        assert found[-1]["claims"][0]["points"][0]["modulus"]
    return found


def infinite() -> list[Certificate]:
    """By functionals, by a pencil, by the dimension."""
    found = []
    for spec in ("Q", "F_3"):
        field = field_from_spec(spec)
        for family in (examples.families()[0], examples.families()[3]):
            report = LinearSection(family.lagrangian(field)).examine(limits=LIMITS)
            found.append(only(certify_section(report), "infinite"))
        report = LinearSection(examples.random_subspace(field, 6, 12, Random(1))).examine()
        found.append(only(certify_section(report), "infinite"))
    return found


def complete() -> list[Certificate]:
    """True; false with a further plane; false over an infinite section."""
    found = []
    for spec in ("Q", "F_3", "F_7", "F_9"):
        field = field_from_spec(spec)
        seven = tuple(examples.over(field, examples.seven_planes()))
        nineteen = tuple(examples.over(field, examples.twenty_planes()))[:19]
        for kept in (seven, seven[:6], seven[:2], *([nineteen] if spec == "F_3" else [])):
            made = certify_examination(Configuration(kept).examine(limits=LIMITS))
            names = [claim["claim"] for claim in made["claims"] if claim["claim"] != "span"]
            found.append(only(made, *names))
    return found


KINDS: list[Callable[[], list[Certificate]]] = [
    incidence,
    span,
    decomposable,
    all_planes,
    infinite,
    complete,
]


@cache
def honest(kind: Callable[[], list[Certificate]]) -> list[Certificate]:
    made = kind()
    assert all(map(accepted, made))
    return made


def attack(kind: Callable[[], list[Certificate]], count: int, seed: int) -> None:
    rng, certificates, rejected = Random(f"{kind.__name__} {seed}"), honest(kind), 0
    for i in range(count):
        made = certificates[i % len(certificates)]
        last = ("claims", len(made["claims"]) - 1)
        parts = [last, last, last, ("claims",), ("subject",), ("field",)]
        changed = changed_once(made, rng, parts if made["field"] else parts[:-1])
        if not accepted(changed):
            rejected += 1
        else:
            assert is_true(changed), (kind.__name__, seed, i)
    # What stays true: rows swapped, points in another order, a sign, another plane of a pencil.
    assert rejected >= 0.7 * count, (kind.__name__, seed, rejected)


@pytest.mark.parametrize("kind", KINDS, ids=lambda kind: kind.__name__)
def test_a_changed_certificate_is_accepted_only_if_it_is_still_true(
    kind: Callable[[], list[Certificate]],
) -> None:
    attack(kind, 60, 1)


@pytest.mark.long
@pytest.mark.parametrize("kind", KINDS, ids=lambda kind: kind.__name__)
def test_the_honest_certificates_are_true(kind: Callable[[], list[Certificate]]) -> None:
    assert all(map(is_true, honest(kind)))


@pytest.mark.long
@pytest.mark.parametrize("kind", KINDS, ids=lambda kind: kind.__name__)
def test_two_thousand_changed_certificates_are_accepted_only_if_they_are_still_true(
    kind: Callable[[], list[Certificate]],
) -> None:
    attack(kind, 2000, 2)
