"""Which planes meet, and the families that pairwise incidence makes."""

from collections.abc import Hashable, Iterator, Sequence
from itertools import combinations
from typing import TYPE_CHECKING

from trivector.configurations.configuration import Configuration
from trivector.configurations.incidence import flat_text
from trivector.errors import MixedFieldsError, UndecidedError, UsageError
from trivector.exterior.products import gram_row
from trivector.sections import Limits, iter_rational_planes
from trivector.subspaces import Plane

if TYPE_CHECKING:
    import networkx

__all__ = [
    "enumerate_complete_families",
    "enumerate_maximal_families",
    "exchange_graph",
    "meeting_graph",
]


def meeting_graph(configuration: Configuration) -> "networkx.Graph[str]":
    """The graph of the planes, with an edge where two of them meet.

    Nodes ``p0, p1, …`` (attributes ``kind`` = ``"plane"``, ``index``,
    ``label``, ``coordinates``); edges with ``meet`` = 0 for a common point, 1
    for a line, 2 for equal planes. Disjoint planes have no edge.

    Examples
    --------
    >>> from trivector import read
    >>> graph = meeting_graph(read("data/twenty-one-moved.json"))
    >>> graph.number_of_nodes(), graph.number_of_edges()
    (20, 173)
    """
    import networkx

    graph: networkx.Graph[str] = networkx.Graph(kind="meeting", field=configuration.field.name)
    labels = configuration.labels
    for i, plane in enumerate(configuration.planes):
        graph.add_node(
            f"p{i}",
            kind="plane",
            index=i,
            label=labels[i] if labels else str(i),
            coordinates=flat_text(plane),
        )
    for (i, j), meet in configuration.meet_dimensions().items():
        if meet >= 0:
            graph.add_edge(f"p{i}", f"p{j}", meet=meet)
    return graph


def enumerate_maximal_families(
    candidates: Sequence[Plane], *, limit: int = 100_000
) -> tuple[tuple[int, ...], ...]:
    """All maximal sets of pairwise incident planes among the candidates.

    They are the maximal cliques of the meeting graph. If the candidates are
    *all* planes over F_q, these are all complete configurations over F_q.

    Parameters
    ----------
    candidates : sequence of Plane
        Distinct, over one field and of one V.
    limit : int
        The largest number of families.

    Returns
    -------
    tuple of tuples of int
        Increasing indices into the candidates; sorted. Exhaustive.

    Raises
    ------
    UsageError
        If two candidates are equal, or there are more families than the limit.

    Notes
    -----
    Bron–Kerbosch with pivots, on bit masks: "Algorithm 457: finding all
    cliques of an undirected graph", 1973, doi 10.1145/362342.362367; pivots
    after "The worst-case time complexity for generating all maximal cliques",
    2006, doi 10.1016/j.tcs.2006.06.015. The number of families can be
    exponential in the number of candidates.

    Examples
    --------
    >>> from trivector import read
    >>> planes = read("data/twenty-one-moved.json").planes
    >>> sorted(len(family) for family in enumerate_maximal_families(planes))
    [3, 19]
    """
    masks = _incidence_masks(candidates)
    found: list[tuple[int, ...]] = []
    for family in _maximal_cliques(masks):
        found.append(tuple(family))
        if len(found) > limit:
            raise UsageError(
                f"more than {limit} maximal families among {len(candidates)} planes; "
                "give fewer candidates or a larger limit"
            )
    return tuple(sorted(found))


def enumerate_complete_families(
    candidates: Sequence[Plane],
    *,
    limit: int = 100_000,
    limits: Limits | None = None,
    seed: int = 0,
) -> tuple[tuple[int, ...], ...]:
    """All complete configurations, over the field of the planes, among the candidates.

    A complete configuration is a maximal family of pairwise incident planes,
    so these are the families of `enumerate_maximal_families` that no plane over
    the field, candidate or not, can be added to.

    Parameters
    ----------
    candidates, limit
        As in `enumerate_maximal_families`.
    limits : Limits, optional
        For the planes that meet a whole family.
    seed : int

    Returns
    -------
    tuple of tuples of int
        Increasing indices into the candidates; sorted. Exhaustive.

    Raises
    ------
    UsageError
        As `enumerate_maximal_families`.
    UndecidedError
        If it is not decided within the limits whether a family is complete.

    Examples
    --------
    >>> from trivector import read
    >>> planes = read("data/twenty-planes.json", field="F_3").planes
    >>> [len(family) for family in enumerate_complete_families(planes)]
    [20]
    >>> enumerate_complete_families(planes[1:])
    ()
    """
    found = []
    for family in enumerate_maximal_families(candidates, limit=limit):
        configuration = Configuration(tuple(candidates[i] for i in family))
        complete = _complete_by_sweep(configuration, limits or Limits())
        if complete is None:
            answer = configuration.examine(limits=limits, seed=seed)
            complete = answer.complete_over_base
        if complete is None:
            raise UndecidedError(
                f"whether the planes {', '.join(map(str, family))} are complete over "
                f"{configuration.field.name} is not decided: {answer.section.limit}; "
                "raise that limit"
            )
        if complete:
            found.append(family)
    return tuple(found)


def _complete_by_sweep(configuration: Configuration, limits: Limits) -> bool | None:
    """Over a small finite field: the sweep ends at the first plane that can be added."""
    known = set(configuration.planes)
    try:
        sweep = iter_rational_planes(
            configuration.span().orthogonal(), max_points=limits.max_points
        )
        return all(plane in known for plane in sweep)
    except UsageError:  # an infinite field, or too many points
        return None


def _incidence_masks(planes: Sequence[Plane]) -> list[int]:
    """For each plane the bits of the other planes that meet it."""
    if len(set(planes)) < len(planes):
        first = next(i for i, plane in enumerate(planes) if plane in planes[:i])
        raise UsageError(
            f"candidates {planes.index(planes[first])} and {first} are equal; give each once"
        )
    masks = [0] * len(planes)
    if not planes:
        return masks
    field, n = planes[0].field, planes[0].n
    if any(plane.field != field or plane.n != n for plane in planes):
        raise MixedFieldsError("the candidates are not over one field and of one V; convert them")
    if n == 6:
        # Two planes of P^5 meet exactly when their Plücker vectors pair to zero.
        pluckers = field.matrix([plane.plucker for plane in planes], 20)
        forms = field.matrix([gram_row(plane.plucker) for plane in planes], 20)
        for i, row in enumerate((pluckers * forms.transpose()).tolist()):
            masks[i] = sum(1 << j for j, value in enumerate(row) if not value and j != i)
        return masks
    for i, j in combinations(range(len(planes)), 2):
        if planes[i].is_incident(planes[j]):
            masks[i] |= 1 << j
            masks[j] |= 1 << i
    return masks


def _maximal_cliques(masks: Sequence[int]) -> Iterator[list[int]]:
    """Bron–Kerbosch with pivots and its own stack; each clique increasing."""
    everything = (1 << len(masks)) - 1
    stack = [(0, everything, 0)]
    while stack:
        clique, candidates, excluded = stack.pop()
        if not candidates:
            if not excluded and clique:
                yield list(_bits(clique))
            continue
        pivot = max(_bits(candidates | excluded), key=lambda v: (candidates & masks[v]).bit_count())
        branches = []
        for v in _bits(candidates & ~masks[pivot]):
            branches.append((clique | 1 << v, candidates & masks[v], excluded & masks[v]))
            candidates &= ~(1 << v)
            excluded |= 1 << v
        stack.extend(reversed(branches))


def _bits(mask: int) -> Iterator[int]:
    while mask:
        low = mask & -mask
        yield low.bit_length() - 1
        mask ^= low


def exchange_graph(families: Sequence[Sequence[Hashable]], *, shared: int) -> "networkx.Graph[int]":
    """Complete configurations, joined when they have enough planes in common.

    Parameters
    ----------
    families : sequence of sequences of Plane, or of indices of planes
        For example the families of `enumerate_complete_families`.
    shared : int
        The least number of common planes for an edge, at least 1.

    Returns
    -------
    networkx.Graph
        Nodes 0, 1, … (attribute ``planes``: how many), edges with ``shared``:
        how many planes the two have in common.

    Examples
    --------
    >>> graph = exchange_graph([(0, 1, 2, 3), (1, 2, 3, 4), (4, 5)], shared=2)
    >>> list(graph.edges(data="shared"))
    [(0, 1, 3)]
    """
    import networkx

    if shared < 1:
        raise UsageError(f"shared must be at least 1, not {shared}")
    graph: networkx.Graph[int] = networkx.Graph(kind="exchange", shared=shared)
    sets = [set(family) for family in families]
    for i, members in enumerate(sets):
        graph.add_node(i, planes=len(members))
    for i, j in combinations(range(len(sets)), 2):
        common = len(sets[i] & sets[j])
        if common >= shared:
            graph.add_edge(i, j, shared=common)
    return graph
