"""The atlas: small complete configurations as documents, with certificates and an index.

``python -m trivector.cli.atlas data/atlas`` writes all of it again;
``python -m trivector.cli.atlas --check data/atlas`` makes every document again
from the command that stands in it, examines it, and rechecks its certificate.
"""

import json
import sys
from collections.abc import Iterator, Sequence
from pathlib import Path
from shlex import split
from tempfile import TemporaryDirectory
from typing import Any

from trivector.errors import TrivectorError

__all__ = ["ENTRIES", "certificate_of", "check_atlas", "document_of", "main", "write_atlas"]

_TEN_LINES = "E1; E2; E3; E4; L12; L13; L14; L23; L24; L34"

_CURVES: tuple[tuple[str, int, str], ...] = (
    ("Q", 20, _TEN_LINES),
    ("Q", 19, "E1; E2; E4; L12; L14; L23; L24; L34; y-2*z"),
    ("Q", 18, "E2; E3; E4; L12; L23; L24; L34; 2*x*y-x*z+y^2-2*y*z"),
    ("Q", 17, "E1; L12; L13; L23; a: y+z; b: x+y-2*z; c: x-2*y+z"),
    ("Q", 16, "L12; L34; a: y+z; b: x-2*z; c: x+y; d: x+2*y-3*z"),
    ("Q", 15, "a: y+z; b: x-2*z; c: x+y; d: x+2*y-3*z; x*y+x*z-2*y*z"),
    ("Q", 14, "2*y-z; 3*x-z; x^2-2*x*z+2*y^2-y*z; 3*x*y-2*x*z-y*z"),
    ("Q", 13, "2*x^2-3*x*y+3*x*z-2*y*z; 3*x*y+2*x*z-2*y^2-3*y*z; 2*x*y+3*x*z+3*y*z+2*z^2"),
    (
        "Q",
        12,
        "E2; 21*x^4*y^2+28*x^4*z^2+4*x^3*y^3-116*x^3*y*z^2+42*x^2*y^2*z^2+36*x^2*z^4-"
        "4*x*y^3*z^2-12*x*y*z^4+y^2*z^4",
    ),
    (
        "Q",
        11,
        "20*x^4*y^2+4*x^4*y*z+x^4*z^2-20*x^3*y^3-14*x^3*y^2*z-14*x^3*y*z^2-2*x^3*z^3+"
        "5*x^2*y^4-14*x^2*y^3*z+21*x^2*y^2*z^2+12*x^2*y*z^3+x^2*z^4+10*x*y^4*z+"
        "4*x*y^3*z^2-12*x*y^2*z^3-2*x*y*z^4+y^4*z^2-2*y^3*z^3+y^2*z^4",
    ),
    ("F_5", 20, _TEN_LINES),
    ("F_5", 19, "E1; E2; E4; L12; L14; L23; L24; L34; y+2*z"),
    ("F_5", 18, "E1; E4; L14; L23; L24; L34; y+z; y+3*z"),
    ("F_7", 17, "E3; E4; L13; L14; L24; 5*x+4*y; 4*x^2+6*x*y+5*x*z+6*y*z"),
    ("F_7", 16, "E2; E3; L23; L34; 2*x+z; 3*x*y^2+4*x*y*z+5*x*z^2+6*y^2*z+3*y*z^2"),
    ("F_11", 15, "a: y+z; b: x-2*z; c: x+y; d: x+2*y-3*z; x*y+x*z-2*y*z"),
    ("F_11", 14, "10*x+4*y; x+2*z; 10*x*y+2*x*z+4*y^2+2*y*z+4*z^2; 10*x*y+2*x*z+10*y*z"),
    ("F_13", 13, "2*x^2-3*x*y+3*x*z-2*y*z; 3*x*y+2*x*z-2*y^2-3*y*z; 2*x*y+3*x*z+3*y*z+2*z^2"),
    (
        "F_11",
        12,
        "E2; 21*x^4*y^2+28*x^4*z^2+4*x^3*y^3-116*x^3*y*z^2+42*x^2*y^2*z^2+36*x^2*z^4-"
        "4*x*y^3*z^2-12*x*y*z^4+y^2*z^4",
    ),
    (
        "F_13",
        11,
        "x^4*y^2+11*x^4*y*z+x^4*z^2+2*x^3*y^3+2*x^3*y^2*z+8*x^3*y*z^2+6*x^3*z^3+"
        "7*x^2*y^4+7*x^2*y^2*z^2+7*x^2*y*z^3+9*x^2*z^4+2*x*y^4*z+7*x*y^3*z^2+8*x*y^2*z^3+"
        "12*x*y*z^4+11*y^4*z^2+8*y^3*z^3+8*y^2*z^4",
    ),
)
"""Field, length, components of the curve. How they were searched for is not part of the package."""


def _entries() -> Iterator[tuple[str, str]]:
    for field, length, curve in _CURVES:
        yield (
            f"length-{length}-over-{_short(field)}",
            f"del-pezzo --field {field} --curve '{curve}'",
        )
    yield "length-22-over-f4", "twenty-two --field F_4"
    yield (
        "length-22-over-f4-ten-lines",
        f"del-pezzo --field F_4 --lagrangian --curve '{_TEN_LINES}'",
    )
    for field in ("Q", "F_3"):
        yield f"length-10-over-{_short(field)}", f"symmetric --field {field} --length 10"
    yield "length-10-over-f1009", "ten --field F_1009 --seed 1"
    for family in ("point", "hyperplane", "lines", "ruling", "conics", "tangents"):
        for field in ("Q", "F_3"):
            yield f"infinite-{family}-over-{_short(field)}", f"{family} --field {field}"


def _short(field: str) -> str:
    return field.lower().replace("_", "")


ENTRIES: dict[str, str] = {f"{name}.json": command for name, command in _entries()}
"""The documents by file name, each with the words after ``trivector make``."""


def document_of(command: str) -> str:
    """The document that ``trivector make`` writes."""
    from trivector.cli import main as run

    with TemporaryDirectory() as folder:
        path = Path(folder) / "made.json"
        code = run(["make", *split(command), "-o", str(path)])
        if code:
            raise TrivectorError(f"trivector make {command}: exit code {code}")
        return path.read_text(encoding="utf-8")


def certificate_of(path: Path) -> str:
    """The certificate of what ``examine`` or ``planes`` finds out about a document."""
    from trivector.certificates import certify_examination, certify_section, certify_trivectors
    from trivector.configurations import Configuration
    from trivector.documents import read
    from trivector.sections import LinearSection

    document = read(path)
    made: dict[str, Any]
    if isinstance(document, Configuration):
        made = certify_examination(document.examine())
    elif isinstance(document, tuple):
        made = certify_trivectors(document)
    else:
        title = json.loads(path.read_text(encoding="utf-8"))["title"]
        made = certify_section(LinearSection(document).examine(), title=title)
    return json.dumps(made, ensure_ascii=False, separators=(",", ":")) + "\n"


def write_atlas(folder: Path) -> list[Path]:
    """Write every document and certificate, and the index; the paths, the index last."""
    from trivector.reports.atlas import CERTIFICATES, atlas_index

    (folder / CERTIFICATES).mkdir(parents=True, exist_ok=True)
    paths = []
    for name, command in ENTRIES.items():
        path = folder / name
        path.write_text(document_of(command), encoding="utf-8")
        certificate = folder / CERTIFICATES / name
        certificate.write_text(certificate_of(path), encoding="utf-8")
        paths += [path, certificate]
    index = folder / "README.md"
    index.write_text(atlas_index(folder), encoding="utf-8")
    return [*paths, index]


def check_atlas(folder: Path, names: Sequence[str] = ()) -> Iterator[tuple[str, bool, str]]:
    """For each document, or those named: its name, whether all is well, and what was checked.

    The document is what its ``source`` makes; the certificate in the folder is
    the one that is made of it now; and the lone checker accepts every claim.
    """
    from trivector.certificates import checker
    from trivector.reports.atlas import CERTIFICATES

    for path in sorted(folder.glob("*.json")):
        if names and path.name not in names:
            continue
        text = path.read_text(encoding="utf-8")
        source = json.loads(text).get("source", "").partition(" (version")[0]
        faults = []
        if document_of(source.removeprefix("trivector make ")) != text:
            faults.append("another document than its source makes")
        stored = (folder / CERTIFICATES / path.name).read_text(encoding="utf-8")
        if stored != certificate_of(path):
            faults.append("another certificate than the one of this document")
        claims = []
        for name, verdict, words in checker.Check(checker.load(stored)).run():
            claims.append(name)
            faults += [] if verdict else [f"{name}: {words}"]
        yield path.name, not faults, "; ".join(faults) or f"{', '.join(claims)} hold"


def main(arguments: Sequence[str]) -> int:
    """Write the atlas into a folder, or check it; exit code 1 if something in it is wrong."""
    checking = list(arguments[:1]) == ["--check"]
    if len(arguments) != 1 + checking or arguments[-1].startswith("-"):
        print("usage: python -m trivector.cli.atlas [--check] FOLDER", file=sys.stderr)
        return 2
    folder = Path(arguments[-1])
    if not checking:
        for path in write_atlas(folder):
            print(path)
        return 0
    good = True
    for name, verdict, words in check_atlas(folder):
        good &= verdict
        print(f"{'well ' if verdict else 'WRONG'}  {name}: {words}", flush=True)
    return 0 if good else 1


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
