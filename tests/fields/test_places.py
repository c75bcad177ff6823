"""Reduction of data over a number field at a prime ideal: literal checks."""

from fractions import Fraction
from itertools import product
from random import Random
from typing import Any

import oracle
import pytest
import strategies

from trivector.errors import BadReductionError, EntryError
from trivector.fields import QQ, field_from_spec, number_field, prime_field
from trivector.fields.linear import rank
from trivector.fields.places import Place, conversion

GAUSS = number_field("x^2+1")
CUBIC = number_field("x^3-2")
QUARTIC = number_field("x^4+1/3*x+1")

CASES = [
    (GAUSS, "F_5"),
    (GAUSS, "F_9"),
    (GAUSS, "F_13"),
    (CUBIC, "F_5"),
    (CUBIC, "F_25"),
    (CUBIC, "F_31"),
    (CUBIC, "F_343"),
    (QUARTIC, "F_16"),
]
over_cases = pytest.mark.parametrize(
    ("source", "name"), CASES, ids=lambda x: x if isinstance(x, str) else x.modulus_text
)


def place(source: Any, name: str) -> tuple[Place, Any]:
    target = field_from_spec(name)
    found = conversion(source, target)
    assert isinstance(found, Place)
    return found, target


def number(source: Any, rng: Random, size: int = 30) -> Any:
    return source.from_coefficients([rng.randint(-size, size) for _ in range(source.degree)])


@over_cases
def test_the_image_of_a_is_a_root_and_numbers_map_as_a_ring(source: Any, name: str) -> None:
    way, target = place(source, name)
    root = way.element(source.generator)
    total = target.zero
    for c in reversed(source.modulus):
        total = total * root + target.element(c)
    assert not total
    rng = Random(1)
    for _ in range(20):
        x, y = number(source, rng), number(source, rng)
        assert way.element(x + y) == way.element(x) + way.element(y)
        assert way.element(x * y) == way.element(x) * way.element(y)
        literal = target.zero  # polynomials in a are evaluated at the root
        for c in reversed(source.coefficients(x)):
            literal = literal * root + target.element(c)
        assert way.element(x) == literal
    assert way.element(source.one) == target.one


@over_cases
def test_valuations_are_those_of_a_discrete_valuation(source: Any, name: str) -> None:
    way, target = place(source, name)
    p = target.characteristic
    assert way.valuation(source.element(p)) == 1
    rng = Random(2)
    seen = set()
    for _ in range(60):
        x, y = number(source, rng), number(source, rng)
        if not x or not y or not x + y:
            continue
        v, w = way.valuation(x), way.valuation(y)
        assert way.valuation(x * y) == v + w
        assert way.valuation(x / y) == v - w
        assert way.valuation(x + y) >= min(v, w)
        assert (v > 0) is not bool(way.element(x))
        seen.add(min(v, 1))
        if v < w:
            assert way.valuation(x + y) == v
    assert 0 in seen


def test_over_the_gaussian_numbers_the_two_primes_above_five_are_told_apart() -> None:
    way, target = place(GAUSS, "F_5")
    root = int(way.element(GAUSS.generator))
    assert root == 2  # the first of 2 and 3
    here = GAUSS.element("a-2")  # norm 5, zero at this prime
    there = GAUSS.element("a+2")  # norm 5, a unit here
    assert (way.valuation(here), way.valuation(there)) == (1, 0)
    assert way.valuation(here * here * here / there) == 3
    # (a − 2)/(a + 2)... at the other prime only is there a pole: 1/(a + 2) has the image 1/4.
    assert way.element(GAUSS.one / there) == target.element(Fraction(1, 4))
    with pytest.raises(BadReductionError, match="not integral at the prime above 5"):
        way.element(GAUSS.one / here)


def test_valuations_beyond_the_first_precision() -> None:
    way, _ = place(GAUSS, "F_5")
    x = GAUSS.one
    for _ in range(40):
        x = x * GAUSS.element("a-2")
    assert way.valuation(x) == 40


@over_cases
def test_rows_keep_their_rank_and_span_the_reduction(source: Any, name: str) -> None:
    """Every integral combination of the rows, drawn at random, reduces into the answer."""
    way, target = place(source, name)
    p, rng = target.characteristic, Random(3)
    for _ in range(6):
        rows = [[number(source, rng, 3) for _ in range(5)] for _ in range(3)]
        # Rows that agree at the prime, so that naive reduction would lose dimensions.
        rows[1] = [x + source.element(p) * y for x, y in zip(rows[0], rows[1], strict=True)]
        rows[2] = [x / source.element(p) for x in rows[2]]
        images = way.rows(rows)
        assert len(images) == 3
        assert rank(target, images, 5) == 3
        for _ in range(20):
            factors = [number(source, rng, 4) / source.element(p ** rng.randint(0, 1))
                       for _ in rows]  # fmt: skip
            vector = strategies.combine(source, factors, rows, 5)
            if all(not x or way.valuation(x) >= 0 for x in vector):
                image = [way.element(x) for x in vector]
                assert rank(target, [*images, image], 5) == 3


def test_over_q_rows_are_those_of_the_lattice() -> None:
    way = conversion(QQ, prime_field(3))
    assert way is not None
    rows = [[QQ.element(x) for x in row] for row in ([1, 0, "1/3"], [0, 1, "1/3"])]
    images = [[int(x) for x in row] for row in way.rows(rows)]
    assert oracle.rank(images, 3) == 2
    for a, b in product(range(-6, 7), repeat=2):  # integer points are a·e0 + b·e1 with 3 | a + b
        if (a + b) % 3 == 0:
            assert oracle.rank([*images, [a, b, (a + b) // 3]], 3) == 2
    with pytest.raises(EntryError):
        way.element(QQ.element("1/3"))


def test_where_there_is_no_way_there_is_none() -> None:
    assert conversion(GAUSS, prime_field(7)) is None  # −1 is no square modulo 7
    assert conversion(GAUSS, QQ) is None
    assert conversion(GAUSS, CUBIC) is None
    assert conversion(prime_field(3), field_from_spec("F_9")) is None
    assert conversion(QQ, GAUSS) is not None


@pytest.mark.parametrize(
    ("source", "p", "words"),
    [
        (GAUSS, 2, "multiple root"),
        (CUBIC, 3, "multiple root"),
        (QUARTIC, 3, "divides a denominator"),
    ],
)
def test_bad_primes_are_refused(source: Any, p: int, words: str) -> None:
    with pytest.raises(BadReductionError, match=words):
        conversion(source, prime_field(p))
