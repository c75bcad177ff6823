"""Files made to harm the checker: refused in bounded time and memory, never a traceback."""

import copy
import json
import shutil
import subprocess
import sys
from collections.abc import Callable
from functools import cache
from pathlib import Path
from random import Random
from typing import Any

import examples
import pytest
from forging import Certificate, nodes, sealed

from trivector import Configuration, LinearSection, Subspace, prime_field
from trivector.certificates import (
    certify_collineations,
    certify_examination,
    certify_section,
    certify_trivectors,
    checker,
)
from trivector.exterior import Trivector
from trivector.fields import QQ, field_from_spec
from trivector.symmetry import Collineation

SECONDS, MEGABYTES = 100, 1500

# Runs the checker with bounds on time and memory, and prints what it used.
BOUNDED = f"""\
import resource, runpy, sys
resource.setrlimit(resource.RLIMIT_CPU, ({SECONDS}, {SECONDS}))
resource.setrlimit(resource.RLIMIT_AS, ({MEGABYTES} * 2**20, {MEGABYTES} * 2**20))
sys.argv = sys.argv[1:]
runpy.run_path(sys.argv[0], run_name="__main__")
"""


def alone(tmp_path: Path, text: str | bytes) -> subprocess.CompletedProcess[str]:
    script, file = tmp_path / "checker.py", tmp_path / "hostile.json"
    shutil.copy(checker.__file__, script)
    file.write_bytes(text if isinstance(text, bytes) else text.encode("utf-8", "surrogatepass"))
    command = [sys.executable, "-I", "-c", BOUNDED, str(script), str(file)]
    return subprocess.run(command, capture_output=True, text=True, timeout=2 * SECONDS)


def refused(tmp_path: Path, text: str | bytes) -> str:
    """The one line with which a file is refused: exit code 2, or 1 for a false claim."""
    answer = alone(tmp_path, text)
    assert "Traceback" not in answer.stderr, answer.stderr[-500:]
    assert answer.returncode in (1, 2), (answer.returncode, answer.stderr[-300:])
    lines = answer.stderr.splitlines() or answer.stdout.splitlines()
    assert len(lines) <= 2
    assert all(len(line) < 1000 for line in lines)
    return lines[-1]


# Texts


@pytest.mark.parametrize(
    "text",
    [
        b"",
        b"\xff\xfe\x00",
        b"\0" * 100,
        b'{"kind": "certificate", "format": 1, "\xff": 0}',
        "[" * 200_000,
        '{"a":' * 200_000,
        "[" * 50_000 + "]" * 50_000,
        "9" * 1_000_000,
        '{"kind": "certificate", "format": ' + "9" * 1_000_000 + "}",
        '{"kind": "certificate", "format": 1e999999999}',
        '{"kind": "certificate", "format": NaN}',
        '{"kind": "certificate", "kind": "certificate", "format": 1}',
        '{"kind": "certificate", "format": true}',
        '"' + "\ud800" + '"',
        " " * (17 * 2**20),
    ],
    ids=lambda text: repr(text[:24]),
)
def test_a_hostile_text_is_refused(tmp_path: Path, text: str | bytes) -> None:
    assert refused(tmp_path, text)


# Values


@cache
def honest() -> tuple[Certificate, ...]:
    """A small certificate of each kind of claim."""
    f3, f4 = prime_field(3), field_from_spec("F_4")
    gauss = field_from_spec({"modulus": "x^2+1"})
    rng = Random(1)
    twenty = tuple(examples.over(f3, examples.twenty_planes()))
    planes = tuple(examples.random_plane(f4, 6, rng) for _ in range(2))
    fat, _ = examples.fat_space(f3, [1], rng)
    ruling = examples.families()[3].lagrangian(f3)
    point = examples.families()[0].lagrangian(f3)
    g = examples.random_invertible(f4, 6, rng)
    target = Configuration(tuple(examples.image(f4, g, plane) for plane in planes))
    found = Collineation((0, 1), tuple(map(tuple, g)))
    return (
        certify_examination(Configuration(twenty[:2]).examine()),
        certify_examination(Configuration(twenty).examine()),
        certify_section(LinearSection(fat).examine()),
        certify_section(LinearSection(ruling).examine()),
        certify_section(LinearSection(point).examine()),
        certify_section(LinearSection(examples.cyclic_lagrangian(f3)).examine()),
        certify_trivectors([Trivector(gauss, p) for p in [examples.random_plane(
            gauss, 6, rng).plucker]]),
        certify_collineations(Configuration(planes), [found], target=target),
        certify_section(LinearSection(Subspace.from_terms(QQ, 6, [{(0, 1, 2): 1}])).examine()),
    )  # fmt: skip


WRONG: tuple[Any, ...] = (None, True, -1, 1.5, "x", "1/0", [], {}, 10**40, [[0]], "9" * 200)


def survive(document: Certificate) -> None:
    """Only the two kinds of refusal; anything else is an error of the checker."""
    text = json.dumps(document)
    try:
        check = checker.Check(checker.load(text))
        for _, verdict, words in check.run():
            assert isinstance(verdict, bool)
            assert isinstance(words, str)
    except (checker.ClaimError, *checker.MALFORMED):
        pass


def replaced(made: Certificate, index: int, value: Any) -> Certificate:
    changed = copy.deepcopy(made)
    container, key = nodes(changed)[index]
    container[key] = value
    return sealed(changed)


def places(made: Certificate) -> list[int]:
    """The nodes of a certificate, of long lists of numbers only the first ones."""
    found = []
    for index, (container, key) in enumerate(nodes(made)):
        if not (isinstance(container, list) and isinstance(key, int) and 1 < key < len(container)):
            found.append(index)
    return found


def test_a_value_of_the_wrong_type_is_refused() -> None:
    rng = Random(2)
    for made in honest():
        chosen = places(made)
        for index in rng.sample(chosen, min(len(chosen), 25)):
            survive(replaced(made, index, rng.choice(WRONG)))


@pytest.mark.long
def test_every_value_of_the_wrong_type_is_refused() -> None:
    for made in honest():
        for index in places(made):
            for value in WRONG:
                survive(replaced(made, index, value))


# Claims that would cost too much


def base(**parts: Any) -> Certificate:
    document = {
        "kind": "certificate",
        "format": 1,
        "field": {"characteristic": 101},
        "dimension": 6,
        "subject": {"basis": [[int(i == j) for j in range(20)] for i in range(10)]},
        "claims": [{"claim": "span", "dimension": 10}],
        "uncertified": [],
    }
    return sealed({**document, **parts})


def all_planes(**facts: Any) -> dict[str, Any]:
    claim = {
        "claim": "all planes",
        "length": 0,
        "planes_over_closure": 0,
        "planes_over_base": 0,
        "reduced": True,
        "points": [],
        "place": None,
        "hilbert": [1, 10, 0],
    }
    return {**claim, **facts}


def identity(n: int = 6) -> list[list[int]]:
    return [[int(i == j) for j in range(n)] for i in range(n)]


def random_rows(count: int, size: int, draw: Callable[[], Any]) -> list[list[Any]]:
    return [[draw() for _ in range(size)] for _ in range(count)]


def costly(name: str) -> Certificate:
    rng = Random(3)
    ones = [[1] * 20 for _ in range(10)]
    point = {"rows": [row[:] for row in identity()[:3]]}
    fractions = random_rows(
        10, 20, lambda: f"{rng.getrandbits(13000)}/{rng.getrandbits(13000) | 1}"
    )
    degree_42 = [rng.randrange(101) for _ in range(42)] + [1]
    big = [rng.getrandbits(14000) for _ in range(64)] + [1]
    made: dict[str, Callable[[], Certificate]] = {
        "dimension": lambda: base(dimension=10**9),
        "characteristic": lambda: base(field={"characteristic": 2 ** (10**4) - 1}),
        "claims": lambda: base(claims=[{"claim": "span", "dimension": 10}] * 10**5),
        "span many times": lambda: base(claims=[{"claim": "span", "dimension": 10}] * 5000),
        "vectors": lambda: base(subject={"basis": ones * 1000}),
        "hilbert": lambda: base(claims=[all_planes(hilbert=[1] + [10**9] * 39)]),
        "long hilbert": lambda: base(claims=[all_planes(hilbert=[1] * 10**5)]),
        "multiplicity": lambda: base(
            claims=[all_planes(points=[{**point, "multiplicity": 10**9, "nilpotents": []}])]
        ),
        "multiplicity 462": lambda: base(
            claims=[all_planes(points=[{**point, "multiplicity": 462, "nilpotents": []}] * 462)]
        ),
        "degree 42": lambda: base(
            claims=[
                all_planes(
                    points=[
                        {
                            "rows": [[[x] + [0] * 41 for x in row] for row in identity()[:3]],
                            "modulus": degree_42,
                            "irreducible": {},
                        }
                    ]
                )
            ]
        ),
        "functionals": lambda: base(
            claims=[
                {
                    "claim": "infinite",
                    "by": "functionals",
                    "degree": 8,
                    "functionals": [[1] * 24310] * 100,
                }
            ]
        ),
        "fractions": lambda: base(field={}, subject={"basis": fractions}),
        "number field": lambda: base(
            field={"modulus": big, "irreducible": {"value": 2**80}},
            subject={"basis": [[[1] * 64] * 20]},
        ),
        "number field by place": lambda: base(
            field={"modulus": big, "irreducible": {"place": {"prime": 2**61 - 1}}},
            subject={"basis": [[[1] * 64] * 20]},
        ),
        "collineations": lambda: base(
            subject={"planes": [identity()[:3]] * 1000},
            claims=[
                {
                    "claim": "collineation",
                    "matrix": identity(),
                    "permutation": list(range(1000)),
                    "target": {"planes": [identity()[:3]] * 1000},
                }
            ]
            * 50,
        ),
        "incidences": lambda: base(
            subject={"planes": [identity()[:3]] * 2000},
            claims=[{"claim": "incidence", "pairs": {}, "disjoint_pairs": []}] * 50,
        ),
    }
    return made[name]()


QUICK = [
    "dimension",
    "characteristic",
    "claims",
    "vectors",
    "hilbert",
    "long hilbert",
    "multiplicity",
    "multiplicity 462",
    "degree 42",
    "functionals",
    "number field",
]
SLOW = [
    "span many times",
    "fractions",
    "number field by place",
    "collineations",
    "incidences",
]


@pytest.mark.parametrize("name", QUICK)
def test_a_claim_that_would_cost_too_much_is_refused(tmp_path: Path, name: str) -> None:
    assert refused(tmp_path, json.dumps(costly(name)))


@pytest.mark.long
@pytest.mark.parametrize("name", SLOW)
def test_a_claim_that_costs_much_ends_within_its_bounds(tmp_path: Path, name: str) -> None:
    answer = alone(tmp_path, json.dumps(costly(name)))
    assert answer.returncode in (0, 1, 2), (answer.returncode, answer.stderr[-300:])
    assert "Traceback" not in answer.stderr
