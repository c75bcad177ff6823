"""Pencils of planes in a section, found through lines of planes that are known."""

from itertools import combinations
from random import Random
from typing import Any

import examples
import oracle
import pytest

from trivector import Configuration, LinearSection, Plane, Subspace, prime_field
from trivector.fields import QQ, Field, field_from_spec
from trivector.sections import Limits
from trivector.sections.lines_of_planes import find_pencil, find_planes_through_lines
from trivector.subspaces import Flat

FIELDS = ["Q", "F_2", "F_4", "F_7", {"modulus": "x^2-2"}]


def moved_six(field: Field, rng: Random) -> list[Plane]:
    g = examples.random_invertible(field, 7, rng)
    planes = examples.over(field, examples.seven_planes())[:6]
    return [examples.image(field, g, plane) for plane in planes]


@pytest.mark.parametrize("spec", FIELDS, ids=str)
def test_six_of_the_seven_planes_leave_a_pencil_in_any_coordinates(spec: Any) -> None:
    field = field_from_spec(spec)
    planes = moved_six(field, Random(5))
    section = Configuration(tuple(planes)).section().subspace
    pencil = find_pencil(section, planes)
    assert pencil is not None
    first, second = pencil
    assert first.meet_dimension(second) == 1
    # The pencil itself, not only its two planes: ω + t·ω′ is decomposable and in L.
    for t in (field.one, field.random_element(Random(1))):
        vector = [x + t * y for x, y in zip(first.plucker, second.plucker, strict=True)]
        assert section.contains(vector)
        Plane.from_plucker(field, vector)


@pytest.mark.parametrize("spec", FIELDS, ids=str)
def test_what_is_found_lies_in_the_section(spec: Any) -> None:
    field = field_from_spec(spec)
    planes = moved_six(field, Random(7))
    section = Configuration(tuple(planes)).section().subspace
    found = find_planes_through_lines(section, planes)
    assert len(set(found)) == len(found) > 3
    assert list(found) == sorted(found, key=Plane.sort_key)
    assert all(section.contains(plane.plucker) for plane in found)


def test_a_finite_section_has_no_pencil() -> None:
    field = prime_field(3)
    planes = tuple(examples.over(field, examples.twenty_planes()))
    section = Configuration(planes).section().subspace
    assert find_pencil(section, planes) is None
    assert set(find_planes_through_lines(section, planes)) <= set(planes)


def test_over_f2_every_coordinate_line_in_a_plane_of_the_section_is_used() -> None:
    field, rng = prime_field(2), Random(11)
    seen = 0
    for _ in range(6):
        section = examples.random_subspace(field, 6, 16, rng)
        inside = {
            Plane.from_rows(field, rows)
            for rows in oracle.all_planes(2)
            if section.contains([field.element(x) for x in oracle.plucker(rows, 2)])
        }
        found = set(find_planes_through_lines(section, ()))
        assert found <= inside
        for pair in combinations(range(6), 2):
            units = Flat.span(field, 6, [examples.unit(i) for i in pair])
            through = {plane for plane in inside if plane.join(units) == plane}
            seen += len(through)
            # A linear space of planes: spanned by those of a basis, which are found.
            span = Subspace.span(field, 6, [plane.plucker for plane in through])
            basis = Subspace.span(field, 6, [plane.plucker for plane in through & found])
            assert span == basis
    assert seen > 20


@pytest.mark.parametrize("spec", ["Q", "F_9", {"modulus": "x^2+1"}], ids=str)
def test_six_of_seven_are_proved_infinite_where_the_hilbert_function_is_out_of_reach(
    spec: Any,
) -> None:
    field = field_from_spec(spec)
    planes = moved_six(field, Random(3))
    limits = Limits(max_columns=160, max_points=0)
    report = Configuration(tuple(planes)).section().examine(planes, limits=limits)
    assert report.infinite is True
    assert "pencil" in report.method
    assert report.complete_over_closure is False


def test_over_q_missing_planes_are_found_in_any_coordinates() -> None:
    planes = moved_six(QQ, Random(2))
    report = LinearSection(Configuration(tuple(planes)).section().subspace).examine(planes)
    assert report.infinite is True
    assert report.others
