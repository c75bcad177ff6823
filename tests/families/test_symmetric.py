"""Complete configurations that a signed permutation keeps, against their literal description."""

from itertools import combinations

import oracle
import pytest

from trivector.configurations import Configuration
from trivector.errors import UsageError
from trivector.families.symmetric import SYMMETRIC, plane_orbit, symmetric_planes
from trivector.fields import QQ, field_from_spec, prime_field
from trivector.subspaces import Plane

# ⟨e0+e4+e5, e1−e3, e2⟩ and ⟨e0+e5, e1, e4⟩, moved by e1 → e2 → e3 → e4 → e5 → e1 by hand.
TEN = [
    [(1, 0, 0, 0, 1, 1), (0, 1, 0, -1, 0, 0), (0, 0, 1, 0, 0, 0)],
    [(1, 1, 0, 0, 0, 1), (0, 0, 1, 0, -1, 0), (0, 0, 0, 1, 0, 0)],
    [(1, 1, 1, 0, 0, 0), (0, 0, 0, 1, 0, -1), (0, 0, 0, 0, 1, 0)],
    [(1, 0, 1, 1, 0, 0), (0, -1, 0, 0, 1, 0), (0, 0, 0, 0, 0, 1)],
    [(1, 0, 0, 1, 1, 0), (0, 0, -1, 0, 0, 1), (0, 1, 0, 0, 0, 0)],
    [(1, 0, 0, 0, 0, 1), (0, 1, 0, 0, 0, 0), (0, 0, 0, 0, 1, 0)],
    [(1, 1, 0, 0, 0, 0), (0, 0, 1, 0, 0, 0), (0, 0, 0, 0, 0, 1)],
    [(1, 0, 1, 0, 0, 0), (0, 0, 0, 1, 0, 0), (0, 1, 0, 0, 0, 0)],
    [(1, 0, 0, 1, 0, 0), (0, 0, 0, 0, 1, 0), (0, 0, 1, 0, 0, 0)],
    [(1, 0, 0, 0, 1, 0), (0, 0, 0, 0, 0, 1), (0, 0, 0, 1, 0, 0)],
]


def test_the_ten_planes_are_two_and_their_images_under_a_cycle_of_order_five() -> None:
    assert symmetric_planes(QQ, 10) == tuple(Plane.from_rows(QQ, rows) for rows in TEN)


def test_brute_force_over_f3_finds_no_eleventh_plane_that_meets_the_ten() -> None:
    # All 33880 planes of PG(5,3), each tried against ten Plücker vectors; nothing of the package.
    vectors = [oracle.plucker([[x % 3 for x in row] for row in rows], 3) for rows in TEN]
    left = [
        rows
        for rows in oracle.all_planes(3)
        if all(oracle.pairing(oracle.plucker(rows, 3), vector, 3) == 0 for vector in vectors[:1])
    ]
    for vector in vectors[1:]:
        left = [rows for rows in left if oracle.pairing(oracle.plucker(rows, 3), vector, 3) == 0]
    assert len(left) == 10


@pytest.mark.parametrize("length", SYMMETRIC)
def test_each_is_pairwise_incident_and_complete_over_the_closure_of_q(length: int) -> None:
    planes = symmetric_planes(QQ, length)
    assert all(p.meet_dimension(q) == 0 for p, q in combinations(planes, 2))
    examination = Configuration(planes).examine()
    assert examination.lagrangian is True
    assert examination.complete_over_closure is True
    assert examination.section.degree == length == len(planes)
    assert examination.section.hilbert_function[:4] == (1, 10, 20, length)


@pytest.mark.parametrize("length", SYMMETRIC)
def test_a_configuration_without_one_of_its_planes_is_completed_by_it(length: int) -> None:
    # Eleven or more planes of a Lagrangian still span it without one; ten do not.
    planes = symmetric_planes(QQ, length)
    if length > 10:
        examination = Configuration(planes[1:]).examine()
        assert examination.complete_over_closure is False
        assert examination.missing == (planes[0],)


@pytest.mark.parametrize("length", SYMMETRIC)
def test_the_signed_permutation_keeps_the_planes(length: int) -> None:
    images = SYMMETRIC[length].images
    planes = symmetric_planes(QQ, length)
    for plane in planes:
        rows = [[0] * 6 for _ in range(3)]
        for row, old in zip(rows, plane.rows, strict=True):
            for value, image in zip(old, images, strict=True):
                row[abs(image) - 1] = value * (1 if image > 0 else -1)
        assert Plane.from_rows(QQ, rows) in planes


def test_an_orbit_starts_with_its_plane_and_has_the_length_of_the_order() -> None:
    F = prime_field(5)
    plane = Plane.from_rows(F, [[1, 2, 0, 0, 0, 0], [0, 0, 1, 0, 0, 3], [0, 0, 0, 1, 0, 0]])
    orbit = plane_orbit(plane, (2, 3, 1, 5, 6, 4))
    assert orbit[0] == plane
    assert len(set(orbit)) == len(orbit) == 3
    assert plane_orbit(plane, (1, 2, 3, 4, 5, 6)) == [plane]


@pytest.mark.parametrize("name", ["F_3", "F_5", "F_7", "F_9"])
def test_ten_planes_are_complete_over_small_fields_too(name: str) -> None:
    examination = Configuration(symmetric_planes(field_from_spec(name), 10)).examine()
    assert (examination.lagrangian, examination.complete_over_closure) == (True, True)


def test_another_length_and_planes_that_coincide_are_refused() -> None:
    with pytest.raises(UsageError, match="no symmetric configuration of length 16; use 10, 11"):
        symmetric_planes(QQ, 16)
    with pytest.raises(UsageError, match="length 12 coincide over F_2"):
        symmetric_planes(prime_field(2), 12)
