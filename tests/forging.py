"""Certificates that somebody changed: hashed again, checked, and judged by the engine.

The digest is computed here and not by the package. Whether a changed
certificate is still true is decided by `examine`, which reads no evidence.
"""

import copy
import hashlib
import json
from collections import Counter
from collections.abc import Sequence
from itertools import combinations, permutations
from random import Random
from typing import Any

from trivector.certificates import checker
from trivector.configurations import Configuration
from trivector.errors import TrivectorError
from trivector.exterior import Trivector
from trivector.fields import Field, field_from_spec
from trivector.sections import LinearSection, SectionReport
from trivector.subspaces import Plane, Subspace

Certificate = dict[str, Any]


class RefusedError(Exception):
    """The checker did not get as far as the claims."""


def sealed(document: Certificate, **changes: Any) -> Certificate:
    """A copy with some keys changed and the SHA-256 of what it says now."""
    made = copy.deepcopy({**document, **changes})
    made.pop("sha256", None)
    text = json.dumps(made, sort_keys=True, separators=(",", ":"), ensure_ascii=False)
    made["sha256"] = hashlib.sha256(text.encode("utf-8", "surrogatepass")).hexdigest()
    return made


def verdicts(document: Certificate) -> list[tuple[str, bool, str]]:
    """What the checker says of each claim, after a round trip through JSON."""
    try:
        check = checker.Check(checker.load(json.dumps(document)))
        return list(check.run())
    except (checker.ClaimError, *checker.MALFORMED) as error:
        raise RefusedError(f"{type(error).__name__}: {error}") from error


def accepted(document: Certificate) -> bool:
    try:
        return all(verdict for _, verdict, _ in verdicts(document))
    except RefusedError:
        return False


def why_rejected(document: Certificate) -> str:
    """The first reason; fails if every claim was accepted."""
    try:
        reasons = [words for _, verdict, words in verdicts(document) if not verdict]
    except RefusedError as refusal:
        return str(refusal)
    assert reasons, "a false certificate was accepted"
    return reasons[0]


def claim_of(document: Certificate, name: str) -> dict[str, Any]:
    (claim,) = (claim for claim in document["claims"] if claim["claim"] == name)
    return claim


# The truth, from the engine


def field_of(document: Certificate) -> Field:
    data = document["field"]
    characteristic = data.get("characteristic", 0)
    if "modulus" not in data:
        return field_from_spec(f"F_{characteristic}" if characteristic else "Q")
    terms = [f"{c}*x^{i}" for i, c in enumerate(data["modulus"]) if c != 0]
    spec: dict[str, Any] = {"modulus": "+".join(terms).replace("+-", "-")}
    return field_from_spec(spec | ({"characteristic": characteristic} if characteristic else {}))


def element(field: Field, number: Any) -> Any:
    """The element that stands in a certificate as an int, "p/q" or a list of coefficients."""
    if not isinstance(number, list):
        return field.element(number)
    total, power = field.zero, field.one
    for c in number:
        total = total + field.element(c) * power
        power = power * field.element("a")
    return total


def vector(field: Field, numbers: Sequence[Any]) -> list[Any]:
    return [element(field, x) for x in numbers]


def plane(field: Field, rows: Sequence[Sequence[Any]]) -> Plane:
    return Plane.from_rows(field, [vector(field, row) for row in rows])


def wedge(field: Field, rows: Sequence[Sequence[Any]]) -> list[Any]:
    """The coordinates of u∧v∧w by the formula of Leibniz."""
    found = []
    for triple in combinations(range(len(rows[0])), 3):
        total = field.zero
        for a, b, c in permutations(range(3)):
            term = rows[0][triple[a]] * rows[1][triple[b]] * rows[2][triple[c]]
            even = (a, b, c) in ((0, 1, 2), (1, 2, 0), (2, 0, 1))
            total = total + term if even else total - term
        found.append(total)
    return found


class Truth:
    """The subject of a certificate as the engine sees it, examined at most once."""

    def __init__(self, document: Certificate) -> None:
        self.document = document
        self.field, self.n = field_of(document), document["dimension"]
        ((kind, items),) = document["subject"].items()
        self.configuration: Configuration | None = None
        if kind == "planes":
            self.configuration = Configuration(tuple(plane(self.field, rows) for rows in items))
            self.vectors = [list(p.plucker) for p in self.configuration.planes]
            self.span = self.configuration.span()
            self.section = self.configuration.section().subspace
        else:
            self.vectors = [vector(self.field, row) for row in items]
            self.span = self.section = Subspace.span(self.field, self.n, self.vectors)
        self._report: SectionReport | None = None

    @property
    def report(self) -> SectionReport:
        if self._report is None:
            known: list[Plane] = []
            if self.configuration is not None:
                planes = dict.fromkeys(self.configuration.planes)
                known = [p for p in planes if self.section.contains(p.plucker)]
            self._report = LinearSection(self.section).examine(known)
        return self._report

    def holds(self, claim: dict[str, Any]) -> bool:
        return bool(getattr(self, "holds_" + claim["claim"].replace(" ", "_"))(claim))

    def holds_incidence(self, claim: dict[str, Any]) -> bool:
        assert self.configuration is not None
        meets = self.configuration.meet_dimensions()
        count = Counter(meets.values())
        pairs = {"equal": count[2], "line": count[1], "point": count[0], "disjoint": count[-1]}
        disjoint = [list(pair) for pair, value in meets.items() if value < 0]
        return pairs == claim["pairs"] and disjoint == claim["disjoint_pairs"]

    def holds_span(self, claim: dict[str, Any]) -> bool:
        facts: dict[str, Any] = {"claim": "span", "dimension": self.span.dimension}
        if self.n == 6:
            facts |= {
                "isotropic": self.span.is_isotropic(),
                "lagrangian": self.span.is_lagrangian(),
            }
            if self.field.characteristic == 2:
                facts["totally_singular"] = self.span.is_totally_singular()
        return json.dumps(facts, sort_keys=True) == json.dumps(claim, sort_keys=True)

    def holds_decomposable(self, claim: dict[str, Any]) -> bool:
        trivector = Trivector(self.field, self.vectors[claim["index"]])
        if not any(trivector.coordinates):
            return False  # nothing is to be said of zero
        if trivector.is_decomposable() is not claim["value"]:
            return False
        if not claim["value"]:
            return True
        return plane(self.field, claim["plane"]) == Plane.from_plucker(
            self.field, trivector.coordinates
        )

    def holds_all_planes(self, claim: dict[str, Any]) -> bool:
        """Numbers, residue degrees, multiplicities, and which planes are rational."""
        report = self.report
        assert report.infinite is not None
        if report.infinite:
            return False
        assert report.points is not None
        found, listed = [], []
        for point in report.points:
            rational = None if point.plane is None or point.degree > 1 else point.plane
            found.append((point.degree, point.multiplicity, rational))
        for data in claim["points"]:
            degree = max(1, len(data.get("modulus", [])) - 1)
            if "plane" in data:
                assert self.configuration is not None
                rational = self.configuration.planes[data["plane"]]
            else:
                rational = None if degree > 1 else plane(self.field, data["rows"])
            listed.append((degree, data.get("multiplicity", 1), rational))
        facts = {
            "length": sum(degree * multiplicity for degree, multiplicity, _ in found),
            "planes_over_closure": sum(degree for degree, _, _ in found),
            "planes_over_base": sum(degree == 1 for degree, _, _ in found),
            "reduced": all(multiplicity == 1 for _, multiplicity, _ in found),
        }
        return Counter(found) == Counter(listed) and all(
            json.dumps(claim[key]) == json.dumps(value) for key, value in facts.items()
        )

    def holds_infinite(self, claim: dict[str, Any]) -> bool:
        assert self.report.infinite is not None
        return self.report.infinite

    def holds_complete(self, claim: dict[str, Any]) -> bool:
        assert self.configuration is not None
        report, planes = self.report, self.configuration.planes
        if any(value < 0 for value in self.configuration.meet_dimensions().values()):
            return False
        assert report.complete_over_closure is not None
        if claim["over_closure"] is not report.complete_over_closure:
            return False
        if claim["over_base"] is not None:
            base = report.complete_over_base
            if "further" in claim and claim["over_base"] is False:
                further = plane(self.field, claim["further"])
                if further not in planes and self.section.contains(further.plucker):
                    base = False
            assert base is not None
            return claim["over_base"] is base
        return True

    def holds_collineation(self, claim: dict[str, Any]) -> bool:
        """By the images of rows of W, or of wedges of columns: no Plücker coordinates of images."""
        field, n, power = self.field, self.n, self.field.characteristic ** claim.get("frobenius", 0)
        g = [vector(field, row) for row in claim["matrix"]]
        if len(g) != n or not field.matrix(g, n).det():
            return False
        target = Truth({**self.document, "subject": claim["target"]}) if "target" in claim else self

        def twist(v: Sequence[Any]) -> list[Any]:
            return [x**power for x in v] if power > 1 else list(v)

        def image(v: Sequence[Any]) -> list[Any]:
            moved = twist(v)
            return [sum((a * x for a, x in zip(row, moved, strict=True)), field.zero) for row in g]

        if self.configuration is None:
            triples = list(combinations(range(n), 3))
            columns = [[row[c] for row in g] for c in range(n)]
            wedges = [wedge(field, [columns[c] for c in t]) for t in triples]
            moved = []
            for v in map(twist, self.vectors):
                terms = [[x * c for c in w] for x, w in zip(v, wedges, strict=True)]
                moved.append([sum(column, field.zero) for column in zip(*terms, strict=True)])
            return Subspace.span(field, n, moved) == target.span
        assert target.configuration is not None
        order = claim["permutation"]
        return sorted(order) == list(range(len(target.configuration.planes))) and all(
            Plane.from_rows(field, [image(row) for row in p.rows])
            == target.configuration.planes[order[i]]
            for i, p in enumerate(self.configuration.planes)
        )


def is_true(document: Certificate) -> bool:
    """Whether every claim of a certificate is true, whatever its evidence."""
    try:
        truth = Truth(document)
        return all(truth.holds(claim) for claim in document["claims"])
    except (TrivectorError, KeyError, IndexError, TypeError, ValueError):
        return False  # not about planes at all


# Random changes


def nodes(value: Any) -> list[tuple[Any, Any]]:
    """(container, key) of everything below a value."""
    found = []
    pairs = value.items() if isinstance(value, dict) else enumerate(value)
    for key, below in pairs:
        found.append((value, key))
        if isinstance(below, dict | list):
            found += nodes(below)
    return found


def changed_once(
    made: Certificate, rng: Random, parts: Sequence[Sequence[str | int]]
) -> Certificate:
    """A sealed copy in which one thing is changed, below one of the parts (paths of keys).

    A number is changed; an item of a list swapped with another, dropped or
    doubled; a key dropped; a verdict turned round; a number made a fraction.
    """
    while True:
        changed = copy.deepcopy(made)
        top = changed
        for key in rng.choice(parts):
            top = top[key]
        found = nodes(top)
        if found:
            _change(*rng.choice(found), rng)
        if json.dumps(changed) != json.dumps(made):
            return sealed(changed)


def _change(container: Any, key: Any, rng: Random) -> None:
    value = container[key]
    if isinstance(value, list) and value and rng.random() < 0.6:
        i, j = rng.randrange(len(value)), rng.randrange(len(value))
        action = rng.randrange(4)
        if action == 0:
            value[i], value[j] = value[j], value[i]
        elif action == 1:
            del value[i]
        elif action == 2:
            value.insert(i, copy.deepcopy(value[j]))
        else:
            del value[i:]
    elif isinstance(value, bool) or value is None:
        container[key] = rng.choice([True, False, None])
    elif isinstance(value, int):
        others = [value + 1, value - 1, 0, 1, 2, 2 * value, -value, rng.randrange(10**6)]
        container[key] = rng.choice(others)
    elif isinstance(value, str) and "/" in value:
        numerator, denominator = value.split("/")
        container[key] = rng.choice([int(numerator), f"{denominator}/{abs(int(numerator)) or 1}"])
    elif isinstance(container, dict):
        del container[key]
    else:
        container[key] = rng.choice([0, 1, container[rng.randrange(len(container))]])
