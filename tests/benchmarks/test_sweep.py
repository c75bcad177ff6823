"""How fast the sweep is: microseconds per point, jobs, and against brute force.

Measured warm (compiled code loaded); the best of several runs counts.
"""

import os
from collections.abc import Callable
from pathlib import Path
from random import Random
from time import perf_counter, process_time, sleep
from typing import Any

import examples
import oracle
import pytest

from trivector.fields import prime_field
from trivector.fields.linear import kernel
from trivector.sections import sweep
from trivector.sections.sweep import count_rational_planes, iter_rational_planes, sweep_points
from trivector.subspaces import Subspace

pytestmark = pytest.mark.benchmark


def best(function: Callable[[], Any], clock: Callable[[], float], rounds: int = 3) -> float:
    """Seconds of the fastest of several runs."""
    times = []
    for _ in range(rounds):
        start = clock()
        function()
        times.append(clock() - start)
    return min(times)


def idle_share() -> float:
    """The share of all processors that nobody uses, over half a second; 1 where unknown."""
    statistics = Path("/proc/stat")
    if not statistics.exists():
        return 1.0
    readings = []
    for pause in (0.5, 0.0):
        readings.append([int(x) for x in statistics.read_text().splitlines()[0].split()[1:]])
        sleep(pause)
    used = [b - a for a, b in zip(*readings, strict=True)]
    return (used[3] + used[4]) / sum(used)


def lagrangian(p: int, seed: int = 1) -> Subspace:
    rng = Random(seed)
    planes = examples.random_incident_planes(prime_field(p), 3, rng)
    return examples.lagrangian_through(prime_field(p), planes, rng)


def slice_of_the_large_cell(space: Subspace, lines: int) -> Callable[[], list[int]]:
    """The compiled filter on the first lines of the cell with q^(n−3) points."""
    run = sweep._Sweep(space, 1, 10**9, None)
    cell = sweep._Cell(run, (), 2, space.rows)
    look = cell.compiled(run._tables, sweep._pfaffian_terms(6, 2))
    return lambda: look(0, lines)


def test_a_million_points_modulo_101_take_at_most_two_microseconds_each() -> None:
    space = lagrangian(101)
    assert count_rational_planes(space) >= 3  # warm
    points = sweep_points(6, 101)
    assert points == 1_040_604
    seconds = best(lambda: count_rational_planes(space), process_time)
    print(f"\np = 101: {seconds / points * 1e6:.3f} µs per point, all of it")
    assert seconds <= 2e-6 * points


@pytest.mark.parametrize("p", [101, 251, 499])
def test_points_of_a_lagrangian_take_at_most_two_microseconds(p: int) -> None:
    lines = 1_000_000 // p
    look = slice_of_the_large_cell(lagrangian(p), lines)
    seconds = best(look, process_time)
    print(f"\np = {p}: {seconds / (lines * p) * 1e6:.3f} µs per point")
    assert seconds <= 2e-6 * lines * p


@pytest.mark.parametrize("dimension", [11, 12, 13])
def test_points_where_bivectors_must_be_judged(dimension: int) -> None:
    lines = 2000
    space = examples.random_subspace(prime_field(101), 6, dimension, Random(dimension))
    seconds = best(slice_of_the_large_cell(space, lines), process_time)
    print(f"\ndim L = {dimension}: {seconds / (lines * 101) * 1e6:.3f} µs per point")
    assert seconds <= 10e-6 * lines * 101


@pytest.mark.skipif((os.cpu_count() or 1) < 2, reason="needs two processors")
def test_two_jobs_are_nearly_twice_as_fast_as_one() -> None:
    space = lagrangian(251)
    count_rational_planes(space, jobs=2)  # warm
    idle = idle_share()
    one = best(lambda: count_rational_planes(space, jobs=1), perf_counter)
    two = best(lambda: count_rational_planes(space, jobs=2), perf_counter)
    one_cpu = best(lambda: count_rational_planes(space, jobs=1), process_time, 1)
    two_cpu = best(lambda: count_rational_planes(space, jobs=2), process_time, 1)
    print(
        f"\np = 251, {sweep_points(6, 251):,} points: {one:.2f} s and {two:.2f} s, "
        f"ratio {one / two:.2f}; processor time {one_cpu:.2f} s and {two_cpu:.2f} s"
    )
    assert one / two >= 1.7, f"{min(idle, idle_share()):.0%} of the processors were idle"


def brute_force(space: Subspace) -> int:
    """All planes of PG(5,3), and for each whether its coordinates satisfy the equations of L."""
    conditions = kernel(space.field, space.rows, 20)
    equations = [[int(x) for x in row] for row in conditions]
    count = 0
    for rows in oracle.all_planes(3):
        vector = oracle.plucker(rows, 3)
        count += all(
            sum(a * b for a, b in zip(equation, vector, strict=True)) % 3 == 0
            for equation in equations
        )
    return count


def test_it_is_a_hundred_times_faster_than_brute_force_over_f3() -> None:
    space = lagrangian(3)
    expected = []
    slow = best(lambda: expected.append(brute_force(space)), process_time, 1)
    fast = best(lambda: list(iter_rational_planes(space)), process_time)
    assert expected == [count_rational_planes(space)]
    print(f"\nF_3: brute force {slow:.2f} s, sweep {fast * 1000:.1f} ms, ratio {slow / fast:.0f}")
    assert slow / fast >= 100
