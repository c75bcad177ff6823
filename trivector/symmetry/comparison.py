"""Are two configurations projectively equivalent? The proof, or what tells them apart."""

from collections import Counter
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from random import Random
from typing import Any

from trivector.configurations import Configuration, Incidence
from trivector.fields.linear import rank
from trivector.fields.protocol import Field
from trivector.symmetry.collineations import (
    MAX_STEPS,
    Collineation,
    check_same_space,
    frobenius_image,
)
from trivector.symmetry.linear_maps import canonical_matrix
from trivector.symmetry.search import Base, DistinctPlanes, LimitReachedError, Predicate, Search

__all__ = ["Comparison", "compare_configurations", "distinguishing_invariant"]


@dataclass(frozen=True)
class Comparison:
    """Whether two configurations (or subspaces) are projectively equivalent.

    Attributes
    ----------
    field : Field
        The field of the data.
    equivalent : bool or None
        Over that field; None: undecided.
    over_closure : bool or None
        Over its algebraic closure.
    collineation : Collineation or None
        The proof of a yes: it carries plane i of the first to plane
        ``permutation[i]`` of the second.
    difference : str or None
        The proof of a no: an invariant with its two values, or that the
        search was exhaustive.
    method : str
    limit : str or None
        Why an answer is undecided.
    """

    field: Field
    equivalent: bool | None
    over_closure: bool | None
    collineation: Collineation | None
    difference: str | None
    method: str
    limit: str | None = None
    seed: int = 0

    @property
    def exit_code(self) -> int:
        """0 equivalent over the field of the data, 1 not, 3 undecided."""
        return {True: 0, False: 1, None: 3}[self.equivalent]

    @property
    def exhaustive(self) -> bool:
        """Whether both answers are decided."""
        return self.equivalent is not None and self.over_closure is not None

    def to_json(self) -> dict[str, Any]:
        """The keys of a ``compare`` answer."""
        found = self.collineation
        proof = (
            {"matrix": None, "permutation": None} if found is None else found.to_json(self.field)
        )
        return {
            "kind": "comparison",
            "field": self.field.to_spec(),
            "equivalent": self.equivalent,
            "over_closure": self.over_closure,
            **proof,
            "difference": self.difference,
            "scope": [self.field.name, self.field.closure_name],
            "method": self.method,
            "exhaustive": self.exhaustive,
            "limit": self.limit,
            "seed": self.seed,
        }


# In this order: cheap ones first. Values are compared and shown, so they are plain.
_INVARIANTS: tuple[tuple[str, Callable[[Incidence], Any]], ...] = (
    ("number of planes", lambda i: len(i.configuration.planes)),
    ("multiplicities of repeated planes", lambda i: _repetitions(i.configuration)),
    ("pairs by dimension of the meet", lambda i: _pairs(i.configuration)),
    ("dimension of the span in V", lambda i: _span_in_v(i.configuration)),
    ("dimension of the span in ∧³V", lambda i: i.configuration.span().dimension),
    ("isotropy of the span", lambda i: _isotropy(i.configuration)),
    ("points by number of planes", lambda i: i.profile("points")),
    ("lines by number of planes", lambda i: i.profile("lines")),
    ("points on each plane by number of planes", lambda i: _spread(i, "points")),
    ("dim(A ∩ F_v) at the shared points", lambda i: _point_dimensions(i)),
    ("hyperplanes by number of planes", lambda i: i.profile("hyperplanes")),
    ("hyperplanes through each plane by number of planes", lambda i: _spread(i, "hyperplanes")),
)


def compare_configurations(
    first: Configuration,
    second: Configuration,
    *,
    semilinear: bool = False,
    predicate: Predicate | None = None,
    conjugations: tuple[Sequence[int], Sequence[int]] | None = None,
    limit: int = MAX_STEPS,
    seed: int = 0,
) -> Comparison:
    """Whether a collineation carries the planes of one to the planes of the other.

    Parameters
    ----------
    first, second : Configuration
        Over one field and of one V, in any order of the planes; repeated
        planes keep their multiplicity.
    semilinear : bool
        Over F_q: admit v ↦ g·v^(p^j) as well.
    predicate : callable, optional
        A further condition on the n×n matrix.
    conjugations : pair of sequences of int, optional
        Permutations of the planes of the first and of the second, all
        different, which every matrix with that property carries to each other.
    limit : int
        The largest number of partial images that are tried.
    seed : int
        For the search of invertible matrices in a space of them.

    Returns
    -------
    Comparison
        The answer over the closure is the same as over the field: a
        permutation that comes from a collineation over an extension comes
        from one over the field (`trivector.symmetry.search` has the proof).
        The same for semilinear maps: those of F_q exhaust the action of all
        field automorphisms on planes over F_q. With a predicate a no leaves
        the closure undecided.

    Raises
    ------
    MixedFieldsError

    Examples
    --------
    >>> from trivector import Configuration, read
    >>> planes = read("data/twenty-planes.json").planes
    >>> answer = compare_configurations(Configuration(planes[1:]), Configuration(planes[:-1]))
    >>> answer.equivalent, answer.over_closure
    (True, True)
    >>> compare_configurations(Configuration(planes[:3]), Configuration(planes[2:])).difference
    'number of planes: 3 and 18'
    """
    check_same_space(first, second)
    k = first.field
    difference = distinguishing_invariant(first, second)
    if difference is not None:
        return Comparison(
            k, False, False, None, difference, "an invariant of collineations", seed=seed
        )
    before, after = conjugations or (None, None)
    target = DistinctPlanes(second, after)
    powers = [0]
    if semilinear and k.order is not None:
        powers += [j for j in range(1, 64) if k.characteristic**j < k.order]
    steps, undecided, invariant_only = 0, "", True
    for power in powers:
        source = DistinctPlanes(
            Configuration(tuple(frobenius_image(plane, power) for plane in first.planes)), before
        )
        search = Search(Base(source), target, predicate=predicate, limit=limit, rng=Random(seed))
        try:
            found = search.first()
        except LimitReachedError:
            found, undecided = None, f"{limit} partial images were tried"
        steps += search.steps
        undecided = undecided or search.undecided
        invariant_only = invariant_only and search.steps == 0
        if found is not None:
            permutation = source.permutation(found.images, target)
            matrix = canonical_matrix(k, found.matrix.tolist())
            return Comparison(
                k,
                True,
                True,
                Collineation(permutation, matrix, power),
                None,
                f"a collineation over {k.name}, found after {steps} partial images",
                seed=seed,
            )
    if undecided:
        return Comparison(k, None, None, None, None, "search", undecided, seed)
    more = " and cross ratios of the shared points" if target.cross_ratios else ""
    difference = (
        f"colour refinement of the incidence graph{more}: the stable colourings differ"
        if invariant_only
        else f"all known invariants agree, and none of the {steps} partial images that had to be "
        "tried extends to a collineation"
    )
    closure = False if predicate is None else None
    return Comparison(k, False, closure, None, difference, "exhaustive search", seed=seed)


def distinguishing_invariant(first: Configuration, second: Configuration) -> str | None:
    """The first of a fixed list of invariants that differs, with both values; None if none does.

    All of them are the same over every extension of the field.
    """
    one, two = Incidence(first), Incidence(second)
    for name, value in _INVARIANTS:
        here, there = value(one), value(two)
        if here != there:
            return f"{name}: {_text(here)} and {_text(there)}"
    return None


def _text(value: Any) -> str:
    if isinstance(value, dict):
        return "{" + ", ".join(f"{key}: {count}" for key, count in value.items()) + "}"
    return str(value)


def _repetitions(configuration: Configuration) -> dict[int, int]:
    counts = Counter(Counter(configuration.planes).values())
    return dict(sorted(counts.items()))


def _pairs(configuration: Configuration) -> dict[str, int]:
    words = {2: "equal", 1: "line", 0: "point", -1: "disjoint"}
    counts = Counter(configuration.meet_dimensions().values())
    return {words[d]: counts[d] for d in (2, 1, 0, -1) if counts[d]}


def _span_in_v(configuration: Configuration) -> int:
    rows = [row for plane in configuration.planes for row in plane.rows]
    return rank(configuration.field, rows, configuration.n)


def _isotropy(configuration: Configuration) -> bool | None:
    return configuration.span().is_isotropic() if configuration.n == 6 else None


def _point_dimensions(incidence: Incidence) -> dict[int, int] | None:
    dimensions = incidence.point_dimensions
    return None if dimensions is None else dict(sorted(Counter(dimensions).items()))


def _spread(incidence: Incidence, kind: str) -> dict[str, int]:
    """How many planes have which numbers of points (hyperplanes) of which kind."""
    counts = Counter(
        " + ".join(f"{count} of {planes}" for planes, count in per_plane.items()) or "none"
        for per_plane in incidence.per_plane(kind)
    )
    return dict(sorted(counts.items()))
