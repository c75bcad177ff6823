"""How long random and classical objects take, in the process; the best of several runs counts."""

from collections.abc import Callable
from random import Random
from time import perf_counter
from typing import Any

import pytest

from trivector import QQ
from trivector.configurations import random_incident_planes
from trivector.families import (
    CLASSICAL_FAMILIES,
    exceptional,
    random_incident_few,
    random_lagrangian,
    twenty_two_planes,
)
from trivector.fields import finite_field, prime_field

pytestmark = pytest.mark.benchmark


def best(function: Callable[[], Any], rounds: int = 5) -> float:
    """Seconds of the fastest of several runs."""
    times = []
    for _ in range(rounds):
        start = perf_counter()
        function()
        times.append(perf_counter() - start)
    return min(times)


def test_a_uniform_lagrangian_over_f101() -> None:
    rng = Random(1)
    assert best(lambda: random_lagrangian(prime_field(101), rng)) < 0.005


def test_a_uniform_lagrangian_over_a_field_that_is_not_prime() -> None:
    rng = Random(1)
    assert best(lambda: random_lagrangian(finite_field(9), rng)) < 0.05


def test_a_random_lagrangian_over_q() -> None:
    rng = Random(1)
    assert best(lambda: random_lagrangian(QQ, rng)) < 0.005


def test_the_twenty_two_planes_are_found_within_a_second() -> None:
    def afresh() -> None:
        exceptional._unitary_hyperoval.cache_clear()
        twenty_two_planes(finite_field(4))

    assert best(afresh, 2) < 1


def test_a_hundred_members_of_a_family() -> None:
    ruling, rng = CLASSICAL_FAMILIES["ruling"], Random(1)
    assert best(lambda: ruling.random_planes(prime_field(101), 100, rng)) < 0.05


def test_seven_planes_that_meet_two_by_two() -> None:
    rng = Random(1)
    assert best(lambda: random_incident_few(prime_field(101), 7, rng)) < 0.05


def test_ten_planes_in_general_position_over_f101() -> None:
    assert best(lambda: random_incident_planes(prime_field(101), 10, Random(1)), 2) < 5
