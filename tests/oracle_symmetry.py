"""Slow and literal: automorphisms of an incidence graph, and which of them are projective.

Nothing here comes from the package; planes are lists of rows of residues
modulo a prime.
"""

from collections.abc import Iterator, Sequence

import oracle

Rows = Sequence[Sequence[int]]


def graph_automorphisms(count: int, blocks: Sequence[Sequence[int]]) -> Iterator[tuple[int, ...]]:
    """Permutations of 0 … count−1 that carry blocks (the planes on a point) to blocks.

    Two elements lie on at most one common block (planes that share no line).
    Images are chosen one after another; each must agree with those before on
    the sizes of common blocks, and on which earlier elements lie on them.
    """
    wanted = {frozenset(block) for block in blocks}
    common = [[0] * count for _ in range(count)]  # the common block of two, as bits
    for block in blocks:
        bits = sum(1 << i for i in block)
        for i in block:
            for j in block:
                if i != j:
                    assert not common[i][j]
                    common[i][j] = bits

    def image_of(bits: int, images: list[int]) -> int:
        return sum(1 << image for i, image in enumerate(images) if bits >> i & 1)

    def extend(images: list[int], used: int) -> Iterator[tuple[int, ...]]:
        i = len(images)
        if i == count:
            if {frozenset(images[j] for j in block) for block in blocks} == wanted:
                yield tuple(images)
            return
        before = [(j, common[i][j].bit_count(), image_of(common[i][j], images)) for j in range(i)]
        for image in range(count):
            if not used >> image & 1 and all(
                common[image][images[j]].bit_count() == size
                and common[image][images[j]] & used == bits
                for j, size, bits in before
            ):
                yield from extend([*images, image], used | 1 << image)

    return extend([], 0)


def annihilator(rows: Rows, p: int) -> list[list[int]]:
    """A basis of the linear forms that vanish on reduced rows."""
    n = len(rows[0])
    pivots = [next(j for j, x in enumerate(row) if x) for row in rows]
    forms = []
    for free in (j for j in range(n) if j not in pivots):
        form = [0] * n
        form[free] = 1
        for row, pivot in zip(rows, pivots, strict=True):
            form[pivot] = -row[free] % p
        forms.append(form)
    return forms


def projective_map(planes: Sequence[Rows], images: Sequence[int], p: int) -> Rows | None:
    """An invertible g with gW_i = W_images(i) modulo p, or None: the whole system at once.

    The solutions are assumed to be at most one line, which is checked.
    """
    n = len(planes[0][0])
    conditions = [
        [f * x % p for f in form for x in w]
        for rows, image in zip(planes, images, strict=True)
        for form in annihilator(planes[image], p)
        for w in rows
    ]
    reduced, pivots = _reduced(conditions, p)
    free = [j for j in range(n * n) if j not in pivots]
    assert len(free) <= 1
    if not free:
        return None
    solution = [0] * (n * n)
    solution[free[0]] = 1
    for row, pivot in zip(reduced, pivots, strict=True):
        solution[pivot] = -row[free[0]] % p
    matrix = [solution[n * i : n * i + n] for i in range(n)]
    return matrix if oracle.rank(matrix, p) == n else None


def _reduced(rows: list[list[int]], p: int) -> tuple[list[list[int]], list[int]]:
    kept: list[list[int]] = []
    pivots: list[int] = []
    for row in rows:
        current = list(row)
        for other, pivot in zip(kept, pivots, strict=True):
            factor = current[pivot]
            if factor:
                current = [(x - factor * y) % p for x, y in zip(current, other, strict=True)]
        pivot = next((j for j, x in enumerate(current) if x), None)
        if pivot is None:
            continue
        inverse = pow(current[pivot], -1, p)
        current = [x * inverse % p for x in current]
        for k, other in enumerate(kept):
            factor = other[pivot]
            if factor:
                kept[k] = [(x - factor * y) % p for x, y in zip(other, current, strict=True)]
        kept.append(current)
        pivots.append(pivot)
    return kept, pivots
