"""``trivector graph FILE``: how planes meet, as a table, a graph or a picture."""

import argparse
import sys
from pathlib import PurePath
from typing import Any

from trivector.cli.options import add_common, open_output, positive, write_answer
from trivector.errors import UsageError

__all__ = ["add_parser", "run"]

_TEXT_FORMATS = ("graphml", "dot", "json", "csv")
_PICTURES = ("png", "svg", "pdf")
_SUFFIXES = {"gv": "dot", "xml": "graphml"}


def add_parser(verbs: Any) -> None:
    """Add the verb to the grammar."""
    parser = verbs.add_parser(
        "graph",
        help="meeting graph or incidence graph, as a table, as data or as a picture",
        description="Which planes meet, and which points, lines and hyperplanes several of them "
        "share. Without --format and -o a table; the format follows from the name after -o.",
        allow_abbrev=False,
    )
    parser.add_argument("file", metavar="FILE", help="planes, as JSON or plain text; - for stdin")
    parser.add_argument(
        "--kind",
        choices=("incidence", "meeting", "exchange"),
        default="incidence",
        help="planes against what they share (default); planes that meet; or the maximal "
        "families of pairwise incident planes among the planes of the file, joined when they "
        "have planes in common",
    )
    parser.add_argument(
        "--format",
        choices=(*_TEXT_FORMATS, *_PICTURES),
        help="graphml, dot, json (node-link), csv (the matrix), or a picture",
    )
    parser.add_argument(
        "--picture",
        choices=("circle", "matrix"),
        default="circle",
        help="planes on a circle (default), or the sorted incidence matrix",
    )
    parser.add_argument(
        "--width",
        type=_centimetres,
        default=17.0,
        metavar="CM",
        help="of a picture on paper: 17 for a page (default), 8.6 for a column",
    )
    parser.add_argument(
        "--hyperplanes", action="store_true", help="hyperplanes in graphs and matrices as well"
    )
    parser.add_argument(
        "--orbits", action="store_true", help="group the planes of a picture by orbits"
    )
    group = parser.add_argument_group("for --kind exchange")
    group.add_argument(
        "--shared",
        type=positive,
        default=1,
        metavar="N",
        help="join families with at least N common planes (default 1)",
    )
    group.add_argument(
        "--complete",
        action="store_true",
        help="only families that are complete over the field, whatever the file holds",
    )
    group.add_argument(
        "--max-families",
        type=positive,
        default=2000,
        metavar="N",
        help="refuse more (default 2000)",
    )
    add_common(parser)
    parser.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Exit code 0; 3: whether a family is complete is undecided."""
    from trivector.configurations import Configuration, Incidence
    from trivector.documents import read

    wanted = arguments.format or _format_from_name(arguments.output)
    # Exact integers have as many digits as they have.
    sys.set_int_max_str_digits(0)
    configuration = read(arguments.file, field=arguments.field)
    if not isinstance(configuration, Configuration):
        raise UsageError(f'{arguments.file}: graph needs a document of kind "planes"')
    if arguments.kind == "exchange":
        _exchange(arguments, configuration, wanted)
        return 0
    incidence = Incidence(configuration)
    if wanted in _PICTURES:
        _draw(arguments, incidence, wanted)
    elif wanted is None and not arguments.json:
        _table(arguments, incidence)
    else:
        _write(arguments, incidence, wanted or "json")
    return 0


def _centimetres(text: str) -> float:
    try:
        return float(text)
    except ValueError:
        raise argparse.ArgumentTypeError(
            f"{text!r} is not a number of centimetres; write for example 8.6"
        ) from None


def _format_from_name(output: str | None) -> str | None:
    if output is None:
        return None
    suffix = PurePath(output).suffix[1:].lower()
    suffix = _SUFFIXES.get(suffix, suffix)
    return suffix if suffix in (*_TEXT_FORMATS, *_PICTURES) else None


def _table(arguments: argparse.Namespace, incidence: Any) -> None:
    from trivector.reports import incidence_report

    write_answer(arguments, {}, lambda: incidence_report(incidence))


def _write(arguments: argparse.Namespace, incidence: Any, wanted: str) -> None:
    from trivector.configurations import meeting_graph
    from trivector.reports import graph_files

    meeting = arguments.kind == "meeting"
    configuration = incidence.configuration
    if wanted == "csv":
        text = (
            graph_files.meeting_matrix_csv(configuration)
            if meeting
            else graph_files.incidence_matrix_csv(incidence, hyperplanes=arguments.hyperplanes)
        )
    else:
        graph = (
            meeting_graph(configuration)
            if meeting
            else incidence.graph(hyperplanes=arguments.hyperplanes)
        )
        if wanted == "json":
            data = {
                "kind": "graph",
                "title": configuration.title,
                "field": configuration.field.to_spec(),
                "dimension": configuration.n,
                **graph_files.node_link(graph),
            }
            if not meeting:
                data["shared"] = incidence.to_json()
            arguments.json = True
            write_answer(arguments, data, lambda: "")
            return
        text = graph_files.dot(graph) if wanted == "dot" else graph_files.graphml(graph)
    with open_output(arguments) as file:
        file.write(text)


def _exchange(arguments: argparse.Namespace, configuration: Any, wanted: str | None) -> None:
    from trivector.configurations import (
        enumerate_complete_families,
        enumerate_maximal_families,
        exchange_graph,
    )
    from trivector.reports import exchange_report, graph_files

    if wanted in _PICTURES:
        raise UsageError("pictures show the incidence graph; leave out --kind exchange")
    planes, limit = configuration.planes, arguments.max_families
    families = (
        enumerate_complete_families(planes, limit=limit, seed=arguments.seed)
        if arguments.complete
        else enumerate_maximal_families(planes, limit=limit)
    )
    field = configuration.field
    graph = exchange_graph(families, shared=arguments.shared)
    for node, family in enumerate(families):
        graph.nodes[node]["members"] = " ".join(map(str, family))
    scope = (
        f"complete over {field.name}"
        if arguments.complete
        else "maximal among the planes of the file"
    )
    if wanted in (None, "json"):
        data = {
            "kind": "exchange graph",
            "title": configuration.title,
            "field": field.to_spec(),
            "dimension": configuration.n,
            "families": [list(family) for family in families],
            "scope": scope,
            "exhaustive": True,
            **graph_files.node_link(graph),
        }
        arguments.json = arguments.json or wanted == "json"
        write_answer(arguments, data, lambda: exchange_report(configuration, graph, scope))
        return
    text = {
        "csv": lambda: graph_files.exchange_matrix_csv(families),
        "dot": lambda: graph_files.dot(graph),
        "graphml": lambda: graph_files.graphml(graph),
    }[wanted]()
    with open_output(arguments) as file:
        file.write(text)


def _draw(arguments: argparse.Namespace, incidence: Any, wanted: str) -> None:
    from trivector.reports import pictures

    if arguments.output is None:
        raise UsageError(f"a picture goes to a file; name it with -o, such as -o planes.{wanted}")
    if arguments.kind == "meeting":
        raise UsageError("pictures show the incidence graph; leave out --kind meeting")
    configuration = incidence.configuration
    if arguments.orbits:
        from trivector.symmetry import collineations

        group = collineations(configuration, seed=arguments.seed)
        permutations = [g.permutation for g in group.generators]
        classes = pictures.PlaneClasses.from_permutations(permutations, len(configuration.planes))
    else:
        classes = pictures.PlaneClasses.from_refinement(configuration)
    draw = pictures.matrix_picture if arguments.picture == "matrix" else pictures.circle_picture
    figure = draw(incidence, classes, width=arguments.width)
    try:
        pictures.save_picture(figure, arguments.output, wanted)
    except OSError as error:
        raise UsageError(
            f"{arguments.output}: cannot be written ({error.strerror}); name another file"
        ) from None
