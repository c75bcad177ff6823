"""How long an examination takes, and how much memory. Run with ``-m benchmark``.

Nothing here fails because something is slow: the figures are printed (``-s``
shows them) and collected by pytest-benchmark. What is asserted is that the
work was done.
"""

import json
import os
import subprocess
import sys
from collections.abc import Callable, Sequence
from pathlib import Path
from random import Random
from time import perf_counter
from typing import Any

import examples
import pytest
import strategies as draws
from flint import fmpq

import trivector
from trivector.configurations import Configuration
from trivector.fields import QQ
from trivector.sections.quadrics import Quadric, restricted_quadrics
from trivector.subspaces import Plane, Subspace

pytestmark = pytest.mark.benchmark

TWENTY = Path(__file__).parents[2] / "data" / "twenty-planes.json"
ROOT = Path(__file__).parents[2]
PRIME = 32003

# Runs a command and prints its exit code, seconds and peak memory in megabytes.
MEASURE = """\
import resource, subprocess, sys, time
start = time.perf_counter()
code = subprocess.run(sys.argv[1:], stdout=subprocess.DEVNULL).returncode
seconds = time.perf_counter() - start
peak = resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss
print(code, seconds, peak / (1024 if sys.platform != "darwin" else 1024**2))
"""


def best_of(rounds: int, function: Callable[[], Any]) -> tuple[float, Any]:
    times, result = [], None
    for _ in range(rounds):
        start = perf_counter()
        result = function()
        times.append(perf_counter() - start)
    return min(times), result


def say(text: str) -> None:
    print(f"\n{text}")


def run_measured(arguments: Sequence[str]) -> tuple[int, float, float]:
    """Exit code, seconds and peak memory of ``python -m trivector …`` in a new process."""
    command = [sys.executable, "-c", MEASURE, sys.executable, "-m", "trivector", *arguments]
    environment = os.environ | {"PYTHONPATH": os.pathsep.join([str(ROOT), *sys.path[1:]])}
    output = subprocess.run(
        command, capture_output=True, text=True, check=True, cwd=ROOT, env=environment
    ).stdout
    code, seconds, peak = output.split()
    return int(code), float(seconds), float(peak)


# In the process


def test_examining_the_twenty_planes_over_q(benchmark: Any) -> None:
    # target: at most 30 ms, planes already read
    configuration = trivector.read(TWENTY)
    examination = benchmark(configuration.examine)
    assert examination.complete_over_closure is True


def test_examining_nineteen_of_the_twenty_planes_over_q(benchmark: Any) -> None:
    planes = trivector.read(TWENTY).planes
    configuration = Configuration(planes[1:])
    examination = benchmark.pedantic(configuration.examine, rounds=3, iterations=1)
    assert examination.complete_over_closure is False


@pytest.mark.parametrize("left_out", [0, 1])
def test_examining_planes_with_forty_digit_entries(benchmark: Any, left_out: int) -> None:
    planes = images_of_the_twenty(10**40)[left_out:]
    configuration = Configuration(tuple(planes))
    examination = benchmark.pedantic(configuration.examine, rounds=2, iterations=1)
    assert examination.complete_over_closure is (left_out == 0)


def images_of_the_twenty(bound: int) -> list[Plane]:
    """Under a random matrix with entries up to ``bound``, so that nothing is sparse."""
    rng = Random(40)
    g = [[fmpq(rng.randint(-bound, bound)) for _ in range(6)] for _ in range(6)]
    return [examples.image(QQ, g, plane) for plane in examples.over(QQ, examples.twenty_planes())]


# Against a Gröbner basis


def groebner_seconds(quadrics: Sequence[Quadric], size: int) -> tuple[float, int]:
    """sympy's Gröbner basis modulo 32003, degree reverse lexicographic; one round."""
    import sympy

    x = sympy.symbols(f"x0:{size}")
    polynomials = [
        sum(
            int(value.p) * pow(int(value.q), -1, PRIME) % PRIME * x[a] * x[b]
            for (a, b), value in quadric.items()
        )
        for quadric in quadrics
        if quadric
    ]
    seconds, basis = best_of(
        1, lambda: sympy.groebner(polynomials, *x, modulus=PRIME, order="grevlex")
    )
    return seconds, len(basis.exprs)


@pytest.mark.parametrize(
    "coordinates", ["echelon rows of the twenty", "echelon rows of an image", "a random basis"]
)
def test_the_ratio_to_a_groebner_basis_of_the_same_quadrics(coordinates: str) -> None:
    # The Gröbner basis answers less: no completeness, nothing over ℚ. The restricted quadrics
    # of the twenty planes are three-term in their echelon basis, the easiest coordinates
    # there are; in the other two they are dense. The examination is the same job each time.
    planes = list(trivector.read(TWENTY).planes)
    if coordinates == "echelon rows of an image":
        planes = images_of_the_twenty(9)
    configuration = Configuration(tuple(planes))
    rows: Sequence[Sequence[Any]] = configuration.span().rows
    if coordinates == "a random basis":
        mixing = examples.random_invertible(QQ, 10, Random(3))
        rows = draws.product(QQ, mixing, rows)
        assert Subspace.span(QQ, 6, rows) == configuration.span()
    ours, examination = best_of(5, configuration.examine)
    assert examination.complete_over_closure is True
    theirs, size = groebner_seconds(restricted_quadrics(rows, 6, QQ.zero), 10)
    assert size >= 35
    say(
        f"{coordinates}: examine {1000 * ours:.1f} ms, sympy groebner modulo {PRIME} "
        f"{theirs:.2f} s ({size} elements), ratio {theirs / ours:.0f}"
    )


# The command


def test_the_whole_command(benchmark: Any) -> None:
    # target: at most 0.5 s and 200 MB
    code, _, peak = run_measured(["examine", str(TWENTY)])
    assert code == 0
    seconds = benchmark.pedantic(
        lambda: run_measured(["examine", str(TWENTY), "--json"])[1], rounds=5, iterations=1
    )
    say(f"trivector examine data/twenty-planes.json: {seconds:.2f} s, peak {peak:.0f} MB")


def test_the_help(benchmark: Any) -> None:
    # target: at most 0.15 s
    code, _, peak = run_measured(["--help"])
    assert code == 0
    seconds = benchmark.pedantic(lambda: run_measured(["--help"])[1], rounds=5, iterations=1)
    say(f"trivector --help: {seconds:.3f} s, peak {peak:.0f} MB")


def test_the_peak_memory_of_every_file() -> None:
    # target: at most 200 MB
    for path in sorted(TWENTY.parent.glob("*.json")):
        if json.loads(path.read_text(encoding="utf-8"))["kind"] != "planes":
            continue
        code, seconds, peak = run_measured(["examine", str(path), "--quiet"])
        assert code in (0, 1)
        say(f"{path.name}: exit code {code}, {seconds:.2f} s, peak {peak:.0f} MB")
