"""How long symmetries, comparisons and labels take. Run with ``-m benchmark``.

Nothing here fails because something is slow; targets stand beside the figures.
"""

from pathlib import Path
from random import Random
from time import perf_counter
from typing import Any

import examples
import oracle_symmetry
import pytest
import strategies as draws

import trivector
from trivector.configurations import Configuration, Incidence
from trivector.fields import prime_field
from trivector.symmetry import canonical_form, collineations, compare_configurations

pytestmark = pytest.mark.benchmark

DATA = Path(__file__).parents[2] / "data"


def moved(configuration: Configuration, rng: Random) -> Configuration:
    g = examples.random_invertible(configuration.field, configuration.n, rng)
    planes = [examples.image(configuration.field, g, plane) for plane in configuration.planes]
    rng.shuffle(planes)
    return Configuration(tuple(planes))


def test_the_incidence_graph_of_twenty_planes_over_q(benchmark: Any) -> None:
    # target: at most 50 ms, with dim(A ∩ F_v) at each point
    configuration = trivector.read(DATA / "twenty-planes.json")
    graph = benchmark(lambda: Incidence(configuration).graph())
    assert graph.number_of_nodes() == 66


def test_the_group_of_the_twenty_planes_over_q(benchmark: Any) -> None:
    # target: at most 2 s
    configuration = trivector.read(DATA / "twenty-planes.json")
    assert benchmark(lambda: collineations(configuration)).order == 1920


def test_comparing_two_random_images_of_seventeen_planes_over_q(benchmark: Any) -> None:
    # target: at most 1 s
    configuration, rng = trivector.read(DATA / "del-pezzo-seventeen.json"), Random(17)
    pairs = [(moved(configuration, rng), moved(configuration, rng)) for _ in range(5)]
    answers = benchmark.pedantic(
        lambda: [compare_configurations(*pair).equivalent for pair in pairs], rounds=3
    )
    assert answers == [True] * 5  # five comparisons in one round


@pytest.mark.parametrize("name", ["twenty-planes", "del-pezzo-seventeen", "f7-sixteen"])
def test_a_canonical_label_over_f7(benchmark: Any, name: str) -> None:
    # target: at most 100 ms
    configuration = trivector.read(DATA / f"{name}.json", field="F_7")
    image = moved(configuration, Random(name))
    label = benchmark(lambda: canonical_form(configuration).label)
    assert label == canonical_form(image).label


def test_the_chain_against_all_5760_automorphisms_one_by_one() -> None:
    configuration = Configuration(tuple(examples.over(prime_field(101), examples.twenty_planes())))
    start = perf_counter()
    group = collineations(configuration)
    chain = perf_counter() - start
    start = perf_counter()
    blocks = [point.planes for point in Incidence(configuration).points]
    candidates = list(oracle_symmetry.graph_automorphisms(20, blocks))
    listing = perf_counter() - start
    assert len(candidates) == 5760
    planes = [[draws.ints(row) for row in plane.rows] for plane in configuration.planes]
    start = perf_counter()
    projective = sum(
        oracle_symmetry.projective_map(planes, images, 101) is not None for images in candidates
    )
    testing = perf_counter() - start
    # The same linear systems in python-flint, so that the comparison is fair.
    start = perf_counter()
    fast = sum(solvable(configuration, images) for images in candidates)
    flint = perf_counter() - start
    assert projective == fast == group.order == 1920
    print(
        f"\nstabiliser chain {chain:.3f} s; listing 5760 automorphisms {listing:.1f} s, "
        f"testing them one by one {testing:.1f} s in Python, {flint:.1f} s with python-flint"
    )


def solvable(configuration: Configuration, images: tuple[int, ...]) -> bool:
    from trivector.symmetry.linear_maps import MapSystem, find_invertible

    rows = [plane.rows for plane in configuration.planes]
    k = configuration.field
    system = _SYSTEMS.setdefault(id(configuration), MapSystem(k, 6, rows, rows))
    space = system.everything
    for i, image in enumerate(images):
        space = system.restrict(space, i, image)
        if space is None:
            return False
    return find_invertible(k, space, 6, Random(0)) is not None


_SYSTEMS: dict[int, Any] = {}
