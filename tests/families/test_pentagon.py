"""A_Q against its literal description: quadrics of P^5 that are singular at a point."""

from random import Random
from typing import Any

import pytest
import strategies as draws

from trivector.errors import DimensionError, UsageError
from trivector.families.pentagon import (
    pencil_planes,
    quadric_lagrangian,
    random_quadric_polar,
    ten_lines_polar,
)
from trivector.fields import QQ, Field, field_from_spec, prime_field
from trivector.fields.linear import kernel
from trivector.sections import LinearSection
from trivector.subspaces import Plane


def pentagon_quadric(k: int) -> dict[tuple[int, int], int]:
    """q_k = t² − s_{k+1}·s_{k+2} − s_{k+4}·t, by monomials; t is variable 0, s_i variable i + 1."""
    i, j, m = ((k + shift) % 5 + 1 for shift in (1, 2, 4))
    return {(0, 0): 1, (min(i, j), max(i, j)): -1, (0, m): -1}


def gradient(quadric: dict[tuple[int, int], Any], point: list[Any], field: Field) -> list[Any]:
    result = [field.zero] * 6
    for (i, j), value in quadric.items():
        result[i] = result[i] + field.element(value) * point[j]
        result[j] = result[j] + field.element(value) * point[i]
    return result


def point_of_the_surface(a: Any, b: Any, field: Field) -> list[Any]:
    """u_0 = a, u_1 = b, u_3 = 1 − ab, u_2 = (1 − a)/u_3, u_4 = (1 − b)/u_3 with t = 1."""
    one = field.one
    u3 = one - a * b
    return [one, a, b, (one - a) / u3, u3, (one - b) / u3]


def singular_quadric(field: Field, point: list[Any], rng: Random) -> dict[tuple[int, int], Any]:
    """A random quadric singular at a point of t = 1: products of forms that vanish there."""
    forms = []
    for i in range(1, 6):
        form = [field.zero] * 6
        form[0], form[i] = -point[i], field.one
        forms.append(form)
    total: dict[tuple[int, int], Any] = {}
    for i, first in enumerate(forms):
        for second in forms[i:]:
            factor = field.random_element(rng)
            for a, x in enumerate(first):
                for b, y in enumerate(second):
                    key = (min(a, b), max(a, b))
                    total[key] = total.get(key, field.zero) + factor * x * y
    return total


def polar_of(quadric: dict[tuple[int, int], Any], field: Field) -> list[list[Any]]:
    matrix = [[field.zero] * 6 for _ in range(6)]
    for (i, j), value in quadric.items():
        matrix[i][j] = matrix[i][j] + value
        matrix[j][i] = matrix[j][i] + value
    return matrix


def null_space_of_gradients(field: Field, gradients: list[list[Any]]) -> Plane | None:
    """The combinations of six quadrics whose gradient vanishes, if they form a plane."""
    rows = kernel(field, list(zip(*gradients, strict=True)), 6)
    return Plane.from_rows(field, rows) if len(rows) == 3 else None


FIELDS = [f for f in draws.FIELDS if f.order is None or f.order > 4]


@pytest.mark.parametrize("field", FIELDS, ids=lambda f: f.name)
def test_the_plane_of_quadrics_singular_at_a_node_lies_in_the_lagrangian(field: Field) -> None:
    rng = Random(3)
    found = 0
    while found < 3:
        a, b = field.random_element(rng), field.random_element(rng)
        if a * b == field.one:
            continue
        point = point_of_the_surface(a, b, field)
        for k in range(5):  # the point is on the surface
            value = sum(
                (
                    field.element(c) * point[i] * point[j]
                    for (i, j), c in pentagon_quadric(k).items()
                ),
                field.zero,
            )
            assert not value
        # Q modulo the q_k: what is singular at the point is Q + Σ c_k·q_k.
        quadric = singular_quadric(field, point, rng)
        for k in range(5):
            factor = field.random_element(rng)
            for key, value in pentagon_quadric(k).items():
                quadric[key] = quadric.get(key, field.zero) + factor * field.element(value)
        gradients = [gradient(pentagon_quadric(k), point, field) for k in range(5)]
        plane = null_space_of_gradients(field, [*gradients, gradient(quadric, point, field)])
        if plane is not None:
            assert quadric_lagrangian(field, polar_of(quadric, field)).contains(plane.plucker)
            found += 1


@draws.over_fields
def test_the_five_pencils_span_four_dimensions_and_lie_in_every_such_lagrangian(
    field: Field,
) -> None:
    planes = pencil_planes(field)
    assert len(set(planes)) == 5
    assert field.matrix([p.plucker for p in planes], 20).rank() == 4
    for seed in range(3):
        A = quadric_lagrangian(field, random_quadric_polar(field, Random(seed)))
        assert A.is_lagrangian()
        assert all(A.contains(plane.plucker) for plane in planes)


@pytest.mark.parametrize("name", ["Q", "F_3", "F_5", "F_7", "F_9"])
def test_the_ten_lines_give_twenty_planes(name: str) -> None:
    # "On Morin configurations of higher length", 2019, arXiv 1903.07480: ten lines give 20.
    field = field_from_spec(name)
    report = LinearSection(quadric_lagrangian(field, ten_lines_polar(field))).examine()
    assert (report.degree, report.reduced, len(report.planes)) == (20, True, 20)
    assert report.hilbert_function[:4] == (1, 10, 20, 20)


@pytest.mark.parametrize("name", ["F_2", "F_4", "F_8"])
def test_in_characteristic_two_the_ten_lines_give_twenty_two_planes(name: str) -> None:
    # 5 + c_2(Ω(−2K)) = 5 + 7 − 10 + 20 = 22 (derived here): two more at w² + w + 1 = 0.
    field = field_from_spec(name)
    report = LinearSection(quadric_lagrangian(field, ten_lines_polar(field))).examine()
    assert (report.degree, report.reduced) == (22, True)
    degrees = sorted(point.degree for point in report.points)
    assert degrees == ([1] * 22 if name == "F_4" else [1] * 20 + [2])


def test_a_smooth_curve_gives_the_five_pencils_only() -> None:
    field = prime_field(32003)
    report = LinearSection(
        quadric_lagrangian(field, random_quadric_polar(field, Random(1)))
    ).examine()
    assert (report.degree, set(report.planes)) == (5, set(pencil_planes(field)))


@pytest.mark.parametrize("seed", range(6))
def test_in_characteristic_two_a_finite_section_always_has_length_22(seed: int) -> None:
    field = field_from_spec("F_8")
    report = LinearSection(
        quadric_lagrangian(field, random_quadric_polar(field, Random(seed)))
    ).examine()
    assert report.infinite or report.degree == 22


def test_what_is_no_polar_form_is_refused() -> None:
    zero = [[0] * 6 for _ in range(6)]
    with pytest.raises(DimensionError, match="6×6"):
        quadric_lagrangian(QQ, zero[:5])
    crooked = [row[:] for row in zero]
    crooked[2][1] = 3
    with pytest.raises(UsageError, match=r"\(2, 1\) and \(1, 2\) .* not 3 and 0"):
        quadric_lagrangian(QQ, crooked)
    diagonal = [row[:] for row in zero]
    diagonal[4][4] = 1
    with pytest.raises(UsageError, match=r"zeros on the diagonal, but entry \(4, 4\) is 1"):
        quadric_lagrangian(prime_field(2), diagonal)
