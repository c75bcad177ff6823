"""One configuration, every question, end to end, and never "complete" when it is not."""

import json
from itertools import combinations
from pathlib import Path
from random import Random
from typing import Any

import examples
import oracle
import pytest
import strategies as draws
from hypothesis import given, settings
from hypothesis import strategies as st

import trivector
from trivector.configurations import Configuration, Examination
from trivector.errors import DimensionError, MixedFieldsError
from trivector.fields import QQ, Field, prime_field
from trivector.sections import Limits
from trivector.subspaces import Plane

F2, F3, F7, F101 = (prime_field(p) for p in (2, 3, 7, 101))
LARGE = prime_field(examples.LARGE_PRIME)
DATA = Path(__file__).parents[2] / "data"

# Points over ℚ from a few primes, short sweeps and narrow matrices: enough for every verdict
# below, and over F_2, where random forms have to come from extensions, very much faster.
QUICK = Limits(max_columns=700, max_lift_primes=2, max_points=5000)

NARROW = Limits(max_columns=300, max_points=5000)

very_few = settings(max_examples=5, deadline=None)

EXAMINATION_KEYS = {
    "kind",
    "field",
    "dimension",
    "planes",
    "distinct",
    "pairs",
    "disjoint_pairs",
    "pairwise_incident",
    "span",
    "section",
    "complete",
    "missing",
}


def examine(planes: list[Plane], limits: Limits | None = QUICK, **options: Any) -> Examination:
    return Configuration(tuple(planes)).examine(limits=limits, **options)


def twenty(field: Field) -> list[Plane]:
    return examples.over(field, examples.twenty_planes())


def verdict(examination: Examination) -> dict[str, Any]:
    """What must not depend on coordinates, order or seed."""
    section = examination.section
    return {
        "distinct": examination.distinct,
        "pairs": examination.pairs,
        "incident": examination.pairwise_incident,
        "span": examination.span.dimension,
        "isotropic": examination.isotropic,
        "lagrangian": examination.lagrangian,
        "totally_singular": examination.totally_singular,
        "dimension": section.projective_dimension,
        "infinite": section.infinite,
        "degree": section.degree,
        "hilbert": section.hilbert_function,
        "further": section.further,
        "closure": examination.complete_over_closure,
        "exit": examination.exit_code,
    }


def literal_pairs(planes: list[Plane]) -> tuple[dict[int, int], list[tuple[int, int]]]:
    """How many pairs meet in which dimension, and the disjoint ones, by ranks."""
    counts = dict.fromkeys((2, 1, 0, -1), 0)
    disjoint = []
    for (i, first), (j, second) in combinations(enumerate(planes), 2):
        matrix = first.field.matrix([*first.rows, *second.rows], first.n)
        meet = 5 - int(matrix.rank())
        counts[meet] += 1
        if meet < 0:
            disjoint.append((i, j))
    return counts, disjoint


# The files


DATA_ROWS = [
    # file, planes, span, incident, complete, section (dimension, degree), H
    # Twenty, seventeen and sixteen planes: computed, H = 1, 10, 20, k, k (the first values; the
    # del Pezzo construction gives k = n + 10 for n rational components). Seven: published,
    # arXiv 1204.6257. One ruling: classical, P³ by quadrics.
    ("twenty-planes", 20, 10, True, True, (0, 20), (1, 10, 20, 20)),
    ("twenty-minus-three", 17, 10, True, False, (0, 20), (1, 10, 20, 20)),
    ("del-pezzo-seventeen", 17, 10, True, True, (0, 17), (1, 10, 20, 17, 17)),
    ("f7-sixteen", 16, 10, True, True, (0, 16), (1, 10, 20, 16, 16)),
    ("seven-planes-p6", 7, 7, True, True, (0, 7), (1, 7, 7, 7)),
    ("quadric-ruling-twelve", 12, 10, True, False, (3, 8), (1, 10, 35, 84, 165, 286)),
]


@pytest.mark.parametrize(
    ("name", "count", "span", "incident", "complete", "section", "hilbert"),
    DATA_ROWS,
    ids=[row[0] for row in DATA_ROWS],
)
def test_the_files_have_the_answers_that_their_construction_promises(
    name: str,
    count: int,
    span: int,
    incident: bool,
    complete: bool,
    section: tuple[int, int],
    hilbert: tuple[int, ...],
) -> None:
    configuration = trivector.read(DATA / f"{name}.json")
    examination = configuration.examine()
    counts, _ = literal_pairs(list(configuration.planes))
    assert len(examination.planes) == examination.distinct == count
    assert vars(examination.pairs) == {
        "equal": 0,
        "line": counts[1],
        "point": counts[0],
        "disjoint": 0,
    }
    assert counts[-1] == 0
    assert examination.pairwise_incident is incident
    assert examination.span.dimension == span
    assert examination.lagrangian is (True if configuration.n == 6 else None)
    report = examination.section
    assert (report.projective_dimension, report.degree) == section
    assert report.hilbert_function == hilbert
    assert examination.complete_over_closure is complete
    assert examination.exit_code == (0 if complete else 1)
    assert examination.complete_over_base is not (not complete)
    check_missing(examination)


def test_the_moved_plane_misses_others_and_completeness_does_not_apply() -> None:
    configuration = trivector.read(DATA / "twenty-one-moved.json")
    planes = list(configuration.planes)
    assert planes == examples.over(QQ, examples.moved_twenty())
    examination = configuration.examine()
    counts, disjoint = literal_pairs(planes)
    assert disjoint
    assert all(i == 0 for i, _ in disjoint)  # only the moved one is disjoint from others
    assert list(examination.disjoint_pairs) == disjoint
    assert examination.pairs.disjoint == counts[-1] == len(disjoint)
    assert examination.pairwise_incident is False
    assert examination.isotropic is False
    assert examination.offending_pair is not None
    assert examination.complete_over_closure is None
    assert examination.complete_over_base is None
    assert examination.exit_code == 1


def test_the_file_of_the_twenty_planes_is_the_formula() -> None:
    assert list(trivector.read(DATA / "twenty-planes.json").planes) == twenty(QQ)
    seven = trivector.read(DATA / "seven-planes-p6.json").planes
    assert list(seven) == examples.over(QQ, examples.seven_planes())


# The twenty planes


@pytest.mark.parametrize("field", [QQ, F3, F7, LARGE], ids=str)
def test_the_twenty_planes_meet_in_190_points_and_are_complete(field: Field) -> None:
    # computed: pairwise in a point, span Lagrangian, H = 1, 10, 20, 20, …, complete
    examination = examine(twenty(field))
    assert vars(examination.pairs) == {"equal": 0, "line": 0, "point": 190, "disjoint": 0}
    assert examination.span.dimension == 10
    assert examination.isotropic is True
    assert examination.lagrangian is True
    assert examination.complete_over_closure is True
    assert examination.complete_over_base is True
    assert examination.missing == ()
    assert examination.exit_code == 0


def test_over_f2_the_twenty_planes_are_five_and_not_complete() -> None:
    # Signs do not matter modulo 2: four planes of each matching coincide, and the five that
    # are left all contain the point (1, …, 1).
    planes = twenty(F2)
    assert len(set(planes)) == 5
    everybody = Plane.from_rows(F2, [[1] * 6, [1, 1, 0, 0, 0, 0], [0, 0, 1, 1, 0, 0]])
    assert everybody == planes[0]
    examination = examine(planes)
    assert examination.distinct == 5
    assert vars(examination.pairs) == {"equal": 30, "line": 0, "point": 160, "disjoint": 0}
    assert examination.pairwise_incident is True
    assert examination.totally_singular is True
    assert examination.complete_over_closure is False
    assert examination.complete_over_base is not True
    further = examples.planes_meeting_all(2, planes)
    assert len(further) > 5


def check_missing(examination: Examination) -> None:
    """What is listed as missing meets all planes and is none of them; if exhaustive, exact."""
    for plane in examination.missing:
        assert plane not in examination.planes
        assert all(plane.meet_dimension(other) >= 0 for other in examination.planes)
    if examination.missing:
        assert examination.complete_over_base is False
        assert examination.complete_over_closure is False


@pytest.mark.parametrize("field", [QQ, F2, F3, F7, LARGE], ids=str)
def test_no_nineteen_of_the_twenty_planes_are_complete(field: Field) -> None:
    # Over F_2 the twenty coincide in five, and each removal leaves all five of them, which
    # are not complete either.
    planes = twenty(field)
    for i in range(20):
        if field is F2 and i >= 4:
            assert set(planes[:i] + planes[i + 1 :]) == set(planes[1:])
            continue  # the same five planes as in the four removals before
        examination = examine(planes[:i] + planes[i + 1 :], NARROW if field is F2 else QUICK)
        assert examination.pairwise_incident is True
        assert examination.complete_over_closure is False
        assert examination.complete_over_base is not True
        assert examination.exit_code == 1
        check_missing(examination)
        if field is F2:
            assert examination.distinct == 5
        else:
            assert examination.section.further == 1
            assert set(examination.missing) <= {planes[i]}


@pytest.mark.long
@pytest.mark.parametrize("field", [QQ, F2], ids=str)
def test_no_nineteen_of_the_twenty_planes_are_complete_with_the_usual_limits(
    field: Field,
) -> None:
    planes = twenty(field)
    for i in range(20) if field is QQ else (0,):
        examination = examine(planes[:i] + planes[i + 1 :], None)
        assert examination.complete_over_closure is False
        assert set(examination.missing) == {planes[i]} or field is F2


@pytest.mark.parametrize("field", [QQ, F3, F7, LARGE], ids=str)
def test_neither_is_the_configuration_without_several_planes(field: Field) -> None:
    planes, rng = twenty(field), Random(2)
    for count in (2, 2, 2, 3, 6):
        gone = rng.sample(planes, count)
        examination = examine([plane for plane in planes if plane not in gone])
        assert examination.complete_over_closure is False
        assert examination.complete_over_base is not True
        check_missing(examination)
        if examination.span.dimension == 10:
            assert examination.section.further == count
            assert set(examination.missing) <= set(gone)


@pytest.mark.parametrize("name", ["del-pezzo-seventeen", "f7-sixteen", "seven-planes-p6"])
def test_every_plane_of_the_other_complete_files_is_needed(name: str) -> None:
    planes = list(trivector.read(DATA / f"{name}.json").planes)
    for i in range(0, len(planes), 3):
        examination = examine(planes[:i] + planes[i + 1 :])
        assert examination.complete_over_closure is False
        assert examination.complete_over_base is not True
        check_missing(examination)


# What the answers must not depend on


@pytest.mark.parametrize("field", [QQ, F3, F7, LARGE], ids=str)
@very_few
@given(data=st.data(), left_out=st.integers(0, 2))
def test_collineations_do_not_change_the_verdict(
    field: Field, data: st.DataObject, left_out: int
) -> None:
    planes = twenty(field)[left_out:]
    g = data.draw(draws.invertible_matrices(field, 6))
    images = [examples.image(field, g, plane) for plane in planes]
    assert verdict(examine(images)) == verdict(examine(planes))


@pytest.mark.parametrize("field", [QQ, F3, F7, LARGE], ids=str)
@very_few
@given(seed=st.integers(0, 2**32))
def test_order_repetition_and_seed_do_not_change_the_verdict(field: Field, seed: int) -> None:
    rng = Random(seed)
    planes = twenty(field)[: rng.choice([16, 19, 20])]
    expected = verdict(examine(planes))
    shuffled = rng.sample(planes, len(planes))
    assert verdict(examine(shuffled, seed=seed)) == expected
    repeated = verdict(examine([*shuffled, *planes[:3]]))
    pairs = repeated.pop("pairs")
    assert pairs.equal == 3
    assert repeated == {key: value for key, value in expected.items() if key != "pairs"}


@pytest.mark.parametrize("field", [QQ, F3], ids=str)
def test_the_same_seed_gives_the_same_answer_to_the_letter(field: Field) -> None:
    first, second = (examine(twenty(field)[1:], seed=5).to_json() for _ in range(2))
    assert first == second
    assert first["seed"] == 5


# Small and odd configurations


@pytest.mark.parametrize("field", [QQ, F2, F3, F101, LARGE], ids=str)
@pytest.mark.parametrize("n", [6, 7])
def test_one_plane_is_pairwise_incident_and_never_complete(field: Field, n: int) -> None:
    plane = examples.random_plane(field, n, Random(n))
    examination = examine([plane])
    assert vars(examination.pairs) == {"equal": 0, "line": 0, "point": 0, "disjoint": 0}
    assert examination.pairwise_incident is True
    assert examination.span.dimension == 1
    # classical: the planes that meet a fixed one are a divisor (n = 6), of codimension 2 (n = 7)
    assert examination.section.infinite is True
    assert examination.section.projective_dimension in (8 if n == 6 else 10, None)
    assert examination.complete_over_closure is False
    assert examination.complete_over_base is not True
    assert examination.exit_code == 1


@pytest.mark.parametrize("field", [QQ, F3, LARGE], ids=str)
def test_one_plane_many_times_is_one_plane(field: Field) -> None:
    plane = examples.random_plane(field, 6, Random(1))
    examination = examine([plane] * 4)
    assert examination.distinct == 1
    assert examination.pairs.equal == 6
    assert examination.complete_over_closure is False


@pytest.mark.parametrize("field", [QQ, F2, F3, F101, LARGE], ids=str)
def test_a_disjoint_pair_is_named_and_completeness_does_not_apply(field: Field) -> None:
    planes = examples.over(
        field,
        [
            [examples.unit(i) for i in triple]
            for triple in ((0, 1, 2), (0, 3, 4), (3, 4, 5), (1, 3, 5))
        ],
    )
    examination = examine(planes)
    assert examination.disjoint_pairs == ((0, 2),)
    assert vars(examination.pairs) == {"equal": 0, "line": 2, "point": 3, "disjoint": 1}
    assert examination.pairwise_incident is False
    assert examination.isotropic is False
    assert examination.lagrangian is False
    assert examination.complete_over_closure is None
    assert examination.complete_over_base is None
    assert examination.exit_code == 1


def test_in_seven_space_incidence_and_isotropy_are_different_questions() -> None:
    # 012 and 345 are disjoint; in seven-space there is no pairing to see it.
    planes = examples.over(QQ, [[examples.unit(i + k, 7) for i in range(3)] for k in (0, 3)])
    examination = examine(planes)
    assert examination.disjoint_pairs == ((0, 1),)
    assert examination.isotropic is None
    assert examination.lagrangian is None
    assert examination.complete_over_closure is None
    assert examination.exit_code == 1


@pytest.mark.parametrize("field", [QQ, F3, LARGE], ids=str)
@pytest.mark.parametrize("count", [2, 3, 4])
def test_a_few_planes_of_small_span_are_never_complete(field: Field, count: int) -> None:
    # published: a finite complete family spans dimension 9 at least (design: §5, classical
    # dimension count: 20 − rank ≥ 12 makes the section infinite)
    planes = examples.random_incident_planes(field, count, Random(count))
    examination = examine(planes)
    assert examination.pairwise_incident is True
    assert examination.span.dimension == count
    assert examination.section.infinite is True
    assert examination.complete_over_closure is False
    check_missing(examination)


@pytest.mark.parametrize("family", examples.families(), ids=lambda family: family.name)
@pytest.mark.parametrize("field", [F101, QQ], ids=str)
def test_planes_of_an_infinite_family_are_never_complete(
    family: examples.Family, field: Field
) -> None:
    rng = Random(4)
    planes = [family.random_plane(field, rng) for _ in range(12)]
    examination = examine(planes, Limits(max_points=2000, max_lift_primes=3))
    assert examination.pairwise_incident is True
    assert examination.lagrangian is True
    # classical, see examples.families: 12 general members span
    assert examination.section.projective_dimension == family.dimension
    assert examination.section.degree == family.degree
    assert examination.complete_over_closure is False
    check_missing(examination)


def test_planes_through_a_point_of_p6_are_not_complete() -> None:
    # G(2,6) ⊂ P^14 (classical: dimension 8): the planes through e0, of which these are seven
    # that span less.
    rows = [[examples.unit(0, 7), examples.unit(i, 7), examples.unit(i % 6 + 1, 7)] for i in (1, 2)]
    examination = examine(examples.over(F101, rows))
    assert examination.pairwise_incident is True
    assert examination.complete_over_closure is False


# Long entries


def moved_by_long_entries(seed: int, digits: int, *, unimodular: bool) -> list[Plane]:
    rng = Random(seed)
    bound = 10**digits

    def triangle(lower: bool) -> list[list[int]]:
        return [
            [
                int(i == j) if (i == j or (i < j) == lower) else rng.randint(-bound, bound)
                for j in range(6)
            ]
            for i in range(6)
        ]

    if unimodular:
        g = draws.product(QQ, *([[QQ.element(x) for x in r] for r in triangle(b)] for b in (1, 0)))
    else:
        g = [[QQ.element(rng.randint(-bound, bound)) for _ in range(6)] for _ in range(6)]
    planes = twenty(QQ)
    moved = []
    for plane in planes:
        rows = [
            [sum((a * x for a, x in zip(r, w, strict=True)), QQ.zero) for r in g]
            for w in plane.rows
        ]
        moved.append(rows)
    longest = max(len(str(abs(int(x.p)))) for rows in moved for row in rows for x in row)
    assert longest >= 40
    return [Plane.from_rows(QQ, rows) for rows in moved]


def test_planes_with_forty_digits_are_complete_or_not_like_any_others() -> None:
    planes = moved_by_long_entries(20, 20, unimodular=True)
    assert verdict(examine(planes)) == verdict(examine(twenty(QQ)))
    assert verdict(examine(planes[1:])) == verdict(examine(twenty(QQ)[1:]))


@pytest.mark.long
def test_a_matrix_of_random_forty_digit_numbers_changes_nothing() -> None:
    planes = moved_by_long_entries(40, 40, unimodular=False)
    for left_out in (0, 1, 2):
        examination = examine(planes[left_out:], None)
        assert verdict(examination) == verdict(examine(twenty(QQ)[left_out:]))
        assert set(examination.missing) <= set(planes[:left_out])


# Against every plane over F_2 and F_3


def check_against_all_planes(planes: list[Plane], further: list[Plane]) -> Examination:
    """``further``: every other plane over the base field that meets all of them."""
    examination = examine(planes, NARROW)
    assert examination.pairwise_incident is True
    if further:
        assert examination.complete_over_closure is not True
        assert examination.complete_over_base is not True
    else:
        assert examination.complete_over_base is not False
    assert set(examination.missing) <= set(further)
    section = examination.section
    if section.further is not None:
        assert section.further >= len(further)
    if len(planes) + len(further) > 42:  # classical: the degree of G(3,6)
        assert section.infinite is not False
    return examination


@pytest.mark.parametrize(("field", "count"), [(F2, 10), (F3, 4)], ids=str)
def test_complete_is_never_said_when_one_more_plane_meets_all(field: Field, count: int) -> None:
    seen = set()
    for seed in range(count):
        planes, further = examples.random_clique(field, 4 + 2 * seed, Random(seed))
        check_against_all_planes(planes, further)
        seen.add(bool(further))
    assert any(seen)


@pytest.mark.long
@pytest.mark.parametrize("field", [F2, F3], ids=str)
@draws.some
@given(seed=st.integers(0, 2**32), size=st.integers(1, 40))
def test_complete_is_never_said_of_any_random_clique_with_one_more_plane(
    field: Field, seed: int, size: int
) -> None:
    check_against_all_planes(*examples.random_clique(field, size, Random(seed)))


def test_maximal_cliques_over_f2_are_never_called_incomplete_over_f2() -> None:
    for seed in range(3):
        planes, further = examples.random_clique(F2, 1395, Random(seed))
        assert further == []
        check_against_all_planes(planes, [])
        check_against_all_planes(planes[1:], planes[:1])


def test_over_f3_brute_force_finds_the_removed_planes_and_no_others() -> None:
    # computed: exactly twenty planes over F_3 meet all twenty
    planes = twenty(F3)
    for i, j in ((0, 7), (3, 3), (12, 19)):
        kept = [plane for plane in planes if plane not in (planes[i], planes[j])]
        meeting = {Plane.from_rows(F3, rows) for rows in examples.planes_meeting_all(3, kept)}
        assert meeting == set(planes)
        check_against_all_planes(kept, [planes[i], planes[j]][: 20 - len(kept)])
    check_against_all_planes(planes, [])


@pytest.mark.parametrize("q", [2, 3])
def test_pairs_are_counted_as_by_their_common_points(q: int) -> None:
    field = prime_field(q)
    planes = [examples.random_plane(field, 6, Random(i)) for i in range(12)]
    planes += planes[:2]
    expected = dict.fromkeys((2, 1, 0, -1), 0)
    for first, second in combinations(planes, 2):
        rows = [tuple(draws.ints(row) for row in plane.rows) for plane in (first, second)]
        expected[oracle.meet_dimension(*rows, q)] += 1
    pairs = Configuration(tuple(planes)).examine(limits=QUICK).pairs
    assert (pairs.equal, pairs.line, pairs.point, pairs.disjoint) == (
        expected[2],
        expected[1],
        expected[0],
        expected[-1],
    )


# The answer as data and as words


@pytest.mark.parametrize("field", [QQ, F3], ids=str)
@pytest.mark.parametrize("left_out", [0, 1])
def test_an_examination_has_the_keys_of_the_format(field: Field, left_out: int) -> None:
    data = json.loads(json.dumps(examine(twenty(field)[left_out:]).to_json()))
    assert set(data) >= EXAMINATION_KEYS
    assert data["kind"] == "examination"
    assert data["field"] == ("Q" if field is QQ else "F_3")
    assert data["dimension"] == 6
    assert data["planes"] == data["distinct"] == 20 - left_out
    count = data["planes"]
    assert data["pairs"] == {
        "equal": 0,
        "line": 0,
        "point": count * (count - 1) // 2,
        "disjoint": 0,
    }
    assert data["disjoint_pairs"] == []
    assert data["pairwise_incident"] is True
    assert (
        data["span"].items()
        >= {
            "dimension": 10,
            "isotropic": True,
            "lagrangian": True,
        }.items()
    )
    assert data["section"]["degree"] == 20
    assert set(data["complete"]) == {"over_base", "over_closure"}
    assert data["complete"]["over_closure"] is (left_out == 0)
    assert isinstance(data["missing"], list)


def test_completeness_is_null_when_planes_miss_each_other() -> None:
    data = examine(examples.over(F7, examples.moved_twenty())).to_json()
    assert data["complete"] == {"over_base": None, "over_closure": None}
    assert all(i < j for i, j in data["disjoint_pairs"])


def test_undecided_is_exit_code_three() -> None:
    examination = examine(twenty(F7), Limits(max_degree=1))
    assert examination.complete_over_closure is None
    assert examination.exit_code == 3
    assert examination.section.limit in str(examination)


def test_the_words_name_the_closure_and_the_reason() -> None:
    text = str(examine(twenty(QQ)))
    assert "Complete over the algebraic closure of Q" in text
    assert "H(3) = 20" in text
    text = str(examine(twenty(QQ)[1:]))
    assert "Not complete over the algebraic closure of Q" in text
    text = str(examine(examples.over(F7, examples.moved_twenty())))
    assert "Not pairwise incident" in text


def test_a_configuration_checks_what_it_is_given() -> None:
    with pytest.raises(DimensionError, match="at least one plane"):
        Configuration(())
    plane = twenty(QQ)[0]
    with pytest.raises(MixedFieldsError, match="F_7"):
        Configuration((plane, twenty(F7)[0]))
    with pytest.raises(MixedFieldsError, match="n = 7"):
        Configuration((plane, examples.over(QQ, examples.seven_planes())[0]))
    with pytest.raises(DimensionError, match="2 labels for 1 planes"):
        Configuration((plane,), ("a", "b"))
