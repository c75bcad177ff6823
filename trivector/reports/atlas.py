"""The atlas: complete configurations as documents, and the index made from them.

``python -m trivector.reports.atlas data/atlas`` writes both again.
"""

import json
import sys
from collections import Counter
from collections.abc import Sequence
from itertools import combinations
from pathlib import Path
from random import Random
from typing import Any

from trivector.configurations import Configuration
from trivector.configurations.ten_planes import random_ten_planes
from trivector.documents import read
from trivector.errors import UsageError
from trivector.families.atlas import RECIPES, AtlasExample, atlas_example
from trivector.fields.prime import prime_field
from trivector.sections import LinearSection, SectionReport
from trivector.subspaces import Subspace

__all__ = ["TEN_PLANES", "atlas_index", "document_of", "index_row", "ten_planes", "write_atlas"]

TEN_PLANES = "length-10-over-f1009.json"
"""The document of length 10, which no curve of the recipes gives."""

_TEN_PLANES_PRIME, _TEN_PLANES_SEED = 1009, 1

_HEAD = """\
# Atlas

Complete configurations, the longest first. *Length* is the degree of the section by the Lagrangian
that the planes span, *over the field* how many of its planes are rational; both are computed anew
whenever this index is made. *Points* counts the points that several planes share: `5×16` are 16
points on five planes each. Every document says under `source` how it was made.

This file and the documents are made by `python -m trivector.reports.atlas data/atlas`.

| document | field | length | over the field | Hilbert function | pairs | points | made from |
|---|---|---|---|---|---|---|---|
"""


def document_of(example: AtlasExample) -> str:
    """The JSON text of an entry, one plane (or one row of a basis) on a line."""
    entries: dict[str, Any] = {
        "kind": "planes" if example.planes else "subspace",
        "title": example.title,
        "source": example.source,
        "field": example.field.to_spec(),
        "dimension": 6,
    }
    if example.labels:
        entries["labels"] = list(example.labels)
    if example.planes:
        name = "planes"
        rows: list[Any] = [plane.to_entries() for plane in example.planes]
    else:
        name = "basis"
        rows = [[example.field.format(x) for x in row] for row in example.lagrangian.rows]
    head = [f"  {json.dumps(key)}: {json.dumps(value)}" for key, value in entries.items()]
    lines = ",\n".join(f"    {json.dumps(row)}" for row in rows)
    return "{\n" + ",\n".join(head) + f',\n  "{name}": [\n{lines}\n  ]\n}}\n'


def ten_planes() -> AtlasExample:
    """Ten planes in general position over F_1009; a few seconds."""
    field = prime_field(_TEN_PLANES_PRIME)
    planes = random_ten_planes(field, Random(_TEN_PLANES_SEED))
    return AtlasExample(
        field,
        f"Complete configuration of length 10 over {field.name}",
        "constructed here: ten pairwise incident planes in general position, one after the other; "
        f"random_ten_planes({field.name}, Random({_TEN_PLANES_SEED}))",
        (),
        planes,
        Subspace.span(field, 6, [plane.plucker for plane in planes]),
    )


def _points(configuration: Configuration) -> str:
    """``"5×16, 2×30"``: how many planes go through the points that several share."""
    meets: dict[Any, set[int]] = {}
    for (i, first), (j, second) in combinations(enumerate(configuration.planes), 2):
        meet = first.meet(second)
        if meet.projective_dimension == 0:
            meets.setdefault(meet, set()).update((i, j))
    counts = Counter(len(indices) for indices in meets.values())
    return ", ".join(f"{size}×{counts[size]}" for size in sorted(counts, reverse=True))


def _pairs(configuration: Configuration) -> str:
    counts = Counter(configuration.meet_dimensions().values())
    words = {0: "point", 1: "line", -1: "disjoint", 2: "equal"}
    return ", ".join(f"{counts[key]} {word}" for key, word in words.items() if counts[key])


def index_row(path: Path) -> tuple[tuple[Any, ...], str]:
    """A sorting key and the row of one document, everything in it computed from the document."""
    document = read(path)
    data = json.loads(path.read_text(encoding="utf-8"))
    section: SectionReport
    if isinstance(document, Configuration):
        examination = document.examine()
        if not examination.complete_over_closure:
            raise UsageError(f"{path}: not proved complete; an entry of the atlas must be")
        section = examination.section
        pairs, points = _pairs(document), _points(document)
        field = document.field
    elif isinstance(document, Subspace):
        section = LinearSection(document).examine()
        pairs = points = "–"
        field = document.field
    else:
        raise UsageError(f"{path}: an entry of the atlas holds planes or a subspace")
    hilbert = ", ".join(map(str, section.hilbert_function or ()))
    rational = "–" if section.planes is None else str(len(section.planes))
    made = data["source"].removeprefix("constructed here: ").split(" in |-2K|")[0]
    cells = [
        f"[`{path.name}`]({path.name})",
        field.name,
        "infinite" if section.infinite else str(section.degree),
        rational,
        f"{hilbert}, …",
        pairs,
        points,
        made.replace("|", "\\|"),
    ]
    degree = section.degree or 0
    key = (bool(section.infinite), -degree, field.characteristic, path.name)
    return key, f"| {' | '.join(cells)} |"


def atlas_index(folder: Path) -> str:
    """The text of the index of all documents in a folder."""
    rows = sorted(index_row(path) for path in folder.glob("*.json"))
    return _HEAD + "".join(f"{row}\n" for _, row in rows)


def write_atlas(folder: Path) -> list[Path]:
    """Write every entry and the index; the paths, the index last."""
    folder.mkdir(parents=True, exist_ok=True)
    paths = []
    made = {recipe.file_name: atlas_example(recipe) for recipe in RECIPES}
    for name, example in [*made.items(), (TEN_PLANES, ten_planes())]:
        path = folder / name
        path.write_text(document_of(example), encoding="utf-8")
        paths.append(path)
    index = folder / "README.md"
    index.write_text(atlas_index(folder), encoding="utf-8")
    return [*paths, index]


def main(arguments: Sequence[str]) -> int:
    """Write the atlas into the folder named by the only argument."""
    if len(arguments) != 1:
        print("usage: python -m trivector.reports.atlas FOLDER", file=sys.stderr)
        return 2
    for path in write_atlas(Path(arguments[0])):
        print(path)
    return 0


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
