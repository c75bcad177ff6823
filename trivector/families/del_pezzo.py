"""Del Pezzo configurations: the planes and the Lagrangian of a nodal curve in |−2K|.

A node x of C gives the plane of the quadrics of V that are singular at x, and
each of the five pencils of conics on S the plane of the quadrics that contain
the planes of its conics: 5 + (number of nodes) planes, n + 10 for n rational
components. Source: "On Morin configurations of higher length", 2019, arXiv
1903.07480.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations
from random import Random
from typing import Any

from trivector.errors import FieldError, UsageError
from trivector.exterior.products import minors
from trivector.families.del_pezzo_surface import PENCILS, DelPezzoSurface, QuadricSpace
from trivector.families.equations import components_from_text
from trivector.families.nodal_curves import (
    Component,
    CurveClass,
    NodalCurve,
    Node,
    exceptional_curve,
    line_between,
    member_of_class,
    nodal_curve,
    plane_curve,
)
from trivector.families.residues import Residue
from trivector.families.ternary_forms import (
    Form,
    forms_with_multiplicities,
    from_coefficients,
    monomials,
)
from trivector.fields.linear import Rows, kernel
from trivector.fields.protocol import Field
from trivector.subspaces import Plane, Subspace

__all__ = [
    "LENGTHS",
    "ClosedPlane",
    "DelPezzoConfiguration",
    "del_pezzo_configuration",
    "random_del_pezzo",
    "ten_lines",
]

LENGTHS = range(11, 21)
"""The lengths n + 10 of curves with n rational components."""

_ATTEMPTS = 200


@dataclass(frozen=True)
class ClosedPlane:
    """The plane of a node that is not rational, with its conjugates one closed point.

    Attributes
    ----------
    label : str
    degree : int
        The number of conjugates.
    modulus : tuple of scalars
        The monic irreducible polynomial of θ over k, constant term first.
    rows : tuple of three rows
        A basis of W; each entry is the tuple of its coefficients by powers of θ.
    plane : Plane or None
        Over the residue field; None where that has no notation (over number fields).
    """

    label: str
    degree: int
    modulus: tuple[Any, ...]
    rows: tuple[tuple[tuple[Any, ...], ...], ...]
    plane: Plane | None


@dataclass(frozen=True)
class DelPezzoConfiguration:
    """The planes of a nodal curve in |−2K|, in coordinates of V.

    Attributes
    ----------
    curve : NodalCurve
    planes : tuple of Plane
        Those over the field: the five pencils, then the rational nodes.
    labels : tuple of str
        One for each plane.
    closed : tuple of ClosedPlane
        Those of the other nodes.
    span : Subspace
        Of all planes, those of ``closed`` included; over the field.
    length : int
        5 + the number of nodes over the closure.

    Notes
    -----
    For n ≥ 1 rational components the span is expected to be Lagrangian and the
    planes to be all of it in characteristic ≠ 2; nothing here claims that:
    `Subspace.is_lagrangian` and `Configuration.examine` decide it.
    """

    curve: NodalCurve
    planes: tuple[Plane, ...]
    labels: tuple[str, ...]
    closed: tuple[ClosedPlane, ...]
    span: Subspace

    @property
    def field(self) -> Field:
        """The field of the curve."""
        return self.curve.field

    @property
    def length(self) -> int:
        """5 + the number of nodes over the closure."""
        return 5 + self.curve.number_of_nodes


def ten_lines(field: Field) -> tuple[Component, ...]:
    """E1, …, E4 and the six lines L − E_i − E_j: all lines on S."""
    lines = [line_between(field, i, j) for i, j in combinations(range(1, 5), 2)]
    return (*(exceptional_curve(i) for i in range(1, 5)), *lines)


def del_pezzo_configuration(
    field: Field, components: Sequence[Component] | Form | str, *, rng: Random | None = None
) -> DelPezzoConfiguration:
    """The configuration of a nodal curve in |−2K|.

    Parameters
    ----------
    components : sequence of Component, text, or a form
        Their classes add up to (6; 2, 2, 2, 2). A text is read by
        `components_from_text`: ``"E1; L23; x*y-2*z^2"``. A plane sextic
        {(i, j, k): coefficient} with double points at p1, …, p4 may be given
        instead; at a triple point p_i the exceptional curve E_i is part of C.
    rng : random.Random, optional
        For the random linear combinations that tell nodes apart; the planes
        do not depend on it, the notation of residue fields may.

    Raises
    ------
    UsageError
        If the classes do not add up or the curve is not nodal (with the place).
    FieldError
        If the field is too small to tell the nodes apart.

    Examples
    --------
    >>> from trivector.fields import QQ
    >>> twenty = del_pezzo_configuration(QQ, ten_lines(QQ))
    >>> twenty.length, twenty.span.is_lagrangian(), twenty.labels[5]
    (20, True, 'node E1.L12')
    """
    if isinstance(components, str):
        chosen = components_from_text(field, components)
    elif isinstance(components, Mapping):
        chosen = _components_of_sextic(field, components)
    else:
        chosen = tuple(components)
    return _configuration(nodal_curve(field, chosen, rng or Random(0)))


def _components_of_sextic(field: Field, form: Form) -> tuple[Component, ...]:
    sextic = plane_curve(field, form, "C")
    wrong = [m for m in sextic.multiplicities if m not in (2, 3)]
    if sextic.degree != 6 or wrong:
        raise UsageError(
            "the sextic must have degree 6 and multiplicity 2 (or 3) at p1, …, p4, not degree "
            f"{sextic.degree} and multiplicities {sextic.multiplicities}; choose another one"
        )
    triple = [i for i in range(4) if sextic.multiplicities[i] == 3]
    return (sextic, *(exceptional_curve(i + 1) for i in triple))


def _configuration(curve: NodalCurve) -> DelPezzoConfiguration:
    field = curve.field
    surface = DelPezzoSurface(field)
    quadric = surface.quadric_cutting(curve.sextic)
    assert quadric is not None  # the multiplicities have been checked
    space = QuadricSpace(surface, quadric)
    planes = [Plane.from_rows(field, rows) for rows in space.pencil_planes()]
    labels = list(PENCILS)
    vectors = [plane.plucker for plane in planes]
    closed = []
    for node in curve.nodes:
        rows = _plane_of_node(surface, space, node)
        if node.degree == 1:
            plane = Plane.from_rows(field, [[x.coefficients[0] for x in row] for row in rows])
            planes.append(plane)
            labels.append(node.label)
            vectors.append(plane.plucker)
        else:
            closed.append(_closed_plane(field, node, rows))
            wedge = [x.coefficients for x in minors(rows)]
            vectors.extend(tuple(c[j] for c in wedge) for j in range(node.degree))
    span = Subspace.span(field, 6, vectors)
    return DelPezzoConfiguration(curve, tuple(planes), tuple(labels), tuple(closed), span)


def _plane_of_node(
    surface: DelPezzoSurface, space: QuadricSpace, node: Node
) -> list[list[Residue]]:
    ring = node.ring
    if node.index is None:
        point = surface.image(node.coordinates, ring.lift, ring.zero)
    else:
        point = surface.image_of_direction(node.index, node.coordinates, ring.lift)
    rows: list[list[Residue]] = space.singular_at(point, ring.lift, ring.zero, ring.one)
    assert len(rows) == 3
    return rows


def _closed_plane(field: Field, node: Node, rows: list[list[Residue]]) -> ClosedPlane:
    residue = field.residue_field(node.ring.modulus)
    plane = None
    if residue is not None:
        values = [[residue.value(x.coefficients) for x in row] for row in rows]
        plane = Plane.from_rows(residue.field, values)
    entries = tuple(tuple(x.coefficients for x in row) for row in rows)
    return ClosedPlane(node.label, node.degree, node.ring.modulus, entries, plane)


# Random curves


def random_del_pezzo(
    field: Field, length: int, rng: Random, *, rational: bool = False
) -> DelPezzoConfiguration:
    """A random configuration of a given length: length − 10 rational components.

    Parameters
    ----------
    length : int
        11, …, 20.
    rng : random.Random
    rational : bool
        Draw again until all nodes are rational (for short lengths that takes
        many draws).

    Raises
    ------
    UsageError
        For another length.
    FieldError
        If no nodal curve was found in the number of draws, because the field
        is too small.

    Notes
    -----
    For n ≥ 2 components their classes come from the ten lines: two curves
    that meet in one point are replaced by a member of their sum, n times down,
    so each is a smooth rational curve in a base point free system. For n = 1
    the sextic is given by a parametrisation, see `_rational_sextic`. A draw is
    kept if all singularities are nodes and there are n + 5 of them; the
    choice is not uniform.

    Examples
    --------
    >>> from trivector.fields import prime_field
    >>> found = random_del_pezzo(prime_field(101), 17, Random(1))
    >>> found.length, found.span.is_lagrangian()
    (17, True)
    """
    if length not in LENGTHS:
        raise UsageError(
            f"length {length}: curves in |−2K| with rational components give 11, …, 20; "
            "choose one of these"
        )
    for _ in range(_ATTEMPTS if not rational else 100 * _ATTEMPTS):
        try:
            components = _random_components(field, length - 10, rng)
            curve = nodal_curve(field, components, rng)
        except (UsageError, FieldError):
            continue
        if curve.number_of_nodes != length - 5:
            continue
        if not rational or all(node.degree == 1 for node in curve.nodes):
            return _configuration(curve)
    raise FieldError(
        f"no {'suitable ' if rational else ''}nodal curve with {length - 10} components was found "
        f"over {field.name}; use a field with more elements"
    )


def _random_components(field: Field, count: int, rng: Random) -> tuple[Component, ...]:
    if count == 1:
        return (plane_curve(field, _rational_sextic(field, rng), "C"),)
    components = []
    for curve_class in random_classes(count, rng):
        degree, multiplicities = curve_class
        size = 1 if degree == 0 else len(forms_with_multiplicities(field, degree, multiplicities))
        parameters = [field.random_element(rng) for _ in range(size)] if size > 1 else [1]
        components.append(member_of_class(field, curve_class, parameters))
    return tuple(_with_distinct_names(components))


def _with_distinct_names(components: Sequence[Component]) -> list[Component]:
    """A name that several share gets a letter: ``(1;1,0,0,0)b``."""
    seen: dict[str, int] = {}
    result = []
    for component in components:
        count = seen[component.name] = seen.get(component.name, -1) + 1
        name = component.name + ("abcdefghij"[count] if count else "")
        result.append(Component(name, component.degree, component.multiplicities, component.form))
    return result


def random_classes(count: int, rng: Random) -> list[CurveClass]:
    """Classes of ``count`` smooth rational curves, 2 ≤ count ≤ 10, with sum −2K."""
    while True:
        classes: list[CurveClass] = [(0, _four([-int(i == j) for i in range(4)])) for j in range(4)]
        for i, j in combinations(range(4), 2):
            classes.append((1, _four([int(k in (i, j)) for k in range(4)])))
        while len(classes) > count:
            pairs = [
                (a, b)
                for a, b in combinations(range(len(classes)), 2)
                if intersection_number(classes[a], classes[b]) == 1
            ]
            if not pairs:
                break
            a, b = pairs[rng.randrange(len(pairs))]
            (d, m), (e, n) = classes[a], classes[b]
            total = (d + e, _four([x + y for x, y in zip(m, n, strict=True)]))
            classes = [c for i, c in enumerate(classes) if i not in (a, b)] + [total]
        if len(classes) == count:
            return sorted(classes)


def intersection_number(first: CurveClass, second: CurveClass) -> int:
    """D·D′ = dd′ − Σ m_i·m_i′."""
    pairs = zip(first[1], second[1], strict=True)
    return first[0] * second[0] - sum(m * n for m, n in pairs)


def _four(values: Sequence[int]) -> tuple[int, int, int, int]:
    return (values[0], values[1], values[2], values[3])


def _rational_sextic(field: Field, rng: Random) -> dict[tuple[int, int, int], Any]:
    """The equation of a random rational sextic with double points at p1, …, p4.

    Let q1, …, q4 be quadratic forms in (s, t) and a ≡ q1, b ≡ q2, c ≡ q3
    modulo q4, up to a common unit. The curve (q2·q3·a : q1·q3·b : q1·q2·c)
    passes through p_i at both roots of q_i; all such curves are of this form.
    """

    def draw() -> Any:
        return field.random_element(rng)

    quadratics = [[draw() for _ in range(3)] for _ in range(4)]
    unit = [draw(), draw()]
    last = quadratics[3]
    if not last[2]:
        raise UsageError("the last quadratic form must have degree 2; draw again")
    numerators = []
    for quadratic in quadratics[:3]:
        cubic = _times(unit, quadratic, field.zero)
        factor = cubic[3] / last[2]
        shift = draw()
        multiple = _times([shift, factor], last, field.zero)
        numerators.append([c - m for c, m in zip(cubic, multiple, strict=True)][:3])
    q1, q2, q3 = quadratics[:3]
    a, b, c = numerators
    coordinates = [
        _times(_times(q2, q3, field.zero), a, field.zero),
        _times(_times(q1, q3, field.zero), b, field.zero),
        _times(_times(q1, q2, field.zero), c, field.zero),
    ]
    return _implicit_equation(field, coordinates, 6)


def _implicit_equation(
    field: Field, coordinates: Sequence[Sequence[Any]], degree: int
) -> dict[tuple[int, int, int], Any]:
    """The form of this degree that vanishes on a parametrised plane curve, if it is unique."""
    powers = [[[field.one]] for _ in range(3)]
    for power, coordinate in zip(powers, coordinates, strict=True):
        for _ in range(degree):
            power.append(_times(power[-1], coordinate, field.zero))
    rows = [
        _times(_times(powers[0][i], powers[1][j], field.zero), powers[2][k], field.zero)
        for i, j, k in monomials(degree)
    ]
    columns = [list(column) for column in zip(*rows, strict=True)]
    solutions: Rows = kernel(field, columns, len(rows))
    if len(solutions) != 1:
        raise UsageError("the parametrisation is not one of a curve of this degree; draw again")
    return from_coefficients(solutions[0], degree)


def _times(first: Sequence[Any], second: Sequence[Any], zero: Any) -> list[Any]:
    result = [zero] * (len(first) + len(second) - 1)
    for i, a in enumerate(first):
        if a:
            for j, b in enumerate(second):
                result[i + j] = result[i + j] + a * b
    return result
