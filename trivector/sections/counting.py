"""How many planes: over extensions of a finite field, or modulo primes."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from typing import Any

from trivector.errors import UsageError
from trivector.fields.prime import prime_field
from trivector.fields.protocol import ResidueField
from trivector.fields.rationals import QQ
from trivector.sections.linear_section import LinearSection
from trivector.sections.section_report import SectionReport
from trivector.sections.study import Limits, Progress
from trivector.sections.sweep import count_rational_planes, iter_rational_planes
from trivector.subspaces import Subspace

__all__ = ["PrimeCount", "count_modulo_primes", "count_over_extensions", "reduce_subspace"]


@dataclass(frozen=True)
class PrimeCount:
    """The planes over F_p in the reduction of a section over ℚ.

    Attributes
    ----------
    prime, count : int
    why_bad : str
        How the section modulo p differs from the one over ℚ in dimension,
        length or reducedness; empty for a prime where it does not.
    """

    prime: int
    count: int
    why_bad: str


def count_over_extensions(
    subspace: Subspace,
    extensions: int,
    *,
    max_points: int,
    jobs: int = 1,
    limits: Limits | None = None,
    on_progress: Progress | None = None,
) -> dict[int, int]:
    """The numbers of planes over F_q, F_{q²}, …, F_{q^extensions}.

    Returns
    -------
    dict
        {extension degree: number}; each exhaustive. For a finite section
        from the degrees of its closed points, otherwise by sweeps.

    Raises
    ------
    UsageError
        For an infinite field, and when a sweep that is needed is refused: at
        the call, before any of them begins, naming the extension degree.
    """
    field: Any = subspace.field
    if field.order is None:
        raise UsageError(
            f"counting needs a finite field or, over Q, primes; {field.name} is infinite"
        )
    report = LinearSection(subspace).examine(limits=_without_sweep(limits), on_progress=on_progress)
    if report.points is not None:
        return {
            j: sum(point.degree for point in report.points if j % point.degree == 0)
            for j in range(1, extensions + 1)
        }
    towers = {}
    for j in range(1, extensions + 1):
        towers[j] = _extended(subspace, field.extension(j))
        try:  # refused at the call, before any sweep begins
            iter_rational_planes(towers[j], max_points=max_points)
        except UsageError as error:
            raise UsageError(f"extension degree {j}: {error}") from None
    return {
        j: count_rational_planes(
            space, jobs=jobs, max_points=max_points, on_progress=_sweep_progress(on_progress, space)
        )
        for j, space in towers.items()
    }


def count_modulo_primes(
    subspace: Subspace,
    primes: Sequence[int],
    *,
    max_points: int,
    jobs: int = 1,
    limits: Limits | None = None,
    on_progress: Progress | None = None,
) -> tuple[PrimeCount, ...]:
    """The planes over F_p of a section over ℚ modulo each of some primes.

    L is reduced by a basis of its saturated lattice of integer points, so
    that L modulo p has the dimension of L for every p.

    Returns
    -------
    tuple of PrimeCount
        In the order of the primes; each count is exhaustive over F_p. Where
        a limit kept dimension, length or reducedness from being known, over
        ℚ or modulo p, that one is not compared.

    Raises
    ------
    UsageError
        If L is not over ℚ, or the sweep for an infinite section is refused.
    FieldError
        For a number that is not a prime.
    """
    if not subspace.field.reconstructs:
        raise UsageError(
            f"counting modulo primes needs a section over {QQ.name}, not over {subspace.field.name}"
        )
    limits = _without_sweep(limits)
    above = LinearSection(subspace).examine(limits=limits, on_progress=on_progress)
    counts = []
    for p in primes:
        reduced = reduce_subspace(subspace, p)
        report = LinearSection(reduced).examine(limits=limits, on_progress=on_progress)
        if report.planes is not None:
            count = len(report.planes)
        else:
            count = count_rational_planes(
                reduced,
                jobs=jobs,
                max_points=max_points,
                on_progress=_sweep_progress(on_progress, reduced),
            )
        counts.append(PrimeCount(p, count, _difference(above, report)))
    return tuple(counts)


def reduce_subspace(subspace: Subspace, p: int) -> Subspace:
    """L modulo p, for L over ℚ: of the same dimension for every prime."""
    field = prime_field(p)
    rows = subspace.field.integral_basis(subspace.rows)
    return Subspace.span(field, subspace.n, rows)


def _difference(above: SectionReport, below: SectionReport) -> str:
    """In which of dimension, degree and reducedness two sections differ, in words."""
    names = {"projective_dimension": "dimension", "degree": "degree", "reduced": "reduced"}
    for key, name in names.items():
        here, there = getattr(below, key), getattr(above, key)
        if None not in (here, there) and here != there:
            words = {True: "yes", False: "no"} if name == "reduced" else {}
            return f"{name} {words.get(here, here)} in place of {words.get(there, there)}"
    return ""


def _extended(subspace: Subspace, residue: ResidueField) -> Subspace:
    rows = tuple(tuple(residue.embed(x) for x in row) for row in subspace.rows)
    return Subspace(residue.field, subspace.n, rows)


def _without_sweep(limits: Limits | None) -> Limits:
    return replace(limits or Limits(), max_points=0)


def _sweep_progress(
    on_progress: Progress | None, space: Subspace
) -> Callable[[int, int], None] | None:
    if on_progress is None:
        return None
    return lambda done, total: on_progress(
        f"sweep over {space.field.name}: {done} of {total} points"
    )
