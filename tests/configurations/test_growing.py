"""Random pairwise incident planes in general position."""

from itertools import combinations
from random import Random

import examples
import pytest

from trivector import QQ, Configuration, LinearSection, Plane, Subspace
from trivector.configurations import has_expected_dimension, random_incident_planes
from trivector.configurations.growing import random_cut
from trivector.errors import UsageError
from trivector.families import CLASSICAL_FAMILIES, random_incident_few, twenty_planes
from trivector.fields import Field, field_from_spec, prime_field


def check(configuration: Configuration, field: Field, count: int) -> None:
    planes = configuration.planes
    assert configuration.field == field
    assert len(set(planes)) == len(planes) == count
    assert all(p.meet_dimension(q) >= 0 for p, q in combinations(planes, 2))


@pytest.mark.parametrize(("name", "count"), [("F_101", 9), ("F_101", 10), ("Q", 5)])
def test_the_planes_meet_and_the_section_has_the_expected_dimension(name: str, count: int) -> None:
    field = field_from_spec(name)
    configuration = random_incident_planes(field, count, Random(1))
    check(configuration, field, count)
    span = configuration.span()
    assert span.dimension == min(count, 10)
    if count >= 9:
        report = LinearSection(span.orthogonal()).examine(configuration.planes)
        assert report.projective_dimension == 0
        if count == 9:
            assert report.degree == 42  # the degree of G(3,6), classical


def test_the_same_seed_gives_the_same_planes() -> None:
    field = prime_field(101)
    made = [random_incident_planes(field, 8, Random(seed)) for seed in (1, 1, 2)]
    assert made[0] == made[1] != made[2]
    assert made[0].planes[7].to_entries()[0] == PINNED_ROW


PINNED_ROW = [1, 0, 0, 100, 37, 92]


@pytest.mark.long
def test_over_small_fields_too() -> None:
    for name, count in (("F_5", 5), ("F_7", 8), ("F_9", 6), ("F_3", 4), ("F_2", 3)):
        field = field_from_spec(name)
        check(random_incident_planes(field, count, Random(1)), field, count)


@pytest.mark.long
def test_seven_planes_over_q() -> None:
    check(random_incident_planes(QQ, 7, Random(1)), QQ, 7)


def test_members_of_an_infinite_family_are_not_in_general_position() -> None:
    # The section contains the family, of dimension 6, 6, 5, 3, 2, 2; they span dimension ten.
    field = prime_field(101)
    for family in CLASSICAL_FAMILIES.values():
        planes = family.random_planes(field, 10, Random(1))
        assert not has_expected_dimension(planes, Random(1))
    assert not has_expected_dimension(
        CLASSICAL_FAMILIES["point"].random_planes(QQ, 7, Random(1)), Random(1)
    )


def test_the_twenty_and_any_of_them_have_the_expected_dimension_as_examined() -> None:
    # 20, 17: finite (computed). Nine of them span less than the ten that would be general.
    for field in (prime_field(7), prime_field(101)):
        planes = twenty_planes(field)
        for count in (20, 17, 9, 5):
            space = Configuration(planes[:count]).span().orthogonal()
            if space.dimension <= 11:
                expected = LinearSection(space).examine().projective_dimension == 0
                assert has_expected_dimension(planes[:count], Random(1)) is expected


def test_a_configuration_with_a_larger_section_is_found_out_by_all_of_it() -> None:
    """Planes through a point are met by all planes through it, a family of dimension 6.

    Three of them span dimension 3, and 9 − 3 = 6 is what is expected; four do not.
    """
    field = prime_field(101)
    through = CLASSICAL_FAMILIES["point"].random_planes(field, 7, Random(3))
    assert has_expected_dimension(through[:3], Random(1))
    assert not has_expected_dimension(through[:4], Random(1))


def test_impossible_wishes_are_refused() -> None:
    with pytest.raises(UsageError, match="at least 1, not 0"):
        random_incident_planes(QQ, 0, Random(1))
    with pytest.raises(UsageError, match="over Q only 7"):
        random_incident_planes(QQ, 8, Random(1))
    with pytest.raises(UsageError, match=r"12 pairwise incident planes .* found in 1 attempts"):
        random_incident_planes(prime_field(2), 12, Random(1), attempts=1)


def test_a_random_cut_lies_in_the_space_and_has_its_dimension() -> None:
    for field in (QQ, prime_field(2), field_from_spec("F_9")):
        space = examples.random_subspace(field, 6, 12, Random(1))
        cut = random_cut(space, 5, Random(2))
        assert isinstance(cut, Subspace)
        assert cut.dimension == 5
        assert all(space.contains(row) for row in cut.rows)


def test_greedy_growth_without_the_test_would_be_special() -> None:
    """The test of the dimension is not idle: freely chosen planes over F_7 often fail it."""
    field = prime_field(7)
    verdicts = []
    for seed in range(6):
        planes: tuple[Plane, ...] = random_incident_few(field, 7, Random(seed))
        verdicts.append(has_expected_dimension(planes, Random(seed)))
    assert False in verdicts
