"""Collineations of a subspace of ∧³V, through the planes in it."""

from collections import Counter
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from math import lcm
from random import Random
from typing import Any

from trivector.configurations import Configuration
from trivector.errors import EntryError, UndecidedError, UsageError
from trivector.exterior.products import exterior_cube
from trivector.fields.linear import rank, row_space, unit_rows
from trivector.fields.protocol import Field
from trivector.sections import Limits, LinearSection, SectionReport
from trivector.sections.study import Progress
from trivector.subspaces import Plane, Subspace
from trivector.symmetry.collineations import (
    MAX_STEPS,
    Collineation,
    CollineationGroup,
    check_same_space,
    collineations,
)
from trivector.symmetry.comparison import Comparison, compare_configurations
from trivector.symmetry.infinite_sections import algebra_difference, find_carrying_map
from trivector.symmetry.linear_maps import canonical_matrix
from trivector.symmetry.search import Predicate
from trivector.symmetry.subspace_invariants import rational_difference

__all__ = ["compare_subspaces", "subspace_collineations"]

_LARGEST_DEGREE = 4  # of residue fields that are compared
_LARGEST_EXTENSION = 1024  # elements: larger fields have no tables, and are slow


@dataclass(frozen=True)
class _Extension:
    """k ⊂ K with all planes in question over K.

    ``descend`` gives the element of k that an element of K is, or None.
    """

    base: Field
    field: Field
    embed: Callable[[Any], Any]
    descend: Callable[[Any], Any]

    @property
    def trivial(self) -> bool:
        return self.field == self.base

    def of(self, subspace: Subspace) -> Subspace:
        """K ⊗ L."""
        if self.trivial:
            return subspace
        rows = [[self.embed(x) for x in row] for row in subspace.rows]
        return Subspace.span(self.field, subspace.n, rows)

    def is_over_base(self, matrix: Any) -> bool:
        """Whether a multiple of the matrix has its entries in k."""
        rows = canonical_matrix(self.field, matrix.tolist())
        return all(self.descend(x) is not None for row in rows for x in row)

    def conjugation(self, configuration: Configuration) -> tuple[int, ...] | None:
        """The action of x ↦ x^q, q = |k|, on planes over K; None where it is not at hand."""
        if self.base.order is None:
            return None
        planes, q = configuration.planes, self.base.order
        index = {plane.rows: i for i, plane in enumerate(planes)}
        return tuple(
            index[tuple(tuple(x**q for x in row) for row in plane.rows)] for plane in planes
        )


@dataclass(frozen=True)
class _Planes:
    """All planes, over K, of a finite section: or those over k."""

    subspace: Subspace
    configuration: Configuration
    span: bool  # whether they span the subspace

    @classmethod
    def of(cls, subspace: Subspace, planes: Sequence[Plane]) -> "_Planes":
        pluckers = [plane.plucker for plane in planes]
        size = rank(subspace.field, pluckers, subspace.ambient_dimension)
        return cls(subspace, Configuration(tuple(planes)), size == subspace.dimension)


def subspace_collineations(
    subspace: Subspace,
    *,
    semilinear: bool = False,
    limits: Limits | None = None,
    limit: int = MAX_STEPS,
    seed: int = 0,
    on_progress: Progress | None = None,
) -> CollineationGroup:
    """All collineations over the field k of L ⊂ ∧³V with ∧³g·L = L.

    They permute the planes in L, over an extension K where all these are
    defined. The group is found among the collineations over K that permute
    them; each candidate is asked whether it is defined over k, and whether it
    keeps L unless the planes span L.

    Parameters
    ----------
    subspace : Subspace
        With finitely many planes over the closure, at least one.
    semilinear : bool
        Admit v ↦ g·v^(p^j) too; over a finite field, where the planes in L are all
        over it and span L.
    limits : Limits, optional
        For the planes.
    limit : int
        The largest number of partial images that are tried.
    seed : int
    on_progress : callable, optional

    Returns
    -------
    CollineationGroup
        Its ``configuration`` holds the planes in L over K, sorted, and
        ``base_field`` is k if K is larger.

    Raises
    ------
    UndecidedError
        If the planes are not finitely many and at least one, or no field K
        that can be worked with is known; with ``semilinear`` also if they are
        not over k or do not span L.

    Examples
    --------
    >>> from trivector import read
    >>> planes = read("data/twenty-planes.json", field="F_7")
    >>> subspace_collineations(planes.span()).order
    1920
    """
    k = subspace.field
    options: dict[str, Any] = {"limits": limits, "seed": seed, "on_progress": on_progress}
    report = LinearSection(subspace).examine(**options)
    extension, planes, reason = _planes_of([subspace], [report], k, options)
    if not planes:
        raise UndecidedError(f"the symmetries of a subspace are found by its planes, but {reason}")
    (planes_of_it,) = planes
    if semilinear and not (extension.trivial and planes_of_it.span and not reason):
        raise UndecidedError(
            "semilinear maps that keep a subspace are found where all planes in it are over the "
            "field and span it, which they do not here; leave them out"
        )
    conditions: list[Predicate] = []
    how = "the planes span L"
    conjugation: Sequence[int] | None = None
    if not planes_of_it.span:
        conditions.append(_carries(planes_of_it.subspace, planes_of_it.subspace))
        how = "the planes do not span L, so each matrix was asked whether ∧³g keeps L"
    if not extension.trivial:
        conditions.append(extension.is_over_base)
        conjugation = extension.conjugation(planes_of_it.configuration)
        how += f"; each was asked whether it is defined over {k.name}"
    group = collineations(
        planes_of_it.configuration,
        semilinear=semilinear,
        predicate=_all_of(conditions),
        conjugation=conjugation,
        limit=limit,
        seed=seed,
    )
    return replace(
        group,
        method=f"{group.method}; {how}",
        base_field=None if extension.trivial else k,
    )


def compare_subspaces(
    first: Subspace,
    second: Subspace,
    *,
    semilinear: bool = False,
    limits: Limits | None = None,
    limit: int = MAX_STEPS,
    seed: int = 0,
    on_progress: Progress | None = None,
) -> Comparison:
    """Whether some g in GL(V) has ∧³g·L = L′, over the field k and over its closure.

    Parameters
    ----------
    first, second : Subspace
    semilinear : bool
        Admit v ↦ g·v^(p^j) too, over F_q: linear maps are looked for from each
        conjugate of L to L′. The permutation is empty if j > 0.
    limits : Limits, optional
        For the planes in them.
    limit : int
        The largest number of partial images that are tried.
    seed : int
    on_progress : callable, optional

    Returns
    -------
    Comparison
        The matrix is over k; the permutation is one of the planes over an
        extension K over which all of them are defined, sorted. Over the closure
        a collineation that carries L to L′ carries planes to planes, so it is
        one over K, or there is one over K with the same permutation
        (`trivector.symmetry.search`); over k it is looked for among those.
        Where the planes are infinitely many, or none, a yes rests on a matrix
        that `find_carrying_map` found, and a no on an invariant: of the section
        or of the Lie algebra that keeps L, over the closure; of L over a finite
        field with at most 4000 points in P(V), over that field only (how many
        planes it has, and how many points v have which dim(L ∩ F_v), hyperplanes
        H which dim(L ∩ ∧³H)). Undecided where these agree and no matrix was
        found, or where the planes do not determine a collineation.

    Raises
    ------
    MixedFieldsError
    UsageError
        If semilinear maps are asked for over an infinite field.
    """
    check_same_space(first, second)
    options: dict[str, Any] = {"limits": limits, "seed": seed, "on_progress": on_progress}
    if not semilinear:
        return _compare_linearly(first, second, options, limit)
    found = []
    for j, conjugate in enumerate(_conjugates(first)):
        answer = _compare_linearly(conjugate, second, options, limit)
        if answer.equivalent and answer.collineation is not None:
            # The planes of the conjugate are sorted anew: their permutation is not that of L.
            order = () if j else answer.collineation.permutation
            made = replace(answer.collineation, permutation=order, frobenius=j)
            return replace(answer, collineation=made)
        found.append(answer)
    # Of no and undecided, undecided is what is known of all together.
    closures = [answer.over_closure for answer in found]
    closure = True if True in closures else None if None in closures else False
    undecided = [answer for answer in found if answer.equivalent is None]
    return replace((undecided or found)[0], over_closure=closure)


def _conjugates(subspace: Subspace) -> list[Subspace]:
    """L^(p^j), j = 0, 1, …, e − 1, over F_q, q = p^e."""
    k = subspace.field
    if k.order is None:
        raise UsageError(f"semilinear maps need a finite field, not {k.name}; leave them out")
    found, size = [], 1
    while size < k.order:
        rows = [[x**size for x in row] for row in subspace.rows]
        found.append(Subspace.span(k, subspace.n, rows))
        size *= k.characteristic
    return found


def _compare_linearly(
    first: Subspace, second: Subspace, options: dict[str, Any], limit: int
) -> Comparison:
    """`compare_subspaces` without semilinear maps."""
    k, seed = first.field, options["seed"]

    def answer(
        equivalent: bool | None, closure: bool | None, why: str | None, how: str, limit: str = ""
    ) -> Comparison:
        return Comparison(k, equivalent, closure, None, why, how, limit or None, seed)

    if first == second:
        identity = Collineation((), unit_rows(k, first.n))
        return replace(answer(True, True, None, "equal subspaces"), collineation=identity)
    difference = _linear_difference(first, second)
    if difference is not None:
        return answer(False, False, difference, "an invariant of subspaces")
    reports = [LinearSection(space).examine(**options) for space in (first, second)]
    difference = _geometric_difference(*reports)
    if difference is not None:
        return answer(False, False, difference, "an invariant of sections")
    arithmetic = _arithmetic_difference(*reports)
    over_k = None if arithmetic is None else False
    extension, planes, reason = _planes_of([first, second], reports, k, options)
    if not planes:
        how = "planes in the subspaces"
        difference = algebra_difference(first, second)
        if difference is not None:
            return answer(False, False, difference, "an invariant of subspaces")
        if arithmetic is None:
            known = [report.planes for report in reports if report.planes]
            carries_it = _carries(first, second)
            g = find_carrying_map(
                first, second, carries_it, known if len(known) == 2 else [], Random(seed)
            )
            if g is not None:
                how = "found by flags, Lie algebras or frames of planes; ∧³g·L = L′ was checked"
                made = answer(True, True, None, how)
                return replace(made, collineation=Collineation((), g))
            arithmetic = rational_difference(first, second, reports)
            how = f"invariants over {k.name}" if k.order is not None else how
        return answer(None if arithmetic is None else False, None, arithmetic, how, reason)
    one, two = planes

    def search(conditions: Sequence[Predicate], *, commuting: bool) -> Comparison:
        before = extension.conjugation(one.configuration) if commuting else None
        after = extension.conjugation(two.configuration) if commuting else None
        return compare_configurations(
            one.configuration,
            two.configuration,
            predicate=_all_of(conditions),
            conjugations=None if before is None or after is None else (before, after),
            limit=limit,
            seed=seed,
        )

    carries = [] if one.span else [_carries(one.subspace, two.subspace)]
    closed = search(carries, commuting=False)
    if closed.equivalent is None:
        return answer(over_k, None, arithmetic, closed.method, closed.limit or "")
    if closed.equivalent is False:
        # Planes over k alone say nothing about collineations over the closure.
        closure = None if reason else False
        return replace(closed, field=k, over_closure=closure, limit=reason or None)
    if extension.trivial:
        return closed
    over = f"equivalent over {extension.field.name}"
    if arithmetic is not None:
        return answer(False, True, arithmetic, f"{over}; an invariant over {k.name}")
    found = search([*carries, extension.is_over_base], commuting=True)
    if found.collineation is None:
        difference = f"no collineation that carries one to the other is defined over {k.name}"
        return answer(
            found.equivalent,
            True,
            None if found.equivalent is None else difference,
            f"{over}; {found.method}",
            found.limit or "",
        )
    matrix = tuple(tuple(extension.descend(x) for x in row) for row in found.collineation.matrix)
    return replace(
        found, field=k, over_closure=True, collineation=replace(found.collineation, matrix=matrix)
    )


def _splitting(reports: Sequence[SectionReport], k: Any) -> "_Extension | str":
    """A field over which all planes of the sections are defined, or why none is known."""
    for report in reports:
        if report.infinite:
            return "there are infinitely many planes"
        if report.points is None:
            return f"the planes are not known ({report.limit or report.method})"
        if not report.points:
            return "there is no plane, over the closure either"
    points = [point for report in reports for point in report.points or ()]
    degree = lcm(*(point.degree for point in points))
    if degree == 1:
        return _Extension(k, k, lambda x: x, lambda x: x)
    if k.order is not None:
        if k.order**degree > _LARGEST_EXTENSION:
            return f"the planes need the extension of degree {degree} of {k.name}: too large"
        residue = k.extension(degree)
        codes = (k.from_code(code) for code in range(k.order))
        table = {residue.embed(x): x for x in codes}
        return _Extension(k, residue.field, residue.embed, table.get)
    fields: list[Any] = []
    for point in points:
        if point.degree > 1 and point.residue_field not in fields:
            fields.append(point.residue_field)
    if len(fields) > 1 or fields[0] is None:
        return "the planes are defined over different extensions, whose compositum is not made"
    larger = fields[0]

    def descend(x: Any) -> Any:
        try:
            return k.element(larger.format(x))
        except EntryError:
            return None

    return _Extension(k, larger, larger.element, descend)


def _planes_of(
    spaces: Sequence[Subspace], reports: Sequence[SectionReport], k: Field, options: dict[str, Any]
) -> tuple[_Extension, list[_Planes], str]:
    """All planes over an extension; or those over k, if none is known, with the reason.

    Collineations over k permute the planes over k: if they are some, that is
    enough for an answer over k. No planes: nothing can be said.
    """
    trivial = _Extension(k, k, lambda x: x, lambda x: x)
    extension = _splitting(reports, k)
    if isinstance(extension, _Extension):
        found = [_all_planes(space, extension, options) for space in spaces]
        if not any(isinstance(planes, str) for planes in found):
            return extension, [p for p in found if isinstance(p, _Planes)], ""
        reason = next(planes for planes in found if isinstance(planes, str))
    else:
        reason = extension
    if any(report.infinite or not report.planes for report in reports):
        return trivial, [], reason
    base = [
        _Planes.of(space, report.planes or ())
        for space, report in zip(spaces, reports, strict=True)
    ]
    return trivial, base, reason


def _all_planes(
    subspace: Subspace, extension: _Extension, options: dict[str, Any]
) -> "_Planes | str":
    larger = extension.of(subspace)
    report = LinearSection(larger).examine(**options)
    if report.planes is None or report.planes_over_closure != len(report.planes):
        return f"not all planes are known over {extension.field.name}"
    return _Planes.of(larger, report.planes)


def _all_of(conditions: Sequence[Predicate]) -> Predicate | None:
    if not conditions:
        return None
    return lambda matrix: all(condition(matrix) for condition in conditions)


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
        ("Hilbert function", *_hilbert_functions(first, second)),
        ("planes over the closure", first.planes_over_closure, second.planes_over_closure),
        ("multiplicities over the closure", _multiplicities(first), _multiplicities(second)),
    )
    for name, here, there in values:
        if here is not None and there is not None and here != there:
            return f"{name}: {here} and {there}"
    return None


def _hilbert_functions(first: SectionReport, second: SectionReport) -> tuple[Any, Any]:
    """As far as both are known."""
    here, there = first.hilbert_function, second.hilbert_function
    if here is None or there is None:
        return None, None
    known = min(len(here), len(there))
    return list(here[:known]), list(there[:known])


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
    one, two = (
        [p for p in r.points or () if 1 < p.degree <= _LARGEST_DEGREE] for r in (first, second)
    )
    for point in [*one, *two]:
        counts = [
            sum(
                other.degree == point.degree
                and other.multiplicity == point.multiplicity
                and _same_field(point.residue_field, other.residue_field)
                for other in points
            )
            for points in (one, two)
        ]
        if counts[0] != counts[1]:
            name = point.residue_field.name if point.residue_field else "?"
            return f"closed points with residue field {name}: {counts[0]} and {counts[1]}"
    return None


def _same_field(first: Any, second: Any) -> bool:
    """Whether two residue fields of the same degree are isomorphic; unknown ones count as alike.

    Over a finite field they are; otherwise exactly if the modulus of one has a
    root in the other.
    """
    if first is None or second is None or first == second or first.order is not None:
        return True
    return len(first.factor([first.element(c) for c in second.modulus])[0][0]) == 2
