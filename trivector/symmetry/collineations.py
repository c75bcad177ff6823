"""The collineations that keep a configuration: a stabiliser chain with early linear tests."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property
from random import Random
from typing import Any

from trivector.configurations import Configuration, Incidence
from trivector.errors import MixedFieldsError, UsageError
from trivector.fields.linear import Rows
from trivector.fields.protocol import Field
from trivector.subspaces import Plane
from trivector.symmetry.linear_maps import canonical_matrix, count_invertible, image_rows
from trivector.symmetry.search import (
    Base,
    DistinctPlanes,
    Found,
    LimitReachedError,
    Predicate,
    Search,
)

__all__ = ["MAX_STEPS", "Collineation", "CollineationGroup", "collineations", "frobenius_image"]

MAX_STEPS = 1_000_000
"""The largest number of partial images that a search tries."""

_LARGEST_KERNEL = 20_000


@dataclass(frozen=True)
class Collineation:
    """A collineation that carries planes to planes: everything needed to check it again.

    Attributes
    ----------
    permutation : tuple of int
        Plane i goes to plane ``permutation[i]``.
    matrix : n×n tuple of tuples of scalars
        g acts on column vectors; scaled so that its first nonzero entry is 1.
    frobenius : int
        j: the map is v ↦ g·v^(p^j), entry by entry; 0 for a linear one.
    """

    permutation: tuple[int, ...]
    matrix: Rows
    frobenius: int = 0

    def verify(self, source: Configuration, target: Configuration) -> None:
        """Check that plane i of ``source`` goes to plane ``permutation[i]`` of ``target``.

        Raises
        ------
        UsageError
            If the matrix is singular, the permutation is none, or a plane goes
            elsewhere.
        """
        k = source.field
        matrix = k.matrix(self.matrix, source.n)
        if not matrix.det():
            raise UsageError("the matrix is singular; a collineation has an invertible one")
        if sorted(self.permutation) != list(range(len(target.planes))):
            raise UsageError("not a permutation of the planes; each index must occur once")
        for i, (plane, image) in enumerate(zip(source.planes, self.permutation, strict=True)):
            twisted = frobenius_image(plane, self.frobenius)
            if image_rows(k, matrix, twisted.rows, source.n) != target.planes[image].rows:
                raise UsageError(f"plane {i} does not go to plane {image}")

    def to_json(self, k: Field) -> dict[str, Any]:
        """The keys of a generator in an answer; ``frobenius`` only when it is not 0."""
        data: dict[str, Any] = {
            "permutation": list(self.permutation),
            "matrix": [[k.format(x) for x in row] for row in self.matrix],
        }
        return data | ({"frobenius": self.frobenius} if self.frobenius else {})


@dataclass(frozen=True)
class CollineationGroup:
    """The collineations over the field of the data that keep a set of planes.

    Attributes
    ----------
    configuration : Configuration
    generators : tuple of Collineation
        They generate the group modulo the kernel.
    base : tuple of int
        Planes whose common stabiliser is the kernel.
    basic_orbits : tuple of int
        Lengths of the orbits of the stabiliser chain; their product is
        ``order_on_planes``. For a semilinear group with permutations that no
        linear map induces, their index stands first.
    order_on_planes : int or None
        The order of the permutation group on the planes.
    kernel_basis : tuple of n×n matrices
        All linear maps that keep every plane; the invertible ones modulo
        scalars are the kernel. One matrix, the identity: the kernel is trivial.
    kernel_order : int or None
        How many collineations (semilinear ones too, if admitted) keep every
        plane, over F_q; None if infinite, and beyond what can be counted.
    semilinear : bool
        Whether maps v ↦ g·v^(p^j) were admitted.
    method, limit : str, str or None
        How it was decided; what was hit if the group may be larger.
    base_field : Field or None
        Where the planes needed a larger field than that of the data: the
        field of the data, over which all these collineations are defined.
    """

    configuration: Configuration
    generators: tuple[Collineation, ...]
    base: tuple[int, ...]
    basic_orbits: tuple[int, ...]
    order_on_planes: int | None
    kernel_basis: tuple[Rows, ...]
    kernel_order: int | None
    semilinear: bool
    method: str
    limit: str | None = None
    seed: int = 0
    base_field: Field | None = None

    @property
    def kernel_dimension(self) -> int:
        """The dimension of the group of collineations that keep every plane; 0 if finite."""
        return len(self.kernel_basis) - 1

    @property
    def order(self) -> int | None:
        """The order of the group of collineations; None if infinite or not known."""
        if self.order_on_planes is None or self.kernel_order is None:
            return None
        return self.order_on_planes * self.kernel_order

    @property
    def exhaustive(self) -> bool:
        """Whether the group is proved to be all."""
        return self.limit is None

    @property
    def scope(self) -> str:
        """Over which field the collineations are all there are.

        The permutations are those over every extension as well (see
        `trivector.symmetry.search`).
        """
        return (self.base_field or self.configuration.field).name

    @cached_property
    def plane_orbits(self) -> tuple[tuple[int, ...], ...]:
        """The orbits on the planes, each increasing, by their first elements."""
        permutations = [g.permutation for g in self.generators]
        return orbits(permutations, len(self.configuration.planes))

    @cached_property
    def incidence(self) -> Incidence:
        """The points, lines and hyperplanes that the planes share."""
        return Incidence(self.configuration)

    @cached_property
    def point_orbits(self) -> tuple[tuple[int, ...], ...]:
        """The orbits on the points of `incidence`, by their indices there."""
        points = self.incidence.points
        index = {point.planes: i for i, point in enumerate(points)}
        permutations = [
            [index[tuple(sorted(g.permutation[i] for i in point.planes))] for point in points]
            for g in self.generators
        ]
        return orbits(permutations, len(points))

    def stabiliser_order(self, plane: int) -> int | None:
        """The order, on the planes, of the stabiliser of one plane."""
        if self.order_on_planes is None:
            return None
        return self.order_on_planes // next(len(o) for o in self.plane_orbits if plane in o)

    def iter_permutations(self) -> Iterator[tuple[int, ...]]:
        """All permutations of the planes that come from the group; breadth first, fixed order."""
        identity = tuple(range(len(self.configuration.planes)))
        seen, queue = {identity}, [identity]
        for element in queue:
            yield element
            for g in self.generators:
                following = tuple(g.permutation[i] for i in element)
                if following not in seen:
                    seen.add(following)
                    queue.append(following)

    def to_json(self) -> dict[str, Any]:
        """The keys of a ``symmetries`` answer."""
        k = self.configuration.field
        return {
            "kind": "symmetries",
            "title": self.configuration.title,
            "field": k.to_spec(),
            "dimension": self.configuration.n,
            "planes": len(self.configuration.planes),
            "order": self.order,
            "order_on_planes": self.order_on_planes,
            "kernel": {"dimension": self.kernel_dimension, "order": self.kernel_order},
            "generators": [g.to_json(k) for g in self.generators],
            "orbits": [list(orbit) for orbit in self.plane_orbits],
            "points": [
                {"coordinates": p.flat.to_entries()[0], "planes": list(p.planes)}
                for p in self.incidence.points
            ],
            "point_orbits": [list(orbit) for orbit in self.point_orbits],
            "stabilisers": [
                {"plane": orbit[0], "order_on_planes": self.stabiliser_order(orbit[0])}
                for orbit in self.plane_orbits
            ],
            "base": list(self.base),
            "semilinear": self.semilinear,
            "scope": self.scope,
            "method": self.method,
            "exhaustive": self.exhaustive,
            "limit": self.limit,
            "seed": self.seed,
        }


def collineations(
    configuration: Configuration,
    *,
    semilinear: bool = False,
    fixing: Sequence[int] = (),
    predicate: Predicate | None = None,
    conjugation: Sequence[int] | None = None,
    limit: int = MAX_STEPS,
    seed: int = 0,
) -> CollineationGroup:
    """All collineations, over the field of the data, that permute the planes.

    Parameters
    ----------
    configuration : Configuration
        Of any planes of one V; repeated planes keep their multiplicity.
    semilinear : bool
        Admit v ↦ g·v^(p^j) too; over a finite field.
    fixing : sequence of int
        Only those that keep each of these planes.
    predicate : callable, optional
        Only linear maps g (n×n matrices) with a property that a subgroup has.
    conjugation : sequence of int, optional
        A permutation of the planes, all different, with which every map that
        has the property commutes on the planes.
    limit : int
        The largest number of partial images that are tried.
    seed : int
        For the search of invertible matrices in a space; it can only turn an
        answer into "undecided".

    Returns
    -------
    CollineationGroup
        Exhaustive unless ``limit`` is set in it.

    Notes
    -----
    A base and a strong generating set, from the last stabiliser upwards
    (Schreier–Sims chain; "Computational methods in the study of permutation
    groups", 1970): at each level one search for each orbit of candidates. The
    tests on partial images are in `trivector.symmetry.search`.

    Examples
    --------
    >>> from trivector import read
    >>> group = collineations(read("data/seven-planes-p6.json"))
    >>> group.order_on_planes, group.kernel_dimension, group.order
    (168, 6, None)
    """
    planes = DistinctPlanes(configuration, conjugation)
    k = planes.field
    if semilinear and k.order is None:
        raise UsageError(f"semilinear maps need a finite field, not {k.name}; leave them out")
    distinct_of = {i: d for d, copies in enumerate(planes.copies) for i in copies}
    for i in fixing:
        if i not in distinct_of:
            raise UsageError(f"plane {i} does not exist; the last one is {len(distinct_of) - 1}")
    fixed = list(dict.fromkeys(distinct_of[i] for i in fixing))
    base = Base(planes, fixed)
    rng = Random(seed)
    search = Search(base, planes, predicate=predicate, limit=limit, rng=rng)
    found: list[Found] = []
    lengths: list[int] = []
    limited = None
    try:
        lengths.extend(
            _extend_chain(search, level, found)
            for level in reversed(range(len(fixed), len(base.sequence)))
        )
    except LimitReachedError:
        limited = f"{limit} partial images were tried"
    generators = [
        Collineation(planes.permutation(f.images, planes), canonical_matrix(k, f.matrix.tolist()))
        for f in found
    ]
    lengths.reverse()
    fixing_all = 1  # classes of semilinear maps, modulo linear ones, that keep every plane
    if semilinear and limited is None:
        twisted, power, limited = _semilinear(configuration, fixed, planes, predicate, limit, rng)
        if twisted is not None:
            generators.append(
                Collineation(
                    planes.permutation(twisted.images, planes),
                    canonical_matrix(k, twisted.matrix.tolist()),
                    power,
                )
            )
            index = _frobenius_order(k) // power
            new = _least_linear_power(search, twisted.images, index)
            lengths.insert(0, new)
            fixing_all = index // new
    limited = limited or search.undecided or None
    order = 1
    for length in lengths:
        order *= length
    space = base.spaces[-1]
    n = planes.n
    kernel = tuple(
        tuple(tuple(row[i * n : (i + 1) * n]) for i in range(n)) for row in space.tolist()
    )
    kernel_order: int | None = 1
    if len(kernel) > 1:
        units = count_invertible(k, space, n, _LARGEST_KERNEL)
        kernel_order = None if units is None or k.order is None else units // (k.order - 1)
        if predicate is not None:
            limited = limited or "the planes do not determine a collineation"
    if kernel_order is not None:
        kernel_order *= fixing_all
    return CollineationGroup(
        configuration=configuration,
        generators=tuple(generators),
        base=tuple(planes.copies[i][0] for i in base.sequence),
        basic_orbits=tuple(lengths),
        order_on_planes=None if limited else order,
        kernel_basis=kernel,
        kernel_order=kernel_order,
        semilinear=semilinear,
        method="stabiliser chain over a base of "
        f"{len(base.sequence)} planes; {search.steps} partial images tested by colour refinement "
        "of the incidence graph and by the rank of a linear system, solutions over the field",
        limit=limited,
        seed=seed,
    )


def _extend_chain(search: Search, level: int, found: list[Found]) -> int:
    """Complete the orbit of the base plane of this level under the stabiliser of those before.

    ``found`` holds generators of the stabiliser of one plane more and grows.
    """
    base = search.base
    prefix, point = base.sequence[:level], base.sequence[level]
    colouring = base.colourings[level]
    orbit = _orbit(point, found)
    impossible: set[int] = set()
    for candidate in base.planes.colours.cell(colouring, colouring.colours[point]):
        if candidate in orbit or candidate in impossible:
            continue
        solution = search.first([*prefix, candidate])
        if solution is None:
            impossible |= _orbit(candidate, found)
        else:
            found.append(solution)
            orbit = _orbit(point, found)
    return len(orbit)


def _orbit(point: int, found: Sequence[Found]) -> set[int]:
    orbit, queue = {point}, [point]
    for i in queue:
        for f in found:
            if f.images[i] not in orbit:
                orbit.add(f.images[i])
                queue.append(f.images[i])
    return orbit


def orbits(permutations: Sequence[Sequence[int]], size: int) -> tuple[tuple[int, ...], ...]:
    """The orbits of 0 … size−1, each increasing, by their first elements."""
    result, seen = [], [False] * size
    for start in range(size):
        if seen[start]:
            continue
        seen[start], orbit = True, [start]
        for i in orbit:
            for permutation in permutations:
                if not seen[permutation[i]]:
                    seen[permutation[i]] = True
                    orbit.append(permutation[i])
        result.append(tuple(sorted(orbit)))
    return tuple(result)


def frobenius_image(plane: Plane, power: int) -> Plane:
    """The plane with every entry x replaced by x^(p^power)."""
    if power == 0:
        return plane
    exponent = plane.field.characteristic**power
    rows = tuple(tuple(x**exponent for x in row) for row in plane.rows)
    return Plane(plane.field, plane.n, rows)  # canonical rows stay canonical


def _frobenius_order(k: Field) -> int:
    """r for F_q, q = p^r."""
    degree, size = 1, k.characteristic
    assert k.order is not None
    while size < k.order:
        degree, size = degree + 1, size * k.characteristic
    return degree


def _semilinear(
    configuration: Configuration,
    fixed: Sequence[int],
    planes: DistinctPlanes,
    predicate: Predicate | None,
    limit: int,
    rng: Random,
) -> tuple[Found | None, int, str | None]:
    """A semilinear map whose power j of Frobenius is least, j | r; j = r if there is none.

    The powers that occur form a subgroup of ℤ/r, so the least divisor
    generates it.
    """
    if predicate is not None:
        raise UsageError("semilinear maps are found for configurations only, not for subspaces")
    r = _frobenius_order(planes.field)
    for power in (j for j in range(1, r) if r % j == 0):
        twisted = DistinctPlanes(
            Configuration(tuple(frobenius_image(plane, power) for plane in configuration.planes))
        )
        search = Search(Base(twisted, fixed), planes, limit=limit, rng=rng)
        try:
            found = search.first(fixed)
        except LimitReachedError:
            return None, r, f"{limit} partial images were tried"
        if search.undecided:
            return None, r, search.undecided
        if found is not None:
            return found, power, None
    return None, r, None


def _least_linear_power(search: Search, images: Sequence[int], index: int) -> int:
    """The least t ≥ 1 for which the t-th power of a permutation comes from a linear map.

    It divides ``index``: that power is linear itself.
    """
    power = list(images)
    for t in range(1, index):
        # Linear maps are determined, on the planes, by the images of the base.
        found = search.first([power[i] for i in search.base.sequence])
        if found is not None and list(found.images) == power:
            return t
        power = [images[i] for i in power]
    return index


def check_same_space(first: Any, second: Any) -> None:
    """Refuse objects over different fields or of different V.

    Raises
    ------
    MixedFieldsError
    """
    if first.field != second.field or first.n != second.n:
        raise MixedFieldsError(
            f"the first is over {first.field.name} with n = {first.n}, the second over "
            f"{second.field.name} with n = {second.n}; convert one of them"
        )
