"""Certificates of random and of known answers: each is accepted and says what the answer said."""

import hashlib
import json
from collections.abc import Callable, Sequence
from importlib import resources
from pathlib import Path
from random import Random

import examples
import jsonschema
import oracle_f4
import pytest
from forging import Certificate, claim_of, sealed, verdicts

import trivector
from trivector import Configuration, LinearSection, Plane, Subspace, prime_field
from trivector.certificates import (
    certify_examination,
    certify_section,
    certify_trivectors,
    checker,
)
from trivector.configurations import Examination
from trivector.exterior import Trivector
from trivector.exterior.products import minors
from trivector.families.residues import ResidueRing
from trivector.fields import QQ, Field, field_from_spec
from trivector.sections import Limits, SectionReport

DATA = Path(__file__).parents[2] / "data"
F2, F3, F7, F11 = (prime_field(p) for p in (2, 3, 7, 11))
GAUSS = field_from_spec({"modulus": "x^2+1"})
FIELDS: dict[str, Field] = {
    "Q": QQ,
    "F_2": F2,
    "F_3": F3,
    "F_4": field_from_spec("F_4"),
    "F_7": F7,
    "F_9": field_from_spec("F_9"),
    "F_2305843009213693951": prime_field(examples.LARGE_PRIME),
    "Q(i)": GAUSS,
}
# So that the engine says "undecided" early of what is slow over F_9 and number fields.
LIMITS = Limits(max_columns=320, max_primes=2, max_lift_primes=20, max_points=20_000)

SCHEMA = json.loads(
    resources.files("trivector.certificates").joinpath("schema.json").read_text("utf-8")
)
VALIDATOR = jsonschema.Draft202012Validator(SCHEMA)


def confirmed(made: Certificate) -> Certificate:
    """After a round trip: valid for the schema, hashed canonically, every claim accepted."""
    again = json.loads(json.dumps(made))
    assert again == made
    VALIDATOR.validate(again)
    assert sealed(again)["sha256"] == again["sha256"]
    for name, verdict, words in verdicts(again):
        assert verdict, (name, words)
    return dict(again)


def names(made: Certificate) -> list[str]:
    return [claim["claim"] for claim in made["claims"]]


def compare_section(made: Certificate, report: SectionReport) -> None:
    """The claim about the section and the report agree; there is one unless a reason is given."""
    if "all planes" in names(made):
        claim = claim_of(made, "all planes")
        assert report.points is not None
        assert report.infinite is False
        assert claim["length"] == report.degree
        assert claim["planes_over_closure"] == report.planes_over_closure
        assert claim["planes_over_base"] == len(report.planes or ())
        assert claim["reduced"] is report.reduced
        found = sorted((p.degree, p.multiplicity) for p in report.points)
        listed = sorted(
            (max(1, len(p.get("modulus", [])) - 1), p.get("multiplicity", 1))
            for p in claim["points"]
        )
        assert found == listed
    elif "infinite" in names(made):
        assert report.infinite is True
    else:
        assert made["uncertified"]


def certified(planes: Sequence[Plane], limits: Limits = LIMITS) -> Certificate:
    examination = Configuration(tuple(planes)).examine(limits=limits)
    return certified_examination(examination, limits)


def certified_examination(examination: Examination, limits: Limits = LIMITS) -> Certificate:
    made = confirmed(certify_examination(examination, limits=limits))
    incidence, span = claim_of(made, "incidence"), claim_of(made, "span")
    assert incidence["pairs"] == examination.pairs.to_json()
    assert incidence["disjoint_pairs"] == [list(pair) for pair in examination.disjoint_pairs]
    assert span["dimension"] == examination.span.dimension
    assert span.get("lagrangian") is examination.lagrangian
    assert span.get("isotropic") is examination.isotropic
    assert span.get("totally_singular") is examination.totally_singular
    compare_section(made, examination.section)
    if "complete" in names(made):
        claim = claim_of(made, "complete")
        assert claim["over_closure"] is examination.complete_over_closure
        assert claim["over_base"] in (None, examination.complete_over_base)
    else:
        assert not examination.pairwise_incident or made["uncertified"]
    return made


def certified_section(
    space: Subspace, known: Sequence[Plane] = (), limits: Limits = LIMITS
) -> Certificate:
    report = LinearSection(space).examine(list(dict.fromkeys(known)), limits=limits)
    made = confirmed(certify_section(report, limits=limits))
    assert claim_of(made, "span")["dimension"] == space.dimension
    compare_section(made, report)
    return made


# Random examples


def incident(field: Field, rng: Random) -> Certificate:
    planes = examples.random_incident_planes(field, rng.randint(2, 4), rng)
    return certified(planes)


def any_planes(field: Field, rng: Random) -> Certificate:
    n, count = rng.choice((6, 6, 7)), rng.randint(1, 5)
    planes = [examples.random_plane(field, n, rng) for _ in range(count)]
    planes += rng.choice(([], planes[:1]))
    return certified(planes)


def in_a_moved_family(field: Field, rng: Random) -> Certificate:
    family, g = rng.choice(examples.families()), examples.random_invertible(field, 6, rng)
    members = [family.random_plane(field, rng) for _ in range(rng.randint(2, 6))]
    return certified([examples.image(field, g, plane) for plane in members])


def some_of_the_twenty(field: Field, rng: Random) -> Certificate:
    planes = list(dict.fromkeys(examples.over(field, examples.twenty_planes())))
    rng.shuffle(planes)
    g = examples.random_invertible(field, 6, rng)
    kept = planes[: max(2, len(planes) - rng.choice((0, 1, 3)))]
    return certified([examples.image(field, g, p) for p in kept])


def seven_moved(field: Field, rng: Random) -> Certificate:
    g = examples.random_invertible(field, 7, rng)
    planes = examples.over(field, examples.seven_planes())[: rng.choice((6, 7, 7))]
    return certified([examples.image(field, g, p) for p in planes])


def planted(field: Field, rng: Random) -> Certificate:
    dimension = rng.randint(6, 12)
    planes = [examples.random_plane(field, 6, rng) for _ in range(rng.randint(0, 5))]
    rows = [list(plane.plucker) for plane in planes]
    rows += examples.random_rows(field, dimension - len(rows), 20, rng)
    return certified_section(Subspace.span(field, 6, rows), planes)


def lagrangian(field: Field, rng: Random) -> Certificate:
    planes = examples.random_incident_planes(field, rng.randint(2, 4), rng)
    return certified_section(examples.lagrangian_through(field, planes, rng), planes)


def fat(field: Field, rng: Random) -> Certificate:
    orders = [rng.randint(0, 2) for _ in range(rng.randint(1, 3))]
    n = rng.choice((6, 6, 7))
    space, planes = examples.fat_space(field, orders, rng, n=n, others=rng.randint(0, 2))
    return certified_section(space, planes)


def trivectors(field: Field, rng: Random) -> Certificate:
    n = rng.choice((6, 7))
    size = {6: 20, 7: 35}[n]
    made = [Trivector(field, examples.random_plane(field, n, rng).plucker) for _ in range(2)]
    made += [Trivector(field, row) for row in examples.random_rows(field, 2, size, rng) if any(row)]
    found = confirmed(certify_trivectors(made))
    assert [c["value"] for c in found["claims"]] == [t.is_decomposable() for t in made]
    return found


MAKERS: list[Callable[[Field, Random], Certificate]] = [
    incident,
    any_planes,
    in_a_moved_family,
    some_of_the_twenty,
    seven_moved,
    planted,
    lagrangian,
    fat,
    trivectors,
]


# Over the other fields the engine, not the certificate, takes seconds.
DEFAULT = [
    pytest.param(name, make, id=f"{name}-{make.__name__}")
    for name in FIELDS
    for make in MAKERS
    if name in ("Q", "F_3", "F_7", "F_2305843009213693951") or make in (trivectors, fat)
]


@pytest.mark.parametrize(("name", "make"), DEFAULT)
def test_the_certificate_of_a_random_answer_is_accepted(
    name: str, make: Callable[[Field, Random], Certificate]
) -> None:
    make(FIELDS[name], Random(f"{name} {make.__name__}"))


@pytest.mark.long
@pytest.mark.parametrize("seed", range(5))
@pytest.mark.parametrize("name", FIELDS)
@pytest.mark.parametrize("make", MAKERS, ids=lambda make: make.__name__)
def test_the_certificates_of_360_random_answers_are_accepted(
    name: str, make: Callable[[Field, Random], Certificate], seed: int
) -> None:
    make(FIELDS[name], Random(f"{name} {make.__name__} {seed}"))


# Known answers


def test_multiplicity_22_modulo_11_and_conjugate_planes_modulo_2() -> None:
    # computed: one plane of multiplicity 22; closed points of degrees 2, 10, 10
    made = certified_section(examples.cyclic_lagrangian(F11), limits=Limits())
    (point,) = claim_of(made, "all planes")["points"]
    assert point["multiplicity"] == 22
    made = certified_section(examples.cyclic_lagrangian(F2), limits=Limits())
    moduli = [point["modulus"] for point in claim_of(made, "all planes")["points"]]
    assert [len(f) - 1 for f in moduli] == [2, 10, 10]


def test_the_cyclic_lagrangian_over_q_has_no_plane() -> None:
    made = certified_section(examples.cyclic_lagrangian(QQ), limits=Limits())
    assert claim_of(made, "all planes")["points"] == []


def test_twenty_two_planes_over_f4_are_complete() -> None:
    # published: "On 2-dimensional dual hyperovals of polar type"; span and count computed
    field = FIELDS["F_4"]
    planes = [
        Plane.from_rows(field, [[field.from_code(x) for x in row] for row in rows])  # type: ignore[attr-defined]
        for rows in oracle_f4.twenty_two_planes()
    ]
    made = certified(planes, Limits())
    assert claim_of(made, "all planes")["length"] == 22
    assert claim_of(made, "complete")["over_closure"] is True
    assert claim_of(made, "span")["totally_singular"] is True


SIX = [
    pytest.param(family, id=str(family), marks=[pytest.mark.long] if family.dimension > 3 else [])
    for family in examples.families()
]


@pytest.mark.parametrize("family", SIX)
def test_the_six_families_are_infinite(family: examples.Family) -> None:
    made = certified_section(family.lagrangian(F7), limits=Limits())
    assert names(made) == ["span", "infinite"]


@pytest.mark.parametrize("field", [QQ, F2], ids=str)
def test_nothing_and_everything(field: Field) -> None:
    for n, size in ((6, 20), (7, 35)):
        nothing = certified_section(Subspace.span(field, n, [[0] * size]))
        assert claim_of(nothing, "all planes")["planes_over_closure"] == 0
        unit = [examples.unit(i, size) for i in range(size)]
        everything = certified_section(Subspace.span(field, n, unit))
        assert claim_of(everything, "infinite")["by"] == "dimension"


def test_the_same_answer_has_the_same_bytes() -> None:
    configuration = trivector.read(DATA / "twenty-planes.json")
    texts = {json.dumps(certify_examination(configuration.examine())) for _ in range(2)}
    assert len(texts) == 1
    made = json.loads(texts.pop())
    text = json.dumps(
        {key: made[key] for key in made if key != "sha256"},
        sort_keys=True,
        separators=(",", ":"),
        ensure_ascii=False,
    )
    assert made["sha256"] == hashlib.sha256(text.encode()).hexdigest()
    shuffled = dict(sorted(made.items(), reverse=True))
    assert all(verdict for _, verdict, _ in verdicts(shuffled))


@pytest.mark.parametrize(("version", "word"), [(0, "too old"), (2, "too new"), (99, "too new")])
def test_another_version_of_the_format_has_its_own_error(version: int, word: str) -> None:
    made = certify_trivectors([Trivector.from_terms(QQ, 6, {(0, 1, 2): 1})])
    with pytest.raises(ValueError, match=word):
        checker.load(json.dumps(sealed(made, format=version)))


# Planes over extensions of a field that is not a prime field


@pytest.mark.parametrize(
    ("spec", "modulus"),
    [
        ("F_4", ["a", 1, 1]),  # F_16 over F_4
        ("F_9", ["-a", 0, 1]),  # F_81 over F_9: a is no square
        ({"modulus": "x^2-2"}, [-3, 0, 1]),  # √3 over Q(√2)
        ({"modulus": "x^2-2"}, ["-a", 0, 0, 1]),  # the cube root of √2
        ("Q", [-2, 0, 0, 1]),
    ],
    ids=str,
)
def test_conjugate_planes_over_any_field_are_certified(spec: object, modulus: list[object]) -> None:
    field = field_from_spec(spec)
    polynomial = [field.element(c) for c in modulus]
    ring = ResidueRing(field, polynomial)
    theta = ring.residue([field.zero, field.one])
    zero, one = ring.zero, ring.one
    rows = [
        [one, zero, zero, theta, zero, one],
        [zero, one, zero, one, theta, theta],
        [zero, zero, one, theta * theta, one, theta],
    ]
    entries = [minor.coefficients for minor in minors(rows)]
    degree = len(modulus) - 1
    space = Subspace.span(field, 6, [[entry[j] for entry in entries] for j in range(degree)])
    assert space.dimension == degree
    made = certified_section(space, limits=Limits())
    claim = claim_of(made, "all planes")
    assert (claim["planes_over_closure"], claim["planes_over_base"]) == (degree, 0)
    (point,) = claim["points"]
    assert len(point["modulus"]) == degree + 1
    if not isinstance(field.numbers(field.one), list):
        return
    # The modulus replaced by one that has a root in the field.
    reducible = [field.numbers(field.zero)] * degree + [field.numbers(field.one)]
    wrong = {**claim, "points": [{**point, "modulus": reducible}]}
    claims = [wrong if c["claim"] == "all planes" else c for c in made["claims"]]
    assert not all(verdict for _, verdict, _ in verdicts(sealed(made, claims=claims)))
