"""Graphs of planes as files: GraphML, DOT, node-link JSON, matrices."""

import csv
import io
from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

from trivector.configurations import Configuration, Incidence

if TYPE_CHECKING:
    import networkx

__all__ = [
    "dot",
    "exchange_matrix_csv",
    "graphml",
    "incidence_matrix_csv",
    "meeting_matrix_csv",
    "node_link",
]


def graphml(graph: "networkx.Graph[Any]") -> str:
    """GraphML with all attributes of nodes and edges; same graph, same bytes."""
    import networkx

    return "\n".join(networkx.generate_graphml(graph)) + "\n"


def node_link(graph: "networkx.Graph[Any]") -> dict[str, Any]:
    """Node-link data: ``{"nodes": [{"id": …}], "edges": [{"source": …, "target": …}], …}``."""
    import networkx

    data: dict[str, Any] = networkx.node_link_data(graph, edges="edges")
    return data


def dot(graph: "networkx.Graph[Any]") -> str:
    """DOT, with a shape for each kind of node and all attributes kept.

    >>> from trivector import read
    >>> text = dot(Incidence(read("data/seven-planes-p6.json")).graph())
    >>> text.splitlines()[-2]
    '  p6 -- point5;'
    """
    shapes = {"plane": "box", "point": "circle", "line": "diamond", "hyperplane": "house"}
    lines = ["graph trivector {"]
    for node, data in graph.nodes(data=True):
        attributes = dict(data)
        attributes.setdefault("label", str(node))
        shape = shapes.get(attributes.get("kind", ""), "ellipse")
        lines.append(f"  {node} [{_attributes(attributes)}, shape={shape}];")
    for first, second, data in graph.edges(data=True):
        suffix = f" [{_attributes(data)}]" if data else ""
        lines.append(f"  {first} -- {second}{suffix};")
    return "\n".join([*lines, "}"]) + "\n"


def _attributes(data: dict[str, Any]) -> str:
    return ", ".join(
        f"{key}={value}" if isinstance(value, int) else f"{key}={_quoted(str(value))}"
        for key, value in data.items()
    )


def _quoted(text: str) -> str:
    escaped = text.replace("\\", "\\\\").replace('"', '\\"').replace("\n", "\\n")
    return f'"{escaped}"'


def incidence_matrix_csv(incidence: Incidence, *, hyperplanes: bool = False) -> str:
    """Planes × points, lines and hyperplanes: 1 where incident, else 0; with names, as CSV."""
    kinds = ("points", "lines", "hyperplanes")[: 3 if hyperplanes else 2]
    header = ["plane"]
    blocks = []
    for kind in kinds:
        matrix = incidence.matrix(kind)
        blocks.append(matrix)
        header += [f"{kind[:-1]}{j}" for j in range(len(incidence.shared(kind)))]
    rows = [
        [f"p{i}", *(value for block in blocks for value in block[i])]
        for i in range(len(incidence.configuration.planes))
    ]
    return _csv([header, *rows])


def meeting_matrix_csv(configuration: Configuration) -> str:
    """dim(W_i ∩ W_j) for all planes, as CSV: 0 disjoint, 1 a point, 2 a line, 3 equal."""
    count = len(configuration.planes)
    values = [[3] * count for _ in range(count)]
    for (i, j), meet in configuration.meet_dimensions().items():
        values[i][j] = values[j][i] = meet + 1
    header = ["plane", *(f"p{i}" for i in range(count))]
    return _csv([header, *([f"p{i}", *row] for i, row in enumerate(values))])


def exchange_matrix_csv(families: Sequence[Sequence[int]]) -> str:
    """How many planes two families have in common, as CSV; on the diagonal how many they have."""
    sets = [set(family) for family in families]
    header = ["family", *(str(i) for i in range(len(sets)))]
    return _csv([header, *([i, *(len(a & b) for b in sets)] for i, a in enumerate(sets))])


def _csv(rows: list[list[Any]]) -> str:
    output = io.StringIO()
    csv.writer(output, lineterminator="\n").writerows(rows)
    return output.getvalue()
