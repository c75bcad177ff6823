"""Certificates of collineations: that they keep planes or a subspace, or carry them to others."""

from collections.abc import Sequence
from typing import Any, Protocol

from trivector.certificates.certifying import Claim, assemble, numbers, span_claim, subject
from trivector.configurations import Configuration
from trivector.errors import MixedFieldsError, UsageError
from trivector.subspaces import Subspace

__all__ = ["Carrying", "certify_collineations"]


class Carrying(Protocol):
    """A collineation v ↦ g·v^(p^j) with what it does to the planes.

    Attributes
    ----------
    permutation : tuple of int
        Plane i goes to plane ``permutation[i]``; not read for subspaces.
    matrix : n×n tuple of tuples of scalars
        g acts on column vectors.
    frobenius : int
        j.
    """

    @property
    def permutation(self) -> tuple[int, ...]: ...
    @property
    def matrix(self) -> tuple[tuple[Any, ...], ...]: ...
    @property
    def frobenius(self) -> int: ...


def certify_collineations(
    source: Configuration | Subspace,
    collineations: Sequence[Carrying],
    *,
    target: Configuration | Subspace | None = None,
    uncertified: Sequence[str] = (),
    title: str = "",
    seed: int = 0,
) -> dict[str, Any]:
    """A certificate that each collineation carries the source to the target.

    Parameters
    ----------
    source : Configuration or Subspace
    collineations : sequence of Carrying
        Over the field of the source. None at all: the certificate says only
        what the source spans.
    target : of the same type, optional
        Over the same field; the source itself if it is not given.
    uncertified : sequence of str
        What else was answered: that these generate all collineations, say.

    Returns
    -------
    dict
        A document of kind ``certificate``; the checker applies each map to
        the Plücker coordinates.

    Raises
    ------
    UsageError
        If one is a configuration and the other a subspace.
    MixedFieldsError
        If they are over different fields.

    Examples
    --------
    >>> import trivector
    >>> planes = trivector.read("data/twenty-planes.json", field="F_7")
    >>> group = trivector.symmetry.collineations(planes)
    >>> certificate = certify_collineations(planes, group.generators)
    >>> {claim["claim"] for claim in certificate["claims"][1:]}
    {'collineation'}
    """
    field = source.field
    about = subject(source.planes if isinstance(source, Configuration) else source)
    claims: list[Claim] = [
        span_claim(source.span() if isinstance(source, Configuration) else source)
    ]
    more: Claim = {}
    if target is not None:
        if isinstance(source, Configuration) != isinstance(target, Configuration):
            raise UsageError("source and target must both be configurations, or both subspaces")
        if target.field != field:
            raise MixedFieldsError(
                f"source over {field.name}, target over {target.field.name}; use one field"
            )
        more["target"] = subject(target.planes if isinstance(target, Configuration) else target)
    for found in collineations:
        claim: Claim = {"claim": "collineation", "matrix": numbers(field, found.matrix), **more}
        if isinstance(source, Configuration):
            claim["permutation"] = list(found.permutation)
        if found.frobenius:
            claim["frobenius"] = found.frobenius
        claims.append(claim)
    return assemble(field, source.n, about, claims, uncertified, title=title, seed=seed)
