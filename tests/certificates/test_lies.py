"""Certificates written by somebody who wants to deceive: each has to be rejected.

Every lie is hashed again, so that the digest is right, and the evidence is
the best that a liar could think of.
"""

import copy
from collections.abc import Sequence
from itertools import combinations
from pathlib import Path
from random import Random
from typing import Any

import examples
import pytest
from forging import Certificate, accepted, claim_of, is_true, sealed, verdicts, why_rejected

import trivector
from trivector import Configuration, LinearSection, Plane, Subspace, prime_field
from trivector.certificates import certify_examination, certify_section, certify_trivectors
from trivector.exterior import Trivector
from trivector.fields import QQ, Field, field_from_spec

DATA = Path(__file__).parents[2] / "data"
F2, F3, F7, F11 = (prime_field(p) for p in (2, 3, 7, 11))
TRIPLES = examples.TRIPLES


def examined(planes: Sequence[Plane]) -> Certificate:
    return certify_examination(Configuration(tuple(planes)).examine())


def sectioned(space: Subspace) -> Certificate:
    return certify_section(LinearSection(space).examine())


@pytest.fixture(scope="module")
def twenty() -> Certificate:
    made = certify_examination(trivector.read(DATA / "twenty-planes.json").examine())
    assert accepted(made)
    return made


@pytest.fixture(scope="module")
def nineteen() -> Certificate:
    """Nineteen of the twenty planes: not complete, and the certificate says so."""
    planes = examples.over(QQ, examples.twenty_planes())
    made = examined(planes[:19])
    assert accepted(made)
    assert claim_of(made, "complete")["over_closure"] is False
    return made


def changed(document: Certificate, claim: str, **facts: Any) -> Certificate:
    made = copy.deepcopy(document)
    claim_of(made, claim).update(facts)
    return sealed(made)


def smallest(*vectors: dict[tuple[int, ...], int]) -> list[list[int]]:
    return [examples.trivector_row(v) for v in vectors]


def all_planes_claim(points: list[Any], hilbert: list[int], place: Any = None) -> dict[str, Any]:
    degrees = [max(1, len(p.get("modulus", [])) - 1) for p in points]
    sizes = [p.get("multiplicity", 1) for p in points]
    return {
        "claim": "all planes",
        "length": sum(d * s for d, s in zip(degrees, sizes, strict=True)),
        "planes_over_closure": sum(degrees),
        "planes_over_base": degrees.count(1),
        "reduced": set(sizes) <= {1},
        "points": points,
        "place": place,
        "hilbert": hilbert,
    }


def certificate(
    field: dict[str, Any], subject: dict[str, Any], *claims: dict[str, Any], dimension: int = 6
) -> Certificate:
    """A certificate from nothing but what a liar writes into it."""
    made = {
        "kind": "certificate",
        "format": 1,
        "program": "none",
        "field": field,
        "dimension": dimension,
        "subject": subject,
        "claims": list(claims),
        "uncertified": [],
    }
    return sealed(made)


# Primes


# 3215031751: strong pseudoprime to 2, 3, 5, 7 ("The pseudoprimes to 25·10^9", 1980, memory);
# 3825123056546413051: to the first nine primes ("On strong pseudoprimes to several bases", 1993,
# memory); 561, 825265: Carmichael numbers; 1373653: to 2 and 3.
COMPOSITE = [0, 1, 4, 9, 561, 825265, 1373653, 3215031751, 3825123056546413051, 2**61 - 3]


@pytest.mark.parametrize("p", COMPOSITE)
def test_a_composite_prime_is_rejected(twenty: Certificate, p: int) -> None:
    assert "prime" in why_rejected(changed(twenty, "all planes", place={"prime": p}))


@pytest.mark.parametrize("p", [2**64 + 13, 2**89 - 1, 3317044064679887385961981, -7, "7", None])
def test_a_prime_above_2_64_or_no_number_is_rejected(twenty: Certificate, p: Any) -> None:
    assert not accepted(changed(twenty, "all planes", place={"prime": p}))


@pytest.mark.parametrize("p", [4, 9, 561, 3215031751, 3825123056546413051, 2**67 - 1])
def test_a_field_of_composite_characteristic_is_rejected(p: int) -> None:
    row = [1] + [0] * 19
    lie = certificate({"characteristic": p}, {"basis": [row]}, {"claim": "span", "dimension": 1})
    assert "prime" in why_rejected(lie)


def test_a_bad_prime_is_rejected(twenty: Certificate) -> None:
    # Modulo 2 the twenty planes coincide in fours.
    assert not accepted(changed(twenty, "all planes", place={"prime": 2}))
    assert accepted(changed(twenty, "all planes", place={"prime": 3}))
    assert accepted(changed(twenty, "all planes", place={"prime": 5}))


def test_a_prime_that_divides_a_denominator_is_rejected() -> None:
    planes = examples.over(QQ, examples.twenty_planes())
    g = [[QQ.element(x) for x in examples.unit(i)] for i in range(6)]
    g[0][1] = QQ.element("1/7")
    honest = examined([examples.image(QQ, g, plane) for plane in planes])
    assert accepted(honest)
    assert accepted(changed(honest, "all planes", place={"prime": 11}))
    lie = changed(honest, "all planes", place={"prime": 7})
    assert "denominator" in why_rejected(lie)


# Completeness


def test_nineteen_planes_called_complete_are_rejected(nineteen: Certificate) -> None:
    lie = changed(nineteen, "complete", over_closure=True, over_base=True)
    assert "over closure is False" in why_rejected(lie)


@pytest.mark.parametrize("hilbert", [[1, 10, 20, 19], [1, 10, 19, 19], [1, 10, 20, 20, 19]])
def test_nineteen_planes_with_forged_ranks_are_rejected(
    nineteen: Certificate, hilbert: list[int]
) -> None:
    made = copy.deepcopy(nineteen)
    claim = claim_of(made, "all planes")
    points = [p for p in claim["points"] if "plane" in p]
    claim.update(all_planes_claim(points, hilbert, claim["place"]))
    claim_of(made, "complete").update(over_closure=True, over_base=True)
    assert "the points have length 19" in why_rejected(sealed(made))


def test_nineteen_planes_with_one_doubled_are_rejected(nineteen: Certificate) -> None:
    made = copy.deepcopy(nineteen)
    claim = claim_of(made, "all planes")
    points = [p for p in claim["points"] if "plane" in p]
    claim["points"] = [*points, points[0]]
    claim_of(made, "complete").update(over_closure=True, over_base=True)
    assert "impose 19 conditions, not 20" in why_rejected(sealed(made))


def test_nineteen_planes_with_one_given_a_false_multiplicity_are_rejected(
    nineteen: Certificate,
) -> None:
    made = copy.deepcopy(nineteen)
    claim = claim_of(made, "all planes")
    claim["points"] = [p for p in claim["points"] if "plane" in p]
    for nilpotents in ([], [[0, 3, [[0, 0], [0, 0]]]], [[0, 3, [[0, 0], [1, 0]]]]):
        claim["points"][0] = {"plane": 0, "multiplicity": 2, "nilpotents": nilpotents}
        claim.update(all_planes_claim(claim["points"], claim["hilbert"], claim["place"]))
        claim_of(made, "complete").update(over_closure=True, over_base=True)
        assert not accepted(sealed(made))


def test_completeness_needs_the_claims_it_rests_on(twenty: Certificate) -> None:
    claims = {claim["claim"]: claim for claim in twenty["claims"]}
    order = ["complete", "incidence", "all planes"]
    for names in (["complete"], ["incidence", "complete"], ["all planes", "complete"], order):
        assert not accepted(sealed(twenty, claims=[claims[name] for name in names]))
    assert accepted(sealed(twenty, claims=[claims[n] for n in (order[1], order[2], order[0])]))


def test_a_further_plane_that_is_a_given_one_in_another_basis_is_rejected(
    twenty: Certificate,
) -> None:
    claims = [claim for claim in twenty["claims"] if claim["claim"] != "all planes"]
    a, b, c = twenty["subject"]["planes"][3]
    mixed = [
        [x + 2 * y for x, y in zip(a, b, strict=True)],
        [y - z for y, z in zip(b, c, strict=True)],
        [3 * z for z in c],
    ]
    claims[-1] = {
        "claim": "complete",
        "over_closure": False,
        "over_base": False,
        "further": mixed,
    }
    assert "one of the given planes" in why_rejected(sealed(twenty, claims=claims))
    claims[-1]["further"] = [examples.unit(i) for i in (0, 1, 2)]
    assert "not in the section" in why_rejected(sealed(twenty, claims=claims))
    claims[-1]["further"] = [a, b, a]
    assert "dependent" in why_rejected(sealed(twenty, claims=claims))


def test_a_given_plane_listed_by_rows_in_another_basis_is_still_a_given_one(
    twenty: Certificate,
) -> None:
    made = copy.deepcopy(twenty)
    a, b, c = made["subject"]["planes"][3]
    rows = [[2 * x for x in b], [x + z for x, z in zip(a, c, strict=True)], c]
    claim = claim_of(made, "all planes")
    (index,) = (i for i, point in enumerate(claim["points"]) if point["plane"] == 3)
    claim["points"][index] = {"rows": rows}
    assert accepted(sealed(made))
    claim_of(made, "complete").update(over_closure=False, over_base=False)
    assert "over closure is True" in why_rejected(sealed(made))


def test_planes_that_are_not_incident_are_not_called_complete() -> None:
    honest = certify_examination(trivector.read(DATA / "twenty-one-moved.json").examine())
    assert accepted(honest)
    claims = [*honest["claims"], {"claim": "complete", "over_closure": True, "over_base": True}]
    assert "incidence" in why_rejected(sealed(honest, claims=claims))


# Points of the section


def test_an_infinite_section_called_finite_is_rejected() -> None:
    space = examples.families()[3].lagrangian(F7)
    honest = sectioned(space)
    assert [claim["claim"] for claim in honest["claims"]] == ["span", "infinite"]
    assert accepted(honest)
    rng, planes = Random(1), []
    while len(planes) < 42:
        plane = examples.families()[3].random_plane(F7, rng)
        planes += [] if plane in planes else [plane]
    for count in (0, 10, 42):
        points = [{"rows": [[int(x) for x in row] for row in p.rows]} for p in planes[:count]]
        for hilbert in ([1, 10, 35, count], [1, 10, 35, 84, count], [1, 10, 35, 84, 165, 42]):
            lie = sealed(honest, claims=[all_planes_claim(points, hilbert)])
            assert not accepted(lie)


def test_a_finite_section_called_infinite_is_rejected(twenty: Certificate) -> None:
    honest = sectioned(Subspace.span(F7, 6, examples.families()[3].basis))
    evidence = claim_of(honest, "infinite")
    claims = [{"claim": "infinite", "by": "dimension"}, evidence]
    claims.append({**evidence, "functionals": [[1] * 55]})
    claims.append({**evidence, "functionals": [[0] * 55] * 40})
    for claim in claims:
        assert not accepted(sealed(twenty, claims=[claim]))
        assert not accepted(sealed(honest, claims=[{**claim, "by": "dimension"}]))
    # Functionals that vanish on the ideal, but too few or dependent.
    space = Subspace.span(F7, 6, [p.plucker for p in examples.over(F7, examples.twenty_planes())])
    true = {**evidence, "functionals": evidence["functionals"][:31]}
    assert "proves nothing" in why_rejected(sealed(honest, claims=[true]))
    points = [space.coordinates(p.plucker) for p in examples.over(F7, examples.twenty_planes())]
    squares = []
    for point in points:
        assert point is not None
        pairs = [(i, j) for i in range(10) for j in range(i, 10)]
        squares.append([int(point[i] * point[j]) for i, j in pairs])
    finite = sectioned(space)
    doubled = squares + [[2 * x % 7 for x in row] for row in squares]
    lie = {"claim": "infinite", "by": "functionals", "degree": 2, "functionals": doubled}
    assert "proves nothing" in why_rejected(sealed(finite, claims=[lie]))


def test_a_pencil_needs_two_planes_of_the_section_that_share_a_line(twenty: Certificate) -> None:
    for family in examples.families()[:3]:
        assert claim_of(sectioned(family.lagrangian(F7)), "infinite")["by"] == "pencil"
    honest = sectioned(examples.families()[0].lagrangian(F7))
    claim = claim_of(honest, "infinite")
    first, second = claim["pencil"]
    assert accepted(honest)
    assert is_true(honest)
    given = twenty["subject"]["planes"]
    outside = [[*given[0][:2], row] for row in ([0, 0, 0, 0, 0, 1], [0, 0, 0, 1, 1, 0])]
    lies = [
        (honest, [first, first]),
        (honest, [first]),
        (honest, [first, second, second]),
        (honest, [first, given[0]]),
        (twenty, given[:2]),
        (twenty, outside),
        (twenty, [first, second]),
        (twenty, [given[0], outside[0]]),
    ]
    for document, pencil in lies:
        lie = sealed(document, claims=[{**claim, "pencil": pencil}])
        assert not accepted(lie), pencil
    assert not accepted(sealed(honest, claims=[{**claim, "by": "dimension"}]))


def test_a_non_reduced_section_called_reduced_is_rejected() -> None:
    honest = sectioned(examples.cyclic_lagrangian(F11))
    assert accepted(honest)
    claim = claim_of(honest, "all planes")
    assert (claim["length"], claim["reduced"]) == (22, False)
    assert "reduced is False" in why_rejected(changed(honest, "all planes", reduced=True))
    point = {"rows": claim["points"][0]["rows"]}
    for points in ([point], [point] * 22, [{**point, "multiplicity": 22}]):
        for hilbert in (claim["hilbert"], [1, 10, 20, 1]):
            lie = sealed(honest, claims=[all_planes_claim(points, hilbert)])
            assert not accepted(lie)


def test_nilpotent_matrices_that_do_not_commute_are_rejected() -> None:
    honest = sectioned(examples.cyclic_lagrangian(F11))
    claim = copy.deepcopy(claim_of(honest, "all planes"))
    nilpotents = claim["points"][0]["nilpotents"]
    row, column, matrix = nilpotents[0]
    free = [[0] * 22 for _ in range(22)]
    for i in range(1, 22):
        free[i][i - 1] = i % 11
    nilpotents[0] = [row, column, free]
    assert "do not commute" in why_rejected(sealed(honest, claims=[claim]))
    upper = [list(r) for r in zip(*matrix, strict=True)]
    nilpotents[0] = [row, column, upper]
    assert "strictly lower triangular" in why_rejected(sealed(honest, claims=[claim]))


def test_points_outside_the_section_are_rejected() -> None:
    basis = smallest({(0, 1, 2): 1}, {(3, 4, 5): 1})
    honest = certificate({}, {"basis": basis}, all_planes_claim(
        [{"rows": [examples.unit(i) for i in t]} for t in ((0, 1, 2), (3, 4, 5))],
        [1, 2, 2], {"prime": 7},
    ))  # fmt: skip
    assert accepted(honest)
    for t in combinations(range(6), 3):
        if t not in ((0, 1, 2), (3, 4, 5)):
            lie = copy.deepcopy(honest)
            lie["claims"][0]["points"][1] = {"rows": [examples.unit(i) for i in t]}
            assert "not in the section" in why_rejected(sealed(lie))


@pytest.mark.parametrize("hilbert", [[1, 1], [1, 1, 1], [1, 1, 1, 1], [1, 1, 0]])
@pytest.mark.parametrize("field", [{}, {"characteristic": 3}])
def test_rows_of_rank_below_three_are_no_plane(field: dict[str, Any], hilbert: list[int]) -> None:
    # e012 + e345 is not decomposable, so the section is empty; all minors of zero rows are zero.
    basis = smallest({(0, 1, 2): 1, (3, 4, 5): 1})
    place = None if field else {"prime": 7}
    for rows in ([[0] * 6] * 3, [examples.unit(0)] * 3):
        lie = certificate(
            field, {"basis": basis}, all_planes_claim([{"rows": rows}], hilbert, place)
        )
        assert not accepted(lie)
    empty = certificate(field, {"basis": basis}, all_planes_claim([], [1, 1, 0], place))
    assert accepted(empty)


def conjugate_pair(root_of: str, field: Field = QQ) -> tuple[Subspace, list[list[Any]]]:
    """L = ⟨α, β⟩ through the planes W and W̄ over k(θ), θ² = −1: α + θβ decomposable.

    W = ⟨e0 + θ·e3, e1 + θ·e4, e2 + θ·e5⟩, with real and imaginary parts of its minors as basis.
    """
    one, zero = field.one, field.zero
    rows = [[zero] * 20, [zero] * 20]
    for word in [(i, j, k) for i in (0, 3) for j in (1, 4) for k in (2, 5)]:
        power = sum(x > 2 for x in word)
        for triple, sign in examples.signed_triple(word).items():
            value = one * (sign if power < 2 else -sign)  # θ² = −1, θ³ = −θ
            rows[power % 2][TRIPLES.index(triple)] = value
    return Subspace.span(field, 6, rows), rows


def pair_points(theta: Any, zero: Any, one: Any) -> list[list[Any]]:
    """Rows e_i + θ·e_{i+3}."""
    rows = [[zero] * 6 for _ in range(3)]
    for i in range(3):
        rows[i][i], rows[i][i + 3] = one, theta
    return rows


def test_two_conjugate_points_are_not_counted_twice() -> None:
    space, _ = conjugate_pair("i")
    honest = sectioned(space)
    claim = claim_of(honest, "all planes")
    assert (claim["planes_over_closure"], claim["planes_over_base"]) == (2, 0)
    assert accepted(honest)
    (point,) = claim["points"]
    assert point["modulus"] == [2, 2, 1]  # so that the conjugate of θ is −2 − θ
    conjugate = {**point, "rows": [[[x - 2 * y, -y] for x, y in row] for row in point["rows"]]}
    assert accepted(sealed(honest, claims=[{**claim, "points": [conjugate]}]))
    for hilbert in ([1, 2, 2], [1, 2, 2, 2], [1, 2, 4], [1, 2, 3, 4]):
        lie = all_planes_claim([point, conjugate], hilbert, claim["place"])
        assert not accepted(sealed(honest, claims=[lie]))


def test_a_point_over_a_larger_field_than_its_own_is_rejected() -> None:
    # One rational plane, written over Q(i) where it has no more right to be than twice over Q.
    basis = smallest({(0, 1, 2): 1})
    rows = [[[x, 0] for x in examples.unit(i)] for i in range(3)]
    point = {"rows": rows, "modulus": [1, 0, 1], "irreducible": {"place": {"prime": 3}}}
    for hilbert in ([1, 1, 1], [1, 2, 2], [1, 1, 2]):
        lie = certificate({}, {"basis": basis}, all_planes_claim([point], hilbert, {"prime": 7}))
        assert "conditions" in why_rejected(lie)


# Irreducible polynomials and fields


def test_a_reducible_modulus_over_f7_is_rejected() -> None:
    # x² − 2 = (x − 3)(x − 4) modulo 7: two rational planes called one of degree two.
    basis = smallest({(0, 1, 2): 1}, {(3, 4, 5): 1})
    honest = certificate({"characteristic": 7}, {"basis": basis}, all_planes_claim(
        [{"rows": [examples.unit(i) for i in t]} for t in ((0, 1, 2), (3, 4, 5))], [1, 2, 2]
    ))  # fmt: skip
    assert accepted(honest)
    # Over F_7[θ]/(θ² − 2) = F_7 × F_7: e = (4 − θ), f = (θ − 3) are the idempotents.
    e, f = [4, 6], [4, 1]
    rows = [[[0, 0] for _ in range(6)] for _ in range(3)]
    for i in range(3):
        rows[i][i], rows[i][i + 3] = e, f
    point = {"rows": rows, "modulus": [5, 0, 1], "irreducible": {}}
    lie = certificate({"characteristic": 7}, {"basis": basis}, all_planes_claim([point], [1, 2, 2]))
    assert not is_true(lie)
    assert "not proved to be irreducible" in why_rejected(lie)


@pytest.mark.parametrize(
    ("modulus", "evidence"),
    [
        ([4, 0, 0, 0, 1], {"value": 3}),  # x⁴ + 4 = (x² + 2x + 2)(x² − 2x + 2)
        ([4, 0, 0, 0, 1], {"value": 1}),  # the value 5 is a prime, the argument too small
        ([4, 0, 0, 0, 1], {"place": {"prime": 5}}),
        ([-2, 0, 1], {"place": {"prime": 7}}),  # irreducible, but not modulo 7
        ([-2, 0, 1], {"place": {"prime": 2}}),  # (x)² there
        ([-2, 0, 1], {"place": {}}),
        ([-2, 0, 1], {"place": None}),
        ([-2, 0, 1], {"place": False}),
        ([-2, 0, 1], {}),
        ([-2, 0, 1], None),
        ([-1, 0, 1], {"value": 2}),  # 3 is a prime; (x − 1)(x + 1)
        (["-1/4", 0, 1], {"value": 2}),
        (["-1/9", 0, 1], {"value": 1}),  # 9x² − 1 at 1: 8
        ([-1, 0, 0, 0, 0, 0, 1], {"value": 2}),
        ([1, 2, 1], {"place": {"prime": 3}}),
        ([1, 2, 1], {"value": 2**79}),
        ([2, -3, 1], {"value": 10**20}),
    ],
)
def test_a_field_that_is_none_is_rejected(modulus: list[Any], evidence: Any) -> None:
    row = [[1, *[0] * (len(modulus) - 2)]] + [[0] * (len(modulus) - 1)] * 19
    lie = certificate(
        {"modulus": modulus, "irreducible": evidence},
        {"basis": [row]},
        {"claim": "span", "dimension": 1, "isotropic": True, "lagrangian": False},
    )
    assert not accepted(lie)


def test_prime_values_of_every_reducible_polynomial_prove_nothing() -> None:
    # All products of two monic polynomials of small degree, at every small argument.
    row = [[1, 0]] + [[0, 0]] * 19
    span = {"claim": "span", "dimension": 1, "isotropic": True, "lagrangian": False}
    for r in range(-4, 5):
        for s in range(r, 5):
            for n in range(12):
                field = {"modulus": [r * s, -r - s, 1], "irreducible": {"value": n}}
                assert not accepted(certificate(field, {"basis": [row]}, span))


def test_a_place_of_bad_reduction_does_not_prove_irreducibility() -> None:
    # K = Q(a), a² = −9, contains i = a/3. At a = 0 modulo 3 the order Z[a] is not maximal, and
    # x² + 1 is irreducible over F_3: yet it has the roots ± a/3 in K.
    rows = [[[1, 0], [0, 0]], [[0, 0], [1, 0]]]
    space, _ = conjugate_pair("i")
    lifted = [[[int(x), 0] for x in row] for row in space.rows]
    zero, one = [[0, 0], [0, 0]], [[1, 0], [0, 0]]
    theta = [[0, 0], [1, 0]]
    assert rows == [one, theta]
    point = {
        "rows": pair_points(theta, zero, one),
        "modulus": [[1, 0], [0, 0], [1, 0]],
        "irreducible": {"place": {"prime": 3, "root": 0}},
    }
    field = {"modulus": [9, 0, 1], "irreducible": {"place": {"prime": 7}}}
    lie = certificate(
        field, {"basis": lifted}, all_planes_claim([point], [1, 2, 2], {"prime": 13, "root": 2})
    )
    assert claim_of(sectioned(_over(space, {"modulus": "x^2+9"})), "all planes")[
        "planes_over_base"
    ] == 2  # fmt: skip
    assert not is_true(lie)
    assert "root" in why_rejected(lie)


def _over(space: Subspace, spec: dict[str, Any]) -> Subspace:
    field = field_from_spec(spec)
    return Subspace.span(field, 6, [[field.element(x) for x in row] for row in space.rows])


# Other claims


def test_a_zero_trivector_is_neither() -> None:
    for value in (True, False):
        claim = {"claim": "decomposable", "index": 0, "value": value}
        zero = certificate({}, {"trivectors": [[0] * 20]}, claim)
        assert not accepted(zero)


def test_a_decomposable_trivector_has_its_own_plane() -> None:
    alpha = Trivector.from_terms(QQ, 6, {(0, 1, 2): 1, (0, 1, 3): 1})
    honest = certify_trivectors([alpha])
    assert accepted(honest)
    for rows in ([0, 1, 2], [0, 1, 3], [3, 4, 5]):
        plane = [examples.unit(i) for i in rows]
        assert "another plane" in why_rejected(changed(honest, "decomposable", plane=plane))
    assert "value is True" in why_rejected(changed(honest, "decomposable", value=False))


def test_facts_that_are_not_checked_are_not_let_through(twenty: Certificate) -> None:
    for name, fact in [
        ("incidence", {"isotropic": True}),
        ("span", {"totally_singular": True}),
        ("all planes", {"planes": 42}),
        ("complete", {"unique": True}),
    ]:
        assert not accepted(changed(twenty, name, **fact))
    seven = certify_examination(trivector.read(DATA / "seven-planes-p6.json").examine())
    assert accepted(seven)
    assert not accepted(changed(seven, "span", lagrangian=True))
    ruling = certify_examination(trivector.read(DATA / "quadric-ruling-twelve.json").examine())
    assert accepted(ruling)
    assert not accepted(changed(ruling, "infinite", planes_over_closure=42))


def test_a_subject_of_an_unknown_kind_is_refused() -> None:
    basis = smallest({(0, 1, 2): 1})
    span = {"claim": "span", "dimension": 1, "isotropic": True, "lagrangian": False}
    assert accepted(certificate({}, {"basis": basis}, span))
    assert not accepted(certificate({}, {"lagrangian": basis}, span))


def test_true_numbers_and_one_are_told_apart(twenty: Certificate) -> None:
    for value in (1, "true", 1.0, [True]):
        assert not accepted(changed(twenty, "all planes", reduced=value))
    for value in (20.0, "20", [20]):
        assert not accepted(changed(twenty, "all planes", length=value))


def test_a_changed_file_with_its_old_digest_is_rejected(twenty: Certificate) -> None:
    made = copy.deepcopy(twenty)
    made["title"] = "another title"
    assert "SHA-256" in why_rejected(made)
    assert accepted(sealed(made))
    assert verdicts(twenty) == verdicts(sealed(made))


def test_evidence_that_is_not_read_is_not_let_through(
    twenty: Certificate, nineteen: Certificate
) -> None:
    # A plane of no section at all beside a true verdict would be taken for one that was checked.
    other = [examples.unit(i) for i in range(3)]
    alpha = Trivector.from_terms(QQ, 6, {(0, 1, 2): 1, (3, 4, 5): 1})
    ruling = certify_examination(trivector.read(DATA / "quadric-ruling-twelve.json").examine())
    everything = sectioned(Subspace.span(F3, 6, [examples.unit(i, 20) for i in range(20)]))
    for honest, name, more in [
        (twenty, "complete", {"further": other}),
        (nineteen, "complete", {"further": other}),
        (nineteen, "complete", {"further": "none"}),
        (certify_trivectors([alpha]), "decomposable", {"plane": other}),
        (ruling, "infinite", {"pencil": [other, other]}),
        (everything, "infinite", {"degree": 2}),
        (everything, "infinite", {"dimension": 3}),
    ]:
        assert accepted(honest)
        assert "not checked" in why_rejected(changed(honest, name, **more)), (name, more)
    for more in ({"rows": other}, {"degree": 2}, {"irreducible": {"value": 2}}, {"modulus": []}):
        lie = copy.deepcopy(twenty)
        claim_of(lie, "all planes")["points"][0].update(more)
        assert "not checked" in why_rejected(sealed(lie)), more
