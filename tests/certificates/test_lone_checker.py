"""The checker alone: copied out, without the package; its arithmetic against other libraries."""

import ast
import json
import random
import shutil
import subprocess
import sys
from itertools import combinations
from math import comb, prod
from pathlib import Path
from typing import Any

import examples
import flint
import pytest
import sympy
from forging import sealed

import trivector
from trivector import LinearSection, Subspace, prime_field
from trivector.certificates import certify_examination, certify_section, checker
from trivector.cli import main
from trivector.fields import QQ
from trivector.sections.hilbert import grassmannian_h_vector

ROOT = Path(__file__).parents[2]
FILES = sorted((ROOT / "data").glob("*.json"))
SOURCE = Path(checker.__file__)
Rng = random.Random


def alone(folder: Path, certificate: Path | str) -> subprocess.CompletedProcess[str]:
    """The checker copied into a folder, run without site packages or environment."""
    copied = folder / "checker.py"
    shutil.copy(SOURCE, copied)
    return subprocess.run(
        [sys.executable, "-I", "-S", str(copied), str(certificate)],
        capture_output=True,
        text=True,
        timeout=60,
        cwd=folder,
    )


# Alone


def test_it_is_short_and_needs_the_standard_library_only() -> None:
    text = SOURCE.read_text("utf-8")
    assert len(text.splitlines()) <= 600
    assert max(map(len, text.splitlines())) <= 100
    modules = set()
    for node in ast.walk(ast.parse(text)):
        if isinstance(node, ast.Import):
            modules |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0
            modules.add(node.module or "")
    assert len(modules) > 5
    assert {name.split(".")[0] for name in modules} <= set(sys.stdlib_module_names)
    words = {node.id for node in ast.walk(ast.parse(text)) if isinstance(node, ast.Name)}
    assert not words & {"eval", "exec", "compile", "__import__", "float"}


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.stem)
def test_it_accepts_the_certificate_of_every_file_alone(tmp_path: Path, path: Path) -> None:
    written = tmp_path / "certificate.json"
    assert main(["examine", str(path), "--certificate", str(written), "-o", "/dev/null"]) in (0, 1)
    answer = alone(tmp_path, written)
    assert (answer.returncode, answer.stderr) == (0, "")
    claims = [claim["claim"] for claim in json.loads(written.read_text("utf-8"))["claims"]]
    assert [line.split(":")[0] for line in answer.stdout.splitlines()] == [
        f"holds  {name}" for name in claims
    ]
    answer.stdout.encode("ascii")


@pytest.mark.parametrize(
    ("name", "rows", "field"),
    [
        ("two planes", [{(0, 1, 2): 1}, {(3, 4, 5): 1}], "F_5"),
        ("none", [{(0, 1, 2): 1, (3, 4, 5): 1}], "Q"),
        ("one", [{(0, 1, 2): 1}], "Q"),
        ("a line of them", [{(0, 1, 2): 1}, {(0, 1, 3): 1}], "F_4"),
    ],
)
def test_it_accepts_the_certificate_of_a_subspace_alone(
    tmp_path: Path, name: str, rows: list[dict[tuple[int, ...], int]], field: str
) -> None:
    document = {
        "kind": "subspace",
        "field": field,
        "title": name,
        "basis": [examples.trivector_row(row) for row in rows],
    }
    source, written = tmp_path / "subspace.json", tmp_path / "certificate.json"
    source.write_text(json.dumps(document), "utf-8")
    arguments = ["planes", str(source), "--certificate", str(written)]
    assert main([*arguments, "-o", str(tmp_path / "answer")]) == 0
    answer = alone(tmp_path, written)
    assert (answer.returncode, answer.stderr) == (0, "")
    assert "holds  span" in answer.stdout


def test_exit_code_1_for_a_false_claim_and_2_for_no_certificate(tmp_path: Path) -> None:
    made = certify_examination(trivector.read(ROOT / "data/twenty-planes.json").examine())
    file = tmp_path / "certificate.json"
    claims = [{**claim} for claim in made["claims"]]
    claims[1]["dimension"] = 11
    file.write_text(json.dumps(sealed(made, claims=claims)), "utf-8")
    answer = alone(tmp_path, file)
    assert (answer.returncode, answer.stderr) == (1, "")
    assert "FAILS  span: dimension is 10" in answer.stdout.splitlines()
    file.write_text(json.dumps({**made, "title": "other"}), "utf-8")
    answer = alone(tmp_path, file)
    assert (answer.returncode, answer.stdout) == (1, "")
    assert "the SHA-256 does not agree with the contents" in answer.stderr
    for text in ("", "{}", "[1]", '{"kind": "planes"}', '{"kind":"certificate","format":1}'):
        file.write_text(text, "utf-8")
        answer = alone(tmp_path, file)
        assert (answer.returncode, answer.stdout) == (2, "")
        assert len(answer.stderr.splitlines()) == 1
    answer = alone(tmp_path, tmp_path / "absent.json")
    assert answer.returncode == 2
    assert len(answer.stderr.splitlines()) == 1


# Primes


def test_primes_are_those_of_an_independent_list() -> None:
    assert [n for n in range(10**4) if checker.is_prime(n)] == list(sympy.primerange(10**4))
    rng = Rng(1)
    for bits in (20, 32, 48, 61, 64, 80):
        for _ in range(200):
            n = rng.getrandbits(bits) | 1
            assert checker.is_prime(n) == bool(flint.fmpz(n).is_prime()), n


# Carmichael numbers: 561 … 8911 classical; 349407515342287435050603204719587201: memory, above the
# bound in any case. Strong pseudoprimes ψ_1 … ψ_12 to the first k prime bases: "Strong
# pseudoprimes to twelve prime bases", 2017, Math. Comp. 86 (memory), each checked below.
CARMICHAEL = [561, 1105, 1729, 2465, 2821, 6601, 8911, 825265, 321197185, 9746347772161]
STRONG = [
    2047, 1373653, 25326001, 3215031751, 2152302898747, 3474749660383, 341550071728321,
    3825123056546413051, 318665857834031151167461, 3317044064679887385961981,
]  # fmt: skip


def test_pseudoprimes_are_not_primes() -> None:
    for n in [*CARMICHAEL, *STRONG]:
        assert not checker.is_prime(n), n
    for n in CARMICHAEL:
        assert all((n - 1) % (p - 1) == 0 for p in sympy.factorint(n)), n
    for n in STRONG:
        assert not flint.fmpz(n).is_prime()
        twos = ((n - 1) & (1 - n)).bit_length() - 1
        power = pow(2, (n - 1) >> twos, n)
        chain = [pow(power, 1 << i, n) for i in range(twos)]
        assert chain[0] == 1 or n - 1 in chain, n


def test_known_primes_are_primes_up_to_the_bound_and_none_beyond() -> None:
    for p in (2**31 - 1, 2**61 - 1, 2**64 - 59, 10**18 + 9, 2**80 - 65):
        assert checker.is_prime(p)
    assert not checker.is_prime(2**89 - 1)  # a prime that the theorem does not cover
    assert not any(checker.is_prime(n) for n in (-7, -2, -1, 0, 1))


# Fields


def towers() -> list[tuple[str, Any, Any]]:
    """(name, field of the checker, the same by flint)."""
    found: list[tuple[str, Any, Any]] = [("Q", checker.Field(), None)]
    found += [(f"F_{p}", checker.Field(p), None) for p in (2, 3, 7, 2**61 - 1)]
    for p, e in ((2, 2), (2, 5), (3, 2), (3, 4), (7, 3), (2**31 - 1, 2)):
        context = flint.fq_default_ctx(p, e)
        f = [int(c) for c in context.modulus().coeffs()]
        scale = pow(f[-1], -1, p)
        base = checker.Field(p)
        found.append((f"F_{p}^{e}", checker.Quotient(base, [c * scale % p for c in f]), context))
    return found


@pytest.mark.parametrize(("name", "field", "context"), towers(), ids=lambda x: str(x)[:24])
def test_products_and_inverses_agree_with_flint(name: str, field: Any, context: Any) -> None:
    rng = Rng(name)

    def draw() -> Any:
        if field.degree > 1:
            return tuple(rng.randrange(field.p) for _ in range(field.degree))
        if field.p:
            return rng.randrange(field.p)
        return checker.Fraction(rng.randint(-50, 50), rng.randint(1, 50))

    def outside(x: Any) -> Any:
        if context is not None:
            return context(list(x))
        return flint.nmod(x, field.p) if field.p else flint.fmpq(x.numerator, x.denominator)

    def inside(x: Any) -> Any:
        if context is not None:
            coefficients = [int(c) for c in x.to_list()]
            return tuple(coefficients + [0] * (field.degree - len(coefficients)))
        return int(x) if field.p else checker.Fraction(int(x.p), int(x.q))

    for _ in range(60):
        x, y = draw(), draw()
        assert field.mul(x, y) == inside(outside(x) * outside(y))
        assert field.add(x, field.neg(y)) == inside(outside(x) - outside(y))
        assert field.combine([x], y, [x]) == [inside(outside(x) - outside(y) * outside(x))]
        if x != field.zero:
            assert field.inv(x) == inside(1 / outside(x))
            assert field.mul(x, field.inv(x)) == field.one


def test_a_number_field_and_a_tower_over_it_agree_with_sympy() -> None:
    # Q(a), a³ = 2, and over it b² = a + 1; sympy divides polynomials in two variables.
    a, b = sympy.symbols("a b")
    k = checker.Quotient(checker.Field(), (-2, 0, 0, 1))
    tower = checker.Quotient(k, ((-1, -1, 0), (0, 0, 0), (1, 0, 0)))
    rng = Rng(2)

    def draw() -> Any:
        return tuple(tuple(rng.randint(-4, 4) for _ in range(3)) for _ in range(2))

    def outside(x: Any) -> Any:
        return sum(c * a**i * b**j for j, u in enumerate(x) for i, c in enumerate(u))

    for _ in range(25):
        x, y = draw(), draw()
        product = sympy.rem(sympy.expand(outside(x) * outside(y)), b**2 - a - 1, b)
        product = sympy.Poly(sympy.rem(sympy.expand(product), a**3 - 2, a), a, b)
        expected = tuple(
            tuple(checker.Fraction(str(product.coeff_monomial(a**i * b**j))) for i in range(3))
            for j in range(2)
        )
        assert tower.mul(x, y) == expected
        if x != tower.zero:
            assert tower.mul(x, tower.inv(x)) == tower.one


def test_a_zero_divisor_is_noticed() -> None:
    ring = checker.Quotient(checker.Field(7), (5, 0, 1))  # θ² = 2 = 3²
    with pytest.raises(ValueError, match="zero divisor"):
        ring.inv((4, 1))
    with pytest.raises(ValueError, match="zero divisor"):
        ring.inv((0, 0))


@pytest.mark.parametrize("p", [0, 2, 3, 101])
def test_echelon_forms_and_kernels_agree_with_flint(p: int) -> None:
    field, rng = checker.Field(p), Rng(p)
    for _ in range(40):
        nrows, ncols, inner = (rng.randint(1, 7) for _ in range(3))
        left = [[rng.randint(-3, 3) for _ in range(inner)] for _ in range(nrows)]
        right = [[rng.randint(-3, 3) for _ in range(ncols)] for _ in range(inner)]
        rows = [
            [sum(x * y for x, y in zip(r, c, strict=True)) for c in zip(*right, strict=True)]
            for r in left
        ]
        rows = [[x % p if p else x for x in row] for row in rows]
        matrix = flint.nmod_mat(rows, p) if p else flint.fmpq_mat(flint.fmpz_mat(rows))
        reduced, rank = matrix.rref()
        found = field.echelon(rows, ncols)
        expected = [list(row) for row in reduced.tolist()[:rank]]
        to = (lambda x: int(x)) if p else (lambda x: checker.Fraction(int(x.p), int(x.q)))
        assert list(found.values()) == [[to(x) for x in row] for row in expected]
        assert all(row[j] == 1 and not any(row[:j]) for j, row in found.items())
        kernel = field.kernel(rows, ncols)
        assert len(kernel) == ncols - rank == len(field.echelon(kernel, ncols))
        assert all(field.dot(row, v) == 0 for row in rows for v in kernel)


def proved_irreducible(p: int, f: list[int]) -> bool:
    check = object.__new__(checker.Check)
    check.field, check.work = checker.Field(p), 0
    try:
        check.irreducible(f, {}, "f")
    except checker.ClaimError:
        return False
    return True


@pytest.mark.parametrize("p", [2, 3, 7, 2**61 - 1])
def test_irreducible_polynomials_over_a_finite_field_are_those_of_flint(p: int) -> None:
    rng, seen = Rng(p), [0, 0]
    for i in range(150):
        degree = rng.randint(2, 6)
        f = [*(rng.randrange(p) for _ in range(degree)), 1]
        if i % 5 == 0:  # a square
            g = flint.nmod_poly([*(rng.randrange(p) for _ in range(degree // 2)), 1], p)
            f = [int(c) for c in (g * g).coeffs()]
        factors = flint.nmod_poly(f, p).factor()[1]
        expected = len(factors) == 1 and factors[0][1] == 1 and len(f) > 2
        if len(f) > 2:
            assert proved_irreducible(p, f) == expected, f
            seen[expected] += 1
    assert min(seen) > 5


# Plücker relations and Hilbert functions


@pytest.mark.parametrize("p", [2, 3, 5, 0])
@pytest.mark.parametrize(("n", "rank"), [(6, 35), (7, 140)])
def test_the_plucker_relations_are_as_many_as_the_quadrics_through_g3v(
    n: int, rank: int, p: int
) -> None:
    # Classical: 35 and 140, in every characteristic.
    size = comb(n, 3)
    field = checker.Field(p)
    identity = [[int(i == j) for j in range(size)] for i in range(size)]
    relations = field.quadrics(n, identity)
    place = {pair: i for i, pair in enumerate((a, b) for a in range(size) for b in range(a, size))}
    rows = []
    for relation in relations:
        row = [0] * len(place)
        for pair, value in relation.items():
            row[place[pair]] = value
        rows.append(row)
    matrix = flint.nmod_mat(rows, p) if p else flint.fmpz_mat(rows)
    assert matrix.rank() == rank
    # They vanish at random planes.
    rng = Rng(n)
    for _ in range(5):
        w = [[rng.randint(-5, 5) for _ in range(n)] for _ in range(3)]
        x = [
            int(flint.fmpz_mat([[row[c] for c in t] for row in w]).det())
            for t in combinations(range(n), 3)
        ]
        for relation in relations:
            total = sum(int(v) * x[a] * x[b] for (a, b), v in relation.items())
            assert (total % p if p else total) == 0


@pytest.mark.parametrize("n", [6, 7])
def test_the_h_vector_is_the_one_of_the_grassmannian(n: int) -> None:
    assert checker.H_VECTOR[n] == grassmannian_h_vector(n)
    # The degree, classical: (k(n−k))! ∏ i!/(n−k+i)!, i < k = 3; 42 for n = 6.
    f = sympy.factorial
    degree = f(3 * (n - 3)) * prod(sympy.Rational(f(i), f(n - 3 + i)) for i in range(3))
    assert sum(checker.H_VECTOR[n]) == degree
    # The Hilbert function by the hook content formula: columns of length 3, d of them.
    for d in range(4):
        content = prod(
            sympy.Rational(n + j - i, (d - j) + (2 - i)) for i in range(3) for j in range(d)
        )
        dimension = 3 * (n - 3)
        series = sum(
            h * comb(d - t + dimension, dimension)
            for t, h in enumerate(checker.H_VECTOR[n])
            if t <= d
        )
        assert series == content


def hilbert_bounds(space: Subspace, degree: int) -> list[int]:
    """What the checker proves in each degree when it uses every relation."""
    made = certify_section(LinearSection(space).examine())
    check = checker.Check(checker.load(json.dumps(made)))
    return [check.ranks(check.field, [], [1] + [0] * d)[0] for d in range(1, degree + 1)]


def test_hilbert_functions_have_their_published_values() -> None:
    # computed, design of the sections: the general Lagrangian without planes, over F_7.
    cyclic = examples.cyclic_lagrangian(prime_field(7))
    assert hilbert_bounds(cyclic, 5) == [10, 20, 10, 1, 0]
    twenty = [p.plucker for p in examples.over(prime_field(7), examples.twenty_planes())]
    assert hilbert_bounds(Subspace.span(prime_field(7), 6, twenty), 4) == [10, 20, 20, 20]
    # classical: P³ by quadrics, P² by cubics
    for family in examples.families()[3:]:
        found = hilbert_bounds(family.lagrangian(prime_field(5)), 3)
        assert found == [family.hilbert(d) for d in (1, 2, 3)], family.name


def test_what_growing_rational_numbers_cost_is_counted_and_bounded(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    # Ten rows with unrelated denominators: entries of the echelon form have thousands of digits.
    rng = Rng(5)
    rows = [
        [f"{rng.getrandbits(99)}/{rng.getrandbits(99) | 1}" for _ in range(20)] for _ in range(10)
    ]
    made = certify_section(
        trivector.LinearSection(trivector.Subspace.from_terms(QQ, 6, [{(0, 1, 2): 1}])).examine()
    )
    claims = [{"claim": "span", "dimension": 10, "isotropic": False, "lagrangian": False}]
    document = sealed(made, subject={"basis": rows}, claims=claims)
    monkeypatch.setattr(checker, "MOST_WORK", 10**7)
    with pytest.raises(ValueError, match="grow too long"):
        checker.Check(checker.load(json.dumps(document)))
    small = [[int(x.split("/")[0]) % 100 for x in row] for row in rows]
    check = checker.Check(checker.load(json.dumps(sealed(document, subject={"basis": small}))))
    assert all(verdict for _, verdict, _ in check.run())
