"""Nodal curves in |−2K| of the quintic del Pezzo surface: components, classes, nodes.

A class (d; m1, m2, m3, m4) is d·L − Σ m_i·E_i: plane curves of degree d with
multiplicities m_i at p1, …, p4; the exceptional curve E_i is (0; …, −1, …).
The classes of the components add up to (6; 2, 2, 2, 2).
"""

from collections.abc import Sequence
from dataclasses import dataclass
from random import Random
from typing import Any

from trivector.errors import UsageError
from trivector.families.residues import Residue, ResidueRing
from trivector.families.singular_points import PlanePoint, singular_points
from trivector.families.ternary_forms import (
    Form,
    degree_of,
    evaluate,
    forms_with_multiplicities,
    from_coefficients,
    monomials,
    multiplicity,
    multiply,
    taylor_part,
)
from trivector.fields.protocol import Field

__all__ = [
    "Component",
    "CurveClass",
    "NodalCurve",
    "Node",
    "class_name",
    "exceptional_curve",
    "line_between",
    "member_of_class",
    "nodal_curve",
    "plane_curve",
]

CurveClass = tuple[int, tuple[int, int, int, int]]


@dataclass(frozen=True)
class Component:
    """A curve on S: its class, and its equation in P² unless it is exceptional."""

    name: str
    degree: int
    multiplicities: tuple[int, int, int, int]
    form: Form | None

    @property
    def exceptional(self) -> int | None:
        """The index i of E_i, from 0; None for the strict transform of a plane curve."""
        return self.multiplicities.index(-1) if self.form is None else None


def class_name(degree: int, multiplicities: Sequence[int]) -> str:
    """``"(2; 1, 1, 0, 0)"``."""
    return f"({degree}; {', '.join(map(str, multiplicities))})"


def exceptional_curve(index: int) -> Component:
    """E_index, index 1, 2, 3 or 4."""
    if index not in (1, 2, 3, 4):
        raise UsageError(f"the exceptional curves are E1, E2, E3, E4; there is no E{index}")
    values = [-int(i == index - 1) for i in range(4)]
    return Component(f"E{index}", 0, (values[0], values[1], values[2], values[3]), None)


def plane_curve(field: Field, form: Form, name: str) -> Component:
    """The strict transform of a plane curve; its multiplicities are found."""
    values = {e: field.element(value) for e, value in form.items()}
    values = {e: value for e, value in values.items() if value}
    if not values or len({sum(e) for e in values}) != 1:
        raise UsageError(f"{name}: the equation must be a nonzero form of one degree in x, y, z")
    m1, m2, m3, m4 = (multiplicity(values, i, field) for i in range(4))
    return Component(name, degree_of(values), (m1, m2, m3, m4), values)


def line_between(field: Field, i: int, j: int) -> Component:
    """The line L − E_i − E_j, indices from 1."""
    through = [int(k + 1 in (i, j)) for k in range(4)]
    return member_of_class(field, (1, (through[0], through[1], through[2], through[3])), (1,))


def member_of_class(
    field: Field, curve_class: CurveClass, parameters: Sequence[Any], name: str = ""
) -> Component:
    """The member of |(d; m1, …, m4)| with these coefficients in the canonical basis.

    Parameters
    ----------
    curve_class : (d, (m1, m2, m3, m4))
    parameters : sequence of scalars
        One for each row of `forms_with_multiplicities`: the dimension of the
        linear system plus one.

    Raises
    ------
    UsageError
        For the wrong number of parameters, or if the member has a larger
        multiplicity at a base point (it contains the exceptional curve).

    Examples
    --------
    >>> from trivector.fields import QQ
    >>> sorted(member_of_class(QQ, (1, (1, 0, 0, 0)), [1, -2]).form.items())
    [((0, 0, 1), -2), ((0, 1, 0), 1)]
    """
    degree, multiplicities = curve_class
    what = name or class_name(degree, multiplicities)
    if degree == 0 and sorted(multiplicities) == [-1, 0, 0, 0]:
        return exceptional_curve(multiplicities.index(-1) + 1)
    if degree < 1 or min(multiplicities) < 0:
        raise UsageError(f"{what} is not the class of a curve; give (d; m1, m2, m3, m4), m ≥ 0")
    basis = forms_with_multiplicities(field, degree, multiplicities)
    if len(parameters) != len(basis):
        raise UsageError(
            f"{what}: the linear system has {len(basis)} parameters, not {len(parameters)}"
        )
    total = [field.zero] * len(monomials(degree))
    for value, row in zip(parameters, basis, strict=True):
        scalar = field.element(value)
        total = [a + scalar * b for a, b in zip(total, row, strict=True)]
    component = plane_curve(field, from_coefficients(total, degree), name or _name(curve_class))
    if component.multiplicities != multiplicities:
        raise UsageError(
            f"{what}: this member has multiplicities {component.multiplicities} and contains an "
            "exceptional curve; choose other parameters"
        )
    return component


def _name(curve_class: CurveClass) -> str:
    degree, multiplicities = curve_class
    through = [i + 1 for i in range(4) if multiplicities[i]]
    if degree == 1 and len(through) == 2:
        return f"L{through[0]}{through[1]}"
    return class_name(degree, multiplicities).replace(" ", "")


@dataclass(frozen=True)
class Node:
    """A node of the curve on S, a closed point.

    Attributes
    ----------
    ring : ResidueRing
        Its residue field.
    coordinates : tuple of Residue
        The point (x, y, z) of P²; on an exceptional curve the direction
        (u, v) in local coordinates.
    index : int or None
        i − 1 on the exceptional curve E_i.
    label : str
        ``"node A.B"``: the components that meet there; A = B at a node of A.
    """

    ring: ResidueRing
    coordinates: tuple[Residue, ...]
    index: int | None
    label: str

    @property
    def degree(self) -> int:
        """The number of conjugate nodes over the closure."""
        return self.ring.degree


@dataclass(frozen=True)
class NodalCurve:
    """A curve in |−2K| whose only singularities are nodes, with all of them."""

    field: Field
    components: tuple[Component, ...]
    sextic: Form
    nodes: tuple[Node, ...]

    @property
    def number_of_nodes(self) -> int:
        """Over the algebraic closure."""
        return sum(node.degree for node in self.nodes)


def nodal_curve(field: Field, components: Sequence[Component], rng: Random) -> NodalCurve:
    """The curve with these components, checked, and its nodes.

    Raises
    ------
    UsageError
        If the classes do not add up to −2K, a component is repeated, or a
        singular point is worse than a node; the message says where.
    FieldError
        If the field is too small to tell the nodes apart.

    Notes
    -----
    The order of the nodes: by degree, by label, by coordinates.
    """
    _check_classes(components)
    sextic: Form = {(0, 0, 0): field.one}
    for component in components:
        if component.form is not None:
            sextic = multiply(sextic, component.form)
    nodes: list[Node] = []
    for index in range(4):
        nodes.extend(_on_exceptional_curve(field, components, sextic, index))
    nodes.extend(_named(field, components, point) for point in singular_points(field, sextic, rng))
    return NodalCurve(field, tuple(components), sextic, tuple(_numbered(field, nodes)))


def _check_classes(components: Sequence[Component]) -> None:
    degree = sum(component.degree for component in components)
    multiplicities = [sum(c.multiplicities[i] for c in components) for i in range(4)]
    if degree != 6 or multiplicities != [2, 2, 2, 2]:
        raise UsageError(
            "the classes of the components must add up to −2K = (6; 2, 2, 2, 2), not "
            f"{class_name(degree, multiplicities)}; add, remove or change components"
        )
    for index in range(4):
        if sum(component.exceptional == index for component in components) > 1:
            raise UsageError(
                f"E{index + 1} is given twice; the curve must have no double component"
            )


def _worse(place: str) -> UsageError:
    return UsageError(
        f"the curve has a singular point worse than a node, {place}; choose other components"
    )


def _on_exceptional_curve(
    field: Field, components: Sequence[Component], sextic: Form, index: int
) -> list[Node]:
    """The nodes on E_index: where E_index meets the rest, or a branch point of the rest."""
    contained = any(component.exceptional == index for component in components)
    cone = taylor_part(sextic, index, 3 if contained else 2, field)
    found = []
    for ring, direction, exponent in _roots(field, cone):
        where = f"on E{index + 1}, the direction {_shown(direction)} at p{index + 1}"
        if contained and exponent > 1:
            raise _worse(where)
        if contained or (exponent > 1 and _is_node(field, sextic, index, direction, where)):
            names = _through(field, components, ring, direction, index)
            found.append(Node(ring, direction, index, _label(names)))
    return found


def _roots(field: Field, form: Sequence[Any]) -> list[tuple[ResidueRing, tuple[Residue, ...], int]]:
    """The closed points (u : v) of a binary form Σ c_a·u^a·v^b, with exponents."""
    found: list[tuple[ResidueRing, tuple[Residue, ...], int]] = []
    drop = next(i for i, value in enumerate(reversed(form)) if value)
    rational = ResidueRing(field, [field.zero, field.one])
    if drop:
        found.append((rational, (rational.one, rational.zero), drop))
    if drop < len(form) - 1:
        for modulus, exponent in field.factor(form[: len(form) - drop]):
            ring = ResidueRing(field, modulus)
            found.append((ring, (ring.residue([field.zero, field.one]), ring.one), exponent))
    return found


def _is_node(
    field: Field, sextic: Form, index: int, direction: Sequence[Residue], where: str
) -> bool:
    """Whether the strict transform is singular at a double direction; it must be a node then.

    On the blow-up, with u = w·v, it is f2(w, 1) + v·f3(w, 1) + v²·f4(w, 1) = 0.
    """
    parts = [taylor_part(sextic, index, order, field) for order in (2, 3, 4)]
    lift = direction[0].ring.lift
    w = direction[0]
    if not direction[1]:
        parts = [part[::-1] for part in parts]
        w = direction[1]
    second, third, fourth = ([lift(c) for c in part] for part in parts)
    if _value(third, w):
        return False
    slope = _value([lift(field.element(i)) * c for i, c in enumerate(third)][1:], w)
    four = lift(field.element(4))
    if not slope * slope - four * second[2] * _value(fourth, w):
        raise _worse(where)
    return True


def _value(polynomial: Sequence[Residue], at: Residue) -> Residue:
    total = at.ring.zero
    for coefficient in reversed(polynomial):
        total = total * at + coefficient
    return total


def _through(
    field: Field,
    components: Sequence[Component],
    ring: ResidueRing,
    coordinates: Sequence[Residue],
    index: int | None,
) -> list[str]:
    """The names of the components through a point of S."""
    names = []
    for component in components:
        if component.form is None:
            passes = component.exceptional == index
        elif index is None:
            passes = not evaluate(component.form, coordinates, ring.lift, ring.zero)
        else:
            order = component.multiplicities[index]
            cone = taylor_part(component.form, index, order, field)
            u, v = coordinates
            value = ring.zero
            for a, coefficient in enumerate(cone):
                term = ring.lift(coefficient)
                for factor in [u] * a + [v] * (order - a):
                    term = term * factor
                value = value + term
            passes = order > 0 and not value
        if passes:
            names.append(component.name)
    return names


def _named(field: Field, components: Sequence[Component], point: PlanePoint) -> Node:
    names = _through(field, components, point.ring, point.coordinates, None)
    return Node(point.ring, point.coordinates, None, _label(names))


def _label(names: Sequence[str]) -> str:
    return f"node {'.'.join(names if len(names) > 1 else list(names) * 2)}"


def _shown(direction: Sequence[Residue]) -> str:
    ring = direction[0].ring
    if ring.degree > 1:
        return f"of degree {ring.degree}"
    return f"({' : '.join(str(ring.field.format(x.coefficients[0])) for x in direction)})"


def _numbered(field: Field, nodes: list[Node]) -> list[Node]:
    """Sorted; where several nodes have one label, from the second on with a number."""

    def key(node: Node) -> tuple[Any, ...]:
        entries = [field.sort_key(c) for x in node.coordinates for c in x.coefficients]
        modulus = [field.sort_key(c) for c in node.ring.modulus]
        return node.degree, node.label, node.index is None, modulus, entries

    seen: dict[str, int] = {}
    result = []
    for node in sorted(nodes, key=key):
        seen[node.label] = count = seen.get(node.label, 0) + 1
        label = node.label if count == 1 else f"{node.label} #{count}"
        result.append(Node(node.ring, node.coordinates, node.index, label))
    return result
