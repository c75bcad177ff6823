"""Cross ratios of shared points: invariant, symmetric, and fast where incidences say nothing."""

from collections import Counter
from fractions import Fraction
from itertools import combinations, permutations
from math import comb
from pathlib import Path
from random import Random
from typing import Any

import examples
import pytest

import trivector
from trivector.configurations import Configuration, Incidence
from trivector.fields import QQ, field_from_spec
from trivector.symmetry import collineations, compare_configurations
from trivector.symmetry.cross_ratios import cross_ratio_signatures

DATA = Path(__file__).parents[2] / "data"
TEN = DATA / "atlas" / "length-10-over-f1009.json"


def moved(configuration: Configuration, rng: Random) -> tuple[Configuration, list[int]]:
    g = examples.random_invertible(configuration.field, configuration.n, rng)
    order = list(range(len(configuration.planes)))
    rng.shuffle(order)
    planes = [examples.image(configuration.field, g, configuration.planes[i]) for i in order]
    return Configuration(tuple(planes)), order


@pytest.mark.parametrize("name", ["atlas/length-10-over-f1009", "atlas/length-10-over-f3",
                                  "atlas/length-10-over-q", "twenty-planes"])  # fmt: skip
def test_a_collineation_carries_signatures_along(name: str) -> None:
    configuration = trivector.read(DATA / f"{name}.json")
    before = cross_ratio_signatures(Incidence(configuration))
    image, order = moved(configuration, Random(name))
    after = cross_ratio_signatures(Incidence(image))
    assert before is not None
    assert after is not None
    assert [before[i] for i in order] == after


def test_the_ten_planes_in_general_position_are_all_different_and_have_no_symmetry() -> None:
    configuration = trivector.read(TEN)
    signatures = cross_ratio_signatures(Incidence(configuration))
    assert signatures is not None
    assert len(set(signatures)) == 10
    assert all(len(keys) == 9 * comb(8, 4) for _, keys in signatures)
    assert collineations(configuration).order == 1


def test_comparing_them_takes_few_steps_not_all_orders_of_five_planes() -> None:
    # without cross ratios up to 10·9·8·7·6 partial images
    configuration = trivector.read(TEN)
    for seed in range(5):
        image, order = moved(configuration, Random(seed))
        answer = compare_configurations(configuration, image, limit=50)
        assert answer.equivalent is True
        assert answer.collineation is not None
        assert [order[j] for j in answer.collineation.permutation] == list(range(10))
    # Nine of the ten, and another nine: the same incidences, and not equivalent.
    other = Configuration(configuration.planes[:9])
    again, _ = moved(Configuration(configuration.planes[1:]), Random(9))
    no = compare_configurations(other, again, limit=50)
    assert (no.equivalent, no.over_closure) == (False, False)
    assert "cross ratios" in str(no.difference)


def literal_invariant(values: list[Any], field: Any) -> Any:
    """(x² − x + 1)³ / (x² (x − 1)²) for the cross ratio x of four points of P^1."""
    a, b, c, d = values
    x = (a - c) * (b - d) / ((a - d) * (b - c))
    one = field.one
    top = x * x - x + one
    return top * top * top / (x * x * (x - one) * (x - one))


@pytest.mark.parametrize("spec", ["Q", "F_7", "F_9", "F_16"])
def test_signatures_are_the_classical_invariant_of_cross_ratios(spec: Any) -> None:
    # Planes ⟨e0 + …⟩ that meet the plane x3 = x4 = x5 = 0 in one point each: five points of
    # it, (0, 0, 1) and (1, t, t²): seen from the first one four lines with slopes t.
    field = field_from_spec(spec)
    values = [field.element(x) for x in (2, 3, 5, 6)]
    if spec in ("F_9", "F_16"):
        values = [field.from_code(code) for code in (1, 2, 3, 4)]
    zero, one = field.zero, field.one
    points = [[zero, zero, one], *([one, t, t * t] for t in values)]
    from trivector.symmetry.cross_ratios import _signature

    degenerate, keys = _signature(field, [tuple(p) for p in points])
    assert degenerate == ()
    expected = []
    conic = [None, *values]  # the five points are on a conic: cross ratios are those of t
    for i in range(5):
        rest = [t for j, t in enumerate(conic) if j != i]
        if None in rest:
            a, b, c = (t for t in rest if t is not None)
            x = (a - c) / (b - c)
            top = x * x - x + one
            expected.append(top * top * top / (x * x * (x - one) * (x - one)))
        else:
            expected.append(literal_invariant(rest, field))
    assert Counter(map(str, keys)) == Counter(str(field.sort_key(x)) for x in expected)
    for order in permutations(range(5)):
        if order[0] in (0, 3):
            shuffled = [tuple(points[i]) for i in order]
            assert _signature(field, shuffled) == (degenerate, keys)


def test_points_on_a_line_are_counted_not_divided_by() -> None:
    from trivector.symmetry.cross_ratios import _signature

    line = [tuple(map(QQ.element, p)) for p in ((1, 0, 0), (0, 1, 0), (1, 1, 0), (1, 2, 0))]
    outside = tuple(map(QQ.element, (0, 0, 1)))
    degenerate, keys = _signature(QQ, [*line, outside])
    assert dict(degenerate) == {3: 4}  # from a point of the line: three lines coincide
    assert [Fraction(str(k)) for k in keys] == [
        Fraction(27, 4)  # from outside the cross ratio is harmonic: x = −1, 2 or 1/2
    ]
    assert len(list(combinations(range(5), 4))) == 5


def test_too_many_points_are_left_to_the_search() -> None:
    fifteen = trivector.read(DATA / "atlas" / "length-15-over-q.json")
    assert cross_ratio_signatures(Incidence(fifteen)) is None
