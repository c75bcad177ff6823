"""Random curves in |−2K| of the quintic del Pezzo surface with n rational components."""

from collections.abc import Sequence
from itertools import combinations
from random import Random
from typing import Any

from trivector.errors import FieldError, UsageError
from trivector.families.del_pezzo import DelPezzoConfiguration, configuration_of_curve
from trivector.families.nodal_curves import (
    Component,
    CurveClass,
    member_of_class,
    nodal_curve,
    plane_curve,
)
from trivector.families.ternary_forms import (
    forms_with_multiplicities,
    from_coefficients,
    monomials,
)
from trivector.fields.linear import Rows, kernel
from trivector.fields.protocol import Field

__all__ = ["LENGTHS", "intersection_number", "random_classes", "random_del_pezzo"]

LENGTHS = range(11, 21)
"""The lengths n + 10 of curves with n rational components."""

_ATTEMPTS = 200


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
    that meet in one point are replaced by a member of their sum until n are
    left, so each is a smooth rational curve in a base point free system. For n = 1
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
            return configuration_of_curve(curve)
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
