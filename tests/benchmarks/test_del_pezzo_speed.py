"""How long a del Pezzo configuration takes. Run with ``-m benchmark``."""

from random import Random
from typing import Any

import pytest

from trivector.families.del_pezzo import del_pezzo_configuration, ten_lines
from trivector.families.random_del_pezzo import random_del_pezzo
from trivector.fields import QQ, prime_field

pytestmark = pytest.mark.benchmark


@pytest.mark.parametrize("length", [11, 17, 20])
def test_a_random_configuration_over_f_101(benchmark: Any, length: int) -> None:
    # target: length 17 in at most 1 s
    found = benchmark.pedantic(
        lambda: random_del_pezzo(prime_field(101), length, Random(1)), rounds=5, iterations=1
    )
    assert found.length == length


def test_the_ten_lines_over_q(benchmark: Any) -> None:
    found = benchmark.pedantic(
        lambda: del_pezzo_configuration(QQ, ten_lines(QQ)), rounds=5, iterations=1
    )
    assert found.length == 20
