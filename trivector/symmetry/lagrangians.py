"""Collineations of a subspace of ∧³V, through the planes in it."""

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

from trivector.configurations import Configuration
from trivector.errors import UndecidedError
from trivector.exterior.products import exterior_cube
from trivector.fields.linear import rank, row_space, unit_rows
from trivector.sections import Limits, LinearSection, SectionReport
from trivector.sections.study import Progress
from trivector.subspaces import Subspace
from trivector.symmetry.collineations import (
    MAX_STEPS,
    Collineation,
    CollineationGroup,
    check_same_space,
    collineations,
)
from trivector.symmetry.comparison import Comparison, compare_configurations
from trivector.symmetry.search import Predicate

__all__ = ["compare_subspaces", "subspace_collineations"]


@dataclass(frozen=True)
class _Planes:
    """The planes of a finite section over the field of L, and how much they say about L."""

    report: SectionReport
    configuration: Configuration
    all_rational: bool
    span: bool

    @classmethod
    def of(cls, report: SectionReport) -> "_Planes | str":
        """The planes, or the reason why they do not help."""
        k = report.subspace.field.name
        if report.infinite:
            return "the section is infinite: its planes are no finite configuration"
        if report.planes is None:
            return f"the planes over {k} are not known: {report.limit or report.method}"
        if not report.planes:
            return f"the section has no plane over {k}"
        configuration = Configuration(report.planes)
        pluckers = [plane.plucker for plane in report.planes]
        subspace = report.subspace
        return cls(
            report,
            configuration,
            report.planes_over_closure == len(report.planes),
            rank(subspace.field, pluckers, subspace.ambient_dimension) == subspace.dimension,
        )


def subspace_collineations(
    subspace: Subspace,
    *,
    limits: Limits | None = None,
    limit: int = MAX_STEPS,
    seed: int = 0,
    on_progress: Progress | None = None,
) -> CollineationGroup:
    """All collineations over the field of L ⊂ ∧³V with ∧³g·L = L.

    They permute the planes in L; the group is found among those that permute
    the planes over the field, and each candidate is asked whether it keeps L
    unless the planes span L.

    Parameters
    ----------
    subspace : Subspace
        With finitely many planes, at least one of them over the field.
    limits : Limits, optional
        For the planes.
    limit : int
        The largest number of partial images that are tried.
    seed : int
    on_progress : callable, optional

    Returns
    -------
    CollineationGroup
        Its ``configuration`` holds the planes in L over the field, sorted.

    Raises
    ------
    UndecidedError
        If the planes over the field are not finitely many and at least one.

    Examples
    --------
    >>> from trivector import read
    >>> planes = read("data/twenty-planes.json", field="F_7")
    >>> subspace_collineations(planes.span()).order
    1920
    """
    planes = _examined(subspace, limits, seed, on_progress)
    if isinstance(planes, str):
        raise UndecidedError(f"{planes}; the symmetries of this subspace cannot be found that way")
    keeps = None if planes.span else _carries(subspace, subspace)
    group = collineations(planes.configuration, predicate=keeps, limit=limit, seed=seed)
    how = (
        "the planes span L"
        if planes.span
        else "the planes do not span L, so each matrix was asked whether ∧³g keeps L"
    )
    return replace(group, method=f"{group.method}; {how}")


def compare_subspaces(
    first: Subspace,
    second: Subspace,
    *,
    limits: Limits | None = None,
    limit: int = MAX_STEPS,
    seed: int = 0,
    on_progress: Progress | None = None,
) -> Comparison:
    """Whether some g in GL(V) has ∧³g·L = L′, over the field and over its closure.

    Parameters
    ----------
    first, second : Subspace
    limits : Limits, optional
        For the planes in them.
    limit : int
        The largest number of partial images that are tried.
    seed : int
    on_progress : callable, optional

    Returns
    -------
    Comparison
        Its permutation is one of the planes over the field, sorted. Over the
        closure a no needs an invariant, or all planes defined over the field
        (then each collineation is, see `trivector.symmetry.search`). Undecided
        where the planes over the field say too little.

    Raises
    ------
    MixedFieldsError
    """
    check_same_space(first, second)
    k = first.field
    if first == second:
        identity = unit_rows(k, first.n)
        permutation: tuple[int, ...] = ()
        planes = _examined(first, limits, seed, on_progress)
        if not isinstance(planes, str):
            permutation = tuple(range(len(planes.configuration.planes)))
        return Comparison(
            k, True, True, Collineation(permutation, identity), None, "equal subspaces", seed=seed
        )
    difference = _linear_difference(first, second)
    if difference is not None:
        return Comparison(k, False, False, None, difference, "an invariant", seed=seed)
    reports = [
        LinearSection(space).examine(limits=limits, seed=seed, on_progress=on_progress)
        for space in (first, second)
    ]
    difference = _geometric_difference(*reports)
    if difference is not None:
        return Comparison(k, False, False, None, difference, "an invariant of sections", seed=seed)
    difference = _arithmetic_difference(*reports)
    if difference is not None:
        return Comparison(
            k, False, None, None, difference, f"an invariant of sections over {k.name}",
            "over the closure: planes over extensions are not compared", seed,
        )  # fmt: skip
    found = [_Planes.of(report) for report in reports]
    for one in found:
        if isinstance(one, str):
            return Comparison(k, None, None, None, None, "planes in the subspaces", one, seed)
    one, two = found
    assert isinstance(one, _Planes)
    assert isinstance(two, _Planes)
    carries = None if one.span else _carries(first, second)
    answer = compare_configurations(
        one.configuration, two.configuration, predicate=carries, limit=limit, seed=seed
    )
    if answer.equivalent is not False:
        return answer
    # A collineation over the closure carries planes over the field to planes
    # over the field only if all planes are; then it is one of those searched.
    closure = False if one.all_rational and two.all_rational else None
    reason = None if closure is False else "over the closure: not all planes are over the field"
    return replace(answer, over_closure=closure, limit=reason)


def _examined(
    subspace: Subspace, limits: Limits | None, seed: int, on_progress: Progress | None
) -> "_Planes | str":
    report = LinearSection(subspace).examine(limits=limits, seed=seed, on_progress=on_progress)
    return _Planes.of(report)


def _carries(first: Subspace, second: Subspace) -> Predicate:
    """The question whether ∧³g·L = L′, for invertible g."""
    k, size = first.field, first.ambient_dimension
    rows = k.matrix(first.rows, size)

    def question(matrix: Any) -> bool:
        image = rows * k.matrix(exterior_cube(matrix.tolist()), size)
        return row_space(k, image.tolist(), size) == second.rows

    return question


def _linear_difference(first: Subspace, second: Subspace) -> str | None:
    if first.dimension != second.dimension:
        return f"dimension in ∧³V: {first.dimension} and {second.dimension}"
    if first.n == 6:
        ranks = [s.dimension - s.meet(s.orthogonal()).dimension for s in (first, second)]
        if ranks[0] != ranks[1]:
            return f"rank of the pairing: {ranks[0]} and {ranks[1]}"
    return None


def _geometric_difference(first: SectionReport, second: SectionReport) -> str | None:
    """Invariants over the closure, where both are known."""
    values: Sequence[tuple[str, Any, Any]] = (
        ("dimension of the section", first.projective_dimension, second.projective_dimension),
        ("degree of the section", first.degree, second.degree),
        ("section infinite", first.infinite, second.infinite),
        ("planes over the closure", first.planes_over_closure, second.planes_over_closure),
        ("multiplicities over the closure", _multiplicities(first), _multiplicities(second)),
    )
    for name, here, there in values:
        if here is not None and there is not None and here != there:
            return f"{name}: {here} and {there}"
    return None


def _multiplicities(report: SectionReport) -> dict[int, int] | None:
    if report.points is None:
        return None
    counts: Counter[int] = Counter()
    for point in report.points:
        counts[point.multiplicity] += point.degree
    return dict(sorted(counts.items()))


def _arithmetic_difference(first: SectionReport, second: SectionReport) -> str | None:
    """Invariants over the field of the data only."""
    if first.points is None or second.points is None:
        return None
    here, there = (
        sorted((point.degree, point.multiplicity) for point in report.points or ())
        for report in (first, second)
    )
    if here != there:
        return f"degrees and multiplicities of the closed points: {here} and {there}"
    return None
