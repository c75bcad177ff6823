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

from trivector.errors import UsageError
from trivector.exterior.products import minors
from trivector.families.del_pezzo_surface import PENCILS, DelPezzoSurface, QuadricSpace
from trivector.families.equations import components_from_text
from trivector.families.nodal_curves import (
    Component,
    NodalCurve,
    Node,
    exceptional_curve,
    line_between,
    nodal_curve,
    plane_curve,
)
from trivector.families.residues import Residue
from trivector.families.small_frames import find_small_frame, in_frame
from trivector.families.ternary_forms import Form
from trivector.fields.protocol import Field
from trivector.subspaces import Plane, Subspace

__all__ = [
    "ClosedPlane",
    "DelPezzoConfiguration",
    "configuration_of_curve",
    "del_pezzo_configuration",
    "ten_lines",
]

_FRAME_STARTS = 12


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
    planes to be all of it in characteristic ≠ 2; in characteristic 2 the
    section has length 22 if it is finite, see `trivector.families.pentagon`, so
    the planes are not complete there. Nothing here claims either:
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

    def short_planes(self) -> tuple[Plane, ...]:
        """The planes over the field; if it is infinite, in coordinates with short entries.

        The coordinates are those of `find_small_frame` with seed 0; the planes
        as they are if it finds none.
        """
        if self.field.order is not None:
            return self.planes
        try:
            frame = find_small_frame(self.planes, Random(0), starts=_FRAME_STARTS)
        except UsageError:
            return self.planes
        return in_frame(frame, self.planes)

    def short_span(self) -> Subspace:
        """The span, over an infinite field by short integral rows, not in echelon form."""
        rows = self.field.integral_basis(self.span.rows)
        return Subspace(self.field, 6, tuple(map(tuple, rows)))


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
    return configuration_of_curve(nodal_curve(field, chosen, rng or Random(0)))


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


def configuration_of_curve(curve: NodalCurve) -> DelPezzoConfiguration:
    """The configuration of a curve whose nodes are known."""
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
