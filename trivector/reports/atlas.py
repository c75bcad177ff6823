"""The index of the atlas: every cell computed from the documents."""

import json
from collections import Counter
from itertools import combinations
from pathlib import Path
from typing import Any

from trivector.configurations import Configuration
from trivector.documents import read
from trivector.errors import UsageError
from trivector.sections import LinearSection, SectionReport
from trivector.subspaces import Subspace

__all__ = ["CERTIFICATES", "atlas_index", "index_row"]

CERTIFICATES = "certificates"
"""The folder of the certificates, each with the name of its document."""

_HEAD = """\
# Atlas

Complete configurations, the longest first, and the six infinite families. *Length* is the degree of
the section by the Lagrangian that the planes span (of an infinite one: dimension and degree), *over
the field* how many of its planes are rational; all is computed anew whenever this index is made.
*Points* counts the points that several planes share: `5×16` are 16 points on five planes each. The
command makes the document again, to the byte; it stands under `source` in it too. The certificate
can be checked with `trivector recheck`, or with the lone checker.

Two sets of 22 planes in characteristic 2 are listed: they are not projectively equivalent, not by
semilinear maps either, as the points show.

`python -m trivector.cli.atlas data/atlas` makes all of this folder; with `--check` before the
folder it makes every document again, examines it and rechecks its certificate.

| document | field | length | over the field | Hilbert function | pairs | points | `make` … |
|---|---|---|---|---|---|---|---|
"""


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
        if section.planes and section.points:
            planes = Configuration(section.planes)
            pairs, points = _pairs(planes), _points(planes)
        field = document.field
    else:
        raise UsageError(f"{path}: an entry of the atlas holds planes or a subspace")
    hilbert = ", ".join(map(str, section.hilbert_function or ()))
    rational = "–" if section.planes is None else str(len(section.planes))
    made = data["source"].partition(" (version")[0].removeprefix("trivector make ")
    length = str(section.degree)
    if section.infinite:
        length = f"dimension {section.projective_dimension}, degree {section.degree}"
    cells = [
        f"[`{path.stem}`]({path.name}) ([certificate]({CERTIFICATES}/{path.name}))",
        field.name,
        length,
        rational,
        f"{hilbert}, …",
        pairs,
        points,
        f"`{made}`",
    ]
    degree = section.degree or 0
    key = (bool(section.infinite), -degree, field.characteristic, path.name)
    return key, f"| {' | '.join(cells)} |"


def atlas_index(folder: Path) -> str:
    """The text of the index of all documents in a folder."""
    rows = sorted(index_row(path) for path in folder.glob("*.json"))
    return _HEAD + "".join(f"{row}\n" for _, row in rows)
