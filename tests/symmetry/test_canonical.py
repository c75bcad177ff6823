"""Canonical forms: equal for equivalent configurations, and only for them."""

from itertools import combinations
from pathlib import Path
from random import Random
from typing import Any

import examples
import pytest
import strategies as draws
from hypothesis import given
from hypothesis import strategies as st

import trivector
from trivector.configurations import Configuration
from trivector.errors import MixedFieldsError, UsageError
from trivector.fields import QQ, Field, field_from_spec, prime_field
from trivector.subspaces import Plane
from trivector.symmetry import canonical_form, compare_configurations, equivalence_classes

DATA = Path(__file__).parents[2] / "data"
FINITE = ["F_3", "F_7", "F_101"]


def read(name: str, field: str | None = None) -> Configuration:
    configuration = trivector.read(DATA / f"{name}.json", field=field)
    assert isinstance(configuration, Configuration)
    return configuration


def moved(configuration: Configuration, rng: Random) -> Configuration:
    g = examples.random_invertible(configuration.field, configuration.n, rng)
    planes = [examples.image(configuration.field, g, plane) for plane in configuration.planes]
    rng.shuffle(planes)
    return Configuration(tuple(planes))


def check(configuration: Configuration) -> str:
    """The label, after the collineation to the representative has been followed literally."""
    form = canonical_form(configuration)
    k, g = configuration.field, form.collineation
    assert k.matrix(g.matrix, configuration.n).det()
    assert sorted(g.permutation) == list(range(len(configuration.planes)))
    for plane, image in zip(configuration.planes, g.permutation, strict=True):
        assert examples.image(k, g.matrix, plane) == form.configuration.planes[image]
    for permutation in form.automorphisms:
        planes = [configuration.planes[i] for i in permutation]
        assert set(planes) == set(configuration.planes)
    return form.label


def twenty(field: Field) -> tuple[Plane, ...]:
    return tuple(examples.over(field, examples.twenty_planes()))


SLOWER = [
    pytest.param("F_9", marks=pytest.mark.long),
    pytest.param({"modulus": "x^2+1"}, marks=pytest.mark.long),
]


@pytest.mark.parametrize("field", [*FINITE, "Q", *SLOWER], ids=str)
def test_images_have_one_label_and_other_subsets_have_others(field: Any) -> None:
    k, rng = field_from_spec(field), Random(str(field))
    planes = twenty(k)
    labels = {}
    for left_out in ((), (0,), (0, 1), (0, 4)):
        configuration = Configuration(
            tuple(plane for i, plane in enumerate(planes) if i not in left_out)
        )
        found = {check(configuration), check(moved(configuration, rng))}
        assert len(found) == 1
        labels[left_out] = found.pop()
    # Leaving out (0, 1) and (0, 4) differs: planes 0 and 1 meet on no other plane.
    assert len(set(labels.values())) == 4


@pytest.mark.parametrize(
    ("name", "field"),
    [
        ("f7-sixteen", None),
        ("del-pezzo-seventeen", "F_11"),
        ("del-pezzo-seventeen", None),
        ("quadric-ruling-twelve", "F_13"),
        ("twenty-one-moved", "F_5"),
        ("seven-planes-p6", "F_2"),
        ("seven-planes-p6", None),
    ],
)
def test_images_of_documents_have_one_label(name: str, field: str | None) -> None:
    configuration, rng = read(name, field), Random(name)
    assert len({check(moved(configuration, rng)) for _ in range(4)}) == 1


def test_a_different_field_gives_a_different_label() -> None:
    labels = {canonical_form(Configuration(twenty(field_from_spec(f)))).label for f in FINITE}
    assert len(labels) == 3


@pytest.mark.parametrize("q", [2, 3])
@given(data=st.data())
@draws.some
def test_labels_agree_with_comparisons_on_random_planes(q: int, data: Any) -> None:
    # Planes spanned by points of a small set share enough to be alike often.
    field = prime_field(q)
    vectors = data.draw(draws.invertible_matrices(field, 6))
    extra = data.draw(draws.matrices(field, 1, 6))
    pool = [*vectors, *extra]
    configurations = []
    for _ in range(2):
        triples = data.draw(
            st.lists(st.sampled_from(list(combinations(range(7), 3))), min_size=5, max_size=6)
        )
        rows = [[pool[i] for i in triple] for triple in triples]
        if any(len(draws.literal_reduced(field, plane, 6)[1]) < 3 for plane in rows):
            return
        configurations.append(Configuration.from_rows(field, rows))
    first, second = configurations
    try:
        labels = [canonical_form(c, limit=500).label for c in configurations]
    except UsageError:
        return
    assert (labels[0] == labels[1]) is compare_configurations(first, second).equivalent


def test_planes_whose_points_span_too_little_go_by_all_their_points() -> None:
    # Four planes of a pencil over F_3: only points of the planes make a frame.
    field, rng = prime_field(3), Random(7)
    unit = examples.unit
    rows = [[unit(0), unit(1), [0, 0, *d, 0, 0]] for d in ([1, 0], [0, 1], [1, 1], [1, 2])]
    pencil = Configuration.from_rows(field, rows)
    labels = {canonical_form(moved(pencil, rng), limit=10**5).label for _ in range(2)}
    solid = Configuration.from_rows(field, [*rows[:3], [unit(0), unit(2), unit(3)]])
    labels.add(canonical_form(solid, limit=10**5).label)
    assert len(labels) == 2


def test_a_random_class_of_subsets_is_sorted_as_pairwise_comparison_sorts_it() -> None:
    rng, k = Random(11), prime_field(7)
    planes = twenty(k)
    configurations = [
        moved(Configuration(tuple(rng.sample(planes, 4 + i % 3))), rng) for i in range(18)
    ]
    classes = equivalence_classes(configurations, limit=50)
    assert sorted(i for members in classes for i in members) == list(range(18))
    of = {i: members[0] for members in classes for i in members}
    for i, j in combinations(range(18), 2):
        answer = compare_configurations(configurations[i], configurations[j])
        assert answer.equivalent is (of[i] == of[j])


def test_what_has_no_frame_is_refused_with_advice() -> None:
    with pytest.raises(UsageError, match=r"do not span .* over Q they give no frame; compare"):
        canonical_form(Configuration(twenty(QQ)[:2]))
    with pytest.raises(UsageError, match="more elements than the limit allows"):
        canonical_form(Configuration(twenty(prime_field(7))[:2]), limit=5)
    with pytest.raises(UsageError, match="more than 2 frames"):
        canonical_form(Configuration(twenty(prime_field(7))), limit=2)
    with pytest.raises(MixedFieldsError):
        equivalence_classes([Configuration(twenty(QQ)), Configuration(twenty(prime_field(7)))])


def test_repeated_planes_belong_to_the_label() -> None:
    planes = twenty(prime_field(7))
    labels = {
        canonical_form(Configuration(planes)).label,
        canonical_form(Configuration((planes[3], *planes))).label,
        canonical_form(Configuration((*planes, planes[8]))).label,
    }
    assert len(labels) == 2


def test_over_q_scales_that_planes_leave_free_are_no_obstacle() -> None:
    # The diagonal matrices keep the seven planes of P^6, whose points span V.
    planes = examples.over(QQ, examples.seven_planes())
    g = examples.random_invertible(QQ, 7, Random(2))
    changed = [examples.image(QQ, g, plane) for plane in reversed(planes)]
    label = canonical_form(Configuration(tuple(changed))).label
    assert label == canonical_form(Configuration(tuple(planes))).label
