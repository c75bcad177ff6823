"""How long it takes to list the planes of a section, with ratios measured in one run."""

import signal
from collections.abc import Callable
from random import Random
from time import process_time
from typing import Any

import examples
import oracle
import pytest
import sympy

from trivector.fields import QQ, prime_field
from trivector.sections import LinearSection
from trivector.sections.quadrics import restricted_quadrics
from trivector.sections.sweep import iter_rational_planes
from trivector.subspaces import Plane, Subspace

pytestmark = pytest.mark.benchmark

LARGE = examples.LARGE_PRIME


def cpu_seconds(work: Callable[[], Any], repeat: int = 1) -> float:
    """The least processor time of several runs: other processes do not count."""
    best = float("inf")
    for _ in range(repeat):
        start = process_time()
        work()
        best = min(best, process_time() - start)
    return best


class _TimeIsUpError(Exception):
    pass


def cpu_seconds_up_to(limit: float, work: Callable[[], Any]) -> tuple[float, bool]:
    """Processor time, given up at the limit: then the time is only a lower bound."""

    def stop(*_: Any) -> None:
        raise _TimeIsUpError

    before = signal.signal(signal.SIGPROF, stop)
    signal.setitimer(signal.ITIMER_PROF, limit)
    start = process_time()
    try:
        work()
    except _TimeIsUpError:
        return process_time() - start, False
    finally:
        signal.setitimer(signal.ITIMER_PROF, 0)
        signal.signal(signal.SIGPROF, before)
    return process_time() - start, True


def lagrangian(p: int, seed: int = 1) -> Subspace:
    """A Lagrangian through two random incident planes: a finite section."""
    field, rng = prime_field(p), Random(seed)
    return examples.lagrangian_through(field, examples.random_incident_planes(field, 2, rng), rng)


def examined(space: Subspace) -> Any:
    report = LinearSection(space).examine()
    assert report.points is not None
    assert sum(p.degree * p.multiplicity for p in report.points) == report.degree
    return report


@pytest.mark.parametrize("p", [7, LARGE])
def test_a_finite_section_over_a_prime_field_takes_at_most_60_ms(benchmark: Any, p: int) -> None:
    space = lagrangian(p)
    report = benchmark.pedantic(examined, args=(space,), rounds=10, warmup_rounds=1)
    assert len(report.planes) >= 2
    seconds = cpu_seconds(lambda: examined(space), 5)
    benchmark.extra_info["cpu_seconds"] = seconds
    assert seconds <= 0.06


def test_the_size_of_the_prime_does_not_matter(benchmark: Any) -> None:
    small, large = examples.twenty_planes(), examples.twenty_planes()
    spaces = [
        Subspace.span(field, 6, [plane.plucker for plane in examples.over(field, planes)])
        for field, planes in ((prime_field(7), small), (prime_field(LARGE), large))
    ]
    assert [len(examined(space).planes) for space in spaces] == [20, 20]
    benchmark.pedantic(examined, args=(spaces[1],), rounds=5, warmup_rounds=1)
    first, second = (cpu_seconds(lambda space=space: examined(space), 5) for space in spaces)
    benchmark.extra_info["cpu_seconds"] = {"7": first, str(LARGE): second}
    assert second <= 2 * first


def large_planes() -> list[Plane]:
    """Sixteen of the twenty planes in coordinates that give entries of six digits.

    The four planes of one matching left out: the span is still of dimension 10
    or less, and the section holds these planes.
    """
    rng = Random(5)
    g = [[QQ.element(rng.randint(-30, 30)) for _ in range(6)] for _ in range(6)]
    assert QQ.matrix(g, 6).det()
    return [
        examples.image(QQ, g, plane) for plane in examples.over(QQ, examples.twenty_planes())[:16]
    ]


def test_sixteen_planes_with_six_digit_entries_over_the_rationals(benchmark: Any) -> None:
    planes = large_planes()
    digits = max(
        len(str(abs(int(part))))
        for p in planes
        for row in p.rows
        for x in row
        for part in (x.p, x.q)
    )
    assert digits >= 6
    space = Subspace.span(QQ, 6, [plane.plucker for plane in planes])
    report = benchmark.pedantic(examined, args=(space,), rounds=1)
    assert set(planes) <= set(report.planes)
    seconds = cpu_seconds(lambda: examined(space))
    benchmark.extra_info["cpu_seconds"] = seconds
    benchmark.extra_info["planes"] = len(report.planes)
    assert seconds <= 2


def test_the_point_of_degree_42(benchmark: Any) -> None:
    rng = Random(1)
    space = Subspace.span(QQ, 6, [[rng.choice((1, -1)) for _ in range(20)] for _ in range(11)])
    start = process_time()
    report = benchmark.pedantic(examined, args=(space,), rounds=1)
    seconds = process_time() - start
    benchmark.extra_info["cpu_seconds"] = seconds
    assert [point.degree for point in report.points] == [42]
    assert seconds <= 20


def test_against_a_groebner_basis_of_sympy(benchmark: Any) -> None:
    # The 35 quadrics of a general Lagrangian modulo 32003.
    p = 32003
    field, rng = prime_field(p), Random(3)
    space = examples.lagrangian_through(field, [], rng)
    assert examined(space).projective_dimension == -1
    ours = cpu_seconds(lambda: examined(space), 3)
    benchmark.pedantic(examined, args=(space,), rounds=3)
    x = sympy.symbols("x0:10")
    polynomials = [
        sum((int(c) * x[i] * x[j] for (i, j), c in quadric.items()), sympy.Integer(0))
        for quadric in restricted_quadrics(space.rows, 6, field.zero)
        if quadric
    ]
    theirs, finished = cpu_seconds_up_to(
        400 * ours, lambda: sympy.groebner(polynomials, *x, modulus=p, order="grevlex")
    )
    benchmark.extra_info["cpu_seconds"] = {"ours": ours, "sympy": theirs, "finished": finished}
    assert theirs >= 200 * ours


def test_against_brute_force_over_f3(benchmark: Any) -> None:
    # Literal brute force: every plane of PG(5,3), its minors, and the rank of L with it.
    space = lagrangian(3, seed=2)
    rows = [[int(x) for x in row] for row in space.rows]
    ours = cpu_seconds(lambda: list(iter_rational_planes(space)), 5)
    closure = cpu_seconds(lambda: examined(space), 3)
    swept = benchmark.pedantic(lambda: list(iter_rational_planes(space)), rounds=5)

    def brute_force() -> set[oracle.Matrix]:
        return {
            plane
            for plane in oracle.all_planes(3)
            if oracle.rank([*rows, oracle.plucker(plane, 3)], 3) == 10
        }

    found: list[Any] = []
    theirs = cpu_seconds(lambda: found.append(brute_force()))
    assert {tuple(map(tuple, p.to_entries())) for p in swept} == found[0]
    benchmark.extra_info["cpu_seconds"] = {
        "sweep": ours,
        "with all closed points": closure,
        "brute force": theirs,
    }
    assert theirs >= 100 * ours
