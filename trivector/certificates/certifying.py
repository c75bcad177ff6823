"""From an answer to a document that proves it to somebody else."""

import hashlib
import json
from collections.abc import Sequence
from itertools import accumulate, combinations_with_replacement, islice
from typing import Any

from trivector import __version__
from trivector.certificates.irreducibility import irreducibility
from trivector.certificates.scheme import SchemePart, decisive_degree, scheme_part
from trivector.configurations import Examination
from trivector.errors import BadReductionError
from trivector.exterior import Trivector
from trivector.fields.protocol import Field
from trivector.sections import Limits, SectionReport
from trivector.sections.graded import QuadricAlgebra
from trivector.sections.hilbert import grassmannian_h_vector
from trivector.sections.lines_of_planes import find_pencil
from trivector.sections.quadrics import restricted_quadrics
from trivector.sections.study import expected_dimension
from trivector.subspaces import Plane, Subspace

__all__ = [
    "FORMAT",
    "Claim",
    "assemble",
    "certify_examination",
    "certify_section",
    "certify_trivectors",
    "numbers",
    "span_claim",
    "subject",
]

FORMAT = 1
"""The version of the format of certificates; `checker.FORMAT` is the one it reads."""

Claim = dict[str, Any]
_MOST_PLACES = 12
_HIGHEST_DEGREE = 6
_MOST_OTHERS = 12  # planes, beside the given ones, among which a pencil is looked for


def certify_examination(
    examination: Examination, *, limits: Limits | None = None
) -> dict[str, Any]:
    """A certificate of everything in an examination that can be proved shortly.

    Parameters
    ----------
    examination : Examination
    limits : Limits, optional
        How far the ranks in the evidence may go.

    Returns
    -------
    dict
        A document of kind ``certificate``: the planes as subject; claims on
        incidence and span; all planes of the section or why there are
        infinitely many; completeness. ``uncertified`` says in words what was
        answered but is not claimed, and why. The checker accepts it.

    Notes
    -----
    The evidence is found anew at a place that shows it, so that the time of
    checking does not depend on how the answer was found.

    Examples
    --------
    >>> import trivector
    >>> configuration = trivector.read("data/twenty-planes.json")
    >>> certificate = certify_examination(configuration.examine())
    >>> [claim["claim"] for claim in certificate["claims"]]
    ['incidence', 'span', 'all planes', 'complete']
    """
    field, n = examination.field, examination.n
    incidence: Claim = {
        "claim": "incidence",
        "pairs": examination.pairs.to_json(),
        "disjoint_pairs": [list(pair) for pair in examination.disjoint_pairs],
    }
    claims, uncertified = [incidence, span_claim(examination.span)], []
    section, why = _section_claim(examination.section, examination.planes, limits or Limits())
    if section:
        claims.append(section)
    else:
        uncertified.append(f"the section: {why}")
    if examination.pairwise_incident:
        complete = _complete_claim(examination, section)
        if complete:
            claims.append(complete)
        else:
            uncertified.append("completeness: it was not decided, or rests on the section")
    return assemble(
        field,
        n,
        subject(examination.planes),
        claims,
        uncertified,
        title=examination.title,
        source=examination.source,
        seed=examination.seed,
    )


def certify_section(
    report: SectionReport, *, title: str = "", seed: int = 0, limits: Limits | None = None
) -> dict[str, Any]:
    """A certificate of all planes of a section, or of its being empty or infinite.

    Returns
    -------
    dict
        A document of kind ``certificate`` with a basis of L as subject, as in
        `certify_examination`.

    Examples
    --------
    >>> from trivector import LinearSection, Subspace, prime_field
    >>> line = Subspace.from_terms(prime_field(5), 6, [{(0, 1, 2): 1}, {(3, 4, 5): 1}])
    >>> certificate = certify_section(LinearSection(line).examine())
    >>> certificate["claims"][-1]["planes_over_closure"]
    2
    """
    space = report.subspace
    claims, uncertified = [span_claim(space)], []
    section, why = _section_claim(report, (), limits or Limits())
    if section:
        claims.append(section)
    else:
        uncertified.append(f"the section: {why}")
    return assemble(
        space.field, space.n, subject(space), claims, uncertified, title=title, seed=seed
    )


def certify_trivectors(trivectors: Sequence[Trivector]) -> dict[str, Any]:
    """A certificate of which trivectors are decomposable, with their planes.

    Parameters
    ----------
    trivectors : sequence of Trivector
        At least one, nonzero, all over one field and of one V.

    Examples
    --------
    >>> from trivector import QQ, Trivector
    >>> alpha = Trivector.from_terms(QQ, 6, {(0, 1, 2): 1, (0, 1, 3): 1})
    >>> certify_trivectors([alpha])["claims"][0]["value"]
    True
    """
    field, n = trivectors[0].field, trivectors[0].n
    claims: list[Claim] = []
    for index, trivector in enumerate(trivectors):
        claim: Claim = {"claim": "decomposable", "index": index}
        if trivector.is_decomposable():
            plane = Plane.from_plucker(field, trivector.coordinates)
            claims.append({**claim, "value": True, "plane": numbers(field, plane.rows)})
        else:
            claims.append({**claim, "value": False})
    vectors = numbers(field, [trivector.coordinates for trivector in trivectors])
    return assemble(field, n, {"trivectors": vectors}, claims, [])


def assemble(
    field: Field,
    n: int,
    about: dict[str, Any],
    claims: Sequence[Claim],
    uncertified: Sequence[str],
    **more: Any,
) -> dict[str, Any]:
    """The document: what every certificate has, and the SHA-256 over all of it."""
    definition = field.definition()
    if "modulus" in definition:
        definition["irreducible"] = _field_evidence(field)
    document = {
        "kind": "certificate",
        "format": FORMAT,
        "program": f"trivector {__version__}",
        **{key: value for key, value in more.items() if value not in ("", None)},
        "field": definition,
        "dimension": n,
        "subject": about,
        "claims": list(claims),
        "uncertified": list(uncertified),
    }
    text = json.dumps(document, sort_keys=True, separators=(",", ":"), ensure_ascii=False)
    return {**document, "sha256": hashlib.sha256(text.encode()).hexdigest()}


def _field_evidence(field: Field) -> dict[str, Any] | None:
    """That the modulus of the field is irreducible over its prime field."""
    if field.order is not None:
        return {}
    from trivector.fields import QQ

    return irreducibility(QQ, [QQ.element(c) for c in field.definition()["modulus"]])


def subject(data: Sequence[Plane] | Subspace) -> dict[str, Any]:
    """What a certificate is about."""
    if not isinstance(data, Subspace):
        return {"planes": [numbers(plane.field, plane.rows) for plane in data]}
    # An empty list would be no subject: L = 0 is spanned by the zero vector.
    rows = data.rows or ((data.field.zero,) * data.ambient_dimension,)
    return {"basis": numbers(data.field, rows)}


def numbers(field: Field, rows: Sequence[Sequence[Any]]) -> list[list[Any]]:
    """Entries as they stand in certificates."""
    return [[field.numbers(x) for x in row] for row in rows]


def span_claim(space: Subspace) -> Claim:
    """Dimension and isotropy; it needs no evidence."""
    claim: Claim = {"claim": "span", "dimension": space.dimension}
    if space.n == 6:
        claim |= {"isotropic": space.is_isotropic(), "lagrangian": space.is_lagrangian()}
        if space.field.characteristic == 2:
            claim["totally_singular"] = space.is_totally_singular()
    return claim


def _section_claim(
    report: SectionReport, given: Sequence[Plane], limits: Limits
) -> tuple[Claim | None, str]:
    """All planes, or infinitely many; or None and the reason."""
    if report.infinite:
        claim = _infinite_claim(report, limits)
        return claim, "" if claim else "no short proof that it is infinite within the limits"
    if report.points is None:
        return None, report.limit or "not all of its planes are known over their residue fields"
    parts = [scheme_part(report.subspace, point) for point in report.points]
    if any(part is None for part in parts):
        return None, "a multiple plane is not over the field of the data"
    claim = _all_planes_claim(report, [part for part in parts if part], given, limits)
    return claim, "" if claim else f"no degree at {_MOST_PLACES} places proves it within the limits"


def _all_planes_claim(
    report: SectionReport, parts: Sequence[SchemePart], given: Sequence[Plane], limits: Limits
) -> Claim | None:
    space, points = report.subspace, []
    for part in parts:
        point = part.to_json(space.field, given)
        if part.modulus:
            evidence = irreducibility(space.field, part.modulus)
            if evidence is None:
                return None
            point["irreducible"] = evidence
        points.append(point)
    for reduction in islice(space.field.reductions(), _MOST_PLACES):
        try:
            hilbert = decisive_degree(space, parts, reduction, limits)
        except BadReductionError:
            continue
        if hilbert is not None:
            return {
                "claim": "all planes",
                "length": sum(part.degree * part.multiplicity for part in parts),
                "planes_over_closure": sum(part.degree for part in parts),
                "planes_over_base": sum(part.degree == 1 for part in parts),
                "reduced": all(part.multiplicity == 1 for part in parts),
                "points": points,
                "place": reduction.place,
                "hilbert": list(hilbert),
            }
    return None


def _infinite_claim(report: SectionReport, limits: Limits) -> Claim | None:
    space = report.subspace
    if expected_dimension(space.n, space.dimension) >= 1:
        return {"claim": "infinite", "by": "dimension"}
    pencil = find_pencil(space, report.known + report.others[:_MOST_OTHERS])
    if pencil is not None:
        rows = [numbers(space.field, plane.rows) for plane in pencil]
        return {"claim": "infinite", "by": "pencil", "pencil": rows}
    quadrics = restricted_quadrics(space.rows, space.n, space.field.zero)
    algebra = QuadricAlgebra(space.field, space.dimension, quadrics)
    bounds = list(accumulate(grassmannian_h_vector(space.n)))
    while algebra.hilbert[-1] <= (bound := bounds[min(algebra.top, len(bounds) - 1)]):
        if algebra.next_shape()[1] > limits.columns(space.field) or algebra.top >= _HIGHEST_DEGREE:
            return None
        algebra.extend()
    return {
        "claim": "infinite",
        "by": "functionals",
        "degree": algebra.top,
        "functionals": numbers(space.field, _functionals(algebra, bound + 1)),
    }


def _functionals(algebra: QuadricAlgebra, count: int) -> list[list[Any]]:
    """So many functionals on forms of the top degree that vanish on the ideal.

    The coefficients of the normal form of a monomial at the first standard
    monomials; values in the order of `combinations_with_replacement`.
    """
    field, degree = algebra.field, algebra.top
    values = []
    for monomial in combinations_with_replacement(range(algebra.size), degree):
        form = {0: field.one}
        for step, index in enumerate(monomial):
            product: dict[int, Any] = {}
            for s, c in form.items():
                for t, value in algebra.products[step][index][s]:
                    product[t] = product.get(t, field.zero) + c * value
            form = product
        values.append([form.get(b, field.zero) for b in range(count)])
    return [list(column) for column in zip(*values, strict=True)]


def _complete_claim(examination: Examination, section: Claim | None) -> Claim | None:
    """What the section claim says of completeness; or a plane that was not given."""
    claim: Claim = {"claim": "complete"}
    if section and section["claim"] == "all planes":
        points = section["points"]
        base = all("plane" in point or "modulus" in point for point in points)
        closure = all("plane" in point for point in points)
        return {**claim, "over_closure": closure, "over_base": base}
    if examination.missing:
        further = numbers(examination.field, examination.missing[0].rows)
        return {**claim, "over_closure": False, "over_base": False, "further": further}
    if section:
        return {**claim, "over_closure": False, "over_base": None}
    return None
