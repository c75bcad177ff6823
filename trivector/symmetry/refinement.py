"""Colours of planes and shared flats that every collineation keeps."""

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from trivector.configurations import Configuration, Incidence

__all__ = ["Colouring", "IncidenceColours"]

Trace = tuple[tuple[tuple[int, tuple[int, ...]], ...], ...]


@dataclass(frozen=True)
class Colouring:
    """A stable colouring of planes and shared flats, and how it came about.

    Attributes
    ----------
    colours : tuple of int
        Planes first, then points, then lines.
    trace : tuple
        Equal traces make the colours of two colourings comparable; a
        collineation carries a colouring to one with the same trace.
    """

    colours: tuple[int, ...]
    trace: Trace


class IncidenceColours:
    """Colour refinement on the incidence graph of a configuration of distinct planes.

    Parameters
    ----------
    configuration : Configuration
    multiplicities : sequence
        Something sortable for each plane that must be kept, such as how often it occurs.
    successor : sequence of int, optional
        A permutation of the planes with which only collineations that commute
        are asked for.

    Notes
    -----
    The colour of a vertex becomes its colour with the multiset of its
    neighbours' colours, until no class splits (one-dimensional Weisfeiler–
    Leman). Colours are ranks of sorted signatures, so they do not depend on
    the order of the planes. Isomorphic incidence graphs have equal traces;
    the converse fails, so these are candidates only. Cost per round: one sort
    of all vertices.
    """

    def __init__(
        self,
        configuration: Configuration,
        multiplicities: Sequence[Any],
        successor: Sequence[int] | None = None,
    ) -> None:
        incidence = Incidence(configuration)
        count = len(configuration.planes)
        self.incidence = incidence
        self.planes = count
        self.flats = incidence.points + incidence.lines
        self._neighbours: list[list[int]] = [[] for _ in range(count + len(self.flats))]
        for vertex, flat in enumerate(self.flats, count):
            for i in flat.planes:
                self._neighbours[i].append(vertex)
                self._neighbours[vertex].append(i)
        self._successor = successor
        kinds = [(0, m) for m in multiplicities]
        kinds += [(1, 0)] * len(incidence.points) + [(2, 0)] * len(incidence.lines)
        ranks = {kind: rank for rank, kind in enumerate(sorted(set(kinds)))}
        initial = tuple(ranks[kind] for kind in kinds)
        # The kinds themselves belong to what is compared.
        start = tuple((kind[0], (kind[1],)) for kind in sorted(kinds))
        refined = self._refine(initial)
        self.start = Colouring(refined.colours, (start, *refined.trace))

    def individualise(self, colouring: Colouring, plane: int) -> Colouring:
        """Give one plane a colour of its own and refine."""
        colours = list(colouring.colours)
        colours[plane] = -1
        return self._refine(tuple(colours))

    def cell(self, colouring: Colouring, colour: int) -> list[int]:
        """The planes with this colour, increasing."""
        return [i for i in range(self.planes) if colouring.colours[i] == colour]

    @property
    def largest_class(self) -> int:
        """The number of planes of the most frequent colour."""
        return max(Counter(self.start.colours[: self.planes]).values())

    def _refine(self, colours: tuple[int, ...]) -> Colouring:
        trace = []
        classes = len(set(colours))
        while True:
            signatures = [
                (colour, tuple(sorted([colours[w] for w in neighbours])))
                for colour, neighbours in zip(colours, self._neighbours, strict=True)
            ]
            if self._successor is not None:
                for i, following in enumerate(self._successor):
                    colour, around = signatures[i]
                    signatures[i] = (colour, (*around, colours[following]))
            ordered = sorted(signatures)
            distinct = list(dict.fromkeys(ordered))
            ranks = {signature: rank for rank, signature in enumerate(distinct)}
            colours = tuple([ranks[signature] for signature in signatures])
            trace.append(tuple(ordered))
            if len(distinct) == classes:
                return Colouring(colours, tuple(trace))
            classes = len(distinct)
