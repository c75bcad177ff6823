"""Symmetries, comparisons and incidences, for people at a terminal."""

from collections import Counter
from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING

from rich.console import Group, RenderableType
from rich.text import Text

from trivector.configurations import Configuration, Incidence
from trivector.configurations.incidence import flat_text
from trivector.fields.linear import Rows
from trivector.fields.protocol import Field
from trivector.reports.blocks import answer, block
from trivector.symmetry import Collineation, CollineationGroup, Comparison

if TYPE_CHECKING:
    import networkx

__all__ = ["comparison_report", "exchange_report", "incidence_report", "symmetry_report"]

_MOST_FLATS = 60
_MOST_ORBITS = 40


def _heading(configuration: Configuration) -> Iterable[RenderableType]:
    if configuration.title:
        yield Text(configuration.title, style="bold")
    count = len(configuration.planes)
    noun = "plane" if count == 1 else "planes"
    yield Text(f"{count} {noun} of P^{configuration.n - 1} over {configuration.field.name}")


def symmetry_report(group: CollineationGroup) -> RenderableType:
    """Order, orbits, stabilisers and generators of a group of collineations.

    Returns
    -------
    RenderableType
        For ``rich.console.Console.print``.
    """
    kind = "semilinear collineations" if group.semilinear else "collineations"
    scope = f"{kind} over {group.scope}"
    return Group(
        *_heading(group.configuration),
        *block("Group", scope, _group_lines(group)),
        *block("Orbits", "indices from 0", _orbit_lines(group)),
        *block("Generators", "matrices act on columns", _generator_lines(group)),
    )


def _group_lines(group: CollineationGroup) -> Iterable[tuple[str, str]]:
    if group.order is not None:
        yield "order", str(group.order)
    elif group.order_on_planes is None:
        yield "order", "undecided"
    elif group.kernel_dimension and group.configuration.field.order is None:
        yield "order", "infinite"
    else:
        yield "order", "finite, not counted"
    on_planes = group.order_on_planes
    yield "on the planes", "undecided" if on_planes is None else f"order {on_planes}"
    if group.kernel_dimension:
        counted = "" if group.kernel_order is None else f", order {group.kernel_order}"
        yield "keeping every plane", f"a group of dimension {group.kernel_dimension}{counted}"
    elif group.kernel_order == 1:
        yield "keeping every plane", "the identity only"
    else:
        yield "keeping every plane", f"a group of order {group.kernel_order}, semilinear"
    if len(group.plane_orbits) == 1:
        yield "transitive", "yes, on the planes"
    yield "because", group.method
    if group.limit:
        yield "limit hit", f"{group.limit}; the generators below are symmetries, maybe not all"


def _orbit_lines(group: CollineationGroup) -> Iterable[tuple[str, str]]:
    for orbit in group.plane_orbits[:_MOST_ORBITS]:
        order = group.stabiliser_order(orbit[0])
        stabiliser = "" if order is None else f"; the stabiliser of a plane has order {order}"
        yield _count(len(orbit), "plane"), " ".join(map(str, orbit)) + stabiliser
    points = group.incidence.points
    for orbit in group.point_orbits[:_MOST_ORBITS]:
        yield (
            _count(len(orbit), "point"),
            f"on {len(points[orbit[0]].planes)} planes each, such as "
            f"{flat_text(points[orbit[0]].flat)}",
        )


def _count(number: int, noun: str) -> str:
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"


def _generator_lines(group: CollineationGroup) -> Iterable[tuple[str, str]]:
    if not group.generators:
        yield "none", "" if group.limit else "the identity is the only permutation"
    for generator in group.generators:
        yield cycle_text(generator.permutation), _map_text(group.configuration.field, generator)


def cycle_text(permutation: Sequence[int]) -> str:
    """``(0 1)(2 3 4)``; ``()`` for the identity."""
    seen: set[int] = set()
    text = ""
    for start in range(len(permutation)):
        cycle = []
        i = start
        while i not in seen:
            seen.add(i)
            cycle.append(i)
            i = permutation[i]
        if len(cycle) > 1:
            text += f"({' '.join(map(str, cycle))})"
    return text or "()"


def _map_text(field: Field, collineation: Collineation) -> str:
    power = collineation.frobenius
    twist = f", after x ↦ x^({field.characteristic}^{power})" if power else ""
    return _matrix_text(field, collineation.matrix) + twist


def _matrix_text(field: Field, matrix: Rows) -> str:
    return "[" + " | ".join(" ".join(str(field.format(x)) for x in row) for row in matrix) + "]"


def comparison_report(comparison: Comparison) -> RenderableType:
    """Whether two objects are equivalent, with the matrix or the reason.

    Returns
    -------
    RenderableType
        For ``rich.console.Console.print``.
    """
    return Group(*block("Projectively equivalent", "under PGL(V)", _comparison_lines(comparison)))


def _comparison_lines(comparison: Comparison) -> Iterable[tuple[str, str]]:
    yield f"over {comparison.field.name}", answer(comparison.equivalent)
    yield f"over {comparison.field.closure_name}", answer(comparison.over_closure)
    found = comparison.collineation
    if found is not None:
        yield "planes", cycle_text(found.permutation)
        yield "", " ".join(f"{i}→{image}" for i, image in enumerate(found.permutation))
        yield "matrix", _map_text(comparison.field, found)
    if comparison.difference:
        yield "told apart by", comparison.difference
    yield "because", comparison.method
    if comparison.limit:
        yield "undecided", comparison.limit


def incidence_report(incidence: Incidence) -> RenderableType:
    """Points, lines and hyperplanes that several planes share.

    Returns
    -------
    RenderableType
        For ``rich.console.Console.print``.
    """
    configuration = incidence.configuration
    return Group(
        *_heading(configuration),
        *block("Shared", _everywhere(configuration), _shared_lines(incidence)),
        *block("On each plane", "how many points carry how many planes", _per_plane(incidence)),
        *block("Points", "coordinates; planes on it", _point_lines(incidence)),
        *(block("Lines", "basis; planes on it", _line_lines(incidence)) if incidence.lines else ()),
    )


def exchange_report(
    configuration: Configuration, graph: "networkx.Graph[int]", scope: str
) -> RenderableType:
    """Families of pairwise incident planes, and how they hang together.

    Parameters
    ----------
    configuration : Configuration
        The candidates.
    graph : networkx.Graph
        Of `exchange_graph`, with ``members`` at each node.
    scope : str
        What the families are.

    Returns
    -------
    RenderableType
        For ``rich.console.Console.print``.
    """
    return Group(
        *_heading(configuration),
        *block("Families", scope, _family_lines(graph)),
        *block("Exchange graph", "joined by common planes", _exchange_lines(graph)),
    )


def _family_lines(graph: "networkx.Graph[int]") -> Iterable[tuple[str, str]]:
    sizes = Counter(size for _, size in graph.nodes(data="planes"))
    counted = ", ".join(f"{count} of {size} planes" for size, count in sorted(sizes.items()))
    yield "families", counted or "none"
    for node, members in list(graph.nodes(data="members"))[:_MOST_FLATS]:
        yield str(node), members
    if len(graph) > _MOST_FLATS:
        yield "…", f"{len(graph) - _MOST_FLATS} more; --json lists them"


def _exchange_lines(graph: "networkx.Graph[int]") -> Iterable[tuple[str, str]]:
    import networkx

    least = graph.graph["shared"]
    joined = _count(graph.number_of_edges(), "pair")
    yield "joined", f"{joined} with at least {_count(least, 'common plane')}"
    parts = Counter(len(part) for part in networkx.connected_components(graph))
    counted = ", ".join(f"{count} of {_families(size)}" for size, count in sorted(parts.items()))
    yield "components", counted or "none"
    common = Counter(shared for *_, shared in graph.edges(data="shared"))
    if common:
        yield (
            "in common",
            ", ".join(
                f"{_count(shared, 'plane')} for {_count(count, 'pair')}"
                for shared, count in sorted(common.items())
            ),
        )


def _families(size: int) -> str:
    return "1 family" if size == 1 else f"{size} families"


def _everywhere(configuration: Configuration) -> str:
    return f"by two or more planes, over {configuration.field.name} and every extension of it"


def _shared_lines(incidence: Incidence) -> Iterable[tuple[str, str]]:
    for kind in ("points", "lines", "hyperplanes"):
        profile = incidence.profile(kind)
        word = "with" if kind == "hyperplanes" else "on"
        counted = ", ".join(f"{count} {word} {planes} planes" for planes, count in profile.items())
        yield kind, counted or "none"
    dimensions = incidence.point_dimensions
    if dimensions is not None:
        pairs = sorted(
            {(len(p.planes), d) for p, d in zip(incidence.points, dimensions, strict=True)}
        )
        for planes, dimension in pairs:
            yield f"dim(A ∩ F_v) where {planes} planes meet", str(dimension)
    pencils = incidence.pencils()
    if pencils:
        yield "pencils", "; ".join(" ".join(map(str, pencil)) for pencil in pencils)


def _per_plane(incidence: Incidence) -> Iterable[tuple[str, str]]:
    classes: dict[str, list[int]] = {}
    for i, profile in enumerate(incidence.per_plane("points")):
        text = " + ".join(f"{count} of {planes}" for planes, count in profile.items()) or "none"
        classes.setdefault(text, []).append(i)
    for text, planes in classes.items():
        yield text, "planes " + " ".join(map(str, planes))


def _point_lines(incidence: Incidence) -> Iterable[tuple[str, str]]:
    for j, point in enumerate(incidence.points[:_MOST_FLATS]):
        yield f"{j}", f"{flat_text(point.flat)}; planes {' '.join(map(str, point.planes))}"
    rest = len(incidence.points) - _MOST_FLATS
    if rest > 0:
        yield "", f"… and {rest} more; --json lists them"


def _line_lines(incidence: Incidence) -> Iterable[tuple[str, str]]:
    for j, line in enumerate(incidence.lines[:_MOST_FLATS]):
        yield f"{j}", f"{flat_text(line.flat)}; planes {' '.join(map(str, line.planes))}"
