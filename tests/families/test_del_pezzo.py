"""Curves in |−2K| of the quintic del Pezzo surface: their nodes, and the planes they give."""

from collections import Counter
from itertools import combinations, product
from random import Random
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from trivector.configurations import Configuration
from trivector.errors import EntryError, FieldError, UsageError
from trivector.families.del_pezzo import (
    DelPezzoConfiguration,
    del_pezzo_configuration,
    ten_lines,
)
from trivector.families.del_pezzo_surface import DelPezzoSurface, QuadricSpace
from trivector.families.equations import (
    components_from_text,
    components_to_text,
    form_from_text,
    form_to_text,
)
from trivector.families.nodal_curves import member_of_class, nodal_curve, plane_curve
from trivector.families.random_del_pezzo import (
    intersection_number,
    random_classes,
    random_del_pezzo,
)
from trivector.families.residues import ResidueRing
from trivector.families.singular_points import singular_points
from trivector.families.small_frames import find_small_frame, in_frame
from trivector.families.ternary_forms import (
    add,
    from_coefficients,
    monomials,
    multiplicity,
    multiply,
)
from trivector.fields import QQ, Field, field_from_spec, finite_field, number_field, prime_field
from trivector.fields.linear import kernel
from trivector.sections import LinearSection
from trivector.subspaces import Plane

F2, F3, F5, F7, F101 = (prime_field(p) for p in (2, 3, 5, 7, 101))
LARGE = prime_field(32003)

THREE_CONICS = "2*x^2-3*x*y+3*x*z-2*y*z; -3*x*y-2*x*z+2*y^2+3*y*z; 2*x*y+3*x*z+3*y*z+2*z^2"
"""Thirteen planes: all eight points in which the conics meet off p1, …, p4 are rational."""


# Literal computations modulo p with dicts of ints, without anything of the package


def literal_value(form: dict[tuple[int, ...], int], point: tuple[int, ...], p: int) -> int:
    total = 0
    for exponents, value in form.items():
        for x, power in zip(point, exponents, strict=True):
            value *= x**power
        total += value
    return total % p


def literal_product(forms: list[dict[tuple[int, ...], int]], p: int) -> dict[tuple[int, ...], int]:
    total = {(0, 0, 0): 1}
    for form in forms:
        following: dict[tuple[int, ...], int] = {}
        for (a, x), (b, y) in product(total.items(), form.items()):
            key = tuple(i + j for i, j in zip(a, b, strict=True))
            following[key] = (following.get(key, 0) + x * y) % p
        total = following
    return total


def literal_singular_points(form: dict[tuple[int, ...], int], p: int) -> set[tuple[int, ...]]:
    """All points of P²(F_p) where the form and its three derivatives vanish."""
    derivatives = []
    for i in range(3):
        derivative: dict[tuple[int, ...], int] = {}
        for exponents, value in form.items():
            if exponents[i]:
                lowered = tuple(e - (j == i) for j, e in enumerate(exponents))
                derivative[lowered] = exponents[i] * value % p
        derivatives.append(derivative)
    points = [(1, y, z) for y in range(p) for z in range(p)]
    points += [(0, 1, z) for z in range(p)] + [(0, 0, 1)]
    return {
        point
        for point in points
        if not any(literal_value(g, point, p) for g in [form, *derivatives])
    }


BASE = {(1, 0, 0), (0, 1, 0), (0, 0, 1), (1, 1, 1)}


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize("field", [F7, prime_field(13)], ids=str)
def test_the_rational_nodes_are_the_singular_points_found_by_trying_all(
    field: Any, seed: int
) -> None:
    curve = random_del_pezzo(field, 12 + seed, Random(seed)).curve
    forms = [
        {e: int(value) for e, value in component.form.items()}
        for component in curve.components
        if component.form is not None
    ]
    sextic = literal_product(forms, field.order)
    found = {
        tuple(int(x.coefficients[0]) for x in node.coordinates)
        for node in curve.nodes
        if node.degree == 1 and node.index is None
    }
    assert found == literal_singular_points(sextic, field.order) - BASE


@pytest.mark.parametrize("field", [F2, F3, F7, QQ, finite_field(4)], ids=str)
def test_multiplicities_are_those_of_products(field: Field) -> None:
    # Classical: the multiplicity of a product is the sum. Conics through p_i have 1 there.
    conic = form_from_text(field, "x*y+x*z+y*z" if field.characteristic != 3 else "x*y+x*z-y*z")
    line = form_from_text(field, "x-y")
    together = multiply(multiply(conic, line), line)
    separate = [multiplicity(conic, i, field) + 2 * multiplicity(line, i, field) for i in range(4)]
    assert [multiplicity(together, i, field) for i in range(4)] == separate
    assert [multiplicity(line, i, field) for i in range(4)] == [0, 0, 1, 1]
    assert multiplicity(add(line, form_from_text(field, "z")), 3, field) == 0


def test_residues_compute_as_the_field_they_stand_for() -> None:
    field = finite_field(49)
    modulus, _ = next(
        (m, e) for m, e in F7.factor([F7.element(c) for c in (3, 6, 1)]) if len(m) == 3
    )
    ring, residue = ResidueRing(F7, modulus), F7.residue_field(modulus)
    values = [(a, b) for a in range(7) for b in range(7)]
    for first, second in zip(values, values[::-1], strict=True):
        x, y = (ring.residue([F7.element(c) for c in pair]) for pair in (first, second))
        u, v = residue.value(x.coefficients), residue.value(y.coefficients)
        assert residue.value((x * y - x).coefficients) == u * v - u
        if y:
            assert residue.value((x / y).coefficients) == u / v
    assert field.order == residue.field.order


# The planes, against their definition


def quadric_value(coefficients: list[Any], point: list[Any], field: Field) -> Any:
    pairs = [(i, j) for i in range(6) for j in range(i, 6)]
    return sum(
        (c * point[i] * point[j] for c, (i, j) in zip(coefficients, pairs, strict=True)),
        field.zero,
    )


def space_of(found: DelPezzoConfiguration) -> tuple[DelPezzoSurface, QuadricSpace]:
    surface = DelPezzoSurface(found.field)
    quadric = surface.quadric_cutting(found.curve.sextic)
    assert quadric is not None
    return surface, QuadricSpace(surface, quadric)


@pytest.mark.parametrize("field", [F7, F101, QQ, finite_field(8)], ids=str)
def test_quadrics_of_v_are_products_of_cubics_that_vanish_on_the_curve(field: Field) -> None:
    found = random_del_pezzo(field, 17, Random(2))
    surface, space = space_of(found)
    rng = Random(1)
    for _ in range(20):
        point = [field.random_element(rng) for _ in range(3)]
        image = surface.image(point, lambda x: x, field.zero)
        values = [quadric_value(list(q), image, field) for q in space.basis]
        assert not any(values[:5])
        sextic = field.zero
        for (i, j, k), value in found.curve.sextic.items():
            for coordinate, power in zip(point, (i, j, k), strict=True):
                for _ in range(power):
                    value = value * coordinate
            sextic = sextic + value
        assert values[5] == sextic


@pytest.mark.parametrize("field", [F7, F101, QQ], ids=str)
def test_the_planes_of_nodes_hold_quadrics_that_are_singular_there(field: Field) -> None:
    found = random_del_pezzo(field, 18, Random(4), rational=True)
    surface, space = space_of(found)
    rng = Random(1)
    for node, plane in zip(found.curve.nodes, found.planes[5:], strict=True):
        coordinates = [x.coefficients[0] for x in node.coordinates]
        if node.index is None:
            image = surface.image(coordinates, lambda x: x, field.zero)
        else:
            image = surface.image_of_direction(node.index, coordinates, lambda x: x)
        for row in plane.rows:
            quadric = [
                sum((c * q[i] for c, q in zip(row, space.basis, strict=True)), field.zero)
                for i in range(21)
            ]
            # Q(x + v) = Q(v) for all v: x is in the vertex.
            for _ in range(6):
                v = [field.random_element(rng) for _ in range(6)]
                moved = [a + b for a, b in zip(image, v, strict=True)]
                assert quadric_value(quadric, moved, field) == quadric_value(quadric, v, field)


@pytest.mark.parametrize("field", [F101, LARGE, QQ], ids=str)
def test_the_planes_of_pencils_hold_quadrics_that_contain_the_planes_of_the_conics(
    field: Field,
) -> None:
    found = random_del_pezzo(field, 20, Random(4))
    surface, space = space_of(found)
    rng = Random(1)
    # Points s ↦ p_i + s·(a, b) of a line through p_i; of a conic through all four its image
    # under (x : y : z) ↦ (yz : xz : xy) of a line through p4.
    for index, plane in enumerate(found.planes[:5]):
        base = [(1, 0, 0), (0, 1, 0), (0, 0, 1), (1, 1, 1), (1, 1, 1)][index]
        direction = [field.random_element(rng) for _ in range(3)]
        images = []
        for s in range(2, 7):
            point = [field.element(s) * b + d for b, d in zip(base, direction, strict=True)]
            if index == 4:
                x, y, z = point
                point = [y * z, x * z, x * y]
            images.append(surface.image(point, lambda x: x, field.zero))
        assert field.matrix(images, 6).rank() == 3
        for row in plane.rows:
            quadric = [
                sum((c * q[i] for c, q in zip(row, space.basis, strict=True)), field.zero)
                for i in range(21)
            ]
            for _ in range(8):
                weights = [field.random_element(rng) for _ in range(3)]
                inside = [
                    sum((w * p[i] for w, p in zip(weights, images, strict=False)), field.zero)
                    for i in range(6)
                ]
                assert not quadric_value(quadric, inside, field)


# Ten lines


@pytest.mark.parametrize("field", [QQ, F3, F5, F7, finite_field(9)], ids=str)
def test_ten_lines_give_twenty_planes(field: Field) -> None:
    # "A very special EPW sextic and two IHS fourfolds", 2017, arXiv 1509.06214: twenty planes,
    # unique up to projectivity ("On Morin configurations of higher length", arXiv 1903.07480).
    # Hilbert function and points computed: 16 points on five planes, 30 on two.
    twenty = del_pezzo_configuration(field, ten_lines(field))
    examination = Configuration(twenty.planes, twenty.labels).examine()
    assert (twenty.length, len(twenty.planes)) == (20, 20)
    assert examination.pairs.point == 190
    assert examination.section.hilbert_function == (1, 10, 20, 20)
    assert examination.complete_over_closure is True
    assert twenty.span == examination.span
    through = Counter[Any]()
    for plane, other in combinations(twenty.planes, 2):
        through[plane.meet(other)] += 1
    assert Counter(through.values()) == {10: 16, 1: 30}


def test_the_labels_name_the_lines_that_meet() -> None:
    twenty = del_pezzo_configuration(QQ, ten_lines(QQ))
    # The Petersen graph: E_i meets the L_ij, and L_ij meets L_kl with no common index.
    expected = {f"node E{i}.L{a}{b}" for a, b in combinations(range(1, 5), 2) for i in (a, b)}
    expected |= {"node L12.L34", "node L13.L24", "node L14.L23"}
    assert set(twenty.labels[5:]) == expected


# In characteristic 2 the Lagrangians have length 22


@pytest.mark.parametrize(("order", "length"), [(2, 20), (4, 20), (8, 17)])
def test_in_characteristic_2_the_planes_are_among_twenty_two(order: int, length: int) -> None:
    # Computed here; no text gives it.
    found = random_del_pezzo(finite_field(order) if order > 2 else F2, length, Random(1))
    assert found.length == length
    assert found.span.is_totally_singular()
    report = LinearSection(found.span).examine(found.planes)
    assert report.degree == 22
    assert report.hilbert_function == (1, 10, 21, 22, 22)


# Any length, any field


def every_plane(found: DelPezzoConfiguration) -> int:
    return len(found.planes) + sum(plane.degree for plane in found.closed)


@pytest.mark.parametrize("length", range(11, 21))
@pytest.mark.parametrize("field", [F7, F101], ids=str)
def test_every_length_has_a_complete_configuration(field: Field, length: int) -> None:
    # n rational components, n + 10 planes; H computed for 16 … 20 (checks of the subject).
    found = random_del_pezzo(field, length, Random(length))
    assert found.length == every_plane(found) == length
    assert len(found.curve.components) == length - 10
    assert found.span.is_lagrangian()
    report = LinearSection(found.span).examine(found.planes)
    assert (report.degree, report.reduced) == (length, True)
    assert report.hilbert_function is not None
    assert report.hilbert_function[:4] == (1, 10, 20, length)
    degrees = sorted(point.degree for point in report.points or ())
    ours = [1] * len(found.planes) + [plane.degree for plane in found.closed]
    assert degrees == sorted(ours)


def test_planes_at_nodes_that_are_not_rational_lie_in_the_lagrangian() -> None:
    found = random_del_pezzo(F7, 13, Random(3))
    assert found.closed
    for closed in found.closed:
        assert closed.plane is not None
        residue = F7.residue_field(closed.modulus)
        extended = [[residue.embed(x) for x in row] for row in found.span.rows]
        K = residue.field
        assert K.matrix([*extended, closed.plane.plucker], 20).rank() == 10
        values = [[residue.value(x) for x in row] for row in closed.rows]
        assert Plane.from_rows(K, values) == closed.plane


def test_over_a_number_field_closed_planes_keep_their_coefficients() -> None:
    K = number_field("x^2+1")
    found = random_del_pezzo(K, 16, Random(2))
    assert found.length == every_plane(found) == 16
    assert found.closed
    assert all(closed.plane is None for closed in found.closed)
    assert found.span.is_lagrangian()


@settings(max_examples=30, deadline=None)
@given(seed=st.integers(0, 10**9), count=st.integers(2, 10))
def test_random_classes_are_smooth_rational_curves_with_sum_minus_two_k(
    seed: int, count: int
) -> None:
    # Adjunction: D² + K·D = −2; Σ over pairs of D·D′ is then the number of nodes, n + 5.
    classes = random_classes(count, Random(seed))
    assert sum(d for d, _ in classes) == 6
    assert [sum(m[i] for _, m in classes) for i in range(4)] == [2, 2, 2, 2]
    for d, m in classes:
        assert intersection_number((d, m), (d, m)) - 3 * d + sum(m) == -2
    assert sum(intersection_number(a, b) for a, b in combinations(classes, 2)) == count + 5


def test_one_seed_gives_one_configuration() -> None:
    first, again, other = (random_del_pezzo(F101, 14, Random(seed)) for seed in (5, 5, 6))
    assert (first.planes, first.labels, first.span) == (again.planes, again.labels, again.span)
    assert first.closed == again.closed
    assert first.span != other.span
    # Pinned, so that another machine must give the same.
    assert components_to_text(F101, first.curve.components) == PINNED


PINNED = (
    "59*x+99*y; 31*x+83*z; L13; 6*x^2*y+20*x^2*z+14*x*y^2+47*x*y*z+89*x*z^2+60*y^2*z+y*z^2+66*z^3"
)


def test_a_configuration_over_q_with_three_conics_is_complete() -> None:
    found = del_pezzo_configuration(QQ, THREE_CONICS)
    assert len(found.planes) == found.length == 13
    examination = Configuration(found.planes).examine()
    assert examination.complete_over_closure is True
    assert examination.section.hilbert_function == (1, 10, 20, 13, 13)


def test_the_sextic_alone_gives_the_same_planes_as_its_components() -> None:
    parts = components_from_text(QQ, "E1; L12; L13; L23; y+z; x-2*y+z; x-3*z+2*y")
    found = del_pezzo_configuration(QQ, parts)
    again = del_pezzo_configuration(QQ, found.curve.sextic)
    assert set(again.planes) == set(found.planes)
    assert again.length == 17


def test_a_smaller_frame_holds_the_same_configuration() -> None:
    found = del_pezzo_configuration(QQ, THREE_CONICS)
    frame = find_small_frame(found.planes, Random(1), starts=1, steps=20)
    moved = in_frame(frame, found.planes)
    for plane, old in zip(moved, found.planes, strict=True):
        rows = (QQ.matrix(plane.rows, 6) * QQ.matrix(frame, 6)).tolist()
        assert Plane.from_rows(QQ, rows) == old


# Ten planes that are not complete


def halphen_sextic(field: Field, rng: Random) -> dict[tuple[int, int, int], Any]:
    """A sextic with double points at p1, …, p4 and five points more, of geometric genus 1.

    Nine points t on the nodal cubic xyz = x³ + y³, (t : t² : 1 + t³), are double points of
    a sextic other than the double cubic when their product is 1 (three are on a line when
    it is −1): a Halphen pencil of index 2.
    """
    while True:
        values = [field.element(rng.randrange(2, 32003)) for _ in range(8)]
        last = field.one
        for t in values:
            last = last / t
        points = [[t, t * t, field.one + t * t * t] for t in [*values, last]]
        # Coordinates in which the first four are p1, …, p4.
        basis = [row[:] for row in points[:3]]
        columns = field.matrix(basis, 3).transpose()
        augmented = [[*row, x] for row, x in zip(columns.tolist(), points[3], strict=True)]
        weights = [row[3] for row in field.matrix(augmented, 4).rref()[0].tolist()]
        scaled = [[w * x for x in row] for w, row in zip(weights, basis, strict=True)]
        moved = []
        for point in points:
            system = [[scaled[j][i] for j in range(3)] + [point[i]] for i in range(3)]
            moved.append([row[3] for row in field.matrix(system, 4).rref()[0].tolist()])
        conditions = []
        for point in moved:
            for i in range(3):
                row = []
                for e in monomials(6):
                    value = field.element(e[i])
                    for j, x in enumerate(point):
                        for _ in range(max(e[j] - (i == j), 0)):
                            value = value * x
                    row.append(value)
                conditions.append(row)
        forms = kernel(field, conditions, 28)
        assert len(forms) == 2
        mixed = [a + field.element(5) * b for a, b in zip(*forms, strict=True)]
        return from_coefficients(mixed, 6)


def test_ten_planes_of_a_curve_with_five_nodes_are_not_complete() -> None:
    # Such a curve moves in a Halphen pencil, so its ten planes span dimension 9 only. Computed
    # modulo 32003 (no text gives it): H = 1, 11, 31, 42, 47, 52, a curve.
    rng = Random(11)
    found = del_pezzo_configuration(LARGE, halphen_sextic(LARGE, rng))
    assert found.length == every_plane(found) == 10
    assert found.span.dimension == 9
    assert found.span.is_isotropic()
    report = LinearSection(found.span.orthogonal()).examine(found.planes)
    assert report.projective_dimension == 1
    assert report.hilbert_function is not None
    assert report.hilbert_function[:6] == (1, 11, 31, 42, 47, 52)
    assert report.complete_over_closure is False


# Bad input


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("E1; L23", r"must add up to −2K = \(6; 2, 2, 2, 2\), not \(1; -1, 1, 1, 0\)"),
        ("E5; L23", "there is no E5"),
        ("", "no components were given"),
        ("x^2+y; L12", "must be a nonzero form of one degree"),
        ("x*(y+z)", "is not a product of a number and powers"),
        ("x^7", "degree must be at most 6"),
        ("x+-y", "is no polynomial in x, y, z"),
        # x = y twice: L34 and an equation of the same line.
        ("E1; E2; E3; E4; L12; L13; L24; L34; x-y; L12", "worse than a node|repeated|add up"),
        # Three lines through the point (1 : 2 : 3).
        ("2*x-y; 3*x-z; 3*y-2*z; x+y-z; x*y+x*z-2*y*z", "add up"),
        ("z-3*x; y-2*x; E1; x*z+2*y*z-3*x*y; x*z+y*z-2*x*y", "add up"),
        ("3*y-2*z; z-3*x; y-2*x; x*y+x*z-2*y*z; x-2*y+z", "worse than a node, at"),
        # E1 and two curves with the same tangent y = z at p1: three branches in one point.
        (
            "E1; L14; x*y-x*z+2*y*z; x^2*y-3*x^2*z+2*x*y^2+5*y*z^2-5*y^2*z",
            r"worse than a node, on E1, the direction \(1 : 1\) at p1",
        ),
        # Two conics with contact of order 3 at p1: they touch on the surface.
        (
            "x*y-x*z+2*y*z; x*y-x*z+y^2+y*z; L24; x-3*y+2*z",
            r"worse than a node, on E1, the direction \(1 : 1\) at p1",
        ),
        ("E1; E1; L12", "add up"),
    ],
)
def test_components_that_make_no_nodal_curve_are_refused(text: str, message: str) -> None:
    with pytest.raises(UsageError, match=message):
        del_pezzo_configuration(QQ, text)


def test_curves_that_touch_at_a_base_point_have_a_node_on_the_exceptional_curve() -> None:
    text = "L14; a: x*y-x*z+2*y*z; L24; x^2-x*y+x*z+2*y^2"
    found = del_pezzo_configuration(QQ, text)
    (node,) = (node for node in found.curve.nodes if node.label == "node L14.a")
    assert node.index == 0
    assert found.span.is_lagrangian()


@pytest.mark.parametrize("length", [0, 10, 21, 22])
def test_impossible_lengths_are_refused(length: int) -> None:
    with pytest.raises(UsageError, match=f"length {length}: .* 11, …, 20"):
        random_del_pezzo(F101, length, Random(1))


def test_a_field_that_is_too_small_is_named() -> None:
    with pytest.raises(FieldError, match=r"over F_2; use a field with more elements"):
        random_del_pezzo(F2, 18, Random(1))


def test_parameters_of_the_wrong_number_or_with_an_exceptional_curve_are_refused() -> None:
    with pytest.raises(UsageError, match="has 2 parameters, not 3"):
        member_of_class(QQ, (1, (1, 0, 0, 0)), [1, 2, 3])
    with pytest.raises(UsageError, match="contains an exceptional curve"):
        member_of_class(QQ, (1, (1, 0, 0, 0)), [1, -1])
    with pytest.raises(UsageError, match="is not the class of a curve"):
        member_of_class(QQ, (0, (1, 0, 0, 0)), [1])
    with pytest.raises(UsageError, match="multiplicity 2"):
        del_pezzo_configuration(QQ, {(6, 0, 0): 1, (0, 6, 0): 1, (0, 0, 6): 1})


def test_a_double_component_has_infinitely_many_singular_points() -> None:
    line = plane_curve(QQ, form_from_text(QQ, "x-2*y+3*z"), "a")
    with pytest.raises(UsageError, match="infinitely many singular points"):
        singular_points(
            QQ, form_from_text(QQ, form_to_text(QQ, multiply_all(line.form))), Random(1)
        )


def multiply_all(form: Any) -> Any:
    square = multiply(form, form)
    return multiply(square, form_from_text(QQ, "x^4+y^4+z^4"))


def test_nodal_curves_of_conjugate_nodes_over_q_have_a_span_over_q() -> None:
    # A line and a conic that meet in points over a quadratic field.
    text = "x-2*y+3*z; x*y+x*z-3*y*z; x*y*z; E1; E2; E3"
    with pytest.raises(UsageError):
        nodal_curve(QQ, components_from_text(QQ, text), Random(1))
    rng = Random(4)
    for length in (11, 12, 14):
        found = random_del_pezzo(QQ, length, rng)
        assert found.length == every_plane(found) == length
        assert found.span.is_lagrangian()


def test_equations_over_fields_with_a_root_are_read_back() -> None:
    for spec in ("F_9", "F_16", {"modulus": "x^3-2"}):
        field, rng = field_from_spec(spec), Random(1)
        for degree in (1, 2, 3):
            form = {}
            for exponents in monomials(degree):
                value = field.random_element(rng)
                if value:
                    form[exponents] = value
            text = form_to_text(field, form)
            assert form_from_text(field, text) == form, text
    with pytest.raises(EntryError, match="not an element of this field"):
        form_from_text(field_from_spec("F_9"), "(a+)*x")
    with pytest.raises(EntryError, match="not a number of this field"):
        form_from_text(QQ, "a*x")
