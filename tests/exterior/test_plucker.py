"""The Plücker relations over ℤ, and decomposability against all planes."""

import re
from collections import Counter
from collections.abc import Sequence
from functools import cache
from itertools import combinations, combinations_with_replacement, islice, product
from random import Random

import numpy as np
import oracle
import pytest
import strategies as draws
from flint import fmpz_mat, nmod_mat
from hypothesis import given
from hypothesis import strategies as st

from trivector.exterior import PluckerRelation, Trivector, Violation, plucker_relations
from trivector.exterior.products import plane_candidate
from trivector.fields import QQ, Field, prime_field

F2 = prime_field(2)

# The quadrics that vanish on G(3,n): C(C(n,3)+1, 2) less the dimension of the irreducible
# representation of GL(n) with Young diagram of two columns of height 3, 175 and 490; classical
QUADRICS = {6: 210 - 175, 7: 630 - 490}
# Planes of PG(5,2) and PG(6,2), the Gaussian binomials [6,3] and [7,3] at q = 2; classical
PLANES = {6: 1395, 7: 11811}


@cache
def coefficient_rows(n: int) -> list[list[int]]:
    """The relations as vectors over ℤ, one entry for each product of two coordinates."""
    size = {6: 20, 7: 35}[n]
    monomials = {ij: k for k, ij in enumerate(combinations_with_replacement(range(size), 2))}
    rows = []
    for relation in plucker_relations(n):
        row = [0] * len(monomials)
        for sign, i, j in relation.terms:
            row[monomials[i, j]] += sign
        rows.append(row)
    return rows


def literal_value(relation: PluckerRelation, vector: Sequence[int], q: int) -> int:
    return sum(sign * vector[i] * vector[j] for sign, i, j in relation.terms) % q


# The relations as a lattice


@draws.in_six_and_seven
def test_there_are_as_many_relations_as_quadrics_through_the_grassmannian(n: int) -> None:
    assert len(plucker_relations(n)) == QUADRICS[n]  # 35 and 140


@draws.in_six_and_seven
@pytest.mark.parametrize("p", [2, 3, 5])
def test_the_relations_are_independent_modulo_small_primes(n: int, p: int) -> None:
    assert oracle.rank(coefficient_rows(n), p) == QUADRICS[n]


@draws.in_six_and_seven
def test_the_lattice_of_relations_is_saturated(n: int) -> None:
    columns = fmpz_mat([list(column) for column in zip(*coefficient_rows(n), strict=True)])
    reduced = columns.hnf().tolist()
    # the elementary divisors are all 1 exactly if the columns generate ℤ^35 (or ℤ^140)
    unit = [[int(i == j) for j in range(QUADRICS[n])] for i in range(QUADRICS[n])]
    assert reduced[: QUADRICS[n]] == unit
    assert not any(x for row in reduced[QUADRICS[n] :] for x in row)


@draws.in_six_and_seven
def test_there_are_no_other_quadrics_through_the_grassmannian(n: int) -> None:
    rng, q = Random(3), 101
    size = {6: 20, 7: 35}[n]
    values = []
    for _ in range({6: 190, 7: 510}[n]):
        x = oracle.plucker([[rng.randrange(q) for _ in range(n)] for _ in range(3)], q)
        values.append([x[i] * x[j] for i, j in combinations_with_replacement(range(size), 2)])
    # so many decomposables impose 175 (or 490) conditions on quadrics: no more could vanish
    flat = [x for row in values for x in row]
    conditions = nmod_mat(len(values), len(values[0]), flat, q).rank()
    assert conditions == len(values[0]) - len(plucker_relations(n))


@draws.in_six_and_seven
def test_every_relation_is_homogeneous_for_the_torus(n: int) -> None:
    basis = list(combinations(range(n), 3))
    kinds: Counter[int] = Counter()
    for relation in plucker_relations(n):
        weights = {tuple(sorted(basis[i] + basis[j])) for _, i, j in relation.terms}
        assert len(weights) == 1
        assert {sign for sign, _, _ in relation.terms} <= {1, -1}
        kinds[len(set(weights.pop())), len(relation.terms)] += 1
    # one index twice, four once: three terms each; six distinct indices: five of four terms
    assert kinds == {
        (5, 3): {6: 30, 7: 105}[n],  # n·C(n−1, 4)
        (6, 4): {6: 5, 7: 35}[n],  # 5·C(n, 6)
    }


# What they say of vectors


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_the_relations_vanish_on_every_product_of_three_vectors(
    field: Field, n: int, data: st.DataObject
) -> None:
    alpha = Trivector.from_vectors(field, data.draw(draws.matrices(field, 3, n)))
    assert not any(r.evaluate(alpha.coordinates, field.zero) for r in plucker_relations(n))


@pytest.mark.parametrize(("n", "q"), [(6, 2), (6, 3), (7, 2)])
def test_the_relations_vanish_on_planes_of_finite_spaces(n: int, q: int) -> None:
    step = {(6, 2): 1, (6, 3): 60, (7, 2): 40}[n, q]
    for rows in islice(oracle.all_planes(q, n), 0, None, step):
        vector = oracle.plucker(rows, q)
        assert not any(literal_value(relation, vector, q) for relation in plucker_relations(n))


@draws.over_prime_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_a_relation_is_evaluated_term_by_term(field: Field, n: int, data: st.DataObject) -> None:
    alpha = data.draw(draws.trivectors(field, n))
    vector = draws.ints(alpha.coordinates)
    for relation in plucker_relations(n):
        expected = literal_value(relation, vector, field.characteristic)
        assert int(relation.evaluate(alpha.coordinates, field.zero)) == expected


@draws.in_six_and_seven
def test_a_relation_is_written_as_it_is_evaluated(n: int) -> None:
    basis = list(combinations(range(n), 3))
    for relation in plucker_relations(n):
        text = str(relation)
        assert re.fullmatch(r"−?x\d{3}·x\d{3}( [+−] x\d{3}·x\d{3})+", text)
        found = re.findall(r"(^|[+−]) ?x(\d{3})·x(\d{3})", text)
        assert relation.terms == tuple(
            (-1 if sign == "−" else 1, *(basis.index(tuple(map(int, name))) for name in names))
            for sign, *names in found
        )


def test_over_two_elements_exactly_the_planes_and_zero_satisfy_the_relations() -> None:
    bits = np.arange(2**20, dtype=np.uint32)
    coordinates = [((bits >> (19 - i)) & 1).astype(np.int8) for i in range(20)]
    satisfied = np.ones(2**20, dtype=bool)
    for relation in plucker_relations(6):
        satisfied &= relation.evaluate(coordinates, np.zeros(2**20, np.int8)) % 2 == 0
    found = {tuple(int(c[k]) for c in coordinates) for k in np.flatnonzero(satisfied) if k}
    assert len(found) == PLANES[6]
    assert found == oracle.decomposables(2)


# Decomposing, against the set of all planes


def decomposed(field: Field, rows: Sequence[Sequence[int]], n: int, q: int) -> bool:
    """Whether the plane with these rows is recovered from its Plücker vector."""
    found = Trivector(field, oracle.plucker(rows, q)).decompose()
    if isinstance(found, Violation):
        return False
    return draws.literal_reduced(field, found, n)[0] == [list(row) for row in rows]


def test_every_plane_of_pg_5_2_is_recovered_from_its_vector() -> None:
    planes = list(oracle.all_planes(2))
    assert len(planes) == PLANES[6]
    assert all(decomposed(F2, rows, 6, 2) for rows in planes)


@pytest.mark.parametrize(("n", "q"), [(6, 3), (7, 2)])
def test_many_planes_of_finite_spaces_are_recovered(n: int, q: int) -> None:
    step = {(6, 3): 40, (7, 2): 20}[n, q]
    for rows in islice(oracle.all_planes(q, n), 0, None, step):
        assert decomposed(prime_field(q), rows, n, q)


@pytest.mark.long
@pytest.mark.parametrize(
    ("n", "q", "count"),
    [(6, 3, 33880), (7, 2, 11811)],  # Gaussian binomials [6,3]_3, [7,3]_2; classical
)
def test_every_plane_of_a_finite_space_is_recovered(n: int, q: int, count: int) -> None:
    planes = list(oracle.all_planes(q, n))
    assert len(planes) == count
    assert all(decomposed(prime_field(q), rows, n, q) for rows in planes)


def agrees(vector: Sequence[int], n: int, q: int) -> bool:
    """Whether the answer for one trivector is the literal one, its witness included."""
    alpha = Trivector(prime_field(q), vector)
    answer = alpha.is_decomposable()
    if answer != oracle.is_decomposable(vector, q, n):
        return False
    if answer:
        return True
    violation = alpha.decompose()
    assert isinstance(violation, Violation)
    value = literal_value(violation.relation, vector, q)
    return violation.relation in plucker_relations(n) and int(violation.value) == value != 0


@pytest.mark.parametrize(("n", "q"), [(6, 2), (6, 3), (7, 2)])
def test_a_trivector_is_decomposable_exactly_if_it_belongs_to_a_plane(n: int, q: int) -> None:
    rng = Random(7)
    size = {6: 20, 7: 35}[n]
    planes = sorted(oracle.decomposables(q, n))
    outcomes: Counter[bool] = Counter()
    for k in range(1800):
        vector = list(rng.choice(planes)) if k % 3 else [rng.randrange(q) for _ in range(size)]
        if k % 3 == 1:  # one coordinate off
            vector[rng.randrange(size)] += rng.randrange(q)
        if k % 3 == 2:  # a sum of two decomposables, most often in general position
            vector = [x + y for x, y in zip(vector, rng.choice(planes), strict=True)]
        vector = [x % q for x in vector]
        assert agrees(vector, n, q)
        outcomes[oracle.is_decomposable(vector, q, n)] += 1
    assert min(outcomes[True], outcomes[False]) > 100  # both answers were asked for


@pytest.mark.parametrize("field", [F2, prime_field(3)], ids=str)
def test_every_sum_of_at_most_three_basis_elements_is_judged_rightly(field: Field) -> None:
    q = field.characteristic
    for count in (1, 2, 3):
        for places in combinations(range(20), count):
            vector = [int(i in places) for i in range(20)]
            assert agrees(vector, 6, q)


@pytest.mark.long
def test_all_trivectors_over_two_elements_are_judged_rightly() -> None:
    zero, *rest = product((0, 1), repeat=20)
    assert Trivector(F2, zero).is_decomposable()
    count = 0
    for vector in rest:
        answer = Trivector(F2, vector).is_decomposable()
        assert answer == oracle.is_decomposable(vector, 2)
        count += answer
    assert count == PLANES[6]


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_a_sum_of_two_planes_is_decomposable_exactly_if_they_share_a_line(
    field: Field, n: int, data: st.DataObject
) -> None:
    # classical: the lines on a Grassmannian are its pencils
    common = data.draw(st.integers(0, 3))
    basis = data.draw(draws.invertible_matrices(field, n))
    first, second = basis[:3], basis[:common] + basis[3 : 6 - common]
    scalar = data.draw(draws.nonzero_elements(field))
    total = Trivector.from_vectors(field, first) + Trivector.from_vectors(field, second) * scalar
    assert total.is_decomposable() == (common >= 2)
    if common < 2:
        violation = total.decompose()
        assert isinstance(violation, Violation)
        assert violation.value
        value = violation.relation.evaluate(total.coordinates, field.zero)
        assert violation.value == value
        assert str(violation) == f"{violation.relation} = {value}, not 0"
        with pytest.raises(AttributeError):
            violation.value = field.zero  # a proof is not edited


def test_the_witness_is_the_first_relation_that_fails() -> None:
    alpha = Trivector.from_terms(QQ, 6, {(0, 1, 2): 1, (0, 3, 4): 2, (3, 4, 5): -3})
    values = [r.evaluate(alpha.coordinates, QQ.zero) for r in plucker_relations(6)]
    first = next(i for i, value in enumerate(values) if value)
    assert alpha.decompose() == Violation(plucker_relations(6)[first], values[first])


@draws.over_fields
@draws.in_six_and_seven
@draws.few
@given(data=st.data())
def test_the_candidate_rows_span_the_plane(field: Field, n: int, data: st.DataObject) -> None:
    plane = data.draw(draws.planes(field, n))
    scalar = data.draw(draws.nonzero_elements(field))
    rows = plane_candidate([scalar * x for x in plane.plucker], n, field.zero)
    assert draws.same_span(field, rows, plane.rows, n)
