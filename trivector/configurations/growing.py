"""Random pairwise incident planes in general position, one after another."""

from collections.abc import Sequence
from random import Random
from typing import Any

from trivector.configurations.configuration import Configuration
from trivector.errors import UsageError
from trivector.families.random_planes import FREE_PLANES, random_incident_few
from trivector.fields.linear import row_space
from trivector.fields.protocol import Field
from trivector.sections import Limits, LinearSection
from trivector.subspaces import Plane, Subspace

__all__ = ["has_expected_dimension", "random_cut", "random_incident_planes"]

_CUTS = 6
# Enough to prove that a section by ten dimensions is finite or empty; more is not asked.
_BRIEF = Limits(max_degree=6, max_primes=2, max_lift_primes=1, max_points=0)
_ATTEMPTS = 40


def random_incident_planes(
    field: Field, count: int, rng: Random, *, height: int = 2, attempts: int = _ATTEMPTS
) -> Configuration:
    """Random planes of P^5 that meet two by two and are in general position.

    Parameters
    ----------
    count : int
        Over an infinite field at most seven.
    height : int
        Over an infinite field, of the coefficients that are drawn.
    attempts : int
        How often to begin again when no plane can be added.

    Returns
    -------
    Configuration
        ``count`` distinct planes, pairwise incident (checked), for which
        `has_expected_dimension` has been proved. Nothing is claimed of the
        distribution.

    Raises
    ------
    UsageError
        If no such planes were found: the smaller the field, the fewer planes,
        and more than ten, which span a Lagrangian, only by luck; or for more
        than seven over an infinite field.

    Notes
    -----
    Up to seven planes by `random_incident_few`. After that a further plane is
    a point of Z = G(3,V) ∩ P((span)^⊥). While dim Z > 0, Z is cut by random
    hyperplanes down to dimension 0; of the planes over the field in that
    finite section one is drawn. A step is kept only if Z then has the expected
    dimension: growth without that test, over a field as small as F_5, almost
    always ends in an infinite family.

    Examples
    --------
    >>> from random import Random
    >>> from trivector import QQ
    >>> configuration = random_incident_planes(QQ, 4, Random(1))
    >>> len(configuration.planes), configuration.span().dimension
    (4, 4)
    """
    if count < 1:
        raise UsageError(f"planes: at least 1, not {count}")
    if field.order is None and count > FREE_PLANES:
        raise UsageError(
            f"{count} random pairwise incident planes: over {field.name} only {FREE_PLANES} can "
            "be chosen freely, and further ones are seldom rational; take a finite field"
        )
    most = 0
    for _ in range(attempts):
        planes = list(random_incident_few(field, min(count, FREE_PLANES), rng, height=height))
        if not has_expected_dimension(planes, rng, height=height):
            continue
        while len(planes) < count:
            plane = _further_plane(planes, rng)
            if plane is None:
                break
            planes.append(plane)
        most = max(most, len(planes))
        if len(planes) == count:
            return Configuration(tuple(planes))
    raise UsageError(
        f"{count} pairwise incident planes in general position over {field.name}: "
        f"{most or 'none'} found in {attempts} attempts; take fewer, another seed or a larger field"
    )


def has_expected_dimension(planes: Sequence[Plane], rng: Random, *, height: int = 9) -> bool:
    """Whether it is proved that the section by the orthogonal is as small as it can be.

    For pairwise incident planes of P^5 that span a space of dimension r, the
    planes that meet all of them form Z = G(3,6) ∩ P((span)^⊥), of dimension at
    least 9 − r, and not empty. True: it has dimension max(9 − r, 0), over the
    closure. False: it is larger, or the proof did not succeed.

    Notes
    -----
    For r ≤ 9 the section by a random space M ⊂ (span)^⊥ of dimension 10 is shown
    to be empty. P(M) is cut out by 10 − r hyperplanes, and each lowers the
    dimension by at most one, so dim Z ≤ 9 − r. Over a small field there may
    be no such M; six are tried. For r = 10 Z is examined itself.
    """
    space = _orthogonal(planes)
    if space.dimension <= 10:
        report = LinearSection(space).examine(limits=_BRIEF, seed=rng.getrandbits(32))
        return report.infinite is False
    for _ in range(_CUTS):
        cut = random_cut(space, 10, rng, height=height)
        report = LinearSection(cut).examine(limits=_BRIEF, seed=rng.getrandbits(32))
        if report.projective_dimension == -1:
            return True
        # Seldom an accident of the cut: nearly always Z itself is too large.
        if report.infinite:
            return False
    return False


def _further_plane(planes: Sequence[Plane], rng: Random) -> Plane | None:
    """A plane that meets all and keeps the expected dimension, if one is found."""
    space = _orthogonal(planes)
    finite = space.dimension <= 11
    for _ in range(1 if finite else _CUTS):
        cut = space if finite else random_cut(space, 11, rng)
        report = LinearSection(cut).examine(seed=rng.getrandbits(32))
        if report.infinite is not False:
            continue
        candidates = [plane for plane in report.planes or () if plane not in planes]
        for plane in rng.sample(candidates, len(candidates)):
            if has_expected_dimension([*planes, plane], rng):
                return plane
    return None


def _orthogonal(planes: Sequence[Plane]) -> Subspace:
    return Configuration(tuple(planes)).span().orthogonal()


def random_cut(space: Subspace, dimension: int, rng: Random, *, height: int = 9) -> Subspace:
    """A random subspace of a given dimension: uniform over a finite field."""
    field, size = space.field, space.ambient_dimension
    basis = field.matrix(field.integral_basis(space.rows), size)
    while True:
        factors: list[list[Any]] = [
            [field.random_element(rng, height=height) for _ in range(space.dimension)]
            for _ in range(dimension)
        ]
        rows = row_space(field, (field.matrix(factors, space.dimension) * basis).tolist(), size)
        if len(rows) == dimension:
            return Subspace(field, space.n, rows)
